/* SPDX-License-Identifier: MIT
 * The forecast on the night page: lines, minutes, columns, sort and filter. The demo's invented observatory.
 */
#include "tests/support/check.h"
#include "tests/support/golden.h"
#include "tests/support/page_driver.h"
#include "tui/commands/demo_store.h"
#include "tui/pages/night_forecast.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#define EVENING "2026-04-23T02:40:00Z" /* 20:40 at the site, before dusk */

static void open_demo(struct page_driver *d, int rows, int cols, enum tier tier)
{
	struct store *s = NULL;
	struct err e = {.text = ""};
	if (store_open("memory", STORE_MEMORY, &s, &e) != ST_OK || demo_fill(s, &e) != ST_OK)
		check_fail("%s", e.text);
	driver_open_on(d, s, EVENING, rows, cols, tier);
}

static void test_golden(void **state)
{
	static const struct {
		const char *name, *keys;
		int rows, cols;
		enum tier tier;
	} rows[] = {
	    {"forecast-80x24", "", 24, 80, TIER_UNICODE},
	    {"forecast-100x30", "", 30, 100, TIER_UNICODE},
	    {"forecast-120x35", "", 35, 120, TIER_UNICODE},
	    {"forecast-160x45", "", 45, 160, TIER_UNICODE},
	    {"forecast-160x45-basic", "", 45, 160, TIER_BASIC},
	    {"forecast-160x45-ascii", "", 45, 160, TIER_ASCII},
	    {"forecast-220x50", "sz", 50, 220, TIER_UNICODE},
	    {"forecast-100x120-details", "/14\r\r", 120, 100, TIER_UNICODE},
	    {"forecast-80x24-details", "/74\r\rG", 24, 80, TIER_UNICODE},
	    {"forecast-40x100-details", "/74\r\r", 100, 40, TIER_ASCII},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct page_driver d;
		open_demo(&d, rows[i].rows, rows[i].cols, rows[i].tier);
		driver_keys(&d, rows[i].keys);
		golden_check(rows[i].name, &d.grid);
		driver_close(&d);
	}
}

/* Keys, then a text that must be on the screen, and one that must not. */
static void test_keys_to_screens(void **state)
{
	static const struct {
		int rows, cols;
		const char *keys, *shown, *not_shown;
	} rows[] = {
	    /* nothing but the list of sorts has t and z */
	    {24, 80, "st", "by timing", NULL},
	    {24, 80, "sz", "by S/N", NULL},
	    {24, 80, "sw", "by worth", NULL},
	    {40, 100, "fsnr > 34\r", "Tern 77 b", "Tern 14 b"},
	    {40, 100, "fsnr > 34\r", " out of ", "nothing stands"},
	    {40, 100, "ftiming < 0.4\r", "Tern 66 b", "Tern 14 b"},
	    {40, 100, "ftim < 0.4\r", "Tern 66 b", "Tern 14 b"},
	    {40, 100, "fworth > 3\r", "Tern 33 b", "Tern 14 b"},
	    {40, 100, "fnoise > 100\r", "No window of this night fits", NULL},
	    {40, 100, "fsky > 20 & s/n > 34\r", "Tern 77 b", "Tern 14 b"},
	    {40, 100, "fbits < -1\r", "No window of this night fits", NULL},
	    {60, 100, "/14\r\r", "Goal   wanted 3 whole, got 0, in R: for its depth", NULL},
	    {60, 100, "/14\r\r", "Star   comparison B, R 11.6, 6.62 arcmin away", NULL},
	    {60, 100, "/14\r\r", "Field  With the target they fit the field of East dome: 16.39 of 24.00",
	     NULL},
	    {60, 100, "/Tern 3 \r\r", "they do not fit the field of East dome", NULL},
	    {60, 100, "/74\r\r", "A depth of 14.53 ppt looks like 13.22 ppt.", NULL},
	    {60, 100, "/48\r\r", "Goal   none is set: any event of it counts", "Star  "},
	    {90, 100, "/14\r\r", "MDT    UTC    alt  airm    sky  noise", "Usual "},
	    {90, 100, "/14\r\r", " T1 23:42", NULL},
	    /* it begins at 23:12:07 */
	    {90, 100, "/14\r\r", " 23:15  05:15   62  1.13", "23:10"},
	    {90, 100, "/14\r\r", " flip 01:26", NULL},
	    {140, 100, "/14\r\r", "  timing 32 s: Expected error of the mid-time if it comes as predicted",
	     NULL},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct page_driver d;
		open_demo(&d, rows[i].rows, rows[i].cols, TIER_UNICODE);
		driver_keys(&d, rows[i].keys);
		driver_expect(&d, rows[i].shown);
		if (rows[i].not_shown)
			driver_expect_not(&d, rows[i].not_shown);
		driver_close(&d);
	}
}

/* The lines say what the column table says, and the rows in sight are in the order that was asked for. */
static void test_figures_agree(void **state)
{
	(void)state;
	struct page_driver d;
	open_demo(&d, 45, 160, TIER_UNICODE);
	driver_keys(&d, "stg");
	double before = -1.0;
	int known = 0;
	for (size_t i = 0; i < d.page->rows.n; i++) {
		const struct night_row *row = &d.page->rows.row[i];
		const struct window_forecast *f = &row->window->forecast;
		char want[64];
		if (isnan(f->timing_s)) {
			before = INFINITY;
			assert_string_equal(row->text[ROW_TIMING], "");
			continue;
		}
		assert_true(f->timing_s >= before);
		before = f->timing_s;
		known++;
		driver_keys(&d, i ? "j" : "");
		snprintf(want, sizeof want, "timing %s min", row->text[ROW_TIMING]);
		driver_expect(&d, want);
		snprintf(want, sizeof want, "S/N %.*f", f->depth_snr < 9.95 ? 1 : 0, f->depth_snr);
		driver_expect(&d, want);
		snprintf(want, sizeof want, ": worth %.2f", row->worth);
		driver_expect(&d, want);
	}
	assert_true(known > 20);
	driver_close(&d);
}

/* By hand: 0.57 = 34.2 / 60; from 0.995 and 9.95 min on one place less, so that four columns hold it. */
static void test_timing_text(void **state)
{
	static const struct {
		double timing_s;
		const char *want;
	} rows[] = {{34.2, "0.57"}, {59.6, "0.99"}, {59.8, "1.0"},   {90.0, "1.5"},
		    {596.9, "9.9"}, {597.1, "10"},  {7200.0, "120"}, {(double)NAN, ""}};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char text[TIMING_TEXT_BYTES];
		timing_text(rows[i].timing_s, text);
		assert_string_equal(text, rows[i].want);
	}
}

/* Why nothing is forecast, in one line, when something that it needs is taken away. */
static void test_reasons(void **state)
{
	enum { NO_TELESCOPE, NO_APERTURE, NO_BAND, STRANGE_BAND, NO_MAGNITUDE, STRANGE_MAGNITUDE, CASES };
	static const char *const want[CASES] = {
	    [NO_TELESCOPE] = "Noise  no forecast: no telescope is chosen",
	    [NO_APERTURE] = "Noise  no forecast: East dome has no aperture_m",
	    [NO_BAND] = "Noise  no forecast: East dome has no band",
	    [STRANGE_BAND] = "Noise  no forecast: East dome has no band that is known",
	    [NO_MAGNITUDE] = "Noise  no forecast: the target has no magnitude; sky 20.",
	    [STRANGE_MAGNITUDE] =
		"Noise  no forecast: the target's magnitude can't be turned into band R; sky 20.",
	};
	(void)state;
	for (int i = 0; i < CASES; i++) {
		struct page_driver d;
		open_demo(&d, 45, 160, TIER_UNICODE);
		driver_keys(&d, "/14\r");
		struct run *r = &d.fixture->run;
		const struct night_row *row = night_page_selected(d.page);
		struct target *t = (struct target *)row->window->event.prepared->target;
		if (i == NO_TELESCOPE) {
			r->has_telescope = false;
			d.page->view.night.telescope = NULL;
		} else if (i == NO_APERTURE) {
			r->observing.optics.aperture_m = (double)NAN;
		} else if (i == NO_BAND || i == STRANGE_BAND) {
			r->telescope.band = i == NO_BAND ? "" : "grey";
			r->observing.optics.band = BAND_NONE;
		} else if (i == NO_MAGNITUDE) {
			t->mag = (double)NAN;
		} else {
			t->band = "grey";
		}
		if (i < NO_MAGNITUDE)
			d.page->view.night.observing = NULL;
		night_page_settle(d.page);
		driver_draw(&d);
		driver_expect(&d, want[i]);
		driver_expect_not(&d, "nan");
		driver_keys(&d, "\r"); /* the whole view */
		driver_expect(&d, want[i]);
		driver_expect_not(&d, "nan");
		driver_close(&d);
	}
}

/* A short flip in the flat part or in a baseline that keeps its least length is no news: `flip`, faint. */
static void test_short_flips(void **state)
{
	static const struct {
		double share[PART_COUNT], before_min, after_min;
		int cause[PART_COUNT];
		const char *lost;
	} rows[] = {
	    /* half an hour of baseline, two hours of flat part: 5 % are 6 min, 10 % 12 min */
	    {{1, 1, 0.95, 1, 1}, 30, 30, {-1, -1, CAUSE_FLIP, -1, -1}, "flip"},
	    {{1, 1, 0.90, 1, 1}, 30, 30, {-1, -1, CAUSE_FLIP, -1, -1}, "F flip"},
	    {{0.8, 1, 1, 1, 1}, 20, 30, {CAUSE_FLIP, -1, -1, -1, -1}, "flip"},
	    /* the ingress is left with less than its least baseline */
	    {{0.8, 1, 1, 1, 1}, 5, 30, {CAUSE_FLIP, -1, -1, -1, -1}, "B flip"},
	    {{1, 1, 1, 1, 0.8}, 30, 5, {-1, -1, -1, -1, CAUSE_FLIP}, "A flip"},
	    {{1, 0.9, 1, 1, 1}, 30, 30, {-1, CAUSE_FLIP, -1, -1, -1}, "I flip"},
	    /* something else is lost, too */
	    {{0.5, 1, 0.95, 1, 1}, 20, 30, {CAUSE_SUN, -1, CAUSE_FLIP, -1, -1}, "B Sun, F flip"},
	    {{1, 1, 1, 1, 1}, 30, 30, {-1, -1, -1, -1, -1}, "nothing"},
	};
	(void)state;
	struct page_driver d;
	open_demo(&d, 24, 80, TIER_UNICODE);
	driver_keys(&d, "/48\r");
	struct window w = *night_page_selected(d.page)->window;
	w.event.before_d = w.event.after_d = 30.0 / 1440.0;
	w.event.t2_d = w.event.mid_d - 60.0 / 1440.0;
	w.event.t3_d = w.event.mid_d + 60.0 / 1440.0;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct night_view one = d.page->view;
		struct night_rows made = {.n = 0};
		struct err e;
		memcpy(w.cover.share, rows[i].share, sizeof w.cover.share);
		for (int part = 0; part < PART_COUNT; part++)
			w.cover.lost_to[part] = (enum cause)rows[i].cause[part];
		w.cover.base_before_min = rows[i].before_min;
		w.cover.base_after_min = rows[i].after_min;
		one.list.w = &w;
		one.list.n = 1;
		if (night_rows_make(&made, &one, &d.fixture->run.leap, d.fixture->run.zone, &e) != ST_OK)
			check_fail("%s", e.text);
		if (strcmp(made.row[0].lost, rows[i].lost) != 0)
			check_fail("row %zu: %s, want %s", i, made.row[0].lost, rows[i].lost);
		assert_int_equal(made.row[0].flip_only, strcmp(rows[i].lost, "flip") == 0);
		night_rows_free(&made);
	}
	driver_close(&d);
}

/* No line of the details breaks out of its width, at any width. */
static void test_every_width(void **state)
{
	(void)state;
	struct page_driver d;
	open_demo(&d, 60, 100, TIER_UNICODE);
	driver_keys(&d, "/74\r\r");
	for (int cols = PAGE_COLS_MIN; cols <= 200; cols++) {
		driver_size(&d, 60, cols);
		for (int i = 0; i < d.page->details.n; i++)
			if (text_columns(d.page->details.line[i].text) > cols - 2)
				check_fail("%d columns: %s", cols, d.page->details.line[i].text);
	}
	driver_close(&d);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_golden),	  cmocka_unit_test(test_keys_to_screens),
	    cmocka_unit_test(test_figures_agree), cmocka_unit_test(test_timing_text),
	    cmocka_unit_test(test_reasons),	  cmocka_unit_test(test_short_flips),
	    cmocka_unit_test(test_every_width),
	};
	return cmocka_run_group_tests_name("night forecast", tests, NULL, NULL);
}
