/* SPDX-License-Identifier: MIT
 * Storing a plan and marking its items, each in a change set of its own. */
#include "tui/plan_parts.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const char main_draft[] = "main";

/* --- a view as a row; texts are the view's --- */

static const char *instant(struct plan_view *v, struct utc t)
{
	char text[UTC_TEXT_MAX];
	utc_text(&v->run->leap, t, 0, text);
	return plan_copy(v, text);
}

static void item_row(struct plan_view *v, const struct plan_item_view *item, struct plan_item_row *row)
{
	*row = (struct plan_item_row){
	    .key = item->key,
	    .slew_by_utc = instant(v, item->slew_by),
	    .start_utc = instant(v, item->start),
	    .latest_start_utc = item->has_latest ? instant(v, item->latest_start) : "",
	    .end_utc = instant(v, item->end),
	    .worth = item->worth,
	    .n = item->n,
	    .window = plan_alloc(v, item->n, sizeof *row->window),
	    .state = "",
	    .cause = "",
	    .note = "",
	    .marked_utc = "",
	};
	for (size_t i = 0; row->window && i < item->n; i++) {
		const struct plan_member_view *m = &item->member[i];
		row->window[i] = (struct plan_window_row){.target_id = m->target_id,
							  .ephemeris_id = m->ephemeris_id,
							  .target = m->target,
							  .kind = m->kind,
							  .epoch = m->epoch,
							  .variant = m->variant,
							  .worth = m->worth,
							  .figures = member_text(v, m)};
	}
}

static enum status row_of(struct plan_view *v, const char *draft, struct plan_row *row, struct err *e)
{
	const struct run *r = v->run;
	const struct plan_choices *c = plan_choices_of(v);
	if (!c)
		return plan_memory(v, e);
	*row = (struct plan_row){
	    .site_id = r->site.id,
	    .telescope_id = plan_telescope_id(r),
	    .night_mjd = v->night->night.mjd,
	    .draft = draft,
	    .stored_utc = "",
	    .who = "",
	    .limits = v->limits,
	    .leap_date = v->leap_date,
	    .worth = v->worth,
	    .bound = v->bound,
	    .optimal = v->optimal,
	    .choices = choices_text(v, c),
	    .left_out = left_text(v),
	    .n = v->n_items,
	    .item = plan_alloc(v, v->n_items, sizeof *row->item),
	};
	for (size_t i = 0; row->item && i < v->n_items; i++)
		item_row(v, &v->item[i], &row->item[i]);
	return plan_memory(v, e);
}

/* --- storing --- */

static struct change change_now(const struct run *r, const char *verb, char utc[UTC_TEXT_MAX])
{
	utc_text(&r->leap, wall_now(&r->wall), 0, utc);
	return (struct change){.utc = utc, .who = r->env->user, .verb = verb};
}

static bool was_reopened(const struct plan_view *v, const char *key)
{
	const struct plan_choices *c = plan_choices_of(v);
	for (size_t i = 0; c && i < c->n_reopened; i++)
		if (strcmp(c->reopened[i], key) == 0)
			return true;
	return false;
}

/* What became of items is kept by plan: a draft of its own, or what was only proposed so far, gets its marks
 * now. */
static enum status put_marks(const struct plan_view *v, struct store *s, int64_t plan_id, bool other_plan,
			     const char *utc, struct err *e)
{
	enum status st = ST_OK;
	for (size_t i = 0; st == ST_OK && i < v->n_items; i++) {
		const struct plan_item_view *item = &v->item[i];
		const bool mark = item->state >= PLAN_STARTED;
		if (mark ? item->marked_utc[0] && !other_plan : other_plan || !was_reopened(v, item->key))
			continue;
		if (!mark) {
			st = plan_mark(s, plan_id, item->key, "", "", "", "", e);
			continue;
		}
		st = plan_mark(s, plan_id, item->key, plan_state_words[item->state], item->cause, item->note,
			       item->marked_utc[0] ? item->marked_utc : utc, e);
	}
	return st;
}

/* Which edition of the draft the caller saw: of another draft than the view's own, the one there now. */
static enum status based_on(const struct plan_view *v, const char *draft, int *edition, int64_t *id,
			    struct err *e)
{
	struct plan_row row;
	*edition = v->edition;
	*id = v->plan_id;
	if (v->draft[0] && strcmp(v->draft, draft) == 0)
		return ST_OK;
	*edition = 0;
	*id = 0;
	enum status s = plan_find(v->run->store, v->run->site.id, plan_telescope_id(v->run),
				  v->night->night.mjd, draft, &row, e);
	if (s == ST_ABSENT)
		return ST_OK;
	if (s == ST_OK) {
		*edition = row.edition;
		*id = row.id;
		plan_row_free(&row);
	}
	return s;
}

static enum status can_store(const struct plan_view *v, const char *draft, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	if (!v->run->store)
		return err_set(e, ST_STORE, "no database is open");
	if (v->run->site.id == 0)
		return err_set(e, ST_ABSENT,
			       "a plan is kept for a stored site (wane site add), not for a place");
	size_t bad_at;
	struct err why;
	if (name_check(draft, strlen(draft), &bad_at, &why) != ST_OK) {
		err_quote(draft, strlen(draft), got);
		return err_set(e, ST_SYNTAX, "no name for a draft (got \"%s\", expected 1 to 40 characters)",
			       got);
	}
	return ST_OK;
}

static enum status store_row(struct plan_view *v, const struct plan_row *row, bool keep, const char *utc,
			     struct err *e)
{
	struct store *s = v->run->store;
	int edition = 0;
	int64_t seen_id = 0, id = 0;
	enum status st = based_on(v, row->draft, &edition, &seen_id, e);
	if (st == ST_OK)
		st = plan_store(s, row, keep, edition, &id, &edition, e);
	if (st == ST_OK)
		st = put_marks(v, s, id, id != v->plan_id, utc, e);
	if (st == ST_OK)
		st = store_commit(s, e);
	if (st != ST_OK)
		return st;
	v->draft = plan_copy(v, row->draft);
	v->stored = true;
	v->kept = keep || (v->kept && id == v->plan_id);
	v->plan_id = id;
	v->edition = edition;
	v->stored_utc = plan_copy(v, utc);
	v->who = plan_copy(v, v->run->env->user);
	return ST_OK;
}

enum status plan_save(struct run *r, struct plan_view *v, const char *draft, bool keep, struct err *e)
{
	const char *name = draft && draft[0] ? draft : v->draft[0] ? v->draft : main_draft;
	char utc[UTC_TEXT_MAX];
	const struct change change = change_now(r, keep ? "plan keep" : "plan save", utc);
	struct plan_row row = {.draft = ""};
	enum status s = can_store(v, name, e);
	if (s != ST_OK)
		return s;
	const bool same = v->stored && strcmp(v->draft, name) == 0;
	if (same && (!keep || v->kept))
		return ST_OK;
	if (!same)
		s = row_of(v, name, &row, e);
	if (s == ST_OK)
		s = store_begin(r->store, &change, e);
	if (s != ST_OK)
		return s;
	if (same) {
		s = plan_keep(r->store, v->plan_id, e);
		if (s == ST_OK)
			s = store_commit(r->store, e);
		v->kept = v->kept || s == ST_OK;
	} else
		s = store_row(v, &row, keep, utc, e);
	if (s != ST_OK)
		store_rollback(r->store);
	return s;
}

/* --- marks --- */

static bool holds(const struct plan_item_view *item, const struct event_name *name, const char *text)
{
	for (size_t i = 0; i < item->n; i++) {
		const struct plan_member_view *m = &item->member[i];
		/* a target that was removed goes by the name that it had, without the epoch behind it */
		const char *at = name->one ? strrchr(text, '@') : NULL;
		const size_t n = at ? (size_t)(at - text) : strlen(text);
		const bool same = name->target ? name->target->id == m->target_id
					       : strlen(m->target) == n && strncmp(text, m->target, n) == 0;
		if (same && (!name->one || name->epoch == m->epoch))
			return true;
	}
	return false;
}

static enum status find_item(const struct plan_view *v, const char *target, const struct plan_item_view **out,
			     struct err *e)
{
	struct event_name name = {.target = NULL};
	char got[ERR_QUOTE_MAX];
	const bool known = event_name_find(v->run, target, &name, e) == ST_OK;
	*out = NULL;
	err_quote(target, strlen(target), got);
	for (size_t i = 0; i < v->n_items; i++) {
		if (!holds(&v->item[i], &name, target))
			continue;
		if (*out)
			return err_set(e, ST_CONFLICT,
				       "several items of the plan hold it (got \"%s\", expected NAME@EPOCH)",
				       got);
		*out = &v->item[i];
	}
	if (*out)
		return ST_OK;
	return known ? err_set(e, ST_ABSENT, "no item of the plan holds it (got \"%s\")", got) : e->status;
}

enum status plan_mark_item(struct run *r, const struct plan_view *v, const char *target,
			   enum plan_state state, const char *cause, const char *note, struct err *e)
{
	const struct plan_item_view *item = NULL;
	char utc[UTC_TEXT_MAX];
	const struct change change = change_now(r, "plan mark", utc);
	const bool mark = state >= PLAN_STARTED;
	if (!v->stored)
		return err_set(e, ST_ABSENT,
			       "there is no stored plan to mark (wane plan DATE --keep stores one)");
	enum status s = find_item(v, target, &item, e);
	if (s == ST_OK)
		s = store_begin(r->store, &change, e);
	if (s != ST_OK || !item)
		return s;
	s = plan_mark(r->store, v->plan_id, item->key, mark ? plan_state_words[state] : "",
		      cause ? cause : "", note ? note : "", mark ? utc : "", e);
	return store_end(r->store, s, e);
}
