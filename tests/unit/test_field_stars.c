/* SPDX-License-Identifier: MIT
 * Stars of a field in the store. Expected values by hand from the rules in db/field_stars.h. */
#include "tests/support/check.h"

#include "db/field_stars.h"
#include "db/history.h"
#include "db/store_parts.h"
#include "tests/support/observing_store.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const struct change change = {"2026-04-22T04:00:00Z", "Bo", "undo"};

static struct field_star star_at(int64_t target_id, enum field_star_role role, double ra_deg, double mag)
{
	return (struct field_star){.target_id = target_id,
				   .role = role,
				   .name = "",
				   .ra_deg = ra_deg,
				   .dec_deg = 12.25,
				   .sep_arcsec = (double)NAN,
				   .mag = mag,
				   .band = "R",
				   .note = ""};
}

static int64_t add(struct store *s, const struct field_star *f)
{
	struct err e = {0};
	int64_t id = 0;
	change_begin(s, "star add");
	must(field_star_add(s, f, &id, &e), &e);
	change_commit(s);
	return id;
}

static enum status refused(struct store *s, const struct field_star *f, struct err *e)
{
	int64_t id;
	*e = (struct err){0};
	change_begin(s, "star add");
	enum status st = field_star_add(s, f, &id, e);
	store_rollback(s);
	return st;
}

static void test_list(void **state)
{
	(void)state;
	struct store *s = observing_store(2);
	struct field_star_list list;
	struct err e = {0};
	size_t n;
	struct field_star f = star_at(2, STAR_COMPARISON, 187.6, 12.5);
	f.name = "C1";
	assert_int_equal(add(s, &f), 1);
	f = star_at(1, STAR_NEIGHBOUR, (double)NAN, 15.0);
	f.dec_deg = (double)NAN;
	f.sep_arcsec = 3.5;
	f.band = "Ic"; /* Ic is I */
	f.note = "red";
	assert_int_equal(add(s, &f), 2);
	f = star_at(1, STAR_GUIDE, 187.4, 9.0);
	f.band = "";
	assert_int_equal(add(s, &f), 3);
	must(field_stars_load(s, &list, &e), &e);
	assert_int_equal(list.n, 3);
	const struct field_star *of = field_stars_of(&list, 1, &n);
	assert_int_equal(n, 2);
	assert_int_equal(of[0].role, STAR_GUIDE);
	check_close("ra", of[0].ra_deg, 187.4, 0.0);
	assert_true(isnan(of[0].sep_arcsec));
	assert_int_equal(of[1].role, STAR_NEIGHBOUR);
	check_close("sep", of[1].sep_arcsec, 3.5, 0.0);
	assert_true(isnan(of[1].ra_deg));
	assert_string_equal(of[1].band, "I");
	assert_string_equal(of[1].note, "red");
	of = field_stars_of(&list, 2, &n);
	assert_int_equal(n, 1);
	assert_string_equal(of[0].name, "C1");
	check_close("mag", of[0].mag, 12.5, 0.0);
	assert_null(field_stars_of(&list, 3, &n));
	field_star_list_free(&list);
	change_begin(s, "star remove");
	must(field_star_remove(s, 2, &e), &e);
	assert_int_equal(field_star_remove(s, 2, &e), ST_ABSENT);
	assert_int_equal(field_star_remove(s, 9, &e), ST_ABSENT);
	change_commit(s);
	must(field_stars_load(s, &list, &e), &e);
	assert_int_equal(list.n, 2);
	field_star_list_free(&list);
	store_close(s);
}

static void test_refused(void **state)
{
	const double none = (double)NAN;
	const struct {
		struct field_star f;
		enum status want;
		const char *says;
	} rows[] = {
	    {{0, 9, STAR_GUIDE, "", 1, 1, none, 9, "", ""}, ST_ABSENT, "no such target"},
	    {{0, 1, STAR_GUIDE, "", 360, 1, none, 9, "", ""}, ST_RANGE, "no position (got \"360,1\""},
	    {{0, 1, STAR_GUIDE, "", 1, -91, none, 9, "", ""}, ST_RANGE, "no position"},
	    {{0, 1, STAR_GUIDE, "", none, none, 5, 9, "", ""}, ST_RANGE, "no position"},
	    {{0, 1, STAR_COMPARISON, "", 1, 1, 5, 9, "", ""}, ST_RANGE, "no position"},
	    {{0, 1, STAR_NEIGHBOUR, "", none, none, none, 9, "", ""}, ST_RANGE, "no position"},
	    {{0, 1, STAR_NEIGHBOUR, "", none, none, 601, 9, "", ""}, ST_RANGE, "distance is out of range"},
	    {{0, 1, STAR_NEIGHBOUR, "", 1, 1, 5, 9, "", ""}, ST_RANGE, "no position with it"},
	    {{0, 1, STAR_GUIDE, "", 1, 1, none, 41, "", ""}, ST_RANGE, "mag: out of range"},
	    {{0, 1, STAR_GUIDE, "", 1, 1, none, none, "", ""}, ST_RANGE, "mag: out of range"},
	    {{0, 1, STAR_GUIDE, "", 1, 1, none, 9, "red", ""}, ST_SYNTAX, "band: unknown"},
	    {{0, 1, STAR_GUIDE, "a\nb", 1, 1, none, 9, "", ""}, ST_SYNTAX, "name: a control"},
	    {{0, 1, STAR_GUIDE, "", 1, 1, none, 9, "", "\xe2\x80\xae"}, ST_SYNTAX, "note: "},
	};
	(void)state;
	struct store *s = observing_store(1);
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct err e;
		enum status st = refused(s, &rows[i].f, &e);
		if (st != rows[i].want || !strstr(e.text, rows[i].says))
			check_fail("row %zu: %d: %s", i, (int)st, e.text);
	}
	store_close(s);
}

/* Five comparison stars, one guide, ten neighbours; each of them once. */
static void test_room(void **state)
{
	static const int most[STAR_ROLE_COUNT] = {5, 1, 10};
	(void)state;
	struct store *s = observing_store(2);
	struct err e;
	for (int role = 0; role < STAR_ROLE_COUNT; role++) {
		for (int i = 0; i < most[role]; i++) {
			const struct field_star f =
			    star_at(1, (enum field_star_role)role, 187.0 + 0.01 * i, 12.0);
			(void)add(s, &f);
		}
		struct field_star f = star_at(1, (enum field_star_role)role, 187.0, 13.0);
		assert_int_equal(refused(s, &f, &e), ST_CONFLICT);
		assert_non_null(strstr(e.text, "is there already"));
		f.ra_deg = 188.0;
		assert_int_equal(refused(s, &f, &e), ST_CONFLICT);
		assert_non_null(strstr(e.text, "expected at most"));
		f.target_id = 2;
		(void)add(s, &f);
	}
	/* the same star in another band says something else */
	struct field_star f = star_at(2, STAR_COMPARISON, 188.0, 12.0);
	f.band = "V";
	(void)add(s, &f);
	store_close(s);
}

static void test_undo(void **state)
{
	(void)state;
	struct store *s = observing_store(1);
	struct err e = {0};
	int64_t undone;
	char words[200];
	struct digest_text none = digest_now(s), is;
	struct field_star f = star_at(1, STAR_GUIDE, 187.4, 9.0);
	(void)add(s, &f); /* change 2 */
	newest_words(s, words);
	assert_string_equal(words, "guide star of Tern 1 b");
	struct digest_text one = digest_now(s);
	change_begin(s, "star remove");
	must(field_star_remove(s, 1, &e), &e);
	change_commit(s); /* change 3 */
	is = digest_now(s);
	assert_string_equal(is.text, none.text);
	f.ra_deg = 187.3;
	(void)add(s, &f); /* change 4: another guide star */
	assert_int_equal(history_undo(s, 3, &change, &undone, &e), ST_CONFLICT);
	assert_string_equal(e.text, "guide of Tern 1 b can't come back: others have taken its place by now; "
				    "nothing was undone");
	must(history_undo(s, 4, &change, &undone, &e), &e);
	must(history_undo(s, 3, &change, &undone, &e), &e);
	is = digest_now(s);
	assert_string_equal(is.text, one.text);
	must(history_undo(s, 2, &change, &undone, &e), &e);
	is = digest_now(s);
	assert_string_equal(is.text, none.text);
	f = star_at(1, STAR_NEIGHBOUR, 187.5, 14.0);
	(void)add(s, &f);
	newest_words(s, words);
	assert_string_equal(words, "neighbour of Tern 1 b");
	assert_int_equal(check_faults(s, (char[4096]){0}), 0);
	store_close(s);
}

static void test_damage(void **state)
{
	(void)state;
	struct store *s = observing_store(1);
	struct field_star_list list;
	struct err e = {0};
	char says[4096];
	const struct field_star f = star_at(1, STAR_GUIDE, 187.4, 9.0);
	(void)add(s, &f);
	change_behind(s, "UPDATE field_star SET mag = 3");
	must(field_stars_load(s, &list, &e), &e);
	assert_int_equal(list.n, 0);
	assert_string_equal(list.bad, "the checksum of star 1 is wrong: left out; see `wane check`");
	field_star_list_free(&list);
	assert_int_equal(check_faults(s, says), 1);
	assert_non_null(strstr(says, "table field_star, row 1"));
	store_close(s);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_list), cmocka_unit_test(test_refused), cmocka_unit_test(test_room),
	    cmocka_unit_test(test_undo), cmocka_unit_test(test_damage),
	};
	return cmocka_run_group_tests_name("field_stars", tests, NULL, NULL);
}
