/* SPDX-License-Identifier: MIT */
#include "tests/support/check.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>

void check_fail_at(const char *file, int line, const char *format, ...)
{
	char text[1024];
	va_list list;
	va_start(list, format);
	vsnprintf(text, sizeof text, format, list);
	va_end(list);
	print_error("%s\n", text);
	_fail(file, line);
	abort(); /* _fail does not return */
}

void check_close_at(const char *file, int line, const char *what, double got, double want, double tolerance)
{
	if (isnan(got) && isnan(want))
		return;
	if (!(fabs(got - want) <= tolerance))
		check_fail_at(file, line, "%s: got %.17g, want %.17g, off by %.3g, allowed %.3g", what, got, want, got - want,
			      tolerance);
}

struct rng rng_open(const char *loop_name)
{
	const char *text = getenv("WANE_SEED");
	uint64_t seed = text ? strtoull(text, NULL, 10) : 20261201u;
	if (seed == 0)
		seed = 1;
	print_message("seed of %s: WANE_SEED=%llu\n", loop_name, (unsigned long long)seed);
	return (struct rng){.state = seed * 0x9E3779B97F4A7C15u | 1u};
}

double rng_unit(struct rng *r)
{
	r->state ^= r->state >> 12;
	r->state ^= r->state << 25;
	r->state ^= r->state >> 27;
	return (double)((r->state * 0x2545F4914F6CDD1Du) >> 11) * 0x1p-53;
}

double rng_between(struct rng *r, double lo, double hi)
{
	return lo + (hi - lo) * rng_unit(r);
}

const char *data_folder(void)
{
	const char *folder = getenv("WANE_DATA");
	return folder && *folder ? folder : NULL;
}
