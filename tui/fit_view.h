/* SPDX-License-Identifier: MIT
 * The fits to a target's stored mid-times, with everything that `wane refit` prints and the O-C view shows. */
#ifndef WANE_TUI_FIT_VIEW_H
#define WANE_TUI_FIT_VIEW_H

#include "db/midtimes.h"
#include "ephem/refit.h"
#include "tui/run.h"

enum { JITTER_FIT = -1 };
struct fit_choice {
	double jitter_s;  /* added to every error in quadrature; JITTER_FIT: estimated */
	int jitter_terms; /* of the model that it is estimated with: 2 or 3 */
	long ref_epoch;	  /* REF_EPOCH_BEST: the centre of the data */
	bool with_prior;
};
struct fit_view {
	struct midtime_list list; /* as stored */
	struct mid_time *time;	  /* [list.n], on BJD_TDB */
	double *z_robust;	  /* [list.n]; above OUTLIER_Z: to be looked at */
	long outliers, unstated;  /* used times that are outliers; that do not say their standard */
	struct fit linear, quadratic;
	size_t used;		  /* times that count */
	bool has_linear;	  /* false: too few times for a fit of their own; then only the prior stands */
	bool has_quadratic, prefers_quadratic, has_prior;
	struct ephemeris prior; /* the current ephemeris with the used times added, as if none were part of it */
	double prior_z_rms;	/* of the times as they came in */
	bool same_source;	/* the current ephemeris names the same source as some used time */
	bool double_counting;	/* that, or it is a refit of stored times: as a prior it would count them twice */
};
#define OUTLIER_Z 4.0 /* common practice, no source */

/* Replaces a view (start with a zeroed one) by the fits to the mid-times of the run's prepared target p. ST_RANGE: too few or unfit times
 * (with a prior that has errors one time is enough); *e says why. */
MUST_USE enum status fit_view_make(struct fit_view *v, struct run *r, const struct prepared *p, const struct fit_choice *choice,
				   struct err *e);
void fit_view_free(struct fit_view *v);
bool fit_is_outlier(const struct fit_view *v, size_t i);

/* Makes a fit (or the prior with the times added: fit NULL) the target's current ephemeris, inside a change set; errors are multiplied by `scale`. The
 * source becomes `refit of N mid-times`. *version: of the new one. */
MUST_USE enum status fit_adopt(struct run *r, const struct prepared *p, const struct fit_view *v, const struct fit *fit, double scale,
			       int *version, struct err *e);

#endif
