/* SPDX-License-Identifier: MIT
 * Reading stored plans. */
#include "db/plans.h"

#include "db/change_rows.h"
#include "db/plan_rows.h"
#include "db/telescope_rows.h"
#include "db/text_clean.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* --- room that stays where it is until all of it is freed --- */

struct chunk {
	struct chunk *next;
	size_t used, room;
};
enum { CHUNK_ROOM = 16384, ALIGN = 16 };
_Static_assert(sizeof(struct chunk) <= 2 * ALIGN, "the room begins behind it");

static void *take(char **block, size_t n)
{
	struct chunk *head = (struct chunk *)(void *)*block;
	n = (n + ALIGN - 1) / ALIGN * ALIGN;
	if (!head || head->room - head->used < n) {
		size_t room = n > CHUNK_ROOM ? n : CHUNK_ROOM;
		struct chunk *more = calloc(1, 2 * ALIGN + room);
		if (!more)
			return NULL;
		*more = (struct chunk){head, 0, room};
		*block = (char *)more;
		head = more;
	}
	void *out = (char *)head + 2 * ALIGN + head->used;
	head->used += n;
	return out;
}

static void drop(char *block)
{
	for (struct chunk *c = (struct chunk *)(void *)block; c;) {
		struct chunk *next = c->next;
		free(c);
		c = next;
	}
}

/* Texts of cells into the room, one after the other; false when there was none. */
struct keeping {
	char **block;
	bool full;
};

static const char *keep_text(struct keeping *k, const struct cell *c)
{
	size_t n = c->type == CELL_TEXT ? (size_t)c->length : 0;
	char *out = k->full ? NULL : take(k->block, n + 1);
	if (!out) {
		k->full = true;
		return "";
	}
	if (n > 0)
		memcpy(out, c->u.text, n);
	out[n] = '\0';
	return out;
}

static enum status no_memory(struct err *e)
{
	return err_set(e, ST_MEMORY, "database: no memory");
}

static enum status row_damaged(struct store *s, enum sql_id id, const struct table *t, struct err *e)
{
	return err_set(e, ST_STORE, "%.300s: damaged: the checksum of row %lld of table %s is wrong",
		       store_where(s), (long long)sqlite3_column_int64(s->stmt[id], 0), t->name);
}

/* --- what a plan's row, its edition and the change set say --- */

static void fill_plan(struct keeping *k, const struct cell *plan, const struct cell *edition,
		      const struct cell *change, struct plan_row *out)
{
	out->id = plan[0].u.i;
	out->site_id = plan[PLAN_SITE].u.i;
	out->telescope_id = id_of_cell(&plan[PLAN_TELESCOPE]);
	out->night_mjd = (int32_t)plan[PLAN_NIGHT].u.i;
	out->draft = keep_text(k, &plan[PLAN_DRAFT]);
	out->kept = plan[PLAN_KEPT].u.i != 0;
	out->edition = (int)edition[EDITION_NUMBER].u.i;
	out->stored_utc = keep_text(k, &change[CHANGE_UTC]);
	out->who = keep_text(k, &change[CHANGE_WHO]);
	out->limits = keep_text(k, &edition[EDITION_LIMITS]);
	out->leap_date = keep_text(k, &edition[EDITION_LEAP]);
	out->worth = cell_number(&edition[EDITION_WORTH]);
	out->bound = cell_number(&edition[EDITION_BOUND]);
	out->optimal = edition[EDITION_OPTIMAL].u.i != 0;
	out->choices = keep_text(k, &edition[EDITION_CHOICES]);
	out->left_out = keep_text(k, &edition[EDITION_LEFT_OUT]);
}

/* --- lists --- */

enum { EDITION_AT = PLAN_CELLS + 1, CHANGE_AT = EDITION_AT + EDITION_CELLS + 1 };

static enum status keep_plan(struct plan_list *out, size_t *room, const struct cell *plan,
			     const struct cell *edition, const struct cell *change, struct err *e)
{
	struct keeping k = {.block = &out->block};
	if (out->n == *room) {
		size_t more = *room ? 2 * *room : 16;
		struct plan_row *larger = realloc(out->plan, more * sizeof *larger);
		if (!larger)
			return no_memory(e);
		out->plan = larger;
		*room = more;
	}
	out->plan[out->n] = (struct plan_row){0};
	fill_plan(&k, plan, edition, change, &out->plan[out->n]);
	if (k.full)
		return no_memory(e);
	out->n++;
	return ST_OK;
}

enum status plans_list(struct store *s, int64_t site_id, int32_t first_mjd, int32_t last_mjd,
		       struct plan_list *out, struct err *e)
{
	const struct cell keys[] = {cell_int(site_id), cell_int(first_mjd), cell_int(last_mjd)};
	struct cell plan[ROW_CELLS_MAX], edition[ROW_CELLS_MAX], change[ROW_CELLS_MAX];
	const enum sql_id id = SQL_PLAN_LOAD;
	size_t room = 0;
	bool row = false;
	*out = (struct plan_list){0};
	enum status st = cells_bind(s->stmt[id], 1, keys, 3, e);
	while (st == ST_OK && (st = sql_step(s, id, &row, e)) == ST_OK && row) {
		bool sound = row_read(s, id, 0, &plan_rows, plan);
		if (sound && plan[PLAN_REMOVED].u.i)
			continue;
		if (sound && row_read(s, id, EDITION_AT, &edition_rows, edition) &&
		    row_read(s, id, CHANGE_AT, &change_table, change))
			st = keep_plan(out, &room, plan, edition, change, e);
		else if (out->n_bad++ == 0)
			snprintf(out->bad, sizeof out->bad,
				 "the checksum of plan %lld is wrong: left out; see `wane check`",
				 (long long)sqlite3_column_int64(s->stmt[id], 0));
	}
	sql_reset(s, id);
	if (st != ST_OK)
		plan_list_free(out);
	return st;
}

void plan_list_free(struct plan_list *list)
{
	free(list->plan);
	drop(list->block);
	*list = (struct plan_list){0};
}

/* --- one plan, whole --- */

static enum status load_items(struct store *s, int64_t edition_id, size_t n, struct plan_row *out,
			      struct err *e)
{
	const enum sql_id id = SQL_ITEMS_OF_EDITION;
	const struct cell key = cell_int(edition_id);
	struct keeping k = {.block = &out->block};
	struct cell cell[ROW_CELLS_MAX];
	bool row = false;
	size_t at = 0;
	out->item = take(&out->block, (n + 1) * sizeof *out->item);
	if (!out->item)
		return no_memory(e);
	enum status st = cells_bind(s->stmt[id], 1, &key, 1, e);
	while (st == ST_OK && (st = sql_step(s, id, &row, e)) == ST_OK && row) {
		if (!row_read(s, id, 0, &item_rows, cell)) {
			st = row_damaged(s, id, &item_rows, e);
			break;
		}
		if (at == n) /* one too many is told as one missing */
			break;
		size_t windows = (size_t)cell[ITEM_WINDOWS].u.i;
		out->item[at++] = (struct plan_item_row){
		    .key = keep_text(&k, &cell[ITEM_KEY]),
		    .slew_by_utc = keep_text(&k, &cell[ITEM_SLEW_BY]),
		    .start_utc = keep_text(&k, &cell[ITEM_START]),
		    .latest_start_utc = keep_text(&k, &cell[ITEM_LATEST_START]),
		    .end_utc = keep_text(&k, &cell[ITEM_END]),
		    .worth = cell_number(&cell[ITEM_WORTH]),
		    .n = windows,
		    .window = k.full ? NULL : take(k.block, (windows + 1) * sizeof *out->item->window),
		    .state = "",
		    .cause = "",
		    .note = "",
		    .marked_utc = "",
		};
		if (k.full || !out->item[at - 1].window)
			st = no_memory(e);
	}
	sql_reset(s, id);
	if (st == ST_OK && (at != n || row))
		st = err_set(e, ST_STORE, "%.300s: damaged: items of an edition of plan %lld are missing",
			     store_where(s), (long long)out->id);
	out->n = at;
	return st;
}

static struct plan_window_row window_of_cells(struct keeping *k, const struct cell *cell)
{
	return (struct plan_window_row){
	    .target_id = cell[WINDOW_TARGET_ID].u.i,
	    .ephemeris_id = cell[WINDOW_EPHEMERIS_ID].u.i,
	    .target = keep_text(k, &cell[WINDOW_TARGET]),
	    .kind = strcmp(cell[WINDOW_KIND].u.text, "occultation") == 0 ? KIND_OCCULTATION : KIND_TRANSIT,
	    .epoch = (long)cell[WINDOW_EPOCH].u.i,
	    .variant = keep_text(k, &cell[WINDOW_VARIANT]),
	    .worth = cell_number(&cell[WINDOW_WORTH]),
	    .figures = keep_text(k, &cell[WINDOW_FIGURES]),
	};
}

/* The windows come in the order of their items, each with its place. */
static enum status load_windows(struct store *s, int64_t edition_id, struct plan_row *out, struct err *e)
{
	const enum sql_id id = SQL_WINDOWS_OF_EDITION;
	const struct cell key = cell_int(edition_id);
	struct keeping k = {.block = &out->block};
	struct cell cell[ROW_CELLS_MAX];
	bool row = false, fits = true;
	size_t item = 0, at = 0;
	enum status st = cells_bind(s->stmt[id], 1, &key, 1, e);
	while (st == ST_OK && fits && (st = sql_step(s, id, &row, e)) == ST_OK && row) {
		if (!row_read(s, id, 0, &window_rows, cell)) {
			st = row_damaged(s, id, &window_rows, e);
			break;
		}
		while (item < out->n && at == out->item[item].n) {
			item++;
			at = 0;
		}
		fits = item < out->n && cell[WINDOW_PLACE].u.i == (int64_t)at + 1;
		if (fits)
			out->item[item].window[at++] = window_of_cells(&k, cell);
		if (k.full)
			st = no_memory(e);
	}
	sql_reset(s, id);
	while (item < out->n && at == out->item[item].n) {
		item++;
		at = 0;
	}
	if (st == ST_OK && (!fits || item < out->n))
		st = err_set(e, ST_STORE, "%.300s: damaged: windows of an edition of plan %lld are missing",
			     store_where(s), (long long)out->id);
	return st;
}

static void set_mark(struct keeping *k, const struct cell *cell, struct plan_row *out)
{
	for (size_t i = 0; i < out->n; i++) {
		struct plan_item_row *item = &out->item[i];
		if (strcmp(item->key, cell[PLAN_MARK_KEY].u.text) != 0)
			continue;
		item->state = keep_text(k, &cell[PLAN_MARK_STATE]);
		item->cause = keep_text(k, &cell[PLAN_MARK_CAUSE]);
		item->note = keep_text(k, &cell[PLAN_MARK_NOTE]);
		item->marked_utc = keep_text(k, &cell[PLAN_MARK_UTC]);
		return;
	}
}

/* The plan is there without it. */
static void bad_mark(struct store *s, struct plan_row *out)
{
	if (out->n_bad++ == 0)
		snprintf(out->bad, sizeof out->bad,
			 "the checksum of mark %lld is wrong: it counts as none; see `wane check`",
			 (long long)sqlite3_column_int64(s->stmt[SQL_PLAN_MARKS_OF_PLAN], 0));
}

static enum status load_marks(struct store *s, struct plan_row *out, struct err *e)
{
	const enum sql_id id = SQL_PLAN_MARKS_OF_PLAN;
	const struct cell key = cell_int(out->id);
	struct keeping k = {.block = &out->block};
	struct cell cell[ROW_CELLS_MAX];
	bool row = false;
	enum status st = cells_bind(s->stmt[id], 1, &key, 1, e);
	while (st == ST_OK && (st = sql_step(s, id, &row, e)) == ST_OK && row) {
		if (!row_read(s, id, 0, &plan_mark_rows, cell))
			bad_mark(s, out);
		else if (!cell[PLAN_MARK_REMOVED].u.i)
			set_mark(&k, cell, out);
		if (k.full)
			st = no_memory(e);
	}
	sql_reset(s, id);
	return st;
}

/* The edition and its change set beside a plan's row; out gets what all three say. */
static enum status load_edition(struct store *s, const struct row *plan, int edition, struct plan_row *out,
				int64_t *edition_id, size_t *n, struct err *e)
{
	struct row row, change = {0};
	struct keeping k = {.block = &out->block};
	const struct cell number = edition ? cell_int(edition) : plan->cell[PLAN_EDITION];
	const struct cell keys[] = {plan->cell[0], number};
	enum status st = row_find_by(s, SQL_EDITION_OF_PLAN, keys, 2, &edition_rows, &row, e);
	if (st == ST_ABSENT && edition) {
		char title[PLAN_TITLE_MAX];
		plan_title(plan->cell[PLAN_NIGHT].u.i, plan->cell[PLAN_DRAFT].u.text, title);
		st = err_set(e, ST_ABSENT, "%s: it has no edition %d", title, edition);
	} else if (st == ST_ABSENT) {
		st = err_set(e, ST_STORE, "%.300s: damaged: the edition that holds of plan %lld is missing",
			     store_where(s), (long long)plan->cell[0].u.i);
	}
	if (st == ST_OK) {
		st = row_find(s, SQL_CHANGE_BY_ID, row.cell[EDITION_CHANGE], &change_table, &change, e);
		if (st == ST_ABSENT)
			st = err_set(e, ST_STORE, "database: damaged: change %lld is missing",
				     (long long)row.cell[EDITION_CHANGE].u.i);
	}
	if (st == ST_OK) {
		fill_plan(&k, plan->cell, row.cell, change.cell, out);
		*edition_id = row.cell[0].u.i;
		*n = (size_t)row.cell[EDITION_ITEMS].u.i;
		if (k.full)
			st = no_memory(e);
	}
	row_free(&row);
	row_free(&change);
	return st;
}

static enum status load_whole(struct store *s, const struct row *plan, int edition, struct plan_row *out,
			      struct err *e)
{
	int64_t edition_id = 0;
	size_t n = 0;
	*out = (struct plan_row){0};
	enum status st = load_edition(s, plan, edition, out, &edition_id, &n, e);
	if (st == ST_OK)
		st = load_items(s, edition_id, n, out, e);
	if (st == ST_OK)
		st = load_windows(s, edition_id, out, e);
	if (st == ST_OK)
		st = load_marks(s, out, e);
	if (st != ST_OK)
		plan_row_free(out);
	return st;
}

static enum status load_by_id(struct store *s, int64_t plan_id, int edition, bool listed,
			      struct plan_row *out, struct err *e)
{
	struct row plan;
	*out = (struct plan_row){0};
	enum status st = row_find(s, SQL_PLAN_BY_ID, cell_int(plan_id), &plan_rows, &plan, e);
	if (st == ST_ABSENT || (st == ST_OK && listed && plan.cell[PLAN_REMOVED].u.i))
		st = err_set(e, ST_ABSENT, "there is no such plan");
	if (st == ST_OK)
		st = load_whole(s, &plan, edition, out, e);
	row_free(&plan);
	return st;
}

enum status plan_load(struct store *s, int64_t plan_id, int edition, struct plan_row *out, struct err *e)
{
	return load_by_id(s, plan_id, edition, true, out, e);
}

enum status plan_load_past(struct store *s, int64_t plan_id, int edition, struct plan_row *out, struct err *e)
{
	return load_by_id(s, plan_id, edition, false, out, e);
}

enum status plan_find(struct store *s, int64_t site_id, int64_t telescope_id, int32_t night_mjd,
		      const char *draft, struct plan_row *out, struct err *e)
{
	struct row plan;
	char key[NAME_KEY_MAX] = "";
	*out = (struct plan_row){0};
	if (draft)
		name_key(draft, key);
	const struct cell keys[] = {cell_int(site_id), cell_int(night_mjd), cell_int(telescope_id),
				    cell_text(key)};
	enum status st = draft ? row_find_by(s, SQL_PLAN_DRAFT, keys, 4, &plan_rows, &plan, e)
			       : row_find_by(s, SQL_PLAN_KEPT, keys, 3, &plan_rows, &plan, e);
	if (st == ST_OK)
		st = load_whole(s, &plan, 0, out, e);
	row_free(&plan);
	return st;
}

void plan_row_free(struct plan_row *p)
{
	drop(p->block);
	*p = (struct plan_row){0};
}
