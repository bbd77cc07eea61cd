/* SPDX-License-Identifier: MIT
 * Lines of text, wrapped to a width when they are added, that can be scrolled: help, first run, limits,
 * details. */
#ifndef WANE_TUI_PARTS_TEXT_VIEW_H
#define WANE_TUI_PARTS_TEXT_VIEW_H

#include "tui/parts/grid.h"

#include <stddef.h>

enum { TEXT_LINES_MAX = 240, TEXT_LINE_BYTES = 480 };
struct text_line {
	char text[TEXT_LINE_BYTES];
	enum role role;
};
struct text_view {
	struct text_line line[TEXT_LINES_MAX];
	int n, top, width;
};
/* Empties it for lines of at most `width` columns (8 at least). */
void text_view_start(struct text_view *v, int width);
/* Adds a paragraph, broken between words; what follows the first line is set in by `indent`. Beyond
 * TEXT_LINES_MAX nothing is added. */
void text_view_add(struct text_view *v, enum role role, int indent, const char *text);
void text_view_addf(struct text_view *v, enum role role, int indent, const char *format, ...)
    __attribute__((format(printf, 4, 5)));
/* Scrolls by lines, kept within the text; rows: how many are shown. */
void text_view_scroll(struct text_view *v, int by, int rows);
/* Draws rows [row, row + rows) of the grid from the top line on; marks where there is more. */
void text_view_draw(const struct text_view *v, struct grid *g, int row, int rows);

#endif
