/* SPDX-License-Identifier: MIT
 * The sets of a night (Sun below a limit, star above a limit, Moon far enough) against the curves themselves
 * on a grid of 20 s, with limits also placed within arcseconds of an extremum. */
#include "ephem/night.h"

#include "ephem/limits.h"
#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>

enum { GRID = 4320 };

static struct sun_memo memo;

static void random_night(struct rng *r, struct site *site, struct night *n)
{
	static const struct earth_clock clock = {.leap = &leap_builtin};
	*site = (struct site){.lat_deg = rng_between(r, -80.0, 80.0),
			      .lon_east_deg = rng_between(r, -180.0, 180.0),
			      .height_m = rng_between(r, 0.0, 4000.0)};
	assert_int_equal(night_build(n, site, &clock, (int32_t)rng_between(r, 51544.0, 69807.0), &memo, NULL),
			 ST_OK);
}

/* The set holds t exactly where the margin is positive, unless the margin is within `slack` of zero. */
static void compare(const char *what, const struct intervals *set, double t_d, double margin, double slack)
{
	if (fabs(margin) > slack && intervals_contain(set, t_d) != (margin > 0.0))
		check_fail("%s at t = %.6f d: margin %.3g, %s the set", what, t_d, margin,
			   margin > 0.0 ? "but not in" : "but in");
}

static void sun_below(void **state)
{
	(void)state;
	struct rng r = rng_open("Sun below");
	for (int i = 0; i < 60; i++) {
		struct site site;
		struct night n;
		random_night(&r, &site, &n);
		static double alt[GRID + 1];
		double lowest = 90.0, highest = -90.0;
		for (int k = 0; k <= GRID; k++) {
			alt[k] = night_sun_altaz(&n, n.length_d * k / GRID).alt_deg;
			lowest = fmin(lowest, alt[k]);
			highest = fmax(highest, alt[k]);
		}
		/* a grid of 20 s misses the extremum by at most 0.05 arcsec */
		const double limits[] = {-12.0,
					 rng_between(&r, -30.0, 0.0),
					 lowest + 1.0 / 3600.0,
					 lowest - 1.0 / 3600.0,
					 lowest + 20.0 / 3600.0,
					 highest - 1.0 / 3600.0,
					 highest + 1.0 / 3600.0};
		for (size_t k = 0; k < sizeof limits / sizeof *limits; k++) {
			struct intervals set = night_sun_below(&n, limits[k]);
			for (int g = 0; g <= GRID; g++)
				compare("Sun", &set, n.length_d * g / GRID, limits[k] - alt[g], 0.2 / 3600.0);
			struct night_dark d = night_dark(&n, limits[k]);
			check_close("usable", d.usable_h, intervals_length(&set) * 24.0, 1e-9);
			/* each end inside the night is a passage: 0.01 s, or where it grazes 0.1 arcsec */
			for (int s = 0; s < set.n; s++)
				for (int end = 0; end < 2; end++) {
					double t = end ? set.s[s].to_d : set.s[s].from_d;
					if (t <= 0.0 || t >= n.length_d)
						continue;
					double off =
					    fabs(night_sun_altaz(&n, t).alt_deg - limits[k]) * 3600.0;
					assert_true(off < 0.1 || off < 0.01 * 15.05);
				}
		}
	}
}

static void star_above(void **state)
{
	(void)state;
	struct rng r = rng_open("star above");
	long several = 0;
	for (int i = 0; i < 400; i++) {
		struct site site;
		struct night n;
		random_night(&r, &site, &n);
		struct target t = target_empty();
		t.ra_deg = rng_between(&r, 0.0, 360.0);
		t.dec_deg = i % 3 ? asin(rng_between(&r, -1.0, 1.0)) / DEG_RAD
				  : site.lat_deg + rng_between(&r, -3.0, 3.0);
		t.dec_deg = fmin(fmax(t.dec_deg, -89.9), 89.9);
		struct star s = night_star(&n, &t);
		double dec = asin(s.apparent.z) / DEG_RAD;
		/* also limits just inside and outside the greatest and the least altitude */
		double upper = 90.0 - fabs(site.lat_deg - dec), lower = -90.0 + fabs(site.lat_deg + dec);
		const double limits[] = {
		    30.0, rng_between(&r, 0.0, 90.0), upper - 0.01, upper + 0.01, lower - 0.01, lower + 0.01};
		for (size_t k = 0; k < sizeof limits / sizeof *limits; k++) {
			struct intervals set = night_star_above(&n, &s, limits[k]);
			several += set.n > 1;
			for (int g = 0; g <= GRID; g += 7) {
				double at = n.length_d * g / GRID;
				/* the closed form leaves out the diurnal aberration, 0.32 arcsec */
				compare("star", &set, at, night_star_altaz(&n, &s, at).alt_deg - limits[k],
					0.5 / 3600.0);
			}
		}
	}
	assert_true(several > 50); /* nights that see the star twice are among them */
}

static void moon_clear(void **state)
{
	(void)state;
	struct rng r = rng_open("Moon clear");
	long partly = 0;
	for (int i = 0; i < 150; i++) {
		struct site site;
		struct night n;
		random_night(&r, &site, &n);
		/* a star near the Moon's path of that night, so that limits are crossed */
		struct vec3 moon = night_moon_topo_km(&n, rng_between(&r, 0.0, 1.0));
		double lon, lat;
		vec3_to_angles(mat3_apply_t(&n.of_date, moon), &lon, &lat);
		struct target t = target_empty();
		t.ra_deg = fmod(lon / DEG_RAD + rng_between(&r, -40.0, 40.0) + 360.0, 360.0);
		t.dec_deg = fmin(fmax(lat / DEG_RAD + rng_between(&r, -20.0, 20.0), -89.0), 89.0);
		if (i % 3 == 0) { /* within 10 deg, the Moon passing close by */
			t.ra_deg = fmod(lon / DEG_RAD + rng_between(&r, -10.0, 10.0) + 360.0, 360.0);
			t.dec_deg = fmin(fmax(lat / DEG_RAD + rng_between(&r, -10.0, 10.0), -89.0), 89.0);
		}
		struct star s = night_star(&n, &t);
		const double limits[] = {0.0, 5.0, MOON_ALWAYS_DEG, 30.0, rng_between(&r, 10.0, 60.0), 180.0};
		for (size_t k = 0; k < sizeof limits / sizeof *limits; k++) {
			struct intervals set = night_moon_clear(&n, &s, limits[k]);
			double length = intervals_length(&set);
			partly += length > 0.0 && length < n.length_d;
			if (limits[k] == 0.0)
				check_close("no rule at all", length, n.length_d, 1e-9);
			for (int g = 0; g <= GRID; g += 11) {
				double at = n.length_d * g / GRID, apart = night_moon_sep_deg(&n, &s, at);
				bool up = intervals_contain(&n.moon_up, at),
				     bright = night_moon_lit(&n, at) > 0.5;
				bool clear = limits[k] == 0.0 || !up ||
					     (apart >= MOON_ALWAYS_DEG && (!bright || apart >= limits[k]));
				/* not where something changes within 10 s */
				double edge =
				    fmin(fabs(apart - MOON_ALWAYS_DEG), fabs(apart - limits[k])) / 24.0;
				edge = fmin(edge, fabs(night_moon_lit(&n, at) - 0.5));
				for (int m = 0; m < n.moon_up.n; m++)
					edge = fmin(edge, fmin(fabs(at - n.moon_up.s[m].from_d),
							       fabs(at - n.moon_up.s[m].to_d)));
				if (edge > 1e-4 && intervals_contain(&set, at) != clear)
					check_fail(
					    "Moon limit %.2f at t = %.6f d: %.4f deg apart, up %d, bright %d",
					    limits[k], at, apart, up, bright);
			}
		}
	}
	assert_true(partly > 100);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(sun_below),
	    cmocka_unit_test(star_above),
	    cmocka_unit_test(moon_clear),
	};
	return cmocka_run_group_tests_name("night_sets", tests, NULL, NULL);
}
