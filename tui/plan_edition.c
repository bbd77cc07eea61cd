/* SPDX-License-Identifier: MIT
 * An earlier edition of a stored plan as a view. */
#include "tui/plan_parts.h"

enum status plan_edition(const struct plan_view *of, int edition, struct plan_view *out, struct err *e)
{
	const struct run *r = of->run;
	struct plan_row row;
	*out = plan_empty(r, of->night, &of->rules);
	if (!r->store || !of->stored)
		return err_set(e, ST_ABSENT, "no stored plan of this night, so none of its editions (got %d)",
			       edition);
	/* the store takes 0 for the newest */
	enum status s = edition > 0 ? plan_load(r->store, of->plan_id, edition, &row, e) : ST_ABSENT;
	if (s == ST_ABSENT)
		return err_set(e, ST_ABSENT, "no such edition of the plan (got %d, expected 1 to %d)",
			       edition, of->edition);
	if (s != ST_OK)
		return s;
	struct plan_choices *c = plan_alloc(out, 1, sizeof *c);
	s = c ? stored_view(out, &row, c, e) : plan_memory(out, e);
	plan_row_free(&row);
	if (s == ST_OK) {
		out->telescope = plan_copy(out, of->telescope);
		plan_finish(out);
		s = plan_memory(out, e);
	}
	if (s != ST_OK)
		plan_view_free(out);
	return s;
}
