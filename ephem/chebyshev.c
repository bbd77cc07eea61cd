/* SPDX-License-Identifier: MIT */
#include "ephem/chebyshev.h"

#include "ephem/units.h"

#include <math.h>

double cheb3_node(int terms, double from, double to, int k)
{
	return 0.5 * (from + to) + 0.5 * (to - from) * cos(PI * (k + 0.5) / terms);
}

void cheb3_fit(struct cheb3 *f, int terms, double from, double to, const struct vec3 value[])
{
	*f = (struct cheb3){.terms = terms, .from = from, .to = to};
	for (int j = 0; j < terms; j++) {
		struct vec3 sum = {0.0, 0.0, 0.0};
		for (int k = 0; k < terms; k++)
			sum = vec3_add(sum, vec3_scale(value[k], cos(PI * j * (k + 0.5) / terms)));
		/* the constant term is stored halved, so that evaluation needs no special case */
		sum = vec3_scale(sum, (j == 0 ? 1.0 : 2.0) / terms);
		f->c[0][j] = sum.x;
		f->c[1][j] = sum.y;
		f->c[2][j] = sum.z;
	}
}

static double clenshaw(const double *c, int terms, double u)
{
	double b1 = 0.0, b2 = 0.0;
	for (int j = terms - 1; j > 0; j--) {
		double b0 = c[j] + 2.0 * u * b1 - b2;
		b2 = b1;
		b1 = b0;
	}
	return c[0] + u * b1 - b2;
}

struct vec3 cheb3_at(const struct cheb3 *f, double x)
{
	double u = (2.0 * x - f->from - f->to) / (f->to - f->from);
	return (struct vec3){clenshaw(f->c[0], f->terms, u), clenshaw(f->c[1], f->terms, u),
			     clenshaw(f->c[2], f->terms, u)};
}

/* Sum of j c_j U_{j-1}(u), the derivative by u; U obeys the same recurrence as T, from U_0 = 1, U_1 = 2u. */
static double clenshaw_rate(const double *c, int terms, double u)
{
	double b1 = 0.0, b2 = 0.0;
	for (int j = terms - 1; j > 0; j--) {
		double b0 = j * c[j] + 2.0 * u * b1 - b2;
		b2 = b1;
		b1 = b0;
	}
	return b1;
}

struct vec3 cheb3_rate(const struct cheb3 *f, double x)
{
	double scale = 2.0 / (f->to - f->from), u = scale * (x - 0.5 * (f->from + f->to));
	return (struct vec3){scale * clenshaw_rate(f->c[0], f->terms, u),
			     scale * clenshaw_rate(f->c[1], f->terms, u),
			     scale * clenshaw_rate(f->c[2], f->terms, u)};
}
