/* SPDX-License-Identifier: MIT
 * Limits of a mount against a look at every second and against ERFA, the place of a flip against every place
 * that it could have, and windows with a telescope against the same windows without. */
#include "ephem/mount.h"

#include "ephem/season.h"
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/erfa_sky.h"

#include <math.h>
#include <stdlib.h>

static struct sun_memo memo;
static const struct earth_clock earth = {.leap = &leap_builtin};

static double perhaps(struct rng *r, double share, double lo, double hi)
{
	const double value = rng_between(r, lo, hi);
	return rng_unit(r) < share ? value : (double)NAN;
}

static struct telescope random_telescope(struct rng *r)
{
	struct telescope t = telescope_empty();
	t.mount = (enum mount_kind)(int)rng_between(r, 0.0, 4.0);
	t.alt_max_deg = perhaps(r, 0.4, 20.0, 90.0);
	t.ha_east_h = perhaps(r, 0.5, 0.0, 12.0);
	t.ha_west_h = perhaps(r, 0.5, 0.0, 12.0);
	t.zenith_deg = perhaps(r, 0.4, 0.0, 20.0);
	t.flip_min = perhaps(r, 0.9, 0.0, 20.0);
	t.flip_before_min = perhaps(r, 0.7, 0.0, 90.0);
	t.flip_after_min = perhaps(r, 0.7, 0.0, 90.0);
	return t;
}

/* --- limits --- */

struct scene {
	struct site site;
	struct night night;
	struct target target;
	struct star star;
};

static void random_scene(struct scene *s, struct rng *r)
{
	s->site = (struct site){.name = "x",
				.lat_deg = rng_between(r, -75.0, 75.0),
				.lon_east_deg = rng_between(r, -180.0, 180.0),
				.height_m = 1500.0,
				.zone = ""};
	assert_int_equal(
	    night_build(&s->night, &s->site, &earth, (int32_t)rng_between(r, 51600.0, 69700.0), &memo, NULL),
	    ST_OK);
	s->target = target_empty();
	s->target.name = "Tern 1 b";
	s->target.ra_deg = rng_between(r, 0.0, 360.0);
	s->target.dec_deg =
	    rng_unit(r) < 0.5 ? rng_between(r, -75.0, 75.0) : s->site.lat_deg + rng_between(r, -20.0, 20.0);
	s->target.dec_deg = fmin(fmax(s->target.dec_deg, -75.0), 75.0);
	s->star = night_star(&s->night, &s->target);
}

/* Hour angle of a place in the sky, in hours. */
static double hour_angle_h(const struct site *site, double alt_deg, double az_deg)
{
	const double h = alt_deg * DEG_RAD, a = az_deg * DEG_RAD, lat = site->lat_deg * DEG_RAD;
	return atan2(-sin(a) * cos(h), sin(h) * cos(lat) - cos(h) * cos(a) * sin(lat)) / DEG_RAD / 15.0;
}

static double highest_deg(const struct telescope *t)
{
	const double alt = isnan(t->alt_max_deg) ? 90.0 : t->alt_max_deg;
	return isnan(t->zenith_deg) ? alt : fmin(alt, 90.0 - t->zenith_deg);
}

static bool may_follow(const struct site *site, const struct telescope *t, double alt_deg, double az_deg)
{
	const double h = hour_angle_h(site, alt_deg, az_deg);
	if (h < 0.0 ? -h > t->ha_east_h : h > t->ha_west_h)
		return false;
	return highest_deg(t) >= 90.0 || alt_deg <= highest_deg(t);
}

/* Seconds to the nearest edge. */
static double edge_s(const struct intervals *set, double t_d)
{
	double nearest_d = 1.0;
	for (int i = 0; i < set->n; i++)
		nearest_d = fmin(nearest_d, fmin(fabs(t_d - set->s[i].from_d), fabs(t_d - set->s[i].to_d)));
	return nearest_d * DAY_S;
}

static void every_second(void **state)
{
	(void)state;
	struct rng r = rng_open("every second");
	struct scene *s = malloc(sizeof *s);
	assert_non_null(s);
	int partly = 0;
	for (int i = 0; i < 40; i++) {
		random_scene(s, &r);
		const struct telescope t = random_telescope(&r);
		const struct intervals set = mount_allows(&s->night, &s->star, &t);
		const double length_d = intervals_length(&set);
		partly += length_d > 0.01 && length_d < 0.99;
		for (int k = 0; k <= 86400; k++) {
			const double at = k / DAY_S;
			const struct altaz a = night_star_altaz(&s->night, &s->star, at);
			if (intervals_contain(&set, at) ==
			    may_follow(&s->site, &t, a.alt_deg, a.az_north_deg))
				continue;
			/* where the star grazes the highest altitude, by half an arcsecond */
			if (edge_s(&set, at) > 1.0 && fabs(a.alt_deg - highest_deg(&t)) > 0.5 / 3600.0)
				check_fail("second %d: altitude %.6f, hour angle %.6f h, %s the set", k,
					   a.alt_deg, hour_angle_h(&s->site, a.alt_deg, a.az_north_deg),
					   intervals_contain(&set, at) ? "in" : "not in");
		}
	}
	free(s);
	assert_true(partly > 10);
}

static bool erfa_allows(const struct scene *s, const struct telescope *t, double t_d, double *alt_deg)
{
	const struct erfa_sky sky = erfa_star(&s->target, &s->site, 0.0, night_utc(&s->night, t_d));
	*alt_deg = sky.alt_deg;
	return may_follow(&s->site, t, sky.alt_deg, sky.az_north_deg);
}

/* Edges within two seconds: a span or a gap so short is not looked into. */
static int edges_near(const struct intervals *set, double t_d)
{
	int near = 0;
	for (int i = 0; i < set->n; i++)
		near +=
		    (fabs(t_d - set->s[i].from_d) < 2.0 / DAY_S) + (fabs(t_d - set->s[i].to_d) < 2.0 / DAY_S);
	return near;
}

/* A second before and after each edge ERFA 2.0 finds the star where it is allowed and where it is not. */
static void edges_by_erfa(void **state)
{
	(void)state;
	struct rng r = rng_open("edges by ERFA");
	struct scene *s = malloc(sizeof *s);
	assert_non_null(s);
	int edges = 0, grazing = 0;
	for (int i = 0; i < 150; i++) {
		random_scene(s, &r);
		if (s->night.length_d > 1.0) /* behind a leap second ERFA needs another UT1-UTC */
			continue;
		const struct telescope t = random_telescope(&r);
		const struct intervals set = mount_allows(&s->night, &s->star, &t);
		for (int k = 0; k < 2 * set.n; k++) {
			const double at = k % 2 ? set.s[k / 2].to_d : set.s[k / 2].from_d,
				     second_d = 1.0 / DAY_S;
			double before_deg, after_deg;
			if (at < second_d || at > s->night.length_d - second_d || edges_near(&set, at) > 1)
				continue;
			const bool before = erfa_allows(s, &t, at - second_d, &before_deg);
			const bool after = erfa_allows(s, &t, at + second_d, &after_deg);
			edges++;
			if (before == (k % 2 == 1) && after == (k % 2 == 0))
				continue;
			grazing++;
			if (fabs(before_deg - highest_deg(&t)) > 1.0 / 3600.0)
				check_fail("edge at %.7f d: allowed %d before, %d after it", at, before,
					   after);
		}
	}
	free(s);
	assert_true(edges > 150 && grazing * 20 < edges);
}

/* --- the place of a flip, in cells of 10 s that begin 3600 cells before the meridian --- */

enum { CELLS = 7200, MERIDIAN = 3600, CELLS_PER_MIN = 6 };
enum kind { OUTSIDE, BASELINE, LIMB, FLAT };
struct cells {
	uint8_t kind[CELLS];
	bool usable[CELLS];
	int t1, t2, t3, t4, b, pad;
};

static int whole(struct rng *r, int lo, int hi)
{
	return (int)floor(rng_between(r, lo, hi + 1.0));
}

static void random_event(struct cells *c, struct rng *r)
{
	const int limb = whole(r, 6, 180), flat = 2 * whole(r, 0, 400);
	c->t1 = MERIDIAN + whole(r, -1400, 600);
	c->t2 = c->t1 + limb;
	c->t3 = c->t2 + flat;
	c->t4 = c->t3 + limb;
	c->b = whole(r, 0, 30) * CELLS_PER_MIN;
	c->pad = whole(r, 0, 60) * CELLS_PER_MIN / 2;
	for (int i = 0; i < CELLS; i++) {
		c->kind[i] = i < c->t1 - c->b || i >= c->t4 + c->b ? OUTSIDE
			     : i < c->t1 || i >= c->t4		   ? BASELINE
			     : i < c->t2 || i >= c->t3		   ? LIMB
								   : FLAT;
		c->usable[i] = i >= MERIDIAN - 1500 && i < MERIDIAN + 1500;
	}
	for (int gaps = whole(r, 0, 3); gaps > 0; gaps--) {
		const int from = MERIDIAN + whole(r, -900, 900), length = whole(r, 1, 300);
		for (int i = from; i < from + length; i++)
			c->usable[i] = false;
	}
}

struct look {
	bool near;
	enum flip_place place;
	int cost;
};

/* What a flip of `takes` cells from `at` does. */
static struct look look(const struct cells *c, int at, int takes)
{
	int of[4] = {0}, usable = 0, padded = 0;
	const int to = at + takes;
	for (int i = at; i < to; i++) {
		of[c->kind[i]]++;
		usable += c->usable[i];
	}
	if (of[LIMB] > 0)
		return (struct look){true, FLIP_LIMB, of[LIMB]};
	if (usable == 0)
		return (struct look){false, FLIP_FREE, 0};
	/* cells of the pad that a limb is nearer than */
	for (int i = 1; i <= c->pad; i++)
		padded += c->kind[to - 1 + i] == LIMB || c->kind[at - i] == LIMB;
	int far = c->pad;
	for (int i = c->pad; i >= 1; i--)
		if (c->kind[to - 1 + i] == LIMB || c->kind[at - i] == LIMB)
			far = i - 1;
	const int lacks = c->pad - far;
	if (of[OUTSIDE] == takes) {
		const int spare = at < c->t1 ? c->t1 - c->b - to : at - c->t4 - c->b;
		return (struct look){padded > 0, FLIP_OUTSIDE, spare < c->pad ? c->pad - spare : 0};
	}
	if (of[FLAT] == takes)
		return (struct look){padded > 0, FLIP_FLAT, lacks};
	return (struct look){padded > 0, FLIP_BASELINE, of[BASELINE] + lacks};
}

static double cell_d(const struct flip_event *origin, int cell)
{
	return origin->mid_d + (cell - MERIDIAN) * 10.0 / DAY_S;
}

static int rank(struct look l)
{
	return l.place == FLIP_LIMB ? 100 : (l.near ? 50 : 0) + (int)l.place;
}

/* The best of all starts, one by one: what it touches, the place, what it costs, how far away, the earlier
 * one. */
static int best_start(const struct cells *c, int earliest, int latest, int takes, struct look *what)
{
	int best = earliest;
	*what = look(c, earliest, takes);
	for (int at = earliest + 1; at <= latest; at++) {
		const struct look now = look(c, at, takes);
		const bool same = rank(now) == rank(*what);
		if (rank(now) < rank(*what) || (same && now.cost < what->cost) ||
		    (same && now.cost == what->cost && abs(at - MERIDIAN) < abs(best - MERIDIAN))) {
			best = at;
			*what = now;
		}
	}
	return best;
}

static void every_place(void **state)
{
	(void)state;
	struct rng r = rng_open("every place");
	struct scene *s = malloc(sizeof *s);
	struct cells *c = malloc(sizeof *c);
	assert_true(s && c);
	int seen[FLIP_LIMB + 1] = {0}, near = 0;
	for (int i = 0; i < 2000; i++) {
		struct telescope t = telescope_empty();
		struct flip flip;
		if (i % 100 == 0)
			random_scene(s, &r);
		random_event(c, &r);
		const int before = whole(&r, 0, 1) * whole(&r, 0, 90) * CELLS_PER_MIN,
			  after = whole(&r, 0, 1) * whole(&r, 0, 90) * CELLS_PER_MIN,
			  takes = 2 * whole(&r, 1, 60);
		/* the middle cell of the night's grid lies on the meridian */
		struct flip_event ev = {.mid_d = night_star_transit_d(&s->night, &s->star, 0.0)};
		const struct flip_event origin = ev;
		ev.t1_d = cell_d(&origin, c->t1);
		ev.t2_d = cell_d(&origin, c->t2);
		ev.t3_d = cell_d(&origin, c->t3);
		ev.t4_d = cell_d(&origin, c->t4);
		ev.mid_d = 0.5 * (ev.t1_d + ev.t4_d);
		ev.b_min_d = c->b * 10.0 / DAY_S;
		ev.pad_d = c->pad * 10.0 / DAY_S;
		t.mount = MOUNT_GERMAN;
		t.flip_min = (double)takes / CELLS_PER_MIN;
		t.flip_before_min = (double)before / CELLS_PER_MIN;
		t.flip_after_min = (double)after / CELLS_PER_MIN;
		struct intervals usable = intervals_none();
		for (int k = 0; k < CELLS; k++)
			if (c->usable[k])
				intervals_append(&usable, cell_d(&origin, k), cell_d(&origin, k + 1));
		struct look want;
		const int best = best_start(c, MERIDIAN - before, MERIDIAN + after, takes, &want);
		assert_true(mount_flip(&s->night, &s->star, &t, &usable, &ev, &flip));
		const double at = (flip.from_d - origin.mid_d) * DAY_S / 10.0 + MERIDIAN;
		const int got = (int)lround(at);
		check_close("a start in whole cells", at, got, 1e-3);
		seen[want.place]++;
		near += want.near && want.place != FLIP_LIMB;
		if (got != best || flip.place != want.place)
			check_fail("loop %d: starts at %d in place %d, best %d in place %d, cost %d (got %d)",
				   i, got - MERIDIAN, (int)flip.place, best - MERIDIAN, (int)want.place,
				   want.cost, look(c, got, takes).cost);
	}
	free(c);
	free(s);
	assert_true(near > 20);
	for (int k = FLIP_FREE; k <= FLIP_LIMB; k++)
		if (seen[k] < 20)
			check_fail("place %d was seen %d times", k, seen[k]);
}

/* --- windows --- */

static bool within(const struct intervals *small, const struct intervals *large)
{
	for (int i = 0; i < small->n; i++)
		if (intervals_overlap(large, small->s[i].from_d, small->s[i].to_d) <
		    small->s[i].to_d - small->s[i].from_d - 1e-12)
			return false;
	return true;
}

static void check_shrinks(const struct scene *s, const struct telescope *t, const struct window *with,
			  const struct window *without)
{
	assert_true(with->event.epoch == without->event.epoch);
	assert_true(within(&with->cover.usable, &without->cover.usable));
	for (int part = 0; part < PART_COUNT; part++)
		assert_false(with->cover.share[part] > without->cover.share[part] + 1e-9);
	assert_false(with->chance.ingress > without->chance.ingress + 1e-9);
	assert_false(with->chance.egress > without->chance.egress + 1e-9);
	assert_false(with->chance.done > without->chance.done + 1e-9);
	assert_true(isnan(without->forecast.flip_d));
	const double flip_d = with->forecast.flip_d, takes_d = mount_flip_d(t);
	if (isnan(flip_d)) {
		for (int part = 0; part < PART_COUNT; part++)
			assert_true(with->cover.lost_to[part] != CAUSE_FLIP);
		return;
	}
	const double meridian_d = night_star_transit_d(&s->night, &s->star, flip_d - 0.4);
	const double before_min = isnan(t->flip_before_min) ? 0.0 : t->flip_before_min,
		     after_min = isnan(t->flip_after_min) ? 0.0 : t->flip_after_min;
	assert_int_equal(t->mount, MOUNT_GERMAN);
	assert_true((meridian_d - flip_d) * DAY_MIN < before_min + 1e-6);
	assert_true((flip_d - meridian_d) * DAY_MIN < after_min + 1e-6);
	assert_true(intervals_overlap(&with->cover.usable, flip_d, flip_d + takes_d) < 1e-9);
}

/* With a telescope a window has no moment that it lacks without, and in the gap of its flip none at all. */
static void windows_shrink(void **state)
{
	(void)state;
	struct rng r = rng_open("windows shrink");
	struct scene *s = malloc(sizeof *s);
	assert_non_null(s);
	struct window_list bare = {0}, cut = {0};
	int flips = 0, by_mount = 0, by_flip = 0;
	for (int i = 0; i < 1500; i++) {
		random_scene(s, &r);
		const struct window_choice all = {.kinds = KINDS_TRANSIT, .all = true};
		const struct limits limits = limits_built_in();
		struct telescope t = random_telescope(&r);
		if (i % 2) { /* a flip that nothing else gets ahead of */
			t.mount = MOUNT_GERMAN;
			t.alt_max_deg = t.ha_east_h = t.ha_west_h = t.zenith_deg = NAN;
		}
		s->target.period_d = rng_between(&r, 1.2, 4.0);
		s->target.duration_h = rng_between(&r, 0.7, 6.0);
		s->target.k = rng_between(&r, 0.03, 0.2);
		s->target.t0_err_d = exp(rng_between(&r, log(2e-4), log(2e-2)));
		s->target.period_err_d = 1e-8;
		assert_int_equal(standard_parse("BJD_TDB", &s->target.standard, NULL), ST_OK);
		s->target.t0 = night_bjd_tdb(&s->night, &s->star, rng_between(&r, 0.2, 0.8)).jd;
		const struct prepared p = prepare_target(&s->target, &limits, &earth, &memo, false, false);
		s->night.telescope = NULL;
		assert_int_equal(night_windows(&s->night, &p, 1, &all, &bare, NULL, NULL), ST_OK);
		s->night.telescope = &t;
		assert_int_equal(night_windows(&s->night, &p, 1, &all, &cut, NULL, NULL), ST_OK);
		assert_true(bare.n == cut.n && bare.n > 0);
		for (size_t k = 0; k < cut.n; k++) {
			check_shrinks(s, &t, &cut.w[k], &bare.w[k]);
			flips += isfinite(cut.w[k].forecast.flip_d);
			for (int part = 0; part < PART_COUNT; part++) {
				by_mount += cut.w[k].cover.lost_to[part] == CAUSE_MOUNT;
				by_flip += cut.w[k].cover.lost_to[part] == CAUSE_FLIP;
			}
		}
	}
	window_list_free(&bare);
	window_list_free(&cut);
	free(s);
	print_message("%d flips; %d parts lost to mounts, %d to flips\n", flips, by_mount, by_flip);
	assert_true(flips > 20 && by_mount > 100 && by_flip > 10);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(every_second),
	    cmocka_unit_test(edges_by_erfa),
	    cmocka_unit_test(every_place),
	    cmocka_unit_test(windows_shrink),
	};
	return cmocka_run_group_tests_name("mounts, by every second", tests, NULL, NULL);
}
