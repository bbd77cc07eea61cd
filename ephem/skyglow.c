/* SPDX-License-Identifier: MIT */
#include "ephem/skyglow.h"

#include "ephem/units.h"

#include <math.h>
#include <stdbool.h>

#define NL_AT_0 34.08
#define NL_OFFSET 20.7233
#define NL_PER_MAG 0.92104

/* By band U B V R I. */
static const struct {
	double twilight[3]; /* Patat, Ugolnikov & Postylyakov 2006, Table 1 */
	double dark_mag;    /* Patat 2003 */
	double
	    sun_fainter_than_v; /* the Sun's magnitude here less its V (Ramirez et al. 2012, from memory) */
} sky_table[BAND_SKY_COUNT] = {
    [BAND_U] = {{11.78, 1.376, -0.039}, 22.3, 0.653 + 0.166},
    [BAND_B] = {{11.84, 1.411, -0.041}, 22.6, 0.653},
    [BAND_V] = {{11.84, 1.518, -0.057}, 21.6, 0.0},
    [BAND_R] = {{11.40, 1.567, -0.064}, 20.9, -0.352},
    [BAND_I] = {{10.93, 1.470, -0.062}, 19.7, -0.702},
};

static bool has_sky(enum band_id band)
{
	return band >= 0 && band < BAND_SKY_COUNT;
}

double sky_nl(double mag_arcsec2)
{
	return NL_AT_0 * exp(NL_OFFSET - NL_PER_MAG * mag_arcsec2);
}

double sky_mag(double nl)
{
	return (NL_OFFSET - log(nl / NL_AT_0)) / NL_PER_MAG;
}

/* Light's way through what scatters it; only for this model. */
static double scatter_airmass(double zenith_deg)
{
	const double s = sin(zenith_deg * DEG_RAD);
	return 1.0 / sqrt(1.0 - 0.96 * s * s);
}

static double transmission(double extinction_mag, double airmass)
{
	return pow(10.0, -0.4 * extinction_mag * airmass);
}

double sky_dark_nl(double zenith_mag, double zenith_deg, double extinction_mag)
{
	const double x = scatter_airmass(zenith_deg);
	return sky_nl(zenith_mag) * transmission(extinction_mag, x - 1.0) * x;
}

double sky_moon_nl(double phase_deg, double sep_deg, double zenith_deg, double moon_zenith_deg,
		   double extinction_mag)
{
	if (moon_zenith_deg >= 90.0)
		return 0.0;
	const double a = fabs(phase_deg), c = cos(sep_deg * DEG_RAD);
	const double moon = pow(10.0, -0.4 * (3.84 + 0.026 * a + 4e-9 * a * a * a * a));
	const double scattered = pow(10.0, 5.36) * (1.06 + c * c) + pow(10.0, 6.15 - sep_deg / 40.0);
	return scattered * moon * transmission(extinction_mag, scatter_airmass(moon_zenith_deg)) *
	       (1.0 - transmission(extinction_mag, scatter_airmass(zenith_deg)));
}

double sky_twilight_mag(enum band_id band, double sun_depression_deg)
{
	if (!has_sky(band) ||
	    !(sun_depression_deg >= TWILIGHT_FROM_DEG && sun_depression_deg <= TWILIGHT_TO_DEG))
		return NAN;
	const double d = sun_depression_deg - TWILIGHT_FROM_DEG, *a = sky_table[band].twilight;
	return a[0] + d * (a[1] + d * a[2]);
}

double sky_phase_deg(double lit)
{
	return acos(2.0 * lit - 1.0) / DEG_RAD;
}

double sky_dark_default(enum band_id band)
{
	return has_sky(band) ? sky_table[band].dark_mag : NAN;
}

double sky_twilight_nl(enum band_id band, double sun_depression_deg)
{
	if (!has_sky(band))
		return NAN;
	if (sun_depression_deg >= TWILIGHT_OVER_DEG)
		return 0.0;
	if (sun_depression_deg > TWILIGHT_TO_DEG)
		return sky_twilight_nl(band, TWILIGHT_TO_DEG) * (TWILIGHT_OVER_DEG - sun_depression_deg) /
		       (TWILIGHT_OVER_DEG - TWILIGHT_TO_DEG);
	return sky_nl(sky_twilight_mag(band, sun_depression_deg)) - sky_nl(sky_table[band].dark_mag);
}

static void add_moon(struct skyglow *out, const struct skyglow_input *in, double extinction_mag)
{
	if (in->moon_alt_deg <= 0.0)
		return;
	const double v = sky_moon_nl(in->moon_phase_deg, in->moon_sep_deg, in->zenith_deg,
				     90.0 - in->moon_alt_deg, extinction_mag);
	out->moon_nl = v * exp(-NL_PER_MAG * sky_table[out->sky_band].sun_fainter_than_v);
	if (in->moon_sep_deg < SKY_NEAR_MOON_DEG)
		out->limits |= SKY_NEAR_MOON;
	if (fabs(in->moon_phase_deg) < SKY_SURGE_DEG)
		out->limits |= SKY_MOON_SURGE;
	if (out->sky_band != BAND_V)
		out->limits |= SKY_MOON_BAND;
	if (out->limits & SKY_TWILIGHT)
		out->limits |= SKY_TWILIGHT_MOON;
}

struct skyglow skyglow(const struct skyglow_input *in)
{
	struct skyglow out = {.mag_arcsec2 = NAN, .dark_nl = NAN, .sky_band = BAND_NONE};
	if (in->band < 0 || in->band >= BAND_COUNT || !(in->zenith_deg >= 0.0 && in->zenith_deg < 90.0))
		return out;
	const double extinction_mag =
	    isnan(in->extinction_mag) ? bands[in->band].extinction_mag : in->extinction_mag;
	out.sky_band = bands[in->band].sky;
	if (out.sky_band != in->band)
		out.limits |= SKY_BAND_STANDS_FOR;
	if (isnan(in->dark_zenith_mag))
		out.limits |= SKY_DARK_ASSUMED;
	out.dark_nl =
	    sky_dark_nl(isnan(in->dark_zenith_mag) ? sky_table[out.sky_band].dark_mag : in->dark_zenith_mag,
			in->zenith_deg, extinction_mag);
	const double depression_deg = -in->sun_alt_deg;
	if (depression_deg < TWILIGHT_FROM_DEG)
		out.limits |= SKY_TWILIGHT_BRIGHT;
	if (depression_deg < TWILIGHT_OVER_DEG)
		out.limits |= SKY_TWILIGHT;
	out.twilight_nl = sky_twilight_nl(out.sky_band, depression_deg);
	add_moon(&out, in, extinction_mag);
	out.mag_arcsec2 = sky_mag(out.dark_nl + out.moon_nl + out.twilight_nl);
	return out;
}
