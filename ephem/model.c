/* SPDX-License-Identifier: MIT */
#include "ephem/model.h"

#include <math.h>

struct target target_empty(void)
{
	return (struct target){
	    .name = "",
	    .ra_deg = NAN,
	    .dec_deg = NAN,
	    .pm_ra_masyr = NAN,
	    .pm_dec_masyr = NAN,
	    .plx_mas = NAN,
	    .pos_epoch_yr = NAN,
	    .time_scale = "",
	    .standard = {.claim = SCALE_UNKNOWN, .origin = ORIGIN_BARYCENTRE, .clock = CLOCK_TDB},
	    .t0 = {.day = NAN, .frac = NAN},
	    .t0_err_d = NAN,
	    .period_d = NAN,
	    .period_err_d = NAN,
	    .t0_period_cov_d2 = NAN,
	    .dpde_d = NAN,
	    .dpde_err_d = NAN,
	    .ttv_amp_min = NAN,
	    .duration_h = NAN,
	    .duration_err_h = NAN,
	    .depth_ppt = NAN,
	    .k = NAN,
	    .a_rs = NAN,
	    .inc_deg = NAN,
	    .ecc = NAN,
	    .omega_deg = NAN,
	    .mag = NAN,
	    .band = "",
	    .teff_k = NAN,
	    .rstar_rsun = NAN,
	    .mstar_msun = NAN,
	    .source = "",
	    .tags = "",
	    .note = "",
	    .priority = NAN,
	    .sun_limit_deg = NAN,
	    .sun_limit_baseline_deg = NAN,
	    .alt_limit_deg = NAN,
	    .airmass_limit = NAN,
	    .moon_limit_deg = NAN,
	    .baseline_before_min = NAN,
	    .baseline_after_min = NAN,
	    .ecosw_err = NAN,
	    .t0_dpde_cov_d2 = NAN,
	    .period_dpde_cov_d2 = NAN,
	};
}
