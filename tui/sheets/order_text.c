/* SPDX-License-Identifier: MIT */
#include "tui/sheets/order_text.h"

#include "tui/pages/night_head.h"
#include "tui/parts/clock_mark.h"
#include "tui/parts/text_width.h"
#include "tui/sheets/plan_words.h"
#include "tui/sheets/text.h"

#include <math.h>
#include <string.h>

enum { CELL_BYTES = 16, NAME_LEAST = 6 };

/* --- cells --- */

/* `22:40`, behind a change of the clocks with its mark. */
static void clock_cell(const struct plan_view *v, struct utc t, char out[CELL_BYTES])
{
	const struct utc rounded = utc_add_s(&v->run->leap, t, 30.0);
	const struct local_time l = zone_local(v->run->zone, rounded);
	int minute = (int)(l.sod_s / 60.0);
	minute = minute > 1439 ? 1439 : minute;
	snprintf(out, CELL_BYTES, "%02d:%02d%s", minute / 60, minute % 60,
		 clock_mark(&v->night->night, v->run->zone, rounded));
}

static void zone_words(const struct plan_view *v, char *out, size_t n)
{
	const struct night *night = &v->night->night;
	snprintf(out, n, "%s",
		 clocks_change(night, v->run->zone)
		     ? "local time"
		     : zone_local(v->run->zone, night_utc(night, 0.0)).abbreviation);
}

static void moved_cell(const struct plan_member_view *m, char out[CELL_BYTES])
{
	if (isfinite(m->moved_min))
		snprintf(out, CELL_BYTES, "%+.1f", m->moved_min);
	else
		snprintf(out, CELL_BYTES, "%s", m->moved_why[0] ? "?" : "");
}

static bool has_moved(const struct plan_view *v)
{
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++)
			if (v->item[i].member[k].moved_why[0])
				return true;
	return false;
}

static int name_width(const struct plan_view *v)
{
	int width = NAME_LEAST;
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++) {
			const int columns = text_columns(v->item[i].member[k].target);
			width = columns > width ? columns : width;
		}
	return width < TEXT_NAME_WIDTH_MAX ? width : TEXT_NAME_WIDTH_MAX;
}

/* --- head --- */

void order_worth_words(const struct plan_view *v, char out[ORDER_WORTH_BYTES])
{
	char worth[NUMBER_TEXT_MAX], bound[NUMBER_TEXT_MAX];
	number_text_fixed(v->worth, 2, worth);
	number_text_fixed(v->bound, 2, bound);
	snprintf(out, ORDER_WORTH_BYTES, "%s of at most %s (%s)", worth, bound,
		 v->optimal ? "optimal" : "the search was cut short");
}

static void names_line(FILE *to, const char *word, const char *const *name, size_t n)
{
	if (n == 0)
		return;
	fprintf(to, "%s: ", word);
	for (size_t i = 0; i < n; i++) {
		fputs(i ? ", " : "", to);
		text_cell(to, name[i], NAME_CHARS_MAX, false);
	}
	fputc('\n', to);
}

/* Which clock a time of the table is of. */
static void change_line(FILE *to, const struct plan_view *v)
{
	const struct night *n = &v->night->night;
	char words[SHEET_BOTH_BYTES], before[SHEET_OFFSET_BYTES], after[SHEET_OFFSET_BYTES];
	const struct local_time first = zone_local(v->run->zone, night_utc(n, 0.0)),
				last = zone_local(v->run->zone, night_utc(n, n->length_d));
	sheet_change_words(v, words);
	sheet_offset(first.offset_s, before);
	sheet_offset(last.offset_s, after);
	fprintf(
	    to,
	    "The clocks change this night, %s: times with %s are %s (UTC%s h), the others %s (UTC%s h).\n",
	    words, CLOCK_MARK, last.abbreviation, after, first.abbreviation, before);
}

static void head(FILE *to, const struct plan_view *v, bool plain)
{
	const struct text_sheet t = {.to = to, .run = v->run, .plain = plain};
	char name[64], standing[320], worth[ORDER_WORTH_BYTES];
	night_name(v->night->night.mjd, name, sizeof name);
	plan_standing_words(v, standing, sizeof standing);
	order_worth_words(v, worth);
	fprintf(to, "Running order of night %s: %s", name, standing);
	if (v->stored)
		fprintf(to, ", stored %s by ", v->stored_utc);
	if (v->stored)
		text_cell(to, v->who, NAME_CHARS_MAX, false);
	fputc('\n', to);
	text_site(&t, &v->run->site, v->run->zone);
	if (v->telescope[0]) {
		fputs("Telescope: ", to);
		text_cell(to, v->telescope, NAME_CHARS_MAX, false);
		fputc('\n', to);
	}
	if (clocks_change(&v->night->night, v->run->zone))
		change_line(to, v);
	fprintf(to, "Worth %s; %zu item%s, at least %g min between neighbours.\n", worth, v->n_items,
		v->n_items == 1 ? "" : "s", v->gap_min);
	names_line(to, "Pinned", v->pin, v->n_pins);
	names_line(to, "Dropped", v->drop, v->n_drops);
}

/* --- rows --- */

static void block_words(FILE *to, const struct plan_block_view *b)
{
	text_cell(to, b->text, NAME_CHARS_MAX, false);
	if (b->kind == BLOCK_POOR)
		fprintf(to, ", noise times %g", b->noise);
	if (b->near_sun)
		fputs("; THE SUN IS NEAR OR UP: covers closed, never point near it", to);
}

static void block_row(FILE *to, const struct plan_view *v, const struct plan_block_view *b)
{
	char from[CELL_BYTES], end[CELL_BYTES];
	clock_cell(v, b->from, from);
	clock_cell(v, b->to, end);
	fprintf(to, "%3s %-8s %-6s %-6s %-6s %-6s %-6s ", "", plan_block_words[b->kind], "", from, "", "",
		end);
	block_words(to, b);
	fputc('\n', to);
}

static void member_cells(FILE *to, const struct plan_member_view *m, int width)
{
	char done[NUMBER_TEXT_MAX], worth[NUMBER_TEXT_MAX], moved[CELL_BYTES];
	plan_per_cent(m, member_chance_column(m), done);
	number_text_fixed(m->worth, 2, worth);
	moved_cell(m, moved);
	text_cell(to, m->target, width, true);
	fprintf(to, " %-7s %7s %6s%s%s%s\n", m->variant, done[0] ? done : "-", worth, moved[0] ? "  " : "",
		moved, m->kind == KIND_OCCULTATION ? "  occultation" : "");
}

static void item_rows(FILE *to, const struct plan_view *v, const struct plan_item_view *item, int width)
{
	char slew[CELL_BYTES], start[CELL_BYTES], end[CELL_BYTES], t1[CELL_BYTES], t4[CELL_BYTES];
	clock_cell(v, item->slew_by, slew);
	clock_cell(v, item->start, start);
	clock_cell(v, item->end, end);
	for (size_t i = 0; i < item->n; i++) {
		clock_cell(v, item->member[i].t1, t1);
		clock_cell(v, item->member[i].t4, t4);
		if (i == 0)
			fprintf(to, "%3d %-8s %-6s %-6s %-6s %-6s %-6s ", item->order,
				plan_state_words[item->state], slew, start, t1, t4, end);
		else
			fprintf(to, "%3s %-8s %-6s %-6s %-6s %-6s %-6s ", "", "  with", "", "", t1, t4, "");
		member_cells(to, &item->member[i], width);
	}
	if (item->in_day)
		fputs("    THE SUN IS UP for some of it: do not slew there; no sheet holds it\n", to);
	if (item->cause[0] || item->note[0]) {
		fputs("    ", to);
		text_cell(to, item->cause, NAME_CHARS_MAX, false);
		fputs(item->cause[0] && item->note[0] ? "; " : "", to);
		text_cell(to, item->note, NAME_CHARS_MAX, false);
		fputc('\n', to);
	}
}

static void item_record(FILE *to, const struct plan_view *v, const struct plan_item_view *item)
{
	char slew[SHEET_BOTH_BYTES], start[SHEET_BOTH_BYTES], end[SHEET_BOTH_BYTES], t1[SHEET_BOTH_BYTES],
	    t4[SHEET_BOTH_BYTES], done[NUMBER_TEXT_MAX];
	sheet_both(v, item->slew_by, slew);
	sheet_both(v, item->start, start);
	sheet_both(v, item->end, end);
	fprintf(to, "\nItem %d, %s\nslew by %s\nstart %s\nleave %s\n", item->order,
		plan_state_words[item->state], slew, start, end);
	for (size_t i = 0; i < item->n; i++) {
		const struct plan_member_view *m = &item->member[i];
		sheet_both(v, m->t1, t1);
		sheet_both(v, m->t4, t4);
		plan_per_cent(m, member_chance_column(m), done);
		text_cell(to, m->target, NAME_CHARS_MAX, false);
		fprintf(to, ", %s, %s\nT1 %s\nT4 %s\nchance of it %s%s\nworth %.2f\n",
			plan_kind_word(m->kind), m->variant, t1, t4, done[0] ? done : "not known",
			done[0] ? " per cent" : "", m->worth);
		if (isfinite(m->moved_min))
			fprintf(to, "moved by %+.1f min\n", m->moved_min);
	}
	if (item->in_day)
		fputs("The Sun is up for some of it: do not slew there; no sheet holds it.\n", to);
	if (item->cause[0] || item->note[0]) {
		text_cell(to, item->cause, NAME_CHARS_MAX, false);
		fputs(item->cause[0] && item->note[0] ? "; " : "", to);
		text_cell(to, item->note, NAME_CHARS_MAX, false);
		fputc('\n', to);
	}
}

static void block_record(FILE *to, const struct plan_view *v, const struct plan_block_view *b)
{
	char from[SHEET_BOTH_BYTES], end[SHEET_BOTH_BYTES];
	sheet_both(v, b->from, from);
	sheet_both(v, b->to, end);
	fprintf(to, "\n%s: ", plan_block_words[b->kind]);
	block_words(to, b);
	fprintf(to, "\nfrom %s\nuntil %s\n", from, end);
}

/* Items and blocks in order of time, blocks first where they begin together. */
static void rows(FILE *to, const struct plan_view *v, bool plain, int width)
{
	size_t block = 0;
	for (size_t i = 0; i <= v->n_items; i++) {
		for (; block < v->n_blocks &&
		       (i == v->n_items ||
			utc_diff_s(&v->run->leap, v->block[block].from, v->item[i].start) >= 0.0);
		     block++) {
			if (plain)
				block_record(to, v, &v->block[block]);
			else
				block_row(to, v, &v->block[block]);
		}
		if (i < v->n_items && plain)
			item_record(to, v, &v->item[i]);
		else if (i < v->n_items)
			item_rows(to, v, &v->item[i], width);
	}
}

/* --- below the table --- */

static void missed(FILE *to, const struct plan_view *v)
{
	bool any = false;
	for (size_t i = 0; i < v->n_items; i++) {
		if (!v->item[i].if_missed[0])
			continue;
		fputs(any ? "" : "\nWhen a limb is missed\n", to);
		any = true;
		fprintf(to, "%3d ", v->item[i].order);
		text_cell(to, v->item[i].if_missed, 400, false);
		fputc('\n', to);
	}
}

static void moved(FILE *to, const struct plan_view *v)
{
	bool any = false;
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++) {
			const struct plan_member_view *m = &v->item[i].member[k];
			char cell[CELL_BYTES];
			if (!m->moved_why[0])
				continue;
			fputs(any ? ""
				  : "\nMoved since it was stored (the plan is as it was until it is "
				    "worked out anew)\n",
			      to);
			any = true;
			moved_cell(m, cell);
			fputs("  ", to);
			text_cell(to, m->target, NAME_CHARS_MAX, false);
			if (isfinite(m->moved_min))
				fprintf(to, " %s min%s", cell, m->moved ? "" : ", less than counts");
			fputs(": ", to);
			text_cell(to, m->moved_why, 300, false);
			fputc('\n', to);
		}
}

/* Whether another event of the target is spoken of. */
static bool has_namesake(const struct plan_view *v, const struct plan_left_view *l)
{
	for (size_t i = 0; i < v->n_left; i++)
		if (&v->left[i] != l && v->left[i].epoch != l->epoch &&
		    strcmp(v->left[i].target, l->target) == 0)
			return true;
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++)
			if (strcmp(v->item[i].member[k].target, l->target) == 0)
				return true;
	return false;
}

static void left(FILE *to, const struct plan_view *v)
{
	if (v->n_left == 0)
		return;
	fputs("\nLeft out\n", to);
	for (size_t i = 0; i < v->n_left; i++) {
		const struct plan_left_view *l = &v->left[i];
		fputs("  ", to);
		text_cell(to, l->target, NAME_CHARS_MAX, false);
		fputs(l->kind == KIND_OCCULTATION ? " (occultation)" : "", to);
		if (has_namesake(v, l))
			fprintf(to, " (epoch %ld)", l->epoch);
		fputs(": ", to);
		text_cell(to, l->reason, 400, false);
		fputc('\n', to);
	}
}

void order_text(FILE *to, const struct plan_view *v, bool plain)
{
	const int width = name_width(v);
	const bool any_moved = has_moved(v);
	char zone[32];
	head(to, v, plain);
	zone_words(v, zone, sizeof zone);
	if (v->n_items + v->n_blocks == 0)
		fputs("\nNothing is planned.\n", to);
	else if (!plain) {
		fprintf(to, "\nTimes in %s\n%3s %-8s %-6s %-6s %-6s %-6s %-6s ", zone, "#", "state", "slew",
			"start", "T1", "T4", "leave");
		text_cell(to, "target", width, true);
		fprintf(to, " %-7s %7s %6s%s\n", "what", "chance%", "worth", any_moved ? "  moved" : "");
	}
	rows(to, v, plain, width);
	missed(to, v);
	moved(to, v);
	left(to, v);
	fputc('\n', to);
	text_cautions(to);
}

void order_line(FILE *to, const struct plan_view *v)
{
	const struct date d = date_from_mjd(v->night->night.mjd);
	char draft[200] = "";
	plan_line(v->draft, draft, sizeof draft);
	fprintf(to, "Running order ");
	if (v->stored)
		fprintf(to, "%s, draft %s", v->kept ? "kept" : "stored, not kept", draft);
	else
		fprintf(to, "proposed");
	fprintf(to, ": %zu item%s, worth %.2f (wane plan %04d-%02d-%02d).\n", v->n_items,
		v->n_items == 1 ? "" : "s", v->worth, d.year, d.month, d.day);
}
