/* SPDX-License-Identifier: MIT
 * What observing a window is worth: the information about its ephemeris that it is expected to bring in clear weather, or another measure of the team's choice.
 *
 * Information of one mid-time of precision s on a prediction of variance V: log2(1 + V / s^2) / 2 bits (Shannon 1948, Bell Syst. Tech. J. 27, 379: Gaussian
 * channel, from memory). s = hypot(what the light curve gives, the need of the team, timing variations, systematic floors), so that what is known well enough earns nothing
 * more. Expected over what is caught: whole, one limb, nothing. The rest is of our own choosing. */
#ifndef WANE_EPHEM_WORTH_H
#define WANE_EPHEM_WORTH_H

#include "ephem/bands.h"
#include "ephem/ephemeris.h"
#include "ephem/intervals.h"

#include <stdbool.h>
#include <stddef.h>

/* By what windows are ranked. */
enum worth_choice {
	WORTH_BITS,	/* priority x open goals x expected information */
	WORTH_DEPTH,	/* priority x open goals x depth over its error x chance of the whole event */
	WORTH_PRIORITY, /* priority x open goals x chance of the whole event */
	WORTH_CHOICE_COUNT
};
extern const char *const worth_choice_words[WORTH_CHOICE_COUNT]; /* bits, depth, priority */

struct worth_rules {
	enum worth_choice choice;
	double need_min;  /* precision beyond which more is worth nothing, >= 0 (2) */
	double floor_min; /* what no light curve of this team goes below, as clock errors, >= 0 (0) */
};
struct worth_rules worth_rules_built_in(void);

/* What may be caught of an event; they exclude each other. */
enum catch { CATCH_WHOLE, CATCH_INGRESS, CATCH_EGRESS, CATCH_COUNT };
struct worth_case {
	double chance;	 /* 0..1 */
	double timing_s; /* precision of the mid-time then (timing.h); INFINITY: none */
};
/* Chances of the three cases from those of a window (window.h): each limb's, and done's, which is less than both limbs' where a gap in the floor is too long. Both limbs are caught
 * with a chance of at least done and of ingress + egress - 1: the greater of them is taken for whole, what is left of either limb is that limb alone. They never sum to more
 * than 1. timing_s is left alone. NAN in, NAN out. */
void worth_chances(double ingress, double egress, double done, struct worth_case c[CATCH_COUNT]);
/* Where the mid-time is expected when it falls into a set of allowed mid-times: mean of N(mean, sigma) cut to the set; the place for timing_mid_s in that case. The nearest point of
 * the set where its chance underflows or sigma is 0; NAN for an empty set or a NAN. */
double worth_case_mid_d(const struct intervals *allowed, double mean_d, double sigma_d);

/* A wish of the team about a target. */
struct goal {
	enum band_id band; /* BAND_NONE: any */
	int wanted, got;   /* events */
	bool one_limb;	   /* an event with one limb counts too */
	double until_jd;   /* no longer open after; NAN: for ever */
};
/* Whether an observation in a band at a time would serve it. */
bool goal_open(const struct goal *g, enum band_id band, double jd);

struct worth_input {
	const struct ephemeris *eph;
	long epoch;	  /* observed */
	long at_epoch;	  /* of the user's date: sigma_after */
	struct worth_case c[CATCH_COUNT];
	double depth_snr; /* for WORTH_DEPTH only */
	double priority;  /* NAN: 1 */
	const struct goal *goal;
	size_t n_goals;	  /* 0: one that is always open, for any catch under WORTH_BITS, whole events under the others */
	enum band_id band;
	double jd;
};
struct worth {
	double gain_bits;	/* sum of chance x bits; NAN: the ephemeris has no errors, or a chance is NAN */
	double sigma_after_min; /* sigma at at_epoch when the likeliest case comes true, without the need, which is no error; with no case possible as it is now */
	double worth;		/* by the rules' choice; a goal that needs whole events counts the whole case alone */
};
struct worth worth_of(const struct worth_input *in, const struct worth_rules *rules);

/* s_eff for a light curve's precision: hypot(timing, need, TTV bound / sqrt 2, systematic, floor) [min]. */
double worth_precision_min(const struct ephemeris *e, double timing_s, const struct worth_rules *rules);
/* Bits of an observed epoch of that precision; 0 for INFINITY. */
double worth_bits(const struct ephemeris *e, long epoch, double timing_s, const struct worth_rules *rules);
/* The precision that brings so many bits: its inverse [s]. INFINITY for 0 bits; 0 for more than a perfect light curve can bring. */
double worth_timing_s(const struct ephemeris *e, long epoch, double bits, const struct worth_rules *rules);

#endif
