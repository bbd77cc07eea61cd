/* SPDX-License-Identifier: MIT */
#include "tui/field_words.h"

#include <math.h>
#include <stdio.h>

void field_fit_words(const struct field_fit *fit, const struct telescope *telescope, bool has_telescope,
		     char out[FIELD_SENTENCE_BYTES])
{
	const double field = telescope->field_arcmin;
	out[0] = '\0';
	if (fit->stars == 0)
		return;
	if (isinf(fit->needs_arcmin))
		snprintf(out, FIELD_SENTENCE_BYTES,
			 "They do not fit a field: one of them is more than 80 deg from the target.");
	else if (!fit->known)
		snprintf(
		    out, FIELD_SENTENCE_BYTES,
		    "With the target they need a field of %.2f arcmin; whether they fit is not known: %s.",
		    fit->needs_arcmin,
		    has_telescope ? "the telescope has no field_arcmin" : "no telescope is chosen");
	else if (fit->fits)
		snprintf(out, FIELD_SENTENCE_BYTES,
			 "With the target they fit the field of %.120s: %.2f of %.2f arcmin, pointed at "
			 "%.5f, %+.5f.",
			 telescope->name, fit->needs_arcmin, field, fit->ra_deg, fit->dec_deg);
	else
		snprintf(out, FIELD_SENTENCE_BYTES,
			 "With the target they do not fit the field of %.120s: they need %.2f arcmin, %.2f "
			 "more than its %.2f.",
			 telescope->name, fit->needs_arcmin, fit->needs_arcmin - field, field);
}

void field_light_words(const struct field_light *light, double aperture_arcsec,
		       char out[FIELD_SENTENCE_BYTES])
{
	out[0] = '\0';
	if (light->neighbours == 0)
		return;
	if (isnan(light->neighbour))
		snprintf(
		    out, FIELD_SENTENCE_BYTES,
		    "Neighbours in the aperture of %.1f arcsec: %d; the target's magnitude is not known.",
		    aperture_arcsec, light->neighbours);
	else
		snprintf(out, FIELD_SENTENCE_BYTES,
			 "Neighbours in the aperture of %.1f arcsec: %d, with %.3f of the target's light%s.",
			 aperture_arcsec, light->neighbours, light->neighbour,
			 light->assumed ? " (assumed: the magnitudes are not of the observing band)" : "");
}
