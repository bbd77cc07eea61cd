/* SPDX-License-Identifier: MIT
 * How many columns a text takes on a terminal. */
#ifndef WANE_TUI_PARTS_TEXT_WIDTH_H
#define WANE_TUI_PARTS_TEXT_WIDTH_H

#include <stdint.h>

/* Columns of a character: 0 combining, 1, 2 East Asian wide and pictographs (Unicode 15 EastAsianWidth W and F). */
int codepoint_width(uint32_t cp);
/* Columns of a text as grid_put would use them in an endless row. */
int text_columns(const char *text);

#endif
