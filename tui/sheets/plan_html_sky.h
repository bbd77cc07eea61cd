/* SPDX-License-Identifier: MIT
 * What the drawings of the night sheet need, worked out before anything is drawn: the span of time, rulers,
 * twilights, altitudes. */
#ifndef WANE_TUI_SHEETS_PLAN_HTML_SKY_H
#define WANE_TUI_SHEETS_PLAN_HTML_SKY_H

#include "tui/plan_view.h"

/* Depth of the Sun: set (centre below -50'), -6, -12, -18 deg. */
enum { SUN_SET, SUN_CIVIL, SUN_NAUTICAL, SUN_ASTRONOMICAL, SUN_LEVELS };
enum { SKY_TICKS_MAX = 64, SKY_STEP_MIN = 5 };
struct sky_tick {
	double t_d;
	int hour;
};
struct plan_sky {
	double from_d, to_d; /* drawn: sunset to sunrise with a margin, and whatever items and blocks need;
				within the night's fits */
	size_t n_local, n_utc;
	struct sky_tick local[SKY_TICKS_MAX], utc[SKY_TICKS_MAX]; /* whole hours */
	double change_d;		  /* the clocks change; NAN: not within the drawn span */
	struct intervals sun[SUN_LEVELS]; /* below each level */
	double alt_limit_deg;		  /* of the plan; NAN unknown */
	size_t samples; /* at from_d + i * step_d, the last at to_d; at most SKY_STEP_MIN apart */
	double step_d;
	double *moon_alt_deg; /* [samples] */
	size_t *track; /* [n_items]: which row of alt_deg is the item's star; SIZE_MAX: its position is not
			  known */
	size_t tracks;
	double *alt_deg;	  /* [tracks][samples] airless */
	size_t *first_member;	  /* [n_items]: where an item's members begin in usable */
	struct intervals *usable; /* the usable parts of each member's reserve */
};
/* False: no memory; *s is freed then. */
bool plan_sky_prepare(const struct plan_view *v, struct plan_sky *s);
void plan_sky_free(struct plan_sky *s);

#endif
