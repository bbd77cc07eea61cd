/* SPDX-License-Identifier: MIT
 * Published tables of mid-times in tests/data, and normal random numbers. */
#ifndef WANE_TESTS_SUPPORT_MIDTIME_ROWS_H
#define WANE_TESTS_SUPPORT_MIDTIME_ROWS_H

#include "ephem/refit.h"
#include "tests/support/check.h"

enum { MIDTIME_ROWS_MAX = 400 };
struct midtime_rows {
	size_t n;
	struct mid_time t[MIDTIME_ROWS_MAX]; /* transits, all used, in the order of the table */
};
/* Reads tests/data/NAME with columns epoch, mid_jd, err_d, source; every digit of the day is kept. Fails the
 * test on any fault. */
void midtime_rows_read(const char *name, struct midtime_rows *out);
/* Two-part date of a whole day and the rest. */
struct tdb tdb_of(double day, double rest);
/* Standard normal deviate (Box & Muller 1958, Ann. Math. Stat. 29, 610). */
double rng_normal(struct rng *r);

#endif
