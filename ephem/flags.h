/* SPDX-License-Identifier: MIT
 * What is doubtful about a window, as plain words. */
#ifndef WANE_EPHEM_FLAGS_H
#define WANE_EPHEM_FLAGS_H

#include <stddef.h>
#include <stdint.h>

enum flag {
	FLAG_SIGMA_UNKNOWN,
	FLAG_SCALE_ASSUMED,
	FLAG_DURATION_ESTIMATED,
	FLAG_DURATION_ERROR_UNKNOWN,
	FLAG_INGRESS_ESTIMATED,
	FLAG_RADIUS_RATIO_ASSUMED,
	FLAG_COVARIANCE_ASSUMED_0,
	FLAG_CIRCULAR_ASSUMED,
	FLAG_PHASE_ERROR_UNKNOWN,
	FLAG_STALE,
	FLAG_PHASE_LOST,
	FLAG_DOUBTFUL_POSITION,
	FLAG_DOUBTFUL_VALUES,
	FLAG_GRAZING,
	FLAG_SIBLING_IN_WINDOW,
	FLAG_SIBLINGS_UNKNOWN,
	FLAG_CROSSES_NOON,
	FLAG_OTHER_NIGHT,
	FLAG_SUN_UP,
	FLAG_SUN_NEAR,
	/* of a forecast */
	FLAG_MAGNITUDE_UNKNOWN,
	FLAG_MAGNITUDE_ASSUMED,
	FLAG_DEPTH_UNKNOWN,
	FLAG_SATURATED,
	FLAG_EXPOSURE_LONG,
	FLAG_NEIGHBOUR_DILUTED,
	FLAG_SKY_ASSUMED,
	FLAG_OPTICS_ASSUMED,
	FLAG_GOAL_MET,
	FLAG_COUNT
};
struct flag_rule {
	const char *word;     /* in flags columns */
	const char *sentence; /* what it means for the observer */
};
extern const struct flag_rule flag_rules[FLAG_COUNT];
#define FLAG_BIT(flag) ((uint32_t)1 << (flag))
/* `;`-joined words of the set bits, "" for none. */
void flags_text(uint32_t bits, char *out, size_t n);

#endif
