/* SPDX-License-Identifier: MIT
 * Why a window was left out of a plan, in words. */
#include "ephem/number_text.h"
#include "tui/plan_parts.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum { WORDS_BYTES = 600 };

static const char *const takers[CAUSE_COUNT] = {
    [CAUSE_SUN] = "the Sun",
    [CAUSE_ALTITUDE] = "a low altitude",
    [CAUSE_MASK] = "the horizon",
    [CAUSE_MOON] = "the Moon",
    [CAUSE_AIRMASS] = "the airmass limit",
    [CAUSE_MOUNT] = "the mount",
    [CAUSE_FLIP] = "the meridian flip",
    [CAUSE_ALLOTMENT] = "time that is not ours",
    [CAUSE_CLOUD] = "lost time",
    [CAUSE_BLOCK] = "a block",
    [CAUSE_NOON] = "the end of the night",
};

/* What takes a limb, or else the baseline without which it can't be used. */
static enum cause limb_taker(const struct window_cover *c, enum part limb, enum part baseline, bool *itself)
{
	*itself = c->lost_to[limb] != CAUSE_NONE;
	return *itself ? c->lost_to[limb] : c->lost_to[baseline];
}

static void worthless(const struct window *w, char *out, size_t n)
{
	bool in_self, out_self;
	const enum cause in = limb_taker(&w->cover, PART_INGRESS, PART_BEFORE, &in_self),
			 eg = limb_taker(&w->cover, PART_EGRESS, PART_AFTER, &out_self);
	const char *in_part = in_self ? "the ingress" : "the baseline before it",
		   *out_part = out_self ? "the egress" : "the baseline after it";
	if (in == CAUSE_NONE && eg == CAUSE_NONE)
		snprintf(out, n, "neither limb is likely enough to be caught");
	else if (in == eg && in_self && out_self)
		snprintf(out, n, "neither limb can be caught: %s takes both", takers[in]);
	else if (in == CAUSE_NONE || eg == CAUSE_NONE)
		snprintf(out, n, "neither limb can be caught: %s takes %s",
			 takers[in == CAUSE_NONE ? eg : in], in == CAUSE_NONE ? out_part : in_part);
	else
		snprintf(out, n, "neither limb can be caught: %s takes %s, %s takes %s", takers[in], in_part,
			 takers[eg], out_part);
}

/* What of the cuts in the night takes something of the event. */
static bool takes(const struct window_cover *c, enum cause cause)
{
	for (int part = 0; part < PART_COUNT; part++)
		if (c->lost_to[part] == cause)
			return true;
	return false;
}

static const char *no_time(const struct window *w, const struct plan_standing *standing)
{
	if (takes(&w->cover, CAUSE_ALLOTMENT))
		return "no allotted time holds it";
	if (takes(&w->cover, CAUSE_CLOUD))
		return "lost time leaves no room for it";
	if (takes(&w->cover, CAUSE_BLOCK))
		return "a block leaves no room for it";
	if (isfinite(standing->not_before_d))
		return "what is left of the night holds neither limb of it";
	return "no free time of the night holds it";
}

/* The order that others clash with. */
struct order {
	const struct plan_view *v;
	const struct night_plan *p;
	const struct plan_offer *offer;
	const struct plan_standing *standing;
	const size_t *fixed_item;
};

static const struct plan_item_view *begun(const struct order *o, size_t item)
{
	const long fixed = o->p->item[item].fixed;
	return fixed >= 0 ? o->standing->item[o->fixed_item[fixed]] : NULL;
}

static size_t members(const struct order *o, size_t item)
{
	const struct plan_item_view *b = begun(o, item);
	return b ? b->n : (size_t)o->p->item[item].n;
}

/* *t1_d: days of the night. */
static const char *member_name(const struct order *o, size_t item, size_t k, double *t1_d)
{
	const struct plan_item_view *b = begun(o, item);
	if (b) {
		*t1_d = night_of_utc(&o->v->night->night, b->member[k].t1);
		return b->member[k].target;
	}
	const struct window_event *event = &o->offer[o->p->item[item].member[k].offer].window->event;
	*t1_d = event->t1_d;
	return event->prepared->target->name;
}

/* Whether the order holds more than one event of a target. */
static bool twice(const struct order *o, const char *name)
{
	size_t n = 0;
	double t1_d;
	for (size_t i = 0; i < o->p->n_items; i++)
		for (size_t k = 0; k < members(o, i); k++)
			n += strcmp(member_name(o, i, k, &t1_d), name) == 0;
	return n > 1;
}

/* `Tern 3 b`, `Tern 3 b + Tern 3 c`, `Tern 3 b (T1 22:40 MDT)` where there is another event of it. */
static void item_name(const struct order *o, size_t item, char *out, size_t n)
{
	const size_t count = members(o, item);
	char clock[PLAN_CLOCK_BYTES];
	double t1_d;
	out[0] = '\0';
	for (size_t i = 0; i < count; i++) {
		const char *name = member_name(o, item, i, &t1_d);
		size_t used = strlen(out);
		plan_put_words(out + used, n - used, "%s%s", i ? " + " : "", name);
		if (!twice(o, name))
			continue;
		plan_clock_words(o->v, night_utc(&o->v->night->night, t1_d), clock);
		used = strlen(out);
		plan_put_words(out + used, n - used, " (T1 %s)", clock);
	}
}

/* What an order that holds it would lose. A cost that prints as 0.00 is none. */
static void forced(const struct plan_left *left, const char *names, char *out, size_t n)
{
	const bool none = left->cost < 0.005;
	char cost[NUMBER_TEXT_MAX], loses[WORDS_BYTES / 2 + 40];
	number_text_fixed(left->cost, 2, cost);
	if (names[0])
		plan_put_words(loses, sizeof loses, "put out %s%s", names,
			       left->n_clash > LEFT_CLASHES_MAX ? " and others" : "");
	else
		plan_put_words(loses, sizeof loses, "cut others shorter");
	plan_put_words(out, n, "others are worth %s: forcing it in would %s and cost %s%s",
		       none ? "as much" : "more", loses, left->at_most && !none ? "at most " : "",
		       none ? "nothing" : cost);
}

/* Pins that found their place: which of them are in the way is not known one by one. */
static void other_pins(const struct order *o, char *out, size_t n)
{
	char names[WORDS_BYTES / 2] = "", one[PLAN_NAME_BYTES];
	for (size_t i = 0; i < o->p->n_items; i++) {
		const struct plan_item *item = &o->p->item[i];
		bool pinned = item->fixed >= 0;
		for (int k = 0; k < item->n; k++)
			pinned = pinned || o->offer[item->member[k].offer].pinned;
		if (!pinned)
			continue;
		const size_t used = strlen(names);
		item_name(o, i, one, sizeof one);
		plan_put_words(names + used, sizeof names - used, "%s%s", used ? ", " : "", one);
	}
	plan_put_words(out, n, "pinned, but it clashes with what is pinned too or has begun: %s", names);
}

static void clash(const struct order *o, const struct plan_left *left, bool costs, char *out, size_t n)
{
	char names[WORDS_BYTES / 2] = "", one[PLAN_NAME_BYTES];
	const size_t shown = left->n_clash < LEFT_CLASHES_MAX ? left->n_clash : LEFT_CLASHES_MAX;
	for (size_t i = 0; i < shown; i++) {
		const size_t used = strlen(names);
		const char *link = i == 0 ? "" : i + 1 == left->n_clash ? " and " : ", ";
		item_name(o, left->clash[i], one, sizeof one);
		plan_put_words(names + used, sizeof names - used, "%s%s", link, one);
	}
	const bool running = shown > 0 && o->p->item[left->clash[0]].fixed >= 0;
	if (running)
		plan_put_words(out, n, "%sclashes with %s%s, which %s begun",
			       left->reason == LEFT_PINS ? "pinned, but it " : "", names,
			       left->n_clash > shown ? " and others" : "",
			       left->n_clash == 1 ? "has" : "have");
	else if (left->reason == LEFT_PINS && shown > 0)
		plan_put_words(out, n,
			       "pinned, but it clashes with other pins or what has begun: as the only pin it "
			       "would put out %s%s",
			       names, left->n_clash > shown ? " and others" : "");
	else if (left->reason == LEFT_PINS)
		other_pins(o, out, n);
	else if (!isnan(left->cost))
		forced(left, names, out, n);
	else if (costs && left->at_most)
		plan_put_words(out, n, "no order was found that holds it beside what is pinned or has begun");
	else if (costs)
		plan_put_words(out, n, "what is pinned or has begun leaves no room for it");
	else
		plan_put_words(out, n, "others are worth more together");
}

const char *left_words(struct plan_view *v, const struct night_plan *p, const struct plan_offer offer[],
		       const struct plan_left *left, const struct plan_standing *standing,
		       const size_t fixed_item[], bool costs)
{
	char text[WORDS_BYTES] = "";
	const struct window *w = offer[left->offer].window;
	const struct order order = {
	    .v = v, .p = p, .offer = offer, .standing = standing, .fixed_item = fixed_item};
	if (left->reason != LEFT_DROPPED && (w->event.flags & FLAG_BIT(FLAG_GOAL_MET)))
		return plan_copy(v, "no goal is open for it: met, past or of another band");
	switch (left->reason) {
	case LEFT_WORTHLESS:
		worthless(w, text, sizeof text);
		break;
	case LEFT_NO_TIME:
		snprintf(text, sizeof text, "%s", no_time(w, standing));
		break;
	case LEFT_CLASH:
	case LEFT_PINS:
		clash(&order, left, costs, text, sizeof text);
		break;
	case LEFT_DROPPED:
		snprintf(text, sizeof text, "dropped by you");
		break;
	case LEFT_REASON_COUNT:
		break;
	}
	return plan_copy(v, text);
}
