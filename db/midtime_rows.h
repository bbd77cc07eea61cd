/* SPDX-License-Identifier: MIT
 * How mid-times and their marks lie in their rows; inside of db/ only. A mid-time is never changed: its mark,
 * a row of the same id, says whether it counts and whether it is listed, and keeps its old rows. */
#ifndef WANE_DB_MIDTIME_ROWS_H
#define WANE_DB_MIDTIME_ROWS_H

#include "db/midtimes.h"
#include "db/store_parts.h"

/* Places of the cells. */
enum {
	MIDTIME_TARGET = 1,
	MIDTIME_EPOCH,
	MIDTIME_KIND,
	MIDTIME_DAY,
	MIDTIME_FRAC,
	MIDTIME_TEXT,
	MIDTIME_SCALE,
	MIDTIME_ERR,
	MIDTIME_SOURCE,
	MIDTIME_ENTERED,
	MIDTIME_REV,
	MIDTIME_CHANGE,
	MIDTIME_CELLS
};
enum { MARK_USED = 1, MARK_REMOVED, MARK_REV, MARK_CHANGE, MARK_CELLS };

extern const struct table midtime_rows, mark_rows;

enum { MIDTIME_EPOCH_MAX = 2000000000, MIDTIME_TEXT_MAX = 64, MIDTIME_SOURCE_MAX = 255 };
#define MIDTIME_ERR_MAX_D 100.0

/* Of a row as it comes in, which part is wrong. */
enum midtime_part { MIDTIME_PART_MID, MIDTIME_PART_ERR, MIDTIME_PART_EPOCH };
/* Ranges; standard has to be that of its scale. ST_RANGE: *part, and *e says why and what would be right. */
MUST_USE enum status midtime_check(const struct midtime_row *row, enum midtime_part *part, struct err *e);
/* Says as a warning each row of a table that an earlier one equals. */
MUST_USE enum status midtime_say_twice(const struct midtime_table *t,
				       void (*say)(void *ctx, const struct import_message *m), void *ctx,
				       struct err *e);
const char *event_kind_word(enum event_kind kind);

#endif
