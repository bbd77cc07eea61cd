/* SPDX-License-Identifier: MIT
 * wane's own small grammar for settings and column maps: `[section]`, `key = value`, `#` or `;` comment lines, blank lines; a value may be
 * "quoted" (\" and \\ inside). Everything else is an error with line and column. UTF-8 only. */
#ifndef WANE_DB_READ_INI_H
#define WANE_DB_READ_INI_H

#include "ephem/err.h"

#include <stddef.h>

struct ini_entry {
	const char *section; /* "" before the first one */
	const char *key, *value;
	long line, key_column, value_column;
};
struct ini_section {
	const char *name;
	long line, column; /* of the name */
};
struct ini {
	size_t n, n_sections;
	struct ini_entry *entry;     /* in file order */
	struct ini_section *section; /* each time that one begins */
	char *block;             /* owns the texts */
};
/* ST_SYNTAX with *line, *column of the fault; *e is `FIELD: what (got "...", expected ...)`, FIELD one of file, row, section, key, value or the
 * key's name. The same key twice in a section is a fault. */
MUST_USE enum status ini_parse(const char *data, size_t n, struct ini *out, long *line, long *column, struct err *e);
void ini_free(struct ini *ini);

#endif
