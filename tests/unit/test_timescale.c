/* SPDX-License-Identifier: MIT
 * Time scales, calendar and their text. Leap seconds: IERS Bulletin C; day numbers: Meeus 1998, Astronomical
 * Algorithms, chapter 7. */
#include "ephem/timescale.h"

#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>
#include <string.h>

static const struct leap_table *const table = &leap_builtin;

static struct utc at(const char *text)
{
	struct utc t;
	struct err e;
	if (utc_parse(table, text, &t, &e) != ST_OK)
		check_fail("%s: %s", text, e.text);
	return t;
}

static void two_parts(void **state)
{
	(void)state;
	static const struct {
		double day, frac, want_day, want_frac;
	} rows[] = {
	    {2450000.0, 0.25, 2450000.0, 0.25},
	    {2450000.5, 0.25, 2450000.5, 0.25},
	    {2450000.5, 1.25, 2450001.5, 0.25},
	    {2450000.0, -0.25, 2449999.0, 0.75},
	    {2450000.4, 0.0, 2449999.5, 0.9},
	    {2450000.25, 0.5, 2450000.5, 0.25},
	    {2450000.0, -1e-20, 2450000.0, 0.0},
	    {2450000.0, 1.0, 2450001.0, 0.0},
	    {-0.3, 0.0, -0.5, 0.2},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		struct jd2 j = jd2_normal(rows[i].day, rows[i].frac);
		check_close("day", j.day, rows[i].want_day, 0.0);
		check_close("fraction", j.frac, rows[i].want_frac, 2e-10); /* of the day given, 2450000.4 */
		assert_true(j.frac >= 0.0 && j.frac < 1.0);
	}
	struct jd2 a = {2488000.5, 0.123456789012}, b = {2415020.5, 0.9};
	check_close("a century", jd2_diff_d(a, b), 72979.223456789012, 2e-11);
	check_close("and back", jd2_diff_d(jd2_add_d(b, jd2_diff_d(a, b)), a), 0.0, 2e-11);
	struct jd2 c = jd2_add_d(a, -2400000.5);
	check_close("offset taken off", jd2_diff_d(c, (struct jd2){88000.0, 0.123456789012}), 0.0, 1e-15);
	check_close("one double", jd2_value(a), 2488000.623456789, 5e-10);
}

static void calendar(void **state)
{
	(void)state;
	static const struct {
		struct date d;
		int32_t mjd;
		int weekday;
	} rows[] = {
	    {{1858, 11, 17}, 0, 2},    /* definition of the MJD, a Wednesday */
	    {{2000, 1, 1}, 51544, 5},  /* J2000.0 = JD 2451545.0, a Saturday */
	    {{1957, 10, 4}, 36115, 4}, /* Meeus 1998, example 7.a: JD 2436116.31 at day 4.81, a Friday */
	    {{1600, 1, 1}, -94553, 5}, /* Meeus 1998, chapter 7: JD 2305447.5 */
	    {{1987, 6, 19}, 46965, 4}, /* Meeus 1998, chapter 7: JD 2446966.0 at day 19.5 */
	    {{1900, 1, 1}, 15020, 0},  /* Meeus 1998, chapter 7: JD 2415020.5 */
	    {{2100, 12, 31}, 88433, 4}, {{2000, 2, 29}, 51603, 1},   {{2016, 12, 31}, 57753, 5},
	    {{2026, 12, 1}, 61375, 1},	{{2500, 12, 31}, 234530, 4},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		int32_t mjd;
		struct err e;
		assert_int_equal(date_to_mjd(rows[i].d, &mjd, &e), ST_OK);
		assert_int_equal(mjd, rows[i].mjd);
		assert_int_equal(weekday_from_mjd(mjd), rows[i].weekday);
		struct date d = date_from_mjd(mjd);
		assert_int_equal(d.year, rows[i].d.year);
		assert_int_equal(d.month, rows[i].d.month);
		assert_int_equal(d.day, rows[i].d.day);
	}
	static const struct date none[] = {{2026, 2, 30}, {2026, 2, 29},  {2100, 2, 29}, {1900, 2, 29},
					   {2026, 4, 31}, {2026, 13, 1},  {2026, 0, 1},	 {2026, 1, 0},
					   {2026, 1, 32}, {1599, 12, 31}, {2501, 1, 1},	 {0, 0, 0}};
	for (size_t i = 0; i < sizeof none / sizeof *none; i++) {
		int32_t mjd = -7;
		struct err e;
		assert_int_equal(date_to_mjd(none[i], &mjd, &e), ST_RANGE);
		assert_int_equal(mjd, -7);
	}
	/* every day of nine centuries follows the one before */
	struct date before = date_from_mjd(-94554);
	for (int32_t mjd = -94553; mjd <= 234530; mjd++) {
		struct date d = date_from_mjd(mjd);
		int32_t back;
		assert_int_equal(date_to_mjd(d, &back, NULL), ST_OK);
		assert_int_equal(back, mjd);
		bool next = (d.day == before.day + 1 && d.month == before.month && d.year == before.year) ||
			    (d.day == 1 && d.month == before.month + 1 && d.year == before.year) ||
			    (d.day == 1 && d.month == 1 && d.year == before.year + 1);
		assert_true(next);
		before = d;
	}
}

static void leap_second_of_2016(void **state)
{
	(void)state;
	/* TT - 2457754.5 [s] and the UTC that is meant: TAI-UTC 36 s before, 37 s after (IERS Bulletin C 52)
	 */
	static const struct {
		double tt_s;
		const char *utc;
	} rows[] = {
	    {67.184, "2016-12-31T23:59:59.000Z"}, {68.184, "2016-12-31T23:59:60.000Z"},
	    {68.684, "2016-12-31T23:59:60.500Z"}, {69.183, "2016-12-31T23:59:60.999Z"},
	    {69.184, "2017-01-01T00:00:00.000Z"}, {70.184, "2017-01-01T00:00:01.000Z"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		struct tt t = {jd2_normal(2457754.5, rows[i].tt_s / DAY_S)};
		char text[UTC_TEXT_MAX];
		utc_text(table, tt_to_utc(table, t), 3, text);
		assert_string_equal(text, rows[i].utc);
		check_close(rows[i].utc, jd2_diff_d(utc_to_tt(table, at(rows[i].utc)).jd, t.jd) * DAY_S, 0.0,
			    1e-10);
	}
	check_close("day of 2016-12-31", leap_day_length_s(table, 57753), 86401.0, 0.0);
	check_close("day of 2017-01-01", leap_day_length_s(table, 57754), 86400.0, 0.0);
	check_close("difference across",
		    utc_diff_s(table, at("2016-12-31T23:59:59Z"), at("2017-01-01T00:00:01Z")), 3.0, 1e-9);
	char text[UTC_TEXT_MAX];
	utc_text(table, utc_add_s(table, at("2016-12-31T12:00:00Z"), 86400.0), 0, text);
	assert_string_equal(text, "2017-01-01T11:59:59Z");
	/* a leap day as a number is stretched (IAU SOFA, "quasi-JD"): 23:59:60.0 is 86400/86401 of the day */
	struct jd2 jd = utc_to_jd(table, at("2016-12-31T23:59:60Z"));
	check_close("quasi-JD", jd2_diff_d(jd, (struct jd2){2457753.5, 86400.0 / 86401.0}), 0.0, 1e-15);
	struct utc back = utc_from_jd(table, jd);
	assert_int_equal(back.mjd, 57753);
	check_close("second of day", back.sod_s, 86400.0, 1e-9);
}

static void rounding_carries(void **state)
{
	(void)state;
	static const struct {
		struct utc t;
		int decimals;
		const char *text;
	} rows[] = {
	    {{61114, 86399.96}, 1, "2026-03-16T00:00:00.0Z"},
	    {{61114, 86399.94}, 1, "2026-03-15T23:59:59.9Z"},
	    {{61114, 86399.5}, 0, "2026-03-16T00:00:00Z"},
	    {{61114, 86399.4999}, 0, "2026-03-15T23:59:59Z"},
	    {{57753, 86399.96}, 1, "2016-12-31T23:59:60.0Z"},
	    {{57753, 86400.5}, 1, "2016-12-31T23:59:60.5Z"},
	    {{57753, 86400.5}, 0, "2017-01-01T00:00:00Z"},
	    {{57753, 86400.4}, 0, "2016-12-31T23:59:60Z"},
	    {{57753, 86400.96}, 1, "2017-01-01T00:00:00.0Z"},
	    {{61114, 3599.9996}, 3, "2026-03-15T01:00:00.000Z"},
	    {{61114, 0.0}, 0, "2026-03-15T00:00:00Z"},
	    {{61114, 18000.0}, 6, "2026-03-15T05:00:00.000000Z"},
	    {{61375, 86399.9999996}, 6, "2026-12-02T00:00:00.000000Z"},
	    {{61405, 86399.7}, 0, "2027-01-01T00:00:00Z"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		char text[UTC_TEXT_MAX];
		struct utc t = rows[i].t;
		if (i == 13)
			t.mjd = 61405; /* 2026-12-31 */
		utc_text(table, t, rows[i].decimals, text);
		assert_string_equal(text, rows[i].text);
		/* what is printed is what utc_rounded gives */
		struct utc r = utc_rounded(table, t, rows[i].decimals), p = at(text);
		assert_int_equal(r.mjd, p.mjd);
		check_close("rounded", r.sod_s, p.sod_s, 1e-9);
	}
	char text[UTC_TEXT_MAX];
	utc_text(table, (struct utc){61114, (double)NAN}, 3, text);
	assert_string_equal(text, "");
}

static void text_read(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		int32_t mjd;
		double sod_s;
	} good[] = {
	    {"2026-03-15T05:00:00Z", 61114, 18000.0},
	    {"2026-03-15 05:00:00", 61114, 18000.0},
	    {"2026-03-15T05:00", 61114, 18000.0},
	    {"2026-03-15T05:00Z", 61114, 18000.0},
	    {"2026-03-15T23:59:59.999Z", 61114, 86399.999},
	    {"2016-12-31T23:59:60.25Z", 57753, 86400.25},
	    {"1600-01-01T00:00:00.0Z", -94553, 0.0},
	    {"2026-03-15T05:00:00.1234567890123456Z", 61114, 18000.123456789012},
	};
	for (size_t i = 0; i < sizeof good / sizeof *good; i++) {
		struct utc t = at(good[i].text);
		assert_int_equal(t.mjd, good[i].mjd);
		check_close(good[i].text, t.sod_s, good[i].sod_s, 1e-11);
	}
	static const struct {
		const char *text;
		enum status status;
	} bad[] = {
	    {"", ST_SYNTAX},
	    {"2026-03-15", ST_SYNTAX},
	    {"26-3-1T00:00", ST_SYNTAX},
	    {"03/04/2026 00:00", ST_SYNTAX},
	    {"2026-03-15T5:00", ST_SYNTAX},
	    {"2026-03-15T05", ST_SYNTAX},
	    {"2026-03-15T05:00:", ST_SYNTAX},
	    {"2026-03-15T05:00:00.", ST_SYNTAX},
	    {"2026-03-15T05:00:00.Z", ST_SYNTAX},
	    {"2026-03-15T05:00:00ZZ", ST_SYNTAX},
	    {"2026-03-15T05:00:00+01:00", ST_SYNTAX},
	    {"2026-03-15T05:00:00 Z", ST_SYNTAX},
	    {" 2026-03-15T05:00:00Z", ST_SYNTAX},
	    {"2026-03-15X05:00:00Z", ST_SYNTAX},
	    {"2026-03-15T05:00:00L", ST_SYNTAX},
	    {"2026-02-30T00:00Z", ST_RANGE},
	    {"2026-13-01T00:00Z", ST_RANGE},
	    {"1599-12-31T00:00Z", ST_RANGE},
	    {"9999-01-01T00:00Z", ST_RANGE},
	    {"2026-03-15T24:00:00Z", ST_RANGE},
	    {"2026-03-15T25:61:75Z", ST_RANGE},
	    {"2026-03-15T05:60:00Z", ST_RANGE},
	    {"2026-03-15T05:00:61Z", ST_RANGE},
	    {"2026-03-15T23:59:60Z", ST_RANGE},
	    {"2016-12-31T23:58:60Z", ST_RANGE},
	    {"2016-12-31T22:59:60Z", ST_RANGE},
	    {"2017-12-31T23:59:60Z", ST_RANGE},
	};
	for (size_t i = 0; i < sizeof bad / sizeof *bad; i++) {
		struct utc t = {-7, -7.0};
		struct err e;
		enum status s = utc_parse(table, bad[i].text, &t, &e);
		if (s != bad[i].status)
			check_fail("\"%s\": status %d, want %d", bad[i].text, (int)s, (int)bad[i].status);
		assert_int_equal(t.mjd, -7);
		assert_true(strlen(e.text) > 0);
	}
	struct date d;
	assert_int_equal(date_parse("2026-03-15", &d, NULL), ST_OK);
	assert_int_equal(d.year * 10000 + d.month * 100 + d.day, 20260315);
	static const char *const no_date[] = {"2026-3-15", "26-03-15",	 "2026-03-15T", "2026-02-30",
					      "",	   "2026/03/15", "2026-03-1 "};
	for (size_t i = 0; i < sizeof no_date / sizeof *no_date; i++)
		assert_int_not_equal(date_parse(no_date[i], &d, NULL), ST_OK);
}

static void table_extended(void **state)
{
	(void)state;
	struct leap_table t = leap_builtin;
	struct err e;
	assert_int_equal(t.row[t.n - 1].mjd, 57754);
	assert_int_equal(leap_extend(&t, 57754, 38.0, &e), ST_RANGE); /* not after the last */
	assert_int_equal(leap_extend(&t, 57000, 38.0, &e), ST_RANGE);
	assert_int_equal(leap_extend(&t, 61587, 39.0, &e), ST_RANGE); /* two seconds */
	assert_int_equal(leap_extend(&t, 61587, 37.0, &e), ST_RANGE);
	assert_int_equal(leap_extend(&t, 61587, (double)NAN, &e), ST_RANGE);
	assert_int_equal(t.n, leap_builtin.n);
	assert_int_equal(leap_extend(&t, 61587, 38.0, &e), ST_OK);
	assert_int_equal(t.expires_mjd, 61587 + 180);
	check_close("the new leap second", leap_day_length_s(&t, 61586), 86401.0, 0.0);
	check_close("TAI-UTC before", leap_tai_minus_utc_s(&t, (struct utc){61586, 86400.5}), 37.0, 0.0);
	check_close("TAI-UTC after", leap_tai_minus_utc_s(&t, (struct utc){61587, 0.0}), 38.0, 0.0);
	struct utc back = tt_to_utc(&t, utc_to_tt(&t, (struct utc){61586, 86400.5}));
	assert_int_equal(back.mjd, 61586);
	check_close("leap second there and back", back.sod_s, 86400.5, 1e-9);
	/* one taken away, which has never happened: a day of 86399 s */
	assert_int_equal(leap_extend(&t, 61950, 37.0, &e), ST_OK);
	check_close("a second less", leap_day_length_s(&t, 61949), 86399.0, 0.0);
	while (t.n < LEAP_ROWS_MAX)
		assert_int_equal(
		    leap_extend(&t, t.row[t.n - 1].mjd + 1, t.row[t.n - 1].tai_minus_utc_s + 1.0, &e), ST_OK);
	assert_int_equal(leap_extend(&t, 80000, t.row[t.n - 1].tai_minus_utc_s + 1.0, &e), ST_RANGE);
}

static void far_dates(void **state)
{
	(void)state;
	check_close("before 1960", leap_tai_minus_utc_s(table, (struct utc){30000, 0.0}),
		    leap_tai_minus_utc_s(table, (struct utc){36934, 0.0}), 1e-12);
	/* no loop and no overflow, whatever comes */
	static const double days[] = {-1e300, -1e10, 0.0, 1e10, 1e300, (double)INFINITY, (double)NAN};
	for (size_t i = 0; i < sizeof days / sizeof *days; i++) {
		(void)tt_to_utc(table, (struct tt){{days[i], 0.0}});
		(void)utc_from_jd(table, (struct jd2){days[i], 0.0});
	}
	(void)date_from_mjd(INT32_MAX);
	(void)date_from_mjd(INT32_MIN);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(two_parts),	   cmocka_unit_test(calendar),
	    cmocka_unit_test(leap_second_of_2016), cmocka_unit_test(rounding_carries),
	    cmocka_unit_test(text_read),	   cmocka_unit_test(table_extended),
	    cmocka_unit_test(far_dates),
	};
	return cmocka_run_group_tests_name("timescale", tests, NULL, NULL);
}
