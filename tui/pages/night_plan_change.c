/* SPDX-License-Identifier: MIT
 * Changing the plan of the night page: shown at once and stored when it is kept; marks are stored at once. */
#include "tui/pages/night_page.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

void plan_compare_free(struct plan_compare *c)
{
	for (size_t i = 0; i < c->n; i++)
		free(c->line[i]);
	free(c->line);
	*c = (struct plan_compare){.there = false};
}

static struct edit_night night_of(const struct night_page *p)
{
	return page_plan_night(p->run, p->view.night.mjd);
}

/* --- edits --- */

/* Adds an edit, or, where it only takes the newest one back, takes that one away. */
static enum status add_edit(struct plan_edits *edits, const struct plan_edit *edit, struct err *e)
{
	struct plan_edit newest;
	if (edit->kind == EDIT_EVENT && edit->is == edit->was &&
	    plan_edits_pop(edits, &edit->night, &newest)) {
		const bool same = newest.kind == EDIT_EVENT && strcmp(newest.text, edit->text) == 0;
		if (same && !plan_edits_event(edits, &edit->night, edit->text, NULL))
			return ST_OK;
		enum status s = plan_edits_add(edits, &newest, e);
		if (s != ST_OK)
			return s;
	}
	return plan_edits_add(edits, edit, e);
}

/* Changes that only tell what was asked for; what follows from it is the news. */
static bool is_the_wish(const char *line)
{
	const char *end = strrchr(line, ':');
	return strncmp(line, "lost time:", strlen("lost time:")) == 0 ||
	       (end && (strcmp(end, ": pinned") == 0 || strcmp(end, ": planned") == 0));
}

/* `Dropped Tern 5 b (K keeps, u takes back). Tern 9 b: new, ... (+1: v)` */
static void say_changes(struct night_page *p, const char *what, const struct made_plan *before)
{
	char text[MESSAGE_BYTES], more[32] = "";
	char **line = NULL;
	size_t n = 0, first = 0;
	struct err e;
	if (!before || plan_changes(&before->view, &p->plan.made->view, &line, &n, &e) != ST_OK)
		n = 0;
	while (first < n && is_the_wish(line[first]))
		first++;
	if (first < n && n > 1)
		snprintf(more, sizeof more, " (+%zu: v)", n - 1);
	snprintf(text, sizeof text, "%.150s%s. %.280s%s", what,
		 p->plan.changed	     ? "; K keeps, u undoes"
		 : p->plan.made->view.stored ? "; as it is stored"
					     : "",
		 first < n ? line[first] : "The order stays.", more);
	for (size_t i = 0; i < n; i++)
		free(line[i]);
	free(line);
	night_page_say(p, ROLE_GOOD, text);
}

/* Works the plan out with an edit more; without it again where that fails. */
static void apply(struct night_page *p, struct run *run, const struct plan_edit *edit, const char *what)
{
	struct plan_edits *edits = &p->plan.edits;
	struct made_plan *before = NULL;
	struct plan_edit failed;
	struct err e;
	const size_t n = edits->n;
	enum status s = add_edit(edits, edit, &e);
	if (s == ST_OK) {
		s = page_plan_load(&p->plan, run, edit->night.mjd, &before, NULL, 0, &e);
		if (s != ST_OK && edits->n > n)
			plan_edits_pop(edits, &edit->night, &failed);
	}
	if (s != ST_OK) {
		night_page_say(p, ROLE_BAD, e.text);
		return;
	}
	night_page_show_plan(p);
	say_changes(p, what, before);
	page_plan_made_free(before);
}

static void choose_event(struct night_page *p, struct run *run, enum event_choice wanted)
{
	static const char *const words[][2] = {[CHOSEN_PINNED] = {"Pinned", "No longer pinned"},
					       [CHOSEN_DROPPED] = {"Dropped", "No longer dropped"}};
	const struct night_row *row = night_page_selected(p);
	struct plan_edit edit = {.night = night_of(p), .kind = EDIT_EVENT};
	char what[NAME_BYTES_MAX + 40];
	const char *text;
	bool afresh;
	if (!row || !p->plan.made)
		return;
	const enum event_choice now = page_plan_choice(&p->plan.made->view, row, &text);
	page_plan_event(row, edit.text);
	const struct plan_edit *prior = plan_edits_event(&p->plan.edits, &edit.night, edit.text, &afresh);
	if (prior) {
		edit.was = prior->was;
		memcpy(edit.stored, prior->stored, sizeof edit.stored);
	} else if (!afresh && text) {
		edit.was = now;
		snprintf(edit.stored, sizeof edit.stored, "%s", text);
	}
	edit.is = now == wanted ? CHOSEN_NOT : wanted;
	snprintf(what, sizeof what, "%s: %s", words[wanted][now == wanted], row->name);
	apply(p, run, &edit, what);
}

static void lose_time(struct night_page *p, struct run *run)
{
	struct plan_edit edit = {.night = night_of(p), .kind = EDIT_LOST};
	char what[EDIT_TEXT_BYTES + 32];
	if (strlen(p->asked) >= sizeof edit.text) {
		night_page_say(p, ROLE_BAD, "That is too long for a span.");
		return;
	}
	snprintf(edit.text, sizeof edit.text, "%s", p->asked);
	snprintf(what, sizeof what, "Lost time %.100s", p->asked);
	apply(p, run, &edit, what);
}

static void plan_afresh(struct night_page *p, struct run *run)
{
	const struct plan_edit edit = {.night = night_of(p), .kind = EDIT_AFRESH};
	apply(p, run, &edit, "Planned afresh");
}

/* --- what is stored --- */

static bool keep(struct night_page *p, struct run *run, const char *draft, bool kept)
{
	char said[PLAN_SAID_BYTES];
	struct plan_view *v = &p->plan.made->view;
	const struct edit_night night = night_of(p);
	struct err e;
	if (kept && v->stored && v->kept) {
		night_page_say(p, ROLE_TEXT, "The plan is kept as it is shown.");
		return false;
	}
	enum status s = plan_store_now(run, v, draft, kept, said, &e);
	if (s == ST_OK && kept)
		plan_edits_clear(&p->plan.edits, &night);
	night_page_say(p, s == ST_OK ? ROLE_GOOD : ROLE_BAD, s == ST_OK ? said : e.text);
	return s == ST_OK;
}

/* The draft that was compared with. */
static bool keep_other(struct night_page *p, struct run *run)
{
	char said[PLAN_SAID_BYTES];
	struct made_plan *other;
	struct err e;
	const struct edit_night night = night_of(p);
	if (!p->asked[0]) {
		night_page_say(p, ROLE_WARN, "That is no draft; x plans afresh, K then keeps it.");
		return false;
	}
	if (plan_edits_of(&p->plan.edits, &night) > 0) {
		night_page_say(
		    p, ROLE_WARN,
		    "The shown plan has changes that are not stored: K keeps them, u takes them back.");
		return false;
	}
	enum status s = page_plan_other(run, p->view.night.mjd, p->asked, false, &other, &e);
	if (s == ST_OK) {
		s = plan_store_now(run, &other->view, p->asked, true, said, &e);
		page_plan_made_free(other);
	}
	night_page_say(p, s == ST_OK ? ROLE_GOOD : ROLE_BAD, s == ST_OK ? said : e.text);
	return s == ST_OK;
}

static bool mark(struct night_page *p, struct run *run)
{
	char said[PLAN_SAID_BYTES];
	struct made_plan *stored = NULL;
	const struct plan_view *v = &p->plan.made->view;
	struct err e;
	enum status s = ST_OK;
	if (!v->stored) { /* changed since: the mark goes to what is stored */
		s = page_plan_other(run, p->view.night.mjd, NULL, false, &stored, &e);
		v = stored ? &stored->view : v;
	}
	if (s == ST_OK)
		s = plan_mark_now(run, v, p->mark.event, p->mark.state, p->mark.cause, p->mark.note, said,
				  &e);
	page_plan_made_free(stored);
	night_page_say(p, s == ST_OK ? ROLE_GOOD : ROLE_BAD, s == ST_OK ? said : e.text);
	return s == ST_OK;
}

static void say_edit_undone(struct night_page *p, const struct plan_edit *edit,
			    const struct made_plan *before)
{
	char what[EDIT_TEXT_BYTES + 48];
	if (edit->kind == EDIT_AFRESH)
		snprintf(what, sizeof what, "Taken back: plan afresh");
	else if (edit->kind == EDIT_LOST)
		snprintf(what, sizeof what, "Taken back: lost time %s", edit->text);
	else
		snprintf(what, sizeof what, "Taken back: %s %s",
			 edit->is == CHOSEN_PINNED    ? "pin of"
			 : edit->is == CHOSEN_DROPPED ? "drop of"
						      : "letting go of",
			 edit->text);
	say_changes(p, what, before);
}

/* The newest edit, else the newest stored change. */
static bool undo(struct night_page *p, struct run *run)
{
	const struct edit_night night = night_of(p);
	struct plan_edit edit;
	struct made_plan *before = NULL;
	char said[PLAN_SAID_BYTES], fault[MESSAGE_BYTES] = "";
	struct err e;
	if (plan_edits_pop(&p->plan.edits, &night, &edit)) {
		enum status s = page_plan_load(&p->plan, run, night.mjd, &before, fault, sizeof fault, &e);
		if (s == ST_OK) {
			night_page_show_plan(p);
			say_edit_undone(p, &edit, before);
		}
		if (s != ST_OK || fault[0])
			night_page_say(p, ROLE_BAD, s == ST_OK ? fault : e.text);
		page_plan_made_free(before);
		return false;
	}
	enum status s = plan_undo_now(run, said, &e);
	night_page_say(p, s == ST_OK ? ROLE_GOOD : ROLE_BAD, s == ST_OK ? said : e.text);
	return s == ST_OK;
}

/* --- what is only shown --- */

static void title_of(const struct plan_view *v, const char *name, char out[PLAN_LINE_BYTES])
{
	snprintf(out, PLAN_LINE_BYTES, "%.100s: %zu item%s, worth %.2f of at most %.2f", name, v->n_items,
		 v->n_items == 1 ? "" : "s", v->worth, v->bound);
}

static void name_of(const struct page_plan *plan, char *out, size_t n)
{
	const struct plan_view *v = &plan->made->view;
	if (plan->changed)
		snprintf(out, n, "The plan as it is shown, not stored");
	else if (v->stored)
		snprintf(out, n, "%.60s%s, edition %d", v->draft, v->kept ? ", kept" : "", v->edition);
	else
		snprintf(out, n, "The proposal");
}

static void show_words(struct night_page *p, struct run *run)
{
	struct made_plan *stored = NULL;
	const struct plan_view *v = &p->plan.made->view;
	struct err e;
	plan_compare_free(&p->compare);
	if (!v->stored && v->edition > 0) {
		enum status s = page_plan_other(run, p->view.night.mjd, NULL, false, &stored, &e);
		if (s == ST_OK)
			s = plan_changes(&stored->view, v, &p->compare.line, &p->compare.n, &e);
		p->compare.there = s == ST_OK;
		if (stored)
			snprintf(p->compare.title[0], PLAN_LINE_BYTES, "draft %.80s, edition %d",
				 stored->view.draft, stored->view.edition);
		page_plan_made_free(stored);
		if (s != ST_OK)
			night_page_say(p, ROLE_BAD, e.text);
	}
	p->mode = MODE_PLAN;
	night_page_make_text(p);
}

static void show_drafts(struct night_page *p, struct run *run)
{
	struct err e;
	if (plan_drafts_of(run, p->view.night.mjd, &p->drafts, &e) != ST_OK) {
		night_page_say(p, ROLE_BAD, e.text);
		return;
	}
	p->mode = MODE_DRAFTS;
	p->choice = 0;
	night_page_make_text(p);
	night_page_show_choice(p);
}

static void compare(struct night_page *p, struct run *run)
{
	struct made_plan *other = NULL;
	char name[120];
	struct err e;
	const bool afresh = !p->asked[0];
	plan_compare_free(&p->compare);
	enum status s = page_plan_other(run, p->view.night.mjd, afresh ? NULL : p->asked, afresh, &other, &e);
	if (s == ST_OK)
		s = plan_changes(&p->plan.made->view, &other->view, &p->compare.line, &p->compare.n, &e);
	if (s == ST_OK) {
		name_of(&p->plan, name, sizeof name);
		title_of(&p->plan.made->view, name, p->compare.title[0]);
		snprintf(name, sizeof name, "%.60s%s", afresh ? "Planned afresh" : p->asked,
			 other->view.kept ? ", kept" : "");
		title_of(&other->view, name, p->compare.title[1]);
		p->compare.there = true;
		p->mode = MODE_COMPARE;
		night_page_make_text(p);
	} else
		night_page_say(p, ROLE_BAD, e.text);
	page_plan_made_free(other);
}

/* --- all of them --- */

/* What is stored or marked was seen before; true when the plan is there and was. */
static bool seen(struct night_page *p, struct run *run, enum plan_want wanted)
{
	const bool waited = p->plan.waits, blind = wanted == PLAN_WANT_KEEP || wanted == PLAN_WANT_MARK ||
						   wanted == PLAN_WANT_SAVE_AS;
	if (waited)
		night_page_work(p, run);
	if (!p->plan.made) {
		if (!p->message[0])
			night_page_say(p, ROLE_BAD, "There is no plan of this night.");
		return false;
	}
	if (waited && blind)
		night_page_say(p, ROLE_WARN, "The plan was only worked out now: look at it first.");
	return !(waited && blind);
}

static bool serve(struct night_page *p, struct run *run, enum plan_want wanted)
{
	switch (wanted) {
	case PLAN_WANT_PIN:
	case PLAN_WANT_DROP:
		choose_event(p, run, wanted == PLAN_WANT_PIN ? CHOSEN_PINNED : CHOSEN_DROPPED);
		break;
	case PLAN_WANT_LOST_TIME:
		lose_time(p, run);
		break;
	case PLAN_WANT_AFRESH:
		plan_afresh(p, run);
		break;
	case PLAN_WANT_KEEP:
		return keep(p, run, NULL, true);
	case PLAN_WANT_SAVE_AS:
		return keep(p, run, p->asked, false);
	case PLAN_WANT_KEEP_OTHER:
		return keep_other(p, run);
	case PLAN_WANT_MARK:
		return mark(p, run);
	case PLAN_WANT_UNDO:
		return undo(p, run);
	case PLAN_WANT_WORDS:
		show_words(p, run);
		break;
	case PLAN_WANT_DRAFTS:
		show_drafts(p, run);
		break;
	case PLAN_WANT_COMPARE:
		compare(p, run);
		break;
	case PLAN_WANT_NOTHING:
		break;
	}
	return false;
}

bool night_page_change(struct night_page *p, struct run *run)
{
	const enum plan_want wanted = p->wanted;
	p->wanted = PLAN_WANT_NOTHING;
	p->select_current = false; /* the row stays selected whatever comes next then */
	return p->loaded && seen(p, run, wanted) && serve(p, run, wanted);
}
