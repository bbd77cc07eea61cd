/* SPDX-License-Identifier: MIT
 * Barycentric and heliocentric times at the site against ERFA 2.0 (eraEpv00, eraPvtob, eraPnm06a, eraGst06a,
 * eraDtdb) and against a grid computed with astropy 5.2.1; round trips of every standard. */
#include "ephem/barycentre.h"
#include "ephem/night.h"
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/data_rows.h"
#include "tests/support/erfa_sky.h"

#include <erfa.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

static struct sun_memo memo;

struct erfa_light {
	double bary_s, helio_s, tdb_minus_tt_s;
};

static struct erfa_light erfa_light_of(const struct site *site, double dut1_s, struct utc t, struct vec3 n)
{
	double utc1, utc2, tai1, tai2, tt1, tt2, ut1, ut2, helio[2][3], bary[2][3], site_pv[2][3], npb[3][3],
	    icrs[3];
	erfa_utc(t, &utc1, &utc2);
	assert_true(eraUtctai(utc1, utc2, &tai1, &tai2) >= 0);
	assert_true(eraTaitt(tai1, tai2, &tt1, &tt2) == 0);
	assert_true(eraUtcut1(utc1, utc2, dut1_s, &ut1, &ut2) >= 0);
	eraPvtob(site->lon_east_deg * DEG_RAD, site->lat_deg * DEG_RAD, site->height_m, 0.0, 0.0, 0.0,
		 eraGst06a(ut1, ut2, tt1, tt2), site_pv);
	eraPnm06a(tt1, tt2, npb);
	eraTrxp(npb, site_pv[0], icrs);
	double day_fraction = fmod(ut2 + fmod(ut1 - 0.5, 1.0) + 1.0, 1.0);
	double u_km = hypot(site_pv[0][0], site_pv[0][1]) / 1000.0, v_km = site_pv[0][2] / 1000.0;
	double dtdb = eraDtdb(tt1, tt2, day_fraction, site->lon_east_deg * DEG_RAD, u_km, v_km);
	assert_true(eraEpv00(tt1, tt2 + dtdb / DAY_S, helio, bary) >= 0);
	struct vec3 at_site = {icrs[0] / AU_M, icrs[1] / AU_M, icrs[2] / AU_M};
	struct vec3 b = {bary[0][0], bary[0][1], bary[0][2]}, h = {helio[0][0], helio[0][1], helio[0][2]};
	return (struct erfa_light){.bary_s = vec3_dot(vec3_add(b, at_site), n) * AU_LIGHT_S,
				   .helio_s = vec3_dot(vec3_add(h, at_site), n) * AU_LIGHT_S,
				   .tdb_minus_tt_s = dtdb};
}

static void random_case(struct rng *r, struct site *site, struct earth_clock *clock, struct target *target,
			struct vec3 *n)
{
	*site = (struct site){.lat_deg = rng_between(r, -75.0, 75.0),
			      .lon_east_deg = rng_between(r, -180.0, 180.0),
			      .height_m = rng_between(r, 0.0, 5000.0)};
	*clock = (struct earth_clock){.leap = &leap_builtin, .ut1_utc_s = rng_between(r, -0.9, 0.9)};
	*target = target_empty();
	target->ra_deg = rng_between(r, 0.0, 360.0);
	target->dec_deg = asin(rng_between(r, -1.0, 1.0)) / DEG_RAD;
	*n = vec3_from_angles(target->ra_deg * DEG_RAD, target->dec_deg * DEG_RAD);
}

static void light_time_at_the_site(void **state)
{
	(void)state;
	struct rng r = rng_open("light time");
	double bary = 0.0, helio = 0.0, night_bary = 0.0, night_helio = 0.0, bjd = 0.0, back = 0.0;
	for (int i = 0; i < 300; i++) {
		struct site site;
		struct earth_clock clock;
		struct target target;
		struct vec3 n;
		struct night night;
		random_case(&r, &site, &clock, &target, &n);
		assert_int_equal(night_build(&night, &site, &clock,
					     (int32_t)rng_between(&r, 51544.0, 69807.0), &memo, NULL),
				 ST_OK);
		struct star star = night_star(&night, &target);
		const struct observer o = {.site = &site, .clock = &clock};
		double t_d = rng_between(&r, 0.0, night.length_d);
		struct tt tt = night_tt(&night, t_d);
		struct utc utc = night_utc(&night, t_d);
		struct erfa_light want = erfa_light_of(&site, clock.ut1_utc_s, utc, n);
		bary = fmax(bary, fabs(light_time_s(&memo, &o, tt, n, ORIGIN_BARYCENTRE) - want.bary_s));
		helio = fmax(helio, fabs(light_time_s(&memo, &o, tt, n, ORIGIN_SUN) - want.helio_s));
		night_bary = fmax(night_bary, fabs(night_light_time_s(&night, &star, t_d, ORIGIN_BARYCENTRE) -
						   want.bary_s));
		night_helio = fmax(night_helio,
				   fabs(night_light_time_s(&night, &star, t_d, ORIGIN_SUN) - want.helio_s));
		struct tdb got = night_bjd_tdb(&night, &star, t_d);
		bjd = fmax(bjd, fabs(jd2_diff_d(got.jd, tt.jd) * DAY_S - want.tdb_minus_tt_s - want.bary_s));
		back = fmax(back, fabs(night_of_bjd(&night, &star, got) - t_d) * DAY_S);
		check_close("no origin, no light time",
			    night_light_time_s(&night, &star, t_d, ORIGIN_OBSERVER), 0.0, 0.0);
	}
	print_message("single times: barycentre %.4f, Sun %.4f ms; night tables: barycentre %.4f, Sun %.4f, "
		      "BJD_TDB %.4f ms at most; "
		      "and back %.1e s\n",
		      bary * 1e3, helio * 1e3, night_bary * 1e3, night_helio * 1e3, bjd * 1e3, back);
	check_close("barycentre [s]", bary, 0.0, 0.0003);
	check_close("Sun [s]", helio, 0.0, 0.0003);
	check_close("barycentre, night tables [s]", night_bary, 0.0, 0.0003);
	check_close("Sun, night tables [s]", night_helio, 0.0, 0.0003);
	check_close("BJD_TDB, night tables [s]", bjd, 0.0, 0.001);
	check_close("BJD_TDB and back [s]", back, 0.0, 1e-6);
}

/* Nights far from an event still say on which side and about how far away it is. */
static void events_outside_the_night(void **state)
{
	(void)state;
	struct rng r = rng_open("far events");
	for (int i = 0; i < 200; i++) {
		struct site site;
		struct earth_clock clock;
		struct target target;
		struct vec3 n;
		struct night night;
		struct tt seen;
		struct err e;
		random_case(&r, &site, &clock, &target, &n);
		assert_int_equal(night_build(&night, &site, &clock,
					     (int32_t)rng_between(&r, 52000.0, 69000.0), &memo, NULL),
				 ST_OK);
		struct star star = night_star(&night, &target);
		double away_d = rng_between(&r, -30.0, 30.0);
		struct tdb bjd = {jd2_add_d(night.noon_tt.jd, away_d)};
		const struct standard bjd_tdb = {
		    .claim = SCALE_STATED, .origin = ORIGIN_BARYCENTRE, .clock = CLOCK_TDB};
		const struct observer o = {.site = &site, .clock = &clock};
		assert_int_equal(standard_to_tt(&memo, &o, &bjd_tdb, bjd.jd, n, &seen, &e), ST_OK);
		double want = jd2_diff_d(seen.jd, night.noon_tt.jd);
		double outside_d = fmax(fmax(-0.5 - want, want - 1.5), 0.0);
		/* the Earth's 30 km/s, 8.6 s of light time a day, and 1 ms */
		check_close("event far away [s]", (night_of_bjd(&night, &star, bjd) - want) * DAY_S, 0.0,
			    0.001 + 9.0 * outside_d);
	}
}

static void grid_of_astropy(void **state)
{
	(void)state;
	struct data_rows d = data_rows_open("bjd_grid_astropy.csv");
	const struct standard bjd_tdb = {
	    .claim = SCALE_STATED, .origin = ORIGIN_BARYCENTRE, .clock = CLOCK_TDB};
	const struct standard hjd_utc = {.claim = SCALE_STATED, .origin = ORIGIN_SUN, .clock = CLOCK_UTC};
	double bary = 0.0, helio = 0.0, scale = 0.0, bjd = 0.0, hjd = 0.0;
	while (data_rows_next(&d, 12)) {
		struct jd2 jd, value;
		char *point = strchr(d.cell[0], '.');
		jd.frac = strtod(point, NULL);
		*point = '\0';
		jd.day = strtod(d.cell[0], NULL);
		struct utc utc = utc_from_jd(&leap_builtin, jd);
		struct site site = {.lat_deg = data_number(&d, 1),
				    .lon_east_deg = data_number(&d, 2),
				    .height_m = data_number(&d, 3)};
		struct earth_clock clock = {.leap = &leap_builtin, .ut1_utc_s = data_number(&d, 6)};
		const struct observer o = {.site = &site, .clock = &clock};
		struct vec3 n = vec3_from_angles(data_number(&d, 4) * DEG_RAD, data_number(&d, 5) * DEG_RAD);
		struct tt tt = utc_to_tt(&leap_builtin, utc);
		bary =
		    fmax(bary, fabs(light_time_s(&memo, &o, tt, n, ORIGIN_BARYCENTRE) - data_number(&d, 8)));
		helio = fmax(helio, fabs(light_time_s(&memo, &o, tt, n, ORIGIN_SUN) - data_number(&d, 9)));
		double tdb_utc =
		    TT_TAI_S + leap_tai_minus_utc_s(&leap_builtin, utc) + tdb_minus_tt_s(jd2_value(tt.jd));
		scale = fmax(scale, fabs(tdb_utc - data_number(&d, 7)));
		assert_int_equal(standard_from_tt(&memo, &o, &bjd_tdb, tt, n, &value, NULL), ST_OK);
		bjd = fmax(bjd, fabs(jd2_diff_d(value, jd2_normal(data_number(&d, 10), 0.0)) * DAY_S));
		assert_int_equal(standard_from_tt(&memo, &o, &hjd_utc, tt, n, &value, NULL), ST_OK);
		hjd = fmax(hjd, fabs(jd2_diff_d(value, jd2_normal(data_number(&d, 11), 0.0)) * DAY_S));
	}
	print_message("astropy grid, %d rows: barycentre %.4f, Sun %.4f, TDB-UTC %.4f ms; dates (printed to "
		      "0.9 ms) %.2f, %.2f ms at "
		      "most\n",
		      d.row, bary * 1e3, helio * 1e3, scale * 1e3, bjd * 1e3, hjd * 1e3);
	assert_int_equal(d.row, 30);
	check_close("barycentre [s]", bary, 0.0, 0.0003);
	check_close("Sun [s]", helio, 0.0, 0.0003);
	check_close("TDB-UTC [s]", scale, 0.0, 0.00005);
	/* JD and result are both printed to eight decimals of a day, half a unit each; a double near 2.46e6
	 * holds 40 us */
	check_close("BJD_TDB [s]", bjd, 0.0, 0.0003 + 2.0 * 0.000432 + 0.00004);
	check_close("HJD_UTC [s]", hjd, 0.0, 0.0003 + 2.0 * 0.000432 + 0.00004);
}

static void standards_go_round(void **state)
{
	(void)state;
	static const char *const names[] = {
	    "JD_UTC", "JD_TT",	 "JD_TDB",  "MJD_UTC", "MJD_TT",	  "MJD_TDB",	    "HJD_UTC",
	    "HJD_TT", "HJD_TDB", "BJD_UTC", "BJD_TT",  "BJD_TDB-2457000", "HJD_UTC-2450000"};
	struct rng r = rng_open("standards");
	for (int i = 0; i < 40; i++) {
		struct site site;
		struct earth_clock clock;
		struct target target;
		struct vec3 n;
		random_case(&r, &site, &clock, &target, &n);
		const struct observer here = {.site = &site, .clock = &clock}, centre = {.clock = &clock};
		const struct observer *o = i % 2 ? &here : &centre;
		struct tt t = {
		    jd2_normal(floor(rng_between(&r, 2437000.0, 2488000.0)), rng_unit(&r)),
		};
		struct tdb through_jd;
		for (size_t k = 0; k < sizeof names / sizeof *names; k++) {
			struct standard s;
			struct jd2 value;
			struct tt back;
			struct tdb bjd;
			struct err e;
			assert_int_equal(standard_parse(names[k], &s, &e), ST_OK);
			assert_int_equal(standard_from_tt(&memo, o, &s, t, n, &value, &e), ST_OK);
			assert_int_equal(standard_to_tt(&memo, o, &s, value, n, &back, &e), ST_OK);
			check_close(names[k], jd2_diff_d(back.jd, t.jd) * DAY_S, 0.0, 1e-7);
			/* from the Earth's centre every standard leads to the same BJD_TDB */
			struct jd2 from_centre;
			assert_int_equal(standard_from_tt(&memo, &centre, &s, t, n, &from_centre, &e), ST_OK);
			assert_int_equal(standard_to_bjd_tdb(&memo, &clock, &s, from_centre, n, &bjd, &e),
					 ST_OK);
			if (k == 0)
				through_jd = bjd;
			check_close(names[k], jd2_diff_d(bjd.jd, through_jd.jd) * DAY_S, 0.0, 1e-4);
		}
	}
}

static void refused_dates(void **state)
{
	(void)state;
	const struct earth_clock clock = {.leap = &leap_builtin};
	const struct observer o = {.clock = &clock};
	const struct vec3 n = {1.0, 0.0, 0.0};
	static const struct {
		const char *scale;
		double value;
	} rows[] = {{"BJD_TDB", 2415020.4}, {"BJD_TDB", 2488434.6},	    {"BJD_TDB", 59000.5},
		    {"MJD_UTC", 2459000.5}, {"BJD_TDB-2457000", 2459000.5}, {"HJD_UTC", (double)NAN},
		    {"UTC", 2459000.5}};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		struct standard s;
		struct tt t;
		struct tdb b;
		struct err e;
		struct jd2 value = {rows[i].value, 0.0};
		assert_int_equal(standard_parse(rows[i].scale, &s, &e), ST_OK);
		assert_int_equal(standard_to_tt(&memo, &o, &s, value, n, &t, &e), ST_RANGE);
		assert_int_equal(standard_to_bjd_tdb(&memo, &clock, &s, value, n, &b, &e), ST_RANGE);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(light_time_at_the_site), cmocka_unit_test(events_outside_the_night),
	    cmocka_unit_test(grid_of_astropy),	      cmocka_unit_test(standards_go_round),
	    cmocka_unit_test(refused_dates),
	};
	return cmocka_run_group_tests_name("light_time", tests, NULL, NULL);
}
