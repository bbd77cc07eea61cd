/* SPDX-License-Identifier: MIT
 * What keys do about the plan of the night page: they say what is wanted, night_plan_change.c does it. */
#include "tui/pages/night_page.h"

#include "tui/plan_time.h"

#include <stdio.h>
#include <string.h>

static enum want want_change(struct night_page *p, enum plan_want wanted)
{
	p->wanted = wanted;
	return WANT_CHANGE;
}

static void open_choice(struct night_page *p, enum night_mode mode)
{
	p->mode = mode;
	p->choice = 0;
	night_page_make_text(p);
	night_page_show_choice(p);
}

static void ask(struct night_page *p, enum night_mode mode)
{
	line_set(&p->line, "");
	p->mode = mode;
}

/* --- marks --- */

/* The choice of marks, in its order; PLAN_PLANNED takes the mark away. */
static const enum plan_state marks[] = {PLAN_STARTED, PLAN_DONE, PLAN_PARTLY, PLAN_LOST, PLAN_PLANNED};
static const char *const mark_words[] = {"started", "done", "partly done (asks for cause and note)",
					 "lost (asks for cause and note)", "none: take the mark away"};
enum { MARKS = sizeof marks / sizeof marks[0] };

void mark_lines(struct night_page *p)
{
	struct text_view *v = &p->text;
	text_view_start(v, TEXT_LINE_BYTES - 10);
	text_view_addf(v, ROLE_STRONG, 0, "What became of %s?", p->mark.event);
	for (int i = 0; i < MARKS; i++)
		text_view_addf(v, ROLE_TEXT, 0, "  %s", mark_words[i]);
}

static void open_marks(struct night_page *p)
{
	const struct night_row *row = night_page_selected(p);
	const struct plan_view *v = p->plan.made ? &p->plan.made->view : NULL;
	if (!row)
		return;
	if (!v || v->edition == 0) {
		night_page_say(p, ROLE_WARN, "No plan of this night is stored: keep the plan first, K.");
		return;
	}
	if (row->plan.order == 0) {
		night_page_say(p, ROLE_WARN, "The selected window is not in the plan; p pins it into it.");
		return;
	}
	page_plan_event(row, p->mark.event);
	p->mark.cause[0] = p->mark.note[0] = '\0';
	open_choice(p, MODE_MARK);
}

static enum want choose_mark(struct night_page *p)
{
	p->mark.state = marks[p->choice < MARKS ? p->choice : 0];
	p->mode = MODE_LIST;
	if (p->mark.state != PLAN_PARTLY && p->mark.state != PLAN_LOST)
		return want_change(p, PLAN_WANT_MARK);
	ask(p, MODE_CAUSE);
	return WANT_NOTHING;
}

/* --- questions --- */

static enum want enter_lost_time(struct night_page *p, const char *text)
{
	const struct plan_clock clock = run_plan_clock(p->run, &p->view.night);
	double from_d, to_d;
	struct err e;
	if (plan_span(&clock, text, &from_d, &to_d, &e) != ST_OK) {
		night_page_say(p, ROLE_BAD, e.text);
		return WANT_NOTHING;
	}
	p->mode = MODE_LIST;
	snprintf(p->asked, sizeof p->asked, "%s", text);
	return want_change(p, PLAN_WANT_LOST_TIME);
}

enum want night_plan_entered(struct night_page *p, const char *text)
{
	switch (p->mode) {
	case MODE_LOST_TIME:
		return enter_lost_time(p, text);
	case MODE_CAUSE:
		snprintf(p->mark.cause, sizeof p->mark.cause, "%s", text);
		ask(p, MODE_NOTE);
		return WANT_NOTHING;
	case MODE_NOTE:
		snprintf(p->mark.note, sizeof p->mark.note, "%s", text);
		p->mode = MODE_LIST;
		return want_change(p, PLAN_WANT_MARK);
	default:
		p->mode = MODE_LIST;
		snprintf(p->asked, sizeof p->asked, "%s", text);
		return *text ? want_change(p, PLAN_WANT_SAVE_AS) : WANT_NOTHING;
	}
}

enum want night_plan_leave_key(struct night_page *p, uint32_t code)
{
	p->mode = MODE_LIST;
	return code == 'y' || code == 'Y' ? WANT_QUIT : WANT_NOTHING;
}

/* --- choices --- */

enum want night_plan_chosen(struct night_page *p)
{
	if (p->mode == MODE_MARK)
		return choose_mark(p);
	const size_t at = (size_t)p->choice;
	/* the last line is none of the drafts: planned afresh */
	snprintf(p->asked, sizeof p->asked, "%s", at < p->drafts.n ? p->drafts.draft[at].name : "");
	p->mode = MODE_LIST;
	return want_change(p, PLAN_WANT_COMPARE);
}

/* --- actions --- */

static enum want on_row(struct night_page *p, enum plan_want wanted)
{
	return night_page_selected(p) ? want_change(p, wanted) : WANT_NOTHING;
}

/* Those of the views of the plan; all else is scrolling or leaving. */
static bool view_action(struct night_page *p, enum action action, enum want *want)
{
	if (action == ACT_KEEP) {
		*want = want_change(p, p->mode == MODE_PLAN ? PLAN_WANT_KEEP : PLAN_WANT_KEEP_OTHER);
		p->mode = MODE_LIST;
		return true;
	}
	if (action == ACT_PLAN) {
		p->mode = MODE_LIST;
		night_page_settle(p);
		return true;
	}
	return false;
}

bool night_plan_action(struct night_page *p, enum action action, enum want *want)
{
	*want = WANT_NOTHING;
	if (p->mode == MODE_PLAN || p->mode == MODE_COMPARE)
		return view_action(p, action, want);
	if (!p->loaded || (p->mode != MODE_LIST && p->mode != MODE_DETAILS))
		return false;
	switch (action) {
	case ACT_PIN:
	case ACT_DROP:
		*want = on_row(p, action == ACT_PIN ? PLAN_WANT_PIN : PLAN_WANT_DROP);
		return true;
	case ACT_KEEP:
		*want = want_change(p, PLAN_WANT_KEEP);
		return true;
	case ACT_MARK:
		open_marks(p);
		return true;
	case ACT_LOST_TIME:
		ask(p, MODE_LOST_TIME);
		return true;
	case ACT_AFRESH:
		*want = want_change(p, PLAN_WANT_AFRESH);
		return true;
	case ACT_UNDO:
		*want = want_change(p, PLAN_WANT_UNDO);
		return true;
	case ACT_PLAN:
		*want = want_change(p, PLAN_WANT_WORDS);
		return true;
	case ACT_COMPARE:
		*want = want_change(p, PLAN_WANT_DRAFTS);
		return true;
	case ACT_SAVE_AS:
		ask(p, MODE_SAVE_AS);
		return true;
	default:
		return false;
	}
}
