/* SPDX-License-Identifier: MIT */
#include "tui/pages/night_strip.h"

#include <math.h>

enum { STRIP_PARTS = 7, INGRESS = 2, EGRESS = 4 };
struct strip_part {
	double from_d, to_d;
	enum glyph whole, lost;
};

static void list_parts(const struct window_event *ev, struct strip_part part[STRIP_PARTS])
{
	double t2 = ev->t2_d, t3 = ev->t3_d;
	if (isnan(t2) || isnan(t3)) /* grazing: each limb is half the event */
		t2 = t3 = ev->mid_d;
	const double edge[STRIP_PARTS + 1] = {
	    ev->reserve_start_d,    ev->t1_d - ev->before_d, ev->t1_d, t2, t3, ev->t4_d,
	    ev->t4_d + ev->after_d, ev->reserve_end_d};
	static const enum glyph whole[STRIP_PARTS] = {GLYPH_PAD,    GLYPH_BASELINE, GLYPH_INGRESS, GLYPH_FLAT,
						      GLYPH_EGRESS, GLYPH_BASELINE, GLYPH_PAD};
	for (int i = 0; i < STRIP_PARTS; i++) {
		bool event = i >= INGRESS && i <= EGRESS;
		part[i] = (struct strip_part){edge[i], edge[i + 1], whole[i],
					      event ? GLYPH_LOST : GLYPH_LOST_RESERVE};
	}
}

static bool within(double t_d, double from_d, double to_d)
{
	return t_d >= from_d && t_d < to_d;
}

static bool part_is_lost(const struct strip_part *p, const struct intervals *usable, double from_d,
			 double to_d)
{
	from_d = fmax(from_d, p->from_d);
	to_d = fmin(to_d, p->to_d);
	return intervals_overlap(usable, from_d, to_d) < 0.5 * (to_d - from_d);
}

static enum glyph event_glyph(const struct window *w, const struct strip_part part[STRIP_PARTS],
			      double from_d, double to_d)
{
	const struct intervals *usable = &w->cover.usable;
	if (within(w->event.mid_d, from_d, to_d))
		return intervals_contain(usable, w->event.mid_d) ? GLYPH_MID : GLYPH_LOST_MID;
	const struct strip_part *found = NULL;
	for (int i = 0; i < STRIP_PARTS; i++)
		if (within(0.5 * (from_d + to_d), part[i].from_d, part[i].to_d))
			found = &part[i];
	for (int i = EGRESS; i >= INGRESS; i -= 2)
		if (within(0.5 * (part[i].from_d + part[i].to_d), from_d, to_d))
			found = &part[i];
	if (!found)
		return GLYPH_BLANK;
	return part_is_lost(found, usable, from_d, to_d) ? found->lost : found->whole;
}

static enum glyph sky_glyph(const struct strip_sky *sky, double t_d)
{
	if (intervals_contain(sky->sun_up, t_d))
		return GLYPH_DAY;
	if (!intervals_contain(sky->sun_allows, t_d))
		return GLYPH_TWILIGHT;
	return intervals_contain(sky->observable, t_d) ? GLYPH_FREE : GLYPH_BLANK;
}

static enum role strip_role(enum glyph glyph)
{
	switch (glyph) {
	case GLYPH_INGRESS:
	case GLYPH_FLAT:
	case GLYPH_EGRESS:
	case GLYPH_MID:
		return ROLE_STRONG;
	case GLYPH_LOST:
	case GLYPH_LOST_MID:
		return ROLE_BAD;
	case GLYPH_LOST_RESERVE:
		return ROLE_WARN;
	case GLYPH_PAD:
	case GLYPH_BASELINE:
	case GLYPH_EARLIER:
	case GLYPH_LATER:
		return ROLE_TEXT;
	default:
		return sky_role(glyph);
	}
}

static void put(struct strip *s, int col, enum glyph glyph)
{
	s->cell[col] = (struct strip_cell){(uint8_t)glyph, (uint8_t)strip_role(glyph)};
}

void strip_make(struct strip *s, const struct night_axis *axis, const struct window *w,
		const struct strip_sky *sky)
{
	struct strip_part part[STRIP_PARTS];
	list_parts(&w->event, part);
	for (int i = 0; i < axis->cols; i++) {
		double from_d = axis_time(axis, i), to_d = axis_time(axis, i + 1.0);
		enum glyph glyph = event_glyph(w, part, from_d, to_d);
		put(s, i, glyph == GLYPH_BLANK ? sky_glyph(sky, 0.5 * (from_d + to_d)) : glyph);
	}
	if (w->event.reserve_start_d < axis->from_d)
		put(s, 0, GLYPH_EARLIER);
	if (w->event.reserve_end_d > axis->to_d)
		put(s, axis->cols - 1, GLYPH_LATER);
}

void strip_of_window(struct strip *s, const struct night_axis *axis, const struct window *w,
		     const struct night *night, const struct star *star, const struct free_time *free)
{
	struct sun_sets suns = {.n = 0};
	struct target_night tn = target_on_night(night, w->event.prepared, star, &suns, free);
	strip_make(s, axis, w, &(struct strip_sky){&night->sun_up, &tn.sun_limb, &tn.limb});
}

/* What tells of the event itself is not covered by the line of the hour. */
static bool gives_way(enum glyph glyph)
{
	return glyph == GLYPH_BLANK || glyph == GLYPH_FREE || glyph == GLYPH_PAD || glyph == GLYPH_BASELINE ||
	       glyph == GLYPH_FLAT || glyph == GLYPH_DAY || glyph == GLYPH_TWILIGHT;
}

/* Cell of a moment, the nearest one on the axis. */
static int col_within(const struct night_axis *axis, double t_d)
{
	const double col = floor((t_d - axis->from_d) / (axis->to_d - axis->from_d) * axis->cols);
	return col < 0.0 ? 0 : col > axis->cols - 1 ? axis->cols - 1 : (int)col;
}

void strip_add_item(struct strip *s, const struct night_axis *axis, double slew_d, double from_d, double to_d)
{
	if (!(to_d > axis->from_d) || !(from_d < axis->to_d))
		return;
	int slew = col_within(axis, slew_d), from = col_within(axis, from_d), to = col_within(axis, to_d);
	while (from > 0 && !gives_way((enum glyph)s->cell[from].glyph))
		from--;
	while (to < axis->cols - 1 && !gives_way((enum glyph)s->cell[to].glyph))
		to++;
	slew = slew < from ? slew : from > 0 ? from - 1 : 0;
	for (int i = slew; i < from; i++)
		s->cell[i] = (struct strip_cell){GLYPH_ITEM_SLEW, ROLE_KEY};
	s->cell[from] = (struct strip_cell){GLYPH_ITEM_START, ROLE_KEY};
	s->cell[to] = (struct strip_cell){GLYPH_ITEM_END, ROLE_KEY};
}

void strip_draw(const struct strip *s, const struct night_axis *axis, struct grid *g, int row, int col)
{
	for (int i = 0; i < axis->cols; i++) {
		enum glyph glyph = (enum glyph)s->cell[i].glyph;
		if (i == axis->now_col && gives_way(glyph))
			grid_glyph(g, row, col + i, GLYPH_NOW, ROLE_KEY);
		else
			grid_glyph(g, row, col + i, glyph, (enum role)s->cell[i].role);
	}
}
