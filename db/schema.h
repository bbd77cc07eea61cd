/* SPDX-License-Identifier: MIT
 * The schema is a list of steps; step k lifts the store from version k to k + 1. A step that was shipped is
 * never edited. */
#ifndef WANE_DB_SCHEMA_H
#define WANE_DB_SCHEMA_H

#include "db/row_crc.h"
#include "ephem/err.h"

#include <sqlite3.h>
#include <stdbool.h>

enum { SCHEMA_VERSION = 2, APPLICATION_ID = 0x77616E65 /* "wane" */ };

/* Runs the steps from `version` on; the caller holds the transaction. Sets application_id and user_version.
 */
MUST_USE enum status schema_apply(sqlite3 *db, int version, struct err *e);
/* ST_STORE when db's tables, triggers and indexes are not, text for text, what the steps make. *e names the
 * first difference. */
MUST_USE enum status schema_compare(sqlite3 *db, const struct crc_table *table, struct err *e);
/* Checksum of those texts; SCHEMA_CRC is that of a fresh store, so that only a store that differs has to be
 * compared text by text. */
MUST_USE enum status schema_crc(sqlite3 *db, const struct crc_table *table, uint32_t *crc, struct err *e);
#define SCHEMA_CRC 0x63FFCD88u

#endif
