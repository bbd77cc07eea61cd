/* SPDX-License-Identifier: MIT */
#include "tui/sheets/plan_html_parts.h"

#include <stddef.h>

/* Letters and their ground differ by 4.5 to 1 at least, in every colour scheme and over every band of the
 * drawings (WCAG 2.1, 1.4.3). */
#define LIGHT                                                                                                \
	"--bg:#fff;--fg:#16181d;--soft:#4d5562;--line:#b5bcc8;--card:#f6f7f9;--link:#0b4fb3;--warn:#fff1d6;" \
	"--warnfg:#5c3300;--b0:#fff7da;--b1:#eef2fb;--b2:#e1e8f6;--b3:#d4def1;--b4:#c6d3ec;--rs:#fff;"       \
	"--li:#f2c078;--fl:#3a6fc4;--edge:#16181d;--mo:#f7e7a1;--us:#0d6b37;--mi:#16181d;"
#define DARK                                                                                                 \
	"--bg:#101318;--fg:#e8eaee;--soft:#aeb6c2;--line:#454d5a;--card:#191d24;--link:#8ab8ff;--warn:#"     \
	"3a2a0c;"                                                                                            \
	"--warnfg:#ffdf9e;--b0:#4a4426;--b1:#2f3a54;--b2:#263048;--b3:#1e273c;--b4:#151c2e;--rs:#2c3340;"    \
	"--li:#b07b2c;--fl:#5b8de0;--edge:#e8eaee;--mo:#6f6530;--us:#63d391;--mi:#fff;"
/* Black on white paper; the night is white there, day and twilights are grey, which saves ink. */
#define PAPER                                                                                                \
	"--bg:#fff;--fg:#000;--soft:#222;--line:#777;--card:#fff;--link:#000;--warn:#fff;--warnfg:#000;"     \
	"--b0:#ccc;--b1:#dadada;--b2:#e6e6e6;--b3:#f2f2f2;--b4:#fff;--rs:#fff;--li:#ccc;--fl:#707070;"       \
	"--edge:#000;--mo:#ddd;--us:#000;--mi:#000;"

/* clang-format off */
const char *const plan_html_css[] = {
    ":root{color-scheme:light dark;" LIGHT "}\n"
    "@media (prefers-color-scheme:dark){:root{" DARK "}}\n"
    "*{box-sizing:border-box}\n"
    "body{margin:0;background:var(--bg);color:var(--fg);font:16px/1.45 system-ui,sans-serif;"
    "overflow-wrap:anywhere}\n"
    "main{max-width:1040px;margin:0 auto;padding:12px 16px 32px}\n"
    "h1{font-size:1.6rem;line-height:1.2;margin:.4em 0 .2em}\n"
    "h2{font-size:1.2rem;margin:1.6em 0 .5em}\n"
    "h3{font-size:1.05rem;margin:0 0 .3em}\n"
    "h4{font-size:1rem;margin:1em 0 .3em}\n"
    "p,ul{margin:.4em 0}\n"
    "ul{padding-left:1.3em}\n"
    "a{color:var(--link)}\n"
    ".dates{font-size:1.1rem}\n"
    "small,.ut,.key,dt,.date,thead th{color:var(--soft)}\n"
    "small{font-weight:normal;white-space:nowrap}\n"
    "table{border-collapse:collapse;width:100%;font-variant-numeric:tabular-nums}\n"
    "th,td{text-align:left;vertical-align:top;padding:4px 8px 4px 0;border-bottom:1px solid var(--line)}\n"
    "th{font-weight:600}\n"
    ".order td,thead th{overflow-wrap:normal}\n"
    ".order td{padding-right:14px}\n"
    ".of{display:none}\n"
    ".order b,.order .ut{display:block;white-space:nowrap}\n"
    ".order .ut{font-size:.9em}\n"
    ".times{width:auto}\n"
    ".times th{white-space:nowrap;padding-right:14px}\n"
    ".time,.date,.pair{white-space:nowrap}\n"
    ".date{font-size:.92em}\n"
    ".scroll{overflow-x:auto}\n"
    ".scroll th,.scroll td{overflow-wrap:normal}\n"
    "summary{cursor:pointer}\n",
    /* cards and warnings */
    ".warn{background:var(--warn);color:var(--warnfg);padding:6px 10px;border-left:4px solid var(--warnfg)}\n"
    ".danger{border:3px double var(--warnfg);background:var(--warn);color:var(--warnfg);padding:0 12px 8px;"
    "margin-top:1.6em}\n"
    ".danger h2{margin-top:.6em}\n"
    ".danger .date{color:inherit}\n"
    ".cards{display:grid;grid-template-columns:repeat(auto-fill,minmax(min(100%,440px),1fr));gap:14px;"
    "align-items:start}\n"
    ".card{background:var(--card);border:1px solid var(--line);border-radius:6px;padding:12px 14px;"
    "min-width:0}\n"
    ".joint{grid-column:1/-1}\n"
    ".members{display:grid;grid-template-columns:repeat(auto-fill,minmax(min(100%,380px),1fr));gap:0 24px}\n"
    ".member{border-top:2px solid var(--line);margin-top:12px;min-width:0}\n"
    "dl{margin:.8em 0}\n"
    "dl div{display:grid;grid-template-columns:minmax(8.5em,38%) 1fr;gap:8px;padding:2px 0}\n"
    "dt,dd{margin:0}\n"
    ".flags{font-size:.94em}\n"
    ".missed{font-weight:600}\n",
    /* drawings */
    "svg.wide,svg.narrow{display:block;width:100%;height:auto;font:13px system-ui,sans-serif}\n"
    "svg.narrow{display:none;font-size:12px;max-width:560px}\n"
    "svg text{fill:var(--fg)}\n"
    "svg .m,svg .n{text-anchor:middle}\n"
    "svg .e{text-anchor:end}\n"
    "svg .n{font-weight:700;font-size:14px}\n"
    "svg .n,svg .h,svg .l{paint-order:stroke;stroke:var(--bg);stroke-width:3px;stroke-linejoin:round}\n"
    ".b0{fill:var(--b0)}.b1{fill:var(--b1)}.b2{fill:var(--b2)}.b3{fill:var(--b3)}.b4{fill:var(--b4)}\n"
    ".hr{stroke:var(--soft);stroke-opacity:.45;fill:none}\n"
    ".hs{stroke-dasharray:1 4}\n"
    ".ch{stroke:var(--edge);stroke-width:1.5;stroke-dasharray:6 3}\n"
    ".fr{fill:none;stroke:var(--soft)}\n"
    ".mo{fill:var(--mo);stroke:var(--edge)}\n"
    ".out{opacity:.35}\n"
    ".hl{stroke:var(--edge);stroke-width:1.6}\n"
    ".bl{stroke:var(--edge)}\n"
    ".bh{opacity:.28}\n"
    ".rs{fill:var(--rs);stroke:var(--edge)}\n"
    ".li{fill:var(--li)}.fl{fill:var(--fl)}.li,.fl{stroke:var(--edge);stroke-width:.7}\n"
    ".mi{stroke:var(--mi);stroke-width:1.4;stroke-dasharray:3 2}\n"
    ".us{stroke:var(--us);stroke-width:3}\n"
    ".sl{stroke:var(--edge);stroke-width:1.4;fill:var(--edge)}\n"
    ".sd{stroke:var(--edge);stroke-dasharray:2 2}\n"
    ".st{fill:none;stroke:var(--soft)}\n"
    ".si{fill:none;stroke:var(--fl);stroke-width:4;stroke-linecap:round}\n"
    ".mt{fill:none;stroke:var(--edge);stroke-width:2;stroke-dasharray:1 5;stroke-linecap:round}\n"
    ".lm{stroke:var(--edge);stroke-width:1.3;stroke-dasharray:8 4}\n"
    ".key{list-style:none;padding:0;display:flex;flex-wrap:wrap;gap:4px 18px;font-size:.9rem}\n"
    ".key li{display:flex;gap:8px;align-items:center}\n"
    ".key svg{flex:none;width:36px;height:18px}\n"
    ".hk{flex:none;width:36px;height:16px;border:1px solid var(--edge);"
    "background:repeating-linear-gradient(135deg,var(--edge) 0 1.5px,transparent 1.5px 6px)}\n",
    /* phone */
    "@media screen and (max-width:760px){\n"
    "svg.wide{display:none}svg.narrow{display:block}\n"
    "main{padding:8px 14px 24px}\n"
    ".order,.order tbody,.order tr,.order td,.order th{display:block}\n"
    ".order thead{position:absolute;width:1px;height:1px;overflow:hidden;clip-path:inset(50%)}\n"
    ".order tr{display:grid;grid-template-columns:1.9em 1fr;border-bottom:1px solid var(--line);padding:6px 0}\n"
    ".order td,.order th{border:0;padding:1px 0}\n"
    ".order td{grid-column:2}\n"
    ".order td.no{grid-column:1;font-weight:700}\n"
    ".order td:not(.no){display:grid;grid-template-columns:4.3em max-content max-content 1fr;gap:0 8px}\n"
    ".of{display:block;color:var(--soft)}\n"
    ".order td small{white-space:normal}\n"
    ".order .ut{font-size:1em}\n"
    "}\n",
    /* paper */
    "@page{size:A4;margin:13mm}\n"
    "@media print{\n"
    ":root{color-scheme:light;" PAPER "}\n"
    "body{font-size:9.5pt;line-height:1.3}\n"
    "h2{margin:1em 0 .4em}\n"
    "th,td{padding:2px 8px 2px 0}\n"
    "dl{margin:.4em 0}\n"
    "dl div{padding:0}\n"
    ".member .times th{padding-right:8px}\n"
    ".card:not(.joint)>.times{float:left;margin-right:7mm}\n"
    ".card:not(.joint)>dl{overflow:hidden}\n"
    ".card:not(.joint)>p,.card:not(.joint)>ul{clear:left}\n"
    "main{max-width:none;padding:0}\n"
    ".card,.drawn,.danger,.member,tr,footer li{break-inside:avoid}\n"
    "h2,h3,h4,.sun{break-after:avoid}\n"
    ".cards{display:block}\n"
    ".card{margin-bottom:4mm;border-radius:0}\n"
    ".members{grid-template-columns:1fr 1fr}\n"
    "a{text-decoration:none}\n"
    ".scroll{overflow:visible}\n"
    "svg,.hk{print-color-adjust:exact;-webkit-print-color-adjust:exact}\n"
    "}\n",
    NULL,
};
/* clang-format on */
