/* SPDX-License-Identifier: MIT */
#include "tui/pages/page_run.h"

#include "tui/pages/night_page.h"
#include "tui/parts/term.h"

#include <math.h>
#include <stdlib.h>

#define FROZEN_CLOCK_WAIT_S 3600.0

struct loop {
	struct run *run;
	struct night_page *page;
	struct grid grid;
	bool over, whole;
};

/* The night with all that is hidden otherwise. */
static enum status add_long_shots(struct run *r, struct night_view *v, struct err *e)
{
	const struct window_choice choice = {.kinds = r->kinds, .all = true};
	double min_chance = run_min_chance(r, true);
	enum status s = night_windows(&v->night, r->prepared, r->n_prepared, &choice, &v->list, NULL, e);
	size_t kept = 0;
	for (size_t i = 0; s == ST_OK && i < v->list.n; i++) {
		const struct window *w = &v->list.w[i];
		if (r->options->all || window_hidden(w) || window_listed(w, min_chance))
			v->list.w[kept++] = *w;
	}
	v->list.n = kept;
	v->hidden = 0;
	return s;
}

/* The night that the page wants; what was shown stays when it can't be made. */
static enum status load_night(struct loop *l, struct err *e)
{
	struct night_view view = {.hidden = 0};
	struct run *r = l->run;
	enum status s = run_night(r, l->page->wanted_mjd, true, &view, e);
	if (s == ST_OK && l->page->show_long_shots)
		s = add_long_shots(r, &view, e);
	if (s != ST_OK) {
		night_view_free(&view);
		return s;
	}
	return night_page_take(l->page, &view, e);
}

static void reload(struct loop *l)
{
	struct err e;
	if (load_night(l, &e) != ST_OK) {
		l->page->wanted_mjd = l->page->view.night.mjd;
		night_page_say(l->page, ROLE_BAD, e.text);
	}
}

static void resize(struct loop *l)
{
	int rows, cols;
	struct err e;
	term_size(&rows, &cols);
	if (grid_resize(&l->grid, rows, cols, &e) != ST_OK) {
		night_page_say(l->page, ROLE_BAD, e.text);
		return;
	}
	night_page_size(l->page, l->grid.rows, l->grid.cols);
	l->whole = true;
}

static void change_palette(struct loop *l)
{
	if (!term_has_colour()) {
		night_page_say(l->page, ROLE_WARN,
			       "Colours are off here (NO_COLOR, or a terminal without them).");
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
	case WANT_NIGHT:
		reload(l);
		break;
	case WANT_REPAINT:
		l->whole = true;
		break;
	case WANT_SUSPEND:
		if (!term_suspend())
			night_page_say(l->page, ROLE_WARN, "There is no shell here to come back from.");
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
			serve(l, night_page_key(l->page, code));
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
	night_page_tick(l->page, now);
	night_page_draw(l->page, &l->grid);
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
	night_page_open(l->page, l->run);
	l->page->wanted_mjd = evening_mjd;
	night_page_tick(l->page, wall_now(&l->run->wall));
	if (l->page->mode == MODE_FIRST_RUN)
		return ST_OK;
	return load_night(l, e);
}

int page_run(struct run *r, int32_t evening_mjd, struct err *e)
{
	struct loop l = {.run = r, .page = malloc(sizeof *l.page)};
	const struct term_options look = {.utf8 = r->env->utf8,
					  .no_color = r->env->no_color,
					  .glyphs = r->settings.glyphs,
					  .palette = r->settings.palette};
	if (!l.page) {
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
	night_page_close(l.page);
	free(l.page);
	return s == ST_OK ? 0 : 1;
}
