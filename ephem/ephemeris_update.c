/* SPDX-License-Identifier: MIT
 * New times on top of a published ephemeris. */
#include "ephem/refit.h"

#include <math.h>

/* C after a measurement with H and gain K: (1 - K H) C (1 - K H)^T + K s^2 K^T, symmetric and positive
 * whatever the rounding. */
static void joseph(double c[3][3], const double h[3], const double gain[3], double var)
{
	double a[3][3], ac[3][3];
	for (int r = 0; r < 3; r++)
		for (int k = 0; k < 3; k++)
			a[r][k] = (r == k ? 1.0 : 0.0) - gain[r] * h[k];
	for (int r = 0; r < 3; r++)
		for (int k = 0; k < 3; k++)
			ac[r][k] = a[r][0] * c[0][k] + a[r][1] * c[1][k] + a[r][2] * c[2][k];
	for (int r = 0; r < 3; r++)
		for (int k = 0; k <= r; k++)
			c[r][k] = c[k][r] = ac[r][0] * a[k][0] + ac[r][1] * a[k][1] + ac[r][2] * a[k][2] +
					    gain[r] * var * gain[k];
}

enum status ephemeris_update(struct ephemeris *eph, const struct mid_time *t, struct update *out,
			     struct err *e)
{
	double c[3][3] = {
	    {eph->c00, eph->c01, eph->c02}, {eph->c01, eph->c11, eph->c12}, {eph->c02, eph->c12, eph->c22}};
	const double x = (double)t->epoch, h[3] = {1.0, x, 0.5 * x * x};
	double ch[3], gain[3], variance = t->err_d * t->err_d;
	if (!(t->err_d > 0.0) || !isfinite(t->err_d))
		return err_set(e, ST_RANGE, "the time of epoch %ld has an error of %g d; it must be above 0",
			       t->epoch, t->err_d);
	for (int r = 0; r < 3; r++) {
		ch[r] = c[r][0] * h[0] + c[r][1] * h[1] + c[r][2] * h[2];
		variance += h[r] * ch[r];
	}
	if (isnan(variance))
		return err_set(
		    e, ST_RANGE,
		    "the ephemeris has no errors of T0 and period; fit it anew from times instead");
	if (!isfinite(variance) || !(variance > 0.0))
		return err_set(e, ST_RANGE,
			       "the errors of the ephemeris contradict each other at epoch %ld; fit it anew "
			       "from times instead",
			       t->epoch);
	const double left = -ephemeris_mid_after_d(eph, t->epoch, t->mid) - t->delay_d;
	for (int r = 0; r < 3; r++)
		gain[r] = ch[r] / variance;
	const double period_d = eph->period_d + gain[1] * left;
	if (!isfinite(left) || !(period_d > 0.0))
		return err_set(e, ST_RANGE,
			       "the time of epoch %ld would make the period %g d; it must be above 0",
			       t->epoch, period_d);
	joseph(c, h, gain, t->err_d * t->err_d);
	eph->t0.jd = jd2_add_d(eph->t0.jd, gain[0] * left);
	eph->period_d = period_d;
	eph->dpde_d += gain[2] * left;
	eph->c00 = c[0][0], eph->c01 = c[0][1], eph->c02 = c[0][2];
	eph->c11 = c[1][1], eph->c12 = c[1][2], eph->c22 = c[2][2];
	*out = (struct update){.z = left / sqrt(variance)};
	return ST_OK;
}
