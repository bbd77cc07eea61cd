/* SPDX-License-Identifier: MIT
 * Time scales. A scale is a type; dates are two-part (day + fraction) so that a microsecond survives.
 * Sources: leap seconds IERS Bulletin C / USNO tai-utc.dat; TT = TAI + 32.184 s (IAU 1991);
 * TDB - TT: Astronomical Almanac two-term form, at most 3e-5 s from Fairhead & Bretagnon 1990 over 2000-2050. */
#ifndef WANE_EPHEM_TIMESCALE_H
#define WANE_EPHEM_TIMESCALE_H

#include "ephem/err.h"

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

/* A Julian date in two parts: day + frac, 0 <= frac < 1 after jd2_normal. Scale not stated: use the types below. */
struct jd2 {
	double day, frac;
};
struct tt {
	struct jd2 jd; /* Terrestrial Time */
};
struct tdb {
	struct jd2 jd; /* Barycentric Dynamical Time; also the scale of BJD_TDB values */
};
/* Coordinated Universal Time: day number (MJD of the UTC date) and second of that day, 0 <= sod_s < 86400,
 * or < 86401 on a day that ends with a leap second. */
struct utc {
	int32_t mjd;
	double sod_s;
};

/* --- two-part arithmetic --- */
/* day is a whole number or a whole number + 0.5, whichever the input's was nearest to a whole; frac in [0, 1). */
struct jd2 jd2_normal(double day, double frac);
struct jd2 jd2_add_d(struct jd2 a, double days);
/* a - b in days; exact to 1e-12 d for dates a century apart. */
double jd2_diff_d(struct jd2 a, struct jd2 b);
/* Single double, good to 4e-10 d. For series arguments only. */
double jd2_value(struct jd2 a);

/* --- leap seconds --- */
enum { LEAP_ROWS_MAX = 96 };
struct leap_row {
	int32_t mjd;              /* UTC date from which the row holds */
	double tai_minus_utc_s;   /* at that date */
	double drift_mjd, drift_s_d; /* before 1972: + (MJD - drift_mjd) * drift_s_d; 0, 0 afterwards */
};
struct leap_table {
	size_t n;
	struct leap_row row[LEAP_ROWS_MAX];
	int32_t expires_mjd; /* date after which a new bulletin may have changed the table */
};
/* The table in the source: 1960-01-01 to 37 s since 2017-01-01. */
extern const struct leap_table leap_builtin;
/* Adds a later row (whole seconds, date after the last row) and moves the expiry to at least that date + 180 d.
 * ST_RANGE when out of order, not one second from the last row, or the table is full. */
MUST_USE enum status leap_extend(struct leap_table *table, int32_t mjd, double tai_minus_utc_s, struct err *e);
/* TAI - UTC [s] at a UTC instant; before 1960 the 1960 value. */
double leap_tai_minus_utc_s(const struct leap_table *table, struct utc t);
/* Length of a UTC day [s]: 86400 or 86401. */
double leap_day_length_s(const struct leap_table *table, int32_t mjd);

/* --- conversions (exact to 1e-9 s, TDB to 3e-5 s) --- */
struct tt utc_to_tt(const struct leap_table *table, struct utc t);
struct utc tt_to_utc(const struct leap_table *table, struct tt t);
double tdb_minus_tt_s(double jd_tt);
struct tdb tt_to_tdb(struct tt t);
struct tt tdb_to_tt(struct tdb t);
/* Seconds added to a UTC instant, leap seconds counted. */
struct utc utc_add_s(const struct leap_table *table, struct utc t, double seconds);
/* b - a in SI seconds. */
double utc_diff_s(const struct leap_table *table, struct utc a, struct utc b);

/* UTC as a Julian date number: quasi-JD that stretches a leap-second day to 86401 s, as SOFA/ERFA do. */
struct utc utc_from_jd(const struct leap_table *table, struct jd2 jd);
struct jd2 utc_to_jd(const struct leap_table *table, struct utc t);

/* --- calendar (proleptic Gregorian, years 1600..2500) --- */
struct date {
	int year, month, day;
};
/* ST_RANGE for a day that does not exist. */
MUST_USE enum status date_to_mjd(struct date d, int32_t *mjd, struct err *e);
struct date date_from_mjd(int32_t mjd);
/* 0 Monday .. 6 Sunday */
int weekday_from_mjd(int32_t mjd);

/* --- text --- */
enum { UTC_TEXT_MAX = 40 };
/* `YYYY-MM-DDTHH:MM:SS[.sss]Z`, rounded half up with carry to `decimals` (0..6) places; second 60 only inside a real leap second. */
void utc_text(const struct leap_table *table, struct utc t, int decimals, char out[UTC_TEXT_MAX]);
/* Rounds to 10^-decimals s, with carry: what utc_text prints. */
struct utc utc_rounded(const struct leap_table *table, struct utc t, int decimals);
/* Reads `YYYY-MM-DDTHH:MM[:SS[.s]][Z]` (a blank or T between). ST_SYNTAX / ST_RANGE with the reason; second 60 only where the
 * table has a leap second. */
MUST_USE enum status utc_parse(const struct leap_table *table, const char *text, struct utc *out, struct err *e);
/* Reads `YYYY-MM-DD`. */
MUST_USE enum status date_parse(const char *text, struct date *out, struct err *e);

#endif
