/* SPDX-License-Identifier: MIT
 * Horizon coordinates, refraction, airmass. */
#ifndef WANE_EPHEM_SKY_H
#define WANE_EPHEM_SKY_H

#include "ephem/vec3.h"

/* East, north, up frame of a site at one sidereal angle. */
struct horizon_frame {
	struct vec3 east, north, up; /* in the true-of-date equatorial frame */
};
struct horizon_frame horizon_at(double lat_rad, double local_sidereal_rad);

struct altaz {
	double alt_deg;      /* airless */
	double az_north_deg; /* from north through east, [0, 360) */
};
struct altaz horizon_altaz(const struct horizon_frame *h, struct vec3 direction);
/* Parallactic angle [deg, -180..180], positive west of the meridian. */
double parallactic_deg(double lat_rad, double ha_rad, double dec_rad);
/* Refraction to add to an airless altitude [deg] (Saemundsson 1986, Sky & Telescope 72, 70), scaled by pressure and temperature
 * ((P/1010)(283/(273+T))); about 0.1 arcmin. Below -1 deg: the value at -1 deg. */
double refraction_deg(double true_alt_deg, double pressure_hpa, double temperature_c);
/* Standard-atmosphere pressure at a height [hPa] (ICAO 1993). */
double pressure_hpa(double height_m);
/* Young 1994, Applied Optics 33, 1108, on the AIRLESS altitude; NAN below 0 deg. */
double airmass_young(double alt_deg);
/* The altitude at which the airmass is x (x >= 1; bisection, 1e-9 deg); 90 for x <= the zenith's, NAN for NaN. Altitudes below give
 * more air. x beyond the horizon's value gives 0. */
double airmass_altitude_deg(double x);

#endif
