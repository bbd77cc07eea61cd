/* SPDX-License-Identifier: MIT */
#include "tui/settings.h"

#include "db/read_csv.h"
#include "db/read_ini.h"
#include "db/text_clean.h"
#include "ephem/number_text.h"
#include "ephem/season.h"
#include "tui/options.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum { LEAP_SECTION_KEY_MAX = 10 };

/* A key that is not a limit. */
struct setting_row {
	const char *section, *key, *values, *fallback, *sentence;
	enum status (*put)(struct settings *s, const char *value, struct err *e);
};

static enum status put_site(struct settings *s, const char *value, struct err *e)
{
	enum status status = name_check(value, strlen(value), NULL, e);
	if (status == ST_OK)
		snprintf(s->site, sizeof s->site, "%s", value);
	return status;
}

static enum status put_ut1_utc(struct settings *s, const char *value, struct err *e)
{
	double v;
	char got[ERR_QUOTE_MAX];
	enum status status = number_parse(value, strlen(value), &v, NULL, e);
	if (status != ST_OK)
		return status;
	err_quote(value, strlen(value), got);
	if (!(fabs(v) <= 0.9))
		return err_set(e, ST_RANGE, "out of range (got \"%s\", expected -0.9 to 0.9 s)", got);
	s->ut1_utc_s = v;
	return ST_OK;
}

static enum status put_precision(struct settings *s, const char *value, struct err *e)
{
	double v;
	char got[ERR_QUOTE_MAX];
	enum status status = number_parse(value, strlen(value), &v, NULL, e);
	if (status != ST_OK)
		return status;
	err_quote(value, strlen(value), got);
	if (!(v >= 0.001 && v <= 1000.0))
		return err_set(e, ST_RANGE, "out of range (got \"%s\", expected 0.001 to 1000 min)", got);
	s->refresh_precision_min = v;
	return ST_OK;
}

static enum status put_kinds(struct settings *s, const char *value, struct err *e)
{
	return kinds_parse(value, &s->kinds, e);
}

/* Index of the value in a list of words. */
static enum status put_word(const char *value, const char *const words[], int n, int *index, struct err *e)
{
	char got[ERR_QUOTE_MAX], list[128] = "";
	for (int i = 0; i < n; i++)
		if (strcmp(value, words[i]) == 0) {
			*index = i;
			return ST_OK;
		}
	err_quote(value, strlen(value), got);
	for (int i = 0; i < n; i++)
		snprintf(list + strlen(list), sizeof list - strlen(list), "%s%s", i ? ", " : "", words[i]);
	return err_set(e, ST_SYNTAX, "no such value (got \"%s\", expected %s)", got, list);
}

static enum status put_glyphs(struct settings *s, const char *value, struct err *e)
{
	static const char *const words[] = {"auto", "unicode", "basic", "ascii"};
	int i;
	enum status status = put_word(value, words, 4, &i, e);
	if (status == ST_OK)
		s->glyphs = (enum glyphs)i;
	return status;
}

static enum status put_palette(struct settings *s, const char *value, struct err *e)
{
	static const char *const words[] = {"normal", "red", "contrast", "none"};
	int i;
	enum status status = put_word(value, words, 4, &i, e);
	if (status == ST_OK)
		s->palette = (enum palette)i;
	return status;
}

static const struct setting_row rows[] = {
    {"run", "site", "a stored site's name", "the only stored one", "The site where nothing else is said.",
     put_site},
    {"run", "ut1_utc_s", "-0.9 to 0.9", "0", "UT1 less UTC in seconds; 1 s turns the sky by 15 arcsec.",
     put_ut1_utc},
    {"run", "kind", "transit, occultation or both", "transit", "Which events are listed.", put_kinds},
    {"run", "refresh_precision_min", "0.001 to 1000", "1",
     "Precision in minutes that a mid-time which refreshes an ephemeris is assumed to have.", put_precision},
    {"screen", "glyphs", "auto, unicode, basic or ascii", "auto", "What the pages are drawn with.",
     put_glyphs},
    {"screen", "palette", "normal, red, contrast or none", "normal",
     "Colours of the pages; red spares eyes that are used to the dark.", put_palette},
};
enum { ROWS = sizeof rows / sizeof rows[0] };
static const char *const sections[] = {"run", "limits", "screen", "leap_seconds"};
enum { SECTIONS = sizeof sections / sizeof sections[0] };

void settings_built_in(struct settings *s)
{
	*s = (struct settings){
	    .limits = limits_built_in(), .leap = leap_builtin, .refresh_precision_min = 1.0};
}

/* `2029-01-01 = 38`: TAI - UTC from that UTC date on. */
static enum status put_leap(struct settings *s, const struct ini_entry *entry, struct err *e)
{
	struct date date = {0};
	int32_t mjd = 0;
	double tai_minus_utc_s;
	enum status status =
	    strlen(entry->key) == LEAP_SECTION_KEY_MAX
		? date_parse(entry->key, &date, e)
		: err_set(e, ST_SYNTAX, "not a date (expected YYYY-MM-DD = TAI less UTC in seconds)");
	if (status == ST_OK)
		status = date_to_mjd(date, &mjd, e);
	if (status == ST_OK)
		status = number_parse(entry->value, strlen(entry->value), &tai_minus_utc_s, NULL, e);
	if (status == ST_OK)
		status = leap_extend(&s->leap, mjd, tai_minus_utc_s, e);
	return status;
}

static enum status unknown_key(const struct ini_entry *entry, struct err *e)
{
	const char *all[ROWS + LIM_COUNT];
	size_t n = 0;
	for (size_t i = 0; i < ROWS; i++) {
		if (strcmp(rows[i].key, entry->key) == 0)
			return err_set(e, ST_SYNTAX, "this key belongs into section [%s]", rows[i].section);
		all[n++] = rows[i].key;
	}
	for (int id = 0; id < LIM_COUNT; id++) {
		if (strcmp(limit_rules[id].key, entry->key) == 0)
			return err_set(e, ST_SYNTAX, "this key belongs into section [limits]");
		all[n++] = limit_rules[id].key;
	}
	const char *near = nearest_word(entry->key, all, n);
	if (near)
		return err_set(e, ST_SYNTAX, "unknown key; did you mean %s?", near);
	return err_set(e, ST_SYNTAX, "unknown key");
}

static enum status put_limit(struct settings *s, int id, const char *value, struct err *e)
{
	double number;
	enum status status = limit_parse((enum limit_id)id, value, &number, e);
	return status == ST_OK ? limits_put(&s->limits, (enum limit_id)id, number, FROM_SETTINGS, e) : status;
}

/* *key_fault: the fault is in the key, not in its value. */
static enum status put_entry(struct settings *s, const struct ini_entry *entry, bool *key_fault,
			     struct err *e)
{
	*key_fault = true;
	bool section = false;
	for (size_t i = 0; i < SECTIONS; i++)
		section = section || strcmp(sections[i], entry->section) == 0;
	if (!section)
		return err_set(
		    e, ST_SYNTAX,
		    "no such section (got \"%.60s\", expected [run], [limits], [screen] or [leap_seconds])",
		    entry->section);
	*key_fault = false;
	if (strcmp(entry->section, "leap_seconds") == 0)
		return put_leap(s, entry, e);
	for (size_t i = 0; i < ROWS; i++)
		if (strcmp(rows[i].section, entry->section) == 0 && strcmp(rows[i].key, entry->key) == 0)
			return rows[i].put(s, entry->value, e);
	if (strcmp(entry->section, "limits") == 0)
		for (int id = 0; id < LIM_COUNT; id++)
			if (strcmp(limit_rules[id].key, entry->key) == 0)
				return put_limit(s, id, entry->value, e);
	*key_fault = true;
	return unknown_key(entry, e);
}

static enum status at_place(const char *path, long line, long column, const char *key, const struct err *why,
			    struct err *e)
{
	return err_set(e, why->status, "%.120s:%ld:%ld: %.60s%s%.300s", path, line, column, key,
		       key[0] ? ": " : "", why->text);
}

enum status settings_read(struct settings *s, const char *path, struct err *e)
{
	struct err why;
	struct ini ini = {0};
	char *data = NULL;
	size_t n = 0;
	long line = 1, column = 1;
	settings_built_in(s);
	err_clear(&why);
	enum status status = file_read(path, &data, &n, &why);
	if (status != ST_OK)
		return err_set(e, status, "settings: %s", why.text);
	if (n == 0) { /* nothing set is a valid choice */
		free(data);
		s->found = true;
		return ST_OK;
	}
	status = ini_parse(data, n, &ini, &line, &column, &why);
	free(data);
	if (status != ST_OK)
		return at_place(path, line, column, "", &why, e);
	for (size_t i = 0; status == ST_OK && i < ini.n; i++) {
		const struct ini_entry *entry = &ini.entry[i];
		bool key_fault;
		status = put_entry(s, entry, &key_fault, &why);
		if (status != ST_OK)
			status =
			    at_place(path, entry->line, key_fault ? entry->key_column : entry->value_column,
				     entry->key, &why, e);
	}
	ini_free(&ini);
	if (status != ST_OK) {
		settings_built_in(s);
		return status;
	}
	s->found = true;
	return ST_OK;
}

void settings_help(FILE *to)
{
	for (size_t i = 0; i < SECTIONS; i++) {
		fprintf(to, "  [%s]\n", sections[i]);
		for (size_t k = 0; k < ROWS; k++)
			if (strcmp(rows[k].section, sections[i]) == 0)
				fprintf(to, "  %-22s %s (%s; %s)\n", rows[k].key, rows[k].sentence,
					rows[k].fallback, rows[k].values);
		for (int id = 0; strcmp(sections[i], "limits") == 0 && id < LIM_COUNT; id++) {
			const struct limit_rule *r = &limit_rules[id];
			char fallback[NUMBER_TEXT_MAX];
			number_text(r->fallback, fallback);
			fprintf(to, "  %-22s %s (%s; %g to %g%s%s)\n", r->key, r->sentence,
				fallback[0]	    ? fallback
				: id == LIM_AIRMASS ? "none"
						    : "unset",
				r->min, r->max, r->unit[0] ? " " : "", r->unit);
		}
		if (strcmp(sections[i], "leap_seconds") == 0)
			fprintf(to, "  %-22s %s\n", "YYYY-MM-DD",
				"TAI less UTC in seconds from that UTC date on, for bulletins later than "
				"this program.");
	}
}
