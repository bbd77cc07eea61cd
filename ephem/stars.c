/* SPDX-License-Identifier: MIT */
#include "ephem/stars.h"

#include "ephem/units.h"
#include "ephem/vec3.h"

#include <stdlib.h>
#include <string.h>

struct entry {
	const struct target *target;
	size_t index, star_length; /* bytes of the name that name the star */
};

/* Planets are lettered from b (star's own a left out; common practice of the IAU's interim scheme). */
static size_t star_length(const char *name)
{
	const size_t n = strlen(name);
	if (n < 2 || name[n - 1] < 'b' || name[n - 1] > 'i')
		return n;
	if (name[n - 2] == ' ' || name[n - 2] == '-' || name[n - 2] == '_')
		return n - 2;
	return name[n - 2] >= '0' && name[n - 2] <= '9' ? n - 1 : n;
}

static int by_star(const void *left, const void *right)
{
	const struct entry *a = left, *b = right;
	const size_t shorter = a->star_length < b->star_length ? a->star_length : b->star_length;
	const int order = memcmp(a->target->name, b->target->name, shorter);
	if (order != 0)
		return order;
	if (a->star_length != b->star_length)
		return a->star_length < b->star_length ? -1 : 1;
	return (a->index > b->index) - (a->index < b->index);
}

static double apart_arcsec(const struct target *a, const struct target *b)
{
	return vec3_angle_rad(vec3_from_angles(a->ra_deg * DEG_RAD, a->dec_deg * DEG_RAD),
			      vec3_from_angles(b->ra_deg * DEG_RAD, b->dec_deg * DEG_RAD)) /
	       ARCSEC_RAD;
}

enum status stars_group(const struct target target[], size_t n, uint32_t star[], bool doubtful[],
			struct err *e)
{
	if (n == 0)
		return ST_OK;
	struct entry *entry = malloc(n * sizeof *entry);
	if (!entry)
		return err_set(e, ST_MEMORY, "no memory to group %zu targets by star", n);
	for (size_t i = 0; i < n; i++) {
		entry[i] = (struct entry){&target[i], i, star_length(target[i].name)};
		doubtful[i] = false;
	}
	qsort(entry, n, sizeof *entry, by_star);
	uint32_t number = 0;
	size_t first = 0;
	for (size_t i = 0; i < n; i++) {
		const struct entry *a = &entry[first], *b = &entry[i];
		if (a->star_length != b->star_length ||
		    memcmp(a->target->name, b->target->name, a->star_length) != 0) {
			first = i;
			number++;
		}
		star[b->index] = number;
		for (size_t k = first; k < i; k++)
			if (apart_arcsec(entry[k].target, b->target) > POSITION_DOUBT_ARCSEC)
				doubtful[entry[k].index] = doubtful[b->index] = true;
	}
	free(entry);
	return ST_OK;
}
