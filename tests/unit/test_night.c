/* SPDX-License-Identifier: MIT
 * Nights at the edges: which night an instant belongs to, leap seconds, polar days and nights, refusals. */
#include "ephem/night.h"

#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static struct sun_memo memo;
static const struct earth_clock clock_utc = {.leap = &leap_builtin};

static struct utc at(const char *text)
{
	struct utc t;
	struct err e;
	if (utc_parse(&leap_builtin, text, &t, &e) != ST_OK)
		check_fail("%s: %s", text, e.text);
	return t;
}

static void build(struct night *n, const struct site *site, const char *date)
{
	struct date d;
	int32_t mjd;
	struct err e;
	assert_int_equal(date_parse(date, &d, &e), ST_OK);
	assert_int_equal(date_to_mjd(d, &mjd, &e), ST_OK);
	if (night_build(n, site, &clock_utc, mjd, &memo, &e) != ST_OK)
		check_fail("%s", e.text);
}

static void which_night(void **state)
{
	(void)state;
	/* local mean noon is 12 h UTC less 4 min for each degree east */
	static const struct {
		double lon;
		const char *utc, *evening;
	} rows[] = {
	    {0.0, "2026-03-15T12:00:00Z", "2026-03-15"},
	    {0.0, "2026-03-15T11:59:59Z", "2026-03-14"},
	    {0.0, "2026-03-16T03:00:00Z", "2026-03-15"},
	    {-109.36, "2026-03-16T03:00:00Z", "2026-03-15"},
	    {-109.36, "2026-03-15T19:17:26.5Z", "2026-03-15"},
	    {-109.36, "2026-03-15T19:17:26.3Z", "2026-03-14"},
	    {150.0, "2026-03-15T02:00:00Z", "2026-03-15"},
	    {150.0, "2026-03-15T01:59:59Z", "2026-03-14"},
	    {180.0, "2026-03-15T00:00:00Z", "2026-03-15"},
	    {180.0, "2026-03-14T23:59:59Z", "2026-03-14"},
	    {-180.0, "2026-03-15T23:59:59Z", "2026-03-14"},
	    {-180.0, "2026-03-16T00:00:00Z", "2026-03-15"},
	    {-180.0, "2016-12-31T23:59:60.5Z", "2016-12-30"},
	    {-180.0, "2017-01-01T00:00:00Z", "2016-12-31"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		struct date d = date_from_mjd(night_date_of(rows[i].lon, at(rows[i].utc)));
		char text[32];
		snprintf(text, sizeof text, "%04d-%02d-%02d", d.year, d.month, d.day);
		if (strcmp(text, rows[i].evening) != 0)
			check_fail("%s at %g E is night %s, want %s", rows[i].utc, rows[i].lon, text,
				   rows[i].evening);
		/* the night's own times agree */
		struct site site = {.lat_deg = 10.0, .lon_east_deg = rows[i].lon};
		struct night n;
		build(&n, &site, text);
		double t = night_of_utc(&n, at(rows[i].utc));
		assert_true(t >= 0.0 && t < n.length_d);
	}
}

static void night_with_a_leap_second(void **state)
{
	(void)state;
	const struct site site = {.lat_deg = 38.62, .lon_east_deg = -109.36, .height_m = 2100.0};
	struct night n, plain;
	char text[UTC_TEXT_MAX];
	build(&n, &site, "2016-12-31");
	build(&plain, &site, "2016-12-30");
	check_close("length [s]", n.length_d * DAY_S, 86401.0, 1e-6);
	check_close("length of another [s]", plain.length_d * DAY_S, 86400.0, 1e-6);
	/* every instant of it, the leap second too, has one t_d and comes back */
	double before = -1.0;
	static const char *const times[] = {"2016-12-31T23:59:59.500Z", "2016-12-31T23:59:60.000Z",
					    "2016-12-31T23:59:60.500Z", "2017-01-01T00:00:00.000Z",
					    "2017-01-01T00:00:00.500Z"};
	for (size_t i = 0; i < sizeof times / sizeof *times; i++) {
		double t = night_of_utc(&n, at(times[i]));
		if (i > 0)
			check_close("half a second on", (t - before) * DAY_S, 0.5, 1e-6);
		before = t;
		utc_text(&leap_builtin, night_utc(&n, t), 3, text);
		assert_string_equal(text, times[i]);
	}
	/* the sky turns on evenly: the next night's own sidereal time at its noon */
	struct night next;
	build(&next, &site, "2017-01-01");
	/* UT1-UTC is taken as the same number before and after, so the two differ by that second, 15 arcsec
	 */
	double turned =
	    remainder(night_lst_rad(&n, n.length_d) - night_lst_rad(&next, 0.0), TWO_PI) / ARCSEC_RAD;
	check_close("sidereal time [arcsec]", turned, 15.04, 0.3);
}

static void polar(void **state)
{
	(void)state;
	struct night n;
	const struct site north = {.lat_deg = 75.0, .lon_east_deg = 20.0};
	build(&n, &north, "2026-06-21"); /* midnight Sun */
	assert_true(isnan(n.times.sunset_d) && isnan(n.times.sunrise_d) && isnan(n.times.civil_dusk_d));
	assert_int_equal(n.sun_up.n, 1);
	check_close("Sun up all night", intervals_length(&n.sun_up), n.length_d, 1e-9);
	struct night_dark d = night_dark(&n, -12.0);
	assert_true(isnan(d.dusk_d) && isnan(d.dawn_d));
	check_close("no dark hour", d.usable_h, 0.0, 0.0);

	build(&n, &north, "2026-12-21"); /* Sun 8 deg below the horizon at noon */
	assert_true(isnan(n.times.sunset_d) && isnan(n.times.civil_dusk_d) && isnan(n.times.civil_dawn_d));
	assert_false(isnan(n.times.nautical_dusk_d) || isnan(n.times.nautical_dawn_d));
	assert_true(n.times.nautical_dusk_d < 0.3 && n.times.nautical_dawn_d > 0.7);
	assert_int_equal(n.sun_up.n, 0);
	d = night_dark(&n, -6.0);
	assert_true(isnan(d.dusk_d) && isnan(d.dawn_d));
	check_close("dark enough the whole day", d.usable_h, 24.0, 1e-6);

	for (int south = 0; south < 2; south++) { /* the poles themselves */
		const struct site pole = {
		    .lat_deg = south ? -90.0 : 90.0, .lon_east_deg = 0.0, .height_m = 2800.0};
		build(&n, &pole, "2026-03-20");
		struct target t = target_empty();
		t.ra_deg = 10.0;
		t.dec_deg = south ? -40.0 : 40.0;
		struct star s = night_star(&n, &t);
		struct intervals up = night_star_above(&n, &s, 30.0), not_up = night_star_above(&n, &s, 50.0);
		check_close("always up", intervals_length(&up), n.length_d, 0.0);
		assert_int_equal(not_up.n, 0);
		double alt = night_star_altaz(&n, &s, 0.4).alt_deg;
		check_close("altitude is the declination of date", alt, fabs(asin(s.apparent.z) / DEG_RAD),
			    1e-4);
	}
}

static void refusals(void **state)
{
	(void)state;
	static const struct {
		struct site site;
		int32_t mjd;
		const char *says;
	} rows[] = {
	    {{.lat_deg = 90.1}, 61000, "latitude"},
	    {{.lat_deg = (double)NAN}, 61000, "latitude"},
	    {{.lon_east_deg = 180.1}, 61000, "longitude"},
	    {{.lon_east_deg = -250.0}, 61000, "longitude"},
	    {{.height_m = 9001.0}, 61000, "height"},
	    {{.height_m = (double)NAN}, 61000, "height"},
	    {{.height_m = -600.0}, 61000, "height"},
	    {{.lat_deg = 0.0}, 15019, "1899"},
	    {{.lat_deg = 0.0}, 88434, "2101"},
	    {{.lat_deg = 0.0}, INT32_MIN, "year"},
	    {{.lat_deg = 0.0}, INT32_MAX, "year"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		struct night n;
		struct err e;
		assert_int_equal(night_build(&n, &rows[i].site, &clock_utc, rows[i].mjd, &memo, &e),
				 ST_RANGE);
		assert_non_null(strstr(e.text, rows[i].says));
	}
	/* the first and the last night that are taken */
	struct site site = {.lat_deg = 90.0, .lon_east_deg = -180.0, .height_m = 9000.0};
	struct night n;
	assert_int_equal(night_build(&n, &site, &clock_utc, 15020, &memo, NULL), ST_OK);
	assert_int_equal(night_build(&n, &site, &clock_utc, 88433, &memo, NULL), ST_OK);
}

static void outside_the_fits(void **state)
{
	(void)state;
	const struct site site = {.lat_deg = -20.0, .lon_east_deg = 30.0};
	struct night n;
	build(&n, &site, "2026-05-05");
	struct target t = target_empty();
	t.ra_deg = 10.0;
	t.dec_deg = 40.0;
	struct star s = night_star(&n, &t);
	static const double times[] = {-0.51, 1.51, 100.0, (double)NAN, (double)INFINITY};
	for (size_t i = 0; i < sizeof times / sizeof *times; i++) {
		assert_false(night_covers(times[i]));
		assert_true(isnan(night_star_altaz(&n, &s, times[i]).alt_deg));
		assert_true(isnan(night_sun_altaz(&n, times[i]).alt_deg));
		assert_true(isnan(night_moon_altaz(&n, times[i]).alt_deg));
		assert_true(isnan(night_moon_lit(&n, times[i])));
		assert_true(isnan(night_moon_sep_deg(&n, &s, times[i])));
		assert_true(isnan(night_light_time_s(&n, &s, times[i], ORIGIN_BARYCENTRE)));
	}
	assert_true(isnan(night_of_bjd(&n, &s, (struct tdb){{(double)NAN, 0.0}})));
	assert_true(night_covers(-0.5) && night_covers(1.5));
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(which_night),
	    cmocka_unit_test(night_with_a_leap_second),
	    cmocka_unit_test(polar),
	    cmocka_unit_test(refusals),
	    cmocka_unit_test(outside_the_fits),
	};
	return cmocka_run_group_tests_name("night", tests, NULL, NULL);
}
