/* SPDX-License-Identifier: MIT */
#include "tui/sheets/plan_html_svg.h"

#include "tui/sheets/plan_sheet.h"

#include <math.h>

/* In a narrow drawing the label stands above the bar, in a wide one beside it. */
enum { BAR = 16, LANE = 14, GAP = 10, LABEL = 16, NAME_WIDE = 23, NAME_NARROW = 26 };

struct row {
	double top, bar, bottom; /* bottom of the bar */
};

static double row_height(enum svg_size size, size_t lanes)
{
	return GAP + BAR + LANE * (double)(lanes > 0 ? lanes - 1 : 0) + (size == SVG_NARROW ? LABEL : 0);
}

/* Opens the next row and its label. */
static struct row row_begin(const struct svg *s, double *y, size_t lanes)
{
	struct row r = {.top = *y};
	*y += row_height(s->size, lanes);
	r.bottom = *y - GAP / 2.0;
	r.bar = r.top + GAP / 2.0 + (s->size == SVG_NARROW ? LABEL : 0);
	const double base = s->size == SVG_NARROW ? r.bar - 4.0 : (r.bar + r.bottom) / 2.0 + 4.5;
	if (s->size == SVG_NARROW)
		fprintf(s->out->to, "<text class=\"l\" x=\"3\" y=\"%.1f\">", base);
	else
		fprintf(s->out->to, "<text clip-path=\"url(#%s-c)\" y=\"%.1f\">", s->id, base);
	return r;
}

static void label_end(const struct svg *s)
{
	fputs("</text>\n", s->out->to);
}

static void box(const struct svg *s, const char *class, double from, double to, double top, double bottom)
{
	if (to > from)
		fprintf(s->out->to,
			"<rect class=\"%s\" x=\"%.1f\" y=\"%.1f\" width=\"%.1f\" height=\"%.1f\"/>\n", class,
			from, top, to - from, bottom - top);
}

/* --- Sun and Moon --- */

static void twilight_row(const struct svg *s, double *y)
{
	static const char *const name[SUN_LEVELS + 1] = {"day", "C", "N", "A", "night"};
	static const double room[SUN_LEVELS + 1] = {24.0, 12.0, 12.0, 12.0, 34.0};
	struct row r = row_begin(s, y, 1);
	fputs("Sun", s->out->to);
	label_end(s);
	box(s, "fr", s->left, s->right, r.bar, r.bottom);
	struct intervals left = intervals_one(s->sky->from_d, s->sky->to_d);
	for (int level = 0; level <= SUN_LEVELS; level++) {
		struct intervals here = left;
		if (level < SUN_LEVELS) {
			const struct intervals above =
			    intervals_outside(&s->sky->sun[level], s->sky->from_d, s->sky->to_d);
			here = intervals_and(&left, &above);
			left = intervals_and(&left, &s->sky->sun[level]);
		}
		for (int i = 0; i < here.n; i++) {
			const double a = svg_x(s, here.s[i].from_d), b = svg_x(s, here.s[i].to_d);
			if (b - a < 0.5)
				continue;
			fprintf(s->out->to, "<path class=\"fr\" d=\"M%.1f %.1fV%.1f\"/>\n", a, r.bar,
				r.bottom);
			if (b - a >= room[level])
				fprintf(s->out->to, "<text class=\"m\" x=\"%.1f\" y=\"%.1f\">%s</text>\n",
					(a + b) / 2.0, r.bar + 12.5, name[level]);
		}
	}
}

static void moon_row(const struct svg *s, double *y)
{
	const struct night *n = &s->v->night->night;
	struct row r = row_begin(s, y, 1);
	const struct intervals up = intervals_clip(&n->moon_up, s->sky->from_d, s->sky->to_d);
	fprintf(s->out->to, up.n > 0 ? "Moon up, %.0f %% lit" : "Moon not up", 100.0 * n->moon_lit_mid);
	label_end(s);
	for (int i = 0; i < up.n; i++)
		box(s, "mo", svg_x(s, up.s[i].from_d), svg_x(s, up.s[i].to_d), r.bar + 2.0, r.bottom - 2.0);
}

/* --- blocks --- */

static void hatch(const struct svg *s, const struct plan_block_view *b, double top, double bottom,
		  const char *class)
{
	const double from = svg_x_utc(s, b->from), to = svg_x_utc(s, b->to);
	if (to > from)
		fprintf(s->out->to,
			"<rect class=\"%s\" fill=\"url(#%s-h)\" x=\"%.1f\" y=\"%.1f\" width=\"%.1f\" "
			"height=\"%.1f\"/>\n",
			class, s->id, from, top, to - from, bottom - top);
}

static void block_row(const struct svg *s, const struct plan_block_view *b, double *y)
{
	struct row r = row_begin(s, y, 1);
	html_text_cut(s->out, b->text, s->size == SVG_WIDE ? NAME_WIDE : NAME_NARROW);
	if (b->near_sun)
		fputs(" (Sun!)", s->out->to);
	label_end(s);
	hatch(s, b, r.bar, r.bottom, "bl");
}

/* --- items --- */

/* The shape of the light curve: down in the ingress, up in the egress. */
static void member_shape(const struct svg *s, const struct plan_member_view *m, double top, double bottom)
{
	FILE *to = s->out->to;
	const double t1 = svg_x_utc(s, m->t1), t4 = svg_x_utc(s, m->t4), mid = svg_x_utc(s, m->mid);
	const double t2 = m->has_flat ? svg_x_utc(s, m->t2) : mid,
		     t3 = m->has_flat ? svg_x_utc(s, m->t3) : mid;
	fprintf(to, "<path class=\"li\" d=\"M%.1f %.1fH%.1fL%.1f %.1fZ\"/>\n", t1, top, t2, t2, bottom);
	if (m->has_flat)
		box(s, "fl", t2, t3, top, bottom);
	fprintf(to, "<path class=\"li\" d=\"M%.1f %.1fV%.1fL%.1f %.1fZ\"/>\n", t3, top, bottom, t4, top);
	fprintf(to, "<path class=\"mi\" d=\"M%.1f %.1fV%.1f\"/>\n", mid, top - 2.0, bottom + 2.0);
}

/* The events of an item and the usable parts of their reserves, a lane each. */
static void members(const struct svg *s, size_t index, double bar)
{
	const struct plan_item_view *item = &s->v->item[index];
	for (size_t k = 0; k < item->n; k++) {
		const double top = bar + 2.0 + LANE * (double)k, bottom = top + BAR - 4.0;
		const struct intervals *usable = &s->sky->usable[s->sky->first_member[index] + k];
		member_shape(s, &item->member[k], top, bottom);
		for (int i = 0; i < usable->n; i++)
			fprintf(s->out->to, "<path class=\"us\" d=\"M%.1f %.1fH%.1f\"/>\n",
				svg_x(s, usable->s[i].from_d), bottom + 1.0, svg_x(s, usable->s[i].to_d));
	}
}

static void item_row(const struct svg *s, size_t index, double *y)
{
	const struct plan_item_view *item = &s->v->item[index];
	FILE *to = s->out->to;
	struct row r = row_begin(s, y, item->n);
	char from[SHEET_TIME_BYTES], until[SHEET_TIME_BYTES];
	fprintf(to, "%d. ", item->order);
	svg_item_name(s, item, s->size == SVG_WIDE ? NAME_WIDE : NAME_NARROW);
	sheet_local(s->v, item->start, false, from);
	sheet_local(s->v, item->end, false, until);
	if (s->size == SVG_NARROW)
		fprintf(to, ", %.5s to %.5s", from, until);
	label_end(s);
	const double start = svg_x_utc(s, item->start), end = svg_x_utc(s, item->end),
		     slew = svg_x_utc(s, item->slew_by);
	/* what lies outside of the item is not observed: it stays pale, and the box cuts off what is drawn in
	 * full */
	fputs("<g class=\"out\">\n", to);
	members(s, index, r.bar);
	fputs("</g>\n", to);
	box(s, "rs", start, end, r.bar, r.bottom);
	if (end > start) {
		fprintf(to,
			"<svg x=\"%.1f\" y=\"%.1f\" width=\"%.1f\" height=\"%.1f\" viewBox=\"%.1f %.1f %.1f "
			"%.1f\">\n",
			start, r.bar, end - start, r.bottom - r.bar, start, r.bar, end - start,
			r.bottom - r.bar);
		members(s, index, r.bar);
		fputs("</svg>\n", to);
	}
	if (start > slew)
		fprintf(to, "<path class=\"sd\" d=\"M%.1f %.1fH%.1f\"/>\n", slew, (r.bar + r.bottom) / 2.0,
			start);
	fprintf(to, "<path class=\"sl\" d=\"M%.1f %.1fV%.1fM%.1f %.1fh6l-3 5z\"/>\n", slew, r.bar, r.bottom,
		slew - 3.0, r.bar - 2.0);
}

static double whole_height(const struct plan_view *v, enum svg_size size)
{
	double height = SVG_RULER + row_height(size, 1) * (2.0 + (double)v->n_blocks);
	for (size_t i = 0; i < v->n_items; i++)
		if (!v->item[i].in_day)
			height += row_height(size, v->item[i].n);
	return height;
}

void plan_svg_timeline(struct html_out *out, const struct plan_view *v, const struct plan_sky *sky,
		       enum svg_size size)
{
	const bool wide = size == SVG_WIDE;
	const struct svg s = {.out = out,
			      .v = v,
			      .sky = sky,
			      .size = size,
			      .id = wide ? "time-w" : "time-n",
			      .width = wide ? 840.0 : 360.0,
			      .height = whole_height(v, size),
			      .left = wide ? 190.0 : 0.5,
			      .right = wide ? 839.5 : 359.5};
	double y = SVG_RULER;
	svg_open(
	    &s, "Timeline of the night",
	    "Under a ruler of hours one row each for the Sun with its twilights, the Moon, every block and "
	    "every item in order. The times are those of the table above and of the cards below.");
	svg_bands(&s, SVG_RULER, s.height);
	svg_ruler(&s, s.height);
	const double blocks = SVG_RULER + 2.0 * row_height(size, 1),
		     items = blocks + (double)v->n_blocks * row_height(size, 1);
	for (size_t i = 0; i < v->n_blocks; i++)
		hatch(&s, &v->block[i], items, s.height, "bh");
	twilight_row(&s, &y);
	moon_row(&s, &y);
	for (size_t i = 0; i < v->n_blocks; i++)
		block_row(&s, &v->block[i], &y);
	for (size_t i = 0; i < v->n_items; i++)
		if (!v->item[i].in_day)
			item_row(&s, i, &y);
	svg_close(&s);
}

void plan_svg_key(struct html_out *out)
{
	static const struct {
		const char *drawn, *words;
	} sign[] = {
	    {"<path class=\"sl\" d=\"M8 1V17M5 1h6l-3 5z\"/><path class=\"sd\" d=\"M8 9H28\"/>",
	     "slew by, then the way to the start"},
	    {"<rect class=\"rs\" x=\"1\" y=\"1\" width=\"34\" height=\"16\"/>", "time reserved for the item"},
	    {"<path class=\"li\" d=\"M2 3H14L14 15Z\"/><path class=\"li\" d=\"M22 3V15L34 3Z\"/>",
	     "ingress, egress"},
	    {"<rect class=\"fl\" x=\"4\" y=\"3\" width=\"28\" height=\"12\"/>", "flat part, T2 to T3"},
	    {"<path class=\"mi\" d=\"M18 0V18\"/>", "mid-time"},
	    {"<path class=\"us\" d=\"M2 15H34\"/>", "usable: Sun, altitude, Moon and the rest allow it"},
	    {"<rect class=\"mo\" x=\"1\" y=\"3\" width=\"34\" height=\"12\"/>", "Moon up"},
	};
	fputs("<ul class=\"key\">\n", out->to);
	for (size_t i = 0; i < sizeof sign / sizeof sign[0]; i++)
		fprintf(out->to, "<li><svg viewBox=\"0 0 36 18\" aria-hidden=\"true\">%s</svg> %s</li>\n",
			sign[i].drawn, sign[i].words);
	fputs("<li><span class=\"hk\" aria-hidden=\"true\"></span> hatched: block or lost time</li>\n"
	      "<li>pale, outside of the box: not observed</li>\n"
	      "<li><b>C N A</b> civil, nautical, astronomical twilight</li>\n</ul>\n",
	      out->to);
}
