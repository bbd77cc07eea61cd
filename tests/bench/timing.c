/* SPDX-License-Identifier: MIT
 * The precision of a mid-time: what a window costs, and how it stands to a plain sum over the same window in
 * steps of 0.1 min. Invented windows: one to three usable spans, seven nodes of noise, half of them with a
 * flip; exposures of 60 s. A fixed seed. */
#include "ephem/timing.h"

#include "tests/support/timing_sum.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <time.h>

enum { WINDOWS = 200, NODES = 7, AGAIN = 400 };

static double random_between(uint64_t *state, double lo, double hi)
{
	*state ^= *state >> 12;
	*state ^= *state << 25;
	*state ^= *state >> 27;
	return lo + (hi - lo) * (double)((*state * 0x2545F4914F6CDD1Du) >> 11) * 0x1p-53;
}

static double processor_s(void)
{
	struct timespec now;
	clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &now);
	return (double)now.tv_sec + 1e-9 * (double)now.tv_nsec;
}

struct window_input {
	struct timing_event event;
	struct intervals usable;
	struct noise_node node[NODES];
	struct timing_input in;
};

static void invent(struct window_input *w, uint64_t *state)
{
	const double half_d = random_between(state, 0.5, 3.0) / 24.0,
		     limb_d = half_d * random_between(state, 0.1, 0.4);
	w->event = (struct timing_event){.t1_d = -half_d,
					 .t2_d = limb_d - half_d,
					 .t3_d = half_d - limb_d,
					 .t4_d = half_d,
					 .depth_ppt = random_between(state, 3.0, 25.0),
					 .roundness = 0.25,
					 .exposure_s = 60.0,
					 .duration_err_d = 0.002,
					 .depth_err_ppt = NAN,
					 .slope_err_ppt_h = NAN};
	const double cut_d[] = {-half_d - 0.02, random_between(state, -half_d, 0.0),
				random_between(state, 0.0, half_d), half_d + 0.02};
	w->usable = intervals_none();
	for (int i = 0; i < 3; i++)
		if (random_between(state, 0.0, 1.0) < 0.8)
			intervals_append(&w->usable, cut_d[i], cut_d[i + 1] - 0.005);
	for (int i = 0; i < NODES; i++)
		w->node[i] = (struct noise_node){-0.15 + 0.05 * i, random_between(state, 1.0, 2.0)};
	w->in = (struct timing_input){
	    .event = &w->event,
	    .usable = &w->usable,
	    .node = w->node,
	    .n = NODES,
	    .flip_d = random_between(state, 0.0, 1.0) < 0.5 ? random_between(state, -half_d, half_d) : NAN};
}

int main(void)
{
	static struct window_input w[WINDOWS];
	uint64_t state = 20270201u * 0x9E3779B97F4A7C15u | 1u;
	double got[WINDOWS], off = 0.0, start = processor_s();
	volatile double keep = 0.0;
	for (int i = 0; i < WINDOWS; i++)
		invent(&w[i], &state);
	start = processor_s();
	for (int again = 0; again < AGAIN; again++)
		for (int i = 0; i < WINDOWS; i++)
			keep = got[i] = timing_mid_s(&w[i].in, 0.001);
	(void)keep;
	const double each_s = (processor_s() - start) / (WINDOWS * AGAIN);
	start = processor_s();
	for (int i = 0; i < WINDOWS; i++) {
		const double sum_s = timing_sum_s(&w[i].in, 0.001, 0.1);
		if (got[i] < 600.0)
			off = fmax(off, fabs(got[i] / sum_s - 1.0));
	}
	const double sum_each_s = (processor_s() - start) / WINDOWS;
	printf("mid-time precision: %.2f us a window, a plain sum in steps of 0.1 min %.0f us (%.0f times as "
	       "long), farthest apart %.2f %%\n",
	       1e6 * each_s, 1e6 * sum_each_s, sum_each_s / each_s, 100.0 * off);
	return 0;
}
