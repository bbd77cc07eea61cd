/* SPDX-License-Identifier: MIT
 * Every SQL statement of a running store, by number; prepared when it opens, finalised when it closes. The
 * schema is in schema.c. */
#ifndef WANE_DB_SQL_H
#define WANE_DB_SQL_H

enum sql_id {
	SQL_BEGIN,
	SQL_COMMIT,
	SQL_ROLLBACK,
	SQL_STORE_INFO,
	SQL_DATA_VERSION,
	SQL_CHANGE_NEXT,
	SQL_CHANGE_ADD,
	SQL_TARGET_NEXT,
	SQL_TARGET_LOAD, /* each target with its current ephemeris, columns of the one behind those of the
			    other */
	SQL_TARGET_BY_KEY, /* the listed one, else the newest that was removed */
	SQL_TARGET_BY_ID,
	SQL_TARGET_ADD,
	SQL_TARGET_UPDATE,
	SQL_TARGET_KEEP_OLD,
	SQL_EPHEMERIS_NEXT,
	SQL_EPHEMERIS_BY_ID,
	SQL_EPHEMERIS_OF_TARGET,
	SQL_EPHEMERIS_ADD,
	SQL_CHANGE_OF_EPHEMERIS,
	SQL_ALIAS_NEXT,
	SQL_ALIAS_LOAD,
	SQL_ALIAS_BY_KEY,
	SQL_ALIAS_ADD,
	SQL_ALIAS_UPDATE,
	SQL_ALIAS_KEEP_OLD,
	SQL_SITE_NEXT,
	SQL_SITE_LOAD,
	SQL_SITE_BY_KEY,
	SQL_SITE_ADD,
	SQL_SITE_UPDATE,
	SQL_SITE_KEEP_OLD,
	SQL_MIDTIME_NEXT,
	SQL_MIDTIME_LOAD,     /* of a target: each mid-time with its mark and who entered it */
	SQL_MIDTIMES_BY_ID,   /* all of them, by id */
	SQL_MIDTIME_OF_EPOCH, /* the same, of a target, an epoch and a kind */
	SQL_MIDTIME_BY_ID,
	SQL_MIDTIME_ADD,
	SQL_MARK_BY_ID,
	SQL_MARK_ADD,
	SQL_MARK_UPDATE,
	SQL_MARK_KEEP_OLD,
	SQL_EPHEMERIS_OF_VERSION,
	SQL_ALIAS_BY_ID,
	SQL_SITE_BY_ID,
	SQL_HISTORY_CHANGES, /* newest first */
	SQL_HISTORY_ROWS,    /* every row that a change set left behind, by change set */
	/* of a table family: ids of the rows that a change set wrote; the row as it left it (when replaced
	   since); the row as it found it */
	SQL_TARGET_TOUCHED,
	SQL_TARGET_AFTER,
	SQL_TARGET_BEFORE,
	SQL_ALIAS_TOUCHED,
	SQL_ALIAS_AFTER,
	SQL_ALIAS_BEFORE,
	SQL_SITE_TOUCHED,
	SQL_SITE_AFTER,
	SQL_SITE_BEFORE,
	SQL_MARK_TOUCHED,
	SQL_MARK_AFTER,
	SQL_MARK_BEFORE,
	SQL_CHANGE_BY_ID,
	SQL_ALL_CHANGES, /* whole tables, for the check */
	SQL_ALL_TARGETS_OLD,
	SQL_ALL_EPHEMERIDES,
	SQL_ALL_ALIASES_OLD,
	SQL_ALL_SITES_OLD,
	SQL_ALL_MIDTIMES,
	SQL_ALL_MARKS,
	SQL_ALL_MARKS_OLD,
	SQL_ALL_SETTINGS,
	SQL_ALL_SETTINGS_OLD,
	SQL_INTEGRITY,
	SQL_FOREIGN_KEYS,
	SQL_WRONG_POINTERS,
	SQL_MISSING_MARKS,
	SQL_COUNTS,
	SQL_COUNT
};
extern const char *const sql_text[SQL_COUNT];

#endif
