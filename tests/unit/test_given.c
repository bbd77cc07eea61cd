/* SPDX-License-Identifier: MIT */
#include "tui/given.h"

#include "tests/support/check.h"

#include <math.h>
#include <string.h>

static void times_as_they_are_given(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		int32_t mjd;
		double sod_s, tolerance_s;
	} rows[] = {
	    /* MJD 61153 is 2026-04-23: by hand from MJD 51544 = 2000-01-01 (IERS Conventions, from memory) */
	    {"2026-04-23T02:40:00Z", 61153, 9600.0, 1e-9},
	    {"2026-04-23T02:40", 61153, 9600.0, 1e-9},
	    {"2026-04-23 02:40:30.25Z", 61153, 9630.25, 1e-9},
	    {"2461153.75 JD_UTC", 61153, 21600.0, 1e-6},
	    {"61153.25 MJD_UTC", 61153, 21600.0, 1e-6},
	    {"2461153.75 JD_TT", 61153, 21600.0 - 69.184, 1e-6},  /* TT - UTC = 32.184 + 37 s */
	    {"2461153.75 jd_tdb", 61153, 21600.0 - 69.184, 2e-3}, /* TDB - TT below 1.7 ms */
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct utc t;
		struct err e;
		if (given_time(&leap_builtin, rows[i].text, &t, &e) != ST_OK)
			check_fail("%s: %s", rows[i].text, e.text);
		assert_int_equal(t.mjd, rows[i].mjd);
		check_close(rows[i].text, t.sod_s, rows[i].sod_s, rows[i].tolerance_s);
	}
}

static void wrong_times_are_refused(void **state)
{
	(void)state;
	static const char *const rows[] = {"2026-02-30",
					   "2026-02-30T00:00Z",
					   "2100-02-29",
					   "1899-12-31",
					   "2101-01-01",
					   "26-3-1",
					   "03/04/2026",
					   "",
					   "2461153.75",
					   "2461153.75 BJD_TDB",
					   "2026-04-23",
					   "2461153.75 JD",
					   "2461153.75 UTC",
					   "1e9 JD_UTC",
					   "-5 JD_UTC",
					   "2026-04-23T25:00Z",
					   "2026-04-23T23:59:60Z",
					   "2026-04-23T02:40X",
					   "nan JD_UTC"};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct utc t;
		struct err e;
		if (given_time(&leap_builtin, rows[i], &t, &e) == ST_OK)
			check_fail("taken: \"%s\"", rows[i]);
		assert_true(e.text[0] != '\0');
	}
}

static void nights_contain_their_instants(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		double lon_deg;
		int32_t mjd;
	} rows[] = {
	    {"2026-04-22", -109.36, 61152},
	    /* local mean noon at 109.36 W is 19:17:26 UTC */
	    {"2026-04-23T19:17:20Z", -109.36, 61152},
	    {"2026-04-23T19:17:30Z", -109.36, 61153},
	    {"2026-04-23T11:59:59Z", 0.0, 61152},
	    {"2026-04-23T12:00:01Z", 0.0, 61153},
	    {"2461153.75 JD_UTC", 0.0, 61152},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		int32_t mjd;
		struct err e;
		if (given_night(&leap_builtin, rows[i].lon_deg, rows[i].text, &mjd, &e) != ST_OK)
			check_fail("%s: %s", rows[i].text, e.text);
		assert_int_equal(mjd, rows[i].mjd);
	}
}

static void a_running_clock_ends_in_plus(void **state)
{
	(void)state;
	struct utc t;
	struct err e;
	bool running = false;
	assert_int_equal(given_now(&leap_builtin, "2026-04-23T02:40Z+", &t, &running, &e), ST_OK);
	assert_true(running);
	assert_int_equal(given_now(&leap_builtin, "2461153.75 JD_UTC", &t, &running, &e), ST_OK);
	assert_false(running);
}

static void places(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		double lat, lon, height;
	} rows[] = {
	    {"38.62,-109.36,2100", 38.62, -109.36, 2100.0}, {"38.62N,109.36W,2100m", 38.62, -109.36, 2100.0},
	    {"30.5 S, 70.8 w, 2200", -30.5, -70.8, 2200.0}, {"-90,180,-450", -90.0, 180.0, -450.0},
	    {"90,250.64,9000", 90.0, -109.36, 9000.0},	    {"0,0,0", 0.0, 0.0, 0.0},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct site s = {.name = "", .zone = ""};
		struct err e;
		if (given_place(rows[i].text, &s, &e) != ST_OK)
			check_fail("%s: %s", rows[i].text, e.text);
		check_close("latitude", s.lat_deg, rows[i].lat, 1e-12);
		check_close("longitude", s.lon_east_deg, rows[i].lon, 1e-12);
		check_close("height", s.height_m, rows[i].height, 0.0);
	}
	static const char *const wrong[] = {
	    "38.62",	    "38.62,-109.36", "91,0,0",	  "0,361,0",	  "0,-181,0",
	    "0,0,9001",	    "0,0,-451",	     "a,b,c",	  "1,2,3,4",	  ",,",
	    "38,-109.4W,0", "38N,+109.4W,0", "38W,109,0", "38.62;-109;2", "nan,0,0"};
	for (size_t i = 0; i < sizeof wrong / sizeof wrong[0]; i++) {
		struct site s;
		struct err e;
		if (given_place(wrong[i], &s, &e) == ST_OK)
			check_fail("taken: \"%s\"", wrong[i]);
	}
}

static void directions(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		double ra, dec;
	} rows[] = {
	    {"150,10", 150.0, 10.0},
	    {"10:00:00,-00:30:00", 150.0, -0.5},
	    {"23:59:59.9,+89:59:59", 359.99958333333333, 89.99972222222222},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		double ra, dec;
		struct err e;
		if (given_radec(rows[i].text, &ra, &dec, &e) != ST_OK)
			check_fail("%s: %s", rows[i].text, e.text);
		check_close("RA", ra, rows[i].ra, 1e-9);
		check_close("Dec", dec, rows[i].dec, 1e-9);
	}
	static const char *const wrong[] = {"150",	  "150,10,3",	"360,10", "150,91",
					    "24:00:00,0", "-1:00:00,0", ","};
	for (size_t i = 0; i < sizeof wrong / sizeof wrong[0]; i++) {
		double ra, dec;
		struct err e;
		if (given_radec(wrong[i], &ra, &dec, &e) == ST_OK)
			check_fail("taken: \"%s\"", wrong[i]);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(times_as_they_are_given),
	    cmocka_unit_test(wrong_times_are_refused),
	    cmocka_unit_test(nights_contain_their_instants),
	    cmocka_unit_test(a_running_clock_ends_in_plus),
	    cmocka_unit_test(places),
	    cmocka_unit_test(directions),
	};
	return cmocka_run_group_tests_name("given", tests, NULL, NULL);
}
