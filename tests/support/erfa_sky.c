/* SPDX-License-Identifier: MIT */
#include "tests/support/erfa_sky.h"

#include "tests/support/check.h"

#include <erfa.h>
#include <erfam.h>
#include <math.h>

#define DEG (ERFA_DPI / 180.0)

void erfa_utc(struct utc t, double *utc1, double *utc2)
{
	int year, month, day;
	double part;
	if (eraJd2cal(2400000.5, t.mjd, &year, &month, &day, &part) != 0)
		check_fail("eraJd2cal");
	int hour = (int)(t.sod_s / 3600.0), minute = (int)((t.sod_s - hour * 3600.0) / 60.0);
	if (hour > 23) {
		hour = 23;
		minute = 59;
	}
	if (eraDtf2d("UTC", year, month, day, hour, minute, t.sod_s - hour * 3600.0 - minute * 60.0, utc1,
		     utc2) < 0)
		check_fail("eraDtf2d");
}

static void context(const struct site *site, double dut1_s, struct utc t, eraASTROM *astrom, double *tdb1,
		    double *tdb2)
{
	double utc1, utc2, eo, tai1, tai2, tt1, tt2;
	erfa_utc(t, &utc1, &utc2);
	if (eraApco13(utc1, utc2, dut1_s, site->lon_east_deg * DEG, site->lat_deg * DEG, site->height_m, 0.0,
		      0.0, 0.0, 0.0, 0.0, 0.55, astrom, &eo) < 0)
		check_fail("eraApco13");
	if (eraUtctai(utc1, utc2, &tai1, &tai2) < 0 || eraTaitt(tai1, tai2, &tt1, &tt2) != 0)
		check_fail("eraUtctai");
	*tdb1 = tt1;
	*tdb2 = tt2 + eraDtdb(tt1, tt2, 0.5, 0.0, 0.0, 0.0) / 86400.0;
}

/* From a geometric direction at the site to what is seen: aberration, precession-nutation, Earth rotation. */
static struct erfa_sky seen(eraASTROM *astrom, double direction[3])
{
	double aberrated[3], cirs[3], ri, di, az, zd, ha, dec, ra;
	eraAb(direction, astrom->v, astrom->em, astrom->bm1, aberrated);
	eraRxp(astrom->bpn, aberrated, cirs);
	eraC2s(cirs, &ri, &di);
	eraAtioq(eraAnp(ri), di, astrom, &az, &zd, &ha, &dec, &ra);
	return (struct erfa_sky){
	    .alt_deg = 90.0 - zd / DEG, .az_north_deg = az / DEG, .cirs = {cirs[0], cirs[1], cirs[2]}};
}

struct erfa_sky erfa_body(const struct jpl_405 *j, enum jpl_body body, const struct site *site, double dut1_s,
			  struct utc t)
{
	eraASTROM astrom;
	double tdb1, tdb2, helio[2][3], bary[2][3], to[3], distance = 0.0, geometric = 0.0;
	context(site, dut1_s, t, &astrom, &tdb1, &tdb2);
	if (eraEpv00(tdb1, tdb2, helio, bary) < 0)
		check_fail("eraEpv00");
	/* eb of the context is the Earth of eraEpv00 plus the site: the Earth is replaced by DE405's, 12 km
	 * away */
	struct vec3 site_au = {astrom.eb[0] - bary[0][0], astrom.eb[1] - bary[0][1],
			       astrom.eb[2] - bary[0][2]},
		    place;
	struct vec3 observer = vec3_add(site_au, j ? jpl_405_bary_au(j, JPL_EARTH, tdb1, tdb2, NULL)
						   : (struct vec3){bary[0][0], bary[0][1], bary[0][2]});
	for (int pass = 0; pass < 4; pass++) {
		double light_d = distance * ERFA_AULT / 86400.0;
		if (j) {
			place = jpl_405_bary_au(j, body, tdb1, tdb2 - light_d, NULL);
		} else { /* Sun = barycentric minus heliocentric Earth at the retarded time */
			if (eraEpv00(tdb1, tdb2 - light_d, helio, bary) < 0)
				check_fail("eraEpv00");
			place = (struct vec3){bary[0][0] - helio[0][0], bary[0][1] - helio[0][1],
					      bary[0][2] - helio[0][2]};
		}
		place = vec3_sub(place, observer);
		distance = vec3_norm(place);
		if (pass == 0) /* no light time taken off yet */
			geometric = distance;
	}
	to[0] = place.x / distance;
	to[1] = place.y / distance;
	to[2] = place.z / distance;
	struct erfa_sky s = seen(&astrom, to);
	s.distance_au = geometric;
	return s;
}

static double or_zero(double x)
{
	return isfinite(x) ? x : 0.0;
}

struct erfa_sky erfa_star(const struct target *target, const struct site *site, double dut1_s, struct utc t)
{
	eraASTROM astrom;
	double tdb1, tdb2, ri, di, cirs[3], az, zd, ha, dec, ra;
	context(site, dut1_s, t, &astrom, &tdb1, &tdb2);
	double mas_yr = 1e-3 / 3600.0 * DEG, cd = cos(target->dec_deg * DEG);
	eraAtciq(target->ra_deg * DEG, target->dec_deg * DEG, or_zero(target->pm_ra_masyr) * mas_yr / cd,
		 or_zero(target->pm_dec_masyr) * mas_yr, or_zero(target->plx_mas) * 1e-3, 0.0, &astrom, &ri,
		 &di);
	eraS2c(ri, di, cirs);
	eraAtioq(ri, di, &astrom, &az, &zd, &ha, &dec, &ra);
	return (struct erfa_sky){
	    .alt_deg = 90.0 - zd / DEG, .az_north_deg = az / DEG, .cirs = {cirs[0], cirs[1], cirs[2]}};
}
