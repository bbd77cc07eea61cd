/* SPDX-License-Identifier: MIT
 * The store of the demo: an invented observatory with two telescopes, its list, goals and stars. */
#ifndef WANE_TUI_COMMANDS_DEMO_STORE_H
#define WANE_TUI_COMMANDS_DEMO_STORE_H

#include "db/store.h"

/* Fills an empty store. */
MUST_USE enum status demo_fill(struct store *s, struct err *e);

#endif
