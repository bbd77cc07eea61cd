/* SPDX-License-Identifier: MIT
 * Whether a few stars fit a camera's field together: the smallest circle round them on the tangent plane.
 * Gnomonic projection: the plane touches the sphere at a centre and is seen from the sphere's (textbook, from
 * memory). The circle: the smallest of those through two or three of the points that holds them all, which is
 * exact for a few points (textbook, from memory). */
#ifndef WANE_EPHEM_STAR_FIELD_H
#define WANE_EPHEM_STAR_FIELD_H

#include <stdbool.h>

enum { FIELD_POINTS_MAX = 16 };
/* [arcmin], x to the east, y to the north. */
struct plane_point {
	double x, y;
};
/* Directions in degrees. False: 80 deg or more from the centre, where the plane is no picture of a field. */
bool plane_of_sky(double centre_ra_deg, double centre_dec_deg, double ra_deg, double dec_deg,
		  struct plane_point *out);
/* And back: ra in [0, 360). */
void sky_of_plane(double centre_ra_deg, double centre_dec_deg, struct plane_point p, double *ra_deg,
		  double *dec_deg);

struct field_circle {
	struct plane_point centre;
	double radius; /* [arcmin] */
};
/* n 0..FIELD_POINTS_MAX; none: radius 0 at the origin. Holds every point within 1e-9 of its radius. */
struct field_circle smallest_circle(const struct plane_point p[], int n);

#endif
