/* SPDX-License-Identifier: MIT
 * A stored plan against the ephemerides of today. */
#include "ephem/units.h"
#include "tui/plan_parts.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* The event's mid-time of today's ephemeris nearest to the stored one: another T0 may count from elsewhere.
 * false: none. */
static bool mid_now(const struct plan_view *v, const struct prepared *p, const struct plan_member_view *m,
		    double *mid_d)
{
	const struct night *night = &v->night->night;
	const struct star star = night_star(night, p->target);
	const double stored_d = night_of_utc(night, m->mid), period_d = p->target->period_d;
	struct sun_sets suns = {.n = 0};
	const struct target_night tn = target_on_night(night, p, &star, &suns, NULL);
	struct window w;
	if (!p->has_ephemeris || !(period_d >= PERIOD_MIN_D))
		return false;
	window_make(&w, &tn, m->kind, m->epoch, STAGE_EVENT);
	const double orbits = round((stored_d - w.event.mid_d) / period_d);
	if (fabs(orbits) >= 1.0 && fabs(orbits) < 1e8)
		window_make(&w, &tn, m->kind, m->epoch + (long)orbits, STAGE_EVENT);
	*mid_d = w.event.mid_d;
	return isfinite(*mid_d);
}

/* `version 3 (Tern group 2026) adopted 2026-04-20` */
static enum status why_moved(struct plan_view *v, struct plan_member_view *m, const struct target *t,
			     struct err *e)
{
	struct ephemeris_row *row = NULL;
	size_t n = 0;
	char text[400];
	if (t->ephemeris_id == m->ephemeris_id) {
		m->moved_why = "the target or the clock's tables were changed";
		return ST_OK;
	}
	m->moved_why = "another ephemeris adopted";
	enum status s = ephemeris_versions(v->run->store, t->id, &row, &n, e);
	for (size_t i = 0; s == ST_OK && i < n; i++) {
		if (row[i].id != t->ephemeris_id)
			continue;
		snprintf(text, sizeof text, "version %d (%s) adopted %.10s", row[i].version,
			 row[i].source[0] ? row[i].source : "no source", row[i].entered_utc);
		m->moved_why = plan_copy(v, text);
	}
	free(row);
	return s;
}

static enum status member_moved(struct plan_view *v, struct plan_member_view *m, double least_min,
				struct err *e)
{
	const struct prepared *p = run_prepared(v->run, m->target_id, m->target);
	double mid_d;
	if (!p) {
		m->moved_why = "the target is no longer stored";
		return ST_OK;
	}
	const bool other = p->target->ephemeris_id != m->ephemeris_id;
	if (!member_figure(m, "mid_utc")[0])
		return ST_OK;
	if (!mid_now(v, p, m, &mid_d)) {
		m->moved_why = "the target has no ephemeris to compare with now";
		return ST_OK;
	}
	const double moved_min = (mid_d - night_of_utc(&v->night->night, m->mid)) * DAY_MIN;
	const bool moved = fabs(moved_min) >= least_min;
	if (!other && !moved)
		return ST_OK;
	m->moved_min = moved_min;
	m->moved = moved;
	v->moved += moved;
	enum status s = why_moved(v, m, p->target, e);
	if (s == ST_OK && !(mid_d >= 0.0 && mid_d <= v->night->night.length_d)) {
		char text[500];
		plan_put_words(text, sizeof text, "%s; its mid-time is not in this night now", m->moved_why);
		m->moved_why = plan_copy(v, text);
	}
	return s;
}

enum status stored_moves(struct plan_view *v, double moved_min, struct err *e)
{
	enum status s = ST_OK;
	const double least_min = isfinite(moved_min) && moved_min >= 0.0
				     ? moved_min
				     : stored_value(&v->run->stored, KEY_MOVED_MIN);
	v->moved = 0;
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; s == ST_OK && k < v->item[i].n; k++)
			s = member_moved(v, &v->item[i].member[k], least_min, e);
	return s;
}
