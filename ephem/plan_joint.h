/* SPDX-License-Identifier: MIT
 * Joint items: intervals in which one pointing does several events. Between the files of the plan
 * (night_plan.h). */
#ifndef WANE_EPHEM_PLAN_JOINT_H
#define WANE_EPHEM_PLAN_JOINT_H

#include "ephem/plan_pointing.h"

/* A growing list of candidates. */
struct candidate_list {
	size_t n, room;
	struct plan_candidate *c; /* the list's: free() */
};
/* A new one at the end, not filled; NULL: no memory. */
struct plan_candidate *candidate_add(struct candidate_list *list);

/* One way of one offer. */
struct offered_way {
	size_t offer;
	struct plan_way way;
};
/* Makes the candidate of n ways (members in order of T1; from the first start to the last end), that points
 * at the star `centre`. */
void candidate_fill(struct plan_candidate *c, const struct plan_input *in, size_t centre,
		    const struct offered_way way[], size_t n);

/* Adds the joint items that point at the star `centre`, from the ways [n] of its offers and of those whose
 * stars share its pointing; sorts them. An item is left out where another one with the same events lies
 * within it and is worth as much; where it points at its `centre` only by choice (the lowest star of its
 * members that has all of them in its field is the one); and where its members leave a gap longer than the
 * settling. Where more than ORDER_EVENTS_MAX events lie in one interval those of most worth are taken.
 * ST_MEMORY only. */
MUST_USE enum status joint_items(const struct plan_input *in, const struct plan_pointings *p, size_t centre,
				 struct offered_way way[], size_t n, struct candidate_list *list,
				 struct err *e);

#endif
