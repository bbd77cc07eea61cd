/* SPDX-License-Identifier: MIT
 * Texts of the night page, from windows made by hand: names of nights, spans, chances, covers, losses,
 * doubts; help and cautions. */
#include "tests/support/check.h"
#include "tests/support/page_driver.h"
#include "tui/cautions.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static void test_night_names(void **state)
{
	static const struct {
		int32_t mjd;
		const char *want;
	} rows[] = {
	    /* MJD of the date: 2026-01-01 is 61041 (Astronomical Almanac: JD 2461041.5 at 0 h) */
	    {61152, "22/23 Apr 2026"}, {61160, "30 Apr/1 May 2026"}, {61405, "31 Dec 2026/1 Jan 2027"},
	    {61041, "1/2 Jan 2026"},   {61099, "28 Feb/1 Mar 2026"}, {61829, "28/29 Feb 2028"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char text[48];
		night_name(rows[i].mjd, text, sizeof text);
		assert_string_equal(text, rows[i].want);
	}
}

static void test_spans(void **state)
{
	static const struct {
		double min;
		const char *want;
	} rows[] = {{0.0, "0 min"},    {0.9, "0 min"},	     {42.5, "42 min"},
		    {59.99, "59 min"}, {60.0, "1 h 00 min"}, {125.0, "2 h 05 min"},
		    {-5.0, "0 min"},   {1440.0, "1 d 0 h"},  {4620.0, "3 d 5 h"}};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char text[32];
		/* a hair more, so that 60 min is not 59.999 */
		span_text(rows[i].min / 1440.0 + 1e-9, text, sizeof text);
		assert_string_equal(text, rows[i].want);
	}
}

/* Nothing that may fail is called certain, nothing that may happen impossible. */
static void test_chances(void **state)
{
	static const struct {
		double chance;
		const char *want;
	} rows[] = {{0.0, "0"},	     {0.0001, "<1"}, {0.0049, "<1"},	{0.006, "1"},
		    {0.5, "50"},     {0.974, "97"},  {0.994, "99"},	{0.996, ">99"},
		    {0.9999, ">99"}, {1.0, "100"},   {(double)NAN, "?"}};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char text[16];
		chance_text(rows[i].chance, text, sizeof text);
		assert_string_equal(text, rows[i].want);
	}
}

/* A view with one window of a fixture target, whose cover and flags are then set by hand. */
static struct night_view one_window(struct night_fixture *f)
{
	struct night_view v = fixture_night(f, FIXTURE_EVENING_MJD, true);
	size_t at = 0;
	for (size_t i = 0; i < v.list.n; i++)
		if (strcmp(v.list.w[i].event.prepared->target->name, "Tern 14 b") == 0)
			at = i;
	v.list.w[0] = v.list.w[at];
	v.list.n = 1;
	for (int part = 0; part < PART_COUNT; part++) {
		v.list.w[0].cover.share[part] = 1.0;
		v.list.w[0].cover.lost_to[part] = CAUSE_NONE;
	}
	return v;
}

static struct night_rows rows_of(struct night_fixture *f, const struct night_view *v)
{
	struct night_rows rows = {.n = 0};
	struct err e;
	if (night_rows_make(&rows, v, &f->run.leap, f->run.zone, &e) != ST_OK)
		check_fail("%s", e.text);
	return rows;
}

static void test_covers_and_losses(void **state)
{
	enum { NO = CAUSE_NONE, SUN = CAUSE_SUN, LOW = CAUSE_ALTITUDE, MOON = CAUSE_MOON, NOON = CAUSE_NOON };
	static const struct {
		double share[PART_COUNT];
		int cause[PART_COUNT];
		uint32_t flags;
		const char *cover, *lost, *lost_long;
	} cases[] = {
	    {{1, 1, 1, 1, 1}, {NO, NO, NO, NO, NO}, 0, "#####", "nothing", "nothing"},
	    {{0, 0, 0.4, 1, 1}, {SUN, SUN, SUN, NO, NO}, 0, "xx-##", "BIF Sun", "before+ingress+flat Sun"},
	    {{1, 1, 1, 0.6, 0}, {NO, NO, NO, LOW, LOW}, 0, "###+x", "EA low", "egress+after low"},
	    {{0.5, 1, 0.9, 1, 0.2},
	     {SUN, NO, MOON, NO, NOON},
	     0,
	     "+#+#-",
	     "B Sun, F Moon, A noon",
	     "before Sun, flat Moon, after noon"},
	    {{0.996, 1, (double)NAN, 1, 0.996}, {NO, NO, NO, NO, NO}, 0, "##.##", "nothing", "nothing"},
	    {{0, 1, 1, 1, 1},
	     {SUN, NO, NO, NO, NO},
	     FLAG_BIT(FLAG_SUN_UP),
	     "x####",
	     "SUN UP, B Sun",
	     "SUN UP, before Sun"},
	    {{1, 1, 1, 1, 1}, {NO, NO, NO, NO, NO}, FLAG_BIT(FLAG_SUN_UP), "#####", "SUN UP", "SUN UP"},
	};
	(void)state;
	struct night_fixture *f = fixture_open(true);
	for (size_t i = 0; i < sizeof cases / sizeof cases[0]; i++) {
		struct night_view v = one_window(f);
		for (int part = 0; part < PART_COUNT; part++) {
			v.list.w[0].cover.share[part] = cases[i].share[part];
			v.list.w[0].cover.lost_to[part] = (enum cause)cases[i].cause[part];
		}
		v.list.w[0].event.flags = cases[i].flags;
		struct night_rows rows = rows_of(f, &v);
		char cover[PART_COUNT + 1] = "";
		for (int part = 0; part < PART_COUNT; part++)
			cover[part] = glyph_text(rows.row[0].cover[part], TIER_ASCII)[0];
		assert_string_equal(cover, cases[i].cover);
		assert_string_equal(rows.row[0].lost, cases[i].lost);
		assert_string_equal(rows.row[0].lost_long, cases[i].lost_long);
		night_rows_free(&rows);
		night_view_free(&v);
	}
	fixture_close(f);
}

static void test_without_a_chance(void **state)
{
	static const struct {
		enum flag flag;
		double sigma_min;
		const char *sigma, *lost;
	} cases[] = {
	    {FLAG_PHASE_LOST, 700.0, "lost", "phase lost"},
	    {FLAG_SIGMA_UNKNOWN, (double)NAN, "?", "no sigma"},
	    {FLAG_CIRCULAR_ASSUMED, 0.5, "0.5", "orbit assumed"},
	};
	(void)state;
	struct night_fixture *f = fixture_open(true);
	for (size_t i = 0; i < sizeof cases / sizeof cases[0]; i++) {
		struct night_view v = one_window(f);
		struct window *w = &v.list.w[0];
		w->event.flags = FLAG_BIT(cases[i].flag);
		w->event.sigma_min = cases[i].sigma_min;
		w->chance = (struct window_chance){NAN, NAN, NAN, NAN};
		struct night_rows rows = rows_of(f, &v);
		assert_false(rows.row[0].has_chance);
		assert_false(rows.row[0].long_shot);
		assert_string_equal(rows.row[0].text[ROW_ERROR], cases[i].sigma);
		assert_string_equal(rows.row[0].text[ROW_DONE], "?");
		assert_string_equal(rows.row[0].lost, cases[i].lost);
		night_rows_free(&rows);
		night_view_free(&v);
	}
	fixture_close(f);
}

/* Leafs through a text until a line is on the screen. */
static bool leaf_to(struct page_driver *d, const char *text)
{
	driver_key(d, 'g');
	for (int page = 0; page < 60; page++) {
		if (driver_shows(d, text))
			return true;
		driver_key(d, PRESS_PAGE_DOWN);
	}
	return false;
}

static void test_help(void **state)
{
	struct page_driver d;
	(void)state;
	driver_open(&d, true, 24, 250, TIER_UNICODE);
	driver_key(&d, '?');
	for (size_t i = 0; i < caution_count; i++)
		if (!leaf_to(&d, cautions[i]))
			check_fail("not in the help: %s", cautions[i]);
	for (size_t i = 0; i < key_count; i++)
		if (keys[i].sentence && !leaf_to(&d, keys[i].sentence))
			check_fail("not in the help: %s", keys[i].sentence);
	for (int f = 0; f < FLAG_COUNT; f++)
		if (!leaf_to(&d, flag_rules[f].sentence))
			check_fail("not in the help: %s", flag_rules[f].sentence);
	/* every heading of the list is explained */
	for (int c = 0; c < ROW_CELLS; c++) {
		char line[64];
		snprintf(line, sizeof line, "\n %s", row_columns[c].heading);
		if (!leaf_to(&d, line))
			check_fail("not in the help: %s", row_columns[c].heading);
	}
	/* and every picture, alone or as the second of a pair */
	for (int glyph = GLYPH_DAY; glyph <= GLYPH_MASK; glyph++) {
		char alone[32], second[32];
		snprintf(alone, sizeof alone, "\n   %s ", glyph_text((enum glyph)glyph, TIER_UNICODE));
		snprintf(second, sizeof second, " %s   ", glyph_text((enum glyph)glyph, TIER_UNICODE));
		if (!leaf_to(&d, alone) && !leaf_to(&d, second))
			check_fail("not in the help: glyph %d", glyph);
	}
	driver_keys(&d, "ql");
	for (int id = 0; id < LIM_COUNT; id++)
		if (!leaf_to(&d, limit_rules[id].key) || !leaf_to(&d, limit_rules[id].sentence))
			check_fail("not among the limits: %s", limit_rules[id].key);
	driver_close(&d);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_night_names),	     cmocka_unit_test(test_spans),
	    cmocka_unit_test(test_chances),	     cmocka_unit_test(test_covers_and_losses),
	    cmocka_unit_test(test_without_a_chance), cmocka_unit_test(test_help),
	};
	return cmocka_run_group_tests_name("night texts", tests, NULL, NULL);
}
