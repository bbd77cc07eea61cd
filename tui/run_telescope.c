/* SPDX-License-Identifier: MIT */
#include "tui/run_parts.h"

#include "db/stored_settings.h"
#include "tui/diagnose.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* --- lists --- */

enum status run_load_telescopes(struct run *r, struct err *e)
{
	struct err why;
	if (!r->store)
		return ST_OK;
	enum status s = telescopes_load(r->store, &r->telescopes, &why);
	if (s == ST_OK && r->telescopes.n_bad > 0)
		diagnose("store", "%s: %s", r->db_path, r->telescopes.bad);
	if (s == ST_OK)
		s = allotments_load(r->store, &r->allotments, &why);
	if (s == ST_OK && r->allotments.n_bad > 0)
		diagnose("store", "%s: %s", r->db_path, r->allotments.bad);
	return s == ST_OK ? s : err_set(e, s, "store: %.460s", why.text);
}

void run_drop_telescopes(struct run *r)
{
	telescope_list_free(&r->telescopes);
	allotment_list_free(&r->allotments);
}

/* --- the chosen one --- */

static size_t put_text(char *at, const char **text)
{
	size_t n = strlen(*text) + 1;
	memcpy(at, *text, n);
	*text = at;
	return n;
}

/* The run keeps texts of its own: the list that they came from is loaded again now and then. */
static enum status take(struct run *r, const struct telescope *t, struct err *e)
{
	struct telescope own = t ? *t : telescope_empty();
	const char **texts[] = {&own.name, &own.band, &own.blocks, &own.note};
	size_t n = 0, used = 0;
	for (size_t i = 0; i < sizeof texts / sizeof texts[0]; i++)
		n += strlen(*texts[i]) + 1;
	char *block = malloc(n);
	if (!block)
		return err_set(e, ST_MEMORY, "memory: none for a telescope");
	for (size_t i = 0; i < sizeof texts / sizeof texts[0]; i++)
		used += put_text(block + used, texts[i]);
	free(r->telescope_text);
	r->telescope_text = block;
	r->telescope = own;
	r->has_telescope = t != NULL;
	return ST_OK;
}

/* Names of the site's telescopes, for a message; how many there are. */
static size_t list_names(const struct run *r, char *out, size_t n)
{
	size_t used = 0, count = 0;
	out[0] = '\0';
	for (size_t i = 0; i < r->telescopes.n; i++) {
		const struct telescope *t = &r->telescopes.telescope[i];
		if (t->site_id != r->site.id)
			continue;
		if (used + 100 < n)
			used += (size_t)snprintf(out + used, n - used, "%s%.90s", used ? ", " : "", t->name);
		count++;
	}
	return count;
}

static enum status no_such(const struct run *r, const char *name, struct err *e)
{
	char got[ERR_QUOTE_MAX], names[240];
	err_quote(name, strlen(name), got);
	if (r->site.id == 0)
		return err_set(
		    e, ST_RANGE,
		    "telescope: only a stored site has telescopes (got \"%s\", expected --site with it)",
		    got);
	if (list_names(r, names, sizeof names) == 0)
		return err_set(
		    e, ST_RANGE,
		    "telescope: none is stored at %.80s (got \"%s\", expected it added first: wane "
		    "telescope add NAME)",
		    r->site.name, got);
	return err_set(e, ST_RANGE,
		       "telescope: no such telescope at %.80s (got \"%s\", expected one of: %s; wane "
		       "telescope add NAME adds one)",
		       r->site.name, got, names);
}

/* One that was removed, where plans that are stored for it can be shown. */
static enum status take_past(struct run *r, const char *name, struct err *e)
{
	struct telescope_list removed;
	const struct telescope *past = run_past_telescope(r, name, &removed);
	enum status s = past ? take(r, past, e) : no_such(r, name, e);
	telescope_list_free(&removed);
	return s;
}

/* The site's only telescope; NULL when it has none or several. */
static const struct telescope *only_one(const struct run *r)
{
	const struct telescope *found = NULL;
	for (size_t i = 0; i < r->telescopes.n; i++) {
		const struct telescope *t = &r->telescopes.telescope[i];
		if (t->site_id != r->site.id)
			continue;
		if (found)
			return NULL;
		found = t;
	}
	return found;
}

/* The one that is stored as the site's usual one; NULL: none, or it is listed no more. */
static const struct telescope *usual_one(const struct run *r)
{
	const double id = run_site_value(r, SITE_TELESCOPE, r->site.id, BAND_NONE);
	for (size_t i = 0; r->telescopes.telescope && i < r->telescopes.n; i++) {
		const struct telescope *t = &r->telescopes.telescope[i];
		if (t->site_id == r->site.id && (double)t->id >= id && (double)t->id <= id)
			return t;
	}
	return NULL;
}

static const struct telescope *chosen_before(const struct run *r)
{
	for (size_t i = 0; r->has_telescope && i < r->telescopes.n; i++) {
		const struct telescope *t = &r->telescopes.telescope[i];
		if (t->id == r->telescope.id && t->site_id == r->site.id)
			return t;
	}
	return NULL;
}

/* `--telescope none`, unless the site has one of that name. */
static bool none_wanted(const struct run *r)
{
	const char *name = r->options->telescope;
	return name && strcmp(name, "none") == 0 &&
	       (r->site.id == 0 || telescope_list_find(&r->telescopes, r->site.id, name) < 0);
}

void run_half_key(int64_t site_id, char out[HALF_KEY_BYTES])
{
	snprintf(out, HALF_KEY_BYTES, "half:%lld", (long long)site_id);
}

void run_half_rule(const struct run *r, int64_t site_id, struct half_rule *out)
{
	char key[HALF_KEY_BYTES], value[STORED_SETTING_MAX + 1] = "";
	struct err e;
	*out = (struct half_rule){.kind = HALF_DARK};
	if (!r->store || site_id == 0)
		return;
	run_half_key(site_id, key);
	if (stored_setting(r->store, key, value, &e) != ST_OK)
		diagnose("store", "%s: %.300s; nights are halved between dusk and dawn", r->db_path, e.text);
	else if (half_rule_parse(value, out, &e) != ST_OK)
		diagnose("store", "%s: %s: %.300s", r->db_path, key, e.text);
}

enum status run_choose_telescope(struct run *r, bool named, struct err *e)
{
	const struct options *o = r->options;
	const bool several = o->n_sites + o->n_places > 1;
	run_half_rule(r, r->site.id, &r->half);
	if (o->telescope && several && named)
		return err_set(e, ST_RANGE, "--telescope: a telescope belongs to one site, and %d are given",
			       o->n_sites + o->n_places);
	const struct telescope *t = chosen_before(r);
	if (!t && none_wanted(r))
		return take(r, NULL, e);
	if (!t && o->telescope) {
		long i = r->site.id == 0 ? -1 : telescope_list_find(&r->telescopes, r->site.id, o->telescope);
		if (i < 0 && named)
			return take_past(r, o->telescope, e);
		t = i < 0 ? NULL : &r->telescopes.telescope[i];
	}
	if (!t && !several && r->site.id != 0)
		t = usual_one(r);
	if (!t && !several && r->site.id != 0)
		t = only_one(r);
	return take(r, t, e);
}

const struct telescope *run_telescope_at(const struct run *r, const struct site *site)
{
	return r->has_telescope && site->id == r->telescope.site_id ? &r->telescope : NULL;
}

void run_put_telescope_limits(struct run *r)
{
	struct err e;
	if (r->has_telescope && !isnan(r->telescope.alt_min_deg) &&
	    limits_put(&r->limits, LIM_ALT, fmax(r->telescope.alt_min_deg, 0.0), FROM_TELESCOPE, &e) != ST_OK)
		diagnose("telescope", "%s: its alt_min_deg is not used: %s", r->telescope.name, e.text);
}
