/* SPDX-License-Identifier: MIT
 * Texts of the plan on the night page: the plan in words, a comparison, the choice of drafts. */
#include "tui/pages/night_page.h"

#include "ephem/number_text.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum { INDENT = 4, CHOICE_COLUMNS = 470, LINES_LEFT = 20, WIDE_COLUMNS = 92, TABLE_COLUMNS = 70 };

static void heading(struct text_view *v, const char *text)
{
	text_view_add(v, ROLE_TEXT, 0, "");
	text_view_add(v, ROLE_STRONG, 0, text);
}

static void clock_of(const struct plan_view *v, struct utc t, char out[16])
{
	const struct night *night = &v->night->night;
	local_text(night, v->run->zone, night_of_utc(night, t), false, out, 16);
}

/* --- items and blocks --- */

/* Two lines where there is no room for a table. cell: number, slew by, start, leave, chance, worth, moved,
 * name.
 */
static void narrow_lines(struct text_view *t, const struct plan_item_view *item,
			 const struct plan_member_view *m, const char *const cell[8])
{
	const enum role role = m->moved ? ROLE_WARN : item->state > PLAN_STARTED ? ROLE_FAINT : ROLE_TEXT;
	if (cell[0][0])
		text_view_addf(t, role, INDENT, "%2s %s %s-%s %s", cell[0], cell[1], cell[2], cell[3],
			       cell[7]);
	else
		text_view_addf(t, role, INDENT, "   with %s", cell[7]);
	text_view_addf(t, role, INDENT, "   %s, %s, done %s %%, worth %s%s%s", plan_state_words[item->state],
		       m->variant, cell[4], cell[5], cell[6][0] ? ", moved " : "", cell[6]);
}

/* The row of one member; what stands in one row on a wide screen is told in two on a narrow one. */
static void member_line(struct text_view *t, const struct plan_view *v, const struct plan_item_view *item,
			size_t k)
{
	const struct plan_member_view *m = &item->member[k];
	char slew[16] = "", start[16] = "", t1[16], t4[16], end[16] = "", number[16] = "",
	     name[NAME_BYTES_MAX], done[NUMBER_TEXT_MAX] = "?", worth[NUMBER_TEXT_MAX], moved[24] = "";
	double chance;
	const char *figure = member_figure(m, member_chance_column(m));
	if (figure[0] && number_parse(figure, strlen(figure), &chance, NULL, NULL) == ST_OK)
		chance_text(chance, done, sizeof done);
	number_text_fixed(m->worth, 2, worth);
	text_clean(m->target, name, sizeof name);
	clock_of(v, m->t1, t1);
	clock_of(v, m->t4, t4);
	if (k == 0) {
		snprintf(number, sizeof number, "%d", item->order);
		clock_of(v, item->slew_by, slew);
		clock_of(v, item->start, start);
		clock_of(v, item->end, end);
	}
	if (isfinite(m->moved_min))
		snprintf(moved, sizeof moved, "%+.1f", m->moved_min);
	if (t->width < TABLE_COLUMNS) {
		narrow_lines(t, item, m,
			     (const char *const[]){number, slew, start, end, done, worth, moved, name});
		return;
	}
	const char *state = k == 0 ? plan_state_words[item->state] : " with";
	const enum role role = m->moved ? ROLE_WARN : item->state > PLAN_STARTED ? ROLE_FAINT : ROLE_TEXT;
	if (t->width >= WIDE_COLUMNS)
		text_view_addf(t, role, INDENT, "%3s %-7s %-6s %-6s %-6s %-6s %-6s %-7s %4s %5s %6s  %s%s",
			       number, state, slew, start, t1, t4, end, m->variant, done, worth, moved, name,
			       m->kind == KIND_OCCULTATION ? " (occ)" : "");
	else
		text_view_addf(t, role, INDENT, "%2s %-7s %-5s %-5s %-5s %-5s %-5s %4s %5s %s%s%s%s%s%s",
			       number, state, slew, start, t1, t4, end, done, worth, name,
			       m->kind == KIND_OCCULTATION ? " (occ)" : "",
			       strcmp(m->variant, variant_words[VARIANT_WHOLE]) ? ", " : "",
			       strcmp(m->variant, variant_words[VARIANT_WHOLE]) ? m->variant : "",
			       moved[0] ? ", moved " : "", moved);
}

static void item_lines(struct text_view *t, const struct plan_view *v, const struct plan_item_view *item)
{
	for (size_t k = 0; k < item->n; k++)
		member_line(t, v, item, k);
	if (item->in_day)
		text_view_add(t, ROLE_BAD, INDENT,
			      "    THE SUN IS UP for some of it: do not slew there; no sheet holds it.");
	if (item->cause[0] || item->note[0])
		text_view_addf(t, ROLE_FAINT, INDENT, "    %.200s%s%.300s", item->cause,
			       item->cause[0] && item->note[0] ? "; " : "", item->note);
}

static void block_line(struct text_view *t, const struct plan_view *v, const struct plan_block_view *b)
{
	char from[16], to[16], noise[40] = "", text[NAME_BYTES_MAX];
	clock_of(v, b->from, from);
	clock_of(v, b->to, to);
	text_clean(b->text, text, sizeof text);
	if (b->kind == BLOCK_POOR)
		snprintf(noise, sizeof noise, ", noise times %g", b->noise);
	text_view_addf(t, b->near_sun ? ROLE_WARN : ROLE_FAINT, INDENT, "%*s %s to %s  %s%s%s",
		       t->width >= WIDE_COLUMNS ? 3 : 2, "", from, to, text, noise,
		       b->near_sun ? "; THE SUN IS NEAR OR UP: covers closed, never point near it" : "");
}

static void rows(struct text_view *t, const struct plan_view *v)
{
	size_t block = 0;
	for (size_t i = 0; i <= v->n_items; i++) {
		for (; block < v->n_blocks &&
		       (i == v->n_items ||
			utc_diff_s(&v->run->leap, v->block[block].from, v->item[i].start) >= 0.0);
		     block++)
			block_line(t, v, &v->block[block]);
		if (i < v->n_items)
			item_lines(t, v, &v->item[i]);
	}
}

static void table(struct text_view *t, const struct plan_view *v, const char *zone)
{
	if (v->n_items + v->n_blocks == 0) {
		heading(t, "Nothing is planned.");
		return;
	}
	text_view_add(t, ROLE_TEXT, 0, "");
	text_view_addf(t, ROLE_TEXT, 0, "Times in %s; slew: when the move there should begin.", zone);
	if (t->width >= WIDE_COLUMNS)
		text_view_addf(t, ROLE_STRONG, INDENT,
			       "%3s %-7s %-6s %-6s %-6s %-6s %-6s %-7s %4s %5s %6s  %s", "#", "state", "slew",
			       "start", "T1", "T4", "leave", "what", "done", "worth", "moved", "target");
	else if (t->width < TABLE_COLUMNS)
		text_view_add(t, ROLE_STRONG, INDENT, " # slew  start-leave target");
	else
		text_view_addf(t, ROLE_STRONG, INDENT, "%2s %-7s %-5s %-5s %-5s %-5s %-5s %4s %5s %s", "#",
			       "state", "slew", "start", "T1", "T4", "leave", "done", "worth", "target");
	rows(t, v);
}

/* --- below the table --- */

static void missed_lines(struct text_view *t, const struct plan_view *v)
{
	bool any = false;
	for (size_t i = 0; i < v->n_items; i++) {
		if (!v->item[i].if_missed[0])
			continue;
		if (!any)
			heading(t, "When a limb is missed");
		any = true;
		text_view_addf(t, ROLE_TEXT, INDENT, "%3d %s", v->item[i].order, v->item[i].if_missed);
	}
}

static void moved_lines(struct text_view *t, const struct plan_view *v)
{
	bool any = false;
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++) {
			const struct plan_member_view *m = &v->item[i].member[k];
			char by[40] = "";
			if (!m->moved_why[0])
				continue;
			if (!any)
				heading(t, "Moved since it was stored (the plan stays as it was until it is "
					   "worked out anew)");
			any = true;
			if (isfinite(m->moved_min))
				snprintf(by, sizeof by, " %+.1f min%s", m->moved_min,
					 m->moved ? "" : ", less than counts");
			text_view_addf(t, m->moved ? ROLE_WARN : ROLE_TEXT, INDENT, "  %s%s: %s", m->target,
				       by, m->moved_why);
		}
}

static void change_lines(struct text_view *t, const struct plan_compare *c)
{
	for (size_t i = 0; i < c->n; i++)
		text_view_addf(t, ROLE_TEXT, INDENT, "  %s", c->line[i]);
	if (c->n == 0)
		text_view_add(t, ROLE_TEXT, INDENT, "  The two are the same.");
}

/* As many as there is room for. */
static void left_lines(struct text_view *t, const struct plan_view *v)
{
	if (v->n_left == 0)
		return;
	heading(t, "Left out");
	for (size_t i = 0; i < v->n_left; i++) {
		const struct plan_left_view *l = &v->left[i];
		char name[NAME_BYTES_MAX];
		if (t->n > TEXT_LINES_MAX - LINES_LEFT) {
			text_view_addf(t, ROLE_FAINT, INDENT, "  and %zu more; `wane plan` prints all",
				       v->n_left - i);
			return;
		}
		text_clean(l->target, name, sizeof name);
		text_view_addf(t, ROLE_TEXT, INDENT, "  %s%s: %s", name,
			       l->kind == KIND_OCCULTATION ? " (occ)" : "", l->reason);
	}
}

static void names_line(struct text_view *t, const char *word, const char *const *name, size_t n)
{
	char text[1200] = "";
	size_t used = 0;
	if (n == 0)
		return;
	for (size_t i = 0; i < n && used < sizeof text; i++)
		used += (size_t)snprintf(text + used, sizeof text - used, "%s%s", i ? ", " : "", name[i]);
	text_view_addf(t, ROLE_TEXT, INDENT, "%s: %s", word, text);
}

void plan_lines(struct night_page *p)
{
	struct text_view *t = &p->text;
	const struct plan_view *v = p->plan.made ? &p->plan.made->view : NULL;
	text_view_start(t, p->grid_cols - 2);
	if (!v)
		return;
	text_view_addf(t, ROLE_STRONG, INDENT, "Running order of night %s%s%s", p->head.name,
		       v->telescope[0] ? ", " : "", v->telescope);
	text_view_add(t, p->plan.line_role, INDENT, p->plan.line);
	if (!v->optimal)
		text_view_add(t, ROLE_WARN, INDENT, "The search was cut short: a better order may exist.");
	if (v->stored)
		text_view_addf(t, ROLE_FAINT, INDENT, "stored %s by %s", v->stored_utc, v->who);
	names_line(t, "Pinned", v->pin, v->n_pins);
	names_line(t, "Dropped", v->drop, v->n_drops);
	table(t, v, p->head.zone);
	if (p->compare.there) {
		char title[PLAN_LINE_BYTES + 40];
		snprintf(title, sizeof title, "What changed from %s", p->compare.title[0]);
		heading(t, title);
		change_lines(t, &p->compare);
	}
	moved_lines(t, v);
	missed_lines(t, v);
	left_lines(t, v);
}

void compare_lines(struct night_page *p)
{
	struct text_view *t = &p->text;
	text_view_start(t, p->grid_cols - 2);
	text_view_add(t, ROLE_STRONG, INDENT, p->compare.title[0]);
	text_view_add(t, ROLE_STRONG, INDENT, p->compare.title[1]);
	heading(t, "From the first to the second");
	change_lines(t, &p->compare);
	text_view_add(t, ROLE_TEXT, 0, "");
	text_view_add(t, ROLE_FAINT, 0, "K keeps the second one if it is a draft.");
}

void draft_lines(struct night_page *p)
{
	struct text_view *t = &p->text;
	text_view_start(t, CHOICE_COLUMNS);
	text_view_add(t, ROLE_STRONG, 0, "Lay which draft beside the plan?");
	for (size_t i = 0; i < p->drafts.n; i++) {
		char worth[NUMBER_TEXT_MAX];
		number_text_fixed(p->drafts.draft[i].worth, 2, worth);
		text_view_addf(t, ROLE_TEXT, 0, "  %s%s, edition %d, worth %s", p->drafts.draft[i].name,
			       p->drafts.draft[i].kept ? ", kept" : "", p->drafts.draft[i].edition, worth);
	}
	text_view_add(t, ROLE_TEXT, 0, "  the night planned afresh, now");
}
