/* SPDX-License-Identifier: MIT
 * Goals in the store and what is counted for them. Expected values by hand from the rules in db/goals.h. MJD
 * 61152 is 2026-04-22 (Julian date 2461152.5; by hand from MJD 51544 = 2000-01-01 and 9608 days). The changes
 * of the test store are of 2026-04-22T03:00:00Z. */
#include "tests/support/check.h"

#include "db/goals.h"
#include "db/history.h"
#include "db/store_parts.h"
#include "db/telescopes.h"
#include "tests/support/observing_store.h"

#include <stdio.h>
#include <string.h>

static const struct change change = {"2026-04-22T04:00:00Z", "Bo", "undo"};

static void set(struct store *s, int64_t target_id, int whole, int limb, const char *band, int32_t until_mjd)
{
	struct err e = {0};
	const struct goal_row g = {.target_id = target_id,
				   .whole = whole,
				   .limb = limb,
				   .band = band,
				   .until_mjd = until_mjd,
				   .note = "for Ada"};
	change_begin(s, "goal set");
	must(goal_set(s, &g, &e), &e);
	change_commit(s);
}

static void test_list(void **state)
{
	(void)state;
	struct store *s = observing_store(3);
	struct goal_list list;
	struct err e = {0};
	size_t n;
	set(s, 2, 3, 0, "", 0);
	set(s, 1, 0, 2, "Rc", 61200); /* Rc is R */
	set(s, 2, 4, 1, "V", 0);
	must(goals_load(s, &list, &e), &e);
	assert_int_equal(list.n, 3);
	const struct goal_row *g = goals_of(&list, 1, &n);
	assert_int_equal(n, 1);
	assert_string_equal(g[0].band, "R");
	assert_int_equal(g[0].limb, 2);
	assert_int_equal(g[0].until_mjd, 61200);
	assert_string_equal(g[0].note, "for Ada");
	assert_string_equal(g[0].since_utc, "2026-04-22T03:00:00Z");
	g = goals_of(&list, 2, &n);
	assert_int_equal(n, 2);
	assert_string_equal(g[0].band, "");
	assert_int_equal(g[0].until_mjd, 0);
	assert_int_equal(g[1].whole, 4);
	assert_null(goals_of(&list, 3, &n));
	assert_null(goals_of(&list, 99, &n));
	goal_list_free(&list);
	change_begin(s, "goal remove");
	must(goal_remove(s, 2, "V", &e), &e);
	assert_int_equal(goal_remove(s, 2, "V", &e), ST_ABSENT);
	assert_string_equal(e.text, "it has no goal in band V");
	assert_int_equal(goal_remove(s, 3, "", &e), ST_ABSENT);
	assert_string_equal(e.text, "it has no goal for any band");
	change_commit(s);
	must(goals_load(s, &list, &e), &e);
	assert_int_equal(list.n, 2);
	goal_list_free(&list);
	store_close(s);
}

static void test_refused(void **state)
{
	static const struct {
		struct goal_row g;
		enum status want;
		const char *says;
	} rows[] = {
	    {{0, 9, 1, 0, "", 0, "", ""}, ST_ABSENT, "no such target"},
	    {{0, 1, 0, 0, "", 0, "", ""}, ST_RANGE, "nothing is wanted"},
	    {{0, 1, -1, 2, "", 0, "", ""}, ST_RANGE, "whole: out of range (got \"-1\""},
	    {{0, 1, 1001, 0, "", 0, "", ""}, ST_RANGE, "whole: out of range"},
	    {{0, 1, 1, 1001, "", 0, "", ""}, ST_RANGE, "limb: out of range"},
	    {{0, 1, 1, 0, "Q", 0, "", ""}, ST_SYNTAX, "band: unknown (got \"Q\""},
	    {{0, 1, 1, 0, "", 15019, "", ""}, ST_RANGE, "1900 to 2100"},
	    {{0, 1, 1, 0, "", 88434, "", ""}, ST_RANGE, "1900 to 2100"},
	    {{0, 1, 1, 0, "", 0, "a\x1b[31m", ""}, ST_SYNTAX, "note: a control"},
	};
	(void)state;
	struct store *s = observing_store(1);
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct err e = {0};
		change_begin(s, "goal set");
		enum status st = goal_set(s, &rows[i].g, &e);
		store_rollback(s);
		if (st != rows[i].want || !strstr(e.text, rows[i].says))
			check_fail("row %zu: %d: %s", i, (int)st, e.text);
	}
	store_close(s);
}

static void test_undo(void **state)
{
	(void)state;
	struct store *s = observing_store(1);
	struct goal_list list;
	struct err e = {0};
	int64_t undone;
	char words[200];
	struct digest_text none = digest_now(s), is;
	set(s, 1, 3, 0, "R", 0); /* change 2 */
	newest_words(s, words);
	assert_string_equal(words, "goal of Tern 1 b");
	struct digest_text three = digest_now(s);
	set(s, 1, 3, 0, "R", 0); /* the same: no change */
	set(s, 1, 5, 0, "R", 0); /* change 3 */
	assert_int_equal(history_undo(s, 2, &change, &undone, &e), ST_CONFLICT);
	assert_string_equal(e.text,
			    "goal of Tern 1 b, R was changed again, by change 3: whole was \"3\" after "
			    "change 2 and is \"5\" now; nothing was undone");
	must(history_undo(s, 3, &change, &undone, &e), &e);
	is = digest_now(s);
	assert_string_equal(is.text, three.text);
	change_begin(s, "goal remove");
	must(goal_remove(s, 1, "R", &e), &e);
	change_commit(s); /* change 5 */
	is = digest_now(s);
	assert_string_equal(is.text, none.text);
	/* set anew it begins anew; the removal can't be undone then */
	const struct change later = {"2026-05-01T03:00:00Z", "Ada", "goal set"};
	const struct goal_row again = {.target_id = 1, .whole = 3, .band = "R"};
	must(store_begin(s, &later, &e), &e);
	must(goal_set(s, &again, &e), &e);
	change_commit(s); /* change 6 */
	must(goals_load(s, &list, &e), &e);
	assert_string_equal(list.goal[0].since_utc, "2026-05-01T03:00:00Z");
	goal_list_free(&list);
	assert_int_equal(history_undo(s, 5, &change, &undone, &e), ST_CONFLICT);
	must(history_undo(s, 6, &change, &undone, &e), &e);
	must(history_undo(s, 5, &change, &undone, &e), &e);
	is = digest_now(s);
	assert_string_equal(is.text, three.text);
	must(history_undo(s, 2, &change, &undone, &e), &e);
	is = digest_now(s);
	assert_string_equal(is.text, none.text);
	assert_int_equal(check_faults(s, (char[4096]){0}), 0);
	store_close(s);
}

static void test_damage(void **state)
{
	(void)state;
	struct store *s = observing_store(1);
	struct goal_list list;
	struct err e = {0};
	char says[4096];
	set(s, 1, 3, 0, "", 0);
	change_behind(s, "UPDATE goal SET whole = 7");
	must(goals_load(s, &list, &e), &e);
	assert_int_equal(list.n, 0);
	assert_int_equal(list.n_bad, 1);
	assert_string_equal(list.bad, "the checksum of goal 1 is wrong: left out; see `wane check`");
	goal_list_free(&list);
	assert_int_equal(check_faults(s, says), 1);
	assert_non_null(strstr(says, "table goal, row 1"));
	store_close(s);
}

/* --- what was got --- */

static int64_t add_telescope(struct store *s, const char *name, const char *band)
{
	struct err e = {0};
	struct telescope t = telescope_empty();
	struct telescope_list list;
	t.site_id = 1;
	t.name = name;
	t.band = band;
	change_begin(s, "telescope add");
	must(telescope_put(s, &t, true, &e), &e);
	change_commit(s);
	must(telescopes_load(s, &list, &e), &e);
	int64_t id = list.telescope[telescope_list_find(&list, 1, name)].id;
	telescope_list_free(&list);
	return id;
}

/* A plan of one night with one event, marked. */
static void observe(struct store *s, int64_t telescope_id, int32_t night_mjd, const char *draft,
		    int64_t target_id, long epoch, const char *variant, const char *state)
{
	struct err e = {0};
	char key[80], start[24], end[24];
	int64_t id;
	int edition;
	struct small_plan p;
	const int day = 22 + (night_mjd - 61152);
	snprintf(key, sizeof key, "S1/T%lld:transit:%ld", (long long)target_id, epoch);
	snprintf(start, sizeof start, "2026-04-%02dT05:00:00Z", day);
	snprintf(end, sizeof end, "2026-04-%02dT08:00:00Z", day);
	small_plan_make(&p, key, start);
	p.window.target_id = p.window.ephemeris_id = target_id;
	p.window.target = "Tern";
	p.window.epoch = epoch;
	p.window.variant = variant;
	p.item.end_utc = end;
	p.plan.telescope_id = telescope_id;
	p.plan.night_mjd = night_mjd;
	p.plan.draft = draft;
	p.plan.leap_date = "2026-06-28";
	change_begin(s, "plan");
	must(plan_store(s, &p.plan, false, 0, &id, &edition, &e), &e);
	must(plan_mark(s, id, key, state, "", "", "2026-04-25T12:00:00Z", &e), &e);
	change_commit(s);
}

static void test_got(void **state)
{
	(void)state;
	struct store *s = observing_store(4);
	struct goal_got_list got;
	struct err e = {0};
	const int64_t red = add_telescope(s, "Red", "R"), any = add_telescope(s, "Any", "");
	set(s, 1, 9, 9, "", 0);
	set(s, 2, 1, 1, "V", 0);
	observe(s, red, 61152, "main", 1, 10, "whole", "done");
	observe(s, red, 61152, "other", 1, 10, "ingress", "done"); /* another draft's word for the same */
	observe(s, any, 61152, "main", 1, 10, "short", "done");	   /* a second telescope */
	observe(s, red, 61153, "main", 1, 11, "egress", "done");
	observe(s, red, 61154, "main", 1, 12, "whole", "partly");
	observe(s, red, 61155, "main", 1, 13, "whole", "lost");
	observe(s, red, 61156, "main", 1, 14, "whole", "started");
	observe(s, any, 61153, "main", 2, 10, "whole", "done");
	observe(s, any, 61154, "main", 3, 10, "whole", "done"); /* it has no goal */
	must(goals_got_load(s, &got, &e), &e);
	assert_int_equal(got.n, 5);
	static const struct {
		int64_t target_id;
		bool whole;
		enum band_id band;
		int32_t night_mjd;
		const char *end_utc;
	} want[] = {
	    {1, true, BAND_R, 61152, "2026-04-22T08:00:00Z"},
	    {1, true, BAND_NONE, 61152, "2026-04-22T08:00:00Z"},
	    {1, false, BAND_R, 61153, "2026-04-23T08:00:00Z"},
	    {1, false, BAND_R, 61154, "2026-04-24T08:00:00Z"},
	    {2, true, BAND_NONE, 61153, "2026-04-23T08:00:00Z"},
	};
	for (size_t i = 0; i < got.n; i++) {
		assert_int_equal(got.got[i].target_id, want[i].target_id);
		assert_int_equal(got.got[i].whole, want[i].whole);
		assert_int_equal(got.got[i].band, want[i].band);
		assert_int_equal(got.got[i].night_mjd, want[i].night_mjd);
		assert_string_equal(got.got[i].end_utc, want[i].end_utc);
	}
	goal_got_list_free(&got);
	/* a removed draft counts no more: the word of the other draft is left */
	change_begin(s, "plan remove");
	must(plan_remove(s, 1, &e), &e);
	change_commit(s);
	must(goals_got_load(s, &got, &e), &e);
	assert_int_equal(got.n, 5);
	assert_false(got.got[0].whole);
	goal_got_list_free(&got);
	change_behind(s, "UPDATE plan_mark SET note = 'x' WHERE id = 4");
	must(goals_got_load(s, &got, &e), &e);
	assert_int_equal(got.n, 4);
	assert_int_equal(got.n_bad, 1);
	assert_non_null(strstr(got.bad, "it counts for no goal"));
	goal_got_list_free(&got);
	store_close(s);
}

static void test_count(void **state)
{
	static const struct goal_got got[] = {
	    {1, true, BAND_R, 61152, "2026-04-23T08:00:00Z"},
	    {2, true, BAND_R, 61152, "2026-04-22T02:59:59Z"},
	    {2, true, BAND_R, 61152, "2026-04-22T03:00:00Z"},
	    {2, true, BAND_R, 61152, "2026-04-22T03:00:01Z"},
	    {2, false, BAND_V, 61153, "2026-04-23T08:00:00Z"},
	    {2, true, BAND_NONE, 61154, "2026-04-24T08:00:00Z"},
	    {2, false, BAND_R, 61155, "2026-04-25T08:00:00Z"},
	    {3, true, BAND_R, 61152, "2026-04-23T08:00:00Z"},
	};
	/* since 2026-04-22T03:00:00Z; wanted and, by hand, counted and still wanted */
	static const struct {
		int64_t target_id;
		const char *band;
		int32_t until_mjd;
		int whole, limb, got_whole, got_limb, left_whole, left_limb;
	} rows[] = {
	    {2, "", 0, 3, 3, 2, 2, 1, 1},      /* what ended by its setting does not count */
	    {2, "R", 0, 3, 3, 2, 1, 1, 2},     /* that of a telescope without a band does */
	    {2, "V", 0, 3, 3, 1, 1, 2, 2},     /* the V limb, and the event of no known band */
	    {2, "R", 61154, 3, 3, 2, 0, 1, 3}, /* its last night is in it */
	    {2, "R", 61153, 3, 3, 1, 0, 2, 3},
	    {2, "", 0, 1, 4, 2, 2, 0, 1}, /* a whole event over stands for a limb */
	    {2, "", 0, 1, 3, 2, 2, 0, 0},
	    {2, "", 0, 2, 1, 2, 2, 0, 0}, /* never below none */
	    {2, "", 0, 4, 1, 2, 2, 2, 0}, /* limbs don't make a whole */
	    {1, "", 0, 1, 0, 1, 0, 0, 0},
	    {9, "", 0, 1, 1, 0, 0, 1, 1},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		const struct goal_row g = {.target_id = rows[i].target_id,
					   .whole = rows[i].whole,
					   .limb = rows[i].limb,
					   .band = rows[i].band,
					   .until_mjd = rows[i].until_mjd,
					   .since_utc = "2026-04-22T03:00:00Z"};
		int whole, limb, left_whole, left_limb;
		goal_count(&g, got, sizeof got / sizeof got[0], &whole, &limb);
		goal_left(&g, whole, limb, &left_whole, &left_limb);
		if (whole != rows[i].got_whole || limb != rows[i].got_limb ||
		    left_whole != rows[i].left_whole || left_limb != rows[i].left_limb)
			check_fail("row %zu: got %d %d, left %d %d", i, whole, limb, left_whole, left_limb);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_list),   cmocka_unit_test(test_refused), cmocka_unit_test(test_undo),
	    cmocka_unit_test(test_damage), cmocka_unit_test(test_got),	   cmocka_unit_test(test_count),
	};
	return cmocka_run_group_tests_name("goals", tests, NULL, NULL);
}
