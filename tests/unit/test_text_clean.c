/* SPDX-License-Identifier: MIT */
#include "tests/support/check.h"

#include "db/combining.h"
#include "db/text_clean.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* --- UTF-8: RFC 3629 section 4 (table of well-formed byte sequences) and its examples in section 7 --- */

static void test_decode(void **state)
{
	static const struct {
		const char *source, *bytes;
		size_t n, length;
		uint32_t cp;
	} rows[] = {
	    {"RFC 3629 3: one byte", "A", 1, 1, 0x41},
	    {"RFC 3629 7: not identical to", "\xE2\x89\xA2", 3, 3, 0x2262},
	    {"RFC 3629 7: Hangul", "\xED\x95\x9C", 3, 3, 0xD55C},
	    {"RFC 3629 7: four bytes", "\xF0\xA3\x8E\xB4", 4, 4, 0x233B4},
	    {"RFC 3629 7: byte order mark", "\xEF\xBB\xBF", 3, 3, 0xFEFF},
	    {"two bytes, the least", "\xC2\x80", 2, 2, 0x80},
	    {"three bytes, the least", "\xE0\xA0\x80", 3, 3, 0x800},
	    {"four bytes, the least", "\xF0\x90\x80\x80", 4, 4, 0x10000},
	    {"the greatest of all", "\xF4\x8F\xBF\xBF", 4, 4, 0x10FFFF},
	    {"last before the surrogates", "\xED\x9F\xBF", 3, 3, 0xD7FF},
	    {"first behind the surrogates", "\xEE\x80\x80", 3, 3, 0xE000},
	    {"RFC 3629 10: overlong NUL", "\xC0\x80", 2, 0, 0},
	    {"overlong slash", "\xC1\xAF", 2, 0, 0},
	    {"overlong, three bytes", "\xE0\x9F\xBF", 3, 0, 0},
	    {"overlong, four bytes", "\xF0\x8F\xBF\xBF", 4, 0, 0},
	    {"RFC 3629 3: a surrogate", "\xED\xA0\x80", 3, 0, 0},
	    {"the last surrogate", "\xED\xBF\xBF", 3, 0, 0},
	    {"above U+10FFFF", "\xF4\x90\x80\x80", 4, 0, 0},
	    {"F5 never occurs", "\xF5\x80\x80\x80", 4, 0, 0},
	    {"a tail alone", "\x80", 1, 0, 0},
	    {"cut short after one", "\xE2", 1, 0, 0},
	    {"cut short after two", "\xE2\x89", 2, 0, 0},
	    {"a bad tail", "\xE2\x89\x41", 3, 0, 0},
	    {"nothing", "", 0, 0, 0},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		uint32_t cp = 0;
		/* an exact block, so that a sanitizer sees a byte read behind it */
		char *block = malloc(rows[i].n ? rows[i].n : 1);
		assert_non_null(block);
		memcpy(block, rows[i].bytes, rows[i].n);
		size_t length = utf8_decode(block, rows[i].n, &cp);
		free(block);
		if (length != rows[i].length || cp != rows[i].cp)
			check_fail("%s: length %zu, U+%04X", rows[i].source, length, (unsigned)cp);
	}
}

static void test_every_code_point(void **state)
{
	(void)state;
	for (uint32_t cp = 0; cp <= 0x10FFFF; cp++) {
		char bytes[4];
		uint32_t back = 0;
		if (cp >= 0xD800 && cp <= 0xDFFF)
			continue;
		size_t n = utf8_encode(cp, bytes);
		if (utf8_decode(bytes, n, &back) != n || back != cp)
			check_fail("U+%04X does not come back", (unsigned)cp);
	}
}

static void test_hostile(void **state)
{
	/* The Unicode Standard: C0, DEL and C1; Bidi_Control (UAX 9); Default_Ignorable (UAX 44);
	 * non-characters (chapter 23) */
	static const uint32_t bad[] = {0x00,	0x07,	 0x1B,	  0x1F,	   0x7F,    0x80,   0x9B,   0x9F,
				       0xAD,	0x61C,	 0x200B,  0x200D,  0x200E,  0x202A, 0x202E, 0x2028,
				       0x2029,	0x2060,	 0x2066,  0x2069,  0xFE0F,  0xFEFF, 0xFDD0, 0xFFFE,
				       0x1FFFF, 0xE0001, 0xE007F, 0xE0100, 0x10FFFF};
	static const uint32_t good[] = {0x20,	0x7E,	0xA0,	0xE9,	0x3C0,	0x301,
					0x2010, 0x2212, 0x4E2D, 0xFFFD, 0x1F600};
	(void)state;
	for (size_t i = 0; i < sizeof bad / sizeof bad[0]; i++)
		if (!codepoint_is_hostile(bad[i]))
			check_fail("U+%04X passes", (unsigned)bad[i]);
	for (size_t i = 0; i < sizeof good / sizeof good[0]; i++)
		if (codepoint_is_hostile(good[i]))
			check_fail("U+%04X is refused", (unsigned)good[i]);
}

static void test_combining(void **state)
{
	/* general categories of the Unicode Character Database: Mn, Me or another */
	static const struct {
		uint32_t cp;
		bool combines;
	} rows[] = {
	    {'a', false},    {0x2FF, false},   {0x300, true},	  {0x301, true},   {0x36F, true},
	    {0x370, false},  {0x483, true},    {0x489, true},	  {0x48A, false},  {0x64B, true},
	    {0x20D0, true},  {0x20DD, true},   {0xFE20, true},	  {0xFE2F, true},  {0xFE30, false},
	    {0x1E94A, true}, {0x1E94B, false}, {0x10FFFD, false}, {0xFE0F, false}, {0x4E2D, false},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
		if (codepoint_combines(rows[i].cp) != rows[i].combines)
			check_fail("U+%04X", (unsigned)rows[i].cp);
}

/* --- names --- */

static char *repeat(const char *piece, int times)
{
	size_t n = strlen(piece);
	char *text = malloc(n * (size_t)times + 1);
	assert_non_null(text);
	for (int i = 0; i < times; i++)
		memcpy(text + n * (size_t)i, piece, n);
	text[n * (size_t)times] = '\0';
	return text;
}

static void test_name_check(void **state)
{
	static const struct {
		const char *text;
		enum status want;
		size_t bad_at;
		const char *says;
	} rows[] = {
	    {"Tern 14 b", ST_OK, 0, ""},
	    {"  Tern 14 b\t", ST_OK, 0, ""},
	    {"\xCF\x80 Mensae c", ST_OK, 0, ""},
	    {"e\xCC\x81toile", ST_OK, 0, ""},
	    {"\xE4\xB8\xAD 1", ST_OK, 0, ""},
	    {"'; DROP TABLE target;--", ST_OK, 0, ""},
	    {"%n%s", ST_OK, 0, ""},
	    {"=HYPERLINK(1)", ST_OK, 0, ""},
	    {"", ST_SYNTAX, 0, "needed"},
	    {"   ", ST_SYNTAX, 0, "needed"},
	    {" -_ ", ST_SYNTAX, 0, "letter or a digit"},
	    {"Tern\x1B[2J", ST_SYNTAX, 4, "U+001B"},
	    {"a\tb", ST_SYNTAX, 1, "U+0009"},
	    {"a\nb", ST_SYNTAX, 1, "U+000A"},
	    {"a\x7F", ST_SYNTAX, 1, "U+007F"},
	    {"a\xC2\x9B", ST_SYNTAX, 1, "U+009B"},
	    {"ab\xE2\x80\xAE", ST_SYNTAX, 2, "U+202E"},
	    {"ab\xE2\x80\x8B"
	     "c",
	     ST_SYNTAX, 2, "U+200B"},
	    {"  \xEF\xBB\xBFx", ST_SYNTAX, 2, "U+FEFF"},
	    {"\xCC\x81x", ST_SYNTAX, 0, "U+0301"},
	    {"Caf\xE9 1", ST_SYNTAX, 3, "0xE9"},
	    {"x\xE2\x89", ST_SYNTAX, 1, "0xE2"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct err e = {0};
		size_t bad_at = 999;
		enum status s = name_check(rows[i].text, strlen(rows[i].text), &bad_at, &e);
		if (s != rows[i].want || bad_at != rows[i].bad_at || !strstr(e.text, rows[i].says))
			check_fail("row %zu: status %d at %zu: %s", i, (int)s, bad_at, e.text);
	}
}

static void test_name_length(void **state)
{
	static const struct {
		const char *piece;
		int times;
		enum status want;
	} rows[] = {
	    {"x", 1, ST_OK},
	    {"x", 80, ST_OK},
	    {"x", 81, ST_SYNTAX},
	    {"\xCF\x80", 80, ST_OK},
	    {"\xCF\x80", 81, ST_SYNTAX},
	    {"\xF0\x9F\x98\x80", 80, ST_OK},
	    {"x", 10000, ST_SYNTAX},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char *text = repeat(rows[i].piece, rows[i].times), key[NAME_KEY_MAX];
		enum status s = name_check(text, strlen(text), NULL, NULL);
		name_key(text, key); /* never beyond its room, whatever the text */
		free(text);
		if (s != rows[i].want)
			check_fail("row %zu: status %d", i, (int)s);
	}
}

static void test_name_key(void **state)
{
	static const struct {
		const char *text, *key;
	} rows[] = {
	    {"Tern 14 b", "tern14b"},
	    {"TERN-14_B", "tern14b"},
	    {" tern\xE2\x80\x90"
	     "14\xE2\x80\x91"
	     "b\xE2\x80\x92\xE2\x80\x93\xE2\x80\x94\xE2\x80\x95",
	     "tern14b"},
	    {"Tern\xC2\xA0"
	     "14\xC2\xA0"
	     "b",
	     "tern14b"},
	    {"\xCE\xA0 x", "\xCE\xA0x"}, /* letters outside ASCII are not folded */
	    {"BD+20 594 b", "bd+20594b"},
	    {"a\xE2\x88\x92"
	     "b",
	     "a\xE2\x88\x92"
	     "b"}, /* U+2212 is a minus, no hyphen */
	    {"", ""},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char key[NAME_KEY_MAX];
		name_key(rows[i].text, key);
		assert_string_equal(key, rows[i].key);
	}
}

/* --- cleaning --- */

static void test_text_clean(void **state)
{
	static const struct {
		const char *text;
		size_t size;
		const char *clean;
	} rows[] = {
	    {"plain", 32, "plain"},
	    {"a\tb\nc", 32, "a b c"},
	    {"a\x1B[31mb\x07", 32, "a[31mb"},
	    {"a\xE2\x80\xAE"
	     "b",
	     32, "ab"},
	    {"a\xE9z", 32, "a\xEF\xBF\xBDz"},
	    {"\xE2\x89", 32, "\xEF\xBF\xBD\xEF\xBF\xBD"},
	    {"\xCC\x81"
	     "a",
	     32, "a"},
	    {"a\xCC\x81\xCC\x82\xCC\x83z", 32, "a\xCC\x81\xCC\x82z"},
	    {"abcdef", 4, "abc"},
	    {"ab\xE4\xB8\xAD", 4, "ab"}, /* cut between characters */
	    {"ab\xE4\xB8\xAD", 5, "ab"},
	    {"ab\xE4\xB8\xAD", 6, "ab\xE4\xB8\xAD"},
	    {"x", 1, ""},
	    {"", 8, ""},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char *out = malloc(rows[i].size);
		assert_non_null(out);
		size_t n = text_clean(rows[i].text, out, rows[i].size);
		if (strcmp(out, rows[i].clean) != 0 || n != strlen(rows[i].clean))
			check_fail("row %zu: got \"%s\"", i, out);
		free(out);
	}
	assert_int_equal(text_clean("abc", NULL, 0), 0);
}

/* Random bytes: what comes out is valid, holds nothing hostile, and stays as it is when cleaned again. */
static void test_clean_twice(void **state)
{
	struct rng r = rng_open("text_clean");
	(void)state;
	for (int turn = 0; turn < 20000; turn++) {
		char text[48], once[64], twice[64];
		size_t n = (size_t)rng_between(&r, 0, 40), used;
		for (size_t i = 0; i < n; i++)
			text[i] = (char)(1 + (int)rng_between(&r, 0, 255));
		text[n] = '\0';
		used = text_clean(text, once, sizeof once);
		for (size_t i = 0; i < used;) {
			uint32_t cp;
			size_t length = utf8_decode(once + i, used - i, &cp);
			if (length == 0 || codepoint_is_hostile(cp))
				check_fail("turn %d: byte %zu is not clean", turn, i);
			i += length;
		}
		(void)text_clean(once, twice, sizeof twice);
		assert_string_equal(once, twice);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_decode),	cmocka_unit_test(test_every_code_point),
	    cmocka_unit_test(test_hostile),	cmocka_unit_test(test_combining),
	    cmocka_unit_test(test_name_check),	cmocka_unit_test(test_name_length),
	    cmocka_unit_test(test_name_key),	cmocka_unit_test(test_text_clean),
	    cmocka_unit_test(test_clean_twice),
	};
	return cmocka_run_group_tests_name("text_clean", tests, NULL, NULL);
}
