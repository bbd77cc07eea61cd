/* SPDX-License-Identifier: MIT
 * What goes to standard error: one line each, cleaned of whatever a terminal could obey. With a file:
 * `wane: FILE:LINE:COLUMN: FIELD: what is wrong (got "...", expected ...)`; without: `wane: WORD: ...`. */
#ifndef WANE_TUI_DIAGNOSE_H
#define WANE_TUI_DIAGNOSE_H

#include "ephem/err.h"

#include <stdbool.h>
#include <stdio.h>

/* `wane: WORD: ...` */
void diagnose(const char *word, const char *format, ...) __attribute__((format(printf, 2, 3)));
/* The same from a filled err; returns exit_code, so that a command can end in one statement. */
int diagnose_err(const char *word, const struct err *e, int exit_code);
/* For an err whose text begins with its own `WORD: ` or `FILE:LINE:COLUMN: `. */
int diagnose_whole(const struct err *e, int exit_code);
/* The messages about one file: at most DIAGNOSES_SHOWN are printed, faults before doubts, then a count of the rest. */
enum { DIAGNOSES_SHOWN = 20, DIAGNOSIS_BYTES = 900 };
struct diagnoses {
	const char *file; /* borrowed */
	long faults, doubts;
	char fault[DIAGNOSES_SHOWN][DIAGNOSIS_BYTES];
	char doubt[DIAGNOSES_SHOWN][DIAGNOSIS_BYTES];
};
/* `wane: FILE:LINE:COLUMN: FIELD: text (got "...", expected ...)`; got and expected are left out when the text quotes already, expected "" too.
 * got: as err_quote shows it. */
void diagnoses_add(struct diagnoses *d, bool doubt, long line, long column, const char *field, const char *text, const char *got,
		   const char *expected);
void diagnoses_print(const struct diagnoses *d, FILE *to);

#endif
