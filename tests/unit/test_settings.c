/* SPDX-License-Identifier: MIT */
#include "tui/settings.h"

#include "ephem/season.h"
#include "tests/support/check.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

static char path[64];

static void write_file(const char *text)
{
	FILE *f = fopen(path, "w");
	assert_non_null(f);
	fputs(text, f);
	assert_int_equal(fclose(f), 0);
}

static int make_path(void **state)
{
	(void)state;
	snprintf(path, sizeof path, "/tmp/wane-settings-XXXXXX");
	int fd = mkstemp(path);
	return fd < 0 ? -1 : close(fd);
}

static int drop_path(void **state)
{
	(void)state;
	return unlink(path);
}

static void every_key_is_read(void **state)
{
	(void)state;
	struct settings s;
	struct err e;
	write_file(
	    "[run]\nsite = \"Tern Hill\"\nut1_utc_s = -0.25\nkind = occultation\n"
	    "refresh_precision_min = 0.5\n"
	    "[limits]\nsun_limit_deg = -15\nsun_limit_baseline_deg = -9\nalt_limit_deg = 25\nmoon_limit_deg "
	    "= 0\n"
	    "airmass_limit = 2.5\nbaseline_before_min = auto\nbaseline_after_min = 45\nmin_baseline_min = "
	    "10\npad = 3\n"
	    "error_scale = 1.5\n[screen]\nglyphs = ascii\npalette = red\n[leap_seconds]\n2029-01-01 = 38\n");
	if (settings_read(&s, path, &e) != ST_OK)
		check_fail("%s", e.text);
	assert_true(s.found);
	assert_string_equal(s.site, "Tern Hill");
	check_close("ut1_utc_s", s.ut1_utc_s, -0.25, 0.0);
	check_close("refresh_precision_min", s.refresh_precision_min, 0.5, 0.0);
	assert_int_equal(s.kinds, KINDS_OCCULTATION);
	assert_int_equal(s.glyphs, GLYPHS_ASCII);
	assert_int_equal(s.palette, PALETTE_RED);
	const double want[LIM_COUNT] = {[LIM_SUN] = -15,
					[LIM_SUN_BASELINE] = -9,
					[LIM_ALT] = 25,
					[LIM_MOON] = 0,
					[LIM_AIRMASS] = 2.5,
					[LIM_BASELINE_BEFORE] = BASELINE_AUTO,
					[LIM_BASELINE_AFTER] = 45,
					[LIM_MIN_BASELINE] = 10,
					[LIM_PAD] = 3,
					[LIM_ERROR_SCALE] = 1.5};
	for (int id = 0; id < LIM_COUNT; id++) {
		check_close(limit_rules[id].key, s.limits.value[id], want[id], 0.0);
		assert_int_equal(s.limits.source[id], FROM_SETTINGS);
	}
	assert_int_equal(s.leap.n, leap_builtin.n + 1);
	assert_true(s.leap.expires_mjd > leap_builtin.expires_mjd);
}

static void faults_have_their_place(void **state)
{
	(void)state;
	static const struct {
		const char *text, *says; /* says: behind the file's name */
	} rows[] = {
	    {"[limits]\nsun_limit_deg = 5\n",
	     ":2:17: sun_limit_deg: out of range (got \"5\", expected -30 to 0)"},
	    {"[limits]\n\nsun_limit = 5\n", ":3:1: sun_limit: unknown key; did you mean sun_limit_deg?"},
	    {"[limits]\nqqqqqqqqqqqq = 5\n", ":2:1: qqqqqqqqqqqq: unknown key"},
	    {"[screen]\npad = 2\n", ":2:1: pad: this key belongs into section [limits]"},
	    {"pad = 2\n", ":1:1: pad: no such section"},
	    {"[limits]\nglyphs = ascii\n", ":2:1: glyphs: this key belongs into section [screen]"},
	    {"[screen]\n  glyphs = emoji\n",
	     ":2:12: glyphs: no such value (got \"emoji\", expected auto, unicode, basic, ascii)"},
	    {"[limits]\npad = two\n", ":2:7: pad: "},
	    {"[limits]\npad = 2\npad = 3\n", ":3:1: "},
	    {"[limits\n", ":1:1: "},
	    {"[limits]\npad\n", ":2:4: "},
	    {"[run]\nkind = eclipse\n", ":2:8: kind: no such kind"},
	    {"[run]\nut1_utc_s = 1\n", ":2:13: ut1_utc_s: out of range"},
	    {"[leap_seconds]\n2029-13-01 = 38\n", ":2:14: 2029-13-01: "},
	    {"[leap_seconds]\n2029-01-01 = 40\n", ":2:14: 2029-01-01: "},
	    {"[leap_seconds]\nsoon = 38\n", ":2:8: soon: not a date"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct settings s;
		struct err e;
		char want[400];
		write_file(rows[i].text);
		snprintf(want, sizeof want, "%s%s", path, rows[i].says);
		if (settings_read(&s, path, &e) == ST_OK)
			check_fail("taken: %s", rows[i].text);
		if (strncmp(e.text, want, strlen(want)) != 0)
			check_fail("%s: got \"%s\", want \"%s...\"", rows[i].text, e.text, want);
		/* a refused file changes nothing */
		check_close("pad after a refusal", s.limits.value[LIM_PAD], limit_rules[LIM_PAD].fallback,
			    0.0);
		assert_int_equal(s.leap.n, leap_builtin.n);
		assert_false(s.found);
	}
}

static void a_missing_or_empty_file_is_no_fault(void **state)
{
	(void)state;
	struct settings s;
	struct err e;
	write_file("");
	assert_int_equal(settings_read(&s, path, &e), ST_OK);
	assert_int_equal(settings_read(&s, "/nonexistent/settings.ini", &e), ST_ABSENT);
	assert_string_equal(s.site, "");
	assert_int_equal(settings_read(&s, "/tmp", &e), ST_IO);
}

/* The example file repeats what is built in, so that reading it changes nothing. */
static void the_example_file_is_read(void **state)
{
	(void)state;
	struct settings s, built_in;
	struct err e;
	settings_built_in(&built_in);
	if (settings_read(&s, "config-example/settings.ini", &e) != ST_OK)
		check_fail("%s", e.text);
	for (int id = 0; id < LIM_COUNT; id++)
		if (!isinf(s.limits.value[id]) || !isinf(built_in.limits.value[id]))
			check_close(limit_rules[id].key, s.limits.value[id], built_in.limits.value[id], 0.0);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(every_key_is_read),
	    cmocka_unit_test(faults_have_their_place),
	    cmocka_unit_test(a_missing_or_empty_file_is_no_fault),
	    cmocka_unit_test(the_example_file_is_read),
	};
	return cmocka_run_group_tests_name("settings", tests, make_path, drop_path);
}
