/* SPDX-License-Identifier: MIT
 * Everything that can be checked of a store. SQLite's own checks see the pages; most flipped bits of a value
 * they don't: the checksums of the rows do. */
#include "db/change_rows.h"
#include "db/goal_rows.h"
#include "db/midtime_rows.h"
#include "db/plan_rows.h"
#include "db/schema.h"
#include "db/site_rows.h"
#include "db/target_rows.h"
#include "db/telescope_rows.h"
#include "db/text_clean.h"

#include <stdio.h>
#include <string.h>

struct checking {
	struct store *s;
	void (*say)(void *ctx, const char *line);
	void *ctx;
	int *faults;
};

static void tell(struct checking *c, const char *line)
{
	char clean[512];
	(void)text_clean(line, clean, sizeof clean);
	if (c->say)
		c->say(c->ctx, clean);
}

static void fault(struct checking *c, const char *line)
{
	(*c->faults)++;
	tell(c, line);
}

/* Runs a check whose rows are its findings; the text of the first column goes behind `what`. An answer `ok`
 * is none. */
static enum status findings(struct checking *c, enum sql_id id, const char *what, struct err *e)
{
	bool row = false;
	char line[400];
	enum status st;
	while ((st = sql_step(c->s, id, &row, e)) == ST_OK && row) {
		const char *text = (const char *)sqlite3_column_text(c->s->stmt[id], 0);
		if (text && strcmp(text, "ok") == 0)
			continue;
		snprintf(line, sizeof line, "%s%s", what, text ? text : "?");
		fault(c, line);
	}
	sql_reset(c->s, id);
	return st;
}

/* The tables as the check reads them: how many cells before the checksum; those with doubts name their owner.
 */
static const struct whole_table {
	enum sql_id id;
	const char *name;
	size_t cells;
	int name_at, doubts_at; /* -1 none */
} tables[] = {
    {SQL_ALL_CHANGES, "change_set", CHANGE_CELLS, -1, -1},
    {SQL_TARGET_LOAD, "target", TARGET_CELLS, TARGET_FIELDS, TARGET_DOUBTS},
    {SQL_ALL_TARGETS_OLD, "target_old", TARGET_CELLS + 1, -1, -1},
    {SQL_ALL_EPHEMERIDES, "ephemeris", EPHEMERIS_CELLS, -1, -1},
    {SQL_ALIAS_LOAD, "target_alias", ALIAS_CELLS, -1, -1},
    {SQL_ALL_ALIASES_OLD, "target_alias_old", ALIAS_CELLS + 1, -1, -1},
    {SQL_SITE_LOAD, "site", SITE_CELLS, -1, -1},
    {SQL_ALL_SITES_OLD, "site_old", SITE_CELLS + 1, -1, -1},
    {SQL_ALL_MIDTIMES, "midtime", MIDTIME_CELLS, -1, -1},
    {SQL_ALL_MARKS, "midtime_mark", MARK_CELLS, -1, -1},
    {SQL_ALL_MARKS_OLD, "midtime_mark_old", MARK_CELLS + 1, -1, -1},
    {SQL_ALL_SETTINGS, "setting", SETTING_CELLS, SETTING_KEY, -1},
    {SQL_ALL_SETTINGS_OLD, "setting_old", SETTING_CELLS + 1, -1, -1},
    {SQL_TELESCOPE_LOAD, "telescope", TELESCOPE_CELLS, TELESCOPE_NAME, -1},
    {SQL_ALL_TELESCOPES_OLD, "telescope_old", TELESCOPE_CELLS + 1, -1, -1},
    {SQL_ALLOTMENT_LOAD, "allotment", ALLOTMENT_CELLS, -1, -1},
    {SQL_ALL_ALLOTMENTS_OLD, "allotment_old", ALLOTMENT_CELLS + 1, -1, -1},
    {SQL_ALL_PLANS, "plan", PLAN_CELLS, PLAN_DRAFT, -1},
    {SQL_ALL_PLANS_OLD, "plan_old", PLAN_CELLS + 1, -1, -1},
    {SQL_ALL_EDITIONS, "plan_edition", EDITION_CELLS, -1, -1},
    {SQL_ALL_ITEMS, "plan_item", ITEM_CELLS, -1, -1},
    {SQL_ALL_WINDOWS, "plan_window", WINDOW_CELLS, WINDOW_TARGET, -1},
    {SQL_ALL_PLAN_MARKS, "plan_mark", PLAN_MARK_CELLS, -1, -1},
    {SQL_ALL_PLAN_MARKS_OLD, "plan_mark_old", PLAN_MARK_CELLS + 1, -1, -1},
    {SQL_GOAL_LOAD, "goal", GOAL_CELLS, -1, -1},
    {SQL_ALL_GOALS_OLD, "goal_old", GOAL_CELLS + 1, -1, -1},
    {SQL_FIELD_STAR_LOAD, "field_star", FIELD_STAR_CELLS, FIELD_STAR_NAME, -1},
    {SQL_ALL_FIELD_STARS_OLD, "field_star_old", FIELD_STAR_CELLS + 1, -1, -1},
    {SQL_STORE_INFO, "store_info", 3, -1, -1},
};

static void tell_doubts(struct checking *c, const char *name, uint64_t doubts)
{
	for (int i = 0; i < FIELD_COUNT; i++) {
		char line[400];
		if (!(doubts >> i & 1))
			continue;
		snprintf(line, sizeof line, "doubt: %s: %s can't be true, kept without effect", name,
			 fields[i].name);
		tell(c, line);
	}
}

/* Doubts about a target and its current ephemeris; both come from one row of the load statement. */
static void row_doubts(struct checking *c, const struct cell *cell)
{
	struct cell ephemeris[ROW_CELLS_MAX];
	uint64_t doubts = (uint64_t)cell[TARGET_DOUBTS].u.i;
	if (cell[TARGET_REMOVED].u.i)
		return;
	cells_read(c->s->stmt[SQL_TARGET_LOAD], TARGET_CELLS + 1, ephemeris, EPHEMERIS_CELLS);
	if (ephemeris[EPHEMERIS_DOUBTS].type == CELL_INT)
		doubts |= (uint64_t)ephemeris[EPHEMERIS_DOUBTS].u.i;
	struct target t = target_empty();
	if (ephemeris[EPHEMERIS_DOUBTS].type == CELL_INT)
		fields_from_cells(ephemeris + EPHEMERIS_FIELDS, HOME_EPHEMERIS, &t);
	if (t.period_d < PERIOD_MIN_D) /* stored before this was a doubt */
		doubts |= UINT64_C(1) << FIELD_AT_PERIOD;
	tell_doubts(c, cell[TARGET_FIELDS].u.text, doubts);
}

static enum status check_table(struct checking *c, const struct whole_table *t, struct err *e)
{
	const struct table shape = {.name = t->name, .cells = t->cells};
	struct cell cell[ROW_CELLS_MAX];
	bool row = false;
	char line[200];
	enum status st;
	while ((st = sql_step(c->s, t->id, &row, e)) == ST_OK && row) {
		if (!row_read(c->s, t->id, 0, &shape, cell)) {
			const char *name = t->name_at >= 0 && cell[t->name_at].type == CELL_TEXT
					       ? cell[t->name_at].u.text
					       : "";
			snprintf(line, sizeof line, "damaged: table %s, row %lld%s%.80s: wrong checksum",
				 t->name, (long long)sqlite3_column_int64(c->s->stmt[t->id], 0),
				 *name ? ", " : "", name);
			fault(c, line);
		} else if (t->doubts_at >= 0) {
			row_doubts(c, cell);
		}
	}
	sql_reset(c->s, t->id);
	return st;
}

/* Statements whose rows are findings. */
static const struct {
	enum sql_id id;
	const char *what;
} questions[] = {
    {SQL_INTEGRITY, "damaged: "},
    {SQL_FOREIGN_KEYS, "damaged: a row points nowhere, in table "},
    {SQL_WRONG_POINTERS, "damaged: the current ephemeris belongs to another target: "},
    {SQL_MISSING_MARKS, "damaged: a mid-time without its mark: "},
    {SQL_WRONG_WINDOWS, "damaged: a planned window's ephemeris belongs to another target: "},
    {SQL_MISSING_ITEMS, "damaged: items are missing in edition row "},
    {SQL_MISSING_WINDOWS, "damaged: windows are missing in item row "},
};

enum status store_check(struct store *s, void (*say)(void *ctx, const char *line), void *ctx, int *faults,
			struct err *e)
{
	struct checking c = {s, say, ctx, faults};
	struct err why;
	*faults = 0;
	enum status st = ST_OK;
	for (size_t i = 0; st == ST_OK && i < sizeof questions / sizeof questions[0]; i++)
		st = findings(&c, questions[i].id, questions[i].what, &why);
	for (size_t i = 0; st == ST_OK && i < sizeof tables / sizeof tables[0]; i++)
		st = check_table(&c, &tables[i], &why);
	if (st == ST_OK && schema_compare(s->db, &s->crc, &why) != ST_OK)
		fault(&c, why.text);
	if (st == ST_MEMORY)
		return err_set(e, st, "%s", why.text);
	if (st != ST_OK) /* what can't even be read is a finding, not the end of the program */
		fault(&c, why.text);
	return ST_OK;
}
