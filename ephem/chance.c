/* SPDX-License-Identifier: MIT */
#include "ephem/chance.h"

#include <math.h>

#define SQRT_2 1.41421356237309504880

double normal_between(double x, double y)
{
	/* always the difference of two small tails, never of two numbers near one */
	if (x > 0.0)
		return 0.5 * (erfc(x / SQRT_2) - erfc(y / SQRT_2));
	if (y < 0.0)
		return 0.5 * (erfc(-y / SQRT_2) - erfc(-x / SQRT_2));
	return 1.0 - 0.5 * erfc(y / SQRT_2) - 0.5 * erfc(-x / SQRT_2);
}

double chance_in(const struct intervals *set, double mean_d, double sigma_d)
{
	if (isnan(mean_d) || !(sigma_d >= 0.0))
		return NAN;
	if (!(sigma_d > 0.0))
		return intervals_contain(set, mean_d) ? 1.0 : 0.0;
	double sum = 0.0;
	for (int i = 0; i < set->n; i++)
		sum += normal_between((set->s[i].from_d - mean_d) / sigma_d,
				      (set->s[i].to_d - mean_d) / sigma_d);
	return fmin(sum, 1.0);
}
