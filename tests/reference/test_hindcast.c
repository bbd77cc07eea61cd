/* SPDX-License-Identifier: MIT
 * The first half of every published table is fitted, the rest predicted: do chances come true? Tables: Bouma
 * et al. 2020, ApJL 893, L29; Ivshina & Winn 2022, ApJS 259, 62. The numbers are printed; only gross faults
 * fail, since stars do as they like. */
#include "ephem/chance.h"
#include "ephem/refit.h"
#include "tests/support/check.h"
#include "tests/support/midtime_rows.h"

#include <math.h>
#include <stdlib.h>

/* Chances promised, and how many sigma either side have them (normal distribution, Abramowitz & Stegun 1964,
 * table 26.5). */
static const struct {
	double chance, sigmas;
} promises[] = {{0.5, 0.674489750}, {0.8, 1.281551566}, {0.95, 1.959963985}};
enum { PROMISES = 3 };

static int by_epoch(const void *a, const void *b)
{
	const struct mid_time *x = a, *y = b;
	const double apart = jd2_diff_d(x->mid.jd, y->mid.jd);
	return x->epoch != y->epoch ? (x->epoch > y->epoch) - (x->epoch < y->epoch)
				    : (apart > 0.0) - (apart < 0.0);
}

struct score {
	size_t n;
	double rms_z;
	double came_true[PROMISES];
};

/* Later times against a fit: its errors times `scale`, the times' own times `scale_times` and with the fit's
 * jitter. */
static struct score score(const struct fit *f, double scale, double scale_times, const struct mid_time t[],
			  size_t n)
{
	struct score s = {.n = 0};
	for (size_t i = 0; i < n; i++) {
		if (!t[i].used)
			continue;
		const double predicted = scale * sqrt(fit_moved(f, t[i].epoch).cov[0][0]);
		const double measured = scale_times * hypot(t[i].err_d, f->jitter_d);
		const double z = fit_residual_d(f, &t[i]) / hypot(predicted, measured);
		s.n++;
		s.rms_z += z * z;
		for (int k = 0; k < PROMISES; k++)
			s.came_true[k] += fabs(z) < promises[k].sigmas;
	}
	s.rms_z = sqrt(s.rms_z / (double)s.n);
	for (int k = 0; k < PROMISES; k++)
		s.came_true[k] /= (double)s.n;
	return s;
}

static void tell(const char *name, const char *how, struct score s)
{
	print_message("%-10s %-34s %3zu predicted, rms z %6.2f, chance 0.5: %.3f, 0.8: %.3f, 0.95: %.3f\n",
		      name, how, s.n, s.rms_z, s.came_true[0], s.came_true[1], s.came_true[2]);
}

static const struct {
	const char *name, *file;
	bool steady; /* no change of period was published (WASP-4 b: Bouma et al. 2020) */
} tables[] = {{"WASP-4 b", "midtimes_wasp4b.csv", false},
	      {"KELT-16 b", "midtimes_kelt16b.csv", true},
	      {"TrES-3 b", "midtimes_tres3b.csv", true}};

static struct fit fitted(const struct mid_time t[], size_t n, int terms, double jitter_d)
{
	struct fit f;
	struct err e;
	if (refit(t, n, terms, REF_EPOCH_BEST, jitter_d, &f, &e))
		check_fail("refit: %s", e.text);
	return f;
}

static void first_half_predicts_the_rest(void **state)
{
	(void)state;
	for (size_t i = 0; i < PROMISES; i++)
		check_close("sigmas of a chance", normal_between(-promises[i].sigmas, promises[i].sigmas),
			    promises[i].chance, 1e-9);
	for (size_t i = 0; i < sizeof tables / sizeof *tables; i++) {
		struct midtime_rows m;
		struct err e;
		double z[MIDTIME_ROWS_MAX], jitter_d;
		midtime_rows_read(tables[i].file, &m);
		qsort(m.t, m.n, sizeof *m.t, by_epoch);
		const size_t half = m.n / 2;
		/* as an observer would: what stands out in the half at hand is left out of its fit */
		assert_int_equal(refit_outliers(m.t, half, 2, z, &e), ST_OK);
		size_t out = 0;
		for (size_t k = 0; k < half; k++)
			if (fabs(z[k]) > 4.0) {
				m.t[k].used = false;
				out++;
			}
		assert_int_equal(refit_jitter(m.t, half, 2, &jitter_d, &e), ST_OK);
		const struct fit line = fitted(m.t, half, 2, 0.0), loose = fitted(m.t, half, 2, jitter_d);
		const double scale = fit_scale_factor(&line);
		/* a later time more than an hour off is no mid-time of this count */
		for (size_t k = half; k < m.n; k++)
			if (fabs(fit_residual_d(&line, &m.t[k])) > 1.0 / 24.0) {
				m.t[k].used = false;
				print_message("%-10s epoch %ld is %.3f d off: not scored\n", tables[i].name,
					      m.t[k].epoch, fit_residual_d(&line, &m.t[k]));
			}
		print_message("%-10s fitted %zu (%zu flagged), error scale %.3f, jitter %.1f s, last epoch "
			      "%ld, predicted to %ld\n",
			      tables[i].name, line.n, out, scale, jitter_d * 86400.0, m.t[half - 1].epoch,
			      m.t[m.n - 1].epoch);
		const struct score formal = score(&line, 1.0, 1.0, m.t + half, m.n - half);
		const struct score scaled = score(&line, scale, scale, m.t + half, m.n - half);
		const struct score jittered = score(&loose, 1.0, 1.0, m.t + half, m.n - half);
		tell(tables[i].name, "formal errors", formal);
		tell(tables[i].name, "error scale on the prediction",
		     score(&line, scale, 1.0, m.t + half, m.n - half));
		tell(tables[i].name, "error scale on both", scaled);
		tell(tables[i].name, "jitter", jittered);
		/* a line for a star whose period changes must miss; the parabola of the same half says that
		 * it does not know */
		const struct fit curve = fitted(m.t, half, 3, jitter_d);
		const struct score curved = score(&curve, 1.0, 1.0, m.t + half, m.n - half);
		tell(tables[i].name, "quadratic with jitter", curved);
		assert_true(scaled.rms_z <= formal.rms_z && scaled.rms_z < 4.0 && jittered.rms_z < 4.0 &&
			    curved.rms_z < 4.0);
		if (tables[i].steady)
			for (int k = 0; k < PROMISES; k++)
				assert_true(fabs(jittered.came_true[k] - promises[k].chance) < 0.25);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(first_half_predicts_the_rest)};
	return cmocka_run_group_tests_name("hindcast", tests, NULL, NULL);
}
