/* SPDX-License-Identifier: MIT
 * A target made ready for a run. */
#include "ephem/window.h"

#include "ephem/frame.h"
#include "ephem/units.h"

#include <math.h>

/* Below this the night would hold more events than are listed; no planet is known to orbit so fast. */
#define PERIOD_MIN_D (1.0 / EVENTS_PER_NIGHT_MAX)
#define AUTO_BASELINE_MIN_MIN 20.0
#define AUTO_BASELINE_MAX_MIN 60.0

static double or_zero(double x)
{
	return isnan(x) ? 0.0 : x;
}

/* Errors and covariance of the published numbers. */
static void prepare_errors(struct prepared *p, const struct target *t)
{
	struct ephemeris *e = &p->eph;
	const bool known = t->t0_err_d > 0.0 && t->period_err_d > 0.0;
	if (!known) {
		e->c00 = NAN;
		p->flags |= FLAG_BIT(FLAG_SIGMA_UNKNOWN);
		return;
	}
	e->c00 = t->t0_err_d * t->t0_err_d;
	e->c11 = t->period_err_d * t->period_err_d;
	e->c22 = t->dpde_err_d > 0.0 ? t->dpde_err_d * t->dpde_err_d : 0.0;
	if (fabs(t->t0_dpde_cov_d2) <= t->t0_err_d * t->dpde_err_d * (1.0 + 1e-9))
		e->c02 = t->t0_dpde_cov_d2;
	if (fabs(t->period_dpde_cov_d2) <= t->period_err_d * t->dpde_err_d * (1.0 + 1e-9))
		e->c12 = t->period_dpde_cov_d2;
	if (fabs(t->t0_period_cov_d2) <= t->t0_err_d * t->period_err_d * (1.0 + 1e-9))
		e->c01 = t->t0_period_cov_d2;
	else
		p->flags |= FLAG_BIT(FLAG_COVARIANCE_ASSUMED_0) |
			    (isnan(t->t0_period_cov_d2) ? 0 : FLAG_BIT(FLAG_DOUBTFUL_VALUES));
}

static void prepare_ephemeris(struct prepared *p, const struct target *t, const struct earth_clock *clock,
			      struct sun_memo *memo)
{
	struct ephemeris *e = &p->eph;
	*e = (struct ephemeris){.period_d = t->period_d,
				.dpde_d = or_zero(t->dpde_d),
				.ttv_min = fmax(or_zero(t->ttv_amp_min), 0.0)};
	p->has_ephemeris =
	    isfinite(t->t0.day) && t->period_d >= PERIOD_MIN_D && isfinite(t->ra_deg) && isfinite(t->dec_deg);
	if (!p->has_ephemeris)
		return;
	const double jd = jd2_value(t->t0) + t->standard.offset_d;
	const struct vec3 n = frame_catalogue_direction(t, 2000.0 + (jd - J2000_JD) / YEAR_D);
	if (standard_to_bjd_tdb(memo, clock, &t->standard, t->t0, n, &e->t0, NULL) != ST_OK) {
		p->has_ephemeris = false;
		return;
	}
	e->systematic_min = standard_systematic_s(&t->standard, t->ra_deg, t->dec_deg) / 60.0;
	if (t->standard.claim != SCALE_STATED)
		p->flags |= FLAG_BIT(FLAG_SCALE_ASSUMED);
	prepare_errors(p, t);
}

static double baseline_d(double wanted_min, double t14_d)
{
	if (wanted_min >= 0.0)
		return wanted_min * MIN_D;
	return fmin(fmax(0.5 * t14_d * DAY_MIN, AUTO_BASELINE_MIN_MIN), AUTO_BASELINE_MAX_MIN) * MIN_D;
}

struct prepared prepare_target(const struct target *t, const struct limits *run,
			       const struct earth_clock *clock, struct sun_memo *memo, bool doubtful_position,
			       bool doubtful_values)
{
	struct prepared p = {.target = t, .limits = limits_for_target(run, t)};
	prepare_ephemeris(&p, t, clock, memo);
	if (doubtful_position)
		p.flags |= FLAG_BIT(FLAG_DOUBTFUL_POSITION);
	if (doubtful_values)
		p.flags |= FLAG_BIT(FLAG_DOUBTFUL_VALUES);
	const double airmass = p.limits.value[LIM_AIRMASS];
	p.airmass_alt_deg = isfinite(airmass) ? airmass_altitude_deg(airmass) : 0.0;
	if (!p.has_ephemeris)
		return p;
	for (int kind = KIND_TRANSIT; kind <= KIND_OCCULTATION; kind++) {
		p.shape[kind] = shape_of(t, (enum event_kind)kind);
		p.baseline_before_d[kind] =
		    baseline_d(p.limits.value[LIM_BASELINE_BEFORE], p.shape[kind].t14_d);
		p.baseline_after_d[kind] =
		    baseline_d(p.limits.value[LIM_BASELINE_AFTER], p.shape[kind].t14_d);
	}
	if (p.shape[KIND_TRANSIT].contradictory)
		p.flags |= FLAG_BIT(FLAG_DOUBTFUL_VALUES);
	p.orbit_known = t->ecc >= 0.0 && t->ecc < 1.0 && (t->ecc == 0.0 || !isnan(t->omega_deg));
	p.occultation_d = p.orbit_known ? occultation_delay_d(t->period_d, t->ecc, or_zero(t->omega_deg))
					: 0.5 * t->period_d;
	return p;
}
