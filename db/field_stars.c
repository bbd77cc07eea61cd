/* SPDX-License-Identifier: MIT */
#include "db/field_stars.h"

#include "db/goal_rows.h"
#include "db/row_list.h"
#include "db/target_rows.h"
#include "db/telescope_rows.h"
#include "db/text_clean.h"

#include <math.h>
#include <stddef.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

const struct table field_star_rows = {
    .name = "field_star",
    .cells = FIELD_STAR_CELLS,
    .rev_at = FIELD_STAR_REV,
    .change_at = FIELD_STAR_CHANGE,
    .next = SQL_FIELD_STAR_NEXT,
    .add = SQL_FIELD_STAR_ADD,
    .update = SQL_FIELD_STAR_UPDATE,
    .keep_old = SQL_FIELD_STAR_KEEP_OLD,
};
const char *const field_star_words[STAR_ROLE_COUNT] = {"comparison", "guide", "neighbour"};
enum { STAR_NAME_CHARS_MAX = 80 };

static enum field_star_role role_of(const char *word)
{
	for (int k = 0; k < STAR_ROLE_COUNT; k++)
		if (strcmp(field_star_words[k], word) == 0)
			return (enum field_star_role)k;
	return STAR_NEIGHBOUR; /* the schema allows no other word */
}

int field_stars_max(const char *role)
{
	static const int most[STAR_ROLE_COUNT] = {COMPARISON_STARS_MAX, GUIDE_STARS_MAX, NEIGHBOUR_STARS_MAX};
	return most[role_of(role)];
}

/* --- reading --- */

static void fill(void *element, const struct cell *cell)
{
	struct field_star *f = element;
	*f = (struct field_star){
	    .id = cell[0].u.i,
	    .target_id = cell[FIELD_STAR_TARGET].u.i,
	    .role = role_of(cell[FIELD_STAR_ROLE].u.text),
	    .name = cell[FIELD_STAR_NAME].u.text,
	    .ra_deg = cell_number(&cell[FIELD_STAR_RA]),
	    .dec_deg = cell_number(&cell[FIELD_STAR_DEC]),
	    .sep_arcsec = cell_number(&cell[FIELD_STAR_SEP]),
	    .mag = cell_number(&cell[FIELD_STAR_MAG]),
	    .band = cell[FIELD_STAR_BAND].u.text,
	    .note = cell[FIELD_STAR_NOTE].u.text,
	};
}

static const struct row_kind kind = {
    .table = &field_star_rows,
    .load = SQL_FIELD_STAR_LOAD,
    .word = "star",
    .removed_at = FIELD_STAR_REMOVED,
    .size = sizeof(struct field_star),
    .fill = fill,
    .n_texts = 3,
    .text_at = {offsetof(struct field_star, name), offsetof(struct field_star, band),
		offsetof(struct field_star, note)},
};

enum status field_stars_load(struct store *s, struct field_star_list *out, struct err *e)
{
	struct row_list l;
	*out = (struct field_star_list){0};
	enum status st = row_list_load(s, &kind, false, &l, out->bad, sizeof out->bad, e);
	out->n = l.n;
	out->star = l.row;
	out->block = l.block;
	out->n_bad = l.n_bad;
	return st;
}

void field_star_list_free(struct field_star_list *list)
{
	free(list->star);
	free(list->block);
	*list = (struct field_star_list){0};
}

const struct field_star *field_stars_of(const struct field_star_list *list, int64_t target_id, size_t *n)
{
	return row_list_of(list->star, list->n, sizeof *list->star, offsetof(struct field_star, target_id),
			   target_id, n);
}

/* --- writing --- */

/* A position for all but neighbours, which may have a distance in its place. Written so that NAN is refused.
 */
static enum status check_place(const struct field_star *f, struct err *e)
{
	if (f->role == STAR_NEIGHBOUR && !isnan(f->sep_arcsec)) {
		if (f->sep_arcsec >= 0.0 && f->sep_arcsec <= STAR_SEP_MAX_ARCSEC && isnan(f->ra_deg) &&
		    isnan(f->dec_deg))
			return ST_OK;
		return err_set(
		    e, ST_RANGE,
		    "star: its distance is out of range (got \"%g\", expected 0 to %g arcsec and no "
		    "position with it)",
		    f->sep_arcsec, STAR_SEP_MAX_ARCSEC);
	}
	if (f->ra_deg >= 0.0 && f->ra_deg < 360.0 && f->dec_deg >= -90.0 && f->dec_deg <= 90.0 &&
	    isnan(f->sep_arcsec))
		return ST_OK;
	return err_set(e, ST_RANGE,
		       "star: no position (got \"%g,%g\", expected RA 0 to 360, DEC -90 to 90 deg)",
		       f->ra_deg, f->dec_deg);
}

static enum status check_star(const struct field_star *f, struct err *e)
{
	if ((unsigned)f->role >= STAR_ROLE_COUNT)
		return err_set(e, ST_RANGE,
			       "star: no such role (got \"%d\", expected comparison, guide or neighbour)",
			       (int)f->role);
	if (!(f->mag >= -5.0 && f->mag <= 40.0))
		return err_set(e, ST_RANGE, "mag: out of range (got \"%g\", expected -5 to 40)", f->mag);
	enum status st = check_place(f, e);
	if (st == ST_OK)
		st = text_check("name", f->name ? f->name : "", STAR_NAME_CHARS_MAX, e);
	return st == ST_OK ? text_check("note", f->note ? f->note : "", NOTE_CHARS_MAX, e) : st;
}

enum status field_stars_count(struct store *s, int64_t target_id, const char *role, int64_t but,
			      const struct cell *cell, int *n, bool *same, struct err *e)
{
	const struct cell key = cell_int(target_id);
	struct cell other[ROW_CELLS_MAX];
	bool row = false;
	*n = 0;
	*same = false;
	enum status st = cells_bind(s->stmt[SQL_FIELD_STARS_OF_TARGET], 1, &key, 1, e);
	while (st == ST_OK && (st = sql_step(s, SQL_FIELD_STARS_OF_TARGET, &row, e)) == ST_OK && row) {
		cells_read(s->stmt[SQL_FIELD_STARS_OF_TARGET], 0, other, FIELD_STAR_CELLS);
		if (other[0].u.i == but || other[FIELD_STAR_ROLE].type != CELL_TEXT ||
		    strcmp(other[FIELD_STAR_ROLE].u.text, role) != 0)
			continue;
		(*n)++;
		*same = *same || (cell && cells_same(&other[FIELD_STAR_RA], &cell[FIELD_STAR_RA], 3) &&
				  cells_same(&other[FIELD_STAR_BAND], &cell[FIELD_STAR_BAND], 1));
	}
	sql_reset(s, SQL_FIELD_STARS_OF_TARGET);
	return st;
}

static enum status room_check(struct store *s, const struct field_star *f, const struct cell *cell,
			      struct err *e)
{
	const char *role = field_star_words[f->role];
	int n;
	bool same;
	enum status st = field_stars_count(s, f->target_id, role, 0, cell, &n, &same, e);
	if (st == ST_OK && same)
		return err_set(e, ST_CONFLICT, "that %s is there already", role);
	if (st == ST_OK && n >= field_stars_max(role))
		return err_set(e, ST_CONFLICT, "the target has %d of role %s already (expected at most %d)",
			       n, role, field_stars_max(role));
	return st;
}

enum status field_star_add(struct store *s, const struct field_star *f, int64_t *id, struct err *e)
{
	const char *band = "";
	enum status st = check_star(f, e);
	if (st == ST_OK)
		st = band_check(f->band ? f->band : "", &band, e);
	if (st == ST_OK)
		st = target_check(s, f->target_id, e);
	if (st != ST_OK)
		return st;
	struct cell cell[ROW_CELLS_MAX] = {
	    [FIELD_STAR_TARGET] = cell_int(f->target_id),
	    [FIELD_STAR_ROLE] = cell_text(field_star_words[f->role]),
	    [FIELD_STAR_NAME] = cell_text(f->name ? f->name : ""),
	    [FIELD_STAR_RA] = cell_real(f->ra_deg),
	    [FIELD_STAR_DEC] = cell_real(f->dec_deg),
	    [FIELD_STAR_SEP] = cell_real(f->sep_arcsec),
	    [FIELD_STAR_MAG] = cell_real(f->mag),
	    [FIELD_STAR_BAND] = cell_text(band),
	    [FIELD_STAR_NOTE] = cell_text(f->note ? f->note : ""),
	    [FIELD_STAR_REMOVED] = cell_int(0),
	};
	st = room_check(s, f, cell, e);
	if (st == ST_OK)
		st = row_next_id(s, &field_star_rows, id, e);
	cell[0] = cell_int(*id);
	return st == ST_OK ? row_add(s, &field_star_rows, cell, e) : st;
}

enum status field_star_remove(struct store *s, int64_t id, struct err *e)
{
	struct row old;
	enum status st = row_find(s, SQL_FIELD_STAR_BY_ID, cell_int(id), &field_star_rows, &old, e);
	st = row_remove(s, &field_star_rows, FIELD_STAR_REMOVED, st, &old, e);
	return st == ST_ABSENT ? err_set(e, ST_ABSENT, "there is no star %lld", (long long)id) : st;
}
