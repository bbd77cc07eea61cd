/* SPDX-License-Identifier: MIT
 * The texts above the list: site, night, clocks, Sun, Moon, limits, and what comes next. */
#ifndef WANE_TUI_PAGES_NIGHT_HEAD_H
#define WANE_TUI_PAGES_NIGHT_HEAD_H

#include "tui/pages/night_rows.h"

#include <stdbool.h>

struct night_head {
	char site[NAME_BYTES_MAX + 80], name[48];
	char sun[200], sun_short[160], moon[120], limits[120]; /* the short ones for narrow screens */
	char zone[24];	  /* of the times in the list: `MDT`, `local` on a night of a clock change, `UTC` */
	char remark[200]; /* what is unusual about the night, else "" */
	/* these change with the clock */
	char relative[40], moon_now[24];
	char clocks[NAME_BYTES_MAX + 160], clocks_short[140], clock[64]; /* three, two, the local one */
	char next[2 * NAME_BYTES_MAX + 200],
	    next_less[2 * NAME_BYTES_MAX + 200];   /* the latter without dusk */
	char next_short[2 * NAME_BYTES_MAX + 100]; /* what is next, else what runs, for narrow screens */
	bool tonight;
};
/* What holds for a night as long as it is shown. */
void night_head_make(struct night_head *h, const struct run *r, const struct night_view *view);
/* What changes with the clock. selected may be NULL. rows have had their own tick. */
void night_head_tick(struct night_head *h, const struct run *r, const struct night_view *view,
		     const struct night_rows *rows, const struct night_row *selected, struct utc now);
/* `22/23 Apr 2026`, `30 Apr/1 May 2026`, `31 Dec 2026/1 Jan 2027` */
void night_name(int32_t evening_mjd, char *out, size_t n);
/* `42 min`, `2 h 05 min`, `3 d 4 h`; whole minutes that are left. */
void span_text(double days, char *out, size_t n);
/* Local time of a moment of the night, rounded: `22:56`, or with seconds; `--:--` when it does not happen.
 * Behind a change of the clocks with CLOCK_MARK: 16 bytes hold it. */
void local_text(const struct night *night, const struct zone *zone, double t_d, bool seconds, char *out,
		size_t n);

#endif
