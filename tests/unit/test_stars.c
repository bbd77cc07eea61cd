/* SPDX-License-Identifier: MIT
 * Planets of one star, by name; positions that disagree. */
#include "ephem/stars.h"

#include "tests/support/check.h"

static struct target named(const char *name, double ra_deg, double dec_deg)
{
	struct target t = target_empty();
	t.name = name;
	t.ra_deg = ra_deg;
	t.dec_deg = dec_deg;
	return t;
}

static void one_star_one_number(void **state)
{
	(void)state;
	const struct target t[] = {
	    named("Tern 14 b", 10.0, 20.0),  named("Tern 1 b", 50.0, 20.0), named("Tern 14 c", 10.0, 20.001),
	    named("Tern 14", 80.0, 0.0),     named("Tern 2c", 90.0, 5.0),   named("Tern 2b", 90.0, 5.5),
	    named("Tern 14 b b", 10.0, 0.0), named("b", 0.0, 0.0),
	};
	enum { N = sizeof t / sizeof *t };
	uint32_t star[N];
	bool doubtful[N];
	assert_int_equal(stars_group(t, N, star, doubtful, NULL), ST_OK);
	assert_int_equal(star[0], star[2]);
	assert_int_equal(star[0], star[3]); /* the star's own name */
	assert_int_equal(star[4], star[5]);
	assert_int_not_equal(star[0], star[1]);
	assert_int_not_equal(star[0], star[6]);
	assert_int_not_equal(star[7], star[1]);
	/* 3.6 arcsec is rounding, half a degree is not; both of a pair are doubtful, since nobody can say
	 * which is right */
	assert_true(doubtful[4] && doubtful[5] && doubtful[0] && doubtful[3]);
	assert_false(doubtful[1]);
	struct target near[] = {t[0], t[2]};
	assert_int_equal(stars_group(near, 2, star, doubtful, NULL), ST_OK);
	assert_false(doubtful[0] || doubtful[1]);
	assert_int_equal(stars_group(t, 0, star, doubtful, NULL), ST_OK);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(one_star_one_number)};
	return cmocka_run_group_tests_name("stars", tests, NULL, NULL);
}
