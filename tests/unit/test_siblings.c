/* SPDX-License-Identifier: MIT */
#include "ephem/siblings.h"

#include "tests/support/check.h"

#include <math.h>
#include <stdlib.h>

enum { PLANETS = 4, EVENING_MJD = 61152 /* 2026-04-22 */ };

/* Planets b, c, d of one star and one of another: c transits 1 h after b, d 8 h after it, the other star's
 * with b. */
struct sky_of_four {
	struct earth_clock clock;
	struct site site;
	struct target target[PLANETS];
	struct prepared prepared[PLANETS];
	struct sun_memo *memo;
	struct night night;
	struct window_list list;
};

static const uint32_t stars[PLANETS] = {0, 0, 0, 1};

/* d_after_h: when d transits; NAN: nobody knows. */
static struct sky_of_four *build_with(double d_after_h, int kinds)
{
	static const char *const names[PLANETS] = {"Tern 1 b", "Tern 1 c", "Tern 1 d", "Tern 2 b"};
	const double after_h[PLANETS] = {0.0, 1.0, d_after_h, 0.0};
	struct sky_of_four *s = calloc(1, sizeof *s);
	struct err e;
	assert_non_null(s);
	s->memo = calloc(1, sizeof *s->memo);
	assert_non_null(s->memo);
	s->clock = (struct earth_clock){.leap = &leap_builtin};
	s->site = (struct site){
	    .name = "Tern Hill", .lat_deg = 38.62, .lon_east_deg = -109.36, .height_m = 2100.0, .zone = ""};
	const struct limits limits = limits_built_in();
	for (int i = 0; i < PLANETS; i++) {
		struct target *t = &s->target[i];
		*t = target_empty();
		t->name = names[i];
		t->ra_deg = i == 3 ? 190.0 : 180.0;
		t->dec_deg = 80.0;
		assert_int_equal(standard_parse("BJD_TDB", &t->standard, &e), ST_OK);
		if (!isnan(after_h[i])) /* 2026-04-23, 4.8 h UTC and later */
			t->t0 = (struct jd2){2461153.5, 0.2 + after_h[i] / 24.0};
		t->t0_err_d = 1e-4;
		t->period_d = 20.0;
		t->period_err_d = 1e-7;
		t->duration_h = 2.0;
		t->k = 0.1;
		s->prepared[i] = prepare_target(t, &limits, &s->clock, s->memo, false, false);
	}
	if (siblings_link(s->prepared, stars, PLANETS, 2, &e) != ST_OK)
		check_fail("%s", e.text);
	if (night_build(&s->night, &s->site, &s->clock, EVENING_MJD, s->memo, &e) != ST_OK)
		check_fail("%s", e.text);
	const struct window_choice choice = {.kinds = kinds, .all = true};
	if (night_windows(&s->night, s->prepared, PLANETS, &choice, &s->list, NULL, &e) != ST_OK)
		check_fail("%s", e.text);
	return s;
}

static struct sky_of_four *build(void)
{
	struct sky_of_four *s = build_with(8.0, KINDS_TRANSIT);
	assert_int_equal(s->list.n, PLANETS);
	return s;
}

static void drop(struct sky_of_four *s)
{
	window_list_free(&s->list);
	free(s->memo);
	free(s);
}

static const struct window *window_of(const struct sky_of_four *s, int planet)
{
	for (size_t i = 0; i < s->list.n; i++)
		if (s->list.w[i].event.prepared == &s->prepared[planet])
			return &s->list.w[i];
	check_fail("no window of planet %d", planet);
}

static void planets_of_a_star_form_a_ring(void **state)
{
	(void)state;
	struct sky_of_four *s = build();
	const struct prepared *p = &s->prepared[0];
	for (int i = 0; i < 3; i++) {
		assert_non_null(p->sibling);
		assert_true(p->sibling != p && p->sibling != &s->prepared[3]);
		p = p->sibling;
	}
	assert_ptr_equal(p, &s->prepared[0]);
	assert_null(s->prepared[3].sibling);
	drop(s);
}

/* A reserve is T14 and half an hour on each side: 3 h about the mid-time, so that 1 h away meets it and 8 h
 * away does not. */
static void only_those_that_transit_meanwhile_are_named(void **state)
{
	(void)state;
	static const struct {
		int planet, n, sibling;
	} rows[] = {{0, 1, 1}, {1, 1, 0}, {2, 0, 0}, {3, 0, 0}};
	struct sky_of_four *s = build();
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		const struct window *w = window_of(s, rows[i].planet);
		assert_int_equal(w->n_siblings, rows[i].n);
		if (rows[i].n > 0)
			assert_ptr_equal(w->sibling[0], &s->prepared[rows[i].sibling]);
		assert_int_equal((w->event.flags & FLAG_BIT(FLAG_SIBLING_IN_WINDOW)) != 0, rows[i].n > 0);
	}
	drop(s);
}

static bool flagged(const struct window *w, int flag)
{
	return (w->event.flags & FLAG_BIT(flag)) != 0;
}

/* d transits 238.5 h before b; half its period of 20 d later, 1.5 h after b's transit, it stands behind the
 * star. */
static void an_occultation_of_a_sibling_does_not_count(void **state)
{
	(void)state;
	struct sky_of_four *s = build_with(-238.5, KINDS_BOTH);
	assert_int_equal(s->list.n, PLANETS);
	const struct window *b = window_of(s, 0), *d = window_of(s, 2);
	assert_int_equal(b->event.kind, KIND_TRANSIT);
	assert_int_equal(d->event.kind, KIND_OCCULTATION);
	assert_int_equal(b->n_siblings, 1);
	assert_ptr_equal(b->sibling[0], &s->prepared[1]);
	/* while transits of b and c spoil the window of that occultation */
	assert_int_equal(d->n_siblings, 2);
	assert_true(flagged(d, FLAG_SIBLING_IN_WINDOW));
	drop(s);
}

static void a_sibling_without_an_ephemeris_is_said(void **state)
{
	(void)state;
	struct sky_of_four *s = build_with((double)NAN, KINDS_TRANSIT);
	assert_int_equal(s->list.n, PLANETS - 1);
	for (int planet = 0; planet < 2; planet++) {
		const struct window *w = window_of(s, planet);
		assert_true(flagged(w, FLAG_SIBLINGS_UNKNOWN));
		assert_int_equal(w->n_siblings, 1); /* the other one is named all the same */
		assert_ptr_equal(w->sibling[0], &s->prepared[1 - planet]);
		assert_true(flagged(w, FLAG_SIBLING_IN_WINDOW));
	}
	assert_false(flagged(window_of(s, 3), FLAG_SIBLINGS_UNKNOWN)); /* another star */
	assert_string_equal(flag_rules[FLAG_SIBLINGS_UNKNOWN].word, "siblings_unknown");
	drop(s);
	s = build();
	for (int planet = 0; planet < PLANETS; planet++)
		assert_false(flagged(window_of(s, planet), FLAG_SIBLINGS_UNKNOWN));
	drop(s);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(planets_of_a_star_form_a_ring),
	    cmocka_unit_test(only_those_that_transit_meanwhile_are_named),
	    cmocka_unit_test(an_occultation_of_a_sibling_does_not_count),
	    cmocka_unit_test(a_sibling_without_an_ephemeris_is_said),
	};
	return cmocka_run_group_tests_name("siblings", tests, NULL, NULL);
}
