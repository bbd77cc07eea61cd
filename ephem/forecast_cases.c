/* SPDX-License-Identifier: MIT
 * What may be caught of an event, and how well its mid-time is measured then. */
#include "ephem/forecast_parts.h"

#include "ephem/chance.h"
#include "ephem/limb.h"
#include "ephem/units.h"

#include <math.h>

/* A published duration whose error is not at hand is taken as good to this share for a limb alone: exact it
 * would make one limb as good as two. */
#define UNSAID_DURATION_SHARE ESTIMATED_GEOMETRY_SHARE
#define CHANCE_LEAST 1e-6	    /* a placement below it brings nothing that counts */
#define REACH_SIGMA 3.0		    /* the tails beyond it weigh 0.003 and are taken as near as this */
#define NARROW_D (6.0 * MIN_D)	    /* placements this close are as good as one */
#define NARROW_ALONE_D (1.0 / 24.0) /* the same of one limb: only plans rank by it */

static double limb_end_d(const struct window_event *ev, bool ingress)
{
	const double inner_d = ingress ? ev->t2_d : ev->t3_d;
	return isnan(inner_d) ? ev->mid_d : inner_d;
}

static struct timing_event curve_of(const struct forecast_explain *x, const struct window_event *ev)
{
	const struct shape *shape = &ev->prepared->shape[ev->kind];
	return (struct timing_event){
	    .t1_d = ev->t1_d - ev->mid_d,
	    .t2_d = ev->t2_d - ev->mid_d,
	    .t3_d = ev->t3_d - ev->mid_d,
	    .t4_d = ev->t4_d - ev->mid_d,
	    .depth_ppt = x->depth_ppt,
	    .roundness = ev->kind == KIND_TRANSIT && !shape->grazing
			     ? limb_roundness(shape->k, shape->b, LIMB_U1, LIMB_U2)
			     : 0.0,
	    .exposure_s = x->exposure_s,
	    .duration_err_d =
		shape->t14_err_d > 0.0 ? shape->t14_err_d : UNSAID_DURATION_SHARE * shape->t14_d,
	    .depth_err_ppt = NAN,
	    .slope_err_ppt_h = NAN,
	};
}

struct placing {
	const struct window_event *ev;
	const struct worth_rules *rules;
	struct timing_input in;
	double narrow_d;
};

static double bits_at(const struct placing *p, double mid_d)
{
	const double timing_s = timing_mid_s(&p->in, mid_d);
	return worth_bits(&p->ev->prepared->eph, p->ev->epoch, timing_s, p->rules);
}

static double density(double z)
{
	return exp(-0.5 * z * z);
}

/* Chance x bits of mid-times in [lo, hi] sd of the mean: Gauss's rule on pieces, each of which weighs what
 * it is likely. */
static double span_bits(const struct placing *p, double lo, double hi)
{
	static const double node[2] = {-0.57735026918962576, 0.57735026918962576};
	const double sigma_d = p->ev->chance_contact_d, mean_d = p->ev->mid_d;
	const double chance = normal_between(lo, hi);
	if (chance < CHANCE_LEAST)
		return 0.0;
	const double from = fmax(lo, -REACH_SIGMA), to = fmin(hi, REACH_SIGMA);
	if (!(to > from) || (to - from) * sigma_d < p->narrow_d) {
		const struct intervals one = intervals_one(mean_d + lo * sigma_d, mean_d + hi * sigma_d);
		return chance * bits_at(p, worth_case_mid_d(&one, mean_d, sigma_d));
	}
	const int pieces = (int)ceil(0.5 * (to - from) - 1e-9);
	double sum = 0.0;
	for (int i = 0; i < pieces; i++) {
		const double a = from + (to - from) * i / pieces, b = from + (to - from) * (i + 1) / pieces;
		const double weight = normal_between(i == 0 ? lo : a, i == pieces - 1 ? hi : b);
		const double z[2] = {0.5 * (a + b) + 0.5 * (b - a) * node[0],
				     0.5 * (a + b) + 0.5 * (b - a) * node[1]};
		const double d[2] = {density(z[0]), density(z[1])};
		if (weight < CHANCE_LEAST)
			continue;
		for (int k = 0; k < 2; k++)
			sum += weight * d[k] / (d[0] + d[1]) * bits_at(p, mean_d + z[k] * sigma_d);
	}
	return sum;
}

static struct forecast_case case_of(const struct placing *p, const struct intervals *allowed)
{
	const struct window_event *ev = p->ev;
	const double sigma_d = ev->chance_contact_d;
	struct forecast_case c = {.chance = chance_in(allowed, ev->mid_d, sigma_d), .mid_d = NAN};
	if (isnan(c.chance))
		return (struct forecast_case){NAN, NAN, NAN, NAN};
	if (c.chance < CHANCE_LEAST) {
		c.timing_s = INFINITY;
		return c;
	}
	c.mid_d = worth_case_mid_d(allowed, ev->mid_d, sigma_d);
	if (sigma_d > 0.0)
		for (int i = 0; i < allowed->n; i++)
			c.bits += span_bits(p, (allowed->s[i].from_d - ev->mid_d) / sigma_d,
					    (allowed->s[i].to_d - ev->mid_d) / sigma_d);
	else
		c.bits = bits_at(p, ev->mid_d);
	c.bits /= c.chance;
	c.timing_s = worth_timing_s(&ev->prepared->eph, ev->epoch, c.bits, p->rules);
	return c;
}

/* The telescope is there for one limb: what lies beyond its inner side and the pad is not observed. */
static struct forecast_case alone(const struct placing *p, const struct window *w,
				  const struct intervals *allowed, bool ingress)
{
	const struct window_event *ev = p->ev;
	const double inner_d = limb_end_d(ev, ingress) + (ingress ? ev->pad_d : -ev->pad_d);
	const struct intervals usable = ingress ? intervals_clip(&w->cover.usable, -INFINITY, inner_d)
						: intervals_clip(&w->cover.usable, inner_d, INFINITY);
	struct placing there = *p;
	there.in.usable = &usable;
	there.narrow_d = NARROW_ALONE_D;
	return case_of(&there, allowed);
}

/* Both limbs, or one without the other: disjoint sets of mid-times. */
static void make_expectation(struct forecast_explain *x, const struct placing *p, const struct window *w,
			     const struct target_night *tn)
{
	struct catch_sets sets;
	window_catch_sets(p->ev, tn, &sets);
	const struct intervals limbs = intervals_and(&sets.ingress, &sets.egress);
	const struct intervals both = intervals_or(&limbs, &sets.done);
	const double far_d = 10.0 * tn->night->length_d;
	const struct intervals not_both = intervals_outside(&both, -far_d, far_d);
	const struct intervals first = intervals_and(&sets.ingress, &not_both),
			       second = intervals_and(&sets.egress, &not_both);
	x->whole = case_of(p, &both);
	x->ingress = case_of(p, &first);
	x->egress = case_of(p, &second);
	x->ingress_alone = alone(p, w, &sets.ingress, true);
	x->egress_alone = alone(p, w, &sets.egress, false);
}

void forecast_make_cases(struct forecast_explain *x, const struct window *w, const struct target_night *tn)
{
	const struct window_event *ev = &w->event;
	const struct forecast_case none = {NAN, NAN, NAN, NAN};
	x->whole = x->ingress = x->egress = x->ingress_alone = x->egress_alone = none;
	x->event = curve_of(x, ev);
	x->timing_s = x->ideal_s = NAN;
	if (w->cover.usable.n == 0 && !isnan(w->chance.done)) /* nobody is there: nothing is caught */
		x->whole = x->ingress = x->egress = x->ingress_alone = x->egress_alone =
		    (struct forecast_case){.mid_d = NAN, .timing_s = INFINITY};
	if (!(x->depth_ppt > 0.0) || isnan(x->noise_ppt_min))
		return;
	struct placing p = {.ev = ev,
			    .narrow_d = NARROW_D,
			    .rules = &tn->night->observing->rules,
			    .in = {.event = &x->event,
				   .usable = &w->cover.usable,
				   .node = x->node,
				   .n = x->n_nodes,
				   .flip_d = w->forecast.flip_d}};
	const double timing_s = timing_mid_s(&p.in, ev->mid_d);
	/* worse than the event is long: the data don't fix it */
	x->timing_s = timing_s < (ev->t4_d - ev->t1_d) * DAY_S ? timing_s : NAN;
	x->ideal_s = timing_whole_s(x->depth_ppt, x->noise_ppt_min,
				    ev->prepared->shape[ev->kind].limb_d * DAY_MIN, x->exposure_s);
	if (!isnan(ev->chance_contact_d))
		make_expectation(x, &p, w, tn);
}
