/* SPDX-License-Identifier: MIT
 * Event and sky of a window; cover and chance are in window_cover.c. */
#include "ephem/window.h"

#include "ephem/forecast.h"
#include "ephem/units.h"
#include "ephem/window_stages.h"

#include <math.h>
#include <string.h>

const char *const part_words[PART_COUNT] = {"before", "ingress", "flat", "egress", "after"};
const char *const cause_words[CAUSE_COUNT] = {"sun",  "altitude",  "mask",  "moon",  "airmass", "mount",
					      "flip", "allotment", "cloud", "block", "noon"};

#define SUN_NEAR_DEG 45.0 /* keep-out round the Sun while it is up (common practice, no source) */
#define PHASE_LOST_SHARE (1.0 / 6.0)

/* The event belongs to the night when some moment of [T1, T4] lies in [noon, next noon). */
bool window_epochs(const struct night *n, const struct star *s, const struct prepared *p,
		   enum event_kind kind, long *first, long *last)
{
	*first = *last = 0;
	if (!p->has_ephemeris || !p->shape[kind].occurs)
		return false;
	const double half_d = 0.5 * p->shape[kind].t14_d;
	const double shift_d = kind == KIND_OCCULTATION ? p->occultation_d : 0.0;
	struct tdb from = night_bjd_tdb(n, s, 0.0), to = night_bjd_tdb(n, s, n->length_d);
	from.jd = jd2_add_d(from.jd, -half_d - shift_d);
	to.jd = jd2_add_d(to.jd, half_d - shift_d);
	long end;
	if (!ephemeris_first_after(&p->eph, from, first) || !ephemeris_first_after(&p->eph, to, &end)) {
		*first = *last = 0;
		return false;
	}
	*last = end - 1;
	if (*last - *first >= EVENTS_PER_NIGHT_MAX)
		*last = *first + EVENTS_PER_NIGHT_MAX - 1;
	return *last >= *first; /* none: *last is *first - 1 */
}

static double night_of_offset(const struct target_night *tn, struct tdb mid, double offset_d)
{
	return night_of_bjd(tn->night, &tn->star, (struct tdb){.jd = jd2_add_d(mid.jd, offset_d)});
}

/* sigma: design words. published and duration errors are scaled by F for pad and chance; the time standard
 * and timing variations are not. */
static void event_errors(struct window_event *ev, const struct prepared *p, const struct shape *shape,
			 double published_min)
{
	const struct ephemeris *e = &p->eph;
	const double fixed_min = hypot(e->systematic_min, e->ttv_min / sqrt(2.0));
	const double scale = p->limits.value[LIM_ERROR_SCALE];
	const double half_t14_min = 0.5 * shape->t14_err_d * DAY_MIN;
	ev->sigma_min = hypot(published_min, fixed_min);
	ev->sigma_contact_min = hypot(ev->sigma_min, half_t14_min);
	ev->chance_sigma_d = hypot(scale * published_min, fixed_min) * MIN_D;
	ev->chance_contact_d = hypot(ev->chance_sigma_d, scale * half_t14_min * MIN_D);
	if (ev->sigma_min > PHASE_LOST_SHARE * e->period_d * DAY_MIN)
		ev->flags |= FLAG_BIT(FLAG_PHASE_LOST);
	const double k = p->limits.value[LIM_PAD];
	const double spare_min =
	    fmin(ev->before_d, ev->after_d) * DAY_MIN - p->limits.value[LIM_MIN_BASELINE];
	if (k > 0.0 && ev->sigma_min > fmax(spare_min, 0.0) / k)
		ev->flags |= FLAG_BIT(FLAG_STALE);
	if (ev->flags & (FLAG_BIT(FLAG_PHASE_LOST) | FLAG_BIT(FLAG_CIRCULAR_ASSUMED)))
		ev->chance_sigma_d = ev->chance_contact_d = NAN;
}

/* Published error of the mid-time. An occultation's place in the orbit moves by 2 P / pi for each unit of e
 * cos w (Winn 2010, arXiv:1001.2010, eq. 33, first order). */
static double event_published_min(const struct prepared *p, enum event_kind kind, long epoch)
{
	const double mid_d = ephemeris_published_d(&p->eph, epoch);
	const double ecosw_err = p->target->ecosw_err;
	if (kind == KIND_TRANSIT || !(ecosw_err > 0.0))
		return mid_d * DAY_MIN;
	return hypot(mid_d, 2.0 * p->eph.period_d / PI * ecosw_err) * DAY_MIN;
}

/* What a reserve holds for the errors of a contact; 0 when they are unknown. */
static double pad_of(const struct prepared *p, const struct shape *shape, double published_min)
{
	if (isnan(published_min))
		return 0.0;
	const double scale = p->limits.value[LIM_ERROR_SCALE];
	const double half_t14_min = 0.5 * shape->t14_err_d * DAY_MIN;
	const double error_min =
	    hypot(hypot(scale * published_min, p->eph.systematic_min), scale * half_t14_min);
	return (p->limits.value[LIM_PAD] * error_min + p->eph.ttv_min) * MIN_D;
}

/* How far the reserve reaches beyond a contact. */
static double reserve_d(const struct prepared *p, double published_min, double pad_d, double wanted_d)
{
	if (isnan(published_min))
		return wanted_d;
	return fmax(wanted_d, p->limits.value[LIM_MIN_BASELINE] * MIN_D + pad_d);
}

static uint32_t shape_flags(const struct prepared *p, const struct shape *shape, enum event_kind kind)
{
	uint32_t flags = p->flags;
	if (shape->duration_estimated)
		flags |= FLAG_BIT(FLAG_DURATION_ESTIMATED);
	if (shape->duration_error_unknown)
		flags |= FLAG_BIT(FLAG_DURATION_ERROR_UNKNOWN);
	if (shape->ingress_estimated)
		flags |= FLAG_BIT(FLAG_INGRESS_ESTIMATED);
	if (shape->radius_ratio_assumed)
		flags |= FLAG_BIT(FLAG_RADIUS_RATIO_ASSUMED);
	if (shape->grazing)
		flags |= FLAG_BIT(FLAG_GRAZING);
	if (kind == KIND_OCCULTATION && !p->orbit_known)
		flags |= FLAG_BIT(FLAG_CIRCULAR_ASSUMED);
	else if (kind == KIND_OCCULTATION && !(p->target->ecosw_err > 0.0))
		flags |= FLAG_BIT(FLAG_PHASE_ERROR_UNKNOWN);
	return flags;
}

static void make_event(struct window_event *ev, const struct target_night *tn, enum event_kind kind,
		       long epoch)
{
	const struct prepared *p = tn->prepared;
	const struct shape *shape = &p->shape[kind];
	*ev =
	    (struct window_event){.prepared = p, .kind = kind, .epoch = epoch, .depth_ppt = shape->depth_ppt};
	ev->mid_bjd = ephemeris_mid(&p->eph, epoch);
	if (kind == KIND_OCCULTATION)
		ev->mid_bjd.jd = jd2_add_d(ev->mid_bjd.jd, p->occultation_d);
	const double half_d = 0.5 * shape->t14_d;
	ev->mid_d = night_of_offset(tn, ev->mid_bjd, 0.0);
	ev->t1_d = night_of_offset(tn, ev->mid_bjd, -half_d);
	ev->t4_d = night_of_offset(tn, ev->mid_bjd, half_d);
	ev->t2_d = shape->grazing ? NAN : night_of_offset(tn, ev->mid_bjd, -half_d + shape->limb_d);
	ev->t3_d = shape->grazing ? NAN : night_of_offset(tn, ev->mid_bjd, half_d - shape->limb_d);
	ev->before_d = p->baseline_before_d[kind];
	ev->after_d = p->baseline_after_d[kind];
	ev->flags = shape_flags(p, shape, kind);
	const double published_min = event_published_min(p, kind, epoch);
	event_errors(ev, p, shape, published_min);
	ev->pad_d = pad_of(p, shape, published_min);
	ev->reserve_start_d = ev->t1_d - reserve_d(p, published_min, ev->pad_d, ev->before_d);
	ev->reserve_end_d = ev->t4_d + reserve_d(p, published_min, ev->pad_d, ev->after_d);
	ev->latest_start_d = ev->t1_d - p->limits.value[LIM_MIN_BASELINE] * MIN_D;
	if (ev->t4_d < 0.0 || ev->t1_d >= tn->night->length_d)
		ev->flags |= FLAG_BIT(FLAG_OTHER_NIGHT);
	else if (ev->t1_d < 0.0 || ev->t4_d > tn->night->length_d)
		ev->flags |= FLAG_BIT(FLAG_CROSSES_NOON);
}

static double airmass_at(const struct target_night *tn, double t_d)
{
	return airmass_young(night_star_altaz(tn->night, &tn->star, t_d).alt_deg);
}

static void make_sky(struct window *w, const struct target_night *tn)
{
	const struct night *n = tn->night;
	struct window_event *ev = &w->event;
	struct window_sky *sky = &w->sky;
	const double t = ev->mid_d;
	const struct altaz star = night_star_altaz(n, &tn->star, t);
	sky->alt_mid_deg = star.alt_deg;
	sky->az_mid_deg = star.az_north_deg;
	sky->airmass_start = airmass_at(tn, ev->reserve_start_d);
	sky->airmass_mid = airmass_young(star.alt_deg);
	sky->airmass_end = airmass_at(tn, ev->reserve_end_d);
	sky->airmass_min = NAN; /* of the usable part: with the cover */
	sky->sun_alt_mid_deg = night_sun_altaz(n, t).alt_deg;
	sky->sun_sep_deg = night_sun_sep_deg(n, &tn->star, t);
	sky->moon_alt_deg = night_moon_altaz(n, t).alt_deg;
	sky->moon_sep_deg = night_moon_sep_deg(n, &tn->star, t);
	sky->moon_lit = night_moon_lit(n, t);
	sky->sky_mag_arcsec2 = NAN;
	if (intervals_overlap(&n->sun_up, ev->reserve_start_d, ev->reserve_end_d) > 0.0) {
		ev->flags |= FLAG_BIT(FLAG_SUN_UP);
		if (sky->sun_sep_deg < SUN_NEAR_DEG)
			ev->flags |= FLAG_BIT(FLAG_SUN_NEAR);
	}
}

static void make_usable(struct window *w, const struct target_night *tn, enum stage stage)
{
	window_make_cover(w, tn);
	if (stage >= STAGE_CHANCE)
		window_make_chance(w, tn);
}

/* The flip hangs on the contacts: the sets that it cuts are the window's own, and only a window with one pays
 * for them. */
bool window_cut_by_flip(const struct window_event *ev, const struct target_night *tn,
			struct target_night *cut, double *flip_d)
{
	struct flip flip;
	if (!tn->night->telescope || !window_flip(ev, tn, &flip))
		return false;
	const struct intervals gap = intervals_one(flip.from_d, flip.to_d);
	*cut = *tn;
	cut->has_flip = true;
	cut->flip = intervals_outside(&gap, 0.0, tn->night->length_d);
	cut->limb = intervals_and(&tn->limb, &cut->flip);
	cut->baseline = intervals_and(&tn->baseline, &cut->flip);
	*flip_d = flip.from_d;
	return true;
}

void window_make(struct window *w, const struct target_night *tn, enum event_kind kind, long epoch,
		 enum stage stage)
{
	struct target_night cut;
	memset(w, 0, sizeof *w);
	make_event(&w->event, tn, kind, epoch);
	w->chance = (struct window_chance){NAN, NAN, NAN, NAN};
	w->forecast = forecast_none();
	if (stage >= STAGE_SKY)
		make_sky(w, tn);
	if (stage >= STAGE_COVER)
		make_usable(w, window_cut_by_flip(&w->event, tn, &cut, &w->forecast.flip_d) ? &cut : tn,
			    stage);
	if (stage >= STAGE_FORECAST)
		window_make_forecast(w, tn);
}
