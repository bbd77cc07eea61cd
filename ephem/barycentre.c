/* SPDX-License-Identifier: MIT */
#include "ephem/barycentre.h"

#include "ephem/frame.h"
#include "ephem/series_nova.h"
#include "ephem/units.h"

#include <math.h>
#include <string.h>

/* --- the Sun's barycentric place --- */

#define NODE_D 8.0

void sun_memo_clear(struct sun_memo *memo)
{
	memset(memo, 0, sizeof *memo);
}

static int32_t cell_of(int32_t node)
{
	int32_t cell = node % SUN_MEMO_CELLS;
	return cell < 0 ? cell + SUN_MEMO_CELLS : cell;
}

static struct vec3 memo_node(struct sun_memo *memo, int32_t node)
{
	int32_t cell = cell_of(node);
	if (memo->key[cell] != node + 1) {
		memo->au[cell] = nova_sun_bary_au(node * NODE_D);
		memo->key[cell] = node + 1;
	}
	return memo->au[cell];
}

void sun_memo_earth_moon(struct sun_memo *memo, int32_t node, int n, struct vec3 earth_au[],
			 struct vec3 moon_km[])
{
	for (int i = 0; i < n; i++) {
		int32_t cell = cell_of(node + i);
		if (memo->half_day_key[cell] != node + i + 1) {
			memo->earth_au[cell] = nova_earth_helio_au((node + i) * 0.5);
			memo->moon_km[cell] = nova_moon_geo_km((node + i) * 0.5);
			memo->half_day_key[cell] = node + i + 1;
		}
		earth_au[i] = memo->earth_au[cell];
		moon_km[i] = memo->moon_km[cell];
	}
}

struct vec3 sun_memo_at(struct sun_memo *memo, double jd_tt)
{
	if (!(fabs(jd_tt) < 1e8)) /* NaN too: no node has such a number */
		return (struct vec3){(double)NAN, (double)NAN, (double)NAN};
	double x = jd_tt / NODE_D, whole = floor(x), part = x - whole;
	struct vec3 a = memo_node(memo, (int32_t)whole), b = memo_node(memo, (int32_t)whole + 1);
	return vec3_add(vec3_scale(a, 1.0 - part), vec3_scale(b, part));
}

/* --- light time --- */

static struct vec3 site_icrs_au(const struct observer *o, struct tt t)
{
	if (!o || !o->site)
		return (struct vec3){0.0, 0.0, 0.0};
	double equinoxes;
	struct mat3 of_date = frame_true_of_date(jd2_value(t.jd), &equinoxes);
	double gast = frame_gast_rad(o->clock, tt_to_utc(o->clock->leap, t), equinoxes);
	struct mat3 turn = mat3_rot_z(-gast);
	struct vec3 itrs = frame_site_itrs_m(o->site->lat_deg, o->site->lon_east_deg, o->site->height_m);
	return vec3_scale(mat3_apply_t(&of_date, mat3_apply(&turn, itrs)), 1.0 / AU_M);
}

double light_time_s(struct sun_memo *memo, const struct observer *o, struct tt t, struct vec3 n,
		    enum time_origin origin)
{
	if (origin == ORIGIN_OBSERVER)
		return 0.0;
	double jd = jd2_value(t.jd);
	struct vec3 r = vec3_add(nova_earth_helio_au(jd), site_icrs_au(o, t));
	if (origin == ORIGIN_BARYCENTRE)
		r = vec3_add(r, sun_memo_at(memo, jd));
	return vec3_dot(r, n) * AU_LIGHT_S;
}

/* --- time standards --- */

static struct tt clock_to_tt(const struct leap_table *leap, enum time_clock clock, struct jd2 jd)
{
	switch (clock) {
	case CLOCK_UTC:
		return utc_to_tt(leap, utc_from_jd(leap, jd));
	case CLOCK_TDB:
		return tdb_to_tt((struct tdb){jd});
	case CLOCK_TT:
		break;
	}
	return (struct tt){jd2_normal(jd.day, jd.frac)};
}

static struct jd2 clock_from_tt(const struct leap_table *leap, enum time_clock clock, struct tt t)
{
	switch (clock) {
	case CLOCK_UTC:
		return utc_to_jd(leap, tt_to_utc(leap, t));
	case CLOCK_TDB:
		return tt_to_tdb(t).jd;
	case CLOCK_TT:
		break;
	}
	return t.jd;
}

static enum status check_range(const struct standard *s, struct jd2 jd, struct err *e)
{
	const double first = 2415020.5, end = 2488434.5; /* 1900-01-01, 2101-01-01 */
	if (s->text_utc)
		return err_set(e, ST_RANGE, "a time on the scale UTC is text, not a number: use JD_UTC");
	double value = jd2_value(jd);
	if (!(value >= first && value <= end))
		return err_set(e, ST_RANGE,
			       "Julian date %.6f: must be from %.1f to %.1f (years 1900 to 2100)", value,
			       first, end);
	return ST_OK;
}

enum status standard_to_tt(struct sun_memo *memo, const struct observer *o, const struct standard *s,
			   struct jd2 value, struct vec3 n, struct tt *out, struct err *e)
{
	struct jd2 jd = jd2_add_d(value, s->offset_d);
	enum status status = check_range(s, jd, e);
	if (status != ST_OK)
		return status;
	struct tt arrival = clock_to_tt(o->clock->leap, s->clock, jd), t = arrival;
	for (int pass = 0; pass < 3 && s->origin != ORIGIN_OBSERVER; pass++)
		t.jd = jd2_add_d(arrival.jd, -light_time_s(memo, o, t, n, s->origin) / DAY_S);
	*out = t;
	return ST_OK;
}

enum status standard_from_tt(struct sun_memo *memo, const struct observer *o, const struct standard *s,
			     struct tt t, struct vec3 n, struct jd2 *value, struct err *e)
{
	enum status status = check_range(s, t.jd, e);
	if (status != ST_OK)
		return status;
	struct tt arrival = {jd2_add_d(t.jd, light_time_s(memo, o, t, n, s->origin) / DAY_S)};
	*value = jd2_add_d(clock_from_tt(o->clock->leap, s->clock, arrival), -s->offset_d);
	return ST_OK;
}

enum status standard_to_bjd_tdb(struct sun_memo *memo, const struct earth_clock *clock,
				const struct standard *s, struct jd2 value, struct vec3 n, struct tdb *out,
				struct err *e)
{
	struct jd2 jd = jd2_add_d(value, s->offset_d);
	enum status status = check_range(s, jd, e);
	if (status != ST_OK)
		return status;
	struct tt t = clock_to_tt(clock->leap, s->clock, jd);
	double more_s = 0.0;
	if (s->origin == ORIGIN_SUN) /* the Earth's place enters both times alike and cancels */
		more_s = vec3_dot(sun_memo_at(memo, jd2_value(t.jd)), n) * AU_LIGHT_S;
	else if (s->origin == ORIGIN_OBSERVER)
		more_s = light_time_s(memo, &(struct observer){.clock = clock}, t, n, ORIGIN_BARYCENTRE);
	*out = tt_to_tdb((struct tt){jd2_add_d(t.jd, more_s / DAY_S)});
	return ST_OK;
}
