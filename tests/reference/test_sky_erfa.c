/* SPDX-License-Identifier: MIT
 * Stars, Sun and Moon of the night tables against ERFA 2.0 (eraApco13, eraAtciq, eraAb, eraAtioq; no
 * refraction, no polar motion) and JPL DE405, over random dates 2000 to 2050 and latitudes -75 to 75. */
#include "ephem/night.h"

#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/erfa_sky.h"

#include <math.h>

enum { NIGHTS = 150, TIMES = 8 };

struct worst {
	double alt, az, rms;
	long n;
};

static void note(struct worst *w, struct altaz got, const struct erfa_sky *want)
{
	double alt = (got.alt_deg - want->alt_deg) * 3600.0;
	double az =
	    remainder(got.az_north_deg - want->az_north_deg, 360.0) * 3600.0 * cos(want->alt_deg * DEG_RAD);
	w->alt = fmax(w->alt, fabs(alt));
	w->az = fmax(w->az, fabs(az));
	w->rms += alt * alt + az * az;
	w->n++;
}

static void report(const char *what, const struct worst *w, double allowed_arcsec)
{
	print_message("%s: altitude %.3f, azimuth cos(altitude) %.3f arcsec at most, %.3f rms, %ld cases\n",
		      what, w->alt, w->az, sqrt(w->rms / (double)w->n), w->n);
	assert_int_equal(w->n, NIGHTS * TIMES);
	check_close(what, w->alt, 0.0, allowed_arcsec);
	check_close(what, w->az, 0.0, allowed_arcsec);
}

struct sample {
	struct site site;
	struct earth_clock clock;
	struct night night;
	struct target target;
	struct star star;
};

static struct sun_memo memo;

/* UT1-UTC at t: it jumps by a second where the night has a leap second, for the Earth turns on. */
static double dut1_at(const struct sample *s, double t_d)
{
	bool after = night_utc(&s->night, t_d).mjd > s->night.noon_utc.mjd;
	return s->clock.ut1_utc_s + (after ? (s->night.length_d - 1.0) * DAY_S : 0.0);
}

static void random_night(struct rng *r, struct sample *s)
{
	struct err e;
	s->site = (struct site){.lat_deg = rng_between(r, -75.0, 75.0),
				.lon_east_deg = rng_between(r, -180.0, 180.0),
				.height_m = rng_between(r, 0.0, 5000.0)};
	s->clock = (struct earth_clock){.leap = &leap_builtin, .ut1_utc_s = rng_between(r, -0.9, 0.9)};
	int32_t mjd = (int32_t)rng_between(r, 51544.0, 69807.0);
	if (night_build(&s->night, &s->site, &s->clock, mjd, &memo, &e) != ST_OK)
		check_fail("%s", e.text);
}

static void random_star(struct rng *r, struct sample *s)
{
	s->target = target_empty();
	s->target.ra_deg = rng_between(r, 0.0, 360.0);
	s->target.dec_deg = asin(rng_between(r, -1.0, 1.0)) / DEG_RAD;
	if (rng_unit(r) < 0.5) { /* the others have no proper motion and no parallax */
		s->target.pm_ra_masyr = rng_between(r, -1000.0, 1000.0);
		s->target.pm_dec_masyr = rng_between(r, -1000.0, 1000.0);
		s->target.plx_mas = rng_between(r, 0.0, 300.0);
	}
	s->star = night_star(&s->night, &s->target);
}

static void stars(void **state)
{
	(void)state;
	struct rng r = rng_open("stars");
	struct worst w = {0};
	for (int i = 0; i < NIGHTS; i++) {
		struct sample s;
		random_night(&r, &s);
		for (int k = 0; k < TIMES; k++) {
			random_star(&r, &s);
			double t_d = rng_between(&r, 0.0, s.night.length_d);
			struct erfa_sky want =
			    erfa_star(&s.target, &s.site, dut1_at(&s, t_d), night_utc(&s.night, t_d));
			note(&w, night_star_altaz(&s.night, &s.star, t_d), &want);
		}
	}
	report("star", &w, 1.0);
}

static void sun_by_epv00(void **state)
{
	(void)state;
	struct rng r = rng_open("Sun");
	struct worst w = {0};
	for (int i = 0; i < NIGHTS; i++) {
		struct sample s;
		random_night(&r, &s);
		for (int k = 0; k < TIMES; k++) {
			double t_d = rng_between(&r, 0.0, s.night.length_d);
			struct erfa_sky want =
			    erfa_body(NULL, JPL_SUN, &s.site, dut1_at(&s, t_d), night_utc(&s.night, t_d));
			note(&w, night_sun_altaz(&s.night, t_d), &want);
		}
	}
	report("Sun (eraEpv00)", &w, 1.0);
}

static void sun_and_moon_by_de405(void **state)
{
	(void)state;
	struct jpl_405 *j = jpl_405_open();
	if (!j)
		check_skip(JPL_405_CITATION);
	struct rng r = rng_open("Sun and Moon");
	struct worst sun = {0}, moon = {0};
	double separation = 0.0, distance = 0.0, sun_separation = 0.0;
	for (int i = 0; i < NIGHTS; i++) {
		struct sample s;
		random_night(&r, &s);
		for (int k = 0; k < TIMES; k++) {
			random_star(&r, &s);
			double t_d = rng_between(&r, 0.0, s.night.length_d);
			struct utc utc = night_utc(&s.night, t_d);
			struct erfa_sky star = erfa_star(&s.target, &s.site, dut1_at(&s, t_d), utc);
			struct erfa_sky want = erfa_body(j, JPL_SUN, &s.site, dut1_at(&s, t_d), utc);
			note(&sun, night_sun_altaz(&s.night, t_d), &want);
			double got = night_sun_sep_deg(&s.night, &s.star, t_d);
			sun_separation =
			    fmax(sun_separation,
				 fabs(got - vec3_angle_rad(want.cirs, star.cirs) / DEG_RAD) * 3600.0);
			want = erfa_body(j, JPL_MOON, &s.site, dut1_at(&s, t_d), utc);
			note(&moon, night_moon_altaz(&s.night, t_d), &want);
			got = night_moon_sep_deg(&s.night, &s.star, t_d);
			separation = fmax(
			    separation, fabs(got - vec3_angle_rad(want.cirs, star.cirs) / DEG_RAD) * 3600.0);
			double km = vec3_norm(night_moon_topo_km(&s.night, t_d));
			distance = fmax(distance, fabs(km - want.distance_au * AU_M / 1000.0));
		}
	}
	jpl_405_close(j);
	report("Sun (DE405)", &sun, 1.0);
	report("Moon (DE405)", &moon, 2.0);
	print_message(
	    "separation from a star: Moon %.3f, Sun %.3f arcsec; distance of the Moon %.2f km at most\n",
	    separation, sun_separation, distance);
	check_close("Moon-star separation", separation, 0.0, 2.0);
	check_close("Sun-star separation", sun_separation, 0.0, 2.0);
	check_close("distance of the Moon", distance, 0.0, 2.0);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(stars),
	    cmocka_unit_test(sun_by_epv00),
	    cmocka_unit_test(sun_and_moon_by_de405),
	};
	return cmocka_run_group_tests_name("sky_erfa", tests, NULL, NULL);
}
