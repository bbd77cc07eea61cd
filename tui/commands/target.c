/* SPDX-License-Identifier: MIT */
#include "tui/commands/target_write.h"

#include "db/history.h"
#include "tui/diagnose.h"
#include "tui/given.h"

#include <stdlib.h>
#include <string.h>

/* Fields given as FIELD=VALUE words. */
struct assignments {
	size_t n;
	int field[FIELD_COUNT];
	const char *text[FIELD_COUNT];
	char ra[NUMBER_TEXT_MAX], dec[NUMBER_TEXT_MAX]; /* of --radec */
};

static int no_such_target(const char *name)
{
	char got[ERR_QUOTE_MAX];
	err_quote(name, strlen(name), got);
	diagnose("target", "no such target is stored (got \"%s\"; see wane target list)", got);
	return EXIT_UNMET;
}

/* --- FIELD=VALUE --- */

static enum status assign_twice(int field, struct err *e)
{
	return err_set(e, ST_SYNTAX, "%s: given twice", fields[field].name);
}

static enum status assign(struct assignments *a, int field, const char *text, struct err *e)
{
	for (size_t i = 0; i < a->n; i++)
		if (a->field[i] == field)
			return assign_twice(field, e);
	a->field[a->n] = field;
	a->text[a->n++] = text;
	return ST_OK;
}

static enum status unknown_field(const char *word, size_t n, struct err *e)
{
	const char *names[FIELD_COUNT], *near;
	char got[ERR_QUOTE_MAX];
	for (int i = 0; i < FIELD_COUNT; i++)
		names[i] = fields[i].name;
	err_quote(word, n, got);
	near = nearest_word(got, names, FIELD_COUNT);
	return err_set(e, ST_SYNTAX, "field: unknown (got \"%s\"%s%s)", got, near ? ", did you mean " : "",
		       near ? near : "");
}

static enum status not_an_assignment(const char *word, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	err_quote(word, strlen(word), got);
	return err_set(e, ST_SYNTAX, "field: no value (got \"%s\", expected FIELD=VALUE)", got);
}

static enum status read_words(const struct options *o, struct assignments *a, struct err *e)
{
	double ra, dec;
	struct err why;
	enum status s = ST_OK;
	a->n = 0;
	for (int i = 3; s == ST_OK && i < o->n_words; i++) {
		const char *equals = strchr(o->word[i], '=');
		size_t n = equals ? (size_t)(equals - o->word[i]) : strlen(o->word[i]);
		char name[64];
		snprintf(name, sizeof name, "%.*s", n < sizeof name ? (int)n : 0, o->word[i]);
		int field = field_find(name);
		if (!equals)
			return not_an_assignment(o->word[i], e);
		if (field == FIELD_AT_NAME && strcmp(o->word[1], "add") == 0)
			return assign_twice(field, e);
		s = field < 0 ? unknown_field(o->word[i], n, e) : assign(a, field, equals + 1, e);
	}
	if (s != ST_OK || !o->radec)
		return s;
	if (given_radec(o->radec, &ra, &dec, &why) != ST_OK)
		return err_set(e, ST_SYNTAX, "--radec: %.440s", why.text);
	number_text(ra, a->ra);
	number_text(dec, a->dec);
	s = assign(a, field_find("ra_deg"), a->ra, e);
	return s == ST_OK ? assign(a, field_find("dec_deg"), a->dec, e) : s;
}

/* --- changing --- */

static enum status add_in_store(struct run *r, const char *name, const struct assignments *a, struct err *e)
{
	struct field_texts texts;
	enum put_result result;
	for (int i = 0; i < FIELD_COUNT; i++)
		texts.text[i] = "";
	texts.text[0] = name;
	for (size_t i = 0; i < a->n; i++)
		texts.text[a->field[i]] = a->text[i];
	return target_put(r->store, &texts, true, &result, e);
}

static enum status adopt_in_store(struct run *r, const char *name, int version, struct err *e)
{
	long index = target_list_find(&r->targets, name);
	if (index < 0)
		return err_set(e, ST_ABSENT, "no such target is stored");
	return ephemeris_adopt(r->store, r->targets.t[index].id, version, e);
}

/* Whether the target has the version that is to be adopted. */
static enum status version_is_there(struct run *r, long index, const char *text, struct err *e)
{
	struct ephemeris_row *row = NULL;
	size_t n = 0;
	bool found = false;
	char list[160] = "";
	enum status s = ephemeris_versions(r->store, r->targets.t[index].id, &row, &n, e);
	for (size_t i = 0; s == ST_OK && i < n; i++) {
		found = found || row[i].version == (int)strtol(text, NULL, 10);
		if (strlen(list) + 16 < sizeof list)
			snprintf(list + strlen(list), sizeof list - strlen(list), "%s%d", i ? ", " : "",
				 row[i].version);
	}
	free(row);
	if (s == ST_OK && !found)
		s = err_set(e, ST_ABSENT,
			    "VERSION: no such version of it is stored (got \"%.20s\", expected %s)", text,
			    list[0] ? list : "none: it has no ephemeris");
	return s;
}

static enum status in_change(struct run *r, const char *verb, const char *name, const struct assignments *a,
			     struct err *e)
{
	char utc[UTC_TEXT_MAX];
	const struct change change = change_of(r, verb, utc);
	enum status s = store_begin(r->store, &change, e);
	if (s != ST_OK)
		return s;
	if (strcmp(verb, "target add") == 0)
		s = add_in_store(r, name, a, e);
	else if (strcmp(verb, "target set") == 0)
		s = target_set(r->store, name, a->field, a->text, a->n, e);
	else if (strcmp(verb, "target adopt") == 0)
		s = adopt_in_store(r, name, (int)strtol(r->options->word[3], NULL, 10), e);
	else
		s = target_remove(r->store, name, e);
	return store_end(r->store, s, e);
}

static void say_doubt(int field, const char *text)
{
	char got[ERR_QUOTE_MAX], expected[128];
	const char *beside = NULL;
	const char *why = field_doubt(field, text, &beside);
	err_quote(text, strlen(text), got);
	field_expected(field, expected, sizeof expected);
	diagnose(fields[field].name, "kept, flagged and not used: %s (got \"%s\", expected %s)", why, got,
		 beside ? beside : expected);
}

/* The stored texts of a target (run NULL: none) with the assignments over them, read as import would: faults
 * are told before anything is opened for writing, doubts as they come. */
static enum status row_is_good(struct run *r, long index, const char *name, const struct assignments *a,
			       struct err *e)
{
	struct field_texts texts;
	struct target t;
	struct err why;
	uint64_t doubts = 0;
	int bad = 0;
	char *block = NULL;
	for (int i = 0; i < FIELD_COUNT; i++)
		texts.text[i] = "";
	if (index >= 0) {
		if (target_texts(r->store, r->targets.t[index].id, &texts, &block, &why) != ST_OK)
			return err_set(e, why.status, "store: %.440s", why.text);
	} else {
		texts.text[0] = name;
	}
	for (size_t i = 0; i < a->n; i++)
		texts.text[a->field[i]] = a->text[i];
	enum status s = fields_read(&texts, &t, &doubts, &bad, &why);
	if (s != ST_OK)
		err_set(e, s, "%s: %.440s", fields[bad].name, why.text);
	for (size_t i = 0; s == ST_OK && i < a->n; i++)
		if (doubts >> a->field[i] & 1)
			say_doubt(a->field[i], a->text[i]);
	free(block);
	return s;
}

static int change_target(const struct env *env, const struct options *o, const char *verb)
{
	struct run run;
	struct assignments a;
	struct err e;
	int code;
	bool add = strcmp(verb, "target add") == 0, set = strcmp(verb, "target set") == 0;
	a.n = 0;
	if (strcmp(verb, "target adopt") != 0 && read_words(o, &a, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_USAGE);
	if (set && a.n == 0) {
		diagnose("target", "nothing to set (expected FIELD=VALUE)");
		return EXIT_USAGE;
	}
	struct options plain = *o;
	plain.radec = NULL; /* it was a field here, not the run's target */
	if (run_open(&run, env, &plain, NEED_STORE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	long index = target_list_find(&run.targets, o->word[2]);
	if (add && index >= 0) {
		diagnose("target", "\"%.80s\" exists already (wane target set changes it)", o->word[2]);
		code = EXIT_UNMET;
	} else if (!add && index < 0) {
		code = no_such_target(o->word[2]);
	} else if (strcmp(verb, "target adopt") == 0) {
		if (version_is_there(&run, index, o->word[3], &e) != ST_OK)
			code = diagnose_whole(&e, EXIT_UNMET);
	} else if ((add || set) && row_is_good(&run, index, o->word[2], &a, &e) != ST_OK) {
		code = diagnose_whole(&e, EXIT_UNMET);
	}
	run_close(&run);
	if (code != EXIT_DONE)
		return code;
	if (run_open(&run, env, &plain, NEED_STORE | NEED_WRITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	if (in_change(&run, verb, o->word[2], &a, &e) != ST_OK)
		code = diagnose_err("target", &e, EXIT_UNMET);
	run_close(&run);
	return code;
}

/* --- showing --- */

/* The list is that of --target where given. */
static int show_targets(const struct env *env, const struct options *o, bool list)
{
	struct run run;
	struct err e;
	int code, n = 0;
	const char *const *names = list ? o->target : &o->word[2];
	const int wanted = list ? o->n_targets : 1;
	size_t chosen[OPTION_NAMES_MAX];
	if (run_open(&run, env, o, NEED_STORE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	for (; code == EXIT_DONE && n < wanted; n++) {
		long index = target_list_find(&run.targets, names[n]);
		if (index < 0)
			code = no_such_target(names[n]);
		chosen[n] = index < 0 ? 0 : (size_t)index;
	}
	if (code == EXIT_DONE)
		code = targets_write(&run, wanted ? chosen : NULL, wanted ? (size_t)n : run.targets.n, list);
	run_close(&run);
	return code;
}

static int adopt_version(const struct env *env, const struct options *o)
{
	char got[ERR_QUOTE_MAX];
	if (o->n_words != 4) {
		diagnose(
		    "target",
		    "expected wane target adopt NAME VERSION (wane target show NAME lists the versions)");
		return EXIT_USAGE;
	}
	if (strspn(o->word[3], "0123456789") != strlen(o->word[3]) || strlen(o->word[3]) > 9) {
		err_quote(o->word[3], strlen(o->word[3]), got);
		diagnose("VERSION",
			 "not the number of a version (got \"%s\", expected as wane target show says)", got);
		return EXIT_USAGE;
	}
	return change_target(env, o, "target adopt");
}

int command_target(const struct env *env, const struct options *o)
{
	static const char *const verbs[] = {"list", "show", "add", "set", "remove", "adopt"};
	int verb = verb_of("target", verbs, 6, o);
	if (verb < 0)
		return EXIT_USAGE;
	if (verb == 5)
		return adopt_version(env, o);
	if ((verb == 1 || verb == 4) && o->n_words > 3) {
		diagnose("target", "an argument too many (got \"%.60s\")", o->word[3]);
		return EXIT_USAGE;
	}
	if (verb <= 1)
		return show_targets(env, o, verb == 0);
	return change_target(env, o, verb == 2 ? "target add" : verb == 3 ? "target set" : "target remove");
}
