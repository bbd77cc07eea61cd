/* SPDX-License-Identifier: MIT
 * Angles as text; expected values are the sexagesimal definitions worked by hand. */
#include "ephem/angle_text.h"

#include "tests/support/check.h"

#include <math.h>
#include <string.h>

typedef enum status parse_fn(const char *text, size_t n, double *out, struct err *e);

static void good_angles(void **state)
{
	(void)state;
	static const struct {
		parse_fn *parse;
		const char *text;
		double value;
	} rows[] = {
	    {ra_parse, "0", 0.0},
	    {ra_parse, "187.5", 187.5},
	    {ra_parse, "359.999999", 359.999999},
	    {ra_parse, " 12:30:00 ", 187.5},
	    {ra_parse, "12:30:00.5", 187.5 + 0.5 / 240.0},
	    {ra_parse, "12 30 00.5", 187.5 + 0.5 / 240.0},
	    {ra_parse, "12h30m00.5s", 187.5 + 0.5 / 240.0},
	    {ra_parse, "12h 30m 00.5s", 187.5 + 0.5 / 240.0},
	    {ra_parse, "12H30M00.5", 187.5 + 0.5 / 240.0},
	    {ra_parse, "1:2:3", (3600.0 + 120.0 + 3.0) / 240.0},
	    {ra_parse, "00:00:00", 0.0},
	    {ra_parse, "23:59:59.99", 86399.99 / 240.0},
	    {dec_parse, "90", 90.0},
	    {dec_parse, "-90.0", -90.0},
	    {dec_parse, "+45.5", 45.5},
	    {dec_parse, "90:00:00", 90.0},
	    {dec_parse, "-90:00:00.0", -90.0},
	    {dec_parse, "-0:30:00", -0.5},
	    {dec_parse, "-00 00 01", -1.0 / 3600.0},
	    {dec_parse,
	     "\xE2\x88\x92"
	     "00:30:00",
	     -0.5},
	    {dec_parse, "+41d16m09s", 41.0 + 16.0 / 60.0 + 9.0 / 3600.0},
	    {dec_parse, "41:16:9.25", 41.0 + 16.0 / 60.0 + 9.25 / 3600.0},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		double v = -999.0;
		struct err e;
		if (rows[i].parse(rows[i].text, strlen(rows[i].text), &v, &e) != ST_OK)
			check_fail("\"%s\" was refused: %s", rows[i].text, e.text);
		check_close(rows[i].text, v, rows[i].value, 1e-13 * fabs(rows[i].value));
		if (rows[i].value < 0.0)
			assert_true(v < 0.0);
	}
}

static void refused_angles(void **state)
{
	(void)state;
	static const struct {
		parse_fn *parse;
		const char *text;
		enum status status;
	} rows[] = {
	    {ra_parse, "", ST_SYNTAX},
	    {ra_parse, "24:00:00", ST_RANGE},
	    {ra_parse, "360.0", ST_RANGE},
	    {ra_parse, "24:60:60", ST_RANGE},
	    {ra_parse, "12:60:00", ST_RANGE},
	    {ra_parse, "12:30:60", ST_RANGE},
	    {ra_parse, "23:59:60", ST_RANGE},
	    {ra_parse, "-1:00:00", ST_SYNTAX},
	    {ra_parse, "+1:00:00", ST_SYNTAX},
	    {ra_parse, "-10.5", ST_SYNTAX},
	    {ra_parse, "12:30", ST_SYNTAX},
	    {ra_parse, "12h30m", ST_SYNTAX},
	    {ra_parse, "12.5:30", ST_SYNTAX},
	    {ra_parse, "12.5:30:00", ST_SYNTAX},
	    {ra_parse, "12:30.5:00", ST_SYNTAX},
	    {ra_parse, "12:30 00", ST_SYNTAX},
	    {ra_parse, "12h30:00", ST_SYNTAX},
	    {ra_parse, "12:30:00:00", ST_SYNTAX},
	    {ra_parse, "12:30:00s", ST_SYNTAX},
	    {ra_parse, "12:30:", ST_SYNTAX},
	    {ra_parse, ":30:00", ST_SYNTAX},
	    {ra_parse, "123:30:00", ST_SYNTAX},
	    {ra_parse, "12:130:00", ST_SYNTAX},
	    {ra_parse, "12:30:000", ST_SYNTAX},
	    {ra_parse, "12:30:1.2.3", ST_SYNTAX},
	    {ra_parse, "12h", ST_SYNTAX},
	    {ra_parse, "187.5 deg", ST_SYNTAX},
	    {ra_parse, "nan", ST_SYNTAX},
	    {ra_parse, "12d30m00s", ST_SYNTAX},
	    {dec_parse, "90:00:00.1", ST_RANGE},
	    {dec_parse, "-90:00:01", ST_RANGE},
	    {dec_parse, "91", ST_RANGE},
	    {dec_parse, "99:00:00", ST_RANGE},
	    {dec_parse, "-90.0000001", ST_RANGE},
	    {dec_parse, "12:60:00", ST_RANGE},
	    {dec_parse, "12h30m00s", ST_SYNTAX},
	    {dec_parse, "+-12:30:00", ST_SYNTAX},
	    {dec_parse, "inf", ST_SYNTAX},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		double v = 77.0;
		struct err e;
		enum status s = rows[i].parse(rows[i].text, strlen(rows[i].text), &v, &e);
		if (s != rows[i].status)
			check_fail("\"%s\": status %d, value %.17g", rows[i].text, (int)s, v);
		check_close("untouched", v, 77.0, 0.0);
		assert_int_equal(e.status, s);
		assert_true(strlen(e.text) > 0);
	}
}

static void angles_written(void **state)
{
	(void)state;
	char out[ANGLE_TEXT_MAX];
	static const struct {
		void (*write)(double, int, char *);
		double value;
		int decimals;
		const char *text;
	} rows[] = {
	    {ra_text, 187.5, 2, "12:30:00.00"},
	    {ra_text, 0.0, 0, "00:00:00"},
	    {ra_text, 86399.999 / 240.0, 2, "00:00:00.00"},
	    {ra_text, 86399.994 / 240.0, 2, "23:59:59.99"},
	    {ra_text, 3599.96 / 240.0, 1, "01:00:00.0"},
	    {ra_text, 360.0, 1, "00:00:00.0"},
	    {ra_text, -15.0, 0, "23:00:00"},
	    {dec_text, -0.5, 1, "-00:30:00.0"},
	    {dec_text, 0.0, 1, "+00:00:00.0"},
	    {dec_text, -0.04 / 3600.0, 1, "+00:00:00.0"},
	    {dec_text, 89.99999, 1, "+90:00:00.0"},
	    {dec_text, -41.2, 0, "-41:12:00"},
	    {lat_text, 38.62, 2, "38.62 N"},
	    {lat_text, -38.625, 2, "38.63 S"},
	    {lat_text, 0.0, 1, "0.0 N"},
	    {lon_text, -109.36, 2, "109.36 W"},
	    {lon_text, 109.36, 0, "109 E"},
	    {lon_text, 180.0, 4, "180.0000 E"},
	    {lat_text, (double)NAN, 2, ""},
	    {ra_text, (double)NAN, 2, ""},
	    {dec_text, (double)NAN, 2, ""},
	    {dec_text, 100.0, 2, ""},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		rows[i].write(rows[i].value, rows[i].decimals, out);
		if (strcmp(out, rows[i].text) != 0)
			check_fail("row %zu: got \"%s\", want \"%s\"", i, out, rows[i].text);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(good_angles),
	    cmocka_unit_test(refused_angles),
	    cmocka_unit_test(angles_written),
	};
	return cmocka_run_group_tests_name("angle_text", tests, NULL, NULL);
}
