/* SPDX-License-Identifier: MIT
 * What comes out of an open run: where its result goes, and its nights. */
#include "tui/run_parts.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* --- where the result goes --- */

/* SQLite names the journal after the file behind the links. */
static bool is_journal(const char *path, const char *db)
{
	char journal[OUT_PATH_MAX + 16];
	char *whole = realpath(db, NULL);
	int n = snprintf(journal, sizeof journal, "%s-journal", whole ? whole : db);
	free(whole);
	return n > 0 && (size_t)n < sizeof journal && out_same_file(path, journal);
}

enum status run_out_open(const struct run *r, struct out *out, struct err *e)
{
	const struct options *o = r->options;
	const char *db = o->db ? o->db : r->env->data_path;
	const char *settings = o->settings ? o->settings : r->env->settings_path;
	const char *what = NULL;
	if (o->out && strcmp(o->out, "-") != 0) {
		if (db[0] && out_same_file(o->out, db))
			what = "the database";
		else if (db[0] && is_journal(o->out, db))
			what = "the journal of the database";
		else if (settings[0] && out_same_file(o->out, settings))
			what = "the settings file";
	}
	if (what)
		return err_set(e, ST_CONFLICT, "--out: %.300s is %s: a result never replaces it", o->out,
			       what);
	return out_open(out, o->out, o->force, e);
}

/* --- a night --- */

enum status run_night_free(struct run *r, const struct site *site, int32_t evening_mjd, struct night_view *v,
			   struct err *e)
{
	enum status s = night_build(&v->night, site, &r->clock, evening_mjd, r->memo, e);
	if (s != ST_OK)
		return s;
	v->free = free_time_whole();
	v->cut = false;
	v->night.telescope = run_telescope_at(r, site);
	v->night.observing = run_observing(r, site);
	run_cut_by_allotments(r, v);
	v->dark = night_dark(&v->night, r->limits.value[LIM_SUN]);
	return ST_OK;
}

enum status run_night_at(struct run *r, const struct site *site, int32_t evening_mjd, bool people,
			 struct night_view *v, struct err *e)
{
	const struct window_choice choice = {.kinds = r->kinds,
					     .all = r->options->all,
					     .min_chance = run_min_chance(r, people),
					     .free = &v->free};
	enum status s = run_night_free(r, site, evening_mjd, v, e);
	if (s != ST_OK)
		return s;
	return night_windows(&v->night, r->prepared, r->n_prepared, &choice, &v->list, &v->hidden, e);
}

enum status run_night(struct run *r, int32_t evening_mjd, bool people, struct night_view *v, struct err *e)
{
	return run_night_at(r, &r->site, evening_mjd, people, v, e);
}

double run_min_chance(const struct run *r, bool people)
{
	if (!isnan(r->options->min_chance))
		return r->options->min_chance;
	return people ? MIN_CHANCE_PEOPLE : MIN_CHANCE_MACHINE;
}

void night_view_free(struct night_view *v)
{
	window_list_free(&v->list);
}

int32_t run_tonight(const struct run *r)
{
	return night_date_of(r->site.lon_east_deg, wall_now(&r->wall));
}
