/* SPDX-License-Identifier: MIT
 * How the run's ephemerides age, as rows: what `wane drift` prints and the Drift page shows. Times of the future are seen from the
 * Earth's centre; dates on which a limit is passed are UTC at the barycentre. */
#ifndef WANE_TUI_DRIFT_ROWS_H
#define WANE_TUI_DRIFT_ROWS_H

#include "ephem/drift.h"
#include "tui/run.h"

#include <stdbool.h>
#include <stddef.h>

/* When sigma passes a limit. UNKNOWN: no sigma or no limit; NEVER: not before the year 2500. */
enum drift_when { WHEN_UNKNOWN, WHEN_NEVER, WHEN_ALREADY, WHEN_ON };
struct drift_date {
	enum drift_when when;
	struct utc utc; /* of WHEN_ON */
};

/* A coming window that would refresh the ephemeris. */
struct refresh {
	bool found;
	bool late;	    /* the best one: no window comes before the stale date, this one is after it */
	size_t site;	    /* in drift_table */
	int32_t evening_mjd; /* its night at that site */
	long epoch;
	struct utc mid;	    /* as seen there */
	double chance_done, gain_bits;
	double sigma_after_min; /* at the chosen date, if it succeeds */
};
enum refresh_search {
	REFRESH_NOT_ASKED,  /* not searched: --no-refresh, or no site */
	REFRESH_NOT_NEEDED, /* sigma stays below the limit until the chosen date, and nobody named the target */
	REFRESH_NO_CHANCE,  /* sigma unknown or the phase lost: no chance can be given */
	REFRESH_SEARCHED
};

struct drift_row {
	const struct prepared *prepared; /* the run's */
	bool counted;		 /* it has an ephemeris that can be counted; else all that follows is empty */
	long epoch_now, epoch_at; /* orbits completed since T0 */
	double x_now;		 /* the same with the phase */
	double sigma_now_min, sigma_at_min; /* NAN unknown */
	double limit_min;	 /* NAN: none (pad 0) */
	struct drift_date stale, lost, stale_after; /* stale_after: if the best refresh succeeds */
	long midtimes;		 /* stored mid-times that count in fits */
	bool has_midtime;
	struct utc last_midtime;
	long next_epoch;
	struct utc next_mid;
	enum refresh_search search;
	struct refresh first, best;
	uint32_t flags;
};

struct drift_choice {
	struct utc at;	      /* the chosen date */
	double limit_min;     /* NAN: each target's own */
	double precision_min; /* of a refreshing mid-time */
	bool refresh;	      /* search for windows */
	bool named;	      /* targets were named: search even where none is needed */
};
struct drift_table {
	struct drift_choice choice;
	struct utc now;
	size_t n_sites;
	struct site site[OPTION_NAMES_MAX];
	size_t n;
	struct drift_row *row; /* in the order of the run's prepared targets */
};

/* --at, --limit, --precision and --no-refresh of the run, with what stands where they are not given. ST_RANGE, ST_SYNTAX: the text begins
 * with the option. */
MUST_USE enum status drift_choice_of(const struct run *r, struct drift_choice *out, struct err *e);
/* Replaces the table (start with a zeroed one). Without a site refresh is not searched. */
MUST_USE enum status drift_table_make(struct drift_table *t, struct run *r, const struct drift_choice *choice, struct err *e);
void drift_table_free(struct drift_table *t);

/* What is to be known of a row at first sight, in words: `stale now; no errors published; time standard assumed`. "" for nothing. */
void drift_words(const struct drift_row *row, char *out, size_t n);

/* The stale limit of a target: (wanted baseline less least baseline) / pad [min]; NAN when the pad is 0. */
double drift_default_limit_min(const struct prepared *p);
/* When sigma passes the limit, seen from epoch x_now. */
struct drift_date drift_date_of(const struct ephemeris *eph, const struct leap_table *leap, double limit_min, double x_now);
/* The search alone (drift_search.c): fills first, best and stale_after of rows whose search is REFRESH_SEARCHED. */
MUST_USE enum status drift_search(struct drift_table *t, struct run *r, struct err *e);

/* What the search looks for, in one place for code and help. */
#define REFRESH_CHANCE_MIN 0.5	    /* of the first adequate window */
#define REFRESH_BEST_CHANCE_MIN 0.05 /* below that no window counts as the best one */
enum { REFRESH_BEST_DAYS = 183, REFRESH_FIRST_DAYS = 366 };

#endif
