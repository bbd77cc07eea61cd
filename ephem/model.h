/* SPDX-License-Identifier: MIT
 * Plain data that the store fills and the engine reads. A missing number is NAN, a missing text is "". Text pointers are borrowed:
 * they live as long as the list that they came with. */
#ifndef WANE_EPHEM_MODEL_H
#define WANE_EPHEM_MODEL_H

#include "ephem/standard.h"
#include "ephem/timescale.h"

#include <stdint.h>

/* A shorter period is not counted: such a target has no events. No planet is known to orbit so fast, and a night holds at most 200 events of a
 * target (EVENTS_PER_NIGHT_MAX), twice what this period brings. */
#define PERIOD_MIN_D 0.01

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

enum mount_kind { MOUNT_UNKNOWN, MOUNT_GERMAN, MOUNT_FORK, MOUNT_ALTAZ };

/* A telescope of a site. What is NAN is not known; the functions that need it say what stands for it. */
struct telescope {
	int64_t id, site_id; /* 0 when not stored */
	const char *name;    /* "" none */
	/* moving */
	double slew_deg_s;   /* speed of a move */
	double settle_min;   /* centring and settling after each move */
	double filter_min;   /* change of filter between neighbours that need different ones */
	double field_arcmin; /* stars closer together than half of it share a pointing; NAN: only planets of one star */
	/* mount */
	enum mount_kind mount;
	double alt_min_deg, alt_max_deg;
	double ha_east_h, ha_west_h;            /* how far from the meridian it reaches on either side [hours] */
	double zenith_deg;                      /* radius round the zenith that it can't follow through */
	double flip_min;                        /* what a meridian flip takes */
	double flip_before_min, flip_after_min; /* how far it may track short of, and past, the meridian */
	/* light */
	double aperture_m, obstruction; /* obstruction: of the diameter, 0..1 */
	double throughput;              /* optics, filter and detector, 0..1 */
	const char *band;               /* the observing band; "" not given */
	double pixel_arcsec, gain_e_adu, read_noise_e, dark_e_s, full_well_e;
	double defocus_px;              /* radius of the defocused image */
	double exposure_s;              /* NAN: to be chosen */
	double dead_s;                  /* between exposures */
	double red_noise_ppt;           /* noise floor of a whole event */
	/* standing blocks of every night: `evening-6..evening-9=evening flats;...` (tui/plan_time.h) */
	const char *blocks, *note;
};
struct telescope telescope_empty(void); /* every number NAN, every text "" */

/* What a run assumes of the Earth's clock. */
struct earth_clock {
	const struct leap_table *leap;
	double ut1_utc_s; /* within 0.9 */
};

#endif
