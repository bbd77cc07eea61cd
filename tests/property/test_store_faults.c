/* SPDX-License-Identifier: MIT
 * Every write, sync, truncation and deletion of a file, and every allocation of the database library, fails
 * once in turn, or from then on. An import, or its undo, is then stored whole or not at all, says so, and the
 * same store works again when the fault is over. */
#include "tests/support/check.h"
#include "tests/support/observing_store.h"
#include "tests/support/old_store.h"

#include "db/allotments.h"
#include "db/history.h"
#include "db/import.h"
#include "db/plans.h"
#include "db/stored_settings.h"
#include "db/targets.h"
#include "db/telescopes.h"

#include <sqlite3.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

/* --- what fails --- */

static long calls_left = -1; /* good calls before the fault; -1: none will come */
static bool for_good, met, memory_only;
static int fault_code;

static bool fails_now(void)
{
	if (calls_left < 0)
		return false;
	if (calls_left > 0) {
		calls_left--;
		return false;
	}
	met = true;
	if (!for_good)
		calls_left = -1;
	return true;
}

static bool file_fails(void)
{
	return !memory_only && fails_now();
}

/* --- a layer over the files of the system, which fails where it is told to --- */

struct layer_file {
	sqlite3_file base;
	sqlite3_file *real; /* lies behind this struct */
};

static sqlite3_vfs *below;

static sqlite3_file *real(sqlite3_file *f)
{
	return ((struct layer_file *)f)->real;
}

static int layer_close(sqlite3_file *f)
{
	return real(f)->pMethods->xClose(real(f));
}

static int layer_read(sqlite3_file *f, void *to, int n, sqlite3_int64 at)
{
	return real(f)->pMethods->xRead(real(f), to, n, at);
}

static int layer_write(sqlite3_file *f, const void *from, int n, sqlite3_int64 at)
{
	return file_fails() ? fault_code : real(f)->pMethods->xWrite(real(f), from, n, at);
}

static int layer_truncate(sqlite3_file *f, sqlite3_int64 size)
{
	return file_fails() ? fault_code : real(f)->pMethods->xTruncate(real(f), size);
}

/* Nothing here cuts the power: a sync that does nothing keeps the loops short. */
static int layer_sync(sqlite3_file *f, int flags)
{
	(void)f;
	(void)flags;
	return file_fails() ? fault_code : SQLITE_OK;
}

static int layer_size(sqlite3_file *f, sqlite3_int64 *size)
{
	return real(f)->pMethods->xFileSize(real(f), size);
}

static int layer_lock(sqlite3_file *f, int level)
{
	return real(f)->pMethods->xLock(real(f), level);
}

static int layer_unlock(sqlite3_file *f, int level)
{
	return real(f)->pMethods->xUnlock(real(f), level);
}

static int layer_reserved(sqlite3_file *f, int *out)
{
	return real(f)->pMethods->xCheckReservedLock(real(f), out);
}

static int layer_control(sqlite3_file *f, int op, void *arg)
{
	return real(f)->pMethods->xFileControl(real(f), op, arg);
}

static int layer_sector(sqlite3_file *f)
{
	return real(f)->pMethods->xSectorSize(real(f));
}

static int layer_device(sqlite3_file *f)
{
	return real(f)->pMethods->xDeviceCharacteristics(real(f));
}

static const sqlite3_io_methods methods = {
    .iVersion = 1,
    .xClose = layer_close,
    .xRead = layer_read,
    .xWrite = layer_write,
    .xTruncate = layer_truncate,
    .xSync = layer_sync,
    .xFileSize = layer_size,
    .xLock = layer_lock,
    .xUnlock = layer_unlock,
    .xCheckReservedLock = layer_reserved,
    .xFileControl = layer_control,
    .xSectorSize = layer_sector,
    .xDeviceCharacteristics = layer_device,
};

static int layer_open(sqlite3_vfs *vfs, const char *name, sqlite3_file *f, int flags, int *out)
{
	struct layer_file *file = (struct layer_file *)f;
	(void)vfs;
	file->real = (sqlite3_file *)(void *)(file + 1);
	file->base.pMethods = NULL;
	int rc = below->xOpen(below, name, file->real, flags, out);
	if (rc == SQLITE_OK)
		file->base.pMethods = &methods;
	return rc;
}

static int layer_delete(sqlite3_vfs *vfs, const char *name, int sync)
{
	(void)vfs;
	return file_fails() ? SQLITE_IOERR_DELETE : below->xDelete(below, name, sync);
}

/* --- allocations --- */

static sqlite3_mem_methods heap, failing_heap;

static void *heap_malloc(int n)
{
	return fails_now() ? NULL : heap.xMalloc(n);
}

static void *heap_realloc(void *old, int n)
{
	return fails_now() ? NULL : heap.xRealloc(old, n);
}

/* --- the loop --- */

static const struct change change = {"2026-04-22T03:00:00Z", "test", "import"};
static const char before_table[] = "name,ra_deg,dec_deg,t0_jd,time_scale,period_d\n"
				   "Tern 1 b,10,20,2459000.5,BJD_TDB,3\nTern 2 b,10,20,2459000.5,BJD_TDB,3\n";
static const char more_table[] = "name,ra_deg,dec_deg,t0_jd,time_scale,period_d\n"
				 "Tern 1 b,11,20,2459001.5,BJD_TDB,3.5\nTern 3 b,10,20,2459000.5,BJD_TDB,3\n"
				 "Tern 4 b,10,20,,,\nTern 5 b,10,20,2459000.5,HJD_UTC,3\n";

static enum status import(struct store *s, const char *table, struct err *e)
{
	struct import_report report;
	const struct import_options o = {.adopt = true, .change = change};
	return import_targets(s, table, strlen(table), &o, &report, NULL, NULL, e);
}

static enum status undo(struct store *s, struct err *e)
{
	int64_t undone;
	return history_undo(s, 0, &change, &undone, e);
}

/* `targets ephemerides changes digest`, and that nothing is damaged. */
enum { LOOK = 96 };
static void look(struct store *s, char out[LOOK])
{
	char digest[33];
	struct store_counts counts;
	struct err e = {0};
	int faults = -1;
	if (store_check(s, NULL, NULL, &faults, &e) != ST_OK || store_count(s, &counts, &e) != ST_OK ||
	    store_digest(s, digest, &e) != ST_OK)
		check_fail("%s", e.text);
	assert_int_equal(faults, 0);
	snprintf(out, LOOK, "%ld %ld %ld %s", counts.targets, counts.ephemerides, counts.changes, digest);
}

/* One fault at call number `at`; false when the import was over before. */
static bool one_fault(const char *path, long at)
{
	struct store *s;
	struct err e = {0}, fine = {0};
	char was[LOOK], is[LOOK];
	unlink(path);
	if (store_open(path, STORE_WRITE, &s, &fine) != ST_OK || import(s, before_table, &fine) != ST_OK)
		check_fail("%s", fine.text);
	look(s, was);
	met = false;
	calls_left = at;
	enum status st = import(s, more_table, &e);
	calls_left = -1;
	bool reached = met;
	if (st != ST_OK && !*e.text)
		check_fail("call %ld: fails without a word", at);
	look(s, is);
	/* told to be stored: it is. Told to have failed: nothing of it is there. */
	if ((st == ST_OK ? strncmp(is, "5 5 2 ", 6) : strcmp(is, was)) != 0)
		check_fail("call %ld: status %d (%s), but there is %s", at, (int)st, e.text, is);
	/* a fresh look from the file agrees, and the same store goes on */
	struct store *other;
	if (store_open(path, STORE_READ, &other, &fine) != ST_OK)
		check_fail("call %ld: %s", at, fine.text);
	look(other, was);
	assert_string_equal(was, is);
	store_close(other);
	if (import(s, more_table, &fine) != ST_OK)
		check_fail("call %ld: the store works no more: %s", at, fine.text);
	look(s, is);
	assert_memory_equal(is, "5 5 2 ", 6);
	store_close(s);
	return reached;
}

/* The same for an undo: `before` is what it leads to. */
static bool one_fault_of_undo(const char *path, long at)
{
	struct store *s;
	struct err e = {0}, fine = {0};
	char before[LOOK], was[LOOK], is[LOOK];
	unlink(path);
	if (store_open(path, STORE_WRITE, &s, &fine) != ST_OK || import(s, before_table, &fine) != ST_OK)
		check_fail("%s", fine.text);
	look(s, before);
	if (import(s, more_table, &fine) != ST_OK)
		check_fail("%s", fine.text);
	look(s, was);
	met = false;
	calls_left = at;
	enum status st = undo(s, &e);
	calls_left = -1;
	bool reached = met;
	if (st != ST_OK && !*e.text)
		check_fail("call %ld: fails without a word", at);
	look(s, is);
	const char *digest = strrchr(st == ST_OK ? before : was, ' ');
	if (strcmp(strrchr(is, ' '), digest) != 0 || (st != ST_OK && strcmp(is, was) != 0))
		check_fail("call %ld: status %d (%s), but there is %s", at, (int)st, e.text, is);
	if (st != ST_OK && undo(s, &fine) != ST_OK)
		check_fail("call %ld: the store works no more: %s", at, fine.text);
	store_close(s);
	if (store_open(path, STORE_READ, &s, &fine) != ST_OK)
		check_fail("call %ld: %s", at, fine.text);
	look(s, is);
	assert_string_equal(strrchr(is, ' '), strrchr(before, ' '));
	store_close(s);
	return reached;
}

/* --- plans, and what they hang on --- */

/* One change set: a telescope, time, a setting, an edition of a plan, a mark. */
static enum status plan_night(struct store *s, int based_on, struct err *e)
{
	static const char utc[] = "2026-04-23T03:00:00Z";
	struct small_plan p;
	const struct allotment time = {
	    .site_id = 1, .first_mjd = 61152, .last_mjd = 61152 + based_on, .span = "whole", .note = ""};
	struct telescope t = telescope_empty();
	int64_t id = 0;
	int edition;
	small_plan_make(&p, "one", utc);
	p.window.figures = "t1=x";
	t.site_id = 1;
	t.name = "Tern One";
	t.slew_deg_s = 1 + based_on;
	enum status st = store_begin(s, &change, e);
	if (st == ST_OK)
		st = telescope_put(s, &t, false, e);
	if (st == ST_OK)
		st = allotment_add(s, &time, &id, e);
	if (st == ST_OK)
		st = stored_setting_put(s, "half.1", based_on ? "dark" : "sunset", e);
	if (st == ST_OK)
		st = plan_store(s, &p.plan, true, based_on, &id, &edition, e);
	if (st == ST_OK)
		st = plan_mark(s, id, "one", based_on ? "done" : "started", "", "", utc, e);
	if (st == ST_OK)
		return store_commit(s, e);
	store_rollback(s);
	return st;
}

static bool one_fault_of_plan(const char *path, long at)
{
	struct store *s;
	struct err e = {0}, fine = {0};
	struct plan_row plan;
	char was[LOOK], is[LOOK];
	unlink(path);
	if (store_open(path, STORE_WRITE, &s, &fine) != ST_OK)
		check_fail("%s", fine.text);
	observing_fill(s, 1);
	if (plan_night(s, 0, &fine) != ST_OK)
		check_fail("%s", fine.text);
	look(s, was);
	met = false;
	calls_left = at;
	enum status st = plan_night(s, 1, &e);
	calls_left = -1;
	bool reached = met;
	if (st != ST_OK && !*e.text)
		check_fail("call %ld: fails without a word", at);
	look(s, is);
	if ((st == ST_OK) != (strcmp(is, was) != 0))
		check_fail("call %ld: status %d (%s), but there is %s", at, (int)st, e.text, is);
	if (st != ST_OK && plan_night(s, 1, &fine) != ST_OK)
		check_fail("call %ld: the store works no more: %s", at, fine.text);
	if (plan_find(s, 1, 0, 61152, NULL, &plan, &fine) != ST_OK)
		check_fail("call %ld: %s", at, fine.text);
	assert_int_equal(plan.edition, 2);
	assert_string_equal(plan.item[0].state, "done");
	plan_row_free(&plan);
	store_close(s);
	return reached;
}

/* --- an older store that is opened: it is old or new, whole, and opens the next time --- */

static bool one_fault_of_migration(const char *path, long at)
{
	struct store *s = NULL;
	struct err e = {0}, fine = {0};
	char copy[96], is[LOOK];
	snprintf(copy, sizeof copy, "%s.schema-1.bak", path);
	unlink(path);
	unlink(copy);
	old_store_make(path);
	met = false;
	calls_left = at;
	enum status st = store_open(path, STORE_WRITE, &s, &e);
	calls_left = -1;
	bool reached = met;
	if (st != ST_OK && !*e.text)
		check_fail("call %ld: fails without a word", at);
	store_close(s);
	if (store_open(path, STORE_READ, &s, &fine) != ST_OK)
		check_fail("call %ld (%s): can't be read after that: %s", at, e.text, fine.text);
	look(s, is);
	assert_string_equal(strrchr(is, ' ') + 1, OLD_STORE_DIGEST);
	store_close(s);
	if (store_open(path, STORE_WRITE, &s, &fine) != ST_OK)
		check_fail("call %ld (%s): can't be opened after that: %s", at, e.text, fine.text);
	look(s, is);
	assert_string_equal(strrchr(is, ' ') + 1, OLD_STORE_DIGEST);
	store_close(s);
	/* the copy is there, whole */
	if (store_open(copy, STORE_READ, &s, &fine) != ST_OK)
		check_fail("call %ld: the copy: %s", at, fine.text);
	look(s, is);
	assert_string_equal(strrchr(is, ' ') + 1, OLD_STORE_DIGEST);
	store_close(s);
	assert_int_equal(unlink(copy), 0);
	return reached;
}

#if defined(__has_feature)
#if __has_feature(address_sanitizer)
#define SANITIZED 1
#endif
#endif
#ifndef SANITIZED
#define SANITIZED 0
#endif

/* Every point, or with `thin` all of the first twenty and then ever fewer: opening an older store takes
 * thousands of allocations. Under sanitizers, which make all of it four times slower, every third. */
static void every_fault_of(const char *what, bool lasting, bool thin, bool (*one)(const char *path, long at),
			   const char *path)
{
	long at = 0, points = 0;
	for (; one(path, at); points++)
		at += thin && at > 20 ? 1 + at / 2 : SANITIZED ? 3 : 1;
	print_message("%s%s: %ld points of %ld\n", what, lasting ? ", for good" : "", points, at);
	assert_true(points > 10);
}

static void every_fault(const char *what, int code, bool lasting)
{
	char folder[] = "/tmp/wane-fault-XXXXXX", path[64];
	char line[96];
	assert_non_null(mkdtemp(folder));
	snprintf(path, sizeof path, "%s/wane.db", folder);
	fault_code = code;
	for_good = lasting;
	every_fault_of(what, lasting, false, one_fault, path);
	if (lasting) { /* once is enough for the same statements */
		snprintf(line, sizeof line, "%s, undo", what);
		every_fault_of(line, lasting, false, one_fault_of_undo, path);
		snprintf(line, sizeof line, "%s, plan", what);
		every_fault_of(line, lasting, memory_only, one_fault_of_plan, path);
	}
	if (lasting || memory_only) {
		snprintf(line, sizeof line, "%s, older schema", what);
		every_fault_of(line, lasting, memory_only, one_fault_of_migration, path);
	}
	assert_int_equal(unlink(path), 0);
	assert_int_equal(rmdir(folder), 0);
}

static void layer_on(sqlite3_vfs *layer)
{
	below = sqlite3_vfs_find(NULL);
	assert_non_null(below);
	*layer = *below;
	layer->zName = "layer";
	layer->szOsFile = below->szOsFile + (int)sizeof(struct layer_file);
	layer->xOpen = layer_open;
	layer->xDelete = layer_delete;
	assert_int_equal(sqlite3_vfs_register(layer, 1), SQLITE_OK);
}

static void layer_off(sqlite3_vfs *layer)
{
	assert_int_equal(sqlite3_vfs_unregister(layer), SQLITE_OK);
	assert_int_equal(sqlite3_vfs_register(below, 1), SQLITE_OK);
}

static void test_files(void **state)
{
	sqlite3_vfs layer;
	(void)state;
	layer_on(&layer);
	every_fault("disk full", SQLITE_FULL, false);
	every_fault("disk full", SQLITE_FULL, true);
	every_fault("I/O error", SQLITE_IOERR_WRITE, false);
	every_fault("I/O error", SQLITE_IOERR_WRITE, true);
	layer_off(&layer);
}

static void test_memory(void **state)
{
	sqlite3_vfs layer;
	(void)state;
	assert_int_equal(sqlite3_shutdown(), SQLITE_OK);
	assert_int_equal(sqlite3_config(SQLITE_CONFIG_GETMALLOC, &heap), SQLITE_OK);
	failing_heap = heap;
	failing_heap.xMalloc = heap_malloc;
	failing_heap.xRealloc = heap_realloc;
	assert_int_equal(sqlite3_config(SQLITE_CONFIG_MALLOC, &failing_heap), SQLITE_OK);
	assert_int_equal(sqlite3_initialize(), SQLITE_OK);
	layer_on(&layer);
	memory_only = true;
	every_fault("no memory", 0, false);
	every_fault("no memory", 0, true);
	memory_only = false;
	layer_off(&layer);
	assert_int_equal(sqlite3_shutdown(), SQLITE_OK);
	assert_int_equal(sqlite3_config(SQLITE_CONFIG_MALLOC, &heap), SQLITE_OK);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_memory),
	    cmocka_unit_test(test_files),
	};
	return cmocka_run_group_tests_name("store_faults", tests, NULL, NULL);
}
