/* SPDX-License-Identifier: MIT
 * Sets of time: sorted disjoint closed intervals, times in days of the night. */
#ifndef WANE_EPHEM_INTERVALS_H
#define WANE_EPHEM_INTERVALS_H

#include <stdbool.h>

enum { SPANS_MAX = 64 };
struct span {
	double from_d, to_d;
};
/* n 0: empty. overflow is set (and later spans are dropped, so the set only shrinks) when more than SPANS_MAX would be needed. */
struct intervals {
	int n;
	bool overflow;
	struct span s[SPANS_MAX];
};

struct intervals intervals_none(void);
struct intervals intervals_one(double from_d, double to_d); /* empty when to <= from or NaN */
/* Appends a span that begins at or after the end of the last one; touching ones are merged. */
void intervals_append(struct intervals *set, double from_d, double to_d);
struct intervals intervals_and(const struct intervals *a, const struct intervals *b);
struct intervals intervals_or(const struct intervals *a, const struct intervals *b);
/* What is left of [from, to] without the set. */
struct intervals intervals_outside(const struct intervals *a, double from_d, double to_d);
struct intervals intervals_clip(const struct intervals *a, double from_d, double to_d);
/* Gaps between neighbours of at most gap_d are closed. */
struct intervals intervals_bridge(const struct intervals *a, double gap_d);
/* { x : [x + lo, x + hi] lies within one interval }, lo <= hi: where an event's mid-time must fall. */
struct intervals intervals_fit(const struct intervals *a, double lo_d, double hi_d);
double intervals_length(const struct intervals *a);
/* Length of the part within [from, to]. */
double intervals_overlap(const struct intervals *a, double from_d, double to_d);
bool intervals_contain(const struct intervals *a, double t_d);
/* The span that holds t; NULL when none does. */
const struct span *intervals_at(const struct intervals *a, double t_d);

#endif
