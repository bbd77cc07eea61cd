/* SPDX-License-Identifier: MIT
 * A window: one predicted event at one site on one night, in stages (event, sky, cover, chance, forecast), so that a scan can stop after
 * the stage that it needs. Times t_d are elapsed days of the night (night.h). What can't be computed is NAN. */
#ifndef WANE_EPHEM_WINDOW_H
#define WANE_EPHEM_WINDOW_H

#include "ephem/ephemeris.h"
#include "ephem/flags.h"
#include "ephem/geometry.h"
#include "ephem/limits.h"
#include "ephem/night.h"

#include <stdbool.h>

/* A target made ready for a run: epoch on BJD_TDB, shapes, effective limits. Depends on no night. */
struct prepared {
	const struct target *target;
	struct ephemeris eph;
	struct shape shape[2]; /* by enum event_kind */
	struct limits limits;
	double airmass_alt_deg; /* altitude of the airmass limit; 0 without one */
	double baseline_before_d[2], baseline_after_d[2]; /* by kind (automatic ones follow the duration) */
	double occultation_d;   /* transit to occultation */
	bool orbit_known;       /* eccentricity and, where it is not 0, its direction are published; else taken as circular */
	bool has_ephemeris;     /* epoch and period there and countable */
	uint32_t flags;         /* those that hold for every window of it */
	const struct observed *observed; /* borrowed; NULL: nothing is known. prepare_target leaves it so */
	const struct prepared *sibling; /* the next planet of the same star, in a ring (siblings.h); NULL alone */
};
/* doubtful_position: found by comparing the target with its siblings (stars.h); doubtful_values: the store kept numbers that can't be true.
 * clock, memo: for epochs in standards other than BJD_TDB. */
struct prepared prepare_target(const struct target *t, const struct limits *run, const struct earth_clock *clock, struct sun_memo *memo,
			       bool doubtful_position, bool doubtful_values);

enum part { PART_BEFORE, PART_INGRESS, PART_FLAT, PART_EGRESS, PART_AFTER, PART_COUNT };
extern const char *const part_words[PART_COUNT];

/* What takes time, in the order in which ties are decided. */
enum cause {
	CAUSE_SUN,
	CAUSE_ALTITUDE,
	CAUSE_MASK,
	CAUSE_MOON,
	CAUSE_AIRMASS,
	CAUSE_MOUNT, /* beyond what the telescope's mount can follow */
	CAUSE_FLIP,  /* the mount changes sides */
	CAUSE_ALLOTMENT, /* the time is not the team's */
	CAUSE_CLOUD,     /* lost */
	CAUSE_BLOCK,     /* taken by a block */
	CAUSE_NOON,
	CAUSE_COUNT,
	CAUSE_NONE = -1
};
extern const char *const cause_words[CAUSE_COUNT];

enum stage { STAGE_EVENT, STAGE_SKY, STAGE_COVER, STAGE_CHANCE, STAGE_FORECAST };

struct window_event {
	const struct prepared *prepared;
	enum event_kind kind;
	long epoch; /* of an occultation: of the transit before it */
	struct tdb mid_bjd;
	double mid_d, t1_d, t2_d, t3_d, t4_d; /* t2, t3 NAN when grazing */
	double sigma_min, sigma_contact_min;  /* without error scale */
	double chance_sigma_d, chance_contact_d; /* with error scale: what the chances use; NAN: no chance */
	double before_d, after_d;             /* wanted baselines B */
	double reserve_start_d, reserve_end_d, latest_start_d;
	double pad_d;          /* what the reserve holds for the errors of a contact, b_min not in it; 0 when they are unknown */
	double depth_ppt;
	uint32_t flags;
};
struct window_sky {
	double airmass_start, airmass_mid, airmass_end, airmass_min;
	double alt_mid_deg, az_mid_deg, sun_alt_mid_deg, sun_sep_deg;
	double moon_sep_deg, moon_alt_deg, moon_lit;
	double sky_mag_arcsec2; /* NAN: the sky model belongs to the forecast */
};
struct window_cover {
	double usable_start_d, usable_end_d;
	double coverage;
	double share[PART_COUNT];      /* usable share of each part; NAN for a part of no length */
	enum cause lost_to[PART_COUNT]; /* CAUSE_NONE where the share is at least 0.995 */
	double base_before_min, base_after_min;
	bool limb_usable;              /* any moment of [T1, T4] */
	struct intervals usable;       /* in the reserve */
};
struct window_chance {
	double ingress, egress, mid, done;
};
/* What the worth of a window stands on. */
enum worth_basis {
	BASIS_NONE,  /* no forecast: priority x open goals x chance */
	BASIS_EVENT, /* the same x event_value */
	BASIS_BITS   /* expected information: worth, bits_* */
};
struct window_forecast { /* all NAN until a telescope's forecast exists; flip_d comes with the cover (forecast.h) */
	double flip_d; /* start of the mount's flip; NAN none */
	double exposure_s, noise_ppt_min, depth_snr, timing_s, gain_bits, sigma_after_min, worth;
	double bits_whole, bits_ingress, bits_egress; /* of both limbs, and of a limb that is observed alone, given that it is caught; NAN unknown */
	enum worth_basis basis;
	double event_value; /* of BASIS_EVENT: what a caught event counts for */
	enum band_id band;  /* of the forecast; BAND_NONE without one, or zeroed where basis is BASIS_NONE */
};
enum { SIBLINGS_MAX = 8 };
struct window {
	struct window_event event;
	struct window_sky sky;
	struct window_cover cover;
	struct window_chance chance;
	struct window_forecast forecast;
	int n_siblings; /* planets of the star that transit within the reserve; siblings_mark fills it */
	const struct prepared *sibling[SIBLINGS_MAX];
};

/* What is left of a night for observing, apart from sky and target: sets in which it is allowed, each by its cause. */
struct free_time {
	struct intervals allotted, clear, unblocked; /* times of the night; may reach beyond [0, length] */
};
struct free_time free_time_whole(void); /* nothing is taken */
/* All three at once. */
struct intervals free_time_all(const struct free_time *f);

/* A target on a night: its star and the sets in which it can be observed, each by its cause. */
struct target_night {
	const struct night *night;
	const struct prepared *prepared;
	struct star star;
	struct intervals sun_limb, sun_baseline, altitude, mask, airmass, moon; /* allowed by each cause, in [0, length] */
	const struct free_time *free; /* borrowed; NULL: the whole night */
	struct intervals limb, baseline; /* allowed by all */
	bool has_mount, has_flip;        /* whether these hold: limits of the mount; all but the flip, in the copy that a window makes */
	struct intervals mount, flip;
};
/* Sun sets of one night by limit, so that targets with the same limit share one. Start with n = 0 on every night. */
enum { SUN_SETS_MAX = 8 };
struct sun_sets {
	int n;
	double limit_deg[SUN_SETS_MAX];
	struct intervals set[SUN_SETS_MAX];
};
struct target_night target_on_night(const struct night *n, const struct prepared *p, const struct star *s, struct sun_sets *suns,
				    const struct free_time *free);

/* Epochs whose [T1, T4] touches the night: [*first, *last], false when none (then *last = *first - 1, where the count is possible at all; else
 * both 0). At most EVENTS_PER_NIGHT_MAX. */
enum { EVENTS_PER_NIGHT_MAX = 200 };
bool window_epochs(const struct night *n, const struct star *s, const struct prepared *p, enum event_kind kind, long *first, long *last);
/* Fills a window up to a stage. */
void window_make(struct window *w, const struct target_night *tn, enum event_kind kind, long epoch, enum stage stage);
/* Whether it is listed: the chance of a limb reaches min_chance, or it has no chance and some moment of [T1, T4] is usable. */
bool window_listed(const struct window *w, double min_chance);
/* Whether not listing it hides something: some moment of [T1, T4] is usable, or a limb's chance reaches 0.0005. */
bool window_hidden(const struct window *w);
/* The better limb's chance is below 0.5. A window without a chance is no long shot. */
bool window_long_shot(const struct window *w);
/* `before:sun;after:altitude`, "" when nothing is lost. */
void lost_by_text(const struct window_cover *c, char *out, size_t n);

#endif
