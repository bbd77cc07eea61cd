/* SPDX-License-Identifier: MIT */
#include "tui/midtime_count.h"

#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* An invented ephemeris whose error grows to half a period within 6,000 orbits, and its true self, 1.2 sigma
 * of the period away. */
#define T0 2452000.5
#define P 2.5
#define P_ERR 1e-4
#define P_TRUE (P + 1.2 * P_ERR)

struct bench {
	struct run run;
	struct target target;
	struct prepared p;
};

static struct bench *bench_open(double period_err_d)
{
	struct bench *b = calloc(1, sizeof *b);
	if (!b)
		check_fail("no memory");
	b->run.leap = leap_builtin;
	b->run.clock.leap = &b->run.leap;
	b->run.limits = limits_built_in();
	b->run.memo = calloc(1, sizeof *b->run.memo);
	b->target = target_empty();
	b->target.name = "Tern 14 b";
	b->target.ra_deg = 212.4;
	b->target.dec_deg = 38.1;
	b->target.t0 = (struct jd2){T0, 0.0};
	b->target.t0_err_d = 0.001;
	b->target.period_d = P;
	b->target.period_err_d = period_err_d;
	b->target.duration_h = 2.5;
	b->target.time_scale = "BJD_TDB";
	b->target.standard =
	    (struct standard){.claim = SCALE_STATED, .origin = ORIGIN_BARYCENTRE, .clock = CLOCK_TDB};
	b->p = prepare_target(&b->target, &b->run.limits, &b->run.clock, b->run.memo, false, false);
	return b;
}

static void bench_close(struct bench *b)
{
	free(b->run.memo);
	free(b);
}

static struct midtime_text time_of(double jd, double err_d)
{
	struct midtime_text m = {.has_epoch = false};
	m.row.kind = KIND_TRANSIT;
	m.row.mid_text = "";
	m.row.mid = jd2_normal(jd, 0.0);
	m.row.standard =
	    (struct standard){.claim = SCALE_STATED, .origin = ORIGIN_BARYCENTRE, .clock = CLOCK_TDB};
	m.row.err_d = err_d;
	m.row.used = true;
	return m;
}

static struct midtime_text true_time(long epoch)
{
	return time_of(T0 + P_TRUE * (double)epoch, 0.0005);
}

static long count(struct bench *b, struct midtime_text row[], size_t n, struct counted out[])
{
	struct err e;
	long shift;
	if (midtimes_count(&b->run, &b->p, row, n, out, &shift, &e) != ST_OK)
		check_fail("%s", e.text);
	return shift;
}

/* Far times can be counted only because nearer ones have come in, whatever the order of the table. */
static void test_outward(void **state)
{
	(void)state;
	static const long epochs[] = {9000, 1200, -7000, 5000, 300, -2500, 3000, -900};
	enum { N = sizeof epochs / sizeof epochs[0] };
	struct bench *b = bench_open(P_ERR);
	struct midtime_text row[N];
	struct counted out[N];
	for (int i = 0; i < N; i++)
		row[i] = true_time(epochs[i]);
	assert_int_equal(count(b, row, N, out), 0);
	for (int i = 0; i < N; i++) {
		assert_int_equal(out[i].result, COUNT_GOOD);
		assert_int_equal(row[i].row.epoch, epochs[i]);
	}
	/* z is against the ephemeris as it was: 1.2 sigma of the period */
	check_close("z of the farthest", out[0].z, 1.2, 0.01);
	bench_close(b);
}

static void test_refused(void **state)
{
	(void)state;
	struct bench *b = bench_open(P_ERR);
	struct midtime_text row[3] = {true_time(9000), true_time(100), time_of(T0 + 100.5 * P, 0.001)};
	struct counted out[3];
	char text[300];
	count(b, row, 1, out); /* alone: 3 sigma of 0.9 d are more than 1.25 d */
	assert_int_equal(out[0].result, COUNT_AMBIGUOUS);
	count_refusal_text(&b->p, &out[0], text, sizeof text);
	assert_non_null(strstr(text, "it may be epoch 8999 (period 2.500398 d), 9000 (period 2.500000 d)"));
	count(b, &row[1], 2, out);
	assert_int_equal(out[0].result, COUNT_GOOD);
	assert_int_equal(out[1].result, COUNT_BETWEEN);
	bench_close(b);
	/* errors not published */
	b = bench_open(NAN);
	row[0] = true_time(1);
	count(b, row, 1, out);
	assert_int_equal(out[0].result, COUNT_AMBIGUOUS);
	assert_true(isnan(out[0].z));
	bench_close(b);
}

static void test_given(void **state)
{
	(void)state;
	enum { N = 4 };
	struct bench *b = bench_open(P_ERR);
	struct midtime_text row[N];
	struct counted out[N];
	for (int i = 0; i < N; i++) {
		row[i] = true_time(40 * (i + 1));
		row[i].has_epoch = true;
		row[i].row.epoch = 40 * (i + 1) + 1000; /* a T0 of 1,000 orbits earlier */
	}
	assert_int_equal(count(b, row, N, out), -1000);
	for (int i = 0; i < N; i++)
		assert_int_equal(row[i].row.epoch, 40 * (i + 1));
	row[2].row.epoch += 1; /* one of them wrong: taken as it is, and far off */
	assert_int_equal(count(b, row, N, out), 0);
	assert_int_equal(row[2].row.epoch, 121);
	assert_true(fabs(out[2].z) > 100.0);
	assert_true(fabs(out[1].z) < 3.0);
	/* one alone says nothing about the table's T0 */
	row[0].row.epoch = 1040;
	assert_int_equal(count(b, row, 1, out), 0);
	assert_int_equal(row[0].row.epoch, 1040);
	bench_close(b);
}

/* An occultation carries the epoch of the transit before it, at the place of its own orbit. */
static void test_occultation(void **state)
{
	(void)state;
	struct bench *b = bench_open(1e-7);
	b->target.ecc = 0.3;
	b->target.omega_deg = 180.0;
	b->p = prepare_target(&b->target, &b->run.limits, &b->run.clock, b->run.memo, false, false);
	/* P = 10 d, e = 0.3, omega = 180 deg: 3.119188 d after the transit (Winn 2010, arXiv:1001.2010,
	 * section 2, exact form, worked with Python 3 by Kepler's equation); a quarter of it at P = 2.5 d */
	check_close("delay [d]", b->p.occultation_d, 3.119188 / 4.0, 1e-6);
	struct midtime_text row[1] = {time_of(T0 + 200 * P + 3.119188 / 4.0, 0.001)};
	struct counted out[1];
	row[0].row.kind = KIND_OCCULTATION;
	count(b, row, 1, out);
	assert_int_equal(out[0].result, COUNT_GOOD);
	assert_int_equal(row[0].row.epoch, 200);
	assert_true(fabs(out[0].z) < 0.1);
	bench_close(b);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(test_outward), cmocka_unit_test(test_refused),
					   cmocka_unit_test(test_given), cmocka_unit_test(test_occultation)};
	return cmocka_run_group_tests_name("midtime_count", tests, NULL, NULL);
}
