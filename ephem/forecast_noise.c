/* SPDX-License-Identifier: MIT
 * Noise along a window. */
#include "ephem/forecast_parts.h"

#include "ephem/limb.h"
#include "ephem/units.h"

#include <math.h>

/* Steps between nodes: in the dark airmass and Moon change slowly, in twilight the sky by a magnitude in 4
 * deg of the Sun. Against steps of 4 minutes the noise is within 3 %, in twilight 5 %. */
#define STEP_DARK_D (24.0 * MIN_D)
#define STEP_TWILIGHT_D (6.0 * MIN_D)
#define TWILIGHT_NEAR_DEG (-24.0) /* within a step of twilight */
/* The Moon's light sets in and ends at once, in its model, when the centre is at 0 deg: nodes on both sides.
 */
#define JUMP_D (0.01 * MIN_D)
enum { STOPS_MAX = 4, SPANS_WHOLE_MAX = 12 /* more of them are taken as one */ };

struct light {
	const struct night *night;
	const struct star *star;
	const struct observing *observing;
	enum band_id band;
};

static struct forecast_moment moment_at(const struct light *l, double t_d)
{
	const struct night *n = l->night;
	const struct observing *o = l->observing;
	const struct night_light sky = night_light_at(n, t_d);
	struct forecast_moment m = {.t_d = t_d,
				    .sun_alt_deg = sky.sun_alt_deg,
				    .moon_alt_deg = sky.moon_alt_deg,
				    .moon_sep_deg = NAN,
				    .moon_phase_deg = NAN};
	m.alt_deg = night_star_altaz(n, l->star, t_d).alt_deg;
	m.airmass = m.alt_deg > 0.0 ? airmass_young(m.alt_deg) : NAN;
	if (m.moon_alt_deg > 0.0) {
		m.moon_sep_deg = vec3_angle_rad(sky.moon, l->star->apparent) / DEG_RAD;
		m.moon_phase_deg = sky.moon_phase_deg;
	}
	const struct skyglow_input in = {
	    .band = l->band,
	    .zenith_deg = m.alt_deg > 0.0 ? 90.0 - m.alt_deg : NAN,
	    .sun_alt_deg = m.sun_alt_deg,
	    .moon_alt_deg = m.moon_alt_deg,
	    .moon_sep_deg = m.moon_sep_deg,
	    .moon_phase_deg = m.moon_phase_deg,
	    .extinction_mag = o->extinction_mag[l->band],
	    .dark_zenith_mag = o->dark_zenith_mag[bands[l->band].sky],
	};
	m.sky = skyglow(&in);
	return m;
}

struct skyglow forecast_sky(const struct night *n, const struct star *s, const struct observing *o,
			    enum band_id band, double t_d)
{
	const struct light l = {n, s, o, band};
	return moment_at(&l, t_d).sky;
}

static struct sight sight_of(const struct forecast_explain *x, const struct night *n,
			     const struct forecast_moment *m)
{
	return (struct sight){.mag = x->mag.mag,
			      .airmass = m->airmass,
			      .extinction_mag = x->extinction_mag,
			      .sky_mag_arcsec2 = m->sky.mag_arcsec2,
			      .neighbour = x->neighbour,
			      .height_m = n->site->height_m};
}

static void add_noise(const struct forecast_explain *x, const struct night *n, struct forecast_moment *m)
{
	const struct sight s = sight_of(x, n, m);
	m->noise = photometry_noise(&x->optics, &s, x->exposure_s);
}

/* --- nodes --- */

struct nodes {
	int n;
	struct forecast_moment at[TIMING_NODES_MAX];
	int n_stops;
	double stop_d[STOPS_MAX];  /* rising: where the light may jump */
	double twilight_d, dark_d; /* steps */
};

static void add_stop(struct nodes *k, double t_d)
{
	if (k->n_stops == STOPS_MAX)
		return;
	int i = k->n_stops++;
	for (; i > 0 && k->stop_d[i - 1] > t_d; i--)
		k->stop_d[i] = k->stop_d[i - 1];
	k->stop_d[i] = t_d;
}

/* Where the table of the night's light has the Moon at 0 deg. */
static void add_moon_stops(struct nodes *k, const struct night *n, struct span hull)
{
	const double step_d = n->length_d / (NIGHT_LIGHTS - 1);
	const int first = (int)fmin(fmax(hull.from_d / step_d, 0.0), NIGHT_LIGHTS - 1);
	const int last = (int)fmin(fmax(hull.to_d / step_d + 1.0, 0.0), NIGHT_LIGHTS - 1);
	for (int i = first; i < last; i++) {
		const double a = n->light[i].moon_alt_deg, b = n->light[i + 1].moon_alt_deg;
		if ((a > 0.0) == (b > 0.0))
			continue;
		const double t_d = step_d * (i + a / (a - b));
		add_stop(k, t_d - JUMP_D);
		add_stop(k, t_d + JUMP_D);
	}
}

static void add_span(struct nodes *k, const struct light *l, struct span s)
{
	double t_d = s.from_d;
	int stop = 0;
	while (k->n < TIMING_NODES_MAX) {
		k->at[k->n] = moment_at(l, t_d);
		const double step_d =
		    k->at[k->n++].sun_alt_deg > TWILIGHT_NEAR_DEG ? k->twilight_d : k->dark_d;
		if (t_d >= s.to_d)
			break;
		double next_d = t_d + step_d;
		while (stop < k->n_stops && k->stop_d[stop] <= t_d + 0.1 * JUMP_D)
			stop++;
		/* no crumbs; the last place is the end's */
		if (next_d > s.to_d - 0.25 * step_d)
			next_d = s.to_d;
		if (stop < k->n_stops)
			next_d = fmin(next_d, k->stop_d[stop]);
		if (k->n == TIMING_NODES_MAX - 1)
			next_d = s.to_d;
		t_d = next_d;
	}
}

/* Steps that go into the nodes that there are; how much of it is twilight, by the rows of the night's light.
 */
static void choose_steps(struct nodes *k, const struct night *n, struct span hull, double length_d, int ends)
{
	const double row_d = n->length_d / (NIGHT_LIGHTS - 1);
	double twilight_d = 0.0;
	for (int i = 0; i < NIGHT_LIGHTS; i++)
		if (i * row_d >= hull.from_d - row_d && i * row_d <= hull.to_d + row_d &&
		    n->light[i].sun_alt_deg > TWILIGHT_NEAR_DEG)
			twilight_d += row_d;
	twilight_d = fmin(twilight_d, length_d);
	const double wanted = twilight_d / STEP_TWILIGHT_D + (length_d - twilight_d) / STEP_DARK_D;
	const double wider = fmax(wanted / (TIMING_NODES_MAX - 1 - STOPS_MAX - ends), 1.0);
	k->twilight_d = wider * STEP_TWILIGHT_D;
	k->dark_d = wider * STEP_DARK_D;
}

static void make_nodes(struct nodes *k, const struct light *l, const struct intervals *usable)
{
	const bool whole = usable->n > SPANS_WHOLE_MAX;
	const struct span hull = {usable->s[0].from_d, usable->s[usable->n - 1].to_d};
	const double length_d = whole ? hull.to_d - hull.from_d : intervals_length(usable);
	k->n = k->n_stops = 0;
	choose_steps(k, l->night, hull, length_d, whole ? 2 : 2 * usable->n);
	add_moon_stops(k, l->night, hull);
	if (whole)
		add_span(k, l, hull);
	for (int i = 0; !whole && i < usable->n; i++)
		add_span(k, l, usable->s[i]);
}

/* --- light of the star --- */

static double or_zero(double x)
{
	return isnan(x) ? 0.0 : fmax(x, 0.0);
}

static void make_light(struct forecast_explain *x, const struct target *t, const struct observed *known,
		       const struct observing *o)
{
	x->optics = o->optics;
	if (!isnan(known->comparison_stars)) {
		x->optics.comparison_stars = known->comparison_stars;
		x->optics.comparison_count = or_zero(known->comparison_count);
	}
	x->band = o->optics.band;
	x->catalogue_band = band_parse(t->band);
	x->catalogue_mag = t->mag;
	x->mag = photometry_mag(t->mag, x->catalogue_band, x->band, t->teff_k);
	const double own = o->extinction_mag[x->band];
	x->extinction_mag = isnan(own) ? bands[x->band].extinction_mag : own;
	x->neighbour = or_zero(known->neighbour);
}

/* The star is brightest where it is highest: an exposure that bears that place bears the others. */
static void make_exposure(struct forecast_explain *x, const struct window *w, const struct night *n,
			  const struct nodes *k)
{
	const struct forecast_moment *high = NULL;
	for (int i = 0; i < k->n; i++)
		if (!isnan(k->at[i].sky.mag_arcsec2) && (!high || k->at[i].alt_deg > high->alt_deg))
			high = &k->at[i];
	if (!high && !isnan(x->mid.sky.mag_arcsec2))
		high = &x->mid;
	x->choice = (struct exposure_choice){.exposure_s = NAN};
	x->exposure_at_d = high ? high->t_d : NAN;
	const double limb_s = w->event.prepared->shape[w->event.kind].limb_d * DAY_S;
	if (high) {
		const struct sight s = sight_of(x, n, high);
		x->choice = photometry_exposure(&x->optics, &s, limb_s);
	}
	const double own_s = n->observing->exposure_s;
	x->exposure_given = own_s > 0.0;
	x->exposure_s = x->exposure_given ? own_s : x->choice.exposure_s;
	if (x->exposure_s > EXPOSURE_INGRESS_SHARE * limb_s)
		x->flags |= FLAG_BIT(FLAG_EXPOSURE_LONG);
}

/* --- sums --- */

/* Noise of a minute is linear between nodes: the integral of 1 / sigma^2 over a stretch is its length over
 * the product of sigma at its ends. */
double forecast_information(const struct forecast_explain *x, const struct intervals *usable, double from_d,
			    double to_d)
{
	double sum = 0.0;
	for (int i = 0; i < usable->n; i++) {
		const double lo = fmax(usable->s[i].from_d, from_d), hi = fmin(usable->s[i].to_d, to_d);
		for (int k = 0; k + 1 < x->n_nodes && hi > lo; k++) {
			const struct noise_node *a = &x->node[k], *b = a + 1;
			const double s = fmax(lo, a->t_d), e = fmin(hi, b->t_d);
			if (!(e > s) || !isfinite(a->minute_ppt) || !isfinite(b->minute_ppt))
				continue;
			const double per = (b->minute_ppt - a->minute_ppt) / (b->t_d - a->t_d);
			sum += (e - s) * DAY_MIN /
			       ((a->minute_ppt + per * (s - a->t_d)) * (a->minute_ppt + per * (e - a->t_d)));
		}
	}
	return sum;
}

/* The light that is missing from the middle of one limb to that of the other, against what is outside. */
static void make_depth(struct forecast_explain *x, const struct window *w)
{
	const struct window_event *ev = &w->event;
	const struct shape *shape = &ev->prepared->shape[ev->kind];
	const struct intervals *usable = &w->cover.usable;
	x->star_depth_ppt = shape->depth_ppt;
	if (ev->kind == KIND_TRANSIT && !(ev->prepared->target->depth_ppt > 0.0) &&
	    !isnan(shape->depth_ppt)) {
		const double darkened = 1e3 * limb_depth(shape->k, shape->b, LIMB_U1, LIMB_U2);
		if (!isnan(darkened))
			x->star_depth_ppt = darkened;
	}
	x->depth_ppt = photometry_diluted(x->star_depth_ppt, x->neighbour);
	const double from_d = ev->t1_d + 0.5 * shape->limb_d, to_d = ev->t4_d - 0.5 * shape->limb_d;
	x->in_min = intervals_overlap(usable, from_d, to_d) * DAY_MIN;
	x->out_min = (intervals_length(usable) - intervals_overlap(usable, ev->t1_d, ev->t4_d)) * DAY_MIN;
	if (isnan(x->mag.mag) || isnan(x->depth_ppt))
		return;
	const double in = forecast_information(x, usable, from_d, to_d);
	const double out = forecast_information(x, usable, -INFINITY, ev->t1_d) +
			   forecast_information(x, usable, ev->t4_d, INFINITY);
	x->white_snr = photometry_depth_snr(x->depth_ppt, 1.0, in, out, 0.0);
	x->depth_snr = photometry_depth_snr(x->depth_ppt, 1.0, in, out, x->optics.red_noise_ppt);
}

void forecast_make_noise(struct forecast_explain *x, const struct window *w, const struct target_night *tn)
{
	const struct night *n = tn->night;
	const struct observed unknown = observed_unknown(), *known = tn->prepared->observed;
	const struct intervals *usable = &w->cover.usable;
	struct nodes k;
	make_light(x, tn->prepared->target, known ? known : &unknown, n->observing);
	const struct light l = {n, &tn->star, n->observing, x->band};
	x->mid = moment_at(&l, w->event.mid_d);
	k.n = 0;
	if (usable->n > 0)
		make_nodes(&k, &l, usable);
	make_exposure(x, w, n, &k);
	add_noise(x, n, &x->mid);
	x->star_e_s = photometry_rate_e_s(&x->optics, x->mag.mag, x->mid.airmass, x->extinction_mag);
	x->n_nodes = k.n;
	for (int i = 0; i < k.n; i++) {
		add_noise(x, n, &k.at[i]);
		x->node[i] = (struct noise_node){k.at[i].t_d, k.at[i].noise.minute_ppt};
		if (k.at[i].noise.saturated)
			x->flags |= FLAG_BIT(FLAG_SATURATED);
	}
	const double all = forecast_information(x, usable, -INFINITY, INFINITY);
	double seen_min = 0.0; /* usable, and noise known */
	for (int i = 0; i + 1 < k.n; i++)
		if (isfinite(x->node[i].minute_ppt) && isfinite(x->node[i + 1].minute_ppt))
			seen_min += intervals_overlap(usable, x->node[i].t_d, x->node[i + 1].t_d) * DAY_MIN;
	x->noise_ppt_min = all > 0.0 ? sqrt(seen_min / all) : NAN;
	make_depth(x, w);
}

int forecast_table(const struct target_night *tn, const struct forecast_explain *x, double from_d,
		   double to_d, double step_min, struct forecast_moment out[], int room)
{
	const struct light l = {tn->night, &tn->star, tn->night->observing, x->band};
	int n = 0;
	for (; n < room && step_min > 0.0; n++) {
		const double t_d = from_d + n * step_min * MIN_D;
		if (t_d > to_d + 1e-9)
			break;
		out[n] = moment_at(&l, t_d);
		add_noise(x, tn->night, &out[n]);
	}
	return n;
}
