/* SPDX-License-Identifier: MIT
 * Connecting to the file: nothing is written before it is known to be ours. */
#include "db/store_parts.h"

#include "db/schema.h"

#include <errno.h>
#include <fcntl.h>
#include <limits.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/random.h>
#include <sys/stat.h>
#include <unistd.h>

#define QUICK_CHECK_BYTES_MAX (64LL * 1024 * 1024)

enum status store_run(struct store *s, const char *sql, struct err *e)
{
	int rc = sqlite3_exec(s->db, sql, NULL, NULL, NULL);
	return rc == SQLITE_OK ? ST_OK : store_fault(s, sqlite3_extended_errcode(s->db), e);
}

enum status store_ask(struct store *s, const char *sql, int64_t *number, char *text, size_t size,
		      struct err *e)
{
	sqlite3_stmt *stmt = NULL;
	int rc = sqlite3_prepare_v2(s->db, sql, -1, &stmt, NULL);
	if (rc == SQLITE_OK)
		rc = sqlite3_step(stmt);
	enum status st = rc == SQLITE_ROW ? ST_OK : store_fault(s, sqlite3_extended_errcode(s->db), e);
	if (st == ST_OK && number)
		*number = sqlite3_column_int64(stmt, 0);
	if (st == ST_OK && text)
		snprintf(text, size, "%s", (const char *)sqlite3_column_text(stmt, 0));
	(void)sqlite3_finalize(stmt);
	return st;
}

/* --- the file --- */

/* Makes the folders above path, 0700. */
static enum status make_folders(const char *path, struct err *e)
{
	char folder[PATH_MAX];
	if (strlen(path) >= sizeof folder)
		return err_set(e, ST_IO, "%.80s...: path too long", path);
	snprintf(folder, sizeof folder, "%s", path);
	for (char *c = folder + 1; *c; c++) {
		if (*c != '/')
			continue;
		*c = '\0';
		if (mkdir(folder, 0700) != 0 && errno != EEXIST)
			return err_set(e, ST_IO, "%s: %s", folder, strerror(errno));
		*c = '/';
	}
	return ST_OK;
}

/* An empty file of mode 0600: SQLite gives its journal the same mode. Another program may have been faster.
 */
static enum status create_file(const char *path, struct err *e)
{
	enum status st = make_folders(path, e);
	if (st != ST_OK)
		return st;
	int fd = open(path, O_RDWR | O_CREAT | O_EXCL | O_NOFOLLOW | O_CLOEXEC, 0600);
	if (fd >= 0)
		close(fd);
	else if (errno != EEXIST)
		return err_set(e, ST_IO, "%s: %s", path, strerror(errno));
	return ST_OK;
}

/* --- looking at it without touching it --- */

/* file:PATH?immutable=1 with everything but plain characters escaped; the caller frees it. */
static char *immutable_uri(const char *path)
{
	static const char plain[] = "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789/._-";
	size_t room = 3 * strlen(path) + 32, used = 0;
	char *uri = malloc(room);
	if (!uri)
		return NULL;
	used += (size_t)snprintf(uri, room, "file:");
	for (const char *c = path; *c; c++)
		used += (size_t)snprintf(uri + used, room - used, strchr(plain, *c) ? "%c" : "%%%02X",
					 (unsigned char)*c);
	snprintf(uri + used, room - used, "?immutable=1");
	return uri;
}

static int64_t big_endian(const unsigned char *b)
{
	return (int64_t)b[0] << 24 | (int64_t)b[1] << 16 | (int64_t)b[2] << 8 | b[3];
}

/* Reads the two numbers that say whose file it is and how old, with no lock, no journal and no write: they
 * stand in the first page, at bytes 68 and 60 (SQLite documentation, Database File Format 1.3). The bytes
 * come through SQLite's own file, since to open and close it here would drop the locks that this program may
 * hold on it. */
static enum status look(const char *path, int64_t *application, int64_t *version, struct err *e)
{
	static const char magic[16] = "SQLite format 3";
	unsigned char head[100] = {0};
	sqlite3 *db = NULL;
	sqlite3_file *file = NULL;
	char *uri = immutable_uri(path);
	if (!uri)
		return err_set(e, ST_MEMORY, "database: no memory");
	int rc =
	    sqlite3_open_v2(uri, &db, SQLITE_OPEN_READONLY | SQLITE_OPEN_URI | SQLITE_OPEN_NOMUTEX, NULL);
	free(uri);
	if (rc == SQLITE_OK)
		rc = sqlite3_file_control(db, "main", SQLITE_FCNTL_FILE_POINTER, &file);
	if (rc == SQLITE_OK && file && file->pMethods)
		rc = file->pMethods->xRead(file, head, (int)sizeof head, 0);
	(void)sqlite3_close(db);
	if (rc != SQLITE_OK && rc != SQLITE_IOERR_SHORT_READ)
		return err_set(e, ST_STORE, "%s: %s", path, sqlite3_errstr(rc));
	if (rc != SQLITE_OK || memcmp(head, magic, sizeof magic) != 0)
		return err_set(e, ST_STORE, "%s: not a wane database, nor any other", path);
	*version = big_endian(head + 60);
	*application = big_endian(head + 68);
	return ST_OK;
}

static enum status accept_versions(const char *path, int64_t application, int64_t version, struct err *e)
{
	if (application != APPLICATION_ID)
		return err_set(e, ST_STORE, "%s: not a wane database: it belongs to another program", path);
	if (version > SCHEMA_VERSION)
		return err_set(
		    e, ST_STORE,
		    "%s: written by a newer wane (schema %lld, this one knows %d): upgrade wane, or use "
		    "another --db",
		    path, (long long)version, (int)SCHEMA_VERSION);
	if (version < 1)
		return err_set(e, ST_STORE, "%s: damaged: it has no schema version", path);
	return ST_OK;
}

/* --- the connection --- */

static enum status configure(struct store *s, struct err *e)
{
	static const struct {
		int option, value;
	} switches[] = {
	    {SQLITE_DBCONFIG_DEFENSIVE, 1},   {SQLITE_DBCONFIG_TRUSTED_SCHEMA, 0},
	    {SQLITE_DBCONFIG_ENABLE_VIEW, 0}, {SQLITE_DBCONFIG_DQS_DML, 0},
	    {SQLITE_DBCONFIG_DQS_DDL, 0},     {SQLITE_DBCONFIG_ENABLE_FKEY, 1},
	};
	for (size_t i = 0; i < sizeof switches / sizeof switches[0]; i++) {
		int now = -1;
		int rc = sqlite3_db_config(s->db, switches[i].option, switches[i].value, &now);
		if (rc != SQLITE_OK || now != switches[i].value)
			return err_set(e, ST_STORE, "database: this SQLite can't be made safe (switch %d)",
				       switches[i].option);
	}
	(void)sqlite3_limit(s->db, SQLITE_LIMIT_LENGTH, 4 * 1024 * 1024);
	(void)sqlite3_limit(s->db, SQLITE_LIMIT_ATTACHED, 1);
	(void)sqlite3_extended_result_codes(s->db, 1);
	int rc = sqlite3_busy_timeout(s->db, 5000);
	if (rc != SQLITE_OK)
		return store_fault(s, rc, e);
	return store_run(
	    s, "PRAGMA recursive_triggers = ON; PRAGMA cell_size_check = ON; PRAGMA mmap_size = 0;", e);
}

/* Saved means saved: only EXTRA syncs the folder after the journal is gone (SQLite documentation, PRAGMA
 * synchronous). */
static enum status make_durable(struct store *s, struct err *e)
{
	char journal[16] = "";
	int64_t level = 0;
	enum status st = store_ask(s, "PRAGMA journal_mode = DELETE", NULL, journal, sizeof journal, e);
	if (st == ST_OK)
		st = store_run(s, "PRAGMA synchronous = EXTRA", e);
	if (st == ST_OK)
		st = store_ask(s, "PRAGMA synchronous", &level, NULL, 0, e);
	if (st == ST_OK && (s->mode == STORE_MEMORY ? false : strcmp(journal, "delete") != 0 || level != 3))
		st = err_set(e, ST_STORE, "database: its journal can't be set (%s, %d)", journal, (int)level);
	return st;
}

static enum status add_info(struct store *s, struct err *e)
{
	unsigned char random[16];
	char id[33], sql[192];
	if (getrandom(random, sizeof random, 0) != (ssize_t)sizeof random)
		return err_set(e, ST_IO, "database: no random numbers: %s", strerror(errno));
	for (size_t i = 0; i < sizeof random; i++)
		snprintf(id + 2 * i, 3, "%02x", random[i]);
	const struct cell cell[] = {cell_int(1), cell_text(id), cell_int(1)};
	/* hex digits and numbers of our own making only: nothing to bind */
	snprintf(sql, sizeof sql,
		 "INSERT INTO store_info(id, store_id, rev, row_crc) VALUES(1, '%s', 1, %lu)", id,
		 (unsigned long)row_crc(&s->crc, cell, 3));
	return store_run(s, sql, e);
}

/* Tables into an empty database. Under the lock the file is looked at again: another program may have been
 * faster. */
static enum status make_schema(struct store *s, struct err *e)
{
	int64_t version = 0, objects = 0;
	enum status st = store_run(s, "BEGIN IMMEDIATE", e);
	if (st != ST_OK)
		return st;
	st = store_ask(s, "PRAGMA user_version", &version, NULL, 0, e);
	if (st == ST_OK)
		st = store_ask(s, "SELECT count(*) FROM sqlite_schema", &objects, NULL, 0, e);
	if (st == ST_OK && version == 0 && objects == 0) {
		st = schema_apply(s->db, 0, e);
		if (st == ST_OK)
			st = add_info(s, e);
	}
	if (st == ST_OK)
		st = store_run(s, "COMMIT", e);
	if (!sqlite3_get_autocommit(s->db))
		(void)sqlite3_exec(s->db, "ROLLBACK", NULL, NULL, NULL);
	return st;
}

static enum status quick_check(struct store *s, const char *path, struct err *e)
{
	int64_t pages = 0, page_bytes = 0;
	char answer[256] = "";
	enum status st = store_ask(s, "PRAGMA page_count", &pages, NULL, 0, e);
	if (st == ST_OK)
		st = store_ask(s, "PRAGMA page_size", &page_bytes, NULL, 0, e);
	if (st != ST_OK || pages * page_bytes > QUICK_CHECK_BYTES_MAX)
		return st;
	st = store_ask(s, "PRAGMA quick_check(1)", NULL, answer, sizeof answer, e);
	if (st == ST_OK && strcmp(answer, "ok") != 0)
		st = err_set(e, ST_STORE, "%s: damaged: %s", path, answer);
	return st;
}

static enum status open_connection(struct store *s, const char *path, int flags, struct err *e)
{
	(void)sqlite3_close(s->db);
	s->db = NULL;
	int rc = sqlite3_open_v2(path, &s->db, flags | SQLITE_OPEN_NOMUTEX, NULL);
	if (rc != SQLITE_OK)
		return rc == SQLITE_NOMEM ? err_set(e, ST_MEMORY, "database: no memory")
					  : err_set(e, ST_STORE, "%s: %s", path, sqlite3_errmsg(s->db));
	return configure(s, e);
}

/* A reader that meets the journal of a writer that was killed has to let SQLite undo its half transaction. */
static enum status open_reader(struct store *s, const char *path, struct err *e)
{
	enum status st = open_connection(s, path, SQLITE_OPEN_READONLY | SQLITE_OPEN_NOFOLLOW, e);
	int64_t n;
	if (st == ST_OK && store_ask(s, "SELECT count(*) FROM sqlite_schema", &n, NULL, 0, e) == ST_OK)
		return ST_OK;
	if (st != ST_OK || sqlite3_extended_errcode(s->db) != SQLITE_READONLY_ROLLBACK)
		return ST_STORE;
	st = open_connection(s, path, SQLITE_OPEN_READWRITE | SQLITE_OPEN_NOFOLLOW, e);
	if (st == ST_OK)
		st = store_ask(s, "SELECT count(*) FROM sqlite_schema", &n, NULL, 0, e);
	if (st == ST_OK)
		st = store_run(s, "PRAGMA query_only = ON", e);
	return st;
}

static bool folder_can_be_written(const char *path)
{
	const char *slash = strrchr(path, '/');
	char folder[PATH_MAX];
	if (!slash || (size_t)(slash - path) >= sizeof folder)
		return true;
	snprintf(folder, sizeof folder, "%.*s", (int)(slash - path) + 1, path);
	return access(folder, W_OK) == 0;
}

/* A file whose making was cut short may have been undone to nothing just now, by SQLite, from its journal. */
static enum status look_inside(struct store *s, bool *empty, struct err *e)
{
	int64_t version = 0, objects = 0;
	enum status st = store_ask(s, "PRAGMA user_version", &version, NULL, 0, e);
	if (st == ST_OK)
		st = store_ask(s, "SELECT count(*) FROM sqlite_schema", &objects, NULL, 0, e);
	*empty = version == 0 && objects == 0;
	return st;
}

/* path: an existing regular file, all symbolic links resolved. */
static enum status open_file(struct store *s, const char *path, bool empty, struct err *e)
{
	int64_t application = 0, version = 0;
	enum status st = ST_OK;
	if (!empty) {
		st = look(path, &application, &version, e);
		if (st == ST_OK)
			st = accept_versions(path, application, version, e);
	}
	if (st != ST_OK)
		return st;
	st = s->mode == STORE_READ
		 ? open_reader(s, path, e)
		 : open_connection(s, path, SQLITE_OPEN_READWRITE | SQLITE_OPEN_NOFOLLOW, e);
	if (st == ST_OK)
		st = look_inside(s, &empty, e);
	if (st == ST_OK && empty && s->mode == STORE_READ)
		return err_set(e, ST_ABSENT, "%s: no database there yet", path);
	if (st == ST_OK && s->mode == STORE_WRITE) {
		s->read_only = sqlite3_db_readonly(s->db, "main") == 1 || !folder_can_be_written(path);
		if (!s->read_only)
			st = make_durable(s, e);
		if (st == ST_OK && empty)
			st = make_schema(s, e);
	}
	if (st == ST_OK)
		st = quick_check(s, path, e);
	if (st == ST_OK)
		st = store_migrate(s, path, e);
	if (st == ST_OK)
		st = schema_compare(s->db, &s->crc, e);
	return st;
}

enum status store_connect_memory(struct store *s, struct err *e)
{
	return open_connection(s, ":memory:", SQLITE_OPEN_READWRITE | SQLITE_OPEN_MEMORY, e);
}

enum status store_connect(struct store *s, const char *path, struct err *e)
{
	if (s->mode == STORE_MEMORY) {
		enum status made = store_connect_memory(s, e);
		return made == ST_OK ? make_schema(s, e) : made;
	}
	if (!path || !*path)
		return err_set(e, ST_STORE, "database: its file name is empty");
	struct stat st;
	bool there = stat(path, &st) == 0;
	if (!there && errno != ENOENT)
		return err_set(e, ST_STORE, "%s: %s", path, strerror(errno));
	if (!there || (st.st_size == 0 && S_ISREG(st.st_mode))) {
		if (s->mode == STORE_READ)
			return err_set(e, ST_ABSENT, "%s: no database there yet", path);
		enum status made = there ? ST_OK : create_file(path, e);
		if (made != ST_OK)
			return made;
		if (stat(path, &st) != 0)
			return err_set(e, ST_STORE, "%s: %s", path, strerror(errno));
	}
	if (S_ISDIR(st.st_mode))
		return err_set(e, ST_STORE, "%s: this is a folder, not a database", path);
	if (!S_ISREG(st.st_mode))
		return err_set(e, ST_STORE, "%s: not a regular file", path);
	/* an absolute path: never taken for a URI, whatever its name, and no link is followed a second time
	 */
	char *real = realpath(path, NULL);
	if (!real)
		return err_set(e, ST_STORE, "%s: %s", path, strerror(errno));
	enum status result = open_file(s, real, st.st_size == 0, e);
	free(real);
	return result;
}
