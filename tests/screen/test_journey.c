/* SPDX-License-Identifier: MIT
 * Journeys through the program on a pseudo-terminal: every way in, about and out. */
#include "db/midtimes.h"
#include "db/targets.h"
#include "tests/support/check.h"
#include "tests/support/pty.h"

#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/wait.h>
#include <unistd.h>

#define NOW "2026-04-23T04:14:05Z"
#define TERM_USUAL "tmux-256color"
#define OPENED "tonight, night 22/23 Apr 2026"

static char program[1024];
static char *demo[] = {program, "demo", "--now", NOW, NULL};

static bool sanitized(void)
{
	return strstr(program, "asan") != NULL;
}

static void open_demo(struct pty *t)
{
	pty_open(t, demo, 24, 80, TERM_USUAL, NULL, NULL);
	pty_wait(t, OPENED);
}

static void expect_exit(struct pty *t, int code)
{
	int status = pty_end(t);
	if (!WIFEXITED(status) || WEXITSTATUS(status) != code)
		check_fail("wait status %d, expected exit status %d", status, code);
}

static void test_about(void **state)
{
	struct pty t;
	(void)state;
	open_demo(&t);
	pty_screen(&t, "\033OB\033OBj", "window");
	pty_screen(&t, ">", "next night, night 23/24 Apr 2026");
	pty_screen(&t, "<<", "last night, night 21/22 Apr 2026");
	pty_screen(&t, ".", OPENED);
	pty_screen(&t, "t\0252026-05-01\r", "in 9 nights, night 1/2 May 2026");
	pty_screen(&t, "?", "Keys (q, ? or Esc comes back)");
	pty_screen(&t, "q", "in 9 nights, night 1/2 May 2026");
	pty_screen(&t, "l", "Limits of this run");
	pty_screen(&t, "\033", "in 9 nights, night 1/2 May 2026");
	pty_screen(&t, "a", "q quit");
	pty_screen(&t, "R", "q quit");
	pty_send(&t, "z");
	pty_wait(&t, "z does nothing here; ? shows the keys.");
	pty_send(&t, "q");
	expect_exit(&t, 0);
	pty_expect_restored(&t);
	pty_close(&t);
}

/* The drift page and back: the night stays as it was; residuals, the chosen date, a resize on the way. */
static void test_drift(void **state)
{
	struct pty t;
	(void)state;
	open_demo(&t);
	pty_screen(&t, ">", "next night, night 23/24 Apr 2026");
	pty_screen(&t, "3", "Drift of the ephemerides");
	pty_screen(&t, "", "targets by stale on");
	pty_screen(&t, "sm", "targets by target");
	pty_screen(&t, "t2031-01-01\r", "date 2031-01-01");
	pty_screen(&t, "\r", "No fit: ");
	pty_screen(&t, "q", "targets by target");
	pty_screen(&t, "?", "Keys (q, ? or Esc comes back)");
	pty_screen(&t, "1", "next night, night 23/24 Apr 2026");
	pty_screen(&t, "3", "Keys (q, ? or Esc comes back)");
	pty_screen(&t, "q", "date 2031-01-01");
	pty_screen(&t, "1", "next night, night 23/24 Apr 2026");
	pty_send(&t, "3");
	pty_wait(&t, "Drift of");
	pty_send(&t, "q");
	expect_exit(&t, 0);
	pty_expect_restored(&t);
	pty_close(&t);
}

static void test_find_sort_filter(void **state)
{
	struct pty t;
	(void)state;
	open_demo(&t);
	pty_send(&t, "/tern 14\r");
	pty_screen(&t, "\r", "Tern 14 b, night 22/23 Apr 2026");
	pty_screen(&t, "\r", "by be-on time");
	pty_screen(&t, "s", "Sort the list by");
	pty_screen(&t, "d", "by chance of done");
	pty_send(&t, "fdane > 1\r");
	pty_wait(&t, "called"); /* no figure is called \"dane\" */
	pty_screen(&t, "\025done > 50 & name = 14\r", "window 1 of 1 ");
	pty_screen(&t, "", "where done > 50 & name = 14");
	pty_screen(&t, "\033", "by chance of done");
	pty_send(&t, "q");
	expect_exit(&t, 0);
	pty_expect_restored(&t);
	pty_close(&t);
}

/* --- over a database of its own --- */

static char folder[64], database[128];

static void run_wane(const char *arguments)
{
	char command[2400];
	snprintf(command, sizeof command, "exec '%s' --db '%s' %s >/dev/null 2>&1", program, database,
		 arguments);
	int status = system(command);
	if (!WIFEXITED(status) || WEXITSTATUS(status) != 0)
		check_fail("%s", command);
}

static void write_target(const char *name)
{
	char path[160], import[400];
	snprintf(path, sizeof path, "%s/one.csv", folder);
	FILE *f = fopen(path, "w");
	if (!f)
		check_fail("%s", path);
	fprintf(f,
		"name,ra_deg,dec_deg,t0_jd,t0_err_d,time_scale,period_d,period_err_d,duration_h,k\n"
		"%s,212.4,38.1,2461153.8013,0.0002,BJD_TDB,3.412877,0.0000003,2.6,0.118\n",
		name);
	fclose(f);
	snprintf(import, sizeof import, "import '%s'", path);
	run_wane(import);
	unlink(path);
}

static void open_database(void)
{
	snprintf(folder, sizeof folder, "/tmp/wane-journey-XXXXXX");
	if (!mkdtemp(folder))
		check_fail("mkdtemp");
	snprintf(database, sizeof database, "%s/wane.db", folder);
	run_wane("site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver");
	run_wane("site add 'Far Side' --place 31.2,64.1,1200 --zone Asia/Kabul");
	write_target("Tern 14 b");
}

static void close_database(void)
{
	static const char *const endings[] = {"", "-wal", "-shm", "-journal"};
	for (size_t i = 0; i < sizeof endings / sizeof endings[0]; i++) {
		char path[160];
		snprintf(path, sizeof path, "%s%s", database, endings[i]);
		unlink(path);
	}
	rmdir(folder);
}

static void open_on_database(struct pty *t)
{
	char *argv[] = {program, "--db", database, "--site", "Tern Hill", "--now", NOW "+", NULL};
	pty_open(t, argv, 24, 80, TERM_USUAL, NULL, NULL);
	pty_wait(t, OPENED);
}

static void test_site_switch(void **state)
{
	struct pty t;
	(void)state;
	open_database();
	open_on_database(&t);
	pty_screen(&t, "", "Tern 14 b");
	pty_screen(&t, "S", "Stand at which of the stored sites?");
	pty_screen(&t, "g\r", "Far Side  31.20 N 64.10 E  1200 m");
	pty_screen(&t, "", "+0430");
	pty_screen(&t, "S", "Tern Hill  38.62 N");
	pty_screen(&t, "j\r", "Tern Hill  38.62 N 109.36 W  2100 m");
	pty_screen(&t, "", OPENED);
	pty_send(&t, "q");
	expect_exit(&t, 0);
	pty_close(&t);
	close_database();
}

/* What another program stores comes onto the screen by itself. */
static void test_changed_from_outside(void **state)
{
	struct pty t;
	(void)state;
	open_database();
	open_on_database(&t);
	pty_screen(&t, "\r", "Tern 14 b, night 22/23 Apr 2026");
	pty_screen(&t, "\r", "window 1 of 1");
	pty_send(&t, "");
	write_target("Tern 15 b");
	pty_wait(&t, "Another program changed what is stored; it was read again.");
	pty_screen(&t, "j", "of 2");
	/* all taken away: back to what to do first, and out of it when something comes */
	pty_send(&t, "");
	run_wane("target remove 'Tern 14 b'");
	pty_wait(&t, "Another program");
	pty_screen(&t, "g", "window 1 of 1");
	pty_send(&t, "");
	run_wane("target remove 'Tern 15 b'");
	pty_screen(&t, "", "No targets are stored yet.");
	pty_send(&t, "");
	write_target("Tern 16 b");
	pty_screen(&t, "", "window 1 of 1");
	pty_send(&t, "q");
	expect_exit(&t, 0);
	pty_expect_restored(&t);
	pty_close(&t);
	close_database();
}

static void store_times(void)
{
	const struct change change = {.utc = "2026-04-22T18:00:00Z", .who = "tester", .verb = "midtime add"};
	struct target_list list = {.n = 0};
	struct store *s = NULL;
	struct err e = {.text = ""};
	if (store_open(database, STORE_WRITE, &s, &e) != ST_OK || targets_load(s, &list, &e) != ST_OK ||
	    store_begin(s, &change, &e) != ST_OK)
		check_fail("%s", e.text);
	for (long epoch = -400; epoch < 0; epoch += 50) {
		char text[40];
		bool added;
		double days = 0.8013 + 3.412877 * (double)epoch + (epoch % 100 ? 2e-4 : -2e-4);
		snprintf(text, sizeof text, "%.6f", 2461153.0 + days);
		const struct midtime_row row = {.epoch = epoch,
						.kind = KIND_TRANSIT,
						.mid_text = text,
						.mid = jd2_normal(2461153.0, days),
						.time_scale = "BJD_TDB",
						.err_d = 3e-4,
						.source = "invented",
						.used = true};
		if (midtime_add(s, list.t[0].id, &row, &added, &e) != ST_OK)
			check_fail("%s", e.text);
	}
	if (store_commit(s, &e) != ST_OK)
		check_fail("%s", e.text);
	target_list_free(&list);
	store_close(s);
}

/* A mid-time is taken out of the fit and comes back, in a database that the interface has open for reading.
 */
static void test_residuals(void **state)
{
	struct pty t;
	(void)state;
	open_database();
	store_times();
	open_on_database(&t);
	pty_screen(&t, "3", "1/1 target by stale on");
	pty_screen(&t, "\r", "Linear fit to 8 of 8 mid-times");
	pty_screen(&t, "j", "transit of epoch -350");
	pty_screen(&t, "x", "Linear fit to 7 of 8 mid-times");
	pty_screen(&t, "m", "Quadratic fit to 7 of 8 mid-times");
	pty_screen(&t, "m", "EXCLUDED");
	pty_screen(&t, "u", "Linear fit to 8 of 8 mid-times");
	pty_screen(&t, "u", "transit of epoch -350"); /* nothing more to take back */
	pty_screen(&t, "q", "1/1 target by stale on");
	pty_send(&t, "q");
	expect_exit(&t, 0);
	pty_expect_restored(&t);
	pty_close(&t);
	close_database();
}

/* The plan is kept, an item marked, time lost and what is left kept again; the program is killed after each,
 * and all is there when it is opened again. */
static void test_plan(void **state)
{
	struct pty t;
	(void)state;
	open_database();
	write_target("Tern 15 b");
	open_on_database(&t);
	pty_screen(&t, "", "plan proposed: 1 item");
	pty_screen(&t, "K", "plan kept: 1 item");
	kill(t.child, SIGKILL);
	(void)pty_end(&t);
	pty_close(&t);

	open_on_database(&t);
	pty_screen(&t, "", "plan kept: 1 item");
	pty_screen(&t, "m", "What became of Tern 1");
	pty_screen(&t, "\r", "1◐");
	kill(t.child, SIGKILL);
	(void)pty_end(&t);
	pty_close(&t);

	open_on_database(&t);
	pty_screen(&t, "", "1◐");
	pty_screen(&t, "v", "1 started");
	pty_screen(&t, "v", "plan kept: 1 item");
	pty_screen(&t, "L", "Lost time FROM..TO");
	pty_screen(&t, "04:30..05:00\r", "plan changed: 1 item");
	/* what is only changed is not stored */
	kill(t.child, SIGKILL);
	(void)pty_end(&t);
	pty_close(&t);

	open_on_database(&t);
	pty_screen(&t, "", "plan kept: 1 item");
	pty_screen(&t, "L04:30..05:00\r", "plan changed: 1 item");
	pty_screen(&t, "K", "plan kept: 1 item");
	kill(t.child, SIGKILL);
	(void)pty_end(&t);
	pty_close(&t);

	open_on_database(&t);
	pty_screen(&t, "v", "kept main (edition 2), 1 item");
	pty_screen(&t, "", "04:30 to 05:00");
	pty_screen(&t, "v", "plan kept: 1 item");
	pty_screen(&t, "u", "plan kept: 1 item");
	pty_screen(&t, "v", "kept main (edition 1), 1 item");
	pty_screen(&t, "q", "plan kept: 1 item");
	pty_screen(&t, "x", "plan changed: ");
	pty_send(&t, "q");
	pty_wait(&t, "Leave without them?");
	pty_send(&t, "y");
	expect_exit(&t, 0);
	pty_expect_restored(&t);
	pty_close(&t);
	close_database();
}

static void test_resize(void **state)
{
	struct pty t;
	(void)state;
	open_demo(&t);
	pty_resize(&t, 45, 160);
	pty_wait(&t, "airm");
	pty_resize(&t, 5, 20);
	pty_wait(&t, "wane needs 24 x 6");
	for (int i = 1; i < 40; i++)
		pty_resize(&t, i, 3 * i);
	pty_resize(&t, 10, 38);
	pty_wait(&t, "22/23 Apr 2026");
	pty_resize(&t, 24, 80);
	pty_wait(&t, OPENED);
	pty_send(&t, "q");
	expect_exit(&t, 0);
	pty_expect_restored(&t);
	pty_close(&t);
}

static void test_signals_end_it(void **state)
{
	static const int signals[] = {SIGTERM, SIGINT, SIGHUP, SIGQUIT};
	(void)state;
	for (size_t i = 0; i < sizeof signals / sizeof signals[0]; i++) {
		struct pty t;
		open_demo(&t);
		kill(t.child, signals[i]);
		expect_exit(&t, 0);
		pty_expect_restored(&t);
		pty_close(&t);
	}
}

static void test_crash_restores(void **state)
{
	static const int signals[] = {SIGSEGV, SIGABRT, SIGBUS, SIGFPE};
	(void)state;
	if (sanitized())
		check_skip("crash handlers: the sanitizers have their own");
	for (size_t i = 0; i < sizeof signals / sizeof signals[0]; i++) {
		struct pty t;
		open_demo(&t);
		kill(t.child, signals[i]);
		int status = pty_end(&t);
		assert_true(WIFSIGNALED(status));
		assert_int_equal(WTERMSIG(status), signals[i]);
		assert_non_null(strstr(t.seen, "wane: crashed"));
		pty_expect_restored(&t);
		pty_close(&t);
	}
}

static void test_lost_line(void **state)
{
	struct pty t;
	(void)state;
	/* once with the hang-up signal, once with it ignored, as under nohup */
	for (int ignored = 0; ignored < 2; ignored++) {
		char command[1200];
		snprintf(command, sizeof command, "%s exec %s demo --now " NOW, ignored ? "trap '' HUP;" : "",
			 program);
		char *argv[] = {"/bin/sh", "-c", command, NULL};
		pty_open(&t, argv, 24, 80, TERM_USUAL, NULL, NULL);
		pty_wait(&t, OPENED);
		close(t.fd);
		t.fd = -1;
		expect_exit(&t, 0);
		pty_close(&t);
	}
}

static void test_suspend_and_resume(void **state)
{
	struct pty t;
	char command[1200];
	char *argv[] = {"/bin/sh", "-i", NULL};
	(void)state;
	pty_open(&t, argv, 24, 80, TERM_USUAL, "PS1", "ready> ");
	pty_wait(&t, "ready> ");
	snprintf(command, sizeof command, "%s demo --now " NOW "\n", program);
	pty_send(&t, command);
	pty_wait(&t, OPENED);
	pty_send(&t, "\032");
	pty_wait(&t, "ready> ");
	/* the shell's terminal is in order: it echoes, and lines are edited */
	pty_send(&t, "stty -a | tr ' ;' '\\n\\n' | grep -x -e icanon -e echo | tr '\\n' '+'\n");
	pty_wait(&t, "icanon+echo+");
	pty_resize(&t, 45, 160);
	pty_send(&t, "fg\n");
	pty_wait(&t, OPENED);
	pty_screen(&t, "", "airm");
	pty_send(&t, "q");
	pty_wait(&t, "ready> ");
	pty_send(&t, "echo gone=$?\n");
	pty_wait(&t, "gone=0");
	pty_send(&t, "exit\n");
	expect_exit(&t, 0);
	pty_close(&t);
}

/* Without a shell ^Z says so and nothing stops. */
static void test_suspend_without_a_shell(void **state)
{
	struct pty t;
	(void)state;
	open_demo(&t);
	pty_send(&t, "\032");
	pty_wait(&t, "There is no shell here to come back from.");
	pty_send(&t, "q");
	expect_exit(&t, 0);
	pty_close(&t);
}

static void test_stopped_from_outside(void **state)
{
	struct pty t;
	(void)state;
	open_demo(&t);
	kill(t.child, SIGSTOP);
	pty_send(&t, ">");
	kill(t.child, SIGCONT);
	pty_wait(&t, "next night, night 23/24 Apr 2026");
	pty_send(&t, "q");
	expect_exit(&t, 0);
	pty_expect_restored(&t);
	pty_close(&t);
}

static void test_bytes(void **state)
{
	struct pty t;
	(void)state;
	open_demo(&t);
	/* a character in two pieces, a broken one that must not swallow what follows, a paste that must not
	 * quit */
	pty_send(&t, "\xc3");
	pty_send(&t, "\xa9");
	pty_wait(&t, "é does nothing here");
	pty_screen(&t, "\xff\xe4>", "next night, night 23/24 Apr 2026");
	pty_send(&t, "\033[200~qqq\033[201~");
	pty_wait(&t, "Pasted text was left out");
	pty_screen(&t, ".", OPENED);
	pty_send(&t, "q");
	expect_exit(&t, 0);
	pty_close(&t);
}

static void test_environment(void **state)
{
	struct pty t;
	(void)state;
	pty_open(&t, demo, 24, 80, TERM_USUAL, "NO_COLOR", "1");
	pty_wait(&t, OPENED);
	pty_send(&t, "R");
	pty_wait(&t, "Colours are off here");
	assert_null(strstr(t.seen, "[38;"));
	assert_null(strstr(t.seen, "[31m"));
	pty_close(&t);

	pty_open(&t, demo, 24, 80, TERM_USUAL, "LC_ALL", "C");
	pty_wait(&t, OPENED);
	pty_screen(&t, "j", "cover");
	for (size_t i = 0; i < t.n; i++)
		assert_true((unsigned char)t.seen[i] < 0x80);
	pty_close(&t);

	/* a locale that is not installed here, as a login from afar may bring */
	pty_open(&t, demo, 24, 80, TERM_USUAL, "LC_ALL", "xx_XX.UTF-8");
	pty_wait(&t, OPENED);
	pty_screen(&t, "", "▸");
	pty_close(&t);

	/* exported, they would freeze the size */
	pty_open(&t, demo, 24, 80, TERM_USUAL, "COLUMNS", "40");
	pty_wait(&t, OPENED);
	pty_resize(&t, 45, 160);
	pty_wait(&t, "airm");
	pty_close(&t);
}

static void test_refusals(void **state)
{
	static const struct {
		const char *term, *said;
	} rows[] = {{"no-such-terminal", "try TERM=xterm-256color"}, {"dumb", "can't place its cursor"}};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct pty t;
		pty_open(&t, demo, 24, 80, rows[i].term, NULL, NULL);
		pty_wait(&t, rows[i].said);
		expect_exit(&t, 1);
		pty_expect_restored(&t);
		pty_close(&t);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_drift),
	    cmocka_unit_test(test_residuals),
	    cmocka_unit_test(test_plan),
	    cmocka_unit_test(test_about),
	    cmocka_unit_test(test_find_sort_filter),
	    cmocka_unit_test(test_site_switch),
	    cmocka_unit_test(test_changed_from_outside),
	    cmocka_unit_test(test_resize),
	    cmocka_unit_test(test_signals_end_it),
	    cmocka_unit_test(test_crash_restores),
	    cmocka_unit_test(test_lost_line),
	    cmocka_unit_test(test_suspend_and_resume),
	    cmocka_unit_test(test_suspend_without_a_shell),
	    cmocka_unit_test(test_stopped_from_outside),
	    cmocka_unit_test(test_bytes),
	    cmocka_unit_test(test_environment),
	    cmocka_unit_test(test_refusals),
	};
	const char *given = getenv("WANE");
	snprintf(program, sizeof program, "%s", given ? given : "build/wane");
	setenv("LC_ALL", "C.UTF-8", 1);
	unsetenv("NO_COLOR");
	unsetenv("LINES");
	unsetenv("COLUMNS");
	unsetenv("ESCDELAY");
	return cmocka_run_group_tests_name("journey", tests, NULL, NULL);
}
