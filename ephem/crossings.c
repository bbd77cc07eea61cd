/* SPDX-License-Identifier: MIT */
#include "ephem/crossings.h"

#include "ephem/units.h"

#include <math.h>
#include <stdbool.h>

#define ROOT_D (0.004 / DAY_S)
#define EXTREMUM_D (3.0 / DAY_S)

struct sample {
	double t, y;
};

static bool positive(double y)
{
	return y >= 0.0;
}

static double root_between(const struct curve *c, struct sample a, struct sample b)
{
	while (b.t - a.t > ROOT_D) {
		struct sample m = {.t = 0.5 * (a.t + b.t)};
		m.y = c->at(c->context, m.t);
		if (positive(m.y) == positive(a.y))
			a = m;
		else
			b = m;
	}
	return 0.5 * (a.t + b.t);
}

/* Golden-section search for the point nearest to zero between a and b, both on the same side; stops as soon
 * as the other side is seen. */
static struct sample nearest_zero(const struct curve *c, struct sample a, struct sample b)
{
	const double golden = 0.38196601125010515;
	double side = positive(a.y) ? 1.0 : -1.0;
	struct sample p = {.t = a.t + golden * (b.t - a.t)}, q = {.t = b.t - golden * (b.t - a.t)};
	p.y = c->at(c->context, p.t);
	q.y = c->at(c->context, q.t);
	for (;;) {
		struct sample best = side * p.y < side * q.y ? p : q;
		if (positive(best.y) != positive(a.y) || b.t - a.t <= EXTREMUM_D)
			return best;
		if (best.t == p.t) {
			b.t = q.t;
			q = p;
			p.t = a.t + golden * (b.t - a.t);
			p.y = c->at(c->context, p.t);
		} else {
			a.t = p.t;
			p = q;
			q.t = b.t - golden * (b.t - a.t);
			q.y = c->at(c->context, q.t);
		}
	}
}

/* The set under construction: `since` is the start of the open span, NAN while the curve is negative. */
struct building {
	struct intervals set;
	double from, to, since;
};

static void cross(struct building *b, double t)
{
	if (isnan(b->since)) {
		b->since = t;
		return;
	}
	intervals_append(&b->set, fmax(b->since, b->from), fmin(t, b->to));
	b->since = (double)NAN;
}

struct intervals crossings_positive(const struct curve *c, double from_d, double to_d, double step_d)
{
	struct building b = {.set = intervals_none(), .from = from_d, .to = to_d, .since = (double)NAN};
	if (!(to_d > from_d) || !(step_d > 0.0))
		return b.set;
	struct sample before = {.t = from_d - step_d}, now, next;
	before.y = c->at(c->context, before.t);
	now = before;
	bool has_before = false;
	if (positive(before.y))
		b.since = before.t;
	while (now.t < to_d + step_d) {
		double step = step_d;
		if (c->rate_max > 0.0) /* no zero can be nearer than this */
			step = fmax(step_d, 0.999 * fabs(now.y) / c->rate_max);
		next.t = fmin(now.t + step, to_d + step_d);
		next.y = c->at(c->context, next.t);
		bool flips = positive(next.y) != positive(now.y);
		if (has_before && !flips && positive(before.y) == positive(now.y) &&
		    fabs(now.y) < fabs(before.y) && fabs(now.y) <= fabs(next.y)) {
			struct sample m = nearest_zero(c, before, next);
			if (positive(m.y) != positive(now.y)) {
				cross(&b, root_between(c, before, m));
				cross(&b, root_between(c, m, next));
			}
		}
		if (flips)
			cross(&b, root_between(c, now, next));
		has_before = true;
		before = now;
		now = next;
	}
	if (!isnan(b.since))
		intervals_append(&b.set, fmax(b.since, from_d), to_d);
	return b.set;
}
