/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "db/stored_settings.h"
#include "ephem/near_word.h"
#include "tui/commands/result.h"
#include "tui/diagnose.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/json.h"

#include <string.h>

/* --- showing --- */

static void json_value(struct json *j, const char *key, const struct stored_key_rule *rule, const char *text)
{
	if (!text[0])
		json_null(j, key);
	else if (rule->kind == STORED_NUMBER)
		json_digits(j, key, text);
	else
		json_text(j, key, text);
}

static void one_json(struct json *j, const struct stored_key_rule *rule, const char *value,
		     const char *fallback, bool stored)
{
	json_open(j, NULL, '{', true);
	json_text(j, "key", rule->name);
	json_value(j, "value", rule, value);
	json_value(j, "built_in", rule, fallback);
	json_bool(j, "stored", stored);
	json_text(j, "unit", rule->unit);
	json_close(j, '}');
}

static void one_csv(struct csv_out *c, const struct stored_key_rule *rule, const char *value,
		    const char *fallback, bool stored)
{
	csv_text(c, rule->name);
	csv_text(c, value);
	csv_text(c, fallback);
	csv_number(c, stored ? "1" : "0");
	csv_text(c, rule->unit);
	csv_end_line(c);
}

static void one_text(FILE *to, const struct stored_key_rule *rule, const char *value, bool stored)
{
	fprintf(to, "%-20s %s%s%s%s\n%20s %s\n", rule->name, value[0] ? value : "none",
		value[0] && rule->unit[0] ? " " : "", value[0] ? rule->unit : "", stored ? "" : " (built in)",
		"", rule->sentence);
}

static int write_settings(const struct run *r, int only)
{
	struct out out;
	enum format format;
	const int opened = result_open(r, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &format, &out);
	if (opened != EXIT_DONE)
		return opened;
	struct csv_out csv = {.file = out.file};
	struct json json = json_begin(out.file);
	if (format == FORMAT_CSV)
		fputs("key,value,built_in,stored,unit\n", out.file);
	else if (format == FORMAT_JSON)
		json_open(&json, NULL, '[', false);
	for (int k = 0; k < KEY_COUNT; k++) {
		const struct stored_key_rule *rule = &stored_key_rules[k];
		char value[STORED_TEXT_BYTES], fallback[STORED_TEXT_BYTES];
		if (only >= 0 && k != only)
			continue;
		stored_key_text((enum stored_key)k, stored_value(&r->stored, (enum stored_key)k), value);
		stored_key_text((enum stored_key)k, rule->fallback, fallback);
		if (format == FORMAT_CSV)
			one_csv(&csv, rule, value, fallback, r->stored.given[k]);
		else if (format == FORMAT_JSON)
			one_json(&json, rule, value, fallback, r->stored.given[k]);
		else
			one_text(out.file, rule, value, r->stored.given[k]);
	}
	if (format == FORMAT_JSON) {
		json_close(&json, ']');
		json_end(&json);
	}
	return result_commit(&out, true);
}

/* --- changing --- */

static enum status put_in_store(struct run *r, const char *verb, int key, const char *text, struct err *e)
{
	char utc[UTC_TEXT_MAX];
	const struct change change = change_of(r, verb, utc);
	enum status s = store_begin(r->store, &change, e);
	if (s != ST_OK)
		return s;
	s = stored_setting_put(r->store, stored_key_rules[key].name, text, e);
	return store_end(r->store, s, e);
}

static int change_setting(const struct env *env, const struct options *o, int key, const char *text)
{
	char whole[STORED_TEXT_BYTES] = "";
	struct run run;
	struct err e;
	double value;
	int code;
	if (text) {
		if (stored_key_parse((enum stored_key)key, text, &value, &e) != ST_OK)
			return diagnose_err(stored_key_rules[key].name, &e, EXIT_USAGE);
		stored_key_text((enum stored_key)key, value, whole);
	}
	if (run_open(&run, env, o, NEED_STORE | NEED_WRITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	if (put_in_store(&run, text ? "setting set" : "setting clear", key, whole, &e) != ST_OK) {
		code = diagnose_err("setting", &e, EXIT_UNMET);
	} else {
		stored_values_load(run.store, &run.stored);
		code = write_settings(&run, key);
	}
	run_close(&run);
	return code;
}

/* -1, and said: no such key. */
static int key_named(const char *name)
{
	const char *all[KEY_COUNT];
	char got[ERR_QUOTE_MAX];
	const int key = stored_key_find(name);
	if (key >= 0)
		return key;
	for (int k = 0; k < KEY_COUNT; k++)
		all[k] = stored_key_rules[k].name;
	err_quote(name, strlen(name), got);
	const char *near = nearest_word(name, all, KEY_COUNT);
	if (near)
		diagnose("setting", "no such key (got \"%s\"); did you mean %s?", got, near);
	else
		diagnose("setting", "no such key (got \"%s\"; see wane setting list)", got);
	return -1;
}

int command_setting(const struct env *env, const struct options *o)
{
	static const char *const verbs[] = {"list", "set", "clear"};
	struct run run;
	struct err e;
	int code;
	const int verb = verb_of("setting", verbs, 3, o);
	if (verb < 0)
		return EXIT_USAGE;
	if (verb == 0) {
		if (run_open(&run, env, o, NEED_STORE, &code, &e) != ST_OK)
			return diagnose_whole(&e, code);
		code = write_settings(&run, -1);
		run_close(&run);
		return code;
	}
	const int key = key_named(o->word[2]), words = verb == 1 ? 4 : 3;
	if (key < 0)
		return EXIT_USAGE;
	if (o->n_words != words) {
		diagnose("setting", "%s (expected wane setting %s)",
			 o->n_words < words ? "the value is missing" : "an argument too many",
			 verb == 1 ? "set KEY VALUE" : "clear KEY");
		return EXIT_USAGE;
	}
	return change_setting(env, o, key, verb == 1 ? o->word[3] : NULL);
}

void setting_help(FILE *to)
{
	fputs("\nKeys\n", to);
	for (int k = 0; k < KEY_COUNT; k++) {
		const struct stored_key_rule *rule = &stored_key_rules[k];
		char fallback[STORED_TEXT_BYTES];
		stored_key_text((enum stored_key)k, rule->fallback, fallback);
		fprintf(to, "  %-24s %s (%s", rule->name, rule->sentence, fallback[0] ? fallback : "none");
		if (rule->kind == STORED_NUMBER)
			fprintf(to, "; %g to %g%s%s", rule->min, rule->max, rule->unit[0] ? " " : "",
				rule->unit);
		fputs(")\n", to);
	}
}
