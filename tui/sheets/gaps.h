/* SPDX-License-Identifier: MIT
 * Two ephemerides of one target laid against each other, written out. */
#ifndef WANE_TUI_SHEETS_GAPS_H
#define WANE_TUI_SHEETS_GAPS_H

#include "tui/versions.h"

#include <stdio.h>

void gap_text(FILE *to, const struct prepared *p, const struct gap_table *g);
void gap_csv(FILE *to, const struct run *r, const struct gap_table *g);
void gap_json(FILE *to, const struct run *r, const struct prepared *p, const struct gap_table *g);

#endif
