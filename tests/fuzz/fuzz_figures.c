/* SPDX-License-Identifier: MIT
 * Numbers, Julian dates, angles, UTC and calendar dates: what is taken is in range and finite, and its own
 * text reads back equal. */
#include "ephem/angle_text.h"
#include "ephem/number_text.h"
#include "ephem/standard.h"
#include "ephem/timescale.h"

#include "tests/fuzz/property.h"

#include <math.h>
#include <stdbool.h>
#include <string.h>

static void number(const char *s, size_t n)
{
	double value, again;
	size_t bad_at = n + 1;
	struct err e = {.status = ST_OK};
	if (number_parse(s, n, &value, &bad_at, &e) != ST_OK) {
		property(e.text[0] != '\0' && !strchr(e.text, '\n'));
		return;
	}
	char text[NUMBER_TEXT_MAX];
	property(isfinite(value));
	number_text(value, text);
	property(number_parse(text, strlen(text), &again, NULL, &e) == ST_OK && again == value);
	if (fabs(value) < 1e9) {
		number_text_fixed(value, 6, text);
		property(number_parse(text, strlen(text), &again, NULL, &e) == ST_OK &&
			 fabs(again - value) <= 6e-7);
		property(strcmp(text, "-0.000000") != 0);
	}
}

static void julian_date(const char *s, size_t n)
{
	struct jd2 jd, again;
	struct err e = {.status = ST_OK};
	if (number_parse_jd2(s, n, &jd, NULL, &e) != ST_OK) {
		property(e.text[0] != '\0');
		return;
	}
	property(isfinite(jd.day) && jd.frac >= 0.0 && jd.frac < 1.0);
	if (fabs(jd.day) > 1e8)
		return;
	char text[NUMBER_TEXT_MAX];
	number_text_jd2(jd, 12, text);
	property(number_parse_jd2(text, strlen(text), &again, NULL, &e) == ST_OK);
	property(fabs(jd2_diff_d(jd, again)) <= 6e-13);
}

static void angles(const char *s, size_t n)
{
	double deg, again;
	struct err e = {.status = ST_OK};
	char text[ANGLE_TEXT_MAX];
	if (ra_parse(s, n, &deg, &e) == ST_OK) {
		property(deg >= 0.0 && deg < 360.0);
		ra_text(deg, 4, text);
		property(ra_parse(text, strlen(text), &again, &e) == ST_OK);
		double off = fabs(again - deg); /* 1e-4 s of time is 1.5 milliarcsec */
		property(fmin(off, 360.0 - off) <= 0.51 * 15e-4 / 3600.0);
	}
	if (dec_parse(s, n, &deg, &e) == ST_OK) {
		property(deg >= -90.0 && deg <= 90.0);
		dec_text(deg, 3, text);
		property(dec_parse(text, strlen(text), &again, &e) == ST_OK);
		property(fabs(again - deg) <= 0.51e-3 / 3600.0);
	}
}

static void dates(const char *s)
{
	struct utc t, again;
	struct date d;
	struct err e = {.status = ST_OK};
	int32_t mjd;
	if (utc_parse(&leap_builtin, s, &t, &e) == ST_OK) {
		char text[UTC_TEXT_MAX];
		property(t.sod_s >= 0.0 && t.sod_s < leap_day_length_s(&leap_builtin, t.mjd));
		utc_text(&leap_builtin, t, 6, text);
		property(utc_parse(&leap_builtin, text, &again, &e) == ST_OK);
		property(fabs(utc_diff_s(&leap_builtin, t, again)) <= 0.51e-6);
	}
	if (date_parse(s, &d, &e) == ST_OK) {
		property(date_to_mjd(d, &mjd, &e) == ST_OK);
		struct date back = date_from_mjd(mjd);
		property(back.year == d.year && back.month == d.month && back.day == d.day);
		property(weekday_from_mjd(mjd) >= 0 && weekday_from_mjd(mjd) <= 6);
	}
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
	char *s = exact_copy(data, size);
	if (s) { /* without an end sign: lengths must be kept to */
		number(s, size);
		julian_date(s, size);
		angles(s, size);
	}
	free(s);
	char *line = malloc(size + 1);
	property(line != NULL);
	if (size > 0)
		memcpy(line, data, size);
	line[size] = '\0';
	dates(line);
	free(line);
	return 0;
}
