/* SPDX-License-Identifier: MIT
 * Words and times that every format of a plan shares. */
#ifndef WANE_TUI_SHEETS_PLAN_WORDS_H
#define WANE_TUI_SHEETS_PLAN_WORDS_H

#include "ephem/number_text.h"
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
/* `Wed 22 Apr 22:40 MDT (Thu 23 Apr 04:40 UTC)`; without a zone UTC alone. */
enum { SHEET_BOTH_BYTES = 2 * SHEET_TIME_BYTES + 4 };
void sheet_both(const struct plan_view *v, struct utc t, char out[SHEET_BOTH_BYTES]);
/* `2026-04-22T22:40:00-06:00` (RFC 3339), for programs. */
void sheet_stamp(const struct plan_view *v, struct utc t, char out[SHEET_TIME_BYTES]);
/* The moment of the night at which the site's clocks change: false when they do not. */
bool sheet_clock_change(const struct plan_view *v, struct utc *at);
/* What the clocks do then: `02:00 MDT becomes 01:00 MST`; "" nothing. */
void sheet_change_words(const struct plan_view *v, char out[SHEET_BOTH_BYTES]);
/* `-6`, `+5:45`: hours that a local time is ahead of UTC. */
enum { SHEET_OFFSET_BYTES = 16 };
void sheet_offset(int offset_s, char out[SHEET_OFFSET_BYTES]);

/* One line fit to be shown (text_clean), inner runs of blanks one blank, ends trimmed. */
void plan_line(const char *text, char *out, size_t size);
/* Names of an item's targets joined by ` + `. */
enum { PLAN_NAMES_BYTES = 1024 };
void plan_names(const struct plan_item_view *item, char out[PLAN_NAMES_BYTES]);
/* What is planned of an event, for people: `short`, `ingress only`, `egress only`; "" all of it. */
const char *plan_part_words(const char *variant);
/* `whole event`, `both limbs, with a baseline cut down`, `ingress only`, `egress only`. */
const char *plan_variant_sentence(const char *variant);
/* The same as plan_names with these words: `Tern 27 b (short) + Tern 27 c (ingress only)`. */
void plan_names_parts(const struct plan_item_view *item, char out[PLAN_NAMES_BYTES]);
/* A figure with fewer decimals for people; "" none. */
void plan_figure(const struct plan_member_view *m, const char *column, int decimals,
		 char out[NUMBER_TEXT_MAX]);
/* A share as per cent: 100 only where nothing is lost, 0 only where nothing is left; "" none. */
void plan_per_cent(const struct plan_member_view *m, const char *column, char out[NUMBER_TEXT_MAX]);
/* The column's words with blanks: `stale, grazing`, `before: sun, flat: altitude`; "" none. */
void plan_list_words(const struct plan_member_view *m, const char *column, char *out, size_t size);
/* The contacts of a member in order: false when it has no such one. */
enum plan_contact { CONTACT_T1, CONTACT_T2, CONTACT_MID, CONTACT_T3, CONTACT_T4, CONTACT_COUNT };
extern const char *const plan_contact_words[CONTACT_COUNT];
bool plan_contact_at(const struct plan_member_view *m, enum plan_contact contact, struct utc *t);
/* When the mount changes sides while the item runs: false when it does not. */
bool plan_flip_at(const struct plan_view *v, const struct plan_item_view *item, const struct plan_member_view *m,
		  struct utc *t);
/* What to do then. */
extern const char plan_flip_caution[];
/* `120.0 s exposures in R, noise 1.44 ppt a minute, depth S/N 25, timing 33 s`, as it was planned; of one limb
 * alone the last two are those of the whole event, and it says so. "" no forecast. */
void plan_forecast_words(const struct plan_member_view *m, char *out, size_t size);
/* `East dome, 0.5 m, band R`: the aperture as it is stored today, the band of the plan's own figures where they have one;
 * "" a telescope without a name. */
void plan_telescope_words(const struct plan_view *v, char *out, size_t size);
/* Whether only one limb of it is planned. */
bool plan_one_limb(const struct plan_member_view *m);
/* `13:00:32.1 +21:18:00, V 12.2`: what is known of it; "" nothing. */
void plan_star_words(const struct plan_member_view *m, char *out, size_t size);
/* `ephemeris version 2, entered 2026-03-02, BJD_TDB, from SOURCE`. */
void plan_ephemeris_words(const struct plan_member_view *m, char *out, size_t size);

/* `kept plan (draft main, edition 3)`; `draft windy, edition 1, not kept`; `a proposal, not stored`. */
void plan_standing_words(const struct plan_view *v, char *out, size_t size);

#endif
