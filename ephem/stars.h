/* SPDX-License-Identifier: MIT
 * Which targets belong to one star. */
#ifndef WANE_EPHEM_STARS_H
#define WANE_EPHEM_STARS_H

#include "ephem/err.h"
#include "ephem/model.h"

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

/* Positions of one star's planets that differ by more than this make both doubtful [arcsec]. */
#define POSITION_DOUBT_ARCSEC 10.0
/* star[i]: number of the star of target i; targets whose names differ only in a last planet letter (b..i after a blank, or behind a digit) share
 * one. doubtful[i]: its position disagrees with a sibling's. ST_MEMORY only. O(n log n). */
MUST_USE enum status stars_group(const struct target target[], size_t n, uint32_t star[], bool doubtful[], struct err *e);

#endif
