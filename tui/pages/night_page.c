/* SPDX-License-Identifier: MIT */
#include "tui/pages/night_page.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum { LIST_ROWS_MIN = 5, FOOTER_ROWS = 1, RULE_ROWS = 1 };

/* --- how the screen is shared --- */

static bool full_size(const struct night_page *p)
{
	return p->grid_rows >= PAGE_ROWS_FULL && p->grid_cols >= PAGE_COLS_FULL;
}

int night_head_rows(const struct night_page *p)
{
	const int headings = 2;
	if (full_size(p))
		return 5 + (p->head.remark[0] ? 1 : 0) + headings;
	return p->grid_cols >= PAGE_COLS_FULL ? 2 + headings : 2;
}

int night_pane_rows(const struct night_page *p)
{
	int left = p->grid_rows - night_head_rows(p) - FOOTER_ROWS - RULE_ROWS;
	if (!full_size(p) || left <= LIST_ROWS_MIN)
		return 0;
	/* the list keeps what it fills, up to a little more than half */
	int half = left / 2 + 2, list = (int)p->rows.n < half ? (int)p->rows.n : half;
	int pane = left - (list < LIST_ROWS_MIN ? LIST_ROWS_MIN : list);
	return pane < p->details.n ? pane : p->details.n;
}

int night_list_rows(const struct night_page *p)
{
	int pane = night_pane_rows(p);
	int rows = p->grid_rows - night_head_rows(p) - FOOTER_ROWS - RULE_ROWS - pane;
	return rows < 1 ? 1 : rows;
}

static int view_rows(const struct night_page *p)
{
	int rows = p->grid_rows - 2;
	return rows < 1 ? 1 : rows;
}

/* --- texts that follow from the state --- */

static void make_count(struct night_page *p)
{
	char hidden[80] = "";
	if (p->show_long_shots && p->rows.long_shots > 0)
		snprintf(hidden, sizeof hidden, ", %zu long shots among them, a hides them",
			 p->rows.long_shots);
	else if (!p->show_long_shots && p->view.hidden > 0)
		snprintf(hidden, sizeof hidden, ", %ld long shot%s hidden, a shows %s", p->view.hidden,
			 p->view.hidden == 1 ? "" : "s", p->view.hidden == 1 ? "it" : "them");
	if (p->rows.n > 0)
		snprintf(p->count, sizeof p->count, "%zu/%zu window%s%s", p->selected + 1, p->rows.n,
			 p->rows.n == 1 ? "" : "s", hidden);
	else
		snprintf(p->count, sizeof p->count, "no window%s", hidden);
}

static const struct night_row *selected_row(const struct night_page *p)
{
	return p->rows.n > 0 ? &p->rows.row[p->selected] : NULL;
}

static void make_text(struct night_page *p)
{
	int width = p->grid_cols - 2;
	const struct site *site = &p->run->site;
	if (p->mode == MODE_HELP)
		help_lines(&p->text, width);
	else if (p->mode == MODE_LIMITS)
		limit_lines(&p->text, width, &p->run->limits, p->head.remark);
	else if (p->mode == MODE_FIRST_RUN)
		first_run_lines(&p->text, width, site->name && site->name[0], p->run->targets.n > 0,
				p->run->db_path);
}

/* After a change of selection, list or size. */
static void settle(struct night_page *p)
{
	const struct night_row *row = selected_row(p);
	bool roomy = p->mode == MODE_DETAILS || p->grid_rows >= PAGE_ROWS_ROOMY;
	if (row)
		detail_lines(&p->details, p->grid_cols - 2, roomy, p->run, &p->view, &p->head, row);
	else
		text_view_start(&p->details, p->grid_cols - 2);
	/* a row or two round the selected one stay in sight */
	size_t rows = (size_t)night_list_rows(p), margin = rows > 6 ? 2 : rows > 2 ? 1 : 0;
	if (p->selected < p->top + margin)
		p->top = p->selected > margin ? p->selected - margin : 0;
	if (p->selected + margin >= p->top + rows)
		p->top = p->selected + margin + 1 - rows;
	if (p->top + rows > p->rows.n)
		p->top = p->rows.n > rows ? p->rows.n - rows : 0;
	make_count(p);
	if (p->loaded)
		night_head_tick(&p->head, p->run, &p->view, &p->rows, row, p->now);
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
	p->grid_rows = p->grid_cols = 1;
	if (!run->site.name || !run->site.name[0] || run->targets.n == 0)
		p->mode = MODE_FIRST_RUN;
	text_view_start(&p->details, 1);
	text_view_start(&p->text, 1);
}

void night_page_close(struct night_page *p)
{
	night_rows_free(&p->rows);
	night_view_free(&p->view);
}

static void tick_rows(struct night_page *p)
{
	double now_d = night_of_utc(&p->view.night, p->now);
	night_rows_tick(&p->rows, now_d, now_d >= 0.0 && now_d < p->view.night.length_d);
}

/* The best running window, else the next one, else the first. */
static void select_current(struct night_page *p)
{
	size_t count;
	const struct night_row *row = night_rows_best(&p->rows, STATE_NOW, &count);
	if (!row)
		row = night_rows_best(&p->rows, STATE_NEXT, &count);
	p->selected = row ? (size_t)(row - p->rows.row) : 0;
}

enum status night_page_take(struct night_page *p, struct night_view *view, struct err *e)
{
	const struct night_row *old = selected_row(p);
	bool same_night = p->loaded && p->view.night.mjd == view->night.mjd;
	const struct prepared *prepared = old ? old->window->event.prepared : NULL;
	long epoch = old ? old->window->event.epoch : 0;
	enum event_kind kind = old ? old->window->event.kind : KIND_TRANSIT;
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
	night_head_make(&p->head, p->run, &p->view);
	tick_rows(p);
	select_current(p);
	for (size_t i = 0; same_night && i < p->rows.n; i++) {
		const struct window_event *ev = &p->rows.row[i].window->event;
		if (ev->prepared == prepared && ev->epoch == epoch && ev->kind == kind)
			p->selected = i;
	}
	p->top = 0;
	settle(p);
	return ST_OK;
}

void night_page_size(struct night_page *p, int rows, int cols)
{
	p->grid_rows = rows;
	p->grid_cols = cols;
	p->top = 0;
	make_text(p);
	settle(p);
	text_view_scroll(&p->text, 0, view_rows(p));
	text_view_scroll(&p->details, 0, view_rows(p));
}

void night_page_tick(struct night_page *p, struct utc now)
{
	p->now = now;
	if (!p->loaded)
		return;
	tick_rows(p);
	night_head_tick(&p->head, p->run, &p->view, &p->rows, selected_row(p), now);
}

/* --- keys --- */

static void move_to(struct night_page *p, long to)
{
	long last = (long)p->rows.n - 1;
	p->selected = to < 0 || last < 0 ? 0 : to > last ? (size_t)last : (size_t)to;
	settle(p);
}

static enum want want_night(struct night_page *p, int32_t mjd)
{
	p->wanted_mjd = mjd;
	return WANT_NIGHT;
}

static void open_text(struct night_page *p, enum night_mode mode)
{
	p->mode = mode;
	make_text(p);
}

static void open_date(struct night_page *p)
{
	char text[16];
	struct date d = date_from_mjd(p->view.night.mjd);
	snprintf(text, sizeof text, "%04d-%02d-%02d", d.year % 10000, d.month, d.day);
	line_set(&p->date, text);
	p->mode = MODE_DATE;
}

static enum want enter_date(struct night_page *p)
{
	char text[LINE_CHARS_MAX * 4 + 1];
	struct date d;
	int32_t mjd;
	struct err e;
	line_text(&p->date, text, sizeof text);
	if (date_parse(text, &d, &e) != ST_OK || date_to_mjd(d, &mjd, &e) != ST_OK) {
		night_page_say(p, ROLE_BAD, e.text);
		return WANT_NOTHING;
	}
	p->mode = MODE_LIST;
	return want_night(p, mjd);
}

static enum want date_key(struct night_page *p, uint32_t code)
{
	if (code == '\n' || code == PRESS_ENTER)
		return p->pasting ? WANT_NOTHING : enter_date(p);
	if (line_key(&p->date, code))
		return WANT_NOTHING;
	enum action action = key_action(code);
	if (action == ACT_SUSPEND)
		return WANT_SUSPEND;
	if (action == ACT_REPAINT)
		return WANT_REPAINT;
	if (action == ACT_LEAVE || action == ACT_QUIT)
		p->mode = MODE_LIST;
	return WANT_NOTHING;
}

/* Keys of a text that is read: true when it was one. */
static bool scroll_key(struct night_page *p, struct text_view *v, enum action action)
{
	int rows = view_rows(p);
	switch (action) {
	case ACT_UP:
		text_view_scroll(v, -1, rows);
		return true;
	case ACT_DOWN:
		text_view_scroll(v, 1, rows);
		return true;
	case ACT_PAGE_UP:
		text_view_scroll(v, -(rows > 2 ? rows - 1 : 1), rows);
		return true;
	case ACT_PAGE_DOWN:
		text_view_scroll(v, rows > 2 ? rows - 1 : 1, rows);
		return true;
	case ACT_FIRST:
		text_view_scroll(v, -TEXT_LINES_MAX, rows);
		return true;
	case ACT_LAST:
		text_view_scroll(v, TEXT_LINES_MAX, rows);
		return true;
	default:
		return false;
	}
}

static void leave_text(struct night_page *p)
{
	p->mode = p->loaded && p->run->targets.n > 0 ? MODE_LIST : MODE_FIRST_RUN;
	settle(p);
	make_text(p);
}

static enum want list_action(struct night_page *p, enum action action)
{
	long at = (long)p->selected, page = night_list_rows(p) > 1 ? night_list_rows(p) - 1 : 1;
	switch (action) {
	case ACT_UP:
		move_to(p, at - 1);
		break;
	case ACT_DOWN:
		move_to(p, at + 1);
		break;
	case ACT_PAGE_UP:
		move_to(p, at - page);
		break;
	case ACT_PAGE_DOWN:
		move_to(p, at + page);
		break;
	case ACT_FIRST:
		move_to(p, 0);
		break;
	case ACT_LAST:
		move_to(p, (long)p->rows.n - 1);
		break;
	case ACT_NIGHT_BEFORE:
		return want_night(p, p->view.night.mjd - 1);
	case ACT_NIGHT_AFTER:
		return want_night(p, p->view.night.mjd + 1);
	case ACT_TONIGHT:
		select_current(p);
		move_to(p, (long)p->selected);
		return want_night(p, night_date_of(p->run->site.lon_east_deg, p->now));
	case ACT_LONG_SHOTS:
		p->show_long_shots = !p->show_long_shots;
		return want_night(p, p->view.night.mjd);
	case ACT_DATE:
		open_date(p);
		break;
	case ACT_DETAILS:
		p->mode = p->rows.n > 0 ? MODE_DETAILS : MODE_LIST;
		settle(p);
		break;
	default:
		break;
	}
	return WANT_NOTHING;
}

/* Actions that work everywhere but in a question; *taken tells whether it was one. */
static enum want common_action(struct night_page *p, enum action action, bool *taken)
{
	bool reading = p->mode != MODE_LIST && p->mode != MODE_FIRST_RUN;
	*taken = true;
	switch (action) {
	case ACT_REPAINT:
		return WANT_REPAINT;
	case ACT_SUSPEND:
		return WANT_SUSPEND;
	case ACT_RED:
		return WANT_RED;
	case ACT_QUIT:
	case ACT_LEAVE:
		if (reading)
			leave_text(p);
		else if (action == ACT_QUIT)
			return WANT_QUIT;
		return WANT_NOTHING;
	case ACT_HELP:
		if (p->mode == MODE_HELP)
			leave_text(p);
		else
			open_text(p, MODE_HELP);
		return WANT_NOTHING;
	case ACT_LIMITS:
		if (p->mode == MODE_LIMITS)
			leave_text(p);
		else
			open_text(p, MODE_LIMITS);
		return WANT_NOTHING;
	default:
		*taken = false;
		return WANT_NOTHING;
	}
}

static void say_unknown(struct night_page *p, uint32_t code)
{
	char name[32], text[MESSAGE_BYTES];
	key_called(code, name, sizeof name);
	snprintf(text, sizeof text, "%s does nothing here; ? shows the keys.", name);
	night_page_say(p, ROLE_WARN, text);
}

static bool paste_key(struct night_page *p, uint32_t code)
{
	if (code == PRESS_PASTE_BEGIN || code == PRESS_PASTE_END) {
		p->pasting = code == PRESS_PASTE_BEGIN;
		if (p->pasting && p->mode != MODE_DATE)
			night_page_say(p, ROLE_WARN,
				       "Pasted text was left out: nothing is being typed here.");
		return true;
	}
	return p->pasting && p->mode != MODE_DATE;
}

enum want night_page_key(struct night_page *p, uint32_t code)
{
	bool taken;
	if (paste_key(p, code))
		return WANT_NOTHING;
	p->message[0] = '\0';
	if (p->mode == MODE_DATE)
		return date_key(p, code);
	enum action action = key_action(code);
	if (action == ACT_NONE) {
		say_unknown(p, code);
		return WANT_NOTHING;
	}
	enum want want = common_action(p, action, &taken);
	if (taken)
		return want;
	if (p->mode == MODE_DETAILS) {
		if (action == ACT_DETAILS)
			leave_text(p);
		else if (!scroll_key(p, &p->details, action))
			say_unknown(p, code);
		return WANT_NOTHING;
	}
	if (p->mode == MODE_LIST && p->loaded)
		return list_action(p, action);
	if (!scroll_key(p, &p->text, action))
		say_unknown(p, code);
	return WANT_NOTHING;
}
