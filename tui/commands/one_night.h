/* SPDX-License-Identifier: MIT
 * Commands of one night, `wane NAME [DATE]`. */
#ifndef WANE_TUI_COMMANDS_ONE_NIGHT_H
#define WANE_TUI_COMMANDS_ONE_NIGHT_H

#include "tui/commands/table.h"

/* Opens a run with `needs`, does `work` for the night of o->word[1], or for tonight, and closes it. The exit
 * code: 2, and said, when DATE is none. */
int one_night_run(const struct env *env, const struct options *o, int needs,
		  int (*work)(struct run *r, int32_t evening_mjd));

#endif
