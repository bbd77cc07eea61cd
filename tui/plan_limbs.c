/* SPDX-License-Identifier: MIT
 * What lost time leaves of an item: which limbs of its events, and what they are worth. */
#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/parts/columns.h"
#include "tui/plan_parts.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum { NOTE_BYTES = 400, WAS_BYTES = 64 * PLAN_MEMBERS_MAX };

/* A limb is lost when lost time takes most of it, or most of the baseline without which it is no use. */
static bool limb_hit(const struct intervals *lost, double from_d, double to_d, double base_from_d,
		     double base_to_d)
{
	return intervals_overlap(lost, from_d, to_d) > 0.5 * (to_d - from_d) ||
	       intervals_overlap(lost, base_from_d, base_to_d) > 0.5 * (base_to_d - base_from_d);
}

static void count(struct limbs *l, const struct intervals *lost, bool hit, double end_d, double now_d)
{
	l->planned++;
	l->hit += hit;
	if (hit)
		l->hit_until_d = fmax(l->hit_until_d, end_d);
	else if (lost->n > 0 && end_d <= now_d && end_d <= fmax(lost->s[0].from_d, l->hit_until_d))
		l->before++;
}

/* When the limbs of an event are, and the least baseline beside them. */
struct limb_times {
	double t1_d, t2_d, t3_d, t4_d, base_d;
};
static struct limb_times limb_times(const struct plan_view *v, const struct plan_member_view *m)
{
	const struct night *night = &v->night->night;
	const struct prepared *p = run_prepared(v->run, m->target_id, m->target);
	return (struct limb_times){
	    .t1_d = night_of_utc(night, m->t1),
	    .t2_d = night_of_utc(night, m->has_flat ? m->t2 : m->mid),
	    .t3_d = night_of_utc(night, m->has_flat ? m->t3 : m->mid),
	    .t4_d = night_of_utc(night, m->t4),
	    .base_d = (p ? &p->limits : &v->run->limits)->value[LIM_MIN_BASELINE] * MIN_D,
	};
}

static bool ingress_hit(const struct limb_times *t, const struct intervals *lost)
{
	return limb_hit(lost, t->t1_d, t->t2_d, t->t1_d - t->base_d, t->t1_d);
}

static bool egress_hit(const struct limb_times *t, const struct intervals *lost)
{
	return limb_hit(lost, t->t3_d, t->t4_d, t->t4_d, t->t4_d + t->base_d);
}

static void member_limbs(const struct plan_view *v, const struct plan_member_view *m,
			 const struct intervals *lost, double now_d, struct limbs *l)
{
	const struct limb_times t = limb_times(v, m);
	const bool in = ingress_hit(&t, lost), out = egress_hit(&t, lost);
	if (strcmp(m->variant, variant_words[VARIANT_EGRESS]) != 0) {
		count(l, lost, in, t.t2_d, now_d);
		l->in_hit = l->in_hit || in;
	}
	if (strcmp(m->variant, variant_words[VARIANT_INGRESS]) != 0) {
		count(l, lost, out, t.t4_d, now_d);
		l->out_hit = l->out_hit || out;
	} else if (!out && t.t3_d > now_d)
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

struct limbs item_limbs(const struct plan_view *v, const struct plan_item_view *item, double now_d)
{
	const struct intervals lost = lost_time(v);
	struct limbs l = {.hit_until_d = -INFINITY};
	/* the first pass finds the last limb that was taken, whichever event it belongs to */
	for (int pass = 0; pass < 2; pass++) {
		l = (struct limbs){.hit_until_d = l.hit_until_d};
		for (size_t i = 0; i < item->n; i++)
			member_limbs(v, &item->member[i], &lost, now_d, &l);
	}
	return l;
}

/* --- what is left of an item --- */

static bool is(const struct plan_member_view *m, enum variant variant)
{
	return strcmp(m->variant, variant_words[variant]) == 0;
}

static const struct window *window_of(const struct plan_view *v, const struct plan_member_view *m)
{
	for (size_t i = 0; i < v->night->list.n; i++) {
		const struct window *w = &v->night->list.w[i];
		const struct target *t = w->event.prepared->target;
		if (m->kind == w->event.kind && m->epoch == w->event.epoch &&
		    (m->target_id != 0 ? m->target_id == t->id : strcmp(m->target, t->name) == 0))
			return w;
	}
	return NULL;
}

/* The chances as they are now that time was lost; other figures stay as they were planned. */
static bool chances_now(struct plan_view *v, struct plan_member_view *m)
{
	static const char *const names[] = {"chance_ingress", "chance_egress", "chance_mid", "chance_done"};
	const struct window *w = window_of(v, m);
	const struct night *n = &v->night->night;
	char text[NOTE_BYTES];
	const char **figure = plan_alloc(v, column_count + 1, sizeof *figure);
	if (!figure)
		return false;
	for (size_t i = 0; i <= column_count; i++)
		figure[i] = m->figure[i];
	for (size_t i = 0; w && i < sizeof names / sizeof names[0]; i++) {
		const int at = column_find(names[i]);
		const struct value value = column_value(&columns[at], w, n);
		value_machine_text(&columns[at], &value, n->clock.leap, text, sizeof text);
		figure[at] = plan_copy(v, text);
	}
	m->figure = figure;
	return true;
}

/* Of what is not listed any more (its target was removed) nobody knows the chance of a limb: the limb's share
 * of what it was worth. */
static double worth_left(const struct plan_view *v, const struct plan_member_view *m, enum variant limb)
{
	const struct window *w = window_of(v, m);
	const double worth = w ? plan_limb_worth(w, &v->rules, limb) : NAN;
	if (isnan(worth))
		return m->worth * v->rules.limb_share;
	return worth * (1.0 - poor_share(v, &v->night->night, w));
}

static void clock_span(const struct plan_view *v, struct utc from, struct utc to, char *out, size_t n)
{
	char a[PLAN_CLOCK_BYTES], b[PLAN_CLOCK_BYTES];
	plan_clock_words(v, from, a);
	plan_clock_words(v, to, b);
	/* the zone is said once */
	char *zone = strchr(a, ' ');
	if (zone && strchr(b, ' ') && strcmp(zone, strchr(b, ' ')) == 0)
		*zone = '\0';
	snprintf(out, n, "%s to %s", a, b);
}

/* Adds ` 22:40 to 23:50 MDT`: the lost time in [from, to]. */
static void put_lost_spans(const struct plan_view *v, double from_d, double to_d, char *out, size_t n)
{
	const struct night *night = &v->night->night;
	char span[2 * PLAN_CLOCK_BYTES + 8];
	const char *link = " ";
	for (size_t i = 0; i < v->n_blocks; i++) {
		const struct plan_block_view *b = &v->block[i];
		if (b->kind != BLOCK_LOST || night_of_utc(night, b->to) <= from_d ||
		    night_of_utc(night, b->from) >= to_d)
			continue;
		clock_span(v, b->from, b->to, span, sizeof span);
		const size_t used = strlen(out);
		plan_put_words(out + used, n - used, "%s%s", link, span);
		link = " and ";
	}
}

/* `the ingress of Tern 27 c was lost 22:40 to 23:50 MDT` */
static void say_lost(const struct plan_view *v, const struct plan_item_view *item,
		     const struct plan_member_view *m, bool in, bool out, char *note, size_t n)
{
	const struct limb_times t = limb_times(v, m);
	size_t used = strlen(note);
	plan_put_words(note + used, n - used, "%s%s%s%s %s lost", used ? "; " : "",
		       in && out ? "both limbs"
		       : in	 ? "the ingress"
				 : "the egress",
		       item->n > 1 ? " of " : "", item->n > 1 ? m->target : "", in && out ? "were" : "was");
	put_lost_spans(v, in ? t.t1_d - t.base_d : t.t3_d, out ? t.t4_d + t.base_d : t.t2_d, note, n);
}

/* Takes the limbs that were lost off a member; true: some were. */
static bool cut_member(struct plan_view *v, const struct plan_item_view *item, const struct intervals *lost,
		       struct plan_member_view *m, char *note, size_t n)
{
	const struct limb_times t = limb_times(v, m);
	const bool has_in = !is(m, VARIANT_EGRESS), has_out = !is(m, VARIANT_INGRESS),
		   in = has_in && ingress_hit(&t, lost), out = has_out && egress_hit(&t, lost);
	if (!in && !out)
		return false;
	if (has_in == in && has_out == out) {
		m->worth = 0.0;
	} else {
		const enum variant left = in ? VARIANT_EGRESS : VARIANT_INGRESS;
		m->worth = worth_left(v, m, left);
		m->variant = variant_words[left];
	}
	say_lost(v, item, m, in, out, note, n);
	return true;
}

static bool own_members(struct plan_view *v, struct plan_item_view *item)
{
	struct plan_member_view *own = plan_alloc(v, item->n, sizeof *own);
	if (own && item->n > 0)
		memcpy(own, item->member, item->n * sizeof *own);
	item->member = own;
	return own != NULL;
}

static double members_worth(const struct plan_item_view *item)
{
	double worth = 0.0;
	for (size_t i = 0; i < item->n; i++)
		worth += item->member[i].worth;
	return worth;
}

bool cut_item(struct plan_view *v, struct plan_choices *c, struct plan_item_view *item, double now_d)
{
	const struct intervals lost = lost_time(v);
	char was[WAS_BYTES] = "", note[NOTE_BYTES] = "", number[NUMBER_TEXT_MAX];
	if (item_limbs(v, item, now_d).hit == 0 || c->n_cut == CHOICES_MAX)
		return true;
	if (!own_members(v, item))
		return false;
	for (size_t i = 0; i < item->n; i++) {
		struct plan_member_view *m = &item->member[i];
		const size_t used = strlen(was);
		number_text(m->worth, number);
		snprintf(was + used, sizeof was - used, "%s%s=%s", i ? "," : "", m->variant, number);
		if (cut_member(v, item, &lost, m, note, sizeof note) && !chances_now(v, m))
			return false;
	}
	item->worth = members_worth(item);
	item->has_latest = false; /* of what was planned nothing can be begun any more */
	c->cut[c->n_cut] = (struct plan_cut){item->key, plan_copy(v, was), plan_copy(v, note)};
	cut_note(v, &c->cut[c->n_cut++], item);
	return true;
}

/* --- and back --- */

const struct plan_cut *cut_of(const struct plan_cut cut[], size_t n, const char *key)
{
	for (size_t i = 0; i < n; i++)
		if (strcmp(cut[i].key, key) == 0)
			return &cut[i];
	return NULL;
}

void cut_note(struct plan_view *v, const struct plan_cut *cut, struct plan_item_view *item)
{
	if (!cut || strstr(item->note, cut->note))
		return;
	const size_t room = strlen(item->note) + strlen(cut->note) + 3;
	char *text = plan_alloc(v, room, 1);
	if (!text)
		return;
	snprintf(text, room, "%s%s%s", item->note, item->note[0] ? "; " : "", cut->note);
	item->note = text;
}

static void uncut_note(struct plan_view *v, const struct plan_cut *cut, struct plan_item_view *item)
{
	const char *at = strstr(item->note, cut->note);
	if (!at || at[strlen(cut->note)] != '\0')
		return;
	size_t n = (size_t)(at - item->note);
	if (n >= 2 && strncmp(at - 2, "; ", 2) == 0)
		n -= 2;
	item->note = plan_copy_n(v, item->note, n);
}

bool uncut_item(struct plan_view *v, const struct plan_cut *cut, struct plan_item_view *item)
{
	const char *at = cut->was;
	uncut_note(v, cut, item);
	if (!own_members(v, item))
		return false;
	for (size_t i = 0; i < item->n && *at; i++) {
		struct plan_member_view *m = &item->member[i];
		const size_t n = strcspn(at, ","), word = strcspn(at, "=");
		double worth;
		for (int k = 0; word < n && k < VARIANT_COUNT; k++)
			if (strlen(variant_words[k]) == word && strncmp(variant_words[k], at, word) == 0 &&
			    number_parse(at + word + 1, n - word - 1, &worth, NULL, NULL) == ST_OK) {
				m->variant = variant_words[k];
				m->worth = worth;
			}
		if (!chances_now(v, m))
			return false;
		at += n + (at[n] == ',');
	}
	item->worth = members_worth(item);
	return true;
}
