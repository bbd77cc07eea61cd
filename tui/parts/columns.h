/* SPDX-License-Identifier: MIT
 * The one table of a window's columns: pages, text, CSV and JSON show the same figures because they read the same rows.
 * A row gives a typed value; renderers print it. */
#ifndef WANE_TUI_PARTS_COLUMNS_H
#define WANE_TUI_PARTS_COLUMNS_H

#include "ephem/window.h"
#include "tui/zone.h"

#include <stdbool.h>
#include <stddef.h>

enum value_type { VALUE_NONE, VALUE_TEXT, VALUE_NUMBER, VALUE_WHOLE, VALUE_UTC, VALUE_BJD };
struct value {
	enum value_type type;     /* VALUE_NONE: can't be computed: empty, null */
	char text[400];           /* VALUE_TEXT */
	double number;
	long whole;
	struct utc utc;
	struct jd2 jd;
};
struct column {
	const char *name;      /* machine name, contract order */
	const char *unit;      /* "min", "deg", "" */
	enum stage stage;      /* a scan must reach it */
	enum value_type type;
	size_t offset;         /* of a double in struct window; unused by those with `get` */
	void (*get)(const struct window *w, const struct night *n, struct value *v); /* NULL: read at offset */
	int machine_decimals, people_decimals;
	const char *heading;   /* for people */
	int width;
	const char *sentence;  /* explains the figure in one sentence */
};
extern const struct column columns[];
extern const size_t column_count;
int column_find(const char *name); /* -1 none */
struct value column_value(const struct column *c, const struct window *w, const struct night *n);
/* Machine text of a value (CSV cell without quoting; JSON adds quotes to text): "" for none. */
void value_machine_text(const struct column *c, const struct value *v, const struct leap_table *leap, char *out, size_t n);
/* People's text: numbers with people's decimals, times as local HH:MM (zone NULL: UTC). */
void value_people_text(const struct column *c, const struct value *v, const struct leap_table *leap, const struct zone *z, char *out, size_t n);

#endif
