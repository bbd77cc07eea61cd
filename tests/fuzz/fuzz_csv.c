/* SPDX-License-Identifier: MIT
 * Delimited text: rows stay inside their bounds, places rise, two readings agree, and what was read, written
 * out in quotes, reads back equal. */
#include "db/read_csv.h"

#include "tests/fuzz/property.h"

#include <string.h>

/* Grows by appending; the caller's to free. */
struct text {
	char *s;
	size_t n, room;
};

static void add_bytes(struct text *t, const char *s, size_t n)
{
	if (t->n + n > t->room) {
		t->room = 2 * (t->n + n);
		t->s = realloc(t->s, t->room);
		property(t->s != NULL);
	}
	memcpy(t->s + t->n, s, n);
	t->n += n;
}

static void add_quoted(struct text *t, const struct csv_row *row)
{
	for (size_t i = 0; i < row->n; i++) {
		add_bytes(t, i ? ",\"" : "\"", i ? 2 : 1);
		for (size_t k = 0; k < row->cell[i].length; k++)
			add_bytes(t, row->cell[i].text[k] == '"' ? "\"\"" : &row->cell[i].text[k],
				  row->cell[i].text[k] == '"' ? 2 : 1);
		add_bytes(t, "\"", 1);
	}
	add_bytes(t, "\n", 1);
}

static void check_row(const struct csv_row *row, long *last_line)
{
	property(row->n >= 1 && row->n <= CSV_CELLS_MAX);
	property(row->line > *last_line);
	*last_line = row->line;
	for (size_t i = 0; i < row->n; i++) {
		const struct csv_cell *cell = &row->cell[i];
		property(cell->length <= CSV_CELL_BYTES_MAX);
		property(strlen(cell->text) == cell->length);
		property(cell->line >= row->line && cell->column >= 1);
	}
}

/* Reads all rows; *out, when wanted, gets them written in quotes with commas. The end: 0 or -1. */
static int read_all(const char *data, size_t size, struct text *out, size_t *rows)
{
	struct csv *c;
	struct err e = {.status = ST_OK};
	*rows = 0;
	long line = 0, column = 0, last_line = 0;
	if (csv_open(data, size, &c, &line, &column, &e) != ST_OK) {
		property(line >= 1 && column >= 1);
		property(c == NULL && e.text[0] != '\0' && !strchr(e.text, '\n'));
		return -1;
	}
	const struct csv_row *header = csv_header(c);
	property(header->n >= 1 && header->n <= CSV_CELLS_MAX);
	/* a header of our own: theirs may have stood in a comment, where a number is no column's name either
	 */
	if (out)
		add_bytes(out, "\"header\"\n", 9);
	struct csv_row row;
	int more;
	while ((more = csv_next(c, &row, &line, &column, &e)) == CSV_ROW || more == CSV_BAD_ROW) {
		if (more == CSV_BAD_ROW) {
			property(line >= 1 && column >= 1 && e.text[0] != '\0' && !strchr(e.text, '\n'));
			continue;
		}
		check_row(&row, &last_line);
		if (out)
			add_quoted(out, &row);
		++*rows;
	}
	if (more < 0) {
		property(line >= 1 && column >= 1 && e.text[0] != '\0');
		property(csv_next(c, &row, &line, &column, &e) != 1);
	}
	csv_close(c);
	return more;
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
	char *bytes = exact_copy(data, size);
	struct text once = {0}, twice = {0};
	size_t n_once, n_twice;
	int end = read_all(bytes, size, &once, &n_once);
	if (once.n > 0) { /* the rows before a fault too */
		int again = read_all(once.s, once.n, &twice, &n_twice);
		property(again == 0 || end < 0);
		if (again == 0) {
			property(n_twice == n_once);
			property(twice.n == once.n && memcmp(twice.s, once.s, once.n) == 0);
		}
	}
	free(once.s);
	free(twice.s);
	free(bytes);
	return 0;
}
