/* SPDX-License-Identifier: MIT
 * Vectors fitted by Chebyshev polynomials, so that no series is called inside a loop. */
#ifndef WANE_EPHEM_CHEBYSHEV_H
#define WANE_EPHEM_CHEBYSHEV_H

#include "ephem/vec3.h"

enum { CHEB_TERMS_MAX = 16 };
struct cheb3 {
	int terms;           /* degree + 1, 1..CHEB_TERMS_MAX */
	double from, to;     /* argument range of the fit */
	double c[3][CHEB_TERMS_MAX];
};
/* The k-th of `terms` nodes (Chebyshev roots) in [from, to]. */
double cheb3_node(int terms, double from, double to, int k);
/* Fit through the values at those nodes. */
void cheb3_fit(struct cheb3 *f, int terms, double from, double to, const struct vec3 value[]);
struct vec3 cheb3_at(const struct cheb3 *f, double x);
/* Derivative by the argument. */
struct vec3 cheb3_rate(const struct cheb3 *f, double x);

#endif
