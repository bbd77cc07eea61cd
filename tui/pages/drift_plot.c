/* SPDX-License-Identifier: MIT */
#include "tui/pages/drift_plot.h"

#include "ephem/number_text.h"
#include "ephem/units.h"

#include <math.h>
#include <stdio.h>

#define YEARS_AFTER 2.0	     /* the chosen date */
#define YEARS_MOST 30.0	     /* to a stale date far away */
#define SIGMA_LEAST_MIN 1e-3 /* foot of the scale where sigma is as good as none */

/* Dates as Julian years; a minute matters nowhere in the picture. */
static double years_of_utc(struct utc t)
{
	return 2000.0 + (t.mjd + t.sod_s / DAY_S + MJD_ZERO_JD - J2000_JD) / YEAR_D;
}

static double years_of_epoch(const struct ephemeris *e, double epoch)
{
	return 2000.0 +
	       (jd2_value(e->t0.jd) - J2000_JD + epoch * (e->period_d + 0.5 * e->dpde_d * epoch)) / YEAR_D;
}

static bool epoch_at(const struct ephemeris *e, double years, long *epoch)
{
	const struct tdb t = {.jd = jd2_normal(J2000_JD, (years - 2000.0) * YEAR_D)};
	return ephemeris_nearest(e, t, epoch);
}

static double sigma_at(const struct ephemeris *e, double years)
{
	long epoch;
	return epoch_at(e, years, &epoch) ? drift_sigma_min(e, epoch) : NAN;
}

struct frame {
	const struct drift_row *row;
	double now, chosen, from, to, least, most;
};

static struct frame frame_of(const struct drift_table *t, const struct drift_row *row)
{
	struct frame f = {.row = row, .now = years_of_utc(t->now), .chosen = years_of_utc(t->choice.at)};
	const struct ephemeris *e = &row->prepared->eph;
	f.from = row->has_midtime ? years_of_utc(row->last_midtime) : years_of_epoch(e, 0.0);
	f.from = fmin(f.from, f.now - 0.5);
	f.to = fmax(f.chosen, f.now) + YEARS_AFTER;
	if (row->stale.when == WHEN_ON && years_of_utc(row->stale.utc) < f.now + YEARS_MOST)
		f.to = fmax(f.to, years_of_utc(row->stale.utc) + YEARS_AFTER);
	f.least = INFINITY;
	f.most = row->limit_min;
	for (int i = 0; i <= 64; i++) {
		double sigma = sigma_at(e, f.from + (f.to - f.from) * i / 64.0);
		f.least = fmin(f.least, sigma);
		f.most = fmax(f.most, sigma);
	}
	if (row->best.found)
		f.least = fmin(f.least, row->best.sigma_after_min);
	f.least = fmax(fmin(f.least, row->limit_min), SIGMA_LEAST_MIN) / 1.5;
	f.most *= 1.5;
	return f;
}

static void draw_curves(struct plot *p, const struct frame *f, double precision_min)
{
	const struct ephemeris *e = &f->row->prepared->eph;
	const struct refresh *best = &f->row->best;
	double seen = best->found ? years_of_utc(best->mid) : INFINITY;
	for (int i = 0; i < plot_dots_across(p); i += 2) {
		double x = plot_dot_x(p, i);
		long epoch;
		if (x > seen && epoch_at(e, x, &epoch))
			plot_sign(p, x, log10(refresh_sigma_min(e, best->epoch, precision_min, epoch)),
				  GLYPH_AFTER, ROLE_GOOD);
	}
	for (int i = 0; i < plot_dots_across(p); i++) {
		double x = plot_dot_x(p, i), sigma = sigma_at(e, x);
		plot_dot(p, x, log10(sigma), sigma > f->row->limit_min ? ROLE_BAD : ROLE_STRONG);
	}
}

static void label(struct plot *p, double minutes)
{
	char text[NUMBER_TEXT_MAX];
	number_text_fixed(minutes, minutes < 0.095 ? 3 : minutes < 9.95 ? 1 : 0, text);
	plot_label(p, log10(minutes), text);
}

/* As many years as fit; the first of several in one cell. */
static void write_years(struct plot *p)
{
	static const int steps[] = {1, 2, 5, 10, 20, 50, 100};
	int step = 1000;
	for (size_t i = sizeof steps / sizeof steps[0]; i-- > 0;)
		if (steps[i] / (p->x1 - p->x0) * p->cols >= 6.0)
			step = steps[i];
	for (int year = (int)ceil(p->x0); year <= (int)p->x1; year++) {
		char text[16];
		snprintf(text, sizeof text, "%d", year);
		if (year % step == 0)
			plot_figure(p, year, text);
	}
}

void drift_plot_make(struct plot *p, int rows, int cols, const struct drift_table *t,
		     const struct drift_row *row)
{
	if (!row->counted || isnan(row->sigma_now_min)) {
		plot_start(p, 0, 0, 0.0, 0.0, 0.0, 0.0);
		return;
	}
	struct frame f = frame_of(t, row);
	plot_start(p, rows, cols, f.from, f.to, log10(f.least), log10(f.most));
	if (p->rows == 0)
		return;
	draw_curves(p, &f, t->choice.precision_min);
	plot_level(p, log10(row->limit_min), GLYPH_LIMIT, ROLE_WARN);
	plot_upright(p, f.now, p->y0, p->y1, GLYPH_NOW, ROLE_KEY);
	plot_upright(p, f.chosen, p->y0, p->y1, GLYPH_CHOSEN, ROLE_TEXT);
	plot_mark(p, f.now, 'n');
	plot_mark(p, f.chosen, 'd');
	if (row->best.found)
		plot_mark(p, years_of_utc(row->best.mid), 'r');
	if (row->stale.when == WHEN_ON)
		plot_mark(p, years_of_utc(row->stale.utc), 's');
	label(p, f.most / 1.5);
	if (row->limit_min > 0.0)
		label(p, row->limit_min);
	label(p, f.least * 1.5);
	label(p, f.most);
	write_years(p);
}
