/* SPDX-License-Identifier: MIT
 * The formats of a plan, from a plan put together by hand. */
#include "tui/sheets/plan_words.h"

#include "db/read_csv.h"
#include "db/text_clean.h"
#include "tests/support/check.h"
#include "tests/support/plan_fixture.h"
#include "tui/parts/columns.h"
#include "tui/parts/text_width.h"

#include <stdlib.h>
#include <string.h>

/* What a writer writes into memory. */
struct memory {
	FILE *file;
	char *text;
	size_t n;
};

static struct memory *memory_open(void)
{
	struct memory *m = calloc(1, sizeof *m);
	if (!m || !(m->file = open_memstream(&m->text, &m->n)))
		check_fail("no memory");
	return m;
}

static const char *memory_text(struct memory *m)
{
	fflush(m->file);
	return m->text;
}

static void memory_close(struct memory *m)
{
	fclose(m->file);
	free(m->text);
	free(m);
}

static char *changed_lines[] = {(char *)"Tern 18 b moved by 3 min: version 3 adopted",
				(char *)"new: Tern 40 b"};
static const struct sheet_changes changed = {.since = "edition 2", .line = changed_lines, .n = 2};

/* Occurrences of a piece in a text. */
static int count(const char *text, const char *piece)
{
	int n = 0;
	for (const char *at = text; (at = strstr(at, piece)); at += strlen(piece))
		n++;
	return n;
}

/* Keys of a JSON object in their order: those that stand at the beginning of a line behind `depth` pairs of
 * blanks. */
static void assert_keys(const char *text, int depth, const char *const want[], size_t n)
{
	size_t at = 0;
	for (const char *line = text; line && at < n;
	     line = strchr(line, '\n'), line = line ? line + 1 : NULL) {
		size_t blanks = strspn(line, " ");
		if (blanks != (size_t)(2 * depth) || line[blanks] != '"')
			continue;
		size_t length = strcspn(line + blanks + 1, "\"");
		if (strlen(want[at]) != length || strncmp(line + blanks + 1, want[at], length) != 0)
			check_fail("key %zu is %.*s, expected %s", at, (int)length, line + blanks + 1,
				   want[at]);
		at++;
	}
	if (at < n)
		check_fail("no key %s", want[at]);
}

/* --- times --- */

static void times_say_which_clock_and_date(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct plan_fixture *bare = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, false);
	char text[SHEET_TIME_BYTES];
	/* by hand: 2026-04-23 is a Thursday, Denver is six hours behind UTC then */
	const struct utc t = {.mjd = FIXTURE_EVENING_MJD + 1, .sod_s = 4 * 3600.0 + 40 * 60.0 - 29.0};
	sheet_local(&f->view, t, true, text);
	assert_string_equal(text, "Wed 22 Apr 2026 22:40 MDT");
	sheet_local(&f->view, t, false, text);
	assert_string_equal(text, "22:40 MDT");
	sheet_utc(&f->view, t, true, text);
	assert_string_equal(text, "04:40 UTC (Thu 23 Apr)");
	sheet_utc(&f->view, t, false, text);
	assert_string_equal(text, "04:40 UTC");
	sheet_stamp(&f->view, t, text);
	assert_string_equal(text, "2026-04-22T22:39:31-06:00");
	sheet_local(&bare->view, t, false, text);
	assert_string_equal(text, "04:40 UTC");
	plan_fixture_close(f);
	plan_fixture_close(bare);
}

/* 2026-11-01, 2 h MDT = 8 h UTC (IANA zone file): the hour from 1 to 2 comes twice. */
static void the_clock_change_is_found(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, PLAN_FIXTURE_CHANGE_MJD, true);
	struct plan_fixture *other = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct utc at;
	char text[SHEET_TIME_BYTES];
	assert_true(sheet_clock_change(&f->view, &at));
	check_close("change", at.sod_s, 8 * 3600.0, 0.5);
	assert_int_equal(at.mjd, PLAN_FIXTURE_CHANGE_MJD + 1);
	sheet_local(&f->view, (struct utc){at.mjd, at.sod_s - 1800.0}, false, text);
	assert_string_equal(text, "01:30 MDT");
	sheet_local(&f->view, (struct utc){at.mjd, at.sod_s + 1800.0}, false, text);
	assert_string_equal(text, "01:30 MST");
	sheet_stamp(&f->view, (struct utc){at.mjd, at.sod_s + 1800.0}, text);
	assert_string_equal(text, "2026-11-01T01:30:00-07:00");
	assert_false(sheet_clock_change(&other->view, &at));
	plan_fixture_close(f);
	plan_fixture_close(other);
}

/* --- JSON --- */

static void json_has_the_keys_in_order(void **state)
{
	(void)state;
	static const char *const top[] = {
	    "site",	   "night",   "telescope", "limits",	 "gap_min",  "worth_total",
	    "worth_bound", "optimal", "items",	   "blocks",	 "left_out", "draft",
	    "stored",	   "kept",    "edition",   "stored_utc", "who",	     "leap_table_until",
	    "moved",	   "pins",    "drops",	   "bound_note", "since",    "changes"};
	static const char *const item[] = {
	    "order", "windows", "slew_by_utc", "start_utc", "latest_start_utc", "end_utc",  "state", "note",
	    "key",   "worth",	"parts",       "cause",	    "marked_utc",	"if_missed"};
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct memory *m = memory_open();
	assert_true(plan_json(m->file, &f->view, &changed));
	const char *text = memory_text(m);
	assert_keys(text, 1, top, sizeof top / sizeof top[0]);
	assert_keys(strstr(text, "\"items\""), 3, item, sizeof item / sizeof item[0]);
	const char *windows = strstr(text, "\"windows\"");
	const char *names[80];
	for (size_t i = 0; i < column_count; i++)
		names[i] = columns[i].name;
	names[column_count] = "usable";
	assert_keys(windows, 5, names, column_count + 1);
	assert_int_equal(count(text, "\"windows\": ["), PLAN_FIXTURE_ITEMS - 1);
	assert_non_null(strstr(text, "\"sun_limit_deg\": -12"));
	assert_non_null(strstr(text, "\"kind\": \"both\""));
	assert_non_null(strstr(text, "\"changes\": [\"Tern 18 b moved by 3 min"));
	assert_non_null(strstr(text, "\"t2_utc\": null"));	/* grazing */
	assert_non_null(strstr(text, "\"chance_done\": null")); /* an occultation on an assumed orbit */
	assert_non_null(strstr(text, "\"sigma_min\": 0.693"));
	assert_non_null(strstr(text, "\"siblings\": \"\""));
	assert_non_null(strstr(text, "\"usable\": [[\"2026-04-23T03:48:17Z\", \"2026-04-23T05:42:17Z\"]]"));
	memory_close(m);
	plan_fixture_close(f);
}

/* What would make a telescope point at daylight is in no list of items, in none of the formats. */
static void json_gives_no_item_in_daylight(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct memory *m = memory_open();
	assert_true(plan_json(m->file, &f->view, NULL));
	const char *text = memory_text(m), *left = strstr(text, "\"left_out\"");
	const char *name = strstr(text, "\"Tern 2 c\"");
	assert_true(name > left);
	assert_non_null(strstr(name, plan_sun_up_reason));
	assert_null(strstr(text, "\"order\": 1,"));
	assert_null(strstr(text, "\"since\""));
	memory_close(m);
	plan_fixture_close(f);
}

static void json_of_nothing(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_EMPTY, FIXTURE_EVENING_MJD, false);
	struct memory *m = memory_open();
	assert_true(plan_json(m->file, &f->view, NULL));
	assert_non_null(strstr(memory_text(m), "\"items\": [],\n  \"blocks\": [],\n  \"left_out\": []"));
	assert_non_null(strstr(m->text, "\"edition\": null"));
	assert_non_null(strstr(m->text, "\"mask_points\": 0")); /* the run's own limits, whole */
	memory_close(m);
	plan_fixture_close(f);
}

/* Names come through whole, as escapes where they could act on a terminal. */
static void json_is_harmless(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct memory *m = memory_open();
	f->item[PLAN_FIXTURE_JOINT].note = "\xC2\x9B"
					   "31m \xE2\x80\xAE \xF3\xA0\x81\x81"; /* CSI, RLO, TAG A */
	assert_true(plan_json(m->file, &f->view, &changed));
	const char *text = memory_text(m);
	for (size_t i = 0; i < m->n;) {
		uint32_t cp;
		const size_t length = utf8_decode(text + i, m->n - i, &cp);
		if (length == 0 || (cp != '\n' && codepoint_is_hostile(cp)))
			check_fail("byte %zu: U+%04X", i, (unsigned)cp);
		i += length;
	}
	/* RFC 8259 sec. 7: U+E0041 is the pair DB40, DC41 */
	assert_non_null(strstr(text, "\"note\": \"\\u009b31m \\u202e \\udb40\\udc41\""));
	assert_non_null(strstr(
	    text, "\"target\": \"=Tern <b>\\\"27\\\"</b> & 'x'; a,b\\\\n \\u001b[31m\\u000d\\u000aDTSTART"));
	memory_close(m);
	plan_fixture_close(f);
}

/* --- text --- */

/* At most 72 columns, nothing that acts on a terminal, valid UTF-8, no blank at the end of a line. */
static void assert_mailable(const char *text)
{
	const size_t n = strlen(text);
	for (size_t i = 0; i < n;) {
		uint32_t cp;
		const size_t length = utf8_decode(text + i, n - i, &cp);
		if (length == 0 || (cp != '\n' && codepoint_is_hostile(cp)))
			check_fail("byte %zu: U+%04X", i, (unsigned)cp);
		i += length;
	}
	for (const char *at = text; *at; at += strcspn(at, "\n") + 1) {
		char line[512];
		snprintf(line, sizeof line, "%.*s", (int)strcspn(at, "\n"), at);
		if (line[0] && line[strlen(line) - 1] == ' ')
			check_fail("a blank at the end: %s", line);
		if (text_columns(line) > 72)
			check_fail("%d columns: %s", text_columns(line), line);
	}
}

static void text_fits_and_is_harmless(void **state)
{
	(void)state;
	static const int32_t nights[] = {FIXTURE_EVENING_MJD, PLAN_FIXTURE_CHANGE_MJD};
	static char *hostile_lines[] = {(char *)plan_fixture_hostile};
	const struct sheet_changes hostile = {.since = plan_fixture_hostile, .line = hostile_lines, .n = 1};
	for (int kind = PLAN_FIXTURE_KEPT; kind <= PLAN_FIXTURE_EMPTY; kind++)
		for (int k = 0; k < 4; k++) {
			struct plan_fixture *f =
			    plan_fixture_open((enum plan_fixture_kind)kind, nights[k / 2], k % 2 == 0);
			struct memory *m = memory_open();
			assert_true(plan_sheet_text(m->file, &f->view, &hostile));
			assert_mailable(memory_text(m));
			memory_close(m);
			plan_fixture_close(f);
		}
}

/* Names of 80 wide characters, an ephemeris from a source without a blank. */
static void long_names_are_broken(void **state)
{
	(void)state;
	char wide[3 * NAME_CHARS_MAX + 1] = "", source[400];
	for (int i = 0; i < NAME_CHARS_MAX; i++)
		memcpy(wide + 3 * i, "\xE5\xA4\xA9", 4);
	memset(source, 'x', sizeof source - 1);
	source[sizeof source - 1] = '\0';
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct memory *m = memory_open();
	for (int i = 0; i < PLAN_FIXTURE_MEMBERS; i++) {
		f->member[i].target = wide;
		f->member[i].ephemeris_source = source;
	}
	f->item[PLAN_FIXTURE_JOINT].note = source;
	f->block[0].text = source;
	assert_true(plan_sheet_text(m->file, &f->view, &changed));
	assert_mailable(memory_text(m));
	memory_close(m);
	plan_fixture_close(f);
}

/* Whatever an observer asks at the telescope is in the text. */
static void text_answers(void **state)
{
	(void)state;
	static const char *const answers[] = {
	    "NIGHT SHEET 22/23 Apr 2026",
	    "evening of Wed 22 Apr 2026, morning of Thu 23 Apr 2026",
	    "Tern Hill (38.6200 N, 109.3600 W, 2100 m)",
	    "Telescope: North, 0.4 m",
	    "America/Denver, MDT is UTC-6 h",
	    "CHANGED SINCE edition 2\n  Tern 18 b moved by 3 min: version 3 adopted\n  new: Tern 40 b\n",
	    " 2  Tern 18 b + Tern 18 c",
	    "    slew by       Wed 22 Apr 21:44 MDT   Thu 23 Apr 03:44 UTC\n",
	    "    latest start  Thu 23 Apr 02:00 MDT   Thu 23 Apr 08:00 UTC\n",
	    "      T1          Wed 22 Apr 22:18 MDT   Thu 23 Apr 04:18 UTC\n",
	    "      mid         Thu 23 Apr 04:10 MDT   Thu 23 Apr 10:10 UTC\n",
	    "ICRS 14:47:36.0 +61:12:00, V 12.7, depth 8.1 ppt",
	    "airmass 1.39 at the reserve's start, 1.26 at mid",
	    "100 % both limbs",
	    "no chance can be given",
	    "Moon 77 deg away",
	    "If the ingress of Tern 18 b is missed, stay",
	    "marked: covariance assumed 0, stale, grazing",
	    "MOVED: by today's ephemeris the mid-time is later by 3.4 min",
	    "note: guiding poor at first",
	    "standing: evening flats",
	    "never point a telescope near the Sun",
	    "Tern 2 c: the Sun is up for some of it: do not slew there",
	    "kept plan (draft main, edition 3), stored 2026-04-20T18:05:00Z",
	    "no order is worth more than 2.900",
	    "ephemeris version 2, entered 2026-03-02, BJD_TDB",
	    "complete until 2026-12-28",
	};
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct memory *m = memory_open();
	assert_true(plan_sheet_text(m->file, &f->view, &changed));
	const char *text = memory_text(m);
	for (size_t i = 0; i < sizeof answers / sizeof answers[0]; i++)
		if (!strstr(text, answers[i]))
			check_fail("not there: %s\n%s", answers[i], text);
	assert_null(strstr(text, " 1  Tern 2 c")); /* in daylight: no item */
	/* the hostile one starts a minute behind its T1 */
	assert_int_equal(count(text, "Thu 23 Apr 07:49 UTC  too early"), 1);
	assert_int_equal(count(text, "too early"), 1);
	memory_close(m);
	plan_fixture_close(f);
}

/* A forecast and a flip put into a member's stored figures. */
static void put_forecast(struct plan_member_view *m, const char *flip_utc)
{
	static const char *const figure[][2] = {{"band", "g"},
						{"exposure_s", "2.500"},
						{"noise_ppt_min", "1.440"},
						{"depth_snr", "25.300"},
						{"timing_s", "33.000"}};
	for (size_t i = 0; i < sizeof figure / sizeof figure[0]; i++)
		m->figure[column_find(figure[i][0])] = figure[i][1];
	m->figure[column_find("flip_utc")] = flip_utc;
}

/* What was planned is shown, whatever the telescope says today; the flip where it falls into the item. */
static void forecasts_are_told(void **state)
{
	static const struct {
		const char *variant, *flip_utc;
		bool flips;
		const char *forecast;
	} rows[] = {
	    {"whole", "2026-04-23T04:30:00Z", true,
	     "      forecast: 2.5 s exposures in g, noise 1.44 ppt a minute, depth\n"
	     "        S/N 25, timing 33 s\n"},
	    {"ingress", "2026-04-23T03:00:00Z", false, "        S/N 25, timing 33 s (of the whole event)\n"},
	    {"egress", "", false, "        S/N 25, timing 33 s (of the whole event)\n"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
		struct telescope north = telescope_empty();
		struct memory *text = memory_open(), *html = memory_open();
		north.name = f->view.telescope;
		north.aperture_m = 0.4;
		north.band = "R"; /* since it was planned */
		f->night.night.telescope = &north;
		f->item[PLAN_FIXTURE_JOINT].member[0].variant = rows[i].variant;
		put_forecast(&f->item[PLAN_FIXTURE_JOINT].member[0], rows[i].flip_utc);
		assert_true(plan_sheet_text(text->file, &f->view, NULL));
		assert_true(plan_sheet_html(html->file, &f->view, NULL));
		assert_mailable(memory_text(text));
		if (!strstr(text->text, rows[i].forecast))
			check_fail("row %zu: not there: %s\n%s", i, rows[i].forecast,
				   strstr(text->text, "ICRS"));
		assert_int_equal(count(text->text, "forecast: "), 1);
		assert_int_equal(
		    count(text->text, "      flip        Wed 22 Apr 22:30 MDT   Thu 23 Apr 04:30 UTC\n"),
		    rows[i].flips);
		assert_int_equal(count(text->text, "at the flip: watch the mount"), rows[i].flips);
		assert_int_equal(count(memory_text(html), "At the flip: watch the mount"), rows[i].flips);
		assert_int_equal(count(html->text, "<dt>Exposure</dt><dd>2.5 s</dd>"), 1);
		assert_int_equal(count(html->text, "error, whole event</dt>"), !rows[i].flips);
		assert_non_null(strstr(text->text, "Telescope: North, 0.4 m, 0.4 m, band g\n"));
		assert_non_null(strstr(html->text, ", 0.4 m, band g. Plan:"));
		memory_close(text);
		memory_close(html);
		plan_fixture_close(f);
	}
}

static void text_says_which_of_two_clocks(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, PLAN_FIXTURE_CHANGE_MJD, true);
	struct memory *m = memory_open();
	assert_true(plan_sheet_text(m->file, &f->view, NULL));
	const char *text = memory_text(m);
	assert_non_null(strstr(text,
			       "CLOCKS CHANGE this night, at Sun 1 Nov 08:00 UTC: from MDT (UTC-6 h) to\n"
			       "           MST (UTC-7 h), 02:00 MDT becomes 01:00 MST. Every local time\n"
			       "           says which it is.\n"));
	assert_non_null(strstr(text, " 00 01  01  02  03 ")); /* the hours of the strip */
	/* 07:50 UTC and 08:17 UTC by hand: 01:50 MDT, 01:18 MST (08:17:39, rounded) */
	assert_non_null(strstr(text, "start         Sun 1 Nov 01:50 MDT"));
	assert_non_null(strstr(text, "mid         Sun 1 Nov 01:18 MST"));
	memory_close(m);
	plan_fixture_close(f);
}

static void text_of_nothing(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_EMPTY, FIXTURE_EVENING_MJD, true);
	struct memory *m = memory_open();
	const struct sheet_changes none = {.since = "edition 1"};
	assert_true(plan_sheet_text(m->file, &f->view, &none));
	assert_non_null(strstr(memory_text(m), "Nothing is planned."));
	assert_non_null(strstr(m->text, "a proposal, not stored"));
	assert_non_null(strstr(m->text, "CHANGED SINCE edition 1\n  nothing\n"));
	assert_non_null(strstr(m->text, "# Sun up"));
	memory_close(m);
	m = memory_open();
	f->base->options.plain = true;
	assert_true(plan_sheet_text(m->file, &f->view, &none));
	assert_null(strstr(memory_text(m), "# Sun up")); /* nothing told by position */
	memory_close(m);
	plan_fixture_close(f);
}

/* --- CSV --- */

static void csv_has_a_row_an_event(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct memory *m = memory_open();
	struct csv *reader;
	struct csv_row row;
	struct err e;
	long line, column;
	int target = -1, rows = 0, hostile = 0;
	assert_true(plan_sheet_csv(m->file, &f->view));
	(void)memory_text(m);
	if (csv_open(m->text, m->n, &reader, &line, &column, &e) != ST_OK)
		check_fail("%ld:%ld: %s", line, column, e.text);
	const struct csv_row *head = csv_header(reader);
	const size_t cells = head->n;
	for (size_t i = 0; i < cells; i++)
		target = strcmp(head->cell[i].text, "target") == 0 ? (int)i : target;
	assert_string_equal(head->cell[0].text, "order");
	assert_string_equal(head->cell[cells - 1].text, columns[column_count - 1].name);
	while (csv_next(reader, &row, &line, &column, &e) == CSV_ROW) {
		rows++;
		assert_int_equal(row.n, cells);
		const char *name = row.cell[target].text;
		assert_string_not_equal(name, "Tern 2 c"); /* in daylight */
		hostile += strncmp(name, "'=Tern <b>", 10) == 0;
	}
	assert_int_equal(rows, 4);
	assert_int_equal(hostile, 1); /* no formula any more */
	csv_close(reader);
	assert_non_null(strstr(m->text, "2,started,whole,2026-04-23T03:44:00Z,2026-04-23T03:50:00Z,,"));
	assert_non_null(strstr(m->text, ",2026-04-22T21:44:00-06:00,2026-04-22T21:50:00-06:00,,"));
	memory_close(m);
	plan_fixture_close(f);
}

/* --- iCalendar; tests/property/test_ics.c reads it with another program's reader --- */

static void calendar_says_what_it_is(void **state)
{
	(void)state;
	static const struct {
		enum plan_fixture_kind kind;
		int events, confirmed, tentative, cancelled, alarms, journals;
		const char *stamp, *sequence;
	} rows[] = {
	    /* four items, one of them in daylight: cancelled where it may have been exported before; four
	     * blocks, one item gone; what has begun rings no bell */
	    {PLAN_FIXTURE_KEPT, 9, 7, 0, 2, 2, 1, "DTSTAMP:20260423T035210Z\r\n", "SEQUENCE:3\r\n"},
	    {PLAN_FIXTURE_DRAFT, 8, 0, 7, 1, 3, 1, "DTSTAMP:20260420T180500Z\r\n", "SEQUENCE:0\r\n"},
	    {PLAN_FIXTURE_PROPOSAL, 7, 0, 7, 0, 3, 1, "DTSTAMP:20260420T180500Z\r\n", "SEQUENCE:0\r\n"},
	    {PLAN_FIXTURE_EMPTY, 0, 0, 0, 0, 0, 1, "DTSTAMP:19700101T000000Z\r\n", "SEQUENCE:0\r\n"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct plan_fixture *f = plan_fixture_open(rows[i].kind, FIXTURE_EVENING_MJD, true);
		struct memory *m = memory_open();
		assert_true(plan_sheet_ics(m->file, &f->view));
		const char *text = memory_text(m);
		assert_int_equal(count(text, "BEGIN:VEVENT\r\n"), rows[i].events);
		assert_int_equal(count(text, "STATUS:CONFIRMED\r\n"), rows[i].confirmed);
		assert_int_equal(count(text, "STATUS:TENTATIVE\r\n"), rows[i].tentative);
		assert_int_equal(count(text, "STATUS:CANCELLED\r\n"), rows[i].cancelled);
		assert_int_equal(count(text, "BEGIN:VALARM\r\n"), rows[i].alarms);
		assert_int_equal(count(text, "BEGIN:VJOURNAL\r\n"), rows[i].journals);
		/* an item was marked after the edition was stored: what its neighbours say may change with it */
		assert_int_equal(count(text, rows[i].stamp), rows[i].events + rows[i].journals);
		assert_int_equal(count(text, rows[i].sequence), rows[i].events + rows[i].journals);
		assert_null(strstr(text, "METHOD"));
		assert_null(strstr(text, "\r\nDTSTART:1970"));
		memory_close(m);
		plan_fixture_close(f);
	}
}

static void the_same_data_gives_the_same_bytes(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct memory *a = memory_open(), *b = memory_open();
	assert_true(plan_sheet_ics(a->file, &f->view));
	f->base->run.wall.start.sod_s += 3600.0; /* whatever the clock says */
	assert_true(plan_sheet_ics(b->file, &f->view));
	assert_string_equal(memory_text(a), memory_text(b));
	assert_non_null(strstr(a->text, "DTSTART:20260423T091600Z\r\nDTEND:20260423T111015Z\r\n"));
	assert_non_null(strstr(a->text, "TRIGGER;VALUE=DATE-TIME:20260423T074400Z\r\n"));
	memory_close(a);
	memory_close(b);
	plan_fixture_close(f);
}

/* The lines of a calendar that hold its identifiers, one after the other. */
static void identifiers(const char *text, char *out, size_t room)
{
	size_t used = 0;
	for (const char *at = text; (at = strstr(at, "\r\nUID:")); at += 2) {
		const size_t n = strcspn(at + 2, "\r");
		assert_true(used + n + 1 < room);
		memcpy(out + used, at + 2, n);
		used += n;
	}
	out[used] = '\0';
}

static void names_change_no_identifier(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	struct run *r = &f->base->run;
	struct memory *a = memory_open(), *b = memory_open(), *c = memory_open();
	static char before[4000], renamed[4000], other[4000];
	r->site.id = 3;
	r->telescope.id = 2;
	assert_true(plan_sheet_ics(a->file, &f->view));
	r->site.name = "Tern Top";
	f->view.telescope = "Northern";
	assert_true(plan_sheet_ics(b->file, &f->view));
	r->telescope.id = 4;
	assert_true(plan_sheet_ics(c->file, &f->view));
	identifiers(memory_text(a), before, sizeof before);
	identifiers(memory_text(b), renamed, sizeof renamed);
	identifiers(memory_text(c), other, sizeof other);
	assert_non_null(strstr(b->text, "Tern Top"));
	assert_string_equal(before, renamed);
	assert_string_not_equal(before, other); /* another telescope's blocks are others */
	memory_close(a);
	memory_close(b);
	memory_close(c);
	plan_fixture_close(f);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(times_say_which_clock_and_date),
	    cmocka_unit_test(the_clock_change_is_found),
	    cmocka_unit_test(json_has_the_keys_in_order),
	    cmocka_unit_test(json_gives_no_item_in_daylight),
	    cmocka_unit_test(json_of_nothing),
	    cmocka_unit_test(json_is_harmless),
	    cmocka_unit_test(text_fits_and_is_harmless),
	    cmocka_unit_test(long_names_are_broken),
	    cmocka_unit_test(text_answers),
	    cmocka_unit_test(forecasts_are_told),
	    cmocka_unit_test(text_says_which_of_two_clocks),
	    cmocka_unit_test(text_of_nothing),
	    cmocka_unit_test(csv_has_a_row_an_event),
	    cmocka_unit_test(calendar_says_what_it_is),
	    cmocka_unit_test(names_change_no_identifier),
	    cmocka_unit_test(the_same_data_gives_the_same_bytes),
	};
	return cmocka_run_group_tests_name("plan sheet", tests, NULL, NULL);
}
