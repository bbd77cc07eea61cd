/* SPDX-License-Identifier: MIT
 * The night page: state, an update from one key, tick or size, and a drawing that computes nothing. */
#ifndef WANE_TUI_PAGES_NIGHT_PAGE_H
#define WANE_TUI_PAGES_NIGHT_PAGE_H

#include "tui/pages/night_curve.h"
#include "tui/pages/night_detail.h"
#include "tui/pages/night_filter.h"
#include "tui/pages/night_head.h"
#include "tui/pages/night_layout.h"
#include "tui/pages/night_rows.h"
#include "tui/pages/night_strip.h"
#include "tui/pages/page.h"
#include "tui/pages/page_plan.h"
#include "tui/parts/keys.h"
#include "tui/parts/line_edit.h"
#include "tui/parts/text_view.h"
#include "tui/plan_change.h"

#include <stdbool.h>

/* What stands on the screen: the list, with or without a question in its last row; a text; a choice. */
enum night_mode {
	MODE_LIST,
	MODE_DATE,
	MODE_FIND,
	MODE_FILTER,
	MODE_DETAILS,
	MODE_HELP,
	MODE_LIMITS,
	MODE_FIRST_RUN,
	MODE_SORT,
	MODE_SITES,
	MODE_PLAN,
	MODE_COMPARE,
	MODE_DRAFTS,
	MODE_MARK,
	/* questions of the plan */
	MODE_CAUSE,
	MODE_NOTE,
	MODE_LOST_TIME,
	MODE_SAVE_AS,
	MODE_LEAVE /* although something is not stored: y or n */
};
/* What a key wants of the plan, done by night_page_change. */
enum plan_want {
	PLAN_WANT_NOTHING,
	PLAN_WANT_PIN,
	PLAN_WANT_DROP,
	PLAN_WANT_KEEP,
	PLAN_WANT_KEEP_OTHER, /* the draft that is compared with */
	PLAN_WANT_MARK,
	PLAN_WANT_LOST_TIME,
	PLAN_WANT_AFRESH,
	PLAN_WANT_UNDO,
	PLAN_WANT_WORDS,
	PLAN_WANT_DRAFTS,
	PLAN_WANT_COMPARE,
	PLAN_WANT_SAVE_AS
};
/* Differences of two plans in words; line: plan_compare_free. */
struct plan_compare {
	char title[2][PLAN_LINE_BYTES];
	char **line;
	size_t n;
	bool there;
};

enum {
	PAGE_ROWS_MIN = 6,
	PAGE_COLS_MIN = 24,
	PAGE_ROWS_FULL = 18,
	PAGE_COLS_FULL = 60,
	PAGE_ROWS_ROOMY = 30,
	MESSAGE_BYTES = 512,
	ASKED_BYTES = LINE_CHARS_MAX * 4 + 1,
	STRIP_SLOTS = GRID_ROWS_MAX,
	NO_SITE = -1
};
/* How the screen's height is shared. */
struct night_shape {
	int head, list, pane;	  /* rows; the rule stands between list and pane */
	int plan_row;		  /* 1: the plan has a row of its own in the head */
	int sky;		  /* rows of the pane with the sky band and the strip: 0 or 2 */
	int curve;		  /* rows of the picture of altitudes; one more for the contacts */
	int hours;		  /* 1: the hours stand in the row under the contacts */
	int text_at, text, width; /* first row of the pane's text, its rows and columns */
};
struct night_page {
	const struct run *run; /* borrowed */
	struct night_view view;
	struct night_rows rows;
	struct night_head head;
	bool loaded; /* a night is in view */
	int32_t wanted_mjd;
	long wanted_site; /* place in the run's list; NO_SITE: as it is */
	bool show_long_shots;
	struct page_plan plan;
	bool select_current; /* once the plan is there: nothing was selected by hand */
	enum plan_want wanted;
	struct {
		enum plan_state state;
		char event[EDIT_TEXT_BYTES], cause[ASKED_BYTES], note[ASKED_BYTES];
	} mark;
	char asked[ASKED_BYTES]; /* lost time, name of a draft */
	struct plan_drafts drafts;
	struct plan_compare compare;
	size_t selected, top;
	struct {
		char name[NAME_BYTES_MAX + 8];
		long epoch;
		enum event_kind kind;
		int32_t mjd;
	} kept; /* the selected event, to find it again when the list was made anew */
	int grid_rows, grid_cols;
	enum tier tier;
	struct utc now;
	enum night_mode mode;
	bool pasting;
	struct line_edit line; /* of a question */
	/* how the list is arranged */
	int sort;
	bool sort_turned;
	struct filter filter;
	char filter_text[ASKED_BYTES], find_text[ASKED_BYTES];
	/* pictures */
	struct night_layout layout;
	struct night_shape shape;
	struct night_axis axis; /* cols 0: none */
	int axis_at;		/* its column on the screen */
	bool axis_in_list;
	struct strip strip[STRIP_SLOTS]; /* of rows in sight, each in the slot of its number; or in slot 0 the
					    selected one's alone */
	struct curve curve;
	/* texts */
	struct text_view details; /* of the selected window: pane and whole view */
	struct text_view text;	  /* help, limits, first run, choices */
	int choice;		  /* line of a choice */
	char message[MESSAGE_BYTES];
	enum role message_role;
	char count[ASKED_BYTES + 200]; /* `3/12 windows by be-on time, 5 long shots hidden, a shows them` */
};

/* The functions of page_night, for a state of its own type; about 500 kB: not for the stack. Without site or
 * targets it opens on what to do first. */
void night_page_open(struct night_page *p, const struct run *run);
void night_page_close(struct night_page *p);
/* Makes the wanted night at the wanted site and takes it. */
MUST_USE enum status night_page_load(struct night_page *p, struct run *run, struct err *e);
/* Takes a night over (view becomes the page's, also on failure) and keeps the selection where the same event
 * is in it. */
MUST_USE enum status night_page_take(struct night_page *p, struct night_view *view, struct err *e);
/* Lets go of the night and of all that it borrows from the run, whose lists are about to change; the next
 * load finds the selected window again. */
void night_page_drop(struct night_page *p);
void night_page_size(struct night_page *p, int rows, int cols, enum tier tier);
void night_page_tick(struct night_page *p, struct utc now);
enum want night_page_key(struct night_page *p, uint32_t code);
void night_page_say(struct night_page *p, enum role role, const char *text);
void night_page_draw(const struct night_page *p, struct grid *g);
/* Serves what a key wanted of the plan; true: something was stored. */
bool night_page_change(struct night_page *p, struct run *run);
bool night_page_work_waits(const struct night_page *p);
/* Works out the plan that waits, or the cost that the details wait for. */
void night_page_work(struct night_page *p, struct run *run);

/* --- between the files of the page --- */

/* After a change of selection, list, mode or size. */
void night_page_settle(struct night_page *p);
/* The text or choice of the mode. */
void night_page_make_text(struct night_page *p);
/* Scrolls so that the marked line of a choice is in sight. */
void night_page_show_choice(struct night_page *p);
void night_page_select(struct night_page *p, long to);
/* The best running window if it is likely to be done, else the next one, else what runs, else the first. */
void night_page_select_current(struct night_page *p);
/* Sorts and filters again; the selected window stays selected where it is still there. Without memory the
 * list stays as it is and a message says so. */
void night_page_arrange(struct night_page *p);
/* The plan was worked out, changed or dropped: rows, order and texts follow. */
void night_page_show_plan(struct night_page *p);
/* True when the action was one of the plan; *want is what it asks for. */
bool night_plan_action(struct night_page *p, enum action action, enum want *want);
/* What was entered in a question of the plan. */
enum want night_plan_entered(struct night_page *p, const char *text);
/* The chosen line of a choice of the plan. */
enum want night_plan_chosen(struct night_page *p);
/* A key while it is asked whether to leave. */
enum want night_plan_leave_key(struct night_page *p, uint32_t code);
/* Texts and choices of the plan's modes, into p->text. */
void plan_lines(struct night_page *p);
void compare_lines(struct night_page *p);
void draft_lines(struct night_page *p);
void mark_lines(struct night_page *p);
void plan_compare_free(struct plan_compare *c);
/* Whether a mode is a choice of lines. */
bool night_mode_is_choice(enum night_mode mode);
const struct night_row *night_page_selected(const struct night_page *p);
/* Rows of a text or choice that fill the screen, and the first of them. */
int night_view_rows(const struct night_page *p);
int night_view_at(const struct night_page *p);
bool night_page_is_full(const struct night_page *p);
/* Columns of the details, once the axis has its place. */
int night_page_text_width(const struct night_page *p);
/* In this order: the axis, then (with the details written) the heights, then the pictures. */
void night_page_place_axis(struct night_page *p);
void night_page_share(struct night_page *p);
void night_page_make_pictures(struct night_page *p);
void night_page_forget_strips(struct night_page *p);

#endif
