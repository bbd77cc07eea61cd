/* SPDX-License-Identifier: MIT
 * Stores of schema version 1, which tests/data/store_schema_1.sql holds as the program of then made it. */
#include "tests/support/check.h"

#include "db/history.h"
#include "db/midtimes.h"
#include "db/read_csv.h"
#include "db/schema.h"
#include "db/sites.h"
#include "db/store_parts.h"
#include "db/targets.h"
#include "tests/support/observing_store.h"
#include "tests/support/old_store.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <unistd.h>

struct place {
	char folder[64], path[128], copy[160], second[160];
};

static int make_place(void **state)
{
	struct place *p = calloc(1, sizeof *p);
	if (!p)
		return -1;
	snprintf(p->folder, sizeof p->folder, "/tmp/wane-migrate-XXXXXX");
	if (!mkdtemp(p->folder))
		return -1;
	snprintf(p->path, sizeof p->path, "%s/wane.db", p->folder);
	snprintf(p->copy, sizeof p->copy, "%s.schema-1.bak", p->path);
	snprintf(p->second, sizeof p->second, "%s.schema-1.2.bak", p->path);
	old_store_make(p->path);
	*state = p;
	return 0;
}

static int drop_place(void **state)
{
	struct place *p = *state;
	unlink(p->path);
	unlink(p->copy);
	unlink(p->second);
	int failed = rmdir(p->folder); /* nothing else may be left */
	free(p);
	return failed;
}

static char *slurp(const char *path, size_t *n)
{
	char *data;
	struct err e = {0};
	must(file_read(path, &data, n, &e), &e);
	return data;
}

static void same_bytes(const char *path, const char *data, size_t n)
{
	size_t m;
	char *now = slurp(path, &m);
	assert_int_equal(m, n);
	assert_memory_equal(now, data, n);
	free(now);
}

static struct store *open_as(const char *path, enum store_mode mode)
{
	struct store *s;
	struct err e = {0};
	must(store_open(path, mode, &s, &e), &e);
	return s;
}

static void says_digest(struct store *s)
{
	char says[4096];
	struct digest_text d = digest_now(s);
	assert_string_equal(d.text, OLD_STORE_DIGEST);
	if (check_faults(s, says) != 0)
		check_fail("%s", says);
}

static int64_t version_in(const char *path)
{
	sqlite3 *db;
	sqlite3_stmt *stmt;
	assert_int_equal(sqlite3_open_v2(path, &db, SQLITE_OPEN_READONLY, NULL), SQLITE_OK);
	assert_int_equal(sqlite3_prepare_v2(db, "PRAGMA user_version", -1, &stmt, NULL), SQLITE_OK);
	assert_int_equal(sqlite3_step(stmt), SQLITE_ROW);
	int64_t version = sqlite3_column_int64(stmt, 0);
	(void)sqlite3_finalize(stmt);
	(void)sqlite3_close(db);
	return version;
}

static void run_sql(const char *path, const char *sql)
{
	sqlite3 *db;
	assert_int_equal(sqlite3_open(path, &db), SQLITE_OK);
	if (sqlite3_exec(db, sql, NULL, NULL, NULL) != SQLITE_OK)
		check_fail("%s: %s", sql, sqlite3_errmsg(db));
	assert_int_equal(sqlite3_close(db), SQLITE_OK);
}

/* A reader shows all that is there and leaves every byte; nothing appears beside the file. */
static void test_read(void **state)
{
	const struct place *p = *state;
	size_t n;
	char *before = slurp(p->path, &n);
	struct store *s = open_as(p->path, STORE_READ);
	struct target_list list;
	struct err e = {0};
	const struct change change = {"2026-04-22T04:00:00Z", "Ada", "x"};
	says_digest(s);
	must(targets_load(s, &list, &e), &e);
	assert_int_equal(list.n, 6);
	assert_int_equal(list.n_alias, 1);
	target_list_free(&list);
	assert_int_equal(store_begin(s, &change, &e), ST_STORE);
	assert_non_null(strstr(e.text, p->path)); /* the file's name, though it is a copy that was read */
	store_close(s);
	same_bytes(p->path, before, n);
	free(before);
	assert_int_equal(access(p->copy, F_OK), -1);
	assert_int_equal(version_in(p->path), 1);
}

/* A writer brings it to the newest schema: the same lists, the texts of a fresh store, the copy beside it. */
static void test_write(void **state)
{
	const struct place *p = *state;
	struct err e = {0};
	struct stat st;
	uint32_t crc;
	char id[33];
	struct store *s = open_as(p->path, STORE_READ);
	snprintf(id, sizeof id, "%s", store_id(s));
	store_close(s);
	s = open_as(p->path, STORE_WRITE);
	assert_string_equal(store_id(s), id);
	says_digest(s);
	must(schema_crc(s->db, &s->crc, &crc, &e), &e);
	assert_int_equal(crc, SCHEMA_CRC);
	/* what was there can be changed and undone as before: the removal of Tern 3 b was undone in it */
	int64_t undone;
	const struct change change = {"2026-04-22T04:00:00Z", "Ada", "undo"};
	must(history_undo(s, 0, &change, &undone, &e), &e);
	assert_int_equal(undone, 9);
	store_close(s);
	assert_int_equal(version_in(p->path), 2);
	assert_int_equal(stat(p->copy, &st), 0);
	assert_int_equal(st.st_mode & 0777, 0600);
	assert_int_equal(version_in(p->copy), 1);
	s = open_as(p->copy, STORE_READ);
	says_digest(s);
	assert_string_equal(store_id(s), id);
	store_close(s);
	/* a second time there is nothing to do */
	size_t n;
	char *before = slurp(p->path, &n);
	s = open_as(p->path, STORE_WRITE);
	store_close(s);
	same_bytes(p->path, before, n);
	free(before);
}

/* A copy that is there and the same is kept; one of another state, or no store at all, is left alone and
 * another made. */
static void test_copies(void **state)
{
	const struct place *p = *state;
	size_t n;
	store_close(open_as(p->path, STORE_WRITE));
	char *copy = slurp(p->copy, &n);
	struct stat first, now;
	assert_int_equal(stat(p->copy, &first), 0);
	unlink(p->path);
	old_store_make(p->path);
	store_close(open_as(p->path, STORE_WRITE));
	assert_int_equal(stat(p->copy, &now), 0);
	assert_int_equal(now.st_ino, first.st_ino);
	assert_int_equal(access(p->second, F_OK), -1);
	/* the store went on after that copy */
	unlink(p->path);
	old_store_make(p->path);
	run_sql(p->path, "INSERT INTO change_set VALUES(10, '2026-04-22T03:09:00Z', 'Ada', 'x', NULL, 1, 0)");
	store_close(open_as(p->path, STORE_WRITE));
	same_bytes(p->copy, copy, n);
	free(copy);
	assert_int_equal(version_in(p->second), 1);
	unlink(p->second);
	/* something else of that name */
	unlink(p->path);
	unlink(p->copy);
	old_store_make(p->path);
	FILE *f = fopen(p->copy, "w");
	assert_non_null(f);
	fputs("notes", f);
	fclose(f);
	store_close(open_as(p->path, STORE_WRITE));
	same_bytes(p->copy, "notes", 5);
	assert_int_equal(version_in(p->second), 1);
}

/* What was left by a program that was killed while it copied is in nobody's way. */
static void test_stale_part(void **state)
{
	const struct place *p = *state;
	char part[192];
	snprintf(part, sizeof part, "%s.part", p->copy);
	FILE *f = fopen(part, "w");
	assert_non_null(f);
	fputs("half a copy", f);
	fclose(f);
	store_close(open_as(p->path, STORE_WRITE));
	assert_int_equal(access(part, F_OK), -1);
	assert_int_equal(version_in(p->copy), 1);
}

/* No copy, no migration: its name leads nowhere. Nothing is changed. */
static void test_no_copy(void **state)
{
	const struct place *p = *state;
	char part[192];
	struct store *s = NULL;
	struct err e = {0};
	size_t n;
	char *before = slurp(p->path, &n);
	snprintf(part, sizeof part, "%s.part", p->copy);
	assert_int_equal(mkdir(part, 0700), 0);
	assert_int_equal(store_open(p->path, STORE_WRITE, &s, &e), ST_IO);
	assert_null(s);
	assert_non_null(strstr(e.text, "nothing was changed, a copy has to be made first"));
	same_bytes(p->path, before, n);
	free(before);
	assert_int_equal(rmdir(part), 0);
	s = open_as(p->path, STORE_WRITE);
	says_digest(s);
	store_close(s);
}

/* A store that another hand changed is refused before anything is written to it. */
static void test_other_hand(void **state)
{
	const struct place *p = *state;
	static const struct {
		const char *sql, *says;
	} rows[] = {
	    {"CREATE TRIGGER mine AFTER INSERT ON site BEGIN DELETE FROM target; END", "another hand"},
	    {"CREATE TABLE plan(x)", "plan already exists"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		unlink(p->path);
		unlink(p->copy);
		old_store_make(p->path);
		run_sql(p->path, rows[i].sql);
		size_t n;
		char *before = slurp(p->path, &n);
		for (enum store_mode mode = STORE_READ; mode <= STORE_WRITE; mode++) {
			struct store *s = NULL;
			struct err e = {0};
			assert_int_equal(store_open(p->path, mode, &s, &e), ST_STORE);
			if (!strstr(e.text, rows[i].says))
				check_fail("%s: %s", rows[i].sql, e.text);
			same_bytes(p->path, before, n);
		}
		free(before);
	}
}

static void test_newer(void **state)
{
	const struct place *p = *state;
	run_sql(p->path, "PRAGMA user_version = 3");
	size_t n;
	char *before = slurp(p->path, &n);
	for (enum store_mode mode = STORE_READ; mode <= STORE_WRITE; mode++) {
		struct store *s = NULL;
		struct err e = {0};
		assert_int_equal(store_open(p->path, mode, &s, &e), ST_STORE);
		assert_non_null(strstr(e.text, "newer wane (schema 3, this one knows 2)"));
	}
	same_bytes(p->path, before, n);
	free(before);
	assert_int_equal(access(p->copy, F_OK), -1);
}

/* Many programs at once: one migrates, the others find it done; each is let in. */
static void test_together(void **state)
{
	const struct place *p = *state;
	enum { PROGRAMS = 6, TURNS = 5 };
	for (int turn = 0; turn < TURNS; turn++) {
		pid_t pid[PROGRAMS];
		unlink(p->path);
		unlink(p->copy);
		old_store_make(p->path);
		for (int i = 0; i < PROGRAMS; i++) {
			pid[i] = fork();
			assert_true(pid[i] >= 0);
			if (pid[i] == 0) {
				struct store *s;
				struct err e = {0};
				struct digest_text d;
				enum store_mode mode = i % 3 ? STORE_WRITE : STORE_READ;
				if (store_open(p->path, mode, &s, &e) != ST_OK)
					_exit(1);
				if (store_digest(s, d.text, &e) != ST_OK ||
				    strcmp(d.text, OLD_STORE_DIGEST) != 0)
					_exit(2);
				store_close(s);
				_exit(0);
			}
		}
		for (int i = 0; i < PROGRAMS; i++) {
			int end;
			assert_int_equal(waitpid(pid[i], &end, 0), pid[i]);
			if (!WIFEXITED(end) || WEXITSTATUS(end) != 0)
				check_fail("turn %d, program %d: %d", turn, i, WEXITSTATUS(end));
		}
		assert_int_equal(version_in(p->path), 2);
		assert_int_equal(version_in(p->copy), 1);
		assert_int_equal(access(p->second, F_OK), -1);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test_setup_teardown(test_read, make_place, drop_place),
	    cmocka_unit_test_setup_teardown(test_write, make_place, drop_place),
	    cmocka_unit_test_setup_teardown(test_copies, make_place, drop_place),
	    cmocka_unit_test_setup_teardown(test_stale_part, make_place, drop_place),
	    cmocka_unit_test_setup_teardown(test_no_copy, make_place, drop_place),
	    cmocka_unit_test_setup_teardown(test_other_hand, make_place, drop_place),
	    cmocka_unit_test_setup_teardown(test_newer, make_place, drop_place),
	    cmocka_unit_test_setup_teardown(test_together, make_place, drop_place),
	};
	return cmocka_run_group_tests_name("migration", tests, NULL, NULL);
}
