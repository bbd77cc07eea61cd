/* SPDX-License-Identifier: MIT
 * The formats of a plan, from a plan put together by hand. */
#include "tui/sheets/plan_words.h"

#include "db/text_clean.h"
#include "tests/support/check.h"
#include "tests/support/plan_fixture.h"
#include "tui/parts/columns.h"
#include "tui/parts/text_width.h"

#include <stdlib.h>
#include <string.h>

/* What a writer writes into memory. */
struct memory {
	FILE *file;
	char *text;
	size_t n;
};

static struct memory *memory_open(void)
{
	struct memory *m = calloc(1, sizeof *m);
	if (!m || !(m->file = open_memstream(&m->text, &m->n)))
		check_fail("no memory");
	return m;
}

static const char *memory_text(struct memory *m)
{
	fflush(m->file);
	return m->text;
}

static void memory_close(struct memory *m)
{
	fclose(m->file);
	free(m->text);
	free(m);
}

static char *changed_lines[] = {(char *)"Tern 18 b moved by 3 min: version 3 adopted",
				(char *)"new: Tern 40 b"};
static const struct sheet_changes changed = {.since = "edition 2", .line = changed_lines, .n = 2};

/* Occurrences of a piece in a text. */
static int count(const char *text, const char *piece)
{
	int n = 0;
	for (const char *at = text; (at = strstr(at, piece)); at += strlen(piece))
		n++;
	return n;
}

/* Keys of a JSON object in their order: those that stand at the beginning of a line behind `depth` pairs of
 * blanks. */
static void assert_keys(const char *text, int depth, const char *const want[], size_t n)
{
	size_t at = 0;
	for (const char *line = text; line && at < n;
	     line = strchr(line, '\n'), line = line ? line + 1 : NULL) {
		size_t blanks = strspn(line, " ");
		if (blanks != (size_t)(2 * depth) || line[blanks] != '"')
			continue;
		size_t length = strcspn(line + blanks + 1, "\"");
		if (strlen(want[at]) != length || strncmp(line + blanks + 1, want[at], length) != 0)
			check_fail("key %zu is %.*s, expected %s", at, (int)length, line + blanks + 1,
				   want[at]);
		at++;
	}
	if (at < n)
		check_fail("no key %s", want[at]);
}

/* --- times --- */

static void times_say_which_clock_and_date(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct plan_fixture *bare = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, false);
	char text[SHEET_TIME_BYTES];
	/* by hand: 2026-04-23 is a Thursday, Denver is six hours behind UTC then */
	const struct utc t = {.mjd = FIXTURE_EVENING_MJD + 1, .sod_s = 4 * 3600.0 + 40 * 60.0 - 29.0};
	sheet_local(&f->view, t, true, text);
	assert_string_equal(text, "Wed 22 Apr 2026 22:40 MDT");
	sheet_local(&f->view, t, false, text);
	assert_string_equal(text, "22:40 MDT");
	sheet_utc(&f->view, t, true, text);
	assert_string_equal(text, "04:40 UTC (Thu 23 Apr)");
	sheet_utc(&f->view, t, false, text);
	assert_string_equal(text, "04:40 UTC");
	sheet_stamp(&f->view, t, text);
	assert_string_equal(text, "2026-04-22T22:39:31-06:00");
	sheet_local(&bare->view, t, false, text);
	assert_string_equal(text, "04:40 UTC");
	plan_fixture_close(f);
	plan_fixture_close(bare);
}

/* 2026-11-01, 2 h MDT = 8 h UTC (IANA zone file): the hour from 1 to 2 comes twice. */
static void the_clock_change_is_found(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, PLAN_FIXTURE_CHANGE_MJD, true);
	struct plan_fixture *other = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct utc at;
	char text[SHEET_TIME_BYTES];
	assert_true(sheet_clock_change(&f->view, &at));
	check_close("change", at.sod_s, 8 * 3600.0, 0.5);
	assert_int_equal(at.mjd, PLAN_FIXTURE_CHANGE_MJD + 1);
	sheet_local(&f->view, (struct utc){at.mjd, at.sod_s - 1800.0}, false, text);
	assert_string_equal(text, "01:30 MDT");
	sheet_local(&f->view, (struct utc){at.mjd, at.sod_s + 1800.0}, false, text);
	assert_string_equal(text, "01:30 MST");
	sheet_stamp(&f->view, (struct utc){at.mjd, at.sod_s + 1800.0}, text);
	assert_string_equal(text, "2026-11-01T01:30:00-07:00");
	assert_false(sheet_clock_change(&other->view, &at));
	plan_fixture_close(f);
	plan_fixture_close(other);
}

/* --- JSON --- */

static void json_has_the_keys_in_order(void **state)
{
	(void)state;
	static const char *const top[] = {
	    "site",	   "night",   "telescope", "limits",	 "gap_min",  "worth_total",
	    "worth_bound", "optimal", "items",	   "blocks",	 "left_out", "draft",
	    "stored",	   "kept",    "edition",   "stored_utc", "who",	     "leap_table_until",
	    "moved",	   "pins",    "drops",	   "bound_note", "since",    "changes"};
	static const char *const item[] = {
	    "order", "windows", "slew_by_utc", "start_utc", "latest_start_utc", "end_utc",  "state", "note",
	    "key",   "worth",	"parts",       "cause",	    "marked_utc",	"if_missed"};
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct memory *m = memory_open();
	assert_true(plan_json(m->file, &f->view, &changed));
	const char *text = memory_text(m);
	assert_keys(text, 1, top, sizeof top / sizeof top[0]);
	assert_keys(strstr(text, "\"items\""), 3, item, sizeof item / sizeof item[0]);
	const char *windows = strstr(text, "\"windows\"");
	const char *names[80];
	for (size_t i = 0; i < column_count; i++)
		names[i] = columns[i].name;
	names[column_count] = "usable";
	assert_keys(windows, 5, names, column_count + 1);
	assert_int_equal(count(text, "\"windows\": ["), PLAN_FIXTURE_ITEMS - 1);
	assert_non_null(strstr(text, "\"sun_limit_deg\": -12"));
	assert_non_null(strstr(text, "\"kind\": \"both\""));
	assert_non_null(strstr(text, "\"changes\": [\"Tern 18 b moved by 3 min"));
	assert_non_null(strstr(text, "\"t2_utc\": null"));	/* grazing */
	assert_non_null(strstr(text, "\"chance_done\": null")); /* an occultation on an assumed orbit */
	assert_non_null(strstr(text, "\"sigma_min\": 0.693"));
	assert_non_null(strstr(text, "\"siblings\": \"\""));
	assert_non_null(strstr(text, "\"usable\": [[\"2026-04-23T03:48:17Z\", \"2026-04-23T05:42:17Z\"]]"));
	memory_close(m);
	plan_fixture_close(f);
}

/* What would make a telescope point at daylight is in no list of items, in none of the formats. */
static void json_gives_no_item_in_daylight(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct memory *m = memory_open();
	assert_true(plan_json(m->file, &f->view, NULL));
	const char *text = memory_text(m), *left = strstr(text, "\"left_out\"");
	const char *name = strstr(text, "\"Tern 2 c\"");
	assert_true(name > left);
	assert_non_null(strstr(name, plan_sun_up_reason));
	assert_null(strstr(text, "\"order\": 1,"));
	assert_null(strstr(text, "\"since\""));
	memory_close(m);
	plan_fixture_close(f);
}

static void json_of_nothing(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_EMPTY, FIXTURE_EVENING_MJD, false);
	struct memory *m = memory_open();
	assert_true(plan_json(m->file, &f->view, NULL));
	assert_non_null(strstr(memory_text(m), "\"items\": [],\n  \"blocks\": [],\n  \"left_out\": []"));
	assert_non_null(strstr(m->text, "\"edition\": null"));
	assert_non_null(strstr(m->text, "\"mask_points\": 0")); /* the run's own limits, whole */
	memory_close(m);
	plan_fixture_close(f);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(times_say_which_clock_and_date),
	    cmocka_unit_test(the_clock_change_is_found),
	    cmocka_unit_test(json_has_the_keys_in_order),
	    cmocka_unit_test(json_gives_no_item_in_daylight),
	    cmocka_unit_test(json_of_nothing),
	};
	return cmocka_run_group_tests_name("plan sheet", tests, NULL, NULL);
}
