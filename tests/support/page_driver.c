/* SPDX-License-Identifier: MIT */
#include "tests/support/page_driver.h"

#include "tests/support/check.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

void driver_load(struct page_driver *d, int32_t evening_mjd)
{
	struct err e;
	d->page->wanted_mjd = evening_mjd;
	if (night_page_load(d->page, &d->fixture->run, &e) != ST_OK)
		check_fail("%s", e.text);
}

void driver_draw(struct page_driver *d)
{
	night_page_tick(d->page, wall_now(&d->fixture->run.wall));
	night_page_draw(d->page, &d->grid);
}

void driver_size(struct page_driver *d, int rows, int cols)
{
	struct err e;
	if (grid_resize(&d->grid, rows, cols, &e) != ST_OK)
		check_fail("%s", e.text);
	night_page_size(d->page, d->grid.rows, d->grid.cols, d->grid.tier);
	driver_draw(d);
}

void driver_open(struct page_driver *d, bool zoneinfo, int rows, int cols, enum tier tier)
{
	*d = (struct page_driver){.fixture = fixture_open(zoneinfo), .page = malloc(sizeof *d->page)};
	if (!d->page)
		check_fail("no memory");
	d->grid.tier = tier;
	night_page_open(d->page, &d->fixture->run);
	night_page_tick(d->page, wall_now(&d->fixture->run.wall));
	driver_load(d, FIXTURE_EVENING_MJD);
	driver_size(d, rows, cols);
}

void driver_open_on(struct page_driver *d, struct store *store, const char *now, int rows, int cols,
		    enum tier tier)
{
	struct err e;
	int code;
	*d = (struct page_driver){
	    .fixture = calloc(1, sizeof *d->fixture), .page = malloc(sizeof *d->page), .on_store = true};
	if (!d->fixture || !d->page)
		check_fail("no memory");
	struct run *r = &d->fixture->run;
	d->fixture->options.min_chance = d->fixture->options.ut1_utc_s = (double)NAN;
	d->fixture->options.now = now;
	snprintf(d->fixture->env.zoneinfo_dir, sizeof d->fixture->env.zoneinfo_dir, "/usr/share/zoneinfo");
	snprintf(d->fixture->env.user, sizeof d->fixture->env.user, "tester");
	if (run_open_on(r, store, &d->fixture->env, &d->fixture->options,
			NEED_STORE | NEED_SITE | NEED_TARGETS, &code, &e) != ST_OK)
		check_fail("%s", e.text);
	d->grid.tier = tier;
	night_page_open(d->page, r);
	night_page_tick(d->page, wall_now(&r->wall));
	driver_load(d, run_tonight(r));
	driver_size(d, rows, cols);
}

void driver_wait(struct page_driver *d, double seconds)
{
	struct wall_clock *wall = &d->fixture->run.wall;
	wall->start = utc_add_s(wall->leap, wall->start, seconds);
	driver_draw(d);
}

void driver_close(struct page_driver *d)
{
	night_page_close(d->page);
	free(d->page);
	grid_close(&d->grid);
	if (d->on_store) {
		run_close(&d->fixture->run);
		free(d->fixture);
	} else
		fixture_close(d->fixture);
}

/* As the loop does when something was stored. */
static void read_again(struct page_driver *d)
{
	struct err e;
	night_page_drop(d->page);
	if (run_reload(&d->fixture->run, &e) != ST_OK)
		check_fail("%s", e.text);
	driver_load(d, d->page->wanted_mjd);
}

void driver_key(struct page_driver *d, uint32_t code)
{
	switch (night_page_key(d->page, code)) {
	case WANT_LOAD:
		driver_load(d, d->page->wanted_mjd);
		break;
	case WANT_QUIT:
		d->quit = true;
		break;
	case WANT_REPAINT:
		d->repaints++;
		break;
	case WANT_SUSPEND:
		d->suspends++;
		break;
	case WANT_RED:
		d->reds++;
		break;
	case WANT_NIGHT_PAGE:
	case WANT_CHANGE:
		if (night_page_change(d->page, &d->fixture->run))
			read_again(d);
		break;
	case WANT_DRIFT_PAGE: /* the loop's affair */
	case WANT_NOTHING:
		break;
	}
	driver_draw(d);
}

void driver_keys(struct page_driver *d, const char *typed)
{
	for (; *typed; typed++)
		driver_key(d, (unsigned char)*typed);
}

static char *screen_text(const struct page_driver *d)
{
	size_t n = grid_to_text(&d->grid, false, NULL, 0);
	char *text = malloc(n + 1);
	if (!text)
		check_fail("no memory");
	grid_to_text(&d->grid, false, text, n + 1);
	return text;
}

bool driver_shows(const struct page_driver *d, const char *text)
{
	char *screen = screen_text(d);
	bool found = strstr(screen, text) != NULL;
	free(screen);
	return found;
}

void driver_expect(const struct page_driver *d, const char *text)
{
	if (driver_shows(d, text))
		return;
	print_error("%s\n", screen_text(d));
	check_fail("not on the screen: %s", text);
}

void driver_expect_not(const struct page_driver *d, const char *text)
{
	if (!driver_shows(d, text))
		return;
	print_error("%s\n", screen_text(d));
	check_fail("on the screen: %s", text);
}
