/* SPDX-License-Identifier: MIT
 * How change sets lie in their rows; inside of db/ only. */
#ifndef WANE_DB_CHANGE_ROWS_H
#define WANE_DB_CHANGE_ROWS_H

#include "db/store_parts.h"

/* Places of the cells. */
enum { CHANGE_UTC = 1, CHANGE_WHO, CHANGE_VERB, CHANGE_UNDOES, CHANGE_REV, CHANGE_CELLS };

extern const struct table change_table;

struct change_link {
	int64_t id, undoes; /* undoes: 0 for a change that is no undo */
	bool undone;	    /* an undo took it back, and was not undone itself */
};
/* Newest first; those whose checksum is wrong are left out. *out is the caller's to free. */
MUST_USE enum status change_links(struct store *s, struct change_link **out, size_t *n, struct err *e);

#endif
