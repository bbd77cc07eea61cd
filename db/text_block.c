/* SPDX-License-Identifier: MIT */
#include "db/text_block.h"

#include <stdlib.h>
#include <string.h>

bool text_block_add(struct text_block *b, const char *text, size_t *place)
{
	size_t n = strlen(text) + 1;
	if (n > b->room - b->used) {
		size_t room = b->room ? 2 * b->room : 4096;
		while (room < b->used + n)
			room *= 2;
		char *larger = realloc(b->text, room);
		if (!larger)
			return false;
		b->text = larger;
		b->room = room;
	}
	memcpy(b->text + b->used, text, n);
	*place = b->used;
	b->used += n;
	return true;
}
