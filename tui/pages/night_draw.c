/* SPDX-License-Identifier: MIT
 * Drawing of the night page: places ready texts, computes nothing but places. */
#include "tui/pages/night_page.h"

#include <stdio.h>
#include <string.h>

static void put_cell(struct grid *g, int row, const struct night_layout *l, enum row_cell c, const char *text,
		     enum role role)
{
	if (!row_columns[c].unit && text_columns(text) == l->width[c] + 1) /* the mark of a clock change */
		grid_put(g, row, l->at[c], l->width[c] + 1, text, role);
	else if (row_columns[c].right)
		grid_put_right(g, row, l->at[c], l->width[c], text, role);
	else
		grid_put(g, row, l->at[c], l->width[c], text, role);
}

/* The hours of the axis are those of this zone: it stands left of them. */
static void draw_zone(const struct night_page *p, struct grid *g, int row)
{
	int width = text_columns(p->head.zone), at = p->axis_at - 1 - width;
	grid_put(g, row, at < 0 ? 0 : at, width, p->head.zone, ROLE_FAINT);
}

static void draw_headings(const struct night_page *p, struct grid *g, int row)
{
	const struct night_layout *l = &p->layout;
	for (int c = 0; c < ROW_CELLS; c++) {
		if (l->width[c] == 0 || (c == ROW_STRIP && p->axis_in_list))
			continue;
		put_cell(g, row, l, (enum row_cell)c, row_columns[c].heading, ROLE_STRONG);
		put_cell(g, row + 1, l, (enum row_cell)c,
			 row_columns[c].unit ? row_columns[c].unit : p->head.zone, ROLE_FAINT);
	}
	if (!p->axis_in_list)
		return;
	draw_zone(p, g, row);
	grid_put(g, row, p->axis_at, p->axis.cols, p->axis.hours, ROLE_STRONG);
	axis_draw_band(&p->axis, g, row + 1, p->axis_at, false);
	if (p->axis.now_col != AXIS_NONE)
		grid_glyph(g, row + 1, p->axis_at + p->axis.now_col, GLYPH_NOW, ROLE_KEY);
}

static enum role row_role(const struct night_row *row)
{
	if (row->state == STATE_PAST || !row->usable)
		return ROLE_FAINT;
	return row->state == STATE_AHEAD ? ROLE_TEXT : ROLE_STRONG;
}

/* What stands of a row's item. */
static enum glyph plan_glyph(const struct row_plan *plan)
{
	static const enum glyph glyphs[PLAN_STATE_COUNT] = {
	    [PLAN_PLANNED] = GLYPH_PLANNED, [PLAN_PINNED] = GLYPH_PINNED, [PLAN_STARTED] = GLYPH_STARTED,
	    [PLAN_DONE] = GLYPH_DONE,	    [PLAN_PARTLY] = GLYPH_PARTLY, [PLAN_LOST] = GLYPH_MISSED};
	return plan->order > 0 ? glyphs[plan->state] : plan->dropped ? GLYPH_DROPPED : GLYPH_BLANK;
}

/* `2o now`: number, sign, where it stands against the clock. */
static void draw_state(struct grid *g, int line, int col, const struct night_row *row, enum role role)
{
	const int digits = 2, word_at = 3, word = 4;
	int number = grid_put(g, line, col, digits, row->number, ROLE_STRONG);
	grid_glyph(g, line, col + number, plan_glyph(&row->plan), row->plan.moved ? ROLE_WARN : ROLE_STRONG);
	grid_put(g, line, col + word_at, word, row->text[ROW_STATE], role);
}

static void draw_row(const struct night_page *p, struct grid *g, int line, size_t at)
{
	const struct night_layout *l = &p->layout;
	const struct night_row *row = &p->rows.row[at];
	enum role role = row_role(row), lost_role = role;
	if (row->window->event.flags & FLAG_BIT(FLAG_SUN_UP))
		lost_role = ROLE_BAD;
	else if (row->flip_only)
		lost_role = ROLE_FAINT;
	for (int c = 0; c < ROW_CELLS; c++) {
		if (l->width[c] == 0)
			continue;
		switch (c) {
		case ROW_STATE:
			draw_state(g, line, l->at[c], row, role);
			break;
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
		case ROW_STRIP:
			if (p->axis_in_list)
				strip_draw(&p->strip[at % STRIP_SLOTS], &p->axis, g, line, l->at[c]);
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

/* One row on a narrow screen: state, number in the plan, times, chance, name. */
static void draw_short_row(struct grid *g, int line, const struct night_row *row)
{
	static const char *const letters[] = {
	    [STATE_AHEAD] = " ", [STATE_NEXT] = "n", [STATE_NOW] = "N", [STATE_PAST] = "p"};
	enum role role = row_role(row);
	char times[40];
	snprintf(times, sizeof times, "%-5s %s-%s", row->text[ROW_ON], row->text[ROW_T1], row->text[ROW_T4]);
	if (row->plan.dropped || (row->plan.order > 0 && row->plan.state != PLAN_PLANNED))
		grid_glyph(g, line, 1, plan_glyph(&row->plan), role);
	else
		grid_put(g, line, 1, 1, letters[row->state], role);
	grid_put(g, line, 2, 1, row->plan.order > 9 ? "+" : row->number, ROLE_STRONG);
	int col = 4 + grid_put(g, line, 4, 19, times, role);
	grid_put_right(g, line, col + 1, 3, row->text[ROW_DONE], row->chance_role);
	grid_put(g, line, col + 5, g->cols - col - 5, row->name, role);
}

static void draw_list(const struct night_page *p, struct grid *g, int line)
{
	int rows = p->shape.list;
	if (p->rows.n == 0)
		grid_put(g, line, 1, g->cols - 2,
			 p->rows.total > 0 ? "No window of this night fits the filter; Esc takes it away."
					   : "No window in this night under these limits.",
			 ROLE_TEXT);
	for (int i = 0; i < rows && p->top + (size_t)i < p->rows.n; i++) {
		size_t at = p->top + (size_t)i;
		if (g->cols >= PAGE_COLS_FULL)
			draw_row(p, g, line + i, at);
		else
			draw_short_row(g, line + i, &p->rows.row[at]);
		if (at == p->selected) {
			grid_glyph(g, line + i, 0, GLYPH_SELECTED, ROLE_STRONG);
			grid_select(g, line + i, 0, p->axis_in_list ? p->axis_at - 1 : g->cols);
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

/* The first of some texts that fits, else the last. */
static const char *fitting(int width, const char *longest, const char *shorter, const char *shortest)
{
	if (text_columns(longest) <= width)
		return longest;
	return text_columns(shorter) <= width ? shorter : shortest;
}

static void draw_full_head(const struct night_page *p, struct grid *g)
{
	const struct night_head *h = &p->head;
	char night[120], moon[180];
	int room = g->cols - 2;
	snprintf(night, sizeof night, "%s, night %s", h->relative, h->name);
	snprintf(moon, sizeof moon, "%s%s", h->moon, h->moon_now);
	/* the night is never left out: a long name of the site gives way */
	int width = text_columns(night);
	grid_put(g, 0, 1, g->cols - width - 4, h->site, ROLE_STRONG);
	grid_put(g, 0, g->cols - 1 - width, width, night, ROLE_STRONG);
	grid_put(g, 1, 1, room, fitting(room, h->clocks, h->clocks_short, h->clock), ROLE_TEXT);
	grid_put(g, 2, 1, room, fitting(room, h->sun, h->sun_short, h->sun_short), ROLE_TEXT);
	const int beside = room - text_columns(moon) - 2;
	if (p->shape.plan_row || !p->plan.line[0])
		draw_pair(g, 3, moon, ROLE_TEXT, h->limits, ROLE_FAINT);
	else
		draw_pair(g, 3, moon, ROLE_TEXT,
			  fitting(beside, p->plan.line, p->plan.line_short, p->plan.line_least),
			  p->plan.line_role);
	grid_put(g, 4, 1, room, fitting(room, h->next, h->next_less, h->next_short), ROLE_KEY);
	if (p->shape.plan_row)
		grid_put(g, 5, 1, room, fitting(room, p->plan.line, p->plan.line_short, p->plan.line_least),
			 p->plan.line_role);
	if (h->remark[0])
		grid_put(g, 5 + p->shape.plan_row, 1, room, h->remark, ROLE_WARN);
}

static void draw_short_head(const struct night_page *p, struct grid *g)
{
	const struct night_head *h = &p->head;
	int room = g->cols - 2, left = room - text_columns(h->name) - 2;
	grid_put(g, 0, 1, room, h->name, ROLE_STRONG);
	if (left > 0)
		draw_pair(g, 0, h->name, ROLE_STRONG, fitting(left, h->clocks, h->clocks_short, h->clock),
			  ROLE_TEXT);
	grid_put(g, 1, 1, room,
		 h->remark[0] ? h->remark : fitting(room, h->next, h->next_less, h->next_short), ROLE_KEY);
}

/* The question of a mode, else NULL; in few words where the answer needs the room. */
static const char *question(enum night_mode mode, bool brief)
{
	static const struct {
		enum night_mode mode;
		const char *words, *brief;
	} questions[] = {
	    {MODE_DATE, "Evening of (YYYY-MM-DD): ", "Evening of: "},
	    {MODE_FIND, "Find: ", "Find: "},
	    {MODE_FILTER, "Show where: ", "Show where: "},
	    {MODE_CAUSE, "Cause (cloud, fault, may be empty): ", "Cause: "},
	    {MODE_NOTE, "Note (may be empty): ", "Note: "},
	    {MODE_LOST_TIME, "Lost time FROM..TO (22:40..23:30): ", "Lost FROM..TO: "},
	    {MODE_SAVE_AS, "Store as draft: ", "Draft: "},
	};
	for (size_t i = 0; i < sizeof questions / sizeof questions[0]; i++)
		if (questions[i].mode == mode)
			return brief ? questions[i].brief : questions[i].words;
	return NULL;
}

static void draw_question(const struct night_page *p, struct grid *g, const char *label)
{
	static const char hint[] = "Enter takes it, Esc leaves";
	int row = g->rows - 1, at = 1 + grid_put(g, row, 1, g->cols - 2, label, ROLE_KEY);
	int width = p->mode == MODE_DATE ? 12 : g->cols - at - (int)sizeof hint - 1;
	if (g->cols < PAGE_COLS_FULL) /* the answer goes before the hint */
		width = g->cols - at - 1;
	width = width < 12 ? 12 : width > g->cols - at - 1 ? g->cols - at - 1 : width;
	int rest = at + width + 1;
	if (p->message[0]) /* what was wrong may be long: it stands above */
		grid_put(g, row - 1, 1, g->cols - 2, p->message, p->message_role);
	grid_put(g, row, rest, g->cols - rest - 1, hint, ROLE_FAINT);
	line_draw(&p->line, g, row, at, width);
}

static void draw_footer(const struct night_page *p, struct grid *g)
{
	int row = g->rows - 1;
	char text[300];
	const char *asked = question(p->mode, g->cols < PAGE_COLS_FULL);
	if (asked) {
		for (int col = 0; p->message[0] && col < g->cols; col++)
			grid_glyph(g, row - 1, col, GLYPH_BLANK, ROLE_TEXT);
		draw_question(p, g, asked);
		return;
	}
	if (p->mode == MODE_LEAVE) {
		grid_put(
		    g, row, 1, g->cols - 2,
		    fitting(g->cols - 2,
			    "A plan has changes that are not kept. Leave without them? y leaves, n stays",
			    "Plan changes are not kept. Leave? y n", "Not kept. Leave? y n"),
		    ROLE_WARN);
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
	char text[sizeof p->count + 8];
	grid_rule(g, row);
	snprintf(text, sizeof text, " %s ", p->count);
	int used = grid_put(g, row, 2, g->cols - 4, text, ROLE_STRONG);
	if (p->shape.pane == 0 || p->rows.n == 0)
		return;
	snprintf(text, sizeof text, " %s ", p->rows.row[p->selected].name);
	int width = text_columns(text);
	if (used + width + 6 <= g->cols)
		grid_put(g, row, g->cols - 2 - width, width, text, ROLE_STRONG);
}

/* Sky band, strip, picture of altitudes, and the text of the pane that begins at a row. */
static void draw_pane(const struct night_page *p, struct grid *g, int row, int text_top)
{
	const struct night_shape *s = &p->shape;
	int at = row;
	if (s->sky) {
		draw_zone(p, g, at);
		axis_draw_band(&p->axis, g, at++, p->axis_at, true);
		strip_draw(&p->strip[0], &p->axis, g, at++, p->axis_at);
	}
	if (s->curve)
		curve_draw(&p->curve, &p->axis, g, at, p->axis_at);
	if (s->hours) {
		draw_zone(p, g, at + s->curve + 1);
		grid_put(g, at + s->curve + 1, p->axis_at, p->axis.cols, p->axis.hours, ROLE_FAINT);
	}
	for (int i = 0; i < s->text && text_top + i < p->details.n; i++)
		grid_put(g, row + s->text_at + i, 1, s->width, p->details.line[text_top + i].text,
			 p->details.line[text_top + i].role);
}

static void draw_night(const struct night_page *p, struct grid *g)
{
	const struct night_shape *s = &p->shape;
	if (night_page_is_full(p))
		draw_full_head(p, g);
	else
		draw_short_head(p, g);
	if (g->cols >= PAGE_COLS_FULL)
		draw_headings(p, g, s->head - 2);
	draw_list(p, g, s->head);
	draw_rule(p, g, s->head + s->list);
	if (s->pane > 0 && p->rows.n > 0)
		draw_pane(p, g, s->head + s->list + 1, 0);
	draw_footer(p, g);
}

static void draw_details(const struct night_page *p, struct grid *g)
{
	char title[NAME_BYTES_MAX + 120];
	int row = 1 + p->shape.text_at, rows = p->shape.text;
	snprintf(title, sizeof title, "%s, night %s", p->rows.row[p->selected].name, p->head.name);
	grid_put(g, 0, 1, g->cols - 2, title, ROLE_STRONG);
	draw_pane(p, g, 1, p->details.top);
	if (p->details.top > 0)
		grid_glyph(g, row, g->cols - 1, GLYPH_MORE_ABOVE, ROLE_KEY);
	if (p->details.top + rows < p->details.n)
		grid_glyph(g, row + rows - 1, g->cols - 1, GLYPH_MORE_BELOW, ROLE_KEY);
	grid_cursor(g, row, 0, false);
}

static void draw_choice(const struct night_page *p, struct grid *g)
{
	int row = 1 + CHOICE_FIRST_LINE + p->choice - p->text.top;
	grid_glyph(g, row, 0, GLYPH_SELECTED, ROLE_STRONG);
	grid_select(g, row, 0, g->cols);
	grid_cursor(g, row, 0, false);
}

static void draw_text(const struct night_page *p, struct grid *g)
{
	bool choice = night_mode_is_choice(p->mode), plan = p->mode == MODE_PLAN || p->mode == MODE_COMPARE;
	if (p->mode == MODE_DETAILS && p->rows.n > 0) {
		draw_details(p, g);
	} else {
		grid_put(g, 0, 1, g->cols - 2,
			 p->loaded ? fitting(g->cols - 2, p->head.clocks, p->head.clocks_short, p->head.clock)
				   : "wane",
			 ROLE_FAINT);
		text_view_draw(&p->text, g, 1, g->rows - 2);
		grid_cursor(g, 1, 0, false);
		if (choice)
			draw_choice(p, g);
	}
	grid_put(g, g->rows - 1, 1, g->cols - 2,
		 p->message[0]		     ? p->message
		 : p->mode == MODE_FIRST_RUN ? "q quit  ? help  l limits"
		 : choice		     ? "Enter takes it  j k move  Esc leaves"
		 : plan			     ? "q back  j k PgDn PgUp scroll  K keep"
					     : "q back  j k PgDn PgUp scroll",
		 p->message[0] ? p->message_role : ROLE_KEY);
}

void night_page_draw(const struct night_page *p, struct grid *g)
{
	grid_clear(g);
	if (g->rows < PAGE_ROWS_MIN || g->cols < PAGE_COLS_MIN) {
		grid_put(g, 0, 0, g->cols, "wane needs 24 x 6", ROLE_STRONG);
		grid_put(g, 1, 0, g->cols, "larger, or q quits", ROLE_TEXT);
		return;
	}
	if (p->mode != MODE_LIST && p->mode != MODE_LEAVE && !question(p->mode, true))
		draw_text(p, g);
	else if (p->loaded)
		draw_night(p, g);
	else
		draw_footer(p, g);
}
