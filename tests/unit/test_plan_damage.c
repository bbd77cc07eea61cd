/* SPDX-License-Identifier: MIT
 * Damage in one row of a night's plans: what can be read goes on, and what can't is named. */
#include "tui/plan_make.h"

#include "tests/support/check.h"
#include "tests/support/observing_store.h"
#include "tests/support/plan_run.h"

#include <math.h>

static const struct plan_wish nothing = {.moved_min = NAN}, z = {.draft = "z", .moved_min = NAN};

static void save(struct plan_run *p, const struct plan_wish *wish, bool keep, enum status expected)
{
	struct plan_case c;
	struct err e = {0};
	plan_case_open(&c, p, wish, ST_OK);
	const enum status got = plan_save(&p->run, &c.view, wish->draft, keep, &e);
	if (got != expected)
		check_fail("status %d, expected %d: %s", (int)got, (int)expected, e.text);
	plan_case_close(&c);
}

static void one_mark(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open("2026-04-22T20:00:00Z");
	struct plan_case c;
	struct err e = {0};
	save(p, &nothing, true, ST_OK);
	plan_case_open(&c, p, &nothing, ST_OK);
	assert_string_equal(c.view.damage, "");
	must(plan_mark_item(&p->run, &c.view, "Tern 66 b", PLAN_STARTED, "", "", &e), &e);
	plan_case_close(&c);
	change_behind(p->run.store, "UPDATE plan_mark SET state = 'lost'");
	plan_case_open(&c, p, &nothing, ST_OK);
	assert_true(c.view.kept);
	assert_int_equal(plan_case_item(&c, "Tern 66 b")->state, PLAN_PLANNED);
	assert_string_equal(c.view.damage,
			    "the checksum of mark 1 is wrong: it counts as none; see `wane check`");
	plan_case_close(&c);
	save(p, &(struct plan_wish){.rebuild = true, .moved_min = NAN}, true, ST_OK);
	plan_run_close(p);
}

/* A draft that is not kept and can't be read: others are kept, its own name is not free. */
static void one_draft(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open("2026-04-22T20:00:00Z");
	struct plan_case c;
	save(p, &nothing, false, ST_OK);
	change_behind(p->run.store, "UPDATE plan SET draft = 'Main'");
	plan_case_open(&c, p, &nothing, ST_OK);
	assert_false(c.view.stored);
	assert_string_equal(c.view.damage, "draft main can't be read: left out; see `wane check`");
	plan_case_close(&c);
	save(p, &nothing, true, ST_STORE);
	save(p, &z, true, ST_OK);
	plan_case_open(&c, p, &nothing, ST_OK);
	assert_true(c.view.kept);
	assert_string_equal(c.view.draft, "z");
	plan_case_close(&c);
	plan_run_close(p);
}

/* The kept one can't be read: nothing is shown or kept in its place. */
static void the_kept_one(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open("2026-04-22T20:00:00Z");
	struct plan_case c;
	save(p, &nothing, true, ST_OK);
	change_behind(p->run.store, "UPDATE plan SET draft = 'Main'");
	plan_case_open(&c, p, &nothing, ST_STORE);
	plan_case_close(&c);
	save(p, &z, true, ST_STORE);
	save(p, &z, false, ST_OK);
	plan_run_close(p);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(one_mark),
	    cmocka_unit_test(one_draft),
	    cmocka_unit_test(the_kept_one),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
