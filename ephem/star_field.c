/* SPDX-License-Identifier: MIT */
#include "ephem/star_field.h"

#include "ephem/units.h"
#include "ephem/vec3.h"

#include <math.h>

#define ARCMIN_RAD (60.0 * 180.0 / PI)
#define LEAST_COS 0.17364817766693033 /* cos 80 deg */
/* Of the radius: what rounding may leave outside. */
#define SLACK 1e-9

struct basis {
	struct vec3 out, east, north;
};

static struct basis basis_at(double ra_deg, double dec_deg)
{
	const double ra = ra_deg * DEG_RAD, dec = dec_deg * DEG_RAD;
	return (struct basis){
	    .out = vec3_from_angles(ra, dec),
	    .east = {-sin(ra), cos(ra), 0.0},
	    .north = {-sin(dec) * cos(ra), -sin(dec) * sin(ra), cos(dec)},
	};
}

bool plane_of_sky(double centre_ra_deg, double centre_dec_deg, double ra_deg, double dec_deg,
		  struct plane_point *out)
{
	const struct basis b = basis_at(centre_ra_deg, centre_dec_deg);
	const struct vec3 star = vec3_from_angles(ra_deg * DEG_RAD, dec_deg * DEG_RAD);
	const double depth = vec3_dot(star, b.out);
	if (!(depth > LEAST_COS))
		return false;
	*out = (struct plane_point){vec3_dot(star, b.east) / depth * ARCMIN_RAD,
				    vec3_dot(star, b.north) / depth * ARCMIN_RAD};
	return true;
}

void sky_of_plane(double centre_ra_deg, double centre_dec_deg, struct plane_point p, double *ra_deg,
		  double *dec_deg)
{
	const struct basis b = basis_at(centre_ra_deg, centre_dec_deg);
	const struct vec3 star = vec3_add(
	    b.out, vec3_add(vec3_scale(b.east, p.x / ARCMIN_RAD), vec3_scale(b.north, p.y / ARCMIN_RAD)));
	vec3_to_angles(star, ra_deg, dec_deg);
	*ra_deg /= DEG_RAD;
	*dec_deg /= DEG_RAD;
}

/* --- the circle --- */

static double apart(struct plane_point a, struct plane_point b)
{
	return hypot(a.x - b.x, a.y - b.y);
}

static bool holds(const struct field_circle *c, const struct plane_point p[], int n)
{
	for (int i = 0; i < n; i++)
		if (apart(c->centre, p[i]) > c->radius * (1.0 + SLACK))
			return false;
	return true;
}

static void take_smaller(struct field_circle *best, const struct field_circle *c,
			 const struct plane_point p[], int n)
{
	if (c->radius < best->radius && holds(c, p, n))
		*best = *c;
}

static struct field_circle through_two(struct plane_point a, struct plane_point b)
{
	return (struct field_circle){{0.5 * (a.x + b.x), 0.5 * (a.y + b.y)}, 0.5 * apart(a, b)};
}

/* False: the three are in a line, and two of them do. */
static bool through_three(struct plane_point a, struct plane_point b, struct plane_point c,
			  struct field_circle *out)
{
	const double bx = b.x - a.x, by = b.y - a.y, cx = c.x - a.x, cy = c.y - a.y;
	const double twice = 2.0 * (bx * cy - by * cx), b2 = bx * bx + by * by, c2 = cx * cx + cy * cy;
	if (!(fabs(twice) > 1e-12 * (b2 + c2)))
		return false;
	const double x = (cy * b2 - by * c2) / twice, y = (bx * c2 - cx * b2) / twice;
	*out = (struct field_circle){{a.x + x, a.y + y}, hypot(x, y)};
	return true;
}

struct field_circle smallest_circle(const struct plane_point p[], int n)
{
	struct field_circle best = {{0.0, 0.0}, 0.0}, c;
	if (n <= 0)
		return best;
	best = (struct field_circle){p[0], 0.0};
	if (holds(&best, p, n))
		return best;
	best.radius = (double)INFINITY;
	for (int i = 0; i < n; i++)
		for (int j = i + 1; j < n; j++) {
			c = through_two(p[i], p[j]);
			take_smaller(&best, &c, p, n);
			for (int k = j + 1; k < n; k++)
				if (through_three(p[i], p[j], p[k], &c))
					take_smaller(&best, &c, p, n);
		}
	return best;
}
