/* SPDX-License-Identifier: MIT
 * Time scales against ERFA 2.0: eraDat, eraUtctai, eraDtdb, eraJd2cal, eraCal2jd, eraGst06a. */
#include "ephem/frame.h"
#include "ephem/timescale.h"
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/erfa_sky.h"

#include <erfa.h>
#include <math.h>

static void leap_table(void **state)
{
	(void)state;
	/* every day from 1960 to the last one that eraDat of this version calls certain (status 0) */
	int days = 0;
	for (int32_t mjd = 36934; mjd < 61405; mjd++) {
		struct date d = date_from_mjd(mjd);
		double want;
		if (eraDat(d.year, d.month, d.day, 0.3, &want) != 0)
			break;
		check_close("TAI-UTC [s]",
			    leap_tai_minus_utc_s(&leap_builtin, (struct utc){mjd, 0.3 * DAY_S}), want, 1e-9);
		days++;
	}
	print_message("%d days of eraDat agree\n", days);
	assert_true(days > 60 * 365);
}

static void utc_to_tai(void **state)
{
	(void)state;
	struct rng r = rng_open("UTC to TT");
	double worst = 0.0;
	for (int i = 0; i < 3000; i++) {
		/* a third of them on days that end with a leap second, near its end */
		struct utc t = {(int32_t)rng_between(&r, 41317.0, 66000.0), rng_between(&r, 0.0, 86400.0)};
		if (i % 3 == 0) {
			t.mjd = leap_builtin.row[15 + i % 27].mjd - 1;
			t.sod_s = rng_between(&r, 86390.0, 86401.0);
		}
		double utc1, utc2, tai1, tai2;
		erfa_utc(t, &utc1, &utc2);
		struct jd2 quasi = utc_to_jd(&leap_builtin, t);
		check_close("quasi-JD [s]", ((quasi.day - utc1) + (quasi.frac - utc2)) * DAY_S, 0.0, 1e-9);
		assert_true(eraUtctai(utc1, utc2, &tai1, &tai2) >= 0);
		struct tt tt = utc_to_tt(&leap_builtin, t);
		double off = ((tt.jd.day - tai1) + (tt.jd.frac - tai2)) * DAY_S - TT_TAI_S;
		worst = fmax(worst, fabs(off));
		struct utc back = tt_to_utc(&leap_builtin, tt);
		check_close("there and back [s]", utc_diff_s(&leap_builtin, t, back), 0.0, 1e-9);
	}
	check_close("TT [s]", worst, 0.0, 1e-9);
	/* 1960 to 1972, when the UTC second itself differed from that of TAI */
	for (int i = 0; i < 2000; i++) {
		struct utc t = {(int32_t)rng_between(&r, 36934.0, 41316.0), rng_between(&r, 0.0, 86399.0)};
		bool step = false; /* on the last day of a row ERFA stretches the day by the step */
		for (size_t k = 0; k < leap_builtin.n; k++)
			step = step || leap_builtin.row[k].mjd == t.mjd + 1;
		if (step)
			continue;
		double utc1, utc2, tai1, tai2;
		erfa_utc(t, &utc1, &utc2);
		assert_true(eraUtctai(utc1, utc2, &tai1, &tai2) >= 0);
		struct tt tt = utc_to_tt(&leap_builtin, t);
		double off = ((tt.jd.day - tai1) + (tt.jd.frac - tai2)) * DAY_S - TT_TAI_S;
		check_close("TT before 1972 [s]", off, 0.0, 1e-7);
		struct utc back = tt_to_utc(&leap_builtin, tt);
		assert_int_equal(back.mjd, t.mjd);
		check_close("there and back [s]", back.sod_s, t.sod_s, 1e-9);
	}
}

static void tdb(void **state)
{
	(void)state;
	double worst = 0.0;
	for (double jd = 2451545.0; jd < 2469807.0; jd += 1.37)
		worst = fmax(worst, fabs(tdb_minus_tt_s(jd) - eraDtdb(jd, 0.0, 0.5, 0.0, 0.0, 0.0)));
	print_message("TDB-TT: %.1f us at most from Fairhead & Bretagnon 1990, 2000 to 2050\n", worst * 1e6);
	check_close("TDB-TT [s]", worst, 0.0, 5e-5);
	struct tt t = {{2461114.5, 0.3}};
	check_close("there and back [s]", jd2_diff_d(tdb_to_tt(tt_to_tdb(t)).jd, t.jd) * DAY_S, 0.0, 1e-9);
}

static void sidereal_time(void **state)
{
	(void)state;
	struct rng r = rng_open("sidereal time");
	double worst = 0.0, matrix = 0.0;
	for (int i = 0; i < 1000; i++) {
		struct utc t = {(int32_t)rng_between(&r, 51544.0, 69807.0), rng_between(&r, 0.0, 86400.0)};
		const struct earth_clock clock = {.leap = &leap_builtin,
						  .ut1_utc_s = rng_between(&r, -0.9, 0.9)};
		struct tt tt = utc_to_tt(&leap_builtin, t);
		double utc1, utc2, ut1, ut2, equinoxes, npb[3][3];
		erfa_utc(t, &utc1, &utc2);
		assert_true(eraUtcut1(utc1, utc2, clock.ut1_utc_s, &ut1, &ut2) >= 0);
		struct mat3 m = frame_true_of_date(jd2_value(tt.jd), &equinoxes);
		double gast = frame_gast_rad(&clock, t, equinoxes);
		assert_true(gast >= 0.0 && gast < TWO_PI);
		double off =
		    remainder(gast - eraGst06a(ut1, ut2, tt.jd.day, tt.jd.frac), TWO_PI) / ARCSEC_RAD;
		worst = fmax(worst, fabs(off));
		eraPnm06a(tt.jd.day, tt.jd.frac, npb);
		struct vec3 n =
		    vec3_from_angles(rng_between(&r, 0.0, TWO_PI), asin(rng_between(&r, -1.0, 1.0)));
		double in[3] = {n.x, n.y, n.z}, out[3];
		eraRxp(npb, in, out);
		double turned =
		    vec3_angle_rad(mat3_apply(&m, n), (struct vec3){out[0], out[1], out[2]}) / ARCSEC_RAD;
		matrix = fmax(matrix, turned);
	}
	print_message("apparent sidereal time %.3f, precession-nutation %.3f arcsec at most\n", worst,
		      matrix);
	check_close("apparent sidereal time [arcsec]", worst, 0.0, 0.15);
	check_close("precession-nutation [arcsec]", matrix, 0.0, 0.06);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(leap_table),
	    cmocka_unit_test(utc_to_tai),
	    cmocka_unit_test(tdb),
	    cmocka_unit_test(sidereal_time),
	};
	return cmocka_run_group_tests_name("timescale_erfa", tests, NULL, NULL);
}
