/* SPDX-License-Identifier: MIT
 * Whatever the times: updating a prior equals fitting all at once, moving the reference changes no
 * prediction, the order of times is nothing, planted outliers are found, planted jitter comes back. */
#include "ephem/refit.h"

#include "ephem/drift.h"
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/midtime_rows.h"

#include <math.h>
#include <stdlib.h>

enum { TIMES_MAX = 60 };

struct invented {
	size_t n;
	struct mid_time t[TIMES_MAX];
};

static void ok(enum status s, const struct err *e)
{
	if (s)
		check_fail("refused: %s", e->text);
}

struct recipe {
	size_t n;
	bool far;	  /* epoch 0 up to 4000 orbits from the data; else among them */
	double extra_d;	  /* scatter that the errors do not tell */
	double err_max_d; /* errors from 1e-4 d to this */
};

/* Times with normal errors along a line or a parabola, in no order, some occultations, some epochs twice. */
static void invent(struct rng *r, struct recipe how, struct invented *out)
{
	const double period = exp(rng_between(r, log(0.3), log(30.0))),
		     dpde = rng_between(r, -1e-9, 1e-9) * period;
	const struct tdb t0 = tdb_of(floor(rng_between(r, 2454000.0, 2461000.0)), rng_unit(r));
	const double span = rng_between(r, 60.0, 3000.0);
	const double start = how.far ? rng_between(r, -4000.0, 1000.0) : span * rng_between(r, -1.0, 0.0);
	out->n = how.n;
	for (size_t i = 0; i < how.n; i++) {
		/* the first three lie well apart, so that a parabola is always fixed */
		const double at = i < 3 ? start + span * (double)i / 2.0 : start + span * rng_unit(r);
		const double x = round(at), err_d = exp(rng_between(r, log(1e-4), log(how.err_max_d)));
		const double delay_d = rng_unit(r) < 0.2 ? 0.5 * period * rng_between(r, 0.8, 1.2) : 0.0;
		const double off_d = hypot(err_d, how.extra_d) * rng_normal(r);
		out->t[i] = (struct mid_time){
		    .epoch = (long)x,
		    .kind = delay_d > 0.0 ? KIND_OCCULTATION : KIND_TRANSIT,
		    .mid = {jd2_add_d(jd2_add_d(t0.jd, x * (period + 0.5 * dpde * x)), delay_d + off_d)},
		    .err_d = err_d,
		    .delay_d = delay_d,
		    .used = true};
	}
}

static void shuffle(struct rng *r, struct mid_time t[], size_t n)
{
	for (size_t i = n; i > 1; i--) {
		const size_t k = (size_t)(rng_unit(r) * (double)i);
		const struct mid_time kept = t[i - 1];
		t[i - 1] = t[k];
		t[k] = kept;
	}
}

/* Predictions of two ephemerides over the data and as far again: differences within `share` of sigma, sigmas
 * within `share`. */
static void same_predictions(const struct ephemeris *a, const struct ephemeris *b, const struct invented *v,
			     double share)
{
	long lo = v->t[0].epoch, hi = lo;
	for (size_t i = 0; i < v->n; i++) {
		lo = v->t[i].epoch < lo ? v->t[i].epoch : lo;
		hi = v->t[i].epoch > hi ? v->t[i].epoch : hi;
	}
	for (long epoch = lo; epoch <= 2 * hi - lo; epoch += (hi - lo) / 7 + 1) {
		const double sigma = ephemeris_published_d(a, epoch);
		const double apart = ephemeris_mid_after_d(a, epoch, ephemeris_mid(b, epoch));
		/* 1e-9 d: 10 times the rounding of a period of 30 d in each of up to 56 updates, 7000 orbits
		 * on */
		check_close("mid-time", apart, 0.0, 1e-9 + share * sigma);
		check_close("sigma", ephemeris_published_d(b, epoch) / sigma, 1.0, share);
	}
}

static void update_equals_batch(void **state)
{
	(void)state;
	struct rng r = rng_open("update_equals_batch");
	for (int loop = 0; loop < 3000; loop++) {
		const bool far = loop % 4 == 0; /* lines only: a parabola from far off has lost its digits */
		struct invented v;
		struct fit first, all;
		struct err e;
		const int terms = 2 + loop % 2;
		const size_t n = 8 + (size_t)(rng_unit(&r) * (TIMES_MAX - 8)),
			     start = 4 + (size_t)(rng_unit(&r) * (double)(n - 5));
		invent(&r, (struct recipe){.n = n, .far = far, .err_max_d = 2e-3}, &v);
		ok(refit(v.t, start, terms, 0, 0.0, &first, &e), &e);
		ok(refit(v.t, n, terms, 0, 0.0, &all, &e), &e);
		struct ephemeris grown = fit_ephemeris(&first, 1.0), reverse = grown;
		const struct ephemeris batch = fit_ephemeris(&all, 1.0);
		double chi2 = first.chi2;
		for (size_t i = start; i < n; i++) {
			struct update u;
			ok(ephemeris_update(&grown, &v.t[i], &u, &e), &e);
			chi2 += u.z * u.z;
		}
		for (size_t i = n; i > start; i--) {
			struct update u;
			ok(ephemeris_update(&reverse, &v.t[i - 1], &u, &e), &e);
		}
		/* an ephemeris at epoch 0 far from its data keeps fewer digits the farther: the ratio of
		 * variances times eps for the 1e4 roundings of up to 56 updates */
		double share = 1e-9;
		if (far) {
			struct fit best[2];
			ok(refit(v.t, start, terms, REF_EPOCH_BEST, 0.0, &best[0], &e), &e);
			ok(refit(v.t, n, terms, REF_EPOCH_BEST, 0.0, &best[1], &e), &e);
			share +=
			    5e-12 * (first.cov[0][0] / best[0].cov[0][0] + all.cov[0][0] / best[1].cov[0][0]);
		}
		same_predictions(&batch, &grown, &v, share);
		same_predictions(&batch, &reverse, &v, share);
		check_close("chi2 + sum z^2", chi2 / all.chi2, 1.0, 1e-6);
	}
}

static void moving_changes_no_prediction(void **state)
{
	(void)state;
	struct rng r = rng_open("moving_changes_no_prediction");
	for (int loop = 0; loop < 2000; loop++) {
		struct invented v;
		struct fit best, direct;
		struct err e;
		invent(&r, (struct recipe){.n = 10, .far = true, .err_max_d = 2e-3}, &v);
		ok(refit(v.t, v.n, 2 + loop % 2, REF_EPOCH_BEST, 0.0, &best, &e), &e);
		const long to = best.ref_epoch + (long)rng_between(&r, -3000.0, 3000.0);
		const struct fit there = fit_moved(&best, to), back = fit_moved(&there, best.ref_epoch);
		ok(refit(v.t, v.n, 2 + loop % 2, to, 0.0, &direct, &e), &e);
		for (size_t i = 0; i < v.n; i++) {
			check_close("residual", fit_residual_d(&there, &v.t[i]),
				    fit_residual_d(&best, &v.t[i]), 1e-10);
			check_close("residual of a fit at that epoch", fit_residual_d(&direct, &v.t[i]),
				    fit_residual_d(&best, &v.t[i]), 1e-10);
		}
		/* what doubles keep on the way: eps times the ratio of variances */
		const double ratio = there.cov[0][0] / best.cov[0][0];
		check_close("sigma there and back", back.cov[0][0] / best.cov[0][0], 1.0,
			    1e-13 + 4e-14 * ratio);
		if (loop % 2 == 0 && !(fabs(best.cov[0][1]) <= 0.5001 * best.cov[1][1]))
			check_fail("covariance at the best epoch: %g, var P %g", best.cov[0][1],
				   best.cov[1][1]);
	}
}

static void order_of_times_is_nothing(void **state)
{
	(void)state;
	struct rng r = rng_open("order_of_times_is_nothing");
	for (int loop = 0; loop < 500; loop++) {
		struct invented v;
		struct fit a, b;
		struct err e;
		double jitter_a, jitter_b;
		invent(&r, (struct recipe){.n = 20, .extra_d = loop % 3 ? 5e-4 : 0.0, .err_max_d = 2e-3}, &v);
		ok(refit(v.t, v.n, 3, 0, 1e-4, &a, &e), &e);
		ok(refit_jitter(v.t, v.n, 3, &jitter_a, &e), &e);
		shuffle(&r, v.t, v.n);
		ok(refit(v.t, v.n, 3, 0, 1e-4, &b, &e), &e);
		ok(refit_jitter(v.t, v.n, 3, &jitter_b, &e), &e);
		const struct ephemeris x = fit_ephemeris(&a, 1.0), y = fit_ephemeris(&b, 1.0);
		same_predictions(&x, &y, &v, 1e-8);
		check_close("jitter", jitter_b, jitter_a, 1e-4 * jitter_a + 1e-8);
	}
}

/* chi2 of a fit follows its distribution: mean n - k, variance 2 (n - k); so do the predictions: a quarter of
 * the epochs of the span later. */
static void chi2_and_predictions_are_fair(void **state)
{
	(void)state;
	struct rng r = rng_open("chi2_and_predictions_are_fair");
	enum { LOOPS = 4000 };
	double chi2 = 0.0, z2 = 0.0;
	for (int loop = 0; loop < LOOPS; loop++) {
		struct invented v;
		struct fit f;
		struct err e;
		invent(&r, (struct recipe){.n = 13, .far = true, .err_max_d = 2e-3}, &v);
		const struct mid_time last = v.t[2]; /* the latest: left out of the fit */
		v.t[2] = v.t[12];
		ok(refit(v.t, 12, 3, REF_EPOCH_BEST, 0.0, &f, &e), &e);
		chi2 += f.chi2 / LOOPS;
		const struct fit there = fit_moved(&f, last.epoch);
		const double z = fit_residual_d(&f, &last) / hypot(last.err_d, sqrt(there.cov[0][0]));
		z2 += z * z / LOOPS;
	}
	check_close("mean chi2 of 9 degrees of freedom", chi2, 9.0, 5.0 * sqrt(18.0 / LOOPS));
	check_close("mean z^2 of a prediction", z2, 1.0, 5.0 * sqrt(2.0 / LOOPS));
}

/* Two in thirty, 10 to 1000 sigma off: both flagged; of the good ones fewer than in a thousand and a half are
 * (normal: 6e-5, small samples more). */
static void outliers_are_found(void **state)
{
	(void)state;
	struct rng r = rng_open("outliers_are_found");
	int false_alarms = 0, good = 0, missed = 0, planted = 0;
	for (int loop = 0; loop < 1000; loop++) {
		struct invented v;
		struct err e;
		double z[TIMES_MAX];
		invent(&r, (struct recipe){.n = 30, .err_max_d = 4e-4}, &v);
		for (size_t i = 10; i < 12; i++) {
			const double sigmas =
			    exp(rng_between(&r, log(10.0), log(1000.0))) * (rng_unit(&r) < 0.5 ? -1.0 : 1.0);
			v.t[i].mid.jd = jd2_add_d(v.t[i].mid.jd, sigmas * v.t[i].err_d);
			v.t[i].used = loop % 2 == 0;
		}
		ok(refit_outliers(v.t, v.n, 3, z, &e), &e);
		for (size_t i = 0; i < v.n; i++) {
			const bool flagged = fabs(z[i]) > 4.0, bad = i == 10 || i == 11;
			planted += bad;
			good += !bad;
			missed += bad && !flagged;
			false_alarms += !bad && flagged;
		}
	}
	print_message("planted outliers %d, missed %d; good times %d, flagged %d\n", planted, missed, good,
		      false_alarms);
	if (missed * 500 > planted) /* two at one end, 10 sigma, the same way: rare, and no fit tells */
		check_fail("%d of %d planted outliers missed", missed, planted);
	if (false_alarms * 1000 > 3 * good / 2)
		check_fail("%d of %d good times flagged", false_alarms, good);
}

/* Planted scatter comes back within its own uncertainty, and none is seen where none is. */
static void jitter_comes_back(void **state)
{
	(void)state;
	struct rng r = rng_open("jitter_comes_back");
	enum { LOOPS = 400 };
	const double planted[] = {0.0, 1e-3, 5e-3, 2e-2};
	for (int k = 0; k < 4; k++) {
		double log_ratio = 0.0;
		int none = 0;
		for (int loop = 0; loop < LOOPS; loop++) {
			struct invented v;
			struct err e;
			struct fit f;
			double jitter_d;
			invent(&r, (struct recipe){.n = TIMES_MAX, .extra_d = planted[k], .err_max_d = 2e-3},
			       &v);
			ok(refit_jitter(v.t, v.n, 3, &jitter_d, &e), &e);
			none += jitter_d < 1e-5;
			if (k > 0) {
				if (k > 1 && !(jitter_d > 0.5 * planted[k] && jitter_d < 1.6 * planted[k]))
					check_fail("jitter %g d planted, %g found", planted[k], jitter_d);
				log_ratio += log(jitter_d / planted[k]) / LOOPS;
				ok(refit(v.t, v.n, 3, 0, jitter_d, &f, &e), &e);
				if (!(fit_scale_factor(&f) < 1.3))
					check_fail("jitter leaves chi2 %g of %d", f.chi2, f.dof);
			}
		}
		print_message("jitter %g d: mean of log(found/planted) %.4f, none found %d of %d\n",
			      planted[k], log_ratio, none, LOOPS);
		/* mean of log sqrt(chi2 / n), chi2 of n - 3 degrees of freedom, where the errors do not
		 * matter */
		if (k == 3)
			check_close("mean of log(found/planted)", log_ratio,
				    0.5 * (log((TIMES_MAX - 3.0) / TIMES_MAX) - 1.0 / (TIMES_MAX - 3.0)),
				    5.0 / sqrt(2.0 * TIMES_MAX * LOOPS));
		if (k == 0)
			assert_true(none > LOOPS / 3); /* half of them in the limit */
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(update_equals_batch),	 cmocka_unit_test(moving_changes_no_prediction),
	    cmocka_unit_test(order_of_times_is_nothing), cmocka_unit_test(chi2_and_predictions_are_fair),
	    cmocka_unit_test(outliers_are_found),	 cmocka_unit_test(jitter_comes_back),
	};
	return cmocka_run_group_tests_name("refit, random", tests, NULL, NULL);
}
