/* SPDX-License-Identifier: MIT
 * What every observer should be told, one sentence or two each: printed by help, first run, text outputs and
 * sheets, and in the README. */
#ifndef WANE_TUI_CAUTIONS_H
#define WANE_TUI_CAUTIONS_H

#include <stddef.h>

extern const char *const cautions[];
extern const size_t caution_count;

#endif
