/* SPDX-License-Identifier: MIT
 * The forecast of a window: how bright the sky is, what a minute of data is worth, how well depth and mid-time can be measured, what that tells about the ephemeris.
 *
 * One path makes the figures of the window and those of its derivation. Sources are those of the parts: skyglow.h, photometry.h, limb.h, timing.h, worth.h; what is put together here
 * is our own. Noise is white but for the floor in depth_snr. Cost: 30 us on average, 14 to 60 with the error of the mid-time. */
#ifndef WANE_EPHEM_FORECAST_H
#define WANE_EPHEM_FORECAST_H

#include "ephem/skyglow.h"
#include "ephem/timing.h"
#include "ephem/window.h"

/* What a moment offers. Numbers are NAN below the horizon, noise also where the sky is too bright to say. */
struct forecast_moment {
	double t_d, alt_deg, airmass;
	double sun_alt_deg, moon_alt_deg, moon_sep_deg, moon_phase_deg; /* the last two NAN while the Moon is down */
	struct skyglow sky;
	struct noise noise; /* NAN without an exposure or a magnitude */
};

/* What may happen, and what it brings. */
struct forecast_case {
	double chance;	 /* 0..1 */
	double mid_d;	 /* where the mid-time is expected then; NAN where it can't happen */
	double bits;	 /* expected */
	double timing_s; /* precision of the mid-time that brings so many bits */
};

/* The derivation. What does not apply is NAN. */
struct forecast_explain {
	/* light */
	enum band_id band, catalogue_band;
	double catalogue_mag;
	struct band_mag mag;	/* in the observing band */
	double extinction_mag;	/* per airmass */
	double star_e_s;	/* electrons per second of the star at the predicted mid-time */
	double neighbour;	/* light of neighbours over the target's; 0 none */
	struct optics optics;	/* comparison stars as of the target */
	/* exposure */
	double exposure_s;
	bool exposure_given;	/* by the telescope; else chosen */
	struct exposure_choice choice;
	double exposure_at_d;	/* the highest moment of the usable time: where it was chosen */
	/* noise: nodes over the usable time of the reserve */
	struct forecast_moment mid; /* at the predicted mid-time, usable or not */
	int n_nodes;
	struct noise_node node[TIMING_NODES_MAX];
	double noise_ppt_min;	/* of an average usable minute: the constant noise that carries as much information */
	/* depth */
	double star_depth_ppt;	/* of the star alone: published, else darkened limb, else overlap of discs */
	double depth_ppt;	/* as seen beside the neighbours */
	double in_min, out_min;	/* usable between the middles of the limbs; outside T1..T4 */
	double white_snr, depth_snr; /* without and with the floor of red noise */
	/* timing */
	struct timing_event event;
	double timing_s;	/* as predicted, with the usable time; NAN: the data don't fix it */
	double ideal_s;		/* the closed form for everything covered at this noise, baseline known */
	/* information */
	struct forecast_case whole, ingress, egress; /* exclude each other: with all of the usable time */
	struct forecast_case ingress_alone, egress_alone; /* that limb (alone or not) while the telescope is there for it alone; chance of the limb */
	double published_min;	/* error of the mid-time that the ephemeris says */
	double need_min, floor_min, ttv_min, systematic_min; /* what s_eff holds beside the timing; the TTV's is bound / sqrt 2 */
	double precision_min;	/* s_eff of the case of both limbs, the need in it */
	double gain_bits;
	long at_epoch;
	double sigma_at_min, sigma_after_min; /* at the user's date: as it is, and if the likeliest case comes true */
	/* worth */
	struct open_goals open;
	double priority, worth;
	enum worth_basis basis;
	double event_value;
	uint32_t flags;		/* those of a forecast */
};

struct window_forecast forecast_none(void); /* every number NAN */
/* Fills sky_mag_arcsec2, the forecast (flip apart) and the flags of a window that has its chances (STAGE_CHANCE), made of tn. Without night.observing all is NAN but the
 * worth, which then stands on chance alone. */
void window_make_forecast(struct window *w, const struct target_night *tn);
/* The same with its derivation. False: no telescope to forecast with; *x is not filled. */
bool forecast_explain(struct window *w, const struct target_night *tn, struct forecast_explain *x);

/* Moments from from_d to to_d every step_min (> 0) for people; noise with the exposure of the derivation. At most `room` are filled; how many. */
int forecast_table(const struct target_night *tn, const struct forecast_explain *x, double from_d, double to_d, double step_min,
		   struct forecast_moment out[], int room);
/* The sky alone at any moment of a star: what `wane sky` tells. */
struct skyglow forecast_sky(const struct night *n, const struct star *s, const struct observing *o, enum band_id band, double t_d);

#endif
