/* SPDX-License-Identifier: MIT */
#include "ephem/refit.h"

#include "ephem/least_squares.h"

#include <math.h>

/* BIC and significance that a curved ephemeris must show: "very strong" on the scale of Kass & Raftery 1995,
 * JASA 90, 773 (from memory) and three sigma; common practice for the number of times, no source. */
#define BIC_FALL_MIN 10.0
#define CURVE_SIGMA_MIN 3.0
enum { CURVE_TIMES_MIN = 8 };

static enum status no_solution(int terms, struct err *e)
{
	return err_set(e, ST_RANGE, "the times do not fix the %d terms of a %s fit", terms,
		       terms == 2 ? "linear" : "quadratic");
}

/* At every epoch of the data and at the reference. */
static enum status check_period(const struct fit *f, const struct ls_points *s, struct err *e)
{
	for (size_t i = 0; i <= s->n; i++) {
		const long epoch = i < s->n ? s->epoch[i] : f->ref_epoch;
		const double period_d = f->period_d + f->dpde_d * (double)(epoch - f->ref_epoch);
		if (!(period_d > 0.0))
			return err_set(e, ST_RANGE,
				       "the fit's period at epoch %ld is %g d; it must be above 0", epoch,
				       period_d);
	}
	return ST_OK;
}

enum status refit(const struct mid_time t[], size_t n, int terms, long ref_epoch, double jitter_d,
		  struct fit *out, struct err *e)
{
	struct ls_points s;
	struct ls_fit f;
	enum status status = ls_points_of(t, n, false, terms, jitter_d, &s, e);
	if (!status && !ls_solve(s.p, s.n, terms, &f))
		status = no_solution(terms, e);
	if (!status) {
		*out = ls_as_fit(&s, &f, terms, jitter_d);
		if (ref_epoch != REF_EPOCH_BEST)
			*out = fit_moved(out, ref_epoch);
		status = check_period(out, &s, e);
	}
	ls_points_free(&s);
	return status;
}

struct fit fit_moved(const struct fit *f, long ref_epoch)
{
	const double m = (double)ref_epoch - (double)f->ref_epoch;
	const double a[3][3] = {{1.0, m, 0.5 * m * m}, {0.0, 1.0, m}, {0.0, 0.0, 1.0}};
	struct fit out = *f;
	out.ref_epoch = ref_epoch;
	out.t0.jd = jd2_add_d(f->t0.jd, m * (f->period_d + 0.5 * m * f->dpde_d));
	out.period_d = f->period_d + m * f->dpde_d;
	for (int r = 0; r < 3; r++)
		for (int c = 0; c <= r; c++) {
			double sum = 0.0;
			for (int i = 0; i < 3; i++)
				for (int j = 0; j < 3; j++)
					sum += a[r][i] * f->cov[i][j] * a[c][j];
			out.cov[r][c] = out.cov[c][r] = sum;
		}
	return out;
}

double fit_scale_factor(const struct fit *f)
{
	return f->dof < 1 ? 1.0 : fmax(1.0, sqrt(f->chi2 / (double)f->dof));
}

double fit_residual_d(const struct fit *f, const struct mid_time *t)
{
	const double x = (double)t->epoch - (double)f->ref_epoch;
	return jd2_diff_d(t->mid.jd, f->t0.jd) - t->delay_d - x * (f->period_d + 0.5 * x * f->dpde_d);
}

struct ephemeris fit_ephemeris(const struct fit *f, double scale)
{
	const struct fit at_0 = fit_moved(f, 0);
	const double s2 = scale * scale;
	return (struct ephemeris){.t0 = at_0.t0,
				  .period_d = at_0.period_d,
				  .dpde_d = at_0.dpde_d,
				  .c00 = s2 * at_0.cov[0][0],
				  .c01 = s2 * at_0.cov[0][1],
				  .c02 = s2 * at_0.cov[0][2],
				  .c11 = s2 * at_0.cov[1][1],
				  .c12 = s2 * at_0.cov[1][2],
				  .c22 = s2 * at_0.cov[2][2]};
}

static bool curve_shows(const struct ls_points *s, double jitter_d)
{
	struct ls_fit line, curve;
	if (!ls_solve(s->p, s->n, 2, &line) || !ls_solve(s->p, s->n, 3, &curve))
		return false;
	const struct fit straight = ls_as_fit(s, &line, 2, jitter_d),
			 curved = ls_as_fit(s, &curve, 3, jitter_d);
	return straight.bic - curved.bic > BIC_FALL_MIN &&
	       fabs(curved.dpde_d) > CURVE_SIGMA_MIN * fit_scale_factor(&curved) * sqrt(curved.cov[2][2]);
}

enum status refit_prefers_quadratic(const struct mid_time t[], size_t n, double jitter_d, bool *quadratic,
				    struct err *e)
{
	struct ls_points s;
	*quadratic = false;
	const enum status status = ls_points_of(t, n, false, 2, jitter_d, &s, e);
	if (status || s.n < CURVE_TIMES_MIN) {
		ls_points_free(&s);
		return status;
	}
	bool shows = curve_shows(&s, jitter_d);
	/* the last place is left out of the sums; every time takes it once */
	s.n--;
	for (size_t i = 0; i <= s.n && shows; i++) {
		const struct ls_point dropped = s.p[i];
		s.p[i] = s.p[s.n];
		s.p[s.n] = dropped;
		shows = curve_shows(&s, jitter_d);
		s.p[s.n] = s.p[i];
		s.p[i] = dropped;
	}
	*quadratic = shows;
	ls_points_free(&s);
	return ST_OK;
}
