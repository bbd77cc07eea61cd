/* SPDX-License-Identifier: MIT
 * The error of a mid-time by a plain sum: the light curve from its definition, averaged over an exposure by looking at it often, derivatives as differences, a sample
 * every step, all parameters in one matrix that is inverted. Shares nothing with ephem/timing.c but the input. */
#ifndef WANE_TESTS_SUPPORT_TIMING_SUM_H
#define WANE_TESTS_SUPPORT_TIMING_SUM_H

#include "ephem/timing.h"

/* Light of the event at t_d, 1 outside, with its mid at mid_d and T14 longer by longer_d; averaged over the exposure. */
double timing_sum_light(const struct timing_event *e, double t_d, double mid_d, double longer_d);
/* Noise per minute at a moment; INFINITY: no data. */
double timing_sum_noise(const struct timing_input *in, double t_d);
/* As timing_mid_s. What nothing is known of beforehand is taken as known to 1e4 ppt, so that the matrix has an inverse. */
double timing_sum_s(const struct timing_input *in, double mid_d, double step_min);

#endif
