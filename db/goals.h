/* SPDX-License-Identifier: MIT
 * Goals: how many whole events and single limbs of a target are wanted, in which band, until which night; and
 * what the marks of stored plans say was got of them. */
#ifndef WANE_DB_GOALS_H
#define WANE_DB_GOALS_H

#include "db/store.h"
#include "ephem/bands.h"

#include <stdbool.h>
#include <stddef.h>

enum { GOAL_EVENTS_MAX = 1000, GOAL_UTC_BYTES = 24 };

struct goal_row {
	int64_t id, target_id;
	int whole, limb;   /* wanted, 0..GOAL_EVENTS_MAX, not both 0 */
	const char *band;  /* a name of bands.h; "" any */
	int32_t until_mjd; /* last night; 0 none */
	const char *note;  /* at most 255 characters */
	/* when it was first set, as UTC text: what ended later counts. Setting it again keeps it, setting it
	 * after a removal begins anew. Not read by goal_set */
	const char *since_utc;
};
struct goal_list {
	size_t n;
	struct goal_row *goal; /* by target id, band */
	char *block;
	size_t n_bad;
	char bad[96];
};
MUST_USE enum status goals_load(struct store *s, struct goal_list *out, struct err *e);
void goal_list_free(struct goal_list *list);
/* The goals of a target, which stand together; *n 0 and NULL when it has none. */
const struct goal_row *goals_of(const struct goal_list *list, int64_t target_id, size_t *n);

/* Inside a change set. A target has one goal a band: what is there is replaced. The band is stored under its
 * name of bands.h. ST_ABSENT: no such target. */
MUST_USE enum status goal_set(struct store *s, const struct goal_row *g, struct err *e);
MUST_USE enum status goal_remove(struct store *s, int64_t target_id, const char *band, struct err *e);

/* An event of a target with a goal that a listed plan's mark says was got. An event that several drafts of
 * one night and telescope say was got is there once; two telescopes got it twice. */
struct goal_got {
	int64_t target_id;
	bool whole;	   /* done whole or with a cut baseline; else a limb: one alone, or partly */
	enum band_id band; /* of the plan's telescope; BAND_NONE: not known */
	int32_t night_mjd; /* of the plan */
	char end_utc[GOAL_UTC_BYTES]; /* of the item */
};
struct goal_got_list {
	size_t n;
	struct goal_got *got; /* by target id */
	size_t n_bad;	      /* left out because a checksum is wrong */
	char bad[96];
};
MUST_USE enum status goals_got_load(struct store *s, struct goal_got_list *out, struct err *e);
void goal_got_list_free(struct goal_got_list *list);
/* What was got of a goal, of got[n] of any targets in order of their ids: ended after it was set, on a night
 * up to its last, in its band where it has one and that of the telescope is known. */
void goal_count(const struct goal_row *g, const struct goal_got got[], size_t n, int *whole, int *limb);
/* What is still wanted; a whole event more than wanted stands for a limb. */
void goal_left(const struct goal_row *g, int got_whole, int got_limb, int *whole, int *limb);

#endif
