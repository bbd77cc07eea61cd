/* SPDX-License-Identifier: MIT
 * The parts of the night sheet as a page (plan_sheet_html). */
#ifndef WANE_TUI_SHEETS_PLAN_HTML_PARTS_H
#define WANE_TUI_SHEETS_PLAN_HTML_PARTS_H

#include "tui/plan_view.h"
#include "tui/sheets/html_escape.h"

struct html_page {
	struct html_out out;
	const struct plan_view *v;
};
/* The page's style, light and dark, screen and A4, in pieces; NULL behind the last. */
extern const char *const plan_html_css[];

/* A card for each item that is to be done, and the list of those that are not, because the Sun is up. */
void plan_html_cards(struct html_page *p);
void plan_html_refused(struct html_page *p);
void plan_html_blocks(struct html_page *p);
void plan_html_left(struct html_page *p);
/* Where the plan and each ephemeris come from, and the cautions. */
void plan_html_foot(struct html_page *p);

/* --- for all of them --- */
/* A local time and the same in UTC, each with its date where it is not the evening's, or not the local one.
 */
void html_local(struct html_page *p, struct utc t);
void html_utc(struct html_page *p, struct utc t);
/* `too early`, `too late`: a contact that the item does not hold; "" it does. */
const char *html_outside(const struct html_page *p, const struct plan_item_view *item, struct utc t);
/* Names of an item's targets, joined. */
void html_item_name(struct html_page *p, const struct plan_item_view *item);

#endif
