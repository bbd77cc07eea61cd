/* SPDX-License-Identifier: MIT
 * The result of a command: opened in the format that is asked for, written whole or not at all. */
#ifndef WANE_TUI_COMMANDS_RESULT_H
#define WANE_TUI_COMMANDS_RESULT_H

#include "tui/commands/table.h"
#include "tui/sheets/out.h"

/* EXIT_DONE: *format is one of `formats` and *out open, for result_commit or out_abandon. Else said, and the
 * exit code. */
int result_open(const struct run *r, int formats, enum format *format, struct out *out);
/* whole false: there was no memory for a cell, and nothing of it is left. The exit code; said unless
 * EXIT_DONE. */
int result_commit(struct out *out, bool whole);

#endif
