/* SPDX-License-Identifier: MIT */
#include "db/sql.h"

/* Columns of a row in the order of the cells that the code reads and writes; the checksum over them is always
 * the last one. The fields stand in the order of the table of fields (fields.c). What two joined tables share
 * is qualified. */
#define TARGET_FIELDS                                                                                        \
	"name, ra_deg, dec_deg, pm_ra_masyr, pm_dec_masyr, duration_h, depth_ppt, k, a_rs, inc_deg, ecc, "   \
	"omega_deg, "                                                                                        \
	"mag, band, teff_k, rstar_rsun, mstar_msun, duration_err_h, plx_mas, pos_epoch_yr, priority, tags, " \
	"note, "                                                                                             \
	"sun_limit_deg, sun_limit_baseline_deg, alt_limit_deg, airmass_limit, moon_limit_deg, "              \
	"baseline_before_min, "                                                                              \
	"baseline_after_min, ecosw_err, ephemeris_id"
#define TARGET_PLAIN "name_key, " TARGET_FIELDS ", as_read, doubts, removed, rev, change_id"
#define TARGET_COLUMNS                                                                                       \
	"target.id, name_key, " TARGET_FIELDS                                                                \
	", target.as_read, target.doubts, target.removed, target.rev, "                                      \
	"target.change_id, target.row_crc"
#define EPHEMERIS_FIELDS                                                                                     \
	"target_id, version, t0_day, t0_frac, t0_err_d, time_scale, period_d, period_err_d, source, "        \
	"t0_period_cov_d2, dpde_d, dpde_err_d, ttv_amp_min, entered_utc"
#define EPHEMERIS_COLUMNS                                                                                    \
	"ephemeris.id, " EPHEMERIS_FIELDS ", ephemeris.as_read, ephemeris.doubts, ephemeris.rev, "           \
	"ephemeris.change_id, ephemeris.row_crc"
#define ALIAS_PLAIN "alias, alias_key, target_id, removed, rev, change_id"
#define SITE_PLAIN "name, name_key, lat_deg, lon_east_deg, height_m, zone, mask, removed, rev, change_id"
#define SETTING_PLAIN "key, value, removed, rev, change_id"

#define FIVE "?, ?, ?, ?, ?"
#define TEN FIVE ", " FIVE

const char *const sql_text[SQL_COUNT] = {
    [SQL_BEGIN] = "BEGIN IMMEDIATE",
    [SQL_COMMIT] = "COMMIT",
    [SQL_ROLLBACK] = "ROLLBACK",
    [SQL_STORE_INFO] = "SELECT id, store_id, rev, row_crc FROM store_info",

    [SQL_DATA_VERSION] = "PRAGMA data_version",

    [SQL_CHANGE_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM change_set",
    [SQL_CHANGE_ADD] = "INSERT INTO change_set(id, utc, who, verb, rev, row_crc) VALUES(" FIVE ", ?)",

    [SQL_TARGET_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM target",
    [SQL_TARGET_LOAD] =
	"SELECT " TARGET_COLUMNS ", " EPHEMERIS_COLUMNS
	" FROM target LEFT JOIN ephemeris ON ephemeris.id = target.ephemeris_id ORDER BY name_key",
    [SQL_TARGET_BY_KEY] = "SELECT " TARGET_COLUMNS " FROM target WHERE name_key = ?",
    [SQL_TARGET_BY_ID] = "SELECT " TARGET_COLUMNS " FROM target WHERE id = ?",
    [SQL_TARGET_ADD] =
	"INSERT INTO target(id, " TARGET_PLAIN ", row_crc) VALUES(" TEN ", " TEN ", " TEN ", " TEN ")",
    [SQL_TARGET_UPDATE] = "UPDATE target SET (" TARGET_PLAIN ", row_crc) = (" TEN ", " TEN ", " TEN ", " FIVE
			  ", ?, ?, ?, ?) WHERE id = ? AND rev = ?",
    [SQL_TARGET_KEEP_OLD] = "INSERT INTO target_old(id, " TARGET_PLAIN ", replaced_by, row_crc) VALUES(" TEN
			    ", " TEN ", " TEN ", " TEN ", ?)",

    [SQL_EPHEMERIS_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM ephemeris",
    [SQL_EPHEMERIS_BY_ID] = "SELECT " EPHEMERIS_COLUMNS " FROM ephemeris WHERE id = ?",
    [SQL_EPHEMERIS_OF_TARGET] =
	"SELECT " EPHEMERIS_COLUMNS " FROM ephemeris WHERE target_id = ? ORDER BY version",
    [SQL_EPHEMERIS_ADD] = "INSERT INTO ephemeris(id, " EPHEMERIS_FIELDS
			  ", as_read, doubts, rev, change_id, row_crc) VALUES(" TEN ", " TEN ")",
    [SQL_CHANGE_OF_EPHEMERIS] = "SELECT who FROM change_set WHERE id = ?",

    [SQL_ALIAS_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM target_alias",
    [SQL_ALIAS_LOAD] = "SELECT id, " ALIAS_PLAIN ", row_crc FROM target_alias ORDER BY alias_key",
    [SQL_ALIAS_BY_KEY] = "SELECT id, " ALIAS_PLAIN ", row_crc FROM target_alias WHERE alias_key = ?",
    [SQL_ALIAS_ADD] = "INSERT INTO target_alias(id, " ALIAS_PLAIN ", row_crc) VALUES(" FIVE ", ?, ?, ?)",
    [SQL_ALIAS_UPDATE] =
	"UPDATE target_alias SET (" ALIAS_PLAIN ", row_crc) = (" FIVE ", ?, ?) WHERE id = ? AND rev = ?",
    [SQL_ALIAS_KEEP_OLD] = "INSERT INTO target_alias_old(id, " ALIAS_PLAIN
			   ", replaced_by, row_crc) VALUES(" FIVE ", ?, ?, ?, ?)",

    [SQL_SITE_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM site",
    [SQL_SITE_LOAD] = "SELECT id, " SITE_PLAIN ", row_crc FROM site ORDER BY name_key",
    [SQL_SITE_BY_KEY] = "SELECT id, " SITE_PLAIN ", row_crc FROM site WHERE name_key = ?",
    [SQL_SITE_ADD] = "INSERT INTO site(id, " SITE_PLAIN ", row_crc) VALUES(" TEN ", ?, ?)",
    [SQL_SITE_UPDATE] = "UPDATE site SET (" SITE_PLAIN ", row_crc) = (" TEN ", ?) WHERE id = ? AND rev = ?",
    [SQL_SITE_KEEP_OLD] =
	"INSERT INTO site_old(id, " SITE_PLAIN ", replaced_by, row_crc) VALUES(" TEN ", ?, ?, ?)",

    [SQL_ALL_CHANGES] = "SELECT id, utc, who, verb, rev, row_crc FROM change_set",
    [SQL_ALL_TARGETS_OLD] = "SELECT id, " TARGET_PLAIN ", replaced_by, row_crc FROM target_old",
    [SQL_ALL_EPHEMERIDES] = "SELECT " EPHEMERIS_COLUMNS " FROM ephemeris",
    [SQL_ALL_ALIASES_OLD] = "SELECT id, " ALIAS_PLAIN ", replaced_by, row_crc FROM target_alias_old",
    [SQL_ALL_SITES_OLD] = "SELECT id, " SITE_PLAIN ", replaced_by, row_crc FROM site_old",
    [SQL_ALL_SETTINGS] = "SELECT id, " SETTING_PLAIN ", row_crc FROM setting",
    [SQL_ALL_SETTINGS_OLD] = "SELECT id, " SETTING_PLAIN ", replaced_by, row_crc FROM setting_old",
    [SQL_INTEGRITY] = "PRAGMA integrity_check",
    [SQL_FOREIGN_KEYS] = "PRAGMA foreign_key_check",
    [SQL_WRONG_POINTERS] =
	"SELECT target.name FROM target JOIN ephemeris ON ephemeris.id = target.ephemeris_id "
	"WHERE ephemeris.target_id <> target.id",
    [SQL_COUNTS] = "SELECT (SELECT count(*) FROM target WHERE removed = 0), "
		   "(SELECT count(*) FROM ephemeris WHERE t0_day IS NOT NULL AND period_d IS NOT NULL), "
		   "(SELECT count(*) FROM site WHERE removed = 0), (SELECT count(*) FROM change_set)",
};
