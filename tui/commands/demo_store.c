/* SPDX-License-Identifier: MIT */
#include "tui/commands/demo_store.h"

#include "db/field_stars.h"
#include "db/goals.h"
#include "db/import.h"
#include "db/sites.h"
#include "db/targets.h"
#include "db/telescopes.h"
#include "ephem/units.h"
#include "tui/commands/site_light.h"
#include "tui/demo_data.h"

#include <math.h>
#include <string.h>

/* An invented place, as everything in the demo is. A new store counts from 1: it is site 1. */
static const struct site demo_site = {.name = "Tern Hill",
				      .lat_deg = 38.62,
				      .lon_east_deg = -109.36,
				      .height_m = 2100.0,
				      .zone = "America/Denver"};
static const struct change demo_change = {.utc = "2026-04-22T18:00:00Z", .who = "demo", .verb = "demo"};
#define NONE ((double)NAN)
enum { DEMO_SITE = 1 };

/* Half a metre at f/8 with a CCD, and a quarter of a metre with a wide field; blocks at the Sun's altitude.
 */
static enum status put_telescopes(struct store *s, struct err *e)
{
	struct telescope dome = telescope_empty(), roof = telescope_empty();
	dome.site_id = roof.site_id = DEMO_SITE;
	dome.name = "East dome";
	dome.slew_deg_s = 2.0;
	dome.settle_min = 4.0;
	dome.field_arcmin = 24.0;
	dome.mount = MOUNT_GERMAN;
	dome.flip_min = 6.0;
	dome.flip_after_min = 30.0;
	dome.aperture_m = 0.5;
	dome.obstruction = 0.38;
	dome.throughput = 0.4;
	dome.band = "R";
	dome.pixel_arcsec = 0.46;
	dome.gain_e_adu = 1.5;
	dome.read_noise_e = 8.0;
	dome.dark_e_s = 0.02;
	dome.full_well_e = 100000.0;
	dome.defocus_px = 8.0;
	dome.dead_s = 6.0;
	dome.red_noise_ppt = 0.5;
	dome.blocks =
	    "sunset..evening-9=evening flats and focus;morning-9..sunrise=morning flats and closing";
	roof.name = "Roll-off";
	roof.slew_deg_s = 3.0;
	roof.settle_min = 3.0;
	roof.field_arcmin = 50.0;
	roof.mount = MOUNT_FORK;
	roof.aperture_m = 0.25;
	roof.obstruction = 0.4;
	roof.throughput = 0.5;
	roof.band = "V";
	roof.pixel_arcsec = 1.1;
	roof.gain_e_adu = 0.8;
	roof.read_noise_e = 3.5;
	roof.dark_e_s = 0.05;
	roof.full_well_e = 50000.0;
	roof.defocus_px = 4.0;
	roof.dead_s = 1.0;
	roof.red_noise_ppt = 0.8;
	enum status st = telescope_put(s, &dome, true, e);
	return st == ST_OK ? telescope_put(s, &roof, true, e) : st;
}

static enum status put_place(struct store *s, struct err *e)
{
	/* the telescope put first has number 1 */
	struct site_light light = {.telescope_given = true, .telescope_id = 1};
	light.sky_given[BAND_V] = light.sky_given[BAND_R] = true;
	light.sky[BAND_V] = 21.5;
	light.sky[BAND_R] = 20.8;
	light.extinction_given[BAND_V] = light.extinction_given[BAND_R] = true;
	light.extinction[BAND_V] = 0.14;
	light.extinction[BAND_R] = 0.1;
	enum status st = site_put(s, &demo_site, true, e);
	if (st == ST_OK)
		st = put_telescopes(s, e);
	return st == ST_OK ? site_light_put(s, DEMO_SITE, &light, e) : st;
}

/* --- what hangs on targets --- */

static const struct demo_goal {
	const char *target;
	struct goal_row goal;
} demo_goals[] = {
    {"Tern 14 b", {.whole = 3, .band = "R", .note = "for its depth"}},
    {"Tern 3 b", {.whole = 2, .limb = 1, .band = "", .until_mjd = 61313}}, /* 2026-09-30 */
    {"Tern 61 b", {.limb = 2, .band = "", .note = "to find it again"}},
    {"Tern 45 b", {.whole = 1, .band = "", .until_mjd = 61130, .note = "with a team elsewhere"}}, /* past */
};

/* Places as offsets from the target [arcmin], east and north; a neighbour by its distance. */
static const struct demo_star {
	const char *target, *name;
	enum field_star_role role;
	double east_arcmin, north_arcmin, sep_arcsec, mag;
	const char *band;
} demo_stars[] = {
    {"Tern 14 b", "A", STAR_COMPARISON, 3.1, 4.2, NONE, 10.9, "R"},
    {"Tern 14 b", "B", STAR_COMPARISON, -6.4, 1.7, NONE, 11.6, "R"},
    {"Tern 14 b", "C", STAR_COMPARISON, 1.2, -7.9, NONE, 12.2, "R"},
    {"Tern 14 b", "", STAR_GUIDE, 8.0, 5.5, NONE, 9.8, "R"},
    {"Tern 3 b", "A", STAR_COMPARISON, -4.8, -3.3, NONE, 10.4, "R"},
    {"Tern 3 b", "B", STAR_COMPARISON, 17.0, 9.5, NONE, 10.7, "R"},
    {"Tern 74 b", "", STAR_NEIGHBOUR, NONE, NONE, 3.2, 13.9, "R"},
    {"Tern 74 b", "A", STAR_COMPARISON, 5.6, -2.4, NONE, 11.5, "R"},
};

static enum status put_star(struct store *s, const struct target *t, const struct demo_star *d, struct err *e)
{
	const double degree = 60.0, shrink = cos(t->dec_deg * DEG_RAD);
	int64_t id;
	const struct field_star f = {.target_id = t->id,
				     .role = d->role,
				     .name = d->name,
				     .ra_deg = t->ra_deg + d->east_arcmin / degree / shrink,
				     .dec_deg = t->dec_deg + d->north_arcmin / degree,
				     .sep_arcsec = d->sep_arcsec,
				     .mag = d->mag,
				     .band = d->band,
				     .note = ""};
	return field_star_add(s, &f, &id, e);
}

static enum status put_wishes(struct store *s, const struct target_list *list, struct err *e)
{
	enum status st = ST_OK;
	for (size_t i = 0; st == ST_OK && i < sizeof demo_goals / sizeof demo_goals[0]; i++) {
		struct goal_row g = demo_goals[i].goal;
		const long at = target_list_find(list, demo_goals[i].target);
		g.target_id = at < 0 ? 0 : list->t[at].id;
		st = goal_set(s, &g, e);
	}
	for (size_t i = 0; st == ST_OK && i < sizeof demo_stars / sizeof demo_stars[0]; i++) {
		const long at = target_list_find(list, demo_stars[i].target);
		st = at < 0 ? err_set(e, ST_ABSENT, "the demo has no target %s", demo_stars[i].target)
			    : put_star(s, &list->t[at], &demo_stars[i], e);
	}
	return st;
}

/* --- all --- */

static void say_row(void *ctx, const struct import_message *m)
{
	int *refused = ctx;
	*refused += !m->warning;
}

enum status demo_fill(struct store *s, struct err *e)
{
	const struct import_options options = {.strict = true, .change = demo_change};
	struct import_report report;
	struct target_list list = {.n = 0};
	int refused = 0;
	enum status st = store_begin(s, &demo_change, e);
	if (st == ST_OK)
		st = store_end(s, put_place(s, e), e);
	if (st == ST_OK)
		st = import_targets(s, demo_targets_csv, demo_targets_csv_size, &options, &report, say_row,
				    &refused, e);
	if (st == ST_OK)
		st = targets_load(s, &list, e);
	if (st == ST_OK)
		st = store_begin(s, &demo_change, e);
	if (st == ST_OK)
		st = store_end(s, put_wishes(s, &list, e), e);
	target_list_free(&list);
	return st;
}
