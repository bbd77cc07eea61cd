/* SPDX-License-Identifier: MIT
 * Random edits, undone and done again at random: whatever the order, the digest after an undo is that before
 * the change, one that is refused changes nothing, and the store stays sound. */
#include "tests/support/check.h"
#include "tests/support/observing_store.h"

#include "db/allotments.h"
#include "db/field_stars.h"
#include "db/goals.h"
#include "db/history.h"
#include "db/midtimes.h"
#include "db/plans.h"
#include "db/sites.h"
#include "db/stored_settings.h"
#include "db/targets.h"
#include "db/telescopes.h"

#include <math.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { RUNS = 40, EDITS = 100, NAMES = 5 };

static const struct change change = {"2026-04-22T03:00:00Z", "test", "edit"};

static int pick(struct rng *r, int n)
{
	return (int)(rng_unit(r) * n);
}

struct digest {
	char text[33];
};

static struct digest digest_of(struct store *s)
{
	struct digest d;
	struct err e = {0};
	must(store_digest(s, d.text, &e), &e);
	return d;
}

static bool same(const struct digest *a, const struct digest *b)
{
	return strcmp(a->text, b->text) == 0;
}

static long changes_in(struct store *s)
{
	struct store_counts counts;
	struct err e = {0};
	must(store_count(s, &counts, &e), &e);
	return counts.changes;
}

/* --- one edit; what can't be done now is left --- */

static enum status put_target(struct store *s, struct rng *r, const char *name, struct err *e)
{
	struct field_texts texts;
	enum put_result result;
	char t0[32], mag[16];
	for (int f = 0; f < FIELD_COUNT; f++)
		texts.text[f] = "";
	snprintf(t0, sizeof t0, "2459000.%d", pick(r, 4));
	snprintf(mag, sizeof mag, "%d", 9 + pick(r, 3));
	texts.text[FIELD_AT_NAME] = name;
	texts.text[FIELD_AT_RA] = "10";
	texts.text[FIELD_AT_DEC] = "20";
	texts.text[field_find("mag")] = mag;
	if (pick(r, 4) > 0) {
		texts.text[FIELD_AT_T0] = t0;
		texts.text[FIELD_AT_SCALE] = "BJD_TDB";
		texts.text[FIELD_AT_PERIOD] = "3.5";
	}
	return target_put(s, &texts, pick(r, 2), &result, e);
}

static enum status set_target(struct store *s, struct rng *r, const char *name, const char *other,
			      struct err *e)
{
	static const int places[] = {FIELD_AT_NAME, FIELD_AT_PERIOD, FIELD_AT_DURATION};
	char text[32];
	const char *value = text;
	int field = places[pick(r, 3)];
	snprintf(text, sizeof text, "%d.5", 1 + pick(r, 3));
	if (field == FIELD_AT_NAME)
		value = other;
	return target_set(s, name, &field, &value, 1, e);
}

static enum status edit_time(struct store *s, struct rng *r, int64_t target, struct err *e)
{
	long n, epoch = pick(r, 3);
	bool added;
	enum event_kind kind = pick(r, 3) ? KIND_TRANSIT : KIND_OCCULTATION;
	const struct midtime_row row = {.epoch = epoch,
					.kind = kind,
					.mid_text = "as read",
					.mid = {2459000.0 + (double)epoch, 0.25 * pick(r, 3)},
					.time_scale = "HJD_UTC",
					.err_d = 0.001,
					.source = "",
					.used = pick(r, 4) > 0};
	switch (pick(r, 4)) {
	case 0:
		return midtime_use(s, target, epoch, kind, pick(r, 2), &n, e);
	case 1:
		return midtime_remove(s, target, epoch, kind, &n, e);
	default:
		return midtime_add(s, target, &row, &added, e);
	}
}

static enum status edit_site(struct store *s, struct rng *r, struct err *e)
{
	const char *name = pick(r, 2) ? "Tern Hill" : "Tern Cliff";
	const struct site site = {
	    .name = name, .lat_deg = 38, .lon_east_deg = -109, .height_m = 2000 + pick(r, 3), .zone = ""};
	return pick(r, 8) ? site_put(s, &site, false, e) : site_remove(s, name, e);
}

static enum status edit_telescope(struct store *s, struct rng *r, struct err *e)
{
	struct telescope t = telescope_empty();
	t.site_id = 1 + pick(r, 2);
	t.name = pick(r, 2) ? "Tern One" : "Tern Two";
	t.slew_deg_s = 1 + pick(r, 2);
	return pick(r, 3) ? telescope_put(s, &t, false, e) : telescope_remove(s, t.site_id, t.name, e);
}

static enum status edit_allotment(struct store *s, struct rng *r, struct err *e)
{
	int64_t id;
	const struct allotment a = {.site_id = 1 + pick(r, 2),
				    .telescope_id = pick(r, 3),
				    .first_mjd = 61152,
				    .last_mjd = 61152 + pick(r, 2),
				    .span = "first-half",
				    .note = ""};
	return pick(r, 2) ? allotment_add(s, &a, &id, e) : allotment_remove(s, 1 + pick(r, 6), e);
}

static enum status edit_setting(struct store *s, struct rng *r, struct err *e)
{
	static const char *const values[] = {"", "dark", "sunset"};
	return stored_setting_put(s, pick(r, 2) ? "half.1" : "half.2", values[pick(r, 3)], e);
}

static enum status edit_goal(struct store *s, struct rng *r, int64_t target, struct err *e)
{
	const char *band = pick(r, 2) ? "R" : "";
	const struct goal_row g = {.target_id = target, .whole = 1 + pick(r, 3), .band = band};
	return pick(r, 3) ? goal_set(s, &g, e) : goal_remove(s, target, band, e);
}

static enum status edit_star(struct store *s, struct rng *r, int64_t target, struct err *e)
{
	int64_t id;
	const struct field_star f = {.target_id = target,
				     .role = pick(r, 2) ? STAR_GUIDE : STAR_COMPARISON,
				     .ra_deg = 10 + pick(r, 7),
				     .dec_deg = 20,
				     .sep_arcsec = (double)NAN,
				     .mag = 12};
	return pick(r, 3) ? field_star_add(s, &f, &id, e) : field_star_remove(s, 1 + pick(r, 12), e);
}

/* A draft of one item, of target 1 and its first ephemeris. */
static enum status store_plan(struct store *s, struct rng *r, struct err *e)
{
	int64_t id;
	int edition, based_on = 0;
	char key[16], utc[24];
	struct plan_row have;
	struct small_plan p;
	snprintf(key, sizeof key, "item-%d", pick(r, 2));
	snprintf(utc, sizeof utc, "2026-04-23T03:0%d:00Z", pick(r, 3));
	small_plan_make(&p, key, utc);
	p.window.target_id = p.window.ephemeris_id = 1 + pick(r, 2);
	p.window.target = "Tern";
	p.plan.site_id = 1 + pick(r, 2);
	p.plan.telescope_id = pick(r, 4) == 0;
	p.plan.draft = pick(r, 2) ? "main" : "cloudy";
	enum status st =
	    plan_find(s, p.plan.site_id, p.plan.telescope_id, p.plan.night_mjd, p.plan.draft, &have, e);
	if (st == ST_OK)
		based_on = have.edition;
	plan_row_free(&have);
	if (st != ST_OK && st != ST_ABSENT)
		return st;
	return plan_store(s, &p.plan, pick(r, 2), based_on, &id, &edition, e);
}

/* Edits of plans that were taken: the loops are worth nothing without. */
static struct {
	long stored, kept, marked, goals, stars;
} taken;

static enum status count_taken(enum status st, long *n)
{
	*n += st == ST_OK;
	return st;
}

static enum status edit_plan(struct store *s, struct rng *r, struct err *e)
{
	static const char *const states[] = {"", "started", "done"};
	char key[16];
	int64_t id = 1 + pick(r, 6);
	snprintf(key, sizeof key, "item-%d", pick(r, 2));
	switch (pick(r, 6)) {
	case 0:
		return count_taken(plan_keep(s, id, e), &taken.kept);
	case 1:
		return plan_remove(s, id, e);
	case 2:
	case 3:
		return count_taken(
		    plan_mark(s, id, key, states[pick(r, 3)], "", "", "2026-04-23T04:00:00Z", e),
		    &taken.marked);
	default:
		return count_taken(store_plan(s, r, e), &taken.stored);
	}
}

static enum status edit(struct store *s, struct rng *r, struct err *e)
{
	char name[24], other[24];
	int number = pick(r, NAMES);
	snprintf(name, sizeof name, "Tern %d b", number);
	snprintf(other, sizeof other, "Tern %d b", pick(r, NAMES + 2));
	switch (pick(r, 22)) {
	case 0:
	case 1:
		return put_target(s, r, name, e);
	case 2:
		return set_target(s, r, name, other, e);
	case 3:
		return target_remove(s, name, e);
	case 4:
		return target_alias_add(s, name, other, e);
	case 5:
		return ephemeris_adopt(s, 1 + number, 1 + pick(r, 3), e);
	case 6:
	case 7:
		return edit_time(s, r, 1 + number, e);
	case 8:
	case 9:
		return edit_site(s, r, e);
	case 10:
	case 11:
		return edit_telescope(s, r, e);
	case 12:
		return edit_allotment(s, r, e);
	case 13:
		return edit_setting(s, r, e);
	case 14:
	case 15:
		return count_taken(edit_goal(s, r, 1 + pick(r, 3), e), &taken.goals);
	case 16:
	case 17:
		return count_taken(edit_star(s, r, 1 + pick(r, 2), e), &taken.stars);
	default:
		return edit_plan(s, r, e);
	}
}

/* A change set of 1..4 edits; true when it left a row. An edit that is refused takes the set with it. */
static bool edit_some(struct store *s, struct rng *r)
{
	struct err e = {0};
	long had = changes_in(s);
	enum status st = ST_OK;
	must(store_begin(s, &change, &e), &e);
	for (int n = 1 + pick(r, 4); st == ST_OK && n > 0; n--)
		st = edit(s, r, &e);
	if (st != ST_OK && st != ST_ABSENT && st != ST_CONFLICT)
		check_fail("an edit: %s", e.text);
	if (st == ST_OK)
		must(store_commit(s, &e), &e);
	else
		store_rollback(s);
	return changes_in(s) > had;
}

/* --- the loops --- */

static void say(void *ctx, const char *line)
{
	(void)ctx;
	print_message("%s\n", line);
}

static void sound(struct store *s)
{
	struct err e = {0};
	int faults = -1;
	must(store_check(s, say, NULL, &faults, &e), &e);
	assert_int_equal(faults, 0);
}

/* Edits on a stack: the newest can always be undone, an undo can always be undone at once. */
static void test_stack(void **state)
{
	struct rng r = rng_open("undo, a stack");
	long edits = 0, undos = 0;
	(void)state;
	for (int run = 0; run < RUNS; run++) {
		struct store *s;
		struct err e = {0};
		struct digest stack[EDITS + 1];
		size_t n = 0;
		s = observing_store(3);
		stack[0] = digest_of(s);
		for (int i = 0; i < EDITS; i++) {
			int64_t undone, again;
			struct digest is;
			if (n == 0 || pick(&r, 3) > 0) {
				if (edit_some(s, &r))
					stack[++n] = digest_of(s);
				edits++;
				continue;
			}
			must(history_undo(s, 0, &change, &undone, &e), &e);
			is = digest_of(s);
			if (!same(&is, &stack[n - 1]))
				check_fail("run %d, edit %d: undo of %lld leaves another digest", run, i,
					   (long long)undone);
			undos++;
			if (pick(&r, 3) == 0) {
				must(history_undo(s, changes_in(s), &change, &again, &e), &e);
				is = digest_of(s);
				if (!same(&is, &stack[n]))
					check_fail("run %d, edit %d: undo of an undo leaves another digest",
						   run, i);
			} else {
				n--;
			}
		}
		while (n-- > 0) {
			int64_t undone;
			must(history_undo(s, 0, &change, &undone, &e), &e);
			struct digest is = digest_of(s);
			if (!same(&is, &stack[n]))
				check_fail("run %d: on the way back", run);
		}
		sound(s);
		store_close(s);
	}
	print_message("%ld edits, %ld undos\n", edits, undos);
}

/* Any change in any order: done or refused, and an undo that was done is undone by the next. */
static void test_any(void **state)
{
	struct rng r = rng_open("undo, any change");
	long done = 0, conflicts = 0, absent = 0;
	(void)state;
	for (int run = 0; run < RUNS; run++) {
		struct store *s;
		struct err e = {0};
		s = observing_store(3);
		for (int i = 0; i < EDITS; i++) {
			int64_t undone, id;
			if (pick(&r, 2) || changes_in(s) == 0) {
				(void)edit_some(s, &r);
				continue;
			}
			id = 1 + pick(&r, (int)changes_in(s));
			struct digest before = digest_of(s);
			long had = changes_in(s);
			enum status st = history_undo(s, id, &change, &undone, &e);
			if (st == ST_OK) {
				done++;
				assert_int_equal(undone, id);
				assert_int_equal(changes_in(s), had + 1);
				must(history_undo(s, had + 1, &change, &undone, &e), &e);
			} else if (st == ST_CONFLICT || st == ST_ABSENT) {
				conflicts += st == ST_CONFLICT;
				absent += st == ST_ABSENT;
				assert_int_equal(changes_in(s), had);
			} else {
				check_fail("run %d, edit %d: status %d: %s", run, i, (int)st, e.text);
			}
			struct digest is = digest_of(s);
			if (!same(&is, &before))
				check_fail("run %d, edit %d: undo of %lld, status %d: another digest", run, i,
					   (long long)id, (int)st);
			struct target_list list;
			must(targets_load(s, &list, &e), &e);
			assert_int_equal(list.n_bad, 0);
			target_list_free(&list);
		}
		sound(s);
		store_close(s);
	}
	print_message("%ld undone, %ld refused as changed since, %ld as undone already\n", done, conflicts,
		      absent);
	assert_true(done > 50 && conflicts > 50 && absent > 5);
	print_message("%ld plans stored, %ld kept, %ld marks, %ld goals, %ld stars\n", taken.stored,
		      taken.kept, taken.marked, taken.goals, taken.stars);
	assert_true(taken.stored > 50 && taken.kept > 10 && taken.marked > 20 && taken.goals > 50 &&
		    taken.stars > 50);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(test_stack), cmocka_unit_test(test_any)};
	return cmocka_run_group_tests_name("undo", tests, NULL, NULL);
}
