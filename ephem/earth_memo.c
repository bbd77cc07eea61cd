/* SPDX-License-Identifier: MIT */
#include "ephem/earth_memo.h"

#include "ephem/series_nova.h"
#include "ephem/units.h"

#include <math.h>

/* Wide nodes, since dates may scatter over decades. What falls between them: the Earth's month (16 ms of
 * light) and what the inner planets do to the Sun (3 ms). */
#define EARTH_NODE_D 8.0
#define SUN_NODE_D 256.0
#define FIRST_JD 2305447.5 /* 1600-01-01 */
#define LAST_JD 2634167.5  /* 2500-01-01 */

static struct vec3 node_at(int32_t key[], struct vec3 au[], int32_t node, double node_d,
			   struct vec3 (*series)(double jd_tt))
{
	const int32_t cell = node % EARTH_MEMO_CELLS;
	if (key[cell] != node + 1) {
		au[cell] = series(node * node_d);
		key[cell] = node + 1;
	}
	return au[cell];
}

/* Lagrange's polynomial through the two nodes on each side. */
static struct vec3 between(int32_t key[], struct vec3 au[], double jd_tt, double node_d,
			   struct vec3 (*series)(double jd_tt))
{
	const double x = jd_tt / node_d, whole = floor(x), p = x - whole;
	const double weight[4] = {-p * (p - 1.0) * (p - 2.0) / 6.0, (p + 1.0) * (p - 1.0) * (p - 2.0) / 2.0,
				  -(p + 1.0) * p * (p - 2.0) / 2.0, (p + 1.0) * p * (p - 1.0) / 6.0};
	struct vec3 sum = {0.0, 0.0, 0.0};
	for (int i = 0; i < 4; i++)
		sum = vec3_add(
		    sum, vec3_scale(node_at(key, au, (int32_t)whole - 1 + i, node_d, series), weight[i]));
	return sum;
}

double earth_memo_light_time_s(struct earth_memo *memo, double jd_tt, struct vec3 n)
{
	if (!(jd_tt >= FIRST_JD && jd_tt <= LAST_JD))
		return (double)NAN;
	const struct vec3 earth =
	    between(memo->earth_key, memo->earth_au, jd_tt, EARTH_NODE_D, nova_earth_helio_au);
	const struct vec3 sun = between(memo->sun_key, memo->sun_au, jd_tt, SUN_NODE_D, nova_sun_bary_au);
	return vec3_dot(vec3_add(earth, sun), n) * AU_LIGHT_S;
}

struct utc earth_memo_utc(struct earth_memo *memo, const struct leap_table *leap, struct tdb bjd,
			  struct vec3 n)
{
	struct tt t = tdb_to_tt(bjd);
	for (int pass = 0; pass < 2; pass++) {
		const double light_s = earth_memo_light_time_s(memo, jd2_value(t.jd), n);
		t = tdb_to_tt((struct tdb){jd2_add_d(bjd.jd, isnan(light_s) ? 0.0 : -light_s / DAY_S)});
	}
	return tt_to_utc(leap, t);
}

struct tdb earth_memo_bjd(struct earth_memo *memo, const struct leap_table *leap, struct utc t, struct vec3 n)
{
	const struct tt tt = utc_to_tt(leap, t);
	const double light_s = earth_memo_light_time_s(memo, jd2_value(tt.jd), n);
	struct tdb bjd = tt_to_tdb(tt);
	bjd.jd = jd2_add_d(bjd.jd, isnan(light_s) ? 0.0 : light_s / DAY_S);
	return bjd;
}
