/* SPDX-License-Identifier: MIT
 * The coming windows that would refresh ageing ephemerides: nights outside, so that a night's tables are
 * built once for all targets. */
#include "tui/drift_rows.h"

#include "ephem/refit.h"
#include "ephem/units.h"

#include <math.h>
#include <stdlib.h>

/* Up to here a window whose mid-time can't be observed has no chance of both limbs. */
#define SMALL_SIGMA_MIN 10.0
#define ALT_SPARE_DEG 3.0

struct search {
	struct drift_table *table;
	struct run *run;
	struct night night;
	struct sun_sets suns;
	size_t site;
	int day; /* nights since tonight */
};

static double days_after(const struct leap_table *leap, struct utc from, struct utc t)
{
	return utc_diff_s(leap, from, t) / DAY_S;
}

/* Whether a row still looks for a window on that night. */
static bool wants(const struct drift_row *row, const struct search *s)
{
	if (row->search != REFRESH_SEARCHED)
		return false;
	if (s->day <= REFRESH_BEST_DAYS || !row->first.found)
		return true;
	/* another site's night of the same name may have been earlier */
	return days_after(&s->run->leap, s->night.noon_utc, row->first.mid) > -1.0;
}

/* A star that never rises above the limit costs no more than this. */
static bool rises(const struct drift_row *row, const struct site *site)
{
	const struct prepared *p = row->prepared;
	const double highest_deg = 90.0 - fabs(site->lat_deg - p->target->dec_deg);
	return highest_deg > fmax(p->limits.value[LIM_ALT], p->airmass_alt_deg) - 1.0;
}

/* A look at the mid-time alone spares most events their intervals. */
static bool hopeless(const struct search *s, const struct drift_row *row, const struct star *star, long epoch)
{
	const struct prepared *p = row->prepared;
	const double sigma_min = drift_sigma_min(&p->eph, epoch) * p->limits.value[LIM_ERROR_SCALE];
	if (!(sigma_min < SMALL_SIGMA_MIN))
		return false;
	const double mid_d = night_of_bjd(&s->night, star, ephemeris_mid(&p->eph, epoch));
	if (night_star_altaz(&s->night, star, mid_d).alt_deg < p->limits.value[LIM_ALT] - ALT_SPARE_DEG)
		return true;
	return intervals_overlap(&s->night.sun_up, mid_d - MIN_D, mid_d + MIN_D) > 1.9 * MIN_D;
}

static bool before_stale(const struct search *s, const struct drift_row *row, struct utc mid)
{
	if (row->stale.when == WHEN_ALREADY)
		return true; /* nothing is left to be in time for */
	return row->stale.when != WHEN_ON || days_after(&s->run->leap, mid, row->stale.utc) > 0.0;
}

static bool better(const struct refresh *new, const struct refresh *old)
{
	if (!old->found || new->late != old->late)
		return !old->found || !new->late;
	const double gain = new->chance_done *new->gain_bits, had = old->chance_done * old->gain_bits;
	return gain > had;
}

static void consider(struct search *s, struct drift_row *row, const struct window *w)
{
	const struct ephemeris *eph = &row->prepared->eph;
	const double precision_min = s->table->choice.precision_min;
	struct refresh new = {.found = true,
			      .site = s->site,
			      .evening_mjd = s->night.mjd,
			      .epoch = w->event.epoch,
			      .mid = night_utc(&s->night, w->event.mid_d),
			      .chance_done = w->chance.done};
	if (!(new.chance_done >= REFRESH_BEST_CHANCE_MIN))
		return;
	if (!(utc_diff_s(&s->run->leap, s->table->now, night_utc(&s->night, w->event.latest_start_d)) > 0.0))
		return;
	new.gain_bits = refresh_bits(eph, new.epoch, precision_min);
	new.sigma_after_min = refresh_sigma_min(eph, new.epoch, precision_min, row->epoch_at);
	const double away_d = days_after(&s->run->leap, s->table->now, new.mid);
	const bool adequate = new.chance_done >= REFRESH_CHANCE_MIN &&new.sigma_after_min <= row->limit_min;
	if (adequate && away_d <= REFRESH_FIRST_DAYS &&
	    (!row->first.found || days_after(&s->run->leap, new.mid, row->first.mid) > 0.0))
		row->first = new;
	new.late = !before_stale(s, row, new.mid);
	if (away_d <= REFRESH_BEST_DAYS && better(&new, &row->best))
		row->best = new;
}

static void look_at(struct search *s, struct drift_row *row)
{
	const struct prepared *p = row->prepared;
	const struct star star = night_star(&s->night, p->target);
	struct target_night tn;
	bool ready = false;
	long first, last;
	if (!window_epochs(&s->night, &star, p, KIND_TRANSIT, &first, &last))
		return;
	for (long epoch = first; epoch <= last; epoch++) {
		struct window w;
		if (hopeless(s, row, &star, epoch))
			continue;
		if (!ready)
			tn = target_on_night(&s->night, p, &star, &s->suns, NULL);
		ready = true;
		if (tn.limb.n == 0)
			return;
		window_make(&w, &tn, KIND_TRANSIT, epoch, STAGE_CHANCE);
		consider(s, row, &w);
	}
}

static enum status search_night(struct search *s, bool *wanted, struct err *e)
{
	struct drift_table *t = s->table;
	const struct site *site = &t->site[s->site];
	const int32_t mjd = night_date_of(site->lon_east_deg, t->now) + s->day;
	enum status st = night_build(&s->night, site, &s->run->clock, mjd, s->run->memo, e);
	s->night.telescope = run_telescope_at(s->run, site);
	s->suns.n = 0;
	for (size_t i = 0; st == ST_OK && i < t->n; i++) {
		struct drift_row *row = &t->row[i];
		if (!wants(row, s) || !rises(row, site))
			continue;
		*wanted = true;
		look_at(s, row);
	}
	return st;
}

static void fill_after(struct drift_row *row, const struct search *s)
{
	struct ephemeris after = row->prepared->eph;
	const struct mid_time seen = {.epoch = row->best.epoch,
				      .kind = KIND_TRANSIT,
				      .mid = ephemeris_mid(&after, row->best.epoch),
				      .err_d = s->table->choice.precision_min * MIN_D,
				      .used = true};
	struct update update;
	if (ephemeris_update(&after, &seen, &update, NULL) == ST_OK)
		row->stale_after = drift_date_of(&after, &s->run->leap, row->limit_min, row->x_now);
}

enum status drift_search(struct drift_table *t, struct run *r, struct err *e)
{
	struct search *s = calloc(1, sizeof *s);
	enum status st = ST_OK;
	bool any = false, wanted = true;
	if (!s)
		return err_set(e, ST_MEMORY, "no memory for a night");
	s->table = t;
	s->run = r;
	for (size_t i = 0; i < t->n; i++)
		any = any || t->row[i].search == REFRESH_SEARCHED;
	for (s->day = 0; any && wanted && st == ST_OK && s->day <= REFRESH_FIRST_DAYS; s->day++) {
		wanted = false;
		for (s->site = 0; st == ST_OK && s->site < t->n_sites; s->site++)
			st = search_night(s, &wanted, e);
	}
	for (size_t i = 0; st == ST_OK && i < t->n; i++)
		if (t->row[i].best.found)
			fill_after(&t->row[i], s);
	free(s);
	return st;
}
