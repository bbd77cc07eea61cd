/* SPDX-License-Identifier: MIT */
#include "tui/commands/direction.h"

#include <string.h>

enum status direction_of(const struct run *r, const char *word, const struct target **out, size_t *index,
			 struct err *e)
{
	const struct options *o = r->options;
	char got[ERR_QUOTE_MAX];
	*out = NULL;
	*index = 0;
	if ((word != NULL) + o->n_targets + (o->radec != NULL) > 1)
		return err_set(e, ST_SYNTAX,
			       "more than one star is named (expected TARGET, --target or --radec)");
	if (o->radec) {
		*out = &r->targets.t[0];
		return ST_OK;
	}
	const char *name = word ? word : o->n_targets ? o->target[0] : NULL;
	if (!name)
		return ST_OK;
	long i = target_list_find(&r->targets, name);
	err_quote(name, strlen(name), got);
	if (i < 0)
		return err_set(e, ST_ABSENT, "no such target is stored (got \"%s\"; see wane target list)",
			       got);
	*out = &r->targets.t[i];
	*index = (size_t)i;
	return ST_OK;
}
