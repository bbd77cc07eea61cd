/* SPDX-License-Identifier: MIT */
#include "tui/sheets/plan_html_svg.h"

#include "tui/parts/clock_mark.h"
#include "tui/sheets/plan_words.h"

#include <math.h>
#include <string.h>

#define LABEL_ROOM 44.0 /* an hour's label and the space to the next one */
#define LABEL_HALF 17.0

double svg_x(const struct svg *s, double t_d)
{
	const struct plan_sky *sky = s->sky;
	double share = (t_d - sky->from_d) / (sky->to_d - sky->from_d);
	return s->left + fmin(fmax(share, 0.0), 1.0) * (s->right - s->left);
}

double svg_x_utc(const struct svg *s, struct utc t)
{
	return svg_x(s, night_of_utc(&s->v->night->night, t));
}

void svg_open(const struct svg *s, const char *title, const char *description)
{
	FILE *to = s->out->to;
	fprintf(to,
		"<svg class=\"%s\" viewBox=\"0 0 %.0f %.0f\" role=\"img\" aria-labelledby=\"%s-t %s-d\">\n"
		"<title id=\"%s-t\">%s</title>\n<desc id=\"%s-d\">",
		s->size == SVG_WIDE ? "wide" : "narrow", s->width, s->height, s->id, s->id, s->id, title,
		s->id);
	html_text(s->out, description);
	fprintf(to,
		"</desc>\n<defs><pattern id=\"%s-h\" width=\"6\" height=\"6\" "
		"patternUnits=\"userSpaceOnUse\" patternTransform=\"rotate(45)\"><path class=\"hl\" "
		"d=\"M0 0V6\"/></pattern>\n<clipPath id=\"%s-c\"><rect width=\"%.1f\" "
		"height=\"%.0f\"/></clipPath></defs>\n",
		s->id, s->id, fmax(s->left - 4.0, 1.0), s->height);
}

void svg_close(const struct svg *s)
{
	fputs("</svg>\n", s->out->to);
}

/* --- twilights --- */

static void band(const struct svg *s, const char *class, double from_d, double to_d, double top,
		 double bottom)
{
	double a = svg_x(s, from_d), b = svg_x(s, to_d);
	if (b > a)
		fprintf(s->out->to,
			"<rect class=\"%s\" x=\"%.1f\" y=\"%.1f\" width=\"%.1f\" height=\"%.1f\"/>\n", class,
			a, top, b - a, bottom - top);
}

void svg_bands(const struct svg *s, double top, double bottom)
{
	static const char *const class[SUN_LEVELS] = {"b1", "b2", "b3", "b4"};
	band(s, "b0", s->sky->from_d, s->sky->to_d, top, bottom);
	for (int level = 0; level < SUN_LEVELS; level++)
		for (int i = 0; i < s->sky->sun[level].n; i++) {
			const struct span *part = &s->sky->sun[level].s[i];
			if (part->to_d > s->sky->from_d && part->from_d < s->sky->to_d)
				band(s, class[level], part -> from_d, part -> to_d, top, bottom);
		}
}

/* --- ruler --- */

static int hours_apart(const struct svg *s)
{
	static const int steps[] = {1, 2, 3, 4, 6};
	const double hour = (s->right - s->left) / (24.0 * (s->sky->to_d - s->sky->from_d));
	for (size_t i = 0; i < sizeof steps / sizeof steps[0]; i++)
		if (steps[i] * hour >= LABEL_ROOM)
			return steps[i];
	return 12;
}

static void hours(const struct svg *s, const struct sky_tick *tick, size_t n, double y, double line_top,
		  double bottom)
{
	const int apart = hours_apart(s);
	for (size_t i = 0; i < n; i++) {
		const double x = svg_x(s, tick[i].t_d);
		const bool named = tick[i].hour % apart == 0;
		fprintf(s->out->to, "<path class=\"%s\" d=\"M%.1f %.1fV%.1f\"/>\n", named ? "hr" : "hr hs", x,
			line_top, bottom);
		if (named && x - LABEL_HALF >= 0.0 && x + LABEL_HALF <= s->width)
			fprintf(s->out->to, "<text class=\"m\" x=\"%.1f\" y=\"%.1f\">%02d:00</text>\n", x, y,
				tick[i].hour);
	}
}

static void clock_names(const struct svg *s, const char *local)
{
	FILE *to = s->out->to;
	if (s->size == SVG_WIDE) {
		if (local)
			fprintf(to, "<text x=\"0\" y=\"26\">%s</text>\n", local);
		fputs("<text x=\"0\" y=\"42\">UTC</text>\n", to);
	} else if (local) {
		fprintf(to, "<text x=\"0\" y=\"11\">%s above, UTC below</text>\n", local);
	} else {
		fputs("<text x=\"0\" y=\"11\">UTC</text>\n", to);
	}
}

void svg_ruler(const struct svg *s, double bottom)
{
	const struct run *r = s->v->run;
	const struct night *n = &s->v->night->night;
	char local[48] = "Local time";
	if (r->zone && !clocks_change(n, r->zone))
		snprintf(local, sizeof local, "Local time (%s)",
			 zone_local(r->zone, night_utc(n, s->sky->from_d)).abbreviation);
	clock_names(s, r->zone ? local : NULL);
	if (r->zone)
		hours(s, s->sky->local, s->sky->n_local, 26.0, 29.0, bottom);
	hours(s, s->sky->utc, s->sky->n_utc, 42.0, r->zone ? SVG_RULER - 4.0 : SVG_RULER - 19.0,
	      r->zone ? SVG_RULER : bottom);
	if (isfinite(s->sky->change_d)) {
		const double x = svg_x(s, s->sky->change_d);
		const bool end = x > s->right - 110.0;
		fprintf(s->out->to,
			"<path class=\"ch\" d=\"M%.1f 4V%.1f\"/>\n<text%s x=\"%.1f\" y=\"11\">clocks "
			"change</text>\n",
			x, bottom, end ? " class=\"e\"" : "", end ? x - 4.0 : x + 4.0);
	}
}

void svg_item_name(const struct svg *s, const struct plan_item_view *item, int columns)
{
	char names[PLAN_NAMES_BYTES];
	plan_names(item, names);
	html_text_cut(s->out, names, columns);
}
