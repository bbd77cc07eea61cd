/* SPDX-License-Identifier: MIT */
#include "ephem/timescale.h"

#include "ephem/units.h"

#include <math.h>

/* --- two-part arithmetic --- */

struct jd2 jd2_normal(double day, double frac)
{
	double grid = round(day * 2.0) / 2.0;
	double rest = frac + (day - grid);
	double whole = floor(rest);
	struct jd2 out = {.day = grid + whole, .frac = rest - whole};
	if (out.frac >= 1.0) { /* -1e-20 rounds up to a whole day */
		out.day += 1.0;
		out.frac = 0.0;
	}
	return out;
}

struct jd2 jd2_add_d(struct jd2 a, double days)
{
	double whole = floor(days);
	return jd2_normal(a.day + whole, a.frac + (days - whole));
}

double jd2_diff_d(struct jd2 a, struct jd2 b)
{
	return (a.day - b.day) + (a.frac - b.frac);
}

double jd2_value(struct jd2 a)
{
	return a.day + a.frac;
}

/* --- leap seconds --- */

/* USNO tai-utc.dat (rows 1961 to 1972), IERS Bulletin C since; 1960 as in the IAU SOFA routine dat (both
 * checked against ERFA). To keep up: add the row of a new Bulletin C and move the expiry to the
 * date that IERS leap-seconds.list states (28 June 2026 in the list packaged with tzdata 2025b). */
const struct leap_table leap_builtin = {
    .n = 42,
    .expires_mjd = 61219, /* 2026-06-28 */
    .row =
	{
	    {36934, 1.4178180, 37300.0, 0.0012960}, /* 1960-01-01 */
	    {37300, 1.4228180, 37300.0, 0.0012960}, /* 1961-01-01 */
	    {37512, 1.3728180, 37300.0, 0.0012960}, /* 1961-08-01 */
	    {37665, 1.8458580, 37665.0, 0.0011232}, /* 1962-01-01 */
	    {38334, 1.9458580, 37665.0, 0.0011232}, /* 1963-11-01 */
	    {38395, 3.2401300, 38761.0, 0.0012960}, /* 1964-01-01 */
	    {38486, 3.3401300, 38761.0, 0.0012960}, /* 1964-04-01 */
	    {38639, 3.4401300, 38761.0, 0.0012960}, /* 1964-09-01 */
	    {38761, 3.5401300, 38761.0, 0.0012960}, /* 1965-01-01 */
	    {38820, 3.6401300, 38761.0, 0.0012960}, /* 1965-03-01 */
	    {38942, 3.7401300, 38761.0, 0.0012960}, /* 1965-07-01 */
	    {39004, 3.8401300, 38761.0, 0.0012960}, /* 1965-09-01 */
	    {39126, 4.3131700, 39126.0, 0.0025920}, /* 1966-01-01 */
	    {39887, 4.2131700, 39126.0, 0.0025920}, /* 1968-02-01 */
	    {41317, 10.0, 0.0, 0.0},		    /* 1972-01-01 */
	    {41499, 11.0, 0.0, 0.0},		    /* 1972-07-01 */
	    {41683, 12.0, 0.0, 0.0},		    /* 1973-01-01 */
	    {42048, 13.0, 0.0, 0.0},		    /* 1974-01-01 */
	    {42413, 14.0, 0.0, 0.0},		    /* 1975-01-01 */
	    {42778, 15.0, 0.0, 0.0},		    /* 1976-01-01 */
	    {43144, 16.0, 0.0, 0.0},		    /* 1977-01-01 */
	    {43509, 17.0, 0.0, 0.0},		    /* 1978-01-01 */
	    {43874, 18.0, 0.0, 0.0},		    /* 1979-01-01 */
	    {44239, 19.0, 0.0, 0.0},		    /* 1980-01-01 */
	    {44786, 20.0, 0.0, 0.0},		    /* 1981-07-01 */
	    {45151, 21.0, 0.0, 0.0},		    /* 1982-07-01 */
	    {45516, 22.0, 0.0, 0.0},		    /* 1983-07-01 */
	    {46247, 23.0, 0.0, 0.0},		    /* 1985-07-01 */
	    {47161, 24.0, 0.0, 0.0},		    /* 1988-01-01 */
	    {47892, 25.0, 0.0, 0.0},		    /* 1990-01-01 */
	    {48257, 26.0, 0.0, 0.0},		    /* 1991-01-01 */
	    {48804, 27.0, 0.0, 0.0},		    /* 1992-07-01 */
	    {49169, 28.0, 0.0, 0.0},		    /* 1993-07-01 */
	    {49534, 29.0, 0.0, 0.0},		    /* 1994-07-01 */
	    {50083, 30.0, 0.0, 0.0},		    /* 1996-01-01 */
	    {50630, 31.0, 0.0, 0.0},		    /* 1997-07-01 */
	    {51179, 32.0, 0.0, 0.0},		    /* 1999-01-01 */
	    {53736, 33.0, 0.0, 0.0},		    /* 2006-01-01 */
	    {54832, 34.0, 0.0, 0.0},		    /* 2009-01-01 */
	    {56109, 35.0, 0.0, 0.0},		    /* 2012-07-01 */
	    {57204, 36.0, 0.0, 0.0},		    /* 2015-07-01 */
	    {57754, 37.0, 0.0, 0.0},		    /* 2017-01-01 */
	},
};

enum status leap_extend(struct leap_table *table, int32_t mjd, double tai_minus_utc_s, struct err *e)
{
	enum { BULLETIN_D = 180 }; /* a bulletin speaks for half a year */
	if (table->n == 0 || table->n >= LEAP_ROWS_MAX)
		return err_set(e, ST_RANGE, "the leap-second table holds %zu rows: no room for another",
			       table->n);
	const struct leap_row *last = &table->row[table->n - 1];
	struct date d = date_from_mjd(mjd), before = date_from_mjd(last->mjd);
	if (mjd <= last->mjd)
		return err_set(e, ST_RANGE,
			       "leap second of %04d-%02d-%02d: must be after the last one, %04d-%02d-%02d",
			       d.year, d.month, d.day, before.year, before.month, before.day);
	if (fabs(tai_minus_utc_s - last->tai_minus_utc_s) != 1.0) /* NaN is refused too */
		return err_set(e, ST_RANGE,
			       "TAI-UTC %g s from %04d-%02d-%02d: must be one second from the last, %g s",
			       tai_minus_utc_s, d.year, d.month, d.day, last->tai_minus_utc_s);
	table->row[table->n++] = (struct leap_row){.mjd = mjd, .tai_minus_utc_s = tai_minus_utc_s};
	if (table->expires_mjd < mjd + BULLETIN_D)
		table->expires_mjd = mjd + BULLETIN_D;
	return ST_OK;
}

/* The row that holds on a UTC date; NULL for an empty table. Dates before the first row get the first row. */
static const struct leap_row *row_of(const struct leap_table *table, int32_t mjd)
{
	if (table->n == 0)
		return NULL;
	size_t i = table->n - 1;
	while (i > 0 && table->row[i].mjd > mjd)
		i--;
	return &table->row[i];
}

double leap_tai_minus_utc_s(const struct leap_table *table, struct utc t)
{
	const struct leap_row *row = row_of(table, t.mjd);
	if (!row)
		return 0.0;
	/* before the table its first value is kept: the drift is not carried on into decades that had no UTC
	 */
	if (t.mjd < row->mjd)
		return row->tai_minus_utc_s + (row->mjd - row->drift_mjd) * row->drift_s_d;
	return row->tai_minus_utc_s + (t.mjd - row->drift_mjd + t.sod_s / DAY_S) * row->drift_s_d;
}

double leap_day_length_s(const struct leap_table *table, int32_t mjd)
{
	const struct leap_row *today = row_of(table, mjd), *next = row_of(table, mjd + 1);
	if (!today || today == next || today->drift_s_d != 0.0)
		return DAY_S;
	return DAY_S + (next->tai_minus_utc_s - today->tai_minus_utc_s);
}

/* --- conversions --- */

struct tt utc_to_tt(const struct leap_table *table, struct utc t)
{
	double seconds = t.sod_s + leap_tai_minus_utc_s(table, t) + TT_TAI_S;
	return (struct tt){jd2_normal(t.mjd + MJD_ZERO_JD, seconds / DAY_S)};
}

/* MJD is held in 32 bits: dates beyond it (and NaN) end at its ends. */
static int32_t mjd_of(double day)
{
	if (!(day > -2e9))
		return -2000000000;
	return day < 2e9 ? (int32_t)floor(day) : 2000000000;
}

struct utc tt_to_utc(const struct leap_table *table, struct tt t)
{
	int32_t mjd = mjd_of(t.jd.day - MJD_ZERO_JD + t.jd.frac);
	/* The latest UTC date whose midnight is not after the instant: TT is ahead by about a minute, so it
	 * is this or the one before. Dates that no int holds end at 0 h of the last one that does. */
	for (int tries = 0; tries < 2; tries++, mjd--) {
		struct utc midnight = {.mjd = mjd};
		const struct leap_row *row = row_of(table, mjd);
		double rate = row && mjd >= row->mjd ? row->drift_s_d / DAY_S : 0.0;
		double since = (t.jd.day - (mjd + MJD_ZERO_JD)) * DAY_S + t.jd.frac * DAY_S - TT_TAI_S -
			       leap_tai_minus_utc_s(table, midnight);
		double sod = since / (1.0 + rate);
		if (sod >= 0.0) {
			/* before 1972 some dates ended with a step of a fraction of a second: it stays within
			 * the date */
			double length = leap_day_length_s(table, mjd);
			return (struct utc){.mjd = mjd, .sod_s = sod < length ? sod : nextafter(length, 0.0)};
		}
	}
	return (struct utc){.mjd = mjd + 1};
}

double tdb_minus_tt_s(double jd_tt)
{
	double d = jd_tt - J2000_JD;
	double g = (357.53 + 0.98560028 * d) * DEG_RAD, l = (246.11 + 0.90251792 * d) * DEG_RAD;
	return 0.001657 * sin(g) + 0.000022 * sin(l);
}

struct tdb tt_to_tdb(struct tt t)
{
	return (struct tdb){jd2_add_d(t.jd, tdb_minus_tt_s(jd2_value(t.jd)) / DAY_S)};
}

struct tt tdb_to_tt(struct tdb t)
{
	/* the difference changes by 4e-10 s during itself: no iteration is needed */
	return (struct tt){jd2_add_d(t.jd, -tdb_minus_tt_s(jd2_value(t.jd)) / DAY_S)};
}

struct utc utc_add_s(const struct leap_table *table, struct utc t, double seconds)
{
	struct tt sum = utc_to_tt(table, t);
	sum.jd = jd2_add_d(sum.jd, seconds / DAY_S);
	return tt_to_utc(table, sum);
}

double utc_diff_s(const struct leap_table *table, struct utc a, struct utc b)
{
	return ((double)b.mjd - (double)a.mjd) * DAY_S + (b.sod_s - a.sod_s) +
	       (leap_tai_minus_utc_s(table, b) - leap_tai_minus_utc_s(table, a));
}

struct utc utc_from_jd(const struct leap_table *table, struct jd2 jd)
{
	double whole = floor(jd.day - MJD_ZERO_JD), frac = jd.frac + (jd.day - MJD_ZERO_JD - whole);
	double carry = floor(frac);
	struct utc t = {.mjd = mjd_of(whole + carry)};
	double length = leap_day_length_s(table, t.mjd);
	t.sod_s = (frac - carry) * length;
	if (!(t.sod_s >= 0.0)) /* an infinite or missing date */
		t.sod_s = 0.0;
	if (t.sod_s >= length) {
		t.mjd++;
		t.sod_s = 0.0;
	}
	return t;
}

struct jd2 utc_to_jd(const struct leap_table *table, struct utc t)
{
	return jd2_normal(t.mjd + MJD_ZERO_JD, t.sod_s / leap_day_length_s(table, t.mjd));
}
