/* SPDX-License-Identifier: MIT */
#include "tui/pages/night_page.h"

#include "tui/pages/night_sort.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* --- texts that follow from the state --- */

static void hidden_text(const struct night_page *p, bool brief, char *out, size_t n)
{
	size_t shown = p->rows.long_shots;
	long hidden = p->view.hidden;
	out[0] = '\0';
	if (p->show_long_shots && shown > 0 && !brief)
		snprintf(out, n, ", %zu long shot%s among them, a hides %s", shown, shown == 1 ? "" : "s",
			 shown == 1 ? "it" : "them");
	else if (!p->show_long_shots && hidden > 0 && brief)
		snprintf(out, n, ", a: %ld more", hidden);
	else if (!p->show_long_shots && hidden > 0)
		snprintf(out, n, ", %ld long shot%s hidden, a shows %s", hidden, hidden == 1 ? "" : "s",
			 hidden == 1 ? "it" : "them");
}

static void write_count(struct night_page *p, bool brief)
{
	char hidden[80], where[ASKED_BYTES + 32] = "", by[64];
	const struct sort_rule *rule = &sort_rules[p->sort];
	hidden_text(p, brief, hidden, sizeof hidden);
	if (p->filter.n > 0)
		snprintf(where, sizeof where, " out of %zu where %s", p->rows.total, p->filter_text);
	snprintf(by, sizeof by, " by %s%s", brief ? rule->short_word : rule->word,
		 p->sort_turned ? ", turned" : "");
	if (p->rows.n > 0)
		snprintf(p->count, sizeof p->count, brief ? "%zu/%zu%s%s%s" : "window %zu of %zu%s%s%s",
			 p->selected + 1, p->rows.n, where, by, hidden);
	else
		snprintf(p->count, sizeof p->count, "no window%s%s", where, hidden);
}

/* In few words where the many do not fit. */
static void make_count(struct night_page *p)
{
	const int rule_ends = 8;
	write_count(p, false);
	if (text_columns(p->count) > p->grid_cols - rule_ends)
		write_count(p, true);
}

const struct night_row *night_page_selected(const struct night_page *p)
{
	return p->rows.n > 0 ? &p->rows.row[p->selected] : NULL;
}

void night_page_make_text(struct night_page *p)
{
	int width = p->grid_cols - 2;
	const struct site *site = &p->run->site;
	if (p->mode == MODE_HELP)
		help_lines(&p->text, width, p->tier);
	else if (p->mode == MODE_LIMITS)
		limit_lines(&p->text, width, &p->run->limits, p->head.remark);
	else if (p->mode == MODE_FIRST_RUN)
		first_run_lines(&p->text, width, site->name && site->name[0], p->run->targets.n > 0,
				p->run->db_path);
	else if (p->mode == MODE_SORT)
		sort_lines(&p->text, p->sort, p->sort_turned);
	else if (p->mode == MODE_SITES)
		site_lines(&p->text, &p->run->sites);
	else if (p->mode == MODE_PLAN)
		plan_lines(p);
	else if (p->mode == MODE_COMPARE)
		compare_lines(p);
	else if (p->mode == MODE_DRAFTS)
		draft_lines(p);
	else if (p->mode == MODE_MARK)
		mark_lines(p);
}

bool night_mode_is_choice(enum night_mode mode)
{
	return mode == MODE_SORT || mode == MODE_SITES || mode == MODE_DRAFTS || mode == MODE_MARK;
}

void night_page_show_choice(struct night_page *p)
{
	int rows = night_view_rows(p), line = p->choice + CHOICE_FIRST_LINE;
	if (!night_mode_is_choice(p->mode))
		return;
	if (line < p->text.top + CHOICE_FIRST_LINE)
		text_view_scroll(&p->text, line - CHOICE_FIRST_LINE - p->text.top, rows);
	if (line >= p->text.top + rows)
		text_view_scroll(&p->text, line - rows + 1 - p->text.top, rows);
}

/* A row or two round the selected one stay in sight. A long list goes on by a quarter of its rows: a scroll
 * costs far more bytes than a move. */
static void scroll_to_selected(struct night_page *p)
{
	size_t rows = (size_t)p->shape.list, margin = rows > 6 ? 2 : rows > 2 ? 1 : 0;
	size_t leap = rows >= 16 ? rows / 4 : 0;
	if (p->selected < p->top + margin)
		p->top = p->selected > margin + leap ? p->selected - margin - leap : 0;
	if (p->selected + margin >= p->top + rows)
		p->top = p->selected + margin + 1 + leap - rows;
	if (p->top + rows > p->rows.n)
		p->top = p->rows.n > rows ? p->rows.n - rows : 0;
}

static void keep_selected(struct night_page *p)
{
	const struct night_row *row = night_page_selected(p);
	if (!row)
		return;
	snprintf(p->kept.name, sizeof p->kept.name, "%s", row->name);
	p->kept.epoch = row->window->event.epoch;
	p->kept.kind = row->window->event.kind;
	p->kept.mjd = p->view.night.mjd;
}

static void tick_head(struct night_page *p)
{
	if (!p->loaded)
		return;
	night_head_tick(&p->head, p->run, &p->view, &p->rows, night_page_selected(p), p->now);
	page_plan_tick(&p->plan, &p->head, &p->view, p->now);
}

void night_page_settle(struct night_page *p)
{
	const struct night_row *row = night_page_selected(p);
	const bool details = p->mode == MODE_DETAILS;
	const enum detail_extent extent = details			    ? DETAIL_WHOLE
					  : p->grid_rows >= PAGE_ROWS_ROOMY ? DETAIL_ROOMY
									    : DETAIL_SHORT;
	p->layout = night_lay_out(p->grid_cols, p->loaded && p->view.night.observing);
	night_page_place_axis(p);
	int width = night_page_text_width(p);
	char plan[1600];
	if (row)
		page_plan_row_words(&p->plan, row, plan, sizeof plan);
	if (row)
		detail_lines(&p->details, width, extent, p->run, &p->view, &p->head, row, plan);
	else
		text_view_start(&p->details, width);
	night_page_share(p);
	if (!details)
		scroll_to_selected(p);
	night_page_make_pictures(p);
	make_count(p);
	keep_selected(p);
	tick_head(p);
}

void night_page_say(struct night_page *p, enum role role, const char *text)
{
	snprintf(p->message, sizeof p->message, "%s", text);
	p->message_role = role;
}

/* --- opening, loading, size, clock --- */

void night_page_open(struct night_page *p, const struct run *run)
{
	memset(p, 0, sizeof *p);
	p->run = run;
	p->wanted_site = NO_SITE;
	p->grid_rows = p->grid_cols = 1;
	p->shape.list = 1;
	if (!run->site.name || !run->site.name[0] || run->targets.n == 0)
		p->mode = MODE_FIRST_RUN;
	text_view_start(&p->details, 1);
	text_view_start(&p->text, 1);
	night_page_forget_strips(p);
}

void night_page_close(struct night_page *p)
{
	plan_compare_free(&p->compare);
	page_plan_free(&p->plan);
	night_rows_free(&p->rows);
	night_view_free(&p->view);
}

static void tick_rows(struct night_page *p)
{
	double now_d = night_of_utc(&p->view.night, p->now);
	night_rows_tick(&p->rows, now_d, now_d >= 0.0 && now_d < p->view.night.length_d);
}

void night_page_select_current(struct night_page *p)
{
	size_t count;
	const double now_d = night_of_utc(&p->view.night, p->now);
	const struct night_row *planned = night_rows_running(&p->rows, now_d),
			       *now = planned ? planned : night_rows_best(&p->rows, STATE_NOW, &count),
			       *next = night_rows_next(&p->rows);
	p->select_current = true;
	/* what runs and is unlikely to be done does not hide what is worth going to */
	bool stay = now && (planned || !next || (next->plan.order == 0 && now->window->chance.done >= 0.5));
	const struct night_row *row = stay ? now : next;
	p->selected = row ? (size_t)(row - p->rows.row) : 0;
}

void night_page_select(struct night_page *p, long to)
{
	long last = (long)p->rows.n - 1;
	p->select_current = false;
	p->selected = to < 0 || last < 0 ? 0 : to > last ? (size_t)last : (size_t)to;
	night_page_settle(p);
}

/* Selects the window that was selected before; false when it is not shown. */
static bool select_kept(struct night_page *p)
{
	for (size_t i = 0; i < p->rows.n; i++) {
		const struct night_row *row = &p->rows.row[i];
		if (row->window->event.epoch == p->kept.epoch && row->window->event.kind == p->kept.kind &&
		    strcmp(row->name, p->kept.name) == 0) {
			p->selected = i;
			return true;
		}
	}
	return false;
}

/* Sorts and filters the rows; the selection is then the caller's to put right. */
static void arrange_rows(struct night_page *p)
{
	bool *shown = calloc(p->rows.total + 1, sizeof *shown);
	struct err e;
	tick_rows(p);
	for (size_t i = 0; shown && i < p->rows.total; i++)
		shown[i] = filter_keeps(&p->filter, &p->rows.row[i], &p->view.night, p->run->zone);
	if (!shown)
		night_page_say(p, ROLE_BAD, "no memory to choose windows");
	else if (night_rows_arrange(&p->rows, p->sort, p->sort_turned, shown, &e) != ST_OK)
		night_page_say(p, ROLE_BAD, e.text);
	free(shown);
	tick_rows(p);
	night_page_forget_strips(p);
}

void night_page_arrange(struct night_page *p)
{
	arrange_rows(p);
	if (!select_kept(p))
		night_page_select_current(p);
	p->top = 0;
	night_page_settle(p);
}

void night_page_show_plan(struct night_page *p)
{
	page_plan_mark_rows(&p->plan, &p->rows);
	arrange_rows(p);
	if (p->select_current || !select_kept(p))
		night_page_select_current(p);
	night_page_settle(p);
	if (p->mode == MODE_PLAN)
		night_page_make_text(p);
}

enum status night_page_take(struct night_page *p, struct night_view *view, struct err *e)
{
	enum status s = night_rows_make(&p->rows, view, &p->run->leap, p->run->zone, e);
	if (s != ST_OK) {
		night_view_free(view);
		return s;
	}
	night_view_free(&p->view);
	p->view = *view;
	*view = (struct night_view){.hidden = 0};
	p->loaded = true;
	p->wanted_mjd = p->view.night.mjd;
	page_plan_drop(&p->plan);
	p->plan.waits = true;
	page_plan_mark_rows(&p->plan, &p->rows);
	night_head_make(&p->head, p->run, &p->view);
	p->axis.cols = 0;
	arrange_rows(p);
	if (p->kept.mjd != p->view.night.mjd || !select_kept(p))
		night_page_select_current(p);
	p->top = 0;
	night_page_settle(p);
	return ST_OK;
}

void night_page_drop(struct night_page *p)
{
	if (p->loaded)
		p->wanted_mjd = p->view.night.mjd;
	page_plan_drop(&p->plan);
	p->plan.waits = false;
	night_rows_free(&p->rows);
	night_view_free(&p->view);
	p->view = (struct night_view){.hidden = 0};
	p->loaded = false;
	p->selected = p->top = 0;
	p->axis.cols = 0;
}

void night_page_size(struct night_page *p, int rows, int cols, enum tier tier)
{
	p->grid_rows = rows;
	p->grid_cols = cols;
	p->tier = tier;
	p->top = 0;
	night_page_make_text(p);
	night_page_settle(p);
	text_view_scroll(&p->text, 0, night_view_rows(p));
	night_page_show_choice(p);
	text_view_scroll(&p->details, 0, night_view_rows(p));
}

void night_page_tick(struct night_page *p, struct utc now)
{
	p->now = now;
	if (!p->loaded)
		return;
	tick_rows(p);
	axis_tick(&p->axis, night_of_utc(&p->view.night, now));
	tick_head(p);
}
