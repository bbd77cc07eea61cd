/* SPDX-License-Identifier: MIT
 * The night sheet: a running order for the team, in each of its formats. All of them show what the view holds
 * and compute nothing about the plan. */
#ifndef WANE_TUI_SHEETS_PLAN_SHEET_H
#define WANE_TUI_SHEETS_PLAN_SHEET_H

#include "tui/plan_view.h"
#include "tui/sheets/json.h"

#include <stdio.h>

/* changes: lines of plan_changes, NULL without --since. Each returns false when memory ran out: the result is
 * not whole. */
struct sheet_changes {
	const char *since; /* what it is compared with, in words; NULL none */
	char *const *line;
	size_t n;
};
bool plan_sheet_text(FILE *to, const struct plan_view *v,
		     const struct sheet_changes *changes); /* 72 columns */
bool plan_sheet_csv(FILE *to, const struct plan_view *v);  /* a row an event */
bool plan_sheet_ics(FILE *to, const struct plan_view *v);
bool plan_sheet_html(FILE *to, const struct plan_view *v, const struct sheet_changes *changes);
/* The object of `wane plan --format json` (contract), the sheet's json too. */
bool plan_json(FILE *to, const struct plan_view *v, const struct sheet_changes *changes);
/* The items as an array under a key, for `wane night --format json`. */
void plan_items_json(struct json *j, const char *key, const struct plan_view *v);
/* UUID of an item (RFC 9562, version 5) from the store's id and the item's key: 36 characters. */
enum { UUID_BYTES = 37 };
void plan_item_uuid(const char *store_id, const char *key, char out[UUID_BYTES]);
/* Times of an item for every format: `Wed 22 Apr 2026`, `22:40 MDT`, and in UTC `04:40 (Thu 23 Apr)`. */
enum { SHEET_TIME_BYTES = 64 };
void sheet_local(const struct plan_view *v, struct utc t, bool with_date, char out[SHEET_TIME_BYTES]);
void sheet_utc(const struct plan_view *v, struct utc t, bool with_date, char out[SHEET_TIME_BYTES]);

#endif
