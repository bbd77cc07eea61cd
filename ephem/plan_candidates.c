/* SPDX-License-Identifier: MIT
 * What a running order chooses among: each way of each window, and the joint items of each pointing. */
#include "ephem/plan_joint.h"
#include "ephem/plan_pointing.h"
#include "ephem/units.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum {
	NEIGHBOURS_MAX = 24, /* offers of other stars in one field: those of most worth */
	JOINT_MAX = 4096     /* joint items of a night: those of most worth */
};

/* The offers of one star, as a range of the work's offers. */
struct star_offers {
	size_t star; /* the pointing's number */
	size_t first, end;
	struct vec3 direction;
};
struct work {
	const struct plan_input *in;
	struct plan_pointings p;
	struct offered_ways ways;
	double *worth;		 /* [in->n] of the best way */
	size_t n_offers, *offer; /* those with ways, by star */
	size_t n_stars;
	struct star_offers *star; /* by z of the direction */
	struct offered_way *gathered;
	size_t *near, n_near; /* offers of other stars in the field */
	struct candidate_list single, joint;
};

static void work_free(struct work *k)
{
	plan_pointings_free(&k->p);
	free(k->ways.way);
	free(k->ways.first);
	free(k->worth);
	free(k->offer);
	free(k->star);
	free(k->gathered);
	free(k->near);
	free(k->single.c);
	free(k->joint.c);
}

static bool find_ways(struct work *k)
{
	struct offered_ways *ways = &k->ways;
	for (size_t i = 0; i < k->in->n; i++) {
		struct plan_way way[PLAN_WAYS_MAX];
		const bool open = !k->in->offer[i].dropped && !k->in->offer[i].settled;
		const size_t n = open ? (size_t)plan_ways(k->in, i, way) : 0;
		if (ways->n + n > ways->room) {
			ways->room = 2 * ways->room + PLAN_WAYS_MAX;
			struct offered_way *more = realloc(ways->way, ways->room * sizeof *more);
			if (!more)
				return false;
			ways->way = more;
		}
		ways->first[i] = ways->n;
		k->worth[i] = 0.0;
		for (size_t j = 0; j < n; j++) {
			ways->way[ways->n++] = (struct offered_way){i, way[j]};
			k->worth[i] = fmax(k->worth[i], way[j].worth);
		}
	}
	ways->first[k->in->n] = ways->n;
	return true;
}

static bool add_singles(struct work *k)
{
	for (size_t i = 0; i < k->ways.n; i++) {
		struct plan_candidate *c = candidate_add(&k->single);
		if (!c)
			return false;
		candidate_fill(c, k->in, k->p.star[k->ways.way[i].offer], &k->ways.way[i], 1);
	}
	return true;
}

struct keyed {
	double key;
	size_t index;
};

static int by_key(const void *left, const void *right)
{
	const struct keyed *a = left, *b = right;
	if (a->key != b->key)
		return a->key < b->key ? -1 : 1;
	return (a->index > b->index) - (a->index < b->index);
}

static int by_z(const void *left, const void *right)
{
	const struct star_offers *a = left, *b = right;
	if (a->direction.z != b->direction.z)
		return a->direction.z < b->direction.z ? -1 : 1;
	return (a->star > b->star) - (a->star < b->star);
}

/* The offers that have ways, by star, and the stars by z. */
static bool group_stars(struct work *k)
{
	struct keyed *keyed = malloc((k->in->n + 1) * sizeof *keyed);
	if (!keyed)
		return false;
	for (size_t i = 0; i < k->in->n; i++)
		if (k->ways.first[i + 1] > k->ways.first[i])
			keyed[k->n_offers++] = (struct keyed){(double)k->p.star[i], i};
	qsort(keyed, k->n_offers, sizeof *keyed, by_key);
	for (size_t i = 0; i < k->n_offers; i++) {
		const size_t star = k->p.star[keyed[i].index];
		k->offer[i] = keyed[i].index;
		if (k->n_stars == 0 || k->star[k->n_stars - 1].star != star)
			k->star[k->n_stars++] = (struct star_offers){star, i, i, k->p.direction[star]};
		k->star[k->n_stars - 1].end = i + 1;
	}
	free(keyed);
	qsort(k->star, k->n_stars, sizeof *k->star, by_z);
	return true;
}

static void take_near(struct work *k, const struct star_offers *centre, const struct star_offers *other)
{
	if (!plan_pointings_share(&k->p, centre->star, other->star))
		return;
	for (size_t i = other->first; i < other->end; i++) {
		size_t at = k->n_near < NEIGHBOURS_MAX ? k->n_near++ : NEIGHBOURS_MAX;
		for (; at > 0 && k->worth[k->near[at - 1]] < k->worth[k->offer[i]]; at--)
			if (at < NEIGHBOURS_MAX)
				k->near[at] = k->near[at - 1];
		if (at < NEIGHBOURS_MAX)
			k->near[at] = k->offer[i];
	}
}

/* Stars of one field differ in z by no more than the field's chord. */
static void find_near(struct work *k, size_t centre)
{
	const double field_rad = k->in->rules->field_deg * DEG_RAD;
	const struct star_offers *c = &k->star[centre];
	k->n_near = 0;
	if (!(field_rad > 0.0))
		return;
	for (size_t i = centre; i-- > 0 && c->direction.z - k->star[i].direction.z <= field_rad;)
		take_near(k, c, &k->star[i]);
	for (size_t i = centre + 1; i < k->n_stars && k->star[i].direction.z - c->direction.z <= field_rad;
	     i++)
		take_near(k, c, &k->star[i]);
}

static size_t gather(struct work *k, size_t n, size_t offer)
{
	const size_t first = k->ways.first[offer], count = k->ways.first[offer + 1] - first;
	memcpy(k->gathered + n, k->ways.way + first, count * sizeof *k->ways.way);
	return n + count;
}

static enum status add_joints(struct work *k, struct err *e)
{
	for (size_t s = 0; s < k->n_stars; s++) {
		find_near(k, s);
		if (k->star[s].end - k->star[s].first + k->n_near < 2)
			continue;
		size_t n = 0;
		for (size_t i = k->star[s].first; i < k->star[s].end; i++)
			n = gather(k, n, k->offer[i]);
		for (size_t i = 0; i < k->n_near; i++)
			n = gather(k, n, k->near[i]);
		const enum status st =
		    joint_items(k->in, &k->p, &k->ways, k->star[s].star, k->gathered, n, &k->joint, e);
		if (st != ST_OK)
			return st;
	}
	return ST_OK;
}

static int by_worth(const void *left, const void *right)
{
	const struct plan_candidate *a = left, *b = right;
	if (a->order.worth != b->order.worth)
		return a->order.worth > b->order.worth ? -1 : 1;
	if (a->order.from_d != b->order.from_d)
		return a->order.from_d < b->order.from_d ? -1 : 1;
	if (a->order.to_d != b->order.to_d)
		return a->order.to_d < b->order.to_d ? -1 : 1;
	return (a->order.event[0] > b->order.event[0]) - (a->order.event[0] < b->order.event[0]);
}

static enum status collect(struct work *k, struct plan_candidate **out, size_t *n, struct err *e)
{
	if (!find_ways(k) || !add_singles(k))
		return err_set(e, ST_MEMORY, "no memory for the ways of %zu windows", k->in->n);
	k->gathered = malloc((k->ways.n + 1) * sizeof *k->gathered);
	if (!k->gathered || !group_stars(k))
		return err_set(e, ST_MEMORY, "no memory for the stars of %zu windows", k->in->n);
	const enum status st = add_joints(k, e);
	if (st != ST_OK)
		return st;
	if (k->joint.n > JOINT_MAX) {
		qsort(k->joint.c, k->joint.n, sizeof *k->joint.c, by_worth);
		k->joint.n = JOINT_MAX;
	}
	*n = k->single.n + k->joint.n;
	*out = malloc((*n + 1) * sizeof **out);
	if (!*out)
		return err_set(e, ST_MEMORY, "no memory for %zu candidates", *n);
	if (k->single.n > 0)
		memcpy(*out, k->single.c, k->single.n * sizeof **out);
	if (k->joint.n > 0)
		memcpy(*out + k->single.n, k->joint.c, k->joint.n * sizeof **out);
	return ST_OK;
}

enum status plan_candidates(const struct plan_input *in, struct plan_candidate **out, size_t *n,
			    struct err *e)
{
	struct work k = {.in = in};
	*out = NULL;
	*n = 0;
	enum status st = plan_pointings_make(in, &k.p, e);
	if (st == ST_OK) {
		k.ways.first = malloc((in->n + 1) * sizeof *k.ways.first);
		k.worth = malloc((in->n + 1) * sizeof *k.worth);
		k.offer = malloc((in->n + 1) * sizeof *k.offer);
		k.star = calloc(in->n + 1, sizeof *k.star);
		k.near = malloc((NEIGHBOURS_MAX + 1) * sizeof *k.near);
		if (!k.ways.first || !k.worth || !k.offer || !k.star || !k.near)
			st = err_set(e, ST_MEMORY, "no memory for %zu windows", in->n);
		else
			st = collect(&k, out, n, e);
	}
	work_free(&k);
	return st;
}
