/* SPDX-License-Identifier: MIT */
#include "tui/pages/night_detail.h"

#include "ephem/mount.h"
#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/pages/night_forecast.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum {
	CONTACTS = 5,
	LABEL_COLUMNS = 6,
	INDENT = 7,
	COLUMNS_FOR_RESERVE = 70,
	COLUMNS_FOR_SECONDS = 56, /* with a mark of a clock change behind them */
	COLUMNS_FOR_BJD = 71,
	COLUMNS_FOR_BJD_FULL = 76,
	CELL_BYTES = 40
};

/* One line of the contact table: a label and five cells. */
static void table_line(struct text_view *v, enum role role, const char *label,
		       char cell[CONTACTS][CELL_BYTES])
{
	int width = (v->width - LABEL_COLUMNS) / CONTACTS;
	char text[TEXT_LINE_BYTES];
	int used = snprintf(text, sizeof text, "%-*s", LABEL_COLUMNS, label);
	for (int i = 0; i < CONTACTS && used > 0 && (size_t)used < sizeof text; i++)
		used += snprintf(text + used, sizeof text - (size_t)used, "%*s", width < 16 ? width : 16,
				 cell[i]);
	text_view_add(v, role, INDENT, text);
}

static void contact_times(const struct window_event *ev, double at_d[CONTACTS])
{
	at_d[0] = ev->t1_d;
	at_d[1] = ev->t2_d;
	at_d[2] = ev->mid_d;
	at_d[3] = ev->t3_d;
	at_d[4] = ev->t4_d;
}

static void contact_table(struct text_view *v, const struct run *r, const struct night *night,
			  const struct night_head *head, const struct night_row *row)
{
	double at_d[CONTACTS];
	char cell[CONTACTS][CELL_BYTES] = {"T1", "T2", "mid", "T3", "T4"};
	const bool seconds = v->width >= COLUMNS_FOR_SECONDS;
	contact_times(&row->window->event, at_d);
	table_line(v, ROLE_STRONG, "", cell);
	for (int i = 0; i < CONTACTS; i++)
		local_text(night, r->zone, at_d[i], seconds, cell[i], CELL_BYTES);
	table_line(v, ROLE_TEXT, head->zone, cell);
	if (r->zone) {
		for (int i = 0; i < CONTACTS; i++)
			local_text(night, NULL, at_d[i], seconds, cell[i], CELL_BYTES);
		table_line(v, ROLE_TEXT, "UTC", cell);
	}
	if (v->width >= COLUMNS_FOR_BJD) {
		int decimals = v->width >= COLUMNS_FOR_BJD_FULL ? 5 : 4;
		for (int i = 0; i < CONTACTS; i++) {
			char bjd[NUMBER_TEXT_MAX] = "-";
			if (night_covers(at_d[i]))
				number_text_jd2(night_bjd_tdb(night, &row->star, at_d[i]).jd, decimals, bjd);
			snprintf(cell[i], CELL_BYTES, "%s", bjd);
		}
		table_line(v, ROLE_TEXT, "BJD", cell);
	}
}

static void altitude_line(struct text_view *v, const struct night *night, const struct night_row *row)
{
	double at_d[CONTACTS];
	char cell[CONTACTS][CELL_BYTES];
	const bool with_az = v->width >= COLUMNS_FOR_SECONDS;
	contact_times(&row->window->event, at_d);
	for (int i = 0; i < CONTACTS; i++) {
		struct altaz a = {NAN, NAN};
		if (night_covers(at_d[i]))
			a = night_star_altaz(night, &row->star, at_d[i]);
		if (isnan(a.alt_deg))
			snprintf(cell[i], CELL_BYTES, "-");
		else if (with_az)
			snprintf(cell[i], CELL_BYTES, "%.0f, %.0f", a.alt_deg, a.az_north_deg);
		else
			snprintf(cell[i], CELL_BYTES, "%.0f", a.alt_deg);
	}
	table_line(v, ROLE_TEXT, with_az ? "alt,az" : "alt", cell);
}

static void be_there_line(struct text_view *v, const struct run *r, const struct night *night,
			  const struct night_head *head, const struct night_row *row)
{
	const struct window_event *ev = &row->window->event;
	char latest[16], from[16], to[16];
	local_text(night, r->zone, ev->latest_start_d, false, latest, sizeof latest);
	local_text(night, r->zone, ev->reserve_start_d, false, from, sizeof from);
	local_text(night, r->zone, ev->reserve_end_d, false, to, sizeof to);
	char kept[80] = "";
	if (v->width >= COLUMNS_FOR_RESERVE)
		snprintf(kept, sizeof kept, ", reserve %s-%s %s", from, to, head->zone);
	if (!row->usable)
		text_view_addf(v, ROLE_BAD, INDENT, "Times  no usable moment in the reserve %s to %s %s",
			       from, to, head->zone);
	else if (ev->latest_start_d < row->on_d)
		text_view_addf(v, ROLE_WARN, INDENT, "Times  be on %s (the ingress needs %s), leave %s%s",
			       row->text[ROW_ON], latest, row->text[ROW_LEAVE], kept);
	else
		text_view_addf(v, ROLE_TEXT, INDENT, "Times  be on %s, at the latest %s, leave %s%s",
			       row->text[ROW_ON], latest, row->text[ROW_LEAVE], kept);
}

static void chance_line(struct text_view *v, const struct night_row *row)
{
	const struct window *w = row->window;
	char in[16], eg[16], mid[16];
	if (!row->has_chance) {
		text_view_add(v, ROLE_WARN, INDENT,
			      "Chance none can be given; the times are the predicted ones");
		return;
	}
	chance_text(w->chance.ingress, in, sizeof in);
	chance_text(w->chance.egress, eg, sizeof eg);
	chance_text(w->chance.mid, mid, sizeof mid);
	text_view_addf(v, row->chance_role, INDENT,
		       "Chance done %s %%, ingress %s %%, egress %s %%, mid %s %%, in clear weather",
		       row->text[ROW_DONE], in, eg, mid);
}

static void sigma_line(struct text_view *v, const struct night_row *row)
{
	const struct window_event *ev = &row->window->event;
	if (!isnan(ev->sigma_min))
		text_view_addf(v, ROLE_TEXT, INDENT, "Sigma  mid-time %.1f min, contacts %.1f min",
			       ev->sigma_min, ev->sigma_contact_min);
}

/* `ingress (all), flat part (56 %)`: what one cause takes. */
static void lost_to_cause(const struct window_cover *c, enum cause cause, char *out, size_t n)
{
	static const char *const parts[PART_COUNT] = {"baseline before", "ingress", "flat part", "egress",
						      "baseline after"};
	size_t used = 0;
	out[0] = '\0';
	for (int i = 0; i < PART_COUNT && used < n; i++) {
		char share[16];
		if (c->lost_to[i] != cause || isnan(c->share[i]))
			continue;
		if (c->share[i] <= 0.0)
			snprintf(share, sizeof share, "all");
		else
			snprintf(share, sizeof share, "%.0f %%",
				 fmin(fmax(100.0 * (1.0 - c->share[i]), 1.0), 99.0));
		used +=
		    (size_t)snprintf(out + used, n - used, "%s%s (%s)", used ? ", " : "", parts[i], share);
	}
}

static void lost_line(struct text_view *v, const struct night_row *row)
{
	char text[800] = "", parts[300];
	size_t used = 0;
	for (int cause = 0; cause < CAUSE_COUNT && used < sizeof text; cause++) {
		lost_to_cause(&row->window->cover, (enum cause)cause, parts, sizeof parts);
		if (*parts)
			used += (size_t)snprintf(text + used, sizeof text - used, "%sto %s: %s",
						 used ? "; " : "", cause_phrases[cause], parts);
	}
	text_view_addf(v, used && !row->flip_only ? ROLE_WARN : ROLE_TEXT, INDENT, "Lost   %s",
		       used ? text : "nothing");
}

/* Nothing without a flip. */
static void flip_line(struct text_view *v, const struct run *r, const struct night *night,
		      const struct night_head *head, const struct night_row *row)
{
	const struct telescope *t = night->telescope;
	const double flip_d = row->window->forecast.flip_d;
	char at[16], takes[NUMBER_TEXT_MAX];
	if (!t || isnan(flip_d))
		return;
	local_text(night, r->zone, flip_d, true, at, sizeof at);
	number_text(round(mount_flip_d(t) * DAY_MIN * 100.0) / 100.0, takes);
	text_view_addf(v, ROLE_STRONG, INDENT, "Flip   at %s %s the mount changes sides, for %s min%s", at,
		       head->zone, takes, isnan(t->flip_min) ? " (usual; not given)" : "");
}

static void sky_line(struct text_view *v, const struct night_row *row)
{
	const struct window *w = row->window;
	const struct window_sky *s = &w->sky;
	char text[300], number[NUMBER_TEXT_MAX];
	number_text_fixed(s->airmass_min, 2, number);
	int used = snprintf(text, sizeof text, "Sky    least airmass %s; Moon %.0f %% lit, ",
			    *number ? number : "-", 100.0 * s->moon_lit);
	if (s->moon_alt_deg > 0.0)
		used += snprintf(text + used, sizeof text - (size_t)used, "%.0f deg high, ", s->moon_alt_deg);
	else
		used += snprintf(text + used, sizeof text - (size_t)used, "down, ");
	snprintf(text + used, sizeof text - (size_t)used, "%.0f deg away; Sun at %.0f deg (all at mid-time)",
		 s->moon_sep_deg, s->sun_alt_mid_deg);
	text_view_add(v, ROLE_TEXT, INDENT, text);
}

static void star_line(struct text_view *v, const struct night_row *row)
{
	const struct window_event *ev = &row->window->event;
	const struct target *t = ev->prepared->target;
	char period[NUMBER_TEXT_MAX], depth[NUMBER_TEXT_MAX], band[64], hours[NUMBER_TEXT_MAX];
	number_text_fixed(t->period_d, 6, period);
	number_text_fixed(ev->depth_ppt, 1, depth);
	number_text_fixed((ev->t4_d - ev->t1_d) * 24.0, 2, hours);
	text_clean(t->band, band, sizeof band);
	text_view_addf(v, ROLE_TEXT, INDENT,
		       "Event  epoch %ld, lasts %s h, depth %s%s, period %s d, magnitude %s %s", ev->epoch,
		       hours, *depth ? depth : "unknown", *depth ? " ppt" : "", period,
		       row->text[ROW_MAG][0] ? row->text[ROW_MAG] : "unknown", band);
}

static void flag_lines(struct text_view *v, uint32_t flags, bool grave)
{
	const uint32_t first = FLAG_BIT(FLAG_SUN_UP) | FLAG_BIT(FLAG_SUN_NEAR) | FLAG_BIT(FLAG_PHASE_LOST) |
			       FLAG_BIT(FLAG_SIGMA_UNKNOWN) | FLAG_BIT(FLAG_DOUBTFUL_POSITION);
	for (int f = 0; f < FLAG_COUNT; f++)
		if ((flags & FLAG_BIT(f)) && ((first & FLAG_BIT(f)) != 0) == grave)
			text_view_addf(v, grave ? ROLE_BAD : ROLE_TEXT, INDENT, "%s  %s",
				       grave ? "!    " : "Doubt", flag_rules[f].sentence);
}

/* Limits of the target that differ from the run's. */
static void own_limits_line(struct text_view *v, const struct limits *l)
{
	char text[400] = "", value[NUMBER_TEXT_MAX];
	size_t used = 0;
	for (int i = 0; i < LIM_COUNT && used < sizeof text; i++) {
		if (l->source[i] != FROM_TARGET)
			continue;
		number_text(l->value[i], value);
		used += (size_t)snprintf(text + used, sizeof text - used, "%s%s %s", used ? ", " : "",
					 limit_rules[i].key, value);
	}
	if (used)
		text_view_addf(v, ROLE_WARN, INDENT, "Limits of its own: %s", text);
}

static void source_line(struct text_view *v, const struct night_row *row)
{
	const struct target *t = row->window->event.prepared->target;
	char source[256], scale[64];
	text_clean(t->source, source, sizeof source);
	standard_text(&t->standard, scale, sizeof scale);
	text_view_addf(v, ROLE_FAINT, INDENT, "Source %s; epoch given in %s", *source ? source : "not said",
		       scale);
}

/* Where room is short, its first line. */
static void plan_line_of(struct text_view *v, bool roomy, const char *plan)
{
	const int before = v->n;
	if (*plan)
		text_view_addf(v, ROLE_STRONG, INDENT, "Plan   %s", plan);
	if (!roomy && v->n > before + 1)
		v->n = before + 1;
}

/* What is news of the window. */
static void first_lines(struct text_view *v, bool roomy, const struct run *r, const struct night_view *view,
			const struct night_head *head, const struct night_row *row, const char *plan)
{
	be_there_line(v, r, &view->night, head, row);
	plan_line_of(v, roomy, plan);
	/* where room is short the plan goes before what is no news */
	if (roomy || !*plan || (strcmp(row->lost_long, "nothing") != 0 && !row->flip_only))
		lost_line(v, row);
	flip_line(v, r, &view->night, head, row);
	contact_table(v, r, &view->night, head, row);
	if (roomy)
		altitude_line(v, &view->night, row);
	chance_line(v, row);
	if (!roomy)
		altitude_line(v, &view->night, row);
	flag_lines(v, row->window->event.flags, true);
	own_limits_line(v, &row->window->event.prepared->limits);
}

void detail_lines(struct text_view *v, int width, enum detail_extent extent, const struct run *r,
		  const struct night_view *view, const struct night_head *head, const struct night_row *row,
		  const char *plan)
{
	struct forecast_shown f;
	text_view_start(v, width);
	first_lines(v, extent != DETAIL_SHORT, r, view, head, row, plan);
	forecast_show(&f, view, row);
	forecast_lines(v, r, view, row, &f);
	sigma_line(v, row);
	sky_line(v, row);
	star_line(v, row);
	flag_lines(v, row->window->event.flags, false);
	source_line(v, row);
	if (extent != DETAIL_WHOLE)
		return;
	wish_lines(v, r, row, &f);
	minute_lines(v, r, view, head, &f);
	forecast_figure_lines(v, view, &f);
}
