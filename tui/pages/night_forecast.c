/* SPDX-License-Identifier: MIT
 * Noise and worth in a line each, and every figure of them with its sentence. */
#include "tui/pages/night_forecast.h"

#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/parts/columns.h"

#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <string.h>

enum { INDENT = 7, FIGURE_INDENT = 9, PIECE_BYTES = 600 };

void timing_text(double timing_s, char out[TIMING_TEXT_BYTES])
{
	const double min = timing_s / 60.0;
	char number[NUMBER_TEXT_MAX];
	number_text_fixed(min, min < 0.995 ? 2 : min < 9.95 ? 1 : 0, number);
	snprintf(out, TIMING_TEXT_BYTES, "%.11s", number);
}

void forecast_show(struct forecast_shown *f, const struct night_view *view, const struct night_row *row)
{
	struct sun_sets suns = {.n = 0};
	f->there = false;
	if (!view->night.observing)
		return;
	f->window = *row->window;
	f->on = target_on_night(&view->night, row->window->event.prepared, &row->star, &suns, &view->free);
	f->there = forecast_explain(&f->window, &f->on, &f->x);
}

/* --- in a line each --- */

struct line {
	char text[PIECE_BYTES];
	size_t used;
};

static void add(struct line *l, const char *format, ...) __attribute__((format(printf, 2, 3)));
static void add(struct line *l, const char *format, ...)
{
	va_list list;
	if (l->used >= sizeof l->text)
		return;
	va_start(list, format);
	const int n = vsnprintf(l->text + l->used, sizeof l->text - l->used, format, list);
	va_end(list);
	l->used += n > 0 ? (size_t)n : 0;
}

static void fixed(double value, int decimals, char out[NUMBER_TEXT_MAX])
{
	number_text_fixed(value, decimals, out);
	if (!out[0])
		snprintf(out, NUMBER_TEXT_MAX, "-");
}

/* Why nothing is forecast at all. */
static void no_telescope_line(struct text_view *v, const struct run *r, const struct night_view *view)
{
	const struct telescope *t = view->night.telescope;
	char name[NAME_BYTES_MAX];
	if (!t || !r->has_telescope) {
		text_view_add(v, ROLE_FAINT, INDENT, "Noise  no forecast: no telescope is chosen");
		return;
	}
	text_clean(t->name, name, sizeof name);
	text_view_addf(v, ROLE_WARN, INDENT, "Noise  no forecast: %s has no %s",
		       *name ? name : "the telescope",
		       isnan(r->observing.optics.aperture_m) ? "aperture_m"
		       : t->band && t->band[0]		     ? "band that is known"
							     : "band");
}

/* Why there is no noise although there is a telescope. */
static void no_noise_words(struct line *l, const struct night_row *row, const struct forecast_explain *x)
{
	if (isnan(x->mag.mag) && isnan(x->catalogue_mag))
		add(l, "no forecast: the target has no magnitude");
	else if (isnan(x->mag.mag))
		add(l, "no forecast: the target's magnitude can't be turned into band %s",
		    bands[x->band].name);
	else if (!row->usable)
		add(l, "no forecast: no moment of the reserve is usable");
	else
		add(l, "no forecast: the sky is too bright to say at what is usable");
}

static void sky_words(struct line *l, const struct skyglow *sky)
{
	char all[NUMBER_TEXT_MAX], part[NUMBER_TEXT_MAX];
	if (isnan(sky->mag_arcsec2)) {
		add(l, "; sky at mid-time %s",
		    sky->limits & SKY_TWILIGHT_BRIGHT ? "too bright to say" : "not told");
		return;
	}
	fixed(sky->mag_arcsec2, 1, all);
	add(l, "; sky %s mag/arcsec2", all);
	const char *before = " (";
	if (sky->moon_nl > 0.0) {
		fixed(sky_mag(sky->moon_nl), 1, part);
		add(l, "%sMoon %s", before, part);
		before = ", ";
	}
	if (sky->twilight_nl > 0.0) {
		fixed(sky_mag(sky->twilight_nl), 1, part);
		add(l, "%stwilight %s", before, part);
		before = ", ";
	}
	add(l, "%s", *before == ',' ? ")" : "");
}

static void noise_line(struct text_view *v, const struct night_row *row, const struct forecast_explain *x)
{
	struct line l = {.used = 0};
	char exposure[NUMBER_TEXT_MAX], noise[NUMBER_TEXT_MAX], depth[NUMBER_TEXT_MAX], snr[NUMBER_TEXT_MAX];
	const bool known = isfinite(x->noise_ppt_min);
	if (!known)
		no_noise_words(&l, row, x);
	else {
		number_text(x->exposure_s, exposure);
		fixed(x->noise_ppt_min, x->noise_ppt_min < 0.995 ? 2 : 1, noise);
		fixed(x->depth_ppt, 1, depth);
		fixed(x->depth_snr, x->depth_snr < 9.95 ? 1 : 0, snr);
		add(&l, "%s %s s exposures, %s ppt a minute, ", bands[x->band].name, exposure, noise);
		if (isnan(x->depth_ppt))
			add(&l, "depth unknown");
		else
			add(&l, "depth %s ppt: S/N %s", depth, snr);
	}
	sky_words(&l, &x->mid.sky);
	text_view_addf(v, known ? ROLE_TEXT : ROLE_WARN, INDENT, "Noise  %s", l.text);
}

static void timing_words(struct line *l, const struct forecast_explain *x)
{
	char timing[TIMING_TEXT_BYTES], alone[TIMING_TEXT_BYTES];
	const struct {
		const char *word;
		double timing_s;
	} limb[] = {{"ingress", x->ingress_alone.timing_s}, {"egress", x->egress_alone.timing_s}};
	const char *before = " (";
	timing_text(x->timing_s, timing);
	if (!timing[0])
		add(l, "no timing as predicted");
	else
		add(l, "timing %s min", timing);
	for (size_t i = 0; i < sizeof limb / sizeof limb[0]; i++) {
		timing_text(limb[i].timing_s, alone);
		if (!alone[0] || !isfinite(limb[i].timing_s))
			continue;
		add(l, "%s%s alone %s", before, limb[i].word, alone);
		before = ", ";
	}
	add(l, "%s", *before == ',' ? ")" : "");
}

static void after_words(struct line *l, const struct run *r, const struct night *n,
			const struct forecast_explain *x)
{
	char now[NUMBER_TEXT_MAX], then[NUMBER_TEXT_MAX], years[NUMBER_TEXT_MAX];
	const double ahead = (r->observing.at_jd_tdb - MJD_ZERO_JD - n->mjd) / YEAR_D;
	if (isnan(x->sigma_after_min) || isnan(x->sigma_at_min))
		return;
	fixed(x->sigma_at_min, 1, now);
	fixed(x->sigma_after_min, 1, then);
	number_text(round(10.0 * ahead) / 10.0, years);
	if (ahead > 0.05)
		add(l, ", sigma in %s years %s min -> %s", years, now, then);
	else
		add(l, ", sigma at the set date %s min -> %s", now, then);
}

/* What stands for the bits. */
static void event_words(struct line *l, const struct night_row *row, const struct forecast_explain *x)
{
	char value[NUMBER_TEXT_MAX], chance[NUMBER_TEXT_MAX];
	fixed(x->event_value, 2, value);
	fixed(row->window->chance.done, 2, chance);
	add(l, " x %s an event x %s%s", value, row->has_chance ? "chance " : "0.1 of the coverage",
	    row->has_chance ? chance : "");
}

static void worth_line(struct text_view *v, const struct run *r, const struct night_view *view,
		       const struct night_row *row, const struct forecast_explain *x)
{
	struct line l = {.used = 0};
	char bits[NUMBER_TEXT_MAX], priority[NUMBER_TEXT_MAX], worth[NUMBER_TEXT_MAX];
	timing_words(&l, x);
	number_text_fixed(x->gain_bits, 2, bits);
	add(&l, "%s%s", *bits ? ", " : "", *bits ? bits : ", no bits can be told");
	add(&l, "%s", *bits ? " bits" : "");
	after_words(&l, r, &view->night, x);
	number_text(x->priority, priority);
	fixed(row->worth, 2, worth);
	add(&l, "; priority %s x open goals %d", priority, x->open.whole);
	if (x->open.limb != x->open.whole)
		add(&l, " (with one limb %d)", x->open.limb);
	if (x->basis != BASIS_BITS)
		event_words(&l, row, x);
	add(&l, ": worth %s", worth);
	text_view_addf(v, ROLE_TEXT, INDENT, "Worth  %s", l.text);
}

void forecast_lines(struct text_view *v, const struct run *r, const struct night_view *view,
		    const struct night_row *row, const struct forecast_shown *f)
{
	if (!f->there) {
		no_telescope_line(v, r, view);
		return;
	}
	noise_line(v, row, &f->x);
	worth_line(v, r, view, row, &f->x);
}

/* --- figure by figure --- */

static void assumed_line(struct text_view *v, const struct optics *o)
{
	static const struct {
		enum optics_assumed bit;
		const char *words;
	} part[] = {
	    {OPTICS_OBSTRUCTION, "obstruction 0.3"},	{OPTICS_THROUGHPUT, "throughput 0.35"},
	    {OPTICS_PIXEL, "pixels of 1 arcsec"},	{OPTICS_GAIN, "no noise of digitising"},
	    {OPTICS_READ_NOISE, "read-out noise 8 e-"}, {OPTICS_DARK, "no dark current"},
	    {OPTICS_FULL_WELL, "full well 60,000 e-"},	{OPTICS_FOCUS, "in focus"},
	    {OPTICS_DEAD, "5 s between exposures"},	{OPTICS_RED_NOISE, "noise floor 0.5 ppt"},
	};
	struct line l = {.used = 0};
	for (size_t i = 0; i < sizeof part / sizeof part[0]; i++)
		if (o->assumed & part[i].bit)
			add(&l, "%s%s", l.used ? ", " : "", part[i].words);
	if (l.used)
		text_view_addf(v, ROLE_FAINT, INDENT, "Usual  what the telescope does not say: %s", l.text);
}

void forecast_figure_lines(struct text_view *v, const struct night_view *view, const struct forecast_shown *f)
{
	static const char *const names[][2] = {
	    {"band", "band"},	    {"exposure", "exposure_s"}, {"noise", "noise_ppt_min"},
	    {"depth", "depth_ppt"}, {"S/N", "depth_snr"},	{"sky", "sky_mag_arcsec2"},
	    {"timing", "timing_s"}, {"bits", "gain_bits"},	{"sigma after", "sigma_after_min"},
	    {"worth", "worth"},
	};
	if (!f->there)
		return;
	text_view_add(v, ROLE_STRONG, 0, "Forecast");
	for (size_t i = 0; i < sizeof names / sizeof names[0]; i++) {
		const int at = column_find(names[i][1]);
		char text[80];
		const struct value value = column_value(&columns[at], &f->window, &view->night);
		value_people_text(&columns[at], &value, NULL, NULL, text, sizeof text);
		text_view_addf(v, *text ? ROLE_TEXT : ROLE_FAINT, FIGURE_INDENT, "  %s %s%s%s: %s",
			       names[i][0], *text ? text : "-", *text && columns[at].unit[0] ? " " : "",
			       *text ? columns[at].unit : "", columns[at].sentence);
	}
	text_view_add(
	    v, ROLE_TEXT, FIGURE_INDENT,
	    "  ingress, egress alone: What the telescope measures when it is there for that limb only: "
	    "the precision that brings as many bits.");
	assumed_line(v, &f->x.optics);
}
