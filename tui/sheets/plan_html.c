/* SPDX-License-Identifier: MIT */
#include "tui/sheets/plan_html_parts.h"

#include "tui/pages/night_head.h"
#include "tui/parts/clock_mark.h"
#include "tui/sheets/plan_html_svg.h"
#include "tui/sheets/plan_words.h"

#include <math.h>
#include <stdlib.h>

/* --- for all parts --- */

/* As it is shown, to the minute: the date is that of the rounded time. */
static struct utc shown(const struct html_page *p, struct utc t)
{
	return utc_add_s(p->v->night->night.clock.leap, t, 30.0);
}

static void html_date(struct html_page *p, int32_t mjd)
{
	char date[SHEET_DATE_BYTES];
	sheet_date(mjd, false, date);
	fprintf(p->out.to, " <span class=\"date\">(%s)</span>", date);
}

static void html_clock(struct html_page *p, const char *text)
{
	fputs("<span class=\"time\">", p->out.to);
	html_text(&p->out, text);
	fputs("</span>", p->out.to);
}

void html_local(struct html_page *p, struct utc t)
{
	char text[SHEET_TIME_BYTES];
	const int32_t date = zone_local(p->v->run->zone, shown(p, t)).mjd;
	sheet_local(p->v, t, false, text);
	html_clock(p, text);
	if (date != p->v->night->night.mjd)
		html_date(p, date);
}

void html_utc(struct html_page *p, struct utc t)
{
	char text[SHEET_TIME_BYTES];
	const struct utc u = shown(p, t);
	sheet_utc(p->v, t, false, text);
	html_clock(p, text);
	if (zone_local(p->v->run->zone, u).mjd != u.mjd)
		html_date(p, u.mjd);
}

const char *html_outside(const struct html_page *p, const struct plan_item_view *item, struct utc t)
{
	const struct leap_table *leap = p->v->night->night.clock.leap;
	if (utc_diff_s(leap, t, item->start) > 0.0)
		return "too early";
	return utc_diff_s(leap, item->end, t) > 0.0 ? "too late" : "";
}

void html_item_name(struct html_page *p, const struct plan_item_view *item)
{
	for (size_t i = 0; i < item->n; i++) {
		fputs(i ? " + " : "", p->out.to);
		html_text(&p->out, item->member[i].target);
	}
}

/* --- head --- */

static void date_words(int32_t mjd, char *out, size_t n)
{
	static const char *const weekday[] = {"Monday", "Tuesday",  "Wednesday", "Thursday",
					      "Friday", "Saturday", "Sunday"};
	static const char *const month[] = {"January",	 "February", "March",	 "April",
					    "May",	 "June",     "July",	 "August",
					    "September", "October",  "November", "December"};
	const struct date d = date_from_mjd(mjd);
	snprintf(out, n, "%s, %d %s %d", weekday[weekday_from_mjd(mjd)], d.day, month[d.month - 1], d.year);
}

/* `MDT (UTC-06:00)` */
static void offset_words(const struct zone *zone, struct utc t, char *out, size_t n)
{
	const struct local_time l = zone_local(zone, t);
	const int minutes = abs(l.offset_s) / 60;
	snprintf(out, n, "%s (UTC%c%02d:%02d)", l.abbreviation, l.offset_s < 0 ? '-' : '+', minutes / 60,
		 minutes % 60);
}

static void clock_words(struct html_page *p)
{
	const struct run *r = p->v->run;
	const struct night *n = &p->v->night->night;
	char from[64], until[64];
	if (!r->zone) {
		fputs("<p>The site's time zone is not known: all times are UTC.</p>\n", p->out.to);
		return;
	}
	offset_words(r->zone, night_utc(n, 0.0), from, sizeof from);
	offset_words(r->zone, night_utc(n, n->length_d), until, sizeof until);
	fputs("<p>Local times are those of ", p->out.to);
	html_text(&p->out, n->site->zone);
	if (!clocks_change(n, r->zone))
		fprintf(p->out.to, ", %s.</p>\n", from);
	else {
		char words[SHEET_BOTH_BYTES], utc[SHEET_TIME_BYTES] = "";
		struct utc change;
		sheet_change_words(p->v, words);
		if (sheet_clock_change(p->v, &change))
			sheet_utc(p->v, change, false, utc);
		fprintf(p->out.to,
			".</p>\n<p class=\"warn\"><b>The clocks change this night</b>, from %s to %s, at %s: "
			"%s. Each local time says which it is.</p>\n",
			from, until, utc, words);
	}
}

static void title(struct html_page *p)
{
	char name[64];
	night_name(p->v->night->night.mjd, name, sizeof name);
	fprintf(p->out.to, "Night %s, ", name);
	html_text(&p->out, p->v->night->night.site->name);
}

static void head(struct html_page *p)
{
	const struct plan_view *v = p->v;
	const int32_t mjd = v->night->night.mjd;
	FILE *to = p->out.to;
	char evening[64], morning[64], standing[300], telescope[NAME_BYTES_MAX + 200];
	fputs("<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n"
	      "<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n"
	      "<meta name=\"color-scheme\" content=\"light dark\">\n<title>",
	      to);
	title(p);
	fputs("</title>\n<style>\n", to);
	for (size_t i = 0; plan_html_css[i]; i++)
		fputs(plan_html_css[i], to);
	fputs("</style>\n</head>\n<body>\n<main>\n<header>\n<h1>", to);
	title(p);
	date_words(mjd, evening, sizeof evening);
	date_words(mjd + 1, morning, sizeof morning);
	fprintf(to, "</h1>\n<p class=\"dates\">%s, to %s</p>\n<p>", evening, morning);
	if (v->telescope[0]) {
		fputs("Telescope: ", to);
		plan_telescope_words(v, telescope, sizeof telescope);
		html_text(&p->out, telescope);
		fputs(". ", to);
	}
	fputs("Plan: ", to);
	plan_standing_words(v, standing, sizeof standing);
	html_text(&p->out, standing);
	fputs(".</p>\n", to);
	clock_words(p);
	if (v->moved > 0)
		fprintf(
		    to,
		    "<p class=\"warn\"><b>%ld event%s moved</b> since this was planned: see the cards marked "
		    "Moved.</p>\n",
		    v->moved, v->moved == 1 ? " has" : "s have");
	fputs("</header>\n", to);
}

static void changes_since(struct html_page *p, const struct sheet_changes *c)
{
	FILE *to = p->out.to;
	if (c && c->since) {
		fputs("<section>\n<h2>Changes since ", to);
		html_text(&p->out, c->since);
		fputs(c->n > 0 ? "</h2>\n<ul>\n" : "</h2>\n<p>None.</p>\n", to);
		for (size_t i = 0; i < c->n; i++) {
			fputs("<li>", to);
			html_text(&p->out, c->line[i]);
			fputs("</li>\n", to);
		}
		fputs(c->n > 0 ? "</ul>\n</section>\n" : "</section>\n", to);
	}
	if (p->v->n_gone == 0)
		return;
	fputs("<section>\n<h2>No more in the plan</h2>\n<ul>\n", to);
	for (size_t i = 0; i < p->v->n_gone; i++) {
		fputs("<li>", to);
		html_item_name(p, &p->v->gone[i]);
		fputs(", was ", to);
		html_local(p, p->v->gone[i].start);
		fputs(" to ", to);
		html_local(p, p->v->gone[i].end);
		fputs("</li>\n", to);
	}
	fputs("</ul>\n</section>\n", to);
}

/* --- the order at a glance --- */

static void time_cell(struct html_page *p, const char *name, struct utc t, const char *remark)
{
	char local[SHEET_TIME_BYTES], utc[SHEET_TIME_BYTES];
	sheet_local(p->v, t, false, local);
	sheet_utc(p->v, t, false, utc);
	fprintf(p->out.to, "<td role=\"cell\"><span class=\"of\" aria-hidden=\"true\">%s</span><b>", name);
	html_text(&p->out, local);
	fputs("</b> <span class=\"ut\">", p->out.to);
	html_text(&p->out, utc);
	fputs("</span>", p->out.to);
	if (remark[0])
		fprintf(p->out.to, " <small>%s</small>", remark);
	fputs("</td>\n", p->out.to);
}

/* What is planned of it where that is not all; of several events with their names. */
static void planned_parts(struct html_page *p, const struct plan_item_view *item)
{
	const char *before = " <small>";
	for (size_t i = 0; i < item->n; i++) {
		const char *part = plan_part_words(item->member[i].variant);
		if (!part[0])
			continue;
		fputs(before, p->out.to);
		if (item->n > 1) {
			html_text(&p->out, item->member[i].target);
			fputs(" ", p->out.to);
		}
		fputs(part, p->out.to);
		before = ", ";
	}
	if (before[0] == ',')
		fputs("</small>", p->out.to);
}

static void summary_row(struct html_page *p, const struct plan_item_view *item)
{
	const struct leap_table *leap = p->v->night->night.clock.leap;
	struct utc last = item->start;
	FILE *to = p->out.to;
	fprintf(
	    to,
	    "<tr role=\"row\"><td role=\"cell\" class=\"no\">%d</td>\n<th role=\"rowheader\" scope=\"row\">"
	    "<a href=\"#item-%d\">",
	    item->order, item->order);
	html_item_name(p, item);
	fputs("</a>", to);
	planned_parts(p, item);
	if (item->state != PLAN_PLANNED)
		fprintf(to, " <small>%s</small>", plan_state_words[item->state]);
	fputs("</th>\n", to);
	for (size_t i = 0; i < item->n; i++)
		if (i == 0 || utc_diff_s(leap, last, item->member[i].t4) > 0.0)
			last = item->member[i].t4;
	time_cell(p, "Slew by", item->slew_by, "");
	time_cell(p, "Start", item->start, "");
	if (item->n > 0) {
		time_cell(p, "T1", item->member[0].t1, html_outside(p, item, item->member[0].t1));
		time_cell(p, "T4", last, html_outside(p, item, last));
	} else {
		fputs("<td role=\"cell\"></td><td role=\"cell\"></td>\n", to);
	}
	time_cell(p, "Leave", item->end, "");
	fputs("</tr>\n", to);
}

static void summary(struct html_page *p)
{
	static const char *const heading[] = {"No.", "Target", "Slew by", "Start", "T1", "T4", "Leave"};
	const struct plan_view *v = p->v;
	FILE *to = p->out.to;
	size_t n = 0;
	for (size_t i = 0; i < v->n_items; i++)
		n += !v->item[i].in_day;
	fputs("<section>\n<h2>Order of the night</h2>\n", to);
	if (n == 0) {
		fputs("<p>Nothing is to be done this night.</p>\n</section>\n", to);
		return;
	}
	fputs("<table class=\"order\" role=\"table\"><thead role=\"rowgroup\"><tr role=\"row\">", to);
	for (size_t i = 0; i < sizeof heading / sizeof heading[0]; i++)
		fprintf(to, "<th role=\"columnheader\" scope=\"col\">%s</th>", heading[i]);
	fputs("</tr></thead><tbody role=\"rowgroup\">\n", to);
	for (size_t i = 0; i < v->n_items; i++)
		if (!v->item[i].in_day)
			summary_row(p, &v->item[i]);
	fputs("</tbody></table>\n</section>\n", to);
}

/* --- Sun, Moon and drawings --- */

struct sky_event {
	const char *name;
	double t_d;
};

static int earlier_first(const void *a, const void *b)
{
	const double x = ((const struct sky_event *)a)->t_d, y = ((const struct sky_event *)b)->t_d;
	return (x > y) - (x < y);
}

static void sky_row(struct html_page *p, const struct sky_event *e)
{
	const struct utc t = night_utc(&p->v->night->night, e->t_d);
	fprintf(p->out.to, "<tr><th scope=\"row\">%s</th><td>", e->name);
	html_local(p, t);
	fputs("</td><td>", p->out.to);
	html_utc(p, t);
	fputs("</td></tr>\n", p->out.to);
}

static void sun_and_moon(struct html_page *p)
{
	const struct night_view *night = p->v->night;
	const struct night_times *t = &night->night.times;
	const double limit_deg = p->v->run->limits.value[LIM_SUN];
	const struct sky_event all[] = {
	    {"Sunset", t->sunset_d},
	    {"Civil dusk, -6 deg", t->civil_dusk_d},
	    {"Nautical dusk, -12 deg", t->nautical_dusk_d},
	    {"Astronomical dusk, -18 deg", t->astronomical_dusk_d},
	    {"Astronomical dawn, -18 deg", t->astronomical_dawn_d},
	    {"Nautical dawn, -12 deg", t->nautical_dawn_d},
	    {"Civil dawn, -6 deg", t->civil_dawn_d},
	    {"Sunrise", t->sunrise_d},
	    {"Moonrise", t->moonrise_d},
	    {"Moonset", t->moonset_d},
	};
	struct sky_event here[sizeof all / sizeof all[0]] = {{NULL, 0.0}};
	size_t n = 0;
	for (size_t i = 0; i < sizeof all / sizeof all[0]; i++)
		if (isfinite(all[i].t_d))
			here[n++] = all[i];
	qsort(here, n, sizeof here[0], earlier_first);
	fputs(
	    "<section>\n<h2>Sun and Moon</h2>\n<table class=\"times\"><thead><tr><th scope=\"col\">Event</th>"
	    "<th scope=\"col\">Local</th><th scope=\"col\">UTC</th></tr></thead><tbody>\n",
	    p->out.to);
	for (size_t i = 0; i < n; i++)
		sky_row(p, &here[i]);
	fprintf(p->out.to,
		"</tbody></table>\n<p>The Sun is below %g deg for %.2f h. The Moon is %.0f %% "
		"lit.</p>\n</section>\n",
		limit_deg, night->dark.usable_h, 100.0 * night->night.moon_lit_mid);
}

static void drawings(struct html_page *p, const struct plan_sky *sky)
{
	FILE *to = p->out.to;
	fputs("<section class=\"drawn\">\n<h2>Timeline</h2>\n", to);
	plan_svg_timeline(&p->out, p->v, sky, SVG_WIDE);
	plan_svg_timeline(&p->out, p->v, sky, SVG_NARROW);
	plan_svg_key(&p->out);
	fputs("</section>\n<section class=\"drawn\">\n<h2>Altitudes</h2>\n", to);
	plan_svg_altitudes(&p->out, p->v, sky, SVG_WIDE);
	plan_svg_altitudes(&p->out, p->v, sky, SVG_NARROW);
	fputs("<p>Numbers: items of the order, thick while they last. Dotted: the Moon. Dashed: the altitude "
	      "limit. "
	      "Without refraction.</p>\n</section>\n",
	      to);
}

bool plan_sheet_html(FILE *to, const struct plan_view *v, const struct sheet_changes *changes)
{
	struct html_page p = {.out = {.to = to}, .v = v};
	struct plan_sky sky;
	if (!plan_sky_prepare(v, &sky))
		return false;
	head(&p);
	changes_since(&p, changes);
	summary(&p);
	plan_html_refused(&p);
	drawings(&p, &sky);
	plan_html_cards(&p);
	plan_html_blocks(&p);
	sun_and_moon(&p);
	plan_html_left(&p);
	plan_html_foot(&p);
	fputs("</main>\n</body>\n</html>\n", to);
	plan_sky_free(&sky);
	return !p.out.failed;
}
