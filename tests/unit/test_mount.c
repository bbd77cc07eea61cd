/* SPDX-License-Identifier: MIT
 * Limits of a mount and the flip of a german one, by hand. Times of the rows are minutes from the star's
 * transit of the meridian. */
#include "ephem/mount.h"

#include "ephem/units.h"
#include "ephem/window.h"
#include "tests/support/check.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static struct sun_memo memo;
static const struct earth_clock earth = {.leap = &leap_builtin};
enum { NIGHT_MJD = 61152 }; /* 2026-04-22 */

static void build(struct night *n, struct site *site, double lat_deg)
{
	*site = (struct site){
	    .name = "Tern Hill", .lat_deg = lat_deg, .lon_east_deg = -109.36, .height_m = 2100.0, .zone = ""};
	assert_int_equal(night_build(n, site, &earth, NIGHT_MJD, &memo, NULL), ST_OK);
}

/* A star of that declination of date that crosses the meridian in the middle of the night. */
static struct star star_at(const struct night *n, double dec_deg)
{
	const struct vec3 v = vec3_from_angles(night_lst_rad(n, 0.5), dec_deg * DEG_RAD);
	const struct star s = {.icrs = v, .apparent = v};
	check_close("transit", night_star_transit_d(n, &s, 0.4), 0.5, 1e-9);
	return s;
}

/* --- limits --- */

/* What is allowed in the 11 hours on either side of the transit: at most two spans, NAN for none. The Earth
 * turns by 360.98564736629 deg a day, so an hour of hour angle is 59.836174 min; the altitude h is passed at
 * cos H = (sin h - sin lat sin dec) / (cos lat cos dec). by hand */
#define OUT 660.0
static const struct {
	const char *what;
	double lat_deg, dec_deg, alt_max_deg, east_h, west_h, zenith_deg;
	enum mount_kind kind;
	double span[4];
} limit_rows[] = {
    {"none given", 38.62, 20, NAN, NAN, NAN, NAN, MOUNT_GERMAN, {-OUT, OUT, NAN, NAN}},
    {"both sides", 38.62, 20, NAN, 3, 2, NAN, MOUNT_FORK, {-179.508522, 119.672348, NAN, NAN}},
    {"west alone", 38.62, 20, NAN, NAN, 2, NAN, MOUNT_UNKNOWN, {-OUT, 119.672348, NAN, NAN}},
    {"east alone", 38.62, 20, NAN, 0.5, NAN, NAN, MOUNT_GERMAN, {-29.918087, OUT, NAN, NAN}},
    {"half a turn is no limit", 38.62, 20, NAN, 12, 12, NAN, MOUNT_GERMAN, {-OUT, OUT, NAN, NAN}},
    {"nothing east of the meridian", 38.62, 20, NAN, 0, 6, NAN, MOUNT_GERMAN, {0, 359.017044, NAN, NAN}},
    {"nothing", 38.62, 20, NAN, 0, 0, NAN, MOUNT_GERMAN, {NAN, NAN, NAN, NAN}},
    {"zenith, 5 deg", 28.76, 29.5, NAN, NAN, NAN, 5, MOUNT_ALTAZ, {-OUT, -22.584446, 22.584446, OUT}},
    {"zenith, 3 deg", 28.76, 29.5, NAN, NAN, NAN, 3, MOUNT_ALTAZ, {-OUT, -13.277347, 13.277347, OUT}},
    {"through the zenith", 38.62, 38.62, NAN, NAN, NAN, 2, MOUNT_ALTAZ, {-OUT, -10.211683, 10.211683, OUT}},
    {"passes beside the zenith", 38.62, 43.7, NAN, NAN, NAN, 5, MOUNT_ALTAZ, {-OUT, OUT, NAN, NAN}},
    {"no radius", 38.62, 38.62, NAN, NAN, NAN, 0, MOUNT_ALTAZ, {-OUT, OUT, NAN, NAN}},
    {"highest altitude", 38.62, 10, 60, NAN, NAN, NAN, MOUNT_FORK, {-OUT, -40.063201, 40.063201, OUT}},
    {"south", -30, -60, 50, NAN, NAN, NAN, MOUNT_FORK, {-OUT, -158.472180, 158.472180, OUT}},
    {"90 is no limit", 38.62, 38.62, 90, NAN, NAN, NAN, MOUNT_FORK, {-OUT, OUT, NAN, NAN}},
    {"the lower of two", 28.76, 29.5, 87, NAN, NAN, 5, MOUNT_ALTAZ, {-OUT, -22.584446, 22.584446, OUT}},
    {"altitude and reach",
     38.62,
     10,
     60,
     1,
     2,
     NAN,
     MOUNT_GERMAN,
     {-59.836174, -40.063201, 40.063201, 119.672348}},
};

static void limits_by_hand(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof limit_rows / sizeof *limit_rows; i++) {
		struct site site;
		struct night *n = malloc(sizeof *n);
		assert_non_null(n);
		build(n, &site, limit_rows[i].lat_deg);
		const struct star s = star_at(n, limit_rows[i].dec_deg);
		struct telescope t = telescope_empty();
		t.mount = limit_rows[i].kind;
		t.alt_max_deg = limit_rows[i].alt_max_deg;
		t.ha_east_h = limit_rows[i].east_h;
		t.ha_west_h = limit_rows[i].west_h;
		t.zenith_deg = limit_rows[i].zenith_deg;
		struct intervals set = mount_allows(n, &s, &t);
		set = intervals_clip(&set, 0.5 - OUT * MIN_D, 0.5 + OUT * MIN_D);
		const double *want = limit_rows[i].span;
		int spans = isnan(want[0]) ? 0 : isnan(want[2]) ? 1 : 2;
		if (set.n != spans)
			check_fail("%s: %d spans, expected %d", limit_rows[i].what, set.n, spans);
		for (int k = 0; k < set.n; k++) {
			check_close(limit_rows[i].what, (set.s[k].from_d - 0.5) * DAY_MIN, want[2 * k], 1e-5);
			check_close(limit_rows[i].what, (set.s[k].to_d - 0.5) * DAY_MIN, want[2 * k + 1],
				    1e-5);
		}
		if (!mount_limits(&t) && !(set.n == 1 && want[0] <= -OUT && want[1] >= OUT))
			check_fail("%s: limits, and says it has none", limit_rows[i].what);
		free(n);
	}
}

/* --- place of the flip --- */

#define LONG_BEFORE 60, 80, 120, 160, 180
#define LONG_AFTER -180, -160, -120, -80, -60
#define IN_INGRESS -10, 10, 50, 90, 110
#define IN_FLAT -60, -40, 0, 40, 60
#define SHORT_FLAT -30, -12, 1, 14, 32
#define GRAZING -20, NAN, 0, NAN, 20
#define ALL -200, 200, NAN, NAN

/* Usable, flip_min, allowance before and after, T1, T2, mid, T3, T4, pad -> start and place. b_min 15. by
 * hand: an end of the flip against T1 - 15 - 16, T1 - 15, T1, ... */
static const struct {
	const char *what;
	double usable[4], flip_min, before_min, after_min, t[5], pad_min, want_min;
	enum flip_place place;
} flip_rows[] = {
    {"long before the event", {ALL}, 8, 0, 0, {LONG_BEFORE}, 16, 0, FLIP_OUTSIDE},
    {"long after it", {ALL}, 8, 0, 0, {LONG_AFTER}, 16, 0, FLIP_OUTSIDE},
    {"stays on the meridian though it need not", {ALL}, 8, 60, 60, {LONG_BEFORE}, 16, 0, FLIP_OUTSIDE},
    {"no allowance: in the ingress", {ALL}, 8, 0, 0, {IN_INGRESS}, 16, 0, FLIP_LIMB},
    {"before the ingress, clear of the pad", {ALL}, 8, 60, 0, {IN_INGRESS}, 16, -49, FLIP_OUTSIDE},
    {"before it, with as much of the pad as there is", {ALL}, 8, 35, 0, {IN_INGRESS}, 16, -35, FLIP_OUTSIDE},
    {"in the baseline, as little as can be", {ALL}, 8, 30, 0, {IN_INGRESS}, 16, -30, FLIP_BASELINE},
    {"in the baseline, away from the limb", {ALL}, 8, 20, 0, {IN_INGRESS}, 16, -20, FLIP_BASELINE},
    {"in the flat part, clear of the pad", {ALL}, 8, 0, 30, {IN_INGRESS}, 16, 26, FLIP_FLAT},
    {"in the flat part, as late as it may", {ALL}, 8, 0, 15, {IN_INGRESS}, 16, 15, FLIP_FLAT},
    {"flat part rather than just before T1", {ALL}, 8, 20, 30, {IN_INGRESS}, 16, 26, FLIP_FLAT},
    {"baseline rather than flat part, both clear", {ALL}, 8, 30, 40, {IN_INGRESS}, 5, -30, FLIP_BASELINE},
    {"just before T1, contacts exact", {ALL}, 8, 20, 30, {IN_INGRESS}, 0, -18, FLIP_BASELINE},
    {"flat part rather than outside but near", {ALL}, 8, 90, 0, {IN_FLAT}, 30, 0, FLIP_FLAT},
    {"outside, clear of the limb if not of b_min", {ALL}, 8, 100, 0, {IN_FLAT}, 30, -100, FLIP_OUTSIDE},
    {"a limb, as little as can be", {ALL}, 8, 12, 8, {IN_INGRESS}, 16, 8, FLIP_LIMB},
    {"in the flat part", {ALL}, 8, 0, 0, {IN_FLAT}, 16, 0, FLIP_FLAT},
    {"after the egress, clear of the pad", {ALL}, 8, 0, 100, {IN_FLAT}, 16, 91, FLIP_OUTSIDE},
    {"after it, as late as it may", {ALL}, 8, 0, 80, {IN_FLAT}, 16, 80, FLIP_OUTSIDE},
    {"before the ingress is nearer", {ALL}, 8, 110, 110, {IN_FLAT}, 16, 91, FLIP_OUTSIDE},
    {"in the middle of a short flat part", {ALL}, 8, 5, 5, {SHORT_FLAT}, 16, -3, FLIP_FLAT},
    {"grazing: after the egress", {ALL}, 8, 0, 60, {GRAZING}, 16, 51, FLIP_OUTSIDE},
    {"grazing: in the baseline", {ALL}, 8, 0, 30, {GRAZING}, 16, 30, FLIP_BASELINE},
    {"grazing: in a limb", {ALL}, 8, 0, 10, {GRAZING}, 16, 0, FLIP_LIMB},
    {"in time that is lost anyway", {-200, 5, 20, 200}, 8, 0, 30, {IN_FLAT}, 16, 5, FLIP_FREE},
    {"before the gap's end", {-200, -30, -12, 200}, 8, 40, 0, {IN_FLAT}, 16, -20, FLIP_FREE},
    {"lost time in a limb is a limb", {-200, 45, 60, 200}, 8, 0, 55, {IN_FLAT}, 16, 0, FLIP_FLAT},
    {"a flip that takes no time", {ALL}, 0, 0, 30, {IN_INGRESS}, 16, 10, FLIP_FREE},
    {"not given: 5 min, no allowance", {ALL}, NAN, NAN, NAN, {IN_FLAT}, 16, 0, FLIP_FLAT},
    /* one side of the pier reaches all that is usable */
    {"the east side until the end", {-200, 40, NAN, NAN}, 8, 0, 50, {IN_FLAT}, 16, NAN, FLIP_FREE},
    {"the west side from the start", {-30, 200, NAN, NAN}, 8, 40, 0, {IN_FLAT}, 16, NAN, FLIP_FREE},
    {"usable only west of the meridian", {10, 200, NAN, NAN}, 8, 0, 0, {IN_FLAT}, 16, NAN, FLIP_FREE},
    {"only east of it", {-200, -10, NAN, NAN}, 8, 0, 0, {IN_FLAT}, 16, NAN, FLIP_FREE},
    {"until the meridian itself", {-200, 0, NAN, NAN}, 8, 0, 0, {IN_FLAT}, 16, NAN, FLIP_FREE},
    {"nothing usable", {NAN, NAN, NAN, NAN}, 8, 0, 0, {IN_FLAT}, 16, NAN, FLIP_FREE},
};

static double at_d(double from_meridian_min)
{
	return 0.5 + from_meridian_min * MIN_D;
}

static void flips_by_hand(void **state)
{
	(void)state;
	struct site site;
	struct night *n = malloc(sizeof *n);
	assert_non_null(n);
	build(n, &site, 38.62);
	const struct star s = star_at(n, 20.0);
	for (size_t i = 0; i < sizeof flip_rows / sizeof *flip_rows; i++) {
		const double *u = flip_rows[i].usable, *c = flip_rows[i].t;
		struct telescope t = telescope_empty();
		struct flip flip = {NAN, NAN, NAN, FLIP_FREE};
		struct intervals usable = intervals_one(at_d(u[0]), at_d(u[1]));
		intervals_append(&usable, at_d(u[2]), at_d(u[3]));
		const struct flip_event ev = {at_d(c[0]),
					      at_d(c[1]),
					      at_d(c[2]),
					      at_d(c[3]),
					      at_d(c[4]),
					      15.0 * MIN_D,
					      flip_rows[i].pad_min * MIN_D};
		t.flip_min = flip_rows[i].flip_min;
		t.flip_before_min = flip_rows[i].before_min;
		t.flip_after_min = flip_rows[i].after_min;
		for (int kind = MOUNT_UNKNOWN; kind <= MOUNT_ALTAZ; kind++) {
			t.mount = (enum mount_kind)kind;
			if (kind != MOUNT_GERMAN && mount_flip(n, &s, &t, &usable, &ev, &flip))
				check_fail("%s: a mount of kind %d flips", flip_rows[i].what, kind);
		}
		t.mount = MOUNT_GERMAN;
		const bool wanted = !isnan(flip_rows[i].want_min);
		if (mount_flip(n, &s, &t, &usable, &ev, &flip) != wanted)
			check_fail("%s: %s", flip_rows[i].what, wanted ? "no flip" : "a flip");
		if (!wanted)
			continue;
		const double takes_min = isnan(t.flip_min) ? 5.0 : t.flip_min;
		check_close(flip_rows[i].what, (flip.from_d - 0.5) * DAY_MIN, flip_rows[i].want_min, 1e-6);
		check_close(flip_rows[i].what, (flip.to_d - flip.from_d) * DAY_MIN, takes_min, 1e-6);
		check_close(flip_rows[i].what, flip.meridian_d, 0.5, 1e-9);
		if (flip.place != flip_rows[i].place)
			check_fail("%s: place %d, expected %d", flip_rows[i].what, (int)flip.place,
				   (int)flip_rows[i].place);
	}
	free(n);
}

/* --- windows --- */

/* A circumpolar star, altitude limit 0, no Moon rule: but for the mount the whole reserve can be used. T14
 * 180 min, limbs 21.261365 min, sigma 8 min, B 30, b_min 15, pad 16, reserve 31 min (see test_window.c). */
struct scene {
	struct site site;
	struct night night;
	struct target target;
	struct prepared prepared;
	double meridian_d;
};

static struct scene *open_scene(void)
{
	struct scene *s = malloc(sizeof *s);
	assert_non_null(s);
	build(&s->night, &s->site, 38.62);
	const struct vec3 v = vec3_from_angles(night_lst_rad(&s->night, 0.5), 80.0 * DEG_RAD);
	double ra_rad, dec_rad;
	vec3_to_angles(mat3_apply_t(&s->night.of_date, v), &ra_rad, &dec_rad);
	s->target = target_empty();
	s->target.name = "Tern 1 b";
	s->target.ra_deg = ra_rad / DEG_RAD;
	s->target.dec_deg = dec_rad / DEG_RAD;
	s->target.period_d = 5.0;
	s->target.duration_h = 3.0;
	s->target.k = 0.1;
	s->target.t0_err_d = 8.0 * MIN_D;
	s->target.period_err_d = 1e-9;
	assert_int_equal(standard_parse("BJD_TDB", &s->target.standard, NULL), ST_OK);
	return s;
}

/* The window whose mid-time lies x minutes after the transit. */
static struct window window_at(struct scene *s, const struct telescope *t, double x_min,
			       const struct free_time *free_time)
{
	struct limits l = limits_built_in();
	struct window w;
	assert_int_equal(limits_put(&l, LIM_ALT, 0.0, FROM_OPTION, NULL), ST_OK);
	assert_int_equal(limits_put(&l, LIM_SUN, 0.0, FROM_OPTION, NULL), ST_OK); /* 5.3 h on either side */
	assert_int_equal(limits_put(&l, LIM_MOON, 0.0, FROM_OPTION, NULL), ST_OK);
	const struct star star = night_star(&s->night, &s->target);
	s->meridian_d = night_star_transit_d(&s->night, &star, 0.4);
	s->target.t0 = night_bjd_tdb(&s->night, &star, s->meridian_d + x_min * MIN_D).jd;
	s->prepared = prepare_target(&s->target, &l, &earth, &memo, false, false);
	s->night.telescope = t;
	struct sun_sets suns = {.n = 0};
	const struct target_night tn = target_on_night(&s->night, &s->prepared, &star, &suns, free_time);
	window_make(&w, &tn, KIND_TRANSIT, 0, STAGE_FORECAST);
	return w;
}

/* by hand, with Phi the normal distribution: 8 min of 137.47727 of the flat part; the mid-time misses a gap
 * of one sigma that begins at it: 1 - (Phi(1) - 0.5). 20 min before T1 the gap takes 8 of 30 min of baseline
 * and leaves 12; the ingress keeps its 15 where it comes 3 min later: Phi(-3/8); done bears the gap, but for
 * the limb: Phi(12/8). */
static const struct {
	const char *what;
	double x_min, flip_min, before_min, after_min, west_h;
	double flip, share[PART_COUNT], base_before, ingress, mid, done;
	const char *lost_by;
} window_rows[] = {
    {"flat part", 0, 8, 0, 0, NAN, 0, {1, 1, 0.9418086, 1, 1}, 31, 1, 0.65865525, 1, "flat:flip"},
    {"10 min are borne", 0, 10, 0, 0, NAN, 0, {1, 1, 0.9272607, 1, 1}, 31, 1, 0.60564977, 1, "flat:flip"},
    {"more are not", 0, 10.5, 0, 0, NAN, 0, {1, 1, 0.9236237, 1, 1}, 31, 1, 0.59467574, 0, "flat:flip"},
    {"baseline", 110, 8, 0, 0, NAN, 0, {0.7333333, 1, 1, 1, 1}, 12, 0.35383024, 1, 0.93319290, "before:flip"},
    {"the west side from the start",
     110,
     8,
     60,
     0,
     NAN,
     NAN,
     {1, 1, 1, 1, 1},
     31,
     0.99997333,
     1,
     0.99997333,
     ""},
    {"meridian before the reserve", 150, 8, 0, 0, NAN, NAN, {1, 1, 1, 1, 1}, 31, 1, 1, 1, ""},
    {"reach in hour angle",
     0,
     8,
     0,
     60,
     1,
     NAN,
     {1, 1, 0.9352441, 0, 0},
     31,
     1,
     1,
     0,
     "flat:mount;egress:mount;after:mount"},
};

static void windows_by_hand(void **state)
{
	(void)state;
	struct scene *s = open_scene();
	/* contacts are placed on BJD_TDB: up to 0.01 min (see test_window.c) */
	const double time_min = 0.0101, share = time_min / 20.0, chance = time_min / 8.0 * 0.4;
	for (size_t i = 0; i < sizeof window_rows / sizeof *window_rows; i++) {
		struct telescope t = telescope_empty();
		const char *what = window_rows[i].what;
		char lost[120];
		t.mount = MOUNT_GERMAN;
		t.flip_min = window_rows[i].flip_min;
		t.flip_before_min = window_rows[i].before_min;
		t.flip_after_min = window_rows[i].after_min;
		t.ha_west_h = window_rows[i].west_h;
		const struct window w = window_at(s, &t, window_rows[i].x_min, NULL);
		check_close(what, (w.forecast.flip_d - s->meridian_d) * DAY_MIN, window_rows[i].flip, 1e-6);
		for (int part = 0; part < PART_COUNT; part++)
			check_close(what, w.cover.share[part], window_rows[i].share[part], share);
		check_close(what, w.cover.base_before_min, window_rows[i].base_before, time_min);
		check_close(what, w.chance.ingress, window_rows[i].ingress, chance + 5e-5);
		check_close(what, w.chance.mid, window_rows[i].mid, chance);
		check_close(what, w.chance.done, window_rows[i].done, chance + 1e-4);
		lost_by_text(&w.cover, lost, sizeof lost);
		assert_string_equal(lost, window_rows[i].lost_by);
	}
	free(s);
}

/* 10 min written as a difference of two times is now and then a little more: it is borne all the same. */
static void ten_minutes_are_borne(void **state)
{
	(void)state;
	struct scene *s = open_scene();
	struct telescope t = telescope_empty();
	t.mount = MOUNT_GERMAN;
	t.flip_min = 10.0;
	t.flip_before_min = t.flip_after_min = 20.0;
	s->night.lst0_rad += 6e-4; /* the transit just before 0.5 d, where times are finer than behind it */
	for (int x_min = -30; x_min <= 30; x_min++) {
		for (int k = 0; k < 8; k++) {
			s->night.lst0_rad += 1e-6; /* another moment of transit */
			const struct window w = window_at(s, &t, x_min, NULL);
			assert_true(isfinite(w.forecast.flip_d));
			check_close("done", w.chance.done, 1.0, 1e-3);
		}
	}
	free(s);
}

static void same_figures(const struct window *a, const struct window *b)
{
	assert_int_equal(a->cover.usable.n, b->cover.usable.n);
	for (int i = 0; i < a->cover.usable.n; i++) {
		check_close("from", a->cover.usable.s[i].from_d, b->cover.usable.s[i].from_d, 0.0);
		check_close("to", a->cover.usable.s[i].to_d, b->cover.usable.s[i].to_d, 0.0);
	}
	assert_memory_equal(&a->event, &b->event, sizeof a->event);
	assert_memory_equal(a->cover.share, b->cover.share, sizeof a->cover.share);
	assert_memory_equal(a->cover.lost_to, b->cover.lost_to, sizeof a->cover.lost_to);
	check_close("coverage", a->cover.coverage, b->cover.coverage, 0.0);
	check_close("base before", a->cover.base_before_min, b->cover.base_before_min, 0.0);
	check_close("base after", a->cover.base_after_min, b->cover.base_after_min, 0.0);
	check_close("ingress", a->chance.ingress, b->chance.ingress, 0.0);
	check_close("egress", a->chance.egress, b->chance.egress, 0.0);
	check_close("mid", a->chance.mid, b->chance.mid, 0.0);
	check_close("done", a->chance.done, b->chance.done, 0.0);
	check_close("flip", a->forecast.flip_d, b->forecast.flip_d, 0.0);
}

/* Nothing given, or a fork with the flip of another mount: as without a telescope. */
static void nothing_changes(void **state)
{
	(void)state;
	struct scene *s = open_scene();
	for (double x_min = -330.0; x_min <= 330.0; x_min += 55.0) {
		struct telescope t = telescope_empty();
		const struct window bare = window_at(s, NULL, x_min, NULL);
		assert_true(isnan(bare.forecast.flip_d));
		for (int kind = MOUNT_UNKNOWN; kind <= MOUNT_ALTAZ; kind++) {
			t.mount = (enum mount_kind)kind;
			t.flip_min = t.flip_before_min = t.flip_after_min = NAN;
			if (kind != MOUNT_GERMAN) {
				t.flip_min = 8.0;
				t.flip_before_min = t.flip_after_min = 30.0;
			} else
				t.flip_after_min = 360.0; /* tracks through */
			const struct window w = window_at(s, &t, x_min, NULL);
			same_figures(&w, &bare);
		}
	}
	free(s);
}

/* Ties go in the order sun, altitude, mask, moon, airmass, mount, flip, allotment, cloud. */
static void ties(void **state)
{
	(void)state;
	static const char *const order[] = {"sun",  "altitude",	 "mask",  "moon",  "airmass", "mount",
					    "flip", "allotment", "cloud", "block", "noon"};
	assert_int_equal(sizeof order / sizeof *order, CAUSE_COUNT);
	for (int c = 0; c < CAUSE_COUNT; c++)
		assert_string_equal(cause_words[c], order[c]);
	struct scene *s = open_scene();
	struct free_time none = free_time_whole();
	struct telescope t = telescope_empty();
	char lost[120];
	none.allotted = intervals_none();
	t.ha_east_h = t.ha_west_h = 0.0;
	struct window w = window_at(s, &t, 0.0, &none);
	lost_by_text(&w.cover, lost, sizeof lost);
	assert_string_equal(lost, "before:mount;ingress:mount;flat:mount;egress:mount;after:mount");
	t.ha_east_h = t.ha_west_h = NAN;
	w = window_at(s, &t, 0.0, &none);
	lost_by_text(&w.cover, lost, sizeof lost);
	assert_string_equal(
	    lost, "before:allotment;ingress:allotment;flat:allotment;egress:allotment;after:allotment");
	free(s);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(limits_by_hand),  cmocka_unit_test(flips_by_hand),
	    cmocka_unit_test(windows_by_hand), cmocka_unit_test(ten_minutes_are_borne),
	    cmocka_unit_test(nothing_changes), cmocka_unit_test(ties),
	};
	return cmocka_run_group_tests_name("mount", tests, NULL, NULL);
}
