/* SPDX-License-Identifier: MIT
 * Rows of a comma-separated table in tests/data: `#` lines are comments (citation first), then one header line. */
#ifndef WANE_TESTS_SUPPORT_DATA_ROWS_H
#define WANE_TESTS_SUPPORT_DATA_ROWS_H

#include <stdbool.h>
#include <stdio.h>

enum { DATA_CELLS_MAX = 24 };
struct data_rows {
	FILE *file;
	int row;             /* rows read so far */
	int n;               /* cells in the row */
	char *cell[DATA_CELLS_MAX];
	char line[1024];
	bool header_seen;
};
/* Opens tests/data/NAME (from the top folder of the project) or fails the test. */
struct data_rows data_rows_open(const char *name);
/* The next row; false at the end, when the file is closed too. Fails on a row of other than `cells` cells. */
bool data_rows_next(struct data_rows *d, int cells);
/* Cell as a number; fails if it is none. */
double data_number(const struct data_rows *d, int i);

#endif
