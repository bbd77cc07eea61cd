/* SPDX-License-Identifier: MIT
 * The settings file: sections [run], [limits], [screen], [leap_seconds]. One table of keys with ranges and sentences. The program reads it and
 * never writes it. */
#ifndef WANE_TUI_SETTINGS_H
#define WANE_TUI_SETTINGS_H

#include "ephem/err.h"
#include "ephem/limits.h"
#include "ephem/timescale.h"

#include <stdbool.h>
#include <stdio.h>

enum glyphs { GLYPHS_AUTO, GLYPHS_UNICODE, GLYPHS_BASIC, GLYPHS_ASCII };
enum palette { PALETTE_NORMAL, PALETTE_RED, PALETTE_CONTRAST, PALETTE_NONE };

struct settings {
	char site[328];   /* default site; "" none */
	double ut1_utc_s; /* 0 */
	int kinds;        /* KINDS_*; 0 not given */
	double refresh_precision_min; /* of a mid-time that would refresh an ephemeris; 1 */
	enum glyphs glyphs;
	enum palette palette;
	struct limits limits;   /* built in, with those of the file laid over */
	struct leap_table leap; /* built in, extended by [leap_seconds] */
	bool found;             /* a file was read */
};

void settings_built_in(struct settings *s);
/* Reads a file over what is built in. ST_ABSENT: no such file (the built-in values stay). A fault: the text is
 * `FILE:LINE:COLUMN: key: what is wrong (got "...", expected ...)`, and *s is as built in. */
MUST_USE enum status settings_read(struct settings *s, const char *path, struct err *e);
/* Every key with its section, range, value built in and sentence: part of `wane --help`. */
void settings_help(FILE *to);

#endif
