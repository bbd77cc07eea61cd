/* SPDX-License-Identifier: MIT
 * Stored mid-times written out. */
#ifndef WANE_TUI_COMMANDS_MIDTIME_H
#define WANE_TUI_COMMANDS_MIDTIME_H

#include "tui/commands/table.h"
#include "tui/midtime_count.h"

/* Those of the run's first prepared target, in the format asked for, to where --out says. Exit code. CSV is a mid-time table: what is
 * written can be imported. */
int midtimes_write(struct run *r);

#endif
