/* SPDX-License-Identifier: MIT
 * The best order through an event. The best sum of an order that ends with an item and the best of one that
 * begins with it, the item counted once, are the best relaxed order through the item. Of the items of an
 * event the greatest of these sums bounds what any order with the event is worth, and is the answer where the
 * order that has it takes no event twice. */
#include "ephem/running_order_parts.h"

#include <stdlib.h>
#include <string.h>

enum { LOOKS_BUILT_IN = 2000, NONE = -1, NOT_ASKED = -2 };
/* Questions that took so many times their looks together get that part of them from then on: a night of hard
 * ones ends. */
enum { PATIENT_QUESTIONS = 50, IMPATIENT_PART = 20 };

struct order_through {
	struct order_work w;
	int64_t *value, *end;	 /* [n]: best order that ends with a rank, that begins with it */
	int *before, *after;	 /* [n]: NONE; after: NOT_ASKED until it is */
	bool *usual;		 /* [n]: it is in the relaxed answer without a question */
	int *holder_at, *holder; /* [n_events + 1]; ranks that hold an event, ascending */
	long *seen, round;	 /* [n_events]: the question that met an event last */
	long looks;		 /* of all questions */
};

static void list_holders(struct order_through *t)
{
	const struct order_net *net = &t->w.net;
	const int n_events = t->w.choice->n_events;
	for (int j = 0; j < net->n; j++)
		for (int i = 0; i < net->spot[j].n_events; i++)
			t->holder_at[net->spot[j].event[i] + 1]++;
	for (int event = 0; event < n_events; event++)
		t->holder_at[event + 1] += t->holder_at[event];
	/* the place of each event moves on to that of the next one while its holders come in */
	for (int j = 0; j < net->n; j++)
		for (int i = 0; i < net->spot[j].n_events; i++)
			t->holder[t->holder_at[net->spot[j].event[i]]++] = j;
	for (int event = n_events; event > 0; event--)
		t->holder_at[event] = t->holder_at[event - 1];
	t->holder_at[0] = 0;
}

static enum status no_memory(const struct order_through *t, struct err *e)
{
	return err_set(e, ST_MEMORY, "no memory for the orders through %d events", t->w.choice->n_events);
}

static enum status look_both_ways(struct order_through *t, struct err *e)
{
	struct order_net *net = &t->w.net;
	const size_t n = (size_t)net->n, events = (size_t)t->w.choice->n_events;
	size_t held = 0;
	for (size_t j = 0; j < n; j++)
		held += (size_t)net->spot[j].n_events;
	int64_t *beyond = calloc(n + 1, sizeof *beyond);
	t->value = calloc(n + 1, sizeof *t->value);
	t->end = calloc(n + 1, sizeof *t->end);
	t->before = calloc(n + 1, sizeof *t->before);
	t->after = calloc(n + 1, sizeof *t->after);
	t->usual = calloc(n + 1, sizeof *t->usual);
	t->holder_at = calloc(events + 1, sizeof *t->holder_at);
	t->holder = calloc(held + 1, sizeof *t->holder);
	t->seen = calloc(events + 1, sizeof *t->seen);
	const bool room = beyond && t->value && t->end && t->before && t->after && t->usual && t->holder_at &&
			  t->holder && t->seen;
	if (room) {
		list_holders(t);
		order_relaxed(net, net->score);
		memcpy(t->value, net->value, n * sizeof *t->value);
		memcpy(t->before, net->before, n * sizeof *t->before);
		order_ends(net, net->score, t->end, beyond);
		for (int k = net->top_at[n]; k >= 0; k = net->before[k])
			t->usual[k] = true;
		for (size_t j = 0; j < n; j++)
			t->after[j] = NOT_ASKED;
	}
	free(beyond);
	return room ? ST_OK : no_memory(t, e);
}

enum status order_through_open(const struct order_item item[], size_t n, const struct order_gaps *gaps,
			       const struct order_choice *choice, struct order_through **out, struct err *e)
{
	struct order_through *t = calloc(1, sizeof *t);
	*out = t;
	if (!t)
		return err_set(e, ST_MEMORY, "no memory for the orders through %d events", choice->n_events);
	t->w = (struct order_work){.item = item, .gaps = gaps, .choice = choice, .n = n, .may_force = true};
	enum status s = order_work_open(&t->w, NULL, e);
	if (s == ST_OK)
		s = look_both_ways(t, e);
	if (s != ST_OK) {
		order_through_close(t);
		*out = NULL;
	}
	return s;
}

void order_through_close(struct order_through *t)
{
	if (!t)
		return;
	order_work_close(&t->w);
	free(t->value);
	free(t->end);
	free(t->before);
	free(t->after);
	free(t->usual);
	free(t->holder_at);
	free(t->holder);
	free(t->seen);
	free(t);
}

/* What follows a rank in the best order that begins with it. */
static int after(struct order_through *t, int j)
{
	struct order_net *net = &t->w.net;
	const int64_t rest = t->end[j] - net->score[j];
	if (t->after[j] != NOT_ASKED)
		return t->after[j];
	t->after[j] = NONE;
	for (int k = j + 1; k < net->n && rest > 0; k++) {
		if (t->end[k] != rest || (t->after[j] >= 0 && !t->usual[k]) || !order_may_follow(net, j, k))
			continue;
		t->after[j] = k;
		if (t->usual[k])
			break;
	}
	return t->after[j];
}

/* The rank of the event through which most can be had. */
static int best_holder(const struct order_through *t, int event)
{
	const int64_t *score = t->w.net.score;
	int best = NONE;
	for (int k = t->holder_at[event]; k < t->holder_at[event + 1]; k++) {
		const int j = t->holder[k];
		if (best < 0 ||
		    t->value[j] + t->end[j] - score[j] > t->value[best] + t->end[best] - score[best])
			best = j;
	}
	return best;
}

/* The best relaxed order through a rank. False: it takes an event twice. */
static bool trace(struct order_through *t, int through)
{
	const struct order_net *net = &t->w.net;
	struct order_found *found = &t->w.found;
	int n = 0;
	for (int j = through; j >= 0; j = t->before[j])
		n++;
	found->n = n;
	for (int j = through; j >= 0; j = t->before[j])
		found->chain[--n] = j;
	for (int j = after(t, through); j >= 0; j = after(t, j))
		found->chain[found->n++] = j;
	t->round++;
	for (int k = 0; k < found->n; k++) {
		const struct order_spot *spot = &net->spot[found->chain[k]];
		for (int i = 0; i < spot->n_events; i++) {
			if (t->seen[spot->event[i]] == t->round)
				return false;
			t->seen[spot->event[i]] = t->round;
		}
	}
	found->score = found->bound = t->value[through] + t->end[through] - net->score[through];
	found->optimal = true;
	return true;
}

/* By branches, the holders of the event raised above all else (none: a fixed item holds it). */
static enum status split(struct order_through *t, int event, struct err *e)
{
	struct order_net *net = &t->w.net;
	struct order_found *found = &t->w.found;
	long looks = t->w.choice->nodes_max > 0 ? t->w.choice->nodes_max : LOOKS_BUILT_IN;
	if (t->looks / PATIENT_QUESTIONS >= looks)
		looks = looks > IMPATIENT_PART ? looks / IMPATIENT_PART : 1;
	for (int k = t->holder_at[event]; k < t->holder_at[event + 1]; k++)
		net->score[t->holder[k]] += net->scale.force;
	const enum status s = order_split(net, t->w.choice->n_events, looks, found, e);
	t->looks += found->looks;
	for (int k = t->holder_at[event]; k < t->holder_at[event + 1]; k++)
		net->score[t->holder[k]] -= net->scale.force;
	if (t->holder_at[event] < t->holder_at[event + 1])
		found->bound -= net->scale.force;
	return s;
}

static bool holds(const struct order_through *t, int event)
{
	for (int k = 0; k < t->w.found.n; k++) {
		const struct order_spot *spot = &t->w.net.spot[t->w.found.chain[k]];
		for (int i = 0; i < spot->n_events; i++)
			if (spot->event[i] == event)
				return true;
	}
	return t->w.held[event];
}

enum status order_through_event(struct order_through *t, int event, size_t taken[],
				struct order_result *result, bool *held, struct err *e)
{
	*result = (struct order_result){0};
	*held = false;
	if (event < 0 || event >= t->w.choice->n_events)
		return err_set(e, ST_RANGE, "event %d: expected 0 to %d", event, t->w.choice->n_events - 1);
	const int through = best_holder(t, event);
	enum status s = ST_OK;
	result->optimal = true;
	if (through < 0 && !t->w.held[event])
		return ST_OK;
	if (through < 0 || !trace(t, through))
		s = split(t, event, e);
	if (s == ST_OK)
		s = order_work_result(&t->w, taken, result, e);
	*held = s == ST_OK && holds(t, event);
	return s;
}
