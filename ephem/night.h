/* SPDX-License-Identifier: MIT
 * The tables of one site and one night: everything about Sun, Moon, Earth and frame that a loop over targets needs, fitted once.
 * Times t_d are elapsed SI days since the night's noon (local mean noon of the evening's date, from the longitude).
 * Builder budgets (2000..2050, |lat| <= 75): star altitude and azimuth times cos(alt) 1 arcsec, Sun 1, Moon 2, Moon-star
 * separation 2, BJD 1 ms, rise, set and twilight 1 s. */
#ifndef WANE_EPHEM_NIGHT_H
#define WANE_EPHEM_NIGHT_H

#include "ephem/barycentre.h"
#include "ephem/chebyshev.h"
#include "ephem/intervals.h"
#include "ephem/model.h"
#include "ephem/observing.h"
#include "ephem/sky.h"
#include "ephem/timescale.h"
#include "ephem/vec3.h"

/* Times of a night [d]; NAN: does not happen between noon and noon. Sunset, sunrise: Sun's centre at -50' (16' semidiameter, 34'
 * refraction), Moon: upper limb at -34', true semidiameter; sea-level horizon; the first such event after noon (sunrise: last).
 * Twilights: the topocentric airless altitude of the Sun's centre at -6, -12, -18 deg. */
struct night_times {
	double sunset_d, civil_dusk_d, nautical_dusk_d, astronomical_dusk_d;
	double astronomical_dawn_d, nautical_dawn_d, civil_dawn_d, sunrise_d;
	double moonrise_d, moonset_d;
};

/* The figures that depend on the run's own Sun limit. */
struct night_dark {
	double dusk_d, dawn_d; /* first and last passage through the limit; NAN when there is none */
	double usable_h;       /* hours with the Sun below the limit; 0 when never, the whole night when always */
};

/* Sun and Moon at a moment, as far as the brightness of the sky needs them. */
struct night_light {
	double sun_alt_deg, moon_alt_deg; /* airless, of the centres */
	double moon_phase_deg;		  /* angle Sun-Moon-Earth: 0 full, 180 new */
	struct vec3 moon;		  /* direction from the site, true of date; length 1 within 1e-3 */
};
enum { NIGHT_LIGHTS = 121 };

struct night {
	const struct site *site;
	const struct telescope *telescope; /* that it is planned for; borrowed; NULL none. night_build leaves it so; its mount limits what windows can use */
	const struct observing *observing; /* what windows forecast with, ready; borrowed; NULL: no forecast. night_build leaves it so */
	struct earth_clock clock;
	int32_t mjd;          /* date of the evening */
	struct tt noon_tt;
	struct utc noon_utc;
	double length_d;      /* to the next noon: 1, or 1 + 1/86400 */
	double lat_rad, lon_rad;
	struct mat3 of_date;  /* ICRS to true of date, frozen at the night's middle */
	struct vec3 velocity_c; /* Earth's barycentric velocity then, units of c, ICRS */
	double julian_year;   /* of the night's middle: for proper motion */
	double lst0_rad, lst_rate_rad_d; /* local apparent sidereal time at t = 0; per SI day */
	struct vec3 site_itrs_m;
	struct cheb3 earth_bary_au; /* ICRS, barycentric, argument t_d */
	struct cheb3 earth_helio_au;
	struct cheb3 moon_geo_km;   /* ICRS, light time taken off */
	double tdb_minus_tt_s;      /* at the middle */
	struct night_times times;
	double moon_lit_mid;        /* lit share at the night's middle, geocentric */
	struct intervals sun_up;    /* Sun's upper limb above the horizon, in [0, length] */
	struct intervals moon_up;   /* between rise and set, in [0, length] */
	struct intervals moon_bright; /* more than half lit */
	struct night_light light[NIGHT_LIGHTS]; /* evenly over [0, length] */
};

/* Builds one night. memo: shared by all nights of a run. Not thread-safe (libnova). site is borrowed for the night's life.
 * ST_RANGE: latitude, longitude or date out of range (mjd of years 1900..2100). */
MUST_USE enum status night_build(struct night *n, const struct site *site, const struct earth_clock *clock, int32_t evening_mjd,
				 struct sun_memo *memo, struct err *e);
/* The evening date of the night that contains an instant at a longitude. */
int32_t night_date_of(double lon_east_deg, struct utc t);

/* --- time --- */
struct utc night_utc(const struct night *n, double t_d);
struct tt night_tt(const struct night *n, double t_d);
double night_of_utc(const struct night *n, struct utc t); /* t_d of an instant */
bool night_covers(double t_d);                            /* the fits hold: -0.5 <= t_d <= 1.5 */

/* Sidereal time as it runs when clock.ut1_utc_s holds at this instant. A night's tables take it at the evening's noon, and run on evenly over
 * a leap second, as the Earth does; a value published for an instant after the leap second needs this. */
void night_set_sidereal(struct night *n, struct utc t);

/* --- sky at t (NAN where the fits do not hold) --- */
double night_lst_rad(const struct night *n, double t_d);
struct horizon_frame night_horizon(const struct night *n, double t_d);
struct vec3 night_sun_topo_au(const struct night *n, double t_d);  /* apparent, true of date, from the site */
struct vec3 night_moon_topo_km(const struct night *n, double t_d); /* true of date, from the site */
struct altaz night_sun_altaz(const struct night *n, double t_d);
struct altaz night_moon_altaz(const struct night *n, double t_d);
double night_moon_lit(const struct night *n, double t_d); /* geocentric lit share 0..1 */
/* From the table, linear between its rows: altitudes and place within 0.04 deg. Outside [0, length] computed. */
struct night_light night_light_at(const struct night *n, double t_d);
void night_light_fit(struct night *n); /* night_build does it */
/* When the Sun's centre is below limit_deg, as a set in [0, length]. Crossings to 0.01 s or, where grazing, 0.1 arcsec. */
struct intervals night_sun_below(const struct night *n, double limit_deg);
struct night_dark night_dark(const struct night *n, double sun_limit_deg);
/* Moon's upper limb above the sea-level horizon, and Moon more than half lit, as sets in [0, length] (kept in moon_up, moon_bright). */
struct intervals night_moon_above_horizon(const struct night *n);
struct intervals night_moon_half_lit(const struct night *n);

/* --- a star on this night --- */
struct star {
	struct vec3 icrs;     /* catalogue direction of the night, parallax left out: for light time */
	struct vec3 apparent; /* true of date, aberrated, parallax in; diurnal aberration included to first order */
};
struct star night_star(const struct night *n, const struct target *t);
struct altaz night_star_altaz(const struct night *n, const struct star *s, double t_d);
double night_moon_sep_deg(const struct night *n, const struct star *s, double t_d); /* topocentric */
double night_sun_sep_deg(const struct night *n, const struct star *s, double t_d);
/* The star's first upper transit of the meridian at or after from_d; within 0.02 s / cos(dec). */
double night_star_transit_d(const struct night *n, const struct star *s, double from_d);
/* When the star's airless altitude is above a limit, in [0, length]: closed form in hour angle. */
struct intervals night_star_above(const struct night *n, const struct star *s, double alt_deg);
/* When the star's apparent altitude is above the site's horizon mask, in [0, length]; all of it without a mask. Edges to 4 ms; gaps in
 * the mask that the star crosses in under 2 min may be missed. */
struct intervals night_star_above_mask(const struct night *n, const struct star *s);
/* When the Moon lets the star be observed: 10 deg away always when up, limit_deg when up and more than half lit; limit 0: always. */
struct intervals night_moon_clear(const struct night *n, const struct star *s, double limit_deg);

/* --- light time: BJD_TDB at the site --- */
double night_light_time_s(const struct night *n, const struct star *s, double t_d, enum time_origin origin);
struct tdb night_bjd_tdb(const struct night *n, const struct star *s, double t_d);
/* t_d at which an event of that BJD_TDB is seen; within 0.02 s up to two days beyond the fits, for contacts of long events;
 * farther away to minutes, enough to know that it is elsewhere. */
double night_of_bjd(const struct night *n, const struct star *s, struct tdb bjd);

#endif
