/* SPDX-License-Identifier: MIT
 * The fits to a target's mid-times, written out. */
#ifndef WANE_TUI_SHEETS_FITS_H
#define WANE_TUI_SHEETS_FITS_H

#include "tui/fit_view.h"

#include <stdio.h>

void fits_text(FILE *to, const char *target, const struct fit_view *v);
/* The residuals against the linear fit. False: no memory for a long cell. */
bool fits_csv(FILE *to, const struct fit_view *v);
void fits_json(FILE *to, const char *target, const struct fit_view *v);

#endif
