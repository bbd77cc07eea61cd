/* SPDX-License-Identifier: MIT
 * Stored targets written out. */
#ifndef WANE_TUI_COMMANDS_TARGET_WRITE_H
#define WANE_TUI_COMMANDS_TARGET_WRITE_H

#include "tui/commands/table.h"

#include "ephem/number_text.h"

/* Targets chosen[0..n) of an open run (NULL: the first n), in the format asked for, to where --out says: as a list, or one in full. Exit code. */
int targets_write(struct run *r, const size_t chosen[], size_t n, bool list);

#endif
