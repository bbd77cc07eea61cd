/* SPDX-License-Identifier: MIT
 * Schema, from version 1 to 2: telescopes, allotted time, plans, goals, stars of a field. Shipped with
 * version 2: never edited. */
#include "db/schema_parts.h"

#include <stddef.h>

/* Ranges agree with the table of fields (telescopes.c); NULL: not given. */
#define TELESCOPE_BODY                                                                                       \
	"site_id INTEGER NOT NULL REFERENCES site(id),"                                                      \
	"name TEXT NOT NULL CHECK(length(name) BETWEEN 1 AND 80),"                                           \
	"name_key TEXT NOT NULL CHECK(length(name_key) BETWEEN 1 AND 80),"                                   \
	"slew_deg_s REAL CHECK(slew_deg_s BETWEEN 0.01 AND 100),"                                            \
	"settle_min REAL CHECK(settle_min BETWEEN 0 AND 120),"                                               \
	"filter_min REAL CHECK(filter_min BETWEEN 0 AND 60),"                                                \
	"field_arcmin REAL CHECK(field_arcmin BETWEEN 0 AND 600),"                                           \
	"mount TEXT NOT NULL CHECK(mount IN ('', 'german', 'fork', 'altaz')),"                               \
	"alt_min_deg REAL CHECK(alt_min_deg BETWEEN 0 AND 90),"                                              \
	"alt_max_deg REAL CHECK(alt_max_deg BETWEEN 0 AND 90),"                                              \
	"ha_east_h REAL CHECK(ha_east_h BETWEEN 0 AND 12),"                                                  \
	"ha_west_h REAL CHECK(ha_west_h BETWEEN 0 AND 12),"                                                  \
	"zenith_deg REAL CHECK(zenith_deg BETWEEN 0 AND 45),"                                                \
	"flip_min REAL CHECK(flip_min BETWEEN 0 AND 120),"                                                   \
	"flip_before_min REAL CHECK(flip_before_min BETWEEN 0 AND 360),"                                     \
	"flip_after_min REAL CHECK(flip_after_min BETWEEN 0 AND 360),"                                       \
	"aperture_m REAL CHECK(aperture_m BETWEEN 0.01 AND 100),"                                            \
	"obstruction REAL CHECK(obstruction BETWEEN 0 AND 0.95),"                                            \
	"throughput REAL CHECK(throughput BETWEEN 0.001 AND 1),"                                             \
	"band TEXT NOT NULL CHECK(length(band) <= 20),"                                                      \
	"pixel_arcsec REAL CHECK(pixel_arcsec BETWEEN 0.01 AND 100),"                                        \
	"gain_e_adu REAL CHECK(gain_e_adu BETWEEN 0.01 AND 100),"                                            \
	"read_noise_e REAL CHECK(read_noise_e BETWEEN 0 AND 1000),"                                          \
	"dark_e_s REAL CHECK(dark_e_s BETWEEN 0 AND 1000),"                                                  \
	"full_well_e REAL CHECK(full_well_e BETWEEN 100 AND 10000000),"                                      \
	"defocus_px REAL CHECK(defocus_px BETWEEN 0 AND 500),"                                               \
	"exposure_s REAL CHECK(exposure_s BETWEEN 0.001 AND 3600),"                                          \
	"dead_s REAL CHECK(dead_s BETWEEN 0 AND 600),"                                                       \
	"red_noise_ppt REAL CHECK(red_noise_ppt BETWEEN 0 AND 100),"                                         \
	"blocks TEXT NOT NULL CHECK(length(blocks) <= 400),"                                                 \
	"note TEXT NOT NULL CHECK(length(note) <= 255),"

/* Nights of 1900 to 2100, as MJD of their evening. */
#define NIGHT(column) column " INTEGER NOT NULL CHECK(" column " BETWEEN 15020 AND 88433),"

/* Where and when; telescope_id NULL: none in particular. */
#define ALLOTMENT_BODY                                                                                       \
	"site_id INTEGER NOT NULL REFERENCES site(id),"                                                      \
	"telescope_id INTEGER REFERENCES telescope(id)," NIGHT("first_mjd")                                  \
	    NIGHT("last_mjd") "span TEXT NOT NULL CHECK(length(span) BETWEEN 1 AND 120)," /* as typed */     \
			      "note TEXT NOT NULL CHECK(length(note) <= 255),"

#define PLAN_BODY                                                                                            \
	"site_id INTEGER NOT NULL REFERENCES site(id),"                                                      \
	"telescope_id INTEGER REFERENCES telescope(id)," NIGHT(                                              \
	    "night_mjd") "draft TEXT NOT NULL CHECK(length(draft) BETWEEN 1 AND 40),"                        \
			 "draft_key TEXT NOT NULL CHECK(length(draft_key) BETWEEN 1 AND 40),"                \
			 "kept INTEGER NOT NULL CHECK(kept IN (0, 1)),"

#define EDITION "edition INTEGER NOT NULL CHECK(edition BETWEEN 1 AND 1000000000),"

/* Bookkeeping times, `2026-04-22T03:00:00Z`. */
#define UTC(column) column " TEXT NOT NULL CHECK(length(" column ") = 20),"

/* What became of an item. */
#define PLAN_MARK_BODY                                                                                       \
	"plan_id INTEGER NOT NULL REFERENCES plan(id),"                                                      \
	"item_key TEXT NOT NULL CHECK(length(item_key) BETWEEN 1 AND 1000),"                                 \
	"state TEXT NOT NULL CHECK(state IN ('pinned', 'started', 'done', 'partly', 'lost')),"               \
	"cause TEXT NOT NULL CHECK(length(cause) <= 80),"                                                    \
	"note TEXT NOT NULL CHECK(length(note) <= 255)," UTC("marked_utc")

/* How many whole events and single limbs of a target are wanted; band '': any; until_mjd NULL: no last night.
 */
#define GOAL_BODY                                                                                            \
	"target_id INTEGER NOT NULL REFERENCES target(id),"                                                  \
	"whole INTEGER NOT NULL CHECK(whole BETWEEN 0 AND 1000),"                                            \
	"limb INTEGER NOT NULL CHECK(limb BETWEEN 0 AND 1000),"                                              \
	"band TEXT NOT NULL CHECK(length(band) <= 20),"                                                      \
	"until_mjd INTEGER CHECK(until_mjd BETWEEN 15020 AND 88433),"                                        \
	"note TEXT NOT NULL CHECK(length(note) <= 255),"                                                     \
	"since_utc TEXT NOT NULL CHECK(length(since_utc) BETWEEN 17 AND 23)," /* what ended later counts */

/* Stars of a target's field. A neighbour may have a distance in place of a position. */
#define FIELD_STAR_BODY                                                                                      \
	"target_id INTEGER NOT NULL REFERENCES target(id),"                                                  \
	"role TEXT NOT NULL CHECK(role IN ('comparison', 'guide', 'neighbour')),"                            \
	"name TEXT NOT NULL CHECK(length(name) <= 80),"                                                      \
	"ra_deg REAL CHECK(ra_deg >= 0 AND ra_deg < 360),"                                                   \
	"dec_deg REAL CHECK(dec_deg BETWEEN -90 AND 90),"                                                    \
	"sep_arcsec REAL CHECK(sep_arcsec BETWEEN 0 AND 600),"                                               \
	"mag REAL NOT NULL CHECK(mag BETWEEN -5 AND 40),"                                                    \
	"band TEXT NOT NULL CHECK(length(band) <= 20),"                                                      \
	"note TEXT NOT NULL CHECK(length(note) <= 255),"

#define NEVER_DELETED(table, what)                                                                           \
	"CREATE TRIGGER " table "_no_delete BEFORE DELETE ON " table " "                                     \
	"BEGIN SELECT raise(ABORT, '" what " is marked as removed, never deleted'); END;"
#define ONLY_ADDED(table)                                                                                    \
	"CREATE TRIGGER " table "_no_update BEFORE UPDATE ON " table " "                                     \
	"BEGIN SELECT raise(ABORT, 'history is never changed'); END;",                                       \
	    "CREATE TRIGGER " table "_no_delete BEFORE DELETE ON " table " "                                 \
	    "BEGIN SELECT raise(ABORT, 'history is never deleted'); END;"

const char *const schema_step_2[] = {
    "CREATE TABLE telescope(id INTEGER PRIMARY KEY," TELESCOPE_BODY REMOVED_BODY REV_BODY CRC_BODY
    ", UNIQUE(site_id, name_key)) STRICT;",
    "CREATE TABLE telescope_old(id INTEGER NOT NULL REFERENCES telescope(id)," TELESCOPE_BODY REMOVED_BODY
	REV_BODY OLD_TAIL,

    "CREATE TABLE allotment(id INTEGER PRIMARY KEY," ALLOTMENT_BODY REMOVED_BODY REV_BODY CRC_BODY
    ", CHECK(last_mjd >= first_mjd)) STRICT;",
    "CREATE UNIQUE INDEX allotment_listed ON allotment(site_id, ifnull(telescope_id, 0), first_mjd, "
    "last_mjd, span) WHERE removed = 0;",
    "CREATE TABLE allotment_old(id INTEGER NOT NULL REFERENCES allotment(id)," ALLOTMENT_BODY REMOVED_BODY
	REV_BODY OLD_TAIL,

    /* the edition that holds is checked at commit: plan and first edition come in together */
    "CREATE TABLE plan(id INTEGER PRIMARY KEY," PLAN_BODY EDITION REMOVED_BODY REV_BODY CRC_BODY
    ", FOREIGN KEY(id, edition) REFERENCES plan_edition(plan_id, edition) DEFERRABLE INITIALLY DEFERRED) "
    "STRICT;",
    /* a removed draft leaves its name to others; one draft of a night is kept */
    "CREATE UNIQUE INDEX plan_listed ON plan(site_id, night_mjd, ifnull(telescope_id, 0), draft_key) "
    "WHERE removed = 0;",
    "CREATE UNIQUE INDEX plan_kept ON plan(site_id, night_mjd, ifnull(telescope_id, 0)) "
    "WHERE removed = 0 AND kept = 1;",
    "CREATE TABLE plan_old(id INTEGER NOT NULL REFERENCES plan(id)," PLAN_BODY EDITION REMOVED_BODY REV_BODY
	OLD_TAIL,

    "CREATE TABLE plan_edition(id INTEGER PRIMARY KEY,"
    "plan_id INTEGER NOT NULL REFERENCES plan(id)," EDITION
    "limits TEXT NOT NULL CHECK(length(limits) <= 20000)," /* name=value, tab between */
    "leap_date TEXT NOT NULL CHECK(length(leap_date) <= 20),"
    "worth REAL NOT NULL CHECK(worth BETWEEN 0 AND 1e12),"
    "bound REAL NOT NULL CHECK(bound BETWEEN 0 AND 1e12),"
    "optimal INTEGER NOT NULL CHECK(optimal IN (0, 1)),"
    "choices TEXT NOT NULL CHECK(length(choices) <= 100000),"	 /* lines */
    "left_out TEXT NOT NULL CHECK(length(left_out) <= 1000000)," /* lines */
    "items INTEGER NOT NULL CHECK(items BETWEEN 0 AND 1000)," REV_BODY CRC_BODY
    ", UNIQUE(plan_id, edition)) STRICT;",

    "CREATE TABLE plan_item(id INTEGER PRIMARY KEY,"
    "edition_id INTEGER NOT NULL REFERENCES plan_edition(id),"
    "place INTEGER NOT NULL CHECK(place BETWEEN 1 AND 1000),"
    "item_key TEXT NOT NULL CHECK(length(item_key) BETWEEN 1 AND 1000)," UTC("slew_by_utc") UTC(
	"start_utc") "latest_start_utc TEXT NOT NULL CHECK(length(latest_start_utc) IN (0, 20))," /* '': none
												     holds */
    UTC("end_utc") "worth REAL NOT NULL CHECK(worth BETWEEN 0 AND 1e12),"
		   "windows INTEGER NOT NULL CHECK(windows BETWEEN 0 AND 64)," REV_BODY CRC_BODY
		   ", UNIQUE(edition_id, place), UNIQUE(edition_id, item_key)) STRICT;",

    /* as it was shown: the version and the name of then */
    "CREATE TABLE plan_window(id INTEGER PRIMARY KEY,"
    "item_id INTEGER NOT NULL REFERENCES plan_item(id),"
    "place INTEGER NOT NULL CHECK(place BETWEEN 1 AND 64),"
    "target_id INTEGER NOT NULL REFERENCES target(id),"
    "ephemeris_id INTEGER NOT NULL REFERENCES ephemeris(id),"
    "target TEXT NOT NULL CHECK(length(target) BETWEEN 1 AND 80),"
    "kind TEXT NOT NULL CHECK(kind IN ('transit', 'occultation')),"
    "epoch INTEGER NOT NULL CHECK(epoch BETWEEN -2000000000 AND 2000000000),"
    "variant TEXT NOT NULL CHECK(variant IN ('whole', 'short', 'ingress', 'egress')),"
    "worth REAL NOT NULL CHECK(worth BETWEEN 0 AND 1e12),"
    "figures TEXT NOT NULL CHECK(length(figures) <= 20000)," /* name=value, tab between */
    REV_BODY CRC_BODY ", UNIQUE(item_id, place)) STRICT;",
    "CREATE INDEX plan_window_by_target ON plan_window(target_id, epoch);",

    "CREATE TABLE plan_mark(id INTEGER PRIMARY KEY," PLAN_MARK_BODY REMOVED_BODY REV_BODY CRC_BODY
    ", UNIQUE(plan_id, item_key)) STRICT;",
    "CREATE TABLE plan_mark_old(id INTEGER NOT NULL REFERENCES plan_mark(id)," PLAN_MARK_BODY REMOVED_BODY
	REV_BODY OLD_TAIL,

    "CREATE TABLE goal(id INTEGER PRIMARY KEY," GOAL_BODY REMOVED_BODY REV_BODY CRC_BODY
    ", UNIQUE(target_id, band), CHECK(whole + limb > 0)) STRICT;",
    "CREATE TABLE goal_old(id INTEGER NOT NULL REFERENCES goal(id)," GOAL_BODY REMOVED_BODY REV_BODY OLD_TAIL,

    "CREATE TABLE field_star(id INTEGER PRIMARY KEY," FIELD_STAR_BODY REMOVED_BODY REV_BODY CRC_BODY
    ", CHECK((ra_deg IS NULL) = (dec_deg IS NULL) AND (ra_deg IS NULL) = (sep_arcsec IS NOT NULL)), "
    "CHECK(role = 'neighbour' OR ra_deg IS NOT NULL)) STRICT;",
    "CREATE UNIQUE INDEX field_star_guide ON field_star(target_id) WHERE removed = 0 AND role = 'guide';",
    "CREATE INDEX field_star_by_target ON field_star(target_id);",
    "CREATE TABLE field_star_old(id INTEGER NOT NULL REFERENCES field_star(id)," FIELD_STAR_BODY REMOVED_BODY
	REV_BODY OLD_TAIL,

    NEVER_DELETED("telescope", "a telescope"),
    NEVER_DELETED("allotment", "an allotment"),
    NEVER_DELETED("plan", "a plan"),
    NEVER_DELETED("plan_mark", "a mark"),
    NEVER_DELETED("goal", "a goal"),
    NEVER_DELETED("field_star", "a star"),
    ONLY_ADDED("telescope_old"),
    ONLY_ADDED("allotment_old"),
    ONLY_ADDED("plan_old"),
    ONLY_ADDED("plan_edition"),
    ONLY_ADDED("plan_item"),
    ONLY_ADDED("plan_window"),
    ONLY_ADDED("plan_mark_old"),
    ONLY_ADDED("goal_old"),
    ONLY_ADDED("field_star_old"),
    NULL,
};
