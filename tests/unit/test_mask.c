/* SPDX-License-Identifier: MIT
 * The horizon mask: linear in azimuth, wrapping over north. */
#include "ephem/mask.h"

#include "tests/support/check.h"

#include <math.h>

static struct mask four(void)
{
	struct mask m = {.n = 0};
	/* given out of order: kept by azimuth */
	assert_int_equal(mask_add(&m, 200.0, 10.0, NULL), ST_OK);
	assert_int_equal(mask_add(&m, 10.0, 12.0, NULL), ST_OK);
	assert_int_equal(mask_add(&m, 330.0, 18.0, NULL), ST_OK);
	assert_int_equal(mask_add(&m, 80.0, 25.0, NULL), ST_OK);
	return m;
}

static void linear_between_knots(void **state)
{
	(void)state;
	const struct mask m = four();
	/* by hand: two-point form; over north 330 (18) to 10 (12) */
	const struct {
		double az, alt;
	} row[] = {{10, 12},   {45, 18.5},	    {80, 25},	 {140, 17.5}, {200, 10},
		   {265, 14},  {330, 18},	    {340, 16.5}, {0, 13.5},   {360, 13.5},
		   {5, 12.75}, {359.999, 13.50015}, {-20, 16.5}, {725, 12.75}};
	for (size_t i = 0; i < sizeof row / sizeof *row; i++)
		check_close("mask", mask_at(&m, row[i].az), row[i].alt, 1e-9);
}

static void few_knots(void **state)
{
	(void)state;
	struct mask m = {.n = 0};
	check_close("none", mask_at(&m, 123.0), -90.0, 0.0);
	assert_int_equal(mask_add(&m, 360.0, 7.0, NULL), ST_OK);
	check_close("one: all round", mask_at(&m, 123.0), 7.0, 1e-12);
	assert_int_equal(mask_add(&m, 180.0, 17.0, NULL), ST_OK);
	check_close("two: a quarter", mask_at(&m, 90.0), 12.0, 1e-12);
	check_close("two: the other side", mask_at(&m, 270.0), 12.0, 1e-12);
}

static void refusals(void **state)
{
	(void)state;
	struct mask m = four();
	const double bad[][2] = {{-1, 5}, {360.5, 5}, {NAN, 5}, {10.5, 91}, {10.5, -11}, {10.5, NAN}};
	for (size_t i = 0; i < sizeof bad / sizeof *bad; i++)
		assert_int_equal(mask_add(&m, bad[i][0], bad[i][1], NULL), ST_RANGE);
	assert_int_equal(mask_add(&m, 80.0, 26.0, NULL), ST_CONFLICT);
	assert_int_equal(mask_add(&m, 80.0, 25.0, NULL), ST_OK);
	assert_int_equal(m.n, 4);
	for (int i = 0; m.n < MASK_KNOTS_MAX; i++)
		assert_int_equal(mask_add(&m, 0.3 + i * 0.45, 5.0, NULL), ST_OK);
	assert_int_equal(mask_add(&m, 359.99, 5.0, NULL), ST_MEMORY);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(linear_between_knots),
	    cmocka_unit_test(few_knots),
	    cmocka_unit_test(refusals),
	};
	return cmocka_run_group_tests_name("horizon mask", tests, NULL, NULL);
}
