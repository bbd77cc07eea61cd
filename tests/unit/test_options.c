/* SPDX-License-Identifier: MIT */
#include "tui/options.h"

#include "ephem/season.h"
#include "tests/support/check.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum { ARGS_MAX = 12 };

static enum status parse(const char *const args[], struct options *o, struct err *e)
{
	char *argv[ARGS_MAX + 2] = {(char *)(uintptr_t) "wane"};
	int n = 1;
	for (; args[n - 1]; n++)
		argv[n] = (char *)(uintptr_t)args[n - 1];
	return options_parse(o, n, argv, e);
}

static void values_may_begin_with_a_hyphen(void **state)
{
	(void)state;
	struct options o;
	struct err e;
	const char *const args[] = {"sky",	   "--place", "-30.1,-70.8,2200", "--radec", "-5",
				    "--sun-limit", "-18",     "--db=-x",	  NULL};
	assert_int_equal(parse(args, &o, &e), ST_OK);
	assert_string_equal(o.place[0], "-30.1,-70.8,2200");
	assert_string_equal(o.radec, "-5");
	assert_string_equal(o.db, "-x");
	assert_int_equal(o.n_words, 1);
	check_close("--sun-limit", o.limit[LIM_SUN], -18.0, 0.0);
}

static void words_and_repeated_options(void **state)
{
	(void)state;
	struct options o;
	struct err e;
	const char *const args[] = {"season", "--site", "A",  "2026-04-01", "--site",
				    "B",      "-12.5",	"--", "--plain",    NULL};
	assert_int_equal(parse(args, &o, &e), ST_OK);
	assert_int_equal(o.n_sites, 2);
	assert_string_equal(o.site[1], "B");
	assert_int_equal(o.n_words, 4);
	assert_string_equal(o.word[2], "-12.5");
	assert_string_equal(o.word[3], "--plain");
	assert_false(o.plain);
}

static void nothing_given_is_seen_as_such(void **state)
{
	(void)state;
	struct options o;
	struct err e;
	const char *const args[] = {NULL};
	assert_int_equal(parse(args, &o, &e), ST_OK);
	assert_true(isnan(o.min_chance) && isnan(o.ut1_utc_s));
	assert_int_equal(o.kinds, 0);
	assert_null(o.db);
	for (int id = 0; id < LIM_COUNT; id++)
		assert_false(o.limit_given[id]);
}

static void baseline_means_both_sides(void **state)
{
	(void)state;
	struct options o;
	struct err e;
	const char *const args[] = {"night", "--baseline", "auto", "--airmass-limit",
				    "none",  "--kind",	   "both", NULL};
	assert_int_equal(parse(args, &o, &e), ST_OK);
	assert_true(o.limit_given[LIM_BASELINE_BEFORE] && o.limit_given[LIM_BASELINE_AFTER]);
	check_close("before", o.limit[LIM_BASELINE_BEFORE], BASELINE_AUTO, 0.0);
	check_close("after", o.limit[LIM_BASELINE_AFTER], BASELINE_AUTO, 0.0);
	assert_true(isinf(o.limit[LIM_AIRMASS]));
	assert_int_equal(o.kinds, KINDS_BOTH);
}

/* The message begins with the option that is wrong. */
static void faults_name_the_option(void **state)
{
	(void)state;
	static const struct {
		const char *args[3];
		const char *says;
	} rows[] = {
	    {{"--sun-limti", "-12"}, "--sun-limti: unknown option; did you mean --sun-limit?"},
	    {{"--qqqqqqqqqq"}, "--qqqqqqqqqq: unknown option"},
	    {{"-x"}, "-x: unknown option"},
	    {{"--pad"}, "--pad: a value is missing"},
	    {{"--plain=yes"}, "--plain: takes no value"},
	    {{"--site", ""}, "--site: the value is empty"},
	    {{"--db="}, "--db: the value is empty"},
	    {{"--sun-limit", "0.5"}, "--sun-limit: out of range (got \"0.5\", expected -30 to 0)"},
	    {{"--sun-limit", "nan"}, "--sun-limit: "},
	    {{"--alt-limit", "90.1"}, "--alt-limit: out of range"},
	    {{"--moon-limit", "181"}, "--moon-limit: out of range"},
	    {{"--airmass-limit", "0.9"}, "--airmass-limit: out of range"},
	    {{"--airmass-limit", "40.1"}, "--airmass-limit: out of range"},
	    {{"--baseline", "721"}, "--baseline: out of range"},
	    {{"--baseline", "-1"}, "--baseline: out of range"},
	    {{"--pad", "10.5"}, "--pad: out of range"},
	    {{"--error-scale", "0"}, "--error-scale: out of range"},
	    {{"--ut1-utc", "0.91"}, "--ut1-utc: out of range"},
	    {{"--min-chance", "1.01"}, "--min-chance: out of range"},
	    {{"--min-chance", "half"}, "--min-chance: "},
	    {{"--threads", "1.5"}, "--threads: "},
	    {{"--threads", "0"}, "--threads: out of range"},
	    {{"--kind", "eclipse"}, "--kind: no such kind (got \"eclipse\""},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct options o;
		struct err e;
		err_clear(&e);
		if (parse(rows[i].args, &o, &e) == ST_OK)
			check_fail("%s %s was taken", rows[i].args[0],
				   rows[i].args[1] ? rows[i].args[1] : "");
		if (strncmp(e.text, rows[i].says, strlen(rows[i].says)) != 0)
			check_fail("%s: got \"%s\", want \"%s...\"", rows[i].args[0], e.text, rows[i].says);
	}
}

/* Both ends of every range of the contract are taken. */
static void ends_of_ranges_are_taken(void **state)
{
	(void)state;
	static const char *const rows[][3] = {
	    {"--sun-limit", "-30"},   {"--sun-limit", "0"},	 {"--alt-limit", "0"},
	    {"--alt-limit", "90"},    {"--moon-limit", "0"},	 {"--moon-limit", "180"},
	    {"--airmass-limit", "1"}, {"--airmass-limit", "40"}, {"--baseline", "0"},
	    {"--baseline", "720"},    {"--min-baseline", "15"},	 {"--pad", "0"},
	    {"--pad", "10"},	      {"--error-scale", "0.1"},	 {"--error-scale", "10"},
	    {"--ut1-utc", "-0.9"},    {"--ut1-utc", "0.9"},	 {"--min-chance", "0"},
	    {"--min-chance", "1"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct options o;
		struct err e;
		if (parse(rows[i], &o, &e) != ST_OK)
			check_fail("%s %s: %s", rows[i][0], rows[i][1], e.text);
	}
}

static void a_subcommand_takes_its_own_options_only(void **state)
{
	(void)state;
	struct options o;
	struct err e;
	const char *const limit[] = {"--pad", "3", "--site", "A", NULL}, *const scale[] = {"--from", "JD_UTC",
											   NULL};
	assert_int_equal(parse(limit, &o, &e), ST_OK);
	assert_int_equal(options_allowed(&o, GROUP_COMPUTE, "night", &e), ST_OK);
	assert_int_equal(options_allowed(&o, GROUP_IMPORT, "import", &e), ST_SYNTAX);
	assert_non_null(strstr(e.text, "--pad"));
	assert_int_equal(parse(scale, &o, &e), ST_OK);
	assert_int_equal(options_allowed(&o, GROUP_CLOCK, "clock", &e), ST_OK);
	assert_int_equal(options_allowed(&o, GROUP_COMPUTE, "night", &e), ST_SYNTAX);
	assert_non_null(strstr(e.text, "--from"));
}

static void nearest_words(void **state)
{
	(void)state;
	static const char *const list[] = {"night", "season", "sky"};
	static const char *const options[] = {"--out", "--db", "--pad", "--sun-limit"};
	assert_string_equal(nearest_word("nigth", list, 3), "night");
	assert_string_equal(nearest_word("seasons", list, 3), "season");
	assert_null(nearest_word("telescope", list, 3));
	/* one mistake in a short word, two in a long one; neighbours that were swapped are one */
	assert_null(nearest_word("--bogus", options, 4));
	assert_null(nearest_word("--x", options, 4));
	assert_string_equal(nearest_word("--uot", options, 4), "--out");
	assert_string_equal(nearest_word("--pda", options, 4), "--pad");
	assert_null(nearest_word("--pxx", options, 4));
	assert_string_equal(nearest_word("--sunlimti", options, 4), "--sun-limit");
	assert_null(nearest_word("--moonlimti", options, 4));
	assert_null(nearest_word("", list, 3));
	/* a beginning */
	assert_string_equal(nearest_word("--sun-li", options, 4), "--sun-limit");
	assert_null(nearest_word("--sun", options, 4));
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(values_may_begin_with_a_hyphen),
	    cmocka_unit_test(words_and_repeated_options),
	    cmocka_unit_test(nothing_given_is_seen_as_such),
	    cmocka_unit_test(baseline_means_both_sides),
	    cmocka_unit_test(faults_name_the_option),
	    cmocka_unit_test(ends_of_ranges_are_taken),
	    cmocka_unit_test(a_subcommand_takes_its_own_options_only),
	    cmocka_unit_test(nearest_words),
	};
	return cmocka_run_group_tests_name("options", tests, NULL, NULL);
}
