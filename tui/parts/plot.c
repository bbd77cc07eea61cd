/* SPDX-License-Identifier: MIT */
#include "tui/parts/plot.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum { DOTS_ACROSS = 2, DOTS_DOWN = 4, NOWHERE = -1 };

void plot_start(struct plot *p, int rows, int cols, double x0, double x1, double y0, double y1)
{
	bool can = rows >= PLOT_ROWS_MIN && cols >= PLOT_COLS_MIN && isfinite(x1 - x0) && isfinite(y1 - y0) &&
		   x1 > x0 && y1 > y0;
	p->rows = !can ? 0 : rows > PLOT_ROWS_MAX ? PLOT_ROWS_MAX : rows;
	p->cols = !can ? 0 : cols > PLOT_COLS_MAX ? PLOT_COLS_MAX : cols;
	p->x0 = x0;
	p->x1 = x1;
	p->y0 = y0;
	p->y1 = y1;
	for (int row = 0; row < p->rows; row++) {
		p->label[row][0] = '\0';
		for (int col = 0; col < p->cols; col++)
			p->cell[row][col] = (struct plot_cell){0, GLYPH_BLANK, ROLE_TEXT};
	}
	memset(p->mark, ' ', sizeof p->mark);
	memset(p->axis, ' ', sizeof p->axis);
	p->mark[p->cols] = p->axis[p->cols] = '\0';
}

/* Place of a value among n steps between two edges; the far edge belongs to the last one. */
static int step_of(double value, double from, double to, int n)
{
	double at = (value - from) / (to - from) * n;
	if (!(at >= 0.0 && at <= n)) /* NaN is nowhere */
		return NOWHERE;
	return at >= n ? n - 1 : (int)at;
}

static int dot_down(const struct plot *p, double y)
{
	return step_of(y, p->y1, p->y0, p->rows * DOTS_DOWN);
}

static int col_of(const struct plot *p, double x)
{
	return p->rows ? step_of(x, p->x0, p->x1, p->cols) : NOWHERE;
}

int plot_dots_across(const struct plot *p)
{
	return p->rows ? p->cols * DOTS_ACROSS : 0;
}

double plot_dot_x(const struct plot *p, int dot)
{
	return p->x0 + (p->x1 - p->x0) * (dot + 0.5) / (p->cols * DOTS_ACROSS);
}

void plot_dot(struct plot *p, double x, double y, enum role role)
{
	int across = p->rows ? step_of(x, p->x0, p->x1, p->cols * DOTS_ACROSS) : NOWHERE;
	int down = p->rows ? dot_down(p, y) : NOWHERE;
	if (across == NOWHERE || down == NOWHERE)
		return;
	struct plot_cell *c = &p->cell[down / DOTS_DOWN][across / DOTS_ACROSS];
	c->dots = (uint8_t)(c->dots | 1u << (DOTS_DOWN * (across % DOTS_ACROSS) + down % DOTS_DOWN));
	c->role = (uint8_t)role;
}

void plot_sign(struct plot *p, double x, double y, enum glyph glyph, enum role role)
{
	int col = col_of(p, x), down = p->rows ? dot_down(p, y) : NOWHERE;
	if (col != NOWHERE && down != NOWHERE)
		p->cell[down / DOTS_DOWN][col] = (struct plot_cell){0, (uint8_t)glyph, (uint8_t)role};
}

static void put_where_free(struct plot *p, int row, int col, enum glyph glyph, enum role role)
{
	struct plot_cell *c = &p->cell[row][col];
	if (c->dots == 0 && c->glyph == GLYPH_BLANK)
		*c = (struct plot_cell){0, (uint8_t)glyph, (uint8_t)role};
}

void plot_level(struct plot *p, double y, enum glyph glyph, enum role role)
{
	int down = p->rows ? dot_down(p, y) : NOWHERE;
	for (int col = 0; down != NOWHERE && col < p->cols; col++)
		put_where_free(p, down / DOTS_DOWN, col, glyph, role);
}

void plot_upright(struct plot *p, double x, double y_from, double y_to, enum glyph glyph, enum role role)
{
	int col = col_of(p, x);
	if (col == NOWHERE || isnan(y_from) || isnan(y_to))
		return;
	int foot = dot_down(p, fmin(fmax(y_from, p->y0), p->y1)) / DOTS_DOWN;
	int top = dot_down(p, fmin(fmax(y_to, p->y0), p->y1)) / DOTS_DOWN;
	for (int row = top; row <= foot; row++)
		put_where_free(p, row, col, glyph, role);
}

void plot_label(struct plot *p, double y, const char *text)
{
	int down = p->rows ? dot_down(p, y) : NOWHERE;
	if (down != NOWHERE && !p->label[down / DOTS_DOWN][0])
		snprintf(p->label[down / DOTS_DOWN], sizeof p->label[0], "%s", text);
}

void plot_mark(struct plot *p, double x, char letter)
{
	int col = col_of(p, x);
	for (int i = 0; col != NOWHERE && i < 4 && col + i < p->cols; i++)
		if (p->mark[col + i] == ' ') {
			p->mark[col + i] = letter;
			return;
		}
}

void plot_figure(struct plot *p, double x, const char *text)
{
	int col = col_of(p, x), n = (int)strlen(text);
	if (col == NOWHERE || col + n > p->cols)
		return;
	for (int i = col > 0 ? -1 : 0; i <= n && col + i < p->cols; i++)
		if (p->axis[col + i] != ' ')
			return;
	memcpy(&p->axis[col], text, (size_t)n);
}

void plot_draw(const struct plot *p, struct grid *g, int row, int col)
{
	if (p->rows == 0)
		return;
	for (int y = 0; y < p->rows; y++) {
		grid_put_right(g, row + y, col - PLOT_LABEL_COLUMNS - 1, PLOT_LABEL_COLUMNS, p->label[y],
			       ROLE_FAINT);
		for (int x = 0; x < p->cols; x++) {
			const struct plot_cell *c = &p->cell[y][x];
			if (c->dots)
				grid_dots(g, row + y, col + x, c->dots, (enum role)c->role);
			else if (c->glyph != GLYPH_BLANK)
				grid_glyph(g, row + y, col + x, (enum glyph)c->glyph, (enum role)c->role);
		}
	}
	grid_put(g, row + p->rows, col, p->cols, p->mark, ROLE_STRONG);
	grid_put(g, row + p->rows + 1, col, p->cols, p->axis, ROLE_FAINT);
}
