/* SPDX-License-Identifier: MIT
 * Running orders of small random nights against all subsets. Two items exclude each other when they overlap,
 * gap included, or have an event in common; gaps are the way between points on a sphere and a settling time,
 * so the triangle inequality holds and looking at pairs is enough. */
#include "ephem/running_order.h"

#include "tests/support/check.h"

#include <math.h>
#include <string.h>

enum { NIGHTS = 4000, ITEMS = 14, EVENTS = 9, POINTS = 6 };

struct night {
	struct order_item item[ITEMS];
	size_t n;
	bool pinned[EVENTS], dropped[EVENTS];
	double point[POINTS][3];
	double settle_d, slew_rad_d;
};
struct best {
	int pins, items;
	long long steps; /* of 1e-9 */
};

static double gap_of_points(const void *ctx, int from_class, int to_class)
{
	const struct night *w = ctx;
	const double *a = w->point[from_class], *b = w->point[to_class];
	double dot = a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
	return w->settle_d + acos(fmax(-1.0, fmin(1.0, dot))) / w->slew_rad_d;
}

static int below(struct rng *r, int n)
{
	return (int)rng_between(r, 0.0, n);
}

static void invent_item(struct rng *r, struct order_item *item, double length_d, bool round_worth)
{
	double from_d = rng_between(r, -0.2, 0.2);
	*item = (struct order_item){.from_d = from_d,
				    .to_d = from_d + rng_between(r, 0.0, length_d),
				    .worth = round_worth ? below(r, 5) * 0.2 : rng_between(r, 0.0, 1.0),
				    .gap_class = below(r, POINTS)};
	double joint = rng_unit(r);
	item->n_events = joint < 0.05 ? 0 : joint < 0.8 ? 1 : joint < 0.95 ? 2 : 4;
	for (int i = 0; i < item->n_events; i++)
		item->event[i] = below(r, EVENTS); /* now and then one twice */
}

/* Two fixed items in a night of three at most, end to end now and then. */
static void fix_some(struct rng *r, struct night *w)
{
	int fixed = below(r, 5) - 2;
	double from_d = rng_between(r, -0.1, 0.0);
	for (int i = 0; i < fixed; i++) {
		w->item[i].fixed = true;
		w->item[i].from_d = from_d;
		w->item[i].to_d = from_d + rng_between(r, 0.0, 0.06);
		from_d = w->item[i].to_d + (below(r, 3) == 0 ? 0.0 : rng_between(r, 0.05, 0.1));
	}
}

static void invent(struct rng *r, struct night *w)
{
	bool round_worth = below(r, 2) == 0;
	double length_d = below(r, 2) == 0 ? 0.05 : 0.3;
	memset(w, 0, sizeof *w);
	w->n = (size_t)(ITEMS - (int)(rng_unit(r) * rng_unit(r) * (ITEMS + 1)));
	w->settle_d = below(r, 3) == 0 ? 0.0 : 0.003;
	w->slew_rad_d = below(r, 2) == 0 ? 25.0 : 100.0; /* 180 degrees in 3 hours, in 45 minutes */
	for (int i = 0; i < POINTS; i++) {
		double z = rng_between(r, -1.0, 1.0), angle = rng_between(r, 0.0, 6.283185307179586);
		w->point[i][0] = sqrt(1.0 - z * z) * cos(angle);
		w->point[i][1] = sqrt(1.0 - z * z) * sin(angle);
		w->point[i][2] = z;
	}
	for (size_t i = 0; i < w->n; i++)
		invent_item(r, &w->item[i], length_d, round_worth);
	if (w->n > 2)
		fix_some(r, w);
	for (int i = 0; i < EVENTS; i++) {
		w->pinned[i] = below(r, 5) == 0;
		w->dropped[i] = below(r, 8) == 0;
	}
}

static bool share_event(const struct order_item *a, const struct order_item *b)
{
	for (int i = 0; i < a->n_events; i++)
		for (int k = 0; k < b->n_events; k++)
			if (a->event[i] == b->event[k])
				return true;
	return false;
}

static bool exclude(const struct night *w, size_t i, size_t k)
{
	const struct order_item *a = &w->item[i], *b = &w->item[k];
	if (a->fixed && b->fixed)
		return false;
	return share_event(a, b) || (a->to_d + gap_of_points(w, a->gap_class, b->gap_class) > b->from_d &&
				     b->to_d + gap_of_points(w, b->gap_class, a->gap_class) > a->from_d);
}

/* What is true of every order: the set holds no two that exclude each other, all fixed ones, nothing dropped.
 */
struct rules {
	unsigned fixed, dropped, excludes[ITEMS];
};
static struct rules rules_of(const struct night *w)
{
	struct rules rules = {0};
	for (size_t i = 0; i < w->n; i++) {
		rules.fixed |= (unsigned)w->item[i].fixed << i;
		for (int k = 0; k < w->item[i].n_events && !w->item[i].fixed; k++)
			rules.dropped |= (unsigned)w->dropped[w->item[i].event[k]] << i;
		for (size_t k = 0; k < w->n; k++)
			rules.excludes[i] |= (unsigned)(i != k && exclude(w, i, k)) << k;
	}
	return rules;
}

static bool lawful(const struct rules *rules, size_t n, unsigned set)
{
	if ((set & rules->fixed) != rules->fixed || (set & rules->dropped))
		return false;
	for (size_t i = 0; i < n; i++)
		if ((set >> i & 1u) && (rules->excludes[i] & set))
			return false;
	return true;
}

static struct best value_of(const struct night *w, unsigned set)
{
	struct best b = {0};
	bool taken[EVENTS] = {false};
	for (size_t i = 0; i < w->n; i++) {
		if (!(set >> i & 1u))
			continue;
		b.items++;
		b.steps += llround(w->item[i].worth * 1e9);
		for (int k = 0; k < w->item[i].n_events; k++)
			taken[w->item[i].event[k]] = true;
	}
	for (int i = 0; i < EVENTS; i++)
		b.pins += taken[i] && w->pinned[i];
	return b;
}

static bool better(const struct best *a, const struct best *b)
{
	if (a->pins != b->pins)
		return a->pins > b->pins;
	return a->steps != b->steps ? a->steps > b->steps : a->items < b->items;
}

static struct best best_subset(const struct night *w, const struct rules *rules)
{
	struct best best = {.pins = -1};
	for (unsigned set = 0; set < 1u << w->n; set++) {
		if (!lawful(rules, w->n, set))
			continue;
		struct best b = value_of(w, set);
		if (better(&b, &best))
			best = b;
	}
	return best;
}

/* The best subset that holds each event; pins -1 where none does. */
static void best_with_each(const struct night *w, const struct rules *rules, struct best with[EVENTS])
{
	for (int i = 0; i < EVENTS; i++)
		with[i] = (struct best){.pins = -1};
	for (unsigned set = 0; set < 1u << w->n; set++) {
		unsigned events = 0;
		if (!lawful(rules, w->n, set))
			continue;
		const struct best b = value_of(w, set);
		for (size_t i = 0; i < w->n; i++)
			for (int k = 0; k < w->item[i].n_events; k++)
				events |= (set >> i & 1u) << w->item[i].event[k];
		for (int i = 0; i < EVENTS; i++)
			if ((events >> i & 1u) && better(&b, &with[i]))
				with[i] = b;
	}
}

/* The set of an answer, which is one and can be done. */
static unsigned set_of(const struct night *w, const struct rules *rules, const size_t taken[],
		       const struct order_result *r)
{
	unsigned set = 0;
	for (size_t i = 0; i < r->n; i++) {
		assert_true(i == 0 || w->item[taken[i]].from_d >= w->item[taken[i - 1]].to_d);
		assert_false(set >> taken[i] & 1u);
		set |= 1u << taken[i];
	}
	assert_true(lawful(rules, w->n, set));
	return set;
}

/* Runs it and looks whether the answer is an order, whatever it is worth; most_share widens the limits of the
 * gaps beyond what is needed. */
static struct order_result solve(const struct night *w, const struct rules *rules, double most_share,
				 long nodes_max, size_t taken[ITEMS])
{
	struct order_gaps gaps = {gap_of_points, w, w->settle_d,
				  w->settle_d + most_share * 3.1415926535897936 / w->slew_rad_d};
	struct order_choice choice = {w->pinned, w->dropped, EVENTS, nodes_max};
	struct order_result r;
	struct err e = {0};
	if (running_order(w->item, w->n, &gaps, &choice, taken, &r, NULL, &e) != ST_OK)
		check_fail("refused: %s", e.text);
	struct best b = value_of(w, set_of(w, rules, taken, &r));
	check_close("worth of what was taken", r.worth, (double)b.steps * 1e-9, 1e-12);
	int pinned = 0;
	for (int i = 0; i < EVENTS; i++)
		pinned += w->pinned[i];
	assert_int_equal(r.pins_missed, pinned - b.pins);
	return r;
}

static void against_all_subsets(void **state)
{
	(void)state;
	struct rng r = rng_open("running order");
	int split = 0, pins = 0;
	for (int round = 0; round < NIGHTS; round++) {
		struct night w;
		size_t taken[ITEMS], again[ITEMS];
		invent(&r, &w);
		struct rules rules = rules_of(&w);
		struct best best = best_subset(&w, &rules);
		struct order_result got = solve(&w, &rules, 1.0, 0, taken);
		int pinned = 0;
		for (int i = 0; i < EVENTS; i++)
			pinned += w.pinned[i];
		if (pinned - got.pins_missed != best.pins || llround(got.worth * 1e9) != best.steps ||
		    (int)got.n != best.items || !got.optimal || got.bound < got.worth ||
		    got.bound > got.worth)
			check_fail("round %d: got %d pins, %.9f, %zu items, bound %.9f; want %d, %.9f, %d",
				   round, pinned - got.pins_missed, got.worth, got.n, got.bound, best.pins,
				   (double)best.steps * 1e-9, best.items);
		struct order_result same = solve(&w, &rules, 1.0, 0, again);
		assert_memory_equal(taken, again, got.n * sizeof *taken);
		assert_int_equal(same.n, got.n);
		same = solve(&w, &rules, 9.0, 0,
			     again); /* wider limits: more gaps are asked, and nothing else */
		assert_int_equal(same.n, got.n);
		assert_memory_equal(taken, again, got.n * sizeof *taken);
		struct order_result few = solve(&w, &rules, 1.0, 1, again); /* one look */
		assert_true(few.bound >= (double)best.steps * 1e-9 - 1e-12);
		split += !few.optimal;
		pins += best.pins > 0;
	}
	print_message("nights that one look did not settle: %d of %d; with pins %d\n", split, NIGHTS, pins);
	assert_true(split > NIGHTS / 50 && pins > NIGHTS / 4);
}

/* One question. Returns whether it was answered with a proof; *with: of what no question may be better than.
 */
static bool ask(struct order_through *t, const struct night *w, const struct rules *rules, int event,
		const struct best *with, bool may_fall_short)
{
	struct order_result got;
	struct best b = {.pins = -1};
	struct err e = {0};
	size_t taken[ITEMS];
	bool held, there = false;
	int pinned = 0;
	if (order_through_event(t, event, taken, &got, &held, &e) != ST_OK)
		check_fail("refused: %s", e.text);
	if (held) {
		b = value_of(w, set_of(w, rules, taken, &got));
		for (size_t i = 0; i < got.n; i++)
			for (int k = 0; k < w->item[taken[i]].n_events; k++)
				there = there || w->item[taken[i]].event[k] == event;
		assert_true(there);
		for (int i = 0; i < EVENTS; i++)
			pinned += w->pinned[i];
		assert_int_equal(got.pins_missed, pinned - b.pins);
		check_close("worth of what was taken", got.worth, (double)b.steps * 1e-9, 1e-12);
		assert_true(!got.optimal || got.bound <= got.worth);
		assert_true(b.pins != with->pins || got.bound >= (double)with->steps * 1e-9 - 1e-12);
	}
	if (may_fall_short && !got.optimal) {
		assert_false(better(&b, with));
		return false;
	}
	if (b.pins != with->pins || b.steps != with->steps || b.items != with->items)
		check_fail("event %d: got %d pins, %.9f, %d items; want %d, %.9f, %d", event, b.pins,
			   (double)b.steps * 1e-9, b.items, with->pins, (double)with->steps * 1e-9,
			   with->items);
	return true;
}

static void through_each_event(void **state)
{
	(void)state;
	struct rng r = rng_open("running order, one event more");
	int lost = 0, short_of = 0;
	for (int round = 0; round < NIGHTS; round++) {
		struct night w;
		struct best with[EVENTS];
		struct err e = {0};
		invent(&r, &w);
		const struct rules rules = rules_of(&w);
		best_with_each(&w, &rules, with);
		struct order_gaps gaps = {gap_of_points, &w, w.settle_d,
					  w.settle_d + 3.1415926535897936 / w.slew_rad_d};
		for (int few = 0; few < 2; few++) {
			const struct order_choice choice = {w.pinned, w.dropped, EVENTS, few};
			struct order_through *t;
			if (order_through_open(w.item, w.n, &gaps, &choice, &t, &e) != ST_OK)
				check_fail("refused: %s", e.text);
			for (int i = 0; i < EVENTS; i++) {
				short_of += !ask(t, &w, &rules, i, &with[i], few);
				lost += with[i].pins < 0;
			}
			struct order_result none;
			size_t taken[ITEMS];
			bool held;
			assert_int_equal(order_through_event(t, EVENTS, taken, &none, &held, &e), ST_RANGE);
			order_through_close(t);
		}
	}
	print_message("events that no order holds: %d; that one look did not settle: %d\n", lost, short_of);
	assert_true(lost > NIGHTS / 10 && short_of > NIGHTS / 10);
}

/* Another order of the input: as much worth, as many pins and items. */
static void input_in_any_order(void **state)
{
	(void)state;
	struct rng r = rng_open("running order, shuffled");
	for (int round = 0; round < NIGHTS; round++) {
		struct night w;
		size_t taken[ITEMS];
		invent(&r, &w);
		struct rules rules = rules_of(&w);
		struct order_result first = solve(&w, &rules, 1.0, 0, taken);
		for (size_t i = w.n; i > 1; i--) {
			size_t k = (size_t)below(&r, (int)i);
			struct order_item swap = w.item[i - 1];
			w.item[i - 1] = w.item[k];
			w.item[k] = swap;
		}
		rules = rules_of(&w);
		struct order_result second = solve(&w, &rules, 1.0, 0, taken);
		check_close("worth", second.worth, first.worth, 1e-12);
		assert_int_equal(second.n, first.n);
		assert_int_equal(second.pins_missed, first.pins_missed);
	}
}

/* Gaps that break the triangle inequality, no fixed items: of an order only neighbours need to keep them. */
struct any_gaps {
	double gap_d[POINTS][POINTS];
};
static double gap_of_any(const void *ctx, int from_class, int to_class)
{
	return ((const struct any_gaps *)ctx)->gap_d[from_class][to_class];
}

static bool neighbours_keep(const struct night *w, const struct any_gaps *gaps, unsigned set)
{
	const struct order_item *last = NULL;
	for (unsigned left = set; left != 0;) {
		size_t first = ITEMS;
		for (size_t i = 0; i < w->n; i++)
			if ((left >> i & 1u) && (first == ITEMS || w->item[i].to_d < w->item[first].to_d))
				first = i;
		const struct order_item *item = &w->item[first];
		if (last && last->to_d + gaps->gap_d[last->gap_class][item->gap_class] > item->from_d)
			return false;
		for (size_t i = 0; i < w->n; i++)
			if (i != first && (set >> i & 1u) && share_event(item, &w->item[i]))
				return false;
		last = item;
		left &= ~(1u << first);
	}
	return true;
}

static void gaps_of_any_kind(void **state)
{
	(void)state;
	struct rng r = rng_open("running order, any gaps");
	for (int round = 0; round < NIGHTS / 2; round++) {
		struct night w;
		struct any_gaps any;
		invent(&r, &w);
		w.n = w.n < 11 ? w.n : 11;
		for (size_t i = 0; i < w.n; i++)
			w.item[i].fixed = false;
		for (int i = 0; i < POINTS; i++)
			for (int k = 0; k < POINTS; k++)
				any.gap_d[i][k] = below(&r, 2) ? 0.001 : rng_between(&r, 0.001, 0.2);
		struct best best = {0}, got = {0};
		for (unsigned set = 0; set < 1u << w.n; set++) {
			struct best b = value_of(&w, set);
			b.pins = 0;
			if (better(&b, &best) && neighbours_keep(&w, &any, set))
				best = b;
		}
		struct order_gaps gaps = {gap_of_any, &any, 0.001, 0.2};
		struct order_choice choice = {.n_events = EVENTS};
		struct order_result out;
		size_t taken[ITEMS];
		assert_int_equal(running_order(w.item, w.n, &gaps, &choice, taken, &out, NULL, NULL), ST_OK);
		unsigned set = 0;
		for (size_t i = 0; i < out.n; i++)
			set |= 1u << taken[i];
		got = value_of(&w, set);
		if (!neighbours_keep(&w, &any, set) || got.steps != best.steps || got.items != best.items)
			check_fail("round %d: got %lld steps, %d items; want %lld, %d", round, got.steps,
				   got.items, best.steps, best.items);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(against_all_subsets),
	    cmocka_unit_test(through_each_event),
	    cmocka_unit_test(input_in_any_order),
	    cmocka_unit_test(gaps_of_any_kind),
	};
	return cmocka_run_group_tests_name("running_order", tests, NULL, NULL);
}
