/* SPDX-License-Identifier: MIT
 * What the night page loads, and its table of functions. */
#include "tui/pages/night_page.h"

#include <math.h>
#include <stdio.h>

/* The night with all that is hidden otherwise. */
static enum status add_long_shots(struct run *r, struct night_view *v, struct err *e)
{
	const struct window_choice choice = {.kinds = r->kinds, .all = true, .free = &v->free};
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

static enum status choose_wanted_site(struct night_page *p, struct run *run, struct err *e)
{
	bool tonight = p->loaded && p->wanted_mjd == night_date_of(run->site.lon_east_deg, p->now);
	enum status s = run_choose_site(run, (size_t)p->wanted_site, e);
	p->wanted_site = NO_SITE;
	if (s == ST_OK && tonight) /* it may have another date there */
		p->wanted_mjd = night_date_of(run->site.lon_east_deg, p->now);
	return s;
}

enum status night_page_load(struct night_page *p, struct run *run, struct err *e)
{
	struct night_view view = {.hidden = 0};
	enum status s = ST_OK;
	if (!run->site.name || !run->site.name[0] || run->targets.n == 0) {
		p->mode = MODE_FIRST_RUN;
		night_page_make_text(p);
		return ST_OK;
	}
	if (p->mode == MODE_FIRST_RUN)
		p->mode = MODE_LIST;
	if (p->wanted_site != NO_SITE)
		s = choose_wanted_site(p, run, e);
	if (s == ST_OK)
		s = run_night(run, p->wanted_mjd, true, &view, e);
	if (s == ST_OK && p->show_long_shots)
		s = add_long_shots(run, &view, e);
	if (s == ST_OK) {
		s = night_page_take(p, &view, e);
		if (s == ST_OK && run->n_prepared <= PLAN_AT_ONCE)
			night_page_work(p, run);
		return s;
	}
	night_view_free(&view);
	if (p->loaded)
		p->wanted_mjd = p->view.night.mjd;
	return s;
}

static bool cost_waits(const struct night_page *p)
{
	return p->mode == MODE_DETAILS && p->plan.cost_waits;
}

bool night_page_work_waits(const struct night_page *p)
{
	return p->loaded && (p->plan.waits || cost_waits(p));
}

static void work_out_plan(struct night_page *p, struct run *run)
{
	char fault[MESSAGE_BYTES];
	struct err e;
	if (page_plan_load(&p->plan, run, p->view.night.mjd, NULL, fault, sizeof fault, &e) != ST_OK) {
		p->plan.waits = false;
		snprintf(fault, sizeof fault, "No plan: %.400s", e.text);
	}
	if (fault[0])
		night_page_say(p, ROLE_WARN, fault);
	night_page_show_plan(p);
}

static void work_out_cost(struct night_page *p, struct run *run)
{
	char event[EDIT_TEXT_BYTES];
	const struct night_row *row = night_page_selected(p);
	struct err e;
	p->plan.cost_waits = false;
	if (!row)
		return;
	page_plan_event(row, event);
	if (page_plan_cost(&p->plan, run, p->view.night.mjd, event, &e) != ST_OK)
		p->plan.cost = NAN; /* why it was left out is told all the same */
	night_page_settle(p);
}

void night_page_work(struct night_page *p, struct run *run)
{
	if (!p->loaded)
		return;
	if (p->plan.waits)
		work_out_plan(p, run);
	else if (cost_waits(p))
		work_out_cost(p, run);
}

/* --- the table, over states of no type --- */

static void open_state(void *state, const struct run *run)
{
	night_page_open(state, run);
}
static void close_state(void *state)
{
	night_page_close(state);
}
static void go_to(void *state, int32_t evening_mjd)
{
	((struct night_page *)state)->wanted_mjd = evening_mjd;
}
static void drop(void *state)
{
	night_page_drop(state);
}
static enum status load(void *state, struct run *run, struct err *e)
{
	return night_page_load(state, run, e);
}
static void size(void *state, int rows, int cols, enum tier tier)
{
	night_page_size(state, rows, cols, tier);
}
static void tick(void *state, struct utc now)
{
	night_page_tick(state, now);
}
static enum want key(void *state, uint32_t code)
{
	return night_page_key(state, code);
}
static void say(void *state, enum role role, const char *text)
{
	night_page_say(state, role, text);
}
static void draw(const void *state, struct grid *g)
{
	night_page_draw(state, g);
}

static bool change(void *state, struct run *run)
{
	return night_page_change(state, run);
}
static bool work_waits(const void *state)
{
	return night_page_work_waits(state);
}
static void work(void *state, struct run *run)
{
	night_page_work(state, run);
}

const struct page page_night = {.word = "night",
				.bytes = sizeof(struct night_page),
				.open = open_state,
				.close = close_state,
				.go_to = go_to,
				.drop = drop,
				.load = load,
				.size = size,
				.tick = tick,
				.key = key,
				.say = say,
				.draw = draw,
				.change = change,
				.work_waits = work_waits,
				.work = work,
				.quiet_s = 0.4};
