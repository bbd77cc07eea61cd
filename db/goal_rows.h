/* SPDX-License-Identifier: MIT
 * How goals and the stars of a field lie in their rows; inside of db/ only. */
#ifndef WANE_DB_GOAL_ROWS_H
#define WANE_DB_GOAL_ROWS_H

#include "db/store_parts.h"

/* Places of the cells. */
enum {
	GOAL_TARGET = 1,
	GOAL_WHOLE,
	GOAL_LIMB,
	GOAL_BAND,
	GOAL_UNTIL, /* NULL none */
	GOAL_NOTE,
	GOAL_SINCE,
	GOAL_REMOVED,
	GOAL_REV,
	GOAL_CHANGE,
	GOAL_CELLS
};
enum {
	FIELD_STAR_TARGET = 1,
	FIELD_STAR_ROLE,
	FIELD_STAR_NAME,
	FIELD_STAR_RA, /* NULL: a distance is given */
	FIELD_STAR_DEC,
	FIELD_STAR_SEP, /* NULL: a position is given */
	FIELD_STAR_MAG,
	FIELD_STAR_BAND,
	FIELD_STAR_NOTE,
	FIELD_STAR_REMOVED,
	FIELD_STAR_REV,
	FIELD_STAR_CHANGE,
	FIELD_STAR_CELLS
};
extern const struct table goal_rows, field_star_rows;

/* ST_ABSENT: no such target is listed. */
MUST_USE enum status target_check(struct store *s, int64_t target_id, struct err *e);
/* The band's name as it is stored; "" stays that. ST_SYNTAX: no band. */
MUST_USE enum status band_check(const char *text, const char **name, struct err *e);
/* How many listed stars of a role the target has, but for star `but`; and whether one of them says the same
 * as cell (NULL: not asked). */
MUST_USE enum status field_stars_count(struct store *s, int64_t target_id, const char *role, int64_t but,
				       const struct cell *cell, int *n, bool *same, struct err *e);
/* How many it may have. */
int field_stars_max(const char *role);

#endif
