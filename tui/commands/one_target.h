/* SPDX-License-Identifier: MIT
 * Subcommands that work on one stored target. */
#ifndef WANE_TUI_COMMANDS_ONE_TARGET_H
#define WANE_TUI_COMMANDS_ONE_TARGET_H

#include "tui/commands/table.h"

/* Opens a run whose prepared[0] is the stored target of that name and whose store is there. *named is the options of the run and has to live as
 * long as it. Faults as run_open; --radec is one of the command line. */
MUST_USE enum status one_target_open(struct run *r, const struct env *env, struct options *named, const struct options *o,
				     const char *name, int needs, int *code, struct err *e);

#endif
