/* SPDX-License-Identifier: MIT
 * Stored targets written out. */
#ifndef WANE_TUI_COMMANDS_TARGET_WRITE_H
#define WANE_TUI_COMMANDS_TARGET_WRITE_H

#include "tui/commands/table.h"

#include "ephem/number_text.h"

/* Targets [first, first + n) of an open run, in the format asked for, to where --out says: as a list, or one in full. Exit code. */
int targets_write(struct run *r, size_t first, size_t n, bool list);

#endif
