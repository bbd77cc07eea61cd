/* SPDX-License-Identifier: MIT */
#include "tui/plan_time_text.h"

#include "ephem/number_text.h"
#include "ephem/timescale.h"
#include "ephem/units.h"
#include "tui/plan_time.h"

#include <math.h>
#include <string.h>

#define EXPECTED_TIME "22:40, 05:40Z, sunset+20m, evening-9, middle or YYYY-MM-DDTHH:MMZ"
#define EXPECTED_SPAN "FROM..TO, FROM..+25m, first-half, second-half or whole"
enum {
	HALF_EARLIEST_MIN = 18 * 60,
	HALF_LATEST_MIN = 6 * 60
}; /* a middle of the night: common practice, no source */
enum { SHIFT_MAX_S = 24 * 3600, OFFSET_EAST_MAX_S = 14 * 3600, OFFSET_WEST_MAX_S = 12 * 3600 };

static enum status refuse(const char *text, enum status s, const char *why, const char *expected,
			  struct err *e)
{
	char got[ERR_QUOTE_MAX];
	err_quote(text, strlen(text), got);
	return err_set(e, s, "%s (got \"%s\", expected %s)", why, got, expected);
}

/* --- pieces --- */

static bool literal(const char **s, char c)
{
	if (**s != c)
		return false;
	(*s)++;
	return true;
}

static bool letter(const char **s, char capital)
{
	return literal(s, capital) || literal(s, (char)(capital - 'A' + 'a'));
}

/* Exactly n digits. */
static bool digits(const char **s, int n, int *value)
{
	*value = 0;
	for (int i = 0; i < n; i++, (*s)++) {
		if (**s < '0' || **s > '9')
			return false;
		*value = *value * 10 + (**s - '0');
	}
	return true;
}

/* `.25`: at most 6 digits. */
static bool fraction(const char **s, double *value)
{
	double unit = 1.0;
	*value = 0.0;
	for (int i = 0; i < 6 && **s >= '0' && **s <= '9'; i++, (*s)++) {
		unit /= 10.0;
		*value += unit * (**s - '0');
	}
	return unit < 1.0;
}

/* 1 to 4 digits and a letter behind them; leaves *s where it was when there is another letter. */
static bool count_of(const char **s, char unit, int *value)
{
	const char *at = *s;
	int n = 0, sum = 0;
	for (; n < 4 && *at >= '0' && *at <= '9'; n++, at++)
		sum = sum * 10 + (*at - '0');
	if (n == 0 || !letter(&at, unit))
		return false;
	*s = at;
	*value = sum;
	return true;
}

/* `+20m`, `-1h30m`. */
static bool shift(const char **s, double *shift_s)
{
	const char *at = *s;
	int hours = 0, minutes = 0;
	bool minus = literal(&at, '-');
	if (!minus && !literal(&at, '+'))
		return false;
	bool any = count_of(&at, 'H', &hours);
	any = count_of(&at, 'M', &minutes) || any;
	if (!any)
		return false;
	*shift_s = (minus ? -60.0 : 60.0) * (hours * 60.0 + minutes);
	*s = at;
	return true;
}

/* --- clocks --- */

static bool starts_date(const char *s)
{
	int year;
	return digits(&s, 4, &year) && *s == '-';
}

static enum status clock_date(const char *text, const char **s, struct typed_time *t, struct err *e)
{
	struct date d;
	if (!digits(s, 4, &d.year) || !literal(s, '-') || !digits(s, 2, &d.month) || !literal(s, '-') ||
	    !digits(s, 2, &d.day))
		return refuse(text, ST_SYNTAX, "not a date", "YYYY-MM-DDTHH:MMZ", e);
	if (!letter(s, 'T') && !literal(s, ' '))
		return refuse(text, ST_SYNTAX, "a date without a time", "YYYY-MM-DDTHH:MMZ", e);
	t->has_date = true;
	return date_to_mjd(d, &t->mjd, e);
}

/* `-06:00` behind a clock time. A shift has letters, so the two can't be taken for each other. */
static enum status clock_offset(const char *text, const char **s, struct typed_time *t, struct err *e)
{
	const char *at = *s;
	int hours, minutes;
	bool minus = literal(&at, '-');
	if ((!minus && !literal(&at, '+')) || !digits(&at, 2, &hours) || !literal(&at, ':') ||
	    !digits(&at, 2, &minutes))
		return ST_OK;
	t->local = false;
	t->offset_s = (minus ? -60 : 60) * (hours * 60 + minutes);
	*s = at;
	if (minutes > 59 || t->offset_s < -OFFSET_WEST_MAX_S || t->offset_s > OFFSET_EAST_MAX_S)
		return refuse(text, ST_RANGE, "no such offset from UTC", "-12:00 to +14:00", e);
	return ST_OK;
}

static enum status clock_time(const char *text, const char **s, struct typed_time *t, struct err *e)
{
	int hour, minute, second = 0;
	double part = 0.0;
	t->kind = TYPED_CLOCK;
	if (starts_date(*s)) {
		enum status st = clock_date(text, s, t, e);
		if (st != ST_OK)
			return st;
	}
	if (!digits(s, 2, &hour) || !literal(s, ':') || !digits(s, 2, &minute) ||
	    (literal(s, ':') && (!digits(s, 2, &second) || (literal(s, '.') && !fraction(s, &part)))))
		return refuse(text, ST_SYNTAX, "not a time of the night", EXPECTED_TIME, e);
	/* a bare clock time is the site's, a whole instant UTC, as everywhere */
	t->local = !t->has_date;
	if (letter(s, 'Z'))
		t->local = false;
	else if (letter(s, 'L'))
		t->local = true;
	else if (clock_offset(text, s, t, e) != ST_OK)
		return ST_RANGE;
	bool leap = second == 60 && hour == 23 && minute == 59 && !t->local && t->offset_s == 0;
	if (hour > 23 || minute > 59 || (second > 59 && !leap))
		return refuse(text, ST_RANGE, "hours must be 0 to 23, minutes and seconds 0 to 59", "HH:MM",
			      e);
	t->sod_s = hour * 3600.0 + minute * 60.0 + second + part;
	return ST_OK;
}

/* --- words --- */

static const struct {
	const char *word;
	enum typed_kind kind;
} words[] = {{"sunset", TYPED_SUNSET}, {"sunrise", TYPED_SUNRISE}, {"dusk", TYPED_DUSK},
	     {"dawn", TYPED_DAWN},     {"evening", TYPED_EVENING}, {"morning", TYPED_MORNING},
	     {"middle", TYPED_MIDDLE}, {"start", TYPED_START},	   {"end", TYPED_END}};

static size_t letters(const char *s)
{
	size_t n = 0;
	while ((s[n] >= 'a' && s[n] <= 'z') || (s[n] >= 'A' && s[n] <= 'Z'))
		n++;
	return n;
}

static bool is_word(const char *s, size_t n, const char *word)
{
	if (strlen(word) != n)
		return false;
	for (size_t i = 0; i < n; i++)
		if ((s[i] | 0x20) != word[i])
			return false;
	return true;
}

/* `-9`, `+0.5` behind evening and morning. A sign is needed, and no unit may follow: `evening+20m` says no
 * altitude. */
static enum status sun_altitude(const char *text, const char **s, struct typed_time *t, struct err *e)
{
	const char *from = *s, *end = from;
	if (*end == '-' || *end == '+')
		end++;
	else
		end = NULL;
	while (end && ((*end >= '0' && *end <= '9') || *end == '.'))
		end++;
	if (!end || (*end && *end != '+' && *end != '-') ||
	    number_parse(from, (size_t)(end - from), &t->sun_alt_deg, NULL, NULL) != ST_OK)
		return refuse(text, ST_SYNTAX, "the Sun's altitude is missing or can't be read",
			      "evening-9 or morning-9, degrees", e);
	if (fabs(t->sun_alt_deg) > 90.0)
		return refuse(text, ST_RANGE, "out of range", "-90 to 90 degrees", e);
	*s = end;
	return ST_OK;
}

static enum status base_time(const char *text, const char **s, struct typed_time *t, struct err *e)
{
	size_t n = letters(*s);
	if (n == 0 && **s >= '0' && **s <= '9')
		return clock_time(text, s, t, e);
	for (size_t i = 0; i < sizeof words / sizeof words[0]; i++) {
		if (!is_word(*s, n, words[i].word))
			continue;
		*s += n;
		t->kind = words[i].kind;
		return t->kind == TYPED_EVENING || t->kind == TYPED_MORNING ? sun_altitude(text, s, t, e)
									    : ST_OK;
	}
	return refuse(text, ST_SYNTAX, "not a time of the night", EXPECTED_TIME, e);
}

/* Takes blanks off both ends, into a text of its own. */
static enum status trimmed(const char *from, size_t n, char out[PLAN_SPAN_CHARS_MAX + 1], struct err *e)
{
	while (n > 0 && (*from == ' ' || *from == '\t')) {
		from++;
		n--;
	}
	while (n > 0 && (from[n - 1] == ' ' || from[n - 1] == '\t'))
		n--;
	if (n > PLAN_SPAN_CHARS_MAX)
		return err_set(e, ST_SYNTAX, "longer than %d characters", PLAN_SPAN_CHARS_MAX);
	memcpy(out, from, n);
	out[n] = '\0';
	return ST_OK;
}

static enum status whole_shift(const char *text, struct typed_time *t, struct err *e)
{
	if (fabs(t->shift_s) > SHIFT_MAX_S)
		return refuse(text, ST_RANGE, "shifted by more than a day", "at most 24h", e);
	return ST_OK;
}

/* text is trimmed. */
static enum status read_time(const char *text, struct typed_time *out, struct err *e)
{
	const char *s = text;
	*out = (struct typed_time){.kind = TYPED_CLOCK};
	enum status st = base_time(text, &s, out, e);
	if (st != ST_OK)
		return st;
	if (*s && (!shift(&s, &out->shift_s) || *s))
		return refuse(text, ST_SYNTAX, "unexpected characters behind the time", EXPECTED_TIME, e);
	return whole_shift(text, out, e);
}

enum status typed_time_read(const char *text, struct typed_time *out, struct err *e)
{
	char copy[PLAN_SPAN_CHARS_MAX + 1];
	enum status s = trimmed(text, strlen(text), copy, e);
	return s == ST_OK ? read_time(copy, out, e) : s;
}

/* --- spans --- */

/* The end of a span: a time, or `+25m` behind its beginning. */
static enum status read_end(const char *text, struct typed_time *out, struct err *e)
{
	const char *s = text;
	if (*text != '+' && *text != '-')
		return read_time(text, out, e);
	*out = (struct typed_time){.kind = TYPED_AFTER_FROM};
	if (!shift(&s, &out->shift_s) || *s)
		return refuse(text, ST_SYNTAX, "not a length", "+25m or +1h30m", e);
	if (!(out->shift_s > 0.0))
		return refuse(text, ST_RANGE, "the span has no length", "+25m or +1h30m", e);
	return whole_shift(text, out, e);
}

enum status typed_span_read(const char *text, struct typed_span *out, struct err *e)
{
	static const char *const names[] = {
	    [TYPED_FIRST_HALF] = "first-half", [TYPED_SECOND_HALF] = "second-half", [TYPED_WHOLE] = "whole"};
	char whole[PLAN_SPAN_CHARS_MAX + 1], part[PLAN_SPAN_CHARS_MAX + 1];
	*out = (struct typed_span){.kind = TYPED_FROM_TO};
	enum status s = trimmed(text, strlen(text), whole, e);
	if (s != ST_OK)
		return s;
	for (int kind = TYPED_FIRST_HALF; kind <= TYPED_WHOLE; kind++)
		if (strcmp(whole, names[kind]) == 0) {
			out->kind = (enum typed_span_kind)kind;
			return ST_OK;
		}
	const char *dots = strstr(whole, "..");
	if (!dots)
		return refuse(whole, ST_SYNTAX, "not a span of the night", EXPECTED_SPAN, e);
	s = trimmed(whole, (size_t)(dots - whole), part, e);
	if (s == ST_OK)
		s = read_time(part, &out->from, e);
	if (s == ST_OK)
		s = trimmed(dots + 2, strlen(dots + 2), part, e);
	return s == ST_OK ? read_end(part, &out->to, e) : s;
}

/* --- without a night --- */

enum status plan_span_check(const char *text, struct err *e)
{
	struct typed_span span;
	return typed_span_read(text, &span, e);
}

enum status half_rule_parse(const char *text, struct half_rule *out, struct err *e)
{
	const char *s = text;
	int hour, minute;
	*out = (struct half_rule){.kind = HALF_DARK};
	if (!text[0] || strcmp(text, "dark") == 0)
		return ST_OK;
	if (strcmp(text, "sunset") == 0) {
		out->kind = HALF_SUNSET;
		return ST_OK;
	}
	if (!digits(&s, 2, &hour) || !literal(&s, ':') || !digits(&s, 2, &minute) || *s)
		return refuse(text, ST_SYNTAX, "not a rule for halves of the night", "dark, sunset or HH:MM",
			      e);
	if (hour > 23 || minute > 59)
		return refuse(text, ST_RANGE, "no such time of day", "18:00 to 06:00", e);
	const int clock_min = hour * 60 + minute;
	if (clock_min > HALF_LATEST_MIN && clock_min < HALF_EARLIEST_MIN)
		return refuse(text, ST_RANGE, "no middle of a night", "18:00 to 06:00", e);
	*out = (struct half_rule){.kind = HALF_CLOCK, .clock_min = clock_min};
	return ST_OK;
}
