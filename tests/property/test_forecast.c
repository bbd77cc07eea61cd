/* SPDX-License-Identifier: MIT
 * Forecasts of random windows: the expectation against a plain drawing of mid-times, and what must hold
 * whichever window it is. */
#include "ephem/chance.h"
#include "ephem/units.h"
#include "ephem/window_stages.h"
#include "tests/support/check.h"
#include "tests/support/forecast_scene.h"

#include <math.h>

static struct forecast_scene s;

/* A star that is well up at some time of the night, an event somewhere in the dark. */
static double invent(struct rng *r, int32_t mjd)
{
	static const char *const band[] = {"V", "R", "I", "r"};
	forecast_open(&s, mjd);
	s.target.ra_deg = rng_between(r, 120.0, 290.0);
	s.target.dec_deg = rng_between(r, -15.0, 85.0);
	s.target.mag = rng_between(r, 8.0, 15.0);
	s.target.band = "V";
	s.target.teff_k = rng_between(r, 3800.0, 8000.0);
	s.target.k = rng_between(r, 0.03, 0.16);
	s.target.duration_h = rng_between(r, 1.0, 5.0);
	s.target.t0_err_d = exp(rng_between(r, log(0.5), log(90.0))) * MIN_D;
	s.telescope.band = band[(int)rng_between(r, 0.0, 3.999)];
	s.telescope.aperture_m = rng_between(r, 0.2, 1.5);
	if (rng_unit(r) < 0.3)
		s.telescope.mount = MOUNT_GERMAN;
	s.observing = observing_of(&s.telescope);
	return rng_between(r, 0.30, 0.70);
}

/* Normal numbers by the polar method (Marsaglia & Bray 1964, from memory). */
static double normal(struct rng *r)
{
	double x, y, q;
	do {
		x = rng_between(r, -1.0, 1.0);
		y = rng_between(r, -1.0, 1.0);
		q = x * x + y * y;
	} while (q >= 1.0 || q == 0.0);
	return x * sqrt(-2.0 * log(q) / q);
}

/* Bits of a mid-time that is caught in any way, else 0; the derivation's nodes and curve. */
static double bits_if_caught(const struct catch_sets *sets, double mid_d)
{
	const struct window_event *ev = &s.window.event;
	const struct timing_input in = {.event = &s.x.event,
					.usable = &s.window.cover.usable,
					.node = s.x.node,
					.n = s.x.n_nodes,
					.flip_d = s.window.forecast.flip_d};
	if (!intervals_contain(&sets->ingress, mid_d) && !intervals_contain(&sets->egress, mid_d) &&
	    !intervals_contain(&sets->done, mid_d))
		return 0.0;
	return worth_bits(&s.prepared.eph, ev->epoch, timing_mid_s(&in, mid_d), &s.observing.rules);
}

static void expectation(void **state)
{
	(void)state;
	enum { WINDOWS = 60, DRAWS = 2000 };
	struct rng r = rng_open("expectation");
	int seen = 0;
	for (int i = 0; i < WINDOWS; i++) {
		struct catch_sets sets;
		struct target_night cut;
		double flip_d, sum = 0.0, squares = 0.0;
		const double mid_d = invent(&r, i % 2 ? FORECAST_DARK_MJD : FORECAST_FULL_MJD);
		forecast_at(&s, mid_d);
		const struct window_event *ev = &s.window.event;
		if (isnan(s.window.forecast.gain_bits))
			continue;
		if (s.window.cover.usable.n == 0) { /* nobody is there */
			check_close("gain of nothing", s.window.forecast.gain_bits, 0.0, 0.0);
			continue;
		}
		const bool flips = window_cut_by_flip(ev, &s.on, &cut, &flip_d);
		window_catch_sets(ev, flips ? &cut : &s.on, &sets);
		for (int k = 0; k < DRAWS; k++) {
			const double b = bits_if_caught(&sets, ev->mid_d + ev->chance_contact_d * normal(&r));
			sum += b;
			squares += b * b;
		}
		const double mean = sum / DRAWS,
			     error = sqrt(fmax(squares / DRAWS - mean * mean, 0.0) / DRAWS);
		/* 4.5 standard errors, and what a rule of few points leaves where half of the other limb
		 * comes into view: 1.5 % of the most that can be had
		 */
		check_close("gain", s.window.forecast.gain_bits, mean,
			    4.5 * error + 0.015 * worth_bits(&s.prepared.eph, 0, 0.0, &s.observing.rules));
		seen += s.window.forecast.gain_bits > 0.0;
	}
	assert_true(seen > WINDOWS / 3);
}

/* No figure is better by more than rounding. NAN where the reference has it too or where light drowned. */
static void no_better(const char *what, const struct window_forecast *than)
{
	const struct window_forecast *f = &s.window.forecast;
	if (f->noise_ppt_min < than->noise_ppt_min * (1.0 - 1e-9) ||
	    f->depth_snr > than->depth_snr * (1.0 + 1e-9) || f->timing_s < than->timing_s * (1.0 - 1e-6) ||
	    f->gain_bits > than->gain_bits * (1.0 + 1e-6) + 1e-12 ||
	    f->sigma_after_min < than->sigma_after_min * (1.0 - 1e-6))
		check_fail(
		    "%s makes it better: noise %.9g %.9g, snr %.9g %.9g, timing %.9g %.9g, gain %.9g %.9g",
		    what, f->noise_ppt_min, than->noise_ppt_min, f->depth_snr, than->depth_snr, f->timing_s,
		    than->timing_s, f->gain_bits, than->gain_bits);
}

static void never_better(void **state)
{
	(void)state;
	struct rng r = rng_open("never better");
	for (int i = 0; i < 150; i++) {
		const double mid_d = invent(&r, FORECAST_FULL_MJD + 3);
		s.observing.exposure_s = 30.0; /* a chosen one answers to the sky */
		s.observing.at_jd_tdb = 2462000.5;
		forecast_at(&s, mid_d);
		const struct window_forecast as_it_is = s.window.forecast;
		struct forecast_scene keep = s;

		for (int k = 0; k < NIGHT_LIGHTS; k++)
			s.night.light[k].moon_phase_deg *= 0.5;
		forecast_at(&s, mid_d);
		no_better("a fuller Moon", &as_it_is);

		s = keep;
		s.observing.dark_zenith_mag[bands[s.observing.optics.band].sky] = 18.5;
		forecast_at(&s, mid_d);
		no_better("a brighter sky", &as_it_is);

		s = keep;
		s.observing.extinction_mag[s.observing.optics.band] = 0.6;
		s.observing.optics.throughput *= 0.5;
		s.observing.optics.dead_s += 20.0;
		for (int k = 0; k < NIGHT_LIGHTS; k++) /* thick air takes moonlight too */
			s.night.light[k].moon_alt_deg = -5.0;
		forecast_at(&s, mid_d);
		const struct window_forecast dull = s.window.forecast;
		s.observing.optics.throughput *= 2.0;
		s.observing.optics.dead_s -= 20.0;
		forecast_at(&s, mid_d);
		const struct window_forecast clearer = s.window.forecast;
		s.window.forecast = dull;
		no_better("less light", &clearer);

		s = keep;
		s.observed.neighbour = 0.4;
		s.observing.optics.full_well_e = INFINITY;
		forecast_at(&s, mid_d);
		if (s.window.forecast.timing_s < as_it_is.timing_s * (1.0 - 1e-6) &&
		    s.x.mid.noise.counting < 1e-2)
			check_fail("a neighbour makes it better: %.9g %.9g", s.window.forecast.timing_s,
				   as_it_is.timing_s);

		s = keep;
		s.observing.rules.need_min = 5.0;
		forecast_at(&s, mid_d);
		if (s.window.forecast.gain_bits > as_it_is.gain_bits + 1e-12)
			check_fail("a lower need is worth more: %.9g %.9g", s.window.forecast.gain_bits,
				   as_it_is.gain_bits);
	}
}

/* Steps between nodes against steps of four minutes: what forecast_noise.c claims, and wide of it while the
 * Moon shows itself. */
static void nodes_are_enough(void **state)
{
	(void)state;
	enum { ROOM = 400 };
	static struct forecast_moment m[ROOM];
	struct rng r = rng_open("nodes");
	for (int i = 0; i < 60; i++) {
		forecast_at(&s, invent(&r, FORECAST_FULL_MJD + i % 14));
		const struct intervals *usable = &s.window.cover.usable;
		for (int k = 0; k < usable->n; k++) {
			const int n =
			    forecast_table(&s.on, &s.x, usable->s[k].from_d, usable->s[k].to_d, 4.0, m, ROOM);
			for (int j = 0; j < n; j++) {
				int a = 0;
				while (a + 2 < s.x.n_nodes && s.x.node[a + 1].t_d <= m[j].t_d)
					a++;
				const struct noise_node *p = &s.x.node[a];
				const double share = (m[j].t_d - p->t_d) / (p[1].t_d - p->t_d);
				const double there =
				    p->minute_ppt + share * (p[1].minute_ppt - p->minute_ppt);
				if (p[1].t_d - p->t_d < 0.1 * MIN_D) /* the Moon's light sets in */
					continue;
				if (isfinite(there) && isfinite(m[j].noise.minute_ppt))
					check_close("noise between nodes", there / m[j].noise.minute_ppt, 1.0,
						    fabs(m[j].moon_alt_deg) < 2.5 ? 0.2
						    : m[j].sun_alt_deg > -16.5	  ? 0.05
										  : 0.03);
			}
		}
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(expectation), cmocka_unit_test(never_better),
					   cmocka_unit_test(nodes_are_enough)};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
