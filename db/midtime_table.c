/* SPDX-License-Identifier: MIT
 * Reading a mid-time table, without the store. */
#include "db/midtimes.h"

#include "db/import.h"
#include "db/midtime_rows.h"
#include "db/read_csv.h"
#include "db/text_block.h"
#include "db/text_clean.h"
#include "db/write_csv.h"
#include "ephem/number_text.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum {
	COLUMN_MID,
	COLUMN_ERR,
	COLUMN_EPOCH,
	COLUMN_SCALE,
	COLUMN_KIND,
	COLUMN_SOURCE,
	COLUMN_USED,
	COLUMN_COUNT
};
static const char *const column_names[COLUMN_COUNT] = {"mid_jd", "err_d",  "epoch", "time_scale",
						       "kind",	 "source", "used"};
enum { PLACES = 3, GOT_BYTES = 100 };

struct reading_times {
	struct midtime_table *out;
	const char *default_scale;
	void (*say)(void *ctx, const struct import_message *m);
	void *ctx;
	int column_of[COLUMN_COUNT]; /* index of its cell, -1 the table hasn't got it */
	size_t columns, room;
	size_t (*place)[PLACES]; /* [room] of mid_text, time_scale, source */
	struct text_block texts;
	long read;
};

static void say(struct reading_times *r, struct import_message m)
{
	char got[GOT_BYTES];
	(void)text_clean(m.got, got, sizeof got);
	m.got = got;
	if (r->say)
		r->say(r->ctx, &m);
}

static enum status file_fault(struct reading_times *r, struct import_message m, struct err *e)
{
	say(r, m);
	return err_set(e, ST_SYNTAX, "nothing was stored: %s%s%s", m.field, *m.field ? ": " : "", m.text);
}

/* --- the header --- */

static int column_find(const char *text, size_t n)
{
	char name[32];
	text_trim(&text, &n);
	if (n >= sizeof name)
		return -1;
	for (size_t i = 0; i < n; i++)
		name[i] = (char)(text[i] >= 'A' && text[i] <= 'Z' ? text[i] - 'A' + 'a' : text[i]);
	name[n] = '\0';
	for (int c = 0; c < COLUMN_COUNT; c++)
		if (strcmp(name, column_names[c]) == 0)
			return c;
	return -1;
}

static enum status map_columns(struct reading_times *r, const struct csv_row *header, struct err *e)
{
	r->columns = header->n;
	for (int c = 0; c < COLUMN_COUNT; c++)
		r->column_of[c] = -1;
	for (size_t i = 0; i < header->n; i++) {
		const struct csv_cell *cell = &header->cell[i];
		int c = column_find(cell->text, cell->length);
		struct import_message m = {.line = cell->line,
					   .column = cell->column,
					   .field = "",
					   .got = cell->text,
					   .expected = ""};
		if (c < 0) {
			m.warning = true;
			m.text = "unknown column, left out";
			say(r, m);
		} else if (r->column_of[c] >= 0) {
			m.field = column_names[c];
			m.text = "the column stands twice";
			return file_fault(r, m, e);
		} else {
			r->column_of[c] = (int)i;
		}
	}
	for (int c = COLUMN_MID; c <= COLUMN_ERR; c++)
		if (r->column_of[c] < 0)
			return file_fault(
			    r,
			    (struct import_message){.line = header->line,
						    .column = 1,
						    .field = column_names[c],
						    .text = "the table has no such column",
						    .got = "",
						    .expected = "columns mid_jd, err_d and others"},
			    e);
	return ST_OK;
}

/* --- a row --- */

static const char *text_of(const struct reading_times *r, const struct csv_row *row, int column)
{
	return r->column_of[column] < 0 ? "" : csv_cell_plain(row->cell[r->column_of[column]].text);
}

/* A fault or warning of one cell; parsers say `what (got "...", expected ...)` or `what (expected ...)`,
 * taken apart here. */
static void say_cell(struct reading_times *r, const struct csv_row *row, int column, const char *text,
		     bool warning)
{
	const struct csv_cell *cell = &row->cell[r->column_of[column] < 0 ? 0 : r->column_of[column]];
	char what[sizeof((struct err *)0)->text], expected[sizeof what] = "";
	snprintf(what, sizeof what, "%s", text);
	char *tail = strstr(what, " (got \"");
	const char *wanted = tail ? strstr(tail, "\", expected ") : NULL;
	size_t skip = strlen("\", expected ");
	if (!tail) {
		wanted = tail = strstr(what, " (expected ");
		skip = strlen(" (expected ");
	}
	if (wanted) {
		snprintf(expected, sizeof expected, "%s", wanted + skip);
		size_t n = strlen(expected);
		if (n > 0 && expected[n - 1] == ')')
			expected[n - 1] = '\0';
	}
	if (tail)
		*tail = '\0';
	say(r, (struct import_message){.line = cell->line,
				       .column = cell->column,
				       .field = column_names[column],
				       .text = what,
				       .got = cell->text,
				       .expected = expected,
				       .warning = warning});
}

static bool fault(struct reading_times *r, const struct csv_row *row, int column, const char *text)
{
	say_cell(r, row, column, text, false);
	return false;
}

static bool read_kind(struct reading_times *r, const struct csv_row *row, struct midtime_row *out,
		      bool *given)
{
	char word[32] = "";
	const char *text = text_of(r, row, COLUMN_KIND);
	size_t n = strlen(text);
	text_trim(&text, &n);
	*given = n > 0;
	for (size_t i = 0; i < n && i < sizeof word - 1; i++)
		word[i] = (char)(text[i] >= 'A' && text[i] <= 'Z' ? text[i] - 'A' + 'a' : text[i]);
	out->kind = strcmp(word, "occultation") == 0 ? KIND_OCCULTATION : KIND_TRANSIT;
	if (n > 0 && (n >= sizeof word || strcmp(word, event_kind_word(out->kind)) != 0))
		return fault(r, row, COLUMN_KIND, "unknown kind of event (expected transit or occultation)");
	return true;
}

/* E + 0.5 is the occultation after transit E. */
static bool read_epoch(struct reading_times *r, const struct csv_row *row, struct midtime_text *out,
		       bool kind_given)
{
	const char *text = text_of(r, row, COLUMN_EPOCH);
	size_t n = strlen(text);
	double value = 0.0;
	struct err why;
	text_trim(&text, &n);
	out->has_epoch = n > 0;
	if (n == 0)
		return true;
	if (number_parse(text, n, &value, NULL, &why) != ST_OK)
		return fault(r, row, COLUMN_EPOCH, why.text);
	if (!(fabs(value) <= MIDTIME_EPOCH_MAX))
		return fault(r, row, COLUMN_EPOCH,
			     "no such epoch (expected a whole number, at most 2000000000 either way)");
	double whole = floor(value);
	out->row.epoch = (long)whole;
	if (value == whole)
		return true;
	if (value - whole != 0.5)
		return fault(r, row, COLUMN_EPOCH,
			     "neither a whole epoch nor E + 0.5 (expected a whole number, or E + 0.5 for the "
			     "occultation after transit E)");
	if (kind_given && out->row.kind == KIND_TRANSIT)
		return fault(
		    r, row, COLUMN_EPOCH,
		    "a half epoch is an occultation's, but kind says transit (expected a whole number)");
	out->row.kind = KIND_OCCULTATION;
	return true;
}

static bool read_scale(struct reading_times *r, const struct csv_row *row, struct midtime_row *out)
{
	struct err why;
	const char *text = text_of(r, row, COLUMN_SCALE);
	size_t n = strlen(text);
	text_trim(&text, &n);
	out->time_scale = n > 0 ? text : r->default_scale;
	if (standard_parse(out->time_scale, &out->standard, &why) != ST_OK)
		return fault(r, row, COLUMN_SCALE, why.text);
	return true;
}

static bool read_mid(struct reading_times *r, const struct csv_row *row, struct midtime_row *out)
{
	struct err why;
	const char *text = text_of(r, row, COLUMN_MID);
	size_t n = strlen(text);
	text_trim(&text, &n);
	out->mid_text = text;
	if (n == 0)
		return fault(r, row, COLUMN_MID, "no mid-time (expected a Julian date)");
	if (n > MIDTIME_TEXT_MAX)
		return fault(r, row, COLUMN_MID, "longer than 64 characters (expected a Julian date)");
	if (out->standard.text_utc) {
		struct utc t;
		char copy[MIDTIME_TEXT_MAX + 1];
		snprintf(copy, sizeof copy, "%.*s", (int)n, text);
		if (utc_parse(&leap_builtin, copy, &t, &why) != ST_OK)
			return fault(r, row, COLUMN_MID, why.text);
		out->mid = utc_to_jd(&leap_builtin, t);
	} else if (number_parse_jd2(text, n, &out->mid, NULL, &why) != ST_OK) {
		return fault(r, row, COLUMN_MID, why.text);
	}
	return true;
}

static bool read_err(struct reading_times *r, const struct csv_row *row, struct midtime_row *out)
{
	struct err why;
	const char *text = text_of(r, row, COLUMN_ERR);
	size_t n = strlen(text);
	text_trim(&text, &n);
	if (n == 0)
		return fault(r, row, COLUMN_ERR, "no error (expected days above 0)");
	if (number_parse(text, n, &out->err_d, NULL, &why) != ST_OK)
		return fault(r, row, COLUMN_ERR, why.text);
	return true;
}

static bool read_used(struct reading_times *r, const struct csv_row *row, struct midtime_row *out)
{
	const char *text = text_of(r, row, COLUMN_USED);
	size_t n = strlen(text);
	text_trim(&text, &n);
	out->used = n == 0 || (n == 1 && *text == '1');
	if (!out->used && !(n == 1 && *text == '0'))
		return fault(r, row, COLUMN_USED, "not a yes or no (expected 1 or 0)");
	return true;
}

static bool check_ranges(struct reading_times *r, const struct csv_row *row, const struct midtime_row *out)
{
	static const int columns[] = {[MIDTIME_PART_MID] = COLUMN_MID,
				      [MIDTIME_PART_ERR] = COLUMN_ERR,
				      [MIDTIME_PART_EPOCH] = COLUMN_EPOCH};
	enum midtime_part part;
	struct err why;
	if (midtime_check(out, &part, &why) != ST_OK)
		return fault(r, row, columns[part], why.text);
	return true;
}

static bool make_room(struct reading_times *r)
{
	if (r->out->n < r->room)
		return true;
	size_t room = r->room ? 2 * r->room : 64;
	struct midtime_text *list = realloc(r->out->row, room * sizeof *list);
	if (list)
		r->out->row = list;
	size_t(*place)[PLACES] = realloc(r->place, room * sizeof *place);
	if (place)
		r->place = place;
	if (!list || !place)
		return false;
	r->room = room;
	return true;
}

/* Copies text without the blanks around it. */
static bool keep_trimmed(struct reading_times *r, const char *text, size_t *place)
{
	char copy[MIDTIME_SOURCE_MAX + 1];
	size_t n = strlen(text);
	text_trim(&text, &n);
	snprintf(copy, sizeof copy, "%.*s", (int)(n < sizeof copy ? n : sizeof copy - 1), text);
	return text_block_add(&r->texts, copy, place);
}

static enum status keep(struct reading_times *r, const struct csv_row *row, const struct midtime_text *t,
			struct err *e)
{
	char source[MIDTIME_SOURCE_MAX + 1], longer[MIDTIME_SOURCE_MAX + 8];
	const char *given = text_of(r, row, COLUMN_SOURCE);
	if (text_clean(given, longer, sizeof longer) > text_clean(given, source, sizeof source))
		say_cell(r, row, COLUMN_SOURCE, "too long: cut (expected at most 255 bytes)", true);
	size_t n = r->out->n;
	if (!make_room(r) || !keep_trimmed(r, t->row.mid_text, &r->place[n][0]) ||
	    !keep_trimmed(r, t->row.time_scale, &r->place[n][1]) || !keep_trimmed(r, source, &r->place[n][2]))
		return err_set(e, ST_MEMORY, "no memory to read a table");
	r->out->row[n] = *t;
	r->out->n++;
	return ST_OK;
}

static bool empty_from(const struct csv_row *row, size_t from)
{
	for (size_t i = from; i < row->n; i++)
		if (row->cell[i].length > 0)
			return false;
	return true;
}

static bool cells_fit(struct reading_times *r, const struct csv_row *row)
{
	char text[80], expected[48];
	if (row->n >= r->columns && empty_from(row, r->columns))
		return true;
	snprintf(text, sizeof text, "%s cells than the header names", row->n < r->columns ? "fewer" : "more");
	snprintf(expected, sizeof expected, "%zu cells, not %zu", r->columns, row->n);
	say(r, (struct import_message){.line = row->line,
				       .column = 1,
				       .field = "",
				       .text = text,
				       .got = row->cell[0].text,
				       .expected = expected});
	return false;
}

static enum status take_row(struct reading_times *r, const struct csv_row *row, struct err *e)
{
	struct midtime_text t = {.row = {.source = "", .entered_utc = "", .who = ""}};
	bool kind_given = false;
	r->read++;
	bool good = cells_fit(r, row) && read_kind(r, row, &t.row, &kind_given) &&
		    read_epoch(r, row, &t, kind_given) && read_scale(r, row, &t.row) &&
		    read_mid(r, row, &t.row) && read_err(r, row, &t.row) && read_used(r, row, &t.row) &&
		    check_ranges(r, row, &t.row);
	if (!good) {
		r->out->refused++;
		return ST_OK;
	}
	const struct csv_cell *mid = &row->cell[r->column_of[COLUMN_MID]];
	t.line = mid->line;
	t.column = mid->column;
	return keep(r, row, &t, e);
}

static enum status take_rows(struct reading_times *r, struct csv *csv, struct err *e)
{
	struct csv_row row;
	struct err why;
	long line, column;
	int more = 0;
	enum status st = ST_OK;
	while (st == ST_OK && (more = csv_next(csv, &row, &line, &column, &why)) > 0)
		if (!empty_from(&row, 0)) /* a line of separators says nothing */
			st = take_row(r, &row, e);
	if (st == ST_OK && more < 0 && why.status == ST_MEMORY)
		return err_set(e, ST_MEMORY, "%s", why.text);
	if (st == ST_OK && more < 0)
		return file_fault(r,
				  (struct import_message){.line = line,
							  .column = column,
							  .field = "",
							  .text = why.text,
							  .got = "",
							  .expected = ""},
				  e);
	if (st == ST_OK && r->out->refused > 0)
		return err_set(e, ST_SYNTAX, "nothing was stored: %ld of %ld rows refused", r->out->refused,
			       r->read);
	return st;
}

/* --- the whole --- */

static void settle(struct reading_times *r)
{
	for (size_t i = 0; i < r->out->n; i++) {
		struct midtime_row *row = &r->out->row[i].row;
		row->mid_text = r->texts.text + r->place[i][0];
		row->time_scale = r->texts.text + r->place[i][1];
		row->source = r->texts.text + r->place[i][2];
	}
	r->out->block = r->texts.text;
	r->texts.text = NULL;
}

enum status midtime_table_read(const char *data, size_t n, const char *default_scale,
			       struct midtime_table *out,
			       void (*say_to)(void *ctx, const struct import_message *m), void *ctx,
			       struct err *e)
{
	struct reading_times r = {
	    .out = out, .default_scale = default_scale ? default_scale : "", .say = say_to, .ctx = ctx};
	struct csv *csv = NULL;
	struct standard standard;
	struct err why;
	long line, column;
	*out = (struct midtime_table){0};
	enum status st = standard_parse(r.default_scale, &standard, e);
	if (st != ST_OK)
		return st;
	st = csv_open(data, n, &csv, &line, &column, &why);
	if (st == ST_SYNTAX)
		return file_fault(&r,
				  (struct import_message){.line = line,
							  .column = column,
							  .field = "",
							  .text = why.text,
							  .got = "",
							  .expected = ""},
				  e);
	if (st != ST_OK)
		return err_set(e, st, "%s", why.text);
	st = map_columns(&r, csv_header(csv), e);
	if (st == ST_OK)
		st = take_rows(&r, csv, e);
	settle(&r);
	if (st == ST_OK)
		st = midtime_say_twice(out, say_to, ctx, e);
	free(r.place);
	csv_close(csv);
	if (st != ST_OK) {
		long refused = out->refused;
		midtime_table_free(out);
		out->refused = refused;
	}
	out->read = r.read;
	return st;
}

void midtime_table_free(struct midtime_table *t)
{
	free(t->row);
	free(t->block);
	*t = (struct midtime_table){0};
}
