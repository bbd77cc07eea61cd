/* SPDX-License-Identifier: MIT
 * Numbers as text. The grammar is the project's own; values read are compared with what the C compiler makes
 * of the same literal. */
#include "ephem/number_text.h"

#include "tests/support/check.h"

#include <locale.h>
#include <math.h>
#include <string.h>

static void good_numbers(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		double value;
	} rows[] = {
	    {"0", 0.0},
	    {"12", 12.0},
	    {"+12", 12.0},
	    {"-12.5", -12.5},
	    {"\xE2\x88\x92"
	     "5",
	     -5.0}, /* U+2212 */
	    {" 12.5 ", 12.5},
	    {"\t12.5\t", 12.5},
	    {".5", 0.5},
	    {"5.", 5.0},
	    {"1e3", 1000.0},
	    {"1E+3", 1000.0},
	    {"1.25e-3", 0.00125},
	    {"2e\xE2\x88\x92"
	     "2",
	     0.02},
	    {"000123.4500", 123.45},
	    {"0.000000001", 1e-9},
	    {"0e99999999999", 0.0},
	    {"0.0000e-400", 0.0},
	    {"2458350.123456", 2458350.123456},
	    {"1.7976931348623157e308", 1.7976931348623157e308},
	    {"2.2250738585072014e-308", 2.2250738585072014e-308},
	    {"123456789012345678901234567890", 123456789012345678901234567890.0},
	    {"0.1000000000000000055511151231257827021181583404541015625", 0.1},
	    {"9007199254740993", 9007199254740992.0}, /* half-way case: to even */
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		double v = -1.0;
		struct err e;
		if (number_parse(rows[i].text, strlen(rows[i].text), &v, NULL, &e) != ST_OK)
			check_fail("\"%s\" was refused: %s", rows[i].text, e.text);
		check_close(rows[i].text, v, rows[i].value, 0.0);
	}
}

static void refused_numbers(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		enum status status;
		size_t bad_at;
		const char *says;
	} rows[] = {
	    {"", ST_SYNTAX, 0, "empty"},
	    {"   ", ST_SYNTAX, 0, "empty"},
	    {"nan", ST_SYNTAX, 0, "\"n\""},
	    {"-NaN", ST_SYNTAX, 1, "\"N\""},
	    {"NAN(1)", ST_SYNTAX, 0, "\"N\""},
	    {"inf", ST_SYNTAX, 0, "\"i\""},
	    {"1e400", ST_RANGE, 0, "too large"},
	    {"-1e400", ST_RANGE, 0, "too large"},
	    {"1e-400", ST_RANGE, 0, "too small"},
	    {"4.9e-324", ST_RANGE, 0, "too small"},
	    {"1e99999999999999999999", ST_RANGE, 0, "too large"},
	    {"0x1p3", ST_SYNTAX, 1, "\"x\""},
	    {"1_000", ST_SYNTAX, 1, "\"_\""},
	    {"1 000", ST_SYNTAX, 1, "\" \""},
	    {"\xD9\xA1\xD9\xA2", ST_SYNTAX, 0, "\xD9\xA1"}, /* Arabic-Indic digits */
	    {"12.5\xC2\xA0", ST_SYNTAX, 4, "U+00A0"},	    /* no-break space */
	    {"12abc", ST_SYNTAX, 2, "\"a\""},
	    {"1.2.3", ST_SYNTAX, 3, "\".\""},
	    {"--5", ST_SYNTAX, 1, "\"-\""},
	    {"+-5", ST_SYNTAX, 1, "\"-\""},
	    {"5e", ST_SYNTAX, 1, "exponent"},
	    {"5e+", ST_SYNTAX, 1, "exponent"},
	    {"e5", ST_SYNTAX, 0, "\"e\""},
	    {".", ST_SYNTAX, 0, "not a number"},
	    {"-", ST_SYNTAX, 1, "the end"},
	    {"3,1415", ST_SYNTAX, 1, "decimal comma"},
	    {"1.23(4)", ST_SYNTAX, 4, "\"(\""},
	    {"1.23\xC2\xB1"
	     "0.04",
	     ST_SYNTAX, 4, "\xC2\xB1"},
	    {"n/a", ST_SYNTAX, 0, "not a number"},
	    {"1\x1b[31m", ST_SYNTAX, 1, "\\x1b"},
	    {"11111111111111111111111111111111111111111111111111111111111111111", ST_SYNTAX, 64, "too long"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		double v = 77.0;
		struct err e;
		size_t at = 999;
		enum status s = number_parse(rows[i].text, strlen(rows[i].text), &v, &at, &e);
		if (s != rows[i].status || at != rows[i].bad_at || !strstr(e.text, rows[i].says))
			check_fail("row %zu \"%s\": status %d at %zu \"%s\"", i, rows[i].text, (int)s, at,
				   e.text);
		check_close("untouched", v, 77.0, 0.0);
	}
}

static void digits_end_at_n(void **state)
{
	(void)state;
	/* an exact-size block without an end: address checking sees any byte read behind it */
	char block[3] = {'1', '.', '5'};
	double v;
	assert_int_equal(number_parse(block, 3, &v, NULL, NULL), ST_OK);
	check_close("1.5", v, 1.5, 0.0);
	assert_int_equal(number_parse(block, 2, &v, NULL, NULL), ST_OK);
	check_close("1.", v, 1.0, 0.0);
}

static void shortest_text(void **state)
{
	(void)state;
	static const struct {
		double value;
		const char *text;
	} rows[] = {
	    {0.0, "0"},
	    {-0.0, "-0"},
	    {1.0, "1"},
	    {-1.5, "-1.5"},
	    {0.1, "0.1"},
	    {1.0 / 3.0, "0.3333333333333333"},
	    {0.1 + 0.2, "0.30000000000000004"},
	    {2458350.123456, "2458350.123456"},
	    {100.0, "100"},
	    {12300.0, "12300"},
	    {1e16, "10000000000000000"},
	    {1e17, "1e17"},
	    {1.5e300, "1.5e300"},
	    {1e-4, "0.0001"},
	    {1.25e-5, "0.0000125"},
	    {1.25e-6, "1.25e-6"},
	    {2.1e-4, "0.00021"},
	    {5e-324, "4.94065645841247e-324"},
	};
	char out[NUMBER_TEXT_MAX];
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		number_text(rows[i].value, out);
		assert_string_equal(out, rows[i].text);
	}
	number_text((double)NAN, out);
	assert_string_equal(out, "");
	number_text((double)INFINITY, out);
	assert_string_equal(out, "");
}

static void fixed_text(void **state)
{
	(void)state;
	static const struct {
		double value;
		int decimals;
		const char *text;
	} rows[] = {
	    {0.0, 0, "0"},
	    {-0.0, 2, "0.00"},
	    {-0.001, 2, "0.00"},
	    {-0.004999, 2, "0.00"},
	    {-0.005, 2, "-0.01"},
	    {0.5, 0, "1"},
	    {1.5, 0, "2"},
	    {2.5, 0, "3"},
	    {-2.5, 0, "-3"},
	    {2.675, 2, "2.68"}, /* half away from zero on the decimal text, not on the binary 2.67499... */
	    {1.005, 2, "1.01"},
	    {0.125, 2, "0.13"},
	    {0.7, 0, "1"},
	    {0.007, 2, "0.01"},
	    {0.004, 2, "0.00"},
	    {9.995, 2, "10.00"},
	    {99.999, 1, "100.0"},
	    {0.999, 2, "1.00"},
	    {1.95, 1, "2.0"},
	    {19.5, 0, "20"},
	    {12.0, 3, "12.000"},
	    {0.05, 3, "0.050"},
	    {1234567.891, 1, "1234567.9"},
	    {2461114.7083335, 6, "2461114.708334"},
	    {1e-10, 4, "0.0000"},
	    {0.1, 17, "0.10000000000000000"},
	    {1e300, 2, "1e300"},
	    {123.0, -3, "123"},
	};
	char out[NUMBER_TEXT_MAX];
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		number_text_fixed(rows[i].value, rows[i].decimals, out);
		if (strcmp(out, rows[i].text) != 0)
			check_fail("%.17g with %d decimals: got \"%s\", want \"%s\"", rows[i].value,
				   rows[i].decimals, out, rows[i].text);
	}
	number_text_fixed((double)NAN, 2, out);
	assert_string_equal(out, "");
}

static void dates_keep_twelve_decimals(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		double day, frac;
		int decimals;
		const char *back;
	} rows[] = {
	    {"2458350.123456789012", 2458350.0, 0.123456789012, 12, "2458350.123456789012"},
	    {"2458350.999999999999", 2458350.0, 0.999999999999, 12, "2458350.999999999999"},
	    {"2458350.999999999999", 2458350.0, 0.999999999999, 6, "2458351.000000"},
	    {"2458350.5", 2458350.0, 0.5, 2, "2458350.50"},
	    {"2458350", 2458350.0, 0.0, 0, "2458350"},
	    {"2.458350123456789e6", 2458350.0, 0.123456789, 9, "2458350.123456789"},
	    {"24583501234e-4", 2458350.0, 0.1234, 4, "2458350.1234"},
	    {"0.25", 0.0, 0.25, 2, "0.25"},
	    {".000001", 0.0, 1e-6, 6, "0.000001"},
	    {"-0.3", -1.0, 0.7, 1, "-0.3"},
	    {"-1", -1.0, 0.0, 1, "-1.0"},
	    {"-12.75", -13.0, 0.25, 2, "-12.75"},
	    {"0", 0.0, 0.0, 3, "0.000"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		struct jd2 jd;
		struct err e;
		char out[NUMBER_TEXT_MAX];
		if (number_parse_jd2(rows[i].text, strlen(rows[i].text), &jd, NULL, &e) != ST_OK)
			check_fail("%s: %s", rows[i].text, e.text);
		check_close(rows[i].text, jd.day, rows[i].day, 0.0);
		check_close(rows[i].text, jd.frac, rows[i].frac, 1e-16);
		number_text_jd2(jd, rows[i].decimals, out);
		assert_string_equal(out, rows[i].back);
	}
	struct jd2 jd;
	struct err e;
	assert_int_equal(number_parse_jd2("1e16", 4, &jd, NULL, &e), ST_RANGE);
	assert_int_equal(number_parse_jd2("1e-400", 6, &jd, NULL, &e), ST_RANGE);
	assert_int_equal(number_parse_jd2("24583x", 6, &jd, NULL, &e), ST_SYNTAX);
	/* days on the half grid print like any other */
	char out[NUMBER_TEXT_MAX];
	number_text_jd2((struct jd2){2461114.5, 0.5}, 3, out);
	assert_string_equal(out, "2461115.000");
	number_text_jd2((struct jd2){2461114.5, 0.4999999}, 3, out);
	assert_string_equal(out, "2461115.000");
	number_text_jd2((struct jd2){2461114.5, 0.25}, 3, out);
	assert_string_equal(out, "2461114.750");
	number_text_jd2((struct jd2){(double)NAN, 0.25}, 3, out);
	assert_string_equal(out, "");
}

/* A locale with a decimal comma changes nothing; skipped where none is installed. */
static void locale_does_not_matter(void **state)
{
	(void)state;
	static const char *const names[] = {"de_DE.UTF-8", "de_DE.utf8", "fr_FR.UTF-8", "fr_FR.utf8",
					    "de_DE"};
	const char *found = NULL;
	for (size_t i = 0; i < sizeof names / sizeof *names && !found; i++)
		found = setlocale(LC_NUMERIC, names[i]);
	if (!found)
		check_skip("no locale with a decimal comma is installed (locale -a)");
	double v = 0.0;
	char a[NUMBER_TEXT_MAX], b[NUMBER_TEXT_MAX];
	enum status s = number_parse("2458350.125", 11, &v, NULL, NULL),
		    comma = number_parse("1,5", 3, &v, NULL, NULL);
	number_text(0.30000000000000004, a);
	number_text_fixed(2.675, 2, b);
	setlocale(LC_NUMERIC, "C");
	assert_int_equal(s, ST_OK);
	assert_int_equal(comma, ST_SYNTAX);
	check_close("2458350.125", v, 2458350.125, 0.0);
	assert_string_equal(a, "0.30000000000000004");
	assert_string_equal(b, "2.68");
}

static void quoted_input(void **state)
{
	(void)state;
	static const struct {
		const char *text, *shown;
	} rows[] = {
	    {"plain", "plain"},
	    {"a\x1b[2J", "a\\x1b[2J"},
	    {"a\xE2\x80\xAE"
	     "b",
	     "aU+202Eb"},
	    {"a\xE2\x80\x8B"
	     "b",
	     "aU+200Bb"},
	    {"\xC3\xA9t\xC3\xA9", "\xC3\xA9t\xC3\xA9"},
	    {"\xE9t\xE9", "\\xe9t\\xe9"},		  /* Latin-1 */
	    {"\xED\xA0\x80", "\\xed\\xa0\\x80"},	  /* surrogate: not valid UTF-8 (RFC 3629) */
	    {"\xC0\x80", "\\xc0\\x80"},			  /* overlong */
	    {"\xF4\x90\x80\x80", "\\xf4\\x90\\x80\\x80"}, /* above U+10FFFF */
	    {"\xE2\x82", "\\xe2\\x82"},			  /* cut short */
	};
	char out[ERR_QUOTE_MAX];
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		err_quote(rows[i].text, strlen(rows[i].text), out);
		assert_string_equal(out, rows[i].shown);
	}
	char many[300];
	memset(many, 'x', sizeof many);
	err_quote(many, sizeof many, out);
	assert_int_equal(strlen(out), ERR_QUOTE_MAX - 1);
	assert_string_equal(out + ERR_QUOTE_MAX - 4, "...");
	struct err e;
	assert_int_equal(err_set(&e, ST_IO, "one\ntwo %d", 3), ST_IO);
	assert_string_equal(e.text, "one two 3");
	err_clear(&e);
	assert_int_equal(e.status, ST_OK);
	assert_string_equal(e.text, "");
	assert_int_equal(err_set(NULL, ST_RANGE, "nobody reads this"), ST_RANGE);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(good_numbers),    cmocka_unit_test(refused_numbers),
	    cmocka_unit_test(digits_end_at_n), cmocka_unit_test(shortest_text),
	    cmocka_unit_test(fixed_text),      cmocka_unit_test(dates_keep_twelve_decimals),
	    cmocka_unit_test(quoted_input),    cmocka_unit_test(locale_does_not_matter),
	};
	return cmocka_run_group_tests_name("number_text", tests, NULL, NULL);
}
