/* SPDX-License-Identifier: MIT */
#include "ephem/number_text.h"

#include <float.h>
#include <math.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* A number of the grammar taken apart: 0.DIGITS * 10^point, digits without leading zeros. No decimal point is
 * ever handed to strtod or taken from printf, so the locale does not matter. */
struct decimal {
	bool negative;
	int n; /* digits; 0: the number is zero */
	char digit[NUMBER_INPUT_MAX + 1];
	long point;
};

enum { EXPONENT_MAX = 100000 }; /* far outside a double, far inside a long */

static bool is_digit(char c)
{
	return c >= '0' && c <= '9';
}

static const char *const minus_utf8 = "\xE2\x88\x92"; /* U+2212 */

/* --- reading --- */

struct reader {
	const char *s;
	size_t n, at;
};

static bool reader_take(struct reader *r, const char *word)
{
	size_t length = strlen(word);
	if (r->n - r->at < length || memcmp(r->s + r->at, word, length) != 0)
		return false;
	r->at += length;
	return true;
}

static enum status refuse(const struct reader *r, size_t at, size_t *bad_at, const char *why, struct err *e)
{
	char got[ERR_QUOTE_MAX], one[ERR_QUOTE_MAX] = "the end";
	err_quote(r->s, r->n, got);
	if (at < r->n) {
		size_t step = 1;
		while (at + step < r->n && ((unsigned char)r->s[at + step] & 0xC0) == 0x80)
			step++;
		char raw[ERR_QUOTE_MAX];
		err_quote(r->s + at, step, raw);
		snprintf(one, sizeof one, "\"%.60s\"", raw);
	}
	if (bad_at)
		*bad_at = at;
	return err_set(e, ST_SYNTAX, "%s at %s (got \"%s\", expected a number like 12.5)", why, one, got);
}

/* Digits with at most one point between; false when there is none. Leading zeros move the point only. */
static bool read_digits(struct reader *r, struct decimal *d)
{
	bool any = false, after = false;
	for (; r->at < r->n; r->at++) {
		char c = r->s[r->at];
		if (c == '.' && !after) {
			after = true;
			continue;
		}
		if (!is_digit(c))
			break;
		any = true;
		if (d->n == 0 && c == '0') {
			d->point -= after;
			continue;
		}
		d->digit[d->n++] = c;
		d->point += !after;
	}
	d->digit[d->n] = '\0';
	return any;
}

static bool read_exponent(struct reader *r, struct decimal *d)
{
	bool down = reader_take(r, "-") || reader_take(r, minus_utf8);
	if (!down)
		(void)reader_take(r, "+");
	long value = 0;
	bool any = false;
	for (; r->at < r->n && is_digit(r->s[r->at]); r->at++) {
		any = true;
		if (value < EXPONENT_MAX)
			value = value * 10 + (r->s[r->at] - '0');
	}
	d->point += down ? -value : value;
	return any;
}

static bool blank(char c)
{
	return c == ' ' || c == '\t';
}

static enum status decimal_read(const char *text, size_t n, struct decimal *d, size_t *bad_at, struct err *e)
{
	struct reader r = {.s = text, .n = n};
	*d = (struct decimal){.n = 0};
	while (r.n > 0 && blank(r.s[r.n - 1]))
		r.n--;
	while (r.at < r.n && blank(r.s[r.at]))
		r.at++;
	if (r.at == r.n) {
		if (bad_at)
			*bad_at = 0;
		return err_set(e, ST_SYNTAX, "empty (got \"\", expected a number like 12.5)");
	}
	if (r.n - r.at > NUMBER_INPUT_MAX)
		return refuse(&r, r.at + NUMBER_INPUT_MAX, bad_at, "too long, over 64 characters,", e);
	d->negative = reader_take(&r, "-") || reader_take(&r, minus_utf8);
	if (!d->negative)
		(void)reader_take(&r, "+");
	size_t start = r.at;
	if (!read_digits(&r, d))
		return refuse(&r, r.at < r.n ? r.at : start, bad_at, "not a number", e);
	if (r.at < r.n && (r.s[r.at] == 'e' || r.s[r.at] == 'E')) {
		size_t mark = r.at++;
		if (!read_exponent(&r, d))
			return refuse(&r, r.at < r.n ? r.at : mark, bad_at, "exponent without digits", e);
	}
	if (r.at < r.n)
		return refuse(&r, r.at, bad_at, r.s[r.at] == ',' ? "decimal comma" : "unexpected character",
			      e);
	return ST_OK;
}

/* The double nearest to 0.DIGITS * 10^point (strtod rounds correctly in glibc). */
static double decimal_value(const char *digits, int n, long point)
{
	char text[NUMBER_INPUT_MAX + 16];
	if (n == 0)
		return 0.0;
	snprintf(text, sizeof text, "%.*se%ld", n, digits, point - n);
	return strtod(text, NULL);
}

enum status number_parse(const char *text, size_t n, double *out, size_t *bad_at, struct err *e)
{
	struct decimal d;
	enum status s = decimal_read(text, n, &d, bad_at, e);
	if (s != ST_OK)
		return s;
	double value = decimal_value(d.digit, d.n, d.point);
	if (!isfinite(value) || (d.n > 0 && value < DBL_MIN)) {
		char got[ERR_QUOTE_MAX];
		err_quote(text, n, got);
		if (bad_at)
			*bad_at = 0;
		return err_set(e, ST_RANGE, "too %s to hold (got \"%s\", expected a number like 12.5)",
			       isfinite(value) ? "small" : "large", got);
	}
	*out = d.negative ? -value : value;
	return ST_OK;
}

enum status number_parse_jd2(const char *text, size_t n, struct jd2 *out, size_t *bad_at, struct err *e)
{
	struct decimal d;
	enum status s = decimal_read(text, n, &d, bad_at, e);
	if (s != ST_OK)
		return s;
	/* above 15 digits the whole part itself would not be exact */
	if (d.n > 0 && (d.point > 15 || d.point < -300)) {
		char got[ERR_QUOTE_MAX];
		err_quote(text, n, got);
		if (bad_at)
			*bad_at = 0;
		return err_set(e, ST_RANGE,
			       "too %s to hold (got \"%s\", expected a date in days like 2461114.708333)",
			       d.point > 15 ? "large" : "small", got);
	}
	int whole = d.point <= 0 ? 0 : d.point >= d.n ? d.n : (int)d.point;
	double day = whole ? decimal_value(d.digit, whole, d.point) : 0.0;
	double frac = decimal_value(d.digit + whole, d.n - whole, d.point - whole);
	*out = d.negative ? jd2_normal(-day, -frac) : jd2_normal(day, frac);
	return ST_OK;
}

/* --- writing --- */

/* The decimal of `digits` significant digits nearest to value, taken from %e without its decimal point. */
static void decimal_of(double value, int digits, struct decimal *d)
{
	char text[64];
	snprintf(text, sizeof text, "%.*e", digits - 1, fabs(value));
	char *mark = strchr(text, 'e');
	*d = (struct decimal){.negative = signbit(value) != 0};
	for (const char *c = text; c < mark; c++)
		if (is_digit(*c))
			d->digit[d->n++] = *c;
	d->point = strtol(mark + 1, NULL, 10) + 1;
	while (d->n > 0 && d->digit[d->n - 1] == '0')
		d->n--;
	d->digit[d->n] = '\0';
	if (d->n == 0)
		d->point = 0;
}

static void decimal_shortest(double value, struct decimal *d)
{
	for (int digits = 15; digits <= 17; digits++) {
		decimal_of(value, digits, d);
		if (decimal_value(d->digit, d->n, d->point) == fabs(value))
			return;
	}
}

struct writer {
	char *out;
	size_t used, room;
};

static void put(struct writer *w, char c)
{
	if (w->used + 1 < w->room)
		w->out[w->used++] = c;
	w->out[w->used] = '\0';
}

/* Digits from place `from` (10^-from-1 behind the point for from >= 0, before it for < 0) up to place `to`,
 * zeros where none. */
static void put_places(struct writer *w, const struct decimal *d, long from, long to)
{
	for (long place = from; place < to; place++) {
		long i = d->point + place;
		put(w, i >= 0 && i < d->n ? d->digit[i] : '0');
	}
}

static void put_plain(struct writer *w, const struct decimal *d, int decimals)
{
	if (d->negative)
		put(w, '-');
	put_places(w, d, d->point > 0 ? -d->point : -1, 0);
	if (decimals > 0) {
		put(w, '.');
		put_places(w, d, 0, decimals);
	}
}

static void put_with_exponent(struct writer *w, const struct decimal *d)
{
	if (d->negative)
		put(w, '-');
	put(w, d->digit[0]);
	if (d->n > 1)
		put(w, '.');
	for (int i = 1; i < d->n; i++)
		put(w, d->digit[i]);
	char tail[24];
	snprintf(tail, sizeof tail, "e%ld", d->point - 1);
	for (const char *c = tail; *c; c++)
		put(w, *c);
}

void number_text(double value, char out[NUMBER_TEXT_MAX])
{
	struct writer w = {.out = out, .room = NUMBER_TEXT_MAX};
	out[0] = '\0';
	if (!isfinite(value))
		return;
	struct decimal d;
	decimal_shortest(value, &d);
	if (d.n > 0 && (d.point < -4 || d.point > 17))
		put_with_exponent(&w, &d);
	else
		put_plain(&w, &d, d.n > d.point ? (int)(d.n - d.point) : 0);
}

/* Half away from zero at `decimals` places behind the point. */
static void decimal_round(struct decimal *d, int decimals)
{
	long keep = d->point + decimals;
	if (keep >= d->n)
		return;
	bool up = keep >= 0 && d->digit[keep] >= '5';
	d->n = keep > 0 ? (int)keep : 0;
	while (d->n > 0 && d->digit[d->n - 1] == (up ? '9' : '0'))
		d->n--;
	if (up && d->n > 0) {
		d->digit[d->n - 1]++;
	} else if (up) { /* all nines, or the first digit kept is this 1 */
		d->point = keep > 0 ? d->point + 1 : 1 - decimals;
		d->digit[0] = '1';
		d->n = 1;
	}
}

void number_text_fixed(double value, int decimals, char out[NUMBER_TEXT_MAX])
{
	struct writer w = {.out = out, .room = NUMBER_TEXT_MAX};
	out[0] = '\0';
	if (!isfinite(value))
		return;
	int places = decimals < 0 ? 0 : decimals > 17 ? 17 : decimals;
	struct decimal d;
	decimal_shortest(value, &d);
	decimal_round(&d, places);
	if (d.n == 0) {
		d.negative = false;
		d.point = 0;
	}
	/* sign, point and the end take three */
	if ((d.point > 0 ? d.point : 1) + places > NUMBER_TEXT_MAX - 3)
		number_text(value, out);
	else
		put_plain(&w, &d, places);
}

void number_text_jd2(struct jd2 jd, int decimals, char out[NUMBER_TEXT_MAX])
{
	out[0] = '\0';
	if (!isfinite(jd.day) || !isfinite(jd.frac))
		return;
	int places = decimals < 0 ? 0 : decimals > 12 ? 12 : decimals;
	double day = floor(jd.day), frac = jd.frac + (jd.day - day);
	double carry = floor(frac);
	day += carry;
	frac -= carry;
	bool negative = day < 0.0;
	if (negative) { /* -0.3 is held as -1 + 0.7 */
		day = frac > 0.0 ? -day - 1.0 : -day;
		frac = frac > 0.0 ? 1.0 - frac : 0.0;
	}
	char part[NUMBER_TEXT_MAX];
	number_text_fixed(frac, places, part);
	if (part[0] == '1')
		day += 1.0;
	bool zero = day == 0.0 && strspn(part + 1, ".0") == strlen(part + 1);
	/* above 15 digits a whole part is no date; the text is cut, never overrun */
	snprintf(out, NUMBER_TEXT_MAX, "%s%.0f%s", negative && !zero ? "-" : "", day, part + 1);
}
