/* SPDX-License-Identifier: MIT
 * Telescopes of a site as text, csv and json. */
#ifndef WANE_TUI_COMMANDS_TELESCOPE_WRITE_H
#define WANE_TUI_COMMANDS_TELESCOPE_WRITE_H

#include "tui/commands/table.h"

/* Telescopes of the run's site in the format asked for; list: a line, or an item of an array, each; else one with all its fields. Exit code. */
int telescopes_write(struct run *r, const struct telescope t[], size_t n, bool list);

#endif
