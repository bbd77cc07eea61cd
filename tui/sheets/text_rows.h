/* SPDX-License-Identifier: MIT
 * One window as a line of the table, or as a paragraph. */
#ifndef WANE_TUI_SHEETS_TEXT_ROWS_H
#define WANE_TUI_SHEETS_TEXT_ROWS_H

#include "tui/sheets/text.h"

/* The letter that stands for a flag in the table. */
char text_mark(int flag);
void text_row(const struct text_sheet *t, const struct window *w, const struct night *n,
	      const struct zone *zone);
void text_record(const struct text_sheet *t, const struct window *w, const struct night *n,
		 const struct zone *zone);
/* What the columns of a forecast mean. */
void text_forecast_notes(const struct text_sheet *t);

#endif
