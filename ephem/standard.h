/* SPDX-License-Identifier: MIT
 * The time standards in which mid-times are published: JD, HJD or BJD in UTC, TT or TDB, with an offset
 * (Eastman, Siverd & Gaudi 2010, PASP 122, 935). */
#ifndef WANE_EPHEM_STANDARD_H
#define WANE_EPHEM_STANDARD_H

#include "ephem/err.h"

#include <stdbool.h>
#include <stddef.h>

enum time_origin { ORIGIN_OBSERVER, ORIGIN_SUN, ORIGIN_BARYCENTRE }; /* JD, HJD, BJD */
enum time_clock { CLOCK_UTC, CLOCK_TT, CLOCK_TDB };
/* What the source says of its scale; all but STATED are used as BJD_TDB and flagged scale_assumed. */
enum scale_claim {
	SCALE_STATED,  /* e.g. HJD_UTC */
	SCALE_BJD,     /* `BJD`, `BJD:word`, `HJD`...: the clock is not said */
	SCALE_UNKNOWN, /* `JD`, `unknown`, `unknown:word`, empty: origin not said either */
};
struct standard {
	enum scale_claim claim;
	enum time_origin origin; /* ORIGIN_BARYCENTRE unless stated */
	enum time_clock clock;   /* CLOCK_TDB unless stated */
	double offset_d;         /* what was subtracted: 2457000 for BJD_TDB-2457000, 2400000.5 for MJD_*; else 0 */
	bool text_utc;           /* the scale `UTC`: values are text */
};

/* Reads `BJD_TDB`, `HJD_UTC`, `MJD_UTC`, `BJD_TDB-2457000`, `UTC`, `BJD`, `unknown:BJD`, empty, ... (case folded for the words).
 * ST_SYNTAX when it is none of them; the message lists the scales. */
MUST_USE enum status standard_parse(const char *text, struct standard *out, struct err *e);
/* Canonical text; an unstated scale gives `BJD`, or `unknown`. out holds n bytes. */
void standard_text(const struct standard *s, char *out, size_t n);
/* Systematic error of the time of an epoch whose scale is not said [s]: 0 when stated; 49 for BJD or HJD;
 * hypot(49, 499 cos(ecliptic latitude)/sqrt 2) else. ra, dec ICRS [deg]. */
double standard_systematic_s(const struct standard *s, double ra_deg, double dec_deg);

#endif
