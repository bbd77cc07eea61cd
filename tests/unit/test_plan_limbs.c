/* SPDX-License-Identifier: MIT
 * Lost time that takes one limb of what has begun: what is left of it stands, with the worth of that limb. */
#include "tui/plan_make.h"

#include "tests/support/check.h"
#include "tests/support/observing_store.h"
#include "tests/support/plan_run.h"

#include <math.h>
#include <string.h>

#define LIST(...)                                                                                            \
	(const char *const[])                                                                                \
	{                                                                                                    \
		__VA_ARGS__                                                                                  \
	}
static const struct plan_wish nothing = {.moved_min = NAN};

/* Tern 14 b, priority 2, is planned whole then: move 23:08, T1 23:42, T2 soon after midnight, T4 02:36. */
static struct plan_run *open_kept(void)
{
	struct plan_run *p = plan_run_open("2026-04-22T20:00:00Z");
	struct plan_case c;
	struct err e = {0};
	const struct plan_wish drops = {
	    .drop = LIST("Tern 70 b", "Tern 31 b"), .n_drop = 2, .moved_min = NAN};
	plan_case_open(&c, p, &drops, ST_OK);
	assert_string_equal(plan_case_item(&c, "Tern 14 b")->member[0].variant, "whole");
	must(plan_save(&p->run, &c.view, NULL, true, &e), &e);
	plan_case_close(&c);
	return p;
}

static double total(const struct plan_view *v)
{
	double worth = 0.0;
	for (size_t i = 0; i < v->n_items; i++)
		if (v->item[i].state != PLAN_LOST && strcmp(v->item[i].note, "not begun") != 0)
			worth += v->item[i].worth;
	return worth;
}

static void check_left(const struct plan_case *c, const char *variant, double worth, const char *note)
{
	const struct plan_item_view *item = plan_case_item(c, "Tern 14 b");
	assert_non_null(item);
	assert_true(item->state <= PLAN_STARTED);
	assert_string_equal(item->member[0].variant, variant);
	check_close("worth of the member", item->member[0].worth, worth, 1e-3 * worth);
	check_close("worth of the item", item->worth, item->member[0].worth, 0.0);
	assert_string_equal(item->note, note);
	check_close("total", c->view.worth, total(&c->view), 1e-9);
}

static const struct {
	const char *now, *lost[2], *variant;
	double worth; /* by hand: one limb alone is 0.2 x priority 2 x a chance of 1 */
	const char *note;
} rows[] = {
    {"2026-04-23T05:50:00Z", {"22:40..23:50"}, "egress", 0.4, "the ingress was lost 22:40 to 23:50 MDT"},
    {"2026-04-23T06:30:00Z", {"23:40..00:20"}, "egress", 0.4, "the ingress was lost 23:40 to 00:20 MDT"},
    {"2026-04-23T06:30:00Z",
     {"23:20..23:33", "23:36..23:50"},
     "egress",
     0.4,
     "the ingress was lost 23:20 to 23:33 MDT and 23:36 to 23:50 MDT"},
    /* said beforehand */
    {"2026-04-23T05:20:00Z", {"02:00..03:00"}, "ingress", 0.4, "the egress was lost 02:00 to 03:00 MDT"},
    /* between the limbs, and too little of the baseline */
    {"2026-04-23T06:50:00Z", {"00:35..00:45"}, "whole", 2.0, ""},
    {"2026-04-23T05:50:00Z", {"22:40..23:20"}, "whole", 2.0, ""},
};

/* By the clock alone, and marked; shown, stored, planned anew after that, and taken back. */
static void one_limb_lost(void **state)
{
	(void)state;
	for (size_t i = 0; i < 2 * sizeof rows / sizeof rows[0]; i++) {
		const size_t at = i / 2;
		const bool marked = i % 2;
		struct plan_run *p = open_kept();
		struct plan_case c;
		struct err e = {0};
		plan_run_now(p, rows[at].now);
		plan_case_open(&c, p, &nothing, ST_OK);
		if (marked)
			must(plan_mark_item(&p->run, &c.view, "Tern 14 b", PLAN_STARTED, "", "", &e), &e);
		plan_case_close(&c);
		const struct plan_wish lost = {
		    .lost = rows[at].lost, .n_lost = rows[at].lost[1] ? 2 : 1, .moved_min = NAN};
		plan_case_open(&c, p, &lost, ST_OK);
		check_left(&c, rows[at].variant, rows[at].worth, rows[at].note);
		assert_int_equal(plan_case_item(&c, "Tern 14 b")->state,
				 marked ? PLAN_STARTED : PLAN_PLANNED);
		must(plan_save(&p->run, &c.view, NULL, true, &e), &e);
		plan_case_close(&c);
		plan_case_open(&c, p, &nothing, ST_OK);
		check_left(&c, rows[at].variant, rows[at].worth, rows[at].note);
		plan_case_close(&c);
		const struct plan_wish again = {.rebuild = true, .moved_min = NAN};
		plan_case_open(&c, p, &again, ST_OK);
		check_left(&c, rows[at].variant, rows[at].worth, rows[at].note);
		plan_case_close(&c);
		const struct plan_wish back = {
		    .unlost = rows[at].lost, .n_unlost = rows[at].lost[1] ? 2 : 1, .moved_min = NAN};
		plan_case_open(&c, p, &back, ST_OK);
		check_left(&c, "whole", 2.0, "");
		plan_case_close(&c);
		plan_run_close(p);
	}
}

/* The limb that was left is lost too: nothing of it counts. */
static void the_other_too(void **state)
{
	(void)state;
	struct plan_run *p = open_kept();
	struct plan_case c;
	struct err e = {0};
	plan_run_now(p, "2026-04-23T05:50:00Z");
	plan_case_open(
	    &c, p, &(struct plan_wish){.lost = LIST("22:40..23:50"), .n_lost = 1, .moved_min = NAN}, ST_OK);
	must(plan_save(&p->run, &c.view, NULL, true, &e), &e);
	plan_case_close(&c);
	plan_case_open(
	    &c, p, &(struct plan_wish){.lost = LIST("02:00..03:00"), .n_lost = 1, .moved_min = NAN}, ST_OK);
	const struct plan_item_view *item = plan_case_item(&c, "Tern 14 b");
	assert_int_equal(item->state, PLAN_LOST);
	assert_string_equal(item->note, "it took both limbs");
	check_close("total", c.view.worth, total(&c.view), 1e-9);
	plan_case_close(&c);
	plan_run_close(p);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(one_limb_lost),
	    cmocka_unit_test(the_other_too),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
