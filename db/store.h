/* SPDX-License-Identifier: MIT
 * The local database: one SQLite file. Opening, versions, change sets, checking. Only db/ sees sqlite3. */
#ifndef WANE_DB_STORE_H
#define WANE_DB_STORE_H

#include "ephem/err.h"

#include <stdbool.h>
#include <stdint.h>

struct store; /* opaque */

enum store_mode {
	STORE_READ,   /* never creates, never writes; a file of an older schema is read into memory as it is then */
	STORE_WRITE,  /* opens for writing; creates the file (0600), its folders (0700) and the schema when missing. A file of an older schema is
			 brought to the newest, a checked copy beside it first: FILE.schema-1.bak */
	STORE_MEMORY, /* a throw-away store in memory: demo, tests */
};
/* STORE_READ on a missing file: ST_ABSENT. Not a wane database, a newer schema, damage, a directory: ST_STORE, file untouched.
 * *out is the caller's: store_close (NULL is fine). */
MUST_USE enum status store_open(const char *path, enum store_mode mode, struct store **out, struct err *e);
void store_close(struct store *s);
bool store_read_only(const struct store *s); /* opened for writing, but the file or medium can't be written */
/* Random id of this store (32 hex digits), made with it. */
const char *store_id(const struct store *s);

/* A number that changes when another program has changed the file since (SQLite documentation, PRAGMA data_version); own changes leave it.
 * Cheap: for asking again and again. */
MUST_USE enum status store_data_version(struct store *s, long *version, struct err *e);

/* A change set: all edits between begin and commit are one undoable step of one transaction (BEGIN IMMEDIATE). utc is the caller's clock,
 * `YYYY-MM-DDTHH:MM:SSZ`; who the user; verb what was done, `import`, `target set`, ... */
struct change {
	const char *utc, *who, *verb;
};
MUST_USE enum status store_begin(struct store *s, const struct change *c, struct err *e);
/* After ST_OK the data is on disk. */
MUST_USE enum status store_commit(struct store *s, struct err *e);
/* Undoes everything since begin. Never fails: uses a statement prepared at open. */
void store_rollback(struct store *s);
/* Ends a change set whose steps came to `st`: commits after ST_OK, else undoes it and hands st on. */
MUST_USE enum status store_end(struct store *s, enum status st, struct err *e);

/* Checks everything: SQLite's integrity and foreign keys, row checksums, schema text, ephemeris pointers. Each finding is one call
 * of `say`. *faults counts what makes the store unsound; doubts about data are said but not counted. */
MUST_USE enum status store_check(struct store *s, void (*say)(void *ctx, const char *line), void *ctx, int *faults, struct err *e);
/* Counts for the check's summary. */
struct store_counts {
	long targets, ephemerides, sites, telescopes, allotments, plans, goals; /* listed */
	long changes;
};
MUST_USE enum status store_count(struct store *s, struct store_counts *out, struct err *e);

#endif
