/* SPDX-License-Identifier: MIT
 * A window's figures by hand: a circumpolar star, altitude limit 0, no Moon rule, so that the dark time
 * [dusk, dawn] is all that counts. The mid-time lies x minutes after dusk, T14 = 180 min, sigma 8 min, B =
 * 30, b_min = 15, k = 2. */
#include "ephem/window.h"

#include "ephem/season.h"
#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static struct sun_memo memo;
static const struct site tern_hill = {
    .name = "Tern Hill", .lat_deg = 38.62, .lon_east_deg = -109.36, .height_m = 2100.0, .zone = ""};
static const struct earth_clock earth = {.leap = &leap_builtin};
enum { NIGHT_MJD = 61152 }; /* 2026-04-22 */

static struct limits run_limits(double alt_deg, double moon_deg)
{
	struct limits l = limits_built_in();
	assert_int_equal(limits_put(&l, LIM_ALT, alt_deg, FROM_OPTION, NULL), ST_OK);
	assert_int_equal(limits_put(&l, LIM_MOON, moon_deg, FROM_OPTION, NULL), ST_OK);
	return l;
}

static struct target circumpolar(void)
{
	struct target t = target_empty();
	t.name = "Tern 1 b";
	t.ra_deg = 180.0;
	t.dec_deg = 80.0;
	t.period_d = 5.0;
	t.duration_h = 3.0;
	t.k = 0.1;
	t.t0_err_d = 8.0 * MIN_D;
	t.period_err_d = 1e-9;
	assert_int_equal(standard_parse("BJD_TDB", &t.standard, NULL), ST_OK);
	return t;
}

/* Puts epoch 0 so that it is seen at t_d of the night. */
static void put_mid(struct target *t, const struct night *n, double t_d)
{
	const struct star s = night_star(n, t);
	t->t0 = night_bjd_tdb(n, &s, t_d).jd;
}

static struct window window_of(const struct target *t, const struct night *n, const struct limits *l,
			       struct prepared *p)
{
	struct window w;
	*p = prepare_target(t, l, &earth, &memo, false, false);
	assert_true(p->has_ephemeris);
	const struct star s = night_star(n, t);
	long first = 99, last = 99;
	assert_true(window_epochs(n, &s, p, KIND_TRANSIT, &first, &last));
	struct sun_sets suns = {.n = 0};
	const struct target_night tn = target_on_night(n, p, &s, &suns, NULL);
	window_make(&w, &tn, KIND_TRANSIT, first, STAGE_FORECAST);
	return w;
}

/* Shares: overlap of each part with [0, dawn), limb 21.2614 min = T14/2 (1 - sqrt((0.9^2 - 0.5^2)/(1.1^2 -
 * 0.5^2))). Chances: ingress and done Phi((x - 105)/8), egress Phi((x + 90 - 21.2614)/8), mid Phi(x/8) with
 * Phi(z) = erfc(-z/sqrt 2)/2. */
static const struct {
	double x_min, share[PART_COUNT], coverage, ingress, egress, mid, done, base_before, base_after;
	const char *lost_by;
} rows[] = {
    {-100,
     {0, 0, 0, 0, 0.666667},
     0.083333,
     0,
     0.00004660,
     0,
     0,
     0,
     0,
     "before:sun;ingress:sun;flat:sun;egress:sun;after:sun"},
    {-85,
     {0, 0, 0, 0.235168, 1},
     0.145833,
     0,
     0.02104291,
     0,
     0,
     0,
     31,
     "before:sun;ingress:sun;flat:sun;egress:sun"},
    {-45,
     {0, 0, 0.172673, 1, 1},
     0.312500,
     0,
     0.99849801,
     0.00000001,
     0,
     0,
     31,
     "before:sun;ingress:sun;flat:sun"},
    {0, {0, 0, 0.5, 1, 1}, 0.5, 0, 1, 0.5, 0, 0, 31, "before:sun;ingress:sun;flat:sun"},
    {45, {0, 0, 0.827327, 1, 1}, 0.687500, 0, 1, 0.99999999, 0, 0, 31, "before:sun;ingress:sun;flat:sun"},
    {80, {0, 0.529663, 1, 1, 1}, 0.833333, 0.00088903, 1, 1, 0.00088903, 0, 31, "before:sun;ingress:sun"},
    {95, {0.166667, 1, 1, 1, 1}, 0.895833, 0.10564977, 1, 1, 0.10564977, 5, 31, "before:sun"},
    {105, {0.5, 1, 1, 1, 1}, 0.937500, 0.5, 1, 1, 0.5, 15, 31, "before:sun"},
    {118, {0.933333, 1, 1, 1, 1}, 0.991667, 0.94791872, 1, 1, 0.94791872, 28, 31, "before:sun"},
    {130, {1, 1, 1, 1, 1}, 1, 0.99911097, 1, 1, 0.99911097, 31, 31, ""},
};

static void dusk_by_hand(void **state)
{
	const struct night *n = *state;
	const struct limits l = run_limits(0.0, 0.0);
	const double dusk_d = night_dark(n, -12.0).dusk_d;
	/* contacts are placed on BJD_TDB: light time moves them by at most 6.1 ms a minute of half the
	 * duration (Eastman et al. 2010), 0.01 min */
	const double time_min = 0.0101, share = time_min / 20.0, chance = time_min / 8.0 * 0.4;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		struct target t = circumpolar();
		struct prepared p;
		put_mid(&t, n, dusk_d + rows[i].x_min * MIN_D);
		const struct window w = window_of(&t, n, &l, &p);
		const struct window_event *ev = &w.event;
		for (int part = 0; part < PART_COUNT; part++)
			check_close(part_words[part], w.cover.share[part], rows[i].share[part], share);
		check_close("coverage", w.cover.coverage, rows[i].coverage, share);
		check_close("ingress", w.chance.ingress, rows[i].ingress, chance);
		check_close("egress", w.chance.egress, rows[i].egress, chance);
		check_close("mid", w.chance.mid, rows[i].mid, chance);
		check_close("done", w.chance.done, rows[i].done, chance);
		check_close("base before", w.cover.base_before_min, rows[i].base_before, time_min);
		check_close("base after", w.cover.base_after_min, rows[i].base_after, time_min);
		check_close("sigma", ev->sigma_min, 8.0, 1e-9);
		check_close("sigma of a contact", ev->sigma_contact_min, 8.0, 1e-9);
		check_close("reserve: 15 + 2 x 8 min before T1", (ev->t1_d - ev->reserve_start_d) * DAY_MIN,
			    31.0, 1e-9);
		check_close("and after T4", (ev->reserve_end_d - ev->t4_d) * DAY_MIN, 31.0, 1e-9);
		check_close("latest start", (ev->t1_d - ev->latest_start_d) * DAY_MIN, 15.0, 1e-9);
		check_close("T1", (ev->t1_d - dusk_d) * DAY_MIN, rows[i].x_min - 90.0, time_min);
		check_close("T2 - T1", (ev->t2_d - ev->t1_d) * DAY_MIN, 21.261365, time_min);
		char lost[120];
		lost_by_text(&w.cover, lost, sizeof lost);
		assert_string_equal(lost, rows[i].lost_by);
	}
}

/* The reserve: max(B, b_min + k hypot(F published, standard, F sigma_T14/2) + A). by hand */
static void reserve_by_hand(void **state)
{
	const struct night *n = *state;
	struct limits l = run_limits(0.0, 0.0);
	struct target t = circumpolar();
	struct prepared p;
	t.duration_err_h = 0.2; /* 12 min; half: 6 */
	t.ttv_amp_min = 20.0;
	put_mid(&t, n, 0.4);
	struct window w = window_of(&t, n, &l, &p);
	check_close("sigma", w.event.sigma_min, hypot(8.0, 20.0 / sqrt(2.0)), 1e-6);
	check_close("sigma of a contact", w.event.sigma_contact_min, hypot(hypot(8.0, 20.0 / sqrt(2.0)), 6.0),
		    1e-6);
	check_close("15 + 2 x 10 + 20", (w.event.t1_d - w.event.reserve_start_d) * DAY_MIN, 55.0, 1e-6);
	assert_true(w.event.flags & FLAG_BIT(FLAG_STALE)); /* sigma above (30 - 15)/2 = 7.5 min */
	assert_int_equal(limits_put(&l, LIM_ERROR_SCALE, 3.0, FROM_OPTION, NULL), ST_OK);
	w = window_of(&t, n, &l, &p);
	check_close("the printed sigma is not scaled", w.event.sigma_min, hypot(8.0, 20.0 / sqrt(2.0)), 1e-6);
	check_close("15 + 2 x 30 + 20", (w.event.t1_d - w.event.reserve_start_d) * DAY_MIN, 95.0, 1e-6);
	check_close("sd of a limb", w.event.chance_contact_d * DAY_MIN,
		    hypot(hypot(24.0, 20.0 / sqrt(2.0)), 18.0), 1e-6);
	/* the source does not say its scale: 49 s for BJD */
	t.ttv_amp_min = NAN;
	t.duration_err_h = NAN;
	assert_int_equal(standard_parse("BJD", &t.standard, NULL), ST_OK);
	l = run_limits(0.0, 0.0);
	w = window_of(&t, n, &l, &p);
	check_close("49 s in quadrature", w.event.sigma_min, hypot(8.0, 49.0 / 60.0), 1e-6);
	assert_true(w.event.flags & FLAG_BIT(FLAG_SCALE_ASSUMED));
}

static void unknown_and_lost(void **state)
{
	const struct night *n = *state;
	const struct limits l = run_limits(0.0, 0.0);
	struct target t = circumpolar();
	struct prepared p;
	put_mid(&t, n, 0.4);
	t.t0_err_d = 0.0; /* zero means unknown */
	struct window w = window_of(&t, n, &l, &p);
	assert_true(isnan(w.event.sigma_min) && isnan(w.event.sigma_contact_min));
	assert_true(isnan(w.chance.ingress) && isnan(w.chance.egress) && isnan(w.chance.mid) &&
		    isnan(w.chance.done));
	assert_true(w.event.flags & FLAG_BIT(FLAG_SIGMA_UNKNOWN));
	check_close("R = B", (w.event.t1_d - w.event.reserve_start_d) * DAY_MIN, 30.0, 1e-9);
	assert_true(window_listed(&w, 0.5) && !window_long_shot(&w));
	t.t0_err_d = 5.0 / 6.0 + 0.01; /* beyond a sixth of the period */
	w = window_of(&t, n, &l, &p);
	assert_true(w.event.flags & FLAG_BIT(FLAG_PHASE_LOST));
	assert_true(isfinite(w.event.sigma_min) && isnan(w.chance.done));
	t.t0_err_d = 5.0 / 6.0 - 0.01;
	w = window_of(&t, n, &l, &p);
	assert_false(w.event.flags & FLAG_BIT(FLAG_PHASE_LOST));
	assert_true(isfinite(w.chance.done));
}

/* Predicted for the morning before, with an error of hours: tonight has its chance all the same, and says so.
 */
static void chance_of_another_night(void **state)
{
	const struct night *n = *state;
	const struct limits l = run_limits(0.0, 0.0);
	struct target t = circumpolar();
	t.period_d = 40.0;
	t.t0_err_d = 0.2;
	put_mid(&t, n, -0.2);
	const struct prepared p = prepare_target(&t, &l, &earth, &memo, false, false);
	struct window_list list = {0};
	struct window_choice choice = {.kinds = KINDS_TRANSIT, .min_chance = 0.001};
	long hidden = 99;
	assert_int_equal(night_windows(n, &p, 1, &choice, &list, &hidden, NULL), ST_OK);
	assert_int_equal(list.n, 1);
	assert_int_equal(hidden, 0);
	const struct window *w = &list.w[0];
	assert_true(w->event.flags & FLAG_BIT(FLAG_OTHER_NIGHT));
	assert_false(w->event.flags & FLAG_BIT(FLAG_CROSSES_NOON));
	/* by hand: Phi((dawn - T4 - 15 min)/0.2 d) - Phi((dusk - T3)/0.2 d), limb 21.2614 min */
	const struct night_dark dark = night_dark(n, -12.0);
	const double hi = (dark.dawn_d - (-0.2 + (90.0 + 15.0) * MIN_D)) / 0.2,
		     lo = (dark.dusk_d - (-0.2 + (90.0 - 21.261365) * MIN_D)) / 0.2;
	check_close("egress", w->chance.egress, 0.5 * (erfc(lo / sqrt(2.0)) - erfc(hi / sqrt(2.0))), 1e-4);
	assert_true(w->chance.egress > 0.005 && w->cover.coverage == 0.0);
	choice.min_chance = 0.5;
	assert_int_equal(night_windows(n, &p, 1, &choice, &list, &hidden, NULL), ST_OK);
	assert_int_equal(list.n, 0);
	assert_int_equal(hidden, 1);
	choice.all = true;
	t.t0_err_d = 0.01; /* now it is quite sure that it is over */
	const struct prepared q = prepare_target(&t, &l, &earth, &memo, false, false);
	assert_int_equal(night_windows(n, &q, 1, &choice, &list, &hidden, NULL), ST_OK);
	assert_int_equal(list.n, 0);
	window_list_free(&list);
}

/* Without room between the wanted and the least baseline any error eats into the least one. */
static void stale_without_room(void **state)
{
	const struct night *n = *state;
	struct limits l = run_limits(0.0, 0.0);
	struct target t = circumpolar();
	struct prepared p;
	put_mid(&t, n, 0.4);
	t.t0_err_d = 2.0 * MIN_D;
	struct window w = window_of(&t, n, &l, &p);
	assert_false(w.event.flags & FLAG_BIT(FLAG_STALE));
	t.baseline_after_min = 15.0; /* the smaller one decides */
	w = window_of(&t, n, &l, &p);
	assert_true(w.event.flags & FLAG_BIT(FLAG_STALE));
	t.baseline_after_min = NAN;
	assert_int_equal(limits_put(&l, LIM_PAD, 0.0, FROM_OPTION, NULL), ST_OK); /* no pad eats nothing */
	t.t0_err_d = 0.1;
	w = window_of(&t, n, &l, &p);
	assert_false(w.event.flags & FLAG_BIT(FLAG_STALE));
}

/* Occultations: the exact delay, errors of e cos w, and what is not known said. */
static void occultation_by_hand(void **state)
{
	const struct night *n = *state;
	const struct limits l = run_limits(0.0, 0.0);
	struct target t = circumpolar();
	t.period_d = 4.0;
	t.t0_err_d = 1.0 * MIN_D;
	t.ecc = 0.6;
	t.omega_deg = 120.0;
	put_mid(&t, n, 0.5);
	t.t0 = jd2_add_d(
	    t.t0, -1.124600); /* Kepler's equation: 1.124600 d from transit to occultation (test_ephemeris) */
	const struct prepared p = prepare_target(&t, &l, &earth, &memo, false, false);
	struct window_list list = {0};
	const struct window_choice both = {.kinds = KINDS_OCCULTATION, .all = true};
	assert_int_equal(night_windows(n, &p, 1, &both, &list, NULL, NULL), ST_OK);
	assert_int_equal(list.n, 1);
	check_close("mid", list.w[0].event.mid_d, 0.5, 1e-6);
	assert_int_equal(list.w[0].event.epoch, 0);
	check_close("no error of e cos w", list.w[0].event.sigma_min, 1.0, 1e-9);
	assert_true(list.w[0].event.flags & FLAG_BIT(FLAG_PHASE_ERROR_UNKNOWN));
	t.ecosw_err = 0.002; /* 2 x 4 d / pi x 0.002 = 7.334 min */
	const struct prepared q = prepare_target(&t, &l, &earth, &memo, false, false);
	assert_int_equal(night_windows(n, &q, 1, &both, &list, NULL, NULL), ST_OK);
	check_close("with it", list.w[0].event.sigma_min, hypot(1.0, 2.0 * 4.0 * DAY_MIN / PI * 0.002), 1e-9);
	assert_false(list.w[0].event.flags & FLAG_BIT(FLAG_PHASE_ERROR_UNKNOWN));
	t.ecc = NAN;
	put_mid(&t, n, 0.5);
	t.t0 = jd2_add_d(t.t0, -2.0);
	const struct prepared r = prepare_target(&t, &l, &earth, &memo, false, false);
	assert_int_equal(night_windows(n, &r, 1, &both, &list, NULL, NULL), ST_OK);
	check_close("half the period", list.w[0].event.mid_d, 0.5, 1e-9);
	assert_true(list.w[0].event.flags & FLAG_BIT(FLAG_CIRCULAR_ASSUMED));
	assert_true(isnan(list.w[0].chance.ingress) && isfinite(list.w[0].event.sigma_min));
	window_list_free(&list);
}

/* An event that runs over noon stands in both nights, each with its own part. */
static void over_noon(void **state)
{
	const struct night *n = *state;
	struct night next;
	const struct limits l = run_limits(0.0, 0.0);
	struct target t = circumpolar();
	struct prepared p, q;
	t.duration_h = 30.0;
	t.period_d = 40.0;
	put_mid(&t, n, 0.9);
	const struct window w = window_of(&t, n, &l, &p);
	assert_int_equal(night_build(&next, &tern_hill, &earth, NIGHT_MJD + 1, &memo, NULL), ST_OK);
	const struct window v = window_of(&t, &next, &l, &q);
	assert_int_equal(w.event.epoch, v.event.epoch);
	assert_true((w.event.flags & FLAG_BIT(FLAG_CROSSES_NOON)) &&
		    (v.event.flags & FLAG_BIT(FLAG_CROSSES_NOON)));
	check_close("one event, two nights", w.event.mid_d - v.event.mid_d, 1.0, 1e-8);
	/* the star never sets: each night's share of the flat part is what is dark of it */
	const struct intervals dark = night_sun_below(n, -12.0), dark_next = night_sun_below(&next, -12.0);
	const double flat_d = w.event.t3_d - w.event.t2_d;
	const double tonight_d = intervals_overlap(&dark, w.event.t2_d, w.event.t3_d);
	const double tomorrow_d = intervals_overlap(&dark_next, v.event.t2_d, v.event.t3_d);
	assert_true(tonight_d > 0.05 && tomorrow_d > 0.01);
	check_close("tonight's share", w.cover.share[PART_FLAT] * flat_d, tonight_d, 1e-9);
	check_close("tomorrow's share", v.cover.share[PART_FLAT] * flat_d, tomorrow_d, 1e-9);
}

/* common practice, no source: of a planet on a 4 to 5 day orbit at most two mid-times fall in 5 days, seldom
 * more than one at one site. */
static void few_mid_times_in_five_days(void **state)
{
	const struct night *first_night = *state;
	struct rng r = rng_open("few_mid_times");
	const struct limits l = limits_built_in();
	struct night night[5];
	int with_two = 0, loops = 200;
	for (int d = 0; d < 5; d++)
		assert_int_equal(night_build(&night[d], &tern_hill, &earth, NIGHT_MJD + d, &memo, NULL),
				 ST_OK);
	for (int i = 0; i < loops; i++) {
		struct target t = circumpolar();
		t.dec_deg = rng_between(&r, -20.0, 80.0);
		t.ra_deg = rng_between(&r, 0.0, 360.0);
		t.period_d = rng_between(&r, 4.0, 5.0);
		t.t0_err_d = 1e-4;
		put_mid(&t, first_night, rng_between(&r, 0.0, 1.0));
		const struct prepared p = prepare_target(&t, &l, &earth, &memo, false, false);
		struct window_list list = {0};
		int events = 0, seen = 0;
		for (int d = 0; d < 5; d++) {
			const struct window_choice all = {.kinds = KINDS_TRANSIT, .all = true};
			assert_int_equal(night_windows(&night[d], &p, 1, &all, &list, NULL, NULL), ST_OK);
			for (size_t k = 0; k < list.n; k++) {
				const struct window *w = &list.w[k];
				if (w->event.mid_d < 0.0 || w->event.mid_d >= night[d].length_d)
					continue;
				events++;
				seen += w->chance.mid > 0.5;
			}
		}
		window_list_free(&list);
		if (events < 1 || events > 2)
			check_fail("%d mid-times of a %.3f d orbit in 5 days", events, t.period_d);
		with_two += seen > 1;
	}
	assert_true(with_two * 10 < loops);
}

static int open_night(void **state)
{
	struct night *n = malloc(sizeof *n);
	*state = n;
	return n && night_build(n, &tern_hill, &earth, NIGHT_MJD, &memo, NULL) == ST_OK ? 0 : -1;
}

static int close_night(void **state)
{
	free(*state);
	return 0;
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(dusk_by_hand),
	    cmocka_unit_test(reserve_by_hand),
	    cmocka_unit_test(unknown_and_lost),
	    cmocka_unit_test(over_noon),
	    cmocka_unit_test(chance_of_another_night),
	    cmocka_unit_test(stale_without_room),
	    cmocka_unit_test(occultation_by_hand),
	    cmocka_unit_test(few_mid_times_in_five_days),
	};
	return cmocka_run_group_tests_name("window", tests, open_night, close_night);
}
