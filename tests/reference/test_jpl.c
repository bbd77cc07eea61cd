/* SPDX-License-Identifier: MIT
 * The series against JPL: rows of Horizons (DE441, DE431) and, where the Debian package is installed, DE405
 * over the half-century. */
#include "ephem/barycentre.h"
#include "ephem/night.h"
#include "ephem/series_nova.h"
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/data_rows.h"
#include "tests/support/jpl_405.h"

#include <math.h>

static struct sun_memo memo;

static double jd_tt_of(double jd_tdb)
{
	return jd_tdb - tdb_minus_tt_s(jd_tdb) / DAY_S;
}

static struct vec3 row_vector(const struct data_rows *d)
{
	return (struct vec3){data_number(d, 1), data_number(d, 2), data_number(d, 3)};
}

static void horizons_moon(void **state)
{
	(void)state;
	struct data_rows d = data_rows_open("horizons_moon_geo.csv");
	double direction = 0.0, distance = 0.0;
	while (data_rows_next(&d, 7)) {
		struct vec3 want = vec3_scale(row_vector(&d), AU_M / 1000.0),
			    got = nova_moon_geo_km(jd_tt_of(data_number(&d, 0)));
		direction = fmax(direction, vec3_angle_rad(got, want) / ARCSEC_RAD);
		distance = fmax(distance, fabs(vec3_norm(got) - vec3_norm(want)));
	}
	print_message("Moon, %d rows: %.3f arcsec, %.3f km at most\n", d.row, direction, distance);
	assert_true(d.row > 100);
	check_close("Moon direction [arcsec]", direction, 0.0, 0.5);
	check_close("Moon distance [km]", distance, 0.0, 0.5);
}

static void horizons_sun_and_earth(void **state)
{
	(void)state;
	double sun_s = 0.0, earth_s = 0.0;
	struct data_rows d = data_rows_open("horizons_sun_bary.csv");
	while (data_rows_next(&d, 7)) {
		struct vec3 off = vec3_sub(sun_memo_at(&memo, jd_tt_of(data_number(&d, 0))), row_vector(&d));
		sun_s = fmax(sun_s, vec3_norm(off) * AU_LIGHT_S);
	}
	assert_true(d.row > 50);
	d = data_rows_open("horizons_earth_bary.csv");
	while (data_rows_next(&d, 7)) {
		double jd = jd_tt_of(data_number(&d, 0));
		struct vec3 got = vec3_add(nova_earth_helio_au(jd), sun_memo_at(&memo, jd));
		earth_s = fmax(earth_s, vec3_norm(vec3_sub(got, row_vector(&d))) * AU_LIGHT_S);
	}
	print_message("from the barycentre of DE441: Sun %.3f, Earth %.3f ms of light at most\n", sun_s * 1e3,
		      earth_s * 1e3);
	assert_true(d.row > 50);
	/* the barycentre of DE441 counts more asteroids and lies about 0.4 ms from that of DE405 (Park et al.
	 * 2021, AJ 161, 105) */
	check_close("Sun from the barycentre [s]", sun_s, 0.0, 0.0006);
	check_close("Earth from the barycentre [s]", earth_s, 0.0, 0.0006);
}

static void horizons_lit_share(void **state)
{
	(void)state;
	const struct site centre_like = {.lat_deg = 0.0, .lon_east_deg = 0.0, .height_m = 0.0};
	const struct earth_clock clock = {.leap = &leap_builtin};
	struct data_rows d = data_rows_open("horizons_moon_phase.csv");
	double worst = 0.0;
	while (data_rows_next(&d, 6)) {
		struct utc t = utc_from_jd(&leap_builtin, jd2_normal(data_number(&d, 0), 0.0));
		struct night n;
		struct err e;
		if (night_build(&n, &centre_like, &clock, night_date_of(0.0, t), &memo, &e) != ST_OK)
			check_fail("%s", e.text);
		worst = fmax(worst, fabs(night_moon_lit(&n, night_of_utc(&n, t)) - data_number(&d, 5)));
	}
	print_message("lit share, %d rows: %.5f at most\n", d.row, worst);
	assert_true(d.row > 50);
	check_close("lit share", worst, 0.0, 0.0005);
}

/* The reader of DE405 itself: JPL's own test table, positions in au and velocities in au/d, printed to 1e-13.
 */
static void reader_of_de405(void **state)
{
	(void)state;
	struct jpl_405 *j = jpl_405_open();
	if (!j)
		check_skip(JPL_405_CITATION);
	struct data_rows d = data_rows_open("testpo405_earth_moon_sun.csv");
	while (data_rows_next(&d, 5)) {
		struct vec3 place[2] = {{0.0, 0.0, 0.0}, {0.0, 0.0, 0.0}},
			    rate[2] = {{0.0, 0.0, 0.0}, {0.0, 0.0, 0.0}};
		for (int i = 0; i < 2; i++) {
			int number = (int)data_number(&d, 1 + i);
			enum jpl_body body = number == 3 ? JPL_EARTH : number == 10 ? JPL_MOON : JPL_SUN;
			if (number != 12)
				place[i] = jpl_405_bary_au(j, body, data_number(&d, 0), 0.0, &rate[i]);
		}
		struct vec3 p = vec3_sub(place[0], place[1]), v = vec3_sub(rate[0], rate[1]);
		const double all[6] = {p.x, p.y, p.z, v.x, v.y, v.z};
		check_close("testpo.405", all[(int)data_number(&d, 3) - 1], data_number(&d, 4), 1.1e-13);
	}
	print_message("%d rows of testpo.405 reproduced\n", d.row);
	assert_true(d.row > 50);
	jpl_405_close(j);
}

static void series_against_de405(void **state)
{
	(void)state;
	struct jpl_405 *j = jpl_405_open();
	if (!j)
		check_skip(JPL_405_CITATION);
	struct rng r = rng_open("series");
	double moon_as = 0.0, sun_as = 0.0, bary_s = 0.0;
	for (int i = 0; i < 1000; i++) {
		double tdb = rng_between(&r, 2451545.0, 2469807.0), tt = jd_tt_of(tdb);
		struct vec3 earth = jpl_405_bary_au(j, JPL_EARTH, tdb, 0.0, NULL),
			    sun = jpl_405_bary_au(j, JPL_SUN, tdb, 0.0, NULL);
		struct vec3 moon = vec3_sub(jpl_405_bary_au(j, JPL_MOON, tdb, 0.0, NULL), earth);
		moon_as = fmax(moon_as, vec3_angle_rad(moon, nova_moon_geo_km(tt)) / ARCSEC_RAD);
		sun_as =
		    fmax(sun_as, vec3_angle_rad(vec3_sub(earth, sun), nova_earth_helio_au(tt)) / ARCSEC_RAD);
		struct vec3 got = vec3_add(nova_earth_helio_au(tt), sun_memo_at(&memo, tt));
		bary_s = fmax(bary_s, vec3_norm(vec3_sub(got, earth)) * AU_LIGHT_S);
	}
	print_message("DE405: Moon %.3f, Sun %.3f arcsec, Earth from the barycentre %.4f ms at most\n",
		      moon_as, sun_as, bary_s * 1e3);
	check_close("Moon [arcsec]", moon_as, 0.0, 0.5);
	check_close("Sun [arcsec]", sun_as, 0.0, 0.1);
	check_close("Earth from the barycentre [s]", bary_s, 0.0, 0.0002);
	jpl_405_close(j);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(horizons_moon),	    cmocka_unit_test(horizons_sun_and_earth),
	    cmocka_unit_test(horizons_lit_share),   cmocka_unit_test(reader_of_de405),
	    cmocka_unit_test(series_against_de405),
	};
	return cmocka_run_group_tests_name("jpl", tests, NULL, NULL);
}
