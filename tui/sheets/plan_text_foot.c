/* SPDX-License-Identifier: MIT
 * The night sheet as text: blocks, what was left out, what marks mean, where it all comes from, cautions. */
#include "tui/sheets/plan_page.h"

#include "tui/cautions.h"

#include <math.h>
#include <string.h>

static void block_lines(struct plan_page *p)
{
	char text[PLAN_PIECE_BYTES];
	if (p->v->n_blocks == 0)
		return;
	page_heading(p, "BLOCKS AND LOST TIME");
	for (size_t i = 0; i < p->v->n_blocks; i++) {
		const struct plan_block_view *b = &p->v->block[i];
		char noise[NUMBER_TEXT_MAX] = "";
		plan_line(b->text, text, sizeof text);
		if (b->kind == BLOCK_POOR)
			number_text(b->noise, noise);
		page_put(p, 4, "  %s%s%s%s%s", plan_block_words[b->kind], text[0] ? ": " : "", text,
			 noise[0] ? ", noise times " : "", noise);
		page_time(p, 4, "from", &b->from, "");
		page_time(p, 4, "to", &b->to, "");
		if (b->near_sun)
			page_put(p, 4, "    CAUTION, the Sun is up or in bright twilight for some of it. %s",
				 cautions[0]);
	}
}

static void left_lines(struct plan_page *p)
{
	const struct plan_view *v = p->v;
	char name[PLAN_PIECE_BYTES], reason[PLAN_PIECE_BYTES / 2];
	bool any = v->n_left > 0;
	for (size_t i = 0; i < v->n_items; i++)
		any = any || v->item[i].in_day;
	if (!any)
		return;
	page_heading(p, "LEFT OUT");
	for (size_t i = 0; i < v->n_items; i++) {
		if (!v->item[i].in_day)
			continue;
		plan_names(&v->item[i], name);
		page_put(p, 4, "  %s: %s.", name, plan_sun_up_reason);
	}
	for (size_t i = 0; i < v->n_left; i++) {
		const struct plan_left_view *l = &v->left[i];
		plan_line(l->target, name, sizeof name);
		plan_line(l->reason, reason, sizeof reason);
		page_put(p, 4, "  %s, %s, epoch %ld: %s", name, plan_kind_word(l->kind), l->epoch, reason);
	}
}

/* Whether a member that is shown carries a flag: among words with `;` between. */
static bool carried(const struct plan_view *v, const char *word)
{
	const size_t n = strlen(word);
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n && !v->item[i].in_day; k++) {
			const char *at = member_figure(&v->item[i].member[k], "flags");
			for (; *at; at += strcspn(at, ";"), at += *at == ';')
				if (strncmp(at, word, n) == 0 && (at[n] == ';' || !at[n]))
					return true;
		}
	return false;
}

static void mark_lines(struct plan_page *p)
{
	bool any = false;
	for (int f = 0; f < FLAG_COUNT; f++) {
		char word[64];
		if (!carried(p->v, flag_rules[f].word))
			continue;
		if (!any)
			page_heading(p, "WHAT THE MARKS MEAN");
		any = true;
		snprintf(word, sizeof word, "%s", flag_rules[f].word);
		for (char *s = word; *s; s++)
			*s = *s == '_' ? ' ' : *s;
		page_put(p, 4, "  %s: %s", word, flag_rules[f].sentence);
	}
}

/* Limits as they were stored, `name=value` with a tab between. */
static void limit_lines(struct plan_page *p)
{
	char text[PLAN_PIECE_BYTES], shown[PLAN_PIECE_BYTES];
	size_t used = 0;
	for (const char *s = p->v->limits; *s && used + 4 < sizeof text; s++) {
		if (*s == '\t')
			text[used++] = ',';
		text[used++] = *s == '\t' || *s == '_' ? ' ' : *s;
	}
	text[used] = '\0';
	plan_line(text, shown, sizeof shown);
	if (shown[0])
		page_put(p, 4, "  Limits: %s", shown);
}

static void ephemeris_lines(struct plan_page *p)
{
	const struct plan_view *v = p->v;
	char name[PLAN_PIECE_BYTES / 2], words[PLAN_PIECE_BYTES];
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++) {
			if (v->item[i].in_day)
				continue;
			plan_line(v->item[i].member[k].target, name, sizeof name);
			plan_ephemeris_words(&v->item[i].member[k], words, sizeof words);
			page_put(p, 4, "  %s: %s", name, words);
		}
}

static void provenance_lines(struct plan_page *p)
{
	const struct plan_view *v = p->v;
	char text[300], stored[64], who[200], worth[NUMBER_TEXT_MAX], bound[NUMBER_TEXT_MAX],
	    gap[NUMBER_TEXT_MAX];
	page_heading(p, "WHERE IT COMES FROM");
	plan_standing_words(v, text, sizeof text);
	plan_line(v->stored_utc, stored, sizeof stored);
	plan_line(v->who, who, sizeof who);
	if (v->stored)
		page_put(p, 4, "  Plan: %s, stored %s by %s", text, stored, who[0] ? who : "nobody named");
	else if (stored[0])
		page_put(p, 4, "  Plan: %s; made from data last changed %s by %s", text, stored, who);
	else
		page_put(p, 4, "  Plan: %s", text);
	number_text_fixed(v->worth, 3, worth);
	number_text_fixed(v->bound, 3, bound);
	number_text_fixed(v->gap_min, 1, gap);
	page_put(p, 4, "  Worth %s; no order is worth more than %s%s. At least %s min between neighbours.",
		 worth, bound, v->optimal ? ", so this one is as good as any" : " (the search was cut short)",
		 gap);
	limit_lines(p);
	ephemeris_lines(p);
	plan_line(v->leap_date, text, sizeof text);
	if (text[0])
		page_put(p, 4, "  The table of leap seconds is known to be complete until %s.", text);
}

void page_foot(struct plan_page *p)
{
	block_lines(p);
	left_lines(p);
	mark_lines(p);
	provenance_lines(p);
	page_heading(p, "CAUTIONS");
	for (size_t i = 0; i < caution_count; i++)
		page_put(p, 4, "  %s", cautions[i]);
}
