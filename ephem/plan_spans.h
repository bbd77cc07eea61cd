/* SPDX-License-Identifier: MIT
 * Where in a night something new can be planned: the spans between blocks, time of others, lost time and what
 * has begun. Between the files of the plan (night_plan.h). */
#ifndef WANE_EPHEM_PLAN_SPANS_H
#define WANE_EPHEM_PLAN_SPANS_H

#include "ephem/night_plan.h"

/* A move from where nobody knows the telescope to be, with the settling [d]. */
double plan_first_move_d(const struct plan_rules *rules);
/* Free spans in [0, length] in which an item may lie. One that begins where the night, an allotment, a block
 * or not_before lets it begin does so after the first move; one that begins where clouds end does not, for
 * the move can be made under them. What has begun is not cut out. */
struct intervals plan_spans(const struct plan_input *in);
/* The same for one direction, what has begun cut out together with the moves from and to it. */
struct intervals plan_spans_at(const struct plan_input *in, struct vec3 direction);
/* Whether nobody knows at to_d where the telescope points, though it was known at from_d: something else had
 * it in between. */
bool plan_place_lost(const struct plan_input *in, double from_d, double to_d);

#endif
