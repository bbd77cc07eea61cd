/* SPDX-License-Identifier: MIT
 * What the files of an undo share. */
#ifndef WANE_DB_UNDO_PARTS_H
#define WANE_DB_UNDO_PARTS_H

#include "db/store_parts.h"

/* A table whose rows are replaced, with its old rows. */
struct family {
	const struct table *table;
	const char *what;	   /* in words */
	size_t title_at;	   /* the text that names a row */
	size_t removed_at, key_at; /* key_at: a name folded; 0 none */
	enum sql_id touched, by_id, after, before;
};
struct undoing {
	struct store *s;
	int64_t change; /* to be undone */
	const struct family *f;
};

/* ST_CONFLICT that names the first value that differs between the row as the change left it and the row as it is. */
MUST_USE enum status undo_say_changed(const struct undoing *u, const struct cell *left, const struct cell *now, struct err *e);
/* ST_CONFLICT where the name, or the place, of a row that comes back is no longer free. */
MUST_USE enum status undo_name_free(const struct undoing *u, const struct cell *image, struct err *e);

#endif
