/* SPDX-License-Identifier: MIT */
#include "tui/pages/night_axis.h"

#include "ephem/units.h"
#include "tui/parts/clock_mark.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#define MARGIN_D (0.5 / 24.0)
#define QUARTER_D (0.25 / 24.0)
#define DARK_SKY_DEG (-18.0)

enum { LABEL_COLUMNS = 2, LABEL_ROOM = 4, STEPS = 6 };

double axis_time(const struct night_axis *a, double col)
{
	return a->from_d + (a->to_d - a->from_d) * col / a->cols;
}

int axis_col(const struct night_axis *a, double t_d)
{
	double col = floor((t_d - a->from_d) / (a->to_d - a->from_d) * a->cols);
	return col >= 0.0 && col < a->cols ? (int)col : AXIS_NONE; /* NaN is outside */
}

int axis_cell_min(const struct night_axis *a)
{
	return (int)lround((a->to_d - a->from_d) * DAY_MIN / a->cols);
}

static void choose_range(struct night_axis *a, const struct night *night)
{
	double set = night->times.sunset_d, rise = night->times.sunrise_d;
	a->from_d = 0.0;
	a->to_d = night->length_d;
	if (isfinite(set) && isfinite(rise) && set < rise) {
		a->from_d = fmax(set - MARGIN_D, 0.0);
		a->to_d = fmin(rise + MARGIN_D, night->length_d);
	}
}

/* Whole hours of the local clock, as many as fit. Clocks are whole quarters of an hour apart from UTC. */
static void write_hours(struct night_axis *a, const struct night *night, const struct zone *zone)
{
	static const int steps[STEPS] = {1, 2, 3, 4, 6, 12};
	double cell_h = (a->to_d - a->from_d) * 24.0 / a->cols;
	int step = 24, free_from = 0;
	for (int i = STEPS - 1; i >= 0; i--)
		if (steps[i] / cell_h >= LABEL_ROOM)
			step = steps[i];
	memset(a->hours, ' ', (size_t)a->cols);
	a->hours[a->cols] = '\0';
	double noon_quarter_d = (ceil(night->noon_utc.sod_s / 900.0) * 900.0 - night->noon_utc.sod_s) / DAY_S;
	for (double t = noon_quarter_d; t < a->to_d; t += QUARTER_D) {
		int col = axis_col(a, t);
		/* half a second on: a leap second or rounding does not push the hour back */
		struct utc utc = utc_add_s(night->clock.leap, night_utc(night, t), 0.5);
		double s = zone_local(zone, utc).sod_s;
		int hour = (int)(s / 3600.0);
		if (col < free_from || col + LABEL_COLUMNS > a->cols || s - 3600.0 * hour > 2.0 ||
		    hour % step)
			continue;
		a->hours[col] = (char)('0' + hour / 10);
		a->hours[col + 1] = (char)('0' + hour % 10);
		if (*clock_mark(night, zone, utc) && col + LABEL_COLUMNS < a->cols)
			a->hours[col + LABEL_COLUMNS] = *CLOCK_MARK;
		free_from = col + LABEL_COLUMNS + 1;
	}
}

void axis_make(struct night_axis *a, const struct night *night, const struct zone *zone, double sun_limit_deg,
	       int cols)
{
	a->cols = cols < 1 ? 1 : cols > AXIS_COLS_MAX ? AXIS_COLS_MAX : cols;
	a->now_col = AXIS_NONE;
	choose_range(a, night);
	write_hours(a, night, zone);
	struct intervals usable = night_sun_below(night, sun_limit_deg),
			 dark = night_sun_below(night, DARK_SKY_DEG);
	for (int i = 0; i < a->cols; i++) {
		double t = axis_time(a, i + 0.5);
		enum glyph sky = intervals_contain(&dark, t) ? GLYPH_BLANK : GLYPH_LATE;
		if (intervals_contain(&night->moon_up, t))
			sky = intervals_contain(&night->moon_bright, t) ? GLYPH_MOON_BRIGHT : GLYPH_MOON;
		if (!intervals_contain(&usable, t))
			sky = GLYPH_TWILIGHT;
		if (intervals_contain(&night->sun_up, t))
			sky = GLYPH_DAY;
		a->band[i] = (uint8_t)sky;
		a->moon_alt_deg[i] = night_moon_altaz(night, t).alt_deg;
	}
}

void axis_tick(struct night_axis *a, double now_d)
{
	a->now_col = axis_col(a, now_d);
}

enum role sky_role(enum glyph glyph)
{
	switch (glyph) {
	case GLYPH_DAY:
	case GLYPH_TWILIGHT:
	case GLYPH_LATE:
		return ROLE_RULE;
	case GLYPH_MOON_BRIGHT:
		return ROLE_WARN;
	default:
		return ROLE_FAINT;
	}
}

void axis_draw_band(const struct night_axis *a, struct grid *g, int row, int col, bool with_hours)
{
	for (int i = 0; i < a->cols; i++) {
		char hour[2] = {a->hours[i], '\0'};
		if (with_hours && hour[0] != ' ')
			grid_put(g, row, col + i, 1, hour, ROLE_STRONG);
		else
			grid_glyph(g, row, col + i, (enum glyph)a->band[i], sky_role((enum glyph)a->band[i]));
	}
}
