/* SPDX-License-Identifier: MIT
 * Windows, nights, sites and limits for programs: CSV rows and JSON objects from the one column table. */
#ifndef WANE_TUI_SHEETS_WINDOWS_H
#define WANE_TUI_SHEETS_WINDOWS_H

#include "tui/parts/columns.h"
#include "tui/run.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/json.h"

void windows_csv_header(struct csv_out *c);
void window_csv(struct csv_out *c, const struct window *w, const struct night *n);
/* An object with every column, and "usable": [[from, to], ...] in the reserve. */
void window_json(struct json *j, const struct window *w, const struct night *n);
void site_json(struct json *j, const char *key, const struct site *site);
/* The same keys into an open object, and "mask": [[azimuth, altitude], ...], empty without one, and "half": where its nights are halved. */
void stored_site_json(struct json *j, const struct site *site, const char *half);
/* The limits that a target without limits of its own has, kind, min_chance, ut1_utc_s and the points of the site's horizon mask (0: none;
 * site NULL: null, there are several). */
void limits_json(struct json *j, const struct run *r, const struct site *site);
/* "allotted": [[from, to], ...], null where no allotment is stored for the night. */
void night_json(struct json *j, const struct night_view *v, double sun_limit_deg);
/* A time of a night; not finite: null. */
void night_time_json(struct json *j, const char *key, const struct night *n, double t_d);

#endif
