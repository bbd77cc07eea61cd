/* SPDX-License-Identifier: MIT
 * The only module that includes libnova. Positions come out in the J2000 equatorial frame (ICRS within 0.02 arcsec).
 * libnova keeps caches in statics: one thread only, and the functions here spoil its nutation cache (which answers for any date
 * within 0.1 d of the last one) before each call, so that a result depends on its argument alone.
 * Sources: VSOP87 (Bretagnon & Francou 1988), ELP 2000-82B (Chapront-Touze & Chapront 1988), IAU 1980 nutation, IAU 1982 GMST. */
#ifndef WANE_EPHEM_SERIES_NOVA_H
#define WANE_EPHEM_SERIES_NOVA_H

#include "ephem/vec3.h"

/* Heliocentric Earth [au]; 0.03 arcsec. About 31 us. */
struct vec3 nova_earth_helio_au(double jd_tt);
/* Sun's centre from the solar-system barycentre [au], from all nine bodies; light time good to 0.07 ms. About 570 us. */
struct vec3 nova_sun_bary_au(double jd_tt);
/* Geometric geocentric Moon [km], longitude drift of the series against DE405 taken out (0.12 + 0.0088 (year - 2000) arcsec,
 * fitted against JPL DE405); 0.3 arcsec. About 106 us. The caller takes light time off the argument. */
struct vec3 nova_moon_geo_km(double jd_tt);
/* Nutation in longitude and obliquity [rad], IAU 1980; 0.02 arcsec. */
void nova_nutation_rad(double jd_tt, double *dpsi_rad, double *deps_rad);
/* Greenwich mean sidereal time [rad, 0..2 pi), IAU 1982. jd_ut1 as day + fraction. */
double nova_gmst_rad(double jd_ut1_day, double jd_ut1_frac);

#endif
