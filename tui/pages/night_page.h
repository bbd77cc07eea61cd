/* SPDX-License-Identifier: MIT
 * The night page: state, an update from one key, tick or size, and a drawing that computes nothing. */
#ifndef WANE_TUI_PAGES_NIGHT_PAGE_H
#define WANE_TUI_PAGES_NIGHT_PAGE_H

#include "tui/pages/night_detail.h"
#include "tui/pages/night_head.h"
#include "tui/pages/night_rows.h"
#include "tui/parts/keys.h"
#include "tui/parts/line_edit.h"
#include "tui/parts/text_view.h"

#include <stdbool.h>

/* What an update asks the loop to do. */
enum want {
	WANT_NOTHING,
	WANT_NIGHT, /* load the night `wanted_mjd`, with long shots if show_long_shots */
	WANT_REPAINT,
	WANT_SUSPEND,
	WANT_RED,
	WANT_QUIT
};
/* What stands on the screen. */
enum night_mode { MODE_LIST, MODE_DATE, MODE_DETAILS, MODE_HELP, MODE_LIMITS, MODE_FIRST_RUN };

enum {
	PAGE_ROWS_MIN = 6,
	PAGE_COLS_MIN = 24,
	PAGE_ROWS_FULL = 18,
	PAGE_COLS_FULL = 60,
	PAGE_ROWS_ROOMY = 30,
	MESSAGE_BYTES = 512
};
struct night_page {
	const struct run *run; /* borrowed */
	struct night_view view;
	struct night_rows rows;
	struct night_head head;
	bool loaded; /* a night is in view */
	int32_t wanted_mjd;
	bool show_long_shots;
	size_t selected, top;
	int grid_rows, grid_cols;
	struct utc now;
	enum night_mode mode;
	bool pasting;
	struct line_edit date;
	struct text_view details; /* of the selected window: pane and whole view */
	struct text_view text;	  /* help, limits, first run */
	char message[MESSAGE_BYTES];
	enum role message_role;
	char count[120]; /* `3/12 windows, 5 long shots hidden, a shows them` */
};

/* A page of a run, with nothing loaded; about 250 kB: not for the stack. Without site or targets it opens on
 * what to do first. */
void night_page_open(struct night_page *p, const struct run *run);
void night_page_close(struct night_page *p);
/* Takes a night over (view becomes the page's, also on failure) and keeps the selection where the same event
 * is in it. */
MUST_USE enum status night_page_take(struct night_page *p, struct night_view *view, struct err *e);
void night_page_size(struct night_page *p, int rows, int cols);
void night_page_tick(struct night_page *p, struct utc now);
enum want night_page_key(struct night_page *p, uint32_t code);
/* A message until the next key. */
void night_page_say(struct night_page *p, enum role role, const char *text);
void night_page_draw(const struct night_page *p, struct grid *g);

/* Rows of the list that a screen has room for; and of the details pane under it (0: none). */
int night_list_rows(const struct night_page *p);
int night_pane_rows(const struct night_page *p);
/* Rows above the list. */
int night_head_rows(const struct night_page *p);

#endif
