/* SPDX-License-Identifier: MIT
 * The night sheet as text: the running order. */
#include "tui/sheets/plan_page.h"

#include <math.h>
#include <string.h>

enum { ITEM_INDENT = 4, MEMBER_INDENT = 6, WRAP_INDENT = 8 };

/* `airmass 1.39 at the start, 1.26 at mid, ...`: figures that are not there are left out. */
static void figures_line(struct plan_page *p, const struct plan_member_view *m, const char *word,
			 const char *const column[][3], size_t n)
{
	char text[PLAN_PIECE_BYTES], figure[NUMBER_TEXT_MAX];
	size_t used = 0;
	text[0] = '\0';
	for (size_t i = 0; i < n; i++) {
		if (column[i][1][0] == '%')
			plan_per_cent(m, column[i][0], figure);
		else
			plan_figure(m, column[i][0], column[i][1][0] - '0', figure);
		if (figure[0] && used < sizeof text)
			used +=
			    (size_t)snprintf(text + used, sizeof text - used, "%s%s%s %s", used ? ", " : "",
					     figure, column[i][1][0] == '%' ? " %" : "", column[i][2]);
	}
	if (used > 0)
		page_put(p, WRAP_INDENT, "%*s%s %s", MEMBER_INDENT, "", word, text);
}

static void member_figures(struct plan_page *p, const struct plan_member_view *m)
{
	static const char *const airmass[][3] = {{"airmass_start", "2", "at the reserve's start"},
						 {"airmass_mid", "2", "at mid"},
						 {"airmass_end", "2", "at its end"},
						 {"airmass_min", "2", "least"}};
	static const char *const moon[][3] = {{"moon_sep_deg", "0", "deg away"},
					      {"moon_lit", "%", "lit"},
					      {"moon_alt_deg", "0", "deg high, all at mid"}};
	static const char *const sigma[][3] = {{"sigma_min", "1", "min of the mid-time"},
					       {"sigma_contact_min", "1", "min of a contact"}};
	static const char *const chance[][3] = {{"chance_done", "%", "both limbs"},
						{"chance_ingress", "%", "ingress"},
						{"chance_egress", "%", "egress"}};
	char done[NUMBER_TEXT_MAX], ingress[NUMBER_TEXT_MAX], error[NUMBER_TEXT_MAX];
	figures_line(p, m, "airmass", airmass, 4);
	plan_figure(m, "sigma_min", 1, error);
	if (error[0])
		figures_line(p, m, "error", sigma, 2);
	else
		page_put(p, WRAP_INDENT, "%*serror of the mid-time not known", MEMBER_INDENT, "");
	plan_per_cent(m, "chance_done", done);
	plan_per_cent(m, "chance_ingress", ingress);
	if (done[0] || ingress[0])
		figures_line(p, m, "chance in clear weather", chance, 3);
	else
		page_put(p, WRAP_INDENT, "%*sno chance can be given", MEMBER_INDENT, "");
	figures_line(p, m, "Moon", moon, 3);
}

static void member_marks(struct plan_page *p, const struct plan_member_view *m)
{
	char text[PLAN_PIECE_BYTES], number[NUMBER_TEXT_MAX];
	plan_list_words(m, "lost_by", text, sizeof text);
	if (text[0])
		page_put(p, WRAP_INDENT, "%*slost to %s", MEMBER_INDENT, "", text);
	plan_list_words(m, "flags", text, sizeof text);
	for (char *s = text; *s; s++)
		*s = *s == '_' ? ' ' : *s;
	if (text[0])
		page_put(p, WRAP_INDENT, "%*smarked: %s", MEMBER_INDENT, "", text);
	if (!m->moved)
		return;
	plan_line(m->moved_why, text, sizeof text);
	number_text_fixed(fabs(m->moved_min), 1, number);
	page_put(p, WRAP_INDENT, "%*sMOVED: by today's ephemeris the mid-time is %s by %s min%s%s",
		 MEMBER_INDENT, "", m->moved_min < 0.0 ? "earlier" : "later", number, text[0] ? ": " : "",
		 text);
}

static void member_lines(struct plan_page *p, const struct plan_item_view *item,
			 const struct plan_member_view *m)
{
	const struct leap_table *leap = &p->v->run->leap;
	char text[PLAN_PIECE_BYTES], depth[NUMBER_TEXT_MAX];
	struct utc t;
	plan_line(m->target, text, sizeof text);
	page_put(p, WRAP_INDENT, "%*s%s, %s, epoch %ld: %s", ITEM_INDENT, "", text, plan_kind_word(m->kind),
		 m->epoch, plan_variant_sentence(m->variant));
	for (int c = 0; c < CONTACT_COUNT; c++)
		if (plan_contact_at(m, (enum plan_contact)c, &t))
			page_time(p, MEMBER_INDENT, plan_contact_words[c], &t,
				  utc_diff_s(leap, t, item->start) > 0.0 ? "  too early"
				  : utc_diff_s(leap, item->end, t) > 0.0 ? "  too late"
									 : "");
	if (plan_flip_at(p->v, item, m, &t)) {
		page_time(p, MEMBER_INDENT, "flip", &t, "");
		page_put(p, WRAP_INDENT, "%*sat the flip: %s", MEMBER_INDENT, "", plan_flip_caution);
	}
	plan_star_words(m, text, sizeof text);
	plan_figure(m, "depth_ppt", 1, depth);
	page_put(p, WRAP_INDENT, "%*sICRS %s%s%s%s", MEMBER_INDENT, "", text[0] ? text : "position not known",
		 depth[0] ? ", depth " : "", depth, depth[0] ? " ppt" : "");
	plan_forecast_words(m, text, sizeof text);
	if (text[0])
		page_put(p, WRAP_INDENT, "%*sforecast: %s", MEMBER_INDENT, "", text);
	member_figures(p, m);
	member_marks(p, m);
}

static void item_lines(struct plan_page *p, const struct plan_item_view *item)
{
	char text[PLAN_PIECE_BYTES], cause[300], marked[64];
	plan_names_parts(item, text);
	page_put(p, 0, "%s", "");
	page_put(p, ITEM_INDENT, "%2d  %s", item->order, text);
	plan_line(item->cause, cause, sizeof cause);
	plan_line(item->marked_utc, marked, sizeof marked);
	page_put(p, WRAP_INDENT, "%*sstate: %s%s%s%s%s", ITEM_INDENT, "", plan_state_words[item->state],
		 cause[0] ? ", " : "", cause, marked[0] ? ", marked " : "", marked);
	plan_line(item->note, text, sizeof text);
	if (text[0])
		page_put(p, WRAP_INDENT, "%*snote: %s", ITEM_INDENT, "", text);
	page_time(p, ITEM_INDENT, "slew by", &item->slew_by, "");
	page_time(p, ITEM_INDENT, "start", &item->start, "");
	page_time(p, ITEM_INDENT, "latest start", item->has_latest ? &item->latest_start : NULL,
		  item->has_latest ? "" : "-");
	page_time(p, ITEM_INDENT, "leave", &item->end, "");
	for (size_t i = 0; i < item->n; i++)
		member_lines(p, item, &item->member[i]);
	plan_line(item->if_missed, text, sizeof text);
	if (text[0])
		page_put(p, WRAP_INDENT, "%*s%s", ITEM_INDENT, "", text);
}

void page_items(struct plan_page *p)
{
	size_t shown = 0;
	page_heading(p, "RUNNING ORDER");
	for (size_t i = 0; i < p->v->n_items; i++) {
		if (p->v->item[i].in_day) /* told of under what was left out */
			continue;
		item_lines(p, &p->v->item[i]);
		shown++;
	}
	if (shown == 0)
		page_put(p, 2, "  Nothing is planned.");
}
