/* SPDX-License-Identifier: MIT */
#include "db/goals.h"

#include "db/goal_rows.h"
#include "db/target_rows.h"
#include "db/telescope_rows.h"
#include "db/text_block.h"
#include "db/text_clean.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

const struct table goal_rows = {
    .name = "goal",
    .cells = GOAL_CELLS,
    .rev_at = GOAL_REV,
    .change_at = GOAL_CHANGE,
    .next = SQL_GOAL_NEXT,
    .add = SQL_GOAL_ADD,
    .update = SQL_GOAL_UPDATE,
    .keep_old = SQL_GOAL_KEEP_OLD,
};

enum status target_check(struct store *s, int64_t target_id, struct err *e)
{
	struct row row;
	enum status st = row_find(s, SQL_TARGET_BY_ID, cell_int(target_id), &target_table, &row, e);
	if (st == ST_ABSENT || (st == ST_OK && row.cell[TARGET_REMOVED].u.i))
		st = err_set(e, ST_ABSENT, "no such target is stored");
	row_free(&row);
	return st;
}

enum status band_check(const char *text, const char **name, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	const enum band_id band = band_parse(text);
	*name = "";
	if (text[0] && band == BAND_NONE) {
		err_quote(text, strlen(text), got);
		return err_set(e, ST_SYNTAX,
			       "band: unknown (got \"%s\", expected U, B, V, R, I, g, r, i, z or clear)",
			       got);
	}
	if (band != BAND_NONE)
		*name = bands[band].name;
	return ST_OK;
}

/* --- reading --- */

enum { GOAL_TEXTS = 3 };

struct loading {
	struct goal_list *out;
	size_t (*place)[GOAL_TEXTS]; /* of band, note and since, while the block still moves */
	size_t room;
	struct text_block texts;
};

static bool make_room(struct loading *l)
{
	if (l->out->n < l->room)
		return true;
	size_t room = l->room ? 2 * l->room : 64;
	struct goal_row *list = realloc(l->out->goal, room * sizeof *list);
	if (list)
		l->out->goal = list;
	void *place = realloc(l->place, room * sizeof *l->place);
	if (place)
		l->place = place;
	if (!list || !place)
		return false;
	l->room = room;
	return true;
}

static enum status keep(struct loading *l, const struct cell *cell, struct err *e)
{
	struct goal_list *out = l->out;
	if (!make_room(l) || !text_block_add(&l->texts, cell[GOAL_BAND].u.text, &l->place[out->n][0]) ||
	    !text_block_add(&l->texts, cell[GOAL_NOTE].u.text, &l->place[out->n][1]) ||
	    !text_block_add(&l->texts, cell[GOAL_SINCE].u.text, &l->place[out->n][2]))
		return err_set(e, ST_MEMORY, "database: no memory");
	out->goal[out->n++] = (struct goal_row){
	    .id = cell[0].u.i,
	    .target_id = cell[GOAL_TARGET].u.i,
	    .whole = (int)cell[GOAL_WHOLE].u.i,
	    .limb = (int)cell[GOAL_LIMB].u.i,
	    .until_mjd = cell[GOAL_UNTIL].type == CELL_INT ? (int32_t)cell[GOAL_UNTIL].u.i : 0,
	};
	return ST_OK;
}

enum status goals_load(struct store *s, struct goal_list *out, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX];
	struct loading l = {.out = out};
	bool row = false;
	enum status st = ST_OK;
	*out = (struct goal_list){0};
	while (st == ST_OK && (st = sql_step(s, SQL_GOAL_LOAD, &row, e)) == ST_OK && row) {
		bool sound = row_read(s, SQL_GOAL_LOAD, 0, &goal_rows, cell);
		if (sound && !cell[GOAL_REMOVED].u.i)
			st = keep(&l, cell, e);
		else if (!sound && out->n_bad++ == 0)
			snprintf(out->bad, sizeof out->bad,
				 "the checksum of goal %lld is wrong: left out; see `wane check`",
				 (long long)sqlite3_column_int64(s->stmt[SQL_GOAL_LOAD], 0));
	}
	sql_reset(s, SQL_GOAL_LOAD);
	out->block = l.texts.text;
	for (size_t k = 0; st == ST_OK && k < out->n; k++) {
		out->goal[k].band = out->block + l.place[k][0];
		out->goal[k].note = out->block + l.place[k][1];
		out->goal[k].since_utc = out->block + l.place[k][2];
	}
	free(l.place);
	if (st != ST_OK)
		goal_list_free(out);
	return st;
}

void goal_list_free(struct goal_list *list)
{
	free(list->goal);
	free(list->block);
	*list = (struct goal_list){0};
}

const struct goal_row *goals_of(const struct goal_list *list, int64_t target_id, size_t *n)
{
	size_t from = 0, to = list->n;
	*n = 0;
	while (from < to) {
		size_t middle = from + (to - from) / 2;
		if (list->goal[middle].target_id < target_id)
			from = middle + 1;
		else
			to = middle;
	}
	while (from + *n < list->n && list->goal[from + *n].target_id == target_id)
		(*n)++;
	return *n > 0 ? &list->goal[from] : NULL;
}

/* --- writing --- */

static enum status check_goal(const struct goal_row *g, struct err *e)
{
	if (g->whole < 0 || g->whole > GOAL_EVENTS_MAX)
		return err_set(e, ST_RANGE, "whole: out of range (got \"%d\", expected 0 to %d events)",
			       g->whole, (int)GOAL_EVENTS_MAX);
	if (g->limb < 0 || g->limb > GOAL_EVENTS_MAX)
		return err_set(e, ST_RANGE, "limb: out of range (got \"%d\", expected 0 to %d limbs)",
			       g->limb, (int)GOAL_EVENTS_MAX);
	if (g->whole + g->limb == 0)
		return err_set(e, ST_RANGE,
			       "goal: nothing is wanted (got \"0 0\", expected an event or a limb at least)");
	if (g->until_mjd != 0 && (g->until_mjd < NIGHT_MJD_MIN || g->until_mjd > NIGHT_MJD_MAX))
		return err_set(e, ST_RANGE, "until: not a night of 1900 to 2100");
	return text_check("note", g->note ? g->note : "", NOTE_CHARS_MAX, e);
}

static enum status find_goal(struct store *s, int64_t target_id, const char *band, struct row *out,
			     struct err *e)
{
	const struct cell keys[] = {cell_int(target_id), cell_text(band)};
	return row_find_by(s, SQL_GOAL_OF_TARGET, keys, 2, &goal_rows, out, e);
}

enum status goal_set(struct store *s, const struct goal_row *g, struct err *e)
{
	struct row old;
	const char *band = "";
	enum status st = check_goal(g, e);
	if (st == ST_OK)
		st = band_check(g->band ? g->band : "", &band, e);
	if (st == ST_OK)
		st = target_check(s, g->target_id, e);
	if (st != ST_OK)
		return st;
	struct cell cell[ROW_CELLS_MAX] = {
	    [GOAL_TARGET] = cell_int(g->target_id), [GOAL_WHOLE] = cell_int(g->whole),
	    [GOAL_LIMB] = cell_int(g->limb),	    [GOAL_BAND] = cell_text(band),
	    [GOAL_UNTIL] = cell_id(g->until_mjd),   [GOAL_NOTE] = cell_text(g->note ? g->note : ""),
	    [GOAL_SINCE] = cell_text(s->utc),	    [GOAL_REMOVED] = cell_int(0),
	};
	st = find_goal(s, g->target_id, band, &old, e);
	if (st == ST_ABSENT) {
		int64_t id = 0;
		st = row_next_id(s, &goal_rows, &id, e);
		cell[0] = cell_int(id);
		if (st == ST_OK)
			st = row_add(s, &goal_rows, cell, e);
	} else if (st == ST_OK) {
		if (!old.cell[GOAL_REMOVED].u.i)
			cell[GOAL_SINCE] = old.cell[GOAL_SINCE];
		if (!cells_same(&cell[1], &old.cell[1], GOAL_REMOVED))
			st = row_replace(s, &goal_rows, &old, cell, e);
	}
	row_free(&old);
	return st;
}

enum status goal_remove(struct store *s, int64_t target_id, const char *band, struct err *e)
{
	struct row old;
	struct cell cell[ROW_CELLS_MAX];
	const char *name;
	enum status st = band_check(band, &name, e);
	if (st != ST_OK)
		return st;
	st = find_goal(s, target_id, name, &old, e);
	if (st == ST_ABSENT || (st == ST_OK && old.cell[GOAL_REMOVED].u.i)) {
		st = err_set(e, ST_ABSENT, "it has no goal %s%s", *name ? "in band " : "for any band", name);
	} else if (st == ST_OK) {
		memcpy(cell, old.cell, sizeof cell);
		cell[GOAL_REMOVED] = cell_int(1);
		st = row_replace(s, &goal_rows, &old, cell, e);
	}
	row_free(&old);
	return st;
}
