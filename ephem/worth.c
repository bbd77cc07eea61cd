/* SPDX-License-Identifier: MIT */
#include "ephem/worth.h"

#include "ephem/chance.h"
#include "ephem/drift.h"
#include "ephem/units.h"

#include <math.h>

const char *const worth_choice_words[WORTH_CHOICE_COUNT] = {"bits", "depth", "priority"};

struct worth_rules worth_rules_built_in(void)
{
	return (struct worth_rules){.choice = WORTH_BITS, .need_min = 2.0, .floor_min = 0.0};
}

void worth_chances(double ingress, double egress, double done, struct worth_case c[CATCH_COUNT])
{
	if (isnan(ingress) || isnan(egress) || isnan(done)) {
		for (int i = 0; i < CATCH_COUNT; i++)
			c[i].chance = NAN;
		return;
	}
	const double both = fmin(fmax(done, ingress + egress - 1.0), fmin(ingress, egress));
	c[CATCH_WHOLE].chance = fmax(both, 0.0);
	c[CATCH_INGRESS].chance = ingress - c[CATCH_WHOLE].chance;
	c[CATCH_EGRESS].chance = egress - c[CATCH_WHOLE].chance;
}

static double density(double x)
{
	return exp(-0.5 * x * x) / sqrt(TWO_PI);
}

static double nearest_in(const struct intervals *set, double t_d)
{
	double best = NAN;
	for (int i = 0; i < set->n; i++) {
		const double there = fmin(fmax(t_d, set->s[i].from_d), set->s[i].to_d);
		if (isnan(best) || fabs(there - t_d) < fabs(best - t_d))
			best = there;
	}
	return best;
}

double worth_case_mid_d(const struct intervals *allowed, double mean_d, double sigma_d)
{
	if (isnan(mean_d) || !(sigma_d >= 0.0) || allowed->n == 0)
		return NAN;
	double chance = 0.0, moment = 0.0;
	for (int i = 0; sigma_d > 0.0 && i < allowed->n; i++) {
		const double lo = (allowed->s[i].from_d - mean_d) / sigma_d,
			     hi = (allowed->s[i].to_d - mean_d) / sigma_d;
		const double p = normal_between(lo, hi);
		/* far out the difference of densities loses digits: never outside the span */
		if (p > 0.0)
			moment += p * fmin(fmax((density(lo) - density(hi)) / p, lo), hi);
		chance += p;
	}
	return chance > 0.0 ? mean_d + sigma_d * moment / chance : nearest_in(allowed, mean_d);
}

bool goal_open(const struct goal *g, enum band_id band, double jd)
{
	return g->got < g->wanted && (g->band == BAND_NONE || g->band == band) && !(jd > g->until_jd);
}

/* Without what the ephemeris brings of its own: refresh_bits and refresh_sigma_min add the timing variations.
 */
static double measured_min(double timing_s, const struct worth_rules *rules)
{
	return hypot(timing_s / 60.0, rules->floor_min);
}

double worth_precision_min(const struct ephemeris *e, double timing_s, const struct worth_rules *rules)
{
	const double steady = hypot(rules->need_min, e->systematic_min);
	return hypot(hypot(measured_min(timing_s, rules), steady), sqrt(0.5) * e->ttv_min);
}

double worth_bits(const struct ephemeris *e, long epoch, double timing_s, const struct worth_rules *rules)
{
	const double steady = hypot(rules->need_min, e->systematic_min);
	return refresh_bits(e, epoch, hypot(measured_min(timing_s, rules), steady));
}

double worth_timing_s(const struct ephemeris *e, long epoch, double bits, const struct worth_rules *rules)
{
	const double known_min = ephemeris_published_d(e, epoch) * DAY_MIN;
	const double all_min = known_min / sqrt(expm1(2.0 * log(2.0) * bits));
	const double rest_min = worth_precision_min(e, 0.0, rules);
	if (isnan(all_min) || isinf(all_min))
		return 60.0 * all_min;
	return 60.0 * sqrt(fmax(all_min * all_min - rest_min * rest_min, 0.0));
}

/* What a goal that takes any catch, or whole events only, is expected to earn. */
static double earned(const struct worth_input *in, const struct worth *w, double whole_bits, bool one_limb,
		     enum worth_choice choice)
{
	if (choice == WORTH_BITS)
		return one_limb ? w->gain_bits : in->c[CATCH_WHOLE].chance * whole_bits;
	double chance = in->c[CATCH_WHOLE].chance;
	if (one_limb && choice == WORTH_PRIORITY)
		chance += in->c[CATCH_INGRESS].chance + in->c[CATCH_EGRESS].chance;
	return choice == WORTH_DEPTH ? chance * in->depth_snr : chance;
}

struct worth worth_of(const struct worth_input *in, const struct worth_rules *rules)
{
	struct worth w = {0};
	double whole_bits = 0.0;
	int likeliest = CATCH_WHOLE;
	for (int i = 0; i < CATCH_COUNT; i++) {
		/* what can't be caught needs no precision */
		const bool possible = !(in->c[i].chance <= 0.0);
		const double bits = possible ? worth_bits(in->eph, in->epoch, in->c[i].timing_s, rules)
					     : worth_bits(in->eph, in->epoch, INFINITY, rules);
		w.gain_bits += in->c[i].chance * bits;
		if (i == CATCH_WHOLE)
			whole_bits = bits;
		if (in->c[i].chance > in->c[likeliest].chance)
			likeliest = i;
	}
	const double timing_s = in->c[likeliest].chance <= 0.0 ? INFINITY : in->c[likeliest].timing_s;
	w.sigma_after_min =
	    refresh_sigma_min(in->eph, in->epoch, measured_min(timing_s, rules), in->at_epoch);
	const double priority = isnan(in->priority) ? 1.0 : in->priority;
	if (in->n_goals == 0)
		w.worth = earned(in, &w, whole_bits, rules->choice == WORTH_BITS, rules->choice);
	for (size_t i = 0; i < in->n_goals; i++)
		if (goal_open(&in->goal[i], in->band, in->jd))
			w.worth += earned(in, &w, whole_bits, in->goal[i].one_limb, rules->choice);
	w.worth *= priority;
	return w;
}
