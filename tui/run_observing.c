/* SPDX-License-Identifier: MIT
 * What a forecast needs of telescope, site, team and targets, from the store. */
#include "tui/run_parts.h"

#include "db/stored_settings.h"
#include "ephem/night_plan.h"
#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/diagnose.h"
#include "tui/field_light.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* --- lists --- */

static void say_bad(const struct run *r, size_t n_bad, const char *bad)
{
	if (n_bad > 0)
		diagnose("store", "%s: %s", r->db_path, bad);
}

enum status run_load_observing(struct run *r, struct err *e)
{
	struct err why;
	stored_values_load(r->store, &r->stored);
	if (!r->store)
		return ST_OK;
	enum status s = goals_load(r->store, &r->goals, &why);
	if (s == ST_OK && r->goals.n > 0)
		s = goals_got_load(r->store, &r->got, &why);
	if (s == ST_OK)
		s = field_stars_load(r->store, &r->stars, &why);
	if (s != ST_OK)
		return err_set(e, s, "store: %.460s", why.text);
	say_bad(r, r->goals.n_bad, r->goals.bad);
	say_bad(r, r->got.n_bad, r->got.bad);
	say_bad(r, r->stars.n_bad, r->stars.bad);
	return ST_OK;
}

void run_drop_observing(struct run *r)
{
	goal_list_free(&r->goals);
	goal_got_list_free(&r->got);
	field_star_list_free(&r->stars);
	free(r->observed);
	free(r->wish);
	r->observed = NULL;
	r->wish = NULL;
}

/* --- telescope, site, team --- */

void run_site_key(enum site_key kind, int64_t site_id, enum band_id band, char out[SITE_KEY_BYTES])
{
	static const char *const words[] = {"sky", "extinction", "telescope"};
	if (kind == SITE_TELESCOPE)
		snprintf(out, SITE_KEY_BYTES, "%s:%lld", words[kind], (long long)site_id);
	else
		snprintf(out, SITE_KEY_BYTES, "%s:%lld:%s", words[kind], (long long)site_id,
			 bands[band].name);
}

double run_site_value(const struct run *r, enum site_key kind, int64_t site_id, enum band_id band)
{
	char key[SITE_KEY_BYTES], text[STORED_SETTING_MAX + 1];
	double value = (double)NAN;
	struct err e;
	if (!r->store || site_id == 0)
		return value;
	run_site_key(kind, site_id, band, key);
	enum status s = stored_setting(r->store, key, text, &e);
	if (s == ST_OK && text[0])
		s = number_parse(text, strlen(text), &value, NULL, &e);
	if (s != ST_OK)
		diagnose("store", "%s: setting %s: %.300s; what is built in is used", r->db_path, key,
			 e.text);
	return s == ST_OK ? value : (double)NAN;
}

void run_take_observing(struct run *r)
{
	const struct stored_values *v = &r->stored;
	struct observing o = observing_of(&r->telescope);
	for (int b = 0; b < BAND_COUNT; b++) {
		if (b < BAND_SKY_COUNT)
			o.dark_zenith_mag[b] = run_site_value(r, SITE_SKY, r->site.id, (enum band_id)b);
		o.extinction_mag[b] = run_site_value(r, SITE_EXTINCTION, r->site.id, (enum band_id)b);
	}
	o.rules.choice = (enum worth_choice)(int)stored_value(v, KEY_WORTH_BY);
	o.rules.need_min = stored_value(v, KEY_NEED_MIN);
	o.rules.floor_min = stored_value(v, KEY_SYSTEMATIC_FLOOR_S) / 60.0;
	o.fallback_bits = stored_value(v, KEY_FALLBACK_BITS);
	o.unknown_share = stored_value(v, KEY_UNKNOWN_SHARE);
	const double today = wall_now(&r->wall).mjd;
	o.at_jd_tdb = MJD_ZERO_JD + (isnan(stored_value(v, KEY_AFTER_DATE))
					 ? today + stored_value(v, KEY_AFTER_YEARS) * YEAR_D
					 : stored_value(v, KEY_AFTER_DATE));
	r->observing = o;
}

const struct observing *run_observing(const struct run *r, const struct site *site)
{
	const bool mine = r->has_telescope && site->id == r->telescope.site_id;
	return mine && observing_ready(&r->observing) ? &r->observing : NULL;
}

struct plan_rules run_plan_rules(const struct run *r)
{
	struct plan_rules rules = plan_rules_of(&r->telescope);
	rules.limb_share = stored_value(&r->stored, KEY_LIMB_SHARE);
	rules.limb_trust = stored_value(&r->stored, KEY_LIMB_TRUST);
	rules.short_share = stored_value(&r->stored, KEY_SHORT_SHARE);
	rules.unknown_share = stored_value(&r->stored, KEY_UNKNOWN_SHARE);
	return rules;
}

/* --- targets --- */

/* The noon that ends a night at the run's site, as Julian date. */
static double end_jd(const struct run *r, int32_t night_mjd)
{
	return night_mjd == 0 ? (double)NAN : MJD_ZERO_JD + night_mjd + 1.5 - r->site.lon_east_deg / 360.0;
}

/* A stored goal as wishes of the forecast: whole events, and any. *n grows. */
static void wish_of(const struct run *r, const struct goal_row *g, struct goal wish[], size_t *n)
{
	int got_whole, got_limb;
	goal_count(g, r->got.got, r->got.n, &got_whole, &got_limb);
	const struct goal base = {.band = band_parse(g->band), .until_jd = end_jd(r, g->until_mjd)};
	if (g->whole > 0) {
		wish[*n] = base;
		wish[*n].wanted = g->whole;
		wish[(*n)++].got = got_whole;
	}
	if (g->limb > 0) {
		wish[*n] = base;
		wish[*n].one_limb = true;
		wish[*n].wanted = g->limb;
		/* a whole event over shows a limb too */
		wish[(*n)++].got = got_limb + (got_whole > g->whole ? got_whole - g->whole : 0);
	}
}

static struct observed observed_of(const struct run *r, const struct target *t, size_t *used)
{
	struct observed o = observed_unknown();
	size_t goals, stars;
	const struct goal_row *goal = goals_of(&r->goals, t->id, &goals);
	const struct field_star *star = field_stars_of(&r->stars, t->id, &stars);
	if (stars > 0) {
		const struct field_light light = field_light_of(t, star, stars, &r->observing.optics);
		o.neighbour = light.neighbour;
		o.comparison_stars = light.comparison_stars;
		o.comparison_count = light.comparison_count;
	}
	const size_t first = *used;
	for (size_t i = 0; i < goals; i++)
		wish_of(r, &goal[i], r->wish, used);
	o.n_goals = *used - first;
	o.goal = o.n_goals > 0 ? &r->wish[first] : NULL;
	return o;
}

enum status run_fill_observed(struct run *r, struct err *e)
{
	size_t used = 0;
	if (!r->observed)
		r->observed = calloc(r->targets.n + 1, sizeof *r->observed);
	if (!r->wish)
		r->wish = calloc(2 * r->goals.n + 1, sizeof *r->wish);
	if (!r->observed || !r->wish)
		return err_set(e, ST_MEMORY, "memory: none for %zu targets", r->targets.n);
	for (size_t i = 0; i < r->targets.n; i++)
		r->observed[i] = observed_of(r, &r->targets.t[i], &used);
	for (size_t k = 0; k < r->targets.n; k++)
		r->prepared[k].observed = &r->observed[r->prepared[k].target - r->targets.t];
	return ST_OK;
}
