/* SPDX-License-Identifier: MIT
 * How bright the sky is behind a star: the site's dark sky, scattered moonlight, twilight; added as light, not as magnitudes.
 *
 * Dark sky and moonlight: Krisciunas & Schaefer 1991, PASP 103, 1033, eqs 1 (unit), 2 (dark sky away from the zenith, number from memory), 8, 9, 15 (Moon); V band, measured
 * at one high dry site under a clear sky; stated accuracy 8 to 23 % of the moonlight. In another band the same formulas are taken with that band's extinction, which says how
 * much is scattered, and the Sun's colour (Ramirez et al. 2012, ApJ 752, 5, from memory): our own extension, no accuracy claimed, too faint in U and B; flagged.
 * Twilight: Patat, Ugolnikov & Postylyakov 2006, A&A 455, 385, Table 1: zenith over Paranal, Sun 5 to 15 deg below the horizon, scatter 0.12 (B) to 0.40 (I) mag. A low site
 * has about 30 % more; nearer to the Sun than the zenith it is brighter, which nobody's formula here says. */
#ifndef WANE_EPHEM_SKYGLOW_H
#define WANE_EPHEM_SKYGLOW_H

#include "ephem/bands.h"

#include <stdint.h>

/* What limits an answer. */
enum sky_limit {
	SKY_BAND_STANDS_FOR = 1 << 0, /* the observing band is none of U B V R I: its nearest one is described */
	SKY_DARK_ASSUMED = 1 << 1,    /* no dark brightness of the site: Paranal's stands for it, darker than most */
	SKY_NEAR_MOON = 1 << 2,	      /* within 10 deg: brighter than said (aureole) */
	SKY_MOON_BAND = 1 << 3,	      /* moonlight in another band than V */
	SKY_MOON_SURGE = 1 << 4,      /* within 7 deg of full: up to 35 % more moonlight (from memory) */
	SKY_TWILIGHT = 1 << 5,	      /* twilight is in it: the zenith's stands for every direction */
	SKY_TWILIGHT_MOON = 1 << 6,   /* Moon and twilight together: each model was made without the other */
	SKY_TWILIGHT_BRIGHT = 1 << 7, /* Sun less than 5 deg down: no answer, too bright */
};
#define SKY_NEAR_MOON_DEG 10.0
#define SKY_SURGE_DEG 7.0
#define TWILIGHT_FROM_DEG 5.0 /* depressions of the Sun between which the twilight formula holds */
#define TWILIGHT_TO_DEG 15.0
#define TWILIGHT_OVER_DEG 16.0 /* from here on the dark sky alone */

struct skyglow_input {
	enum band_id band;
	double zenith_deg;	  /* of the star, 0..90 */
	double sun_alt_deg;
	double moon_alt_deg;	  /* at or below 0: no moonlight, and the next two don't matter */
	double moon_sep_deg;	  /* star to Moon, 0..180 */
	double moon_phase_deg;	  /* phase angle Sun-Moon-Earth: 0 full, 180 new; the sign doesn't matter */
	double extinction_mag;	  /* per airmass; NAN: the band's */
	double dark_zenith_mag;	  /* the site's moonless zenith in the sky band [mag/arcsec2]; NAN: sky_dark_default */
};
/* Parts in nanolamberts of a V sky of the same magnitude (sky_nl), which is a linear unit in every band. */
struct skyglow {
	double mag_arcsec2; /* all together, Vega system, in sky_band; NAN: too bright, below the horizon, or an input is NAN */
	double dark_nl, moon_nl, twilight_nl;
	enum band_id sky_band; /* one of U B V R I */
	uint32_t limits;       /* enum sky_limit */
};
struct skyglow skyglow(const struct skyglow_input *in);

/* 34.08 exp(20.7233 - 0.92104 mag) and back (eq. 1). */
double sky_nl(double mag_arcsec2);
double sky_mag(double nl);
/* Dark sky at a zenith distance [nL] from the zenith's [mag]: B 10^(-0.4 k (X - 1)) X, X = (1 - 0.96 sin^2 Z)^(-1/2). */
double sky_dark_nl(double zenith_mag, double zenith_deg, double extinction_mag);
/* Moonlight scattered into a star's direction [nL], V band; 0 when the Moon is not up (moon_zenith_deg at or above 90). */
double sky_moon_nl(double phase_deg, double sep_deg, double zenith_deg, double moon_zenith_deg, double extinction_mag);
/* The twilight formula alone [mag/arcsec2]: zenith, night sky included as it was measured; U B V R I, Sun 5 to 15 deg down, else NAN: its parabola turns over
 * soon after. */
double sky_twilight_mag(enum band_id band, double sun_depression_deg);
/* What twilight adds to a dark sky [nL]: the formula less Paranal's dark sky. The formula is still 0.2 to 0.7 mag above the dark sky at 15 deg and says nothing beyond,
 * while the night level is met near 15 to 16 deg (same paper): what is left at 15 deg is let fade in a straight line to 0 at 16 deg, so that a night has no step in it.
 * NAN below 5 deg. */
double sky_twilight_nl(enum band_id band, double sun_depression_deg);
/* Phase angle of a Moon that is lit to a share of its disc [deg, 0 full .. 180 new]: lit = (1 + cos phase) / 2. NAN outside 0..1. */
double sky_phase_deg(double lit);
/* Moonless zenith over Paranal at solar maximum [mag/arcsec2] (Patat 2003, A&A 400, 1183); U B V R I, else NAN. A rural site has about 21, a suburb 19 to 20 in V (from
 * memory). */
double sky_dark_default(enum band_id band);

#endif
