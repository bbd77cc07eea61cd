/* SPDX-License-Identifier: MIT
 * Probability that a normally distributed mid-time falls into a set of intervals; erfc forms, exact in both tails. */
#ifndef WANE_EPHEM_CHANCE_H
#define WANE_EPHEM_CHANCE_H

#include "ephem/intervals.h"

/* Phi(y) - Phi(x) of the standard normal, x <= y; relative error 1e-13 in the tails. */
double normal_between(double x, double y);
/* P(T in set), T ~ N(mean, sigma); sigma 0: 1 or 0; sigma NAN: NAN. */
double chance_in(const struct intervals *set, double mean_d, double sigma_d);

#endif
