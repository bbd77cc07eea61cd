/* SPDX-License-Identifier: MIT */
#include "ephem/standard.h"

#include "ephem/number_text.h"
#include "ephem/units.h"
#include "ephem/vec3.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#define OFFSET_MAX_D 3e6 /* beyond every Julian date of use */

static char folded(char c)
{
	return c >= 'a' && c <= 'z' ? (char)(c - 'a' + 'A') : c;
}

/* Takes word from *s if it stands there, case folded. */
static bool take(const char **s, const char *word)
{
	size_t i = 0;
	for (; word[i]; i++)
		if (folded((*s)[i]) != word[i])
			return false;
	*s += i;
	return true;
}

static void skip_blanks(const char **s)
{
	while (**s == ' ' || **s == '\t')
		(*s)++;
}

static enum status refuse(const char *text, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	err_quote(text, strlen(text), got);
	return err_set(e, ST_SYNTAX,
		       "not a time scale (got \"%s\", expected one of UTC, JD_UTC, JD_TT, JD_TDB, HJD_UTC, "
		       "HJD_TT, HJD_TDB, "
		       "BJD_UTC, BJD_TT, BJD_TDB, MJD_UTC, MJD_TT, MJD_TDB, with an offset behind it as in "
		       "BJD_TDB-2457000, or BJD, HJD, JD, unknown)",
		       got);
}

/* `-2457000` up to the end of the text. */
static bool read_offset(const char *s, double *offset_d)
{
	skip_blanks(&s);
	if (*s != '-')
		return false;
	s++;
	skip_blanks(&s);
	double value;
	if (*s < '0' || *s > '9' || number_parse(s, strlen(s), &value, NULL, NULL) != ST_OK)
		return false;
	if (!(value <= OFFSET_MAX_D))
		return false;
	*offset_d += value;
	return true;
}

/* `:word`, whatever the source called its scale. */
static bool read_word(const char *s)
{
	if (*s != ':' || !s[1])
		return false;
	for (s++; *s; s++)
		if ((unsigned char)*s < 0x20 || *s == 0x7F)
			return false;
	return true;
}

static bool read_clock(const char **s, enum time_clock *clock)
{
	if (take(s, "UTC"))
		*clock = CLOCK_UTC;
	else if (take(s, "TT"))
		*clock = CLOCK_TT;
	else if (take(s, "TDB"))
		*clock = CLOCK_TDB;
	else
		return false;
	return true;
}

enum status standard_parse(const char *text, struct standard *out, struct err *e)
{
	struct standard v = {.claim = SCALE_UNKNOWN, .origin = ORIGIN_BARYCENTRE, .clock = CLOCK_TDB};
	const char *s = text;
	enum time_origin origin = ORIGIN_OBSERVER;
	skip_blanks(&s);
	size_t left = strlen(s);
	while (left > 0 && (s[left - 1] == ' ' || s[left - 1] == '\t'))
		left--;
	char copy[128];
	if (left >= sizeof copy)
		return refuse(text, e);
	memcpy(copy, s, left);
	copy[left] = '\0';
	s = copy;

	if (take(&s, "UTC")) {
		if (*s)
			return refuse(text, e);
		v = (struct standard){
		    .claim = SCALE_STATED, .origin = ORIGIN_OBSERVER, .clock = CLOCK_UTC, .text_utc = true};
	} else if (take(&s, "UNKNOWN") || !*s) {
		if (*s && !read_word(s))
			return refuse(text, e);
	} else {
		bool sun_or_barycentre = true;
		if (take(&s, "BJD")) {
			origin = ORIGIN_BARYCENTRE;
		} else if (take(&s, "HJD")) {
			origin = ORIGIN_SUN;
		} else {
			sun_or_barycentre = false;
			if (take(&s, "MJD"))
				v.offset_d = MJD_ZERO_JD;
			else if (!take(&s, "JD"))
				return refuse(text, e);
		}
		if (take(&s, "_")) {
			if (!read_clock(&s, &v.clock))
				return refuse(text, e);
			v.claim = SCALE_STATED;
			v.origin = origin;
		} else if (sun_or_barycentre) {
			v.claim = SCALE_BJD;
		}
		bool word = v.claim != SCALE_STATED && *s == ':' && read_word(s);
		if (*s && !word && !read_offset(s, &v.offset_d))
			return refuse(text, e);
	}
	*out = v;
	return ST_OK;
}

void standard_text(const struct standard *s, char *out, size_t n)
{
	static const char *const origins[] = {"JD", "HJD", "BJD"};
	static const char *const clocks[] = {"UTC", "TT", "TDB"};
	double offset = s->offset_d;
	char number[NUMBER_TEXT_MAX], name[16];
	if (s->text_utc) {
		snprintf(out, n, "UTC");
		return;
	}
	if (s->claim == SCALE_STATED && s->origin == ORIGIN_OBSERVER && offset == MJD_ZERO_JD) {
		snprintf(name, sizeof name, "MJD_%s", clocks[s->clock]);
		offset = 0.0;
	} else if (s->claim == SCALE_STATED) {
		snprintf(name, sizeof name, "%s_%s", origins[s->origin], clocks[s->clock]);
	} else if (s->claim == SCALE_UNKNOWN && offset != 0.0) {
		snprintf(name, sizeof name, "JD"); /* an offset behind `unknown` could not be read back */
	} else {
		snprintf(name, sizeof name, "%s", s->claim == SCALE_BJD ? "BJD" : "unknown");
	}
	number_text(offset, number);
	snprintf(out, n, "%s%s%s", name, offset != 0.0 ? "-" : "", offset != 0.0 ? number : "");
}

double standard_systematic_s(const struct standard *s, double ra_deg, double dec_deg)
{
	/* 499 s: light time of one au; 49 s: TDB-UTC of 69.184 s over sqrt 2, an even chance of either clock
	 * at 1 sigma */
	const double clock_s = 49.0, au_s = 499.0, obliquity_rad = 84381.406 * ARCSEC_RAD; /* IAU 2006 */
	if (s->claim == SCALE_STATED)
		return 0.0;
	if (s->claim == SCALE_BJD)
		return clock_s;
	double cos_latitude = 1.0; /* no position: the largest that it can be */
	if (isfinite(ra_deg) && isfinite(dec_deg)) {
		struct mat3 tilt = mat3_rot_x(obliquity_rad);
		struct vec3 ecliptic =
		    mat3_apply(&tilt, vec3_from_angles(ra_deg * DEG_RAD, dec_deg * DEG_RAD));
		cos_latitude = sqrt(ecliptic.x * ecliptic.x + ecliptic.y * ecliptic.y);
	}
	return hypot(clock_s, au_s * cos_latitude / sqrt(2.0));
}
