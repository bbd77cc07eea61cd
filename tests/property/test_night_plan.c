/* SPDX-License-Identifier: MIT
 * Plans of small random nights against every choice that there is. The reference is written from the rules
 * alone: it knows lists of closed times instead of sets of free ones, counts in hundredths of a minute, and
 * tries each way of each event with each way of every other.
 *
 * The hundredths of a half minute are chosen so that no comparison is a tie by accident: events and sky at
 * .00, clouds at .20, blocks, allotments and `now` at .30, what has begun at .15, pads at .07, moves at .40.
 */
#include "ephem/night_plan.h"

#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/plan_scene.h"

#include <math.h>
#include <stdlib.h>

enum {
	NIGHTS = 1000,
	UNITS = 100, /* a minute */
	STEP = 50,
	DAY = 1440 * UNITS,
	B_MIN = 15 * UNITS,
	SETTLE = 390,			  /* 3.9 min */
	FIRST = SETTLE + 90 * UNITS / 60, /* 90 deg at a degree a second */
	OFFERS = 5,
	CLOSED_MAX = 16,
	WAYS = 12
};
#define UNIT_D (MIN_D / UNITS)

struct closed {
	int from, to;
};
struct event {
	int t1, t4, limb, reserve, pad; /* limb 0: grazing */
	int star, field;		/* ten-degree mark on the equator, and place in its field */
	double done, ingress, egress, priority;
	int n_sky;
	struct closed sky[3]; /* usable but for the closed times */
	int from, to;	      /* the reserve */
};
struct way {
	int from, to;
	double worth;
};
struct scene {
	int n, n_cloud, n_away, n_fixed, now;
	bool field_shared;
	struct event event[OFFERS];
	struct closed cloud[2], away[4]; /* away: the telescope is taken: blocks, time of others */
	struct closed fixed[2];
	int fixed_star[2];
	bool pinned[OFFERS], dropped[OFFERS];
};

static int draw(struct rng *r, int lo, int hi)
{
	return lo + (int)floor(rng_unit(r) * (hi - lo + 1));
}

static int draw_steps(struct rng *r, int lo_min, int hi_min)
{
	return draw(r, 2 * lo_min, 2 * hi_min) * STEP;
}

static void draw_event(struct rng *r, struct scene *s, int i, int places)
{
	struct event *ev = &s->event[i];
	const int half = draw_steps(r, 20, 90), mid = draw_steps(r, 360, 820);
	*ev = (struct event){
	    .t1 = mid - half, .t4 = mid + half, .star = draw(r, 0, places) * 60, .field = draw(r, 0, 1)};
	ev->limb = draw(r, 0, 5) == 0 ? 0 : draw_steps(r, 4, 15);
	ev->pad = draw_steps(r, 0, 25) + 7;
	ev->reserve = draw(r, 0, 1) ? 30 * UNITS : draw_steps(r, 15, 60);
	if (ev->reserve < B_MIN + ev->pad)
		ev->reserve = B_MIN + ev->pad + STEP - 7;
	ev->from = ev->t1 - ev->reserve;
	ev->to = ev->t4 + ev->reserve;
	ev->priority = draw(r, 0, 2) == 0 ? rng_between(r, 0.5, 3.0) : (double)NAN;
	ev->ingress = rng_unit(r);
	ev->egress = draw(r, 0, 3) ? rng_unit(r) : ev->ingress;
	ev->done = rng_unit(r) * fmin(ev->ingress, ev->egress);
	if (draw(r, 0, 6) == 0)
		ev->done = ev->ingress = ev->egress = NAN;
	if (draw(r, 0, 6) == 0)
		ev->egress = ev->done = 0.0;
	ev->n_sky = draw(r, 1, 2);
	const int cut = draw_steps(r, 300, 900);
	ev->sky[0] = (struct closed){draw(r, 0, 2) ? 0 : cut, DAY};
	if (ev->n_sky == 2) {
		const int gap = draw_steps(r, 420, 800);
		ev->sky[0] = (struct closed){0, gap};
		ev->sky[1] = (struct closed){gap + draw_steps(r, 1, 60), DAY};
	}
}

static void draw_scene(struct rng *r, struct scene *s)
{
	*s = (struct scene){.n = draw(r, 1, OFFERS), .now = -1, .field_shared = draw(r, 0, 1)};
	const int places = draw(r, 0, 3);
	for (int i = 0; i < s->n; i++) {
		draw_event(r, s, i, places);
		s->pinned[i] = draw(r, 0, 9) == 0;
		s->dropped[i] = draw(r, 0, 14) == 0;
	}
	s->n_cloud = draw(r, 0, 5) < 2 ? draw(r, 1, 2) : 0;
	for (int i = 0; i < s->n_cloud; i++) {
		const int from = draw_steps(r, 300, 850) + 20;
		s->cloud[i] = (struct closed){from, from + draw_steps(r, 1, 60)};
	}
	s->n_away = draw(r, 0, 5) < 2 ? draw(r, 1, 2) : 0;
	for (int i = 0; i < s->n_away; i++) {
		const int from = draw_steps(r, 300, 850) + 30;
		s->away[i] = (struct closed){from, from + draw_steps(r, 10, 60)};
	}
	if (draw(r, 0, 3) == 0) /* the first half of the night is somebody else's */
		s->away[s->n_away++] = (struct closed){-10, draw_steps(r, 300, 600) + 30};
	if (draw(r, 0, 3) == 0)
		s->now = draw_steps(r, 300, 600) + 30;
	if (draw(r, 0, 3) == 0) {
		const int from = draw_steps(r, 300, 600) + 15;
		s->fixed[s->n_fixed] = (struct closed){from, from + draw_steps(r, 20, 180)};
		s->fixed_star[s->n_fixed++] = draw(r, 0, 3) * 60;
	}
}

/* A move along the equator, a degree a second; 0 in one field. */
static int gap(const struct scene *s, int star_a, int field_a, int star_b, int field_b)
{
	if (star_a == star_b && (field_a == field_b || s->field_shared))
		return 0;
	int apart = abs(star_a - star_b) % 360;
	apart = apart > 180 ? 360 - apart : apart;
	return SETTLE + apart * UNITS / 60;
}

/* Times in which nothing new can stand for this star. */
static int closed_times(const struct scene *s, const struct event *ev, struct closed out[CLOSED_MAX])
{
	int n = 0;
	bool now_known = false;
	out[n++] = (struct closed){-DAY, FIRST};
	for (int i = 0; i < s->n_away; i++)
		out[n++] = (struct closed){s->away[i].from, s->away[i].to + FIRST};
	for (int i = 0; i < s->n_cloud; i++)
		out[n++] = s->cloud[i];
	for (int i = 0; i < s->n_fixed; i++) {
		const int move = gap(s, s->fixed_star[i], 0, ev->star, ev->field);
		out[n++] = (struct closed){s->fixed[i].from - move, s->fixed[i].to + move};
		now_known = now_known || (s->fixed[i].from <= s->now && s->now <= s->fixed[i].to);
	}
	if (s->now >= 0)
		out[n++] = (struct closed){-DAY, s->now + (now_known ? 0 : FIRST)};
	out[n++] = (struct closed){DAY, 2 * DAY};
	return n;
}

/* The free span round [from, to]; false: there is none. */
static bool span_round(const struct closed closed[], int n, int from, int to, struct closed *span)
{
	*span = (struct closed){-DAY, 2 * DAY};
	for (int i = 0; i < n; i++) {
		if (closed[i].from < to && closed[i].to > from)
			return false;
		if (closed[i].to <= from && closed[i].to > span->from)
			span->from = closed[i].to;
		if (closed[i].from >= to && closed[i].from < span->to)
			span->to = closed[i].from;
	}
	return true;
}

/* First and last usable moment of [from, to], which lies in one free span. */
static bool usable(const struct event *ev, int from, int to, struct way *way)
{
	bool any = false;
	for (int i = 0; i < ev->n_sky; i++) {
		const int a = from > ev->sky[i].from ? from : ev->sky[i].from,
			  b = to < ev->sky[i].to ? to : ev->sky[i].to;
		if (a >= b)
			continue;
		way->from = any ? way->from : a;
		way->to = b;
		any = true;
	}
	return any;
}

static int larger(int a, int b)
{
	return a > b ? a : b;
}

static int smaller(int a, int b)
{
	return a < b ? a : b;
}

static int whole_ways(const struct event *ev, struct closed span, double priority, struct way out[])
{
	const bool known = !isnan(ev->done);
	const double worth = priority * (known ? ev->done : 0.1), /* coverage 1 */
	    cut = 0.95;
	const int from = larger(span.from, ev->from), to = smaller(span.to, ev->to);
	struct way most;
	int n = 0;
	if ((known && ev->done < 0.0005) || !usable(ev, from, to, &most))
		return 0;
	const bool late = most.from == span.from && span.from > ev->from + UNITS,
		   early = most.to == span.to && span.to < ev->to - UNITS;
	const int starts[2] = {from, ev->t1 - B_MIN - ev->pad}, ends[2] = {to, ev->t4 + B_MIN + ev->pad};
	for (int a = 0; a < (known ? 2 : 1); a++)
		for (int b = 0; b < (known ? 2 : 1); b++) {
			if ((a == 1 && starts[1] <= most.from + UNITS) ||
			    (b == 1 && ends[1] >= most.to - UNITS) ||
			    !usable(ev, starts[a], ends[b], &out[n]))
				continue;
			out[n].worth = worth * (a || late ? cut : 1.0) * (b || early ? cut : 1.0);
			n++;
		}
	return n;
}

static int ways_of(const struct scene *s, int i, struct way out[WAYS])
{
	const struct event *ev = &s->event[i];
	struct closed closed[CLOSED_MAX], span;
	const int n_closed = closed_times(s, ev, closed);
	const double priority = isnan(ev->priority) ? 1.0 : ev->priority;
	const int mid = (ev->t1 + ev->t4) / 2, t2 = ev->limb ? ev->t1 + ev->limb : mid,
		  t3 = ev->limb ? ev->t4 - ev->limb : mid;
	const int in_to = smaller(t2 + ev->pad, ev->to), out_from = larger(t3 - ev->pad, ev->from);
	int n = 0;
	if (s->dropped[i])
		return 0;
	if (span_round(closed, n_closed, ev->t1 - B_MIN, ev->t4 + B_MIN, &span))
		n = whole_ways(ev, span, priority, out);
	if (ev->ingress >= 0.0005 && span_round(closed, n_closed, ev->t1 - B_MIN, in_to, &span) &&
	    usable(ev, larger(span.from, ev->from), in_to, &out[n]))
		out[n++].worth = priority * 0.4 * ev->ingress;
	if (ev->egress >= 0.0005 && span_round(closed, n_closed, out_from, ev->t4 + B_MIN, &span) &&
	    usable(ev, out_from, smaller(span.to, ev->to), &out[n]))
		out[n++].worth = priority * 0.4 * ev->egress;
	return n;
}

struct brute {
	const struct scene *s;
	struct way way[OFFERS][WAYS];
	int n_ways[OFFERS], chosen[OFFERS]; /* -1: not */
	int pins;
	double worth;
};

/* Two ways can both be done: one after the other with the move between them, or in one field at once. */
static bool together(const struct brute *b, int i, int j)
{
	const struct event *p = &b->s->event[i], *q = &b->s->event[j];
	const struct way *v = &b->way[i][b->chosen[i]], *w = &b->way[j][b->chosen[j]];
	const int move = gap(b->s, p->star, p->field, q->star, q->field);
	return move == 0 || v->to + move <= w->from || w->to + move <= v->from;
}

static void try_all(struct brute *b, int i)
{
	if (i == b->s->n) {
		double worth = 0.0;
		int pins = 0;
		for (int k = 0; k < i; k++)
			if (b->chosen[k] >= 0) {
				worth += b->way[k][b->chosen[k]].worth;
				pins += b->s->pinned[k];
			}
		if (pins > b->pins || (pins == b->pins && worth > b->worth)) {
			b->pins = pins;
			b->worth = worth;
		}
		return;
	}
	for (b->chosen[i] = -1; b->chosen[i] < b->n_ways[i]; b->chosen[i]++) {
		bool fits = true;
		for (int k = 0; fits && k < i && b->chosen[i] >= 0; k++)
			fits = b->chosen[k] < 0 || together(b, k, i);
		if (fits)
			try_all(b, i + 1);
	}
}

static void fill_scene(const struct scene *s, struct plan_scene *p)
{
	static const char *const names[OFFERS] = {"Tern 1", "Tern 2", "Tern 3", "Tern 4", "Tern 5"};
	p->rules.settle_d = SETTLE * UNIT_D;
	p->rules.field_deg = s->field_shared ? 0.01 : 0.0;
	const struct prepared *planet[4][2];
	static const char *const stars[4][2] = {
	    {"A 1", "A 2"}, {"B 1", "B 2"}, {"C 1", "C 2"}, {"D 1", "D 2"}};
	for (int i = 0; i < 4; i++)
		for (int k = 0; k < 2; k++)
			planet[i][k] = scene_planet(p, stars[i][k], 60.0 * i, 0.004 * k);
	for (int i = 0; i < s->n; i++) {
		const struct event *ev = &s->event[i];
		struct prepared *own = scene_planet(p, names[i], 0.0, 0.0);
		p->target[own - p->prepared] = *planet[ev->star / 60][ev->field]->target;
		p->target[own - p->prepared].name = names[i];
		p->target[own - p->prepared].priority = ev->priority;
		/* events at one place belong to planets of one star */
		for (int k = 0; k < i; k++)
			if (s->event[k].star == ev->star && s->event[k].field == ev->field) {
				struct prepared *other = &p->prepared[8 + k];
				own->sibling = other->sibling ? other->sibling : other;
				other->sibling = own;
				break;
			}
		struct window *w =
		    scene_window(p, own, 0.5 * (ev->t1 + ev->t4) * UNIT_D, 0.5 * (ev->t4 - ev->t1) * UNIT_D,
				 ev->limb * UNIT_D, ev->reserve * UNIT_D, ev->pad * UNIT_D);
		w->event.t1_d = ev->t1 * UNIT_D;
		w->event.t4_d = ev->t4 * UNIT_D;
		w->event.reserve_start_d = ev->from * UNIT_D;
		w->event.reserve_end_d = ev->to * UNIT_D;
		w->chance = (struct window_chance){
		    .ingress = ev->ingress, .egress = ev->egress, .mid = NAN, .done = ev->done};
		struct intervals sky = intervals_none();
		for (int k = 0; k < ev->n_sky; k++)
			intervals_append(&sky, ev->sky[k].from * UNIT_D, ev->sky[k].to * UNIT_D);
		w->cover.usable = intervals_clip(&sky, w->event.reserve_start_d, w->event.reserve_end_d);
		p->offer[i].pinned = s->pinned[i];
		p->offer[i].dropped = s->dropped[i];
	}
	for (int i = 0; i < s->n_cloud; i++)
		scene_take(&p->free.clear, s->cloud[i].from * UNIT_D, s->cloud[i].to * UNIT_D);
	for (int i = 0; i < s->n_away; i++)
		scene_take(i % 2 ? &p->free.allotted : &p->free.unblocked, s->away[i].from * UNIT_D,
			   s->away[i].to * UNIT_D);
	scene_cut(p);
	for (int i = 0; i < s->n_fixed; i++)
		scene_fix(p, s->fixed[i].from * UNIT_D, s->fixed[i].to * UNIT_D,
			  planet[s->fixed_star[i] / 60][0]);
	if (s->now >= 0)
		p->input.not_before_d = s->now * UNIT_D;
}

#define SLACK_D (0.02 * MIN_D) /* the stars of a field are 0.004 deg apart: 0.004 s of a move, 7e-5 min */

/* Whether a plan can be done at all, item by item. */
static void check_plan(const struct scene *s, const struct plan_scene *p, const struct night_plan *plan)
{
	bool seen[OFFERS] = {false};
	double worth = 0.0;
	for (size_t i = 0; i < plan->n_items; i++) {
		const struct plan_item *item = &plan->item[i], *last = i > 0 ? item - 1 : NULL;
		assert_true(item->to_d > item->from_d);
		assert_true(!last || last->to_d <= item->from_d + 1e-12);
		assert_true(item->slew_by_d <= item->from_d);
		if (item->fixed >= 0)
			continue;
		worth += item->worth;
		assert_true(item->latest_start_d >= item->from_d - 1e-12);
		assert_true(item->n >= 1);
		for (int k = 0; k < item->n; k++) {
			const struct plan_member *m = &item->member[k];
			const struct event *ev = &s->event[m->offer];
			struct closed closed[CLOSED_MAX];
			const int n = closed_times(s, ev, closed);
			assert_false(seen[m->offer] || s->dropped[m->offer]);
			seen[m->offer] = true;
			assert_true(m->from_d >= item->from_d && m->to_d <= item->to_d);
			assert_true(m->from_d >= ev->from * UNIT_D - 1e-12 &&
				    m->to_d <= ev->to * UNIT_D + 1e-12);
			for (int j = 0; j < n;
			     j++) /* no item reaches into what is closed for any of its members */
				assert_true(closed[j].from * UNIT_D >= item->to_d - SLACK_D ||
					    closed[j].to * UNIT_D <= item->from_d + SLACK_D);
			for (int j = 0; last && j < last->n; j++) {
				const struct event *before = &s->event[last->member[j].offer];
				const double move_d =
				    gap(s, before->star, before->field, ev->star, ev->field) * UNIT_D;
				assert_true(last->to_d + move_d <= item->from_d + SLACK_D);
				assert_true(item->slew_by_d <= item->from_d - move_d + SLACK_D ||
					    item->slew_by_d <= item->from_d - FIRST * UNIT_D + SLACK_D);
			}
			for (int j = 0; j < k; j++)
				assert_int_equal(gap(s, s->event[item->member[j].offer].star,
						     s->event[item->member[j].offer].field, ev->star,
						     ev->field),
						 0);
		}
	}
	check_close("sum of the items", plan->worth, worth, 1e-7);
	for (size_t i = 0; i < plan->n_left; i++) {
		assert_false(seen[plan->left[i].offer]);
		seen[plan->left[i].offer] = true;
	}
	for (int i = 0; i < s->n; i++) /* every offer is planned or left, none both */
		assert_true(seen[i]);
	assert_int_equal(p->n, (size_t)s->n);
}

static struct brute best_of(const struct scene *s)
{
	struct brute b = {.s = s, .pins = -1};
	for (int i = 0; i < s->n; i++)
		b.n_ways[i] = ways_of(s, i, b.way[i]);
	try_all(&b, 0);
	return b;
}

/* What a left offer costs: the best of the orders that hold it and all the pins that can be had. */
static void check_costs(const struct scene *s, const struct brute *all, const struct night_plan *plan)
{
	for (size_t i = 0; i < plan->n_left; i++) {
		const struct plan_left *left = &plan->left[i];
		if (left->reason != LEFT_CLASH)
			continue;
		assert_false(left->at_most);
		struct scene forced = *s;
		forced.pinned[left->offer] = true;
		const struct brute b = best_of(&forced);
		check_close("cost", left->cost, b.pins > all->pins ? all->worth - b.worth : (double)NAN,
			    1e-7);
	}
}

static void test_against_every_choice(void **state)
{
	(void)state;
	struct rng r = rng_open("night_plan");
	struct plan_scene *fresh = scene_open();
	int joint = 0, clash = 0, cut = 0;
	for (int i = 0; i < NIGHTS; i++) {
		struct scene s;
		struct night_plan plan;
		struct err e;
		draw_scene(&r, &s);
		struct plan_scene *p = malloc(sizeof *p);
		assert_non_null(p);
		*p = *fresh;
		p->night.site = &p->site;
		p->input.night = &p->night;
		p->input.offer = p->offer;
		p->input.fixed = p->fixed;
		p->input.rules = &p->rules;
		fill_scene(&s, p);
		if (night_plan_make(&p->input, &plan, &e) != ST_OK)
			check_fail("night %d: %s", i, e.text);
		const struct brute b = best_of(&s);
		int pins = 0;
		for (int k = 0; k < s.n; k++)
			pins += s.pinned[k] && !s.dropped[k];
		if (fabs(plan.worth - b.worth) > 1e-7 || pins - plan.pins_missed != b.pins)
			check_fail(
			    "night %d: worth %.9f with %d pins missed, expected %.9f with %d pins of %d", i,
			    plan.worth, plan.pins_missed, b.worth, b.pins, pins);
		assert_true(plan.optimal);
		check_plan(&s, p, &plan);
		check_costs(&s, &b, &plan);
		for (size_t k = 0; k < plan.n_items; k++) {
			joint += plan.item[k].n > 1;
			for (int m = 0; m < plan.item[k].n; m++)
				cut += plan.item[k].member[m].variant != VARIANT_WHOLE;
		}
		for (size_t k = 0; k < plan.n_left; k++)
			clash += plan.left[k].reason == LEFT_CLASH;
		night_plan_free(&plan);
		free(p);
	}
	scene_close(fresh);
	print_message("%d nights: %d joint items, %d offers not whole, %d left for a clash\n", NIGHTS, joint,
		      cut, clash);
	assert_true(joint > NIGHTS / 20 && cut > NIGHTS / 5 && clash > NIGHTS / 10);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_against_every_choice),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
