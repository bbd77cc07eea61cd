/* SPDX-License-Identifier: MIT
 * Combining marks: characters that stand on the one before them and take no cell of their own.
 * Source: general categories Mn and Me of the Unicode Character Database 14.0 (variation selectors left out).
 */
#ifndef WANE_DB_COMBINING_H
#define WANE_DB_COMBINING_H

#include <stdbool.h>
#include <stdint.h>

bool codepoint_combines(uint32_t cp);

#endif
