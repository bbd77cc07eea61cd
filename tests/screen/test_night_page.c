/* SPDX-License-Identifier: MIT
 * The night page as text: kept screens, keys to screens, every size, odd nights. All targets are invented. */
#include "tests/support/check.h"
#include "tests/support/golden.h"
#include "tests/support/page_driver.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Kept screens: keys pressed, size, tier. */
static void test_golden(void **state)
{
	static const struct {
		const char *name, *keys;
		int rows, cols;
		enum tier tier;
	} rows[] = {
	    {"night-80x24", "", 24, 80, TIER_UNICODE},
	    {"night-80x24-basic", "", 24, 80, TIER_BASIC},
	    {"night-80x24-ascii", "", 24, 80, TIER_ASCII},
	    {"night-160x45", "", 45, 160, TIER_UNICODE},
	    {"night-160x45-basic", "", 45, 160, TIER_BASIC},
	    {"night-160x45-ascii", "", 45, 160, TIER_ASCII},
	    {"night-100x30", "G", 30, 100, TIER_UNICODE},
	    {"night-250x60", "jj", 60, 250, TIER_UNICODE},
	    {"night-80x40", "j", 40, 80, TIER_UNICODE},
	    {"night-60x18", "", 18, 60, TIER_UNICODE},
	    {"night-38x10", "", 10, 38, TIER_UNICODE},
	    {"night-38x10-basic", "", 10, 38, TIER_BASIC},
	    {"night-38x10-ascii", "", 10, 38, TIER_ASCII},
	    {"night-20x5", "", 5, 20, TIER_UNICODE},
	    {"night-80x24-long-shots", "ajj", 24, 80, TIER_UNICODE},
	    {"night-80x24-last", "G", 24, 80, TIER_UNICODE},
	    {"night-80x24-later", ">>", 24, 80, TIER_UNICODE},
	    {"night-80x24-date", "t", 24, 80, TIER_UNICODE},
	    {"night-80x24-details", "g\r", 24, 80, TIER_UNICODE},
	    {"night-80x24-sort", "s", 24, 80, TIER_UNICODE},
	    {"night-80x24-filter", "fdone > 50\rsd", 24, 80, TIER_UNICODE},
	    {"night-80x24-filter-fault", "fdane > 50\r", 24, 80, TIER_UNICODE},
	    {"night-100x40-help", "?", 40, 100, TIER_UNICODE},
	    {"night-80x24-limits", "l", 24, 80, TIER_UNICODE},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct page_driver d;
		driver_open(&d, true, rows[i].rows, rows[i].cols, rows[i].tier);
		driver_keys(&d, rows[i].keys);
		golden_check(rows[i].name, &d.grid);
		driver_close(&d);
	}
}

/* Keys, then a text that must be on the screen, and one that must not. */
static void test_keys_to_screens(void **state)
{
	static const struct {
		const char *keys, *shown, *not_shown;
	} rows[] = {
	    {"", "▸ 1○ next Tern 18 b", "nan"},
	    {"j", "▸    now  Tern 18 c", NULL},
	    {"jjk", "▸    now  Tern 18 c", NULL},
	    {"kkkkkkkk", "▸    now  Tern 2 c", NULL},
	    {"g", "window 1 of 11 by be-on time, 1 long shot hidden, a shows it", NULL},
	    {"G", "window 11 of 11", "Tern 2 c  "},
	    {"Gg", "▸    now  Tern 2 c", NULL},
	    {">", "next night, night 23/24 Apr 2026", "next: "},
	    {"<", "last night, night 21/22 Apr 2026", "next: "},
	    {"<<<<", "4 nights ago, night 18/19 Apr 2026", NULL},
	    {">>>>>>>>>", "in 9 nights, night 1/2 May 2026", NULL},
	    {">>>>>>>>", "night 30 Apr/1 May 2026", NULL},
	    {">>>.", "tonight, night 22/23 Apr 2026", NULL},
	    {"t\0252026-12-31\r", "night 31 Dec 2026/1 Jan 2027", "Evening of"},
	    {"t\0252026-02-30\r", "Evening of (YYYY-MM-DD): 2026-02-30", NULL},
	    {"txyz\033", "night 22/23 Apr 2026", "Evening of"},
	    {"t\003", "q quit", "Evening of"},
	    {"a", "1 long shot among them, a hides it", NULL},
	    {"aa", "1 long shot hidden, a shows it", "among them"},
	    {"aj", "▸    now  Tern 18 c", NULL},
	    {"aja", "▸    now  Tern 18 c", NULL},
	    {"l", "sun_limit_deg: -12 deg (built in)", "q quit"},
	    {"ll", "q quit", "sun_limit_deg"},
	    {"l\033", "q quit", NULL},
	    {"?", "Keys (q, ? or Esc comes back)", "Tern 2 c  "},
	    {"??", "▸ 1○ next Tern 18 b", NULL},
	    {"?q", "▸ 1○ next Tern 18 b", NULL},
	    {"?l", "Limits of this run", "Keys ("},
	    {"?G", "sun_near: ", "Keys ("},
	    {"?Gg", "Keys (q", "sun_near: "},
	    {"?jj", "j Down", "Keys ("},
	    {"\r", "Tern 18 b, night 22/23 Apr 2026", "q quit"},
	    {"\r\r", "q quit", NULL},
	    {"\rq", "q quit", NULL},
	    {"\ra", "a does nothing here; ? shows the keys.", NULL},
	    {"z", "z does nothing here; ? shows the keys.", "q quit"},
	    {"zj", "q quit", "does nothing"},
	    {"[", "[ does nothing here", NULL},
	    {"2", "2 does nothing here", NULL},
	    /* find */
	    {"/18\r", "2 of 2 with `18`; n next, N before", NULL},
	    {"/18\r", "▸    now  Tern 18 c", NULL},
	    {"/18\rn", "▸ 1○ next Tern 18 b", NULL},
	    {"/18\rN", "1 of 2 with `18`", NULL},
	    {"/TERN14\r", "▸         Tern 14 b", NULL},
	    {"/nobody\r", "No name in the list holds `nobody`.", NULL},
	    {"/nobody\r", "▸ 1○ next Tern 18 b", NULL},
	    {"n", "Nothing was looked for yet; / asks for a name.", NULL},
	    {"/18\rg/\r", "▸ 1○ next Tern 18 b", NULL},
	    {"/x\033", "▸ 1○ next Tern 18 b", "Find:"},
	    /* sort */
	    {"s", "Sort the list by", "Tern 18 b b"},
	    {"sn", "by name", NULL},
	    {"sng", "▸         Tern 14 b", NULL},
	    {"snsn", "by name, turned", NULL},
	    {"sjjj\r", "by name", NULL},
	    {"s\033", "by be-on time", "Sort the list"},
	    {"sd", "by chance of done", NULL},
	    {"sn><", "by name", NULL},
	    {"sn", "▸ 1○ next Tern 18 b", NULL},
	    /* filter */
	    {"fdone > 50\r", "1/5 out of 11 where done > 50 by on, a: 1 more", NULL},
	    {"fsigma < 1\r", "2/5 out of 11 where sigma < 1 by on", NULL},
	    {"fdone > 50\r\033", "of 11 by be-on time", "where done"},
	    {"fdone > 50\rf\025\r", "of 11 by be-on time", "where done"},
	    {"ftern 18\r", "▸ 1○ next Tern 18 b", "Tern 14 b  "},
	    {"fnobody\r", "No window of this night fits the filter; Esc takes it away.", NULL},
	    {"fnobody\rj\r?", "Keys (q", NULL},
	    {"fdone >\r", "nothing stands behind `done >`", NULL},
	    {"fdone > x\r", "`done >` needs a number (got \"x\")", NULL},
	    {"fdone > 50\033", "of 11 by be-on time", "Show where"},
	    /* sites: none is stored in the fixture */
	    {"S", "No site is stored; `wane site add` stores one.", NULL},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct page_driver d;
		driver_open(&d, true, 24, 80, TIER_UNICODE);
		driver_keys(&d, rows[i].keys);
		driver_expect(&d, rows[i].shown);
		if (rows[i].not_shown)
			driver_expect_not(&d, rows[i].not_shown);
		assert_false(d.quit);
		driver_close(&d);
	}
}

/* On the screen the cell under the first digit of an hour holds that hour's start, at every width and in both
 * places of the axis: counted from the cells themselves, whose ends are the axis' own. */
static void test_hours_stand_over_their_cells(void **state)
{
	(void)state;
	struct page_driver d;
	driver_open(&d, true, 45, 160, TIER_UNICODE);
	for (int cols = PAGE_COLS_FULL; cols <= 250; cols++) {
		driver_size(&d, 45, cols);
		const struct night_page *p = d.page;
		const struct night *n = &p->view.night;
		const int row = p->axis_in_list ? p->shape.head - 2 : p->shape.head + p->shape.list + 1;
		int labels = 0;
		for (int i = 0; i + 1 < p->axis.cols; i++) {
			const struct cell *c = &d.grid.cell[row * d.grid.cols + p->axis_at + i];
			if (c[0].cp < '0' || c[0].cp > '9' || c[1].cp < '0' || c[1].cp > '9')
				continue;
			const double hour = 10.0 * (c[0].cp - '0') + (c[1].cp - '0');
			const double from =
			    zone_local(d.fixture->run.zone, night_utc(n, axis_time(&p->axis, i))).sod_s /
			    3600.0;
			const double length = 24.0 * (p->axis.to_d - p->axis.from_d) / p->axis.cols;
			const double past = fmod(hour - from + 48.0, 24.0);
			if (past > length + 1e-6 && past < 24.0 - 1e-6)
				check_fail("%d columns: %.0f h stands over the cell that begins at %.3f h",
					   cols, hour, from);
			labels++;
			i++;
		}
		assert_true(labels >= 3);
		if (p->shape.hours) { /* the same under the picture of altitudes */
			const int under = p->shape.head + p->shape.list + 1 + p->shape.curve + 1;
			for (int i = 0; i < p->axis.cols; i++)
				assert_int_equal(d.grid.cell[under * d.grid.cols + p->axis_at + i].cp,
						 p->axis.hours[i]);
		}
	}
	assert_int_equal(d.page->shape.hours, 1);
	driver_close(&d);
}

static void test_wants(void **state)
{
	struct page_driver d;
	(void)state;
	driver_open(&d, true, 24, 80, TIER_UNICODE);
	driver_keys(&d, "R\014\032t\014\032\033");
	assert_int_equal(d.reds, 1);
	assert_int_equal(d.repaints, 2);
	assert_int_equal(d.suspends, 2);
	assert_false(d.quit);
	driver_key(&d, 'q');
	assert_true(d.quit);
	driver_close(&d);
}

/* Pasted text is text where something is typed, and nothing elsewhere. */
static void test_paste(void **state)
{
	struct page_driver d;
	(void)state;
	driver_open(&d, true, 24, 80, TIER_UNICODE);
	driver_key(&d, PRESS_PASTE_BEGIN);
	driver_keys(&d, "qqj>\r");
	driver_key(&d, PRESS_PASTE_END);
	assert_false(d.quit);
	driver_expect(&d, "Pasted text was left out");
	driver_keys(&d, "t\025");
	driver_key(&d, PRESS_PASTE_BEGIN);
	driver_keys(&d, "2026-05-01\r");
	driver_key(&d, PRESS_PASTE_END);
	driver_expect(&d, "Evening of (YYYY-MM-DD): 2026-05-01");
	driver_key(&d, '\r');
	driver_expect(&d, "night 1/2 May 2026");
	driver_close(&d);
}

/* The hardware cursor stands on the selected row, in the typed text, or on the text that is read. */
static void test_cursor(void **state)
{
	struct page_driver d;
	(void)state;
	driver_open(&d, true, 24, 80, TIER_UNICODE);
	const struct cell *at = &d.grid.cell[d.grid.cursor_row * d.grid.cols];
	assert_int_equal(at->cp, 0x25B8);
	assert_true(at->selected);
	assert_false(d.grid.cursor_shown);
	driver_key(&d, 't');
	assert_true(d.grid.cursor_shown);
	assert_int_equal(d.grid.cursor_row, 23);
	assert_int_equal(d.grid.cursor_col, 36); /* behind `Evening of (YYYY-MM-DD): 2026-04-22` */
	driver_close(&d);
}

/* Every size: nothing outside the grid is touched (sanitizers), the footer or notice is there, the selection
 * is on the screen. */
static void test_every_size(void **state)
{
	static const char *const typed[] = {"", "G", "?", "l", "\r", "t", "s", "/", "f", "fx >\r"};
	struct page_driver d;
	(void)state;
	driver_open(&d, true, 24, 80, TIER_UNICODE);
	for (size_t k = 0; k < sizeof typed / sizeof typed[0]; k++) {
		driver_keys(&d, typed[k]);
		for (int rows = 1; rows <= 60; rows += rows < 26 ? 1 : 9)
			for (int cols = 1; cols <= 300; cols += cols < 20 ? 3 : cols < 84 ? 4 : 13) {
				driver_size(&d, rows, cols);
				assert_true(d.grid.cursor_row < rows && d.grid.cursor_col < cols);
				if (rows < PAGE_ROWS_MIN || cols < PAGE_COLS_MIN || k > 1)
					continue;
				assert_true(driver_shows(&d, "▸"));
				assert_true(driver_shows(&d, "q quit"));
				assert_true(d.grid.cell[d.grid.cursor_row * cols].cp == 0x25B8);
			}
		driver_keys(&d, k == 0 ? "" : "\033");
	}
	driver_close(&d);
}

/* No figure that can't be computed shows as one, at any width, on any of many nights. */
static void test_no_nan(void **state)
{
	struct page_driver d;
	(void)state;
	driver_open(&d, true, 60, 220, TIER_ASCII);
	d.page->show_long_shots = true;
	for (int night = -20; night <= 20; night++) {
		driver_load(&d, FIXTURE_EVENING_MJD + night);
		driver_draw(&d);
		for (size_t row = 0; row < d.page->rows.n; row++) {
			driver_expect_not(&d, "nan");
			driver_expect_not(&d, "inf");
			driver_expect_not(&d, "(null)");
			driver_key(&d, 'j');
		}
	}
	driver_close(&d);
}

/* The same night seen from elsewhere: what is unusual is said. */
static void test_odd_nights(void **state)
{
	static const struct {
		double lat_deg;
		int32_t mjd;
		const char *shown;
	} rows[] = {
	    {69.0, 61211, "No dark hour: the Sun does not get below -12 deg in this night."}, /* 2026-06-20 */
	    {69.0, 61211, "Sunset --:--  dusk --:--  dawn --:--  sunrise --:--"},
	    {80.0, 61030, "The Sun stays below -12 deg from noon to noon."}, /* 2025-12-21 */
	    {80.0, 61211, "No window in this night under these limits."},
	    {75.0, 61040, "The Sun neither rises nor sets between noon and noon."},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct page_driver d;
		driver_open(&d, false, 24, 80, TIER_UNICODE);
		d.fixture->run.site.lat_deg = rows[i].lat_deg;
		driver_load(&d, rows[i].mjd);
		driver_draw(&d);
		driver_expect(&d, rows[i].shown);
		driver_expect_not(&d, "nan");
		driver_close(&d);
	}
}

/* 1 November 2026, 02:00 MDT, clocks go back (15 U.S.C. 260a: first Sunday of November). */
static void test_clock_change(void **state)
{
	struct page_driver d;
	(void)state;
	driver_open(&d, true, 24, 80, TIER_UNICODE);
	driver_keys(&d, "t\0252026-10-31\r");
	driver_expect(&d, "Times with * are MST, the others MDT: the clocks change at 08:00 UTC.");
	driver_expect(&d, "dusk 19:17  dawn 05:45* local  11.5 h below -12 deg");
	driver_keys(&d, "<");
	driver_expect_not(&d, "*");
	driver_close(&d);
}

static void count_marks(const struct page_driver *d, const struct night_row *row, double change_h,
			size_t *before, size_t *behind)
{
	static const enum row_cell times[] = {ROW_T1, ROW_MID, ROW_T4};
	const struct window_event *ev = &row->window->event;
	const double at_d[] = {ev->t1_d, ev->mid_d, ev->t4_d};
	const struct night *n = &d->page->view.night;
	for (size_t k = 0; k < 3; k++) {
		/* the list rounds to minutes */
		struct utc t = utc_add_s(n->clock.leap, night_utc(n, at_d[k]), 30.0);
		bool late = t.mjd > n->mjd + 1 || (t.mjd == n->mjd + 1 && t.sod_s >= change_h * 3600.0);
		if ((strchr(row->text[times[k]], 0x2a) != NULL) != late)
			check_fail("%d: %s shows %s, %g h UTC", n->mjd, row->name, row->text[times[k]],
				   t.sod_s / 3600.0);
		*before += !late;
		*behind += late;
	}
}

/* Every local time of a night of a clock change tells its zone: 15 U.S.C. 260a, first Sunday of November and
 * second one of March at 02:00, here 08:00 and 09:00 UTC. */
static void test_marked_times(void **state)
{
	static const struct {
		int32_t evening_mjd;
		double change_h;
	} nights[] = {
	    {60980, 8.0}, /* 2025-11-01 */
	    {61106, 9.0}, /* 2026-03-07 */
	    {61344, 8.0}, /* 2026-10-31 */
	    {61477, 9.0}, /* 2027-03-13 */
	    {61715, 8.0}, /* 2027-11-06 */
	};
	struct page_driver d;
	(void)state;
	driver_open(&d, true, 45, 160, TIER_UNICODE);
	d.page->show_long_shots = true;
	size_t before = 0, behind = 0;
	for (size_t night = 0; night < sizeof nights / sizeof nights[0]; night++) {
		driver_load(&d, nights[night].evening_mjd);
		driver_draw(&d);
		if (d.page->rows.n > 0) /* the mark stands in the list */
			driver_expect(&d, d.page->rows.row[d.page->selected].text[ROW_T4]);
		for (size_t i = 0; i < d.page->rows.n; i++)
			count_marks(&d, &d.page->rows.row[i], nights[night].change_h, &before, &behind);
	}
	assert_true(before > 4 && behind > 4);
	driver_keys(&d, "t2026-10-31\r");
	driver_keys(&d, "G");
	driver_expect(&d, "*");
	driver_expect(&d, "02* ");
	golden_check("night-160x45-clock-change", &d.grid);
	driver_size(&d, 24, 80);
	golden_check("night-80x24-clock-change", &d.grid);
	driver_size(&d, 10, 38);
	golden_check("night-38x10-clock-change", &d.grid);
	driver_close(&d);
}

/* The date that is offered gives way to the first character, and stays for a key that edits it. */
static void test_offered_date(void **state)
{
	static const struct {
		const char *keys, *shown;
	} rows[] = {
	    {"t", "Evening of (YYYY-MM-DD): 2026-04-22 "},
	    {"t2", "Evening of (YYYY-MM-DD): 2 "},
	    {"t2026-03-08", "Evening of (YYYY-MM-DD): 2026-03-08 "},
	    {"t2026-03-08\r", "night 8/9 Mar 2026"},
	    {"t\1773", "Evening of (YYYY-MM-DD): 2026-04-23 "},
	    {"t\0059", "Evening of (YYYY-MM-DD): 2026-04-229 "},
	    {"t\r", "tonight, night 22/23 Apr 2026"},
	    {"t\033", "tonight, night 22/23 Apr 2026"},
	    {"fdone > 50\rf | on < 22:00\r", "where done > 50 | on < 22:00"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct page_driver d;
		driver_open(&d, true, 24, 80, TIER_UNICODE);
		driver_keys(&d, rows[i].keys);
		driver_expect(&d, rows[i].shown);
		driver_close(&d);
	}
	struct page_driver d;
	driver_open(&d, true, 24, 80, TIER_UNICODE);
	driver_key(&d, 't');
	driver_key(&d, PRESS_PASTE_BEGIN);
	driver_keys(&d, "2026-05-01");
	driver_key(&d, PRESS_PASTE_END);
	driver_expect(&d, "Evening of (YYYY-MM-DD): 2026-05-01 ");
	driver_close(&d);
}

static void test_without_zone(void **state)
{
	struct page_driver d;
	(void)state;
	driver_open(&d, false, 24, 80, TIER_UNICODE);
	driver_expect(&d, "Thu 04:14:05 UTC (zone of the site unknown)");
	driver_expect(&d, "Sunset 02:01  dusk 03:03  dawn 11:28  sunrise 12:30 UTC");
	driver_expect(&d, "▸ 1○ next Tern 18 b  03:48 04:18 05:12 05:42");
	driver_close(&d);
}

static void test_first_run(void **state)
{
	(void)state;
	struct page_driver d;
	driver_open(&d, true, 24, 80, TIER_UNICODE);
	night_page_close(d.page);
	d.fixture->run.targets.n = 0;
	d.fixture->run.site.name = "";
	night_page_open(d.page, &d.fixture->run);
	driver_size(&d, 40, 80);
	driver_expect(&d, "wane site add");
	driver_expect(&d, "wane import targets.csv");
	driver_expect(&d, "wane demo");
	driver_expect(&d, "Sun: never point a telescope near the Sun.");
	driver_keys(&d, "j>.ta\r?");
	driver_expect(&d, "Keys (q");
	driver_keys(&d, "q");
	driver_expect(&d, "wane demo");
	assert_false(d.quit);
	driver_keys(&d, "q");
	assert_true(d.quit);
	driver_close(&d);
}

/* Another stored site: its own night, zone and limits of the sky. The choice of a night follows: tonight
 * stays tonight. */
static void test_sites(void **state)
{
	static struct site sites[] = {
	    {.name = "Far Side",
	     .lat_deg = 31.2,
	     .lon_east_deg = 64.1,
	     .height_m = 1200.0,
	     .zone = "Asia/Kabul"},
	    {.name = "Tern Hill",
	     .lat_deg = 38.62,
	     .lon_east_deg = -109.36,
	     .height_m = 2100.0,
	     .zone = "America/Denver"},
	};
	struct page_driver d;
	(void)state;
	driver_open(&d, true, 24, 80, TIER_UNICODE);
	struct run *r = &d.fixture->run;
	snprintf(d.fixture->env.zoneinfo_dir, sizeof d.fixture->env.zoneinfo_dir, "/usr/share/zoneinfo");
	r->sites = (struct site_list){.n = 2, .site = sites};
	driver_keys(&d, "S");
	driver_expect(&d, "▸  Tern Hill  38.62 N 109.36 W  2100 m  America/Denver");
	driver_keys(&d, "k");
	driver_expect(&d, "▸  Far Side  31.20 N 64.10 E  1200 m  Asia/Kabul");
	driver_keys(&d, "\033");
	driver_expect(&d, "Tern Hill  38.62 N");
	driver_keys(&d, "Sg\r");
	driver_expect(&d, " Far Side  31.20 N 64.10 E  1200 m ");
	driver_expect(&d, "tonight, night 22/23 Apr 2026"); /* 08:44 there: before the noon that ends it */
	driver_expect(&d, "Thu 08:44:05 +0430");
	driver_keys(&d, ">SG\r");
	driver_expect(&d, "Tern Hill  38.62 N");
	driver_expect(&d, "next night, night 23/24 Apr 2026");
	driver_close(&d);
}

/* Allotted time cuts the night with its long shots as it cuts it without them. */
static void test_allotted(void **state)
{
	static struct allotment one = {.id = 1,
				       .site_id = 1,
				       .first_mjd = FIXTURE_EVENING_MJD,
				       .last_mjd = FIXTURE_EVENING_MJD,
				       .span = "22:00..23:00"};
	struct page_driver d;
	(void)state;
	driver_open(&d, true, 24, 80, TIER_UNICODE);
	struct run *r = &d.fixture->run;
	r->site.id = 1;
	r->allotments = (struct allotment_list){.n = 1, .allotment = &one};
	for (int all = 0; all < 2; all++) {
		d.page->show_long_shots = all;
		driver_load(&d, FIXTURE_EVENING_MJD);
		assert_true(d.page->view.cut && d.page->view.list.n > 0);
		for (size_t i = 0; i < d.page->view.list.n; i++) {
			const struct intervals *usable = &d.page->view.list.w[i].cover.usable;
			/* 22:00 to 23:00 MDT is an hour: by hand */
			assert_true(intervals_length(usable) * 24.0 <= 1.0 + 1e-9);
		}
	}
	driver_close(&d);
}

/* What the page borrows may be read anew: the same window stays selected, a filter stays. */
static void test_drop_and_load(void **state)
{
	struct page_driver d;
	(void)state;
	driver_open(&d, true, 24, 80, TIER_UNICODE);
	driver_keys(&d, "fdone > 50\rjj");
	driver_expect(&d, "▸    now  Tern 33 b");
	night_page_drop(d.page);
	driver_draw(&d);
	driver_keys(&d, "jGz?q\rR");
	driver_load(&d, d.page->wanted_mjd);
	driver_draw(&d);
	driver_expect(&d, "▸    now  Tern 33 b");
	driver_expect(&d, "3/5 out of 11 where done > 50");
	/* nothing left */
	night_page_drop(d.page);
	size_t n = d.fixture->run.targets.n;
	d.fixture->run.targets.n = 0;
	driver_load(&d, d.page->wanted_mjd);
	driver_draw(&d);
	driver_expect(&d, "No targets are stored yet.");
	d.fixture->run.targets.n = n;
	driver_load(&d, d.page->wanted_mjd);
	driver_draw(&d);
	driver_expect(&d, "▸    now  Tern 33 b");
	driver_close(&d);
}

/* Names that would turn a terminal upside down; the store refuses them, the page does not rely on it. */
static void test_hostile_names(void **state)
{
	static const char *const names[] = {"\033]0;title\007\033[2J",
					    "a\nb\rc\bd",
					    "\u202egnirts",
					    "\xff\xfe\xfd",
					    "e\u0301\u0301\u0301\u0301\u0301",
					    "中文中文中文中文中文中文中文中文",
					    "%s%n%d",
					    "",
					    "👩‍🚀 b",
					    "\u0301"};
	(void)state;
	for (size_t i = 0; i < sizeof names / sizeof names[0]; i++) {
		struct page_driver d;
		driver_open(&d, true, 24, 80, TIER_UNICODE);
		for (int t = 0; t < FIXTURE_TARGETS; t++)
			d.fixture->target[t].name = d.fixture->target[t].source = d.fixture->target[t].band =
			    names[i];
		d.fixture->run.site.name = names[i];
		struct site site = {.name = names[i], .zone = names[i]};
		d.fixture->run.sites = (struct site_list){.n = 1, .site = &site};
		for (int cols = 24; cols <= 160; cols += 8) {
			driver_load(&d, FIXTURE_EVENING_MJD);
			driver_size(&d, 40, cols);
			driver_keys(&d, cols % 3 == 0 ? "sn/e\rnGkf!zz\r" : cols % 3 == 1 ? "\r" : "SG\033");
			for (int c = 0; c < d.grid.rows * d.grid.cols; c++) {
				uint32_t cp = d.grid.cell[c].cp;
				assert_true((cp >= ' ' || cp == 0) && cp != 0x7F &&
					    !(cp >= 0x80 && cp < 0xA0) && cp != 0x202E);
			}
		}
		driver_close(&d);
	}
}

/* Without a plan: what comes next counts down, and rows go from next to now to past. */
static void test_clock(void **state)
{
	static const struct {
		double after_min;
		const char *shown, *row;
	} rows[] = {
	    {0.0, "next: Tern 14 b, be on in 1 h 05 min", "     next Tern 14 b"},
	    {64.0, "next: Tern 14 b, be on in 1 min", "     next Tern 14 b"},
	    {66.0, "now: Tern 18 b, leave in 22 min (+5); next: Tern 5 b, be on in 1 h 14 min",
	     "     now  Tern 14 b"},
	    {283.0, "Tern 14 b", "     past Tern 14 b"},
	    {600.0, "nothing more comes up tonight", "     past Tern 5 b"},
	    {-150.0, "dusk in 1 h 18 min; next: ", "        Tern 14 b"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct page_driver d;
		driver_open(&d, true, 24, 80, TIER_UNICODE);
		page_plan_drop(&d.page->plan);
		night_page_show_plan(d.page);
		struct wall_clock *wall = &d.fixture->run.wall;
		wall->start = utc_add_s(wall->leap, wall->start, 60.0 * rows[i].after_min);
		driver_draw(&d);
		driver_expect(&d, rows[i].shown);
		driver_expect(&d, rows[i].row);
		driver_close(&d);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_golden),
	    cmocka_unit_test(test_keys_to_screens),
	    cmocka_unit_test(test_hours_stand_over_their_cells),
	    cmocka_unit_test(test_wants),
	    cmocka_unit_test(test_paste),
	    cmocka_unit_test(test_cursor),
	    cmocka_unit_test(test_every_size),
	    cmocka_unit_test(test_no_nan),
	    cmocka_unit_test(test_odd_nights),
	    cmocka_unit_test(test_clock_change),
	    cmocka_unit_test(test_without_zone),
	    cmocka_unit_test(test_first_run),
	    cmocka_unit_test(test_hostile_names),
	    cmocka_unit_test(test_clock),
	    cmocka_unit_test(test_sites),
	    cmocka_unit_test(test_allotted),
	    cmocka_unit_test(test_drop_and_load),
	    cmocka_unit_test(test_marked_times),
	    cmocka_unit_test(test_offered_date),
	};
	return cmocka_run_group_tests_name("night page", tests, NULL, NULL);
}
