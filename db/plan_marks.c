/* SPDX-License-Identifier: MIT
 * What became of a plan's items. A mark belongs to a plan and a key, so that it outlives editions. */
#include "db/plan_rows.h"
#include "db/target_rows.h"
#include "db/telescope_rows.h"
#include "db/text_clean.h"

#include <stdio.h>
#include <string.h>

const struct table plan_mark_rows = {
    .name = "plan_mark",
    .cells = PLAN_MARK_CELLS,
    .rev_at = PLAN_MARK_REV,
    .change_at = PLAN_MARK_CHANGE,
    .next = SQL_PLAN_MARK_NEXT,
    .add = SQL_PLAN_MARK_ADD,
    .update = SQL_PLAN_MARK_UPDATE,
    .keep_old = SQL_PLAN_MARK_KEEP_OLD,
};

/* The words that a mark may have: those of the schema. */
static enum status check_state(const char *state, struct err *e)
{
	static const char *const words[] = {"pinned", "started", "done", "partly", "lost"};
	char got[ERR_QUOTE_MAX];
	for (size_t i = 0; i < sizeof words / sizeof words[0]; i++)
		if (strcmp(state, words[i]) == 0)
			return ST_OK;
	err_quote(state, strlen(state), got);
	return err_set(e, ST_SYNTAX,
		       "mark: unknown (got \"%s\", expected pinned, started, done, partly or lost)", got);
}

/* That the plan is listed and some edition of it has the item. */
static enum status check_item(struct store *s, int64_t plan_id, const char *key, struct err *e)
{
	struct row plan;
	char title[PLAN_TITLE_MAX] = "";
	const struct cell keys[] = {cell_int(plan_id), cell_text(key)};
	int64_t n = 0;
	enum status st = row_find(s, SQL_PLAN_BY_ID, cell_int(plan_id), &plan_rows, &plan, e);
	if (st == ST_ABSENT || (st == ST_OK && plan.cell[PLAN_REMOVED].u.i))
		st = err_set(e, ST_ABSENT, "there is no such plan");
	if (st == ST_OK)
		plan_title(plan.cell[PLAN_NIGHT].u.i, plan.cell[PLAN_DRAFT].u.text, title);
	row_free(&plan);
	if (st == ST_OK)
		st = cells_bind(s->stmt[SQL_ITEM_KNOWN], 1, keys, 2, e);
	if (st == ST_OK)
		st = sql_number(s, SQL_ITEM_KNOWN, &n, e);
	if (st == ST_OK && n == 0)
		st = err_set(e, ST_ABSENT, "%s: no edition of it has such an item", title);
	return st;
}

static enum status put_mark(struct store *s, const struct cell keys[2], struct cell *cell, struct err *e)
{
	struct row old;
	bool removed = cell[PLAN_MARK_REMOVED].u.i != 0;
	enum status st = row_find_by(s, SQL_PLAN_MARK_BY_KEY, keys, 2, &plan_mark_rows, &old, e);
	if (st == ST_ABSENT && !removed) {
		int64_t id = 0;
		st = row_next_id(s, &plan_mark_rows, &id, e);
		cell[0] = cell_int(id);
		if (st == ST_OK)
			st = row_add(s, &plan_mark_rows, cell, e);
	} else if (st == ST_OK) {
		if (removed) /* what it said stays with the row that is in no list */
			memcpy(&cell[PLAN_MARK_STATE], &old.cell[PLAN_MARK_STATE],
			       (PLAN_MARK_REMOVED - PLAN_MARK_STATE) * sizeof *cell);
		if (!cells_same(&cell[PLAN_MARK_STATE], &old.cell[PLAN_MARK_STATE],
				PLAN_MARK_REMOVED - PLAN_MARK_STATE + 1))
			st = row_replace(s, &plan_mark_rows, &old, cell, e);
	} else if (st == ST_ABSENT) {
		st = ST_OK;
	}
	row_free(&old);
	return st;
}

enum status plan_mark(struct store *s, int64_t plan_id, const char *key, const char *state, const char *cause,
		      const char *note, const char *marked_utc, struct err *e)
{
	/* cleaned, a text may be longer: an invalid byte becomes three */
	char clean_cause[12 * PLAN_CAUSE_CHARS_MAX + 1], clean_note[12 * NOTE_CHARS_MAX + 1];
	enum status st = plan_key_check(key, e);
	if (st == ST_OK && *state)
		st = check_state(state, e);
	if (st == ST_OK && *state)
		st = plan_utc_check("mark", marked_utc, e);
	if (st == ST_OK)
		st = check_item(s, plan_id, key, e);
	if (st != ST_OK)
		return st;
	(void)text_clean(cause, clean_cause, sizeof clean_cause);
	(void)text_clean(note, clean_note, sizeof clean_note);
	st = text_check("cause", clean_cause, PLAN_CAUSE_CHARS_MAX, e);
	if (st == ST_OK)
		st = text_check("note", clean_note, NOTE_CHARS_MAX, e);
	if (st != ST_OK)
		return st;
	const struct cell keys[] = {cell_int(plan_id), cell_text(key)};
	struct cell cell[ROW_CELLS_MAX] = {
	    [PLAN_MARK_PLAN] = keys[0],
	    [PLAN_MARK_KEY] = keys[1],
	    [PLAN_MARK_STATE] = cell_text(state),
	    [PLAN_MARK_CAUSE] = cell_text(clean_cause),
	    [PLAN_MARK_NOTE] = cell_text(clean_note),
	    [PLAN_MARK_UTC] = cell_text(marked_utc),
	    [PLAN_MARK_REMOVED] = cell_int(!*state),
	};
	return put_mark(s, keys, cell, e);
}
