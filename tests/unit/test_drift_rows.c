/* SPDX-License-Identifier: MIT */
#include "tui/drift_rows.h"

#include "ephem/refit.h"
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/night_fixture.h"
#include "tui/parts/drift_columns.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static const struct drift_choice plain = {.at = {.mjd = 62248}, .limit_min = NAN, .precision_min = 1.0};

static const struct drift_row *row_of(const struct drift_table *t, const char *name)
{
	for (size_t i = 0; i < t->n; i++)
		if (strcmp(t->row[i].prepared->target->name, name) == 0)
			return &t->row[i];
	check_fail("no row %s", name);
	return NULL;
}

static void make(struct drift_table *t, struct night_fixture *f, const struct drift_choice *choice)
{
	struct err e;
	if (drift_table_make(t, &f->run, choice, &e) != ST_OK)
		check_fail("%s", e.text);
}

static void test_rows(void **state)
{
	(void)state;
	struct night_fixture *f = fixture_open(false);
	struct drift_table t = {.n = 0};
	char words[200];
	make(&t, f, &plain);
	assert_int_equal(t.n, FIXTURE_TARGETS);
	const struct drift_row *b14 = row_of(&t, "Tern 14 b");
	/* the event of the fixture's night is epoch 410, half an hour after its clock */
	assert_int_equal(b14->epoch_now, 409);
	assert_int_equal(b14->next_epoch, 410);
	check_close("sigma now, worked by hand [min]", b14->sigma_now_min,
		    1440.0 * hypot(0.00021, 409 * 3.1e-7), 1e-9);
	check_close("sigma then, worked by hand [min]", b14->sigma_at_min,
		    1440.0 * hypot(0.00021, (double)b14->epoch_at * 3.1e-7), 1e-9);
	check_close("limit (30 - 15) / 2 [min]", b14->limit_min, 7.5, 1e-12);
	assert_int_equal(b14->stale.when, WHEN_ON);
	assert_int_equal(b14->search, REFRESH_NOT_ASKED);
	drift_words(b14, words, sizeof words);
	assert_string_equal(words, "");
	const struct drift_row *b7 = row_of(&t, "Tern 7 b"); /* without errors */
	assert_true(isnan(b7->sigma_now_min));
	assert_int_equal(b7->stale.when, WHEN_UNKNOWN);
	drift_words(b7, words, sizeof words);
	assert_string_equal(words, "no errors published");
	const struct drift_row *b40 = row_of(&t, "Tern 40 b"); /* 6400 x 9e-5 d: beyond P/6 */
	assert_int_equal(b40->lost.when, WHEN_ALREADY);
	drift_words(b40, words, sizeof words);
	assert_string_equal(words, "PHASE LOST; STALE NOW");
	drift_table_free(&t);
	fixture_close(f);
}

/* The stale date is where sigma is the limit, from both sides. */
static void test_dates(void **state)
{
	(void)state;
	struct night_fixture *f = fixture_open(false);
	struct drift_table t = {.n = 0};
	make(&t, f, &plain);
	for (size_t i = 0; i < t.n; i++) {
		const struct drift_row *row = &t.row[i];
		const struct ephemeris *eph = &row->prepared->eph;
		long epoch;
		if (row->stale.when != WHEN_ON)
			continue;
		const struct tdb when = tt_to_tdb(utc_to_tt(&leap_builtin, row->stale.utc));
		assert_true(ephemeris_first_after(eph, when, &epoch));
		assert_true(drift_sigma_min(eph, epoch - 1) <= row->limit_min);
		assert_true(drift_sigma_min(eph, epoch + 1) > row->limit_min);
	}
	const struct ephemeris fixed = {.period_d = 2.0, .t0.jd = {2459000.0, 0.5}, .c00 = 1e-8};
	assert_int_equal(drift_date_of(&fixed, &leap_builtin, 7.5, 100.0).when, WHEN_NEVER);
	assert_int_equal(drift_date_of(&fixed, &leap_builtin, 0.1, 100.0).when, WHEN_ALREADY);
	assert_int_equal(drift_date_of(&fixed, &leap_builtin, NAN, 100.0).when, WHEN_UNKNOWN);
	drift_table_free(&t);
	fixture_close(f);
}

/* Before the data, an error that has yet to shrink is one that is past the limit. */
static void test_before_the_data(void **state)
{
	(void)state;
	const struct ephemeris eph = {
	    .period_d = 2.0, .t0.jd = {2459000.0, 0.5}, .c00 = 1e-8, .c11 = 1e-10}; /* 1e-5 d an orbit */
	assert_int_equal(drift_date_of(&eph, &leap_builtin, 7.5, -1000.0).when, WHEN_ALREADY);
	const struct drift_date on = drift_date_of(&eph, &leap_builtin, 7.5, -100.0);
	assert_int_equal(on.when, WHEN_ON);
	/* sqrt((7.5/1440)^2 - 1e-8)/1e-5 = 520.737 orbits, 1041.47 d after JD 2459000.5 */
	const struct jd2 jd = utc_to_jd(&leap_builtin, on.utc);
	check_close("date [JD]", jd2_value(jd), 2459000.5 + 1041.474 - 69.184 / 86400.0, 0.002);
}

/* A quadratic ephemeris may be good now, bad later and good again: the date is that of now. */
static void test_earlier_dip(void **state)
{
	(void)state;
	/* predictions known at -1000 and +1000 and free between: s^2 = a (x^2 / 1e6 - 1)^2 + b */
	const double a = 1e-3, b = 1e-8;
	struct ephemeris eph = {.period_d = 3.0, .t0.jd = {2459000.0, 0.5}, .c00 = a + b};
	eph.c02 = -2.0 * a / 1e6;
	eph.c22 = 4.0 * a / 1e12;
	eph.c11 = 0.0;
	const double at_d = ephemeris_published_d(&eph, -1000);
	check_close("the dip [d]", at_d, 1e-4, 1e-7);
	const struct drift_date on = drift_date_of(&eph, &leap_builtin, 7.5, -1000.0);
	assert_int_equal(on.when, WHEN_ON);
	const double x = (jd2_value(utc_to_jd(&leap_builtin, on.utc)) - 2459000.5) / 3.0;
	assert_true(x > -1000.0 && x < -800.0);
}

/* The search against every window of the nights, one after the other. */
static void test_search(void **state)
{
	(void)state;
	struct night_fixture *f = fixture_open(false);
	struct drift_table t = {.n = 0};
	struct drift_choice choice = plain;
	enum { NIGHTS = 60 };
	choice.refresh = choice.named = true;
	choice.limit_min = 3.0;
	make(&t, f, &choice);
	struct refresh first[FIXTURE_TARGETS] = {{.found = false}};
	for (int32_t mjd = FIXTURE_EVENING_MJD; mjd < FIXTURE_EVENING_MJD + NIGHTS; mjd++) {
		struct night_view v = fixture_night(f, mjd, true);
		for (size_t i = 0; i < v.list.n; i++) {
			const struct window *w = &v.list.w[i];
			const size_t k = (size_t)(w->event.prepared - f->run.prepared);
			const double after_min = refresh_sigma_min(&w->event.prepared->eph, w->event.epoch,
								   1.0, t.row[k].epoch_at);
			const struct utc latest = night_utc(&v.night, w->event.latest_start_d);
			if (first[k].found || !(w->chance.done >= REFRESH_CHANCE_MIN) ||
			    !(after_min <= 3.0) || utc_diff_s(&leap_builtin, t.now, latest) <= 0.0)
				continue;
			first[k] = (struct refresh){.found = true, .epoch = w->event.epoch};
		}
		night_view_free(&v);
	}
	int found = 0;
	for (size_t k = 0; k < t.n; k++) {
		const struct drift_row *row = &t.row[k];
		if (!first[k].found)
			continue;
		found++;
		assert_true(row->first.found);
		assert_int_equal(row->first.epoch, first[k].epoch);
		assert_true(row->best.found);
		assert_true(row->best.chance_done * row->best.gain_bits >=
			    row->first.chance_done * row->first.gain_bits * (1.0 - 1e-12));
		assert_true(row->best.sigma_after_min < row->sigma_at_min);
	}
	assert_true(found >= 5);
	assert_int_equal(row_of(&t, "Tern 7 b")->search, REFRESH_NO_CHANCE);
	assert_int_equal(row_of(&t, "Tern 40 b")->search, REFRESH_NO_CHANCE);
	assert_false(row_of(&t, "Tern 44 b")->best.found); /* never rises at the site */
	drift_table_free(&t);
	fixture_close(f);
}

static void test_columns(void **state)
{
	(void)state;
	static const char *const order[] = {
	    "target",	      "branch",	      "epoch_now",	   "sigma_now_min",    "at_utc",
	    "sigma_at_min",   "limit_min",    "stale_on",	   "phase_lost_on",    "last_midtime_utc",
	    "midtimes",	      "next_mid_utc", "first_refresh_utc", "best_refresh_utc", "sigma_after_min",
	    "stale_on_after", "flags"};
	struct err e;
	int column;
	bool descending;
	assert_int_equal(drift_column_count, sizeof order / sizeof order[0]);
	for (size_t i = 0; i < drift_column_count; i++) {
		assert_string_equal(drift_columns[i].name, order[i]);
		assert_int_equal(drift_sort_parse(order[i], &column, &descending, &e), ST_OK);
		assert_int_equal(column, i);
		assert_false(descending);
	}
	assert_int_equal(drift_sort_parse("-midtimes", &column, &descending, &e), ST_OK);
	assert_true(descending);
	assert_int_equal(drift_sort_parse("", &column, &descending, &e), ST_SYNTAX);
	assert_int_equal(drift_sort_parse("-", &column, &descending, &e), ST_SYNTAX);
}

static void test_order(void **state)
{
	(void)state;
	struct night_fixture *f = fixture_open(false);
	struct drift_table t = {.n = 0};
	size_t order[FIXTURE_TARGETS];
	struct err e;
	make(&t, f, &plain);
	/* already, then dates, then what has none */
	assert_int_equal(drift_order(&t, drift_column_find("stale_on"), false, order, &e), ST_OK);
	int stage = 0, seen[3] = {0};
	for (size_t i = 0; i < t.n; i++) {
		const enum drift_when when = t.row[order[i]].stale.when;
		const int now = when == WHEN_ALREADY ? 0 : when == WHEN_ON ? 1 : 2;
		assert_true(now >= stage);
		stage = now;
		seen[now]++;
	}
	assert_true(seen[0] > 0 && seen[1] > 1 && seen[2] > 0);
	assert_int_equal(drift_order(&t, drift_column_find("sigma_now_min"), true, order, &e), ST_OK);
	for (size_t i = 1; i < t.n; i++) {
		const double a = t.row[order[i - 1]].sigma_now_min, b = t.row[order[i]].sigma_now_min;
		assert_true(isnan(b) || a >= b);
	}
	drift_table_free(&t);
	fixture_close(f);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(test_rows),
					   cmocka_unit_test(test_dates),
					   cmocka_unit_test(test_before_the_data),
					   cmocka_unit_test(test_earlier_dip),
					   cmocka_unit_test(test_search),
					   cmocka_unit_test(test_columns),
					   cmocka_unit_test(test_order)};
	return cmocka_run_group_tests_name("drift_rows", tests, NULL, NULL);
}
