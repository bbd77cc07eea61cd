/* SPDX-License-Identifier: MIT
 * Horizon masks as text: the file that people write, and the column of the store. */
#ifndef WANE_DB_READ_MASK_H
#define WANE_DB_READ_MASK_H

#include "ephem/mask.h"

#include <stdbool.h>

/* A mask from text: a point a line, azimuth and apparent altitude in degrees, a comma (semicolon, tab,
 * blanks) between; `#` begins a comment; a first line `az_deg, alt_deg` may stand. Azimuth 0..360 from north
 * through east, altitude -10..90; 1 to 720 points. *unsorted: the azimuths do not rise from line to line
 * (they are sorted). An azimuth that stands twice with different altitudes is refused. Faults are ST_SYNTAX
 * or ST_RANGE and begin with `NAME:LINE:COLUMN: `, column in bytes. data[n] is borrowed for the call. */
MUST_USE enum status mask_parse(const char *name, const char *data, size_t n, struct mask *out,
				bool *unsorted, struct err *e);
/* The same from a file (`-`: standard input). ST_ABSENT, ST_IO: `FILE: why`. */
MUST_USE enum status mask_read(const char *path, struct mask *out, bool *unsorted, struct err *e);

/* As it is stored: `azimuth altitude;azimuth altitude`, in order of azimuth, each number with the fewest
 * digits that read back the same; "" without points. */
enum { MASK_TEXT_MAX = 40000 };
void mask_text(const struct mask *m, char out[MASK_TEXT_MAX]);
/* Reads it back. ST_SYNTAX, ST_RANGE: it is not such a text. */
MUST_USE enum status mask_of_text(const char *text, struct mask *out, struct err *e);

#endif
