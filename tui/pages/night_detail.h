/* SPDX-License-Identifier: MIT
 * All about one window, and the page's other texts, as lines for a text view. */
#ifndef WANE_TUI_PAGES_NIGHT_DETAIL_H
#define WANE_TUI_PAGES_NIGHT_DETAIL_H

#include "tui/pages/night_head.h"
#include "tui/parts/text_view.h"

/* SHORT: six lines or so are seen at once; ROOMY: more; WHOLE: all there is, to scroll in. */
enum detail_extent { DETAIL_SHORT, DETAIL_ROOMY, DETAIL_WHOLE };
/* Contacts in three clocks, altitudes, chances, times to be there, losses, forecast, doubts, source; the most
 * needed first. WHOLE adds each figure of the forecast with its sentence, goals, stars of the field and the
 * reserve minute by minute. plan: what it says of the window, "" nothing. */
void detail_lines(struct text_view *v, int width, enum detail_extent extent, const struct run *r,
		  const struct night_view *view, const struct night_head *head, const struct night_row *row,
		  const char *plan);
/* Keys, figures, picture of the cover, doubts, cautions. */
void help_lines(struct text_view *v, int width, enum tier tier);
/* The limits of the run, each with its value and sentence. */
void limit_lines(struct text_view *v, int width, const struct limits *l, const char *remark);
/* Choices: CHOICE_FIRST_LINE lines of heading, then a line each, not wrapped. */
enum { CHOICE_FIRST_LINE = 1 };
void sort_lines(struct text_view *v, int sort, bool turned);
/* At most as many sites as a view has lines; the heading says so. */
void site_lines(struct text_view *v, const struct site_list *sites);
/* What to do when there is no site or no target yet. */
void first_run_lines(struct text_view *v, int width, bool has_site, bool has_targets, const char *db_path);

#endif
