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

/* What the left are asked by, opened when it is needed. */
struct questions {
	struct plan_order *k;
	bool *held;    /* [in->n] */
	bool *has_way; /* [in->n]: some candidate holds it */
	struct order_choice pins_choice, no_pins_choice;
	struct order_through *pins, *no_pins;
};

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

/* The items of the order that hold an event which the order of the question does not. One that is only cut
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
	for (size_t i = 0; i < out->n_items; i++)
		for (int j = 0; j < out->item[i].n; j++)
			if (!held[out->item[i].member[j].offer]) {
				add_clash(left, i);
				break;
			}
}

/* The best order with this offer under the pins that hold, or, of a pin that was missed, under none. What
 * goes for it, and what it costs where no pin does. */
static enum status force_in(struct questions *q, const struct night_plan *out, struct plan_left *left,
			    struct err *e)
{
	struct plan_order *k = q->k;
	const bool alone = k->in->offer[left->offer].pinned;
	struct order_through **t = alone ? &q->no_pins : &q->pins;
	struct order_result result;
	bool held;
	enum status st = ST_OK;
	if (!*t)
		st = order_through_open(k->item, k->n, &k->gaps, alone ? &q->no_pins_choice : &q->pins_choice,
					t, e);
	if (st == ST_OK)
		st = order_through_event(*t, (int)left->offer, k->taken, &result, &held, e);
	if (st != ST_OK)
		return st;
	left->at_most = !result.optimal;
	if (!held || (!alone && result.pins_missed > out->pins_missed))
		return ST_OK;
	add_lost(k, &result, out, left, q->held);
	if (!alone)
		left->cost = fmax(out->worth - result.worth, 0.0);
	return ST_OK;
}

static enum status explain(struct questions *q, const struct night_plan *out, size_t offer,
			   struct plan_left *left, struct err *e)
{
	const struct plan_order *k = q->k;
	const struct plan_offer *o = &k->in->offer[offer];
	*left = (struct plan_left){.offer = offer, .reason = LEFT_CLASH, .cost = NAN};
	if (o->dropped)
		left->reason = LEFT_DROPPED;
	else if (!plan_catchable(o->window))
		left->reason = LEFT_WORTHLESS;
	else if (!q->has_way[offer])
		left->reason = !clashes_with_begun(k, out, left) ? LEFT_NO_TIME
			       : o->pinned			 ? LEFT_PINS
								 : LEFT_CLASH;
	else {
		left->reason = o->pinned ? LEFT_PINS : LEFT_CLASH;
		if (!k->in->without_costs)
			return force_in(q, out, left, e);
	}
	return ST_OK;
}

static enum status explain_all(struct questions *q, struct night_plan *out, bool planned[], struct err *e)
{
	const struct plan_input *in = q->k->in;
	for (size_t i = 0; i < out->n_items; i++)
		for (int j = 0; j < out->item[i].n; j++)
			planned[out->item[i].member[j].offer] = true;
	for (size_t i = 0; i < q->k->n_candidates; i++)
		for (int j = 0; j < q->k->candidate[i].n; j++)
			q->has_way[q->k->candidate[i].member[j].offer] = true;
	for (size_t i = 0; i < in->n; i++) {
		if (planned[i] || in->offer[i].settled)
			continue;
		const enum status st = explain(q, out, i, &out->left[out->n_left++], e);
		if (st != ST_OK)
			return st;
	}
	return ST_OK;
}

enum status plan_left_out(struct plan_order *k, struct night_plan *out, struct err *e)
{
	const size_t n = k->in->n;
	struct questions q = {
	    .k = k,
	    .held = malloc((n + 1) * sizeof *q.held),
	    .has_way = calloc(n + 1, sizeof *q.has_way),
	    .pins_choice = {.event_pinned = k->pinned, .n_events = (int)n},
	    .no_pins_choice = {.n_events = (int)n},
	};
	bool *planned = calloc(n + 1, sizeof *planned);
	enum status st;
	out->left = malloc((n + 1) * sizeof *out->left);
	if (q.held && q.has_way && planned && out->left)
		st = explain_all(&q, out, planned, e);
	else
		st = err_set(e, ST_MEMORY, "no memory for what a plan of %zu windows leaves out", n);
	order_through_close(q.pins);
	order_through_close(q.no_pins);
	free(q.held);
	free(q.has_way);
	free(planned);
	return st;
}
