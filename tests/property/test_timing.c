/* SPDX-License-Identifier: MIT
 * The forecast of a mid-time's precision against a plain sum on random windows, and against fits of simulated
 * light curves. */
#include "ephem/timing.h"

#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/timing_sum.h"

#include <math.h>
#include <stdlib.h>

/* --- against a plain sum --- */

static struct timing_event random_event(struct rng *r)
{
	const double half_d = rng_between(r, 0.5, 4.0) / 48.0, limb_d = half_d * rng_between(r, 0.05, 0.6);
	struct timing_event e = {.t1_d = -half_d,
				 .t2_d = limb_d - half_d,
				 .t3_d = half_d - limb_d,
				 .t4_d = half_d,
				 .depth_ppt = exp(rng_between(r, log(2.0), log(30.0))),
				 .roundness = rng_unit(r) < 0.3 ? NAN : rng_between(r, 0.0, 0.4),
				 .exposure_s = rng_unit(r) < 0.2 ? 0.0 : rng_between(r, 5.0, 400.0),
				 .duration_err_d =
				     rng_unit(r) < 0.2 ? NAN : rng_between(r, 0.0, 10.0) * MIN_D,
				 .depth_err_ppt = rng_unit(r) < 0.7 ? NAN : rng_between(r, 0.1, 2.0),
				 .slope_err_ppt_h = rng_unit(r) < 0.7 ? NAN : rng_between(r, 0.1, 2.0)};
	if (rng_unit(r) < 0.1)
		e.t2_d = e.t3_d = NAN;
	return e;
}

/* Up to three spans around the event, its middle not always in them. */
static struct intervals random_spans(struct rng *r, const struct timing_event *e)
{
	struct intervals set = intervals_none();
	const double wide_d = (e->t4_d - e->t1_d) * 0.5 + 1.0 / 24.0;
	double at_d = -wide_d * rng_between(r, -0.3, 1.0);
	for (int i = 0; i < 3 && at_d < wide_d; i++) {
		const double to_d = at_d + wide_d * rng_between(r, 0.1, 2.0);
		intervals_append(&set, at_d, fmin(to_d, wide_d));
		at_d = to_d + rng_between(r, 1.0, 30.0) * MIN_D;
	}
	return set;
}

/* Up to eight nodes, some of them steps, some without data. */
static int random_noise(struct rng *r, struct noise_node node[8])
{
	const int n = 1 + (int)rng_between(r, 0.0, 8.0);
	double t_d = rng_between(r, -0.3, -0.1);
	for (int i = 0; i < n; i++) {
		node[i] = (struct noise_node){t_d, rng_between(r, 0.8, 2.4)};
		if (n > 3 && rng_unit(r) < 0.05)
			node[i].minute_ppt = NAN;
		t_d += rng_unit(r) < 0.2 ? 0.0 : rng_between(r, 0.02, 0.15);
	}
	return n;
}

static void random_windows(void **state)
{
	(void)state;
	struct rng r = rng_open("random_windows");
	int measured = 0, nothing = 0, flips = 0;
	double worst = 0.0;
	for (int i = 0; i < 120; i++) {
		const struct timing_event e = random_event(&r);
		const struct intervals usable = random_spans(&r, &e);
		struct noise_node node[8];
		struct timing_input in = {.event = &e, .usable = &usable, .node = node, .flip_d = NAN};
		in.n = random_noise(&r, node);
		if (rng_unit(&r) < 0.4)
			in.flip_d = rng_between(&r, e.t1_d, e.t4_d);
		const double mid_d = rng_between(&r, -20.0, 20.0) * MIN_D;
		const double got = timing_mid_s(&in, mid_d);
		double want = timing_sum_s(&in, mid_d, 0.02);
		/* a corner of the event alone: the sum has to look closer */
		if (got < 600.0 && !(fabs(got / want - 1.0) < 0.01))
			want = timing_sum_s(&in, mid_d, 0.002);
		/* beyond 10 min next to nothing has been seen, and both say so */
		if (!(got < 600.0)) {
			if (!(want > 400.0))
				check_fail("row %d: %g s, by the sum %g s", i, got, want);
			nothing++;
			continue;
		}
		worst = fmax(worst, fabs(got / want - 1.0));
		if (!(fabs(got / want - 1.0) < 0.01))
			check_fail("row %d: %g s, by the sum %g s", i, got, want);
		measured++;
		flips += !isnan(in.flip_d);
	}
	print_message("windows: %d measured, %d not; farthest from the sum %.3f %%\n", measured, nothing,
		      100.0 * worst);
	assert_true(measured > 60 && nothing > 1 && flips > 15);
}

/* --- against fits of simulated light curves --- */

enum { TERMS = 6, POINTS_MAX = 300, CURVES = 6000, PASSES = 2 }; /* level, slope, step, depth, longer, mid */

/* 180 min with limbs of 22 min, 20 ppt deep; exposures of 90 s every 100 s. Times from the predicted mid-time
 * [min]. */
static const struct scene {
	const char *name;
	double from, to, gap_from, gap_to, flip;
	double slope_ppt_h, duration_err_min, roundness;
	double before_ppt, after_ppt; /* noise per minute, before and after a step at -20 min */
} scenes[] = {
    {"full", -150, 150, NAN, NAN, NAN, 0, 2, 0, 0.75, 0.75},
    {"ingress only", -150, 20, NAN, NAN, NAN, 0, 0.25, 0, 0.75, 0.75},
    {"egress only, duration badly known", -20, 150, NAN, NAN, NAN, 0, 2, 0.25, 0.5, 0.5},
    {"gap", -140, 150, -82, -30, NAN, 0, 2, 0.25, 0.75, 0.75},
    {"steep baseline, a Moon that rises", -120, 150, NAN, NAN, NAN, 8, 2, 0.25, 0.5, 1.5},
    {"flip", -140, 130, -5, 5, 0, 1, 2, 0.25, 0.75, 0.75},
};
#define CYCLE_S 100.0

struct curve_data {
	const struct timing_event *event;
	int n;
	double t_d[POINTS_MAX], ppt[POINTS_MAX], flip_d;
	double jacobian[POINTS_MAX][TERMS];
	double duration_err_min;
	double inverse[TERMS][TERMS]; /* of the normal matrix */
};

static double normal(struct rng *r)
{
	return sqrt(-2.0 * log(1.0 - rng_unit(r))) * cos(TWO_PI * rng_unit(r));
}

/* Light less 1 [ppt]. */
static double model_ppt(const struct curve_data *c, const double p[TERMS], double t_d)
{
	const double event = 1e3 * (timing_sum_light(c->event, t_d, p[5] * MIN_D, p[4] * MIN_D) - 1.0);
	return p[0] + p[1] * t_d * 24.0 + (t_d > c->flip_d ? p[2] : 0.0) + event * p[3] / c->event->depth_ppt;
}

static void invert(double m[TERMS][TERMS], double inverse[TERMS][TERMS])
{
	for (int r = 0; r < TERMS; r++)
		for (int k = 0; k < TERMS; k++)
			inverse[r][k] = r == k ? 1.0 : 0.0;
	for (int p = 0; p < TERMS; p++) {
		const double pivot = m[p][p];
		if (!(pivot > 0.0))
			check_fail("the fit is singular in parameter %d", p);
		for (int k = 0; k < TERMS; k++)
			m[p][k] /= pivot, inverse[p][k] /= pivot;
		for (int r = 0; r < TERMS; r++) {
			const double share = r == p ? 0.0 : m[r][p];
			for (int k = 0; k < TERMS; k++)
				m[r][k] -= share * m[p][k], inverse[r][k] -= share * inverse[p][k];
		}
	}
}

static void lay_out(struct curve_data *c, const struct scene *s, const struct timing_event *e,
		    const double truth[TERMS])
{
	double normal_matrix[TERMS][TERMS] = {{0}};
	*c = (struct curve_data){
	    .event = e, .flip_d = s->flip * MIN_D, .duration_err_min = s->duration_err_min};
	for (double t = s->from * 60.0 + 45.0; t < s->to * 60.0 - 45.0 && c->n < POINTS_MAX; t += CYCLE_S) {
		if (t > s->gap_from * 60.0 && t < s->gap_to * 60.0)
			continue;
		c->t_d[c->n] = t / DAY_S;
		c->ppt[c->n++] = (t < -1200.0 ? s->before_ppt : s->after_ppt) * sqrt(60.0 / CYCLE_S);
	}
	for (int i = 0; i < c->n; i++) {
		for (int k = 0; k < TERMS; k++) {
			double up[TERMS], down[TERMS];
			for (int j = 0; j < TERMS; j++)
				up[j] = truth[j] + (j == k ? 0.01 : 0.0),
				down[j] = truth[j] - (j == k ? 0.01 : 0.0);
			c->jacobian[i][k] =
			    (model_ppt(c, up, c->t_d[i]) - model_ppt(c, down, c->t_d[i])) / 0.02;
		}
		for (int r = 0; r < TERMS; r++)
			for (int k = 0; k < TERMS; k++)
				normal_matrix[r][k] +=
				    c->jacobian[i][r] * c->jacobian[i][k] / (c->ppt[i] * c->ppt[i]);
	}
	normal_matrix[4][4] += 1.0 / (c->duration_err_min * c->duration_err_min);
	if (isnan(s->flip))
		normal_matrix[2][2] = 1.0; /* no step in the data, none in the fit */
	invert(normal_matrix, c->inverse);
}

/* Mid-time [min] of a least-squares fit to one noisy curve and a noisy published duration. */
static double fitted_mid(const struct curve_data *c, const double truth[TERMS], struct rng *r)
{
	double y[POINTS_MAX], p[TERMS];
	for (int i = 0; i < c->n; i++)
		y[i] = model_ppt(c, truth, c->t_d[i]) + c->ppt[i] * normal(r);
	const double published = truth[4] + c->duration_err_min * normal(r);
	for (int k = 0; k < TERMS; k++)
		p[k] = truth[k];
	for (int pass = 0; pass < PASSES; pass++) {
		double pull[TERMS] = {0};
		for (int i = 0; i < c->n; i++) {
			const double left = (y[i] - model_ppt(c, p, c->t_d[i])) / (c->ppt[i] * c->ppt[i]);
			for (int k = 0; k < TERMS; k++)
				pull[k] += c->jacobian[i][k] * left;
		}
		pull[4] += (published - p[4]) / (c->duration_err_min * c->duration_err_min);
		for (int k = 0; k < TERMS; k++)
			for (int j = 0; j < TERMS; j++)
				p[k] += c->inverse[k][j] * pull[j];
	}
	return p[5];
}

static void fits_scatter_as_forecast(void **state)
{
	(void)state;
	struct rng r = rng_open("fits");
	struct curve_data *c = malloc(sizeof *c);
	assert_non_null(c);
	for (size_t i = 0; i < sizeof scenes / sizeof *scenes; i++) {
		const struct scene *s = &scenes[i];
		const struct timing_event e = {.t1_d = -90 * MIN_D,
					       .t2_d = -68 * MIN_D,
					       .t3_d = 68 * MIN_D,
					       .t4_d = 90 * MIN_D,
					       .depth_ppt = 20.0,
					       .roundness = s->roundness,
					       .exposure_s = 90.0,
					       .duration_err_d = s->duration_err_min * MIN_D,
					       .depth_err_ppt = NAN,
					       .slope_err_ppt_h = NAN};
		const double truth[TERMS] = {3.0, s->slope_ppt_h, isnan(s->flip) ? 0.0 : 5.0, 20.0, 0.0, 1.5};
		lay_out(c, s, &e, truth);
		double sum = 0.0, sum2 = 0.0;
		for (int k = 0; k < CURVES; k++) {
			const double off = fitted_mid(c, truth, &r) - truth[5];
			sum += off, sum2 += off * off;
		}
		const double scatter_s = 60.0 * sqrt((sum2 - sum * sum / CURVES) / (CURVES - 1));
		struct intervals usable = intervals_none(); /* what the exposures cover, a cycle each; a hair
							       more, so that they touch */
		for (int k = 0; k < c->n; k++)
			usable = intervals_or(
			    &usable,
			    &(struct intervals){
				.n = 1, .s = {{c->t_d[k] - 50.0001 / DAY_S, c->t_d[k] + 50.0001 / DAY_S}}});
		const struct noise_node node[] = {{-20 * MIN_D, s->before_ppt}, {-20 * MIN_D, s->after_ppt}};
		const struct timing_input in = {
		    .event = &e, .usable = &usable, .node = node, .n = 2, .flip_d = s->flip * MIN_D};
		const double forecast_s = timing_mid_s(&in, truth[5] * MIN_D);
		print_message("%s: forecast %.2f s, fits scatter %.2f s\n", s->name, forecast_s, scatter_s);
		/* 6000 fits tell a scatter to 0.9 % */
		check_close(s->name, scatter_s / forecast_s, 1.0, 0.05);
		check_close("no bias", sum / CURVES * 60.0 / forecast_s, 0.0, 0.1);
	}
	free(c);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(random_windows),
					   cmocka_unit_test(fits_scatter_as_forecast)};
	return cmocka_run_group_tests_name("timing", tests, NULL, NULL);
}
