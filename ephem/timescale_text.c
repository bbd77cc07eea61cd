/* SPDX-License-Identifier: MIT */
#include "ephem/timescale.h"

#include "ephem/units.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum { YEAR_MIN = 1600, YEAR_MAX = 2500 };

/* --- calendar: days counted from 1 March, in eras of 400 years (proleptic Gregorian rule) --- */

enum { ERA_DAYS = 146097, MJD_OF_ERA_0 = -678881 /* MJD of 0000-03-01 */ };

static int days_in_month(int year, int month)
{
	static const int days[13] = {0, 31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
	int leap = year % 4 == 0 && (year % 100 != 0 || year % 400 == 0);
	return days[month] + (month == 2 && leap);
}

enum status date_to_mjd(struct date d, int32_t *mjd, struct err *e)
{
	if (d.year < YEAR_MIN || d.year > YEAR_MAX)
		return err_set(e, ST_RANGE, "year %d: must be from %d to %d", d.year, YEAR_MIN, YEAR_MAX);
	if (d.month < 1 || d.month > 12)
		return err_set(e, ST_RANGE, "month %d of %04d-%02d-%02d: must be from 1 to 12", d.month,
			       d.year, d.month, d.day);
	int length = days_in_month(d.year, d.month);
	if (d.day < 1 || d.day > length)
		return err_set(e, ST_RANGE, "%04d-%02d-%02d does not exist: that month has %d days", d.year,
			       d.month, d.day, length);
	int year = d.year - (d.month <= 2);
	int era = year / 400, year_of_era = year - era * 400;
	int day_of_year = (153 * (d.month + (d.month > 2 ? -3 : 9)) + 2) / 5 + d.day - 1;
	int day_of_era = year_of_era * 365 + year_of_era / 4 - year_of_era / 100 + day_of_year;
	*mjd = MJD_OF_ERA_0 + era * ERA_DAYS + day_of_era;
	return ST_OK;
}

struct date date_from_mjd(int32_t mjd)
{
	int64_t days = (int64_t)mjd - MJD_OF_ERA_0;
	int64_t era = (days >= 0 ? days : days - (ERA_DAYS - 1)) / ERA_DAYS;
	int day_of_era = (int)(days - era * ERA_DAYS);
	int year_of_era = (day_of_era - day_of_era / 1460 + day_of_era / 36524 - day_of_era / 146096) / 365;
	int day_of_year = day_of_era - (365 * year_of_era + year_of_era / 4 - year_of_era / 100);
	int shifted = (5 * day_of_year + 2) / 153; /* 0 March .. 11 February */
	int month = shifted < 10 ? shifted + 3 : shifted - 9;
	return (struct date){.year = (int)(era * 400) + year_of_era + (month <= 2),
			     .month = month,
			     .day = day_of_year - (153 * shifted + 2) / 5 + 1};
}

int weekday_from_mjd(int32_t mjd)
{
	int day = (int)(((int64_t)mjd + 2) % 7); /* MJD 0, 1858-11-17, was a Wednesday */
	return day < 0 ? day + 7 : day;
}

/* --- writing --- */

static long long scale_of(int decimals, int *places)
{
	*places = decimals < 0 ? 0 : decimals > 6 ? 6 : decimals;
	long long scale = 1;
	for (int i = 0; i < *places; i++)
		scale *= 10;
	return scale;
}

/* Rounded date and the whole count of 10^-places s in it. */
static struct utc rounded(const struct leap_table *table, struct utc t, long long scale, long long *ticks)
{
	*ticks = (long long)floor(t.sod_s * (double)scale + 0.5);
	if (*ticks >= (long long)leap_day_length_s(table, t.mjd) * scale) {
		*ticks = 0;
		t.mjd++;
	}
	t.sod_s = (double)*ticks / (double)scale;
	return t;
}

struct utc utc_rounded(const struct leap_table *table, struct utc t, int decimals)
{
	int places;
	long long ticks, scale = scale_of(decimals, &places);
	return rounded(table, t, scale, &ticks);
}

void utc_text(const struct leap_table *table, struct utc t, int decimals, char out[UTC_TEXT_MAX])
{
	int places;
	long long ticks, scale = scale_of(decimals, &places);
	out[0] = '\0';
	if (!(t.sod_s >= 0.0 && t.sod_s < 86401.0))
		return;
	struct utc r = rounded(table, t, scale, &ticks);
	struct date d = date_from_mjd(r.mjd);
	int whole = (int)(ticks / scale), hour = whole / 3600, minute = whole / 60 % 60, second = whole % 60;
	if (whole >= 86400) { /* a leap second belongs to the last minute */
		hour = 23;
		minute = 59;
		second = whole - 86340;
	}
	char part[12] = "";
	if (places > 0)
		snprintf(part, sizeof part, ".%0*d", places, (int)(ticks % scale));
	snprintf(out, UTC_TEXT_MAX, "%04d-%02d-%02dT%02d:%02d:%02d%sZ", d.year, d.month, d.day, hour, minute,
		 second, part);
}

/* --- reading --- */

/* Exactly n digits at *s; moves *s behind them. */
static int digits(const char **s, int n, int *value)
{
	*value = 0;
	for (int i = 0; i < n; i++, (*s)++) {
		if (**s < '0' || **s > '9')
			return 0;
		*value = *value * 10 + (**s - '0');
	}
	return 1;
}

static int literal(const char **s, char c)
{
	if (**s != c)
		return 0;
	(*s)++;
	return 1;
}

static int read_date(const char **s, struct date *d)
{
	return digits(s, 4, &d->year) && literal(s, '-') && digits(s, 2, &d->month) && literal(s, '-') &&
	       digits(s, 2, &d->day);
}

static enum status refuse(const char *text, const char *why, const char *expected, enum status s,
			  struct err *e)
{
	char got[ERR_QUOTE_MAX];
	err_quote(text, strlen(text), got);
	return err_set(e, s, "%s (got \"%s\", expected %s)", why, got, expected);
}

enum status date_parse(const char *text, struct date *out, struct err *e)
{
	const char *s = text;
	struct date d;
	int32_t mjd;
	if (!read_date(&s, &d) || *s)
		return refuse(text, "not a date", "YYYY-MM-DD", ST_SYNTAX, e);
	enum status status = date_to_mjd(d, &mjd, e);
	if (status == ST_OK)
		*out = d;
	return status;
}

/* `.123` behind the seconds: at most 12 digits are looked at, more change nothing. */
static int read_fraction(const char **s, double *value)
{
	double unit = 1e12;
	int64_t sum = 0;
	int any = 0, kept = 0;
	for (; **s >= '0' && **s <= '9'; (*s)++, any = 1)
		if (kept < 12) {
			sum = sum * 10 + (**s - '0');
			kept++;
		}
	for (; kept < 12; kept++)
		sum *= 10;
	*value = (double)sum / unit;
	return any;
}

enum status utc_parse(const struct leap_table *table, const char *text, struct utc *out, struct err *e)
{
	static const char *const expected = "YYYY-MM-DDTHH:MM:SSZ";
	const char *s = text;
	struct date d;
	int hour, minute, second = 0;
	double part = 0.0;
	if (!read_date(&s, &d) || !(literal(&s, 'T') || literal(&s, ' ')) || !digits(&s, 2, &hour) ||
	    !literal(&s, ':') || !digits(&s, 2, &minute))
		return refuse(text, "not a time", expected, ST_SYNTAX, e);
	if (literal(&s, ':')) {
		if (!digits(&s, 2, &second))
			return refuse(text, "not a time", expected, ST_SYNTAX, e);
		if (literal(&s, '.') && !read_fraction(&s, &part))
			return refuse(text, "no digits behind the point", expected, ST_SYNTAX, e);
	}
	(void)literal(&s, 'Z');
	if (*s)
		return refuse(text, "unexpected characters behind the time", expected, ST_SYNTAX, e);
	struct utc t;
	enum status status = date_to_mjd(d, &t.mjd, e);
	if (status != ST_OK)
		return status;
	if (hour > 23 || minute > 59 || second > 60)
		return refuse(text, "hours must be 0 to 23, minutes and seconds 0 to 59", expected, ST_RANGE,
			      e);
	t.sod_s = hour * 3600.0 + minute * 60.0 + second + part;
	if (second == 60 && (hour != 23 || minute != 59 || leap_day_length_s(table, t.mjd) <= DAY_S))
		return refuse(text, "there is no leap second at that time", expected, ST_RANGE, e);
	*out = t;
	return ST_OK;
}
