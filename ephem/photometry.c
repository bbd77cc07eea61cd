/* SPDX-License-Identifier: MIT */
#include "ephem/photometry.h"

#include "ephem/units.h"

#include <math.h>

#define DIGITISING 0.28867513459481287 /* 1 / sqrt(12): spread of an even distribution one step wide */
#define GAUSS_DISC 0.60056120439322495 /* 1 / (2 sqrt(ln 2)) */
#define HC_K_NM_K 1.438776877e7	       /* second radiation constant h c / k (SI 2019) */

static double said(double value, double otherwise, uint32_t bit, uint32_t *assumed)
{
	if (!isnan(value))
		return value;
	*assumed |= bit;
	return otherwise;
}

struct optics optics_of(const struct telescope *t)
{
	struct optics o = {.band = band_parse(t->band), .aperture_m = t->aperture_m};
	uint32_t *const a = &o.assumed;
	const double obstruction = said(t->obstruction, 0.3, OPTICS_OBSTRUCTION, a);
	o.area_m2 = 0.25 * PI * t->aperture_m * t->aperture_m * (1.0 - obstruction * obstruction);
	o.throughput = said(t->throughput, 0.35, OPTICS_THROUGHPUT, a);
	o.pixel_arcsec = said(t->pixel_arcsec, 1.0, OPTICS_PIXEL, a);
	o.read_noise_e = said(t->read_noise_e, 8.0, OPTICS_READ_NOISE, a);
	o.digitising_e = DIGITISING * said(t->gain_e_adu, 0.0, OPTICS_GAIN, a);
	o.dark_e_s = said(t->dark_e_s, 0.0, OPTICS_DARK, a);
	o.full_well_e = said(t->full_well_e, 60000.0, OPTICS_FULL_WELL, a);
	const double defocus_px = said(t->defocus_px, 0.0, OPTICS_FOCUS, a);
	const double seeing_px = SEEING_ARCSEC / o.pixel_arcsec;
	o.image_px = hypot(defocus_px, GAUSS_DISC * seeing_px);
	o.aperture_px = defocus_px + 1.5 * seeing_px;
	o.background_px = 3.0 * PI * o.aperture_px * o.aperture_px;
	o.dead_s = said(t->dead_s, 5.0, OPTICS_DEAD, a);
	o.comparison_stars = COMPARISON_STARS;
	o.scintillation_c = SCINTILLATION_C;
	o.red_noise_ppt = said(t->red_noise_ppt, 0.5, OPTICS_RED_NOISE, a);
	return o;
}

/* Electrons per second at magnitude 0, of a spectrum like that of one band seen in the optics' own. */
static double zero_rate_e_s(const struct optics *o, enum band_id spectrum)
{
	if (o->band < 0 || o->band >= BAND_COUNT)
		return NAN;
	return band_photons(spectrum) * bands[o->band].width_nm * o->area_m2 * o->throughput;
}

double photometry_rate_e_s(const struct optics *o, double mag, double airmass, double extinction_mag)
{
	const double zero = zero_rate_e_s(o, o->band);
	if (isnan(zero))
		return NAN;
	const double k = isnan(extinction_mag) ? bands[o->band].extinction_mag : extinction_mag;
	return zero * pow(10.0, -0.4 * (mag + k * airmass));
}

/* Per pixel. The sky's magnitude is one of U B V R I: its light per nanometre is that band's. */
static double sky_rate_e_s(const struct optics *o, double sky_mag_arcsec2)
{
	if (o->band < 0 || o->band >= BAND_COUNT)
		return NAN;
	return zero_rate_e_s(o, bands[o->band].sky) * pow(10.0, -0.4 * sky_mag_arcsec2) * o->pixel_arcsec *
	       o->pixel_arcsec;
}

double photometry_peak_e(double electrons, double image_px)
{
	return electrons / (PI * image_px * image_px);
}

double photometry_counting(const struct optics *o, double electrons, double sky_e, double dark_e)
{
	const double pixels = PI * o->aperture_px * o->aperture_px;
	const double pixel =
	    sky_e + dark_e + o->read_noise_e * o->read_noise_e + o->digitising_e * o->digitising_e;
	return sqrt(electrons + pixels * (1.0 + pixels / o->background_px) * pixel) / electrons;
}

double photometry_scintillation(double c, double aperture_m, double exposure_s, double airmass,
				double height_m)
{
	return sqrt(10e-6 * c * c * pow(aperture_m, -4.0 / 3.0) / exposure_s * airmass * airmass * airmass) *
	       exp(-height_m / SCALE_HEIGHT_M);
}

double photometry_per_minute(double exposure, double exposure_s, double dead_s)
{
	return exposure * sqrt((exposure_s + dead_s) / 60.0);
}

struct noise photometry_noise(const struct optics *o, const struct sight *s, double exposure_s)
{
	struct noise n = {.counting = NAN, .scintillation = NAN, .exposure = NAN, .minute_ppt = NAN};
	const double star = photometry_rate_e_s(o, s->mag, s->airmass, s->extinction_mag);
	const double sky = sky_rate_e_s(o, s->sky_mag_arcsec2);
	if (!(star > 0.0 && sky >= 0.0 && s->airmass >= 1.0 && exposure_s > 0.0 && s->neighbour >= 0.0)) {
		n.electrons = n.sky_e = n.dark_e = n.peak_e = n.duty = NAN;
		return n;
	}
	n.electrons = star * (1.0 + s->neighbour) * exposure_s;
	n.sky_e = sky * exposure_s;
	n.dark_e = o->dark_e_s * exposure_s;
	n.peak_e = photometry_peak_e(n.electrons, o->image_px) + n.sky_e + n.dark_e;
	n.saturated = n.peak_e > PEAK_SHARE * o->full_well_e;
	n.counting = photometry_counting(o, n.electrons, n.sky_e, n.dark_e);
	n.scintillation =
	    photometry_scintillation(o->scintillation_c, o->aperture_m, exposure_s, s->airmass, s->height_m);
	const double light = o->comparison_stars,
		     flicker = o->comparison_count > 0.0 ? o->comparison_count : light;
	n.exposure = hypot(n.counting * sqrt(light > 0.0 ? 1.0 + 1.0 / light : 1.0),
			   n.scintillation * sqrt(light > 0.0 ? 1.0 + 1.0 / flicker : 1.0));
	n.duty = exposure_s / (exposure_s + o->dead_s);
	n.minute_ppt = 1e3 * photometry_per_minute(n.exposure, exposure_s, o->dead_s);
	return n;
}

static double rounded_down(double exposure_s)
{
	const double step = exposure_s < 10.0 ? 0.5 : exposure_s < 30.0 ? 1.0 : 5.0;
	return fmax(floor(exposure_s / step) * step, EXPOSURE_MIN_S);
}

struct exposure_choice photometry_exposure(const struct optics *o, const struct sight *s, double ingress_s)
{
	const struct noise second = photometry_noise(o, s, 1.0);
	if (isnan(second.peak_e))
		return (struct exposure_choice){.exposure_s = NAN};
	/* the peak grows with the time */
	const double full_s = PEAK_SHARE * o->full_well_e / second.peak_e;
	const double blur_s = isnan(ingress_s) ? INFINITY : EXPOSURE_INGRESS_SHARE * ingress_s;
	const double longest_s = fmin(fmin(full_s, blur_s), EXPOSURE_MAX_S);
	return (struct exposure_choice){.exposure_s = rounded_down(longest_s),
					.saturates = full_s < EXPOSURE_MIN_S,
					.blurs = blur_s < EXPOSURE_MIN_S};
}

double photometry_depth_snr(double depth_ppt, double minute_ppt, double in_min, double out_min,
			    double floor_ppt)
{
	if (!(in_min > 0.0 && out_min > 0.0))
		return isnan(in_min) || isnan(out_min) ? NAN : 0.0;
	return depth_ppt /
	       sqrt(minute_ppt * minute_ppt * (1.0 / in_min + 1.0 / out_min) + floor_ppt * floor_ppt);
}

double photometry_diluted(double depth, double neighbour)
{
	return depth / (1.0 + neighbour);
}

/* Flux density of a black body per frequency, up to a factor. */
static double black_body(double wavelength_nm, double teff_k)
{
	return 1.0 /
	       (wavelength_nm * wavelength_nm * wavelength_nm * expm1(HC_K_NM_K / (wavelength_nm * teff_k)));
}

struct band_mag photometry_mag(double mag, enum band_id of, enum band_id in, double teff_k)
{
	struct band_mag out = {.mag = NAN, .assumed = true};
	if (of < 0 || of >= BAND_COUNT || in < 0 || in >= BAND_COUNT)
		return out;
	const double from_nm = bands[of].wavelength_nm, to_nm = bands[in].wavelength_nm;
	const double zeros = bands[in].zero_jy / bands[of].zero_jy;
	if (of == in)
		out = (struct band_mag){.mag = mag, .assumed = in == BAND_CLEAR};
	else if (teff_k > 0.0)
		out.mag = mag + 2.5 * log10(zeros * black_body(from_nm, teff_k) / black_body(to_nm, teff_k));
	else if (fabs(to_nm - from_nm) <= 0.15 * fmin(to_nm, from_nm))
		out.mag = mag + 2.5 * log10(zeros);
	return out;
}
