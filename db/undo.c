/* SPDX-License-Identifier: MIT
 * Undoing a change set. A row that an undo wrote says what an older revision of it said: such a row stands
 * for that revision, so that undoing one change after the other, and undoing an undo, find what they look
 * for. */
#include "db/history.h"

#include "db/change_rows.h"
#include "db/goal_rows.h"
#include "db/midtime_rows.h"
#include "db/plan_rows.h"
#include "db/site_rows.h"
#include "db/target_rows.h"
#include "db/telescope_rows.h"
#include "ephem/number_text.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* The tables whose rows are replaced, with their old rows. Mid-times and ephemerides hang on a mark and on a
 * pointer in one of these. */
static const struct family {
	const struct table *table;
	const char *what;	   /* in words */
	size_t title_at;	   /* the text that names a row */
	size_t removed_at, key_at; /* key_at: a name folded; 0 none */
	enum sql_id touched, by_id, after, before;
} families[] = {
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

struct undoing {
	struct store *s;
	int64_t change; /* to be undone */
	const struct family *f;
};

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

/* --- why not --- */

static void midtime_title(const struct undoing *u, const struct cell *cell, char *out, size_t size)
{
	char quoted[ERR_QUOTE_MAX];
	struct row midtime, target;
	snprintf(out, size, "mid-time %lld", (long long)cell[0].u.i);
	if (row_find(u->s, SQL_MIDTIME_BY_ID, cell[0], &midtime_rows, &midtime, NULL) == ST_OK) {
		if (row_find(u->s, SQL_TARGET_BY_ID, midtime.cell[MIDTIME_TARGET], &target_table, &target,
			     NULL) == ST_OK) {
			const struct cell *name = &target.cell[TARGET_FIELDS];
			err_quote(name->u.text, (size_t)name->length, quoted);
			snprintf(out, size, "mid-time %.20s of %s, epoch %lld",
				 midtime.cell[MIDTIME_TEXT].u.text, quoted,
				 (long long)midtime.cell[MIDTIME_EPOCH].u.i);
		}
		row_free(&target);
	}
	row_free(&midtime);
}

static void mark_title(const struct undoing *u, const struct cell *cell, const char *key, char *out,
		       size_t size)
{
	struct row plan;
	char title[PLAN_TITLE_MAX] = "a plan";
	if (row_find(u->s, SQL_PLAN_BY_ID, cell[PLAN_MARK_PLAN], &plan_rows, &plan, NULL) == ST_OK)
		plan_title(plan.cell[PLAN_NIGHT].u.i, plan.cell[PLAN_DRAFT].u.text, title);
	row_free(&plan);
	snprintf(out, size, "mark of %.55s in %.90s", key, title);
}

/* A goal or a star by its target's name. */
static void of_target_title(const struct undoing *u, const struct cell *target_id, const char *what,
			    const char *behind, char *out, size_t size)
{
	char quoted[ERR_QUOTE_MAX] = "a target";
	struct row target;
	if (row_find(u->s, SQL_TARGET_BY_ID, *target_id, &target_table, &target, NULL) == ST_OK)
		err_quote(target.cell[TARGET_FIELDS].u.text, (size_t)target.cell[TARGET_FIELDS].length,
			  quoted);
	row_free(&target);
	snprintf(out, size, "%s of %s%s%s", what, quoted, *behind ? ", " : "", behind);
}

static void row_title(const struct undoing *u, const struct cell *cell, char *out, size_t size)
{
	char quoted[ERR_QUOTE_MAX], first[NIGHT_TEXT_MAX], last[NIGHT_TEXT_MAX];
	const struct cell *name = &cell[u->f->title_at];
	if (u->f->table == &mark_rows) {
		midtime_title(u, cell, out, size);
		return;
	}
	err_quote(name->u.text, (size_t)name->length, quoted);
	if (u->f->table == &allotment_rows) {
		night_date_text(cell[ALLOTMENT_FIRST].u.i, first);
		night_date_text(cell[ALLOTMENT_LAST].u.i, last);
		snprintf(out, size, "allotment of %s..%s, %s", first, last, quoted);
	} else if (u->f->table == &plan_rows) {
		char title[PLAN_TITLE_MAX];
		plan_title(cell[PLAN_NIGHT].u.i, name->u.text, title);
		snprintf(out, size, "%s", title);
	} else if (u->f->table == &plan_mark_rows) {
		mark_title(u, cell, quoted, out, size);
	} else if (u->f->table == &goal_rows) {
		of_target_title(u, &cell[GOAL_TARGET], "goal", quoted, out, size);
	} else if (u->f->table == &field_star_rows) {
		of_target_title(u, &cell[FIELD_STAR_TARGET], cell[FIELD_STAR_ROLE].u.text, quoted, out, size);
	} else {
		snprintf(out, size, "%s %s", u->f->what, quoted);
	}
}

static void value_text(const struct undoing *u, size_t at, const struct cell *c, char out[ERR_QUOTE_MAX])
{
	struct row ephemeris;
	if (at == u->f->removed_at) {
		snprintf(out, ERR_QUOTE_MAX, "%s", c->u.i ? "removed" : "listed");
	} else if (u->f->table == &target_table && at == TARGET_EPHEMERIS && c->type == CELL_INT) {
		bool found =
		    row_find(u->s, SQL_EPHEMERIS_BY_ID, *c, &ephemeris_table, &ephemeris, NULL) == ST_OK;
		snprintf(out, ERR_QUOTE_MAX, "version %lld",
			 (long long)(found ? ephemeris.cell[EPHEMERIS_VERSION].u.i : 0));
		row_free(&ephemeris);
	} else if (u->f->table == &plan_rows && at == PLAN_KEPT) {
		snprintf(out, ERR_QUOTE_MAX, "%s", c->u.i ? "kept" : "not kept");
	} else if (c->type == CELL_TEXT) {
		err_quote(c->u.text, (size_t)c->length, out);
	} else if (c->type == CELL_NULL) {
		snprintf(out, ERR_QUOTE_MAX, "none");
	} else {
		char number[NUMBER_TEXT_MAX];
		number_text(cell_number(c), number);
		snprintf(out, ERR_QUOTE_MAX, "%s", number);
	}
}

/* Names the first value that differs between the row as the change left it and the row as it is. */
static enum status say_changed(const struct undoing *u, const struct cell *left, const struct cell *now,
			       struct err *e)
{
	char title[160], was[ERR_QUOTE_MAX], is[ERR_QUOTE_MAX];
	const struct table *t = u->f->table;
	long long by = (long long)now[t->change_at].u.i, change = (long long)u->change;
	row_title(u, now, title, sizeof title);
	for (size_t i = 1; i < t->cells; i++) {
		if (i == t->rev_at || i == t->change_at || i == u->f->key_at ||
		    cells_same(&left[i], &now[i], 1))
			continue;
		const char *name = sqlite3_column_name(u->s->stmt[u->f->by_id], (int)i);
		if (i == u->f->removed_at)
			name = "state";
		else if (t == &target_table && i == TARGET_EPHEMERIS)
			name = "ephemeris";
		value_text(u, i, &left[i], was);
		value_text(u, i, &now[i], is);
		return err_set(e, ST_CONFLICT,
			       "%s was changed again, by change %lld: %s was \"%s\" after change %lld and is "
			       "\"%s\" now; "
			       "nothing was undone",
			       title, by, name ? name : "a value", was, change, is);
	}
	return err_set(
	    e, ST_CONFLICT,
	    "%s was changed again after change %lld and set back by change %lld; nothing was undone", title,
	    change, by);
}

static enum status name_taken(const struct undoing *u, const struct cell *image, const char *what,
			      struct err *e)
{
	char title[160];
	row_title(u, image, title, sizeof title);
	return err_set(e, ST_CONFLICT, "%s can't come back: %s by now; nothing was undone", title, what);
}

/* Whether a listed target other than id has the name. */
static enum status target_called(const struct undoing *u, struct cell key, int64_t id, bool *taken,
				 struct err *e)
{
	struct row other;
	enum status st = row_find(u->s, SQL_TARGET_BY_KEY, key, &target_table, &other, e);
	*taken = st == ST_OK && other.cell[0].u.i != id && !other.cell[TARGET_REMOVED].u.i;
	row_free(&other);
	return st == ST_ABSENT ? ST_OK : st;
}

/* Whether it is the alias of a listed target other than id. */
static enum status alias_called(const struct undoing *u, struct cell key, int64_t id, bool *taken,
				struct err *e)
{
	struct row alias, other = {0};
	enum status st = row_find(u->s, SQL_ALIAS_BY_KEY, key, &alias_table, &alias, e);
	*taken = st == ST_OK && alias.cell[ALIAS_TARGET].u.i != id && !alias.cell[ALIAS_REMOVED].u.i;
	if (*taken) {
		st = row_find(u->s, SQL_TARGET_BY_ID, alias.cell[ALIAS_TARGET], &target_table, &other, e);
		*taken = st == ST_OK && !other.cell[TARGET_REMOVED].u.i;
	}
	row_free(&alias);
	row_free(&other);
	return st == ST_ABSENT ? ST_OK : st;
}

/* Whether a listed allotment other than that of the image says the same. */
static enum status allotted_twice(const struct undoing *u, const struct cell *image, bool *taken,
				  struct err *e)
{
	struct row other;
	const struct cell keys[] = {image[ALLOTMENT_SITE], cell_int(id_of_cell(&image[ALLOTMENT_TELESCOPE])),
				    image[ALLOTMENT_FIRST], image[ALLOTMENT_LAST], image[ALLOTMENT_SPAN]};
	enum status st = row_find_by(u->s, SQL_ALLOTMENT_SAME, keys, 5, &allotment_rows, &other, e);
	*taken = st == ST_OK && other.cell[0].u.i != image[0].u.i;
	row_free(&other);
	return st == ST_ABSENT ? ST_OK : st;
}

/* Whether a listed plan other than that of the image has its draft's name, or is the kept one. */
static enum status planned_twice(const struct undoing *u, const struct cell *image, enum sql_id id,
				 size_t n_keys, bool *taken, struct err *e)
{
	struct row other;
	const struct cell keys[] = {image[PLAN_SITE], image[PLAN_NIGHT],
				    cell_int(id_of_cell(&image[PLAN_TELESCOPE])), image[PLAN_KEY]};
	enum status st = row_find_by(u->s, id, keys, n_keys, &plan_rows, &other, e);
	*taken = st == ST_OK && other.cell[0].u.i != image[0].u.i;
	row_free(&other);
	return st == ST_ABSENT ? ST_OK : st;
}

/* Whether others have taken the room of a star that comes back, or say the same. */
static enum status star_taken(const struct undoing *u, const struct cell *image, bool *taken, struct err *e)
{
	const char *role = image[FIELD_STAR_ROLE].u.text;
	bool same;
	int n;
	enum status st =
	    field_stars_count(u->s, image[FIELD_STAR_TARGET].u.i, role, image[0].u.i, image, &n, &same, e);
	*taken = same || n >= field_stars_max(role);
	return st;
}

/* Whether the name of a row that comes back is still free. A site keeps its row as long as its name, and so
 * do telescopes, settings and goals. */
static enum status name_free(const struct undoing *u, const struct cell *image, struct err *e)
{
	bool taken = false;
	const char *what = "its name belongs to another";
	enum status st = ST_OK;
	if (image[u->f->removed_at].u.i)
		return ST_OK;
	if (u->f->table == &target_table) {
		st = target_called(u, image[TARGET_KEY], image[0].u.i, &taken, e);
		if (st == ST_OK && !taken)
			st = alias_called(u, image[TARGET_KEY], image[0].u.i, &taken, e);
	} else if (u->f->table == &alias_table) {
		st = target_called(u, image[ALIAS_KEY], image[ALIAS_TARGET].u.i, &taken, e);
	} else if (u->f->table == &allotment_rows) {
		st = allotted_twice(u, image, &taken, e);
		what = "its time is allotted again";
	} else if (u->f->table == &field_star_rows) {
		st = star_taken(u, image, &taken, e);
		what = "others have taken its place";
	} else if (u->f->table == &plan_rows) {
		st = planned_twice(u, image, SQL_PLAN_DRAFT, 4, &taken, e);
		if (st == ST_OK && !taken && image[PLAN_KEPT].u.i) {
			st = planned_twice(u, image, SQL_PLAN_KEPT, 3, &taken, e);
			what = "another plan of that night is kept";
		}
	}
	return st == ST_OK && taken ? name_taken(u, image, what, e) : st;
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
		st = say_changed(u, left.cell, now->cell, e);
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
		st = name_free(u, image, e);
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
