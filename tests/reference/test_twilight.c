/* SPDX-License-Identifier: MIT
 * Rise, set and twilight of Sun and Moon against roots found apart from the engine: altitudes from ERFA 2.0
 * and eraEpv00 (Sun) or JPL DE405 (Moon), sampled every six minutes and bisected. */
#include "ephem/night.h"

#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/erfa_sky.h"

#include <math.h>

static struct sun_memo memo;
static struct jpl_405 *jpl;

enum { STEPS = 240 };

struct outside {
	const struct night *night;
	const struct site *site;
	bool moon;
	double limit_deg;
	double
	    sample[STEPS + 1]; /* altitudes over the night, the Moon's of the upper limb (radius 1737.4 km) */
};

static double altitude(const struct outside *o, double t_d)
{
	struct utc t = night_utc(o->night, t_d);
	struct erfa_sky s = erfa_body(o->moon ? jpl : NULL, o->moon ? JPL_MOON : JPL_SUN, o->site, 0.0, t);
	return s.alt_deg + (o->moon ? asin(1737.4 / (s.distance_au * AU_M / 1000.0)) / DEG_RAD : 0.0);
}

static double above(const struct outside *o, double t_d)
{
	return altitude(o, t_d) - o->limit_deg;
}

static void sample(struct outside *o)
{
	for (int i = 0; i <= STEPS; i++)
		o->sample[i] = altitude(o, o->night->length_d * i / STEPS);
}

struct found {
	double first_up, first_down, last_up; /* NAN: none */
	double nearest_deg;		      /* of the highest or lowest sample to the limit */
};

static struct found search(const struct outside *o)
{
	struct found f = {(double)NAN, (double)NAN, (double)NAN, 0.0};
	double highest = -999.0, lowest = 999.0;
	for (int i = 0; i < STEPS; i++) {
		double y0 = o->sample[i] - o->limit_deg, y1 = o->sample[i + 1] - o->limit_deg;
		double a = o->night->length_d * i / STEPS, b = o->night->length_d * (i + 1) / STEPS;
		highest = fmax(highest, y1);
		lowest = fmin(lowest, y1);
		if ((y0 >= 0.0) == (y1 >= 0.0))
			continue;
		while (b - a > 1e-8) {
			double m = 0.5 * (a + b);
			if ((above(o, m) >= 0.0) == (y0 >= 0.0))
				a = m;
			else
				b = m;
		}
		if (y1 >= 0.0) {
			f.last_up = a;
			if (isnan(f.first_up))
				f.first_up = a;
		} else if (isnan(f.first_down)) {
			f.first_down = a;
		}
	}
	f.nearest_deg = fmin(fabs(highest), fabs(lowest));
	return f;
}

struct tally {
	double seconds, arcsec;
	int compared, grazing, absent;
};

/* 1 s, or where the crossing is so slow that 1 arcsec is more: 1 arcsec of altitude. */
static void compare(struct tally *w, const struct outside *o, const struct found *f, double got, double want)
{
	if (isnan(got) != isnan(want)) { /* only where the extremum itself is within 1 arcsec of the limit */
		double at = isnan(got) ? want : got, margin = fabs(above(o, at)) * 3600.0;
		if (!(margin < 1.0 && f->nearest_deg * 3600.0 < 20.0))
			check_fail("latitude %.2f, limit %.2f: got %.6f, want %.6f", o->site->lat_deg,
				   o->limit_deg, got, want);
		w->grazing++;
		return;
	}
	if (isnan(got)) {
		w->absent++;
		return;
	}
	double seconds = fabs(got - want) * DAY_S, arcsec = fabs(above(o, got)) * 3600.0;
	w->compared++;
	w->arcsec = fmax(w->arcsec, arcsec);
	if (seconds > 1.0)
		w->grazing++;
	else
		w->seconds = fmax(w->seconds, seconds);
	if (seconds > 1.0 && arcsec > 1.0)
		check_fail("latitude %.2f, limit %.2f: %.3f s and %.3f arcsec off", o->site->lat_deg,
			   o->limit_deg, seconds, arcsec);
}

static void report(const char *what, const struct tally *w)
{
	print_message("%s: %d times, %.3f s, %.3f arcsec at most; %d grazing, %d absent in both\n", what,
		      w->compared, w->seconds, w->arcsec, w->grazing, w->absent);
}

static void random_night(struct rng *r, struct site *site, struct night *n)
{
	const struct earth_clock clock = {.leap = &leap_builtin};
	*site = (struct site){.lat_deg = rng_between(r, -75.0, 75.0),
			      .lon_east_deg = rng_between(r, -180.0, 180.0),
			      .height_m = rng_between(r, 0.0, 4000.0)};
	struct err e;
	do { /* a night with a leap second has two values of UT1-UTC: not here */
		if (night_build(n, site, &clock, (int32_t)rng_between(r, 51544.0, 69807.0), &memo, &e) !=
		    ST_OK)
			check_fail("%s", e.text);
	} while (n->length_d != 1.0);
}

static void compare_sun(struct tally *w, const struct site *site, const struct night *n)
{
	const struct {
		double limit, dusk, dawn;
	} rows[] = {
	    {-50.0 / 60.0, n->times.sunset_d, n->times.sunrise_d},
	    {-6.0, n->times.civil_dusk_d, n->times.civil_dawn_d},
	    {-12.0, n->times.nautical_dusk_d, n->times.nautical_dawn_d},
	    {-18.0, n->times.astronomical_dusk_d, n->times.astronomical_dawn_d},
	};
	struct outside o = {.night = n, .site = site};
	sample(&o);
	for (size_t k = 0; k < 4; k++) {
		o.limit_deg = rows[k].limit;
		struct found f = search(&o);
		compare(w, &o, &f, rows[k].dusk, f.first_down);
		compare(w, &o, &f, rows[k].dawn, f.last_up);
	}
}

static void sun(void **state)
{
	(void)state;
	struct rng r = rng_open("twilight");
	struct tally w = {0};
	for (int i = 0; i < 25; i++) {
		struct site site;
		struct night n;
		random_night(&r, &site, &n);
		compare_sun(&w, &site, &n);
	}
	report("Sun", &w);
	assert_true(w.compared > 100);
}

/* Midsummer where the Sun's depth at midnight is within 3 arcmin of a limit: the crossing takes minutes for
 * an arcsecond. */
static void grazing_sun(void **state)
{
	(void)state;
	static const struct earth_clock clock = {.leap = &leap_builtin};
	static const double limits[] = {50.0 / 60.0, 6.0, 12.0, 18.0};
	struct rng r = rng_open("grazing twilight");
	struct tally w = {0};
	for (int i = 0; i < 16; i++) {
		int year = (int)rng_between(&r, 2000.0, 2051.0);
		int32_t mjd;
		assert_int_equal(date_to_mjd((struct date){year, 6, 21}, &mjd, NULL), ST_OK);
		/* 23.437 deg: the Sun's declination at the solstice */
		struct site site = {.lat_deg = 90.0 - 23.437 - limits[i % 4] + rng_between(&r, -0.05, 0.05),
				    .lon_east_deg = rng_between(&r, -180.0, 180.0)};
		struct night n;
		assert_int_equal(night_build(&n, &site, &clock, mjd, &memo, NULL), ST_OK);
		compare_sun(&w, &site, &n);
	}
	report("Sun, grazing", &w);
	assert_true(w.compared > 40);
}

static void moon(void **state)
{
	(void)state;
	jpl = jpl_405_open();
	if (!jpl)
		check_skip(JPL_405_CITATION);
	struct rng r = rng_open("moonrise");
	struct tally w = {0};
	for (int i = 0; i < 25; i++) {
		struct site site;
		struct night n;
		random_night(&r, &site, &n);
		struct outside o = {.night = &n, .site = &site, .limit_deg = -34.0 / 60.0, .moon = true};
		sample(&o);
		struct found f = search(&o);
		compare(&w, &o, &f, n.times.moonrise_d, f.first_up);
		compare(&w, &o, &f, n.times.moonset_d, f.first_down);
	}
	report("Moon", &w);
	assert_true(w.compared > 30);
	jpl_405_close(jpl);
	jpl = NULL;
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(sun),
	    cmocka_unit_test(grazing_sun),
	    cmocka_unit_test(moon),
	};
	return cmocka_run_group_tests_name("twilight", tests, NULL, NULL);
}
