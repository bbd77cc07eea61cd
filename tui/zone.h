/* SPDX-License-Identifier: MIT
 * Local time of a site from its IANA zone file (TZif, RFC 8536), read by our own small reader: TZ is not touched, no global state.
 * Counts of seconds are POSIX seconds: files that count leap seconds (`right/`) are refused. A date in year 1601..2499 is exact; farther
 * off, standard time is taken. */
#ifndef WANE_TUI_ZONE_H
#define WANE_TUI_ZONE_H

#include "ephem/err.h"
#include "ephem/timescale.h"

#include <stdbool.h>

struct zone; /* opaque */
enum { ZONE_NAME_MAX = 64 };
/* name: `America/Denver`; begins with a capital (`posix/`, `right/`, `posixrules`, `tzdata.zi` are no zones); letters, digits, `_ + - .` and `/`, no part that starts with a dot. ST_SYNTAX it can't be a name,
 * ST_ABSENT no such zone, ST_IO it can't be read, ST_SYNTAX a damaged file. *out is the caller's: zone_close. */
MUST_USE enum status zone_open(const char *zoneinfo_dir, const char *name, struct zone **out, struct err *e);
void zone_close(struct zone *z); /* NULL is fine */

struct local_time {
	int32_t mjd;     /* local date */
	double sod_s;    /* local second of day, 0 <= sod < 86400 */
	int offset_s;    /* local - UTC */
	char abbreviation[16]; /* MST, MDT, +0545 */
	bool leap_second; /* inside a leap second: sod_s is one second early, its clock reads :60 instead of :59 */
};
/* UTC to local: always one answer. z NULL: UTC itself, abbreviation "UTC". Dates beyond the file's table follow its footer rule. */
struct local_time zone_local(const struct zone *z, struct utc t);
/* Local to UTC: 0 answers (in the gap of a clock change), 1, or 2 (the repeated hour, in order of time). z NULL: UTC itself, 1. */
int zone_utc(const struct zone *z, int32_t local_mjd, double local_sod_s, struct utc out[2]);

#endif
