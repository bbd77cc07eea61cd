/* SPDX-License-Identifier: MIT
 * What the plan of the page says of the rows of the list, and of itself in the head. */
#include "tui/pages/page_plan.h"

#include "ephem/number_text.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

/* --- the plan and the rows --- */

void page_plan_event(const struct night_row *row, char out[EDIT_TEXT_BYTES])
{
	snprintf(out, EDIT_TEXT_BYTES, "%s@%ld", row->window->event.prepared->target->name,
		 row->window->event.epoch);
}

static bool names_row(const char *text, const struct night_row *row)
{
	char event[EDIT_TEXT_BYTES];
	page_plan_event(row, event);
	return strcmp(text, event) == 0 || strcmp(text, row->window->event.prepared->target->name) == 0;
}

enum event_choice page_plan_choice(const struct plan_view *v, const struct night_row *row, const char **text)
{
	*text = NULL;
	for (size_t i = 0; i < v->n_pins; i++)
		if (names_row(v->pin[i], row)) {
			*text = v->pin[i];
			return CHOSEN_PINNED;
		}
	for (size_t i = 0; i < v->n_drops; i++)
		if (names_row(v->drop[i], row)) {
			*text = v->drop[i];
			return CHOSEN_DROPPED;
		}
	return CHOSEN_NOT;
}

static bool is_row(const struct plan_member_view *m, const struct night_row *row)
{
	const struct window_event *ev = &row->window->event;
	const struct target *t = ev->prepared->target;
	return m->kind == ev->kind && m->epoch == ev->epoch &&
	       (m->target_id != 0 ? m->target_id == t->id : strcmp(m->target, t->name) == 0);
}

static const struct plan_item_view *item_of(const struct plan_view *v, const struct night_row *row,
					    const struct plan_member_view **member)
{
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++)
			if (is_row(&v->item[i].member[k], row)) {
				*member = &v->item[i].member[k];
				return &v->item[i];
			}
	return NULL;
}

const struct plan_left_view *page_plan_left(const struct page_plan *plan, const struct night_row *row)
{
	const struct window_event *ev = &row->window->event;
	const struct plan_view *v = plan->made ? &plan->made->view : NULL;
	for (size_t i = 0; v && i < v->n_left; i++)
		if (v->left[i].kind == ev->kind && v->left[i].epoch == ev->epoch &&
		    strcmp(v->left[i].target, ev->prepared->target->name) == 0)
			return &v->left[i];
	return NULL;
}

static void put_worth(struct night_row *row, double worth)
{
	char text[NUMBER_TEXT_MAX];
	number_text_fixed(worth, 2, text);
	snprintf(row->text[ROW_WORTH], ROW_CELL_BYTES, "%.11s", text);
}

static void mark_row(const struct plan_view *v, struct night_row *row)
{
	const struct night *night = &v->night->night;
	const struct plan_member_view *member;
	const struct plan_item_view *item = item_of(v, row, &member);
	const char *choice;
	row->plan = (struct row_plan){.dropped = page_plan_choice(v, row, &choice) == CHOSEN_DROPPED};
	if (!item)
		return;
	row->plan.order = item->order;
	row->plan.state = item->state;
	row->plan.moved = member->moved;
	row->plan.slew_d = night_of_utc(night, item->slew_by);
	row->plan.from_d = night_of_utc(night, item->start);
	row->plan.to_d = night_of_utc(night, item->end);
	snprintf(row->number, sizeof row->number, "%d", item->order);
	put_worth(row, member->worth);
}

/* --- the line of the head --- */

static size_t moved_items(const struct plan_view *v)
{
	size_t n = 0;
	for (size_t i = 0; i < v->n_items; i++) {
		bool moved = false;
		for (size_t k = 0; k < v->item[i].n; k++)
			moved = moved || v->item[i].member[k].moved;
		n += moved;
	}
	return n;
}

/* `kept main (edition 3)`, and in a word. */
static void standing_words(const struct page_plan *plan, char *out, size_t n, const char **word)
{
	const struct plan_view *v = &plan->made->view;
	if (plan->changed)
		snprintf(out, n, "changed, not stored");
	else if (v->kept)
		snprintf(out, n, "kept %.80s (edition %d)", v->draft, v->edition);
	else if (v->stored)
		snprintf(out, n, "draft %.80s (edition %d), not kept", v->draft, v->edition);
	else
		snprintf(out, n, "proposed%s, not stored", plan->from_now ? " for what is left" : "");
	*word = plan->changed ? "changed" : v->kept ? "kept" : v->stored ? "not kept" : "proposed";
}

static void write_line(struct page_plan *plan, size_t hidden)
{
	const struct plan_view *v = &plan->made->view;
	char standing[160], worth[NUMBER_TEXT_MAX], bound[NUMBER_TEXT_MAX], moved[64] = "", more[64] = "",
									    items[32];
	const char *word;
	const size_t n_moved = moved_items(v);
	standing_words(plan, standing, sizeof standing, &word);
	number_text_fixed(v->worth, 2, worth);
	number_text_fixed(v->bound, 2, bound);
	snprintf(items, sizeof items, "%zu item%s", v->n_items, v->n_items == 1 ? "" : "s");
	if (n_moved > 0)
		snprintf(moved, sizeof moved, "; %zu item%s moved since: see v", n_moved,
			 n_moved == 1 ? "" : "s");
	if (hidden > 0)
		snprintf(more, sizeof more, "; %zu window%s of it not in the list: see v", hidden,
			 hidden == 1 ? "" : "s");
	snprintf(plan->line, sizeof plan->line, "plan: %s, %s, worth %s of at most %s%s%s", standing, items,
		 worth, bound, moved, more);
	if (n_moved > 0)
		snprintf(moved, sizeof moved, ", %zu moved: v", n_moved);
	snprintf(plan->line_short, sizeof plan->line_short, "plan %s: %s, worth %s%s", word, items, worth,
		 moved);
	snprintf(plan->line_least, sizeof plan->line_least, "plan %s: %s%s", word, items, moved);
	plan->line_role = n_moved > 0 || plan->changed ? ROLE_WARN : ROLE_TEXT;
}

void page_plan_mark_rows(struct page_plan *plan, struct night_rows *rows)
{
	size_t members = 0, found = 0;
	const struct plan_view *v = plan->made ? &plan->made->view : NULL;
	for (size_t i = 0; i < rows->total; i++) {
		struct night_row *row = &rows->row[i];
		row->plan = (struct row_plan){.order = 0};
		row->number[0] = '\0';
		put_worth(row, row->worth);
		if (!v)
			continue;
		mark_row(v, row);
		found += row->plan.order > 0;
	}
	plan->line[0] = plan->line_short[0] = plan->line_least[0] = '\0';
	if (plan->waits) {
		snprintf(plan->line, sizeof plan->line, "plan: being worked out");
		snprintf(plan->line_short, sizeof plan->line_short, "%s", plan->line);
		plan->line_role = ROLE_FAINT;
	}
	if (!v)
		return;
	for (size_t i = 0; i < v->n_items; i++)
		members += v->item[i].n;
	write_line(plan, members > found ? members - found : 0);
}

/* --- one row in words --- */

static void clock_of(const struct plan_view *v, struct utc t, char out[16])
{
	const struct night *night = &v->night->night;
	local_text(night, v->run->zone, night_of_utc(night, t), false, out, 16);
}

static void item_words(const struct plan_view *v, const struct plan_item_view *item,
		       const struct plan_member_view *m, char *out, size_t n)
{
	char slew[16], start[16], latest[16], end[16], worth[NUMBER_TEXT_MAX], by[40] = "", moved[400] = "",
									       after[400] = "";
	clock_of(v, item->slew_by, slew);
	clock_of(v, item->start, start);
	clock_of(v, item->end, end);
	number_text_fixed(m->worth, 2, worth);
	if (item->has_latest) {
		clock_of(v, item->latest_start, latest);
		snprintf(by, sizeof by, "; begin at the latest %s", latest);
	}
	if (isfinite(m->moved_min) && m->moved)
		snprintf(moved, sizeof moved, "; moved %+.1f min since (%.200s)", m->moved_min, m->moved_why);
	if (item->cause[0] || item->note[0])
		snprintf(after, sizeof after, "; %.150s%s%.200s", item->cause,
			 item->cause[0] && item->note[0] ? ", " : "", item->note);
	snprintf(out, n, "item %d of %zu, %s, %s: slew by %s, start %s, leave %s%s%s; worth %s%s%s%s. %.400s",
		 item->order, v->n_items, plan_state_words[item->state], m->variant, slew, start, end,
		 item->n > 1 ? "; one pointing" : "", by, worth, moved, after,
		 item->in_day ? "; THE SUN IS UP for some of it" : "", item->if_missed);
}

bool page_plan_row_words(const struct page_plan *plan, const struct night_row *row, char *out, size_t n)
{
	const struct plan_view *v = plan->made ? &plan->made->view : NULL;
	const struct plan_member_view *member;
	const struct plan_item_view *item = v ? item_of(v, row, &member) : NULL;
	const struct plan_left_view *left = item ? NULL : page_plan_left(plan, row);
	char event[EDIT_TEXT_BYTES], worth[NUMBER_TEXT_MAX];
	out[0] = '\0';
	if (item)
		item_words(v, item, member, out, n);
	if (!left)
		return item != NULL;
	page_plan_event(row, event);
	const double cost = isfinite(left->cost)		? left->cost
			    : strcmp(event, plan->cost_of) == 0 ? plan->cost
								: NAN;
	number_text_fixed(cost, 2, worth);
	if (isfinite(cost) && !strstr(left->reason, " cost"))
		snprintf(out, n, "left out: %s; forcing it in costs %s", left->reason, worth);
	else
		snprintf(out, n, "left out: %s%s", left->reason,
			 plan->cost_waits ? "; what forcing it in costs is being worked out" : "");
	return true;
}
