/* SPDX-License-Identifier: MIT
 * A target table into the store: one transaction, one change set; a bad row refuses that row only. */
#ifndef WANE_DB_IMPORT_H
#define WANE_DB_IMPORT_H

#include "db/store.h"

#include <stdbool.h>
#include <stddef.h>

struct import_options {
	bool dry_run, strict, adopt;
	struct change change;
};
struct import_report {
	long read, added, changed, same, refused;
	long doubtful;      /* stored rows with some value that can't be true */
	long scale_assumed; /* stored rows whose source does not say its time standard */
	long no_ephemeris;
	long too_short; /* stored rows whose period is below what is counted */
};
/* One refused row or warning. field: a column's name, or `file`, `header`, `column` or `row` where it is no value of a column. got: as err_quote
 * shows it, fit for a terminal; where text holds its own `(got "...", expected ...)`, got and expected are "". */
struct import_message {
	long line, column;
	const char *field, *text, *got;
	const char *expected; /* "" when text says it all */
	bool warning;
};
/* data[n]: the file's bytes. say is called for each refused row and each warning, in file order. ST_SYNTAX when the file as a whole can't be
 * read (no header, no name column, a broken quote), or with strict when a row was refused: then nothing was stored; what has a
 * place in the file was said, and *e says no more than that nothing was stored (of strict: how many rows were refused). Doubtful values are said as warnings. s NULL with dry_run: an empty store. */
MUST_USE enum status import_targets(struct store *s, const char *data, size_t n, const struct import_options *o, struct import_report *report,
				    void (*say)(void *ctx, const struct import_message *m), void *ctx, struct err *e);

#endif
