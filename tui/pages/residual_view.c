/* SPDX-License-Identifier: MIT */
#include "tui/pages/residual_view.h"

#include "ephem/number_text.h"
#include "ephem/units.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum { TEXT_ROWS_MOST = 12, BAR_DOTS = 64 };
#define MARGIN 0.06 /* of the picture, at every edge */

/* --- what is shown --- */

static const struct fit *fit_of(const struct residual_view *v)
{
	return v->quadratic && v->fits.has_quadratic ? &v->fits.quadratic : &v->fits.linear;
}

static double residual_min(const struct residual_view *v, size_t i)
{
	return fit_residual_d(fit_of(v), &v->fits.time[i]) * DAY_MIN;
}

static double error_min(const struct residual_view *v, size_t i)
{
	return v->fits.time[i].err_d * DAY_MIN;
}

static void find_edges(const struct residual_view *v, double *x0, double *x1, double *most)
{
	*x0 = INFINITY;
	*x1 = -INFINITY;
	*most = 0.0;
	for (size_t i = 0; i < v->fits.list.n; i++) {
		const struct mid_time *t = &v->fits.time[i];
		*x0 = fmin(*x0, (double)t->epoch);
		*x1 = fmax(*x1, (double)t->epoch);
		/* what is out of the fit may lie far off: it is shown at the edge */
		if (t->used)
			*most = fmax(*most, fabs(residual_min(v, i)) + error_min(v, i));
	}
	double margin = fmax((*x1 - *x0) * MARGIN, 1.0);
	*x0 -= margin;
	*x1 += margin;
	*most = fmax(*most, 1e-4) * (1.0 + MARGIN);
}

static void draw_point(struct residual_view *v, size_t i, double most)
{
	const struct mid_time *t = &v->fits.time[i];
	double x = (double)t->epoch, y = residual_min(v, i), error = error_min(v, i);
	bool outlier = fit_is_outlier(&v->fits, i), chosen = i == v->chosen;
	double at = fmax(fmin(y, most), -most);
	enum role role = chosen ? ROLE_KEY : outlier ? ROLE_BAD : t->used ? ROLE_STRONG : ROLE_FAINT;
	plot_sign(&v->plot, x, at,
		  chosen     ? GLYPH_POINT_CHOSEN
		  : !t->used ? GLYPH_POINT_OUT
		  : outlier  ? GLYPH_POINT_OUT
			     : GLYPH_POINT,
		  role);
	plot_upright(&v->plot, x, y - error, y + error, GLYPH_ERROR_BAR, role);
}

static void label(struct plot *p, double minutes)
{
	char text[NUMBER_TEXT_MAX];
	number_text_fixed(minutes, fabs(minutes) < 9.95 ? 2 : 0, text);
	plot_label(p, minutes, text);
}

static void make_plot(struct residual_view *v, int rows)
{
	double x0, x1, most;
	char text[24];
	find_edges(v, &x0, &x1, &most);
	plot_start(&v->plot, rows, v->cols - PLOT_LABEL_COLUMNS - 3, x0, x1, -most, most);
	if (v->plot.rows == 0)
		return;
	for (size_t i = 0; i < v->fits.list.n; i++)
		if (i != v->chosen)
			draw_point(v, i, most);
	draw_point(v, v->chosen, most);
	plot_level(&v->plot, 0.0, GLYPH_ZERO, ROLE_RULE);
	label(&v->plot, most / (1.0 + MARGIN));
	label(&v->plot, 0.0);
	label(&v->plot, -most / (1.0 + MARGIN));
	double step = pow(10.0, floor(log10((x1 - x0) / 3.0)));
	for (double x = ceil(x0 / step) * step; x <= x1; x += step) {
		snprintf(text, sizeof text, "%.0f", x + 0.0); /* no -0 */
		plot_figure(&v->plot, x, text);
	}
}

static void fit_line(struct residual_view *v)
{
	const struct fit *f = fit_of(v);
	char chi2[NUMBER_TEXT_MAX], scale[NUMBER_TEXT_MAX], bic[NUMBER_TEXT_MAX], period[NUMBER_TEXT_MAX],
	    error[NUMBER_TEXT_MAX];
	number_text_fixed(f->chi2, 1, chi2);
	number_text_fixed(fit_scale_factor(f), 2, scale);
	number_text_fixed(f->bic, 1, bic);
	number_text_fixed(f->period_d, 9, period);
	number_text_fixed(sqrt(f->cov[1][1]) * DAY_S, 4, error);
	text_view_addf(
	    &v->text, ROLE_STRONG, 7,
	    "%s fit to %zu of %zu mid-times: chi2 %s for %d, errors times %s, BIC %s; P %s d, error %s s",
	    f->terms == 3 ? "Quadratic" : "Linear", f->n, v->fits.list.n, chi2, f->dof, scale, bic, period,
	    error);
	if (f->terms == 3) {
		char change[NUMBER_TEXT_MAX], change_error[NUMBER_TEXT_MAX];
		/* dP/dE over P is the change per time */
		double per_year = YEAR_D / f->period_d * DAY_S * 1e3;
		number_text_fixed(f->dpde_d * per_year, 2, change);
		number_text_fixed(sqrt(f->cov[2][2]) * per_year, 2, change_error);
		text_view_addf(&v->text, ROLE_TEXT, 7, "       the period changes by %s ms a year, error %s",
			       change, change_error);
	}
	if (v->fits.has_quadratic)
		text_view_add(&v->text, ROLE_TEXT, 7,
			      v->fits.prefers_quadratic
				  ? "       These times prefer the quadratic fit."
				  : "       These times do not ask for a quadratic fit.");
	if (v->fits.outliers > 0)
		text_view_addf(&v->text, ROLE_BAD, 7,
			       "       %ld to be looked at: more than 4 of their errors off.",
			       v->fits.outliers);
}

static void chosen_lines(struct residual_view *v)
{
	const struct midtime_row *row = &v->fits.list.row[v->chosen];
	const struct mid_time *t = &v->fits.time[v->chosen];
	char off[NUMBER_TEXT_MAX], error[NUMBER_TEXT_MAX], z[NUMBER_TEXT_MAX], robust[NUMBER_TEXT_MAX],
	    text[80], scale[80], source[200];
	number_text_fixed(residual_min(v, v->chosen), 3, off);
	number_text_fixed(error_min(v, v->chosen), 3, error);
	number_text_fixed(residual_min(v, v->chosen) / error_min(v, v->chosen), 1, z);
	number_text_fixed(v->fits.z_robust[v->chosen], 1, robust);
	text_clean(row->mid_text, text, sizeof text);
	text_clean(row->time_scale, scale, sizeof scale);
	text_clean(row->source, source, sizeof source);
	text_view_addf(
	    &v->text, t->used ? ROLE_KEY : ROLE_WARN, 7,
	    "%zu/%zu   %s of epoch %ld: %s %s, %s min off, error %s min, that is %s errors (%s robust)%s",
	    v->chosen + 1, v->fits.list.n, t->kind == KIND_OCCULTATION ? "occultation" : "transit", t->epoch,
	    text, *scale ? scale : "(standard not said)", off, error, z, robust, t->used ? "" : "; EXCLUDED");
	text_view_addf(&v->text, ROLE_FAINT, 7, "       source %s; entered %s by %s",
		       *source ? source : "not said", row->entered_utc, row->who);
}

static void make(struct residual_view *v)
{
	text_view_start(&v->text, v->cols > 2 ? v->cols - 2 : 1);
	plot_start(&v->plot, 0, 0, 0.0, 0.0, 0.0, 0.0);
	if (!v->shown) {
		text_view_add(&v->text, ROLE_WARN, 0, v->why);
		return;
	}
	fit_line(v);
	chosen_lines(v);
	int text = v->text.n < TEXT_ROWS_MOST ? v->text.n : TEXT_ROWS_MOST;
	make_plot(v, v->rows - 2 - text - PLOT_FOOT_ROWS);
}

/* --- loading --- */

void residual_view_close(struct residual_view *v)
{
	fit_view_free(&v->fits);
	v->shown = false;
	v->prepared = NULL;
}

enum status residual_view_load(struct residual_view *v, struct run *run, const struct prepared *p,
			       struct err *e)
{
	const struct fit_choice choice = {.jitter_s = 0.0, .jitter_terms = 2, .ref_epoch = REF_EPOCH_BEST};
	char name[NAME_BYTES_MAX];
	struct err why;
	if (v->target_id != p->target->id)
		v->chosen = 0;
	v->target_id = p->target->id;
	v->prepared = p;
	v->why[0] = '\0';
	text_clean(p->target->name, name, sizeof name);
	snprintf(v->title, sizeof v->title, "%s, residuals of the stored mid-times [min] by epoch", name);
	enum status s = run->store ? fit_view_make(&v->fits, run, p, &choice, &why) : ST_RANGE;
	v->shown = s == ST_OK && v->fits.list.n > 0;
	if (!run->store)
		snprintf(v->why, sizeof v->why, "No mid-times are stored.");
	else if (s == ST_RANGE || s == ST_ABSENT)
		snprintf(v->why, sizeof v->why, "No fit: %s", why.text);
	else if (s != ST_OK && e)
		*e = why;
	if (v->chosen >= v->fits.list.n)
		v->chosen = v->fits.list.n > 0 ? v->fits.list.n - 1 : 0;
	make(v);
	return s == ST_RANGE || s == ST_ABSENT ? ST_OK : s;
}

void residual_view_size(struct residual_view *v, int rows, int cols)
{
	v->rows = rows;
	v->cols = cols;
	make(v);
}

void residual_view_choose(struct residual_view *v, long to)
{
	long last = (long)v->fits.list.n - 1;
	v->chosen = to < 0 || last < 0 ? 0 : to > last ? (size_t)last : (size_t)to;
	make(v);
}

bool residual_view_turn(struct residual_view *v)
{
	if (!v->shown || !v->fits.has_quadratic)
		return false;
	v->quadratic = !v->quadratic;
	make(v);
	return true;
}

/* --- changing --- */

enum status residual_view_count(struct residual_view *v, struct run *run, char said[static MARKED_BYTES],
				struct err *e)
{
	if (!v->shown)
		return err_set(e, ST_ABSENT, "no mid-time is chosen");
	const struct midtime_row *row = &v->fits.list.row[v->chosen];
	return midtime_mark(run, v->prepared->target->id, row->epoch, row->kind, !row->used, said, e);
}

enum status residual_view_undo(struct residual_view *v, struct run *run, char said[static MARKED_BYTES],
			       struct err *e)
{
	return midtime_mark_undo(run, v->prepared->target->id, said, e);
}

/* --- drawing --- */

void residual_view_draw(const struct residual_view *v, struct grid *g)
{
	int text = v->text.n < TEXT_ROWS_MOST ? v->text.n : TEXT_ROWS_MOST;
	int plot = v->plot.rows ? v->plot.rows + PLOT_FOOT_ROWS : 0;
	grid_put(g, 0, 1, g->cols - 2, v->title, ROLE_STRONG);
	plot_draw(&v->plot, g, 1, PLOT_LABEL_COLUMNS + 2);
	for (int i = 0; i < text && 1 + plot + i < g->rows - 1; i++)
		grid_put(g, 1 + plot + i, 1, g->cols - 2, v->text.line[i].text, v->text.line[i].role);
	grid_cursor(g, 1 + plot, 0, false);
}
