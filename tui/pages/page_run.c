/* SPDX-License-Identifier: MIT */
#include "tui/pages/page_run.h"

#include "tui/pages/page.h"
#include "tui/parts/keys.h"
#include "tui/parts/term.h"

#include <math.h>
#include <stdlib.h>

#define FROZEN_CLOCK_WAIT_S 3600.0

enum { PAGE_NIGHT, PAGE_DRIFT, PAGES };
static const struct page *const pages[PAGES] = {&page_night, &page_drift};

struct loop {
	struct run *run;
	const struct page *page; /* the one on the screen */
	void *state;		 /* its own */
	void *states[PAGES];	 /* NULL: not opened yet */
	int32_t evening_mjd;	 /* to begin with */
	struct grid grid;
	bool over, whole;
	long data_version; /* of the store, when it was read */
	double quiet_s;	   /* since the last key or piece of work */
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

/* What pages borrow is about to be made anew. */
static void drop_all(struct loop *l)
{
	for (int i = 0; i < PAGES; i++)
		if (l->states[i])
			pages[i]->drop(l->states[i]);
}

/* All lists are read again; said: what the user is told. */
static void read_again(struct loop *l, const char *said)
{
	struct err e;
	l->data_version = data_version(l->run);
	drop_all(l);
	if (run_reload(l->run, &e) != ST_OK) {
		l->data_version = -1; /* tried again with the next tick */
		say(l, ROLE_BAD, e.text);
		return;
	}
	if (said)
		say(l, ROLE_TEXT, said);
	reload(l);
}

/* Another program changed the store: everything is read again. */
static void follow_store(struct loop *l)
{
	if (data_version(l->run) != l->data_version)
		read_again(l, "Another program changed what is stored; it was read again.");
}

/* A page is opened when it is shown first, and loads what it shows each time: the site may be another one. */
static bool show_page(struct loop *l, int which)
{
	if (!l->states[which]) {
		l->states[which] = malloc(pages[which]->bytes);
		if (!l->states[which]) {
			say(l, ROLE_BAD, "no memory for the page");
			return false;
		}
		pages[which]->open(l->states[which], l->run);
		pages[which]->go_to(l->states[which], l->evening_mjd);
	}
	l->page = pages[which];
	l->state = l->states[which];
	l->page->tick(l->state, wall_now(&l->run->wall));
	return true;
}

static void turn_to_page(struct loop *l, int which)
{
	if (l->page == pages[which] || !show_page(l, which))
		return;
	l->page->drop(l->state);
	l->page->size(l->state, l->grid.rows, l->grid.cols, l->grid.tier);
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
	case WANT_NIGHT_PAGE:
		turn_to_page(l, PAGE_NIGHT);
		break;
	case WANT_DRIFT_PAGE:
		turn_to_page(l, PAGE_DRIFT);
		break;
	case WANT_CHANGE:
		if (l->page->change(l->state, l->run))
			read_again(l, NULL);
		break;
	case WANT_QUIT:
		l->over = true;
		break;
	case WANT_NOTHING:
		break;
	}
}

/* All keys that wait, before anything is drawn: a slow line then drops frames and not keys. False: there was
 * none. */
static bool drain_keys(struct loop *l)
{
	uint32_t code;
	bool any = false;
	while (!l->over && term_key(&code)) {
		any = true;
		if (code == PRESS_RESIZE)
			resize(l);
		else
			serve(l, l->page->key(l->state, code));
	}
	return any;
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
	bool works = l->page->work_waits && l->page->work_waits(l->state);
	double wait_s = to_next_tick_s(l->run, now);
	if (works)
		wait_s = fmin(wait_s, fmax(l->page->quiet_s - l->quiet_s, 0.0));
	switch (term_wait(wait_s)) {
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
	if (drain_keys(l)) {
		l->quiet_s = 0.0;
		return;
	}
	l->quiet_s += wait_s;
	if (works && !l->over && l->quiet_s > l->page->quiet_s - 1e-3)
		l->page->work(l->state, l->run);
}

static enum status start(struct loop *l, struct err *e)
{
	l->data_version = data_version(l->run);
	l->states[PAGE_NIGHT] = malloc(page_night.bytes);
	if (!l->states[PAGE_NIGHT])
		return err_set(e, ST_MEMORY, "no memory for the page");
	l->page->open(l->states[PAGE_NIGHT], l->run);
	l->page->go_to(l->states[PAGE_NIGHT], l->evening_mjd);
	if (!show_page(l, PAGE_NIGHT))
		return err_set(e, ST_MEMORY, "no memory for the page");
	return l->page->load(l->state, l->run, e);
}

static void close_pages(struct loop *l)
{
	for (int i = 0; i < PAGES; i++)
		if (l->states[i]) {
			pages[i]->close(l->states[i]);
			free(l->states[i]);
		}
}

int page_run(struct run *r, int32_t evening_mjd, struct err *e)
{
	struct loop l = {.run = r, .page = &page_night, .evening_mjd = evening_mjd};
	const struct term_options look = {.utf8 = r->env->utf8,
					  .no_color = r->env->no_color,
					  .glyphs = r->settings.glyphs,
					  .palette = r->settings.palette};
	enum status s = start(&l, e);
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
	close_pages(&l);
	return s == ST_OK ? 0 : 1;
}
