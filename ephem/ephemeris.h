/* SPDX-License-Identifier: MIT
 * A target's ephemeris on BJD_TDB: predicted mid-times and their errors.
 * Linear T(E) = T0 + P E, quadratic + D E^2 / 2 with D = dP/dE; variance J C J^T, J = [1, E, E^2/2] (Deeg 2015, A&A 578, A17;
 * JCGM 100:2008 5.2.2). */
#ifndef WANE_EPHEM_EPHEMERIS_H
#define WANE_EPHEM_EPHEMERIS_H

#include "ephem/barycentre.h"
#include "ephem/model.h"
#include "ephem/timescale.h"

#include <stdbool.h>

struct ephemeris {
	struct tdb t0; /* BJD_TDB of epoch 0 */
	double period_d, dpde_d;
	double c00, c01, c02, c11, c12, c22; /* covariance of T0, P, D; NAN in c00 when T0 or P has no error */
	double systematic_min;               /* time standard not said, else 0: does not average down */
	double ttv_min;                      /* bound of timing variations, else 0 */
};

/* Published sigma of the mid-time of an epoch [d]; NAN when unknown. */
double ephemeris_published_d(const struct ephemeris *e, long epoch);
struct tdb ephemeris_mid(const struct ephemeris *e, long epoch);
/* Mid-time less another BJD_TDB [d]; keeps 1e-9 d. */
double ephemeris_mid_after_d(const struct ephemeris *e, long epoch, struct tdb from);
/* Epoch of the first mid-time at or after t (true); false when the ephemeris can't be counted there (period not above 0 or not finite, a count
 * beyond 1e9, a quadratic term that turns the clock back). */
bool ephemeris_first_after(const struct ephemeris *e, struct tdb t, long *epoch);
/* Epoch of the mid-time nearest to t; false as above. */
bool ephemeris_nearest(const struct ephemeris *e, struct tdb t, long *epoch);
/* Phase of a time in [0, 1), of the transit count. NAN as above. */
double ephemeris_phase(const struct ephemeris *e, struct tdb t);
/* From transit to the following occultation [d], exact for any eccentricity (closed form; Winn 2010, arXiv:1001.2010, section 2).
 * omega: of the star's orbit [deg]. */
double occultation_delay_d(double period_d, double ecc, double omega_deg);

#endif
