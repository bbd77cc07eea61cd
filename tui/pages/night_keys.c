/* SPDX-License-Identifier: MIT
 * What keys do on the night page. */
#include "tui/pages/night_page.h"
#include "tui/pages/night_sort.h"

#include <stdio.h>
#include <string.h>

static enum want want_night(struct night_page *p, int32_t mjd)
{
	p->wanted_mjd = mjd;
	return WANT_LOAD;
}

static void open_text(struct night_page *p, enum night_mode mode)
{
	p->mode = mode;
	p->choice = mode == MODE_SORT ? p->sort : 0;
	night_page_make_text(p);
	night_page_show_choice(p);
}

static void leave_text(struct night_page *p)
{
	p->mode = p->loaded && p->run->targets.n > 0 ? MODE_LIST : MODE_FIRST_RUN;
	night_page_settle(p);
	night_page_make_text(p);
}

/* --- questions in the last row --- */

static bool asking(const struct night_page *p)
{
	switch (p->mode) {
	case MODE_DATE:
	case MODE_FIND:
	case MODE_FILTER:
	case MODE_CAUSE:
	case MODE_NOTE:
	case MODE_LOST_TIME:
	case MODE_SAVE_AS:
		return true;
	default:
		return false;
	}
}

static void ask(struct night_page *p, enum night_mode mode)
{
	char text[16] = "";
	struct date d = date_from_mjd(p->view.night.mjd);
	if (mode == MODE_DATE)
		snprintf(text, sizeof text, "%04d-%02d-%02d", d.year % 10000, d.month, d.day);
	if (mode == MODE_DATE)
		line_offer(&p->line, text);
	else
		line_set(&p->line, mode == MODE_FILTER ? p->filter_text : text);
	p->mode = mode;
}

static enum want enter_date(struct night_page *p, const char *text)
{
	struct date d;
	int32_t mjd;
	struct err e;
	if (date_parse(text, &d, &e) != ST_OK || date_to_mjd(d, &mjd, &e) != ST_OK) {
		night_page_say(p, ROLE_BAD, e.text);
		return WANT_NOTHING;
	}
	p->mode = MODE_LIST;
	return want_night(p, mjd);
}

static void enter_filter(struct night_page *p, const char *text)
{
	struct err e;
	if (filter_parse(text, &p->filter, &e) != ST_OK) {
		night_page_say(p, ROLE_BAD, e.text);
		return;
	}
	snprintf(p->filter_text, sizeof p->filter_text, "%s", text);
	p->mode = MODE_LIST;
	night_page_arrange(p);
}

/* The next window in a direction whose name holds what was looked for; the selected one comes last. */
static void find(struct night_page *p, int direction)
{
	char text[MESSAGE_BYTES];
	size_t n = p->rows.n, found = 0, place = 0;
	if (!p->find_text[0]) {
		night_page_say(p, ROLE_WARN, "Nothing was looked for yet; / asks for a name.");
		return;
	}
	long to = -1;
	for (size_t i = 1; i <= n && to < 0; i++) {
		size_t at = (p->selected + (direction > 0 ? i : n - i)) % n;
		if (text_holds(p->rows.row[at].name, p->find_text))
			to = (long)at;
	}
	for (size_t i = 0; i < n; i++)
		if (text_holds(p->rows.row[i].name, p->find_text)) {
			found++;
			place = (long)i <= to ? found : place;
		}
	if (to >= 0)
		night_page_select(p, to);
	if (found)
		snprintf(text, sizeof text, "%zu of %zu with `%s`; n next, N before", place, found,
			 p->find_text);
	else
		snprintf(text, sizeof text, "No name in the list holds `%s`.", p->find_text);
	night_page_say(p, found ? ROLE_TEXT : ROLE_WARN, text);
}

static void enter_find(struct night_page *p, const char *text)
{
	if (*text)
		snprintf(p->find_text, sizeof p->find_text, "%s", text);
	p->mode = MODE_LIST;
	find(p, 1);
}

static enum want enter_line(struct night_page *p)
{
	char text[ASKED_BYTES];
	line_text(&p->line, text, sizeof text);
	if (p->mode == MODE_DATE)
		return enter_date(p, text);
	if (p->mode == MODE_FILTER)
		enter_filter(p, text);
	else if (p->mode == MODE_FIND)
		enter_find(p, text);
	else
		return night_plan_entered(p, text);
	return WANT_NOTHING;
}

static enum want line_mode_key(struct night_page *p, uint32_t code)
{
	if (code == '\n' || code == PRESS_ENTER)
		return p->pasting ? WANT_NOTHING : enter_line(p);
	if (line_key(&p->line, code))
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

/* --- texts and choices --- */

/* Keys of a text that is read: true when it was one. */
static bool scroll_key(struct night_page *p, struct text_view *v, enum action action)
{
	int rows = night_view_rows(p), page = rows > 2 ? rows - 1 : 1;
	switch (action) {
	case ACT_UP:
		text_view_scroll(v, -1, rows);
		return true;
	case ACT_DOWN:
		text_view_scroll(v, 1, rows);
		return true;
	case ACT_PAGE_UP:
		text_view_scroll(v, -page, rows);
		return true;
	case ACT_PAGE_DOWN:
		text_view_scroll(v, page, rows);
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

static int choices(const struct night_page *p)
{
	return p->text.n - CHOICE_FIRST_LINE;
}

static void move_choice(struct night_page *p, int to)
{
	int last = choices(p) - 1;
	p->choice = to > last ? last : to;
	p->choice = p->choice < 0 ? 0 : p->choice;
	night_page_show_choice(p);
}

static enum want choose(struct night_page *p)
{
	bool sites = p->mode == MODE_SITES;
	if (p->mode == MODE_DRAFTS || p->mode == MODE_MARK)
		return night_plan_chosen(p);
	p->mode = MODE_LIST;
	if (sites) {
		p->wanted_site = p->choice;
		return WANT_LOAD;
	}
	p->sort_turned = p->sort == p->choice && !p->sort_turned;
	p->sort = p->choice;
	night_page_arrange(p);
	return WANT_NOTHING;
}

/* Keys of a choice; *taken tells whether it was one. */
static enum want choice_key(struct night_page *p, uint32_t code, bool *taken)
{
	int rule = p->mode == MODE_SORT ? sort_find(code) : -1, page = night_view_rows(p) - 1;
	*taken = true;
	if (rule >= 0) {
		p->choice = rule;
		return choose(p);
	}
	switch (key_action(code)) {
	case ACT_UP:
		move_choice(p, p->choice - 1);
		break;
	case ACT_DOWN:
		move_choice(p, p->choice + 1);
		break;
	case ACT_PAGE_UP:
		move_choice(p, p->choice - page);
		break;
	case ACT_PAGE_DOWN:
		move_choice(p, p->choice + page);
		break;
	case ACT_FIRST:
		move_choice(p, 0);
		break;
	case ACT_LAST:
		move_choice(p, choices(p) - 1);
		break;
	case ACT_DETAILS:
		return choose(p);
	default:
		*taken = false;
		break;
	}
	return WANT_NOTHING;
}

/* --- the list --- */

static bool move_action(struct night_page *p, enum action action)
{
	long at = (long)p->selected, page = p->shape.list > 1 ? p->shape.list - 1 : 1;
	long to = action == ACT_UP	    ? at - 1
		  : action == ACT_DOWN	    ? at + 1
		  : action == ACT_PAGE_UP   ? at - page
		  : action == ACT_PAGE_DOWN ? at + page
		  : action == ACT_FIRST	    ? 0
					    : (long)p->rows.n - 1;
	if (action != ACT_UP && action != ACT_DOWN && action != ACT_PAGE_UP && action != ACT_PAGE_DOWN &&
	    action != ACT_FIRST && action != ACT_LAST)
		return false;
	night_page_select(p, to);
	return true;
}

static void open_sites(struct night_page *p)
{
	if (p->run->sites.n == 0) {
		night_page_say(p, ROLE_WARN, "No site is stored; `wane site add` stores one.");
		return;
	}
	open_text(p, MODE_SITES);
	for (size_t i = 0; i < p->run->sites.n; i++)
		if (strcmp(p->run->sites.site[i].name, p->run->site.name) == 0)
			move_choice(p, (int)i);
}

/* Why a window was left out is there; what forcing it in would cost may come later. */
static void open_details(struct night_page *p)
{
	const struct night_row *row = night_page_selected(p);
	p->mode = row ? MODE_DETAILS : MODE_LIST;
	p->plan.cost_waits = row && page_plan_needs_cost(&p->plan, row);
	night_page_settle(p);
}

static enum want list_action(struct night_page *p, enum action action)
{
	if (move_action(p, action))
		return WANT_NOTHING;
	switch (action) {
	case ACT_NIGHT_BEFORE:
		return want_night(p, p->view.night.mjd - 1);
	case ACT_NIGHT_AFTER:
		return want_night(p, p->view.night.mjd + 1);
	case ACT_TONIGHT:
		night_page_select_current(p);
		night_page_settle(p);
		return want_night(p, night_date_of(p->run->site.lon_east_deg, p->now));
	case ACT_LONG_SHOTS:
		p->show_long_shots = !p->show_long_shots;
		return want_night(p, p->view.night.mjd);
	case ACT_DATE:
		ask(p, MODE_DATE);
		break;
	case ACT_FIND:
		ask(p, MODE_FIND);
		break;
	case ACT_FILTER:
		ask(p, MODE_FILTER);
		break;
	case ACT_FIND_NEXT:
		find(p, 1);
		break;
	case ACT_FIND_BEFORE:
		find(p, -1);
		break;
	case ACT_SORT:
		open_text(p, MODE_SORT);
		break;
	case ACT_SITE:
		open_sites(p);
		break;
	case ACT_DETAILS:
		open_details(p);
		break;
	default:
		break;
	}
	return WANT_NOTHING;
}

/* Esc in the list takes the filter away. */
static void leave_filter(struct night_page *p)
{
	if (p->mode != MODE_LIST || p->filter.n == 0)
		return;
	p->filter.n = 0;
	p->filter_text[0] = '\0';
	night_page_arrange(p);
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
	case ACT_NIGHT_PAGE:
		return WANT_NIGHT_PAGE;
	case ACT_DRIFT_PAGE:
		return WANT_DRIFT_PAGE;
	case ACT_QUIT:
	case ACT_LEAVE:
		if (reading)
			leave_text(p);
		else if (action == ACT_QUIT && plan_edits_nights(&p->plan.edits) == 0)
			return WANT_QUIT;
		else if (action == ACT_QUIT)
			p->mode = MODE_LEAVE;
		else
			leave_filter(p);
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
	char text[MESSAGE_BYTES];
	key_unknown_text(code, text, sizeof text);
	night_page_say(p, ROLE_WARN, text);
}

static bool paste_key(struct night_page *p, uint32_t code)
{
	const char *left_out;
	const bool taken = key_paste(&p->pasting, asking(p), code, &left_out);
	if (left_out)
		night_page_say(p, ROLE_WARN, left_out);
	return taken;
}

enum want night_page_key(struct night_page *p, uint32_t code)
{
	bool taken = false;
	enum want want;
	if (paste_key(p, code))
		return WANT_NOTHING;
	p->message[0] = '\0';
	if (asking(p))
		return line_mode_key(p, code);
	if (p->mode == MODE_LEAVE)
		return night_plan_leave_key(p, code);
	if (night_mode_is_choice(p->mode)) {
		want = choice_key(p, code, &taken);
		if (taken)
			return want;
	}
	enum action action = key_action(code);
	if (action == ACT_NONE) {
		say_unknown(p, code);
		return WANT_NOTHING;
	}
	want = common_action(p, action, &taken);
	if (taken)
		return want;
	if (night_plan_action(p, action, &want))
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
