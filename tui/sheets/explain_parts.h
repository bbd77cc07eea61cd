/* SPDX-License-Identifier: MIT
 * Between the files of the explanation (explain.h). */
#ifndef WANE_TUI_SHEETS_EXPLAIN_PARTS_H
#define WANE_TUI_SHEETS_EXPLAIN_PARTS_H

#include "tui/sheets/explain.h"

/* `3. Exposure` and a sentence with the formula and its source. */
void explain_step(const struct explained *e, FILE *to, const char *title, const char *sentence);
/* One number: not finite prints as `-`. */
void explain_number(const struct explained *e, FILE *to, const char *name, double value, int decimals, const char *unit, const char *what);
void explain_words(const struct explained *e, FILE *to, const char *name, const char *words, const char *what);

/* --- explain_worth.c: cases, information, worth, moments --- */
void explain_cases(const struct explained *e, FILE *to);
void explain_information(const struct explained *e, FILE *to);
void explain_worth(const struct explained *e, FILE *to);
void explain_moments(const struct explained *e, FILE *to);

#endif
