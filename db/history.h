/* SPDX-License-Identifier: MIT
 * Change sets, and undoing them. An undo is a new change set; it is applied only where each row still has the rev that the old change left. */
#ifndef WANE_DB_HISTORY_H
#define WANE_DB_HISTORY_H

#include "db/store.h"

#include <stddef.h>

struct change_row {
	int64_t id;
	char utc[24], who[64], verb[64];
	char what[200];   /* which rows: `target Tern 14 b`, `381 targets, 381 ephemerides` */
	bool undone;      /* a later change took it back */
};
/* Newest first; target_id 0: all. *rows is the caller's to free. */
MUST_USE enum status history_list(struct store *s, int64_t target_id, struct change_row **rows, size_t *n, struct err *e);
/* Takes a change back (id 0: the newest that is no undo and not undone). Begins and commits its own change set. ST_CONFLICT: a row was changed since; the
 * message names it and both values; nothing is changed. ST_ABSENT: nothing to undo. *undone_id: which one. */
MUST_USE enum status history_undo(struct store *s, int64_t change_id, const struct change *c, int64_t *undone_id, struct err *e);

/* Makes a stored version the current one. Inside a change set. ST_ABSENT no such version. */
MUST_USE enum status ephemeris_adopt(struct store *s, int64_t target_id, int version, struct err *e);
/* Digest of everything that lists show (targets, current ephemerides, mid-times, sites, telescopes, allotments, settings, plans, goals, stars of fields): equal before a change and after its undo. */
MUST_USE enum status store_digest(struct store *s, char out[33], struct err *e);

#endif
