/* SPDX-License-Identifier: MIT
 * What the steps of the schema share; for schema*.c only. Shipped with version 1: never edited. */
#ifndef WANE_DB_SCHEMA_PARTS_H
#define WANE_DB_SCHEMA_PARTS_H

#define REV_BODY                                                                                             \
	"rev INTEGER NOT NULL CHECK(rev BETWEEN 1 AND 1000000000),"                                          \
	"change_id INTEGER NOT NULL REFERENCES change_set(id),"
#define REMOVED_BODY "removed INTEGER NOT NULL CHECK(removed IN (0, 1)),"
#define CRC_BODY "row_crc INTEGER NOT NULL CHECK(row_crc BETWEEN 0 AND 4294967295)"
#define OLD_TAIL                                                                                             \
	"replaced_by INTEGER NOT NULL REFERENCES change_set(id)," CRC_BODY                                   \
	", PRIMARY KEY(id, rev)) STRICT, WITHOUT ROWID;"

/* From version 1 to 2: telescopes, allotted time, plans, goals, stars of a field. NULL ends it. */
extern const char *const schema_step_2[];

#endif
