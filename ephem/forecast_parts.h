/* SPDX-License-Identifier: MIT
 * Between the files of the forecast. */
#ifndef WANE_EPHEM_FORECAST_PARTS_H
#define WANE_EPHEM_FORECAST_PARTS_H

#include "ephem/forecast.h"
#include "ephem/window_stages.h"

/* --- forecast_noise.c --- */
/* Magnitude, neighbours, exposure, nodes, noise of a minute, depth over noise. */
void forecast_make_noise(struct forecast_explain *x, const struct window *w, const struct target_night *tn);
/* Information of [from, to] in a set of usable time [min / ppt^2]. */
double forecast_information(const struct forecast_explain *x, const struct intervals *usable, double from_d, double to_d);

/* --- forecast_cases.c --- */
/* Timing as predicted, the cases, and the limbs alone. Needs noise and depth. tn: cut by the flip. */
void forecast_make_cases(struct forecast_explain *x, const struct window *w, const struct target_night *tn);

#endif
