/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "db/import.h"
#include "db/read_csv.h"
#include "tui/diagnose.h"
#include "tui/sheets/out.h"

#include <stdlib.h>
#include <string.h>

static void collect(void *ctx, const struct import_message *m)
{
	diagnoses_add(ctx, m->warning, m->line, m->column, m->field, m->text, m->got, m->expected);
}

static void say_notes(const struct import_report *r)
{
	if (r->doubtful > 0)
		diagnose("import", "%ld stored with a value that can't be true (kept aside and flagged)",
			 r->doubtful);
	if (r->too_short > 0)
		diagnose("import", "%ld can't be counted: a period below %g d (no event of theirs is listed)",
			 r->too_short, PERIOD_MIN_D);
	if (r->scale_assumed > 0)
		diagnose("import",
			 "%ld do not say their time standard: used as BJD_TDB with a systematic error",
			 r->scale_assumed);
	if (r->no_ephemeris > 0)
		diagnose("import", "%ld have a position and no ephemeris", r->no_ephemeris);
}

/* Into an open store, or with none as a trial on an empty one. */
static enum status import_into(struct run *r, const char *data, size_t n, bool dry_run,
			       struct import_report *report, struct diagnoses *d, struct err *e)
{
	const struct options *o = r->options;
	char utc[UTC_TEXT_MAX];
	const struct import_options options = {.dry_run = dry_run,
					       .strict = o->strict,
					       .adopt = o->adopt,
					       .change = change_of(r, "import", utc)};
	*report = (struct import_report){0};
	d->faults = d->doubts = 0;
	return import_targets(r->store, data, n, &options, report, collect, d, e);
}

static int finish(const struct run *r, enum status s, const struct import_report *report,
		  const struct diagnoses *d, const struct err *e)
{
	struct out out;
	struct err why;
	diagnoses_print(d, stderr);
	if (s != ST_OK)
		return diagnose_err("import", e, EXIT_UNMET);
	say_notes(report);
	if (run_out_open(r, &out, &why) != ST_OK)
		return diagnose_whole(&why, EXIT_UNMET);
	fprintf(out.file, "%ld read, %ld new, %ld changed, %ld same, %ld refused\n", report->read,
		report->added, report->changed, report->same, report->refused);
	if (out_commit(&out, &why) != ST_OK)
		return diagnose_whole(&why, EXIT_UNMET);
	return report->refused > 0 ? EXIT_UNMET : EXIT_DONE;
}

static int import_data(const struct env *env, const struct options *o, const char *data, size_t n,
		       struct diagnoses *d)
{
	struct run run;
	struct import_report report;
	struct err e;
	int code;
	if (run_open(&run, env, o, NEED_STORE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	bool missing = run.store == NULL;
	enum status s = ST_OK;
	/* a file of which nothing can be stored must not leave a new database behind */
	if (missing || o->dry_run) {
		s = import_into(&run, data, n, true, &report, d, &e);
		if (s != ST_OK || o->dry_run || report.added == 0) {
			code = finish(&run, s, &report, d, &e);
			run_close(&run);
			return code;
		}
	}
	run_close(&run);
	if (run_open(&run, env, o, NEED_STORE | NEED_WRITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	s = import_into(&run, data, n, false, &report, d, &e);
	code = finish(&run, s, &report, d, &e);
	run_close(&run);
	return code;
}

int command_import(const struct env *env, const struct options *o)
{
	char *data = NULL;
	size_t n = 0;
	struct err e;
	if (o->n_words < 2) {
		diagnose("FILE", "is missing (expected wane import FILE)");
		return EXIT_USAGE;
	}
	if (file_read(o->word[1], &data, &n, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	struct diagnoses *d = calloc(1, sizeof *d);
	int code = EXIT_UNMET;
	if (d) {
		d->file = strcmp(o->word[1], "-") == 0 ? "standard input" : o->word[1];
		code = import_data(env, o, data, n, d);
	} else {
		diagnose("memory", "none for messages");
	}
	free(d);
	free(data);
	return code;
}
