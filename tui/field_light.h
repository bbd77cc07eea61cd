/* SPDX-License-Identifier: MIT
 * What the stars of a target's field do to its light curve: neighbours in the measuring aperture dilute it,
 * comparison stars bring noise. */
#ifndef WANE_TUI_FIELD_LIGHT_H
#define WANE_TUI_FIELD_LIGHT_H

#include "db/field_stars.h"
#include "ephem/model.h"
#include "ephem/photometry.h"

#include <stdbool.h>
#include <stddef.h>

struct field_light {
	double neighbour; /* light of the neighbours in the aperture over the target's; 0 none; NAN: they
			     are there and the target's magnitude is not known */
	int neighbours;	  /* how many are in it */
	double comparison_stars; /* as many stars as bright as the target have their light; NAN: none given,
				    or no magnitude of the target */
	double comparison_count; /* as many stars of one light flicker as little together: square of the sum
				    of their light over the sum of its squares; NAN: none given */
	bool assumed; /* magnitudes of different bands, or of another than the telescope's, were set against
			 each other */
};
/* Positions are taken as they are catalogued, proper motions left out. A star that is given in several bands
 * counts once, by the magnitude in the telescope's band, else that in the target's. */
struct field_light field_light_of(const struct target *t, const struct field_star star[], size_t n,
				  const struct optics *o);
/* Radius of the measuring aperture [arcsec]. */
double field_aperture_arcsec(const struct optics *o);
/* From the target; of a position or as given [arcsec]. */
double field_star_sep_arcsec(const struct target *t, const struct field_star *f);

/* Whether target, comparison and guide stars fit a field of that full width together, suitably pointed. */
struct field_fit {
	int stars;	     /* comparison and guide stars */
	double needs_arcmin; /* diameter of the circle that holds all; INFINITY: one is on another side of the
				sky */
	double ra_deg, dec_deg; /* of its centre */
	bool known, fits;	/* known: the field's width is */
};
struct field_fit field_fit_of(const struct target *t, const struct field_star star[], size_t n,
			      double field_arcmin);

#endif
