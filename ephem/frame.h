/* SPDX-License-Identifier: MIT
 * From ICRS to the true equator and equinox of date, and the Earth's turning. */
#ifndef WANE_EPHEM_FRAME_H
#define WANE_EPHEM_FRAME_H

#include "ephem/model.h"
#include "ephem/timescale.h"
#include "ephem/vec3.h"

/* Precession (Capitaine, Wallace & Chapront 2003, A&A 412, 567, eq. 40) times nutation (IAU 1980): true-of-date = M * ICRS.
 * 0.05 arcsec over 2000..2050. Also returns the equation of the equinoxes dpsi cos(eps) [rad] (may be NULL). */
struct mat3 frame_true_of_date(double jd_tt, double *equation_of_equinoxes_rad);
/* Greenwich apparent sidereal time [rad, 0..2 pi). 0.13 arcsec apart from UT1. */
double frame_gast_rad(const struct earth_clock *clock, struct utc t, double equation_of_equinoxes_rad);
/* Site from the Earth's centre in the Earth-fixed frame [m], WGS84. */
struct vec3 frame_site_itrs_m(double lat_deg, double lon_east_deg, double height_m);
/* Apparent direction: unit(n + v) with v the observer's barycentric velocity in units of c (first order plus normalisation: at most
 * 0.0005 arcsec from the relativistic form). */
struct vec3 frame_aberrate(struct vec3 n, struct vec3 v_c);
/* ICRS unit vector of a catalogue place carried by proper motion to a date (Julian year). pm, plx, epoch NAN: 0, 0, 2000.0.
 * Space motion on the tangent, normalised; radial velocity not known. */
struct vec3 frame_catalogue_direction(const struct target *t, double julian_year);

#endif
