/* SPDX-License-Identifier: MIT
 * The windows of a night as rows of ready texts: made once when a night is loaded, so that drawing computes
 * nothing. */
#ifndef WANE_TUI_PAGES_NIGHT_ROWS_H
#define WANE_TUI_PAGES_NIGHT_ROWS_H

#include "db/text_clean.h"
#include "ephem/night_plan.h"
#include "tui/parts/grid.h"
#include "tui/run.h"

#include <stdbool.h>
#include <stddef.h>

/* Cells of a row, in the order in which they stand side by side. */
enum row_cell {
	ROW_STATE,
	ROW_NAME,
	ROW_ON,
	ROW_T1,
	ROW_MID,
	ROW_T4,
	ROW_LEAVE,
	ROW_ERROR,
	ROW_COVER,
	ROW_INGRESS,
	ROW_EGRESS,
	ROW_DONE,
	ROW_WORTH,
	ROW_SNR,
	ROW_TIMING,
	ROW_NOISE,
	ROW_ALT,
	ROW_AIRMASS,
	ROW_MOON,
	ROW_DEPTH,
	ROW_MAG,
	ROW_LOST,
	ROW_STRIP,
	ROW_FLAGS,
	ROW_CELLS
};
/* Whether it is shown only where there is a telescope to forecast with. */
bool row_cell_of_forecast(enum row_cell cell);
struct row_column {
	const char *heading, *unit; /* two lines above the list; unit of the times is their zone */
	int width;		    /* least columns */
	int from_columns;	    /* shown on screens at least this wide */
	bool right;		    /* figures end at the right edge */
	const char *
	    column; /* its name in the column table, whose sentence explains it; NULL: a picture of several */
	const char *sentence; /* where the column table has none */
};
extern const struct row_column row_columns[ROW_CELLS];

/* Where a window stands against the clock. */
enum row_state { STATE_AHEAD, STATE_NEXT, STATE_NOW, STATE_PAST };

enum { ROW_CELL_BYTES = 12, ROW_LOST_BYTES = 120 };
/* What the plan of the night says of a window. */
struct row_plan {
	int order; /* of its item; 0: not planned, and nothing below but dropped holds */
	enum plan_state state;
	bool moved, dropped;
	double slew_d, from_d, to_d; /* of the item, in the night */
};
struct night_row {
	const struct window *window; /* borrowed from the night's list */
	struct star star;
	char name[NAME_BYTES_MAX + 8];	      /* an occultation is marked */
	char text[ROW_CELLS][ROW_CELL_BYTES]; /* but name, cover, lost, strip and flags */
	enum glyph cover[PART_COUNT];
	enum role chance_role;
	char lost[ROW_LOST_BYTES], lost_long[ROW_LOST_BYTES];
	bool flip_only; /* a flip takes some minutes of flat part or baselines, and nothing else is lost */
	char flags[320];
	double on_d, leave_d; /* first and last usable moment; the reserve's ends where none is usable */
	bool has_chance, long_shot, usable;
	enum row_state state;
	double worth; /* of the window if it is done whole */
	struct row_plan plan;
	char number[8]; /* order in the plan, "" not planned */
};
struct night_rows {
	struct night_row *row; /* the rows'; night_rows_free */
	size_t n, total;       /* those behind the first n are left out by a filter */
	size_t long_shots;     /* of total */
};

/* Replaces the rows by those of a view, in its order (night_sort.h and night_filter.h arrange them). zone
 * NULL: UTC. ST_MEMORY: unchanged. */
MUST_USE enum status night_rows_make(struct night_rows *rows, const struct night_view *view,
				     const struct leap_table *leap, const struct zone *zone, struct err *e);
void night_rows_free(struct night_rows *rows);
/* Sets the states for a time of the night; `tonight`: one of the rows ahead is the next, of the plan where
 * there is one. */
void night_rows_tick(struct night_rows *rows, double now_d, bool tonight);

/* The planned row whose item runs, and is not done with; NULL none. */
const struct night_row *night_rows_running(const struct night_rows *rows, double now_d);

/* The one that is next; NULL none. */
const struct night_row *night_rows_next(const struct night_rows *rows);

/* The row of a state with the best chance of done, the first of equals, no long shot; NULL when there is
 * none. *count of them. */
const struct night_row *night_rows_best(const struct night_rows *rows, enum row_state state, size_t *count);

/* `97`, `<1`, `>99`, `?` */
void chance_text(double chance, char *out, size_t n);
/* `altitude`, `the Sun`: what took a part, in a sentence. */
extern const char *const cause_phrases[CAUSE_COUNT];

#endif
