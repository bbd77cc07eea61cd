/* SPDX-License-Identifier: MIT
 * Shape of an event: contacts, duration, depth, with every missing-data path flagged.
 * Source: Winn 2010, arXiv:1001.2010, eqs 7-8, 14-16 (contacts, impact parameter); Seager & Mallen-Ornelas 2003, ApJ 585, 1038. */
#ifndef WANE_EPHEM_GEOMETRY_H
#define WANE_EPHEM_GEOMETRY_H

#include "ephem/model.h"

#include <stdbool.h>

enum event_kind { KIND_TRANSIT, KIND_OCCULTATION };

struct shape {
	bool occurs;         /* false: the numbers say that the bodies do not overlap */
	double t14_d;        /* whole duration */
	double t14_err_d;    /* 0 when the source gives none and it was not estimated */
	double limb_d;       /* ingress = egress, T1 to T2; half of t14 when grazing */
	bool grazing;
	double k, b, a_rs;   /* as used */
	double depth_ppt;    /* published, else k^2 (uniform disc); NAN for an occultation or when k was assumed */
	bool duration_estimated, duration_error_unknown, ingress_estimated, radius_ratio_assumed;
	bool contradictory;  /* some published number had to be left out because it can't be true with the others */
};

/* Assumed when nothing better is published. */
#define ASSUMED_B 0.5
#define ASSUMED_K 0.1
/* Error of an estimated duration as a share of it: impact parameter unknown (b uniform in 0..0.9 scatters T14 by about this). */
#define ESTIMATED_B_SHARE 0.25
/* ... of a/R* from the star's mass and radius (a tenth in density^(1/3), a catalogue star), and of a star of which nothing is known. */
#define ESTIMATED_STAR_SHARE 0.1
#define UNKNOWN_STAR_SHARE 0.5
/* ... computed from published a/R* and inclination whose errors are not at hand. */
#define ESTIMATED_GEOMETRY_SHARE 0.05

struct shape shape_of(const struct target *t, enum event_kind kind);

/* Impact parameter of a transit (+1) or occultation (-1): a cos i (1 - e^2) / (1 +- e sin w). */
double impact_parameter(double a_rs, double inc_deg, double ecc, double omega_deg, int sign);
/* Duration between contacts at separation 1 + k (k > 0: T1..T4) or 1 - k (pass -k: T2..T3) [d]; 0 where they are never reached; NAN for
 * numbers that make no orbit (a/R* not above 1 + k). */
double contact_duration_d(double period_d, double a_rs, double k, double b, double inc_deg, double ecc, double omega_deg, int sign);
/* a/R* from stellar mass and radius in nominal solar units (Kepler III, IAU 2015 B3 constants). */
double a_rs_from_star(double mstar_msun, double rstar_rsun, double period_d);
/* a/R* of a circular orbit that gives T14 with k and b. NAN when none does. */
double a_rs_from_duration(double t14_d, double period_d, double k, double b);

#endif
