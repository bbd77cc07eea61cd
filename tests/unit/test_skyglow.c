/* SPDX-License-Identifier: MIT
 * Bands, dark sky, moonlight, twilight. */
#include "ephem/skyglow.h"

#include "tests/support/check.h"

#include <math.h>
#include <stdio.h>

static const struct {
	const char *text;
	enum band_id id;
} name_rows[] = {
    {"V", BAND_V},	   {"R", BAND_R},	{"Rc", BAND_R},	    {"r", BAND_SDSS_R},
    {"r'", BAND_SDSS_R},   {"ip", BAND_SDSS_I}, {"z", BAND_SDSS_Z}, {"clear", BAND_CLEAR},
    {"Clear", BAND_CLEAR}, {"G", BAND_CLEAR},	{"g", BAND_SDSS_G}, {"v", BAND_NONE},
    {"", BAND_NONE},	   {NULL, BAND_NONE},	{"Vx", BAND_NONE},  {"clearer", BAND_NONE},
};

static void band_names(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof name_rows / sizeof *name_rows; i++)
		assert_int_equal(band_parse(name_rows[i].text), name_rows[i].id);
	for (int i = 0; i < BAND_COUNT; i++) {
		assert_int_equal(band_parse(bands[i].name), i);
		assert_true(bands[i].sky >= 0 && bands[i].sky < BAND_SKY_COUNT);
		/* the sky band is the nearest of the five in wavelength */
		for (int k = 0; k < BAND_SKY_COUNT; k++)
			assert_true(fabs(bands[bands[i].sky].wavelength_nm - bands[i].wavelength_nm) <=
				    fabs(bands[k].wavelength_nm - bands[i].wavelength_nm));
	}
}

/* Photons/s/cm2/A at magnitude 0. U..I: by hand f_nu / (h lambda) with f_nu of Bessell, Castelli & Plez 1998,
 * A&A 333, 231, Table A2; griz: 3631 Jy / (h lambda) = 5.479870e6 / lambda[A] (AB by definition). B and V
 * also stand as the usual round 1400 and 1000 of textbooks. */
static const struct {
	enum band_id id;
	double want;
} photon_rows[] = {
    {BAND_U, 738.1},	   {BAND_B, 1400.0},	 {BAND_V, 1006.9},     {BAND_R, 721.4},	     {BAND_I, 456.9},
    {BAND_SDSS_G, 1169.4}, {BAND_SDSS_R, 888.9}, {BAND_SDSS_I, 732.5}, {BAND_SDSS_Z, 613.6},
};

static void photons_of_magnitude_0(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof photon_rows / sizeof *photon_rows; i++)
		check_close(bands[photon_rows[i].id].name, band_photons(photon_rows[i].id) * 1e-5,
			    photon_rows[i].want, 0.05001);
	/* Gaia counts 1.88342e10 e-/s at G = 0 (zero point 25.687367, Riello et al. 2021, A&A 649, A3) with
	 * 0.7278 m2 (from memory): what the row makes of it before any loss leaves Gaia a throughput that
	 * optics and detector can have */
	const double throughput =
	    pow(10.0, 0.4 * 25.687367) / 0.7278 / (band_photons(BAND_CLEAR) * bands[BAND_CLEAR].width_nm);
	assert_true(throughput > 0.6 && throughput < 0.9);
	assert_true(isnan(band_photons(BAND_NONE)));
}

static void unit_of_brightness(void **state)
{
	(void)state;
	/* Krisciunas & Schaefer 1991, eq. 1, by hand */
	check_close("21.587", sky_nl(21.587), 79.0057, 5e-5);
	check_close("22.0", sky_nl(22.0), 54.0079, 5e-5);
	for (double m = 5.0; m < 25.0; m += 0.37)
		check_close("back", sky_mag(sky_nl(m)), m, 1e-12);
	/* one magnitude is 10^0.4: the published constant is right to 7e-6 */
	check_close("a magnitude", sky_nl(20.0) / sky_nl(21.0), pow(10.0, 0.4), 2e-5);
}

/* Krisciunas & Schaefer 1991, PASP 103, 1033, eqs 1, 2, 8, 9, 15, by hand:
 * k 0.172, dark zenith 21.587 */
static const struct {
	double phase, sep, zenith, moon_zenith, moon_nl, dark_nl, mag;
} moon_rows[] = {
    {0, 60, 30, 40, 1359.86, 88.54, 18.429}, {0, 30, 45, 20, 3230.84, 103.05, 17.524},
    {45, 90, 40, 60, 334.73, 97.19, 19.743}, {90, 60, 30, 40, 123.74, 88.54, 20.514},
    {135, 60, 30, 60, 14.34, 88.54, 21.300},
};

static struct skyglow_input dark_input(void)
{
	return (struct skyglow_input){.band = BAND_V,
				      .zenith_deg = 0.0,
				      .sun_alt_deg = -40.0,
				      .moon_alt_deg = -10.0,
				      .moon_sep_deg = NAN,
				      .moon_phase_deg = NAN,
				      .extinction_mag = 0.172,
				      .dark_zenith_mag = 21.587};
}

static void moonlight(void **state)
{
	(void)state;
	check_close("alpha 45, rho 50", sky_mag(sky_moon_nl(45, 50, 20, 70, 0.15)), 19.85484, 5e-6);
	for (size_t i = 0; i < sizeof moon_rows / sizeof *moon_rows; i++) {
		struct skyglow_input in = dark_input();
		in.zenith_deg = moon_rows[i].zenith;
		in.moon_alt_deg = 90.0 - moon_rows[i].moon_zenith;
		in.moon_sep_deg = moon_rows[i].sep;
		in.moon_phase_deg = moon_rows[i].phase;
		const struct skyglow got = skyglow(&in);
		check_close("Moon", got.moon_nl, moon_rows[i].moon_nl, 0.005);
		check_close("dark", got.dark_nl, moon_rows[i].dark_nl, 0.005);
		check_close("sum", got.mag_arcsec2, moon_rows[i].mag, 5e-4);
		check_close("no twilight", got.twilight_nl, 0.0, 0.0);
		assert_int_equal(got.limits, moon_rows[i].phase < 7.0 ? SKY_MOON_SURGE : 0);
		in.moon_phase_deg = -in.moon_phase_deg; /* waxing or waning is the same */
		check_close("sign", skyglow(&in).moon_nl, got.moon_nl, 0.0);
	}
	/* eq. 9 by hand: a half Moon gives 10^(-0.4 (0.026 90 + 4e-9 90^4)) = 0.0910 of a full one */
	check_close("half Moon", sky_moon_nl(90, 60, 30, 40, 0.172) / sky_moon_nl(0, 60, 30, 40, 0.172),
		    0.0910, 5e-5);
	/* by hand: (1 + cos 132.41170) / 2 = 0.162773 */
	check_close("phase", sky_phase_deg(0.162773), 132.41170, 1e-4);
	check_close("full", sky_phase_deg(1.0), 0.0, 1e-12);
	assert_true(isnan(sky_phase_deg(1.01)));
	check_close("below the horizon", sky_moon_nl(0, 60, 30, 95, 0.172), 0.0, 0.0);
}

/* Patat, Ugolnikov & Postylyakov 2006, A&A 455, 385, Table 1, by hand */
static const struct {
	enum band_id band;
	double depression, mag;
} twilight_rows[] = {
    {BAND_V, 8, 15.881},  {BAND_V, 10, 18.005}, {BAND_V, 12, 19.673}, {BAND_V, 15, 21.320},
    {BAND_I, 12, 18.182}, {BAND_U, 5, 11.78},	{BAND_B, 5, 11.84},   {BAND_R, 5, 11.40},
    {BAND_U, 15, 21.64},  {BAND_B, 15, 21.85},	{BAND_R, 15, 20.67},  {BAND_I, 15, 19.43},
};

static void twilight_formula(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof twilight_rows / sizeof *twilight_rows; i++)
		check_close(bands[twilight_rows[i].band].name,
			    sky_twilight_mag(twilight_rows[i].band, twilight_rows[i].depression),
			    twilight_rows[i].mag, 5.001e-4);
	assert_true(isnan(sky_twilight_mag(BAND_V, 4.999)) && isnan(sky_twilight_mag(BAND_V, 15.001)));
	assert_true(isnan(sky_twilight_mag(BAND_SDSS_R, 10.0)) && isnan(sky_twilight_mag(BAND_V, NAN)));
	/* over Paranal itself the sum is what was measured there */
	struct skyglow_input in = dark_input();
	in.dark_zenith_mag = 21.6; /* Patat 2003, A&A 400, 1183: V */
	in.sun_alt_deg = -12.0;
	check_close("sum at Paranal", skyglow(&in).mag_arcsec2, 19.673, 5e-4);
	assert_int_equal(skyglow(&in).limits, SKY_TWILIGHT);
}

/* Every band, a site brighter and one darker than Paranal: no step from 5 deg to full night, never brighter
 * as the Sun sinks, dark from 16 deg on. */
static void night_falls_without_a_step(void **state)
{
	(void)state;
	for (int band = 0; band < BAND_COUNT; band++) {
		struct skyglow_input in = dark_input();
		in.band = (enum band_id)band;
		in.zenith_deg = 35.0;
		for (int site = 0; site < 3; site++) {
			in.dark_zenith_mag =
			    site == 0 ? NAN : sky_dark_default(bands[band].sky) + (site == 1 ? -2.5 : 0.3);
			double before = NAN;
			for (int i = 0; i <= 1300; i++) {
				in.sun_alt_deg = -5.0 - 0.01 * i;
				const double now = skyglow(&in).mag_arcsec2;
				if (i > 0 && !(now - before >= -1e-9 && now - before < 0.02))
					check_fail("%s: from %.4f to %.4f at %.2f deg", bands[band].name,
						   before, now, in.sun_alt_deg);
				before = now;
			}
			in.sun_alt_deg = -60.0;
			check_close("night", skyglow(&in).mag_arcsec2, before, 0.0);
			check_close("dark alone", skyglow(&in).twilight_nl, 0.0, 0.0);
		}
		in.sun_alt_deg = -4.99;
		assert_true(isnan(skyglow(&in).mag_arcsec2));
		assert_true(skyglow(&in).limits & SKY_TWILIGHT_BRIGHT);
	}
}

static void limits_are_told(void **state)
{
	(void)state;
	struct skyglow_input in = dark_input();
	in.moon_alt_deg = 50.0, in.moon_sep_deg = 9.0, in.moon_phase_deg = 40.0, in.sun_alt_deg = -14.0;
	in.band = BAND_SDSS_R, in.dark_zenith_mag = NAN, in.extinction_mag = NAN;
	const struct skyglow got = skyglow(&in);
	assert_int_equal(got.sky_band, BAND_R);
	assert_int_equal(got.limits, SKY_BAND_STANDS_FOR | SKY_DARK_ASSUMED | SKY_NEAR_MOON | SKY_MOON_BAND |
					 SKY_TWILIGHT | SKY_TWILIGHT_MOON);
	/* the parts make the whole, and moonlight has the Sun's colour: V - R 0.352 (Ramirez et al. 2012, ApJ
	 * 752, 5, from memory) */
	check_close("sum", sky_nl(got.mag_arcsec2), got.dark_nl + got.moon_nl + got.twilight_nl, 1e-6);
	check_close("colour",
		    sky_mag(sky_moon_nl(40, 9, 0, 40, bands[BAND_SDSS_R].extinction_mag)) -
			sky_mag(got.moon_nl),
		    0.352, 1e-9);
	in.moon_alt_deg = 0.0; /* it sets: nothing of it is left */
	assert_int_equal(skyglow(&in).limits, SKY_BAND_STANDS_FOR | SKY_DARK_ASSUMED | SKY_TWILIGHT);
	/* no number from no number */
	in = dark_input(), in.zenith_deg = 90.0;
	assert_true(isnan(skyglow(&in).mag_arcsec2));
	in = dark_input(), in.band = BAND_NONE;
	assert_true(isnan(skyglow(&in).mag_arcsec2));
	in = dark_input(), in.sun_alt_deg = NAN;
	assert_true(isnan(skyglow(&in).mag_arcsec2));
	in = dark_input(), in.moon_alt_deg = NAN;
	assert_true(isnan(skyglow(&in).mag_arcsec2));
	in = dark_input(), in.moon_alt_deg = 20.0;
	assert_true(isnan(skyglow(&in).mag_arcsec2));
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(band_names),	  cmocka_unit_test(photons_of_magnitude_0),
	    cmocka_unit_test(unit_of_brightness), cmocka_unit_test(moonlight),
	    cmocka_unit_test(twilight_formula),	  cmocka_unit_test(night_falls_without_a_step),
	    cmocka_unit_test(limits_are_told),
	};
	return cmocka_run_group_tests_name("skyglow", tests, NULL, NULL);
}
