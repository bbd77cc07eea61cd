/* SPDX-License-Identifier: MIT
 * Lines of iCalendar (RFC 5545): they end in CR LF, are folded at 75 octets, never inside a character, and
 * texts are escaped. */
#ifndef WANE_TUI_SHEETS_ICS_WRITE_H
#define WANE_TUI_SHEETS_ICS_WRITE_H

#include "ephem/timescale.h"

#include <stdbool.h>
#include <stdio.h>

struct ics {
	FILE *file;
	bool failed; /* no memory for a text: the result is not whole */
};

/* Any text as it may stand in a calendar, on the heap (the caller's; NULL no memory): valid UTF-8, nothing
 * that acts on a terminal, / for a backslash (readers lose what stands behind one), each line trimmed, its
 * inner runs of blanks one blank, no empty lines. */
char *ics_clean(const char *text);
/* NAME:VALUE, the value as it is. name may carry parameters: `TRIGGER;VALUE=DATE-TIME`. */
void ics_value(struct ics *c, const char *name, const char *value);
/* NAME:TEXT, cleaned and escaped. Nothing of the text is left: no line, readers complain of empty ones. */
void ics_text(struct ics *c, const char *name, const char *text);
/* `20260423T034200Z`, whole seconds: the one before, or after with up. Inside a leap second, which few
 * readers know, the second before or after it. */
enum { ICS_TIME_BYTES = 24 };
void ics_time(struct utc t, bool up, char out[ICS_TIME_BYTES]);

#endif
