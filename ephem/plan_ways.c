/* SPDX-License-Identifier: MIT
 * The ways in which one window can be done, and what they are worth. */
#include "ephem/plan_order.h"
#include "ephem/plan_spans.h"
#include "ephem/units.h"

#include <math.h>

#define CHANCE_LEAST 0.0005	  /* a chance below it prints as 0.0 %: nothing is planned for it */
#define CUT_LEAST_D (1.0 * MIN_D) /* a baseline that lost less is not called cut */

const char *const variant_words[VARIANT_COUNT] = {"whole", "short", "ingress", "egress"};
const char *const plan_state_words[PLAN_STATE_COUNT] = {"planned", "pinned", "started",
							"done",	   "partly", "lost"};

struct plan_rules plan_rules_built_in(void)
{
	return (struct plan_rules){
	    .settle_d = 4.0 * MIN_D,
	    .slew_deg_d = 1.0 * DAY_S,
	    .filter_d = 0.5 * MIN_D,
	    .first_slew_deg = 90.0,
	    .field_deg = 0.0,
	    .limb_share = 0.2,
	    .limb_trust = 0.5,
	    .short_share = 0.95,
	    .unknown_share = UNKNOWN_SHARE,
	};
}

struct plan_rules plan_rules_of(const struct telescope *t)
{
	struct plan_rules rules = plan_rules_built_in();
	if (t->slew_deg_s > 0.0)
		rules.slew_deg_d = t->slew_deg_s * DAY_S;
	if (t->settle_min >= 0.0)
		rules.settle_d = t->settle_min * MIN_D;
	if (t->filter_min >= 0.0)
		rules.filter_d = t->filter_min * MIN_D;
	if (t->field_arcmin >= 0.0)
		rules.field_deg = 0.5 * t->field_arcmin / 60.0;
	return rules;
}

static double priority_of(const struct window *w)
{
	const double priority = w->event.prepared->target->priority;
	return isnan(priority) ? 1.0 : fmax(priority, 0.0);
}

/* What a caught event counts for before chance: goals that it serves, and what stands for its bits. */
static struct open_goals open_of(const struct window *w)
{
	const enum band_id band = w->forecast.basis == BASIS_NONE ? BAND_NONE : w->forecast.band;
	return open_goals_of(w->event.prepared->observed, band, jd2_value(w->event.mid_bjd.jd));
}

static double value_of(const struct window *w)
{
	return priority_of(w) * (w->forecast.basis == BASIS_EVENT ? w->forecast.event_value : 1.0);
}

double plan_worth(const struct window *w, const struct plan_rules *rules)
{
	if (w->forecast.basis == BASIS_BITS)
		return fmax(w->forecast.worth, 0.0);
	const double share =
	    isnan(w->chance.done) ? rules->unknown_share * fmax(w->cover.coverage, 0.0) : w->chance.done;
	return isnan(share) ? 0.0 : value_of(w) * open_of(w).whole * fmax(share, 0.0);
}

/* A limb alone, by choice or because no more can be had. */
static double limb_worth(const struct window *w, const struct plan_rules *rules, double chance, double bits)
{
	const double each = w->forecast.basis == BASIS_BITS ? priority_of(w) * rules->limb_trust * bits
							    : value_of(w) * rules->limb_share;
	return each * open_of(w).limb * chance;
}

double plan_limb_worth(const struct window *w, const struct plan_rules *rules, enum variant limb)
{
	const bool in = limb == VARIANT_INGRESS;
	const double chance = in ? w->chance.ingress : w->chance.egress;
	if (isnan(chance))
		return NAN;
	if (chance < CHANCE_LEAST)
		return 0.0;
	return limb_worth(w, rules, chance, in ? w->forecast.bits_ingress : w->forecast.bits_egress);
}

bool plan_catchable(const struct window *w)
{
	const struct window_chance *c = &w->chance;
	if (!(priority_of(w) > 0.0))
		return false;
	return isnan(c->done) ? w->cover.limb_usable
			      : fmax(c->done, fmax(c->ingress, c->egress)) >= CHANCE_LEAST;
}

/* One free span, and what a window may have of it. */
struct room {
	const struct window *w;
	double b_min_d;
	struct span span;     /* free */
	double from_d, to_d;  /* the reserve in it */
	struct plan_way *way; /* room for PLAN_WAYS_MAX */
	int n;
};

/* From the first to the last usable moment of [from, to]. */
static bool usable_hull(const struct room *r, double from_d, double to_d, struct span *hull)
{
	const struct intervals usable =
	    intervals_clip(&r->w->cover.usable, fmax(from_d, r->from_d), fmin(to_d, r->to_d));
	if (usable.n == 0)
		return false;
	*hull = (struct span){usable.s[0].from_d, usable.s[usable.n - 1].to_d};
	return true;
}

static void add_way(struct room *r, enum variant variant, struct span s, double latest_d, double worth)
{
	if (r->n < PLAN_WAYS_MAX && worth > 0.0)
		r->way[r->n++] =
		    (struct plan_way){variant, s.from_d, s.to_d, fmax(latest_d, s.from_d), worth};
}

/* Both limbs: with all of the baselines, and with either or both of them cut down. A side that the span
 * itself cuts counts as cut; one that the sky cuts does not, for the chance knows of it. */
static void add_whole(struct room *r, const struct plan_rules *rules)
{
	const struct window_event *ev = &r->w->event;
	const bool known = !isnan(r->w->chance.done);
	const double worth = plan_worth(r->w, rules), latest_d = ev->t1_d - r->b_min_d;
	struct span most;
	if ((known && r->w->chance.done < CHANCE_LEAST) || (!known && !r->w->cover.limb_usable) ||
	    r->span.from_d > latest_d || r->span.to_d < ev->t4_d + r->b_min_d ||
	    !usable_hull(r, -INFINITY, INFINITY, &most))
		return;
	const bool late = most.from_d <= r->from_d && r->from_d > ev->reserve_start_d + CUT_LEAST_D,
		   early = most.to_d >= r->to_d && r->to_d < ev->reserve_end_d - CUT_LEAST_D;
	const double start_d = latest_d - ev->pad_d, end_d = ev->t4_d + r->b_min_d + ev->pad_d;
	for (int cut = 0; cut < 4; cut++) { /* bit 0: before, bit 1: after */
		const bool before = cut & 1, after = cut & 2;
		struct span s;
		/* without a chance nobody knows what a baseline may be cut to */
		if ((cut && !known) || (before && !(start_d > most.from_d + CUT_LEAST_D)) ||
		    (after && !(end_d < most.to_d - CUT_LEAST_D)) ||
		    !usable_hull(r, before ? start_d : -INFINITY, after ? end_d : INFINITY, &s))
			continue;
		const double share =
		    (late || before ? rules->short_share : 1.0) * (early || after ? rules->short_share : 1.0);
		const bool whole = !late && !before && !early && !after;
		add_way(r, whole ? VARIANT_WHOLE : VARIANT_SHORT, s, latest_d, worth * share);
	}
}

static void add_limbs(struct room *r, const struct plan_rules *rules)
{
	const struct window_event *ev = &r->w->event;
	const struct window_chance *chance = &r->w->chance;
	const bool flat = !isnan(ev->t2_d);
	const double in_d = (flat ? ev->t2_d : ev->mid_d) + ev->pad_d,
		     out_d = (flat ? ev->t3_d : ev->mid_d) - ev->pad_d;
	const double ingress_to_d = fmin(in_d, ev->reserve_end_d),
		     egress_from_d = fmax(out_d, ev->reserve_start_d);
	struct span s;
	if (chance->ingress >= CHANCE_LEAST && r->span.from_d <= ev->t1_d - r->b_min_d &&
	    r->span.to_d >= ingress_to_d && usable_hull(r, -INFINITY, ingress_to_d, &s))
		add_way(r, VARIANT_INGRESS, s, ev->t1_d - r->b_min_d,
			limb_worth(r->w, rules, chance->ingress, r->w->forecast.bits_ingress));
	if (chance->egress >= CHANCE_LEAST && r->span.from_d <= egress_from_d &&
	    r->span.to_d >= ev->t4_d + r->b_min_d && usable_hull(r, egress_from_d, INFINITY, &s))
		add_way(r, VARIANT_EGRESS, s, out_d,
			limb_worth(r->w, rules, chance->egress, r->w->forecast.bits_egress));
}

int plan_ways(const struct plan_input *in, size_t offer, struct plan_way way[PLAN_WAYS_MAX])
{
	const struct window *w = in->offer[offer].window;
	const struct window_event *ev = &w->event;
	if (w->cover.usable.n == 0)
		return 0;
	const struct intervals spans =
	    in->n_fixed > 0 ? plan_spans_at(in, plan_direction(in->night, ev->prepared)) : plan_spans(in);
	struct room r = {.w = w, .way = way};
	r.b_min_d = fmax(ev->prepared->limits.value[LIM_MIN_BASELINE], 0.0) * MIN_D;
	for (int i = 0; i < spans.n; i++) {
		r.span = spans.s[i];
		r.from_d = fmax(ev->reserve_start_d, r.span.from_d);
		r.to_d = fmin(ev->reserve_end_d, r.span.to_d);
		if (!(r.to_d > r.from_d))
			continue;
		add_whole(&r, in->rules);
		add_limbs(&r, in->rules);
	}
	return r.n;
}
