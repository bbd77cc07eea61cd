/* SPDX-License-Identifier: MIT
 * Allotted time and stored settings. Expected values by hand from the rules in their headers. MJD 61152 is
 * 2026-04-22 (Julian date 2461152.5; by hand from MJD 51544 = 2000-01-01 and 9608 days). */
#include "tests/support/check.h"

#include "db/allotments.h"
#include "db/history.h"
#include "db/store_parts.h"
#include "db/stored_settings.h"
#include "db/telescopes.h"
#include "tests/support/observing_store.h"

#include <stdio.h>
#include <string.h>

static const struct change change = {"2026-04-22T04:00:00Z", "Bo", "undo"};
static const struct allotment first_half = {
    .site_id = 1, .first_mjd = 61152, .last_mjd = 61154, .span = "first-half", .note = "with Ada"};

static void add_telescope(struct store *s, int64_t site_id, const char *name)
{
	struct err e = {0};
	struct telescope t = telescope_empty();
	t.site_id = site_id;
	t.name = name;
	change_begin(s, "telescope add");
	must(telescope_put(s, &t, true, &e), &e);
	change_commit(s);
}

static int64_t add(struct store *s, const struct allotment *a)
{
	struct err e = {0};
	int64_t id = 0;
	change_begin(s, "allot");
	must(allotment_add(s, a, &id, &e), &e);
	change_commit(s);
	return id;
}

static void test_list(void **state)
{
	(void)state;
	struct store *s = observing_store(0);
	struct allotment_list list;
	struct err e = {0};
	add_telescope(s, 1, "Tern One");
	struct allotment a = first_half;
	assert_int_equal(add(s, &a), 1);
	a.telescope_id = 1;
	assert_int_equal(add(s, &a), 2); /* of one telescope: not the same */
	a.first_mjd = a.last_mjd = 61150;
	a.span = "21:00L..01:30L";
	a.note = "";
	assert_int_equal(add(s, &a), 3);
	must(allotments_load(s, &list, &e), &e);
	assert_int_equal(list.n, 3);
	assert_int_equal(list.allotment[0].id, 3);
	assert_int_equal(list.allotment[0].telescope_id, 1);
	assert_string_equal(list.allotment[0].span, "21:00L..01:30L");
	assert_int_equal(list.allotment[1].telescope_id, 0);
	assert_int_equal(list.allotment[1].last_mjd, 61154);
	assert_string_equal(list.allotment[1].note, "with Ada");
	allotment_list_free(&list);
	change_begin(s, "allot");
	must(allotment_remove(s, 2, &e), &e);
	assert_int_equal(allotment_remove(s, 2, &e), ST_ABSENT);
	assert_int_equal(allotment_remove(s, 9, &e), ST_ABSENT);
	change_commit(s);
	must(allotments_load(s, &list, &e), &e);
	assert_int_equal(list.n, 2);
	allotment_list_free(&list);
	store_close(s);
}

static void test_refused(void **state)
{
	static const char long_span[] =
	    "0123456789012345678901234567890123456789012345678901234567890123456789"
	    "012345678901234567890123456789012345678901234567890";
	static const struct {
		struct allotment a;
		enum status want;
		const char *says;
	} rows[] = {
	    {{0, 1, 0, 61152, 61154, "first-half", ""}, ST_CONFLICT, "as allotment 1"},
	    {{0, 3, 0, 61152, 61154, "whole", ""}, ST_ABSENT, "no such site"},
	    {{0, 1, 5, 61152, 61154, "whole", ""}, ST_ABSENT, "no such telescope"},
	    {{0, 2, 1, 61152, 61154, "whole", ""}, ST_ABSENT, "no such telescope"}, /* that of site 1 */
	    {{0, 1, 0, 61154, 61152, "whole", ""}, ST_RANGE, "before its first"},
	    {{0, 1, 0, 0, 61152, "whole", ""}, ST_RANGE, "1900 to 2100"},
	    {{0, 1, 0, 61152, 99999, "whole", ""}, ST_RANGE, "1900 to 2100"},
	    {{0, 1, 0, 61152, 61152, "", ""}, ST_SYNTAX, "no span"},
	    {{0, 1, 0, 61152, 61152, long_span, ""}, ST_RANGE, "span: too long"},
	    {{0, 1, 0, 61152, 61152, "a\nb", ""}, ST_SYNTAX, "span: a control"},
	    {{0, 1, 0, 61152, 61152, "whole",
	      "\xc2\x9b"
	      "31m"},
	     ST_SYNTAX,
	     "note: a control"},
	};
	(void)state;
	struct store *s = observing_store(0);
	add_telescope(s, 1, "Tern One");
	(void)add(s, &first_half);
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct err e = {0};
		int64_t id;
		change_begin(s, "allot");
		enum status st = allotment_add(s, &rows[i].a, &id, &e);
		store_rollback(s);
		if (st != rows[i].want || !strstr(e.text, rows[i].says))
			check_fail("row %zu: %d: %s", i, (int)st, e.text);
	}
	store_close(s);
}

static void test_undo(void **state)
{
	(void)state;
	struct store *s = observing_store(0);
	struct err e = {0};
	int64_t undone;
	char words[200];
	struct digest_text none = digest_now(s), is;
	(void)add(s, &first_half); /* change 2 */
	newest_words(s, words);
	assert_string_equal(words, "allotment from 2026-04-22, first-half");
	struct digest_text one = digest_now(s);
	change_begin(s, "allot");
	must(allotment_remove(s, 1, &e), &e);
	change_commit(s); /* change 3 */
	is = digest_now(s);
	assert_string_equal(is.text, none.text);
	(void)add(s, &first_half); /* change 4: the same time, as another row */
	assert_int_equal(history_undo(s, 3, &change, &undone, &e), ST_CONFLICT);
	assert_string_equal(e.text,
			    "allotment of 2026-04-22..2026-04-24, first-half can't come back: its time "
			    "belongs to another by now; nothing was undone");
	must(history_undo(s, 4, &change, &undone, &e), &e);
	must(history_undo(s, 3, &change, &undone, &e), &e);
	is = digest_now(s);
	assert_string_equal(is.text, one.text);
	must(history_undo(s, 2, &change, &undone, &e), &e);
	is = digest_now(s);
	assert_string_equal(is.text, none.text);
	assert_int_equal(check_faults(s, (char[4096]){0}), 0);
	store_close(s);
}

static void test_damage(void **state)
{
	(void)state;
	struct store *s = observing_store(0);
	struct allotment_list list;
	struct err e = {0};
	char says[4096];
	(void)add(s, &first_half);
	change_behind(s, "UPDATE allotment SET span = 'whole'");
	must(allotments_load(s, &list, &e), &e);
	assert_int_equal(list.n, 0);
	assert_int_equal(list.n_bad, 1);
	assert_string_equal(list.bad, "the checksum of allotment 1 is wrong: left out; see `wane check`");
	allotment_list_free(&list);
	assert_int_equal(check_faults(s, says), 1);
	assert_non_null(strstr(says, "table allotment, row 1"));
	store_close(s);
}

/* --- settings --- */

static void set(struct store *s, const char *key, const char *value)
{
	struct err e = {0};
	change_begin(s, "set");
	must(stored_setting_put(s, key, value, &e), &e);
	change_commit(s);
}

static void has(struct store *s, const char *key, const char *want)
{
	struct err e = {0};
	char value[STORED_SETTING_MAX + 1];
	must(stored_setting(s, key, value, &e), &e);
	assert_string_equal(value, want);
}

static long changes_in(struct store *s)
{
	struct store_counts counts;
	struct err e = {0};
	must(store_count(s, &counts, &e), &e);
	return counts.changes;
}

static void test_settings(void **state)
{
	(void)state;
	struct store *s = observing_store(0);
	struct err e = {0};
	int64_t undone;
	char words[200], value[STORED_SETTING_MAX + 1], full[STORED_SETTING_MAX + 2];
	has(s, "half.1", "");
	set(s, "half.1", ""); /* nothing to take away: no change */
	assert_int_equal(changes_in(s), 1);
	struct digest_text none = digest_now(s), is;
	set(s, "half.1", "sunset"); /* 2 */
	newest_words(s, words);
	assert_string_equal(words, "setting half.1");
	set(s, "half.1", "sunset");
	assert_int_equal(changes_in(s), 2);
	set(s, "half.1", "00:30"); /* 3 */
	has(s, "half.1", "00:30");
	assert_int_equal(history_undo(s, 2, &change, &undone, &e), ST_CONFLICT);
	assert_string_equal(e.text,
			    "setting half.1 was changed again, by change 3: value was \"sunset\" after "
			    "change 2 and is \"00:30\" now; nothing was undone");
	set(s, "half.1", ""); /* 4 */
	has(s, "half.1", "");
	is = digest_now(s);
	assert_string_equal(is.text, none.text);
	must(history_undo(s, 4, &change, &undone, &e), &e);
	has(s, "half.1", "00:30");
	must(history_undo(s, 3, &change, &undone, &e), &e);
	has(s, "half.1", "sunset");
	must(history_undo(s, 2, &change, &undone, &e), &e);
	has(s, "half.1", "");
	memset(full, 'x', sizeof full - 1);
	full[sizeof full - 1] = '\0';
	change_begin(s, "set");
	assert_int_equal(stored_setting_put(s, "k", full, &e), ST_RANGE);
	assert_int_equal(stored_setting_put(s, "", "x", &e), ST_SYNTAX);
	assert_int_equal(stored_setting_put(s, "k\x07", "x", &e), ST_SYNTAX);
	assert_int_equal(stored_setting_put(s, "k", "\xe2\x80\x8f", &e), ST_SYNTAX);
	full[STORED_SETTING_MAX] = '\0';
	must(stored_setting_put(s, "'; DROP TABLE setting; --", full, &e), &e);
	change_commit(s);
	has(s, "'; DROP TABLE setting; --", full);
	change_behind(s, "UPDATE setting SET value = 'y' WHERE key LIKE '%DROP%'");
	assert_int_equal(stored_setting(s, "'; DROP TABLE setting; --", value, &e), ST_STORE);
	assert_non_null(strstr(e.text, "table setting"));
	assert_string_equal(value, "");
	store_close(s);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_list),   cmocka_unit_test(test_refused),  cmocka_unit_test(test_undo),
	    cmocka_unit_test(test_damage), cmocka_unit_test(test_settings),
	};
	return cmocka_run_group_tests_name("allotments", tests, NULL, NULL);
}
