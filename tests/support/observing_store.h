/* SPDX-License-Identifier: MIT
 * A store in memory with the invented observatory, for tests of what hangs on a site. */
#ifndef WANE_TESTS_SUPPORT_OBSERVING_STORE_H
#define WANE_TESTS_SUPPORT_OBSERVING_STORE_H

#include "db/plans.h"
#include "db/store.h"

/* Fails the test with the message unless st is ST_OK. */
void must_at(const char *file, int line, enum status st, const struct err *e);
#define must(st, e) must_at(__FILE__, __LINE__, st, e)

/* A store in memory with site 1, Tern Hill, site 2, Tern Cliff, and targets `Tern 1 b`, ... of ids 1..targets
 * with an ephemeris of the same id. Change 1. */
struct store *observing_store(int targets);
/* Puts them into an open store; ids as above where it is empty. */
void observing_fill(struct store *s, int targets);
void change_begin(struct store *s, const char *verb);
void change_commit(struct store *s);
/* Runs SQL that a checksum doesn't know of. */
void change_behind(struct store *s, const char *sql);
/* Faults of the check; `says` gets its lines. */
int check_faults(struct store *s, char says[4096]);
/* Newest entry of history in words. */
void newest_words(struct store *s, char out[200]);
struct digest_text {
	char text[33];
};
struct digest_text digest_now(struct store *s);

/* A plan to store: of one item of one window. It points into itself, so it stays where it was made. */
struct small_plan {
	struct plan_window_row window;
	struct plan_item_row item;
	struct plan_row plan;
};
/* The draft main of site 1, night 61152: target 1 with its ephemeris, whole; all times of the item are `utc`.
 * Texts are borrowed. */
void small_plan_make(struct small_plan *p, const char *key, const char *utc);

#endif
