/* SPDX-License-Identifier: MIT
 * The stars of a target's field, written out. */
#ifndef WANE_TUI_COMMANDS_STAR_H
#define WANE_TUI_COMMANDS_STAR_H

#include "tui/run.h"

/* List, light and field of a target of the run, in the format asked for. Exit code. */
int stars_write(const struct run *r, const struct target *t);

#endif
