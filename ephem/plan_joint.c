/* SPDX-License-Identifier: MIT
 * Every set of ways of one field that can be done at once lies within some interval [start of a way, end of a
 * way]; the best way of each event in that interval is worth no less. So it is enough to look at the
 * intervals. */
#include "ephem/plan_joint.h"

#include "ephem/plan_spans.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum {
	CROWD_MAX = 12,	 /* events kept of an interval: those of most worth */
	OPTIONAL_MAX = 5 /* events of an interval that may be left out of it */
};

struct sweep {
	const struct plan_input *in;
	const struct plan_pointings *p;
	struct intervals spans;
	size_t centre, n;
	const struct offered_ways *ways;
	const struct offered_way *way; /* of this field, by start */
	size_t *by_end;
	size_t n_inside; /* events with a way in the interval, and the best such way of each */
	struct offered_way inside[CROWD_MAX];
	struct candidate_list *list;
	size_t first; /* candidate of this centre in the list */
};

static int by_start(const void *left, const void *right)
{
	const struct offered_way *a = left, *b = right;
	if (a->way.from_d != b->way.from_d)
		return a->way.from_d < b->way.from_d ? -1 : 1;
	if (a->way.to_d != b->way.to_d)
		return a->way.to_d < b->way.to_d ? -1 : 1;
	if (a->offer != b->offer)
		return a->offer < b->offer ? -1 : 1;
	return (a->way.variant > b->way.variant) - (a->way.variant < b->way.variant);
}

static int by_worth(const void *left, const void *right)
{
	const struct offered_way *a = left, *b = right;
	if (a->way.worth != b->way.worth)
		return a->way.worth > b->way.worth ? -1 : 1;
	return (a->offer > b->offer) - (a->offer < b->offer);
}

struct end_at {
	double to_d;
	size_t index;
};

static int by_end(const void *left, const void *right)
{
	const struct end_at *a = left, *b = right;
	if (a->to_d != b->to_d)
		return a->to_d < b->to_d ? -1 : 1;
	return (a->index > b->index) - (a->index < b->index);
}

struct plan_candidate *candidate_add(struct candidate_list *list)
{
	if (list->n == list->room) {
		const size_t room = list->room ? 2 * list->room : 64;
		struct plan_candidate *c = realloc(list->c, room * sizeof *c);
		if (!c)
			return NULL;
		list->c = c;
		list->room = room;
	}
	return &list->c[list->n++];
}

/* Whether a member belongs before another: by T1, then by offer. */
static bool member_before(const struct plan_input *in, size_t a, size_t b)
{
	const double a_d = in->offer[a].window->event.t1_d, b_d = in->offer[b].window->event.t1_d;
	return a_d < b_d || (a_d == b_d && a < b);
}

void candidate_fill(struct plan_candidate *c, const struct plan_input *in, size_t centre,
		    const struct offered_way way[], size_t n)
{
	*c = (struct plan_candidate){
	    .order = {.from_d = INFINITY, .to_d = -INFINITY, .gap_class = (int)centre, .n_events = (int)n},
	    .latest_start_d = INFINITY,
	    .n = (int)n,
	};
	for (size_t i = 0; i < n; i++) {
		const struct plan_way *w = &way[i].way;
		size_t at = i;
		for (; at > 0 && member_before(in, way[i].offer, c->member[at - 1].offer); at--)
			c->member[at] = c->member[at - 1];
		c->member[at] = (struct plan_member){way[i].offer, w->variant, w->worth, w->from_d, w->to_d};
		c->order.from_d = fmin(c->order.from_d, w->from_d);
		c->order.to_d = fmax(c->order.to_d, w->to_d);
		c->latest_start_d = fmin(c->latest_start_d, w->latest_start_d);
	}
	for (size_t i = 0; i < n; i++) { /* summed in order of members: equal sets have equal sums */
		c->order.event[i] = (int)c->member[i].offer;
		c->order.worth += c->member[i].worth;
	}
}

static bool has_all_in_field(const struct sweep *s, size_t star, const struct offered_way member[], size_t n)
{
	for (size_t i = 0; i < n; i++)
		if (!plan_pointings_share(s->p, star, s->p->star[member[i].offer]))
			return false;
	return true;
}

/* The lowest star of the members that has all of them in its field; SIZE_MAX: none has. */
static size_t centre_of(const struct sweep *s, const struct offered_way member[], size_t n)
{
	size_t centre = SIZE_MAX;
	for (size_t i = 0; i < n; i++) {
		const size_t star = s->p->star[member[i].offer];
		if (star < centre && has_all_in_field(s, star, member, n))
			centre = star;
	}
	return centre;
}

static bool same_events(const struct plan_candidate *a, const struct plan_candidate *b)
{
	if (a->n != b->n)
		return false;
	for (int i = 0; i < a->n; i++)
		if (a->member[i].offer != b->member[i].offer)
			return false;
	return true;
}

/* Starts come from late to early and ends from early to late, so none that is in the list lies outside a new
 * one. */
static bool dominated(const struct sweep *s, const struct plan_candidate *c)
{
	for (size_t i = s->first; i < s->list->n; i++) {
		const struct plan_candidate *o = &s->list->c[i];
		if (o->order.to_d <= c->order.to_d && o->order.worth >= c->order.worth && same_events(o, c))
			return true;
	}
	return false;
}

/* Adds an item of these members, where they fill [from, to] and can be done from one pointing. */
static bool add_members(struct sweep *s, double from_d, double to_d, const struct offered_way member[],
			size_t n)
{
	if (n < 2 || member[0].way.from_d > from_d)
		return true;
	double reach_d = member[0].way.to_d;
	for (size_t i = 1; i < n; i++) {
		if (member[i].way.from_d > reach_d + s->in->rules->settle_d)
			return true;
		reach_d = fmax(reach_d, member[i].way.to_d);
	}
	const struct span *span = intervals_at(&s->spans, from_d);
	if (reach_d < to_d || !span || span->to_d < to_d || centre_of(s, member, n) != s->centre)
		return true;
	struct plan_candidate c;
	candidate_fill(&c, s->in, s->centre, member, n);
	if (dominated(s, &c))
		return true;
	struct plan_candidate *place = candidate_add(s->list);
	if (place)
		*place = c;
	return place != NULL;
}

/* Whether an event may be worth more in another item than in [from, to]: a way that lies outside has more
 * worth, or as much and is earlier. */
static bool better_elsewhere(const struct sweep *s, const struct offered_way *w, double from_d, double to_d)
{
	for (size_t i = s->ways->first[w->offer]; i < s->ways->first[w->offer + 1]; i++) {
		const struct plan_way *u = &s->ways->way[i].way;
		if ((u->to_d <= from_d && u->worth >= w->way.worth) ||
		    (u->from_d >= to_d && u->worth > w->way.worth))
			return true;
	}
	return false;
}

/* Adds what can be done in [from, to]: all of it, and what is left of it without events that may be worth
 * more elsewhere. */
static bool add_interval(struct sweep *s, double from_d, double to_d)
{
	struct offered_way all[CROWD_MAX], member[PLAN_MEMBERS_MAX];
	unsigned optional[PLAN_MEMBERS_MAX], bits = 0; /* the bit of an event that may be left out; 0 */
	size_t n = s->n_inside;
	memcpy(all, s->inside, n * sizeof *all);
	if (n > PLAN_MEMBERS_MAX) {
		qsort(all, n, sizeof *all, by_worth);
		n = PLAN_MEMBERS_MAX;
	}
	qsort(all, n, sizeof *all, by_start);
	for (size_t i = 0; i < n; i++) {
		const bool may = bits < OPTIONAL_MAX && better_elsewhere(s, &all[i], from_d, to_d);
		optional[i] = may ? 1U << bits++ : 0U;
	}
	for (unsigned without = 0; without < 1U << bits; without++) {
		size_t m = 0;
		for (size_t i = 0; i < n; i++)
			if (!(optional[i] & without))
				member[m++] = all[i];
		if (!add_members(s, from_d, to_d, member, m))
			return false;
	}
	return true;
}

/* Takes a way into the interval; whether that changes what is best in it. */
static bool take_in(struct sweep *s, const struct offered_way *w)
{
	size_t least = 0;
	for (size_t i = 0; i < s->n_inside; i++) {
		if (s->inside[i].offer == w->offer) {
			const bool better = w->way.worth > s->inside[i].way.worth;
			if (better)
				s->inside[i] = *w;
			return better;
		}
		if (s->inside[i].way.worth < s->inside[least].way.worth)
			least = i;
	}
	if (s->n_inside < CROWD_MAX)
		least = s->n_inside++;
	else if (w->way.worth <= s->inside[least].way.worth)
		return false;
	s->inside[least] = *w;
	return true;
}

/* All intervals that begin with the way `start`. */
static bool add_from(struct sweep *s, size_t start)
{
	size_t beyond = start; /* what begins after a gap is out of reach */
	double reach_d = s->way[start].way.to_d;
	while (beyond < s->n && s->way[beyond].way.from_d <= reach_d + s->in->rules->settle_d)
		reach_d = fmax(reach_d, s->way[beyond++].way.to_d);
	bool changed = false;
	double to_d = -INFINITY;
	s->n_inside = 0;
	for (size_t i = 0; i < s->n; i++) {
		const struct offered_way *w = &s->way[s->by_end[i]];
		if (s->by_end[i] < start || s->by_end[i] >= beyond)
			continue;
		if (changed && w->way.to_d > to_d) {
			if (!add_interval(s, s->way[start].way.from_d, to_d))
				return false;
			changed = false;
		}
		to_d = w->way.to_d;
		changed |= take_in(s, w);
	}
	return !changed || add_interval(s, s->way[start].way.from_d, to_d);
}

enum status joint_items(const struct plan_input *in, const struct plan_pointings *p,
			const struct offered_ways *ways, size_t centre, struct offered_way way[], size_t n,
			struct candidate_list *list, struct err *e)
{
	struct sweep s = {.in = in,
			  .p = p,
			  .ways = ways,
			  .spans = plan_spans(in),
			  .centre = centre,
			  .n = n,
			  .way = way,
			  .list = list,
			  .first = list->n};
	struct end_at *end = malloc((n + 1) * sizeof *end);
	s.by_end = malloc((n + 1) * sizeof *s.by_end);
	bool room = end && s.by_end;
	if (room) {
		qsort(way, n, sizeof *way, by_start);
		for (size_t i = 0; i < n; i++)
			end[i] = (struct end_at){way[i].way.to_d, i};
		qsort(end, n, sizeof *end, by_end);
		for (size_t i = 0; i < n; i++)
			s.by_end[i] = end[i].index;
	}
	for (size_t i = n; room && i-- > 0;)
		if (i == 0 || way[i - 1].way.from_d < way[i].way.from_d)
			room = add_from(&s, i);
	free(end);
	free(s.by_end);
	return room ? ST_OK : err_set(e, ST_MEMORY, "no memory for the joint items of %zu ways", n);
}
