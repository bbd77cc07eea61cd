/* SPDX-License-Identifier: MIT
 * What keys do on the drift page. */
#include "tui/pages/drift_page.h"
#include "tui/pages/night_filter.h"

#include <stdio.h>
#include <string.h>

enum { RESIDUAL_LEAP = 10 };

static bool asking(const struct drift_page *p)
{
	return p->mode == DRIFT_MODE_AT || p->mode == DRIFT_MODE_FIND || p->mode == DRIFT_MODE_FILTER;
}

/* --- questions in the last row --- */

static void ask(struct drift_page *p, enum drift_mode mode)
{
	char text[16];
	struct date d = date_from_mjd(p->table.choice.at.mjd);
	snprintf(text, sizeof text, "%04d-%02d-%02d", d.year % 10000, d.month, d.day);
	if (mode == DRIFT_MODE_AT)
		line_offer(&p->line, text);
	else
		line_set(&p->line, mode == DRIFT_MODE_FILTER ? p->filter_text : "");
	p->mode = mode;
}

static enum want enter_date(struct drift_page *p, const char *text)
{
	struct date d;
	struct utc at = {.sod_s = 0.0};
	struct err e;
	if (date_parse(text, &d, &e) != ST_OK || date_to_mjd(d, &at.mjd, &e) != ST_OK) {
		drift_page_say(p, ROLE_BAD, e.text);
		return WANT_NOTHING;
	}
	p->mode = DRIFT_MODE_LIST;
	p->chosen_at = at;
	p->at_chosen = true;
	return WANT_LOAD;
}

static void find(struct drift_page *p, int direction)
{
	char text[DRIFT_MESSAGE_BYTES];
	size_t n = p->n, found = 0, place = 0;
	long to = -1;
	if (!p->find_text[0]) {
		drift_page_say(p, ROLE_WARN, "Nothing was looked for yet; / asks for a name.");
		return;
	}
	for (size_t i = 1; i <= n && to < 0; i++) {
		size_t at = (p->selected + (direction > 0 ? i : n - i)) % n;
		if (text_holds(p->table.row[p->order[at]].prepared->target->name, p->find_text))
			to = (long)at;
	}
	for (size_t i = 0; i < n; i++)
		if (text_holds(p->table.row[p->order[i]].prepared->target->name, p->find_text)) {
			found++;
			place = (long)i <= to ? found : place;
		}
	if (to >= 0)
		drift_page_select(p, to);
	if (found)
		snprintf(text, sizeof text, "%zu of %zu with `%s`; n next, N before", place, found,
			 p->find_text);
	else
		snprintf(text, sizeof text, "No name in the list holds `%s`.", p->find_text);
	drift_page_say(p, found ? ROLE_TEXT : ROLE_WARN, text);
}

static enum want enter_line(struct drift_page *p)
{
	char text[DRIFT_ASKED_BYTES];
	line_text(&p->line, text, sizeof text);
	if (p->mode == DRIFT_MODE_AT)
		return enter_date(p, text);
	bool filter = p->mode == DRIFT_MODE_FILTER;
	p->mode = DRIFT_MODE_LIST;
	if (filter) {
		snprintf(p->filter_text, sizeof p->filter_text, "%s", strcmp(text, "!") == 0 ? "" : text);
		drift_page_arrange(p);
		return WANT_NOTHING;
	}
	if (*text)
		snprintf(p->find_text, sizeof p->find_text, "%s", text);
	find(p, 1);
	return WANT_NOTHING;
}

static enum want line_mode_key(struct drift_page *p, uint32_t code)
{
	if (code == '\n' || code == PRESS_ENTER)
		return p->pasting ? WANT_NOTHING : enter_line(p);
	if (line_key(&p->line, code))
		return WANT_NOTHING;
	enum action action = key_action_in(&drift_keys, code);
	if (action == ACT_SUSPEND)
		return WANT_SUSPEND;
	if (action == ACT_REPAINT)
		return WANT_REPAINT;
	if (action == ACT_LEAVE || action == ACT_QUIT)
		p->mode = DRIFT_MODE_LIST;
	return WANT_NOTHING;
}

/* --- help and orders --- */

static void leave_text(struct drift_page *p)
{
	p->mode = DRIFT_MODE_LIST;
	drift_page_settle(p);
}

static bool scroll_key(struct drift_page *p, enum action action)
{
	int rows = drift_view_rows(p), page = rows > 2 ? rows - 1 : 1;
	int by = action == ACT_UP	   ? -1
		 : action == ACT_DOWN	   ? 1
		 : action == ACT_PAGE_UP   ? -page
		 : action == ACT_PAGE_DOWN ? page
		 : action == ACT_FIRST	   ? -TEXT_LINES_MAX
		 : action == ACT_LAST	   ? TEXT_LINES_MAX
					   : 0;
	if (by == 0)
		return false;
	text_view_scroll(&p->text, by, rows);
	return true;
}

static void choose_order(struct drift_page *p, int cell)
{
	p->sort_turned = p->sort == cell && !p->sort_turned;
	p->sort = cell;
	p->mode = DRIFT_MODE_LIST;
	drift_page_arrange(p);
}

static void move_choice(struct drift_page *p, int by)
{
	const int last = DRIFT_CELLS - 2; /* the remarks are no order */
	p->choice += by;
	p->choice = p->choice < 0 ? 0 : p->choice > last ? last : p->choice;
	int line = p->choice + DRIFT_SORT_LINE, rows = drift_view_rows(p);
	if (line < p->text.top + DRIFT_SORT_LINE)
		text_view_scroll(&p->text, line - DRIFT_SORT_LINE - p->text.top, rows);
	if (line >= p->text.top + rows)
		text_view_scroll(&p->text, line - rows + 1 - p->text.top, rows);
}

/* True when the key belonged to the choice of orders. */
static bool sort_key(struct drift_page *p, uint32_t code)
{
	for (int c = 0; c < DRIFT_CELLS; c++)
		if (drift_cells[c].key && (uint32_t)(unsigned char)drift_cells[c].key == code) {
			choose_order(p, c);
			return true;
		}
	enum action action = key_action_in(&drift_keys, code);
	if (action == ACT_DETAILS)
		choose_order(p, p->choice);
	else if (action == ACT_UP || action == ACT_DOWN)
		move_choice(p, action == ACT_UP ? -1 : 1);
	else if (action == ACT_FIRST || action == ACT_LAST)
		move_choice(p, action == ACT_FIRST ? -DRIFT_CELLS : DRIFT_CELLS);
	else
		return false;
	return true;
}

static void open_text(struct drift_page *p, enum drift_mode mode)
{
	p->mode = mode;
	if (mode == DRIFT_MODE_HELP) {
		drift_help_lines(p);
		return;
	}
	drift_sort_lines(p);
	p->choice = p->sort;
	move_choice(p, 0);
}

/* --- residuals --- */

static enum want want_change(struct drift_page *p, enum drift_change change)
{
	p->wanted_change = change;
	return WANT_CHANGE;
}

static enum want residuals_action(struct drift_page *p, enum action action)
{
	struct residual_view *v = &p->residuals;
	long at = (long)v->chosen;
	switch (action) {
	case ACT_UP:
	case ACT_DOWN:
		residual_view_choose(v, at + (action == ACT_DOWN ? 1 : -1));
		break;
	case ACT_PAGE_UP:
	case ACT_PAGE_DOWN:
		residual_view_choose(v, at + (action == ACT_PAGE_DOWN ? RESIDUAL_LEAP : -RESIDUAL_LEAP));
		break;
	case ACT_FIRST:
		residual_view_choose(v, 0);
		break;
	case ACT_LAST:
		residual_view_choose(v, (long)v->fits.list.n - 1);
		break;
	case ACT_MODEL:
		if (!residual_view_turn(v))
			drift_page_say(p, ROLE_WARN,
				       "There is no quadratic fit: it takes three epochs or more.");
		break;
	case ACT_COUNT_IN_FIT:
		return want_change(p, CHANGE_COUNT);
	case ACT_UNDO:
		return want_change(p, CHANGE_UNDO);
	default:
		residual_view_close(v);
		leave_text(p);
		break;
	}
	return WANT_NOTHING;
}

/* --- the list --- */

static bool move_action(struct drift_page *p, enum action action)
{
	long at = (long)p->selected, page = p->list > 1 ? p->list - 1 : 1;
	switch (action) {
	case ACT_UP:
	case ACT_DOWN:
		drift_page_select(p, at + (action == ACT_DOWN ? 1 : -1));
		return true;
	case ACT_PAGE_UP:
	case ACT_PAGE_DOWN:
		drift_page_select(p, at + (action == ACT_PAGE_DOWN ? page : -page));
		return true;
	case ACT_FIRST:
		drift_page_select(p, 0);
		return true;
	case ACT_LAST:
		drift_page_select(p, (long)p->n - 1);
		return true;
	default:
		return false;
	}
}

static enum want list_action(struct drift_page *p, enum action action)
{
	if (!p->loaded || move_action(p, action))
		return WANT_NOTHING;
	switch (action) {
	case ACT_AT:
		ask(p, DRIFT_MODE_AT);
		break;
	case ACT_FIND:
		ask(p, DRIFT_MODE_FIND);
		break;
	case ACT_FILTER:
		ask(p, DRIFT_MODE_FILTER);
		break;
	case ACT_FIND_NEXT:
	case ACT_FIND_BEFORE:
		find(p, action == ACT_FIND_NEXT ? 1 : -1);
		break;
	case ACT_SORT:
		open_text(p, DRIFT_MODE_SORT);
		break;
	case ACT_DETAILS:
		p->residuals_wanted = p->n > 0;
		return p->n > 0 ? WANT_LOAD : WANT_NOTHING;
	default:
		break;
	}
	return WANT_NOTHING;
}

static enum want leave(struct drift_page *p, enum action action)
{
	if (p->mode != DRIFT_MODE_LIST) {
		leave_text(p);
	} else if (action == ACT_QUIT) {
		return WANT_QUIT;
	} else if (p->filter_text[0]) {
		p->filter_text[0] = '\0';
		drift_page_arrange(p);
	}
	return WANT_NOTHING;
}

/* Actions of every mode but questions; *taken tells whether it was one. */
static enum want common_action(struct drift_page *p, enum action action, bool *taken)
{
	*taken = true;
	switch (action) {
	case ACT_REPAINT:
		return WANT_REPAINT;
	case ACT_SUSPEND:
		return WANT_SUSPEND;
	case ACT_RED:
		return WANT_RED;
	case ACT_NIGHT_PAGE:
		return WANT_NIGHT_PAGE;
	case ACT_DRIFT_PAGE:
		return WANT_DRIFT_PAGE;
	case ACT_HELP:
		if (p->mode == DRIFT_MODE_HELP)
			leave_text(p);
		else
			open_text(p, DRIFT_MODE_HELP);
		return WANT_NOTHING;
	case ACT_QUIT:
	case ACT_LEAVE:
		if (p->mode != DRIFT_MODE_RESIDUALS)
			return leave(p, action);
		break;
	default:
		break;
	}
	*taken = false;
	return WANT_NOTHING;
}

static void say_unknown(struct drift_page *p, uint32_t code)
{
	char text[DRIFT_MESSAGE_BYTES];
	key_unknown_text(code, text, sizeof text);
	drift_page_say(p, ROLE_WARN, text);
}

static bool paste_key(struct drift_page *p, uint32_t code)
{
	const char *left_out;
	const bool taken = key_paste(&p->pasting, asking(p), code, &left_out);
	if (left_out)
		drift_page_say(p, ROLE_WARN, left_out);
	return taken;
}

enum want drift_page_key(struct drift_page *p, uint32_t code)
{
	bool taken = false;
	if (paste_key(p, code))
		return WANT_NOTHING;
	p->message[0] = '\0';
	if (asking(p))
		return line_mode_key(p, code);
	if (p->mode == DRIFT_MODE_SORT && sort_key(p, code))
		return WANT_NOTHING;
	bool residuals = p->mode == DRIFT_MODE_RESIDUALS;
	enum action action = key_action_in(residuals ? &residual_keys : &drift_keys, code);
	if (action == ACT_NONE) {
		say_unknown(p, code);
		return WANT_NOTHING;
	}
	enum want want = common_action(p, action, &taken);
	if (taken)
		return want;
	if (residuals)
		return residuals_action(p, action);
	if (p->mode == DRIFT_MODE_LIST)
		return list_action(p, action);
	if (!scroll_key(p, action))
		say_unknown(p, code);
	return WANT_NOTHING;
}
