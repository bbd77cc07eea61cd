/* SPDX-License-Identifier: MIT */
#include "db/allotments.h"

#include "db/row_list.h"
#include "db/telescope_rows.h"
#include "db/text_clean.h"
#include "ephem/timescale.h"

#include <stddef.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

const struct table allotment_rows = {
    .name = "allotment",
    .cells = ALLOTMENT_CELLS,
    .rev_at = ALLOTMENT_REV,
    .change_at = ALLOTMENT_CHANGE,
    .next = SQL_ALLOTMENT_NEXT,
    .add = SQL_ALLOTMENT_ADD,
    .update = SQL_ALLOTMENT_UPDATE,
    .keep_old = SQL_ALLOTMENT_KEEP_OLD,
};
enum { SPAN_CHARS_MAX = 120 };

void night_date_text(int64_t mjd, char out[NIGHT_TEXT_MAX])
{
	out[0] = '\0';
	if (mjd < NIGHT_MJD_MIN || mjd > NIGHT_MJD_MAX) /* of a damaged row */
		return;
	struct date d = date_from_mjd((int32_t)mjd);
	snprintf(out, NIGHT_TEXT_MAX, "%04d-%02d-%02d", d.year % 10000, d.month % 100, d.day % 100);
}

/* --- reading --- */

static void fill(void *element, const struct cell *cell)
{
	struct allotment *a = element;
	*a = (struct allotment){
	    .id = cell[0].u.i,
	    .site_id = cell[ALLOTMENT_SITE].u.i,
	    .telescope_id = id_of_cell(&cell[ALLOTMENT_TELESCOPE]),
	    .first_mjd = (int32_t)cell[ALLOTMENT_FIRST].u.i,
	    .last_mjd = (int32_t)cell[ALLOTMENT_LAST].u.i,
	    .span = cell[ALLOTMENT_SPAN].u.text,
	    .note = cell[ALLOTMENT_NOTE].u.text,
	};
}

static const struct row_kind kind = {
    .table = &allotment_rows,
    .load = SQL_ALLOTMENT_LOAD,
    .word = "allotment",
    .removed_at = ALLOTMENT_REMOVED,
    .size = sizeof(struct allotment),
    .fill = fill,
    .n_texts = 2,
    .text_at = {offsetof(struct allotment, span), offsetof(struct allotment, note)},
};

enum status allotments_load(struct store *s, struct allotment_list *out, struct err *e)
{
	struct row_list l;
	*out = (struct allotment_list){0};
	enum status st = row_list_load(s, &kind, false, &l, out->bad, sizeof out->bad, e);
	out->n = l.n;
	out->allotment = l.row;
	out->block = l.block;
	out->n_bad = l.n_bad;
	return st;
}

void allotment_list_free(struct allotment_list *list)
{
	free(list->allotment);
	free(list->block);
	*list = (struct allotment_list){0};
}

/* --- writing --- */

static enum status check_allotment(struct store *s, const struct allotment *a, struct err *e)
{
	if (a->first_mjd < NIGHT_MJD_MIN || a->last_mjd > NIGHT_MJD_MAX)
		return err_set(e, ST_RANGE, "allotment: not nights of 1900 to 2100");
	if (a->last_mjd < a->first_mjd)
		return err_set(e, ST_RANGE, "allotment: its last night is before its first");
	if (!a->span || !*a->span)
		return err_set(e, ST_SYNTAX,
			       "allotment: no span (got \"\", expected whole, first-half, FROM..TO)");
	enum status st = text_check("span", a->span, SPAN_CHARS_MAX, e);
	if (st == ST_OK)
		st = text_check("note", a->note ? a->note : "", NOTE_CHARS_MAX, e);
	return st == ST_OK ? place_check(s, a->site_id, a->telescope_id, e) : st;
}

enum status allotment_add(struct store *s, const struct allotment *a, int64_t *id, struct err *e)
{
	struct row same;
	enum status st = check_allotment(s, a, e);
	if (st != ST_OK)
		return st;
	const struct cell keys[] = {cell_int(a->site_id), cell_int(a->telescope_id), cell_int(a->first_mjd),
				    cell_int(a->last_mjd), cell_text(a->span)};
	st = row_find_by(s, SQL_ALLOTMENT_SAME, keys, 5, &allotment_rows, &same, e);
	if (st == ST_OK)
		st = err_set(e, ST_CONFLICT, "that time is allotted already, as allotment %lld",
			     (long long)same.cell[0].u.i);
	else if (st == ST_ABSENT)
		st = row_next_id(s, &allotment_rows, id, e);
	row_free(&same);
	if (st != ST_OK)
		return st;
	struct cell cell[ROW_CELLS_MAX] = {
	    [0] = cell_int(*id),
	    [ALLOTMENT_SITE] = cell_int(a->site_id),
	    [ALLOTMENT_TELESCOPE] = cell_id(a->telescope_id),
	    [ALLOTMENT_FIRST] = cell_int(a->first_mjd),
	    [ALLOTMENT_LAST] = cell_int(a->last_mjd),
	    [ALLOTMENT_SPAN] = cell_text(a->span),
	    [ALLOTMENT_NOTE] = cell_text(a->note ? a->note : ""),
	    [ALLOTMENT_REMOVED] = cell_int(0),
	};
	return row_add(s, &allotment_rows, cell, e);
}

enum status allotment_remove(struct store *s, int64_t id, struct err *e)
{
	struct row old;
	enum status st = row_find(s, SQL_ALLOTMENT_BY_ID, cell_int(id), &allotment_rows, &old, e);
	st = row_remove(s, &allotment_rows, ALLOTMENT_REMOVED, st, &old, e);
	return st == ST_ABSENT ? err_set(e, ST_ABSENT, "there is no allotment %lld", (long long)id) : st;
}
