/* SPDX-License-Identifier: MIT
 * The windows of a night: one path for night, season and benchmarks. */
#ifndef WANE_EPHEM_SEASON_H
#define WANE_EPHEM_SEASON_H

#include "ephem/window.h"

struct window_list {
	size_t n, room;
	struct window *w; /* the list's; window_list_free */
};
void window_list_free(struct window_list *list);

enum { KINDS_TRANSIT = 1, KINDS_OCCULTATION = 2, KINDS_BOTH = 3 };
struct window_choice {
	int kinds;
	bool all;          /* every event of the night, whatever spoils it */
	double min_chance; /* otherwise: see window_listed */
	const struct free_time *free; /* what is left of the night; NULL: all of it */
};
/* Replaces the list's contents by the night's windows of prepared[n], sorted by reserve start, then target name, kind, epoch. Windows borrow
 * prepared[] and the night. *hidden (may be NULL) counts events that are usable for some moment or have a chance of at least 0.0005 but are not listed. */
MUST_USE enum status night_windows(const struct night *night, const struct prepared prepared[], size_t n, const struct window_choice *choice,
				   struct window_list *list, long *hidden, struct err *e);

#endif
