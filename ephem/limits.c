/* SPDX-License-Identifier: MIT */
#include "ephem/limits.h"

#include <math.h>
#include <stddef.h>

const struct limit_rule limit_rules[LIM_COUNT] = {
    [LIM_SUN] = {"sun_limit_deg", "--sun-limit", -30.0, 0.0, -12.0, "deg",
		 "The Sun's centre must be below this altitude while a limb of the event is observed."},
    [LIM_SUN_BASELINE] = {"sun_limit_baseline_deg", NULL, -30.0, 0.0, (double)NAN, "deg",
			  "The same for the baselines before and after the event; unset: as for the limbs."},
    [LIM_ALT] = {"alt_limit_deg", "--alt-limit", 0.0, 90.0, 30.0, "deg",
		 "The target must stand above this altitude (airless, refraction not added)."},
    [LIM_MOON] = {"moon_limit_deg", "--moon-limit", 0.0, 180.0, 30.0, "deg",
		  "Least distance from a Moon that is up and more than half lit; 10 deg are kept from any "
		  "Moon that is "
		  "up, and 0 switches every Moon rule off."},
    [LIM_AIRMASS] =
	{"airmass_limit", "--airmass-limit", 1.0, 40.0, (double)INFINITY, "",
	 "The airmass (Young 1994, on the airless altitude) must be below this; none by default."},
    [LIM_BASELINE_BEFORE] =
	{"baseline_before_min", "--baseline", 0.0, 720.0, 30.0, "min",
	 "Wanted time outside the event, before it and after it; auto: half the duration, 20 to 60."},
    [LIM_BASELINE_AFTER] = {"baseline_after_min", NULL, 0.0, 720.0, 30.0, "min",
			    "Wanted time after the event; auto: half the duration, 20 to 60."},
    [LIM_MIN_BASELINE] = {"min_baseline_min", "--min-baseline", 0.0, 720.0, 15.0, "min",
			  "Without this much time outside it a limb of the event does not count as caught."},
    [LIM_PAD] = {"pad", "--pad", 0.0, 10.0, 2.0, "",
		 "How many errors of a predicted contact the reserve holds on each side."},
    [LIM_ERROR_SCALE] = {"error_scale", "--error-scale", 0.1, 10.0, 1.0, "",
			 "Factor on the published errors, for the pad and the chances only."},
};

struct limits limits_built_in(void)
{
	struct limits l;
	for (int id = 0; id < LIM_COUNT; id++) {
		l.value[id] = limit_rules[id].fallback;
		l.source[id] = FROM_BUILT_IN;
	}
	return l;
}

static bool acceptable(enum limit_id id, double value)
{
	const struct limit_rule *rule = &limit_rules[id];
	if (value >= rule->min && value <= rule->max)
		return true;
	switch (id) {
	case LIM_SUN_BASELINE:
		return isnan(value);
	case LIM_AIRMASS:
		return isinf(value) && value > 0.0;
	case LIM_BASELINE_BEFORE:
	case LIM_BASELINE_AFTER:
		return value == BASELINE_AUTO;
	default:
		return false;
	}
}

enum status limits_put(struct limits *l, enum limit_id id, double value, enum limit_source source,
		       struct err *e)
{
	const struct limit_rule *rule = &limit_rules[id];
	if (!acceptable(id, value)) {
		const char *also = id == LIM_BASELINE_BEFORE || id == LIM_BASELINE_AFTER ? ", or auto" : "";
		const char *blank = rule->unit[0] ? " " : "";
		return err_set(e, ST_RANGE, "%s %g%s%s: must be from %g to %g%s",
			       rule->option ? rule->option : rule->key, value, blank, rule->unit, rule->min,
			       rule->max, also);
	}
	if (source < l->source[id])
		return ST_OK;
	l->value[id] = value;
	l->source[id] = source;
	/* the option means the whole event: a target's own limit for its baselines must not weaken or outlive
	 * it */
	if (id == LIM_SUN && source == FROM_OPTION) {
		l->value[LIM_SUN_BASELINE] = value;
		l->source[LIM_SUN_BASELINE] = source;
	}
	return ST_OK;
}

struct limits limits_for_target(const struct limits *run, const struct target *t)
{
	const struct {
		enum limit_id id;
		double value;
	} own[] = {
	    {LIM_SUN, t->sun_limit_deg},
	    {LIM_SUN_BASELINE, t->sun_limit_baseline_deg},
	    {LIM_ALT, t->alt_limit_deg},
	    {LIM_AIRMASS, t->airmass_limit},
	    {LIM_MOON, t->moon_limit_deg},
	    {LIM_BASELINE_BEFORE, t->baseline_before_min},
	    {LIM_BASELINE_AFTER, t->baseline_after_min},
	};
	struct limits l = *run;
	for (size_t i = 0; i < sizeof own / sizeof own[0]; i++)
		if (!isnan(own[i].value) &&
		    limits_put(&l, own[i].id, own[i].value, FROM_TARGET, NULL) != ST_OK)
			continue; /* out of range: the run's limit stays, the import has flagged it */
	return l;
}

bool limits_same(const struct limits *a, const struct limits *b)
{
	for (int i = 0; i < LIM_COUNT; i++) {
		const bool none = isnan(a->value[i]) && isnan(b->value[i]);
		if (a->source[i] != b->source[i] || (!none && !(a->value[i] == b->value[i])))
			return false;
	}
	return true;
}
