/* SPDX-License-Identifier: MIT */
#include "tui/commands/plan.h"

#include "tui/commands/one_night.h"
#include "tui/commands/table.h"
#include "tui/diagnose.h"
#include "tui/sheets/order_text.h"
#include "tui/sheets/plan_sheet.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

struct plan_wish plan_wish_of(const struct options *o)
{
	return (struct plan_wish){
	    .draft = o->draft,
	    .pin = o->pin.text,
	    .n_pin = o->pin.n,
	    .drop = o->drop.text,
	    .n_drop = o->drop.n,
	    .free = o->free_event.text,
	    .n_free = o->free_event.n,
	    .block = o->block.text,
	    .n_block = o->block.n,
	    .unblock = o->unblock.text,
	    .n_unblock = o->unblock.n,
	    .lost = o->lost.text,
	    .n_lost = o->lost.n,
	    .unlost = o->unlost.text,
	    .n_unlost = o->unlost.n,
	    .poor = o->poor.text,
	    .n_poor = o->poor.n,
	    .rebuild = o->rebuild,
	    .afresh = o->afresh,
	    .from = o->plan_from,
	    .moved_min = o->moved_min,
	};
}

int plan_fault(const struct err *e)
{
	const bool usage = e->status == ST_SYNTAX || e->status == ST_RANGE;
	return diagnose_err("plan", e, usage ? EXIT_USAGE : EXIT_UNMET);
}

/* --- what belongs together on the command line --- */

bool plan_options_fit(const struct options *o, const char *command)
{
	char got[ERR_QUOTE_MAX];
	if (!one_site(o, command))
		return false;
	if (!o->radec)
		return true;
	err_quote(o->radec, strlen(o->radec), got);
	diagnose("--radec", "a position has no events to plan (got \"%s\", expected --target NAME)", got);
	return false;
}

void plan_unused_note(const struct options *o, const char *command)
{
	bool given = o->n_targets > 0 || o->kinds || o->no_allotments || o->mask || !isnan(o->ut1_utc_s);
	for (int id = 0; id < LIM_COUNT; id++)
		given = given || o->limit_given[id];
	if (given)
		diagnose(command,
			 "the plan is shown as it was stored: what was given of targets, kinds, limits "
			 "and allotments takes part when it is worked out anew (wane plan DATE --rebuild)");
}

void plan_damage_note(const struct plan_view *v)
{
	if (v->damage[0])
		diagnose("store", "%s: %s", v->run->db_path, v->damage);
}

/* What is at fault, or NULL. */
static const char *at_odds(const struct options *o)
{
	const struct plan_wish wish = plan_wish_of(o);
	const bool wishes = wish_any(&wish);
	const int whole = o->list + (o->compare != NULL) + (o->remove_draft != NULL);
	if (whole > 1)
		return "--list, --compare and --remove are three things";
	if (whole == 1 && (wishes || o->keep || o->save || o->mark.n > 0))
		return "--list, --compare and --remove go with no change of a plan";
	if ((o->cause || o->note) && o->mark.n == 0)
		return "--cause and --note belong to --mark";
	if (o->mark.n > 0 && (wishes || o->keep || o->save))
		return "--mark is stored at once: plan anew in a call of its own";
	return NULL;
}

/* --- marks --- */

/* `T=STATE`: the last sign of equality parts them. */
static enum status mark_parse(const char *text, char *target, size_t n, enum plan_state *state, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	const char *equals = strrchr(text, '=');
	err_quote(text, strlen(text), got);
	if (equals && equals > text && (size_t)(equals - text) < n) {
		snprintf(target, n, "%.*s", (int)(equals - text), text);
		for (int s = 0; s < PLAN_STATE_COUNT; s++)
			if (s != PLAN_PINNED && strcmp(equals + 1, plan_state_words[s]) == 0) {
				*state = (enum plan_state)s;
				return ST_OK;
			}
	}
	return err_set(
	    e, ST_SYNTAX,
	    "mark: can't be read (got \"%s\", expected NAME=started, done, partly, lost or planned)", got);
}

static int mark_all(struct run *r, int32_t mjd)
{
	const struct options *o = r->options;
	const struct plan_wish wish = {.draft = o->draft, .moved_min = NAN};
	struct night_view night = {.hidden = 0};
	struct plan_view view;
	struct err e;
	char target[NAME_BYTES_MAX + 16];
	enum plan_state state = PLAN_PLANNED;
	enum status s = ST_OK;
	for (int i = 0; s == ST_OK && i < o->mark.n; i++)
		s = mark_parse(o->mark.text[i], target, sizeof target, &state, &e);
	if (s != ST_OK)
		return plan_fault(&e);
	s = plan_get(r, mjd, &wish, &night, &view, NULL, &e);
	if (s != ST_OK) {
		night_view_free(&night);
		return plan_fault(&e);
	}
	plan_damage_note(&view);
	for (int i = 0; s == ST_OK && i < o->mark.n; i++) {
		s = mark_parse(o->mark.text[i], target, sizeof target, &state, &e);
		if (s == ST_OK)
			s = plan_mark_item(r, &view, target, state, o->cause, o->note, &e);
	}
	plan_view_free(&view);
	night_view_free(&night);
	return s == ST_OK ? EXIT_DONE : plan_fault(&e);
}

/* --- showing --- */

static void echo_lines(char *echo)
{
	for (char *line = echo; line && *line;) {
		char *end = strchr(line, '\n');
		if (end)
			*end = '\0';
		diagnose("plan", "%s", line);
		line = end ? end + 1 : line + strlen(line);
	}
	free(echo);
}

/* A draft that is asked for by name and not stored is only a plan when it is to be stored now. */
static enum status draft_there(const struct options *o, const struct plan_view *v, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	if (!o->draft || v->edition > 0 || o->keep || o->save)
		return ST_OK;
	err_quote(o->draft, strlen(o->draft), got);
	return err_set(e, ST_ABSENT, "no such draft this night (got \"%s\"; see wane plan DATE --list)", got);
}

static int write_plan(struct run *r, struct plan_view *v, enum format format, struct out *out)
{
	struct err e;
	bool whole = true;
	if (format == FORMAT_TEXT)
		order_text(out->file, v, r->options->plain);
	else
		whole = plan_json(out->file, v, NULL);
	if (!whole) {
		out_abandon(out);
		diagnose("memory", "none for a plan");
		return EXIT_UNMET;
	}
	if (out_commit(out, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	for (size_t i = 0; i < v->n_left; i++)
		if (strncmp(v->left[i].reason, "pinned", strlen("pinned")) == 0)
			diagnose("plan", "%.200s: %.400s", v->left[i].target, v->left[i].reason);
	if (!v->stored)
		diagnose("plan",
			 "shown, not stored (--keep stores and keeps it, --save stores it as a draft)");
	plan_kept_elsewhere_note(r, v->night->night.mjd, "plan");
	leap_note(r, v->night->night.mjd);
	run_night_notes(v->night);
	return EXIT_DONE;
}

static int show(struct run *r, int32_t mjd, enum format format, struct out *out)
{
	const struct options *o = r->options;
	struct plan_wish wish = plan_wish_of(o);
	struct night_view night = {.hidden = 0};
	struct plan_view view;
	struct err e;
	char *echo = NULL;
	int code;
	wish.costs = true;
	enum status s = plan_get(r, mjd, &wish, &night, &view, &echo, &e);
	echo_lines(echo);
	if (s == ST_OK) {
		plan_damage_note(&view);
		s = draft_there(o, &view, &e);
		if (view.stored)
			plan_unused_note(o, "plan");
		if (s == ST_OK && (o->keep || o->save))
			s = plan_save(r, &view, o->draft, o->keep, &e);
		code = s == ST_OK ? write_plan(r, &view, format, out) : plan_fault(&e);
		plan_view_free(&view);
	} else
		code = plan_fault(&e);
	if (s != ST_OK)
		out_abandon(out);
	night_view_free(&night);
	return code;
}

/* --- the command --- */

static int run_plan(struct run *r, int32_t mjd)
{
	const struct options *o = r->options;
	struct out out;
	struct err e;
	enum format format;
	if (format_of(o, FORMAT_TEXT | FORMAT_JSON, &format, &e) != ST_OK)
		return usage_fault("--format", &e);
	if (o->remove_draft)
		return plan_remove_draft(r, mjd, o->remove_draft);
	/* before anything is stored: what can't be written changes nothing */
	if (run_out_open(r, &out, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	const int marked = o->mark.n > 0 ? mark_all(r, mjd) : EXIT_DONE;
	if (marked != EXIT_DONE) {
		out_abandon(&out);
		return marked;
	}
	if (o->list)
		return plan_list_write(r, mjd, format, &out);
	if (o->compare)
		return plan_compare_write(r, mjd, format, &out);
	return show(r, mjd, format, &out);
}

int command_plan(const struct env *env, const struct options *o)
{
	int needs = NEED_STORE | NEED_SITE | NEED_TARGETS;
	if (!plan_options_fit(o, "plan"))
		return EXIT_USAGE;
	if (at_odds(o)) {
		diagnose("plan", "%s", at_odds(o));
		return EXIT_USAGE;
	}
	if (o->keep || o->save || o->mark.n > 0 || o->remove_draft)
		needs |= NEED_WRITE;
	return one_night_run(env, o, needs, run_plan);
}
