/* SPDX-License-Identifier: MIT
 * Universally unique identifiers by hash (RFC 9562, sec. 5.5, version 5): the same name in the same space
 * gives the same identifier. */
#ifndef WANE_TUI_SHEETS_UUID_H
#define WANE_TUI_SHEETS_UUID_H

#include "tui/sheets/plan_sheet.h"

#include <stdint.h>

enum { UUID_SPACE_BYTES = 16 };
void uuid_by_hash(const uint8_t space[UUID_SPACE_BYTES], const char *name, char out[UUID_BYTES]);

#endif
