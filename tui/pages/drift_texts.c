/* SPDX-License-Identifier: MIT
 * Texts of the drift page: head, pane, help, choice of orders. */
#include "tui/pages/drift_page.h"

#include "tui/pages/night_head.h"
#include "tui/parts/drift_columns.h"

#include <math.h>
#include <stdio.h>

enum { INDENT = 7, HELP_INDENT = 14, PLAIN_INDENT = 2, CHOICE_COLUMNS = 200 };

static void day_text(struct utc t, char out[16])
{
	struct date d = date_from_mjd(t.mjd);
	snprintf(out, 16, "%04d-%02d-%02d", d.year % 10000, d.month, d.day);
}

static void minute_text(const struct drift_page *p, struct utc t, char out[32])
{
	struct utc rounded = utc_add_s(&p->run->leap, t, 30.0);
	struct date d = date_from_mjd(rounded.mjd);
	int minute = (int)fmin(rounded.sod_s / 60.0, 1439.0);
	snprintf(out, 32, "%04d-%02d-%02d %02d:%02d", d.year % 10000, d.month, d.day, minute / 60,
		 minute % 60);
}

/* --- head --- */

struct sums {
	long stale, going, lost, unknown, waiting;
};

static void sum_up(const struct drift_page *p, struct sums *s)
{
	for (size_t i = 0; i < p->table.n; i++) {
		const struct drift_row *row = &p->table.row[i];
		s->lost += row->lost.when == WHEN_ALREADY;
		s->stale += row->stale.when == WHEN_ALREADY && row->lost.when != WHEN_ALREADY;
		s->going += row->stale.when != WHEN_ALREADY && row->sigma_at_min > row->limit_min;
		s->unknown += isnan(row->sigma_now_min);
	}
	for (size_t i = p->top; i < p->n && i < p->top + (size_t)p->list; i++)
		s->waiting += p->plan[p->order[i]] == SEARCH_WANTED ||
			      (i == p->selected && p->plan[p->order[i]] == SEARCH_IF_SELECTED);
}

void drift_head_texts(struct drift_page *p)
{
	char site[NAME_BYTES_MAX], now[32];
	struct sums s = {0};
	p->waiting[0] = '\0';
	p->sums[0] = '\0';
	minute_text(p, utc_add_s(&p->run->leap, p->now, -30.0), now);
	text_clean(p->run->site.name ? p->run->site.name : "", site, sizeof site);
	snprintf(p->clock, sizeof p->clock, "%s UTC%s%s", now, *site ? ", refreshes seen from " : "", site);
	snprintf(p->title, sizeof p->title, "Drift of the ephemerides");
	if (!p->loaded) {
		p->chosen[0] = '\0';
		return;
	}
	char day[16];
	day_text(p->table.choice.at, day);
	snprintf(p->chosen, sizeof p->chosen, "date %s", day);
	sum_up(p, &s);
	snprintf(p->sums, sizeof p->sums,
		 "%ld stale now, %ld more by the date; %ld phase lost, %ld without errors", s.stale, s.going,
		 s.lost, s.unknown);
	if (s.waiting > 0)
		snprintf(p->waiting, sizeof p->waiting, "searching for %ld", s.waiting);
	else if (p->wants_refresh && p->table.n_sites == 0)
		snprintf(p->waiting, sizeof p->waiting, "no site: no refreshes");
}

/* --- pane --- */

static void sigma_line(struct drift_page *p, const struct drift_row *row)
{
	char now[16], at[16], limit[16], day[16], stale[24], lost[24];
	drift_minutes_text(row->sigma_now_min, now, sizeof now);
	drift_minutes_text(row->sigma_at_min, at, sizeof at);
	drift_minutes_text(row->limit_min, limit, sizeof limit);
	drift_date_text(&row->stale, stale, sizeof stale);
	drift_date_text(&row->lost, lost, sizeof lost);
	day_text(p->table.choice.at, day);
	text_view_addf(&p->details, ROLE_TEXT, INDENT,
		       "Sigma  %s min now, %s min on %s, limit %s min; stale: %s, phase lost: %s", now, at,
		       day, limit, stale, lost);
}

static void times_line(struct drift_page *p, const struct drift_row *row)
{
	char last[16] = "", next[32];
	if (row->has_midtime)
		day_text(row->last_midtime, last);
	minute_text(p, row->next_mid, next);
	text_view_addf(&p->details, ROLE_TEXT, INDENT,
		       "Times  %ld mid-time%s in use%s%s; next mid %s UTC, epoch %ld", row->midtimes,
		       row->midtimes == 1 ? "" : "s", *last ? ", the last of " : "", last, next,
		       row->next_epoch);
}

static void refresh_line(struct drift_page *p, const char *word, const struct refresh *f,
			 const struct drift_row *row)
{
	char night[48], site[NAME_BYTES_MAX], after[16], then[64] = "", stale[24];
	if (!f->found) {
		text_view_addf(&p->details, ROLE_WARN, INDENT, "%s  none within %s", word,
			       f == &row->best ? "half a year" : "a year");
		return;
	}
	night_name(f->evening_mjd, night, sizeof night);
	text_clean(p->table.site[f->site].name, site, sizeof site);
	drift_minutes_text(f->sigma_after_min, after, sizeof after);
	if (f == &row->best) {
		drift_date_text(&row->stale_after, stale, sizeof stale);
		snprintf(then, sizeof then, ", stale then: %s", stale);
	}
	text_view_addf(&p->details, ROLE_GOOD, INDENT,
		       "%s  night %s at %s, chance of done %.0f %%%s; leaves %s min at the date%s", word,
		       night, site, 100.0 * f->chance_done, f->late ? ", after the stale date" : "", after,
		       then);
}

void drift_detail_lines(struct drift_page *p)
{
	const struct drift_row *row = drift_page_selected(p);
	char words[DRIFT_WORDS_BYTES];
	if (!row)
		return;
	drift_words(row, words, sizeof words);
	if (row->counted) {
		sigma_line(p, row);
		enum drift_plan plan = (enum drift_plan)p->plan[row - p->table.row];
		if (plan == SEARCH_DONE) {
			refresh_line(p, "Best ", &row->best, row);
			refresh_line(p, "First", &row->first, row);
		} else if (plan != SEARCH_NONE) {
			text_view_add(&p->details, ROLE_FAINT, INDENT, "Best   being searched");
		} else if (p->wants_refresh && p->table.n_sites > 0) {
			text_view_add(&p->details, ROLE_WARN, INDENT, "Best   no chance can be given");
		}
		times_line(p, row);
	}
	if (words[0])
		text_view_addf(&p->details, ROLE_BAD, INDENT, "!      %s", words);
	for (int f = 0; f < FLAG_COUNT; f++)
		if (row->flags & FLAG_BIT(f))
			text_view_addf(&p->details, ROLE_TEXT, INDENT, "Doubt  %s", flag_rules[f].sentence);
}

/* --- help, orders --- */

static void key_lines(struct text_view *v, const struct key_table *t)
{
	for (size_t i = 0; i < t->n; i++) {
		char labels[64];
		if (!t->key[i].sentence)
			continue;
		key_labels_in(t, t->key[i].action, labels, sizeof labels);
		text_view_addf(v, ROLE_TEXT, HELP_INDENT, "%-13s %s", labels, t->key[i].sentence);
	}
}

static void heading(struct text_view *v, const char *text)
{
	text_view_add(v, ROLE_TEXT, 0, "");
	text_view_add(v, ROLE_STRONG, 0, text);
}

static void legend_line(struct text_view *v, enum glyph glyph, enum tier tier, const char *sentence)
{
	text_view_addf(v, ROLE_TEXT, HELP_INDENT, "  %s  %s", glyph_text(glyph, tier), sentence);
}

void drift_help_lines(struct drift_page *p)
{
	struct text_view *v = &p->text;
	text_view_start(v, p->grid_cols - 2);
	text_view_add(v, ROLE_STRONG, 0, "Keys (q, ? or Esc comes back)");
	key_lines(v, &drift_keys);
	heading(v, "Keys of the residuals");
	key_lines(v, &residual_keys);
	heading(v, "Figures");
	for (int c = 0; c < DRIFT_CELLS; c++) {
		int at = drift_cells[c].column ? drift_column_find(drift_cells[c].column) : -1;
		text_view_addf(
		    v, ROLE_TEXT, HELP_INDENT, "%-13s %s", drift_cells[c].heading,
		    at >= 0 ? drift_columns[at].sentence
			    : "What stands out: no errors, a doubtful position, an assumed time standard.");
	}
	heading(v, "Pictures");
	text_view_add(
	    v, ROLE_TEXT, PLAIN_INDENT,
	    "Sigma in minutes, on a logarithmic scale, from the last mid-time in use (else T0) to after the "
	    "chosen date. Letters under it: n now, d the chosen date, s stale, r the best refresh.");
	legend_line(v, GLYPH_LIMIT, p->tier, "The limit; among residuals, what the fit says.");
	legend_line(v, GLYPH_NOW, p->tier, "Now.");
	legend_line(v, GLYPH_CHOSEN, p->tier, "The chosen date.");
	legend_line(v, GLYPH_AFTER, p->tier, "Sigma if the best refresh succeeds.");
	legend_line(v, GLYPH_POINT, p->tier, "Residual: a mid-time that counts in the fit.");
	legend_line(v, GLYPH_POINT_OUT, p->tier, "One that does not count, or is to be looked at.");
	legend_line(v, GLYPH_POINT_CHOSEN, p->tier, "The chosen one.");
	legend_line(v, GLYPH_ERROR_BAR, p->tier, "Its error.");
	legend_line(v, GLYPH_ZERO, p->tier, "What the fit says.");
}

void drift_sort_lines(struct drift_page *p)
{
	struct text_view *v = &p->text;
	text_view_start(v, CHOICE_COLUMNS);
	text_view_add(v, ROLE_STRONG, 0, "Sort the list by");
	for (int c = 0; c < DRIFT_CELLS; c++) {
		if (!drift_cells[c].key)
			continue;
		text_view_addf(v, c == p->sort ? ROLE_STRONG : ROLE_TEXT, 0, "  %c  %s%s%s%s",
			       drift_cells[c].key, drift_cells[c].heading, *drift_cells[c].unit ? ", " : "",
			       drift_cells[c].unit,
			       c != p->sort	? ""
			       : p->sort_turned ? " (now, turned round)"
						: " (now; again turns it round)");
	}
}
