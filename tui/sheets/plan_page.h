/* SPDX-License-Identifier: MIT
 * What the files of the text sheet share: paragraphs of at most 72 columns. */
#ifndef WANE_TUI_SHEETS_PLAN_PAGE_H
#define WANE_TUI_SHEETS_PLAN_PAGE_H

#include "tui/parts/text_view.h"
#include "tui/sheets/plan_words.h"

enum { PLAN_PAGE_COLUMNS = 72, PLAN_PIECE_BYTES = 1400 };
struct plan_page {
	FILE *to;
	const struct plan_view *v;
	struct text_view *lines; /* room for one paragraph */
};
/* A paragraph, broken between words; lines behind the first are set in by `indent`. Texts from outside have
 * gone through plan_line. */
void page_put(struct plan_page *p, int indent, const char *format, ...) __attribute__((format(printf, 3, 4)));
/* An empty line and a heading. */
void page_heading(struct plan_page *p, const char *text);
/* `    start         Wed 22 Apr 21:50 MDT   Thu 23 Apr 03:50 UTC`, then `more`; t NULL: that alone. */
void page_time(struct plan_page *p, int indent, const char *word, const struct utc *t, const char *more);

void page_strip(struct plan_page *p); /* the night in characters: hours, Sun, Moon, a row an item */
void page_items(struct plan_page *p);
void page_foot(struct plan_page *p); /* blocks, what was left out, what marks mean, provenance, cautions */

#endif
