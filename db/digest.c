/* SPDX-License-Identifier: MIT
 * One number for everything that lists show: the 128-bit FNV-1a hash (Fowler, Noll & Vo; the constants of
 * draft-eastlake-fnv) over the cells of every listed row. */
#include "db/history.h"

#include "db/goal_rows.h"
#include "db/midtime_rows.h"
#include "db/plan_rows.h"
#include "db/site_rows.h"
#include "db/target_rows.h"
#include "db/telescope_rows.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

struct hash {
	uint64_t high, low;
};

/* times 2^88 + 0x13B, modulo 2^128 */
static void hash_byte(struct hash *h, unsigned char byte)
{
	const uint64_t small = 0x13B;
	uint64_t low = h->low ^ byte;
	uint64_t a = (low & 0xFFFFFFFFu) * small, b = (low >> 32) * small + (a >> 32);
	h->high = h->high * small + (b >> 32) + (low << 24);
	h->low = b << 32 | (a & 0xFFFFFFFFu);
}

static void hash_number(struct hash *h, uint64_t value)
{
	for (int i = 0; i < 8; i++)
		hash_byte(h, (unsigned char)(value >> 8 * i));
}

static void hash_cell(struct hash *h, const struct cell *c)
{
	uint64_t bits = 0;
	hash_byte(h, (unsigned char)c->type);
	if (c->type == CELL_INT)
		bits = (uint64_t)c->u.i;
	else if (c->type == CELL_REAL)
		memcpy(&bits, &c->u.r, sizeof bits);
	else if (c->type == CELL_TEXT)
		bits = (uint64_t)c->length;
	hash_number(h, bits);
	for (int i = 0; c->type == CELL_TEXT && i < c->length; i++)
		hash_byte(h, (unsigned char)c->u.text[i]);
}

/* All but rev and change: those two tell how often a row was written, not what it says. */
static void hash_row(struct hash *h, const struct cell *cell, const struct table *t)
{
	for (size_t i = 0; i < t->cells; i++)
		if (i != t->rev_at && i != t->change_at)
			hash_cell(h, &cell[i]);
}

static enum status damaged(struct store *s, enum sql_id id, const struct table *t, struct err *e)
{
	return err_set(e, ST_STORE, "database: damaged: the checksum of row %lld of table %s is wrong",
		       (long long)sqlite3_column_int64(s->stmt[id], 0), t->name);
}

/* Ids of the listed targets; others' aliases and mid-times are in no list. */
struct listed {
	int64_t *id;
	size_t n, room;
};

static int by_id(const void *a, const void *b)
{
	int64_t x = *(const int64_t *)a, y = *(const int64_t *)b;
	return (x > y) - (x < y);
}

static bool is_listed(const struct listed *l, int64_t id)
{
	return l->n > 0 && bsearch(&id, l->id, l->n, sizeof id, by_id);
}

static bool note_listed(struct listed *l, int64_t id)
{
	if (l->n == l->room) {
		size_t room = l->room ? 2 * l->room : 256;
		int64_t *larger = realloc(l->id, room * sizeof *larger);
		if (!larger)
			return false;
		l->id = larger;
		l->room = room;
	}
	l->id[l->n++] = id;
	return true;
}

static enum status hash_targets(struct store *s, struct hash *h, struct listed *l, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX], ephemeris[ROW_CELLS_MAX];
	bool row = false;
	enum status st = ST_OK;
	while (st == ST_OK && (st = sql_step(s, SQL_TARGET_LOAD, &row, e)) == ST_OK && row) {
		if (!row_read(s, SQL_TARGET_LOAD, 0, &target_table, cell))
			st = damaged(s, SQL_TARGET_LOAD, &target_table, e);
		if (st != ST_OK || cell[TARGET_REMOVED].u.i)
			continue;
		hash_row(h, cell, &target_table);
		if (!note_listed(l, cell[0].u.i))
			st = err_set(e, ST_MEMORY, "database: no memory");
		if (st != ST_OK || cell[TARGET_EPHEMERIS].type != CELL_INT)
			continue;
		if (row_read(s, SQL_TARGET_LOAD, TARGET_CELLS + 1, &ephemeris_table, ephemeris))
			hash_row(h, ephemeris, &ephemeris_table);
		else
			st = err_set(e, ST_STORE, "database: damaged: the checksum of an ephemeris is wrong");
	}
	sql_reset(s, SQL_TARGET_LOAD);
	if (st == ST_OK && l->n > 0)
		qsort(l->id, l->n, sizeof *l->id, by_id);
	return st;
}

/* removed_at of rows that are never removed. */
enum { NOWHERE = ROW_CELLS_MAX };

/* Rows that hang on a target (of_target: where its id stands), or on none (0). */
static enum status hash_rows(struct store *s, struct hash *h, const struct listed *l, enum sql_id id,
			     const struct table *t, size_t removed_at, size_t of_target, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX];
	bool row = false;
	enum status st = ST_OK;
	while (st == ST_OK && (st = sql_step(s, id, &row, e)) == ST_OK && row) {
		if (!row_read(s, id, 0, t, cell))
			st = damaged(s, id, t, e);
		else if ((removed_at == NOWHERE || !cell[removed_at].u.i) &&
			 (!of_target || is_listed(l, cell[of_target].u.i)))
			hash_row(h, cell, t);
	}
	sql_reset(s, id);
	return st;
}

static enum status hash_midtimes(struct store *s, struct hash *h, const struct listed *l, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX], mark[ROW_CELLS_MAX];
	bool row = false;
	enum status st = ST_OK;
	while (st == ST_OK && (st = sql_step(s, SQL_MIDTIMES_BY_ID, &row, e)) == ST_OK && row) {
		if (!row_read(s, SQL_MIDTIMES_BY_ID, 0, &midtime_rows, cell) ||
		    !row_read(s, SQL_MIDTIMES_BY_ID, MIDTIME_CELLS + 1, &mark_rows, mark)) {
			st = damaged(s, SQL_MIDTIMES_BY_ID, &midtime_rows, e);
		} else if (!mark[MARK_REMOVED].u.i && is_listed(l, cell[MIDTIME_TARGET].u.i)) {
			hash_row(h, cell, &midtime_rows);
			hash_row(h, mark, &mark_rows);
		}
	}
	sql_reset(s, SQL_MIDTIMES_BY_ID);
	return st;
}

/* What hangs on no target (of_target 0), or on one by the id that stands there. */
static const struct {
	enum sql_id id;
	const struct table *table;
	size_t removed_at, of_target;
} others[] = {
    {SQL_SITE_LOAD, &site_table, SITE_REMOVED, 0},
    {SQL_TELESCOPE_LOAD, &telescope_rows, TELESCOPE_REMOVED, 0},
    {SQL_ALLOTMENT_LOAD, &allotment_rows, ALLOTMENT_REMOVED, 0},
    {SQL_ALL_SETTINGS, &setting_rows, SETTING_REMOVED, 0},
    {SQL_ALL_PLANS, &plan_rows, PLAN_REMOVED, 0},
    {SQL_HELD_EDITIONS, &edition_rows, NOWHERE, 0},
    {SQL_HELD_ITEMS, &item_rows, NOWHERE, 0},
    {SQL_HELD_WINDOWS, &window_rows, NOWHERE, 0},
    {SQL_HELD_PLAN_MARKS, &plan_mark_rows, PLAN_MARK_REMOVED, 0},
    {SQL_GOAL_LOAD, &goal_rows, GOAL_REMOVED, GOAL_TARGET},
    {SQL_FIELD_STAR_LOAD, &field_star_rows, FIELD_STAR_REMOVED, FIELD_STAR_TARGET},
};

enum status store_digest(struct store *s, char out[33], struct err *e)
{
	struct hash h = {0x6C62272E07BB0142u, 0x62B821756295C58Du};
	struct listed l = {0};
	enum status st = hash_targets(s, &h, &l, e);
	if (st == ST_OK)
		st = hash_rows(s, &h, &l, SQL_ALIAS_LOAD, &alias_table, ALIAS_REMOVED, ALIAS_TARGET, e);
	if (st == ST_OK)
		st = hash_midtimes(s, &h, &l, e);
	for (size_t i = 0; st == ST_OK && i < sizeof others / sizeof others[0]; i++)
		st = hash_rows(s, &h, &l, others[i].id, others[i].table, others[i].removed_at,
			       others[i].of_target, e);
	free(l.id);
	snprintf(out, 33, "%016llx%016llx", (unsigned long long)h.high, (unsigned long long)h.low);
	return st;
}
