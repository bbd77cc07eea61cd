/* SPDX-License-Identifier: MIT */
#include "db/store.h"

#include "db/store_parts.h"
#include "db/text_clean.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static enum status prepare_all(struct store *s, struct err *e)
{
	for (int id = 0; id < SQL_COUNT; id++) {
		int rc = sqlite3_prepare_v3(s->db, sql_text[id], -1, SQLITE_PREPARE_PERSISTENT, &s->stmt[id],
					    NULL);
		if (rc != SQLITE_OK)
			return store_fault(s, rc, e);
	}
	return ST_OK;
}

static const struct table info_table = {.name = "store_info", .cells = 3, .rev_at = 2};

static enum status read_id(struct store *s, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX];
	bool row;
	enum status st = sql_step(s, SQL_STORE_INFO, &row, e);
	if (st == ST_OK && (!row || !row_read(s, SQL_STORE_INFO, 0, &info_table, cell)))
		st = err_set(e, ST_STORE, "%.300s: damaged: its own id can't be read", store_where(s));
	if (st == ST_OK)
		snprintf(s->id, sizeof s->id, "%s", cell[1].u.text);
	sql_reset(s, SQL_STORE_INFO);
	return st;
}

static struct store *make_store(enum store_mode mode)
{
	struct store *s = calloc(1, sizeof *s);
	if (!s)
		return NULL;
	s->mode = mode;
	crc_table_fill(&s->crc);
	return s;
}

/* Prepares a connected store, or closes it where st or something here failed. */
static enum status finish(struct store *s, enum status st, struct store **out, struct err *e)
{
	if (st == ST_OK)
		st = prepare_all(s, e);
	if (st == ST_OK)
		st = read_id(s, e);
	if (st != ST_OK) {
		store_close(s);
		return st;
	}
	*out = s;
	return ST_OK;
}

enum status store_open(const char *path, enum store_mode mode, struct store **out, struct err *e)
{
	*out = NULL;
	struct store *s = make_store(mode);
	if (!s)
		return err_set(e, ST_MEMORY, "database: no memory");
	return finish(s, store_connect(s, path, e), out, e);
}

enum status store_copy(struct store *from, struct store **out, struct err *e)
{
	*out = NULL;
	struct store *s = make_store(STORE_MEMORY);
	if (!s)
		return err_set(e, ST_MEMORY, "database: no memory");
	enum status st = store_connect_memory(s, e);
	if (st == ST_OK)
		st = pages_copy(from->db, s->db, e);
	return finish(s, st, out, e);
}

void store_close(struct store *s)
{
	if (!s)
		return;
	if (s->in_change)
		store_rollback(s);
	for (int id = 0; id < SQL_COUNT; id++)
		(void)sqlite3_finalize(s->stmt[id]);
	(void)sqlite3_close(s->db);
	free(s->copy_of);
	free(s);
}

bool store_read_only(const struct store *s)
{
	return s->read_only;
}

const char *store_id(const struct store *s)
{
	return s->id;
}

/* --- change sets --- */

static enum status run(struct store *s, enum sql_id id, struct err *e)
{
	bool row;
	enum status st = sql_step(s, id, &row, e);
	sql_reset(s, id);
	return st;
}

enum status store_begin(struct store *s, const struct change *c, struct err *e)
{
	if (s->in_change)
		return err_set(e, ST_STORE, "database: a change set is open already");
	if (s->mode == STORE_READ || s->read_only)
		return err_set(e, ST_STORE, "%.300s: it or its folder can't be written", store_where(s));
	if (strlen(c->utc) >= UTC_BYTES)
		return err_set(e, ST_SYNTAX, "a change needs a time like 2026-04-22T03:00:00Z");
	(void)text_clean(c->utc, s->utc, sizeof s->utc);
	(void)text_clean(c->who, s->who, sizeof s->who);
	(void)text_clean(c->verb, s->verb, sizeof s->verb);
	enum status st = run(s, SQL_BEGIN, e);
	s->in_change = st == ST_OK;
	s->change_id = s->undoes = 0;
	return st;
}

enum status store_commit(struct store *s, struct err *e)
{
	if (!s->in_change)
		return err_set(e, ST_STORE, "database: no change set is open");
	enum status st = run(s, SQL_COMMIT, e);
	if (st != ST_OK)
		store_rollback(s);
	s->in_change = false;
	return st;
}

void store_rollback(struct store *s)
{
	/* SQLite may have rolled back by itself (disk full, no memory): then there is nothing left to undo */
	if (!sqlite3_get_autocommit(s->db)) {
		for (int id = 0; id < SQL_COUNT; id++)
			if (id != SQL_ROLLBACK)
				(void)sqlite3_reset(s->stmt[id]);
		(void)sqlite3_step(s->stmt[SQL_ROLLBACK]);
		(void)sqlite3_reset(s->stmt[SQL_ROLLBACK]);
	}
	s->in_change = false;
	s->change_id = 0;
}

enum status store_end(struct store *s, enum status st, struct err *e)
{
	if (st == ST_OK)
		st = store_commit(s, e);
	if (st != ST_OK)
		store_rollback(s);
	return st;
}

enum status store_data_version(struct store *s, long *version, struct err *e)
{
	int64_t number = 0;
	enum status st = sql_number(s, SQL_DATA_VERSION, &number, e);
	if (st == ST_OK)
		*version = (long)number;
	return st;
}

enum status store_count(struct store *s, struct store_counts *out, struct err *e)
{
	bool row;
	enum status st = sql_step(s, SQL_COUNTS, &row, e);
	if (st == ST_OK && row) {
		sqlite3_stmt *stmt = s->stmt[SQL_COUNTS];
		*out = (struct store_counts){
		    .targets = (long)sqlite3_column_int64(stmt, 0),
		    .ephemerides = (long)sqlite3_column_int64(stmt, 1),
		    .sites = (long)sqlite3_column_int64(stmt, 2),
		    .changes = (long)sqlite3_column_int64(stmt, 3),
		    .telescopes = (long)sqlite3_column_int64(stmt, 4),
		    .allotments = (long)sqlite3_column_int64(stmt, 5),
		    .plans = (long)sqlite3_column_int64(stmt, 6),
		    .goals = (long)sqlite3_column_int64(stmt, 7),
		};
	}
	sql_reset(s, SQL_COUNTS);
	return st;
}
