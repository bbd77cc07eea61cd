/* SPDX-License-Identifier: MIT */
#include "tests/support/night_fixture.h"

#include "tests/support/check.h"
#include "tui/run_parts.h"

#include <math.h>
#include <stdlib.h>

/* An event near the middle of the night each; the epoch of the table is `orbits` before it. Numbers are
 * invented. */
static const struct invented {
	const char *name;
	double ra_deg, dec_deg, mid_bjd_tdb;
	long orbits;
	double t0_err_d, period_d, period_err_d, duration_h, k, a_rs, inc_deg, mag;
} invented[FIXTURE_TARGETS] = {
    {"Tern 14 b", 212.4, 38.1, 2461153.8013, 410, 0.00021, 3.412877, 3.1e-7, 2.61, 0.118, 9.6, 87.9, 11.6},
    {"Tern 2 c", 158.0, 21.3, 2461153.6261, 1203, 0.00035, 1.930417, 2.6e-7, 2.12, 0.097, 7.2, 86.1, 12.2},
    {"Tern 31 b", 262.7, 44.0, 2461153.9705, 88, 0.0009, 14.20931, 4.0e-6, 4.3, 0.064, 24.0, 89.1, 10.4},
    {"Tern 7 b", 190.2, 12.9, 2461153.7420, 512, NAN, 4.771, NAN, 3.1, 0.105, NAN, NAN, 12.9},
    {"Tern 40 b", 235.6, 28.3, 2461153.8600, 6400, 0.002, 2.10442, 9.0e-5, 2.0, 0.13, NAN, NAN, 13.1},
    {"Tern 22 b", 112.9, 27.6, 2461153.6604, 300, 0.0004, 5.11982, 1.2e-6, 2.4, 0.101, 12.2, 88.4, 11.1},
    {"Tern 9 b", 173.8, -4.2, 2461153.8180, 745, 0.00028, 2.677301, 5.5e-7, 2.9, 0.121, 7.7, 87.2, 12.0},
    {"Tern 11 b", 205.5, 51.7, 2461153.8100, 31, 0.0016, 38.0117, 2.1e-5, 9.0, 0.081, 46.0, 89.6, 9.8},
    {"Tern 5 b", 248.1, 30.6, 2461153.8290, 900, 0.0003, 2.2204, 6.0e-7, NAN, 0.14, 6.1, 80.4, 12.5},
    {"Tern 33 b", 228.3, 17.0, 2461153.7900, 2100, 0.0011, 6.3301, 3.0e-5, 3.4, 0.11, 15.0, 88.9, 13.4},
    {"Tern 18 b", 221.9, 61.2, 2461153.7005, 4020, 0.00019, 0.451203, 1.1e-7, 0.9, 0.09, 2.7, 84.0, 12.7},
    {"Tern 18 c", 221.9, 61.2, 2461153.7350, 96, 0.0006, 9.0041, 8.0e-6, 2.2, 0.06, 19.9, 88.6, 12.7},
    {"Tern 27 b", 284.0, 8.8, 2461153.9001, 1500, 0.0009, 3.9127, 7.7e-6, 2.5, 0.10, 10.0, 88.2, 12.1},
    {"Tern 44 b", 200.0, -61.0, 2461153.7700, 100, 0.0005, 2.5, 1.0e-6, 2.0, 0.10, 8.0, 88.0, 11.0},
};

static struct target invent(const struct invented *in)
{
	struct target t = target_empty();
	t.name = in->name;
	t.ra_deg = in->ra_deg;
	t.dec_deg = in->dec_deg;
	t.t0 = jd2_normal(in->mid_bjd_tdb, -(double)in->orbits * in->period_d);
	t.t0_err_d = in->t0_err_d;
	t.period_d = in->period_d;
	t.period_err_d = in->period_err_d;
	t.duration_h = in->duration_h;
	t.duration_err_h = 0.04;
	t.k = in->k;
	t.depth_ppt = 1e3 * in->k * in->k;
	t.a_rs = in->a_rs;
	t.inc_deg = in->inc_deg;
	t.mag = in->mag;
	t.band = "V";
	t.source = "invented";
	t.time_scale = "BJD_TDB";
	t.standard =
	    (struct standard){.claim = SCALE_STATED, .origin = ORIGIN_BARYCENTRE, .clock = CLOCK_TDB};
	return t;
}

struct night_fixture *fixture_open(bool zoneinfo)
{
	struct night_fixture *f = calloc(1, sizeof *f);
	struct err e;
	if (!f)
		check_fail("no memory");
	struct run *r = &f->run;
	f->options.min_chance = NAN;
	*r = (struct run){
	    .env = &f->env, .options = &f->options, .leap = leap_builtin, .kinds = KINDS_TRANSIT};
	r->clock.leap = &r->leap;
	r->telescope = telescope_empty();
	r->wall = (struct wall_clock){
	    .leap = &r->leap, .fixed = true, .start = {.mjd = FIXTURE_EVENING_MJD + 1, .sod_s = 15245.0}};
	settings_built_in(&r->settings);
	r->limits = r->settings.limits;
	r->site = (struct site){.name = "Tern Hill",
				.lat_deg = 38.62,
				.lon_east_deg = -109.36,
				.height_m = 2100.0,
				.zone = "America/Denver"};
	if (zoneinfo && zone_open("/usr/share/zoneinfo", r->site.zone, &r->zone, &e) != ST_OK)
		check_fail("%s", e.text);
	r->memo = calloc(1, sizeof *r->memo);
	r->prepared = calloc(FIXTURE_TARGETS, sizeof *r->prepared);
	if (!r->memo || !r->prepared)
		check_fail("no memory");
	for (int i = 0; i < FIXTURE_TARGETS; i++) {
		f->target[i] = invent(&invented[i]);
		r->prepared[r->n_prepared++] =
		    prepare_target(&f->target[i], &r->limits, &r->clock, r->memo, false, false);
	}
	r->targets.n = FIXTURE_TARGETS;
	r->targets.t = f->target;
	return f;
}

void fixture_close(struct night_fixture *f)
{
	zone_close(f->run.zone);
	free(f->run.telescope_text);
	run_drop_observing(&f->run);
	free(f->run.memo);
	free(f->run.prepared);
	free(f);
}

struct night_view fixture_night(struct night_fixture *f, int32_t evening_mjd, bool long_shots)
{
	struct night_view v = {.hidden = 0};
	struct err e;
	const struct window_choice choice = {
	    .kinds = KINDS_TRANSIT, .all = long_shots, .min_chance = MIN_CHANCE_PEOPLE};
	if (night_build(&v.night, &f->run.site, &f->run.clock, evening_mjd, f->run.memo, &e) != ST_OK)
		check_fail("%s", e.text);
	v.dark = night_dark(&v.night, f->run.limits.value[LIM_SUN]);
	if (night_windows(&v.night, f->run.prepared, f->run.n_prepared, &choice, &v.list, &v.hidden, &e) !=
	    ST_OK)
		check_fail("%s", e.text);
	if (long_shots)
		v.hidden = 0;
	return v;
}
