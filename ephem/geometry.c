/* SPDX-License-Identifier: MIT */
#include "ephem/geometry.h"

#include "ephem/units.h"

#include <math.h>

double impact_parameter(double a_rs, double inc_deg, double ecc, double omega_deg, int sign)
{
	return a_rs * cos(inc_deg * DEG_RAD) * (1.0 - ecc * ecc) /
	       (1.0 + sign * ecc * sin(omega_deg * DEG_RAD));
}

double contact_duration_d(double period_d, double a_rs, double k, double b, double inc_deg, double ecc,
			  double omega_deg, int sign)
{
	const double reach =
	    1.0 + k; /* separation of the centres at the contact, in stellar radii; k > 1: |1 - k| */
	const double chord2 = reach * reach - b * b;
	if (!(chord2 > 0.0))
		return isnan(chord2) ? NAN : 0.0;
	const double s = sqrt(chord2) / (a_rs * sin(inc_deg * DEG_RAD));
	if (!(s > 0.0 && s <= 1.0))
		return NAN;
	return period_d / PI * asin(s) * sqrt(1.0 - ecc * ecc) /
	       (1.0 + sign * ecc * sin(omega_deg * DEG_RAD));
}

double a_rs_from_star(double mstar_msun, double rstar_rsun, double period_d)
{
	const double period_s = period_d * DAY_S;
	return cbrt(SUN_GM_M3_S2 * mstar_msun * period_s * period_s / (4.0 * PI * PI)) /
	       (SUN_RADIUS_M * rstar_rsun);
}

double a_rs_from_duration(double t14_d, double period_d, double k, double b)
{
	const double s = sin(PI * t14_d / period_d);
	const double a2 = ((1.0 + k) * (1.0 + k) - b * b * (1.0 - s * s)) / (s * s);
	return a2 > 0.0 ? sqrt(a2) : NAN;
}

/* What the catalogue says of the orbit, with what can't be true left out. */
struct orbit {
	double period_d, k, a_rs, inc_deg, b, ecc, omega_deg;
	bool k_known, a_published, a_from_star, b_known, contradictory;
	double a_share; /* error share that the source of a/R* brings to the duration */
};

static double orbit_k(const struct target *t, bool *known)
{
	*known = true;
	if (t->k > 0.0)
		return t->k;
	if (t->depth_ppt > 0.0 && t->depth_ppt < 1000.0)
		return sqrt(t->depth_ppt / 1000.0);
	*known = false;
	return ASSUMED_K;
}

static double orbit_a_rs(const struct target *t, struct orbit *o)
{
	if (t->a_rs > 1.0 + o->k) {
		o->a_published = true;
		o->a_share = ESTIMATED_GEOMETRY_SHARE;
		return t->a_rs;
	}
	if (!isnan(t->a_rs))
		o->contradictory = true;
	const bool m = t->mstar_msun > 0.0, r = t->rstar_rsun > 0.0;
	o->a_from_star = m && r;
	o->a_share = o->a_from_star ? ESTIMATED_STAR_SHARE
		     : m || r	    ? 2.0 * ESTIMATED_STAR_SHARE
				    : UNKNOWN_STAR_SHARE;
	/* on the main sequence mass and radius in solar units are nearly equal (common practice, no source)
	 */
	const double mass = m ? t->mstar_msun : r ? t->rstar_rsun : 1.0;
	const double radius = r ? t->rstar_rsun : mass;
	return fmax(a_rs_from_star(mass, radius, o->period_d), 1.05 * (1.0 + o->k));
}

/* An assumed b leaves room for a flat part where the radius ratio allows one at all. */
static double assumed_b(double k)
{
	const double inner = fabs(1.0 - k);
	return ASSUMED_B < inner ? ASSUMED_B : 0.5 * inner;
}

static double inclination_for(double a_rs, double b, double ecc, double omega_deg)
{
	const double cos_i = b / a_rs * (1.0 + ecc * sin(omega_deg * DEG_RAD)) / (1.0 - ecc * ecc);
	return acos(fmin(fmax(cos_i, -1.0), 1.0)) / DEG_RAD;
}

static struct orbit orbit_of(const struct target *t)
{
	struct orbit o = {.period_d = t->period_d};
	if (t->ecc >= 0.0 && t->ecc < 1.0 && !isnan(t->omega_deg)) {
		o.ecc = t->ecc;
		o.omega_deg = t->omega_deg;
	} else if (t->ecc < 0.0 || t->ecc >= 1.0) {
		o.contradictory = true;
	}
	o.k = orbit_k(t, &o.k_known);
	o.a_rs = orbit_a_rs(t, &o);
	o.b = NAN;
	if (t->inc_deg > 0.0 && t->inc_deg < 180.0 && (o.a_published || o.a_from_star)) {
		o.inc_deg = t->inc_deg > 90.0 ? 180.0 - t->inc_deg : t->inc_deg;
		o.b = impact_parameter(o.a_rs, o.inc_deg, o.ecc, o.omega_deg, 1);
	}
	o.b_known = o.b < 1.0 + o.k;
	if (!o.b_known) {
		if (o.b >= 1.0 + o.k && o.a_published)
			o.contradictory =
			    true; /* a planet listed as transiting, with numbers that say it does not */
		o.b = assumed_b(o.k);
		o.inc_deg = inclination_for(o.a_rs, o.b, o.ecc, o.omega_deg);
	}
	return o;
}

/* Share of the whole duration that one limb takes; with an assumed b the scale of the orbit is left out of it
 * too. */
static double limb_share(const struct orbit *o, double b, double inc_deg, int sign, bool assumed)
{
	const double outer = (1.0 + o->k) * (1.0 + o->k) - b * b, inner = (1.0 - o->k) * (1.0 - o->k) - b * b;
	if (assumed)
		return 0.5 * (1.0 - sqrt(fmax(inner, 0.0) / outer));
	const double t14 =
	    contact_duration_d(o->period_d, o->a_rs, o->k, b, inc_deg, o->ecc, o->omega_deg, sign);
	const double t23 = contact_duration_d(o->period_d, o->a_rs, fabs(1.0 - o->k) - 1.0, b, inc_deg,
					      o->ecc, o->omega_deg, sign);
	if (t14 > 0.0 && t23 >= 0.0)
		return 0.5 * (1.0 - t23 / t14);
	return 0.5 * (1.0 - sqrt(fmax(inner, 0.0) / outer));
}

/* Area of the star covered by a planet of radius ratio k at separation z, as a share of the star's disc (two
 * circles). */
static double disc_overlap(double k, double z)
{
	if (z >= 1.0 + k)
		return 0.0;
	if (z <= fabs(1.0 - k))
		return k < 1.0 ? k * k : 1.0;
	const double planet = acos((k * k + z * z - 1.0) / (2.0 * k * z)),
		     star = acos((1.0 - k * k + z * z) / (2.0 * z));
	const double kite = 4.0 * z * z - (1.0 + z * z - k * k) * (1.0 + z * z - k * k);
	return (k * k * planet + star - 0.5 * sqrt(fmax(kite, 0.0))) / PI;
}

static double transit_duration_d(const struct orbit *o)
{
	const double t14 =
	    contact_duration_d(o->period_d, o->a_rs, o->k, o->b, o->inc_deg, o->ecc, o->omega_deg, 1);
	return t14 > 0.0 && t14 < o->period_d ? t14 : 0.25 * o->period_d;
}

static void transit_timing(const struct target *t, const struct orbit *o, struct shape *s)
{
	s->t14_d = t->duration_h / 24.0;
	if (s->t14_d > 0.0 && s->t14_d < o->period_d) {
		s->duration_error_unknown = !(t->duration_err_h > 0.0);
		s->t14_err_d = s->duration_error_unknown ? 0.0 : t->duration_err_h / 24.0;
		s->ingress_estimated = !(o->b_known && o->a_published);
		return;
	}
	s->contradictory = s->contradictory || !isnan(t->duration_h);
	s->duration_estimated = true;
	s->ingress_estimated = !o->b_known;
	s->t14_d = transit_duration_d(o);
	s->t14_err_d = s->t14_d * hypot(o->b_known ? 0.0 : ESTIMATED_B_SHARE, o->a_share);
}

struct shape shape_of(const struct target *t, enum event_kind kind)
{
	const struct orbit o = orbit_of(t);
	struct shape s = {
	    .occurs = true, .k = o.k, .a_rs = o.a_rs, .b = o.b, .contradictory = o.contradictory};
	s.radius_ratio_assumed = !o.k_known;
	transit_timing(t, &o, &s);
	/* a star-derived a/R* is too coarse to call a transit of published duration grazing */
	double b = s.ingress_estimated ? assumed_b(o.k) : o.b;
	double inc_deg = s.ingress_estimated ? inclination_for(o.a_rs, b, o.ecc, o.omega_deg) : o.inc_deg;
	int sign = 1;
	if (kind == KIND_OCCULTATION) {
		const double transit =
		    contact_duration_d(o.period_d, o.a_rs, o.k, b, inc_deg, o.ecc, o.omega_deg, 1);
		sign = -1;
		b = impact_parameter(o.a_rs, inc_deg, o.ecc, o.omega_deg, sign);
		if (s.ingress_estimated &&
		    b > fabs(1.0 - o.k)) /* an assumed b is no reason to deny the event */
			b = assumed_b(o.k);
		const double behind =
		    contact_duration_d(o.period_d, o.a_rs, o.k, b, inc_deg, o.ecc, o.omega_deg, sign);
		const double ratio = transit > 0.0 && behind >= 0.0 ? behind / transit : 1.0;
		s.occurs = b < 1.0 + o.k;
		s.t14_d *= ratio;
		s.t14_err_d *= ratio;
	}
	s.b = b;
	s.grazing = b > fabs(1.0 - o.k) && b < 1.0 + o.k;
	s.limb_d =
	    s.grazing ? 0.5 * s.t14_d : s.t14_d * limb_share(&o, b, inc_deg, sign, s.ingress_estimated);
	s.depth_ppt = NAN;
	if (kind == KIND_TRANSIT && t->depth_ppt > 0.0)
		s.depth_ppt = t->depth_ppt;
	else if (kind == KIND_TRANSIT && o.k_known)
		s.depth_ppt = 1000.0 * disc_overlap(o.k, b);
	return s;
}
