/* SPDX-License-Identifier: MIT
 * A plot in cells: dots of a curve, signs, level and upright lines, figures at the left and years under it.
 * Made once, drawn without computing. */
#ifndef WANE_TUI_PARTS_PLOT_H
#define WANE_TUI_PARTS_PLOT_H

#include "tui/parts/grid.h"

#include <stdint.h>

enum {
	PLOT_ROWS_MIN = 3,
	PLOT_ROWS_MAX = 40,
	PLOT_COLS_MIN = 16,
	PLOT_COLS_MAX = 300,
	PLOT_LABEL_COLUMNS = 7
};
/* Rows and columns of a drawn plot beyond its picture. */
enum { PLOT_FOOT_ROWS = 2 };
struct plot_cell {
	uint8_t dots;  /* as grid_dots takes them */
	uint8_t glyph; /* where there are none */
	uint8_t role;
};
struct plot {
	int rows, cols;	       /* of the picture; rows 0: none */
	double x0, x1, y0, y1; /* its edges: left, right, foot, top */
	struct plot_cell cell[PLOT_ROWS_MAX][PLOT_COLS_MAX];
	char label[PLOT_ROWS_MAX][PLOT_LABEL_COLUMNS + 1];
	char mark[PLOT_COLS_MAX + 1]; /* letters under the picture */
	char axis[PLOT_COLS_MAX + 1]; /* figures under those */
};
/* Empties it. Too few rows or columns, or edges that are not finite and apart: no picture. */
void plot_start(struct plot *p, int rows, int cols, double x0, double x1, double y0, double y1);
/* Outside of the edges, and for NaN, nothing is drawn. */
void plot_dot(struct plot *p, double x, double y, enum role role);
void plot_sign(struct plot *p, double x, double y, enum glyph glyph, enum role role);
/* Lines of signs that leave what stands there already. */
void plot_level(struct plot *p, double y, enum glyph glyph, enum role role);
void plot_upright(struct plot *p, double x, double y_from, double y_to, enum glyph glyph, enum role role);
void plot_label(struct plot *p, double y, const char *text);
/* The letter of a place under the picture; a second one of the same cell goes beside it where that is free.
 */
void plot_mark(struct plot *p, double x, char letter);
/* A figure under the picture, from the cell of x on, where it fits beside the others. */
void plot_figure(struct plot *p, double x, const char *text);
/* Dots across the picture: a curve is drawn at each of them. */
int plot_dots_across(const struct plot *p);
double plot_dot_x(const struct plot *p, int dot);
/* Draws rows + PLOT_FOOT_ROWS rows; the labels stand in the PLOT_LABEL_COLUMNS left of col. */
void plot_draw(const struct plot *p, struct grid *g, int row, int col);

#endif
