/* SPDX-License-Identifier: MIT
 * Texts of a list that is still growing, one after the other in one block. Places are offsets until the block
 * has its last size. */
#ifndef WANE_DB_TEXT_BLOCK_H
#define WANE_DB_TEXT_BLOCK_H

#include <stdbool.h>
#include <stddef.h>

struct text_block {
	char *text; /* the caller's to free */
	size_t used, room;
};
/* Copies text behind the others; *place where it begins. False: no memory, the block is as it was. */
bool text_block_add(struct text_block *b, const char *text, size_t *place);

#endif
