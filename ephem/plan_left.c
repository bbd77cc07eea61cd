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

/* The order with this offer pinned too: what it costs, and which items lose an event by it. An item that is
 * only cut shorter stays. */
static enum status force_in(struct plan_order *k, const struct night_plan *out, struct plan_left *left,
			    bool held[], struct err *e)
{
	struct order_result result;
	k->pinned[left->offer] = true;
	const enum status st = plan_order_solve(k, &result, e);
	k->pinned[left->offer] = false;
	if (st != ST_OK)
		return st;
	for (size_t i = 0; i < k->in->n; i++)
		held[i] = false;
	for (size_t i = 0; i < result.n; i++) {
		const struct order_item *item = &k->item[k->taken[i]];
		for (int j = 0; j < item->n_events; j++)
			held[item->event[j]] = true;
	}
	if (!held[left->offer] || result.pins_missed > out->pins_missed)
		return ST_OK;
	left->cost = fmax(out->worth - result.worth, 0.0);
	for (size_t i = 0; i < out->n_items; i++)
		for (int j = 0; j < out->item[i].n; j++)
			if (!held[out->item[i].member[j].offer]) {
				add_clash(left, i);
				break;
			}
	return ST_OK;
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
	else if (o->pinned)
		left->reason = LEFT_PINS;
	else if (!k->in->without_costs)
		return force_in(k, out, left, held, e);
	return ST_OK;
}

enum status plan_left_out(struct plan_order *k, struct night_plan *out, struct err *e)
{
	const size_t n = k->in->n;
	bool *held = malloc((n + 1) * sizeof *held), *planned = calloc(n + 1, sizeof *planned);
	out->left = malloc((n + 1) * sizeof *out->left);
	enum status st = ST_OK;
	if (!held || !planned || !out->left)
		st = err_set(e, ST_MEMORY, "no memory for what a plan of %zu windows leaves out", n);
	for (size_t i = 0; st == ST_OK && i < out->n_items; i++)
		for (int j = 0; j < out->item[i].n; j++)
			planned[out->item[i].member[j].offer] = true;
	for (size_t i = 0; st == ST_OK && i < n; i++)
		if (!planned[i] && !k->in->offer[i].settled)
			st = explain(k, out, i, &out->left[out->n_left++], held, e);
	free(held);
	free(planned);
	return st;
}
