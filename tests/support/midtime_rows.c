/* SPDX-License-Identifier: MIT */
#include "tests/support/midtime_rows.h"

#include "ephem/units.h"
#include "tests/support/data_rows.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

struct tdb tdb_of(double day, double rest)
{
	return (struct tdb){jd2_normal(day, rest)};
}

void midtime_rows_read(const char *name, struct midtime_rows *out)
{
	struct data_rows d = data_rows_open(name);
	out->n = 0;
	while (data_rows_next(&d, 4)) {
		if (out->n == MIDTIME_ROWS_MAX)
			check_fail("%s has more than %d rows", name, MIDTIME_ROWS_MAX);
		const char *point = strchr(d.cell[1], '.');
		if (!point)
			check_fail("%s, row %d: no decimals in %s", name, d.row, d.cell[1]);
		out->t[out->n++] =
		    (struct mid_time){.epoch = (long)data_number(&d, 0),
				      .mid = tdb_of(floor(data_number(&d, 1)), strtod(point, NULL)),
				      .err_d = data_number(&d, 2),
				      .used = true};
	}
}

double rng_normal(struct rng *r)
{
	const double radius = sqrt(-2.0 * log(1.0 - rng_unit(r)));
	return radius * cos(TWO_PI * rng_unit(r));
}
