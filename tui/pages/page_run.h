/* SPDX-License-Identifier: MIT
 * The interface: a loop that draws, reads keys, ticks with the clock, and loads nights. */
#ifndef WANE_TUI_PAGES_PAGE_RUN_H
#define WANE_TUI_PAGES_PAGE_RUN_H

#include "tui/run.h"

/* Shows a night until the user leaves. Exit status 0; 1 with *e when there is no usable terminal, no memory,
 * or the night can't be computed at all. Without a site or targets it says what to do first. */
int page_run(struct run *r, int32_t evening_mjd, struct err *e);

#endif
