/* SPDX-License-Identifier: MIT */
#include "ephem/flags.h"

#include <string.h>

const struct flag_rule flag_rules[FLAG_COUNT] = {
    [FLAG_SIGMA_UNKNOWN] =
	{"sigma_unknown",
	 "The source gives no error of the epoch or of the period: how far the times are off is not known, "
	 "so no chance is given."},
    [FLAG_SCALE_ASSUMED] =
	{"scale_assumed",
	 "The source does not say its time standard; BJD_TDB was assumed and a systematic error added."},
    [FLAG_DURATION_ESTIMATED] =
	{"duration_estimated",
	 "No duration is published; it was estimated from the orbit and the star, with an error of its own."},
    [FLAG_DURATION_ERROR_UNKNOWN] = {"duration_error_unknown",
				     "The duration has no published error and counts as exact."},
    [FLAG_INGRESS_ESTIMATED] =
	{"ingress_estimated",
	 "The length of ingress and egress was estimated with an impact parameter of 0.5."},
    [FLAG_RADIUS_RATIO_ASSUMED] =
	{"radius_ratio_assumed", "Neither depth nor radius ratio is published; a ratio of 0.1 was assumed."},
    [FLAG_COVARIANCE_ASSUMED_0] = {"covariance_assumed_0",
				   "The covariance of epoch and period is not published and was taken as 0."},
    [FLAG_CIRCULAR_ASSUMED] =
	{"circular_assumed",
	 "No eccentricity is published; the occultation was put at half the period, without a chance."},
    [FLAG_PHASE_ERROR_UNKNOWN] =
	{"phase_error_unknown",
	 "The error of e cos w is not published: the occultation may be farther off than the "
	 "sigma says."},
    [FLAG_STALE] =
	{"stale",
	 "The error of the mid-time is past the limit at which the pad begins to eat the least baseline."},
    [FLAG_PHASE_LOST] =
	{"phase_lost",
	 "The error of the mid-time is beyond a sixth of the period: the count of orbits can't be trusted."},
    [FLAG_DOUBTFUL_POSITION] = {"doubtful_position",
				"The position disagrees with that of another planet of the same star."},
    [FLAG_DOUBTFUL_VALUES] = {"doubtful_values",
			      "Some stored value can't be true and was left out; see the target's own page."},
    [FLAG_GRAZING] = {"grazing",
		      "The planet never covers the star's edge wholly from within: there is no flat part."},
    [FLAG_SIBLING_IN_WINDOW] = {"sibling_in_window",
				"Another planet of the same star transits within this window."},
    [FLAG_SIBLINGS_UNKNOWN] =
	{"siblings_unknown",
	 "Another planet of the same star has no usable ephemeris: whether it transits within this "
	 "window is not known."},
    [FLAG_CROSSES_NOON] = {"crosses_noon",
			   "The event runs past noon: the rest of it is listed with the neighbouring night."},
    [FLAG_OTHER_NIGHT] =
	{"predicted_other_night",
	 "The prediction falls into a neighbouring night; the error of the mid-time reaches into this one."},
    [FLAG_SUN_UP] = {"sun_up_do_not_slew",
		     "The Sun is up during part of the reserve: do not slew or open then."},
    [FLAG_SUN_NEAR] = {"sun_near",
		       "The target is within 45 degrees of the Sun while the Sun is up: never point there."},
    [FLAG_MAGNITUDE_UNKNOWN] = {"magnitude_unknown",
				"The target has no magnitude that can be turned into the observing band: "
				"nothing is forecast of its noise and its timing."},
    [FLAG_MAGNITUDE_ASSUMED] = {"magnitude_assumed",
				"The magnitude in the observing band is estimated from another band's: noise "
				"may be off by a tenth to a third."},
    [FLAG_DEPTH_UNKNOWN] = {"depth_unknown",
			    "The depth of the event is not known: nothing is forecast of its timing."},
    [FLAG_SATURATED] = {"saturated",
			"At some usable moment the star's image comes too near to the detector's "
			"full well: defocus, or expose less."},
    [FLAG_EXPOSURE_LONG] = {"exposure_long",
			    "One exposure takes more than a fifth of the ingress and blurs it."},
    [FLAG_NEIGHBOUR_DILUTED] = {"neighbour_diluted", "Light of a neighbouring star falls into the aperture: "
						     "the event looks shallower by 1 / (1 + its share)."},
    [FLAG_SKY_ASSUMED] = {"sky_assumed",
			  "The site has no dark sky brightness in this band: that of a very dark site stands "
			  "for it."},
    [FLAG_OPTICS_ASSUMED] = {"optics_assumed",
			     "The telescope lacks numbers that the noise depends on; usual ones stand for "
			     "them."},
    [FLAG_GOAL_MET] =
	{"goal_met",
	 "No goal of the target is open for this event: met, past or of another band; it is worth nothing."},
};

void flags_text(uint32_t bits, char *out, size_t n)
{
	size_t used = 0;
	if (n == 0)
		return;
	for (int f = 0; f < FLAG_COUNT; f++) {
		if (!(bits & FLAG_BIT(f)))
			continue;
		const size_t length = strlen(flag_rules[f].word);
		if (used + length + 2 > n)
			break;
		if (used > 0)
			out[used++] = ';';
		memcpy(out + used, flag_rules[f].word, length);
		used += length;
	}
	out[used] = '\0';
}
