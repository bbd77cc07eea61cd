/* SPDX-License-Identifier: MIT */
#include "tui/commands/plan.h"
#include "tui/commands/table.h"

#include "tui/commands/one_night.h"
#include "tui/commands/result.h"
#include "tui/diagnose.h"
#include "tui/parts/clock_mark.h"
#include "tui/plan_make.h"
#include "tui/sheets/order_text.h"
#include "tui/sheets/plan_sheet.h"
#include "tui/sheets/text.h"
#include "tui/sheets/windows.h"

#include <math.h>
#include <string.h>

/* The kept plan of the night, else a proposal. A plan that can't be had is said and takes nothing from the
 * night. */
struct order {
	struct night_view night;
	struct plan_view view;
	bool there;
};

static void order_open(struct order *order, struct run *r, int32_t evening_mjd)
{
	const struct plan_wish wish = {.moved_min = NAN};
	struct err e;
	*order = (struct order){.there = false};
	if (r->options->radec) /* of a position nothing is planned, and the stored targets are not known */
		return;
	order->there = plan_get(r, evening_mjd, &wish, &order->night, &order->view, NULL, &e) == ST_OK;
	if (order->there)
		plan_damage_note(&order->view);
	else
		diagnose("plan", "%s", e.text);
}

static void order_close(struct order *order)
{
	if (order->there)
		plan_view_free(&order->view);
	night_view_free(&order->night);
}

static void write_text(FILE *to, const struct run *r, const struct night_view *v, const struct order *order)
{
	struct text_sheet t;
	text_begin(&t, to, r, false);
	t.hidden = v->hidden;
	text_head(&t, &r->site, r->zone, v);
	/* in a night of a clock change the zone has two names; the head says so */
	const struct night *n = &v->night;
	struct local_time noon = zone_local(r->zone, night_utc(n, 0.0));
	if (v->list.n > 0)
		text_heading(&t, clocks_change(n, r->zone) ? "local time" : noon.abbreviation);
	text_rows(&t, v, r->zone, false);
	text_rows(&t, v, r->zone, true);
	if (order->there) {
		fputc('\n', to);
		order_line(to, &order->view);
	}
	text_foot(&t, n->mjd);
}

static bool write_csv(FILE *to, const struct night_view *v)
{
	struct csv_out c = {.file = to};
	windows_csv_header(&c);
	for (size_t i = 0; i < v->list.n; i++)
		window_csv(&c, &v->list.w[i], &v->night);
	return !c.failed;
}

static void write_json(FILE *to, const struct run *r, const struct night_view *v, const struct order *order)
{
	struct json j = json_begin(to);
	json_open(&j, NULL, '{', false);
	site_json(&j, "site", &r->site);
	limits_json(&j, r, &r->site);
	night_json(&j, v, r->limits.value[LIM_SUN]);
	json_open(&j, "windows", '[', false);
	for (size_t i = 0; i < v->list.n; i++)
		window_json(&j, &v->list.w[i], &v->night);
	json_close(&j, ']');
	if (order->there)
		plan_items_json(&j, "running_order", &order->view);
	else {
		json_open(&j, "running_order", '[', false);
		json_close(&j, ']');
	}
	/* null: there is no order to be kept or not */
	if (order->there && (order->view.kept || order->view.n_items > 0))
		json_bool(&j, "running_order_kept", order->view.kept);
	else
		json_null(&j, "running_order_kept");
	json_close(&j, '}');
	json_end(&j);
}

int night_write(struct run *r, int32_t evening_mjd)
{
	struct night_view view = {.hidden = 0};
	struct out out;
	struct err e;
	enum format format;
	const int opened = result_open(r, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &format, &out);
	if (opened != EXIT_DONE)
		return opened;
	if (run_night(r, evening_mjd, format == FORMAT_TEXT, &view, &e) != ST_OK) {
		out_abandon(&out);
		night_view_free(&view);
		return diagnose_err("night", &e, EXIT_UNMET);
	}
	bool whole = true;
	run_night_notes(&view);
	if (format == FORMAT_CSV)
		whole = write_csv(out.file, &view);
	else {
		struct order order;
		order_open(&order, r, evening_mjd);
		if (format == FORMAT_TEXT)
			write_text(out.file, r, &view, &order);
		else
			write_json(out.file, r, &view, &order);
		order_close(&order);
	}
	if (format != FORMAT_TEXT) {
		leap_note(r, evening_mjd);
		uncounted_note(r);
	}
	night_view_free(&view);
	return result_commit(&out, whole);
}

void leap_note(const struct run *r, int32_t last_mjd)
{
	struct date d = date_from_mjd(r->leap.expires_mjd);
	if (last_mjd > r->leap.expires_mjd)
		diagnose("leap seconds",
			 "the table is known to be complete until %04d-%02d-%02d; later UTC times may be off "
			 "by a second",
			 d.year, d.month, d.day);
}

void uncounted_note(const struct run *r)
{
	char text[600];
	if (uncounted_text(r, text, sizeof text) > 0)
		diagnose("targets", "%s", text);
}

bool one_site(const struct options *o, const char *command)
{
	if (o->n_sites + o->n_places <= 1)
		return true;
	diagnose("--site", "%s takes one site or place (got %d)", command, o->n_sites + o->n_places);
	return false;
}

int command_night(const struct env *env, const struct options *o)
{
	if (!one_site(o, "night"))
		return EXIT_USAGE;
	return one_night_run(env, o, NEED_STORE | NEED_SITE | NEED_TARGETS,
			     o->explain ? night_explain : night_write);
}
