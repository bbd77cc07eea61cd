/* SPDX-License-Identifier: MIT
 * How sigma grows, where it passes a limit, what an observation would do.
 * "mpmath": own run with mpmath 1.3.0 at 40 digits. */
#include "ephem/drift.h"

#include "ephem/refit.h"
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/midtime_rows.h"

#include <math.h>

static struct ephemeris linear(double cov)
{
	return (struct ephemeris){.t0 = tdb_of(2458350.0, 0.123456),
				  .period_d = 3.4567890,
				  .c00 = 2.1e-4 * 2.1e-4,
				  .c11 = 4.8e-6 * 4.8e-6,
				  .c01 = cov};
}

/* Invented; correlations as strong as they are after a real fit. */
static struct ephemeris quadratic(void)
{
	return (struct ephemeris){.t0 = tdb_of(2454321.0, 0.1234),
				  .period_d = 2.2,
				  .dpde_d = -2.5e-9,
				  .c00 = 4.0e-8,
				  .c01 = -1.5e-11,
				  .c02 = 4.0e-15,
				  .c11 = 1.2e-14,
				  .c12 = -3.6e-18,
				  .c22 = 1.3e-21};
}

/* by hand: hypot of the published error, the time standard and the bound of the timing variations over sqrt 2
 */
static void sigma_has_three_parts(void **state)
{
	(void)state;
	struct ephemeris e = linear(-6.0e-10);
	check_close("published only", drift_sigma_min(&e, 850), 5.70038, 5e-6);
	e.systematic_min = 3.0;
	e.ttv_min = 4.0 * sqrt(2.0);
	check_close("all", drift_sigma_min(&e, 850), hypot(5.0, 5.70038), 5e-6);
	e.c00 = NAN;
	assert_true(isnan(drift_sigma_min(&e, 850)));
	assert_true(isnan(drift_sigma_min(&e, 0)));
}

static void both_roots(void **state)
{
	(void)state;
	static const struct { /* mpmath */
		double cov, limit_min, from, to;
	} rows[] = {
	    {0.0, 10.0, -1446.0976079616481, 1446.0976079616481},
	    {0.0, 15.0, -2169.6978440713585, 2169.6978440713585},
	    {-6.0e-10, 10.0, -1420.2904045241710, 1472.3737378575043},
	    {-6.0e-10, 5.0, -696.48320796802570, 748.56654130135903},
	    {6.0e-10, 5.0, -748.56654130135903, 696.48320796802570}, /* mirrored */
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		const struct ephemeris e = linear(rows[i].cov);
		const struct drift_span s = drift_below(&e, rows[i].limit_min);
		assert_true(s.known && !s.never && !s.always);
		check_close("from (mpmath)", s.from_epoch, rows[i].from, 1e-9);
		check_close("to (mpmath)", s.to_epoch, rows[i].to, 1e-9);
		check_close("on the limit", drift_sigma_min(&e, lround(s.to_epoch)), rows[i].limit_min,
			    0.5 * 4.8e-6 * DAY_MIN);
	}
	/* date of the crossing, mpmath */
	const struct ephemeris e = linear(0.0);
	check_close("stale date", jd2_value(e.t0.jd) + e.period_d * drift_below(&e, 10.0).to_epoch,
		    2463348.9777601281, 1e-6);
}

/* by hand: a root close to T0 beside one far away, where the textbook formula cancels: s0^2 - limit^2 = 1e-16
 * x 2 c */
static void no_cancellation(void **state)
{
	(void)state;
	const double limit_min = 1.0, limit_d = 1.0 / DAY_MIN;
	struct ephemeris e = {.t0 = tdb_of(2458350.0, 0.0),
			      .period_d = 3.0,
			      .c00 = limit_d * limit_d * (1.0 - 1e-9),
			      .c01 = 1e-10,
			      .c11 = 1e-19};
	const struct drift_span s = drift_below(&e, limit_min);
	const double near = limit_d * limit_d * 1e-9 / (2.0 * 1e-10); /* the square's term is 1e-16 of this */
	check_close("near root", s.to_epoch / near, 1.0, 1e-6);
	check_close("far root", s.from_epoch, -2.0 * 1e-10 / 1e-19, 10.0);
}

static void never_always_unknown(void **state)
{
	(void)state;
	struct ephemeris e = linear(0.0);
	struct drift_span s = drift_below(&e, 0.2); /* s0 alone is 0.3024 min */
	assert_true(s.known && s.always && !s.never && isnan(s.from_epoch) && isnan(s.to_epoch));
	e.c11 = 0.0;
	s = drift_below(&e, 0.2);
	assert_true(s.known && s.always);
	s = drift_below(&e, 10.0);
	assert_true(s.known && s.never && !s.always && s.to_epoch > 0.0 && isinf(s.to_epoch) &&
		    isinf(s.from_epoch));
	/* what does not age eats from the limit: sqrt(10^2 - 6^2) = 8 */
	e = linear(0.0);
	e.systematic_min = 6.0;
	struct ephemeris bare = linear(0.0);
	check_close("time standard unknown", drift_below(&e, 10.0).to_epoch, drift_below(&bare, 8.0).to_epoch,
		    1e-9);
	e.systematic_min = 0.0, e.ttv_min = 6.0 * sqrt(2.0);
	check_close("timing variations", drift_below(&e, 10.0).to_epoch, drift_below(&bare, 8.0).to_epoch,
		    1e-9);
	assert_true(drift_below(&e, 5.0).always);
	assert_true(drift_below(&e, 0.0).always);
	assert_true(drift_below(&e, -1.0).always);
	assert_false(drift_below(&e, NAN).known);
	e.c00 = NAN;
	assert_false(drift_below(&e, 10.0).known);
	assert_true(isnan(drift_below(&e, 10.0).to_epoch));
}

static void quadratic_roots(void **state)
{
	(void)state;
	static const struct { /* mpmath polyroots */
		double limit_min, from, to;
	} rows[] = {
	    {0.21, 1248.8131141910961, 2434.9027605404826},
	    {0.3, -107.15322607956662, 5012.2734688809660},
	    {0.406274, -852.42158308583756, 6000.0000274705644},
	    {1.0, -3303.6557837010556, 8703.1566334779264},
	};
	const struct ephemeris e = quadratic();
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		const struct drift_span s = drift_below(&e, rows[i].limit_min);
		assert_true(s.known && !s.never && !s.always);
		check_close("from (mpmath)", s.from_epoch, rows[i].from, 1e-5);
		check_close("to (mpmath)", s.to_epoch, rows[i].to, 1e-5);
	}
	assert_true(drift_below(&e, 0.19).always); /* least 0.2035 min near epoch 1844 */
	assert_true(drift_below(&e, 1e30).never);
}

/* Sigma of a parabola fitted to even times dips twice. By hand, with Legendre's polynomials: the variance
 * goes as 1 + 3 u^2 + 5 (3 u^2 - 1)^2 / 4, least at u^2 = 1/5. */
static void quadratic_dips_twice(void **state)
{
	(void)state;
	struct mid_time t[41];
	struct fit f;
	struct err err;
	for (int i = 0; i < 41; i++)
		t[i] = (struct mid_time){
		    .epoch = 10L * i - 200, .mid = tdb_of(2459000.0, 20.0 * i), .err_d = 1e-3, .used = true};
	assert_int_equal(refit(t, 41, 3, 0, 0.0, &f, &err), ST_OK);
	const struct ephemeris e = fit_ephemeris(&f, 1.0);
	const double limit_min = 0.5 * (drift_sigma_min(&e, 0) + drift_sigma_min(&e, 90));
	assert_true(drift_sigma_min(&e, 90) < drift_sigma_min(&e, 0));
	const struct drift_span s = drift_below(&e, limit_min);
	assert_true(s.from_epoch > 0.0 && s.to_epoch > s.from_epoch);
	for (long epoch = 1; epoch < 2000; epoch++)
		if ((drift_sigma_min(&e, epoch) < limit_min) !=
		    ((double)epoch > s.from_epoch && (double)epoch < s.to_epoch))
			check_fail("epoch %ld: %.9f min and the span %.3f to %.3f", epoch,
				   drift_sigma_min(&e, epoch), s.from_epoch, s.to_epoch);
}

static void refresh(void **state)
{
	(void)state;
	static const struct { /* mpmath */
		long seen, at;
		double precision_d, before, after, bits;
	} rows[] = {
	    {800, 1500, 7e-4, 10.372409062508092, 1.8755628745932995, 2.4813453292390302},
	    {800, 1000, 7e-4, 6.9186118376448899, 1.2411904636588318, 2.4813453292390302},
	    {600, 1500, 3e-4, 10.372409062508092, 1.1624534622198927, 3.2746035446778416},
	};
	const struct ephemeris e = linear(0.0);
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		check_close("before (mpmath)", drift_sigma_min(&e, rows[i].at), rows[i].before, 1e-12);
		check_close("after (mpmath)",
			    refresh_sigma_min(&e, rows[i].seen, rows[i].precision_d * DAY_MIN, rows[i].at),
			    rows[i].after, 1e-11);
		check_close("bits (mpmath)", refresh_bits(&e, rows[i].seen, rows[i].precision_d * DAY_MIN),
			    rows[i].bits, 1e-13);
	}
}

/* The forecast is what an update leaves, whatever is measured. */
static void refresh_is_the_update(void **state)
{
	(void)state;
	const struct ephemeris priors[] = {linear(-6.0e-10), quadratic()};
	for (size_t i = 0; i < 2; i++)
		for (long seen = -500; seen <= 3000; seen += 700)
			for (long at = -1000; at <= 5000; at += 1000) {
				struct ephemeris e = priors[i];
				e.systematic_min = 1.5;
				const double forecast = refresh_sigma_min(&e, seen, 0.7, at);
				const struct mid_time t = {.epoch = seen,
							   .mid =
							       tdb_of(ephemeris_mid(&e, seen).jd.day,
								      ephemeris_mid(&e, seen).jd.frac + 5e-4),
							   .err_d = 0.7 * MIN_D};
				struct update u;
				struct err err;
				assert_int_equal(ephemeris_update(&e, &t, &u, &err), ST_OK);
				check_close("forecast", forecast, drift_sigma_min(&e, at), 1e-9);
			}
}

static void refresh_of_the_unknown(void **state)
{
	(void)state;
	struct ephemeris e = linear(0.0);
	e.ttv_min = 2.0; /* an observation is worth less, and its bound stays */
	check_close("variations make noise", refresh_bits(&e, 800, 3.0),
		    0.5 * log2(1.0 + pow(drift_sigma_min(&e, 800), 2.0) / 11.0 - 2.0 / 11.0), 1e-12);
	assert_true(refresh_sigma_min(&e, 800, 0.0, 800) >= sqrt(2.0));
	e.c00 = NAN;
	assert_true(isnan(refresh_sigma_min(&e, 800, 1.0, 1500)));
	assert_true(isnan(refresh_bits(&e, 800, 1.0)));
	e = linear(0.0);
	e.c00 = e.c11 = 0.0;
	check_close("nothing to learn", refresh_bits(&e, 800, 1.0), 0.0, 0.0);
	check_close("nothing left to err", refresh_sigma_min(&e, 800, 0.0, 1500), 0.0, 0.0);
}

static void two_ephemerides(void **state)
{
	(void)state;
	const struct ephemeris a = linear(-6.0e-10);
	struct ephemeris b = a;
	/* b counts from 5 orbits later, 3 minutes later, and is 1e-5 d per orbit longer: 3 + 0.0144 x 800 at
	 * a's epoch 805 */
	b.t0.jd = jd2_add_d(ephemeris_mid(&a, 5).jd, 3.0 * MIN_D);
	b.period_d += 1e-5;
	const struct tdb t = {jd2_add_d(ephemeris_mid(&a, 805).jd, 0.7)};
	const struct drift_gap g = drift_between(&a, &b, t);
	check_close("gap", g.gap_min, 3.0 + 0.0144 * 800.0, 1e-6);
	check_close("error", g.error_min, hypot(drift_sigma_min(&a, 805), drift_sigma_min(&b, 800)), 1e-12);
	const struct drift_gap back = drift_between(&b, &a, t);
	check_close("the other way round", back.gap_min, -g.gap_min, 1e-6);
	/* twice the period: every other mid-time is the same */
	b = a;
	b.period_d *= 2.0;
	for (long epoch = 100; epoch < 102; epoch++)
		check_close("twice the period", drift_between(&a, &b, ephemeris_mid(&a, epoch)).gap_min, 0.0,
			    1e-6);
	b.c00 = NAN;
	assert_true(isnan(drift_between(&a, &b, t).error_min));
	assert_true(isfinite(drift_between(&a, &b, t).gap_min));
	b.period_d = 0.0;
	assert_true(isnan(drift_between(&a, &b, t).gap_min) && isnan(drift_between(&b, &a, t).gap_min));
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(sigma_has_three_parts),
	    cmocka_unit_test(both_roots),
	    cmocka_unit_test(no_cancellation),
	    cmocka_unit_test(never_always_unknown),
	    cmocka_unit_test(quadratic_roots),
	    cmocka_unit_test(quadratic_dips_twice),
	    cmocka_unit_test(refresh),
	    cmocka_unit_test(refresh_is_the_update),
	    cmocka_unit_test(refresh_of_the_unknown),
	    cmocka_unit_test(two_ephemerides),
	};
	return cmocka_run_group_tests_name("drift", tests, NULL, NULL);
}
