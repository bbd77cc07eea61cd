/* SPDX-License-Identifier: MIT */
#include "ephem/limb.h"

#include <math.h>
#include <stdbool.h>

/* Brightness at a distance from the middle of the disc, over that in the middle. */
static double brightness(double r, double u1, double u2)
{
	const double edge = 1.0 - sqrt(1.0 - r * r);
	return 1.0 - edge * (u1 + edge * u2);
}

static bool covered(double k, double b)
{
	return k > 0.0 && b >= 0.0 && b <= 1.0 - k;
}

double limb_depth(double k, double b, double u1, double u2)
{
	if (!covered(k, b))
		return NAN;
	return k * k * brightness(b, u1, u2) / (1.0 - u1 / 3.0 - u2 / 6.0);
}

double limb_roundness(double k, double b, double u1, double u2)
{
	if (!covered(k, b))
		return NAN;
	return 1.0 - brightness(1.0 - k, u1, u2) / brightness(b, u1, u2);
}
