/* SPDX-License-Identifier: MIT
 * What a forecast assumes of the telescope, the site's sky and the team, and what is known of a target as the telescope sees it. Filled once for a run;
 * nothing in it depends on a night. */
#ifndef WANE_EPHEM_OBSERVING_H
#define WANE_EPHEM_OBSERVING_H

#include "ephem/photometry.h"
#include "ephem/worth.h"

#include <stdbool.h>
#include <stddef.h>

/* Of a run: one telescope at its site. */
struct observing {
	struct optics optics;			 /* band and aperture known: observing_ready */
	double exposure_s;			 /* the telescope's own; NAN: chosen for each window */
	double dark_zenith_mag[BAND_SKY_COUNT];	 /* the site's moonless zenith, U B V R I [mag/arcsec2]; NAN: sky_dark_default */
	double extinction_mag[BAND_COUNT];	 /* the site's, per airmass; NAN: the band's */
	struct worth_rules rules;		 /* by what windows are ranked, the need, systematic floors */
	double fallback_bits;			 /* stands for the bits (ranked by depth: for the S/N) of a window that has no forecast of its timing, >= 0 (1); bits no more than a perfect light curve would bring */
	double unknown_share;			 /* stands for the chance of a window without one, times its coverage; as plan_rules.unknown_share (0.1) */
	double at_jd_tdb;			 /* date of sigma_after [JD TDB]; NAN: none is told */
};
#define FALLBACK_BITS 1.0 /* what a mid-time brings that is as precise as 0.58 of the prediction's error: of our own choosing */
#define UNKNOWN_SHARE 0.1 /* of our own choosing */

/* A telescope with everything else unknown or built in. */
struct observing observing_of(const struct telescope *t);
/* Whether anything can be forecast with it: an aperture and a band. A run whose telescope gives neither leaves night.observing NULL. */
bool observing_ready(const struct observing *o);

/* Of a target. Borrowed by struct prepared; where there is none, observed_unknown() stands. */
struct observed {
	double neighbour;	  /* light of other stars in the aperture, over the target's, >= 0; NAN or 0: none */
	double comparison_stars;  /* as bright as the target; 0: their noise is left out; NAN: COMPARISON_STARS */
	double comparison_count;  /* as many of one light flicker as little together; NAN or 0: as comparison_stars */
	const struct goal *goal;  /* borrowed */
	size_t n_goals;		  /* 0: one goal that is always open, for any catch; all of them met: worth 0 */
};
struct observed observed_unknown(void);

/* How many of a target's goals an event of that time in that band (BAND_NONE: not known, serves any) would serve: with both limbs, and with one alone. */
struct open_goals {
	int whole, limb;
};
struct open_goals open_goals_of(const struct observed *o, enum band_id band, double jd); /* o NULL: as observed_unknown */

#endif
