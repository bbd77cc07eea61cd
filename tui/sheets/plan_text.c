/* SPDX-License-Identifier: MIT
 * The night sheet as text of 72 columns: its head. */
#include "tui/sheets/plan_page.h"

#include "ephem/angle_text.h"
#include "tui/pages/night_head.h"

#include <math.h>
#include <stdarg.h>
#include <stdlib.h>
#include <string.h>

void page_put(struct plan_page *p, int indent, const char *format, ...)
{
	char text[PLAN_PIECE_BYTES * 2];
	va_list list;
	va_start(list, format);
	vsnprintf(text, sizeof text, format, list);
	va_end(list);
	text_view_start(p->lines, PLAN_PAGE_COLUMNS);
	text_view_add(p->lines, ROLE_TEXT, indent, text);
	for (int i = 0; i < p->lines->n; i++) {
		char *line = p->lines->line[i].text;
		for (size_t n = strlen(line); n > 0 && line[n - 1] == ' '; n--)
			line[n - 1] = '\0';
		fprintf(p->to, "%s\n", line);
	}
}

void page_heading(struct plan_page *p, const char *text)
{
	page_put(p, 0, "%s", "");
	page_put(p, 0, "%s", text);
}

void page_time(struct plan_page *p, int indent, const char *word, const struct utc *t, const char *more)
{
	char local[SHEET_TIME_BYTES], utc[SHEET_TIME_BYTES];
	enum { WORD_COLUMNS = 18 };
	const int columns = WORD_COLUMNS - indent;
	if (!t) {
		page_put(p, WORD_COLUMNS, "%*s%-*s%s", indent, "", columns, word, more);
		return;
	}
	sheet_instant(p->v, p->v->run->zone, *t, local);
	sheet_instant(p->v, NULL, *t, utc);
	if (p->v->run->zone)
		page_put(p, WORD_COLUMNS, "%*s%-*s%-22s %s%s", indent, "", columns, word, local, utc, more);
	else
		page_put(p, WORD_COLUMNS, "%*s%-*s%s%s", indent, "", columns, word, utc, more);
}

/* A time of the night that may not happen. */
static void night_time(struct plan_page *p, const char *word, double t_d)
{
	const struct night *n = &p->v->night->night;
	struct utc t = {.mjd = n->mjd, .sod_s = 0.0};
	if (isfinite(t_d))
		t = night_utc(n, t_d);
	page_time(p, 0, word, isfinite(t_d) ? &t : NULL, isfinite(t_d) ? "" : "does not happen");
}

static void title(struct plan_page *p)
{
	const struct plan_view *v = p->v;
	const struct site *site = &v->run->site;
	char name[64], text[PLAN_PIECE_BYTES], lat[ANGLE_TEXT_MAX], lon[ANGLE_TEXT_MAX];
	night_name(v->night->night.mjd, name, sizeof name);
	page_put(p, 0, "NIGHT SHEET %s", name);
	plan_standing_words(v, text, sizeof text);
	page_put(p, 11, "Plan:      %s", text);
	plan_line(site->name, text, sizeof text);
	lat_text(site->lat_deg, 4, lat);
	lon_text(site->lon_east_deg, 4, lon);
	page_put(p, 11, "Site:      %s (%s, %s, %.0f m)", text, lat, lon, site->height_m);
	plan_telescope_words(v, text, sizeof text);
	page_put(p, 11, "Telescope: %s", text[0] ? text : "not named");
}

/* Which dates and clocks the times are of. */
static void clocks(struct plan_page *p)
{
	const struct plan_view *v = p->v;
	const struct night *n = &v->night->night;
	const struct zone *zone = v->run->zone;
	char from[SHEET_DATE_BYTES], to[SHEET_DATE_BYTES], before[SHEET_OFFSET_BYTES],
	    after[SHEET_OFFSET_BYTES];
	struct utc change;
	sheet_date(n->mjd, true, from);
	sheet_date(n->mjd + 1, true, to);
	page_put(p, 11, "Dates:     evening of %s, morning of %s", from, to);
	if (!zone) {
		page_put(p, 11, "Times:     UTC; the site's time zone is not known");
		return;
	}
	const struct local_time first = zone_local(zone, night_utc(n, 0.0)),
				last = zone_local(zone, night_utc(n, n->length_d));
	sheet_offset(first.offset_s, before);
	sheet_offset(last.offset_s, after);
	page_put(p, 11, "Times:     local (%s, %s is UTC%s h) and UTC", v->run->site.zone, first.abbreviation,
		 before);
	if (sheet_clock_change(v, &change)) {
		char utc[SHEET_TIME_BYTES], words[SHEET_BOTH_BYTES];
		sheet_instant(v, NULL, change, utc);
		sheet_change_words(v, words);
		page_put(
		    p, 11,
		    "CLOCKS CHANGE this night, at %s: from %s (UTC%s h) to %s (UTC%s h), %s. Every local "
		    "time says which it is.",
		    utc, first.abbreviation, before, last.abbreviation, after, words);
	}
}

static void sun_and_moon(struct plan_page *p)
{
	const struct night_view *view = p->v->night;
	const struct night_times *t = &view->night.times;
	char word[64], limit[NUMBER_TEXT_MAX];
	number_text(p->v->run->limits.value[LIM_SUN], limit);
	page_put(p, 0, "%s", "");
	night_time(p, "sunset", t->sunset_d);
	snprintf(word, sizeof word, "dusk (%s deg)", limit);
	night_time(p, word, view->dark.dusk_d);
	snprintf(word, sizeof word, "dawn (%s deg)", limit);
	night_time(p, word, view->dark.dawn_d);
	night_time(p, "sunrise", t->sunrise_d);
	page_put(p, 18, "%-18s%.0f %% lit at the middle of the night", "Moon",
		 100.0 * view->night.moon_lit_mid);
	const bool sets_first = t->moonset_d < t->moonrise_d; /* false where one does not happen */
	if (sets_first)
		night_time(p, "moonset", t->moonset_d);
	if (isfinite(t->moonrise_d))
		night_time(p, "moonrise", t->moonrise_d);
	if (isfinite(t->moonset_d) && !sets_first)
		night_time(p, "moonset", t->moonset_d);
}

static void change_lines(struct plan_page *p, const struct sheet_changes *changes)
{
	char text[PLAN_PIECE_BYTES];
	if (!changes || !changes->since)
		return;
	plan_line(changes->since, text, sizeof text);
	page_put(p, 0, "%s", "");
	page_put(p, 0, "CHANGED SINCE %s", text);
	if (changes->n == 0)
		page_put(p, 2, "  nothing");
	for (size_t i = 0; i < changes->n; i++) {
		plan_line(changes->line[i], text, sizeof text);
		page_put(p, 4, "  %s", text);
	}
}

bool plan_sheet_text(FILE *to, const struct plan_view *v, const struct sheet_changes *changes)
{
	struct plan_page p = {.to = to, .v = v, .lines = malloc(sizeof *p.lines)};
	if (!p.lines)
		return false;
	title(&p);
	change_lines(&p, changes);
	page_put(&p, 0, "%s", "");
	clocks(&p);
	sun_and_moon(&p);
	if (!v->run->options->plain) /* it tells by position */
		page_strip(&p);
	page_items(&p);
	page_foot(&p);
	free(p.lines);
	return true;
}
