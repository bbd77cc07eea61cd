/* SPDX-License-Identifier: MIT
 * What comes next by the plan, counting down. */
#include "tui/pages/page_plan.h"

#include "ephem/units.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const char nothing_more[] = "nothing more is planned tonight";
/* Below this, seconds are told. */
#define SECONDS_BELOW_S 120.0

static void left_text(double left_s, char *out, size_t n)
{
	if (left_s < SECONDS_BELOW_S)
		snprintf(out, n, "%.0f s", floor(fmax(left_s, 0.0)));
	else
		span_text(left_s / DAY_S, out, n);
}

static void item_name(const struct plan_item_view *item, long member, char *out, size_t n)
{
	char name[NAME_BYTES_MAX];
	size_t used = 0;
	out[0] = '\0';
	for (size_t i = 0; i < item->n && used < n; i++) {
		if (member >= 0 && (size_t)member != i)
			continue;
		text_clean(item->member[i].target, name, sizeof name);
		used += (size_t)snprintf(out + used, n - used, "%s%s", used ? " with " : "", name);
	}
}

/* `slew to Tern 48 b`, `T1 of Tern 48 b`, `leave Tern 48 b`; brief: of one pointing only its first name. */
static void action_text(const struct plan_view *v, const struct plan_next *next, bool brief, char *out,
			size_t n)
{
	char name[2 * NAME_BYTES_MAX];
	const struct plan_item_view *item = &v->item[next->item];
	item_name(item, brief && next->member < 0 ? 0 : next->member, name, sizeof name);
	snprintf(out, n, "%s%s%s", plan_action_words[next->action],
		 next->action == PLAN_SLEW				    ? " to "
		 : next->action == PLAN_START || next->action == PLAN_LEAVE ? " "
									    : " of ",
		 name);
}

/* The move that follows what is being done; NULL none. */
static const struct plan_item_view *item_after(const struct plan_view *v, struct utc at)
{
	for (size_t i = 0; i < v->n_items; i++)
		if (v->item[i].state < PLAN_STARTED &&
		    utc_diff_s(&v->run->leap, at, v->item[i].slew_by) > 0.0)
			return &v->item[i];
	return NULL;
}

static void clock_of(const struct plan_view *v, struct utc t, char out[16])
{
	const struct night *night = &v->night->night;
	local_text(night, v->run->zone, night_of_utc(night, t), false, out, 16);
}

static void then_text(const struct plan_view *v, struct utc at, char *out, size_t n)
{
	const struct plan_item_view *after = item_after(v, at);
	char name[NAME_BYTES_MAX], when[16];
	out[0] = '\0';
	if (!after)
		return;
	item_name(after, after->n > 1 ? 0 : -1, name, sizeof name);
	clock_of(v, after->slew_by, when);
	snprintf(out, n, "; then slew to %s at %s", name, when);
}

void page_plan_tick(const struct page_plan *plan, struct night_head *h, const struct night_view *view,
		    struct utc now)
{
	const struct plan_view *v = plan->made ? &plan->made->view : NULL;
	char action[2 * NAME_BYTES_MAX + 16], left[32], when[16], then[NAME_BYTES_MAX + 48], dusk[48] = "",
											     upto[48];
	if (!v || !h->tonight || v->n_items == 0)
		return;
	const struct plan_next next = plan_next(v, now);
	const double now_d = night_of_utc(&view->night, now);
	if (next.item < 0) {
		snprintf(h->next, sizeof h->next, "%s", nothing_more);
		snprintf(h->next_less, sizeof h->next_less, "%s", nothing_more);
		snprintf(h->next_short, sizeof h->next_short, "%s", nothing_more);
		return;
	}
	if (isfinite(view->dark.dusk_d) && now_d < view->dark.dusk_d) {
		span_text(view->dark.dusk_d - now_d, upto, sizeof upto);
		snprintf(dusk, sizeof dusk, "dusk in %.20s; ", upto);
	}
	left_text(utc_diff_s(&v->run->leap, now, next.at), left, sizeof left);
	clock_of(v, next.at, when);
	then_text(v, next.at, then, sizeof then);
	action_text(v, &next, true, action, sizeof action);
	snprintf(h->next_short, sizeof h->next_short, "next: %s in %.30s", action, left);
	action_text(v, &next, false, action, sizeof action);
	snprintf(h->next_less, sizeof h->next_less, "next: %s in %.30s (%s %s)", action, left, when, h->zone);
	snprintf(h->next, sizeof h->next, "%s%.700s%.100s", dusk, h->next_less, then);
}
