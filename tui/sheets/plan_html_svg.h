/* SPDX-License-Identifier: MIT
 * The drawings of the night sheet, as SVG 1.1 inside HTML. Each is drawn for two widths; the style shows the
 * one that suits the screen, so that letters keep their size. Nothing from the plan's texts stands in an
 * attribute. */
#ifndef WANE_TUI_SHEETS_PLAN_HTML_SVG_H
#define WANE_TUI_SHEETS_PLAN_HTML_SVG_H

#include "tui/plan_view.h"
#include "tui/sheets/html_escape.h"
#include "tui/sheets/plan_html_sky.h"

enum svg_size { SVG_WIDE, SVG_NARROW };
/* Twilight, Moon, blocks and items as rows under a ruler of hours. */
void plan_svg_timeline(struct html_out *out, const struct plan_view *v, const struct plan_sky *sky,
		       enum svg_size size);
/* Altitude of every item's star and of the Moon. */
void plan_svg_altitudes(struct html_out *out, const struct plan_view *v, const struct plan_sky *sky,
			enum svg_size size);
/* What the signs of the timeline mean. */
void plan_svg_key(struct html_out *out);

/* --- between the drawings --- */
struct svg {
	struct html_out *out;
	const struct plan_view *v;
	const struct plan_sky *sky;
	enum svg_size size;
	const char *id; /* of the drawing, told from every other of the page */
	double width, height;
	double left, right; /* where the drawn time begins and ends */
};
enum { SVG_RULER = 48 }; /* height of the ruler */
/* Where a moment stands, kept within the drawing. */
double svg_x(const struct svg *s, double t_d);
double svg_x_utc(const struct svg *s, struct utc t);
/* Opens the drawing with its title and description. */
void svg_open(const struct svg *s, const char *title, const char *description);
void svg_close(const struct svg *s);
/* Day, twilights and night as bands. */
void svg_bands(const struct svg *s, double top, double bottom);
/* Hours of both clocks from y = 0 on, with lines down to the bottom, and the change of the clocks. */
void svg_ruler(const struct svg *s, double bottom);
/* Names of an item's targets, cut to so many columns. */
void svg_item_name(const struct svg *s, const struct plan_item_view *item, int columns);

#endif
