/* SPDX-License-Identifier: MIT
 * Precision of a mid-time: closed forms, partial cover, what is known beforehand. */
#include "ephem/timing.h"

#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/timing_sum.h"

#include <math.h>
#include <stdio.h>

/* Trapezoid of the published check: T 157.686 min from mid-ingress to mid-egress, ingress 22.321 min. */
#define WHOLE_MIN 157.686
#define TAU_MIN 22.321

static struct timing_event event_of(double whole_min, double tau_min, double depth_ppt)
{
	const double t4 = 0.5 * (whole_min + tau_min) * MIN_D, t3 = t4 - tau_min * MIN_D;
	return (struct timing_event){.t1_d = -t4,
				     .t2_d = -t3,
				     .t3_d = t3,
				     .t4_d = t4,
				     .depth_ppt = depth_ppt,
				     .depth_err_ppt = NAN,
				     .slope_err_ppt_h = NAN,
				     .duration_err_d = NAN};
}

static double sigma_s(const struct timing_event *e, double from_min, double to_min, double ppt)
{
	const struct intervals usable = intervals_one(from_min * MIN_D, to_min * MIN_D);
	const struct noise_node node = {0.0, ppt};
	const struct timing_input in = {.event = e, .usable = &usable, .node = &node, .n = 1, .flip_d = NAN};
	return timing_mid_s(&in, 0.0);
}

/* Closed forms: Carter et al. 2008, ApJ 689, 499 (exposure 0), Price & Rogers 2014, ApJ 794, 92 (from
 * memory), by hand with depth 13.9 ppt and 2 ppt per minute. */
static const struct {
	double exposure_min, seconds;
} exposure_rows[] = {{0.0, 28.841}, {1.0, 29.059}, {5.0, 29.982}, {30.0, 38.557}};

static void everything_covered(void **state)
{
	(void)state;
	struct timing_event e = event_of(WHOLE_MIN, TAU_MIN, 13.9);
	e.slope_err_ppt_h = 0.0; /* as in both papers: the baseline is known */
	for (size_t i = 0; i < sizeof exposure_rows / sizeof *exposure_rows; i++) {
		e.exposure_s = 60.0 * exposure_rows[i].exposure_min;
		check_close("closed form", timing_whole_s(13.9, 2.0, TAU_MIN, e.exposure_s),
			    exposure_rows[i].seconds, 5e-4);
		check_close("Fisher", sigma_s(&e, -600, 600, 2.0), exposure_rows[i].seconds, 5e-4);
	}
	/* the baseline's slope is odd about the mid-time as its derivative is, and costs precision where the
	 * baseline is short */
	e.exposure_s = 0.0, e.slope_err_ppt_h = NAN;
	const double far = sigma_s(&e, -5000, 5000, 2.0), near = sigma_s(&e, -120, 120, 2.0);
	check_close("slope, long baseline", far, 28.841, 0.01);
	assert_true(near > 1.05 * far);
	/* neither depth nor duration matters: they are even */
	e.slope_err_ppt_h = 0.0, e.duration_err_d = 0.0, e.depth_err_ppt = 0.0;
	check_close("all known", sigma_s(&e, -100, 100, 2.0), 28.841, 5e-4);
}

/* One limb, all else known: (sigma_1 / depth) sqrt(tau), by hand 60 (2 / 13.9) sqrt(22.321) = 40.787 s, and
 * the duration's error halved in quadrature: a derivation of our own from the definition, no published form
 * is known. */
static void one_limb(void **state)
{
	(void)state;
	struct timing_event e = event_of(WHOLE_MIN, TAU_MIN, 13.9);
	e.slope_err_ppt_h = 0.0, e.depth_err_ppt = 0.0, e.duration_err_d = 0.0;
	/* the level is free: a long baseline fixes it */
	check_close("duration known", sigma_s(&e, -1e5, 0, 2.0), 40.787, 0.01);
	e.duration_err_d = 3.0 * MIN_D;
	check_close("to 3 min", sigma_s(&e, -1e5, 0, 2.0), hypot(40.787, 90.0), 0.01);
	e.duration_err_d = 0.5 * MIN_D;
	check_close("to 0.5 min", sigma_s(&e, -1e5, 0, 2.0), hypot(40.787, 15.0), 0.01);
	/* depth and level are found from the same data: a little is lost */
	e.depth_err_ppt = NAN;
	const struct intervals half = intervals_one(-150 * MIN_D, 0.0);
	const struct noise_node node = {0.0, 2.0};
	const struct timing_input in = {.event = &e, .usable = &half, .node = &node, .n = 1, .flip_d = NAN};
	for (int i = 0; i < 2; i++) {
		e.duration_err_d = (i ? 0.5 : 3.0) * MIN_D;
		const double closed = hypot(40.787, i ? 15.0 : 90.0), got = timing_mid_s(&in, 0.0);
		assert_true(got > closed && got < 1.1 * closed);
		check_close("against the sum", got / timing_sum_s(&in, 0.0, 0.02), 1.0, 2e-4);
	}
	/* symmetric */
	check_close("egress", sigma_s(&e, 0, 150, 2.0), sigma_s(&e, -150, 0, 2.0), 1e-9);
	/* nothing known of the duration: the stated wide prior, a quarter of T14 */
	e.duration_err_d = NAN;
	check_close("wide prior", sigma_s(&e, -1e5, 0, 2.0) / (0.125 * (WHOLE_MIN + TAU_MIN) * 60.0), 1.0,
		    2e-3);
}

static void nothing_to_measure(void **state)
{
	(void)state;
	struct timing_event e = event_of(WHOLE_MIN, TAU_MIN, 13.9);
	assert_true(isinf(sigma_s(&e, -400, -95, 2.0))); /* baseline only */
	assert_true(isinf(sigma_s(&e, -60, 60, 2.0)));	 /* floor only */
	assert_true(isinf(sigma_s(&e, 5, 5, 2.0)));	 /* no time */
	/* half an ingress without baseline: a straight line, as the baseline's slope makes one */
	assert_true(isinf(sigma_s(&e, -88, -75, 2.0)));
	assert_true(isinf(sigma_s(&e, -400, 400, INFINITY)) && isinf(sigma_s(&e, -400, 400, NAN)));
	/* no light curve */
	struct timing_event bad = e;
	bad.depth_ppt = 0.0;
	assert_true(isnan(sigma_s(&bad, -400, 400, 2.0)));
	bad = e, bad.depth_ppt = NAN;
	assert_true(isnan(sigma_s(&bad, -400, 400, 2.0)));
	bad = e, bad.t1_d = bad.t4_d;
	assert_true(isnan(sigma_s(&bad, -400, 400, 2.0)));
	bad = e, bad.duration_err_d = -1.0;
	assert_true(isnan(sigma_s(&bad, -400, 400, 2.0)));
	const struct intervals usable = intervals_one(-0.2, 0.2);
	const struct timing_input none = {.event = &e, .usable = &usable, .n = 0, .flip_d = NAN};
	assert_true(isnan(timing_mid_s(&none, 0.0)));
}

/* More noise, less depth, longer limbs: as sigma / depth and the root of the ingress. */
static void scaling(void **state)
{
	(void)state;
	struct timing_event e = event_of(WHOLE_MIN, TAU_MIN, 13.9);
	e.duration_err_d = 0.0;
	const double base = sigma_s(&e, -150, 130, 2.0);
	check_close("noise", sigma_s(&e, -150, 130, 6.0), 3.0 * base, 1e-9);
	e.depth_ppt = 13.9 / 4.0;
	check_close("depth", sigma_s(&e, -150, 130, 2.0), 4.0 * base, 1e-9);
	/* placement: all times moved together change nothing */
	struct intervals usable = intervals_one(0.3 - 150 * MIN_D, 0.3 + 130 * MIN_D);
	struct noise_node node = {0.0, 0.5};
	struct timing_input in = {.event = &e, .usable = &usable, .node = &node, .n = 1, .flip_d = NAN};
	check_close("moved", timing_mid_s(&in, 0.3), base, 1e-7);
	/* a rounded floor is a slower limb: worse; as Carter et al. 2008 say of limb darkening */
	e.depth_ppt = 13.9;
	e.roundness = 0.3;
	assert_true(sigma_s(&e, -150, 130, 2.0) > base);
}

/* Noise that changes: a Moon that rises in the middle, a gap by noise and by interval, nodes that add
 * nothing. */
static void noise_that_changes(void **state)
{
	(void)state;
	const struct timing_event e = event_of(WHOLE_MIN, TAU_MIN, 13.9);
	struct intervals usable = intervals_one(-150 * MIN_D, 150 * MIN_D);
	struct noise_node step[] = {{-0.5, 1.0}, {0.0, 1.0}, {0.0, 4.0}, {0.5, 4.0}};
	struct timing_input in = {.event = &e, .usable = &usable, .node = step, .n = 4, .flip_d = NAN};
	const double moon = timing_mid_s(&in, 0.0);
	check_close("step", moon / timing_sum_s(&in, 0.0, 0.02), 1.0, 2e-4);
	assert_true(moon > sigma_s(&e, -150, 150, 1.0) && moon < sigma_s(&e, -150, 150, 4.0));
	struct noise_node flat[] = {{-0.05, 2.0}, {0.0, 2.0}, {0.01, 2.0}, {0.04, 2.0}};
	in.node = flat;
	check_close("nodes alone change nothing", timing_mid_s(&in, 0.0), sigma_s(&e, -150, 150, 2.0), 1e-3);
	struct noise_node hole[] = {{-0.5, 2.0}, {-20 * MIN_D, 2.0}, {-5 * MIN_D, NAN}, {10 * MIN_D, 2.0}};
	in.node = hole;
	const double by_noise = timing_mid_s(&in, 0.0);
	const struct intervals two = intervals_outside(
	    &(struct intervals){.n = 1, .s = {{-20 * MIN_D, 10 * MIN_D}}}, -150 * MIN_D, 150 * MIN_D);
	struct timing_input gap = {.event = &e, .usable = &two, .node = flat, .n = 1, .flip_d = NAN};
	check_close("no data from node to node", by_noise, timing_mid_s(&gap, 0.0), 1e-9);
}

/* A step of the level at a flip costs precision where it can pass for a limb, and nothing where all data lie
 * on one side. */
static void meridian_flip(void **state)
{
	(void)state;
	const struct timing_event e = event_of(WHOLE_MIN, TAU_MIN, 13.9);
	const struct intervals usable = intervals_one(-150 * MIN_D, 150 * MIN_D);
	const struct noise_node node = {0.0, 2.0};
	struct timing_input in = {.event = &e, .usable = &usable, .node = &node, .n = 1, .flip_d = NAN};
	const double without = timing_mid_s(&in, 0.0);
	in.flip_d = -151 * MIN_D;
	check_close("before all data", timing_mid_s(&in, 0.0), without, 1e-6);
	in.flip_d = 150 * MIN_D;
	check_close("after all data", timing_mid_s(&in, 0.0), without, 1e-6);
	/* where the flip takes 15 min out, in the ingress it costs most */
	const double flip_min[] = {-130, -79, 0, 100};
	double cost[4];
	for (int i = 0; i < 4; i++) {
		in.flip_d = flip_min[i] * MIN_D;
		const double whole = timing_mid_s(&in, 0.0);
		assert_true(whole > without);
		check_close("against the sum", whole / timing_sum_s(&in, 0.0, 0.02), 1.0, 2e-4);
		const struct intervals taken =
		    intervals_one(in.flip_d - 7.5 * MIN_D, in.flip_d + 7.5 * MIN_D);
		const struct intervals left = intervals_outside(&taken, -150 * MIN_D, 150 * MIN_D);
		struct timing_input gap = in;
		gap.usable = &left;
		cost[i] = timing_mid_s(&gap, 0.0);
		check_close("gap against the sum", cost[i] / timing_sum_s(&gap, 0.0, 0.02), 1.0, 2e-4);
		assert_true(cost[i] > whole);
	}
	assert_true(cost[1] > 1.1 * cost[0] && cost[1] > 1.1 * cost[2] && cost[1] > 1.1 * cost[3]);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(everything_covered), cmocka_unit_test(one_limb),
	    cmocka_unit_test(nothing_to_measure), cmocka_unit_test(scaling),
	    cmocka_unit_test(noise_that_changes), cmocka_unit_test(meridian_flip),
	};
	return cmocka_run_group_tests_name("timing", tests, NULL, NULL);
}
