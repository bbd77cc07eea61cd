/* SPDX-License-Identifier: MIT
 * How a screen's width is shared among the columns of the list. */
#ifndef WANE_TUI_PAGES_NIGHT_LAYOUT_H
#define WANE_TUI_PAGES_NIGHT_LAYOUT_H

#include "tui/pages/night_rows.h"

/* Where each column begins, and how wide it is; width 0: not shown. */
struct night_layout {
	int at[ROW_CELLS], width[ROW_CELLS];
};
struct night_layout night_lay_out(int cols, bool forecast);

#endif
