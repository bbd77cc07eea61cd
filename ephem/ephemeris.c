/* SPDX-License-Identifier: MIT */
#include "ephem/ephemeris.h"

#include "ephem/units.h"

#include <math.h>

#define EPOCH_MAX 1e9 /* beyond that no count means anything, and it still fits a long everywhere */

double ephemeris_published_d(const struct ephemeris *e, long epoch)
{
	const double x = (double)epoch;
	const double variance =
	    e->c00 + x * (2.0 * e->c01 + x * (e->c11 + e->c02 + x * (e->c12 + 0.25 * x * e->c22)));
	return sqrt(fmax(variance, 0.0)) + (isnan(variance) ? NAN : 0.0);
}

struct tdb ephemeris_mid(const struct ephemeris *e, long epoch)
{
	const double x = (double)epoch;
	return (struct tdb){.jd = jd2_add_d(e->t0.jd, x * (e->period_d + 0.5 * e->dpde_d * x))};
}

double ephemeris_mid_after_d(const struct ephemeris *e, long epoch, struct tdb from)
{
	const struct tdb mid = ephemeris_mid(e, epoch);
	return jd2_diff_d(mid.jd, from.jd);
}

/* Epoch as a real number; NAN when it can't be counted. */
static double epoch_at(const struct ephemeris *e, struct tdb t)
{
	if (!(e->period_d > 0.0))
		return NAN;
	const double dt = jd2_diff_d(t.jd, e->t0.jd);
	double x = dt / e->period_d;
	for (int pass = 0; pass < 30 && e->dpde_d != 0.0; pass++) {
		const double slope = e->period_d + e->dpde_d * x;
		if (!(slope > 0.0))
			return NAN;
		const double step = (x * (e->period_d + 0.5 * e->dpde_d * x) - dt) / slope;
		x -= step;
		if (fabs(step) < 1e-9)
			break;
	}
	return fabs(x) <= EPOCH_MAX ? x : NAN;
}

bool ephemeris_first_after(const struct ephemeris *e, struct tdb t, long *epoch)
{
	const double x = epoch_at(e, t);
	if (isnan(x))
		return false;
	long n = (long)ceil(x);
	/* the division may be off by an ulp at the edge */
	for (int pass = 0; pass < 2 && ephemeris_mid_after_d(e, n - 1, t) >= 0.0; pass++)
		n--;
	for (int pass = 0; pass < 2 && ephemeris_mid_after_d(e, n, t) < 0.0; pass++)
		n++;
	*epoch = n;
	return true;
}

bool ephemeris_nearest(const struct ephemeris *e, struct tdb t, long *epoch)
{
	if (!ephemeris_first_after(e, t, epoch))
		return false;
	if (-ephemeris_mid_after_d(e, *epoch - 1, t) < ephemeris_mid_after_d(e, *epoch, t))
		(*epoch)--;
	return true;
}

double ephemeris_phase(const struct ephemeris *e, struct tdb t)
{
	const double x = epoch_at(e, t);
	const double phase = x - floor(x);
	return phase < 1.0 ? phase : 0.0 + (isnan(x) ? NAN : 0.0);
}

double occultation_delay_d(double period_d, double ecc, double omega_deg)
{
	const double w = omega_deg * DEG_RAD;
	const double q = sqrt(1.0 - ecc * ecc);
	const double ec = ecc * cos(w), es = ecc * sin(w);
	return period_d / TWO_PI * (PI + 2.0 * (atan2(ec, q) + ec * q / (1.0 - es * es)));
}
