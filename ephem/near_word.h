/* SPDX-License-Identifier: MIT
 * Which known word a mistyped one may stand for: options, subcommands, keys, columns. */
#ifndef WANE_EPHEM_NEAR_WORD_H
#define WANE_EPHEM_NEAR_WORD_H

#include <stddef.h>

/* The word of list[n] that is nearest to a mistyped one, by edits and swaps of neighbours; NULL when none is
 * near. */
const char *nearest_word(const char *word, const char *const list[], size_t n);

#endif
