/* SPDX-License-Identifier: MIT */
#include "tui/parts/columns.h"

#include "ephem/number_text.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#define EVENT(member) offsetof(struct window, event.member)
#define SKY(member) offsetof(struct window, sky.member)
#define COVER(member) offsetof(struct window, cover.member)
#define SHARE(part) (offsetof(struct window, cover.share) + (size_t)(part) * sizeof(double))
#define CHANCE(member) offsetof(struct window, chance.member)
#define FORECAST(member) offsetof(struct window, forecast.member)

static void put_text(struct value *v, const char *text)
{
	v->type = VALUE_TEXT;
	snprintf(v->text, sizeof v->text, "%s", text);
}

static void get_site(const struct window *w, const struct night *n, struct value *v)
{
	(void)w;
	put_text(v, n->site->name);
}

static void get_telescope(const struct window *w, const struct night *n, struct value *v)
{
	(void)w;
	if (n->telescope && n->telescope->name[0])
		put_text(v, n->telescope->name);
}

static void get_band(const struct window *w, const struct night *n, struct value *v)
{
	(void)n;
	if (w->forecast.basis != BASIS_NONE && w->forecast.band != BAND_NONE)
		put_text(v, bands[w->forecast.band].name);
}

/* Known only when the store keeps branches. */
static void get_nothing(const struct window *w, const struct night *n, struct value *v)
{
	(void)w;
	(void)n;
	v->type = VALUE_NONE;
}

static void get_night(const struct window *w, const struct night *n, struct value *v)
{
	(void)w;
	struct date d = date_from_mjd(n->mjd);
	v->type = VALUE_TEXT;
	snprintf(v->text, sizeof v->text, "%04d-%02d-%02d", d.year, d.month, d.day);
}

static void get_target(const struct window *w, const struct night *n, struct value *v)
{
	(void)n;
	put_text(v, w->event.prepared->target->name);
}

static void get_kind(const struct window *w, const struct night *n, struct value *v)
{
	(void)n;
	put_text(v, w->event.kind == KIND_TRANSIT ? "transit" : "occultation");
}

static void get_epoch(const struct window *w, const struct night *n, struct value *v)
{
	(void)n;
	v->type = VALUE_WHOLE;
	v->whole = w->event.epoch;
}

static void get_mid_bjd(const struct window *w, const struct night *n, struct value *v)
{
	(void)n;
	if (!isfinite(w->event.mid_bjd.jd.day) || !isfinite(w->event.mid_bjd.jd.frac))
		return;
	v->type = VALUE_BJD;
	v->jd = w->event.mid_bjd.jd;
}

static void get_lost_by(const struct window *w, const struct night *n, struct value *v)
{
	(void)n;
	v->type = VALUE_TEXT;
	lost_by_text(&w->cover, v->text, sizeof v->text);
}

static void get_flags(const struct window *w, const struct night *n, struct value *v)
{
	(void)n;
	v->type = VALUE_TEXT;
	flags_text(w->event.flags, v->text, sizeof v->text);
}

/* Names joined by `;`; "" when none transits. */
static void get_siblings(const struct window *w, const struct night *n, struct value *v)
{
	(void)n;
	size_t used = 0;
	v->type = VALUE_TEXT;
	for (int i = 0; i < w->n_siblings; i++) {
		const char *name = w->sibling[i]->target->name;
		if (used + strlen(name) + 2 > sizeof v->text)
			break; /* whole names only */
		used +=
		    (size_t)snprintf(v->text + used, sizeof v->text - used, "%s%s", used ? ";" : "", name);
	}
}

#define T VALUE_TEXT
#define N VALUE_NUMBER
#define U VALUE_UTC

/* name, unit, stage, type, offset, get, machine decimals, people's decimals, heading, width, sentence */
const struct column columns[] = {
    {"site", "", STAGE_EVENT, T, 0, get_site, 0, 0, "site", 12, "Where the window is seen from."},
    {"telescope", "", STAGE_EVENT, T, 0, get_telescope, 0, 0, "telescope", 10,
     "The telescope that it was computed for; empty without one."},
    {"night", "", STAGE_EVENT, T, 0, get_night, 0, 0, "night", 10,
     "Local date of the night's evening; a night runs from local mean noon to noon."},
    {"target", "", STAGE_EVENT, T, 0, get_target, 0, 0, "target", 16, "The target's name."},
    {"branch", "", STAGE_EVENT, T, 0, get_nothing, 0, 0, "branch", 6,
     "Which of several ephemerides of the target; empty when it has one."},
    {"kind", "", STAGE_EVENT, T, 0, get_kind, 0, 0, "kind", 11,
     "transit (planet in front of the star) or occultation (behind it)."},
    {"epoch", "", STAGE_EVENT, VALUE_WHOLE, 0, get_epoch, 0, 0, "epoch", 6,
     "Orbits counted from T0; an occultation carries the epoch of the transit before it."},
    {"mid_bjd_tdb", "d", STAGE_EVENT, VALUE_BJD, 0, get_mid_bjd, 6, 5, "mid BJD_TDB", 13,
     "Predicted mid-time at the barycentre."},
    {"mid_utc", "", STAGE_EVENT, U, EVENT(mid_d), NULL, 0, 0, "mid", 5,
     "Predicted mid-time as the site's clock shows it."},
    {"sigma_min", "min", STAGE_EVENT, N, EVENT(sigma_min), NULL, 3, 1, "sigma", 5,
     "Error of the mid-time; empty when the source gives no error of epoch or period."},
    {"sigma_contact_min", "min", STAGE_EVENT, N, EVENT(sigma_contact_min), NULL, 3, 1, "s.con", 5,
     "Error of a contact: of the mid-time and half the duration."},
    {"t1_utc", "", STAGE_EVENT, U, EVENT(t1_d), NULL, 0, 0, "T1", 5, "First contact: ingress begins."},
    {"t2_utc", "", STAGE_EVENT, U, EVENT(t2_d), NULL, 0, 0, "T2", 5,
     "Second contact: ingress ends; empty when grazing."},
    {"t3_utc", "", STAGE_EVENT, U, EVENT(t3_d), NULL, 0, 0, "T3", 5,
     "Third contact: egress begins; empty when grazing."},
    {"t4_utc", "", STAGE_EVENT, U, EVENT(t4_d), NULL, 0, 0, "T4", 5, "Fourth contact: egress ends."},
    {"reserve_start_utc", "", STAGE_EVENT, U, EVENT(reserve_start_d), NULL, 0, 0, "res.", 5,
     "From when the event needs the telescope: T1 less baseline and pad."},
    {"reserve_end_utc", "", STAGE_EVENT, U, EVENT(reserve_end_d), NULL, 0, 0, "..res", 5,
     "Until when the event needs the telescope: T4 plus baseline and pad."},
    {"latest_start_utc", "", STAGE_EVENT, U, EVENT(latest_start_d), NULL, 0, 0, "last", 5,
     "Start later than this and the ingress lacks its least baseline."},
    {"usable_start_utc", "", STAGE_COVER, U, COVER(usable_start_d), NULL, 0, 0, "on", 5,
     "First usable moment of the reserve: be on target by then."},
    {"usable_end_utc", "", STAGE_COVER, U, COVER(usable_end_d), NULL, 0, 0, "leave", 5,
     "Last usable moment of the reserve."},
    {"coverage", "", STAGE_COVER, N, COVER(coverage), NULL, 4, 2, "cov", 4,
     "Usable share of T1 less baseline to T4 plus baseline."},
    {"cover_before", "", STAGE_COVER, N, SHARE(PART_BEFORE), NULL, 4, 2, "bef", 4,
     "Usable share of the wanted baseline before T1."},
    {"cover_ingress", "", STAGE_COVER, N, SHARE(PART_INGRESS), NULL, 4, 2, "ing", 4,
     "Usable share of the ingress."},
    {"cover_flat", "", STAGE_COVER, N, SHARE(PART_FLAT), NULL, 4, 2, "flat", 4,
     "Usable share between T2 and T3; empty when grazing."},
    {"cover_egress", "", STAGE_COVER, N, SHARE(PART_EGRESS), NULL, 4, 2, "egr", 4,
     "Usable share of the egress."},
    {"cover_after", "", STAGE_COVER, N, SHARE(PART_AFTER), NULL, 4, 2, "aft", 4,
     "Usable share of the wanted baseline after T4."},
    {"base_before_min", "min", STAGE_COVER, N, COVER(base_before_min), NULL, 3, 0, "b.bef", 5,
     "Usable minutes of the reserve that end at T1 without a gap."},
    {"base_after_min", "min", STAGE_COVER, N, COVER(base_after_min), NULL, 3, 0, "b.aft", 5,
     "Usable minutes of the reserve that begin at T4 without a gap."},
    {"lost_by", "", STAGE_COVER, T, 0, get_lost_by, 0, 0, "lost by", 16,
     "Each part that is not wholly usable, with what takes most of it."},
    {"chance_ingress", "", STAGE_CHANCE, N, CHANCE(ingress), NULL, 4, 2, "c.ing", 5,
     "Probability, in clear weather, that the ingress falls into usable time with the least baseline before "
     "it."},
    {"chance_egress", "", STAGE_CHANCE, N, CHANCE(egress), NULL, 4, 2, "c.egr", 5,
     "The same of the egress and the least baseline after it."},
    {"chance_mid", "", STAGE_CHANCE, N, CHANCE(mid), NULL, 4, 2, "c.mid", 5,
     "Probability that the mid-time falls into usable time."},
    {"chance_done", "", STAGE_CHANCE, N, CHANCE(done), NULL, 4, 2, "done", 5,
     "Probability that both limbs are caught, each with its least baseline, in clear weather."},
    {"airmass_start", "", STAGE_SKY, N, SKY(airmass_start), NULL, 3, 2, "X on", 5,
     "Airmass where the reserve starts; empty below the horizon."},
    {"airmass_mid", "", STAGE_SKY, N, SKY(airmass_mid), NULL, 3, 2, "X mid", 5, "Airmass at the mid-time."},
    {"airmass_end", "", STAGE_SKY, N, SKY(airmass_end), NULL, 3, 2, "X end", 5,
     "Airmass where the reserve ends."},
    {"airmass_min", "", STAGE_COVER, N, SKY(airmass_min), NULL, 3, 2, "X min", 5,
     "Least airmass of the usable part."},
    {"alt_mid_deg", "deg", STAGE_SKY, N, SKY(alt_mid_deg), NULL, 3, 0, "alt", 4,
     "Airless altitude at the mid-time."},
    {"az_mid_deg", "deg", STAGE_SKY, N, SKY(az_mid_deg), NULL, 3, 0, "az", 4,
     "Azimuth at the mid-time, from north through east."},
    {"sun_alt_mid_deg", "deg", STAGE_SKY, N, SKY(sun_alt_mid_deg), NULL, 3, 0, "Sun", 4,
     "Altitude of the Sun's centre at the mid-time."},
    {"moon_sep_deg", "deg", STAGE_SKY, N, SKY(moon_sep_deg), NULL, 3, 0, "moon", 4,
     "Angle between target and Moon at the mid-time, as seen from the site."},
    {"moon_alt_deg", "deg", STAGE_SKY, N, SKY(moon_alt_deg), NULL, 3, 0, "m.alt", 5,
     "Altitude of the Moon at the mid-time."},
    {"moon_lit", "", STAGE_SKY, N, SKY(moon_lit), NULL, 4, 2, "lit", 4,
     "Lit share of the Moon at the mid-time."},
    {"sky_mag_arcsec2", "mag/arcsec2", STAGE_FORECAST, N, SKY(sky_mag_arcsec2), NULL, 3, 1, "sky", 4,
     "Brightness of the sky behind the target at the mid-time: dark sky, Moon and twilight; empty without a "
     "forecast."},
    {"flip_utc", "", STAGE_COVER, U, FORECAST(flip_d), NULL, 0, 0, "flip", 5,
     "When a german mount is to begin its meridian flip; empty where one side of its pier reaches all that "
     "is usable, for other mounts and without a telescope."},
    {"siblings", "", STAGE_EVENT, T, 0, get_siblings, 0, 0, "siblings", 10,
     "Other planets of the star that transit within this reserve."},
    {"depth_ppt", "ppt", STAGE_EVENT, N, EVENT(depth_ppt), NULL, 4, 1, "depth", 5,
     "How much light is lost, in thousandths; of an occultation empty."},
    {"band", "", STAGE_FORECAST, T, 0, get_band, 0, 0, "band", 4,
     "The observing band; empty without a forecast, which takes a telescope with aperture_m and band."},
    {"exposure_s", "s", STAGE_FORECAST, N, FORECAST(exposure_s), NULL, 3, 1, "exp", 5,
     "Exposure time, the telescope's own or chosen; empty without a forecast."},
    {"noise_ppt_min", "ppt", STAGE_FORECAST, N, FORECAST(noise_ppt_min), NULL, 3, 2, "noise", 5,
     "Noise of one minute of data, averaged over the usable part; empty without a forecast."},
    {"depth_snr", "", STAGE_FORECAST, N, FORECAST(depth_snr), NULL, 3, 0, "snr", 5,
     "Depth over its expected error, the telescope's noise floor in it; empty without a forecast."},
    {"timing_s", "s", STAGE_FORECAST, N, FORECAST(timing_s), NULL, 3, 0, "tim", 5,
     "Expected error of the mid-time if it comes as predicted, white noise; empty without a forecast or "
     "where the usable part can't fix it."},
    {"gain_bits", "bit", STAGE_FORECAST, N, FORECAST(gain_bits), NULL, 3, 2, "gain", 5,
     "Expected information about the ephemeris in clear weather, over what may be caught; empty without a "
     "forecast."},
    {"sigma_after_min", "min", STAGE_FORECAST, N, FORECAST(sigma_after_min), NULL, 3, 1, "s.aft", 5,
     "Error of the mid-time at the date of the settings if it succeeds; empty without a forecast."},
    {"worth", "", STAGE_FORECAST, N, FORECAST(worth), NULL, 3, 2, "worth", 5,
     "What windows are ranked by: priority x open goals x expected bits, or as the settings say; empty "
     "without a forecast."},
    {"flags", "", STAGE_CHANCE, T, 0, get_flags, 0, 0, "flags", 16, "What is doubtful, as words."},
    {"sun_sep_deg", "deg", STAGE_SKY, N, SKY(sun_sep_deg), NULL, 3, 0, "s.sep", 5,
     "Angle between target and Sun at the mid-time."},
};
#undef T
#undef N
#undef U
const size_t column_count = sizeof columns / sizeof columns[0];

int column_find(const char *name)
{
	for (size_t i = 0; i < column_count; i++)
		if (strcmp(columns[i].name, name) == 0)
			return (int)i;
	return -1;
}

struct value column_value(const struct column *c, const struct window *w, const struct night *n)
{
	struct value v = {.type = VALUE_NONE};
	if (c->get) {
		c->get(w, n, &v);
		return v;
	}
	double number;
	memcpy(&number, (const char *)w + c->offset, sizeof number);
	if (!isfinite(number))
		return v;
	v.type = c->type;
	if (c->type == VALUE_UTC)
		v.utc = night_utc(n, number);
	else
		v.number = number;
	return v;
}

void value_machine_text(const struct column *c, const struct value *v, const struct leap_table *leap,
			char *out, size_t n)
{
	char number[NUMBER_TEXT_MAX], time[UTC_TEXT_MAX];
	switch (v->type) {
	case VALUE_NONE:
		snprintf(out, n, "%s", "");
		break;
	case VALUE_TEXT:
		snprintf(out, n, "%s", v->text);
		break;
	case VALUE_NUMBER:
		number_text_fixed(v->number, c->machine_decimals, number);
		snprintf(out, n, "%s", number);
		break;
	case VALUE_WHOLE:
		snprintf(out, n, "%ld", v->whole);
		break;
	case VALUE_UTC:
		utc_text(leap, v->utc, 0, time);
		snprintf(out, n, "%s", time);
		break;
	case VALUE_BJD:
		number_text_jd2(v->jd, c->machine_decimals, number);
		snprintf(out, n, "%s", number);
		break;
	}
}

void value_people_text(const struct column *c, const struct value *v, const struct leap_table *leap,
		       const struct zone *z, char *out, size_t n)
{
	char number[NUMBER_TEXT_MAX];
	if (v->type == VALUE_UTC) {
		struct local_time t = zone_local(z, utc_add_s(leap, v->utc, 30.0));
		int minute = (int)(t.sod_s / 60.0);
		if (minute > 1439) /* inside a leap second */
			minute = 1439;
		snprintf(out, n, "%02d:%02d", minute / 60, minute % 60);
	} else if (v->type == VALUE_NUMBER) {
		number_text_fixed(v->number, c->people_decimals, number);
		snprintf(out, n, "%s", number);
	} else if (v->type == VALUE_BJD) {
		number_text_jd2(v->jd, c->people_decimals, number);
		snprintf(out, n, "%s", number);
	} else {
		value_machine_text(c, v, leap, out, n);
	}
}
