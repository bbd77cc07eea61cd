/* SPDX-License-Identifier: MIT
 * Delimited text (RFC 4180; comma, semicolon or tab by the header), read from memory. Knows no fields and no SQL. */
#ifndef WANE_DB_READ_CSV_H
#define WANE_DB_READ_CSV_H

#include "ephem/err.h"

#include <stdbool.h>
#include <stddef.h>

enum { CSV_CELLS_MAX = 1024, CSV_CELL_BYTES_MAX = 65536, CSV_FILE_BYTES_MAX = 64 * 1024 * 1024 };

struct csv_cell {
	const char *text; /* unquoted, NUL-terminated, borrowed until the next row is read */
	size_t length;
	long line, column; /* 1-based place of its first byte; column in bytes */
	bool quoted;
};
struct csv_row {
	size_t n;
	const struct csv_cell *cell;
	long line;
};
struct csv; /* opaque reader */

/* data[n] is borrowed until csv_close. Detects BOM, separator and header (the first row; when that is not one, the last `#` line before
 * the data with as many cells). A file that is binary, UTF-16/32, compressed, or empty is refused with what it looks like; *line, *column
 * get the place of the fault. */
MUST_USE enum status csv_open(const char *data, size_t n, struct csv **out, long *line, long *column, struct err *e);
const struct csv_row *csv_header(const struct csv *c);
/* What csv_next gives: a row; the end; an error after which nothing more comes (a quote that is never closed, no memory); a row that can't be
 * read (a NUL byte, a quote within an unquoted cell, text after a closing quote, an overlong cell, too many cells), left out up to the end of its
 * line, after which reading goes on. Of the latter two *line, *column are the place of the fault, and *e is `what (got "...", expected ...)`. */
enum { CSV_ROW = 1, CSV_END = 0, CSV_BROKEN = -1, CSV_BAD_ROW = -2 };
int csv_next(struct csv *c, struct csv_row *row, long *line, long *column, struct err *e);
void csv_close(struct csv *c);
/* What bytes that are no table look like, one sentence; NULL when nothing speaks against text. */
const char *file_looks_like(const char *data, size_t n);
/* Whole regular file into memory (at most CSV_FILE_BYTES_MAX; `-` is standard input). *data is the caller's to free. */
MUST_USE enum status file_read(const char *path, char **data, size_t *n, struct err *e);

#endif
