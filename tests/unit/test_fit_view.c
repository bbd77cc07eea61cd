/* SPDX-License-Identifier: MIT */
#include "tui/fit_view.h"

#include "db/history.h"
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tui/versions.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const struct change change = {"2026-04-22T03:00:00Z", "test", "refit adopt"};

/* A run on a store in memory with one target and invented mid-times of a shrinking orbit. */
struct bench {
	struct env env;
	struct options options;
	struct run run;
};

static void must(enum status s, const struct err *e)
{
	if (s != ST_OK)
		check_fail("status %d: %s", (int)s, e->text);
}

static void put_target(struct store *s)
{
	struct field_texts texts;
	enum put_result result;
	struct err e = {0};
	for (int i = 0; i < FIELD_COUNT; i++)
		texts.text[i] = "";
	texts.text[FIELD_AT_NAME] = "Tern 14 b";
	texts.text[FIELD_AT_RA] = "212.4";
	texts.text[FIELD_AT_DEC] = "38.1";
	texts.text[FIELD_AT_T0] = "2457000.5";
	texts.text[FIELD_AT_T0_ERR] = "0.0005";
	texts.text[FIELD_AT_SCALE] = "BJD_TDB";
	texts.text[FIELD_AT_PERIOD] = "1.4";
	texts.text[FIELD_AT_PERIOD_ERR] = "0.000002";
	texts.text[FIELD_AT_SOURCE] = "Tern list 1";
	must(target_put(s, &texts, true, &result, &e), &e);
}

static void put_times(struct store *s, const char *source)
{
	struct err e = {0};
	for (int i = 0; i < 30; i++) {
		char text[40];
		bool added;
		const double x = 100.0 * i;
		/* a wave of 20 s for noise, a drift of -4e-9 d an orbit each orbit */
		const double off = 2.3e-4 * sin(1.7 * i) + 1.4 * x - 2e-9 * x * x;
		snprintf(text, sizeof text, "%.6f", 2457000.5 + off);
		const struct midtime_row row = {.epoch = 100L * i,
						.kind = KIND_TRANSIT,
						.mid_text = text,
						.mid = jd2_normal(2457000.5, off),
						.time_scale = "BJD_TDB",
						.err_d = 2e-4,
						.source = source,
						.used = true};
		must(midtime_add(s, 1, &row, &added, &e), &e);
		assert_true(added);
	}
}

static struct bench *bench_open(const char *source)
{
	struct bench *b = calloc(1, sizeof *b);
	struct store *s = NULL;
	struct err e = {0};
	int code;
	if (!b)
		check_fail("no memory");
	b->options.min_chance = b->options.ut1_utc_s = NAN;
	b->options.now = "2026-04-23T03:00:00Z";
	must(store_open("memory", STORE_MEMORY, &s, &e), &e);
	must(store_begin(s, &change, &e), &e);
	put_target(s);
	put_times(s, source);
	must(store_commit(s, &e), &e);
	must(run_open_on(&b->run, s, &b->env, &b->options, NEED_STORE | NEED_TARGETS, &code, &e), &e);
	return b;
}

static void bench_close(struct bench *b)
{
	run_close(&b->run);
	free(b);
}

static void test_fits(void **state)
{
	(void)state;
	struct bench *b = bench_open("own");
	struct fit_view v = {.time = NULL};
	const struct fit_choice choice = {.jitter_terms = 2, .with_prior = true};
	struct err e = {0};
	must(fit_view_make(&v, &b->run, &b->run.prepared[0], &choice, &e), &e);
	assert_int_equal(v.linear.n, 30);
	assert_true(v.has_quadratic && v.prefers_quadratic && v.has_prior);
	assert_false(v.double_counting);
	check_close("dP/dE put in [d]", v.quadratic.dpde_d, -4e-9, 3.0 * sqrt(v.quadratic.cov[2][2]));
	fit_view_free(&v);
	/* jitter brings chi2 of the model that it is estimated with near the free times */
	const struct fit_choice jitter = {.jitter_s = JITTER_FIT, .jitter_terms = 2};
	must(fit_view_make(&v, &b->run, &b->run.prepared[0], &jitter, &e), &e);
	assert_true(v.linear.jitter_d > 1e-4);
	check_close("chi2 with jitter", v.linear.chi2, 28.0, 4.0);
	fit_view_free(&v);
	bench_close(b);
	b = bench_open("Tern list 1");
	must(fit_view_make(&v, &b->run, &b->run.prepared[0], &choice, &e), &e);
	assert_true(v.double_counting && v.same_source);
	fit_view_free(&v);
	bench_close(b);
}

/* The adopted version predicts what the fit does, times and errors, to the last digit that matters; undo
 * brings the old digest back. */
static void test_adopt(void **state)
{
	(void)state;
	static const long epochs[] = {-2000, 0, 1500, 9000};
	struct bench *b = bench_open("own");
	struct fit_view v = {.time = NULL};
	const struct fit_choice choice = {.ref_epoch = REF_EPOCH_BEST, .jitter_terms = 2};
	char before[33], between[33], after[33];
	struct err e = {0};
	must(fit_view_make(&v, &b->run, &b->run.prepared[0], &choice, &e), &e);
	must(store_digest(b->run.store, before, &e), &e);
	for (int terms = 2; terms <= 3; terms++) {
		const struct fit *fit = terms == 2 ? &v.linear : &v.quadratic;
		const double scale = fit_scale_factor(fit);
		const struct ephemeris want = fit_ephemeris(fit, scale);
		int version = 0;
		int64_t undone;
		assert_true(scale > 1.0 || terms == 3);
		must(store_begin(b->run.store, &change, &e), &e);
		must(fit_adopt(&b->run, &b->run.prepared[0], &v, fit, scale, &version, &e), &e);
		must(store_commit(b->run.store, &e), &e);
		assert_int_equal(version, terms);
		must(store_digest(b->run.store, between, &e), &e);
		assert_string_not_equal(before, between);
		must(run_reload(&b->run, &e), &e);
		const struct prepared *p = &b->run.prepared[0];
		for (size_t i = 0; i < sizeof epochs / sizeof epochs[0]; i++) {
			check_close("mid-time [d]", ephemeris_mid_after_d(&p->eph, epochs[i], want.t0),
				    ephemeris_mid_after_d(&want, epochs[i], want.t0), 1e-9);
			check_close("sigma [min]", drift_sigma_min(&p->eph, epochs[i]),
				    drift_sigma_min(&want, epochs[i]), 1e-6);
		}
		assert_string_equal(p->target->source, "refit of 30 mid-times");
		must(history_undo(b->run.store, 0, &change, &undone, &e), &e);
		must(store_digest(b->run.store, after, &e), &e);
		assert_string_equal(before, after);
		must(run_reload(&b->run, &e), &e);
	}
	fit_view_free(&v);
	bench_close(b);
}

/* A version laid against itself is 0 apart; against the linear fit it parts as the numbers say. */
static void test_gaps(void **state)
{
	(void)state;
	struct bench *b = bench_open("own");
	struct gap_table g;
	struct err e = {0};
	must(gap_table_make(&g, &b->run, &b->run.prepared[0], 1, NAN, &e), &e);
	assert_int_equal(g.current, 1);
	assert_int_equal(g.parted.when, WHEN_NEVER);
	for (int i = 0; i <= GAP_YEARS; i++)
		check_close("a version less itself [min]", g.row[i].gap.gap_min, 0.0, 1e-9);
	const int field[] = {FIELD_AT_PERIOD};
	const char *const text[] = {"1.400002"};
	must(store_begin(b->run.store, &change, &e), &e);
	must(target_set(b->run.store, "tern 14b", field, text, 1, &e), &e);
	must(store_commit(b->run.store, &e), &e);
	must(run_reload(&b->run, &e), &e);
	must(gap_table_make(&g, &b->run, &b->run.prepared[0], 1, 10.0, &e), &e);
	/* 2026-04-23T03:00 is 4153.625 d or 2966.9 orbits after T0: nearest mid-time 2967, 2e-6 d each */
	check_close("gap now [min]", g.row[0].gap.gap_min, -2967 * 2e-6 * 1440.0, 0.003);
	assert_int_equal(g.parted.when, WHEN_ON);
	/* 10 min after 3472.2 orbits, 4861 d after T0: JD 2461861.6, 2028-03-31 */
	check_close("date on which they part [MJD]", g.parted.utc.mjd, 61861.0, 2.0);
	assert_int_equal(gap_table_make(&g, &b->run, &b->run.prepared[0], 7, NAN, &e), ST_ABSENT);
	bench_close(b);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(test_fits), cmocka_unit_test(test_adopt),
					   cmocka_unit_test(test_gaps)};
	return cmocka_run_group_tests_name("fit_view", tests, NULL, NULL);
}
