/* SPDX-License-Identifier: MIT
 * Reading targets out of the store. */
#include "db/targets.h"

#include "db/target_rows.h"
#include "db/text_clean.h"
#include "ephem/number_text.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Text members of struct target, in the order in which their places are noted while the block still moves. */
enum { TARGET_TEXTS = 6 };

struct loading {
	struct target_list *out;
	size_t room;
	size_t (*place)[TARGET_TEXTS]; /* [room] offsets in the block */
	size_t used, size;	       /* of the block */
	size_t *alias_place;	       /* [n_alias] */
	char bad[256];
};

static const char **text_member(struct target *t, int i)
{
	switch (i) {
	case 0:
		return &t->name;
	case 1:
		return &t->time_scale;
	case 2:
		return &t->band;
	case 3:
		return &t->source;
	case 4:
		return &t->tags;
	default:
		return &t->note;
	}
}

/* Copies text into the block; place 0 holds the empty text. */
static bool keep_text(struct loading *l, const char *text, size_t *place)
{
	size_t n = strlen(text) + 1;
	*place = 0;
	if (n == 1 && l->used > 0)
		return true;
	if (l->used + n > l->size) {
		size_t size = l->size ? 2 * l->size : 16384;
		while (size < l->used + n)
			size *= 2;
		char *block = realloc(l->out->block, size);
		if (!block)
			return false;
		l->out->block = block;
		l->size = size;
	}
	memcpy(l->out->block + l->used, text, n);
	*place = l->used;
	l->used += n;
	return true;
}

static bool make_room(struct loading *l)
{
	if (l->out->n < l->room)
		return true;
	size_t room = l->room ? 2 * l->room : 256;
	struct target *t = realloc(l->out->t, room * sizeof *t);
	if (t)
		l->out->t = t;
	uint64_t *doubts = realloc(l->out->doubts, room * sizeof *doubts);
	if (doubts)
		l->out->doubts = doubts;
	size_t(*place)[TARGET_TEXTS] = realloc(l->place, room * sizeof *place);
	if (place)
		l->place = place;
	l->room = room;
	return t && doubts && place;
}

/* Names a row that is left out. The name itself may be what is damaged, so it is cleaned. */
static void note_bad(struct loading *l, const char *what, const struct cell *name)
{
	char clean[96];
	if (l->out->n_bad++ > 0)
		return;
	(void)text_clean(name->type == CELL_TEXT ? name->u.text : "", clean, sizeof clean);
	snprintf(l->bad, sizeof l->bad, "the checksum of %s %s is wrong: left out; see `wane check`", what,
		 clean);
}

static enum status keep_target(struct loading *l, const struct cell *cell, const struct cell *ephemeris,
			       struct err *e)
{
	if (!make_room(l))
		return err_set(e, ST_MEMORY, "database: no memory");
	struct target t = target_empty();
	uint64_t doubts = (uint64_t)cell[TARGET_DOUBTS].u.i;
	t.id = cell[0].u.i;
	fields_from_cells(cell + TARGET_FIELDS, HOME_TARGET, &t);
	if (ephemeris) {
		t.ephemeris_id = ephemeris[0].u.i;
		doubts |= (uint64_t)ephemeris[EPHEMERIS_DOUBTS].u.i;
		fields_from_cells(ephemeris + EPHEMERIS_FIELDS, HOME_EPHEMERIS, &t);
		if (standard_parse(t.time_scale, &t.standard, e) != ST_OK)
			return err_set(e, ST_STORE, "database: damaged: time scale of %s", t.name);
	}
	if (t.period_d < PERIOD_MIN_D) /* stored before this was a doubt */
		doubts |= UINT64_C(1) << FIELD_AT_PERIOD;
	for (int i = 0; i < TARGET_TEXTS; i++)
		if (!keep_text(l, *text_member(&t, i), &l->place[l->out->n][i]))
			return err_set(e, ST_MEMORY, "database: no memory");
	l->out->t[l->out->n] = t;
	l->out->doubts[l->out->n++] = doubts;
	return ST_OK;
}

static enum status load_row(struct loading *l, struct store *s, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX], ephemeris[ROW_CELLS_MAX];
	const struct cell *current = NULL;
	if (!row_read(s, SQL_TARGET_LOAD, 0, &target_table, cell)) {
		note_bad(l, "target", &cell[TARGET_FIELDS]);
		return ST_OK;
	}
	if (cell[TARGET_REMOVED].u.i)
		return ST_OK;
	if (cell[TARGET_EPHEMERIS].type == CELL_INT) {
		if (row_read(s, SQL_TARGET_LOAD, TARGET_CELLS + 1, &ephemeris_table, ephemeris) &&
		    ephemeris[EPHEMERIS_TARGET].u.i == cell[0].u.i)
			current = ephemeris;
		else
			note_bad(l, "the ephemeris of", &cell[TARGET_FIELDS]);
	}
	return keep_target(l, cell, current, e);
}

static enum status load_targets(struct loading *l, struct store *s, struct err *e)
{
	size_t nothing;
	bool row = false;
	enum status st = keep_text(l, "", &nothing) ? ST_OK : err_set(e, ST_MEMORY, "database: no memory");
	while (st == ST_OK && (st = sql_step(s, SQL_TARGET_LOAD, &row, e)) == ST_OK && row)
		st = load_row(l, s, e);
	sql_reset(s, SQL_TARGET_LOAD);
	return st;
}

struct id_index {
	int64_t id;
	long index;
};

static int by_id(const void *a, const void *b)
{
	int64_t x = ((const struct id_index *)a)->id, y = ((const struct id_index *)b)->id;
	return (x > y) - (x < y);
}

static enum status keep_alias(struct loading *l, const struct cell *cell, const struct id_index *ids,
			      struct err *e)
{
	struct id_index want = {cell[ALIAS_TARGET].u.i, 0};
	const struct id_index *found = l->out->n ? bsearch(&want, ids, l->out->n, sizeof *ids, by_id) : NULL;
	if (cell[ALIAS_REMOVED].u.i || !found)
		return ST_OK;
	size_t n = l->out->n_alias;
	struct target_alias *alias = realloc(l->out->alias, (n + 1) * sizeof *alias);
	if (alias)
		l->out->alias = alias;
	size_t *place = realloc(l->alias_place, (n + 1) * sizeof *place);
	if (place)
		l->alias_place = place;
	if (!alias || !place || !keep_text(l, cell[ALIAS_KEY].u.text, &place[n]))
		return err_set(e, ST_MEMORY, "database: no memory");
	alias[n] = (struct target_alias){.index = found->index};
	l->out->n_alias++;
	return ST_OK;
}

static enum status load_aliases(struct loading *l, struct store *s, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX];
	bool row = false;
	struct id_index *ids = malloc((l->out->n + 1) * sizeof *ids);
	if (!ids)
		return err_set(e, ST_MEMORY, "database: no memory");
	for (size_t i = 0; i < l->out->n; i++)
		ids[i] = (struct id_index){l->out->t[i].id, (long)i};
	qsort(ids, l->out->n, sizeof *ids, by_id);
	enum status st = ST_OK;
	while (st == ST_OK && (st = sql_step(s, SQL_ALIAS_LOAD, &row, e)) == ST_OK && row) {
		if (row_read(s, SQL_ALIAS_LOAD, 0, &alias_table, cell))
			st = keep_alias(l, cell, ids, e);
		else
			note_bad(l, "the other name", &cell[ALIAS_NAME]);
	}
	sql_reset(s, SQL_ALIAS_LOAD);
	free(ids);
	return st;
}

/* The block has its last size: places become pointers. */
static enum status settle(struct loading *l, struct err *e)
{
	size_t bad;
	if (!keep_text(l, l->bad, &bad))
		return err_set(e, ST_MEMORY, "database: no memory");
	struct target_list *out = l->out;
	for (size_t n = 0; l->place && n < out->n; n++)
		for (int i = 0; i < TARGET_TEXTS; i++)
			*text_member(&out->t[n], i) = out->block + l->place[n][i];
	for (size_t n = 0; l->alias_place && n < out->n_alias; n++)
		out->alias[n].key = out->block + l->alias_place[n];
	out->bad = out->block + bad;
	return ST_OK;
}

enum status targets_load(struct store *s, struct target_list *out, struct err *e)
{
	*out = (struct target_list){.bad = ""};
	struct loading l = {.out = out};
	enum status st = load_targets(&l, s, e);
	if (st == ST_OK)
		st = load_aliases(&l, s, e);
	if (st == ST_OK)
		st = settle(&l, e);
	free(l.place);
	free(l.alias_place);
	if (st != ST_OK)
		target_list_free(out);
	return st;
}

void target_list_free(struct target_list *list)
{
	free(list->t);
	free(list->doubts);
	free(list->alias);
	free(list->block);
	*list = (struct target_list){.bad = ""};
}

long target_list_find(const struct target_list *list, const char *name)
{
	char key[NAME_KEY_MAX], other[NAME_KEY_MAX];
	name_key(name, key);
	for (size_t lo = 0, hi = list->n; lo < hi;) {
		size_t mid = lo + (hi - lo) / 2;
		name_key(list->t[mid].name, other);
		int order = strcmp(key, other);
		if (order == 0)
			return (long)mid;
		if (order < 0)
			hi = mid;
		else
			lo = mid + 1;
	}
	for (size_t lo = 0, hi = list->n_alias; lo < hi;) {
		size_t mid = lo + (hi - lo) / 2;
		int order = strcmp(key, list->alias[mid].key);
		if (order == 0)
			return list->alias[mid].index;
		if (order < 0)
			hi = mid;
		else
			lo = mid + 1;
	}
	return -1;
}

/* A position that was read as hours, minutes and seconds goes out in degrees, as its column says. */
static bool is_plain_number(const char *text)
{
	double value;
	return number_parse(text, strlen(text), &value, NULL, NULL) == ST_OK;
}

enum status target_texts(struct store *s, int64_t id, struct field_texts *texts, char **block, struct err *e)
{
	struct row target, ephemeris = {0};
	*block = NULL;
	struct row_texts *own = malloc(sizeof *own);
	if (!own)
		return err_set(e, ST_MEMORY, "database: no memory");
	row_texts_clear(own);
	enum status st = row_find(s, SQL_TARGET_BY_ID, cell_int(id), &target_table, &target, e);
	if (st == ST_ABSENT)
		err_set(e, st, "no such target");
	if (st == ST_OK && target.cell[TARGET_EPHEMERIS].type == CELL_INT)
		st = row_find(s, SQL_EPHEMERIS_BY_ID, target.cell[TARGET_EPHEMERIS], &ephemeris_table,
			      &ephemeris, e);
	if (st == ST_OK) {
		row_texts_of_cells(own, target.cell, HOME_TARGET);
		if (ephemeris.n)
			row_texts_of_cells(own, ephemeris.cell, HOME_EPHEMERIS);
		struct target t = target_empty();
		fields_from_cells(target.cell + TARGET_FIELDS, HOME_TARGET, &t);
		for (int i = FIELD_AT_RA; i <= FIELD_AT_DEC; i++) {
			char number[NUMBER_TEXT_MAX];
			if (is_plain_number(own->texts.text[i]))
				continue;
			field_text(&t, i, number, sizeof number);
			(void)row_texts_put(own, i, number, strlen(number));
		}
		*texts = own->texts;
		*block = (char *)own;
	} else {
		free(own);
	}
	row_free(&target);
	row_free(&ephemeris);
	return st;
}
