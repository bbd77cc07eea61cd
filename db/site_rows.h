/* SPDX-License-Identifier: MIT
 * How sites lie in their rows; inside of db/ only. */
#ifndef WANE_DB_SITE_ROWS_H
#define WANE_DB_SITE_ROWS_H

#include "db/store_parts.h"

/* Places of the cells. */
enum {
	SITE_NAME = 1,
	SITE_KEY,
	SITE_LAT,
	SITE_LON,
	SITE_HEIGHT,
	SITE_ZONE,
	SITE_MASK,
	SITE_REMOVED,
	SITE_REV,
	SITE_CHANGE,
	SITE_CELLS
};

extern const struct table site_table;

#endif
