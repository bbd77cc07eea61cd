/* SPDX-License-Identifier: MIT
 * The running order: of the items that one telescope could do in a night, those that fit one after the other and are worth most together.
 * It knows items, not windows: from, to, worth, the events that an item holds, where it points.
 *
 * Exact. Intervals with a gap that hangs on the pair: V(j) = w_j + max over i with to_i + g(i, j) <= from_j of V(i) (weighted interval
 * scheduling, Kleinberg & Tardos 2006, sec. 6.1, from memory, with pairwise gaps); right where g(i, k) <= g(i, j) + length(j) + g(j, k). An event
 * may be held by several items (whole, one limb, joint) and is taken once: where the relaxed answer takes one twice it is split into
 * branches (without the one, without the other) under the bound of the relaxed answer. Test: test_running_order.c (unit, property: all subsets). */
#ifndef WANE_EPHEM_RUNNING_ORDER_H
#define WANE_EPHEM_RUNNING_ORDER_H

#include "ephem/err.h"

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

enum { ORDER_EVENTS_MAX = 8 }; /* events in one item */

struct order_item {
	double from_d, to_d; /* from <= to, finite */
	double worth;	     /* >= 0; NAN counts as 0, above 1e9 as 1e9. Compared in steps of 1e-9, coarser where sums would not fit 58 bits */
	int gap_class;	     /* where it points: argument of the gap function */
	int n_events;	     /* 0..ORDER_EVENTS_MAX */
	int event[ORDER_EVENTS_MAX]; /* >= 0; two items with an event in common exclude each other */
	bool fixed;	     /* it is in the order whatever it costs: what has begun, a block with a place of its own */
};
struct order_gaps {
	/* Time between the end of an item and the start of the next one [d], within [least_d, most_d]. */
	double (*gap_d)(const void *ctx, int from_class, int to_class);
	const void *ctx;
	double least_d, most_d;
};
struct order_choice {
	const bool *event_pinned;  /* [n_events] one of its items must be taken where that can be; NULL none */
	const bool *event_dropped; /* [n_events] none of its items is taken; NULL none */
	int n_events;
	long nodes_max; /* relaxed answers looked at, of branches and to bound them; 0: 100000 (under a second for 500 items) */
};
struct order_result {
	size_t n;
	double worth;	/* of the order, fixed items included */
	double bound;	/* no order with as many pins is worth more; equal to worth where optimal */
	bool optimal;
	int pins_missed; /* pinned events that could not be taken */
};
/* Fills taken[] (room for n; indices of the items in order of time) and *out. The greatest number of pinned events is taken first, then the
 * greatest worth. Ties: the fewer items, then the earlier end of the last item, then its lower index, then the same of the one before it, so that equal input gives
 * equal output (where events had to be split, the last rules hold within a branch, and after 3,000 looks fewer items are no longer looked for). Items of no length
 * at one moment follow each other by index. Items that overlap a fixed one (gaps included) are out; fixed ones may be closer to each other than the gap. A fixed item
 * keeps its events from all others. ST_RANGE: an item's times are not finite or the wrong way round, an event out of range, the limits of the gaps below 0, not finite
 * or the wrong way round, more than 200,000 items. ST_CONFLICT: two fixed items overlap; conflict[2] (may be NULL) names them. ST_MEMORY. */
MUST_USE enum status running_order(const struct order_item item[], size_t n, const struct order_gaps *gaps, const struct order_choice *choice,
				   size_t taken[], struct order_result *out, size_t conflict[2], struct err *e);

/* Questions after an order: what would it be if it had to hold one more event? Two passes over all items (one from each end of the night)
 * answer for every event whose answer takes no event twice; the others are split into branches one by one. */
struct order_through;
/* *out is the caller's: order_through_close. It borrows item, gaps and choice. choice->nodes_max is for each question; 0: 2,000; when all
 * questions took 50 times as many each gets a twentieth. Errors: as of running_order. */
MUST_USE enum status order_through_open(const struct order_item item[], size_t n, const struct order_gaps *gaps, const struct order_choice *choice,
					struct order_through **out, struct err *e);
/* Of the orders that hold the event that with the greatest number of pinned events, then the greatest worth, then the fewest items: fills taken[] and *result as
 * running_order does (pins_missed: of the choice). *held false: no order holds it, or none was found where result->optimal is false. Ties: of the event's items that which
 * ends first; what comes before it by the rules of running_order; what comes after it as in the order without the question where that is one of the best, else
 * what ends first. ST_RANGE: an event out of range. ST_MEMORY. */
MUST_USE enum status order_through_event(struct order_through *t, int event, size_t taken[], struct order_result *result, bool *held, struct err *e);
void order_through_close(struct order_through *t); /* NULL: nothing */

#endif
