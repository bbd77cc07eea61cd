/* SPDX-License-Identifier: MIT */
#include "ephem/plan_pointing.h"

#include "ephem/stars.h"
#include "ephem/units.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum { TABLE_MAX = 512 }; /* pointings in the table of gaps: 2 MB */

const struct prepared *plan_star_of(const struct prepared *p)
{
	const struct prepared *first = p;
	for (const struct prepared *q = p->sibling; q && q != p; q = q->sibling)
		if (strcmp(q->target->name, first->target->name) < 0)
			first = q;
	return first;
}

struct vec3 plan_direction(const struct night *night, const struct prepared *p)
{
	return night_star(night, plan_star_of(p)->target).icrs;
}

double plan_move_d(const struct plan_rules *rules, struct vec3 from, struct vec3 to)
{
	return rules->settle_d + vec3_angle_rad(from, to) / DEG_RAD / rules->slew_deg_d;
}

/* By the chord: it is asked for every pair of a crowded field. */
static bool in_one_field(const struct plan_rules *rules, struct vec3 a, struct vec3 b, bool catalogue)
{
	double field_rad = rules->field_deg > 0.0 ? rules->field_deg * DEG_RAD : 0.0;
	if (catalogue)
		field_rad = fmax(field_rad, POSITION_DOUBT_ARCSEC * ARCSEC_RAD);
	const struct vec3 apart = vec3_sub(a, b);
	const double chord = 2.0 * sin(0.5 * fmin(field_rad, PI));
	return vec3_dot(apart, apart) <= chord * chord;
}

double plan_gap_between_d(const struct plan_rules *rules, struct vec3 a, struct vec3 b, bool catalogue)
{
	return in_one_field(rules, a, b, catalogue) ? 0.0 : plan_move_d(rules, a, b);
}

struct planet {
	const struct prepared *star;
	size_t offer;
};

static int by_star(const void *left, const void *right)
{
	const struct planet *a = left, *b = right;
	if (a->star != b->star)
		return (uintptr_t)a->star < (uintptr_t)b->star ? -1 : 1;
	return (a->offer > b->offer) - (a->offer < b->offer);
}

static enum band_id band_wanted(const struct plan_input *in, const struct window *w)
{
	const struct observed *o = w->event.prepared->observed;
	const double jd = jd2_value(w->event.mid_bjd.jd);
	for (size_t i = 0; o && i < o->n_goals; i++)
		if (o->goal[i].band != BAND_NONE && goal_open(&o->goal[i], o->goal[i].band, jd))
			return o->goal[i].band;
	return in->night->observing ? in->night->observing->optics.band : BAND_NONE;
}

static void number_stars(const struct plan_input *in, struct planet *planet, struct plan_pointings *out)
{
	for (size_t i = 0; i < in->n; i++)
		planet[i] = (struct planet){plan_star_of(in->offer[i].window->event.prepared), i};
	qsort(planet, in->n, sizeof *planet, by_star);
	for (size_t i = 0, first = 0; i < in->n; i++) {
		if (planet[i].star != planet[first].star)
			first = i;
		out->star[planet[i].offer] = planet[first].offer;
	}
	for (size_t i = 0; i < in->n; i++) {
		const size_t star = out->star[i];
		if (star == i) {
			out->direction[i] = plan_direction(in->night, in->offer[i].window->event.prepared);
			out->band[i] = band_wanted(in, in->offer[i].window);
			out->place[i] = (uint32_t)out->n_places++;
		} else { /* the lowest offer of the star comes before it */
			out->direction[i] = out->direction[star];
			out->band[i] = out->band[star];
			out->place[i] = out->place[star];
		}
	}
	for (size_t i = 0; i < in->n_fixed; i++) {
		out->direction[in->n + i] = in->fixed[i].direction;
		out->band[in->n + i] = BAND_NONE; /* what is on it nobody says */
		out->place[in->n + i] = (uint32_t)out->n_places++;
	}
}

enum status plan_pointings_make(const struct plan_input *in, struct plan_pointings *out, struct err *e)
{
	const size_t all = in->n + in->n_fixed;
	*out = (struct plan_pointings){.n = in->n, .n_fixed = in->n_fixed, .rules = in->rules};
	struct planet *planet = malloc((in->n + 1) * sizeof *planet);
	out->star = malloc((in->n + 1) * sizeof *out->star);
	out->direction = malloc((all + 1) * sizeof *out->direction);
	out->place = malloc((all + 1) * sizeof *out->place);
	out->band = malloc((all + 1) * sizeof *out->band);
	if (!planet || !out->star || !out->direction || !out->place || !out->band)
		goto no_memory;
	number_stars(in, planet, out);
	free(planet);
	return ST_OK;
no_memory:
	free(planet);
	plan_pointings_free(out);
	return err_set(e, ST_MEMORY, "no memory for the pointings of %zu windows", in->n);
}

void plan_pointings_keep_gaps(struct plan_pointings *p)
{
	const size_t n = p->n_places * p->n_places;
	if (p->n_places > TABLE_MAX)
		return;
	p->gap_d = malloc((n + 1) * sizeof *p->gap_d);
	for (size_t i = 0; p->gap_d && i < n; i++)
		p->gap_d[i] = NAN;
}

void plan_pointings_free(struct plan_pointings *p)
{
	free(p->star);
	free(p->direction);
	free(p->place);
	free(p->band);
	free(p->gap_d);
	*p = (struct plan_pointings){0};
}

bool plan_pointings_share(const struct plan_pointings *p, size_t a, size_t b)
{
	return p->place[a] == p->place[b] ||
	       (!plan_pointings_other_filter(p, a, b) &&
		in_one_field(p->rules, p->direction[a], p->direction[b], a >= p->n || b >= p->n));
}

bool plan_pointings_other_filter(const struct plan_pointings *p, size_t a, size_t b)
{
	return p->band[a] != BAND_NONE && p->band[b] != BAND_NONE && p->band[a] != p->band[b];
}

double plan_pointings_gap_d(const void *ctx, int from_class, int to_class)
{
	const struct plan_pointings *p = ctx;
	const size_t a = (size_t)from_class, b = (size_t)to_class;
	if (p->place[a] == p->place[b] || (a >= p->n && b >= p->n))
		return 0.0;
	double *kept_d = p->gap_d ? &p->gap_d[p->place[a] * p->n_places + p->place[b]] : NULL;
	if (kept_d && !isnan(*kept_d))
		return *kept_d;
	double gap_d = plan_gap_between_d(p->rules, p->direction[a], p->direction[b], a >= p->n || b >= p->n);
	if (plan_pointings_other_filter(p, a, b))
		gap_d += p->rules->filter_d;
	if (kept_d)
		*kept_d = gap_d;
	return gap_d;
}
