/* SPDX-License-Identifier: MIT
 * Nights and windows as text for people: a table, or with plain one record a paragraph. */
#ifndef WANE_TUI_SHEETS_TEXT_H
#define WANE_TUI_SHEETS_TEXT_H

#include "tui/run.h"

#include <stdbool.h>
#include <stdio.h>

struct text_sheet {
	FILE *to;
	const struct run *run;
	bool plain, season; /* season: rows carry night and site */
	bool forecast;      /* of one night with a telescope to forecast with: rows carry worth and S/N */
	int name_width;     /* columns of the names, set by text_begin */
	int site_width;     /* and of the sites, in a season */
	long rows, hidden, without_chance;
	long flagged[FLAG_COUNT]; /* rows that carry each flag */
};

enum { TEXT_NAME_WIDTH_MAX = 24 };
/* The targets whose period is too short to be counted: how many of the run's, and a sentence; 0 and "" none. */
long uncounted_text(const struct run *r, char *out, size_t n);
void text_begin(struct text_sheet *t, FILE *to, const struct run *r, bool season);
/* Site, both dates, Sun, Moon (in the site's local time and UTC) and limits. */
void text_head(const struct text_sheet *t, const struct site *site, const struct zone *zone, const struct night_view *v);
/* `Tern Hill (38.6200 N, 109.3600 W, 2100 m), America/Denver` on a line. */
void text_site(const struct text_sheet *t, const struct site *site, const struct zone *zone);
/* The limits of the run as one sentence. */
void text_limits(const struct text_sheet *t);
/* Heading of the table, unless plain. zone_name: in which zone the times are. */
void text_heading(const struct text_sheet *t, const char *zone_name);
/* The windows with a chance (false) or those without (true). */
void text_rows(struct text_sheet *t, const struct night_view *v, const struct zone *zone, bool without_chance);
/* What is hidden and how to see it, what the marks mean, the leap table's age, the cautions. last_mjd: the last night shown. */
void text_foot(const struct text_sheet *t, int32_t last_mjd);
/* The cautions alone. */
void text_cautions(FILE *to);

/* `20:57`, on a night of a clock change `01:30*` from the change on; or with the zone `20:57 MDT`; not finite: `--:--`, or `does not happen` with the zone. */
enum { CLOCK_BYTES = 48 };
void text_clock(const struct night *n, const struct zone *zone, double t_d, bool with_zone, char out[CLOCK_BYTES]);
/* Text cleaned and cut to a number of columns, padded to it with blanks where pad. */
void text_cell(FILE *to, const char *text, int columns, bool pad);

#endif
