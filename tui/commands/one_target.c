/* SPDX-License-Identifier: MIT */
#include "tui/commands/one_target.h"

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
