/* SPDX-License-Identifier: MIT */
#include "ephem/sky.h"

#include "ephem/units.h"

#include <math.h>

struct horizon_frame horizon_at(double lat_rad, double local_sidereal_rad)
{
	double cl = cos(lat_rad), sl = sin(lat_rad), ct = cos(local_sidereal_rad),
	       st = sin(local_sidereal_rad);
	return (struct horizon_frame){
	    .east = {-st, ct, 0.0},
	    .north = {-sl * ct, -sl * st, cl},
	    .up = {cl * ct, cl * st, sl},
	};
}

struct altaz horizon_altaz(const struct horizon_frame *h, struct vec3 direction)
{
	double e = vec3_dot(h->east, direction), n = vec3_dot(h->north, direction),
	       u = vec3_dot(h->up, direction);
	double az = atan2(e, n) / DEG_RAD;
	if (az < 0.0)
		az += 360.0;
	if (az >= 360.0)
		az = 0.0;
	return (struct altaz){.alt_deg = atan2(u, sqrt(e * e + n * n)) / DEG_RAD, .az_north_deg = az};
}

double parallactic_deg(double lat_rad, double ha_rad, double dec_rad)
{
	double cl = cos(lat_rad), sl = sin(lat_rad), cd = cos(dec_rad), sd = sin(dec_rad);
	return atan2(cl * sin(ha_rad), sl * cd - cl * sd * cos(ha_rad)) / DEG_RAD;
}

double refraction_deg(double true_alt_deg, double pressure_hpa, double temperature_c)
{
	double h = fmax(true_alt_deg, -1.0); /* the formula turns over lower down */
	if (isnan(true_alt_deg))
		return true_alt_deg;
	double arcmin = 1.02 / tan((h + 10.3 / (h + 5.11)) * DEG_RAD);
	if (arcmin < 0.0) /* at the zenith the fitted formula ends at -0.002 */
		arcmin = 0.0;
	return arcmin / 60.0 * (pressure_hpa / 1010.0) * (283.0 / (273.0 + temperature_c));
}

double pressure_hpa(double height_m)
{
	return 1013.25 * pow(1.0 - 2.25577e-5 * height_m, 5.25588);
}

static double young(double alt_deg)
{
	double u = sin(alt_deg * DEG_RAD);
	double above = (1.002432 * u + 0.148386) * u + 0.0096467;
	double below = ((u + 0.149864) * u + 0.0102963) * u + 0.000303978;
	return above / below;
}

double airmass_young(double alt_deg)
{
	return alt_deg >= 0.0 ? young(alt_deg) : (double)NAN;
}

double airmass_altitude_deg(double x)
{
	double low = 0.0, high = 90.0;
	if (isnan(x))
		return x;
	if (x >= young(low))
		return low;
	if (x <= young(high))
		return high;
	while (high - low > 1e-10) {
		double middle = 0.5 * (low + high);
		if (young(middle) > x)
			low = middle;
		else
			high = middle;
	}
	return 0.5 * (low + high);
}
