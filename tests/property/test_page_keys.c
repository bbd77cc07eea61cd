/* SPDX-License-Identifier: MIT
 * Random keys, sizes and clocks: the page never leaves its grid, keeps its selection in the list and always
 * lets the user out. */
#include "tests/support/check.h"
#include "tests/support/page_driver.h"

#include <stdio.h>

enum { STEPS = 4000 };

static uint32_t random_key(struct rng *r)
{
	double what = rng_unit(r);
	/* what a filter, a search and a choice are made of */
	static const char typed[] = "done > 50 & tern | on < 23:00\r\r\r/fsSjG";
	if (what < 0.15)
		return (uint32_t)(unsigned char)typed[(size_t)(rng_unit(r) * (double)(sizeof typed - 1))];
	if (what < 0.6)
		return keys[(size_t)(rng_unit(r) * (double)key_count)].code;
	if (what < 0.8)
		return (uint32_t)(rng_unit(r) * 128.0);
	if (what < 0.9)
		return KEYS_SPECIAL + 1 + (uint32_t)(rng_unit(r) * 16.0);
	return (uint32_t)(rng_unit(r) * 0x10FFFF);
}

static void check_state(const struct page_driver *d)
{
	const struct night_page *p = d->page;
	assert_true(p->selected < p->rows.n || (p->rows.n == 0 && p->selected == 0));
	if (p->mode == MODE_LIST) {
		assert_true(p->top <= p->selected);
		assert_true(p->selected < p->top + (size_t)p->shape.list);
	}
	if (p->mode == MODE_SORT || p->mode == MODE_SITES) {
		int line = p->choice + CHOICE_FIRST_LINE;
		assert_true(line >= p->text.top && line < p->text.top + night_view_rows(p));
	}
	assert_true(d->grid.cursor_row >= 0 && d->grid.cursor_row < d->grid.rows);
	assert_true(d->grid.cursor_col >= 0 && d->grid.cursor_col < d->grid.cols);
	for (int row = 0; row < d->grid.rows; row++)
		for (int col = 0; col < d->grid.cols; col++) {
			const struct cell *c = &d->grid.cell[row * d->grid.cols + col];
			assert_true(c->width == 1 ||
				    (c->width == 2 && col + 1 < d->grid.cols && c[1].width == 0) ||
				    (c->width == 0 && col > 0 && c[-1].width == 2));
		}
}

static void test_random_keys(void **state)
{
	struct rng r = rng_open("page keys");
	struct page_driver d;
	(void)state;
	driver_open(&d, true, 24, 80, TIER_UNICODE);
	struct site site = d.fixture->run.site;
	d.fixture->run.sites = (struct site_list){.n = 1, .site = &site};
	snprintf(d.fixture->env.zoneinfo_dir, sizeof d.fixture->env.zoneinfo_dir, "/usr/share/zoneinfo");
	struct wall_clock *wall = &d.fixture->run.wall;
	const struct utc begin = wall->start;
	for (int step = 0; step < STEPS; step++) {
		if (rng_unit(&r) < 0.05)
			driver_size(&d, 1 + (int)(rng_unit(&r) * 70.0), 1 + (int)(rng_unit(&r) * 240.0));
		if (rng_unit(&r) < 0.1)
			wall->start = utc_add_s(wall->leap, begin, rng_between(&r, -40000.0, 60000.0));
		if (rng_unit(&r) < 0.01) { /* another program changed the store */
			night_page_drop(d.page);
			driver_key(&d, random_key(&r));
			driver_load(&d, d.page->wanted_mjd);
		}
		driver_key(&d, random_key(&r));
		check_state(&d);
		/* the library's years end far off; the walk stays near */
		if (d.page->view.night.mjd > FIXTURE_EVENING_MJD + 400 ||
		    d.page->view.night.mjd < FIXTURE_EVENING_MJD - 400)
			driver_load(&d, FIXTURE_EVENING_MJD);
	}
	/* out of a paste, out of a question or a text, out of the page */
	driver_key(&d, PRESS_PASTE_END);
	driver_key(&d, PRESS_ESCAPE);
	driver_key(&d, PRESS_ESCAPE);
	d.quit = false;
	driver_key(&d, 'q');
	if (!d.quit) /* it asks where changes of a plan are not stored */
		driver_key(&d, 'y');
	assert_true(d.quit);
	driver_close(&d);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(test_random_keys)};
	return cmocka_run_group_tests_name("page keys", tests, NULL, NULL);
}
