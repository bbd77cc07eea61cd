/* SPDX-License-Identifier: MIT
 * The orders in which the windows of a night can stand. */
#ifndef WANE_TUI_PAGES_NIGHT_SORT_H
#define WANE_TUI_PAGES_NIGHT_SORT_H

#include "tui/pages/night_rows.h"

struct sort_rule {
	char key;	  /* that chooses it */
	const char *word; /* `be-on time` */
	const char *short_word;
	const char *column; /* of the column table; NULL: the name, or the magnitude */
	bool greatest_first;
};
enum {
	SORT_ON,
	SORT_RESERVE,
	SORT_MID,
	SORT_NAME,
	SORT_ERROR,
	SORT_DONE,
	SORT_COVER,
	SORT_ALT,
	SORT_AIRMASS,
	SORT_MOON,
	SORT_DEPTH,
	SORT_MAG,
	SORT_ORDER,
	SORT_WORTH,
	SORT_SNR,
	SORT_TIMING,
	SORT_COUNT
};
extern const struct sort_rule sort_rules[SORT_COUNT];
/* Rule of a key, -1 none. */
int sort_find(uint32_t key);

/* A window's figure in a column of the table that is a plain number or a time of the night; NAN: unknown, or
 * the column is another. */
double row_figure(const struct night_row *row, const char *column);

/* Sorts all rows; shown[total] (NULL: all) tells which stay, and is in the order of the rows before. What is
 * unknown stands last, either way round; in the order of SORT_ON what can't be observed stands behind the
 * rest, and what has no chance last. Equals: by reserve, name, epoch. ST_MEMORY: unchanged. */
MUST_USE enum status night_rows_arrange(struct night_rows *rows, int rule, bool turned, const bool shown[],
					struct err *e);

#endif
