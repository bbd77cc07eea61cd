/* SPDX-License-Identifier: MIT
 * The strip of a window: its event drawn as a light curve over the night, with what is lost of it. */
#ifndef WANE_TUI_PAGES_NIGHT_STRIP_H
#define WANE_TUI_PAGES_NIGHT_STRIP_H

#include "ephem/window.h"
#include "tui/pages/night_axis.h"

struct strip_cell {
	uint8_t glyph, role;
};
struct strip {
	size_t row; /* of the list, for which it was made; STRIP_NO_ROW: for none */
	struct strip_cell cell[AXIS_COLS_MAX];
};
#define STRIP_NO_ROW SIZE_MAX

/* What stands behind the event. */
struct strip_sky {
	const struct intervals *sun_up, *sun_allows, *observable; /* the last: by all limits of the target */
};
/* Fills axis->cols cells. A cell shows the mid-time if that falls into it, else the ingress or the egress
 * whose middle does, else the part of the event in which the cell's own middle lies, else the sky. A part is
 * lost in a cell when less than half of what it has there can be observed. */
void strip_make(struct strip *s, const struct night_axis *axis, const struct window *w,
		const struct strip_sky *sky);
/* The same with the sky of the window's target on its night. */
void strip_of_window(struct strip *s, const struct night_axis *axis, const struct window *w,
		     const struct night *night, const struct star *star, const struct free_time *free);
/* Lays the item of a plan over it: the move to it, and its ends where no limb or mid-time stands. */
void strip_add_item(struct strip *s, const struct night_axis *axis, double slew_d, double from_d,
		    double to_d);
/* now_col of the axis shows as a line, but for limbs, mid-time and losses. */
void strip_draw(const struct strip *s, const struct night_axis *axis, struct grid *g, int row, int col);

#endif
