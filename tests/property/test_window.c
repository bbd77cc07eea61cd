/* SPDX-License-Identifier: MIT
 * Windows against a plain sampler: covers by looking at every few seconds, chances by trying every shift of
 * the event. The sampler asks only for altitudes and distances at single moments and knows nothing of
 * interval sets. */
#include "ephem/season.h"

#include "ephem/mask.h"
#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>
#include <stdlib.h>

static struct sun_memo memo;
static const struct earth_clock earth = {.leap = &leap_builtin};

struct scene {
	struct night night;
	struct site site;
	struct mask mask;
	struct target target;
	struct limits limits;
	struct prepared prepared;
	struct star star;
};

static void make_scene(struct scene *s, struct rng *r)
{
	s->site = (struct site){.name = "x",
				.lat_deg = rng_between(r, -70.0, 70.0),
				.lon_east_deg = rng_between(r, -180.0, 180.0),
				.height_m = 1500.0,
				.zone = ""};
	s->mask.n = 0;
	for (double az = 0.0; az < 360.0; az += rng_between(r, 15.0, 60.0))
		assert_int_equal(mask_add(&s->mask, az, rng_between(r, 0.0, 45.0), NULL), ST_OK);
	if (rng_unit(r) < 0.4)
		s->site.mask = &s->mask;
	assert_int_equal(night_build(&s->night, &s->site, &earth,
				     58849 + (int32_t)rng_between(r, 0.0, 9000.0), &memo, NULL),
			 ST_OK);
	s->target = target_empty();
	s->target.name = "Tern 1 b";
	s->target.ra_deg = rng_between(r, 0.0, 360.0);
	s->target.dec_deg = asin(rng_between(r, -1.0, 1.0)) / DEG_RAD;
	s->target.period_d = rng_between(r, 1.2, 9.0);
	s->target.duration_h = rng_between(r, 0.7, 6.0);
	s->target.k = rng_between(r, 0.03, 0.2);
	s->target.t0_err_d = exp(rng_between(r, log(2e-4), log(4e-2)));
	s->target.period_err_d = 1e-8;
	if (rng_unit(r) < 0.3) {
		s->target.sun_limit_deg = -8.0;
		s->target.sun_limit_baseline_deg = -6.0;
	}
	assert_int_equal(standard_parse("BJD_TDB", &s->target.standard, NULL), ST_OK);
	s->limits = limits_built_in();
	if (rng_unit(r) < 0.4)
		assert_int_equal(
		    limits_put(&s->limits, LIM_AIRMASS, rng_between(r, 1.05, 2.5), FROM_OPTION, NULL), ST_OK);
	assert_int_equal(limits_put(&s->limits, LIM_MOON,
				    rng_unit(r) < 0.2 ? 0.0 : rng_between(r, 15.0, 90.0), FROM_OPTION, NULL),
			 ST_OK);
	assert_int_equal(limits_put(&s->limits, LIM_ALT, rng_between(r, 5.0, 40.0), FROM_OPTION, NULL),
			 ST_OK);
	s->star = night_star(&s->night, &s->target);
	s->target.t0 = night_bjd_tdb(&s->night, &s->star, rng_between(r, 0.2, 0.8)).jd;
	s->prepared = prepare_target(&s->target, &s->limits, &earth, &memo, false, false);
}

/* One moment: may it be used, with this Sun limit? */
static bool usable_at(const struct scene *s, double t_d, enum limit_id sun)
{
	const struct limits *l = &s->prepared.limits;
	const double sun_limit = isnan(l->value[sun]) ? l->value[LIM_SUN] : l->value[sun],
		     moon_limit = l->value[LIM_MOON];
	if (t_d < 0.0 || t_d > s->night.length_d || night_sun_altaz(&s->night, t_d).alt_deg >= sun_limit)
		return false;
	const double alt = night_star_altaz(&s->night, &s->star, t_d).alt_deg;
	const double az = night_star_altaz(&s->night, &s->star, t_d).az_north_deg;
	if (s->site.mask && alt + refraction_deg(alt, pressure_hpa(1500.0), 10.0) < mask_at(s->site.mask, az))
		return false;
	if (alt < l->value[LIM_ALT] || !(airmass_young(alt) <= l->value[LIM_AIRMASS]))
		return false;
	if (moon_limit <= 0.0 || !intervals_contain(&s->night.moon_up, t_d))
		return true;
	const double apart = night_moon_sep_deg(&s->night, &s->star, t_d);
	return apart >= MOON_ALWAYS_DEG && (apart >= moon_limit || night_moon_lit(&s->night, t_d) <= 0.5);
}

static double sampled_share(const struct scene *s, double from_d, double to_d, enum limit_id sun)
{
	int used = 0;
	const int n = 400;
	for (int i = 0; i < n; i++)
		used += usable_at(s, from_d + (to_d - from_d) * (i + 0.5) / n, sun);
	return (double)used / n;
}

static void covers(void **state)
{
	(void)state;
	struct rng r = rng_open("covers");
	struct scene *s = malloc(sizeof *s);
	assert_non_null(s);
	int partial = 0, lost[CAUSE_COUNT] = {0};
	for (int i = 0; i < 400; i++) {
		make_scene(s, &r);
		struct window_list list = {0};
		const struct window_choice all = {.kinds = KINDS_TRANSIT, .all = true};
		assert_int_equal(night_windows(&s->night, &s->prepared, 1, &all, &list, NULL, NULL), ST_OK);
		for (size_t k = 0; k < list.n; k++) {
			const struct window *w = &list.w[k];
			const double edge[6] = {w->event.t1_d - w->event.before_d,
						w->event.t1_d,
						w->event.t2_d,
						w->event.t3_d,
						w->event.t4_d,
						w->event.t4_d + w->event.after_d};
			if (edge[0] < -0.5 || edge[5] > 1.5)
				continue;
			for (int part = 0; part < PART_COUNT; part++) {
				const bool limb = part != PART_BEFORE && part != PART_AFTER;
				const double want = sampled_share(s, edge[part], edge[part + 1],
								  limb ? LIM_SUN : LIM_SUN_BASELINE);
				check_close(part_words[part], w->cover.share[part], want, 3.0 / 400.0);
				partial += want > 0.01 && want < 0.99;
				if (w->cover.lost_to[part] != CAUSE_NONE)
					lost[w->cover.lost_to[part]]++;
				assert_true((w->cover.share[part] < 0.995) ==
					    (w->cover.lost_to[part] != CAUSE_NONE));
			}
		}
		window_list_free(&list);
	}
	free(s);
	/* the loop has seen what it is for */
	assert_true(partial > 50 && lost[CAUSE_SUN] > 20 && lost[CAUSE_ALTITUDE] > 20 &&
		    lost[CAUSE_MOON] > 5 && lost[CAUSE_MASK] > 5 && lost[CAUSE_AIRMASS] > 5);
}

/* Longest stretch without use in [from, to], in minutes; steps of half a minute. */
static double longest_gap_min(const struct scene *s, double from_d, double to_d, enum limit_id sun)
{
	double gap = 0.0, worst = 0.0;
	for (double t = from_d; t <= to_d + 1e-9; t += 0.5 * MIN_D) {
		gap = usable_at(s, t, sun) ? 0.0 : gap + 0.5;
		worst = fmax(worst, gap);
	}
	return worst;
}

/* Usable, or within a pause of at most 10 min. */
static bool bridged_at(const struct scene *s, double t, enum limit_id sun)
{
	if (usable_at(s, t, sun))
		return true;
	double back = t, on = t;
	while (t - back < 11.0 * MIN_D && !usable_at(s, back, sun))
		back -= 0.1 * MIN_D;
	while (on - t < 11.0 * MIN_D && !usable_at(s, on, sun))
		on += 0.1 * MIN_D;
	return on - back <= 10.2 * MIN_D;
}

static bool bridged(const struct scene *s, double from_d, double to_d, enum limit_id sun)
{
	for (double t = from_d; t <= to_d + 1e-9; t += 0.5 * MIN_D)
		if (!bridged_at(s, t, sun))
			return false;
	return true;
}

/* The event shifted by every multiple of sigma/8 within 5 sigma, weighted by the normal density. */
static void chances(void **state)
{
	(void)state;
	struct rng r = rng_open("chances");
	struct scene *s = malloc(sizeof *s);
	assert_non_null(s);
	int between = 0;
	for (int i = 0; i < 250; i++) {
		make_scene(s, &r);
		s->target.t0_err_d = rng_between(&r, 0.005, 0.03);
		s->prepared = prepare_target(&s->target, &s->limits, &earth, &memo, false, false);
		struct window_list list = {0};
		const struct window_choice listed = {.kinds = KINDS_TRANSIT, .min_chance = 0.05};
		assert_int_equal(night_windows(&s->night, &s->prepared, 1, &listed, &list, NULL, NULL),
				 ST_OK);
		for (size_t k = 0; k < list.n; k++) {
			const struct window *w = &list.w[k];
			const struct window_event *ev = &w->event;
			const double b_d = s->prepared.limits.value[LIM_MIN_BASELINE] * MIN_D,
				     sd = ev->chance_contact_d;
			double weight = 0.0, ingress = 0.0, egress = 0.0, done = 0.0;
			for (int j = -40; j <= 40; j++) {
				const double shift = j * sd / 8.0,
					     density = exp(-0.5 * (j / 8.0) * (j / 8.0));
				const double t1 = ev->t1_d + shift, t2 = ev->t2_d + shift,
					     t3 = ev->t3_d + shift, t4 = ev->t4_d + shift;
				const double limb_in = longest_gap_min(s, t1, t2, LIM_SUN),
					     limb_out = longest_gap_min(s, t3, t4, LIM_SUN);
				const double base_in = longest_gap_min(s, t1 - b_d, t1, LIM_SUN_BASELINE);
				const double base_out = longest_gap_min(s, t4, t4 + b_d, LIM_SUN_BASELINE);
				weight += density;
				ingress += limb_in == 0.0 && base_in == 0.0 ? density : 0.0;
				egress += limb_out == 0.0 && base_out == 0.0 ? density : 0.0;
				done += limb_in == 0.0 && limb_out == 0.0 &&
						bridged(s, t1 - b_d, t1, LIM_SUN_BASELINE) &&
						bridged(s, t2, t3, LIM_SUN) &&
						bridged(s, t4, t4 + b_d, LIM_SUN_BASELINE)
					    ? density
					    : 0.0;
			}
			/* a step of sigma/8 carries at most 0.05 of the chance; half of one at either end */
			check_close("ingress", w->chance.ingress, ingress / weight, 0.06);
			check_close("egress", w->chance.egress, egress / weight, 0.06);
			check_close("done", w->chance.done, done / weight, 0.06);
			between += w->chance.done > 0.1 && w->chance.done < 0.9;
		}
		window_list_free(&list);
	}
	free(s);
	assert_true(between > 2);
}

/* Nights tile time: every epoch of a season stands in at least one night, and in one only unless it runs over
 * noon. */
static void nights_tile_time(void **state)
{
	(void)state;
	struct rng r = rng_open("nights_tile_time");
	struct scene *s = malloc(sizeof *s);
	assert_non_null(s);
	for (int i = 0; i < 20; i++) {
		make_scene(s, &r);
		struct window_list list = {0};
		const struct window_choice all = {.kinds = KINDS_TRANSIT, .all = true};
		long last = 0;
		bool crossed = false;
		for (int d = 0; d < 30; d++) {
			struct night n;
			assert_int_equal(night_build(&n, &s->site, &earth, s->night.mjd + d, &memo, NULL),
					 ST_OK);
			assert_int_equal(night_windows(&n, &s->prepared, 1, &all, &list, NULL, NULL), ST_OK);
			for (size_t k = 0; k < list.n; k++) {
				const struct window_event *ev = &list.w[k].event;
				if (d > 0 && k == 0 && crossed)
					assert_int_equal(ev->epoch, last);
				else if (d > 0 || k > 0)
					assert_int_equal(ev->epoch, last + 1);
				last = ev->epoch;
				crossed = ev->t4_d >= n.length_d;
			}
		}
		window_list_free(&list);
	}
	free(s);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(covers),
	    cmocka_unit_test(chances),
	    cmocka_unit_test(nights_tile_time),
	};
	return cmocka_run_group_tests_name("windows against a sampler", tests, NULL, NULL);
}
