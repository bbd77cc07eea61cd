/* SPDX-License-Identifier: MIT */
#include "ephem/night_plan.h"

#include "ephem/plan_order.h"
#include "ephem/plan_spans.h"

#include <limits.h>
#include <math.h>
#include <stdlib.h>

enum status plan_order_solve(struct plan_order *k, struct order_result *result, struct err *e)
{
	const struct order_choice choice = {.event_pinned = k->pinned, .n_events = (int)k->in->n};
	size_t conflict[2] = {0, 0};
	const enum status st = running_order(k->item, k->n, &k->gaps, &choice, k->taken, result, conflict, e);
	if (st == ST_CONFLICT)
		return err_set(e, st,
			       "items %zu and %zu that have begun overlap: they must follow each other",
			       conflict[0] + 1, conflict[1] + 1);
	return st;
}

static void order_free(struct plan_order *k)
{
	plan_pointings_free(&k->p);
	free(k->candidate);
	free(k->item);
	free(k->taken);
	free(k->pinned);
}

static enum status order_prepare(struct plan_order *k, struct err *e)
{
	const struct plan_input *in = k->in;
	enum status st = plan_pointings_make(in, &k->p, e);
	if (st == ST_OK)
		st = plan_candidates(in, &k->candidate, &k->n_candidates, e);
	if (st != ST_OK)
		return st;
	plan_pointings_keep_gaps(&k->p);
	k->n = in->n_fixed + k->n_candidates;
	k->item = malloc((k->n + 1) * sizeof *k->item);
	k->taken = malloc((k->n + 1) * sizeof *k->taken);
	k->pinned = malloc((in->n + 1) * sizeof *k->pinned);
	if (!k->item || !k->taken || !k->pinned)
		return err_set(e, ST_MEMORY, "no memory for a plan of %zu windows", in->n);
	for (size_t i = 0; i < in->n_fixed; i++)
		k->item[i] = (struct order_item){.from_d = in->fixed[i].from_d,
						 .to_d = in->fixed[i].to_d,
						 .gap_class = (int)(in->n + i),
						 .fixed = true};
	for (size_t i = 0; i < k->n_candidates; i++)
		k->item[in->n_fixed + i] = k->candidate[i].order;
	for (size_t i = 0; i < in->n; i++)
		k->pinned[i] = in->offer[i].pinned && !in->offer[i].dropped && !in->offer[i].settled;
	k->gaps = (struct order_gaps){
	    .gap_d = plan_pointings_gap_d,
	    .ctx = &k->p,
	    .least_d = 0.0,
	    .most_d = in->rules->settle_d + 180.0 / in->rules->slew_deg_d + fmax(in->rules->filter_d, 0.0),
	};
	return ST_OK;
}

static struct plan_item item_of(const struct plan_order *k, size_t taken)
{
	const struct order_item *o = &k->item[taken];
	struct plan_item item = {
	    .from_d = o->from_d, .to_d = o->to_d, .latest_start_d = NAN, .worth = o->worth, .fixed = -1};
	if (o->fixed) {
		item.fixed = (long)taken;
		return item;
	}
	const struct plan_candidate *c = &k->candidate[taken - k->in->n_fixed];
	item.latest_start_d = c->latest_start_d;
	item.n = c->n;
	for (int i = 0; i < c->n; i++)
		item.member[i] = c->member[i];
	return item;
}

/* The items in order of time, with the moves between them. */
static bool fill_items(const struct plan_order *k, const struct order_result *result, struct night_plan *out)
{
	out->item = malloc((result->n + 1) * sizeof *out->item);
	if (!out->item)
		return false;
	out->n_items = result->n;
	for (size_t i = 0; i < result->n; i++) {
		struct plan_item *item = &out->item[i];
		*item = item_of(k, k->taken[i]);
		double move_d = plan_first_move_d(k->in->rules);
		if (i > 0 && !plan_place_lost(k->in, out->item[i - 1].to_d, item->from_d))
			move_d = plan_pointings_gap_d(&k->p, k->item[k->taken[i - 1]].gap_class,
						      k->item[k->taken[i]].gap_class);
		item->slew_by_d = item->from_d - move_d;
	}
	out->worth = result->worth;
	out->bound = result->bound;
	out->optimal = result->optimal;
	out->pins_missed = result->pins_missed;
	return true;
}

enum status night_plan_make(const struct plan_input *in, struct night_plan *out, struct err *e)
{
	struct plan_order k = {.in = in};
	struct order_result result;
	*out = (struct night_plan){0};
	if (in->n > INT_MAX / 2 || in->n_fixed > INT_MAX / 2)
		return err_set(e, ST_RANGE, "%zu windows in one plan: at most %d", in->n, INT_MAX / 2);
	enum status st = order_prepare(&k, e);
	if (st == ST_OK)
		st = plan_order_solve(&k, &result, e);
	if (st == ST_OK && !fill_items(&k, &result, out))
		st = err_set(e, ST_MEMORY, "no memory for the %zu items of a plan", result.n);
	if (st == ST_OK)
		st = plan_left_out(&k, out, e);
	order_free(&k);
	if (st != ST_OK)
		night_plan_free(out);
	return st;
}

void night_plan_free(struct night_plan *p)
{
	free(p->item);
	free(p->left);
	*p = (struct night_plan){0};
}
