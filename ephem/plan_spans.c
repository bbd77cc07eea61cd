/* SPDX-License-Identifier: MIT */
#include "ephem/plan_spans.h"

#include "ephem/plan_pointing.h"
#include "ephem/units.h"

#include <math.h>

/* An end that is worked out as `from - move` must not reach beyond it by a rounding when the move is added
 * again; 0.1 microseconds. */
#define ROUNDING_D 1e-12

double plan_first_move_d(const struct plan_rules *rules)
{
	return rules->settle_d + rules->first_slew_deg / rules->slew_deg_d;
}

/* The team's own time, blocks left out. Clouds are not looked at: they leave the telescope where it is. */
static struct intervals own_time(const struct plan_input *in)
{
	if (!in->free)
		return intervals_one(0.0, in->night->length_d);
	const struct intervals own = intervals_and(&in->free->allotted, &in->free->unblocked);
	return intervals_clip(&own, 0.0, in->night->length_d);
}

/* What has begun and still runs at not_before; NULL: nothing does, so nobody knows where the telescope points
 * then. */
static const struct plan_fixed *running_at_start(const struct plan_input *in)
{
	for (size_t i = 0; i < in->n_fixed; i++)
		if (in->fixed[i].from_d <= in->not_before_d && in->not_before_d <= in->fixed[i].to_d)
			return &in->fixed[i];
	return NULL;
}

struct intervals plan_spans(const struct plan_input *in)
{
	const struct intervals own = own_time(in);
	const double move_d = plan_first_move_d(in->rules);
	struct intervals spans = intervals_none();
	for (int i = 0; i < own.n; i++)
		intervals_append(&spans, own.s[i].from_d + move_d, own.s[i].to_d);
	spans.overflow = own.overflow;
	if (in->free)
		spans = intervals_and(&spans, &in->free->clear);
	if (in->not_before_d > -INFINITY)
		spans = intervals_clip(&spans, in->not_before_d + (running_at_start(in) ? 0.0 : move_d),
				       in->night->length_d);
	return spans;
}

struct intervals plan_spans_at(const struct plan_input *in, struct vec3 direction)
{
	struct intervals spans = plan_spans(in);
	for (size_t i = 0; i < in->n_fixed; i++) {
		const struct plan_fixed *f = &in->fixed[i];
		double move_d = plan_gap_between_d(in->rules, f->direction, direction, true);
		/* a joint item points at another star of the field, a little farther away */
		if (move_d > 0.0)
			move_d += in->rules->field_deg / in->rules->slew_deg_d + ROUNDING_D;
		const struct intervals before = intervals_clip(&spans, -INFINITY, f->from_d - move_d);
		const struct intervals after = intervals_clip(&spans, f->to_d + move_d, INFINITY);
		spans = intervals_or(&before, &after);
	}
	return spans;
}

bool plan_place_lost(const struct plan_input *in, double from_d, double to_d)
{
	const struct intervals own = own_time(in);
	for (int i = 0; i < own.n; i++)
		if (own.s[i].from_d > from_d && own.s[i].from_d <= to_d)
			return true;
	return in->not_before_d > from_d && in->not_before_d <= to_d && !running_at_start(in);
}
