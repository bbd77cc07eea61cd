/* SPDX-License-Identifier: MIT */
#include "ephem/running_order.h"

#include "ephem/running_order_parts.h"

#include <math.h>
#include <stdlib.h>

enum { LOOKS_BUILT_IN = 100000, ITEMS_MAX = 200000 /* so that a score fits 64 bits */ };
static const double step_least = 1e-9; /* of worth */
static const double worth_most = 1e9;

static enum status no_memory(size_t n, struct err *e)
{
	return err_set(e, ST_MEMORY, "no memory for a running order of %zu items", n);
}

static enum status check_item(const struct order_item *item, size_t index, int n_events, struct err *e)
{
	if (!isfinite(item->from_d) || !isfinite(item->to_d) || !(item->from_d <= item->to_d))
		return err_set(e, ST_RANGE,
			       "item %zu from %.17g d to %.17g d: expected finite times, the start first",
			       index, item->from_d, item->to_d);
	if (item->n_events < 0 || item->n_events > ORDER_EVENTS_MAX)
		return err_set(e, ST_RANGE, "item %zu holds %d events: expected 0 to %d", index,
			       item->n_events, ORDER_EVENTS_MAX);
	for (int i = 0; i < item->n_events; i++)
		if (item->event[i] < 0 || item->event[i] >= n_events)
			return err_set(e, ST_RANGE, "item %zu holds event %d: expected 0 to %d", index,
				       item->event[i], n_events - 1);
	return ST_OK;
}

static enum status check(const struct order_work *w, struct err *e)
{
	const struct order_gaps *g = w->gaps;
	if (!(g->least_d >= 0.0) || !(g->most_d >= g->least_d) || !isfinite(g->most_d))
		return err_set(e, ST_RANGE,
			       "gaps of %.17g d to %.17g d: expected 0 or more, finite, the least first",
			       g->least_d, g->most_d);
	if (w->choice->n_events < 0 || w->n > ITEMS_MAX)
		return err_set(e, ST_RANGE, "%zu items of %d events: too many or below 0", w->n,
			       w->choice->n_events);
	for (size_t i = 0; i < w->n; i++) {
		enum status s = check_item(&w->item[i], i, w->choice->n_events, e);
		if (s != ST_OK)
			return s;
	}
	return ST_OK;
}

static int compare_places(const void *pa, const void *pb)
{
	const struct order_place *a = pa, *b = pb;
	if (a->to_d != b->to_d)
		return a->to_d < b->to_d ? -1 : 1;
	if (a->from_d != b->from_d)
		return a->from_d < b->from_d ? -1 : 1;
	return (a->index > b->index) - (a->index < b->index);
}

static enum status place_items(struct order_work *w, struct err *e)
{
	w->place = calloc(w->n + 1, sizeof *w->place);
	w->fixed = calloc(w->n + 1, sizeof *w->fixed);
	w->held = calloc((size_t)w->choice->n_events + 1, sizeof *w->held);
	if (!w->place || !w->fixed || !w->held)
		return no_memory(w->n, e);
	for (size_t i = 0; i < w->n; i++)
		w->place[i] = (struct order_place){w->item[i].to_d, w->item[i].from_d, i};
	qsort(w->place, w->n, sizeof *w->place, compare_places);
	for (size_t k = 0; k < w->n; k++) {
		const struct order_item *item = &w->item[w->place[k].index];
		if (!item->fixed)
			continue;
		w->fixed[w->n_fixed++] = w->place[k].index;
		for (int i = 0; i < item->n_events; i++)
			w->held[item->event[i]] = true;
	}
	return ST_OK;
}

/* In order of ends, two that overlap have neighbours that overlap. */
static enum status fixed_apart(const struct order_work *w, size_t conflict[2], struct err *e)
{
	for (size_t k = 1; k < w->n_fixed; k++) {
		size_t a = w->fixed[k - 1], b = w->fixed[k];
		if (w->item[a].to_d <= w->item[b].from_d)
			continue;
		if (conflict) {
			conflict[0] = a;
			conflict[1] = b;
		}
		return err_set(e, ST_CONFLICT,
			       "fixed items %zu and %zu overlap: expected one after the other", a, b);
	}
	return ST_OK;
}

/* Whether every fixed item leaves room; before: how many of them come first in time. */
static bool fixed_leave_room(const struct order_work *w, const struct order_item *item, size_t before)
{
	for (size_t k = 0; k < w->n_fixed; k++) {
		const struct order_item *fixed = &w->item[w->fixed[k]];
		const struct order_item *a = k < before ? fixed : item, *b = k < before ? item : fixed;
		if (!order_gap_holds(w->gaps, a->to_d, a->gap_class, b->from_d, b->gap_class))
			return false;
	}
	return true;
}

/* Copies the events, each once, and counts the pinned ones. False: one of them is dropped or in a fixed item.
 */
static bool copy_events(const struct order_work *w, const struct order_item *item, struct order_spot *spot)
{
	const struct order_choice *c = w->choice;
	for (int i = 0; i < item->n_events; i++) {
		int event = item->event[i];
		bool again = false;
		if (w->held[event] || (c->event_dropped && c->event_dropped[event]))
			return false;
		for (int k = 0; k < spot->n_events; k++)
			again = again || spot->event[k] == event;
		if (again)
			continue;
		spot->event[spot->n_events++] = event;
		spot->pins += c->event_pinned && c->event_pinned[event];
	}
	return true;
}

static void pick_spots(struct order_work *w)
{
	size_t before = 0;
	for (size_t k = 0; k < w->n; k++) {
		const struct order_item *item = &w->item[w->place[k].index];
		struct order_spot *spot = &w->net.spot[w->net.n];
		if (item->fixed) {
			before++;
			continue;
		}
		*spot = (struct order_spot){.from_d = item->from_d,
					    .to_d = item->to_d,
					    .gap_class = item->gap_class,
					    .segment = (int)before,
					    .index = w->place[k].index};
		if (copy_events(w, item, spot) && fixed_leave_room(w, item, before))
			w->net.n++;
	}
}

/* NAN and what is below 0 count as 0. */
static double worth_counted(const struct order_item *item)
{
	return !(item->worth > 0.0) ? 0.0 : item->worth > worth_most ? worth_most : item->worth;
}

/* No order holds more items: the longest chain of intervals that only touch, by earliest end. */
static int longest(const struct order_work *w)
{
	int length = 0;
	double end_d = -(double)INFINITY;
	for (int j = 0; j < w->net.n; j++) {
		if (w->net.spot[j].from_d < end_d)
			continue;
		end_d = w->net.spot[j].to_d;
		length++;
	}
	return length;
}

static void set_scores(struct order_net *net)
{
	for (int j = 0; j < net->n; j++)
		net->score[j] =
		    (net->spot[j].pins * net->scale.pin_units + net->spot[j].units) * net->scale.item_share -
		    1;
}

static int64_t common_measure(int64_t a, int64_t b)
{
	while (b != 0) {
		int64_t rest = a % b;
		a = b;
		b = rest;
	}
	return a;
}

/* Where the greatest score would not fit, the step of worth is doubled until it does. That takes worths whose
 * sum in steps of 1e-9 has 17 digits or more, and a double knows no better. */
static void set_scale(struct order_work *w)
{
	struct order_net *net = &w->net;
	const double sum_max = 0x1p58;
	double worth_max = 0.0, step = step_least, length = longest(w);
	int pins_max = 0;
	for (int j = 0; j < net->n; j++) {
		worth_max = fmax(worth_max, worth_counted(&w->item[net->spot[j].index]));
		pins_max = net->spot[j].pins > pins_max ? net->spot[j].pins : pins_max;
	}
	const double pins_all = (length * pins_max + 1.0) * (w->may_force ? 2.0 : 1.0);
	while (pins_all * (2.0 * length * worth_max / step + 2.0) * (length + 1.0) > sum_max &&
	       step < worth_max)
		step *= 2.0;
	struct order_scale scale = {.step = step, .item_share = (int64_t)length + 1};
	int64_t units_max = 0;
	for (int j = 0; j < net->n; j++) {
		struct order_spot *spot = &net->spot[j];
		double worth = worth_counted(&w->item[spot->index]);
		spot->units = llround(step > step_least ? worth / step : worth * 1e9);
		scale.common = common_measure(spot->units, scale.common);
		units_max = spot->units > units_max ? spot->units : units_max;
	}
	scale.common = scale.common > 0 ? scale.common : 1;
	scale.pin_units = ((int64_t)length * units_max / scale.common + 1) * scale.common;
	scale.force =
	    w->may_force ? ((int64_t)length * pins_max + 1) * scale.pin_units * scale.item_share : 0;
	net->scale = scale;
	set_scores(net);
}

static enum status build_net(struct order_work *w, struct err *e)
{
	struct order_net *net = &w->net;
	size_t n = w->n + 1;
	net->gaps = w->gaps;
	net->spot = calloc(n, sizeof *net->spot);
	net->score = calloc(n, sizeof *net->score);
	net->sure = calloc(n, sizeof *net->sure);
	net->near = calloc(n, sizeof *net->near);
	net->cell = calloc(n, sizeof *net->cell);
	net->value = calloc(n, sizeof *net->value);
	net->top = calloc(n, sizeof *net->top);
	net->before = calloc(n, sizeof *net->before);
	net->top_at = calloc(n, sizeof *net->top_at);
	w->found.chain = calloc(n, sizeof *w->found.chain);
	if (!net->spot || !net->score || !net->sure || !net->near || !net->cell || !net->value || !net->top ||
	    !net->before || !net->top_at || !w->found.chain)
		return no_memory(w->n, e);
	pick_spots(w);
	set_scale(w);
	return order_net_link(net, e);
}

void order_work_close(struct order_work *w)
{
	free(w->place);
	free(w->fixed);
	free(w->held);
	free(w->net.spot);
	free(w->net.score);
	free(w->net.sure);
	free(w->net.near);
	free(w->net.cell);
	free(w->net.asked);
	free(w->net.value);
	free(w->net.top);
	free(w->net.before);
	free(w->net.top_at);
	free(w->found.chain);
}

/* Worth that free items can add at most, pins and events not looked at. */
static int64_t relaxed_units(struct order_work *w)
{
	for (int j = 0; j < w->net.n; j++)
		w->net.score[j] = w->net.spot[j].units;
	const int64_t most = order_relaxed(&w->net, w->net.score);
	set_scores(&w->net);
	return most;
}

/* Of the sum of the fixed items, in steps of 1e-9, and of units of the chosen ones. */
static double worth_of(const struct order_scale *scale, double fixed_steps, int64_t units)
{
	return scale->step > step_least ? fixed_steps / 1e9 + (double)units * scale->step
					: (fixed_steps + (double)units) / 1e9;
}

/* Merges chosen and fixed items in order of time, adds up what they are worth and counts the pins. */
enum status order_work_result(struct order_work *w, size_t taken[], struct order_result *out, struct err *e)
{
	const struct order_found *found = &w->found;
	const struct order_scale scale = w->net.scale;
	double fixed_steps = 0.0;
	int64_t units = 0, pins = 0;
	bool *covered = calloc((size_t)w->choice->n_events + 1, sizeof *covered);
	if (!covered)
		return no_memory(w->n, e);
	*out = (struct order_result){.optimal = found->optimal};
	for (size_t k = 0, next = 0; k < w->n; k++) {
		const struct order_item *item = &w->item[w->place[k].index];
		bool chosen =
		    next < (size_t)found->n && w->net.spot[found->chain[next]].index == w->place[k].index;
		if (chosen) {
			units += w->net.spot[found->chain[next]].units;
			pins += w->net.spot[found->chain[next]].pins;
			next++;
		} else if (item->fixed) {
			fixed_steps += (double)llround(worth_counted(item) * 1e9);
		} else {
			continue;
		}
		taken[out->n++] = w->place[k].index;
		for (int i = 0; i < item->n_events; i++)
			covered[item->event[i]] = true;
	}
	for (int event = 0; event < w->choice->n_events; event++)
		out->pins_missed +=
		    w->choice->event_pinned && w->choice->event_pinned[event] && !covered[event];
	free(covered);
	out->worth = out->bound = worth_of(&scale, fixed_steps, units);
	if (!out->optimal) {
		int64_t most = (found->bound + scale.item_share - 1) / scale.item_share;
		int64_t above = most / scale.pin_units == pins ? most % scale.pin_units : relaxed_units(w);
		out->bound = worth_of(&scale, fixed_steps, above);
	}
	return ST_OK;
}

enum status order_work_open(struct order_work *w, size_t conflict[2], struct err *e)
{
	enum status s = check(w, e);
	if (s == ST_OK)
		s = place_items(w, e);
	if (s == ST_OK)
		s = fixed_apart(w, conflict, e);
	return s == ST_OK ? build_net(w, e) : s;
}

enum status running_order(const struct order_item item[], size_t n, const struct order_gaps *gaps,
			  const struct order_choice *choice, size_t taken[], struct order_result *out,
			  size_t conflict[2], struct err *e)
{
	struct order_work w = {.item = item, .gaps = gaps, .choice = choice, .n = n};
	long looks = choice->nodes_max > 0 ? choice->nodes_max : LOOKS_BUILT_IN;
	*out = (struct order_result){0};
	enum status s = order_work_open(&w, conflict, e);
	if (s == ST_OK)
		s = order_split(&w.net, choice->n_events, looks, &w.found, e);
	if (s == ST_OK)
		s = order_work_result(&w, taken, out, e);
	order_work_close(&w);
	return s;
}
