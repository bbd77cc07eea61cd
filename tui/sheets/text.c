/* SPDX-License-Identifier: MIT */
#include "tui/sheets/text.h"

#include "db/fields.h"
#include "ephem/angle_text.h"
#include "ephem/number_text.h"
#include "tui/cautions.h"
#include "tui/pages/night_head.h"
#include "tui/parts/clock_mark.h"
#include "tui/parts/text_width.h"
#include "tui/sheets/text_rows.h"

#include <math.h>
#include <string.h>

enum { NAME_WIDTH_MIN = 6 };

void text_cell(FILE *to, const char *text, int columns, bool pad)
{
	char clean[NAME_BYTES_MAX];
	size_t n = text_clean(text, clean, sizeof clean);
	while (n > 0 && text_columns(clean) > columns) { /* cut between characters */
		do
			n--;
		while (n > 0 && ((unsigned char)clean[n] & 0xC0) == 0x80);
		clean[n] = '\0';
	}
	fputs(clean, to);
	for (int i = text_columns(clean); pad && i < columns; i++)
		fputc(' ', to);
}

long uncounted_text(const struct run *r, char *out, size_t n)
{
	enum { NAMES_MAX = 5 };
	char names[400] = "";
	long count = 0;
	out[0] = '\0';
	for (size_t i = 0; i < r->n_prepared; i++) {
		const struct target *t = r->prepared[i].target;
		bool doubtful = r->targets.doubts[t - r->targets.t] >> FIELD_AT_PERIOD & 1;
		if (r->prepared[i].has_ephemeris || !isfinite(t->t0.day) ||
		    !(doubtful || isfinite(t->period_d)))
			continue;
		char clean[NAME_BYTES_MAX];
		(void)text_clean(t->name, clean, sizeof clean);
		size_t used = strlen(names);
		if (count < NAMES_MAX && used + strlen(clean) + 8 < sizeof names)
			snprintf(names + used, sizeof names - used, "%s%s", count ? ", " : "", clean);
		else if (count == NAMES_MAX)
			snprintf(names + used, sizeof names - used, ", ...");
		count++;
	}
	if (count > 0)
		snprintf(out, n, "%ld target%s can't be counted, the period is below %g d: %s", count,
			 count == 1 ? "" : "s", PERIOD_MIN_D, names);
	return count;
}

void text_clock(const struct night *n, const struct zone *zone, double t_d, bool with_zone,
		char out[CLOCK_BYTES])
{
	if (!isfinite(t_d)) {
		snprintf(out, CLOCK_BYTES, "%s", with_zone ? "does not happen" : "--:--");
		return;
	}
	struct utc utc = utc_add_s(n->clock.leap, night_utc(n, t_d), 30.0);
	struct local_time l = zone_local(zone, utc);
	int minute = (int)(l.sod_s / 60.0);
	minute = minute > 1439 ? 1439 : minute;
	snprintf(out, CLOCK_BYTES, "%02d:%02d%s%s", minute / 60, minute % 60, with_zone ? " " : "",
		 with_zone ? l.abbreviation : clock_mark(n, zone, utc));
}

void text_begin(struct text_sheet *t, FILE *to, const struct run *r, bool season)
{
	*t = (struct text_sheet){
	    .to = to, .run = r, .plain = r->options->plain, .season = season, .name_width = NAME_WIDTH_MIN};
	for (size_t i = 0; i < r->n_prepared; i++) {
		int columns = text_columns(r->prepared[i].target->name);
		t->name_width = columns > t->name_width ? columns : t->name_width;
	}
	t->forecast = !season && run_observing(r, &r->site);
	t->name_width = t->name_width > TEXT_NAME_WIDTH_MAX ? TEXT_NAME_WIDTH_MAX : t->name_width;
}

/* --- head --- */

/* `sunset 19:58 MDT (01:58 UTC)` */
static void both_clocks(const struct text_sheet *t, const struct night *n, const struct zone *zone,
			const char *word, double t_d, const char *end)
{
	char local[CLOCK_BYTES], utc[CLOCK_BYTES];
	text_clock(n, zone, t_d, true, local);
	text_clock(n, NULL, t_d, true, utc);
	if (!isfinite(t_d) || !zone)
		fprintf(t->to, "%s %s%s", word, isfinite(t_d) ? utc : local, end);
	else
		fprintf(t->to, "%s %s (%s)%s", word, local, utc, end);
}

static void sun_lines(const struct text_sheet *t, const struct night_view *v, const struct zone *zone)
{
	const struct night *n = &v->night;
	char dusk[64], dawn[64], limit[NUMBER_TEXT_MAX], hours[NUMBER_TEXT_MAX];
	number_text(t->run->limits.value[LIM_SUN], limit);
	number_text_fixed(v->dark.usable_h, 2, hours);
	snprintf(dusk, sizeof dusk, "dusk (Sun %s deg)", limit);
	snprintf(dawn, sizeof dawn, "Morning: dawn (Sun %s deg)", limit);
	both_clocks(t, n, zone, "Evening: sunset", n->times.sunset_d, ", ");
	both_clocks(t, n, zone, dusk, v->dark.dusk_d, "\n");
	both_clocks(t, n, zone, dawn, v->dark.dawn_d, ", ");
	both_clocks(t, n, zone, "sunrise", n->times.sunrise_d, "\n");
	if (!(v->dark.usable_h > 0.0))
		fprintf(t->to, "No dark hour: the Sun does not get below %s deg this night.\n", limit);
	else if (isnan(v->dark.dusk_d) && isnan(v->dark.dawn_d))
		fprintf(t->to, "The Sun stays below %s deg the whole night, %s h.\n", limit, hours);
	else
		fprintf(t->to, "The Sun is below %s deg for %s h.\n", limit, hours);
}

static void moon_line(const struct text_sheet *t, const struct night_view *v, const struct zone *zone)
{
	const struct night_times *times = &v->night.times;
	bool rises = isfinite(times->moonrise_d), sets = isfinite(times->moonset_d);
	fprintf(t->to, "Moon: %.0f %% lit", 100.0 * v->night.moon_lit_mid);
	if (!rises && !sets)
		fputs(v->night.moon_up.n > 0 ? ", up from noon to noon"
					     : ", below the horizon from noon to noon",
		      t->to);
	if (rises && (!sets || times->moonrise_d <= times->moonset_d))
		both_clocks(t, &v->night, zone, ", rises", times->moonrise_d, "");
	if (sets)
		both_clocks(t, &v->night, zone, ", sets", times->moonset_d, "");
	if (rises && sets && times->moonrise_d > times->moonset_d)
		both_clocks(t, &v->night, zone, ", rises", times->moonrise_d, "");
	fputs(".\n", t->to);
}

static void site_words(FILE *to, const struct site *site)
{
	char lat[ANGLE_TEXT_MAX], lon[ANGLE_TEXT_MAX], height[NUMBER_TEXT_MAX];
	lat_text(site->lat_deg, 4, lat);
	lon_text(site->lon_east_deg, 4, lon);
	number_text_fixed(site->height_m, 0, height);
	text_cell(to, site->name, NAME_CHARS_MAX, false);
	fprintf(to, " (%s, %s, %s m)", lat, lon, height);
}

void text_site(const struct text_sheet *t, const struct site *site, const struct zone *zone)
{
	fputs("Site: ", t->to);
	site_words(t->to, site);
	fprintf(t->to, ", times in %s\n", zone ? site->zone : "UTC (its zone is not known)");
}

static void change_line(const struct text_sheet *t, const char *from, const char *until)
{
	fprintf(t->to, "The clocks change this night, from %s to %s: ", from, until);
	if (t->plain)
		fprintf(t->to, "each local time says which it is.\n");
	else
		fprintf(t->to, "in the table a time with %s is %s, one without is %s.\n", CLOCK_MARK, until,
			from);
}

/* `, 0.5 m, band R`: what is known of it. */
static void light_words(FILE *to, const struct telescope *t)
{
	char aperture[NUMBER_TEXT_MAX];
	number_text(t->aperture_m, aperture);
	if (aperture[0])
		fprintf(to, ", %s m", aperture);
	if (t->band && t->band[0]) {
		fputs(", band ", to);
		text_cell(to, t->band, NAME_CHARS_MAX, false);
	}
	if (!aperture[0] || band_parse(t->band) == BAND_NONE)
		fputs(" (no forecast: that takes aperture_m and band)", to);
}

/* `Allotted: 21:00 MDT - 01:30 MDT` */
static void allotted_line(const struct text_sheet *t, const struct night_view *v, const struct zone *zone)
{
	const struct intervals *set = &v->free.allotted;
	if (v->allotments == 0)
		return;
	fputs(set->n > 0 ? "Allotted: " : "Allotted: nothing of this night", t->to);
	for (int i = 0; i < set->n; i++) {
		char from[CLOCK_BYTES], to[CLOCK_BYTES];
		text_clock(&v->night, zone, set->s[i].from_d, true, from);
		text_clock(&v->night, zone, set->s[i].to_d, true, to);
		fprintf(t->to, "%s%s - %s", i ? ", " : "", from, to);
	}
	fputc('\n', t->to);
}

void text_head(const struct text_sheet *t, const struct site *site, const struct zone *zone,
	       const struct night_view *v)
{
	const struct night *n = &v->night;
	char name[64];
	night_name(n->mjd, name, sizeof name);
	fprintf(t->to, "Night %s at ", name);
	site_words(t->to, site);
	fputc('\n', t->to);
	if (n->telescope) {
		fputs("Telescope: ", t->to);
		text_cell(t->to, n->telescope->name, NAME_CHARS_MAX, false);
		light_words(t->to, n->telescope);
		fputc('\n', t->to);
	}
	if (!zone)
		fputs("The site's time zone is not known: all times are UTC.\n", t->to);
	if (clocks_change(n, zone))
		change_line(t, zone_local(zone, night_utc(n, 0.0)).abbreviation,
			    zone_local(zone, night_utc(n, n->length_d)).abbreviation);
	sun_lines(t, v, zone);
	moon_line(t, v, zone);
	allotted_line(t, v, zone);
	text_limits(t);
}

/* Points of the horizon mask of the run's site; 0 without one, or where there are several sites. */
static size_t mask_points(const struct run *r)
{
	const bool several = r->options->n_sites + r->options->n_places > 1;
	return r->site.mask && !several ? r->site.mask->n : 0;
}

static void baseline_words(double min, char *out, size_t n)
{
	char number[NUMBER_TEXT_MAX];
	number_text(min, number);
	if (min == BASELINE_AUTO)
		snprintf(out, n, "half the duration (20 to 60 min)");
	else
		snprintf(out, n, "%s min", number);
}

void text_limits(const struct text_sheet *t)
{
	const double *l = t->run->limits.value;
	char sun[NUMBER_TEXT_MAX], alt[NUMBER_TEXT_MAX], moon[NUMBER_TEXT_MAX], airmass[NUMBER_TEXT_MAX];
	char before[64], after[64], least[NUMBER_TEXT_MAX], pad[NUMBER_TEXT_MAX], scale[NUMBER_TEXT_MAX],
	    p[NUMBER_TEXT_MAX];
	number_text(l[LIM_SUN], sun);
	number_text(l[LIM_ALT], alt);
	number_text(l[LIM_MOON], moon);
	number_text(l[LIM_AIRMASS], airmass);
	number_text(l[LIM_MIN_BASELINE], least);
	number_text(l[LIM_PAD], pad);
	number_text(l[LIM_ERROR_SCALE], scale);
	number_text(run_min_chance(t->run, true), p);
	baseline_words(l[LIM_BASELINE_BEFORE], before, sizeof before);
	baseline_words(l[LIM_BASELINE_AFTER], after, sizeof after);
	fprintf(t->to, "Limits: Sun below %s deg, target above %s deg", sun, alt);
	if (mask_points(t->run) > 0)
		fprintf(t->to, " and the horizon mask");
	if (airmass[0])
		fprintf(t->to, " and below airmass %s", airmass);
	if (l[LIM_MOON] > 0.0)
		fprintf(t->to, ", %s deg from a Moon more than half lit (10 from any that is up)", moon);
	else
		fprintf(t->to, ", no Moon rule");
	fprintf(t->to, ", baseline %s", before);
	if (strcmp(before, after) != 0)
		fprintf(t->to, " before and %s after", after);
	fprintf(t->to, " (at least %s min), pad %s sigma", least, pad);
	if (l[LIM_ERROR_SCALE] != 1.0)
		fprintf(t->to, ", errors times %s", scale);
	if (t->run->options->all)
		fprintf(t->to, "; every %s is listed.\n",
			t->run->kinds == KINDS_BOTH ? "event" : kinds_text(t->run->kinds));
	else
		fprintf(t->to, "; %s listed from a limb's chance of %s.\n",
			t->run->kinds == KINDS_TRANSIT	     ? "transits"
			: t->run->kinds == KINDS_OCCULTATION ? "occultations"
							     : "transits and occultations",
			p);
}

/* --- rows and foot --- */

void text_rows(struct text_sheet *t, const struct night_view *v, const struct zone *zone, bool without_chance)
{
	for (size_t i = 0; i < v->list.n; i++) {
		const struct window *w = &v->list.w[i];
		if (isnan(w->event.chance_contact_d) != without_chance)
			continue;
		t->rows++;
		t->without_chance += without_chance;
		for (int f = 0; f < FLAG_COUNT; f++)
			t->flagged[f] += (w->event.flags & FLAG_BIT(f)) != 0;
		if (t->plain)
			text_record(t, w, &v->night, zone);
		else
			text_row(t, w, &v->night, zone);
	}
}

static void flag_notes(const struct text_sheet *t)
{
	for (int f = 0; f < FLAG_COUNT; f++) {
		if (t->flagged[f] == 0)
			continue;
		char count[48] = "all";
		if (t->flagged[f] < t->rows)
			snprintf(count, sizeof count, "%ld of %ld", t->flagged[f], t->rows);
		if (t->plain)
			fprintf(t->to, "%s (%s): %s\n", flag_rules[f].word, count, flag_rules[f].sentence);
		else
			fprintf(t->to, "  %c  %s (%s): %s\n", text_mark(f), flag_rules[f].word, count,
				flag_rules[f].sentence);
	}
}

void text_foot(const struct text_sheet *t, int32_t last_mjd)
{
	const char *s = t->rows == 1 ? "" : "s";
	char uncounted[600];
	fputc('\n', t->to);
	if (t->rows == 0)
		fprintf(t->to, "No window is listed.");
	else
		fprintf(t->to, "%ld window%s.", t->rows, s);
	if (t->hidden > 0)
		fprintf(t->to,
			" %ld more %s hidden, because neither limb reaches that chance: --min-chance 0.05 "
			"lists more, --all "
			"everything.",
			t->hidden, t->hidden == 1 ? "is" : "are");
	fputc('\n', t->to);
	if (uncounted_text(t->run, uncounted, sizeof uncounted) > 0)
		fprintf(t->to, "%s.\n", uncounted);
	if (t->rows > 0 && t->forecast)
		text_forecast_notes(t);
	if (t->rows > 0 && !t->plain)
		fputs("on, leave: first and last usable moment of the reserve. sigma: error of the mid-time. "
		      "bef ingr flat egr aft: "
		      "usable share of\nthe baseline before, ingress, flat part, egress, baseline after. "
		      "done: chance of both limbs "
		      "in clear weather. Then what takes\nthe rest, and marks:\n",
		      t->to);
	flag_notes(t);
	if (last_mjd > t->run->leap.expires_mjd) {
		struct date d = date_from_mjd(t->run->leap.expires_mjd);
		fprintf(t->to,
			"The table of leap seconds is known to be complete until %04d-%02d-%02d only: later "
			"UTC times may be "
			"off by a second.\n",
			d.year, d.month, d.day);
	}
	fputc('\n', t->to);
	text_cautions(t->to);
}

void text_cautions(FILE *to)
{
	fprintf(to, "Cautions\n");
	for (size_t i = 0; i < caution_count; i++)
		fprintf(to, "  %s\n", cautions[i]);
}
