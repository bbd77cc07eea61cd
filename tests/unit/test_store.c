/* SPDX-License-Identifier: MIT */
#include "tests/support/check.h"

#include "db/read_csv.h"
#include "db/schema.h"
#include "db/sites.h"
#include "db/store_parts.h"
#include "db/targets.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <unistd.h>

static const struct change change = {"2026-04-22T03:00:00Z", "test", "target set"};

struct place {
	char folder[64], path[128];
};

static int make_place(void **state)
{
	struct place *p = calloc(1, sizeof *p);
	if (!p)
		return -1;
	snprintf(p->folder, sizeof p->folder, "/tmp/wane-store-XXXXXX");
	if (!mkdtemp(p->folder))
		return -1;
	snprintf(p->path, sizeof p->path, "%s/wane.db", p->folder);
	*state = p;
	return 0;
}

static int drop_place(void **state)
{
	struct place *p = *state;
	char path[160];
	unlink(p->path);
	snprintf(path, sizeof path, "%s-journal", p->path);
	unlink(path);
	int failed = rmdir(p->folder); /* nothing else may be left */
	free(p);
	return failed;
}

static struct store *open_or_fail(const char *path, enum store_mode mode)
{
	struct store *s;
	struct err e = {0};
	if (store_open(path, mode, &s, &e) != ST_OK)
		check_fail("%s: %s", path ? path : "memory", e.text);
	return s;
}

static void must(enum status st, const struct err *e)
{
	if (st != ST_OK)
		check_fail("status %d: %s", (int)st, e->text);
}

static void begin(struct store *s)
{
	struct err e = {0};
	must(store_begin(s, &change, &e), &e);
}

static void commit(struct store *s)
{
	struct err e = {0};
	must(store_commit(s, &e), &e);
}

static struct field_texts row_of(const char *name, const char *t0, const char *period)
{
	struct field_texts texts;
	for (int i = 0; i < FIELD_COUNT; i++)
		texts.text[i] = "";
	texts.text[FIELD_AT_NAME] = name;
	texts.text[FIELD_AT_RA] = "187.50";
	texts.text[FIELD_AT_DEC] = "-12.25";
	texts.text[FIELD_AT_T0] = t0;
	texts.text[FIELD_AT_SCALE] = *t0 ? "BJD_TDB" : "";
	texts.text[FIELD_AT_PERIOD] = period;
	return texts;
}

static enum put_result put(struct store *s, const struct field_texts *texts, bool adopt)
{
	struct err e = {0};
	enum put_result result;
	must(target_put(s, texts, adopt, &result, &e), &e);
	return result;
}

static void put_one(struct store *s)
{
	const struct field_texts texts = row_of("Tern 14 b", "2459000.125000", "3.50");
	begin(s);
	assert_int_equal(put(s, &texts, false), PUT_NEW);
	commit(s);
}

static void sql(struct store *s, const char *text, int want)
{
	int rc = sqlite3_exec(s->db, text, NULL, NULL, NULL) & 0xFF;
	if (rc != want)
		check_fail("%s: %d, want %d: %s", text, rc, want, sqlite3_errmsg(s->db));
}

static void note_fault(void *ctx, const char *line)
{
	char *out = ctx;
	if (strlen(out) + strlen(line) + 2 < 4096) {
		strncat(out, line, 4095 - strlen(out));
		strncat(out, "\n", 4095 - strlen(out));
	}
}

static int faults_of(struct store *s, char says[4096])
{
	struct err e = {0};
	int faults = -1;
	says[0] = '\0';
	must(store_check(s, note_fault, says, &faults, &e), &e);
	return faults;
}

static char *slurp(const char *path, size_t *n)
{
	char *data;
	struct err e = {0};
	if (file_read(path, &data, n, &e) != ST_OK)
		check_fail("%s", e.text);
	return data;
}

static void spill(const char *path, const char *data, size_t n)
{
	FILE *f = fopen(path, "w");
	assert_non_null(f);
	assert_int_equal(fwrite(data, 1, n, f), n);
	assert_int_equal(fclose(f), 0);
}

/* FNV-1a over every value of every table. */
static uint64_t digest(struct store *s)
{
	static const char *const tables[] = {
	    "store_info", "change_set",	  "target",	      "target_old",
	    "ephemeris",  "target_alias", "target_alias_old", "site",
	    "site_old",	  "midtime",	  "midtime_mark",     "midtime_mark_old",
	    "setting",	  "setting_old"};
	uint64_t h = 14695981039346656037u;
	for (size_t i = 0; i < sizeof tables / sizeof tables[0]; i++) {
		char text[64];
		sqlite3_stmt *stmt;
		snprintf(text, sizeof text, "SELECT * FROM %s ORDER BY 1, rev", tables[i]);
		assert_int_equal(sqlite3_prepare_v2(s->db, text, -1, &stmt, NULL), SQLITE_OK);
		while (sqlite3_step(stmt) == SQLITE_ROW)
			for (int c = 0; c < sqlite3_column_count(stmt); c++) {
				double real = sqlite3_column_double(stmt, c);
				unsigned char bytes[sizeof real];
				memcpy(bytes, &real, sizeof real);
				const char *t = sqlite3_column_type(stmt, c) == SQLITE_TEXT
						    ? (const char *)sqlite3_column_text(stmt, c)
						    : "";
				for (size_t k = 0; k < sizeof bytes; k++)
					h = (h ^ bytes[k]) * 1099511628211u;
				for (; *t; t++)
					h = (h ^ (unsigned char)*t) * 1099511628211u;
			}
		assert_int_equal(sqlite3_finalize(stmt), SQLITE_OK);
	}
	return h;
}

/* --- opening --- */

static void test_create_and_reopen(void **state)
{
	const struct place *p = *state;
	struct err e = {0};
	struct store *s = NULL;
	char id[40];
	assert_int_equal(store_open(p->path, STORE_READ, &s, &e), ST_ABSENT);
	assert_null(s);
	assert_int_equal(access(p->path, F_OK), -1); /* reading creates nothing */
	s = open_or_fail(p->path, STORE_WRITE);
	assert_false(store_read_only(s));
	assert_int_equal(strlen(store_id(s)), 32);
	assert_int_equal(strspn(store_id(s), "0123456789abcdef"), 32);
	snprintf(id, sizeof id, "%s", store_id(s));
	put_one(s);
	uint64_t before = digest(s);
	store_close(s);
	struct stat st;
	assert_int_equal(stat(p->path, &st), 0);
	assert_int_equal(st.st_mode & 0777, 0600);
	s = open_or_fail(p->path, STORE_READ);
	assert_string_equal(store_id(s), id);
	assert_true(digest(s) == before);
	assert_int_equal(store_begin(s, &change, &e), ST_STORE);
	store_close(s);
	store_close(NULL);
}

static void test_folders(void **state)
{
	const struct place *p = *state;
	char path[256], folder[200];
	struct stat st;
	snprintf(folder, sizeof folder, "%s/a", p->folder);
	snprintf(path, sizeof path, "%s/b/wane.db", folder);
	store_close(open_or_fail(path, STORE_WRITE));
	assert_int_equal(stat(folder, &st), 0);
	assert_int_equal(st.st_mode & 0777, 0700);
	assert_int_equal(unlink(path), 0);
	snprintf(path, sizeof path, "%s/b", folder);
	assert_int_equal(rmdir(path), 0);
	assert_int_equal(rmdir(folder), 0);
}

/* A name that SQLite would take for a URI is a plain file name here. */
static void test_odd_names(void **state)
{
	const struct place *p = *state;
	static const char *const names[] = {"file:x?mode=memory", ":memory:", "a%20b?#c d.db", "\xCF\x80.db"};
	char *home = getcwd(NULL, 0);
	struct err e = {0};
	struct store *s = NULL;
	assert_non_null(home);
	assert_int_equal(chdir(p->folder), 0);
	for (size_t i = 0; i < sizeof names / sizeof names[0]; i++) {
		store_close(open_or_fail(names[i], STORE_WRITE));
		assert_int_equal(access(names[i], F_OK), 0);
		store_close(open_or_fail(names[i], STORE_READ));
		assert_int_equal(unlink(names[i]), 0);
	}
	assert_int_equal(store_open("", STORE_WRITE, &s, &e), ST_STORE);
	assert_int_equal(chdir(home), 0);
	free(home);
}

static void test_pragmas(void **state)
{
	const struct place *p = *state;
	static const struct {
		const char *ask, *want;
	} rows[] = {
	    {"PRAGMA journal_mode", "delete"},
	    {"PRAGMA synchronous", "3"},
	    {"PRAGMA foreign_keys", "1"},
	    {"PRAGMA recursive_triggers", "1"},
	    {"PRAGMA application_id", "2002873957"},
	    {"PRAGMA user_version", "2"},
	    {"PRAGMA busy_timeout", "5000"},
	    {"PRAGMA trusted_schema", "0"},
	    {"PRAGMA cell_size_check", "1"},
	    {"PRAGMA mmap_size", "0"},
	};
	struct store *s = open_or_fail(p->path, STORE_WRITE);
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		sqlite3_stmt *stmt;
		assert_int_equal(sqlite3_prepare_v2(s->db, rows[i].ask, -1, &stmt, NULL), SQLITE_OK);
		assert_int_equal(sqlite3_step(stmt), SQLITE_ROW);
		if (strcmp((const char *)sqlite3_column_text(stmt, 0), rows[i].want) != 0)
			check_fail("%s: %s", rows[i].ask, (const char *)sqlite3_column_text(stmt, 0));
		assert_int_equal(sqlite3_finalize(stmt), SQLITE_OK);
	}
	sql(s, "SELECT \"nosuch\"", SQLITE_ERROR); /* no double-quoted strings */
	sql(s, "PRAGMA writable_schema = 1; DELETE FROM sqlite_schema", SQLITE_ERROR);
	store_close(s);
}

/* --- files that are not ours: refused, and not a byte of them changes --- */

static void refuse(const char *path, const char *says)
{
	size_t n, m;
	char *before = slurp(path, &n);
	for (enum store_mode mode = STORE_READ; mode <= STORE_WRITE; mode++) {
		struct store *s = NULL;
		struct err e = {0};
		enum status st = store_open(path, mode, &s, &e);
		if (st != ST_STORE || s || !strstr(e.text, says))
			check_fail("mode %d: status %d: %s (want: %s)", (int)mode, (int)st, e.text, says);
		char *after = slurp(path, &m);
		assert_int_equal(m, n);
		assert_memory_equal(after, before, n);
		free(after);
	}
	free(before);
}

static void foreign(const char *path, const char *text)
{
	sqlite3 *db;
	assert_int_equal(sqlite3_open(path, &db), SQLITE_OK);
	assert_int_equal(sqlite3_exec(db, text, NULL, NULL, NULL), SQLITE_OK);
	assert_int_equal(sqlite3_close(db), SQLITE_OK);
}

static void test_foreign(void **state)
{
	const struct place *p = *state;
	foreign(p->path, "CREATE TABLE mine(x); INSERT INTO mine VALUES(1)");
	refuse(p->path, "another program");
	foreign(p->path, "PRAGMA application_id = 7");
	refuse(p->path, "another program");
	foreign(p->path, "PRAGMA journal_mode = WAL");
	refuse(p->path, "another program");
	char path[160];
	snprintf(path, sizeof path, "%s-wal", p->path); /* not even a helper file is made */
	assert_int_equal(access(path, F_OK), -1);
	snprintf(path, sizeof path, "%s-shm", p->path);
	assert_int_equal(access(path, F_OK), -1);
}

static void test_newer(void **state)
{
	const struct place *p = *state;
	struct store *s = open_or_fail(p->path, STORE_WRITE);
	put_one(s);
	store_close(s);
	foreign(p->path, "PRAGMA user_version = 99");
	refuse(p->path, "newer wane (schema 99, this one knows 2)");
	foreign(p->path, "PRAGMA user_version = 0");
	refuse(p->path, "no schema version");
}

static void test_no_database(void **state)
{
	const struct place *p = *state;
	spill(p->path, "name,ra_deg,dec_deg\nTern 14 b,187.5,-12.25\n", 43);
	refuse(p->path, "not a wane database");
	struct store *s = NULL;
	struct err e = {0};
	assert_int_equal(store_open(p->folder, STORE_WRITE, &s, &e), ST_STORE);
	assert_non_null(strstr(e.text, "folder"));
	assert_int_equal(store_open("/dev/null", STORE_WRITE, &s, &e), ST_STORE);
	assert_non_null(strstr(e.text, "regular"));
	assert_int_equal(unlink(p->path), 0);
	assert_int_equal(mkfifo(p->path, 0600), 0);
	assert_int_equal(store_open(p->path, STORE_READ, &s, &e), ST_STORE);
}

static void test_truncated(void **state)
{
	const struct place *p = *state;
	struct store *s = open_or_fail(p->path, STORE_WRITE);
	put_one(s);
	store_close(s);
	size_t n;
	char *data = slurp(p->path, &n);
	for (int part = 1; part < 8; part++) {
		spill(p->path, data, n * (size_t)part / 8);
		refuse(p->path, ""); /* by whichever check sees it first */
	}
	spill(p->path, data, n - 1);
	refuse(p->path, "");
	free(data);
	/* an empty file is one whose making was cut short: absent to a reader, made good by a writer */
	struct err e = {0};
	spill(p->path, "", 0);
	assert_int_equal(store_open(p->path, STORE_READ, &s, &e), ST_ABSENT);
	store_close(open_or_fail(p->path, STORE_WRITE));
}

static void test_changed_schema(void **state)
{
	const struct place *p = *state;
	static const char *const texts[] = {
	    "CREATE TRIGGER evil AFTER INSERT ON site BEGIN DELETE FROM setting; END",
	    "DROP TRIGGER evil; CREATE VIEW evil AS SELECT 1",
	    "DROP VIEW evil; CREATE TABLE more(x)",
	    "DROP TABLE more; DROP TRIGGER ephemeris_no_update",
	};
	store_close(open_or_fail(p->path, STORE_WRITE));
	for (size_t i = 0; i < sizeof texts / sizeof texts[0]; i++) {
		foreign(p->path, texts[i]);
		refuse(p->path, "schema was changed");
	}
}

static void test_read_only(void **state)
{
	const struct place *p = *state;
	struct store *s = open_or_fail(p->path, STORE_WRITE);
	put_one(s);
	store_close(s);
	if (geteuid() == 0)
		check_skip("file modes do not bind the superuser: run as another user");
	assert_int_equal(chmod(p->path, 0400), 0);
	s = open_or_fail(p->path, STORE_WRITE);
	struct err e = {0};
	assert_true(store_read_only(s));
	assert_int_equal(store_begin(s, &change, &e), ST_STORE);
	store_close(s);
}

/* Several programs make one new file at once: one schema, and all their rows. */
static void test_made_by_many(void **state)
{
	const struct place *p = *state;
	enum { PROGRAMS = 4, EDITS = 8 };
	pid_t pid[PROGRAMS];
	for (int i = 0; i < PROGRAMS; i++) {
		pid[i] = fork();
		assert_true(pid[i] >= 0);
		if (pid[i] > 0)
			continue;
		struct err e;
		struct store *s;
		if (store_open(p->path, STORE_WRITE, &s, &e) != ST_OK)
			_exit(1);
		for (int k = 0; k < EDITS; k++) {
			char name[32];
			enum put_result result;
			snprintf(name, sizeof name, "Tern %d-%d b", i + 1, k);
			const struct field_texts texts = row_of(name, "2459000.5", "3");
			if (store_begin(s, &change, &e) != ST_OK ||
			    target_put(s, &texts, false, &result, &e) != ST_OK ||
			    store_commit(s, &e) != ST_OK)
				_exit(2);
		}
		store_close(s);
		_exit(0);
	}
	for (int i = 0; i < PROGRAMS; i++) {
		int end;
		assert_int_equal(waitpid(pid[i], &end, 0), pid[i]);
		assert_true(WIFEXITED(end) && WEXITSTATUS(end) == 0);
	}
	struct store *s = open_or_fail(p->path, STORE_READ);
	struct store_counts counts;
	struct err e = {0};
	char says[4096];
	must(store_count(s, &counts, &e), &e);
	assert_int_equal(counts.targets, PROGRAMS * EDITS);
	assert_int_equal(counts.ephemerides, PROGRAMS * EDITS);
	assert_int_equal(counts.changes, PROGRAMS * EDITS);
	assert_int_equal(faults_of(s, says), 0);
	store_close(s);
}

/* --- the schema guards itself --- */

static void test_guards(void **state)
{
	static const struct {
		const char *text;
		int want;
	} rows[] = {
	    {"UPDATE ephemeris SET period_d = 4", SQLITE_CONSTRAINT},
	    {"DELETE FROM ephemeris", SQLITE_CONSTRAINT},
	    {"INSERT OR REPLACE INTO ephemeris SELECT * FROM ephemeris", SQLITE_CONSTRAINT},
	    {"REPLACE INTO ephemeris(id, target_id, version, time_scale, source, entered_utc, as_read, "
	     "doubts, rev, "
	     "change_id, row_crc) VALUES(99, 1, 1, '', '', '2026-04-22T03:00:00Z', '', 0, 1, 1, 0)",
	     SQLITE_CONSTRAINT},
	    {"INSERT INTO ephemeris SELECT * FROM ephemeris WHERE true ON CONFLICT(id) DO UPDATE SET "
	     "period_d = 4",
	     SQLITE_CONSTRAINT},
	    {"UPDATE change_set SET who = 'x'", SQLITE_CONSTRAINT},
	    {"DELETE FROM change_set", SQLITE_CONSTRAINT},
	    {"DELETE FROM target", SQLITE_CONSTRAINT},
	    {"UPDATE target SET ra_deg = 360", SQLITE_CONSTRAINT},
	    {"UPDATE target SET ra_deg = 9e999", SQLITE_CONSTRAINT},
	    {"UPDATE target SET ra_deg = NULL", SQLITE_CONSTRAINT},
	    {"UPDATE target SET dec_deg = 'north'", SQLITE_CONSTRAINT}, /* STRICT */
	    {"UPDATE target SET k = 9e999", SQLITE_CONSTRAINT},
	    {"UPDATE target SET name = ''", SQLITE_CONSTRAINT},
	    {"UPDATE target SET removed = 2", SQLITE_CONSTRAINT},
	    {"UPDATE target SET ephemeris_id = 77", SQLITE_CONSTRAINT},
	    {"INSERT INTO target_alias VALUES(1, 'x', 'x', 77, 0, 1, 1, 0)", SQLITE_CONSTRAINT},
	    {"INSERT INTO site VALUES(1, 'x', 'x', 91, 0, 0, '', '', 0, 1, 1, 0)", SQLITE_CONSTRAINT},
	    {"INSERT INTO store_info VALUES(2, '0123456789abcdef0123456789abcdef', 1, 0)", SQLITE_CONSTRAINT},
	    {"UPDATE target SET note = ''", SQLITE_OK}, /* the guards let through what is allowed */
	};
	(void)state;
	struct store *s = open_or_fail(NULL, STORE_MEMORY);
	put_one(s);
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
		sql(s, rows[i].text, rows[i].want);
	store_close(s);
}

/* The checksum in the source is that of what the steps make. */
static void test_schema_crc(void **state)
{
	(void)state;
	struct store *s = open_or_fail(NULL, STORE_MEMORY);
	struct err e = {0};
	uint32_t crc;
	must(schema_crc(s->db, &s->crc, &crc, &e), &e);
	if (crc != SCHEMA_CRC)
		check_fail("SCHEMA_CRC has to be 0x%08Xu", crc);
	store_close(s);
}

static void test_statements_fit_fields(void **state)
{
	(void)state;
	struct store *s = open_or_fail(NULL, STORE_MEMORY);
	/* columns of the load statement: id, key, fields of the target ...; then those of the ephemeris */
	int at[2] = {2, sqlite3_column_count(s->stmt[SQL_TARGET_BY_ID]) + 3};
	for (int i = 0; i < FIELD_COUNT; i++) {
		int *k = &at[fields[i].home == HOME_EPHEMERIS];
		const char *name = sqlite3_column_name(s->stmt[SQL_TARGET_LOAD], (*k)++);
		if (fields[i].kind == FIELD_DATE) {
			assert_string_equal(name, "t0_day");
			assert_string_equal(sqlite3_column_name(s->stmt[SQL_TARGET_LOAD], (*k)++), "t0_frac");
		} else {
			assert_string_equal(name, fields[i].name);
		}
	}
	assert_string_equal(sqlite3_column_name(s->stmt[SQL_TARGET_LOAD], at[0]), "ephemeris_id");
	assert_string_equal(sqlite3_column_name(s->stmt[SQL_TARGET_LOAD], at[1]), "entered_utc");
	store_close(s);
}

/* --- change sets --- */

static void test_rollback(void **state)
{
	const struct place *p = *state;
	struct err e = {0};
	struct store *s = open_or_fail(p->path, STORE_WRITE);
	put_one(s);
	uint64_t before = digest(s);
	const struct field_texts known = row_of("tern-14-B", "2459001.5", "3.75"),
				 other = row_of("Tern 15 b", "", "");
	begin(s);
	assert_int_equal(put(s, &known, true), PUT_CHANGED);
	assert_int_equal(put(s, &other, false), PUT_NEW);
	must(target_remove(s, "Tern 15 b", &e), &e);
	assert_true(digest(s) != before);
	store_rollback(s);
	assert_true(digest(s) == before);
	/* the same left undone by closing, and by a program that dies */
	begin(s);
	assert_int_equal(put(s, &known, true), PUT_CHANGED);
	store_close(s);
	s = open_or_fail(p->path, STORE_READ);
	assert_true(digest(s) == before);
	store_close(s);
}

static void test_order_of_calls(void **state)
{
	struct err e = {0};
	enum put_result result;
	const struct field_texts texts = row_of("Tern 14 b", "", "");
	(void)state;
	struct store *s = open_or_fail(NULL, STORE_MEMORY);
	assert_int_equal(target_put(s, &texts, false, &result, &e), ST_STORE); /* outside a change set */
	assert_int_equal(store_commit(s, &e), ST_STORE);
	store_rollback(s);
	begin(s);
	assert_int_equal(store_begin(s, &change, &e), ST_STORE);
	commit(s);
	struct store_counts counts;
	must(store_count(s, &counts, &e), &e);
	assert_int_equal(counts.changes, 0); /* a change set that changed nothing leaves no row */
	store_close(s);
}

static void test_history(void **state)
{
	static const char *const asks[] = {
	    "SELECT name FROM target_old WHERE id = 1 AND rev = 1 AND mag IS NULL AND replaced_by = 2",
	    "SELECT name FROM target_old WHERE id = 1 AND rev = 2 AND mag = 11.5 AND replaced_by = 3",
	    "SELECT name FROM target WHERE id = 1 AND rev = 3 AND removed = 1 AND change_id = 3",
	    "SELECT verb FROM change_set WHERE id = 3 AND who = 'test' AND utc = '2026-04-22T03:00:00Z'",
	};
	struct err e = {0};
	(void)state;
	struct store *s = open_or_fail(NULL, STORE_MEMORY);
	put_one(s);
	const int field[] = {field_find("mag")};
	const char *const text[] = {"11.5"};
	begin(s);
	must(target_set(s, "tern 14B", field, text, 1, &e), &e);
	commit(s);
	begin(s);
	must(target_remove(s, "Tern 14 b", &e), &e);
	commit(s);
	for (size_t i = 0; i < sizeof asks / sizeof asks[0]; i++) {
		sqlite3_stmt *stmt;
		assert_int_equal(sqlite3_prepare_v2(s->db, asks[i], -1, &stmt, NULL), SQLITE_OK);
		if (sqlite3_step(stmt) != SQLITE_ROW)
			check_fail("nothing from %s", asks[i]);
		assert_int_equal(sqlite3_finalize(stmt), SQLITE_OK);
	}
	char says[4096];
	assert_int_equal(faults_of(s, says), 0);
	store_close(s);
}

/* A row that another connection changed since it was read is not overwritten. */
static void test_compare_and_set(void **state)
{
	(void)state;
	struct err e = {0};
	struct store *s = open_or_fail(NULL, STORE_MEMORY);
	put_one(s);
	begin(s);
	/* the rev in the row moves on between reading and writing: a trigger plays the other program */
	sql(s,
	    "CREATE TEMP TRIGGER other AFTER INSERT ON target_old BEGIN UPDATE target SET rev = rev + 1; END",
	    SQLITE_OK);
	assert_int_equal(target_remove(s, "Tern 14 b", &e), ST_CONFLICT);
	store_rollback(s);
	store_close(s);
}

/* --- checksums --- */

static void test_row_crc(void **state)
{
	/* CRC-32 of "123456789" is CBF43926: the check value of the catalogue of parametrised CRC algorithms
	 * (from memory) */
	struct crc_table table;
	(void)state;
	crc_table_fill(&table);
	assert_int_equal(crc_bytes(&table, 0, "123456789", 9), 0xCBF43926u);
	assert_int_equal(crc_bytes(&table, crc_bytes(&table, 0, "1234", 4), "56789", 5), 0xCBF43926u);
	/* equal bits under different types, or cells moved, differ */
	const struct cell rows[][2] = {
	    {cell_int(0), cell_real(0)},
	    {cell_real(0), cell_int(0)},
	    {cell_real((double)NAN), cell_int(0)},
	    {cell_text(""), cell_int(0)},
	    {cell_text("a"), cell_text("b")},
	    {cell_text("ab"), cell_text("")},
	    {cell_text(""), cell_text("ab")},
	    {cell_int(1), cell_int(0)},
	    {cell_int(0), cell_int(1)},
	};
	enum { ROWS = sizeof rows / sizeof rows[0] };
	for (size_t i = 0; i < ROWS; i++)
		for (size_t k = 0; k < i; k++)
			assert_int_not_equal(row_crc(&table, rows[i], 2), row_crc(&table, rows[k], 2));
	const struct cell minus = cell_real(-0.0), plus = cell_real(0.0);
	assert_int_equal(row_crc(&table, &minus, 1), row_crc(&table, &plus, 1));
}

static void test_flipped_values(void **state)
{
	static const char *const damages[] = {
	    "UPDATE target SET ra_deg = 188.5",
	    "UPDATE target SET mag = 10",
	    "UPDATE target SET note = 'x'",
	    "UPDATE target SET name = 'Tern 15 b'",
	    "UPDATE target SET as_read = ''",
	    "UPDATE target SET removed = 1",
	    "UPDATE target SET row_crc = row_crc + 1",
	    "DROP TRIGGER ephemeris_no_update; UPDATE ephemeris SET period_d = 3.25",
	    "DROP TRIGGER ephemeris_no_update; UPDATE ephemeris SET t0_frac = 0.25",
	    "DROP TRIGGER ephemeris_no_update; UPDATE ephemeris SET time_scale = 'HJD_UTC'",
	};
	(void)state;
	for (size_t i = 0; i < sizeof damages / sizeof damages[0]; i++) {
		struct store *s = open_or_fail(NULL, STORE_MEMORY);
		struct target_list list;
		struct err e = {0};
		char says[4096];
		put_one(s);
		sql(s, damages[i], SQLITE_OK);
		must(targets_load(s, &list, &e), &e);
		/* named, and nothing of the bad row is used */
		if (list.n_bad != 1 || !strstr(list.bad, "checksum"))
			check_fail("%s: %zu bad rows: %s", damages[i], list.n_bad, list.bad);
		if (list.n > 0)
			assert_true(isnan(list.t[0].t0.day) && isnan(list.t[0].period_d));
		target_list_free(&list);
		assert_true(faults_of(s, says) > 0);
		assert_non_null(strstr(says, "checksum"));
		/* and it is not written over */
		const struct field_texts texts = row_of("Tern 14 b", "2459002.5", "3.5");
		enum put_result result;
		begin(s);
		enum status st = target_put(s, &texts, true, &result, &e);
		assert_int_equal(st, ST_STORE);
		store_rollback(s);
		store_close(s);
	}
}

static void test_wrong_pointer(void **state)
{
	(void)state;
	struct store *s = open_or_fail(NULL, STORE_MEMORY);
	char says[4096];
	put_one(s);
	const struct field_texts texts = row_of("Tern 15 b", "2459003.5", "4.5");
	begin(s);
	assert_int_equal(put(s, &texts, false), PUT_NEW);
	commit(s);
	assert_int_equal(faults_of(s, says), 0);
	sql(s, "UPDATE target SET ephemeris_id = 1 WHERE id = 2", SQLITE_OK);
	assert_true(faults_of(s, says) > 0);
	assert_non_null(strstr(says, "another target"));
	/* good checksums or not, an ephemeris of another star is not used */
	struct cell cell[ROW_CELLS_MAX];
	bool found;
	struct err e = {0};
	struct target_list list;
	const struct cell key = cell_int(2);
	must(cells_bind(s->stmt[SQL_TARGET_BY_ID], 1, &key, 1, &e), &e);
	must(sql_step(s, SQL_TARGET_BY_ID, &found, &e), &e);
	assert_true(found);
	size_t cells = (size_t)sqlite3_column_count(s->stmt[SQL_TARGET_BY_ID]) - 1;
	cells_read(s->stmt[SQL_TARGET_BY_ID], 0, cell, cells);
	char text[96];
	snprintf(text, sizeof text, "UPDATE target SET row_crc = %lu WHERE id = 2",
		 (unsigned long)row_crc(&s->crc, cell, cells));
	sql_reset(s, SQL_TARGET_BY_ID);
	sql(s, text, SQLITE_OK);
	must(targets_load(s, &list, &e), &e);
	assert_int_equal(list.n_bad, 1);
	assert_true(isnan(list.t[target_list_find(&list, "Tern 15 b")].period_d));
	check_close("the other", list.t[target_list_find(&list, "Tern 14 b")].period_d, 3.5, 0.0);
	target_list_free(&list);
	store_close(s);
}

/* Single bits of a file flipped: the store refuses it, or names the row, or shows the same values as before.
 */
static void test_flipped_bits(void **state)
{
	const struct place *p = *state;
	enum { FLIPS = 200, TARGETS = 20 };
	struct store *s = open_or_fail(p->path, STORE_WRITE);
	struct err e = {0};
	begin(s);
	for (int i = 0; i < TARGETS; i++) {
		char name[32];
		snprintf(name, sizeof name, "Tern %d b", i);
		struct field_texts texts = row_of(name, "2459000.123456789", "3.0123");
		texts.text[field_find("note")] = "a note to fill the row with something that can break";
		texts.text[field_find("mag")] = "11.37";
		assert_int_equal(put(s, &texts, false), PUT_NEW);
	}
	commit(s);
	uint64_t before = digest(s);
	store_close(s);
	size_t n;
	char *data = slurp(p->path, &n);
	struct rng r = rng_open("flipped bits");
	int refused = 0, named = 0, unseen = 0;
	for (int turn = 0; turn < FLIPS; turn++) {
		size_t at = (size_t)rng_between(&r, 0, (double)n);
		char bit = (char)(1 << (int)rng_between(&r, 0, 8)), says[4096];
		data[at] = (char)(data[at] ^ bit);
		spill(p->path, data, n);
		data[at] = (char)(data[at] ^ bit);
		if (store_open(p->path, STORE_READ, &s, &e) != ST_OK) {
			refused++;
			continue;
		}
		if (faults_of(s, says) > 0)
			named++;
		else if (digest(s) != before)
			unseen++;
		store_close(s);
	}
	free(data);
	print_message("%d flips: %d refused, %d named, %d changed a value unseen\n", FLIPS, refused, named,
		      unseen);
	assert_int_equal(unseen, 0);
	assert_true(refused + named > 0);
}

/* --- sites --- */

static void test_sites(void **state)
{
	(void)state;
	struct store *s = open_or_fail(NULL, STORE_MEMORY);
	struct err e = {0};
	struct site_list list;
	struct site site = {.name = " Tern Hill ",
			    .lat_deg = 38.62,
			    .lon_east_deg = -109.36,
			    .height_m = 2100,
			    .zone = "America/Denver"};
	begin(s);
	must(site_put(s, &site, true, &e), &e);
	assert_int_equal(site_put(s, &site, true, &e), ST_CONFLICT);
	site.height_m = 2110;
	must(site_put(s, &site, false, &e), &e);
	struct site other = {
	    .name = "Arm", .lat_deg = -90, .lon_east_deg = 180, .height_m = -450, .zone = ""};
	must(site_put(s, &other, true, &e), &e);
	commit(s);
	must(sites_load(s, &list, &e), &e);
	assert_int_equal(list.n, 2);
	assert_string_equal(list.site[0].name, "Arm");
	assert_string_equal(list.site[0].zone, "");
	assert_int_equal(site_list_find(&list, "TERN-hill"), 1);
	assert_int_equal(site_list_find(&list, "Tern Hull"), -1);
	assert_string_equal(list.site[1].name, "Tern Hill");
	assert_string_equal(list.site[1].zone, "America/Denver");
	check_close("latitude", list.site[1].lat_deg, 38.62, 0.0);
	check_close("longitude", list.site[1].lon_east_deg, -109.36, 0.0);
	check_close("height", list.site[1].height_m, 2110, 0.0);
	site_list_free(&list);
	begin(s);
	must(site_remove(s, "tern hill", &e), &e);
	assert_int_equal(site_remove(s, "tern hill", &e), ST_ABSENT);
	commit(s);
	must(sites_load(s, &list, &e), &e);
	assert_int_equal(list.n, 1);
	site_list_free(&list);
	begin(s);
	must(site_put(s, &site, true, &e), &e); /* comes back */
	commit(s);
	sql(s, "UPDATE site SET lat_deg = 39", SQLITE_OK);
	must(sites_load(s, &list, &e), &e);
	/* both rows carry another latitude than their checksum now: the one in use and the one that was
	 * removed */
	assert_int_equal(list.n, 0);
	assert_int_equal(list.n_bad, 2);
	assert_non_null(strstr(list.bad, "checksum of site Arm"));
	site_list_free(&list);
	store_close(s);
}

/* --- horizon masks --- */

static struct mask mask_of(size_t n)
{
	struct mask m = {.n = 0};
	struct err e = {0};
	for (size_t i = 0; i < n; i++)
		must(mask_add(&m, 360.0 * (double)i / (double)n, 10.0 * sin((double)i), &e), &e);
	return m;
}

static void check_mask(struct store *s, const char *name, const struct mask *want)
{
	struct site_list list;
	struct err e = {0};
	must(sites_load(s, &list, &e), &e);
	long at = site_list_find(&list, name);
	assert_true(at >= 0);
	const struct mask *got = list.site[at].mask;
	assert_int_equal(got ? got->n : 0, want->n);
	for (size_t i = 0; i < want->n; i++) {
		check_close("azimuth", got->knot[i].az_deg, want->knot[i].az_deg, 0.0);
		check_close("altitude", got->knot[i].alt_deg, want->knot[i].alt_deg, 0.0);
	}
	site_list_free(&list);
}

static void test_site_masks(void **state)
{
	(void)state;
	struct store *s = open_or_fail(NULL, STORE_MEMORY);
	struct err e = {0};
	char says[4096];
	const struct mask three = mask_of(3), full = mask_of(MASK_KNOTS_MAX), none = {.n = 0};
	struct site hill = {.name = "Tern Hill", .lat_deg = 38.62, .lon_east_deg = -109.36, .zone = ""},
		    south = {.name = "Arm", .lat_deg = -30, .lon_east_deg = -70, .zone = "", .mask = &full};
	begin(s);
	hill.mask = &three;
	must(site_put(s, &hill, true, &e), &e);
	must(site_put(s, &south, true, &e), &e);
	commit(s);
	check_mask(s, "Tern Hill", &three);
	check_mask(s, "Arm", &full);
	begin(s);
	hill.mask = NULL;
	must(site_put(s, &hill, false, &e), &e);
	commit(s);
	check_mask(s, "Tern Hill", &none);
	check_mask(s, "Arm", &full);
	/* the row before is kept with its mask */
	sqlite3_stmt *stmt = NULL;
	assert_int_equal(sqlite3_prepare_v2(s->db, "SELECT mask FROM site_old", -1, &stmt, NULL), SQLITE_OK);
	assert_int_equal(sqlite3_step(stmt), SQLITE_ROW);
	assert_int_equal(strncmp((const char *)sqlite3_column_text(stmt, 0), "0 0;120 ", 8), 0);
	sqlite3_finalize(stmt);
	assert_int_equal(faults_of(s, says), 0);
	/* a changed mask is a changed row */
	sql(s, "UPDATE site SET mask = '0 10' WHERE name = 'Arm'", SQLITE_OK);
	assert_int_equal(faults_of(s, says), 1);
	struct site_list list;
	must(sites_load(s, &list, &e), &e);
	assert_int_equal(list.n, 1);
	assert_int_equal(list.n_bad, 1);
	site_list_free(&list);
	sql(s, "UPDATE site SET mask = NULL", SQLITE_CONSTRAINT);
	store_close(s);
}

/* --- has another program written? --- */

static void test_data_version(void **state)
{
	const struct place *p = *state;
	struct err e = {0};
	struct store *writer = open_or_fail(p->path, STORE_WRITE),
		     *reader = open_or_fail(p->path, STORE_READ);
	long before = 0, after = 0, own = 0, again = 0;
	must(store_data_version(reader, &before, &e), &e);
	must(store_data_version(writer, &own, &e), &e);
	put_one(writer);
	must(store_data_version(reader, &after, &e), &e);
	assert_true(after != before);
	must(store_data_version(reader, &again, &e), &e);
	assert_int_equal(again, after);
	must(store_data_version(writer, &again, &e), &e);
	assert_int_equal(again, own);
	/* what is given up is no change */
	begin(writer);
	const struct field_texts other = row_of("Tern 15 b", "", "");
	assert_int_equal(put(writer, &other, false), PUT_NEW);
	store_rollback(writer);
	must(store_data_version(reader, &again, &e), &e);
	assert_int_equal(again, after);
	store_close(reader);
	store_close(writer);
}

static void test_site_faults(void **state)
{
	static const struct {
		const char *name;
		double lat, lon, height;
		const char *zone;
		enum status want;
	} rows[] = {
	    {"", 0, 0, 0, "", ST_SYNTAX},
	    {"a\x1B", 0, 0, 0, "", ST_SYNTAX},
	    {"a", 90.1, 0, 0, "", ST_RANGE},
	    {"a", (double)NAN, 0, 0, "", ST_RANGE},
	    {"a", 0, 180.1, 0, "", ST_RANGE},
	    {"a", 0, -180.1, 0, "", ST_RANGE},
	    {"a", 0, (double)INFINITY, 0, "", ST_RANGE},
	    {"a", 0, 0, 9001, "", ST_RANGE},
	    {"a", 0, 0, -451, "", ST_RANGE},
	    {"a", 0, 0, 0, "Two Words", ST_SYNTAX},
	    {"a", 0, 0, 0, "a\x07", ST_SYNTAX},
	    {"a", 0, 0, 0, "0123456789012345678901234567890123456789012345678901234567890123", ST_SYNTAX},
	};
	(void)state;
	struct store *s = open_or_fail(NULL, STORE_MEMORY);
	begin(s);
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct err e = {0};
		const struct site site = {.name = rows[i].name,
					  .lat_deg = rows[i].lat,
					  .lon_east_deg = rows[i].lon,
					  .height_m = rows[i].height,
					  .zone = rows[i].zone};
		enum status st = site_put(s, &site, true, &e);
		if (st != rows[i].want)
			check_fail("row %zu: status %d: %s", i, (int)st, e.text);
	}
	commit(s);
	store_close(s);
}

#define IN_PLACE(test) cmocka_unit_test_setup_teardown(test, make_place, drop_place)

int main(void)
{
	const struct CMUnitTest tests[] = {
	    IN_PLACE(test_create_and_reopen),
	    IN_PLACE(test_folders),
	    IN_PLACE(test_odd_names),
	    IN_PLACE(test_pragmas),
	    IN_PLACE(test_foreign),
	    IN_PLACE(test_newer),
	    IN_PLACE(test_no_database),
	    IN_PLACE(test_truncated),
	    IN_PLACE(test_changed_schema),
	    IN_PLACE(test_read_only),
	    IN_PLACE(test_made_by_many),
	    cmocka_unit_test(test_guards),
	    cmocka_unit_test(test_schema_crc),
	    cmocka_unit_test(test_statements_fit_fields),
	    IN_PLACE(test_rollback),
	    cmocka_unit_test(test_order_of_calls),
	    cmocka_unit_test(test_history),
	    cmocka_unit_test(test_compare_and_set),
	    cmocka_unit_test(test_row_crc),
	    cmocka_unit_test(test_flipped_values),
	    cmocka_unit_test(test_wrong_pointer),
	    IN_PLACE(test_flipped_bits),
	    cmocka_unit_test(test_sites),
	    cmocka_unit_test(test_site_masks),
	    IN_PLACE(test_data_version),
	    cmocka_unit_test(test_site_faults),
	};
	return cmocka_run_group_tests_name("store", tests, NULL, NULL);
}
