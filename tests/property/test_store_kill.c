/* SPDX-License-Identifier: MIT
 * A program that is killed while it writes: what it said was stored is there, nothing is half there. */
#include "tests/support/check.h"

#include "db/targets.h"

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

/* Change sets of ROWS_EACH targets, each acknowledged by a byte, until it is killed. */
static void write_on(const char *path, int first, int acknowledge)
{
	struct store *s;
	struct err e;
	if (store_open(path, STORE_WRITE, &s, &e) != ST_OK)
		_exit(2);
	for (int set = first;; set++) {
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
	for (int turn = 0; turn < KILLS; turn++) {
		/* the first turns are killed while the file itself is being made, and begin anew */
		bool making = turn < KILLS / 2;
		int pipes[2], end;
		if (making) {
			unlink(journal);
			unlink(path);
			acknowledged = 0;
		}
		assert_int_equal(pipe(pipes), 0);
		pid_t pid = fork();
		assert_true(pid >= 0);
		if (pid == 0) {
			close(pipes[0]);
			write_on(path, 1000 * turn, pipes[1]);
		}
		close(pipes[1]);
		const struct timespec wait = {0, (long)rng_between(&r, 1e6, making ? 2e7 : 1.2e8)};
		nanosleep(&wait, NULL);
		assert_int_equal(kill(pid, SIGKILL), 0);
		assert_int_equal(waitpid(pid, &end, 0), pid);
		if (!WIFSIGNALED(end))
			check_fail("the writer ended by itself: %d", WEXITSTATUS(end));
		char byte;
		while (read(pipes[0], &byte, 1) == 1)
			acknowledged++;
		close(pipes[0]);
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

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(test_kill)};
	return cmocka_run_group_tests_name("store_kill", tests, NULL, NULL);
}
