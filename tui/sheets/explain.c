/* SPDX-License-Identifier: MIT
 * Light, sky, exposure, noise, depth and timing. */
#include "tui/sheets/explain.h"

#include "db/text_clean.h"
#include "ephem/number_text.h"
#include "tui/sheets/explain_parts.h"
#include "tui/sheets/text.h"

#include <math.h>

void explain_step(const struct explained *e, FILE *to, const char *title, const char *sentence)
{
	(void)e;
	fprintf(to, "\n%s\n  %s\n", title, sentence);
}

void explain_words(const struct explained *e, FILE *to, const char *name, const char *words, const char *what)
{
	if (e->plain)
		fprintf(to, "  %s: %s. %s\n", name, words, what);
	else
		fprintf(to, "    %-22s %-26s %s\n", name, words, what);
}

void explain_number(const struct explained *e, FILE *to, const char *name, double value, int decimals,
		    const char *unit, const char *what)
{
	char number[NUMBER_TEXT_MAX] = "-", words[NUMBER_TEXT_MAX + 24];
	if (isfinite(value))
		number_text_fixed(value, decimals, number);
	snprintf(words, sizeof words, "%s%s%s", number, unit[0] && isfinite(value) ? " " : "",
		 isfinite(value) ? unit : "");
	explain_words(e, to, name, words, what);
}

static const char *band_name(enum band_id id)
{
	return id >= 0 && id < BAND_COUNT ? bands[id].name : "no known band";
}

static void light(const struct explained *e, FILE *to)
{
	const struct forecast_explain *x = e->x;
	explain_step(
	    e, to, "1. Light of the star",
	    "Electrons a second: phi0 x width x area x throughput x 10^(-0.4 (m + k X)); zero points of "
	    "Bessell, Castelli & Plez 1998, AB by definition.");
	explain_number(e, to, "catalogue magnitude", x->catalogue_mag, 2, band_name(x->catalogue_band),
		       "As stored with the target.");
	explain_number(e, to, "magnitude", x->mag.mag, 2, band_name(x->band),
		       !isfinite(x->mag.mag) ? "It can't be turned into the observing band honestly."
		       : x->mag.assumed	     ? "In the observing band: estimated from the catalogue's."
					     : "In the observing band.");
	explain_number(e, to, "airmass", x->mid.airmass, 3, "", "At the predicted mid-time.");
	explain_number(e, to, "extinction", x->extinction_mag, 3, "mag", "Per airmass.");
	explain_number(e, to, "light", x->star_e_s, 0, "e-/s", "Of the star alone at the mid-time.");
	if (x->neighbour > 0.0)
		explain_number(e, to, "neighbours", x->neighbour, 3, "of the star",
			       "Light of other stars in the aperture.");
}

static double magnitude_of(double nl)
{
	return nl > 0.0 ? sky_mag(nl) : (double)NAN;
}

static void sky(const struct explained *e, FILE *to)
{
	const struct forecast_explain *x = e->x;
	const struct skyglow *g = &x->mid.sky;
	const char *unit = "mag/arcsec2";
	explain_step(
	    e, to, "2. Sky behind it at the mid-time",
	    "Light is added, not magnitudes. Dark sky and Moon: Krisciunas & Schaefer 1991; twilight: Patat, "
	    "Ugolnikov & Postylyakov 2006.");
	explain_number(e, to, "dark sky", magnitude_of(g->dark_nl), 2, unit,
		       g->limits & SKY_DARK_ASSUMED
			   ? "The site says none: that of a very dark site stands for it."
			   : "The site's zenith, at this altitude.");
	explain_number(e, to, "moonlight", magnitude_of(g->moon_nl), 2, unit,
		       x->mid.moon_alt_deg > 0.0 ? "Scattered by the air." : "The Moon is down.");
	if (x->mid.moon_alt_deg > 0.0) {
		explain_number(e, to, "  Moon's distance", x->mid.moon_sep_deg, 1, "deg", "From the star.");
		explain_number(e, to, "  Moon's phase angle", x->mid.moon_phase_deg, 1, "deg",
			       "0 is full, 180 new.");
	}
	explain_number(e, to, "twilight", magnitude_of(g->twilight_nl), 2, unit,
		       g->limits & SKY_TWILIGHT ? "Zenith's, taken for every direction."
						: "The Sun is far down.");
	explain_number(e, to, "together", g->mag_arcsec2, 2, unit,
		       g->limits & SKY_TWILIGHT_BRIGHT ? "Too bright to say." : "Column sky_mag_arcsec2.");
}

static void exposure(const struct explained *e, FILE *to)
{
	const struct forecast_explain *x = e->x;
	char at[CLOCK_BYTES];
	text_clock(e->night, e->zone, x->exposure_at_d, true, at);
	explain_step(e, to, "3. Exposure",
		     "The longest that keeps the image's peak under 60 % of the full well and takes at most "
		     "a fifth of "
		     "the ingress, 1 to 120 s (common practice).");
	explain_number(e, to, "exposure", x->exposure_s, 1, "s",
		       x->exposure_given ? "The telescope's own." : "Chosen; column exposure_s.");
	if (x->exposure_given)
		explain_number(e, to, "would be chosen", x->choice.exposure_s, 1, "s",
			       x->choice.saturates ? "Even 1 s saturates." : "By the rule above.");
	explain_words(e, to, "at", at, "Where the star stands highest in the usable time.");
	explain_number(e, to, "peak", x->mid.noise.peak_e, 0, "e-",
		       x->mid.noise.saturated ? "Too near to the full well." : "Of a pixel at the mid-time.");
}

static void noise(const struct explained *e, FILE *to)
{
	const struct forecast_explain *x = e->x;
	const struct noise *n = &x->mid.noise;
	explain_step(e, to, "4. Noise",
		     "CCD equation: Merline & Howell 1995; scintillation: Osborn et al. 2015 (from memory); "
		     "per minute: "
		     "x sqrt((exposure + dead time) / 60 s).");
	explain_number(e, to, "electrons", n->electrons, 0, "e-",
		       "Of star and neighbours in an exposure, at the mid-time.");
	explain_number(e, to, "sky", n->sky_e, 1, "e-", "In a pixel.");
	explain_number(e, to, "counting", 1e3 * n->counting, 3, "ppt",
		       "Star, sky, dark current and read-out.");
	explain_number(e, to, "scintillation", 1e3 * n->scintillation, 3, "ppt",
		       "Of the air over this aperture.");
	explain_number(e, to, "comparison stars", x->optics.comparison_stars, 1, "",
		       "As many as bright as the target have their light; counting x sqrt(1 + 1 / these).");
	if (x->optics.comparison_count > 0.0)
		explain_number(e, to, "  flickering as", x->optics.comparison_count, 1, "",
			       "As many of one light; scintillation x sqrt(1 + 1 / these).");
	explain_number(e, to, "an exposure", 1e3 * n->exposure, 3, "ppt", "All of these.");
	explain_number(e, to, "duty", 100.0 * n->duty, 1, "%",
		       "Share of the time in which light is gathered.");
	explain_number(e, to, "a minute", n->minute_ppt, 3, "ppt", "At the mid-time.");
	explain_number(e, to, "a usable minute", x->noise_ppt_min, 3, "ppt",
		       "Averaged as information over the usable part; column noise_ppt_min.");
}

static void depth(const struct explained *e, FILE *to)
{
	const struct forecast_explain *x = e->x;
	explain_step(e, to, "5. Depth",
		     "depth / sqrt(1 / information in + 1 / information out + floor^2); the floor: idea of "
		     "Pont, Zucker & "
		     "Queloz 2006.");
	explain_number(e, to, "depth of the star", x->star_depth_ppt, 3, "ppt",
		       "Published; else from k with a darkened limb (Mandel & Agol 2002).");
	explain_number(e, to, "depth as seen", x->depth_ppt, 3, "ppt", "/ (1 + light of neighbours).");
	explain_number(e, to, "inside", x->in_min, 1, "min", "Usable between the middles of the limbs.");
	explain_number(e, to, "outside", x->out_min, 1, "min", "Usable before T1 and after T4.");
	explain_number(e, to, "white S/N", x->white_snr, 1, "", "Without the floor.");
	explain_number(e, to, "floor", x->optics.red_noise_ppt, 2, "ppt",
		       "Correlated noise of a whole event.");
	explain_number(e, to, "S/N", x->depth_snr, 1, "", "Column depth_snr.");
}

static void timing(const struct explained *e, FILE *to)
{
	const struct forecast_explain *x = e->x;
	explain_step(e, to, "6. Mid-time",
		     "Fisher information of a trapezoid with a rounded floor; fitted with it: depth, "
		     "duration, level, slope, "
		     "a step at a flip. White noise.");
	explain_number(e, to, "ideal", x->ideal_s, 1, "s",
		       "Everything covered, baseline known (Carter et al. 2008, Price & Rogers 2014).");
	explain_number(e, to, "as predicted", x->timing_s, 1, "s",
		       "With the usable time, if it comes when predicted; column timing_s.");
}

static void head(const struct explained *e, FILE *to)
{
	const struct window_event *ev = &e->window->event;
	const double t_d[3] = {ev->t1_d, ev->mid_d, ev->t4_d};
	static const char *const name[3] = {"T1", "mid", "T4"};
	char at[CLOCK_BYTES];
	text_cell(to, ev->prepared->target->name, NAME_CHARS_MAX, false);
	fprintf(to, ", %s of orbit %ld", ev->kind == KIND_TRANSIT ? "transit" : "occultation", ev->epoch);
	for (int i = 0; i < 3; i++) {
		text_clock(e->night, e->zone, t_d[i], true, at);
		fprintf(to, ", %s %s", name[i], at);
	}
	fputs("\nTelescope ", to);
	text_cell(to, e->night->telescope ? e->night->telescope->name : "", NAME_CHARS_MAX, false);
	fprintf(to, ", band %s\n", band_name(e->x->band));
	for (int f = 0; f < FLAG_COUNT; f++)
		if (e->x->flags & FLAG_BIT(f))
			fprintf(to, "%s: %s\n", flag_rules[f].word, flag_rules[f].sentence);
}

void explain_text(FILE *to, const struct explained *e)
{
	head(e, to);
	light(e, to);
	sky(e, to);
	exposure(e, to);
	noise(e, to);
	depth(e, to);
	timing(e, to);
	explain_cases(e, to);
	explain_information(e, to);
	explain_worth(e, to);
	explain_moments(e, to);
}
