/* SPDX-License-Identifier: MIT */
#include "tui/sheets/plan_html_svg.h"

#include <math.h>
#include <stdint.h>
#include <stdlib.h>

enum { PLOT_WIDE = 270, PLOT_NARROW = 230, FOOT = 8, LABELS_APART = 14 };

struct chart {
	struct svg s;
	double top, bottom;
	size_t placed; /* labels that stand already */
	double *label_x, *label_y;
};

static double y_of(const struct chart *c, double alt_deg)
{
	return c->bottom - alt_deg / 90.0 * (c->bottom - c->top);
}

static double sample_t(const struct plan_sky *sky, size_t i)
{
	return sky->from_d + (double)i * sky->step_d;
}

/* Altitude between two samples. */
static double alt_at(const struct plan_sky *sky, const double *alt_deg, double t_d)
{
	double at = fmin(fmax((t_d - sky->from_d) / sky->step_d, 0.0), (double)(sky->samples - 1));
	size_t i = (size_t)at;
	if (i + 1 >= sky->samples)
		return alt_deg[sky->samples - 1];
	return alt_deg[i] + (at - (double)i) * (alt_deg[i + 1] - alt_deg[i]);
}

/* The part of a track above the horizon between two moments, as one path of straight pieces. */
static void track(const struct chart *c, const char *class, const double *alt_deg, double from_d, double to_d)
{
	const struct plan_sky *sky = c->s.sky;
	FILE *to = c->s.out->to;
	bool open = false, begun = false;
	double before_t = from_d, before = alt_at(sky, alt_deg, from_d);
	const double last_d = fmin(to_d, sample_t(sky, sky->samples - 1));
	for (double t = from_d; t <= last_d;) {
		const double alt = alt_at(sky, alt_deg, t);
		if (t > before_t && (alt >= 0.0) != (before >= 0.0)) { /* through the horizon between them */
			const double cross = before_t + (t - before_t) * before / (before - alt);
			if (!begun)
				fprintf(to, "<path class=\"%s\" d=\"", class);
			begun = true;
			fprintf(to, "%s%.1f %.1f", open ? "L" : "M", svg_x(&c->s, cross), y_of(c, 0.0));
			open = alt >= 0.0;
		}
		if (alt >= 0.0) {
			if (!begun)
				fprintf(to, "<path class=\"%s\" d=\"", class);
			begun = true;
			fprintf(to, "%s%.1f %.1f", open ? "L" : "M", svg_x(&c->s, t), y_of(c, alt));
			open = true;
		}
		before = alt;
		before_t = t;
		if (t >= last_d)
			break;
		t = fmin(sample_t(sky, (size_t)floor((t - sky->from_d) / sky->step_d + 1e-6) + 1), last_d);
	}
	if (begun)
		fputs("\"/>\n", to);
}

/* A label beside a point, moved up or down until it is clear of those that stand. */
static void place_label(struct chart *c, double x, double y, double width, const char *text)
{
	double best = y - 6.0;
	for (int step = 0; step < 40; step++) {
		const double shift = step % 2 ? LABELS_APART * (step + 1) / 2.0 : -LABELS_APART * step / 2.0;
		const double at = y - 6.0 + shift + (step % 2 ? 8.0 : 0.0);
		bool clear = at - 11.0 >= c->top && at <= c->bottom - 2.0;
		for (size_t i = 0; clear && i < c->placed; i++)
			clear =
			    fabs(c->label_x[i] - x) > width || fabs(c->label_y[i] - at) > LABELS_APART - 1.0;
		if (clear) {
			best = at;
			break;
		}
	}
	x = fmin(fmax(x, c->s.left + width / 2.0), c->s.right - width / 2.0);
	c->label_x[c->placed] = x;
	c->label_y[c->placed++] = best;
	fprintf(c->s.out->to, "<text class=\"n\" x=\"%.1f\" y=\"%.1f\">%s</text>\n", x, best, text);
}

static void scale(const struct chart *c)
{
	FILE *to = c->s.out->to;
	for (int alt = 0; alt <= 90; alt += 30)
		fprintf(to,
			"<path class=\"hr\" d=\"M%.1f %.1fH%.1f\"/>\n<text class=\"e\" x=\"%.1f\" "
			"y=\"%.1f\">%d\xC2\xB0</text>\n",
			c->s.left, y_of(c, alt), c->s.right, c->s.left - 4.0,
			fmax(y_of(c, alt) + 4.0, c->top + 9.0), alt);
	const double limit_deg = c->s.sky->alt_limit_deg;
	if (!(limit_deg > 0.0 && limit_deg < 90.0))
		return;
	fprintf(to,
		"<path class=\"lm\" d=\"M%.1f %.1fH%.1f\"/>\n<text class=\"e h\" x=\"%.1f\" y=\"%.1f\">limit "
		"%g\xC2\xB0</text>\n",
		c->s.left, y_of(c, limit_deg), c->s.right, c->s.right - 4.0, y_of(c, limit_deg) + 14.0,
		limit_deg);
}

static void moon(struct chart *c)
{
	const struct plan_sky *sky = c->s.sky;
	size_t top = 0;
	track(c, "mt", sky->moon_alt_deg, sky->from_d, sky->to_d);
	for (size_t i = 1; i < sky->samples; i++)
		if (sky->moon_alt_deg[i] > sky->moon_alt_deg[top])
			top = i;
	if (sky->moon_alt_deg[top] > 0.0)
		place_label(c, svg_x(&c->s, sample_t(sky, top)), y_of(c, sky->moon_alt_deg[top]), 48.0,
			    "Moon");
}

static void items(struct chart *c)
{
	const struct plan_view *v = c->s.v;
	const struct plan_sky *sky = c->s.sky;
	const struct night *n = &v->night->night;
	size_t drawn = 0;
	for (size_t i = 0; i < v->n_items; i++)
		if (sky->track[i] == drawn) /* each star once */
			track(c, "st", sky->alt_deg + drawn++ * sky->samples, sky->from_d, sky->to_d);
	for (size_t i = 0; i < v->n_items; i++)
		if (sky->track[i] != SIZE_MAX)
			track(c, "si", sky->alt_deg + sky->track[i] * sky->samples,
			      night_of_utc(n, v->item[i].start), night_of_utc(n, v->item[i].end));
	moon(c);
	for (size_t i = 0; i < v->n_items; i++) {
		if (sky->track[i] == SIZE_MAX)
			continue;
		char number[16];
		const double mid_d =
		    0.5 * (night_of_utc(n, v->item[i].start) + night_of_utc(n, v->item[i].end));
		const double alt = alt_at(sky, sky->alt_deg + sky->track[i] * sky->samples, mid_d);
		snprintf(number, sizeof number, "%d", v->item[i].order);
		place_label(c, svg_x(&c->s, mid_d), y_of(c, fmax(alt, 0.0)),
			    v->item[i].order > 9 ? 20.0 : 13.0, number);
	}
}

void plan_svg_altitudes(struct html_out *out, const struct plan_view *v, const struct plan_sky *sky,
			enum svg_size size)
{
	const bool wide = size == SVG_WIDE;
	struct chart c = {.s = {.out = out,
				.v = v,
				.sky = sky,
				.size = size,
				.id = wide ? "alt-w" : "alt-n",
				.width = wide ? 840.0 : 360.0,
				.height = SVG_RULER + (wide ? PLOT_WIDE : PLOT_NARROW) + FOOT,
				.left = wide ? 134.0 : 28.0,
				.right = wide ? 839.5 : 359.5},
			  .top = SVG_RULER};
	c.bottom = c.s.height - FOOT;
	c.label_x = calloc(v->n_items + 1, sizeof *c.label_x);
	c.label_y = calloc(v->n_items + 1, sizeof *c.label_y);
	if (c.label_x && c.label_y) {
		svg_open(
		    &c.s, "Altitudes of the night",
		    "Altitude above the horizon over the night of each item's star, numbered as in the order "
		    "and thick while the item lasts, of the Moon, dotted, and the altitude limit, dashed. "
		    "Altitudes are without refraction.");
		svg_bands(&c.s, c.top, c.bottom);
		svg_ruler(&c.s, c.bottom);
		scale(&c);
		items(&c);
		svg_close(&c.s);
	} else {
		out->failed = true;
	}
	free(c.label_x);
	free(c.label_y);
}
