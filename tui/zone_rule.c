/* SPDX-License-Identifier: MIT */
#include "tui/zone_rule.h"

#include "ephem/timescale.h"

#include <string.h>

enum { DAY_S = 86400, HOUR_S = 3600, UNIX_EPOCH_MJD = 40587, RULE_FIRST_YEAR = 1601, RULE_LAST_YEAR = 2499 };

/* A place in the text; every reader below moves it behind what it took, or says false. */
struct cursor {
	const char *at, *end;
};

static bool take(struct cursor *c, char wanted)
{
	if (c->at == c->end || *c->at != wanted)
		return false;
	c->at++;
	return true;
}

static bool is_digit(char ch)
{
	return ch >= '0' && ch <= '9';
}

static bool is_letter(char ch)
{
	return (ch >= 'A' && ch <= 'Z') || (ch >= 'a' && ch <= 'z');
}

static bool take_number(struct cursor *c, int min, int max, int *out)
{
	int value = 0;
	const char *from = c->at;
	while (c->at < c->end && is_digit(*c->at) && c->at - from < 4)
		value = 10 * value + (*c->at++ - '0');
	*out = value;
	return c->at > from && value >= min && value <= max;
}

/* [+-]hh[:mm[:ss]] */
static bool take_time(struct cursor *c, int max_hours, int *seconds)
{
	int hours, minutes = 0, rest = 0;
	bool negative = take(c, '-');
	if (!negative)
		take(c, '+');
	if (!take_number(c, 0, max_hours, &hours))
		return false;
	if (take(c, ':')) {
		if (!take_number(c, 0, 59, &minutes))
			return false;
		if (take(c, ':') && !take_number(c, 0, 59, &rest))
			return false;
	}
	*seconds = hours * HOUR_S + minutes * 60 + rest;
	if (negative)
		*seconds = -*seconds;
	return true;
}

/* Three letters or more, or <letters, digits and signs>. */
static bool take_name(struct cursor *c, char out[ABBREVIATION_MAX])
{
	bool quoted = take(c, '<');
	size_t n = 0;
	while (c->at < c->end &&
	       (is_letter(*c->at) || (quoted && (is_digit(*c->at) || *c->at == '+' || *c->at == '-')))) {
		if (n == ABBREVIATION_MAX - 1)
			return false;
		out[n++] = *c->at++;
	}
	out[n] = '\0';
	return n >= 3 && (!quoted || take(c, '>'));
}

static bool take_date(struct cursor *c, struct rule_date *d)
{
	*d = (struct rule_date){.time_s = 2 * HOUR_S};
	bool good;
	if (take(c, 'M')) {
		d->form = RULE_WEEKDAY;
		good = take_number(c, 1, 12, &d->month) && take(c, '.') && take_number(c, 1, 5, &d->week) &&
		       take(c, '.') && take_number(c, 0, 6, &d->weekday);
	} else if (take(c, 'J')) {
		d->form = RULE_JULIAN;
		good = take_number(c, 1, 365, &d->day);
	} else {
		d->form = RULE_DAY_OF_YEAR;
		good = take_number(c, 0, 365, &d->day);
	}
	if (good && take(c, '/'))
		good = take_time(c, 167, &d->time_s);
	return good;
}

static bool take_rule(struct cursor *c, struct zone_rule *r)
{
	/* POSIX counts the offset west of Greenwich; ours is local - UTC */
	int west_s;
	if (!take_name(c, r->standard.abbreviation) || !take_time(c, 24, &west_s))
		return false;
	r->standard.offset_s = -west_s;
	if (c->at == c->end)
		return true;
	r->changes = true;
	if (!take_name(c, r->daylight.abbreviation))
		return false;
	r->daylight.offset_s = r->standard.offset_s + HOUR_S;
	if (c->at < c->end && *c->at != ',') {
		if (!take_time(c, 24, &west_s))
			return false;
		r->daylight.offset_s = -west_s;
	}
	return take(c, ',') && take_date(c, &r->start) && take(c, ',') && take_date(c, &r->end);
}

enum status zone_rule_parse(const char *text, size_t n, struct zone_rule *out, struct err *e)
{
	struct cursor c = {.at = text, .end = text + n};
	*out = (struct zone_rule){.changes = false};
	if (!take_rule(&c, out) || c.at != c.end)
		return err_set(e, ST_SYNTAX, "footer rule can't be read at its byte %zu",
			       (size_t)(c.at - text) + 1);
	return ST_OK;
}

static int32_t first_of_month(int year, int month)
{
	int32_t mjd = 0;
	/* the caller keeps to years in which these dates exist */
	if (date_to_mjd((struct date){.year = year, .month = month, .day = 1}, &mjd, NULL) != ST_OK)
		return 0;
	return mjd;
}

static int32_t rule_day_mjd(const struct rule_date *d, int year)
{
	int32_t january = first_of_month(year, 1);
	if (d->form == RULE_DAY_OF_YEAR)
		return january + d->day;
	if (d->form == RULE_JULIAN) {
		bool leap_year = first_of_month(year + 1, 1) - january == 366;
		return january + d->day - 1 + (leap_year && d->day > 59 ? 1 : 0);
	}
	int32_t first = first_of_month(year, d->month);
	int32_t next = d->month == 12 ? first_of_month(year + 1, 1) : first_of_month(year, d->month + 1);
	int weekday_of_first = (weekday_from_mjd(first) + 1) % 7; /* 0 Sunday */
	int32_t day = first + (d->weekday - weekday_of_first + 7) % 7 + 7 * (d->week - 1);
	return day >= next ? day - 7 : day; /* week 5 is the last one, which may be the fourth */
}

static int64_t change_instant(const struct rule_date *d, int year, int offset_before_s)
{
	return (int64_t)(rule_day_mjd(d, year) - UNIX_EPOCH_MJD) * DAY_S + d->time_s - offset_before_s;
}

const struct zone_type *zone_rule_at(const struct zone_rule *rule, int64_t t)
{
	/* a margin of 20 days inside the calendar's range, so that the years next to t exist too */
	const int64_t first = (int64_t)(first_of_month(RULE_FIRST_YEAR, 2) - UNIX_EPOCH_MJD) * DAY_S;
	const int64_t last = (int64_t)(first_of_month(RULE_LAST_YEAR, 12) - UNIX_EPOCH_MJD) * DAY_S;
	if (!rule->changes || t < first || t >= last)
		return &rule->standard;
	int year = date_from_mjd((int32_t)(t / DAY_S) + UNIX_EPOCH_MJD - (t % DAY_S < 0 ? 1 : 0)).year;
	const struct zone_type *holds = &rule->standard;
	int64_t latest = INT64_MIN;
	for (int y = year - 1; y <= year + 1 && y <= RULE_LAST_YEAR; y++) {
		int64_t end = change_instant(&rule->end, y, rule->daylight.offset_s);
		int64_t start = change_instant(&rule->start, y, rule->standard.offset_s);
		if (end <= t && end >= latest) {
			latest = end;
			holds = &rule->standard;
		}
		/* where both fall together (daylight time all year), the start wins */
		if (start <= t && start >= latest) {
			latest = start;
			holds = &rule->daylight;
		}
	}
	return holds;
}
