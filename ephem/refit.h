/* SPDX-License-Identifier: MIT
 * An ephemeris from mid-times: weighted least squares, linear or quadratic, centred on the data.
 * Sources: weighted least squares and covariance JCGM 100:2008 (H.3) and Press et al. 2007, Numerical Recipes 15.2-15.4; BIC Schwarz 1978, Ann. Stat. 6, 461;
 * update of a prior by new data (Kalman 1960, J. Basic Eng. 82, 35, in Joseph's form). */
#ifndef WANE_EPHEM_REFIT_H
#define WANE_EPHEM_REFIT_H

#include "ephem/ephemeris.h"
#include "ephem/geometry.h"

#include <stdbool.h>
#include <stddef.h>

/* One measured time, on BJD_TDB. An occultation carries the epoch of the transit before it; its time enters less `delay`. */
struct mid_time {
	long epoch;
	enum event_kind kind;
	struct tdb mid;
	double err_d;   /* > 0 */
	double delay_d; /* transit to occultation; 0 for a transit */
	bool used;
};

struct fit {
	int terms;        /* 2 linear, 3 quadratic */
	size_t n;         /* times used */
	int dof;          /* n - terms */
	long ref_epoch;   /* T0 is the mid-time of this epoch */
	struct tdb t0;
	double period_d, dpde_d; /* at ref_epoch */
	double cov[3][3]; /* formal, of (T0, P, dP/dE) [d^2] at ref_epoch */
	double chi2, bic;
	double jitter_d;  /* added to every error in quadrature */
};
/* ref_epoch_best: the centre of the data, where the covariance of T0 and P vanishes. */
#define REF_EPOCH_BEST (-2147483647L - 1)

/* ST_RANGE: fewer used times than terms, all of one epoch, an error not above 0, a period that is not above 0; the message says which. */
MUST_USE enum status refit(const struct mid_time t[], size_t n, int terms, long ref_epoch, double jitter_d, struct fit *out, struct err *e);
/* Jitter that makes sum[log(s^2 + j^2) + r^2/(s^2 + j^2)] least, for the linear or quadratic model [d]; 0 when the errors explain the scatter. */
MUST_USE enum status refit_jitter(const struct mid_time t[], size_t n, int terms, double *jitter_d, struct err *e);
/* Moves a fit to another reference epoch: no prediction changes. */
struct fit fit_moved(const struct fit *f, long ref_epoch);
/* max(1, sqrt(chi2/dof)): factor on the formal errors; 1 when dof < 1. */
double fit_scale_factor(const struct fit *f);
/* Quadratic is preferred when BIC falls by more than 10, |D| > 3 sigma (scaled), n >= 8, and dropping any one time keeps both. */
MUST_USE enum status refit_prefers_quadratic(const struct mid_time t[], size_t n, double jitter_d, bool *quadratic, struct err *e);
/* Observed less computed [d] and in units of its error. */
double fit_residual_d(const struct fit *f, const struct mid_time *t);
/* Robust z of each time: residuals from a Huber-weighted fit, scaled by 1.4826 MAD of them where that is larger than the errors say; n < 6: r/s. Flags
 * nothing by itself; |z| > 4 is an outlier to look at. Works from all times given, used or not. */
MUST_USE enum status refit_outliers(const struct mid_time t[], size_t n, int terms, double z[], struct err *e);
/* As an ephemeris (errors times `scale`), systematic and TTV terms 0. T0 at epoch 0. */
struct ephemeris fit_ephemeris(const struct fit *f, double scale);

/* --- counting epochs --- */
struct epoch_guess {
	long epoch;
	bool safe;              /* 3 sigma of the prediction and the time's error stay below half a period */
	double wrong_chance;    /* that the nearest count is wrong: erfc(P / (2 sqrt 2 s)) */
	double period_before_d, period_after_d; /* the period implied by epoch - 1 and epoch + 1 as the count, keeping T0; NAN for epoch 0 */
	double off_d;   /* the time less the mid-time of that epoch: near half a period it fits neither neighbour */
	double sigma_d; /* of off_d: prediction (drift_sigma_min) and the time's error */
};
/* delay_d: 0 for a transit. Sigma unknown: not safe, chance NAN. An ephemeris that can't be counted: epoch 0, not safe, all NAN. */
struct epoch_guess epoch_of(const struct ephemeris *eph, struct tdb mid, double err_d, double delay_d);

/* --- a published prior and new times --- */
struct update {
	double z; /* innovation in units of its own error; |z| > 3: look before accepting */
};
/* eph and its covariance are updated in place (quadratic too); order of times does not matter but for rounding. Whether the time is used is the caller's
 * affair, as is that it was not part of the prior. Numbers at epoch 0 keep fewer digits the farther the data are from it: a parabola from thousands of
 * orbits off is better fitted anew. ST_RANGE without a covariance, with one that can't be, for an error not above 0 or a period that would not be above 0:
 * eph stays as it was. */
MUST_USE enum status ephemeris_update(struct ephemeris *eph, const struct mid_time *t, struct update *out, struct err *e);

#endif
