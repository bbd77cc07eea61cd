/* SPDX-License-Identifier: MIT
 * The plot of a target's sigma against the date: past and coming growth, limit, today, chosen date, stale
 * date, and what the best refresh would leave. Sigma on a logarithmic scale. */
#ifndef WANE_TUI_PAGES_DRIFT_PLOT_H
#define WANE_TUI_PAGES_DRIFT_PLOT_H

#include "tui/drift_rows.h"
#include "tui/parts/plot.h"

/* From the last mid-time that counts, else T0, to some years after the chosen and the stale date. No picture
 * where sigma is unknown. */
void drift_plot_make(struct plot *p, int rows, int cols, const struct drift_table *t,
		     const struct drift_row *row);

#endif
