/* SPDX-License-Identifier: MIT */
#include "tui/sheets/plan_html_parts.h"

#include "ephem/angle_text.h"
#include "ephem/flags.h"
#include "ephem/number_text.h"
#include "tui/cautions.h"
#include "tui/parts/columns.h"
#include "tui/sheets/plan_words.h"

#include <math.h>
#include <string.h>

/* --- facts: a name and a value each --- */

static void fact_begin(struct html_page *p, const char *name)
{
	fprintf(p->out.to, "<div><dt>%s</dt><dd>", name);
}

static void fact_end(struct html_page *p)
{
	fputs("</dd></div>\n", p->out.to);
}

static void fact(struct html_page *p, const char *name, const char *value)
{
	fact_begin(p, name);
	html_text(&p->out, value);
	fact_end(p);
}

/* A figure with the decimals that people get; false and "not known" without one. */
static bool figure(const struct plan_member_view *m, const char *column, char out[NUMBER_TEXT_MAX])
{
	const int c = column_find(column);
	const char *text = member_figure(m, column);
	double value;
	struct err e;
	snprintf(out, NUMBER_TEXT_MAX, "not known");
	if (c < 0 || text[0] == '\0' || number_parse(text, strlen(text), &value, NULL, &e) != ST_OK)
		return false;
	number_text_fixed(value, columns[c].people_decimals, out);
	return true;
}

static void fact_figure(struct html_page *p, const char *name, const struct plan_member_view *m,
			const char *column, const char *unit)
{
	char number[NUMBER_TEXT_MAX], text[NUMBER_TEXT_MAX + 32];
	const bool known = figure(m, column, number);
	snprintf(text, sizeof text, "%s%s%s", number, known && unit[0] ? " " : "", known ? unit : "");
	fact(p, name, text);
}

static void fact_place(struct html_page *p, const struct plan_member_view *m)
{
	char ra[ANGLE_TEXT_MAX], dec[ANGLE_TEXT_MAX], text[2 * ANGLE_TEXT_MAX + 8] = "not known";
	if (isfinite(m->ra_deg) && isfinite(m->dec_deg)) {
		ra_text(m->ra_deg, 2, ra);
		dec_text(m->dec_deg, 1, dec);
		snprintf(text, sizeof text, "%s %s", ra, dec);
	}
	fact(p, "Coordinates (ICRS)", text);
}

static void fact_magnitude(struct html_page *p, const struct plan_member_view *m)
{
	char mag[NUMBER_TEXT_MAX];
	number_text_fixed(m->mag, 1, mag);
	fact_begin(p, "Magnitude");
	html_text(&p->out, isfinite(m->mag) ? mag : "not known");
	if (isfinite(m->mag) && m->mag_band && m->mag_band[0]) {
		fputs(" in ", p->out.to);
		html_text(&p->out, m->mag_band);
	}
	fact_end(p);
}

static void fact_chances(struct html_page *p, const struct plan_member_view *m)
{
	static const char *const part[][2] = {
	    {"ingress", "chance_ingress"}, {"egress", "chance_egress"}, {"done", "chance_done"}};
	char share[NUMBER_TEXT_MAX], text[4 * NUMBER_TEXT_MAX] = "";
	for (size_t i = 0; i < sizeof part / sizeof part[0]; i++) {
		const size_t used = strlen(text);
		plan_per_cent(m, part[i][1], share);
		if (share[0])
			snprintf(text + used, sizeof text - used, "%s%s %s %%", used ? ", " : "", part[i][0],
				 share);
	}
	fact(p, "Chance in clear weather", text[0] ? text : "not known");
}

static void fact_airmass(struct html_page *p, const struct plan_member_view *m)
{
	char at[3][NUMBER_TEXT_MAX], least[NUMBER_TEXT_MAX], text[5 * NUMBER_TEXT_MAX];
	(void)figure(m, "airmass_start", at[0]);
	(void)figure(m, "airmass_mid", at[1]);
	(void)figure(m, "airmass_end", at[2]);
	(void)figure(m, "airmass_min", least);
	snprintf(text, sizeof text, "start %s, mid %s, end %s, least %s", at[0], at[1], at[2], least);
	fact(p, "Airmass", text);
}

static void fact_moon(struct html_page *p, const struct plan_member_view *m)
{
	char apart[NUMBER_TEXT_MAX], alt[NUMBER_TEXT_MAX], lit[NUMBER_TEXT_MAX],
	    text[4 * NUMBER_TEXT_MAX] = "not known";
	plan_per_cent(m, "moon_lit", lit);
	if (figure(m, "moon_sep_deg", apart) && figure(m, "moon_alt_deg", alt) && lit[0])
		snprintf(text, sizeof text, "%s deg away, %s deg high, %s %% lit", apart, alt, lit);
	fact(p, "Moon at mid-time", text);
}

static void fact_usable(struct html_page *p, const struct plan_member_view *m)
{
	char share[NUMBER_TEXT_MAX], lost[512];
	plan_per_cent(m, "coverage", share);
	plan_list_words(m, "lost_by", lost, sizeof lost);
	fact_begin(p, "Usable share");
	html_text(&p->out, share[0] ? share : "not known");
	fputs(share[0] ? " %" : "", p->out.to);
	if (lost[0]) {
		fputs("; lost to ", p->out.to);
		html_text(&p->out, lost);
	}
	fact_end(p);
}

/* What only a telescope with a forecast gives. */
static void facts_forecast(struct html_page *p, const struct plan_member_view *m)
{
	static const struct {
		const char *name, *of_whole, *column, *unit;
	} row[] = {
	    {"Exposure", "Exposure", "exposure_s", "s"},
	    {"Noise of a minute", "Noise of a minute", "noise_ppt_min", "ppt"},
	    {"Depth over its error", "Depth over its error, whole event", "depth_snr", ""},
	    {"Expected error of the mid-time", "Expected error of the mid-time, whole event", "timing_s",
	     "s"},
	};
	char number[NUMBER_TEXT_MAX];
	for (size_t i = 0; i < sizeof row / sizeof row[0]; i++)
		if (figure(m, row[i].column, number))
			fact_figure(p, plan_one_limb(m) ? row[i].of_whole : row[i].name, m, row[i].column,
				    row[i].unit);
}

static void flag_list(struct html_page *p, const struct plan_member_view *m)
{
	const char *at = member_figure(m, "flags");
	if (!at[0])
		return;
	fputs("<ul class=\"flags\">\n", p->out.to);
	for (; *at; at += *at == ';') {
		char word[80];
		const size_t n = strcspn(at, ";");
		snprintf(word, sizeof word, "%.*s", (int)(n < sizeof word ? n : sizeof word - 1), at);
		const char *sentence = "";
		for (int f = 0; f < FLAG_COUNT; f++)
			if (strcmp(flag_rules[f].word, word) == 0)
				sentence = flag_rules[f].sentence;
		for (char *c = word; *c; c++)
			*c = *c == '_' ? ' ' : *c;
		fputs("<li><b>", p->out.to);
		html_text(&p->out, word);
		fprintf(p->out.to, "</b>%s", sentence[0] ? ": " : "");
		html_text(&p->out, sentence);
		fputs("</li>\n", p->out.to);
		at += n;
	}
	fputs("</ul>\n", p->out.to);
}

static void member_facts(struct html_page *p, const struct plan_member_view *m)
{
	fputs("<dl>\n", p->out.to);
	fact(p, "To catch", plan_variant_sentence(m->variant));
	fact_place(p, m);
	fact_magnitude(p, m);
	fact_figure(p, "Depth", m, "depth_ppt", "ppt");
	fact_figure(p, "Sigma of the mid-time", m, "sigma_min", "min");
	fact_chances(p, m);
	fact_airmass(p, m);
	fact_figure(p, "Altitude at mid-time", m, "alt_mid_deg", "deg");
	fact_moon(p, m);
	fact_usable(p, m);
	facts_forecast(p, m);
	fact(p, "Mid-time, BJD_TDB", member_figure(m, "mid_bjd_tdb"));
	fputs("</dl>\n", p->out.to);
	if (m->moved) {
		const bool later = m->moved_min >= 0.0;
		fprintf(p->out.to,
			"<p class=\"warn\"><b>Moved:</b> by the ephemeris of today the mid-time is %.1f min "
			"%s than "
			"planned",
			fabs(m->moved_min), later ? "later" : "earlier");
		if (m->moved_why && m->moved_why[0]) {
			fputs(": ", p->out.to);
			html_text(&p->out, m->moved_why);
		}
		fputs(".</p>\n", p->out.to);
	}
	flag_list(p, m);
}

/* --- times --- */

static void times_begin(struct html_page *p)
{
	fputs("<table class=\"times\"><thead><tr><th scope=\"col\">Event</th><th scope=\"col\">Local</th>"
	      "<th scope=\"col\">UTC</th></tr></thead><tbody>\n",
	      p->out.to);
}

static void time_row(struct html_page *p, const char *name, struct utc t, const char *remark)
{
	fprintf(p->out.to, "<tr><th scope=\"row\">%s", name);
	if (remark[0])
		fprintf(p->out.to, " <small>%s</small>", remark);
	fputs("</th><td>", p->out.to);
	html_local(p, t);
	fputs("</td><td>", p->out.to);
	html_utc(p, t);
	fputs("</td></tr>\n", p->out.to);
}

static void times_end(struct html_page *p)
{
	fputs("</tbody></table>\n", p->out.to);
}

static void item_start(struct html_page *p, const struct plan_item_view *item)
{
	time_row(p, "Slew by", item->slew_by, "");
	time_row(p, "Start", item->start, "");
	if (item->has_latest)
		time_row(p, "Latest start", item->latest_start, "");
}

static void contacts(struct html_page *p, const struct plan_item_view *item, const struct plan_member_view *m)
{
	struct utc t;
	for (int c = 0; c < CONTACT_COUNT; c++)
		if (plan_contact_at(m, (enum plan_contact)c, &t))
			time_row(p, plan_contact_words[c], t, html_outside(p, item, t));
	if (plan_flip_at(p->v, item, m, &t)) {
		time_row(p, "Flip", t, "");
		/* a row of its own: the words are too wide for the head of one on a phone */
		fprintf(p->out.to, "<tr><td colspan=\"3\">At the flip: %s.</td></tr>\n", plan_flip_caution);
	}
}

/* --- cards --- */

static void member_name(struct html_page *p, const struct plan_member_view *m)
{
	html_text(&p->out, m->target);
	if (m->branch && m->branch[0]) {
		fputs(", ", p->out.to);
		html_text(&p->out, m->branch);
	}
	fprintf(p->out.to, " <small>%s, epoch %ld</small>", plan_kind_word(m->kind), m->epoch);
}

static void item_state(struct html_page *p, const struct plan_item_view *item)
{
	fprintf(p->out.to, "<p class=\"state\"><b>%s</b>", plan_state_words[item->state]);
	if (item->marked_utc && item->marked_utc[0]) {
		fputs(" at ", p->out.to);
		html_text(&p->out, item->marked_utc);
	}
	if (item->cause && item->cause[0]) {
		fputs(", cause: ", p->out.to);
		html_text(&p->out, item->cause);
	}
	fprintf(p->out.to, "; worth %.2f", item->worth);
	if (item->note && item->note[0]) {
		fputs(". Note: ", p->out.to);
		html_text(&p->out, item->note);
	}
	fputs("</p>\n", p->out.to);
}

static void single_card(struct html_page *p, const struct plan_item_view *item)
{
	times_begin(p);
	item_start(p, item);
	contacts(p, item, &item->member[0]);
	time_row(p, "Leave", item->end, "");
	times_end(p);
	member_facts(p, &item->member[0]);
}

static void joint_card(struct html_page *p, const struct plan_item_view *item)
{
	times_begin(p);
	item_start(p, item);
	time_row(p, "Leave", item->end, "");
	times_end(p);
	fputs("<div class=\"members\">\n", p->out.to);
	for (size_t i = 0; i < item->n; i++) {
		fputs("<section class=\"member\">\n<h4>", p->out.to);
		member_name(p, &item->member[i]);
		fputs("</h4>\n", p->out.to);
		times_begin(p);
		contacts(p, item, &item->member[i]);
		times_end(p);
		member_facts(p, &item->member[i]);
		fputs("</section>\n", p->out.to);
	}
	fputs("</div>\n", p->out.to);
}

static void card(struct html_page *p, const struct plan_item_view *item)
{
	fprintf(p->out.to, "<article class=\"card%s\" id=\"item-%d\">\n<h3>%d. ", item->n > 1 ? " joint" : "",
		item->order, item->order);
	if (item->n == 1)
		member_name(p, &item->member[0]);
	else
		html_item_name(p, item);
	fputs("</h3>\n", p->out.to);
	item_state(p, item);
	if (item->n == 1)
		single_card(p, item);
	else
		joint_card(p, item);
	if (item->if_missed[0]) {
		fputs("<p class=\"missed\">", p->out.to);
		html_text(&p->out, item->if_missed);
		fputs("</p>\n", p->out.to);
	}
	fputs("</article>\n", p->out.to);
}

void plan_html_cards(struct html_page *p)
{
	bool any = false;
	for (size_t i = 0; i < p->v->n_items; i++) {
		if (p->v->item[i].in_day)
			continue;
		if (!any)
			fputs("<section>\n<h2>Items</h2>\n<div class=\"cards\">\n", p->out.to);
		any = true;
		card(p, &p->v->item[i]);
	}
	if (any)
		fputs("</div>\n</section>\n", p->out.to);
}

void plan_html_refused(struct html_page *p)
{
	bool any = false;
	for (size_t i = 0; i < p->v->n_items; i++) {
		const struct plan_item_view *item = &p->v->item[i];
		if (!item->in_day)
			continue;
		if (!any) {
			fputs("<section class=\"danger\">\n<h2>Refused: the Sun is up</h2>\n<p><b>",
			      p->out.to);
			html_text(&p->out, cautions[0]);
			fputs("</b></p>\n<ul>\n", p->out.to);
		}
		any = true;
		fprintf(p->out.to, "<li>%d. ", item->order);
		html_item_name(p, item);
		fputs(", ", p->out.to);
		html_local(p, item->start);
		fputs(" to ", p->out.to);
		html_local(p, item->end);
		fprintf(p->out.to, ": %s. This sheet does not take it.</li>\n", plan_sun_up_reason);
	}
	if (any)
		fputs("</ul>\n</section>\n", p->out.to);
}
