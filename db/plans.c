/* SPDX-License-Identifier: MIT
 * Storing plans. Reading them is in plans_read.c, marks are in plan_marks.c. */
#include "db/plans.h"

#include "db/midtime_rows.h"
#include "db/plan_rows.h"
#include "db/target_rows.h"
#include "db/telescope_rows.h"
#include "db/text_clean.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

const struct table plan_rows = {
    .name = "plan",
    .cells = PLAN_CELLS,
    .rev_at = PLAN_REV,
    .change_at = PLAN_CHANGE,
    .next = SQL_PLAN_NEXT,
    .add = SQL_PLAN_ADD,
    .update = SQL_PLAN_UPDATE,
    .keep_old = SQL_PLAN_KEEP_OLD,
};
/* append-only: there is nothing to update */
const struct table edition_rows = {
    .name = "plan_edition",
    .cells = EDITION_CELLS,
    .rev_at = EDITION_REV,
    .change_at = EDITION_CHANGE,
    .next = SQL_EDITION_NEXT,
    .add = SQL_EDITION_ADD,
    .update = SQL_COUNT,
    .keep_old = SQL_COUNT,
};
const struct table item_rows = {
    .name = "plan_item",
    .cells = ITEM_CELLS,
    .rev_at = ITEM_REV,
    .change_at = ITEM_CHANGE,
    .next = SQL_ITEM_NEXT,
    .add = SQL_ITEM_ADD,
    .update = SQL_COUNT,
    .keep_old = SQL_COUNT,
};
const struct table window_rows = {
    .name = "plan_window",
    .cells = WINDOW_CELLS,
    .rev_at = WINDOW_REV,
    .change_at = WINDOW_CHANGE,
    .next = SQL_WINDOW_NEXT,
    .add = SQL_WINDOW_ADD,
    .update = SQL_COUNT,
    .keep_old = SQL_COUNT,
};

/* --- what is only added --- */

static enum status add_window(struct store *s, int64_t item_id, size_t place, const struct plan_window_row *w,
			      struct err *e)
{
	struct row ephemeris;
	int64_t id = 0;
	enum status st =
	    row_find(s, SQL_EPHEMERIS_BY_ID, cell_int(w->ephemeris_id), &ephemeris_table, &ephemeris, e);
	if (st == ST_ABSENT || (st == ST_OK && ephemeris.cell[EPHEMERIS_TARGET].u.i != w->target_id))
		st = err_set(e, ST_ABSENT, "plan: %.200s has no such ephemeris in the store", w->target);
	row_free(&ephemeris);
	if (st == ST_OK)
		st = row_next_id(s, &window_rows, &id, e);
	if (st != ST_OK)
		return st;
	char *figures = plan_lines_clean(w->figures);
	if (!figures)
		return err_set(e, ST_MEMORY, "database: no memory");
	struct cell cell[ROW_CELLS_MAX] = {
	    [0] = cell_int(id),
	    [WINDOW_ITEM] = cell_int(item_id),
	    [WINDOW_PLACE] = cell_int((int64_t)place),
	    [WINDOW_TARGET_ID] = cell_int(w->target_id),
	    [WINDOW_EPHEMERIS_ID] = cell_int(w->ephemeris_id),
	    [WINDOW_TARGET] = cell_text(w->target),
	    [WINDOW_KIND] = cell_text(event_kind_word(w->kind)),
	    [WINDOW_EPOCH] = cell_int(w->epoch),
	    [WINDOW_VARIANT] = cell_text(w->variant),
	    [WINDOW_WORTH] = cell_real(w->worth),
	    [WINDOW_FIGURES] = cell_text(figures),
	};
	st = row_add(s, &window_rows, cell, e);
	free(figures);
	return st;
}

static enum status add_item(struct store *s, int64_t edition_id, size_t place,
			    const struct plan_item_row *item, struct err *e)
{
	int64_t id = 0;
	enum status st = row_next_id(s, &item_rows, &id, e);
	struct cell cell[ROW_CELLS_MAX] = {
	    [0] = cell_int(id),
	    [ITEM_EDITION] = cell_int(edition_id),
	    [ITEM_PLACE] = cell_int((int64_t)place),
	    [ITEM_KEY] = cell_text(item->key),
	    [ITEM_SLEW_BY] = cell_text(item->slew_by_utc),
	    [ITEM_START] = cell_text(item->start_utc),
	    [ITEM_LATEST_START] = cell_text(item->latest_start_utc),
	    [ITEM_END] = cell_text(item->end_utc),
	    [ITEM_WORTH] = cell_real(item->worth),
	    [ITEM_WINDOWS] = cell_int((int64_t)item->n),
	};
	if (st == ST_OK)
		st = row_add(s, &item_rows, cell, e);
	for (size_t i = 0; st == ST_OK && i < item->n; i++)
		st = add_window(s, id, i + 1, &item->window[i], e);
	return st;
}

static enum status add_edition(struct store *s, int64_t plan_id, int64_t edition, const struct plan_row *p,
			       struct err *e)
{
	int64_t id = 0;
	enum status st = row_next_id(s, &edition_rows, &id, e);
	if (st != ST_OK)
		return st;
	char *limits = plan_lines_clean(p->limits), *choices = plan_lines_clean(p->choices),
	     *left_out = plan_lines_clean(p->left_out);
	if (!limits || !choices || !left_out) {
		st = err_set(e, ST_MEMORY, "database: no memory");
	} else {
		struct cell cell[ROW_CELLS_MAX] = {
		    [0] = cell_int(id),
		    [EDITION_PLAN] = cell_int(plan_id),
		    [EDITION_NUMBER] = cell_int(edition),
		    [EDITION_LIMITS] = cell_text(limits),
		    [EDITION_LEAP] = cell_text(p->leap_date),
		    [EDITION_WORTH] = cell_real(p->worth),
		    [EDITION_BOUND] = cell_real(p->bound),
		    [EDITION_OPTIMAL] = cell_int(p->optimal),
		    [EDITION_CHOICES] = cell_text(choices),
		    [EDITION_LEFT_OUT] = cell_text(left_out),
		    [EDITION_ITEMS] = cell_int((int64_t)p->n),
		};
		st = row_add(s, &edition_rows, cell, e);
	}
	free(limits);
	free(choices);
	free(left_out);
	for (size_t i = 0; st == ST_OK && i < p->n; i++)
		st = add_item(s, id, i + 1, &p->item[i], e);
	return st;
}

/* --- the plan's row --- */

/* Which draft of a night is kept is told by the rows: the one that was is not any more. */
static enum status let_go(struct store *s, int64_t site_id, int64_t night_mjd, int64_t telescope_id,
			  int64_t but_id, struct err *e)
{
	struct row old;
	struct cell cell[ROW_CELLS_MAX];
	const struct cell keys[] = {cell_int(site_id), cell_int(night_mjd), cell_int(telescope_id)};
	enum status st = row_find_by(s, SQL_PLAN_KEPT, keys, 3, &plan_rows, &old, e);
	if (st == ST_OK && old.cell[0].u.i != but_id) {
		memcpy(cell, old.cell, sizeof cell);
		cell[PLAN_KEPT] = cell_int(0);
		st = row_replace(s, &plan_rows, &old, cell, e);
	}
	row_free(&old);
	return st == ST_ABSENT ? ST_OK : st;
}

static enum status find_draft(struct store *s, const struct plan_row *p, struct row *out, struct err *e)
{
	char key[NAME_KEY_MAX];
	name_key(p->draft, key);
	const struct cell keys[] = {cell_int(p->site_id), cell_int(p->night_mjd), cell_int(p->telescope_id),
				    cell_text(key)};
	return row_find_by(s, SQL_PLAN_DRAFT, keys, 4, &plan_rows, out, e);
}

/* have: the edition that holds, 0 where there is no such draft. */
static enum status edition_seen(const struct plan_row *p, int64_t have, int based_on, struct err *e)
{
	char title[PLAN_TITLE_MAX];
	if (have == based_on)
		return ST_OK;
	plan_title(p->night_mjd, p->draft, title);
	if (have == 0)
		return err_set(e, ST_CONFLICT,
			       "%s: it was removed meanwhile (yours was made from edition %d)", title,
			       based_on);
	if (based_on == 0)
		return err_set(e, ST_CONFLICT, "%s: it is stored already, edition %lld holds", title,
			       (long long)have);
	return err_set(e, ST_CONFLICT, "%s: edition %lld holds by now (yours was made from edition %d)",
		       title, (long long)have, based_on);
}

/* The plan's row for a new edition: old, or one more. */
static enum status point_at(struct store *s, const struct plan_row *p, bool keep, const struct row *old,
			    int64_t id, int64_t edition, struct err *e)
{
	char key[NAME_KEY_MAX], draft[NAME_BYTES_MAX];
	const char *start = p->draft;
	size_t n = strlen(p->draft);
	text_trim(&start, &n);
	snprintf(draft, sizeof draft, "%.*s", (int)n, start);
	name_key(draft, key);
	enum status st = keep ? let_go(s, p->site_id, p->night_mjd, p->telescope_id, old ? id : 0, e) : ST_OK;
	struct cell cell[ROW_CELLS_MAX] = {
	    [0] = cell_int(id),
	    [PLAN_SITE] = cell_int(p->site_id),
	    [PLAN_TELESCOPE] = cell_id(p->telescope_id),
	    [PLAN_NIGHT] = cell_int(p->night_mjd),
	    [PLAN_DRAFT] = cell_text(draft),
	    [PLAN_KEY] = cell_text(key),
	    [PLAN_KEPT] = cell_int(keep || (old && old->cell[PLAN_KEPT].u.i)),
	    [PLAN_EDITION] = cell_int(edition),
	    [PLAN_REMOVED] = cell_int(0),
	};
	if (st != ST_OK)
		return st;
	return old ? row_replace(s, &plan_rows, old, cell, e) : row_add(s, &plan_rows, cell, e);
}

enum status plan_store(struct store *s, const struct plan_row *p, bool keep, int based_on, int64_t *id,
		       int *edition, struct err *e)
{
	struct row old = {0};
	int64_t last = 0, plan_id = 0;
	enum status st = change_needed(s, e);
	if (st == ST_OK)
		st = plan_check(p, e);
	if (st == ST_OK)
		st = place_check(s, p->site_id, p->telescope_id, e);
	if (st != ST_OK)
		return st;
	st = find_draft(s, p, &old, e);
	bool there = st == ST_OK;
	if (st == ST_OK || st == ST_ABSENT)
		st = edition_seen(p, there ? old.cell[PLAN_EDITION].u.i : 0, based_on, e);
	if (st == ST_OK && there)
		plan_id = old.cell[0].u.i;
	else if (st == ST_OK)
		st = row_next_id(s, &plan_rows, &plan_id, e);
	/* a number that was undone is not given again */
	const struct cell key = cell_int(plan_id);
	if (st == ST_OK)
		st = cells_bind(s->stmt[SQL_EDITION_LAST], 1, &key, 1, e);
	if (st == ST_OK)
		st = sql_number(s, SQL_EDITION_LAST, &last, e);
	if (st == ST_OK)
		st = point_at(s, p, keep, there ? &old : NULL, plan_id, last + 1, e);
	if (st == ST_OK)
		st = add_edition(s, plan_id, last + 1, p, e);
	row_free(&old);
	if (st == ST_OK) {
		*id = plan_id;
		*edition = (int)(last + 1);
	}
	return st;
}

static enum status find_listed(struct store *s, int64_t plan_id, struct row *out, struct err *e)
{
	enum status st = row_find(s, SQL_PLAN_BY_ID, cell_int(plan_id), &plan_rows, out, e);
	if (st == ST_ABSENT || (st == ST_OK && out->cell[PLAN_REMOVED].u.i))
		st = err_set(e, ST_ABSENT, "there is no such plan");
	return st;
}

enum status plan_keep(struct store *s, int64_t plan_id, struct err *e)
{
	struct row old;
	struct cell cell[ROW_CELLS_MAX];
	enum status st = find_listed(s, plan_id, &old, e);
	if (st == ST_OK && !old.cell[PLAN_KEPT].u.i) {
		memcpy(cell, old.cell, sizeof cell);
		cell[PLAN_KEPT] = cell_int(1);
		st = let_go(s, cell[PLAN_SITE].u.i, cell[PLAN_NIGHT].u.i, id_of_cell(&cell[PLAN_TELESCOPE]),
			    plan_id, e);
		if (st == ST_OK)
			st = row_replace(s, &plan_rows, &old, cell, e);
	}
	row_free(&old);
	return st;
}

enum status plan_remove(struct store *s, int64_t plan_id, struct err *e)
{
	struct row old;
	struct cell cell[ROW_CELLS_MAX];
	enum status st = find_listed(s, plan_id, &old, e);
	if (st == ST_OK) {
		memcpy(cell, old.cell, sizeof cell);
		cell[PLAN_KEPT] = cell_int(0);
		cell[PLAN_REMOVED] = cell_int(1);
		st = row_replace(s, &plan_rows, &old, cell, e);
	}
	row_free(&old);
	return st;
}
