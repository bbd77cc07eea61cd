/* SPDX-License-Identifier: MIT
 * The plan of the night that the page shows: worked out or as it is stored, what was changed of it, its
 * texts, and what it says of the rows of the list. */
#ifndef WANE_TUI_PAGES_PAGE_PLAN_H
#define WANE_TUI_PAGES_PAGE_PLAN_H

#include "tui/pages/night_head.h"
#include "tui/pages/plan_edits.h"
#include "tui/parts/text_view.h"

/* A view and the night that it borrows: never moved. */
struct made_plan {
	struct night_view night;
	struct plan_view view;
	bool costs; /* of what was left out, as far as they can be told */
};
enum {
	PLAN_LINE_BYTES = 320,
	PLAN_AT_ONCE = 500, /* targets up to which a plan is worked out with the night, else between keys */
	PLAN_COSTS_AT_ONCE = 300 /* targets up to which costs are worked out with it */
};
struct page_plan {
	struct made_plan *made; /* NULL: there is none (yet) */
	bool waits;		/* to be worked out */
	bool changed;		/* by the edits of its night, not stored */
	bool from_now;		/* of what is left of a running night */
	struct plan_edits edits;
	/* cost of one event that was left out, asked for on its own; "" none yet */
	char cost_of[EDIT_TEXT_BYTES];
	double cost;	 /* NAN: it can't be forced in */
	bool cost_waits; /* for that of the selected window */
	/* texts: of the plan, and of what comes next; of decreasing length */
	char line[PLAN_LINE_BYTES], line_short[PLAN_LINE_BYTES], line_least[PLAN_LINE_BYTES];
	enum role line_role;
};

void page_plan_free(struct page_plan *plan); /* edits, too */
/* Lets go of all that borrows from the run; edits stay. */
void page_plan_drop(struct page_plan *plan);
struct edit_night page_plan_night(const struct run *r, int32_t mjd);
/* The plan of a night with the edits of it. When the edits no longer go with what is stored they are let go
 * of, the plan is loaded without them and *fault (of n bytes, "" otherwise) says so; with fault NULL that is
 * a failure. The plan before goes to *before (the caller's: page_plan_made_free) or, NULL, is let go of. On
 * failure all stays as it was. */
MUST_USE enum status page_plan_load(struct page_plan *plan, struct run *r, int32_t mjd,
				    struct made_plan **before, char *fault, size_t n, struct err *e);
/* A plan without the edits, for the caller: page_plan_made_free. draft NULL: as it is shown without them;
 * afresh: worked out now from nothing that is stored but marks. */
MUST_USE enum status page_plan_other(struct run *r, int32_t mjd, const char *draft, bool afresh,
				     struct made_plan **out, struct err *e);
void page_plan_made_free(struct made_plan *made);
/* Whether the cost of a row that was left out is to be worked out on its own. */
bool page_plan_needs_cost(const struct page_plan *plan, const struct night_row *row);
/* What forcing an event in would cost; into plan->cost, NAN on failure. */
MUST_USE enum status page_plan_cost(struct page_plan *plan, struct run *r, int32_t mjd, const char *event,
				    struct err *e);

/* Order numbers, states and worths into the rows; the head's line. */
void page_plan_mark_rows(struct page_plan *plan, struct night_rows *rows);
/* Texts of what comes next by the plan, where it is tonight's. */
void page_plan_tick(const struct page_plan *plan, struct night_head *h, const struct night_view *view,
		    struct utc now);
/* NAME@EPOCH. */
void page_plan_event(const struct night_row *row, char out[EDIT_TEXT_BYTES]);
/* How an event is chosen in the plan, and by which of its choices (NULL none). */
enum event_choice page_plan_choice(const struct plan_view *v, const struct night_row *row, const char **text);
const struct plan_left_view *page_plan_left(const struct page_plan *plan, const struct night_row *row);
/* What the plan says of a row, one paragraph; false: nothing. */
bool page_plan_row_words(const struct page_plan *plan, const struct night_row *row, char *out, size_t n);

#endif
