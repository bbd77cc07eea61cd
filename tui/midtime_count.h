/* SPDX-License-Identifier: MIT
 * Stored and new mid-times on BJD_TDB, and the count of new ones: which epoch a time belongs to, outward from where the
 * ephemeris is known best, and whether that can be said. */
#ifndef WANE_TUI_MIDTIME_COUNT_H
#define WANE_TUI_MIDTIME_COUNT_H

#include "db/midtimes.h"
#include "ephem/refit.h"
#include "tui/run.h"

/* A measured time on BJD_TDB, for the target's direction (a scale that is not said is used as BJD_TDB). The delay of an occultation is that of the
 * target's own orbit, or half a period. ST_RANGE outside 1900..2100. */
MUST_USE enum status midtime_on_bjd(struct run *r, const struct prepared *p, const struct midtime_row *row, struct mid_time *out,
				    struct err *e);

enum count_result {
	COUNT_GOOD,
	COUNT_AMBIGUOUS, /* refused: 3 sigma of prediction and time reach half a period, or sigma is unknown */
	COUNT_BETWEEN,	 /* refused: it lies between two mid-times and fits neither */
	COUNT_IMPOSSIBLE /* refused: the target has no ephemeris to count by */
};
struct counted {
	enum count_result result;
	struct epoch_guess guess; /* of the time without a given epoch, when its turn came; of a given one, what the ephemeris says */
	double z;		  /* against the current ephemeris; NAN unknown */
};
/* Gives every row its epoch. Epochs that the table gives are taken as they are, but for this: when two or more of them all differ from a safe
 * count by the same number, the table counts from another T0; *shift (else 0) is added to them. out[n]. */
MUST_USE enum status midtimes_count(struct run *r, const struct prepared *p, struct midtime_text row[], size_t n, struct counted out[],
				    long *shift, struct err *e);
/* Why a row was refused, with the candidates: `can't be counted: epoch 411 means a period of 3.41 d, ...`. */
void count_refusal_text(const struct prepared *p, const struct counted *c, char *out, size_t n);

#define Z_WARN 3.0 /* common practice, no source */

#endif
