/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "db/read_mask.h"
#include "db/stored_settings.h"
#include "ephem/angle_text.h"
#include "ephem/number_text.h"
#include "tui/commands/result.h"
#include "tui/commands/site_light.h"
#include "tui/diagnose.h"
#include "tui/given.h"
#include "tui/sheets/text.h"
#include "tui/sheets/windows.h"

#include <math.h>
#include <string.h>

/* A zone's clock runs at most this far from the Sun's at its places; more is a longitude with the wrong sign.
 */
#define ZONE_OFF_MAX_H 3.5

/* --- writing --- */

/* Where the site's nights are halved, as text; `dark` where nothing is stored. */
static enum status half_text(const struct run *r, const struct site *site, char out[STORED_SETTING_MAX + 1],
			     struct err *e)
{
	char key[HALF_KEY_BYTES];
	out[0] = '\0';
	run_half_key(site->id, key);
	enum status s = r->store ? stored_setting(r->store, key, out, e) : ST_OK;
	if (s == ST_OK && !out[0])
		snprintf(out, STORED_SETTING_MAX + 1, "dark");
	return s;
}

/* A line; whole: the horizon mask in full behind it, as a file of it is written. */
static void site_text(FILE *to, const struct run *r, const struct site *s, const char *half, bool whole)
{
	char lat[ANGLE_TEXT_MAX], lon[ANGLE_TEXT_MAX], height[NUMBER_TEXT_MAX];
	lat_text(s->lat_deg, 6, lat);
	lon_text(s->lon_east_deg, 6, lon);
	number_text(s->height_m, height);
	text_cell(to, s->name, NAME_CHARS_MAX, false);
	fprintf(to, ": %s, %s, %s m, zone %s", lat, lon, height,
		s->zone[0] ? s->zone : "not known (UTC is shown)");
	if (s->mask)
		fprintf(to, ", horizon mask of %zu point%s", s->mask->n, s->mask->n == 1 ? "" : "s");
	if (strcmp(half, "dark") != 0)
		fprintf(to, ", nights halved %s %s", strcmp(half, "sunset") == 0 ? "by" : "at", half);
	site_light_text(to, r, s);
	fputc('\n', to);
	if (!whole || !s->mask)
		return;
	fputs("# az_deg, alt_deg: apparent altitude of the horizon\n", to);
	for (size_t i = 0; i < s->mask->n; i++) {
		char az[NUMBER_TEXT_MAX], alt[NUMBER_TEXT_MAX];
		number_text(s->mask->knot[i].az_deg, az);
		number_text(s->mask->knot[i].alt_deg, alt);
		fprintf(to, "%s, %s\n", az, alt);
	}
}

static void site_cells(struct csv_out *c, const struct site *s)
{
	char number[NUMBER_TEXT_MAX];
	csv_text(c, s->name);
	number_text(s->lat_deg, number);
	csv_number(c, number);
	number_text(s->lon_east_deg, number);
	csv_number(c, number);
	number_text(s->height_m, number);
	csv_number(c, number);
	csv_text(c, s->zone);
	csv_end_line(c);
}

static void site_record(struct json *j, const struct run *r, const struct site *s, const char *half)
{
	json_open(j, NULL, '{', true);
	stored_site_json(j, s, half);
	site_light_json(j, r, s);
	json_close(j, '}');
}

/* The sites as a list; of show, the one alone. */
static int write_sites(const struct run *r, const struct site site[], size_t n, bool list)
{
	struct out out;
	struct err e;
	enum format format;
	const int opened = result_open(r, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &format, &out);
	if (opened != EXIT_DONE)
		return opened;
	struct csv_out csv = {.file = out.file};
	struct json json = json_begin(out.file);
	if (format == FORMAT_CSV)
		fputs("name,latitude_deg,longitude_east_deg,height_m,zone\n", out.file);
	if (format == FORMAT_JSON && list)
		json_open(&json, NULL, '[', false);
	if (format == FORMAT_TEXT && n == 0)
		fputs("No site is stored: wane site add NAME --place LAT,LON,HEIGHT --zone ZONE\n", out.file);
	for (size_t i = 0; i < n; i++) {
		char half[STORED_SETTING_MAX + 1];
		if (half_text(r, &site[i], half, &e) != ST_OK) {
			out_abandon(&out);
			return diagnose_err("store", &e, EXIT_UNMET);
		}
		if (format == FORMAT_CSV)
			site_cells(&csv, &site[i]);
		else if (format == FORMAT_JSON)
			site_record(&json, r, &site[i], half);
		else
			site_text(out.file, r, &site[i], half, !list);
	}
	if (format == FORMAT_JSON && list)
		json_close(&json, ']');
	if (format == FORMAT_JSON)
		json_end(&json);
	return result_commit(&out, true);
}

/* --- changing --- */

/* The zone must be one that can be read, else local times would silently be UTC. */
static enum status zone_exists(const struct run *r, const struct site *site, struct err *e)
{
	struct zone *zone;
	if (!site->zone[0])
		return ST_OK;
	enum status s = zone_open(r->env->zoneinfo_dir, site->zone, &zone, e);
	if (s != ST_OK)
		return s;
	double winter_h = zone_local(zone, (struct utc){.mjd = 61041}).offset_s / 3600.0; /* 2026-01-01 */
	zone_close(zone);
	double off_h = remainder(winter_h - site->lon_east_deg / 15.0, 24.0);
	if (fabs(off_h) > ZONE_OFF_MAX_H) {
		char lon[ANGLE_TEXT_MAX];
		lon_text(site->lon_east_deg, 4, lon);
		diagnose("zone", "%s is %.1f h off the longitude %s: are east and west swapped?", site->zone,
			 fabs(off_h), lon);
	}
	return ST_OK;
}

/* rule NULL: none was given. */
static enum status put_half(struct run *r, const struct site *site, const char *rule, struct err *e)
{
	char key[HALF_KEY_BYTES];
	if (!rule)
		return ST_OK;
	run_half_key(site->id, key);
	return stored_setting_put(r->store, key, strcmp(rule, "dark") == 0 ? "" : rule, e);
}

/* A new site has its id, which its keys are made of, only now that it is in the store. */
static enum status put_keys(struct run *r, struct site *site, const struct site_light *light, struct err *e)
{
	struct site_list stored = {0};
	enum status s = sites_load(r->store, &stored, e);
	long index = s == ST_OK ? site_list_find(&stored, site->name) : -1;
	if (index >= 0) {
		site->id = stored.site[index].id;
		s = put_half(r, site, r->options->half, e);
		if (s == ST_OK)
			s = site_light_put(r->store, site->id, light, e);
	}
	site_list_free(&stored);
	return s;
}

static enum status put_in_store(struct run *r, struct site *site, const struct site_light *light, bool add,
				struct err *e)
{
	char utc[UTC_TEXT_MAX];
	const struct change change = change_of(r, add ? "site add" : "site set", utc);
	enum status s = store_begin(r->store, &change, e);
	if (s != ST_OK)
		return s;
	s = site_put(r->store, site, add, e);
	if (s == ST_OK)
		s = put_keys(r, site, light, e);
	return store_end(r->store, s, e);
}

/* --mask: *mask is the room for what is read. */
static int wanted_mask(const struct options *o, struct site *site, struct mask *mask)
{
	bool unsorted;
	struct err e;
	if (!o->mask)
		return EXIT_DONE;
	site->mask = NULL;
	if (strcmp(o->mask, "none") == 0)
		return EXIT_DONE;
	if (mask_read(o->mask, mask, &unsorted, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	if (unsorted)
		diagnose("mask", "the azimuths of %s do not rise from line to line; sorted", o->mask);
	site->mask = mask;
	return EXIT_DONE;
}

/* What is asked for, checked against what is stored; nothing is written yet. */
static int wanted_site(const struct run *r, bool add, struct site *site, struct mask *mask,
		       const struct site_light *light, const char *telescope)
{
	const struct options *o = r->options;
	const char *name = o->word[2];
	struct err e;
	long index = site_list_find(&r->sites, name);
	*site = (struct site){.name = name, .zone = ""};
	if (name_check(name, strlen(name), NULL, &e) != ST_OK)
		return diagnose_err("name", &e, EXIT_USAGE);
	if (!add && o->n_places == 0 && !o->zone && !o->mask && !o->half && !site_light_any(light) &&
	    !telescope) {
		diagnose("site",
			 "nothing to set (expected --place, --zone, --mask, --half, --sky, --extinction "
			 "or --telescope)");
		return EXIT_USAGE;
	}
	struct half_rule rule;
	if (o->half && half_rule_parse(o->half, &rule, &e) != ST_OK)
		return diagnose_err("--half", &e, EXIT_USAGE);
	if (add && o->n_places == 0) {
		diagnose("--place",
			 "is missing (expected LAT,LON,HEIGHT: degrees north, degrees east, metres)");
		return EXIT_USAGE;
	}
	if (o->n_places > 0 && given_place(o->place[0], site, &e) != ST_OK)
		return diagnose_err("--place", &e, EXIT_USAGE);
	if (add == (index >= 0)) {
		diagnose("site",
			 add ? "\"%s\" exists already (wane site set changes it)"
			     : "no such site is stored (got \"%s\")",
			 name);
		return EXIT_UNMET;
	}
	if (!add) {
		struct site stored = r->sites.site[index];
		if (o->n_places > 0) {
			stored.lat_deg = site->lat_deg;
			stored.lon_east_deg = site->lon_east_deg;
			stored.height_m = site->height_m;
		}
		*site = stored;
	}
	if (o->zone)
		site->zone = o->zone;
	if (zone_exists(r, site, &e) != ST_OK)
		return diagnose_err("--zone", &e, EXIT_UNMET);
	return wanted_mask(o, site, mask);
}

static int change_site(const struct env *env, const struct options *o, bool add, const char *telescope)
{
	struct run read, write;
	struct site_light light;
	struct site site;
	struct mask mask;
	struct err e;
	int code;
	if (site_light_read(o, &light, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_USAGE);
	if (run_open(&read, env, o, NEED_STORE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	code = wanted_site(&read, add, &site, &mask, &light, telescope);
	if (code == EXIT_DONE && telescope &&
	    site_telescope_read(&read, site.id, telescope, &light, &e) != ST_OK)
		code = diagnose_whole(&e, EXIT_UNMET);
	if (code == EXIT_DONE && run_open(&write, env, o, NEED_STORE | NEED_WRITE, &code, &e) != ST_OK) {
		run_close(&read);
		return diagnose_whole(&e, code);
	}
	if (code != EXIT_DONE) {
		run_close(&read);
		return code;
	}
	if (put_in_store(&write, &site, &light, add, &e) != ST_OK)
		code = diagnose_err("site", &e, EXIT_UNMET);
	else
		code = write_sites(&write, &site, 1, false);
	run_close(&write);
	run_close(&read);
	return code;
}

static int remove_site(struct run *r)
{
	const char *name = r->options->word[2];
	char utc[UTC_TEXT_MAX];
	struct err e;
	const struct change change = change_of(r, "site remove", utc);
	enum status s = store_begin(r->store, &change, &e);
	if (s != ST_OK)
		return diagnose_err("site", &e, EXIT_UNMET);
	/* its keys may come again */
	long index = site_list_find(&r->sites, name);
	if (index >= 0)
		s = put_half(r, &r->sites.site[index], "dark", &e);
	if (s == ST_OK && index >= 0)
		s = site_light_remove(r->store, r->sites.site[index].id, &e);
	if (s == ST_OK)
		s = site_remove(r->store, name, &e);
	return store_end(r->store, s, &e) == ST_OK ? EXIT_DONE : diagnose_err("site", &e, EXIT_UNMET);
}

static int show_or_remove(const struct env *env, const struct options *o, bool remove)
{
	struct run run;
	struct err e;
	int code;
	if (run_open(&run, env, o, NEED_STORE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	long index = site_list_find(&run.sites, o->word[2]);
	if (index < 0) {
		diagnose("site", "no such site is stored (got \"%s\")", o->word[2]);
		code = EXIT_UNMET;
	} else if (!remove) {
		code = write_sites(&run, &run.sites.site[index], 1, false);
	}
	run_close(&run);
	if (index < 0 || !remove)
		return code;
	if (run_open(&run, env, o, NEED_STORE | NEED_WRITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	code = remove_site(&run);
	run_close(&run);
	return code;
}

/* --telescope is not what to compute with here, but what to store. */
int command_site(const struct env *env, const struct options *given)
{
	static const char *const verbs[] = {"list", "show", "add", "set", "remove"};
	struct options own = *given;
	const struct options *const o = &own;
	const char *telescope = given->telescope;
	struct run run;
	struct err e;
	int code;
	int verb = verb_of("site", verbs, 5, o);
	own.telescope = NULL;
	if (verb < 0)
		return EXIT_USAGE;
	if (telescope && verb != 3) {
		diagnose("--telescope",
			 "the usual telescope of a site is set by wane site set NAME --telescope T");
		return EXIT_USAGE;
	}
	if (verb == 0) {
		if (run_open(&run, env, o, NEED_STORE, &code, &e) != ST_OK)
			return diagnose_whole(&e, code);
		code = write_sites(&run, run.sites.site, run.sites.n, true);
		run_close(&run);
		return code;
	}
	return verb == 2 || verb == 3 ? change_site(env, o, verb == 2, telescope)
				      : show_or_remove(env, o, verb == 4);
}
