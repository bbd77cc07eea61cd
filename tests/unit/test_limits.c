/* SPDX-License-Identifier: MIT
 * The limits of a run: table, ranges, precedence. */
#include "ephem/limits.h"

#include "tests/support/check.h"

#include <math.h>
#include <string.h>

static void built_in_values(void **state)
{
	(void)state;
	struct limits l = limits_built_in();
	static const struct {
		enum limit_id id;
		const char *key, *option;
		double value, min, max;
	} rows[] = {
	    {LIM_SUN, "sun_limit_deg", "--sun-limit", -12.0, -30.0, 0.0},
	    {LIM_ALT, "alt_limit_deg", "--alt-limit", 30.0, 0.0, 90.0},
	    {LIM_MOON, "moon_limit_deg", "--moon-limit", 30.0, 0.0, 180.0},
	    {LIM_AIRMASS, "airmass_limit", "--airmass-limit", (double)INFINITY, 1.0, 40.0},
	    {LIM_BASELINE_BEFORE, "baseline_before_min", "--baseline", 30.0, 0.0, 720.0},
	    {LIM_BASELINE_AFTER, "baseline_after_min", NULL, 30.0, 0.0, 720.0},
	    {LIM_MIN_BASELINE, "min_baseline_min", "--min-baseline", 15.0, 0.0, 720.0},
	    {LIM_PAD, "pad", "--pad", 2.0, 0.0, 10.0},
	    {LIM_ERROR_SCALE, "error_scale", "--error-scale", 1.0, 0.1, 10.0},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		const struct limit_rule *r = &limit_rules[rows[i].id];
		assert_string_equal(r->key, rows[i].key);
		if (rows[i].option)
			assert_string_equal(r->option, rows[i].option);
		else
			assert_null(r->option);
		if (isinf(rows[i].value))
			assert_true(isinf(l.value[rows[i].id]) && l.value[rows[i].id] > 0.0);
		else
			check_close(r->key, l.value[rows[i].id], rows[i].value, 0.0);
		check_close(r->key, r->min, rows[i].min, 0.0);
		check_close(r->key, r->max, rows[i].max, 0.0);
		assert_int_equal(l.source[rows[i].id], FROM_BUILT_IN);
		assert_true(strlen(r->sentence) > 20);
	}
	assert_true(isnan(l.value[LIM_SUN_BASELINE]));
}

static void ranges(void **state)
{
	(void)state;
	for (int id = 0; id < LIM_COUNT; id++) {
		const struct limit_rule *r = &limit_rules[id];
		struct limits l = limits_built_in();
		struct err e;
		assert_int_equal(limits_put(&l, (enum limit_id)id, r->min, FROM_OPTION, &e), ST_OK);
		check_close(r->key, l.value[id], r->min, 0.0);
		assert_int_equal(limits_put(&l, (enum limit_id)id, r->max, FROM_OPTION, &e), ST_OK);
		check_close(r->key, l.value[id], r->max, 0.0);
		double outside[] = {nextafter(r->min, -1e9), nextafter(r->max, 1e9), -(double)INFINITY};
		for (size_t i = 0; i < 3; i++) {
			assert_int_equal(limits_put(&l, (enum limit_id)id, outside[i], FROM_OPTION, &e),
					 ST_RANGE);
			assert_non_null(strstr(e.text, r->option ? r->option : r->key));
			check_close("kept", l.value[id], r->max, 0.0);
		}
		enum status nan_status = limits_put(&l, (enum limit_id)id, (double)NAN, FROM_OPTION, &e);
		assert_int_equal(nan_status, id == LIM_SUN_BASELINE ? ST_OK : ST_RANGE);
		enum status inf_status = limits_put(&l, (enum limit_id)id, (double)INFINITY, FROM_OPTION, &e);
		assert_int_equal(inf_status, id == LIM_AIRMASS ? ST_OK : ST_RANGE);
		enum status auto_status = limits_put(&l, (enum limit_id)id, BASELINE_AUTO, FROM_OPTION, &e);
		bool takes = id == LIM_BASELINE_BEFORE || id == LIM_BASELINE_AFTER ||
			     (r->min <= -1.0 && r->max >= -1.0);
		assert_int_equal(auto_status, takes ? ST_OK : ST_RANGE);
	}
}

static void higher_source_wins(void **state)
{
	(void)state;
	for (int have = FROM_BUILT_IN; have <= FROM_OPTION; have++)
		for (int comes = FROM_BUILT_IN; comes <= FROM_OPTION; comes++) {
			struct limits l = limits_built_in();
			assert_int_equal(limits_put(&l, LIM_ALT, 20.0, (enum limit_source)have, NULL), ST_OK);
			assert_int_equal(limits_put(&l, LIM_ALT, 40.0, (enum limit_source)comes, NULL),
					 ST_OK);
			check_close("altitude limit", l.value[LIM_ALT], comes >= have ? 40.0 : 20.0, 0.0);
			assert_int_equal(l.source[LIM_ALT], comes >= have ? comes : have);
		}
}

static void target_over_run(void **state)
{
	(void)state;
	struct limits run = limits_built_in();
	struct target t = target_empty();
	struct limits l = limits_for_target(&run, &t);
	for (int id = 0; id < LIM_COUNT; id++)
		assert_int_equal(l.source[id], FROM_BUILT_IN);

	t.sun_limit_deg = -15.0;
	t.sun_limit_baseline_deg = -10.0;
	t.alt_limit_deg = 25.0;
	t.airmass_limit = 2.0;
	t.moon_limit_deg = 200.0; /* out of range: left out */
	t.baseline_before_min = BASELINE_AUTO;
	t.baseline_after_min = 45.0;
	assert_int_equal(limits_put(&run, LIM_ALT, 35.0, FROM_OPTION, NULL), ST_OK);
	l = limits_for_target(&run, &t);
	check_close("sun", l.value[LIM_SUN], -15.0, 0.0);
	check_close("sun baseline", l.value[LIM_SUN_BASELINE], -10.0, 0.0);
	check_close("altitude: the option wins", l.value[LIM_ALT], 35.0, 0.0);
	check_close("airmass", l.value[LIM_AIRMASS], 2.0, 0.0);
	check_close("moon", l.value[LIM_MOON], 30.0, 0.0);
	check_close("before", l.value[LIM_BASELINE_BEFORE], BASELINE_AUTO, 0.0);
	check_close("after", l.value[LIM_BASELINE_AFTER], 45.0, 0.0);

	/* --sun-limit wins over both Sun limits of a target */
	assert_int_equal(limits_put(&run, LIM_SUN, -6.0, FROM_OPTION, NULL), ST_OK);
	l = limits_for_target(&run, &t);
	check_close("sun by option", l.value[LIM_SUN], -6.0, 0.0);
	check_close("sun baseline by option", l.value[LIM_SUN_BASELINE], -6.0, 0.0);
	assert_int_equal(l.source[LIM_SUN_BASELINE], FROM_OPTION);

	/* from the settings file it stays apart */
	run = limits_built_in();
	assert_int_equal(limits_put(&run, LIM_SUN, -6.0, FROM_SETTINGS, NULL), ST_OK);
	assert_true(isnan(run.value[LIM_SUN_BASELINE]));
}

static void empty_target(void **state)
{
	(void)state;
	struct target t = target_empty();
	assert_true(isnan(t.ra_deg) && isnan(t.dec_deg) && isnan(t.t0.day) && isnan(t.period_d) &&
		    isnan(t.priority));
	assert_true(isnan(t.baseline_after_min) && isnan(t.k) && isnan(t.ttv_amp_min) && isnan(t.plx_mas));
	assert_string_equal(t.name, "");
	assert_string_equal(t.note, "");
	assert_int_equal(t.id, 0);
	assert_int_equal(t.standard.claim, SCALE_UNKNOWN);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(built_in_values),	  cmocka_unit_test(ranges),
	    cmocka_unit_test(higher_source_wins), cmocka_unit_test(target_over_run),
	    cmocka_unit_test(empty_target),
	};
	return cmocka_run_group_tests_name("limits", tests, NULL, NULL);
}
