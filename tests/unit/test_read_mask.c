/* SPDX-License-Identifier: MIT
 * Horizon masks as text: the file, with the places of its faults, and the text in the store. */
#include "db/read_mask.h"

#include "tests/support/check.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static enum status parse(const char *text, size_t n, struct mask *m, bool *unsorted, struct err *e)
{
	char *block = malloc(n ? n : 1); /* exact, for the sanitizer */
	assert_non_null(block);
	memcpy(block, text, n);
	enum status s = mask_parse("m.csv", block, n, m, unsorted, e);
	free(block);
	return s;
}

static void good_files(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		bool unsorted;
		const char *stored;
	} rows[] = {
	    {"10, 12\n80, 25\n200, 10\n330, 18\n", false, "10 12;80 25;200 10;330 18"},
	    {"az_deg, alt_deg\n10,12\n", false, "10 12"},
	    {"AZ_DEG,ALT_DEG\r\n10,12\r\n", false, "10 12"},
	    {"\xEF\xBB\xBF"
	     "az_deg,alt_deg\n10,12",
	     false, "10 12"},
	    {"# trees\n\n  \n0, 5 # oak\n#90, 7\n180,-1.5\n", false, "0 5;180 -1.5"},
	    {"0;5\n180;6\n", false, "0 5;180 6"},
	    {"0 5\n\t180\t6  \n", false, "0 5;180 6"},
	    {"90, 2\n10, 1\n", true, "10 1;90 2"},
	    {"350, 2\n10, 1\n", true, "10 1;350 2"},
	    {"0, 5\n180, 6\n360, 5\n", false, "0 5;180 6"}, /* 360 closes the circle */
	    {"360, 7\n", false, "0 7"},
	    {"10, 3\n10, 3\n", false, "10 3"}, /* said twice, the same */
	    {"1e1, 9e1\n", false, "10 90"},
	    {"0, -10\n", false, "0 -10"},
	    {"0, -0\n", false, "0 0"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct mask m;
		struct err e = {0};
		static char text[MASK_TEXT_MAX];
		bool unsorted;
		if (parse(rows[i].text, strlen(rows[i].text), &m, &unsorted, &e) != ST_OK)
			check_fail("%s: %s", rows[i].text, e.text);
		if (unsorted != rows[i].unsorted)
			check_fail("%s: unsorted %d", rows[i].text, unsorted);
		mask_text(&m, text);
		assert_string_equal(text, rows[i].stored);
	}
}

static void faults_have_a_place(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		size_t n; /* 0: strlen */
		const char *says;
	} rows[] = {
	    {"", 0, "m.csv:1:1: row: no point"},
	    {"# nothing\n\n", 0, "m.csv:2:1: row: no point"},
	    {"az_deg, alt_deg\n", 0, "m.csv:1:1: row: no point"},
	    {"10, 5\n361, 5\n", 0, "m.csv:2:1: az_deg: out of range (got \"361\", expected 0 to 360 deg)"},
	    {"-1, 5\n", 0, "m.csv:1:1: az_deg: out of range"},
	    {"10, 91\n", 0, "m.csv:1:5: alt_deg: out of range (got \"91\", expected -10 to 90 deg)"},
	    {"10,-10.5\n", 0, "m.csv:1:4: alt_deg: out of range"},
	    {"10, x\n", 0, "m.csv:1:5: alt_deg: "},
	    {"10, 5x\n", 0, "m.csv:1:6: alt_deg: "},
	    {"10, nan\n", 0, "m.csv:1:5: alt_deg: "},
	    {"10,5;6\n", 0, "m.csv:1:3: az_deg: decimal comma"},
	    {"10\n", 0, "m.csv:1:1: row: one cell only (got \"10\""},
	    {"10,\n", 0, "m.csv:1:1: row: one cell only"},
	    {"10, 5, 6\n", 0, "m.csv:1:8: row: more than two cells (got \"6\""},
	    {"alt_deg, az_deg\n", 0, "m.csv:1:1: az_deg: "},
	    {"1, 1\naz_deg, alt_deg\n", 0, "m.csv:2:1: az_deg: "},
	    {"80, 25\n10, 1\n80, 26\n", 0, "m.csv:3:1: row: azimuth 80 deg stands twice"},
	    {"0, 5\n360, 6\n", 0, "m.csv:2:1: row: azimuth 360 deg stands twice"},
	    {"10, 5\n2\0000, 5\n", 13, "m.csv:2:2: row: a NUL byte"},
	    {"\x1F\x8B\x08", 0, "m.csv:1:1: file: this is a gzip file"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct mask m;
		struct err e = {0};
		bool unsorted;
		size_t n = rows[i].n ? rows[i].n : strlen(rows[i].text);
		enum status s = parse(rows[i].text, n, &m, &unsorted, &e);
		if ((s != ST_SYNTAX && s != ST_RANGE) ||
		    strncmp(e.text, rows[i].says, strlen(rows[i].says)) != 0)
			check_fail("%s: status %d: %s", rows[i].text, (int)s, e.text);
	}
}

static void as_many_as_720(void **state)
{
	(void)state;
	static char file[64 * (MASK_KNOTS_MAX + 1)], text[MASK_TEXT_MAX], again[MASK_TEXT_MAX];
	struct mask m, back;
	struct err e = {0};
	bool unsorted;
	size_t used = 0, whole = 0;
	for (int i = 0; i <= MASK_KNOTS_MAX; i++) {
		used += (size_t)snprintf(file + used, sizeof file - used, "%.17g, %.17g\n", 359.0 * i / 721.0,
					 10.0 / 3.0 - i / 70.0);
		if (i == MASK_KNOTS_MAX - 1)
			whole = used;
	}
	if (parse(file, whole, &m, &unsorted, &e) != ST_OK)
		check_fail("%s", e.text);
	assert_int_equal(m.n, MASK_KNOTS_MAX);
	mask_text(&m, text);
	if (mask_of_text(text, &back, &e) != ST_OK)
		check_fail("%s", e.text);
	assert_int_equal(back.n, m.n);
	for (size_t i = 0; i < m.n; i++) {
		check_close("azimuth", back.knot[i].az_deg, m.knot[i].az_deg, 0.0);
		check_close("altitude", back.knot[i].alt_deg, m.knot[i].alt_deg, 0.0);
	}
	mask_text(&back, again);
	assert_string_equal(again, text);
	assert_int_equal(parse(file, used, &m, &unsorted, &e), ST_RANGE);
	assert_string_equal(
	    e.text, "m.csv:721:1: row: more than 720 points in a horizon mask (got \"358.50208044382799\")");
}

static void stored_texts_are_checked(void **state)
{
	(void)state;
	static const char *const bad[] = {"10", "x 5", "10 5 6", "400 5", "10 5;10 6", "10,5", " "};
	struct mask m;
	struct err e;
	for (size_t i = 0; i < sizeof bad / sizeof bad[0]; i++)
		if (mask_of_text(bad[i], &m, &e) == ST_OK)
			check_fail("\"%s\" was taken", bad[i]);
	assert_int_equal(mask_of_text("", &m, &e), ST_OK);
	assert_int_equal(m.n, 0);
}

static void files(void **state)
{
	(void)state;
	struct mask m;
	struct err e = {0};
	bool unsorted;
	assert_int_equal(mask_read("no/such/file.csv", &m, &unsorted, &e), ST_ABSENT);
	assert_non_null(strstr(e.text, "no/such/file.csv: "));
	assert_int_equal(mask_read("/", &m, &unsorted, &e), ST_IO);
	/* the example that is shipped; `make check` runs in the top folder */
	if (mask_read("config-example/horizon-mask.csv", &m, &unsorted, &e) != ST_OK)
		check_fail("%s", e.text);
	assert_int_equal(m.n, 16);
	assert_false(unsorted);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(good_files),     cmocka_unit_test(faults_have_a_place),
	    cmocka_unit_test(as_many_as_720), cmocka_unit_test(stored_texts_are_checked),
	    cmocka_unit_test(files),
	};
	return cmocka_run_group_tests_name("read_mask", tests, NULL, NULL);
}
