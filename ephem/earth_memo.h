/* SPDX-License-Identifier: MIT
 * Light time to the barycentre for many targets at scattered dates: the Earth's and the Sun's places are taken from a few
 * remembered nodes (cubic between four), where barycentre.h asks the series each time. Geocentric, good to 0.01 s. */
#ifndef WANE_EPHEM_EARTH_MEMO_H
#define WANE_EPHEM_EARTH_MEMO_H

#include "ephem/timescale.h"
#include "ephem/vec3.h"

#include <stdint.h>

enum { EARTH_MEMO_CELLS = 2048 };
/* Start with all bytes 0; the caller owns it. A value depends on its date only, never on what was asked before. */
struct earth_memo {
	int32_t earth_key[EARTH_MEMO_CELLS], sun_key[EARTH_MEMO_CELLS]; /* node number + 1; 0 empty */
	struct vec3 earth_au[EARTH_MEMO_CELLS], sun_au[EARTH_MEMO_CELLS];
};
/* r.n/c of the Earth's centre [s] for the ICRS direction n; NAN outside 1600..2500. */
double earth_memo_light_time_s(struct earth_memo *memo, double jd_tt, struct vec3 n);
/* UTC at the Earth's centre of a BJD_TDB, and back. */
struct utc earth_memo_utc(struct earth_memo *memo, const struct leap_table *leap, struct tdb bjd, struct vec3 n);
struct tdb earth_memo_bjd(struct earth_memo *memo, const struct leap_table *leap, struct utc t, struct vec3 n);

#endif
