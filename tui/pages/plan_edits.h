/* SPDX-License-Identifier: MIT
 * What was changed of plans on the page and is not stored: kept night by night while the program runs. */
#ifndef WANE_TUI_PAGES_PLAN_EDITS_H
#define WANE_TUI_PAGES_PLAN_EDITS_H

#include "tui/plan_make.h"

enum { EDIT_TEXT_BYTES = NAME_BYTES_MAX + 24, EDITS_MAX = 100 };

/* Whose plan. */
struct edit_night {
	int64_t site_id, telescope_id;
	int32_t mjd;
};
enum edit_kind { EDIT_EVENT, EDIT_LOST, EDIT_AFRESH };
enum event_choice { CHOSEN_NOT, CHOSEN_PINNED, CHOSEN_DROPPED };
struct plan_edit {
	struct edit_night night;
	enum edit_kind kind;
	enum event_choice was, is;    /* of an event: in what is stored, and now */
	char text[EDIT_TEXT_BYTES];   /* NAME@EPOCH, or FROM..TO as it was typed */
	char stored[EDIT_TEXT_BYTES]; /* the stored choice of the event; "" none */
};
struct plan_edits {
	struct plan_edit *edit; /* in the order in which they were made; plan_edits_free */
	size_t n, room;
};
void plan_edits_free(struct plan_edits *edits);
size_t plan_edits_of(const struct plan_edits *edits, const struct edit_night *night);
/* How many nights have any. */
size_t plan_edits_nights(const struct plan_edits *edits);
/* ST_RANGE: EDITS_MAX of the night are there; ST_MEMORY. */
MUST_USE enum status plan_edits_add(struct plan_edits *edits, const struct plan_edit *edit, struct err *e);
/* Takes the newest of the night back into *out; false: none. */
bool plan_edits_pop(struct plan_edits *edits, const struct edit_night *night, struct plan_edit *out);
void plan_edits_clear(struct plan_edits *edits, const struct edit_night *night);
/* The newest edit of an event since the plan was last asked for afresh; NULL none. *afresh (may be NULL): it
 * was. */
const struct plan_edit *plan_edits_event(const struct plan_edits *edits, const struct edit_night *night,
					 const char *text, bool *afresh);

/* All edits of a night as one wish, whose texts are borrowed from them. Nothing is wished where they come out
 * as what is stored. */
struct edit_wish {
	const char *pin[EDITS_MAX], *drop[EDITS_MAX], *free[EDITS_MAX], *lost[EDITS_MAX];
	struct plan_wish wish; /* points into this struct: not to be copied */
};
void plan_edits_wish(const struct plan_edits *edits, const struct edit_night *night, struct edit_wish *out);

#endif
