/* SPDX-License-Identifier: MIT
 * Rows of a table as an array of structs whose texts lie one after the other in one block; inside of db/
 * only.
 */
#ifndef WANE_DB_ROW_LIST_H
#define WANE_DB_ROW_LIST_H

#include "db/store_parts.h"

enum { ROW_TEXTS_MAX = 4 };
/* How the rows of a table become elements of an array. */
struct row_kind {
	const struct table *table;
	enum sql_id load;
	const char *word; /* `goal`, for messages */
	size_t removed_at;
	size_t name_at; /* cell that a message names a row by; 0: its id */
	size_t size;	/* of an element */
	/* element is zeroed; its texts are borrowed from the cells */
	void (*fill)(void *element, const struct cell *cell);
	size_t n_texts;
	size_t text_at[ROW_TEXTS_MAX]; /* offsets of its texts, each a const char * */
};
struct row_list {
	size_t n;
	void *row;    /* [n], in the order of the statement; the caller's to free, as is the block */
	char *block;  /* of the texts */
	size_t n_bad; /* left out because a checksum is wrong */
};
/* The listed rows, or those that were removed. bad[bad_bytes]: says which was the first to be left out, ""
 * none. Unless ST_OK *out is empty. */
MUST_USE enum status row_list_load(struct store *s, const struct row_kind *kind, bool removed,
				   struct row_list *out, char *bad, size_t bad_bytes, struct err *e);
/* The first of row[n], each of `size` bytes and in order of the int64_t at offset `id_at`, that has this id;
 * *n_found of them stand together. NULL: none. */
const void *row_list_of(const void *row, size_t n, size_t size, size_t id_at, int64_t id, size_t *n_found);

#endif
