/* SPDX-License-Identifier: MIT
 * Time that is allotted, laid over a night. */
#include "tui/run_parts.h"

#include "tui/diagnose.h"

#include <stdio.h>
#include <string.h>

struct plan_clock run_plan_clock(const struct run *r, const struct night *n)
{
	return (struct plan_clock){.night = n,
				   .zone = r->zone,
				   .leap = &r->leap,
				   .sun_limit_deg = r->limits.value[LIM_SUN],
				   .half = r->half};
}

/* Of a telescope that is not the run's it says nothing. */
static bool concerns(const struct run *r, const struct allotment *a, const struct site *site)
{
	const bool own = r->has_telescope && r->telescope.site_id == site->id;
	return a->site_id == site->id &&
	       (a->telescope_id == 0 || (own && a->telescope_id == r->telescope.id));
}

/* Another site of a season has its own clocks and halves. *opened: the zone to close, or NULL. */
static struct plan_clock clock_of(const struct run *r, const struct night *n, struct zone **opened)
{
	const struct site *site = n->site;
	struct plan_clock c = run_plan_clock(r, n);
	struct err e;
	*opened = NULL;
	if (site->id == r->site.id)
		return c;
	run_half_rule(r, site->id, &c.half);
	c.zone = NULL;
	if (site->zone[0] && zone_open(r->env->zoneinfo_dir, site->zone, opened, &e) == ST_OK)
		c.zone = *opened;
	return c;
}

static void note_fault(struct night_view *v, const struct allotment *a, const struct err *why)
{
	if (v->allotment_fault[0])
		return;
	snprintf(v->allotment_fault, sizeof v->allotment_fault, "%lld allots nothing: %.350s",
		 (long long)a->id, why->text);
}

void run_cut_by_allotments(const struct run *r, struct night_view *v)
{
	const struct site *site = v->night.site;
	struct intervals allotted = intervals_none();
	struct zone *opened = NULL;
	struct plan_clock clock = {0};
	bool others = false;
	v->allotments = 0;
	v->allotted_elsewhere = false;
	v->allotment_fault[0] = '\0';
	if (r->options->no_allotments || site->id == 0)
		return;
	for (size_t i = 0; i < r->allotments.n; i++) {
		const struct allotment *a = &r->allotments.allotment[i];
		double from_d, to_d;
		struct err why;
		if (!concerns(r, a, site))
			continue;
		others = true;
		if (v->night.mjd < a->first_mjd || v->night.mjd > a->last_mjd)
			continue;
		if (v->allotments++ == 0)
			clock = clock_of(r, &v->night, &opened);
		if (plan_span(&clock, a->span, &from_d, &to_d, &why) != ST_OK) {
			note_fault(v, a, &why);
			continue;
		}
		struct intervals one = intervals_one(from_d, to_d);
		allotted = intervals_or(&allotted, &one);
	}
	zone_close(opened);
	v->allotted_elsewhere = others && v->allotments == 0;
	if (v->allotments == 0)
		return;
	v->free.allotted = allotted;
	v->cut = true;
}

void run_night_notes(const struct night_view *v)
{
	if (v->allotment_fault[0])
		diagnose("allotment", "%s", v->allotment_fault);
	if (v->allotted_elsewhere)
		diagnose("allotment", "no time is allotted on this night");
}
