/* SPDX-License-Identifier: MIT
 * Telescopes in the store. Expected values by hand from the rules in db/telescopes.h. */
#include "tests/support/check.h"

#include "db/history.h"
#include "db/sites.h"
#include "db/store_parts.h"
#include "db/telescopes.h"
#include "ephem/number_text.h"
#include "tests/support/observing_store.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const struct change change = {"2026-04-22T04:00:00Z", "Bo", "undo"};

static struct telescope telescope_named(const char *name)
{
	struct telescope t = telescope_empty();
	t.site_id = 1;
	t.name = name;
	return t;
}

static void put(struct store *s, const struct telescope *t, bool add)
{
	struct err e = {0};
	change_begin(s, "telescope set");
	must(telescope_put(s, t, add, &e), &e);
	change_commit(s);
}

/* What is put and why not; nothing of it stays. */
static void refused(struct store *s, const struct telescope *t, bool add, enum status want, const char *says)
{
	struct err e = {0};
	struct digest_text before = digest_now(s), after;
	change_begin(s, "telescope set");
	enum status st = telescope_put(s, t, add, &e);
	store_rollback(s);
	if (st != want || !strstr(e.text, says))
		check_fail("status %d: %s (want %d: %s)", (int)st, e.text, (int)want, says);
	after = digest_now(s);
	assert_string_equal(before.text, after.text);
}

static void undo(struct store *s)
{
	struct err e = {0};
	int64_t undone;
	must(history_undo(s, 0, &change, &undone, &e), &e);
}

/* Every field goes in and comes out the same, at both ends of its range. */
static void test_round_trip(void **state)
{
	(void)state;
	for (int end = 0; end < 2; end++) {
		struct store *s = observing_store(0);
		struct telescope t = telescope_named(" Tern One ");
		struct err e = {0};
		char text[64], back[512];
		for (size_t i = 0; i < telescope_field_count; i++) {
			const struct telescope_field *f = &telescope_fields[i];
			number_text(end ? f->max : f->min, text);
			if (strcmp(f->name, "alt_min_deg") == 0)
				snprintf(text, sizeof text, "%s", end ? "89.5" : "0");
			if (strcmp(f->name, "alt_max_deg") == 0)
				snprintf(text, sizeof text, "%s", end ? "90" : "0.5");
			if (f->type == TELESCOPE_NUMBER)
				must(telescope_field_put(&t, i, text, &e), &e);
		}
		t.mount = end ? MOUNT_ALTAZ : MOUNT_GERMAN;
		t.band = end ? "" : "r'";
		t.blocks = "evening-6..evening-9=evening flats";
		t.note = "'; DROP TABLE telescope; --";
		put(s, &t, true);
		struct telescope_list list;
		must(telescopes_load(s, &list, &e), &e);
		assert_int_equal(list.n, 1);
		assert_int_equal(list.telescope[0].site_id, 1);
		assert_string_equal(list.telescope[0].name, "Tern One");
		for (size_t i = 0; i < telescope_field_count; i++) {
			telescope_field_text(&t, i, back, sizeof back);
			char stored[512];
			telescope_field_text(&list.telescope[0], i, stored, sizeof stored);
			assert_string_equal(stored, back);
		}
		telescope_list_free(&list);
		store_close(s);
	}
}

/* The table of fields and the schema say the same ranges. */
static void test_ranges_agree(void **state)
{
	(void)state;
	struct store *s = observing_store(0);
	sqlite3_stmt *stmt;
	assert_int_equal(sqlite3_prepare_v2(s->db,
					    "SELECT sql FROM sqlite_schema WHERE name IN ('telescope', "
					    "'telescope_old') AND type = 'table'",
					    -1, &stmt, NULL),
			 SQLITE_OK);
	int tables = 0;
	for (; sqlite3_step(stmt) == SQLITE_ROW; tables++)
		for (size_t i = 0; i < telescope_field_count; i++) {
			const struct telescope_field *f = &telescope_fields[i];
			char want[160];
			if (f->type == TELESCOPE_NUMBER)
				snprintf(want, sizeof want, ",%s REAL CHECK(%s BETWEEN %.10g AND %.10g),",
					 f->name, f->name, f->min, f->max);
			else if (f->type == TELESCOPE_TEXT)
				snprintf(want, sizeof want, ",%s TEXT NOT NULL CHECK(length(%s) <= %.10g),",
					 f->name, f->name, f->max);
			else
				snprintf(want, sizeof want,
					 ",%s TEXT NOT NULL CHECK(%s IN ('%s', '%s', '%s', '%s')),", f->name,
					 f->name, mount_words[0], mount_words[1], mount_words[2],
					 mount_words[3]);
			if (!strstr((const char *)sqlite3_column_text(stmt, 0), want))
				check_fail("not in the schema: %s", want);
		}
	assert_int_equal(tables, 2);
	(void)sqlite3_finalize(stmt);
	/* the statements name the fields in the order of the table, which is that of the cells */
	for (size_t i = 0; i < telescope_field_count; i++)
		assert_string_equal(sqlite3_column_name(s->stmt[SQL_TELESCOPE_BY_ID], 4 + (int)i),
				    telescope_fields[i].name);
	store_close(s);
}

static void test_field_texts(void **state)
{
	static const struct {
		const char *field, *text;
		enum status want;
		const char *says; /* or the text that it reads back as */
	} rows[] = {
	    {"slew_deg_s", "1.50", ST_OK, "1.5"},
	    {"slew_deg_s", "", ST_OK, ""},
	    {"slew_deg_s", " ", ST_OK, ""},
	    {"slew_deg_s", "0", ST_RANGE,
	     "slew_deg_s: too small (got \"0\", expected a number 0.01..100 deg/s)"},
	    {"slew_deg_s", "1e3", ST_RANGE, "too large (got \"1e3\""},
	    {"slew_deg_s", "nan", ST_SYNTAX, "slew_deg_s: "},
	    {"slew_deg_s", "1,5", ST_SYNTAX, "slew_deg_s: "},
	    {"obstruction", "0.96", ST_RANGE, "0..0.95)"},
	    {"mount", "german", ST_OK, "german"},
	    {"mount", " altaz", ST_OK, "altaz"},
	    {"mount", "", ST_OK, ""},
	    {"mount", "Dobson", ST_SYNTAX, "mount: unknown (got \"Dobson\", expected german, fork or altaz)"},
	    {"band", "Sloan r", ST_OK, "Sloan r"},
	    {"band", "a band with 21 letters", ST_RANGE, "band: too long"},
	    {"band", "r\x1b[31m", ST_SYNTAX, "band: a control"},
	    {"note", "\xe2\x80\xae", ST_SYNTAX, "note: a control"},
	    {"note", "\xff", ST_SYNTAX, "note: a control"},
	    {"note", "=HYPERLINK(1)", ST_OK, "=HYPERLINK(1)"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct telescope t = telescope_empty();
		struct err e = {0};
		char back[64];
		long field = telescope_field_find(rows[i].field);
		assert_true(field >= 0);
		enum status st = telescope_field_put(&t, (size_t)field, rows[i].text, &e);
		telescope_field_text(&t, (size_t)field, back, sizeof back);
		if (st != rows[i].want || !strstr(st == ST_OK ? back : e.text, rows[i].says) ||
		    (st == ST_OK && strcmp(back, rows[i].says) != 0))
			check_fail("%s = %s: %d, %s%s", rows[i].field, rows[i].text, (int)st, back, e.text);
	}
	assert_int_equal(telescope_field_find("name"), -1);
	for (size_t i = 0; i < telescope_field_count; i++) /* sentences and units for the help */
		assert_true(strlen(telescope_fields[i].sentence) > 10 && telescope_fields[i].unit);
}

static void test_refused(void **state)
{
	(void)state;
	struct store *s = observing_store(0);
	struct telescope t = telescope_named("Tern One");
	put(s, &t, true);
	refused(s, &t, true, ST_CONFLICT, "\"Tern One\" already");
	t.name = "tern-one";
	refused(s, &t, true, ST_CONFLICT, "\"Tern One\" already");
	t.name = "Tern\x1b Two";
	refused(s, &t, false, ST_SYNTAX, "U+001B");
	t.name = "";
	refused(s, &t, false, ST_SYNTAX, "a name is needed");
	t.name = "Tern Two";
	t.site_id = 7;
	refused(s, &t, false, ST_ABSENT, "no such site");
	t.site_id = 1;
	t.gain_e_adu = (double)INFINITY;
	refused(s, &t, false, ST_RANGE, "gain_e_adu");
	t.gain_e_adu = 0.001;
	refused(s, &t, false, ST_RANGE, "gain_e_adu");
	t.gain_e_adu = (double)NAN;
	t.alt_min_deg = 50;
	t.alt_max_deg = 50;
	refused(s, &t, false, ST_RANGE, "alt_min_deg");
	t.alt_max_deg = (double)NAN;
	put(s, &t, true);
	/* outside a change set */
	struct err e = {0};
	t.alt_min_deg = 20;
	assert_int_equal(telescope_put(s, &t, false, &e), ST_STORE);
	store_close(s);
}

/* Same name at two sites; order by site, then name; a removed one keeps its id for when it comes back. */
static void test_list(void **state)
{
	(void)state;
	struct store *s = observing_store(0);
	struct telescope_list list;
	struct err e = {0};
	struct telescope t = telescope_named("B");
	t.site_id = 2;
	put(s, &t, true);
	t.site_id = 1;
	put(s, &t, true);
	t.name = "A";
	put(s, &t, true);
	must(telescopes_load(s, &list, &e), &e);
	assert_int_equal(list.n, 3);
	assert_string_equal(list.telescope[0].name, "A");
	assert_int_equal(list.telescope[2].site_id, 2);
	assert_int_equal(telescope_list_find(&list, 2, "b"), 2);
	assert_int_equal(telescope_list_find(&list, 2, "A"), -1);
	int64_t id = list.telescope[1].id;
	telescope_list_free(&list);
	change_begin(s, "telescope remove");
	must(telescope_remove(s, 1, "b", &e), &e);
	assert_int_equal(telescope_remove(s, 1, "b", &e), ST_ABSENT);
	assert_int_equal(telescope_remove(s, 2, "A", &e), ST_ABSENT);
	change_commit(s);
	t.name = "b";
	put(s, &t, true);
	must(telescopes_load(s, &list, &e), &e);
	assert_int_equal(list.telescope[1].id, id);
	assert_string_equal(list.telescope[1].name, "b");
	telescope_list_free(&list);
	store_close(s);
}

static void test_undo_and_words(void **state)
{
	(void)state;
	struct store *s = observing_store(0);
	struct err e = {0};
	int64_t undone;
	char words[200];
	struct telescope t = telescope_named("Tern One");
	struct digest_text none = digest_now(s);
	put(s, &t, true); /* change 2 */
	newest_words(s, words);
	assert_string_equal(words, "telescope Tern One");
	struct digest_text one = digest_now(s);
	t.slew_deg_s = 2;
	put(s, &t, false); /* change 3 */
	put(s, &t, false); /* says the same: no change */
	struct digest_text two = digest_now(s), is;
	assert_int_equal(history_undo(s, 2, &change, &undone, &e), ST_CONFLICT);
	assert_string_equal(e.text, "telescope Tern One was changed again, by change 3: slew_deg_s was "
				    "\"none\" after change 2 and is \"2\" now; nothing was undone");
	undo(s);
	is = digest_now(s);
	assert_string_equal(is.text, one.text);
	undo(s);
	is = digest_now(s);
	assert_string_equal(is.text, none.text);
	must(history_undo(s, 5, &change, &undone, &e), &e); /* undo of an undo */
	must(history_undo(s, 4, &change, &undone, &e), &e);
	is = digest_now(s);
	assert_string_equal(is.text, two.text);
	assert_int_equal(check_faults(s, (char[4096]){0}), 0);
	store_close(s);
}

static void test_damage(void **state)
{
	(void)state;
	struct store *s = observing_store(0);
	struct telescope_list list;
	struct err e = {0};
	char says[4096];
	struct telescope t = telescope_named("Tern One");
	put(s, &t, true);
	t.name = "Tern Two";
	put(s, &t, true);
	change_behind(s, "UPDATE telescope SET slew_deg_s = 3 WHERE id = 1");
	must(telescopes_load(s, &list, &e), &e);
	assert_int_equal(list.n, 1);
	assert_int_equal(list.n_bad, 1);
	assert_string_equal(list.bad,
			    "the checksum of telescope Tern One is wrong: left out; see `wane check`");
	telescope_list_free(&list);
	assert_int_equal(check_faults(s, says), 1);
	assert_non_null(strstr(says, "table telescope, row 1, Tern One: wrong checksum"));
	change_begin(s, "telescope set");
	t.name = "Tern One";
	assert_int_equal(telescope_put(s, &t, false, &e), ST_STORE);
	store_rollback(s);
	assert_int_equal(sqlite3_exec(s->db, "DELETE FROM telescope", NULL, NULL, NULL) & 0xFF,
			 SQLITE_CONSTRAINT);
	store_close(s);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_round_trip),	cmocka_unit_test(test_ranges_agree),
	    cmocka_unit_test(test_field_texts), cmocka_unit_test(test_refused),
	    cmocka_unit_test(test_list),	cmocka_unit_test(test_undo_and_words),
	    cmocka_unit_test(test_damage),
	};
	return cmocka_run_group_tests_name("telescopes", tests, NULL, NULL);
}
