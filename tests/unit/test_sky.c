/* SPDX-License-Identifier: MIT
 * Horizon coordinates, refraction, airmass, vectors and fits. */
#include "ephem/sky.h"

#include "ephem/chebyshev.h"
#include "ephem/crossings.h"
#include "ephem/frame.h"
#include "ephem/units.h"
#include "tests/support/check.h"

#include <erfa.h>
#include <math.h>

/* Against eraHd2ae, eraHd2pa (ERFA 2.0). */
static void horizon_against_erfa(void **state)
{
	(void)state;
	struct rng r = rng_open("horizon");
	for (int i = 0; i < 2000; i++) {
		double lat = asin(rng_between(&r, -1.0, 1.0)), ha = rng_between(&r, -PI, PI),
		       dec = asin(rng_between(&r, -1.0, 1.0)), lst = rng_between(&r, 0.0, TWO_PI), az, el;
		struct horizon_frame h = horizon_at(lat, lst);
		struct altaz got = horizon_altaz(&h, vec3_from_angles(lst - ha, dec));
		eraHd2ae(ha, dec, lat, &az, &el);
		check_close("altitude", got.alt_deg, el / DEG_RAD, 1e-10);
		check_close("azimuth", remainder(got.az_north_deg - az / DEG_RAD, 360.0) * cos(el), 0.0,
			    1e-10);
		assert_true(got.az_north_deg >= 0.0 && got.az_north_deg < 360.0);
		check_close(
		    "parallactic angle",
		    remainder(parallactic_deg(lat, ha, dec) - eraHd2pa(ha, dec, lat) / DEG_RAD, 360.0), 0.0,
		    1e-8);
	}
}

static void horizon_edges(void **state)
{
	(void)state;
	/* the zenith, from everywhere: 90 deg, no NaN */
	for (int lat = -90; lat <= 90; lat += 10) {
		struct horizon_frame h = horizon_at(lat * DEG_RAD, 1.0);
		struct altaz a = horizon_altaz(&h, h.up), n = horizon_altaz(&h, h.north),
			     e = horizon_altaz(&h, h.east);
		check_close("zenith", a.alt_deg, 90.0, 1e-12);
		assert_true(a.az_north_deg >= 0.0 && a.az_north_deg < 360.0);
		check_close("north point", remainder(n.az_north_deg, 360.0), 0.0, 1e-12);
		check_close("east point", e.az_north_deg, 90.0, 1e-12);
	}
}

static void refraction_rows(void **state)
{
	(void)state;
	/* arcmin. Bennett 1982 (J. Navigation 35, 255) gives 34.48 at apparent 0: Saemundsson's true altitude
	 * is then -34.48' */
	check_close("horizon", refraction_deg(-34.4775 / 60.0, 1010.0, 10.0) * 60.0, 34.4775, 0.5);
	/* against Bennett's R = cot(h + 7.31 / (h + 4.4)), the same tables: they agree within 0.1' (Meeus
	 * 1998, chapter 16) */
	for (double apparent = 5.0; apparent <= 90.0; apparent += 1.0) {
		double bennett = 1.0 / tan((apparent + 7.31 / (apparent + 4.4)) * DEG_RAD);
		check_close("refraction", refraction_deg(apparent - bennett / 60.0, 1010.0, 10.0) * 60.0,
			    bennett, 0.1);
	}
	/* against eraRefco (ERFA 2.0): R = A tan z + B tan^3 z for apparent z, 0.1' above 20 deg */
	double a, b;
	eraRefco(780.0, 5.0, 0.0, 0.55, &a, &b);
	for (double apparent = 20.0; apparent <= 89.0; apparent += 1.0) {
		double t = tan((90.0 - apparent) * DEG_RAD), want = (a * t + b * t * t * t) / DEG_RAD;
		check_close("refraction at 780 hPa", refraction_deg(apparent - want, 780.0, 5.0) * 60.0,
			    want * 60.0, 0.1);
	}
	check_close("below the horizon it stays", refraction_deg(-30.0, 1010.0, 10.0),
		    refraction_deg(-1.0, 1010.0, 10.0), 0.0);
	assert_true(isnan(refraction_deg((double)NAN, 1010.0, 10.0)));
	check_close("zenith", refraction_deg(90.0, 1010.0, 10.0), 0.0, 1e-4);
	/* ICAO standard atmosphere (Doc 7488, 1993), table: hPa at 0, 1000, 2000, 3000, 5000 m (from memory)
	 */
	static const double pressure[][2] = {
	    {0.0, 1013.25}, {1000.0, 898.75}, {2000.0, 794.95}, {3000.0, 701.09}, {5000.0, 540.20}};
	for (size_t i = 0; i < sizeof pressure / sizeof *pressure; i++)
		check_close("pressure", pressure_hpa(pressure[i][0]), pressure[i][1], 0.05);
}

static void airmass_rows(void **state)
{
	(void)state;
	check_close("zenith", airmass_young(90.0), 1.0, 1e-6);
	/* Young 1994, Applied Optics 33, 1108: 31.7 at the true horizon (from memory), which is 38 at the
	 * apparent one */
	check_close("true horizon", airmass_young(0.0), 31.7, 0.05);
	assert_true(isnan(airmass_young(-0.001)));
	assert_true(isnan(airmass_young((double)NAN)));
	/* against Kasten & Young 1989 (Applied Optics 28, 4735), which takes the apparent altitude */
	for (double apparent = 10.0; apparent <= 90.0; apparent += 2.0) {
		double kasten = 1.0 / (sin(apparent * DEG_RAD) + 0.50572 * pow(apparent + 6.07995, -1.6364));
		double bennett_deg = 1.0 / tan((apparent + 7.31 / (apparent + 4.4)) * DEG_RAD) / 60.0;
		check_close("airmass", airmass_young(apparent - bennett_deg) / kasten, 1.0, 0.0015);
	}
	double before = (double)INFINITY;
	for (double alt = 0.0; alt <= 90.0; alt += 0.25) {
		double x = airmass_young(alt);
		assert_true(x < before);
		before = x;
		check_close("back to the altitude", airmass_altitude_deg(x), alt, alt > 89.0 ? 1e-6 : 1e-8);
	}
	check_close("less than any", airmass_altitude_deg(0.5), 90.0, 0.0);
	check_close("one", airmass_altitude_deg(1.0), 90.0, 0.1);
	check_close("more than any", airmass_altitude_deg(100.0), 0.0, 0.0);
	assert_true(isnan(airmass_altitude_deg((double)NAN)));
}

static void vectors(void **state)
{
	(void)state;
	struct rng r = rng_open("vectors");
	for (int i = 0; i < 500; i++) {
		double a = rng_between(&r, 0.0, TWO_PI), b = asin(rng_between(&r, -1.0, 1.0)), lon, lat,
		       angle = rng_between(&r, -4.0, 4.0);
		struct vec3 v = vec3_from_angles(a, b);
		vec3_to_angles(vec3_scale(v, 3.0), &lon, &lat);
		check_close("longitude", remainder(lon - a, TWO_PI) * cos(b), 0.0, 1e-14);
		check_close("latitude", lat, b, 1e-14);
		/* sense of the rotations as in eraRx, eraRy, eraRz */
		double m[3][3];
		struct mat3 x = mat3_rot_x(angle), y = mat3_rot_y(angle), z = mat3_rot_z(angle),
			    all = mat3_mul(&x, &y);
		all = mat3_mul(&all, &z);
		eraIr(m);
		eraRz(angle, m);
		eraRy(angle, m);
		eraRx(angle, m);
		for (int k = 0; k < 9; k++)
			check_close("rotation", all.m[k / 3][k % 3], m[k / 3][k % 3], 1e-15);
		struct vec3 back = mat3_apply_t(&all, mat3_apply(&all, v));
		check_close("there and back", vec3_norm(vec3_sub(back, v)), 0.0, 1e-15);
	}
	/* small and nearly opposite angles, where the arc cosine of a product fails */
	struct vec3 v = {1.0, 0.0, 0.0};
	check_close("small", vec3_angle_rad(v, (struct vec3){1.0, 1e-12, 0.0}), 1e-12, 1e-27);
	check_close("opposite", PI - vec3_angle_rad(v, (struct vec3){-1.0, 1e-9, 0.0}), 1e-9, 1e-15);
	double lon = 7.0, lat = 7.0;
	vec3_to_angles((struct vec3){0.0, 0.0, 0.0}, &lon, &lat);
	check_close("no direction", lon + lat, 0.0, 0.0);
	vec3_to_angles((struct vec3){1.0, -1e-300, 0.0}, &lon, &lat);
	assert_true(lon >= 0.0 && lon < TWO_PI);
	check_close("zero vector", vec3_norm(vec3_unit((struct vec3){0.0, 0.0, 0.0})), 0.0, 0.0);
	/* site: eraGd2gc, WGS84 */
	double gc[3];
	struct vec3 site = frame_site_itrs_m(-33.25, 151.5, 1234.5);
	assert_int_equal(eraGd2gc(1, 151.5 * DEG_RAD, -33.25 * DEG_RAD, 1234.5, gc), 0);
	check_close("site [m]", vec3_norm(vec3_sub(site, (struct vec3){gc[0], gc[1], gc[2]})), 0.0, 1e-6);
}

static void fits(void **state)
{
	(void)state;
	/* a polynomial of the degree of the fit comes back exactly, with its derivative */
	struct rng r = rng_open("fits");
	for (int terms = 1; terms <= CHEB_TERMS_MAX; terms++) {
		double c[CHEB_TERMS_MAX];
		struct vec3 value[CHEB_TERMS_MAX];
		for (int j = 0; j < terms; j++)
			c[j] = rng_between(&r, -1.0, 1.0);
		for (int k = 0; k < terms; k++) {
			double x = cheb3_node(terms, -0.5, 1.5, k), p = 0.0;
			assert_true(x > -0.5 && x < 1.5);
			for (int j = terms - 1; j >= 0; j--)
				p = p * x + c[j];
			value[k] = (struct vec3){p, 2.0 * p, -p};
		}
		struct cheb3 f;
		cheb3_fit(&f, terms, -0.5, 1.5, value);
		for (double x = -0.5; x <= 1.5; x += 0.125) {
			double p = 0.0, d = 0.0;
			for (int j = terms - 1; j >= 0; j--) {
				d = d * x + p;
				p = p * x + c[j];
			}
			struct vec3 v = cheb3_at(&f, x), rate = cheb3_rate(&f, x);
			double size = pow(1.5, terms);
			check_close("value", v.x, p, 1e-13 * size);
			check_close("second value", v.y, 2.0 * p, 2e-13 * size);
			check_close("derivative", rate.x, d, 1e-11 * size);
			check_close("third derivative", rate.z, -d, 1e-11 * size);
		}
	}
}

struct wave {
	double frequency, offset;
};

static double wave_at(const void *context, double t)
{
	const struct wave *w = context;
	return cos(w->frequency * t) + w->offset;
}

static void crossings(void **state)
{
	(void)state;
	/* cos(wt) >= -offset is known in closed form; offsets close to -1 and 1 are double crossings between
	 * samples */
	static const double offsets[] = {0.0, 0.5, -0.5, 0.999, -0.999, 0.999999, -0.999999, 1.1, -1.1};
	for (size_t i = 0; i < sizeof offsets / sizeof *offsets; i++)
		for (int with_rate = 0; with_rate < 2; with_rate++)
			for (double frequency = 1.0; frequency < 30.0; frequency *= 1.37) {
				struct wave w = {frequency, offsets[i]};
				struct curve c = {
				    .at = wave_at, .context = &w, .rate_max = with_rate ? frequency : 0.0};
				struct intervals got = crossings_positive(&c, 0.1, 1.1, 0.02);
				double half = -w.offset <= -1.0	 ? PI
					      : -w.offset >= 1.0 ? 0.0
								 : acos(-w.offset),
				       length = 0.0;
				for (int k = -1; k < 10; k++) {
					double from = (TWO_PI * k - half) / frequency,
					       to = (TWO_PI * k + half) / frequency;
					length += fmax(0.0, fmin(to, 1.1) - fmax(from, 0.1));
				}
				check_close("length", intervals_length(&got), length, 2e-6);
			}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(horizon_against_erfa),
	    cmocka_unit_test(horizon_edges),
	    cmocka_unit_test(refraction_rows),
	    cmocka_unit_test(airmass_rows),
	    cmocka_unit_test(vectors),
	    cmocka_unit_test(fits),
	    cmocka_unit_test(crossings),
	};
	return cmocka_run_group_tests_name("sky", tests, NULL, NULL);
}
