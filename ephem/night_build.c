/* SPDX-License-Identifier: MIT */
#include "ephem/night.h"

#include "ephem/frame.h"
#include "ephem/units.h"

#include <math.h>

/* Fits reach half a day beyond both noons. They are made from the memo's half-day values (RUN of them, two to
 * spare at each end); 5e-5 arcsec for the Moon, 3 ns of light time for the Earth (measured against the series
 * themselves). */
#define FIT_FROM_D (-0.5)
#define FIT_TO_D 1.5
enum { MOON_TERMS = 9, EARTH_TERMS = 7, RUN = 10 };

/* Earth's turning in one SI day [rad]: Aoki et al. 1982, A&A 105, 359, eq. 14. */
#define TURN_RAD_D (360.98564736629 * DEG_RAD)

bool night_covers(double t_d)
{
	return t_d >= FIT_FROM_D && t_d <= FIT_TO_D;
}

/* --- which night --- */

static struct utc noon_of(double lon_east_deg, int32_t mjd)
{
	double sod = (0.5 - lon_east_deg / 360.0) * DAY_S;
	if (sod < 0.0)
		sod = 0.0;
	if (sod >= DAY_S) /* 180 W: local noon is the next midnight in UTC */
		return (struct utc){.mjd = mjd + 1, .sod_s = sod - DAY_S};
	return (struct utc){.mjd = mjd, .sod_s = sod};
}

static bool before(struct utc a, struct utc b)
{
	return a.mjd < b.mjd || (a.mjd == b.mjd && a.sod_s < b.sod_s);
}

int32_t night_date_of(double lon_east_deg, struct utc t)
{
	int32_t mjd = t.mjd - 2;
	while (!before(t, noon_of(lon_east_deg, mjd + 1)))
		mjd++;
	return mjd;
}

/* --- fits --- */

struct run {
	double first_jd; /* a multiple of 0.5 */
	struct vec3 earth_au[RUN], moon_km[RUN];
};

/* Polynomial through the run (Lagrange, equal steps; Meeus 1998, Astronomical Algorithms, chapter 3). */
static struct vec3 run_at(const struct run *r, const struct vec3 value[RUN], struct jd2 jd)
{
	double x = 2.0 * (jd.day - r->first_jd + jd.frac);
	struct vec3 sum = {0.0, 0.0, 0.0};
	for (int i = 0; i < RUN; i++) {
		double weight = 1.0;
		for (int j = 0; j < RUN; j++)
			if (j != i)
				weight *= (x - j) / (i - j);
		sum = vec3_add(sum, vec3_scale(value[i], weight));
	}
	return sum;
}

static void fit_series(struct night *n, struct sun_memo *memo)
{
	const double km_s = LIGHT_M_S / 1000.0;
	struct run r;
	int32_t node = (int32_t)floor(2.0 * (jd2_value(n->noon_tt.jd) + FIT_FROM_D)) - 2;
	r.first_jd = 0.5 * node;
	sun_memo_earth_moon(memo, node, RUN, r.earth_au, r.moon_km);

	struct vec3 helio[EARTH_TERMS], bary[EARTH_TERMS], moon[MOON_TERMS];
	for (int k = 0; k < EARTH_TERMS; k++) {
		struct jd2 jd = jd2_add_d(n->noon_tt.jd, cheb3_node(EARTH_TERMS, FIT_FROM_D, FIT_TO_D, k));
		helio[k] = run_at(&r, r.earth_au, jd);
		bary[k] = vec3_add(helio[k], sun_memo_at(memo, jd2_value(jd)));
	}
	for (int k = 0; k < MOON_TERMS; k++) {
		struct jd2 jd = jd2_add_d(n->noon_tt.jd, cheb3_node(MOON_TERMS, FIT_FROM_D, FIT_TO_D, k));
		double light_s = vec3_norm(run_at(&r, r.moon_km, jd)) / km_s;
		moon[k] = run_at(&r, r.moon_km, jd2_add_d(jd, -light_s / DAY_S));
	}
	cheb3_fit(&n->earth_helio_au, EARTH_TERMS, FIT_FROM_D, FIT_TO_D, helio);
	cheb3_fit(&n->earth_bary_au, EARTH_TERMS, FIT_FROM_D, FIT_TO_D, bary);
	cheb3_fit(&n->moon_geo_km, MOON_TERMS, FIT_FROM_D, FIT_TO_D, moon);
}

static void freeze_frame(struct night *n)
{
	const double middle_d = 0.5;
	double jd = jd2_value(jd2_add_d(n->noon_tt.jd, middle_d)), equinoxes;
	n->of_date = frame_true_of_date(jd, &equinoxes);
	n->julian_year = 2000.0 + (jd - J2000_JD) / YEAR_D;
	n->tdb_minus_tt_s = tdb_minus_tt_s(jd);
	n->lst0_rad = fmod(frame_gast_rad(&n->clock, n->noon_utc, equinoxes) + n->lon_rad + TWO_PI, TWO_PI);
	n->lst_rate_rad_d = TURN_RAD_D;
	n->velocity_c = vec3_scale(cheb3_rate(&n->earth_bary_au, middle_d), AU_LIGHT_S / DAY_S);
}

/* --- times --- */

/* First passage into the set and last out of it, in the open night; NAN when there is none. */
static void first_in_last_out(const struct intervals *set, double length_d, double *in_d, double *out_d)
{
	*in_d = *out_d = (double)NAN;
	for (int i = 0; i < set->n; i++) {
		if (isnan(*in_d) && set->s[i].from_d > 0.0)
			*in_d = set->s[i].from_d;
		if (set->s[i].to_d < length_d)
			*out_d = set->s[i].to_d;
	}
}

struct night_dark night_dark(const struct night *n, double sun_limit_deg)
{
	struct intervals below = night_sun_below(n, sun_limit_deg);
	struct night_dark d;
	first_in_last_out(&below, n->length_d, &d.dusk_d, &d.dawn_d);
	d.usable_h = intervals_length(&below) * 24.0;
	return d;
}

static void find_times(struct night *n)
{
	/* 16' semidiameter and 34' refraction: the convention of almanacs (Explanatory Supplement 2013, 12.1;
	 * from memory) */
	const double rise_set_deg = -50.0 / 60.0;
	struct night_times *t = &n->times;
	struct night_dark d = night_dark(n, -6.0);
	t->civil_dusk_d = d.dusk_d;
	t->civil_dawn_d = d.dawn_d;
	d = night_dark(n, -12.0);
	t->nautical_dusk_d = d.dusk_d;
	t->nautical_dawn_d = d.dawn_d;
	d = night_dark(n, -18.0);
	t->astronomical_dusk_d = d.dusk_d;
	t->astronomical_dawn_d = d.dawn_d;

	struct intervals down = night_sun_below(n, rise_set_deg);
	first_in_last_out(&down, n->length_d, &t->sunset_d, &t->sunrise_d);
	n->sun_up = intervals_outside(&down, 0.0, n->length_d);

	t->moonrise_d = t->moonset_d = (double)NAN;
	for (int i = n->moon_up.n - 1; i >= 0; i--) { /* backwards: the first of each is kept */
		if (n->moon_up.s[i].from_d > 0.0)
			t->moonrise_d = n->moon_up.s[i].from_d;
		if (n->moon_up.s[i].to_d < n->length_d)
			t->moonset_d = n->moon_up.s[i].to_d;
	}
}

static enum status check(const struct site *site, int32_t mjd, struct err *e)
{
	const int32_t first = 15020, last = 88433; /* 1900-01-01 .. 2100-12-31 */
	if (!(fabs(site->lat_deg) <= 90.0))
		return err_set(e, ST_RANGE, "latitude %g deg: must be from -90 to 90", site->lat_deg);
	if (!(fabs(site->lon_east_deg) <= 180.0))
		return err_set(e, ST_RANGE, "longitude %g deg east: must be from -180 to 180",
			       site->lon_east_deg);
	if (!(site->height_m >= -450.0 && site->height_m <= 9000.0))
		return err_set(e, ST_RANGE, "height %g m: must be from -450 to 9000", site->height_m);
	if (mjd < first || mjd > last)
		return err_set(e, ST_RANGE, "night of year %d: must be from 1900 to 2100",
			       date_from_mjd(mjd).year);
	return ST_OK;
}

enum status night_build(struct night *n, const struct site *site, const struct earth_clock *clock,
			int32_t evening_mjd, struct sun_memo *memo, struct err *e)
{
	enum status s = check(site, evening_mjd, e);
	if (s != ST_OK)
		return s;
	*n = (struct night){.site = site, .clock = *clock, .mjd = evening_mjd};
	n->lat_rad = site->lat_deg * DEG_RAD;
	n->lon_rad = site->lon_east_deg * DEG_RAD;
	n->noon_utc = noon_of(site->lon_east_deg, evening_mjd);
	n->noon_tt = utc_to_tt(clock->leap, n->noon_utc);
	n->length_d =
	    utc_diff_s(clock->leap, n->noon_utc, noon_of(site->lon_east_deg, evening_mjd + 1)) / DAY_S;
	n->site_itrs_m = frame_site_itrs_m(site->lat_deg, site->lon_east_deg, site->height_m);
	fit_series(n, memo);
	freeze_frame(n);
	n->moon_lit_mid = night_moon_lit(n, 0.5 * n->length_d);
	n->moon_up = night_moon_above_horizon(n);
	n->moon_bright = night_moon_half_lit(n);
	find_times(n);
	night_light_fit(n);
	return ST_OK;
}

void night_set_sidereal(struct night *n, struct utc t)
{
	double equinoxes;
	frame_true_of_date(jd2_value(jd2_add_d(n->noon_tt.jd, 0.5)), &equinoxes);
	double lst = frame_gast_rad(&n->clock, t, equinoxes) + n->lon_rad - n->lst_rate_rad_d * night_of_utc(n, t);
	n->lst0_rad = lst - TWO_PI * floor(lst / TWO_PI);
}
