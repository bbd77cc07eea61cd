/* SPDX-License-Identifier: MIT */
#include "tui/sheets/fits.h"

#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/json.h"
#include "tui/sheets/text.h"

#include <math.h>

enum { T0_DECIMALS = 12, MID_DECIMALS = 9, RESIDUAL_DECIMALS = 6, Z_DECIMALS = 4 };
/* dP/dt in ms/yr of a change of period per epoch: D / P, a pure number, times the milliseconds of a year. */
#define MS_YR (YEAR_D * DAY_S * 1e3)

static const char *kind_word(enum event_kind kind)
{
	return kind == KIND_TRANSIT ? "transit" : "occultation";
}

/* One residual, against the linear fit; NAN without one. */
struct residual {
	double oc_min, err_min, z;
};

static struct residual residual_of(const struct fit_view *v, const struct mid_time *t)
{
	const double oc_d = v->has_linear ? fit_residual_d(&v->linear, t) : (double)NAN;
	const double err_d = hypot(t->err_d, v->has_linear ? v->linear.jitter_d : 0.0);
	return (struct residual){oc_d * DAY_MIN, err_d * DAY_MIN, oc_d / err_d};
}

/* --- json --- */

static void exact(struct json *j, const char *key, double value, bool given)
{
	json_exact(j, key, given ? value : NAN);
}

static void t0_json(struct json *j, struct tdb t0)
{
	char digits[NUMBER_TEXT_MAX];
	number_text_jd2(t0.jd, T0_DECIMALS, digits);
	json_digits(j, "t0_bjd_tdb", digits);
}

static void fit_json(struct json *j, const char *key, const struct fit *f, bool given)
{
	if (!given) {
		json_null(j, key);
		return;
	}
	json_open(j, key, '{', false);
	t0_json(j, f->t0);
	exact(j, "t0_err_d", sqrt(f->cov[0][0]), true);
	exact(j, "period_d", f->period_d, true);
	exact(j, "period_err_d", sqrt(f->cov[1][1]), true);
	exact(j, "cov_d2", f->cov[0][1], true);
	if (f->terms == 3) {
		exact(j, "dpde_d", f->dpde_d, true);
		exact(j, "dpde_err_d", sqrt(f->cov[2][2]), true);
		exact(j, "dpdt_ms_yr", f->dpde_d / f->period_d * MS_YR, true);
		exact(j, "dpdt_err_ms_yr", sqrt(f->cov[2][2]) / f->period_d * MS_YR, true);
	}
	exact(j, "chi2", f->chi2, true);
	exact(j, "bic", f->bic, true);
	exact(j, "scale_factor", fit_scale_factor(f), true);
	if (f->terms == 3) {
		exact(j, "t0_dpde_cov_d2", f->cov[0][2], true);
		exact(j, "period_dpde_cov_d2", f->cov[1][2], true);
	}
	json_close(j, '}');
}

static void prior_json(struct json *j, const struct fit_view *v)
{
	const struct ephemeris *e = &v->prior;
	json_open(j, "prior", '{', false);
	t0_json(j, e->t0);
	exact(j, "t0_err_d", sqrt(e->c00), true);
	exact(j, "period_d", e->period_d, true);
	exact(j, "period_err_d", sqrt(e->c11), true);
	exact(j, "cov_d2", e->c01, true);
	json_number(j, "z_rms", v->prior_z_rms, Z_DECIMALS);
	json_bool(j, "double_counting", v->double_counting);
	json_close(j, '}');
}

static void residuals_json(struct json *j, const struct fit_view *v)
{
	char digits[NUMBER_TEXT_MAX];
	json_open(j, "residuals", '[', false);
	for (size_t i = 0; i < v->list.n; i++) {
		const struct residual r = residual_of(v, &v->time[i]);
		json_open(j, NULL, '{', true);
		json_whole(j, "epoch", v->time[i].epoch);
		json_text(j, "kind", kind_word(v->time[i].kind));
		number_text_jd2(v->time[i].mid.jd, MID_DECIMALS, digits);
		json_digits(j, "mid_bjd_tdb", digits);
		json_number(j, "oc_min", r.oc_min, RESIDUAL_DECIMALS);
		json_number(j, "err_min", r.err_min, RESIDUAL_DECIMALS);
		json_number(j, "z", r.z, Z_DECIMALS);
		json_bool(j, "used", v->time[i].used);
		json_number(j, "z_robust", v->z_robust[i], Z_DECIMALS);
		json_bool(j, "outlier", fit_is_outlier(v, i));
		json_close(j, '}');
	}
	json_close(j, ']');
}

void fits_json(FILE *to, const char *target, const struct fit_view *v)
{
	struct json j = json_begin(to);
	json_open(&j, NULL, '{', false);
	json_text(&j, "target", target);
	json_whole(&j, "n", (long)v->used);
	if (v->has_linear) {
		json_whole(&j, "dof_linear", v->linear.dof);
		json_whole(&j, "ref_epoch", v->linear.ref_epoch);
	} else {
		json_null(&j, "dof_linear");
		json_null(&j, "ref_epoch");
	}
	exact(&j, "jitter_s", v->linear.jitter_d * DAY_S, v->has_linear);
	fit_json(&j, "linear", &v->linear, v->has_linear);
	fit_json(&j, "quadratic", &v->quadratic, v->has_quadratic);
	exact(&j, "scale_factor", fit_scale_factor(&v->linear), v->has_linear);
	if (v->has_linear)
		json_text(&j, "preferred", v->prefers_quadratic ? "quadratic" : "linear");
	else
		json_null(&j, "preferred");
	residuals_json(&j, v);
	json_whole(&j, "outliers", v->outliers);
	if (v->has_prior)
		prior_json(&j, v);
	json_close(&j, '}');
	json_end(&j);
}

/* --- csv --- */

bool fits_csv(FILE *to, const struct fit_view *v)
{
	struct csv_out c = {.file = to};
	char digits[NUMBER_TEXT_MAX];
	fputs("epoch,kind,mid_bjd_tdb,oc_min,err_min,z,used,z_robust,outlier\n", to);
	for (size_t i = 0; i < v->list.n; i++) {
		const struct residual r = residual_of(v, &v->time[i]);
		const double numbers[] = {r.oc_min, r.err_min, r.z};
		snprintf(digits, sizeof digits, "%ld", v->time[i].epoch);
		csv_number(&c, digits);
		csv_text(&c, kind_word(v->time[i].kind));
		number_text_jd2(v->time[i].mid.jd, MID_DECIMALS, digits);
		csv_number(&c, digits);
		for (int k = 0; k < 3; k++) {
			number_text_fixed(numbers[k], k < 2 ? RESIDUAL_DECIMALS : Z_DECIMALS, digits);
			csv_number(&c, digits);
		}
		csv_number(&c, v->time[i].used ? "1" : "0");
		number_text_fixed(v->z_robust[i], Z_DECIMALS, digits);
		csv_number(&c, digits);
		csv_number(&c, fit_is_outlier(v, i) ? "1" : "0");
		csv_end_line(&c);
	}
	return !c.failed;
}

/* --- text --- */

static void line(FILE *to, const char *name, double value, double error, int decimals, double scale,
		 const char *unit)
{
	char a[NUMBER_TEXT_MAX], b[NUMBER_TEXT_MAX], c[NUMBER_TEXT_MAX];
	number_text_fixed(value, decimals, a);
	number_text_fixed(error, decimals, b);
	number_text_fixed(error * scale, decimals, c);
	fprintf(to, "  %-10s %s +- %s formal, %s scaled %s\n", name, a, b, c, unit);
}

static void fit_text(FILE *to, const char *name, const struct fit *f)
{
	char t0[NUMBER_TEXT_MAX], a[NUMBER_TEXT_MAX], b[NUMBER_TEXT_MAX];
	const double scale = fit_scale_factor(f), t0_err_d = sqrt(f->cov[0][0]);
	number_text_jd2(f->t0.jd, 8, t0);
	number_text_fixed(t0_err_d, 8, a);
	number_text_fixed(t0_err_d * scale, 8, b);
	fprintf(to, "%s: chi2 %.2f for %zu times (%d free), BIC %.2f, errors scaled by %.3f\n", name, f->chi2,
		f->n, f->dof, f->bic, scale);
	fprintf(to, "  %-10s %s +- %s formal, %s scaled BJD_TDB at epoch %ld\n", "T0", t0, a, b,
		f->ref_epoch);
	line(to, "period", f->period_d, sqrt(f->cov[1][1]), 10, scale, "d");
	if (f->terms == 3)
		line(to, "dP/dt", f->dpde_d / f->period_d * MS_YR, sqrt(f->cov[2][2]) / f->period_d * MS_YR,
		     3, scale, "ms/yr");
}

static void residuals_text(FILE *to, const struct fit_view *v)
{
	char oc[NUMBER_TEXT_MAX], quad[NUMBER_TEXT_MAX], err[NUMBER_TEXT_MAX], mid[NUMBER_TEXT_MAX],
	    z[NUMBER_TEXT_MAX];
	fprintf(to, "Residuals, observed less computed, in minutes\n%9s %-11s %17s %10s %10s %9s %7s\n",
		"epoch", "kind", "mid BJD_TDB", "linear", "quadratic", "error", "z");
	for (size_t i = 0; i < v->list.n; i++) {
		const struct mid_time *t = &v->time[i];
		const struct residual r = residual_of(v, t);
		number_text_jd2(t->mid.jd, 6, mid);
		number_text_fixed(r.oc_min, 3, oc);
		number_text_fixed(v->has_quadratic ? fit_residual_d(&v->quadratic, t) * DAY_MIN : NAN, 3,
				  quad);
		number_text_fixed(r.err_min, 3, err);
		number_text_fixed(r.z, 2, z);
		fprintf(to, "%9ld %-11s %17s %10s %10s %9s %7s", t->epoch, kind_word(t->kind), mid,
			oc[0] ? oc : "-", quad[0] ? quad : "-", err, z[0] ? z : "-");
		fputs(fit_is_outlier(v, i) ? "  OUTLIER" : "", to);
		fputs(t->used ? "" : "  excluded", to);
		if (v->list.row[i].source[0]) {
			fputs("  ", to);
			text_cell(to, v->list.row[i].source, 50, false);
		}
		fputc('\n', to);
	}
}

static void prior_text(FILE *to, const struct ephemeris *e)
{
	char t0[NUMBER_TEXT_MAX], t0_err[NUMBER_TEXT_MAX], p[NUMBER_TEXT_MAX], p_err[NUMBER_TEXT_MAX];
	number_text_jd2(e->t0.jd, 8, t0);
	number_text_fixed(sqrt(e->c00), 8, t0_err);
	number_text_fixed(e->period_d, 10, p);
	number_text_fixed(sqrt(e->c11), 10, p_err);
	fprintf(to, "current ephemeris with the times added: T0 %s +- %s BJD_TDB, P %s +- %s d\n", t0, t0_err,
		p, p_err);
}

void fits_text(FILE *to, const char *target, const struct fit_view *v)
{
	text_cell(to, target, 80, false);
	fprintf(to, ": %zu of %zu mid-times used", v->used, v->list.n);
	if (v->linear.jitter_d > 0.0)
		fprintf(to, ", %.2f s added to every error in quadrature", v->linear.jitter_d * DAY_S);
	fputc('\n', to);
	if (v->has_linear)
		fit_text(to, "linear", &v->linear);
	else
		fputs("too few mid-times for a fit of their own\n", to);
	if (v->has_quadratic)
		fit_text(to, "quadratic", &v->quadratic);
	if (v->has_linear)
		fprintf(
		    to,
		    "preferred: %s (the quadratic one when BIC falls by more than 10, its term is beyond 3 "
		    "scaled sigma, 8 "
		    "times are there,\n  and dropping any one time keeps that)\n",
		    v->prefers_quadratic ? "quadratic" : "linear");
	if (v->has_prior)
		prior_text(to, &v->prior);
	residuals_text(to, v);
	fprintf(
	    to,
	    "OUTLIER: robust z above %g; nothing is dropped by itself (wane midtime exclude TARGET EPOCH).\n",
	    OUTLIER_Z);
}
