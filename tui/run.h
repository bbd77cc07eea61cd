/* SPDX-License-Identifier: MIT
 * What one run works with: clock, limits, store, targets and site, put together from the command line, the settings file and the store.
 * Subcommands and pages get their data from here: store -> arrays -> night -> windows. */
#ifndef WANE_TUI_RUN_H
#define WANE_TUI_RUN_H

#include "db/allotments.h"
#include "db/field_stars.h"
#include "db/goals.h"
#include "db/sites.h"
#include "db/store.h"
#include "db/targets.h"
#include "db/telescopes.h"
#include "db/text_clean.h"
#include "ephem/observing.h"
#include "ephem/season.h"
#include "tui/env.h"
#include "tui/options.h"
#include "tui/plan_time.h"
#include "tui/settings.h"
#include "tui/sheets/out.h"
#include "tui/stored_keys.h"
#include "tui/zone.h"

#include <stdbool.h>

struct run {
	const struct env *env;
	const struct options *options;
	struct leap_table leap;     /* built in, extended by the settings file */
	struct earth_clock clock;
	struct wall_clock wall;
	struct settings settings;   /* as read from the settings file */
	struct limits limits;       /* of the run: built in < settings < telescope < option (targets' own are laid over in prepare_target) */
	struct store *store;        /* NULL: nothing stored yet */
	char db_path[512];
	struct site_list sites;
	struct target_list targets; /* all that are stored, or the one of --radec */
	struct site site;           /* the chosen one; name "" when none could be chosen. Its texts are the two below */
	char site_name[NAME_BYTES_MAX], site_zone[256];
	struct mask site_mask;      /* that of the chosen site; n 0: none */
	struct mask given_mask;     /* of --mask */
	bool mask_given;            /* --mask stands for the stored mask of the site chosen first, mask_site_id (0: a place) */
	bool mask_taken;
	int64_t mask_site_id;
	struct zone *zone;          /* of the chosen site; NULL: unknown, UTC is shown */
	struct half_rule half;      /* where the chosen site's nights are halved */
	struct telescope_list telescopes; /* of all sites */
	struct telescope telescope; /* the chosen one, of the chosen site; telescope_empty() when none. Its texts are in telescope_text */
	bool has_telescope;
	bool past; /* site or telescope were removed: only what is stored of their plans can be shown */
	char *telescope_text;
	struct allotment_list allotments; /* of all sites */
	struct stored_values stored; /* settings that lie in the store */
	struct observing observing;  /* of the chosen telescope and site; what windows forecast with is run_observing */
	struct goal_list goals;      /* of all targets, as are the next two */
	struct goal_got_list got;
	struct field_star_list stars;
	struct observed *observed;   /* [targets.n], borrowed by prepared */
	struct goal *wish;           /* borrowed by observed */
	uint32_t *star;             /* [targets.n] */
	struct prepared *prepared;  /* [targets.n]: first those of --target, or all; the others behind them for their siblings' sake */
	size_t n_prepared;
	struct sun_memo *memo;
	int kinds;
};

/* Options to run. Which of store, site and targets are needed is said by `needs`; a missing store reads as empty with a note on standard error.
 * NEED_SITE refuses when no site can be chosen; NEED_FIRST_SITE takes the first by name where several are stored and none is named.
 * --telescope chooses one of the site's telescopes; without it the one that the site has as its usual one (wane site set --telescope) is taken, else the only one of the
 * site, and none where there are several, or several sites are named.
 * Order: --place, --site, the settings file, the only stored one. On failure nothing is left open and e->text begins with its own
 * `WORD: ` or `FILE:LINE:COLUMN: ` (print with diagnose_whole). Exit code of the fault: 2 for a value outside a range or a site or
 * telescope that does not exist, 1 else. */
enum run_needs { NEED_STORE = 1, NEED_SITE = 2, NEED_TARGETS = 4, NEED_WRITE = 8, NEED_FIRST_SITE = 16 };
MUST_USE enum status run_open(struct run *r, const struct env *env, const struct options *o, int needs, int *exit_code, struct err *e);
/* The same on a store that is open already (demo, tests); it becomes the run's and is closed with it, also on failure. */
MUST_USE enum status run_open_on(struct run *r, struct store *store, const struct env *env, const struct options *o, int needs,
				 int *exit_code, struct err *e);
void run_close(struct run *r);
/* out_open for the run's --out. Refused, whatever --force says: the database of the run, its journal, the settings file. */
MUST_USE enum status run_out_open(const struct run *r, struct out *out, struct err *e);
/* All sites of a run that may have several: each --place and --site in order, else the chosen one. *n at most OPTION_NAMES_MAX.
 * ST_RANGE when --mask was given for more than one. */
MUST_USE enum status run_all_sites(struct run *r, struct site out[], size_t *n, struct err *e);
/* Chooses the site by its place in r->sites (site switch); reopens the zone. --mask stays with the site that it was given for. The telescope is chosen anew among the site's; where that
 * changes the limits, r->prepared is filled again in its place. */
MUST_USE enum status run_choose_site(struct run *r, size_t index, struct err *e);
/* Key of a site's half rule among the stored settings (db/stored_settings.h). */
enum { HALF_KEY_BYTES = 32 };
void run_half_key(int64_t site_id, char out[HALF_KEY_BYTES]);
/* Keys of what else is stored of a site: how dark its moonless zenith is and what its air takes, by band; its usual telescope, by id (band is not looked at). */
enum site_key { SITE_SKY, SITE_EXTINCTION, SITE_TELESCOPE };
enum { SITE_KEY_BYTES = 48 };
void run_site_key(enum site_key kind, int64_t site_id, enum band_id band, char out[SITE_KEY_BYTES]);
/* The number stored; NAN: none. What can't be read is told of. */
double run_site_value(const struct run *r, enum site_key kind, int64_t site_id, enum band_id band);
/* What the windows of a site forecast with; NULL: no telescope there, or one without aperture or band. */
const struct observing *run_observing(const struct run *r, const struct site *site);
/* Rules of a plan: built in < telescope, and the shares from the stored settings. */
struct plan_rules; /* ephem/night_plan.h */
struct plan_rules run_plan_rules(const struct run *r);
/* Loads targets, sites, telescopes and allotments again (another program changed the store, or this one did). */
MUST_USE enum status run_reload(struct run *r, struct err *e);

/* Least chance of a listed window where --min-chance is not given. */
#define MIN_CHANCE_MACHINE 0.05
#define MIN_CHANCE_PEOPLE 0.5
double run_min_chance(const struct run *r, bool people);

/* One night with its windows: of the chosen site, or of any. Start with a zeroed view; it can be filled again and again. The windows borrow
 * the view's night, the run's targets and the site. */
struct night_view {
	struct night night;
	struct night_dark dark; /* at the run's Sun limit */
	struct window_list list;
	long hidden;
	struct free_time free; /* the site's allotments of that night, less what a plan takes */
	bool cut;	       /* an allotment, a block or lost time cuts it */
	int allotments;	       /* stored for that night, for the chosen telescope or any; 0: the whole night is free */
	bool allotted_elsewhere; /* none for that night, but other nights of the site have some */
	char allotment_fault[400]; /* which of them allots nothing, and why; "" none */
};
MUST_USE enum status run_night(struct run *r, int32_t evening_mjd, bool people, struct night_view *v, struct err *e);
MUST_USE enum status run_night_at(struct run *r, const struct site *site, int32_t evening_mjd, bool people, struct night_view *v,
				  struct err *e);
/* The same without its windows, which stay as they were: for those who cut the night further before they ask for them. */
MUST_USE enum status run_night_free(struct run *r, const struct site *site, int32_t evening_mjd, struct night_view *v, struct err *e);
void night_view_free(struct night_view *v);
/* Says on standard error which allotments of the night allot nothing, and that none is stored for it where other nights have some. */
void run_night_notes(const struct night_view *v);
/* The run's telescope where it stands at that site; NULL else: what a night is planned for. */
const struct telescope *run_telescope_at(const struct run *r, const struct site *site);
/* What typed times mean in a night of the chosen site. Borrows r and n. */
struct plan_clock run_plan_clock(const struct run *r, const struct night *n);
/* Tonight: the night that contains now. */
int32_t run_tonight(const struct run *r);

#endif
