/* SPDX-License-Identifier: MIT
 * Plans of nights put together by hand. Every expected figure follows by hand from the rules in the header:
 * an event of T14 2 h with limbs of 20 min, B 30 min, b_min 15 min and pad 5 min about `mid` has T1, T4 = mid
 * -+ 60 min, its reserve is mid -+ 90 min, cut down mid -+ 80 min, latest start mid - 75 min, ingress alone
 * until mid - 35 min, egress alone from mid + 35 min. Moves: 4 min and 1 s a degree; the first one 5.5 min.
 * Minutes of the night. */
#include "ephem/night_plan.h"

#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/plan_scene.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>

#define TOLERANCE_MIN 1e-6 /* 60 microseconds; rounding of days is 1e-10 min */

static struct window *event(struct plan_scene *s, const struct prepared *p, double mid_min)
{
	return scene_window(s, p, mid_min * MIN_D, 60.0 * MIN_D, 20.0 * MIN_D, 30.0 * MIN_D, 5.0 * MIN_D);
}

static struct night_plan plan(struct plan_scene *s)
{
	struct night_plan p;
	struct err e;
	if (night_plan_make(&s->input, &p, &e) != ST_OK)
		check_fail("%s", e.text);
	assert_true(p.optimal);
	check_close("bound", p.bound, p.worth, 1e-12);
	return p;
}

static void check_item(const char *what, const struct plan_item *item, double from_min, double to_min,
		       double worth)
{
	check_close(what, item->from_d * DAY_MIN, from_min, TOLERANCE_MIN);
	check_close(what, item->to_d * DAY_MIN, to_min, TOLERANCE_MIN);
	check_close(what, item->worth, worth, 1e-12);
}

static const struct plan_left *left_of(const struct night_plan *p, size_t offer)
{
	for (size_t i = 0; i < p->n_left; i++)
		if (p->left[i].offer == offer)
			return &p->left[i];
	check_fail("offer %zu is not among what is left", offer);
}

struct way_row {
	const char *what;
	enum variant variant;
	double from_min, to_min, latest_min, worth;
};

static void check_ways_of(struct plan_scene *s, const char *scene, size_t offer, const struct way_row row[],
			  int n)
{
	char what[160];
	struct plan_way way[PLAN_WAYS_MAX];
	const int got = plan_ways(&s->input, offer, way);
	if (got != n)
		check_fail("%s: %d ways, expected %d", scene, got, n);
	for (int i = 0; i < n; i++) {
		snprintf(what, sizeof what, "%s: %s", scene, row[i].what);
		if (way[i].variant != row[i].variant)
			check_fail("%s: way %d is %s", what, i, variant_words[way[i].variant]);
		check_close(what, way[i].from_d * DAY_MIN, row[i].from_min, TOLERANCE_MIN);
		check_close(what, way[i].to_d * DAY_MIN, row[i].to_min, TOLERANCE_MIN);
		check_close(what, way[i].latest_start_d * DAY_MIN, row[i].latest_min, TOLERANCE_MIN);
		check_close(what, way[i].worth, row[i].worth, 1e-12);
	}
}

static void test_rules(void **state)
{
	(void)state;
	struct telescope t = telescope_empty();
	struct plan_rules r = plan_rules_of(&t);
	const struct plan_rules b = plan_rules_built_in();
	check_close("settle, nothing known", r.settle_d, b.settle_d, 0.0);
	check_close("slew, nothing known", r.slew_deg_d, 86400.0, 0.0);
	check_close("field, nothing known", r.field_deg, 0.0, 0.0);
	t.slew_deg_s = 2.5;
	t.settle_min = 0.0;
	t.filter_min = 1.0;
	t.field_arcmin = 24.0;
	r = plan_rules_of(&t);
	check_close("settle", r.settle_d, 0.0, 0.0);
	check_close("slew", r.slew_deg_d, 216000.0, 1e-9);
	check_close("filter", r.filter_d * DAY_MIN, 1.0, 1e-12);
	check_close("half the field", r.field_deg, 0.2, 1e-12);
	t.slew_deg_s = 0.0; /* a telescope that does not move: not believed */
	check_close("no speed", plan_rules_of(&t).slew_deg_d, 86400.0, 0.0);
	const struct vec3 x = {1.0, 0.0, 0.0}, y = {0.0, 1.0, 0.0};
	check_close("90 deg in 90 s and 4 min", plan_move_d(&b, x, y) * DAY_MIN, 5.5, 1e-9);
}

static void test_worth(void **state)
{
	(void)state;
	static const struct {
		const char *what;
		double priority, done, coverage, worth;
	} rows[] = {
	    {"no priority given", NAN, 0.9, 1.0, 0.9},
	    {"priority 3", 3.0, 0.5, 1.0, 1.5},
	    {"no chance: a tenth of the coverage", 2.0, NAN, 0.6, 0.12},
	    {"no chance, no coverage", NAN, NAN, NAN, 0.0},
	    {"chance 0", NAN, 0.0, 1.0, 0.0},
	};
	struct plan_scene *s = scene_open();
	struct prepared *p = scene_planet(s, "Tern 1 b", 100.0, 20.0);
	struct window *w = event(s, p, 600.0);
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		s->target[0].priority = rows[i].priority;
		w->chance.done = rows[i].done;
		w->cover.coverage = rows[i].coverage;
		check_close(rows[i].what, plan_worth(w, &s->rules), rows[i].worth, 1e-12);
	}
	scene_close(s);
}

static void test_ways_of_one(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	struct window *w = event(s, scene_planet(s, "Tern 1 b", 100.0, 20.0), 600.0);
	static const struct way_row all[] = {
	    {"whole", VARIANT_WHOLE, 510.0, 690.0, 525.0, 0.9},
	    {"cut before", VARIANT_SHORT, 520.0, 690.0, 525.0, 0.9 * 0.95},
	    {"cut after", VARIANT_SHORT, 510.0, 680.0, 525.0, 0.9 * 0.95},
	    {"cut on both sides", VARIANT_SHORT, 520.0, 680.0, 525.0, 0.9 * 0.95 * 0.95},
	    {"ingress", VARIANT_INGRESS, 510.0, 565.0, 525.0, 0.4 * 0.95},
	    {"egress", VARIANT_EGRESS, 635.0, 690.0, 635.0, 0.4 * 0.95},
	};
	check_ways_of(s, "one window", 0, all, 6);
	w->event.t2_d = w->event.t3_d = NAN;
	static const struct way_row grazing[] = {
	    {"whole", VARIANT_WHOLE, 510.0, 690.0, 525.0, 0.9},
	    {"cut before", VARIANT_SHORT, 520.0, 690.0, 525.0, 0.9 * 0.95},
	    {"cut after", VARIANT_SHORT, 510.0, 680.0, 525.0, 0.9 * 0.95},
	    {"cut on both sides", VARIANT_SHORT, 520.0, 680.0, 525.0, 0.9 * 0.95 * 0.95},
	    {"grazing ingress: to mid and pad", VARIANT_INGRESS, 510.0, 605.0, 525.0, 0.4 * 0.95},
	    {"grazing egress", VARIANT_EGRESS, 595.0, 690.0, 595.0, 0.4 * 0.95},
	};
	check_ways_of(s, "one window", 0, grazing, 6);
	w->chance = (struct window_chance){NAN, NAN, NAN, NAN};
	w->cover.coverage = 0.7;
	static const struct way_row unknown[] = {
	    {"no chance: whole only", VARIANT_WHOLE, 510.0, 690.0, 525.0, 0.07}};
	check_ways_of(s, "one window", 0, unknown, 1);
	s->input.not_before_d = 515.0 * MIN_D; /* a late start that is forced is taken all the same */
	static const struct way_row late[] = {
	    {"no chance, late", VARIANT_SHORT, 520.5, 690.0, 525.0, 0.07 * 0.95}};
	check_ways_of(s, "one window", 0, late, 1);
	s->input.not_before_d = -INFINITY;
	w->cover.limb_usable = false;
	check_ways_of(s, "one window", 0, NULL, 0);
	w->chance = (struct window_chance){.ingress = 0.3, .egress = 0.0, .mid = 0.5, .done = 0.0};
	static const struct way_row ingress[] = {
	    {"egress below the horizon", VARIANT_INGRESS, 510.0, 605.0, 525.0, 0.12}};
	check_ways_of(s, "one window", 0, ingress, 1);
	scene_close(s);
}

/* What the sky takes does not count as a cut: the chance knows of it. */
static void test_sky_cuts(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	struct window *w = event(s, scene_planet(s, "Tern 1 b", 100.0, 20.0), 600.0);
	w->cover.usable = intervals_one(530.0 * MIN_D, 590.0 * MIN_D);
	intervals_append(&w->cover.usable, 600.0 * MIN_D, 688.0 * MIN_D);
	static const struct way_row rows[] = {
	    {"dusk at 530", VARIANT_WHOLE, 530.0, 688.0, 530.0, 0.9},
	    {"cut after", VARIANT_SHORT, 530.0, 680.0, 530.0, 0.9 * 0.95},
	    {"ingress", VARIANT_INGRESS, 530.0, 565.0, 530.0, 0.38},
	    {"egress", VARIANT_EGRESS, 635.0, 688.0, 635.0, 0.38},
	};
	check_ways_of(s, "one window", 0, rows, 4);
	scene_close(s);
}

/* Where the free time begins late or ends early. */
static void test_span_edges(void **state)
{
	(void)state;
	static const struct {
		const char *what;
		enum { BLOCK, CLOUD, NOT_ALLOTTED, NOT_BEFORE } by;
		int n;
		double from_min, to_min;
		struct way_row way[4];
	} rows[] = {
	    {"block until 515: the first move, then a late start",
	     BLOCK,
	     4,
	     400.0,
	     515.0,
	     {{"late", VARIANT_SHORT, 520.5, 690.0, 525.0, 0.9 * 0.95},
	      {"late and cut after", VARIANT_SHORT, 520.5, 680.0, 525.0, 0.9 * 0.95 * 0.95},
	      {"ingress", VARIANT_INGRESS, 520.5, 565.0, 525.0, 0.38},
	      {"egress", VARIANT_EGRESS, 635.0, 690.0, 635.0, 0.38}}},
	    {"block until 520: too late for the ingress by half a minute",
	     BLOCK,
	     1,
	     400.0,
	     520.0,
	     {{"egress", VARIANT_EGRESS, 635.0, 690.0, 635.0, 0.38}}},
	    {"cloud until 524: no move",
	     CLOUD,
	     4,
	     400.0,
	     524.0,
	     {{"late", VARIANT_SHORT, 524.0, 690.0, 525.0, 0.9 * 0.95},
	      {"late and cut after", VARIANT_SHORT, 524.0, 680.0, 525.0, 0.9 * 0.95 * 0.95},
	      {"ingress", VARIANT_INGRESS, 524.0, 565.0, 525.0, 0.38},
	      {"egress", VARIANT_EGRESS, 635.0, 690.0, 635.0, 0.38}}},
	    {"cloud in the flat part: either limb alone",
	     CLOUD,
	     2,
	     590.0,
	     620.0,
	     {{"ingress", VARIANT_INGRESS, 510.0, 565.0, 525.0, 0.38},
	      {"egress", VARIANT_EGRESS, 635.0, 690.0, 635.0, 0.38}}},
	    {"cloud over the ingress: the egress is left",
	     CLOUD,
	     1,
	     530.0,
	     560.0,
	     {{"egress", VARIANT_EGRESS, 635.0, 690.0, 635.0, 0.38}}},
	    {"block from 670: b_min is not left after T4",
	     BLOCK,
	     1,
	     670.0,
	     800.0,
	     {{"ingress", VARIANT_INGRESS, 510.0, 565.0, 525.0, 0.38}}},
	    {"time of others from 676: cut at the end",
	     NOT_ALLOTTED,
	     4,
	     676.0,
	     800.0,
	     {{"early end", VARIANT_SHORT, 510.0, 676.0, 525.0, 0.9 * 0.95},
	      {"and cut before", VARIANT_SHORT, 520.0, 676.0, 525.0, 0.9 * 0.95 * 0.95},
	      {"ingress", VARIANT_INGRESS, 510.0, 565.0, 525.0, 0.38},
	      {"egress", VARIANT_EGRESS, 635.0, 676.0, 635.0, 0.38}}},
	    {"time of others until 629: the move ends at 634.5",
	     NOT_ALLOTTED,
	     1,
	     0.0,
	     629.0,
	     {{"egress", VARIANT_EGRESS, 635.0, 690.0, 635.0, 0.38}}},
	    {"from now on, 518: the move ends at 523.5",
	     NOT_BEFORE,
	     4,
	     0.0,
	     518.0,
	     {{"late", VARIANT_SHORT, 523.5, 690.0, 525.0, 0.9 * 0.95},
	      {"late and cut after", VARIANT_SHORT, 523.5, 680.0, 525.0, 0.9 * 0.95 * 0.95},
	      {"ingress", VARIANT_INGRESS, 523.5, 565.0, 525.0, 0.38},
	      {"egress", VARIANT_EGRESS, 635.0, 690.0, 635.0, 0.38}}},
	    {"from now on, 640: nothing is left", NOT_BEFORE, 0, 0.0, 640.0, {{"", 0, 0, 0, 0, 0}}},
	    {"cloud over all of it", CLOUD, 0, 400.0, 800.0, {{"", 0, 0, 0, 0, 0}}},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		struct plan_scene *s = scene_open();
		event(s, scene_planet(s, "Tern 1 b", 100.0, 20.0), 600.0);
		if (rows[i].by == NOT_BEFORE)
			s->input.not_before_d = rows[i].to_min * MIN_D;
		else
			scene_take(rows[i].by == BLOCK	 ? &s->free.unblocked
				   : rows[i].by == CLOUD ? &s->free.clear
							 : &s->free.allotted,
				   rows[i].from_min * MIN_D, rows[i].to_min * MIN_D);
		scene_cut(s);
		check_ways_of(s, rows[i].what, 0, rows[i].way, rows[i].n);
		scene_close(s);
	}
}

/* Two stars 90 deg apart, 5.5 min: the second one begins where the first one ends, so one baseline is cut. */
static void test_short_where_it_helps(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	event(s, scene_planet(s, "Tern 1 b", 100.0, 0.0), 600.0);
	event(s, scene_planet(s, "Tern 2 b", 190.0, 0.0), 780.0);
	s->target[0].priority = 2.0;
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 2);
	check_item("first, whole", &p.item[0], 510.0, 690.0, 1.8);
	check_item("second, cut before", &p.item[1], 700.0, 870.0, 0.9 * 0.95);
	assert_int_equal(p.item[1].member[0].variant, VARIANT_SHORT);
	check_close("latest start", p.item[1].latest_start_d * DAY_MIN, 705.0, TOLERANCE_MIN);
	check_close("slew by, first", p.item[0].slew_by_d * DAY_MIN, 504.5, TOLERANCE_MIN);
	check_close("slew by, second", p.item[1].slew_by_d * DAY_MIN, 694.5, TOLERANCE_MIN);
	check_close("worth", p.worth, 1.8 + 0.9 * 0.95, 1e-12);
	assert_int_equal(p.n_left, 0);
	night_plan_free(&p);
	scene_close(s);
}

static void test_siblings_joint(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	const struct prepared *c = scene_planet(s, "Tern 1 c", 100.01, 20.0),
			      *b = scene_planet(s, "Tern 1 b", 100.0, 20.0);
	event(s, c, 700.0);
	event(s, b, 600.0);
	scene_link(s);
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 1);
	check_item("both at once", &p.item[0], 510.0, 790.0, 1.8);
	assert_int_equal(p.item[0].n, 2);
	assert_int_equal(p.item[0].member[0].offer, 1); /* in order of T1 */
	assert_int_equal(p.item[0].member[1].offer, 0);
	check_close("of the first", p.item[0].member[0].to_d * DAY_MIN, 690.0, TOLERANCE_MIN);
	check_close("of the second", p.item[0].member[1].from_d * DAY_MIN, 610.0, TOLERANCE_MIN);
	check_close("latest start", p.item[0].latest_start_d * DAY_MIN, 525.0, TOLERANCE_MIN);
	night_plan_free(&p);
	scene_close(s);
}

/* One star, two events that do not touch. */
static void test_siblings_apart(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	const struct prepared *c = scene_planet(s, "Tern 1 c", 100.01, 20.0),
			      *b = scene_planet(s, "Tern 1 b", 100.0, 20.0);
	struct window *later = event(s, c, 790.0);
	event(s, b, 600.0);
	scene_link(s);
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 2);
	check_close("slew by: it stays where it is", p.item[1].slew_by_d * DAY_MIN, 700.0, TOLERANCE_MIN);
	night_plan_free(&p);
	/* a gap of the settling is bridged */
	later->event.reserve_start_d = 693.9 * MIN_D;
	later->cover.usable = intervals_one(693.9 * MIN_D, 880.0 * MIN_D);
	p = plan(s);
	assert_int_equal(p.n_items, 1);
	night_plan_free(&p);
	/* not with a cloud of a minute in it */
	scene_take(&s->free.clear, 691.0 * MIN_D, 692.0 * MIN_D);
	scene_cut(s);
	p = plan(s);
	assert_int_equal(p.n_items, 2);
	check_close("no move under the cloud", p.item[1].slew_by_d * DAY_MIN, 693.9, TOLERANCE_MIN);
	night_plan_free(&p);
	/* nor with a block */
	s->free = free_time_whole();
	scene_take(&s->free.unblocked, 691.0 * MIN_D, 692.0 * MIN_D);
	scene_cut(s);
	p = plan(s);
	assert_int_equal(p.n_items, 2);
	check_item("after the block, and the move", &p.item[1], 697.5, 880.0, 0.9 * 0.95);
	check_close("slew by: from the block", p.item[1].slew_by_d * DAY_MIN, 692.0, TOLERANCE_MIN);
	night_plan_free(&p);
	scene_close(s);
}

/* What lies in the time of a joint item is left out of it where it is worth more later: C's ingress,
 * 650..705, is in the time of A and B, 510..730, but its egress, 775..830, is worth more. */
static void test_joint_without(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	const struct prepared *b = scene_planet(s, "Tern 1 b", 100.0, 20.0);
	event(s, b, 600.0)->chance = (struct window_chance){0.0, 0.0, 0.9, 0.9};
	event(s, b, 640.0)->chance = (struct window_chance){0.0, 0.0, 0.9, 0.9};
	event(s, b, 740.0)->chance = (struct window_chance){0.1, 0.95, 0.5, 0.0};
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 2);
	check_item("A and B", &p.item[0], 510.0, 730.0, 1.8);
	check_item("C's egress", &p.item[1], 775.0, 830.0, 0.38);
	night_plan_free(&p);
	scene_close(s);
}

/* C's ingress lies in the time of A and B, its egress in that of D and E, and both are worth the same: it is
 * done once, and the others too. */
static void test_joint_tie(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	const struct prepared *b = scene_planet(s, "Tern 1 b", 100.0, 20.0);
	const double mid_min[5] = {600.0, 640.0, 740.0, 860.0, 900.0};
	for (int i = 0; i < 5; i++)
		event(s, b, mid_min[i])->chance = i == 2 ? (struct window_chance){0.95, 0.95, 0.5, 0.0}
							 : (struct window_chance){0.0, 0.0, 0.9, 0.9};
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 2);
	check_close("all five", p.worth, 4 * 0.9 + 0.38, 1e-9);
	night_plan_free(&p);
	scene_close(s);
}

/* Sixty stars of one field at nearly the same time: the eight that are worth most. */
static void test_crowded_field(void **state)
{
	(void)state;
	static char names[60][16];
	struct plan_scene *s = scene_open();
	s->rules.field_deg = 0.5;
	for (int i = 0; i < 60; i++) {
		snprintf(names[i], sizeof names[i], "Tern %d b", i + 1);
		event(s, scene_planet(s, names[i], 100.0 + 0.005 * i, 0.0), 600.0)->chance =
		    (struct window_chance){0.0, 0.0, 0.9, i % 7 == 0 ? 0.9 : 0.2};
	}
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 1);
	assert_int_equal(p.item[0].n, PLAN_MEMBERS_MAX);
	check_item("eight of the nine", &p.item[0], 510.0, 690.0, 8 * 0.9);
	assert_int_equal(p.n_left, 52);
	night_plan_free(&p);
	scene_close(s);
}

/* A planet with a period of 0.1 d (144 min): events of 90 min with 30 min on either side need 150 min. */
static void test_consecutive_events(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	const struct prepared *b = scene_planet(s, "Tern 1 b", 100.0, 20.0);
	for (int i = 0; i < 4; i++)
		scene_window(s, b, (500.0 + 144.0 * i) * MIN_D, 45.0 * MIN_D, 10.0 * MIN_D, 30.0 * MIN_D,
			     5.0 * MIN_D);
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 1);
	assert_int_equal(p.item[0].n, 4);
	check_item("all four", &p.item[0], 425.0, 1007.0, 3.6);
	for (int i = 0; i < 4; i++) {
		assert_int_equal(p.item[0].member[i].offer, i);
		assert_int_equal(p.item[0].member[i].variant, VARIANT_WHOLE);
	}
	night_plan_free(&p);
	s->offer[1].dropped = true; /* the first one alone; the third and fourth together */
	p = plan(s);
	assert_int_equal(p.n_items, 2);
	assert_int_equal(p.item[1].n, 2);
	assert_int_equal(p.n_left, 1);
	assert_int_equal(p.left[0].reason, LEFT_DROPPED);
	check_close("cost of what was dropped", p.left[0].cost, NAN, 0.0);
	night_plan_free(&p);
	scene_close(s);
}

/* More events than an item holds: several items. */
static void test_many_consecutive_events(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	struct prepared *b = scene_planet(s, "Tern 1 b", 100.0, 20.0);
	for (int i = 0; i < 24; i++) /* every 28.8 min, 28 min long: no gap that is worth a name */
		scene_window(s, b, (400.0 + 28.8 * i) * MIN_D, 10.0 * MIN_D, 3.0 * MIN_D, 4.0 * MIN_D,
			     1.0 * MIN_D);
	b->limits.value[LIM_MIN_BASELINE] = 3.0;
	struct night_plan p = plan(s);
	check_close("all of them", p.worth, 24 * 0.9, 1e-9);
	assert_int_equal(p.n_items, 3);
	for (size_t i = 0; i < p.n_items; i++)
		assert_int_equal(p.item[i].n, PLAN_MEMBERS_MAX);
	night_plan_free(&p);
	scene_close(s);
}

static void test_transit_and_occultation(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	const struct prepared *b = scene_planet(s, "Tern 1 b", 100.0, 20.0);
	event(s, b, 600.0);
	event(s, b, 720.0)->event.kind = KIND_OCCULTATION;
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 1);
	check_item("both", &p.item[0], 510.0, 810.0, 1.8);
	night_plan_free(&p);
	scene_close(s);
}

/* Stars 0.2 deg apart in a row, a field of 0.3 deg: the middle one has both others in its field. */
static void test_field(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	event(s, scene_planet(s, "Tern 1 b", 100.0, 0.0), 600.0);
	event(s, scene_planet(s, "Tern 2 b", 100.2, 0.0), 620.0);
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 1);
	assert_int_equal(p.item[0].n, 1); /* no field: one of them */
	night_plan_free(&p);
	s->rules.field_deg = 0.3;
	p = plan(s);
	assert_int_equal(p.n_items, 1);
	check_item("two stars", &p.item[0], 510.0, 710.0, 1.8);
	night_plan_free(&p);
	event(s, scene_planet(s, "Tern 3 b", 100.4, 0.0), 640.0);
	p = plan(s);
	assert_int_equal(p.n_items, 1);
	check_item("three stars round the middle one", &p.item[0], 510.0, 730.0, 2.7);
	night_plan_free(&p);
	s->offer[1].dropped = true; /* the outer two can't be had from either */
	p = plan(s);
	assert_int_equal(p.n_items, 1);
	assert_int_equal(p.item[0].n, 1);
	assert_int_equal(left_of(&p, p.item[0].member[0].offer == 0 ? 2 : 0)->reason, LEFT_CLASH);
	night_plan_free(&p);
	scene_close(s);
}

/* By hand: 10 deg apart, 4 min to settle and 10 s of moving fit into 4.4 min; half a minute for another
 * filter does not, so that a baseline is cut. */
static void test_filters(void **state)
{
	(void)state;
	static const struct {
		const char *what;
		enum band_id band[2];
		double worth, gap_min;
	} rows[] = {
	    {"no filter is asked for", {BAND_NONE, BAND_NONE}, 1.8, 4.0 + 10.0 / 60.0},
	    {"one of them asks", {BAND_R, BAND_NONE}, 1.8, 4.0 + 10.0 / 60.0},
	    {"the same filter", {BAND_R, BAND_R}, 1.8, 4.0 + 10.0 / 60.0},
	    {"two filters", {BAND_R, BAND_V}, 0.9 + 0.9 * 0.95, 4.5 + 10.0 / 60.0},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct plan_scene *s = scene_open();
		struct goal goal[2];
		struct observed observed[2];
		for (int k = 0; k < 2; k++) {
			struct prepared *planet =
			    scene_planet(s, k ? "Tern 2 b" : "Tern 1 b", 100.0 + 10.0 * k, 0.0);
			goal[k] = (struct goal){.band = rows[i].band[k], .wanted = 2, .until_jd = NAN};
			observed[k] = observed_unknown();
			observed[k].goal = &goal[k];
			observed[k].n_goals = 1;
			planet->observed = &observed[k];
			event(s, planet, 600.0 + 184.4 * k);
		}
		struct night_plan p = plan(s);
		assert_int_equal(p.n_items, 2);
		check_close(rows[i].what, p.worth, rows[i].worth, 1e-12);
		check_close(rows[i].what, (p.item[1].from_d - p.item[1].slew_by_d) * DAY_MIN, rows[i].gap_min,
			    1e-3);
		night_plan_free(&p);
		scene_close(s);
	}
}

/* The middle star's event is hours later: nothing to point at catches both others. */
static void test_field_without_middle(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	s->rules.field_deg = 0.3;
	event(s, scene_planet(s, "Tern 1 b", 100.0, 0.0), 600.0);
	event(s, scene_planet(s, "Tern 2 b", 100.2, 0.0), 900.0);
	event(s, scene_planet(s, "Tern 3 b", 100.4, 0.0), 610.0);
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 2);
	assert_int_equal(p.item[0].n, 1);
	check_close("one of the outer ones, and the middle one", p.worth, 1.8, 1e-9);
	night_plan_free(&p);
	scene_close(s);
}

/* A block in the middle of the night: what ends before it, what begins after it and the first move. */
static void test_block_between(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	const struct prepared *b = scene_planet(s, "Tern 1 b", 100.0, 20.0);
	event(s, b, 500.0); /* 410 .. 590 */
	event(s, b, 720.0); /* 630 .. 810 */
	scene_take(&s->free.unblocked, 590.0 * MIN_D, 620.0 * MIN_D);
	scene_cut(s);
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 2);
	check_item("before the block", &p.item[0], 410.0, 590.0, 0.9);
	check_item("after it", &p.item[1], 630.0, 810.0, 0.9);
	check_close("first move after a block", p.item[1].slew_by_d * DAY_MIN, 624.5, TOLERANCE_MIN);
	night_plan_free(&p);
	/* under clouds the telescope stays where it is */
	s->free = free_time_whole();
	scene_take(&s->free.clear, 590.0 * MIN_D, 620.0 * MIN_D);
	p = plan(s);
	check_close("no move under clouds", p.item[1].slew_by_d * DAY_MIN, 630.0, TOLERANCE_MIN);
	night_plan_free(&p);
	scene_close(s);
}

/* A, worth 0.9, and B, worth 0.5, want the same time; C, worth 0.8, is free of both, D can't be caught. */
static void test_clash_pin_drop(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	event(s, scene_planet(s, "Tern 1 b", 100.0, 0.0), 500.0);
	event(s, scene_planet(s, "Tern 2 b", 120.0, 0.0), 500.0);
	event(s, scene_planet(s, "Tern 3 b", 140.0, 0.0), 900.0);
	event(s, scene_planet(s, "Tern 4 b", 160.0, 0.0), 900.0);
	const double done[4] = {0.9, 0.5, 0.8, 0.0};
	for (int i = 0; i < 4; i++)
		s->window[i].chance = (struct window_chance){0.0, 0.0, done[i], done[i]};
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 2);
	check_close("A and C", p.worth, 1.7, 1e-12);
	assert_int_equal(p.n_left, 2);
	assert_int_equal(left_of(&p, 1)->reason, LEFT_CLASH);
	check_close("cost of B", left_of(&p, 1)->cost, 0.4, 1e-12);
	assert_int_equal(left_of(&p, 1)->n_clash, 1);
	assert_int_equal(left_of(&p, 1)->clash[0], 0);
	assert_int_equal(left_of(&p, 3)->reason, LEFT_WORTHLESS);
	check_close("cost of D", left_of(&p, 3)->cost, NAN, 0.0);
	night_plan_free(&p);
	s->input.without_costs = true;
	p = plan(s);
	check_close("not asked for", left_of(&p, 1)->cost, NAN, 0.0);
	assert_int_equal(left_of(&p, 1)->n_clash, 0);
	night_plan_free(&p);
	s->input.without_costs = false;
	s->offer[1].pinned = true;
	p = plan(s);
	check_close("B and C", p.worth, 1.3, 1e-12);
	assert_int_equal(p.pins_missed, 0);
	assert_int_equal(left_of(&p, 0)->reason, LEFT_CLASH);
	check_close("A can't be forced in", left_of(&p, 0)->cost, NAN, 0.0);
	night_plan_free(&p);
	s->offer[0].pinned = true;
	p = plan(s);
	check_close("A and C again", p.worth, 1.7, 1e-12);
	assert_int_equal(p.pins_missed, 1);
	assert_int_equal(left_of(&p, 1)->reason, LEFT_PINS);
	check_close("B can't be forced in", left_of(&p, 1)->cost, NAN, 0.0);
	assert_int_equal(left_of(&p, 1)->n_clash, 1); /* with A, pinned too */
	assert_int_equal(left_of(&p, 1)->clash[0], 0);
	night_plan_free(&p);
	s->offer[0].dropped = true; /* what is dropped is no longer pinned */
	s->offer[2].settled = true; /* neither planned nor left */
	p = plan(s);
	assert_int_equal(p.n_items, 1);
	assert_int_equal(p.pins_missed, 0);
	assert_int_equal(p.item[0].member[0].offer, 1);
	assert_int_equal(p.n_left, 2);
	assert_int_equal(left_of(&p, 0)->reason, LEFT_DROPPED);
	night_plan_free(&p);
	scene_close(s);
}

/* Forcing the middle one in takes both of its neighbours. */
static void test_cost_of_two(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	const double mid[4] = {500.0, 600.0, 700.0, 1100.0};
	static const char *const names[4] = {"Tern 1 b", "Tern 2 b", "Tern 3 b", "Tern 4 b"};
	for (int i = 0; i < 4; i++)
		event(s, scene_planet(s, names[i], 100.0 + 20.0 * i, 0.0), mid[i])->chance =
		    (struct window_chance){0.0, 0.0, 0.8, 0.8};
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 3);
	const struct plan_left *left = left_of(&p, 1);
	check_close("both neighbours and the one that is far off", p.worth, 2.4, 1e-9);
	check_close("cost", left->cost, 0.8, 1e-9);
	assert_int_equal(left->n_clash, 2);
	assert_int_equal(left->clash[0], 0);
	assert_int_equal(left->clash[1], 1);
	night_plan_free(&p);
	scene_close(s);
}

static void test_no_time(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	event(s, scene_planet(s, "Tern 1 b", 100.0, 0.0), 500.0);
	s->input.not_before_d = 560.0 * MIN_D;
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 0);
	check_close("worth of nothing", p.worth, 0.0, 0.0);
	assert_int_equal(left_of(&p, 0)->reason, LEFT_NO_TIME);
	night_plan_free(&p);
	s->input.n = 0; /* no offers at all */
	p = plan(s);
	assert_int_equal(p.n_items, 0);
	assert_int_equal(p.n_left, 0);
	night_plan_free(&p);
	scene_close(s);
}

/* An item that has begun runs until 600; now is 590. */
static void test_fixed(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	const struct prepared *b = scene_planet(s, "Tern 1 b", 100.0, 0.0),
			      *far = scene_planet(s, "Tern 2 b", 160.0, 0.0);
	scene_fix(s, 420.0 * MIN_D, 600.0 * MIN_D, b);
	s->input.not_before_d = 590.0 * MIN_D;
	event(s, far, 680.0); /* latest start 605: the move of 4 min and 60 s ends at 605 */
	event(s, far,
	      562.0); /* its egress is from 597: too late at 605, but not at 595.5 without that item */
	s->window[0].event.t1_d += 0.01 * MIN_D;
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 2);
	assert_int_equal(p.item[0].fixed, 0);
	check_item("what has begun", &p.item[0], 420.0, 600.0, 0.0);
	check_close("no latest start", p.item[0].latest_start_d, NAN, 0.0);
	assert_int_equal(p.item[1].fixed, -1);
	check_item("a late start after it", &p.item[1], 605.0, 770.0, 0.9 * 0.95);
	check_close("slew at its end", p.item[1].slew_by_d * DAY_MIN, 600.0, TOLERANCE_MIN);
	assert_int_equal(left_of(&p, 1)->reason, LEFT_CLASH);
	check_close("can't be forced in", left_of(&p, 1)->cost, NAN, 0.0);
	assert_int_equal(left_of(&p, 1)->n_clash, 1);
	assert_int_equal(left_of(&p, 1)->clash[0], 0);
	night_plan_free(&p);
	s->offer[1].pinned = true;
	p = plan(s);
	assert_int_equal(p.pins_missed, 1);
	assert_int_equal(left_of(&p, 1)->reason, LEFT_PINS);
	night_plan_free(&p);
	/* another planet of the star that is being observed needs no move, whatever the time is */
	s->input.not_before_d = 598.0 * MIN_D;
	s->offer[0].dropped = true;
	event(s, b, 675.5);
	p = plan(s);
	assert_int_equal(p.n_items, 2);
	check_item("at once", &p.item[1], 600.0, 765.5, 0.9 * 0.95);
	night_plan_free(&p);
	/* two that have begun and overlap are refused */
	scene_fix(s, 590.0 * MIN_D, 610.0 * MIN_D, far);
	struct err e;
	assert_int_equal(night_plan_make(&s->input, &p, &e), ST_CONFLICT);
	assert_null(p.item);
	scene_close(s);
}

/* An item that is over: nobody knows where the telescope has gone since. */
static void test_fixed_over(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	const struct prepared *b = scene_planet(s, "Tern 1 b", 100.0, 0.0);
	event(s, b, 600.0);
	scene_fix(s, 300.0 * MIN_D, 450.0 * MIN_D, b);
	struct night_plan p = plan(s);
	check_close("it points there already", p.item[1].slew_by_d * DAY_MIN, 510.0, TOLERANCE_MIN);
	night_plan_free(&p);
	s->input.not_before_d = 480.0 * MIN_D;
	p = plan(s);
	check_close("from now on", p.item[1].slew_by_d * DAY_MIN, 504.5, TOLERANCE_MIN);
	night_plan_free(&p);
	scene_close(s);
}

/* Two stars of one field, 0.4 deg apart, after an item 60 deg away: the joint item points at the farther one,
 * which the nearer one's start allows for. */
static void test_fixed_then_field(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	s->rules.field_deg = 0.5;
	event(s, scene_planet(s, "Tern 1 b", 160.4, 0.0), 680.5);
	event(s, scene_planet(s, "Tern 2 b", 160.0, 0.0), 680.5);
	scene_fix(s, 420.0 * MIN_D, 600.0 * MIN_D, scene_planet(s, "Tern 3 b", 100.0, 0.0));
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 2);
	assert_int_equal(p.item[1].n, 2);
	check_close("60.5 s and the settling", p.item[1].from_d * DAY_MIN, 605.0 + 0.5 / 60.0, TOLERANCE_MIN);
	night_plan_free(&p);
	scene_close(s);
}

/* A planet of the star that is being observed, whose b_min ends exactly where the item begins: no rounding
 * takes it away. */
static void test_fixed_touches(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	const struct prepared *b = scene_planet(s, "Tern 1 b", 100.0, 0.0);
	const struct window *w = event(s, b, 600.0);
	const double end_d = w->event.t4_d + 15.0 * MIN_D;
	scene_fix(s, end_d, end_d + 60.0 * MIN_D, b);
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 2);
	check_item("until the other begins", &p.item[0], 510.0, 675.0, 0.9 * 0.95);
	night_plan_free(&p);
	scene_close(s);
}

/* What began without the time that a move takes here did happen: no fault. */
static void test_fixed_close(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	const struct prepared *b = scene_planet(s, "Tern 1 b", 100.0, 0.0),
			      *far = scene_planet(s, "Tern 2 b", 160.0, 0.0);
	scene_fix(s, 420.0 * MIN_D, 600.0 * MIN_D, b);
	scene_fix(s, 601.0 * MIN_D, 700.0 * MIN_D, far);
	struct night_plan p = plan(s);
	assert_int_equal(p.n_items, 2);
	check_close("no move before what has begun", p.item[1].slew_by_d * DAY_MIN, 601.0, TOLERANCE_MIN);
	night_plan_free(&p);
	scene_close(s);
}

/* Equal worth: the same answer each time, the earlier end. */
static void test_ties(void **state)
{
	(void)state;
	struct plan_scene *s = scene_open();
	event(s, scene_planet(s, "Tern 1 b", 100.0, 0.0), 505.0);
	event(s, scene_planet(s, "Tern 2 b", 120.0, 0.0), 500.0);
	for (int i = 0; i < 2; i++)
		s->window[i].chance = (struct window_chance){0.0, 0.0, 0.9, 0.9};
	for (int i = 0; i < 3; i++) {
		struct night_plan p = plan(s);
		assert_int_equal(p.n_items, 1);
		assert_int_equal(p.item[0].member[0].offer, 1);
		check_close("costs nothing", left_of(&p, 0)->cost, 0.0, 0.0);
		assert_int_equal(left_of(&p, 0)->n_clash, 1);
		night_plan_free(&p);
	}
	scene_close(s);
}

static void test_words(void **state)
{
	(void)state;
	for (int i = 0; i < VARIANT_COUNT; i++)
		assert_non_null(variant_words[i]);
	for (int i = 0; i < PLAN_STATE_COUNT; i++)
		assert_non_null(plan_state_words[i]);
	assert_string_equal(variant_words[VARIANT_EGRESS], "egress");
	assert_string_equal(plan_state_words[PLAN_LOST], "lost");
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_rules),
	    cmocka_unit_test(test_worth),
	    cmocka_unit_test(test_ways_of_one),
	    cmocka_unit_test(test_sky_cuts),
	    cmocka_unit_test(test_span_edges),
	    cmocka_unit_test(test_short_where_it_helps),
	    cmocka_unit_test(test_siblings_joint),
	    cmocka_unit_test(test_siblings_apart),
	    cmocka_unit_test(test_joint_without),
	    cmocka_unit_test(test_joint_tie),
	    cmocka_unit_test(test_crowded_field),
	    cmocka_unit_test(test_consecutive_events),
	    cmocka_unit_test(test_many_consecutive_events),
	    cmocka_unit_test(test_transit_and_occultation),
	    cmocka_unit_test(test_field),
	    cmocka_unit_test(test_field_without_middle),
	    cmocka_unit_test(test_block_between),
	    cmocka_unit_test(test_clash_pin_drop),
	    cmocka_unit_test(test_cost_of_two),
	    cmocka_unit_test(test_no_time),
	    cmocka_unit_test(test_fixed),
	    cmocka_unit_test(test_fixed_over),
	    cmocka_unit_test(test_fixed_then_field),
	    cmocka_unit_test(test_fixed_touches),
	    cmocka_unit_test(test_fixed_close),
	    cmocka_unit_test(test_filters),
	    cmocka_unit_test(test_ties),
	    cmocka_unit_test(test_words),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
