/* SPDX-License-Identifier: MIT
 * Where the items of a plan point, and the time that goes by between two of them. Between the files of the
 * plan (night_plan.h). */
#ifndef WANE_EPHEM_PLAN_POINTING_H
#define WANE_EPHEM_PLAN_POINTING_H

#include "ephem/night_plan.h"

#include <stdint.h>

/* The direction of an offer's star (ICRS, of the night). The planets of a star have one direction, whatever
 * their tables say: that of the planet whose name comes first. */
struct vec3 plan_direction(const struct night *night, const struct prepared *p);
/* The planet that stands for a star: of its ring the one whose name comes first. */
const struct prepared *plan_star_of(const struct prepared *p);
/* Time between items that point there: 0 in one field, else the move. catalogue: one of them is known by its
 * direction alone, so that one star is known by being near enough. */
double plan_gap_between_d(const struct plan_rules *rules, struct vec3 a, struct vec3 b, bool catalogue);

/* Pointings have numbers: 0..n-1 the star of that offer, the lowest offer of the star; n + j the fixed item
 * j. */
struct plan_pointings {
	size_t n, n_fixed;
	const struct plan_rules *rules;
	size_t *star;		/* [n] lowest offer of the same star */
	struct vec3 *direction; /* [n + n_fixed]; of a star, at its lowest offer */
	uint32_t *place;	/* [n + n_fixed] place in the table of gaps */
	enum band_id *band;	/* [n + n_fixed] filter of the star: the band that an open goal of its lowest
				   offer asks for, else the telescope's; BAND_NONE: any */
	size_t n_places;
	double *gap_d; /* [n_places x n_places], worked out when asked for; NULL: none are kept */
};
/* ST_MEMORY only. O(n log n). */
MUST_USE enum status plan_pointings_make(const struct plan_input *in, struct plan_pointings *out,
					 struct err *e);
/* Makes the table of gaps, where the places are not too many and there is memory for it. */
void plan_pointings_keep_gaps(struct plan_pointings *p);
void plan_pointings_free(struct plan_pointings *p);
bool plan_pointings_share(const struct plan_pointings *p, size_t a, size_t b);
/* Another filter is needed for b than for a. */
bool plan_pointings_other_filter(const struct plan_pointings *p, size_t a, size_t b);
/* For struct order_gaps; ctx: struct plan_pointings. Two fixed items have no gap: they stand as they
 * happened. Not thread-safe (the table). */
double plan_pointings_gap_d(const void *ctx, int from_class, int to_class);

#endif
