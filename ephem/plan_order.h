/* SPDX-License-Identifier: MIT
 * A plan while it is made. Between the files of the plan (night_plan.h). */
#ifndef WANE_EPHEM_PLAN_ORDER_H
#define WANE_EPHEM_PLAN_ORDER_H

#include "ephem/plan_pointing.h"

struct plan_order {
	const struct plan_input *in;
	struct plan_pointings p;
	struct plan_candidate *candidate;
	size_t n_candidates;
	struct order_item *item; /* [n]: the fixed items, then the candidates */
	size_t n, *taken;	 /* taken: [n], of the last order that was asked for */
	bool *pinned;		 /* [in->n] */
	struct order_gaps gaps;
};
/* The order under what is pinned at the moment. Fixed items that overlap: ST_CONFLICT, named by their
 * numbers. */
MUST_USE enum status plan_order_solve(struct plan_order *k, struct order_result *result, struct err *e);
/* Whether a limb of it can be caught at all. */
bool plan_catchable(const struct window *w);
/* Fills out->left: what of the offers out->item does not hold, why, and at what cost. Leaves `pinned` as it
 * was and `taken` as it comes. */
MUST_USE enum status plan_left_out(struct plan_order *k, struct night_plan *out, struct err *e);

#endif
