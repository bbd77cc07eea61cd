/* SPDX-License-Identifier: MIT
 * Times and spans of a night as they are typed. Clock changes: tzdata 2025b rules US (second Sunday of March,
 * first of November, at 02:00) and LH (first Sunday of October and April, at 02:00, by half an hour). */
#include "tui/plan_time.h"

#include "tests/support/check.h"
#include "tui/plan_time_text.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Invented places: of the demo; on the meridian of Lord Howe; inside the polar circle. Local mean noon, by
 * hand: 12 h less a fifteenth of the longitude: 19:17:26.4, 01:23:40.8 and 11:00 UTC. */
static const struct site tern_hill = {.name = "Tern Hill",
				      .lat_deg = 38.62,
				      .lon_east_deg = -109.36,
				      .height_m = 2100.0,
				      .zone = "America/Denver"};
static const struct site tern_island = {.name = "Tern Island",
					.lat_deg = -31.5,
					.lon_east_deg = 159.08,
					.height_m = 10.0,
					.zone = "Australia/Lord_Howe"};
static const struct site tern_north = {
    .name = "Tern North", .lat_deg = 78.0, .lon_east_deg = 15.0, .height_m = 10.0, .zone = ""};

struct bench {
	struct night night;
	struct zone *zone;
	struct plan_clock clock;
};

static struct bench *bench_open(const struct site *site, const char *evening, bool zone)
{
	struct bench *b = calloc(1, sizeof *b);
	struct sun_memo *memo = calloc(1, sizeof *memo);
	const struct earth_clock clock = {.leap = &leap_builtin};
	struct date date;
	struct err e;
	int32_t mjd = 0;
	if (!b || !memo || date_parse(evening, &date, &e) != ST_OK || date_to_mjd(date, &mjd, &e) != ST_OK)
		check_fail("no night");
	if (night_build(&b->night, site, &clock, mjd, memo, &e) != ST_OK)
		check_fail("%s", e.text);
	free(memo);
	if (zone && zone_open("/usr/share/zoneinfo", site->zone, &b->zone, &e) != ST_OK)
		check_fail("%s", e.text);
	b->clock = (struct plan_clock){
	    .night = &b->night, .zone = b->zone, .leap = &leap_builtin, .sun_limit_deg = -12.0};
	return b;
}

static void bench_close(struct bench *b)
{
	zone_close(b->zone);
	free(b);
}

static double seconds_off(const struct bench *b, double t_d, const char *utc)
{
	struct utc want;
	struct err e;
	if (utc_parse(&leap_builtin, utc, &want, &e) != ST_OK)
		check_fail("%s", e.text);
	return utc_diff_s(&leap_builtin, want, night_utc(&b->night, t_d));
}

/* --- clocks --- */

static void clock_times(void **state)
{
	(void)state;
	static const struct {
		const struct site *site;
		bool zone;
		const char *evening, *text, *utc, *source;
	} rows[] = {
	    {&tern_hill, true, "2026-04-22", "22:40", "2026-04-23T04:40:00Z", "by hand: MDT is UTC - 6 h"},
	    {&tern_hill, true, "2026-04-22", "22:40L", "2026-04-23T04:40:00Z", "by hand"},
	    {&tern_hill, true, "2026-04-22", " 22:40:05 ", "2026-04-23T04:40:05Z", "by hand"},
	    {&tern_hill, true, "2026-04-22", "05:40Z", "2026-04-23T05:40:00Z", "by hand"},
	    {&tern_hill, true, "2026-04-22", "20:00z", "2026-04-22T20:00:00Z", "by hand"},
	    {&tern_hill, true, "2026-04-22", "19:17Z", "2026-04-23T19:17:00Z",
	     "by hand: before the first noon, 19:17:26"},
	    {&tern_hill, true, "2026-04-22", "19:18Z", "2026-04-22T19:18:00Z", "by hand: behind it"},
	    {&tern_hill, true, "2026-04-22", "22:40-06:00", "2026-04-23T04:40:00Z", "by hand"},
	    {&tern_hill, true, "2026-04-22", "10:10+05:30", "2026-04-23T04:40:00Z", "by hand"},
	    {&tern_hill, true, "2026-04-22", "22:40+20m", "2026-04-23T05:00:00Z", "by hand"},
	    {&tern_hill, true, "2026-04-22", "22:40-1h30m", "2026-04-23T03:10:00Z", "by hand"},
	    {&tern_hill, true, "2026-04-22", "22:40-06:00-1h", "2026-04-23T03:40:00Z", "by hand"},
	    {&tern_hill, true, "2026-04-22", "05:40Z+90m", "2026-04-23T07:10:00Z", "by hand"},
	    {&tern_hill, true, "2026-04-22", "2026-04-23T05:40Z", "2026-04-23T05:40:00Z", "by hand"},
	    {&tern_hill, true, "2026-04-22", "2026-04-23 05:40", "2026-04-23T05:40:00Z",
	     "by hand: UTC without a letter"},
	    {&tern_hill, true, "2026-04-22", "2026-04-22T22:40L", "2026-04-23T04:40:00Z", "by hand"},
	    {&tern_hill, true, "2026-04-22", "2026-04-22T22:40:30.5-06:00", "2026-04-23T04:40:30.5Z",
	     "by hand"},
	    {&tern_hill, false, "2026-04-22", "22:40", "2026-04-22T22:40:00Z",
	     "by hand: no zone, UTC is local"},
	    {&tern_hill, false, "2026-04-22", "03:00L", "2026-04-23T03:00:00Z", "by hand"},
	    /* 2026-03-08 is a Sunday, the second: 02:00 MST becomes 03:00 MDT */
	    {&tern_hill, true, "2026-03-07", "01:59", "2026-03-08T08:59:00Z", "by hand from the rule US"},
	    {&tern_hill, true, "2026-03-07", "03:00", "2026-03-08T09:00:00Z", "by hand from the rule US"},
	    {&tern_hill, true, "2026-03-07", "09:30Z", "2026-03-08T09:30:00Z", "by hand"},
	    {&tern_hill, true, "2026-03-07", "02:30-07:00", "2026-03-08T09:30:00Z", "by hand"},
	    {&tern_hill, true, "2026-03-07", "13:30", "2026-03-07T20:30:00Z",
	     "by hand: past both noons' readings, MST"},
	    {&tern_hill, true, "2026-03-06", "02:30", "2026-03-07T09:30:00Z", "by hand: the night before"},
	    /* 2026-11-01 is a Sunday, the first: 02:00 MDT becomes 01:00 MST */
	    {&tern_hill, true, "2026-10-31", "00:59", "2026-11-01T06:59:00Z", "by hand from the rule US"},
	    {&tern_hill, true, "2026-10-31", "02:00", "2026-11-01T09:00:00Z", "by hand from the rule US"},
	    {&tern_hill, true, "2026-10-31", "01:30-06:00", "2026-11-01T07:30:00Z", "by hand"},
	    {&tern_hill, true, "2026-10-31", "01:30-07:00", "2026-11-01T08:30:00Z", "by hand"},
	    {&tern_hill, true, "2026-10-31", "08:30Z", "2026-11-01T08:30:00Z", "by hand"},
	    {&tern_hill, true, "2026-10-31", "12:00", "2026-11-01T19:00:00Z", "by hand: MST"},
	    /* 2026-10-04 is a Sunday, the first: 02:00 +1030 becomes 02:30 +11; 2026-04-05 too: 02:00 +11
	       becomes 01:30 +1030 */
	    {&tern_island, true, "2026-10-03", "01:59", "2026-10-03T15:29:00Z", "by hand from the rule LH"},
	    {&tern_island, true, "2026-10-03", "02:30", "2026-10-03T15:30:00Z", "by hand from the rule LH"},
	    {&tern_island, true, "2026-04-04", "01:29", "2026-04-04T14:29:00Z", "by hand from the rule LH"},
	    {&tern_island, true, "2026-04-04", "02:00", "2026-04-04T15:30:00Z", "by hand from the rule LH"},
	    {&tern_island, true, "2026-04-04", "01:45+11:00", "2026-04-04T14:45:00Z", "by hand"},
	    {&tern_island, true, "2026-04-04", "01:45+10:30", "2026-04-04T15:15:00Z", "by hand"},
	    /* the leap second of the last night of 2016 (IERS Bulletin C 52) */
	    {&tern_hill, true, "2016-12-31", "23:59:60Z", "2016-12-31T23:59:60Z", "IERS Bulletin C 52"},
	    {&tern_hill, true, "2016-12-31", "17:00", "2017-01-01T00:00:00Z", "by hand: MST is UTC - 7 h"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct bench *b = bench_open(rows[i].site, rows[i].evening, rows[i].zone);
		double t_d;
		struct err e;
		if (plan_time(&b->clock, rows[i].text, &t_d, &e) != ST_OK)
			check_fail("%s \"%s\": %s", rows[i].evening, rows[i].text, e.text);
		check_close(rows[i].text, seconds_off(b, t_d, rows[i].utc), 0.0, 1e-4);
		bench_close(b);
	}
}

static void times_that_are_not_in_the_night(void **state)
{
	(void)state;
	static const struct {
		const struct site *site;
		const char *evening, *text, *says, *also, *source;
	} rows[] = {
	    {&tern_hill, "2026-10-31", "01:30", "comes twice this night",
	     "Sun 1 Nov 01:30 MDT (07:30 UTC) and as Sun 1 Nov 01:30 MST (08:30 UTC)", "rule US"},
	    {&tern_hill, "2026-10-31", "2026-11-01T01:30L", "comes twice this night", "MST", "rule US"},
	    {&tern_hill, "2026-03-07", "02:30", "set forward over it", "does not exist", "rule US"},
	    {&tern_hill, "2026-03-07", "2026-03-08T02:30L", "set forward over it", "does not exist",
	     "rule US"},
	    /* the noons read 12:17:26 MST and 13:17:26 MDT, so that an hour comes at both ends; in autumn
	       13:17:26 MDT and 12:17:26 MST */
	    {&tern_hill, "2026-03-07", "12:45", "comes twice this night",
	     "Sat 7 Mar 12:45 MST (19:45 UTC) and as Sun 8 Mar 12:45 MDT (18:45 UTC)", "by hand"},
	    {&tern_hill, "2026-10-31", "12:45", "not in this night",
	     "Sat 31 Oct 13:17:26 MDT (19:17:26 UTC) to Sun 1 Nov 12:17:26 MST (19:17:26 UTC)", "by hand"},
	    {&tern_island, "2026-10-03", "02:15", "set forward over it", "does not exist", "rule LH"},
	    {&tern_island, "2026-04-04", "01:45", "comes twice this night",
	     "01:45 +11 (14:45 UTC on 4 Apr) and as Sun 5 Apr 01:45 +1030 (15:15 UTC on 4 Apr)", "rule LH"},
	    {&tern_hill, "2026-04-22", "2026-04-24T05:40Z", "not in this night", "Wed 22 Apr 13:17:26 MDT",
	     "by hand"},
	    {&tern_hill, "2026-04-22", "2026-04-22T05:40Z", "not in this night", "Thu 23 Apr", "by hand"},
	    {&tern_hill, "2026-04-22", "start-1m", "not in this night", "22 Apr", "by hand"},
	    {&tern_hill, "2026-04-22", "end+1m", "not in this night", "22 Apr", "by hand"},
	    {&tern_hill, "2026-04-22", "22:40+15h", "not in this night", "22 Apr", "by hand"},
	    {&tern_hill, "2026-04-22", "23:59:60Z", "no leap second", "", "IERS Bulletin C"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct bench *b = bench_open(rows[i].site, rows[i].evening, true);
		double t_d;
		struct err e;
		assert_int_equal(plan_time(&b->clock, rows[i].text, &t_d, &e),
				 strcmp(rows[i].says, "set forward over it") == 0 ? ST_ABSENT : ST_RANGE);
		if (!strstr(e.text, rows[i].says) || !strstr(e.text, rows[i].also))
			check_fail("%s \"%s\" (%s): %s", rows[i].evening, rows[i].text, rows[i].source,
				   e.text);
		bench_close(b);
	}
}

/* --- what the Sun does --- */

static double time_of(const struct bench *b, const char *text)
{
	double t_d = (double)NAN;
	struct err e;
	if (plan_time(&b->clock, text, &t_d, &e) != ST_OK)
		check_fail("\"%s\": %s", text, e.text);
	return t_d;
}

static void sun_words(void **state)
{
	(void)state;
	struct bench *b = bench_open(&tern_hill, "2026-04-22", true);
	const struct night *n = &b->night;
	static const struct {
		const char *text;
		double sun_alt_deg;
		bool evening;
	} rows[] = {
	    /* the altitudes that the words stand for; night.h: the Sun's centre, airless */
	    {"sunset", -50.0 / 60.0, true}, {"sunrise", -50.0 / 60.0, false}, {"dusk", -12.0, true},
	    {"dawn", -12.0, false},	    {"evening-9", -9.0, true},	      {"morning-9", -9.0, false},
	    {"EVENING+4", 4.0, true},	    {"morning-17.5", -17.5, false},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		double t_d = time_of(b, rows[i].text);
		/* 0.01 s of crossing are 4e-5 deg */
		check_close(rows[i].text, night_sun_altaz(n, t_d).alt_deg, rows[i].sun_alt_deg, 1e-4);
		assert_true((t_d < 0.5) == rows[i].evening);
	}
	/* by hand: a shift is a shift */
	check_close("dusk+20m", (time_of(b, "dusk+20m") - time_of(b, "dusk")) * 1440.0, 20.0, 1e-9);
	check_close("evening-9-1h30m", (time_of(b, "evening-9-1h30m") - time_of(b, "evening-9")) * 1440.0,
		    -90.0, 1e-9);
	check_close("evening-9+20m", (time_of(b, "evening-9+20m") - time_of(b, "evening-9")) * 1440.0, 20.0,
		    1e-9);
	check_close("start", time_of(b, "start"), 0.0, 0.0);
	check_close("end", time_of(b, "end"), n->length_d, 0.0);
	check_close("end-2h", time_of(b, "end-2h"), n->length_d - 2.0 / 24.0, 1e-12);
	b->clock.sun_limit_deg = -15.0;
	check_close("dusk at the run's limit", night_sun_altaz(n, time_of(b, "dusk")).alt_deg, -15.0, 1e-4);
	bench_close(b);
}

static void halves(void **state)
{
	(void)state;
	struct bench *b = bench_open(&tern_hill, "2026-04-22", true);
	const struct night_times *t = &b->night.times;
	const double dusk = time_of(b, "dusk"), dawn = time_of(b, "dawn");
	const struct {
		const char *rule;
		double middle_d, tolerance_s;
	} rows[] = {
	    {"", 0.5 * (dusk + dawn), 1e-6},
	    {"dark", 0.5 * (dusk + dawn), 1e-6},
	    {"sunset", 0.5 * (t->sunset_d + t->sunrise_d), 1e-6},
	    /* 01:10 MDT is 07:10 UTC, 11 h 52 min 33.6 s behind the noon of 19:17:26.4: by hand */
	    {"01:10", (11.0 * 3600.0 + 52.0 * 60.0 + 33.6) / 86400.0, 1e-3},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		double from, to, from2, to2;
		struct err e;
		assert_int_equal(half_rule_parse(rows[i].rule, &b->clock.half, &e), ST_OK);
		assert_int_equal(plan_span(&b->clock, "first-half", &from, &to, &e), ST_OK);
		assert_int_equal(plan_span(&b->clock, "second-half", &from2, &to2, &e), ST_OK);
		check_close(rows[i].rule, (time_of(b, "middle") - rows[i].middle_d) * 86400.0, 0.0,
			    rows[i].tolerance_s);
		check_close("the first half begins at sunset", from, t->sunset_d, 0.0);
		check_close("the first half ends in the middle", to, time_of(b, "middle"), 0.0);
		check_close("the second half begins there", from2, to, 0.0);
		check_close("the second half ends at sunrise", to2, t->sunrise_d, 0.0);
		assert_int_equal(plan_span(&b->clock, "whole", &from2, &to, &e), ST_OK);
		check_close("whole: from", from2, from, 0.0);
		check_close("whole: to", to, to2, 0.0);
	}
	bench_close(b);
	/* a clock rule meets the repeated hour */
	b = bench_open(&tern_hill, "2026-10-31", true);
	double from, to;
	struct err e;
	assert_int_equal(half_rule_parse("01:30", &b->clock.half, &e), ST_OK);
	assert_int_equal(plan_span(&b->clock, "first-half", &from, &to, &e), ST_RANGE);
	assert_non_null(
	    strstr(e.text, "the clock time that halves the site's nights comes twice this night"));
	bench_close(b);
	static const char *const taken[] = {"18:00", "23:59", "00:00", "06:00"};
	for (size_t i = 0; i < sizeof taken / sizeof taken[0]; i++) {
		struct half_rule rule;
		assert_int_equal(half_rule_parse(taken[i], &rule, &e), ST_OK);
	}
	static const char *const wrong[] = {"light",  "1:30",  "24:00", "01:60", "12:00", "17:59",
					    "01:30Z", "dark ", "-1:00", "01:3",	 "06:01"};
	for (size_t i = 0; i < sizeof wrong / sizeof wrong[0]; i++) {
		struct half_rule rule;
		if (half_rule_parse(wrong[i], &rule, &e) == ST_OK)
			check_fail("taken: \"%s\"", wrong[i]);
	}
}

static void a_sun_that_does_not_set(void **state)
{
	(void)state;
	static const char *const absent[] = {"sunset",	  "sunrise", "dusk",	  "dawn",
					     "evening-1", "middle",  "sunset+20m"};
	double from, to, t_d;
	struct err e;
	/* at 78 N the Sun is 11 deg above the northern horizon at midsummer midnight: 23.4 - 12, by hand */
	struct bench *b = bench_open(&tern_north, "2026-06-21", false);
	for (size_t i = 0; i < sizeof absent / sizeof absent[0]; i++)
		assert_int_equal(plan_time(&b->clock, absent[i], &t_d, &e), ST_ABSENT);
	assert_non_null(strstr(e.text, "does not happen this night"));
	assert_int_equal(plan_span(&b->clock, "first-half", &from, &to, &e), ST_ABSENT);
	assert_int_equal(plan_span(&b->clock, "evening-12..02:00", &from, &to, &e), ST_ABSENT);
	assert_int_equal(plan_span(&b->clock, "whole", &from, &to, &e), ST_OK);
	check_close("whole: from noon", from, 0.0, 0.0);
	check_close("whole: to noon", to, b->night.length_d, 0.0);
	bench_close(b);
	/* at midwinter it stays 11 deg below at noon: no sunset, but -18 is passed */
	b = bench_open(&tern_north, "2026-12-21", false);
	assert_int_equal(plan_time(&b->clock, "sunset", &t_d, &e), ST_ABSENT);
	check_close("evening-18", night_sun_altaz(&b->night, time_of(b, "evening-18")).alt_deg, -18.0, 1e-4);
	assert_int_equal(plan_span(&b->clock, "evening-18..morning-18", &from, &to, &e), ST_OK);
	b->clock.sun_limit_deg = -18.0;
	assert_int_equal(plan_span(&b->clock, "first-half", &from, &to, &e), ST_OK);
	check_close("from noon", from, 0.0, 0.0);
	bench_close(b);
}

/* --- spans --- */

static void spans(void **state)
{
	(void)state;
	static const struct {
		const char *evening, *text, *from_utc, *to_utc;
	} rows[] = {
	    /* by hand, as clock_times */
	    {"2026-04-22", "22:40..01:30", "2026-04-23T04:40:00Z", "2026-04-23T07:30:00Z"},
	    {"2026-04-22", "21:00L..01:30L", "2026-04-23T03:00:00Z", "2026-04-23T07:30:00Z"},
	    {"2026-04-22", " 22:40 .. +25m", "2026-04-23T04:40:00Z", "2026-04-23T05:05:00Z"},
	    {"2026-04-22", "05:40Z..+1h30m", "2026-04-23T05:40:00Z", "2026-04-23T07:10:00Z"},
	    {"2026-04-22", "05:40Z+10m..06:40Z-10m", "2026-04-23T05:50:00Z", "2026-04-23T06:30:00Z"},
	    {"2026-10-31", "00:30..02:30", "2026-11-01T06:30:00Z", "2026-11-01T09:30:00Z"},
	    {"2026-10-31", "01:30-06:00..01:30-07:00", "2026-11-01T07:30:00Z", "2026-11-01T08:30:00Z"},
	    {"2026-10-31", "01:30-06:00..+2h", "2026-11-01T07:30:00Z", "2026-11-01T09:30:00Z"},
	    {"2026-03-07", "01:30..03:30", "2026-03-08T08:30:00Z", "2026-03-08T09:30:00Z"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct bench *b = bench_open(&tern_hill, rows[i].evening, true);
		double from, to;
		struct err e;
		if (plan_span(&b->clock, rows[i].text, &from, &to, &e) != ST_OK)
			check_fail("%s: %s", rows[i].text, e.text);
		check_close(rows[i].text, seconds_off(b, from, rows[i].from_utc), 0.0, 1e-4);
		check_close(rows[i].text, seconds_off(b, to, rows[i].to_utc), 0.0, 1e-4);
		assert_int_equal(plan_span_check(rows[i].text, &e), ST_OK);
		bench_close(b);
	}
	static const struct {
		const char *evening, *text, *says;
	} refused[] = {
	    {"2026-04-22", "01:30..22:40", "ends before it begins"},
	    {"2026-04-22", "22:40..22:40", "ends before it begins"},
	    {"2026-04-22", "dawn..dusk", "ends before it begins"},
	    {"2026-04-22", "12:00..+2h", "not in this night"}, /* 12:00 is of the second noon */
	    {"2026-04-22", "22:40..2026-04-25T01:00Z", "not in this night"},
	    {"2026-10-31", "01:30..+25m", "comes twice"},
	    {"2026-03-07", "00:30..02:30", "does not exist"},
	};
	for (size_t i = 0; i < sizeof refused / sizeof refused[0]; i++) {
		struct bench *b = bench_open(&tern_hill, refused[i].evening, true);
		double from, to;
		struct err e;
		assert_int_equal(plan_span(&b->clock, refused[i].text, &from, &to, &e),
				 strcmp(refused[i].says, "does not exist") == 0 ? ST_ABSENT : ST_RANGE);
		if (!strstr(e.text, refused[i].says))
			check_fail("%s: %s", refused[i].text, e.text);
		bench_close(b);
	}
}

/* --- texts that say nothing --- */

static void refused_and_safe(const struct bench *b, const char *text)
{
	double from, to;
	struct err e;
	if (plan_time(&b->clock, text, &from, &e) == ST_OK)
		check_fail("taken as a time: \"%s\"", text);
	for (const char *c = e.text; *c; c++)
		assert_true((unsigned char)*c >= 0x20 && *c != 0x7F);
	assert_null(strstr(e.text, "\xE2\x80\xAE"));
	if (plan_span(&b->clock, text, &from, &to, &e) == ST_OK || plan_span_check(text, &e) == ST_OK)
		check_fail("taken as a span: \"%s\"", text);
	for (const char *c = e.text; *c; c++)
		assert_true((unsigned char)*c >= 0x20 && *c != 0x7F);
}

static void texts_that_say_nothing(void **state)
{
	(void)state;
	static const char *const rows[] = {"",
					   " ",
					   "..",
					   "...",
					   "22:40..",
					   "..22:40",
					   "22:40...23:00",
					   "22:40..23:00..24:00",
					   "first-half..second-half",
					   "first-half+20m",
					   "noon",
					   "now",
					   "evening",
					   "evening-",
					   "evening--9",
					   "evening-9.5.5",
					   "evening-91",
					   "evening+20m",
					   "evening-nan",
					   "evening-1e1",
					   "24:00",
					   "22:60",
					   "2:40",
					   "22.40",
					   "22:4",
					   "22:40:60",
					   "22:40L:60",
					   "22:40ZL",
					   "22:40 Z",
					   "22:40-25:00",
					   "22:40+15:00",
					   "22:40+05:99",
					   "22:40+",
					   "22:40+20",
					   "22:40+20x",
					   "22:40+20m+20m",
					   "22:40+99999m",
					   "22:40+25h",
					   "22:40..+0m",
					   "22:40..-20m",
					   "22:40..+20",
					   "+20m",
					   "+20m..22:40",
					   "sunset20m",
					   "sunsets",
					   "sun set",
					   "2026-02-30T01:00Z",
					   "2026-04-22",
					   "2026-04-22T",
					   "2026-4-22T01:00Z",
					   "2026-04-22T25:00Z",
					   "22:40:00.",
					   "\x1b[31m22:40",
					   "22:40\x1b]0;x\x07",
					   "22:40\xE2\x80\xAE",
					   "\xFF\xFE",
					   "22:40\n..23:00\n",
					   "'; DROP TABLE plans; --",
					   "=1+1",
					   "%s%n%s%n",
					   "\xC2\xA0 22:40"};
	struct bench *b = bench_open(&tern_hill, "2026-04-22", true);
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
		refused_and_safe(b, rows[i]);
	char *wide = malloc(100001);
	assert_non_null(wide);
	memset(wide, '1', 100000);
	wide[100000] = '\0';
	refused_and_safe(b, wide);
	memset(wide, ' ', 100000);
	refused_and_safe(b, wide);
	free(wide);
	/* pieces of the grammar joined at random are taken or refused, never more; what a span check refuses
	 * no night takes */
	static const char *const pieces[] = {
	    "22:40",	   "Z", "L", "..",	   "+20m", "-06:00", "evening", "-9", "sunset", "middle",
	    "2026-04-23T", "1", ":", "first-half", " ",	   "+",	     "h",	"m",  "."};
	struct rng rng = rng_open("plan time texts");
	for (int i = 0; i < 20000; i++) {
		char text[80] = "";
		int n = (int)rng_between(&rng, 1.0, 6.0);
		for (int k = 0; k < n; k++) {
			const char *piece = pieces[(size_t)rng_between(
			    &rng, 0.0, (double)(sizeof pieces / sizeof pieces[0]))];
			snprintf(text + strlen(text), sizeof text - strlen(text), "%s", piece);
		}
		double from = -1.0, to = -1.0;
		struct err e;
		struct typed_span span;
		enum status can = typed_span_read(text, &span, &e);
		enum status is = can == ST_OK ? plan_span(&b->clock, text, &from, &to, &e) : can;
		if (is == ST_OK && !(from >= 0.0 && from < to && to <= b->night.length_d))
			check_fail("\"%s\": %g to %g", text, from, to);
		if (is != ST_OK)
			assert_true(e.text[0] != '\0');
	}
	bench_close(b);
}

/* --- echo --- */

static void echoes(void **state)
{
	(void)state;
	static const struct {
		const struct site *site;
		bool zone;
		const char *evening, *text, *echo;
	} rows[] = {
	    /* by hand; 2026-04-22 is a Wednesday */
	    {&tern_hill, true, "2026-04-22", "22:40", "Wed 22 Apr 22:40 MDT (04:40 UTC on 23 Apr)"},
	    {&tern_hill, true, "2026-04-22", "22:40:07", "Wed 22 Apr 22:40:07 MDT (04:40:07 UTC on 23 Apr)"},
	    {&tern_hill, true, "2026-04-22", "16:00", "Wed 22 Apr 16:00 MDT (22:00 UTC)"},
	    {&tern_hill, true, "2026-04-22", "22:39:59.7", "Wed 22 Apr 22:40 MDT (04:40 UTC on 23 Apr)"},
	    {&tern_hill, false, "2026-04-22", "22:40", "Wed 22 Apr 22:40 UTC"},
	    {&tern_hill, true, "2016-12-31", "23:59:60Z", "Sat 31 Dec 16:59:60 MST (23:59:60 UTC)"},
	    {&tern_island, true, "2026-04-04", "01:45+10:30", "Sun 5 Apr 01:45 +1030 (15:15 UTC on 4 Apr)"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct bench *b = bench_open(rows[i].site, rows[i].evening, rows[i].zone);
		char echo[PLAN_ECHO_BYTES];
		plan_echo(&b->clock, time_of(b, rows[i].text), echo);
		assert_string_equal(echo, rows[i].echo);
		bench_close(b);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(clock_times),
	    cmocka_unit_test(times_that_are_not_in_the_night),
	    cmocka_unit_test(sun_words),
	    cmocka_unit_test(halves),
	    cmocka_unit_test(a_sun_that_does_not_set),
	    cmocka_unit_test(spans),
	    cmocka_unit_test(texts_that_say_nothing),
	    cmocka_unit_test(echoes),
	};
	return cmocka_run_group_tests_name("plan time", tests, NULL, NULL);
}
