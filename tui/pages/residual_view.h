/* SPDX-License-Identifier: MIT
 * A target's stored mid-times against the linear or the quadratic fit to them: residuals with error bars, the
 * chosen one's details, taking times out of the fit and in again. */
#ifndef WANE_TUI_PAGES_RESIDUAL_VIEW_H
#define WANE_TUI_PAGES_RESIDUAL_VIEW_H

#include "tui/fit_view.h"
#include "tui/midtime_mark.h"
#include "tui/parts/plot.h"
#include "tui/parts/text_view.h"

#include <stdbool.h>

struct residual_view {
	struct fit_view fits;
	bool shown;			 /* there are fits */
	const struct prepared *prepared; /* borrowed from the run; NULL: closed */
	int64_t target_id;		 /* of the target shown last */
	bool quadratic;
	size_t chosen;
	int rows, cols;
	char title[NAME_BYTES_MAX + 80];
	char why[544]; /* no fit can be shown: why */
	struct text_view text;
	struct plot plot;
};
/* Reads the mid-times again and fits them; the chosen one stays. Where they can't be fitted the view says
 * why. ST_OK but for the store's and memory's faults. */
MUST_USE enum status residual_view_load(struct residual_view *v, struct run *run, const struct prepared *p,
					struct err *e);
void residual_view_close(struct residual_view *v);
void residual_view_size(struct residual_view *v, int rows, int cols);
void residual_view_choose(struct residual_view *v, long to);
/* Lays against the other fit; false where there is no quadratic one. */
bool residual_view_turn(struct residual_view *v);
/* Stores whether the times of the chosen epoch and kind count; *said tells what was done. */
MUST_USE enum status residual_view_count(struct residual_view *v, struct run *run,
					 char said[static MARKED_BYTES], struct err *e);
/* Takes back the newest of these changes of the target. */
MUST_USE enum status residual_view_undo(struct residual_view *v, struct run *run,
					char said[static MARKED_BYTES], struct err *e);
void residual_view_draw(const struct residual_view *v, struct grid *g);

#endif
