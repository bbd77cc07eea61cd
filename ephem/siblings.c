/* SPDX-License-Identifier: MIT */
#include "ephem/siblings.h"

#include <stdlib.h>

enum status siblings_link(struct prepared prepared[], const uint32_t star[], size_t n, size_t stars, struct err *e)
{
	size_t *last = calloc(stars + 1, sizeof *last); /* of each star: 1 + the place of its planet seen last */
	if (!last)
		return err_set(e, ST_MEMORY, "no memory for the planets of %zu stars", stars);
	for (size_t i = 0; i < n; i++) {
		prepared[i].sibling = NULL;
		if (last[star[i]]) {
			struct prepared *before = &prepared[last[star[i]] - 1];
			prepared[i].sibling = before->sibling ? before->sibling : before;
			before->sibling = &prepared[i];
		}
		last[star[i]] = i + 1;
	}
	free(last);
	return ST_OK;
}

static bool transits_within(const struct night *night, const struct prepared *p, double from_d, double to_d)
{
	const struct star star = night_star(night, p->target);
	const double half_d = 0.5 * p->shape[KIND_TRANSIT].t14_d;
	long first, last;
	if (!window_epochs(night, &star, p, KIND_TRANSIT, &first, &last))
		return false;
	for (long epoch = first; epoch <= last; epoch++) {
		const double mid_d = night_of_bjd(night, &star, ephemeris_mid(&p->eph, epoch));
		if (mid_d + half_d > from_d && mid_d - half_d < to_d)
			return true;
	}
	return false;
}

void siblings_mark(const struct night *night, struct window_list *list)
{
	for (size_t i = 0; i < list->n; i++) {
		struct window *w = &list->w[i];
		const struct prepared *self = w->event.prepared;
		w->n_siblings = 0;
		for (const struct prepared *p = self->sibling; p && p != self; p = p->sibling) {
			if (!p->has_ephemeris)
				w->event.flags |= FLAG_BIT(FLAG_SIBLINGS_UNKNOWN);
			else if (w->n_siblings < SIBLINGS_MAX &&
				 transits_within(night, p, w->event.reserve_start_d, w->event.reserve_end_d))
				w->sibling[w->n_siblings++] = p;
		}
		if (w->n_siblings > 0)
			w->event.flags |= FLAG_BIT(FLAG_SIBLING_IN_WINDOW);
	}
}
