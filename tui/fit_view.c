/* SPDX-License-Identifier: MIT */
#include "tui/fit_view.h"

#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/midtime_count.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { QUADRATIC_TERMS = 3, LINEAR_TERMS = 2, T0_DECIMALS = 12 };

bool fit_is_outlier(const struct fit_view *v, size_t i)
{
	return fabs(v->z_robust[i]) > OUTLIER_Z;
}

static enum status load_times(struct fit_view *v, struct run *r, const struct prepared *p, struct err *e)
{
	if (!r->store)
		return err_set(e, ST_ABSENT, "no mid-time is stored");
	enum status s = midtimes_load(r->store, p->target->id, &v->list, e);
	if (s != ST_OK)
		return s;
	v->time = calloc(v->list.n + 1, sizeof *v->time);
	v->z_robust = calloc(v->list.n + 1, sizeof *v->z_robust);
	if (!v->time || !v->z_robust)
		return err_set(e, ST_MEMORY, "no memory for %zu mid-times", v->list.n);
	for (size_t i = 0; s == ST_OK && i < v->list.n; i++) {
		s = midtime_on_bjd(r, p, &v->list.row[i], &v->time[i], e);
		v->unstated += v->list.row[i].used && v->list.row[i].standard.claim != SCALE_STATED;
	}
	return s;
}

static bool same_source(const struct target *t, const struct midtime_row *m)
{
	return t->source[0] && m->source[0] && strcmp(t->source, m->source) == 0;
}

/* Each used time is added to the current ephemeris, in the order of epochs. */
static void add_to_prior(struct fit_view *v, const struct prepared *p, double jitter_d)
{
	double sum = 0.0;
	long n = 0;
	v->prior = p->eph;
	v->has_prior = p->has_ephemeris;
	for (size_t i = 0; v->has_prior && i < v->list.n; i++) {
		struct mid_time t = v->time[i];
		struct update update;
		if (!t.used)
			continue;
		t.err_d = hypot(t.err_d, jitter_d);
		v->has_prior = ephemeris_update(&v->prior, &t, &update, NULL) == ST_OK;
		sum += update.z * update.z;
		n++;
	}
	v->prior_z_rms = n > 0 ? sqrt(sum / (double)n) : NAN;
}

/* Too few times for a fit of their own are enough for a prior with errors. */
static enum status prior_alone(struct fit_view *v, const struct prepared *p, double jitter_d, enum status why)
{
	if (why != ST_RANGE || v->used == 0)
		return why;
	for (size_t i = 0; i < v->list.n; i++)
		v->z_robust[i] = (double)NAN;
	add_to_prior(v, p, jitter_d);
	return v->has_prior ? ST_OK : why;
}

static enum status make_fits(struct fit_view *v, const struct prepared *p, const struct fit_choice *choice,
			     struct err *e)
{
	const size_t n = v->list.n;
	double jitter_d = choice->jitter_s / DAY_S;
	enum status s = ST_OK;
	if (choice->jitter_s == JITTER_FIT)
		s = refit_jitter(v->time, n, choice->jitter_terms, &jitter_d, e);
	if (s == ST_OK)
		s = refit(v->time, n, LINEAR_TERMS, choice->ref_epoch, jitter_d, &v->linear, e);
	for (size_t i = 0; i < n; i++) {
		v->used += v->time[i].used;
		v->same_source =
		    v->same_source || (v->time[i].used && same_source(p->target, &v->list.row[i]));
	}
	v->double_counting = v->same_source || strstr(p->target->source, "mid-times") != NULL;
	v->has_linear = s == ST_OK;
	if (s != ST_OK)
		return choice->with_prior ? prior_alone(v, p, jitter_d, s) : s;
	v->has_quadratic =
	    refit(v->time, n, QUADRATIC_TERMS, v->linear.ref_epoch, jitter_d, &v->quadratic, NULL) == ST_OK;
	if (v->has_quadratic)
		s = refit_prefers_quadratic(v->time, n, jitter_d, &v->prefers_quadratic, e);
	if (s == ST_OK)
		s = refit_outliers(v->time, n, v->prefers_quadratic ? QUADRATIC_TERMS : LINEAR_TERMS,
				   v->z_robust, e);
	for (size_t i = 0; s == ST_OK && i < n; i++)
		v->outliers += v->time[i].used && fit_is_outlier(v, i);
	if (s == ST_OK && choice->with_prior)
		add_to_prior(v, p, jitter_d);
	return s;
}

enum status fit_view_make(struct fit_view *v, struct run *r, const struct prepared *p,
			  const struct fit_choice *choice, struct err *e)
{
	fit_view_free(v);
	enum status s = load_times(v, r, p, e);
	if (s == ST_OK)
		s = make_fits(v, p, choice, e);
	if (s != ST_OK)
		fit_view_free(v);
	return s;
}

void fit_view_free(struct fit_view *v)
{
	midtime_list_free(&v->list);
	free(v->time);
	free(v->z_robust);
	*v = (struct fit_view){.time = NULL};
}

/* --- adopting --- */

enum { ADOPTED_FIELDS = 11 };

/* The fields that a fit gives, as texts. What it does not give is cleared. */
struct adopted {
	size_t n;
	int field[ADOPTED_FIELDS];
	const char *text[ADOPTED_FIELDS];
	char room[ADOPTED_FIELDS][64];
};

static char *next_text(struct adopted *a, int field)
{
	char *room = a->room[a->n];
	a->field[a->n] = field;
	a->text[a->n++] = room;
	room[0] = '\0';
	return room;
}

static void put_number(struct adopted *a, int field, double value, bool given)
{
	char *room = next_text(a, field);
	char digits[NUMBER_TEXT_MAX];
	number_text(value, digits);
	if (given)
		snprintf(room, sizeof a->room[0], "%s", digits);
}

static void put_ephemeris(struct adopted *a, const struct ephemeris *eph, bool quadratic)
{
	char t0[NUMBER_TEXT_MAX];
	number_text_jd2(eph->t0.jd, T0_DECIMALS, t0);
	snprintf(next_text(a, FIELD_AT_T0), sizeof a->room[0], "%s", t0);
	put_number(a, FIELD_AT_T0_ERR, sqrt(eph->c00), true);
	put_number(a, FIELD_AT_PERIOD, eph->period_d, true);
	put_number(a, FIELD_AT_PERIOD_ERR, sqrt(eph->c11), true);
	put_number(a, FIELD_AT_COVARIANCE, eph->c01, true);
	put_number(a, FIELD_AT_DPDE, eph->dpde_d, quadratic);
	put_number(a, FIELD_AT_DPDE_ERR, sqrt(eph->c22), quadratic);
	put_number(a, FIELD_AT_T0_DPDE_COV, eph->c02, quadratic);
	put_number(a, FIELD_AT_PERIOD_DPDE_COV, eph->c12, quadratic);
}

static enum status current_version(struct run *r, int64_t target_id, int *version, struct err *e)
{
	struct ephemeris_row *row = NULL;
	size_t n = 0;
	enum status s = ephemeris_versions(r->store, target_id, &row, &n, e);
	for (size_t i = 0; s == ST_OK && i < n; i++)
		if (row[i].current)
			*version = row[i].version;
	free(row);
	return s;
}

enum status fit_adopt(struct run *r, const struct prepared *p, const struct fit_view *v,
		      const struct fit *fit, double scale, int *version, struct err *e)
{
	struct adopted a = {.n = 0};
	const struct ephemeris eph = fit ? fit_ephemeris(fit, scale) : v->prior;
	const bool quadratic = fit ? fit->terms == QUADRATIC_TERMS : eph.c22 > 0.0;
	put_ephemeris(&a, &eph, quadratic);
	/* one time whose standard is not said leaves the fit without one: the systematic error stays */
	const bool stated = v->unstated == 0 && (fit || eph.systematic_min <= 0.0);
	snprintf(next_text(&a, FIELD_AT_SCALE), sizeof a.room[0], "%s", stated ? "BJD_TDB" : "BJD");
	snprintf(next_text(&a, FIELD_AT_SOURCE), sizeof a.room[0],
		 fit ? "refit of %zu mid-times" : "current ephemeris and %zu mid-times", v->used);
	enum status s = target_set(r->store, p->target->name, a.field, a.text, a.n, e);
	return s == ST_OK ? current_version(r, p->target->id, version, e) : s;
}
