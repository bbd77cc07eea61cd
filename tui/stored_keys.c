/* SPDX-License-Identifier: MIT */
#include "tui/stored_keys.h"

#include "db/stored_settings.h"
#include "ephem/number_text.h"
#include "ephem/worth.h"
#include "tui/diagnose.h"
#include "tui/given.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#define NONE ((double)NAN)

/* The built-in values agree with those of worth_rules_built_in, plan_rules_built_in and FALLBACK_BITS: a test
 * compares them. */
const struct stored_key_rule stored_key_rules[KEY_COUNT] = {
    [KEY_NEED_MIN] = {"need_min", "min", STORED_NUMBER, 0, 600, 2,
		      "Precision of a mid-time that is needed; a better one is worth no more."},
    [KEY_WORTH_BY] =
	{"worth_by", "", STORED_WORD, 0, 0, WORTH_BITS,
	 "By what windows are ranked: bits (expected information), depth (depth over its error) or "
	 "priority."},
    [KEY_FALLBACK_BITS] = {"fallback_bits", "bits", STORED_NUMBER, 0.01, 20, 1,
			   "What stands for the bits of a window whose timing can't be forecast."},
    [KEY_LIMB_SHARE] = {"limb_share", "", STORED_NUMBER, 0, 1, 0.2,
			"Worth of one limb alone, of the whole event's, where nothing is forecast."},
    [KEY_SHORT_SHARE] = {"short_share", "", STORED_NUMBER, 0, 1, 0.95,
			 "Worth is multiplied by this for each baseline that a plan cuts down."},
    [KEY_UNKNOWN_SHARE] = {"unknown_share", "", STORED_NUMBER, 0, 1, 0.1,
			   "What stands for the chance of a window without one, times its coverage."},
    [KEY_AFTER_DATE] =
	{"after_date", "", STORED_DATE, 0, 0, NONE,
	 "Date for which the error afterwards is told, YYYY-MM-DD; it goes before after_years."},
    [KEY_AFTER_YEARS] = {"after_years", "yr", STORED_NUMBER, 0, 100, 3, "The same, in years from now."},
    [KEY_SYSTEMATIC_FLOOR_S] = {"systematic_floor_s", "s", STORED_NUMBER, 0, 3600, 0,
				"What no mid-time of this team goes below, as clock errors."},
    [KEY_MOVED_MIN] = {"moved_min", "min", STORED_NUMBER, 0, 1e6, 2,
		       "From how much a stored mid-time counts as moved, where --moved is not given."},
};

struct stored_values stored_values_built_in(void)
{
	struct stored_values v = {.given = {false}};
	for (int k = 0; k < KEY_COUNT; k++)
		v.value[k] = stored_key_rules[k].fallback;
	return v;
}

double stored_value(const struct stored_values *v, enum stored_key key)
{
	return v->given[key] ? v->value[key] : stored_key_rules[key].fallback;
}

int stored_key_find(const char *name)
{
	for (int k = 0; k < KEY_COUNT; k++)
		if (strcmp(stored_key_rules[k].name, name) == 0)
			return k;
	return -1;
}

/* --- texts --- */

static enum status parse_word(const char *text, double *value, struct err *e)
{
	char got[ERR_QUOTE_MAX], list[128] = "";
	for (int i = 0; i < WORTH_CHOICE_COUNT; i++) {
		if (strcmp(worth_choice_words[i], text) == 0) {
			*value = i;
			return ST_OK;
		}
		snprintf(list + strlen(list), sizeof list - strlen(list), "%s%s", i ? ", " : "",
			 worth_choice_words[i]);
	}
	err_quote(text, strlen(text), got);
	return err_set(e, ST_SYNTAX, "unknown (got \"%s\", expected %s)", got, list);
}

static enum status parse_date(const char *text, double *value, struct err *e)
{
	struct date d;
	int32_t mjd = 0;
	char got[ERR_QUOTE_MAX];
	enum status s = date_parse(text, &d, e);
	if (s == ST_OK)
		s = date_to_mjd(d, &mjd, e);
	if (s != ST_OK)
		return s;
	err_quote(text, strlen(text), got);
	if (d.year < GIVEN_YEAR_MIN || d.year > GIVEN_YEAR_MAX)
		return err_set(e, ST_RANGE, "out of range (got \"%s\", expected a date of %d to %d)", got,
			       (int)GIVEN_YEAR_MIN, (int)GIVEN_YEAR_MAX);
	*value = mjd;
	return ST_OK;
}

enum status stored_key_parse(enum stored_key key, const char *text, double *value, struct err *e)
{
	const struct stored_key_rule *rule = &stored_key_rules[key];
	char got[ERR_QUOTE_MAX];
	double v = 0.0;
	if (rule->kind == STORED_WORD)
		return parse_word(text, value, e);
	if (rule->kind == STORED_DATE)
		return parse_date(text, value, e);
	enum status s = number_parse(text, strlen(text), &v, NULL, e);
	if (s != ST_OK)
		return s;
	err_quote(text, strlen(text), got);
	if (!(v >= rule->min && v <= rule->max))
		return err_set(e, ST_RANGE, "out of range (got \"%s\", expected %g to %g%s%s)", got,
			       rule->min, rule->max, *rule->unit ? " " : "", rule->unit);
	*value = v + 0.0; /* no -0 */
	return ST_OK;
}

void stored_key_text(enum stored_key key, double value, char out[STORED_TEXT_BYTES])
{
	char number[NUMBER_TEXT_MAX];
	out[0] = '\0';
	if (isnan(value))
		return;
	if (stored_key_rules[key].kind == STORED_WORD) {
		const int word = (int)value;
		snprintf(out, STORED_TEXT_BYTES, "%s", worth_choice_words[word]);
	} else if (stored_key_rules[key].kind == STORED_DATE) {
		const struct date d = date_from_mjd((int32_t)value);
		snprintf(out, STORED_TEXT_BYTES, "%04d-%02d-%02d", d.year, d.month, d.day);
	} else {
		number_text(value, number);
		snprintf(out, STORED_TEXT_BYTES, "%s", number);
	}
}

/* --- the store --- */

void stored_values_load(struct store *s, struct stored_values *out)
{
	char text[STORED_SETTING_MAX + 1];
	*out = stored_values_built_in();
	for (int k = 0; s && k < KEY_COUNT; k++) {
		struct err e;
		enum status st = stored_setting(s, stored_key_rules[k].name, text, &e);
		if (st == ST_OK && !text[0])
			continue;
		if (st == ST_OK)
			st = stored_key_parse((enum stored_key)k, text, &out->value[k], &e);
		out->given[k] = st == ST_OK;
		if (st != ST_OK)
			diagnose("store", "setting %s: %.300s; what is built in is used",
				 stored_key_rules[k].name, e.text);
	}
}
