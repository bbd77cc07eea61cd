/* SPDX-License-Identifier: MIT */
#include "tui/run.h"

#include "db/read_mask.h"
#include "db/text_clean.h"
#include "tui/diagnose.h"
#include "tui/given.h"
#include "tui/run_parts.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum status run_worded(struct err *e, const char *word, const struct err *why)
{
	return err_set(e, why->status, "%s: %.460s", word, why->text);
}

/* --- settings, clock, limits --- */

static enum status open_settings(struct run *r, struct err *e)
{
	const struct options *o = r->options;
	const char *path = o->settings ? o->settings : r->env->settings_path;
	settings_built_in(&r->settings);
	if (!path[0] || (r->env->settings_apart && !o->settings))
		return ST_OK;
	enum status s = settings_read(&r->settings, path, e);
	if (s != ST_ABSENT)
		return s;
	if (o->settings)
		diagnose("settings", "%s: no such file; what is built in is used", path);
	return ST_OK;
}

static enum status open_clock(struct run *r, struct err *e)
{
	const struct options *o = r->options;
	struct err why;
	r->leap = r->settings.leap;
	r->clock.leap = &r->leap;
	r->clock.ut1_utc_s = isnan(o->ut1_utc_s) ? r->settings.ut1_utc_s : o->ut1_utc_s;
	r->wall = (struct wall_clock){.leap = &r->leap};
	if (!o->now)
		return ST_OK;
	r->wall.fixed = true;
	if (given_now(&r->leap, o->now, &r->wall.start, &r->wall.running, &why) != ST_OK)
		return run_worded(e, "--now", &why);
	wall_start(&r->wall);
	return ST_OK;
}

static enum status open_limits(struct run *r, struct err *e)
{
	const struct options *o = r->options;
	r->limits = r->settings.limits;
	for (int id = 0; id < LIM_COUNT; id++) {
		enum status s = !o->limit_given[id]
				    ? ST_OK
				    : limits_put(&r->limits, (enum limit_id)id, o->limit[id], FROM_OPTION, e);
		if (s != ST_OK)
			return s;
	}
	r->kinds = o->kinds ? o->kinds : r->settings.kinds ? r->settings.kinds : KINDS_TRANSIT;
	return ST_OK;
}

/* --- store --- */

static bool needs_store(const struct options *o, int needs)
{
	bool site = (needs & (NEED_SITE | NEED_FIRST_SITE)) && (o->n_places == 0 || o->n_sites > 0);
	bool targets = (needs & NEED_TARGETS) && !o->radec;
	return site || targets || o->telescope || (needs & (NEED_STORE | NEED_WRITE));
}

static enum status open_store(struct run *r, int needs, struct err *e)
{
	const char *path = r->options->db ? r->options->db : r->env->data_path;
	struct err why;
	if (!path[0])
		return err_set(e, ST_ABSENT,
			       "store: no place for the database: HOME is not set (give --db FILE)");
	if (strlen(path) >= sizeof r->db_path)
		return err_set(e, ST_RANGE, "store: the database's path is longer than %zu bytes",
			       sizeof r->db_path - 1);
	snprintf(r->db_path, sizeof r->db_path, "%s", path);
	enum status s = store_open(path, needs & NEED_WRITE ? STORE_WRITE : STORE_READ, &r->store, &why);
	if (s == ST_ABSENT && !(needs & NEED_WRITE)) {
		diagnose("store", "%s: no such database yet; it reads as empty", path);
		return ST_OK;
	}
	if (s != ST_OK)
		return run_worded(e, "store", &why);
	if (needs & NEED_WRITE && store_read_only(r->store))
		return err_set(e, ST_STORE, "store: %s can't be written", path);
	return ST_OK;
}

static enum status load_lists(struct run *r, struct err *e)
{
	struct err why;
	if (r->store && sites_load(r->store, &r->sites, &why) != ST_OK)
		return run_worded(e, "store", &why);
	if (r->sites.n_bad > 0)
		diagnose("store", "%s: %s", r->db_path, r->sites.bad);
	if (r->store && !r->options->radec && targets_load(r->store, &r->targets, &why) != ST_OK)
		return run_worded(e, "store", &why);
	if (r->targets.n_bad > 0)
		diagnose("store",
			 "%s: %zu left out because their checksums are wrong: %.300s (see wane check)",
			 r->db_path, r->targets.n_bad, r->targets.bad);
	enum status s = run_load_telescopes(r, e);
	return s == ST_OK ? run_load_observing(r, e) : s;
}

/* The one target that --radec stands for: a position without an ephemeris. */
static enum status radec_target(struct run *r, struct err *e)
{
	struct err why;
	struct target t = target_empty();
	t.name = r->options->radec;
	if (given_radec(r->options->radec, &t.ra_deg, &t.dec_deg, &why) != ST_OK)
		return run_worded(e, "--radec", &why);
	target_list_free(&r->targets);
	r->targets.t = malloc(sizeof t);
	r->targets.doubts = calloc(1, sizeof *r->targets.doubts);
	if (!r->targets.t || !r->targets.doubts)
		return err_set(e, ST_MEMORY, "memory: none for a target");
	r->targets.t[0] = t;
	r->targets.n = 1;
	return ST_OK;
}

/* --- site --- */

/* For the site command --mask is what to store, not what to compute with. */
static enum status open_mask(struct run *r, struct err *e)
{
	const char *path = r->options->mask;
	bool unsorted = false;
	if (!path || (r->options->n_words > 0 && strcmp(r->options->word[0], "site") == 0))
		return ST_OK;
	r->mask_given = true;
	if (strcmp(path, "none") == 0)
		return ST_OK;
	enum status s = mask_read(path, &r->given_mask, &unsorted, e);
	if (unsorted)
		diagnose("mask", "the azimuths of %s do not rise from line to line; sorted", path);
	return s;
}

static void open_zone(struct run *r)
{
	struct err why;
	zone_close(r->zone);
	r->zone = NULL;
	if (r->site.zone[0] && zone_open(r->env->zoneinfo_dir, r->site.zone, &r->zone, &why) != ST_OK)
		diagnose("zone", "%s; times are shown in UTC", why.text);
}

/* The mask of the chosen site is the run's own: the list that it came from is loaded again now and then. */
static void take_mask(struct run *r, const struct mask *stored)
{
	const bool given = r->mask_given && r->site.id == r->mask_site_id;
	const struct mask *mask = given ? &r->given_mask : stored;
	if (mask && mask != &r->site_mask)
		r->site_mask = *mask;
	else if (!mask)
		r->site_mask.n = 0;
	r->site.mask = r->site_mask.n > 0 ? &r->site_mask : NULL;
}

static void take_site(struct run *r, const struct site *site)
{
	r->site = *site;
	snprintf(r->site_name, sizeof r->site_name, "%s", site->name);
	snprintf(r->site_zone, sizeof r->site_zone, "%s", site->zone);
	r->site.name = r->site_name;
	r->site.zone = r->site_zone;
	if (r->mask_given && !r->mask_taken)
		r->mask_site_id = site->id;
	r->mask_taken = r->mask_given;
	take_mask(r, site->mask);
	open_zone(r);
}

/* Names of the stored sites, for a message. */
static void list_sites(const struct run *r, char *out, size_t n)
{
	size_t used = 0;
	out[0] = '\0';
	for (size_t i = 0; i < r->sites.n && used + 100 < n; i++)
		used +=
		    (size_t)snprintf(out + used, n - used, "%s%.90s", i ? ", " : "", r->sites.site[i].name);
	if (r->sites.n == 0)
		snprintf(out, n, "none is stored");
}

static enum status find_site(const struct run *r, const char *name, size_t *index, struct err *e)
{
	char names[300], got[ERR_QUOTE_MAX];
	long i = site_list_find(&r->sites, name);
	if (i >= 0) {
		*index = (size_t)i;
		return ST_OK;
	}
	list_sites(r, names, sizeof names);
	err_quote(name, strlen(name), got);
	return err_set(e, ST_RANGE, "site: no such site (got \"%s\", expected one of: %s)", got, names);
}

static enum status place_site(const char *text, struct site *site, struct err *e)
{
	struct err why;
	*site = (struct site){.name = text, .zone = ""};
	return given_place(text, site, &why) == ST_OK ? ST_OK : run_worded(e, "--place", &why);
}

static enum status choose_site(struct run *r, int needs, struct err *e)
{
	const struct options *o = r->options;
	struct site place;
	size_t index = 0;
	enum status s = ST_OK;
	char names[300];
	if (o->n_places > 0) {
		s = place_site(o->place[0], &place, e);
		if (s == ST_OK)
			take_site(r, &place);
		return s;
	}
	if (!(needs & (NEED_SITE | NEED_FIRST_SITE)) && o->n_sites == 0 && !o->telescope)
		return ST_OK;
	if (o->n_sites > 0) {
		struct site_list removed = {.n = 0};
		s = find_site(r, o->site[0], &index, e);
		const struct site *past = s == ST_OK ? NULL : run_past_site(r, o->site[0], &removed);
		if (past)
			take_site(r, past);
		site_list_free(&removed);
		if (past)
			return ST_OK;
	} else if (r->settings.site[0]) {
		if (find_site(r, r->settings.site, &index, e) != ST_OK)
			s = err_set(e, ST_ABSENT,
				    "settings: the site \"%.80s\" of the settings file is not stored",
				    r->settings.site);
	} else if (r->sites.n == 0 && needs & NEED_SITE)
		s = err_set(
		    e, ST_ABSENT,
		    "site: none is stored: give --place LAT,LON,HEIGHT, or wane site add NAME --place "
		    "LAT,LON,HEIGHT --zone ZONE");
	else if (r->sites.n == 0)
		return ST_OK;
	else if (r->sites.n > 1 && !(needs & NEED_FIRST_SITE)) {
		list_sites(r, names, sizeof names);
		s = err_set(e, ST_ABSENT, "site: several are stored, choose one with --site (%s)", names);
	}
	if (s == ST_OK)
		take_site(r, &r->sites.site[index]);
	return s;
}

static bool same_place(const struct site *a, const struct site *b)
{
	return !(a->lat_deg < b->lat_deg || a->lat_deg > b->lat_deg || a->lon_east_deg < b->lon_east_deg ||
		 a->lon_east_deg > b->lon_east_deg || a->height_m < b->height_m || a->height_m > b->height_m);
}

/* A site or place that was named twice is one: a stored site by its key, a place by what it stands for. */
static bool has_site(const struct site list[], size_t n, const struct site *site)
{
	for (size_t i = 0; i < n; i++)
		if (list[i].id == site->id && (site->id != 0 || same_place(&list[i], site)))
			return true;
	return false;
}

enum status run_all_sites(struct run *r, struct site out[], size_t *n, struct err *e)
{
	const struct options *o = r->options;
	enum status s = ST_OK;
	*n = 0;
	for (int i = 0; s == ST_OK && i < o->n_places && *n < OPTION_NAMES_MAX; i++) {
		s = place_site(o->place[i], &out[*n], e);
		*n += s == ST_OK && !has_site(out, *n, &out[*n]);
	}
	for (int i = 0; s == ST_OK && i < o->n_sites && *n < OPTION_NAMES_MAX; i++) {
		size_t index = 0;
		s = find_site(r, o->site[i], &index, e);
		if (s == ST_OK && !has_site(out, *n, &r->sites.site[index]))
			out[(*n)++] = r->sites.site[index];
	}
	if (s == ST_OK && *n > 1 && r->mask_given)
		return err_set(e, ST_RANGE, "--mask: a horizon mask belongs to one site, and %zu are given",
			       *n);
	if (s == ST_OK && *n <= 1) {
		*n = 1;
		out[0] = r->site;
	}
	return s;
}

static void drop_lists(struct run *r)
{
	free(r->prepared);
	free(r->star);
	r->prepared = NULL;
	r->star = NULL;
	r->n_prepared = 0;
	target_list_free(&r->targets);
	site_list_free(&r->sites);
	run_drop_telescopes(r);
	run_drop_observing(r);
}

/* --- what hangs on the site --- */

/* Telescope, half rule and limits. */
static enum status take_telescope(struct run *r, bool named, struct err *e)
{
	enum status s = run_choose_telescope(r, named, e);
	if (s == ST_OK)
		s = open_limits(r, e);
	if (s == ST_OK)
		run_put_telescope_limits(r);
	if (s == ST_OK)
		run_take_observing(r);
	return s;
}

enum status run_choose_site(struct run *r, size_t index, struct err *e)
{
	const struct limits before = r->limits;
	if (index >= r->sites.n)
		return err_set(e, ST_RANGE, "site %zu: there are %zu", index, r->sites.n);
	take_site(r, &r->sites.site[index]);
	enum status s = take_telescope(r, false, e);
	if (s == ST_OK && r->prepared && !limits_same(&before, &r->limits))
		s = run_prepare(r, e);
	else if (s == ST_OK && r->prepared)
		s = run_fill_observed(r, e);
	return s;
}

/* --- open, close --- */

/* *code: the exit code of a fault in the step that comes. */
static enum status open_steps(struct run *r, int needs, int *code, struct err *e)
{
	const struct options *o = r->options;
	enum status s = open_settings(r, e);
	*code = 2;
	if (s == ST_OK)
		s = open_clock(r, e);
	if (s == ST_OK)
		s = open_limits(r, e);
	if (s != ST_OK) {
		*code = r->clock.leap ? 2 : 1; /* before the clock only the settings file can be at fault */
		return s;
	}
	*code = 1;
	if (!r->store && needs_store(o, needs))
		s = open_store(r, needs, e);
	if (s == ST_OK)
		s = load_lists(r, e);
	if (s == ST_OK && o->radec) {
		s = radec_target(r, e);
		*code = s == ST_OK || s == ST_MEMORY ? 1 : 2;
	}
	if (s == ST_OK)
		s = open_mask(r, e);
	if (s == ST_OK) {
		s = choose_site(r, needs, e);
		*code = s == ST_ABSENT ? 1 : 2;
	}
	if (s == ST_OK) {
		s = take_telescope(r, true, e);
		*code = s == ST_RANGE ? 2 : 1;
	}
	if (s == ST_OK && needs & NEED_TARGETS) {
		s = run_prepare(r, e);
		*code = 1;
	}
	return s;
}

/* What changes the store has its result asked for first: a file that can't be written must change nothing. */
static enum status out_possible(const struct run *r, struct err *e)
{
	struct out out;
	if (!r->options->out)
		return ST_OK;
	enum status s = run_out_open(r, &out, e);
	if (s == ST_OK)
		out_abandon(&out);
	return s;
}

enum status run_open_on(struct run *r, struct store *store, const struct env *env, const struct options *o,
			int needs, int *exit_code, struct err *e)
{
	*r = (struct run){.env = env, .options = o, .store = store};
	r->site.name = r->site_name;
	r->site.zone = r->site_zone;
	r->telescope = telescope_empty();
	enum status s = open_steps(r, needs, exit_code, e);
	if (s == ST_OK && needs & NEED_WRITE) {
		s = out_possible(r, e);
		*exit_code = 1;
	}
	if (s != ST_OK)
		run_close(r);
	else
		*exit_code = 0;
	return s;
}

enum status run_open(struct run *r, const struct env *env, const struct options *o, int needs, int *exit_code,
		     struct err *e)
{
	return run_open_on(r, NULL, env, o, needs, exit_code, e);
}

void run_close(struct run *r)
{
	drop_lists(r);
	zone_close(r->zone);
	free(r->telescope_text);
	free(r->memo);
	store_close(r->store);
	r->telescope_text = NULL;
	r->telescope = telescope_empty();
	r->has_telescope = false;
	r->zone = NULL;
	r->memo = NULL;
	r->store = NULL;
}

enum status run_reload(struct run *r, struct err *e)
{
	if (!r->store)
		return ST_OK;
	drop_lists(r);
	enum status s = load_lists(r, e);
	if (s == ST_OK && r->options->radec)
		s = radec_target(r, e);
	/* a removed site stays until another is chosen */
	long index =
	    r->options->n_places > 0 || !r->site.name[0] ? -1 : site_list_find(&r->sites, r->site.name);
	if (s == ST_OK && index >= 0)
		take_site(r, &r->sites.site[index]);
	if (s == ST_OK)
		s = take_telescope(r, false, e);
	return s == ST_OK ? run_prepare(r, e) : s;
}
