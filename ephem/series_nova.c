/* SPDX-License-Identifier: MIT */
#include "ephem/series_nova.h"

#include "ephem/units.h"

#include <libnova/libnova.h>
#include <math.h>
#include <stddef.h>

/* The library's own constants of its ecliptic of J2000, so that turning back and forth cancels. */
#define COS_OBLIQUITY_J2000 0.917482062
#define SIN_OBLIQUITY_J2000 0.397777156
/* Terms of the lunar series below this amplitude are left out: 0.02 arcsec, fifteen times faster than all of
 * them. */
#define MOON_CUT_OFF 1e-8

static struct vec3 vector_of(const struct ln_rect_posn *p)
{
	return (struct vec3){p->X, p->Y, p->Z};
}

struct vec3 nova_earth_helio_au(double jd_tt)
{
	struct ln_rect_posn p = {0.0, 0.0, 0.0};
	ln_get_earth_rect_helio(jd_tt, &p);
	return vector_of(&p);
}

struct vec3 nova_sun_bary_au(double jd_tt)
{
	/* Sun's mass over that of each planet with its moons: IAU 2009 system of astronomical constants
	 * (Luzum et al. 2011, Celest. Mech. Dyn. Astr. 110, 293), rounded */
	static const struct {
		void (*place)(double, struct ln_rect_posn *);
		double sun_over_planet;
	} planets[] = {
	    {ln_get_mercury_rect_helio, 6023600.0}, {ln_get_venus_rect_helio, 408523.71},
	    {ln_get_earth_rect_helio, 328900.5614}, {ln_get_mars_rect_helio, 3098708.0},
	    {ln_get_jupiter_rect_helio, 1047.3486}, {ln_get_saturn_rect_helio, 3497.898},
	    {ln_get_uranus_rect_helio, 22902.98},   {ln_get_neptune_rect_helio, 19412.24},
	    {ln_get_pluto_rect_helio, 1.352e8},
	};
	struct vec3 sum = {0.0, 0.0, 0.0};
	double mass = 1.0;
	for (size_t i = 0; i < sizeof planets / sizeof planets[0]; i++) {
		struct ln_rect_posn p = {0.0, 0.0, 0.0};
		planets[i].place(jd_tt, &p);
		sum = vec3_add(sum, vec3_scale(vector_of(&p), 1.0 / planets[i].sun_over_planet));
		mass += 1.0 / planets[i].sun_over_planet;
	}
	return vec3_scale(sum, -1.0 / mass);
}

struct vec3 nova_moon_geo_km(double jd_tt)
{
	struct ln_rect_posn p = {0.0, 0.0, 0.0};
	ln_get_lunar_geo_posn(jd_tt, &p, MOON_CUT_OFF);
	double years = (jd_tt - J2000_JD) / YEAR_D;
	struct mat3 trim = mat3_rot_z((0.12 + 0.0088 * years) * ARCSEC_RAD);
	struct vec3 m = mat3_apply(&trim, vector_of(&p));
	return (struct vec3){m.x, m.y * COS_OBLIQUITY_J2000 - m.z * SIN_OBLIQUITY_J2000,
			     m.y * SIN_OBLIQUITY_J2000 + m.z * COS_OBLIQUITY_J2000};
}

void nova_nutation_rad(double jd_tt, double *dpsi_rad, double *deps_rad)
{
	struct ln_nutation n;
	ln_get_nutation(jd_tt + 1000.0, &n); /* spoils the cache */
	ln_get_nutation(jd_tt, &n);
	*dpsi_rad = n.longitude * DEG_RAD;
	*deps_rad = n.obliquity * DEG_RAD;
}

double nova_gmst_rad(double jd_ut1_day, double jd_ut1_frac)
{
	/* the fraction is added by the rate, which keeps what one double would lose; over a day the quadratic
	 * term is 1e-9 arcsec */
	double turns = ln_get_mean_sidereal_time(jd_ut1_day) / 24.0 + 360.98564736629 / 360.0 * jd_ut1_frac;
	double part = turns - floor(turns);
	return part < 1.0 ? part * TWO_PI : 0.0;
}
