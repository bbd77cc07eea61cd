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

/* --- limbs and lost time --- */

/* Limbs of an item's events. planned: those that the item holds. */
struct limbs {
	int planned, hit, before; /* all; taken by lost time; over before what was taken */
	double hit_until_d;	  /* end of the last limb that was taken; -INFINITY none */
	bool in_hit, out_hit;
	bool ahead; /* an egress that was not planned is still to come */
};

/* A limb is lost when lost time takes most of it, or most of the baseline without which it is no use. */
static bool limb_hit(const struct intervals *lost, double from_d, double to_d, double base_from_d,
		     double base_to_d)
{
	return intervals_overlap(lost, from_d, to_d) > 0.5 * (to_d - from_d) ||
	       intervals_overlap(lost, base_from_d, base_to_d) > 0.5 * (base_to_d - base_from_d);
}

static void count(struct limbs *l, const struct intervals *lost, bool hit, double end_d)
{
	l->planned++;
	l->hit += hit;
	if (hit)
		l->hit_until_d = fmax(l->hit_until_d, end_d);
	else if (lost->n > 0 && end_d <= fmax(lost->s[0].from_d, l->hit_until_d))
		l->before++;
}

static void member_limbs(const struct plan_view *v, const struct plan_member_view *m,
			 const struct intervals *lost, double now_d, struct limbs *l)
{
	const struct night *night = &v->night->night;
	const struct prepared *p = run_prepared(v->run, m->target_id, m->target);
	const double base_d = (p ? &p->limits : &v->run->limits)->value[LIM_MIN_BASELINE] * MIN_D;
	const double t1 = night_of_utc(night, m->t1), t4 = night_of_utc(night, m->t4),
		     t2 = night_of_utc(night, m->has_flat ? m->t2 : m->mid),
		     t3 = night_of_utc(night, m->has_flat ? m->t3 : m->mid);
	const bool in = limb_hit(lost, t1, t2, t1 - base_d, t1),
		   out = limb_hit(lost, t3, t4, t4, t4 + base_d);
	if (strcmp(m->variant, variant_words[VARIANT_EGRESS]) != 0) {
		count(l, lost, in, t2);
		l->in_hit = l->in_hit || in;
	}
	if (strcmp(m->variant, variant_words[VARIANT_INGRESS]) != 0) {
		count(l, lost, out, t4);
		l->out_hit = l->out_hit || out;
	} else if (!out && t3 > now_d)
		l->ahead = true;
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

/* Lost time that leaves an item that has begun no limb ahead lets go of it, and says what became of it.
 * *ahead: its events have an egress that the item did not hold. */
static bool let_go(struct plan_view *v, struct plan_item_view *item, const struct moment *at, bool *ahead)
{
	const struct intervals lost = lost_time(v);
	const double now_d = at->inside ? at->now_d : night_of_utc(&v->night->night, item->end);
	struct limbs l = {.hit_until_d = -INFINITY};
	char note[160];
	*ahead = false;
	/* the first pass finds the last limb that was taken, whichever event it belongs to */
	for (int pass = 0; pass < 2; pass++) {
		l = (struct limbs){.hit_until_d = l.hit_until_d};
		for (size_t i = 0; i < item->n; i++)
			member_limbs(v, &item->member[i], &lost, now_d, &l);
	}
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

static enum standing stands(struct plan_view *v, struct plan_item_view *item, const struct moment *at,
			    bool afresh, struct plan_choices *c)
{
	const struct night *night = &v->night->night;
	const bool marked = item->state >= PLAN_STARTED;
	bool ahead;
	if (item->state > PLAN_STARTED)
		return STANDS;
	if (!marked && (afresh || !begun(v, item, at)))
		return GOES;
	if (let_go(v, item, at, &ahead))
		return ahead ? REOPENED : STANDS;
	if (!marked && night_of_utc(night, item->end) <= at->now_d) {
		never_begun(c, item);
		return STANDS;
	}
	return STANDS_FIXED;
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
	} else if (runs(v, &at))
		out->not_before_d = at.now_d;
	out->item = plan_alloc(v, v->n_items, sizeof *out->item);
	out->fixed = plan_alloc(v, v->n_items, sizeof *out->fixed);
	out->reopened = plan_alloc(v, v->n_items, sizeof *out->reopened);
	struct plan_item_view *copy = plan_alloc(v, v->n_items, sizeof *copy);
	if (!out->item || !out->fixed || !out->reopened || !copy)
		return plan_memory(v, e);
	for (size_t i = 0; i < v->n_items; i++) {
		copy[i] = v->item[i];
		const enum standing how = stands(v, &copy[i], &at, wish->afresh, c);
		put_standing(out, &copy[i], how, c);
	}
	return ST_OK;
}
