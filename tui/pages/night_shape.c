/* SPDX-License-Identifier: MIT
 * How the night page shares the screen, and the pictures that stand in it. */
#include "tui/pages/night_page.h"

enum {
	LIST_ROWS_MIN = 5,
	FOOTER_ROWS = 1,
	RULE_ROWS = 1,
	TEXT_ROWS_MIN = 6, /* times, losses and contacts come before a picture of altitudes */
	TEXT_ROWS_USUAL = 13,
	CURVE_ROWS = 8,
	CURVE_ROWS_HOURS = 5, /* with fewer the hours over the list have to do */
	SKY_ROWS = 2,
	AXIS_AT = 5,	       /* where it has the width of the screen */
	VIEW_ROWS_PICTURE = 18 /* a view of details with fewer has no picture */
};

/* --- how the screen is shared --- */

bool night_page_is_full(const struct night_page *p)
{
	return p->grid_rows >= PAGE_ROWS_FULL && p->grid_cols >= PAGE_COLS_FULL;
}

static int at_least(int value, int least)
{
	return value < least ? least : value;
}

static int at_most(int value, int most)
{
	return value > most ? most : value;
}

int night_page_text_width(const struct night_page *p)
{
	return p->axis_in_list ? p->axis_at - CURVE_LABEL_COLUMNS - 2 : p->grid_cols - 2;
}

/* Where room is short the plan stands beside the Moon. */
static int plan_rows(const struct night_page *p)
{
	return p->grid_rows >= PAGE_ROWS_ROOMY && p->plan.line[0] ? 1 : 0;
}

static int head_rows(const struct night_page *p)
{
	const int headings = 2;
	if (night_page_is_full(p))
		return 5 + plan_rows(p) + (p->head.remark[0] ? 1 : 0) + headings;
	return p->grid_cols >= PAGE_COLS_FULL ? 2 + headings : 2;
}

/* Rows that a pane asks for: the same for every window, so that the list stays where it is while one moves.
 */
static int pane_wanted(const struct night_page *p)
{
	return p->axis_in_list ? CURVE_ROWS_MAX + 1 : TEXT_ROWS_USUAL + SKY_ROWS + CURVE_ROWS + 1;
}

static void share_pane(const struct night_page *p, struct night_shape *s)
{
	s->width = night_page_text_width(p);
	s->text = s->pane;
	if (p->axis_in_list) {
		s->hours = s->pane - 2 >= CURVE_ROWS_HOURS;
		s->curve = at_most(s->pane - 1 - s->hours, CURVE_ROWS_MAX);
	} else if (s->pane > SKY_ROWS + 2) {
		s->sky = SKY_ROWS;
		s->curve = at_most(s->pane - SKY_ROWS - TEXT_ROWS_MIN - 1, CURVE_ROWS);
	}
	s->curve = s->curve < CURVE_ROWS_MIN ? 0 : s->curve;
	if (!p->axis_in_list) {
		s->text_at = s->sky + (s->curve ? s->curve + 1 : 0);
		s->text = s->pane - s->text_at;
	}
}

static void share_list(struct night_page *p)
{
	struct night_shape s = {.head = head_rows(p), .plan_row = plan_rows(p)};
	int left = p->grid_rows - s.head - FOOTER_ROWS - RULE_ROWS;
	if (night_page_is_full(p) && left > LIST_ROWS_MIN && p->rows.n > 0) {
		/* the list keeps what it fills, up to a half */
		int list = at_least(at_most((int)p->rows.n, left / 2), LIST_ROWS_MIN);
		s.pane = at_most(left - list, pane_wanted(p));
	}
	s.list = at_least(left - s.pane, 1);
	share_pane(p, &s);
	p->shape = s;
}

static void share_details(struct night_page *p)
{
	struct night_shape s = {.width = night_page_text_width(p)};
	s.pane = at_least(p->grid_rows - 2, 1);
	s.list = 1;
	if (s.pane >= VIEW_ROWS_PICTURE && p->grid_cols >= PAGE_COLS_FULL && p->rows.n > 0) {
		s.sky = SKY_ROWS;
		s.curve = at_most(s.pane / 3, CURVE_ROWS_MAX);
	}
	s.text_at = s.sky + (s.curve ? s.curve + 1 : 0);
	s.text = s.pane - s.text_at;
	p->shape = s;
}

void night_page_share(struct night_page *p)
{
	if (p->mode == MODE_DETAILS)
		share_details(p);
	else
		share_list(p);
}

int night_view_rows(const struct night_page *p)
{
	return p->mode == MODE_DETAILS ? p->shape.text : at_least(p->grid_rows - 2, 1);
}

int night_view_at(const struct night_page *p)
{
	return 1 + (p->mode == MODE_DETAILS ? p->shape.text_at : 0);
}

/* --- pictures --- */

void night_page_forget_strips(struct night_page *p)
{
	for (int i = 0; i < STRIP_SLOTS; i++)
		p->strip[i].row = STRIP_NO_ROW;
}

/* The axis stands in the list's own column where it has one, else over the width of the screen. */
void night_page_place_axis(struct night_page *p)
{
	bool in_list = p->mode != MODE_DETAILS && night_page_is_full(p) && p->layout.width[ROW_STRIP] > 0;
	int at = in_list ? p->layout.at[ROW_STRIP] : AXIS_AT;
	int cols = in_list ? p->layout.width[ROW_STRIP] : at_most(p->grid_cols - AXIS_AT - 1, AXIS_COLS_MAX);
	p->axis_at = at;
	p->axis_in_list = in_list;
	if (!p->loaded || cols < 1 || cols == p->axis.cols)
		return;
	axis_make(&p->axis, &p->view.night, p->run->zone, p->run->limits.value[LIM_SUN], cols);
	axis_tick(&p->axis, night_of_utc(&p->view.night, p->now));
	night_page_forget_strips(p);
}

static void make_strip(struct night_page *p, size_t row, struct strip *s)
{
	if (s->row == row)
		return;
	strip_of_window(s, &p->axis, p->rows.row[row].window, &p->view.night, &p->rows.row[row].star,
			&p->view.free);
	const struct row_plan *plan = &p->rows.row[row].plan;
	if (plan->order > 0)
		strip_add_item(s, &p->axis, plan->slew_d, plan->from_d, plan->to_d);
	s->row = row;
}

void night_page_make_pictures(struct night_page *p)
{
	const struct night_row *row = night_page_selected(p);
	if (!row || p->axis.cols < 1)
		return;
	if (p->axis_in_list)
		for (size_t i = p->top; i < p->rows.n && i < p->top + (size_t)p->shape.list; i++)
			make_strip(p, i, &p->strip[i % STRIP_SLOTS]);
	else
		make_strip(p, p->selected, &p->strip[0]);
	curve_make(&p->curve, p->shape.curve, &p->axis, row->window, &p->view.night, &row->star,
		   &p->view.free);
}
