/* SPDX-License-Identifier: MIT
 * Times of a plan as its formats print them. */
#include "tui/sheets/plan_words.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static const char *const week_days[] = {"Mon", "Tue", "Wed", "Thu", "Fri", "Sat", "Sun"};
static const char *const months[] = {"Jan", "Feb", "Mar", "Apr", "May", "Jun",
				     "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"};

void sheet_date(int32_t mjd, bool with_year, char out[SHEET_DATE_BYTES])
{
	struct date d = date_from_mjd(mjd);
	int n = snprintf(out, SHEET_DATE_BYTES, "%s %d %s", week_days[weekday_from_mjd(mjd)], d.day,
			 months[d.month - 1]);
	if (with_year)
		snprintf(out + n, SHEET_DATE_BYTES - (size_t)n, " %d", d.year);
}

/* To the minute, rounded: `22:40`. */
static struct local_time to_minute(const struct plan_view *v, const struct zone *zone, struct utc t,
				   char out[8])
{
	struct local_time l = zone_local(zone, utc_add_s(&v->run->leap, t, 30.0));
	int minute = (int)(l.sod_s / 60.0);
	minute = minute < 0 ? 0 : minute > 1439 ? 1439 : minute; /* inside a leap second */
	snprintf(out, 8, "%02d:%02d", minute / 60 % 24, minute % 60);
	return l;
}

void sheet_instant(const struct plan_view *v, const struct zone *zone, struct utc t,
		   char out[SHEET_TIME_BYTES])
{
	char clock[8], date[SHEET_DATE_BYTES];
	struct local_time l = to_minute(v, zone, t, clock);
	sheet_date(l.mjd, false, date);
	snprintf(out, SHEET_TIME_BYTES, "%s %s %s", date, clock, l.abbreviation);
}

void sheet_both(const struct plan_view *v, struct utc t, char out[SHEET_BOTH_BYTES])
{
	char local[SHEET_TIME_BYTES], utc[SHEET_TIME_BYTES];
	sheet_instant(v, v->run->zone, t, local);
	sheet_instant(v, NULL, t, utc);
	if (v->run->zone)
		snprintf(out, SHEET_BOTH_BYTES, "%s (%s)", local, utc);
	else
		snprintf(out, SHEET_BOTH_BYTES, "%s", utc);
}

void sheet_local(const struct plan_view *v, struct utc t, bool with_date, char out[SHEET_TIME_BYTES])
{
	char clock[8], date[SHEET_DATE_BYTES];
	struct local_time l = to_minute(v, v->run->zone, t, clock);
	sheet_date(l.mjd, true, date);
	snprintf(out, SHEET_TIME_BYTES, "%s%s%s %s", with_date ? date : "", with_date ? " " : "", clock,
		 l.abbreviation);
}

void sheet_utc(const struct plan_view *v, struct utc t, bool with_date, char out[SHEET_TIME_BYTES])
{
	char clock[8], date[SHEET_DATE_BYTES];
	struct local_time l = to_minute(v, NULL, t, clock);
	sheet_date(l.mjd, false, date);
	if (with_date)
		snprintf(out, SHEET_TIME_BYTES, "%s UTC (%s)", clock, date);
	else
		snprintf(out, SHEET_TIME_BYTES, "%s UTC", clock);
}

void sheet_stamp(const struct plan_view *v, struct utc t, char out[SHEET_TIME_BYTES])
{
	struct local_time l = zone_local(v->run->zone, utc_rounded(&v->run->leap, t, 0));
	struct date d = date_from_mjd(l.mjd);
	int s = (int)floor(l.sod_s + 0.5), offset_min = abs(l.offset_s) / 60;
	snprintf(out, SHEET_TIME_BYTES, "%04d-%02d-%02dT%02d:%02d:%02d%c%02d:%02d", d.year, d.month, d.day,
		 s / 3600, s / 60 % 60, s % 60 + l.leap_second, l.offset_s < 0 ? '-' : '+', offset_min / 60,
		 offset_min % 60);
}

bool sheet_clock_change(const struct plan_view *v, struct utc *at)
{
	const struct night *n = &v->night->night;
	const struct zone *zone = v->run->zone;
	double from_d = 0.0, to_d = n->length_d;
	int before_s = (int)zone_local(zone, night_utc(n, from_d)).offset_s;
	if (before_s == zone_local(zone, night_utc(n, to_d)).offset_s)
		return false;
	while (to_d - from_d > 0.1 / 86400.0) {
		double middle_d = 0.5 * (from_d + to_d);
		if (zone_local(zone, night_utc(n, middle_d)).offset_s == before_s)
			from_d = middle_d;
		else
			to_d = middle_d;
	}
	*at = utc_rounded(&v->run->leap, night_utc(n, to_d), 0);
	return true;
}

void sheet_change_words(const struct plan_view *v, char out[SHEET_BOTH_BYTES])
{
	struct utc change;
	char after[SHEET_TIME_BYTES];
	out[0] = '\0';
	if (!sheet_clock_change(v, &change))
		return;
	/* the clocks of a minute before, a minute later */
	const struct local_time l = zone_local(v->run->zone, utc_add_s(&v->run->leap, change, -60.0));
	const int minute = ((int)((l.sod_s + 30.0) / 60.0) + 1) % 1440;
	sheet_local(v, change, false, after);
	snprintf(out, SHEET_BOTH_BYTES, "%02d:%02d %s becomes %s", minute / 60, minute % 60, l.abbreviation,
		 after);
}

void sheet_offset(int offset_s, char out[SHEET_OFFSET_BYTES])
{
	int minutes = abs(offset_s) / 60;
	char sign = offset_s < 0 ? '-' : '+';
	if (minutes % 60)
		snprintf(out, SHEET_OFFSET_BYTES, "%c%d:%02d", sign, minutes / 60, minutes % 60);
	else
		snprintf(out, SHEET_OFFSET_BYTES, "%c%d", sign, minutes / 60);
}
