/* SPDX-License-Identifier: MIT */
#include "tui/drift_rows.h"

#include "db/midtimes.h"
#include "ephem/earth_memo.h"
#include "ephem/frame.h"
#include "ephem/units.h"
#include "tui/given.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#define PHASE_LOST_SHARE (1.0 / 6.0)
#define LAST_MJD 634167 /* 2500-01-01 */
enum { DEFAULT_YEARS = 3, DIP_STEPS = 512 };

/* --- what is asked --- */

/* The same date some years on; 29 February becomes the 28th. */
static struct utc years_later(struct utc t, int years)
{
	struct date d = date_from_mjd(t.mjd);
	d.year += years;
	if (d.month == 2 && d.day == 29)
		d.day = 28;
	struct utc out = {.sod_s = fmin(t.sod_s, 86399.0)};
	if (date_to_mjd(d, &out.mjd, NULL) != ST_OK)
		out.mjd = t.mjd;
	return out;
}

enum status drift_choice_of(const struct run *r, struct drift_choice *out, struct err *e)
{
	const struct options *o = r->options;
	struct err why;
	*out = (struct drift_choice){
	    .at = years_later(wall_now(&r->wall), DEFAULT_YEARS),
	    .limit_min = o->drift_limit_min,
	    .precision_min = isnan(o->precision_min) ? r->settings.refresh_precision_min : o->precision_min,
	    .refresh = !o->no_refresh,
	    .named = o->n_targets > 0,
	};
	if (o->at && given_day_or_time(&r->leap, o->at, &out->at, &why) != ST_OK)
		return err_set(e, why.status, "--at: %.460s", why.text);
	return ST_OK;
}

double drift_default_limit_min(const struct prepared *p)
{
	const double k = p->limits.value[LIM_PAD];
	const double wanted_d = fmin(p->baseline_before_d[KIND_TRANSIT], p->baseline_after_d[KIND_TRANSIT]);
	if (!(k > 0.0))
		return NAN;
	return fmax(wanted_d * DAY_MIN - p->limits.value[LIM_MIN_BASELINE], 0.0) / k;
}

/* --- when --- */

static struct drift_date date_at(const struct ephemeris *eph, const struct leap_table *leap, double x)
{
	const double days = x * (eph->period_d + 0.5 * eph->dpde_d * x);
	const double jd = jd2_value(eph->t0.jd) + days;
	if (!(jd < LAST_MJD + MJD_ZERO_JD))
		return (struct drift_date){.when = WHEN_NEVER};
	const struct tdb bjd = {.jd = jd2_add_d(eph->t0.jd, days)};
	return (struct drift_date){.when = WHEN_ON, .utc = tt_to_utc(leap, tdb_to_tt(bjd))};
}

/* Of a quadratic ephemeris whose sigma dips twice drift_below tells the later dip: the end of the earlier
 * one, to whole epochs. */
static double end_of_dip(const struct ephemeris *eph, double limit_min, double from, double to)
{
	double below = from;
	for (int i = 1; i <= DIP_STEPS; i++) {
		double x = from + (to - from) * i / DIP_STEPS;
		if (drift_sigma_min(eph, (long)x) <= limit_min) {
			below = x;
			continue;
		}
		while (x - below > 1.0) {
			const double mid = below + 0.5 * (x - below);
			if (drift_sigma_min(eph, (long)mid) <= limit_min)
				below = mid;
			else
				x = mid;
		}
		return x;
	}
	return to;
}

struct drift_date drift_date_of(const struct ephemeris *eph, const struct leap_table *leap, double limit_min,
				double x_now)
{
	const struct drift_span span = drift_below(eph, limit_min);
	if (isnan(limit_min) || !span.known)
		return (struct drift_date){.when = WHEN_UNKNOWN};
	if (span.never)
		return (struct drift_date){.when = WHEN_NEVER};
	if (span.always || x_now >= span.to_epoch)
		return (struct drift_date){.when = WHEN_ALREADY};
	if (x_now > span.from_epoch)
		return isfinite(span.to_epoch) ? date_at(eph, leap, span.to_epoch)
					       : (struct drift_date){.when = WHEN_NEVER};
	if (drift_sigma_min(eph, (long)floor(x_now)) > limit_min)
		return (struct drift_date){.when = WHEN_ALREADY};
	return date_at(eph, leap, end_of_dip(eph, limit_min, x_now, span.from_epoch));
}

/* --- a row --- */

struct maker {
	struct run *run;
	struct drift_table *table;
	struct earth_memo *earth;
};

static struct vec3 towards(const struct target *t, struct utc at)
{
	return frame_catalogue_direction(t, 2000.0 + (at.mjd + MJD_ZERO_JD - J2000_JD) / YEAR_D);
}

static void fill_epochs(struct drift_row *row, const struct maker *m)
{
	const struct prepared *p = row->prepared;
	const struct leap_table *leap = &m->run->leap;
	const struct vec3 n = towards(p->target, m->table->now);
	const struct tdb now = earth_memo_bjd(m->earth, leap, m->table->now, n);
	const struct tdb at = earth_memo_bjd(m->earth, leap, m->table->choice.at, n);
	long next_at;
	if (!p->has_ephemeris || !ephemeris_first_after(&p->eph, now, &row->next_epoch) ||
	    !ephemeris_first_after(&p->eph, at, &next_at))
		return;
	row->counted = true;
	row->epoch_now = row->next_epoch - 1;
	row->x_now = (double)row->epoch_now + ephemeris_phase(&p->eph, now);
	row->epoch_at = next_at - 1;
	row->next_mid = earth_memo_utc(m->earth, leap, ephemeris_mid(&p->eph, row->next_epoch), n);
}

static void fill_sigma(struct drift_row *row, const struct maker *m)
{
	const struct prepared *p = row->prepared;
	const double lost_min = PHASE_LOST_SHARE * p->eph.period_d * DAY_MIN;
	const double own_min = m->table->choice.limit_min;
	row->limit_min = isnan(own_min) ? drift_default_limit_min(p) : own_min;
	row->sigma_now_min = drift_sigma_min(&p->eph, row->epoch_now);
	row->sigma_at_min = drift_sigma_min(&p->eph, row->epoch_at);
	row->stale = drift_date_of(&p->eph, &m->run->leap, row->limit_min, row->x_now);
	row->lost = drift_date_of(&p->eph, &m->run->leap, lost_min, row->x_now);
	if (row->stale.when == WHEN_ALREADY)
		row->flags |= FLAG_BIT(FLAG_STALE);
	if (row->lost.when == WHEN_ALREADY)
		row->flags |= FLAG_BIT(FLAG_PHASE_LOST);
}

static enum refresh_search search_of(const struct drift_row *row, const struct drift_table *t)
{
	if (!t->choice.refresh || t->n_sites == 0)
		return REFRESH_NOT_ASKED;
	if (!row->counted || isnan(row->sigma_now_min) || row->lost.when == WHEN_ALREADY)
		return REFRESH_NO_CHANCE;
	if (!t->choice.named && !(row->sigma_at_min > row->limit_min) && row->stale.when != WHEN_ALREADY)
		return REFRESH_NOT_NEEDED;
	return REFRESH_SEARCHED;
}

static void fill_row(struct drift_row *row, const struct prepared *p, const struct maker *m)
{
	*row = (struct drift_row){
	    .prepared = p, .sigma_now_min = NAN, .sigma_at_min = NAN, .limit_min = NAN, .flags = p->flags};
	fill_epochs(row, m);
	if (row->counted)
		fill_sigma(row, m);
	else
		row->flags |= FLAG_BIT(FLAG_SIGMA_UNKNOWN);
	row->search = search_of(row, m->table);
}

void drift_words(const struct drift_row *row, char *out, size_t n)
{
	static const struct {
		enum flag flag;
		const char *words;
	} said[] = {
	    {FLAG_PHASE_LOST, "PHASE LOST"},
	    {FLAG_STALE, "STALE NOW"},
	    {FLAG_SIGMA_UNKNOWN, "no errors published"},
	    {FLAG_SCALE_ASSUMED, "time standard assumed"},
	    {FLAG_DOUBTFUL_POSITION, "doubtful position"},
	    {FLAG_DOUBTFUL_VALUES, "doubtful values"},
	};
	size_t used = 0;
	out[0] = '\0';
	if (!row->counted) {
		snprintf(out, n, "no ephemeris");
		used = strlen(out);
	}
	for (size_t i = 0; i < sizeof said / sizeof said[0]; i++) {
		if (!(row->flags & FLAG_BIT(said[i].flag)))
			continue;
		if (!row->counted && said[i].flag == FLAG_SIGMA_UNKNOWN)
			continue;
		if (used + strlen(said[i].words) + 3 > n)
			break;
		used += (size_t)snprintf(out + used, n - used, "%s%s", used ? "; " : "", said[i].words);
	}
}

/* --- mid-times --- */

struct place {
	int64_t id;
	size_t row;
};

static int by_id(const void *left, const void *right)
{
	const struct place *a = left, *b = right;
	return (a->id > b->id) - (a->id < b->id);
}

static double given_jd(const struct midtime_row *m)
{
	return jd2_value(m->mid) + m->standard.offset_d;
}

static void fill_last(struct drift_row *row, const struct midtime_row *last, const struct maker *m)
{
	const struct target *t = row->prepared->target;
	const double jd = given_jd(last);
	const struct vec3 n = frame_catalogue_direction(t, 2000.0 + (jd - J2000_JD) / YEAR_D);
	const struct observer centre = {.clock = &m->run->clock};
	struct tt tt;
	if (last->standard.origin == ORIGIN_BARYCENTRE && last->standard.clock == CLOCK_TDB) {
		const struct tdb bjd = {.jd = jd2_add_d(last->mid, last->standard.offset_d)};
		row->last_midtime = earth_memo_utc(m->earth, &m->run->leap, bjd, n);
		row->has_midtime = true;
	} else if (standard_to_tt(m->run->memo, &centre, &last->standard, last->mid, n, &tt, NULL) == ST_OK) {
		row->last_midtime = tt_to_utc(&m->run->leap, tt);
		row->has_midtime = true;
	}
}

static void count_midtimes(const struct maker *m, const struct midtime_list *list, const int64_t *target_id,
			   const struct place *places)
{
	struct drift_table *t = m->table;
	for (size_t i = 0; i < list->n;) {
		const struct place key = {.id = target_id[i]};
		const struct place *found = bsearch(&key, places, t->n, sizeof *places, by_id);
		const struct midtime_row *last = NULL;
		long count = 0;
		for (; i < list->n && target_id[i] == key.id; i++) {
			if (!list->row[i].used)
				continue;
			count++;
			if (!last || given_jd(&list->row[i]) > given_jd(last))
				last = &list->row[i];
		}
		if (found && last) {
			t->row[found->row].midtimes = count;
			fill_last(&t->row[found->row], last, m);
		}
	}
}

static enum status fill_midtimes(const struct maker *m, struct err *e)
{
	struct drift_table *t = m->table;
	struct midtime_list list = {.n = 0};
	int64_t *target_id = NULL;
	if (!m->run->store || t->n == 0)
		return ST_OK;
	struct place *places = calloc(t->n, sizeof *places);
	if (!places)
		return err_set(e, ST_MEMORY, "no memory for %zu targets", t->n);
	for (size_t i = 0; i < t->n; i++)
		places[i] = (struct place){t->row[i].prepared->target->id, i};
	qsort(places, t->n, sizeof *places, by_id);
	enum status s = midtimes_load_all(m->run->store, &list, &target_id, e);
	if (s == ST_OK)
		count_midtimes(m, &list, target_id, places);
	midtime_list_free(&list);
	free(target_id);
	free(places);
	return s;
}

/* --- the table --- */

static enum status make_rows(struct drift_table *t, struct run *r, struct err *e)
{
	struct maker m = {.run = r, .table = t, .earth = calloc(1, sizeof *m.earth)};
	t->row = calloc(r->n_prepared + 1, sizeof *t->row);
	if (!m.earth || !t->row) {
		free(m.earth);
		return err_set(e, ST_MEMORY, "no memory for %zu targets", r->n_prepared);
	}
	t->n = r->n_prepared;
	for (size_t i = 0; i < t->n; i++)
		fill_row(&t->row[i], &r->prepared[i], &m);
	enum status s = fill_midtimes(&m, e);
	free(m.earth);
	return s;
}

enum status drift_table_make(struct drift_table *t, struct run *r, const struct drift_choice *choice,
			     struct err *e)
{
	drift_table_free(t);
	*t = (struct drift_table){.choice = *choice, .now = wall_now(&r->wall)};
	enum status s = run_all_sites(r, t->site, &t->n_sites, e);
	if (s == ST_OK && t->n_sites == 1 && !t->site[0].name[0])
		t->n_sites = 0;
	if (s == ST_OK)
		s = make_rows(t, r, e);
	if (s == ST_OK && choice->refresh && t->n_sites > 0)
		s = drift_search(t, r, e);
	if (s != ST_OK)
		drift_table_free(t);
	return s;
}

void drift_table_free(struct drift_table *t)
{
	free(t->row);
	*t = (struct drift_table){.n = 0};
}
