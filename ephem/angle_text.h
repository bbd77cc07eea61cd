/* SPDX-License-Identifier: MIT
 * Angles as text: degrees, or sexagesimal hours / degrees. */
#ifndef WANE_EPHEM_ANGLE_TEXT_H
#define WANE_EPHEM_ANGLE_TEXT_H

#include "ephem/err.h"

#include <stddef.h>

enum { ANGLE_TEXT_MAX = 32 };
/* Right ascension: decimal DEGREES in [0, 360), or hours `hh:mm:ss[.s]` (also blanks or h m s between), [0, 24).
 * A sign, 24:00:00, 60 minutes or seconds, or a fraction in any part but the last are refused. */
MUST_USE enum status ra_parse(const char *text, size_t n, double *ra_deg, struct err *e);
/* Declination: decimal degrees or `[+-]dd:mm:ss[.s]` in [-90, 90]; the sign of -00:30:00 is kept. */
MUST_USE enum status dec_parse(const char *text, size_t n, double *dec_deg, struct err *e);
/* `hh:mm:ss.ss` of an RA in degrees (rounded with carry, 23:59:59.999 becomes 00:00:00.00). */
void ra_text(double ra_deg, int decimals, char out[ANGLE_TEXT_MAX]);
/* `+dd:mm:ss.s` */
void dec_text(double dec_deg, int decimals, char out[ANGLE_TEXT_MAX]);
/* `38.62 N`, `109.36 W`: every coordinate is echoed with its letter. decimals 0..6. */
void lat_text(double lat_deg, int decimals, char out[ANGLE_TEXT_MAX]);
void lon_text(double lon_east_deg, int decimals, char out[ANGLE_TEXT_MAX]);

#endif
