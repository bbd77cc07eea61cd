/* SPDX-License-Identifier: MIT
 * Versions of a target's ephemeris: only ever added to. */
#include "db/target_rows.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

bool texts_have(const struct field_texts *texts, enum field_home home)
{
	for (int i = 0; i < FIELD_COUNT; i++)
		if (fields[i].home == home && *texts->text[i])
			return true;
	return false;
}

bool cells_same(const struct cell *a, const struct cell *b, size_t n)
{
	for (size_t i = 0; i < n; i++) {
		if (a[i].type != b[i].type)
			return false;
		switch (a[i].type) {
		case CELL_NULL:
			break;
		case CELL_INT:
			if (a[i].u.i != b[i].u.i)
				return false;
			break;
		case CELL_REAL:
			if (a[i].u.r != b[i].u.r)
				return false;
			break;
		case CELL_TEXT:
			if (strcmp(a[i].u.text, b[i].u.text) != 0)
				return false;
			break;
		}
	}
	return true;
}

bool doubts_same(uint64_t doubts, const char *as_read_a, const char *as_read_b)
{
	for (int i = 0; i < FIELD_COUNT; i++) {
		char a[DOUBT_TEXT_MAX] = "", b[DOUBT_TEXT_MAX] = "";
		if (!(doubts >> i & 1))
			continue;
		(void)as_read_find(as_read_a, i, a);
		(void)as_read_find(as_read_b, i, b);
		if (strcmp(a, b) != 0)
			return false;
	}
	return true;
}

/* The bits of the doubts that belong to one home. */
static uint64_t doubts_of(uint64_t doubts, enum field_home home)
{
	for (int i = 0; i < FIELD_COUNT; i++)
		if (fields[i].home != home)
			doubts &= ~(UINT64_C(1) << i);
	return doubts;
}

enum status ephemeris_add(struct store *s, int64_t id, int64_t target_id, int64_t version,
			  const struct reading *r, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX];
	char as_read[AS_READ_MAX];
	as_read_make(&r->own.texts, &r->t, r->doubts, HOME_EPHEMERIS, as_read);
	cell[0] = cell_int(id);
	cell[EPHEMERIS_TARGET] = cell_int(target_id);
	cell[EPHEMERIS_VERSION] = cell_int(version);
	cells_from_fields(&r->t, HOME_EPHEMERIS, cell + EPHEMERIS_FIELDS);
	cell[EPHEMERIS_ENTERED] = cell_text(s->utc);
	cell[EPHEMERIS_AS_READ] = cell_text(as_read);
	cell[EPHEMERIS_DOUBTS] = cell_int((int64_t)doubts_of(r->doubts, HOME_EPHEMERIS));
	return row_add(s, &ephemeris_table, cell, e);
}

enum status ephemeris_take(struct store *s, int64_t target_id, const struct reading *r, int64_t *id,
			   bool *made, struct err *e)
{
	struct cell want[ROW_CELLS_MAX], have[ROW_CELLS_MAX], key = cell_int(target_id);
	char as_read[AS_READ_MAX];
	int64_t version = 1, doubts = (int64_t)doubts_of(r->doubts, HOME_EPHEMERIS);
	bool row = false, same = false;
	cells_from_fields(&r->t, HOME_EPHEMERIS, want);
	as_read_make(&r->own.texts, &r->t, r->doubts, HOME_EPHEMERIS, as_read);
	enum status st = cells_bind(s->stmt[SQL_EPHEMERIS_OF_TARGET], 1, &key, 1, e);
	while (st == ST_OK && !same && (st = sql_step(s, SQL_EPHEMERIS_OF_TARGET, &row, e)) == ST_OK && row) {
		if (!row_read(s, SQL_EPHEMERIS_OF_TARGET, 0, &ephemeris_table, have)) {
			st =
			    err_set(e, ST_STORE,
				    "database: damaged: the checksum of row %lld of table ephemeris is wrong",
				    (long long)sqlite3_column_int64(s->stmt[SQL_EPHEMERIS_OF_TARGET], 0));
			break;
		}
		same = cells_same(want, have + EPHEMERIS_FIELDS, EPHEMERIS_ENTERED - EPHEMERIS_FIELDS) &&
		       have[EPHEMERIS_DOUBTS].u.i == doubts &&
		       doubts_same((uint64_t)doubts, as_read, have[EPHEMERIS_AS_READ].u.text);
		*id = have[0].u.i;
		version = have[EPHEMERIS_VERSION].u.i + 1;
	}
	sql_reset(s, SQL_EPHEMERIS_OF_TARGET);
	*made = !same;
	if (st != ST_OK || same)
		return st;
	st = row_next_id(s, &ephemeris_table, id, e);
	return st == ST_OK ? ephemeris_add(s, *id, target_id, version, r, e) : st;
}

/* --- for people --- */

static void fill(struct ephemeris_row *out, const struct cell *cell, int64_t current)
{
	struct row_texts own;
	row_texts_clear(&own);
	row_texts_of_cells(&own, cell, HOME_EPHEMERIS);
	struct target t = target_empty();
	fields_from_cells(cell + EPHEMERIS_FIELDS, HOME_EPHEMERIS, &t);
	*out = (struct ephemeris_row){
	    .id = cell[0].u.i,
	    .version = (int)cell[EPHEMERIS_VERSION].u.i,
	    .current = cell[0].u.i == current,
	    .t0_err_d = t.t0_err_d,
	    .period_err_d = t.period_err_d,
	    .t0_period_cov_d2 = t.t0_period_cov_d2,
	    .dpde_d = t.dpde_d,
	    .dpde_err_d = t.dpde_err_d,
	    .ttv_amp_min = t.ttv_amp_min,
	    .t0_dpde_cov_d2 = t.t0_dpde_cov_d2,
	    .period_dpde_cov_d2 = t.period_dpde_cov_d2,
	};
	snprintf(out->source, sizeof out->source, "%s", t.source);
	snprintf(out->entered_utc, sizeof out->entered_utc, "%s", cell[EPHEMERIS_ENTERED].u.text);
	snprintf(out->t0_text, sizeof out->t0_text, "%s", own.texts.text[FIELD_AT_T0]);
	snprintf(out->scale, sizeof out->scale, "%s", t.time_scale);
	snprintf(out->period_text, sizeof out->period_text, "%s", own.texts.text[FIELD_AT_PERIOD]);
}

static enum status who_did(struct store *s, int64_t change, char *who, size_t size, struct err *e)
{
	struct cell key = cell_int(change);
	bool row = false;
	enum status st = cells_bind(s->stmt[SQL_CHANGE_OF_EPHEMERIS], 1, &key, 1, e);
	if (st == ST_OK)
		st = sql_step(s, SQL_CHANGE_OF_EPHEMERIS, &row, e);
	const char *text =
	    row ? (const char *)sqlite3_column_text(s->stmt[SQL_CHANGE_OF_EPHEMERIS], 0) : NULL;
	snprintf(who, size, "%s", text ? text : "");
	sql_reset(s, SQL_CHANGE_OF_EPHEMERIS);
	return st;
}

static enum status current_of(struct store *s, int64_t target_id, int64_t *current, struct err *e)
{
	struct row target;
	*current = 0;
	enum status st = row_find(s, SQL_TARGET_BY_ID, cell_int(target_id), &target_table, &target, e);
	if (st == ST_ABSENT)
		return err_set(e, ST_ABSENT, "no such target");
	if (st == ST_OK && target.cell[TARGET_EPHEMERIS].type == CELL_INT)
		*current = target.cell[TARGET_EPHEMERIS].u.i;
	row_free(&target);
	return st;
}

enum status ephemeris_versions(struct store *s, int64_t target_id, struct ephemeris_row **out, size_t *n,
			       struct err *e)
{
	int64_t current;
	bool row = false;
	struct cell key = cell_int(target_id), cell[ROW_CELLS_MAX];
	*out = NULL;
	*n = 0;
	enum status st = current_of(s, target_id, &current, e);
	if (st == ST_OK)
		st = cells_bind(s->stmt[SQL_EPHEMERIS_OF_TARGET], 1, &key, 1, e);
	while (st == ST_OK && (st = sql_step(s, SQL_EPHEMERIS_OF_TARGET, &row, e)) == ST_OK && row) {
		if (!row_read(s, SQL_EPHEMERIS_OF_TARGET, 0, &ephemeris_table, cell))
			continue; /* damaged: named by the check, shown by nobody */
		struct ephemeris_row *larger = realloc(*out, (*n + 1) * sizeof **out);
		if (!larger) {
			st = err_set(e, ST_MEMORY, "database: no memory");
			break;
		}
		*out = larger;
		fill(&larger[*n], cell, current);
		st = who_did(s, cell[EPHEMERIS_CHANGE].u.i, larger[*n].who, sizeof larger[*n].who, e);
		(*n)++;
	}
	sql_reset(s, SQL_EPHEMERIS_OF_TARGET);
	if (st != ST_OK) {
		free(*out);
		*out = NULL;
		*n = 0;
	}
	return st;
}
