/* SPDX-License-Identifier: MIT
 * The table of a telescope's fields. Ranges, lengths and words agree with the schema (schema_plans.c); a test
 * compares them. */
#include "db/telescopes.h"

#include "db/telescope_rows.h"
#include "db/text_clean.h"
#include "ephem/number_text.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#define NUMBER(member, unit, min, max, sentence)                                                             \
	{                                                                                                    \
#member, unit, TELESCOPE_NUMBER, offsetof(struct telescope, member), min, max, sentence      \
	}
#define TEXT(member, max, sentence)                                                                          \
	{                                                                                                    \
#member, "", TELESCOPE_TEXT, offsetof(struct telescope, member), 0, max, sentence            \
	}

const struct telescope_field telescope_fields[] = {
    NUMBER(slew_deg_s, "deg/s", 0.01, 100, "Speed of a move from one star to another."),
    NUMBER(settle_min, "min", 0, 120, "Centring and settling after each move."),
    NUMBER(filter_min, "min", 0, 60, "Change of filter between neighbours that need different ones."),
    NUMBER(field_arcmin, "arcmin", 0, 600,
	   "Width of the field: stars closer together than half of it share a pointing."),
    {"mount", "", TELESCOPE_MOUNT, offsetof(struct telescope, mount), 0, 0,
     "Kind of mount: german, fork or altaz; only a german one flips at the meridian."},
    NUMBER(alt_min_deg, "deg", 0, 90, "Lowest altitude that it can be pointed to."),
    NUMBER(alt_max_deg, "deg", 0, 90, "Highest altitude that it can be pointed to."),
    NUMBER(ha_east_h, "h", 0, 12, "How far east of the meridian it reaches, in hour angle."),
    NUMBER(ha_west_h, "h", 0, 12, "How far west of the meridian it reaches, in hour angle."),
    NUMBER(zenith_deg, "deg", 0, 45, "Radius round the zenith that it can't follow a star through."),
    NUMBER(flip_min, "min", 0, 120,
	   "What a meridian flip takes, centring included; 5 where it is not given."),
    NUMBER(flip_before_min, "min", 0, 360,
	   "How long before a star's transit of the meridian it may flip; 0 where it is not given."),
    NUMBER(flip_after_min, "min", 0, 360,
	   "How long it may track past the meridian before it has to flip; 0 where it is not given."),
    NUMBER(aperture_m, "m", 0.01, 100, "Diameter of the aperture."),
    NUMBER(obstruction, "", 0, 0.95, "Diameter of the central obstruction over that of the aperture."),
    NUMBER(throughput, "", 0.001, 1, "Share of the light that is counted: optics, filter and detector."),
    TEXT(band, 20, "The band that it observes in."),
    NUMBER(pixel_arcsec, "arcsec", 0.01, 100, "Width of a pixel on the sky."),
    NUMBER(gain_e_adu, "e/ADU", 0.01, 100, "Electrons a count of the detector stands for."),
    NUMBER(read_noise_e, "e", 0, 1000, "Read noise of a pixel."),
    NUMBER(dark_e_s, "e/s", 0, 1000, "Dark current of a pixel."),
    NUMBER(full_well_e, "e", 100, 1e7, "Electrons up to which a pixel counts faithfully."),
    NUMBER(defocus_px, "px", 0, 500, "Radius of the image of a star, defocused."),
    NUMBER(exposure_s, "s", 0.001, 3600, "Length of an exposure; empty: to be chosen."),
    NUMBER(dead_s, "s", 0, 600, "Time between the end of an exposure and the start of the next."),
    NUMBER(red_noise_ppt, "ppt", 0, 100, "Noise of a whole event that more exposures do not take away."),
    TEXT(blocks, 400, "Standing blocks of every night, `;` between: evening-6..evening-9=evening flats."),
    TEXT(note, NOTE_CHARS_MAX, "Anything worth knowing."),
};
const size_t telescope_field_count = sizeof telescope_fields / sizeof telescope_fields[0];
_Static_assert(sizeof telescope_fields / sizeof telescope_fields[0] == TELESCOPE_FIELD_COUNT, "cells");

const char *const mount_words[4] = {"", "german", "fork", "altaz"};

long telescope_field_find(const char *name)
{
	for (size_t i = 0; i < telescope_field_count; i++)
		if (strcmp(telescope_fields[i].name, name) == 0)
			return (long)i;
	return -1;
}

static void *member_at(struct telescope *t, size_t field)
{
	return (char *)t + telescope_fields[field].offset;
}

static enum status put_number(double *member, const struct telescope_field *f, const char *text,
			      struct err *e)
{
	double value;
	struct err why = {0};
	char got[ERR_QUOTE_MAX], lo[NUMBER_TEXT_MAX], hi[NUMBER_TEXT_MAX];
	enum status st = number_parse(text, strlen(text), &value, NULL, &why);
	if (st != ST_OK)
		return err_set(e, st, "%s: %s", f->name, why.text);
	if (value >= f->min && value <= f->max) {
		*member = value + 0.0; /* no -0: the store would lose its sign */
		return ST_OK;
	}
	err_quote(text, strlen(text), got);
	number_text(f->min, lo);
	number_text(f->max, hi);
	return err_set(e, ST_RANGE, "%s: too %s (got \"%s\", expected a number %s..%s%s%s)", f->name,
		       value < f->min ? "small" : "large", got, lo, hi, *f->unit ? " " : "", f->unit);
}

static enum status put_mount(enum mount_kind *member, const struct telescope_field *f, const char *text,
			     size_t n, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	for (int k = MOUNT_UNKNOWN; k <= MOUNT_ALTAZ; k++)
		if (strlen(mount_words[k]) == n && memcmp(mount_words[k], text, n) == 0) {
			*member = (enum mount_kind)k;
			return ST_OK;
		}
	err_quote(text, n, got);
	return err_set(e, ST_SYNTAX, "%s: unknown (got \"%s\", expected german, fork or altaz)", f->name,
		       got);
}

enum status telescope_field_put(struct telescope *t, size_t field, const char *text, struct err *e)
{
	const struct telescope_field *f = &telescope_fields[field];
	const char *start = text;
	size_t n = strlen(text);
	text_trim(&start, &n);
	if (f->type == TELESCOPE_MOUNT)
		return put_mount(member_at(t, field), f, start, n, e);
	if (f->type == TELESCOPE_NUMBER && n == 0) {
		*(double *)member_at(t, field) = (double)NAN;
		return ST_OK;
	}
	if (f->type == TELESCOPE_NUMBER)
		return put_number(member_at(t, field), f, text, e);
	enum status st = text_check(f->name, text, (size_t)f->max, e);
	if (st == ST_OK)
		*(const char **)member_at(t, field) = text;
	return st;
}

void telescope_field_text(const struct telescope *t, size_t field, char *out, size_t n)
{
	const struct telescope_field *f = &telescope_fields[field];
	const void *member = (const char *)t + f->offset;
	char number[NUMBER_TEXT_MAX];
	if (f->type == TELESCOPE_NUMBER) {
		number_text(*(const double *)member, number);
		snprintf(out, n, "%s", number);
	} else if (f->type == TELESCOPE_MOUNT) {
		snprintf(out, n, "%s", mount_words[*(const enum mount_kind *)member]);
	} else {
		snprintf(out, n, "%s", *(const char *const *)member);
	}
}
