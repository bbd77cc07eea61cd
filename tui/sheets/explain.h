/* SPDX-License-Identifier: MIT
 * How the forecast of a window comes about, as text: each step with its numbers, what they mean, the formula and where it is from. */
#ifndef WANE_TUI_SHEETS_EXPLAIN_H
#define WANE_TUI_SHEETS_EXPLAIN_H

#include "ephem/forecast.h"
#include "tui/zone.h"

#include <stdbool.h>
#include <stdio.h>

struct explained {
	const struct window *window;
	const struct night *night;
	const struct zone *zone; /* NULL: UTC */
	const struct forecast_explain *x;
	const struct forecast_moment *moment; /* [n_moments]: the table of moments */
	int n_moments;
	bool plain; /* no columns: `name: value unit. What it is.` */
};
void explain_text(FILE *to, const struct explained *e);

#endif
