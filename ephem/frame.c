/* SPDX-License-Identifier: MIT */
#include "ephem/frame.h"

#include "ephem/series_nova.h"
#include "ephem/units.h"

#include <math.h>

struct mat3 frame_true_of_date(double jd_tt, double *equation_of_equinoxes_rad)
{
	double t = (jd_tt - J2000_JD) / CENTURY_D;
	double zeta = (2.650545 + t * (2306.083227 + t * (0.2988499 + t * 0.01801828))) * ARCSEC_RAD;
	double z = (-2.650545 + t * (2306.077181 + t * (1.0927348 + t * 0.01826837))) * ARCSEC_RAD;
	double theta = t * (2004.191903 + t * (-0.4294934 + t * -0.04182264)) * ARCSEC_RAD;
	double eps = (84381.406 + t * (-46.836769 + t * (-0.0001831 + t * 0.00200340))) * ARCSEC_RAD;
	double dpsi, deps;
	nova_nutation_rad(jd_tt, &dpsi, &deps);
	if (equation_of_equinoxes_rad)
		*equation_of_equinoxes_rad = dpsi * cos(eps + deps);
	const struct mat3 turns[] = {mat3_rot_y(theta), mat3_rot_z(-z), mat3_rot_x(eps), mat3_rot_z(-dpsi),
				     mat3_rot_x(-(eps + deps))};
	struct mat3 m = mat3_rot_z(-zeta);
	for (int i = 0; i < 5; i++)
		m = mat3_mul(&turns[i], &m);
	return m;
}

double frame_gast_rad(const struct earth_clock *clock, struct utc t, double equation_of_equinoxes_rad)
{
	double mean = nova_gmst_rad(t.mjd + MJD_ZERO_JD, (t.sod_s + clock->ut1_utc_s) / DAY_S);
	double turns = (mean + equation_of_equinoxes_rad) / TWO_PI;
	double part = turns - floor(turns);
	return part < 1.0 ? part * TWO_PI : 0.0;
}

struct vec3 frame_site_itrs_m(double lat_deg, double lon_east_deg, double height_m)
{
	double lat = lat_deg * DEG_RAD, lon = lon_east_deg * DEG_RAD, s = sin(lat), c = cos(lat);
	double e2 = WGS84_F * (2.0 - WGS84_F);
	double n = WGS84_A_M / sqrt(1.0 - e2 * s * s);
	return (struct vec3){(n + height_m) * c * cos(lon), (n + height_m) * c * sin(lon),
			     (n * (1.0 - e2) + height_m) * s};
}

struct vec3 frame_aberrate(struct vec3 n, struct vec3 v_c)
{
	return vec3_unit(vec3_add(n, v_c));
}

static double or_zero(double x)
{
	return isfinite(x) ? x : 0.0;
}

struct vec3 frame_catalogue_direction(const struct target *t, double julian_year)
{
	double ra = t->ra_deg * DEG_RAD, dec = t->dec_deg * DEG_RAD;
	double years = julian_year - (isfinite(t->pos_epoch_yr) ? t->pos_epoch_yr : 2000.0);
	double per_year = 1e-3 * ARCSEC_RAD;
	struct vec3 n = vec3_from_angles(ra, dec);
	struct vec3 east = {-sin(ra), cos(ra), 0.0};
	struct vec3 north = {-sin(dec) * cos(ra), -sin(dec) * sin(ra), cos(dec)};
	struct vec3 shift = vec3_add(vec3_scale(east, or_zero(t->pm_ra_masyr) * per_year * years),
				     vec3_scale(north, or_zero(t->pm_dec_masyr) * per_year * years));
	return vec3_unit(vec3_add(n, shift));
}
