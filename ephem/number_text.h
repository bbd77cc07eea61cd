/* SPDX-License-Identifier: MIT
 * Numbers as text: an own grammar (sign, digits, point, exponent; nothing else), independent of the locale. */
#ifndef WANE_EPHEM_NUMBER_TEXT_H
#define WANE_EPHEM_NUMBER_TEXT_H

#include "ephem/err.h"
#include "ephem/timescale.h"

#include <stddef.h>

enum { NUMBER_TEXT_MAX = 32, NUMBER_INPUT_MAX = 64 };

/* Reads text[0..n) (blanks around it allowed; U+2212 is a minus). Refuses nan, inf, hex, digit groups, decimal commas, trailing
 * characters, over 64 characters, overflow and underflow to zero; the message names the first bad character.
 * *bad_at (may be NULL) gets its byte offset. */
MUST_USE enum status number_parse(const char *text, size_t n, double *out, size_t *bad_at, struct err *e);
/* The same for a date: whole part and fraction kept apart, so that 12 decimals of a Julian date survive (1e-12 d). */
MUST_USE enum status number_parse_jd2(const char *text, size_t n, struct jd2 *out, size_t *bad_at, struct err *e);
/* Shortest decimal text that reads back as the same double. Not finite: empty text. */
void number_text(double value, char out[NUMBER_TEXT_MAX]);
/* Fixed decimals (0..17), round half away from zero on the decimal value, never "-0.0". Not finite: empty text. */
void number_text_fixed(double value, int decimals, char out[NUMBER_TEXT_MAX]);
/* day + frac with `decimals` (0..12) decimals, exact in the last place, with carry. */
void number_text_jd2(struct jd2 jd, int decimals, char out[NUMBER_TEXT_MAX]);

#endif
