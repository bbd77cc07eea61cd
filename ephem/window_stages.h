/* SPDX-License-Identifier: MIT
 * The later stages of a window, for window.c only. */
#ifndef WANE_EPHEM_WINDOW_STAGES_H
#define WANE_EPHEM_WINDOW_STAGES_H

#include "ephem/mount.h"
#include "ephem/window.h"

/* Needs the event stage and a night with a telescope. False: it does not flip in this window. */
bool window_flip(const struct window_event *ev, const struct target_night *tn, struct flip *out);
/* Need the event stage; cover also fills sky.airmass_min. */
void window_make_cover(struct window *w, const struct target_night *tn);
void window_make_chance(struct window *w, const struct target_night *tn);

/* Mid-times at which a limb, or both, are caught. done bears short pauses in the baselines that the limbs' own sets don't. */
struct catch_sets {
	struct intervals ingress, egress, done;
};
void window_catch_sets(const struct window_event *ev, const struct target_night *tn, struct catch_sets *out);
/* tn as a window has it: without the time of its flip. False, *cut not filled: it does not flip. */
bool window_cut_by_flip(const struct window_event *ev, const struct target_night *tn, struct target_night *cut, double *flip_d);

#endif
