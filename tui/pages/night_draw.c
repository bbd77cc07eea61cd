/* SPDX-License-Identifier: MIT
 * Drawing of the night page: places ready texts, computes nothing but places. */
#include "tui/pages/night_page.h"

#include <stdio.h>
#include <string.h>

enum { NAME_MIN_COLUMNS = 8, NAME_MAX_COLUMNS = 24, LOST_MAX_COLUMNS = 40, MARK_COLUMNS = 2 };

/* Where each column of the list begins, and how wide it is; width 0: not shown. */
struct layout {
	int at[ROW_CELLS], width[ROW_CELLS];
};

static int give(int *spare, int *width, int most)
{
	int more = *spare < most - *width ? *spare : most - *width;
	more = more < 0 ? 0 : more;
	*width += more;
	*spare -= more;
	return more;
}

static struct layout lay_out(int cols)
{
	struct layout l = {.at = {0}};
	int used = MARK_COLUMNS;
	for (int c = 0; c < ROW_CELLS; c++)
		if (cols >= row_columns[c].from_columns) {
			l.width[c] = row_columns[c].width;
			used += l.width[c] + 1;
		}
	int spare = cols - used;
	if (spare < 0) { /* the name gives way, down to what tells targets apart */
		l.width[ROW_NAME] += spare;
		l.width[ROW_NAME] =
		    l.width[ROW_NAME] < NAME_MIN_COLUMNS ? NAME_MIN_COLUMNS : l.width[ROW_NAME];
	}
	give(&spare, &l.width[ROW_LOST], 17);
	give(&spare, &l.width[ROW_NAME], NAME_MAX_COLUMNS - 8);
	give(&spare, &l.width[ROW_LOST], LOST_MAX_COLUMNS - 14);
	give(&spare, &l.width[ROW_NAME], NAME_MAX_COLUMNS);
	give(&spare, &l.width[ROW_LOST], LOST_MAX_COLUMNS);
	if (l.width[ROW_FLAGS] > 0)
		give(&spare, &l.width[ROW_FLAGS], 200);
	int at = MARK_COLUMNS;
	for (int c = 0; c < ROW_CELLS; c++) {
		l.at[c] = at;
		at += l.width[c] > 0 ? l.width[c] + 1 : 0;
	}
	return l;
}

static void put_cell(struct grid *g, int row, const struct layout *l, enum row_cell c, const char *text,
		     enum role role)
{
	if (row_columns[c].right)
		grid_put_right(g, row, l->at[c], l->width[c], text, role);
	else
		grid_put(g, row, l->at[c], l->width[c], text, role);
}

static void draw_headings(const struct night_page *p, struct grid *g, int row, const struct layout *l)
{
	for (int c = 0; c < ROW_CELLS; c++) {
		if (l->width[c] == 0)
			continue;
		put_cell(g, row, l, (enum row_cell)c, row_columns[c].heading, ROLE_STRONG);
		put_cell(g, row + 1, l, (enum row_cell)c,
			 row_columns[c].unit ? row_columns[c].unit : p->head.zone, ROLE_FAINT);
	}
}

static enum role row_role(const struct night_row *row)
{
	if (row->state == STATE_PAST || !row->usable)
		return ROLE_FAINT;
	return row->state == STATE_AHEAD ? ROLE_TEXT : ROLE_STRONG;
}

static void draw_row(struct grid *g, int line, const struct layout *l, const struct night_row *row)
{
	enum role role = row_role(row), lost_role = role;
	if (row->window->event.flags & FLAG_BIT(FLAG_SUN_UP))
		lost_role = ROLE_BAD;
	for (int c = 0; c < ROW_CELLS; c++) {
		if (l->width[c] == 0)
			continue;
		switch (c) {
		case ROW_NAME:
			put_cell(g, line, l, ROW_NAME, row->name, role);
			break;
		case ROW_COVER:
			for (int part = 0; part < PART_COUNT; part++)
				grid_glyph(g, line, l->at[c] + part, row->cover[part], role);
			break;
		case ROW_DONE:
			put_cell(g, line, l, ROW_DONE, row->text[c],
				 row->state == STATE_PAST ? role : row->chance_role);
			break;
		case ROW_LOST:
			put_cell(g, line, l, ROW_LOST,
				 text_columns(row->lost_long) <= l->width[c] ? row->lost_long : row->lost,
				 lost_role);
			break;
		case ROW_FLAGS:
			put_cell(g, line, l, ROW_FLAGS, row->flags, ROLE_FAINT);
			break;
		default:
			put_cell(g, line, l, (enum row_cell)c, row->text[c], role);
			break;
		}
	}
}

/* One row on a narrow screen: state, times, chance, name. */
static void draw_short_row(struct grid *g, int line, const struct night_row *row)
{
	static const char *const letters[] = {
	    [STATE_AHEAD] = " ", [STATE_NEXT] = "n", [STATE_NOW] = "N", [STATE_PAST] = "p"};
	enum role role = row_role(row);
	char times[40];
	snprintf(times, sizeof times, "%-5s %s-%s", row->text[ROW_ON], row->text[ROW_T1], row->text[ROW_T4]);
	grid_put(g, line, 1, 1, letters[row->state], role);
	int col = 3 + grid_put(g, line, 3, 17, times, role);
	grid_put_right(g, line, col + 1, 4, row->text[ROW_DONE], row->chance_role);
	grid_put(g, line, col + 6, g->cols - col - 6, row->name, role);
}

static void draw_list(const struct night_page *p, struct grid *g, int line)
{
	int rows = night_list_rows(p);
	struct layout l = lay_out(g->cols);
	if (p->rows.n == 0)
		grid_put(g, line, 1, g->cols - 2, "No window in this night under these limits.", ROLE_TEXT);
	for (int i = 0; i < rows && p->top + (size_t)i < p->rows.n; i++) {
		size_t at = p->top + (size_t)i;
		if (g->cols >= PAGE_COLS_FULL)
			draw_row(g, line + i, &l, &p->rows.row[at]);
		else
			draw_short_row(g, line + i, &p->rows.row[at]);
		if (at == p->selected) {
			grid_glyph(g, line + i, 0, GLYPH_SELECTED, ROLE_STRONG);
			grid_select(g, line + i, 0, g->cols);
			grid_cursor(g, line + i, 0, false);
		}
	}
	if (p->top > 0)
		grid_glyph(g, line, g->cols - 1, GLYPH_MORE_ABOVE, ROLE_KEY);
	if (p->top + (size_t)rows < p->rows.n)
		grid_glyph(g, line + rows - 1, g->cols - 1, GLYPH_MORE_BELOW, ROLE_KEY);
}

/* Two texts on one row, the right one only if both fit. */
static void draw_pair(struct grid *g, int row, const char *left, enum role left_role, const char *right,
		      enum role right_role)
{
	int used = grid_put(g, row, 1, g->cols - 2, left, left_role), width = text_columns(right);
	if (used + width + 3 <= g->cols)
		grid_put(g, row, g->cols - 1 - width, width, right, right_role);
}

static void draw_full_head(const struct night_page *p, struct grid *g)
{
	const struct night_head *h = &p->head;
	char night[120], moon[180];
	snprintf(night, sizeof night, "%s, night %s", h->relative, h->name);
	snprintf(moon, sizeof moon, "%s%s", h->moon, h->moon_now);
	/* the night is never left out: a long name of the site gives way */
	int width = text_columns(night);
	grid_put(g, 0, 1, g->cols - width - 4, h->site, ROLE_STRONG);
	grid_put(g, 0, g->cols - 1 - width, width, night, ROLE_STRONG);
	grid_put(g, 1, 1, g->cols - 2, h->clocks, ROLE_TEXT);
	grid_put(g, 2, 1, g->cols - 2, h->sun, ROLE_TEXT);
	draw_pair(g, 3, moon, ROLE_TEXT, h->limits, ROLE_FAINT);
	grid_put(g, 4, 1, g->cols - 2, h->next, ROLE_KEY);
	if (h->remark[0])
		grid_put(g, 5, 1, g->cols - 2, h->remark, ROLE_WARN);
}

static void draw_short_head(const struct night_page *p, struct grid *g)
{
	bool full = text_columns(p->head.next) <= g->cols - 2;
	draw_pair(g, 0, p->head.name, ROLE_STRONG, p->head.clocks, ROLE_TEXT);
	if (text_columns(p->head.name) + text_columns(p->head.clocks) + 3 > g->cols) {
		int used = 3 + text_columns(p->head.name);
		grid_put(g, 0, used, g->cols - used - 1, p->head.clocks, ROLE_TEXT);
	}
	grid_put(g, 1, 1, g->cols - 2,
		 p->head.remark[0] ? p->head.remark
		 : full		   ? p->head.next
				   : p->head.next_short,
		 ROLE_KEY);
}

static void draw_footer(const struct night_page *p, struct grid *g)
{
	int row = g->rows - 1;
	char text[300];
	if (p->mode == MODE_DATE) {
		static const char label[] = "Evening of (YYYY-MM-DD): ";
		int at = 1 + grid_put(g, row, 1, g->cols - 2, label, ROLE_KEY), width = 12;
		grid_put(g, row, at + width + 1, g->cols - at - width - 2,
			 p->message[0] ? p->message : "Enter shows it, Esc leaves",
			 p->message[0] ? p->message_role : ROLE_FAINT);
		line_draw(&p->date, g, row, at, width);
		return;
	}
	if (p->message[0]) {
		grid_put(g, row, 1, g->cols - 2, p->message, p->message_role);
		return;
	}
	key_footer(g->cols - 2, text, sizeof text);
	grid_put(g, row, 1, g->cols - 2, text, ROLE_KEY);
}

static void draw_rule(const struct night_page *p, struct grid *g, int row)
{
	char text[NAME_BYTES_MAX + 180];
	grid_rule(g, row);
	snprintf(text, sizeof text, " %s ", p->count);
	int used = grid_put(g, row, 2, g->cols - 4, text, ROLE_STRONG);
	if (night_pane_rows(p) == 0 || p->rows.n == 0)
		return;
	snprintf(text, sizeof text, " %s ", p->rows.row[p->selected].name);
	int width = text_columns(text);
	if (used + width + 6 <= g->cols)
		grid_put(g, row, g->cols - 2 - width, width, text, ROLE_STRONG);
}

static void draw_night(const struct night_page *p, struct grid *g)
{
	int head = night_head_rows(p), list = night_list_rows(p), pane = night_pane_rows(p);
	bool full = g->rows >= PAGE_ROWS_FULL && g->cols >= PAGE_COLS_FULL;
	if (full)
		draw_full_head(p, g);
	else
		draw_short_head(p, g);
	if (g->cols >= PAGE_COLS_FULL) {
		struct layout l = lay_out(g->cols);
		draw_headings(p, g, head - 2, &l);
	}
	draw_list(p, g, head);
	draw_rule(p, g, head + list);
	for (int i = 0; i < pane; i++)
		grid_put(g, head + list + 1 + i, 1, g->cols - 2, p->details.line[i].text,
			 p->details.line[i].role);
	draw_footer(p, g);
}

static void draw_text(const struct night_page *p, struct grid *g)
{
	const struct text_view *v = p->mode == MODE_DETAILS ? &p->details : &p->text;
	int rows = g->rows - 2;
	if (p->mode == MODE_DETAILS && p->rows.n > 0) {
		char title[NAME_BYTES_MAX + 120];
		snprintf(title, sizeof title, "%s, night %s", p->rows.row[p->selected].name, p->head.name);
		grid_put(g, 0, 1, g->cols - 2, title, ROLE_STRONG);
	} else {
		grid_put(g, 0, 1, g->cols - 2, p->loaded ? p->head.clocks : "wane", ROLE_FAINT);
	}
	text_view_draw(v, g, 1, rows);
	if (p->message[0])
		grid_put(g, g->rows - 1, 1, g->cols - 2, p->message, p->message_role);
	else
		grid_put(g, g->rows - 1, 1, g->cols - 2,
			 p->mode == MODE_FIRST_RUN ? "q quit  ? help  l limits"
						   : "q back  j k PgDn PgUp scroll",
			 ROLE_KEY);
	grid_cursor(g, 1, 0, false);
}

void night_page_draw(const struct night_page *p, struct grid *g)
{
	grid_clear(g);
	if (g->rows < PAGE_ROWS_MIN || g->cols < PAGE_COLS_MIN) {
		grid_put(g, 0, 0, g->cols, "wane needs 24 x 6", ROLE_STRONG);
		grid_put(g, 1, 0, g->cols, "larger, or q quits", ROLE_TEXT);
		return;
	}
	if (p->mode != MODE_LIST && p->mode != MODE_DATE)
		draw_text(p, g);
	else if (p->loaded)
		draw_night(p, g);
	else
		draw_footer(p, g);
}
