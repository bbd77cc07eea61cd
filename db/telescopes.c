/* SPDX-License-Identifier: MIT */
#include "db/telescopes.h"

#include "db/row_list.h"
#include "db/site_rows.h"
#include "db/target_rows.h"
#include "db/telescope_rows.h"
#include "db/text_clean.h"

#include <math.h>
#include <stddef.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

const struct table telescope_rows = {
    .name = "telescope",
    .cells = TELESCOPE_CELLS,
    .rev_at = TELESCOPE_REV,
    .change_at = TELESCOPE_CHANGE,
    .next = SQL_TELESCOPE_NEXT,
    .add = SQL_TELESCOPE_ADD,
    .update = SQL_TELESCOPE_UPDATE,
    .keep_old = SQL_TELESCOPE_KEEP_OLD,
};

struct cell cell_id(int64_t id)
{
	return id ? cell_int(id) : (struct cell){.type = CELL_NULL};
}

int64_t id_of_cell(const struct cell *c)
{
	return c->type == CELL_INT ? c->u.i : 0;
}

enum status place_check(struct store *s, int64_t site_id, int64_t telescope_id, struct err *e)
{
	struct row row;
	enum status st = row_find(s, SQL_SITE_BY_ID, cell_int(site_id), &site_table, &row, e);
	if (st == ST_ABSENT || (st == ST_OK && row.cell[SITE_REMOVED].u.i))
		st = err_set(e, ST_ABSENT, "no such site");
	row_free(&row);
	if (st != ST_OK || telescope_id == 0)
		return st;
	st = row_find(s, SQL_TELESCOPE_BY_ID, cell_int(telescope_id), &telescope_rows, &row, e);
	if (st == ST_ABSENT ||
	    (st == ST_OK && (row.cell[TELESCOPE_REMOVED].u.i || row.cell[TELESCOPE_SITE].u.i != site_id)))
		st = err_set(e, ST_ABSENT, "no such telescope at that site");
	row_free(&row);
	return st;
}

/* --- cells of the fields --- */

static void cells_from_telescope(const struct telescope *t, struct cell *cell)
{
	for (size_t i = 0; i < telescope_field_count; i++) {
		const struct telescope_field *f = &telescope_fields[i];
		const void *member = (const char *)t + f->offset;
		if (f->type == TELESCOPE_NUMBER)
			cell[i] = cell_real(*(const double *)member);
		else if (f->type == TELESCOPE_MOUNT)
			cell[i] = cell_text(mount_words[*(const enum mount_kind *)member]);
		else
			cell[i] = cell_text(*(const char *const *)member);
	}
}

/* Texts are borrowed from the cells. */
static struct telescope telescope_of_cells(const struct cell *cell)
{
	struct telescope t = telescope_empty();
	t.id = cell[0].u.i;
	t.site_id = cell[TELESCOPE_SITE].u.i;
	t.name = cell[TELESCOPE_NAME].u.text;
	for (size_t i = 0; i < telescope_field_count; i++) {
		const struct telescope_field *f = &telescope_fields[i];
		const struct cell *c = &cell[TELESCOPE_FIELDS + i];
		void *member = (char *)&t + f->offset;
		if (f->type == TELESCOPE_NUMBER)
			*(double *)member = cell_number(c);
		else if (f->type == TELESCOPE_TEXT)
			*(const char **)member = c->u.text;
		else
			for (int k = MOUNT_UNKNOWN; k <= MOUNT_ALTAZ; k++)
				if (strcmp(mount_words[k], c->u.text) == 0)
					*(enum mount_kind *)member = (enum mount_kind)k;
	}
	return t;
}

/* --- reading --- */

static void fill(void *element, const struct cell *cell)
{
	struct telescope *t = element;
	*t = telescope_of_cells(cell);
}

/* A telescope that may be wrong would give wrong limits: it is named and left out. */
static const struct row_kind kind = {
    .table = &telescope_rows,
    .load = SQL_TELESCOPE_LOAD,
    .word = "telescope",
    .removed_at = TELESCOPE_REMOVED,
    .name_at = TELESCOPE_NAME,
    .size = sizeof(struct telescope),
    .fill = fill,
    .n_texts = 4,
    .text_at = {offsetof(struct telescope, name), offsetof(struct telescope, band),
		offsetof(struct telescope, blocks), offsetof(struct telescope, note)},
};

static enum status load(struct store *s, bool removed, struct telescope_list *out, struct err *e)
{
	struct row_list l;
	*out = (struct telescope_list){0};
	enum status st = row_list_load(s, &kind, removed, &l, out->bad, sizeof out->bad, e);
	out->n = l.n;
	out->telescope = l.row;
	out->block = l.block;
	out->n_bad = l.n_bad;
	return st;
}

enum status telescopes_load(struct store *s, struct telescope_list *out, struct err *e)
{
	return load(s, false, out, e);
}

enum status telescopes_load_removed(struct store *s, struct telescope_list *out, struct err *e)
{
	return load(s, true, out, e);
}

void telescope_list_free(struct telescope_list *list)
{
	free(list->telescope);
	free(list->block);
	*list = (struct telescope_list){0};
}

long telescope_list_find(const struct telescope_list *list, int64_t site_id, const char *name)
{
	char key[NAME_KEY_MAX], other[NAME_KEY_MAX];
	name_key(name, key);
	for (size_t i = 0; i < list->n; i++) {
		name_key(list->telescope[i].name, other);
		if (list->telescope[i].site_id == site_id && strcmp(key, other) == 0)
			return (long)i;
	}
	return -1;
}

/* --- writing --- */

static enum status check_telescope(const struct telescope *t, struct err *e)
{
	if ((unsigned)t->mount > MOUNT_ALTAZ)
		return err_set(e, ST_RANGE, "mount: unknown (got \"%d\", expected german, fork or altaz)",
			       (int)t->mount);
	for (size_t i = 0; i < telescope_field_count; i++) {
		const struct telescope_field *f = &telescope_fields[i];
		const void *member = (const char *)t + f->offset;
		enum status st = ST_OK;
		if (f->type == TELESCOPE_TEXT) {
			st = text_check(f->name, *(const char *const *)member, (size_t)f->max, e);
		} else if (f->type == TELESCOPE_NUMBER) {
			double value = *(const double *)member;
			if (!isnan(value) && !(value >= f->min && value <= f->max))
				st = err_set(
				    e, ST_RANGE, "%s: outside %g..%g (got \"%g\", expected a number in %s)",
				    f->name, f->min, f->max, value, *f->unit ? f->unit : "that range");
		}
		if (st != ST_OK)
			return st;
	}
	if (t->alt_min_deg >= t->alt_max_deg)
		return err_set(
		    e, ST_RANGE,
		    "alt_min_deg: nothing is left between it and alt_max_deg (got \"%g\", expected "
		    "below %g deg)",
		    t->alt_min_deg, t->alt_max_deg);
	return ST_OK;
}

static enum status find_telescope(struct store *s, int64_t site_id, const char *name, struct row *out,
				  struct err *e)
{
	char key[NAME_KEY_MAX];
	name_key(name, key);
	const struct cell keys[] = {cell_int(site_id), cell_text(key)};
	return row_find_by(s, SQL_TELESCOPE_BY_KEY, keys, 2, &telescope_rows, out, e);
}

enum status telescope_put(struct store *s, const struct telescope *t, bool add, struct err *e)
{
	struct row old;
	char key[NAME_KEY_MAX], name[NAME_BYTES_MAX];
	const char *start = t->name;
	size_t n = strlen(t->name);
	enum status st = name_check(t->name, n, NULL, e);
	if (st == ST_OK)
		st = check_telescope(t, e);
	if (st == ST_OK)
		st = place_check(s, t->site_id, 0, e);
	if (st != ST_OK)
		return st;
	text_trim(&start, &n);
	snprintf(name, sizeof name, "%.*s", (int)n, start);
	name_key(name, key);
	st = find_telescope(s, t->site_id, name, &old, e);
	bool there = st == ST_OK && !old.cell[TELESCOPE_REMOVED].u.i;
	if (there && add)
		st = err_set(e, ST_CONFLICT, "a telescope of that site is called \"%s\" already",
			     old.cell[TELESCOPE_NAME].u.text);
	struct cell cell[ROW_CELLS_MAX] = {
	    [TELESCOPE_SITE] = cell_int(t->site_id),
	    [TELESCOPE_NAME] = cell_text(name),
	    [TELESCOPE_KEY] = cell_text(key),
	    [TELESCOPE_REMOVED] = cell_int(0),
	};
	cells_from_telescope(t, &cell[TELESCOPE_FIELDS]);
	return row_put(s, &telescope_rows, TELESCOPE_REMOVED, st, &old, cell, e);
}

enum status telescope_remove(struct store *s, int64_t site_id, const char *name, struct err *e)
{
	struct row old;
	enum status st = find_telescope(s, site_id, name, &old, e);
	st = row_remove(s, &telescope_rows, TELESCOPE_REMOVED, st, &old, e);
	if (st == ST_ABSENT) {
		char clean[128];
		(void)text_clean(name, clean, sizeof clean);
		st = err_set(e, ST_ABSENT, "no telescope of that site is called \"%s\"", clean);
	}
	return st;
}
