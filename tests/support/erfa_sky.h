/* SPDX-License-Identifier: MIT
 * Places of Sun and Moon as seen from a site, from an outside ephemeris and the ERFA library (2.0; IAU 2006/2000A, CIO based): knows
 * nothing of the engine. Tests only. */
#ifndef WANE_TESTS_SUPPORT_ERFA_SKY_H
#define WANE_TESTS_SUPPORT_ERFA_SKY_H

#include "ephem/model.h"
#include "ephem/timescale.h"
#include "ephem/vec3.h"
#include "tests/support/jpl_405.h"

struct erfa_sky {
	double alt_deg, az_north_deg; /* airless */
	struct vec3 cirs;             /* direction in the celestial intermediate frame, aberration of the site included */
	double distance_au;           /* geometric */
};
/* UTC as ERFA's two-part quasi-JD. */
void erfa_utc(struct utc t, double *utc1, double *utc2);
/* Body seen from a site. j NULL: Sun from eraEpv00 (body must be JPL_SUN). */
struct erfa_sky erfa_body(const struct jpl_405 *j, enum jpl_body body, const struct site *site, double dut1_s, struct utc t);
/* Star: catalogue numbers of the target (missing ones 0), epoch 2000.0. */
struct erfa_sky erfa_star(const struct target *target, const struct site *site, double dut1_s, struct utc t);

#endif
