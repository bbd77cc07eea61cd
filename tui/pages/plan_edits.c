/* SPDX-License-Identifier: MIT */
#include "tui/pages/plan_edits.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static bool same_night(const struct edit_night *a, const struct edit_night *b)
{
	return a->site_id == b->site_id && a->telescope_id == b->telescope_id && a->mjd == b->mjd;
}

void plan_edits_free(struct plan_edits *edits)
{
	free(edits->edit);
	*edits = (struct plan_edits){.n = 0};
}

size_t plan_edits_of(const struct plan_edits *edits, const struct edit_night *night)
{
	size_t n = 0;
	for (size_t i = 0; i < edits->n; i++)
		n += same_night(&edits->edit[i].night, night);
	return n;
}

size_t plan_edits_nights(const struct plan_edits *edits)
{
	size_t nights = 0;
	for (size_t i = 0; i < edits->n; i++) {
		size_t before = 0;
		while (before < i && !same_night(&edits->edit[before].night, &edits->edit[i].night))
			before++;
		nights += before == i;
	}
	return nights;
}

enum status plan_edits_add(struct plan_edits *edits, const struct plan_edit *edit, struct err *e)
{
	if (plan_edits_of(edits, &edit->night) == EDITS_MAX)
		return err_set(e, ST_RANGE, "%d changes of a plan wait to be kept; K keeps them", EDITS_MAX);
	if (edits->n == edits->room) {
		size_t room = 2 * edits->room + 16;
		struct plan_edit *more = realloc(edits->edit, room * sizeof *more);
		if (!more)
			return err_set(e, ST_MEMORY, "no memory for a change of a plan");
		edits->edit = more;
		edits->room = room;
	}
	edits->edit[edits->n++] = *edit;
	return ST_OK;
}

static void remove_at(struct plan_edits *edits, size_t at)
{
	memmove(&edits->edit[at], &edits->edit[at + 1], (edits->n - at - 1) * sizeof edits->edit[0]);
	edits->n--;
}

bool plan_edits_pop(struct plan_edits *edits, const struct edit_night *night, struct plan_edit *out)
{
	for (size_t i = edits->n; i-- > 0;)
		if (same_night(&edits->edit[i].night, night)) {
			*out = edits->edit[i];
			remove_at(edits, i);
			return true;
		}
	return false;
}

void plan_edits_clear(struct plan_edits *edits, const struct edit_night *night)
{
	for (size_t i = edits->n; i-- > 0;)
		if (same_night(&edits->edit[i].night, night))
			remove_at(edits, i);
}

const struct plan_edit *plan_edits_event(const struct plan_edits *edits, const struct edit_night *night,
					 const char *text, bool *afresh)
{
	const struct plan_edit *found = NULL;
	if (afresh)
		*afresh = false;
	for (size_t i = 0; i < edits->n; i++) {
		const struct plan_edit *edit = &edits->edit[i];
		if (!same_night(&edit->night, night))
			continue;
		if (edit->kind == EDIT_AFRESH) {
			found = NULL;
			if (afresh)
				*afresh = true;
		} else if (edit->kind == EDIT_EVENT && strcmp(edit->text, text) == 0)
			found = edit;
	}
	return found;
}

static void wish_event(const struct plan_edit *edit, struct edit_wish *out)
{
	struct plan_wish *w = &out->wish;
	if (edit->is == edit->was)
		return;
	if (edit->was != CHOSEN_NOT) {
		bool again = false; /* one stored choice may stand for several events */
		for (int i = 0; i < w->n_free; i++)
			again = again || strcmp(out->free[i], edit->stored) == 0;
		if (!again)
			out->free[w->n_free++] = edit->stored;
	}
	if (edit->is == CHOSEN_PINNED)
		out->pin[w->n_pin++] = edit->text;
	else if (edit->is == CHOSEN_DROPPED)
		out->drop[w->n_drop++] = edit->text;
}

void plan_edits_wish(const struct plan_edits *edits, const struct edit_night *night, struct edit_wish *out)
{
	struct plan_wish *w = &out->wish;
	*w = (struct plan_wish){
	    .pin = out->pin, .drop = out->drop, .free = out->free, .lost = out->lost, .moved_min = NAN};
	for (size_t i = 0; i < edits->n; i++) {
		const struct plan_edit *edit = &edits->edit[i];
		if (!same_night(&edit->night, night))
			continue;
		if (edit->kind == EDIT_AFRESH) {
			w->n_pin = w->n_drop = w->n_free = w->n_lost = 0;
			w->afresh = true;
		} else if (edit->kind == EDIT_LOST)
			out->lost[w->n_lost++] = edit->text;
		else if (plan_edits_event(edits, night, edit->text, NULL) == edit)
			wish_event(edit, out);
	}
}
