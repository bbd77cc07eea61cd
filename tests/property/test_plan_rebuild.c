/* SPDX-License-Identifier: MIT
 * Nights that run: the clock moves on, time is lost, items are marked, the rest is planned anew and stored,
 * at random. Whatever happens, what has begun stays, nothing new begins in the past, the telescope is in one
 * place at a time, and what is stored is what was shown. */
#include "tui/plan_make.h"

#include "tests/support/check.h"
#include "tests/support/observing_store.h"
#include "tests/support/plan_run.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum { NIGHTS = 12, STEPS = 7, KEY_BYTES = 400, ITEMS_MAX = 64 };

struct kept_item {
	char key[KEY_BYTES];
	struct utc slew_by, end;
	enum plan_state state;
};
struct kept_items {
	size_t n;
	struct kept_item item[ITEMS_MAX];
};

static const struct plan_wish nothing = {.moved_min = NAN};

static struct kept_items remember(const struct plan_view *v)
{
	struct kept_items k = {.n = 0};
	for (size_t i = 0; i < v->n_items && i < ITEMS_MAX; i++) {
		struct kept_item *to = &k.item[k.n++];
		snprintf(to->key, sizeof to->key, "%s", v->item[i].key);
		to->slew_by = v->item[i].slew_by;
		to->end = v->item[i].end;
		to->state = v->item[i].state;
	}
	return k;
}

static const struct kept_item *find(const struct kept_items *k, const char *key)
{
	for (size_t i = 0; i < k->n; i++)
		if (strcmp(k->item[i].key, key) == 0)
			return &k->item[i];
	return NULL;
}

static bool later(struct utc a, struct utc b)
{
	return utc_diff_s(&leap_builtin, a, b) > 0.0;
}

/* Some event of a key is in the view still. */
static bool has_event(const struct plan_view *v, const char *key)
{
	const char *event = strrchr(key, '/') + 1;
	char first[KEY_BYTES];
	snprintf(first, sizeof first, "%.*s", (int)strcspn(event, "+"), event);
	for (size_t i = 0; i < v->n_items; i++)
		if (strstr(v->item[i].key, first))
			return true;
	return false;
}

static void check_rebuilt(const struct kept_items *before, const struct plan_view *v, struct utc now)
{
	const struct plan_item_view *last = NULL;
	for (size_t i = 0; i < before->n; i++)
		if ((before->item[i].state >= PLAN_STARTED || !later(now, before->item[i].slew_by)) &&
		    !has_event(v, before->item[i].key))
			check_fail("%s had begun and is gone", before->item[i].key);
	for (size_t i = 0; i < v->n_items; i++) {
		const struct plan_item_view *item = &v->item[i];
		const struct kept_item *old = find(before, item->key);
		const bool stood = old && !later(now, old->slew_by);
		if (!stood && item->state < PLAN_STARTED && later(item->slew_by, now) &&
		    utc_diff_s(&leap_builtin, item->slew_by, now) > 1.0)
			check_fail("%s is new and its move begins in the past", item->key);
		if (item->state > PLAN_STARTED || !later(now, item->end))
			continue;
		if (last && later(item->start, last->end))
			check_fail("%s and %s overlap", last->key, item->key);
		last = item;
	}
}

static double lost_s(const struct plan_view *v, double from_s, double to_s)
{
	const struct utc zero = {.mjd = PLAN_RUN_EVENING_MJD, .sod_s = 0.0};
	double sum_s = 0.0, until_s = from_s;
	for (size_t i = 0; i < v->n_blocks; i++) { /* in order of time */
		const double a = utc_diff_s(&leap_builtin, zero, v->block[i].from),
			     b = utc_diff_s(&leap_builtin, zero, v->block[i].to);
		if (v->block[i].kind != BLOCK_LOST || b <= until_s || a >= to_s)
			continue;
		sum_s += fmin(b, to_s) - fmax(a, until_s);
		until_s = fmin(b, to_s);
	}
	return sum_s;
}

/* What has begun and goes on holds no ingress that lost time took, and counts for what it holds. */
static void check_limbs(const struct plan_view *v, struct utc now)
{
	const struct utc zero = {.mjd = PLAN_RUN_EVENING_MJD, .sod_s = 0.0};
	const double base_s = 60.0 * v->run->limits.value[LIM_MIN_BASELINE];
	double total = 0.0;
	for (size_t i = 0; i < v->n_items; i++) {
		const struct plan_item_view *item = &v->item[i];
		const bool over = !later(now, item->end) && item->state < PLAN_STARTED;
		double worth = 0.0;
		for (size_t k = 0; k < item->n; k++) {
			const struct plan_member_view *m = &item->member[k];
			const double t1_s = utc_diff_s(&leap_builtin, zero, m->t1),
				     t2_s = utc_diff_s(&leap_builtin, zero, m->has_flat ? m->t2 : m->mid);
			worth += m->worth;
			if (item->state > PLAN_STARTED || over || !(m->worth > 0.0) ||
			    strcmp(m->variant, "egress") == 0)
				continue;
			if (lost_s(v, t1_s, t2_s) > 0.5 * (t2_s - t1_s) + 1.0 ||
			    lost_s(v, t1_s - base_s, t1_s) > 0.5 * base_s + 1.0)
				check_fail("%s: %s is %s still, its ingress was lost", item->key, m->target,
					   m->variant);
		}
		check_close("worth of an item", item->worth, worth, 1e-9);
		if (item->state != PLAN_LOST && !over)
			total += item->worth;
	}
	check_close("total", v->worth, total, 1e-9);
}

static void check_stored(struct plan_run *p, const struct plan_view *shown)
{
	struct plan_case c;
	plan_case_open(&c, p, &nothing, ST_OK);
	assert_int_equal(c.view.n_items, shown->n_items);
	for (size_t i = 0; i < shown->n_items; i++) {
		assert_string_equal(c.view.item[i].key, shown->item[i].key);
		assert_int_equal(c.view.item[i].state, shown->item[i].state);
		assert_string_equal(c.view.item[i].cause, shown->item[i].cause);
		assert_string_equal(c.view.item[i].note, shown->item[i].note);
		assert_string_equal(c.view.item[i].if_missed, shown->item[i].if_missed);
		check_close("worth", c.view.item[i].worth, shown->item[i].worth, 1e-9);
		for (size_t k = 0; k < shown->item[i].n; k++)
			assert_string_equal(c.view.item[i].member[k].variant,
					    shown->item[i].member[k].variant);
	}
	plan_case_close(&c);
}

/* Marks an item that has begun, now and then. */
static void mark(struct plan_run *p, struct rng *r, struct utc now)
{
	struct plan_case c;
	struct err e = {0};
	char name[200];
	plan_case_open(&c, p, &nothing, ST_OK);
	for (size_t i = 0; i < c.view.n_items; i++) {
		const struct plan_item_view *item = &c.view.item[i];
		if (item->state >= PLAN_DONE || later(now, item->start) || rng_unit(r) < 0.4)
			continue;
		const enum plan_state state = later(now, item->end)
						  ? PLAN_STARTED
						  : (enum plan_state)(PLAN_DONE + (int)(3.0 * rng_unit(r)));
		snprintf(name, sizeof name, "%s@%ld", item->member[0].target, item->member[0].epoch);
		must(plan_mark_item(&p->run, &c.view, name, state, "", "at random", &e), &e);
	}
	plan_case_close(&c);
}

static void step(struct plan_run *p, struct rng *r, struct utc *now)
{
	struct plan_case c;
	struct err e = {0};
	char from[UTC_TEXT_MAX], to[UTC_TEXT_MAX], span[2 * UTC_TEXT_MAX + 2];
	const struct utc before = *now;
	*now =
	    utc_rounded(&leap_builtin, utc_add_s(&leap_builtin, *now, 60.0 * rng_between(r, 5.0, 110.0)), 0);
	p->run.wall.start = *now;
	mark(p, r, *now);
	plan_case_open(&c, p, &nothing, ST_OK);
	const struct kept_items old = remember(&c.view);
	plan_case_close(&c);
	utc_text(&leap_builtin, before, 0, from);
	utc_text(&leap_builtin, *now, 0, to);
	snprintf(span, sizeof span, "%s..%s", from, to);
	const char *const lost[] = {span};
	const struct plan_wish wish = {
	    .lost = lost, .n_lost = rng_unit(r) < 0.5 ? 1 : 0, .rebuild = true, .moved_min = NAN};
	plan_case_open(&c, p, &wish, ST_OK);
	check_rebuilt(&old, &c.view, *now);
	check_limbs(&c.view, *now);
	must(plan_save(&p->run, &c.view, NULL, true, &e), &e);
	check_stored(p, &c.view);
	plan_case_close(&c);
}

static void running_nights(void **state)
{
	(void)state;
	struct rng r = rng_open("running nights");
	for (int i = 0; i < NIGHTS; i++) {
		struct plan_run *p = plan_run_open("2026-04-22T20:00:00Z");
		struct plan_case c;
		struct err e = {0};
		struct utc now = {.mjd = PLAN_RUN_EVENING_MJD + 1, .sod_s = 3.0 * 3600.0};
		plan_case_open(&c, p, &nothing, ST_OK);
		must(plan_save(&p->run, &c.view, NULL, true, &e), &e);
		plan_case_close(&c);
		for (int k = 0; k < STEPS; k++)
			step(p, &r, &now);
		char says[4096];
		assert_int_equal(check_faults(p->run.store, says), 0);
		plan_run_close(p);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(running_nights)};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
