/* SPDX-License-Identifier: MIT
 * A night of windows made by hand, for tests of plans: a real night of the invented site Tern Hill, windows
 * filled in directly. */
#ifndef WANE_TESTS_SUPPORT_PLAN_SCENE_H
#define WANE_TESTS_SUPPORT_PLAN_SCENE_H

#include "ephem/night_plan.h"

enum { SCENE_MAX = 128 };
struct plan_scene {
	struct site site;
	struct earth_clock clock;
	struct sun_memo memo;
	struct night night;
	size_t n_planets, n;
	struct target target[SCENE_MAX];
	struct prepared prepared[SCENE_MAX];
	struct window window[SCENE_MAX];
	struct plan_offer offer[SCENE_MAX];
	size_t n_fixed;
	struct plan_fixed fixed[SCENE_MAX];
	struct free_time free;
	struct plan_rules rules;
	struct plan_input input; /* of the above; not_before_d: none */
};
struct plan_scene *scene_open(void);
void scene_close(struct plan_scene *s);
/* A planet of priority NAN and b_min 15 min. Names ending in a planet letter share a star: scene_link when
 * all are there. */
struct prepared *scene_planet(struct plan_scene *s, const char *name, double ra_deg, double dec_deg);
void scene_link(struct plan_scene *s);
/* A transit of half a length about mid, limbs of limb_d (0: grazing), reserve_d beyond either contact, all of
 * it usable, chances 0.9 0.95 0.95. Offers it. */
struct window *scene_window(struct plan_scene *s, const struct prepared *p, double mid_d, double half_d,
			    double limb_d, double reserve_d, double pad_d);
/* Takes a span out of one of the sets of s->free. */
void scene_take(struct intervals *set, double from_d, double to_d);
/* Cuts what is usable of the windows by s->free, and hands s->free to the plan. */
void scene_cut(struct plan_scene *s);
void scene_fix(struct plan_scene *s, double from_d, double to_d, const struct prepared *p);

#endif
