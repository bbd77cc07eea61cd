/* SPDX-License-Identifier: MIT */
#include "tui/commands/site_light.h"

#include "db/stored_settings.h"
#include "ephem/number_text.h"
#include "tui/sheets/text.h"

#include <math.h>
#include <string.h>

/* mag per square arcsec: from a bright city under the full Moon to darker than any night; mag: to thick haze
 */
#define SKY_MIN 10.0
#define SKY_MAX 24.0
#define EXTINCTION_MAX 3.0

/* --- reading --- */

/* `V=21.6` */
static enum status read_one(const char *option, const char *text, int bands_n, double min, double max,
			    bool given[], double value[], struct err *e)
{
	const char *equals = strchr(text, '=');
	char name[16], got[ERR_QUOTE_MAX];
	struct err why;
	double v = (double)NAN;
	err_quote(text, strlen(text), got);
	if (!equals || (size_t)(equals - text) >= sizeof name)
		return err_set(e, ST_SYNTAX, "%s: no band (got \"%s\", expected BAND=MAG)", option, got);
	snprintf(name, sizeof name, "%.*s", (int)(equals - text), text);
	const enum band_id band = band_parse(name);
	if (band == BAND_NONE || band >= bands_n)
		return err_set(e, ST_SYNTAX, "%s: no such band here (got \"%s\", expected %s)", option, got,
			       bands_n == BAND_SKY_COUNT ? "U, B, V, R or I"
							 : "U, B, V, R, I, g, r, i, z or clear");
	if (equals[1] && number_parse(equals + 1, strlen(equals + 1), &v, NULL, &why) != ST_OK)
		return err_set(e, why.status, "%s: %.400s", option, why.text);
	if (equals[1] && !(v >= min && v <= max))
		return err_set(e, ST_RANGE, "%s: out of range (got \"%s\", expected %g to %g)", option, got,
			       min, max);
	given[band] = true;
	value[band] = v;
	return ST_OK;
}

enum status site_light_read(const struct options *o, struct site_light *out, struct err *e)
{
	enum status s = ST_OK;
	*out = (struct site_light){.telescope_id = 0};
	for (int i = 0; s == ST_OK && i < o->sky.n; i++)
		s = read_one("--sky", o->sky.text[i], BAND_SKY_COUNT, SKY_MIN, SKY_MAX, out->sky_given,
			     out->sky, e);
	for (int i = 0; s == ST_OK && i < o->extinction.n; i++)
		s = read_one("--extinction", o->extinction.text[i], BAND_COUNT, 0.0, EXTINCTION_MAX,
			     out->extinction_given, out->extinction, e);
	return s;
}

enum status site_telescope_read(const struct run *r, int64_t site_id, const char *name,
				struct site_light *out, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	const long i = telescope_list_find(&r->telescopes, site_id, name);
	out->telescope_given = true;
	out->telescope_id = i >= 0 ? r->telescopes.telescope[i].id : 0;
	if (i >= 0 || strcmp(name, "none") == 0)
		return ST_OK;
	err_quote(name, strlen(name), got);
	return err_set(e, ST_ABSENT,
		       "--telescope: no such telescope at the site (got \"%s\"; see wane telescope list)",
		       got);
}

bool site_light_any(const struct site_light *l)
{
	bool any = l->telescope_given;
	for (int b = 0; b < BAND_COUNT; b++)
		any = any || l->sky_given[b] || l->extinction_given[b];
	return any;
}

/* --- writing --- */

static enum status put_value(struct store *s, enum site_key kind, int64_t site_id, enum band_id band,
			     double value, struct err *e)
{
	char key[SITE_KEY_BYTES], text[NUMBER_TEXT_MAX];
	run_site_key(kind, site_id, band, key);
	number_text(value, text);
	return stored_setting_put(s, key, text, e);
}

enum status site_light_put(struct store *s, int64_t site_id, const struct site_light *l, struct err *e)
{
	enum status st = ST_OK;
	for (int b = 0; st == ST_OK && b < BAND_COUNT; b++) {
		if (l->sky_given[b])
			st = put_value(s, SITE_SKY, site_id, (enum band_id)b, l->sky[b], e);
		if (st == ST_OK && l->extinction_given[b])
			st = put_value(s, SITE_EXTINCTION, site_id, (enum band_id)b, l->extinction[b], e);
	}
	if (st == ST_OK && l->telescope_given)
		st = put_value(s, SITE_TELESCOPE, site_id, BAND_NONE,
			       l->telescope_id ? (double)l->telescope_id : (double)NAN, e);
	return st;
}

enum status site_light_remove(struct store *s, int64_t site_id, struct err *e)
{
	struct site_light none = {.telescope_given = true};
	for (int b = 0; b < BAND_COUNT; b++) {
		none.sky_given[b] = b < BAND_SKY_COUNT;
		none.extinction_given[b] = true;
		none.sky[b] = none.extinction[b] = (double)NAN;
	}
	return site_light_put(s, site_id, &none, e);
}

/* --- showing --- */

/* Name of the usual telescope; "" none. */
static const char *usual_name(const struct run *r, const struct site *site)
{
	const double id = run_site_value(r, SITE_TELESCOPE, site->id, BAND_NONE);
	for (size_t i = 0; i < r->telescopes.n; i++) {
		const struct telescope *t = &r->telescopes.telescope[i];
		if (t->site_id == site->id && (double)t->id >= id && (double)t->id <= id)
			return t->name;
	}
	return "";
}

static void values_text(FILE *to, const struct run *r, const struct site *site, enum site_key kind, int n,
			const char *word)
{
	char number[NUMBER_TEXT_MAX];
	for (int b = 0; b < n; b++) {
		const double value = run_site_value(r, kind, site->id, (enum band_id)b);
		if (isnan(value))
			continue;
		number_text(value, number);
		fprintf(to, ", %s %s %s", word, bands[b].name, number);
	}
}

void site_light_text(FILE *to, const struct run *r, const struct site *site)
{
	const char *telescope = usual_name(r, site);
	values_text(to, r, site, SITE_SKY, BAND_SKY_COUNT, "dark sky");
	values_text(to, r, site, SITE_EXTINCTION, BAND_COUNT, "extinction");
	if (!telescope[0])
		return;
	fputs(", usual telescope ", to);
	text_cell(to, telescope, NAME_CHARS_MAX, false);
}

static void values_json(struct json *j, const struct run *r, const struct site *site, enum site_key kind,
			int n, const char *key)
{
	json_open(j, key, '{', true);
	for (int b = 0; b < n; b++) {
		const double value = run_site_value(r, kind, site->id, (enum band_id)b);
		if (!isnan(value))
			json_exact(j, bands[b].name, value);
	}
	json_close(j, '}');
}

void site_light_json(struct json *j, const struct run *r, const struct site *site)
{
	const char *telescope = usual_name(r, site);
	values_json(j, r, site, SITE_SKY, BAND_SKY_COUNT, "sky");
	values_json(j, r, site, SITE_EXTINCTION, BAND_COUNT, "extinction");
	if (telescope[0])
		json_text(j, "telescope", telescope);
	else
		json_null(j, "telescope");
}
