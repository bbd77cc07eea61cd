/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "db/history.h"
#include "tui/commands/one_target.h"
#include "tui/commands/result.h"
#include "tui/diagnose.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/json.h"
#include "tui/sheets/text.h"

#include <stdlib.h>
#include <string.h>

/* --- history --- */

static bool write_csv(FILE *to, const struct change_row *row, size_t n)
{
	struct csv_out c = {.file = to};
	char number[24];
	fputs("change,utc,who,verb,what,undone\n", to);
	for (size_t i = 0; i < n; i++) {
		snprintf(number, sizeof number, "%lld", (long long)row[i].id);
		csv_number(&c, number);
		csv_number(&c, row[i].utc);
		csv_text(&c, row[i].who);
		csv_text(&c, row[i].verb);
		csv_text(&c, row[i].what);
		csv_number(&c, row[i].undone ? "1" : "0");
		csv_end_line(&c);
	}
	return !c.failed;
}

static void write_json(FILE *to, const struct change_row *row, size_t n)
{
	struct json j = json_begin(to);
	json_open(&j, NULL, '[', false);
	for (size_t i = 0; i < n; i++) {
		json_open(&j, NULL, '{', true);
		json_whole(&j, "change", (long)row[i].id);
		json_text(&j, "utc", row[i].utc);
		json_text(&j, "who", row[i].who);
		json_text(&j, "verb", row[i].verb);
		json_text(&j, "what", row[i].what);
		json_bool(&j, "undone", row[i].undone);
		json_close(&j, '}');
	}
	json_close(&j, ']');
	json_end(&j);
}

static void write_text(FILE *to, const struct change_row *row, size_t n)
{
	if (n == 0) {
		fputs("Nothing was changed yet.\n", to);
		return;
	}
	fprintf(to, "%6s  %-20s  %-12s  %-16s  %s\n", "change", "when (UTC)", "who", "what was done",
		"to what");
	for (size_t i = 0; i < n; i++) {
		fprintf(to, "%6lld  %-20s  ", (long long)row[i].id, row[i].utc);
		text_cell(to, row[i].who, 12, true);
		fputs("  ", to);
		text_cell(to, row[i].verb, 16, true);
		fputs("  ", to);
		text_cell(to, row[i].what, 120, false);
		fputs(row[i].undone ? "; UNDONE\n" : "\n", to);
	}
	fputs("wane undo takes the newest back, wane undo --change N another one.\n", to);
}

static int write_history(struct run *r, int64_t target_id)
{
	const struct options *o = r->options;
	struct change_row *row = NULL;
	size_t n = 0;
	struct out out;
	struct err e;
	enum format format;
	bool whole = true;
	if (format_of(o, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &format, &e) != ST_OK)
		return usage_fault("--format", &e);
	if (r->store && history_list(r->store, target_id, &row, &n, &e) != ST_OK)
		return diagnose_err("history", &e, EXIT_UNMET);
	if (run_out_open(r, &out, &e) != ST_OK) {
		free(row);
		return diagnose_whole(&e, EXIT_UNMET);
	}
	if (format == FORMAT_TEXT)
		write_text(out.file, row, n);
	else if (format == FORMAT_CSV)
		whole = write_csv(out.file, row, n);
	else
		write_json(out.file, row, n);
	free(row);
	return result_commit(&out, whole);
}

int command_history(const struct env *env, const struct options *o)
{
	struct options named;
	struct run run;
	struct err e;
	int code;
	const char *name = o->n_words > 1 ? o->word[1] : NULL;
	enum status s = name ? one_target_open(&run, env, &named, o, name, 0, &code, &e)
			     : run_open(&run, env, o, NEED_STORE, &code, &e);
	if (s != ST_OK)
		return diagnose_whole(&e, code);
	code = write_history(&run, name ? run.prepared[0].target->id : 0);
	run_close(&run);
	return code;
}

/* --- undo --- */

/* What a change was, for the message. */
static void describe(struct run *r, int64_t id, char *out, size_t n)
{
	struct change_row *row = NULL;
	size_t rows = 0;
	snprintf(out, n, "change %lld", (long long)id);
	if (history_list(r->store, 0, &row, &rows, NULL) != ST_OK)
		return;
	for (size_t i = 0; i < rows; i++)
		if (row[i].id == id)
			snprintf(out, n, "change %lld: %s, %s (%s)", (long long)id, row[i].verb, row[i].what,
				 row[i].utc);
	free(row);
}

int command_undo(const struct env *env, const struct options *o)
{
	struct run run;
	struct out out;
	struct err e;
	char utc[UTC_TEXT_MAX], what[400], clean[800];
	int code;
	int64_t undone = 0;
	/* without a store there is nothing to undo, and none is made */
	if (run_open(&run, env, o, NEED_STORE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	const bool missing = run.store == NULL;
	run_close(&run);
	if (missing) {
		diagnose("undo", "nothing was changed yet");
		return EXIT_UNMET;
	}
	if (run_open(&run, env, o, NEED_STORE | NEED_WRITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	const struct change change = change_of(&run, "undo", utc);
	if (history_undo(run.store, o->change, &change, &undone, &e) != ST_OK) {
		run_close(&run);
		return diagnose_err("undo", &e, EXIT_UNMET);
	}
	describe(&run, undone, what, sizeof what);
	run_close(&run);
	if (out_open(&out, o->out, o->force, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	text_clean(what, clean, sizeof clean);
	fprintf(out.file, "undone: %s\n", clean);
	return out_commit(&out, &e) == ST_OK ? EXIT_DONE : diagnose_whole(&e, EXIT_UNMET);
}
