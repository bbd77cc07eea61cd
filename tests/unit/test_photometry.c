/* SPDX-License-Identifier: MIT
 * Electrons, noise, exposures, depths, magnitudes in other bands. */
#include "ephem/photometry.h"

#include "ephem/limb.h"
#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>
#include <stdio.h>

/* Two telescopes worked through by hand with Merline & Howell 1995's equation, zero points of Bessell,
 * Castelli & Plez 1998 and the scintillation of Osborn et al. 2015 (C_Y 1.56, 2300 m, one star). */
static const struct case_row {
	enum band_id band;
	double aperture_m, hidden_m, throughput, pixel, read, gain, dark, pixels, background, dead;
	double mag, extinction, sky, exposure_s;
	double electrons, sky_e, variance, counting_ppm, all_ppm, minute_ppm, duty;
} case_rows[] = {
    {BAND_V, 0.40, 0.14, 0.35, 0.8,	 8,	1.0,	  0.1,	  706,	  2500,	  5,
     11.5,   0.12, 20.5, 60,   4.4641e5, 82.85, 5.8487e5, 1713.2, 2153.2, 2241.1, 0.923},
    {BAND_R, 1.0,  0.3,	 0.45, 0.5,	 5,   1.0, 0.02,  1257,	  4000,	  10,
     11.5,   0.09, 20.0, 30,   2.1663e6, NAN, NAN, 745.1, 1248.2, 1019.2, 0.75},
};

static struct optics optics_of_row(const struct case_row *r)
{
	struct telescope t = telescope_empty();
	t.aperture_m = r->aperture_m, t.obstruction = r->hidden_m / r->aperture_m,
	t.throughput = r->throughput;
	t.band = bands[r->band].name, t.pixel_arcsec = r->pixel, t.read_noise_e = r->read,
	t.gain_e_adu = r->gain;
	t.dark_e_s = r->dark, t.full_well_e = 60000.0, t.defocus_px = 5.0, t.dead_s = r->dead,
	t.red_noise_ppt = 0.4;
	struct optics o = optics_of(&t);
	assert_int_equal(o.assumed, 0);
	o.aperture_px = sqrt(r->pixels / PI), o.background_px = r->background;
	o.image_px = 5.0, o.comparison_stars = 0.0, o.scintillation_c = 1.56;
	return o;
}

static struct sight sight_of_row(const struct case_row *r)
{
	return (struct sight){.mag = r->mag,
			      .airmass = 1.3,
			      .extinction_mag = r->extinction,
			      .sky_mag_arcsec2 = r->sky,
			      .height_m = 2300.0};
}

static void noise_of_an_exposure(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof case_rows / sizeof *case_rows; i++) {
		const struct case_row *r = &case_rows[i];
		const struct optics o = optics_of_row(r);
		const struct sight s = sight_of_row(r);
		const struct noise n = photometry_noise(&o, &s, r->exposure_s);
		check_close("N", n.electrons / r->electrons, 1.0, 1.3e-5);
		check_close("counting", n.counting * 1e6, r->counting_ppm, 0.05001);
		check_close("all", n.exposure * 1e6, r->all_ppm, 0.05001);
		check_close("per minute", n.minute_ppt * 1e3, r->minute_ppm, 0.05001);
		check_close("duty", n.duty, r->duty, 5e-4);
		if (!isnan(r->sky_e)) {
			check_close("sky", n.sky_e, r->sky_e, 5e-3);
			check_close("variance", pow(n.counting * n.electrons, 2.0) / r->variance, 1.0, 1e-5);
			/* a disc of 5 pixels radius: 4.4641e5 / (25 pi) */
			check_close("peak", photometry_peak_e(n.electrons, 5.0), 5684.0, 0.5);
			check_close("peak and sky", n.peak_e, 5684.0 + 82.85 + 6.0, 0.5);
		}
	}
}

/* Osborn et al. 2015, MNRAS 452, 1707 (from memory), by hand; the last one is sqrt(10e-6) */
static const struct {
	double c, d, x, t, h, ppm, tolerance;
} scintillation_rows[] = {
    {1.5, 0.4, 1.0, 60, 0, 1128.00, 5e-3},
    {1.5, 0.4, 1.5, 60, 2300, 1554.48, 5e-3},
    {1.5, 1.0, 1.3, 30, 2300, 962.91, 5e-3},
    {1.0, 1.0, 1.0, 1, 0, 3162.278, 5e-4},
};

static void scintillation(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof scintillation_rows / sizeof *scintillation_rows; i++)
		check_close("scintillation",
			    1e6 * photometry_scintillation(scintillation_rows[i].c, scintillation_rows[i].d,
							   scintillation_rows[i].t, scintillation_rows[i].x,
							   scintillation_rows[i].h),
			    scintillation_rows[i].ppm, scintillation_rows[i].tolerance);
	/* Young 1967, AJ 72, 747, as Dravins et al. 1998, PASP 110, 610, use it, is known to fall short of
	 * the median (Osborn et al. 2015; Kornilov et al. 2012, A&A 546, A41): 702.44 ppm at the zenith, 0.4
	 * m, 60 s, sea level */
	const double young = 0.09 * pow(40.0, -2.0 / 3.0) / sqrt(2.0 * 60.0);
	check_close("Young", young * 1e6, 702.44, 5e-3);
	assert_true(photometry_scintillation(SCINTILLATION_C, 0.4, 60, 1.0, 0) > 1.3 * young);
}

/* Approximately normal: 12 even numbers. */
static double gaussian(struct rng *r)
{
	double sum = -6.0;
	for (int i = 0; i < 12; i++)
		sum += rng_unit(r);
	return sum;
}

/* The CCD equation against a simulated measurement: pixels with photon, sky and read noise, background taken
 * from other pixels. Counts are large, so that a normal distribution stands for Poisson's. */
static void counting_against_a_simulation(void **state)
{
	(void)state;
	struct rng r = rng_open("counting");
	struct optics o = optics_of_row(&case_rows[0]);
	enum { PIXELS = 50, BACKGROUND = 80, TRIALS = 6000 };
	o.aperture_px = sqrt(PIXELS / PI), o.background_px = BACKGROUND;
	const double star_e = 20000.0, sky_e = 400.0, dark_e = 100.0;
	const double pixel = sqrt(sky_e + dark_e + 64.0 + o.digitising_e * o.digitising_e);
	double sum = 0.0, sum2 = 0.0;
	for (int k = 0; k < TRIALS; k++) {
		double measured = star_e + sqrt(star_e) * gaussian(&r), background = 0.0;
		for (int i = 0; i < PIXELS; i++)
			measured += pixel * gaussian(&r);
		for (int i = 0; i < BACKGROUND; i++)
			background += pixel * gaussian(&r) / BACKGROUND;
		measured -= PIXELS * background;
		sum += measured, sum2 += measured * measured;
	}
	const double mean = sum / TRIALS, sd = sqrt(sum2 / TRIALS - mean * mean);
	/* 6000 trials fix a spread to 0.9 %; 4 of those */
	check_close("spread", sd / star_e / photometry_counting(&o, star_e, sky_e, dark_e), 1.0, 0.037);
}

/* A bright star measured against fainter ones: light over the sum of their light, each with its own counting
 * and its own flicker. By simulation; read-out and sky are left out, whose share grows for fainter stars. */
static void faint_comparisons_flicker_no_more(void **state)
{
	(void)state;
	enum { TRIALS = 20000, STARS = 2 };
	static const double share[STARS] = {0.10, 0.06};
	struct optics o = optics_of_row(&case_rows[0]);
	struct sight s = sight_of_row(&case_rows[0]);
	s.mag = 7.5, s.sky_mag_arcsec2 = 23.0, o.read_noise_e = 0.0, o.digitising_e = 0.0, o.dark_e_s = 0.0;
	const struct noise alone = photometry_noise(&o, &s, 20.0);
	const double counting = 1.0 / sqrt(alone.electrons), air = alone.scintillation;
	struct rng r = rng_open("flicker");
	double sum = 0.0, sum2 = 0.0;
	for (int k = 0; k < TRIALS; k++) {
		double light = 0.0;
		for (int i = 0; i < STARS; i++)
			light +=
			    share[i] * (1.0 + air * gaussian(&r) + counting / sqrt(share[i]) * gaussian(&r));
		const double measured = (1.0 + air * gaussian(&r) + counting * gaussian(&r)) / light;
		sum += measured, sum2 += measured * measured;
	}
	const double mean = sum / TRIALS, sd = sqrt(sum2 / TRIALS - mean * mean) / mean;
	o.comparison_stars = 0.16;
	o.comparison_count = 0.16 * 0.16 / (0.10 * 0.10 + 0.06 * 0.06);
	/* 20000 trials fix a spread to 0.5 %; 4 of those */
	check_close("spread", sd / photometry_noise(&o, &s, 20.0).exposure, 1.0, 0.02);
}

static void noise_has_its_parts(void **state)
{
	(void)state;
	struct optics o = optics_of_row(&case_rows[0]);
	struct sight s = sight_of_row(&case_rows[0]);
	const struct noise alone = photometry_noise(&o, &s, 60.0);
	o.comparison_stars = 1.0;
	check_close("one comparison star", photometry_noise(&o, &s, 60.0).exposure,
		    alone.exposure * sqrt(2.0), 1e-15);
	o.comparison_stars = 4.0;
	check_close("four", photometry_noise(&o, &s, 60.0).exposure, alone.exposure * sqrt(1.25), 1e-15);
	o.comparison_stars = 0.0;
	s.neighbour = 1.0;
	const struct noise blended = photometry_noise(&o, &s, 60.0);
	check_close("twice the light", blended.electrons, 2.0 * alone.electrons, 1e-6);
	check_close("half the depth", photometry_diluted(13.9, 1.0), 6.95, 1e-12);
	/* a blend tells less of the star although it is brighter */
	assert_true(photometry_diluted(1.0, 1.0) / blended.exposure < 1.0 / alone.exposure);
	s.neighbour = 0.0;
	/* the sky's magnitude is Vega's in R, the star's the AB one in r: the same light per nanometre in
	 * both */
	o.band = BAND_SDSS_R;
	const double star = photometry_rate_e_s(&o, 20.5, 0.0, 0.0) * 0.64 * 60.0;
	check_close("sky of another system", photometry_noise(&o, &s, 60.0).sky_e / star,
		    band_photons(BAND_R) / band_photons(BAND_SDSS_R), 1e-12);
	o.band = BAND_V;
	s.extinction_mag = NAN;
	check_close("the band's extinction", photometry_noise(&o, &s, 60.0).electrons,
		    alone.electrons * pow(10.0, -0.4 * 1.3 * (0.15 - 0.12)), 1e-6);
}

static void nothing_from_nothing(void **state)
{
	(void)state;
	struct telescope t = telescope_empty();
	struct optics o = optics_of(&t);
	assert_int_equal(o.assumed, OPTICS_OBSTRUCTION | OPTICS_THROUGHPUT | OPTICS_PIXEL | OPTICS_GAIN |
					OPTICS_READ_NOISE | OPTICS_DARK | OPTICS_FULL_WELL | OPTICS_FOCUS |
					OPTICS_DEAD | OPTICS_RED_NOISE);
	struct sight s = sight_of_row(&case_rows[0]);
	assert_int_equal(o.band, BAND_NONE);
	assert_true(isnan(photometry_noise(&o, &s, 60.0).minute_ppt));
	o.band = BAND_V; /* no aperture yet */
	assert_true(isnan(photometry_noise(&o, &s, 60.0).minute_ppt));
	assert_true(isnan(photometry_exposure(&o, &s, 600.0).exposure_s));
	t.aperture_m = 0.3, t.band = "V";
	o = optics_of(&t);
	assert_true(photometry_noise(&o, &s, 60.0).minute_ppt > 0.0);
	/* 60 % of the 60,000 e- that stand for a full well that nobody gave */
	check_close("full well", o.full_well_e, 60000.0, 0.0);
	struct noise bright = photometry_noise(&o, &s, 60.0), brief = photometry_noise(&o, &s, 1.0);
	assert_true(bright.saturated && bright.peak_e > 36000.0);
	assert_true(!brief.saturated && brief.peak_e < 36000.0);
	assert_true(isnan(photometry_noise(&o, &s, 0.0).minute_ppt));
	s.sky_mag_arcsec2 = NAN;
	assert_true(isnan(photometry_noise(&o, &s, 60.0).minute_ppt));
	s = sight_of_row(&case_rows[0]), s.airmass = 0.9;
	assert_true(isnan(photometry_noise(&o, &s, 60.0).minute_ppt));
	s = sight_of_row(&case_rows[0]), s.mag = NAN;
	assert_true(isnan(photometry_noise(&o, &s, 60.0).minute_ppt));
}

static void exposures(void **state)
{
	(void)state;
	struct optics o = optics_of_row(&case_rows[0]);
	struct sight s = sight_of_row(&case_rows[0]);
	/* limits as common practice has them: a fifth of the ingress, 120 s, 1 s */
	check_close("fifth of 150 s", photometry_exposure(&o, &s, 150.0).exposure_s, 30.0, 0.0);
	check_close("fifth of 147 s", photometry_exposure(&o, &s, 147.0).exposure_s, 29.0, 0.0);
	check_close("fifth of 63.5 s", photometry_exposure(&o, &s, 63.5).exposure_s, 12.0, 0.0);
	check_close("fifth of 44 s", photometry_exposure(&o, &s, 44.0).exposure_s, 8.5, 0.0);
	check_close("longest", photometry_exposure(&o, &s, 3600.0).exposure_s, 120.0, 0.0);
	check_close("no ingress", photometry_exposure(&o, &s, NAN).exposure_s, 120.0, 0.0);
	const struct exposure_choice short_one = photometry_exposure(&o, &s, 3.0);
	check_close("shortest", short_one.exposure_s, 1.0, 0.0);
	assert_true(short_one.blurs && !short_one.saturates);
	/* brighter and brighter: the peak stays below 60 % as long as 1 s lets it */
	bool seen = false;
	for (double mag = 12.0; mag > 0.0; mag -= 0.1) {
		s.mag = mag;
		const struct exposure_choice c = photometry_exposure(&o, &s, NAN);
		const struct noise n = photometry_noise(&o, &s, c.exposure_s);
		assert_true(c.exposure_s >= 1.0 && c.exposure_s <= 120.0);
		assert_true(n.saturated == c.saturates);
		assert_true(c.saturates || n.peak_e <= 0.6 * 60000.0);
		/* and is the longest: the next step would be too long */
		const double step = c.exposure_s < 10.0 ? 0.5 : c.exposure_s < 30.0 ? 1.0 : 5.0;
		if (c.exposure_s < 120.0)
			assert_true(photometry_noise(&o, &s, c.exposure_s + step).saturated);
		seen |= c.saturates;
	}
	assert_true(seen);
}

static void depth_over_noise(void **state)
{
	(void)state;
	/* by hand: 13.9 / sqrt(4 (1/158 + 1/90)), and with 0.5 ppt more (the form of Pont, Zucker & Queloz
	 * 2006, from memory) */
	check_close("white", photometry_depth_snr(13.9, 2.0, 158.0, 90.0, 0.0), 52.6, 0.05);
	check_close("with a floor", photometry_depth_snr(13.9, 2.0, 158.0, 90.0, 0.5), 24.6, 0.05);
	check_close("no baseline", photometry_depth_snr(13.9, 2.0, 158.0, 0.0, 0.5), 0.0, 0.0);
	assert_true(isnan(photometry_depth_snr(13.9, 2.0, NAN, 90.0, 0.5)));
	/* however long it is watched, the floor stays */
	check_close("floor", photometry_depth_snr(10.0, 2.0, 1e9, 1e9, 0.5), 20.0, 1e-3);
}

/* Colours of the Sun, 5772 K. Johnson-Cousins: Ramirez et al. 2012, ApJ 752, 5; SDSS: Willmer 2018, ApJS 236,
 * 47 (both from memory). */
static const struct {
	enum band_id blue, red;
	double colour;
} sun_rows[] = {
    {BAND_B, BAND_V, 0.653},	      {BAND_V, BAND_R, 0.352},		{BAND_V, BAND_I, 0.702},
    {BAND_SDSS_G, BAND_SDSS_R, 0.46}, {BAND_SDSS_R, BAND_SDSS_I, 0.12},
};

static void magnitudes_in_other_bands(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof sun_rows / sizeof *sun_rows; i++) {
		const struct band_mag m = photometry_mag(10.0, sun_rows[i].blue, sun_rows[i].red, 5772.0);
		check_close(bands[sun_rows[i].red].name, 10.0 - m.mag, sun_rows[i].colour, 0.13);
		assert_true(m.assumed);
	}
	for (int a = 0; a < BAND_COUNT; a++)
		for (int b = 0; b < BAND_COUNT; b++) {
			const struct band_mag there =
			    photometry_mag(11.0, (enum band_id)a, (enum band_id)b, 4800.0);
			check_close("there and back",
				    photometry_mag(there.mag, (enum band_id)b, (enum band_id)a, 4800.0).mag,
				    11.0, 1e-12);
			assert_true(there.assumed == !(a == b && a != BAND_CLEAR));
		}
	const struct band_mag same = photometry_mag(11.0, BAND_R, BAND_R, NAN);
	check_close("same band", same.mag, 11.0, 0.0);
	assert_false(same.assumed);
	/* neighbours only */
	assert_true(isnan(photometry_mag(11.0, BAND_V, BAND_I, NAN).mag));
	assert_true(isnan(photometry_mag(11.0, BAND_B, BAND_V, NAN).mag));
	/* by hand: 11 + 2.5 log10(3631 / 3064) */
	check_close("R as r", photometry_mag(11.0, BAND_R, BAND_SDSS_R, NAN).mag, 11.1843, 5e-5);
	check_close("clear", photometry_mag(11.0, BAND_CLEAR, BAND_CLEAR, NAN).mag, 11.0, 0.0);
	assert_true(photometry_mag(11.0, BAND_V, BAND_CLEAR, NAN).assumed);
	assert_true(isfinite(photometry_mag(11.0, BAND_V, BAND_CLEAR, NAN).mag));
	assert_true(isnan(photometry_mag(11.0, BAND_NONE, BAND_V, 5000.0).mag));
}

/* Mandel & Agol 2002, ApJ 580, L171, limit of a small planet, by hand; third: integral of the limb-darkened
 * light over the covered disc, worked out here by brute force too */
static const struct {
	double k, b, u1, u2, small, exact;
} depth_rows[] = {
    {0.11, 0.4658, 0.40, 0.25, 0.0139428, 0.0139133},
    {0.11, 0.0, 0.40, 0.25, 0.0146667, 0.0146488},
    {0.05, 0.7, 0.45, 0.20, 0.00261741, 0.00261480},
    {0.15, 0.8, 0.40, 0.25, 0.0218182, 0.0214238},
};

static double covered_light(double k, double b, double u1, double u2)
{
	double sum = 0.0;
	enum { RINGS = 300, TURNS = 600 };
	for (int i = 0; i < RINGS; i++)
		for (int j = 0; j < TURNS; j++) {
			const double r = k * (i + 0.5) / RINGS, angle = TWO_PI * (j + 0.5) / TURNS;
			const double x = b + r * cos(angle), y = r * sin(angle), d2 = x * x + y * y;
			if (d2 >= 1.0)
				continue;
			const double edge = 1.0 - sqrt(1.0 - d2);
			sum += (1.0 - u1 * edge - u2 * edge * edge) * r;
		}
	return sum * (k / RINGS) * (TWO_PI / TURNS) / (PI * (1.0 - u1 / 3.0 - u2 / 6.0));
}

static void depth_of_a_darkened_disc(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof depth_rows / sizeof *depth_rows; i++) {
		const double got =
		    limb_depth(depth_rows[i].k, depth_rows[i].b, depth_rows[i].u1, depth_rows[i].u2);
		check_close("small planet", got / depth_rows[i].small, 1.0, 4e-6);
		const double integral =
		    covered_light(depth_rows[i].k, depth_rows[i].b, depth_rows[i].u1, depth_rows[i].u2);
		check_close("integral", integral / depth_rows[i].exact, 1.0, 1e-5);
		check_close("stated accuracy", got / integral, 1.0, depth_rows[i].k < 0.12 ? 3e-3 : 0.02);
	}
	check_close("magnitudes", -2.5e3 * log10(1.0 - limb_depth(0.11, 0.4658, 0.40, 0.25)), 15.2447, 5e-5);
	check_close("uniform disc", limb_depth(0.1, 0.3, 0.0, 0.0), 0.01, 1e-15);
	check_close("flat floor", limb_roundness(0.1, 0.3, 0.0, 0.0), 0.0, 0.0);
	/* by hand: mu 0.435890 at 0.9, 1 at the middle; 1 - 0.4 0.564110 - 0.25 0.318220 */
	check_close("roundness", limb_roundness(0.1, 0.0, 0.40, 0.25), 0.305199, 5e-7);
	assert_true(isnan(limb_depth(0.1, 0.95, 0.4, 0.25)) && isnan(limb_roundness(NAN, 0.3, 0.4, 0.25)));
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(noise_of_an_exposure),
	    cmocka_unit_test(scintillation),
	    cmocka_unit_test(counting_against_a_simulation),
	    cmocka_unit_test(faint_comparisons_flicker_no_more),
	    cmocka_unit_test(noise_has_its_parts),
	    cmocka_unit_test(nothing_from_nothing),
	    cmocka_unit_test(exposures),
	    cmocka_unit_test(depth_over_noise),
	    cmocka_unit_test(magnitudes_in_other_bands),
	    cmocka_unit_test(depth_of_a_darkened_disc),
	};
	return cmocka_run_group_tests_name("photometry", tests, NULL, NULL);
}
