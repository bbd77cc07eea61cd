/* SPDX-License-Identifier: MIT */
#include "tests/support/forecast_scene.h"

#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>

static struct sun_memo memo;
static const struct site tern_hill = {
    .name = "Tern Hill", .lat_deg = 38.62, .lon_east_deg = -109.36, .height_m = 2100.0, .zone = ""};
static const struct earth_clock earth = {.leap = &leap_builtin};

static struct telescope half_metre(void)
{
	struct telescope t = telescope_empty();
	t.aperture_m = 0.5;
	t.obstruction = 0.3;
	t.throughput = 0.35;
	t.band = "R";
	t.pixel_arcsec = 0.8;
	t.gain_e_adu = 1.0;
	t.read_noise_e = 8.0;
	t.dark_e_s = 0.1;
	t.full_well_e = 1e5;
	t.defocus_px = 8.0;
	t.dead_s = 5.0;
	t.red_noise_ppt = 0.5;
	t.exposure_s = NAN;
	return t;
}

void forecast_open(struct forecast_scene *s, int32_t mjd)
{
	*s = (struct forecast_scene){.target = target_empty(), .limits = limits_built_in()};
	struct target *t = &s->target;
	assert_int_equal(night_build(&s->night, &tern_hill, &earth, mjd, &memo, NULL), ST_OK);
	s->telescope = half_metre();
	s->observing = observing_of(&s->telescope);
	s->observing.dark_zenith_mag[BAND_R] = 20.9;
	s->observed = observed_unknown();
	assert_int_equal(limits_put(&s->limits, LIM_ALT, 20.0, FROM_OPTION, NULL), ST_OK);
	assert_int_equal(limits_put(&s->limits, LIM_MOON, 0.0, FROM_OPTION, NULL), ST_OK);
	t->name = "Tern 1 b";
	t->ra_deg = 180.0;
	t->dec_deg = 90.0;
	t->period_d = 5.0;
	t->duration_h = 3.0;
	t->duration_err_h = 0.05;
	t->k = 0.1;
	t->mag = 11.0;
	t->band = "R";
	t->t0_err_d = 8.0 * MIN_D;
	t->period_err_d = 1e-9;
	t->t0_period_cov_d2 = 0.0;
	assert_int_equal(standard_parse("BJD_TDB", &t->standard, NULL), ST_OK);
}

void forecast_place(struct forecast_scene *s, double mid_d)
{
	struct sun_sets suns = {.n = 0};
	s->night.telescope = &s->telescope;
	s->night.observing = &s->observing;
	const struct star star = night_star(&s->night, &s->target);
	s->target.t0 = night_bjd_tdb(&s->night, &star, mid_d).jd;
	s->prepared = prepare_target(&s->target, &s->limits, &earth, &memo, false, false);
	assert_true(s->prepared.has_ephemeris);
	s->prepared.observed = &s->observed;
	s->on = target_on_night(&s->night, &s->prepared, &star, &suns, NULL);
	window_make(&s->window, &s->on, KIND_TRANSIT, 0, STAGE_CHANCE);
}

void forecast_at(struct forecast_scene *s, double mid_d)
{
	forecast_place(s, mid_d);
	assert_true(forecast_explain(&s->window, &s->on, &s->x));
}
