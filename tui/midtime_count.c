/* SPDX-License-Identifier: MIT */
#include "tui/midtime_count.h"

#include "ephem/drift.h"
#include "ephem/frame.h"
#include "ephem/number_text.h"
#include "ephem/units.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>

/* Nearer than this share of a period to half a period a time fits neither neighbour, however small its error.
 */
#define BETWEEN_SHARE 0.45

enum status midtime_on_bjd(struct run *r, const struct prepared *p, const struct midtime_row *row,
			   struct mid_time *out, struct err *e)
{
	const double jd = jd2_value(row->mid) + row->standard.offset_d;
	const struct vec3 n = frame_catalogue_direction(p->target, 2000.0 + (jd - J2000_JD) / YEAR_D);
	*out = (struct mid_time){.epoch = row->epoch,
				 .kind = row->kind,
				 .err_d = row->err_d,
				 .delay_d = row->kind == KIND_OCCULTATION ? p->occultation_d : 0.0,
				 .used = row->used};
	return standard_to_bjd_tdb(r->memo, &r->clock, &row->standard, row->mid, n, &out->mid, e);
}

/* --- counting --- */

struct counter {
	const struct prepared *p;
	struct ephemeris eph; /* the assumed one, refitted as times come in */
	const struct mid_time *time;
	struct midtime_text *row;
	struct counted *out;
	size_t n;
};

static double off_d(const struct ephemeris *eph, const struct mid_time *t)
{
	return jd2_diff_d(t->mid.jd, ephemeris_mid(eph, t->epoch).jd) - t->delay_d;
}

/* A time that does not fit moves the assumed ephemeris no more than one that is as bad as its misfit. */
static void take_in(struct counter *c, const struct mid_time *t)
{
	struct update update;
	struct mid_time soft = *t;
	soft.err_d = fmax(t->err_d, fabs(off_d(&c->eph, t)) / Z_WARN);
	if (ephemeris_update(&c->eph, &soft, &update, NULL) != ST_OK)
		return; /* without errors there is nothing to refit */
}

static void judge(struct counter *c, size_t i, const struct mid_time *t)
{
	const struct ephemeris *current = &c->p->eph;
	const double sigma_d = hypot(drift_sigma_min(current, t->epoch) * MIN_D, t->err_d);
	c->out[i].z = off_d(current, t) / sigma_d;
}

/* Epochs as the table gives them, all off by one number. */
static long common_shift(const struct counter *c)
{
	long shift = 0;
	size_t given = 0;
	for (size_t i = 0; i < c->n; i++) {
		if (!c->row[i].has_epoch)
			continue;
		const struct mid_time *t = &c->time[i];
		const struct epoch_guess g = epoch_of(&c->eph, t->mid, t->err_d, t->delay_d);
		const long apart = g.epoch - c->row[i].row.epoch;
		if (!g.safe || (given > 0 && apart != shift))
			return 0;
		shift = apart;
		given++;
	}
	return given > 1 ? shift : 0;
}

static void take_given(struct counter *c, struct mid_time time[], long shift)
{
	for (size_t i = 0; i < c->n; i++) {
		if (!c->row[i].has_epoch)
			continue;
		c->row[i].row.epoch += shift;
		time[i].epoch = c->row[i].row.epoch;
		c->out[i].result = COUNT_GOOD;
		c->out[i].guess = epoch_of(&c->p->eph, time[i].mid, time[i].err_d, time[i].delay_d);
		judge(c, i, &time[i]);
	}
	for (size_t i = 0; i < c->n; i++)
		if (c->row[i].has_epoch && c->row[i].row.used)
			take_in(c, &time[i]);
}

/* Where the current ephemeris is known best. */
static double best_epoch(const struct ephemeris *eph)
{
	return eph->c11 > 0.0 && isfinite(eph->c01) ? -eph->c01 / eph->c11 : 0.0;
}

struct turn {
	double distance; /* from the best-known epoch */
	size_t index;
};

static int by_distance(const void *left, const void *right)
{
	const struct turn *a = left, *b = right;
	if (a->distance < b->distance || a->distance > b->distance)
		return a->distance < b->distance ? -1 : 1;
	return (a->index > b->index) - (a->index < b->index);
}

/* One time: its epoch by the assumed ephemeris as it is now. */
static bool count_one(struct counter *c, struct mid_time *t, size_t i)
{
	const struct epoch_guess g = epoch_of(&c->eph, t->mid, t->err_d, t->delay_d);
	const double period_d = c->eph.period_d + c->eph.dpde_d * (double)g.epoch;
	c->out[i].guess = g;
	c->out[i].result = COUNT_AMBIGUOUS;
	if (!g.safe)
		return false;
	c->out[i].result = COUNT_BETWEEN;
	if (fabs(g.off_d) > BETWEEN_SHARE * period_d || fabs(g.off_d) + 3.0 * g.sigma_d > 0.5 * period_d)
		return false;
	c->out[i].result = COUNT_GOOD;
	t->epoch = c->row[i].row.epoch = g.epoch;
	judge(c, i, t);
	if (c->row[i].row.used)
		take_in(c, t);
	return true;
}

static void count_rest(struct counter *c, struct mid_time time[], struct turn turn[])
{
	const double best = best_epoch(&c->eph);
	size_t left = 0;
	for (size_t i = 0; i < c->n; i++) {
		if (c->row[i].has_epoch)
			continue;
		const double days = jd2_diff_d(time[i].mid.jd, c->eph.t0.jd);
		turn[left++] = (struct turn){fabs(days / c->eph.period_d - best), i};
	}
	qsort(turn, left, sizeof *turn, by_distance);
	/* one that was ambiguous may be safe when others, on the other side, have come in */
	for (bool more = true; more && left > 0;) {
		size_t still = 0;
		more = false;
		for (size_t k = 0; k < left; k++) {
			const size_t i = turn[k].index;
			if (count_one(c, &time[i], i))
				more = true;
			else
				turn[still++] = turn[k];
		}
		left = still;
	}
}

enum status midtimes_count(struct run *r, const struct prepared *p, struct midtime_text row[], size_t n,
			   struct counted out[], long *shift, struct err *e)
{
	struct mid_time *time = calloc(n + 1, sizeof *time);
	struct turn *turn = calloc(n + 1, sizeof *turn);
	enum status s = time && turn ? ST_OK : err_set(e, ST_MEMORY, "no memory for %zu mid-times", n);
	*shift = 0;
	for (size_t i = 0; s == ST_OK && i < n; i++) {
		s = midtime_on_bjd(r, p, &row[i].row, &time[i], e);
		out[i] =
		    (struct counted){.result = row[i].has_epoch ? COUNT_GOOD : COUNT_IMPOSSIBLE, .z = NAN};
	}
	if (s == ST_OK && p->has_ephemeris) {
		struct counter c = {.p = p, .eph = p->eph, .time = time, .row = row, .out = out, .n = n};
		*shift = common_shift(&c);
		take_given(&c, time, *shift);
		count_rest(&c, time, turn);
	}
	free(time);
	free(turn);
	return s;
}

/* `411 (period 3.412877 d)`; the period that a candidate would mean. */
static void candidate(long epoch, double period_d, char *out, size_t n)
{
	char digits[NUMBER_TEXT_MAX];
	number_text_fixed(period_d, 6, digits);
	if (epoch == 0)
		snprintf(out, n, "0 (any period)");
	else if (!(period_d > 0.0))
		snprintf(out, n, "%ld (no period does that)", epoch);
	else
		snprintf(out, n, "%ld (period %s d)", epoch, digits);
}

void count_refusal_text(const struct prepared *p, const struct counted *c, char *out, size_t n)
{
	char before[80], here[80], after[80];
	const struct epoch_guess *g = &c->guess;
	if (c->result == COUNT_IMPOSSIBLE) {
		snprintf(out, n, "the target has no ephemeris to count by: the epoch has to be given");
		return;
	}
	candidate(g->epoch - 1, g->period_before_d, before, sizeof before);
	candidate(g->epoch, p->eph.period_d + p->eph.dpde_d * (double)g->epoch, here, sizeof here);
	candidate(g->epoch + 1, g->period_after_d, after, sizeof after);
	const char *why = c->result == COUNT_BETWEEN ? "it lies between two mid-times and fits neither"
			  : isnan(g->sigma_d)
			      ? "the ephemeris has no errors, so no count is safe"
			      : "no count is safe, 3 sigma of prediction and time reach half a period";
	snprintf(out, n, "%s; it may be epoch %s, %s or %s: give the epoch", why, before, here, after);
}
