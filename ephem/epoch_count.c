/* SPDX-License-Identifier: MIT
 * Which epoch a measured time belongs to, and whether that can be said. */
#include "ephem/refit.h"

#include "ephem/drift.h"
#include "ephem/units.h"

#include <math.h>

#define SAFE_SIGMA 3.0 /* common practice, no source: this many sigma must stay within half a period */

/* Period that puts the time on this epoch, T0 and the quadratic term as they are. */
static double implied_period_d(const struct ephemeris *eph, double after_t0_d, long epoch)
{
	const double x = (double)epoch;
	return epoch == 0 ? NAN : after_t0_d / x - 0.5 * eph->dpde_d * x;
}

struct epoch_guess epoch_of(const struct ephemeris *eph, struct tdb mid, double err_d, double delay_d)
{
	struct epoch_guess g = {.safe = false,
				.wrong_chance = NAN,
				.period_before_d = NAN,
				.period_after_d = NAN,
				.off_d = NAN,
				.sigma_d = NAN};
	const struct tdb transit = {jd2_add_d(mid.jd, -delay_d)};
	if (!ephemeris_nearest(eph, transit, &g.epoch))
		return g;
	const double period_d = eph->period_d + eph->dpde_d * (double)g.epoch;
	const double after_t0_d = jd2_diff_d(transit.jd, eph->t0.jd);
	g.off_d = -ephemeris_mid_after_d(eph, g.epoch, transit);
	g.sigma_d = hypot(drift_sigma_min(eph, g.epoch) * MIN_D, err_d);
	g.safe = SAFE_SIGMA * g.sigma_d < 0.5 * period_d;
	/* P(|normal| > P / 2 sigma) */
	g.wrong_chance = g.sigma_d > 0.0 ? erfc(period_d / (2.0 * sqrt(2.0) * g.sigma_d)) : 0.0 * g.sigma_d;
	g.period_before_d = implied_period_d(eph, after_t0_d, g.epoch - 1);
	g.period_after_d = implied_period_d(eph, after_t0_d, g.epoch + 1);
	return g;
}
