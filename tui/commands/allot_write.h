/* SPDX-License-Identifier: MIT
 * Allotted time as text, csv and json. */
#ifndef WANE_TUI_COMMANDS_ALLOT_WRITE_H
#define WANE_TUI_COMMANDS_ALLOT_WRITE_H

#include "tui/commands/table.h"

/* One span resolved in one night of the run's site. Faults are those of plan_span. */
MUST_USE enum status allot_resolve(struct run *r, int32_t evening_mjd, const char *span, struct night *n, double *from_d, double *to_d,
				   struct err *e);
/* `Wed 22 Apr 21:00 MDT (03:00 UTC on 23 Apr) to ...` */
enum { ALLOT_ECHO_BYTES = 2 * PLAN_ECHO_BYTES + 8 };
void allot_echo(const struct run *r, const struct night *n, double from_d, double to_d, char out[ALLOT_ECHO_BYTES]);
/* Those of the run's allotments that `which` points to, in the format asked for. Exit code. */
int allotments_write(struct run *r, const struct allotment *const which[], size_t n);

#endif
