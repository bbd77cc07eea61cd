/* SPDX-License-Identifier: MIT
 * The options of the command line: one table with name, argument and sentence; the parser and every --help read it. */
#ifndef WANE_TUI_OPTIONS_H
#define WANE_TUI_OPTIONS_H

#include "ephem/err.h"
#include "ephem/limits.h"
#include "ephem/near_word.h"

#include <stdbool.h>
#include <stdio.h>

enum { OPTION_NAMES_MAX = 64 };

/* Which subcommands take an option: a command says the groups that it takes. */
enum option_group {
	GROUP_COMMON = 1,  /* every subcommand */
	GROUP_COMPUTE = 2, /* wherever something is computed: limits, kind, UT1-UTC, threads */
	GROUP_WINDOWS = 4, /* where windows are listed: least chance, all */
	GROUP_SKY = 8,
	GROUP_CLOCK = 16,
	GROUP_IMPORT = 32,
	GROUP_SITE = 64,
	GROUP_DRIFT = 128,
	GROUP_MIDTIME = 256,
	GROUP_REFIT = 512,
	GROUP_UNDO = 1024,
	GROUP_PLAN = 2048,
	GROUP_SHEET = 4096,
	GROUP_GOAL = 8192,
	GROUP_STAR = 16384,
	GROUP_EXPLAIN = 1 << 20,
};

/* The values of an option that may be given again and again. */
struct option_values {
	const char *text[OPTION_NAMES_MAX];
	int n;
};

enum { OPTION_ROWS_MAX = 96 };
/* Options of one call, parsed; texts borrow from argv. NULL / NAN / false / 0: not given. */
struct options {
	const char *db, *settings, *telescope, *format, *out, *now, *radec, *at, *from, *to, *zone, *mask, *half;
	const char *site[OPTION_NAMES_MAX];
	int n_sites;
	const char *place[OPTION_NAMES_MAX];
	int n_places;
	const char *target[OPTION_NAMES_MAX];
	int n_targets;
	bool plain, force, all, dry_run, strict, adopt, help, version, no_allotments;
	double min_chance; /* NAN not given */
	double ut1_utc_s;  /* NAN not given */
	/* drift, midtime, refit, undo */
	const char *sort, *against, *epoch, *scale, *source, *jitter, *ref_epoch, *adopt_fit;
	bool no_refresh, formal, with_prior;
	double drift_limit_min, precision_min; /* NAN not given */
	int change;                            /* 0 not given */
	/* plan */
	struct option_values pin, drop, free_event, block, unblock, lost, unlost, poor, mark;
	const char *draft, *plan_from, *compare, *remove_draft, *cause, *note, *since;
	bool rebuild, afresh, keep, save, list;
	double moved_min; /* NAN not given */
	const char *explain; /* night */
	/* site, goal, star */
	struct option_values sky, extinction;
	const char *band, *until, *star_name;
	int kinds;         /* KINDS_*; 0 not given */
	int threads;       /* 0 not given */
	bool limit_given[LIM_COUNT];
	double limit[LIM_COUNT];
	const char *word[OPTION_NAMES_MAX]; /* positional arguments, the subcommand first */
	int n_words;
	bool given[OPTION_ROWS_MAX]; /* by row of the table */
};

/* Reads argv[1..argc). A word that begins with `--` is an option, `--name=value` too; whatever follows an option with an argument is its value.
 * After `--` all are words. A word like -12.5 is a word. Of a single option given twice the last one
 * holds. On a fault (unknown name, missing value, out of range) the text
 * begins with the option. */
MUST_USE enum status options_parse(struct options *o, int argc, char *const argv[], struct err *e);
/* ST_SYNTAX when an option was given that belongs to none of the groups: the message names it and the command. */
MUST_USE enum status options_allowed(const struct options *o, int groups, const char *command, struct err *e);
/* The lines of --help for these groups. */
void options_help(FILE *to, int groups);

/* A limit as text: a number, `auto` for baselines, `none` for the airmass. Used by options and by the settings file. */
MUST_USE enum status limit_parse(enum limit_id id, const char *text, double *value, struct err *e);
/* `transit`, `occultation`, `both`. */
MUST_USE enum status kinds_parse(const char *text, int *kinds, struct err *e);
const char *kinds_text(int kinds);

#endif
