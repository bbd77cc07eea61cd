/* SPDX-License-Identifier: MIT
 * A running order as it is shown, whether it was just worked out or is stored: every page, table and sheet of a plan is drawn from this. The figures are texts as
 * the column table prints them, so that a stored plan shows what was planned. */
#ifndef WANE_TUI_PLAN_VIEW_H
#define WANE_TUI_PLAN_VIEW_H

#include "ephem/night_plan.h"
#include "tui/run.h"

#include <stdbool.h>

struct plan_member_view {
	const char *target, *variant; /* whole, short, ingress, egress */
	enum event_kind kind;
	long epoch;
	const char *branch; /* "" */
	int64_t target_id, ephemeris_id;
	double worth;
	const char **figure; /* [column_count] machine texts in the order of the column table, "" none; times UTC to the second */
	const char *usable;  /* `FROM/TO,FROM/TO`, UTC: the usable parts of the reserve */
	/* the target now */
	double ra_deg, dec_deg, mag; /* ICRS of the night; NAN unknown */
	const char *mag_band;
	int ephemeris_version; /* of the ephemeris that the figures come from; 0 unknown */
	const char *ephemeris_source, *ephemeris_entered_utc, *ephemeris_scale;
	/* contacts again, as instants; t2, t3 not there: has_flat false */
	struct utc t1, t2, t3, t4, mid;
	bool has_flat;
	/* a kept plan against the ephemerides of today; moved_min NAN: nothing to compare with, or a plan just made */
	double moved_min; /* the mid-time is later by this */
	bool moved;	  /* by at least the number of minutes that counts */
	const char *moved_why; /* `version 3 (Tern group 2026) adopted 2026-04-20`; "" */
};
struct plan_item_view {
	int order;	 /* 1, 2, ... */
	const char *key; /* tells it from every other item of its site, night and telescope; the same as long as its windows are */
	enum plan_state state;
	const char *cause, *note, *marked_utc; /* "" */
	struct utc slew_by, start, latest_start, end;
	bool has_latest; /* latest_start holds */
	double worth;
	bool in_day;	 /* the Sun is up for some of it, the move to it included: no sheet takes it */
	size_t n;
	struct plan_member_view *member; /* in order of T1 */
	char if_missed[400]; /* one or two sentences: what to do when the first limb is missed */
};
enum plan_block_kind { BLOCK_SET, BLOCK_STANDING, BLOCK_LOST, BLOCK_POOR };
struct plan_block_view {
	enum plan_block_kind kind;
	const char *text; /* `engineering hour` */
	struct utc from, to;
	double noise;	  /* BLOCK_POOR: factor */
	bool near_sun;	  /* the Sun is above -6 deg for some of it: the caution stands beside it */
};
struct plan_left_view {
	const char *target;
	enum event_kind kind;
	long epoch;
	const char *reason; /* in words */
	double cost;	    /* NAN */
};
struct plan_view {
	const struct run *run;
	const struct night_view *night; /* borrowed: site, night, Sun and Moon, free time; its windows are those of this plan's making */
	const char *telescope;		/* "" the site's unnamed one */
	const char *draft;		/* of a proposal (stored false): the draft that it was worked out from; "" none */
	bool stored, kept;
	const char *damage;		/* of what is stored, what could not be read and is passed over, in words; "" */
	int64_t plan_id;
	int edition;			/* of a proposal: the one that it was worked out from; 0 none is stored */
	const char *stored_utc, *who;	/* of the edition; of a proposal: of the newest change in the store, "" an empty store */
	const char *limits;		/* name=value, tab between */
	const char *leap_date;
	struct plan_rules rules;
	double gap_min;			/* least time between neighbours */
	double worth, bound;
	bool optimal;
	size_t n_items;
	struct plan_item_view *item;
	size_t n_blocks;
	struct plan_block_view *block; /* in order of time */
	size_t n_left;
	struct plan_left_view *left;
	size_t n_pins, n_drops;
	const char **pin, **drop; /* as typed: target names, or NAME@EPOCH */
	/* items and blocks of whatever plan of this night was kept before that this one has no more, as they were: for cancelling.
	 * Empty for a draft beside a kept plan, and for a proposal that something was wished of */
	size_t n_gone, n_gone_blocks;
	struct plan_item_view *gone;
	struct plan_block_view *gone_block;
	int64_t revisions;	 /* of the night's plans: struct plan_past; 0 none was ever stored */
	const char *revised_utc; /* "" */
	long moved; /* members that moved */
	struct plan_arena *arena; /* owns all that is not said to be borrowed */
};
void plan_view_free(struct plan_view *v);

/* The same kind, text and times to the second. */
bool plan_block_same(const struct plan_view *v, const struct plan_block_view *a, const struct plan_block_view *b);

/* Text of a member's figure by the column's name; "" none. */
const char *member_figure(const struct plan_member_view *m, const char *column);

/* The column with the chance of what is planned of a member: of its one limb, or of both. */
const char *member_chance_column(const struct plan_member_view *m);

#endif
