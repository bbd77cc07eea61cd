/* SPDX-License-Identifier: MIT */
#include "ephem/season.h"

#include "ephem/forecast.h"
#include "ephem/siblings.h"
#include "ephem/units.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#define WIDE_SIGMA_D (15.0 * MIN_D)

void window_list_free(struct window_list *list)
{
	free(list->w);
	*list = (struct window_list){0};
}

static struct window *list_next(struct window_list *list)
{
	if (list->n == list->room) {
		const size_t room = list->room > 0 ? 2 * list->room : 64;
		struct window *w = realloc(list->w, room * sizeof *w);
		if (!w)
			return NULL;
		list->w = w;
		list->room = room;
	}
	return &list->w[list->n];
}

static int by_reserve(const void *left, const void *right)
{
	const struct window_event *a = &((const struct window *)left)->event,
				  *b = &((const struct window *)right)->event;
	if (a->reserve_start_d != b->reserve_start_d)
		return a->reserve_start_d < b->reserve_start_d ? -1 : 1;
	const int name = strcmp(a->prepared->target->name, b->prepared->target->name);
	if (name != 0)
		return name;
	if (a->kind != b->kind)
		return a->kind < b->kind ? -1 : 1;
	return (a->epoch > b->epoch) - (a->epoch < b->epoch);
}

/* What is predicted for a neighbouring night belongs to this one only by its chance. */
static bool is_listed(const struct window *w, const struct window_choice *choice)
{
	if (w->event.flags & FLAG_BIT(FLAG_OTHER_NIGHT))
		return !isnan(w->chance.ingress) && window_hidden(w) &&
		       (choice->all || window_listed(w, choice->min_chance));
	return choice->all || window_listed(w, choice->min_chance);
}

/* A target with goals none of which the event would serve. */
static void mark_goals(struct window *w, const struct night *n)
{
	const struct observed *o = w->event.prepared->observed;
	const enum band_id band = n->observing ? n->observing->optics.band : BAND_NONE;
	if (!o || o->n_goals == 0)
		return;
	const struct open_goals open = open_goals_of(o, band, jd2_value(w->event.mid_bjd.jd));
	if (open.whole + open.limb == 0)
		w->event.flags |= FLAG_BIT(FLAG_GOAL_MET);
}

static bool add_events(const struct target_night *tn, enum event_kind kind, long first, long last,
		       const struct window_choice *choice, struct window_list *list, long *hidden)
{
	for (long epoch = first; epoch <= last; epoch++) {
		struct window *w = list_next(list);
		if (!w)
			return false;
		window_make(w, tn, kind, epoch, STAGE_CHANCE);
		if (is_listed(w, choice)) {
			if (tn->night->observing) /* only of what is listed: it costs as much as the rest */
				window_make_forecast(w, tn);
			mark_goals(w, tn->night);
			list->n++;
		} else if (window_hidden(w))
			++*hidden;
	}
	return true;
}

/* An error of hours brings the neighbouring epoch into this night: at most one on each side, since beyond P/6
 * there is no chance. Four times the least error that counts is an hour: from past noon that reaches no dark
 * sky outside the polar circles. */
static void widen(const struct prepared *p, long *first, long *last)
{
	const double sigma_d = ephemeris_published_d(&p->eph, *first) * p->limits.value[LIM_ERROR_SCALE] +
			       p->eph.ttv_min * MIN_D;
	if (sigma_d > WIDE_SIGMA_D) {
		--*first;
		++*last;
	}
}

static bool add_target(const struct night *night, const struct prepared *p,
		       const struct window_choice *choice, struct sun_sets *suns, struct window_list *list,
		       long *hidden)
{
	const struct star star = night_star(night, p->target);
	struct target_night tn;
	bool ready = false;
	for (int kind = KIND_TRANSIT; kind <= KIND_OCCULTATION; kind++) {
		long first, last;
		if (!(choice->kinds & (kind == KIND_TRANSIT ? KINDS_TRANSIT : KINDS_OCCULTATION)))
			continue;
		if (!window_epochs(night, &star, p, (enum event_kind)kind, &first, &last) &&
		    last != first - 1)
			continue;
		widen(p, &first, &last);
		if (last < first)
			continue;
		if (!ready)
			tn = target_on_night(night, p, &star, suns, choice->free);
		ready = true;
		/* nothing of the night can be used and nobody asked for what is spoilt */
		if (!choice->all && choice->min_chance > 0.0 && tn.limb.n == 0)
			continue;
		if (!add_events(&tn, (enum event_kind)kind, first, last, choice, list, hidden))
			return false;
	}
	return true;
}

enum status night_windows(const struct night *night, const struct prepared prepared[], size_t n,
			  const struct window_choice *choice, struct window_list *list, long *hidden,
			  struct err *e)
{
	struct sun_sets suns = {.n = 0};
	long not_listed = 0;
	list->n = 0;
	for (size_t i = 0; i < n; i++)
		if (prepared[i].has_ephemeris &&
		    !add_target(night, &prepared[i], choice, &suns, list, &not_listed))
			return err_set(e, ST_MEMORY, "no memory for %zu windows", list->n);
	if (list->n > 1)
		qsort(list->w, list->n, sizeof *list->w, by_reserve);
	siblings_mark(night, list);
	if (hidden)
		*hidden = not_listed;
	return ST_OK;
}
