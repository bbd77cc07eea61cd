/* SPDX-License-Identifier: MIT
 * What the errors do not explain: jitter by maximum likelihood, outliers by Huber's weights.
 * Sources: Huber 1964, Ann. Math. Stat. 35, 73 (weights; 1.345 is 95 % efficient for normal errors: Holland &
 * Welsch 1977, Commun. Stat. A6, 813); 1.4826 MAD Rousseeuw & Croux 1993, JASA 88, 1273; likelihood of a
 * normal error with extra scatter, the usual form. */
#include "ephem/refit.h"

#include "ephem/least_squares.h"

#include <math.h>
#include <stdlib.h>

#define HUBER 1.345
#define MAD_SIGMA 1.4826
enum { ROBUST_TIMES_MIN = 6, ROBUST_PASSES_MAX = 200 };
#define ROBUST_STEP 1e-9 /* change of a standardised residual that ends the passes */
/* Jitter is looked for from 1e-6 of the largest it can be, each step 1.25 times the last. */
#define JITTER_SPAN 1e-6
#define JITTER_STEP 1.25
#define GOLDEN 0.61803398874989484820

/* --- jitter --- */

/* sum[log(s^2 + j^2) + r^2/(s^2 + j^2)] of the best model at that jitter; INFINITY when there is none. */
static double jitter_cost(struct ls_points *s, int terms, double jitter_d)
{
	struct ls_fit f;
	for (size_t i = 0; i < s->n; i++)
		s->p[i].w = 1.0 / (s->p[i].var_d2 + jitter_d * jitter_d);
	if (!ls_solve(s->p, s->n, terms, &f))
		return INFINITY;
	double cost = 0.0;
	for (size_t i = 0; i < s->n; i++) {
		const double left = ls_residual_d(&f, &s->p[i]);
		cost += s->p[i].w * left * left - log(s->p[i].w);
	}
	return cost;
}

/* Golden section of log j between two steps about the least. */
static double jitter_between(struct ls_points *s, int terms, double lo, double hi)
{
	double a = log(lo), b = log(hi), x = b - GOLDEN * (b - a), y = a + GOLDEN * (b - a);
	double cost_x = jitter_cost(s, terms, exp(x)), cost_y = jitter_cost(s, terms, exp(y));
	for (int pass = 0; pass < 50; pass++) {
		if (cost_x < cost_y) {
			b = y, y = x, cost_y = cost_x;
			x = b - GOLDEN * (b - a);
			cost_x = jitter_cost(s, terms, exp(x));
		} else {
			a = x, x = y, cost_x = cost_y;
			y = a + GOLDEN * (b - a);
			cost_y = jitter_cost(s, terms, exp(y));
		}
	}
	return exp(0.5 * (a + b));
}

/* No jitter above the root of the sum of squares helps: each r^2 is less. */
static double jitter_most_d(const struct ls_points *s, const struct ls_fit *f)
{
	double sum = 0.0;
	for (size_t i = 0; i < s->n; i++)
		sum += ls_residual_d(f, &s->p[i]) * ls_residual_d(f, &s->p[i]);
	return sqrt(sum);
}

enum status refit_jitter(const struct mid_time t[], size_t n, int terms, double *jitter_d, struct err *e)
{
	struct ls_points s;
	struct ls_fit f;
	*jitter_d = 0.0;
	enum status status = ls_points_of(t, n, false, terms, 0.0, &s, e);
	if (!status && !ls_solve(s.p, s.n, terms, &f))
		status = err_set(e, ST_RANGE, "the times do not fix the %d terms of the fit", terms);
	/* as many terms as times: nothing is left to explain */
	if (!status && s.n > (size_t)terms) {
		const double most = jitter_most_d(&s, &f);
		double best = 0.0, least = jitter_cost(&s, terms, 0.0);
		for (double j = most * JITTER_SPAN; j < most * JITTER_STEP; j *= JITTER_STEP) {
			const double cost = jitter_cost(&s, terms, j);
			if (cost < least)
				least = cost, best = j;
		}
		if (best > 0.0)
			best = jitter_between(&s, terms, best / JITTER_STEP, best * JITTER_STEP);
		*jitter_d = best;
	}
	ls_points_free(&s);
	return status;
}

/* --- outliers --- */

static int by_size(const void *a, const void *b)
{
	const double x = *(const double *)a, y = *(const double *)b;
	return (x > y) - (x < y);
}

static double median(double v[], size_t n)
{
	qsort(v, n, sizeof *v, by_size);
	return n % 2 ? v[n / 2] : 0.5 * (v[n / 2 - 1] + v[n / 2]);
}

/* max(1, 1.4826 MAD): the scatter in units of the errors, never less than they say. */
static double scatter(const double z[], size_t n, double work[])
{
	for (size_t i = 0; i < n; i++)
		work[i] = z[i];
	const double middle = median(work, n);
	for (size_t i = 0; i < n; i++)
		work[i] = fabs(z[i] - middle);
	return fmax(1.0, MAD_SIGMA * median(work, n));
}

/* Fits with the weights as they stand; z in units of the errors; *step the largest change of one. */
static bool huber_pass(struct ls_points *s, int terms, double scale, double z[], double *step)
{
	struct ls_fit f;
	*step = 0.0;
	if (!ls_solve(s->p, s->n, terms, &f))
		return false;
	for (size_t i = 0; i < s->n; i++) {
		const double before = z[i];
		z[i] = ls_residual_d(&f, &s->p[i]) / sqrt(s->p[i].var_d2);
		*step = fmax(*step, fabs(z[i] - before) / scale);
		s->p[i].w = (fabs(z[i]) > HUBER * scale ? HUBER * scale / fabs(z[i]) : 1.0) / s->p[i].var_d2;
	}
	return true;
}

/* A far-off time whose error is far smaller than all others at an end of the data still pulls the fit towards
 * itself, as it does any fit. First with the errors as given (one answer, wherever it starts), then with
 * their scatter taken from the median. */
static bool huber(struct ls_points *s, int terms, double z[], double work[])
{
	double scale = 1.0;
	for (int stage = 0; stage < 2; stage++)
		for (int pass = 0; pass < ROBUST_PASSES_MAX; pass++) {
			double step;
			if (!huber_pass(s, terms, scale, z, &step))
				return false;
			if (pass > 0 && step < ROBUST_STEP)
				break;
			if (stage == 1)
				scale = scatter(z, s->n, work);
		}
	scale = scatter(z, s->n, work);
	for (size_t i = 0; i < s->n; i++)
		z[i] /= scale;
	return true;
}

enum status refit_outliers(const struct mid_time t[], size_t n, int terms, double z[], struct err *e)
{
	struct ls_points s;
	enum status status = ls_points_of(t, n, true, terms, 0.0, &s, e);
	double *work = status ? NULL : calloc(n, sizeof *work);
	for (size_t i = 0; i < n; i++)
		z[i] = 0.0;
	if (!status && !work)
		status = err_set(e, ST_MEMORY, "no memory for %zu times", n);
	if (!status) {
		double step;
		const bool solved =
		    n < ROBUST_TIMES_MIN ? huber_pass(&s, terms, 1.0, z, &step) : huber(&s, terms, z, work);
		if (!solved)
			status = err_set(e, ST_RANGE, "the times do not fix the %d terms of the fit", terms);
	}
	free(work);
	ls_points_free(&s);
	return status;
}
