/* SPDX-License-Identifier: MIT
 * What of a stored plan stands when the rest of its night is planned anew. */
#include "ephem/units.h"
#include "tui/plan_parts.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

/* Where the clock stands in the night; outside it, nothing but marks says what has begun. */
struct moment {
	bool inside;
	double now_d;
};

static struct moment moment_of(const struct plan_view *v)
{
	const struct night *night = &v->night->night;
	const double now_d = night_of_utc(night, wall_now(&v->run->wall));
	return (struct moment){.inside = now_d >= 0.0 && now_d <= night->length_d, .now_d = now_d};
}

/* --- lost time --- */

/* Outside the night all of an item that is marked counts as over. */
static double now_of(const struct plan_view *v, const struct plan_item_view *item, const struct moment *at)
{
	return at->inside ? at->now_d : night_of_utc(&v->night->night, item->end);
}

/* Lost time that leaves an item that has begun no limb ahead lets go of it, and says what became of it.
 * *ahead: its events have an egress that the item did not hold. */
static bool let_go(struct plan_view *v, struct plan_item_view *item, const struct moment *at, bool *ahead)
{
	const struct limbs l = item_limbs(v, item, now_of(v, item, at));
	char note[160];
	*ahead = false;
	if (l.hit == 0 || l.hit + l.before < l.planned)
		return false;
	item->state = l.before > 0 ? PLAN_PARTLY : PLAN_LOST;
	item->cause = "lost time";
	snprintf(note, sizeof note, "it took %s",
		 l.in_hit && l.out_hit ? "both limbs"
		 : l.in_hit	       ? "the ingress"
				       : "the egress");
	item->note = plan_copy(v, note);
	item->marked_utc = "";
	*ahead = l.ahead && item->state == PLAN_LOST;
	return true;
}

/* --- what stands --- */

/* An item begins with the move to it. */
static bool begun(const struct plan_view *v, const struct plan_item_view *item, const struct moment *at)
{
	return item->state >= PLAN_STARTED ||
	       (at->inside && night_of_utc(&v->night->night, item->slew_by) <= at->now_d);
}

/* Whether the night of a stored plan runs: it is dark, or something has begun. */
static bool runs(const struct plan_view *v, const struct moment *at)
{
	if (!at->inside || v->plan_id == 0)
		return false;
	for (size_t i = 0; i < v->n_items; i++)
		if (begun(v, &v->item[i], at))
			return true;
	return at->now_d >= v->night->dark.dusk_d;
}

static void never_begun(struct plan_choices *c, struct plan_item_view *item)
{
	item->note = item->note[0] ? item->note : "not begun";
	for (size_t i = 0; i < c->n_missed; i++)
		if (strcmp(c->missed[i], item->key) == 0)
			return;
	if (c->n_missed < CHOICES_MAX)
		c->missed[c->n_missed++] = item->key;
}

/* What is done with an item of the stored plan. */
enum standing { GOES, STANDS, STANDS_FIXED, REOPENED };

/* was: what was cut before; *c gets what is cut now. */
static enum status stands(struct plan_view *v, struct plan_item_view *item, const struct moment *at,
			  bool afresh, const struct plan_cut *was, struct plan_choices *c, enum standing *how,
			  struct err *e)
{
	const struct night *night = &v->night->night;
	const bool marked = item->state >= PLAN_STARTED;
	bool ahead;
	*how = STANDS;
	if (item->state > PLAN_STARTED) {
		if (was && c->n_cut < CHOICES_MAX)
			c->cut[c->n_cut++] = *was;
		return ST_OK;
	}
	if (!marked && (afresh || !begun(v, item, at))) {
		*how = GOES;
		return ST_OK;
	}
	/* from what it was at first, for lost time may be taken back too */
	if (was && !uncut_item(v, was, item))
		return plan_memory(v, e);
	if (let_go(v, item, at, &ahead)) {
		*how = ahead ? REOPENED : STANDS;
	} else if (!marked && night_of_utc(night, item->end) <= at->now_d) {
		never_begun(c, item);
	} else {
		*how = STANDS_FIXED;
		if (!cut_item(v, c, item, now_of(v, item, at)))
			return plan_memory(v, e);
	}
	return ST_OK;
}

static void put_standing(struct plan_standing *out, struct plan_item_view *item, enum standing how,
			 struct plan_choices *c)
{
	if (how == REOPENED) {
		out->reopened[out->n_reopened++] = item;
		if (c->n_reopened < CHOICES_MAX)
			c->reopened[c->n_reopened++] = item->key;
	} else if (how != GOES) {
		out->fixed[out->n] = how == STANDS_FIXED;
		out->item[out->n++] = item;
	}
}

static enum status sort_items(struct plan_view *v, bool afresh, const struct moment *at,
			      struct plan_choices *c, struct plan_standing *out, struct err *e)
{
	const size_t n_cut = c->n_cut;
	struct plan_cut *cut = plan_alloc(v, n_cut, sizeof *cut);
	struct plan_item_view *copy = plan_alloc(v, v->n_items, sizeof *copy);
	enum status s = ST_OK;
	if (!out->item || !out->fixed || !out->reopened || !copy || !cut)
		return plan_memory(v, e);
	memcpy(cut, c->cut, n_cut * sizeof *cut);
	c->n_cut = 0;
	for (size_t i = 0; s == ST_OK && i < v->n_items; i++) {
		enum standing how = GOES;
		copy[i] = v->item[i];
		s = stands(v, &copy[i], at, afresh, cut_of(cut, n_cut, copy[i].key), c, &how, e);
		put_standing(out, &copy[i], how, c);
	}
	return s;
}

enum status plan_stand(struct plan_view *v, const struct plan_wish *wish, const struct plan_clock *clock,
		       struct plan_choices *c, struct echo *echo, struct plan_standing *out, struct err *e)
{
	const struct moment at = moment_of(v);
	*out = (struct plan_standing){.not_before_d = -INFINITY};
	if (wish->from) {
		enum status s = plan_time(clock, wish->from, &out->not_before_d, e);
		if (s != ST_OK) {
			struct err inner = *e;
			return err_set(e, s, "from: %.440s", inner.text);
		}
		echo_add(echo, "from", clock, out->not_before_d, out->not_before_d);
	} else if (runs(v, &at))
		out->not_before_d = at.now_d;
	/* NOLINTBEGIN(bugprone-sizeof-expression): pointers are what they hold */
	out->item = plan_alloc(v, v->n_items, sizeof *out->item);
	out->fixed = plan_alloc(v, v->n_items, sizeof *out->fixed);
	out->reopened = plan_alloc(v, v->n_items, sizeof *out->reopened);
	/* NOLINTEND(bugprone-sizeof-expression) */
	return sort_items(v, wish->afresh, &at, c, out, e);
}
