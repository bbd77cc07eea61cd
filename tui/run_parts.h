/* SPDX-License-Identifier: MIT
 * Parts of opening and filling a run that have files of their own. Only run.c and run_night.c call them. */
#ifndef WANE_TUI_RUN_PARTS_H
#define WANE_TUI_RUN_PARTS_H

#include "tui/run.h"

/* One fault of the opening, begun with its word. */
enum status run_worded(struct err *e, const char *word, const struct err *why);

/* --- run_prepare.c --- */
/* Fills r->prepared; into the arrays that are there, if any, so that windows of before go on pointing at their targets. */
MUST_USE enum status run_prepare(struct run *r, struct err *e);

/* --- run_telescope.c --- */
/* Loads telescopes and allotments; rows that are left out are told of. */
MUST_USE enum status run_load_telescopes(struct run *r, struct err *e);
/* Frees both lists; the chosen telescope stays. */
void run_drop_telescopes(struct run *r);
/* Telescope and half rule of the chosen site. named: --telescope must be one of the site's; else it is only preferred, behind the telescope that was chosen before. ST_RANGE
 * when it is none of them. */
MUST_USE enum status run_choose_telescope(struct run *r, bool named, struct err *e);
/* The half rule of any site; one that can't be read is told of and taken as dark. */
void run_half_rule(const struct run *r, int64_t site_id, struct half_rule *out);
/* The telescope's limits over those of the run. */
void run_put_telescope_limits(struct run *r);

/* --- run_observing.c --- */
/* Stored settings, goals, what was got of them, stars of fields. */
MUST_USE enum status run_load_observing(struct run *r, struct err *e);
void run_drop_observing(struct run *r);
/* r->observing from telescope, site and settings. */
void run_take_observing(struct run *r);
/* What is known of each target, laid at r->prepared: after run_prepare's own work, and after another site or telescope was chosen. */
MUST_USE enum status run_fill_observed(struct run *r, struct err *e);
/* --- run_past.c --- */
/* A site (of the chosen site, a telescope) that was removed, by name, for the commands that show stored plans: said, and r->past set. NULL none.
 * *out is the caller's to free either way and owns what is returned. */
const struct site *run_past_site(struct run *r, const char *name, struct site_list *out);
const struct telescope *run_past_telescope(struct run *r, const char *name, struct telescope_list *out);

/* --- run_allotted.c --- */
/* Cuts the view's free time by the site's allotments. v->night is built. */
void run_cut_by_allotments(const struct run *r, struct night_view *v);

#endif
