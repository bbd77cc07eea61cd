/* SPDX-License-Identifier: MIT */
#include "tests/support/check.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/json.h"
#include "tui/sheets/out.h"

#include "db/read_csv.h"
#include "db/text_clean.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

/* --- what was written, as a text --- */

struct memory {
	FILE *file;
	char *text;
	size_t n;
};

static struct memory *memory_open(void)
{
	struct memory *m = calloc(1, sizeof *m);
	assert_non_null(m);
	m->file = open_memstream(&m->text, &m->n);
	assert_non_null(m->file);
	return m;
}

static const char *memory_text(struct memory *m)
{
	assert_int_equal(fflush(m->file), 0);
	return m->text;
}

static void memory_close(struct memory *m)
{
	fclose(m->file);
	free(m->text);
	free(m);
}

/* --- CSV --- */

static void csv_cells_are_quoted_where_needed(void **state)
{
	(void)state;
	/* RFC 4180 section 2, rules 5 to 7; the apostrophe: a spreadsheet takes =, +, - and @ for the start
	 * of a formula (CWE-1236) */
	static const struct {
		const char *in, *out;
	} rows[] = {
	    {"plain", "plain\n"},    {"", "\n"},
	    {"a,b", "\"a,b\"\n"},    {"say \"so\"", "\"say \"\"so\"\"\"\n"},
	    {"=1+1", "'=1+1\n"},     {"+1", "'+1\n"},
	    {"-1", "'-1\n"},	     {"@x", "'@x\n"},
	    {"=a,b", "\"'=a,b\"\n"}, {"a=b", "a=b\n"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct memory *m = memory_open();
		struct csv_out c = {.file = m->file};
		csv_text(&c, rows[i].in);
		csv_end_line(&c);
		assert_string_equal(memory_text(m), rows[i].out);
		memory_close(m);
	}
}

static void csv_numbers_keep_their_sign(void **state)
{
	(void)state;
	struct memory *m = memory_open();
	struct csv_out c = {.file = m->file};
	csv_number(&c, "-12.5");
	csv_number(&c, "");
	csv_text(&c, "x");
	csv_end_line(&c);
	csv_number(&c, "1");
	csv_end_line(&c);
	assert_string_equal(memory_text(m), "-12.5,,x\n1\n");
	memory_close(m);
}

/* What is written reads back equal, whatever the text. */
static void csv_reads_back_equal(void **state)
{
	(void)state;
	struct rng r = rng_open("csv_reads_back_equal");
	static const char letters[] = "ab,\"';\t =+-@#\n";
	for (int k = 0; k < 2000; k++) {
		char cell[3][24];
		struct memory *m = memory_open();
		struct csv_out c = {.file = m->file};
		fputs("one,two,three\n", m->file);
		for (int i = 0; i < 3; i++) {
			int n = 1 + (int)rng_between(&r, 0.0, 20.0);
			for (int j = 0; j < n; j++)
				cell[i][j] = letters[(int)rng_between(&r, 0.0, (double)(sizeof letters - 1))];
			cell[i][n] = '\0';
			if (strchr(" \t\n", cell[i][0]) || strchr(" \t\n", cell[i][n - 1]) ||
			    cell[i][0] == '\'')
				cell[i][0] = cell[i][n - 1] = 'z'; /* outer blanks and a given apostrophe are
								      not kept by every reader */
			csv_text(&c, cell[i]);
		}
		csv_end_line(&c);
		memory_text(m);
		struct csv *reader;
		struct csv_row row;
		struct err e;
		long line, column;
		if (csv_open(m->text, m->n, &reader, &line, &column, &e) != ST_OK)
			check_fail("%s: %s", m->text, e.text);
		if (csv_next(reader, &row, &line, &column, &e) != 1 || row.n != 3)
			check_fail("not one row of three: %s", m->text);
		for (int i = 0; i < 3; i++) {
			const char *text = row.cell[i].text;
			if (text[0] == '\'' && cell[i][0] != '\'')
				text++;
			if (strcmp(text, cell[i]) != 0)
				check_fail("wrote \"%s\", read \"%s\"", cell[i], text);
		}
		csv_close(reader);
		memory_close(m);
	}
}

/* --- JSON: a reader of the grammar of RFC 8259, that takes nothing else --- */

static const char *value(const char *s);

static const char *blanks(const char *s)
{
	return s + strspn(s, " \n");
}

static const char *string(const char *s)
{
	if (*s++ != '"')
		return NULL;
	for (; *s != '"'; s++) {
		if ((unsigned char)*s < 0x20)
			return NULL;
		if (*s != '\\')
			continue;
		s++; /* an escape */
		if (*s == 'u' && strspn(s + 1, "0123456789abcdef") >= 4)
			s += 4;
		else if (*s != '"' && *s != '\\')
			return NULL;
	}
	return s + 1;
}

static const char *items(const char *s, char end, bool keys)
{
	s = blanks(s + 1);
	if (*s == end)
		return s + 1;
	for (;;) {
		if (keys) {
			s = string(blanks(s));
			if (!s || *s++ != ':')
				return NULL;
		}
		s = value(blanks(s));
		if (!s)
			return NULL;
		s = blanks(s);
		if (*s == end)
			return s + 1;
		if (*s++ != ',')
			return NULL;
		s = blanks(s);
	}
}

static const char *value(const char *s)
{
	static const char *const words[] = {"true", "false", "null"};
	if (*s == '{' || *s == '[')
		return items(s, *s == '{' ? '}' : ']', *s == '{');
	if (*s == '"')
		return string(s);
	for (size_t i = 0; i < 3; i++)
		if (strncmp(s, words[i], strlen(words[i])) == 0)
			return s + strlen(words[i]);
	char digits[64];
	size_t n = strspn(s, "+-.0123456789eE");
	if (n == 0 || n >= sizeof digits)
		return NULL;
	memcpy(digits, s, n);
	digits[n] = '\0';
	return json_is_number(digits) ? s + n : NULL;
}

static void assert_json(const char *text)
{
	const char *end = value(blanks(text));
	if (!end || *blanks(end))
		check_fail("not JSON: %s", text);
}

static void json_numbers(void **state)
{
	(void)state;
	static const char *const good[] = {"0",	  "-0",	 "12",	    "-1.5",
					   "0.5", "1e5", "1.25E-7", "2459000.500000"};
	static const char *const bad[] = {"",	 "+1",	"01",  "1.", ".5",  "1e",
					  "nan", "inf", "0x1", "1 ", "--1", "-"};
	for (size_t i = 0; i < sizeof good / sizeof good[0]; i++)
		assert_true(json_is_number(good[i]));
	for (size_t i = 0; i < sizeof bad / sizeof bad[0]; i++)
		assert_false(json_is_number(bad[i]));
}

static void json_is_written_piece_by_piece(void **state)
{
	(void)state;
	struct memory *m = memory_open();
	struct json j = json_begin(m->file);
	json_open(&j, NULL, '{', false);
	json_text(&j, "name", "a \"b\" \\ c\n\x1b");
	json_number(&j, "x", 1.25, 1);
	json_number(&j, "unknown", (double)NAN, 3);
	json_exact(&j, "infinite", (double)INFINITY);
	json_digits(&j, "none", "");
	json_whole(&j, "n", -3);
	json_bool(&j, "yes", true);
	json_open(&j, "empty", '[', false);
	json_close(&j, ']');
	json_open(&j, "pair", '[', true);
	json_whole(&j, NULL, 1);
	json_null(&j, NULL);
	json_close(&j, ']');
	json_close(&j, '}');
	json_end(&j);
	assert_string_equal(
	    memory_text(m),
	    "{\n  \"name\": \"a \\\"b\\\" \\\\ c\\u000a\\u001b\",\n  \"x\": 1.3,\n  \"unknown\": null,\n"
	    "  \"infinite\": null,\n  \"none\": null,\n  \"n\": -3,\n  \"yes\": true,\n  \"empty\": [],\n"
	    "  \"pair\": [1, null]\n}\n");
	assert_json(m->text);
	memory_close(m);
}

/* Any bytes at all give valid JSON and valid UTF-8. */
static void json_texts_stay_valid(void **state)
{
	(void)state;
	struct rng r = rng_open("json_texts_stay_valid");
	for (int k = 0; k < 3000; k++) {
		char text[32];
		int n = (int)rng_between(&r, 0.0, 30.0);
		for (int i = 0; i < n; i++)
			text[i] = (char)(1 + (int)rng_between(&r, 0.0, 255.0));
		text[n] = '\0';
		struct memory *m = memory_open();
		struct json j = json_begin(m->file);
		json_open(&j, NULL, '{', true);
		json_text(&j, text, text);
		json_close(&j, '}');
		assert_json(memory_text(m));
		for (size_t i = 0; i < m->n;) {
			uint32_t cp;
			size_t length = utf8_decode(m->text + i, m->n - i, &cp);
			assert_true(length > 0);
			i += length;
		}
		memory_close(m);
	}
}

/* --- files --- */

static char folder[64];

static int make_folder(void **state)
{
	(void)state;
	snprintf(folder, sizeof folder, "/tmp/wane-out-XXXXXX");
	return mkdtemp(folder) ? 0 : -1;
}

static const char *in_folder(const char *name)
{
	static char path[2][160];
	static int which;
	which = !which;
	snprintf(path[which], sizeof path[which], "%s/%s", folder, name);
	return path[which];
}

static int drop_folder(void **state)
{
	(void)state;
	static const char *const names[] = {"a.txt", "b.txt", "link", "late.txt", "dangling"};
	for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
		unlink(in_folder(names[i]));
	return rmdir(folder); /* fails, and so does the test, when a temporary file was left behind */
}

static void assert_holds(const char *path, const char *want)
{
	char text[64] = "";
	FILE *f = fopen(path, "r");
	if (!f)
		check_fail("%s is missing", path);
	text[fread(text, 1, sizeof text - 1, f)] = '\0';
	fclose(f);
	assert_string_equal(text, want);
}

static enum status write_out(const char *path, const char *text, bool force, bool commit, struct err *e)
{
	struct out o;
	enum status s = out_open(&o, path, force, e);
	if (s != ST_OK)
		return s;
	fputs(text, o.file);
	if (commit)
		return out_commit(&o, e);
	out_abandon(&o);
	return ST_OK;
}

static void a_file_is_written_whole_or_not_at_all(void **state)
{
	(void)state;
	struct err e;
	const char *path = in_folder("a.txt");
	assert_int_equal(write_out(path, "one\n", false, false, &e), ST_OK); /* abandoned */
	assert_int_equal(access(path, F_OK), -1);
	assert_int_equal(write_out(path, "one\n", false, true, &e), ST_OK);
	assert_holds(path, "one\n");
	assert_int_equal(write_out(path, "two\n", false, true, &e), ST_CONFLICT);
	assert_non_null(strstr(e.text, "--force"));
	assert_holds(path, "one\n");
	assert_int_equal(write_out(path, "two\n", true, false, &e), ST_OK); /* abandoned */
	assert_holds(path, "one\n");
	assert_int_equal(write_out(path, "two\n", true, true, &e), ST_OK);
	assert_holds(path, "two\n");
}

static void a_replaced_file_keeps_its_mode(void **state)
{
	(void)state;
	struct err e;
	struct stat st;
	const char *path = in_folder("b.txt");
	assert_int_equal(write_out(path, "one\n", false, true, &e), ST_OK);
	assert_int_equal(chmod(path, 0640), 0);
	assert_int_equal(write_out(path, "two\n", true, true, &e), ST_OK);
	assert_int_equal(stat(path, &st), 0);
	assert_int_equal(st.st_mode & 07777, 0640);
}

static void a_link_is_written_through(void **state)
{
	(void)state;
	struct err e;
	struct stat st;
	assert_int_equal(symlink(in_folder("b.txt"), in_folder("link")), 0);
	assert_int_equal(write_out(in_folder("link"), "three\n", true, true, &e), ST_OK);
	assert_int_equal(lstat(in_folder("link"), &st), 0);
	assert_true(S_ISLNK(st.st_mode));
	assert_holds(in_folder("b.txt"), "three\n");
}

/* A file that appears while the result is being made is not replaced either. */
static void a_late_file_is_safe(void **state)
{
	(void)state;
	struct err e;
	struct out o;
	assert_int_equal(out_open(&o, in_folder("late.txt"), false, &e), ST_OK);
	fputs("mine\n", o.file);
	FILE *other = fopen(in_folder("late.txt"), "w");
	assert_non_null(other);
	fputs("theirs\n", other);
	fclose(other);
	assert_int_equal(out_commit(&o, &e), ST_CONFLICT);
	assert_holds(in_folder("late.txt"), "theirs\n");
}

static void what_is_no_file_is_refused(void **state)
{
	(void)state;
	struct err e;
	assert_int_equal(write_out(folder, "x", true, true, &e), ST_IO);
	assert_int_equal(write_out("/dev/null", "x", true, true, &e), ST_IO);
	assert_int_equal(write_out(in_folder("none/a.txt"), "x", true, true, &e), ST_IO);
	assert_int_equal(write_out("", "x", true, true, &e), ST_IO);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(csv_cells_are_quoted_where_needed),
	    cmocka_unit_test(csv_numbers_keep_their_sign),
	    cmocka_unit_test(csv_reads_back_equal),
	    cmocka_unit_test(json_numbers),
	    cmocka_unit_test(json_is_written_piece_by_piece),
	    cmocka_unit_test(json_texts_stay_valid),
	    cmocka_unit_test(a_file_is_written_whole_or_not_at_all),
	    cmocka_unit_test(a_replaced_file_keeps_its_mode),
	    cmocka_unit_test(a_link_is_written_through),
	    cmocka_unit_test(a_late_file_is_safe),
	    cmocka_unit_test(what_is_no_file_is_refused),
	};
	return cmocka_run_group_tests_name("sheets", tests, make_folder, drop_folder);
}
