/* SPDX-License-Identifier: MIT */
#include "ephem/night.h"

#include "ephem/frame.h"
#include "ephem/units.h"

#include <math.h>

#define EARTH_RAD_S 7.292115e-5 /* angular velocity of the Earth, IERS Conventions 2010 table 1.2 */

static const struct vec3 no_vector = {(double)NAN, (double)NAN, (double)NAN};

/* --- time --- */

struct utc night_utc(const struct night *n, double t_d)
{
	return tt_to_utc(n->clock.leap, night_tt(n, t_d));
}

struct tt night_tt(const struct night *n, double t_d)
{
	return (struct tt){jd2_add_d(n->noon_tt.jd, t_d)};
}

double night_of_utc(const struct night *n, struct utc t)
{
	return utc_diff_s(n->clock.leap, n->noon_utc, t) / DAY_S;
}

double night_lst_rad(const struct night *n, double t_d)
{
	double turns = (n->lst0_rad + n->lst_rate_rad_d * t_d) / TWO_PI;
	double part = turns - floor(turns);
	return part < 1.0 ? part * TWO_PI : 0.0;
}

struct horizon_frame night_horizon(const struct night *n, double t_d)
{
	return horizon_at(n->lat_rad, night_lst_rad(n, t_d));
}

/* --- the site as a moving point --- */

/* From the Earth's centre, true of date [m]. */
static struct vec3 site_of_date_m(const struct night *n, double lst_rad)
{
	double gast = lst_rad - n->lon_rad, c = cos(gast), s = sin(gast);
	struct vec3 r = n->site_itrs_m;
	return (struct vec3){c * r.x - s * r.y, s * r.x + c * r.y, r.z};
}

/* Velocity of the site in its turn with the Earth, units of c, true of date: towards east, 0.32 arcsec of
 * aberration at the equator. */
static struct vec3 site_velocity_c(const struct night *n, double lst_rad)
{
	double speed = EARTH_RAD_S * hypot(n->site_itrs_m.x, n->site_itrs_m.y) / LIGHT_M_S;
	return (struct vec3){-speed * sin(lst_rad), speed * cos(lst_rad), 0.0};
}

/* --- Sun and Moon --- */

struct vec3 night_sun_topo_au(const struct night *n, double t_d)
{
	if (!night_covers(t_d))
		return no_vector;
	double lst = night_lst_rad(n, t_d);
	struct vec3 s = vec3_scale(cheb3_at(&n->earth_helio_au, t_d), -1.0);
	/* the Sun's own motion during the light time is below 0.0001 arcsec */
	struct vec3 v = vec3_scale(cheb3_rate(&n->earth_bary_au, t_d), AU_LIGHT_S / DAY_S);
	double r = vec3_norm(s);
	struct vec3 seen = vec3_scale(frame_aberrate(vec3_scale(s, 1.0 / r), v), r);
	struct vec3 topo =
	    vec3_sub(mat3_apply(&n->of_date, seen), vec3_scale(site_of_date_m(n, lst), 1.0 / AU_M));
	return vec3_add(topo, vec3_scale(site_velocity_c(n, lst), r));
}

struct vec3 night_moon_topo_km(const struct night *n, double t_d)
{
	if (!night_covers(t_d))
		return no_vector;
	double lst = night_lst_rad(n, t_d);
	struct vec3 moon = mat3_apply(&n->of_date, cheb3_at(&n->moon_geo_km, t_d));
	struct vec3 topo = vec3_sub(moon, vec3_scale(site_of_date_m(n, lst), 1e-3));
	return vec3_add(topo, vec3_scale(site_velocity_c(n, lst), vec3_norm(topo)));
}

struct altaz night_sun_altaz(const struct night *n, double t_d)
{
	struct horizon_frame h = night_horizon(n, t_d);
	return horizon_altaz(&h, night_sun_topo_au(n, t_d));
}

struct altaz night_moon_altaz(const struct night *n, double t_d)
{
	struct horizon_frame h = night_horizon(n, t_d);
	return horizon_altaz(&h, night_moon_topo_km(n, t_d));
}

double night_moon_lit(const struct night *n, double t_d)
{
	if (!night_covers(t_d))
		return (double)NAN;
	struct vec3 moon = cheb3_at(&n->moon_geo_km, t_d);
	struct vec3 sun = vec3_scale(cheb3_at(&n->earth_helio_au, t_d), -AU_M / 1000.0);
	/* (1 + cos i) / 2, i the angle Sun-Moon-Earth */
	struct vec3 to_sun = vec3_unit(vec3_sub(sun, moon)), to_earth = vec3_unit(vec3_scale(moon, -1.0));
	return 0.5 * (1.0 + vec3_dot(to_sun, to_earth));
}

/* --- a star --- */

struct star night_star(const struct night *n, const struct target *t)
{
	struct star s = {.icrs = frame_catalogue_direction(t, n->julian_year)};
	double parallax_rad = isfinite(t->plx_mas) && t->plx_mas > 0.0 ? t->plx_mas * 1e-3 * ARCSEC_RAD : 0.0;
	struct vec3 seen = vec3_sub(s.icrs, vec3_scale(cheb3_at(&n->earth_bary_au, 0.5), parallax_rad));
	s.apparent = mat3_apply(&n->of_date, frame_aberrate(vec3_unit(seen), n->velocity_c));
	return s;
}

static struct vec3 star_from_site(const struct night *n, const struct star *s, double lst_rad)
{
	return vec3_add(s->apparent, site_velocity_c(n, lst_rad));
}

struct altaz night_star_altaz(const struct night *n, const struct star *s, double t_d)
{
	if (!night_covers(t_d))
		return (struct altaz){.alt_deg = (double)NAN, .az_north_deg = (double)NAN};
	double lst = night_lst_rad(n, t_d);
	struct horizon_frame h = horizon_at(n->lat_rad, lst);
	return horizon_altaz(&h, star_from_site(n, s, lst));
}

double night_moon_sep_deg(const struct night *n, const struct star *s, double t_d)
{
	return vec3_angle_rad(night_moon_topo_km(n, t_d), star_from_site(n, s, night_lst_rad(n, t_d))) /
	       DEG_RAD;
}

double night_sun_sep_deg(const struct night *n, const struct star *s, double t_d)
{
	return vec3_angle_rad(night_sun_topo_au(n, t_d), star_from_site(n, s, night_lst_rad(n, t_d))) /
	       DEG_RAD;
}

/* --- light time --- */

/* Without the guard: the Earth's polynomial runs on smoothly, so that contacts of an event longer than the night keep their second
 * (0.01 s at LIGHT_REACH_D beyond the fits). */
#define LIGHT_REACH_D 2.0

static double light_time(const struct night *n, const struct star *s, double t_d, enum time_origin origin)
{
	const struct cheb3 *earth = origin == ORIGIN_SUN ? &n->earth_helio_au : &n->earth_bary_au;
	double centre_s = vec3_dot(cheb3_at(earth, t_d), s->icrs) * AU_LIGHT_S;
	/* site and direction both true of date; the 20 arcsec of aberration in the direction are 2 us here */
	double site_s = vec3_dot(site_of_date_m(n, night_lst_rad(n, t_d)), s->apparent) / LIGHT_M_S;
	return centre_s + site_s;
}

double night_light_time_s(const struct night *n, const struct star *s, double t_d, enum time_origin origin)
{
	if (origin == ORIGIN_OBSERVER)
		return 0.0;
	return night_covers(t_d) ? light_time(n, s, t_d, origin) : (double)NAN;
}

struct tdb night_bjd_tdb(const struct night *n, const struct star *s, double t_d)
{
	double light_s = night_light_time_s(n, s, t_d, ORIGIN_BARYCENTRE);
	return (struct tdb){jd2_add_d(jd2_add_d(n->noon_tt.jd, t_d), (n->tdb_minus_tt_s + light_s) / DAY_S)};
}

double night_of_bjd(const struct night *n, const struct star *s, struct tdb bjd)
{
	double arrival_d = jd2_diff_d(bjd.jd, n->noon_tt.jd) - n->tdb_minus_tt_s / DAY_S, t_d = arrival_d;
	if (isnan(arrival_d))
		return arrival_d;
	for (int pass = 0; pass < 3; pass++) {
		double inside = fmin(fmax(t_d, -0.5 - LIGHT_REACH_D), 1.5 + LIGHT_REACH_D);
		t_d = arrival_d - light_time(n, s, inside, ORIGIN_BARYCENTRE) / DAY_S;
	}
	return t_d;
}
