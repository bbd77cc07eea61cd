/* SPDX-License-Identifier: MIT */
#include "tui/sheets/text_rows.h"

#include "ephem/number_text.h"
#include "tui/pages/night_head.h"
#include "tui/parts/columns.h"

#include <math.h>
#include <string.h>

char text_mark(int flag)
{
	return (char)(flag < 26 ? 'a' + flag : 'A' + flag - 26);
}

/* `after:altitude;flat:sun` as words: `after: altitude, flat: sun`. */
static void lost_words(const struct window *w, char *out, size_t n)
{
	char text[256];
	size_t used = 0;
	lost_by_text(&w->cover, text, sizeof text);
	for (const char *s = text; *s && used + 3 < n; s++) {
		out[used++] = *s == ';' ? ',' : *s;
		if (*s == ';' || *s == ':')
			out[used++] = ' ';
	}
	out[used] = '\0';
}

/* A share as per cent; 100 only where nothing is lost, 0 only where nothing is left. */
static void per_cent(double share, char out[8])
{
	double p = floor(100.0 * share + 0.5);
	if (isnan(share))
		snprintf(out, 8, "-");
	else if (p < 1.0 && share > 0.0)
		snprintf(out, 8, "<1");
	else if (p > 99.0 && share < 0.9995)
		snprintf(out, 8, ">99");
	else
		snprintf(out, 8, "%.0f", p);
}

static void sigma_text(double sigma_min, char out[NUMBER_TEXT_MAX])
{
	number_text_fixed(sigma_min, sigma_min < 10.0 ? 1 : 0, out);
	if (!out[0])
		snprintf(out, NUMBER_TEXT_MAX, "?");
}

void text_heading(const struct text_sheet *t, const char *zone_name)
{
	if (t->plain) {
		fputc('\n', t->to);
		return;
	}
	fputc('\n', t->to);
	if (t->season)
		fprintf(t->to, "%-23s %-*s ", "night", t->site_width, "site");
	fprintf(t->to, "%-*s %-5s  %-5s  %-5s  %-5s  %5s  %4s %4s %4s %4s %4s  %4s%s  %s\n", t->name_width,
		"target", "on", "T1", "T4", "leave", "sigma", "bef", "ingr", "flat", "egr", "aft", "done",
		t->forecast ? " worth  S/N" : "", "lost to; marks");
	if (t->season)
		fprintf(t->to, "%-23s %-*s ", "", t->site_width, "");
	fprintf(t->to, "%-*s %-26s %5s  %24s  %4s\n", t->name_width, "", zone_name, "min",
		"usable, per cent     ", "%");
}

void text_forecast_notes(const struct text_sheet *t)
{
	static const char *const shown[][2] = {{"worth", "worth"}, {"S/N", "depth_snr"}};
	for (size_t i = 0; i < sizeof shown / sizeof shown[0]; i++) {
		const int at = column_find(shown[i][1]);
		fprintf(t->to, "%s: %s\n", shown[i][0], columns[at].sentence);
	}
}

enum { FORECAST_BYTES = 2 * NUMBER_TEXT_MAX + 4 };
/* Worth and S/N, ` 1.93   42`; "" where none is told. */
static void forecast_cells(const struct text_sheet *t, const struct window *w, char out[FORECAST_BYTES])
{
	char worth[NUMBER_TEXT_MAX], snr[NUMBER_TEXT_MAX];
	out[0] = '\0';
	if (!t->forecast)
		return;
	number_text_fixed(w->forecast.worth, 2, worth);
	number_text_fixed(w->forecast.depth_snr, 0, snr);
	snprintf(out, FORECAST_BYTES, " %5s %4s", worth[0] ? worth : "-", snr[0] ? snr : "-");
}

void text_row(const struct text_sheet *t, const struct window *w, const struct night *n,
	      const struct zone *zone)
{
	const double at[] = {w->cover.usable_start_d, w->event.t1_d, w->event.t4_d, w->cover.usable_end_d};
	char sigma[NUMBER_TEXT_MAX], lost[300], share[8], clock[CLOCK_BYTES], name[64], cells[FORECAST_BYTES];
	if (t->season) {
		night_name(n->mjd, name, sizeof name);
		fprintf(t->to, "%-23s ", name);
		text_cell(t->to, n->site->name, t->site_width, true);
		fputc(' ', t->to);
	}
	text_cell(t->to, w->event.prepared->target->name, t->name_width, true);
	for (size_t i = 0; i < sizeof at / sizeof at[0]; i++) {
		text_clock(n, zone, at[i], false, clock);
		fprintf(t->to, " %-6s", clock); /* the mark of a clock change takes the blank behind */
	}
	sigma_text(w->event.sigma_min, sigma);
	fprintf(t->to, " %5s ", sigma);
	for (int part = 0; part < PART_COUNT; part++) {
		per_cent(w->cover.share[part], share);
		fprintf(t->to, " %4s", share);
	}
	per_cent(w->chance.done, share);
	lost_words(w, lost, sizeof lost);
	forecast_cells(t, w, cells);
	fprintf(t->to, "  %4s%s  %s%s", share, cells,
		w->event.kind == KIND_OCCULTATION ? "(occultation) " : "", lost);
	if (w->event.flags) {
		fputs(lost[0] ? "; " : "", t->to);
		for (int f = 0; f < FLAG_COUNT; f++)
			if (w->event.flags & FLAG_BIT(f))
				fputc(text_mark(f), t->to);
	}
	if (w->event.flags & (FLAG_BIT(FLAG_SUN_UP) | FLAG_BIT(FLAG_SUN_NEAR)))
		fputs("  SUN UP, do not slew", t->to);
	fputc('\n', t->to);
}

/* --- one record a paragraph --- */

static void clock_words(const struct text_sheet *t, const char *word, const struct night *n,
			const struct zone *zone, double t_d)
{
	char local[CLOCK_BYTES], utc[CLOCK_BYTES];
	text_clock(n, zone, t_d, true, local);
	text_clock(n, NULL, t_d, true, utc);
	fprintf(t->to, "%s: %s", word, local);
	if (zone && isfinite(t_d))
		fprintf(t->to, " (%s)", utc);
	fputs(".\n", t->to);
}

static void share_words(const struct text_sheet *t, const struct window *w)
{
	fputs("Usable:", t->to);
	for (int part = 0; part < PART_COUNT; part++) {
		char share[8];
		per_cent(w->cover.share[part], share);
		fprintf(t->to, "%s %s ", part ? "," : "", part_words[part]);
		if (isnan(w->cover.share[part]))
			fputs("none (there is no such part)", t->to);
		else
			fprintf(t->to, "%s per cent", share);
	}
	fputs(".\n", t->to);
}

static void forecast_words(const struct text_sheet *t, const struct window *w)
{
	const struct window_forecast *f = &w->forecast;
	char worth[NUMBER_TEXT_MAX], snr[NUMBER_TEXT_MAX], noise[NUMBER_TEXT_MAX], timing[NUMBER_TEXT_MAX];
	if (!t->forecast)
		return;
	number_text_fixed(f->worth, 2, worth);
	number_text_fixed(f->depth_snr, 0, snr);
	number_text_fixed(f->noise_ppt_min, 2, noise);
	number_text_fixed(f->timing_s, 0, timing);
	fprintf(t->to, "Worth: %s.\n", worth[0] ? worth : "not known");
	if (!noise[0]) {
		fputs("Noise: not known.\n", t->to);
		return;
	}
	fprintf(
	    t->to,
	    "Noise of a minute: %s ppt. Depth over its error: %s. Error of the mid-time measured: %s%s.\n",
	    noise, snr[0] ? snr : "not known", timing[0] ? timing : "not known", timing[0] ? " s" : "");
}

void text_record(const struct text_sheet *t, const struct window *w, const struct night *n,
		 const struct zone *zone)
{
	const struct window_event *ev = &w->event;
	char sigma[NUMBER_TEXT_MAX], share[8], lost[300], name[64], flags[400];
	text_cell(t->to, ev->prepared->target->name, NAME_CHARS_MAX, false);
	fprintf(t->to, ", %s, epoch %ld", ev->kind == KIND_TRANSIT ? "transit" : "occultation", ev->epoch);
	if (t->season) {
		night_name(n->mjd, name, sizeof name);
		fprintf(t->to, ", night %s at ", name);
		text_cell(t->to, n->site->name, NAME_CHARS_MAX, false);
	}
	fputs(".\n", t->to);
	if (ev->flags & (FLAG_BIT(FLAG_SUN_UP) | FLAG_BIT(FLAG_SUN_NEAR)))
		fputs("Sun up during part of the reserve: do not slew then.\n", t->to);
	if (isfinite(w->cover.usable_start_d))
		clock_words(t, "Be on target", n, zone, w->cover.usable_start_d);
	else
		fputs("No moment of the reserve is usable.\n", t->to);
	clock_words(t, "T1, ingress begins", n, zone, ev->t1_d);
	clock_words(t, "T4, egress ends", n, zone, ev->t4_d);
	if (isfinite(w->cover.usable_end_d))
		clock_words(t, "Leave", n, zone, w->cover.usable_end_d);
	sigma_text(ev->sigma_min, sigma);
	if (isfinite(ev->sigma_min))
		fprintf(t->to, "Error of the mid-time: %s min.\n", sigma);
	else
		fputs("Error of the mid-time: not known.\n", t->to);
	share_words(t, w);
	per_cent(w->chance.done, share);
	if (isfinite(w->chance.done))
		fprintf(t->to, "Chance of both limbs in clear weather: %s per cent.\n", share);
	else
		fputs("Chance: none can be given.\n", t->to);
	forecast_words(t, w);
	lost_words(w, lost, sizeof lost);
	fprintf(t->to, "Lost to: %s.\n", lost[0] ? lost : "nothing");
	flags_text(ev->flags, flags, sizeof flags);
	for (char *s = flags; *s; s++)
		*s = *s == ';' ? ',' : *s;
	fprintf(t->to, "Marks: %s.\n\n", flags[0] ? flags : "none");
}
