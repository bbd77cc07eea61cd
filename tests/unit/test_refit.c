/* SPDX-License-Identifier: MIT
 * Fits of mid-times, moving the reference, jitter, counting epochs, updating a prior.
 * "mpmath": own run with mpmath 1.3.0 at 40 digits, normal equations in full precision. */
#include "ephem/refit.h"

#include "ephem/drift.h"
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/midtime_rows.h"

#include <math.h>
#include <string.h>

static struct mid_time transit(long epoch, double day, double rest, double err_d)
{
	return (struct mid_time){.epoch = epoch, .mid = tdb_of(day, rest), .err_d = err_d, .used = true};
}

/* A unit in the last place of 2693.16 d is 4.5e-13 d, 1e-9 of an error: that is what chi2 can keep. */
#define CHI2_NEAR 1e-8

/* Eight invented times. */
enum { EIGHT = 8 };
static const struct {
	long epoch;
	double after_2458000, err_d, residual_s, residual_sigma; /* linear fit, mpmath */
} eight_rows[EIGHT] = {
    {-412, 352.918812, .00042, -36.004371190728306, -0.99218395036178091},
    {-390, 428.968405, .00055, -14.750221377776833, -0.31040028151887276},
    {-251, 909.462498, .00038, 27.713797894962012, 0.84410934134265391},
    {-120, 1362.301541, .00061, 6.0691081448094148, 0.11515460201900074},
    {-1, 1773.659921, .00047, 53.458154860319650, 1.3164439238652396},
    {37, 1905.016824, .00070, -38.126277280945989, -0.63039479631193765},
    {181, 2402.795082, .00033, 23.561685131100010, 0.82637784550715524},
    {265, 2693.163992, .00052, -90.832870128539824, -2.0217430139009042},
};

static void eight(struct mid_time t[EIGHT])
{
	for (int i = 0; i < EIGHT; i++)
		t[i] = transit(eight_rows[i].epoch, 2458000.0 + floor(eight_rows[i].after_2458000),
			       eight_rows[i].after_2458000 - floor(eight_rows[i].after_2458000),
			       eight_rows[i].err_d);
}

static struct fit fitted(const struct mid_time t[], size_t n, int terms, long ref_epoch, double jitter_d)
{
	struct fit f;
	struct err e;
	if (refit(t, n, terms, ref_epoch, jitter_d, &f, &e))
		check_fail("refit: %s", e.text);
	return f;
}

static double after(const struct fit *f, double day)
{
	return jd2_diff_d(f->t0.jd, (struct jd2){day, 0.0});
}

static void linear_fit(void **state)
{
	(void)state;
	struct mid_time t[EIGHT];
	eight(t);
	const struct fit at_0 = fitted(t, EIGHT, 2, 0, 0.0), best = fitted(t, EIGHT, 2, REF_EPOCH_BEST, 0.0);
	check_close("T0 (mpmath)", after(&at_0, 2458000.0), 1777.1160907714874, 2e-12);
	check_close("P (mpmath)", at_0.period_d, 3.4567885001316220, 1e-14);
	check_close("s0 (mpmath)", sqrt(at_0.cov[0][0]), 1.7023494927040915e-4, 1e-16);
	check_close("sP (mpmath)", sqrt(at_0.cov[1][1]), 6.6356022920277242e-7, 1e-19);
	check_close("cov (mpmath)", at_0.cov[0][1], 3.4410045331393769e-11, 1e-23);
	check_close("chi2 (mpmath)", at_0.chi2, 8.7073258503316254, CHI2_NEAR);
	check_close("BIC (mpmath)", at_0.bic, 12.866208933691297, CHI2_NEAR);
	assert_int_equal(best.ref_epoch, -78); /* the weighted mean is -78.149202 */
	check_close("T0 at the centre (mpmath)", after(&best, 2458000.0), 1507.4865877612209, 2e-12);
	check_close("s0 at the centre (mpmath)", sqrt(best.cov[0][0]), 1.6214447314359084e-4, 1e-16);
	check_close("cov at the centre (mpmath)", best.cov[0][1], 6.5695464582171762e-14, 1e-22);
	assert_int_equal(at_0.dof, 6);
	assert_int_equal(at_0.n, EIGHT);
	check_close("no curve", at_0.dpde_d, 0.0, 0.0);
	for (int i = 0; i < EIGHT; i++) {
		check_close("residual (mpmath)", fit_residual_d(&at_0, &t[i]) * DAY_S,
			    eight_rows[i].residual_s, 1e-6);
		check_close("in sigma (mpmath)", fit_residual_d(&best, &t[i]) / t[i].err_d,
			    eight_rows[i].residual_sigma, 1e-7);
	}
}

static void quadratic_fit(void **state)
{
	(void)state;
	struct mid_time t[EIGHT];
	eight(t);
	const struct fit f = fitted(t, EIGHT, 3, 0, 0.0);
	check_close("T0 (mpmath)", after(&f, 2458000.0), 1777.1165237356459, 2e-12);
	check_close("P (mpmath)", f.period_d, 3.4567870917206819, 1e-14);
	check_close("D (mpmath)", f.dpde_d, -1.6501268995284805e-8, 1e-17);
	check_close("s0 (mpmath)", sqrt(f.cov[0][0]), 2.6709148210719116e-4, 1e-15);
	check_close("sP (mpmath)", sqrt(f.cov[1][1]), 9.4261891784177029e-7, 1e-18);
	check_close("sD (mpmath)", sqrt(f.cov[2][2]), 7.8439121357385909e-9, 1e-20);
	check_close("cov01 (mpmath)", f.cov[0][1], -1.0337817427282696e-10, 1e-21);
	check_close("cov02 (mpmath)", f.cov[0][2], -1.6143587154299057e-12, 1e-23);
	check_close("cov12 (mpmath)", f.cov[1][2], 5.2514288574160092e-15, 1e-26);
	check_close("chi2 (mpmath)", f.chi2, 4.2817555132587846, CHI2_NEAR);
	check_close("BIC (mpmath)", f.bic, 10.520080138298292, CHI2_NEAR);
	assert_int_equal(f.dof, 5);
	struct err e;
	bool quadratic = true;
	assert_int_equal(refit_prefers_quadratic(t, EIGHT, 0.0, &quadratic, &e), ST_OK);
	assert_false(quadratic); /* BIC falls by 2.3 only */
}

/* NIST Statistical Reference Datasets, linear regression, "Pontius" (Pontius P., NIST, load cells; certified
 * to 15 digits, 40 observations; the rows from memory, and found by mpmath to give the certified values).
 * Load in units of 150,000; the certified y = B0 + B1 x + B2 x^2 becomes T0, P = B1 150000, D = 2 B2
 * 150000^2, the certified deviations those scaled by the residual one. */
static void pontius(void **state)
{
	(void)state;
	static const double y[40] = {
	    .11019,  .21956,  .32949,  .43899,	.54803,	 .65694,  .76562,  .87487,  .98292,  1.09146,
	    1.20001, 1.30822, 1.41599, 1.52399, 1.63194, 1.73947, 1.84646, 1.95392, 2.06128, 2.16844,
	    .11052,  .22018,  .32939,  .43886,	.54798,	 .65739,  .76596,  .87474,  .98300,  1.09150,
	    1.20004, 1.30818, 1.41613, 1.52408, 1.63159, 1.73965, 1.84696, 1.95445, 2.06177, 2.16829,
	};
	const double step = 150000.0;
	struct mid_time t[40];
	for (int i = 0; i < 40; i++)
		t[i] = transit(i % 20 + 1, 0.0, y[i], 1.0);
	const struct fit f = fitted(t, 40, 3, 0, 0.0);
	const double scatter = sqrt(f.chi2 / f.dof);
	check_close("B0 (NIST)", after(&f, 0.0), 0.673565789473684e-3, 1e-15);
	check_close("B1 (NIST)", f.period_d / step, 0.732059160401003e-6, 1e-20);
	check_close("B2 (NIST)", f.dpde_d / 2.0 / (step * step), -0.316081871345029e-14, 1e-27);
	check_close("deviation of B0 (NIST)", scatter * sqrt(f.cov[0][0]), 0.107938612033077e-3, 1e-16);
	check_close("deviation of B1 (NIST)", scatter * sqrt(f.cov[1][1]) / step, 0.157817399981659e-9,
		    1e-22);
	check_close("deviation of B2 (NIST)", scatter * sqrt(f.cov[2][2]) / 2.0 / (step * step),
		    0.486652849992036e-16, 1e-29);
	check_close("residual deviation (NIST)", scatter, 0.205177424076185e-3, 1e-16);
}

/* by hand: errors 1 at -1, 0, 1: P = (y3 - y1)/2, T0 the mean, variances 1/2 and 1/3 (JCGM 100:2008 H.3, eqs
 * H.13) */
static void three_times_by_hand(void **state)
{
	(void)state;
	const struct mid_time t[] = {transit(-1, 2459999.0, 0.5, 0.01), transit(0, 2460002.0, 0.53, 0.01),
				     transit(1, 2460005.0, 0.5, 0.01)};
	const struct fit f = fitted(t, 3, 2, 0, 0.0);
	check_close("T0", after(&f, 2460002.0), 0.51, 1e-12);
	check_close("P", f.period_d, 3.0, 1e-12);
	check_close("var T0", f.cov[0][0], 1e-4 / 3.0, 1e-18);
	check_close("var P", f.cov[1][1], 1e-4 / 2.0, 1e-18);
	check_close("cov", f.cov[0][1], 0.0, 1e-18);
	check_close("chi2", f.chi2, 6.0, 1e-7);
	/* jitter in quadrature: 0.01 and 0.01 sqrt(3) make 0.02 */
	const struct fit j = fitted(t, 3, 2, 0, 0.01 * sqrt(3.0));
	check_close("chi2 with jitter", j.chi2, 1.5, 1e-7);
	check_close("var T0 with jitter", j.cov[0][0], 4e-4 / 3.0, 1e-17);
	const struct fit q = fitted(t, 3, 3, 0, 0.0);
	check_close("a parabola through three: D", q.dpde_d, -0.06, 1e-11);
	check_close("nothing left", q.chi2, 0.0, 1e-12);
	check_close("no degrees of freedom: no factor", fit_scale_factor(&q), 1.0, 0.0);
}

static void scale_and_jitter(void **state)
{
	(void)state;
	struct mid_time t[EIGHT];
	struct err e;
	eight(t);
	struct fit f = fitted(t, EIGHT, 2, 0, 0.0);
	check_close("factor sqrt(8.70732585/6)", fit_scale_factor(&f), 1.204666, 5e-7);
	double jitter_d;
	assert_int_equal(refit_jitter(t, EIGHT, 2, &jitter_d, &e), ST_OK);
	check_close("jitter (mpmath)", jitter_d, 1.3747097232057853e-4, 1e-10);
	f.chi2 = 3.0;
	check_close("never less than 1", fit_scale_factor(&f), 1.0, 0.0);
	/* errors that explain the scatter, and a line through two points */
	assert_int_equal(refit_jitter(t, EIGHT, 3, &jitter_d, &e), ST_OK);
	check_close("quadratic: none (mpmath: the slope at 0 is above 0)", jitter_d, 0.0, 0.0);
	assert_int_equal(refit_jitter(t, 2, 2, &jitter_d, &e), ST_OK);
	check_close("two times: none", jitter_d, 0.0, 0.0);
}

/* A fit put together by hand from published numbers, and moved. */
static void moved(void **state)
{
	(void)state;
	struct fit s = {.terms = 2, .t0 = tdb_of(2458350.0, 0.123456), .period_d = 3.4567890};
	s.cov[0][0] = 2.1e-4 * 2.1e-4, s.cov[1][1] = 4.8e-6 * 4.8e-6, s.cov[0][1] = s.cov[1][0] = -6.0e-10;
	const struct fit m = fit_moved(&s, 26);
	check_close("T0'", after(&m, 2458000.0), 439.99997, 1e-9);
	check_close("s0' (mpmath)", sqrt(m.cov[0][0]), 1.6874548882859061e-4, 1e-16);
	check_close("c' (mpmath)", m.cov[0][1], -9.6e-13, 1e-24);
	check_close("sP unchanged", sqrt(m.cov[1][1]), 4.8e-6, 1e-20);
	const struct ephemeris before = fit_ephemeris(&s, 1.0), moved_back = fit_ephemeris(&m, 1.0);
	check_close("sigma at 850", ephemeris_published_d(&before, 850) * DAY_MIN, 5.70038, 5e-6);
	check_close("sigma at 850 by way of 26", ephemeris_published_d(&moved_back, 850) * DAY_MIN, 5.70038,
		    5e-6);

	/* by hand: J C J^T of the invented quadratic ephemeris */
	struct fit q = {.terms = 3, .t0 = tdb_of(2454321.0, 0.1234), .period_d = 2.2, .dpde_d = -2.5e-9};
	const double c[3][3] = {
	    {4.0e-8, -1.5e-11, 4.0e-15}, {-1.5e-11, 1.2e-14, -3.6e-18}, {4.0e-15, -3.6e-18, 1.3e-21}};
	memcpy(q.cov, c, sizeof c);
	const struct fit at_1500 = fit_moved(&q, 1500), at_6000 = fit_moved(&at_1500, 6000);
	check_close("T(1500)", after(&at_1500, 2457621.0), 0.1205875, 1e-9);
	check_close("s(1500)", sqrt(at_1500.cov[0][0]) * DAY_MIN, 0.206153, 5e-7);
	check_close("T(6000)", after(&at_6000, 2467521.0), 0.0784, 1e-9);
	check_close("s(6000) by way of 1500", sqrt(at_6000.cov[0][0]) * DAY_MIN, 0.406274, 5e-7);
	check_close("P(6000)", at_6000.period_d, 2.2 - 1.5e-5, 1e-15);
	const struct ephemeris twice = fit_ephemeris(&at_6000, 2.0);
	check_close("back at 0, errors doubled", sqrt(twice.c00), 4.0e-4, 1e-13);
	check_close("T0 back", jd2_diff_d(twice.t0.jd, q.t0.jd), 0.0, 1e-10);
	check_close("D", twice.dpde_d, -2.5e-9, 0.0);
}

/* The same line with the count begun 3000 orbits earlier and with the days counted from elsewhere: residuals
 * stay. */
static void count_from_elsewhere(void **state)
{
	(void)state;
	struct mid_time t[EIGHT], far[EIGHT];
	eight(t);
	eight(far);
	for (int i = 0; i < EIGHT; i++)
		far[i].epoch += 3000000;
	const struct fit f = fitted(t, EIGHT, 3, 181, 0.0), g = fitted(far, EIGHT, 3, 3000181, 0.0);
	check_close("T0", jd2_diff_d(f.t0.jd, g.t0.jd), 0.0, 1e-12);
	check_close("P", f.period_d, g.period_d, 1e-15);
	for (int i = 0; i < EIGHT; i++)
		check_close("residual", fit_residual_d(&f, &t[i]), fit_residual_d(&g, &far[i]), 1e-12);
}

static void occultations_enter_less_their_delay(void **state)
{
	(void)state;
	struct mid_time t[EIGHT], mixed[EIGHT];
	eight(t);
	eight(mixed);
	for (int i = 0; i < EIGHT; i += 2) {
		mixed[i].kind = KIND_OCCULTATION;
		mixed[i].delay_d = occultation_delay_d(3.4567885, 0.1, 60.0);
		mixed[i].mid.jd = jd2_add_d(mixed[i].mid.jd, mixed[i].delay_d);
	}
	const struct fit f = fitted(t, EIGHT, 2, 0, 0.0), g = fitted(mixed, EIGHT, 2, 0, 0.0);
	check_close("T0", jd2_diff_d(f.t0.jd, g.t0.jd), 0.0, 1e-11);
	check_close("P", f.period_d, g.period_d, 1e-14);
	check_close("chi2", f.chi2, g.chi2, 1e-9);
	check_close("residual", fit_residual_d(&g, &mixed[0]) * DAY_S, eight_rows[0].residual_s, 1e-6);
}

static void unused_times_count_for_nothing(void **state)
{
	(void)state;
	struct mid_time t[EIGHT + 1];
	eight(t);
	t[EIGHT] = transit(900, 2470000.0, 0.25, 1e-5);
	t[EIGHT].used = false;
	const struct fit f = fitted(t, EIGHT, 2, 0, 0.0), g = fitted(t, EIGHT + 1, 2, 0, 0.0);
	assert_memory_equal(&f.cov, &g.cov, sizeof f.cov);
	check_close("T0", jd2_diff_d(f.t0.jd, g.t0.jd), 0.0, 0.0);
	assert_int_equal(g.n, EIGHT);
}

/* A curve that many times show is preferred; one that a single time makes is not. */
static void quadratic_needs_more_than_one_time(void **state)
{
	(void)state;
	struct mid_time t[20];
	struct err e;
	bool quadratic;
	for (int i = 0; i < 20; i++) {
		const double x = 100.0 * i - 1000.0, wiggle = i % 2 ? 1e-4 : -1e-4;
		t[i] = transit(100L * i - 1000, 2459000.0, 2.0 * x - 1e-8 * x * x + wiggle, 2e-4);
	}
	assert_int_equal(refit_prefers_quadratic(t, 20, 0.0, &quadratic, &e), ST_OK);
	assert_true(quadratic);
	assert_int_equal(refit_prefers_quadratic(t, 7, 0.0, &quadratic, &e), ST_OK);
	assert_false(quadratic);
	for (int i = 0; i < 20; i++)
		t[i].mid = tdb_of(2459000.0, 2.0 * (100.0 * i - 1000.0) + (i % 2 ? 1e-4 : -1e-4) +
						 (i == 19 ? 5e-3 : 0.0));
	assert_true(fitted(t, 20, 2, 0, 0.0).bic - fitted(t, 20, 3, 0, 0.0).bic > 10.0);
	assert_int_equal(refit_prefers_quadratic(t, 20, 0.0, &quadratic, &e), ST_OK);
	assert_false(quadratic);
}

static void outliers_of_few_and_many(void **state)
{
	(void)state;
	struct mid_time t[EIGHT];
	struct err e;
	double z[EIGHT];
	eight(t);
	assert_int_equal(refit_outliers(t, 5, 2, z, &e), ST_OK);
	const struct fit f = fitted(t, 5, 2, 0, 0.0);
	for (int i = 0; i < 5; i++)
		check_close("few: r/s", z[i], fit_residual_d(&f, &t[i]) / t[i].err_d, 1e-8);
	t[4].mid.jd = jd2_add_d(t[4].mid.jd, 0.02); /* half an hour late */
	t[4].used = false;			    /* looked at all the same */
	assert_int_equal(refit_outliers(t, EIGHT, 2, z, &e), ST_OK);
	for (int i = 0; i < EIGHT; i++)
		if ((fabs(z[i]) > 4.0) != (i == 4))
			check_fail("time %d: z = %g", i, z[i]);
}

static void counts(void **state)
{
	(void)state;
	/* erfc(1/(2 sqrt 2 x)), x = s/P (mpmath) */
	static const struct {
		double share, chance;
		bool safe;
	} rows[] = {{0.1, 5.7330314375838782e-7, true},
		    {0.2, 1.2419330651552270e-2, false},
		    {0.3, 9.5580704545629416e-2, false},
		    {0.16666, NAN, true},
		    {0.16667, NAN, false}};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		const struct ephemeris e = {
		    .t0 = tdb_of(2458350.0, 0.5), .period_d = 4.0, .c00 = pow(4.0 * rows[i].share, 2.0)};
		const struct epoch_guess g =
		    epoch_of(&e, tdb_of(2458350.0, 0.5 + 4.0 * 100.0 - 1.5), 0.0, 0.0);
		assert_int_equal(g.epoch, 100);
		assert_int_equal(g.safe, rows[i].safe);
		if (!isnan(rows[i].chance))
			check_close("chance of a wrong count", g.wrong_chance, rows[i].chance,
				    1e-12 + 1e-10 * rows[i].chance);
		check_close("off", g.off_d, -1.5, 1e-9);
		check_close("P by epoch 99", g.period_before_d, 398.5 / 99.0, 1e-12);
		check_close("P by epoch 101", g.period_after_d, 398.5 / 101.0, 1e-12);
	}
	/* the time's own error, the standard and the timing variations count too: hypot(0.3, 0.4, 0.5, 1.2)
	 * = 1.4 */
	const struct ephemeris e = {.t0 = tdb_of(2458350.0, 0.5),
				    .period_d = 8.0,
				    .c00 = 0.09,
				    .systematic_min = 0.4 * DAY_MIN,
				    .ttv_min = 0.5 * sqrt(2.0) * DAY_MIN};
	check_close("sigma", epoch_of(&e, tdb_of(2458350.0, 0.5), 1.2, 0.0).sigma_d,
		    sqrt(0.09 + 0.16 + 0.25 + 1.44), 1e-12);
	assert_false(epoch_of(&e, tdb_of(2458350.0, 0.5), 1.2, 0.0).safe);
	assert_true(epoch_of(&e, tdb_of(2458350.0, 0.5), 0.1, 0.0).safe);
	assert_true(
	    isnan(epoch_of(&e, tdb_of(2458342.0, 0.5), 0.1, 0.0).period_after_d)); /* -1: T0 itself is next */
	/* an occultation belongs to the transit before it */
	const struct epoch_guess o = epoch_of(&e, tdb_of(2458350.0, 0.5 + 8.0 * 7.0 + 4.9), 0.1, 4.9);
	assert_int_equal(o.epoch, 7);
	check_close("occultation", o.off_d, 0.0, 1e-9);
}

static void counts_refused(void **state)
{
	(void)state;
	const struct tdb t = tdb_of(2459000.0, 0.5);
	const struct ephemeris unknown = {.t0 = tdb_of(2458350.0, 0.5), .period_d = 4.0, .c00 = NAN};
	const struct ephemeris none = {.t0 = tdb_of(2458350.0, 0.5), .period_d = 0.0, .c00 = 1e-8};
	assert_false(epoch_of(&unknown, t, 1e-4, 0.0).safe);
	assert_true(isnan(epoch_of(&unknown, t, 1e-4, 0.0).wrong_chance));
	assert_false(epoch_of(&none, t, 1e-4, 0.0).safe);
	const struct ephemeris good = {.t0 = tdb_of(2458350.0, 0.5), .period_d = 4.0, .c00 = 1e-8};
	assert_false(epoch_of(&good, t, NAN, 0.0).safe);
	/* half an orbit off: nothing to do with how well the count is known */
	check_close("half", fabs(epoch_of(&good, tdb_of(2458352.0, 0.5), 1e-4, 0.0).off_d), 2.0, 1e-9);
	/* a shrinking period: the candidates keep the quadratic term */
	const struct ephemeris curved = {
	    .t0 = tdb_of(2458350.0, 0.0), .period_d = 2.0, .dpde_d = -1e-5, .c00 = 1e-8};
	const struct epoch_guess g = epoch_of(&curved, ephemeris_mid(&curved, 1000), 1e-4, 0.0);
	assert_int_equal(g.epoch, 1000);
	check_close("T(1000) = 1000 P + D 500000 with one fewer",
		    999.0 * g.period_before_d - 1e-5 * 999.0 * 999.0 / 2.0, 1995.0, 1e-9);
}

/* mpmath: fit of the first four, then one at a time */
static void prior_and_new_times(void **state)
{
	(void)state;
	static const double z[EIGHT] = {0.0,
					0.0,
					0.0,
					0.0,
					-0.051326507502704692,
					-1.3996614011484358,
					-0.48557064899647430,
					-2.3976333753945911};
	struct mid_time t[EIGHT];
	struct err e;
	eight(t);
	const struct fit four = fitted(t, 4, 2, 0, 0.0), all = fitted(t, EIGHT, 2, 0, 0.0);
	check_close("T0 of four", after(&four, 2458000.0), 1777.1167558368750, 2e-12);
	check_close("P of four", four.period_d, 3.4567907652327116, 1e-14);
	check_close("s0 of four", sqrt(four.cov[0][0]), 7.2071066684226662e-4, 1e-15);
	check_close("sP of four", sqrt(four.cov[1][1]), 2.2308023912623749e-6, 1e-18);
	check_close("cov of four", four.cov[0][1], 1.5222246101692162e-9, 1e-21);
	struct ephemeris eph = fit_ephemeris(&four, 1.0);
	double chi2 = four.chi2;
	for (int i = 4; i < EIGHT; i++) {
		struct update u;
		assert_int_equal(ephemeris_update(&eph, &t[i], &u, &e), ST_OK);
		check_close("z", u.z, z[i], 1e-8);
		chi2 += u.z * u.z;
	}
	check_close("T0", jd2_diff_d(eph.t0.jd, all.t0.jd), 0.0, 1e-11);
	check_close("P", eph.period_d, all.period_d, 1e-14);
	check_close("c00", eph.c00, all.cov[0][0], 1e-13 * all.cov[0][0]);
	check_close("c01", eph.c01, all.cov[0][1], 1e-12 * all.cov[0][1]);
	check_close("c11", eph.c11, all.cov[1][1], 1e-13 * all.cov[1][1]);
	check_close("chi2(4) + sum z^2", chi2, 8.7073258503316254, 1e-8);
}

/* mpmath: prior without covariance, one time at epoch 800 */
static void update_of_a_diagonal_prior(void **state)
{
	(void)state;
	struct ephemeris eph = {
	    .t0 = tdb_of(2458350.0, 0.0), .period_d = 3.5, .c00 = 2.1e-4 * 2.1e-4, .c11 = 4.8e-6 * 4.8e-6};
	const struct mid_time t = {
	    .epoch = 800, .mid = tdb_of(2458350.0, 2800.25), .delay_d = 0.25, .err_d = 7e-4};
	struct update u;
	struct err e;
	assert_int_equal(ephemeris_update(&eph, &t, &u, &e), ST_OK);
	check_close("on the line", u.z, 0.0, 1e-6);
	check_close("sP", sqrt(eph.c11), 8.9741869529549241e-7, 1e-19);
	check_close("cov", eph.c01, -5.3198112528387337e-11, 1e-23);
	check_close("var T0", eph.c00, 4.3972719359673292e-8, 1e-21);
	check_close("a linear prior stays linear", eph.dpde_d, 0.0, 0.0);
}

static void expect_refused(const struct mid_time t[], size_t n, int terms, double jitter_d, const char *says)
{
	struct fit f;
	struct err e;
	if (refit(t, n, terms, 0, jitter_d, &f, &e) != ST_RANGE || !strstr(e.text, says))
		check_fail("not refused with \"%s\": %s", says, e.text);
}

static void refusals(void **state)
{
	(void)state;
	struct mid_time t[EIGHT];
	eight(t);
	expect_refused(t, 1, 2, 0.0, "1 time; a linear fit needs 2 or more");
	expect_refused(t, 2, 3, 0.0, "2 times; a quadratic fit needs 3 or more");
	expect_refused(t, EIGHT, 4, 0.0, "2 or 3 terms");
	expect_refused(t, EIGHT, 2, -1e-4, "jitter");
	expect_refused(t, EIGHT, 2, NAN, "jitter");
	const double bad_error[] = {0.0, -1e-4, NAN, INFINITY};
	for (size_t i = 0; i < 4; i++) {
		t[3].err_d = bad_error[i];
		expect_refused(t, EIGHT, 2, 0.0, "epoch -120 has an error of");
		double z[EIGHT], jitter_d;
		bool quadratic;
		struct err e;
		assert_int_equal(refit_outliers(t, EIGHT, 2, z, &e), ST_RANGE);
		assert_int_equal(refit_jitter(t, EIGHT, 2, &jitter_d, &e), ST_RANGE);
		assert_int_equal(refit_prefers_quadratic(t, EIGHT, 0.0, &quadratic, &e), ST_RANGE);
	}
	t[3].used = false; /* and is not looked at when it is not used */
	assert_int_equal(fitted(t, EIGHT, 2, 0, 0.0).n, EIGHT - 1);
	eight(t);
	for (int i = 0; i < EIGHT; i++)
		t[i].epoch = 5;
	expect_refused(t, EIGHT, 2, 0.0, "of 1 epoch;");
	for (int i = 0; i < EIGHT; i++)
		t[i].epoch = 5 + i % 2;
	expect_refused(t, EIGHT, 3, 0.0, "of 2 epochs;");
	eight(t);
	for (int i = 0; i < EIGHT; i++)
		t[i].epoch = -t[i].epoch; /* time runs backwards */
	expect_refused(t, EIGHT, 2, 0.0, "must be above 0");
	eight(t);
	t[2].mid.jd.frac = NAN;
	expect_refused(t, EIGHT, 2, 0.0, "is no number");
}

static void updates_refused(void **state)
{
	(void)state;
	struct ephemeris eph = {.t0 = tdb_of(2458350.0, 0.0), .period_d = 3.5, .c00 = NAN, .c11 = 1e-12};
	struct mid_time t = transit(10, 2458385.0, 0.0, 1e-3);
	struct update u;
	struct err e;
	assert_int_equal(ephemeris_update(&eph, &t, &u, &e), ST_RANGE);
	eph.c00 = 1e-8;
	t.err_d = 0.0;
	assert_int_equal(ephemeris_update(&eph, &t, &u, &e), ST_RANGE);
	t = transit(10, 2400000.0, 0.0, 1e-9); /* so far off that the period would turn */
	const struct ephemeris before = eph;
	assert_int_equal(ephemeris_update(&eph, &t, &u, &e), ST_RANGE);
	assert_memory_equal(&before, &eph, sizeof eph);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(linear_fit),
	    cmocka_unit_test(quadratic_fit),
	    cmocka_unit_test(pontius),
	    cmocka_unit_test(three_times_by_hand),
	    cmocka_unit_test(scale_and_jitter),
	    cmocka_unit_test(moved),
	    cmocka_unit_test(count_from_elsewhere),
	    cmocka_unit_test(occultations_enter_less_their_delay),
	    cmocka_unit_test(unused_times_count_for_nothing),
	    cmocka_unit_test(quadratic_needs_more_than_one_time),
	    cmocka_unit_test(outliers_of_few_and_many),
	    cmocka_unit_test(counts),
	    cmocka_unit_test(counts_refused),
	    cmocka_unit_test(prior_and_new_times),
	    cmocka_unit_test(update_of_a_diagonal_prior),
	    cmocka_unit_test(refusals),
	    cmocka_unit_test(updates_refused),
	};
	return cmocka_run_group_tests_name("refit", tests, NULL, NULL);
}
