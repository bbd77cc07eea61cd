/* SPDX-License-Identifier: MIT
 * The forecast of a window by hand: a star at the pole stands still, so that its noise in the dark is that of
 * one exposure; each case changes one thing. */
#include "ephem/night_plan.h"
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/forecast_scene.h"
#include "tests/support/timing_sum.h"

#include <math.h>
#include <string.h>

static struct forecast_scene s; /* too large for a stack */
#define MIDNIGHT_D 0.5		/* dusk 0.342, dawn 0.657 */

static bool flagged(enum flag f)
{
	return (s.window.event.flags & FLAG_BIT(f)) != 0;
}

/* In the dark, the Moon down, nothing changes: noise of a minute from one sight, depth over noise from
 * minutes that are counted by hand (T14 180 min, limb T14/2 (1 - sqrt((0.9^2 - 0.5^2)/(1.1^2 - 0.5^2)))
 * = 21.2614; reserve R = 15 + 2 hypot(8, 1.5) = 31.278). */
static void one_steady_night(void **state)
{
	(void)state;
	forecast_open(&s, FORECAST_DARK_MJD);
	forecast_at(&s, MIDNIGHT_D);
	const double alt_deg = night_star_altaz(&s.night, &s.on.star, MIDNIGHT_D).alt_deg;
	const struct skyglow_input dark = {.band = BAND_R,
					   .zenith_deg = 90.0 - alt_deg,
					   .sun_alt_deg = -40.0,
					   .moon_alt_deg = -10.0,
					   .extinction_mag = NAN,
					   .dark_zenith_mag = 20.9};
	const struct sight sight = {.mag = 11.0,
				    .airmass = airmass_young(alt_deg),
				    .extinction_mag = NAN,
				    .sky_mag_arcsec2 = skyglow(&dark).mag_arcsec2,
				    .height_m = 2100.0};
	const double minute_ppt = photometry_noise(&s.observing.optics, &sight, 120.0).minute_ppt;
	const struct window_forecast *f = &s.window.forecast;
	check_close("sky", s.window.sky.sky_mag_arcsec2, sight.sky_mag_arcsec2, 1e-6);
	check_close("exposure", f->exposure_s, 120.0, 0.0); /* 0.1e6 e- well, defocused: the longest */
	check_close("noise", f->noise_ppt_min, minute_ppt,
		    1e-3 * minute_ppt); /* the pole of 2000 is 0.15 deg from today's: it does move */
	const double in_min = 180.0 - 21.2614, out_min = 2.0 * (15.0 + 2.0 * hypot(8.0, 1.5));
	/* light time changes by 1e-4 of the time */
	check_close("minutes in", s.x.in_min, in_min, 0.02);
	check_close("minutes out", s.x.out_min, out_min, 0.02);
	/* limb darkening: k^2 (1 - u1 (1 - m) - u2 (1 - m)^2) / (1 - u1 / 3 - u2 / 6), m = sqrt(1 - 0.25) */
	const double m = sqrt(0.75), depth_ppt = 10.0 *
						 (1.0 - 0.4 * (1.0 - m) - 0.25 * (1.0 - m) * (1.0 - m)) /
						 (1.0 - 0.4 / 3.0 - 0.25 / 6.0);
	check_close("depth", s.x.depth_ppt, depth_ppt, 1e-9);
	check_close("white", s.x.white_snr, depth_ppt / (minute_ppt * sqrt(1.0 / in_min + 1.0 / out_min)),
		    0.01);
	check_close("snr", f->depth_snr,
		    depth_ppt / sqrt(minute_ppt * minute_ppt * (1.0 / in_min + 1.0 / out_min) + 0.25), 0.01);
	check_close("ideal", s.x.ideal_s, timing_whole_s(depth_ppt, minute_ppt, 21.2614, 120.0), 0.01);
	/* the plain sum over a light curve of this noise, reserve and duration, the baseline fitted */
	const struct noise_node even = {MIDNIGHT_D, minute_ppt};
	const struct intervals there =
	    intervals_one(s.window.event.reserve_start_d, s.window.event.reserve_end_d);
	struct timing_event curve = s.x.event;
	curve.duration_err_d = 0.05 / 24.0;
	const struct timing_input plain = {
	    .event = &curve, .usable = &there, .node = &even, .n = 1, .flip_d = NAN};
	check_close("timing", f->timing_s, timing_sum_s(&plain, MIDNIGHT_D, 0.05), 0.01 * f->timing_s);
	assert_true(f->timing_s > s.x.ideal_s);
	/* everything is caught: s = hypot(timing, need 2 min), V = 8 min squared */
	const double s_min = hypot(f->timing_s / 60.0, 2.0);
	check_close("whole", s.x.whole.chance, 1.0, 1e-9);
	check_close("gain", f->gain_bits, 0.5 * log2(1.0 + 64.0 / (s_min * s_min)), 0.01);
	check_close("worth", f->worth, f->gain_bits, 1e-12);
	assert_int_equal(f->basis, BASIS_BITS);
	assert_false(flagged(FLAG_MAGNITUDE_ASSUMED) || flagged(FLAG_SKY_ASSUMED) ||
		     flagged(FLAG_OPTICS_ASSUMED));
}

/* The full Moon 40 deg from the star: the table of the night's light gives the sky that the night itself
 * gives, and that is what Krisciunas & Schaefer's Moon makes of it, magnitudes brighter than dark. */
static void full_moon(void **state)
{
	(void)state;
	double ra, dec;
	forecast_open(&s, FORECAST_FULL_MJD);
	vec3_to_angles(night_moon_topo_km(&s.night, MIDNIGHT_D), &ra, &dec);
	s.target.ra_deg = ra / DEG_RAD;
	s.target.dec_deg = dec / DEG_RAD + 40.0;
	forecast_at(&s, MIDNIGHT_D);
	const double alt_deg = night_star_altaz(&s.night, &s.on.star, MIDNIGHT_D).alt_deg;
	const struct skyglow_input in = {.band = BAND_R,
					 .zenith_deg = 90.0 - alt_deg,
					 .sun_alt_deg = night_sun_altaz(&s.night, MIDNIGHT_D).alt_deg,
					 .moon_alt_deg = night_moon_altaz(&s.night, MIDNIGHT_D).alt_deg,
					 .moon_sep_deg = night_moon_sep_deg(&s.night, &s.on.star, MIDNIGHT_D),
					 .moon_phase_deg =
					     acos(2.0 * night_moon_lit(&s.night, MIDNIGHT_D) - 1.0) / DEG_RAD,
					 .extinction_mag = NAN,
					 .dark_zenith_mag = 20.9};
	const double dark_mag = sky_mag(s.x.mid.sky.dark_nl), noise = s.window.forecast.noise_ppt_min;
	check_close("40 deg away", in.moon_sep_deg, 40.0, 0.3);
	check_close("sky", s.window.sky.sky_mag_arcsec2, skyglow(&in).mag_arcsec2, 0.005);
	assert_true(dark_mag - s.window.sky.sky_mag_arcsec2 > 2.0 &&
		    dark_mag - s.window.sky.sky_mag_arcsec2 < 3.5);
	for (int i = 0; i < NIGHT_LIGHTS; i++)
		s.night.light[i].moon_alt_deg = -10.0;
	forecast_at(&s, MIDNIGHT_D);
	check_close("Moon taken away", s.window.sky.sky_mag_arcsec2, dark_mag, 1e-9);
	assert_true(s.window.forecast.noise_ppt_min < noise);
}

static void bright_star(void **state)
{
	(void)state;
	forecast_open(&s, FORECAST_DARK_MJD);
	s.target.mag = 3.0;
	s.telescope.defocus_px = 0.0;
	s.observing = observing_of(&s.telescope);
	forecast_at(&s, MIDNIGHT_D);
	check_close("shortest exposure", s.window.forecast.exposure_s, 1.0, 0.0);
	assert_true(flagged(FLAG_SATURATED) && s.x.choice.saturates);
	assert_false(flagged(FLAG_EXPOSURE_LONG));
	/* the telescope's own time, too long for this limb (a fifth of 21.26 min is 255 s) */
	s.observing.exposure_s = 300.0;
	s.target.mag = 14.0;
	forecast_at(&s, MIDNIGHT_D);
	check_close("given", s.window.forecast.exposure_s, 300.0, 0.0);
	assert_true(flagged(FLAG_EXPOSURE_LONG) && s.x.exposure_given);
	assert_false(flagged(FLAG_SATURATED));
}

/* A published depth is taken as it is. Noise is the same, so the error of the mid-time goes as 1 / depth;
 * light of a neighbour as bright as the star halves the depth, and makes it that of a star of half. */
static void shallow_and_diluted(void **state)
{
	(void)state;
	forecast_open(&s, FORECAST_DARK_MJD);
	s.target.depth_ppt = 12.0;
	forecast_at(&s, MIDNIGHT_D);
	const double deep_s = s.window.forecast.timing_s, deep_white = s.x.white_snr;
	check_close("published", s.x.depth_ppt, 12.0, 0.0);
	s.target.depth_ppt = 3.0;
	forecast_at(&s, MIDNIGHT_D);
	check_close("white S/N of a quarter", s.x.white_snr, 0.25 * deep_white, 1e-9 * deep_white);
	check_close("a quarter of the depth", s.window.forecast.timing_s, 4.0 * deep_s, 0.02 * 4.0 * deep_s);
	s.target.depth_ppt = 0.003; /* 3 ppm: no time can be told from it, and none is */
	forecast_at(&s, MIDNIGHT_D);
	assert_true(isnan(s.window.forecast.timing_s) && s.window.forecast.gain_bits < 1e-4 &&
		    s.window.forecast.depth_snr < 0.1);
	s.target.depth_ppt = 12.0;
	s.observed.neighbour = 1.0;
	forecast_at(&s, MIDNIGHT_D);
	check_close("diluted", s.x.depth_ppt, 6.0, 1e-12);
	check_close("shown depth is the star's", s.window.event.depth_ppt, 12.0, 0.0);
	assert_true(flagged(FLAG_NEIGHBOUR_DILUTED) && s.window.forecast.timing_s > 1.5 * deep_s);
	s.observed.neighbour = NAN;
	s.observed.comparison_stars = 1.0;
	forecast_at(&s, MIDNIGHT_D);
	/* sqrt(1 + 1/1) against sqrt(1 + 1/4) */
	check_close("one comparison star", s.x.white_snr, deep_white * sqrt(1.25 / 2.0), 1e-9 * deep_white);
}

/* What can't be known: the window stays, its figures are absent, worth falls back. */
static void unknown(void **state)
{
	(void)state;
	const struct window_forecast *f = &s.window.forecast;
	forecast_open(&s, FORECAST_DARK_MJD);
	s.observing.fallback_bits = 0.7;
	s.target.priority = 2.0;
	s.target.mag = NAN;
	forecast_at(&s, MIDNIGHT_D);
	assert_true(flagged(FLAG_MAGNITUDE_UNKNOWN) && !flagged(FLAG_DEPTH_UNKNOWN));
	assert_true(isnan(f->exposure_s) && isnan(f->noise_ppt_min) && isnan(f->depth_snr) &&
		    isnan(f->timing_s) && isnan(f->gain_bits) && isnan(f->sigma_after_min));
	assert_true(isfinite(s.window.sky.sky_mag_arcsec2));
	check_close("worth", f->worth, 2.0 * 0.7 * s.window.chance.done, 1e-12);
	assert_int_equal(f->basis, BASIS_EVENT);
	/* a magnitude in a far band without a temperature, or in no band at all */
	s.target.mag = 11.0;
	s.target.band = "B";
	forecast_at(&s, MIDNIGHT_D);
	assert_true(flagged(FLAG_MAGNITUDE_UNKNOWN));
	s.target.band = "";
	forecast_at(&s, MIDNIGHT_D);
	assert_true(flagged(FLAG_MAGNITUDE_UNKNOWN));
	s.target.band = "B";
	s.target.teff_k = 5772.0;
	forecast_at(&s, MIDNIGHT_D);
	assert_true(flagged(FLAG_MAGNITUDE_ASSUMED) && isfinite(f->timing_s));
	/* no depth and no radius */
	s.target.band = "R";
	s.target.k = NAN;
	forecast_at(&s, MIDNIGHT_D);
	assert_true(flagged(FLAG_DEPTH_UNKNOWN) && !flagged(FLAG_MAGNITUDE_UNKNOWN));
	assert_true(isfinite(f->noise_ppt_min) && isfinite(f->exposure_s));
	assert_true(isnan(f->depth_snr) && isnan(f->timing_s) && isnan(f->gain_bits));
	check_close("worth", f->worth, 2.0 * 0.7 * s.window.chance.done, 1e-12);
	/* no errors of the ephemeris: the timing is known, what it tells is not */
	s.target.k = 0.1;
	s.target.t0_err_d = NAN;
	forecast_at(&s, MIDNIGHT_D);
	assert_true(isfinite(f->timing_s) && isnan(f->gain_bits));
	check_close("a tenth of the coverage", f->worth, 2.0 * 0.7 * 0.1 * s.window.cover.coverage, 1e-12);
}

static void grazing(void **state)
{
	(void)state;
	forecast_open(&s, FORECAST_DARK_MJD);
	forecast_at(&s, MIDNIGHT_D);
	const double whole_s = s.window.forecast.timing_s;
	s.target.duration_h = NAN;
	s.target.duration_err_h = NAN;
	s.target.a_rs = 12.0;
	s.target.inc_deg = acos(0.98 / 12.0) / DEG_RAD; /* b 0.98 */
	forecast_at(&s, MIDNIGHT_D);
	assert_true(flagged(FLAG_GRAZING) && isnan(s.window.event.t2_d));
	assert_true(isfinite(s.window.forecast.timing_s) && s.window.forecast.timing_s > whole_s);
	assert_true(s.window.forecast.gain_bits > 0.0 && isfinite(s.x.ingress_alone.bits));
}

/* The mount changes sides at the mid-time: the level of the light may change with it. */
static void flip(void **state)
{
	(void)state;
	forecast_open(&s, FORECAST_DARK_MJD);
	s.target.dec_deg = 60.0;
	forecast_place(&s, MIDNIGHT_D);
	const double meridian_d = night_star_transit_d(&s.night, &s.on.star, 0.0);
	s.target.ra_deg += (MIDNIGHT_D - meridian_d) * 361.0; /* its transit to midnight */
	forecast_at(&s, MIDNIGHT_D);
	const double steady_s = s.window.forecast.timing_s, gain = s.window.forecast.gain_bits;
	assert_true(isnan(s.window.forecast.flip_d));
	s.telescope.mount = MOUNT_GERMAN;
	s.telescope.flip_min = 5.0;
	forecast_at(&s, MIDNIGHT_D);
	check_close("flip in the middle", s.window.forecast.flip_d, MIDNIGHT_D, 5.0 * MIN_D);
	assert_true(s.window.forecast.timing_s > steady_s && s.window.forecast.gain_bits < gain);
	/* the pause is borne: both limbs are caught all the same */
	check_close("whole", s.x.whole.chance, 1.0, 1e-6);
}

/* Goals and choices of rank. */
static void goals_and_choices(void **state)
{
	(void)state;
	struct goal goal[2] = {{.band = BAND_R, .wanted = 1, .until_jd = NAN},
			       {.band = BAND_NONE, .wanted = 2, .got = 1, .one_limb = true, .until_jd = NAN}};
	const struct plan_rules rules = plan_rules_built_in();
	const struct window_forecast *f = &s.window.forecast;
	const double near_dawn_d = 0.6;
	forecast_open(&s, FORECAST_DARK_MJD);
	s.target.t0_err_d = 30.0 * MIN_D;
	forecast_at(&s, near_dawn_d);
	const double whole = s.x.whole.chance * s.x.whole.bits, gain = f->gain_bits;
	assert_true(whole > 0.0 && gain > whole && s.x.ingress.chance > 0.01);
	check_close("sum of the cases", gain,
		    whole + s.x.ingress.chance * s.x.ingress.bits + s.x.egress.chance * s.x.egress.bits,
		    1e-9);
	check_close("limb alone or not", s.x.whole.chance + s.x.ingress.chance, s.window.chance.ingress,
		    1e-9);
	s.observed.goal = goal;
	s.observed.n_goals = 1;
	forecast_at(&s, near_dawn_d);
	check_close("whole events", f->worth, whole, 1e-9);
	s.observed.n_goals = 2;
	forecast_at(&s, near_dawn_d);
	check_close("both goals", f->worth, whole + gain, 1e-9);
	check_close("plan", plan_worth(&s.window, &rules), f->worth, 0.0);
	goal[0].band = BAND_V;
	goal[1].got = 2;
	forecast_at(&s, near_dawn_d);
	check_close("met, or in another band", f->worth, 0.0, 0.0);
	check_close("gain stays", f->gain_bits, gain, 0.0);
	s.observed.n_goals = 0;
	s.target.priority = 3.0;
	s.observing.rules.choice = WORTH_DEPTH;
	forecast_at(&s, near_dawn_d);
	check_close("by depth", f->worth, 3.0 * s.window.chance.done * f->depth_snr, 1e-9);
	s.observing.rules.choice = WORTH_PRIORITY;
	forecast_at(&s, near_dawn_d);
	check_close("by priority", f->worth, 3.0 * s.window.chance.done, 1e-12);
}

static void scene_of_a_plan(bool depth_known)
{
	forecast_open(&s, FORECAST_DARK_MJD);
	s.target.priority = 2.0;
	s.observing.fallback_bits = 0.5;
	if (!depth_known)
		s.target.k = NAN;
	forecast_at(&s, MIDNIGHT_D);
}

/* The ways of a plan: the whole event is worth what the window is, a limb its own bits if it is caught.
 * Without a forecast of timing: a number of bits for an event and a fifth of it for a limb. */
static void ways_of_a_plan(void **state)
{
	(void)state;
	const struct plan_rules rules = plan_rules_built_in();
	const struct plan_offer offer = {.window = &s.window};
	const struct plan_input in = {
	    .night = &s.night, .offer = &offer, .n = 1, .not_before_d = -INFINITY, .rules = &rules};
	for (int known = 1; known >= 0; known--) {
		struct plan_way way[PLAN_WAYS_MAX];
		double worth[VARIANT_COUNT] = {0.0};
		scene_of_a_plan(known);
		const struct window_forecast *f = &s.window.forecast;
		const int n = plan_ways(&in, 0, way);
		for (int i = 0; i < n; i++)
			worth[way[i].variant] = fmax(worth[way[i].variant], way[i].worth);
		const struct window_chance *c = &s.window.chance;
		check_close("whole", worth[VARIANT_WHOLE], known ? f->worth : 2.0 * 0.5 * c->done, 1e-12);
		check_close("ingress", worth[VARIANT_INGRESS],
			    2.0 * c->ingress * (known ? 0.5 * f->bits_ingress : 0.5 * 0.2), 1e-12);
		check_close("egress", worth[VARIANT_EGRESS],
			    2.0 * c->egress * (known ? 0.5 * f->bits_egress : 0.5 * 0.2), 1e-12);
		assert_true(worth[VARIANT_WHOLE] > worth[VARIANT_INGRESS]);
	}
	/* a goal for both limbs leaves nothing for one */
	struct plan_way way[PLAN_WAYS_MAX];
	const struct goal both = {.band = BAND_NONE, .wanted = 1, .until_jd = NAN};
	scene_of_a_plan(true);
	s.observed.goal = &both;
	s.observed.n_goals = 1;
	for (int i = plan_ways(&in, 0, way) - 1; i >= 0; i--)
		assert_true(way[i].variant == VARIANT_WHOLE || way[i].variant == VARIANT_SHORT);
}

/* A star without a magnitude never ranks above what a perfect light curve of it would bring. */
static void no_magnitude_earns_no_more(void **state)
{
	(void)state;
	forecast_open(&s, FORECAST_DARK_MJD);
	s.target.t0_err_d = 0.5 * MIN_D;
	s.target.period_err_d = 1e-12;
	s.target.mag = NAN;
	s.observing.fallback_bits = 1.0;
	forecast_at(&s, MIDNIGHT_D);
	assert_true(isnan(s.window.forecast.gain_bits) && s.window.chance.done > 0.99);
	/* by hand: log2(1 + 0.5^2 / 2^2) / 2 */
	check_close("half a minute against a need of two", s.x.event_value, 0.0437314, 1e-6);
	check_close("worth", s.window.forecast.worth, s.x.event_value * s.window.chance.done, 1e-9);
	s.target.t0_err_d = 60.0 * MIN_D; /* log2(901) / 2 = 4.9 bits could be had */
	forecast_at(&s, MIDNIGHT_D);
	check_close("as the setting says", s.x.event_value, 1.0, 0.0);
	s.target.t0_err_d = NAN; /* nothing is known of it */
	forecast_at(&s, MIDNIGHT_D);
	check_close("unknown error", s.x.event_value, 1.0, 0.0);
}

/* The user's date: sigma after by the rank-one update, written out. */
static void sigma_after(void **state)
{
	(void)state;
	forecast_open(&s, FORECAST_DARK_MJD);
	s.target.period_err_d = 1e-4;
	forecast_place(&s, MIDNIGHT_D);
	s.observing.at_jd_tdb = jd2_value(s.target.t0) + 200.0 * 5.0 + 1.0; /* nearest: epoch 200 */
	forecast_at(&s, MIDNIGHT_D);
	const double v0 = pow(8.0 * MIN_D, 2.0), vp = 1e-8, t = s.window.forecast.timing_s / DAY_S;
	assert_int_equal(s.x.at_epoch, 200);
	check_close("as it is", s.x.sigma_at_min, sqrt(v0 + 200.0 * 200.0 * vp) * DAY_MIN, 1e-9);
	check_close("after", s.window.forecast.sigma_after_min,
		    sqrt(v0 + 200.0 * 200.0 * vp - v0 * v0 / (v0 + t * t)) * DAY_MIN, 0.01);
	s.observing.at_jd_tdb = NAN;
	forecast_at(&s, MIDNIGHT_D);
	assert_true(isnan(s.window.forecast.sigma_after_min));
}

/* Without a telescope to forecast with nothing is known but what chance says; a plan ranks as it always did.
 */
static void no_telescope(void **state)
{
	(void)state;
	const struct plan_rules rules = plan_rules_built_in();
	forecast_open(&s, FORECAST_DARK_MJD);
	assert_true(observing_ready(&s.observing));
	forecast_place(&s, MIDNIGHT_D);
	const double before = plan_worth(&s.window, &rules);
	s.night.observing = NULL;
	assert_false(forecast_explain(&s.window, &s.on, &s.x));
	const uint32_t flags = s.window.event.flags;
	window_make_forecast(&s.window, &s.on);
	check_close("worth", s.window.forecast.worth, s.window.chance.done, 0.0);
	check_close("plan", plan_worth(&s.window, &rules), before, 0.0);
	assert_true(isnan(s.window.forecast.noise_ppt_min) && isnan(s.window.sky.sky_mag_arcsec2));
	assert_int_equal(s.window.event.flags, flags);
	s.telescope.band = "";
	s.observing = observing_of(&s.telescope);
	assert_false(observing_ready(&s.observing));
}

/* The table of moments for people meets the nodes of the forecast. */
static void minutes(void **state)
{
	(void)state;
	struct forecast_moment m[8];
	forecast_open(&s, FORECAST_DARK_MJD);
	forecast_at(&s, MIDNIGHT_D);
	assert_int_equal(forecast_table(&s.on, &s.x, 0.45, 0.45 + 45.0 * MIN_D, 15.0, m, 8), 4);
	check_close("last", m[3].t_d, 0.45 + 45.0 * MIN_D, 1e-12);
	check_close("noise", m[1].noise.minute_ppt, s.window.forecast.noise_ppt_min, 1e-3);
	assert_int_equal(forecast_table(&s.on, &s.x, 0.45, 0.6, 1.0, m, 8), 8);
	assert_int_equal(forecast_table(&s.on, &s.x, 0.45, 0.6, 0.0, m, 8), 0);
}

/* Precision from bits is bits from precision turned round. */
static void inverse_bits(void **state)
{
	(void)state;
	const struct ephemeris e = {.c00 = 1e-4, .ttv_min = 1.0, .systematic_min = 0.3};
	const struct worth_rules rules = {.need_min = 2.0, .floor_min = 0.2};
	const double timing_s[] = {1.0, 30.0, 400.0, 1e5};
	for (size_t i = 0; i < sizeof timing_s / sizeof *timing_s; i++)
		check_close("round trip",
			    worth_timing_s(&e, 0, worth_bits(&e, 0, timing_s[i], &rules), &rules),
			    timing_s[i], 1e-6 * timing_s[i] + 1e-4);
	assert_true(isinf(worth_timing_s(&e, 0, 0.0, &rules)));
	check_close("more than can be had", worth_timing_s(&e, 0, 50.0, &rules), 0.0, 0.0);
	assert_true(isnan(worth_timing_s(&e, 0, NAN, &rules)));
}

/* The night's light against the night itself: linear over 12 min, 3 deg of the sky: (3 deg)^2 / 8 = 0.02 deg.
 */
static void light_of_the_night(void **state)
{
	(void)state;
	forecast_open(&s, FORECAST_FULL_MJD);
	for (int i = -5; i <= 205; i++) {
		const double t_d = i / 200.0 + 1e-4;
		const struct night_light l = night_light_at(&s.night, t_d);
		check_close("Sun", l.sun_alt_deg, night_sun_altaz(&s.night, t_d).alt_deg, 0.04);
		check_close("Moon", l.moon_alt_deg, night_moon_altaz(&s.night, t_d).alt_deg, 0.04);
		check_close("phase", 0.5 * (1.0 + cos(l.moon_phase_deg * DEG_RAD)),
			    night_moon_lit(&s.night, t_d), 1e-4);
		check_close("place", vec3_angle_rad(l.moon, night_moon_topo_km(&s.night, t_d)) / DEG_RAD, 0.0,
			    0.04);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(one_steady_night),
	    cmocka_unit_test(full_moon),
	    cmocka_unit_test(bright_star),
	    cmocka_unit_test(shallow_and_diluted),
	    cmocka_unit_test(unknown),
	    cmocka_unit_test(grazing),
	    cmocka_unit_test(flip),
	    cmocka_unit_test(goals_and_choices),
	    cmocka_unit_test(ways_of_a_plan),
	    cmocka_unit_test(no_magnitude_earns_no_more),
	    cmocka_unit_test(sigma_after),
	    cmocka_unit_test(no_telescope),
	    cmocka_unit_test(minutes),
	    cmocka_unit_test(inverse_bits),
	    cmocka_unit_test(light_of_the_night),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
