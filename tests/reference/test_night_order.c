/* SPDX-License-Identifier: MIT
 * What a night holds depends on its date and site only: the same bits in whatever order nights are built,
 * with an empty or a full memo, and whatever libnova was asked before (its nutation answers for any date
 * within 0.1 d of the last one). This is the one test that includes libnova itself: what is tried is whether
 * calls that others make to that library change the engine's answers, and such a call can only be made
 * directly. */
#include "ephem/night.h"
#include "ephem/series_nova.h"

#include "tests/support/check.h"

#include <libnova/libnova.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

/* FNV-1a over the values, not over the padding between them. */
struct digest {
	uint64_t sum;
};

static void add(struct digest *d, const void *bytes, size_t n)
{
	const unsigned char *b = bytes;
	for (size_t i = 0; i < n; i++)
		d->sum = (d->sum ^ b[i]) * 0x100000001b3u;
}

static void add_set(struct digest *d, const struct intervals *set)
{
	add(d, &set->n, sizeof set->n);
	add(d, set->s, (size_t)set->n * sizeof set->s[0]);
}

static uint64_t digest_of(const struct night *n)
{
	struct digest d = {0xcbf29ce484222325u};
	const double one[] = {n->length_d,	 n->lat_rad,	     n->lon_rad,	n->julian_year,
			      n->lst0_rad,	 n->lst_rate_rad_d,  n->tdb_minus_tt_s, n->moon_lit_mid,
			      n->noon_tt.jd.day, n->noon_tt.jd.frac, n->noon_utc.sod_s, n->velocity_c.x,
			      n->velocity_c.y,	 n->velocity_c.z,    n->site_itrs_m.x,	n->site_itrs_m.y,
			      n->site_itrs_m.z};
	add(&d, one, sizeof one);
	add(&d, n->of_date.m, sizeof n->of_date.m);
	add(&d, n->earth_bary_au.c, sizeof n->earth_bary_au.c);
	add(&d, n->earth_helio_au.c, sizeof n->earth_helio_au.c);
	add(&d, n->moon_geo_km.c, sizeof n->moon_geo_km.c);
	add(&d, &n->times, sizeof n->times);
	add_set(&d, &n->sun_up);
	add_set(&d, &n->moon_up);
	add_set(&d, &n->moon_bright);
	struct target t = target_empty();
	t.ra_deg = 123.4;
	t.dec_deg = -21.0;
	t.pm_ra_masyr = 100.0;
	t.plx_mas = 10.0;
	struct star s = night_star(n, &t);
	add(&d, &s, sizeof s);
	struct intervals set = night_moon_clear(n, &s, 40.0);
	add_set(&d, &set);
	set = night_star_above(n, &s, 30.0);
	add_set(&d, &set);
	return d.sum;
}

enum { COUNT = 60 };
static struct sun_memo memo;

static uint64_t build(int i, const struct site *site)
{
	const struct earth_clock clock = {.leap = &leap_builtin, .ut1_utc_s = 0.1};
	static struct night n;
	memset(&n, 0xA5, sizeof n);
	struct err e;
	if (night_build(&n, site, &clock, 61100 + i, &memo, &e) != ST_OK)
		check_fail("%s", e.text);
	return digest_of(&n);
}

static void any_order(void **state)
{
	(void)state;
	const struct site site = {.lat_deg = 41.0, .lon_east_deg = 12.0, .height_m = 800.0};
	/* the same noon, 0.03 d apart: a cache that answers for both would show */
	const struct site near = {.lat_deg = 41.0, .lon_east_deg = 2.0, .height_m = 800.0};
	uint64_t want[COUNT];
	for (int i = 0; i < COUNT; i++) {
		sun_memo_clear(&memo); /* each night alone */
		want[i] = build(i, &site);
		for (int k = 0; k < i; k++)
			assert_true(want[k] != want[i]);
	}
	struct rng r = rng_open("orders");
	for (int order = 0; order < 4; order++) {
		sun_memo_clear(&memo);
		for (int i = 0; i < COUNT; i++) {
			int night = order == 0	 ? i
				    : order == 1 ? COUNT - 1 - i
						 : (int)rng_between(&r, 0.0, COUNT);
			if (order == 3) {
				(void)build(night, &near);
				struct ln_nutation cached;
				struct ln_rect_posn p;
				ln_get_nutation(2400000.5 + 61100.5 + night, &cached);
				ln_get_lunar_geo_posn(2461101.0 + night, &p, 1e-4);
			}
			if (build(night, &site) != want[night])
				check_fail("night %d differs in order %d", night, order);
		}
	}
}

/* Nodes that share a cell of the memo (2048 nodes apart) push each other out, nothing else. */
static void memo_cells_shared(void **state)
{
	(void)state;
	sun_memo_clear(&memo);
	for (int i = 0; i < 20; i++) {
		double jd = 2451545.0 + 8.0 * 2048.0 * (i % 2) + 3.0 * i;
		struct vec3 got = sun_memo_at(&memo, jd);
		double node = 8.0 * (double)(int)(jd / 8.0), part = (jd - node) / 8.0;
		struct vec3 want = vec3_add(vec3_scale(nova_sun_bary_au(node), 1.0 - part),
					    vec3_scale(nova_sun_bary_au(node + 8.0), part));
		check_close("Sun", vec3_norm(vec3_sub(got, want)), 0.0, 1e-17);
	}
	for (int i = 0; i < 20; i++) {
		struct vec3 earth[3], moon[3];
		int32_t node = 4903090 + 2048 * (i % 2) + i;
		sun_memo_earth_moon(&memo, node, 3, earth, moon);
		for (int k = 0; k < 3; k++) {
			check_close("Earth",
				    vec3_norm(vec3_sub(earth[k], nova_earth_helio_au((node + k) * 0.5))), 0.0,
				    0.0);
			check_close("Moon", vec3_norm(vec3_sub(moon[k], nova_moon_geo_km((node + k) * 0.5))),
				    0.0, 0.0);
		}
	}
	struct vec3 none = sun_memo_at(&memo, (double)NAN);
	assert_true(none.x != none.x);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(any_order),
	    cmocka_unit_test(memo_cells_shared),
	};
	return cmocka_run_group_tests_name("night_order", tests, NULL, NULL);
}
