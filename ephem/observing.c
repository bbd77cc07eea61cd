/* SPDX-License-Identifier: MIT */
#include "ephem/observing.h"

#include <math.h>

struct observing observing_of(const struct telescope *t)
{
	struct observing o = {.optics = optics_of(t),
			      .exposure_s = t->exposure_s,
			      .rules = worth_rules_built_in(),
			      .fallback_bits = FALLBACK_BITS,
			      .unknown_share = UNKNOWN_SHARE,
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
	return (struct observed){.neighbour = NAN, .comparison_stars = NAN, .comparison_count = NAN};
}

struct open_goals open_goals_of(const struct observed *o, enum band_id band, double jd)
{
	struct open_goals open = {0, 0};
	if (!o || o->n_goals == 0)
		return (struct open_goals){1, 1};
	for (size_t i = 0; i < o->n_goals; i++) {
		const struct goal *g = &o->goal[i];
		if (!goal_open(g, band == BAND_NONE ? g->band : band, jd))
			continue;
		open.whole++;
		open.limb += g->one_limb;
	}
	return open;
}
