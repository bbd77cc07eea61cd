/* SPDX-License-Identifier: MIT */
#include "db/store_parts.h"

#include "db/target_rows.h"

#include <stdlib.h>
#include <string.h>

const char *store_where(const struct store *s)
{
	const char *path = s->db ? sqlite3_db_filename(s->db, "main") : NULL;
	if (s->copy_of)
		return s->copy_of;
	return path && *path ? path : "database";
}

enum status store_fault(const struct store *s, int rc, struct err *e)
{
	switch (rc & 0xFF) {
	case SQLITE_NOMEM:
		return err_set(e, ST_MEMORY, "database: no memory");
	case SQLITE_BUSY:
	case SQLITE_LOCKED:
		return err_set(e, ST_STORE, "%.300s: another program is writing to it (waited 5 s)",
			       store_where(s));
	case SQLITE_FULL:
		return err_set(e, ST_STORE, "%.300s: no space left where it lies", store_where(s));
	case SQLITE_READONLY:
		return err_set(e, ST_STORE, "%.300s: it or its folder can't be written", store_where(s));
	case SQLITE_CORRUPT:
	case SQLITE_NOTADB:
		return err_set(e, ST_STORE, "%.300s: damaged: %s", store_where(s), sqlite3_errmsg(s->db));
	default:
		return err_set(e, ST_STORE, "%.300s: %s (code %d)", store_where(s), sqlite3_errmsg(s->db),
			       rc);
	}
}

enum status sql_step(struct store *s, enum sql_id id, bool *row, struct err *e)
{
	int rc = sqlite3_step(s->stmt[id]);
	*row = rc == SQLITE_ROW;
	if (rc == SQLITE_ROW || rc == SQLITE_DONE)
		return ST_OK;
	return store_fault(s, sqlite3_extended_errcode(s->db), e);
}

void sql_reset(struct store *s, enum sql_id id)
{
	/* the result of a reset repeats that of the step before, which was looked at */
	(void)sqlite3_reset(s->stmt[id]);
	(void)sqlite3_clear_bindings(s->stmt[id]);
}

enum status sql_number(struct store *s, enum sql_id id, int64_t *out, struct err *e)
{
	bool row;
	enum status st = sql_step(s, id, &row, e);
	if (st == ST_OK && !row)
		st = err_set(e, ST_STORE, "database: no answer where a number was asked for");
	if (st == ST_OK)
		*out = sqlite3_column_int64(s->stmt[id], 0);
	sql_reset(s, id);
	return st;
}

void row_free(struct row *row)
{
	free(row->block);
	row->block = NULL;
}

bool row_read(struct store *s, enum sql_id id, int first, const struct table *table, struct cell *cell)
{
	int at = first + (int)table->cells;
	cells_read(s->stmt[id], first, cell, table->cells);
	return sqlite3_column_type(s->stmt[id], at) == SQLITE_INTEGER &&
	       sqlite3_column_int64(s->stmt[id], at) == (int64_t)row_crc(&s->crc, cell, table->cells);
}

/* Gives the row texts of its own, so that the statement may go on. */
static enum status own_texts(struct row *row, struct err *e)
{
	size_t room = 0;
	for (size_t i = 0; i < row->n; i++)
		if (row->cell[i].type == CELL_TEXT)
			room += (size_t)row->cell[i].length + 1;
	row->block = malloc(room + 1);
	if (!row->block)
		return err_set(e, ST_MEMORY, "database: no memory");
	char *next = row->block;
	for (size_t i = 0; i < row->n; i++) {
		if (row->cell[i].type != CELL_TEXT)
			continue;
		size_t n = (size_t)row->cell[i].length;
		memcpy(next, row->cell[i].u.text, n);
		next[n] = '\0';
		row->cell[i].u.text = next;
		next += n + 1;
	}
	return ST_OK;
}

enum status row_find_by(struct store *s, enum sql_id id, const struct cell *key, size_t n_keys,
			const struct table *table, struct row *out, struct err *e)
{
	bool found = false;
	*out = (struct row){.n = table->cells};
	enum status st = cells_bind(s->stmt[id], 1, key, n_keys, e);
	if (st == ST_OK)
		st = sql_step(s, id, &found, e);
	if (st == ST_OK && !found)
		st = ST_ABSENT;
	if (st == ST_OK && !row_read(s, id, 0, table, out->cell))
		st = err_set(e, ST_STORE, "%.300s: damaged: the checksum of row %lld of table %s is wrong",
			     store_where(s), (long long)sqlite3_column_int64(s->stmt[id], 0), table->name);
	if (st == ST_OK)
		st = own_texts(out, e);
	sql_reset(s, id);
	return st;
}

enum status row_find(struct store *s, enum sql_id id, struct cell key, const struct table *table,
		     struct row *out, struct err *e)
{
	return row_find_by(s, id, &key, 1, table, out, e);
}

enum status row_next_id(struct store *s, const struct table *table, int64_t *id, struct err *e)
{
	return sql_number(s, table->next, id, e);
}

/* Binds cell[n], the checksum over them, runs the statement. */
static enum status write_row(struct store *s, enum sql_id id, const struct cell *cell, size_t n,
			     struct err *e)
{
	struct cell crc = cell_int(row_crc(&s->crc, cell, n));
	bool row;
	enum status st = cells_bind(s->stmt[id], 1, cell, n, e);
	if (st == ST_OK)
		st = cells_bind(s->stmt[id], 1 + (int)n, &crc, 1, e);
	if (st == ST_OK)
		st = sql_step(s, id, &row, e);
	sql_reset(s, id);
	return st;
}

enum status change_needed(struct store *s, struct err *e)
{
	int64_t id = 0;
	if (!s->in_change)
		return err_set(e, ST_STORE, "database: a change outside a change set");
	if (s->change_id)
		return ST_OK;
	enum status st = sql_number(s, SQL_CHANGE_NEXT, &id, e);
	if (st != ST_OK)
		return st;
	const struct cell cell[] = {cell_int(id),
				    cell_text(s->utc),
				    cell_text(s->who),
				    cell_text(s->verb),
				    s->undoes ? cell_int(s->undoes) : (struct cell){.type = CELL_NULL},
				    cell_int(1)};
	st = write_row(s, SQL_CHANGE_ADD, cell, sizeof cell / sizeof cell[0], e);
	if (st == ST_OK)
		s->change_id = id;
	return st;
}

enum status row_add(struct store *s, const struct table *table, struct cell *cell, struct err *e)
{
	enum status st = change_needed(s, e);
	if (st != ST_OK)
		return st;
	cell[table->rev_at] = cell_int(1);
	cell[table->change_at] = cell_int(s->change_id);
	return write_row(s, table->add, cell, table->cells, e);
}

static enum status keep_old(struct store *s, const struct table *table, const struct row *old, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX];
	memcpy(cell, old->cell, table->cells * sizeof *cell);
	cell[table->cells] = cell_int(s->change_id);
	return write_row(s, table->keep_old, cell, table->cells + 1, e);
}

enum status row_replace(struct store *s, const struct table *table, const struct row *old, struct cell *cell,
			struct err *e)
{
	enum status st = change_needed(s, e);
	if (st == ST_OK)
		st = keep_old(s, table, old, e);
	if (st != ST_OK)
		return st;
	const struct cell rev = old->cell[table->rev_at];
	cell[0] = old->cell[0];
	cell[table->rev_at] = cell_int(rev.u.i + 1);
	cell[table->change_at] = cell_int(s->change_id);
	const struct cell tail[] = {cell_int(row_crc(&s->crc, cell, table->cells)), cell[0], rev};
	bool row;
	st = cells_bind(s->stmt[table->update], 1, cell + 1, table->cells - 1, e);
	if (st == ST_OK)
		st = cells_bind(s->stmt[table->update], (int)table->cells, tail, 3, e);
	if (st == ST_OK)
		st = sql_step(s, table->update, &row, e);
	sql_reset(s, table->update);
	if (st == ST_OK && sqlite3_changes(s->db) != 1)
		st = err_set(e, ST_CONFLICT, "another program changed row %lld of table %s meanwhile",
			     (long long)cell[0].u.i, table->name);
	return st;
}

enum status row_put(struct store *s, const struct table *table, size_t removed_at, enum status found,
		    struct row *old, struct cell *cell, struct err *e)
{
	enum status st = found;
	if (st == ST_ABSENT) {
		int64_t id = 0;
		st = row_next_id(s, table, &id, e);
		cell[0] = cell_int(id);
		if (st == ST_OK)
			st = row_add(s, table, cell, e);
	} else if (st == ST_OK && !cells_same(&cell[1], &old->cell[1], removed_at)) {
		st = row_replace(s, table, old, cell, e);
	}
	row_free(old);
	return st;
}

enum status row_remove(struct store *s, const struct table *table, size_t removed_at, enum status found,
		       struct row *old, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX];
	enum status st = found;
	if (st == ST_OK && old->cell[removed_at].u.i) {
		st = ST_ABSENT;
	} else if (st == ST_OK) {
		memcpy(cell, old->cell, sizeof cell);
		cell[removed_at] = cell_int(1);
		st = row_replace(s, table, old, cell, e);
	}
	row_free(old);
	return st;
}
