/* SPDX-License-Identifier: MIT
 * The one star that sky and clock are asked about. */
#ifndef WANE_TUI_COMMANDS_DIRECTION_H
#define WANE_TUI_COMMANDS_DIRECTION_H

#include "tui/run.h"

/* The target named by the word (NULL: by --target), or the one of --radec; *out NULL when none is named at all. ST_ABSENT: no such target;
 * ST_SYNTAX: more than one is named (exit 2). */
MUST_USE enum status direction_of(const struct run *r, const char *word, const struct target **out, size_t *index, struct err *e);

#endif
