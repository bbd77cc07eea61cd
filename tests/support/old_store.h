/* SPDX-License-Identifier: MIT
 * A store of schema version 1, from tests/data/store_schema_1.sql. */
#ifndef WANE_TESTS_SUPPORT_OLD_STORE_H
#define WANE_TESTS_SUPPORT_OLD_STORE_H

/* Digest of its lists, as the program of then said it. */
#define OLD_STORE_DIGEST "aec5a61fdd34a05f4f8934ce735239ff"
/* A new file. */
void old_store_make(const char *path);

#endif
