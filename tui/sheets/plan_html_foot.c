/* SPDX-License-Identifier: MIT */
#include "tui/sheets/plan_html_parts.h"

#include "ephem/units.h"
#include "tui/cautions.h"
#include "tui/sheets/plan_words.h"

#include <math.h>
#include <string.h>

/* --- blocks --- */

static void block_row(struct html_page *p, const struct plan_block_view *b)
{
	fputs(b->near_sun ? "<tr class=\"sun\"><th scope=\"row\">" : "<tr><th scope=\"row\">", p->out.to);
	html_text(&p->out, b->text);
	fprintf(p->out.to, "</th><td>%s", plan_block_words[b->kind]);
	if (b->kind == BLOCK_POOR)
		fprintf(p->out.to, ", noise %g times", b->noise);
	fputs("</td><td>", p->out.to);
	html_local(p, b->from);
	fputs(" to ", p->out.to);
	html_local(p, b->to);
	fputs("</td><td>", p->out.to);
	html_utc(p, b->from);
	fputs(" to ", p->out.to);
	html_utc(p, b->to);
	fputs("</td></tr>\n", p->out.to);
	if (b->near_sun) {
		fputs("<tr><td colspan=\"4\" class=\"warn\"><b>The Sun is above -6 deg for some of it.</b> ",
		      p->out.to);
		html_text(&p->out, cautions[0]);
		fputs("</td></tr>\n", p->out.to);
	}
}

void plan_html_blocks(struct html_page *p)
{
	if (p->v->n_blocks == 0)
		return;
	fputs("<section>\n<h2>Blocks and lost time</h2>\n<table><thead><tr><th scope=\"col\">What</th>"
	      "<th scope=\"col\">Kind</th><th scope=\"col\">Local</th><th "
	      "scope=\"col\">UTC</th></tr></thead><tbody>\n",
	      p->out.to);
	for (size_t i = 0; i < p->v->n_blocks; i++)
		block_row(p, &p->v->block[i]);
	fputs("</tbody></table>\n</section>\n", p->out.to);
}

/* --- what was left out --- */

void plan_html_left(struct html_page *p)
{
	const struct plan_view *v = p->v;
	if (v->n_left == 0)
		return;
	fputs("<section>\n<h2>Left out</h2>\n", p->out.to);
	fprintf(p->out.to,
		"<details open><summary>%zu event%s, with what it would cost to take %s</summary>\n"
		"<table><thead><tr><th scope=\"col\">Target</th><th scope=\"col\">Event</th>"
		"<th scope=\"col\">Why</th><th scope=\"col\">Cost</th></tr></thead><tbody>\n",
		v->n_left, v->n_left == 1 ? "" : "s", v->n_left == 1 ? "it" : "each");
	for (size_t i = 0; i < v->n_left; i++) {
		const struct plan_left_view *l = &v->left[i];
		fputs("<tr><th scope=\"row\">", p->out.to);
		html_text(&p->out, l->target);
		fprintf(p->out.to, "</th><td>%s, epoch %ld</td><td>", plan_kind_word(l->kind), l->epoch);
		html_text(&p->out, l->reason);
		if (isfinite(l->cost))
			fprintf(p->out.to, "</td><td>%.2f</td></tr>\n", l->cost);
		else
			fputs("</td><td>can't be taken</td></tr>\n", p->out.to);
	}
	fputs("</tbody></table>\n<p>Cost: the worth that the order would lose.</p>\n</details>\n</section>\n",
	      p->out.to);
}

/* --- where it comes from --- */

static void plan_origin(struct html_page *p)
{
	const struct plan_view *v = p->v;
	FILE *to = p->out.to;
	char standing[300];
	plan_standing_words(v, standing, sizeof standing);
	fputs("<p>Plan: ", to);
	html_text(&p->out, standing);
	if (v->stored_utc[0]) {
		fputs(v->stored ? ", stored " : "; made from data last changed ", to);
		html_text(&p->out, v->stored_utc);
		fputs(" by ", to);
		html_text(&p->out, v->who[0] ? v->who : "nobody named");
	}
	fprintf(to, ".</p>\n<p>Worth %.2f, ", v->worth);
	if (v->optimal)
		fputs("the optimum: no other order is worth more.</p>\n", to);
	else
		fprintf(to, "not shown to be the optimum: no order is worth more than %.2f.</p>\n", v->bound);
	fprintf(
	    to,
	    "<p>Each move: %.1f min settling, %.2f deg/s, %.1f min for a change of filter; at least %.1f min "
	    "between neighbours.</p>\n",
	    v->rules.settle_d * DAY_MIN, v->rules.slew_deg_d / DAY_S, v->rules.filter_d * DAY_MIN,
	    v->gap_min);
}

static void name_list(struct html_page *p, const char *title, const char *const *name, size_t n)
{
	if (n == 0)
		return;
	fprintf(p->out.to, "<p>%s: ", title);
	for (size_t i = 0; i < n; i++) {
		fputs(i ? ", " : "", p->out.to);
		html_text(&p->out, name[i]);
	}
	fputs(".</p>\n", p->out.to);
}

static void limits(struct html_page *p)
{
	const char *at = p->v->limits ? p->v->limits : "";
	if (!at[0])
		return;
	fputs("<p>Limits: ", p->out.to);
	for (bool first = true; *at; at += *at == '\t', first = false) {
		char pair[128];
		const size_t n = strcspn(at, "\t");
		snprintf(pair, sizeof pair, "%.*s", (int)(n < sizeof pair ? n : sizeof pair - 1), at);
		char *equals = strchr(pair, '=');
		for (char *c = pair; *c && c != equals; c++)
			*c = *c == '_' ? ' ' : *c;
		if (equals)
			*equals = '\0';
		fprintf(p->out.to, "%s<span class=\"pair\">", first ? "" : ", ");
		html_text(&p->out, pair);
		if (equals) {
			fputs(" <b>", p->out.to);
			html_text(&p->out, equals + 1);
			fputs("</b>", p->out.to);
		}
		fputs("</span>", p->out.to);
		at += n;
	}
	fputs(".</p>\n", p->out.to);
}

static void ephemeris_row(struct html_page *p, const struct plan_member_view *m)
{
	FILE *to = p->out.to;
	const char *sigma = member_figure(m, "sigma_min");
	fputs("<tr><th scope=\"row\">", to);
	html_text(&p->out, m->target);
	if (m->ephemeris_version > 0)
		fprintf(to, "</th><td>%d</td><td>", m->ephemeris_version);
	else
		fputs("</th><td>not known</td><td>", to);
	html_text(&p->out, m->ephemeris_source && m->ephemeris_source[0] ? m->ephemeris_source : "not given");
	fputs("</td><td>", to);
	html_text(&p->out, m->ephemeris_entered_utc && m->ephemeris_entered_utc[0] ? m->ephemeris_entered_utc
										   : "not known");
	fputs("</td><td>", to);
	html_text(&p->out, m->ephemeris_scale && m->ephemeris_scale[0] ? m->ephemeris_scale : "not given");
	fputs("</td><td>", to);
	html_text(&p->out, sigma[0] ? sigma : "not known");
	fprintf(to, "%s</td></tr>\n", sigma[0] ? " min" : "");
}

static bool same_ephemeris(const struct plan_member_view *a, const struct plan_member_view *b)
{
	return a->ephemeris_id == b->ephemeris_id && a->ephemeris_version == b->ephemeris_version &&
	       strcmp(a->target, b->target) == 0 && a->kind == b->kind;
}

static bool listed_before(const struct plan_view *v, size_t item, size_t member)
{
	const struct plan_member_view *m = &v->item[item].member[member];
	for (size_t i = 0; i <= item; i++)
		for (size_t k = 0; k < (i == item ? member : v->item[i].n); k++)
			if (same_ephemeris(&v->item[i].member[k], m))
				return true;
	return false;
}

static void ephemerides(struct html_page *p)
{
	const struct plan_view *v = p->v;
	if (v->n_items == 0)
		return;
	fputs(
	    "<h3>Ephemerides</h3>\n<div class=\"scroll\" tabindex=\"0\" role=\"region\" "
	    "aria-label=\"Ephemerides\"><table><thead><tr><th scope=\"col\">Target</th>"
	    "<th scope=\"col\">Version</th><th scope=\"col\">Source</th><th scope=\"col\">Entered (UTC)</th>"
	    "<th scope=\"col\">Scale</th><th scope=\"col\">Error of the mid-time</th></tr></thead><tbody>\n",
	    p->out.to);
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++)
			if (!listed_before(v, i, k))
				ephemeris_row(p, &v->item[i].member[k]);
	fputs("</tbody></table></div>\n", p->out.to);
}

void plan_html_foot(struct html_page *p)
{
	const struct plan_view *v = p->v;
	fputs("<footer>\n<h2>Where it comes from</h2>\n", p->out.to);
	plan_origin(p);
	name_list(p, "Pinned", v->pin, v->n_pins);
	name_list(p, "Dropped", v->drop, v->n_drops);
	limits(p);
	if (v->leap_date && v->leap_date[0]) {
		fputs("<p>The table of leap seconds is known to be complete until ", p->out.to);
		html_text(&p->out, v->leap_date);
		fputs(".</p>\n", p->out.to);
	}
	ephemerides(p);
	fputs("<h2>Cautions</h2>\n<ul class=\"cautions\">\n", p->out.to);
	for (size_t i = 0; i < caution_count; i++) {
		fputs("<li>", p->out.to);
		html_text(&p->out, cautions[i]);
		fputs("</li>\n", p->out.to);
	}
	fputs("</ul>\n</footer>\n", p->out.to);
}
