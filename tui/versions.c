/* SPDX-License-Identifier: MIT */
#include "tui/versions.h"

#include "ephem/number_text.h"
#include "ephem/units.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum { SCAN_MONTHS = 600 };
#define MONTH_D (YEAR_D / 12.0)

enum status version_ephemeris(struct run *r, const struct target *t, const struct ephemeris_row *row,
			      struct ephemeris *out, struct err *e)
{
	struct target other = *t;
	other.t0 = (struct jd2){(double)NAN, (double)NAN};
	other.period_d = NAN;
	other.time_scale = row->scale;
	enum status s = standard_parse(row->scale, &other.standard, e);
	if (s == ST_OK && row->t0_text[0])
		s = number_parse_jd2(row->t0_text, strlen(row->t0_text), &other.t0, NULL, e);
	if (s == ST_OK && row->period_text[0])
		s = number_parse(row->period_text, strlen(row->period_text), &other.period_d, NULL, e);
	if (s != ST_OK)
		return s;
	other.t0_err_d = row->t0_err_d;
	other.period_err_d = row->period_err_d;
	other.t0_period_cov_d2 = row->t0_period_cov_d2;
	other.dpde_d = row->dpde_d;
	other.dpde_err_d = row->dpde_err_d;
	other.t0_dpde_cov_d2 = row->t0_dpde_cov_d2;
	other.period_dpde_cov_d2 = row->period_dpde_cov_d2;
	other.ttv_amp_min = row->ttv_amp_min;
	const struct prepared p = prepare_target(&other, &r->limits, &r->clock, r->memo, false, false);
	if (!p.has_ephemeris)
		return err_set(e, ST_RANGE, "version %d has no ephemeris that can be counted", row->version);
	*out = p.eph;
	return ST_OK;
}

/* Both on the same list; false when there is no such version. */
static bool choose(const struct ephemeris_row *row, size_t n, int version, size_t *other, int *current)
{
	bool found = false;
	for (size_t i = 0; i < n; i++) {
		if (row[i].current)
			*current = row[i].version;
		if (row[i].version == version) {
			*other = i;
			found = true;
		}
	}
	return found;
}

static struct tdb after(struct tdb now, double days)
{
	return (struct tdb){.jd = jd2_add_d(now.jd, days)};
}

static bool apart(const struct ephemeris *a, const struct ephemeris *b, struct tdb t, double limit_min)
{
	return fabs(drift_between(a, b, t).gap_min) > limit_min;
}

static struct drift_date parted_on(const struct ephemeris *a, const struct ephemeris *b,
				   const struct leap_table *leap, struct tdb now, double limit_min)
{
	if (isnan(limit_min) || isnan(drift_between(a, b, now).gap_min))
		return (struct drift_date){.when = WHEN_UNKNOWN};
	if (apart(a, b, now, limit_min))
		return (struct drift_date){.when = WHEN_ALREADY};
	for (int month = 1; month <= SCAN_MONTHS; month++) {
		double near_d = (month - 1) * MONTH_D, far_d = month * MONTH_D;
		if (!apart(a, b, after(now, far_d), limit_min))
			continue;
		while (far_d - near_d > 0.25) {
			const double mid_d = 0.5 * (near_d + far_d);
			if (apart(a, b, after(now, mid_d), limit_min))
				far_d = mid_d;
			else
				near_d = mid_d;
		}
		return (struct drift_date){.when = WHEN_ON,
					   .utc = tt_to_utc(leap, tdb_to_tt(after(now, far_d)))};
	}
	return (struct drift_date){.when = WHEN_NEVER};
}

enum status gap_table_make(struct gap_table *t, struct run *r, const struct prepared *p, int version,
			   double limit_min, struct err *e)
{
	struct ephemeris_row *row = NULL;
	struct ephemeris other;
	size_t n = 0, at = 0;
	const struct utc now_utc = wall_now(&r->wall);
	const struct tdb now = tt_to_tdb(utc_to_tt(&r->leap, now_utc));
	*t = (struct gap_table){.other = version,
				.limit_min = isnan(limit_min) ? drift_default_limit_min(p) : limit_min};
	enum status s = ephemeris_versions(r->store, p->target->id, &row, &n, e);
	if (s == ST_OK && !choose(row, n, version, &at, &t->current))
		s = err_set(e, ST_ABSENT, "no version %d of the ephemeris is stored (there are %zu)", version,
			    n);
	if (s == ST_OK && !p->has_ephemeris)
		s = err_set(e, ST_RANGE, "the current version has no ephemeris that can be counted");
	if (s == ST_OK)
		s = version_ephemeris(r, p->target, &row[at], &other, e);
	free(row);
	if (s != ST_OK)
		return s;
	for (int year = 0; year <= GAP_YEARS; year++) {
		const double days = year * YEAR_D;
		t->row[year].at = utc_add_s(&r->leap, now_utc, days * DAY_S);
		t->row[year].gap = drift_between(&p->eph, &other, after(now, days));
	}
	t->parted = parted_on(&p->eph, &other, &r->leap, now, t->limit_min);
	return ST_OK;
}
