/* SPDX-License-Identifier: MIT
 * Why a change can't be undone: a row was changed again, or what comes back has lost its place. */
#include "db/undo_parts.h"

#include "db/goal_rows.h"
#include "db/midtime_rows.h"
#include "db/plan_rows.h"
#include "db/target_rows.h"
#include "db/telescope_rows.h"
#include "ephem/number_text.h"

#include <stdio.h>

/* --- names of rows --- */

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

/* --- changed again --- */

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

enum status undo_say_changed(const struct undoing *u, const struct cell *left, const struct cell *now,
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

/* --- names that were taken --- */

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

/* A site keeps its row as long as its name, and so do telescopes, settings and goals. */
enum status undo_name_free(const struct undoing *u, const struct cell *image, struct err *e)
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
