/* SPDX-License-Identifier: MIT
 * The versions of a target's ephemeris made ready, and two of them laid against each other. */
#ifndef WANE_TUI_VERSIONS_H
#define WANE_TUI_VERSIONS_H

#include "ephem/drift.h"
#include "tui/drift_rows.h"

/* The ephemeris of a stored version, on BJD_TDB. ST_RANGE: it has none that can be counted. */
MUST_USE enum status version_ephemeris(struct run *r, const struct target *t, const struct ephemeris_row *row, struct ephemeris *out,
				       struct err *e);

enum { GAP_YEARS = 10 };
struct gap_row {
	struct utc at;
	struct drift_gap gap; /* the other less the current one */
};
struct gap_table {
	int current, other;  /* versions */
	double limit_min;    /* NAN none */
	struct drift_date parted; /* when they are apart by more than the limit; NEVER: not within 50 years */
	struct gap_row row[GAP_YEARS + 1]; /* from now, a year apart */
};
/* Of the run's prepared target p. ST_ABSENT: no such version. */
MUST_USE enum status gap_table_make(struct gap_table *t, struct run *r, const struct prepared *p, int version, double limit_min,
				    struct err *e);

#endif
