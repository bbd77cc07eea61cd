/* SPDX-License-Identifier: MIT
 * The drift page: how ephemerides age, what would refresh them, and the residuals of a target's mid-times.
 * State, an update from one key, tick or size, and a drawing that computes nothing. */
#ifndef WANE_TUI_PAGES_DRIFT_PAGE_H
#define WANE_TUI_PAGES_DRIFT_PAGE_H

#include "tui/pages/drift_list.h"
#include "tui/pages/drift_plot.h"
#include "tui/pages/page.h"
#include "tui/pages/residual_view.h"
#include "tui/parts/keys.h"
#include "tui/parts/line_edit.h"
#include "tui/parts/text_view.h"

#include <stdbool.h>

enum drift_mode {
	DRIFT_MODE_LIST,
	DRIFT_MODE_AT,
	DRIFT_MODE_FIND,
	DRIFT_MODE_FILTER,
	DRIFT_MODE_SORT,
	DRIFT_MODE_HELP,
	DRIFT_MODE_RESIDUALS
};
enum {
	DRIFT_ROWS_MIN = 6,
	DRIFT_COLS_MIN = 24,
	DRIFT_ROWS_FULL = 18,
	DRIFT_COLS_FULL = 60,
	DRIFT_MESSAGE_BYTES = 512,
	DRIFT_ASKED_BYTES = LINE_CHARS_MAX * 4 + 1,
	DRIFT_WARM_NIGHTS = 16, /* computed in one piece of work */
	DRIFT_SORT_LINE = 1	/* first line of the choice of orders */
};
/* What a key wants to be stored. */
enum drift_change { CHANGE_NONE, CHANGE_COUNT, CHANGE_UNDO };
struct drift_page {
	const struct run *run; /* borrowed */
	struct drift_table table;
	bool loaded;
	bool wants_refresh;   /* searches for windows */
	struct utc chosen_at; /* what `t` chose */
	bool at_chosen;
	uint8_t *plan; /* [table.n], enum drift_plan */
	size_t *order; /* [table.n], the first n are shown */
	size_t n;
	int sort; /* enum drift_cell */
	bool sort_turned;
	size_t selected, top;
	char kept[NAME_BYTES_MAX]; /* name of the selected target */
	/* the search between keys */
	int warm_day;
	size_t warm_site;
	bool warm;
	int grid_rows, grid_cols;
	enum tier tier;
	struct utc now;
	enum drift_mode mode;
	bool pasting;
	struct line_edit line;
	char filter_text[DRIFT_ASKED_BYTES], find_text[DRIFT_ASKED_BYTES];
	struct drift_layout layout;
	int head, list, pane;			       /* rows; the rule stands between list and pane */
	int plot_row, plot_col, text_rows, text_width; /* in the pane */
	struct drift_line line_of[GRID_ROWS_MAX];      /* of the rows in sight, from top on */
	struct plot plot;
	struct text_view details, text;
	int choice;
	struct residual_view residuals;
	enum drift_change wanted_change;
	bool residuals_wanted; /* to be shown with the next load */
	char title[120], chosen[60], clock[NAME_BYTES_MAX + 120], sums[300], waiting[120];
	char count[DRIFT_ASKED_BYTES + 200];
	char message[DRIFT_MESSAGE_BYTES];
	enum role message_role;
};

void drift_page_open(struct drift_page *p, const struct run *run);
void drift_page_close(struct drift_page *p);
MUST_USE enum status drift_page_load(struct drift_page *p, struct run *run, struct err *e);
/* Takes a table over (it becomes the page's, also on failure): the rest of a load. */
MUST_USE enum status drift_page_take(struct drift_page *p, struct drift_table *table, struct err *e);
void drift_page_drop(struct drift_page *p);
void drift_page_size(struct drift_page *p, int rows, int cols, enum tier tier);
void drift_page_tick(struct drift_page *p, struct utc now);
enum want drift_page_key(struct drift_page *p, uint32_t code);
void drift_page_say(struct drift_page *p, enum role role, const char *text);
void drift_page_draw(const struct drift_page *p, struct grid *g);
/* Serves the wanted change; true when something was stored. */
bool drift_page_change(struct drift_page *p, struct run *run);
bool drift_page_work_waits(const struct drift_page *p);
/* A few nights' tables, or the search of one target. */
void drift_page_work(struct drift_page *p, struct run *run);

/* --- between the files of the page --- */

void drift_page_settle(struct drift_page *p);
void drift_page_arrange(struct drift_page *p);
void drift_page_select(struct drift_page *p, long to);
const struct drift_row *drift_page_selected(const struct drift_page *p);
int drift_view_rows(const struct drift_page *p);
/* Texts: head, pane, help, choice of orders. */
void drift_head_texts(struct drift_page *p);
void drift_detail_lines(struct drift_page *p);
void drift_help_lines(struct drift_page *p);
void drift_sort_lines(struct drift_page *p);

#endif
