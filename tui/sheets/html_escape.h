/* SPDX-License-Identifier: MIT
 * Text from outside as the content of an HTML or SVG element. */
#ifndef WANE_TUI_SHEETS_HTML_ESCAPE_H
#define WANE_TUI_SHEETS_HTML_ESCAPE_H

#include <stdbool.h>
#include <stdio.h>

struct html_out {
	FILE *to;
	bool failed; /* memory ran out: what is written is not whole */
};
/* Writes a text cleaned (text_clean) and with & < > " ' as references (WHATWG HTML 13.1.4), so that it can open or close nothing. */
void html_text(struct html_out *h, const char *text);
/* The same, at most this many columns wide: what is cut ends in an ellipsis. columns >= 1. */
void html_text_cut(struct html_out *h, const char *text, int columns);

#endif
