/* SPDX-License-Identifier: MIT
 * The limits of a run: one table with names, ranges, defaults and sentences; settings, options, help and JSON read it.
 * Which wins: option, target, telescope, site, settings file, built in. */
#ifndef WANE_EPHEM_LIMITS_H
#define WANE_EPHEM_LIMITS_H

#include "ephem/err.h"
#include "ephem/model.h"

#include <stdbool.h>

enum limit_id {
	LIM_SUN,             /* Sun's altitude below which a limb can be observed [deg] */
	LIM_SUN_BASELINE,    /* the same for the baselines [deg]; NAN: as LIM_SUN */
	LIM_ALT,             /* least airless altitude [deg] */
	LIM_MOON,            /* least distance from a Moon that is up and more than half lit [deg]; 0: no Moon rule at all */
	LIM_AIRMASS,         /* greatest airmass; INFINITY: none */
	LIM_BASELINE_BEFORE, /* wanted baseline B before T1 [min]; BASELINE_AUTO: half the duration, 20 to 60 */
	LIM_BASELINE_AFTER,  /* and after T4 [min] */
	LIM_MIN_BASELINE,    /* b_min without which a limb can't be used [min] */
	LIM_PAD,             /* k: how many errors of a contact the reserve holds */
	LIM_ERROR_SCALE,     /* factor on published errors, for pad and chance only */
	LIM_COUNT
};
#define BASELINE_AUTO (-1.0)
#define MOON_ALWAYS_DEG 10.0  /* kept from a Moon that is up, whatever its phase */

enum limit_source { FROM_BUILT_IN, FROM_SETTINGS, FROM_SITE, FROM_TELESCOPE, FROM_TARGET, FROM_OPTION };

struct limits {
	double value[LIM_COUNT];
	enum limit_source source[LIM_COUNT];
};

struct limit_rule {
	const char *key;      /* settings key and JSON name: sun_limit_deg, ... */
	const char *option;   /* command line: --sun-limit, ...; NULL when it has none of its own */
	double min, max, fallback;
	const char *unit;
	const char *sentence; /* what it means, one sentence */
};
extern const struct limit_rule limit_rules[LIM_COUNT];

struct limits limits_built_in(void);
/* Puts a value if its source ranks at least as high as the one there. ST_RANGE outside the rule's range (NaN too, where the rule
 * does not allow it): the message names option and range. */
MUST_USE enum status limits_put(struct limits *l, enum limit_id id, double value, enum limit_source source, struct err *e);
/* Whether all values and where they come from are equal; no value is unlike itself, NAN too. */
bool limits_same(const struct limits *a, const struct limits *b);
/* The run's limits with the target's own laid over them. Values of the target that are out of range are left out. */
struct limits limits_for_target(const struct limits *run, const struct target *t);

#endif
