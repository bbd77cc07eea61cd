/* SPDX-License-Identifier: MIT
 * Local time from zone files. Expected clock changes: tzdata 2025b (rules US, LH; zones Kathmandu,
 * Kiritimati, Apia); glibc 2.36 localtime_r with the same database as the second reader; RFC 8536 for what a
 * file must look like. */
#include "tui/zone.h"

#include "tests/support/check.h"
#include "tui/zone_rule.h"

#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>
#include <unistd.h>

#define ZONEINFO "/usr/share/zoneinfo"

static int32_t mjd_of(int year, int month, int day)
{
	int32_t mjd = 0;
	struct err e;
	if (date_to_mjd((struct date){year, month, day}, &mjd, &e) != ST_OK)
		check_fail("%04d-%02d-%02d: %s", year, month, day, e.text);
	return mjd;
}

static struct utc utc_of(int year, int month, int day, int hour, int minute, double second)
{
	return (struct utc){.mjd = mjd_of(year, month, day), .sod_s = hour * 3600 + minute * 60 + second};
}

static struct zone *open_or_fail(const char *dir, const char *name)
{
	struct zone *z;
	struct err e;
	if (zone_open(dir, name, &z, &e) != ST_OK)
		check_fail("%s: %s", name, e.text);
	return z;
}

/* --- single instants --- */

static void test_utc_to_local(void **state)
{
	(void)state;
	static const struct {
		const char *zone;
		int utc[5];
		int local[5];
		int offset_s;
		const char *abbreviation, *source;
	} rows[] = {
	    {"America/Denver",
	     {2026, 3, 8, 8, 59},
	     {2026, 3, 8, 1, 59},
	     -25200,
	     "MST",
	     "tzdata 2025b rule US"},
	    {"America/Denver", {2026, 3, 8, 9, 0}, {2026, 3, 8, 3, 0}, -21600, "MDT", "tzdata 2025b rule US"},
	    {"America/Denver",
	     {2026, 11, 1, 7, 59},
	     {2026, 11, 1, 1, 59},
	     -21600,
	     "MDT",
	     "tzdata 2025b rule US"},
	    {"America/Denver",
	     {2026, 11, 1, 8, 0},
	     {2026, 11, 1, 1, 0},
	     -25200,
	     "MST",
	     "tzdata 2025b rule US"},
	    {"America/Denver",
	     {2026, 4, 23, 4, 30},
	     {2026, 4, 22, 22, 30},
	     -21600,
	     "MDT",
	     "tzdata 2025b rule US"},
	    /* second Sunday of March 2051 is the 12th, first Sunday of November the 5th: past every table, by
	       the footer */
	    {"America/Denver",
	     {2051, 3, 12, 8, 59},
	     {2051, 3, 12, 1, 59},
	     -25200,
	     "MST",
	     "tzdata 2025b rule US"},
	    {"America/Denver",
	     {2051, 3, 12, 9, 0},
	     {2051, 3, 12, 3, 0},
	     -21600,
	     "MDT",
	     "tzdata 2025b rule US"},
	    {"America/Denver",
	     {2051, 11, 5, 8, 0},
	     {2051, 11, 5, 1, 0},
	     -25200,
	     "MST",
	     "tzdata 2025b rule US"},
	    /* before 2007 the rule was another: first Sunday of April */
	    {"America/Denver",
	     {1999, 4, 4, 8, 59},
	     {1999, 4, 4, 1, 59},
	     -25200,
	     "MST",
	     "tzdata 2025b rule US"},
	    {"America/Denver", {1999, 4, 4, 9, 0}, {1999, 4, 4, 3, 0}, -21600, "MDT", "tzdata 2025b rule US"},
	    {"Australia/Lord_Howe",
	     {2026, 4, 4, 14, 59},
	     {2026, 4, 5, 1, 59},
	     39600,
	     "+11",
	     "tzdata 2025b rule LH"},
	    {"Australia/Lord_Howe",
	     {2026, 4, 4, 15, 0},
	     {2026, 4, 5, 1, 30},
	     37800,
	     "+1030",
	     "tzdata 2025b rule LH"},
	    {"Australia/Lord_Howe",
	     {2026, 10, 3, 15, 30},
	     {2026, 10, 4, 2, 30},
	     39600,
	     "+11",
	     "tzdata 2025b rule LH"},
	    {"Asia/Kathmandu", {2026, 1, 1, 0, 0}, {2026, 1, 1, 5, 45}, 20700, "+0545", "tzdata 2025b"},
	    {"Asia/Kathmandu", {1985, 12, 31, 18, 0}, {1985, 12, 31, 23, 30}, 19800, "+0530", "tzdata 2025b"},
	    {"Pacific/Kiritimati", {2026, 1, 1, 11, 0}, {2026, 1, 2, 1, 0}, 50400, "+14", "tzdata 2025b"},
	    {"Pacific/Apia", {2011, 12, 30, 9, 59}, {2011, 12, 29, 23, 59}, -36000, "-10", "tzdata 2025b"},
	    {"Pacific/Apia", {2011, 12, 30, 10, 0}, {2011, 12, 31, 0, 0}, 50400, "+14", "tzdata 2025b"},
	    /* daylight time that is behind standard time */
	    {"Europe/Dublin",
	     {2026, 7, 1, 12, 0},
	     {2026, 7, 1, 13, 0},
	     3600,
	     "IST",
	     "tzdata 2025b rule Eire"},
	    {"Europe/Dublin", {2060, 1, 1, 12, 0}, {2060, 1, 1, 12, 0}, 0, "GMT", "tzdata 2025b rule Eire"},
	    {"Etc/UTC", {2026, 7, 1, 12, 0}, {2026, 7, 1, 12, 0}, 0, "UTC", "tzdata 2025b"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		const int *u = rows[i].utc, *w = rows[i].local;
		struct zone *z = open_or_fail(ZONEINFO, rows[i].zone);
		struct local_time l = zone_local(z, utc_of(u[0], u[1], u[2], u[3], u[4], 12.25));
		if (l.mjd != mjd_of(w[0], w[1], w[2]) || l.offset_s != rows[i].offset_s ||
		    strcmp(l.abbreviation, rows[i].abbreviation) != 0)
			check_fail("%s row %zu: got MJD %d offset %d %s", rows[i].zone, i, (int)l.mjd,
				   l.offset_s, l.abbreviation);
		check_close(rows[i].zone, l.sod_s, w[3] * 3600 + w[4] * 60 + 12.25, 0.0);
		assert_false(l.leap_second);
		zone_close(z);
	}
}

static void test_local_to_utc(void **state)
{
	(void)state;
	static const struct {
		const char *zone;
		int local[5];
		int n;
		int utc[2][5];
	} rows[] = {
	    {"America/Denver", {2026, 3, 8, 1, 59}, 1, {{2026, 3, 8, 8, 59}}},
	    {"America/Denver", {2026, 3, 8, 2, 0}, 0, {{0}}},
	    {"America/Denver", {2026, 3, 8, 2, 30}, 0, {{0}}},
	    {"America/Denver", {2026, 3, 8, 3, 0}, 1, {{2026, 3, 8, 9, 0}}},
	    {"America/Denver", {2026, 11, 1, 0, 59}, 1, {{2026, 11, 1, 6, 59}}},
	    {"America/Denver", {2026, 11, 1, 1, 0}, 2, {{2026, 11, 1, 7, 0}, {2026, 11, 1, 8, 0}}},
	    {"America/Denver", {2026, 11, 1, 1, 30}, 2, {{2026, 11, 1, 7, 30}, {2026, 11, 1, 8, 30}}},
	    {"America/Denver", {2026, 11, 1, 2, 0}, 1, {{2026, 11, 1, 9, 0}}},
	    {"America/Denver", {2051, 3, 12, 2, 30}, 0, {{0}}},
	    {"America/Denver", {2051, 11, 5, 1, 30}, 2, {{2051, 11, 5, 7, 30}, {2051, 11, 5, 8, 30}}},
	    {"Australia/Lord_Howe", {2026, 4, 5, 1, 29}, 1, {{2026, 4, 4, 14, 29}}},
	    {"Australia/Lord_Howe", {2026, 4, 5, 1, 45}, 2, {{2026, 4, 4, 14, 45}, {2026, 4, 4, 15, 15}}},
	    {"Australia/Lord_Howe", {2026, 4, 5, 2, 0}, 1, {{2026, 4, 4, 15, 30}}},
	    {"Australia/Lord_Howe", {2026, 10, 4, 2, 15}, 0, {{0}}},
	    {"Australia/Lord_Howe", {2026, 10, 4, 2, 30}, 1, {{2026, 10, 3, 15, 30}}},
	    {"Asia/Kathmandu", {2026, 1, 1, 0, 0}, 1, {{2025, 12, 31, 18, 15}}},
	    {"Pacific/Kiritimati", {2026, 1, 1, 0, 0}, 1, {{2025, 12, 31, 10, 0}}},
	    {"Pacific/Apia", {2011, 12, 29, 23, 59}, 1, {{2011, 12, 30, 9, 59}}},
	    {"Pacific/Apia", {2011, 12, 30, 0, 0}, 0, {{0}}},
	    {"Pacific/Apia", {2011, 12, 30, 12, 0}, 0, {{0}}},
	    {"Pacific/Apia", {2011, 12, 30, 23, 59}, 0, {{0}}},
	    {"Pacific/Apia", {2011, 12, 31, 0, 0}, 1, {{2011, 12, 30, 10, 0}}},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		const int *w = rows[i].local;
		struct zone *z = open_or_fail(ZONEINFO, rows[i].zone);
		struct utc out[2];
		int n = zone_utc(z, mjd_of(w[0], w[1], w[2]), w[3] * 3600 + w[4] * 60 + 0.5, out);
		if (n != rows[i].n)
			check_fail("%s row %zu: %d answers, %d expected", rows[i].zone, i, n, rows[i].n);
		for (int k = 0; k < n; k++) {
			const int *u = rows[i].utc[k];
			assert_int_equal(out[k].mjd, mjd_of(u[0], u[1], u[2]));
			check_close(rows[i].zone, out[k].sod_s, u[3] * 3600 + u[4] * 60 + 0.5, 0.0);
		}
		zone_close(z);
	}
}

static void test_utc_itself_and_leap_second(void **state)
{
	(void)state;
	struct local_time l = zone_local(NULL, utc_of(2026, 4, 23, 4, 30, 1.5));
	assert_int_equal(l.mjd, mjd_of(2026, 4, 23));
	assert_int_equal(l.offset_s, 0);
	assert_string_equal(l.abbreviation, "UTC");
	check_close("second of day", l.sod_s, 4 * 3600 + 30 * 60 + 1.5, 0.0);
	struct utc out[2];
	assert_int_equal(zone_utc(NULL, 61153, 3.25, out), 1);
	assert_int_equal(out[0].mjd, 61153);
	check_close("second of day", out[0].sod_s, 3.25, 0.0);
	/* 2016-12-31T23:59:60.5Z, the leap second of IERS Bulletin C 52: 16:59:60.5 in Denver */
	struct zone *z = open_or_fail(ZONEINFO, "America/Denver");
	l = zone_local(z, (struct utc){.mjd = mjd_of(2016, 12, 31), .sod_s = 86400.5});
	assert_true(l.leap_second);
	assert_int_equal(l.mjd, mjd_of(2016, 12, 31));
	check_close("second before", l.sod_s, 16 * 3600 + 59 * 60 + 59.5, 0.0);
	zone_close(z);
}

/* --- against glibc --- */

static void set_zone(const char *tz)
{
	assert_int_equal(setenv("TZ", tz, 1), 0);
	tzset();
}

static bool same_as_glibc(const struct zone *z, const char *name, int64_t t)
{
	struct tm tm;
	time_t at = (time_t)t;
	assert_non_null(localtime_r(&at, &tm));
	int64_t day = t / 86400 - (t % 86400 < 0 ? 1 : 0);
	struct local_time l =
	    zone_local(z, (struct utc){.mjd = (int32_t)(day + 40587), .sod_s = (double)(t - day * 86400)});
	int32_t mjd = mjd_of(tm.tm_year + 1900, tm.tm_mon + 1, tm.tm_mday);
	int sod = tm.tm_hour * 3600 + tm.tm_min * 60 + tm.tm_sec;
	if (l.mjd == mjd && (int)l.sod_s == sod && l.offset_s == tm.tm_gmtoff &&
	    strcmp(l.abbreviation, tm.tm_zone) == 0)
		return true;
	print_error("%s at %lld: got MJD %d second %.0f offset %d %s, glibc MJD %d second %d offset %ld %s\n",
		    name, (long long)t, (int)l.mjd, l.sod_s, l.offset_s, l.abbreviation, (int)mjd, sod,
		    tm.tm_gmtoff, tm.tm_zone);
	return false;
}

static int64_t random_instant(struct rng *r, double from_year, double to_year)
{
	return (int64_t)((rng_between(r, from_year, to_year) - 1970.0) * 31556952.0);
}

/* Every zone of the database at random instants. Before 1972 zones without a written standard differ in
 * nothing either. */
static void test_all_zones_against_glibc(void **state)
{
	(void)state;
	struct rng r = rng_open("zones against glibc");
	FILE *table = fopen(ZONEINFO "/zone1970.tab", "r");
	assert_non_null(table);
	char line[512], name[ZONE_NAME_MAX];
	int zones = 0, bad = 0;
	while (fgets(line, sizeof line, table)) {
		if (line[0] == '#' || sscanf(line, "%*s %*s %63s", name) != 1)
			continue;
		struct zone *z = open_or_fail(ZONEINFO, name);
		set_zone(name);
		for (int i = 0; i < 400; i++)
			bad +=
			    same_as_glibc(
				z, name, random_instant(&r, i % 2 ? 1900.0 : 1990.0, i % 4 ? 2060.0 : 2400.0))
				? 0
				: 1;
		zones++;
		zone_close(z);
	}
	fclose(table);
	assert_true(zones > 300);
	assert_int_equal(bad, 0);
}

static long glibc_offset_s(int64_t t)
{
	struct tm tm;
	time_t at = (time_t)t;
	assert_non_null(localtime_r(&at, &tm));
	return tm.tm_gmtoff;
}

/* Both seconds at every clock change from 1990 to 2060 that glibc knows. */
static void test_changes_to_the_second(void **state)
{
	(void)state;
	static const char *const zones[] = {
	    "America/Denver",	"Australia/Lord_Howe", "Pacific/Apia",	       "Europe/Dublin",
	    "America/Santiago", "Africa/Casablanca",   "America/Scoresbysund", "Asia/Gaza",
	    "America/Nuuk",	"Antarctica/Troll",    "Pacific/Auckland",     "Asia/Tehran"};
	int changes = 0, bad = 0;
	for (size_t i = 0; i < sizeof zones / sizeof zones[0]; i++) {
		struct zone *z = open_or_fail(ZONEINFO, zones[i]);
		set_zone(zones[i]);
		for (int64_t t = 631152000; t < 2840140800; t += 43200) {
			int64_t lo = t, hi = t + 43200;
			if (glibc_offset_s(lo) == glibc_offset_s(hi))
				continue;
			while (hi - lo > 1) {
				int64_t middle = lo + (hi - lo) / 2;
				if (glibc_offset_s(middle) == glibc_offset_s(t))
					lo = middle;
				else
					hi = middle;
			}
			bad += same_as_glibc(z, zones[i], lo) ? 0 : 1;
			bad += same_as_glibc(z, zones[i], hi) ? 0 : 1;
			changes++;
		}
		zone_close(z);
	}
	assert_true(changes > 1000);
	assert_int_equal(bad, 0);
}

static void test_footer_rules_against_glibc(void **state)
{
	(void)state;
	static const char *const rules[] = {
	    "MST7",
	    "MST7MDT,M3.2.0,M11.1.0",
	    "<+1030>-10:30<+11>-11,M10.1.0,M4.1.0",
	    "IST-1GMT0,M10.5.0,M3.5.0/1",
	    "<-03>3<-02>,M3.5.0/-2,M10.5.0/-1",
	    "EET-2EEST,M3.4.4/50,M10.4.4/50",
	    "NZST-12NZDT,M9.5.0,M4.1.0/3",
	    "<+00>0<+02>-2,M3.5.0/1,M10.5.0/3",
	    "AAA3BBB,J60/1:30,J300",
	    "AAA-5:30BBB-7,59/0,300/24",
	};
	struct rng r = rng_open("footer rules against glibc");
	int bad = 0;
	for (size_t i = 0; i < sizeof rules / sizeof rules[0]; i++) {
		struct zone_rule rule;
		struct err e;
		if (zone_rule_parse(rules[i], strlen(rules[i]), &rule, &e) != ST_OK)
			check_fail("%s: %s", rules[i], e.text);
		set_zone(rules[i]);
		for (int k = 0; k < 3000; k++) {
			int64_t t = random_instant(&r, 1971.0, 2400.0);
			struct tm tm;
			time_t at = (time_t)t;
			assert_non_null(localtime_r(&at, &tm));
			const struct zone_type *type = zone_rule_at(&rule, t);
			if (type->offset_s == tm.tm_gmtoff && strcmp(type->abbreviation, tm.tm_zone) == 0)
				continue;
			print_error("%s at %lld: got %d %s, glibc %ld %s\n", rules[i], (long long)t,
				    type->offset_s, type->abbreviation, tm.tm_gmtoff, tm.tm_zone);
			bad++;
		}
	}
	assert_int_equal(bad, 0);
	/* daylight time all year, the form that RFC 8536 3.3.1 gives as its example */
	struct zone_rule all_year;
	const char *text = "EST5EDT,0/0,J365/25";
	assert_int_equal(zone_rule_parse(text, strlen(text), &all_year, NULL), ST_OK);
	for (int k = 0; k < 3000; k++)
		assert_string_equal(zone_rule_at(&all_year, random_instant(&r, 1971.0, 2400.0))->abbreviation,
				    "EDT");
}

/* Local to UTC: every offset of whole quarters is tried, and zone_local (held against glibc above) judges. */
static void test_local_to_utc_by_trial(void **state)
{
	(void)state;
	static const char *const zones[] = {"America/Denver",	 "Australia/Lord_Howe", "Pacific/Apia",
					    "Africa/Casablanca", "Antarctica/Troll",	"Asia/Kathmandu"};
	struct rng r = rng_open("local to UTC by trial");
	for (size_t i = 0; i < sizeof zones / sizeof zones[0]; i++) {
		struct zone *z = open_or_fail(ZONEINFO, zones[i]);
		for (int k = 0; k < 1000; k++) {
			int64_t local = random_instant(&r, 1990.0, 2080.0);
			int32_t day = (int32_t)(local / 86400);
			double sod = (double)(local % 86400);
			int n = 0;
			struct utc want[4], got[2];
			for (int offset_s = 15 * 3600; offset_s >= -15 * 3600 && n < 4; offset_s -= 900) {
				int64_t t = local - offset_s;
				struct utc u = {.mjd = (int32_t)(t / 86400) + 40587,
						.sod_s = (double)(t % 86400)};
				if (zone_local(z, u).offset_s == offset_s)
					want[n++] = u;
			}
			assert_int_equal(zone_utc(z, day + 40587, sod, got), n);
			for (int a = 0; a < n; a++) {
				assert_int_equal(got[a].mjd, want[a].mjd);
				check_close(zones[i], got[a].sod_s, want[a].sod_s, 0.0);
			}
		}
		zone_close(z);
	}
}

/* --- names and files that must be refused --- */

static void test_names(void **state)
{
	(void)state;
	static const struct {
		const char *name;
		enum status status;
	} rows[] = {
	    {"", ST_SYNTAX},
	    {"/etc/passwd", ST_SYNTAX},
	    {"../zoneinfo/UTC", ST_SYNTAX},
	    {"America/../UTC", ST_SYNTAX},
	    {"America//Denver", ST_SYNTAX},
	    {"America/Denver/", ST_SYNTAX},
	    {"America/.Denver", ST_SYNTAX},
	    {"America/Den ver", ST_SYNTAX},
	    {"America/Denver\n", ST_SYNTAX},
	    {"M\xC3\xBCnchen", ST_SYNTAX},
	    {"%s%n", ST_SYNTAX},
	    {"Abcdefghij/Abcdefghij/Abcdefghij/Abcdefghij/Abcdefghij/Abcdefghij", ST_SYNTAX},
	    {"Europe/Madird", ST_ABSENT},
	    {"America", ST_IO},
	    {"zone1970.tab", ST_SYNTAX}, /* a file, but no zone */
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct zone *z = NULL;
		struct err e = {.status = ST_OK};
		enum status s = zone_open(ZONEINFO, rows[i].name, &z, &e);
		if (s != rows[i].status || z || e.text[0] == '\0')
			check_fail("\"%s\": status %d, %d expected (%s)", rows[i].name, s, rows[i].status,
				   e.text);
	}
	struct zone *z = NULL;
	if (access(ZONEINFO "/right/America/Denver", R_OK) == 0)
		assert_int_equal(zone_open(ZONEINFO, "right/America/Denver", &z, NULL), ST_SYNTAX);
}

static void test_rules_refused(void **state)
{
	(void)state;
	static const char *const rules[] = {"",
					    "MS7",
					    "MST",
					    "MST25",
					    "MST7:60",
					    "MST7MDT",
					    "MST7MDT,M3.2.0",
					    "MST7MDT,M3.2.0,M11.1.0,",
					    "MST7MDT,M13.2.0,M11.1.0",
					    "MST7MDT,M3.6.0,M11.1.0",
					    "MST7MDT,M3.2.7,M11.1.0",
					    "MST7MDT,J0,M11.1.0",
					    "MST7MDT,J366,M11.1.0",
					    "MST7MDT,366,M11.1.0",
					    "MST7MDT,M3.2.0/168,M11.1.0",
					    "<+05:45>-5:45",
					    "<+0545-5:45",
					    "<\x1b[31m>-5",
					    "ABCDEFGHIJKLMNOPQ7",
					    "MST99999999999999999999"};
	for (size_t i = 0; i < sizeof rules / sizeof rules[0]; i++) {
		struct zone_rule rule;
		struct err e;
		if (zone_rule_parse(rules[i], strlen(rules[i]), &rule, &e) != ST_SYNTAX)
			check_fail("\"%s\" was taken", rules[i]);
	}
}

struct scratch {
	char dir[64], path[96];
	unsigned char bytes[8192];
	size_t n;
};

static int scratch_open(void **state)
{
	static struct scratch s;
	snprintf(s.dir, sizeof s.dir, "/tmp/wane-zone-XXXXXX");
	if (!mkdtemp(s.dir))
		return -1;
	snprintf(s.path, sizeof s.path, "%s/Zone", s.dir);
	FILE *f = fopen(ZONEINFO "/America/Denver", "rb");
	if (!f)
		return -1;
	s.n = fread(s.bytes, 1, sizeof s.bytes, f);
	fclose(f);
	*state = &s;
	return s.n > 0 && s.n < sizeof s.bytes ? 0 : -1;
}

static int scratch_close(void **state)
{
	struct scratch *s = *state;
	unlink(s->path);
	return rmdir(s->dir);
}

static void scratch_write(const struct scratch *s, const unsigned char *bytes, size_t n)
{
	FILE *f = fopen(s->path, "wb");
	assert_non_null(f);
	assert_int_equal(fwrite(bytes, 1, n, f), n);
	assert_int_equal(fclose(f), 0);
}

static void test_truncated(void **state)
{
	struct scratch *s = *state;
	for (size_t n = 0; n < s->n; n++) {
		struct zone *z = NULL;
		struct err e;
		scratch_write(s, s->bytes, n);
		if (zone_open(s->dir, "Zone", &z, &e) != ST_SYNTAX || z)
			check_fail("the first %zu of %zu bytes were taken", n, s->n);
	}
	scratch_write(s, s->bytes, s->n);
	zone_close(open_or_fail(s->dir, "Zone"));
}

/* Bytes changed at random: refused, or a zone whose answers are possible. Under the sanitizers no read may
 * leave the file. */
static void test_damaged(void **state)
{
	struct scratch *s = *state;
	struct rng r = rng_open("damaged zone files");
	unsigned char bytes[sizeof s->bytes];
	for (int i = 0; i < 3000; i++) {
		memcpy(bytes, s->bytes, s->n);
		for (int k = 0; k < 1 + i % 4; k++) {
			size_t at = (size_t)rng_between(&r, 0.0, i % 2 ? 120.0 : (double)s->n);
			bytes[at] = (unsigned char)rng_between(&r, 0.0, 256.0);
		}
		scratch_write(s, bytes, s->n);
		struct zone *z = NULL;
		if (zone_open(s->dir, "Zone", &z, NULL) != ST_OK)
			continue;
		for (int k = 0; k < 20; k++) {
			int64_t t = random_instant(&r, 1900.0, 2300.0);
			int64_t day = t / 86400 - (t % 86400 < 0 ? 1 : 0);
			struct utc u = {.mjd = (int32_t)(day + 40587), .sod_s = (double)(t - day * 86400)},
				   out[2];
			struct local_time l = zone_local(z, u);
			assert_in_range(l.offset_s + 90000, 0, 90000 + 93600);
			assert_in_range((int)l.sod_s, 0, 86399);
			/* our instant is among the answers, unless a damaged table holds a third one that day
			 */
			int n = zone_utc(z, l.mjd, l.sod_s, out);
			assert_in_range(n, 1, 2);
			assert_true(n == 2 || (out[0].mjd == u.mjd && (int)out[0].sod_s == (int)u.sod_s));
		}
		zone_close(z);
	}
}

/* A file with nothing but a footer (the short form that zone compilers write today), and one of version 1. */
static void test_short_forms(void **state)
{
	struct scratch *s = *state;
	unsigned char bytes[256] = {0};
	size_t n = 0;
	for (int block = 0; block < 2; block++) {
		memcpy(bytes + n, "TZif2", 5);
		bytes[n + 39] = 1; /* one kind of local time */
		bytes[n + 43] = 4; /* four bytes of abbreviations */
		memcpy(bytes + n + 44, "\xFF\xFF\x9D\x90\0\0MST\0", 10);
		n += 54;
	}
	const char *footer = "\nMST7MDT,M3.2.0,M11.1.0\n";
	memcpy(bytes + n, footer, strlen(footer));
	scratch_write(s, bytes, n + strlen(footer));
	struct zone *z = open_or_fail(s->dir, "Zone");
	assert_int_equal(zone_local(z, utc_of(2026, 4, 23, 4, 30, 0)).offset_s, -21600);
	assert_int_equal(zone_local(z, utc_of(2026, 1, 23, 4, 30, 0)).offset_s, -25200);
	zone_close(z);

	bytes[4] = '\0'; /* version 1: one block, no footer */
	scratch_write(s, bytes, 54);
	z = open_or_fail(s->dir, "Zone");
	assert_int_equal(zone_local(z, utc_of(2026, 4, 23, 4, 30, 0)).offset_s, -25200);
	assert_string_equal(zone_local(z, utc_of(2026, 4, 23, 4, 30, 0)).abbreviation, "MST");
	zone_close(z);

	bytes[50] = 0x1B; /* an escape code in the abbreviation must not reach a screen */
	scratch_write(s, bytes, 54);
	assert_int_equal(zone_open(s->dir, "Zone", &z, NULL), ST_SYNTAX);
}

/* Tables that no compiler of zones writes: two changes at one instant, a change to a kind that is not there,
 * leap seconds counted. */
static void test_impossible_tables(void **state)
{
	struct scratch *s = *state;
	static const struct {
		unsigned char at, value;
		enum status status;
	} rows[] = {
	    {0, 'T', ST_OK},	   /* as it is below */
	    {51, 1, ST_SYNTAX},	   /* the second change as late as the first */
	    {48, 0xFF, ST_SYNTAX}, /* the second change before the first */
	    {53, 2, ST_SYNTAX},	   /* of two kinds the third */
	    {31, 1, ST_SYNTAX},	   /* one leap second */
	    {39, 0, ST_SYNTAX},	   /* no kind of local time */
	    {54, 0x7F, ST_SYNTAX}, /* an offset of years */
	    {58, 2, ST_SYNTAX},	   /* neither standard nor daylight time */
	    {59, 4, ST_SYNTAX},	   /* an abbreviation behind the end */
	    {69, 'A', ST_SYNTAX},  /* one without an end */
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		unsigned char bytes[128] = "TZif";
		bytes[35] = 2; /* two changes, */
		bytes[39] = 2; /* two kinds, */
		bytes[43] = 4; /* four bytes of abbreviations */
		memcpy(bytes + 44, "\0\0\0\1\0\0\0\2\0\1", 10);
		memcpy(bytes + 54, "\0\0\0\0\0\0\0\0\x0E\x10\1\0UTC\0", 16);
		bytes[rows[i].at] = rows[i].value;
		scratch_write(s, bytes, 70 + 8); /* room for what a leap second would take */
		struct zone *z = NULL;
		enum status status = zone_open(s->dir, "Zone", &z, NULL);
		if (status != rows[i].status)
			check_fail("row %zu: status %d, %d expected", i, status, rows[i].status);
		zone_close(z);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_utc_to_local),
	    cmocka_unit_test(test_local_to_utc),
	    cmocka_unit_test(test_utc_itself_and_leap_second),
	    cmocka_unit_test(test_all_zones_against_glibc),
	    cmocka_unit_test(test_changes_to_the_second),
	    cmocka_unit_test(test_footer_rules_against_glibc),
	    cmocka_unit_test(test_local_to_utc_by_trial),
	    cmocka_unit_test(test_names),
	    cmocka_unit_test(test_rules_refused),
	    cmocka_unit_test_setup_teardown(test_truncated, scratch_open, scratch_close),
	    cmocka_unit_test_setup_teardown(test_damaged, scratch_open, scratch_close),
	    cmocka_unit_test_setup_teardown(test_short_forms, scratch_open, scratch_close),
	    cmocka_unit_test_setup_teardown(test_impossible_tables, scratch_open, scratch_close),
	};
	return cmocka_run_group_tests_name("zone", tests, NULL, NULL);
}
