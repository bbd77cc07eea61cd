/* SPDX-License-Identifier: MIT
 * The grid of cells: clipping, widths, tiers, hostile text. */
#include "tui/parts/grid.h"

#include "tests/support/check.h"

#include <stdio.h>
#include <string.h>

static struct grid open_grid(int rows, int cols, enum tier tier)
{
	struct grid g = {.tier = tier};
	struct err e;
	if (grid_resize(&g, rows, cols, &e) != ST_OK)
		check_fail("%s", e.text);
	return g;
}

static void expect(const struct grid *g, bool roles, const char *want)
{
	char text[4096];
	size_t n = grid_to_text(g, roles, text, sizeof text);
	assert_int_equal(n, strlen(text));
	assert_string_equal(text, want);
}

/* What is put at a column of a width, and what stands in a row of ten cells. */
static void test_put(void **state)
{
	static const struct {
		const char *text;
		int col, width;
		enum tier tier;
		const char *want;
		int used;
	} rows[] = {
	    {"abc", 0, 10, TIER_UNICODE, "abc\n", 3},
	    {"abcdefghij", 0, 10, TIER_UNICODE, "abcdefghij\n", 10},
	    {"abcdefghijk", 0, 10, TIER_UNICODE, "abcdefghi…\n", 10},
	    {"abcdefghijk", 0, 10, TIER_ASCII, "abcdefghi~\n", 10},
	    {"abcdef", 2, 4, TIER_UNICODE, "  abc…\n", 4},
	    {"abcdef", 7, 99, TIER_UNICODE, "       ab…\n", 3},
	    {"abc", 10, 3, TIER_UNICODE, "\n", 0},
	    {"abc", -1, 3, TIER_UNICODE, "\n", 0},
	    {"abc", 3, 0, TIER_UNICODE, "\n", 0},
	    {"abc", 3, 1, TIER_UNICODE, "   …\n", 1},
	    {"", 0, 10, TIER_UNICODE, "\n", 0},
	    /* a wide character is never split */
	    {"中文", 0, 4, TIER_UNICODE, "中文\n", 4},
	    {"中文", 0, 3, TIER_UNICODE, "中…\n", 3},
	    {"a中文", 0, 4, TIER_UNICODE, "a中…\n", 4},
	    {"中文字", 0, 4, TIER_UNICODE, "中…\n", 3},
	    {"中", 9, 1, TIER_UNICODE, "         …\n", 1},
	    {"中文", 0, 10, TIER_ASCII, "??\n", 2},
	    {"中文", 0, 10, TIER_BASIC, "??\n", 2},
	    /* marks stay with their base, two at most, and none leads */
	    {"e\u0301x", 0, 10, TIER_UNICODE, "e\u0301x\n", 2},
	    {"e\u0301\u0302\u0303x", 0, 10, TIER_UNICODE, "e\u0301\u0302x\n", 2},
	    {"\u0301x", 0, 10, TIER_UNICODE, "x\n", 1},
	    {"e\u0301x", 0, 10, TIER_ASCII, "ex\n", 2},
	    /* the tiers */
	    {"é°", 0, 10, TIER_UNICODE, "é°\n", 2},
	    {"é°", 0, 10, TIER_BASIC, "é°\n", 2},
	    {"é°", 0, 10, TIER_ASCII, "??\n", 2},
	    {"αβ", 0, 10, TIER_BASIC, "??\n", 2},
	    /* nothing of this may reach a terminal as it is */
	    {"a\033[2Jb", 0, 10, TIER_UNICODE, "a?[2Jb\n", 6},
	    {"a\nb\tc\rd", 0, 10, TIER_UNICODE, "a?b?c?d\n", 7},
	    {"a\xc2\x9b"
	     "b",
	     0, 10, TIER_UNICODE, "a?b\n", 3},
	    {"a\u202eb", 0, 10, TIER_UNICODE, "a?b\n", 3},
	    {"a\u200bb\ufeff", 0, 10, TIER_UNICODE, "a?b?\n", 4},
	    {"a\xff\xfe"
	     "b",
	     0, 10, TIER_UNICODE, "a??b\n", 4},
	    {"\xe4\xb8", 0, 10, TIER_UNICODE, "??\n", 2},
	    {"\xed\xa0\x80", 0, 10, TIER_UNICODE, "???\n", 3}, /* a surrogate */
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct grid g = open_grid(1, 10, rows[i].tier);
		int used = grid_put(&g, 0, rows[i].col, rows[i].width, rows[i].text, ROLE_TEXT);
		char text[256];
		grid_to_text(&g, false, text, sizeof text);
		if (strcmp(text, rows[i].want) != 0 || used != rows[i].used)
			check_fail("row %zu: got `%s` %d, want `%s` %d", i, text, used, rows[i].want,
				   rows[i].used);
		grid_close(&g);
	}
}

static void test_outside(void **state)
{
	(void)state;
	struct grid g = open_grid(2, 3, TIER_UNICODE);
	assert_int_equal(grid_put(&g, -1, 0, 3, "x", ROLE_TEXT), 0);
	assert_int_equal(grid_put(&g, 2, 0, 3, "x", ROLE_TEXT), 0);
	assert_int_equal(grid_glyph(&g, 0, 3, GLYPH_RULE, ROLE_TEXT), 0);
	assert_int_equal(grid_glyph(&g, 5, 0, GLYPH_RULE, ROLE_TEXT), 0);
	grid_select(&g, 7, 0, 3);
	grid_select(&g, 0, -5, 100);
	grid_cursor(&g, 99, -4, true);
	assert_int_equal(g.cursor_row, 1);
	assert_int_equal(g.cursor_col, 0);
	expect(&g, false, "\n\n");
	expect(&g, true, "TTT\n\n");
	grid_close(&g);
}

/* Writing over half of a wide character blanks the other half. */
static void test_halves(void **state)
{
	(void)state;
	struct grid g = open_grid(1, 6, TIER_UNICODE);
	grid_put(&g, 0, 0, 6, "中文字", ROLE_TEXT);
	grid_put(&g, 0, 1, 1, "x", ROLE_TEXT);
	expect(&g, false, " x文字\n");
	grid_put(&g, 0, 4, 1, "y", ROLE_TEXT);
	expect(&g, false, " x文y\n");
	grid_put(&g, 0, 1, 4, "中中", ROLE_TEXT);
	expect(&g, false, " 中中\n");
	grid_close(&g);
}

static void test_right_and_roles(void **state)
{
	(void)state;
	struct grid g = open_grid(2, 8, TIER_ASCII);
	assert_int_equal(grid_put_right(&g, 0, 0, 8, "97", ROLE_GOOD), 2);
	assert_int_equal(grid_put_right(&g, 1, 0, 4, "toolong", ROLE_BAD), 4);
	grid_select(&g, 0, 0, 7);
	expect(&g, false, "      97\ntoo~\n");
	expect(&g, true, "TTTTTTGg\nbbbb\n");
	grid_rule(&g, 1);
	expect(&g, false, "      97\n--------\n");
	grid_close(&g);
}

static void test_glyphs(void **state)
{
	(void)state;
	for (int glyph = 0; glyph < GLYPH_COUNT; glyph++)
		for (int tier = 0; tier < TIER_COUNT; tier++) {
			const char *text = glyph_text((enum glyph)glyph, (enum tier)tier);
			assert_non_null(text);
			assert_int_equal(text_columns(text), 1);
			if (tier == TIER_ASCII && (strlen(text) != 1 || (unsigned char)text[0] > 0x7E))
				check_fail("glyph %d is not ASCII in the ASCII tier", glyph);
			/* what is put as text comes out the same: the tiers know their own glyphs */
			struct grid g = open_grid(1, 1, (enum tier)tier);
			char got[16], want[16];
			grid_glyph(&g, 0, 0, (enum glyph)glyph, ROLE_TEXT);
			grid_to_text(&g, false, got, sizeof got);
			snprintf(want, sizeof want, "%s\n", glyph == GLYPH_BLANK ? "" : text);
			assert_string_equal(got, want);
			grid_close(&g);
		}
	/* every share of a part looks different, and so does everything on one strip, in every tier */
	for (int tier = 0; tier < TIER_COUNT; tier++)
		for (int a = GLYPH_BLANK; a <= GLYPH_ITEM_END; a++)
			for (int b = a + 1; b <= GLYPH_ITEM_END; b++)
				assert_string_not_equal(glyph_text((enum glyph)a, (enum tier)tier),
							glyph_text((enum glyph)b, (enum tier)tier));
	for (int tier = 0; tier < TIER_COUNT; tier++)
		for (int a = GLYPH_SHARE_ALL; a <= GLYPH_SHARE_NO_PART; a++)
			for (int b = a + 1; b <= GLYPH_SHARE_NO_PART; b++)
				assert_string_not_equal(glyph_text((enum glyph)a, (enum tier)tier),
							glyph_text((enum glyph)b, (enum tier)tier));
	/* what stands of the item of a plan */
	for (int tier = 0; tier < TIER_COUNT; tier++)
		for (int a = GLYPH_PLANNED; a <= GLYPH_DROPPED; a++)
			for (int b = a + 1; b <= GLYPH_DROPPED; b++)
				assert_string_not_equal(glyph_text((enum glyph)a, (enum tier)tier),
							glyph_text((enum glyph)b, (enum tier)tier));
}

/* 2 x 4 dots; the chart's numbering: Unicode 15.0, Braille Patterns, U+2801 dot 1 .. U+2880 dot 8, dots 1 2 3
 * 7 at the left from above, 4 5 6 8 at the right. */
static void test_dots(void **state)
{
	static const struct {
		uint8_t dots;
		const char *unicode, *other;
	} rows[] = {
	    {0x01, "\u2801", "\""}, {0x02, "\u2802", "\""}, {0x04, "\u2804", ","}, {0x08, "\u2840", ","},
	    {0x10, "\u2808", "\""}, {0x20, "\u2810", "\""}, {0x40, "\u2820", ","}, {0x80, "\u2880", ","},
	    {0xFF, "\u28FF", ";"},  {0x11, "\u2809", "\""}, {0x88, "\u28C0", ","}, {0x24, "\u2814", ";"},
	    {0x00, "", ""},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
		for (int tier = 0; tier < TIER_COUNT; tier++) {
			struct grid g = open_grid(1, 2, (enum tier)tier);
			char want[8];
			grid_dots(&g, 0, 0, rows[i].dots, ROLE_TEXT);
			snprintf(want, sizeof want, "%s\n",
				 tier == TIER_UNICODE ? rows[i].unicode : rows[i].other);
			expect(&g, false, want);
			assert_int_equal(grid_dots(&g, 1, 0, 1, ROLE_TEXT), 0);
			assert_int_equal(grid_dots(&g, 0, 2, 1, ROLE_TEXT), 0);
			grid_close(&g);
		}
}

static void test_widths(void **state)
{
	/* Unicode 15.0, EastAsianWidth.txt and UnicodeData.txt */
	static const struct {
		uint32_t cp;
		int width;
	} rows[] = {
	    {'a', 1},	 {0xE9, 1},   {0x301, 0},   {0x3B1, 1},	  {0x1100, 2},	{0x2018, 1},  {0x20D0, 0},
	    {0x2500, 1}, {0x2588, 1}, {0x25B8, 1},  {0x3000, 2},  {0x3042, 2},	{0x4E2D, 2},  {0xAC00, 2},
	    {0xFF21, 2}, {0xFF71, 1}, {0x1F600, 2}, {0x1F680, 2}, {0x20000, 2}, {0x2026, 1},  {0xD7, 1},
	    {0xB7, 1},	 {0x2807, 1}, {0x3FFFD, 2}, {0x1FAF8, 2}, {0x303F, 1},	{0x16FE0, 2},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
		if (codepoint_width(rows[i].cp) != rows[i].width)
			check_fail("U+%04X: got %d columns, want %d", (unsigned)rows[i].cp,
				   codepoint_width(rows[i].cp), rows[i].width);
}

static void test_resize(void **state)
{
	(void)state;
	struct grid g = {.tier = TIER_UNICODE};
	struct err e;
	static const int sizes[][2] = {{1, 1}, {24, 80}, {500, 1000}, {0, 0}, {-3, 7}, {9999, 9999}, {2, 2}};
	for (size_t i = 0; i < sizeof sizes / sizeof sizes[0]; i++) {
		assert_int_equal(grid_resize(&g, sizes[i][0], sizes[i][1], &e), ST_OK);
		assert_true(g.rows >= 1 && g.rows <= GRID_ROWS_MAX && g.cols >= 1 && g.cols <= GRID_COLS_MAX);
		grid_put(&g, g.rows - 1, 0, g.cols, "corner", ROLE_TEXT);
		grid_glyph(&g, g.rows - 1, g.cols - 1, GLYPH_RULE, ROLE_TEXT);
	}
	grid_close(&g);
	assert_null(g.cell);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_put),	   cmocka_unit_test(test_outside),
	    cmocka_unit_test(test_halves), cmocka_unit_test(test_right_and_roles),
	    cmocka_unit_test(test_glyphs), cmocka_unit_test(test_widths),
	    cmocka_unit_test(test_dots),   cmocka_unit_test(test_resize),
	};
	return cmocka_run_group_tests_name("grid", tests, NULL, NULL);
}
