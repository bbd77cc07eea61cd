/* SPDX-License-Identifier: MIT */
#include "tui/commands/telescope_write.h"

#include "ephem/number_text.h"
#include "tui/diagnose.h"
#include "tui/plan_time.h"

#include <string.h>

enum verb { VERB_LIST, VERB_SHOW, VERB_ADD, VERB_SET, VERB_REMOVE };
static const char *const change_words[] = {[VERB_LIST] = "",
					   [VERB_SHOW] = "",
					   [VERB_ADD] = "telescope add",
					   [VERB_SET] = "telescope set",
					   [VERB_REMOVE] = "telescope remove"};

/* --- FIELD=VALUE --- */

static enum status unknown_field(const char *word, size_t n, struct err *e)
{
	const char *names[64], *near;
	char got[ERR_QUOTE_MAX];
	size_t count = telescope_field_count < 64 ? telescope_field_count : 64;
	for (size_t i = 0; i < count; i++)
		names[i] = telescope_fields[i].name;
	err_quote(word, n, got);
	near = nearest_word(got, names, count);
	return err_set(e, ST_SYNTAX, "field: unknown (got \"%s\"%s%s; see wane telescope --help)", got,
		       near ? ", did you mean " : "", near ? near : "");
}

/* `SPAN=TEXT;SPAN=TEXT`: each span must be one that can be read. */
static enum status blocks_good(const char *text, struct err *e)
{
	char span[128], got[ERR_QUOTE_MAX];
	struct err why;
	for (const char *at = text; *at;) {
		size_t n = strcspn(at, ";");
		const char *equals = memchr(at, '=', n);
		err_quote(at, n, got);
		if (!equals || equals + 1 == at + n || (size_t)(equals - at) >= sizeof span)
			return err_set(e, ST_SYNTAX,
				       "blocks: not a block (got \"%s\", expected SPAN=TEXT, several with ; "
				       "between)",
				       got);
		snprintf(span, sizeof span, "%.*s", (int)(equals - at), at);
		if (plan_span_check(span, &why) != ST_OK)
			return err_set(e, why.status, "blocks: %.440s", why.text);
		at += n + (at[n] == ';');
	}
	return ST_OK;
}

/* The words behind the name, laid over *t. */
static enum status assign_words(const struct options *o, struct telescope *t, struct err *e)
{
	uint64_t given = 0;
	for (int i = 3; i < o->n_words; i++) {
		const char *word = o->word[i], *equals = strchr(word, '=');
		char name[64], got[ERR_QUOTE_MAX];
		size_t n = equals ? (size_t)(equals - word) : strlen(word);
		err_quote(word, strlen(word), got);
		if (!equals)
			return err_set(e, ST_SYNTAX, "field: no value (got \"%s\", expected FIELD=VALUE)",
				       got);
		snprintf(name, sizeof name, "%.*s", n < sizeof name ? (int)n : 0, word);
		long field = telescope_field_find(name);
		if (field < 0)
			return unknown_field(word, n, e);
		if (given >> field & 1)
			return err_set(e, ST_SYNTAX, "%s: given twice", name);
		given |= (uint64_t)1 << field;
		enum status s = telescope_field_put(t, (size_t)field, equals + 1, e);
		if (s == ST_OK && strcmp(name, "blocks") == 0)
			s = blocks_good(equals + 1, e);
		if (s != ST_OK)
			return s;
	}
	return ST_OK;
}

/* --- changing --- */

static enum status put_in_store(struct run *r, const struct telescope *t, enum verb verb, struct err *e)
{
	char utc[UTC_TEXT_MAX];
	const struct change change = change_of(r, change_words[verb], utc);
	enum status s = store_begin(r->store, &change, e);
	if (s != ST_OK)
		return s;
	s = verb == VERB_REMOVE ? telescope_remove(r->store, t->site_id, t->name, e)
				: telescope_put(r->store, t, verb == VERB_ADD, e);
	return store_end(r->store, s, e);
}

static int no_such(const struct run *r, const char *name)
{
	char got[ERR_QUOTE_MAX];
	err_quote(name, strlen(name), got);
	diagnose("telescope", "no such telescope at %s (got \"%s\"; see wane telescope list)", r->site.name,
		 got);
	return EXIT_UNMET;
}

/* What is asked for, checked against what is stored; nothing is written yet. */
static int wanted(const struct run *r, enum verb verb, struct telescope *t)
{
	const struct options *o = r->options;
	const char *name = o->word[2];
	struct err e;
	long index = telescope_list_find(&r->telescopes, r->site.id, name);
	if (name_check(name, strlen(name), NULL, &e) != ST_OK)
		return diagnose_err("NAME", &e, EXIT_USAGE);
	*t = telescope_empty();
	if (verb != VERB_ADD && index < 0)
		return no_such(r, name);
	if (index >= 0)
		*t = r->telescopes.telescope[index];
	else
		t->name = name;
	t->site_id = r->site.id;
	if (verb != VERB_REMOVE && assign_words(o, t, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_USAGE);
	if (verb == VERB_ADD && index >= 0) {
		diagnose("telescope", "\"%s\" exists already (wane telescope set changes it)", t->name);
		return EXIT_UNMET;
	}
	return EXIT_DONE;
}

static int change_telescope(const struct env *env, const struct options *o, enum verb verb)
{
	struct run read, write;
	struct telescope t = telescope_empty();
	struct err e;
	int code;
	if (run_open(&read, env, o, NEED_STORE | NEED_SITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	code = wanted(&read, verb, &t);
	if (code == EXIT_DONE &&
	    run_open(&write, env, o, NEED_STORE | NEED_SITE | NEED_WRITE, &code, &e) != ST_OK) {
		run_close(&read);
		return diagnose_whole(&e, code);
	}
	if (code == EXIT_DONE) {
		if (put_in_store(&write, &t, verb, &e) != ST_OK)
			code = diagnose_err("telescope", &e, EXIT_UNMET);
		else if (verb != VERB_REMOVE)
			code = telescopes_write(&write, &t, 1, false);
		run_close(&write);
	}
	run_close(&read);
	return code;
}

/* --- showing --- */

/* The site's telescopes lie one behind the other in the list. */
static int show_telescopes(const struct env *env, const struct options *o, bool list)
{
	struct run run;
	struct err e;
	int code;
	if (run_open(&run, env, o, NEED_STORE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	/* an empty store has an empty list; else one site must be chosen */
	if (!list || run.sites.n > 0) {
		run_close(&run);
		if (run_open(&run, env, o, NEED_STORE | NEED_SITE, &code, &e) != ST_OK)
			return diagnose_whole(&e, code);
	}
	size_t first = 0, n = 0;
	for (size_t i = run.telescopes.n; i-- > 0;)
		if (run.telescopes.telescope[i].site_id == run.site.id) {
			first = i;
			n++;
		}
	long index = list ? -1 : telescope_list_find(&run.telescopes, run.site.id, o->word[2]);
	if (list)
		code = telescopes_write(&run, n ? &run.telescopes.telescope[first] : NULL, n, true);
	else if (index < 0)
		code = no_such(&run, o->word[2]);
	else
		code = telescopes_write(&run, &run.telescopes.telescope[index], 1, false);
	run_close(&run);
	return code;
}

int command_telescope(const struct env *env, const struct options *o)
{
	static const char *const verbs[] = {"list", "show", "add", "set", "remove"};
	struct options plain = *o;
	plain.telescope = NULL; /* the name is a word here */
	int verb = verb_of("telescope", verbs, 5, o);
	if (verb < 0 || !one_site(o, "telescope"))
		return EXIT_USAGE;
	if (o->n_places > 0) {
		diagnose("--place", "a telescope belongs to a stored site (got \"%s\", expected --site NAME)",
			 o->place[0]);
		return EXIT_USAGE;
	}
	if ((verb == VERB_SHOW || verb == VERB_REMOVE) && o->n_words > 3) {
		diagnose("telescope", "an argument too many (got \"%.60s\")", o->word[3]);
		return EXIT_USAGE;
	}
	if (verb == VERB_SET && o->n_words == 3) {
		diagnose("telescope", "nothing to set (expected FIELD=VALUE)");
		return EXIT_USAGE;
	}
	if (verb == VERB_LIST || verb == VERB_SHOW)
		return show_telescopes(env, &plain, verb == VERB_LIST);
	return change_telescope(env, &plain, (enum verb)verb);
}

void telescope_help(FILE *to)
{
	fputs("\nFields of a telescope, columns of csv, keys of json\n", to);
	for (size_t i = 0; i < telescope_field_count; i++) {
		const struct telescope_field *f = &telescope_fields[i];
		char lo[NUMBER_TEXT_MAX], hi[NUMBER_TEXT_MAX];
		number_text(f->min, lo);
		number_text(f->max, hi);
		fprintf(to, "  %-24s %s", f->name, f->sentence);
		if (f->type == TELESCOPE_NUMBER)
			fprintf(to, " (%s to %s%s%s)\n", lo, hi, f->unit[0] ? " " : "", f->unit);
		else if (f->type == TELESCOPE_TEXT)
			fprintf(to, " (at most %s characters)\n", hi);
		else
			fputc('\n', to);
	}
}
