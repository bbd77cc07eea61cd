/* SPDX-License-Identifier: MIT
 * One cell of delimited text out, and what import takes off again. */
#ifndef WANE_DB_WRITE_CSV_H
#define WANE_DB_WRITE_CSV_H

#include <stdbool.h>
#include <stddef.h>

/* Writes text as a cell of a comma-separated row into out[size] (always ended): quoted where it has to be; a
 * text cell (is_text) that starts with = + - @, also behind apostrophes, gets a leading apostrophe, so that a
 * spreadsheet takes it for no formula. A cell that starts with # is quoted: at the start of a line it would
 * be a comment. Returns the length that it needs, as snprintf does. */
size_t csv_cell_write(const char *text, bool is_text, char *out, size_t size);
/* text, without the apostrophe that csv_cell_write puts before = + - @. */
const char *csv_cell_plain(const char *text);

#endif
