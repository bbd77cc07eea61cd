/* SPDX-License-Identifier: MIT
 * The horizon of a site: how high the ground, trees and domes reach in each direction. Compared with the APPARENT altitude (refraction in),
 * because it is measured by eye or theodolite. */
#ifndef WANE_EPHEM_MASK_H
#define WANE_EPHEM_MASK_H

#include "ephem/err.h"

#include <stddef.h>

enum { MASK_KNOTS_MAX = 720 };
struct mask_knot {
	double az_deg;  /* from north through east, 0 <= az < 360 */
	double alt_deg; /* -10..90, apparent */
};
/* n 0: no mask. Knots by azimuth, each azimuth once; straight lines between, from the last over north to the first; one knot: the same all
 * round. */
struct mask {
	size_t n;
	struct mask_knot knot[MASK_KNOTS_MAX];
};
/* Adds a knot at its place. az 360 is 0. ST_RANGE outside the ranges, ST_CONFLICT for an azimuth that is there already with another
 * altitude, ST_MEMORY when full. */
MUST_USE enum status mask_add(struct mask *m, double az_deg, double alt_deg, struct err *e);
/* Altitude of the mask at any azimuth [deg]; -90 without a mask. */
double mask_at(const struct mask *m, double az_deg);

#endif
