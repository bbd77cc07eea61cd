/* SPDX-License-Identifier: MIT */
#include "tests/support/timing_sum.h"

#include "ephem/units.h"

#include <math.h>
#include <stddef.h>

enum {
	LIGHT_LOOKS = 8,
	LOOKS = 32,
	STEPS_A_LOOK = 10,
	TERMS = 6
}; /* level, slope, step, depth, duration, mid-time */

/* Missing light of depth 1 at a moment after the mid-time. */
static double missing(const struct timing_event *e, double x_d, double longer_d)
{
	const double t1 = e->t1_d - 0.5 * longer_d, t4 = e->t4_d + 0.5 * longer_d;
	const bool grazing = isnan(e->t2_d) || !(e->t3_d > e->t2_d);
	const double round = grazing || isnan(e->roundness) ? 0.0 : e->roundness;
	const double middle = 0.5 * (e->t1_d + e->t4_d);
	/* limbs keep their lengths: those of a longer V leave a floor between them */
	const double t2 = (isnan(e->t2_d) ? middle : e->t2_d) - 0.5 * longer_d,
		     t3 = (isnan(e->t3_d) ? middle : e->t3_d) + 0.5 * longer_d;
	if (x_d <= t1 || x_d >= t4)
		return 0.0;
	if (x_d < t2)
		return (1.0 - round) * (x_d - t1) / (t2 - t1);
	if (x_d > t3)
		return (1.0 - round) * (t4 - x_d) / (t4 - t3);
	const double u = (x_d - 0.5 * (t2 + t3)) / (0.5 * (t3 - t2));
	return grazing ? 1.0 : 1.0 - round * u * u;
}

static double averaged(const struct timing_event *e, int looks, double x_d, double longer_d)
{
	const double exposure_d = e->exposure_s > 0.0 ? e->exposure_s / DAY_S : 0.0;
	double sum = 0.0;
	if (exposure_d <= 0.0)
		return missing(e, x_d, longer_d);
	for (int i = 0; i < looks; i++)
		sum += missing(e, x_d + exposure_d * ((i + 0.5) / looks - 0.5), longer_d);
	return sum / looks;
}

double timing_sum_light(const struct timing_event *e, double t_d, double mid_d, double longer_d)
{
	return 1.0 - 1e-3 * e->depth_ppt * averaged(e, LIGHT_LOOKS, t_d - mid_d, longer_d);
}

double timing_sum_noise(const struct timing_input *in, double t_d)
{
	const struct noise_node *a = NULL, *b = NULL;
	for (int i = 0; i < in->n; i++) {
		if (in->node[i].t_d <= t_d)
			a = &in->node[i];
		else if (!b)
			b = &in->node[i];
	}
	const bool inside = a && b;
	const double at = inside ? (t_d - a->t_d) / (b->t_d - a->t_d) : a ? 0.0 : 1.0;
	const double before = a ? a->minute_ppt : 0.0, after = b ? b->minute_ppt : 0.0;
	const double ppt = before * (1.0 - at) + after * at;
	return isfinite(ppt) ? ppt : INFINITY;
}

/* Last diagonal element of the inverse, by Gauss and Jordan's elimination with the largest pivot. */
static double last_of_inverse(long double m[TERMS][TERMS])
{
	long double b[TERMS] = {[TERMS - 1] = 1.0L};
	for (int p = 0; p < TERMS; p++) {
		int best = p;
		for (int r = p + 1; r < TERMS; r++)
			if (fabsl(m[r][p]) > fabsl(m[best][p]))
				best = r;
		for (int k = 0; k < TERMS; k++) {
			const long double keep = m[p][k];
			m[p][k] = m[best][k], m[best][k] = keep;
		}
		const long double keep = b[p];
		b[p] = b[best], b[best] = keep;
		for (int r = 0; r < TERMS; r++) {
			if (r == p)
				continue;
			const long double share = m[r][p] / m[p][p];
			for (int k = 0; k < TERMS; k++)
				m[r][k] -= share * m[p][k];
			b[r] -= share * b[p];
		}
	}
	return (double)(b[TERMS - 1] / m[TERMS - 1][TERMS - 1]);
}

static void add_sample(long double m[TERMS][TERMS], const struct timing_input *in, double t_d, double mid_d,
		       double step_min, int looks)
{
	const struct timing_event *e = in->event;
	const double h = 1e-4 * MIN_D, x = t_d - mid_d, ppt = timing_sum_noise(in, t_d);
	double by[TERMS] = {1.0, x / (e->t4_d - e->t1_d), t_d > in->flip_d ? 1.0 : 0.0};
	if (x > e->t1_d - 0.5 && x < e->t4_d + 0.5) {
		by[3] = -averaged(e, looks, x, 0.0);
		/* limbs move by h in both, so that a sample on a contact sees the same */
		by[4] =
		    -e->depth_ppt * (averaged(e, looks, x, 2.0 * h) - averaged(e, looks, x, -2.0 * h)) / 4e-4;
		by[5] =
		    -e->depth_ppt * (averaged(e, looks, x - h, 0.0) - averaged(e, looks, x + h, 0.0)) / 2e-4;
	}
	for (int r = 0; r < TERMS; r++)
		for (int k = 0; k < TERMS; k++)
			m[r][k] += (long double)(by[r] * by[k] * step_min / (ppt * ppt));
}

double timing_sum_s(const struct timing_input *in, double mid_d, double step_min)
{
	const struct timing_event *e = in->event;
	long double m[TERMS][TERMS] = {{0}};
	const double exposure_min = e->exposure_s > 0.0 ? e->exposure_s / 60.0 : 0.0;
	const int looks = (int)fmax(exposure_min / (STEPS_A_LOOK * step_min), LOOKS);
	for (int i = 0; i < in->usable->n; i++) {
		const struct span s = in->usable->s[i];
		const int n = (int)ceil((s.to_d - s.from_d) * DAY_MIN / step_min);
		const double step_d = (s.to_d - s.from_d) / n;
		for (int k = 0; k < n; k++)
			add_sample(m, in, s.from_d + (k + 0.5) * step_d, mid_d, step_d * DAY_MIN, looks);
	}
	const double length_d = e->t4_d - e->t1_d,
		     known[TERMS] = {
			 1e4,
			 isnan(e->slope_err_ppt_h) ? 1e4 : e->slope_err_ppt_h * length_d * 24.0,
			 1e4,
			 isnan(e->depth_err_ppt) ? 1e4 : e->depth_err_ppt,
			 isnan(e->duration_err_d) ? 0.25 * length_d * DAY_MIN : e->duration_err_d * DAY_MIN,
			 1e7,
		     };
	for (int p = 0; p < TERMS; p++)
		m[p][p] += 1.0L / powl(fmax(known[p], 1e-6), 2.0L);
	return 60.0 * sqrt(last_of_inverse(m));
}
