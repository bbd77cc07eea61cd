/* SPDX-License-Identifier: MIT
 * What a plan leaves out, and why. */
#include "ephem/plan_order.h"
#include "ephem/plan_spans.h"

#include <math.h>
#include <stdlib.h>

static void add_clash(struct plan_left *left, size_t item)
{
	if (left->n_clash < LEFT_CLASHES_MAX)
		left->clash[left->n_clash] = item;
	left->n_clash++;
}

/* An offer that has ways only as long as nothing has begun: the items in whose time they lie. */
static bool clashes_with_begun(const struct plan_order *k, const struct night_plan *out,
			       struct plan_left *left)
{
	struct plan_input in = *k->in;
	struct plan_way way[PLAN_WAYS_MAX];
	in.n_fixed = 0;
	const int n = k->in->n_fixed > 0 ? plan_ways(&in, left->offer, way) : 0;
	for (size_t i = 0; n > 0 && i < out->n_items; i++) {
		const struct plan_item *item = &out->item[i];
		if (item->fixed < 0)
			continue;
		const double move_d = plan_pointings_gap_d(&k->p, (int)(k->in->n + (size_t)item->fixed),
							   (int)k->p.star[left->offer]);
		for (int j = 0; j < n; j++)
			if (way[j].from_d < item->to_d + move_d && way[j].to_d > item->from_d - move_d) {
				add_clash(left, i);
				break;
			}
	}
	return n > 0;
}

/* The items of the order that hold an event which the order asked for last does not. One that is only cut
 * shorter stays. */
static void add_lost(const struct plan_order *k, const struct order_result *result,
		     const struct night_plan *out, struct plan_left *left, bool held[])
{
	for (size_t i = 0; i < k->in->n; i++)
		held[i] = false;
	for (size_t i = 0; i < result->n; i++) {
		const struct order_item *item = &k->item[k->taken[i]];
		for (int j = 0; j < item->n_events; j++)
			held[item->event[j]] = true;
	}
	for (size_t i = 0; held[left->offer] && i < out->n_items; i++)
		for (int j = 0; j < out->item[i].n; j++)
			if (!held[out->item[i].member[j].offer]) {
				add_clash(left, i);
				break;
			}
}

/* The order with this offer pinned too: what it costs, and what goes for it. */
static enum status force_in(struct plan_order *k, const struct night_plan *out, struct plan_left *left,
			    bool held[], struct err *e)
{
	struct order_result result;
	k->pinned[left->offer] = true;
	const enum status st = plan_order_solve(k, &result, e);
	k->pinned[left->offer] = false;
	if (st != ST_OK || result.pins_missed > out->pins_missed)
		return st;
	add_lost(k, &result, out, left, held);
	if (held[left->offer])
		left->cost = fmax(out->worth - result.worth, 0.0);
	return ST_OK;
}

/* A pin that was missed: what would go if it were the only one. */
static enum status pin_alone(struct plan_order *k, const struct night_plan *out, struct plan_left *left,
			     bool held[], struct err *e)
{
	struct order_result result;
	bool *pinned = k->pinned, *alone = calloc(k->in->n + 1, sizeof *alone);
	if (!alone)
		return err_set(e, ST_MEMORY, "no memory for the pins of %zu windows", k->in->n);
	alone[left->offer] = true;
	k->pinned = alone;
	const enum status st = plan_order_solve(k, &result, e);
	k->pinned = pinned;
	free(alone);
	if (st == ST_OK)
		add_lost(k, &result, out, left, held);
	return st;
}

static enum status explain(struct plan_order *k, const struct night_plan *out, size_t offer,
			   struct plan_left *left, bool held[], struct err *e)
{
	const struct plan_offer *o = &k->in->offer[offer];
	struct plan_way way[PLAN_WAYS_MAX];
	*left = (struct plan_left){.offer = offer, .reason = LEFT_CLASH, .cost = NAN};
	if (o->dropped)
		left->reason = LEFT_DROPPED;
	else if (!plan_catchable(o->window))
		left->reason = LEFT_WORTHLESS;
	else if (plan_ways(k->in, offer, way) == 0)
		left->reason = !clashes_with_begun(k, out, left) ? LEFT_NO_TIME
			       : o->pinned			 ? LEFT_PINS
								 : LEFT_CLASH;
	else {
		left->reason = o->pinned ? LEFT_PINS : LEFT_CLASH;
		if (!k->in->without_costs)
			return o->pinned ? pin_alone(k, out, left, held, e) : force_in(k, out, left, held, e);
	}
	return ST_OK;
}

static enum status explain_all(struct plan_order *k, struct night_plan *out, bool planned[], bool held[],
			       struct err *e)
{
	for (size_t i = 0; i < out->n_items; i++)
		for (int j = 0; j < out->item[i].n; j++)
			planned[out->item[i].member[j].offer] = true;
	for (size_t i = 0; i < k->in->n; i++) {
		if (planned[i] || k->in->offer[i].settled)
			continue;
		const enum status st = explain(k, out, i, &out->left[out->n_left++], held, e);
		if (st != ST_OK)
			return st;
	}
	return ST_OK;
}

enum status plan_left_out(struct plan_order *k, struct night_plan *out, struct err *e)
{
	const size_t n = k->in->n;
	bool *held = malloc((n + 1) * sizeof *held), *planned = calloc(n + 1, sizeof *planned);
	enum status st;
	out->left = malloc((n + 1) * sizeof *out->left);
	if (held && planned && out->left)
		st = explain_all(k, out, planned, held, e);
	else
		st = err_set(e, ST_MEMORY, "no memory for what a plan of %zu windows leaves out", n);
	free(held);
	free(planned);
	return st;
}
