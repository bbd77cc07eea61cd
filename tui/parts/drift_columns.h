/* SPDX-License-Identifier: MIT
 * The one table of the columns of ageing ephemerides: text, CSV, JSON, sorting and pages read it. */
#ifndef WANE_TUI_PARTS_DRIFT_COLUMNS_H
#define WANE_TUI_PARTS_DRIFT_COLUMNS_H

#include "tui/drift_rows.h"
#include "tui/parts/columns.h"

struct drift_column {
	const char *name, *unit; /* machine name; unit "min" or "" */
	enum value_type type;	 /* dates without a time of day are texts */
	int machine_decimals, people_decimals;
	const char *heading; /* for people; NULL: not in their table */
	int width;	     /* least columns; negative: text, left-aligned */
	const char *sentence;
	void (*get)(const struct drift_row *row, const struct drift_table *t, struct value *v);
};
extern const struct drift_column drift_columns[];
extern const size_t drift_column_count;
int drift_column_find(const char *name); /* -1 none */
struct value drift_column_value(const struct drift_column *c, const struct drift_row *row, const struct drift_table *t);
/* Machine text ("" for none) and people's (dates as they are, times to the minute in UTC, `-` for none). */
void drift_machine_text(const struct drift_column *c, const struct value *v, const struct leap_table *leap, char *out, size_t n);
void drift_people_text(const struct drift_column *c, const struct value *v, const struct leap_table *leap, char *out, size_t n);

/* Order of the rows by a column, from the least, or from the greatest; equal ones as they stand, empty ones last. `already` is before every
 * date. order[t->n] are indexes of rows. ST_MEMORY. */
MUST_USE enum status drift_order(const struct drift_table *t, int column, bool descending, size_t order[], struct err *e);
/* `COLUMN` or `-COLUMN`. ST_SYNTAX: unknown, with the nearest. */
MUST_USE enum status drift_sort_parse(const char *text, int *column, bool *descending, struct err *e);

#endif
