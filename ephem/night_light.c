/* SPDX-License-Identifier: MIT
 * Sun and Moon of a night as its sky sees them, tabulated once for all targets. */
#include "ephem/night.h"

#include "ephem/units.h"

#include <math.h>

/* Lit share (1 + cos i) / 2. */
static double phase_deg(double lit)
{
	return acos(fmin(fmax(2.0 * lit - 1.0, -1.0), 1.0)) / DEG_RAD;
}

static struct night_light light_of(const struct night *n, double t_d)
{
	return (struct night_light){.sun_alt_deg = night_sun_altaz(n, t_d).alt_deg,
				    .moon_alt_deg = night_moon_altaz(n, t_d).alt_deg,
				    .moon_phase_deg = phase_deg(night_moon_lit(n, t_d)),
				    .moon = vec3_unit(night_moon_topo_km(n, t_d))};
}

void night_light_fit(struct night *n)
{
	for (int i = 0; i < NIGHT_LIGHTS; i++)
		n->light[i] = light_of(n, n->length_d * i / (NIGHT_LIGHTS - 1));
}

static double between(double a, double b, double share)
{
	return a + (b - a) * share;
}

struct night_light night_light_at(const struct night *n, double t_d)
{
	const double x = t_d / n->length_d * (NIGHT_LIGHTS - 1);
	if (!(x >= 0.0 && x <= NIGHT_LIGHTS - 1))
		return light_of(n, t_d);
	const int i = x < NIGHT_LIGHTS - 2 ? (int)x : NIGHT_LIGHTS - 2;
	const struct night_light *a = &n->light[i], *b = a + 1;
	const double share = x - i;
	return (struct night_light){
	    .sun_alt_deg = between(a->sun_alt_deg, b->sun_alt_deg, share),
	    .moon_alt_deg = between(a->moon_alt_deg, b->moon_alt_deg, share),
	    .moon_phase_deg = between(a->moon_phase_deg, b->moon_phase_deg, share),
	    .moon = {between(a->moon.x, b->moon.x, share), between(a->moon.y, b->moon.y, share),
		     between(a->moon.z, b->moon.z, share)},
	};
}
