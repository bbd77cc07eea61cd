/* SPDX-License-Identifier: MIT
 * What was changed, by whom. Undoing is in undo.c. */
#include "db/history.h"

#include "db/change_rows.h"
#include "db/plan_rows.h"
#include "db/telescope_rows.h"
#include "db/text_clean.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* append-only: there is nothing to update */
const struct table change_table = {
    .name = "change_set",
    .cells = CHANGE_CELLS,
    .rev_at = CHANGE_REV,
    .change_at = 0,
    .next = SQL_CHANGE_NEXT,
    .add = SQL_CHANGE_ADD,
    .update = SQL_COUNT,
    .keep_old = SQL_COUNT,
};

static int newest_first(const void *a, const void *b)
{
	int64_t x = ((const struct change_link *)a)->id, y = ((const struct change_link *)b)->id;
	return (x < y) - (x > y);
}

enum status change_links(struct store *s, struct change_link **out, size_t *n, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX];
	bool row = false;
	size_t room = 0;
	enum status st;
	*out = NULL;
	*n = 0;
	while ((st = sql_step(s, SQL_HISTORY_CHANGES, &row, e)) == ST_OK && row) {
		if (!row_read(s, SQL_HISTORY_CHANGES, 0, &change_table, cell))
			continue; /* damaged: named by the check, undone by nobody */
		if (*n == room) {
			room = room ? 2 * room : 64;
			struct change_link *larger = realloc(*out, room * sizeof *larger);
			if (!larger) {
				st = err_set(e, ST_MEMORY, "database: no memory");
				break;
			}
			*out = larger;
		}
		int64_t undoes = cell[CHANGE_UNDOES].type == CELL_INT ? cell[CHANGE_UNDOES].u.i : 0;
		(*out)[(*n)++] = (struct change_link){cell[0].u.i, undoes, false};
	}
	sql_reset(s, SQL_HISTORY_CHANGES);
	if (st != ST_OK) {
		free(*out);
		*out = NULL;
		*n = 0;
		return st;
	}
	/* an undo is newer than what it undoes: whether it holds is known when its turn comes */
	for (size_t i = 0; i < *n; i++) {
		const struct change_link *undo = &(*out)[i], want = {.id = undo->undoes};
		if (undo->undoes == 0 || undo->undone)
			continue;
		struct change_link *of = bsearch(&want, *out, *n, sizeof **out, newest_first);
		if (of)
			of->undone = true;
	}
	return ST_OK;
}

/* --- which rows, in words --- */

enum touched {
	TOUCHED_TARGET,
	TOUCHED_EPHEMERIS,
	TOUCHED_ALIAS,
	TOUCHED_SITE,
	TOUCHED_MIDTIME,
	TOUCHED_TELESCOPE,
	TOUCHED_ALLOTMENT,
	TOUCHED_SETTING,
	TOUCHED_PLAN,
	TOUCHED_MARK,
	TOUCHED_GOAL,
	TOUCHED_STAR,
	TOUCHED_KINDS
};
static const char *const touched_plural[TOUCHED_KINDS] = {
    "targets",	  "ephemerides", "other names", "sites", "mid-times", "telescopes",
    "allotments", "settings",	 "plans",	"marks", "goals",     "stars"};

/* The rows of one kind that one change set wrote. */
struct tally {
	long n;
	int64_t target_id; /* of the first */
	int64_t number;	   /* of the first: version, epoch or night */
	char name[96];	   /* of the first */
	char last[96];	   /* name of the last */
	bool one_target;   /* all belong to that of the first */
	bool one_number;   /* all have that of the first */
};

static void count(struct tally *t, int64_t target_id, const char *name, int64_t number)
{
	if (t->n++ == 0) {
		t->target_id = target_id;
		t->one_target = true;
		t->number = number;
		t->one_number = true;
		(void)text_clean(name ? name : "", t->name, sizeof t->name);
	}
	t->one_number = t->one_number && t->number == number;
	(void)text_clean(name ? name : "", t->last, sizeof t->last);
	t->one_target = t->one_target && t->target_id == target_id;
}

static void say_tally(const struct tally tally[TOUCHED_KINDS], enum touched kind, char *out, size_t size)
{
	const struct tally *t = &tally[kind];
	const struct tally *target = &tally[TOUCHED_TARGET];
	char night[NIGHT_TEXT_MAX];
	night_date_text(t->number, night);
	bool named = target->n == 1 && target->target_id == t->target_id;
	const char *of = named ? "" : " of ", *name = named ? "" : t->name;
	if (t->n > 1 && kind == TOUCHED_MIDTIME && t->one_target)
		snprintf(out, size, "%ld mid-times of %s", t->n, t->name);
	else if (t->n == 2 && kind == TOUCHED_PLAN && t->one_number) /* one is kept instead of the other */
		snprintf(out, size, "plans of %s, drafts %s and %s", night, t->name, t->last);
	else if (t->n > 1)
		snprintf(out, size, "%ld %s", t->n, touched_plural[kind]);
	else if (kind == TOUCHED_TARGET)
		snprintf(out, size, "target %s", t->name);
	else if (kind == TOUCHED_EPHEMERIS)
		snprintf(out, size, "ephemeris version %lld%s%s", (long long)t->number, of, name);
	else if (kind == TOUCHED_ALIAS)
		snprintf(out, size, "other name %s", t->name);
	else if (kind == TOUCHED_SITE)
		snprintf(out, size, "site %s", t->name);
	else if (kind == TOUCHED_TELESCOPE)
		snprintf(out, size, "telescope %s", t->name);
	else if (kind == TOUCHED_ALLOTMENT)
		snprintf(out, size, "allotment from %s, %s", night, t->name);
	else if (kind == TOUCHED_SETTING || kind == TOUCHED_STAR)
		snprintf(out, size, "%s", t->name);
	else if (kind == TOUCHED_PLAN)
		snprintf(out, size, "plan of %s, draft %s", night, t->name);
	else if (kind == TOUCHED_MARK)
		snprintf(out, size, "%s, plan of %s", t->name, night);
	else if (kind == TOUCHED_GOAL)
		snprintf(out, size, "goal of %s", t->name);
	else
		snprintf(out, size, "mid-time of %s, epoch %lld", t->name, (long long)t->number);
}

static void say_what(const struct tally tally[TOUCHED_KINDS], int64_t undoes, char *out, size_t size)
{
	size_t used = 0;
	out[0] = '\0';
	if (undoes)
		used = (size_t)snprintf(out, size, "change %lld: ", (long long)undoes);
	for (int k = 0, parts = 0; k < TOUCHED_KINDS; k++) {
		char part[160];
		if (tally[k].n == 0)
			continue;
		say_tally(tally, (enum touched)k, part, sizeof part);
		int n = snprintf(out + used, size - used, "%s%s", parts++ ? ", " : "", part);
		if (n < 0 || (size_t)n >= size - used)
			return;
		used += (size_t)n;
	}
}

/* Moves through the touched rows, which come newest change first: tallies those of one change. *row: the
 * statement stands on a row. */
static enum status tally_change(struct store *s, int64_t change, int64_t target_id, bool *row,
				struct tally tally[TOUCHED_KINDS], bool *of_target, struct err *e)
{
	sqlite3_stmt *stmt = s->stmt[SQL_HISTORY_ROWS];
	enum status st = ST_OK;
	memset(tally, 0, TOUCHED_KINDS * sizeof *tally);
	*of_target = target_id == 0;
	while (st == ST_OK && *row && sqlite3_column_int64(stmt, 0) >= change) {
		int64_t kind = sqlite3_column_int64(stmt, 1), target = sqlite3_column_int64(stmt, 2);
		if (sqlite3_column_int64(stmt, 0) == change && kind >= 0 && kind < TOUCHED_KINDS) {
			count(&tally[kind], target, (const char *)sqlite3_column_text(stmt, 3),
			      sqlite3_column_int64(stmt, 4));
			*of_target = *of_target || target == target_id;
		}
		st = sql_step(s, SQL_HISTORY_ROWS, row, e);
	}
	return st;
}

static enum status fill(struct store *s, const struct change_link *link, struct change_row *out,
			struct err *e)
{
	struct row row;
	enum status st = row_find(s, SQL_CHANGE_BY_ID, cell_int(link->id), &change_table, &row, e);
	if (st == ST_OK) {
		out->id = link->id;
		out->undone = link->undone;
		(void)text_clean(row.cell[CHANGE_UTC].u.text, out->utc, sizeof out->utc);
		(void)text_clean(row.cell[CHANGE_WHO].u.text, out->who, sizeof out->who);
		(void)text_clean(row.cell[CHANGE_VERB].u.text, out->verb, sizeof out->verb);
	}
	row_free(&row);
	return st;
}

enum status history_list(struct store *s, int64_t target_id, struct change_row **rows, size_t *n,
			 struct err *e)
{
	struct change_link *links = NULL;
	struct tally tally[TOUCHED_KINDS];
	size_t n_links = 0;
	bool row = false, of_target;
	*rows = NULL;
	*n = 0;
	enum status st = change_links(s, &links, &n_links, e);
	if (st == ST_OK && !(*rows = malloc((n_links + 1) * sizeof **rows)))
		st = err_set(e, ST_MEMORY, "database: no memory");
	if (st == ST_OK)
		st = sql_step(s, SQL_HISTORY_ROWS, &row, e);
	for (size_t i = 0; st == ST_OK && i < n_links; i++) {
		struct change_row *out = &(*rows)[*n];
		st = tally_change(s, links[i].id, target_id, &row, tally, &of_target, e);
		if (st != ST_OK || !of_target)
			continue;
		say_what(tally, links[i].undoes, out->what, sizeof out->what);
		st = fill(s, &links[i], out, e);
		(*n)++;
	}
	sql_reset(s, SQL_HISTORY_ROWS);
	free(links);
	if (st != ST_OK) {
		free(*rows);
		*rows = NULL;
		*n = 0;
	}
	return st;
}
