/* SPDX-License-Identifier: MIT
 * One line of typed text with a cursor; keys as in a shell: ^A ^E ^B ^F ^D ^U ^K ^W, arrows, Home, End,
 * Delete, Backspace. */
#ifndef WANE_TUI_PARTS_LINE_EDIT_H
#define WANE_TUI_PARTS_LINE_EDIT_H

#include "tui/parts/grid.h"

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

enum { LINE_CHARS_MAX = 64 };
struct line_edit {
	uint32_t cp[LINE_CHARS_MAX];
	int n, at;    /* characters, and the one before which the cursor stands */
	bool offered; /* the first character that is typed takes the place of the whole text */
};
void line_set(struct line_edit *line, const char *text);
/* The same with a text that is only offered: shown as selected until a key edits it; typing replaces it. */
void line_offer(struct line_edit *line, const char *text);
/* True when the key belongs to the editor (hostile characters are taken and dropped). Enter, Esc and unknown
 * special keys do not. */
bool line_key(struct line_edit *line, uint32_t code);
/* UTF-8 of the text. */
void line_text(const struct line_edit *line, char *out, size_t n);
/* Draws it into `width` columns and puts the cursor there; a long text slides. */
void line_draw(const struct line_edit *line, struct grid *g, int row, int col, int width);

#endif
