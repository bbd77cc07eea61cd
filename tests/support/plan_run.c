/* SPDX-License-Identifier: MIT */
#include "tests/support/plan_run.h"

#include "db/import.h"
#include "tests/support/check.h"
#include "tests/support/observing_store.h"
#include "tui/demo_data.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static const struct change filling = {"2026-04-01T00:00:00Z", "test", "fill"};

static void say(void *ctx, const struct import_message *m)
{
	(void)ctx;
	(void)m;
}

static void fill(struct store *s)
{
	const struct import_options options = {.strict = true, .change = filling};
	const struct site hill = {.name = "Tern Hill",
				  .lat_deg = 38.62,
				  .lon_east_deg = -109.36,
				  .height_m = 2100.0,
				  .zone = "America/Denver"};
	struct import_report report;
	struct err e = {0};
	must(store_begin(s, &filling, &e), &e);
	must(site_put(s, &hill, true, &e), &e);
	must(store_commit(s, &e), &e);
	must(import_targets(s, demo_targets_csv, demo_targets_csv_size, &options, &report, say, NULL, &e),
	     &e);
}

struct plan_run *plan_run_open(const char *now)
{
	struct plan_run *p = calloc(1, sizeof *p);
	struct store *s = NULL;
	struct err e = {0};
	int code;
	if (!p)
		check_fail("no memory");
	p->options.min_chance = p->options.ut1_utc_s = p->options.moved_min = NAN;
	p->options.drift_limit_min = p->options.precision_min = NAN;
	p->options.now = now;
	snprintf(p->env.user, sizeof p->env.user, "test");
	snprintf(p->env.zoneinfo_dir, sizeof p->env.zoneinfo_dir, "/usr/share/zoneinfo");
	must(store_open("memory", STORE_MEMORY, &s, &e), &e);
	fill(s);
	must(run_open_on(&p->run, s, &p->env, &p->options, NEED_STORE | NEED_SITE | NEED_TARGETS, &code, &e),
	     &e);
	return p;
}

void plan_run_close(struct plan_run *p)
{
	run_close(&p->run);
	free(p);
}

void plan_run_now(struct plan_run *p, const char *utc)
{
	struct err e = {0};
	must(utc_parse(&p->run.leap, utc, &p->run.wall.start, &e), &e);
}

void plan_case_open(struct plan_case *c, struct plan_run *p, const struct plan_wish *wish,
		    enum status expected)
{
	struct err e = {0};
	*c = (struct plan_case){.echo = NULL};
	const enum status s =
	    plan_get(&p->run, PLAN_RUN_EVENING_MJD, wish, &c->night, &c->view, &c->echo, &e);
	if (s != expected)
		check_fail("status %d, expected %d: %s", (int)s, (int)expected, e.text);
}

void plan_case_close(struct plan_case *c)
{
	plan_view_free(&c->view);
	night_view_free(&c->night);
	free(c->echo);
}

const struct plan_item_view *plan_case_item(const struct plan_case *c, const char *target)
{
	for (size_t i = 0; i < c->view.n_items; i++)
		for (size_t k = 0; k < c->view.item[i].n; k++)
			if (strcmp(c->view.item[i].member[k].target, target) == 0)
				return &c->view.item[i];
	return NULL;
}

const char *plan_case_left(const struct plan_case *c, const char *target)
{
	for (size_t i = 0; i < c->view.n_left; i++)
		if (strcmp(c->view.left[i].target, target) == 0)
			return c->view.left[i].reason;
	return "";
}
