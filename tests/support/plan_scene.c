/* SPDX-License-Identifier: MIT */
#include "tests/support/plan_scene.h"

#include "ephem/siblings.h"
#include "ephem/stars.h"
#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>
#include <stdlib.h>

enum { EVENING_MJD = 61152 /* 2026-04-22 */ };

struct plan_scene *scene_open(void)
{
	struct plan_scene *s = calloc(1, sizeof *s);
	struct err e;
	assert_non_null(s);
	s->clock = (struct earth_clock){.leap = &leap_builtin};
	s->site = (struct site){
	    .name = "Tern Hill", .lat_deg = 38.62, .lon_east_deg = -109.36, .height_m = 2100.0, .zone = ""};
	if (night_build(&s->night, &s->site, &s->clock, EVENING_MJD, &s->memo, &e) != ST_OK)
		check_fail("%s", e.text);
	s->free = free_time_whole();
	s->rules = plan_rules_built_in();
	s->rules.limb_share = 0.4; /* the scenes are worked out by hand with it */
	s->input = (struct plan_input){.night = &s->night,
				       .offer = s->offer,
				       .fixed = s->fixed,
				       .not_before_d = -INFINITY,
				       .rules = &s->rules};
	return s;
}

void scene_close(struct plan_scene *s)
{
	free(s);
}

struct prepared *scene_planet(struct plan_scene *s, const char *name, double ra_deg, double dec_deg)
{
	assert_true(s->n_planets < SCENE_MAX);
	struct target *t = &s->target[s->n_planets];
	struct prepared *p = &s->prepared[s->n_planets++];
	*t = target_empty();
	t->name = name;
	t->ra_deg = ra_deg;
	t->dec_deg = dec_deg;
	*p = (struct prepared){.target = t, .limits = limits_built_in()};
	p->limits.value[LIM_MIN_BASELINE] = 15.0;
	return p;
}

void scene_link(struct plan_scene *s)
{
	uint32_t star[SCENE_MAX];
	bool doubtful[SCENE_MAX];
	assert_int_equal(stars_group(s->target, s->n_planets, star, doubtful, NULL), ST_OK);
	assert_int_equal(siblings_link(s->prepared, star, s->n_planets, s->n_planets, NULL), ST_OK);
}

struct window *scene_window(struct plan_scene *s, const struct prepared *p, double mid_d, double half_d,
			    double limb_d, double reserve_d, double pad_d)
{
	assert_true(s->n < SCENE_MAX);
	struct window *w = &s->window[s->n];
	*w = (struct window){.chance = {.ingress = 0.95, .egress = 0.95, .mid = 0.97, .done = 0.9}};
	struct window_event *ev = &w->event;
	ev->prepared = p;
	ev->mid_d = mid_d;
	ev->t1_d = mid_d - half_d;
	ev->t4_d = mid_d + half_d;
	ev->t2_d = limb_d > 0.0 ? ev->t1_d + limb_d : NAN;
	ev->t3_d = limb_d > 0.0 ? ev->t4_d - limb_d : NAN;
	ev->before_d = ev->after_d = reserve_d;
	ev->pad_d = pad_d;
	ev->reserve_start_d = ev->t1_d - reserve_d;
	ev->reserve_end_d = ev->t4_d + reserve_d;
	ev->latest_start_d = ev->t1_d - p->limits.value[LIM_MIN_BASELINE] * MIN_D;
	w->cover.usable = intervals_one(ev->reserve_start_d, ev->reserve_end_d);
	w->cover.coverage = 1.0;
	w->cover.limb_usable = true;
	s->offer[s->n++] = (struct plan_offer){.window = w};
	s->input.n = s->n;
	return w;
}

void scene_take(struct intervals *set, double from_d, double to_d)
{
	const struct intervals taken = intervals_one(from_d, to_d),
			       left = intervals_outside(&taken, -1e3, 1e3);
	*set = intervals_and(set, &left);
}

void scene_cut(struct plan_scene *s)
{
	const struct intervals left = free_time_all(&s->free);
	for (size_t i = 0; i < s->n; i++)
		s->window[i].cover.usable = intervals_and(&s->window[i].cover.usable, &left);
	s->input.free = &s->free;
}

void scene_fix(struct plan_scene *s, double from_d, double to_d, const struct prepared *p)
{
	assert_true(s->n_fixed < SCENE_MAX);
	s->fixed[s->n_fixed++] = (struct plan_fixed){from_d, to_d, night_star(&s->night, p->target).icrs};
	s->input.n_fixed = s->n_fixed;
}
