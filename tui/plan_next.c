/* SPDX-License-Identifier: MIT
 * What comes next in a plan. */
#include "tui/plan_parts.h"

#include <string.h>

const char *const plan_action_words[] = {"slew", "start", "T1", "T2", "mid", "T3", "T4", "leave"};

/* Takes an action when it is not over and comes before what was found so far. */
static void consider(const struct plan_view *v, struct utc now, struct plan_next *next,
		     struct plan_next candidate)
{
	const struct leap_table *leap = &v->run->leap;
	if (utc_diff_s(leap, now, candidate.at) < 0.0)
		return;
	if (next->item < 0 || utc_diff_s(leap, candidate.at, next->at) > 0.0)
		*next = candidate;
}

/* Contacts that the item's time does not hold are none of its actions: one limb alone. */
static void contact(const struct plan_view *v, struct utc now, struct plan_next *next,
		    struct plan_next candidate)
{
	const struct leap_table *leap = &v->run->leap;
	const struct plan_item_view *item = &v->item[candidate.item];
	if (utc_diff_s(leap, item->start, candidate.at) >= 0.0 &&
	    utc_diff_s(leap, candidate.at, item->end) >= 0.0)
		consider(v, now, next, candidate);
}

struct plan_next plan_next(const struct plan_view *v, struct utc now)
{
	struct plan_next next = {.item = -1, .member = -1};
	for (size_t i = 0; i < v->n_items; i++) {
		const struct plan_item_view *item = &v->item[i];
		const long at = (long)i;
		if (item->state > PLAN_STARTED)
			continue;
		if (item->state != PLAN_STARTED) {
			consider(v, now, &next, (struct plan_next){at, -1, PLAN_SLEW, item->slew_by});
			consider(v, now, &next, (struct plan_next){at, -1, PLAN_START, item->start});
		}
		for (size_t k = 0; k < item->n; k++) {
			const struct plan_member_view *m = &item->member[k];
			const long member = (long)k;
			contact(v, now, &next, (struct plan_next){at, member, PLAN_T1, m->t1});
			if (m->has_flat)
				contact(v, now, &next, (struct plan_next){at, member, PLAN_T2, m->t2});
			contact(v, now, &next, (struct plan_next){at, member, PLAN_MID, m->mid});
			if (m->has_flat)
				contact(v, now, &next, (struct plan_next){at, member, PLAN_T3, m->t3});
			contact(v, now, &next, (struct plan_next){at, member, PLAN_T4, m->t4});
		}
		consider(v, now, &next, (struct plan_next){at, -1, PLAN_LEAVE, item->end});
	}
	return next;
}
