/* SPDX-License-Identifier: MIT */
#include "ephem/mount.h"

#include "ephem/units.h"

#include <math.h>

#define HALF_TURN_H 12.0 /* a reach of half a turn is none */

/* --- limits --- */

/* Highest altitude; 90 without a limit. */
static double highest_deg(const struct telescope *t)
{
	double highest = 90.0; /* fmin takes the number where the other is NAN */
	highest = fmin(highest, t->alt_max_deg);
	return fmin(highest, 90.0 - t->zenith_deg);
}

static double reach_h(double given_h)
{
	return fmin(HALF_TURN_H, given_h);
}

static bool reach_is_limited(const struct telescope *t)
{
	return reach_h(t->ha_east_h) < HALF_TURN_H || reach_h(t->ha_west_h) < HALF_TURN_H;
}

bool mount_limits(const struct telescope *t)
{
	return highest_deg(t) < 90.0 || reach_is_limited(t);
}

static struct intervals within_reach(const struct night *n, const struct star *s, const struct telescope *t)
{
	const double hour_d = TWO_PI / 24.0 / n->lst_rate_rad_d, turn_d = 24.0 * hour_d;
	const double east_d = reach_h(t->ha_east_h) * hour_d, west_d = reach_h(t->ha_west_h) * hour_d;
	struct intervals set = intervals_none();
	for (double at = night_star_transit_d(n, s, -west_d); at - east_d < n->length_d; at += turn_d)
		intervals_append(&set, fmax(at - east_d, 0.0), fmin(at + west_d, n->length_d));
	return set;
}

struct intervals mount_allows(const struct night *n, const struct star *s, const struct telescope *t)
{
	struct intervals set = intervals_one(0.0, n->length_d);
	if (reach_is_limited(t))
		set = within_reach(n, s, t);
	if (highest_deg(t) < 90.0) {
		const struct intervals above = night_star_above(n, s, highest_deg(t));
		const struct intervals below = intervals_outside(&above, 0.0, n->length_d);
		set = intervals_and(&set, &below);
	}
	return set;
}

/* --- meridian flip --- */

#define SAME_D 1e-9 /* a tenth of a millisecond: times nearer than this are one */

double mount_flip_d(const struct telescope *t)
{
	if (t->mount != MOUNT_GERMAN)
		return (double)NAN;
	return (isnan(t->flip_min) ? FLIP_USUAL_MIN : t->flip_min) * MIN_D;
}

/* One start, and how good it is. */
struct start {
	double from_d;
	bool near; /* nearer to a limb than the pad */
	enum flip_place place;
	double cost_d, away_d;
};
struct placing {
	const struct intervals *usable;
	const struct flip_event *ev;
	double meridian_d, earliest_d, latest_d, length_d;
	double in_end_d, out_start_d; /* where the limbs end and begin towards the middle */
	bool found;
	struct start best;
};

static double common_d(double from_d, double to_d, double start_d, double end_d)
{
	return fmax(fmin(to_d, end_d) - fmax(from_d, start_d), 0.0);
}

/* Time between two spans; below 0 where they overlap. */
static double between_d(double from_d, double to_d, double start_d, double end_d)
{
	return fmax(start_d - to_d, from_d - end_d);
}

/* Fills place, near and cost of a start. */
static void weigh(const struct placing *p, struct start *s)
{
	const struct flip_event *ev = p->ev;
	const double first_d = ev->t1_d - ev->b_min_d, last_d = ev->t4_d + ev->b_min_d;
	const double from_d = s->from_d, to_d = from_d + p->length_d;
	const double spare_d = fmin(between_d(from_d, to_d, ev->t1_d, p->in_end_d),
				    between_d(from_d, to_d, p->out_start_d, ev->t4_d));
	const double short_d = fmax(ev->pad_d - spare_d, 0.0);
	s->near = short_d > SAME_D;
	s->place = FLIP_BASELINE;
	s->cost_d =
	    short_d + common_d(from_d, to_d, first_d, ev->t1_d) + common_d(from_d, to_d, ev->t4_d, last_d);
	if (spare_d < -SAME_D) {
		s->place = FLIP_LIMB;
		s->cost_d = common_d(from_d, to_d, ev->t1_d, p->in_end_d) +
			    common_d(from_d, to_d, p->out_start_d, ev->t4_d);
	} else if (intervals_overlap(p->usable, from_d, to_d) <= SAME_D) {
		s->place = FLIP_FREE;
		s->near = false; /* nothing is lost if the limb comes there */
		s->cost_d = 0.0;
	} else if (to_d <= first_d + SAME_D || from_d >= last_d - SAME_D) {
		s->place = FLIP_OUTSIDE;
		s->cost_d = fmax(ev->pad_d - between_d(from_d, to_d, first_d, last_d), 0.0);
	} else if (from_d >= p->in_end_d - SAME_D && to_d <= p->out_start_d + SAME_D) {
		s->place = FLIP_FLAT;
		s->cost_d = short_d;
	}
}

static bool better(const struct start *a, const struct start *b)
{
	const bool a_limb = a->place == FLIP_LIMB, b_limb = b->place == FLIP_LIMB;
	if (a_limb != b_limb)
		return b_limb;
	if (!a_limb && a->near != b->near)
		return b->near;
	if (a->place != b->place)
		return a->place < b->place;
	if (fabs(a->cost_d - b->cost_d) > SAME_D)
		return a->cost_d < b->cost_d;
	if (fabs(a->away_d - b->away_d) > SAME_D)
		return a->away_d < b->away_d;
	return a->from_d < b->from_d - SAME_D;
}

static void try_start(struct placing *p, double from_d)
{
	struct start s = {.from_d = from_d, .away_d = fabs(from_d - p->meridian_d)};
	if (!(from_d >= p->earliest_d && from_d <= p->latest_d)) /* NAN too */
		return;
	weigh(p, &s);
	if (!p->found || better(&s, &p->best))
		p->best = s;
	p->found = true;
}

/* Place, cost and distance change their course only where an end of the flip meets an edge, at the ends of
 * the allowance, on the meridian and in the middle of the flat part: the best start is one of these. */
static void try_all(struct placing *p)
{
	const struct flip_event *ev = p->ev;
	const double first_d = ev->t1_d - ev->b_min_d, last_d = ev->t4_d + ev->b_min_d;
	const double edge[] = {first_d, ev->t1_d, p->in_end_d, p->out_start_d, ev->t4_d, last_d};
	try_start(p, p->meridian_d);
	try_start(p, p->earliest_d);
	try_start(p, p->latest_d);
	try_start(p, 0.5 * (p->in_end_d + p->out_start_d - p->length_d));
	for (size_t i = 0; i < sizeof edge / sizeof edge[0]; i++) {
		try_start(p, edge[i]);
		try_start(p, edge[i] + ev->pad_d); /* begins so long after it */
		try_start(p, edge[i] - p->length_d);
		try_start(p, edge[i] - ev->pad_d - p->length_d);
	}
	for (int i = 0; i < p->usable->n; i++) { /* the gaps between the spans */
		try_start(p, p->usable->s[i].to_d);
		try_start(p, p->usable->s[i].from_d - p->length_d);
	}
}

bool mount_flip(const struct night *n, const struct star *s, const struct telescope *t,
		const struct intervals *usable, const struct flip_event *ev, struct flip *out)
{
	const double length_d = mount_flip_d(t);
	if (isnan(length_d) || usable->n == 0)
		return false;
	const double before_d = isnan(t->flip_before_min) ? 0.0 : t->flip_before_min * MIN_D,
		     after_d = isnan(t->flip_after_min) ? 0.0 : t->flip_after_min * MIN_D;
	const double first_d = usable->s[0].from_d, last_d = usable->s[usable->n - 1].to_d;
	const double meridian_d = night_star_transit_d(n, s, first_d + before_d + SAME_D);
	if (!(meridian_d + after_d < last_d - SAME_D))
		return false;
	const bool flat = !isnan(ev->t2_d);
	struct placing p = {.usable = usable,
			    .ev = ev,
			    .meridian_d = meridian_d,
			    .earliest_d = meridian_d - before_d,
			    .latest_d = meridian_d + after_d,
			    .length_d = length_d,
			    .in_end_d = flat ? ev->t2_d : ev->mid_d,
			    .out_start_d = flat ? ev->t3_d : ev->mid_d};
	try_all(&p);
	*out = (struct flip){p.best.from_d, p.best.from_d + length_d, meridian_d, p.best.place};
	return true;
}
