/* SPDX-License-Identifier: MIT */
#include "tui/commands/one_night.h"

#include "tui/diagnose.h"
#include "tui/given.h"

#include <string.h>

int one_night_run(const struct env *env, const struct options *o, int needs,
		  int (*work)(struct run *r, int32_t evening_mjd))
{
	struct run run;
	struct err e;
	int code;
	int32_t mjd;
	const char *date = o->n_words > 1 ? o->word[1] : NULL;
	/* a wrong date is told before anything is opened */
	if (date && given_night_check(&leap_builtin, date, &e) != ST_OK && !strstr(date, ":60"))
		return usage_fault("DATE", &e);
	if (run_open(&run, env, o, needs, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	mjd = run_tonight(&run);
	if (date && given_night(&run.leap, run.site.lon_east_deg, date, &mjd, &e) != ST_OK)
		code = usage_fault("DATE", &e);
	else
		code = work(&run, mjd);
	run_close(&run);
	return code;
}
