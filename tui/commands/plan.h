/* SPDX-License-Identifier: MIT
 * The plan command in its parts. */
#ifndef WANE_TUI_COMMANDS_PLAN_H
#define WANE_TUI_COMMANDS_PLAN_H

#include "tui/commands/table.h"
#include "tui/plan_make.h"
#include "tui/sheets/out.h"

/* What the options of a call wish of a plan; costs are left out. Borrows o. */
struct plan_wish plan_wish_of(const struct options *o);
/* Says a fault of plan_get and its like; the exit code: 2 where something that was typed is wrong. */
int plan_fault(const struct err *e);
/* False, and said, when a call gives what no running order can be made for: several sites, or a position
 * without events. */
bool plan_options_fit(const struct options *o, const char *command);
/* Says of a stored plan, which is shown as it was stored, what was given and not used. */
void plan_unused_note(const struct options *o, const char *command);

/* Says what of a stored plan could not be read. */
void plan_damage_note(const struct plan_view *v);
/* Says that a plan of the night is kept for another telescope of the site, or for none, where this one has none. */
void plan_kept_elsewhere_note(struct run *r, int32_t evening_mjd, const char *command);

/* The drafts of a night. out: committed or abandoned, as by plan_compare_write. */
int plan_list_write(struct run *r, int32_t evening_mjd, enum format format, struct out *out);
/* The plan against the draft --compare, in words. */
int plan_compare_write(struct run *r, int32_t evening_mjd, enum format format, struct out *out);
int plan_remove_draft(struct run *r, int32_t evening_mjd, const char *draft);

#endif
