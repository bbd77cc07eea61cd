/* SPDX-License-Identifier: MIT
 * Chances of a limb by the erfc forms. */
#include "ephem/chance.h"

#include "tests/support/check.h"

#include <math.h>

/* mpmath 1.3.0, 40 digits: (erfc(x/sqrt 2) - erfc(y/sqrt 2))/2 */
static const struct {
	double x, y, want, relative;
} normal_rows[] = {
    {-1.0, 1.0, 0.682689492137085897, 1e-15},	  {8.0, 9.0, 6.21983198586583028e-16, 1e-12},
    {-9.0, -8.0, 6.21983198586583028e-16, 1e-12}, {2.0, 3.0, 0.0214002339165491127, 1e-14},
    {-3.0, 2.0, 0.975899970020190698, 1e-15},	  {0.0, 0.0, 0.0, 0.0},
};

static void normal_between_values(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof normal_rows / sizeof *normal_rows; i++)
		check_close("Phi(y) - Phi(x)", normal_between(normal_rows[i].x, normal_rows[i].y),
			    normal_rows[i].want, normal_rows[i].relative * fabs(normal_rows[i].want));
}

/* An event of 180 min with limbs of 22.3 min in good time [0, 300] or [0, 140] + [170, 400], sigma s,
 * mid-time Tc; minutes. Want: by hand, (erfc(-hi/sqrt 2) - erfc(-lo/sqrt 2))/2 with lo, hi the standardised
 * ends of the mid-times that fit, least baseline 0. */
static const struct {
	int spans;
	double centre, sigma, mid, ingress, egress;
} event_rows[] = {
    {1, 150.0, 12.0, 1.00000000, 0.99999971, 0.99999971},
    {1, 110.0, 20.0, 0.99999998, 0.84134475, 0.99999971},
    {2, 200.0, 15.0, 0.97728154, 0.69617259, 1.0},
    {1, 420.0, 20.0, 0.00000000, 0.00446137, 0.0},
};

static void events_in_good_time(void **state)
{
	(void)state;
	const double duration = 180.0, limb = 22.3;
	for (size_t i = 0; i < sizeof event_rows / sizeof *event_rows; i++) {
		struct intervals good = intervals_none();
		intervals_append(&good, 0.0, event_rows[i].spans == 2 ? 140.0 : 300.0);
		if (event_rows[i].spans == 2)
			intervals_append(&good, 170.0, 400.0);
		const struct intervals ingress =
		    intervals_fit(&good, -duration / 2.0, -duration / 2.0 + limb);
		const struct intervals egress = intervals_fit(&good, duration / 2.0 - limb, duration / 2.0);
		check_close("mid", chance_in(&good, event_rows[i].centre, event_rows[i].sigma),
			    event_rows[i].mid, 2e-8);
		check_close("ingress", chance_in(&ingress, event_rows[i].centre, event_rows[i].sigma),
			    event_rows[i].ingress, 5e-9);
		check_close("egress", chance_in(&egress, event_rows[i].centre, event_rows[i].sigma),
			    event_rows[i].egress, 5e-9);
	}
}

static void no_sigma_is_no_chance(void **state)
{
	(void)state;
	const struct intervals good = intervals_one(0.0, 1.0);
	assert_true(isnan(chance_in(&good, 0.5, NAN)));
	assert_true(isnan(chance_in(&good, NAN, 0.1)));
	assert_true(isnan(chance_in(&good, 0.5, -0.1)));
	check_close("exact, inside", chance_in(&good, 0.5, 0.0), 1.0, 0.0);
	check_close("exact, outside", chance_in(&good, 1.5, 0.0), 0.0, 0.0);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(normal_between_values),
	    cmocka_unit_test(events_in_good_time),
	    cmocka_unit_test(no_sigma_is_no_chance),
	};
	return cmocka_run_group_tests_name("chance", tests, NULL, NULL);
}
