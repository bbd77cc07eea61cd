/* SPDX-License-Identifier: MIT
 * What is forecast of one window, as lines of the details. */
#ifndef WANE_TUI_PAGES_NIGHT_FORECAST_H
#define WANE_TUI_PAGES_NIGHT_FORECAST_H

#include "ephem/forecast.h"
#include "tui/pages/night_head.h"
#include "tui/parts/text_view.h"

struct forecast_shown {
	bool there;		/* there is a telescope to forecast with: the rest holds */
	struct target_night on; /* borrows night, target and free time */
	struct window window;	/* with its forecast */
	struct forecast_explain x;
};
/* The forecast of a window with its derivation, about 30 us; borrows what the view lives on. */
void forecast_show(struct forecast_shown *f, const struct night_view *view, const struct night_row *row);
/* `Noise  R 30 s exposures, ...` and `Worth  timing 0.57 min, ...`; where nothing is forecast one line that
 * says why. */
void forecast_lines(struct text_view *v, const struct run *r, const struct night_view *view,
		    const struct night_row *row, const struct forecast_shown *f);
/* Each figure with the sentence that explains it, and what is assumed. */
void forecast_figure_lines(struct text_view *v, const struct night_view *view,
			   const struct forecast_shown *f);
/* Goals with what was got of them, stars of the field, light of neighbours. */
void wish_lines(struct text_view *v, const struct run *r, const struct night_row *row,
		const struct forecast_shown *f);
/* The reserve in steps of 5 or 10 minutes (30 where it is longer than a night). */
void minute_lines(struct text_view *v, const struct run *r, const struct night_view *view,
		  const struct night_head *head, const struct forecast_shown *f);

/* `0.57`, `1.9`, `23`: seconds as minutes; "" NAN. */
enum { TIMING_TEXT_BYTES = 12 };
void timing_text(double timing_s, char out[TIMING_TEXT_BYTES]);

#endif
