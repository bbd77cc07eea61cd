/* SPDX-License-Identifier: MIT */
#include "ephem/observing.h"

#include <math.h>

struct observing observing_of(const struct telescope *t)
{
	struct observing o = {.optics = optics_of(t),
			      .exposure_s = t->exposure_s,
			      .rules = worth_rules_built_in(),
			      .fallback_bits = FALLBACK_BITS,
			      .at_jd_tdb = NAN};
	for (int i = 0; i < BAND_SKY_COUNT; i++)
		o.dark_zenith_mag[i] = NAN;
	for (int i = 0; i < BAND_COUNT; i++)
		o.extinction_mag[i] = NAN;
	return o;
}

bool observing_ready(const struct observing *o)
{
	return o->optics.band >= 0 && o->optics.band < BAND_COUNT && o->optics.aperture_m > 0.0;
}

struct observed observed_unknown(void)
{
	return (struct observed){.neighbour = NAN, .comparison_stars = NAN};
}
