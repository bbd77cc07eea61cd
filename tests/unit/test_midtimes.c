/* SPDX-License-Identifier: MIT */
#include "tests/support/check.h"

#include "db/import.h"
#include "db/midtimes.h"
#include "db/store_parts.h"
#include "db/targets.h"

#include <math.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const struct change change = {"2026-04-22T03:00:00Z", "ann", "midtime add"};

/* --- tables --- */

/* What was said: `line:column:field` of each, `W` behind warnings, blank between; the texts of the last. */
struct said {
	char places[512], last[1024];
};

static void note(void *ctx, const struct import_message *m)
{
	struct said *said = ctx;
	size_t used = strlen(said->places);
	snprintf(said->places + used, sizeof said->places - used, "%s%ld:%ld:%s%s", used ? " " : "", m->line,
		 m->column, m->field, m->warning ? "W" : "");
	snprintf(said->last, sizeof said->last, "%s|%s|%s", m->text, m->got, m->expected);
}

static enum status read_table(const char *data, const char *scale, struct midtime_table *t, struct said *said,
			      struct err *e)
{
	size_t n = strlen(data);
	char *block = malloc(n ? n : 1); /* exact, for the sanitizer */
	assert_non_null(block);
	memcpy(block, data, n);
	memset(said, 0, sizeof *said);
	memset(e, 0, sizeof *e);
	enum status st = midtime_table_read(block, n, scale, t, note, said, e);
	free(block);
	return st;
}

#define HEAD "epoch,mid_jd,err_d,time_scale,kind\n"

static void test_bad_tables(void **state)
{
	static const struct {
		const char *data, *places, *text, *expected;
	} rows[] = {
	    {HEAD "1,2459000.5,0.001,BJD_TBD,\n", "2:19:time_scale", "not a time scale",
	     "one of UTC, JD_UTC"},
	    {HEAD "1.3,2459000.5,0.001,BJD_TDB,\n", "2:1:epoch", "neither a whole epoch nor E + 0.5",
	     "a whole number, or E + 0.5"},
	    {HEAD "1.5,2459000.5,0.001,BJD_TDB,transit\n", "2:1:epoch", "a half epoch is an occultation's",
	     "a whole number"},
	    {HEAD "1,0.001,2459000.5,BJD_TDB,\n", "2:9:err_d", "are the columns swapped?", ""},
	    {HEAD "1,0.001,9000.5,BJD_TDB-2450000,\n", "2:9:err_d", "are the columns swapped?", ""},
	    {HEAD "1,2459000.5,0,BJD_TDB,\n", "2:13:err_d", "an error of zero", "days above 0"},
	    {HEAD "1,2459000.5,-0.001,BJD_TDB,\n", "2:13:err_d", "not an error of a mid-time", "above 0"},
	    {HEAD "1,2459000.5,101,BJD_TDB,\n", "2:13:err_d", "not an error of a mid-time", "at most 100 d"},
	    {HEAD "1,2459000.5,,BJD_TDB,\n", "2:13:err_d", "no error", "days above 0"},
	    {HEAD "1,2433282.4,0.001,BJD_TDB,\n", "2:3:mid_jd", "not a date of 1950 to 2100", "1950 to 2100"},
	    {HEAD "1,2488434.5,0.001,BJD_TDB,\n", "2:3:mid_jd", "not a date of 1950 to 2100", "1950 to 2100"},
	    {HEAD "1,59000.5,0.001,BJD_TDB,\n", "2:3:mid_jd", "less an offset?", "1950 to 2100"},
	    {HEAD "1,2459000.5,0.001,BJD_TDB-2450000,\n", "2:3:mid_jd", "not a date of 1950 to 2100", ""},
	    {HEAD "1,24590oo.5,0.001,BJD_TDB,\n", "2:3:mid_jd", "unexpected character", "a number"},
	    {HEAD "1,,0.001,BJD_TDB,\n", "2:3:mid_jd", "no mid-time", "a Julian date"},
	    {HEAD "1,2459000.5,1e,BJD_TDB,\n", "2:13:err_d", "", "a number"},
	    {HEAD "one,2459000.5,0.001,BJD_TDB,\n", "2:1:epoch", "", "a number"},
	    {HEAD "3e9,2459000.5,0.001,BJD_TDB,\n", "2:1:epoch", "no such epoch", "2000000000"},
	    {HEAD "1,2459000.5,0.001,BJD_TDB,eclipse\n", "2:27:kind", "unknown kind",
	     "transit or occultation"},
	    {HEAD "1,2459000.5\n", "2:1:", "fewer cells than the header names", "5 cells, not 2"},
	    {HEAD "1,2459000.5,0.001,BJD_TDB,,7\n", "2:1:", "more cells than the header names", "5 cells"},
	    {"mid_jd,err_d,used\n2459000.5,0.001,yes\n", "2:17:used", "not a yes or no", "1 or 0"},
	    {"mid_jd,err_d,mid_jd\n1,2,3\n", "1:14:mid_jd", "the column stands twice", ""},
	    {"epoch,err_d\n1,0.001\n", "1:1:mid_jd", "the table has no such column", "mid_jd, err_d"},
	    {"epoch,mid_jd\n1,2459000.5\n", "1:1:err_d", "the table has no such column", "mid_jd, err_d"},
	    {"1,2459000.5,0.001\n", "1:1:", "no header", ""},
	    {"", "1:1:", "empty", ""},
	    {"mid_jd,err_d\n\"2459000.5,0.001\n", "2:1:", "never closed", ""},
	    {"mid_jd,err_d,time_scale\n2024-05-01T25:00,0.001,UTC\n", "2:1:mid_jd", "", ""},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct midtime_table t;
		struct said said;
		struct err e;
		if (read_table(rows[i].data, "", &t, &said, &e) != ST_SYNTAX)
			check_fail("taken: %s", rows[i].data);
		if (strcmp(said.places, rows[i].places) != 0 || !strstr(said.last, rows[i].text) ||
		    !strstr(said.last, rows[i].expected))
			check_fail("%s: said at %s: %s", rows[i].data, said.places, said.last);
		if (!strstr(e.text, "nothing was stored"))
			check_fail("%s: sums up as %s", rows[i].data, e.text);
		assert_int_equal(t.n, 0);
		midtime_table_free(&t);
	}
}

/* Every bad row is named, in file order; the good ones between them don't save the table. */
static void test_all_faults(void **state)
{
	struct midtime_table t;
	struct said said;
	struct err e;
	(void)state;
	assert_int_equal(read_table(HEAD "1,2459000.5,0,BJD_TDB,\n2,2459001.5,1e-3,BJD_TDB,\nx,1,1,,\n", "",
				    &t, &said, &e),
			 ST_SYNTAX);
	assert_string_equal(said.places, "2:13:err_d 4:1:epoch");
	assert_int_equal(t.refused, 2);
	assert_string_equal(e.text, "nothing was stored: 2 of 3 rows refused");
	midtime_table_free(&t);
	/* a scale given beside the file has no place in it */
	assert_int_equal(read_table(HEAD, "BJD_TBD", &t, &said, &e), ST_SYNTAX);
	assert_string_equal(said.places, "");
}

static void test_good_table(void **state)
{
	static const struct {
		long epoch;
		bool has_epoch, used;
		enum event_kind kind;
		double mid_jd, offset_d;
		const char *text, *scale, *source;
	} want[] = {
	    {-3, true, true, KIND_TRANSIT, 2459000.123456, 0, "2459000.123456", "BJD_TDB", "Tern notes"},
	    {-4, true, true, KIND_OCCULTATION, 9000.25, 2450000, "9000.25", "HJD_UTC-2450000", ""},
	    {7, true, false, KIND_OCCULTATION, 2459020.5, 0, "2459020.5", "BJD_TDB", ""},
	    {0, false, true, KIND_TRANSIT, 2459030.5, 0, "2459030.5", "unknown:BJD", "a, \"b\""},
	    /* 2020-07-01T12:00 UTC is JD 2459032.0 (JD 2451545.0 is 2000-01-01T12:00, 7487 days before) */
	    {5, true, true, KIND_TRANSIT, 2459032.0, 0, "2020-07-01T12:00:00Z", "UTC", ""},
	};
	static const char data[] = "Epoch;MID_JD;err_d;time_scale;kind;source;used;seeing\n"
				   " -3 ; 2459000.123456 ;0.001;;;Tern notes;1;2\n"
				   "-3.5;9000.25;0.001;HJD_UTC-2450000;;;;\n"
				   "7;2459020.5;0.001;;Occultation;;0;\n"
				   ";2459030.5;0.001;unknown:BJD;transit;\"a, \"\"b\"\"\";;\n"
				   "# a comment\n"
				   "5.0;2020-07-01T12:00:00Z;0.001;UTC;;;;\n";
	struct midtime_table t;
	struct said said;
	struct err e;
	(void)state;
	if (read_table(data, "BJD_TDB", &t, &said, &e) != ST_OK)
		check_fail("%s at %s: %s", e.text, said.places, said.last);
	assert_string_equal(said.places, "1:48:W"); /* the unknown column */
	assert_int_equal(t.n, sizeof want / sizeof want[0]);
	for (size_t i = 0; i < t.n; i++) {
		const struct midtime_row *row = &t.row[i].row;
		assert_int_equal(t.row[i].has_epoch, want[i].has_epoch);
		assert_int_equal(row->epoch, want[i].epoch);
		assert_int_equal(row->kind, want[i].kind);
		assert_int_equal(row->used, want[i].used);
		assert_string_equal(row->mid_text, want[i].text);
		assert_string_equal(row->time_scale, want[i].scale);
		assert_string_equal(row->source, want[i].source);
		check_close("mid", jd2_value(row->mid), want[i].mid_jd, 1e-9);
		check_close("offset", row->standard.offset_d, want[i].offset_d, 0.0);
		check_close("error", row->err_d, 0.001, 0.0);
	}
	assert_int_equal(t.row[0].line, 2);
	assert_int_equal(t.row[0].column, 6);
	midtime_table_free(&t);
}

static void test_twice(void **state)
{
	struct midtime_table t;
	struct said said;
	struct err e;
	(void)state;
	assert_int_equal(read_table(HEAD "1,2459000.5,0.001,BJD_TDB,\n2,2459003.5,0.001,BJD_TDB,\n"
					 "1,2459000.50,1e-3,BJD_TDB,transit\n1,2459000.5,0.002,BJD_TDB,\n"
					 "1,2459000.5,0.001,BJD_UTC,\n",
				    "", &t, &said, &e),
			 ST_OK);
	assert_string_equal(said.places, "4:3:mid_jdW");
	assert_non_null(strstr(said.last, "the same as line 2"));
	assert_int_equal(t.n, 5);
	midtime_table_free(&t);
}

/* --- the store --- */

static void must(enum status st, const struct err *e)
{
	if (st != ST_OK)
		check_fail("status %d: %s", (int)st, e->text);
}

/* A store with one target, of id 1. */
static struct store *store_with_target(void)
{
	struct store *s;
	struct err e = {0};
	struct import_report report;
	static const char table[] =
	    "name,ra_deg,dec_deg,t0_jd,time_scale,period_d\nTern 1 b,10,20,2459000.5,BJD_TDB,3\n";
	const struct import_options o = {.change = change};
	must(store_open(NULL, STORE_MEMORY, &s, &e), &e);
	must(import_targets(s, table, strlen(table), &o, &report, NULL, NULL, &e), &e);
	return s;
}

static struct midtime_row row_of(long epoch, enum event_kind kind, const char *mid, const char *scale,
				 double err_d)
{
	struct midtime_row row = {.epoch = epoch,
				  .kind = kind,
				  .mid_text = mid,
				  .time_scale = scale,
				  .err_d = err_d,
				  .source = "own",
				  .used = true};
	double whole = floor(strtod(mid, NULL));
	row.mid = (struct jd2){whole, strtod(mid, NULL) - whole};
	return row;
}

static bool add(struct store *s, const struct midtime_row *row)
{
	struct err e = {0};
	bool added = false;
	must(store_begin(s, &change, &e), &e);
	must(midtime_add(s, 1, row, &added, &e), &e);
	must(store_commit(s, &e), &e);
	return added;
}

static struct midtime_list list_of(struct store *s)
{
	struct midtime_list list;
	struct err e = {0};
	must(midtimes_load(s, 1, &list, &e), &e);
	return list;
}

static void test_add_and_load(void **state)
{
	const struct midtime_row rows[] = {
	    row_of(2, KIND_OCCULTATION, "2459008.0", "BJD_TDB", 0.002),
	    row_of(2, KIND_TRANSIT, "2459006.5", "BJD_TDB", 0.001),
	    row_of(-1, KIND_TRANSIT, "2458997.5", "HJD_UTC", 0.001),
	    row_of(2, KIND_TRANSIT, "9006.4990", "BJD_TDB-2450000", 0.001), /* earlier, less an offset */
	};
	static const char *const order[] = {"2458997.5", "9006.4990", "2459006.5", "2459008.0"};
	(void)state;
	struct store *s = store_with_target();
	struct err e = {0};
	for (size_t i = 0; i < 4; i++)
		assert_true(add(s, &rows[i]));
	struct midtime_list list = list_of(s);
	assert_int_equal(list.n, 4);
	for (size_t i = 0; i < 4; i++)
		assert_string_equal(list.row[i].mid_text, order[i]);
	assert_string_equal(list.row[0].who, "ann");
	assert_string_equal(list.row[0].entered_utc, "2026-04-22T03:00:00Z");
	assert_string_equal(list.row[0].source, "own");
	assert_int_equal(list.row[0].standard.origin, ORIGIN_SUN);
	assert_int_equal(list.row[3].kind, KIND_OCCULTATION);
	check_close("fraction", list.row[1].mid.frac, 0.499, 1e-12);
	check_close("offset", list.row[1].standard.offset_d, 2450000.0, 0.0);
	midtime_list_free(&list);
	int64_t *ids;
	must(midtimes_load_all(s, &list, &ids, &e), &e);
	assert_int_equal(list.n, 4);
	assert_int_equal(ids[3], 1);
	free(ids);
	midtime_list_free(&list);
	must(midtimes_load(s, 77, &list, &e), &e);
	assert_int_equal(list.n, 0);
	midtime_list_free(&list);
	store_close(s);
}

static void test_stored_once(void **state)
{
	(void)state;
	const struct midtime_row first = row_of(2, KIND_TRANSIT, "2459006.5", "BJD_TDB", 0.001);
	const struct {
		struct midtime_row row;
		bool added;
	} rows[] = {
	    {row_of(2, KIND_TRANSIT, "2459006.50", "BJD_TDB", 0.001), false},
	    {row_of(2, KIND_TRANSIT, "9006.5", "BJD_TDB-2450000", 0.001), false}, /* the same moment */
	    {row_of(2, KIND_TRANSIT, "2459006.5", "BJD_UTC", 0.001), true},
	    {row_of(2, KIND_TRANSIT, "2459006.5", "BJD_TDB", 0.002), true},
	    {row_of(2, KIND_TRANSIT, "2459006.50001", "BJD_TDB", 0.001), true},
	    {row_of(2, KIND_OCCULTATION, "2459006.5", "BJD_TDB", 0.001), true},
	    {row_of(3, KIND_TRANSIT, "2459006.5", "BJD_TDB", 0.001), true},
	};
	struct store *s = store_with_target();
	assert_true(add(s, &first));
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
		if (add(s, &rows[i].row) != rows[i].added)
			check_fail("row %zu", i);
	struct midtime_list list = list_of(s);
	assert_int_equal(list.n, 6);
	midtime_list_free(&list);
	store_close(s);
}

static void test_marks(void **state)
{
	(void)state;
	const struct midtime_row rows[] = {row_of(2, KIND_TRANSIT, "2459006.5", "BJD_TDB", 0.001),
					   row_of(2, KIND_TRANSIT, "2459006.6", "BJD_TDB", 0.001),
					   row_of(2, KIND_OCCULTATION, "2459008.0", "BJD_TDB", 0.001)};
	struct store *s = store_with_target();
	struct err e = {0};
	long n;
	for (size_t i = 0; i < 3; i++)
		assert_true(add(s, &rows[i]));
	must(store_begin(s, &change, &e), &e);
	must(midtime_use(s, 1, 2, KIND_TRANSIT, false, &n, &e), &e);
	assert_int_equal(n, 2);
	must(midtime_use(s, 1, 2, KIND_TRANSIT, false, &n, &e), &e);
	assert_int_equal(n, 0);
	assert_int_equal(midtime_use(s, 1, 3, KIND_TRANSIT, false, &n, &e), ST_ABSENT);
	must(store_commit(s, &e), &e);
	struct midtime_list list = list_of(s);
	assert_int_equal(list.n, 3);
	assert_false(list.row[0].used);
	assert_false(list.row[1].used);
	assert_true(list.row[2].used);
	midtime_list_free(&list);
	must(store_begin(s, &change, &e), &e);
	must(midtime_remove(s, 1, 2, KIND_TRANSIT, &n, &e), &e);
	assert_int_equal(n, 2);
	assert_int_equal(midtime_remove(s, 1, 2, KIND_TRANSIT, &n, &e), ST_ABSENT);
	assert_int_equal(midtime_use(s, 1, 2, KIND_TRANSIT, true, &n, &e), ST_ABSENT);
	must(store_commit(s, &e), &e);
	list = list_of(s);
	assert_int_equal(list.n, 1);
	midtime_list_free(&list);
	/* one that was removed comes back, used */
	assert_true(add(s, &rows[0]));
	list = list_of(s);
	assert_int_equal(list.n, 2);
	assert_true(list.row[0].used);
	midtime_list_free(&list);
	store_close(s);
}

static void test_refusals(void **state)
{
	(void)state;
	const struct {
		int64_t target;
		struct midtime_row row;
		enum status want;
	} rows[] = {
	    {2, row_of(2, KIND_TRANSIT, "2459006.5", "BJD_TDB", 0.001), ST_ABSENT},
	    {1, row_of(2, KIND_TRANSIT, "2459006.5", "BJD_TBD", 0.001), ST_SYNTAX},
	    {1, row_of(2, KIND_TRANSIT, "2459006.5", "BJD_TDB", 0.0), ST_RANGE},
	    {1, row_of(2, KIND_TRANSIT, "2459006.5", "BJD_TDB", (double)NAN), ST_RANGE},
	    {1, row_of(2, KIND_TRANSIT, "2429006.5", "BJD_TDB", 0.001), ST_RANGE},
	    {1, row_of(3000000000, KIND_TRANSIT, "2459006.5", "BJD_TDB", 0.001), ST_RANGE},
	};
	struct store *s = store_with_target();
	struct err e = {0};
	bool added = true;
	assert_int_equal(midtime_add(s, 1, &rows[0].row, &added, &e), ST_STORE); /* outside a change set */
	must(store_begin(s, &change, &e), &e);
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		enum status st = midtime_add(s, rows[i].target, &rows[i].row, &added, &e);
		if (st != rows[i].want || added)
			check_fail("row %zu: status %d: %s", i, (int)st, e.text);
	}
	must(store_commit(s, &e), &e);
	struct store_counts counts;
	must(store_count(s, &counts, &e), &e);
	assert_int_equal(counts.changes, 1); /* a set that changed nothing leaves none */
	store_close(s);
}

/* --- guards and damage --- */

static void sql(struct store *s, const char *text, int want)
{
	int rc = sqlite3_exec(s->db, text, NULL, NULL, NULL) & 0xFF;
	if (rc != want)
		check_fail("%s: %d, want %d: %s", text, rc, want, sqlite3_errmsg(s->db));
}

static void test_guards(void **state)
{
	static const char *const refused[] = {
	    "UPDATE midtime SET epoch = 3",
	    "DELETE FROM midtime",
	    "REPLACE INTO midtime SELECT * FROM midtime",
	    "DELETE FROM midtime_mark",
	    "UPDATE midtime_mark SET used = 2",
	    "UPDATE midtime_mark SET removed = NULL",
	    "UPDATE midtime_mark_old SET used = 0",
	    "DELETE FROM midtime_mark_old",
	    "INSERT INTO midtime_mark VALUES(99, 1, 0, 1, 1, 0)",
	    "INSERT INTO midtime VALUES(9, 77, 1, 'transit', 2459000, 0.5, 'x', '', 1, '', "
	    "'2026-04-22T03:00:00Z', 1, 1, 0)",
	    "INSERT INTO midtime VALUES(9, 1, 1, 'eclipse', 2459000, 0.5, 'x', '', 1, '', "
	    "'2026-04-22T03:00:00Z', 1, 1, 0)",
	    "INSERT INTO midtime VALUES(9, 1, 1, 'transit', 2459000, 1, 'x', '', 1, '', "
	    "'2026-04-22T03:00:00Z', 1, 1, 0)",
	    "INSERT INTO midtime VALUES(9, 1, 1, 'transit', 9e999, 0.5, 'x', '', 1, '', "
	    "'2026-04-22T03:00:00Z', 1, 1, 0)",
	    "INSERT INTO midtime VALUES(9, 1, 1, 'transit', 2459000, 0.5, 'x', '', 0, '', "
	    "'2026-04-22T03:00:00Z', 1, 1, 0)",
	    "INSERT INTO midtime VALUES(9, 1, 1, 'transit', 2459000, 0.5, '', '', 1, '', "
	    "'2026-04-22T03:00:00Z', 1, 1, 0)",
	};
	(void)state;
	struct store *s = store_with_target();
	struct err e = {0};
	const struct midtime_row row = row_of(2, KIND_TRANSIT, "2459006.5", "BJD_TDB", 0.001);
	long n;
	assert_true(add(s, &row));
	must(store_begin(s, &change, &e), &e);
	must(midtime_use(s, 1, 2, KIND_TRANSIT, false, &n, &e), &e);
	must(store_commit(s, &e), &e);
	for (size_t i = 0; i < sizeof refused / sizeof refused[0]; i++)
		sql(s, refused[i], SQLITE_CONSTRAINT);
	store_close(s);
}

static void note_fault(void *ctx, const char *line)
{
	snprintf(ctx, 512, "%s", line);
}

static int faults_of(struct store *s, char says[512])
{
	struct err e = {0};
	int faults = -1;
	says[0] = '\0';
	must(store_check(s, note_fault, says, &faults, &e), &e);
	return faults;
}

/* A mid-time whose bytes were changed by another hand is named, and in no list. */
static void test_damage(void **state)
{
	static const struct {
		const char *sql, *says;
	} rows[] = {
	    {"DROP TRIGGER midtime_no_update; UPDATE midtime SET mid_frac = 0.51", "table midtime, row 1"},
	    {"UPDATE midtime_mark SET used = 0", "table midtime_mark, row 1"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct store *s = store_with_target();
		char says[512];
		const struct midtime_row row = row_of(2, KIND_TRANSIT, "2459006.5", "BJD_TDB", 0.001);
		assert_true(add(s, &row));
		assert_int_equal(faults_of(s, says), 0);
		sql(s, rows[i].sql, SQLITE_OK);
		if (i == 0)
			sql(s,
			    "CREATE TRIGGER midtime_no_update BEFORE UPDATE ON midtime "
			    "BEGIN SELECT raise(ABORT, 'a mid-time is never changed'); END;",
			    SQLITE_OK);
		assert_int_equal(faults_of(s, says), 1);
		if (!strstr(says, rows[i].says))
			check_fail("%s: %s", rows[i].sql, says);
		struct midtime_list list = list_of(s);
		assert_int_equal(list.n, 0);
		assert_int_equal(list.n_bad, 1);
		assert_non_null(strstr(list.bad, "mid-time 1"));
		midtime_list_free(&list);
		store_close(s);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_bad_tables),	 cmocka_unit_test(test_all_faults),
	    cmocka_unit_test(test_good_table),	 cmocka_unit_test(test_twice),
	    cmocka_unit_test(test_add_and_load), cmocka_unit_test(test_stored_once),
	    cmocka_unit_test(test_marks),	 cmocka_unit_test(test_refusals),
	    cmocka_unit_test(test_guards),	 cmocka_unit_test(test_damage),
	};
	return cmocka_run_group_tests_name("midtimes", tests, NULL, NULL);
}
