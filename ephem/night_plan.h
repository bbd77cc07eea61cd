/* SPDX-License-Identifier: MIT
 * A night's plan for one telescope: windows become items (variants of an event, joint items of one pointing), the running order is chosen among them, what was left
 * out is explained. Times t_d are days of the night (night.h). */
#ifndef WANE_EPHEM_NIGHT_PLAN_H
#define WANE_EPHEM_NIGHT_PLAN_H

#include "ephem/running_order.h"
#include "ephem/season.h"

/* What an item does of an event. */
enum variant {
	VARIANT_WHOLE,
	VARIANT_SHORT,	 /* both limbs, a baseline cut down (not below b_min and the pad) */
	VARIANT_INGRESS, /* one limb alone */
	VARIANT_EGRESS,
	VARIANT_COUNT
};
extern const char *const variant_words[VARIANT_COUNT]; /* whole, short, ingress, egress */

/* Rules of worth and of moving. Where no source is named the value is common practice, no source. */
struct plan_rules {
	double settle_d;      /* centring and settling after each move (4 min) */
	double slew_deg_d;    /* speed of a move (1 deg/s) */
	double filter_d;      /* change of filter (0.5 min) */
	double first_slew_deg; /* way of a move from where nobody knows the telescope to be (90 deg) */
	double field_deg;     /* windows whose stars are this close share a pointing; 0: planets of one star only */
	double limb_share;    /* one limb alone, of the whole event (0.2) */
	double limb_trust;    /* with a forecast: how much of its bits counts of a limb planned alone (0.5): what is seen of one limb only biases the
			       * mid-time by more than its noise says (warning of Barros et al. 2013, MNRAS 430, 3032, from memory; the number is our own) */
	double short_share;   /* factor for each baseline that is cut down (0.95) */
	double unknown_share; /* without a chance: this times the coverage stands for it (0.1) */
};
struct plan_rules plan_rules_built_in(void);
/* The same with what a telescope says (NAN leaves the built-in value). */
struct plan_rules plan_rules_of(const struct telescope *t);

enum plan_state { PLAN_PLANNED, PLAN_PINNED, PLAN_STARTED, PLAN_DONE, PLAN_PARTLY, PLAN_LOST, PLAN_STATE_COUNT };
extern const char *const plan_state_words[PLAN_STATE_COUNT];

/* One window that is offered to the plan. */
struct plan_offer {
	const struct window *window;
	bool pinned, dropped;
	bool settled; /* it is in a fixed item, or done with: nothing new is planned for it */
};
/* An item that stands: it has begun. */
struct plan_fixed {
	double from_d, to_d;
	struct vec3 direction; /* of the pointing (unit vector, any frame shared with the offers: struct star.icrs) */
};

enum { PLAN_MEMBERS_MAX = ORDER_EVENTS_MAX };
struct plan_member {
	size_t offer;
	enum variant variant;
	double worth;
	double from_d, to_d; /* what it occupies of the item */
};
struct plan_item {
	double slew_by_d;  /* when the move to it should begin; advice */
	double from_d, to_d;
	double latest_start_d; /* what is planned can still be done from here; a fixed item: NAN */
	double worth;
	long fixed;	   /* index into the fixed ones; -1: chosen */
	int n;
	struct plan_member member[PLAN_MEMBERS_MAX]; /* in order of T1; none in a fixed item */
};
/* Why an offer is not in the order. */
enum left_reason {
	LEFT_WORTHLESS,	 /* neither limb can be caught: the window's lost_by says by what */
	LEFT_NO_TIME,	 /* what is free of the night (allotment, blocks, lost time, from now on) holds no variant of it */
	LEFT_CLASH,	 /* others are worth more together */
	LEFT_DROPPED,	 /* by the user */
	LEFT_PINS,	 /* pinned itself, and clashes with other pins or with what has begun */
	LEFT_REASON_COUNT
};
enum { LEFT_CLASHES_MAX = 4 };
struct plan_left {
	size_t offer;
	enum left_reason reason;
	double cost;	   /* worth that the order would lose if it were forced in; NAN: can't be forced in, or no way was found */
	bool at_most;	   /* the cost is that of an order that was found; that a better one costs less was not ruled out (after 2,000 looks, running_order.h). Without a cost: that there is a way was not ruled out */
	size_t n_clash;	   /* items of the order that would lose an event for it; of LEFT_PINS: if it were the only pin */
	size_t clash[LEFT_CLASHES_MAX];
};
struct night_plan {
	size_t n_items;
	struct plan_item *item; /* in order of time; the plan's, as is left: night_plan_free */
	size_t n_left;
	struct plan_left *left; /* in the order of the offers */
	double worth, bound;
	bool optimal;
	int pins_missed;
};
struct plan_input {
	const struct night *night;
	const struct plan_offer *offer;
	size_t n;
	const struct plan_fixed *fixed; /* in order of time, disjoint */
	size_t n_fixed;
	const struct free_time *free; /* that the windows were made with; NULL: the whole night */
	double not_before_d;	      /* nothing new starts before (moving there included); -INFINITY: no such moment */
	const struct plan_rules *rules;
	bool without_costs; /* costs and clashes of the left are not worked out (NAN, none). Measured: 200 offers 1.5 ms, 1,000 17 ms with costs; without 0.5 ms,
			     * 4 ms. Joint items of crowded fields: 1,000 offers 0.13 s */
};
MUST_USE enum status night_plan_make(const struct plan_input *in, struct night_plan *out, struct err *e);
void night_plan_free(struct night_plan *p);

/* What a window is worth as a whole. With a forecast in bits: its worth. Else priority x open goals x chance of done, or x unknown_share x coverage where there is no
 * chance, x event_value where a forecast is on. A limb alone: priority x open goals that take one limb x its chance x its bits, or x limb_share x event_value. */
double plan_worth(const struct window *w, const struct plan_rules *rules);
/* The same of one limb alone, also what is left of an event that was begun as a whole (VARIANT_INGRESS, VARIANT_EGRESS); NAN: without a chance. */
double plan_limb_worth(const struct window *w, const struct plan_rules *rules, enum variant limb);
/* Moving from one direction to another: slew and settling [d]. */
double plan_move_d(const struct plan_rules *rules, struct vec3 from, struct vec3 to);

/* --- between the files of the plan, and for tests --- */
/* One way to do one event: what it occupies and what it is worth. */
struct plan_way {
	enum variant variant;
	double from_d, to_d, latest_start_d, worth;
};
enum { PLAN_WAYS_MAX = 32 };
/* The ways in which a window can be done in the free spans of the night: whole [reserve cut to usable time and to the span], cut baselines (before, after, both),
 * ingress alone [reserve start .. T2 + pad], egress alone [T3 - pad .. reserve end]. A span that begins where a block, time of others or not_before ends
 * costs the first move and the settling. Whole and short need [T1 - b_min, T4 + b_min] in one span, a limb alone needs b_min on its outer side and the pad on its
 * inner one. A baseline counts as cut where the span cuts more than a minute off it (not where the sky does: the chance knows of that); by choice it is cut
 * to b_min and the pad, where that saves more than a minute. Without a chance: whole only, cut where the span forces it. Chances below 0.0005 count as none.
 * What has begun bounds the spans too, with the moves from and to it. Returns how many. */
int plan_ways(const struct plan_input *in, size_t offer, struct plan_way way[PLAN_WAYS_MAX]);
/* A candidate of the order: an interval in which one pointing does one or more events. */
struct plan_candidate {
	struct order_item order;
	double latest_start_d;
	int n;
	struct plan_member member[PLAN_MEMBERS_MAX];
};
/* All candidates: each way of each offer, and joint items: for every start and end among the ways of one pointing the best ways inside, where together they leave no gap
 * longer than the settling, and the same without events that may be worth more elsewhere. A joint item points at the star of a member that has all the others within
 * field_deg (gap_class: the lowest offer of that star). Bounds: of other stars in a field the 24 offers of most worth, of one interval the ORDER_EVENTS_MAX events
 * of most worth, of a night the 4,096 joint items of most worth; a plan is the best of what is offered within them. *out is the caller's to free. */
MUST_USE enum status plan_candidates(const struct plan_input *in, struct plan_candidate **out, size_t *n, struct err *e);

#endif
