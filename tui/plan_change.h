/* SPDX-License-Identifier: MIT
 * Storing, marking and taking back plans from the interface, whose own store is open for reading only. Each
 * is a change set of its own; *said tells what was done. */
#ifndef WANE_TUI_PLAN_CHANGE_H
#define WANE_TUI_PLAN_CHANGE_H

#include "tui/plan_make.h"

enum { PLAN_SAID_BYTES = 240, PLAN_DRAFT_BYTES = 164, PLAN_DRAFTS_MAX = 40 };

/* plan_save over the file. draft NULL: the view's own, else `main`. */
MUST_USE enum status plan_store_now(struct run *r, struct plan_view *v, const char *draft, bool keep,
				    char said[static PLAN_SAID_BYTES], struct err *e);
/* plan_mark_item over the file. v is stored. */
MUST_USE enum status plan_mark_now(struct run *r, const struct plan_view *v, const char *target,
				   enum plan_state state, const char *cause, const char *note,
				   char said[static PLAN_SAID_BYTES], struct err *e);
/* Takes back the newest change of a plan that holds, of any night, whoever made it. ST_ABSENT: none;
 * ST_CONFLICT as history_undo. */
MUST_USE enum status plan_undo_now(struct run *r, char said[static PLAN_SAID_BYTES], struct err *e);

/* The stored drafts of a night at the run's site and telescope, the first PLAN_DRAFTS_MAX by name. */
struct plan_drafts {
	size_t n;
	struct {
		char name[PLAN_DRAFT_BYTES];
		bool kept;
		int edition;
		double worth;
	} draft[PLAN_DRAFTS_MAX];
};
MUST_USE enum status plan_drafts_of(struct run *r, int32_t evening_mjd, struct plan_drafts *out,
				    struct err *e);

#endif
