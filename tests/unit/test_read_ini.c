/* SPDX-License-Identifier: MIT */
#include "tests/support/check.h"

#include "db/read_ini.h"

#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* `section/key=value@line:column;` of every entry, or `! line:column: message`. */
static void parse(const char *data, size_t n, char *out, size_t size)
{
	struct ini ini;
	struct err e = {0};
	long line = 0, column = 0;
	char *block = malloc(n ? n : 1); /* exact, for the sanitizer */
	assert_non_null(block);
	memcpy(block, data, n);
	out[0] = '\0';
	if (ini_parse(block, n, &ini, &line, &column, &e) != ST_OK) {
		snprintf(out, size, "! %ld:%ld: %s", line, column, e.text);
		assert_null(ini.entry);
	} else {
		for (size_t i = 0, used = 0; i < ini.n && used < size; i++)
			used += (size_t)snprintf(out + used, size - used, "%s/%s=%s@%ld:%ld;",
						 ini.entry[i].section, ini.entry[i].key, ini.entry[i].value,
						 ini.entry[i].line, ini.entry[i].value_column);
		ini_free(&ini);
	}
	free(block);
}

static void test_table(void **state)
{
	static const struct {
		const char *data, *want;
	} rows[] = {
	    {"", ""},
	    {"# c\n; d\n\n  \t\n", ""},
	    {"a = 1\n", "/a=1@1:5;"},
	    {"a=1", "/a=1@1:3;"},
	    {"  a\t=\t1 2  \n", "/a=1 2@1:7;"},
	    {"a =\n", "/a=@1:4;"},
	    {"[x]\na=1\r\n[ y z ]\r\nb = 2\n", "x/a=1@2:3;y z/b=2@4:5;"},
	    {"a = \"  q \\\" \\\\ \"  \n", "/a=  q \" \\ @1:5;"},
	    {"a = b # no comment\n", "/a=b # no comment@1:5;"},
	    {"\xEF\xBB\xBF"
	     "a=1",
	     "/a=1@1:3;"},
	    {"name = \xCF\x80 x", "/name=\xCF\x80 x@1:8;"},
	    {"a-b.c_D9 = 1", "/a-b.c_D9=1@1:12;"},
	    {"[x]\na=1\n[y]\na=2", "x/a=1@2:3;y/a=2@4:3;"},
	    {"a\rb", "! 1:2: key: no = behind it (got \"a"},
	    {"a", "! 1:2: key: no = behind it (got \"a"},
	    {"x\n= 1", "! 1:2: key: no = behind"},
	    {"= 1", "! 1:1: row: no key (got \"= 1\", expected key = value"},
	    {"a b = 1", "! 1:3: key: no = behind"},
	    {"[x", "! 1:1: section: never closed (got \"[x\", expected [name])"},
	    {"[]", "! 1:1: section: no name"},
	    {"[x] y", "! 1:5: section: text behind it (got \"y\""},
	    {"\n a = \"x", "! 2:6: value: the quote is never closed"},
	    {"a = \"x\" y", "! 1:9: value: text after the closing quote"},
	    {"a = \"\\n\"", "! 1:6: value: a backslash"},
	    {"a=1\n\na = 2",
	     "! 3:1: a: given twice (got \"a\", expected each key once; it stands in line 1)"},
	    {"a = x\x1B", "! 1:6: row: a control or invisible character (got \"\\x1b\", expected text)"},
	    {"a = \xE2\x80\xAEx", "! 1:5: row: a control or invisible character (got \"U+202Ex\""},
	    {"a = \xE9", "! 1:5: row: not UTF-8 (got \"\\xe9\""},
	    {"\x1F\x8B", "! 1:1: file: this is a gzip file: unpack it first (got \"\\x1f\\x8b\""},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char out[512];
		parse(rows[i].data, strlen(rows[i].data), out, sizeof out);
		bool good = rows[i].want[0] == '!' ? strncmp(out, rows[i].want, strlen(rows[i].want)) == 0
						   : strcmp(out, rows[i].want) == 0;
		if (!good)
			check_fail("row %zu:\ngot  %s\nwant %s", i, out, rows[i].want);
	}
}

static void test_nul(void **state)
{
	char out[128];
	(void)state;
	parse("ab=1\nc=\0\n", 9, out, sizeof out);
	assert_int_equal(strncmp(out, "! 2:3: row: a control", 21), 0);
}

/* Any bytes: it ends, and never reads or writes beyond its blocks. */
static void test_any_bytes(void **state)
{
	static const char pieces[] = "ab=[]\"\\\\ #;\n\r";
	struct rng r = rng_open("read_ini");
	(void)state;
	for (int turn = 0; turn < 20000; turn++) {
		char data[32], out[1024];
		size_t n = (size_t)rng_between(&r, 0, sizeof data);
		for (size_t i = 0; i < n; i++)
			data[i] = pieces[(size_t)rng_between(&r, 0, sizeof pieces - 1)];
		parse(data, n, out, sizeof out);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_table),
	    cmocka_unit_test(test_nul),
	    cmocka_unit_test(test_any_bytes),
	};
	return cmocka_run_group_tests_name("read_ini", tests, NULL, NULL);
}
