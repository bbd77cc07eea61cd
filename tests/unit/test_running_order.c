/* SPDX-License-Identifier: MIT
 * Running orders small enough to be worked out by hand; the method is that of Kleinberg & Tardos 2006,
 * sec. 6.1, from memory. Times are written in minutes and given in minutes: the order does not know the unit.
 */
#include "ephem/running_order.h"

#include "tests/support/check.h"

#include <math.h>
#include <string.h>

enum { ITEMS = 8, EVENTS = 8 };

/* Gaps as a table; gap_class is a row or column. */
struct gap_table {
	double gap[ITEMS][ITEMS];
};
static double gap_of_table(const void *ctx, int from_class, int to_class)
{
	return ((const struct gap_table *)ctx)->gap[from_class][to_class];
}
static const struct gap_table no_table;

static struct order_gaps same_gap(struct gap_table *t, double gap)
{
	for (int i = 0; i < ITEMS; i++)
		for (int k = 0; k < ITEMS; k++)
			t->gap[i][k] = gap;
	return (struct order_gaps){gap_of_table, t, gap, gap};
}

/* One letter an item, its index counted from A; event and gap class are its index unless given. */
struct row {
	double from, to, worth;
	int event; /* its own index when below 0 */
	bool fixed;
};
static size_t items_of(const struct row row[], size_t n, struct order_item item[])
{
	for (size_t i = 0; i < n; i++)
		item[i] = (struct order_item){.from_d = row[i].from,
					      .to_d = row[i].to,
					      .worth = row[i].worth,
					      .gap_class = (int)i,
					      .n_events = 1,
					      .event = {row[i].event < 0 ? (int)i : row[i].event},
					      .fixed = row[i].fixed};
	return n;
}

static bool allowed(const struct order_item item[], size_t n, unsigned set, const struct gap_table *t)
{
	for (size_t i = 0; i < n; i++)
		for (size_t k = 0; k < n; k++) {
			if (i == k || !(set >> i & 1u) || !(set >> k & 1u))
				continue;
			if (item[i].event[0] == item[k].event[0])
				return false;
			if (item[i].to_d + t->gap[i][k] > item[k].from_d &&
			    item[k].to_d + t->gap[k][i] > item[i].from_d)
				return false;
		}
	return true;
}

/* The greatest worth of all subsets with the item wanted in them (-1: none). Every pair keeps its gap; one
 * event an item. */
static double best_of_all(const struct order_item item[], size_t n, const struct gap_table *t, int wanted)
{
	double best = 0.0;
	for (unsigned set = 0; set < 1u << n; set++) {
		double worth = 0.0;
		if ((wanted >= 0 && !(set >> wanted & 1u)) || !allowed(item, n, set, t))
			continue;
		for (size_t i = 0; i < n; i++)
			worth += set >> i & 1u ? item[i].worth : 0.0;
		best = fmax(best, worth);
	}
	return best;
}

static void letters(const size_t taken[], size_t n, char out[ITEMS + 1])
{
	for (size_t i = 0; i < n; i++)
		out[i] = (char)('A' + taken[i]);
	out[n] = '\0';
}

#define BY_SEVEN                                                                                             \
	{                                                                                                    \
		{0, 150, 6, -1, 0}, {100, 230, 5, -1, 0}, {160, 300, 6, -1, 0}, {230, 380, 7, -1, 0},        \
		    {300, 420, 5, -1, 0}, {380, 520, 4, -1, 0}, {430, 560, 6, -1, 0},                        \
	}

static void seven_intervals(void **state)
{
	(void)state;
	static const struct row seven[] = BY_SEVEN;
	static const struct {
		const char *source;
		double gap;
		int pin;
		double worth;
		const char *order;
	} rows[] = {
	    {"by hand: A to 150, C 160 to 300, E 300 to 420, G from 430: 6 + 6 + 5 + 6", 0.0, -1, 23.0,
	     "ACEG"},
	    {"by hand: C and E touch, so D (7) against C or E (6, 5)", 10.0, -1, 19.0, "ADG"},
	    {"by hand: A and D 80 apart, D and G 50", 15.0, -1, 19.0, "ADG"},
	    {"by hand: B shuts out A, C and D (ends at 230, D starts there); E and G stay", 10.0, 1, 16.0,
	     "BEG"},
	};
	for (size_t k = 0; k < sizeof rows / sizeof *rows; k++) {
		struct order_item item[ITEMS];
		struct gap_table table;
		struct order_gaps gaps = same_gap(&table, rows[k].gap);
		size_t n = items_of(seven, 7, item), taken[ITEMS];
		bool pinned[EVENTS] = {false};
		struct order_choice choice = {.event_pinned = pinned, .n_events = EVENTS};
		struct order_result r;
		struct err e;
		char got[ITEMS + 1];
		if (rows[k].pin >= 0)
			pinned[rows[k].pin] = true;
		assert_int_equal(running_order(item, n, &gaps, &choice, taken, &r, NULL, &e), ST_OK);
		letters(taken, r.n, got);
		assert_string_equal(got, rows[k].order);
		check_close(rows[k].source, r.worth, rows[k].worth, 0.0);
		check_close("all subsets", best_of_all(item, n, &table, rows[k].pin), rows[k].worth, 0.0);
		assert_true(r.optimal);
		check_close("bound", r.bound, r.worth, 0.0);
		assert_int_equal(r.pins_missed, 0);
	}
}

/* by hand: after A comes B only from 120 and C from 105; B D needs 210, C D 235. AB fails, ABD fails, AC
 * holds: 11; BD holds: 9. */
static void gaps_of_pairs(void **state)
{
	(void)state;
	static const struct row four[] = {
	    {0, 100, 5, -1, 0}, {110, 200, 5, -1, 0}, {120, 220, 6, -1, 0}, {225, 300, 4, -1, 0}};
	struct gap_table t = {.gap = {{0, 20, 5, 5}, {20, 0, 0, 10}, {5, 0, 0, 15}, {5, 10, 15, 0}}};
	struct order_gaps gaps = {gap_of_table, &t, 0.0, 20.0};
	struct order_choice choice = {.n_events = EVENTS};
	struct order_item item[ITEMS];
	struct order_result r;
	size_t n = items_of(four, 4, item), taken[ITEMS];
	char got[ITEMS + 1];
	assert_int_equal(running_order(item, n, &gaps, &choice, taken, &r, NULL, NULL), ST_OK);
	letters(taken, r.n, got);
	assert_string_equal(got, "AC");
	check_close("by hand", r.worth, 11.0, 0.0);
	check_close("all subsets", best_of_all(item, n, &t, -1), 11.0, 0.0);
}

/* Small tables without gaps. Letters in out: the order. */
static const struct {
	const char *source;
	struct row row[ITEMS];
	size_t n;
	const char *pins, *drops; /* digits of events */
	const char *order;
	double worth;
	int pins_missed;
} small[] = {
    {"by hand: nothing to do", {{0, 0, 0, 0, 0}}, 0, "", "", "", 0.0, 0},
    {"by hand: a pin without an item", {{0, 0, 0, 0, 0}}, 0, "3", "", "", 0.0, 1},
    {"by hand: ingress and egress of one event exclude each other",
     {{0, 10, 0.4, 0, 0}, {50, 60, 0.4, 0, 0}},
     2,
     "",
     "",
     "A",
     0.4,
     0},
    {"by hand: the same with another between them: the relaxed answer is ABC",
     {{0, 10, 0.4, 0, 0}, {20, 40, 0.3, 1, 0}, {50, 60, 0.5, 0, 0}},
     3,
     "",
     "",
     "BC",
     0.8,
     0},
    {"by hand: whole against both limbs (0.8) with something between (0.5): 0.4 + 0.5 < 1",
     {{0, 10, 0.4, 0, 0}, {20, 40, 0.5, 1, 0}, {50, 60, 0.4, 0, 0}, {0, 60, 1.0, 0, 0}},
     4,
     "",
     "",
     "D",
     1.0,
     0},
    {"by hand: two pins of worth 0 before one of worth 9",
     {{0, 10, 0, -1, 0}, {10, 20, 0, -1, 0}, {5, 15, 9, -1, 0}},
     3,
     "01",
     "",
     "AB",
     0.0,
     0},
    {"by hand: pins that clash: the one worth more",
     {{0, 10, 1, -1, 0}, {5, 15, 2, -1, 0}, {20, 30, 1, -1, 0}},
     3,
     "01",
     "",
     "BC",
     3.0,
     1},
    {"by hand: pinned ingress and egress count as one event",
     {{0, 10, 0.1, 0, 0}, {50, 60, 0.1, 0, 0}, {0, 60, 9, 1, 0}, {20, 30, 0.1, 2, 0}},
     4,
     "02",
     "",
     "AD",
     0.2,
     0},
    {"by hand: dropped", {{0, 10, 5, -1, 0}, {10, 20, 1, -1, 0}}, 2, "", "0", "B", 1.0, 0},
    {"by hand: pinned and dropped is not taken",
     {{0, 10, 5, -1, 0}, {10, 20, 1, -1, 0}},
     2,
     "0",
     "0",
     "B",
     1.0,
     1},
    {"by hand: no number is worth nothing",
     {{0, 10, (double)NAN, -1, 0}, {5, 15, 1, -1, 0}},
     2,
     "",
     "",
     "B",
     1.0,
     0},
    {"by hand: worth below 0 counts as 0", {{0, 10, -5, -1, 0}}, 1, "0", "", "A", 0.0, 0},
    {"by hand: worth 0 adds an item and nothing else",
     {{0, 10, 0, -1, 0}, {20, 30, 1, -1, 0}},
     2,
     "",
     "",
     "B",
     1.0,
     0},
    {"by hand: tie, fewer items",
     {{0, 10, 1, -1, 0}, {10, 20, 1, -1, 0}, {0, 20, 2, -1, 0}},
     3,
     "",
     "",
     "C",
     2.0,
     0},
    {"by hand: tie, earlier end", {{5, 16, 2, -1, 0}, {5, 15, 2, -1, 0}}, 2, "", "", "B", 2.0, 0},
    {"by hand: tie, lower index", {{5, 15, 2, -1, 0}, {5, 15, 2, -1, 0}}, 2, "", "", "A", 2.0, 0},
    {"by hand: a third of a step is no difference",
     {{5, 16, 2.0000000003, -1, 0}, {5, 15, 2, -1, 0}},
     2,
     "",
     "",
     "B",
     2.0,
     0},
    {"by hand: a step is one",
     {{5, 16, 2.000000001, -1, 0}, {5, 15, 2, -1, 0}},
     2,
     "",
     "",
     "A",
     2.000000001,
     0},
    {"by hand: ten tenths are one: A is the fewer items",
     {{0, 80, 0.3, -1, 0}, {0, 10, 0.1, -1, 0}, {10, 20, 0.1, -1, 0}, {20, 30, 0.1, -1, 0}},
     4,
     "",
     "",
     "A",
     0.3,
     0},
    {"by hand: a fixed item stands, worth what it may; B overlaps it, C touches it",
     {{10, 20, 0, -1, 1}, {0, 11, 9, -1, 0}, {20, 30, 1, -1, 0}},
     3,
     "",
     "",
     "AC",
     1.0,
     0},
    {"by hand: an event in a fixed item is not taken again",
     {{10, 20, 1, 0, 1}, {30, 40, 9, 0, 0}, {50, 60, 2, 1, 0}},
     3,
     "0",
     "",
     "AC",
     3.0,
     0},
    {"by hand: a fixed item stands though its event is dropped",
     {{10, 20, 1, 0, 1}},
     1,
     "",
     "0",
     "A",
     1.0,
     0},
    {"by hand: fixed items may touch and hold one event",
     {{10, 20, 1, 0, 1}, {20, 30, 1, 0, 1}},
     2,
     "",
     "",
     "AB",
     2.0,
     0},
    {"by hand: items of no length at one moment",
     {{10, 10, 1, -1, 0}, {10, 10, 1, -1, 0}, {10, 20, 1, -1, 0}, {5, 10, 1, -1, 0}},
     4,
     "",
     "",
     "DABC",
     4.0,
     0},
    {"by hand: worths of 1e9 and pins: steps coarser than 1e-9 and no overflow",
     {{0, 10, 1e9, -1, 0},
      {10, 20, 1e9, -1, 0},
      {0, 20, 1.5e9, -1, 0},
      {20, 30, 5e8, -1, 0},
      {30, 40, 5e8, -1, 0}},
     5,
     "03",
     "",
     "ABDE",
     3e9,
     0},
};

static void small_tables(void **state)
{
	(void)state;
	for (size_t k = 0; k < sizeof small / sizeof *small; k++) {
		struct order_item item[ITEMS];
		struct order_gaps gaps = {gap_of_table, &no_table, 0.0, 0.0};
		size_t n = items_of(small[k].row, small[k].n, item), taken[ITEMS] = {0};
		bool pinned[EVENTS], dropped[EVENTS];
		for (int i = 0; i < EVENTS; i++) {
			pinned[i] = strchr(small[k].pins, '0' + i) != NULL;
			dropped[i] = strchr(small[k].drops, '0' + i) != NULL;
		}
		struct order_choice choice = {pinned, dropped, EVENTS, 0};
		struct order_result r;
		struct err e;
		char got[ITEMS + 1];
		assert_int_equal(running_order(item, n, &gaps, &choice, taken, &r, NULL, &e), ST_OK);
		letters(taken, r.n, got);
		if (strcmp(got, small[k].order) != 0 || r.pins_missed != small[k].pins_missed || !r.optimal)
			check_fail("%s: got %s, %d pins missed, optimal %d; want %s, %d", small[k].source,
				   got, r.pins_missed, r.optimal, small[k].order, small[k].pins_missed);
		check_close(small[k].source, r.worth, small[k].worth, 0.0);
		check_close("bound", r.bound, r.worth, 0.0);
	}
}

/* by hand: gap 10 to both sides of the fixed B [100, 200]. A ends at 90 and stays, C at 91 and is out; D
 * starts at 210, E at 209. F and B are closer than the gap and both stand. */
static void gaps_at_fixed_items(void **state)
{
	(void)state;
	static const struct row six[] = {{0, 90, 1, -1, 0},    {100, 200, 0, -1, 1}, {0, 91, 5, -1, 0},
					 {210, 300, 1, -1, 0}, {209, 300, 5, -1, 0}, {301, 400, 0.5, -1, 1}};
	struct gap_table table;
	struct order_gaps gaps = same_gap(&table, 10.0);
	struct order_choice choice = {.n_events = EVENTS};
	struct order_item item[ITEMS];
	struct order_result r;
	size_t n = items_of(six, 5, item), taken[ITEMS];
	char got[ITEMS + 1];
	assert_int_equal(running_order(item, n, &gaps, &choice, taken, &r, NULL, NULL), ST_OK);
	letters(taken, r.n, got);
	assert_string_equal(got, "ABD");
	n = items_of(six, 6, item); /* F shuts D out: 300 + 10 > 301 */
	assert_int_equal(running_order(item, n, &gaps, &choice, taken, &r, NULL, NULL), ST_OK);
	letters(taken, r.n, got);
	assert_string_equal(got, "ABF");
	check_close("by hand: fixed items included", r.worth, 1.5, 0.0);
	item[5].from_d = 205.0; /* 5 after B: less than the gap, and it has begun */
	assert_int_equal(running_order(item, n, &gaps, &choice, taken, &r, NULL, NULL), ST_OK);
	letters(taken, r.n, got);
	assert_string_equal(got, "ABF");
}

/* by hand: from A straight to C takes 200, by way of the fixed B 5 and 5: only neighbours need to keep their
 * gap. D before B as well, so its gap to A counts. */
static void gaps_across_a_fixed_item(void **state)
{
	(void)state;
	static const struct row four[] = {
	    {0, 40, 1, -1, 0}, {100, 110, 0, -1, 1}, {120, 200, 1, -1, 0}, {50, 90, 0.5, -1, 0}};
	struct gap_table t = {.gap = {{0, 5, 200, 20}, {5, 0, 5, 5}, {200, 5, 0, 5}, {20, 5, 5, 0}}};
	struct order_gaps gaps = {gap_of_table, &t, 5.0, 200.0};
	struct order_choice choice = {.n_events = EVENTS};
	struct order_item item[ITEMS];
	struct order_result r;
	size_t n = items_of(four, 4, item), taken[ITEMS];
	char got[ITEMS + 1];
	assert_int_equal(running_order(item, n, &gaps, &choice, taken, &r, NULL, NULL), ST_OK);
	letters(taken, r.n, got);
	assert_string_equal(got, "ABC");
	check_close("by hand", r.worth, 2.0, 0.0);
}

static enum status refused(struct order_item item, struct order_gaps gaps, int n_events)
{
	struct order_item pair[2] = {{.from_d = 0.0, .to_d = 1.0, .worth = 1.0}, item};
	struct order_choice choice = {.n_events = n_events};
	struct order_result r;
	struct err e = {0};
	size_t taken[2];
	enum status s = running_order(pair, 2, &gaps, &choice, taken, &r, NULL, &e);
	assert_int_equal(e.text[0] != '\0', s != ST_OK);
	return s;
}

static void what_is_refused(void **state)
{
	(void)state;
	const double nan_d = (double)NAN, inf_d = (double)INFINITY;
	const struct order_gaps none = {gap_of_table, &no_table, 0.0, 0.0};
	static const struct {
		double from_d, to_d;
		int n_events, event;
		enum status want;
	} rows[] = {
	    {2, 3, 1, 3, ST_OK},     {2, 2, 0, 0, ST_OK},    {3, 2, 1, 0, ST_RANGE},  {2, 3, 1, 4, ST_RANGE},
	    {2, 3, 1, -1, ST_RANGE}, {2, 3, 9, 0, ST_RANGE}, {2, 3, -1, 0, ST_RANGE},
	};
	for (size_t k = 0; k < sizeof rows / sizeof *rows; k++) {
		struct order_item item = {
		    .from_d = rows[k].from_d, .to_d = rows[k].to_d, .n_events = rows[k].n_events};
		item.event[0] = rows[k].event;
		assert_int_equal(refused(item, none, 4), rows[k].want);
	}
	const double bad[] = {nan_d, inf_d, -inf_d};
	for (size_t k = 0; k < 3; k++) {
		assert_int_equal(refused((struct order_item){.from_d = bad[k], .to_d = 1.0}, none, 4),
				 ST_RANGE);
		assert_int_equal(refused((struct order_item){.from_d = 0.0, .to_d = bad[k]}, none, 4),
				 ST_RANGE);
	}
	struct order_item good = {.from_d = 0.0, .to_d = 1.0};
	assert_int_equal(refused(good, (struct order_gaps){gap_of_table, &no_table, -1.0, 0.0}, 4), ST_RANGE);
	assert_int_equal(refused(good, (struct order_gaps){gap_of_table, &no_table, 1.0, 0.5}, 4), ST_RANGE);
	assert_int_equal(refused(good, (struct order_gaps){gap_of_table, &no_table, 0.0, nan_d}, 4),
			 ST_RANGE);
	assert_int_equal(refused(good, none, -1), ST_RANGE);
}

static void fixed_items_that_overlap(void **state)
{
	(void)state;
	static const struct row rows[] = {{0, 10, 1, -1, 1}, {20, 40, 1, -1, 1}, {39, 60, 1, -1, 1}};
	struct order_gaps gaps = {gap_of_table, &no_table, 0.0, 0.0};
	struct order_choice choice = {.n_events = EVENTS};
	struct order_item item[ITEMS];
	struct order_result r;
	struct err e;
	size_t n = items_of(rows, 3, item), taken[ITEMS], conflict[2] = {9, 9};
	assert_int_equal(running_order(item, n, &gaps, &choice, taken, &r, conflict, &e), ST_CONFLICT);
	assert_int_equal(conflict[0], 1);
	assert_int_equal(conflict[1], 2);
	assert_int_equal(running_order(item, n, &gaps, &choice, taken, &r, NULL, &e), ST_CONFLICT);
	item[0] = (struct order_item){
	    .from_d = 25.0, .to_d = 25.0, .fixed = true}; /* no length, but within another */
	item[2].fixed = false;
	assert_int_equal(running_order(item, n, &gaps, &choice, taken, &r, conflict, &e), ST_CONFLICT);
}

/* by hand: eight limbs of four events one after the other, all worth 1: the relaxed answer is 8, the true
 * one 4. With one look the best found is an order all the same, and the bound says what may be left. */
static void looks_run_out(void **state)
{
	(void)state;
	struct row rows[ITEMS];
	for (int i = 0; i < ITEMS; i++)
		rows[i] = (struct row){10.0 * i, 10.0 * i + 9.0, 1.0 + 0.01 * i, i % 4, false};
	struct order_gaps gaps = {gap_of_table, &no_table, 0.0, 0.0};
	struct order_choice choice = {.n_events = 4, .nodes_max = 1};
	struct order_item item[ITEMS];
	struct order_result r;
	size_t n = items_of(rows, ITEMS, item), taken[ITEMS];
	assert_int_equal(running_order(item, n, &gaps, &choice, taken, &r, NULL, NULL), ST_OK);
	assert_false(r.optimal);
	assert_true(r.worth > 0.0 && r.worth <= 4.22 && r.bound >= 4.22 && r.bound <= 8.28);
	bool seen[4] = {false};
	for (size_t i = 0; i < r.n; i++) {
		assert_false(seen[item[taken[i]].event[0]]);
		seen[item[taken[i]].event[0]] = true;
	}
	choice.nodes_max = 0;
	assert_int_equal(running_order(item, n, &gaps, &choice, taken, &r, NULL, NULL), ST_OK);
	assert_true(r.optimal);
	check_close("by hand: 1.04 + 1.05 + 1.06 + 1.07", r.worth, 4.22, 0.0);
	check_close("all subsets", best_of_all(item, n, &no_table, -1), 4.22, 1e-12);
	check_close("bound", r.bound, 4.22, 0.0);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(seven_intervals),
	    cmocka_unit_test(gaps_of_pairs),
	    cmocka_unit_test(small_tables),
	    cmocka_unit_test(gaps_at_fixed_items),
	    cmocka_unit_test(gaps_across_a_fixed_item),
	    cmocka_unit_test(what_is_refused),
	    cmocka_unit_test(fixed_items_that_overlap),
	    cmocka_unit_test(looks_run_out),
	};
	return cmocka_run_group_tests_name("running_order", tests, NULL, NULL);
}
