/* SPDX-License-Identifier: MIT
 * A night page driven without a terminal: keys and sizes go in, a grid comes out. */
#ifndef WANE_TESTS_SUPPORT_PAGE_DRIVER_H
#define WANE_TESTS_SUPPORT_PAGE_DRIVER_H

#include "tests/support/night_fixture.h"
#include "tui/pages/night_page.h"

struct page_driver {
	struct night_fixture *fixture;
	struct night_page *page;
	struct grid grid;
	bool quit, on_store;
	int repaints, suspends, reds; /* how often each was wanted */
};
/* Opens the fixture's run on its night. */
void driver_open(struct page_driver *d, bool zoneinfo, int rows, int cols, enum tier tier);
/* Opens a run on a store, which becomes its own, at an instant: the clock stands still. */
void driver_open_on(struct page_driver *d, struct store *store, const char *now, int rows, int cols,
		    enum tier tier);
/* Moves the clock on and draws. */
void driver_wait(struct page_driver *d, double seconds);
void driver_close(struct page_driver *d);
void driver_load(struct page_driver *d, int32_t evening_mjd);
void driver_size(struct page_driver *d, int rows, int cols);
/* One key, its want served, the clock's tick, a drawing. */
void driver_key(struct page_driver *d, uint32_t code);
/* Each byte a key; `\r` Enter, `\033` Escape. */
void driver_keys(struct page_driver *d, const char *typed);
void driver_draw(struct page_driver *d);
/* Whether a text stands somewhere on the screen, in one row. */
bool driver_shows(const struct page_driver *d, const char *text);
void driver_expect(const struct page_driver *d, const char *text);
void driver_expect_not(const struct page_driver *d, const char *text);

#endif
