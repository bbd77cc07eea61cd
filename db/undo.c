/* SPDX-License-Identifier: MIT
 * Undoing a change set. A row that an undo wrote says what an older revision of it said: such a row stands
 * for that revision, so that undoing one change after the other, and undoing an undo, find what they look
 * for. */
#include "db/undo_parts.h"

#include "db/change_rows.h"
#include "db/goal_rows.h"
#include "db/history.h"
#include "db/midtime_rows.h"
#include "db/plan_rows.h"
#include "db/site_rows.h"
#include "db/target_rows.h"
#include "db/telescope_rows.h"

#include <stdlib.h>
#include <string.h>

/* The tables whose rows are replaced, with their old rows. Mid-times and ephemerides hang on a mark and on a
 * pointer in one of these. */
static const struct family families[] = {
    {&target_table, "target", TARGET_FIELDS, TARGET_REMOVED, TARGET_KEY, SQL_TARGET_TOUCHED, SQL_TARGET_BY_ID,
     SQL_TARGET_AFTER, SQL_TARGET_BEFORE},
    {&alias_table, "other name", ALIAS_NAME, ALIAS_REMOVED, ALIAS_KEY, SQL_ALIAS_TOUCHED, SQL_ALIAS_BY_ID,
     SQL_ALIAS_AFTER, SQL_ALIAS_BEFORE},
    {&site_table, "site", SITE_NAME, SITE_REMOVED, SITE_KEY, SQL_SITE_TOUCHED, SQL_SITE_BY_ID, SQL_SITE_AFTER,
     SQL_SITE_BEFORE},
    {&mark_rows, "mid-time", 0, MARK_REMOVED, 0, SQL_MARK_TOUCHED, SQL_MARK_BY_ID, SQL_MARK_AFTER,
     SQL_MARK_BEFORE},
    {&telescope_rows, "telescope", TELESCOPE_NAME, TELESCOPE_REMOVED, TELESCOPE_KEY, SQL_TELESCOPE_TOUCHED,
     SQL_TELESCOPE_BY_ID, SQL_TELESCOPE_AFTER, SQL_TELESCOPE_BEFORE},
    {&allotment_rows, "allotment", ALLOTMENT_SPAN, ALLOTMENT_REMOVED, 0, SQL_ALLOTMENT_TOUCHED,
     SQL_ALLOTMENT_BY_ID, SQL_ALLOTMENT_AFTER, SQL_ALLOTMENT_BEFORE},
    {&setting_rows, "setting", SETTING_KEY, SETTING_REMOVED, 0, SQL_SETTING_TOUCHED, SQL_SETTING_BY_ID,
     SQL_SETTING_AFTER, SQL_SETTING_BEFORE},
    {&plan_rows, "plan", PLAN_DRAFT, PLAN_REMOVED, PLAN_KEY, SQL_PLAN_TOUCHED, SQL_PLAN_BY_ID, SQL_PLAN_AFTER,
     SQL_PLAN_BEFORE},
    {&plan_mark_rows, "mark", PLAN_MARK_KEY, PLAN_MARK_REMOVED, 0, SQL_PLAN_MARK_TOUCHED, SQL_PLAN_MARK_BY_ID,
     SQL_PLAN_MARK_AFTER, SQL_PLAN_MARK_BEFORE},
    {&goal_rows, "goal", GOAL_BAND, GOAL_REMOVED, 0, SQL_GOAL_TOUCHED, SQL_GOAL_BY_ID, SQL_GOAL_AFTER,
     SQL_GOAL_BEFORE},
    {&field_star_rows, "star", FIELD_STAR_NAME, FIELD_STAR_REMOVED, 0, SQL_FIELD_STAR_TOUCHED,
     SQL_FIELD_STAR_BY_ID, SQL_FIELD_STAR_AFTER, SQL_FIELD_STAR_BEFORE},
};
enum { FAMILIES = sizeof families / sizeof families[0] };

/* An old row is one cell longer: by which change it was replaced. */
static enum status find_old(const struct undoing *u, enum sql_id id, int64_t row_id, int64_t change,
			    struct row *out, struct err *e)
{
	struct table old = *u->f->table;
	const struct cell key[] = {cell_int(row_id), cell_int(change)};
	old.cells++;
	return row_find_by(u->s, id, key, 2, &old, out, e);
}

/* The revision that (rev, change) of a row stands for: itself, or what an undo brought back; 0 where that is
 * that there was no row. */
static enum status stands_for(const struct undoing *u, int64_t row_id, int64_t rev, int64_t change,
			      int64_t *out, struct err *e)
{
	for (;;) {
		struct row set, before;
		enum status st = row_find(u->s, SQL_CHANGE_BY_ID, cell_int(change), &change_table, &set, e);
		bool undo = st == ST_OK && set.cell[CHANGE_UNDOES].type == CELL_INT;
		int64_t undoes = undo ? set.cell[CHANGE_UNDOES].u.i : 0;
		row_free(&set);
		*out = rev;
		if (st == ST_ABSENT)
			return err_set(e, ST_STORE, "database: damaged: change %lld is missing",
				       (long long)change);
		if (st != ST_OK || !undo)
			return st;
		st = find_old(u, u->f->before, row_id, undoes, &before, e);
		if (st == ST_OK) {
			rev = before.cell[u->f->table->rev_at].u.i;
			change = before.cell[u->f->table->change_at].u.i;
		}
		row_free(&before);
		if (st == ST_ABSENT) {
			*out = 0;
			return ST_OK;
		}
		if (st != ST_OK)
			return st;
	}
}

/* --- one row --- */

static enum status check_unchanged(const struct undoing *u, const struct row *now, struct err *e)
{
	const struct table *t = u->f->table;
	int64_t id = now->cell[0].u.i, rev_now = 0, rev_left = 0;
	struct row left = {0};
	if (now->cell[t->change_at].u.i == u->change)
		return ST_OK;
	enum status st = find_old(u, u->f->after, id, u->change, &left, e);
	if (st == ST_ABSENT)
		st = err_set(e, ST_STORE, "database: damaged: an old row of table %s is missing", t->name);
	if (st == ST_OK)
		st = stands_for(u, id, now->cell[t->rev_at].u.i, now->cell[t->change_at].u.i, &rev_now, e);
	if (st == ST_OK)
		st = stands_for(u, id, left.cell[t->rev_at].u.i, u->change, &rev_left, e);
	if (st == ST_OK && rev_now != rev_left)
		st = undo_say_changed(u, left.cell, now->cell, e);
	row_free(&left);
	return st;
}

/* First what goes out of the lists, then what comes back, so that a name is free for whom it belonged to. */
enum pass { PASS_OUT, PASS_BACK };

/* The row as it was before the change; one that the change made is then in no list. */
static enum status find_image(const struct undoing *u, const struct row *now, struct row *before,
			      struct cell image[ROW_CELLS_MAX], struct err *e)
{
	enum status st = find_old(u, u->f->before, now->cell[0].u.i, u->change, before, e);
	if (st != ST_OK && st != ST_ABSENT)
		return st;
	memcpy(image, st == ST_OK ? before->cell : now->cell, ROW_CELLS_MAX * sizeof *image);
	if (st == ST_ABSENT)
		image[u->f->removed_at] = cell_int(1);
	return ST_OK;
}

/* Whether a listed row that stays listed has to let go of something first: its name, where two have changed
 * theirs with each other; that it is the kept plan of its night, where another comes back as that. */
static bool lets_go(const struct family *f, const struct cell *now, const struct cell *image)
{
	if (now[f->removed_at].u.i)
		return false;
	if (f->table == &plan_rows)
		return now[PLAN_KEPT].u.i && !image[PLAN_KEPT].u.i;
	return f->table == &target_table && !cells_same(&image[f->key_at], &now[f->key_at], 1);
}

static enum status put_back(const struct undoing *u, int64_t id, enum pass pass, struct err *e)
{
	const struct family *f = u->f;
	struct row now = {0}, before = {0};
	struct cell image[ROW_CELLS_MAX] = {0};
	enum status st = row_find(u->s, f->by_id, cell_int(id), f->table, &now, e);
	if (st == ST_ABSENT)
		st = err_set(e, ST_STORE, "database: damaged: row %lld of table %s is missing", (long long)id,
			     f->table->name);
	if (st == ST_OK && pass == PASS_OUT)
		st = check_unchanged(u, &now, e);
	if (st == ST_OK)
		st = find_image(u, &now, &before, image, e);
	bool out = st == ST_OK && image[f->removed_at].u.i;
	bool parked = st == ST_OK && !out && lets_go(f, now.cell, image);
	if (parked && pass == PASS_OUT) {
		memcpy(image, now.cell, sizeof image);
		image[f->removed_at] = cell_int(1);
	}
	if (st == ST_OK && pass == PASS_BACK && !out)
		st = undo_name_free(u, image, e);
	if (st == ST_OK && (out || parked) == (pass == PASS_OUT))
		st = row_replace(u->s, f->table, &now, image, e);
	row_free(&now);
	row_free(&before);
	return st;
}

static enum status touched_ids(const struct undoing *u, int64_t **ids, size_t *n, struct err *e)
{
	const struct cell key = cell_int(u->change);
	bool row = false;
	size_t room = 0;
	*ids = NULL;
	*n = 0;
	enum status st = cells_bind(u->s->stmt[u->f->touched], 1, &key, 1, e);
	while (st == ST_OK && (st = sql_step(u->s, u->f->touched, &row, e)) == ST_OK && row) {
		if (*n == room) {
			room = room ? 2 * room : 64;
			int64_t *larger = realloc(*ids, room * sizeof *larger);
			if (!larger) {
				st = err_set(e, ST_MEMORY, "database: no memory");
				break;
			}
			*ids = larger;
		}
		(*ids)[(*n)++] = sqlite3_column_int64(u->s->stmt[u->f->touched], 0);
	}
	sql_reset(u->s, u->f->touched);
	return st;
}

/* --- the whole --- */

static enum status choose(struct store *s, int64_t wanted, int64_t *change, struct err *e)
{
	struct change_link *links = NULL;
	size_t n = 0, i = 0;
	enum status st = change_links(s, &links, &n, e);
	if (st != ST_OK)
		return st;
	while (i < n && (wanted ? links[i].id != wanted : links[i].undoes != 0 || links[i].undone))
		i++;
	if (i < n && links[i].undone)
		st = err_set(e, ST_ABSENT, "change %lld was undone already", (long long)wanted);
	else if (i < n)
		*change = links[i].id;
	else if (wanted)
		st = err_set(e, ST_ABSENT, "there is no change %lld", (long long)wanted);
	else
		st = err_set(e, ST_ABSENT, "there is nothing to undo");
	free(links);
	return st;
}

static enum status undo_family(const struct undoing *u, enum pass pass, struct err *e)
{
	int64_t *ids;
	size_t n;
	enum status st = touched_ids(u, &ids, &n, e);
	for (size_t i = 0; st == ST_OK && i < n; i++)
		st = put_back(u, ids[i], pass, e);
	free(ids);
	return st;
}

static enum status undo_rows(struct store *s, int64_t change, struct err *e)
{
	/* a change set also where no row has to come back: a version beside the current one */
	enum status st = change_needed(s, e);
	for (int pass = PASS_OUT; pass <= PASS_BACK; pass++)
		for (size_t k = 0; st == ST_OK && k < FAMILIES; k++) {
			const struct undoing u = {.s = s, .change = change, .f = &families[k]};
			st = undo_family(&u, (enum pass)pass, e);
		}
	return st;
}

enum status history_undo(struct store *s, int64_t change_id, const struct change *c, int64_t *undone_id,
			 struct err *e)
{
	int64_t change = 0;
	enum status st = store_begin(s, c, e);
	if (st != ST_OK)
		return st;
	st = choose(s, change_id, &change, e);
	s->undoes = change;
	if (st == ST_OK)
		st = undo_rows(s, change, e);
	if (st == ST_OK)
		st = store_commit(s, e);
	else
		store_rollback(s);
	if (st == ST_OK)
		*undone_id = change;
	return st;
}
