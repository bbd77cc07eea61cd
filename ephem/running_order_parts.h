/* SPDX-License-Identifier: MIT
 * Between the files of the running order: the free items as a net of "may follow", and the relaxed answer on
 * it. */
#ifndef WANE_EPHEM_RUNNING_ORDER_PARTS_H
#define WANE_EPHEM_RUNNING_ORDER_PARTS_H

#include "ephem/running_order.h"

/* A free item that no fixed one and no drop rules out. Its rank is its place by end, then start, then index.
 */
struct order_spot {
	double from_d, to_d;
	int gap_class;
	int segment; /* fixed items before it */
	size_t index;
	int64_t units; /* worth in steps */
	int pins;      /* pinned events in it */
	int n_events;
	int event[ORDER_EVENTS_MAX]; /* each once */
};

/* Pins first, then worth, then fewer items, as one number that adds up along an order: (pins * pin_units +
 * worth) * item_share - items. */
struct order_scale {
	double step; /* worth of one unit */
	int64_t pin_units, item_share;
	int64_t common; /* every worth is a multiple of it */
	int64_t force;	/* a score that outweighs all pins and all worth; 0 where the work may not force */
};

/* Rank i may stand right before rank j: surely where i < sure[j], if the gap allows it where i < near[j],
 * never beyond. */
struct order_net {
	const struct order_gaps *gaps;
	int n;
	struct order_spot *spot;
	int64_t *score;
	struct order_scale scale;
	int *sure, *near;
	size_t *cell;	      /* of j: where the pairs (sure[j]..near[j] - 1, j) begin in asked */
	unsigned char *asked; /* pairs whose gap is known; NULL: too many to keep */
	/* the relaxed answer */
	int64_t *value,
	    *top; /* best order that ends with a rank; best that ends before a rank (top[0]: none, 0) */
	int *before, *top_at;
};
#define ORDER_BARRED (INT64_MIN / 2) /* gain of a rank that is not to be taken */

/* Whether b may come right after a in time; of classes and times alone. */
bool order_gap_holds(const struct order_gaps *gaps, double to_d, int from_class, double from_d, int to_class);
/* Whether rank i < j may stand right before rank j. */
bool order_may_follow(struct order_net *net, int i, int j);
/* Fills sure, near, cell and asked from the spots. */
MUST_USE enum status order_net_link(struct order_net *net, struct err *e);
/* The greatest sum of gains of an order, an event taken any number of times. Of equal ones that whose last
 * item has the lowest rank, then the one before it, and so on. Gains below ORDER_BARRED / 2 are not taken. */
int64_t order_relaxed(struct order_net *net, const int64_t gain[]);
/* Ranks of the last relaxed answer in order of time; returns how many. */
int order_chain(const struct order_net *net, int chain[]);

/* The same from behind: end[j], the greatest sum of an order that begins with rank j; beyond is for its own
 * use [n + 1]. */
void order_ends(struct order_net *net, const int64_t gain[], int64_t end[], int64_t beyond[]);

/* The best order in which every event is taken once, as ranks in order of time. */
struct order_found {
	int n;
	int *chain; /* [net->n] */
	int64_t score;
	bool optimal;
	int64_t bound; /* of the score; equal to it where optimal */
	long looks;    /* that it took */
};
MUST_USE enum status order_split(struct order_net *net, int n_events, long looks_max, struct order_found *out,
				 struct err *e);

/* A running order while it is made. */
struct order_place {
	double to_d, from_d;
	size_t index;
};
struct order_work {
	const struct order_item *item;
	const struct order_gaps *gaps;
	const struct order_choice *choice;
	struct order_place *place; /* [n], in order of time */
	size_t n;
	size_t *fixed; /* [n_fixed]: indices of items, in order of time */
	size_t n_fixed;
	bool *held;	/* [n_events]: in a fixed item */
	bool may_force; /* the scale has room for scale.force */
	struct order_net net;
	struct order_found found; /* the order; empty at first, with room for any */
};
/* Checks the input and builds the net, from item, gaps, choice, n and may_force. Errors: as of running_order.
 */
MUST_USE enum status order_work_open(struct order_work *w, size_t conflict[2], struct err *e);
/* Merges what was found and the fixed items in order of time, adds up what they are worth and counts the
 * pins. */
MUST_USE enum status order_work_result(struct order_work *w, size_t taken[], struct order_result *out,
				       struct err *e);
void order_work_close(struct order_work *w); /* after a failed order_work_open too */

/* Makes orders that take every event once; *found keeps the best of them. */
struct order_maker {
	struct order_net *net;
	struct order_found *found;
	size_t words;	/* of a set of events; 0: no memory for such sets */
	uint64_t *held; /* [n][words]: events of the best order that ends with a rank */
	int64_t *value, *top;
	int *before, *chain;
	int *owner; /* [n_events]: place in a chain of the item that holds it, or -1 */
	bool *kept;
};
MUST_USE enum status order_maker_open(struct order_maker *m, struct order_net *net, int n_events,
				      struct order_found *found, struct err *e);
void order_maker_close(struct order_maker *m); /* after a failed order_maker_open too */
/* From a relaxed answer. */
void order_make_from_chain(struct order_maker *m, const int chain[], int n);
/* By gains (ORDER_BARRED: not to be taken): each rank follows the best order that holds none of its events.
 * Good, not always the best. */
void order_make_from_gains(struct order_maker *m, const int64_t gain[]);

#endif
