/* SPDX-License-Identifier: MIT */
#include "ephem/least_squares.h"

#include <math.h>
#include <stdlib.h>

/* A pivot of the unit-diagonal normal matrix below this leaves no digits of a term. */
#define PIVOT_MIN 1e-13
/* Epochs beyond this mean nothing, and their squares still keep 1e-16 of themselves. */
#define EPOCH_MAX 1000000000L
/* Errors outside this (0.1 us to a lifetime) are no errors of a mid-time, and their squares would not stay
 * numbers. */
#define ERROR_MIN_D 1e-12
#define ERROR_MAX_D 1e5

/* --- the normal equations --- */

static void basis(double u, double f[LS_TERMS_MAX])
{
	f[0] = 1.0;
	f[1] = u;
	f[2] = 0.5 * u * u;
}

double ls_residual_d(const struct ls_fit *f, const struct ls_point *p)
{
	return p->y_d - (f->a[0] + p->u * (f->a[1] + 0.5 * p->u * f->a[2]));
}

/* Lower triangle l of m = l l^T, m of unit diagonal. */
static bool cholesky(double m[LS_TERMS_MAX][LS_TERMS_MAX], int k, double l[LS_TERMS_MAX][LS_TERMS_MAX])
{
	for (int i = 0; i < k; i++)
		for (int j = 0; j <= i; j++) {
			double sum = m[i][j];
			for (int q = 0; q < j; q++)
				sum -= l[i][q] * l[j][q];
			if (i == j && !(sum > PIVOT_MIN && isfinite(sum)))
				return false;
			l[i][j] = i == j ? sqrt(sum) : sum / l[j][j];
		}
	return true;
}

static void back_substitute(double l[LS_TERMS_MAX][LS_TERMS_MAX], int k, double x[LS_TERMS_MAX])
{
	for (int i = 0; i < k; i++) {
		for (int q = 0; q < i; q++)
			x[i] -= l[i][q] * x[q];
		x[i] /= l[i][i];
	}
	for (int i = k - 1; i >= 0; i--) {
		for (int q = i + 1; q < k; q++)
			x[i] -= l[q][i] * x[q];
		x[i] /= l[i][i];
	}
}

bool ls_solve(const struct ls_point p[], size_t n, int terms, struct ls_fit *out)
{
	double m[LS_TERMS_MAX][LS_TERMS_MAX] = {{0}}, l[LS_TERMS_MAX][LS_TERMS_MAX] = {{0}},
	       d[LS_TERMS_MAX] = {0};
	*out = (struct ls_fit){{0}, {{0}}};
	for (size_t i = 0; i < n; i++) {
		double f[LS_TERMS_MAX];
		basis(p[i].u, f);
		for (int r = 0; r < terms; r++)
			for (int c = 0; c <= r; c++)
				m[r][c] += p[i].w * f[r] * f[c];
	}
	for (int r = 0; r < terms; r++)
		d[r] = 1.0 / sqrt(m[r][r]);
	for (int r = 0; r < terms; r++)
		for (int c = 0; c <= r; c++)
			m[r][c] *= d[r] * d[c];
	if (!cholesky(m, terms, l))
		return false;
	/* the second pass solves for what the first has left */
	for (int pass = 0; pass < 2; pass++) {
		double b[LS_TERMS_MAX] = {0};
		for (size_t i = 0; i < n; i++) {
			double f[LS_TERMS_MAX];
			basis(p[i].u, f);
			const double left = p[i].w * ls_residual_d(out, &p[i]);
			for (int r = 0; r < terms; r++)
				b[r] += left * f[r];
		}
		for (int r = 0; r < terms; r++)
			b[r] *= d[r];
		back_substitute(l, terms, b);
		for (int r = 0; r < terms; r++)
			out->a[r] += b[r] * d[r];
	}
	for (int c = 0; c < terms; c++) {
		double column[LS_TERMS_MAX] = {0};
		column[c] = 1.0;
		back_substitute(l, terms, column);
		for (int r = c; r < terms; r++)
			out->cov[r][c] = out->cov[c][r] = column[r] * d[r] * d[c];
	}
	return true;
}

/* --- mid-times in their frame --- */

static enum status check_time(const struct mid_time *t, struct err *e)
{
	if (!(t->err_d >= ERROR_MIN_D && t->err_d <= ERROR_MAX_D))
		return err_set(e, ST_RANGE, "the time of epoch %ld has an error of %g d; it must be above 0",
			       t->epoch, t->err_d);
	if (!isfinite(t->mid.jd.day) || !isfinite(t->mid.jd.frac) || !isfinite(t->delay_d))
		return err_set(e, ST_RANGE, "the time of epoch %ld is no number", t->epoch);
	if (t->epoch > EPOCH_MAX || t->epoch < -EPOCH_MAX)
		return err_set(e, ST_RANGE, "epoch %ld is beyond what can be counted (%ld)", t->epoch,
			       EPOCH_MAX);
	return ST_OK;
}

/* How many different epochs there are, counted up to three. */
static int distinct_epochs(const long epoch[], size_t n)
{
	int found = 0;
	long seen[LS_TERMS_MAX] = {0};
	for (size_t i = 0; i < n && found < LS_TERMS_MAX; i++) {
		bool old = false;
		for (int k = 0; k < found; k++)
			old = old || seen[k] == epoch[i];
		if (!old)
			seen[found++] = epoch[i];
	}
	return found;
}

/* The line through the first and the last of the times: any line near the data would do, what it leaves is
 * fitted. `some` is any that counts. */
static void set_frame(const struct mid_time t[], size_t some, bool every_one, size_t n, double jitter_d,
		      struct ls_frame *f)
{
	const struct mid_time *first = &t[some], *last = first;
	double w_sum = 0.0, wx_sum = 0.0;
	for (size_t i = 0; i < n; i++) {
		if (!t[i].used && !every_one)
			continue;
		if (t[i].epoch < first->epoch)
			first = &t[i];
		if (t[i].epoch > last->epoch)
			last = &t[i];
	}
	for (size_t i = 0; i < n; i++) {
		if (!t[i].used && !every_one)
			continue;
		const double w = 1.0 / (t[i].err_d * t[i].err_d + jitter_d * jitter_d);
		w_sum += w;
		wx_sum += w * (double)(t[i].epoch - first->epoch);
	}
	f->centre = first->epoch + lround(wx_sum / w_sum);
	f->period_d = (jd2_diff_d(last->mid.jd, first->mid.jd) - (last->delay_d - first->delay_d)) /
		      (double)(last->epoch - first->epoch);
	f->ref.jd = jd2_add_d(jd2_add_d(first->mid.jd, -first->delay_d),
			      f->period_d * (double)(f->centre - first->epoch));
	f->half = fmax((double)(f->centre - first->epoch), (double)(last->epoch - f->centre));
}

enum status ls_points_of(const struct mid_time t[], size_t n, bool every_one, int terms, double jitter_d,
			 struct ls_points *out, struct err *e)
{
	*out = (struct ls_points){.n = 0};
	if (terms < 2 || terms > LS_TERMS_MAX)
		return err_set(e, ST_RANGE, "a fit has 2 or 3 terms, not %d", terms);
	if (!(jitter_d >= 0.0 && jitter_d <= ERROR_MAX_D))
		return err_set(e, ST_RANGE, "a jitter of %g d; it must be 0 or more", jitter_d);
	size_t used = 0, some = 0;
	for (size_t i = 0; i < n; i++)
		if (t[i].used || every_one) {
			const enum status s = check_time(&t[i], e);
			if (s)
				return s;
			some = i;
			used++;
		}
	if (used < (size_t)terms)
		return err_set(e, ST_RANGE, "%zu time%s; a %s fit needs %d or more", used,
			       used == 1 ? "" : "s", terms == 2 ? "linear" : "quadratic", terms);
	out->p = calloc(used, sizeof *out->p);
	out->epoch = calloc(used, sizeof *out->epoch);
	if (!out->p || !out->epoch)
		return err_set(e, ST_MEMORY, "no memory for %zu times", used);
	for (size_t i = 0; i < n; i++)
		if (t[i].used || every_one)
			out->epoch[out->n++] = t[i].epoch;
	const int distinct = distinct_epochs(out->epoch, used);
	if (distinct < terms)
		return err_set(e, ST_RANGE, "the times are of %d epoch%s; a %s fit needs %d or more",
			       distinct, distinct == 1 ? "" : "s", terms == 2 ? "linear" : "quadratic",
			       terms);
	set_frame(t, some, every_one, n, jitter_d, &out->frame);
	const struct ls_frame *f = &out->frame;
	for (size_t i = 0, k = 0; i < n; i++) {
		if (!t[i].used && !every_one)
			continue;
		const double x = (double)(t[i].epoch - f->centre), var = t[i].err_d * t[i].err_d;
		out->p[k++] = (struct ls_point){.u = x / f->half,
						.y_d = jd2_diff_d(t[i].mid.jd, f->ref.jd) - t[i].delay_d -
						       f->period_d * x,
						.var_d2 = var,
						.w = 1.0 / (var + jitter_d * jitter_d)};
	}
	return ST_OK;
}

void ls_points_free(struct ls_points *s)
{
	free(s->p);
	free(s->epoch);
	*s = (struct ls_points){.n = 0};
}

struct fit ls_as_fit(const struct ls_points *s, const struct ls_fit *f, int terms, double jitter_d)
{
	const double unit[LS_TERMS_MAX] = {1.0, 1.0 / s->frame.half, 1.0 / (s->frame.half * s->frame.half)};
	struct fit out = {.terms = terms,
			  .n = s->n,
			  .dof = (int)s->n - terms,
			  .ref_epoch = s->frame.centre,
			  .t0 = {jd2_add_d(s->frame.ref.jd, f->a[0])},
			  .period_d = s->frame.period_d + f->a[1] * unit[1],
			  .dpde_d = f->a[2] * unit[2],
			  .jitter_d = jitter_d};
	for (int r = 0; r < LS_TERMS_MAX; r++)
		for (int c = 0; c < LS_TERMS_MAX; c++)
			out.cov[r][c] = f->cov[r][c] * unit[r] * unit[c];
	for (size_t i = 0; i < s->n; i++) {
		const double left = ls_residual_d(f, &s->p[i]);
		out.chi2 += s->p[i].w * left * left;
	}
	out.bic = out.chi2 + (double)terms * log((double)s->n);
	return out;
}
