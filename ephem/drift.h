/* SPDX-License-Identifier: MIT
 * How an ephemeris ages, and what a new observation would do for it.
 * Sources: propagation of errors Deeg 2015, A&A 578, A17; rank-one update of a covariance as in Kalman 1960; information of a Gaussian
 * measurement (Shannon 1948): log2(1 + V/s^2)/2. */
#ifndef WANE_EPHEM_DRIFT_H
#define WANE_EPHEM_DRIFT_H

#include "ephem/ephemeris.h"

#include <stdbool.h>

/* sigma of the mid-time [min] at an epoch: published errors, time standard, timing variations (bound / sqrt 2); NAN unknown. */
double drift_sigma_min(const struct ephemeris *e, long epoch);

/* The epochs between which sigma stays below a limit: closed form for a linear ephemeris (the two roots of s(E) = limit, evaluated without
 * cancellation), bisection for a quadratic one, whose sigma may dip twice: the later dip is told. */
struct drift_span {
	bool known;      /* sigma can be computed at all */
	bool never;      /* below the limit at every epoch (sigma_P 0) */
	bool always;     /* above it at every epoch */
	double from_epoch, to_epoch; /* real-valued; +-INFINITY where it never leaves; NAN when unknown or always above */
};
struct drift_span drift_below(const struct ephemeris *e, double limit_min);

/* Variance of the prediction at epoch F after one observation at epoch E with precision s: V(F,F) - V(F,E)^2/(V(E,E) + s^2).
 * Timing variations add to s^2 and, with the time standard, to what is left, as in ephemeris_update followed by drift_sigma_min. */
double refresh_sigma_min(const struct ephemeris *e, long observed_epoch, double precision_min, long at_epoch);
/* log2(1 + V(E,E)/s^2)/2 bits. */
double refresh_bits(const struct ephemeris *e, long observed_epoch, double precision_min);

/* Two ephemerides of one target laid against each other at the same instant near t: b less a, modulo the period of a, in minutes, with the error of the
 * difference (independent sources). */
struct drift_gap {
	double gap_min, error_min;
};
struct drift_gap drift_between(const struct ephemeris *a, const struct ephemeris *b, struct tdb t);

#endif
