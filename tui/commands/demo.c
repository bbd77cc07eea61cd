/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "db/import.h"
#include "db/telescopes.h"
#include "tui/demo_data.h"
#include "tui/diagnose.h"
#include "tui/given.h"
#include "tui/pages/page_run.h"

#include <string.h>

/* An invented place, as everything in the demo is. */
static const struct site demo_site = {.name = "Tern Hill",
				      .lat_deg = 38.62,
				      .lon_east_deg = -109.36,
				      .height_m = 2100.0,
				      .zone = "America/Denver"};
/* A good evening: the interface's clock starts half an hour before dusk and runs; print is frozen there. */
#define DEMO_NOW "2026-04-23T02:40:00Z"
#define DEMO_CHANGE_UTC "2026-04-22T18:00:00Z"

static void say_row(void *ctx, const struct import_message *m)
{
	int *refused = ctx;
	*refused += !m->warning;
}

/* Its telescope; times at the Sun's altitude, as standing blocks of every night. */
static enum status put_demo_telescope(struct store *s, struct err *e)
{
	struct site_list sites = {.n = 0};
	struct telescope t = telescope_empty();
	t.name = "East dome";
	t.aperture_m = 0.5;
	t.slew_deg_s = 2.0;
	t.settle_min = 4.0;
	t.blocks = "sunset..evening-9=evening flats and focus;morning-9..sunrise=morning flats and closing";
	enum status st = sites_load(s, &sites, e);
	if (st != ST_OK)
		return st;
	t.site_id = sites.site[0].id;
	st = telescope_put(s, &t, true, e);
	site_list_free(&sites);
	return st;
}

static enum status fill_demo(struct store *s, struct err *e)
{
	const struct change change = {.utc = DEMO_CHANGE_UTC, .who = "demo", .verb = "demo"};
	const struct import_options options = {.strict = true, .change = change};
	struct import_report report;
	int refused = 0;
	enum status st = store_begin(s, &change, e);
	if (st != ST_OK)
		return st;
	st = site_put(s, &demo_site, true, e);
	if (st == ST_OK)
		st = put_demo_telescope(s, e);
	if (st == ST_OK)
		st = store_commit(s, e);
	if (st != ST_OK) {
		store_rollback(s);
		return st;
	}
	return import_targets(s, demo_targets_csv, demo_targets_csv_size, &options, &report, say_row,
			      &refused, e);
}

static int show_demo(struct run *r, bool interface)
{
	const struct options *o = r->options;
	int32_t mjd = run_tonight(r);
	struct err e;
	if (o->n_words > 1 && given_night(&r->leap, r->site.lon_east_deg, o->word[1], &mjd, &e) != ST_OK)
		return usage_fault("DATE", &e);
	if (!interface)
		return night_write(r, mjd);
	err_clear(&e);
	int code = page_run(r, mjd, &e);
	if (code != EXIT_DONE && e.text[0])
		diagnose("interface", "%s", e.text);
	return code;
}

int command_demo(const struct env *env, const struct options *o)
{
	struct options demo = *o;
	struct env apart = *env;
	struct run run;
	struct store *store;
	struct err e;
	int code;
	bool interface = env->stdin_tty && env->stdout_tty && !o->format && !o->plain && !o->out;
	if (!one_site(o, "demo"))
		return EXIT_USAGE;
	if (!demo.now)
		demo.now = interface ? DEMO_NOW "+" : DEMO_NOW;
	apart.settings_apart = true; /* the demo is the same for everyone; --settings still works */
	if (store_open("demo", STORE_MEMORY, &store, &e) != ST_OK)
		return diagnose_err("demo", &e, EXIT_UNMET);
	if (fill_demo(store, &e) != ST_OK) {
		store_close(store);
		return diagnose_err("demo", &e, EXIT_UNMET);
	}
	if (run_open_on(&run, store, &apart, &demo, NEED_STORE | NEED_SITE | NEED_TARGETS, &code, &e) !=
	    ST_OK)
		return diagnose_whole(&e, code);
	code = show_demo(&run, interface);
	run_close(&run);
	return code;
}
