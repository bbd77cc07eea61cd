/* SPDX-License-Identifier: MIT */
#include "ephem/drift.h"

#include "ephem/units.h"

#include <math.h>

#define EPOCH_MAX 1e9 /* as far as an ephemeris counts */

/* What adds to the published error at every epoch [min^2]. */
static double fixed_min2(const struct ephemeris *e)
{
	return e->systematic_min * e->systematic_min + 0.5 * e->ttv_min * e->ttv_min;
}

/* Covariance of the predictions at two epochs [d^2]. */
static double shared_d2(const struct ephemeris *e, long at, long other)
{
	const double x = (double)at, y = (double)other, x2 = 0.5 * x * x, y2 = 0.5 * y * y;
	return e->c00 + e->c01 * (x + y) + e->c02 * (x2 + y2) + e->c11 * x * y + e->c12 * (x * y2 + y * x2) +
	       e->c22 * x2 * y2;
}

double drift_sigma_min(const struct ephemeris *e, long epoch)
{
	const double published_min = ephemeris_published_d(e, epoch) * DAY_MIN;
	return sqrt(published_min * published_min + fixed_min2(e));
}

/* --- where sigma stays below a limit --- */

/* Roots of s0^2 + 2 E c + E^2 sP^2 = limit^2; each where nothing cancels. */
static struct drift_span below_linear(const struct ephemeris *e, double limit_d2)
{
	struct drift_span span = {.known = true, .from_epoch = -INFINITY, .to_epoch = INFINITY};
	const double c = e->c01, excess = e->c00 - limit_d2, disc = c * c - e->c11 * excess;
	if (!(e->c11 > 0.0)) {
		span.never = excess < 0.0;
		span.always = !span.never;
	} else if (disc < 0.0) {
		span.always = true;
	} else {
		const double q = c < 0.0 ? -c + sqrt(disc) : -(c + sqrt(disc));
		const double a = q / e->c11, b = q < 0.0 || q > 0.0 ? excess / q : 0.0;
		span.from_epoch = fmin(a, b);
		span.to_epoch = fmax(a, b);
	}
	if (span.always)
		span.from_epoch = span.to_epoch = NAN;
	return span;
}

/* Polynomial of degree up to 4, lowest power first. */
struct quartic {
	double k[5];
};

static double value(const struct quartic *f, double x)
{
	return f->k[0] + x * (f->k[1] + x * (f->k[2] + x * (f->k[3] + x * f->k[4])));
}

static struct quartic slope(const struct quartic *f)
{
	return (struct quartic){{f->k[1], 2.0 * f->k[2], 3.0 * f->k[3], 4.0 * f->k[4], 0.0}};
}

/* Zero of f between two places where its sign differs. */
static double bisect(const struct quartic *f, double lo, double hi)
{
	const bool rising = value(f, lo) < 0.0;
	for (int pass = 0; pass < 200 && hi - lo > 1e-7; pass++) {
		const double mid = lo + 0.5 * (hi - lo);
		if (mid <= lo || mid >= hi)
			break;
		if ((value(f, mid) < 0.0) == rising)
			lo = mid;
		else
			hi = mid;
	}
	return lo + 0.5 * (hi - lo);
}

/* Zeros of f within +-EPOCH_MAX, in order: between its turning points, which are zeros of its slope. */
static int zeros(const struct quartic *f, int degree, double out[4])
{
	double turn[6] = {-EPOCH_MAX};
	int n = 0, turns = 1;
	if (degree > 1) {
		const struct quartic g = slope(f);
		turns += zeros(&g, degree - 1, turn + 1);
	}
	turn[turns++] = EPOCH_MAX;
	for (int i = 0; i + 1 < turns; i++)
		if ((value(f, turn[i]) < 0.0) != (value(f, turn[i + 1]) < 0.0) && n < 4)
			out[n++] = bisect(f, turn[i], turn[i + 1]);
	return n;
}

static struct drift_span below_quadratic(const struct ephemeris *e, double limit_d2)
{
	struct drift_span span = {.known = true, .from_epoch = -INFINITY, .to_epoch = INFINITY};
	const struct quartic over = {
	    {e->c00 - limit_d2, 2.0 * e->c01, e->c11 + e->c02, e->c12, 0.25 * e->c22}};
	double zero[4];
	int n = zeros(&over, 4, zero);
	if (n == 0) {
		span.never = value(&over, 0.0) < 0.0;
		span.always = !span.never;
		if (span.always)
			span.from_epoch = span.to_epoch = NAN;
		return span;
	}
	/* the last stretch below: it ends at the last zero where sigma rises, or not at all */
	if (value(&over, EPOCH_MAX) >= 0.0)
		span.to_epoch = zero[--n];
	if (n > 0)
		span.from_epoch = zero[n - 1];
	return span;
}

struct drift_span drift_below(const struct ephemeris *e, double limit_min)
{
	const double limit_d2 = (limit_min * limit_min - fixed_min2(e)) * (MIN_D * MIN_D);
	struct drift_span unknown = {.from_epoch = NAN, .to_epoch = NAN};
	if (isnan(limit_d2) || isnan(drift_sigma_min(e, 1)))
		return unknown;
	if (!(limit_min > 0.0) || !(limit_d2 > 0.0)) {
		unknown.known = unknown.always = true;
		return unknown;
	}
	const bool curved = e->c22 != 0.0 || e->c12 != 0.0 || e->c02 != 0.0;
	return curved ? below_quadratic(e, limit_d2) : below_linear(e, limit_d2);
}

/* --- what an observation would do --- */

double refresh_sigma_min(const struct ephemeris *e, long observed_epoch, double precision_min, long at_epoch)
{
	const double at = shared_d2(e, at_epoch, at_epoch), both = shared_d2(e, at_epoch, observed_epoch);
	const double seen = shared_d2(e, observed_epoch, observed_epoch) +
			    (precision_min * precision_min + 0.5 * e->ttv_min * e->ttv_min) * (MIN_D * MIN_D);
	const double gained = seen > 0.0 ? both * both / seen : 0.0 * seen;
	const double left_d2 = at - gained;
	return sqrt((left_d2 > 0.0 ? left_d2 : 0.0 * left_d2) * (DAY_MIN * DAY_MIN) + fixed_min2(e));
}

double refresh_bits(const struct ephemeris *e, long observed_epoch, double precision_min)
{
	const double noise_min2 = precision_min * precision_min + 0.5 * e->ttv_min * e->ttv_min;
	const double signal_min2 =
	    fmax(shared_d2(e, observed_epoch, observed_epoch), 0.0) * (DAY_MIN * DAY_MIN);
	const double known = shared_d2(e, observed_epoch, observed_epoch); /* NAN passes through */
	return 0.5 * log2(1.0 + signal_min2 / noise_min2) + 0.0 * known;
}

/* --- two ephemerides --- */

struct drift_gap drift_between(const struct ephemeris *a, const struct ephemeris *b, struct tdb t)
{
	struct drift_gap gap = {NAN, NAN};
	long at_a, at_b;
	if (!ephemeris_nearest(a, t, &at_a))
		return gap;
	const struct tdb mid = ephemeris_mid(a, at_a);
	if (!ephemeris_nearest(b, mid, &at_b))
		return gap;
	const double apart_d = ephemeris_mid_after_d(b, at_b, mid);
	const double period_d = a->period_d + a->dpde_d * (double)at_a;
	gap.gap_min = (apart_d - period_d * round(apart_d / period_d)) * DAY_MIN;
	gap.error_min = hypot(drift_sigma_min(a, at_a), drift_sigma_min(b, at_b));
	return gap;
}
