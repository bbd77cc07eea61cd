/* SPDX-License-Identifier: MIT
 * Subcommands that work on one stored target. */
#ifndef WANE_TUI_COMMANDS_ONE_TARGET_H
#define WANE_TUI_COMMANDS_ONE_TARGET_H

#include "tui/commands/table.h"

/* Opens a run whose prepared[0] is the stored target of that name and whose store is there. *named is the options of the run and has to live as
 * long as it. Faults as run_open; --radec is one of the command line. */
MUST_USE enum status one_target_open(struct run *r, const struct env *env, struct options *named, const struct options *o,
				     const char *name, int needs, int *code, struct err *e);
/* A stored target by its name, of an open run; NULL, and said, when there is none. */
const struct target *target_named(const struct run *r, const char *name);
/* False, and said, when --target or --radec are given to a command that names its target as an argument. */
bool target_as_argument(const struct options *o, const char *command);
/* A whole number of an argument; false, and said. */
bool whole_argument(const char *word, const char *text, long min, long max, long *out);
/* Text of an option that will be stored; false, and said. NULL is fine. */
bool text_argument(const char *option, const char *text, size_t chars_max);

#endif
