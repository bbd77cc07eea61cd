/* SPDX-License-Identifier: MIT */
#include "tui/pages/night_head.h"

#include "ephem/angle_text.h"
#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/parts/clock_mark.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const char *const months[] = {"Jan", "Feb", "Mar", "Apr", "May", "Jun",
				     "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"};
static const char *const weekdays[] = {"Mon", "Tue", "Wed", "Thu", "Fri", "Sat", "Sun"};

void night_name(int32_t evening_mjd, char *out, size_t n)
{
	struct date a = date_from_mjd(evening_mjd), b = date_from_mjd(evening_mjd + 1);
	if (a.year != b.year)
		snprintf(out, n, "%d %s %d/%d %s %d", a.day, months[a.month - 1], a.year, b.day,
			 months[b.month - 1], b.year);
	else if (a.month != b.month)
		snprintf(out, n, "%d %s/%d %s %d", a.day, months[a.month - 1], b.day, months[b.month - 1],
			 b.year);
	else
		snprintf(out, n, "%d/%d %s %d", a.day, b.day, months[b.month - 1], b.year);
}

void span_text(double days, char *out, size_t n)
{
	long minutes = (long)floor(fmax(days, 0.0) * DAY_MIN);
	if (minutes >= 1440)
		snprintf(out, n, "%ld d %ld h", minutes / 1440, minutes % 1440 / 60);
	else if (minutes >= 60)
		snprintf(out, n, "%ld h %02ld min", minutes / 60, minutes % 60);
	else
		snprintf(out, n, "%ld min", minutes);
}

void local_text(const struct night *night, const struct zone *zone, double t_d, bool seconds, char *out,
		size_t n)
{
	if (isnan(t_d)) {
		snprintf(out, n, seconds ? "--:--:--" : "--:--");
		return;
	}
	double step_s = seconds ? 1.0 : 60.0;
	struct utc t = utc_add_s(night->clock.leap, night_utc(night, t_d), 0.5 * step_s);
	const char *mark = clock_mark(night, zone, t);
	long s = (long)floor(zone_local(zone, t).sod_s);
	if (seconds)
		snprintf(out, n, "%02ld:%02ld:%02ld%s", s / 3600 % 24, s / 60 % 60, s % 60, mark);
	else
		snprintf(out, n, "%02ld:%02ld%s", s / 3600 % 24, s / 60 % 60, mark);
}

static void site_text(struct night_head *h, const struct site *site)
{
	char name[NAME_BYTES_MAX], lat[ANGLE_TEXT_MAX], lon[ANGLE_TEXT_MAX];
	text_clean(site->name, name, sizeof name);
	lat_text(site->lat_deg, 2, lat);
	lon_text(site->lon_east_deg, 2, lon);
	snprintf(h->site, sizeof h->site, "%s  %s %s  %.0f m", name, lat, lon, site->height_m);
}

/* What the times of a night are called, and whether clocks change in it. */
static void zone_text(struct night_head *h, const struct run *r, const struct night *night)
{
	struct local_time a = zone_local(r->zone, night_utc(night, 0.0));
	struct local_time b = zone_local(r->zone, night_utc(night, night->length_d));
	snprintf(h->zone, sizeof h->zone, "%s", a.abbreviation);
	if (a.offset_s == b.offset_s)
		return;
	double from = 0.0, to = night->length_d;
	while (to - from > 1e-6) {
		double mid = 0.5 * (from + to);
		if (zone_local(r->zone, night_utc(night, mid)).offset_s == a.offset_s)
			from = mid;
		else
			to = mid;
	}
	char when[16];
	local_text(night, NULL, to, false, when, sizeof when);
	snprintf(h->zone, sizeof h->zone, "local");
	snprintf(h->remark, sizeof h->remark,
		 "Times with " CLOCK_MARK " are %s, the others %s: the clocks change at %s UTC.",
		 b.abbreviation, a.abbreviation, when);
}

static void sun_text(struct night_head *h, const struct run *r, const struct night_view *v)
{
	const struct night_times *t = &v->night.times;
	char set[16], dusk[16], dawn[16], rise[16], limit[NUMBER_TEXT_MAX], hours[NUMBER_TEXT_MAX];
	local_text(&v->night, r->zone, t->sunset_d, false, set, sizeof set);
	local_text(&v->night, r->zone, t->sunrise_d, false, rise, sizeof rise);
	local_text(&v->night, r->zone, v->dark.dusk_d, false, dusk, sizeof dusk);
	local_text(&v->night, r->zone, v->dark.dawn_d, false, dawn, sizeof dawn);
	number_text(r->limits.value[LIM_SUN], limit);
	number_text_fixed(v->dark.usable_h, 1, hours);
	snprintf(h->sun, sizeof h->sun, "Sunset %s  dusk %s  dawn %s  sunrise %s %s %s h below %s deg", set,
		 dusk, dawn, rise, h->zone, hours, limit);
	snprintf(h->sun_short, sizeof h->sun_short, "dusk %s  dawn %s %s  %s h below %s deg", dusk, dawn,
		 h->zone, hours, limit);
	size_t used = strlen(h->remark); /* that clocks change */
	if (used > 0)
		used += (size_t)snprintf(h->remark + used, sizeof h->remark - used, " ");
	char *remark = h->remark + used;
	size_t room = sizeof h->remark - used;
	if (!(v->dark.usable_h > 0.0))
		snprintf(remark, room, "No dark hour: the Sun does not get below %s deg in this night.",
			 limit);
	else if (isnan(v->dark.dusk_d) && isnan(v->dark.dawn_d))
		snprintf(remark, room, "The Sun stays below %s deg from noon to noon.", limit);
	else if (isnan(t->sunset_d) && isnan(t->sunrise_d))
		snprintf(remark, room, "The Sun neither rises nor sets between noon and noon.");
	else if (used > 0)
		remark[-1] = '\0';
}

static void moon_text(struct night_head *h, const struct run *r, const struct night_view *v)
{
	const struct night_times *t = &v->night.times;
	char set[16], rise[16], lit[16], order[80];
	local_text(&v->night, r->zone, t->moonset_d, false, set, sizeof set);
	local_text(&v->night, r->zone, t->moonrise_d, false, rise, sizeof rise);
	snprintf(lit, sizeof lit, "%.0f %%", 100.0 * v->night.moon_lit_mid);
	if (isnan(t->moonset_d) && isnan(t->moonrise_d))
		snprintf(order, sizeof order, "%s from noon to noon", v->night.moon_up.n > 0 ? "up" : "down");
	else if (isnan(t->moonset_d))
		snprintf(order, sizeof order, "rises %s", rise);
	else if (isnan(t->moonrise_d))
		snprintf(order, sizeof order, "sets %s", set);
	else if (t->moonset_d < t->moonrise_d)
		snprintf(order, sizeof order, "sets %s, rises %s", set, rise);
	else
		snprintf(order, sizeof order, "rises %s, sets %s", rise, set);
	snprintf(h->moon, sizeof h->moon, "Moon %s lit, %s", lit, order);
}

/* The Moon's limit that holds tonight: the longer one only from a Moon that is more than half lit while it is
 * up. */
static double moon_limit_deg(const struct night *n, const struct limits *l)
{
	const struct intervals bright = intervals_and(&n->moon_up, &n->moon_bright);
	return bright.n > 0 ? fmax(l->value[LIM_MOON], MOON_ALWAYS_DEG) : MOON_ALWAYS_DEG;
}

static void limits_text(struct night_head *h, const struct night *night, const struct limits *l)
{
	char alt[NUMBER_TEXT_MAX], moon[NUMBER_TEXT_MAX], airmass[NUMBER_TEXT_MAX];
	number_text(l->value[LIM_ALT], alt);
	number_text(moon_limit_deg(night, l), moon);
	number_text(l->value[LIM_AIRMASS], airmass);
	int used = snprintf(h->limits, sizeof h->limits, "altitude > %s", alt);
	if (*airmass)
		used +=
		    snprintf(h->limits + used, sizeof h->limits - (size_t)used, "  airmass < %s", airmass);
	if (l->value[LIM_MOON] > 0.0)
		snprintf(h->limits + used, sizeof h->limits - (size_t)used, "  Moon > %s deg", moon);
	else
		snprintf(h->limits + used, sizeof h->limits - (size_t)used, " deg  no Moon rule");
}

void night_head_make(struct night_head *h, const struct run *r, const struct night_view *view)
{
	*h = (struct night_head){0};
	night_name(view->night.mjd, h->name, sizeof h->name);
	site_text(h, &r->site);
	zone_text(h, r, &view->night);
	sun_text(h, r, view);
	moon_text(h, r, view);
	limits_text(h, &view->night, &r->limits);
}

/* --- with the clock --- */

static void clock_text(const struct zone *zone, struct utc t, char *out, size_t n)
{
	struct local_time l = zone_local(zone, t);
	long s = (long)floor(l.sod_s);
	snprintf(out, n, "%s %02ld:%02ld:%02ld %s", weekdays[weekday_from_mjd(l.mjd)], s / 3600, s / 60 % 60,
		 s % 60, l.abbreviation);
}

static struct jd2 bjd_now(const struct run *r, const struct night *night, const struct star *star,
			  struct utc now)
{
	double t_d = night_of_utc(night, now);
	if (night_covers(t_d))
		return night_bjd_tdb(night, star, t_d).jd;
	/* another night is shown: without its tables */
	struct observer o = {.site = &r->site, .clock = &r->clock};
	struct tt tt = utc_to_tt(r->clock.leap, now);
	double light_s = light_time_s(r->memo, &o, tt, star->icrs, ORIGIN_BARYCENTRE);
	return jd2_add_d(tt_to_tdb(tt).jd, light_s / DAY_S);
}

static void clocks_text(struct night_head *h, const struct run *r, const struct night_view *view,
			const struct night_row *selected, struct utc now)
{
	char utc[64], bjd[NUMBER_TEXT_MAX];
	clock_text(r->zone, now, h->clock, sizeof h->clock);
	clock_text(NULL, now, utc, sizeof utc);
	if (r->zone)
		snprintf(h->clocks_short, sizeof h->clocks_short, "%s   %s", h->clock, utc);
	else
		snprintf(h->clocks_short, sizeof h->clocks_short, "%s (zone of the site unknown)", utc);
	int used = snprintf(h->clocks, sizeof h->clocks, "%s", h->clocks_short);
	if (!selected)
		return;
	number_text_jd2(bjd_now(r, &view->night, &selected->star, now), 5, bjd);
	snprintf(h->clocks + used, sizeof h->clocks - (size_t)used, "   BJD_TDB %s %s", bjd, selected->name);
}

static void relative_text(struct night_head *h, int32_t shown, int32_t tonight)
{
	long nights = (long)shown - tonight;
	h->tonight = nights == 0;
	if (nights == 0)
		snprintf(h->relative, sizeof h->relative, "tonight");
	else if (nights == 1)
		snprintf(h->relative, sizeof h->relative, "next night");
	else if (nights == -1)
		snprintf(h->relative, sizeof h->relative, "last night");
	else if (nights > 0)
		snprintf(h->relative, sizeof h->relative, "in %ld nights", nights);
	else
		snprintf(h->relative, sizeof h->relative, "%ld nights ago", -nights);
}

/* What the selected or first running window comes to next. */
static void running_text(const struct night_row *row, double now_d, char *out, size_t n)
{
	const struct window_event *ev = &row->window->event;
	const struct {
		double at_d;
		const char *word;
	} step[] = {
	    {ev->t1_d, "T1"}, {ev->t2_d, "T2"}, {ev->t3_d, "T3"}, {ev->t4_d, "T4"}, {row->leave_d, "leave"}};
	char left[32];
	for (size_t i = 0; i < sizeof step / sizeof step[0]; i++) {
		if (!(step[i].at_d > now_d) || step[i].at_d > row->leave_d)
			continue;
		span_text(step[i].at_d - now_d, left, sizeof left);
		snprintf(out, n, "now: %s, %s in %s", row->name, step[i].word, left);
		return;
	}
	snprintf(out, n, "now: %s", row->name);
}

/* Pieces joined by `; `. */
static void join(char *out, size_t n, const char *piece)
{
	size_t used = strlen(out);
	snprintf(out + used, n - used, "%s%s", used && *piece ? "; " : "", piece);
}

static void next_text(struct night_head *h, const struct night_view *view, const struct night_rows *rows,
		      double now_d)
{
	size_t running, coming;
	const struct night_row *now = night_rows_best(rows, STATE_NOW, &running);
	const struct night_row *next = night_rows_best(rows, STATE_NEXT, &coming);
	char dusk[48] = "", runs[NAME_BYTES_MAX + 100] = "", more[32] = "", comes[NAME_BYTES_MAX + 100],
	     left[32];
	if (isfinite(view->dark.dusk_d) && now_d < view->dark.dusk_d) {
		span_text(view->dark.dusk_d - now_d, left, sizeof left);
		snprintf(dusk, sizeof dusk, "dusk in %s", left);
	}
	if (now)
		running_text(now, now_d, runs, sizeof runs);
	if (running > 1)
		snprintf(more, sizeof more, " (+%zu)", running - 1);
	if (next) {
		span_text(next->on_d - now_d, left, sizeof left);
		snprintf(comes, sizeof comes, "next: %s, be on in %s", next->name, left);
	} else {
		snprintf(comes, sizeof comes, "%s",
			 rows->n > 0 ? "nothing more comes up tonight" : "no window tonight");
	}
	h->next[0] = h->next_less[0] = '\0';
	join(h->next, sizeof h->next, dusk);
	join(h->next_less, sizeof h->next_less, runs);
	join(h->next_less, sizeof h->next_less, comes);
	join(h->next, sizeof h->next, runs);
	size_t used = strlen(h->next);
	snprintf(h->next + used, sizeof h->next - used, "%s", more);
	join(h->next, sizeof h->next, comes);
	snprintf(h->next_short, sizeof h->next_short, "%s", next || !now ? comes : runs);
}

void night_head_tick(struct night_head *h, const struct run *r, const struct night_view *view,
		     const struct night_rows *rows, const struct night_row *selected, struct utc now)
{
	double now_d = night_of_utc(&view->night, now);
	relative_text(h, view->night.mjd, night_date_of(r->site.lon_east_deg, now));
	clocks_text(h, r, view, selected, now);
	h->moon_now[0] = '\0';
	if (h->tonight) {
		snprintf(h->moon_now, sizeof h->moon_now, ", %s now",
			 intervals_contain(&view->night.moon_up, now_d) ? "up" : "down");
		next_text(h, view, rows, now_d);
		return;
	}
	char left[32];
	span_text(-now_d, left, sizeof left);
	snprintf(h->next_short, sizeof h->next_short, "%s; . tonight", h->relative);
	if (now_d < 0.0)
		snprintf(h->next, sizeof h->next, "This night begins in %s; . comes back to tonight.", left);
	else
		snprintf(h->next, sizeof h->next, "This night is over; . comes back to tonight.");
	snprintf(h->next_less, sizeof h->next_less, "%s", h->next);
}
