/* SPDX-License-Identifier: MIT */
#include "db/read_csv.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

struct csv {
	const char *data;
	size_t n, at;
	long line, column; /* of data[at] */
	char separator;
	bool ended;	/* an error was met, or the end */
	size_t cell_at; /* where the cell being read begins in data */
	/* the row being read: texts one after the other, cells that point into them */
	char *text;
	size_t text_used, text_room;
	size_t *start; /* [CSV_CELLS_MAX] offsets, since text may move while it grows */
	struct csv_cell *cell;
	/* the header, a copy that lives as long as the reader */
	struct csv_row header;
	struct csv_cell *header_cell;
	char *header_text;
};

/* --- characters --- */

static bool at_end(const struct csv *c)
{
	return c->at >= c->n;
}

static bool at_line_end(const struct csv *c)
{
	return at_end(c) || c->data[c->at] == '\n' || c->data[c->at] == '\r';
}

static void step(struct csv *c)
{
	char was = c->data[c->at++];
	if (was == '\n' || (was == '\r' && (at_end(c) || c->data[c->at] != '\n'))) {
		c->line++;
		c->column = 1;
	} else {
		c->column++;
	}
}

static void skip_line(struct csv *c)
{
	while (!at_line_end(c))
		step(c);
	if (at_end(c))
		return;
	if (c->data[c->at] == '\r') {
		step(c);
		if (at_end(c) || c->data[c->at] != '\n')
			return;
	}
	step(c);
}

/* --- a row --- */

static bool keep(struct csv *c, char byte)
{
	if (c->text_used == c->text_room) {
		size_t room = c->text_room ? 2 * c->text_room : 4096;
		char *text = realloc(c->text, room);
		if (!text)
			return false;
		c->text = text;
		c->text_room = room;
	}
	c->text[c->text_used++] = byte;
	return true;
}

struct place {
	long line, column;
};

enum { GOT_BYTES = 80 }; /* more of a cell than a message shows */

/* `why (got "the cell, up to its line's end", expected ...)` */
static void say_cell(const struct csv *c, enum status s, const char *why, const char *expected, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	size_t n = 0;
	const char *text = c->data + c->cell_at;
	while (n < GOT_BYTES && c->cell_at + n < c->n && text[n] != '\n' && text[n] != '\r' &&
	       (text[n] != c->separator || text[0] == '"'))
		n++;
	err_quote(text, n, got);
	err_set(e, s, "%s (got \"%s\", expected %s)", why, got, expected);
}

static int fail(struct csv *c, struct place at, struct place *where, enum status s, struct err *e,
		const char *why, const char *expected)
{
	c->ended = true;
	*where = at;
	if (s == ST_MEMORY)
		err_set(e, s, "%s", why);
	else
		say_cell(c, s, why, expected, e);
	return CSV_BROKEN;
}

/* The first fault of a row that is read on all the same. */
struct row_fault {
	bool met;
	struct place at;
	struct err why;
};

static void note_fault(const struct csv *c, struct row_fault *f, struct place at, const char *why,
		       const char *expected)
{
	if (f->met)
		return;
	f->met = true;
	f->at = at;
	say_cell(c, ST_SYNTAX, why, expected, &f->why);
}

/* One cell from the current place up to the separator or line end. CSV_ROW good, or read on behind a fault
 * that is noted; CSV_BROKEN a fault at *where; CSV_BAD_ROW what follows in this line is of no use. */
static int read_cell(struct csv *c, size_t index, struct row_fault *bad, struct place *where, struct err *e)
{
	static const char doubled[] = "a cell in quotes, with quotes inside it doubled";
	c->cell_at = c->at;
	struct place begin = {c->line, c->column};
	bool quoted = !at_end(c) && c->data[c->at] == '"', open = quoted;
	size_t start = c->text_used;
	if (quoted)
		step(c);
	for (;;) {
		if (at_end(c) && open)
			return fail(c, begin, where, ST_SYNTAX, e,
				    "the quote that opens this cell is never closed", "a closing quote");
		if (!open && (at_line_end(c) || c->data[c->at] == c->separator))
			break;
		struct place here = {c->line, c->column};
		char byte = c->data[c->at];
		if (byte == '\0')
			note_fault(c, bad, here, "a NUL byte can't stand in a table", "text");
		if (byte == '"') {
			if (!open) {
				note_fault(c, bad, here,
					   quoted ? "text after the closing quote of a cell"
						  : "a quote inside a cell that doesn't begin with one",
					   doubled);
				return CSV_BAD_ROW;
			}
			step(c);
			if (at_end(c) || c->data[c->at] != '"') {
				open = false;
				continue;
			}
		} else if (quoted && !open) {
			note_fault(c, bad, here, "text after the closing quote of a cell", doubled);
			return CSV_BAD_ROW;
		}
		if (c->text_used - start >= CSV_CELL_BYTES_MAX)
			note_fault(c, bad, begin, "this cell is too long", "at most 65536 bytes");
		else if (!keep(c, byte))
			return fail(c, begin, where, ST_MEMORY, e, "no memory for a row of the table", "");
		step(c);
	}
	size_t length = c->text_used - start;
	if (!keep(c, '\0'))
		return fail(c, begin, where, ST_MEMORY, e, "no memory for a row of the table", "");
	c->start[index] = start;
	c->cell[index] =
	    (struct csv_cell){.length = length, .line = begin.line, .column = begin.column, .quoted = quoted};
	return CSV_ROW;
}

static int read_row(struct csv *c, struct csv_row *row, struct place *where, struct err *e)
{
	size_t n = 0;
	struct row_fault bad = {.met = false};
	int s = CSV_ROW;
	c->text_used = 0;
	row->line = c->line;
	while (s == CSV_ROW) {
		if (n == CSV_CELLS_MAX) {
			c->cell_at = c->at;
			note_fault(c, &bad, (struct place){c->line, c->column}, "too many cells in one row",
				   "at most 1024");
			break;
		}
		s = read_cell(c, n, &bad, where, e);
		if (s == CSV_BROKEN)
			return s;
		n++;
		if (at_line_end(c))
			break;
		if (s == CSV_ROW)
			step(c); /* the separator */
	}
	skip_line(c);
	if (bad.met) {
		*where = bad.at;
		*e = bad.why;
		return CSV_BAD_ROW;
	}
	for (size_t i = 0; i < n; i++)
		c->cell[i].text = c->text + c->start[i];
	row->n = n;
	row->cell = c->cell;
	return CSV_ROW;
}

/* Whether the line here holds nothing but blanks. */
static bool blank_line(const struct csv *c)
{
	size_t i = c->at;
	while (i < c->n && (c->data[i] == ' ' || (c->data[i] == '\t' && c->separator != '\t')))
		i++;
	return i == c->n || c->data[i] == '\n' || c->data[i] == '\r';
}

int csv_next(struct csv *c, struct csv_row *row, long *line, long *column, struct err *e)
{
	while (!c->ended && !at_end(c) && (c->data[c->at] == '#' || blank_line(c)))
		skip_line(c);
	*line = c->line;
	*column = c->column;
	if (c->ended || at_end(c))
		return 0;
	struct place where = {c->line, c->column};
	int s = read_row(c, row, &where, e);
	*line = where.line;
	*column = where.column;
	return s;
}

/* --- the header --- */

/* The separator that a line has most of, outside quotes; the comma when it has none. */
static char line_separator(const struct csv *c)
{
	static const char kinds[3] = {',', ';', '\t'};
	size_t count[3] = {0}, best = 0;
	bool open = false;
	for (size_t i = c->at; i < c->n && c->data[i] != '\n' && c->data[i] != '\r'; i++) {
		if (c->data[i] == '"')
			open = !open;
		for (size_t k = 0; k < 3; k++)
			count[k] += !open && c->data[i] == kinds[k];
	}
	for (size_t k = 1; k < 3; k++)
		if (count[k] > count[best])
			best = k;
	return kinds[best];
}

/* A cell of a header says something; one of data may be a number, or a sexagesimal angle, or nothing. */
static bool looks_like_data(const struct csv_cell *cell)
{
	bool digit = false;
	for (size_t i = 0; i < cell->length; i++) {
		if (cell->text[i] >= '0' && cell->text[i] <= '9')
			digit = true;
		else if (!strchr("+-.:eE ", cell->text[i]))
			return false;
	}
	return digit;
}

static bool row_is_header(const struct csv_row *row)
{
	for (size_t i = 0; i < row->n; i++)
		if (looks_like_data(&row->cell[i]))
			return false;
	return true;
}

static enum status keep_header(struct csv *c, const struct csv_row *row, struct err *e)
{
	c->header_text = malloc(c->text_used ? c->text_used : 1);
	c->header_cell = malloc(row->n * sizeof *c->header_cell);
	if (!c->header_text || !c->header_cell)
		return err_set(e, ST_MEMORY, "no memory for the header of the table");
	memcpy(c->header_text, c->text, c->text_used);
	for (size_t i = 0; i < row->n; i++) {
		c->header_cell[i] = row->cell[i];
		c->header_cell[i].text = c->header_text + c->start[i];
	}
	c->header = (struct csv_row){.n = row->n, .cell = c->header_cell, .line = row->line};
	return ST_OK;
}

struct mark {
	size_t at;
	long line, column;
};

static struct mark mark_here(const struct csv *c)
{
	return (struct mark){c->at, c->line, c->column};
}

static void go_back(struct csv *c, struct mark m)
{
	c->at = m.at;
	c->line = m.line;
	c->column = m.column;
	c->ended = false;
}

/* Leaves the reader at the fault, where csv_open takes its place from. */
static enum status found_at(struct csv *c, struct place where, const struct err *why, struct err *e)
{
	c->line = where.line;
	c->column = where.column;
	return err_set(e, why->status, "%s", why->text);
}

/* The header in the comment line at `comment`, when it has as many cells as the first row. */
static enum status comment_header(struct csv *c, struct mark comment, size_t cells, struct mark data,
				  struct err *e)
{
	struct csv_row row;
	struct place where;
	struct err why = {0};
	go_back(c, comment);
	while (!at_line_end(c) && (c->data[c->at] == '#' || c->data[c->at] == ' '))
		step(c);
	bool fits =
	    !at_line_end(c) && read_row(c, &row, &where, &why) > 0 && row.n == cells && row_is_header(&row);
	enum status s = fits ? keep_header(c, &row, e) : ST_SYNTAX;
	go_back(c, data);
	if (!fits) {
		char expected[48];
		c->cell_at = c->at;
		snprintf(expected, sizeof expected, "the names of %zu columns", cells);
		say_cell(c, ST_SYNTAX,
			 "no header: neither this first row nor the last # line before it is one", expected,
			 e);
	}
	return s;
}

static enum status find_header(struct csv *c, struct err *e)
{
	struct mark comment = {0};
	bool commented = false;
	while (!at_end(c) && (c->data[c->at] == '#' || blank_line(c))) {
		if (c->data[c->at] == '#') {
			comment = mark_here(c);
			commented = true;
		}
		skip_line(c);
	}
	if (at_end(c) && !commented)
		return err_set(e, ST_SYNTAX, "the table is empty (got \"\", expected a header)");
	struct csv_row row;
	struct place where = {c->line, c->column};
	struct err why = {0};
	struct mark data = mark_here(c);
	if (at_end(c)) { /* comments only: the last one may still be the header of no rows */
		go_back(c, comment);
		c->separator = line_separator(c);
		while (!at_line_end(c) && (c->data[c->at] == '#' || c->data[c->at] == ' '))
			step(c);
		if (at_line_end(c) || read_row(c, &row, &where, &why) < 0)
			return err_set(e, ST_SYNTAX,
				       "the table is empty: comments only (got \"#\", expected a header)");
		return keep_header(c, &row, e);
	}
	c->separator = line_separator(c);
	if (read_row(c, &row, &where, &why) < 0)
		return found_at(c, where, &why, e);
	if (row_is_header(&row))
		return keep_header(c, &row, e);
	if (commented)
		return comment_header(c, comment, row.n, data, e);
	go_back(c, data);
	c->cell_at = c->at;
	say_cell(c, ST_SYNTAX, "no header: the first row holds numbers", "names of columns", e);
	return ST_SYNTAX;
}

/* --- open, close --- */

enum { LOOK_BYTES = 16 }; /* of a file that is no table, shown in the message */

enum status csv_open(const char *data, size_t n, struct csv **out, long *line, long *column, struct err *e)
{
	*out = NULL;
	*line = *column = 1;
	const char *looks = file_looks_like(data, n);
	if (looks) {
		char got[ERR_QUOTE_MAX];
		err_quote(data, n < LOOK_BYTES ? n : LOOK_BYTES, got);
		return err_set(e, ST_SYNTAX, "%s (got \"%s\", expected a UTF-8 text table)", looks, got);
	}
	struct csv *c = calloc(1, sizeof *c);
	if (!c)
		return err_set(e, ST_MEMORY, "no memory to read a table");
	*c = (struct csv){.data = data, .n = n, .line = 1, .column = 1, .separator = ','};
	c->cell = malloc(CSV_CELLS_MAX * sizeof *c->cell);
	c->start = malloc(CSV_CELLS_MAX * sizeof *c->start);
	enum status s = ST_OK;
	if (!c->cell || !c->start)
		s = err_set(e, ST_MEMORY, "no memory to read a table");
	if (n >= 3 && memcmp(data, "\xEF\xBB\xBF", 3) == 0)
		c->at = 3; /* the mark is no part of the first cell, nor of its column */
	if (s == ST_OK)
		s = find_header(c, e);
	if (s != ST_OK) {
		*line = c->line;
		*column = c->column;
		csv_close(c);
		return s;
	}
	*out = c;
	return ST_OK;
}

const struct csv_row *csv_header(const struct csv *c)
{
	return &c->header;
}

void csv_close(struct csv *c)
{
	if (!c)
		return;
	free(c->text);
	free(c->cell);
	free(c->start);
	free(c->header_cell);
	free(c->header_text);
	free(c);
}
