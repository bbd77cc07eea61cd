/* SPDX-License-Identifier: MIT
 * A running order as text for people: a table, or with plain one record a paragraph. */
#ifndef WANE_TUI_SHEETS_ORDER_TEXT_H
#define WANE_TUI_SHEETS_ORDER_TEXT_H

#include "tui/plan_view.h"

#include <stdbool.h>
#include <stdio.h>

/* Night, site, what stands, worth; items and blocks in order of time; what to do when a limb is missed; what moved; what was left out; cautions. */
void order_text(FILE *to, const struct plan_view *v, bool plain);
/* `12.41 of at most 12.41 (optimal)`. */
enum { ORDER_WORTH_BYTES = 128 };
void order_worth_words(const struct plan_view *v, char out[ORDER_WORTH_BYTES]);
/* The line under the table of `wane night`. */
void order_line(FILE *to, const struct plan_view *v);

#endif
