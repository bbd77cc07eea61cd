/* SPDX-License-Identifier: MIT */
#include "tui/field_light.h"

#include "ephem/bands.h"
#include "ephem/star_field.h"
#include "ephem/units.h"
#include "ephem/vec3.h"

#include <math.h>
#include <string.h>

double field_aperture_arcsec(const struct optics *o)
{
	return o->aperture_px * o->pixel_arcsec;
}

double field_star_sep_arcsec(const struct target *t, const struct field_star *f)
{
	if (!isnan(f->sep_arcsec))
		return f->sep_arcsec;
	const struct vec3 a = vec3_from_angles(t->ra_deg * DEG_RAD, t->dec_deg * DEG_RAD),
			  b = vec3_from_angles(f->ra_deg * DEG_RAD, f->dec_deg * DEG_RAD);
	return vec3_angle_rad(a, b) / DEG_RAD * 3600.0;
}

/* --- light --- */

/* Light of a star over the target's. */
static double ratio(const struct target *t, const struct field_star *f, enum band_id observed, bool *assumed)
{
	const enum band_id of = band_parse(f->band), mine = band_parse(t->band);
	double mag = t->mag;
	if (of != BAND_NONE && of == mine) {
		*assumed = *assumed || of != observed;
	} else if (of != BAND_NONE && of == observed) {
		const struct band_mag there = photometry_mag(t->mag, mine, observed, t->teff_k);
		*assumed = *assumed || there.assumed || isnan(there.mag);
		if (!isnan(there.mag))
			mag = there.mag;
	} else {
		*assumed = true;
	}
	return pow(10.0, -0.4 * (f->mag - mag));
}

static bool same_place(const struct field_star *a, const struct field_star *b)
{
	if (a->role != b->role || isnan(a->sep_arcsec) != isnan(b->sep_arcsec))
		return false;
	if (!isnan(a->sep_arcsec))
		return !(a->sep_arcsec < b->sep_arcsec || a->sep_arcsec > b->sep_arcsec) &&
		       strcmp(a->name, b->name) == 0 && a->name[0];
	return !(a->ra_deg < b->ra_deg || a->ra_deg > b->ra_deg || a->dec_deg < b->dec_deg ||
		 a->dec_deg > b->dec_deg);
}

static int rank(const struct target *t, const struct field_star *f, enum band_id observed)
{
	const enum band_id band = band_parse(f->band);
	return band == BAND_NONE ? 0 : band == observed ? 3 : band == band_parse(t->band) ? 2 : 1;
}

/* Whether this magnitude of the star stands for it. */
static bool stands(const struct target *t, const struct field_star star[], size_t n, size_t i,
		   enum band_id observed)
{
	const int mine = rank(t, &star[i], observed);
	for (size_t k = 0; k < n; k++) {
		if (k == i || !same_place(&star[k], &star[i]))
			continue;
		const int other = rank(t, &star[k], observed);
		if (other > mine || (other == mine && k < i))
			return false;
	}
	return true;
}

struct field_light field_light_of(const struct target *t, const struct field_star star[], size_t n,
				  const struct optics *o)
{
	struct field_light out = {.comparison_stars = (double)NAN, .comparison_count = (double)NAN};
	double comparison = 0.0, squares = 0.0;
	int comparisons = 0;
	for (size_t i = 0; i < n; i++) {
		const struct field_star *f = &star[i];
		if (f->role == STAR_GUIDE || !stands(t, star, n, i, o->band))
			continue;
		if (f->role == STAR_COMPARISON) {
			const double light = ratio(t, f, o->band, &out.assumed);
			comparison += light;
			squares += light * light;
			comparisons++;
		} else if (field_star_sep_arcsec(t, f) <= field_aperture_arcsec(o)) {
			out.neighbour += ratio(t, f, o->band, &out.assumed);
			out.neighbours++;
		}
	}
	if (comparisons > 0)
		out.comparison_stars = comparison;
	if (squares > 0.0)
		out.comparison_count = comparison * comparison / squares;
	return out;
}

/* --- the field --- */

struct field_fit field_fit_of(const struct target *t, const struct field_star star[], size_t n,
			      double field_arcmin)
{
	struct plane_point p[FIELD_POINTS_MAX] = {{0.0, 0.0}};
	struct field_fit out = {.ra_deg = t->ra_deg, .dec_deg = t->dec_deg, .known = field_arcmin > 0.0};
	int points = 1;
	bool apart = false;
	for (size_t i = 0; i < n; i++) {
		if (star[i].role == STAR_NEIGHBOUR)
			continue;
		out.stars++;
		if (points == FIELD_POINTS_MAX)
			continue;
		if (plane_of_sky(t->ra_deg, t->dec_deg, star[i].ra_deg, star[i].dec_deg, &p[points]))
			points++;
		else
			apart = true;
	}
	const struct field_circle c = smallest_circle(p, points);
	sky_of_plane(t->ra_deg, t->dec_deg, c.centre, &out.ra_deg, &out.dec_deg);
	out.needs_arcmin = apart ? (double)INFINITY : 2.0 * c.radius;
	out.fits = out.known && out.needs_arcmin <= field_arcmin;
	return out;
}
