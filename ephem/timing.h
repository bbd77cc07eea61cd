/* SPDX-License-Identifier: MIT
 * How well the mid-time of an event can be measured in a window: the Fisher information of its light curve.
 *
 * The light curve: a trapezoid between the contacts whose floor is rounded by limb darkening (a parabola), averaged over each exposure, on a baseline. Fitted are the mid-time,
 * the depth, the duration (both limbs move apart, their lengths stay), level and slope of the baseline, and a step of the level at a meridian flip. The error of the mid-time is
 * the length that its derivative has left when what the others can imitate is taken away: a parameter that data can't tell from the others costs nothing.
 *
 * Sources: Fisher information of white Gaussian noise (Cramer 1946, from memory) for this light curve: our own derivation, as is all that is said of partial cover. With everything
 * covered and a known baseline it is Carter, Yee, Eastman, Gaudi & Winn 2008, ApJ 689, 499: sigma = (sigma_1 / depth) sqrt(tau / 2); with exposures of length I Price & Rogers 2014,
 * ApJ 794, 92 (from memory): that over sqrt(1 - I / (3 tau)). One limb alone: hypot((sigma_1 / depth) sqrt(tau), sigma_T14 / 2).
 * Accuracy: integral within 1 % of a fine sum; against fits of simulated light curves within 5 %. White noise only: correlated noise makes real errors 1.5 to 2 times larger (from
 * memory). It holds where the error is small against the ingress. */
#ifndef WANE_EPHEM_TIMING_H
#define WANE_EPHEM_TIMING_H

#include "ephem/intervals.h"

struct timing_event {
	double t1_d, t2_d, t3_d, t4_d; /* contacts less the mid-time; t2, t3 NAN: grazing, a V without a floor */
	double depth_ppt;	       /* > 0 */
	double roundness;	       /* of the floor, 0..1 (limb.h); NAN: 0 */
	double exposure_s;	       /* of integration; 0 or NAN: none */
	/* what is known beforehand: 0 exactly, NAN as said */
	double duration_err_d;	/* of T14; NAN: TIMING_WIDE of T14 */
	double depth_err_ppt;	/* NAN: nothing */
	double slope_err_ppt_h; /* of the baseline; NAN: nothing */
};
#define TIMING_WIDE 0.25 /* as ESTIMATED_B_SHARE of geometry.h */

/* Noise per minute of the clock at a moment; between nodes it is linear, before the first and after the last one constant. Two nodes at one moment: a step. NAN or INFINITY: no data
 * from the node before to the node after. */
struct noise_node {
	double t_d, minute_ppt;
};
enum { TIMING_NODES_MAX = 48 };

struct timing_input {
	const struct timing_event *event;
	const struct intervals *usable; /* when there are data: clipped to the time that the telescope is there */
	const struct noise_node *node;	/* in order of time */
	int n;				/* 1..TIMING_NODES_MAX */
	double flip_d;			/* of a meridian flip; NAN none. Cut the time that it takes out of usable */
};

/* One standard deviation of the mid-time [s] with the event's mid at mid_d (any placement, not only the predicted one). INFINITY: the data don't fix it. NAN: no light curve (depth not
 * above 0, contacts out of order, no noise, errors below 0). About 1 us. */
double timing_mid_s(const struct timing_input *in, double mid_d);

/* The closed form for a known baseline and everything covered [s] (Price & Rogers 2014, both of its branches; exposure 0: Carter et al. 2008). Ingress and exposure in the same
 * light: tau_min > 0, exposure_s >= 0; uniform disc. */
double timing_whole_s(double depth_ppt, double minute_ppt, double tau_min, double exposure_s);

#endif
