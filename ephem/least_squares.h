/* SPDX-License-Identifier: MIT
 * Weighted least squares of a line or parabola, and the frame in which mid-times are fitted: both axes centred, epochs scaled to [-1, 1], times as what
 * they leave against a reference line, so that 1e-9 d survive. Shared by the parts of refit.h.
 * Source: normal equations and covariance Press et al. 2007, Numerical Recipes 15.4; scaling to a unit diagonal before Cholesky's method and one step of
 * iterative refinement Golub & Van Loan 2013, Matrix Computations 3.5, 4.2. */
#ifndef WANE_EPHEM_LEAST_SQUARES_H
#define WANE_EPHEM_LEAST_SQUARES_H

#include "ephem/refit.h"

enum { LS_TERMS_MAX = 3 };

struct ls_point {
	double u;   /* epoch from the centre, in half spans: -1..1 */
	double y_d; /* time less the reference line [d] */
	double var_d2;
	double w; /* weight of the moment */
};
struct ls_fit {
	double a[LS_TERMS_MAX];                 /* of the basis 1, u, u^2/2 [d] */
	double cov[LS_TERMS_MAX][LS_TERMS_MAX]; /* inverse of the normal matrix */
};
/* terms 2 or 3; unused terms of *out are 0. Points of weight 0 count for nothing. False when the points do not fix so many terms. */
bool ls_solve(const struct ls_point p[], size_t n, int terms, struct ls_fit *out);
/* Observed less computed [d]. */
double ls_residual_d(const struct ls_fit *f, const struct ls_point *p);

struct ls_frame {
	long centre;     /* epoch of u = 0: weighted mean of the epochs, rounded */
	struct tdb ref;  /* the reference line at the centre ... */
	double period_d; /* ... and its slope */
	double half;     /* epochs from the centre to u = 1 */
};
struct ls_points {
	struct ls_frame frame;
	size_t n;
	struct ls_point *p; /* weights 1 / (err^2 + jitter^2) */
	long *epoch;
};
/* The used times (every_one: all) in their frame. Released with ls_points_free, also after a failure.
 * ST_RANGE as refit says, ST_MEMORY. */
MUST_USE enum status ls_points_of(const struct mid_time t[], size_t n, bool every_one, int terms, double jitter_d,
				  struct ls_points *out, struct err *e);
void ls_points_free(struct ls_points *s);
/* A solution as a fit at the frame's centre; chi2 from the points' weights. */
struct fit ls_as_fit(const struct ls_points *s, const struct ls_fit *f, int terms, double jitter_d);

#endif
