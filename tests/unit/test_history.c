/* SPDX-License-Identifier: MIT */
#include "tests/support/check.h"

#include "db/history.h"
#include "db/import.h"
#include "db/midtimes.h"
#include "db/sites.h"
#include "db/store_parts.h"
#include "db/targets.h"

#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const struct change change = {"2026-04-22T03:00:00Z", "ann", "edit"};
static const struct change undo = {"2026-04-22T04:00:00Z", "ann", "undo"};

static void must(enum status st, const struct err *e)
{
	if (st != ST_OK)
		check_fail("status %d: %s", (int)st, e->text);
}

/* --- what a person can do, one change set each --- */

static void import(struct store *s, const char *table, bool adopt)
{
	struct err e = {0};
	struct import_report report;
	const struct import_options o = {.change = {change.utc, change.who, "import"}, .adopt = adopt};
	must(import_targets(s, table, strlen(table), &o, &report, NULL, NULL, &e), &e);
}

static void begin(struct store *s, const char *verb)
{
	struct err e = {0};
	const struct change c = {change.utc, change.who, verb};
	must(store_begin(s, &c, &e), &e);
}

static void commit(struct store *s)
{
	struct err e = {0};
	must(store_commit(s, &e), &e);
}

static void set(struct store *s, const char *name, int field, const char *text)
{
	struct err e = {0};
	begin(s, "target set");
	must(target_set(s, name, &field, &text, 1, &e), &e);
	commit(s);
}

static void put_site(struct store *s, double height_m, bool add)
{
	struct err e = {0};
	const struct site site = {.name = "Tern Hill",
				  .lat_deg = 38.62,
				  .lon_east_deg = -109.36,
				  .height_m = height_m,
				  .zone = "America/Denver"};
	begin(s, add ? "site add" : "site set");
	must(site_put(s, &site, add, &e), &e);
	commit(s);
}

static void add_time(struct store *s, int64_t target, long epoch, double frac)
{
	struct err e = {0};
	bool added;
	const struct midtime_row row = {.epoch = epoch,
					.mid_text = "as read",
					.mid = {2459000.0 + (double)(3 * epoch), frac},
					.time_scale = "BJD_TDB",
					.err_d = 0.001,
					.source = "own",
					.used = true};
	must(midtime_add(s, target, &row, &added, &e), &e);
}

static void do_import_new(struct store *s)
{
	import(s,
	       "name,ra_deg,dec_deg,t0_jd,time_scale,period_d\nTern 8 b,1,2,2459000.5,BJD_TDB,3\nTern 9 "
	       "b,1,2,,,\n",
	       false);
}

static void do_import_twice(struct store *s) /* one row is written more than once in the same change set */
{
	import(s,
	       "name,ra_deg,dec_deg,t0_jd,time_scale,period_d,mag\nTern 8 b,1,2,2459000.5,BJD_TDB,3,9\n"
	       "tern-8 B,1,2,2459000.5,BJD_TDB,3,10\nTern 1 b,10,20,2459001.5,BJD_TDB,3.1,9\n"
	       "Tern 1 b,10,20,2459001.6,BJD_TDB,3.1,9.5\n",
	       true);
}

static void do_import_beside(struct store *s)
{
	import(s, "name,ra_deg,dec_deg,t0_jd,time_scale,period_d\nTern 1 b,10,20,2459001.5,BJD_TDB,3.1\n",
	       false);
}

static void do_import_adopt(struct store *s)
{
	import(s,
	       "name,ra_deg,dec_deg,t0_jd,time_scale,period_d,note\nTern 1 b,11,20,2459001.5,BJD_TDB,3.1,x\n",
	       true);
}

static void do_set(struct store *s)
{
	set(s, "Tern 1 b", field_find("mag"), "11.5");
}

static void do_set_ephemeris(struct store *s)
{
	set(s, "Tern 1 b", FIELD_AT_PERIOD, "3.25");
}

static void do_rename(struct store *s)
{
	set(s, "Tern 1 b", FIELD_AT_NAME, "Tern 77 b");
}

static void do_remove(struct store *s)
{
	struct err e = {0};
	begin(s, "target remove");
	must(target_remove(s, "Tern 1 b", &e), &e);
	commit(s);
}

static void do_alias(struct store *s)
{
	struct err e = {0};
	begin(s, "target alias");
	must(target_alias_add(s, "Tern 1 b", "T one", &e), &e);
	commit(s);
}

static void do_site_add(struct store *s)
{
	struct err e = {0};
	const struct site site = {
	    .name = "Low Field", .lat_deg = 1, .lon_east_deg = 2, .height_m = 3, .zone = ""};
	begin(s, "site add");
	must(site_put(s, &site, true, &e), &e);
	commit(s);
}

static void do_site_set(struct store *s)
{
	put_site(s, 2200, false);
}

static void do_site_remove(struct store *s)
{
	struct err e = {0};
	begin(s, "site remove");
	must(site_remove(s, "Tern Hill", &e), &e);
	commit(s);
}

static void do_adopt(struct store *s)
{
	struct err e = {0};
	begin(s, "ephemeris adopt");
	must(ephemeris_adopt(s, 2, 1, &e), &e);
	commit(s);
}

static void do_time_add(struct store *s)
{
	begin(s, "midtime add");
	add_time(s, 1, 9, 0.5);
	commit(s);
}

static void do_time_import(struct store *s)
{
	begin(s, "midtime import");
	for (long epoch = 2; epoch < 30; epoch++)
		add_time(s, 2, epoch, 0.25);
	commit(s);
}

static void use(struct store *s, long epoch, bool used)
{
	struct err e = {0};
	long n;
	begin(s, used ? "midtime include" : "midtime exclude");
	must(midtime_use(s, 1, epoch, KIND_TRANSIT, used, &n, &e), &e);
	assert_true(n > 0);
	commit(s);
}

static void do_time_exclude(struct store *s)
{
	use(s, 1, false);
}

static void do_time_include(struct store *s)
{
	use(s, 0, true);
}

static void do_time_remove(struct store *s)
{
	struct err e = {0};
	long n;
	begin(s, "midtime remove");
	must(midtime_remove(s, 1, 1, KIND_TRANSIT, &n, &e), &e);
	commit(s);
}

static void do_much(struct store *s) /* one set of many kinds */
{
	struct err e = {0};
	const int field = field_find("note");
	const char *const text = "much";
	long n;
	begin(s, "edit");
	must(target_set(s, "Tern 2 b", &field, &text, 1, &e), &e);
	must(target_alias_add(s, "Tern 2 b", "T two", &e), &e);
	must(ephemeris_adopt(s, 2, 1, &e), &e);
	add_time(s, 2, 5, 0.5);
	must(midtime_use(s, 2, 5, KIND_TRANSIT, false, &n, &e), &e);
	must(site_remove(s, "Tern Hill", &e), &e);
	commit(s);
}

static const struct kind {
	const char *name;
	void (*act)(struct store *s);
	const char *what; /* as the list says it */
	bool shows_nothing;
} kinds[] = {
    {"import of new targets", do_import_new, "2 targets, ephemeris version 1 of Tern 8 b", false},
    {"import that names targets twice", do_import_twice, "2 targets, 3 ephemerides", false},
    {"import of a version beside", do_import_beside, "ephemeris version 2 of Tern 1 b", true},
    {"import with adoption", do_import_adopt, "target Tern 1 b, ephemeris version 2", false},
    {"target set", do_set, "target Tern 1 b", false},
    {"target set of its ephemeris", do_set_ephemeris, "target Tern 1 b, ephemeris version 2", false},
    {"another name", do_rename, "target Tern 77 b", false},
    {"target remove", do_remove, "target Tern 1 b", false},
    {"alias", do_alias, "other name T one", false},
    {"site add", do_site_add, "site Low Field", false},
    {"site set", do_site_set, "site Tern Hill", false},
    {"site remove", do_site_remove, "site Tern Hill", false},
    {"adopt", do_adopt, "target Tern 2 b", false},
    {"midtime add", do_time_add, "mid-time of Tern 1 b, epoch 9", false},
    {"midtime import", do_time_import, "28 mid-times of Tern 2 b", false},
    {"midtime exclude", do_time_exclude, "mid-time of Tern 1 b, epoch 1", false},
    {"midtime include", do_time_include, "mid-time of Tern 1 b, epoch 0", false},
    {"midtime remove", do_time_remove, "mid-time of Tern 1 b, epoch 1", false},
    {"many kinds at once", do_much,
     "target Tern 2 b, other name T two, site Tern Hill, mid-time of Tern 2 b, epoch 5", false},
};
enum { KINDS = sizeof kinds / sizeof kinds[0], BASE_CHANGES = 5 };

/* Two targets (the second with two versions), a site, three mid-times of the first, one of them excluded. */
static struct store *make_base(void)
{
	struct store *s;
	struct err e = {0};
	must(store_open(NULL, STORE_MEMORY, &s, &e), &e);
	import(s,
	       "name,ra_deg,dec_deg,t0_jd,time_scale,period_d,mag\nTern 1 b,10,20,2459000.5,BJD_TDB,3,11\n"
	       "Tern 2 b,11,20,2459000.25,BJD_TDB,3,12\n",
	       false);
	set(s, "Tern 2 b", FIELD_AT_PERIOD, "3.0001");
	put_site(s, 2100, true);
	begin(s, "midtime import");
	for (long epoch = 0; epoch < 3; epoch++)
		add_time(s, 1, epoch, 0.5);
	commit(s);
	use(s, 0, false);
	return s;
}

/* --- helpers --- */

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

static void same(const char *what, struct store *s, const struct digest *want)
{
	struct digest is = digest_of(s);
	if (strcmp(is.text, want->text) != 0)
		check_fail("%s: another digest", what);
}

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

static int64_t take_back(struct store *s, int64_t id)
{
	struct err e = {0};
	int64_t undone = 0;
	must(history_undo(s, id, &undo, &undone, &e), &e);
	return undone;
}

static long changes_in(struct store *s)
{
	struct store_counts counts;
	struct err e = {0};
	must(store_count(s, &counts, &e), &e);
	return counts.changes;
}

/* --- tests --- */

/* Each kind undone, done again, and undone once more. */
static void test_each_kind(void **state)
{
	(void)state;
	for (size_t i = 0; i < KINDS; i++) {
		struct store *s = make_base();
		struct digest before = digest_of(s);
		kinds[i].act(s);
		struct digest after = digest_of(s);
		if ((strcmp(before.text, after.text) == 0) != kinds[i].shows_nothing)
			check_fail("%s: the digest doesn't tell", kinds[i].name);
		assert_int_equal(take_back(s, 0), BASE_CHANGES + 1);
		same(kinds[i].name, s, &before);
		assert_int_equal(take_back(s, BASE_CHANGES + 2), BASE_CHANGES + 2); /* done again */
		same(kinds[i].name, s, &after);
		assert_int_equal(take_back(s, 0), BASE_CHANGES + 1);
		same(kinds[i].name, s, &before);
		kinds[i].act(s); /* what was undone can be done anew */
		same(kinds[i].name, s, &after);
		/* but a version that is stored is stored */
		assert_int_equal(take_back(s, 0), kinds[i].shows_nothing ? BASE_CHANGES : BASE_CHANGES + 5);
		if (!kinds[i].shows_nothing)
			same(kinds[i].name, s, &before);
		sound(s);
		store_close(s);
	}
}

/* All of them one after the other, undone back to the empty store. */
static void test_all_the_way(void **state)
{
	static const char *const skipped[] = {"another name", "target remove", "site remove", "adopt"};
	(void)state;
	struct store *s;
	struct err e = {0};
	struct digest stack[BASE_CHANGES + KINDS + 1];
	int64_t undone;
	size_t n = 0;
	must(store_open(NULL, STORE_MEMORY, &s, &e), &e);
	struct digest empty = digest_of(s);
	store_close(s);
	s = make_base();
	for (size_t i = 0; i < KINDS; i++) {
		bool skip = false;
		for (size_t k = 0; k < 4; k++)
			skip = skip || strcmp(skipped[k], kinds[i].name) == 0;
		if (skip)
			continue;
		long had = changes_in(s);
		stack[n] = digest_of(s);
		kinds[i].act(s);
		n += changes_in(s) > had; /* a version that is stored already is not stored again */
	}
	assert_true(n > KINDS - 6);
	while (n > 0) {
		(void)take_back(s, 0);
		same("on the way back", s, &stack[--n]);
	}
	for (int i = 0; i < BASE_CHANGES; i++)
		(void)take_back(s, 0);
	same("at the beginning", s, &empty);
	assert_int_equal(history_undo(s, 0, &undo, &undone, &e), ST_ABSENT);
	assert_string_equal(e.text, "there is nothing to undo");
	sound(s);
	store_close(s);
}

static void check_conflict(struct store *s, int64_t id, const char *const words[])
{
	struct err e = {0};
	int64_t undone = -5;
	struct digest before = digest_of(s);
	long changes = changes_in(s);
	enum status st = history_undo(s, id, &undo, &undone, &e);
	if (st != ST_CONFLICT)
		check_fail("status %d: %s", (int)st, st == ST_OK ? "undone" : e.text);
	for (size_t i = 0; words[i]; i++)
		if (!strstr(e.text, words[i]))
			check_fail("\"%s\" lacks \"%s\"", e.text, words[i]);
	assert_int_equal(undone, -5);
	assert_int_equal(changes_in(s), changes);
	same("after a refusal", s, &before);
	sound(s);
}

static void test_conflicts(void **state)
{
	(void)state;
	/* a value: the row and both values are named */
	struct store *s = make_base();
	do_set(s);
	set(s, "Tern 1 b", field_find("mag"), "12.25");
	check_conflict(s, 6,
		       (const char *const[]){"target Tern 1 b", "mag", "11.5", "12.25", "change 7", NULL});
	/* set back by hand: the revision is another all the same */
	set(s, "Tern 1 b", field_find("mag"), "11.5");
	check_conflict(s, 6, (const char *const[]){"target Tern 1 b", "set back", "change 8", NULL});
	/* taken back in turn they all go */
	assert_int_equal(take_back(s, 0), 8);
	assert_int_equal(take_back(s, 0), 7);
	assert_int_equal(take_back(s, 0), 6);
	store_close(s);

	/* the pointer to the ephemeris, in versions */
	s = make_base();
	do_set_ephemeris(s);
	begin(s, "ephemeris adopt");
	struct err e = {0};
	must(ephemeris_adopt(s, 1, 1, &e), &e);
	commit(s);
	check_conflict(s, 6, (const char *const[]){"ephemeris", "version 2", "version 1", NULL});
	store_close(s);

	/* one row of many is enough, and then none is undone */
	s = make_base();
	do_much(s);
	put_site(s, 2300, false); /* removed, set again: back in the list */
	check_conflict(s, 6, (const char *const[]){"site Tern Hill", NULL});
	store_close(s);

	/* a mark */
	s = make_base();
	do_time_exclude(s);
	do_time_remove(s);
	check_conflict(s, 6,
		       (const char *const[]){"mid-time", "Tern 1 b", "epoch 1", "listed", "removed", NULL});
	store_close(s);
}

/* A name that was given to another meanwhile. */
static void test_names_taken(void **state)
{
	(void)state;
	struct store *s = make_base();
	do_rename(s);
	import(s, "name,ra_deg,dec_deg\nTern 1 b,50,60\n", false);
	check_conflict(s, 6, (const char *const[]){"target Tern 1 b", "its name belongs to another", NULL});
	store_close(s);

	s = make_base();
	do_alias(s);			      /* 6 */
	assert_int_equal(take_back(s, 0), 6); /* 7 */
	import(s, "name,ra_deg,dec_deg\nT-One,50,60\n", false);
	check_conflict(s, 7, (const char *const[]){"other name T one", "its name belongs to another", NULL});
	assert_int_equal(take_back(s, 8), 8); /* with that target gone the alias may come back */
	assert_int_equal(take_back(s, 7), 7);
	struct target_list list;
	struct err e = {0};
	must(targets_load(s, &list, &e), &e);
	assert_int_equal(list.t[target_list_find(&list, "T one")].id, 1);
	target_list_free(&list);
	set(s, "T one", field_find("mag"), "9"); /* and is found by who writes */
	check_conflict(s, 9, (const char *const[]){"its name belongs to another", NULL});
	sound(s);
	store_close(s);
}

/* Two targets that exchange their names in one change set, and one that lets another have its name. */
static void test_names_exchanged(void **state)
{
	static const char *const steps[][2] = {
	    {"Tern 1 b", "Tern 9 b"}, {"Tern 2 b", "Tern 1 b"}, {"Tern 9 b", "Tern 2 b"}};
	const int field = FIELD_AT_NAME;
	(void)state;
	for (size_t n = 2; n <= 3; n++) {
		struct store *s = make_base();
		struct err e = {0};
		struct digest before = digest_of(s);
		begin(s, "target set");
		for (size_t i = 0; i < n; i++)
			must(target_set(s, steps[i][0], &field, &steps[i][1], 1, &e), &e);
		commit(s);
		struct digest after = digest_of(s);
		assert_int_equal(take_back(s, 0), 6);
		same("names", s, &before);
		assert_int_equal(take_back(s, 7), 7);
		same("names exchanged again", s, &after);
		sound(s);
		store_close(s);
	}
}

static void test_refusals(void **state)
{
	(void)state;
	struct store *s = make_base();
	struct err e = {0};
	int64_t undone;
	assert_int_equal(history_undo(s, 99, &undo, &undone, &e), ST_ABSENT);
	assert_string_equal(e.text, "there is no change 99");
	do_set(s);
	(void)take_back(s, 6);
	assert_int_equal(history_undo(s, 6, &undo, &undone, &e), ST_ABSENT);
	assert_string_equal(e.text, "change 6 was undone already");
	begin(s, "edit");
	assert_int_equal(history_undo(s, 0, &undo, &undone, &e),
			 ST_STORE); /* it is a change set of its own */
	assert_int_equal(ephemeris_adopt(s, 1, 2, &e), ST_ABSENT);
	assert_string_equal(e.text, "Tern 1 b has no ephemeris version 2");
	assert_int_equal(ephemeris_adopt(s, 77, 1, &e), ST_ABSENT);
	must(ephemeris_adopt(s, 1, 1, &e), &e); /* it is current */
	commit(s);
	assert_int_equal(changes_in(s), 7);
	store_close(s);
}

/* An older change of another row is undone while newer ones stay. */
static void test_out_of_order(void **state)
{
	(void)state;
	struct store *s = make_base();
	do_site_set(s); /* 6 */
	struct digest site_only = digest_of(s);
	(void)take_back(s, 6); /* 7 */
	do_set(s);	       /* 8 */
	do_alias(s);	       /* 9 */
	(void)take_back(s, 7); /* 10: the site again */
	(void)take_back(s, 8); /* 11 */
	(void)take_back(s, 9); /* 12 */
	same("out of order", s, &site_only);
	assert_int_equal(take_back(s, 0), 6);
	sound(s);
	store_close(s);
}

static void test_list(void **state)
{
	(void)state;
	for (size_t i = 0; i < KINDS; i++) {
		struct store *s = make_base();
		struct err e = {0};
		struct change_row *rows;
		size_t n;
		kinds[i].act(s);
		(void)take_back(s, 0);
		must(history_list(s, 0, &rows, &n, &e), &e);
		assert_int_equal(n, BASE_CHANGES + 2);
		assert_int_equal(rows[0].id, BASE_CHANGES + 2);
		assert_string_equal(rows[0].verb, "undo");
		assert_string_equal(rows[0].utc, undo.utc);
		assert_false(rows[0].undone);
		assert_true(rows[1].undone);
		assert_string_equal(rows[1].who, "ann");
		assert_false(rows[2].undone);
		/* a name is said as it is now: that of a renamed target is the old one again */
		if (i != 6 && strcmp(rows[1].what, kinds[i].what) != 0)
			check_fail("%s: \"%s\"", kinds[i].name, rows[1].what);
		if (strncmp(rows[0].what, "change 6: ", 10) != 0)
			check_fail("%s: \"%s\"", kinds[i].name, rows[0].what);
		assert_string_equal(rows[n - 1].what, "2 targets, 2 ephemerides");
		free(rows);
		store_close(s);
	}
}

static void test_list_of_target(void **state)
{
	static const int64_t want[] = {9, 8, 7, 6, 2, 1};
	(void)state;
	struct store *s = make_base();
	struct err e = {0};
	struct change_row *rows;
	size_t n;
	do_time_import(s);     /* 6 */
	do_adopt(s);	       /* 7 */
	(void)take_back(s, 7); /* 8 */
	do_much(s);	       /* 9 */
	do_set(s);	       /* 10 */
	must(history_list(s, 2, &rows, &n, &e), &e);
	assert_int_equal(n, sizeof want / sizeof want[0]);
	for (size_t i = 0; i < n; i++)
		assert_int_equal(rows[i].id, want[i]);
	free(rows);
	must(history_list(s, 99, &rows, &n, &e), &e);
	assert_int_equal(n, 0);
	free(rows);
	store_close(s);
	must(store_open(NULL, STORE_MEMORY, &s, &e), &e);
	must(history_list(s, 0, &rows, &n, &e), &e);
	assert_int_equal(n, 0);
	free(rows);
	store_close(s);
}

/* A value that hangs on the period is doubted with one version and not with the other. */
static void test_adopt_doubts(void **state)
{
	(void)state;
	struct store *s = make_base();
	struct err e = {0};
	struct target_list list;
	set(s, "Tern 1 b", field_find("duration_h"), "50");
	set(s, "Tern 1 b", FIELD_AT_PERIOD, "1.5");
	for (int version = 2; version >= 1; version--) {
		begin(s, "ephemeris adopt");
		must(ephemeris_adopt(s, 1, version, &e), &e);
		commit(s);
		must(targets_load(s, &list, &e), &e);
		const struct target *t = &list.t[target_list_find(&list, "Tern 1 b")];
		check_close("period", t->period_d, version == 2 ? 1.5 : 3.0, 0.0);
		assert_int_equal(list.doubts[target_list_find(&list, "Tern 1 b")] >> FIELD_AT_DURATION & 1,
				 version == 2);
		target_list_free(&list);
	}
	store_close(s);
}

/* The hash of nothing is its offset basis (draft-eastlake-fnv, 128 bit FNV-1a). */
static void test_digest(void **state)
{
	(void)state;
	struct store *s;
	struct err e = {0};
	must(store_open(NULL, STORE_MEMORY, &s, &e), &e);
	assert_string_equal(digest_of(s).text, "6c62272e07bb014262b821756295c58d");
	store_close(s);
	/* the same edits make the same digest in another store, whenever they are made */
	struct store *a = make_base(), *b = make_base();
	struct digest x = digest_of(a);
	same("another store", b, &x);
	store_close(a);
	store_close(b);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_each_kind),	    cmocka_unit_test(test_all_the_way),
	    cmocka_unit_test(test_conflicts),	    cmocka_unit_test(test_names_taken),
	    cmocka_unit_test(test_names_exchanged), cmocka_unit_test(test_refusals),
	    cmocka_unit_test(test_out_of_order),    cmocka_unit_test(test_list),
	    cmocka_unit_test(test_list_of_target),  cmocka_unit_test(test_adopt_doubts),
	    cmocka_unit_test(test_digest),
	};
	return cmocka_run_group_tests_name("history", tests, NULL, NULL);
}
