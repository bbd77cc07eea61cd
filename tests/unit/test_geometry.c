/* SPDX-License-Identifier: MIT
 * Contacts, durations and depths, checked against a numerical orbit and against plain geometry. */
#include "ephem/geometry.h"

#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>

/* Projected separation in stellar radii at time t [d] after conjunction, from Kepler's equation: knows
 * nothing of the formulas under test. */
static double separation(double t, double period, double a_rs, double inc_deg, double ecc, double omega_deg,
			 int sign)
{
	const double w = omega_deg * DEG_RAD, f0 = sign * PI / 2.0 - w;
	const double e0 = 2.0 * atan2(sqrt(1.0 - ecc) * sin(f0 / 2.0), sqrt(1.0 + ecc) * cos(f0 / 2.0));
	const double m = e0 - ecc * sin(e0) + TWO_PI * t / period;
	double e = m;
	for (int i = 0; i < 200; i++)
		e -= (e - ecc * sin(e) - m) / (1.0 - ecc * cos(e));
	const double f = 2.0 * atan2(sqrt(1.0 + ecc) * sin(e / 2.0), sqrt(1.0 - ecc) * cos(e / 2.0));
	const double radius = a_rs * (1.0 - ecc * cos(e)), si = sin(inc_deg * DEG_RAD);
	return radius * sqrt(1.0 - sin(w + f) * sin(w + f) * si * si);
}

static double contact_after(double reach, double side, double period, double a_rs, double inc_deg, double ecc,
			    double omega_deg, int sign)
{
	double inside = 0.0, outside = 0.2 * period;
	for (int i = 0; i < 200; i++) {
		const double middle = 0.5 * (inside + outside);
		if (separation(side * middle, period, a_rs, inc_deg, ecc, omega_deg, sign) < reach)
			inside = middle;
		else
			outside = middle;
	}
	return inside;
}

/* tolerance [min]: exact for circular orbits; Winn 2010 eq. 16's factor is an approximation for eccentric
 * ones */
static const struct {
	double period, a_rs, inc, k, ecc, omega;
	int sign;
	double tolerance_min;
} orbit_rows[] = {
    {3.4567890, 8.9, 87.0, 0.11, 0.0, 0.0, 1, 1e-6}, {0.8, 2.5, 80.0, 0.1, 0.0, 0.0, 1, 1e-6},
    {3.4567890, 8.9, 83.2, 0.11, 0.0, 0.0, 1, 1e-6}, {10.0, 18.0, 88.9, 0.09, 0.3, 60.0, 1, 0.1},
    {10.0, 18.0, 88.9, 0.09, 0.3, 60.0, -1, 0.1},    {4.0, 9.0, 87.5, 0.1, 0.6, 120.0, 1, 0.8},
    {1.4, 3.3, 89.0, 7.28, 0.0, 0.0, 1, 1e-6},
};

static void durations_against_a_numerical_orbit(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof orbit_rows / sizeof *orbit_rows; i++) {
		const double p = orbit_rows[i].period, a = orbit_rows[i].k > 1.0 ? 30.0 : orbit_rows[i].a_rs,
			     k = orbit_rows[i].k;
		const double inc = orbit_rows[i].inc, ecc = orbit_rows[i].ecc, w = orbit_rows[i].omega;
		const int sign = orbit_rows[i].sign;
		const double b = impact_parameter(a, inc, ecc, w, sign);
		for (int inner = 0; inner < 2; inner++) {
			const double reach = inner ? fabs(1.0 - k) : 1.0 + k;
			if (separation(0.0, p, a, inc, ecc, w, sign) >= reach)
				continue;
			const double want = contact_after(reach, 1.0, p, a, inc, ecc, w, sign) +
					    contact_after(reach, -1.0, p, a, inc, ecc, w, sign);
			const double got = contact_duration_d(p, a, reach - 1.0, b, inc, ecc, w, sign);
			check_close("duration [min]", got * DAY_MIN, want * DAY_MIN,
				    orbit_rows[i].tolerance_min);
		}
	}
}

static struct target planet(double k, double a_rs, double inc_deg)
{
	struct target t = target_empty();
	t.period_d = 4.2;
	t.k = k;
	t.a_rs = a_rs;
	t.inc_deg = inc_deg;
	return t;
}

/* A uniform disc: the share of light lost is the share of the disc covered; radii of IAU 2015 Resolution B3.
 */
static void depths_of_a_uniform_disc(void **state)
{
	(void)state;
	struct target t = planet(0.1, 12.0, 90.0);
	check_close("a tenth of the star's diameter: 1 %", shape_of(&t, KIND_TRANSIT).depth_ppt, 10.0, 1e-12);
	t = planet(EARTH_RADIUS_M / SUN_RADIUS_M, 215.0, 90.0);
	check_close("an Earth before a Sun: 84 ppm", shape_of(&t, KIND_TRANSIT).depth_ppt * 1000.0, 84.0,
		    0.5);
	const double sun = shape_of(&t, KIND_TRANSIT).depth_ppt;
	t = planet(EARTH_RADIUS_M / (0.5 * SUN_RADIUS_M), 215.0, 90.0);
	check_close("half the star, four times the depth", shape_of(&t, KIND_TRANSIT).depth_ppt / sun, 4.0,
		    1e-9);
	t = planet(1.5, 60.0, 90.0);
	check_close("a planet larger than its star hides all of it", shape_of(&t, KIND_TRANSIT).depth_ppt,
		    1000.0, 1e-9);
	t = planet(0.2, 12.0, 90.0);
	t.depth_ppt = 33.3;
	check_close("published depth first", shape_of(&t, KIND_TRANSIT).depth_ppt, 33.3, 0.0);
}

/* Grazing: area of the lens by a fine sum over the star's disc. */
static void grazing_depth_against_a_sum(void **state)
{
	(void)state;
	const double k = 0.11, a = 8.9, inc = 83.42;
	struct target t = planet(k, a, inc);
	const struct shape s = shape_of(&t, KIND_TRANSIT);
	assert_true(s.grazing);
	check_close("no flat part: each limb is half", s.limb_d, 0.5 * s.t14_d, 1e-15);
	const double z = a * cos(inc * DEG_RAD);
	double covered = 0.0;
	const int n = 4000;
	for (int i = 0; i < n; i++) {
		const double x = z - k + 2.0 * k * (i + 0.5) / n;
		const double planet_half = sqrt(fmax(k * k - (x - z) * (x - z), 0.0)),
			     star_half = sqrt(fmax(1.0 - x * x, 0.0));
		covered += 2.0 * fmin(planet_half, star_half) * 2.0 * k / n;
	}
	check_close("lens [ppt]", s.depth_ppt, 1000.0 * covered / PI, 1e-3);
}

/* Every missing-data path, its flags and its figure by hand. */
static void missing_numbers(void **state)
{
	(void)state;
	struct target t = planet(NAN, NAN, NAN);
	struct shape s = shape_of(&t, KIND_TRANSIT);
	assert_true(s.duration_estimated && s.ingress_estimated && s.radius_ratio_assumed && s.occurs);
	assert_true(isnan(s.depth_ppt));
	check_close("assumed k", s.k, 0.1, 0.0);
	/* P/pi asin(sqrt(1.1^2 - 0.5^2) / (a sin i)), a of a Sun: 4.208278 P^(2/3) (Kepler III) */
	const double a = 4.208278 * pow(4.2, 2.0 / 3.0), sin_i = sqrt(1.0 - 0.25 / (a * a));
	check_close("T14 of a Sun", s.t14_d, 4.2 / PI * asin(sqrt(1.21 - 0.25) / (a * sin_i)), 1e-7);
	check_close("its error", s.t14_err_d / s.t14_d, sqrt(0.25 * 0.25 + 0.5 * 0.5), 1e-12);

	t.duration_h = 3.0;
	t.depth_ppt = 12.1;
	s = shape_of(&t, KIND_TRANSIT);
	assert_true(!s.duration_estimated && s.ingress_estimated && s.duration_error_unknown &&
		    !s.radius_ratio_assumed);
	check_close("k from depth", s.k, 0.11, 1e-12);
	check_close("published duration", s.t14_d, 0.125, 1e-15);
	check_close("its missing error counts as exact", s.t14_err_d, 0.0, 0.0);
	/* tau = T14/2 (1 - sqrt(((1-k)^2 - b^2)/((1+k)^2 - b^2))), b = 0.5: depends on T14, k and b alone */
	check_close("limb with b = 0.5", s.limb_d / s.t14_d,
		    0.5 * (1.0 - sqrt((0.89 * 0.89 - 0.25) / (1.11 * 1.11 - 0.25))), 1e-12);

	t.duration_err_h = 0.1;
	s = shape_of(&t, KIND_TRANSIT);
	assert_false(s.duration_error_unknown);
	check_close("published error", s.t14_err_d, 0.1 / 24.0, 1e-15);
}

static void what_cannot_be_true_has_no_effect(void **state)
{
	(void)state;
	struct target t = planet(0.1, 12.0, 60.0); /* b = 6 */
	t.duration_h = 2.5;
	struct shape s = shape_of(&t, KIND_TRANSIT);
	assert_true(s.contradictory && s.occurs && !s.grazing);
	check_close("b assumed", s.b, 0.5, 0.0);
	t.duration_h = 200.0; /* longer than the period */
	s = shape_of(&t, KIND_TRANSIT);
	assert_true(s.contradictory && s.duration_estimated);
	t = planet(0.1, 0.5, NAN); /* an orbit inside the star */
	s = shape_of(&t, KIND_TRANSIT);
	assert_true(s.contradictory && isfinite(s.t14_d) && s.t14_d > 0.0);
	t = planet(0.1, 12.0, NAN);
	t.ecc = 1.3;
	s = shape_of(&t, KIND_TRANSIT);
	assert_true(s.contradictory && isfinite(s.t14_d));
}

/* Kepler III with the IAU 2015 constants; Earth: 1 au = 215.03 R_sun in 365.25636 d */
static void scaled_orbits(void **state)
{
	(void)state;
	check_close("Earth's orbit", a_rs_from_star(1.0, 1.0, 365.25636), AU_M / SUN_RADIUS_M, 0.02);
	const double t14 = contact_duration_d(3.4567890, 8.9, 0.11, 0.465790, 87.0, 0.0, 0.0, 1);
	check_close("and back from T14", a_rs_from_duration(t14, 3.4567890, 0.11, 0.465790), 8.9, 1e-5);
}

static void occultations(void **state)
{
	(void)state;
	struct target t = planet(0.1, 9.0, 88.0);
	t.duration_h = 3.0;
	t.ecc = 0.3;
	t.omega_deg = 60.0;
	const struct shape transit = shape_of(&t, KIND_TRANSIT), behind = shape_of(&t, KIND_OCCULTATION);
	check_close("b ratio (1 + e sin w)/(1 - e sin w)", behind.b / transit.b,
		    (1.0 + 0.3 * sin(PI / 3.0)) / (1.0 - 0.3 * sin(PI / 3.0)), 1e-12);
	assert_true(behind.occurs && behind.t14_d > transit.t14_d && isnan(behind.depth_ppt));
	t.inc_deg = 84.0; /* transits, but passes above the star behind it: b 0.7 and 1.2 */
	t.ecc = 0.3;
	t.omega_deg = 90.0;
	assert_true(shape_of(&t, KIND_TRANSIT).occurs);
	assert_false(shape_of(&t, KIND_OCCULTATION).occurs);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(durations_against_a_numerical_orbit),
	    cmocka_unit_test(depths_of_a_uniform_disc),
	    cmocka_unit_test(grazing_depth_against_a_sum),
	    cmocka_unit_test(missing_numbers),
	    cmocka_unit_test(what_cannot_be_true_has_no_effect),
	    cmocka_unit_test(scaled_orbits),
	    cmocka_unit_test(occultations),
	};
	return cmocka_run_group_tests_name("geometry", tests, NULL, NULL);
}
