/* SPDX-License-Identifier: MIT */
#include "db/import.h"

#include "db/read_csv.h"
#include "db/target_rows.h"
#include "db/text_clean.h"
#include "db/write_csv.h"
#include "ephem/near_word.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

struct importing {
	struct store *store;
	const struct import_options *o;
	struct import_report *report;
	void (*say)(void *ctx, const struct import_message *m);
	void *ctx;
	int column_of[FIELD_COUNT]; /* index of its cell, -1 the table hasn't got it */
	size_t columns;
};

static void say(struct importing *im, struct import_message m)
{
	char got[ERR_QUOTE_MAX];
	err_quote(m.got, strlen(m.got), got);
	m.got = got;
	if (im->say)
		im->say(im->ctx, &m);
}

/* A fault of the file as a whole: said with its place. */
static enum status file_fault(struct importing *im, struct import_message m, struct err *e)
{
	say(im, m);
	return err_set(e, ST_SYNTAX, "nothing was stored");
}

/* One whose text holds what was got and expected. */
static struct import_message whole_message(long line, long column, const char *field, const struct err *why)
{
	return (struct import_message){
	    .line = line, .column = column, .field = field, .text = why->text, .got = "", .expected = ""};
}

/* Parsers say `what (got "...", expected ...)`; got and expected are told apart from what by the message
 * itself. */
static void say_fault(struct importing *im, long line, long column, int field, const char *got,
		      const char *text)
{
	char what[sizeof((struct err *)0)->text], expected[128];
	snprintf(what, sizeof what, "%s", text);
	char *tail = strstr(what, " (got \"");
	if (tail)
		*tail = '\0';
	field_expected(field, expected, sizeof expected);
	say(im, (struct import_message){.line = line,
					.column = column,
					.field = fields[field].name,
					.text = what,
					.got = got,
					.expected = expected});
}

/* --- the header --- */

static int field_of_header(const char *text, size_t n)
{
	char name[64];
	text_trim(&text, &n);
	if (n >= sizeof name)
		return -1;
	for (size_t i = 0; i < n; i++)
		name[i] = (char)(text[i] >= 'A' && text[i] <= 'Z' ? text[i] - 'A' + 'a' : text[i]);
	name[n] = '\0';
	return field_find(name);
}

/* A column that is nobody's: left out, and which one may have been meant. */
static void say_unknown(struct importing *im, const struct csv_cell *cell)
{
	const char *names[FIELD_COUNT], *near;
	char name[ERR_QUOTE_MAX], expected[80] = "a column of wane import --help";
	for (int f = 0; f < FIELD_COUNT; f++)
		names[f] = fields[f].name;
	err_quote(cell->text, cell->length, name);
	for (char *c = name; *c; c++)
		*c = (char)(*c >= 'A' && *c <= 'Z' ? *c - 'A' + 'a' : *c);
	near = nearest_word(name, names, FIELD_COUNT);
	if (near)
		snprintf(expected, sizeof expected, "did you mean %s?", near);
	say(im, (struct import_message){.line = cell->line,
					.column = cell->column,
					.field = "column",
					.text = "unknown, left out",
					.got = cell->text,
					.expected = expected,
					.warning = true});
}

static enum status map_columns(struct importing *im, const struct csv_row *header, struct err *e)
{
	im->columns = header->n;
	for (int f = 0; f < FIELD_COUNT; f++)
		im->column_of[f] = -1;
	for (size_t i = 0; i < header->n; i++) {
		const struct csv_cell *cell = &header->cell[i];
		int f = field_of_header(cell->text, cell->length);
		struct import_message m = {
		    .line = cell->line, .column = cell->column, .field = "", .expected = ""};
		if (f < 0) {
			say_unknown(im, cell);
		} else if (im->column_of[f] >= 0) {
			m.field = fields[f].name;
			m.text = "the column stands twice";
			m.got = cell->text;
			m.expected = "each column once";
			return file_fault(im, m, e);
		} else {
			im->column_of[f] = (int)i;
		}
	}
	static const int needed[] = {FIELD_AT_NAME, FIELD_AT_RA, FIELD_AT_DEC};
	for (size_t i = 0; i < sizeof needed / sizeof needed[0]; i++)
		if (im->column_of[needed[i]] < 0)
			return file_fault(
			    im,
			    (struct import_message){.line = header->line,
						    .column = 1,
						    .field = fields[needed[i]].name,
						    .text = "the header has no such column",
						    .got = header->cell[0].text,
						    .expected = "columns name, ra_deg, dec_deg and others"},
			    e);
	return ST_OK;
}

/* --- a row --- */

static bool empty_from(const struct csv_row *row, size_t from)
{
	for (size_t i = from; i < row->n; i++)
		if (row->cell[i].length > 0)
			return false;
	return true;
}

static void say_cells(struct importing *im, const struct csv_row *row)
{
	char text[80], got[48], expected[48];
	snprintf(text, sizeof text, "%s cells than the header names",
		 row->n < im->columns ? "fewer" : "more");
	snprintf(got, sizeof got, "%zu", row->n);
	snprintf(expected, sizeof expected, "%zu cells", im->columns);
	say(im, (struct import_message){.line = row->line,
					.column = 1,
					.field = "row",
					.text = text,
					.got = got,
					.expected = expected});
}

/* What was taken, but not as it stands. */
static void say_doubts(struct importing *im, const struct csv_row *row, const struct reading *r)
{
	for (int f = 0; f < FIELD_COUNT; f++) {
		bool doubt = r->doubts >> f & 1, cut = r->cut >> f & 1;
		if (!doubt && !cut)
			continue;
		const struct csv_cell *cell = &row->cell[im->column_of[f]];
		char expected[128], what[128] = "too long: cut";
		const char *beside = NULL;
		field_expected(f, expected, sizeof expected);
		if (doubt)
			snprintf(what, sizeof what, "kept without effect: %s",
				 field_doubt(f, r->own.texts.text[f], &beside));
		say(im, (struct import_message){.line = cell->line,
						.column = cell->column,
						.field = fields[f].name,
						.text = what,
						.got = cell->text,
						.expected = beside ? beside : expected,
						.warning = true});
	}
}

static void count(struct import_report *report, enum put_result result, const struct reading *r)
{
	report->added += result == PUT_NEW;
	report->changed += result == PUT_CHANGED;
	report->same += result == PUT_SAME;
	report->doubtful += r->doubts != 0;
	report->scale_assumed += isfinite(r->t.t0.day) && r->t.standard.claim != SCALE_STATED;
	report->too_short += (r->doubts >> FIELD_AT_PERIOD & 1) != 0;
	report->no_ephemeris += !isfinite(r->t.t0.day) || !isfinite(r->t.period_d);
}

static enum status take_row(struct importing *im, const struct csv_row *row, struct reading *r, struct err *e)
{
	struct field_texts texts;
	struct err why;
	int bad_field;
	enum put_result result;
	im->report->read++;
	if (row->n < im->columns || !empty_from(row, im->columns)) {
		im->report->refused++;
		say_cells(im, row);
		return ST_OK;
	}
	for (int f = 0; f < FIELD_COUNT; f++)
		texts.text[f] = im->column_of[f] < 0 ? "" : csv_cell_plain(row->cell[im->column_of[f]].text);
	enum status st = reading_make(&texts, r, &bad_field, &why);
	if (st == ST_SYNTAX || st == ST_RANGE) {
		const struct csv_cell *cell =
		    &row->cell[im->column_of[bad_field] < 0 ? 0 : im->column_of[bad_field]];
		im->report->refused++;
		say_fault(im, cell->line, cell->column, bad_field, cell->text, why.text);
		return ST_OK;
	}
	if (st != ST_OK)
		return err_set(e, st, "%s", why.text);
	st = reading_put(im->store, r, im->o->adopt, &result, e);
	if (st == ST_OK) {
		say_doubts(im, row, r);
		count(im->report, result, r);
	}
	return st;
}

/* What csv_next gave, unless that was the end. */
static enum status take_next(struct importing *im, int got, const struct csv_row *row,
			     struct import_message bad, struct reading *r, struct err *e)
{
	if (got == CSV_BAD_ROW) {
		im->report->read++;
		im->report->refused++;
		say(im, bad);
		return ST_OK;
	}
	/* a line of separators says nothing */
	return empty_from(row, 0) ? ST_OK : take_row(im, row, r, e);
}

static enum status take_rows(struct importing *im, struct csv *csv, struct err *e)
{
	struct csv_row row;
	struct err why;
	long line, column;
	int more = CSV_END;
	struct reading *r = malloc(sizeof *r);
	enum status st = r ? ST_OK : err_set(e, ST_MEMORY, "no memory for an import");
	while (st == ST_OK && (more = csv_next(csv, &row, &line, &column, &why)) != CSV_END &&
	       more != CSV_BROKEN)
		st = take_next(im, more, &row, whole_message(line, column, "row", &why), r, e);
	free(r);
	if (st == ST_OK && more == CSV_BROKEN && why.status == ST_MEMORY)
		return err_set(e, ST_MEMORY, "%s", why.text);
	if (st == ST_OK && more == CSV_BROKEN)
		return file_fault(im, whole_message(line, column, "row", &why), e);
	return st;
}

/* --- the whole --- */

static enum status import_into(struct importing *im, struct csv *csv, struct err *e)
{
	enum status st = store_begin(im->store, &im->o->change, e);
	if (st != ST_OK)
		return st;
	st = take_rows(im, csv, e);
	if (st == ST_OK && im->o->strict && im->report->refused > 0)
		st = err_set(e, ST_SYNTAX, "nothing was stored: %ld of %ld rows refused", im->report->refused,
			     im->report->read);
	if (st == ST_OK)
		return store_commit(im->store, e);
	store_rollback(im->store);
	return st;
}

enum status import_targets(struct store *s, const char *data, size_t n, const struct import_options *o,
			   struct import_report *report,
			   void (*say_to)(void *ctx, const struct import_message *m), void *ctx,
			   struct err *e)
{
	struct importing im = {.store = s, .o = o, .report = report, .say = say_to, .ctx = ctx};
	struct csv *csv = NULL;
	struct store *own = NULL;
	struct err why;
	long line, column;
	*report = (struct import_report){0};
	enum status st = csv_open(data, n, &csv, &line, &column, &why);
	if (st == ST_SYNTAX)
		return file_fault(
		    &im, whole_message(line, column, file_looks_like(data, n) ? "file" : "header", &why), e);
	if (st != ST_OK)
		return err_set(e, st, "%s", why.text);
	st = map_columns(&im, csv_header(csv), e);
	if (st == ST_OK && o->dry_run) {
		/* a trial runs on a copy: it neither waits for other programs nor holds them up */
		st = s ? store_copy(s, &own, e) : store_open(NULL, STORE_MEMORY, &own, e);
		im.store = own;
	} else if (st == ST_OK && !s) {
		st = err_set(e, ST_STORE, "database: none to import into");
	}
	if (st == ST_OK)
		st = import_into(&im, csv, e);
	if (st != ST_OK)
		report->added = report->changed = report->same = 0;
	store_close(own);
	csv_close(csv);
	return st;
}
