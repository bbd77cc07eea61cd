/* SPDX-License-Identifier: MIT
 * Any text in a calendar comes back from another program's reader (libical) as it is after cleaning. */
#include "tui/sheets/ics_write.h"

#include "db/text_clean.h"
#include "tests/support/check.h"
#include "tests/support/plan_fixture.h"
#include "tui/sheets/plan_sheet.h"

#include <libical/ical.h>
#include <stdlib.h>
#include <string.h>

enum { TEXTS = 4000, PIECES_MAX = 60, TEXT_BYTES = PIECES_MAX * 8 + 1 };

/* Controls, line ends, right to left, four bytes, combining marks, raw bytes, and what iCalendar gives a
 * meaning. */
static const char *const pieces[] = {"a",
				     "B",
				     "7",
				     "Tern 9 b",
				     " ",
				     "  ",
				     "\t",
				     "\n",
				     "\r\n",
				     "\r",
				     "\n\n",
				     ";",
				     ",",
				     ":",
				     "\\",
				     "\\n",
				     "\\;",
				     "\"",
				     "=",
				     "BEGIN:VEVENT",
				     "END:",
				     "\x01",
				     "\x07",
				     "\x1b[31m",
				     "\x7f",
				     "\xC2\x85",
				     "\xC2\x9B",
				     "\xC2\xA0",
				     "\xC3\xA9",
				     "\xCC\x81",
				     "\xCE\xB1",
				     "\xD7\x90",
				     "\xD8\xA8",
				     "\xE2\x80\x8B",
				     "\xE2\x80\xAE",
				     "\xE2\x80\xA8",
				     "\xE2\x82\xAC",
				     "\xE5\xA4\xA9",
				     "\xEF\xBB\xBF",
				     "\xEF\xBF\xBD",
				     "\xF0\x9F\x94\xAD",
				     "\xF0\x9D\x84\x9E",
				     "\xFF",
				     "\xC3",
				     "\xE2\x82",
				     "\xED\xA0\x80",
				     "\xF4\x90\x80\x80"};

static void random_text(struct rng *r, char out[TEXT_BYTES])
{
	const int n = (int)rng_between(r, 0.0, PIECES_MAX);
	const double piece_count = sizeof pieces / sizeof pieces[0];
	size_t used = 0;
	for (int i = 0; i < n; i++) {
		if (rng_unit(r) < 0.1) {
			out[used++] = (char)(1 + (int)rng_between(r, 0.0, 255.0));
			continue;
		}
		const char *piece = pieces[(int)rng_between(r, 0.0, piece_count)];
		const size_t length = strlen(piece);
		if (used + length < TEXT_BYTES) {
			memcpy(out + used, piece, length);
			used += length;
		}
	}
	out[used] = '\0';
}

/* The rule of ics_clean, said another way. */
static void assert_clean(const char *clean, const char *text)
{
	const size_t n = strlen(clean);
	for (size_t i = 0; i < n;) {
		uint32_t cp;
		const size_t length = utf8_decode(clean + i, n - i, &cp);
		if (length == 0 || cp == '\\' || (cp != '\n' && codepoint_is_hostile(cp)))
			check_fail("byte %zu of \"%s\", from \"%s\"", i, clean, text);
		i += length;
	}
	if (strstr(clean, "  ") || strstr(clean, " \n") || strstr(clean, "\n ") || strstr(clean, "\n\n"))
		check_fail("blanks in \"%s\", from \"%s\"", clean, text);
	if (n > 0 && (strchr(" \n", clean[0]) || strchr(" \n", clean[n - 1])))
		check_fail("not trimmed: \"%s\", from \"%s\"", clean, text);
}

/* Every line ends in CR LF, has at most 75 octets and is valid UTF-8 by itself. */
static void assert_lines(const char *calendar, size_t n)
{
	for (size_t at = 0; at < n;) {
		const char *end = strstr(calendar + at, "\r\n");
		if (!end)
			check_fail("no line end behind byte %zu", at);
		const size_t length = (size_t)(end - calendar) - at;
		if (length > 75)
			check_fail("a line of %zu octets: %.*s", length, (int)length, calendar + at);
		for (size_t i = 0; i < length;) {
			uint32_t cp;
			const size_t bytes = utf8_decode(calendar + at + i, length - i, &cp);
			if (bytes == 0 || cp < 0x20)
				check_fail("octet %zu of the line %.*s", i, (int)length, calendar + at);
			i += bytes;
		}
		at += length + 2;
	}
}

/* *calendar is the caller's. */
static void write_event(const char *text, char **calendar, size_t *n)
{
	struct ics c = {.file = open_memstream(calendar, n)};
	if (!c.file)
		check_fail("no memory");
	ics_value(&c, "BEGIN", "VCALENDAR");
	ics_value(&c, "VERSION", "2.0");
	ics_value(&c, "PRODID", "-//wane//test//EN");
	ics_value(&c, "BEGIN", "VEVENT");
	ics_value(&c, "UID", "1");
	ics_value(&c, "DTSTAMP", "20260423T000000Z");
	ics_value(&c, "DTSTART", "20260423T000000Z");
	ics_text(&c, "SUMMARY", text);
	ics_text(&c, "DESCRIPTION", text);
	ics_value(&c, "END", "VEVENT");
	ics_value(&c, "END", "VCALENDAR");
	assert_false(c.failed);
	fclose(c.file);
}

static void texts_come_back(void **state)
{
	(void)state;
	struct rng r = rng_open("ics texts_come_back");
	for (int k = 0; k < TEXTS; k++) {
		char text[TEXT_BYTES];
		size_t n;
		random_text(&r, text);
		char *clean = ics_clean(text), *calendar = NULL;
		write_event(text, &calendar, &n);
		assert_non_null(clean);
		assert_clean(clean, text);
		assert_lines(calendar, n);
		icalcomponent *read = icalparser_parse_string(calendar);
		icalcomponent *event =
		    read ? icalcomponent_get_first_component(read, ICAL_VEVENT_COMPONENT) : NULL;
		if (!event || icalcomponent_count_errors(read) > 0)
			check_fail("not taken: %s", calendar);
		/* libical gives no value at all for an empty text */
		const char *summary = icalcomponent_get_summary(event),
			   *words = icalcomponent_get_description(event);
		if (strcmp(summary ? summary : "", clean) != 0 || strcmp(words ? words : "", clean) != 0)
			check_fail("wrote \"%s\", read \"%s\"", clean, summary ? summary : "");
		icalcomponent_free(read);
		free(calendar);
		free(clean);
	}
}

/* A text that keeps the rule already is left as it is. */
static void clean_texts_are_kept(void **state)
{
	(void)state;
	static const char *const kept[] = {"", "a", "a; b, c: d", "one\ntwo", "caf\xC3\xA9 \xF0\x9F\x94\xAD"};
	static const struct {
		const char *text, *want;
	} changed[] = {{" a \t b ", "a b"},
		       {"a\\n", "a/n"},
		       {"\r\n\na\r\r\nb \n", "a\nb"},
		       {"x\x1b[31my", "x[31my"},
		       {"a\xFF", "a\xEF\xBF\xBD"}};
	for (size_t i = 0; i < sizeof kept / sizeof kept[0]; i++) {
		char *clean = ics_clean(kept[i]);
		assert_string_equal(clean, kept[i]);
		free(clean);
	}
	for (size_t i = 0; i < sizeof changed / sizeof changed[0]; i++) {
		char *clean = ics_clean(changed[i].text);
		assert_string_equal(clean, changed[i].want);
		free(clean);
	}
}

/* By hand. The leap second of 2016-12-31 (IERS Bulletin C 52) is told as a neighbour that every reader knows.
 */
static void times_reach_outward(void **state)
{
	(void)state;
	static const struct {
		struct utc t;
		const char *down, *up;
	} rows[] = {
	    {{61153, 0.0}, "20260423T000000Z", "20260423T000000Z"},
	    {{61153, 13800.25}, "20260423T035000Z", "20260423T035001Z"},
	    {{61153, 86399.5}, "20260423T235959Z", "20260424T000000Z"},
	    {{57753, 86400.4}, "20161231T235959Z", "20170101T000000Z"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char text[ICS_TIME_BYTES];
		ics_time(rows[i].t, false, text);
		assert_string_equal(text, rows[i].down);
		ics_time(rows[i].t, true, text);
		assert_string_equal(text, rows[i].up);
	}
}

/* --- a whole sheet --- */

enum { EVENTS_MAX = 16 };

/* The calendar of a kept plan has what RFC 5545 asks of each event, identifiers of their own, and no error; a
 * draft of the same night gives the same events the same identifiers. */
static void a_sheet_is_read_whole(void **state)
{
	(void)state;
	static const enum plan_fixture_kind kinds[] = {PLAN_FIXTURE_KEPT, PLAN_FIXTURE_DRAFT,
						       PLAN_FIXTURE_EMPTY};
	static const int events[] = {8, 7, 0};
	char uid[2][EVENTS_MAX][64];
	for (int k = 0; k < 3; k++) {
		struct plan_fixture *f = plan_fixture_open(kinds[k], FIXTURE_EVENING_MJD, true);
		char *calendar = NULL;
		size_t size;
		int n = 0;
		FILE *file = open_memstream(&calendar, &size);
		assert_non_null(file);
		assert_true(plan_sheet_ics(file, &f->view));
		fclose(file);
		assert_lines(calendar, size);
		icalcomponent *all = icalparser_parse_string(calendar);
		if (!all || icalcomponent_count_errors(all) > 0)
			check_fail("not taken: %s", calendar);
		assert_int_equal(icalcomponent_check_restrictions(all), 1); /* restrictions of RFC 5545 */
		for (icalcomponent *event = icalcomponent_get_first_component(all, ICAL_VEVENT_COMPONENT);
		     event; event = icalcomponent_get_next_component(all, ICAL_VEVENT_COMPONENT)) {
			const struct icaltimetype from = icalcomponent_get_dtstart(event),
						  to = icalcomponent_get_dtend(event);
			assert_true(icaltime_compare(from, to) < 0);
			assert_true(from.year >= 2026); /* no name has put a DTSTART in */
			if (k < 2 && n < EVENTS_MAX)
				snprintf(uid[k][n], sizeof uid[k][n], "%s", icalcomponent_get_uid(event));
			for (int i = 0; k < 2 && i < n; i++)
				assert_string_not_equal(uid[k][i], uid[k][n]);
			n++;
		}
		assert_int_equal(n, events[k]);
		assert_int_equal(icalcomponent_count_components(all, ICAL_VJOURNAL_COMPONENT), 1);
		icalcomponent_free(all);
		free(calendar);
		plan_fixture_close(f);
	}
	for (int i = 0; i < events[1]; i++)
		assert_string_equal(uid[0][i], uid[1][i]);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(texts_come_back),
	    cmocka_unit_test(clean_texts_are_kept),
	    cmocka_unit_test(times_reach_outward),
	    cmocka_unit_test(a_sheet_is_read_whole),
	};
	return cmocka_run_group_tests_name("ics", tests, NULL, NULL);
}
