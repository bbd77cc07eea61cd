/* SPDX-License-Identifier: MIT
 * Memory of a plan's view: one chain of blocks that never move. */
#include "tui/plan_view.h"

#include "tui/parts/columns.h"
#include "tui/plan_parts.h"

#include <stdlib.h>
#include <string.h>

enum { BLOCK_BYTES = 16384 };

struct arena_block {
	struct arena_block *next;
	size_t used, room;
	_Alignas(max_align_t) unsigned char bytes[];
};
struct plan_arena {
	struct arena_block *first;
	bool failed;
	const struct plan_choices *choices; /* a piece of it */
};

static struct arena_block *block_with_room(struct plan_arena *a, size_t bytes)
{
	if (a->first && a->first->room - a->first->used >= bytes)
		return a->first;
	const size_t room = bytes > BLOCK_BYTES ? bytes : BLOCK_BYTES;
	struct arena_block *b = calloc(1, sizeof *b + room);
	if (!b)
		return NULL;
	b->room = room;
	b->next = a->first;
	a->first = b;
	return b;
}

struct plan_view plan_empty(const struct run *r, const struct night_view *night,
			    const struct plan_rules *rules)
{
	return (struct plan_view){.run = r,
				  .night = night,
				  .telescope = "",
				  .draft = "",
				  .stored_utc = "",
				  .who = "",
				  .limits = "",
				  .leap_date = "",
				  .revised_utc = "",
				  .damage = "",
				  .rules = *rules};
}

void *plan_alloc(struct plan_view *v, size_t n, size_t size)
{
	const size_t step = sizeof(max_align_t);
	if (!v->arena)
		v->arena = calloc(1, sizeof *v->arena);
	if (!v->arena)
		return NULL;
	if (n == 0)
		n = 1;
	struct arena_block *b = NULL;
	if (n <= (SIZE_MAX / 4) / size)
		b = block_with_room(v->arena, (n * size + step - 1) / step * step);
	if (!b) {
		v->arena->failed = true;
		return NULL;
	}
	void *piece = b->bytes + b->used;
	b->used += (n * size + step - 1) / step * step;
	return piece;
}

const char *plan_copy_n(struct plan_view *v, const char *text, size_t n)
{
	if (n == 0)
		return "";
	char *copy = plan_alloc(v, n + 1, 1);
	if (!copy)
		return "";
	memcpy(copy, text, n);
	return copy;
}

const char *plan_copy(struct plan_view *v, const char *text)
{
	return plan_copy_n(v, text ? text : "", text ? strlen(text) : 0);
}

enum status plan_memory(const struct plan_view *v, struct err *e)
{
	if (v->arena && !v->arena->failed)
		return ST_OK;
	return err_set(e, ST_MEMORY, "memory: none for a plan");
}

void plan_choices_set(struct plan_view *v, const struct plan_choices *c)
{
	if (v->arena)
		v->arena->choices = c;
}

const struct plan_choices *plan_choices_of(const struct plan_view *v)
{
	return v->arena ? v->arena->choices : NULL;
}

void plan_view_free(struct plan_view *v)
{
	struct arena_block *next = NULL;
	for (struct arena_block *b = v->arena ? v->arena->first : NULL; b; b = next) {
		next = b->next;
		free(b);
	}
	free(v->arena);
	*v = (struct plan_view){.n_items = 0};
}

const char *member_figure(const struct plan_member_view *m, const char *column)
{
	const int i = column_find(column);
	return i >= 0 && m->figure && m->figure[i] ? m->figure[i] : "";
}

const char *member_chance_column(const struct plan_member_view *m)
{
	if (strcmp(m->variant, variant_words[VARIANT_INGRESS]) == 0)
		return "chance_ingress";
	return strcmp(m->variant, variant_words[VARIANT_EGRESS]) == 0 ? "chance_egress" : "chance_done";
}
