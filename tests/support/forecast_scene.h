/* SPDX-License-Identifier: MIT
 * One target, one night and one telescope at the invented site, to forecast a window with. No store. */
#ifndef WANE_TESTS_SUPPORT_FORECAST_SCENE_H
#define WANE_TESTS_SUPPORT_FORECAST_SCENE_H

#include "ephem/forecast.h"

enum {
	FORECAST_DARK_MJD = 61146, /* 2026-04-16: new Moon on the 17th, 11:52 UTC */
	FORECAST_FULL_MJD = 61131, /* 2026-04-01: full Moon on the 2nd, 02:12 UTC */
};
struct forecast_scene {
	struct night night;
	struct telescope telescope;
	struct observing observing;
	struct observed observed;
	struct target target;
	struct limits limits;
	struct prepared prepared;
	struct target_night on;
	struct window window; /* STAGE_CHANCE after forecast_place, STAGE_FORECAST after forecast_at */
	struct forecast_explain x;
};
/* A star of 11 mag in R at the pole, altitude 38.62 deg all night, seen by a telescope of 0.5 m in R: T14 3 h with 3 min of error, k 0.1 and so b assumed 0.5, sigma 8 min, altitude limit 20, no Moon rule. The
 * numbers can be changed before the next call. Fails the test on any fault. */
void forecast_open(struct forecast_scene *s, int32_t mjd);
/* The window of epoch 0 with its mid seen at mid_d of the night. */
void forecast_place(struct forecast_scene *s, double mid_d);
void forecast_at(struct forecast_scene *s, double mid_d);

#endif
