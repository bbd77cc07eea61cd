/* SPDX-License-Identifier: MIT
 * The time axis of a night: one for the sky band, the strips of all rows and the picture of altitudes, so
 * that a moment is read straight down the screen. */
#ifndef WANE_TUI_PAGES_NIGHT_AXIS_H
#define WANE_TUI_PAGES_NIGHT_AXIS_H

#include "ephem/night.h"
#include "tui/parts/grid.h"
#include "tui/zone.h"

enum { AXIS_COLS_MAX = 192, AXIS_NONE = -1 };
struct night_axis {
	double from_d, to_d;		    /* of the night */
	int cols;			    /* 1..AXIS_COLS_MAX */
	char hours[AXIS_COLS_MAX + 1];	    /* local hours; an hour begins in the cell of its first digit */
	uint8_t band[AXIS_COLS_MAX];	    /* the sky at the middle of each cell: enum glyph */
	double moon_alt_deg[AXIS_COLS_MAX]; /* there */
	int now_col;			    /* AXIS_NONE: outside */
};
/* From half an hour before sunset to half an hour after sunrise; noon to noon where one of them is missing.
 * sun_limit_deg: the run's. zone NULL: UTC. cols is clamped. */
void axis_make(struct night_axis *a, const struct night *night, const struct zone *zone, double sun_limit_deg,
	       int cols);
void axis_tick(struct night_axis *a, double now_d);
/* Cell of a moment, AXIS_NONE outside or for NaN. */
int axis_col(const struct night_axis *a, double t_d);
/* Start of a cell; of cell `cols`: the end. */
double axis_time(const struct night_axis *a, double col);
/* `1 h`, `12 min`: what one cell stands for, in whole minutes. */
int axis_cell_min(const struct night_axis *a);

/* The sky band with the hours written into it. */
void axis_draw_band(const struct night_axis *a, struct grid *g, int row, int col, bool with_hours);
enum role sky_role(enum glyph glyph);

#endif
