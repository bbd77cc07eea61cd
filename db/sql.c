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
	"t0_period_cov_d2, dpde_d, dpde_err_d, ttv_amp_min, "                                                \
	"t0_dpde_cov_d2, period_dpde_cov_d2, entered_utc"
#define EPHEMERIS_COLUMNS                                                                                    \
	"ephemeris.id, " EPHEMERIS_FIELDS ", ephemeris.as_read, ephemeris.doubts, ephemeris.rev, "           \
	"ephemeris.change_id, ephemeris.row_crc"
#define ALIAS_PLAIN "alias, alias_key, target_id, removed, rev, change_id"
#define SITE_PLAIN "name, name_key, lat_deg, lon_east_deg, height_m, zone, mask, removed, rev, change_id"
#define SETTING_PLAIN "key, value, removed, rev, change_id"

/* the fields in the order of their table (telescopes.c) */
#define TELESCOPE_PLAIN                                                                                      \
	"site_id, name, name_key, slew_deg_s, settle_min, filter_min, field_arcmin, mount, alt_min_deg, "    \
	"alt_max_deg, ha_east_h, ha_west_h, zenith_deg, flip_min, flip_before_min, flip_after_min, "         \
	"aperture_m, obstruction, throughput, band, pixel_arcsec, gain_e_adu, read_noise_e, dark_e_s, "      \
	"full_well_e, defocus_px, exposure_s, dead_s, red_noise_ppt, blocks, note, removed, rev, change_id"
#define ALLOTMENT_PLAIN "site_id, telescope_id, first_mjd, last_mjd, span, note, removed, rev, change_id"
#define GOAL_PLAIN "target_id, whole, limb, band, until_mjd, note, since_utc, removed, rev, change_id"
#define FIELD_STAR_PLAIN                                                                                     \
	"target_id, role, name, ra_deg, dec_deg, sep_arcsec, mag, band, note, removed, rev, change_id"
/* a star in words */
#define STAR_WORDS "s.role || CASE s.role WHEN 'neighbour' THEN '' ELSE ' star' END || ' of ' || t.name"

#define PLAN_PLAIN                                                                                           \
	"site_id, telescope_id, night_mjd, draft, draft_key, kept, edition, removed, rev, "                  \
	"change_id"
#define EDITION_PLAIN                                                                                        \
	"plan_id, edition, limits, leap_date, worth, bound, optimal, choices, left_out, "                    \
	"items, rev, change_id"
#define ITEM_PLAIN                                                                                           \
	"edition_id, place, item_key, slew_by_utc, start_utc, latest_start_utc, end_utc, "                   \
	"worth, windows, rev, change_id"
#define WINDOW_PLAIN                                                                                         \
	"item_id, place, target_id, ephemeris_id, target, kind, epoch, variant, worth, "                     \
	"figures, rev, change_id"
#define PLAN_MARK_PLAIN "plan_id, item_key, state, cause, note, marked_utc, removed, rev, change_id"
/* the same with their row's id and checksum, of joined tables */
#define PLAN_COLUMNS                                                                                         \
	"p.id, p.site_id, p.telescope_id, p.night_mjd, p.draft, p.draft_key, p.kept, "                       \
	"p.edition, p.removed, p.rev, p.change_id, p.row_crc"
#define EDITION_COLUMNS                                                                                      \
	"e.id, e.plan_id, e.edition, e.limits, e.leap_date, e.worth, e.bound, e.optimal, "                   \
	"e.choices, e.left_out, e.items, e.rev, e.change_id, e.row_crc"
#define ITEM_COLUMNS                                                                                         \
	"i.id, i.edition_id, i.place, i.item_key, i.slew_by_utc, i.start_utc, "                              \
	"i.latest_start_utc, i.end_utc, i.worth, i.windows, i.rev, i.change_id, i.row_crc"
#define WINDOW_COLUMNS                                                                                       \
	"w.id, w.item_id, w.place, w.target_id, w.ephemeris_id, w.target, w.kind, w.epoch, "                 \
	"w.variant, w.worth, w.figures, w.rev, w.change_id, w.row_crc"
#define PLAN_MARK_COLUMNS                                                                                    \
	"k.id, k.plan_id, k.item_key, k.state, k.cause, k.note, k.marked_utc, k.removed, "                   \
	"k.rev, k.change_id, k.row_crc"
/* the edition that holds of each listed plan */
#define HELD "FROM plan p JOIN plan_edition e ON e.plan_id = p.id AND e.edition = p.edition "
/* a setting in words; that of a site goes by the site's name */
#define SETTING_WORDS                                                                                        \
	"ifnull(CASE WHEN key LIKE 'half:%' THEN 'halves of the nights of ' || "                             \
	"(SELECT name FROM site WHERE id = CAST(substr(key, 6) AS INTEGER)) END, 'setting ' || key)"

/* a mark in words: the first target of the newest item that has its key */
#define MARK_WORDS                                                                                           \
	"ifnull((SELECT w.target FROM plan_edition e JOIN plan_item i ON i.edition_id = e.id "               \
	"JOIN plan_window w ON w.item_id = i.id WHERE e.plan_id = k.plan_id AND i.item_key = k.item_key "    \
	"ORDER BY i.id DESC, w.place LIMIT 1), k.item_key) || "                                              \
	"CASE k.removed WHEN 1 THEN ' unmarked' ELSE ' marked ' || k.state END"

#define MIDTIME_PLAIN                                                                                        \
	"target_id, epoch, kind, mid_day, mid_frac, mid_text, time_scale, err_d, source, entered_utc, rev, " \
	"change_id"
#define MARK_PLAIN "used, removed, rev, change_id"
#define MIDTIME_JOIN                                                                                         \
	"SELECT m.id, target_id, epoch, kind, mid_day, mid_frac, mid_text, time_scale, err_d, source, "      \
	"entered_utc, m.rev, m.change_id, m.row_crc, k.id, used, removed, k.rev, k.change_id, k.row_crc, "   \
	"who FROM midtime m JOIN midtime_mark k ON k.id = m.id JOIN change_set c ON c.id = m.change_id "

/* Of a family of a table and its old rows. A row that one change set wrote more than once has old rows that
 * this same set replaced: what was before is the one that another wrote. */
#define TOUCHED(table)                                                                                       \
	"SELECT id FROM " table " WHERE change_id = ?1 UNION SELECT id FROM " table                          \
	"_old WHERE change_id = ?1 ORDER BY 1"
#define AFTER(table, columns)                                                                                \
	"SELECT id, " columns ", replaced_by, row_crc FROM " table                                           \
	"_old WHERE id = ? AND change_id = ? ORDER BY rev DESC LIMIT 1"
#define BEFORE(table, columns)                                                                               \
	"SELECT id, " columns ", replaced_by, row_crc FROM " table                                           \
	"_old WHERE id = ? AND replaced_by = ? AND change_id <> replaced_by"

#define FIVE "?, ?, ?, ?, ?"
#define TEN FIVE ", " FIVE

const char *const sql_text[SQL_COUNT] = {
    [SQL_BEGIN] = "BEGIN IMMEDIATE",
    [SQL_COMMIT] = "COMMIT",
    [SQL_ROLLBACK] = "ROLLBACK",
    [SQL_STORE_INFO] = "SELECT id, store_id, rev, row_crc FROM store_info",

    [SQL_DATA_VERSION] = "PRAGMA data_version",

    [SQL_CHANGE_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM change_set",
    [SQL_CHANGE_ADD] =
	"INSERT INTO change_set(id, utc, who, verb, undoes, rev, row_crc) VALUES(" FIVE ", ?, ?)",

    [SQL_TARGET_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM target",
    [SQL_TARGET_LOAD] =
	"SELECT " TARGET_COLUMNS ", " EPHEMERIS_COLUMNS
	" FROM target LEFT JOIN ephemeris ON ephemeris.id = target.ephemeris_id ORDER BY name_key",
    [SQL_TARGET_BY_KEY] = "SELECT " TARGET_COLUMNS
			  " FROM target WHERE name_key = ?1 AND removed = 0 UNION ALL SELECT " TARGET_COLUMNS
			  " FROM target WHERE name_key = ?1 AND removed = 1 ORDER BY removed, 1 DESC LIMIT 1",
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
			  ", as_read, doubts, rev, change_id, row_crc) VALUES(" TEN ", " TEN ", ?, ?)",
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

    [SQL_MIDTIME_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM midtime",
    [SQL_MIDTIME_LOAD] = MIDTIME_JOIN "WHERE target_id = ?",
    [SQL_MIDTIMES_BY_ID] = MIDTIME_JOIN "ORDER BY m.id",
    [SQL_MIDTIME_OF_EPOCH] = MIDTIME_JOIN "WHERE target_id = ? AND epoch = ? AND kind = ? ORDER BY m.id",
    [SQL_MIDTIME_BY_ID] = "SELECT id, " MIDTIME_PLAIN ", row_crc FROM midtime WHERE id = ?",
    [SQL_MIDTIME_ADD] = "INSERT INTO midtime(id, " MIDTIME_PLAIN ", row_crc) VALUES(" TEN ", ?, ?, ?, ?)",
    [SQL_MARK_BY_ID] = "SELECT id, " MARK_PLAIN ", row_crc FROM midtime_mark WHERE id = ?",
    [SQL_MARK_ADD] = "INSERT INTO midtime_mark(id, " MARK_PLAIN ", row_crc) VALUES(" FIVE ", ?)",
    [SQL_MARK_UPDATE] =
	"UPDATE midtime_mark SET (" MARK_PLAIN ", row_crc) = (" FIVE ") WHERE id = ? AND rev = ?",
    [SQL_MARK_KEEP_OLD] =
	"INSERT INTO midtime_mark_old(id, " MARK_PLAIN ", replaced_by, row_crc) VALUES(" FIVE ", ?, ?)",

    [SQL_EPHEMERIS_OF_VERSION] =
	"SELECT " EPHEMERIS_COLUMNS " FROM ephemeris WHERE target_id = ? AND version = ?",
    [SQL_ALIAS_BY_ID] = "SELECT id, " ALIAS_PLAIN ", row_crc FROM target_alias WHERE id = ?",
    [SQL_SITE_BY_ID] = "SELECT id, " SITE_PLAIN ", row_crc FROM site WHERE id = ?",

    [SQL_TELESCOPE_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM telescope",
    [SQL_TELESCOPE_LOAD] =
	"SELECT id, " TELESCOPE_PLAIN ", row_crc FROM telescope ORDER BY site_id, name_key",
    [SQL_TELESCOPE_BY_KEY] =
	"SELECT id, " TELESCOPE_PLAIN ", row_crc FROM telescope WHERE site_id = ? AND name_key = ?",
    [SQL_TELESCOPE_BY_ID] = "SELECT id, " TELESCOPE_PLAIN ", row_crc FROM telescope WHERE id = ?",
    [SQL_TELESCOPE_ADD] = "INSERT INTO telescope(id, " TELESCOPE_PLAIN ", row_crc) VALUES(" TEN ", " TEN
			  ", " TEN ", " FIVE ", ?)",
    [SQL_TELESCOPE_UPDATE] = "UPDATE telescope SET (" TELESCOPE_PLAIN ", row_crc) = (" TEN ", " TEN ", " TEN
			     ", " FIVE ") WHERE id = ? AND rev = ?",
    [SQL_TELESCOPE_KEEP_OLD] = "INSERT INTO telescope_old(id, " TELESCOPE_PLAIN
			       ", replaced_by, row_crc) VALUES(" TEN ", " TEN ", " TEN ", " FIVE ", ?, ?)",

    [SQL_ALLOTMENT_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM allotment",
    [SQL_ALLOTMENT_LOAD] = "SELECT id, " ALLOTMENT_PLAIN ", row_crc FROM allotment ORDER BY first_mjd, id",
    [SQL_ALLOTMENT_SAME] =
	"SELECT id, " ALLOTMENT_PLAIN ", row_crc FROM allotment WHERE site_id = ? AND "
	"ifnull(telescope_id, 0) = ? AND first_mjd = ? AND last_mjd = ? AND span = ? AND removed = 0",
    [SQL_ALLOTMENT_BY_ID] = "SELECT id, " ALLOTMENT_PLAIN ", row_crc FROM allotment WHERE id = ?",
    [SQL_ALLOTMENT_ADD] = "INSERT INTO allotment(id, " ALLOTMENT_PLAIN ", row_crc) VALUES(" TEN ", ?)",
    [SQL_ALLOTMENT_UPDATE] =
	"UPDATE allotment SET (" ALLOTMENT_PLAIN ", row_crc) = (" TEN ") WHERE id = ? AND rev = ?",
    [SQL_ALLOTMENT_KEEP_OLD] =
	"INSERT INTO allotment_old(id, " ALLOTMENT_PLAIN ", replaced_by, row_crc) VALUES(" TEN ", ?, ?)",

    [SQL_SETTING_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM setting",
    [SQL_SETTING_BY_KEY] = "SELECT id, " SETTING_PLAIN ", row_crc FROM setting WHERE key = ?",
    [SQL_SETTING_BY_ID] = "SELECT id, " SETTING_PLAIN ", row_crc FROM setting WHERE id = ?",
    [SQL_SETTING_ADD] = "INSERT INTO setting(id, " SETTING_PLAIN ", row_crc) VALUES(" FIVE ", ?, ?)",
    [SQL_SETTING_UPDATE] =
	"UPDATE setting SET (" SETTING_PLAIN ", row_crc) = (" FIVE ", ?) WHERE id = ? AND rev = ?",
    [SQL_SETTING_KEEP_OLD] =
	"INSERT INTO setting_old(id, " SETTING_PLAIN ", replaced_by, row_crc) VALUES(" FIVE ", ?, ?, ?)",

    [SQL_PLAN_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM plan",
    [SQL_PLAN_LOAD] =
	"SELECT " PLAN_COLUMNS ", " EDITION_COLUMNS ", c.id, utc, who, verb, undoes, c.rev, c.row_crc "
	"FROM plan p LEFT JOIN plan_edition e ON e.plan_id = p.id AND e.edition = p.edition "
	"LEFT JOIN change_set c ON c.id = e.change_id "
	"WHERE (?1 = 0 OR site_id = ?1) AND night_mjd BETWEEN ?2 AND ?3 "
	"ORDER BY night_mjd, ifnull(telescope_id, 0), draft_key, p.id",
    [SQL_PLAN_DRAFT] = "SELECT id, " PLAN_PLAIN ", row_crc FROM plan WHERE site_id = ? AND night_mjd = ? AND "
		       "ifnull(telescope_id, 0) = ? AND draft_key = ? AND removed = 0",
    [SQL_PLAN_KEPT] = "SELECT id, " PLAN_PLAIN ", row_crc FROM plan WHERE site_id = ? AND night_mjd = ? AND "
		      "ifnull(telescope_id, 0) = ? AND kept = 1 AND removed = 0",
    [SQL_PLAN_BY_ID] = "SELECT id, " PLAN_PLAIN ", row_crc FROM plan WHERE id = ?",
    [SQL_PLAN_REVISIONS] =
	"SELECT ifnull(sum(p.rev), 0), ifnull(max(c.utc), ''), ifnull(max(p.kept AND NOT p.removed), 0) "
	"FROM plan p JOIN change_set c ON c.id = p.change_id "
	"WHERE site_id = ? AND night_mjd = ? AND ifnull(telescope_id, 0) = ?",
    /* what is said of a row is said of it and of its old rows */
    [SQL_PLAN_KEPT_EDITIONS] =
	"SELECT e.plan_id, e.edition FROM plan p JOIN plan_edition e ON e.plan_id = p.id "
	"WHERE site_id = ? AND night_mjd = ? AND ifnull(telescope_id, 0) = ? AND "
	"((p.kept AND p.edition = e.edition) OR EXISTS (SELECT 1 FROM plan_old o WHERE o.id = p.id AND "
	"o.kept AND "
	"o.edition = e.edition)) ORDER BY e.id DESC",
    [SQL_PLAN_ADD] = "INSERT INTO plan(id, " PLAN_PLAIN ", row_crc) VALUES(" TEN ", ?, ?)",
    [SQL_PLAN_UPDATE] = "UPDATE plan SET (" PLAN_PLAIN ", row_crc) = (" TEN ", ?) WHERE id = ? AND rev = ?",
    [SQL_PLAN_KEEP_OLD] =
	"INSERT INTO plan_old(id, " PLAN_PLAIN ", replaced_by, row_crc) VALUES(" TEN ", ?, ?, ?)",
    [SQL_EDITION_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM plan_edition",
    [SQL_EDITION_LAST] = "SELECT ifnull(max(edition), 0) FROM plan_edition WHERE plan_id = ?",
    [SQL_EDITION_OF_PLAN] =
	"SELECT id, " EDITION_PLAIN ", row_crc FROM plan_edition WHERE plan_id = ? AND edition = ?",
    [SQL_EDITION_ADD] =
	"INSERT INTO plan_edition(id, " EDITION_PLAIN ", row_crc) VALUES(" TEN ", ?, ?, ?, ?)",
    [SQL_ITEM_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM plan_item",
    [SQL_ITEMS_OF_EDITION] =
	"SELECT id, " ITEM_PLAIN ", row_crc FROM plan_item WHERE edition_id = ? ORDER BY place",
    [SQL_ITEM_KNOWN] = "SELECT count(*) FROM plan_edition e JOIN plan_item i ON i.edition_id = e.id "
		       "WHERE plan_id = ? AND item_key = ?",
    [SQL_ITEM_ADD] = "INSERT INTO plan_item(id, " ITEM_PLAIN ", row_crc) VALUES(" TEN ", ?, ?, ?)",
    [SQL_WINDOW_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM plan_window",
    [SQL_WINDOWS_OF_EDITION] = "SELECT " WINDOW_COLUMNS " FROM plan_item i JOIN plan_window w ON w.item_id = "
			       "i.id WHERE edition_id = ? ORDER BY i.place, w.place",
    [SQL_WINDOW_ADD] = "INSERT INTO plan_window(id, " WINDOW_PLAIN ", row_crc) VALUES(" TEN ", ?, ?, ?, ?)",
    [SQL_PLAN_MARK_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM plan_mark",
    [SQL_PLAN_MARKS_OF_PLAN] =
	"SELECT id, " PLAN_MARK_PLAIN ", row_crc FROM plan_mark WHERE plan_id = ? ORDER BY id",
    [SQL_PLAN_MARK_BY_KEY] =
	"SELECT id, " PLAN_MARK_PLAIN ", row_crc FROM plan_mark WHERE plan_id = ? AND item_key = ?",
    [SQL_PLAN_MARK_BY_ID] = "SELECT id, " PLAN_MARK_PLAIN ", row_crc FROM plan_mark WHERE id = ?",
    [SQL_PLAN_MARK_ADD] = "INSERT INTO plan_mark(id, " PLAN_MARK_PLAIN ", row_crc) VALUES(" TEN ", ?)",
    [SQL_PLAN_MARK_UPDATE] =
	"UPDATE plan_mark SET (" PLAN_MARK_PLAIN ", row_crc) = (" TEN ") WHERE id = ? AND rev = ?",
    [SQL_PLAN_MARK_KEEP_OLD] =
	"INSERT INTO plan_mark_old(id, " PLAN_MARK_PLAIN ", replaced_by, row_crc) VALUES(" TEN ", ?, ?)",

    [SQL_GOAL_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM goal",
    [SQL_GOAL_LOAD] = "SELECT id, " GOAL_PLAIN ", row_crc FROM goal ORDER BY target_id, band",
    [SQL_GOAL_OF_TARGET] = "SELECT id, " GOAL_PLAIN ", row_crc FROM goal WHERE target_id = ? AND band = ?",
    [SQL_GOAL_BY_ID] = "SELECT id, " GOAL_PLAIN ", row_crc FROM goal WHERE id = ?",
    [SQL_GOAL_ADD] = "INSERT INTO goal(id, " GOAL_PLAIN ", row_crc) VALUES(" TEN ", ?, ?)",
    [SQL_GOAL_UPDATE] = "UPDATE goal SET (" GOAL_PLAIN ", row_crc) = (" TEN ", ?) WHERE id = ? AND rev = ?",
    [SQL_GOAL_KEEP_OLD] =
	"INSERT INTO goal_old(id, " GOAL_PLAIN ", replaced_by, row_crc) VALUES(" TEN ", ?, ?, ?)",
    /* the newest item that has the mark's key, with its windows; marks are few: they lead the join */
    [SQL_GOAL_GOT] =
	"SELECT " PLAN_MARK_COLUMNS ", " WINDOW_COLUMNS ", " ITEM_COLUMNS ", " PLAN_COLUMNS
	", ifnull(t.band, '') "
	"FROM plan_mark k CROSS JOIN plan p ON p.id = k.plan_id CROSS JOIN plan_item i ON i.id = "
	"(SELECT max(j.id) FROM plan_edition d JOIN plan_item j ON j.edition_id = d.id "
	"WHERE d.plan_id = k.plan_id AND j.item_key = k.item_key) "
	"CROSS JOIN plan_window w ON w.item_id = i.id LEFT JOIN telescope t ON t.id = p.telescope_id "
	"WHERE k.removed = 0 AND p.removed = 0 AND k.state IN ('done', 'partly') "
	"AND w.target_id IN (SELECT target_id FROM goal WHERE removed = 0) "
	"ORDER BY w.target_id, w.epoch, w.kind, p.site_id, ifnull(p.telescope_id, 0), k.id",
    [SQL_FIELD_STAR_NEXT] = "SELECT ifnull(max(id), 0) + 1 FROM field_star",
    [SQL_FIELD_STAR_LOAD] =
	"SELECT id, " FIELD_STAR_PLAIN ", row_crc FROM field_star ORDER BY target_id, role, id",
    [SQL_FIELD_STARS_OF_TARGET] =
	"SELECT id, " FIELD_STAR_PLAIN ", row_crc FROM field_star WHERE target_id = ? AND removed = 0",
    [SQL_FIELD_STAR_BY_ID] = "SELECT id, " FIELD_STAR_PLAIN ", row_crc FROM field_star WHERE id = ?",
    [SQL_FIELD_STAR_ADD] =
	"INSERT INTO field_star(id, " FIELD_STAR_PLAIN ", row_crc) VALUES(" TEN ", ?, ?, ?, ?)",
    [SQL_FIELD_STAR_UPDATE] =
	"UPDATE field_star SET (" FIELD_STAR_PLAIN ", row_crc) = (" TEN ", ?, ?, ?) WHERE id = ? AND rev = ?",
    [SQL_FIELD_STAR_KEEP_OLD] = "INSERT INTO field_star_old(id, " FIELD_STAR_PLAIN
				", replaced_by, row_crc) VALUES(" TEN ", " FIVE ")",

    [SQL_HISTORY_CHANGES] =
	"SELECT id, utc, who, verb, undoes, rev, row_crc FROM change_set ORDER BY id DESC",
    [SQL_HISTORY_ROWS] =
	"SELECT change_id, 0, id, name, 0 FROM target UNION ALL "
	"SELECT change_id, 0, id, name, 0 FROM target_old WHERE replaced_by <> change_id UNION ALL "
	"SELECT e.change_id, 1, target_id, name, version FROM ephemeris e JOIN target t ON t.id = target_id "
	"UNION ALL "
	"SELECT a.change_id, 2, target_id, alias, 0 FROM target_alias a UNION ALL "
	"SELECT change_id, 2, target_id, alias, 0 FROM target_alias_old WHERE replaced_by <> change_id "
	"UNION ALL "
	"SELECT change_id, 3, 0, name, 0 FROM site UNION ALL "
	"SELECT change_id, 3, 0, name, 0 FROM site_old WHERE replaced_by <> change_id UNION ALL "
	"SELECT k.change_id, 4, target_id, name, epoch FROM midtime_mark k JOIN midtime m ON m.id = k.id "
	"JOIN target t ON t.id = target_id UNION ALL "
	"SELECT k.change_id, 4, target_id, name, epoch FROM midtime_mark_old k JOIN midtime m ON m.id = k.id "
	"JOIN target t ON t.id = target_id WHERE k.replaced_by <> k.change_id "
	"UNION ALL "
	"SELECT change_id, 5, 0, name, 0 FROM telescope UNION ALL "
	"SELECT change_id, 5, 0, name, 0 FROM telescope_old WHERE replaced_by <> change_id UNION ALL "
	"SELECT change_id, 6, 0, span, first_mjd FROM allotment UNION ALL "
	"SELECT change_id, 6, 0, span, first_mjd FROM allotment_old WHERE replaced_by <> change_id "
	"UNION ALL "
	"SELECT change_id, 7, 0, " SETTING_WORDS ", 0 FROM setting UNION ALL "
	"SELECT change_id, 7, 0, " SETTING_WORDS ", 0 FROM setting_old WHERE replaced_by <> change_id "
	"UNION ALL "
	"SELECT change_id, 8, 0, draft, night_mjd FROM plan UNION ALL "
	"SELECT change_id, 8, 0, draft, night_mjd FROM plan_old WHERE replaced_by <> change_id UNION ALL "
	"SELECT k.change_id, 9, 0, " MARK_WORDS
	", night_mjd FROM plan_mark k JOIN plan p ON p.id = k.plan_id "
	"UNION ALL "
	"SELECT k.change_id, 9, 0, " MARK_WORDS ", night_mjd FROM plan_mark_old k "
	"JOIN plan p ON p.id = k.plan_id WHERE k.replaced_by <> k.change_id "
	"UNION ALL "
	"SELECT g.change_id, 10, target_id, name, 0 FROM goal g JOIN target t ON t.id = target_id UNION ALL "
	"SELECT g.change_id, 10, target_id, name, 0 FROM goal_old g JOIN target t ON t.id = target_id "
	"WHERE g.replaced_by <> g.change_id UNION ALL "
	"SELECT s.change_id, 11, target_id, " STAR_WORDS ", 0 FROM field_star s "
	"JOIN target t ON t.id = target_id UNION ALL "
	"SELECT s.change_id, 11, target_id, " STAR_WORDS ", 0 FROM field_star_old s "
	"JOIN target t ON t.id = target_id WHERE s.replaced_by <> s.change_id "
	"ORDER BY 1 DESC, 2, 3",

    [SQL_TARGET_TOUCHED] = TOUCHED("target"),
    [SQL_TARGET_AFTER] = AFTER("target", TARGET_PLAIN),
    [SQL_TARGET_BEFORE] = BEFORE("target", TARGET_PLAIN),
    [SQL_ALIAS_TOUCHED] = TOUCHED("target_alias"),
    [SQL_ALIAS_AFTER] = AFTER("target_alias", ALIAS_PLAIN),
    [SQL_ALIAS_BEFORE] = BEFORE("target_alias", ALIAS_PLAIN),
    [SQL_SITE_TOUCHED] = TOUCHED("site"),
    [SQL_SITE_AFTER] = AFTER("site", SITE_PLAIN),
    [SQL_SITE_BEFORE] = BEFORE("site", SITE_PLAIN),
    [SQL_MARK_TOUCHED] = TOUCHED("midtime_mark"),
    [SQL_MARK_AFTER] = AFTER("midtime_mark", MARK_PLAIN),
    [SQL_MARK_BEFORE] = BEFORE("midtime_mark", MARK_PLAIN),
    [SQL_TELESCOPE_TOUCHED] = TOUCHED("telescope"),
    [SQL_TELESCOPE_AFTER] = AFTER("telescope", TELESCOPE_PLAIN),
    [SQL_TELESCOPE_BEFORE] = BEFORE("telescope", TELESCOPE_PLAIN),
    [SQL_ALLOTMENT_TOUCHED] = TOUCHED("allotment"),
    [SQL_ALLOTMENT_AFTER] = AFTER("allotment", ALLOTMENT_PLAIN),
    [SQL_ALLOTMENT_BEFORE] = BEFORE("allotment", ALLOTMENT_PLAIN),
    [SQL_SETTING_TOUCHED] = TOUCHED("setting"),
    [SQL_SETTING_AFTER] = AFTER("setting", SETTING_PLAIN),
    [SQL_SETTING_BEFORE] = BEFORE("setting", SETTING_PLAIN),
    [SQL_PLAN_TOUCHED] = TOUCHED("plan"),
    [SQL_PLAN_AFTER] = AFTER("plan", PLAN_PLAIN),
    [SQL_PLAN_BEFORE] = BEFORE("plan", PLAN_PLAIN),
    [SQL_PLAN_MARK_TOUCHED] = TOUCHED("plan_mark"),
    [SQL_PLAN_MARK_AFTER] = AFTER("plan_mark", PLAN_MARK_PLAIN),
    [SQL_PLAN_MARK_BEFORE] = BEFORE("plan_mark", PLAN_MARK_PLAIN),
    [SQL_GOAL_TOUCHED] = TOUCHED("goal"),
    [SQL_GOAL_AFTER] = AFTER("goal", GOAL_PLAIN),
    [SQL_GOAL_BEFORE] = BEFORE("goal", GOAL_PLAIN),
    [SQL_FIELD_STAR_TOUCHED] = TOUCHED("field_star"),
    [SQL_FIELD_STAR_AFTER] = AFTER("field_star", FIELD_STAR_PLAIN),
    [SQL_FIELD_STAR_BEFORE] = BEFORE("field_star", FIELD_STAR_PLAIN),
    [SQL_CHANGE_BY_ID] = "SELECT id, utc, who, verb, undoes, rev, row_crc FROM change_set WHERE id = ?",

    [SQL_ALL_CHANGES] = "SELECT id, utc, who, verb, undoes, rev, row_crc FROM change_set",
    [SQL_ALL_TARGETS_OLD] = "SELECT id, " TARGET_PLAIN ", replaced_by, row_crc FROM target_old",
    [SQL_ALL_EPHEMERIDES] = "SELECT " EPHEMERIS_COLUMNS " FROM ephemeris",
    [SQL_ALL_ALIASES_OLD] = "SELECT id, " ALIAS_PLAIN ", replaced_by, row_crc FROM target_alias_old",
    [SQL_ALL_SITES_OLD] = "SELECT id, " SITE_PLAIN ", replaced_by, row_crc FROM site_old",
    [SQL_ALL_MIDTIMES] = "SELECT id, " MIDTIME_PLAIN ", row_crc FROM midtime",
    [SQL_ALL_MARKS] = "SELECT id, " MARK_PLAIN ", row_crc FROM midtime_mark",
    [SQL_ALL_MARKS_OLD] = "SELECT id, " MARK_PLAIN ", replaced_by, row_crc FROM midtime_mark_old",
    [SQL_ALL_SETTINGS] = "SELECT id, " SETTING_PLAIN ", row_crc FROM setting ORDER BY key",
    [SQL_ALL_SETTINGS_OLD] = "SELECT id, " SETTING_PLAIN ", replaced_by, row_crc FROM setting_old",
    [SQL_ALL_TELESCOPES_OLD] = "SELECT id, " TELESCOPE_PLAIN ", replaced_by, row_crc FROM telescope_old",
    [SQL_ALL_ALLOTMENTS_OLD] = "SELECT id, " ALLOTMENT_PLAIN ", replaced_by, row_crc FROM allotment_old",
    [SQL_ALL_PLANS] = "SELECT id, " PLAN_PLAIN ", row_crc FROM plan ORDER BY id",
    [SQL_ALL_PLANS_OLD] = "SELECT id, " PLAN_PLAIN ", replaced_by, row_crc FROM plan_old",
    [SQL_ALL_EDITIONS] = "SELECT id, " EDITION_PLAIN ", row_crc FROM plan_edition",
    [SQL_ALL_ITEMS] = "SELECT id, " ITEM_PLAIN ", row_crc FROM plan_item",
    [SQL_ALL_WINDOWS] = "SELECT id, " WINDOW_PLAIN ", row_crc FROM plan_window",
    [SQL_ALL_PLAN_MARKS] = "SELECT id, " PLAN_MARK_PLAIN ", row_crc FROM plan_mark",
    [SQL_ALL_PLAN_MARKS_OLD] = "SELECT id, " PLAN_MARK_PLAIN ", replaced_by, row_crc FROM plan_mark_old",
    [SQL_ALL_GOALS_OLD] = "SELECT id, " GOAL_PLAIN ", replaced_by, row_crc FROM goal_old",
    [SQL_ALL_FIELD_STARS_OLD] = "SELECT id, " FIELD_STAR_PLAIN ", replaced_by, row_crc FROM field_star_old",
    [SQL_HELD_EDITIONS] = "SELECT " EDITION_COLUMNS " " HELD "WHERE removed = 0 ORDER BY p.id",
    [SQL_HELD_ITEMS] = "SELECT " ITEM_COLUMNS " " HELD
		       "JOIN plan_item i ON i.edition_id = e.id WHERE removed = 0 ORDER BY p.id, i.place",
    [SQL_HELD_WINDOWS] = "SELECT " WINDOW_COLUMNS " " HELD
			 "JOIN plan_item i ON i.edition_id = e.id JOIN plan_window w ON w.item_id = i.id "
			 "WHERE removed = 0 ORDER BY p.id, i.place, w.place",
    [SQL_HELD_PLAN_MARKS] = "SELECT " PLAN_MARK_COLUMNS " FROM plan p JOIN plan_mark k ON k.plan_id = p.id "
			    "WHERE p.removed = 0 ORDER BY k.id",
    [SQL_INTEGRITY] = "PRAGMA integrity_check",
    [SQL_FOREIGN_KEYS] = "PRAGMA foreign_key_check",
    [SQL_WRONG_POINTERS] =
	"SELECT target.name FROM target JOIN ephemeris ON ephemeris.id = target.ephemeris_id "
	"WHERE ephemeris.target_id <> target.id",
    [SQL_MISSING_MARKS] =
	"SELECT midtime.id FROM midtime LEFT JOIN midtime_mark ON midtime_mark.id = midtime.id "
	"WHERE midtime_mark.id IS NULL",
    [SQL_WRONG_WINDOWS] = "SELECT w.id FROM plan_window w JOIN ephemeris x ON x.id = w.ephemeris_id "
			  "WHERE x.target_id <> w.target_id",
    [SQL_MISSING_ITEMS] = "SELECT id FROM plan_edition WHERE items <> "
			  "(SELECT count(*) FROM plan_item WHERE edition_id = plan_edition.id)",
    [SQL_MISSING_WINDOWS] = "SELECT id FROM plan_item WHERE windows <> "
			    "(SELECT count(*) FROM plan_window WHERE item_id = plan_item.id)",
    [SQL_COUNTS] = "SELECT (SELECT count(*) FROM target WHERE removed = 0), "
		   "(SELECT count(*) FROM ephemeris WHERE t0_day IS NOT NULL AND period_d IS NOT NULL), "
		   "(SELECT count(*) FROM site WHERE removed = 0), (SELECT count(*) FROM change_set), "
		   "(SELECT count(*) FROM telescope WHERE removed = 0), "
		   "(SELECT count(*) FROM allotment WHERE removed = 0), "
		   "(SELECT count(*) FROM plan WHERE removed = 0), "
		   "(SELECT count(*) FROM goal WHERE removed = 0)",
};
