/* SPDX-License-Identifier: MIT
 * When a smooth function of time is positive: sampling, a test of each extremum for a double crossing between samples, bisection. */
#ifndef WANE_EPHEM_CROSSINGS_H
#define WANE_EPHEM_CROSSINGS_H

#include "ephem/intervals.h"

/* Value of the curve at t; context is borrowed. Must be finite within one step of the range asked for. */
typedef double curve_fn(const void *context, double t_d);

struct curve {
	curve_fn *at;
	const void *context;
	/* Largest |slope| per day, or 0: unknown. Where the curve is far from zero, steps grow as far as that allows. */
	double rate_max;
};

/* { t in [from, to] : curve(t) >= 0 }. Samples at most step_d apart, one step beyond each end (so that an extremum at an end is seen).
 * Crossings to 4 ms; an extremum is placed to 3 s, which for altitudes is 0.01 arcsec. */
struct intervals crossings_positive(const struct curve *c, double from_d, double to_d, double step_d);

#endif
