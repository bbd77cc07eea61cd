/* SPDX-License-Identifier: MIT
 * What a telescope's mount lets it follow: limits of altitude and hour angle, the zenith, and the flip of a german equatorial mount. What a telescope does
 * not give (NAN) limits nothing. Hour angles are those of the star's apparent place: within 0.02 s / cos(dec) of the place seen from the turning site. */
#ifndef WANE_EPHEM_MOUNT_H
#define WANE_EPHEM_MOUNT_H

#include "ephem/night.h"

/* Whether it has any limit that mount_allows knows. Its least altitude is not one of them: it is a limit of the run (LIM_ALT). */
bool mount_limits(const struct telescope *t);
/* When it can follow a star, in [0, length]: airless altitude at most alt_max_deg and outside zenith_deg round the zenith, hour angle within
 * [-ha_east_h, ha_west_h]; whatever the kind of mount. Closed form in hour angle; edges to 0.1 s for declinations up to 75 deg, 0.3 s up to 85. */
struct intervals mount_allows(const struct night *n, const struct star *s, const struct telescope *t);

/* --- meridian flip --- */

/* A german equatorial mount follows a star on one side of its pier until flip_after_min past the meridian and on the other from flip_before_min short of it
 * (0 where not given), and takes flip_min to change sides. No other mount flips. Only the upper transit counts: below the pole ha_west_h is the limit. */
#define FLIP_USUAL_MIN 5.0 /* stands for a flip_min that is not given (3 to 10 is common practice, no source) */
/* How long its flip takes [d]; NAN: it never flips. */
double mount_flip_d(const struct telescope *t);

/* Where a flip hurts, from the least to the most. */
enum flip_place {
	FLIP_FREE,     /* takes no usable time and touches no limb */
	FLIP_OUTSIDE,  /* wholly before T1 - b_min or after T4 + b_min */
	FLIP_BASELINE, /* in one of these, not in a limb */
	FLIP_FLAT,     /* between T2 and T3 */
	FLIP_LIMB      /* touches ingress or egress */
};
/* What a flip knows of an event: contacts (T2, T3 NAN when grazing: each limb is half the event), least baseline b_min, and how far contacts may be off. */
struct flip_event {
	double t1_d, t2_d, mid_d, t3_d, t4_d;
	double b_min_d, pad_d;
};
struct flip {
	double from_d, to_d;
	double meridian_d; /* the star's transit */
	enum flip_place place;
};
/* Places the flip of a window. usable: the usable time of its reserve, flip apart. False when none is needed: another mount, or one side of the pier reaches
 * from the first usable moment to the last. Else it begins within [-flip_before_min, flip_after_min] of the meridian. Of the starts that this leaves, first
 * those that keep the pad between the flip and the limbs (a contact may come early or late), then those that take no limb at the predicted times, last a limb;
 * among them in the order of enum flip_place; then outside as much of the pad as can be also kept clear of T1 - b_min and T4 + b_min, and elsewhere as little
 * taken of baseline, pad or limb as can be; then as near to the meridian as possible; then the earlier one. */
bool mount_flip(const struct night *n, const struct star *s, const struct telescope *t, const struct intervals *usable, const struct flip_event *ev,
		struct flip *out);

#endif
