/* SPDX-License-Identifier: MIT
 * Plans from end to end on a store in memory: proposed, stored, shown as they were, worked out anew in a
 * running night. */
#include "tui/plan_make.h"

#include "db/history.h"
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/observing_store.h"
#include "tests/support/plan_run.h"
#include "tui/parts/columns.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#define LIST(...)                                                                                            \
	(const char *const[])                                                                                \
	{                                                                                                    \
		__VA_ARGS__                                                                                  \
	}
#define AFTERNOON "2026-04-22T20:00:00Z"

static const struct plan_wish nothing = {.moved_min = NAN};

static void save(struct plan_run *p, struct plan_case *c, const char *draft, bool keep)
{
	struct err e = {0};
	must(plan_save(&p->run, &c->view, draft, keep, &e), &e);
}

static void keep_wish(struct plan_run *p, const struct plan_wish *wish)
{
	struct plan_case c;
	plan_case_open(&c, p, wish, ST_OK);
	save(p, &c, NULL, true);
	plan_case_close(&c);
}

static void keep_one(struct plan_run *p)
{
	keep_wish(p, &nothing);
}

/* Tern 31 b comes twice this night: without it every target of the plan stands for one item. */
static const struct plan_wish without_twice = {
    .drop = (const char *const[]){"Tern 31 b"}, .n_drop = 1, .moved_min = NAN};

static void same_items(const struct plan_view *a, const struct plan_view *b)
{
	assert_int_equal(a->n_items, b->n_items);
	for (size_t i = 0; i < a->n_items; i++) {
		const struct plan_item_view *left = &a->item[i], *right = &b->item[i];
		assert_string_equal(left->key, right->key);
		assert_int_equal(left->state, right->state);
		assert_string_equal(left->if_missed, right->if_missed);
		check_close("start [s]", utc_diff_s(&leap_builtin, left->start, right->start), 0.0, 0.0);
		check_close("end [s]", utc_diff_s(&leap_builtin, left->end, right->end), 0.0, 0.0);
		check_close("worth", left->worth, right->worth, 0.0);
		assert_int_equal(left->n, right->n);
		for (size_t k = 0; k < left->n; k++) {
			const struct plan_member_view *m = &left->member[k], *o = &right->member[k];
			assert_string_equal(m->variant, o->variant);
			assert_string_equal(m->usable, o->usable);
			assert_int_equal(m->ephemeris_id, o->ephemeris_id);
			assert_int_equal(m->ephemeris_version, o->ephemeris_version);
			for (size_t f = 0; f < column_count; f++)
				assert_string_equal(m->figure[f], o->figure[f]);
		}
	}
}

/* What is stored is shown as it was, figures, sentences, what was left out and why. */
static void stored_as_shown(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open(AFTERNOON);
	struct plan_case a, b;
	const struct plan_wish wish = {.pin = LIST("Tern 33 b"),
				       .n_pin = 1,
				       .drop = LIST("Tern 14 b"),
				       .n_drop = 1,
				       .block = LIST("23:00..23:30=engineering hour"),
				       .n_block = 1,
				       .costs = true,
				       .moved_min = NAN};
	plan_case_open(&a, p, &wish, ST_OK);
	assert_false(a.view.stored);
	assert_true(a.view.n_items > 2 && a.view.optimal);
	assert_int_equal(plan_case_item(&a, "Tern 33 b")->state, PLAN_PINNED);
	assert_null(plan_case_item(&a, "Tern 14 b"));
	assert_string_equal(plan_case_left(&a, "Tern 14 b"), "dropped by you");
	save(p, &a, NULL, true);
	assert_true(a.view.stored && a.view.kept && a.view.edition == 1);
	plan_case_open(&b, p, &nothing, ST_OK);
	assert_true(b.view.stored && b.view.kept && b.view.edition == 1 && b.view.moved == 0);
	assert_string_equal(b.view.draft, "main");
	same_items(&a.view, &b.view);
	check_close("worth", b.view.worth, a.view.worth, 0.0);
	assert_string_equal(b.view.limits, a.view.limits);
	check_close("gap [min]", b.view.gap_min, a.view.gap_min, 1e-9);
	assert_int_equal(b.view.n_left, a.view.n_left);
	for (size_t i = 0; i < a.view.n_left; i++) {
		assert_string_equal(b.view.left[i].reason, a.view.left[i].reason);
		check_close("cost", b.view.left[i].cost, a.view.left[i].cost, 0.0);
	}
	assert_int_equal(b.view.n_blocks, 1);
	assert_string_equal(b.view.block[0].text, "engineering hour");
	assert_int_equal(b.view.n_pins + b.view.n_drops, 2);
	/* nothing of the order lies in the block */
	for (size_t i = 0; i < b.view.n_items; i++)
		assert_true(utc_diff_s(&leap_builtin, b.view.item[i].end, b.view.block[0].from) >= 0.0 ||
			    utc_diff_s(&leap_builtin, b.view.block[0].to, b.view.item[i].start) >= 0.0);
	plan_case_close(&a);
	plan_case_close(&b);
	plan_run_close(p);
}

/* Items follow each other with at least the time to settle; no event is planned twice; the total is that of
 * the items. */
static void order_holds(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open(AFTERNOON);
	struct plan_case c;
	double worth = 0.0;
	plan_case_open(&c, p, &nothing, ST_OK);
	for (size_t i = 0; i < c.view.n_items; i++) {
		const struct plan_item_view *item = &c.view.item[i];
		worth += item->worth;
		assert_int_equal(item->order, (int)i + 1);
		assert_true(item->if_missed[0] != '\0');
		assert_true(utc_diff_s(&leap_builtin, item->slew_by, item->start) > 0.0);
		/* a second is what both were rounded by */
		if (i > 0)
			assert_true(utc_diff_s(&leap_builtin, c.view.item[i - 1].end, item->start) >=
				    60.0 * c.view.gap_min - 1.0);
		for (size_t k = 0; k < i; k++)
			assert_string_not_equal(item->key, c.view.item[k].key);
	}
	check_close("worth", worth, c.view.worth, 1e-6);
	plan_case_close(&c);
	plan_run_close(p);
}

/* By hand: T0 later by 0.007 d is every event later by 10.08 min. The plan stays as it is until it is worked
 * out anew. */
static void moved_by_another_ephemeris(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open(AFTERNOON);
	struct plan_case c;
	struct err e = {0};
	const int field[] = {FIELD_AT_T0};
	keep_wish(p, &(struct plan_wish){.pin = LIST("Tern 77 b"), .n_pin = 1, .moved_min = NAN});
	plan_case_open(&c, p, &nothing, ST_OK);
	const struct utc start = plan_case_item(&c, "Tern 77 b")->start;
	plan_case_close(&c);
	change_begin(p->run.store, "target set");
	must(target_set(p->run.store, "Tern 77 b", field, LIST("2459275.27194"), 1, &e), &e);
	change_commit(p->run.store);
	must(run_reload(&p->run, &e), &e);
	plan_case_open(&c, p, &nothing, ST_OK);
	const struct plan_item_view *item = plan_case_item(&c, "Tern 77 b");
	assert_int_equal(c.view.moved, 1);
	assert_true(item->member[0].moved && item->member[0].ephemeris_version == 1);
	check_close("moved [min]", item->member[0].moved_min, 10.08, 0.02);
	assert_non_null(strstr(item->member[0].moved_why, "version 2 (Tern list 2) adopted"));
	check_close("start [s]", utc_diff_s(&leap_builtin, start, item->start), 0.0, 0.0);
	plan_case_close(&c);
	/* it counts from as many minutes as are asked for */
	plan_case_open(&c, p, &(struct plan_wish){.moved_min = 11.0}, ST_OK);
	assert_int_equal(c.view.moved, 0);
	check_close("moved [min]", plan_case_item(&c, "Tern 77 b")->member[0].moved_min, 10.08, 0.02);
	plan_case_close(&c);
	plan_case_open(&c, p, &(struct plan_wish){.afresh = true, .moved_min = NAN}, ST_OK);
	assert_false(c.view.stored);
	item = plan_case_item(&c, "Tern 77 b");
	assert_true(!item || (isnan(item->member[0].moved_min) && item->member[0].ephemeris_version == 2));
	plan_case_close(&c);
	change_begin(p->run.store, "target remove");
	must(target_remove(p->run.store, "Tern 77 b", &e), &e);
	change_commit(p->run.store);
	must(run_reload(&p->run, &e), &e);
	plan_case_open(&c, p, &nothing, ST_OK);
	assert_string_equal(plan_case_item(&c, "Tern 77 b")->member[0].moved_why,
			    "the target is no longer stored");
	plan_case_close(&c);
	plan_run_close(p);
}

static struct utc between(const struct plan_item_view *item, double share)
{
	return utc_add_s(&leap_builtin, item->start,
			 share * utc_diff_s(&leap_builtin, item->start, item->end));
}

static void set_now(struct plan_run *p, struct utc t)
{
	p->run.wall.start = t;
}

/* In a running night what has begun stands, with its key and its figures; nothing new begins before now. */
static void rest_of_the_night(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open(AFTERNOON);
	struct plan_case before, after;
	keep_one(p);
	plan_case_open(&before, p, &nothing, ST_OK);
	assert_true(before.view.n_items >= 3);
	const struct plan_item_view *second = &before.view.item[1];
	const struct utc now = between(second, 0.5);
	set_now(p, now);
	const struct plan_wish drop = {
	    .drop = LIST(before.view.item[2].member[0].target), .n_drop = 1, .moved_min = NAN};
	plan_case_open(&after, p, &drop, ST_OK);
	assert_false(after.view.stored);
	assert_string_equal(after.view.item[0].key, before.view.item[0].key);
	assert_string_equal(after.view.item[0].note, "not begun");
	assert_string_equal(after.view.item[1].key, second->key);
	check_close("end [s]", utc_diff_s(&leap_builtin, second->end, after.view.item[1].end), 0.0, 0.0);
	for (size_t f = 0; f < column_count; f++)
		assert_string_equal(after.view.item[1].member[0].figure[f], second->member[0].figure[f]);
	assert_null(plan_case_item(&after, before.view.item[2].member[0].target));
	for (size_t i = 2; i < after.view.n_items; i++)
		assert_true(utc_diff_s(&leap_builtin, now, after.view.item[i].start) > 0.0);
	save(p, &after, NULL, true);
	assert_int_equal(after.view.edition, 2);
	plan_case_close(&after);
	/* what was never begun is remembered; what has gone since is there for cancelling */
	plan_case_open(&after, p, &nothing, ST_OK);
	assert_string_equal(after.view.item[0].note, "not begun");
	bool gone = false;
	for (size_t i = 0; i < after.view.n_gone; i++)
		gone = gone || strcmp(after.view.gone[i].key, before.view.item[2].key) == 0;
	assert_true(gone);
	plan_case_close(&after);
	/* without a clock in the night and without marks nothing has begun: all of it is planned */
	set_now(p, (struct utc){.mjd = PLAN_RUN_EVENING_MJD + 40});
	plan_case_open(&after, p, &(struct plan_wish){.afresh = true, .moved_min = NAN}, ST_OK);
	same_items(&before.view, &after.view);
	plan_case_close(&after);
	plan_case_close(&before);
	plan_run_close(p);
}

/* Lost time over all of an item lets go of it: it is lost, and stored as that with the new edition. */
static void lost_time(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open(AFTERNOON);
	struct plan_case c;
	struct err e = {0};
	char from[UTC_TEXT_MAX], to[UTC_TEXT_MAX], span[2 * UTC_TEXT_MAX + 2], key[400];
	keep_wish(p, &without_twice);
	plan_case_open(&c, p, &nothing, ST_OK);
	const struct plan_item_view *first = &c.view.item[0];
	const struct utc end = utc_add_s(&leap_builtin, first->end, 600.0);
	utc_text(&leap_builtin, first->start, 0, from);
	utc_text(&leap_builtin, end, 0, to);
	snprintf(span, sizeof span, "%s..%s", from, to);
	snprintf(key, sizeof key, "%s", first->key);
	set_now(p, between(first, 0.1));
	must(plan_mark_item(&p->run, &c.view, first->member[0].target, PLAN_STARTED, NULL, "seeing 2", &e),
	     &e);
	plan_case_close(&c);
	plan_case_open(&c, p, &nothing, ST_OK);
	assert_int_equal(c.view.item[0].state, PLAN_STARTED);
	assert_string_equal(c.view.item[0].note, "seeing 2");
	assert_true(c.view.item[0].marked_utc[0] != '\0');
	plan_case_close(&c);
	set_now(p, end);
	plan_case_open(&c, p, &(struct plan_wish){.lost = LIST(span), .n_lost = 1, .moved_min = NAN}, ST_OK);
	assert_non_null(strstr(c.echo, "lost: Wed 22 Apr"));
	assert_string_equal(c.view.item[0].key, key);
	assert_int_equal(c.view.item[0].state, PLAN_LOST);
	assert_string_equal(c.view.item[0].cause, "lost time");
	save(p, &c, NULL, true);
	plan_case_close(&c);
	plan_case_open(&c, p, &nothing, ST_OK);
	assert_int_equal(c.view.edition, 2);
	assert_int_equal(c.view.item[0].state, PLAN_LOST);
	assert_string_equal(c.view.item[0].cause, "lost time");
	assert_true(c.view.item[0].marked_utc[0] != '\0');
	plan_case_close(&c);
	plan_run_close(p);
}

/* Tern 27 b and c in one pointing from 21:29 MDT: b from T1 21:50 to T2 22:09, T3 00:57; c's ingress from
 * 22:16 to 22:36. Lost time over b's egress leaves no limb ahead: what was caught of the item is kept as
 * partly, though the last minutes of c's ingress were lost too, or other time was lost before the item began.
 */
static void lost_after_a_limb(void **state)
{
	static const char *const spans[][2] = {{"22:30..06:00"}, {"20:10..20:20", "23:00..06:00"}};
	(void)state;
	for (size_t i = 0; i < sizeof spans / sizeof spans[0]; i++) {
		struct plan_run *p = plan_run_open(AFTERNOON);
		struct plan_case c;
		keep_one(p);
		plan_run_now(p, "2026-04-23T06:00:00Z");
		const struct plan_wish lost = {
		    .lost = spans[i], .n_lost = spans[i][1] ? 2 : 1, .moved_min = NAN};
		plan_case_open(&c, p, &lost, ST_OK);
		const struct plan_item_view *item = plan_case_item(&c, "Tern 27 c");
		assert_non_null(item);
		assert_int_equal(item->n, 2);
		assert_int_equal(item->state, PLAN_PARTLY);
		assert_string_equal(item->cause, "lost time");
		assert_string_equal(item->note, "it took the egress");
		plan_case_close(&c);
		plan_run_close(p);
	}
}

/* The ingress of Tern 14 b was planned alone, from 23:12 MDT with T1 at 23:42, since the egress of Tern 70 b
 * was pinned as well. Lost time until 23:50 takes it; its egress two hours later is offered again, and the
 * mark of the ingress does not stand for it. */
static void egress_still_ahead(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open(AFTERNOON);
	struct plan_case c;
	struct err e = {0};
	const struct plan_wish lost = {.lost = LIST("22:40..23:50"), .n_lost = 1, .moved_min = NAN};
	keep_wish(p, &(struct plan_wish){
			 .pin = LIST("Tern 14 b", "Tern 70 b", "Tern 77 b"), .n_pin = 3, .moved_min = NAN});
	plan_run_now(p, "2026-04-23T05:20:00Z");
	plan_case_open(&c, p, &nothing, ST_OK);
	assert_string_equal(plan_case_item(&c, "Tern 14 b")->member[0].variant, "ingress");
	must(plan_mark_item(&p->run, &c.view, "Tern 14 b", PLAN_STARTED, NULL, NULL, &e), &e);
	plan_case_close(&c);
	plan_run_now(p, "2026-04-23T05:50:00Z");
	plan_case_open(&c, p, &lost, ST_OK);
	assert_string_equal(plan_case_item(&c, "Tern 14 b")->member[0].variant, "egress");
	assert_int_equal(plan_case_item(&c, "Tern 14 b")->state, PLAN_PINNED);
	save(p, &c, NULL, true);
	plan_case_close(&c);
	plan_case_open(&c, p, &nothing, ST_OK);
	assert_int_equal(plan_case_item(&c, "Tern 14 b")->state, PLAN_PINNED);
	plan_case_close(&c);
	plan_run_close(p);
}

/* Two who worked from the same edition: the second to store is told. */
static void stored_meanwhile(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open(AFTERNOON);
	struct plan_case a, b;
	struct err e;
	const struct plan_wish drop = {.drop = LIST("Tern 14 b"), .n_drop = 1, .moved_min = NAN};
	keep_one(p);
	plan_case_open(&a, p, &drop, ST_OK);
	plan_case_open(&b, p, &drop, ST_OK);
	save(p, &a, NULL, true);
	assert_int_equal(plan_save(&p->run, &b.view, NULL, true, &e), ST_CONFLICT);
	/* as a draft of its own it does no harm, and the kept one stays kept */
	save(p, &b, "second", false);
	assert_true(b.view.stored && !b.view.kept && b.view.edition == 1);
	plan_case_close(&a);
	plan_case_close(&b);
	plan_case_open(&a, p, &nothing, ST_OK);
	assert_string_equal(a.view.draft, "main");
	assert_int_equal(a.view.edition, 2);
	plan_case_close(&a);
	plan_case_open(&a, p, &(struct plan_wish){.draft = "second", .moved_min = NAN}, ST_OK);
	assert_string_equal(a.view.draft, "second");
	save(p, &a, NULL, true); /* keeping what is stored makes no edition */
	assert_true(a.view.kept && a.view.edition == 1);
	plan_case_close(&a);
	plan_run_close(p);
}

/* Storing and marking are single steps that undo takes back. */
static void undone(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open(AFTERNOON);
	const struct change change = {"2026-04-22T21:00:00Z", "test", "undo"};
	const struct digest_text empty = digest_now(p->run.store);
	struct plan_case c;
	struct err e = {0};
	int64_t id;
	keep_wish(p, &without_twice);
	const struct digest_text kept = digest_now(p->run.store);
	assert_string_not_equal(empty.text, kept.text);
	plan_case_open(&c, p, &nothing, ST_OK);
	must(plan_mark_item(&p->run, &c.view, c.view.item[0].member[0].target, PLAN_DONE, NULL, NULL, &e),
	     &e);
	plan_case_close(&c);
	must(history_undo(p->run.store, 0, &change, &id, &e), &e);
	assert_string_equal(digest_now(p->run.store).text, kept.text);
	must(history_undo(p->run.store, 0, &change, &id, &e), &e);
	assert_string_equal(digest_now(p->run.store).text, empty.text);
	plan_case_open(&c, p, &nothing, ST_OK);
	assert_false(c.view.stored);
	assert_int_equal(plan_mark_item(&p->run, &c.view, "Tern 14 b", PLAN_DONE, NULL, NULL, &e), ST_ABSENT);
	plan_case_close(&c);
	plan_run_close(p);
}

static void refused(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open(AFTERNOON);
	struct plan_case c;
	plan_case_open(&c, p, &(struct plan_wish){.pin = LIST("Tern 1400 b"), .n_pin = 1}, ST_ABSENT);
	plan_case_close(&c);
	plan_case_open(&c, p, &(struct plan_wish){.drop = LIST("Tern 14 b@999"), .n_drop = 1}, ST_ABSENT);
	plan_case_close(&c);
	plan_case_open(&c, p, &(struct plan_wish){.lost = LIST("23:00..22:00"), .n_lost = 1}, ST_RANGE);
	plan_case_close(&c);
	plan_case_open(&c, p, &(struct plan_wish){.from = "soon"}, ST_SYNTAX);
	plan_case_close(&c);
	plan_case_open(&c, p, &(struct plan_wish){.free = LIST("Tern 14 b"), .n_free = 1}, ST_ABSENT);
	plan_case_close(&c);
	plan_run_close(p);
}

/* Two pins that no order holds both: one is left out and says so. */
static void pins_clash(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open(AFTERNOON);
	struct plan_case c;
	const struct plan_wish pins = {
	    .pin = LIST("Tern 31 b", "Tern 5 b", "Tern 11 b", "Tern 48 b", "Tern 40 b"),
	    .n_pin = 5,
	    .costs = true,
	    .moved_min = NAN};
	int taken = 0, left = 0;
	plan_case_open(&c, p, &pins, ST_OK);
	for (int i = 0; i < pins.n_pin; i++) {
		taken += plan_case_item(&c, pins.pin[i]) != NULL;
		left += strncmp(plan_case_left(&c, pins.pin[i]), "pinned, but it clashes with", 27) == 0;
	}
	assert_true(taken >= 1 && left >= 1 && taken + left >= 5);
	plan_case_close(&c);
	plan_run_close(p);
}

/* Words for what is different; the same plan has none. */
static void changes_in_words(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open(AFTERNOON);
	struct plan_case a, b;
	struct err e = {0};
	char **line;
	size_t n;
	plan_case_open(&a, p, &nothing, ST_OK);
	must(plan_changes(&a.view, &a.view, &line, &n, &e), &e);
	assert_int_equal(n, 0);
	free(line);
	const char *const dropped = a.view.item[0].member[0].target;
	plan_case_open(&b, p, &(struct plan_wish){.drop = LIST(dropped), .n_drop = 1, .moved_min = NAN},
		       ST_OK);
	must(plan_changes(&a.view, &b.view, &line, &n, &e), &e);
	char expected[120];
	bool found = false;
	snprintf(expected, sizeof expected, "%s: gone, dropped by you", dropped);
	for (size_t i = 0; i < n; i++) {
		found = found || strcmp(line[i], expected) == 0;
		free(line[i]);
	}
	free(line);
	assert_true(found);
	plan_case_close(&a);
	plan_case_close(&b);
	plan_run_close(p);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(stored_as_shown),
	    cmocka_unit_test(order_holds),
	    cmocka_unit_test(moved_by_another_ephemeris),
	    cmocka_unit_test(rest_of_the_night),
	    cmocka_unit_test(lost_time),
	    cmocka_unit_test(lost_after_a_limb),
	    cmocka_unit_test(egress_still_ahead),
	    cmocka_unit_test(stored_meanwhile),
	    cmocka_unit_test(undone),
	    cmocka_unit_test(refused),
	    cmocka_unit_test(pins_clash),
	    cmocka_unit_test(changes_in_words),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
