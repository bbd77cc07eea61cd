/* SPDX-License-Identifier: MIT
 * Stored plans. Expected values by hand from the rules in db/plans.h. MJD 61152 is 2026-04-22 (Julian date
 * 2461152.5). */
#include "tests/support/check.h"

#include "db/history.h"
#include "db/plan_rows.h"
#include "db/store_parts.h"
#include "db/targets.h"
#include "db/telescopes.h"
#include "tests/support/observing_store.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { NIGHT = 61152 };
static const struct change change = {"2026-04-22T04:00:00Z", "Bo", "undo"};

/* A plan of up to 200 items, one window each (two in the first); item i has key `tern-i`. */
enum { ITEMS = 200 };
struct made {
	struct plan_row plan;
	struct plan_item_row item[ITEMS];
	struct plan_window_row window[ITEMS + 1];
	char key[ITEMS][24], name[ITEMS + 1][24];
};

static struct made *make(const char *draft, size_t n, double worth)
{
	struct made *m = calloc(1, sizeof *m);
	assert_non_null(m);
	for (size_t i = 0; i <= n && i <= ITEMS; i++) {
		snprintf(m->name[i], sizeof m->name[i], "Tern %zu b", i + 1);
		m->window[i] = (struct plan_window_row){
		    .target_id = (int64_t)i + 1,
		    .ephemeris_id = (int64_t)i + 1,
		    .target = m->name[i],
		    .kind = i % 2 ? KIND_OCCULTATION : KIND_TRANSIT,
		    .epoch = 700 + (long)i,
		    .variant = i % 3 ? "egress" : "whole",
		    .worth = 0.5 + (double)i,
		    .figures = "t1=2026-04-23T03:00:00Z\tdepth_ppt=12.5",
		};
	}
	for (size_t i = 0; i < n; i++) {
		snprintf(m->key[i], sizeof m->key[i], "tern-%zu", i + 1);
		m->item[i] = (struct plan_item_row){
		    .key = m->key[i],
		    .slew_by_utc = "2026-04-23T02:55:00Z",
		    .start_utc = "2026-04-23T03:00:00Z",
		    .latest_start_utc = i % 2 ? "" : "2026-04-23T03:10:00Z",
		    .end_utc = "2026-04-23T05:00:00Z",
		    .worth = worth,
		    .n = i ? 1 : 2,
		    .window = &m->window[i ? i + 1 : 0],
		};
	}
	m->plan = (struct plan_row){
	    .site_id = 1,
	    .night_mjd = NIGHT,
	    .draft = draft,
	    .limits = "sun_limit=-12\talt_limit=30",
	    .leap_date = "2026-06-28",
	    .worth = worth,
	    .bound = worth + 1,
	    .optimal = true,
	    .choices = "pin\tTern 1 b\nblock\t21:00L..+25m\n",
	    .left_out = "Tern 9 b\ttransit\t12\tclash\n",
	    .n = n,
	    .item = m->item,
	};
	return m;
}

static int64_t put(struct store *s, const struct made *m, bool keep, int based_on, int want_edition)
{
	struct err e = {0};
	int64_t id = 0;
	int edition = 0;
	change_begin(s, "plan");
	must(plan_store(s, &m->plan, keep, based_on, &id, &edition, &e), &e);
	change_commit(s);
	assert_int_equal(edition, want_edition);
	return id;
}

static void mark(struct store *s, int64_t plan, const char *key, const char *state)
{
	struct err e = {0};
	change_begin(s, "plan mark");
	must(plan_mark(s, plan, key, state, "", "", "2026-04-23T04:00:00Z", &e), &e);
	change_commit(s);
}

static int64_t undo(struct store *s, int64_t id)
{
	struct err e = {0};
	int64_t undone;
	must(history_undo(s, id, &change, &undone, &e), &e);
	return undone;
}

static int edition_of(struct store *s, int64_t plan)
{
	struct plan_row p;
	struct err e = {0};
	must(plan_load(s, plan, 0, &p, &e), &e);
	int edition = p.edition;
	plan_row_free(&p);
	return edition;
}

/* Id of the kept plan of the night, 0 none. */
static int64_t kept(struct store *s)
{
	struct plan_row p;
	struct err e = {0};
	enum status st = plan_find(s, 1, 0, NIGHT, NULL, &p, &e);
	int64_t id = st == ST_OK ? p.id : 0;
	if (st != ST_OK)
		assert_int_equal(st, ST_ABSENT);
	plan_row_free(&p);
	return id;
}

static void sound(struct store *s)
{
	char says[4096];
	if (check_faults(s, says) != 0)
		check_fail("%s", says);
}

/* What is stored comes back as it was, of 200 items too. */
static void test_round_trip(void **state)
{
	(void)state;
	struct store *s = observing_store(ITEMS + 1);
	struct made *m = make("main", ITEMS, 3.25);
	struct plan_row p;
	struct err e = {0};
	int64_t id = put(s, m, true, 0, 1);
	must(plan_load(s, id, 0, &p, &e), &e);
	assert_int_equal(p.site_id, 1);
	assert_int_equal(p.telescope_id, 0);
	assert_int_equal(p.night_mjd, NIGHT);
	assert_string_equal(p.draft, "main");
	assert_true(p.kept && p.optimal);
	assert_int_equal(p.edition, 1);
	assert_string_equal(p.stored_utc, "2026-04-22T03:00:00Z");
	assert_string_equal(p.who, "Ada");
	assert_string_equal(p.limits, m->plan.limits);
	assert_string_equal(p.leap_date, m->plan.leap_date);
	assert_string_equal(p.choices, m->plan.choices);
	assert_string_equal(p.left_out, m->plan.left_out);
	check_close("worth", p.worth, 3.25, 0);
	check_close("bound", p.bound, 4.25, 0);
	assert_int_equal(p.n, ITEMS);
	for (size_t i = 0; i < p.n; i++) {
		const struct plan_item_row *a = &p.item[i], *b = &m->item[i];
		assert_string_equal(a->key, b->key);
		assert_string_equal(a->slew_by_utc, b->slew_by_utc);
		assert_string_equal(a->start_utc, b->start_utc);
		assert_string_equal(a->latest_start_utc, b->latest_start_utc);
		assert_string_equal(a->end_utc, b->end_utc);
		check_close("worth of an item", a->worth, b->worth, 0);
		assert_string_equal(a->state, "");
		assert_string_equal(a->marked_utc, "");
		assert_int_equal(a->n, b->n);
		for (size_t k = 0; k < a->n; k++) {
			const struct plan_window_row *x = &a->window[k], *y = &b->window[k];
			assert_int_equal(x->target_id, y->target_id);
			assert_int_equal(x->ephemeris_id, y->ephemeris_id);
			assert_string_equal(x->target, y->target);
			assert_int_equal(x->kind, y->kind);
			assert_int_equal(x->epoch, y->epoch);
			assert_string_equal(x->variant, y->variant);
			check_close("worth of a window", x->worth, y->worth, 0);
			assert_string_equal(x->figures, y->figures);
		}
	}
	plan_row_free(&p);
	sound(s);
	free(m);
	store_close(s);
}

/* Each store is a new edition; old ones stay as they were; who saw an older one is refused. */
static void test_editions(void **state)
{
	(void)state;
	struct store *s = observing_store(5);
	struct made *one = make("main", 3, 1), *two = make("MAIN", 2, 2);
	struct plan_row p;
	struct err e = {0};
	int edition;
	int64_t id = put(s, one, false, 0, 1), other;
	assert_int_equal(put(s, two, false, 1, 2), id);
	must(plan_load(s, id, 0, &p, &e), &e);
	assert_int_equal(p.edition, 2);
	assert_int_equal(p.n, 2);
	assert_string_equal(p.draft, "MAIN");
	plan_row_free(&p);
	must(plan_load(s, id, 1, &p, &e), &e);
	assert_int_equal(p.edition, 1);
	assert_int_equal(p.n, 3);
	plan_row_free(&p);
	assert_int_equal(plan_load(s, id, 3, &p, &e), ST_ABSENT);
	assert_string_equal(e.text, "plan of 2026-04-22, draft MAIN: it has no edition 3");
	assert_int_equal(plan_load(s, 77, 0, &p, &e), ST_ABSENT);
	struct digest_text before = digest_now(s), after;
	static const struct {
		int based_on;
		const char *says;
	} stale[] = {{0, "stored already, edition 2 holds"},
		     {1, "edition 2 holds by now (yours was made from edition 1)"},
		     {3, "edition 2 holds by now"}};
	for (size_t i = 0; i < sizeof stale / sizeof stale[0]; i++) {
		change_begin(s, "plan");
		assert_int_equal(plan_store(s, &one->plan, true, stale[i].based_on, &other, &edition, &e),
				 ST_CONFLICT);
		store_rollback(s);
		if (!strstr(e.text, stale[i].says))
			check_fail("%s", e.text);
	}
	after = digest_now(s);
	assert_string_equal(before.text, after.text);
	/* a draft that was removed leaves its name to another */
	change_begin(s, "plan remove");
	must(plan_remove(s, id, &e), &e);
	assert_int_equal(plan_remove(s, id, &e), ST_ABSENT);
	assert_int_equal(plan_keep(s, id, &e), ST_ABSENT);
	change_commit(s);
	change_begin(s, "plan");
	assert_int_equal(plan_store(s, &one->plan, true, 2, &other, &edition, &e), ST_CONFLICT);
	assert_non_null(strstr(e.text, "removed meanwhile"));
	store_rollback(s);
	assert_int_equal(plan_load(s, id, 0, &p, &e), ST_ABSENT);
	assert_int_not_equal(put(s, one, false, 0, 1), id);
	sound(s);
	free(one);
	free(two);
	store_close(s);
}

/* One draft of a night is kept; another site, night or telescope is another matter. */
static void test_keep(void **state)
{
	(void)state;
	struct store *s = observing_store(4);
	struct made *a = make("main", 2, 1), *b = make("cloudy", 1, 2);
	struct err e = {0};
	struct telescope t = telescope_empty();
	t.site_id = 1;
	t.name = "Tern One";
	change_begin(s, "telescope add");
	must(telescope_put(s, &t, true, &e), &e);
	change_commit(s);
	assert_int_equal(kept(s), 0);
	int64_t one = put(s, a, true, 0, 1);
	assert_int_equal(kept(s), one);
	int64_t two = put(s, b, false, 0, 1);
	assert_int_equal(kept(s), one);
	assert_int_equal(put(s, b, true, 1, 2), two);
	assert_int_equal(kept(s), two);
	assert_int_equal(put(s, b, false, 2, 3), two); /* an edition more of the kept one stays kept */
	assert_int_equal(kept(s), two);
	a->plan.telescope_id = 1;
	int64_t three = put(s, a, true, 0, 1);
	a->plan.telescope_id = 0;
	a->plan.night_mjd++;
	int64_t four = put(s, a, true, 0, 1);
	assert_int_equal(kept(s), two);
	change_begin(s, "plan keep");
	must(plan_keep(s, one, &e), &e);
	must(plan_keep(s, one, &e), &e);
	change_commit(s);
	assert_int_equal(kept(s), one);
	struct digest_text is, was = digest_now(s);
	(void)undo(s, 0);
	assert_int_equal(kept(s), two);
	(void)undo(s, 10); /* the undo of the undo */
	assert_int_equal(kept(s), one);
	is = digest_now(s);
	assert_string_equal(is.text, was.text);
	struct plan_row p;
	must(plan_find(s, 1, 1, NIGHT, NULL, &p, &e), &e);
	assert_int_equal(p.id, three);
	plan_row_free(&p);
	must(plan_find(s, 1, 0, NIGHT, "Cloudy", &p, &e), &e);
	assert_int_equal(p.id, two);
	assert_false(p.kept);
	plan_row_free(&p);
	e = (struct err){0};
	assert_int_equal(plan_find(s, 2, 0, NIGHT, NULL, &p, &e), ST_ABSENT);
	assert_int_equal(plan_find(s, 1, 0, NIGHT, "x", &p, &e), ST_ABSENT);
	assert_string_equal(e.text, "");
	/* the list: by night, telescope, draft */
	struct plan_list list;
	must(plans_list(s, 0, NIGHT, NIGHT + 1, &list, &e), &e);
	assert_int_equal(list.n, 4);
	const int64_t order[] = {two, one, three, four};
	for (size_t i = 0; i < 4; i++)
		assert_int_equal(list.plan[i].id, order[i]);
	assert_int_equal(list.plan[0].edition, 3);
	assert_string_equal(list.plan[0].who, "Ada");
	assert_string_equal(list.plan[0].limits, b->plan.limits);
	assert_null(list.plan[0].item);
	plan_list_free(&list);
	must(plans_list(s, 2, NIGHT, NIGHT, &list, &e), &e);
	assert_int_equal(list.n, 0);
	plan_list_free(&list);
	must(plans_list(s, 1, NIGHT + 1, NIGHT + 9, &list, &e), &e);
	assert_int_equal(list.n, 1);
	plan_list_free(&list);
	sound(s);
	free(a);
	free(b);
	store_close(s);
}

static void has_mark(struct store *s, int64_t plan, size_t item, const char *want)
{
	struct plan_row p;
	struct err e = {0};
	must(plan_load(s, plan, 0, &p, &e), &e);
	assert_true(item < p.n);
	assert_string_equal(p.item[item].state, want);
	plan_row_free(&p);
}

static void test_marks(void **state)
{
	(void)state;
	struct store *s = observing_store(5);
	struct made *long_one = make("main", 4, 1), *short_one = make("main", 2, 2);
	struct err e = {0};
	struct plan_row p;
	char words[200];
	int64_t id = put(s, long_one, true, 0, 1);
	mark(s, id, "tern-3", "started");
	newest_words(s, words);
	assert_string_equal(words, "Tern 4 b marked started, plan of 2026-04-22");
	has_mark(s, id, 2, "started");
	(void)put(s, short_one, true, 1, 2);
	(void)put(s, long_one, true, 2, 3);
	has_mark(s, id, 2, "started"); /* outlives editions */
	(void)put(s, short_one, true, 3, 4);
	struct digest_text none = digest_now(s), is;
	change_begin(s, "plan mark");
	must(plan_mark(s, id, "tern-1", "lost", "cloud\x1b[2J", "from 03:20 \xe2\x80\xae on",
		       "2026-04-23T04:00:00Z", &e),
	     &e);
	change_commit(s);
	must(plan_load(s, id, 0, &p, &e), &e);
	assert_string_equal(p.item[0].state, "lost");
	is = digest_now(s);
	assert_string_not_equal(is.text, none.text);
	assert_string_equal(p.item[0].cause, "cloud[2J");
	assert_string_equal(p.item[0].note, "from 03:20  on");
	assert_string_equal(p.item[0].marked_utc, "2026-04-23T04:00:00Z");
	assert_string_equal(p.item[1].state, "");
	plan_row_free(&p);
	mark(s, id, "tern-3", "done"); /* of an earlier edition: its mark goes on */
	mark(s, id, "tern-1", "");
	has_mark(s, id, 0, "");
	newest_words(s, words);
	assert_string_equal(words, "Tern 1 b unmarked, plan of 2026-04-22");
	(void)undo(s, 0);
	has_mark(s, id, 0, "lost");
	(void)undo(s, 0); /* done -> started */
	(void)undo(s, 0);
	has_mark(s, id, 0, "");
	is = digest_now(s);
	assert_string_equal(is.text, none.text);
	static const struct {
		const char *key, *state, *note, *utc, *says;
		enum status want;
	} rows[] = {
	    {"tern-9", "done", "", "2026-04-23T04:00:00Z", "no edition of it has such an item", ST_ABSENT},
	    {"", "done", "", "2026-04-23T04:00:00Z", "needs a key", ST_SYNTAX},
	    {"tern-1", "planned", "", "2026-04-23T04:00:00Z", "mark: unknown", ST_SYNTAX},
	    {"tern-1", "done", "", "now", "no UTC time (got \"now\"", ST_SYNTAX},
	    {"tern-1", "done", "", "2026-04-23 04:00:00Z", "no UTC time", ST_SYNTAX},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		change_begin(s, "plan mark");
		enum status st =
		    plan_mark(s, id, rows[i].key, rows[i].state, "", rows[i].note, rows[i].utc, &e);
		store_rollback(s);
		if (st != rows[i].want || !strstr(e.text, rows[i].says))
			check_fail("row %zu: %d: %s", i, (int)st, e.text);
	}
	char *long_note = malloc(9001);
	assert_non_null(long_note);
	memset(long_note, 'x', 9000);
	long_note[9000] = '\0';
	change_begin(s, "plan mark");
	assert_int_equal(plan_mark(s, id, "tern-1", "done", "", long_note, "2026-04-23T04:00:00Z", &e),
			 ST_RANGE);
	assert_int_equal(plan_mark(s, 99, "tern-1", "done", "", "", "2026-04-23T04:00:00Z", &e), ST_ABSENT);
	store_rollback(s);
	free(long_note);
	sound(s);
	free(long_one);
	free(short_one);
	store_close(s);
}

/* An undo moves the pointer back; editions stay, and a number is not given twice. */
static void test_undo(void **state)
{
	(void)state;
	struct store *s = observing_store(5);
	struct made *a = make("main", 3, 1), *b = make("cloudy", 2, 2);
	struct err e = {0};
	struct plan_row p;
	int64_t undone;
	char words[200];
	struct digest_text d0 = digest_now(s), is;
	int64_t id = put(s, a, true, 0, 1); /* change 2 */
	newest_words(s, words);
	assert_string_equal(words, "plan of 2026-04-22, draft main");
	struct digest_text d1 = digest_now(s);
	(void)put(s, a, false, 1, 2); /* 3 */
	assert_int_equal(history_undo(s, 2, &change, &undone, &e), ST_CONFLICT);
	assert_string_equal(
	    e.text, "plan of 2026-04-22, draft main was changed again, by change 3: edition was \"1\" "
		    "after change 2 and is \"2\" now; nothing was undone");
	(void)undo(s, 0); /* 4 */
	assert_int_equal(edition_of(s, id), 1);
	is = digest_now(s);
	assert_string_equal(is.text, d1.text);
	must(plan_load(s, id, 2, &p, &e), &e); /* still there to be seen */
	plan_row_free(&p);
	(void)put(s, a, false, 1, 3); /* 5 */
	(void)undo(s, 0);	      /* 6 */
	(void)put(s, b, true, 0, 1);  /* 7: cloudy is kept now, main is not */
	newest_words(s, words);
	assert_string_equal(words, "plans of 2026-04-22, drafts main and cloudy");
	(void)undo(s, 0); /* 8: cloudy gone, main kept */
	assert_int_equal(kept(s), id);
	is = digest_now(s);
	assert_string_equal(is.text, d1.text);
	(void)undo(s, 0); /* 9: of change 2 */
	assert_int_equal(plan_load(s, id, 0, &p, &e), ST_ABSENT);
	is = digest_now(s);
	assert_string_equal(is.text, d0.text);
	(void)undo(s, 9);
	is = digest_now(s);
	assert_string_equal(is.text, d1.text);
	sound(s);
	free(a);
	free(b);
	store_close(s);
}

/* Both drafts there: which of the two is kept goes back and forth, whatever order their rows have. */
static void test_undo_of_keeping(void **state)
{
	(void)state;
	struct store *s = observing_store(5);
	struct made *a = make("main", 3, 1), *b = make("cloudy", 2, 2);
	struct err e = {0};
	int64_t undone, one = put(s, a, true, 0, 1), two = put(s, b, false, 0, 1); /* 2, 3 */
	for (int turn = 0; turn < 2; turn++) {
		struct digest_text was = digest_now(s), is;
		int64_t have = kept(s);
		change_begin(s, "plan keep");
		must(plan_keep(s, have == one ? two : one, &e), &e);
		change_commit(s);
		assert_int_equal(kept(s), have == one ? two : one);
		(void)undo(s, 0);
		assert_int_equal(kept(s), have);
		is = digest_now(s);
		assert_string_equal(is.text, was.text);
		change_begin(s, "plan keep");
		must(plan_keep(s, have == one ? two : one, &e), &e);
		change_commit(s);
	}
	/* what can't come back, in words: changes 10 (removed), 11 (another of the same name) */
	change_begin(s, "plan remove");
	must(plan_remove(s, one, &e), &e);
	change_commit(s);
	(void)put(s, a, false, 0, 1);
	assert_int_equal(history_undo(s, 10, &change, &undone, &e), ST_CONFLICT);
	assert_string_equal(e.text,
			    "plan of 2026-04-22, draft main can't come back: its name belongs to another by "
			    "now; nothing was undone");
	(void)undo(s, 11);
	change_begin(s, "plan keep");
	must(plan_keep(s, two, &e), &e);
	change_commit(s);
	assert_int_equal(history_undo(s, 10, &change, &undone, &e), ST_CONFLICT);
	assert_string_equal(
	    e.text, "plan of 2026-04-22, draft main can't come back: another plan of that night is kept "
		    "by now; nothing was undone");
	sound(s);
	free(a);
	free(b);
	store_close(s);
}

/* --- what a night has been through --- */

/* The revisions, more than before unless nothing was stored since; n editions were kept, the newest `plan`.
 */
static int64_t past(struct store *s, int64_t before, bool kept_now, size_t n, int64_t plan, int edition)
{
	struct plan_past p;
	struct err e = {0};
	must(plan_past_load(s, 1, 0, NIGHT, &p, &e), &e);
	const int64_t revisions = p.revisions;
	assert_true(revisions > before);
	assert_int_equal(p.kept, kept_now);
	assert_int_equal(p.n, n);
	assert_int_equal(strlen(p.revised_utc), 20);
	if (n > 0) {
		assert_int_equal(p.was_kept[0].plan_id, plan);
		assert_int_equal(p.was_kept[0].edition, edition);
	}
	for (size_t i = 0; i < p.n; i++) {
		struct plan_row row;
		must(plan_load_past(s, p.was_kept[i].plan_id, p.was_kept[i].edition, &row, &e), &e);
		assert_int_equal(row.edition, p.was_kept[i].edition);
		plan_row_free(&row);
	}
	plan_past_free(&p);
	return revisions;
}

static void test_past(void **state)
{
	(void)state;
	struct store *s = observing_store(6);
	struct made *a = make("main", 3, 1), *b = make("cloudy", 2, 2);
	struct err e = {0};
	struct plan_past none;
	must(plan_past_load(s, 1, 0, NIGHT, &none, &e), &e);
	assert_true(none.revisions == 0 && none.n == 0 && !none.kept && !none.revised_utc[0]);
	plan_past_free(&none);
	const int64_t one = put(s, a, true, 0, 1);
	int64_t n = past(s, 0, true, 1, one, 1);
	const int64_t two = put(s, b, false, 0, 1); /* a draft counts, none of its items was kept */
	n = past(s, n, true, 1, one, 1);
	(void)put(s, a, false, 1, 2); /* the kept one stays that */
	n = past(s, n, true, 2, one, 2);
	change_begin(s, "plan keep");
	must(plan_keep(s, two, &e), &e);
	change_commit(s);
	n = past(s, n, true, 3, one, 2); /* by when they were stored */
	(void)undo(s, 0);
	n = past(s, n, true, 3, one, 2);
	change_begin(s, "plan remove");
	must(plan_remove(s, one, &e), &e);
	change_commit(s);
	n = past(s, n, false, 3, one, 2);
	(void)undo(s, 0);
	(void)past(s, n, true, 3, one, 2);
	sound(s);
	free(a);
	free(b);
	store_close(s);
}

/* --- what may not be stored; what is cleaned --- */

static void refused(struct store *s, const struct plan_row *p, enum status want, const char *says)
{
	struct err e = {0};
	int64_t id;
	int edition;
	change_begin(s, "plan");
	enum status st = plan_store(s, p, true, 0, &id, &edition, &e);
	store_rollback(s);
	if (st != want || !strstr(e.text, says))
		check_fail("%d: %s (want %d: %s)", (int)st, e.text, (int)want, says);
}

static void test_refused(void **state)
{
	(void)state;
	struct store *s = observing_store(5);
	struct made *m = make("main", 3, 1);
	const struct plan_row good = m->plan;
	struct plan_row p = good;
#define BAD(member, value, want, says)                                                                       \
	do {                                                                                                 \
		p = good;                                                                                    \
		p.member = value;                                                                            \
		refused(s, &p, want, says);                                                                  \
	} while (0)
	BAD(draft, "", ST_SYNTAX, "a name is needed");
	BAD(draft, "ma\x1bin", ST_SYNTAX, "U+001B");
	BAD(draft, "12345678901234567890123456789012345678901", ST_RANGE, "at most 40 characters");
	BAD(site_id, 9, ST_ABSENT, "no such site");
	BAD(telescope_id, 1, ST_ABSENT, "no such telescope");
	BAD(night_mjd, 0, ST_RANGE, "1900 to 2100");
	BAD(worth, (double)NAN, ST_RANGE, "worth");
	BAD(bound, -1.0, ST_RANGE, "bound");
	BAD(leap_date, "a date that is longer than a date", ST_RANGE, "leap table");
#undef BAD
	const struct plan_item_row item = m->item[1];
	const struct plan_window_row window = m->window[2];
#define BAD(what, member, value, want, says)                                                                 \
	do {                                                                                                 \
		m->item[1] = item;                                                                           \
		m->window[2] = window;                                                                       \
		m->what.member = value;                                                                      \
		refused(s, &good, want, says);                                                               \
	} while (0)
	BAD(item[1], key, "tern-1", ST_SYNTAX, "two items have the key");
	BAD(item[1], key, "a\nb", ST_SYNTAX, "key of an item");
	BAD(item[1], start_utc, "soon", ST_SYNTAX, "plan: start: no UTC time");
	BAD(item[1], end_utc, "", ST_SYNTAX, "plan: end");
	BAD(item[1], latest_start_utc, "-", ST_SYNTAX, "latest start");
	BAD(item[1], worth, (double)INFINITY, ST_RANGE, "an item");
	BAD(item[1], n, 65, ST_RANGE, "at most 64 windows");
	BAD(window[2], ephemeris_id, 1, ST_ABSENT, "Tern 3 b has no such ephemeris"); /* that of another */
	BAD(window[2], ephemeris_id, 99, ST_ABSENT, "no such ephemeris");
	BAD(window[2], target_id, 99, ST_ABSENT, "no such ephemeris");
	BAD(window[2], target, "", ST_SYNTAX, "a name is needed");
	BAD(window[2], variant, "half", ST_SYNTAX, "variant: unknown");
	BAD(window[2], epoch, 3000000000, ST_RANGE, "epoch");
	BAD(window[2], worth, -0.5, ST_RANGE, "a window");
#undef BAD
	m->item[1] = item;
	m->window[2] = window;
	/* none of it left anything behind */
	struct store_counts counts;
	struct err e = {0};
	must(store_count(s, &counts, &e), &e);
	assert_int_equal(counts.changes, 1);
	int64_t id;
	int edition;
	assert_int_equal(plan_store(s, &good, true, 0, &id, &edition, &e), ST_STORE); /* no change set */
	free(m);
	store_close(s);
}

static void test_hostile(void **state)
{
	(void)state;
	struct store *s = observing_store(5);
	struct made *m = make("'; DROP TABLE plan; --", 2, 1);
	struct plan_row p;
	struct err e = {0};
	m->plan.choices = "block\t\x1b]0;x\x07"
			  "21:00L..\xe2\x80\xae+25m\n\xff\nend";
	m->plan.left_out = "=1+1\ttransit\n";
	m->plan.limits = "a=\xc2\x9b"
			 "1\tb=2";
	m->window[0].figures = "x=\"';\t--\r\ny=1";
	int64_t id = put(s, m, true, 0, 1);
	must(plan_load(s, id, 0, &p, &e), &e);
	assert_string_equal(p.draft, "'; DROP TABLE plan; --");
	assert_string_equal(p.choices, "block\t]0;x21:00L..+25m\n\xef\xbf\xbd\nend");
	assert_string_equal(p.left_out, "=1+1\ttransit\n");
	assert_string_equal(p.limits, "a=1\tb=2");
	assert_string_equal(p.item[0].window[0].figures, "x=\"';\t--\ny=1");
	plan_row_free(&p);
	/* as long as may be, and one more */
	char *text = malloc(PLAN_LEFT_CHARS_MAX + 2);
	assert_non_null(text);
	memset(text, 'x', PLAN_LEFT_CHARS_MAX + 1);
	text[PLAN_LEFT_CHARS_MAX + 1] = '\0';
	m->plan.left_out = text;
	m->plan.night_mjd++;
	refused(s, &m->plan, ST_RANGE, "what is left out: too long");
	text[PLAN_LEFT_CHARS_MAX] = '\0';
	id = put(s, m, true, 0, 1);
	must(plan_load(s, id, 0, &p, &e), &e);
	assert_int_equal(strlen(p.left_out), PLAN_LEFT_CHARS_MAX);
	plan_row_free(&p);
	free(text);
	/* invalid bytes become three each */
	m->plan.left_out = "";
	text = malloc(PLAN_CHOICES_CHARS_MAX + 1);
	assert_non_null(text);
	memset(text, 0x80, PLAN_CHOICES_CHARS_MAX);
	text[PLAN_CHOICES_CHARS_MAX] = '\0';
	m->plan.choices = text;
	(void)put(s, m, true, 1, 2);
	free(text);
	sound(s);
	free(m);
	store_close(s);
}

/* A flipped value of any row of a plan is named and nothing of the plan is used. */
static void test_damage(void **state)
{
	static const struct {
		const char *sql, *load, *check;
	} rows[] = {
	    {"UPDATE plan SET night_mjd = 61152, draft = 'maim'", "row 1 of table plan", "table plan, row 1"},
	    {"DROP TRIGGER plan_edition_no_update; UPDATE plan_edition SET worth = 9",
	     "row 1 of table plan_edition", "table plan_edition, row 1"},
	    {"DROP TRIGGER plan_item_no_update; UPDATE plan_item SET start_utc = '2026-04-23T03:00:01Z' "
	     "WHERE "
	     "id = 2",
	     "row 2 of table plan_item", "table plan_item, row 2"},
	    {"DROP TRIGGER plan_window_no_update; UPDATE plan_window SET epoch = 1 WHERE id = 3",
	     "row 3 of table plan_window", "table plan_window, row 3"},
	    {"DROP TRIGGER plan_window_no_delete; DELETE FROM plan_window WHERE id = 2",
	     "windows of an edition", "windows are missing in item row 1"},
	    {"DROP TRIGGER plan_window_no_delete; DELETE FROM plan_window WHERE id = 4",
	     "windows of an edition", "windows are missing in item row 3"},
	    {"DROP TRIGGER plan_item_no_delete; DROP TRIGGER plan_window_no_delete; DELETE FROM plan_window "
	     "WHERE "
	     "item_id = 3; DELETE FROM plan_item WHERE id = 3",
	     "items of an edition", "items are missing in edition row 1"},
	    {"PRAGMA foreign_keys = OFF; DROP TRIGGER plan_edition_no_delete; DELETE FROM plan_edition",
	     "the edition that holds", "a row points nowhere, in table plan"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct store *s = observing_store(5);
		struct made *m = make("main", 3, 1);
		struct plan_row p;
		struct err e = {0};
		char says[4096];
		int64_t id = put(s, m, true, 0, 1);
		mark(s, id, "tern-1", "started");
		change_behind(s, rows[i].sql);
		assert_int_equal(plan_load(s, id, 0, &p, &e), ST_STORE);
		if (!strstr(e.text, rows[i].load))
			check_fail("row %zu: %s", i, e.text);
		assert_null(p.block);
		assert_int_equal(plan_find(s, 1, 0, NIGHT, NULL, &p, &e), ST_STORE);
		assert_true(check_faults(s, says) > 0);
		if (strstr(rows[i].load, "row ")) /* lists show it: the digest can't pass over it */
			assert_int_equal(store_digest(s, says + 2048, &e), ST_STORE);
		if (!strstr(says, rows[i].check))
			check_fail("row %zu: %s", i, says);
		free(m);
		store_close(s);
	}
	/* in a list the others go on */
	struct store *s = observing_store(5);
	struct made *m = make("main", 3, 1), *b = make("cloudy", 1, 1);
	struct plan_list list;
	struct err e = {0};
	(void)put(s, m, true, 0, 1);
	(void)put(s, b, false, 0, 1);
	change_behind(s, "UPDATE plan SET draft = 'maim' WHERE id = 1");
	must(plans_list(s, 1, NIGHT, NIGHT, &list, &e), &e);
	assert_int_equal(list.n, 1);
	assert_int_equal(list.n_bad, 1);
	assert_string_equal(list.plan[0].draft, "cloudy");
	assert_string_equal(list.bad, "the checksum of plan 1 is wrong: left out; see `wane check`");
	plan_list_free(&list);
	free(m);
	free(b);
	store_close(s);
}

/* A mark that can't be read counts as none, and the plan is there. */
static void test_damaged_mark(void **state)
{
	(void)state;
	struct store *s = observing_store(5);
	struct made *m = make("main", 3, 1);
	struct plan_row p;
	struct err e = {0};
	char says[4096];
	int64_t id = put(s, m, true, 0, 1);
	mark(s, id, "tern-1", "started");
	mark(s, id, "tern-2", "done");
	must(plan_load(s, id, 0, &p, &e), &e);
	assert_int_equal(p.n_bad, 0);
	assert_string_equal(p.bad, "");
	plan_row_free(&p);
	change_behind(s, "UPDATE plan_mark SET state = 'lost' WHERE id = 1");
	must(plan_find(s, 1, 0, NIGHT, NULL, &p, &e), &e);
	assert_int_equal(p.n, 3);
	assert_int_equal(p.n_bad, 1);
	assert_string_equal(p.bad, "the checksum of mark 1 is wrong: it counts as none; see `wane check`");
	for (size_t i = 0; i < p.n; i++)
		assert_string_equal(p.item[i].state, strcmp(p.item[i].key, "tern-2") == 0 ? "done" : "");
	plan_row_free(&p);
	assert_int_equal(check_faults(s, says), 1);
	assert_non_null(strstr(says, "table plan_mark, row 1"));
	assert_int_equal(store_digest(s, says, &e), ST_STORE);
	free(m);
	store_close(s);
}

/* What the tables themselves guard. */
static void test_guards(void **state)
{
	static const char *const refusals[] = {
	    "UPDATE plan_edition SET worth = 2",
	    "DELETE FROM plan_edition",
	    "UPDATE plan_item SET worth = 2",
	    "DELETE FROM plan_item",
	    "UPDATE plan_window SET worth = 2",
	    "DELETE FROM plan_window",
	    "DELETE FROM plan_mark",
	    "DELETE FROM plan",
	    "UPDATE plan SET edition = 7",
	    "UPDATE plan SET night_mjd = 5",
	    "UPDATE plan SET kept = 1", /* both of the night */
	    "UPDATE plan SET draft_key = 'main'",
	    "UPDATE plan_mark SET state = 'planned'",
	    "INSERT OR REPLACE INTO plan_edition SELECT * FROM plan_edition",
	};
	(void)state;
	struct store *s = observing_store(5);
	struct made *a = make("main", 2, 1), *b = make("cloudy", 1, 1);
	int64_t id = put(s, a, true, 0, 1);
	(void)put(s, b, false, 0, 1);
	mark(s, id, "tern-1", "started");
	for (size_t i = 0; i < sizeof refusals / sizeof refusals[0]; i++)
		if ((sqlite3_exec(s->db, refusals[i], NULL, NULL, NULL) & 0xFF) != SQLITE_CONSTRAINT)
			check_fail("%s: let through", refusals[i]);
	sound(s);
	free(a);
	free(b);
	store_close(s);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_round_trip),	 cmocka_unit_test(test_editions),
	    cmocka_unit_test(test_keep),	 cmocka_unit_test(test_marks),
	    cmocka_unit_test(test_undo),	 cmocka_unit_test(test_undo_of_keeping),
	    cmocka_unit_test(test_past),	 cmocka_unit_test(test_refused),
	    cmocka_unit_test(test_hostile),	 cmocka_unit_test(test_damage),
	    cmocka_unit_test(test_damaged_mark), cmocka_unit_test(test_guards),
	};
	return cmocka_run_group_tests_name("plans", tests, NULL, NULL);
}
