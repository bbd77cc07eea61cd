/* SPDX-License-Identifier: MIT */
#include "ephem/earth_memo.h"

#include "ephem/barycentre.h"
#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>
#include <stdlib.h>

/* Against the series asked each time. */
static void test_light_time(void **state)
{
	(void)state;
	struct earth_memo *memo = calloc(1, sizeof *memo);
	struct sun_memo *sun = calloc(1, sizeof *sun);
	struct rng r = rng_open("earth_memo light time");
	const struct earth_clock clock = {.leap = &leap_builtin};
	const struct observer centre = {.clock = &clock};
	assert_non_null(memo);
	assert_non_null(sun);
	for (int i = 0; i < 300; i++) {
		const double jd = rng_between(&r, 2440000.0, 2470000.0);
		const struct vec3 n =
		    vec3_from_angles(rng_between(&r, 0.0, TWO_PI), rng_between(&r, -1.5, 1.5));
		const struct tt t = {.jd = jd2_normal(jd, 0.0)};
		check_close("light time [s]", earth_memo_light_time_s(memo, jd, n),
			    light_time_s(sun, &centre, t, n, ORIGIN_BARYCENTRE), 0.01);
	}
	assert_true(isnan(earth_memo_light_time_s(memo, 1e6, (struct vec3){1.0, 0.0, 0.0})));
	free(memo);
	free(sun);
}

static void test_there_and_back(void **state)
{
	(void)state;
	struct earth_memo *memo = calloc(1, sizeof *memo);
	struct rng r = rng_open("earth_memo there and back");
	assert_non_null(memo);
	for (int i = 0; i < 100; i++) {
		const struct vec3 n =
		    vec3_from_angles(rng_between(&r, 0.0, TWO_PI), rng_between(&r, -1.5, 1.5));
		const struct utc t = {.mjd = (int32_t)rng_between(&r, 50000.0, 66000.0),
				      .sod_s = rng_between(&r, 0.0, 86399.0)};
		const struct utc back =
		    earth_memo_utc(memo, &leap_builtin, earth_memo_bjd(memo, &leap_builtin, t, n), n);
		check_close("UTC there and back [s]", utc_diff_s(&leap_builtin, t, back), 0.0, 1e-4);
	}
	free(memo);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(test_light_time),
					   cmocka_unit_test(test_there_and_back)};
	return cmocka_run_group_tests_name("earth_memo", tests, NULL, NULL);
}
