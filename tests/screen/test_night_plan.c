/* SPDX-License-Identifier: MIT
 * The plan on the night page: kept screens, keys to screens, what comes next at many moments, what is stored.
 * The site, its telescope and all targets are invented. */
#include "db/import.h"
#include "db/plans.h"
#include "db/sites.h"
#include "db/stored_settings.h"
#include "db/telescopes.h"
#include "tests/support/check.h"
#include "tests/support/golden.h"
#include "tests/support/page_driver.h"
#include "tui/demo_data.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#define EVENING "2026-04-23T02:40:00Z" /* 20:40 at the site, before dusk */
#define MIDNIGHT "2026-04-23T06:00:00Z"

static void quiet(void *ctx, const struct import_message *m)
{
	(void)ctx;
	if (!m->warning)
		check_fail("import");
}

static struct store *new_store(void)
{
	const struct change change = {.utc = "2026-04-22T18:00:00Z", .who = "tester", .verb = "fill"};
	const struct site hill = {.name = "Tern Hill",
				  .lat_deg = 38.62,
				  .lon_east_deg = -109.36,
				  .height_m = 2100.0,
				  .zone = "America/Denver"};
	struct telescope dome = telescope_empty();
	const struct import_options options = {.strict = true, .change = change};
	struct import_report report;
	struct store *s = NULL;
	struct err e = {.text = ""};
	dome.site_id = 1; /* a new store counts from 1 */
	dome.name = "East dome";
	dome.slew_deg_s = 2.0;
	dome.settle_min = 4.0;
	dome.blocks = "sunset..evening-9=evening flats and focus";
	if (store_open("memory", STORE_MEMORY, &s, &e) != ST_OK || store_begin(s, &change, &e) != ST_OK ||
	    site_put(s, &hill, true, &e) != ST_OK || telescope_put(s, &dome, true, &e) != ST_OK ||
	    /* so that plans hold single limbs */
	    stored_setting_put(s, "limb_share", "0.4", &e) != ST_OK || store_commit(s, &e) != ST_OK ||
	    import_targets(s, demo_targets_csv, demo_targets_csv_size, &options, &report, quiet, NULL, &e) !=
		ST_OK)
		check_fail("%s", e.text);
	return s;
}

static void open_at(struct page_driver *d, const char *now)
{
	driver_open_on(d, new_store(), now, 24, 80, TIER_UNICODE);
}

static const struct plan_view *plan_of(const struct page_driver *d)
{
	if (!d->page->plan.made)
		check_fail("no plan");
	return &d->page->plan.made->view;
}

/* The stored plan of the night; edition 0: none. */
struct stored {
	int edition;
	bool kept;
	size_t n;
	char draft[80], state[40], cause[80], note[80]; /* of the first item */
};
static struct stored stored_of(const struct page_driver *d, const char *draft)
{
	const struct run *r = &d->fixture->run;
	struct plan_row row;
	struct stored out = {.edition = 0};
	if (plan_find(r->store, r->site.id, r->telescope.id, FIXTURE_EVENING_MJD, draft, &row, NULL) != ST_OK)
		return out;
	out.edition = row.edition;
	out.kept = row.kept;
	out.n = row.n;
	snprintf(out.draft, sizeof out.draft, "%s", row.draft);
	if (row.n > 0) {
		snprintf(out.state, sizeof out.state, "%s", row.item[0].state);
		snprintf(out.cause, sizeof out.cause, "%s", row.item[0].cause);
		snprintf(out.note, sizeof out.note, "%s", row.item[0].note);
	}
	plan_row_free(&row);
	return out;
}

static const struct night_row *selected(const struct page_driver *d)
{
	return &d->page->rows.row[d->page->selected];
}

static void select_row(struct page_driver *d, const char *name)
{
	for (size_t i = 0; i < d->page->rows.n; i++)
		if (strcmp(d->page->rows.row[i].name, name) == 0) {
			night_page_select(d->page, (long)i);
			return;
		}
	check_fail("%s is not in the list", name);
}

static void test_golden(void **state)
{
	static const struct {
		const char *name, *keys;
		int rows, cols;
		enum tier tier;
	} rows[] = {
	    {"plan-80x24", "", 24, 80, TIER_UNICODE},
	    {"plan-80x24-basic", "", 24, 80, TIER_BASIC},
	    {"plan-80x24-ascii", "", 24, 80, TIER_ASCII},
	    {"plan-160x45", "K", 45, 160, TIER_UNICODE},
	    {"plan-160x45-basic", "K", 45, 160, TIER_BASIC},
	    {"plan-160x45-ascii", "K", 45, 160, TIER_ASCII},
	    {"plan-38x10", "", 10, 38, TIER_UNICODE},
	    {"plan-80x24-words", "v", 24, 80, TIER_UNICODE},
	    {"plan-160x45-words", "KL01:00..02:30\rv", 45, 160, TIER_UNICODE},
	    {"plan-38x20-words", "v", 20, 38, TIER_ASCII},
	    {"plan-80x24-marks", "Km", 24, 80, TIER_UNICODE},
	    {"plan-80x24-changed", "Kpjjd", 24, 80, TIER_UNICODE},
	    {"plan-80x24-order", "su", 24, 80, TIER_UNICODE},
	    {"plan-80x24-drafts", "Kwwindy\r=", 24, 80, TIER_UNICODE},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct page_driver d;
		driver_open_on(&d, new_store(), EVENING, rows[i].rows, rows[i].cols, rows[i].tier);
		driver_keys(&d, rows[i].keys);
		golden_check(rows[i].name, &d.grid);
		driver_close(&d);
	}
}

/* Every member of the plan that is in the list has the number of its item; members of one pointing share it.
 */
static void test_numbers(void **state)
{
	struct page_driver d;
	(void)state;
	open_at(&d, EVENING);
	const struct plan_view *v = plan_of(&d);
	size_t found = 0, joint = 0;
	assert_true(v->n_items >= 3);
	for (size_t i = 0; i < v->n_items; i++) {
		size_t rows = 0;
		for (size_t k = 0; k < d.page->rows.total; k++) {
			const struct night_row *row = &d.page->rows.row[k];
			if (row->plan.order != (int)i + 1)
				continue;
			rows++;
			assert_int_equal(row->plan.state, PLAN_PLANNED);
			assert_true(row->plan.slew_d < row->plan.from_d && row->plan.from_d < row->plan.to_d);
		}
		found += rows;
		joint += rows > 1;
		assert_true(rows <= v->item[i].n);
	}
	assert_true(found >= 3);
	assert_int_equal(joint, 1); /* Tern 27 b and c */
	driver_keys(&d, "fplanned\r");
	assert_int_equal(d.page->rows.n, found);
	driver_keys(&d, "f\025!planned\r");
	assert_int_equal(d.page->rows.n, d.page->rows.total - found);
	driver_keys(&d, "f\025plan = planned\r");
	assert_int_equal(d.page->rows.n, found);
	driver_keys(&d, "\033su");
	int before = 0;
	for (size_t k = 0; k < found; k++) {
		assert_true(d.page->rows.row[k].plan.order >= before && d.page->rows.row[k].plan.order > 0);
		before = d.page->rows.row[k].plan.order;
	}
	assert_int_equal(d.page->rows.row[found].plan.order, 0);
	driver_close(&d);
}

/* Seconds before an action of the first items and what is said then: whole minutes that are left, seconds
 * below two minutes. By hand. */
static void test_countdown(void **state)
{
	static const struct {
		size_t item;
		enum plan_action action;
		double before_s;
		const char *shown;
	} rows[] = {
	    {0, PLAN_SLEW, 750.0, "next: slew to Tern 27 b with Tern 27 c in 12 min (21:15 MDT)"},
	    {0, PLAN_SLEW, 4000.0, "next: slew to Tern 27 b with Tern 27 c in 1 h 06 min (21:15 MDT)"},
	    {0, PLAN_SLEW, 119.5, "next: slew to Tern 27 b with Tern 27 c in 119 s (21:15 MDT)"},
	    {0, PLAN_SLEW, 121.0, "next: slew to Tern 27 b with Tern 27 c in 2 min (21:15 MDT)"},
	    {0, PLAN_SLEW, 1.5, "next: slew to Tern 27 b with Tern 27 c in 1 s"},
	    {0, PLAN_START, 30.5, "next: start Tern 27 b with Tern 27 c in 30 s (21:20 MDT)"},
	    {0, PLAN_T1, 600.5,
	     "next: T1 of Tern 27 b in 10 min (21:50 MDT); then slew to Tern 14 b at 23:08"},
	    {0, PLAN_T2, 60.5, "next: T2 of Tern 27 b in 60 s (22:09 MDT)"},
	    {0, PLAN_LEAVE, 20.5, "next: leave Tern 27 b with Tern 27 c in 20 s (22:46 MDT)"},
	    {1, PLAN_SLEW, 60.5, "next: slew to Tern 14 b in 60 s (23:08 MDT)"},
	    {1, PLAN_LEAVE, -36000.0, "nothing more is planned tonight"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct page_driver d;
		open_at(&d, "2026-04-23T01:30:00Z");
		driver_size(&d, 24, 120);
		const struct plan_item_view *item = &plan_of(&d)->item[rows[i].item];
		const struct utc at = rows[i].action == PLAN_SLEW    ? item->slew_by
				      : rows[i].action == PLAN_START ? item->start
				      : rows[i].action == PLAN_T1    ? item->member[0].t1
				      : rows[i].action == PLAN_T2    ? item->member[0].t2
								     : item->end;
		const struct run *r = &d.fixture->run;
		driver_wait(&d, utc_diff_s(&r->leap, wall_now(&r->wall), at) - rows[i].before_s);
		driver_expect(&d, rows[i].shown);
		driver_close(&d);
	}
}

/* Keys, then a text that must be on the screen, and one that must not. */
static void test_keys_to_screens(void **state)
{
	static const struct {
		const char *keys, *shown, *not_shown;
	} rows[] = {
	    {"", "plan proposed: ", "kept"},
	    {"K", "Kept: draft main, edition 1, ", NULL},
	    {"Kj", "plan kept: ", "proposed"},
	    {"KK", "The plan is kept as it is shown.", NULL},
	    {"d", "Dropped: Tern 27 b; K keeps, u undoes.", NULL},
	    {"dk", "plan changed: ", NULL},
	    {"dd", "plan proposed: ", "plan changed"},
	    {"dd", "No longer dropped: Tern 27 b. ", NULL},
	    {"dp", "Pinned: Tern 27 b; K keeps, u undoes.", NULL},
	    {"p", "1◆", NULL},
	    {"pp", "1○", "1◆"},
	    {"pu", "Taken back: pin of Tern 27 b@", NULL},
	    {"puk", "plan proposed: ", "plan changed"},
	    {"pK", "Kept: draft main, edition 1", NULL},
	    {"pKp", "No longer pinned: Tern 27 b; K keeps", NULL},
	    {"pKpp", "Pinned: Tern 27 b; as it is stored", NULL},
	    {"u", "no change of a plan that could be taken back", NULL},
	    {"Ku", "Taken back: change ", NULL},
	    {"Kuk", "plan proposed: ", "kept"},
	    /* marks */
	    {"m", "No plan of this night is stored: keep the plan first, K.", NULL},
	    {"Km", "What became of Tern 27 b@", NULL},
	    {"Km\r", ": started; stored, u takes it back.", NULL},
	    {"Km\r", "1◐", NULL},
	    {"Kmj\r", "1✓", NULL},
	    {"Kmjj\r", "Cause (cloud, fault, may be empty):", NULL},
	    {"Kmjj\rcloud\r", "Note (may be empty):", NULL},
	    {"Kmjj\rcloud\rthin\r", "1½", NULL},
	    {"Kmjjj\r\r\r", "1×", NULL},
	    {"Km\033", "plan kept", "What became"},
	    {"Km\rmjjjj\r", "1○", "1◐"},
	    {"Km\ru", "Taken back: change ", NULL},
	    {"Km\ruk", "1○", "1◐"},
	    {"Kgm", "The selected window is not in the plan; p pins it into it.", NULL},
	    /* lost time */
	    {"L", "Lost time FROM..TO (22:40..23:30):", NULL},
	    {"L25:00..26:00\r", "Lost time FROM..TO (22:40..23:30): 25:00..26:00", NULL},
	    {"Lnever\r", "not a span of the night (got \"never\"", NULL},
	    {"L\033", "q quit", "FROM"},
	    {"KL21:10..22:20\r", "Lost time 21:10..22:20; K keeps, u undoes.", NULL},
	    {"KL21:10..22:20\rj", "plan changed: ", NULL},
	    {"KL21:10..22:20\rK", "Kept: draft main, edition 2 instead of edition 1", NULL},
	    {"KL21:10..22:20\ru", "Taken back: lost time 21:10..22:20; as it is stored", NULL},
	    {"x", "Planned afresh; K keeps", NULL},
	    /* words */
	    {"v", "Running order of night 22/23 Apr 2026, East dome", "What changed"},
	    {"v", "evening flats and focus", NULL},
	    {"vv", "q quit", "Running order of"},
	    {"vq", "q quit", "Running order of"},
	    {"vK", "Kept: draft main, edition 1", NULL},
	    {"Kdv", "Dropped: Tern 27 b@", NULL},
	    /* drafts */
	    {"wwindy\r", "Stored: draft windy, edition 1, ", NULL},
	    {"Kwwindy\r=", "  windy, edition 1, worth ", NULL},
	    {"Kwwindy\r=", "▸  main, kept, edition 1, worth ", NULL},
	    {"Kwwindy\r=j\r", "windy: ", NULL},
	    {"Kwwindy\r=j\r", "The two are the same.", NULL},
	    {"Kwwindy\r=j\rK", "Kept: draft windy, edition 1 instead of main", NULL},
	    {"K=j\r", "Planned afresh: ", NULL},
	    {"K=j\rK", "That is no draft", NULL},
	    {"w\r", "q quit", "Stored"},
	    /* leaving */
	    {"dq", "A plan has changes that are not kept. Leave without them? y leaves, n stays", NULL},
	    {"dqn", "q quit", "Leave without"},
	    {"dqn", "plan changed", NULL},
	    {"d\003", "Leave without them?", NULL},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct page_driver d;
		open_at(&d, EVENING);
		driver_keys(&d, rows[i].keys);
		driver_expect(&d, rows[i].shown);
		if (rows[i].not_shown)
			driver_expect_not(&d, rows[i].not_shown);
		assert_false(d.quit);
		driver_close(&d);
	}
}

static void test_stored(void **state)
{
	struct page_driver d;
	(void)state;
	open_at(&d, EVENING);
	driver_keys(&d, "dpLm\033"); /* nothing of this stores anything */
	assert_int_equal(stored_of(&d, NULL).edition, 0);
	driver_keys(&d, "uuK");
	struct stored kept = stored_of(&d, NULL);
	assert_int_equal(kept.edition, 1);
	assert_true(kept.kept);
	assert_string_equal(kept.draft, "main");
	assert_int_equal(kept.n, plan_of(&d)->n_items);
	driver_keys(&d, "mjjj\rcloud\rfrom the west\r");
	kept = stored_of(&d, NULL);
	assert_int_equal(kept.edition, 1); /* a mark is none */
	assert_string_equal(kept.state, "lost");
	assert_string_equal(kept.cause, "cloud");
	assert_string_equal(kept.note, "from the west");
	/* a mark while something is changed goes to what is kept, and the change stays */
	select_row(&d, "Tern 14 b");
	driver_keys(&d, "p");
	driver_expect(&d, "Pinned: Tern 14 b");
	driver_keys(&d, "mj\r");
	driver_expect(&d, ": done; stored");
	assert_int_equal(stored_of(&d, NULL).edition, 1);
	driver_keys(&d, "uk"); /* the change goes first */
	driver_expect_not(&d, "plan changed");
	assert_int_equal(plan_of(&d)->item[1].state, PLAN_DONE);
	driver_keys(&d, "u");
	assert_int_equal(plan_of(&d)->item[1].state, PLAN_PLANNED);
	driver_close(&d);
}

/* What is not stored stays with its night. */
static void test_unsaved_changes(void **state)
{
	struct page_driver d;
	char name[NAME_BYTES_MAX + 8];
	(void)state;
	open_at(&d, EVENING);
	snprintf(name, sizeof name, "%s", selected(&d)->name);
	driver_keys(&d, "d>");
	driver_expect(&d, "next night");
	driver_expect_not(&d, "plan changed");
	driver_keys(&d, "<");
	driver_expect(&d, "plan changed: ");
	select_row(&d, name);
	assert_true(selected(&d)->plan.dropped);
	driver_keys(&d, "q");
	assert_false(d.quit);
	driver_keys(&d, "yy");
	assert_true(d.quit);
	driver_close(&d);

	open_at(&d, EVENING); /* nothing is open any more once it is kept */
	driver_keys(&d, "dKq");
	assert_true(d.quit);
	driver_close(&d);
}

/* Nothing of a kept plan is worked out anew by the clock or by reading it again. */
static void test_kept_stands(void **state)
{
	struct page_driver d;
	(void)state;
	open_at(&d, EVENING);
	driver_keys(&d, "K");
	const size_t n = plan_of(&d)->n_items;
	const double worth = plan_of(&d)->worth;
	const struct utc start = plan_of(&d)->item[2].start;
	driver_wait(&d, 5.0 * 3600.0);
	driver_keys(&d, "><");
	assert_true(plan_of(&d)->kept);
	assert_int_equal(plan_of(&d)->n_items, n);
	check_close("worth", plan_of(&d)->worth, worth, 1e-9); /* stored with all its digits */
	check_close("start [s]", utc_diff_s(&d.fixture->run.leap, start, plan_of(&d)->item[2].start), 0.0,
		    0.5);
	driver_close(&d);
}

/* Without a stored plan, in the middle of the night, only what is left of it is proposed. */
static void test_proposal_of_a_running_night(void **state)
{
	struct page_driver d;
	(void)state;
	open_at(&d, MIDNIGHT);
	driver_size(&d, 40, 100);
	driver_expect(&d, "plan: proposed for what is left, not stored, ");
	const struct run *r = &d.fixture->run;
	assert_true(plan_of(&d)->n_items > 0);
	for (size_t i = 0; i < plan_of(&d)->n_items; i++)
		assert_true(utc_diff_s(&r->leap, wall_now(&r->wall), plan_of(&d)->item[i].slew_by) >= 0.0);
	driver_close(&d);
	open_at(&d, EVENING);
	driver_size(&d, 40, 100);
	driver_expect(&d, "plan: proposed, not stored, ");
	driver_close(&d);
}

/* The details of what was left out say why and what it would cost to force it in. */
static void test_left_out(void **state)
{
	struct page_driver d;
	(void)state;
	open_at(&d, EVENING);
	select_row(&d, "Tern 48 b");
	driver_keys(&d, "\r");
	driver_expect(&d, "Plan   left out: others are worth more");
	driver_expect(&d, "would put out ");
	driver_close(&d);
	/* where the costs are not worked out with the plan, that of one is asked for */
	open_at(&d, EVENING);
	select_row(&d, "Tern 48 b");
	const struct plan_left_view *left = page_plan_left(&d.page->plan, selected(&d));
	assert_non_null(left);
	d.page->plan.made->costs = false;
	driver_keys(&d, "\r");
	assert_true(night_page_work_waits(d.page));
	night_page_work(d.page, &d.fixture->run);
	assert_false(night_page_work_waits(d.page));
	check_close("cost", d.page->plan.cost, left->cost, 1e-6); /* the same, worked out two ways */
	driver_keys(&d, "\r\r");
	assert_false(night_page_work_waits(d.page)); /* once is enough */
	driver_close(&d);
}

/* Long lists: the plan comes between keys, and what nobody has seen is not stored. */
static void test_plan_that_waits(void **state)
{
	struct page_driver d;
	(void)state;
	open_at(&d, EVENING);
	page_plan_drop(&d.page->plan);
	d.page->plan.waits = true;
	night_page_show_plan(d.page);
	driver_draw(&d);
	driver_expect(&d, "plan: being worked out");
	assert_true(night_page_work_waits(d.page));
	driver_keys(&d, "K");
	driver_expect(&d, "The plan was only worked out now: look at it first.");
	assert_int_equal(stored_of(&d, NULL).edition, 0);
	driver_keys(&d, "K");
	assert_int_equal(stored_of(&d, NULL).edition, 1);
	assert_false(night_page_work_waits(d.page));
	driver_close(&d);
}

/* Another ephemeris adopted since: by hand, T0 6 min later moves the mid-time by 6 min. */
static void test_moved(void **state)
{
	static const char later[] =
	    "name,ra_deg,dec_deg,t0_jd,t0_err_d,time_scale,period_d,period_err_d,duration_h,"
	    "a_rs,inc_deg,k\n"
	    "Tern 14 b,213.11154,31.12001,2459406.583346667,0.00021,BJD_TDB,3.4125464,"
	    "0.0000031,2.896,9.64,88.16,0.1120\n";
	const struct change change = {.utc = "2026-04-23T02:00:00Z", .who = "tester", .verb = "import"};
	const struct import_options options = {.strict = true, .adopt = true, .change = change};
	struct import_report report;
	struct page_driver d;
	struct err e;
	(void)state;
	open_at(&d, EVENING);
	driver_size(&d, 40, 130);
	driver_keys(&d, "K");
	driver_expect(&d, "plan: kept main (edition 1), ");
	driver_expect_not(&d, "moved");
	struct run *r = &d.fixture->run;
	if (import_targets(r->store, later, sizeof later - 1, &options, &report, quiet, NULL, &e) != ST_OK)
		check_fail("%s", e.text);
	night_page_drop(d.page);
	if (run_reload(r, &e) != ST_OK)
		check_fail("%s", e.text);
	driver_load(&d, FIXTURE_EVENING_MJD);
	driver_draw(&d);
	driver_expect(&d, "; 1 item moved since: see v");
	select_row(&d, "Tern 14 b");
	driver_draw(&d);
	driver_expect(&d, "moved +6.0 min since (");
	driver_keys(&d, "v");
	driver_expect(&d, "Moved since it was stored");
	driver_expect(&d, "Tern 14 b +6.0 min: ");
	driver_close(&d);
}

/* What the telescope is kept for is told before what comes next. */
static void test_block(void **state)
{
	struct page_driver d;
	(void)state;
	driver_open_on(&d, new_store(), EVENING, 24, 160, TIER_UNICODE);
	driver_expect(&d, "evening flats and focus until 20:46; next: slew to Tern 27 b");
	driver_wait(&d, 600.0);
	driver_expect_not(&d, "evening flats");
	driver_close(&d);
}

static void test_every_size(void **state)
{
	static const char *const typed[] = {"v", "Km", "\033L22:00..", "\033=", "\r", "vG"};
	struct page_driver d;
	(void)state;
	open_at(&d, EVENING);
	for (size_t k = 0; k < sizeof typed / sizeof typed[0]; k++) {
		driver_keys(&d, typed[k]);
		for (int rows = 1; rows <= 60; rows += rows < 26 ? 1 : 9)
			for (int cols = 1; cols <= 300; cols += cols < 20 ? 3 : cols < 84 ? 4 : 13) {
				driver_size(&d, rows, cols);
				assert_true(d.grid.cursor_row < rows && d.grid.cursor_col < cols);
				driver_expect_not(&d, "nan");
				driver_expect_not(&d, "(null)");
			}
		driver_keys(&d, "\033");
	}
	driver_close(&d);
}

/* Edits of several nights, in every order. */
static void test_edits(void **state)
{
	const struct edit_night a = {1, 1, 61152}, b = {1, 1, 61153};
	struct plan_edits edits = {.n = 0};
	struct plan_edit edit = {.night = a, .kind = EDIT_EVENT, .is = CHOSEN_PINNED, .text = "Tern 1 b@3"};
	struct edit_wish *w = calloc(1, sizeof *w);
	struct err e;
	(void)state;
	assert_non_null(w);
	assert_int_equal(plan_edits_add(&edits, &edit, &e), ST_OK);
	edit.is = CHOSEN_DROPPED;
	assert_int_equal(plan_edits_add(&edits, &edit, &e), ST_OK);
	edit.night = b;
	assert_int_equal(plan_edits_add(&edits, &edit, &e), ST_OK);
	assert_int_equal(plan_edits_nights(&edits), 2);
	plan_edits_wish(&edits, &a, w); /* the newest one of an event counts */
	assert_int_equal(w->wish.n_pin, 0);
	assert_int_equal(w->wish.n_drop, 1);
	assert_int_equal(w->wish.n_free, 0);
	edit = (struct plan_edit){.night = a,
				  .kind = EDIT_EVENT,
				  .was = CHOSEN_PINNED,
				  .is = CHOSEN_NOT,
				  .text = "Tern 2 b@7",
				  .stored = "Tern 2 b"};
	assert_int_equal(plan_edits_add(&edits, &edit, &e), ST_OK);
	plan_edits_wish(&edits, &a, w);
	assert_int_equal(w->wish.n_free, 1);
	assert_string_equal(w->free[0], "Tern 2 b");
	edit = (struct plan_edit){.night = a, .kind = EDIT_AFRESH};
	assert_int_equal(plan_edits_add(&edits, &edit, &e), ST_OK);
	edit = (struct plan_edit){.night = a, .kind = EDIT_LOST, .text = "22:00..23:00"};
	assert_int_equal(plan_edits_add(&edits, &edit, &e), ST_OK);
	plan_edits_wish(&edits, &a, w);
	assert_true(w->wish.afresh);
	assert_int_equal(w->wish.n_drop + w->wish.n_free, 0);
	assert_int_equal(w->wish.n_lost, 1);
	assert_true(plan_edits_pop(&edits, &a, &edit));
	assert_int_equal(edit.kind, EDIT_LOST);
	plan_edits_clear(&edits, &a);
	assert_int_equal(plan_edits_of(&edits, &a), 0);
	assert_int_equal(plan_edits_of(&edits, &b), 1);
	edit.night = b;
	for (int i = 1; i < EDITS_MAX; i++)
		assert_int_equal(plan_edits_add(&edits, &edit, &e), ST_OK);
	assert_int_equal(plan_edits_add(&edits, &edit, &e), ST_RANGE);
	plan_edits_free(&edits);
	free(w);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_golden),	cmocka_unit_test(test_numbers),
	    cmocka_unit_test(test_countdown),	cmocka_unit_test(test_keys_to_screens),
	    cmocka_unit_test(test_stored),	cmocka_unit_test(test_unsaved_changes),
	    cmocka_unit_test(test_kept_stands), cmocka_unit_test(test_proposal_of_a_running_night),
	    cmocka_unit_test(test_left_out),	cmocka_unit_test(test_plan_that_waits),
	    cmocka_unit_test(test_every_size),	cmocka_unit_test(test_edits),
	    cmocka_unit_test(test_moved),	cmocka_unit_test(test_block),
	};
	return cmocka_run_group_tests_name("plan on the night page", tests, NULL, NULL);
}
