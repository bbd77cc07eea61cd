/* SPDX-License-Identifier: MIT */
#include "tests/support/data_rows.h"

#include "tests/support/check.h"

#include <stdlib.h>
#include <string.h>

struct data_rows data_rows_open(const char *name)
{
	char path[256];
	snprintf(path, sizeof path, "tests/data/%s", name);
	struct data_rows d = {.file = fopen(path, "r")};
	if (!d.file)
		check_fail("%s: can't be opened; run the tests from the top folder", path);
	return d;
}

bool data_rows_next(struct data_rows *d, int cells)
{
	while (fgets(d->line, sizeof d->line, d->file)) {
		d->line[strcspn(d->line, "\r\n")] = '\0';
		if (d->line[0] == '#' || d->line[0] == '\0')
			continue;
		if (!d->header_seen) {
			d->header_seen = true;
			continue;
		}
		d->n = 0;
		for (char *at = d->line; at && d->n < DATA_CELLS_MAX;) {
			d->cell[d->n++] = at;
			at = strchr(at, ',');
			if (at)
				*at++ = '\0';
		}
		if (d->n != cells)
			check_fail("row %d has %d cells, not %d: %s", d->row + 1, d->n, cells, d->line);
		d->row++;
		return true;
	}
	fclose(d->file);
	d->file = NULL;
	return false;
}

double data_number(const struct data_rows *d, int i)
{
	char *end;
	double value = strtod(d->cell[i], &end);
	if (end == d->cell[i] || *end)
		check_fail("row %d, cell %d is no number: \"%s\"", d->row, i + 1, d->cell[i]);
	return value;
}
