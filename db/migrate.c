/* SPDX-License-Identifier: MIT
 * From an older schema to the newest: all of it or none, and never without a checked copy of what was there.
 */
#include "db/schema.h"
#include "db/store_parts.h"

#include <errno.h>
#include <fcntl.h>
#include <limits.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

enum status pages_copy(sqlite3 *from, sqlite3 *to, struct err *e)
{
	sqlite3_backup *backup = sqlite3_backup_init(to, "main", from, "main");
	if (!backup)
		return err_set(e, sqlite3_errcode(to) == SQLITE_NOMEM ? ST_MEMORY : ST_STORE,
			       "database: it can't be copied: %s", sqlite3_errmsg(to));
	(void)sqlite3_backup_step(backup, -1);
	int rc = sqlite3_backup_finish(backup); /* tells what the step met */
	if (rc == SQLITE_OK)
		return ST_OK;
	return err_set(e, (rc & 0xFF) == SQLITE_NOMEM ? ST_MEMORY : ST_STORE,
		       "database: it can't be copied: %s", sqlite3_errstr(rc));
}

/* --- the copy beside the file --- */

/* What tells one state of a store from another: its id and how far its history goes. */
struct state {
	int64_t application, version, changes, last_change;
	char id[40];
};

/* The caller is told only whether: a copy that can't be read is none. */
static bool number_of(sqlite3 *db, const char *sql, int64_t *number, char *text, size_t size)
{
	sqlite3_stmt *stmt = NULL;
	bool found =
	    sqlite3_prepare_v2(db, sql, -1, &stmt, NULL) == SQLITE_OK && sqlite3_step(stmt) == SQLITE_ROW;
	if (found && number)
		*number = sqlite3_column_int64(stmt, 0);
	const char *column = found && text ? (const char *)sqlite3_column_text(stmt, 0) : NULL;
	if (text)
		snprintf(text, size, "%s", column ? column : "");
	(void)sqlite3_finalize(stmt);
	return found;
}

static bool state_of(sqlite3 *db, struct state *out)
{
	char answer[16];
	*out = (struct state){0};
	return number_of(db, "PRAGMA application_id", &out->application, NULL, 0) &&
	       number_of(db, "PRAGMA user_version", &out->version, NULL, 0) &&
	       number_of(db, "SELECT count(*) FROM change_set", &out->changes, NULL, 0) &&
	       number_of(db, "SELECT ifnull(max(id), 0) FROM change_set", &out->last_change, NULL, 0) &&
	       number_of(db, "SELECT store_id FROM store_info", NULL, out->id, sizeof out->id) &&
	       number_of(db, "PRAGMA quick_check(1)", NULL, answer, sizeof answer) &&
	       strcmp(answer, "ok") == 0;
}

static bool is_copy_of(const char *path, const struct state *want)
{
	struct state have;
	sqlite3 *db = NULL;
	struct stat st;
	bool good =
	    lstat(path, &st) == 0 && S_ISREG(st.st_mode) &&
	    sqlite3_open_v2(path, &db, SQLITE_OPEN_READONLY | SQLITE_OPEN_NOFOLLOW, NULL) == SQLITE_OK &&
	    state_of(db, &have) && have.application == want->application && have.version == want->version &&
	    have.changes == want->changes && have.last_change == want->last_change &&
	    strcmp(have.id, want->id) == 0;
	(void)sqlite3_close(db);
	return good;
}

static enum status sync_path(const char *path, int flags, struct err *e)
{
	int fd = open(path, O_RDONLY | O_NOFOLLOW | O_CLOEXEC | flags);
	bool good = fd >= 0 && fsync(fd) == 0;
	int why = errno;
	if (fd >= 0)
		close(fd);
	return good ? ST_OK : err_set(e, ST_IO, "%.300s: %s", path, strerror(why));
}

static enum status sync_folder(const char *path, struct err *e)
{
	char folder[PATH_MAX];
	const char *slash = strrchr(path, '/');
	snprintf(folder, sizeof folder, "%.*s", slash ? (int)(slash - path) + 1 : 0, path);
	return sync_path(folder, O_DIRECTORY, e);
}

/* Writes the pages into part, a new file of mode 0600. */
static enum status write_part(sqlite3 *from, const char *part, struct err *e)
{
	sqlite3 *to = NULL;
	int fd = open(part, O_RDWR | O_CREAT | O_EXCL | O_NOFOLLOW | O_CLOEXEC, 0600);
	if (fd < 0)
		return err_set(e, ST_IO, "%.300s: %s", part, strerror(errno));
	close(fd);
	int rc = sqlite3_open_v2(part, &to, SQLITE_OPEN_READWRITE | SQLITE_OPEN_NOFOLLOW, NULL);
	enum status st = ST_OK;
	if (rc != SQLITE_OK)
		st = err_set(e, rc == SQLITE_NOMEM ? ST_MEMORY : ST_STORE, "%.300s: %s", part,
			     sqlite3_errstr(rc));
	if (st == ST_OK)
		st = pages_copy(from, to, e);
	(void)sqlite3_close(to);
	return st;
}

static void drop_part(const char *part)
{
	char journal[PATH_MAX + 8];
	snprintf(journal, sizeof journal, "%s-journal", part);
	(void)unlink(part);
	(void)unlink(journal); /* one of before would be played into the new file */
}

/* name: not there yet. The copy gets it only when it is whole, checked and on the disk. */
static enum status make_copy(sqlite3 *from, const struct state *want, const char *name, struct err *e)
{
	char part[PATH_MAX];
	if (snprintf(part, sizeof part, "%s.part", name) >= (int)sizeof part)
		return err_set(e, ST_IO, "%.80s...: path too long", name);
	drop_part(part); /* of a program that was killed: who copies holds the lock of the store */
	enum status st = write_part(from, part, e);
	if (st == ST_OK && !is_copy_of(part, want))
		st = err_set(e, ST_STORE, "%.300s: the copy is not what was copied", part);
	if (st == ST_OK)
		st = sync_path(part, 0, e);
	/* a link never replaces; where there are none the name is free as far as anybody knows */
	if (st == ST_OK && link(part, name) != 0 && (errno == EEXIST || rename(part, name) != 0))
		st = err_set(e, ST_IO, "%.300s: %s", name, strerror(errno));
	drop_part(part);
	return st == ST_OK ? sync_folder(name, e) : st;
}

/* Another connection, since the one that holds the write lock can't be copied from; nothing was written yet.
 */
static enum status copy_beside(const char *path, int64_t version, struct err *e)
{
	enum { COPIES_MAX = 99 };
	sqlite3 *from = NULL;
	struct state want;
	struct stat there;
	char name[PATH_MAX];
	enum status st = ST_OK;
	int rc = sqlite3_open_v2(path, &from, SQLITE_OPEN_READONLY | SQLITE_OPEN_NOFOLLOW, NULL);
	if (rc != SQLITE_OK || !state_of(from, &want))
		st = err_set(e, rc == SQLITE_NOMEM ? ST_MEMORY : ST_STORE,
			     "%.300s: damaged, or no memory: it can't be copied", path);
	bool done = false;
	for (int k = 1; st == ST_OK && !done && k <= COPIES_MAX; k++) {
		char number[8] = "";
		if (k > 1)
			snprintf(number, sizeof number, ".%d", k);
		int n = snprintf(name, sizeof name, "%s.schema-%lld%s.bak", path, (long long)version, number);
		if (n >= (int)sizeof name)
			st = err_set(e, ST_IO, "%.80s...: path too long", path);
		else if (lstat(name, &there) != 0) {
			st = make_copy(from, &want, name, e);
			done = true;
		} else {
			done = is_copy_of(name, &want);
		}
	}
	if (st == ST_OK && !done)
		st = err_set(e, ST_IO, "%.300s: there are %d copies of other states beside it already", path,
			     (int)COPIES_MAX);
	(void)sqlite3_close(from);
	return st;
}

/* --- the steps --- */

static enum status apply_steps(struct store *s, int64_t version, struct err *e)
{
	char table[64] = "";
	enum status st = schema_apply(s->db, (int)version, e);
	if (st == ST_OK && number_of(s->db, "PRAGMA foreign_key_check", NULL, table, sizeof table))
		st = err_set(e, ST_STORE, "%.300s: damaged: a row points nowhere, in table %s",
			     store_where(s), table);
	return st == ST_OK ? schema_compare(s->db, &s->crc, e) : st;
}

/* Under the lock the version is read again: another program may have been faster. */
static enum status migrate_file(struct store *s, const char *path, struct err *e)
{
	int64_t version = 0;
	enum status st = store_run(s, "BEGIN IMMEDIATE", e);
	if (st != ST_OK)
		return st;
	st = store_ask(s, "PRAGMA user_version", &version, NULL, 0, e);
	if (st == ST_OK && version > SCHEMA_VERSION)
		st = err_set(e, ST_STORE, "%.300s: a newer wane is using it: upgrade wane", path);
	if (st == ST_OK && version < SCHEMA_VERSION) {
		struct err why = {0};
		st = copy_beside(path, version, &why);
		if (st != ST_OK)
			(void)err_set(e, st, "nothing was changed, a copy has to be made first: %.400s",
				      why.text);
		if (st == ST_OK)
			st = apply_steps(s, version, e);
	}
	if (st == ST_OK)
		st = store_run(s, "COMMIT", e);
	if (!sqlite3_get_autocommit(s->db))
		(void)sqlite3_exec(s->db, "ROLLBACK", NULL, NULL, NULL);
	return st;
}

static enum status migrate_copy(struct store *s, const char *path, int64_t version, struct err *e)
{
	sqlite3 *file = s->db;
	s->db = NULL;
	s->copy_of = strdup(path);
	enum status st =
	    s->copy_of ? store_connect_memory(s, e) : err_set(e, ST_MEMORY, "database: no memory");
	if (st == ST_OK)
		st = pages_copy(file, s->db, e);
	(void)sqlite3_close(file);
	if (st == ST_OK) /* what the file says by now */
		st = store_ask(s, "PRAGMA user_version", &version, NULL, 0, e);
	if (st == ST_OK && version < SCHEMA_VERSION)
		st = store_run(s, "BEGIN", e);
	if (st == ST_OK && version < SCHEMA_VERSION)
		st = apply_steps(s, version, e);
	if (st == ST_OK && version < SCHEMA_VERSION)
		st = store_run(s, "COMMIT", e);
	return st == ST_OK ? store_run(s, "PRAGMA query_only = ON", e) : st;
}

enum status store_migrate(struct store *s, const char *path, struct err *e)
{
	int64_t version = 0;
	enum status st = store_ask(s, "PRAGMA user_version", &version, NULL, 0, e);
	if (st != ST_OK || version >= SCHEMA_VERSION)
		return st;
	return s->mode == STORE_WRITE && !s->read_only ? migrate_file(s, path, e)
						       : migrate_copy(s, path, version, e);
}
