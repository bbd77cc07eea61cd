/* SPDX-License-Identifier: MIT
 * Every event once: branch and bound on the relaxed answer.
 * Where the relaxed answer takes an event twice, one branch keeps the earlier holders of the event and the
 * other the later ones; no order that takes it once is lost. The bound of a branch: each event asks a fee of
 * the items that hold it, and the fees are added to the relaxed answer of what is left. For any fees >= 0
 * that is an upper bound (Lagrangian relaxation; Fisher 1981, Management Science 27, 1, from memory); the
 * fees follow the excess by subgradient steps (Held, Wolfe & Crowder 1974, Math. Programming 6, 62, from
 * memory). All sums are whole numbers, so a bound is never wrong by rounding. */
#include "ephem/running_order_parts.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum { ROOT_ROUNDS = 60, BRANCH_ROUNDS = 12, PATIENCE = 4, MAKE_EVERY = 12 };
/* After so many looks an order that only has fewer items for the same worth is no longer looked for. */
enum { TIE_LOOKS = 3000 };
#define SUM_MAX ((int64_t)1 << 61)

struct search {
	struct order_net *net;
	int n_events, n_shared;
	int *shared;		 /* events with two holders or more */
	int64_t *fee;		 /* [n_events] */
	int *count;		 /* [n_events]: times taken */
	int *holder_at, *holder; /* [n_events + 1]; ranks that hold an event, ascending */
	int *barred;		 /* [n]: branches that bar the rank */
	int64_t *gain;		 /* [n] */
	int *plain, *chain;	 /* [n] */
	long looks, looks_max;
	double stride;
	int64_t *end, *beyond; /* of order_ends */
	int *hopeless,
	    n_hopeless; /* ranks barred for their bound, each branch's above those of the branches over it */
	int64_t open;	/* bound of branches that were not looked into */
	struct order_found *found;
	struct order_maker maker;
};
struct cut {
	int event, rank; /* holders below the rank, and those from it on */
};

/* Pins and worth of a score or of a bound, in units: rounded down to what a sum of worths can be. */
static int64_t amount(const struct order_scale *scale, int64_t score)
{
	int64_t units = (score + scale->item_share - 1) / scale->item_share;
	return units - units % scale->common;
}

static int64_t tightened(const struct search *s, int64_t bound)
{
	const struct order_scale *scale = &s->net->scale;
	int64_t most = amount(scale, bound) * scale->item_share - 1;
	return most < bound ? most : bound;
}

static bool closed(const struct search *s, int64_t bound)
{
	const struct order_scale *scale = &s->net->scale;
	return bound <= s->found->score ||
	       (s->looks > TIE_LOOKS && amount(scale, bound) <= amount(scale, s->found->score));
}

/* Relaxed answer of this branch under the fees (NULL: none), made into an order; *n is its length. Returns
 * the bound that it gives. */
static int64_t look(struct search *s, const int64_t fee[], int chain[], int *n)
{
	const struct order_net *net = s->net;
	for (int j = 0; j < net->n; j++) {
		s->gain[j] = s->barred[j] ? ORDER_BARRED : net->score[j];
		if (fee && !s->barred[j])
			for (int i = 0; i < net->spot[j].n_events; i++)
				s->gain[j] -= fee[net->spot[j].event[i]];
	}
	s->looks++;
	int64_t sum = order_relaxed(s->net, s->gain);
	for (int i = 0; fee && i < s->n_shared && sum < SUM_MAX; i++)
		sum += fee[s->shared[i]];
	*n = order_chain(net, chain);
	order_make_from_chain(&s->maker, chain, *n);
	return sum < SUM_MAX ? tightened(s, sum) : INT64_MAX;
}

static void count_events(struct search *s, const int chain[], int n)
{
	memset(s->count, 0, (size_t)s->n_events * sizeof *s->count);
	for (int k = 0; k < n; k++)
		for (int i = 0; i < s->net->spot[chain[k]].n_events; i++)
			s->count[s->net->spot[chain[k]].event[i]]++;
}

/* A fee rises where its event was taken too often and falls where it was not taken; the step is the gap to
 * close over the square of the excess. */
static void adjust_fees(struct search *s, int64_t bound, const int chain[], int n)
{
	const int64_t fee_max = SUM_MAX / (2 * ORDER_EVENTS_MAX);
	double square = 0.0;
	count_events(s, chain, n);
	for (int i = 0; i < s->n_shared; i++) {
		double excess = s->count[s->shared[i]] - 1;
		if (excess > 0.0 || s->fee[s->shared[i]] > 0)
			square += excess * excess;
	}
	if (!(square > 0.0))
		return;
	double step = s->stride * (double)(bound - s->found->score) / square;
	for (int i = 0; i < s->n_shared; i++) {
		int64_t *fee = &s->fee[s->shared[i]];
		double wanted = (double)*fee + step * (s->count[s->shared[i]] - 1);
		*fee = !(wanted > 0.0) ? 0 : wanted < (double)fee_max ? (int64_t)wanted : fee_max;
	}
}

/* Of the events that the plain answer takes twice, that of the highest fee, cut at its last holder. False:
 * none. */
static bool choose_cut(const struct search *s, int n_plain, struct cut *cut)
{
	int64_t highest = -1;
	for (int k = 0; k < n_plain; k++) {
		const struct order_spot *spot = &s->net->spot[s->plain[k]];
		for (int i = 0; i < spot->n_events; i++) {
			int event = spot->event[i];
			if (s->count[event] < 2 || (s->fee[event] <= highest && event != cut->event))
				continue;
			highest = s->fee[event];
			*cut = (struct cut){event, s->plain[k]};
		}
	}
	return highest >= 0;
}

/* Bounds this branch. False: it holds nothing better than what was found, or that is found now. */
static bool narrow(struct search *s, int rounds, int64_t *bound, struct cut *cut)
{
	int n_plain, n;
	int64_t plain = look(s, NULL, s->plain, &n_plain);
	if (plain < *bound)
		*bound = plain;
	count_events(s, s->plain, n_plain);
	*cut = (struct cut){-1, -1};
	if (closed(s, *bound) || !choose_cut(s, n_plain, cut))
		return false;
	s->stride = 1.0;
	for (int round = 0, idle = 0; round < rounds && s->looks < s->looks_max; round++) {
		int64_t b = look(s, s->fee, s->chain, &n);
		idle = b < *bound ? 0 : idle + 1;
		if (b < *bound)
			*bound = b;
		if (closed(s, *bound))
			return false;
		if (idle >= PATIENCE) {
			s->stride *= 0.5;
			idle = 0;
		}
		if (round % MAKE_EVERY == MAKE_EVERY - 1)
			order_make_from_gains(&s->maker, s->gain);
		adjust_fees(s, b, s->chain, n);
	}
	count_events(s, s->plain, n_plain);
	*cut = (struct cut){-1, -1};
	return choose_cut(s, n_plain, cut);
}

static void bar(struct search *s, struct cut cut, bool late, int by)
{
	for (int k = s->holder_at[cut.event]; k < s->holder_at[cut.event + 1]; k++)
		if ((s->holder[k] >= cut.rank) == late)
			s->barred[s->holder[k]] += by;
}

/* Bars what no order better than the best found can hold, by the bound of the orders that hold it. What is
 * barred goes on the heap of the branch. */
static void bar_hopeless(struct search *s)
{
	struct order_net *net = s->net;
	int n;
	int64_t bound = look(s, s->fee, s->chain, &n);
	if (bound == INT64_MAX)
		return;
	int64_t fees = 0;
	for (int i = 0; i < s->n_shared; i++)
		fees += s->fee[s->shared[i]];
	order_ends(net, s->gain, s->end, s->beyond);
	for (int j = 0; j < net->n; j++) {
		if (s->barred[j] || !closed(s, tightened(s, net->value[j] + s->end[j] - s->gain[j] + fees)))
			continue;
		s->barred[j]++;
		s->hopeless[s->n_hopeless++] = j;
	}
}

/* Each level bars an item more, so it ends. */
static void explore(struct search *s, int rounds, int64_t bound)
{
	struct cut cut;
	if (s->looks >= s->looks_max) {
		s->open = bound > s->open ? bound : s->open;
		return;
	}
	if (!narrow(s, rounds, &bound, &cut))
		return;
	int heap = s->n_hopeless;
	bar_hopeless(s);
	for (int side = 0; side < 2 && !closed(s, bound); side++) {
		bar(s, cut, side == 0, 1);
		explore(s, BRANCH_ROUNDS, bound);
		bar(s, cut, side == 0, -1);
	}
	while (s->n_hopeless > heap)
		s->barred[s->hopeless[--s->n_hopeless]]--;
}

static void list_holders(struct search *s)
{
	const struct order_net *net = s->net;
	for (int j = 0; j < net->n; j++)
		for (int i = 0; i < net->spot[j].n_events; i++)
			s->holder_at[net->spot[j].event[i] + 1]++;
	for (int event = 0; event < s->n_events; event++) {
		if (s->holder_at[event + 1] > 1)
			s->shared[s->n_shared++] = event;
		s->holder_at[event + 1] += s->holder_at[event];
	}
	for (int j = 0; j < net->n; j++)
		for (int i = 0; i < net->spot[j].n_events; i++) {
			int event = net->spot[j].event[i];
			s->holder[s->holder_at[event] + s->count[event]++] = j;
		}
}

static bool takes_one_twice(const struct order_net *net, const int chain[], int n, bool taken[])
{
	for (int k = 0; k < n; k++)
		for (int i = 0; i < net->spot[chain[k]].n_events; i++) {
			if (taken[net->spot[chain[k]].event[i]])
				return true;
			taken[net->spot[chain[k]].event[i]] = true;
		}
	return false;
}

static bool search_open(struct search *s)
{
	size_t n = (size_t)s->net->n, events = (size_t)s->n_events, held = 0;
	for (size_t j = 0; j < n; j++)
		held += (size_t)s->net->spot[j].n_events;
	s->shared = calloc(events + 1, sizeof *s->shared);
	s->fee = calloc(events + 1, sizeof *s->fee);
	s->count = calloc(events + 1, sizeof *s->count);
	s->holder_at = calloc(events + 1, sizeof *s->holder_at);
	s->holder = calloc(held + 1, sizeof *s->holder);
	s->barred = calloc(n + 1, sizeof *s->barred);
	s->gain = calloc(n + 1, sizeof *s->gain);
	s->end = calloc(n + 1, sizeof *s->end);
	s->beyond = calloc(n + 1, sizeof *s->beyond);
	s->hopeless = calloc(n + 1, sizeof *s->hopeless);
	s->plain = calloc(n + 1, sizeof *s->plain);
	s->chain = calloc(n + 1, sizeof *s->chain);
	return s->shared && s->fee && s->count && s->holder_at && s->holder && s->barred && s->gain &&
	       s->plain && s->chain;
}

static void search_close(struct search *s)
{
	free(s->shared);
	free(s->fee);
	free(s->count);
	free(s->holder_at);
	free(s->holder);
	free(s->barred);
	free(s->gain);
	free(s->end);
	free(s->beyond);
	free(s->hopeless);
	free(s->plain);
	free(s->chain);
}

enum status order_split(struct order_net *net, int n_events, long looks_max, struct order_found *out,
			struct err *e)
{
	bool *taken = calloc((size_t)n_events + 1, sizeof *taken);
	if (!taken)
		return err_set(e, ST_MEMORY, "no memory for a running order of %d items", net->n);
	out->score = out->bound = order_relaxed(net, net->score);
	out->n = order_chain(net, out->chain);
	out->optimal = true;
	out->looks = 1;
	bool twice = takes_one_twice(net, out->chain, out->n, taken);
	free(taken);
	if (!twice)
		return ST_OK;
	struct search s = {.net = net, .n_events = n_events, .looks_max = looks_max, .found = out};
	int64_t relaxed = out->score;
	out->score = 0;
	out->n = 0;
	enum status status = order_maker_open(&s.maker, net, n_events, out, e);
	if (status == ST_OK && !search_open(&s))
		status = err_set(e, ST_MEMORY, "no memory for a running order of %d items", net->n);
	if (status == ST_OK) {
		list_holders(&s);
		explore(&s, ROOT_ROUNDS, relaxed);
		out->looks += s.looks;
		out->bound = s.open > out->score ? s.open : out->score;
		out->optimal = amount(&net->scale, out->bound) <= amount(&net->scale, out->score);
	}
	search_close(&s);
	order_maker_close(&s.maker);
	return status;
}
