/* SPDX-License-Identifier: MIT
 * A grid of cells: what a page draws into, and all that a terminal or a test needs to show it. Clipping,
 * widths, glyph tiers and the last cleaning of text happen here and nowhere else. */
#ifndef WANE_TUI_PARTS_GRID_H
#define WANE_TUI_PARTS_GRID_H

#include "ephem/err.h"
#include "tui/parts/text_width.h"

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

/* What a cell means; a palette makes looks of it. */
enum role {
	ROLE_TEXT,
	ROLE_FAINT,
	ROLE_STRONG,
	ROLE_GOOD,
	ROLE_WARN,
	ROLE_BAD,
	ROLE_KEY,
	ROLE_RULE,
	ROLE_COUNT
};
/* One letter a role, for tests: `tfsgwbkr`. */
extern const char role_letters[ROLE_COUNT + 1];

/* Which characters the terminal can show: any, those of a console font, or ASCII only. */
enum tier { TIER_UNICODE, TIER_BASIC, TIER_ASCII, TIER_COUNT };

/* Pictures that have a form in each tier. */
enum glyph {
	GLYPH_SELECTED,	     /* marks the selected row */
	GLYPH_CUT,	     /* stands where text was cut off */
	GLYPH_RULE,	     /* a horizontal line */
	GLYPH_SHARE_ALL,     /* a part of the event that can be observed whole */
	GLYPH_SHARE_MOST,    /* at least half of it */
	GLYPH_SHARE_SOME,    /* less than half */
	GLYPH_SHARE_NONE,    /* nothing */
	GLYPH_SHARE_NO_PART, /* there is no such part */
	GLYPH_MORE_ABOVE,
	GLYPH_MORE_BELOW,
	GLYPH_DEGREE,
	GLYPH_PLUS_MINUS,
	GLYPH_BLANK,
	/* the sky over the night: strokes count the light of the Sun */
	GLYPH_DAY,	   /* the Sun is up */
	GLYPH_TWILIGHT,	   /* it is set, and above its limit */
	GLYPH_LATE,	   /* below its limit, above -18 deg */
	GLYPH_MOON,	   /* the Moon is up, less than half lit */
	GLYPH_MOON_BRIGHT, /* up and more than half lit */
	/* an event over the night: a light curve, high where the star is whole, low where it wanes */
	GLYPH_FREE,	/* nothing is planned; the star could be observed */
	GLYPH_PAD,	/* kept for an event that comes early or late */
	GLYPH_BASELINE, /* wanted baseline */
	GLYPH_INGRESS,
	GLYPH_FLAT,
	GLYPH_MID,
	GLYPH_EGRESS,
	GLYPH_LOST_RESERVE, /* pad or baseline that can't be observed */
	GLYPH_LOST,	    /* ingress, flat part or egress that can't be observed */
	GLYPH_LOST_MID,
	GLYPH_EARLIER, /* it begins before the axis */
	GLYPH_LATER,   /* it ends after it */
	GLYPH_NOW,
	/* a plan: the move to an item and its ends over the night; what stands of it */
	GLYPH_ITEM_SLEW,
	GLYPH_ITEM_START,
	GLYPH_ITEM_END,
	GLYPH_PLANNED,
	GLYPH_PINNED,
	GLYPH_STARTED,
	GLYPH_DONE,
	GLYPH_PARTLY,
	GLYPH_MISSED, /* lost */
	GLYPH_DROPPED,
	/* in the picture of altitudes */
	GLYPH_LIMIT,
	GLYPH_MASK,
	/* in plots of errors and residuals */
	GLYPH_CHOSEN,	    /* the chosen date */
	GLYPH_AFTER,	    /* what a refresh leaves of an error */
	GLYPH_POINT,	    /* a measured time */
	GLYPH_POINT_OUT,    /* one that does not count in the fit */
	GLYPH_POINT_CHOSEN, /* the selected one */
	GLYPH_ERROR_BAR,
	GLYPH_ZERO, /* what the fit says */
	GLYPH_COUNT
};
/* Text of a glyph in a tier, UTF-8, one column wide (the degree sign of ASCII is `d`). */
const char *glyph_text(enum glyph glyph, enum tier tier);

enum { CELL_MARKS = 2, GRID_ROWS_MAX = 500, GRID_COLS_MAX = 1000 };
struct cell {
	uint32_t cp;		   /* 0: the right half of a wide character */
	uint32_t mark[CELL_MARKS]; /* combining marks, 0 none */
	uint8_t width;		   /* 1 or 2; 0 for a right half */
	uint8_t role;
	bool selected;
};
struct grid {
	int rows, cols;
	struct cell *cell; /* [rows * cols], the grid's */
	enum tier tier;
	int cursor_row, cursor_col;
	bool cursor_shown; /* a text is being typed there */
};

/* Makes the grid rows x cols (1..max each; clamped) and blank. Opens a zeroed one, too. ST_MEMORY: unchanged.
 */
MUST_USE enum status grid_resize(struct grid *g, int rows, int cols, struct err *e);
void grid_close(struct grid *g);
void grid_clear(struct grid *g);
/* Writes UTF-8 text at row, col, clipped to `width` columns and to the grid; what does not fit ends in
 * GLYPH_CUT. Hostile or invalid characters show as `?`. Returns the columns used. Outside the grid: 0. */
int grid_put(struct grid *g, int row, int col, int width, const char *text, enum role role);
/* The same, ending at the right edge of the width. */
int grid_put_right(struct grid *g, int row, int col, int width, const char *text, enum role role);
int grid_glyph(struct grid *g, int row, int col, enum glyph glyph, enum role role);
/* A cell of a plot, 2 x 4 dots: bit 4 * column + row, rows from above. Braille where the tier has it, else
 * what tells its upper from its lower half. */
int grid_dots(struct grid *g, int row, int col, uint8_t dots, enum role role);
/* Fills a whole row with a rule. */
void grid_rule(struct grid *g, int row);
/* Marks cells [col, col + width) of a row as selected. */
void grid_select(struct grid *g, int row, int col, int width);
void grid_cursor(struct grid *g, int row, int col, bool shown);

/* The grid as lines of UTF-8, trailing blanks cut; for tests. roles: role letters instead (upper case where
 * selected; blank unselected cells of ROLE_TEXT stay blank). Returns the bytes that a long enough buffer
 * needs, without the NUL. */
size_t grid_to_text(const struct grid *g, bool roles, char *out, size_t size);

#endif
