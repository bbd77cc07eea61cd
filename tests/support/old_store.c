/* SPDX-License-Identifier: MIT */
#include "tests/support/old_store.h"

#include "db/read_csv.h"
#include "tests/support/check.h"

#include <sqlite3.h>
#include <stdlib.h>
#include <string.h>

void old_store_make(const char *path)
{
	sqlite3 *db;
	char *data;
	size_t n;
	struct err e = {0};
	if (file_read("tests/data/store_schema_1.sql", &data, &n, &e) != ST_OK)
		check_fail("%s", e.text);
	char *sql = realloc(data, n + 1);
	assert_non_null(sql);
	sql[n] = '\0';
	assert_int_equal(sqlite3_open(path, &db), SQLITE_OK);
	/* made once, read often: nothing here waits for a disk */
	if (sqlite3_exec(db, "PRAGMA synchronous = OFF", NULL, NULL, NULL) != SQLITE_OK ||
	    sqlite3_exec(db, sql, NULL, NULL, NULL) != SQLITE_OK)
		check_fail("%s: %s", path, sqlite3_errmsg(db));
	assert_int_equal(sqlite3_close(db), SQLITE_OK);
	free(sql);
}
