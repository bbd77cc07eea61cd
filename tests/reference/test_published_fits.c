/* SPDX-License-Identifier: MIT
 * Published tables of mid-times and the ephemerides that their authors fitted to them: Bouma et al. 2020,
 * ApJL 893, L29; Ivshina & Winn 2022, ApJS 259,
 * 62. "mpmath": the same table fitted by an own run of mpmath 1.3.0 at 40 digits. */
#include "ephem/refit.h"

#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/midtime_rows.h"

#include <math.h>

#define MS_PER_YEAR (YEAR_D * DAY_S * 1000.0) /* of dP/dt, which has no dimension */

static struct fit fitted(const struct midtime_rows *m, int terms, double jitter_d)
{
	struct fit f;
	struct err e;
	if (refit(m->t, m->n, terms, 0, jitter_d, &f, &e))
		check_fail("refit: %s", e.text);
	return f;
}

static double after(const struct fit *f, double day)
{
	return jd2_diff_d(f->t0.jd, (struct jd2){day, 0.0});
}

/* Bouma et al. 2020, ApJL 893, L29: best-fit table, errors inflated by the root of chi2/dof */
static void wasp_4(void **state)
{
	(void)state;
	struct midtime_rows m;
	midtime_rows_read("midtimes_wasp4b.csv", &m);
	assert_int_equal(m.n, 93);
	const struct fit line = fitted(&m, 2, 0.0), curve = fitted(&m, 3, 0.0);
	const double by = fit_scale_factor(&line), by_curve = fit_scale_factor(&curve);
	/* the last digits that the paper prints */
	check_close("T0 (paper)", after(&line, 2456180.0), 0.558712, 1e-6);
	check_close("error of T0 (paper)", by * sqrt(line.cov[0][0]), 24e-6, 0.5e-6);
	check_close("P (paper)", line.period_d, 1.338231429, 0.5e-9);
	check_close("error of P (paper)", by * sqrt(line.cov[1][1]), 26e-9, 0.5e-9);
	check_close("chi2 (paper)", line.chi2, 276.0, 0.5);
	assert_int_equal(line.dof, 91);
	check_close("chi2 of the quadratic (paper)", curve.chi2, 183.0, 0.5);
	/* the paper's value is the median of a posterior, this the least squares: 2 % of the error apart */
	check_close("dP/dt [ms/yr] (paper)", curve.dpde_d / curve.period_d * MS_PER_YEAR, -8.64, 0.03 * 1.26);
	check_close("error of dP/dt [ms/yr] (paper)",
		    by_curve * sqrt(curve.cov[2][2]) / curve.period_d * MS_PER_YEAR, 1.26, 0.02);
	check_close("T0 (mpmath)", after(&line, 2456180.0), 0.55871211220712346, 1e-11);
	check_close("P (mpmath)", line.period_d, 1.3382314291118245, 1e-14);
	check_close("s0 (mpmath)", sqrt(line.cov[0][0]), 1.4028641218935003e-5, 1e-16);
	check_close("sP (mpmath)", sqrt(line.cov[1][1]), 1.4914781585704962e-8, 1e-19);
	check_close("chi2 (mpmath)", line.chi2, 276.42380371024434, 1e-5);
	check_close("T0, quadratic (mpmath)", after(&curve, 2456180.0), 0.55887192804711221, 1e-11);
	check_close("P, quadratic (mpmath)", curve.period_d, 1.3382315021195496, 1e-14);
	check_close("D (mpmath)", curve.dpde_d, -3.6725121066214114e-10, 1e-18);
	check_close("sD (mpmath)", sqrt(curve.cov[2][2]), 3.7942449685656880e-11, 1e-21);
	check_close("chi2, quadratic (mpmath)", curve.chi2, 182.73757899539866, 1e-5);
	struct err e;
	bool quadratic = false;
	assert_int_equal(refit_prefers_quadratic(m.t, m.n, 0.0, &quadratic, &e), ST_OK);
	assert_true(quadratic);
}

/* Ivshina & Winn 2022, ApJS 259, 62, Table 3: no extra scatter added. The paper's values are from a sampled
 * posterior: T0 lies a ninth of its error off. */
static void kelt_16(void **state)
{
	(void)state;
	struct midtime_rows m;
	midtime_rows_read("midtimes_kelt16b.csv", &m);
	assert_int_equal(m.n, 68);
	const struct fit line = fitted(&m, 2, 0.0);
	check_close("T0 (paper)", after(&line, 2458334.0), 0.458029, 83e-6 / 8.0);
	check_close("error of T0 (paper)", sqrt(line.cov[0][0]), 83e-6, 2e-6);
	check_close("P (paper)", line.period_d, 0.96899285, 11e-8 / 8.0);
	check_close("error of P (paper)", sqrt(line.cov[1][1]), 11e-8, 0.5e-8);
	check_close("chi2 (paper, no decimals)", line.chi2, 64.0, 1.0);
	check_close("T0 (mpmath)", after(&line, 2458334.0), 0.4580207675181362, 1e-11);
	check_close("P (mpmath)", line.period_d, 0.96899285640480257, 1e-14);
	check_close("chi2 (mpmath)", line.chi2, 64.710426566472960, 1e-7);
	struct err e;
	bool quadratic = true;
	double jitter_d;
	assert_int_equal(refit_prefers_quadratic(m.t, m.n, 0.0, &quadratic, &e), ST_OK);
	assert_false(quadratic);
	assert_int_equal(refit_jitter(m.t, m.n, 2, &jitter_d, &e), ST_OK);
	check_close("no jitter needed", jitter_d, 0.0, 1e-6);
}

/* Ivshina & Winn 2022, ApJS 259, 62, Table 3: 0.00449 d of extra scatter added to every error. */
static void tres_3(void **state)
{
	(void)state;
	struct midtime_rows m;
	struct err e;
	double z[MIDTIME_ROWS_MAX];
	midtime_rows_read("midtimes_tres3b.csv", &m);
	assert_int_equal(m.n, 249);
	assert_int_equal(refit_outliers(m.t, m.n, 2, z, &e), ST_OK);
	int flagged = 0;
	for (size_t i = 0; i < m.n; i++) {
		if (fabs(z[i]) > 4.0) {
			flagged++;
			print_message("TrES-3 b: epoch %ld, error %g d, z %.1f\n", m.t[i].epoch, m.t[i].err_d,
				      z[i]);
		}
		if (m.t[i].epoch == 1308) { /* 0.575 d off: the worst by far */
			if (!(fabs(z[i]) > 100.0))
				check_fail("the time 0.575 d off has z = %g", z[i]);
			m.t[i].used = false;
		}
		if (m.t[i].err_d < 1e-5 && !(fabs(z[i]) > 4.0))
			check_fail("the error of %g d is not flagged: z = %g", m.t[i].err_d, z[i]);
	}
	assert_true(flagged >= 2 && flagged <= 5);
	const struct fit line = fitted(&m, 2, 0.00449), bare = fitted(&m, 2, 0.0);
	assert_int_equal(line.n, 248);
	check_close("T0 (paper)", after(&line, 2456824.0), 0.4074, 0.5e-4);
	check_close("error of T0 (paper)", sqrt(line.cov[0][0]), 3e-4, 0.5e-4);
	check_close("P (paper)", line.period_d, 1.30618627, 1e-8);
	check_close("error of P (paper)", sqrt(line.cov[1][1]), 21e-8, 0.5e-8);
	check_close("T0 (mpmath)", after(&line, 2456824.0), 0.40739571638464633, 1e-11);
	check_close("P (mpmath)", line.period_d, 1.3061862649309261, 1e-14);
	check_close("chi2 (mpmath)", line.chi2, 10.945165164628655, 1e-8);
	check_close("T0, no jitter (mpmath)", after(&bare, 2456824.0), 0.40777925034790148, 1e-10);
	check_close("P, no jitter (mpmath)", bare.period_d, 1.3061865467975836, 1e-13);
	check_close("chi2, no jitter (mpmath)", bare.chi2, 1632.9116273196795, 1e-3);
	double with, without;
	assert_int_equal(refit_jitter(m.t, m.n, 2, &without, &e), ST_OK);
	for (size_t i = 0; i < m.n; i++)
		m.t[i].used = true;
	assert_int_equal(refit_jitter(m.t, m.n, 2, &with, &e), ST_OK);
	print_message("TrES-3 b: jitter with the outlier %.5f d, without %.5f d (paper 0.00449 d)\n", with,
		      without);
	assert_true(without < 0.001 && with > 0.02);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(wasp_4), cmocka_unit_test(kelt_16),
					   cmocka_unit_test(tres_3)};
	return cmocka_run_group_tests_name("published fits", tests, NULL, NULL);
}
