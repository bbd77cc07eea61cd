/* SPDX-License-Identifier: MIT
 * Every operation on sets of time against the same operation on a row of cells, for random sets whose ends
 * lie on a grid. */
#include "ephem/intervals.h"

#include "tests/support/check.h"

#include <math.h>
#include <string.h>

enum { CELLS = 64 };

/* cell i is [i, i + 1] */
struct cells {
	bool in[CELLS];
};

static void random_set(struct rng *r, struct intervals *set, struct cells *c)
{
	*set = intervals_none();
	memset(c, 0, sizeof *c);
	double full = rng_unit(r);
	for (int i = 0; i < CELLS;) {
		int length = 1 + (int)rng_between(r, 0.0, 6.0);
		if (i + length > CELLS)
			length = CELLS - i;
		if (rng_unit(r) < full) {
			intervals_append(set, i, i + length);
			for (int k = i; k < i + length; k++)
				c->in[k] = true;
		}
		i += length;
	}
}

static void same(const char *what, const struct intervals *set, const struct cells *c)
{
	double length = 0.0;
	for (int i = 0; i < CELLS; i++) {
		if (intervals_contain(set, i + 0.5) != c->in[i])
			check_fail("%s: cell %d is %s in the set", what, i, c->in[i] ? "not" : "wrongly");
		length += c->in[i];
	}
	for (int i = 0; i < set->n; i++) {
		assert_true(set->s[i].to_d > set->s[i].from_d);
		assert_true(i == 0 || set->s[i].from_d > set->s[i - 1].to_d);
	}
	check_close(what, intervals_length(set), length, 1e-9);
}

static void against_cells(void **state)
{
	(void)state;
	struct rng r = rng_open("sets against cells");
	for (int round = 0; round < 20000; round++) {
		struct intervals a, b, out;
		struct cells ca, cb, want;
		random_set(&r, &a, &ca);
		random_set(&r, &b, &cb);
		same("append", &a, &ca);

		for (int i = 0; i < CELLS; i++)
			want.in[i] = ca.in[i] && cb.in[i];
		out = intervals_and(&a, &b);
		same("and", &out, &want);
		for (int i = 0; i < CELLS; i++)
			want.in[i] = ca.in[i] || cb.in[i];
		out = intervals_or(&a, &b);
		same("or", &out, &want);
		int from = (int)rng_between(&r, 0.0, CELLS),
		    to = from + (int)rng_between(&r, 0.0, CELLS - from + 1);
		double overlap = 0.0;
		for (int i = 0; i < CELLS; i++) {
			want.in[i] = !ca.in[i] && i >= from && i < to;
			overlap += ca.in[i] && i >= from && i < to;
		}
		out = intervals_outside(&a, from, to);
		same("outside", &out, &want);
		check_close("overlap", intervals_overlap(&a, from, to), overlap, 1e-9);
		for (int i = 0; i < CELLS; i++)
			want.in[i] = ca.in[i] && i >= from && i < to;
		out = intervals_clip(&a, from, to);
		same("clip", &out, &want);

		int gap = (int)rng_between(&r, 0.0, 6.0);
		want = ca;
		for (int i = 0, last = -1; i < CELLS; i++)
			if (ca.in[i]) {
				for (int k = last + 1; last >= 0 && i - last - 1 <= gap && k < i; k++)
					want.in[k] = true;
				last = i;
			}
		out = intervals_bridge(&a, gap);
		same("bridge", &out, &want);

		int lo = (int)rng_between(&r, -4.0, 1.0), hi = lo + (int)rng_between(&r, 0.0, 5.0);
		out = intervals_fit(&a, lo, hi);
		for (int i = 0; i < CELLS;
		     i++) { /* all cells that [x + lo, x + hi] meets for x in the middle of cell i */
			bool fits = true;
			for (int k = i + lo; k <= i + hi; k++)
				fits = fits && k >= 0 && k < CELLS && ca.in[k];
			if (intervals_contain(&out, i + 0.5) != fits)
				check_fail("fit [%d, %d]: cell %d should be %d", lo, hi, i, fits);
		}
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(against_cells),
	};
	return cmocka_run_group_tests_name("intervals_brute", tests, NULL, NULL);
}
