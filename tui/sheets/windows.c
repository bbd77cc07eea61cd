/* SPDX-License-Identifier: MIT */
#include "tui/sheets/windows.h"

#include "ephem/number_text.h"

#include <math.h>

enum { VALUE_BYTES = 512 };

void windows_csv_header(struct csv_out *c)
{
	for (size_t i = 0; i < column_count; i++)
		csv_text(c, columns[i].name);
	csv_end_line(c);
}

void window_csv(struct csv_out *c, const struct window *w, const struct night *n)
{
	char text[VALUE_BYTES];
	for (size_t i = 0; i < column_count; i++) {
		struct value v = column_value(&columns[i], w, n);
		value_machine_text(&columns[i], &v, n->clock.leap, text, sizeof text);
		/* a site that is not stored is a place as it was typed, read as numbers: it has to come out
		 * as it went in */
		bool place = i == 0 && n->site->id == 0;
		if (v.type != VALUE_TEXT)
			csv_number(c, text);
		else if (place)
			csv_checked(c, text);
		else
			csv_text(c, text);
	}
	csv_end_line(c);
}

void night_time_json(struct json *j, const char *key, const struct night *n, double t_d)
{
	char text[UTC_TEXT_MAX];
	if (!isfinite(t_d)) {
		json_null(j, key);
		return;
	}
	utc_text(n->clock.leap, night_utc(n, t_d), 0, text);
	json_text(j, key, text);
}

static void spans_json(struct json *j, const char *key, const struct intervals *set, const struct night *n)
{
	json_open(j, key, '[', true);
	for (int i = 0; i < set->n; i++) {
		json_open(j, NULL, '[', true);
		night_time_json(j, NULL, n, set->s[i].from_d);
		night_time_json(j, NULL, n, set->s[i].to_d);
		json_close(j, ']');
	}
	json_close(j, ']');
}

void window_json(struct json *j, const struct window *w, const struct night *n)
{
	char text[VALUE_BYTES];
	json_open(j, NULL, '{', false);
	for (size_t i = 0; i < column_count; i++) {
		const struct column *c = &columns[i];
		struct value v = column_value(c, w, n);
		value_machine_text(c, &v, n->clock.leap, text, sizeof text);
		if (v.type == VALUE_NONE)
			json_null(j, c->name);
		else if (v.type == VALUE_TEXT || v.type == VALUE_UTC)
			json_text(j, c->name, text);
		else
			json_digits(j, c->name, text);
	}
	spans_json(j, "usable", &w->cover.usable, n);
	json_close(j, '}');
}

static void site_keys(struct json *j, const struct site *site)
{
	json_text(j, "name", site->name);
	json_exact(j, "latitude_deg", site->lat_deg);
	json_exact(j, "longitude_east_deg", site->lon_east_deg);
	json_exact(j, "height_m", site->height_m);
	if (site->zone[0])
		json_text(j, "zone", site->zone);
	else
		json_null(j, "zone");
}

void site_json(struct json *j, const char *key, const struct site *site)
{
	json_open(j, key, '{', true);
	site_keys(j, site);
	json_close(j, '}');
}

void stored_site_json(struct json *j, const struct site *site, const char *half)
{
	site_keys(j, site);
	json_open(j, "mask", '[', true);
	for (size_t i = 0; site->mask && i < site->mask->n; i++) {
		json_open(j, NULL, '[', true);
		json_exact(j, NULL, site->mask->knot[i].az_deg);
		json_exact(j, NULL, site->mask->knot[i].alt_deg);
		json_close(j, ']');
	}
	json_close(j, ']');
	json_text(j, "half", half);
}

/* What ranks the windows, of the store. */
static void stored_limits_keys(struct json *j, const struct run *r)
{
	const enum stored_key keys[] = {KEY_NEED_MIN, KEY_WORTH_BY, KEY_FALLBACK_BITS};
	char text[STORED_TEXT_BYTES];
	for (size_t i = 0; i < sizeof keys / sizeof keys[0]; i++) {
		const struct stored_key_rule *rule = &stored_key_rules[keys[i]];
		stored_key_text(keys[i], stored_value(&r->stored, keys[i]), text);
		if (rule->kind == STORED_NUMBER)
			json_digits(j, rule->name, text);
		else
			json_text(j, rule->name, text);
	}
}

void limits_json(struct json *j, const struct run *r, const struct site *site)
{
	json_open(j, "limits", '{', false);
	for (int id = 0; id < LIM_COUNT; id++) {
		double value = r->limits.value[id];
		if (id == LIM_SUN_BASELINE && isnan(value))
			value = r->limits.value[LIM_SUN];
		if ((id == LIM_BASELINE_BEFORE || id == LIM_BASELINE_AFTER) && value == BASELINE_AUTO)
			json_text(j, limit_rules[id].key, "auto");
		else
			json_exact(j, limit_rules[id].key, value);
	}
	json_text(j, "kind", kinds_text(r->kinds));
	json_exact(j, "min_chance", run_min_chance(r, false));
	json_exact(j, "ut1_utc_s", r->clock.ut1_utc_s);
	if (site)
		json_whole(j, "mask_points", site->mask ? (long)site->mask->n : 0);
	else
		json_null(j, "mask_points");
	stored_limits_keys(j, r);
	json_close(j, '}');
}

void night_json(struct json *j, const struct night_view *v, double sun_limit_deg)
{
	const struct night *n = &v->night;
	const struct night_times *t = &n->times;
	const struct {
		const char *key;
		double t_d;
	} times[] = {{"start_utc", 0.0},
		     {"end_utc", n->length_d},
		     {"sunset_utc", t->sunset_d},
		     {"civil_dusk_utc", t->civil_dusk_d},
		     {"nautical_dusk_utc", t->nautical_dusk_d},
		     {"astronomical_dusk_utc", t->astronomical_dusk_d},
		     {"dusk_utc", v->dark.dusk_d},
		     {"dawn_utc", v->dark.dawn_d},
		     {"astronomical_dawn_utc", t->astronomical_dawn_d},
		     {"nautical_dawn_utc", t->nautical_dawn_d},
		     {"civil_dawn_utc", t->civil_dawn_d},
		     {"sunrise_utc", t->sunrise_d}};
	struct date d = date_from_mjd(n->mjd);
	char date[40];
	snprintf(date, sizeof date, "%04d-%02d-%02d", d.year, d.month, d.day);
	json_open(j, "night", '{', false);
	json_text(j, "date", date);
	for (size_t i = 0; i < sizeof times / sizeof times[0]; i++)
		night_time_json(j, times[i].key, n, times[i].t_d);
	json_exact(j, "sun_limit_deg", sun_limit_deg);
	night_time_json(j, "moonrise_utc", n, t->moonrise_d);
	night_time_json(j, "moonset_utc", n, t->moonset_d);
	json_number(j, "moon_lit", n->moon_lit_mid, 4);
	json_number(j, "usable_h", v->dark.usable_h, 4);
	if (v->allotments > 0)
		spans_json(j, "allotted", &v->free.allotted, n);
	else
		json_null(j, "allotted");
	json_close(j, '}');
}
