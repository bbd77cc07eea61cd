/* SPDX-License-Identifier: MIT
 * What every page is: a state and a table of functions. A page is drawn from its state alone; the loop loads,
 * ticks, sizes and asks it what a key wants. */
#ifndef WANE_TUI_PAGES_PAGE_H
#define WANE_TUI_PAGES_PAGE_H

#include "tui/parts/grid.h"
#include "tui/run.h"

/* What a key asks the loop to do. */
enum want {
	WANT_NOTHING,
	WANT_LOAD, /* call load: the state says what it wants to show */
	WANT_REPAINT,
	WANT_SUSPEND,
	WANT_RED,
	WANT_NIGHT_PAGE,
	WANT_DRIFT_PAGE,
	WANT_CHANGE, /* call change: the state says what */
	WANT_QUIT
};

struct page {
	const char *word; /* what it is called */
	size_t bytes;	  /* of its state, which the loop allocates; too large for the stack */
	/* With nothing loaded; run is borrowed. */
	void (*open)(void *state, const struct run *run);
	void (*close)(void *state);
	/* Shows the night of this evening from the next load on. */
	void (*go_to)(void *state, int32_t evening_mjd);
	/* Lets go of everything that is borrowed from the run's lists, before these are read again. */
	void (*drop)(void *state);
	/* Loads what the state wants. What was shown stays when that fails. */
	enum status (*load)(void *state, struct run *run, struct err *e);
	void (*size)(void *state, int rows, int cols, enum tier tier);
	void (*tick)(void *state, struct utc now);
	enum want (*key)(void *state, uint32_t code);
	/* A message until the next key. */
	void (*say)(void *state, enum role role, const char *text);
	void (*draw)(const void *state, struct grid *g);
	/* Changes what is stored as the state wants and says what was done; true: all lists are to be read
	 * again. NULL: never wanted. */
	bool (*change)(void *state, struct run *run);
	/* Whether slow work waits, and one piece of it, done while no key is pressed; NULL: never. */
	bool (*work_waits)(const void *state);
	void (*work)(void *state, struct run *run);
	double quiet_s; /* without a key before a piece of it begins */
};

extern const struct page page_night; /* the home page */
extern const struct page page_drift;

#endif
