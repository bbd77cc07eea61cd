/* SPDX-License-Identifier: MIT
 * What the night page says of a mount: when it flips, and what flip and limits cost. */
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/page_driver.h"

#include <math.h>
#include <stdio.h>

/* The fixture's night with a telescope of its site, or without one. */
static void load_with(struct page_driver *d, const struct telescope *t)
{
	d->fixture->run.has_telescope = t != NULL;
	if (t)
		d->fixture->run.telescope = *t;
	driver_load(d, FIXTURE_EVENING_MJD);
	driver_key(d, 'g');
}

/* The clock of Tern Hill in April is 6 h behind UTC: `01:25:38`. by hand */
static void local_time(const struct night *n, double t_d, char out[16])
{
	const long s = lround(night_utc(n, t_d).sod_s) + 18 * 3600;
	snprintf(out, 16, "%02d:%02d:%02d", (int)(s / 3600 % 24), (int)(s / 60 % 60), (int)(s % 60));
}

static void test_flip_in_the_details(void **state)
{
	(void)state;
	struct page_driver d;
	struct telescope t = telescope_empty();
	driver_open(&d, true, 45, 160, TIER_UNICODE);
	int flips = 0, rows = 0;
	t.mount = MOUNT_GERMAN;
	t.flip_min = 8.0;
	for (int given = 1; given >= 0; given--) {
		if (!given)
			t.flip_min = NAN;
		load_with(&d, &t);
		for (size_t i = 0; i < d.page->rows.n; i++, driver_key(&d, 'j')) {
			const struct window *w = d.page->rows.row[i].window;
			char at[16], line[120];
			rows++;
			if (isnan(w->forecast.flip_d)) {
				driver_expect_not(&d, "the mount changes sides");
				driver_expect_not(&d, "the meridian flip");
				continue;
			}
			flips++;
			local_time(&d.page->view.night, w->forecast.flip_d, at);
			snprintf(line, sizeof line, "Flip   at %s MDT the mount changes sides, for %s", at,
				 given ? "8 min " : "5 min (usual; not given)");
			driver_expect(&d, line);
			if (w->cover.lost_to[PART_FLAT] == CAUSE_FLIP) {
				snprintf(line, sizeof line, "to the meridian flip: flat part (%.0f %%)",
					 100.0 * (1.0 - w->cover.share[PART_FLAT]));
				driver_expect(&d, line);
			}
		}
	}
	assert_true(flips > 2 && rows > flips);
	load_with(&d, NULL);
	for (size_t i = 0; i < d.page->rows.n; i++, driver_key(&d, 'j'))
		driver_expect_not(&d, "the mount changes sides");
	driver_close(&d);
}

static void test_limits_in_the_details(void **state)
{
	(void)state;
	struct page_driver d;
	struct telescope t = telescope_empty();
	driver_open(&d, true, 45, 160, TIER_UNICODE);
	int lost = 0;
	t.mount = MOUNT_FORK;
	t.ha_west_h = 0.5;
	load_with(&d, &t);
	driver_key(&d, 'a'); /* what the limit leaves no chance is there too */
	for (size_t i = 0; i < d.page->rows.n; i++, driver_key(&d, 'j')) {
		const struct window_cover *c = &d.page->rows.row[i].window->cover;
		bool any = false;
		for (int part = 0; part < PART_COUNT; part++)
			any = any || c->lost_to[part] == CAUSE_MOUNT;
		if (any)
			driver_expect(&d, "to the mount: ");
		else
			driver_expect_not(&d, "to the mount: ");
		lost += any;
	}
	assert_true(lost > 2);
	driver_close(&d);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_flip_in_the_details),
	    cmocka_unit_test(test_limits_in_the_details),
	};
	return cmocka_run_group_tests_name("mount on the night page", tests, NULL, NULL);
}
