/* SPDX-License-Identifier: MIT */
#include "db/stored_settings.h"

#include "db/telescope_rows.h"
#include "db/text_clean.h"

#include <stdio.h>
#include <string.h>

const struct table setting_rows = {
    .name = "setting",
    .cells = SETTING_CELLS,
    .rev_at = SETTING_REV,
    .change_at = SETTING_CHANGE,
    .next = SQL_SETTING_NEXT,
    .add = SQL_SETTING_ADD,
    .update = SQL_SETTING_UPDATE,
    .keep_old = SQL_SETTING_KEEP_OLD,
};
enum { KEY_CHARS_MAX = 80 };

enum status stored_setting(struct store *s, const char *key, char value[STORED_SETTING_MAX + 1],
			   struct err *e)
{
	struct row row;
	value[0] = '\0';
	enum status st = row_find(s, SQL_SETTING_BY_KEY, cell_text(key), &setting_rows, &row, e);
	if (st == ST_OK && !row.cell[SETTING_REMOVED].u.i)
		snprintf(value, STORED_SETTING_MAX + 1, "%s", row.cell[SETTING_VALUE].u.text);
	row_free(&row);
	return st == ST_ABSENT ? ST_OK : st;
}

static enum status check_setting(const char *key, const char *value, struct err *e)
{
	if (!*key)
		return err_set(e, ST_SYNTAX, "a setting needs a key");
	enum status st = text_check("a setting's key", key, KEY_CHARS_MAX, e);
	if (st == ST_OK)
		st = text_check(key, value, STORED_SETTING_MAX, e);
	if (st == ST_OK && strlen(value) > STORED_SETTING_MAX)
		st = err_set(e, ST_RANGE, "%s: too long (expected at most %d bytes)", key,
			     (int)STORED_SETTING_MAX);
	return st;
}

enum status stored_setting_put(struct store *s, const char *key, const char *value, struct err *e)
{
	struct row old;
	enum status st = check_setting(key, value, e);
	if (st != ST_OK)
		return st;
	st = row_find(s, SQL_SETTING_BY_KEY, cell_text(key), &setting_rows, &old, e);
	bool listed = st == ST_OK && !old.cell[SETTING_REMOVED].u.i;
	struct cell cell[ROW_CELLS_MAX] = {
	    [SETTING_KEY] = cell_text(key),
	    [SETTING_VALUE] = cell_text(value),
	    [SETTING_REMOVED] = cell_int(!*value),
	};
	if (st == ST_ABSENT && *value) {
		int64_t id = 0;
		st = row_next_id(s, &setting_rows, &id, e);
		cell[0] = cell_int(id);
		if (st == ST_OK)
			st = row_add(s, &setting_rows, cell, e);
	} else if (st == ST_OK &&
		   (*value ? !listed || strcmp(old.cell[SETTING_VALUE].u.text, value) != 0 : listed)) {
		if (!*value) /* the value that it had stays with the row that is in no list */
			cell[SETTING_VALUE] = old.cell[SETTING_VALUE];
		st = row_replace(s, &setting_rows, &old, cell, e);
	} else if (st == ST_ABSENT) {
		st = ST_OK;
	}
	row_free(&old);
	return st;
}
