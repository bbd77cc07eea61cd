/* SPDX-License-Identifier: MIT
 * The run's targets made ready: whose stars they are, those that are asked for first, siblings linked. */
#include "tui/run_parts.h"

#include "ephem/siblings.h"
#include "ephem/stars.h"

#include <stdlib.h>
#include <string.h>

static enum status select_targets(const struct run *r, bool chosen[], struct err *e)
{
	const struct options *o = r->options;
	char got[ERR_QUOTE_MAX];
	for (size_t i = 0; i < r->targets.n; i++)
		chosen[i] = o->n_targets == 0 || o->radec;
	for (int k = 0; k < o->n_targets && !o->radec; k++) {
		long i = target_list_find(&r->targets, o->target[k]);
		err_quote(o->target[k], strlen(o->target[k]), got);
		if (i < 0)
			return err_set(e, ST_ABSENT,
				       "target: no such target is stored (got \"%s\"; see wane target list)",
				       got);
		chosen[i] = true;
	}
	return ST_OK;
}

/* star[n]: scratch, of prepared[i]. */
static enum status prepare_chosen(struct run *r, bool doubtful[], bool chosen[], uint32_t star[],
				  struct err *e)
{
	size_t n = r->targets.n, k = 0;
	struct err why;
	if (stars_group(r->targets.t, n, r->star, doubtful, &why) != ST_OK)
		return run_worded(e, "targets", &why);
	enum status s = select_targets(r, chosen, e);
	if (s != ST_OK)
		return s;
	/* those asked for first; behind them the rest, which only tell what their siblings need to know */
	for (int wanted = 1; wanted >= 0; wanted--) {
		for (size_t i = 0; i < n; i++) {
			if (chosen[i] != wanted)
				continue;
			star[k] = r->star[i];
			r->prepared[k++] = prepare_target(&r->targets.t[i], &r->limits, &r->clock, r->memo,
							  doubtful[i], r->targets.doubts[i] != 0);
		}
		if (wanted)
			r->n_prepared = k;
	}
	return siblings_link(r->prepared, star, n, n, &why) == ST_OK ? ST_OK : run_worded(e, "memory", &why);
}

enum status run_prepare(struct run *r, struct err *e)
{
	size_t n = r->targets.n;
	bool *doubtful = calloc(n + 1, sizeof *doubtful), *chosen = calloc(n + 1, sizeof *chosen);
	uint32_t *star = calloc(n + 1, sizeof *star);
	enum status s;
	r->n_prepared = 0;
	if (!r->star)
		r->star = calloc(n + 1, sizeof *r->star);
	if (!r->prepared)
		r->prepared = calloc(n + 1, sizeof *r->prepared);
	if (!r->memo)
		r->memo = calloc(1, sizeof *r->memo);
	if (doubtful && chosen && star && r->star && r->prepared && r->memo)
		s = prepare_chosen(r, doubtful, chosen, star, e);
	else
		s = err_set(e, ST_MEMORY, "memory: none for %zu targets", n);
	if (s == ST_OK)
		s = run_fill_observed(r, e);
	free(star);
	free(doubtful);
	free(chosen);
	return s;
}
