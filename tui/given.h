/* SPDX-License-Identifier: MIT
 * Instants, nights, places and directions as they are given on the command line. Faults are of the command line (exit 2). */
#ifndef WANE_TUI_GIVEN_H
#define WANE_TUI_GIVEN_H

#include "ephem/err.h"
#include "ephem/model.h"
#include "ephem/timescale.h"

#include <stdbool.h>

/* Years that can be computed. */
enum { GIVEN_YEAR_MIN = 1900, GIVEN_YEAR_MAX = 2100 };

/* `YYYY-MM-DDTHH:MM[:SS[.s]][Z]`, or `2461114.708333 JD_UTC` (or another JD or MJD without light time). A bare `YYYY-MM-DD` is a night, not an instant:
 * ST_SYNTAX. */
MUST_USE enum status given_time(const struct leap_table *leap, const char *text, struct utc *out, struct err *e);
/* The same where a day is enough: a bare date is its 0 h UTC. */
MUST_USE enum status given_day_or_time(const struct leap_table *leap, const char *text, struct utc *out, struct err *e);
/* A night: a bare date is its evening; an instant is the night that contains it at that longitude. */
MUST_USE enum status given_night(const struct leap_table *leap, double lon_east_deg, const char *text, int32_t *mjd, struct err *e);
/* Whether the text can be read as a night at all (before a site is known). */
MUST_USE enum status given_night_check(const struct leap_table *leap, const char *text, struct err *e);
/* `TIME`, or `TIME+`: *running. */
MUST_USE enum status given_now(const struct leap_table *leap, const char *text, struct utc *out, bool *running, struct err *e);

/* LAT,LON,HEIGHT: degrees north, degrees east, metres; `38.62N,109.36W,2100m` too (a letter excludes a sign). Longitudes of 180..360 are
 * taken as east. Fills lat, lon, height only. */
MUST_USE enum status given_place(const char *text, struct site *site, struct err *e);
/* RA,DEC: ICRS degrees, or hh:mm:ss.s,+dd:mm:ss. */
MUST_USE enum status given_radec(const char *text, double *ra_deg, double *dec_deg, struct err *e);

#endif
