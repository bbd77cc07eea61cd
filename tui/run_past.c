/* SPDX-License-Identifier: MIT
 * Sites and telescopes that were removed, for the plans that were stored for them. */
#include "tui/run_parts.h"

#include "tui/diagnose.h"

#include <string.h>

/* What shows stored plans, and no page: pages offer what is listed. */
static bool shows_plans(const struct run *r)
{
	const struct options *o = r->options;
	return r->store && o->n_words > 0 &&
	       (strcmp(o->word[0], "plan") == 0 || strcmp(o->word[0], "sheet") == 0);
}

const struct site *run_past_site(struct run *r, const char *name, struct site_list *out)
{
	struct err e;
	*out = (struct site_list){.n = 0};
	if (!shows_plans(r) || sites_load_removed(r->store, out, &e) != ST_OK)
		return NULL;
	const long i = site_list_find(out, name);
	if (i < 0)
		return NULL;
	r->past = true;
	diagnose("site", "%.80s is no longer stored: only its stored plans are shown", out->site[i].name);
	return &out->site[i];
}

const struct telescope *run_past_telescope(struct run *r, const char *name, struct telescope_list *out)
{
	struct err e;
	*out = (struct telescope_list){.n = 0};
	if (!shows_plans(r) || r->site.id == 0 || telescopes_load_removed(r->store, out, &e) != ST_OK)
		return NULL;
	const long i = telescope_list_find(out, r->site.id, name);
	if (i < 0)
		return NULL;
	r->past = true;
	diagnose("telescope", "%.80s is no longer stored: only its stored plans are shown",
		 out->telescope[i].name);
	return &out->telescope[i];
}
