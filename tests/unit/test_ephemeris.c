/* SPDX-License-Identifier: MIT
 * Mid-times, their errors, epoch counts and occultation phases. */
#include "ephem/ephemeris.h"

#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>

static struct ephemeris linear(double t0, double period, double s0, double sp, double cov)
{
	return (struct ephemeris){.t0 = {jd2_normal(floor(t0), t0 - floor(t0))},
				  .period_d = period,
				  .c00 = s0 * s0,
				  .c11 = sp * sp,
				  .c01 = cov};
}

/* by hand: sqrt(s0^2 + E^2 sP^2 + 2 E c), T0 + P E (Deeg 2015, A&A 578, A17, error propagation of a linear
 * ephemeris) */
static const struct {
	long epoch;
	double cov, mid, sigma_min;
} linear_rows[] = {
    {-120, -6.0e-10, 2457935.308776, 1.03827}, {-120, 0.0, 2457935.308776, 0.88285},
    {0, -6.0e-10, 2458350.123456, 0.30240},    {125, -6.0e-10, 2458782.222081, 0.72588},
    {850, -6.0e-10, 2461288.394106, 5.70038},  {850, 0.0, 2461288.394106, 5.88298},
};

static void linear_mid_and_sigma(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof linear_rows / sizeof *linear_rows; i++) {
		const struct ephemeris e =
		    linear(2458350.123456, 3.4567890, 2.1e-4, 4.8e-6, linear_rows[i].cov);
		check_close("mid", jd2_value(ephemeris_mid(&e, linear_rows[i].epoch).jd), linear_rows[i].mid,
			    1e-9);
		check_close("sigma", ephemeris_published_d(&e, linear_rows[i].epoch) * DAY_MIN,
			    linear_rows[i].sigma_min, 5e-6);
	}
}

/* by hand: T0 + P E + D E^2/2, J C J^T with J = [1, E, E^2/2] (JCGM 100:2008 5.2.2) */
static void quadratic_mid_and_sigma(void **state)
{
	(void)state;
	struct ephemeris e = linear(2454321.1234, 2.2, 2.0e-4, 0.0, -1.5e-11);
	e.dpde_d = -2.5e-9;
	e.c02 = 4.0e-15, e.c11 = 1.2e-14, e.c12 = -3.6e-18, e.c22 = 1.3e-21;
	check_close("T(1500)", jd2_value(ephemeris_mid(&e, 1500).jd), 2457621.1205875, 1e-9);
	check_close("T(6000)", jd2_value(ephemeris_mid(&e, 6000).jd), 2467521.0784, 1e-9);
	check_close("s(1500)", ephemeris_published_d(&e, 1500) * DAY_MIN, 0.206153, 5e-7);
	check_close("s(6000)", ephemeris_published_d(&e, 6000) * DAY_MIN, 0.406274, 5e-7);
}

static void unknown_errors_have_no_sigma(void **state)
{
	(void)state;
	struct ephemeris e = linear(2458350.0, 3.0, 0.0, 0.0, 0.0);
	e.c00 = NAN;
	assert_true(isnan(ephemeris_published_d(&e, 10)));
	assert_true(isnan(ephemeris_published_d(&e, 0)));
}

/* Whatever the numbers: T(E-1) < t <= T(E). */
static void first_after_brackets(void **state)
{
	(void)state;
	struct rng r = rng_open("first_after");
	for (int i = 0; i < 20000; i++) {
		struct ephemeris e = linear(2450000.0 + rng_between(&r, 0.0, 9000.0),
					    exp(rng_between(&r, -3.0, 6.0)), 1e-4, 1e-6, 0.0);
		e.dpde_d = i % 3 == 0 ? rng_between(&r, -1e-8, 1e-8) * e.period_d : 0.0;
		const struct tdb t = {jd2_normal(2461000.0 + rng_between(&r, -5000.0, 5000.0), rng_unit(&r))};
		long n = 0;
		if (!ephemeris_first_after(&e, t, &n))
			check_fail("row %d: no count for P = %g", i, e.period_d);
		if (!(ephemeris_mid_after_d(&e, n, t) >= 0.0 && ephemeris_mid_after_d(&e, n - 1, t) < 0.0))
			check_fail("row %d: epoch %ld does not bracket", i, n);
		const double phase = ephemeris_phase(&e, t);
		if (!(phase >= 0.0 && phase < 1.0))
			check_fail("row %d: phase %g", i, phase);
	}
}

static void uncountable_is_refused(void **state)
{
	(void)state;
	long n;
	const struct tdb t = {{2461000.5, 0.0}};
	const double period[] = {0.0, -3.0, NAN, 1e-300};
	for (size_t i = 0; i < sizeof period / sizeof *period; i++) {
		const struct ephemeris e = linear(2458350.0, period[i], 1e-4, 1e-6, 0.0);
		assert_false(ephemeris_first_after(&e, t, &n));
		assert_true(isnan(ephemeris_phase(&e, t)));
	}
	struct ephemeris backwards = linear(2458350.0, 3.0, 1e-4, 1e-6, 0.0);
	backwards.dpde_d = -1e-2; /* the period is gone after 300 orbits */
	assert_false(ephemeris_first_after(&backwards, t, &n));
}

/* Independent of the closed form: Kepler's equation at both conjunctions. */
static double delay_by_kepler(double period, double ecc, double omega_deg)
{
	const double w = omega_deg * DEG_RAD, f[2] = {PI / 2.0 - w, -PI / 2.0 - w};
	double m[2];
	for (int i = 0; i < 2; i++) {
		const double e =
		    2.0 * atan2(sqrt(1.0 - ecc) * sin(f[i] / 2.0), sqrt(1.0 + ecc) * cos(f[i] / 2.0));
		m[i] = e - ecc * sin(e);
	}
	const double turn = (m[1] - m[0]) / TWO_PI;
	return period * (turn - floor(turn));
}

static void occultation_delay(void **state)
{
	(void)state;
	for (double ecc = 0.0; ecc < 0.95; ecc += 0.05)
		for (double omega = 0.0; omega < 360.0; omega += 15.0)
			check_close("delay (Kepler's equation)", occultation_delay_d(10.0, ecc, omega),
				    delay_by_kepler(10.0, ecc, omega), 1e-11);
	check_close("circular: half a period", occultation_delay_d(4.0, 0.0, 123.0), 2.0, 1e-15);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(linear_mid_and_sigma),	    cmocka_unit_test(quadratic_mid_and_sigma),
	    cmocka_unit_test(unknown_errors_have_no_sigma), cmocka_unit_test(first_after_brackets),
	    cmocka_unit_test(uncountable_is_refused),	    cmocka_unit_test(occultation_delay),
	};
	return cmocka_run_group_tests_name("ephemeris", tests, NULL, NULL);
}
