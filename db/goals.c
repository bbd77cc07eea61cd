/* SPDX-License-Identifier: MIT */
#include "db/goals.h"

#include "db/goal_rows.h"
#include "db/row_list.h"
#include "db/target_rows.h"
#include "db/telescope_rows.h"
#include "db/text_clean.h"

#include <stddef.h>
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

static void fill(void *element, const struct cell *cell)
{
	struct goal_row *g = element;
	*g = (struct goal_row){
	    .id = cell[0].u.i,
	    .target_id = cell[GOAL_TARGET].u.i,
	    .whole = (int)cell[GOAL_WHOLE].u.i,
	    .limb = (int)cell[GOAL_LIMB].u.i,
	    .band = cell[GOAL_BAND].u.text,
	    .until_mjd = cell[GOAL_UNTIL].type == CELL_INT ? (int32_t)cell[GOAL_UNTIL].u.i : 0,
	    .note = cell[GOAL_NOTE].u.text,
	    .since_utc = cell[GOAL_SINCE].u.text,
	};
}

static const struct row_kind kind = {
    .table = &goal_rows,
    .load = SQL_GOAL_LOAD,
    .word = "goal",
    .removed_at = GOAL_REMOVED,
    .size = sizeof(struct goal_row),
    .fill = fill,
    .n_texts = 3,
    .text_at = {offsetof(struct goal_row, band), offsetof(struct goal_row, note),
		offsetof(struct goal_row, since_utc)},
};

enum status goals_load(struct store *s, struct goal_list *out, struct err *e)
{
	struct row_list l;
	*out = (struct goal_list){0};
	enum status st = row_list_load(s, &kind, false, &l, out->bad, sizeof out->bad, e);
	out->n = l.n;
	out->goal = l.row;
	out->block = l.block;
	out->n_bad = l.n_bad;
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
	return row_list_of(list->goal, list->n, sizeof *list->goal, offsetof(struct goal_row, target_id),
			   target_id, n);
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
	if (st == ST_OK && !old.cell[GOAL_REMOVED].u.i)
		cell[GOAL_SINCE] = old.cell[GOAL_SINCE];
	return row_put(s, &goal_rows, GOAL_REMOVED, st, &old, cell, e);
}

enum status goal_remove(struct store *s, int64_t target_id, const char *band, struct err *e)
{
	struct row old;
	const char *name;
	enum status st = band_check(band, &name, e);
	if (st != ST_OK)
		return st;
	st = find_goal(s, target_id, name, &old, e);
	st = row_remove(s, &goal_rows, GOAL_REMOVED, st, &old, e);
	return st == ST_ABSENT
		   ? err_set(e, ST_ABSENT, "it has no goal %s%s", *name ? "in band " : "for any band", name)
		   : st;
}
