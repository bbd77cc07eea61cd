/* SPDX-License-Identifier: MIT
 * Random keys, sizes and clocks: the page never leaves its grid, keeps its selection in the list and always
 * lets the user out. */
#include "tests/support/check.h"
#include "tests/support/page_driver.h"

enum { STEPS = 4000 };

static uint32_t random_key(struct rng *r)
{
	double what = rng_unit(r);
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
	struct wall_clock *wall = &d.fixture->run.wall;
	const struct utc begin = wall->start;
	for (int step = 0; step < STEPS; step++) {
		if (rng_unit(&r) < 0.05)
			driver_size(&d, 1 + (int)(rng_unit(&r) * 70.0), 1 + (int)(rng_unit(&r) * 240.0));
		if (rng_unit(&r) < 0.1)
			wall->start = utc_add_s(wall->leap, begin, rng_between(&r, -40000.0, 60000.0));
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
	assert_true(d.quit);
	driver_close(&d);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(test_random_keys)};
	return cmocka_run_group_tests_name("page keys", tests, NULL, NULL);
}
