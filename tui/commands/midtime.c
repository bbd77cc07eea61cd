/* SPDX-License-Identifier: MIT */
#include "tui/commands/midtime.h"

#include "db/import.h"
#include "db/read_csv.h"
#include "db/write_csv.h"
#include "ephem/number_text.h"
#include "tui/commands/one_target.h"
#include "tui/diagnose.h"
#include "tui/sheets/out.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum verb { VERB_LIST, VERB_ADD, VERB_IMPORT, VERB_EXCLUDE, VERB_INCLUDE, VERB_REMOVE, VERBS };
static const struct {
	const char *word, *arguments;
	int words; /* behind the verb */
} verbs[VERBS] = {
    [VERB_LIST] = {"list", "TARGET", 1},
    [VERB_ADD] = {"add", "TARGET MID ERR", 3},
    [VERB_IMPORT] = {"import", "TARGET FILE", 2},
    [VERB_EXCLUDE] = {"exclude", "TARGET EPOCH", 2},
    [VERB_INCLUDE] = {"include", "TARGET EPOCH", 2},
    [VERB_REMOVE] = {"remove", "TARGET EPOCH", 2},
};

static int verb_at(const struct options *o, const char *word)
{
	for (int i = 0; i < VERBS; i++) {
		if (strcmp(word, verbs[i].word) != 0)
			continue;
		if (o->n_words - 2 == verbs[i].words)
			return i;
		diagnose("midtime", "%s (expected wane midtime %s %s)",
			 o->n_words - 2 < verbs[i].words ? "an argument is missing" : "an argument too many",
			 verbs[i].word, verbs[i].arguments);
		return -1;
	}
	char got[ERR_QUOTE_MAX], list[128] = "";
	for (int i = 0; i < VERBS; i++)
		snprintf(list + strlen(list), sizeof list - strlen(list), "%s%s", i ? ", " : "",
			 verbs[i].word);
	err_quote(word, strlen(word), got);
	diagnose("midtime", "no such verb (got \"%s\", expected %s)", got, list);
	return -1;
}

/* --- new times --- */

struct reading {
	struct diagnoses *d;
	bool single; /* of the command line: no file to point into */
};

static void say_row(void *ctx, const struct import_message *m)
{
	const struct reading *g = ctx;
	static const struct {
		const char *field, *word;
	} words[] = {{"mid_jd", "MID"},		{"err_d", "ERR"},   {"epoch", "--epoch"},
		     {"time_scale", "--scale"}, {"kind", "--kind"}, {"source", "--source"}};
	const char *word = "midtime";
	if (!g->single) {
		diagnoses_add(g->d, m->warning, m->line, m->column, m->field, m->text, m->got, m->expected);
		return;
	}
	for (size_t i = 0; i < sizeof words / sizeof words[0]; i++)
		if (strcmp(words[i].field, m->field) == 0)
			word = words[i].word;
	g->d->faults += !m->warning;
	if (strstr(m->text, "(got \""))
		diagnose(word, "%s", m->text);
	else
		diagnose(word, "%s (got \"%s\"%s%s)", m->text, m->got, m->expected[0] ? ", expected " : "",
			 m->expected);
}

struct tally {
	long read, added, same, refused;
};

static void say_counts(const struct reading *g, const struct prepared *p, const struct midtime_table *t,
		       const struct counted *c, long shift, struct tally *tally)
{
	char text[300];
	for (size_t i = 0; i < t->n; i++) {
		const struct midtime_text *m = &t->row[i];
		struct import_message said = {.line = m->line,
					      .column = m->column,
					      .field = "epoch",
					      .text = text,
					      .got = m->row.mid_text,
					      .expected = ""};
		if (c[i].result != COUNT_GOOD) {
			count_refusal_text(p, &c[i], text, sizeof text);
			tally->refused++;
			say_row((void *)g, &said);
		} else if (fabs(c[i].z) > Z_WARN) {
			snprintf(text, sizeof text,
				 "%.1f sigma from what the current ephemeris predicts for epoch %ld", c[i].z,
				 m->row.epoch);
			said.field = "mid_jd";
			said.warning = true;
			say_row((void *)g, &said);
		}
	}
	if (shift != 0)
		diagnose("epoch",
			 "the table counts from another T0 than the current ephemeris: %ld was added to its "
			 "epochs",
			 shift);
}

static void say_unstated(const struct midtime_table *t)
{
	long unstated = 0;
	for (size_t i = 0; i < t->n; i++)
		unstated += t->row[i].row.standard.claim != SCALE_STATED;
	if (unstated > 0)
		diagnose(
		    "midtime",
		    "%ld of %zu do not say their time standard: kept as such and used as BJD_TDB; if it is "
		    "known, give --scale",
		    unstated, t->n);
}

static enum status store_times(struct run *r, int64_t target_id, const char *verb,
			       const struct midtime_table *t, struct tally *tally, struct err *e)
{
	char utc[UTC_TEXT_MAX];
	const struct change change = change_of(r, verb, utc);
	enum status s = store_begin(r->store, &change, e);
	if (s != ST_OK)
		return s;
	for (size_t i = 0; s == ST_OK && i < t->n; i++) {
		bool added = false;
		s = midtime_add(r->store, target_id, &t->row[i].row, &added, e);
		if (added)
			tally->added++;
		else
			tally->same++;
	}
	s = store_end(r->store, s, e);
	if (s != ST_OK)
		tally->added = tally->same = 0;
	return s;
}

static int write_tally(const struct options *o, const struct tally *tally)
{
	struct out out;
	struct err e;
	if (out_open(&out, o->out, o->force, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	fprintf(out.file, "%ld read, %ld new, %ld same, %ld refused\n", tally->read, tally->added,
		tally->same, tally->refused);
	if (out_commit(&out, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	return tally->refused > 0 ? EXIT_UNMET : EXIT_DONE;
}

/* Counts in an open run; what is wrong with single rows is said. */
static enum status count_table(struct run *r, const struct reading *g, struct midtime_table *t,
			       struct tally *tally, struct err *e)
{
	struct counted *c = calloc(t->n + 1, sizeof *c);
	long shift = 0;
	if (!c)
		return err_set(e, ST_MEMORY, "no memory for %zu mid-times", t->n);
	enum status s = midtimes_count(r, &r->prepared[0], t->row, t->n, c, &shift, e);
	if (s == ST_OK)
		say_counts(g, &r->prepared[0], t, c, shift, tally);
	free(c);
	return s;
}

/* A read table into the store: counted first; any refusal leaves the store as it was. */
static int take_table(const struct env *env, const struct options *o, const char *verb,
		      const struct reading *g, struct midtime_table *t)
{
	struct tally tally = {.read = t->read};
	struct options named;
	struct run run;
	struct err e;
	int code;
	if (one_target_open(&run, env, &named, o, o->word[2], 0, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	const int64_t id = run.prepared[0].target->id;
	enum status s = count_table(&run, g, t, &tally, &e);
	run_close(&run);
	if (!g->single)
		diagnoses_print(g->d, stderr);
	if (s != ST_OK)
		return diagnose_err("midtime", &e, EXIT_UNMET);
	if (tally.refused > 0 || t->n == 0)
		return write_tally(o, &tally);
	if (one_target_open(&run, env, &named, o, o->word[2], NEED_WRITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	say_unstated(t);
	s = store_times(&run, id, verb, t, &tally, &e);
	run_close(&run);
	return s == ST_OK ? write_tally(o, &tally) : diagnose_err("midtime", &e, EXIT_UNMET);
}

static int take_text(const struct env *env, const struct options *o, const char *verb, const char *data,
		     size_t n, struct reading *g)
{
	struct midtime_table t;
	struct err e;
	struct standard standard;
	if (o->scale && standard_parse(o->scale, &standard, &e) != ST_OK)
		return usage_fault("--scale", &e);
	enum status s = midtime_table_read(data, n,
					   g->single  ? ""
					   : o->scale ? o->scale
						      : "",
					   &t, say_row, g, &e);
	if (s == ST_OK) {
		int code = take_table(env, o, verb, g, &t);
		midtime_table_free(&t);
		return code;
	}
	const struct tally tally = {.read = t.read, .refused = t.refused};
	if (!g->single)
		diagnoses_print(g->d, stderr);
	if (!g->single || g->d->faults == 0)
		diagnose("midtime", "%s", e.text);
	return tally.refused > 0 ? write_tally(o, &tally) : EXIT_UNMET;
}

static int import_times(const struct env *env, const struct options *o, struct diagnoses *d)
{
	struct reading g = {.d = d};
	char *data = NULL;
	size_t n = 0;
	struct err e;
	if (file_read(o->word[3], &data, &n, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	d->file = strcmp(o->word[3], "-") == 0 ? "standard input" : o->word[3];
	int code = take_text(env, o, "midtime import", data, n, &g);
	free(data);
	return code;
}

static void put_cell(char *line, size_t size, const char *text, bool last)
{
	char cell[600];
	const size_t used = strlen(line);
	csv_cell_write(text, false, cell, sizeof cell);
	snprintf(line + used, size - used, "%s%s", cell, last ? "\n" : ",");
}

/* A time of the command line goes the way of a table of one row. UTC text becomes its JD_UTC. */
static int add_time(const struct env *env, const struct options *o, struct diagnoses *d)
{
	struct reading g = {.d = d, .single = true};
	char table[3000] = "mid_jd,err_d,epoch,time_scale,kind,source\n", mid[NUMBER_TEXT_MAX];
	const char *scale = o->scale ? o->scale : "", *value = o->word[3];
	struct utc utc;
	struct err e;
	if (o->kinds == (KINDS_TRANSIT | KINDS_OCCULTATION)) {
		diagnose("--kind", "one mid-time is a transit or an occultation (got \"both\")");
		return EXIT_USAGE;
	}
	if (strcmp(scale, "UTC") == 0) {
		if (utc_parse(&leap_builtin, value, &utc, &e) != ST_OK)
			return usage_fault("MID", &e);
		number_text_jd2(utc_to_jd(&leap_builtin, utc), 11, mid);
		value = mid;
		scale = "JD_UTC";
	}
	put_cell(table, sizeof table, value, false);
	put_cell(table, sizeof table, o->word[4], false);
	put_cell(table, sizeof table, o->epoch ? o->epoch : "", false);
	put_cell(table, sizeof table, scale, false);
	/* an epoch of E + 0.5 says that it is an occultation: then the kind is not written beside it */
	put_cell(table, sizeof table, o->kinds ? kinds_text(o->kinds) : "", false);
	put_cell(table, sizeof table, o->source ? o->source : "", true);
	return take_text(env, o, "midtime add", table, strlen(table), &g);
}

/* --- marks --- */

/* `412`, or `412.5`: the occultation after transit 412. */
static enum status read_epoch(const struct options *o, long *epoch, int *kinds, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	double value;
	const char *text = o->word[3];
	err_quote(text, strlen(text), got);
	*kinds = o->kinds ? o->kinds : KINDS_TRANSIT;
	if (number_parse(text, strlen(text), &value, NULL, NULL) != ST_OK || !(fabs(value) <= 2e9) ||
	    fabs(value * 2.0 - floor(value * 2.0)) > 0.0)
		return err_set(e, ST_SYNTAX,
			       "not an epoch (got \"%s\", expected a whole number, or N + 0.5 for the "
			       "occultation after transit N)",
			       got);
	*epoch = (long)floor(value);
	if (value > floor(value)) {
		if (o->kinds == KINDS_TRANSIT)
			return err_set(e, ST_SYNTAX, "a half epoch is an occultation (got \"%s\")", got);
		*kinds = KINDS_OCCULTATION;
	}
	return ST_OK;
}

static enum status mark_kind(struct run *r, enum verb verb, int64_t id, long epoch, enum event_kind kind,
			     long *total, struct err *e)
{
	long n = 0;
	enum status s = verb == VERB_REMOVE
			    ? midtime_remove(r->store, id, epoch, kind, &n, e)
			    : midtime_use(r->store, id, epoch, kind, verb == VERB_INCLUDE, &n, e);
	*total += s == ST_OK ? n : 0;
	return s;
}

static enum status mark(struct run *r, enum verb verb, long epoch, int kinds, long *total, struct err *e)
{
	char utc[UTC_TEXT_MAX], text[40];
	snprintf(text, sizeof text, "midtime %s", verbs[verb].word);
	const struct change change = change_of(r, text, utc);
	const int64_t id = r->prepared[0].target->id;
	bool found = false;
	enum status s = store_begin(r->store, &change, e);
	if (s != ST_OK)
		return s;
	for (int kind = KIND_TRANSIT; kind <= KIND_OCCULTATION; kind++) {
		if (!(kinds & (kind == KIND_TRANSIT ? KINDS_TRANSIT : KINDS_OCCULTATION)))
			continue;
		const enum status one = mark_kind(r, verb, id, epoch, (enum event_kind)kind, total, e);
		found = found || one == ST_OK;
		if (one != ST_OK && one != ST_ABSENT)
			s = one;
	}
	if (s == ST_OK && !found)
		s = err_set(e, ST_ABSENT, "no %s of epoch %ld is stored (see wane midtime list)",
			    kinds == KINDS_OCCULTATION ? "occultation" : "mid-time", epoch);
	return store_end(r->store, s, e);
}

static int mark_times(const struct env *env, const struct options *o, enum verb verb)
{
	struct options named;
	struct run run;
	struct err e;
	int code, kinds;
	long epoch = 0, n = 0;
	struct midtime_list list = {.n = 0};
	if (read_epoch(o, &epoch, &kinds, &e) != ST_OK)
		return usage_fault("EPOCH", &e);
	/* a target or epoch that isn't there must not open anything for writing */
	if (one_target_open(&run, env, &named, o, o->word[2], 0, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	enum status s = midtimes_load(run.store, run.prepared[0].target->id, &list, &e);
	bool found = false;
	for (size_t i = 0; s == ST_OK && i < list.n; i++)
		found = found || list.row[i].epoch == epoch;
	midtime_list_free(&list);
	run_close(&run);
	if (s != ST_OK)
		return diagnose_err("midtime", &e, EXIT_UNMET);
	if (!found) {
		diagnose("EPOCH", "no mid-time of epoch %ld is stored (see wane midtime list)", epoch);
		return EXIT_UNMET;
	}
	if (one_target_open(&run, env, &named, o, o->word[2], NEED_WRITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	s = mark(&run, verb, epoch, kinds, &n, &e);
	run_close(&run);
	if (s != ST_OK)
		return diagnose_err("EPOCH", &e, EXIT_UNMET);
	static const char *const done[VERBS] = {[VERB_EXCLUDE] = "excluded (kept in the list)",
						[VERB_INCLUDE] = "included",
						[VERB_REMOVE] = "removed (kept in history)"};
	struct out out;
	if (out_open(&out, o->out, o->force, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	fprintf(out.file, "%ld %s\n", n, done[verb]);
	return out_commit(&out, &e) == ST_OK ? EXIT_DONE : diagnose_whole(&e, EXIT_UNMET);
}

static int list_times(const struct env *env, const struct options *o)
{
	struct options named;
	struct run run;
	struct err e;
	int code;
	if (one_target_open(&run, env, &named, o, o->word[2], 0, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	code = midtimes_write(&run);
	run_close(&run);
	return code;
}

int command_midtime(const struct env *env, const struct options *o)
{
	int verb = verb_at(o, o->n_words > 1 ? o->word[1] : "");
	if (verb < 0)
		return EXIT_USAGE;
	if (verb == VERB_LIST)
		return list_times(env, o);
	if (verb != VERB_ADD && verb != VERB_IMPORT)
		return mark_times(env, o, (enum verb)verb);
	struct diagnoses *d = calloc(1, sizeof *d);
	if (!d) {
		diagnose("memory", "none for messages");
		return EXIT_UNMET;
	}
	int code = verb == VERB_ADD ? add_time(env, o, d) : import_times(env, o, d);
	free(d);
	return code;
}
