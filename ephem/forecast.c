/* SPDX-License-Identifier: MIT */
#include "ephem/forecast.h"

#include "ephem/drift.h"
#include "ephem/forecast_parts.h"
#include "ephem/night_plan.h"
#include "ephem/units.h"

#include <math.h>

struct window_forecast forecast_none(void)
{
	return (struct window_forecast){.flip_d = NAN,
					.exposure_s = NAN,
					.noise_ppt_min = NAN,
					.depth_snr = NAN,
					.timing_s = NAN,
					.gain_bits = NAN,
					.sigma_after_min = NAN,
					.worth = NAN,
					.bits_whole = NAN,
					.bits_ingress = NAN,
					.bits_egress = NAN,
					.basis = BASIS_NONE,
					.event_value = NAN,
					.band = BAND_NONE};
}

/* Assumptions that change the noise by more than some percent. */
#define OPTICS_THAT_MATTER (~(uint32_t)(OPTICS_GAIN | OPTICS_DARK | OPTICS_FOCUS))

#define FORECAST_FLAGS                                                                                       \
	(FLAG_BIT(FLAG_MAGNITUDE_UNKNOWN) | FLAG_BIT(FLAG_MAGNITUDE_ASSUMED) |                               \
	 FLAG_BIT(FLAG_DEPTH_UNKNOWN) | FLAG_BIT(FLAG_SATURATED) | FLAG_BIT(FLAG_EXPOSURE_LONG) |            \
	 FLAG_BIT(FLAG_NEIGHBOUR_DILUTED) | FLAG_BIT(FLAG_SKY_ASSUMED) | FLAG_BIT(FLAG_OPTICS_ASSUMED))

static void make_flags(struct forecast_explain *x, const struct observing *o)
{
	if (isnan(x->mag.mag))
		x->flags |= FLAG_BIT(FLAG_MAGNITUDE_UNKNOWN);
	else if (x->mag.assumed)
		x->flags |= FLAG_BIT(FLAG_MAGNITUDE_ASSUMED);
	if (isnan(x->depth_ppt))
		x->flags |= FLAG_BIT(FLAG_DEPTH_UNKNOWN);
	if (x->neighbour > 0.0)
		x->flags |= FLAG_BIT(FLAG_NEIGHBOUR_DILUTED);
	if (isnan(o->dark_zenith_mag[bands[x->band].sky]))
		x->flags |= FLAG_BIT(FLAG_SKY_ASSUMED);
	if (x->optics.assumed & OPTICS_THAT_MATTER)
		x->flags |= FLAG_BIT(FLAG_OPTICS_ASSUMED);
}

/* Nothing of an event that can't be caught is expected, whatever its precision. */
static struct worth_case worth_case_of(const struct forecast_case *c)
{
	return (struct worth_case){c->chance, c->timing_s};
}

static void make_information(struct forecast_explain *x, const struct window *w, const struct observing *o)
{
	const struct window_event *ev = &w->event;
	const struct prepared *p = ev->prepared;
	const struct ephemeris *eph = &p->eph;
	struct worth_input in = {.eph = eph,
				 .epoch = ev->epoch,
				 .c = {[CATCH_WHOLE] = worth_case_of(&x->whole),
				       [CATCH_INGRESS] = worth_case_of(&x->ingress),
				       [CATCH_EGRESS] = worth_case_of(&x->egress)},
				 .depth_snr = x->depth_snr,
				 .priority = p->target->priority,
				 .goal = p->observed ? p->observed->goal : NULL,
				 .n_goals = p->observed ? p->observed->n_goals : 0,
				 .band = x->band,
				 .jd = jd2_value(ev->mid_bjd.jd)};
	const struct tdb at = {.jd = jd2_normal(o->at_jd_tdb, 0.0)};
	const bool dated = isfinite(o->at_jd_tdb) && ephemeris_nearest(eph, at, &x->at_epoch);
	in.at_epoch = dated ? x->at_epoch : ev->epoch;
	struct worth_rules rules = o->rules;
	rules.choice = WORTH_BITS; /* the others stand on chance: plan_worth */
	const struct worth got = worth_of(&in, &rules);
	x->open = open_goals_of(p->observed, x->band, in.jd);
	x->priority = isnan(in.priority) ? 1.0 : fmax(in.priority, 0.0);
	x->published_min = ephemeris_published_d(eph, ev->epoch) * DAY_MIN;
	x->need_min = rules.need_min;
	x->floor_min = rules.floor_min;
	x->ttv_min = sqrt(0.5) * eph->ttv_min;
	x->systematic_min = eph->systematic_min;
	x->precision_min = worth_precision_min(eph, x->whole.timing_s, &o->rules);
	x->gain_bits = got.gain_bits;
	x->sigma_at_min = dated ? drift_sigma_min(eph, x->at_epoch) : NAN;
	x->sigma_after_min = dated && !isnan(got.gain_bits) ? got.sigma_after_min : NAN;
	x->basis = BASIS_EVENT;
	x->event_value = o->fallback_bits;
	if (o->rules.choice == WORTH_PRIORITY)
		x->event_value = 1.0;
	else if (o->rules.choice == WORTH_DEPTH && !isnan(x->depth_snr))
		x->event_value = x->depth_snr;
	else if (o->rules.choice == WORTH_BITS && !isnan(got.gain_bits)) {
		x->basis = BASIS_BITS;
		x->worth = fmax(got.worth, 0.0);
	} else if (o->rules.choice == WORTH_BITS)
		/* what is known too well earns no more for the lack of a magnitude */
		x->event_value = fmin(x->event_value, worth_bits(eph, ev->epoch, 0.0, &o->rules));
}

bool forecast_explain(struct window *w, const struct target_night *tn, struct forecast_explain *x)
{
	const struct observing *o = tn->night->observing;
	struct window_forecast *f = &w->forecast;
	struct target_night cut;
	double flip_d;
	if (!o)
		return false;
	x->flags = 0;
	x->white_snr = x->depth_snr = x->worth = NAN;
	x->at_epoch = 0;
	forecast_make_noise(x, w, tn);
	forecast_make_cases(
	    x, w, !isnan(f->flip_d) && window_cut_by_flip(&w->event, tn, &cut, &flip_d) ? &cut : tn);
	make_flags(x, o);
	make_information(x, w, o);
	w->event.flags = (w->event.flags & ~FORECAST_FLAGS) | x->flags;
	w->sky.sky_mag_arcsec2 = x->mid.sky.mag_arcsec2;
	f->exposure_s = x->exposure_s;
	f->noise_ppt_min = x->noise_ppt_min;
	f->depth_snr = x->depth_snr;
	f->timing_s = x->timing_s;
	f->gain_bits = x->gain_bits;
	f->sigma_after_min = x->sigma_after_min;
	f->bits_whole = x->whole.bits;
	f->bits_ingress = x->ingress_alone.bits;
	f->bits_egress = x->egress_alone.bits;
	f->basis = x->basis;
	f->event_value = x->event_value;
	f->band = x->band;
	f->worth = x->worth;
	if (x->basis != BASIS_BITS) {
		const struct plan_rules rules = {.unknown_share = o->unknown_share};
		f->worth = x->worth = plan_worth(w, &rules);
	}
	return true;
}

void window_make_forecast(struct window *w, const struct target_night *tn)
{
	struct forecast_explain x;
	if (forecast_explain(w, tn, &x))
		return;
	const struct plan_rules rules = plan_rules_built_in();
	w->forecast.worth = plan_worth(w, &rules);
}
