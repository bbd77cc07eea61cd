/* SPDX-License-Identifier: MIT */
#include "ephem/angle_text.h"

#include "ephem/number_text.h"

#include <math.h>
#include <stdbool.h>
#include <stdio.h>
#include <string.h>

/* --- reading --- */

/* Three parts with one kind of separator: colons, blanks, or a letter behind each. */
struct sexagesimal {
	bool has_sign, negative;
	int first, minutes;
	double seconds;
};

struct scan {
	const char *s;
	size_t n, at;
};

static bool more(const struct scan *p)
{
	return p->at < p->n;
}

static bool blank_at(const struct scan *p)
{
	return more(p) && (p->s[p->at] == ' ' || p->s[p->at] == '\t');
}

static bool digit_at(const struct scan *p)
{
	return more(p) && p->s[p->at] >= '0' && p->s[p->at] <= '9';
}

static void skip_blanks(struct scan *p)
{
	while (blank_at(p))
		p->at++;
}

static bool take(struct scan *p, const char *word)
{
	size_t length = strlen(word);
	if (p->n - p->at < length || memcmp(p->s + p->at, word, length) != 0)
		return false;
	p->at += length;
	return true;
}

/* One or two digits. */
static bool whole_part(struct scan *p, int *value)
{
	int digits = 0;
	*value = 0;
	for (; digit_at(p) && digits < 3; p->at++, digits++)
		*value = *value * 10 + (p->s[p->at] - '0');
	return digits == 1 || digits == 2;
}

/* ':' -> ':', blanks -> ' ', the unit letter (blanks may follow) -> 'u'; 0: none of them. */
static char separator(struct scan *p, const char *letters)
{
	if (take(p, ":"))
		return ':';
	if (more(p) && strchr(letters, p->s[p->at])) {
		p->at++;
		skip_blanks(p);
		return 'u';
	}
	if (!blank_at(p))
		return 0;
	skip_blanks(p);
	return ' ';
}

static void read_sign(struct scan *p, struct sexagesimal *v)
{
	v->negative = take(p, "-") || take(p, "\xE2\x88\x92");
	v->has_sign = v->negative || take(p, "+");
}

/* The text has a form with parts (a separator after digits), so it is not a plain number. */
static bool has_parts(const struct scan *whole, const char *letters)
{
	struct scan p = *whole;
	struct sexagesimal v;
	read_sign(&p, &v);
	while (digit_at(&p) || (more(&p) && p.s[p.at] == '.'))
		p.at++;
	return p.at > 0 && separator(&p, letters) != 0;
}

static enum status refuse(const struct scan *p, const char *why, const char *expected, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	err_quote(p->s, p->n, got);
	return err_set(e, ST_SYNTAX, "%s (got \"%s\", expected %s)", why, got, expected);
}

static enum status refuse_range(const struct scan *p, const char *why, const char *expected, struct err *e)
{
	(void)refuse(p, why, expected, e);
	if (e)
		e->status = ST_RANGE;
	return ST_RANGE;
}

static enum status read_parts(const struct scan *whole, const char *first_letters, const char *expected,
			      struct sexagesimal *v, struct err *e)
{
	struct scan p = *whole;
	read_sign(&p, v);
	if (!whole_part(&p, &v->first))
		return refuse(whole, "the first part is not one or two digits", expected, e);
	char one = separator(&p, first_letters);
	if (!one)
		return refuse(whole,
			      p.at < p.n && p.s[p.at] == '.' ? "a fraction in a part that is not the last"
							     : "unexpected character after the first part",
			      expected, e);
	if (!whole_part(&p, &v->minutes))
		return refuse(whole, "the minutes are not one or two digits", expected, e);
	if (more(&p) && p.s[p.at] == '.')
		return refuse(whole, "a fraction in a part that is not the last", expected, e);
	char two = separator(&p, "mM'");
	if (!two || !more(&p))
		return refuse(whole, "three parts are needed", expected, e);
	if (one != two)
		return refuse(whole, "two kinds of separators", expected, e);
	size_t start = p.at;
	int digits = 0, points = 0;
	for (; digit_at(&p) || (more(&p) && p.s[p.at] == '.'); p.at++) {
		points += p.s[p.at] == '.';
		digits += p.s[p.at] != '.' && points == 0;
	}
	if (digits < 1 || digits > 2 || points > 1)
		return refuse(whole, "the seconds are not one or two digits with or without a fraction",
			      expected, e);
	enum status s = number_parse(p.s + start, p.at - start, &v->seconds, NULL, e);
	if (s != ST_OK) {
		/* a fraction of many zeros is not too small: only its length can be wrong here */
		return refuse(whole, "the seconds are too long", expected, e);
	}
	if (one == 'u' && more(&p) && strchr("sS\"", p.s[p.at]))
		p.at++;
	if (more(&p))
		return refuse(whole, "unexpected characters at the end", expected, e);
	if (v->minutes >= 60 || v->seconds >= 60.0)
		return refuse_range(whole, "minutes and seconds must be below 60", expected, e);
	return ST_OK;
}

static struct scan trimmed(const char *text, size_t n)
{
	struct scan p = {.s = text, .n = n};
	while (p.n > 0 && (p.s[p.n - 1] == ' ' || p.s[p.n - 1] == '\t'))
		p.n--;
	while (p.n > 0 && (p.s[0] == ' ' || p.s[0] == '\t')) {
		p.s++;
		p.n--;
	}
	return p;
}

enum status ra_parse(const char *text, size_t n, double *ra_deg, struct err *e)
{
	static const char *const expected = "degrees 0 <= RA < 360, or hours hh:mm:ss";
	struct scan p = trimmed(text, n);
	double value;
	if (has_parts(&p, "hH")) {
		struct sexagesimal v = {.has_sign = false};
		enum status s = read_parts(&p, "hH", expected, &v, e);
		if (s != ST_OK)
			return s;
		if (v.has_sign)
			return refuse(&p, "a right ascension has no sign", expected, e);
		if (v.first >= 24)
			return refuse_range(&p, "hours must be 0 to 23", expected, e);
		value = (v.first * 3600.0 + v.minutes * 60.0 + v.seconds) / 240.0;
		if (value >= 360.0) /* 23:59:59.999999999999 rounds up */
			value = nextafter(360.0, 0.0);
	} else {
		enum status s = number_parse(p.s, p.n, &value, NULL, e);
		if (s != ST_OK)
			return s;
		struct scan q = p;
		if (take(&q, "+") || take(&q, "-") || take(&q, "\xE2\x88\x92"))
			return refuse(&p, "a right ascension has no sign", expected, e);
		if (!(value >= 0.0 && value < 360.0))
			return refuse_range(&p, "out of range", expected, e);
	}
	*ra_deg = value;
	return ST_OK;
}

enum status dec_parse(const char *text, size_t n, double *dec_deg, struct err *e)
{
	static const char *const expected = "degrees from -90 to 90, or [+-]dd:mm:ss";
	struct scan p = trimmed(text, n);
	double value;
	if (has_parts(&p, "dD")) {
		struct sexagesimal v = {.has_sign = false};
		enum status s = read_parts(&p, "dD", expected, &v, e);
		if (s != ST_OK)
			return s;
		value = (v.first * 3600.0 + v.minutes * 60.0 + v.seconds) / 3600.0;
		if (v.first >= 90 && (v.first > 90 || v.minutes > 0 || v.seconds > 0.0))
			return refuse_range(&p, "out of range", expected, e);
		if (v.negative)
			value = -value;
	} else {
		enum status s = number_parse(p.s, p.n, &value, NULL, e);
		if (s != ST_OK)
			return s;
		if (!(value >= -90.0 && value <= 90.0))
			return refuse_range(&p, "out of range", expected, e);
	}
	*dec_deg = value;
	return ST_OK;
}

/* --- writing --- */

/* `hh:mm:ss.ss` of a count of seconds, rounded half up with carry; whole: the count at which it starts again
 * at 0 (0: never). */
static void clock_like(double seconds, int decimals, long long whole, const char *sign,
		       char out[ANGLE_TEXT_MAX])
{
	int places = decimals < 0 ? 0 : decimals > 9 ? 9 : decimals;
	long long scale = 1;
	for (int i = 0; i < places; i++)
		scale *= 10;
	long long ticks = llround(seconds * (double)scale);
	if (whole > 0 && ticks >= whole * scale)
		ticks -= whole * scale;
	long long s = ticks / scale, rest = ticks % scale;
	int used =
	    snprintf(out, ANGLE_TEXT_MAX, "%s%02lld:%02lld:%02lld", sign, s / 3600, s / 60 % 60, s % 60);
	if (places > 0 && used > 0 && used < ANGLE_TEXT_MAX)
		snprintf(out + used, (size_t)(ANGLE_TEXT_MAX - used), ".%0*lld", places, rest);
}

void ra_text(double ra_deg, int decimals, char out[ANGLE_TEXT_MAX])
{
	out[0] = '\0';
	if (!isfinite(ra_deg))
		return;
	double folded = fmod(ra_deg, 360.0);
	if (folded < 0.0)
		folded += 360.0;
	clock_like(folded * 240.0, decimals, 86400, "", out);
}

void dec_text(double dec_deg, int decimals, char out[ANGLE_TEXT_MAX])
{
	out[0] = '\0';
	if (!(fabs(dec_deg) <= 90.0))
		return;
	clock_like(fabs(dec_deg) * 3600.0, decimals, 0, dec_deg < 0.0 ? "-" : "+", out);
	if (out[0] == '-' && strspn(out + 1, "0:.") == strlen(out + 1))
		out[0] = '+';
}

static void lettered(double value, int decimals, char plus, char minus, char out[ANGLE_TEXT_MAX])
{
	char number[NUMBER_TEXT_MAX];
	int places = decimals < 0 ? 0 : decimals > 6 ? 6 : decimals;
	out[0] = '\0';
	if (!(fabs(value) <= 1e6))
		return;
	number_text_fixed(fabs(value), places, number);
	snprintf(out, ANGLE_TEXT_MAX, "%.28s %c", number, value < 0.0 ? minus : plus);
}

void lat_text(double lat_deg, int decimals, char out[ANGLE_TEXT_MAX])
{
	lettered(lat_deg, decimals, 'N', 'S', out);
}

void lon_text(double lon_east_deg, int decimals, char out[ANGLE_TEXT_MAX])
{
	lettered(lon_east_deg, decimals, 'E', 'W', out);
}
