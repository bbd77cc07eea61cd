/* SPDX-License-Identifier: MIT
 * Targets with random texts and numbers: out as a table, in again, out again: the same bytes; epochs to the
 * last bit. */
#include "tests/support/check.h"

#include "db/import.h"
#include "db/read_csv.h"
#include "db/targets.h"
#include "db/text_clean.h"
#include "db/write_csv.h"
#include "ephem/number_text.h"

#include <math.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const struct change change = {"2026-04-22T03:00:00Z", "test", "import"};

struct text {
	char *at;
	size_t used, room;
};

static void append(struct text *t, const char *s)
{
	size_t n = strlen(s);
	if (t->used + n + 1 > t->room) {
		t->room = 2 * (t->used + n + 1);
		t->at = realloc(t->at, t->room);
		assert_non_null(t->at);
	}
	memcpy(t->at + t->used, s, n + 1);
	t->used += n;
}

static void append_cell(struct text *t, int field, const char *s)
{
	char cell[3 * FIELD_NOTE_MAX];
	enum field_kind kind = fields[field].kind;
	bool is_text = kind == FIELD_NAME || kind == FIELD_TEXT || kind == FIELD_SCALE;
	size_t n = csv_cell_write(s, is_text, cell, sizeof cell);
	assert_true(n < sizeof cell);
	if (field > 0)
		append(t, ",");
	append(t, cell);
}

static void append_header(struct text *t)
{
	for (int f = 0; f < FIELD_COUNT; f++)
		append_cell(t, f, fields[f].name);
	append(t, "\n");
}

static int pick(struct rng *r, int n)
{
	int i = (int)rng_between(r, 0, n);
	return i < n ? i : n - 1;
}

/* --- random texts --- */

static void random_text(struct rng *r, bool name, char *out, size_t size)
{
	static const char *const pieces[] = {"=",
					     "+",
					     "-",
					     "@",
					     "'",
					     "\"",
					     ",",
					     ";",
					     "#",
					     "\\",
					     "%s",
					     "x",
					     "B",
					     "7",
					     " ",
					     "(",
					     "<",
					     ".",
					     "_",
					     "\xCF\x80",
					     "\xC3\xA9",
					     "e\xCC\x81",
					     "|",
					     "&",
					     "\xE4\xB8\xAD",
					     "''",
					     "\"\"",
					     "\xF0\x9F\x98\x80"};
	int n = pick(r, name ? 20 : 60);
	out[0] = '\0';
	for (int i = 0; i < n; i++)
		strncat(out, pieces[pick(r, sizeof pieces / sizeof pieces[0])], size - strlen(out) - 1);
	/* what the store keeps is trimmed and cleaned: the text starts as one that needs neither */
	char clean[1024];
	const char *start = clean;
	size_t length = text_clean(out, clean, sizeof clean);
	text_trim(&start, &length);
	snprintf(out, size, "%.*s", (int)length, start);
}

/* A number in one of the ways in which tables write it. */
static void random_number(struct rng *r, double lo, double hi, char *out, size_t size)
{
	double value = rng_between(r, lo, hi);
	switch (pick(r, 6)) {
	case 0:
		snprintf(out, size, "%.0f", value);
		break;
	case 1:
		snprintf(out, size, "%.4f", value);
		break;
	case 2:
		snprintf(out, size, "%.3e", value);
		break;
	case 3:
		snprintf(out, size, "%s%.6f", value >= 0 ? "+" : "", value);
		break;
	case 4:
		snprintf(out, size, "%.17g", value);
		break;
	default:
		number_text(value, out);
		break;
	}
	(void)size;
}

static void random_row(struct rng *r, int number, struct text *t)
{
	for (int f = 0; f < FIELD_COUNT; f++) {
		char text[512] = "", name[528];
		bool give = pick(r, 3) > 0;
		switch (fields[f].kind) {
		case FIELD_NAME:
			random_text(r, true, text, 200);
			/* numbered, so that no two have one key */
			snprintf(name, sizeof name, "%s%d", text, number);
			memcpy(text, name, sizeof text);
			text[sizeof text - 1] = '\0';
			break;
		case FIELD_TEXT:
			if (give)
				random_text(r, false, text, 250);
			break;
		case FIELD_RA: /* takes no sign */
			random_number(r, 0, 359, name, NUMBER_TEXT_MAX);
			snprintf(text, sizeof text, "%s", name + (*name == '+'));
			break;
		case FIELD_DEC:
			random_number(r, -89, 89, text, NUMBER_TEXT_MAX);
			break;
		case FIELD_DATE:
			if (give)
				snprintf(text, sizeof text, "%d.%.*s%d", 2440000 + pick(r, 40000),
					 pick(r, 12), "00000000000", pick(r, 10));
			break;
		case FIELD_SCALE: {
			static const char *const scales[] = {"",    "BJD_TDB", "HJD_UTC", "unknown:BJD",
							     "BJD", "JD",      "JD_UTC"};
			snprintf(text, sizeof text, "%s", scales[pick(r, 7)]);
			break;
		}
		case FIELD_NUMBER: /* now and then one that can't be true */
			if (give)
				random_number(r, fields[f].min, fmin(fields[f].max, fields[f].min + 50), text,
					      NUMBER_TEXT_MAX);
			if (fields[f].essential && strpbrk(text, "-") == text)
				text[0] = '\0';
			if (f == FIELD_AT_PERIOD && *text)
				snprintf(text, sizeof text, "%.5f", rng_between(r, 0.5, 50));
			if (!fields[f].essential && pick(r, 20) == 0)
				snprintf(text, sizeof text, "%s", "about 5");
			break;
		}
		append_cell(t, f, text);
	}
	append(t, "\n");
}

/* --- the way round --- */

static void complain(void *ctx, const struct import_message *m)
{
	(void)ctx;
	if (!m->warning)
		check_fail("%ld:%ld: %s: %s (%s)", m->line, m->column, m->field, m->text, m->got);
}

static void take(struct store *s, const struct text *t, const char *want)
{
	struct import_report report;
	struct err e = {0};
	const struct import_options o = {.change = change};
	char got[64];
	if (import_targets(s, t->at, t->used, &o, &report, complain, NULL, &e) != ST_OK)
		check_fail("%s", e.text);
	snprintf(got, sizeof got, "%ld %ld %ld %ld %ld", report.read, report.added, report.changed,
		 report.same, report.refused);
	assert_string_equal(got, want);
}

static struct store *memory_store(void)
{
	struct store *s;
	struct err e;
	assert_int_equal(store_open(NULL, STORE_MEMORY, &s, &e), ST_OK);
	return s;
}

static void give(struct store *s, struct text *t)
{
	struct target_list list;
	struct err e;
	assert_int_equal(targets_load(s, &list, &e), ST_OK);
	append_header(t);
	for (size_t i = 0; i < list.n; i++) {
		struct field_texts texts;
		char *block;
		assert_int_equal(target_texts(s, list.t[i].id, &texts, &block, &e), ST_OK);
		for (int f = 0; f < FIELD_COUNT; f++)
			append_cell(t, f, texts.text[f]);
		append(t, "\n");
		free(block);
	}
	target_list_free(&list);
}

static void test_round(void **state)
{
	enum { TURNS = 20, ROWS = 50 };
	struct rng r = rng_open("csv round trip");
	(void)state;
	for (int turn = 0; turn < TURNS; turn++) {
		struct text in = {0}, out = {0}, again = {0};
		append_header(&in);
		for (int i = 0; i < ROWS; i++)
			random_row(&r, i, &in);
		struct store *s = memory_store(), *other = memory_store();
		take(s, &in, "50 50 0 0 0");
		take(s, &in, "50 0 0 50 0");
		give(s, &out);
		take(s, &out, "50 0 0 50 0");
		take(other, &out, "50 50 0 0 0");
		give(other, &again);
		if (strcmp(out.at, again.at) != 0)
			check_fail("turn %d: not the same bytes:\n%s\n%s", turn, out.at, again.at);
		free(in.at);
		free(out.at);
		free(again.at);
		store_close(s);
		store_close(other);
	}
}

/* --- single cells --- */

static void test_cells(void **state)
{
	static const struct {
		const char *text;
		bool is_text;
		const char *cell;
	} rows[] = {
	    {"plain", true, "plain"}, {"", true, ""},
	    {"=A1", true, "'=A1"},    {"+1", true, "'+1"},
	    {"-1", true, "'-1"},      {"@x", true, "'@x"},
	    {"'=A1", true, "''=A1"},			       /* so that its own apostrophe comes back */
	    {"'x", true, "'x"},	      {"-1.5", false, "-1.5"}, /* a number stays a number */
	    {"a,b", true, "\"a,b\""}, {"=a,\"b\"", true, "\"'=a,\"\"b\"\"\""},
	    {"a;b", true, "\"a;b\""}, {"#1", true, "\"#1\""},
	    {" a", true, "\" a\""},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char cell[32], small[4];
		size_t n = csv_cell_write(rows[i].text, rows[i].is_text, cell, sizeof cell);
		assert_string_equal(cell, rows[i].cell);
		assert_int_equal(n, strlen(rows[i].cell));
		assert_int_equal(csv_cell_write(rows[i].text, rows[i].is_text, small, sizeof small), n);
		assert_int_equal(strlen(small), n < 3 ? n : 3);
	}
	assert_string_equal(csv_cell_plain("'=A1"), "=A1");
	assert_string_equal(csv_cell_plain("''=A1"), "'=A1");
	assert_string_equal(csv_cell_plain("'x"), "'x");
	assert_string_equal(csv_cell_plain("="), "=");
}

/* Any text: written, read and stripped it is the same text. */
static void test_any_cell(void **state)
{
	struct rng r = rng_open("cells");
	(void)state;
	for (int turn = 0; turn < 5000; turn++) {
		char text[300], cell[700];
		struct csv *csv;
		struct csv_row row;
		struct err e;
		long line, column;
		random_text(&r, false, text, sizeof text);
		size_t n = (size_t)snprintf(cell, sizeof cell, "a,b\nx,");
		n += csv_cell_write(text, true, cell + n, sizeof cell - n);
		assert_int_equal(csv_open(cell, n, &csv, &line, &column, &e), ST_OK);
		assert_int_equal(csv_next(csv, &row, &line, &column, &e), 1);
		assert_int_equal(row.n, 2);
		if (strcmp(csv_cell_plain(row.cell[1].text), text) != 0)
			check_fail("\"%s\" became \"%s\"", text, row.cell[1].text);
		csv_close(csv);
	}
}

/* Every text of a row comes out as it went in, positions in hours aside. */
static void test_verbatim(void **state)
{
	enum { ROWS = 300 };
	struct rng r = rng_open("texts verbatim");
	(void)state;
	struct store *s = memory_store();
	struct err e = {0};
	assert_int_equal(store_begin(s, &change, &e), ST_OK);
	for (int i = 0; i < ROWS; i++) {
		struct field_texts in, out;
		char room[FIELD_COUNT][64], *block;
		enum put_result result;
		for (int f = 0; f < FIELD_COUNT; f++) {
			room[f][0] = '\0';
			in.text[f] = room[f];
			if (fields[f].kind == FIELD_NUMBER && !fields[f].essential)
				random_number(&r, fields[f].min, fmin(fields[f].max, fields[f].min + 50),
					      room[f], NUMBER_TEXT_MAX);
		}
		snprintf(room[FIELD_AT_NAME], 64, "Tern %d b", i);
		snprintf(room[FIELD_AT_RA], 64, "%.8f0", rng_between(&r, 0, 359));
		random_number(&r, -89, 89, room[FIELD_AT_DEC], NUMBER_TEXT_MAX);
		snprintf(room[FIELD_AT_T0], 64, "%.12f0", rng_between(&r, 2440000, 2480000));
		snprintf(room[FIELD_AT_PERIOD], 64, "%.9f", rng_between(&r, 1, 50));
		if (target_put(s, &in, false, &result, &e) != ST_OK)
			check_fail("row %d: %s", i, e.text);
		assert_int_equal(target_texts(s, i + 1, &out, &block, &e), ST_OK);
		for (int f = 0; f < FIELD_COUNT; f++)
			if (strcmp(in.text[f], out.text[f]) != 0)
				check_fail("%s: \"%s\" became \"%s\"", fields[f].name, in.text[f],
					   out.text[f]);
		free(block);
	}
	store_close(s);
}

static void test_epochs(void **state)
{
	enum { ROWS = 5000 };
	struct rng r = rng_open("epochs");
	struct jd2 *want = malloc(ROWS * sizeof *want);
	(void)state;
	assert_non_null(want);
	struct store *s = memory_store();
	struct err e = {0};
	struct field_texts texts;
	for (int f = 0; f < FIELD_COUNT; f++)
		texts.text[f] = "";
	texts.text[FIELD_AT_RA] = "10";
	texts.text[FIELD_AT_DEC] = "20";
	texts.text[FIELD_AT_PERIOD] = "3";
	assert_int_equal(store_begin(s, &change, &e), ST_OK);
	for (int i = 0; i < ROWS; i++) {
		char name[32], t0[64], digits[40];
		bool offset = i % 2 == 1;
		enum put_result result;
		double frac = rng_unit(&r);
		snprintf(name, sizeof name, "Tern %05d b", i); /* by key and by number in one order */
		snprintf(digits, sizeof digits, "%.*f", 1 + pick(&r, 15), frac < 0.9 ? frac : 0.5);
		snprintf(t0, sizeof t0, "%d%s", (offset ? -10000 : 2440000) + pick(&r, 40000), digits + 1);
		texts.text[FIELD_AT_NAME] = name;
		texts.text[FIELD_AT_T0] = t0;
		texts.text[FIELD_AT_SCALE] = offset ? "BJD_TDB-2457000" : "BJD_TDB";
		assert_int_equal(number_parse_jd2(t0, strlen(t0), &want[i], NULL, &e), ST_OK);
		if (target_put(s, &texts, false, &result, &e) != ST_OK)
			check_fail("%s: %s", t0, e.text);
	}
	assert_int_equal(store_commit(s, &e), ST_OK);
	struct target_list list;
	assert_int_equal(targets_load(s, &list, &e), ST_OK);
	assert_int_equal(list.n, ROWS);
	for (int i = 0; i < ROWS; i++) {
		/* bit for bit: a tolerance of nothing */
		check_close("day", list.t[i].t0.day, want[i].day, 0.0);
		check_close("fraction", list.t[i].t0.frac, want[i].frac, 0.0);
		assert_true(list.t[i].t0.frac >= 0.0 && list.t[i].t0.frac < 1.0);
	}
	target_list_free(&list);
	store_close(s);
	free(want);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_cells),    cmocka_unit_test(test_any_cell), cmocka_unit_test(test_round),
	    cmocka_unit_test(test_verbatim), cmocka_unit_test(test_epochs),
	};
	return cmocka_run_group_tests_name("csv_roundtrip", tests, NULL, NULL);
}
