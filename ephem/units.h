/* SPDX-License-Identifier: MIT
 * Constants and unit changes. Every constant names its source. */
#ifndef WANE_EPHEM_UNITS_H
#define WANE_EPHEM_UNITS_H

#define PI 3.14159265358979323846
#define TWO_PI (2.0 * PI)
#define DEG_RAD (PI / 180.0)           /* one degree in radians */
#define ARCSEC_RAD (DEG_RAD / 3600.0)  /* one arcsecond in radians */
#define DAY_S 86400.0                  /* SI day */
#define DAY_MIN 1440.0
#define MIN_D (1.0 / 1440.0)           /* one minute in days */
#define YEAR_D 365.25                  /* Julian year */
#define CENTURY_D 36525.0              /* Julian century */
#define J2000_JD 2451545.0
#define MJD_ZERO_JD 2400000.5
#define AU_M 149597870700.0            /* IAU 2012 Resolution B2 */
#define LIGHT_M_S 299792458.0          /* SI */
#define AU_LIGHT_S (AU_M / LIGHT_M_S)  /* 499.004784 s */
#define TT_TAI_S 32.184                /* IAU 1991 */
/* WGS84 ellipsoid (NIMA TR8350.2): equatorial radius and flattening */
#define WGS84_A_M 6378137.0
#define WGS84_F (1.0 / 298.257223563)
/* IAU 2015 Resolution B3: nominal solar GM and radius, Earth equatorial radius */
#define SUN_GM_M3_S2 1.3271244e20
#define SUN_RADIUS_M 6.957e8
#define EARTH_RADIUS_M 6.3781e6

#endif
