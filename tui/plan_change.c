/* SPDX-License-Identifier: MIT */
#include "tui/plan_change.h"

#include "db/history.h"
#include "db/plans.h"
#include "tui/run_write.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* While it lasts the run's store is one that can be written. */
struct writing {
	struct store *own, *file;
};

static enum status writing_begin(struct writing *w, struct run *r, struct err *e)
{
	w->own = r->store;
	enum status s = run_write_open(r, &w->file, e);
	if (s == ST_OK)
		r->store = w->file;
	return s;
}

static void writing_end(struct writing *w, struct run *r)
{
	r->store = w->own;
	run_write_close(r, w->file);
}

/* The draft of the night that is kept now, "" none. */
static void kept_now(struct run *r, int32_t mjd, char out[PLAN_DRAFT_BYTES])
{
	struct plan_row row;
	out[0] = '\0';
	if (plan_find(r->store, r->site.id, r->telescope.id, mjd, NULL, &row, NULL) != ST_OK)
		return;
	snprintf(out, PLAN_DRAFT_BYTES, "%s", row.draft);
	plan_row_free(&row);
}

static void say_stored(const struct plan_view *v, bool keep, const char *before, int edition,
		       char said[static PLAN_SAID_BYTES])
{
	char instead[PLAN_DRAFT_BYTES + 24] = "";
	if (keep && before[0] && strcmp(before, v->draft) != 0)
		snprintf(instead, sizeof instead, " instead of %s", before);
	else if (keep && before[0] && v->edition > edition && edition > 0)
		snprintf(instead, sizeof instead, " instead of edition %d", edition);
	snprintf(said, PLAN_SAID_BYTES, "%s: draft %s, edition %d%s, %zu item%s; u takes it back.",
		 keep ? "Kept" : "Stored", v->draft, v->edition, instead, v->n_items,
		 v->n_items == 1 ? "" : "s");
}

enum status plan_store_now(struct run *r, struct plan_view *v, const char *draft, bool keep,
			   char said[static PLAN_SAID_BYTES], struct err *e)
{
	struct writing w;
	char before[PLAN_DRAFT_BYTES];
	const int edition = v->edition;
	enum status s = writing_begin(&w, r, e);
	if (s != ST_OK)
		return s;
	kept_now(r, v->night->night.mjd, before);
	s = plan_save(r, v, draft, keep, e);
	writing_end(&w, r);
	if (s == ST_OK)
		say_stored(v, keep, before, edition, said);
	return s;
}

enum status plan_mark_now(struct run *r, const struct plan_view *v, const char *target, enum plan_state state,
			  const char *cause, const char *note, char said[static PLAN_SAID_BYTES],
			  struct err *e)
{
	struct writing w;
	enum status s = writing_begin(&w, r, e);
	if (s != ST_OK)
		return s;
	s = plan_mark_item(r, v, target, state, cause, note, e);
	writing_end(&w, r);
	if (s == ST_OK)
		snprintf(said, PLAN_SAID_BYTES, "%.120s: %s; stored, u takes it back.", target,
			 state >= PLAN_STARTED && state < PLAN_STATE_COUNT ? plan_state_words[state]
									   : "no mark");
	return s;
}

static bool is_plan_change(const struct change_row *row)
{
	static const char *const verbs[] = {"plan keep", "plan save", "plan mark", "plan remove"};
	for (size_t i = 0; i < sizeof verbs / sizeof verbs[0]; i++)
		if (strcmp(row->verb, verbs[i]) == 0)
			return !row->undone;
	return false;
}

enum status plan_undo_now(struct run *r, char said[static PLAN_SAID_BYTES], struct err *e)
{
	struct store *store;
	struct change_row *row = NULL;
	char utc[UTC_TEXT_MAX];
	size_t n = 0, at = 0;
	int64_t undone;
	utc_text(&r->leap, wall_now(&r->wall), 0, utc);
	const struct change change = {.utc = utc, .who = r->env->user, .verb = "undo"};
	enum status s = run_write_open(r, &store, e);
	if (s != ST_OK)
		return s;
	s = history_list(store, 0, &row, &n, e);
	while (s == ST_OK && at < n && !is_plan_change(&row[at]))
		at++;
	if (s == ST_OK)
		s = at < n ? history_undo(store, row[at].id, &change, &undone, e)
			   : err_set(e, ST_ABSENT, "no change of a plan that could be taken back");
	if (s == ST_OK)
		snprintf(said, PLAN_SAID_BYTES, "Taken back: change %lld, %.40s (%.100s).", (long long)undone,
			 row[at].verb, row[at].what);
	free(row);
	run_write_close(r, store);
	return s;
}

enum status plan_drafts_of(struct run *r, int32_t evening_mjd, struct plan_drafts *out, struct err *e)
{
	struct plan_list list = {.n = 0};
	*out = (struct plan_drafts){.n = 0};
	if (!r->store || r->site.id == 0)
		return ST_OK;
	enum status s = plans_list(r->store, r->site.id, evening_mjd, evening_mjd, &list, e);
	for (size_t i = 0; s == ST_OK && i < list.n && out->n < PLAN_DRAFTS_MAX; i++) {
		const struct plan_row *p = &list.plan[i];
		if (p->telescope_id != r->telescope.id)
			continue;
		snprintf(out->draft[out->n].name, PLAN_DRAFT_BYTES, "%s", p->draft);
		out->draft[out->n].kept = p->kept;
		out->draft[out->n].edition = p->edition;
		out->draft[out->n].worth = p->worth;
		out->n++;
	}
	plan_list_free(&list);
	return s;
}
