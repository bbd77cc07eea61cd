/* SPDX-License-Identifier: MIT
 * Reader of JPL's planetary ephemeris DE405 (Standish 1998, JPL IOM 312.F-98-048) as packaged for Debian
 * (casacore-data-jpl-de405): an outside reference for Sun, Moon and Earth. Tests only. */
#ifndef WANE_TESTS_SUPPORT_JPL_405_H
#define WANE_TESTS_SUPPORT_JPL_405_H

#include "ephem/vec3.h"

#include <stdbool.h>

#define JPL_405_CITATION "JPL DE405: Debian package casacore-data-jpl-de405"

enum jpl_body { JPL_EARTH, JPL_SUN, JPL_MOON };
struct jpl_405; /* about 9 MB in memory */

/* NULL when the package is not installed. Released with jpl_405_close. */
struct jpl_405 *jpl_405_open(void);
void jpl_405_close(struct jpl_405 *j);
/* Barycentric place [au] and, if rate is not NULL, velocity [au/d] of a body, ICRF, at TDB (day + fraction). Dates 1960..2059. */
struct vec3 jpl_405_bary_au(const struct jpl_405 *j, enum jpl_body body, double jd_tdb_day, double jd_tdb_frac, struct vec3 *rate);

#endif
