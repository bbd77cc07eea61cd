/* SPDX-License-Identifier: MIT */
#include "db/row_list.h"

#include "db/text_block.h"
#include "db/text_clean.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

struct loading {
	const struct row_kind *kind;
	struct row_list *out;
	size_t (*place)[ROW_TEXTS_MAX]; /* of the texts, while the block still moves */
	size_t room;
	struct text_block texts;
};

static char *element(const struct loading *l, size_t i)
{
	return (char *)l->out->row + i * l->kind->size;
}

static const char **text_member(char *element, size_t at)
{
	void *member = element + at;
	return member;
}

static bool make_room(struct loading *l)
{
	if (l->out->n < l->room)
		return true;
	size_t room = l->room ? 2 * l->room : 32;
	void *row = realloc(l->out->row, room * l->kind->size);
	if (row)
		l->out->row = row;
	void *place = realloc(l->place, room * sizeof *l->place);
	if (place)
		l->place = place;
	if (!row || !place)
		return false;
	l->room = room;
	return true;
}

static enum status keep(struct loading *l, const struct cell *cell, struct err *e)
{
	const struct row_kind *kind = l->kind;
	bool room = make_room(l);
	if (room) {
		memset(element(l, l->out->n), 0, kind->size);
		kind->fill(element(l, l->out->n), cell);
	}
	for (size_t i = 0; room && i < kind->n_texts; i++)
		room = text_block_add(&l->texts, *text_member(element(l, l->out->n), kind->text_at[i]),
				      &l->place[l->out->n][i]);
	if (!room)
		return err_set(e, ST_MEMORY, "database: no memory");
	l->out->n++;
	return ST_OK;
}

/* What may be wrong would give wrong times and limits: it is named and left out. */
static void note_bad(struct store *s, const struct row_kind *kind, const struct cell *cell, char *bad,
		     size_t bad_bytes)
{
	char clean[96];
	const struct cell *name = &cell[kind->name_at];
	if (kind->name_at > 0)
		(void)text_clean(name->type == CELL_TEXT ? name->u.text : "", clean, sizeof clean);
	else
		snprintf(clean, sizeof clean, "%lld",
			 (long long)sqlite3_column_int64(s->stmt[kind->load], 0));
	snprintf(bad, bad_bytes, "the checksum of %s %s is wrong: left out; see `wane check`", kind->word,
		 clean);
}

enum status row_list_load(struct store *s, const struct row_kind *kind, bool removed, struct row_list *out,
			  char *bad, size_t bad_bytes, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX];
	struct loading l = {.kind = kind, .out = out};
	bool row = false;
	enum status st = ST_OK;
	*out = (struct row_list){0};
	bad[0] = '\0';
	while (st == ST_OK && (st = sql_step(s, kind->load, &row, e)) == ST_OK && row) {
		if (!row_read(s, kind->load, 0, kind->table, cell)) {
			if (out->n_bad++ == 0)
				note_bad(s, kind, cell, bad, bad_bytes);
		} else if ((cell[kind->removed_at].u.i != 0) == removed) {
			st = keep(&l, cell, e);
		}
	}
	sql_reset(s, kind->load);
	out->block = l.texts.text;
	for (size_t k = 0; st == ST_OK && l.place && k < out->n; k++)
		for (size_t i = 0; i < kind->n_texts; i++)
			*text_member(element(&l, k), kind->text_at[i]) = out->block + l.place[k][i];
	free(l.place);
	if (st != ST_OK) {
		free(out->row);
		free(out->block);
		*out = (struct row_list){0};
		bad[0] = '\0';
	}
	return st;
}

const void *row_list_of(const void *row, size_t n, size_t size, size_t id_at, int64_t id, size_t *n_found)
{
	const char *first = row;
	size_t from = 0, to = n;
	*n_found = 0;
	while (from < to) {
		size_t middle = from + (to - from) / 2;
		const void *at = first + middle * size + id_at;
		if (*(const int64_t *)at < id)
			from = middle + 1;
		else
			to = middle;
	}
	for (size_t i = from; i < n; i++) {
		const void *at = first + i * size + id_at;
		if (*(const int64_t *)at != id)
			break;
		(*n_found)++;
	}
	return *n_found > 0 ? first + from * size : NULL;
}
