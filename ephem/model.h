/* SPDX-License-Identifier: MIT
 * Plain data that the store fills and the engine reads. A missing number is NAN, a missing text is "". Text pointers are borrowed:
 * they live as long as the list that they came with. */
#ifndef WANE_EPHEM_MODEL_H
#define WANE_EPHEM_MODEL_H

#include "ephem/standard.h"
#include "ephem/timescale.h"

#include <stdint.h>

struct target {
	int64_t id, ephemeris_id; /* keys in the store; 0 when not stored */
	const char *name;         /* UTF-8, 1..80 characters, printable */
	double ra_deg, dec_deg;   /* ICRS at pos_epoch_yr */
	double pm_ra_masyr;       /* mu_alpha* = mu_alpha cos(dec) */
	double pm_dec_masyr;
	double plx_mas;
	double pos_epoch_yr; /* Julian year of the position; NAN: 2000.0 */

	const char *time_scale; /* as given; parsed into standard */
	struct standard standard;
	struct jd2 t0;            /* as given, offset NOT added: t0 + standard.offset_d is the Julian date; day NAN: no ephemeris */
	double t0_err_d;          /* NAN or 0: unknown */
	double period_d, period_err_d;
	double t0_period_cov_d2;  /* NAN: not published, taken as 0 and flagged */
	double dpde_d, dpde_err_d; /* change of period per epoch [d]; NAN: linear */
	double ttv_amp_min;       /* bound of transit-timing variations */

	double duration_h, duration_err_h; /* T1 to T4 */
	double depth_ppt;
	double k;    /* planet radius over stellar radius */
	double a_rs; /* semi-major axis over stellar radius */
	double inc_deg, ecc, omega_deg; /* omega: argument of periastron of the STAR's orbit */
	double mag;
	const char *band; /* band of mag */
	double teff_k, rstar_rsun, mstar_msun;
	const char *source, *tags, *note;
	double priority; /* NAN: 1 */
	/* a target's own limits; NAN: the run's */
	double sun_limit_deg, sun_limit_baseline_deg, alt_limit_deg, airmass_limit, moon_limit_deg;
	double baseline_before_min, baseline_after_min;
	/* covariances of a quadratic ephemeris; NAN: not published, taken as 0 */
	double t0_dpde_cov_d2, period_dpde_cov_d2;
	double ecosw_err; /* error of e cos w, for the time of an occultation; NAN: not published */
};

/* A target with every number NAN and every text "". */
struct target target_empty(void);

struct site {
	int64_t id;
	const char *name;
	double lat_deg;      /* north, -90..90, WGS84 */
	double lon_east_deg; /* -180..180 */
	double height_m;     /* -450..9000 */
	const char *zone;    /* IANA name, "" unknown */
	const struct mask *mask; /* horizon mask (mask.h), borrowed; NULL none */
};

/* What a run assumes of the Earth's clock. */
struct earth_clock {
	const struct leap_table *leap;
	double ut1_utc_s; /* within 0.9 */
};

#endif
