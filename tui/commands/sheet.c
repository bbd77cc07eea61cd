/* SPDX-License-Identifier: MIT
 * wane sheet: a night's running order for the team. */
#include "tui/commands/plan.h"
#include "tui/commands/table.h"

#include "tui/commands/one_night.h"
#include "tui/diagnose.h"
#include "tui/plan_make.h"
#include "tui/sheets/plan_words.h"

#include <stdlib.h>
#include <string.h>

enum {
	SHEET_FORMATS = FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON | FORMAT_ICS | FORMAT_HTML,
	CHANGE_FORMATS = FORMAT_TEXT | FORMAT_JSON | FORMAT_HTML, /* that say what changed */
	SINCE_BYTES = 240
};

/* The lines of changes since another plan of the night. */
struct since {
	char words[SINCE_BYTES];
	char **line;
	size_t n;
};

static void since_free(struct since *s)
{
	for (size_t i = 0; i < s->n; i++)
		free(s->line[i]);
	free(s->line);
}

/* A whole number is an edition of the plan that is shown. */
static bool is_edition(const char *text, int *edition)
{
	enum { DIGITS_MAX = 9 };
	const size_t n = strlen(text);
	if (n == 0 || n > DIGITS_MAX || strspn(text, "0123456789") != n)
		return false;
	*edition = (int)strtol(text, NULL, 10);
	return true;
}

static enum status no_draft(const char *option, const char *name, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	err_quote(name, strlen(name), got);
	return err_set(e, ST_ABSENT,
		       "%s: no such draft of this night (got \"%s\"; see wane plan DATE --list)", option,
		       got);
}

static enum status since_draft(struct run *r, const struct plan_view *v, const char *name, struct since *out,
			       struct err *e)
{
	const struct plan_wish wish = {.draft = name, .moved_min = r->options->moved_min};
	struct night_view night = {.hidden = 0};
	struct plan_view before;
	enum status s = plan_get(r, v->night->night.mjd, &wish, &night, &before, NULL, e);
	if (s == ST_OK) {
		s = before.stored ? plan_changes(&before, v, &out->line, &out->n, e)
				  : no_draft("--since", name, e);
		plan_view_free(&before);
	}
	night_view_free(&night);
	snprintf(out->words, sizeof out->words, "draft %s", name);
	return s;
}

static enum status since_edition(const struct plan_view *v, int edition, struct since *out, struct err *e)
{
	struct plan_view before;
	enum status s = plan_edition(v, edition, &before, e);
	if (s != ST_OK)
		return s;
	s = plan_changes(&before, v, &out->line, &out->n, e);
	plan_view_free(&before);
	snprintf(out->words, sizeof out->words, "edition %d", edition);
	return s;
}

static enum status since_get(struct run *r, const struct plan_view *v, struct since *out, struct err *e)
{
	const char *text = r->options->since;
	int edition;
	*out = (struct since){.n = 0};
	if (!text)
		return ST_OK;
	return is_edition(text, &edition) ? since_edition(v, edition, out, e)
					  : since_draft(r, v, text, out, e);
}

static bool write_format(FILE *to, enum format format, const struct plan_view *v,
			 const struct sheet_changes *changes)
{
	switch (format) {
	case FORMAT_CSV:
		return plan_sheet_csv(to, v);
	case FORMAT_JSON:
		return plan_json(to, v, changes);
	case FORMAT_ICS:
		return plan_sheet_ics(to, v);
	case FORMAT_HTML:
		return plan_sheet_html(to, v, changes);
	default:
		return plan_sheet_text(to, v, changes);
	}
}

/* What the formats for programs have no place for. */
static void say_left_out(const struct plan_view *v)
{
	char names[PLAN_NAMES_BYTES];
	for (size_t i = 0; i < v->n_items; i++) {
		if (!v->item[i].in_day)
			continue;
		plan_names(&v->item[i], names);
		diagnose("sheet", "%s left out: %s", names, plan_sun_up_reason);
	}
}

static int sheet_fault(const struct err *e)
{
	return diagnose_err("sheet", e,
			    e->status == ST_SYNTAX || e->status == ST_RANGE ? EXIT_USAGE : EXIT_UNMET);
}

static int write_view(struct run *r, const struct plan_view *v, enum format format)
{
	struct since since;
	struct out out;
	struct err e;
	if (r->options->draft && !v->stored) {
		(void)no_draft("--draft", r->options->draft, &e);
		return sheet_fault(&e);
	}
	if (since_get(r, v, &since, &e) != ST_OK) {
		since_free(&since);
		return sheet_fault(&e);
	}
	const struct sheet_changes changes = {
	    .since = r->options->since ? since.words : NULL, .line = since.line, .n = since.n};
	int code = EXIT_UNMET;
	enum status s = run_out_open(r, &out, &e);
	const bool whole = s == ST_OK && write_format(out.file, format, v, &changes);
	if (whole)
		s = out_commit(&out, &e);
	else if (s == ST_OK)
		out_abandon(&out);
	if (s != ST_OK) {
		diagnose_whole(&e, EXIT_UNMET);
	} else if (!whole) {
		diagnose("memory", "none for the whole sheet");
	} else {
		code = EXIT_DONE;
		say_left_out(v);
		if (v->stored)
			plan_unused_note(r->options, "sheet");
		if (!v->kept)
			diagnose("sheet", "no plan of this night is kept: this is %s (wane plan DATE --keep)",
				 v->stored ? "a draft" : "a proposal");
		plan_kept_elsewhere_note(r, v->night->night.mjd, "sheet");
		leap_note(r, v->night->night.mjd);
	}
	since_free(&since);
	return code;
}

static int sheet_write(struct run *r, int32_t evening_mjd)
{
	const struct plan_wish wish = {
	    .draft = r->options->draft, .moved_min = r->options->moved_min, .costs = true};
	struct night_view night = {.hidden = 0};
	struct plan_view view;
	struct err e;
	enum format format;
	int code;
	if (format_of(r->options, SHEET_FORMATS, &format, &e) != ST_OK)
		return usage_fault("--format", &e);
	if (r->options->since && !(format & CHANGE_FORMATS)) {
		diagnose("--since", "goes with text, json and html (got %s)", r->options->format);
		return EXIT_USAGE;
	}
	if (plan_get(r, evening_mjd, &wish, &night, &view, NULL, &e) == ST_OK) {
		plan_damage_note(&view);
		code = write_view(r, &view, format);
		plan_view_free(&view);
	} else {
		code = sheet_fault(&e);
	}
	night_view_free(&night);
	return code;
}

int command_sheet(const struct env *env, const struct options *o)
{
	if (!plan_options_fit(o, "sheet"))
		return EXIT_USAGE;
	return one_night_run(env, o, NEED_STORE | NEED_SITE | NEED_TARGETS, sheet_write);
}
