/* SPDX-License-Identifier: MIT */
#include "tui/given.h"

#include "ephem/angle_text.h"
#include "ephem/barycentre.h"
#include "ephem/night.h"
#include "ephem/number_text.h"
#include "ephem/standard.h"
#include "ephem/units.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static enum status quoted(struct err *e, enum status s, const char *what, const char *text,
			  const char *expected)
{
	char got[ERR_QUOTE_MAX];
	err_quote(text, strlen(text), got);
	return err_set(e, s, "%s (got \"%s\", expected %s)", what, got, expected);
}

static bool is_bare_date(const char *text)
{
	return strlen(text) == 10 && text[4] == '-' && text[7] == '-';
}

static enum status year_in_range(int32_t mjd, const char *text, struct err *e)
{
	int year = date_from_mjd(mjd).year;
	if (year < GIVEN_YEAR_MIN || year > GIVEN_YEAR_MAX)
		return quoted(e, ST_RANGE, "out of range", text, "a year from 1900 to 2100");
	return ST_OK;
}

/* `2461114.708333 JD_UTC`: the scale is what follows the last blank. */
static enum status julian_time(const struct leap_table *leap, const char *text, size_t number_length,
			       struct utc *out, struct err *e)
{
	struct standard standard;
	struct jd2 value;
	struct tt t;
	enum status s = number_parse_jd2(text, number_length, &value, NULL, e);
	if (s == ST_OK)
		s = standard_parse(text + number_length + 1, &standard, e);
	if (s != ST_OK)
		return s;
	if (standard.claim != SCALE_STATED || standard.origin != ORIGIN_OBSERVER || standard.text_utc)
		return quoted(e, ST_SYNTAX, "not a scale of clocks", text,
			      "JD_UTC, JD_TT, JD_TDB or an MJD of them");
	struct jd2 jd = jd2_add_d(value, standard.offset_d);
	if (!(jd2_value(jd) > 2415020.0 && jd2_value(jd) < 2488435.0))
		return quoted(e, ST_RANGE, "out of range", text, "a date from 1900 to 2100");
	if (standard.clock == CLOCK_UTC) {
		*out = utc_from_jd(leap, jd);
		return ST_OK;
	}
	t.jd = jd;
	if (standard.clock == CLOCK_TDB)
		t = tdb_to_tt((struct tdb){.jd = jd});
	*out = tt_to_utc(leap, t);
	return ST_OK;
}

static bool looks_julian(const char *text, size_t *number_length)
{
	const char *blank = strrchr(text, ' ');
	if (!blank || blank == text || !blank[1] || (blank[1] >= '0' && blank[1] <= '9'))
		return false;
	*number_length = (size_t)(blank - text);
	return true;
}

enum status given_time(const struct leap_table *leap, const char *text, struct utc *out, struct err *e)
{
	size_t length;
	if (looks_julian(text, &length))
		return julian_time(leap, text, length, out, e);
	if (is_bare_date(text)) /* that is a night, not an instant */
		return quoted(e, ST_SYNTAX, "a date without a time", text,
			      "YYYY-MM-DDTHH:MM[:SS]Z or \"2461114.708333 JD_UTC\"");
	enum status s = utc_parse(leap, text, out, e);
	return s == ST_OK ? year_in_range(out->mjd, text, e) : s;
}

enum status given_day_or_time(const struct leap_table *leap, const char *text, struct utc *out, struct err *e)
{
	if (!is_bare_date(text))
		return given_time(leap, text, out, e);
	struct date date;
	*out = (struct utc){0};
	enum status s = date_parse(text, &date, e);
	if (s == ST_OK)
		s = date_to_mjd(date, &out->mjd, e);
	return s == ST_OK ? year_in_range(out->mjd, text, e) : s;
}

enum status given_night(const struct leap_table *leap, double lon_east_deg, const char *text, int32_t *mjd,
			struct err *e)
{
	struct utc t = {0};
	if (is_bare_date(text)) {
		struct date date;
		enum status s = date_parse(text, &date, e);
		if (s == ST_OK)
			s = date_to_mjd(date, mjd, e);
		return s == ST_OK ? year_in_range(*mjd, text, e) : s;
	}
	size_t length;
	if (!looks_julian(text, &length) && !strchr(text, ':') && !strchr(text, 'T'))
		return quoted(e, ST_SYNTAX, "not a date", text,
			      "YYYY-MM-DD, YYYY-MM-DDTHH:MMZ or \"NUMBER JD_UTC\"");
	enum status s = given_time(leap, text, &t, e);
	if (s == ST_OK)
		*mjd = night_date_of(lon_east_deg, t);
	return s == ST_OK ? year_in_range(*mjd, text, e) : s;
}

enum status given_night_check(const struct leap_table *leap, const char *text, struct err *e)
{
	int32_t mjd;
	return given_night(leap, 0.0, text, &mjd, e);
}

enum status given_now(const struct leap_table *leap, const char *text, struct utc *out, bool *running,
		      struct err *e)
{
	char copy[128];
	size_t n = strlen(text);
	if (n >= sizeof copy)
		return quoted(e, ST_SYNTAX, "not a time", text, "YYYY-MM-DDTHH:MM:SSZ");
	memcpy(copy, text, n + 1);
	*running = n > 0 && copy[n - 1] == '+';
	if (*running)
		copy[n - 1] = '\0';
	return given_time(leap, copy, out, e);
}

/* --- places and directions --- */

/* One coordinate: a number, or a number without a sign and one of two letters. */
static enum status coordinate(const char *s, size_t n, const char *what, char positive, char negative,
			      double *out, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	enum { NONE, PLUS, MINUS } letter = NONE;
	size_t digits = n;
	while (digits > 0 && s[digits - 1] == ' ')
		digits--;
	if (digits > 0 && (s[digits - 1] | 0x20) == positive)
		letter = PLUS;
	else if (digits > 0 && negative && (s[digits - 1] | 0x20) == negative)
		letter = MINUS;
	if (letter != NONE)
		digits--;
	struct err why;
	err_quote(s, n, got);
	if (number_parse(s, digits, out, NULL, &why) != ST_OK)
		return err_set(e, ST_SYNTAX, "%s: %.300s", what, why.text);
	const char *sign = memchr(s, '-', digits);
	if (letter != NONE && negative && (sign || *out < 0.0 || memchr(s, '+', digits)))
		return err_set(e, ST_SYNTAX, "%s: a sign and a letter (got \"%s\", expected one of them)",
			       what, got);
	if (letter == MINUS)
		*out = -*out;
	return ST_OK;
}

enum status given_place(const char *text, struct site *site, struct err *e)
{
	const char *first = strchr(text, ','), *second = first ? strchr(first + 1, ',') : NULL;
	double lat, lon, height;
	if (!second || strchr(second + 1, ','))
		return quoted(
		    e, ST_SYNTAX, "not a place", text,
		    "LAT,LON,HEIGHT: degrees north, degrees east, metres, as in 38.62,-109.36,2100");
	enum status s = coordinate(text, (size_t)(first - text), "latitude", 'n', 's', &lat, e);
	if (s == ST_OK)
		s = coordinate(first + 1, (size_t)(second - first - 1), "longitude", 'e', 'w', &lon, e);
	if (s == ST_OK)
		s = coordinate(second + 1, strlen(second + 1), "height", 'm', '\0', &height, e);
	if (s != ST_OK)
		return s;
	if (!(fabs(lat) <= 90.0))
		return err_set(e, ST_RANGE,
			       "latitude: out of range (got \"%g\", expected -90 to 90 deg north)", lat);
	if (!(lon >= -180.0 && lon < 360.0 + 1e-9))
		return err_set(e, ST_RANGE,
			       "longitude: out of range (got \"%g\", expected -180 to 360 deg east)", lon);
	if (!(height >= -450.0 && height <= 9000.0))
		return err_set(e, ST_RANGE, "height: out of range (got \"%g\", expected -450 to 9000 m)",
			       height);
	site->lat_deg = lat;
	site->lon_east_deg = lon > 180.0 ? lon - 360.0 : lon;
	site->height_m = height;
	return ST_OK;
}

enum status given_radec(const char *text, double *ra_deg, double *dec_deg, struct err *e)
{
	const char *comma = strchr(text, ',');
	struct err why;
	if (!comma || strchr(comma + 1, ','))
		return quoted(e, ST_SYNTAX, "not a direction", text,
			      "RA,DEC: degrees, or hh:mm:ss.s,+dd:mm:ss");
	if (ra_parse(text, (size_t)(comma - text), ra_deg, &why) != ST_OK)
		return err_set(e, why.status, "RA: %.400s", why.text);
	if (dec_parse(comma + 1, strlen(comma + 1), dec_deg, &why) != ST_OK)
		return err_set(e, why.status, "Dec: %.400s", why.text);
	return ST_OK;
}
