/* SPDX-License-Identifier: MIT
 * Checks of the night sheet as a page. */
#ifndef WANE_TESTS_SUPPORT_HTML_CHECK_H
#define WANE_TESTS_SUPPORT_HTML_CHECK_H

#include "tui/sheets/plan_sheet.h"

/* The page as a text, the caller's to free. */
char *html_page_of(const struct plan_view *v, const struct sheet_changes *changes);
/* Fails unless a piece of the page's own text is there, or is not. */
void html_has(const char *text, const char *piece);
void html_has_not(const char *text, const char *piece);
/* The same of a plain text, which stands there escaped. */
void html_tells(const char *page, const char *plain);
int html_count(const char *text, const char *piece);
/* From one piece up to the next other one, the caller's to free. */
char *html_part(const char *text, const char *from, const char *to);
/* Fails unless the page is well formed (tags balanced, attributes quoted, references known), its ids are single and what is pointed to is there, headings go
 * down in order, table headers have a scope, drawings a description, and it has no script, no reference outside and none of the fixture's texts in a tag. */
void html_sound(const char *text);

#endif
