/* SPDX-License-Identifier: MIT
 * What is written reads back: numbers to the bit, dates to 1e-12 d, angles to their last place, times to a
 * microsecond. */
#include "ephem/angle_text.h"
#include "ephem/number_text.h"
#include "ephem/timescale.h"
#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static void numbers(void **state)
{
	(void)state;
	struct rng r = rng_open("numbers");
	for (int i = 0; i < 60000; i++) {
		/* any bits at all, and everyday numbers with few digits */
		uint64_t bits = (uint64_t)(rng_unit(&r) * 0x1p32) << 32 | (uint64_t)(rng_unit(&r) * 0x1p32);
		double v, back;
		memcpy(&v, &bits, sizeof v);
		if (i % 2)
			v = floor(rng_between(&r, -1e7, 1e7)) / pow(10.0, floor(rng_between(&r, 0.0, 9.0)));
		if (!isfinite(v) || (v != 0.0 && fabs(v) < 2.2250738585072014e-308))
			continue;
		char text[NUMBER_TEXT_MAX];
		struct err e;
		number_text(v, text);
		if (number_parse(text, strlen(text), &back, NULL, &e) != ST_OK)
			check_fail("%.17g as \"%s\": %s", v, text, e.text);
		if (memcmp(&v, &back, sizeof v) != 0)
			check_fail("%.17g as \"%s\" reads %.17g", v, text, back);
		/* no shorter text reads back the same */
		char shorter[64];
		for (int digits = 1; digits < 17; digits++) {
			snprintf(shorter, sizeof shorter, "%.*e", digits - 1, v);
			if (strtod(shorter, NULL) != v)
				continue;
			int n = 0;
			char all[NUMBER_TEXT_MAX];
			for (const char *c = text; *c && *c != 'e'; c++)
				if (*c >= '0' && *c <= '9')
					all[n++] = *c;
			int first = 0;
			while (first < n - 1 && all[first] == '0')
				first++;
			while (n - 1 > first && all[n - 1] == '0')
				n--;
			assert_true(n - first <= digits);
			break;
		}
	}
}

/* Fixed decimals against exact decimal arithmetic on integers: v = k / 10^m, so k is what is to be rounded.
 */
static void fixed(void **state)
{
	(void)state;
	struct rng r = rng_open("fixed decimals");
	for (int i = 0; i < 100000; i++) {
		int m = (int)rng_between(&r, 0.0, 9.0), decimals = (int)rng_between(&r, 0.0, m + 1.0);
		if (decimals > 9) /* never; the compiler wants to see it */
			decimals = 9;
		long long k = (long long)rng_between(&r, -1e9, 1e9), unit = 1, scale = 1;
		for (int j = 0; j < m; j++)
			scale *= 10;
		for (int j = decimals; j < m; j++)
			unit *= 10;
		char number[40], got[NUMBER_TEXT_MAX], want[80];
		snprintf(number, sizeof number, "%llde-%d", k, m);
		number_text_fixed(strtod(number, NULL), decimals, got);
		long long size = k < 0 ? -k : k, rounded = (2 * size + unit) / (2 * unit),
			  last = scale / unit;
		const char *sign = k < 0 && rounded > 0 ? "-" : "";
		if (decimals > 0)
			snprintf(want, sizeof want, "%s%lld.%0*lld", sign, rounded / last, decimals,
				 rounded % last);
		else
			snprintf(want, sizeof want, "%s%lld", sign, rounded);
		if (strcmp(got, want) != 0)
			check_fail("%s with %d decimals: got %s, want %s", number, decimals, got, want);
	}
}

static void dates(void **state)
{
	(void)state;
	struct rng r = rng_open("dates");
	for (int i = 0; i < 100000; i++) {
		struct jd2 jd = {floor(rng_between(&r, 2415020.0, 2488434.0)) + (i % 2 ? 0.5 : 0.0),
				 rng_unit(&r)},
			   back;
		int decimals = (int)rng_between(&r, 0.0, 13.0);
		char text[NUMBER_TEXT_MAX], again[NUMBER_TEXT_MAX];
		number_text_jd2(jd, decimals, text);
		assert_int_equal(number_parse_jd2(text, strlen(text), &back, NULL, NULL), ST_OK);
		check_close("date", jd2_diff_d(back, jd), 0.0, 0.5 * pow(10.0, -decimals) + 1e-15);
		number_text_jd2(back, decimals, again);
		assert_string_equal(again, text);
	}
}

static void angles(void **state)
{
	(void)state;
	struct rng r = rng_open("angles");
	for (int i = 0; i < 100000; i++) {
		int decimals = (int)rng_between(&r, 0.0, 6.0);
		double unit_s = pow(10.0, -decimals), back;
		char text[ANGLE_TEXT_MAX];
		struct err e;
		double ra = rng_between(&r, 0.0, 360.0), dec = rng_between(&r, -90.0, 90.0);
		ra_text(ra, decimals, text);
		if (ra_parse(text, strlen(text), &back, &e) != ST_OK)
			check_fail("%s: %s", text, e.text);
		check_close("RA [s]", remainder(back - ra, 360.0) * 240.0, 0.0, 0.5 * unit_s + 1e-9);
		dec_text(dec, decimals, text);
		if (dec_parse(text, strlen(text), &back, &e) != ST_OK)
			check_fail("%s: %s", text, e.text);
		check_close("Dec [arcsec]", (back - dec) * 3600.0, 0.0, 0.5 * unit_s + 1e-9);
	}
}

static void times(void **state)
{
	(void)state;
	struct rng r = rng_open("times");
	for (int i = 0; i < 100000; i++) {
		struct utc t = {(int32_t)rng_between(&r, 15020.0, 88433.0), rng_between(&r, 0.0, 86400.0)},
			   back;
		if (i % 50 == 0) /* inside a leap second */
			t = (struct utc){57753, rng_between(&r, 86399.0, 86401.0)};
		int decimals = (int)rng_between(&r, 0.0, 7.0);
		char text[UTC_TEXT_MAX], again[UTC_TEXT_MAX];
		struct err e;
		utc_text(&leap_builtin, t, decimals, text);
		if (utc_parse(&leap_builtin, text, &back, &e) != ST_OK)
			check_fail("%s: %s", text, e.text);
		/* before 1972 a UTC day may end with a step, which is no rounding */
		double off = t.mjd >= 41317 ? utc_diff_s(&leap_builtin, t, back)
					    : (back.mjd - t.mjd) * DAY_S + (back.sod_s - t.sod_s);
		check_close(text, off, 0.0, 0.5 * pow(10.0, -decimals) + 1e-9);
		utc_text(&leap_builtin, back, decimals, again);
		assert_string_equal(again, text);
		/* as a Julian date in two parts, there and back to 1e-9 s */
		back = utc_from_jd(&leap_builtin, utc_to_jd(&leap_builtin, t));
		check_close("JD_UTC", (back.mjd - t.mjd) * DAY_S + back.sod_s - t.sod_s, 0.0, 1e-9);
	}
}

/* Any bytes whatever: an answer, never a crash, and the error text is one printable line. */
static void any_bytes(void **state)
{
	(void)state;
	static const char alphabet[] = "0123456789.-+eE :hmsdZT_nainf,\t\xE2\x88\x92\xC2\xA0\x1b\"'";
	struct rng r = rng_open("any bytes");
	for (int i = 0; i < 60000; i++) {
		size_t n = (size_t)rng_between(&r, 0.0, 24.0);
		char *text = malloc(n + 1); /* exact size: address checking sees a byte too many */
		assert_non_null(text);
		for (size_t k = 0; k < n; k++)
			text[k] = alphabet[(size_t)rng_between(&r, 0.0, sizeof alphabet - 1.0)];
		text[n] = '\0';
		char *block = malloc(n ? n : 1);
		assert_non_null(block);
		memcpy(block, text, n);
		double v;
		struct jd2 jd;
		size_t bad = 0;
		struct err e;
		struct utc t;
		struct date d;
		err_clear(&e);
		if (number_parse(block, n, &v, &bad, &e) == ST_OK)
			assert_true(isfinite(v));
		else
			assert_true(bad <= n && e.text[0] != '\0');
		for (const char *c = e.text; *c; c++)
			assert_true((unsigned char)*c >= 0x20 && *c != 0x7F);
		if (number_parse_jd2(block, n, &jd, &bad, &e) == ST_OK)
			assert_true(jd.frac >= 0.0 && jd.frac < 1.0);
		if (ra_parse(block, n, &v, &e) == ST_OK)
			assert_true(v >= 0.0 && v < 360.0);
		if (dec_parse(block, n, &v, &e) == ST_OK)
			assert_true(v >= -90.0 && v <= 90.0);
		for (const char *c = e.text; *c; c++)
			assert_true((unsigned char)*c >= 0x20 && *c != 0x7F);
		if (utc_parse(&leap_builtin, text, &t, &e) == ST_OK)
			assert_true(t.sod_s >= 0.0 && t.sod_s < 86401.0);
		if (date_parse(text, &d, &e) == ST_OK)
			assert_true(d.month >= 1 && d.month <= 12);
		free(block);
		free(text);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(numbers), cmocka_unit_test(fixed), cmocka_unit_test(dates),
	    cmocka_unit_test(angles),  cmocka_unit_test(times), cmocka_unit_test(any_bytes),
	};
	return cmocka_run_group_tests_name("text_round", tests, NULL, NULL);
}
