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
	for (int i = 0; i < 200; i++) {
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
	assert_true(measured > 100 && nothing > 3 && flips > 30);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(random_windows)};
	return cmocka_run_group_tests_name("timing", tests, NULL, NULL);
}
