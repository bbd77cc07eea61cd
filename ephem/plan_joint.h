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
/* The ways of all offers, by offer. */
struct offered_ways {
	size_t n, room;
	struct offered_way *way; /* [n] */
	size_t *first;		 /* [offers + 1]: where those of an offer begin */
};
/* Makes the candidate of n ways (members in order of T1; from the first start to the last end), that points
 * at the star `centre`. */
void candidate_fill(struct plan_candidate *c, const struct plan_input *in, size_t centre,
		    const struct offered_way way[], size_t n);

/* Adds the joint items that point at the star `centre`, from the ways [n] of its offers and of those whose
 * stars share its pointing (a copy of those in `ways`, which is sorted here). Left out are items that another
 * one with the same events lies within and is worth as much; those that another centre stands for (the lowest
 * star of the members that has all of them in its field); those whose members leave a gap longer than the
 * settling or lie in two free spans. Where more than ORDER_EVENTS_MAX events lie in one interval those of
 * most worth are taken. ST_MEMORY only. */
MUST_USE enum status joint_items(const struct plan_input *in, const struct plan_pointings *p,
				 const struct offered_ways *ways, size_t centre, struct offered_way way[],
				 size_t n, struct candidate_list *list, struct err *e);

#endif
