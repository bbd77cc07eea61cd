/* SPDX-License-Identifier: MIT
 * Sets of time: edges that a random loop seldom meets. */
#include "ephem/intervals.h"

#include "tests/support/check.h"

#include <math.h>

static struct intervals make(int n, const double *ends)
{
	struct intervals set = intervals_none();
	for (int i = 0; i < n; i++)
		intervals_append(&set, ends[2 * i], ends[2 * i + 1]);
	return set;
}

static void same(const struct intervals *got, int n, const double *ends)
{
	assert_int_equal(got->n, n);
	for (int i = 0; i < n; i++) {
		check_close("from", got->s[i].from_d, ends[2 * i], 0.0);
		check_close("to", got->s[i].to_d, ends[2 * i + 1], 0.0);
	}
}

static void edges(void **state)
{
	(void)state;
	struct intervals none = intervals_none(), set;
	assert_int_equal(none.n, 0);
	assert_false(none.overflow);
	assert_int_equal(intervals_one(1.0, 1.0).n, 0);
	assert_int_equal(intervals_one(2.0, 1.0).n, 0);
	assert_int_equal(intervals_one((double)NAN, 1.0).n, 0);
	assert_int_equal(intervals_one(1.0, (double)NAN).n, 0);

	set = make(3, (const double[]){0.0, 1.0, 1.0, 2.0, 3.0, 4.0}); /* touching ones merge */
	same(&set, 2, (const double[]){0.0, 2.0, 3.0, 4.0});
	check_close("length", intervals_length(&set), 3.0, 0.0);
	check_close("overlap", intervals_overlap(&set, 1.5, 3.25), 0.75, 0.0);
	check_close("overlap of nothing", intervals_overlap(&set, 3.25, 1.5), 0.0, 0.0);
	assert_true(intervals_contain(&set, 0.0) && intervals_contain(&set, 2.0) &&
		    intervals_contain(&set, 3.5));
	assert_false(intervals_contain(&set, 2.5) || intervals_contain(&set, -1e-9) ||
		     intervals_contain(&set, (double)NAN));
	assert_ptr_equal(intervals_at(&set, 3.0), &set.s[1]);
	assert_null(intervals_at(&set, 2.5));

	struct intervals out = intervals_outside(&set, 0.0, 5.0);
	same(&out, 2, (const double[]){2.0, 3.0, 4.0, 5.0});
	out = intervals_outside(&none, 0.0, 5.0);
	same(&out, 1, (const double[]){0.0, 5.0});
	out = intervals_outside(&set, 3.25, 3.75);
	same(&out, 0, NULL);
	out = intervals_clip(&set, 0.5, 3.5);
	same(&out, 2, (const double[]){0.5, 2.0, 3.0, 3.5});
	out = intervals_clip(&set, 2.0, 3.0); /* only touched */
	same(&out, 0, NULL);
	out = intervals_bridge(&set, 1.0); /* a gap of exactly that much is closed */
	same(&out, 1, (const double[]){0.0, 4.0});
	out = intervals_bridge(&set, 0.999);
	same(&out, 2, (const double[]){0.0, 2.0, 3.0, 4.0});
	/* an event of [-0.5, +0.75] round its mid */
	out = intervals_fit(&set, -0.5, 0.75);
	same(&out, 1, (const double[]){0.5, 1.25});
	out = intervals_fit(&set, -0.25, 0.25);
	same(&out, 2, (const double[]){0.25, 1.75, 3.25, 3.75});
	out = intervals_fit(&set, -1.0, 1.5);
	same(&out, 0, NULL);
	out = intervals_fit(&set, 1.0, 2.0); /* wholly behind the mid */
	same(&out, 1, (const double[]){-1.0, 0.0});

	struct intervals other = make(2, (const double[]){1.5, 3.0, 3.5, 9.0});
	out = intervals_and(&set, &other);
	same(&out, 2, (const double[]){1.5, 2.0, 3.5, 4.0});
	out = intervals_or(&set, &other);
	same(&out, 1, (const double[]){0.0, 9.0});
}

/* Too many spans: what is left is a part of the truth, and never more than it. */
static void overflow_only_shrinks(void **state)
{
	(void)state;
	struct intervals comb = intervals_none();
	for (int i = 0; i < SPANS_MAX; i++)
		intervals_append(&comb, i, i + 0.5);
	assert_int_equal(comb.n, SPANS_MAX);
	assert_false(comb.overflow);
	intervals_append(&comb, 100.0, 101.0);
	assert_int_equal(comb.n, SPANS_MAX);
	assert_true(comb.overflow);
	assert_false(intervals_contain(&comb, 100.5));
	intervals_append(&comb, SPANS_MAX - 0.6, 200.0); /* would reach over what was dropped */
	check_close("last end", comb.s[SPANS_MAX - 1].to_d, SPANS_MAX - 0.5, 0.0);

	struct intervals whole = intervals_one(-10.0, 300.0);
	struct intervals out = intervals_outside(&comb, -10.0, 300.0);
	assert_true(out.overflow);
	assert_false(intervals_contain(&out, 100.5)); /* was inside, so it must not come back outside */
	out = intervals_and(&whole, &comb);
	assert_true(out.overflow);
	out = intervals_or(&comb, &whole);
	assert_true(out.overflow);
	out = intervals_clip(&comb, 0.0, 3.0);
	assert_true(out.overflow);
	out = intervals_bridge(&comb, 0.1);
	assert_true(out.overflow);
	out = intervals_fit(&comb, 0.0, 0.1);
	assert_true(out.overflow);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(edges),
	    cmocka_unit_test(overflow_only_shrinks),
	};
	return cmocka_run_group_tests_name("intervals", tests, NULL, NULL);
}
