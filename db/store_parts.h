/* SPDX-License-Identifier: MIT
 * Inside of the store, for the files of db/ only: statements, and rows with revision and checksum. */
#ifndef WANE_DB_STORE_PARTS_H
#define WANE_DB_STORE_PARTS_H

#include "db/row_crc.h"
#include "db/sql.h"
#include "db/store.h"

#include <sqlite3.h>
#include <stdbool.h>

enum { UTC_BYTES = 24, WHO_BYTES = 64, VERB_BYTES = 64 };

struct store {
	sqlite3 *db;
	sqlite3_stmt *stmt[SQL_COUNT];
	enum store_mode mode;
	bool read_only;
	bool in_change;
	int64_t change_id; /* 0 until the change set has a row: one that changes nothing leaves none */
	int64_t undoes;	   /* the change set that this one takes back; 0 none */
	char utc[UTC_BYTES], who[WHO_BYTES], verb[VERB_BYTES];
	char id[33];
	char *copy_of; /* the file that a reader copied into memory; NULL: db is the file */
	struct crc_table crc;
};

/* The store's file for messages; `database` for one in memory. */
const char *store_where(const struct store *s);
/* Turns an SQLite result into a status and a sentence. */
enum status store_fault(const struct store *s, int rc, struct err *e);

/* --- statements --- */
/* Steps once: *row tells whether a row is there to be read. The statement has to be reset (sql_reset)
 * afterwards. */
MUST_USE enum status sql_step(struct store *s, enum sql_id id, bool *row, struct err *e);
void sql_reset(struct store *s, enum sql_id id);
/* Runs a statement that gives one whole number. */
MUST_USE enum status sql_number(struct store *s, enum sql_id id, int64_t *out, struct err *e);

/* --- rows --- */
/* A table family: how many cells its row has before the checksum, where rev and change_id stand among them,
 * its statements. */
struct table {
	const char *name;
	size_t cells, rev_at, change_at;
	enum sql_id next, add, update, keep_old;
};
/* A row read; owns its texts. */
struct row {
	struct cell cell[ROW_CELLS_MAX];
	size_t n;
	char *block;
};
void row_free(struct row *row);
/* Whether the columns from `first` on hold table->cells cells and their right checksum; cells are borrowed
 * from the statement. */
bool row_read(struct store *s, enum sql_id id, int first, const struct table *table, struct cell *cell);
/* The one row that statement `id` finds for `key`. ST_ABSENT (no message) when there is none; ST_STORE when
 * its checksum is wrong. */
MUST_USE enum status row_find(struct store *s, enum sql_id id, struct cell key, const struct table *table,
			      struct row *out, struct err *e);
/* The same for more than one key. */
MUST_USE enum status row_find_by(struct store *s, enum sql_id id, const struct cell *key, size_t n_keys,
				 const struct table *table, struct row *out, struct err *e);
/* Id for a new row. */
MUST_USE enum status row_next_id(struct store *s, const struct table *table, int64_t *id, struct err *e);
/* Adds a row: rev becomes 1, the change and the checksum are filled in. */
MUST_USE enum status row_add(struct store *s, const struct table *table, struct cell *cell, struct err *e);
/* Replaces `old` by `cell` where the store still has old's rev (else ST_CONFLICT) and keeps the old row with
 * the change's id. */
MUST_USE enum status row_replace(struct store *s, const struct table *table, const struct row *old,
				 struct cell *cell, struct err *e);
/* What follows a row_find, which gave `found` and old; old is released. A status but ST_OK and ST_ABSENT is
 * handed on. */
/* Adds cell as a new row where none was found; else replaces old where a cell from 1 to removed_at differs.
 */
MUST_USE enum status row_put(struct store *s, const struct table *table, size_t removed_at, enum status found,
			     struct row *old, struct cell *cell, struct err *e);
/* Marks old as removed. ST_ABSENT (no message) when there is none or it is removed already. */
MUST_USE enum status row_remove(struct store *s, const struct table *table, size_t removed_at,
				enum status found, struct row *old, struct err *e);

/* ST_STORE outside a change set. Gives the change set its row when it has none yet. */
MUST_USE enum status change_needed(struct store *s, struct err *e);

/* A copy of the whole store in memory, for trials: the file is only read. *out is the caller's: store_close.
 */
MUST_USE enum status store_copy(struct store *s, struct store **out, struct err *e);

/* store_open.c */
MUST_USE enum status store_connect(struct store *s, const char *path, struct err *e);
/* Statements of before the others are prepared: run; ask for the first column of the first row, as number or
 * text (either may be NULL). */
MUST_USE enum status store_run(struct store *s, const char *sql, struct err *e);
MUST_USE enum status store_ask(struct store *s, const char *sql, int64_t *number, char *text, size_t size,
			       struct err *e);
/* An empty connection in memory, without tables. */
MUST_USE enum status store_connect_memory(struct store *s, struct err *e);

/* --- migrate.c --- */
/* Brings a connected store of an older version to the newest. One that can be written: a checked copy of it
 * is made beside the file first (FILE.schema-1.bak, 0600, an equal one is kept), then all of it is one
 * transaction. Else the file is only read: the store becomes a copy in memory. Nothing to do: ST_OK. path: of
 * the file, absolute. */
MUST_USE enum status store_migrate(struct store *s, const char *path, struct err *e);
/* All pages of `from` into `to` (backup API). */
MUST_USE enum status pages_copy(sqlite3 *from, sqlite3 *to, struct err *e);

#endif
