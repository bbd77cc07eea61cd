/* SPDX-License-Identifier: MIT */
#include "db/fields.h"

#include "db/text_clean.h"
#include "ephem/angle_text.h"
#include "ephem/number_text.h"
#include "ephem/units.h"

#include <math.h>
#include <stdbool.h>
#include <stdio.h>
#include <string.h>

static double *number_at(struct target *t, int field)
{
	return (double *)(void *)((char *)t + fields[field].offset);
}

static const char **text_at(struct target *t, int field)
{
	return (const char **)(void *)((char *)t + fields[field].offset);
}

static void doubt(struct target *t, int field, uint64_t *doubts)
{
	*doubts |= UINT64_C(1) << field;
	if (fields[field].kind == FIELD_NUMBER)
		*number_at(t, field) = (double)NAN;
}

static enum status out_of_range(int field, const char *text, const char *why, struct err *e)
{
	char got[ERR_QUOTE_MAX], expected[128];
	err_quote(text, strlen(text), got);
	field_expected(field, expected, sizeof expected);
	return err_set(e, ST_RANGE, "%s (got \"%s\", expected %s)", why, got, expected);
}

static enum status read_number(int field, const char *text, struct target *t, struct err *e)
{
	const struct field *f = &fields[field];
	double value;
	enum status s = number_parse(text, strlen(text), &value, NULL, e);
	if (s != ST_OK)
		return s;
	if (value < f->min || (f->open_min && !(value > f->min)))
		return out_of_range(field, text, "too small", e);
	if (value > f->max)
		return out_of_range(field, text, "too large", e);
	*number_at(t, field) = value + 0.0; /* no -0: the store would lose its sign */
	return ST_OK;
}

static enum status read_text(int field, const char *text, struct target *t, struct err *e)
{
	*text_at(t, field) = text;
	return strlen(text) <= field_text_max(field) ? ST_OK : out_of_range(field, text, "too long", e);
}

static enum status read_scale(const char *text, struct target *t, struct err *e)
{
	for (size_t i = 0, n = strlen(text); i < n;) {
		uint32_t cp;
		size_t length = utf8_decode(text + i, n - i, &cp);
		if (length == 0 || codepoint_is_hostile(cp))
			return out_of_range(FIELD_AT_SCALE, text, "a control, invisible or invalid character",
					    e);
		i += length;
	}
	enum status s = read_text(FIELD_AT_SCALE, text, t, e);
	if (s != ST_OK || standard_parse(text, &t->standard, NULL) == ST_OK)
		return s;
	(void)out_of_range(FIELD_AT_SCALE, text, "not a time scale", e);
	if (e)
		e->status = ST_SYNTAX;
	return ST_SYNTAX;
}

static enum status read_one(int field, const char *text, struct target *t, struct err *e)
{
	size_t n = strlen(text);
	switch (fields[field].kind) {
	case FIELD_NAME:
		t->name = text;
		return name_check(text, n, NULL, e);
	case FIELD_RA:
		return ra_parse(text, n, &t->ra_deg, e);
	case FIELD_DEC:
		return dec_parse(text, n, &t->dec_deg, e);
	case FIELD_DATE:
		return number_parse_jd2(text, n, &t->t0, NULL, e);
	case FIELD_SCALE:
		return read_scale(text, t, e);
	case FIELD_NUMBER:
		return read_number(field, text, t, e);
	case FIELD_TEXT:
		break;
	}
	return read_text(field, text, t, e);
}

/* The Julian date that T0 stands for must lie in 1950..2100; what an offset that was left out looks like is
 * told. */
static enum status check_date(const char *text, struct target *t, int *bad_field, struct err *e)
{
	const struct field *f = &fields[FIELD_AT_T0];
	if (t->standard.text_utc) {
		*bad_field = FIELD_AT_SCALE;
		return err_set(
		    e, ST_SYNTAX,
		    "UTC is a scale of texts, t0_jd is a number (got \"UTC\", expected JD_UTC or another)");
	}
	double jd = jd2_value(t->t0) + t->standard.offset_d;
	if (jd >= f->min && jd <= f->max)
		return ST_OK;
	*bad_field = FIELD_AT_T0;
	const char *why = "not a date of 1950 to 2100";
	if (t->standard.offset_d == 0.0 && jd >= 33282.0 && jd < 88434.0)
		why = "not a date of 1950 to 2100: an MJD? then time_scale has to say MJD_UTC or another";
	else if (t->standard.offset_d == 0.0 && jd > -10000.0 && jd < 33282.0)
		why = "not a date of 1950 to 2100: less an offset? then time_scale has to say it, as in "
		      "BJD_TDB-2457000";
	return out_of_range(FIELD_AT_T0, text, why, e);
}

/* Impact parameter in stellar radii at mid-transit (Winn 2010, arXiv:1001.2010, eq. 7, from memory). Of an
 * eccentric orbit whose orientation is not known, the least that it can be. */
static double impact(const struct target *t)
{
	double b = fabs(t->a_rs * cos(t->inc_deg * DEG_RAD));
	if (!isfinite(t->ecc))
		return b;
	if (!isfinite(t->omega_deg))
		return b * (1.0 - t->ecc);
	return b * (1.0 - t->ecc * t->ecc) / (1.0 + t->ecc * sin(t->omega_deg * DEG_RAD));
}

/* A period that is not counted, and values that can't be true together. Comparisons with NAN are false: what
 * is missing raises no doubt. */
static void doubt_pairs(struct target *t, uint64_t *doubts)
{
	if (t->period_d < PERIOD_MIN_D)
		doubt(t, FIELD_AT_PERIOD, doubts);
	if (t->t0_err_d > t->period_d)
		doubt(t, FIELD_AT_T0_ERR, doubts);
	if (t->period_err_d > t->period_d)
		doubt(t, FIELD_AT_PERIOD_ERR, doubts);
	if (fabs(t->t0_period_cov_d2) > t->t0_err_d * t->period_err_d * (1.0 + 1e-6))
		doubt(t, FIELD_AT_COVARIANCE, doubts);
	if (fabs(t->dpde_d) >= t->period_d)
		doubt(t, FIELD_AT_DPDE, doubts);
	if (t->duration_h / 24.0 >= t->period_d)
		doubt(t, FIELD_AT_DURATION, doubts);
	if (t->duration_err_h > t->duration_h)
		doubt(t, FIELD_AT_DURATION_ERR, doubts);
	double k = isfinite(t->k) ? t->k : isfinite(t->depth_ppt) ? sqrt(t->depth_ppt / 1000.0) : 0.1;
	if (impact(t) > 1.0 + k)
		doubt(t, FIELD_AT_INC, doubts);
}

/* What does not fit the other values, and what would. */
static const struct {
	int field;
	const char *why, *expected;
} misfits[] = {
    {FIELD_AT_PERIOD, "too short to be counted", "a period of at least 0.01 d"},
    {FIELD_AT_T0_ERR, "an error above the period", "an error of at most period_d"},
    {FIELD_AT_PERIOD_ERR, "an error above the period", "an error of at most period_d"},
    {FIELD_AT_COVARIANCE, "a covariance above the product of the errors",
     "at most t0_err_d times period_err_d, of either sign"},
    {FIELD_AT_DPDE, "a change as large as the period", "a change below period_d, of either sign"},
    {FIELD_AT_DURATION, "a duration as long as the period", "a duration below period_d"},
    {FIELD_AT_DURATION_ERR, "an error above the duration", "an error of at most duration_h"},
    {FIELD_AT_INC, "an impact parameter above 1 + k: no transit",
     "an inclination with which the planet crosses the star"},
};

const char *field_doubt(int field, const char *text, const char **beside)
{
	struct target t = target_empty();
	enum status s = read_one(field, text, &t, NULL);
	if (beside)
		*beside = NULL;
	if (s == ST_SYNTAX)
		return "not a number";
	if (s != ST_OK)
		return fields[field].kind == FIELD_TEXT ? "too long" : "out of range";
	for (size_t i = 0; i < sizeof misfits / sizeof misfits[0]; i++) {
		if (misfits[i].field != field)
			continue;
		if (beside)
			*beside = misfits[i].expected;
		return misfits[i].why;
	}
	return "does not fit the other values";
}

enum status fields_read(const struct field_texts *texts, struct target *t, uint64_t *doubts, int *bad_field,
			struct err *e)
{
	*t = target_empty();
	*doubts = 0;
	*bad_field = -1;
	for (int i = 0; i < FIELD_COUNT; i++) {
		const char *text = texts->text[i];
		bool needed = i == FIELD_AT_NAME || i == FIELD_AT_RA || i == FIELD_AT_DEC;
		struct err why;
		enum status s;
		if (!*text && fields[i].kind != FIELD_SCALE) {
			if (!needed)
				continue;
			char expected[128];
			field_expected(i, expected, sizeof expected);
			s = err_set(&why, ST_SYNTAX, "missing (got \"\", expected %s)", expected);
		} else {
			s = read_one(i, text, t, &why);
		}
		if (s != ST_OK && fields[i].essential) {
			*bad_field = i;
			return err_set(e, s, "%s", why.text);
		}
		if (s != ST_OK)
			doubt(t, i, doubts);
	}
	if (*texts->text[FIELD_AT_T0]) {
		enum status s = check_date(texts->text[FIELD_AT_T0], t, bad_field, e);
		if (s != ST_OK)
			return s;
	}
	doubt_pairs(t, doubts);
	return ST_OK;
}
