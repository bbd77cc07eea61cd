/* SPDX-License-Identifier: MIT
 * What was kept for a night once and is planned no more. */
#include "tui/plan_parts.h"

#include <math.h>
#include <string.h>

/* --- items --- */

static bool has_key(const struct plan_item_view *item, size_t n, const char *key)
{
	for (size_t i = 0; i < n; i++)
		if (strcmp(item[i].key, key) == 0)
			return true;
	return false;
}

/* Room for one more of n; NULL no memory. */
static void *grown(struct plan_view *v, void *all, size_t n, size_t size)
{
	if (n != 0 && (n & (n - 1)) != 0) /* room is the power of two from n on */
		return all;
	void *more = plan_alloc(v, n ? 2 * n : 1, size);
	if (more && n > 0)
		memcpy(more, all, n * size);
	return more;
}

static enum status gone_items(struct plan_view *v, const struct plan_row *old, struct err *e)
{
	enum status s = ST_OK;
	for (size_t i = 0; s == ST_OK && i < old->n; i++) {
		if (has_key(v->item, v->n_items, old->item[i].key) ||
		    has_key(v->gone, v->n_gone, old->item[i].key))
			continue;
		v->gone = grown(v, v->gone, v->n_gone, sizeof *v->gone);
		if (!v->gone)
			return plan_memory(v, e);
		s = stored_item(v, &v->gone[v->n_gone++], &old->item[i], e);
	}
	return s;
}

/* --- blocks --- */

bool plan_block_same(const struct plan_view *v, const struct plan_block_view *a,
		     const struct plan_block_view *b)
{
	const struct leap_table *leap = &v->run->leap;
	return a->kind == b->kind && strcmp(a->text, b->text) == 0 &&
	       fabs(utc_diff_s(leap, a->from, b->from)) < 1.0 && fabs(utc_diff_s(leap, a->to, b->to)) < 1.0;
}

static bool has_block(const struct plan_view *v, const struct plan_block_view *all, size_t n,
		      const struct plan_block_view *b)
{
	for (size_t i = 0; i < n; i++)
		if (plan_block_same(v, &all[i], b))
			return true;
	return false;
}

/* Blocks of old lines are read as those of a view. */
static enum status gone_blocks(struct plan_view *v, const struct plan_row *old, struct err *e)
{
	struct plan_block_view *const now = v->block;
	const size_t n_now = v->n_blocks;
	struct plan_choices *c = plan_alloc(v, 1, sizeof *c);
	if (!c)
		return plan_memory(v, e);
	v->block = NULL;
	v->n_blocks = 0;
	choices_read(v, c, old->choices);
	const struct plan_block_view *const then = v->block;
	const size_t n_then = v->n_blocks;
	v->block = now;
	v->n_blocks = n_now;
	for (size_t i = 0; i < n_then; i++) {
		if (has_block(v, now, n_now, &then[i]) ||
		    has_block(v, v->gone_block, v->n_gone_blocks, &then[i]))
			continue;
		v->gone_block = grown(v, v->gone_block, v->n_gone_blocks, sizeof *v->gone_block);
		if (!v->gone_block)
			return plan_memory(v, e);
		v->gone_block[v->n_gone_blocks++] = then[i];
	}
	return ST_OK;
}

/* --- all of it --- */

enum status stored_past(struct plan_view *v, bool with_gone, struct err *e)
{
	const struct run *r = v->run;
	struct plan_past past;
	if (!r->store || r->site.id == 0)
		return ST_OK;
	enum status s = plan_past_load(r->store, r->site.id, r->telescope.id, v->night->night.mjd, &past, e);
	if (s != ST_OK)
		return s;
	v->revisions = past.revisions;
	v->revised_utc = plan_copy(v, past.revised_utc);
	/* beside a kept plan a draft cancels nothing */
	for (size_t i = 0; s == ST_OK && with_gone && (v->kept || !past.kept) && i < past.n; i++) {
		struct plan_row old;
		if (v->stored && past.was_kept[i].plan_id == v->plan_id &&
		    past.was_kept[i].edition == v->edition)
			continue;
		/* an edition that can't be read takes nothing from the one that holds; wane check names it */
		if (plan_load_past(r->store, past.was_kept[i].plan_id, past.was_kept[i].edition, &old,
				   NULL) != ST_OK)
			continue;
		s = gone_items(v, &old, e);
		if (s == ST_OK)
			s = gone_blocks(v, &old, e);
		plan_row_free(&old);
	}
	plan_past_free(&past);
	return s;
}
