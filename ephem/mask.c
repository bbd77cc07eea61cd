/* SPDX-License-Identifier: MIT */
#include "ephem/mask.h"

#include <math.h>

static double turn(double az_deg)
{
	const double az = fmod(az_deg, 360.0);
	return az < 0.0 ? az + 360.0 : az;
}

enum status mask_add(struct mask *m, double az_deg, double alt_deg, struct err *e)
{
	if (!(az_deg >= 0.0 && az_deg <= 360.0))
		return err_set(e, ST_RANGE, "azimuth %g deg: must be 0 to 360", az_deg);
	if (!(alt_deg >= -10.0 && alt_deg <= 90.0))
		return err_set(e, ST_RANGE, "altitude %g deg: must be -10 to 90", alt_deg);
	const double az = turn(az_deg);
	size_t at = 0;
	while (at < m->n && m->knot[at].az_deg < az)
		at++;
	if (at < m->n && m->knot[at].az_deg == az) {
		if (m->knot[at].alt_deg == alt_deg)
			return ST_OK;
		return err_set(e, ST_CONFLICT, "azimuth %g deg stands twice, at %g and %g deg of altitude",
			       az_deg, m->knot[at].alt_deg, alt_deg);
	}
	if (m->n == MASK_KNOTS_MAX)
		return err_set(e, ST_MEMORY, "more than %d points in a horizon mask", MASK_KNOTS_MAX);
	for (size_t i = m->n; i > at; i--)
		m->knot[i] = m->knot[i - 1];
	m->knot[at] = (struct mask_knot){az, alt_deg};
	m->n++;
	return ST_OK;
}

double mask_at(const struct mask *m, double az_deg)
{
	if (m->n == 0)
		return -90.0;
	const double az = turn(az_deg);
	size_t after = 0;
	while (after < m->n && m->knot[after].az_deg <= az)
		after++;
	const struct mask_knot right = m->knot[after % m->n], left = m->knot[(after + m->n - 1) % m->n];
	const double width = m->n == 1 ? 360.0 : turn(right.az_deg - left.az_deg);
	return left.alt_deg + (right.alt_deg - left.alt_deg) * turn(az - left.az_deg) / width;
}
