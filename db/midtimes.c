/* SPDX-License-Identifier: MIT */
#include "db/midtimes.h"

#include "db/midtime_rows.h"
#include "db/target_rows.h"
#include "db/text_block.h"
#include "db/text_clean.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* append-only: there is nothing to update */
const struct table midtime_rows = {
    .name = "midtime",
    .cells = MIDTIME_CELLS,
    .rev_at = MIDTIME_REV,
    .change_at = MIDTIME_CHANGE,
    .next = SQL_MIDTIME_NEXT,
    .add = SQL_MIDTIME_ADD,
    .update = SQL_COUNT,
    .keep_old = SQL_COUNT,
};
const struct table mark_rows = {
    .name = "midtime_mark",
    .cells = MARK_CELLS,
    .rev_at = MARK_REV,
    .change_at = MARK_CHANGE,
    .next = SQL_COUNT, /* the id of its mid-time */
    .add = SQL_MARK_ADD,
    .update = SQL_MARK_UPDATE,
    .keep_old = SQL_MARK_KEEP_OLD,
};
enum {
	MARK_AT = MIDTIME_CELLS + 1,
	WHO_AT = MARK_AT + MARK_CELLS + 1
}; /* columns of the joined statements */

const char *event_kind_word(enum event_kind kind)
{
	return kind == KIND_OCCULTATION ? "occultation" : "transit";
}

enum status midtime_check(const struct midtime_row *row, enum midtime_part *part, struct err *e)
{
	const double first_jd = 2433282.5, end_jd = 2488434.5; /* 1950-01-01, 2101-01-01 */
	double jd = jd2_value(row->mid) + row->standard.offset_d;
	*part = MIDTIME_PART_ERR;
	/* written so that NAN is refused too */
	if (row->err_d >= first_jd - row->standard.offset_d && row->err_d < end_jd - row->standard.offset_d &&
	    row->err_d > MIDTIME_ERR_MAX_D && row->mid.day + row->mid.frac <= MIDTIME_ERR_MAX_D)
		return err_set(e, ST_RANGE,
			       "the error is a date and the mid-time is none: are the columns swapped?");
	if (row->err_d == 0.0)
		return err_set(e, ST_RANGE,
			       "an error of zero would outweigh every other time (expected days above 0)");
	if (!(row->err_d > 0.0 && row->err_d <= MIDTIME_ERR_MAX_D))
		return err_set(e, ST_RANGE, "not an error of a mid-time (expected above 0, at most 100 d)");
	*part = MIDTIME_PART_MID;
	if (!(jd >= first_jd && jd < end_jd)) {
		const char *why = "not a date of 1950 to 2100";
		if (jd >= first_jd - 2400000.5 && jd < end_jd - 2400000.5)
			why = "not a date of 1950 to 2100: less an offset? then time_scale has to say it, as "
			      "in "
			      "MJD_UTC or BJD_TDB-2450000";
		return err_set(e, ST_RANGE, "%s (expected a Julian date of the years 1950 to 2100)", why);
	}
	*part = MIDTIME_PART_EPOCH;
	if (row->epoch < -MIDTIME_EPOCH_MAX || row->epoch > MIDTIME_EPOCH_MAX)
		return err_set(e, ST_RANGE,
			       "no such epoch (expected a whole number, at most 2000000000 either way)");
	return ST_OK;
}

/* --- reading --- */

enum { MIDTIME_TEXTS = 5 };

static const char **text_member(struct midtime_row *row, int i)
{
	const char **const members[MIDTIME_TEXTS] = {&row->mid_text, &row->time_scale, &row->source,
						     &row->entered_utc, &row->who};
	return members[i];
}

/* A row with its texts as offsets, so that rows can be sorted while the block still moves. */
struct placed {
	struct midtime_row row;
	int64_t target_id;
	size_t place[MIDTIME_TEXTS];
};
struct loading {
	struct placed *list;
	size_t n, room, n_bad;
	struct text_block texts;
	char bad[sizeof((struct midtime_list *)0)->bad];
};

static struct midtime_row row_of_cells(const struct cell *cell, const struct cell *mark)
{
	return (struct midtime_row){
	    .id = cell[0].u.i,
	    .epoch = (long)cell[MIDTIME_EPOCH].u.i,
	    .kind = strcmp(cell[MIDTIME_KIND].u.text, "occultation") == 0 ? KIND_OCCULTATION : KIND_TRANSIT,
	    .mid_text = cell[MIDTIME_TEXT].u.text,
	    .mid = {cell_number(&cell[MIDTIME_DAY]), cell_number(&cell[MIDTIME_FRAC])},
	    .time_scale = cell[MIDTIME_SCALE].u.text,
	    .err_d = cell_number(&cell[MIDTIME_ERR]),
	    .source = cell[MIDTIME_SOURCE].u.text,
	    .used = mark[MARK_USED].u.i != 0,
	    .entered_utc = cell[MIDTIME_ENTERED].u.text,
	};
}

static bool make_room(struct loading *l)
{
	if (l->n < l->room)
		return true;
	size_t room = l->room ? 2 * l->room : 64;
	struct placed *list = realloc(l->list, room * sizeof *list);
	if (!list)
		return false;
	l->list = list;
	l->room = room;
	return true;
}

static enum status keep(struct loading *l, const struct cell *cell, const struct cell *mark, const char *who,
			struct err *e)
{
	struct placed p = {.row = row_of_cells(cell, mark), .target_id = cell[MIDTIME_TARGET].u.i};
	p.row.who = who;
	if (standard_parse(p.row.time_scale, &p.row.standard, e) != ST_OK)
		return err_set(e, ST_STORE,
			       "database: damaged: the time scale of mid-time %lld can't be read",
			       (long long)p.row.id);
	bool room = make_room(l);
	for (int i = 0; room && i < MIDTIME_TEXTS; i++)
		room = text_block_add(&l->texts, *text_member(&p.row, i), &p.place[i]);
	if (!room)
		return err_set(e, ST_MEMORY, "database: no memory");
	l->list[l->n++] = p;
	return ST_OK;
}

/* A time that may be wrong would bend a fit: it is named and left out. */
static void note_bad(struct loading *l, int64_t id)
{
	if (l->n_bad++ == 0)
		snprintf(l->bad, sizeof l->bad,
			 "the checksum of mid-time %lld is wrong: left out; see `wane check`", (long long)id);
}

/* target NULL: of all. */
static enum status load_rows(struct loading *l, struct store *s, const int64_t *target, struct err *e)
{
	const enum sql_id id = target ? SQL_MIDTIME_LOAD : SQL_MIDTIMES_BY_ID;
	const struct cell key = cell_int(target ? *target : 0);
	struct cell cell[ROW_CELLS_MAX], mark[ROW_CELLS_MAX];
	bool row = false;
	enum status st = cells_bind(s->stmt[id], 1, &key, target ? 1 : 0, e);
	while (st == ST_OK && (st = sql_step(s, id, &row, e)) == ST_OK && row) {
		if (!row_read(s, id, 0, &midtime_rows, cell) || !row_read(s, id, MARK_AT, &mark_rows, mark)) {
			note_bad(l, sqlite3_column_int64(s->stmt[id], 0));
		} else if (!mark[MARK_REMOVED].u.i) {
			const char *who = (const char *)sqlite3_column_text(s->stmt[id], WHO_AT);
			st = keep(l, cell, mark, who ? who : "", e);
		}
	}
	sql_reset(s, id);
	return st;
}

static int by_time(const void *a, const void *b)
{
	const struct placed *x = a, *y = b;
	if (x->target_id != y->target_id)
		return x->target_id < y->target_id ? -1 : 1;
	if (x->row.epoch != y->row.epoch)
		return x->row.epoch < y->row.epoch ? -1 : 1;
	if (x->row.kind != y->row.kind)
		return x->row.kind < y->row.kind ? -1 : 1;
	double d = jd2_diff_d(jd2_add_d(x->row.mid, x->row.standard.offset_d),
			      jd2_add_d(y->row.mid, y->row.standard.offset_d));
	if (d < 0.0 || d > 0.0)
		return d < 0.0 ? -1 : 1;
	return (x->row.id > y->row.id) - (x->row.id < y->row.id);
}

/* The block has its last size: places become pointers. */
static enum status settle(struct loading *l, struct midtime_list *out, int64_t **target_id, struct err *e)
{
	out->row = malloc((l->n + 1) * sizeof *out->row);
	int64_t *ids = target_id ? malloc((l->n + 1) * sizeof *ids) : NULL;
	if (!out->row || (target_id && !ids)) {
		free(ids);
		return err_set(e, ST_MEMORY, "database: no memory");
	}
	if (l->n > 0)
		qsort(l->list, l->n, sizeof *l->list, by_time);
	for (size_t k = 0; k < l->n; k++) {
		out->row[k] = l->list[k].row;
		for (int i = 0; i < MIDTIME_TEXTS; i++)
			*text_member(&out->row[k], i) = l->texts.text + l->list[k].place[i];
		if (ids)
			ids[k] = l->list[k].target_id;
	}
	out->n = l->n;
	out->n_bad = l->n_bad;
	snprintf(out->bad, sizeof out->bad, "%s", l->bad);
	out->block = l->texts.text;
	l->texts.text = NULL;
	if (target_id)
		*target_id = ids;
	return ST_OK;
}

static enum status load(struct store *s, const int64_t *target, struct midtime_list *out, int64_t **target_id,
			struct err *e)
{
	struct loading l = {0};
	*out = (struct midtime_list){0};
	enum status st = load_rows(&l, s, target, e);
	if (st == ST_OK)
		st = settle(&l, out, target_id, e);
	free(l.list);
	free(l.texts.text);
	if (st != ST_OK)
		midtime_list_free(out);
	return st;
}

enum status midtimes_load(struct store *s, int64_t target_id, struct midtime_list *out, struct err *e)
{
	return load(s, &target_id, out, NULL, e);
}

enum status midtimes_load_all(struct store *s, struct midtime_list *out, int64_t **target_id, struct err *e)
{
	*target_id = NULL;
	return load(s, NULL, out, target_id, e);
}

void midtime_list_free(struct midtime_list *list)
{
	free(list->row);
	free(list->block);
	*list = (struct midtime_list){0};
}

/* --- writing --- */

/* Times of one target, epoch and kind with their marks; the texts of the marks are none, those of the times
 * are not kept. */
struct of_epoch {
	size_t n;
	struct row *mark; /* each n numbers only */
	struct {
		struct standard standard;
		struct jd2 mid;
		double err_d;
	} * time;
};

static void of_epoch_free(struct of_epoch *o)
{
	free(o->mark);
	free(o->time);
}

static enum status keep_of_epoch(struct of_epoch *o, const struct cell *cell, const struct cell *mark,
				 struct err *e)
{
	struct row *marks = realloc(o->mark, (o->n + 1) * sizeof *marks);
	if (marks)
		o->mark = marks;
	void *times = realloc(o->time, (o->n + 1) * sizeof *o->time);
	if (times)
		o->time = times;
	if (!marks || !times)
		return err_set(e, ST_MEMORY, "database: no memory");
	marks[o->n] = (struct row){.n = MARK_CELLS};
	memcpy(marks[o->n].cell, mark, MARK_CELLS * sizeof *mark);
	o->time[o->n].mid = (struct jd2){cell_number(&cell[MIDTIME_DAY]), cell_number(&cell[MIDTIME_FRAC])};
	o->time[o->n].err_d = cell_number(&cell[MIDTIME_ERR]);
	if (standard_parse(cell[MIDTIME_SCALE].u.text, &o->time[o->n].standard, e) != ST_OK)
		return err_set(e, ST_STORE,
			       "database: damaged: the time scale of mid-time %lld can't be read",
			       (long long)cell[0].u.i);
	o->n++;
	return ST_OK;
}

static enum status find_of_epoch(struct store *s, int64_t target_id, long epoch, enum event_kind kind,
				 struct of_epoch *out, struct err *e)
{
	const struct cell key[] = {cell_int(target_id), cell_int(epoch), cell_text(event_kind_word(kind))};
	struct cell cell[ROW_CELLS_MAX], mark[ROW_CELLS_MAX];
	bool row = false;
	*out = (struct of_epoch){0};
	enum status st = cells_bind(s->stmt[SQL_MIDTIME_OF_EPOCH], 1, key, 3, e);
	while (st == ST_OK && (st = sql_step(s, SQL_MIDTIME_OF_EPOCH, &row, e)) == ST_OK && row) {
		if (row_read(s, SQL_MIDTIME_OF_EPOCH, 0, &midtime_rows, cell) &&
		    row_read(s, SQL_MIDTIME_OF_EPOCH, MARK_AT, &mark_rows, mark))
			st = keep_of_epoch(out, cell, mark, e);
		else
			st = err_set(e, ST_STORE,
				     "database: damaged: the checksum of row %lld of table midtime is wrong",
				     (long long)sqlite3_column_int64(s->stmt[SQL_MIDTIME_OF_EPOCH], 0));
	}
	sql_reset(s, SQL_MIDTIME_OF_EPOCH);
	return st;
}

static bool standard_same(const struct standard *a, const struct standard *b)
{
	return a->claim == b->claim && a->origin == b->origin && a->clock == b->clock;
}

static enum status put_mark(struct store *s, const struct row *old, int64_t id, bool used, bool removed,
			    struct err *e)
{
	struct cell cell[ROW_CELLS_MAX] = {cell_int(id)};
	cell[MARK_USED] = cell_int(used);
	cell[MARK_REMOVED] = cell_int(removed);
	return old ? row_replace(s, &mark_rows, old, cell, e) : row_add(s, &mark_rows, cell, e);
}

static enum status add_row(struct store *s, int64_t target_id, const struct midtime_row *row, struct err *e)
{
	char source[MIDTIME_SOURCE_MAX + 1];
	int64_t id = 0;
	(void)text_clean(row->source ? row->source : "", source, sizeof source);
	enum status st = row_next_id(s, &midtime_rows, &id, e);
	struct cell cell[ROW_CELLS_MAX] = {
	    [0] = cell_int(id),
	    [MIDTIME_TARGET] = cell_int(target_id),
	    [MIDTIME_EPOCH] = cell_int(row->epoch),
	    [MIDTIME_KIND] = cell_text(event_kind_word(row->kind)),
	    [MIDTIME_DAY] = cell_real(row->mid.day),
	    [MIDTIME_FRAC] = cell_real(row->mid.frac),
	    [MIDTIME_TEXT] = cell_text(row->mid_text),
	    [MIDTIME_SCALE] = cell_text(row->time_scale ? row->time_scale : ""),
	    [MIDTIME_ERR] = cell_real(row->err_d),
	    [MIDTIME_SOURCE] = cell_text(source),
	    [MIDTIME_ENTERED] = cell_text(s->utc),
	};
	if (st == ST_OK)
		st = row_add(s, &midtime_rows, cell, e);
	return st == ST_OK ? put_mark(s, NULL, id, row->used, false, e) : st;
}

static enum status check_row(struct store *s, int64_t target_id, struct midtime_row *row, struct err *e)
{
	enum midtime_part part;
	struct row target;
	enum status st = row_find(s, SQL_TARGET_BY_ID, cell_int(target_id), &target_table, &target, e);
	if (st == ST_ABSENT || (st == ST_OK && target.cell[TARGET_REMOVED].u.i))
		st = err_set(e, ST_ABSENT, "no such target");
	row_free(&target);
	if (st == ST_OK)
		st = standard_parse(row->time_scale ? row->time_scale : "", &row->standard, e);
	if (st == ST_OK)
		st = midtime_check(row, &part, e);
	if (st == ST_OK && (!row->mid_text || !*row->mid_text || strlen(row->mid_text) > MIDTIME_TEXT_MAX))
		st = err_set(e, ST_SYNTAX, "a mid-time needs its text as read, at most 64 characters");
	row->mid = jd2_normal(row->mid.day, row->mid.frac);
	return st;
}

enum status midtime_add(struct store *s, int64_t target_id, const struct midtime_row *given, bool *added,
			struct err *e)
{
	struct midtime_row row = *given;
	struct of_epoch have = {0};
	*added = false;
	enum status st = check_row(s, target_id, &row, e);
	if (st == ST_OK)
		st = find_of_epoch(s, target_id, row.epoch, row.kind, &have, e);
	bool found = false;
	for (size_t i = 0; st == ST_OK && !found && i < have.n; i++) {
		const double apart_d = 1e-10; /* two offsets of one time; nobody publishes 10 microseconds */
		double d = jd2_diff_d(jd2_add_d(have.time[i].mid, have.time[i].standard.offset_d),
				      jd2_add_d(row.mid, row.standard.offset_d));
		found = fabs(d) < apart_d && have.time[i].err_d == row.err_d &&
			standard_same(&have.time[i].standard, &row.standard);
		if (found && have.mark[i].cell[MARK_REMOVED].u.i) { /* one that was removed comes back */
			st = put_mark(s, &have.mark[i], have.mark[i].cell[0].u.i, row.used, false, e);
			*added = st == ST_OK;
		}
	}
	if (st == ST_OK && !found) {
		st = add_row(s, target_id, &row, e);
		*added = st == ST_OK;
	}
	of_epoch_free(&have);
	return st;
}

static enum status mark_all(struct store *s, int64_t target_id, long epoch, enum event_kind kind, bool used,
			    bool removed, long *n, struct err *e)
{
	struct of_epoch have;
	size_t listed = 0;
	*n = 0;
	enum status st = find_of_epoch(s, target_id, epoch, kind, &have, e);
	for (size_t i = 0; st == ST_OK && i < have.n; i++) {
		const struct cell *mark = have.mark[i].cell;
		bool was_used = mark[MARK_USED].u.i != 0;
		if (mark[MARK_REMOVED].u.i)
			continue;
		listed++;
		if (!removed && was_used == used)
			continue;
		st = put_mark(s, &have.mark[i], mark[0].u.i, removed ? was_used : used, removed, e);
		*n += st == ST_OK;
	}
	of_epoch_free(&have);
	if (st == ST_OK && listed == 0)
		st = err_set(e, ST_ABSENT, "no mid-time of %s %ld is stored",
			     kind == KIND_TRANSIT ? "transit" : "the occultation after transit", epoch);
	return st;
}

enum status midtime_use(struct store *s, int64_t target_id, long epoch, enum event_kind kind, bool used,
			long *n, struct err *e)
{
	return mark_all(s, target_id, epoch, kind, used, false, n, e);
}

enum status midtime_remove(struct store *s, int64_t target_id, long epoch, enum event_kind kind, long *n,
			   struct err *e)
{
	return mark_all(s, target_id, epoch, kind, false, true, n, e);
}
