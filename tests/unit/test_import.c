/* SPDX-License-Identifier: MIT */
#include "tests/support/check.h"

#include "db/import.h"
#include "db/targets.h"

#include <math.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const struct change change = {"2026-04-22T03:00:00Z", "test", "import"};

static struct store *memory_store(void)
{
	struct store *s;
	struct err e = {0};
	if (store_open(NULL, STORE_MEMORY, &s, &e) != ST_OK)
		check_fail("%s", e.text);
	return s;
}

/* What was said: `line:column:field` of each, `W` behind warnings, blank between. */
struct said {
	char places[1024], last[1024];
};

static void note(void *ctx, const struct import_message *m)
{
	struct said *said = ctx;
	size_t used = strlen(said->places);
	snprintf(said->places + used, sizeof said->places - used, "%s%ld:%ld:%s%s", used ? " " : "", m->line,
		 m->column, m->field, m->warning ? "W" : "");
	snprintf(said->last, sizeof said->last, "%s|%s|%s", m->text, m->got, m->expected);
}

static enum status import(struct store *s, const char *data, struct import_options o,
			  struct import_report *report, struct said *said, struct err *e)
{
	size_t n = strlen(data);
	char *block = malloc(n ? n : 1); /* exact, for the sanitizer */
	assert_non_null(block);
	memcpy(block, data, n);
	memset(said, 0, sizeof *said);
	memset(e, 0, sizeof *e);
	o.change = change;
	enum status st = import_targets(s, block, n, &o, report, note, said, e);
	free(block);
	return st;
}

/* `read new changed same refused` */
static void check_counts(const char *what, const struct import_report *r, const char *want)
{
	char got[64];
	snprintf(got, sizeof got, "%ld %ld %ld %ld %ld", r->read, r->added, r->changed, r->same, r->refused);
	if (strcmp(got, want) != 0)
		check_fail("%s: counts %s, want %s", what, got, want);
}

static long targets_in(struct store *s)
{
	struct store_counts counts;
	struct err e;
	assert_int_equal(store_count(s, &counts, &e), ST_OK);
	return counts.targets;
}

#define HEAD "name,ra_deg,dec_deg,t0_jd,time_scale,period_d\n"

/* --- a doubt beside other values says what would fit them --- */

static void test_doubt_expects(void **state)
{
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	assert_int_equal(
	    import(s, "name,ra_deg,dec_deg,k,a_rs,inc_deg,ecosw_err\nTern 1 b,10,20,0.1,10,71.62,\n",
		   (struct import_options){0}, &report, &said, &e),
	    ST_OK);
	assert_string_equal(said.places, "2:23:inc_degW");
	assert_string_equal(said.last,
			    "kept without effect: an impact parameter above 1 + k: no transit|71.62|"
			    "an inclination with which the planet crosses the star");
	assert_int_equal(import(s,
				"name,ra_deg,dec_deg,k,a_rs,inc_deg,ecosw_err\nTern 2 b,10,20,0.1,10,181,2\n",
				(struct import_options){0}, &report, &said, &e),
			 ST_OK);
	assert_string_equal(said.places, "2:23:inc_degW 2:27:ecosw_errW");
	assert_string_equal(said.last, "kept without effect: out of range|2|a number 0..1");
	store_close(s);
}

/* --- rows that are refused, one at a time, with the place of the fault --- */

static void test_bad_rows(void **state)
{
	static const struct {
		const char *data, *places, *counts, *says;
	} rows[] = {
	    {HEAD "Tern 1 b,10,20,2459000.5,BJD_TDB,3\n", "", "1 1 0 0 0", ""},
	    {HEAD ",10,20,2459000.5,BJD_TDB,3\n", "2:1:name", "1 0 0 0 1", "missing||1 to 80"},
	    {HEAD "a\x07,10,20,,,\n", "2:1:name", "1 0 0 0 1", "U+0007"},
	    {HEAD "a\xE2\x80\xAE"
		  "b,10,20,,,\n",
	     "2:1:name", "1 0 0 0 1", "U+202E"},
	    {HEAD "a\xFF,10,20,,,\n", "2:1:name", "1 0 0 0 1", "0xFF"},
	    {HEAD "Tern 1 b,,20,,,\n", "2:10:ra_deg", "1 0 0 0 1", "missing"},
	    {HEAD "Tern 1 b,10,,,,\n", "2:13:dec_deg", "1 0 0 0 1", "missing"},
	    {HEAD "Tern 1 b,360,20,,,\n", "2:10:ra_deg", "1 0 0 0 1", "|360|degrees 0..360"},
	    {HEAD "Tern 1 b,10,90.1,,,\n", "2:13:dec_deg", "1 0 0 0 1", "|90.1|degrees -90..90"},
	    {HEAD "Tern 1 b,10,20,59000.5,BJD_TDB,3\n", "2:16:t0_jd", "1 0 0 0 1", "MJD"},
	    {HEAD "Tern 1 b,10,20,2000.5,BJD_TDB,3\n", "2:16:t0_jd", "1 0 0 0 1", "BJD_TDB-2457000"},
	    {HEAD "Tern 1 b,10,20,nan,BJD_TDB,3\n", "2:16:t0_jd", "1 0 0 0 1", "|nan|a Julian date"},
	    {HEAD "Tern 1 b,10,20,2459000.5,ET,3\n", "2:26:time_scale", "1 0 0 0 1", "|ET|BJD_TDB"},
	    {HEAD "Tern 1 b,10,20,2459000.5,BJD_TDB,0\n", "2:34:period_d", "1 0 0 0 1",
	     "too small|0|a number above 0"},
	    {HEAD "Tern 1 b,10,20,2459000.5,BJD_TDB,-3\n", "2:34:period_d", "1 0 0 0 1", "|-3|"},
	    {HEAD "Tern 1 b,10,20,2459000.5,BJD_TDB,3d\n", "2:34:period_d", "1 0 0 0 1", "|3d|"},
	    {HEAD "Tern 1 b,10,20\n", "2:1:row", "1 0 0 0 1", "fewer cells than the header names|3|6 cells"},
	    {HEAD "Tern 1 b,10,20,,,,7\n", "2:1:row", "1 0 0 0 1",
	     "more cells than the header names|7|6 cells"},
	    {HEAD "Tern 1 b,10,20,,,,,,\n", "", "1 1 0 0 0", ""}, /* a tail of nothing */
	    {HEAD ",,,,,\n\n,,,,,\n", "", "0 0 0 0 0", ""},	  /* rows of nothing */
	    {HEAD "\"Tern\n1 b\",10,20,,,\n", "2:1:name", "1 0 0 0 1", "U+000A"},
	    /* what breaks a row breaks that row alone */
	    {HEAD "Tern\" 2 b,10,20,,,\nTern 3 b,10,20,,,\n", "2:5:row", "2 1 0 0 1",
	     "a quote inside a cell that doesn't begin with one (got \"Tern\" 2 b\", expected a cell in "
	     "quotes"},
	    {HEAD "\"Tern 2\" b,10,20,,,\nTern 3 b,10,20,,,\n", "2:9:row", "2 1 0 0 1",
	     "text after the closing quote of a cell (got \"\"Tern 2\" b,10,20,,,\", expected"},
	    /* what is hostile is shown as what it is */
	    {HEAD "Tern 1 b,1\x1b[31m0,20,,,\n", "2:10:ra_deg", "1 0 0 0 1", "|1\\x1b[31m0|"},
	    {HEAD "Tern 1 b,10,2\xE2\x80\xAE"
		  "0,,,\n",
	     "2:13:dec_deg", "1 0 0 0 1", "|2U+202E0|"},
	    {HEAD "Tern 1 b,x,20,,,\nTern 2 b,10,20,,,\nTern 3 b,10,x,,,\n", "2:10:ra_deg 4:13:dec_deg",
	     "3 1 0 0 2", ""},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct store *s = memory_store();
		struct import_report report;
		struct said said;
		struct err e;
		enum status st = import(s, rows[i].data, (struct import_options){0}, &report, &said, &e);
		if (st != ST_OK)
			check_fail("row %zu: %s", i, e.text);
		check_counts(rows[i].data, &report, rows[i].counts);
		if (strcmp(said.places, rows[i].places) != 0 || !strstr(said.last, rows[i].says))
			check_fail("row %zu: said %s (%s), want %s (%s)", i, said.places, said.last,
				   rows[i].places, rows[i].says);
		assert_int_equal(targets_in(s), report.added);
		store_close(s);
	}
}

/* A NUL byte, and a cell over 64 KiB: the rows around are taken. */
static void test_bad_bytes(void **state)
{
	static const char before[] = HEAD "Tern 1 b,10,20,,,\n", after[] = ",20,,,\nTern 3 b,10,20,,,\n";
	(void)state;
	for (int i = 0; i < 3; i++) {
		struct store *s = memory_store();
		struct import_report report;
		struct said said = {.places = ""};
		struct err e;
		char *data = malloc(200000);
		assert_non_null(data);
		size_t n =
		    (size_t)snprintf(data, 200000, "%s%s", before, i == 0 ? "Tern 2 b,1" : "Tern 2 b,");
		if (i == 0) {
			data[n++] = '\0';
		} else {
			if (i == 2)
				data[n++] = '"';
			memset(data + n, '7', 70000);
			n += 70000;
			if (i == 2)
				data[n++] = '"';
		}
		n += (size_t)snprintf(data + n, 200000 - n, "%s", after);
		const struct import_options o = {.change = change};
		assert_int_equal(import_targets(s, data, n, &o, &report, note, &said, &e), ST_OK);
		check_counts("bad bytes", &report, "3 2 0 0 1");
		assert_string_equal(said.places, i == 0 ? "3:11:row" : "3:10:row");
		assert_non_null(strstr(
		    said.last, i == 0 ? "a NUL byte can't stand in a table (got \"1\\x00\", expected text)"
				      : "this cell is too long (got \""));
		free(data);
		store_close(s);
	}
}

/* --- files that are refused as a whole --- */

static void test_bad_files(void **state)
{
	static const struct {
		const char *data, *places, *says;
	} rows[] = {
	    {"", "1:1:file", "the file is empty (got \"\", expected a UTF-8 text table)"},
	    {"name,dec_deg\nTern 1 b,20\n", "1:1:ra_deg", "the header has no such column|name|columns name"},
	    {"ra_deg,dec_deg\n10,20\n", "1:1:name", "no such column|ra_deg|"},
	    {"x\n1\n", "1:1:columnW 1:1:name", "no such column|x|"},
	    {"name,ra_deg,dec_deg,ra_deg\nTern 1 b,1,2,3\n", "1:21:ra_deg", "twice|ra_deg|each column once"},
	    {"Tern 1 b,10,20\n", "1:1:header",
	     "no header: the first row holds numbers (got \"Tern 1 b\", expected names of columns)"},
	    {HEAD "Tern 1 b,10,20,,,\nTern 2 b,\"10,20,,,\n", "3:10:row",
	     "the quote that opens this cell is never closed (got \"\"10,20,,,\", expected a closing quote)"},
	    {"na\x1bme\",x\n", "1:6:header", "(got \"na\\x1bme\"\", "},
	    {"\x1F\x8B\x08", "1:1:file",
	     "this is a gzip file: unpack it first (got \"\\x1f\\x8b\\x08\", expected a UTF-8 text table)"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct store *s = memory_store();
		struct import_report report;
		struct said said;
		struct err e;
		enum status st = import(s, rows[i].data, (struct import_options){0}, &report, &said, &e);
		/* the reason is said once, with its place */
		if (st != ST_SYNTAX || !strstr(said.last, rows[i].says) ||
		    strcmp(e.text, "nothing was stored") != 0)
			check_fail("row %zu: status %d: %s (%s)", i, (int)st, e.text, said.last);
		if (strcmp(said.places, rows[i].places) != 0)
			check_fail("row %zu: said %s (%s), want %s", i, said.places, said.last,
				   rows[i].places);
		assert_int_equal(targets_in(s), 0);
		assert_int_equal(report.added, 0);
		store_close(s);
	}
}

/* --- what is taken with a remark --- */

static void test_doubts(void **state)
{
	static const struct {
		const char *data, *places, *says;
	} rows[] = {
	    {"name,ra_deg,dec_deg,depth_ppt\nTern 1 b,10,20,-5\n", "2:16:depth_pptW", "out of range|-5|"},
	    {"name,ra_deg,dec_deg,depth_ppt\nTern 1 b,10,20,deep\n", "2:16:depth_pptW", "not a number|deep|"},
	    {"name,ra_deg,dec_deg,duration_h,period_d\nTern 1 b,10,20,72,3\n", "2:16:duration_hW",
	     "as long as the period"},
	    {"name,ra_deg,dec_deg,period_err_d,period_d\nTern 1 b,10,20,5,3\n", "2:16:period_err_dW",
	     "above the period|5|"},
	    {"name,ra_deg,dec_deg,t0_jd,period_d\nTern 1 b,10,20,2461000.5,0.0099\n", "2:26:period_dW",
	     "too short to be counted|0.0099|a period of at least 0.01 d"},
	    {"name,ra_deg,dec_deg,color\nTern 1 b,10,20,red\n", "1:21:columnW",
	     "unknown, left out|color|a column"},
	    {"name,ra_deg,dec_deg,perid_d\nTern 1 b,10,20,3\n", "1:21:columnW",
	     "unknown, left out|perid_d|did you mean period_d?"},
	    {"name,ra_deg,dec_deg,\x1b[2J\nTern 1 b,10,20,3\n", "1:21:columnW", "|\\x1b[2J|"},
	    {"name,ra_deg,dec_deg,\nTern 1 b,10,20,\n", "1:21:columnW", "unknown, left out||"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct store *s = memory_store();
		struct import_report report;
		struct said said;
		struct err e;
		assert_int_equal(import(s, rows[i].data, (struct import_options){0}, &report, &said, &e),
				 ST_OK);
		check_counts(rows[i].data, &report, "1 1 0 0 0");
		if (strcmp(said.places, rows[i].places) != 0 || !strstr(said.last, rows[i].says))
			check_fail("row %zu: said %s (%s)", i, said.places, said.last);
		assert_int_equal(report.doubtful, i < 5);
		assert_int_equal(report.too_short, i == 4);
		store_close(s);
	}
}

static void test_doubt_is_kept(void **state)
{
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	struct target_list list;
	struct field_texts texts;
	char *block;
	int depth = field_find("depth_ppt"), k = field_find("k");
	assert_int_equal(import(s, "name,ra_deg,dec_deg,depth_ppt,k\nTern 1 b,10,20,deep\x1B,0.10\n",
				(struct import_options){0}, &report, &said, &e),
			 ST_OK);
	assert_int_equal(targets_load(s, &list, &e), ST_OK);
	assert_true(isnan(list.t[0].depth_ppt));
	assert_true(list.doubts[0] == UINT64_C(1) << depth);
	assert_int_equal(target_texts(s, list.t[0].id, &texts, &block, &e), ST_OK);
	assert_string_equal(texts.text[depth], "deep?"); /* the control character is gone, the text is not */
	assert_string_equal(texts.text[k], "0.10");
	free(block);
	target_list_free(&list);
	/* taken out by hand, the text and its doubt are gone */
	const char *const nothing = "";
	assert_int_equal(store_begin(s, &change, &e), ST_OK);
	assert_int_equal(target_set(s, "Tern 1 b", &depth, &nothing, 1, &e), ST_OK);
	assert_int_equal(store_commit(s, &e), ST_OK);
	assert_int_equal(targets_load(s, &list, &e), ST_OK);
	assert_int_equal(list.doubts[0], 0);
	assert_int_equal(target_texts(s, list.t[0].id, &texts, &block, &e), ST_OK);
	assert_string_equal(texts.text[depth], "");
	free(block);
	target_list_free(&list);
	/* it comes again, as another text, and a good value takes the doubt away */
	assert_int_equal(import(s, "name,ra_deg,dec_deg,depth_ppt\nTern 1 b,10,20,deep\n",
				(struct import_options){0}, &report, &said, &e),
			 ST_OK);
	check_counts("doubtful", &report, "1 0 1 0 0");
	assert_int_equal(import(s, "name,ra_deg,dec_deg,depth_ppt\nTern 1 b,10,20,deeper\n",
				(struct import_options){0}, &report, &said, &e),
			 ST_OK);
	check_counts("another doubtful text", &report, "1 0 1 0 0");
	assert_int_equal(import(s, "name,ra_deg,dec_deg,depth_ppt\nTern 1 b,10,20,deeper\n",
				(struct import_options){0}, &report, &said, &e),
			 ST_OK);
	check_counts("the same doubtful text", &report, "1 0 0 1 0");
	assert_int_equal(import(s, "name,ra_deg,dec_deg,depth_ppt\nTern 1 b,10,20,8.5\n",
				(struct import_options){0}, &report, &said, &e),
			 ST_OK);
	check_counts("a good value", &report, "1 0 1 0 0");
	assert_int_equal(targets_load(s, &list, &e), ST_OK);
	check_close("depth", list.t[0].depth_ppt, 8.5, 0.0);
	check_close("k stays", list.t[0].k, 0.1, 0.0);
	assert_int_equal(list.doubts[0], 0);
	target_list_free(&list);
	store_close(s);
}

static void test_reports(void **state)
{
	static const char data[] = HEAD "Tern 1 b,10,20,2459000.5,BJD_TDB,3\n"
					"Tern 2 b,10,20,2459000.5,unknown:BJD,3\n"
					"Tern 3 b,10,20,2459000.5,,3\n"
					"Tern 4 b,10,20,2459000.5,JD,3\n"
					"Tern 5 b,10,20,,,3\n"
					"Tern 6 b,10,20,2459000.5,HJD_UTC,\n"
					"Tern 7 b,10,20,,,\n";
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	assert_int_equal(import(s, data, (struct import_options){0}, &report, &said, &e), ST_OK);
	check_counts("reports", &report, "7 7 0 0 0");
	assert_int_equal(report.scale_assumed, 3);
	assert_int_equal(report.no_ephemeris, 3);
	assert_int_equal(report.doubtful, 0);
	store_close(s);
}

/* --- shapes of tables --- */

static void test_shapes(void **state)
{
	static const char *const tables[] = {
	    "name,ra_deg,dec_deg,period_d\nTern 1 b,187.5,-12.5,3\n",
	    "period_d,dec_deg,ra_deg,name\n3,-12.5,187.5,Tern 1 b\n",
	    "name;ra_deg;dec_deg;period_d\nTern 1 b;187.5;-12.5;3\n",
	    "name\tra_deg\tdec_deg\tperiod_d\r\nTern 1 b\t187.5\t-12.5\t3\r\n",
	    "\xEF\xBB\xBFName, RA_deg, Dec_deg, period_d\n Tern 1 b , 187.5 , -12.5 , 3 \n",
	    "# a list\n# name,ra_deg,dec_deg,period_d\nTern 1 b,187.5,-12.5,3\n",
	    "# a list\nname,ra_deg,dec_deg,period_d\n# not this\nTern 1 b,12:30:00,-12:30:00,3\n",
	    "name,ra_deg,dec_deg,period_d\n\"Tern 1 b\",\"12 30 00.0\",\"-12d30m00s\",\"3\"\n",
	};
	(void)state;
	for (size_t i = 0; i < sizeof tables / sizeof tables[0]; i++) {
		struct store *s = memory_store();
		struct import_report report;
		struct said said;
		struct err e = {0};
		struct target_list list;
		if (import(s, tables[i], (struct import_options){0}, &report, &said, &e) != ST_OK)
			check_fail("table %zu: %s", i, e.text);
		assert_int_equal(report.added, 1);
		assert_string_equal(said.places, "");
		assert_int_equal(targets_load(s, &list, &e), ST_OK);
		assert_string_equal(list.t[0].name, "Tern 1 b");
		check_close("ra", list.t[0].ra_deg, 187.5, 0.0);
		check_close("dec", list.t[0].dec_deg, -12.5, 0.0);
		check_close("period", list.t[0].period_d, 3, 0.0);
		target_list_free(&list);
		store_close(s);
	}
}

/* --- apostrophes, notes --- */

static void test_texts(void **state)
{
	static const struct {
		const char *cell, *name, *note_cell, *note;
	} rows[] = {
	    {"'=A1", "=A1", "'+1", "+1"},
	    {"'@x", "@x", "'-x", "-x"},
	    {"'x", "'x", "'", "'"},
	    {"''=x", "'=x", "=x", "=x"},
	    {"Tern 1 b", "Tern 1 b",
	     "a\x1B[2J \xE2\x80\xAE"
	     "b",
	     "a[2J b"},
	    {"Tern 1 b", "Tern 1 b", "\"two\nlines\"", "two lines"},
	    {"Tern 1 b", "Tern 1 b", "\xE9", "\xEF\xBF\xBD"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct store *s = memory_store();
		struct import_report report;
		struct said said;
		struct err e;
		struct target_list list;
		char data[256];
		snprintf(data, sizeof data, "name,ra_deg,dec_deg,note\n%s,10,20,%s\n", rows[i].cell,
			 rows[i].note_cell);
		assert_int_equal(import(s, data, (struct import_options){0}, &report, &said, &e), ST_OK);
		assert_int_equal(report.added, 1);
		assert_int_equal(targets_load(s, &list, &e), ST_OK);
		assert_string_equal(list.t[0].name, rows[i].name);
		assert_string_equal(list.t[0].note, rows[i].note);
		target_list_free(&list);
		store_close(s);
	}
}

static void test_long_note(void **state)
{
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	struct target_list list;
	char data[4096] = "name,ra_deg,dec_deg,note\nTern 1 b,10,20,";
	for (int i = 0; i < 1200; i++)
		strncat(data, "\xCF\x80", sizeof data - strlen(data) - 1);
	assert_int_equal(import(s, data, (struct import_options){0}, &report, &said, &e), ST_OK);
	assert_string_equal(said.places, "2:16:noteW");
	assert_int_equal(targets_load(s, &list, &e), ST_OK);
	assert_int_equal(strlen(list.t[0].note), FIELD_NOTE_MAX); /* an even number: whole characters */
	target_list_free(&list);
	store_close(s);
}

/* --- known targets --- */

static const char first[] =
    HEAD "Tern 1 b,10.50,20,2459000.500,BJD_TDB,3.0\nTern 2 b,11,21,2459000.5,BJD_TDB,4\n";

static void test_same(void **state)
{
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	struct store_counts before, after;
	assert_int_equal(import(s, first, (struct import_options){0}, &report, &said, &e), ST_OK);
	check_counts("first", &report, "2 2 0 0 0");
	assert_int_equal(store_count(s, &before, &e), ST_OK);
	for (int adopt = 0; adopt < 2; adopt++) {
		assert_int_equal(
		    import(s, first, (struct import_options){.adopt = adopt}, &report, &said, &e), ST_OK);
		check_counts("again", &report, "2 0 0 2 0");
	}
	/* the same numbers in other digits, another spelling of the name */
	assert_int_equal(import(s, HEAD "TERN-1_B,10.5,+20,2459000.5,BJD_TDB,3\n", (struct import_options){0},
				&report, &said, &e),
			 ST_OK);
	check_counts("other digits", &report, "1 0 0 1 0");
	assert_int_equal(store_count(s, &after, &e), ST_OK);
	assert_int_equal(after.changes, before.changes); /* nothing changed: no change set, no version */
	assert_int_equal(after.ephemerides, before.ephemerides);
	store_close(s);
}

static void test_twice_in_a_file(void **state)
{
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	assert_int_equal(import(s,
				HEAD
				"Tern 1 b,10,20,2459000.5,BJD_TDB,3\nTern 1 b,10,20,2459000.5,BJD_TDB,3\n"
				"tern1b,10,20,2459003.5,BJD_TDB,3\n",
				(struct import_options){0}, &report, &said, &e),
			 ST_OK);
	check_counts("twice", &report, "3 1 1 1 0");
	assert_int_equal(targets_in(s), 1);
	store_close(s);
}

/* The period of the current ephemeris, and how many versions there are. */
static double current_period(struct store *s, const char *name, size_t *versions)
{
	struct target_list list;
	struct ephemeris_row *rows;
	struct err e;
	assert_int_equal(targets_load(s, &list, &e), ST_OK);
	long at = target_list_find(&list, name);
	assert_true(at >= 0);
	double period_d = list.t[at].period_d;
	assert_int_equal(ephemeris_versions(s, list.t[at].id, &rows, versions, &e), ST_OK);
	size_t current = 0;
	for (size_t i = 0; i < *versions; i++) {
		assert_int_equal(rows[i].version, (int)i + 1);
		assert_string_equal(rows[i].entered_utc, change.utc);
		assert_string_equal(rows[i].who, "test");
		if (rows[i].current)
			assert_true(rows[i].id == list.t[at].ephemeris_id);
		current += rows[i].current;
	}
	assert_int_equal(current, list.t[at].ephemeris_id ? 1 : 0);
	free(rows);
	target_list_free(&list);
	return period_d;
}

static void test_adopt(void **state)
{
	static const char other[] = HEAD "tern 1 b,10.5,20,2459010.5,BJD_TDB,3.5\n";
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	size_t versions;
	assert_int_equal(import(s, first, (struct import_options){0}, &report, &said, &e), ST_OK);
	check_close("first", current_period(s, "Tern 1 b", &versions), 3.0, 0.0);
	assert_int_equal(versions, 1);
	/* beside the old one */
	assert_int_equal(import(s, other, (struct import_options){0}, &report, &said, &e), ST_OK);
	check_counts("beside", &report, "1 0 1 0 0");
	check_close("beside", current_period(s, "Tern 1 b", &versions), 3.0, 0.0);
	assert_int_equal(versions, 2);
	/* already there */
	assert_int_equal(import(s, other, (struct import_options){0}, &report, &said, &e), ST_OK);
	check_counts("there", &report, "1 0 0 1 0");
	/* adopted: the pointer moves, no third version */
	assert_int_equal(import(s, other, (struct import_options){.adopt = true}, &report, &said, &e), ST_OK);
	check_counts("adopted", &report, "1 0 1 0 0");
	check_close("adopted", current_period(s, "Tern 1 b", &versions), 3.5, 0.0);
	assert_int_equal(versions, 2);
	/* and back */
	assert_int_equal(import(s, first, (struct import_options){.adopt = true}, &report, &said, &e), ST_OK);
	check_counts("back", &report, "2 0 1 1 0");
	check_close("back", current_period(s, "Tern 1 b", &versions), 3.0, 0.0);
	store_close(s);
}

static void test_first_ephemeris(void **state)
{
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	size_t versions;
	/* a position only, then a period only: where nothing can be computed, what comes is adopted */
	assert_int_equal(
	    import(s, HEAD "Tern 1 b,10,20,,,\n", (struct import_options){0}, &report, &said, &e), ST_OK);
	check_close("none", current_period(s, "Tern 1 b", &versions), (double)NAN, 0.0);
	assert_int_equal(versions, 0);
	assert_int_equal(
	    import(s, HEAD "Tern 1 b,10,20,,,3\n", (struct import_options){0}, &report, &said, &e), ST_OK);
	check_close("period", current_period(s, "Tern 1 b", &versions), 3.0, 0.0);
	assert_int_equal(import(s, HEAD "Tern 1 b,10,20,2459000.5,BJD_TDB,3.25\n", (struct import_options){0},
				&report, &said, &e),
			 ST_OK);
	check_close("whole", current_period(s, "Tern 1 b", &versions), 3.25, 0.0);
	assert_int_equal(versions, 2);
	/* a row without an ephemeris changes none */
	assert_int_equal(import(s, HEAD "Tern 1 b,10.5,20,,,\n", (struct import_options){.adopt = true},
				&report, &said, &e),
			 ST_OK);
	check_counts("position moved", &report, "1 0 1 0 0");
	check_close("kept", current_period(s, "Tern 1 b", &versions), 3.25, 0.0);
	assert_int_equal(versions, 2);
	store_close(s);
}

static void test_alias(void **state)
{
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	struct target_list list;
	assert_int_equal(import(s, first, (struct import_options){0}, &report, &said, &e), ST_OK);
	assert_int_equal(store_begin(s, &change, &e), ST_OK);
	assert_int_equal(target_alias_add(s, "Tern 1 b", "Gull 7 b", &e), ST_OK);
	assert_int_equal(target_alias_add(s, "Tern 1 b", "gull-7b", &e), ST_OK); /* the same one */
	assert_int_equal(target_alias_add(s, "Tern 2 b", "Gull 7 b", &e), ST_CONFLICT);
	assert_int_equal(target_alias_add(s, "Tern 2 b", "Tern 1 b", &e), ST_CONFLICT);
	assert_int_equal(target_alias_add(s, "Tern 9 b", "Gull 8 b", &e), ST_ABSENT);
	assert_int_equal(target_alias_add(s, "Tern 2 b", "a\x07", &e), ST_SYNTAX);
	assert_int_equal(store_commit(s, &e), ST_OK);
	assert_int_equal(import(s, HEAD "GULL 7b,10.5,20,2459000.5,BJD_TDB,3\n", (struct import_options){0},
				&report, &said, &e),
			 ST_OK);
	check_counts("by alias", &report, "1 0 0 1 0");
	assert_int_equal(targets_load(s, &list, &e), ST_OK);
	assert_int_equal(list.n, 2);
	assert_int_equal(target_list_find(&list, "gull 7 B"), target_list_find(&list, "Tern 1 b"));
	assert_string_equal(list.t[target_list_find(&list, "gull7b")].name, "Tern 1 b");
	assert_int_equal(target_list_find(&list, "gull 8 b"), -1);
	target_list_free(&list);
	store_close(s);
}

static void test_removed_comes_back(void **state)
{
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	size_t versions;
	assert_int_equal(import(s, first, (struct import_options){0}, &report, &said, &e), ST_OK);
	assert_int_equal(store_begin(s, &change, &e), ST_OK);
	assert_int_equal(target_remove(s, "tern 1b", &e), ST_OK);
	assert_int_equal(target_remove(s, "tern 1b", &e), ST_ABSENT);
	assert_int_equal(store_commit(s, &e), ST_OK);
	assert_int_equal(targets_in(s), 1);
	assert_int_equal(import(s, HEAD "Tern 1 b,10.5,20,2459020.5,BJD_TDB,3.75\n",
				(struct import_options){0}, &report, &said, &e),
			 ST_OK);
	check_counts("back", &report, "1 1 0 0 0");
	check_close("as the row has it", current_period(s, "Tern 1 b", &versions), 3.75, 0.0);
	assert_int_equal(versions, 2);
	/* the very same row brings it back too */
	assert_int_equal(store_begin(s, &change, &e), ST_OK);
	assert_int_equal(target_remove(s, "tern 2b", &e), ST_OK);
	assert_int_equal(store_commit(s, &e), ST_OK);
	assert_int_equal(targets_in(s), 1);
	assert_int_equal(import(s, first, (struct import_options){0}, &report, &said, &e), ST_OK);
	check_counts("the same row", &report, "2 1 0 1 0");
	assert_int_equal(targets_in(s), 2);
	store_close(s);
}

/* --- single fields --- */

static void test_target_set(void **state)
{
	static const struct {
		const char *field, *text;
		enum status want;
	} rows[] = {
	    {"mag", "11.20", ST_OK},
	    {"mag", "", ST_OK},
	    {"period_d", "3.250", ST_OK},
	    {"ra_deg", "12:30:00", ST_OK},
	    {"ra_deg", "", ST_SYNTAX},
	    {"period_d", "-1", ST_RANGE},
	    {"name", "Tern 2 b", ST_CONFLICT},
	    {"name", "Tern 1 c", ST_OK},
	    {"note", "'; DROP TABLE target;--", ST_OK},
	    {"time_scale", "ET", ST_SYNTAX},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct store *s = memory_store();
		struct import_report report;
		struct said said;
		struct err e;
		assert_int_equal(import(s, first, (struct import_options){0}, &report, &said, &e), ST_OK);
		const int f = field_find(rows[i].field);
		assert_int_equal(store_begin(s, &change, &e), ST_OK);
		enum status st = target_set(s, "tern-1-b", &f, &rows[i].text, 1, &e);
		if (st != rows[i].want)
			check_fail("%s=%s: status %d: %s", rows[i].field, rows[i].text, (int)st, e.text);
		if (st != ST_OK) {
			store_rollback(s);
			store_close(s);
			continue;
		}
		assert_int_equal(store_commit(s, &e), ST_OK);
		struct target_list list;
		struct field_texts texts;
		char *block;
		size_t versions;
		assert_int_equal(targets_load(s, &list, &e), ST_OK);
		long at = target_list_find(&list, f == FIELD_AT_NAME ? rows[i].text : "Tern 1 b");
		assert_true(at >= 0);
		assert_int_equal(target_texts(s, list.t[at].id, &texts, &block, &e), ST_OK);
		/* a position goes out in degrees */
		assert_string_equal(texts.text[f], f == FIELD_AT_RA ? "187.5" : rows[i].text);
		assert_string_equal(texts.text[FIELD_AT_T0], "2459000.500");
		(void)current_period(s, list.t[at].name, &versions);
		assert_int_equal(versions, fields[f].home == HOME_EPHEMERIS ? 2 : 1);
		free(block);
		target_list_free(&list);
		store_close(s);
	}
}

static void test_set_absent(void **state)
{
	const int f = FIELD_AT_PERIOD;
	const char *const text = "3";
	struct err e;
	(void)state;
	struct store *s = memory_store();
	assert_int_equal(store_begin(s, &change, &e), ST_OK);
	assert_int_equal(target_set(s, "Tern 9 b", &f, &text, 1, &e), ST_ABSENT);
	assert_non_null(strstr(e.text, "Tern 9 b"));
	store_rollback(s);
	store_close(s);
}

/* A duration that was fine becomes doubtful when the ephemeris under it changes, and the other way round. */
static void test_doubt_follows_ephemeris(void **state)
{
	static const struct {
		const char *period;
		bool doubt;
	} rows[] = {{"3", false}, {"0.1", true}, {"2", false}};
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	assert_int_equal(import(s, "name,ra_deg,dec_deg,duration_h\nTern 1 b,10,20,3.50\n",
				(struct import_options){0}, &report, &said, &e),
			 ST_OK);
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char data[128];
		struct target_list list;
		struct field_texts texts;
		char *block;
		snprintf(data, sizeof data, HEAD "Tern 1 b,10,20,2459000.5,BJD_TDB,%s\n", rows[i].period);
		assert_int_equal(import(s, data, (struct import_options){.adopt = true}, &report, &said, &e),
				 ST_OK);
		assert_int_equal(targets_load(s, &list, &e), ST_OK);
		assert_int_equal(list.doubts[0] >> FIELD_AT_DURATION & 1, rows[i].doubt);
		check_close("duration", list.t[0].duration_h, rows[i].doubt ? (double)NAN : 3.5, 0.0);
		assert_int_equal(target_texts(s, list.t[0].id, &texts, &block, &e), ST_OK);
		assert_string_equal(texts.text[FIELD_AT_DURATION], "3.50");
		free(block);
		target_list_free(&list);
	}
	store_close(s);
}

/* --- all or nothing --- */

static void test_strict(void **state)
{
	static const char data[] = HEAD "Tern 1 b,10,20,,,\nTern 2 b,x,20,,,\nTern 3 b,10,20,,,\n";
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	assert_int_equal(import(s, data, (struct import_options){.strict = true}, &report, &said, &e),
			 ST_SYNTAX);
	check_counts("strict", &report, "3 0 0 0 1");
	assert_string_equal(said.places, "3:10:ra_deg");
	assert_non_null(strstr(e.text, "1 of 3"));
	assert_int_equal(targets_in(s), 0);
	assert_int_equal(import(s, data, (struct import_options){0}, &report, &said, &e), ST_OK);
	check_counts("not strict", &report, "3 2 0 0 1");
	assert_int_equal(targets_in(s), 2);
	store_close(s);
}

static void test_dry_run(void **state)
{
	(void)state;
	struct store *s = memory_store();
	struct import_report report;
	struct said said;
	struct err e;
	struct store_counts counts;
	assert_int_equal(import(NULL, first, (struct import_options){.dry_run = true}, &report, &said, &e),
			 ST_OK);
	check_counts("no store", &report, "2 2 0 0 0");
	assert_int_equal(import(NULL, first, (struct import_options){0}, &report, &said, &e), ST_STORE);
	assert_int_equal(import(s, first, (struct import_options){.dry_run = true}, &report, &said, &e),
			 ST_OK);
	check_counts("a trial", &report, "2 2 0 0 0");
	assert_int_equal(store_count(s, &counts, &e), ST_OK);
	assert_int_equal(counts.targets + counts.changes, 0);
	assert_int_equal(import(s, first, (struct import_options){0}, &report, &said, &e), ST_OK);
	assert_int_equal(
	    import(s, HEAD "Tern 1 b,10.5,20,2459000.5,BJD_TDB,3\nTern 2 b,12,21,,,\nTern 3 b,1,2,,,\n",
		   (struct import_options){.dry_run = true}, &report, &said, &e),
	    ST_OK);
	check_counts("against what is there", &report, "3 1 1 1 0");
	assert_int_equal(targets_in(s), 2);
	store_close(s);
}

/* Any beginning of a good file: taken or refused, never half a row, never a crash. */
static void test_prefixes(void **state)
{
	static const char data[] = "# list\n" HEAD "\"Tern 1 b\",10.5,20,2459000.5,BJD_TDB,3.25\n"
				   "Tern 2 b,\"11\",21:00:00,2459000.5,\"BJD\",4\n";
	(void)state;
	for (size_t n = 0; n < sizeof data; n++) {
		struct store *s = memory_store();
		struct import_report report;
		struct said said;
		struct err e;
		char part[sizeof data];
		memcpy(part, data, n);
		part[n] = '\0';
		enum status st = import(s, part, (struct import_options){0}, &report, &said, &e);
		assert_true(st == ST_OK || st == ST_SYNTAX);
		assert_int_equal(targets_in(s), report.added);
		assert_int_equal(report.read, st == ST_OK ? report.added + report.refused : report.read);
		store_close(s);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_doubt_expects),
	    cmocka_unit_test(test_bad_rows),
	    cmocka_unit_test(test_bad_bytes),
	    cmocka_unit_test(test_bad_files),
	    cmocka_unit_test(test_doubts),
	    cmocka_unit_test(test_doubt_is_kept),
	    cmocka_unit_test(test_reports),
	    cmocka_unit_test(test_shapes),
	    cmocka_unit_test(test_texts),
	    cmocka_unit_test(test_long_note),
	    cmocka_unit_test(test_same),
	    cmocka_unit_test(test_twice_in_a_file),
	    cmocka_unit_test(test_adopt),
	    cmocka_unit_test(test_first_ephemeris),
	    cmocka_unit_test(test_alias),
	    cmocka_unit_test(test_removed_comes_back),
	    cmocka_unit_test(test_target_set),
	    cmocka_unit_test(test_set_absent),
	    cmocka_unit_test(test_doubt_follows_ephemeris),
	    cmocka_unit_test(test_strict),
	    cmocka_unit_test(test_dry_run),
	    cmocka_unit_test(test_prefixes),
	};
	return cmocka_run_group_tests_name("import", tests, NULL, NULL);
}
