/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "tui/commands/demo_store.h"
#include "tui/diagnose.h"
#include "tui/given.h"
#include "tui/pages/page_run.h"

#include <string.h>

/* A good evening: the interface's clock starts half an hour before dusk and runs; print is frozen there. */
#define DEMO_NOW "2026-04-23T02:40:00Z"

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
	if (demo_fill(store, &e) != ST_OK) {
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
