/* SPDX-License-Identifier: MIT */
#include "tui/plan_time.h"

#include "ephem/units.h"
#include "tui/plan_time_text.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

/* Instants are doubles of days: what lies this close to a noon is the noon. */
#define NOON_D (1e-3 / DAY_S)

static const char *const months[] = {"Jan", "Feb", "Mar", "Apr", "May", "Jun",
				     "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"};
static const char *const weekdays[] = {"Mon", "Tue", "Wed", "Thu", "Fri", "Sat", "Sun"};

/* --- echo --- */

static void clock_words(double sod_s, bool leap_second, char *out, size_t n)
{
	int s = (int)floor(sod_s);
	if (leap_second) /* sod_s is that of the second before it */
		snprintf(out, n, "%02d:%02d:60", s / 3600, s / 60 % 60);
	else if (s % 60 != 0)
		snprintf(out, n, "%02d:%02d:%02d", s / 3600, s / 60 % 60, s % 60);
	else
		snprintf(out, n, "%02d:%02d", s / 3600, s / 60 % 60);
}

void plan_echo(const struct plan_clock *c, double t_d, char out[PLAN_ECHO_BYTES])
{
	char clock[16], utc_clock[16], date[32] = "";
	if (!isfinite(t_d)) {
		snprintf(out, PLAN_ECHO_BYTES, "does not happen");
		return;
	}
	struct utc t = utc_rounded(c->leap, night_utc(c->night, t_d), 0);
	struct local_time l = zone_local(c->zone, t), u = zone_local(NULL, t);
	struct date d = date_from_mjd(l.mjd), du = date_from_mjd(u.mjd);
	clock_words(l.sod_s, l.leap_second, clock, sizeof clock);
	clock_words(u.sod_s, u.leap_second, utc_clock, sizeof utc_clock);
	int n = snprintf(out, PLAN_ECHO_BYTES, "%s %d %s %s %s", weekdays[weekday_from_mjd(l.mjd)], d.day,
			 months[d.month - 1], clock, l.abbreviation);
	if (u.mjd != l.mjd)
		snprintf(date, sizeof date, " on %d %s", du.day, months[du.month - 1]);
	if (c->zone && n > 0 && n < PLAN_ECHO_BYTES)
		snprintf(out + n, (size_t)(PLAN_ECHO_BYTES - n), " (%s UTC%s)", utc_clock, date);
}

/* --- clocks --- */

/* From when to when the night lasts, for messages. */
static void night_words(const struct plan_clock *c, char *out, size_t n)
{
	char from[PLAN_ECHO_BYTES], to[PLAN_ECHO_BYTES];
	plan_echo(c, 0.0, from);
	plan_echo(c, c->night->length_d, to);
	snprintf(out, n, "a time from %s to %s", from, to);
}

static enum status outside(const struct plan_clock *c, const char *text, struct err *e)
{
	char got[ERR_QUOTE_MAX], expected[256];
	err_quote(text, strlen(text), got);
	night_words(c, expected, sizeof expected);
	return err_set(e, ST_RANGE, "not in this night (got \"%s\", expected %s)", got, expected);
}

/* The instants that a clock reading of one date can be: 0, 1 or 2. */
static int instants(const struct plan_clock *c, const struct typed_time *t, int32_t mjd, struct utc out[2])
{
	if (t->local)
		return zone_utc(c->zone, mjd, t->sod_s, out);
	if (t->sod_s >= DAY_S && leap_day_length_s(c->leap, mjd) <= DAY_S)
		return 0;
	out[0] = (struct utc){.mjd = mjd, .sod_s = t->sod_s};
	/* an offset moves the reading by clock time, which knows no leap second */
	double sod_s = t->sod_s - t->offset_s;
	if (t->offset_s != 0) {
		int days = (int)floor(sod_s / DAY_S);
		out[0] = (struct utc){.mjd = mjd + days, .sod_s = sod_s - days * DAY_S};
	}
	return 1;
}

struct readings {
	int n;
	double t_d[4]; /* rising */
};

/* Half open at the end: a clock that shows noon means one of the two noons, not both. */
static struct readings in_night(const struct plan_clock *c, const struct typed_time *t)
{
	struct readings r = {0};
	int32_t evening = c->night->noon_utc.mjd;
	for (int32_t mjd = t->has_date ? t->mjd : evening - 1; mjd <= (t->has_date ? t->mjd : evening + 2);
	     mjd++) {
		struct utc at[2];
		int n = instants(c, t, mjd, at);
		for (int i = 0; i < n && r.n < 4; i++) {
			double t_d = night_of_utc(c->night, at[i]), end_d = c->night->length_d;
			if (t_d >= -NOON_D && t_d < (t->has_date ? end_d + NOON_D : end_d - NOON_D))
				r.t_d[r.n++] = fmin(fmax(t_d, 0.0), end_d);
		}
	}
	return r;
}

/* Whether the site's clocks skip that reading this night: with the offset from before the change it would be
 * an instant of it. */
static bool skipped(const struct plan_clock *c, const struct typed_time *t)
{
	int32_t evening = c->night->noon_utc.mjd;
	if (!t->local || !c->zone)
		return false;
	int offset_s = zone_local(c->zone, night_utc(c->night, 0.0)).offset_s;
	struct typed_time before = *t;
	before.local = false;
	before.offset_s = offset_s;
	for (int32_t mjd = evening - 1; mjd <= evening + 2; mjd++) {
		struct utc at[2], as_before[2];
		if ((t->has_date && mjd != t->mjd) || instants(c, t, mjd, at) != 0 ||
		    instants(c, &before, mjd, as_before) != 1)
			continue;
		double t_d = night_of_utc(c->night, as_before[0]);
		if (t_d >= 0.0 && t_d <= c->night->length_d)
			return true;
	}
	return false;
}

static enum status clock_d(const struct plan_clock *c, const struct typed_time *t, const char *text,
			   double *t_d, struct err *e)
{
	char got[ERR_QUOTE_MAX], first[PLAN_ECHO_BYTES], second[PLAN_ECHO_BYTES];
	struct readings r = in_night(c, t);
	err_quote(text, strlen(text), got);
	if (r.n == 1) {
		*t_d = r.t_d[0];
		return ST_OK;
	}
	if (r.n > 1) {
		plan_echo(c, r.t_d[0], first);
		plan_echo(c, r.t_d[1], second);
		return err_set(e, ST_RANGE,
			       "comes twice this night, as %s and as %s (got \"%s\", expected it with Z, in "
			       "UTC, or with an offset such as -06:00)",
			       first, second, got);
	}
	if (t->sod_s >= DAY_S)
		return err_set(e, ST_RANGE, "no leap second comes then (got \"%s\", expected a time that is)",
			       got);
	if (skipped(c, t))
		return err_set(e, ST_ABSENT,
			       "does not exist this night: the site's clocks are set forward over it (got "
			       "\"%s\", expected another time, or it with Z, in UTC)",
			       got);
	return outside(c, text, e);
}

/* --- what the Sun says --- */

static enum status middle_d(const struct plan_clock *c, const char *text, double *t_d, struct err *e)
{
	const struct night_times *times = &c->night->times;
	if (c->half.kind == HALF_CLOCK) {
		char clock[32];
		const struct typed_time t = {
		    .kind = TYPED_CLOCK, .local = true, .sod_s = c->half.clock_min * 60.0};
		snprintf(clock, sizeof clock, "%02d:%02d", c->half.clock_min / 60, c->half.clock_min % 60);
		(void)text;
		struct err why;
		enum status s = clock_d(c, &t, clock, t_d, &why);
		return s == ST_OK
			   ? s
			   : err_set(e, s, "the clock time that halves the site's nights %.400s", why.text);
	}
	if (c->half.kind == HALF_SUNSET) {
		*t_d = 0.5 * (times->sunset_d + times->sunrise_d);
		return ST_OK;
	}
	struct night_dark dark = night_dark(c->night, c->sun_limit_deg);
	*t_d = 0.5 * (dark.dusk_d + dark.dawn_d);
	return ST_OK;
}

static enum status base_d(const struct plan_clock *c, const struct typed_time *t, const char *text,
			  double *t_d, struct err *e)
{
	const struct night_times *times = &c->night->times;
	switch (t->kind) {
	case TYPED_CLOCK:
		return clock_d(c, t, text, t_d, e);
	case TYPED_SUNSET:
		*t_d = times->sunset_d;
		break;
	case TYPED_SUNRISE:
		*t_d = times->sunrise_d;
		break;
	case TYPED_DUSK:
		*t_d = night_dark(c->night, c->sun_limit_deg).dusk_d;
		break;
	case TYPED_DAWN:
		*t_d = night_dark(c->night, c->sun_limit_deg).dawn_d;
		break;
	case TYPED_EVENING:
		*t_d = night_dark(c->night, t->sun_alt_deg).dusk_d;
		break;
	case TYPED_MORNING:
		*t_d = night_dark(c->night, t->sun_alt_deg).dawn_d;
		break;
	case TYPED_MIDDLE:
		return middle_d(c, text, t_d, e);
	case TYPED_END:
		*t_d = c->night->length_d;
		break;
	case TYPED_START:
	case TYPED_AFTER_FROM:
		*t_d = 0.0;
		break;
	}
	return ST_OK;
}

/* text: what is quoted, the time itself or the span that it is of. */
static enum status typed_d(const struct plan_clock *c, const struct typed_time *t, const char *text,
			   double *t_d, struct err *e)
{
	double at_d = (double)NAN;
	enum status s = base_d(c, t, text, &at_d, e);
	if (s != ST_OK)
		return s;
	if (!isfinite(at_d)) {
		char got[ERR_QUOTE_MAX];
		err_quote(text, strlen(text), got);
		return err_set(e, ST_ABSENT,
			       "does not happen this night (got \"%s\", expected what the Sun does, or a "
			       "clock time)",
			       got);
	}
	at_d += t->shift_s / DAY_S;
	if (at_d < -NOON_D || at_d > c->night->length_d + NOON_D)
		return outside(c, text, e);
	*t_d = fmin(fmax(at_d, 0.0), c->night->length_d);
	return ST_OK;
}

enum status plan_time(const struct plan_clock *c, const char *text, double *t_d, struct err *e)
{
	struct typed_time t;
	enum status s = typed_time_read(text, &t, e);
	return s == ST_OK ? typed_d(c, &t, text, t_d, e) : s;
}

/* --- spans --- */

/* A half or the whole of the night: from sunset to sunrise, so that twilight belongs to whoever has the dark
 * next to it; from noon or to noon where the Sun does neither. */
static enum status part_d(const struct plan_clock *c, enum typed_span_kind kind, const char *text,
			  double *from_d, double *to_d, struct err *e)
{
	const struct night_times *times = &c->night->times;
	const struct typed_time middle = {.kind = TYPED_MIDDLE};
	double from = isnan(times->sunset_d) ? 0.0 : times->sunset_d;
	double to = isnan(times->sunrise_d) ? c->night->length_d : times->sunrise_d, half = 0.0;
	if (!(from < to)) {
		from = 0.0;
		to = c->night->length_d;
	}
	enum status s = kind == TYPED_WHOLE ? ST_OK : typed_d(c, &middle, text, &half, e);
	if (s != ST_OK)
		return s;
	*from_d = kind == TYPED_SECOND_HALF ? half : from;
	*to_d = kind == TYPED_FIRST_HALF ? half : to;
	return ST_OK;
}

enum status plan_span(const struct plan_clock *c, const char *text, double *from_d, double *to_d,
		      struct err *e)
{
	struct typed_span span;
	char got[ERR_QUOTE_MAX], first[PLAN_ECHO_BYTES], second[PLAN_ECHO_BYTES];
	double from = 0.0, to = 0.0;
	enum status s = typed_span_read(text, &span, e);
	if (s != ST_OK)
		return s;
	if (span.kind != TYPED_FROM_TO) {
		s = part_d(c, span.kind, text, &from, &to, e);
	} else {
		s = typed_d(c, &span.from, text, &from, e);
		to = from + span.to.shift_s / DAY_S;
		if (s == ST_OK && span.to.kind != TYPED_AFTER_FROM)
			s = typed_d(c, &span.to, text, &to, e);
		else if (s == ST_OK && to > c->night->length_d + NOON_D)
			s = outside(c, text, e);
	}
	if (s != ST_OK)
		return s;
	if (!(from < to)) {
		err_quote(text, strlen(text), got);
		plan_echo(c, from, first);
		plan_echo(c, to, second);
		return err_set(e, ST_RANGE,
			       "ends before it begins (got \"%s\": from %s to %s, expected FROM..TO)", got,
			       first, second);
	}
	*from_d = from;
	*to_d = fmin(to, c->night->length_d);
	return ST_OK;
}
