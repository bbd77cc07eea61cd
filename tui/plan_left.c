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

/* `Tern 3 b`, `Tern 3 b with Tern 3 c` */
static void item_name(const struct night_plan *p, size_t item, const struct plan_offer offer[],
		      const struct plan_standing *standing, const size_t fixed_item[], char *out, size_t n)
{
	const struct plan_item *it = &p->item[item];
	size_t used = 0;
	out[0] = '\0';
	if (it->fixed >= 0) {
		const struct plan_item_view *stands = standing->item[fixed_item[it->fixed]];
		for (size_t i = 0; i < stands->n && used < n; i++)
			used += (size_t)snprintf(out + used, n - used, "%s%s", i ? " with " : "",
						 stands->member[i].target);
		return;
	}
	for (int i = 0; i < it->n && used < n; i++)
		used += (size_t)snprintf(out + used, n - used, "%s%s", i ? " with " : "",
					 offer[it->member[i].offer].window->event.prepared->target->name);
}

static void clash(const struct night_plan *p, const struct plan_offer offer[], const struct plan_left *left,
		  const struct plan_standing *standing, const size_t fixed_item[], char *out, size_t n)
{
	char names[WORDS_BYTES / 2] = "", one[NAME_BYTES_MAX];
	size_t used = 0;
	const size_t shown = left->n_clash < LEFT_CLASHES_MAX ? left->n_clash : LEFT_CLASHES_MAX;
	for (size_t i = 0; i < shown && used < sizeof names; i++) {
		const char *link = i == 0 ? "" : i + 1 == left->n_clash ? " and " : ", ";
		item_name(p, left->clash[i], offer, standing, fixed_item, one, sizeof one);
		used += (size_t)snprintf(names + used, sizeof names - used, "%s%s", link, one);
	}
	if (left->reason == LEFT_PINS && shown > 0)
		snprintf(out, n, "pinned, but it clashes with %s", names);
	else if (left->reason == LEFT_PINS)
		snprintf(out, n, "pinned, but it clashes with other pins or with what has begun");
	else if (shown == 0)
		snprintf(out, n, "others are worth more together");
	else
		snprintf(out, n, "clashes with %s%s, which %s worth more", names,
			 left->n_clash > shown ? " and others" : "", left->n_clash == 1 ? "is" : "are");
}

const char *left_words(struct plan_view *v, const struct night_plan *p, const struct plan_offer offer[],
		       const struct plan_left *left, const struct plan_standing *standing,
		       const size_t fixed_item[])
{
	char text[WORDS_BYTES] = "", cost[NUMBER_TEXT_MAX];
	const struct window *w = offer[left->offer].window;
	switch (left->reason) {
	case LEFT_WORTHLESS:
		worthless(w, text, sizeof text);
		break;
	case LEFT_NO_TIME:
		snprintf(text, sizeof text, "%s", no_time(w, standing));
		break;
	case LEFT_CLASH:
	case LEFT_PINS:
		clash(p, offer, left, standing, fixed_item, text, sizeof text);
		break;
	case LEFT_DROPPED:
		snprintf(text, sizeof text, "dropped by you");
		break;
	case LEFT_REASON_COUNT:
		break;
	}
	number_text_fixed(left->cost, 2, cost);
	const size_t used = strlen(text);
	if (cost[0] && left->reason == LEFT_CLASH && used < sizeof text)
		snprintf(text + used, sizeof text - used, "; forcing it in costs %s", cost);
	return plan_copy(v, text);
}
