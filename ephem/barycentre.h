/* SPDX-License-Identifier: MIT
 * Light time to the barycentre and to the Sun, and conversion between the published time standards
 * (Eastman, Siverd & Gaudi 2010, PASP 122, 935). For single times; loops use night.h. */
#ifndef WANE_EPHEM_BARYCENTRE_H
#define WANE_EPHEM_BARYCENTRE_H

#include "ephem/err.h"
#include "ephem/model.h"
#include "ephem/standard.h"
#include "ephem/timescale.h"
#include "ephem/vec3.h"

/* What the series gave, kept so that a run of nights asks each only once. The Sun's barycentric place changes slowly and costs nine
 * series: values at multiples of 8 d, linear between (at most 0.1 ms of light time). Earth and Moon for the night builder: values at
 * multiples of 0.5 d, a polynomial through ten of them (1e-4 arcsec). The caller owns the memo; a value depends on its date only,
 * never on what was asked before. */
enum { SUN_MEMO_CELLS = 2048 };
struct sun_memo {
	int32_t key[SUN_MEMO_CELLS]; /* node number + 1; 0 empty */
	struct vec3 au[SUN_MEMO_CELLS];
	int32_t half_day_key[SUN_MEMO_CELLS];
	struct vec3 earth_au[SUN_MEMO_CELLS], moon_km[SUN_MEMO_CELLS];
};
void sun_memo_clear(struct sun_memo *memo);
struct vec3 sun_memo_at(struct sun_memo *memo, double jd_tt);
/* Heliocentric Earth [au] and geometric geocentric Moon [km] at the multiples of 0.5 d numbered node .. node + n - 1 (JD_TT = 0.5 node). */
void sun_memo_earth_moon(struct sun_memo *memo, int32_t node, int n, struct vec3 earth_au[], struct vec3 moon_km[]);

/* Where the observer stands: a site, or the Earth's centre (site NULL). */
struct observer {
	const struct site *site;
	const struct earth_clock *clock;
};

/* Light time along n (ICRS unit vector) from the observer [s]: arrival at the barycentre (or Sun's centre) minus arrival at the
 * observer, r.n/c, first order (spherical wavefronts and Shapiro delay, below 0.1 ms for stars beyond 10 pc, are left out). */
double light_time_s(struct sun_memo *memo, const struct observer *o, struct tt t, struct vec3 n, enum time_origin origin);

/* A date in a standard (value as written, offset not added) to the TT instant at the observer, and back. Three fixed-point passes
 * (residual 1e-10 s). ST_RANGE outside JD 2415020.5..2488434.5 (1900..2101). text_utc standards are not accepted. */
MUST_USE enum status standard_to_tt(struct sun_memo *memo, const struct observer *o, const struct standard *s, struct jd2 value,
				    struct vec3 n, struct tt *out, struct err *e);
MUST_USE enum status standard_from_tt(struct sun_memo *memo, const struct observer *o, const struct standard *s, struct tt t,
				      struct vec3 n, struct jd2 *value, struct err *e);
/* Epoch of a target as BJD_TDB. Unstated standards are taken as BJD_TDB. HJD: only the Sun's offset enters; JD: the Earth's centre. */
MUST_USE enum status standard_to_bjd_tdb(struct sun_memo *memo, const struct earth_clock *clock, const struct standard *s,
					 struct jd2 value, struct vec3 n, struct tdb *out, struct err *e);

#endif
