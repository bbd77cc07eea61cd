/* SPDX-License-Identifier: MIT
 * The circle round a field's stars against a search that knows nothing of circles through points, the tangent
 * plane by hand, and the light of a field's stars by hand (a difference of 2.5 mag is a factor of 10). */
#include "ephem/star_field.h"

#include "ephem/units.h"
#include "tests/support/check.h"
#include "tui/field_light.h"

#include <math.h>
#include <string.h>

#define NONE ((double)NAN)

/* --- the plane --- */

static void test_plane(void **state)
{
	(void)state;
	struct plane_point p;
	/* by hand: tan 1 deg in arcmin is 60.006093 */
	const double degree = tan(DEG_RAD) / DEG_RAD * 60.0;
	check_close("tan 1 deg", degree, 60.006093, 1e-6);
	assert_true(plane_of_sky(40.0, 20.0, 40.0, 21.0, &p));
	check_close("north x", p.x, 0.0, 1e-9);
	check_close("north y", p.y, degree, 1e-9);
	assert_true(plane_of_sky(359.5, 0.0, 0.5, 0.0, &p)); /* across 0 h */
	check_close("east x", p.x, degree, 1e-9);
	check_close("east y", p.y, 0.0, 1e-9);
	assert_true(plane_of_sky(10.0, 90.0, 10.0, 89.0, &p)); /* from the pole all is south */
	check_close("pole y", p.y, -degree, 1e-9);
	assert_false(plane_of_sky(0.0, 0.0, 81.0, 0.0, &p));
	assert_false(plane_of_sky(0.0, 0.0, 180.0, 0.0, &p)); /* behind: its image would be the centre */
	struct rng r = rng_open("plane and back");
	for (int i = 0; i < 2000; i++) {
		const double ra = rng_between(&r, 0.0, 360.0), dec = rng_between(&r, -89.9, 89.9);
		const struct plane_point at = {rng_between(&r, -90.0, 90.0), rng_between(&r, -90.0, 90.0)};
		double ra_deg, dec_deg;
		sky_of_plane(ra, dec, at, &ra_deg, &dec_deg);
		assert_true(ra_deg >= 0.0 && ra_deg < 360.0);
		assert_true(plane_of_sky(ra, dec, ra_deg, dec_deg, &p));
		check_close("x", p.x, at.x, 1e-8);
		check_close("y", p.y, at.y, 1e-8);
	}
}

/* --- the circle --- */

static double farthest(const struct plane_point p[], int n, double x, double y)
{
	double most = 0.0;
	for (int i = 0; i < n; i++)
		most = fmax(most, hypot(p[i].x - x, p[i].y - y));
	return most;
}

/* The least of `farthest` along a column: it is convex in y, and its least is convex in x. */
static double least_in_column(const struct plane_point p[], int n, double x, double reach)
{
	double lo = -reach, hi = reach;
	for (int i = 0; i < 100; i++) {
		const double a = lo + (hi - lo) / 3.0, b = hi - (hi - lo) / 3.0;
		if (farthest(p, n, x, a) < farthest(p, n, x, b))
			hi = b;
		else
			lo = a;
	}
	return farthest(p, n, x, 0.5 * (lo + hi));
}

static double least_radius(const struct plane_point p[], int n, double reach)
{
	double lo = -reach, hi = reach;
	for (int i = 0; i < 100; i++) {
		const double a = lo + (hi - lo) / 3.0, b = hi - (hi - lo) / 3.0;
		if (least_in_column(p, n, a, reach) < least_in_column(p, n, b, reach))
			hi = b;
		else
			lo = a;
	}
	return least_in_column(p, n, 0.5 * (lo + hi), reach);
}

static void test_circle_by_hand(void **state)
{
	static const struct {
		struct plane_point p[4];
		int n;
		double x, y, radius;
	} rows[] = {
	    {{{0, 0}}, 0, 0, 0, 0},
	    {{{3, 4}}, 1, 3, 4, 0},
	    {{{3, 4}, {3, 4}, {3, 4}}, 3, 3, 4, 0},
	    {{{-3, 0}, {3, 0}}, 2, 0, 0, 3},
	    {{{0, 0}, {4, 0}, {0, 3}}, 3, 2, 1.5, 2.5}, /* a right angle: its hypotenuse */
	    {{{0, 0}, {10, 0}, {4, 1}}, 3, 5, 0, 5},	/* obtuse: its longest side */
	    {{{0, 0}, {1, 1}, {5, 5}, {2, 2}}, 4, 2.5, 2.5, 3.5355339059327378}, /* in a line: 2.5 sqrt 2 */
	    {{{-1, -1}, {1, -1}, {1, 1}, {-1, 1}}, 4, 0, 0, 1.4142135623730951},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		const struct field_circle c = smallest_circle(rows[i].p, rows[i].n);
		check_close("x", c.centre.x, rows[i].x, 1e-12);
		check_close("y", c.centre.y, rows[i].y, 1e-12);
		check_close("radius", c.radius, rows[i].radius, 1e-12);
	}
}

/* Clusters, lines and coincident points among them; the search ends within 1e-9 of its reach. */
static void test_circle_searched(void **state)
{
	(void)state;
	struct rng r = rng_open("smallest circle");
	for (int trial = 0; trial < 400; trial++) {
		struct plane_point p[7];
		const int n = 1 + (int)(7.0 * rng_unit(&r)), kind = trial % 4;
		for (int i = 0; i < n; i++) {
			const double x = rng_between(&r, -20.0, 20.0), y = rng_between(&r, -20.0, 20.0);
			p[i] = (struct plane_point){x, kind == 1 ? 0.5 * x : y};
			if (kind == 2 && i > 0 && rng_unit(&r) < 0.5)
				p[i] = p[i - 1];
			if (kind == 3) /* far and narrow */
				p[i] = (struct plane_point){x, 15.0 + 1e-3 * y};
		}
		const struct field_circle c = smallest_circle(p, n);
		check_close("as found by the search", c.radius, least_radius(p, n, 20.0), 1e-7);
		if (farthest(p, n, c.centre.x, c.centre.y) > c.radius * (1.0 + 1e-9))
			check_fail("trial %d: a point is outside", trial);
	}
}

/* --- light --- */

static struct target star_v(double mag)
{
	struct target t = target_empty();
	t.ra_deg = 100.0;
	t.dec_deg = 20.0;
	t.mag = mag;
	t.band = "V";
	return t;
}

static struct optics optics_in(enum band_id band)
{
	struct telescope t = telescope_empty();
	t.pixel_arcsec = 1.0;
	t.defocus_px = 4.25; /* and 1.5 seeing of 2.5 arcsec: an aperture of 8 arcsec */
	struct optics o = optics_of(&t);
	o.band = band;
	return o;
}

static struct field_star neighbour(double sep_arcsec, double mag, const char *band)
{
	return (struct field_star){.role = STAR_NEIGHBOUR,
				   .name = "",
				   .ra_deg = NONE,
				   .dec_deg = NONE,
				   .sep_arcsec = sep_arcsec,
				   .mag = mag,
				   .band = band,
				   .note = ""};
}

static void test_light(void **state)
{
	(void)state;
	const struct optics v = optics_in(BAND_V), red = optics_in(BAND_R);
	const struct target t = star_v(12.0);
	struct field_star s[6] = {neighbour(3.0, 14.5, "V"), neighbour(8.1, 10.0, "V"),
				  neighbour(7.9, 17.0, "V")};
	check_close("aperture", field_aperture_arcsec(&v), 8.0, 1e-12);
	struct field_light l = field_light_of(&t, s, 3, &v);
	assert_int_equal(l.neighbours, 2); /* the bright one is outside */
	check_close("0.1 and 0.01", l.neighbour, 0.11, 1e-12);
	assert_false(l.assumed);
	assert_true(isnan(l.comparison_stars));
	l = field_light_of(&t, s, 3, &red); /* both in V: their ratio stands for that in R */
	check_close("0.11 in R", l.neighbour, 0.11, 1e-12);
	assert_true(l.assumed);
	/* of another band than the target's and the telescope's */
	s[0].band = "";
	l = field_light_of(&t, s, 1, &v);
	check_close("0.1 of no band", l.neighbour, 0.1, 1e-12);
	assert_true(l.assumed);
	/* a position: 5 arcsec north */
	s[0] = neighbour(NONE, 14.5, "V");
	s[0].ra_deg = 100.0;
	s[0].dec_deg = 20.0 + 5.0 / 3600.0;
	check_close("5 arcsec", field_star_sep_arcsec(&t, &s[0]), 5.0, 1e-6);
	l = field_light_of(&t, s, 1, &v);
	check_close("0.1 by place", l.neighbour, 0.1, 1e-12);
	/* the same in R: it counts once, by the band of the telescope */
	s[1] = s[0];
	s[1].band = "R";
	s[1].mag = 12.0;
	l = field_light_of(&t, s, 2, &v);
	assert_int_equal(l.neighbours, 1);
	check_close("once", l.neighbour, 0.1, 1e-12);
	/* no magnitude of the target */
	const struct target dark = star_v(NONE);
	l = field_light_of(&dark, s, 1, &v);
	assert_true(isnan(l.neighbour));
}

static void test_comparison(void **state)
{
	(void)state;
	const struct optics v = optics_in(BAND_V);
	const struct target t = star_v(12.0);
	struct field_star s[3] = {neighbour(NONE, 12.0, "V"), neighbour(NONE, 9.5, "V"),
				  neighbour(NONE, 8.0, "V")};
	for (int i = 0; i < 3; i++) {
		s[i].role = i < 2 ? STAR_COMPARISON : STAR_GUIDE; /* a guide star brings no noise */
		s[i].ra_deg = 100.0 + 0.01 * i;
		s[i].dec_deg = 20.05;
	}
	const struct field_light l = field_light_of(&t, s, 3, &v);
	check_close("1 and 10", l.comparison_stars, 11.0, 1e-12);
	check_close("no neighbour", l.neighbour, 0.0, 0.0);
}

static void test_fit(void **state)
{
	(void)state;
	const struct target t = star_v(12.0);
	struct field_star s[3] = {neighbour(1.0, 12.0, "V"), neighbour(NONE, 9.5, "V"),
				  neighbour(NONE, 8.0, "V")};
	s[1].role = STAR_COMPARISON;
	s[1].ra_deg = 100.0;
	s[1].dec_deg = 20.0 + 8.0 / 60.0;
	s[2].role = STAR_GUIDE;
	s[2].ra_deg = 100.0;
	s[2].dec_deg = 20.0 - 4.0 / 60.0;
	/* 12 arcmin from north to south; the target itself need not be in the middle */
	struct field_fit f = field_fit_of(&t, s, 3, 12.1);
	assert_int_equal(f.stars, 2);
	check_close("12 arcmin", f.needs_arcmin, 12.0, 1e-3);
	check_close("centre", f.dec_deg, 20.0 + 2.0 / 60.0, 1e-6);
	assert_true(f.fits);
	f = field_fit_of(&t, s, 3, 11.9);
	assert_false(f.fits);
	f = field_fit_of(&t, s, 3, NONE);
	assert_false(f.known);
	assert_false(f.fits);
	s[2].dec_deg = -75.0;
	f = field_fit_of(&t, s, 3, 600.0);
	assert_true(isinf(f.needs_arcmin));
	assert_false(f.fits);
	f = field_fit_of(&t, s, 1, 10.0); /* a neighbour alone has nothing to fit */
	assert_int_equal(f.stars, 0);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_plane),	    cmocka_unit_test(test_circle_by_hand),
	    cmocka_unit_test(test_circle_searched), cmocka_unit_test(test_light),
	    cmocka_unit_test(test_comparison),	    cmocka_unit_test(test_fit),
	};
	return cmocka_run_group_tests_name("star_field", tests, NULL, NULL);
}
