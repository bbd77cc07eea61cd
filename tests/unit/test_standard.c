/* SPDX-License-Identifier: MIT
 * Time standards as text. */
#include "ephem/standard.h"

#include "tests/support/check.h"

#include <math.h>
#include <string.h>

static void known_scales(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		enum scale_claim claim;
		enum time_origin origin;
		enum time_clock clock;
		double offset_d;
		const char *canonical;
	} rows[] = {
	    {"BJD_TDB", SCALE_STATED, ORIGIN_BARYCENTRE, CLOCK_TDB, 0.0, "BJD_TDB"},
	    {"bjd_tdb", SCALE_STATED, ORIGIN_BARYCENTRE, CLOCK_TDB, 0.0, "BJD_TDB"},
	    {"BJD_TT", SCALE_STATED, ORIGIN_BARYCENTRE, CLOCK_TT, 0.0, "BJD_TT"},
	    {"BJD_UTC", SCALE_STATED, ORIGIN_BARYCENTRE, CLOCK_UTC, 0.0, "BJD_UTC"},
	    {"HJD_UTC", SCALE_STATED, ORIGIN_SUN, CLOCK_UTC, 0.0, "HJD_UTC"},
	    {"HJD_TT", SCALE_STATED, ORIGIN_SUN, CLOCK_TT, 0.0, "HJD_TT"},
	    {"HJD_TDB", SCALE_STATED, ORIGIN_SUN, CLOCK_TDB, 0.0, "HJD_TDB"},
	    {"JD_UTC", SCALE_STATED, ORIGIN_OBSERVER, CLOCK_UTC, 0.0, "JD_UTC"},
	    {"JD_TT", SCALE_STATED, ORIGIN_OBSERVER, CLOCK_TT, 0.0, "JD_TT"},
	    {"JD_TDB", SCALE_STATED, ORIGIN_OBSERVER, CLOCK_TDB, 0.0, "JD_TDB"},
	    {"MJD_UTC", SCALE_STATED, ORIGIN_OBSERVER, CLOCK_UTC, 2400000.5, "MJD_UTC"},
	    {"MJD_TDB", SCALE_STATED, ORIGIN_OBSERVER, CLOCK_TDB, 2400000.5, "MJD_TDB"},
	    {"JD_UTC-2400000.5", SCALE_STATED, ORIGIN_OBSERVER, CLOCK_UTC, 2400000.5, "MJD_UTC"},
	    {"BJD_TDB-2457000", SCALE_STATED, ORIGIN_BARYCENTRE, CLOCK_TDB, 2457000.0, "BJD_TDB-2457000"},
	    {" BJD_TDB - 2454833.0 ", SCALE_STATED, ORIGIN_BARYCENTRE, CLOCK_TDB, 2454833.0,
	     "BJD_TDB-2454833"},
	    {"HJD_UTC-2450000.0", SCALE_STATED, ORIGIN_SUN, CLOCK_UTC, 2450000.0, "HJD_UTC-2450000"},
	    {"BJD", SCALE_BJD, ORIGIN_BARYCENTRE, CLOCK_TDB, 0.0, "BJD"},
	    {"HJD", SCALE_BJD, ORIGIN_BARYCENTRE, CLOCK_TDB, 0.0, "BJD"},
	    {"BJD:anything at all", SCALE_BJD, ORIGIN_BARYCENTRE, CLOCK_TDB, 0.0, "BJD"},
	    {"BJD-2457000", SCALE_BJD, ORIGIN_BARYCENTRE, CLOCK_TDB, 2457000.0, "BJD-2457000"},
	    {"JD", SCALE_UNKNOWN, ORIGIN_BARYCENTRE, CLOCK_TDB, 0.0, "unknown"},
	    {"JD-2450000", SCALE_UNKNOWN, ORIGIN_BARYCENTRE, CLOCK_TDB, 2450000.0, "JD-2450000"},
	    {"unknown", SCALE_UNKNOWN, ORIGIN_BARYCENTRE, CLOCK_TDB, 0.0, "unknown"},
	    {"Unknown:BJD", SCALE_UNKNOWN, ORIGIN_BARYCENTRE, CLOCK_TDB, 0.0, "unknown"},
	    {"", SCALE_UNKNOWN, ORIGIN_BARYCENTRE, CLOCK_TDB, 0.0, "unknown"},
	    {"  ", SCALE_UNKNOWN, ORIGIN_BARYCENTRE, CLOCK_TDB, 0.0, "unknown"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		struct standard s, again;
		struct err e;
		char text[64];
		if (standard_parse(rows[i].text, &s, &e) != ST_OK)
			check_fail("\"%s\" was refused: %s", rows[i].text, e.text);
		if (s.claim != rows[i].claim || s.origin != rows[i].origin || s.clock != rows[i].clock ||
		    s.text_utc)
			check_fail("\"%s\" is claim %d origin %d clock %d", rows[i].text, (int)s.claim,
				   (int)s.origin, (int)s.clock);
		check_close(rows[i].text, s.offset_d, rows[i].offset_d, 0.0);
		standard_text(&s, text, sizeof text);
		assert_string_equal(text, rows[i].canonical);
		assert_int_equal(standard_parse(text, &again, &e), ST_OK);
		assert_int_equal(again.claim, s.claim);
		assert_int_equal(again.origin, s.origin);
		assert_int_equal(again.clock, s.clock);
		check_close("offset read back", again.offset_d, s.offset_d, 0.0);
	}
	struct standard s;
	char text[64];
	assert_int_equal(standard_parse("utc", &s, NULL), ST_OK);
	assert_true(s.text_utc);
	standard_text(&s, text, sizeof text);
	assert_string_equal(text, "UTC");
}

static void unknown_scales(void **state)
{
	(void)state;
	static const char *const rows[] = {
	    "BJD_",	   "BJD_TAI",	  "XJD_TDB",	  "BJD_TDB+2457000", "BJD_TDB-",    "BJD_TDB-abc",
	    "BJD_TDB--5",  "BJD_TDB-1e9", "BJD_TDB:word", "BJDTDB",	     "TDB",	    "UTC-2450000",
	    "UTCX",	   "BJD:",	  "unknown:",	  "unknownBJD",	     "BJD\x1b[31m", "BJD:a\x1b",
	    "MJD_UTC-nan", "BJD_TDBx",
	};
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		struct standard s;
		struct err e;
		if (standard_parse(rows[i], &s, &e) != ST_SYNTAX)
			check_fail("\"%s\" was taken", rows[i]);
		assert_non_null(strstr(e.text, "BJD_TDB"));
		assert_null(strchr(e.text, 0x1b));
	}
}

static void systematic_of_an_unstated_scale(void **state)
{
	(void)state;
	const struct standard stated = {.claim = SCALE_STATED}, bjd = {.claim = SCALE_BJD},
			      unknown = {.claim = SCALE_UNKNOWN};
	check_close("stated", standard_systematic_s(&stated, 10.0, 10.0), 0.0, 0.0);
	check_close("BJD", standard_systematic_s(&bjd, 10.0, 10.0), 49.0, 0.0);
	/* on the ecliptic (the equinox): hypot(49, 499 / sqrt 2) */
	check_close("at the equinox", standard_systematic_s(&unknown, 0.0, 0.0),
		    hypot(49.0, 499.0 / sqrt(2.0)), 1e-9);
	/* north ecliptic pole: RA 18 h, Dec 90 deg - 23.4393 deg */
	check_close("ecliptic pole", standard_systematic_s(&unknown, 270.0, 66.5607), 49.0, 1e-3);
	check_close("no position", standard_systematic_s(&unknown, (double)NAN, (double)NAN),
		    hypot(49.0, 499.0 / sqrt(2.0)), 1e-9);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(known_scales),
	    cmocka_unit_test(unknown_scales),
	    cmocka_unit_test(systematic_of_an_unstated_scale),
	};
	return cmocka_run_group_tests_name("standard", tests, NULL, NULL);
}
