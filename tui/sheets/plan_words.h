/* SPDX-License-Identifier: MIT
 * Words and times that every format of a plan shares. */
#ifndef WANE_TUI_SHEETS_PLAN_WORDS_H
#define WANE_TUI_SHEETS_PLAN_WORDS_H

#include "tui/sheets/plan_sheet.h"

/* `block`, `standing`, `lost`, `poor`, by enum plan_block_kind. */
extern const char *const plan_block_words[];
/* `transit`, `occultation`. */
const char *plan_kind_word(enum event_kind kind);
/* Why an item of the plan is in no sheet. */
extern const char plan_sun_up_reason[];

/* Mon .. Sun and Jan .. Dec: `Wed 22 Apr`. */
enum { SHEET_DATE_BYTES = 32 };
void sheet_date(int32_t mjd, bool with_year, char out[SHEET_DATE_BYTES]);
/* `Wed 22 Apr 22:40 MDT`; zone NULL: UTC. To the minute, rounded. */
void sheet_instant(const struct plan_view *v, const struct zone *zone, struct utc t,
		   char out[SHEET_TIME_BYTES]);
/* `2026-04-22T22:40:00-06:00` (RFC 3339), for programs. */
void sheet_stamp(const struct plan_view *v, struct utc t, char out[SHEET_TIME_BYTES]);
/* The moment of the night at which the site's clocks change: false when they do not. */
bool sheet_clock_change(const struct plan_view *v, struct utc *at);
/* `-6`, `+5:45`: hours that a local time is ahead of UTC. */
enum { SHEET_OFFSET_BYTES = 16 };
void sheet_offset(int offset_s, char out[SHEET_OFFSET_BYTES]);

/* One line fit to be shown (text_clean), inner runs of blanks one blank, ends trimmed. */
void plan_line(const char *text, char *out, size_t size);
/* Names of an item's targets joined by ` + `. */
enum { PLAN_NAMES_BYTES = 1024 };
void plan_names(const struct plan_item_view *item, char out[PLAN_NAMES_BYTES]);
/* `kept plan, draft main, edition 3`; `draft windy, edition 1`; `a proposal, not stored`. */
void plan_standing_words(const struct plan_view *v, char *out, size_t size);

#endif
