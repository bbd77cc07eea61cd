/* SPDX-License-Identifier: MIT
 * How telescopes, allotted time and settings lie in their rows; inside of db/ only. */
#ifndef WANE_DB_TELESCOPE_ROWS_H
#define WANE_DB_TELESCOPE_ROWS_H

#include "db/store_parts.h"

#include <stdbool.h>

/* Places of the cells; those of the fields follow the table of fields. */
enum {
	TELESCOPE_SITE = 1,
	TELESCOPE_NAME,
	TELESCOPE_KEY,
	TELESCOPE_FIELDS,
	TELESCOPE_FIELD_COUNT = 28,
	TELESCOPE_REMOVED = TELESCOPE_FIELDS + TELESCOPE_FIELD_COUNT,
	TELESCOPE_REV,
	TELESCOPE_CHANGE,
	TELESCOPE_CELLS
};
enum {
	ALLOTMENT_SITE = 1,
	ALLOTMENT_TELESCOPE, /* NULL none */
	ALLOTMENT_FIRST,
	ALLOTMENT_LAST,
	ALLOTMENT_SPAN,
	ALLOTMENT_NOTE,
	ALLOTMENT_REMOVED,
	ALLOTMENT_REV,
	ALLOTMENT_CHANGE,
	ALLOTMENT_CELLS
};
enum { SETTING_KEY = 1, SETTING_VALUE, SETTING_REMOVED, SETTING_REV, SETTING_CHANGE, SETTING_CELLS };

extern const struct table telescope_rows, allotment_rows, setting_rows;

/* Nights of 1900 to 2100, as the schema has them. */
enum { NIGHT_MJD_MIN = 15020, NIGHT_MJD_MAX = 88433, NIGHT_TEXT_MAX = 16, NOTE_CHARS_MAX = 255 };
/* `2026-04-22` */
void night_date_text(int64_t mjd, char out[NIGHT_TEXT_MAX]);

/* An id that may be none: 0 and NULL. */
struct cell cell_id(int64_t id);
int64_t id_of_cell(const struct cell *c);
/* ST_ABSENT: the site is not listed; telescope_id (0 none) is none of its listed telescopes. */
MUST_USE enum status place_check(struct store *s, int64_t site_id, int64_t telescope_id, struct err *e);

#endif
