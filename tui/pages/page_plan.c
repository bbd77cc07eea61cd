/* SPDX-License-Identifier: MIT
 * Making the plan of the page: as it is stored, or worked out with what was changed. */
#include "tui/pages/page_plan.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* --- making and letting go --- */

void page_plan_made_free(struct made_plan *made)
{
	if (!made)
		return;
	plan_view_free(&made->view);
	night_view_free(&made->night);
	free(made);
}

void page_plan_drop(struct page_plan *plan)
{
	page_plan_made_free(plan->made);
	plan->made = NULL;
	plan->changed = plan->from_now = false;
	plan->cost_of[0] = '\0';
	plan->cost_waits = false;
	plan->line[0] = plan->line_short[0] = plan->line_least[0] = '\0';
}

void page_plan_free(struct page_plan *plan)
{
	page_plan_drop(plan);
	plan_edits_free(&plan->edits);
}

struct edit_night page_plan_night(const struct run *r, int32_t mjd)
{
	return (struct edit_night){r->site.id, r->telescope.id, mjd};
}

static enum status make(struct run *r, int32_t mjd, const struct plan_wish *wish, struct made_plan **out,
			struct err *e)
{
	struct made_plan *made = calloc(1, sizeof *made);
	*out = NULL;
	if (!made)
		return err_set(e, ST_MEMORY, "no memory for a plan");
	enum status s = plan_get(r, mjd, wish, &made->night, &made->view, NULL, e);
	if (s != ST_OK) {
		night_view_free(&made->night);
		free(made);
		return s;
	}
	made->costs = wish->costs;
	*out = made;
	return ST_OK;
}

enum status page_plan_other(struct run *r, int32_t mjd, const char *draft, bool afresh,
			    struct made_plan **out, struct err *e)
{
	const struct plan_wish wish = {.draft = draft, .afresh = afresh, .moved_min = NAN};
	return make(r, mjd, &wish, out, e);
}

/* Nothing is stored, the night runs, and the proposal would have begun already: what is left of the night is
 * proposed, since nobody can say what was done of the rest. */
static bool begins_in_the_past(const struct made_plan *made)
{
	const struct plan_view *v = &made->view;
	const struct night *night = &made->night.night;
	const struct utc now = wall_now(&v->run->wall);
	const double now_d = night_of_utc(night, now);
	if (v->edition > 0 || !(now_d >= 0.0 && now_d <= night->length_d))
		return false;
	for (size_t i = 0; i < v->n_items; i++)
		if (utc_diff_s(&v->run->leap, now, v->item[i].slew_by) < 0.0)
			return true;
	return false;
}

/* The next whole minute. */
static void minute_text(const struct run *r, char out[UTC_TEXT_MAX])
{
	char text[UTC_TEXT_MAX];
	utc_text(&r->leap, utc_add_s(&r->leap, wall_now(&r->wall), 60.0), 0, text);
	snprintf(out, UTC_TEXT_MAX, "%.16sZ", text); /* without its seconds */
}

static enum status make_wished(struct run *r, int32_t mjd, struct plan_wish *wish, struct made_plan **out,
			       bool *from_now, struct err *e)
{
	char from[UTC_TEXT_MAX];
	enum status s = make(r, mjd, wish, out, e);
	*from_now = s == ST_OK && begins_in_the_past(*out);
	if (!*from_now)
		return s;
	page_plan_made_free(*out);
	minute_text(r, from);
	wish->from = from;
	s = make(r, mjd, wish, out, e);
	wish->from = NULL;
	return s;
}

static bool does_not_fit(enum status s)
{
	return s == ST_ABSENT || s == ST_SYNTAX || s == ST_RANGE || s == ST_CONFLICT;
}

/* By the edits of the night; *from_now as it was made. */
static enum status make_edited(struct page_plan *plan, struct run *r, int32_t mjd, struct made_plan **out,
			       bool *from_now, bool *changed, struct err *e)
{
	const struct edit_night night = page_plan_night(r, mjd);
	struct edit_wish *w = calloc(1, sizeof *w);
	if (!w)
		return err_set(e, ST_MEMORY, "no memory for a plan");
	plan_edits_wish(&plan->edits, &night, w);
	w->wish.costs = r->n_prepared <= PLAN_COSTS_AT_ONCE;
	const struct plan_wish *wish = &w->wish;
	*changed = wish->n_pin + wish->n_drop + wish->n_free + wish->n_lost > 0 || wish->afresh;
	enum status s = make_wished(r, mjd, &w->wish, out, from_now, e);
	free(w);
	return s;
}

enum status page_plan_load(struct page_plan *plan, struct run *r, int32_t mjd, struct made_plan **before,
			   char *fault, size_t n, struct err *e)
{
	const struct edit_night night = page_plan_night(r, mjd);
	struct made_plan *made = NULL;
	bool from_now = false, changed = false;
	if (fault)
		fault[0] = '\0';
	enum status s = make_edited(plan, r, mjd, &made, &from_now, &changed, e);
	if (fault && does_not_fit(s) && plan_edits_of(&plan->edits, &night) > 0) {
		snprintf(fault, n, "What was changed and not kept is left out, it no longer fits: %.300s",
			 e->text);
		plan_edits_clear(&plan->edits, &night);
		s = make_edited(plan, r, mjd, &made, &from_now, &changed, e);
	}
	if (s != ST_OK)
		return s;
	if (before) {
		*before = plan->made;
		plan->made = NULL;
	}
	page_plan_drop(plan);
	plan->waits = false;
	plan->from_now = from_now;
	plan->made = made;
	plan->changed = changed;
	return ST_OK;
}

bool page_plan_needs_cost(const struct page_plan *plan, const struct night_row *row)
{
	char event[EDIT_TEXT_BYTES];
	if (!plan->made || plan->made->costs || plan->made->view.stored || row->plan.dropped ||
	    !page_plan_left(plan, row))
		return false;
	page_plan_event(row, event);
	return strcmp(event, plan->cost_of) != 0;
}

static double cost_of_forcing(const struct plan_view *plan, const struct plan_view *forced, const char *event)
{
	for (size_t i = 0; i < forced->n_items; i++)
		for (size_t k = 0; k < forced->item[i].n; k++) {
			const struct plan_member_view *m = &forced->item[i].member[k];
			char name[EDIT_TEXT_BYTES];
			snprintf(name, sizeof name, "%s@%ld", m->target, m->epoch);
			if (strcmp(name, event) == 0)
				return fmax(plan->worth - forced->worth, 0.0);
		}
	return NAN;
}

enum status page_plan_cost(struct page_plan *plan, struct run *r, int32_t mjd, const char *event,
			   struct err *e)
{
	const struct edit_night night = page_plan_night(r, mjd);
	struct edit_wish *w = calloc(1, sizeof *w);
	struct made_plan *forced = NULL;
	bool from_now;
	snprintf(plan->cost_of, sizeof plan->cost_of, "%s", event);
	plan->cost = NAN;
	if (!w)
		return err_set(e, ST_MEMORY, "no memory for a plan");
	plan_edits_wish(&plan->edits, &night, w);
	enum status s = ST_OK;
	if (w->wish.n_pin == EDITS_MAX)
		s = err_set(e, ST_RANGE, "too many pins");
	else {
		w->pin[w->wish.n_pin++] = event;
		s = make_wished(r, mjd, &w->wish, &forced, &from_now, e);
	}
	free(w);
	if (s != ST_OK)
		return s;
	plan->cost = cost_of_forcing(&plan->made->view, &forced->view, event);
	page_plan_made_free(forced);
	return ST_OK;
}
