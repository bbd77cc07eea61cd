/* SPDX-License-Identifier: MIT
 * How plans lie in their rows; inside of db/ only. The row of a plan says which edition holds; editions,
 * their items and the items' windows are only ever added. Marks are rows of their own, by plan and key of the
 * item.
 */
#ifndef WANE_DB_PLAN_ROWS_H
#define WANE_DB_PLAN_ROWS_H

#include "db/plans.h"
#include "db/store_parts.h"

/* Places of the cells. */
enum {
	PLAN_SITE = 1,
	PLAN_TELESCOPE, /* NULL none */
	PLAN_NIGHT,
	PLAN_DRAFT,
	PLAN_KEY,
	PLAN_KEPT,
	PLAN_EDITION,
	PLAN_REMOVED,
	PLAN_REV,
	PLAN_CHANGE,
	PLAN_CELLS
};
enum {
	EDITION_PLAN = 1,
	EDITION_NUMBER,
	EDITION_LIMITS,
	EDITION_LEAP,
	EDITION_WORTH,
	EDITION_BOUND,
	EDITION_OPTIMAL,
	EDITION_CHOICES,
	EDITION_LEFT_OUT,
	EDITION_ITEMS, /* how many */
	EDITION_REV,
	EDITION_CHANGE,
	EDITION_CELLS
};
enum {
	ITEM_EDITION = 1,
	ITEM_PLACE, /* from 1 */
	ITEM_KEY,
	ITEM_SLEW_BY,
	ITEM_START,
	ITEM_LATEST_START,
	ITEM_END,
	ITEM_WORTH,
	ITEM_WINDOWS, /* how many */
	ITEM_REV,
	ITEM_CHANGE,
	ITEM_CELLS
};
enum {
	WINDOW_ITEM = 1,
	WINDOW_PLACE, /* from 1 */
	WINDOW_TARGET_ID,
	WINDOW_EPHEMERIS_ID,
	WINDOW_TARGET,
	WINDOW_KIND,
	WINDOW_EPOCH,
	WINDOW_VARIANT,
	WINDOW_WORTH,
	WINDOW_FIGURES,
	WINDOW_REV,
	WINDOW_CHANGE,
	WINDOW_CELLS
};
enum {
	PLAN_MARK_PLAN = 1,
	PLAN_MARK_KEY,
	PLAN_MARK_STATE,
	PLAN_MARK_CAUSE,
	PLAN_MARK_NOTE,
	PLAN_MARK_UTC,
	PLAN_MARK_REMOVED,
	PLAN_MARK_REV,
	PLAN_MARK_CHANGE,
	PLAN_MARK_CELLS
};

extern const struct table plan_rows, edition_rows, item_rows, window_rows, plan_mark_rows;

/* As the schema has them. */
enum {
	PLAN_ITEMS_MAX = 1000,
	PLAN_WINDOWS_MAX = 64,
	PLAN_KEY_CHARS_MAX = 1000,
	PLAN_DRAFT_CHARS_MAX = 40,
	PLAN_LINE_CHARS_MAX = 20000, /* limits, figures */
	PLAN_CHOICES_CHARS_MAX = 100000,
	PLAN_LEFT_CHARS_MAX = 1000000,
	PLAN_CAUSE_CHARS_MAX = 80
};
#define PLAN_WORTH_MAX 1e12

/* `plan of 2026-04-22, draft main` */
enum { PLAN_TITLE_MAX = 128 };
void plan_title(int64_t night_mjd, const char *draft, char out[PLAN_TITLE_MAX]);

/* --- plan_check.c: what may be stored --- */
/* All of a plan but what it refers to. ST_RANGE, ST_SYNTAX. */
MUST_USE enum status plan_check(const struct plan_row *p, struct err *e);
MUST_USE enum status plan_key_check(const char *key, struct err *e);
/* `YYYY-MM-DDTHH:MM:SSZ` */
MUST_USE enum status plan_utc_check(const char *what, const char *text, struct err *e);
/* A copy fit for a terminal and a file, tabs and newlines kept: hostile characters dropped, invalid bytes
 * U+FFFD. The caller's to free; NULL: no memory. */
char *plan_lines_clean(const char *text);

#endif
