/* SPDX-License-Identifier: MIT */
#include "tui/pages/night_curve.h"

#include "ephem/mask.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum { DOTS_ACROSS = 2, DOTS_DOWN = 4 };
#define TOP_DEG 90.0

/* Dot row of an altitude, from above; -1 outside. */
static int dot_of(const struct curve *c, double alt_deg)
{
	double y = floor((TOP_DEG - alt_deg) / TOP_DEG * (c->rows * DOTS_DOWN - 1) + 0.5);
	return y >= 0.0 && y < c->rows * DOTS_DOWN ? (int)y : -1;
}

static void put_glyph(struct curve *c, int col, double alt_deg, enum glyph glyph, enum role role)
{
	int y = dot_of(c, alt_deg);
	if (y >= 0)
		c->cell[y / DOTS_DOWN][col] = (struct curve_cell){0, (uint8_t)glyph, (uint8_t)role};
}

static void put_dot(struct curve *c, int x, int y)
{
	struct curve_cell *cell = &c->cell[y / DOTS_DOWN][x / DOTS_ACROSS];
	cell->dots = (uint8_t)(cell->dots | 1u << (DOTS_DOWN * (x % DOTS_ACROSS) + y % DOTS_DOWN));
	cell->role = ROLE_TEXT;
}

/* Airless altitude at which the mask stands in the target's direction; it was measured with refraction in. */
static double mask_alt_deg(const struct night *night, double az_deg)
{
	double apparent = mask_at(night->site->mask, az_deg);
	return apparent - refraction_deg(apparent, pressure_hpa(night->site->height_m), 10.0);
}

static void draw_target(struct curve *c, const struct night_axis *axis, const struct target_night *tn)
{
	int before = -1;
	for (int x = 0; x < axis->cols * DOTS_ACROSS; x++) {
		double t = axis_time(axis, (x + 0.5) / DOTS_ACROSS);
		double alt = night_star_altaz(tn->night, &tn->star, t).alt_deg;
		bool whole = intervals_contain(&tn->limb, t);
		int y = dot_of(c, alt);
		if (y >= 0 && (whole || x / DOTS_ACROSS % 2 == 0)) {
			int from = before < 0 || !whole ? y
				   : before < y		? before + 1
				   : before > y		? before - 1
							: y;
			for (int i = from < y ? from : y; i <= (from < y ? y : from); i++)
				put_dot(c, x, i);
		}
		before = y;
	}
}

static void mark_contacts(struct curve *c, const struct night_axis *axis, const struct window_event *ev)
{
	const struct {
		double at_d;
		char letter;
	} contact[] = {{ev->t2_d, '2'}, {ev->t3_d, '3'}, {ev->t1_d, '1'}, {ev->t4_d, '4'}, {ev->mid_d, 'm'}};
	memset(c->mark, ' ', (size_t)axis->cols);
	c->mark[axis->cols] = '\0';
	for (size_t i = 0; i < sizeof contact / sizeof contact[0]; i++) {
		int col = axis_col(axis, contact[i].at_d);
		if (col != AXIS_NONE)
			c->mark[col] = contact[i].letter;
	}
}

static void label(struct curve *c, double alt_deg)
{
	int y = dot_of(c, alt_deg);
	if (y >= 0)
		snprintf(c->label[y / DOTS_DOWN], sizeof c->label[0], "%2.0f", alt_deg);
}

void curve_make(struct curve *c, int rows, const struct night_axis *axis, const struct window *w,
		const struct night *night, const struct star *star, const struct free_time *free)
{
	struct sun_sets suns = {.n = 0};
	struct target_night tn = target_on_night(night, w->event.prepared, star, &suns, free);
	double limit = w->event.prepared->limits.value[LIM_ALT];
	c->rows = rows > CURVE_ROWS_MAX ? CURVE_ROWS_MAX : rows < CURVE_ROWS_MIN ? 0 : rows;
	c->cols = axis->cols;
	for (int row = 0; row < c->rows; row++) {
		c->label[row][0] = '\0';
		for (int col = 0; col < c->cols; col++)
			c->cell[row][col] = (struct curve_cell){0, GLYPH_BLANK, ROLE_TEXT};
	}
	if (c->rows == 0)
		return;
	const struct mask *mask = night->site->mask;
	for (int col = 0; col < c->cols; col++) {
		put_glyph(c, col, limit, GLYPH_LIMIT, ROLE_RULE);
		if (axis->moon_alt_deg[col] >= 0.0)
			put_glyph(c, col, axis->moon_alt_deg[col], GLYPH_MOON, ROLE_FAINT);
		if (mask && mask->n > 0) {
			double az = night_star_altaz(night, star, axis_time(axis, col + 0.5)).az_north_deg;
			put_glyph(c, col, mask_alt_deg(night, az), GLYPH_MASK, ROLE_WARN);
		}
	}
	draw_target(c, axis, &tn);
	mark_contacts(c, axis, &w->event);
	label(c, TOP_DEG);
	label(c, 0.0);
	label(c, limit);
}

void curve_draw(const struct curve *c, const struct night_axis *axis, struct grid *g, int row, int col)
{
	if (c->rows == 0)
		return;
	for (int y = 0; y < c->rows; y++) {
		grid_put(g, row + y, col - CURVE_LABEL_COLUMNS, CURVE_LABEL_COLUMNS, c->label[y], ROLE_FAINT);
		for (int x = 0; x < c->cols; x++) {
			const struct curve_cell *cell = &c->cell[y][x];
			if (cell->dots)
				grid_dots(g, row + y, col + x, cell->dots, (enum role)cell->role);
			else if (x == axis->now_col)
				grid_glyph(g, row + y, col + x, GLYPH_NOW, ROLE_TEXT);
			else if (cell->glyph != GLYPH_BLANK)
				grid_glyph(g, row + y, col + x, (enum glyph)cell->glyph,
					   (enum role)cell->role);
		}
	}
	grid_put(g, row + c->rows, col, c->cols, c->mark, ROLE_TEXT);
}
