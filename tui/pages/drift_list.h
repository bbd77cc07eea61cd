/* SPDX-License-Identifier: MIT
 * The list of ageing ephemerides: its columns, and the texts of a row. */
#ifndef WANE_TUI_PAGES_DRIFT_LIST_H
#define WANE_TUI_PAGES_DRIFT_LIST_H

#include "db/text_clean.h"
#include "tui/drift_rows.h"
#include "tui/parts/grid.h"

enum drift_cell {
	DRIFT_NAME,
	DRIFT_NOW,
	DRIFT_AT,
	DRIFT_LIMIT,
	DRIFT_STALE,
	DRIFT_LOST,
	DRIFT_FIRST,
	DRIFT_BEST,
	DRIFT_AFTER,
	DRIFT_COUNTED,
	DRIFT_LAST,
	DRIFT_NEXT,
	DRIFT_WORDS,
	DRIFT_CELLS
};
struct drift_cell_column {
	const char *heading, *unit;
	int width, from_columns; /* least columns; shown on screens at least this wide */
	bool right;
	char key;	    /* chooses it in the choice of orders; 0: no order */
	const char *column; /* in the table of drift columns, which has the sentence; NULL: the words */
};
extern const struct drift_cell_column drift_cells[DRIFT_CELLS];

/* How far the search for a refresh is. */
enum drift_plan {
	SEARCH_NONE,	    /* no search: not asked for, no site, or no chance can be given */
	SEARCH_IF_SELECTED, /* it stays below the limit */
	SEARCH_WANTED,
	SEARCH_DONE
};

enum { DRIFT_CELL_BYTES = 24, DRIFT_WORDS_BYTES = 200 };
struct drift_line {
	size_t row; /* of the table; SIZE_MAX: none */
	char name[NAME_BYTES_MAX], text[DRIFT_CELLS][DRIFT_CELL_BYTES], words[DRIFT_WORDS_BYTES];
	enum role role, stale_role;
};
void drift_line_make(struct drift_line *line, const struct drift_table *t, size_t row, enum drift_plan plan,
		     const struct leap_table *leap);

struct drift_layout {
	int at[DRIFT_CELLS], width[DRIFT_CELLS]; /* width 0: not shown */
};
struct drift_layout drift_lay_out(int cols);

/* `2026-05-03`, `already`, `never`, `?` */
void drift_date_text(const struct drift_date *d, char *out, size_t n);
/* `0.7`, `98`, `?` */
void drift_minutes_text(double minutes, char *out, size_t n);
enum drift_plan drift_plan_of(const struct drift_row *row, const struct drift_table *t, bool wanted);

#endif
