/* SPDX-License-Identifier: MIT
 * The key table and the line editor. */
#include "tui/parts/keys.h"

#include "tests/support/check.h"
#include "tui/parts/line_edit.h"

#include <stdio.h>
#include <string.h>

enum { TABLES = 3 };
static struct key_table table_of(size_t t)
{
	return t == 0 ? (struct key_table){keys, key_count} : t == 1 ? drift_keys : residual_keys;
}

static void test_every_action_has_a_key_and_a_sentence(void **state)
{
	(void)state;
	for (int action = ACT_NONE + 1; action < ACT_COUNT; action++) {
		int pages = 0;
		for (size_t t = 0; t < TABLES; t++) {
			int rows = 0, sentences = 0;
			const struct key_table table = table_of(t);
			for (size_t i = 0; i < table.n; i++)
				if (table.key[i].action == (enum action)action) {
					rows++;
					sentences += table.key[i].sentence != NULL &&
						     strlen(table.key[i].sentence) > 10;
				}
			pages += rows > 0;
			/* the keys that leave the residuals share one sentence */
			bool leaves = t == 2 && (action == ACT_LEAVE || action == ACT_DETAILS);
			if (rows > 0 && sentences != (leaves ? 0 : 1))
				check_fail("table %zu, action %d: %d keys, %d sentences", t, action, rows,
					   sentences);
		}
		if (pages == 0)
			check_fail("action %d has no key", action);
	}
}

static void test_keys_are_not_used_twice(void **state)
{
	(void)state;
	for (size_t t = 0; t < TABLES; t++) {
		const struct key_table table = table_of(t);
		for (size_t i = 0; i < table.n; i++) {
			assert_int_equal(key_action_in(&table, table.key[i].code), table.key[i].action);
			assert_true(strlen(table.key[i].label) > 0);
			for (size_t j = i + 1; j < table.n; j++)
				assert_true(table.key[i].code != table.key[j].code);
		}
		/* a slow line splits an arrow key into these */
		for (const char *c = "[OABCD"; *c; c++)
			assert_int_equal(key_action_in(&table, (uint32_t)*c), ACT_NONE);
	}
	assert_int_equal(key_action('\n'), ACT_DETAILS);
	assert_int_equal(key_action(PRESS_OTHER), ACT_NONE);
	assert_int_equal(key_action(0x4E2D), ACT_NONE);
}

static void test_footer(void **state)
{
	char text[300];
	(void)state;
	for (int columns = 0; columns <= 250; columns++) {
		key_footer(columns, text, sizeof text);
		assert_true((int)strlen(text) <= columns);
		if (columns >= 6)
			assert_memory_equal(text, "q quit", 6);
	}
	char small[12];
	key_footer(250, small, sizeof small);
	assert_true(strlen(small) < sizeof small);
	key_labels(ACT_DOWN, text, sizeof text);
	assert_string_equal(text, "j Down");
}

static void test_names(void **state)
{
	static const struct {
		uint32_t code;
		const char *want;
	} rows[] = {{'x', "x"},		  {0x4E2D, "中"},     {1, "^A"},	   {PRESS_F1, "F1"},
		    {0x202E, "that key"}, {0x9B, "that key"}, {0x301, "that key"}, {PRESS_OTHER, "that key"}};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char text[32];
		key_called(rows[i].code, text, sizeof text);
		assert_string_equal(text, rows[i].want);
	}
}

/* Keys typed into a line that holds `start`, and what it holds then; `|` is the cursor. */
static void test_line(void **state)
{
	static const struct {
		const char *start;
		uint32_t key[8];
		const char *want;
	} rows[] = {
	    {"", {'a', 'b'}, "ab|"},
	    {"2026-04-22", {CONTROL('U'), '1'}, "1|"},
	    {"2026-04-22", {PRESS_BACKSPACE, 0x7F, CONTROL('H')}, "2026-04|"},
	    {"abc", {PRESS_LEFT, 'x'}, "abx|c"},
	    {"abc", {CONTROL('A'), PRESS_DELETE}, "|bc"},
	    {"abc", {PRESS_HOME, PRESS_RIGHT, CONTROL('K')}, "a|"},
	    {"abc", {CONTROL('B'), CONTROL('B'), CONTROL('F'), CONTROL('D')}, "ab|"},
	    {"one two  ", {CONTROL('W')}, "one |"},
	    {"abc", {PRESS_LEFT, PRESS_LEFT, PRESS_LEFT, PRESS_LEFT, PRESS_BACKSPACE}, "|abc"},
	    {"abc", {PRESS_END, PRESS_RIGHT, PRESS_DELETE, CONTROL('E')}, "abc|"},
	    {"", {0x4E2D, 0xE9}, "中é|"},
	    {"", {0x202E, 0x9B, 0x301, 'a'}, "a|"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct line_edit line;
		char text[300], got[310] = "";
		line_set(&line, rows[i].start);
		for (size_t k = 0; k < 8 && rows[i].key[k]; k++)
			assert_true(line_key(&line, rows[i].key[k]));
		line_text(&line, text, sizeof text);
		struct line_edit head = line;
		head.n = line.at;
		char before[300];
		line_text(&head, before, sizeof before);
		snprintf(got, sizeof got, "%s|%s", before, text + strlen(before));
		assert_string_equal(got, rows[i].want);
	}
	struct line_edit line;
	line_set(&line, "");
	assert_false(line_key(&line, PRESS_ENTER));
	assert_false(line_key(&line, PRESS_ESCAPE));
	assert_false(line_key(&line, PRESS_F1));
	for (int i = 0; i < 3 * LINE_CHARS_MAX; i++)
		line_key(&line, 'x');
	assert_int_equal(line.n, LINE_CHARS_MAX);
}

static void test_line_slides(void **state)
{
	struct grid g = {.tier = TIER_UNICODE};
	struct err e;
	char text[64];
	(void)state;
	assert_int_equal(grid_resize(&g, 1, 10, &e), ST_OK);
	struct line_edit line;
	line_set(&line, "0123456789");
	line_draw(&line, &g, 0, 2, 5);
	grid_to_text(&g, false, text, sizeof text);
	assert_string_equal(text, "  6789\n");
	assert_int_equal(g.cursor_col, 6);
	assert_true(g.cursor_shown);
	grid_close(&g);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_every_action_has_a_key_and_a_sentence),
	    cmocka_unit_test(test_keys_are_not_used_twice),
	    cmocka_unit_test(test_footer),
	    cmocka_unit_test(test_names),
	    cmocka_unit_test(test_line),
	    cmocka_unit_test(test_line_slides),
	};
	return cmocka_run_group_tests_name("keys", tests, NULL, NULL);
}
