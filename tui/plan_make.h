/* SPDX-License-Identifier: MIT
 * Working out, loading, changing and storing a plan: between the run, the engine and the store. */
#ifndef WANE_TUI_PLAN_MAKE_H
#define WANE_TUI_PLAN_MAKE_H

#include "tui/plan_view.h"

/* What the user wants of a plan, beyond what is stored. Texts borrowed. */
struct plan_wish {
	const char *draft;		 /* which draft; NULL: the kept one, else `main` */
	const char *const *pin, *const *drop, *const *block, *const *lost, *const *poor; /* as typed */
	int n_pin, n_drop, n_block, n_lost, n_poor;
	bool rebuild;			 /* worked out anew from what is stored, though nothing else is wished */
	bool afresh;			 /* nothing of what is stored is taken over, marks apart */
	const char *from;		 /* plan what is left of the night from this time; NULL */
	/* taken back: pins and drops of an event, blocks by their text, lost and poor time by its span as it was typed */
	const char *const *free, *const *unblock, *const *unlost;
	int n_free, n_unblock, n_unlost;
	bool costs;			 /* say what each one left out would cost: a running order for each */
	double moved_min;		 /* from how many minutes a member counts as moved; NAN: the stored setting moved_min */
};
/* Whether anything is wished that needs the plan worked out anew. */
bool wish_any(const struct plan_wish *wish);
/* The plan of a night. A draft that is not stored is a new one (out->edition 0). Nothing wished and a stored plan: as it is stored, compared with today's ephemerides. Else worked out anew from what is stored and what is wished, what has
 * begun standing as it is. night: a view of the same night, zeroed; filled here, borrowed by *out, the caller's: night_view_free. *echo (the caller's to free) gets a line
 * for each time that was typed, resolved with its date; NULL when none was. ST_SYNTAX, ST_RANGE: something typed is wrong (exit code 2); ST_ABSENT: a target that is not there or has no window that night, a time that does not happen in it, something to be taken back that there is not. */
MUST_USE enum status plan_get(struct run *r, int32_t evening_mjd, const struct plan_wish *wish, struct night_view *night, struct plan_view *out,
			      char **echo, struct err *e);
/* An edition of the stored plan `of` as it was, not compared with today; its night is that of `of`, borrowed. ST_ABSENT: `of` is not stored, or has no
 * such edition. */
MUST_USE enum status plan_edition(const struct plan_view *of, int edition, struct plan_view *out, struct err *e);
/* Stores it as a draft (v->draft, or `main`) in a change set of its own; kept as well where keep. */
MUST_USE enum status plan_save(struct run *r, struct plan_view *v, const char *draft, bool keep, struct err *e);
/* Marks the item that holds a target (`NAME` or `NAME@EPOCH`) at once, in a change set of its own. */
MUST_USE enum status plan_mark_item(struct run *r, const struct plan_view *v, const char *target, enum plan_state state, const char *cause,
				    const char *note, struct err *e);

/* What changed from one plan to another of the same night, in words, a line each: moved, new, gone, and why. *lines, and it, are the caller's to free. */
MUST_USE enum status plan_changes(const struct plan_view *before, const struct plan_view *after, char ***lines, size_t *n, struct err *e);

/* The next thing to do at an instant: slew, start, T1, T2, mid, T3, T4, leave of which item. item -1: nothing more. */
enum plan_action { PLAN_SLEW, PLAN_START, PLAN_T1, PLAN_T2, PLAN_MID, PLAN_T3, PLAN_T4, PLAN_LEAVE };
extern const char *const plan_action_words[];
struct plan_next {
	long item, member;
	enum plan_action action;
	struct utc at;
};
struct plan_next plan_next(const struct plan_view *v, struct utc now);

#endif
