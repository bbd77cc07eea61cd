/* SPDX-License-Identifier: MIT
 * A program that is killed while it writes: what it said was stored is there, nothing is half there. */
#include "tests/support/check.h"
#include "tests/support/observing_store.h"
#include "tests/support/old_store.h"

#include "db/plans.h"
#include "db/targets.h"

#include <math.h>
#include <signal.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>

enum { KILLS = 80, ROWS_EACH = 5 };

static const struct change change = {"2026-04-22T03:00:00Z", "test", "import"};

static int first_set; /* of the writer: names of targets are not used twice */

/* Change sets of ROWS_EACH targets, each acknowledged by a byte, until it is killed. */
static void write_on(const char *path, int acknowledge, bool say_ready)
{
	struct store *s;
	struct err e;
	if (store_open(path, STORE_WRITE, &s, &e) != ST_OK || (say_ready && write(acknowledge, "r", 1) != 1))
		_exit(2);
	for (int set = first_set;; set++) {
		if (store_begin(s, &change, &e) != ST_OK)
			_exit(3);
		for (int i = 0; i < ROWS_EACH; i++) {
			struct field_texts texts;
			char name[32];
			enum put_result result;
			for (int f = 0; f < FIELD_COUNT; f++)
				texts.text[f] = "";
			snprintf(name, sizeof name, "Tern %d-%d b", set, i);
			texts.text[FIELD_AT_NAME] = name;
			texts.text[FIELD_AT_RA] = "10";
			texts.text[FIELD_AT_DEC] = "20";
			texts.text[FIELD_AT_T0] = "2459000.125";
			texts.text[FIELD_AT_SCALE] = "BJD_TDB";
			texts.text[FIELD_AT_PERIOD] = "3.5";
			if (target_put(s, &texts, false, &result, &e) != ST_OK)
				_exit(4);
		}
		if (store_commit(s, &e) != ST_OK || write(acknowledge, "x", 1) != 1)
			_exit(5);
	}
}

static void write_anew(const char *path, int acknowledge)
{
	write_on(path, acknowledge, false);
}

static void write_more(const char *path, int acknowledge)
{
	write_on(path, acknowledge, true);
}

/* Runs `writer` in a process of its own until it is killed or done: how many bytes it wrote to acknowledge.
 * says_ready: the time begins with a byte that is not counted. */
static long kill_after(struct rng *r, double longest_ns, bool says_ready, const char *path,
		       void (*writer)(const char *path, int acknowledge))
{
	int pipes[2], end;
	long acknowledged = 0;
	char byte;
	assert_int_equal(pipe(pipes), 0);
	pid_t pid = fork();
	assert_true(pid >= 0);
	if (pid == 0) {
		close(pipes[0]);
		writer(path, pipes[1]);
		_exit(0);
	}
	close(pipes[1]);
	if (says_ready)
		assert_int_equal(read(pipes[0], &byte, 1), 1);
	const double ns = rng_between(r, 1e5, longest_ns);
	const struct timespec wait = {(time_t)(ns / 1e9), (long)fmod(ns, 1e9)};
	nanosleep(&wait, NULL);
	assert_int_equal(kill(pid, SIGKILL), 0);
	assert_int_equal(waitpid(pid, &end, 0), pid);
	if (WIFEXITED(end) && WEXITSTATUS(end) != 0)
		check_fail("the writer ended by itself: %d", WEXITSTATUS(end));
	while (read(pipes[0], &byte, 1) == 1)
		acknowledged++;
	close(pipes[0]);
	return acknowledged;
}

/* How long it takes to open, making or bringing up included: a sanitizer or a busy machine makes it many
 * times longer. */
static double opening_ns(const char *path)
{
	struct store *s;
	struct err e = {0};
	struct timespec a, b;
	(void)clock_gettime(CLOCK_MONOTONIC, &a);
	must(store_open(path, STORE_WRITE, &s, &e), &e);
	(void)clock_gettime(CLOCK_MONOTONIC, &b);
	store_close(s);
	return (double)(b.tv_sec - a.tv_sec) * 1e9 + (double)(b.tv_nsec - a.tv_nsec);
}

static void say_fault(void *ctx, const char *line)
{
	(void)ctx;
	print_message("%s\n", line);
}

static long made_anew(const char *path)
{
	struct store *s;
	struct err e = {0};
	if (store_open(path, STORE_WRITE, &s, &e) != ST_OK)
		check_fail("after a kill, to make it: %s", e.text);
	store_close(s);
	return 0;
}

static long look(const char *path)
{
	struct store *s;
	struct err e = {0};
	struct store_counts counts;
	struct target_list list;
	int faults;
	enum status st = store_open(path, STORE_READ, &s, &e);
	if (st == ST_ABSENT)
		return made_anew(path); /* killed before there was a schema */
	if (st != ST_OK)
		check_fail("after a kill: %s", e.text);
	assert_int_equal(store_check(s, say_fault, NULL, &faults, &e), ST_OK);
	assert_int_equal(faults, 0);
	assert_int_equal(store_count(s, &counts, &e), ST_OK);
	assert_int_equal(targets_load(s, &list, &e), ST_OK);
	assert_int_equal(list.n, counts.targets);
	assert_int_equal(list.n_bad, 0);
	target_list_free(&list);
	assert_int_equal(counts.targets, ROWS_EACH * counts.changes); /* whole change sets only */
	assert_int_equal(counts.ephemerides, counts.targets);
	store_close(s);
	/* a writer finds its way too */
	if (store_open(path, STORE_WRITE, &s, &e) != ST_OK)
		check_fail("after a kill, to write: %s", e.text);
	store_close(s);
	return counts.changes;
}

static void test_kill(void **state)
{
	char folder[] = "/tmp/wane-kill-XXXXXX", path[64], journal[80];
	struct rng r = rng_open("kill");
	long stored = 0, acknowledged = 0;
	int met_journal = 0;
	(void)state;
	assert_non_null(mkdtemp(folder));
	snprintf(path, sizeof path, "%s/wane.db", folder);
	snprintf(journal, sizeof journal, "%s-journal", path);
	const double making_ns = opening_ns(path);
	for (int turn = 0; turn < KILLS; turn++) {
		/* the first turns are killed while the file itself is being made, and begin anew */
		bool making = turn < KILLS / 2;
		if (making) {
			unlink(journal);
			unlink(path);
			acknowledged = 0;
		}
		first_set = 1000 * turn;
		acknowledged += kill_after(&r, making ? 1.5 * making_ns : 1.2e8, !making, path,
					   making ? write_anew : write_more);
		met_journal += access(journal, F_OK) == 0;
		stored = look(path);
		/* the one change set that was stored but not yet acknowledged may be there too, once a kill
		 */
		if (stored < acknowledged)
			check_fail("turn %d: %ld acknowledged, %ld stored", turn, acknowledged, stored);
		acknowledged = stored;
	}
	print_message("%d kills, %ld change sets, %d of the kills left a journal to undo\n", KILLS, stored,
		      met_journal);
	assert_true(stored > 0);
	unlink(journal);
	assert_int_equal(unlink(path), 0);
	assert_int_equal(rmdir(folder), 0);
}

/* --- an older schema --- */

static void bring_up(const char *path, int acknowledge)
{
	struct store *s;
	struct err e;
	if (store_open(path, STORE_WRITE, &s, &e) != ST_OK || write(acknowledge, "x", 1) != 1)
		_exit(2);
	store_close(s);
}

/* Killed while it is brought to the newest schema: it is the old one whole or the new one whole, and what is
 * left lying about hinders nobody. */
static void test_kill_migration(void **state)
{
	char folder[] = "/tmp/wane-kill-XXXXXX", path[64], left[5][96];
	static const char *const behind[] = {"-journal", ".schema-1.bak", ".schema-1.2.bak",
					     ".schema-1.bak.part", ".schema-1.bak.part-journal"};
	struct rng r = rng_open("kill, older schema");
	struct err e = {0};
	int done = 0;
	(void)state;
	assert_non_null(mkdtemp(folder));
	snprintf(path, sizeof path, "%s/wane.db", folder);
	for (int i = 0; i < 5; i++)
		snprintf(left[i], sizeof left[i], "%s%s", path, behind[i]);
	old_store_make(path);
	double longest_ns = 1.5 * opening_ns(path);
	unlink(path);
	unlink(left[1]);
	for (int turn = 0; turn < KILLS; turn++) {
		struct store *s;
		struct digest_text d;
		int faults;
		old_store_make(path);
		done += kill_after(&r, longest_ns, false, path, bring_up) > 0;
		for (enum store_mode mode = STORE_READ; mode <= STORE_WRITE; mode++) {
			must(store_open(path, mode, &s, &e), &e);
			d = digest_now(s);
			assert_string_equal(d.text, OLD_STORE_DIGEST);
			must(store_check(s, say_fault, NULL, &faults, &e), &e);
			assert_int_equal(faults, 0);
			store_close(s);
		}
		must(store_open(left[1], STORE_READ, &s, &e), &e);
		d = digest_now(s);
		assert_string_equal(d.text, OLD_STORE_DIGEST);
		store_close(s);
		assert_int_equal(access(left[2], F_OK), -1); /* one copy is enough */
		for (int i = 0; i < 5; i++)
			unlink(left[i]);
		assert_int_equal(unlink(path), 0);
	}
	print_message("%d kills, %d of them too late\n", KILLS, done);
	assert_true(done < KILLS);
	assert_int_equal(rmdir(folder), 0);
}

/* --- plans --- */

/* Editions of one draft, with a mark each, acknowledged one by one. */
static void plan_on(const char *path, int acknowledge)
{
	struct store *s;
	struct err e;
	struct plan_row have;
	struct small_plan p;
	static const char utc[] = "2026-04-23T03:00:00Z";
	char note[16];
	if (store_open(path, STORE_WRITE, &s, &e) != ST_OK || write(acknowledge, "r", 1) != 1)
		_exit(2);
	for (;;) {
		enum status st = plan_find(s, 1, 0, 61152, "main", &have, &e);
		int64_t id;
		int edition = st == ST_OK ? have.edition : 0;
		plan_row_free(&have);
		small_plan_make(&p, "one", utc);
		if (store_begin(s, &change, &e) != ST_OK ||
		    plan_store(s, &p.plan, true, edition, &id, &edition, &e) != ST_OK)
			_exit(3);
		snprintf(note, sizeof note, "%d", edition);
		if (plan_mark(s, id, "one", "started", "", note, utc, &e) != ST_OK ||
		    store_commit(s, &e) != ST_OK || write(acknowledge, "x", 1) != 1)
			_exit(4);
	}
}

static void test_kill_plan(void **state)
{
	char folder[] = "/tmp/wane-kill-XXXXXX", path[64], journal[80], note[16];
	struct rng r = rng_open("kill, plans");
	struct err e = {0};
	struct store *s;
	long stored = 0;
	(void)state;
	assert_non_null(mkdtemp(folder));
	snprintf(path, sizeof path, "%s/wane.db", folder);
	snprintf(journal, sizeof journal, "%s-journal", path);
	must(store_open(path, STORE_WRITE, &s, &e), &e);
	observing_fill(s, 1);
	store_close(s);
	for (int turn = 0; turn < KILLS / 2; turn++) {
		struct plan_row p;
		long wanted = stored + kill_after(&r, 1.2e8, true, path, plan_on);
		int faults;
		must(store_open(path, STORE_READ, &s, &e), &e);
		must(store_check(s, say_fault, NULL, &faults, &e), &e);
		assert_int_equal(faults, 0);
		enum status st = plan_find(s, 1, 0, 61152, NULL, &p, &e);
		stored = st == ST_OK ? p.edition : 0;
		if (st == ST_OK) { /* the mark came with its edition */
			snprintf(note, sizeof note, "%d", p.edition);
			assert_string_equal(p.item[0].note, note);
		}
		plan_row_free(&p);
		store_close(s);
		/* the one that was stored and not yet acknowledged may be there too */
		if (stored < wanted || stored > wanted + 1)
			check_fail("turn %d: %ld acknowledged, edition %ld holds", turn, wanted, stored);
	}
	print_message("%ld editions\n", stored);
	assert_true(stored > 0);
	unlink(journal);
	assert_int_equal(unlink(path), 0);
	assert_int_equal(rmdir(folder), 0);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(test_kill), cmocka_unit_test(test_kill_migration),
					   cmocka_unit_test(test_kill_plan)};
	return cmocka_run_group_tests_name("store_kill", tests, NULL, NULL);
}
