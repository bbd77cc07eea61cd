/* SPDX-License-Identifier: MIT
 * Which part of a window can be used, what takes the rest, and the chance that a limb can be caught. */
#include "ephem/window_stages.h"

#include "ephem/chance.h"
#include "ephem/units.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#define COVER_WHOLE 0.995 /* a part with less than this has lost something */
/* a pause that flat part and baselines bear; a flip of 10 min must not miss it by rounding */
#define DONE_GAP_D (10.0 * MIN_D + 1e-9)
#define NEVER_LISTED 0.0005 /* chance below which nothing is hidden from the observer by not being listed */

static const struct intervals *sun_set(const struct night *n, double limit_deg, struct sun_sets *suns)
{
	for (int i = 0; i < suns->n; i++)
		if (suns->limit_deg[i] == limit_deg)
			return &suns->set[i];
	const int i = suns->n < SUN_SETS_MAX ? suns->n++ : SUN_SETS_MAX - 1;
	suns->limit_deg[i] = limit_deg;
	suns->set[i] = night_sun_below(n, limit_deg);
	return &suns->set[i];
}

struct free_time free_time_whole(void)
{
	const struct intervals all = intervals_one(-1e3, 1e3);
	return (struct free_time){all, all, all};
}

struct intervals free_time_all(const struct free_time *f)
{
	const struct intervals ours = intervals_and(&f->allotted, &f->clear);
	return intervals_and(&ours, &f->unblocked);
}

struct target_night target_on_night(const struct night *n, const struct prepared *p, const struct star *s,
				    struct sun_sets *suns, const struct free_time *free)
{
	const double *limit = p->limits.value;
	struct target_night tn; /* sets are large: none is cleared before it is filled */
	tn.night = n;
	tn.prepared = p;
	tn.star = *s;
	tn.free = free;
	tn.has_mount = n->telescope && mount_limits(n->telescope);
	tn.has_flip = false;
	tn.sun_limb = *sun_set(n, limit[LIM_SUN], suns);
	tn.sun_baseline =
	    *sun_set(n, isnan(limit[LIM_SUN_BASELINE]) ? limit[LIM_SUN] : limit[LIM_SUN_BASELINE], suns);
	tn.altitude = night_star_above(n, s, limit[LIM_ALT]);
	tn.mask = night_star_above_mask(n, s);
	tn.airmass = p->airmass_alt_deg > 0.0 ? night_star_above(n, s, p->airmass_alt_deg)
					      : intervals_one(0.0, n->length_d);
	tn.moon = night_moon_clear(n, s, limit[LIM_MOON]);
	struct intervals sky = intervals_and(&tn.altitude, &tn.airmass);
	sky = intervals_and(&sky, &tn.mask);
	sky = intervals_and(&sky, &tn.moon);
	if (tn.has_mount) {
		tn.mount = mount_allows(n, s, n->telescope);
		sky = intervals_and(&sky, &tn.mount);
	}
	if (free) {
		const struct intervals left = free_time_all(free);
		sky = intervals_and(&sky, &left);
	}
	tn.limb = intervals_and(&sky, &tn.sun_limb);
	tn.baseline = intervals_and(&sky, &tn.sun_baseline);
	/* mount and flip are looked at only where has_mount and has_flip say that they are there */
	/* cppcheck-suppress uninitvar */
	return tn;
}

/* From and to of each part; a part that does not exist has NAN ends. */
static void part_ends(const struct window_event *ev, struct span part[PART_COUNT])
{
	const bool flat = !isnan(ev->t2_d);
	part[PART_BEFORE] = (struct span){ev->t1_d - ev->before_d, ev->t1_d};
	part[PART_INGRESS] = (struct span){ev->t1_d, flat ? ev->t2_d : ev->mid_d};
	part[PART_FLAT] = (struct span){ev->t2_d, ev->t3_d};
	part[PART_EGRESS] = (struct span){flat ? ev->t3_d : ev->mid_d, ev->t4_d};
	part[PART_AFTER] = (struct span){ev->t4_d, ev->t4_d + ev->after_d};
}

/* The cause that takes most of a part; ties in the order of the causes. */
static enum cause worst_cause(const struct target_night *tn, struct span part, bool limb)
{
	const struct intervals *allowed[CAUSE_COUNT] = {
	    [CAUSE_SUN] = limb ? &tn->sun_limb : &tn->sun_baseline,
	    [CAUSE_ALTITUDE] = &tn->altitude,
	    [CAUSE_MASK] = &tn->mask,
	    [CAUSE_MOON] = &tn->moon,
	    [CAUSE_AIRMASS] = &tn->airmass,
	    [CAUSE_MOUNT] = tn->has_mount ? &tn->mount : NULL,
	    [CAUSE_FLIP] = tn->has_flip ? &tn->flip : NULL,
	    [CAUSE_ALLOTMENT] = tn->free ? &tn->free->allotted : NULL,
	    [CAUSE_CLOUD] = tn->free ? &tn->free->clear : NULL,
	    [CAUSE_BLOCK] = tn->free ? &tn->free->unblocked : NULL,
	};
	const double from_d = fmax(part.from_d, 0.0), to_d = fmin(part.to_d, tn->night->length_d);
	const double inside_d = fmax(to_d - from_d, 0.0);
	double taken_d[CAUSE_COUNT] = {0};
	for (int c = 0; c < CAUSE_COUNT; c++)
		if (allowed[c] && inside_d > 0.0)
			taken_d[c] = inside_d - intervals_overlap(allowed[c], from_d, to_d);
	taken_d[CAUSE_NOON] = part.to_d - part.from_d - inside_d;
	enum cause worst = CAUSE_SUN;
	for (int c = 0; c < CAUSE_COUNT; c++)
		if (taken_d[c] > taken_d[worst] + 1e-9) /* below a tenth of a millisecond is a tie */
			worst = (enum cause)c;
	return worst;
}

/* Best altitude within the usable part: at an end, or where the star culminates. */
static double least_airmass(const struct target_night *tn, const struct intervals *usable)
{
	const struct night *n = tn->night;
	double best = NAN;
	for (int i = 0; i < usable->n; i++) {
		const struct span u = usable->s[i];
		const double culmination_d = night_star_transit_d(n, &tn->star, u.from_d);
		const double at[3] = {u.from_d, u.to_d, culmination_d <= u.to_d ? culmination_d : u.to_d};
		for (int k = 0; k < 3; k++)
			best = fmin(best, airmass_young(night_star_altaz(n, &tn->star, at[k]).alt_deg));
	}
	return best;
}

static struct intervals usable_between(const struct target_night *tn, const struct window_event *ev,
				       double from_d, double to_d)
{
	struct intervals all = intervals_clip(&tn->baseline, from_d, ev->t1_d);
	const struct intervals limb = intervals_clip(&tn->limb, ev->t1_d, ev->t4_d);
	const struct intervals after = intervals_clip(&tn->baseline, ev->t4_d, to_d);
	for (int i = 0; i < limb.n; i++)
		intervals_append(&all, limb.s[i].from_d, limb.s[i].to_d);
	for (int i = 0; i < after.n; i++)
		intervals_append(&all, after.s[i].from_d, after.s[i].to_d);
	return all;
}

bool window_flip(const struct window_event *ev, const struct target_night *tn, struct flip *out)
{
	if (isnan(mount_flip_d(tn->night->telescope)))
		return false;
	const struct intervals usable = usable_between(tn, ev, ev->reserve_start_d, ev->reserve_end_d);
	const struct flip_event contacts = {.t1_d = ev->t1_d,
					    .t2_d = ev->t2_d,
					    .mid_d = ev->mid_d,
					    .t3_d = ev->t3_d,
					    .t4_d = ev->t4_d,
					    .b_min_d = tn->prepared->limits.value[LIM_MIN_BASELINE] * MIN_D,
					    .pad_d = ev->pad_d};
	return mount_flip(tn->night, &tn->star, tn->night->telescope, &usable, &contacts, out);
}

static void base_minutes(struct window_cover *c, const struct target_night *tn, const struct window_event *ev)
{
	const struct intervals before = intervals_clip(&tn->baseline, ev->reserve_start_d, ev->t1_d);
	const struct intervals after = intervals_clip(&tn->baseline, ev->t4_d, ev->reserve_end_d);
	c->base_before_min = c->base_after_min = 0.0;
	if (before.n > 0 && before.s[before.n - 1].to_d >= ev->t1_d)
		c->base_before_min = (ev->t1_d - before.s[before.n - 1].from_d) * DAY_MIN;
	if (after.n > 0 && after.s[0].from_d <= ev->t4_d)
		c->base_after_min = (after.s[0].to_d - ev->t4_d) * DAY_MIN;
}

void window_make_cover(struct window *w, const struct target_night *tn)
{
	const struct window_event *ev = &w->event;
	struct window_cover *c = &w->cover;
	struct span part[PART_COUNT];
	part_ends(ev, part);
	double usable_d = 0.0;
	for (int i = 0; i < PART_COUNT; i++) {
		const bool limb = i != PART_BEFORE && i != PART_AFTER;
		const double length_d = part[i].to_d - part[i].from_d;
		c->share[i] = NAN;
		c->lost_to[i] = CAUSE_NONE;
		if (!(length_d > 0.0))
			continue;
		const double overlap_d =
		    intervals_overlap(limb ? &tn->limb : &tn->baseline, part[i].from_d, part[i].to_d);
		usable_d += overlap_d;
		c->share[i] = fmin(overlap_d / length_d, 1.0);
		if (c->share[i] < COVER_WHOLE)
			c->lost_to[i] = worst_cause(tn, part[i], limb);
	}
	c->coverage = fmin(usable_d / (part[PART_AFTER].to_d - part[PART_BEFORE].from_d), 1.0);
	c->limb_usable = intervals_overlap(&tn->limb, ev->t1_d, ev->t4_d) > 0.0;
	c->usable = usable_between(tn, ev, ev->reserve_start_d, ev->reserve_end_d);
	c->usable_start_d = c->usable.n > 0 ? c->usable.s[0].from_d : NAN;
	c->usable_end_d = c->usable.n > 0 ? c->usable.s[c->usable.n - 1].to_d : NAN;
	base_minutes(c, tn, ev);
	w->sky.airmass_min = least_airmass(tn, &c->usable);
}

void window_catch_sets(const struct window_event *ev, const struct target_night *tn, struct catch_sets *out)
{
	const double b_d = tn->prepared->limits.value[LIM_MIN_BASELINE] * MIN_D;
	const bool flat = !isnan(ev->t2_d);
	/* offsets from the mid-time; the event moves rigidly */
	const double t1 = ev->t1_d - ev->mid_d, t4 = ev->t4_d - ev->mid_d;
	const double t2 = flat ? ev->t2_d - ev->mid_d : 0.0, t3 = flat ? ev->t3_d - ev->mid_d : 0.0;
	const struct intervals limb_in = intervals_fit(&tn->limb, t1, t2),
			       limb_out = intervals_fit(&tn->limb, t3, t4);
	const struct intervals base_in = intervals_fit(&tn->baseline, t1 - b_d, t1),
			       base_out = intervals_fit(&tn->baseline, t4, t4 + b_d);
	out->ingress = intervals_and(&limb_in, &base_in);
	out->egress = intervals_and(&limb_out, &base_out);
	/* both limbs; a short pause is borne everywhere but in them */
	const struct intervals limb_bridged = intervals_bridge(&tn->limb, DONE_GAP_D);
	const struct intervals base_bridged = intervals_bridge(&tn->baseline, DONE_GAP_D);
	const struct intervals part[3] = {
	    intervals_fit(&limb_bridged, t2, t3),
	    intervals_fit(&base_bridged, t1 - b_d, t1),
	    intervals_fit(&base_bridged, t4, t4 + b_d),
	};
	out->done = intervals_and(&limb_in, &limb_out);
	for (int i = 0; i < 3; i++)
		out->done = intervals_and(&out->done, &part[i]);
}

void window_make_chance(struct window *w, const struct target_night *tn)
{
	const struct window_event *ev = &w->event;
	struct window_chance *chance = &w->chance;
	struct catch_sets sets;
	if (isnan(ev->chance_sigma_d))
		return;
	window_catch_sets(ev, tn, &sets);
	chance->ingress = chance_in(&sets.ingress, ev->mid_d, ev->chance_contact_d);
	chance->egress = chance_in(&sets.egress, ev->mid_d, ev->chance_contact_d);
	chance->mid = chance_in(&tn->limb, ev->mid_d, ev->chance_sigma_d);
	chance->done = chance_in(&sets.done, ev->mid_d, ev->chance_contact_d);
}

bool window_listed(const struct window *w, double min_chance)
{
	if (isnan(w->chance.ingress))
		return w->cover.limb_usable;
	return w->chance.ingress >= min_chance || w->chance.egress >= min_chance;
}

bool window_long_shot(const struct window *w)
{
	return fmax(w->chance.ingress, w->chance.egress) < 0.5;
}

bool window_hidden(const struct window *w)
{
	return w->cover.limb_usable || w->chance.ingress >= NEVER_LISTED || w->chance.egress >= NEVER_LISTED;
}

void lost_by_text(const struct window_cover *c, char *out, size_t n)
{
	size_t used = 0;
	if (n > 0)
		out[0] = '\0';
	for (int i = 0; i < PART_COUNT; i++) {
		if (c->lost_to[i] == CAUSE_NONE)
			continue;
		const int wrote = snprintf(out + used, n - used, "%s%s:%s", used > 0 ? ";" : "",
					   part_words[i], cause_words[c->lost_to[i]]);
		if (wrote < 0 || (size_t)wrote >= n - used)
			return;
		used += (size_t)wrote;
	}
}
