/* SPDX-License-Identifier: MIT
 * What a telescope can measure of a star's light in an exposure and in a minute, and how long to expose. Noise is a share of the star's light, in parts per thousand
 * (ppt) where a name says so. A forecast of white noise: what clouds, flat fields, drifts and guiding add is only in the noise floor that the telescope is given.
 *
 * Sources. Counting: Merline & Howell 1995, Exp. Astron. 6, 163 (the CCD equation; its form from memory). Scintillation: Osborn, Foehring, Dhillon & Wilson 2015, MNRAS 452,
 * 1707 (Young's formula with C_Y; from memory, equation number not checked). White noise and a floor: the idea of Pont, Zucker & Queloz 2006, MNRAS 373, 231 (from memory).
 * Defaults and limits marked `practice` are common practice, no source. Rates are right to about 20 % where throughput and extinction are. */
#ifndef WANE_EPHEM_PHOTOMETRY_H
#define WANE_EPHEM_PHOTOMETRY_H

#include "ephem/bands.h"
#include "ephem/model.h"

#include <stdbool.h>
#include <stdint.h>

/* What was assumed because the telescope doesn't say it (practice). */
enum optics_assumed {
	OPTICS_OBSTRUCTION = 1 << 0, /* 0.3 of the diameter */
	OPTICS_THROUGHPUT = 1 << 1,  /* 0.35 */
	OPTICS_PIXEL = 1 << 2,	     /* 1 arcsec */
	OPTICS_GAIN = 1 << 3,	     /* no digitising noise */
	OPTICS_READ_NOISE = 1 << 4,  /* 8 e- */
	OPTICS_DARK = 1 << 5,	     /* 0 */
	OPTICS_FULL_WELL = 1 << 6,   /* 60,000 e- */
	OPTICS_FOCUS = 1 << 7,	     /* in focus */
	OPTICS_DEAD = 1 << 8,	     /* 5 s */
	OPTICS_RED_NOISE = 1 << 9,   /* 0.5 ppt; 0.3 to 1 is usual for small telescopes (from memory) */
};
#define SEEING_ARCSEC 2.5     /* full width at half maximum (practice) */
#define SCINTILLATION_C 1.5   /* C_Y, median of good sites: 1.3 to 1.7 (Osborn et al. 2015, from memory) */
#define COMPARISON_STARS 4.0  /* practice */
#define SCALE_HEIGHT_M 8000.0 /* of the air, in Young's formula */

/* A telescope as the forecast needs it: every number there. */
struct optics {
	enum band_id band;   /* BAND_NONE: not given or not known; nothing is forecast until the caller sets one */
	double aperture_m;   /* diameter; NAN: nothing is forecast */
	double area_m2;	     /* without the obstruction */
	double throughput;   /* optics, filter, detector */
	double pixel_arcsec;
	double read_noise_e; /* per pixel, as are the next three */
	double digitising_e; /* 0.289 x gain: the spread of a step of the converter */
	double dark_e_s;
	double full_well_e;
	double image_px;     /* radius of the disc of even light that has the image's peak */
	double aperture_px;  /* radius of the measuring aperture */
	double background_px; /* number of pixels from which the background is taken */
	double dead_s;	     /* between exposures */
	double comparison_stars; /* as many as bright as the star have their light; 0: their noise is left out */
	double comparison_count; /* as many of one light flicker as little together; 0: as comparison_stars. The air troubles faint stars no more than bright ones */
	double scintillation_c;  /* C_Y */
	double red_noise_ppt;    /* floor of a whole event */
	uint32_t assumed;	 /* enum optics_assumed */
};
/* image_px = hypot(defocus, 0.6006 seeing): a Gaussian has the peak of a disc of radius FWHM / (2 sqrt(ln 2)); aperture_px = defocus + 1.5 seeing,
 * background_px = 3 apertures (practice). */
struct optics optics_of(const struct telescope *t);

/* What is looked at, and through what. */
struct sight {
	double mag;		/* of the star in the optics' band */
	double airmass;		/* >= 1 */
	double extinction_mag;	/* per airmass; NAN: the band's */
	double sky_mag_arcsec2; /* as seen through the air: no extinction is taken off it; in the band's sky band (skyglow.h) */
	double neighbour;	/* light of stars in the aperture that aren't the target, over the target's; 0 none */
	double height_m;	/* of the site */
};
struct noise {
	double electrons;	/* of star and neighbours in an exposure */
	double sky_e, dark_e;	/* per pixel */
	double peak_e;		/* brightest pixel, sky and dark in it */
	double counting, scintillation; /* of one exposure of one star, shares of its light */
	double exposure;	/* both and the comparison stars, share of the light */
	double duty;		/* share of the time in which light is gathered */
	double minute_ppt;	/* per minute of the clock */
	bool saturated;		/* peak above 60 % of the full well (practice) */
};
#define PEAK_SHARE 0.6
/* Numbers are NAN where the optics have no band or aperture, exposure_s is not above 0, or the sight has a NAN or an airmass below 1. */
struct noise photometry_noise(const struct optics *o, const struct sight *s, double exposure_s);

/* Electrons per second of a star seen through the air: phi0 width area throughput 10^(-0.4 (m + k X)). */
double photometry_rate_e_s(const struct optics *o, double mag, double airmass, double extinction_mag);
/* Light of a disc of even light spread over its pixels: electrons / (pi r^2). */
double photometry_peak_e(double electrons, double image_px);
/* sqrt(N + npix (1 + npix / nB) (sky + dark + RN^2 + digitising^2)) / N. */
double photometry_counting(const struct optics *o, double electrons, double sky_e, double dark_e);
/* sqrt(10e-6 C^2 D^(-4/3) / t X^3) exp(-h / 8000 m); long exposures, D [m], t [s]. */
double photometry_scintillation(double c, double aperture_m, double exposure_s, double airmass, double height_m);
/* Noise of an exposure as noise per minute: exposure x sqrt((t + dead) / 60 s). */
double photometry_per_minute(double exposure, double exposure_s, double dead_s);

/* The longest exposure that keeps the peak under 60 % of the full well and takes at most a fifth of the ingress (ingress_s NAN: no such limit), within 1 to 120 s
 * (practice), rounded down to 0.5 s below 10 s, 1 s below 30 s, 5 s above. The longest one has the best duty and the least read noise. NAN as photometry_noise. */
struct exposure_choice {
	double exposure_s;
	bool saturates;	/* even 1 s does */
	bool blurs;	/* even 1 s is more than a fifth of the ingress */
};
struct exposure_choice photometry_exposure(const struct optics *o, const struct sight *s, double ingress_s);
#define EXPOSURE_MIN_S 1.0
#define EXPOSURE_MAX_S 120.0
#define EXPOSURE_INGRESS_SHARE 0.2

/* Depth over its error: depth / sqrt(sigma_1^2 (1 / in + 1 / out) + floor^2), minutes of data inside and outside the event. 0 without data on either side. */
double photometry_depth_snr(double depth_ppt, double minute_ppt, double in_min, double out_min, double floor_ppt);
/* Depth that is left beside the light of neighbours: depth / (1 + F). */
double photometry_diluted(double depth, double neighbour);

/* A magnitude in another band. The same band: as it is. With an effective temperature: a black body of it laid through the magnitude (the Sun's colours come out within 0.13 mag;
 * dwarfs below 4000 K up to a magnitude off between V and I). Without: only between bands whose wavelengths lie within 15 %, as if the spectrum were flat in f_nu between them (0.3 mag). Else NAN. `assumed`
 * for all but the first, and wherever clear is meant: no two clear bands are alike. */
struct band_mag {
	double mag;
	bool assumed;
};
struct band_mag photometry_mag(double mag, enum band_id of, enum band_id in, double teff_k);

#endif
