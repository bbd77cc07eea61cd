/* SPDX-License-Identifier: MIT
 * In a night in which the site's clocks change, the same local time may come twice. Times behind the change
 * carry a mark. */
#ifndef WANE_TUI_PARTS_CLOCK_MARK_H
#define WANE_TUI_PARTS_CLOCK_MARK_H

#include "ephem/night.h"
#include "tui/zone.h"

#include <stdbool.h>

#define CLOCK_MARK "*"

/* Whether the clocks show another zone at the end of the night than at its beginning. zone NULL: false. */
bool clocks_change(const struct night *n, const struct zone *zone);
/* What stands behind the local time of a moment: CLOCK_MARK from the change on, else "". t as it is shown,
 * rounded. */
const char *clock_mark(const struct night *n, const struct zone *zone, struct utc t);

#endif
