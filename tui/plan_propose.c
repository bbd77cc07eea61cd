/* SPDX-License-Identifier: MIT
 * A proposal: the night's windows and what stands of a stored plan go to the engine, its running order comes
 * back as a view. */
#include "tui/plan_parts.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* What one proposal is made from; offer, scaled, fixed, fixed_item are freed at its end. */
struct making {
	struct plan_offer *offer;
	struct window *scaled; /* copies of windows in poor time */
	struct plan_fixed *fixed;
	size_t *fixed_item; /* [n_fixed]: which standing item */
	size_t n, n_fixed;
	struct night_plan plan;
};

/* --- offers --- */

static bool same_event(const struct plan_member_view *m, const struct window *w)
{
	const struct target *t = w->event.prepared->target;
	return m->kind == w->event.kind && m->epoch == w->event.epoch &&
	       (m->target_id != 0 ? m->target_id == t->id : strcmp(m->target, t->name) == 0);
}

static bool stands(const struct plan_standing *standing, const struct window *w)
{
	for (size_t i = 0; i < standing->n; i++)
		for (size_t k = 0; k < standing->item[i]->n; k++)
			if (same_event(&standing->item[i]->member[k], w))
				return true;
	return false;
}

/* Whether a window is pinned (or dropped): what is chosen of that event goes before what is chosen of its
 * target.
 */
static bool chosen(const struct plan_view *v, const struct plan_choices *c, enum choice_kind kind,
		   const struct window *w)
{
	bool one = false, found = false;
	for (size_t i = 0; i < c->n; i++) {
		struct event_name name;
		const enum choice_kind k = c->choice[i].kind;
		/* a pin may have outlived its target */
		if ((k != CHOICE_PIN && k != CHOICE_DROP) ||
		    event_name_find(v->run, c->choice[i].text, &name, NULL) != ST_OK ||
		    name.target != w->event.prepared->target ||
		    (name.one ? name.epoch != w->event.epoch : one))
			continue;
		found = k == kind || (found && one == name.one);
		one = name.one;
	}
	return found;
}

/* Poor time takes worth from a window as if its chances and its coverage were that much smaller. */
static const struct window *scaled(struct window *copy, const struct window *w, double share)
{
	*copy = *w;
	copy->chance.ingress *= 1.0 - share;
	copy->chance.egress *= 1.0 - share;
	copy->chance.mid *= 1.0 - share;
	copy->chance.done *= 1.0 - share;
	copy->cover.coverage *= 1.0 - share;
	copy->forecast.gain_bits *= 1.0 - share;
	copy->forecast.worth *= 1.0 - share;
	return copy;
}

static void fill_offers(const struct plan_view *v, const struct plan_choices *c,
			const struct plan_standing *standing, struct making *m)
{
	for (size_t i = 0; i < m->n; i++) {
		const struct window *w = &v->night->list.w[i];
		const double share = poor_share(v, &v->night->night, w);
		m->offer[i] = (struct plan_offer){
		    .window = share > 0.0 ? scaled(&m->scaled[i], w, share) : w,
		    .pinned = chosen(v, c, CHOICE_PIN, w),
		    .dropped = chosen(v, c, CHOICE_DROP, w),
		    .settled = stands(standing, w),
		};
	}
}

/* In order of time and disjoint: what is marked as begun may have been planned before something else was
 * lost. */
static void fill_fixed(const struct plan_view *v, const struct plan_standing *standing, struct making *m)
{
	const struct night *night = &v->night->night;
	double end_d = -INFINITY;
	for (size_t i = 0; i < standing->n; i++) {
		const struct plan_item_view *item = standing->item[i];
		const struct prepared *p =
		    item->n > 0 ? run_prepared(v->run, item->member[0].target_id, item->member[0].target)
				: NULL;
		struct plan_fixed f = {.from_d = fmax(night_of_utc(night, item->start), end_d),
				       .to_d = night_of_utc(night, item->end),
				       .direction = {0.0, 0.0, 1.0}};
		if (!standing->fixed[i] || !(f.to_d > f.from_d))
			continue;
		if (p)
			f.direction = night_star(night, p->target).icrs;
		end_d = f.to_d;
		m->fixed_item[m->n_fixed] = i;
		m->fixed[m->n_fixed++] = f;
	}
}

/* --- items --- */

static void put_item(struct plan_view *v, const struct making *m, const struct plan_item *from,
		     struct plan_item_view *to)
{
	const struct night *night = &v->night->night;
	const struct leap_table *leap = &v->run->leap;
	*to = (struct plan_item_view){
	    .state = PLAN_PLANNED,
	    .cause = "",
	    .note = "",
	    .marked_utc = "",
	    .slew_by = utc_rounded(leap, night_utc(night, from->slew_by_d), 0),
	    .start = utc_rounded(leap, night_utc(night, from->from_d), 0),
	    .end = utc_rounded(leap, night_utc(night, from->to_d), 0),
	    .has_latest = isfinite(from->latest_start_d),
	    .worth = from->worth,
	    .n = (size_t)from->n,
	    .member = plan_alloc(v, (size_t)from->n, sizeof *to->member),
	};
	if (to->has_latest)
		to->latest_start = utc_rounded(leap, night_utc(night, from->latest_start_d), 0);
	if (!to->member)
		to->n = 0;
	for (size_t i = 0; i < to->n; i++) {
		const struct plan_member *member = &from->member[i];
		/* the window as it is listed: poor time changes its worth alone */
		member_from_window(v, &to->member[i], &v->night->list.w[member->offer], night);
		to->member[i].variant = variant_words[member->variant];
		to->member[i].worth = member->worth;
		if (m->offer[member->offer].pinned)
			to->state = PLAN_PINNED;
	}
	to->key = item_key(v, to);
}

static int by_start(const void *a, const void *b)
{
	const struct plan_item_view *left = a, *right = b;
	if (left->start.mjd != right->start.mjd)
		return left->start.mjd < right->start.mjd ? -1 : 1;
	if (left->start.sod_s < right->start.sod_s || left->start.sod_s > right->start.sod_s)
		return left->start.sod_s < right->start.sod_s ? -1 : 1;
	return strcmp(left->key, right->key);
}

static bool chosen_again(const struct making *m, const struct plan_item_view *item)
{
	for (size_t i = 0; i < m->plan.n_items; i++)
		for (int k = 0; k < m->plan.item[i].n; k++)
			for (size_t j = 0; j < item->n; j++)
				if (same_event(&item->member[j],
					       m->offer[m->plan.item[i].member[k].offer].window))
					return true;
	return false;
}

static enum status put_items(struct plan_view *v, const struct making *m,
			     const struct plan_standing *standing, struct err *e)
{
	enum status s = ST_OK;
	struct plan_item_view *item =
	    plan_alloc(v, standing->n + standing->n_reopened + m->plan.n_items, sizeof *item);
	if (!item)
		return plan_memory(v, e);
	size_t n = 0;
	for (size_t i = 0; i < standing->n; i++) {
		item[n++] = *standing->item[i];
		/* what is won, or is being done, counts; what is lost or was never begun does not */
		if (standing->item[i]->state != PLAN_LOST &&
		    (standing->fixed[i] || standing->item[i]->state >= PLAN_STARTED)) {
			v->worth += standing->item[i]->worth;
			v->bound += standing->item[i]->worth;
		}
	}
	for (size_t i = 0; i < standing->n_reopened; i++)
		if (!chosen_again(m, standing->reopened[i]))
			item[n++] = *standing->reopened[i];
	for (size_t i = 0; i < m->plan.n_items; i++) {
		if (m->plan.item[i].fixed >= 0)
			continue;
		put_item(v, m, &m->plan.item[i], &item[n]);
		for (size_t k = 0; s == ST_OK && k < item[n].n; k++)
			s = member_target(v, &item[n].member[k], e);
		n++;
	}
	if (n > 0)
		qsort(item, n, sizeof *item, by_start);
	v->item = item;
	v->n_items = n;
	return s;
}

static bool listed(const struct plan_view *v, const struct window *w)
{
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++)
			if (same_event(&v->item[i].member[k], w))
				return true;
	return false;
}

static void put_left(struct plan_view *v, const struct making *m, const struct plan_standing *standing,
		     bool costs)
{
	const struct night_plan *p = &m->plan;
	v->left = plan_alloc(v, p->n_left, sizeof *v->left);
	const size_t n = v->left ? p->n_left : 0;
	v->n_left = 0;
	for (size_t i = 0; i < n; i++) {
		const struct window *w = m->offer[p->left[i].offer].window;
		if (listed(v, w)) /* lost already, and nothing came of offering it again */
			continue;
		v->left[v->n_left++] = (struct plan_left_view){
		    .target = plan_copy(v, w->event.prepared->target->name),
		    .kind = w->event.kind,
		    .epoch = w->event.epoch,
		    .reason = left_words(v, p, m->offer, &p->left[i], standing, m->fixed_item, costs),
		    .cost = p->left[i].cost,
		};
	}
}

/* --- all of it --- */

static enum status make(struct plan_view *v, const struct plan_choices *c,
			const struct plan_standing *standing, bool costs, struct making *m, struct err *e)
{
	m->n = v->night->list.n;
	m->offer = calloc(m->n + 1, sizeof *m->offer);
	m->scaled = calloc(m->n + 1, sizeof *m->scaled);
	m->fixed = calloc(standing->n + 1, sizeof *m->fixed);
	m->fixed_item = calloc(standing->n + 1, sizeof *m->fixed_item);
	if (!m->offer || !m->scaled || !m->fixed || !m->fixed_item)
		return err_set(e, ST_MEMORY, "memory: none for a plan of %zu windows", m->n);
	fill_offers(v, c, standing, m);
	fill_fixed(v, standing, m);
	const struct plan_input in = {
	    .night = &v->night->night,
	    .offer = m->offer,
	    .n = m->n,
	    .fixed = m->fixed,
	    .n_fixed = m->n_fixed,
	    .free = &v->night->free,
	    .not_before_d = standing->not_before_d,
	    .rules = &v->rules,
	    .without_costs = !costs,
	};
	return night_plan_make(&in, &m->plan, e);
}

enum status plan_propose(struct plan_view *v, const struct plan_choices *c,
			 const struct plan_standing *standing, bool costs, struct err *e)
{
	struct making m = {.n = 0};
	enum status s = make(v, c, standing, costs, &m, e);
	if (s == ST_OK) {
		v->worth = m.plan.worth;
		v->bound = m.plan.bound;
		v->optimal = m.plan.optimal;
		s = put_items(v, &m, standing, e);
		put_left(v, &m, standing, costs);
		night_plan_free(&m.plan);
	}
	free(m.offer);
	free(m.scaled);
	free(m.fixed);
	free(m.fixed_item);
	return s == ST_OK ? plan_memory(v, e) : s;
}
