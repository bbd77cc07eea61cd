/* SPDX-License-Identifier: MIT */
#include "tui/pages/night_layout.h"

#include "tui/pages/night_axis.h"

enum { NAME_MIN_COLUMNS = 8, MARK_COLUMNS = 2 };

/* What is left is given out in this order, each time up to a width. */
static const struct {
	enum row_cell cell;
	int most;
} shares[] = {
    {ROW_LOST, 15},
    {ROW_STRIP, 24},
    {ROW_LOST, 17},
    {ROW_STRIP, 48},
    {ROW_NAME, 16},
    {ROW_LOST, 22},
    {ROW_STRIP, 72},
    {ROW_LOST, 30},
    {ROW_NAME, 24},
    {ROW_STRIP, 110},
    {ROW_LOST, 40},
    {ROW_FLAGS, 60},
    {ROW_STRIP, AXIS_COLS_MAX},
    {ROW_FLAGS, 320},
};

struct night_layout night_lay_out(int cols, bool forecast)
{
	struct night_layout l = {.at = {0}};
	int used = MARK_COLUMNS, at = MARK_COLUMNS;
	for (int c = 0; c < ROW_CELLS; c++)
		if (cols >= row_columns[c].from_columns &&
		    (forecast || !row_cell_of_forecast((enum row_cell)c))) {
			l.width[c] = row_columns[c].width;
			used += l.width[c] + 1;
		}
	int spare = cols - used;
	if (spare < 0) { /* the name gives way, down to what tells targets apart */
		l.width[ROW_NAME] += spare;
		l.width[ROW_NAME] =
		    l.width[ROW_NAME] < NAME_MIN_COLUMNS ? NAME_MIN_COLUMNS : l.width[ROW_NAME];
	}
	for (size_t i = 0; i < sizeof shares / sizeof shares[0]; i++) {
		int *width = &l.width[shares[i].cell], more = shares[i].most - *width;
		more = more > spare ? spare : more;
		if (*width == 0 || more <= 0)
			continue;
		*width += more;
		spare -= more;
	}
	for (int c = 0; c < ROW_CELLS; c++) {
		l.at[c] = at;
		at += l.width[c] > 0 ? l.width[c] + 1 : 0;
	}
	return l;
}
