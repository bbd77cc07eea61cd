/* SPDX-License-Identifier: MIT
 * Every caution of the table stands in the README, in help and in what people read of a night. Lines may be
 * broken anywhere between words. Runs the program itself: WANE, or build/wane; README.md is looked for in the
 * working folder. */
#include "tui/cautions.h"

#include "tests/support/check.h"

#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { TEXT_MAX = 1 << 20 };

/* Reads all, every run of blanks, line ends, list and comment signs as one blank. */
static char *flat_text(FILE *f)
{
	char *text = malloc(TEXT_MAX);
	assert_non_null(text);
	size_t n = 0;
	bool blank = false;
	for (int ch = fgetc(f); ch != EOF && n + 2 < TEXT_MAX; ch = fgetc(f)) {
		if (strchr(" \t\r\n", ch)) {
			blank = true;
			continue;
		}
		if (blank && n > 0)
			text[n++] = ' ';
		blank = false;
		text[n++] = (char)ch;
	}
	text[n] = '\0';
	return text;
}

static void check_all_in(const char *where, FILE *f)
{
	char *text = flat_text(f);
	for (size_t i = 0; i < caution_count; i++) {
		if (!strstr(text, cautions[i]))
			check_fail("not in %s: %s", where, cautions[i]);
	}
	free(text);
}

static void check_output(const char *arguments)
{
	const char *program = getenv("WANE");
	char command[512];
	snprintf(command, sizeof command, "%s %s </dev/null", program ? program : "build/wane", arguments);
	FILE *f = popen(command, "r");
	assert_non_null(f);
	check_all_in(arguments, f);
	assert_int_equal(pclose(f), 0);
}

static void test_readme(void **state)
{
	(void)state;
	FILE *f = fopen("README.md", "r");
	assert_non_null(f);
	check_all_in("README.md", f);
	fclose(f);
}

static void test_help(void **state)
{
	(void)state;
	check_output("--help");
}

static void test_demo_night(void **state)
{
	(void)state;
	check_output("demo");
}

static void test_table(void **state)
{
	(void)state;
	static const char *const subjects[] = {"Sun",	     "pier",	"dome", "alone",
					       "drive home", "ladders", "age",	"qualified"};
	assert_in_range(caution_count, 6, 12);
	for (size_t k = 0; k < sizeof subjects / sizeof subjects[0]; k++) {
		bool found = false;
		for (size_t i = 0; i < caution_count; i++)
			found = found || strstr(cautions[i], subjects[k]);
		if (!found)
			check_fail("no caution speaks of \"%s\"", subjects[k]);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_table),
	    cmocka_unit_test(test_readme),
	    cmocka_unit_test(test_help),
	    cmocka_unit_test(test_demo_night),
	};
	return cmocka_run_group_tests_name("cautions", tests, NULL, NULL);
}
