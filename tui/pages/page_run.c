/* SPDX-License-Identifier: MIT */
#include "tui/pages/page_run.h"

#include "tui/pages/page.h"
#include "tui/parts/keys.h"
#include "tui/parts/term.h"

#include <math.h>
#include <stdlib.h>

#define FROZEN_CLOCK_WAIT_S 3600.0

struct loop {
	struct run *run;
	const struct page *page; /* the one on the screen */
	void *state;		 /* its own */
	struct grid grid;
	bool over, whole;
	long data_version; /* of the store, when it was read */
};

static void say(struct loop *l, enum role role, const char *text)
{
	l->page->say(l->state, role, text);
}

static void reload(struct loop *l)
{
	struct err e;
	if (l->page->load(l->state, l->run, &e) != ST_OK)
		say(l, ROLE_BAD, e.text);
}

static long data_version(const struct run *r)
{
	long version = 0;
	return r->store && store_data_version(r->store, &version, NULL) == ST_OK ? version : 0;
}

/* Another program changed the store: everything is read again. */
static void follow_store(struct loop *l)
{
	struct err e;
	long version = data_version(l->run);
	if (version == l->data_version)
		return;
	l->data_version = version;
	l->page->drop(l->state);
	if (run_reload(l->run, &e) != ST_OK) {
		l->data_version = -1; /* tried again with the next tick */
		say(l, ROLE_BAD, e.text);
		return;
	}
	say(l, ROLE_TEXT, "Another program changed what is stored; it was read again.");
	reload(l);
}

static void resize(struct loop *l)
{
	int rows, cols;
	struct err e;
	term_size(&rows, &cols);
	if (grid_resize(&l->grid, rows, cols, &e) != ST_OK) {
		say(l, ROLE_BAD, e.text);
		return;
	}
	l->page->size(l->state, l->grid.rows, l->grid.cols, l->grid.tier);
	l->whole = true;
}

static void change_palette(struct loop *l)
{
	if (!term_has_colour()) {
		say(l, ROLE_WARN, "Colours are off here (NO_COLOR, or a terminal without them).");
		return;
	}
	enum palette usual =
	    l->run->settings.palette == PALETTE_RED ? PALETTE_NORMAL : l->run->settings.palette;
	term_set_palette(term_palette() == PALETTE_RED ? usual : PALETTE_RED);
	l->whole = true;
}

static void serve(struct loop *l, enum want want)
{
	switch (want) {
	case WANT_LOAD:
		reload(l);
		break;
	case WANT_REPAINT:
		l->whole = true;
		break;
	case WANT_SUSPEND:
		if (!term_suspend())
			say(l, ROLE_WARN, "There is no shell here to come back from.");
		l->whole = true;
		break;
	case WANT_RED:
		change_palette(l);
		break;
	case WANT_QUIT:
		l->over = true;
		break;
	case WANT_NOTHING:
		break;
	}
}

/* All keys that wait, before anything is drawn: a slow line then drops frames and not keys. */
static void drain_keys(struct loop *l)
{
	uint32_t code;
	while (!l->over && term_key(&code)) {
		if (code == PRESS_RESIZE)
			resize(l);
		else
			serve(l, l->page->key(l->state, code));
	}
}

static double to_next_tick_s(const struct run *r, struct utc now)
{
	if (r->wall.fixed && !r->wall.running)
		return FROZEN_CLOCK_WAIT_S;
	return fmax(1.0 - (now.sod_s - floor(now.sod_s)), 0.01);
}

static void turn(struct loop *l)
{
	struct utc now = wall_now(&l->run->wall);
	follow_store(l);
	l->page->tick(l->state, now);
	l->page->draw(l->state, &l->grid);
	term_show(&l->grid, l->whole);
	l->whole = false;
	switch (term_wait(to_next_tick_s(l->run, now))) {
	case TERM_ENDED:
	case TERM_LOST:
		l->over = true;
		break;
	case TERM_WOKEN:
		resize(l);
		break;
	case TERM_KEYS:
		break;
	}
	drain_keys(l);
}

static enum status start(struct loop *l, int32_t evening_mjd, struct err *e)
{
	l->data_version = data_version(l->run);
	l->page->open(l->state, l->run);
	l->page->go_to(l->state, evening_mjd);
	l->page->tick(l->state, wall_now(&l->run->wall));
	return l->page->load(l->state, l->run, e);
}

int page_run(struct run *r, int32_t evening_mjd, struct err *e)
{
	struct loop l = {.run = r, .page = &page_night, .state = malloc(page_night.bytes)};
	const struct term_options look = {.utf8 = r->env->utf8,
					  .no_color = r->env->no_color,
					  .glyphs = r->settings.glyphs,
					  .palette = r->settings.palette};
	if (!l.state) {
		err_set(e, ST_MEMORY, "no memory for the page");
		return 1;
	}
	enum status s = start(&l, evening_mjd, e);
	if (s == ST_OK)
		s = term_open(&look, e);
	if (s == ST_OK) {
		l.grid.tier = term_tier();
		resize(&l);
		while (!l.over)
			turn(&l);
		term_close();
	}
	grid_close(&l.grid);
	l.page->close(l.state);
	free(l.state);
	return s == ST_OK ? 0 : 1;
}
