/* SPDX-License-Identifier: MIT
 * The picture of altitudes over the night: target, Moon, limit, horizon mask, and the contacts under it. */
#ifndef WANE_TUI_PAGES_NIGHT_CURVE_H
#define WANE_TUI_PAGES_NIGHT_CURVE_H

#include "ephem/window.h"
#include "tui/pages/night_axis.h"

enum { CURVE_ROWS_MAX = 14, CURVE_ROWS_MIN = 3, CURVE_LABEL_COLUMNS = 3 };
struct curve_cell {
	uint8_t dots;  /* of the target's line, as grid_dots takes them */
	uint8_t glyph; /* where there are none: enum glyph */
	uint8_t role;
};
struct curve {
	int rows, cols; /* rows 0: no picture */
	struct curve_cell cell[CURVE_ROWS_MAX][AXIS_COLS_MAX];
	char label[CURVE_ROWS_MAX][CURVE_LABEL_COLUMNS + 1]; /* altitudes at the left, degrees */
	char mark[AXIS_COLS_MAX + 1]; /* contacts: `1 2 m 3 4` in their cells; in the row below the picture */
};
/* From 90 degrees at the top to 0 at the foot. The target's line is whole where the target can be observed
 * and broken where it can't. site's mask is compared with apparent altitudes and drawn as airless ones. */
void curve_make(struct curve *c, int rows, const struct night_axis *axis, const struct window *w,
		const struct night *night, const struct star *star, const struct free_time *free);
/* Draws rows + 1 rows, labels left of col. */
void curve_draw(const struct curve *c, const struct night_axis *axis, struct grid *g, int row, int col);

#endif
