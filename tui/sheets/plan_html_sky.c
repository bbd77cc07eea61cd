/* SPDX-License-Identifier: MIT */
#include "tui/sheets/plan_html_sky.h"

#include "ephem/number_text.h"
#include "ephem/units.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#define MARGIN_D (20.0 / DAY_MIN)

static void widen(struct plan_sky *s, double from_d, double to_d)
{
	if (isfinite(from_d))
		s->from_d = fmin(s->from_d, from_d - MARGIN_D / 4.0);
	if (isfinite(to_d))
		s->to_d = fmax(s->to_d, to_d + MARGIN_D / 4.0);
}

static void span(const struct plan_view *v, struct plan_sky *s)
{
	const struct night *n = &v->night->night;
	const struct night_times *t = &n->times;
	const bool usual = isfinite(t->sunset_d) && isfinite(t->sunrise_d) && t->sunset_d < t->sunrise_d;
	s->from_d = usual ? t->sunset_d - MARGIN_D : 0.0;
	s->to_d = usual ? t->sunrise_d + MARGIN_D : n->length_d;
	for (size_t i = 0; i < v->n_items; i++) {
		const struct plan_item_view *item = &v->item[i];
		if (!item->in_day)
			widen(s, night_of_utc(n, item->slew_by), night_of_utc(n, item->end));
	}
	for (size_t i = 0; i < v->n_blocks; i++)
		widen(s, night_of_utc(n, v->block[i].from), night_of_utc(n, v->block[i].to));
	s->from_d = fmax(s->from_d, -0.5);
	s->to_d = fmin(s->to_d, 1.5);
}

/* Zones are off UTC by whole quarters of an hour: every whole hour of either clock is one of these moments.
 */
static void ticks(const struct plan_view *v, struct plan_sky *s)
{
	const struct night *n = &v->night->night;
	const struct zone *zone = v->run->zone;
	struct utc t = night_utc(n, s->from_d);
	int offset_s = zone_local(zone, t).offset_s;
	s->change_d = (double)NAN;
	for (t.sod_s = 900.0 * floor(t.sod_s / 900.0);; t.sod_s += 900.0) {
		if (t.sod_s >= DAY_S - 1.0)
			t = (struct utc){t.mjd + 1, 0.0};
		const double t_d = night_of_utc(n, t);
		if (t_d > s->to_d)
			return;
		if (t_d < s->from_d)
			continue;
		const struct local_time l = zone_local(zone, t);
		if (l.offset_s != offset_s)
			s->change_d = t_d;
		offset_s = l.offset_s;
		if (fmod(l.sod_s, 3600.0) < 1.0 && s->n_local < SKY_TICKS_MAX)
			s->local[s->n_local++] = (struct sky_tick){t_d, (int)(l.sod_s / 3600.0)};
		if (fmod(t.sod_s, 3600.0) < 1.0 && s->n_utc < SKY_TICKS_MAX)
			s->utc[s->n_utc++] = (struct sky_tick){t_d, (int)(t.sod_s / 3600.0)};
	}
}

/* The altitude limit that the plan was made with, else the run's. */
static double altitude_limit(const struct plan_view *v)
{
	const char *key = limit_rules[LIM_ALT].key, *at = v->limits ? v->limits : "";
	const size_t n = strlen(key);
	for (; *at; at += strcspn(at, "\t"), at += *at == '\t') {
		const size_t length = strcspn(at, "\t");
		double value;
		struct err e;
		if (length > n && strncmp(at, key, n) == 0 && at[n] == '=' &&
		    number_parse(at + n + 1, length - n - 1, &value, NULL, &e) == ST_OK)
			return value;
	}
	return v->run->limits.value[LIM_ALT];
}

static bool same_star(const struct plan_member_view *a, const struct plan_member_view *b)
{
	return fabs(a->ra_deg - b->ra_deg) < 1e-9 && fabs(a->dec_deg - b->dec_deg) < 1e-9;
}

/* Which items share a star with an earlier one, and so its track. */
static void choose_tracks(const struct plan_view *v, struct plan_sky *s)
{
	for (size_t i = 0; i < v->n_items; i++) {
		const struct plan_item_view *item = &v->item[i];
		s->track[i] = SIZE_MAX;
		if (item->in_day || item->n == 0 || !isfinite(item->member[0].ra_deg) ||
		    !isfinite(item->member[0].dec_deg))
			continue;
		for (size_t k = 0; k < i && s->track[i] == SIZE_MAX; k++)
			if (s->track[k] != SIZE_MAX && same_star(&v->item[k].member[0], &item->member[0]))
				s->track[i] = s->track[k];
		if (s->track[i] == SIZE_MAX)
			s->track[i] = s->tracks++;
	}
}

/* `FROM/TO,FROM/TO`; what can't be read is left out. */
static void read_usable(const struct night *n, const char *text, struct intervals *out)
{
	*out = intervals_none();
	for (const char *at = text; *at; at += *at == ',') {
		char part[2][UTC_TEXT_MAX];
		struct utc t[2];
		struct err e;
		bool good = true;
		for (int k = 0; k < 2; k++) {
			const size_t length = strcspn(at, k == 0 ? "/," : ",");
			snprintf(part[k], sizeof part[k], "%.*s", (int)fmin((double)length, UTC_TEXT_MAX),
				 at);
			good = good && utc_parse(n->clock.leap, part[k], &t[k], &e) == ST_OK;
			at += length;
			at += k == 0 && *at == '/';
		}
		if (good && (out->n == 0 || night_of_utc(n, t[0]) >= out->s[out->n - 1].to_d))
			intervals_append(out, night_of_utc(n, t[0]), night_of_utc(n, t[1]));
	}
}

static bool usable_parts(const struct plan_view *v, struct plan_sky *s)
{
	size_t members = 0;
	s->first_member = calloc(v->n_items + 1, sizeof *s->first_member);
	for (size_t i = 0; s->first_member && i < v->n_items; i++) {
		s->first_member[i] = members;
		members += v->item[i].n;
	}
	s->usable = calloc(members + 1, sizeof *s->usable);
	if (!s->first_member || !s->usable)
		return false;
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++)
			read_usable(&v->night->night, v->item[i].member[k].usable,
				    &s->usable[s->first_member[i] + k]);
	return true;
}

static void sample(const struct plan_view *v, struct plan_sky *s)
{
	const struct night *n = &v->night->night;
	size_t done = 0;
	for (size_t k = 0; k < s->samples; k++)
		s->moon_alt_deg[k] = night_moon_altaz(n, s->from_d + (double)k * s->step_d).alt_deg;
	for (size_t i = 0; i < v->n_items; i++) {
		if (s->track[i] == SIZE_MAX || s->track[i] < done)
			continue;
		struct target target = target_empty();
		target.ra_deg = v->item[i].member[0].ra_deg;
		target.dec_deg = v->item[i].member[0].dec_deg;
		const struct star star = night_star(n, &target);
		double *alt_deg = s->alt_deg + done++ * s->samples;
		for (size_t k = 0; k < s->samples; k++)
			alt_deg[k] = night_star_altaz(n, &star, s->from_d + (double)k * s->step_d).alt_deg;
	}
}

bool plan_sky_prepare(const struct plan_view *v, struct plan_sky *s)
{
	static const double level_deg[SUN_LEVELS] = {-50.0 / 60.0, -6.0, -12.0, -18.0};
	*s = (struct plan_sky){.samples = 0};
	span(v, s);
	ticks(v, s);
	for (int i = 0; i < SUN_LEVELS; i++)
		s->sun[i] = night_sun_below(&v->night->night, level_deg[i]);
	s->alt_limit_deg = altitude_limit(v);
	s->samples = 1 + (size_t)ceil((s->to_d - s->from_d) * DAY_MIN / SKY_STEP_MIN);
	s->step_d = (s->to_d - s->from_d) / (double)(s->samples - 1);
	s->track = calloc(v->n_items + 1, sizeof *s->track);
	s->moon_alt_deg = calloc(s->samples, sizeof *s->moon_alt_deg);
	if (s->track && s->moon_alt_deg) {
		choose_tracks(v, s);
		s->alt_deg = calloc((s->tracks + 1) * s->samples, sizeof *s->alt_deg);
	}
	if (!s->alt_deg || !usable_parts(v, s)) {
		plan_sky_free(s);
		return false;
	}
	sample(v, s);
	return true;
}

void plan_sky_free(struct plan_sky *s)
{
	free(s->track);
	free(s->moon_alt_deg);
	free(s->alt_deg);
	free(s->first_member);
	free(s->usable);
	*s = (struct plan_sky){.samples = 0};
}
