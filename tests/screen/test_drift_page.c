/* SPDX-License-Identifier: MIT
 * The drift page as text, from a table made by hand over the fixture's invented targets: kept screens, keys
 * to screens, every size; the search between keys over the real table. */
#include "db/import.h"
#include "db/midtimes.h"
#include "tests/support/check.h"
#include "tests/support/golden.h"
#include "tests/support/night_fixture.h"
#include "tui/pages/drift_page.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

struct drift_driver {
	struct night_fixture *fixture;
	struct drift_page *page;
	struct grid grid;
	bool quit, hand_made;
	enum want last;
	int loads;
};

/* Figures of the rows; all else stands in the prepared targets. */
static const struct hand {
	double now_min, at_min;
	enum drift_when stale, lost;
	int32_t stale_mjd, lost_mjd, last_mjd;
	long midtimes;
	int32_t first_mjd, best_mjd;
	double after_min;
} hand[FIXTURE_TARGETS] = {
    {0.4, 0.6, WHEN_ON, WHEN_NEVER, 75000, 0, 60800, 12, 0, 0, 0},
    {0.7, 0.8, WHEN_NEVER, WHEN_NEVER, 0, 0, 0, 0, 0, 0, 0},
    {1.4, 8.6, WHEN_ON, WHEN_ON, 61900, 90000, 60500, 3, 61180, 61211, 1.0},
    {NAN, NAN, WHEN_UNKNOWN, WHEN_UNKNOWN, 0, 0, 0, 0, 0, 0, 0},
    {829.3, 896.8, WHEN_ALREADY, WHEN_ALREADY, 0, 0, 0, 0, 0, 0, 0},
    {0.8, 1.1, WHEN_ON, WHEN_NEVER, 68000, 0, 0, 0, 0, 0, 0},
    {0.7, 1.0, WHEN_ON, WHEN_NEVER, 69000, 0, 0, 0, 0, 0, 0},
    {2.5, 2.9, WHEN_ON, WHEN_NEVER, 72000, 0, 0, 0, 0, 0, 0},
    {0.9, 1.3, WHEN_ON, WHEN_NEVER, 67000, 0, 0, 0, 0, 0, 0},
    {90.7, 98.2, WHEN_ALREADY, WHEN_ON, 0, 70123, 0, 0, 61160, 61160, 1.1},
    {0.7, 1.1, WHEN_ON, WHEN_ON, 66000, 80000, 61000, 143, 0, 0, 0},
    {1.4, 2.6, WHEN_ON, WHEN_NEVER, 65000, 0, 0, 0, 0, 0, 0},
    {16.7, 19.8, WHEN_ALREADY, WHEN_ON, 0, 71000, 0, 0, 0, 0, 0},
    {0.7, 1.1, WHEN_ON, WHEN_NEVER, 66500, 0, 0, 0, 0, 0, 0},
};

static void fill_row(struct drift_row *row, const struct prepared *p, const struct hand *h)
{
	*row = (struct drift_row){.prepared = p,
				  .counted = true,
				  .epoch_now = 100,
				  .epoch_at = 500,
				  .sigma_now_min = h->now_min,
				  .sigma_at_min = h->at_min,
				  .limit_min = 7.5,
				  .stale = {h->stale, {.mjd = h->stale_mjd}},
				  .lost = {h->lost, {.mjd = h->lost_mjd}},
				  .midtimes = h->midtimes,
				  .has_midtime = h->last_mjd > 0,
				  .last_midtime = {.mjd = h->last_mjd, .sod_s = 20000.0},
				  .next_epoch = 101,
				  .next_mid = {.mjd = 61154, .sod_s = 11700.0},
				  .flags = p->flags};
	if (h->stale == WHEN_ALREADY)
		row->flags |= FLAG_BIT(FLAG_STALE);
	if (h->lost == WHEN_ALREADY)
		row->flags |= FLAG_BIT(FLAG_PHASE_LOST);
	if (h->first_mjd == 0)
		return;
	row->search = REFRESH_SEARCHED;
	row->first = (struct refresh){.found = true,
				      .evening_mjd = h->first_mjd,
				      .epoch = 105,
				      .mid = {.mjd = h->first_mjd + 1, .sod_s = 18000.0},
				      .chance_done = 0.61,
				      .sigma_after_min = h->after_min * 1.5};
	row->best = row->first;
	row->best.evening_mjd = h->best_mjd;
	row->best.mid.mjd = h->best_mjd + 1;
	row->best.chance_done = 0.93;
	row->best.sigma_after_min = h->after_min;
	row->stale_after = (struct drift_date){WHEN_ON, {.mjd = 64000}};
}

static void take_by_hand(struct drift_driver *d)
{
	struct err e;
	struct run *r = &d->fixture->run;
	struct drift_table t = {.now = wall_now(&r->wall), .n_sites = 1, .n = r->n_prepared};
	t.choice =
	    (struct drift_choice){.at = d->page->at_chosen ? d->page->chosen_at : (struct utc){.mjd = 62248},
				  .limit_min = NAN,
				  .precision_min = 1.0};
	t.site[0] = r->site;
	t.row = calloc(t.n + 1, sizeof *t.row);
	if (!t.row)
		check_fail("no memory");
	for (size_t i = 0; i < t.n; i++)
		fill_row(&t.row[i], &r->prepared[i], &hand[i]);
	d->page->wants_refresh = true;
	if (drift_page_take(d->page, &t, &e) != ST_OK)
		check_fail("%s", e.text);
}

static void load(struct drift_driver *d)
{
	struct err e;
	d->loads++;
	if (d->hand_made && !d->page->residuals_wanted)
		take_by_hand(d);
	else if (drift_page_load(d->page, &d->fixture->run, &e) != ST_OK)
		check_fail("%s", e.text);
}

static void draw(struct drift_driver *d)
{
	drift_page_tick(d->page, wall_now(&d->fixture->run.wall));
	drift_page_draw(d->page, &d->grid);
}

static void resize(struct drift_driver *d, int rows, int cols)
{
	struct err e;
	if (grid_resize(&d->grid, rows, cols, &e) != ST_OK)
		check_fail("%s", e.text);
	drift_page_size(d->page, d->grid.rows, d->grid.cols, d->grid.tier);
	draw(d);
}

static void open_page(struct drift_driver *d, bool hand_made, int rows, int cols, enum tier tier)
{
	*d = (struct drift_driver){
	    .fixture = fixture_open(true), .page = malloc(sizeof *d->page), .hand_made = hand_made};
	if (!d->page)
		check_fail("no memory");
	d->grid.tier = tier;
	d->fixture->options.drift_limit_min = NAN;
	d->fixture->options.precision_min = NAN;
	d->fixture->run.settings.refresh_precision_min = 1.0;
	drift_page_open(d->page, &d->fixture->run);
	drift_page_tick(d->page, wall_now(&d->fixture->run.wall));
	load(d);
	resize(d, rows, cols);
}

static void close_page(struct drift_driver *d)
{
	drift_page_close(d->page);
	free(d->page);
	grid_close(&d->grid);
	fixture_close(d->fixture);
}

static void press(struct drift_driver *d, uint32_t code)
{
	d->last = drift_page_key(d->page, code);
	if (d->last == WANT_LOAD)
		load(d);
	d->quit = d->quit || d->last == WANT_QUIT;
	draw(d);
}

static void type(struct drift_driver *d, const char *keys_typed)
{
	for (; *keys_typed; keys_typed++)
		press(d, (unsigned char)*keys_typed);
}

static bool shows(const struct drift_driver *d, const char *text)
{
	size_t n = grid_to_text(&d->grid, false, NULL, 0);
	char *screen = malloc(n + 1);
	if (!screen)
		check_fail("no memory");
	grid_to_text(&d->grid, false, screen, n + 1);
	bool found = strstr(screen, text) != NULL;
	free(screen);
	return found;
}

static void expect(const struct drift_driver *d, const char *keys_typed, const char *text, bool shown)
{
	static char screen[1 << 18];
	if (shows(d, text) == shown)
		return;
	grid_to_text(&d->grid, false, screen, sizeof screen);
	print_error("%s\n", screen);
	check_fail("keys `%s`: %s on the screen: %s", keys_typed, shown ? "not" : "is", text);
}

static void test_golden(void **state)
{
	static const struct {
		const char *name, *keys;
		int rows, cols;
		enum tier tier;
	} rows[] = {
	    {"drift-80x24", "", 24, 80, TIER_UNICODE},
	    {"drift-80x24-basic", "", 24, 80, TIER_BASIC},
	    {"drift-80x24-ascii", "", 24, 80, TIER_ASCII},
	    {"drift-80x24-refresh", "/31\r", 24, 80, TIER_UNICODE},
	    {"drift-160x45", "/31\r", 45, 160, TIER_UNICODE},
	    {"drift-160x45-basic", "/31\r", 45, 160, TIER_BASIC},
	    {"drift-160x45-ascii", "/31\r", 45, 160, TIER_ASCII},
	    {"drift-250x60", "/33\r", 60, 250, TIER_UNICODE},
	    {"drift-38x10", "", 10, 38, TIER_UNICODE},
	    {"drift-80x24-sort", "s", 24, 80, TIER_UNICODE},
	    {"drift-80x24-date", "t", 24, 80, TIER_UNICODE},
	    {"drift-100x50-help", "?", 50, 100, TIER_UNICODE},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct drift_driver d;
		open_page(&d, true, rows[i].rows, rows[i].cols, rows[i].tier);
		type(&d, rows[i].keys);
		golden_check(rows[i].name, &d.grid);
		close_page(&d);
	}
}

static void test_keys_to_screens(void **state)
{
	static const struct {
		const char *keys, *shown, *not_shown;
	} rows[] = {
	    {"", "1/14 targets by stale on", "nan"},
	    {"", "▸ Tern 40 b", NULL},
	    {"j", "▸ Tern 33 b", NULL},
	    {"jjk", "▸ Tern 33 b", NULL},
	    {"kkk", "▸ Tern 40 b", NULL},
	    {"G", "14/14 targets", NULL},
	    {"Gg", "▸ Tern 40 b", NULL},
	    {"", "PHASE LOST", NULL},
	    {"", "date 2029-04-22", NULL},
	    {"", "2 stale now, 1 more by the date; 1 phase lost, 1 without errors", NULL},
	    {"j", "searching", NULL},
	    {"/31\r", "Best   night 20/21 Jun 2026 at Tern Hill, chance of done 93 %", NULL},
	    {"/31\r", "stale: 2028-05-09", NULL},
	    /* orders */
	    {"s", "Sort the list by", "by stale on"},
	    {"so", "by now", NULL},
	    {"sog", "▸ Tern 14 b", NULL},
	    {"soso", "by now, turned", NULL},
	    {"sosog", "▸ Tern 40 b", NULL},
	    {"smg", "▸ Tern 11 b", NULL},
	    {"scscg", "▸ Tern 18 b", NULL},
	    {"s\033", "by stale on", "Sort the list"},
	    {"sjj\r", "by first", "Sort the list"},
	    /* find */
	    {"/18\r", "2 with `18`; n next, N before", NULL},
	    {"/nobody\r", "No name in the list holds `nobody`.", NULL},
	    {"n", "Nothing was looked for yet", NULL},
	    /* filter */
	    {"fstale\r", "1/3 targets of 14 with `stale` by stale on", NULL},
	    {"f!stale\r", "/11 targets of 14 with `!stale`", "STALE NOW"},
	    {"fnobody\r", "No target fits the filter; Esc takes it away.", NULL},
	    {"fnobody\rjG\r", "No target fits the filter", NULL},
	    {"fstale\r\033", "/14 targets by stale on", "of 14 with"},
	    {"fno errors\r", "▸ Tern 7 b", NULL},
	    /* the chosen date */
	    {"t", "Chosen date (YYYY-MM-DD): 2029-04-22 ", NULL},
	    {"t2031-01-01\r", "date 2031-01-01", "Chosen date"},
	    {"t2031-13-01\r", "Chosen date (YYYY-MM-DD): 2031-13-01", NULL},
	    {"t2031\033", "date 2029-04-22", "Chosen date"},
	    /* texts */
	    {"?", "Keys (q, ? or Esc comes back)", "▸"},
	    {"??", "▸ Tern 40 b", NULL},
	    {"?q", "▸ Tern 40 b", NULL},
	    {"x", "x does nothing here; ? shows the keys.", NULL},
	    {"\r", "No mid-times are stored.", NULL},
	    {"\r\033", "▸ Tern 40 b", NULL},
	    {"\rjjGgmkq", "▸ Tern 40 b", NULL},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct drift_driver d;
		open_page(&d, true, 24, 80, TIER_UNICODE);
		type(&d, rows[i].keys);
		expect(&d, rows[i].keys, rows[i].shown, true);
		if (rows[i].not_shown)
			expect(&d, rows[i].keys, rows[i].not_shown, false);
		assert_false(d.quit);
		close_page(&d);
	}
}

static void test_wants(void **state)
{
	static const struct {
		const char *keys;
		enum want want;
	} rows[] = {{"1", WANT_NIGHT_PAGE}, {"3", WANT_DRIFT_PAGE},  {"R", WANT_RED},
		    {"q", WANT_QUIT},	    {"?1", WANT_NIGHT_PAGE}, {"\014", WANT_REPAINT},
		    {"\032", WANT_SUSPEND}, {"t1", WANT_NOTHING},    {"\rx", WANT_CHANGE},
		    {"\ru", WANT_CHANGE}};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct drift_driver d;
		open_page(&d, true, 24, 80, TIER_UNICODE);
		type(&d, rows[i].keys);
		if (d.last != rows[i].want)
			check_fail("keys `%s`: want %d", rows[i].keys, (int)d.last);
		close_page(&d);
	}
}

/* Every size, in every mode: nothing outside the grid is touched (sanitizers). */
static void test_every_size(void **state)
{
	static const char *const typed[] = {"", "G", "?", "s", "t", "/", "f", "\r"};
	struct drift_driver d;
	(void)state;
	open_page(&d, true, 24, 80, TIER_UNICODE);
	for (size_t k = 0; k < sizeof typed / sizeof typed[0]; k++) {
		type(&d, typed[k]);
		for (int rows = 1; rows <= 60; rows += rows < 26 ? 1 : 9)
			for (int cols = 1; cols <= 300; cols += cols < 20 ? 3 : cols < 84 ? 4 : 13) {
				resize(&d, rows, cols);
				assert_true(d.grid.cursor_row < rows && d.grid.cursor_col < cols);
				expect(&d, typed[k], "nan", false);
				if (k > 1 || rows < DRIFT_ROWS_MIN || cols < DRIFT_COLS_MIN)
					continue;
				expect(&d, typed[k], "▸", true);
				expect(&d, typed[k], "q quit", true);
			}
		type(&d, "\033");
	}
	close_page(&d);
}

/* The real table: what waits is searched piece by piece until nothing in sight waits, and a key is served at
 * any time between. */
static void test_search_between_keys(void **state)
{
	struct drift_driver d;
	int pieces = 0;
	(void)state;
	open_page(&d, false, 24, 80, TIER_UNICODE);
	expect(&d, "", "searching for ", true);
	assert_true(drift_page_work_waits(d.page));
	for (; drift_page_work_waits(d.page) && pieces < 400; pieces++) {
		drift_page_work(d.page, &d.fixture->run);
		draw(&d);
		if (pieces == 3)
			type(&d, "jk");
	}
	assert_true(pieces > 3 && pieces < 400);
	expect(&d, "", "searching", false);
	type(&d, "/27\r");
	while (drift_page_work_waits(d.page))
		drift_page_work(d.page, &d.fixture->run);
	draw(&d);
	expect(&d, "/27", "▸ Tern 27 b", true);
	expect(&d, "/27", "Best   night ", true);
	/* the page's refresh is that of the search over all */
	const struct drift_row *row = drift_page_selected(d.page);
	struct drift_choice choice = d.page->table.choice;
	struct drift_table whole = {.n = 0};
	struct err e;
	choice.refresh = choice.named = true;
	assert_int_equal(drift_table_make(&whole, &d.fixture->run, &choice, &e), ST_OK);
	const struct drift_row *same = &whole.row[row - d.page->table.row];
	assert_true(same->best.found && row->best.found);
	assert_int_equal(row->best.epoch, same->best.epoch);
	assert_int_equal(row->first.evening_mjd, same->first.evening_mjd);
	drift_table_free(&whole);
	close_page(&d);
}

/* --- residuals, over a store in memory --- */

static const char table[] =
    "name,ra_deg,dec_deg,t0_jd,t0_err_d,time_scale,period_d,period_err_d,duration_h,k\n"
    "Tern 14 b,212.4,38.1,2459754.52173,0.0002,BJD_TDB,3.412877,0.0000003,2.6,0.118\n";

static void ignore_row(void *ctx, const struct import_message *m)
{
	(void)ctx;
	check_fail("%s", m->text);
}

static void add_time(struct store *s, int64_t id, long epoch, double off_min)
{
	char text[40];
	struct midtime_row row = {.epoch = epoch,
				  .kind = KIND_TRANSIT,
				  .time_scale = "BJD_TDB",
				  .err_d = 0.0005,
				  .source = "invented",
				  .used = true};
	bool added;
	struct err e;
	double days = 0.52173 + (double)epoch * 3.412877 + off_min / 1440.0;
	row.mid = jd2_normal(2459754.0, days);
	snprintf(text, sizeof text, "%.6f", 2459754.0 + days);
	row.mid_text = text;
	if (midtime_add(s, id, &row, &added, &e) != ST_OK)
		check_fail("%s", e.text);
}

static struct store *filled_store(void)
{
	/* one of them half an hour off */
	static const double off_min[] = {0.4, -0.6, 0.2, 0.9, -0.3, 30.0, 0.1, -0.8, 0.5, -0.2};
	const struct change change = {.utc = "2026-04-22T18:00:00Z", .who = "tester", .verb = "import"};
	const struct import_options options = {.strict = true, .change = change};
	const struct site site = {.name = "Tern Hill",
				  .lat_deg = 38.62,
				  .lon_east_deg = -109.36,
				  .height_m = 2100.0,
				  .zone = "America/Denver"};
	struct import_report report;
	struct target_list list = {.n = 0};
	struct store *s;
	struct err e = {.text = ""};
	if (store_open("test", STORE_MEMORY, &s, &e) != ST_OK || store_begin(s, &change, &e) != ST_OK ||
	    site_put(s, &site, true, &e) != ST_OK || store_commit(s, &e) != ST_OK ||
	    import_targets(s, table, strlen(table), &options, &report, ignore_row, NULL, &e) != ST_OK ||
	    targets_load(s, &list, &e) != ST_OK || store_begin(s, &change, &e) != ST_OK)
		check_fail("%s", e.text);
	for (size_t i = 0; i < sizeof off_min / sizeof off_min[0]; i++)
		add_time(s, list.t[0].id, 20 + 40 * (long)i, off_min[i]);
	if (store_commit(s, &e) != ST_OK)
		check_fail("%s", e.text);
	target_list_free(&list);
	return s;
}

/* As the loop does it. */
static void serve(struct drift_driver *d, struct run *run)
{
	struct err e;
	if (d->last == WANT_CHANGE && drift_page_change(d->page, run)) {
		drift_page_drop(d->page);
		if (run_reload(run, &e) != ST_OK || drift_page_load(d->page, run, &e) != ST_OK)
			check_fail("%s", e.text);
	} else if (d->last == WANT_LOAD && drift_page_load(d->page, run, &e) != ST_OK) {
		check_fail("%s", e.text);
	}
	drift_page_draw(d->page, &d->grid);
}

static void type_served(struct drift_driver *d, struct run *run, const char *typed)
{
	for (; *typed; typed++) {
		d->last = drift_page_key(d->page, (unsigned char)*typed);
		serve(d, run);
	}
}

static void test_residuals(void **state)
{
	char *arguments[] = {"wane", "--now", "2026-04-23T04:14:05Z", NULL};
	struct drift_driver d = {.page = malloc(sizeof *d.page)};
	struct env env = {.user = "tester", .zoneinfo_dir = "/usr/share/zoneinfo"};
	struct options options;
	struct run run;
	struct err e;
	int code;
	(void)state;
	if (!d.page || options_parse(&options, 3, arguments, &e) != ST_OK ||
	    run_open_on(&run, filled_store(), &env, &options, NEED_STORE | NEED_SITE | NEED_TARGETS, &code,
			&e) != ST_OK)
		check_fail("%s", e.text);
	drift_page_open(d.page, &run);
	drift_page_tick(d.page, wall_now(&run.wall));
	if (drift_page_load(d.page, &run, &e) != ST_OK || grid_resize(&d.grid, 30, 100, &e) != ST_OK)
		check_fail("%s", e.text);
	drift_page_size(d.page, 30, 100, TIER_UNICODE);
	type_served(&d, &run, "\r");
	expect(&d, "Enter", "Linear fit to 10 of 10 mid-times", true);
	expect(&d, "Enter", "1 to be looked at", true);
	golden_check("residuals-100x30", &d.grid);
	type_served(&d, &run, "jjjjj");
	expect(&d, "j", "6/10   transit of epoch 220", true);
	type_served(&d, &run, "x");
	expect(&d, "x", "1 mid-time of epoch 220 excluded; u takes it back.", true);
	expect(&d, "x", "Linear fit to 9 of 10 mid-times", true);
	expect(&d, "x", "EXCLUDED", true);
	expect(&d, "x", "to be looked at", false);
	type_served(&d, &run, "j");
	golden_check("residuals-100x30-excluded", &d.grid);
	type_served(&d, &run, "m");
	expect(&d, "m", "Quadratic fit to 9 of 10 mid-times", true);
	type_served(&d, &run, "mku");
	expect(&d, "u", "Taken back: change", true);
	expect(&d, "u", "Linear fit to 10 of 10 mid-times", true);
	expect(&d, "u", "6/10   transit of epoch 220", true);
	expect(&d, "u", "EXCLUDED", false);
	type_served(&d, &run, "x");
	type_served(&d, &run, "x");
	expect(&d, "xx", "1 mid-time of epoch 220 included", true);
	d.grid.tier = TIER_ASCII;
	for (int rows = 1; rows < 40; rows += 3)
		for (int cols = 1; cols < 200; cols += 7) {
			if (grid_resize(&d.grid, rows, cols, &e) != ST_OK)
				check_fail("%s", e.text);
			drift_page_size(d.page, rows, cols, TIER_ASCII);
			drift_page_draw(d.page, &d.grid);
		}
	type_served(&d, &run, "q");
	assert_int_equal(d.page->mode, DRIFT_MODE_LIST);
	drift_page_close(d.page);
	free(d.page);
	grid_close(&d.grid);
	run_close(&run);
}

/* What the page borrows may be read anew: target, order and filter stay. */
static void test_drop_and_load(void **state)
{
	struct drift_driver d;
	(void)state;
	open_page(&d, true, 24, 80, TIER_UNICODE);
	type(&d, "fstale\rj");
	expect(&d, "", "▸ Tern 33 b", true);
	drift_page_drop(d.page);
	draw(&d);
	type(&d, "jG?qtn");
	load(&d);
	draw(&d);
	expect(&d, "", "▸ Tern 33 b", true);
	expect(&d, "", "2/3 targets of 14 with `stale`", true);
	close_page(&d);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_golden),	  cmocka_unit_test(test_keys_to_screens),
	    cmocka_unit_test(test_wants),	  cmocka_unit_test(test_every_size),
	    cmocka_unit_test(test_drop_and_load), cmocka_unit_test(test_search_between_keys),
	    cmocka_unit_test(test_residuals),
	};
	return cmocka_run_group_tests_name("drift page", tests, NULL, NULL);
}
