/* SPDX-License-Identifier: MIT
 * What of a stored plan stands when the rest of its night is planned anew. */
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

/* --- limbs and lost time --- */

struct limbs {
	int n, hit, before; /* of a member or an item: all, taken by lost time, over before that began */
	bool in_hit, out_hit;
};

static void count_limb(const struct intervals *lost, double from_d, double to_d, bool *hit, struct limbs *l)
{
	l->n++;
	*hit = intervals_overlap(lost, from_d, to_d) > 0.5 * (to_d - from_d);
	l->hit += *hit;
	if (!*hit && lost->n > 0 && to_d <= lost->s[0].from_d)
		l->before++;
}

static struct limbs limbs_of(const struct plan_view *v, const struct plan_item_view *item,
			     const struct intervals *lost)
{
	const struct night *night = &v->night->night;
	struct limbs l = {.n = 0};
	for (size_t i = 0; i < item->n; i++) {
		const struct plan_member_view *m = &item->member[i];
		bool in = false, out = false;
		if (strcmp(m->variant, variant_words[VARIANT_EGRESS]) != 0)
			count_limb(lost, night_of_utc(night, m->t1),
				   night_of_utc(night, m->has_flat ? m->t2 : m->mid), &in, &l);
		if (strcmp(m->variant, variant_words[VARIANT_INGRESS]) != 0)
			count_limb(lost, night_of_utc(night, m->has_flat ? m->t3 : m->mid),
				   night_of_utc(night, m->t4), &out, &l);
		l.in_hit = l.in_hit || in;
		l.out_hit = l.out_hit || out;
	}
	return l;
}

static struct intervals lost_time(const struct plan_view *v)
{
	const struct night *night = &v->night->night;
	struct intervals lost = intervals_none();
	for (size_t i = 0; i < v->n_blocks; i++) {
		const struct intervals one =
		    intervals_one(night_of_utc(night, v->block[i].from), night_of_utc(night, v->block[i].to));
		if (v->block[i].kind == BLOCK_LOST)
			lost = intervals_or(&lost, &one);
	}
	return lost;
}

/* Lost time that leaves an item that has begun no limb ahead lets go of it, and says what became of it. */
static bool let_go(struct plan_view *v, struct plan_item_view *item)
{
	const struct intervals lost = lost_time(v);
	const struct limbs l = limbs_of(v, item, &lost);
	char note[160];
	if (l.hit == 0 || l.hit + l.before < l.n)
		return false;
	item->state = l.before > 0 ? PLAN_PARTLY : PLAN_LOST;
	item->cause = "lost time";
	snprintf(note, sizeof note, "lost time took %s",
		 l.in_hit && l.out_hit ? "both limbs"
		 : l.in_hit	       ? "the ingress"
				       : "the egress");
	item->note = plan_copy(v, note);
	item->marked_utc = "";
	return true;
}

/* --- what stands --- */

static bool begun(const struct plan_view *v, const struct moment *at)
{
	for (size_t i = 0; i < v->n_items; i++)
		if (v->item[i].state >= PLAN_STARTED ||
		    (at->inside && night_of_utc(&v->night->night, v->item[i].start) <= at->now_d))
			return true;
	return false;
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

/* Whether an item stands; *fixed: it takes time still. */
static bool item_stands(struct plan_view *v, struct plan_item_view *item, const struct moment *at,
			bool afresh, struct plan_choices *c, bool *fixed)
{
	const struct night *night = &v->night->night;
	const bool marked = item->state >= PLAN_STARTED;
	*fixed = false;
	if (item->state > PLAN_STARTED)
		return true;
	if (!marked && (afresh || !at->inside || night_of_utc(night, item->start) > at->now_d))
		return false;
	if (let_go(v, item))
		return true;
	if (!marked && night_of_utc(night, item->end) <= at->now_d) {
		never_begun(c, item);
		return true;
	}
	*fixed = true;
	return true;
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
			return err_set(e, s == ST_ABSENT ? ST_RANGE : s, "from: %.440s", inner.text);
		}
		echo_add(echo, "from", clock, out->not_before_d, out->not_before_d);
	} else if (at.inside && begun(v, &at))
		out->not_before_d = at.now_d;
	out->item = plan_alloc(v, v->n_items, sizeof *out->item);
	out->fixed = plan_alloc(v, v->n_items, sizeof *out->fixed);
	struct plan_item_view *copy = plan_alloc(v, v->n_items, sizeof *copy);
	if (!out->item || !out->fixed || !copy)
		return plan_memory(v, e);
	for (size_t i = 0; i < v->n_items; i++) {
		copy[out->n] = v->item[i];
		if (!item_stands(v, &copy[out->n], &at, wish->afresh, c, &out->fixed[out->n]))
			continue;
		out->item[out->n] = &copy[out->n];
		out->n++;
	}
	return ST_OK;
}
