/* SPDX-License-Identifier: MIT
 * The subcommands: one table with name, arguments, one line of help and function; main and --help read it. */
#ifndef WANE_TUI_COMMANDS_TABLE_H
#define WANE_TUI_COMMANDS_TABLE_H

#include "tui/env.h"
#include "tui/options.h"
#include "tui/run.h"

#include <stdint.h>
#include <stdio.h>

#define WANE_VERSION "0.1.0"

enum format { FORMAT_TEXT = 1, FORMAT_CSV = 2, FORMAT_JSON = 4, FORMAT_ICS = 8, FORMAT_HTML = 16 };

struct command {
	const char *name, *arguments, *help;
	const char *more;   /* further lines of its --help, or NULL */
	int groups;         /* options that it takes beside the common ones */
	int formats;        /* it can write */
	int words_max;      /* positional arguments behind its name; more are refused */
	int (*function)(const struct env *env, const struct options *o); /* exit code 0, 1 or 2 */
};
extern const struct command commands[];
extern const size_t command_count;
const struct command *command_find(const char *name); /* NULL none */

/* --format as a value; text when not given. ST_SYNTAX when it is none of `formats`. */
MUST_USE enum status format_of(const struct options *o, int formats, enum format *f, struct err *e);
void command_help(FILE *to, const struct command *c);
void general_help(FILE *to);

/* Exit codes. */
enum { EXIT_DONE = 0, EXIT_UNMET = 1, EXIT_USAGE = 2 };

int command_import(const struct env *env, const struct options *o);
int command_target(const struct env *env, const struct options *o);
int command_site(const struct env *env, const struct options *o);
int command_telescope(const struct env *env, const struct options *o);
int command_allot(const struct env *env, const struct options *o);
int command_goal(const struct env *env, const struct options *o);
int command_star(const struct env *env, const struct options *o);
int command_setting(const struct env *env, const struct options *o);
int command_sky(const struct env *env, const struct options *o);
int command_clock(const struct env *env, const struct options *o);
int command_night(const struct env *env, const struct options *o);
int command_plan(const struct env *env, const struct options *o);
int command_sheet(const struct env *env, const struct options *o);
int command_season(const struct env *env, const struct options *o);
int command_demo(const struct env *env, const struct options *o);
int command_drift(const struct env *env, const struct options *o);
int command_midtime(const struct env *env, const struct options *o);
int command_refit(const struct env *env, const struct options *o);
int command_history(const struct env *env, const struct options *o);
int command_undo(const struct env *env, const struct options *o);
int command_check(const struct env *env, const struct options *o);

/* Shared by night and demo: writes one night of an open run in the format asked for. */
int night_write(struct run *r, int32_t evening_mjd);
/* --explain: how the forecast of o->explain's windows of that night comes about, as text. */
int night_explain(struct run *r, int32_t evening_mjd);
/* Says on standard error that a date lies beyond the leap-second table, if so. */
void leap_note(const struct run *r, int32_t last_mjd);
/* Says on standard error which targets have too short a period to be counted, if any. */
void uncounted_note(const struct run *r);
/* False, and said, when several sites or places are given to a subcommand that takes one. */
bool one_site(const struct options *o, const char *command);
/* A usage fault: said, and exit code 2. */
int usage_fault(const char *word, const struct err *e);
/* UTC of the run's clock for change sets. */
struct change change_of(const struct run *r, const char *verb, char utc[UTC_TEXT_MAX]);

/* The fields of a telescope, for its --help. */
void telescope_help(FILE *to);
/* The stored settings, for theirs. */
void setting_help(FILE *to);

/* Index of o->word[1] among the verbs; every verb but `list` needs a name behind it. -1, and said, when it is none of them. */
int verb_of(const char *command, const char *const verbs[], int n, const struct options *o);

#endif
