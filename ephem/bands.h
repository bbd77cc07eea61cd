/* SPDX-License-Identifier: MIT
 * Photometric bands: one table with what the forecast needs of each.
 * Sources. Zero points of U B V R I (Vega) and their wavelengths: Bessell, Castelli & Plez 1998, A&A 333, 231, Table A2 (f_nu). g r i z: AB, 3631 Jy by definition
 * (Oke & Gunn 1983, ApJ 266, 713, from memory), wavelengths Fukugita et al. 1996, AJ 111, 1748 (from memory). clear: an unfiltered silicon detector, described by Gaia's G
 * (pivot wavelength, Vega zero point and equivalent width from memory; Riello et al. 2021, A&A 649, A3): right to about 20 %. Widths: full width at half maximum, from memory.
 * Extinction: common practice for a good dry site, no source; low sites lose about twice as much. */
#ifndef WANE_EPHEM_BANDS_H
#define WANE_EPHEM_BANDS_H

#include <stddef.h>

/* The first five are those in which the sky is described (skyglow.h). */
enum band_id {
	BAND_U,
	BAND_B,
	BAND_V,
	BAND_R,
	BAND_I,
	BAND_SKY_COUNT,
	BAND_SDSS_G = BAND_SKY_COUNT,
	BAND_SDSS_R,
	BAND_SDSS_I,
	BAND_SDSS_Z,
	BAND_CLEAR,
	BAND_COUNT,
	BAND_NONE = -1
};

struct band {
	const char *name;      /* U B V R I g r i z clear */
	double wavelength_nm;  /* effective */
	double width_nm;
	double zero_jy;        /* flux density of magnitude 0 [1e-26 W/m2/Hz] */
	double extinction_mag; /* per airmass, where the site has no value of its own */
	enum band_id sky;      /* the nearest of U B V R I, whose sky stands for this band's */
};
extern const struct band bands[BAND_COUNT];

/* The band of a name as people write it: the table's names, Rc Ic for R I, g' or gp and their like, clear white lum (any case), C L, and G (Gaia) for clear. Case
 * matters in single letters: R is Cousins', r the AB one. BAND_NONE for anything else, "" and NULL. */
enum band_id band_parse(const char *text);
/* Photons of a star of magnitude 0 above the air [1/(s m2 nm)]: f_nu / (h lambda). */
double band_photons(enum band_id id);

#endif
