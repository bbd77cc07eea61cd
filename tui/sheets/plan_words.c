/* SPDX-License-Identifier: MIT */
#include "tui/sheets/plan_words.h"

#include "db/text_clean.h"
#include "ephem/angle_text.h"

#include <math.h>
#include <string.h>

const char *const plan_block_words[] = {"block", "standing", "lost", "poor"};
const char plan_sun_up_reason[] = "the Sun is up for some of it: do not slew there";

const char *plan_kind_word(enum event_kind kind)
{
	return kind == KIND_TRANSIT ? "transit" : "occultation";
}

void plan_line(const char *text, char *out, size_t size)
{
	size_t n = text_clean(text, out, size), used = 0;
	for (size_t i = 0; i < n; i++)
		if (out[i] != ' ' || (used > 0 && out[used - 1] != ' '))
			out[used++] = out[i];
	if (used > 0 && out[used - 1] == ' ')
		used--;
	out[used] = '\0';
}

const char *plan_variant_sentence(const char *variant)
{
	static const struct {
		const char *word, *sentence;
	} row[] = {
	    {"whole", "whole event"},
	    {"short", "both limbs, with a baseline cut down"},
	    {"ingress", "ingress only"},
	    {"egress", "egress only"},
	};
	for (size_t i = 0; i < sizeof row / sizeof row[0]; i++)
		if (strcmp(variant, row[i].word) == 0)
			return row[i].sentence;
	return variant;
}

const char *plan_part_words(const char *variant)
{
	if (strcmp(variant, variant_words[VARIANT_WHOLE]) == 0)
		return "";
	if (strcmp(variant, variant_words[VARIANT_INGRESS]) == 0)
		return "ingress only";
	return strcmp(variant, variant_words[VARIANT_EGRESS]) == 0 ? "egress only" : variant;
}

static void names(const struct plan_item_view *item, bool parts, char out[PLAN_NAMES_BYTES])
{
	enum { ROOM = 32 }; /* for what stands around a name */
	char name[NAME_BYTES_MAX];
	size_t used = 0;
	out[0] = '\0';
	for (size_t i = 0; i < item->n; i++) {
		const char *part = parts ? plan_part_words(item->member[i].variant) : "";
		plan_line(item->member[i].target, name, sizeof name);
		if (used + strlen(name) + ROOM >= PLAN_NAMES_BYTES) {
			snprintf(out + used, PLAN_NAMES_BYTES - used, " + ...");
			return;
		}
		used += (size_t)snprintf(out + used, PLAN_NAMES_BYTES - used, "%s%s%s%s%s", i ? " + " : "",
					 name, part[0] ? " (" : "", part, part[0] ? ")" : "");
	}
}

void plan_names(const struct plan_item_view *item, char out[PLAN_NAMES_BYTES])
{
	names(item, false, out);
}

void plan_names_parts(const struct plan_item_view *item, char out[PLAN_NAMES_BYTES])
{
	names(item, true, out);
}

void plan_standing_words(const struct plan_view *v, char *out, size_t size)
{
	char draft[200];
	plan_line(v->draft, draft, sizeof draft);
	if (v->kept)
		snprintf(out, size, "kept plan (draft %s, edition %d)", draft, v->edition);
	else if (v->stored)
		snprintf(out, size, "draft %s, edition %d, not kept", draft, v->edition);
	else if (draft[0])
		snprintf(out, size, "a proposal from draft %s, not stored", draft);
	else
		snprintf(out, size, "a proposal, not stored");
}

/* --- figures --- */

static double figure_value(const struct plan_member_view *m, const char *column)
{
	const char *text = member_figure(m, column);
	double value;
	if (number_parse(text, strlen(text), &value, NULL, NULL) != ST_OK)
		return NAN;
	return value;
}

void plan_figure(const struct plan_member_view *m, const char *column, int decimals,
		 char out[NUMBER_TEXT_MAX])
{
	number_text_fixed(figure_value(m, column), decimals, out);
}

void plan_per_cent(const struct plan_member_view *m, const char *column, char out[NUMBER_TEXT_MAX])
{
	const double share = figure_value(m, column), p = floor(100.0 * share + 0.5);
	if (isnan(share))
		out[0] = '\0';
	else if (p < 1.0 && share > 0.0)
		snprintf(out, NUMBER_TEXT_MAX, "<1");
	else if (p > 99.0 && share < 0.9995)
		snprintf(out, NUMBER_TEXT_MAX, ">99");
	else
		snprintf(out, NUMBER_TEXT_MAX, "%.0f", p);
}

void plan_list_words(const struct plan_member_view *m, const char *column, char *out, size_t size)
{
	char text[512];
	size_t used = 0;
	plan_line(member_figure(m, column), text, sizeof text);
	for (const char *s = text; *s && used + 3 < size; s++) {
		out[used++] = *s == ';' ? ',' : *s;
		if (*s == ';' || *s == ':')
			out[used++] = ' ';
	}
	out[used] = '\0';
}

const char *const plan_contact_words[CONTACT_COUNT] = {"T1", "T2", "mid", "T3", "T4"};

bool plan_contact_at(const struct plan_member_view *m, enum plan_contact contact, struct utc *t)
{
	const struct utc all[CONTACT_COUNT] = {m->t1, m->t2, m->mid, m->t3, m->t4};
	*t = all[contact];
	return m->has_flat || (contact != CONTACT_T2 && contact != CONTACT_T3);
}

const char plan_flip_caution[] = "watch the mount and its cables, and centre the star again";

bool plan_flip_at(const struct plan_view *v, const struct plan_item_view *item,
		  const struct plan_member_view *m, struct utc *t)
{
	const struct leap_table *leap = &v->run->leap;
	const char *text = member_figure(m, "flip_utc");
	return text[0] && utc_parse(leap, text, t, NULL) == ST_OK &&
	       utc_diff_s(leap, item->start, *t) >= 0.0 && utc_diff_s(leap, *t, item->end) > 0.0;
}

bool plan_one_limb(const struct plan_member_view *m)
{
	return strcmp(m->variant, variant_words[VARIANT_INGRESS]) == 0 ||
	       strcmp(m->variant, variant_words[VARIANT_EGRESS]) == 0;
}

void plan_forecast_words(const struct plan_member_view *m, char *out, size_t size)
{
	static const struct {
		const char *column, *before, *after;
		int decimals;
	} part[] = {{"noise_ppt_min", ", noise ", " ppt a minute", 2},
		    {"depth_snr", ", depth S/N ", "", 0},
		    {"timing_s", ", timing ", " s", 0}};
	char figure[NUMBER_TEXT_MAX], band[NUMBER_TEXT_MAX];
	out[0] = '\0';
	plan_figure(m, "noise_ppt_min", 2, figure);
	if (!figure[0])
		return;
	plan_figure(m, "exposure_s", 1, figure);
	plan_line(member_figure(m, "band"), band, sizeof band);
	snprintf(out, size, "%s s exposures%s%s", figure, band[0] ? " in " : "", band);
	for (size_t i = 0; i < sizeof part / sizeof part[0]; i++) {
		const size_t used = strlen(out);
		plan_figure(m, part[i].column, part[i].decimals, figure);
		if (figure[0])
			snprintf(out + used, size - used, "%s%s%s", part[i].before, figure, part[i].after);
	}
	const size_t used = strlen(out);
	if (plan_one_limb(m))
		snprintf(out + used, size - used, " (of the whole event)");
}

/* Of the first member that has one; a telescope may have got another since. */
static const char *planned_band(const struct plan_view *v)
{
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++)
			if (member_figure(&v->item[i].member[k], "band")[0])
				return member_figure(&v->item[i].member[k], "band");
	return "";
}

void plan_telescope_words(const struct plan_view *v, char *out, size_t size)
{
	const struct telescope *t = v->night->night.telescope;
	char aperture[NUMBER_TEXT_MAX] = "", band[NAME_BYTES_MAX];
	plan_line(v->telescope, out, size);
	if (!out[0])
		return;
	if (t && t->name && strcmp(t->name, v->telescope) == 0)
		number_text(t->aperture_m, aperture);
	plan_line(planned_band(v), band, sizeof band);
	if (!band[0] && aperture[0])
		plan_line(t->band, band, sizeof band);
	const size_t used = strlen(out);
	snprintf(out + used, size - used, "%s%s%s%s%s", aperture[0] ? ", " : "", aperture,
		 aperture[0] ? " m" : "", band[0] ? ", band " : "", band);
}

void plan_star_words(const struct plan_member_view *m, char *out, size_t size)
{
	char ra[ANGLE_TEXT_MAX], dec[ANGLE_TEXT_MAX], mag[NUMBER_TEXT_MAX], band[NUMBER_TEXT_MAX];
	size_t used = 0;
	out[0] = '\0';
	if (isfinite(m->ra_deg) && isfinite(m->dec_deg)) {
		ra_text(m->ra_deg, 1, ra);
		dec_text(m->dec_deg, 0, dec);
		used = (size_t)snprintf(out, size, "%s %s", ra, dec);
	}
	number_text_fixed(m->mag, 1, mag);
	plan_line(m->mag_band, band, sizeof band);
	if (mag[0] && used < size)
		snprintf(out + used, size - used, "%s%s%s%s", used ? ", " : "", band[0] ? band : "mag", " ",
			 mag);
}

void plan_ephemeris_words(const struct plan_member_view *m, char *out, size_t size)
{
	char source[200], scale[64], entered[64], version[32] = "of unknown version";
	plan_line(m->ephemeris_source, source, sizeof source);
	plan_line(m->ephemeris_scale, scale, sizeof scale);
	plan_line(m->ephemeris_entered_utc, entered, sizeof entered);
	if (strlen(entered) > 10)
		entered[10] = '\0'; /* the date */
	if (m->ephemeris_version > 0)
		snprintf(version, sizeof version, "version %d", m->ephemeris_version);
	snprintf(out, size, "ephemeris %s%s%s, %s%s%s", version, entered[0] ? ", entered " : "", entered,
		 scale[0] ? scale : "no time standard given", source[0] ? ", from " : ", no source given",
		 source);
}
