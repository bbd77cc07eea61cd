/* SPDX-License-Identifier: MIT
 * The schema is a list of steps; step k lifts the store from version k to k + 1. A step that was shipped is
 * never edited. */
#ifndef WANE_DB_SCHEMA_H
#define WANE_DB_SCHEMA_H

#include "ephem/err.h"

#include <sqlite3.h>
#include <stdbool.h>

enum { SCHEMA_VERSION = 1, APPLICATION_ID = 0x77616E65 /* "wane" */ };

/* Runs the steps from `version` on; the caller holds the transaction. Sets application_id and user_version.
 */
MUST_USE enum status schema_apply(sqlite3 *db, int version, struct err *e);
/* ST_STORE when db's tables, triggers and indexes are not, text for text, what the steps make. *e names the
 * first difference. */
MUST_USE enum status schema_compare(sqlite3 *db, struct err *e);

#endif
