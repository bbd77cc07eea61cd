/* SPDX-License-Identifier: MIT */
#include "db/schema.h"

#include "db/schema_parts.h"

#include <stdio.h>
#include <string.h>

/* Fields that a target and its old rows share. Ranges are two-sided and agree with the table of fields; NULL:
 * not known. */
#define TARGET_BODY                                                                                          \
	"name_key TEXT NOT NULL CHECK(length(name_key) BETWEEN 1 AND 80),"                                   \
	"name TEXT NOT NULL CHECK(length(name) BETWEEN 1 AND 80),"                                           \
	"ra_deg REAL NOT NULL CHECK(ra_deg >= 0 AND ra_deg < 360),"                                          \
	"dec_deg REAL NOT NULL CHECK(dec_deg BETWEEN -90 AND 90),"                                           \
	"pm_ra_masyr REAL CHECK(pm_ra_masyr BETWEEN -12000 AND 12000),"                                      \
	"pm_dec_masyr REAL CHECK(pm_dec_masyr BETWEEN -12000 AND 12000),"                                    \
	"duration_h REAL CHECK(duration_h > 0 AND duration_h <= 10000),"                                     \
	"depth_ppt REAL CHECK(depth_ppt > 0 AND depth_ppt <= 1000),"                                         \
	"k REAL CHECK(k > 0 AND k <= 100),"                                                                  \
	"a_rs REAL CHECK(a_rs > 1 AND a_rs <= 1e6),"                                                         \
	"inc_deg REAL CHECK(inc_deg BETWEEN 0 AND 180),"                                                     \
	"ecc REAL CHECK(ecc >= 0 AND ecc < 1),"                                                              \
	"omega_deg REAL CHECK(omega_deg BETWEEN -360 AND 360),"                                              \
	"mag REAL CHECK(mag BETWEEN -5 AND 40),"                                                             \
	"band TEXT NOT NULL,"                                                                                \
	"teff_k REAL CHECK(teff_k BETWEEN 300 AND 500000),"                                                  \
	"rstar_rsun REAL CHECK(rstar_rsun > 0 AND rstar_rsun <= 3000),"                                      \
	"mstar_msun REAL CHECK(mstar_msun > 0 AND mstar_msun <= 500),"                                       \
	"duration_err_h REAL CHECK(duration_err_h BETWEEN 0 AND 10000),"                                     \
	"plx_mas REAL CHECK(plx_mas BETWEEN 0 AND 800),"                                                     \
	"pos_epoch_yr REAL CHECK(pos_epoch_yr BETWEEN 1850 AND 2150),"                                       \
	"priority REAL CHECK(priority > 0 AND priority <= 1e6),"                                             \
	"tags TEXT NOT NULL,"                                                                                \
	"note TEXT NOT NULL,"                                                                                \
	"sun_limit_deg REAL CHECK(sun_limit_deg BETWEEN -30 AND 0),"                                         \
	"sun_limit_baseline_deg REAL CHECK(sun_limit_baseline_deg BETWEEN -30 AND 0),"                       \
	"alt_limit_deg REAL CHECK(alt_limit_deg BETWEEN 0 AND 90),"                                          \
	"airmass_limit REAL CHECK(airmass_limit BETWEEN 1 AND 40),"                                          \
	"moon_limit_deg REAL CHECK(moon_limit_deg BETWEEN 0 AND 180),"                                       \
	"baseline_before_min REAL CHECK(baseline_before_min BETWEEN 0 AND 720),"                             \
	"baseline_after_min REAL CHECK(baseline_after_min BETWEEN 0 AND 720),"                               \
	"ecosw_err REAL CHECK(ecosw_err BETWEEN 0 AND 1),"

#define ALIAS_BODY                                                                                           \
	"alias TEXT NOT NULL CHECK(length(alias) BETWEEN 1 AND 80),"                                         \
	"alias_key TEXT NOT NULL CHECK(length(alias_key) BETWEEN 1 AND 80),"                                 \
	"target_id INTEGER NOT NULL REFERENCES target(id),"

#define SITE_BODY                                                                                            \
	"name TEXT NOT NULL CHECK(length(name) BETWEEN 1 AND 80),"                                           \
	"name_key TEXT NOT NULL CHECK(length(name_key) BETWEEN 1 AND 80),"                                   \
	"lat_deg REAL NOT NULL CHECK(lat_deg BETWEEN -90 AND 90),"                                           \
	"lon_east_deg REAL NOT NULL CHECK(lon_east_deg BETWEEN -180 AND 180),"                               \
	"height_m REAL NOT NULL CHECK(height_m BETWEEN -450 AND 9000),"                                      \
	"zone TEXT NOT NULL,"                                                                                \
	"mask TEXT NOT NULL CHECK(length(mask) <= 40000)," /* `azimuth altitude;...` [deg]; '' none */

/* What became of a mid-time: counted in fits, or taken out of the lists. Its id is that of the mid-time. */
#define MARK_BODY "used INTEGER NOT NULL CHECK(used IN (0, 1)),"

#define SETTING_BODY "key TEXT NOT NULL CHECK(length(key) BETWEEN 1 AND 80), value TEXT NOT NULL,"

#define READ_BODY                                                                                            \
	"as_read TEXT NOT NULL,"   /* texts as read: field=text, tab between */                              \
	"doubts INTEGER NOT NULL," /* bit of each field whose text can't be true */

static const char *const step_1[] = {
    "CREATE TABLE store_info(id INTEGER PRIMARY KEY CHECK(id = 1),"
    "store_id TEXT NOT NULL CHECK(length(store_id) = 32),"
    "rev INTEGER NOT NULL CHECK(rev BETWEEN 1 AND 1000000000)," CRC_BODY ") STRICT;",

    "CREATE TABLE change_set(id INTEGER PRIMARY KEY,"
    "utc TEXT NOT NULL CHECK(length(utc) BETWEEN 17 AND 23),"
    "who TEXT NOT NULL, verb TEXT NOT NULL,"
    "undoes INTEGER REFERENCES change_set(id) CHECK(undoes BETWEEN 1 AND id - 1)," /* NULL: no undo */
    "rev INTEGER NOT NULL CHECK(rev = 1)," CRC_BODY ") STRICT;",

    /* the pointer to the current version is checked at commit: target and first ephemeris come in together */
    "CREATE TABLE target(id INTEGER PRIMARY KEY," TARGET_BODY
    "ephemeris_id INTEGER REFERENCES ephemeris(id) DEFERRABLE INITIALLY DEFERRED," READ_BODY REMOVED_BODY
	REV_BODY CRC_BODY ") STRICT;",
    /* a removed target leaves its name to others */
    "CREATE UNIQUE INDEX target_listed ON target(name_key) WHERE removed = 0;",
    "CREATE INDEX target_removed ON target(name_key) WHERE removed = 1;",
    "CREATE TABLE target_old(id INTEGER NOT NULL REFERENCES target(id)," TARGET_BODY
    "ephemeris_id INTEGER," READ_BODY REMOVED_BODY REV_BODY OLD_TAIL,

    "CREATE TABLE ephemeris(id INTEGER PRIMARY KEY,"
    "target_id INTEGER NOT NULL REFERENCES target(id),"
    "version INTEGER NOT NULL CHECK(version BETWEEN 1 AND 1000000000),"
    "t0_day REAL CHECK(t0_day BETWEEN -3e6 AND 3e6),"
    "t0_frac REAL CHECK(t0_frac >= 0 AND t0_frac < 1),"
    "t0_err_d REAL CHECK(t0_err_d BETWEEN 0 AND 1e9),"
    "time_scale TEXT NOT NULL,"
    "period_d REAL CHECK(period_d > 0 AND period_d <= 1e7),"
    "period_err_d REAL CHECK(period_err_d BETWEEN 0 AND 1e9),"
    "source TEXT NOT NULL,"
    "t0_period_cov_d2 REAL CHECK(t0_period_cov_d2 BETWEEN -1e6 AND 1e6),"
    "dpde_d REAL CHECK(dpde_d BETWEEN -1 AND 1),"
    "dpde_err_d REAL CHECK(dpde_err_d BETWEEN 0 AND 1),"
    "ttv_amp_min REAL CHECK(ttv_amp_min BETWEEN 0 AND 1e5),"
    "t0_dpde_cov_d2 REAL CHECK(t0_dpde_cov_d2 BETWEEN -1e6 AND 1e6),"
    "period_dpde_cov_d2 REAL CHECK(period_dpde_cov_d2 BETWEEN -1e6 AND 1e6),"
    "entered_utc TEXT NOT NULL CHECK(length(entered_utc) BETWEEN 17 AND 23)," READ_BODY REV_BODY CRC_BODY
    ", UNIQUE(target_id, version), CHECK((t0_day IS NULL) = (t0_frac IS NULL))) STRICT;",

    /* the deferred reference is looked up with each new ephemeris */
    "CREATE INDEX target_by_ephemeris ON target(ephemeris_id);",

    "CREATE TABLE midtime(id INTEGER PRIMARY KEY,"
    "target_id INTEGER NOT NULL REFERENCES target(id),"
    "epoch INTEGER NOT NULL CHECK(epoch BETWEEN -2000000000 AND 2000000000),"
    "kind TEXT NOT NULL CHECK(kind IN ('transit', 'occultation'))," /* an occultation: that after transit
								       epoch */
    "mid_day REAL NOT NULL CHECK(mid_day BETWEEN -3e6 AND 3e6),"
    "mid_frac REAL NOT NULL CHECK(mid_frac >= 0 AND mid_frac < 1),"
    "mid_text TEXT NOT NULL CHECK(length(mid_text) BETWEEN 1 AND 64)," /* as read, offset not added */
    "time_scale TEXT NOT NULL CHECK(length(time_scale) <= 127),"
    "err_d REAL NOT NULL CHECK(err_d > 0 AND err_d <= 100),"
    "source TEXT NOT NULL CHECK(length(source) <= 255),"
    "entered_utc TEXT NOT NULL CHECK(length(entered_utc) BETWEEN 17 AND 23)," REV_BODY CRC_BODY ") STRICT;",
    "CREATE INDEX midtime_by_target ON midtime(target_id, epoch);",
    "CREATE TABLE midtime_mark(id INTEGER PRIMARY KEY REFERENCES midtime(id)," MARK_BODY REMOVED_BODY REV_BODY
	CRC_BODY ") STRICT;",
    "CREATE TABLE midtime_mark_old(id INTEGER NOT NULL REFERENCES midtime_mark(id)," MARK_BODY REMOVED_BODY
	REV_BODY OLD_TAIL,

    "CREATE TABLE target_alias(id INTEGER PRIMARY KEY," ALIAS_BODY REMOVED_BODY REV_BODY CRC_BODY
    ", UNIQUE(alias_key)) STRICT;",
    "CREATE TABLE target_alias_old(id INTEGER NOT NULL REFERENCES target_alias(id)," ALIAS_BODY REMOVED_BODY
	REV_BODY OLD_TAIL,
    "CREATE TABLE site(id INTEGER PRIMARY KEY," SITE_BODY REMOVED_BODY REV_BODY CRC_BODY
    ", UNIQUE(name_key)) STRICT;",
    "CREATE TABLE site_old(id INTEGER NOT NULL REFERENCES site(id)," SITE_BODY REMOVED_BODY REV_BODY OLD_TAIL,
    "CREATE TABLE setting(id INTEGER PRIMARY KEY," SETTING_BODY REMOVED_BODY REV_BODY CRC_BODY
    ", UNIQUE(key)) STRICT;",
    "CREATE TABLE setting_old(id INTEGER NOT NULL REFERENCES setting(id)," SETTING_BODY REMOVED_BODY REV_BODY
	OLD_TAIL,

    /* history is only ever added to */
    "CREATE TRIGGER ephemeris_no_update BEFORE UPDATE ON ephemeris "
    "BEGIN SELECT raise(ABORT, 'an ephemeris version is never changed'); END;",
    "CREATE TRIGGER ephemeris_no_delete BEFORE DELETE ON ephemeris "
    "BEGIN SELECT raise(ABORT, 'an ephemeris version is never deleted'); END;",
    "CREATE TRIGGER midtime_no_update BEFORE UPDATE ON midtime "
    "BEGIN SELECT raise(ABORT, 'a mid-time is never changed'); END;",
    "CREATE TRIGGER midtime_no_delete BEFORE DELETE ON midtime "
    "BEGIN SELECT raise(ABORT, 'a mid-time is never deleted'); END;",
    "CREATE TRIGGER midtime_mark_no_delete BEFORE DELETE ON midtime_mark "
    "BEGIN SELECT raise(ABORT, 'a mid-time is marked as removed, never deleted'); END;",
    "CREATE TRIGGER midtime_mark_old_no_update BEFORE UPDATE ON midtime_mark_old "
    "BEGIN SELECT raise(ABORT, 'history is never changed'); END;",
    "CREATE TRIGGER midtime_mark_old_no_delete BEFORE DELETE ON midtime_mark_old "
    "BEGIN SELECT raise(ABORT, 'history is never deleted'); END;",
    "CREATE TRIGGER change_set_no_update BEFORE UPDATE ON change_set "
    "BEGIN SELECT raise(ABORT, 'a change set is never changed'); END;",
    "CREATE TRIGGER change_set_no_delete BEFORE DELETE ON change_set "
    "BEGIN SELECT raise(ABORT, 'a change set is never deleted'); END;",
    "CREATE TRIGGER target_no_delete BEFORE DELETE ON target "
    "BEGIN SELECT raise(ABORT, 'a target is marked as removed, never deleted'); END;",
    "CREATE TRIGGER target_old_no_update BEFORE UPDATE ON target_old "
    "BEGIN SELECT raise(ABORT, 'history is never changed'); END;",
    "CREATE TRIGGER target_old_no_delete BEFORE DELETE ON target_old "
    "BEGIN SELECT raise(ABORT, 'history is never deleted'); END;",
    "CREATE TRIGGER target_alias_old_no_update BEFORE UPDATE ON target_alias_old "
    "BEGIN SELECT raise(ABORT, 'history is never changed'); END;",
    "CREATE TRIGGER target_alias_old_no_delete BEFORE DELETE ON target_alias_old "
    "BEGIN SELECT raise(ABORT, 'history is never deleted'); END;",
    "CREATE TRIGGER site_old_no_update BEFORE UPDATE ON site_old "
    "BEGIN SELECT raise(ABORT, 'history is never changed'); END;",
    "CREATE TRIGGER site_old_no_delete BEFORE DELETE ON site_old "
    "BEGIN SELECT raise(ABORT, 'history is never deleted'); END;",
    "CREATE TRIGGER setting_old_no_update BEFORE UPDATE ON setting_old "
    "BEGIN SELECT raise(ABORT, 'history is never changed'); END;",
    "CREATE TRIGGER setting_old_no_delete BEFORE DELETE ON setting_old "
    "BEGIN SELECT raise(ABORT, 'history is never deleted'); END;",
    NULL,
};

static const char *const *const steps[SCHEMA_VERSION] = {step_1, schema_step_2};

static enum status run(sqlite3 *db, const char *sql, struct err *e)
{
	char *message = NULL;
	int rc = sqlite3_exec(db, sql, NULL, NULL, &message);
	enum status s = ST_OK;
	if (rc != SQLITE_OK)
		s = err_set(e, rc == SQLITE_NOMEM ? ST_MEMORY : ST_STORE, "database: making its tables: %s",
			    message ? message : sqlite3_errstr(rc));
	sqlite3_free(message);
	return s;
}

enum status schema_apply(sqlite3 *db, int version, struct err *e)
{
	char pragma[96];
	for (int k = version; k < SCHEMA_VERSION; k++)
		for (const char *const *sql = steps[k]; *sql; sql++) {
			enum status s = run(db, *sql, e);
			if (s != ST_OK)
				return s;
		}
	snprintf(pragma, sizeof pragma, "PRAGMA application_id = %d; PRAGMA user_version = %d;",
		 (int)APPLICATION_ID, (int)SCHEMA_VERSION);
	return run(db, pragma, e);
}

static const char schema_sql[] = "SELECT type, name, ifnull(sql, '') FROM sqlite_schema "
				 "WHERE name NOT LIKE 'sqlite_stat%' ORDER BY type, name";

static enum status compare_rows(sqlite3_stmt *have, sqlite3_stmt *want, struct err *e)
{
	for (;;) {
		int a = sqlite3_step(have), b = sqlite3_step(want);
		if ((a != SQLITE_ROW && a != SQLITE_DONE) || (b != SQLITE_ROW && b != SQLITE_DONE))
			return err_set(e, ST_STORE, "database: its schema can't be read: %s",
				       sqlite3_errstr(a));
		if (a == SQLITE_DONE && b == SQLITE_DONE)
			return ST_OK;
		bool same = a == b;
		for (int c = 0; same && c < 3; c++) {
			const char *x = (const char *)sqlite3_column_text(have, c);
			const char *y = (const char *)sqlite3_column_text(want, c);
			same = x && y && strcmp(x, y) == 0;
		}
		if (!same)
			return err_set(e, ST_STORE,
				       "database: its schema was changed by another hand, at %.80s",
				       (const char *)sqlite3_column_text(b == SQLITE_ROW ? want : have, 1));
	}
}

enum status schema_crc(sqlite3 *db, const struct crc_table *table, uint32_t *crc, struct err *e)
{
	sqlite3_stmt *stmt = NULL;
	int rc = sqlite3_prepare_v2(db, schema_sql, -1, &stmt, NULL);
	*crc = 0;
	while (rc == SQLITE_OK && (rc = sqlite3_step(stmt)) == SQLITE_ROW) {
		struct cell cell[3];
		cells_read(stmt, 0, cell, 3);
		const struct cell sum[] = {cell_int(*crc), cell_int(row_crc(table, cell, 3))};
		*crc = row_crc(table, sum, 2);
		rc = SQLITE_OK;
	}
	(void)sqlite3_finalize(stmt);
	return rc == SQLITE_DONE
		   ? ST_OK
		   : err_set(e, ST_STORE, "database: its schema can't be read: %s", sqlite3_errmsg(db));
}

static enum status compare_texts(sqlite3 *db, struct err *e)
{
	sqlite3 *fresh = NULL;
	sqlite3_stmt *have = NULL, *want = NULL;
	enum status s = ST_OK;
	if (sqlite3_open_v2(":memory:", &fresh, SQLITE_OPEN_READWRITE | SQLITE_OPEN_MEMORY, NULL) !=
	    SQLITE_OK)
		s = err_set(e, ST_MEMORY, "database: no memory");
	if (s == ST_OK)
		s = schema_apply(fresh, 0, e);
	if (s == ST_OK && (sqlite3_prepare_v2(db, schema_sql, -1, &have, NULL) != SQLITE_OK ||
			   sqlite3_prepare_v2(fresh, schema_sql, -1, &want, NULL) != SQLITE_OK))
		s = err_set(e, ST_STORE, "database: its schema can't be read: %s", sqlite3_errmsg(db));
	if (s == ST_OK)
		s = compare_rows(have, want, e);
	sqlite3_finalize(have);
	sqlite3_finalize(want);
	sqlite3_close(fresh);
	return s;
}

enum status schema_compare(sqlite3 *db, const struct crc_table *table, struct err *e)
{
	uint32_t crc;
	enum status s = schema_crc(db, table, &crc, e);
	return s != ST_OK || crc == SCHEMA_CRC ? s : compare_texts(db, e);
}
