/* SPDX-License-Identifier: MIT */
#include "tui/commands/one_target.h"

#include "db/text_clean.h"
#include "ephem/number_text.h"
#include "tui/diagnose.h"

#include <math.h>
#include <string.h>

enum status one_target_open(struct run *r, const struct env *env, struct options *named,
			    const struct options *o, const char *name, int needs, int *code, struct err *e)
{
	*named = *o;
	*code = EXIT_USAGE;
	if (o->radec)
		return err_set(e, ST_SYNTAX, "--radec: a stored target is needed here");
	if (o->n_targets > 0)
		return err_set(e, ST_SYNTAX, "--target: the target is named as an argument here");
	named->target[0] = name;
	named->n_targets = 1;
	return run_open(r, env, named, NEED_STORE | NEED_TARGETS | needs, code, e);
}

const struct target *target_named(const struct run *r, const char *name)
{
	char got[ERR_QUOTE_MAX];
	const long i = target_list_find(&r->targets, name);
	if (i >= 0)
		return &r->targets.t[i];
	err_quote(name, strlen(name), got);
	diagnose("target", "no such target is stored (got \"%s\"; see wane target list)", got);
	return NULL;
}

bool target_as_argument(const struct options *o, const char *command)
{
	if (!o->radec && o->n_targets == 0)
		return true;
	diagnose(o->radec ? "--radec" : "--target", "the target is named as an argument (see wane %s --help)",
		 command);
	return false;
}

bool whole_argument(const char *word, const char *text, long min, long max, long *out)
{
	char got[ERR_QUOTE_MAX];
	double v;
	err_quote(text, strlen(text), got);
	if (number_parse(text, strlen(text), &v, NULL, NULL) != ST_OK || !(v >= (double)min) ||
	    !(v <= (double)max) || v > floor(v)) {
		diagnose(word, "not a whole number in range (got \"%s\", expected %ld to %ld)", got, min,
			 max);
		return false;
	}
	*out = (long)v;
	return true;
}

bool text_argument(const char *option, const char *text, size_t chars_max)
{
	struct err e;
	if (!text || text_check(option, text, chars_max, &e) == ST_OK)
		return true;
	(void)diagnose_whole(&e, EXIT_USAGE);
	return false;
}
