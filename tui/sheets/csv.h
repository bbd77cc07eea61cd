/* SPDX-License-Identifier: MIT
 * Comma-separated values (RFC 4180 quoting by db/write_csv.h, lines end in a newline). */
#ifndef WANE_TUI_SHEETS_CSV_H
#define WANE_TUI_SHEETS_CSV_H

#include <stdbool.h>
#include <stdio.h>

struct csv_out {
	FILE *file;
	bool started; /* the line has a cell */
	bool failed;  /* no memory for a long cell: the result is not whole */
};

/* A cell of text: quoted where needed; one that starts with = + - @ gets a leading apostrophe, so that no spreadsheet takes it for a formula. */
void csv_text(struct csv_out *c, const char *text);
/* Text that is known to be no formula (a place of the command line): quoted where needed, no apostrophe. */
void csv_checked(struct csv_out *c, const char *text);
/* A cell of digits, or empty: as it is. */
void csv_number(struct csv_out *c, const char *text);
void csv_end_line(struct csv_out *c);

#endif
