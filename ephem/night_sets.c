/* SPDX-License-Identifier: MIT */
#include "ephem/night.h"

#include "ephem/crossings.h"
#include "ephem/limits.h"
#include "ephem/mask.h"
#include "ephem/units.h"

#include <math.h>

/* Sampling step where a curve may be near its limit. */
#define STEP_D (10.0 / DAY_MIN)

/* --- Sun --- */

struct altitude_context {
	const struct night *night;
	double limit_deg;
};

static double depth_below(const void *context, double t_d)
{
	const struct altitude_context *c = context;
	return c->limit_deg - night_sun_altaz(c->night, t_d).alt_deg;
}

struct intervals night_sun_below(const struct night *n, double limit_deg)
{
	struct altitude_context context = {.night = n, .limit_deg = limit_deg};
	/* turning sky plus a declination that moves 0.4 deg a day */
	struct curve c = {.at = depth_below, .context = &context, .rate_max = 361.0 * cos(n->lat_rad) + 1.0};
	return crossings_positive(&c, 0.0, n->length_d, STEP_D);
}

/* --- Moon --- */

static double upper_limb_above(const void *context, double t_d)
{
	const double refraction_deg_at_horizon = 34.0 / 60.0, moon_radius_km = 1737.4; /* IAU WGCCRE 2015 */
	const struct night *n = context;
	struct vec3 moon = night_moon_topo_km(n, t_d);
	struct horizon_frame h = night_horizon(n, t_d);
	double semidiameter_deg = asin(moon_radius_km / vec3_norm(moon)) / DEG_RAD;
	return horizon_altaz(&h, moon).alt_deg + semidiameter_deg + refraction_deg_at_horizon;
}

struct intervals night_moon_above_horizon(const struct night *n)
{
	/* turning sky, 16 deg a day of its own, 7 of parallax */
	struct curve c = {.at = upper_limb_above, .context = n, .rate_max = 361.0 * cos(n->lat_rad) + 23.0};
	return crossings_positive(&c, 0.0, n->length_d, STEP_D);
}

static double lit_above_half(const void *context, double t_d)
{
	return night_moon_lit(context, t_d) - 0.5;
}

struct intervals night_moon_half_lit(const struct night *n)
{
	/* at most half of the 16 deg a day of elongation, in radians */
	struct curve c = {.at = lit_above_half, .context = n, .rate_max = 0.15};
	return crossings_positive(&c, 0.0, n->length_d, STEP_D);
}

/* --- Moon and star --- */

/* Fastest topocentric Moon among the stars [deg/d]: 16 of its orbit at perigee, 7 of parallax. */
#define MOON_RATE_DEG_D 24.0

struct separation_context {
	const struct night *night;
	const struct star *star;
	double limit_deg;
};

static double nearer_than(const void *context, double t_d)
{
	const struct separation_context *c = context;
	return c->limit_deg - night_moon_sep_deg(c->night, c->star, t_d);
}

static struct intervals near_moon(const struct night *n, const struct star *s, double limit_deg)
{
	struct separation_context context = {.night = n, .star = s, .limit_deg = limit_deg};
	struct curve c = {.at = nearer_than, .context = &context, .rate_max = MOON_RATE_DEG_D};
	return crossings_positive(&c, 0.0, n->length_d, STEP_D);
}

struct intervals night_moon_clear(const struct night *n, const struct star *s, double limit_deg)
{
	struct intervals all = intervals_one(0.0, n->length_d);
	if (limit_deg <= 0.0 || n->moon_up.n == 0)
		return all;
	double most = fmax(limit_deg, MOON_ALWAYS_DEG), middle_d = 0.5 * n->length_d;
	if (night_moon_sep_deg(n, s, middle_d) > most + MOON_RATE_DEG_D * middle_d)
		return all;
	struct intervals too_near = near_moon(n, s, MOON_ALWAYS_DEG);
	if (limit_deg > MOON_ALWAYS_DEG && n->moon_bright.n > 0) {
		struct intervals near = near_moon(n, s, limit_deg);
		struct intervals near_bright = intervals_and(&near, &n->moon_bright);
		too_near = intervals_or(&too_near, &near_bright);
	}
	too_near = intervals_and(&too_near, &n->moon_up);
	return intervals_outside(&too_near, 0.0, n->length_d);
}

/* --- star --- */

double night_star_transit_d(const struct night *n, const struct star *s, double from_d)
{
	double ra_rad, dec_rad;
	vec3_to_angles(s->apparent, &ra_rad, &dec_rad);
	const double turn_d = TWO_PI / n->lst_rate_rad_d;
	const double first_d = fmod(ra_rad - n->lst0_rad + 2.0 * TWO_PI, TWO_PI) / n->lst_rate_rad_d;
	return first_d + turn_d * ceil((from_d - first_d) / turn_d);
}

struct intervals night_star_above(const struct night *n, const struct star *s, double alt_deg)
{
	double ra, dec;
	vec3_to_angles(s->apparent, &ra, &dec);
	double sin_limit = sin(alt_deg * DEG_RAD);
	double middle = sin(n->lat_rad) * sin(dec), swing = cos(n->lat_rad) * cos(dec);
	/* sin(alt) = middle + swing cos(hour angle) */
	if (middle - swing >= sin_limit)
		return intervals_one(0.0, n->length_d);
	if (!(middle + swing > sin_limit))
		return intervals_none();
	double reach = acos((sin_limit - middle) / swing) / n->lst_rate_rad_d;
	double turn_d = TWO_PI / n->lst_rate_rad_d;
	double transit_d = (ra - n->lst0_rad) / n->lst_rate_rad_d;
	struct intervals set = intervals_none();
	for (double k = ceil((-reach - transit_d) / turn_d); transit_d + k * turn_d - reach < n->length_d;
	     k += 1.0) {
		double at = transit_d + k * turn_d;
		intervals_append(&set, fmax(at - reach, 0.0), fmin(at + reach, n->length_d));
	}
	return set;
}

/* --- horizon mask --- */

#define MASK_STEP_D (2.0 / DAY_MIN)
#define MASK_AIR_C 10.0 /* refraction at the mask changes by 4 % for 10 C: arcseconds above a few degrees */

struct mask_context {
	const struct night *night;
	const struct star *star;
	double pressure_hpa;
};

static double above_mask(const void *context, double t_d)
{
	const struct mask_context *c = context;
	struct altaz at = night_star_altaz(c->night, c->star, t_d);
	return at.alt_deg + refraction_deg(at.alt_deg, c->pressure_hpa, MASK_AIR_C) -
	       mask_at(c->night->site->mask, at.az_north_deg);
}

struct intervals night_star_above_mask(const struct night *n, const struct star *s)
{
	if (!n->site->mask || n->site->mask->n == 0)
		return intervals_one(0.0, n->length_d);
	struct mask_context context = {.night = n, .star = s, .pressure_hpa = pressure_hpa(n->site->height_m)};
	/* no slope bound: azimuth turns without limit near the zenith */
	struct curve c = {.at = above_mask, .context = &context, .rate_max = 0.0};
	return crossings_positive(&c, 0.0, n->length_d, MASK_STEP_D);
}
