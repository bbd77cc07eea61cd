/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "ephem/number_text.h"
#include "tui/diagnose.h"
#include "tui/parts/drift_columns.h"
#include "tui/parts/text_width.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/gaps.h"
#include "tui/sheets/json.h"
#include "tui/sheets/out.h"
#include "tui/sheets/text.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum { CELL_BYTES = 512 };

/* --- for programs --- */

static bool write_csv(FILE *to, const struct run *r, const struct drift_table *t, const size_t order[])
{
	struct csv_out c = {.file = to};
	char text[CELL_BYTES];
	for (size_t k = 0; k < drift_column_count; k++)
		csv_text(&c, drift_columns[k].name);
	csv_end_line(&c);
	for (size_t i = 0; i < t->n; i++) {
		for (size_t k = 0; k < drift_column_count; k++) {
			const struct value v = drift_column_value(&drift_columns[k], &t->row[order[i]], t);
			drift_machine_text(&drift_columns[k], &v, &r->leap, text, sizeof text);
			if (v.type == VALUE_TEXT)
				csv_text(&c, text);
			else
				csv_number(&c, text);
		}
		csv_end_line(&c);
	}
	return !c.failed;
}

static void write_json(FILE *to, const struct run *r, const struct drift_table *t, const size_t order[])
{
	struct json j = json_begin(to);
	char text[CELL_BYTES];
	json_open(&j, NULL, '[', false);
	for (size_t i = 0; i < t->n; i++) {
		json_open(&j, NULL, '{', false);
		for (size_t k = 0; k < drift_column_count; k++) {
			const struct drift_column *c = &drift_columns[k];
			const struct value v = drift_column_value(c, &t->row[order[i]], t);
			drift_machine_text(c, &v, &r->leap, text, sizeof text);
			if (v.type == VALUE_NONE)
				json_null(&j, c->name);
			else if (v.type == VALUE_TEXT || v.type == VALUE_UTC)
				json_text(&j, c->name, text);
			else
				json_digits(&j, c->name, text);
		}
		json_close(&j, '}');
	}
	json_close(&j, ']');
	json_end(&j);
}

/* --- for people --- */

static void date_of(struct utc t, char out[40])
{
	const struct date d = date_from_mjd(t.mjd);
	snprintf(out, 40, "%04d-%02d-%02d", d.year, d.month, d.day);
}

static void drift_head(FILE *to, const struct run *r, const struct drift_table *t)
{
	char now[UTC_TEXT_MAX], at[40];
	utc_text(&r->leap, t->now, 0, now);
	date_of(t->choice.at, at);
	fprintf(to,
		"Drift of %zu ephemerides; now is %s, the chosen date %s. Errors in minutes, times UTC.\n",
		t->n, now, at);
	if (isnan(t->choice.limit_min))
		fputs("Stale: the error passes each target's own limit, where the pad begins to eat the "
		      "least baseline.\n",
		      to);
	else
		fprintf(to, "Stale: the error passes %g min.\n", t->choice.limit_min);
	if (!t->choice.refresh)
		return;
	if (t->n_sites == 0) {
		fputs("Refresh: not searched, no site is chosen (--site or --place).\n", to);
		return;
	}
	fputs("Refresh: windows at ", to);
	for (size_t i = 0; i < t->n_sites; i++) {
		fputs(i ? ", " : "", to);
		text_cell(to, t->site[i].name, 40, false);
	}
	fprintf(
	    to,
	    "; a mid-time is assumed to be good to %g min (--precision).\n"
	    "  First: a chance of done of %g or more, and it brings the error at the chosen date below the "
	    "limit. Best: most\n  chance times gain within %d days, before the stale date where one comes "
	    "before it.\n",
	    t->choice.precision_min, REFRESH_CHANCE_MIN, REFRESH_BEST_DAYS);
}

static bool shown(const struct drift_table *t, size_t column)
{
	const struct drift_column *c = &drift_columns[column];
	const bool searched = t->choice.refresh && t->n_sites > 0;
	if (!c->heading)
		return false;
	return searched || column < (size_t)drift_column_find("first_refresh_utc");
}

/* Widths of the columns as they are needed. */
static void measure(const struct run *r, const struct drift_table *t, int width[])
{
	char text[CELL_BYTES];
	for (size_t k = 0; k < drift_column_count; k++) {
		width[k] = abs(drift_columns[k].width);
		for (size_t i = 0; drift_columns[k].width < 0 && i < t->n; i++) {
			const struct value v = drift_column_value(&drift_columns[k], &t->row[i], t);
			drift_people_text(&drift_columns[k], &v, &r->leap, text, sizeof text);
			const int needed = text_columns(text);
			width[k] = needed > width[k] ? needed : width[k];
		}
		width[k] = width[k] > TEXT_NAME_WIDTH_MAX ? TEXT_NAME_WIDTH_MAX : width[k];
	}
}

static const char *no_refresh_words(const struct drift_row *row)
{
	if (row->search == REFRESH_NOT_NEEDED)
		return "no refresh needed";
	if (row->search == REFRESH_NO_CHANCE)
		return "no chance can be given";
	if (row->search == REFRESH_SEARCHED && !row->best.found && !row->first.found)
		return "no window would refresh it";
	if (row->search == REFRESH_SEARCHED && !row->first.found)
		return "no single window brings it below the limit";
	return row->best.late ? "best refresh is after the stale date" : "";
}

static void words_of(const struct drift_row *row, const struct drift_table *t, char *out, size_t n)
{
	drift_words(row, out, n);
	const char *more = no_refresh_words(row);
	size_t used = strlen(out);
	if (more[0] && used + strlen(more) + 3 < n)
		used += (size_t)snprintf(out + used, n - used, "%s%s", used ? "; " : "", more);
	if (t->n_sites > 1 && row->best.found && used + 60 < n)
		snprintf(out + used, n - used, "%sbest from %.40s", used ? "; " : "",
			 t->site[row->best.site].name);
}

static void text_table(FILE *to, const struct run *r, const struct drift_table *t, const size_t order[])
{
	int width[64];
	char text[CELL_BYTES];
	measure(r, t, width);
	for (size_t k = 0; k < drift_column_count; k++)
		if (shown(t, k))
			fprintf(to, drift_columns[k].width < 0 ? "%-*s " : "%*s ", width[k],
				drift_columns[k].heading);
	fputs(" remarks\n", to);
	for (size_t i = 0; i < t->n; i++) {
		const struct drift_row *row = &t->row[order[i]];
		for (size_t k = 0; k < drift_column_count; k++) {
			const struct drift_column *c = &drift_columns[k];
			if (!shown(t, k))
				continue;
			const struct value v = drift_column_value(c, row, t);
			drift_people_text(c, &v, &r->leap, text, sizeof text);
			if (c->width < 0)
				text_cell(to, text, width[k], true);
			else
				fprintf(to, "%*s", width[k], text);
			fputc(' ', to);
		}
		words_of(row, t, text, sizeof text);
		fputc(' ', to);
		text_cell(to, text, 200, false);
		fputc('\n', to);
	}
}

/* --plain: a paragraph a target. */
static void text_records(FILE *to, const struct run *r, const struct drift_table *t, const size_t order[])
{
	char text[CELL_BYTES];
	for (size_t i = 0; i < t->n; i++) {
		const struct drift_row *row = &t->row[order[i]];
		fputc('\n', to);
		for (size_t k = 0; k < drift_column_count; k++) {
			const struct drift_column *c = &drift_columns[k];
			const struct value v = drift_column_value(c, row, t);
			if (v.type == VALUE_NONE)
				continue;
			drift_people_text(c, &v, &r->leap, text, sizeof text);
			fprintf(to, "%s: ", c->name);
			text_cell(to, text, 300, false);
			fprintf(to, "%s%s\n", c->unit[0] ? " " : "", c->unit);
		}
		words_of(row, t, text, sizeof text);
		if (text[0])
			fprintf(to, "remarks: %s\n", text);
	}
}

static void write_text(FILE *to, const struct run *r, const struct drift_table *t, const size_t order[])
{
	long count[FLAG_COUNT] = {0};
	drift_head(to, r, t);
	if (t->n == 0)
		fputs("No target is stored: wane import FILE.\n", to);
	else if (r->options->plain)
		text_records(to, r, t, order);
	else
		text_table(to, r, t, order);
	for (size_t i = 0; i < t->n; i++)
		for (int f = 0; f < FLAG_COUNT; f++)
			count[f] += t->row[i].flags >> f & 1;
	for (int f = 0; f < FLAG_COUNT; f++)
		if (count[f] > 0)
			fprintf(to, "%s (%ld): %s\n", flag_rules[f].word, count[f], flag_rules[f].sentence);
	text_cautions(to);
}

/* --- two versions --- */

static int write_against(struct run *r, enum format format, FILE *to, struct err *e)
{
	struct gap_table g;
	struct err why;
	double version;
	const char *text = r->options->against;
	if (number_parse(text, strlen(text), &version, NULL, &why) != ST_OK || version != floor(version) ||
	    fabs(version) > 1e9) {
		err_set(e, ST_SYNTAX, "--against: expected the number of a version (got \"%.40s\")", text);
		return EXIT_USAGE;
	}
	if (r->n_prepared != 1 || !r->store) {
		err_set(e, ST_SYNTAX, "--against: one TARGET has to be named");
		return EXIT_USAGE;
	}
	if (gap_table_make(&g, r, &r->prepared[0], (int)version, r->options->drift_limit_min, &why) !=
	    ST_OK) {
		err_set(e, why.status, "--against: %.460s", why.text);
		return EXIT_UNMET;
	}
	if (format == FORMAT_TEXT)
		gap_text(to, &r->prepared[0], &g);
	else if (format == FORMAT_CSV)
		gap_csv(to, r, &g);
	else
		gap_json(to, r, &r->prepared[0], &g);
	return EXIT_DONE;
}

/* --- the command --- */

static int write_drift(struct run *r, enum format format, FILE *to, struct err *e)
{
	struct drift_table t = {.n = 0};
	struct drift_choice choice;
	int column = drift_column_find(format == FORMAT_TEXT ? "stale_on" : "target");
	bool descending = false, whole = true;
	struct err why;
	if (drift_choice_of(r, &choice, e) != ST_OK)
		return EXIT_USAGE;
	if (r->options->sort && drift_sort_parse(r->options->sort, &column, &descending, &why) != ST_OK) {
		err_set(e, ST_SYNTAX, "--sort: %.460s", why.text);
		return EXIT_USAGE;
	}
	if (drift_table_make(&t, r, &choice, &why) != ST_OK) {
		err_set(e, why.status, "drift: %.460s", why.text);
		return EXIT_UNMET;
	}
	size_t *order = calloc(t.n + 1, sizeof *order);
	enum status s = order ? drift_order(&t, column, descending, order, &why)
			      : err_set(&why, ST_MEMORY, "no memory for %zu rows", t.n);
	if (s == ST_OK && format == FORMAT_TEXT)
		write_text(to, r, &t, order);
	else if (s == ST_OK && format == FORMAT_CSV)
		whole = write_csv(to, r, &t, order);
	else if (s == ST_OK)
		write_json(to, r, &t, order);
	if (!whole)
		s = err_set(&why, ST_MEMORY, "no memory for a long cell");
	if (s == ST_OK && format != FORMAT_TEXT && choice.refresh && t.n_sites == 0)
		diagnose("site", "none is chosen (--site or --place): the refresh columns are empty");
	if (s != ST_OK)
		err_set(e, s, "drift: %.460s", why.text);
	free(order);
	drift_table_free(&t);
	return s == ST_OK ? EXIT_DONE : EXIT_UNMET;
}

int command_drift(const struct env *env, const struct options *o)
{
	struct options named = *o;
	struct run run;
	struct err e;
	int code = EXIT_DONE;
	enum format format;
	for (int i = 1; i < o->n_words; i++) {
		if (named.n_targets == OPTION_NAMES_MAX) {
			diagnose("TARGET", "more than %d are named", OPTION_NAMES_MAX);
			return EXIT_USAGE;
		}
		named.target[named.n_targets++] = o->word[i];
	}
	if (format_of(o, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &format, &e) != ST_OK)
		return usage_fault("--format", &e);
	if (run_open(&run, env, &named, NEED_STORE | NEED_TARGETS | (o->no_refresh ? 0 : NEED_FIRST_SITE),
		     &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	if (!o->no_refresh && !o->against && run.sites.n > 1 && o->n_sites + o->n_places == 0 &&
	    !run.settings.site[0])
		diagnose("site", "several are stored and none is named: refresh is searched at %s",
			 run.site.name);
	struct out out;
	if (run_out_open(&run, &out, &e) != ST_OK) {
		run_close(&run);
		return diagnose_whole(&e, EXIT_UNMET);
	}
	code =
	    o->against ? write_against(&run, format, out.file, &e) : write_drift(&run, format, out.file, &e);
	run_close(&run);
	if (code != EXIT_DONE) {
		out_abandon(&out);
		return diagnose_whole(&e, code);
	}
	return out_commit(&out, &e) == ST_OK ? EXIT_DONE : diagnose_whole(&e, EXIT_UNMET);
}
