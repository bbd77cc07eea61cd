/* SPDX-License-Identifier: MIT
 * Stored running orders. A plan belongs to a site, a telescope (0: the site's unnamed one) and a night and has a draft name; one draft of these is kept. Each time it is stored it
 * gets a new edition: items of an edition are only ever added, the plan's row says which edition holds. What is planned is stored as it
 * was shown: keys, ephemeris versions, figures, effective limits, the leap table's date. Marks (what became of an item) are rows of their own and
 * outlive editions. Texts are UTF-8; UTC texts `YYYY-MM-DDTHH:MM:SSZ`. */
#ifndef WANE_DB_PLANS_H
#define WANE_DB_PLANS_H

#include "db/store.h"
#include "ephem/geometry.h"

#include <stdbool.h>
#include <stddef.h>

struct plan_window_row {
	int64_t target_id, ephemeris_id; /* ephemeris_id as it was then */
	const char *target;		 /* the target's name then */
	enum event_kind kind;
	long epoch;
	const char *variant;		 /* whole, short, ingress, egress */
	double worth;
	const char *figures;		 /* name=value, tab between: the columns of the window as they were shown */
};
struct plan_item_row {
	const char *key;		 /* its windows' keys, joined: the same in every edition that has the same windows */
	const char *slew_by_utc, *start_utc, *latest_start_utc, *end_utc; /* latest_start_utc may be "" */
	double worth;
	size_t n;
	struct plan_window_row *window;
	/* of the mark; "" none yet. Not stored by plan_store */
	const char *state;		 /* pinned, started, done, partly, lost */
	const char *cause, *note, *marked_utc;
};
struct plan_row {
	int64_t id, site_id, telescope_id;
	int32_t night_mjd;
	const char *draft;		 /* 1..40 characters */
	bool kept;
	int edition;			 /* 1, 2, ...: of this plan; the newest unless another was asked for */
	const char *stored_utc, *who;	 /* of the change set that stored the edition */
	const char *limits;		 /* name=value, tab between: effective limits and rules of moving */
	const char *leap_date;		 /* until when the leap table was known to hold, `2026-06-28` */
	double worth, bound;
	bool optimal;
	const char *choices;		 /* lines that tui reads: pins, drops, blocks, lost and poor time */
	const char *left_out;		 /* lines: target, kind, epoch, reason, tab between */
	size_t n;
	struct plan_item_row *item;	 /* in order of time */
	size_t n_bad;			 /* marks with a wrong checksum: they count as none */
	char bad[96];			 /* names the first of them; "" */
	char *block;			 /* owns texts and arrays: plan_row_free */
};
struct plan_list {
	size_t n;
	struct plan_row *plan; /* without items; by night, telescope, draft */
	size_t n_bad;
	char bad[96];
	char *block;
};
/* All plans of a site (0: all) from one night to another, newest edition of each. */
MUST_USE enum status plans_list(struct store *s, int64_t site_id, int32_t first_mjd, int32_t last_mjd, struct plan_list *out, struct err *e);
void plan_list_free(struct plan_list *list);
/* One plan with items and marks. edition 0: the one that holds. ST_ABSENT: no such plan or edition. A row with a wrong checksum: ST_STORE, named; of a mark: n_bad. */
MUST_USE enum status plan_load(struct store *s, int64_t plan_id, int edition, struct plan_row *out, struct err *e);
/* The kept plan of a night (draft NULL), or a draft by name; ST_ABSENT (no message) when there is none. */
MUST_USE enum status plan_find(struct store *s, int64_t site_id, int64_t telescope_id, int32_t night_mjd, const char *draft, struct plan_row *out,
			       struct err *e);
void plan_row_free(struct plan_row *p);

/* What the plans of a night have been through: for calendars, in which a revision must never have a lower number than one before. */
struct plan_past {
	int64_t revisions;	/* how often rows of the night's plans were stored, drafts, undos and removals included: never falls; 0 no plan ever */
	char revised_utc[24];	/* of the newest of these changes; "" none */
	bool kept;		/* a plan is kept now */
	size_t n;		/* editions that were kept at some time, newest first; of plans that are in no list any more too */
	struct plan_edition_id {
		int64_t plan_id;
		int edition;
	} *was_kept;
};
MUST_USE enum status plan_past_load(struct store *s, int64_t site_id, int64_t telescope_id, int32_t night_mjd, struct plan_past *out, struct err *e);
void plan_past_free(struct plan_past *past);
/* plan_load for plans that are in no list any more too. */
MUST_USE enum status plan_load_past(struct store *s, int64_t plan_id, int edition, struct plan_row *out, struct err *e);

/* Inside a change set. Stores `p` as a new edition of its draft (made when it does not exist; id, edition, stored_utc, who are filled in from the store's side into *id, *edition). keep: this
 * draft becomes the kept one of its night, another loses that. based_on: the edition that the caller saw (0: there was none): ST_CONFLICT when the store has another by now. */
MUST_USE enum status plan_store(struct store *s, const struct plan_row *p, bool keep, int based_on, int64_t *id, int *edition, struct err *e);
/* Makes a draft the kept one. */
MUST_USE enum status plan_keep(struct store *s, int64_t plan_id, struct err *e);
/* Takes a draft out of the lists (its editions and marks stay in history). */
MUST_USE enum status plan_remove(struct store *s, int64_t plan_id, struct err *e);
/* Marks an item by its key; state "" takes the mark away. cause, note may be "". ST_ABSENT: no item of any edition has that key. */
MUST_USE enum status plan_mark(struct store *s, int64_t plan_id, const char *key, const char *state, const char *cause, const char *note,
			       const char *marked_utc, struct err *e);

#endif
