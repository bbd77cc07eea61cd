/* SPDX-License-Identifier: MIT
 * Drawing of the drift page: places ready texts, computes nothing but places. */
#include "tui/pages/drift_page.h"

#include <stdio.h>

static void put_cell(struct grid *g, int row, const struct drift_layout *l, enum drift_cell c,
		     const char *text, enum role role)
{
	if (l->width[c] == 0)
		return;
	if (drift_cells[c].right)
		grid_put_right(g, row, l->at[c], l->width[c], text, role);
	else
		grid_put(g, row, l->at[c], l->width[c], text, role);
}

static void draw_pair(struct grid *g, int row, const char *left, enum role left_role, const char *right,
		      enum role right_role)
{
	int used = grid_put(g, row, 1, g->cols - 2, left, left_role), width = text_columns(right);
	if (width > 0 && used + width + 3 <= g->cols)
		grid_put(g, row, g->cols - 1 - width, width, right, right_role);
}

static void draw_head(const struct drift_page *p, struct grid *g)
{
	int row = 0;
	draw_pair(g, row++, p->title, ROLE_STRONG, p->chosen, ROLE_STRONG);
	if (p->grid_rows >= DRIFT_ROWS_FULL && p->grid_cols >= DRIFT_COLS_FULL) {
		draw_pair(g, row++, p->clock, ROLE_TEXT, p->waiting, ROLE_KEY);
		grid_put(g, row++, 1, g->cols - 2, p->sums, ROLE_TEXT);
	}
	if (p->grid_cols < DRIFT_COLS_FULL)
		return;
	for (int c = 0; c < DRIFT_CELLS; c++) {
		put_cell(g, row, &p->layout, (enum drift_cell)c, drift_cells[c].heading, ROLE_STRONG);
		put_cell(g, row + 1, &p->layout, (enum drift_cell)c, drift_cells[c].unit, ROLE_FAINT);
	}
}

static void draw_line(const struct drift_page *p, struct grid *g, int row, const struct drift_line *line)
{
	if (g->cols < DRIFT_COLS_FULL) {
		grid_put_right(g, row, 1, 6, line->text[DRIFT_NOW], line->role);
		grid_put(g, row, 8, 10, line->text[DRIFT_STALE], line->stale_role);
		grid_put(g, row, 19, g->cols - 19, line->name, line->role);
		return;
	}
	for (int c = 0; c < DRIFT_CELLS; c++) {
		const char *text = c == DRIFT_NAME    ? line->name
				   : c == DRIFT_WORDS ? line->words
						      : line->text[c];
		enum role role = c == DRIFT_STALE || c == DRIFT_AT ? line->stale_role
				 : c == DRIFT_WORDS		   ? ROLE_WARN
								   : line->role;
		put_cell(g, row, &p->layout, (enum drift_cell)c, text, role);
	}
}

static void draw_list(const struct drift_page *p, struct grid *g)
{
	if (p->n == 0)
		grid_put(g, p->head, 1, g->cols - 2,
			 p->filter_text[0]
			     ? "No target fits the filter; Esc takes it away."
			     : "No targets are stored yet; `wane import targets.csv` reads a table.",
			 ROLE_TEXT);
	for (int i = 0; i < p->list && p->top + (size_t)i < p->n; i++) {
		draw_line(p, g, p->head + i, &p->line_of[i]);
		if (p->top + (size_t)i != p->selected)
			continue;
		grid_glyph(g, p->head + i, 0, GLYPH_SELECTED, ROLE_STRONG);
		grid_select(g, p->head + i, 0, g->cols);
		grid_cursor(g, p->head + i, 0, false);
	}
	if (p->top > 0)
		grid_glyph(g, p->head, g->cols - 1, GLYPH_MORE_ABOVE, ROLE_KEY);
	if (p->top + (size_t)p->list < p->n)
		grid_glyph(g, p->head + p->list - 1, g->cols - 1, GLYPH_MORE_BELOW, ROLE_KEY);
}

static void draw_rule(const struct drift_page *p, struct grid *g, int row)
{
	char text[sizeof p->count + 8];
	grid_rule(g, row);
	snprintf(text, sizeof text, " %s ", p->count);
	int used = grid_put(g, row, 2, g->cols - 4, text, ROLE_STRONG);
	if (p->pane == 0 || p->n == 0)
		return;
	snprintf(text, sizeof text, " %s ", p->kept);
	int width = text_columns(text);
	if (used + width + 6 <= g->cols)
		grid_put(g, row, g->cols - 2 - width, width, text, ROLE_STRONG);
}

static void draw_pane(const struct drift_page *p, struct grid *g, int row)
{
	for (int i = 0; i < p->text_rows && i < p->details.n; i++)
		grid_put(g, row + i, 1, p->text_width, p->details.line[i].text, p->details.line[i].role);
	if (p->plot.rows > 0)
		plot_draw(&p->plot, g, row + p->plot_row, p->plot_col);
}

static const char *question(enum drift_mode mode)
{
	return mode == DRIFT_MODE_AT	   ? "Chosen date (YYYY-MM-DD): "
	       : mode == DRIFT_MODE_FIND   ? "Find: "
	       : mode == DRIFT_MODE_FILTER ? "Show where name, tags or remarks hold: "
					   : NULL;
}

static void draw_question(const struct drift_page *p, struct grid *g)
{
	static const char hint[] = "Enter takes it, Esc leaves";
	int row = g->rows - 1, at = 1 + grid_put(g, row, 1, g->cols - 2, question(p->mode), ROLE_KEY);
	int width = p->mode == DRIFT_MODE_AT ? 12 : g->cols - at - (int)sizeof hint - 1;
	width = width < 12 ? 12 : width;
	width = width > g->cols - at - 1 ? g->cols - at - 1 : width;
	if (p->message[0]) {
		for (int col = 0; col < g->cols; col++)
			grid_glyph(g, row - 1, col, GLYPH_BLANK, ROLE_TEXT);
		grid_put(g, row - 1, 1, g->cols - 2, p->message, p->message_role);
	}
	grid_put(g, row, at + width + 1, g->cols - at - width - 2, hint, ROLE_FAINT);
	line_draw(&p->line, g, row, at, width);
}

static void draw_footer(const struct drift_page *p, struct grid *g, const struct key_table *table)
{
	char text[300];
	if (p->message[0]) {
		grid_put(g, g->rows - 1, 1, g->cols - 2, p->message, p->message_role);
		return;
	}
	key_footer_in(table, g->cols - 2, text, sizeof text);
	grid_put(g, g->rows - 1, 1, g->cols - 2, text, ROLE_KEY);
}

static void draw_text(const struct drift_page *p, struct grid *g)
{
	bool choice = p->mode == DRIFT_MODE_SORT;
	grid_put(g, 0, 1, g->cols - 2, p->title, ROLE_FAINT);
	text_view_draw(&p->text, g, 1, g->rows - 2);
	grid_cursor(g, 1, 0, false);
	if (choice) {
		int row = 1 + DRIFT_SORT_LINE + p->choice - p->text.top;
		grid_glyph(g, row, 0, GLYPH_SELECTED, ROLE_STRONG);
		grid_select(g, row, 0, g->cols);
		grid_cursor(g, row, 0, false);
	}
	grid_put(g, g->rows - 1, 1, g->cols - 2,
		 p->message[0] ? p->message
		 : choice      ? "Enter takes it  j k move  Esc leaves"
			       : "q back  j k PgDn PgUp scroll",
		 p->message[0] ? p->message_role : ROLE_KEY);
}

void drift_page_draw(const struct drift_page *p, struct grid *g)
{
	grid_clear(g);
	if (g->rows < DRIFT_ROWS_MIN || g->cols < DRIFT_COLS_MIN) {
		grid_put(g, 0, 0, g->cols, "wane needs 24 x 6", ROLE_STRONG);
		grid_put(g, 1, 0, g->cols, "larger, or q quits", ROLE_TEXT);
		return;
	}
	if (p->mode == DRIFT_MODE_HELP || p->mode == DRIFT_MODE_SORT) {
		draw_text(p, g);
		return;
	}
	if (p->mode == DRIFT_MODE_RESIDUALS) {
		residual_view_draw(&p->residuals, g);
		draw_footer(p, g, &residual_keys);
		return;
	}
	draw_head(p, g);
	draw_list(p, g);
	draw_rule(p, g, p->head + p->list);
	if (p->pane > 0)
		draw_pane(p, g, p->head + p->list + 1);
	if (question(p->mode))
		draw_question(p, g);
	else
		draw_footer(p, g, &drift_keys);
}
