/* SPDX-License-Identifier: MIT */
#include "tui/commands/star.h"

#include "ephem/number_text.h"
#include "tui/commands/one_target.h"
#include "tui/diagnose.h"
#include "tui/given.h"

#include <limits.h>
#include <math.h>
#include <string.h>

enum { STAR_NAME_CHARS = 80, STAR_NOTE_CHARS = 255 }; /* as db/field_stars.h says */
enum verb { VERB_LIST, VERB_ADD, VERB_REMOVE, VERBS };
static const struct {
	const char *word, *arguments;
	int words; /* behind the verb */
} verbs[VERBS] = {
    [VERB_LIST] = {"list", "TARGET", 1},
    [VERB_ADD] = {"add", "TARGET ROLE RA,DEC MAG (of a neighbour also TARGET neighbour ARCSEC MAG)", 4},
    [VERB_REMOVE] = {"remove", "TARGET NUMBER", 2},
};

/* Which telescope's field it is takes a site; where none can be told, the lists are enough. */
static enum status open_run(struct run *r, const struct env *env, const struct options *o, int needs,
			    int *code, struct err *e)
{
	enum status s = run_open(r, env, o, NEED_STORE | needs, code, e);
	if (s != ST_OK || r->site.name[0] || (r->sites.n != 1 && !r->settings.site[0]))
		return s;
	run_close(r);
	return run_open(r, env, o, NEED_STORE | NEED_SITE | needs, code, e);
}

/* --- reading --- */

static int read_role(const char *text, enum field_star_role *role)
{
	char got[ERR_QUOTE_MAX];
	for (int k = 0; k < STAR_ROLE_COUNT; k++)
		if (strcmp(field_star_words[k], text) == 0) {
			*role = (enum field_star_role)k;
			return EXIT_DONE;
		}
	err_quote(text, strlen(text), got);
	diagnose("ROLE", "unknown (got \"%s\", expected comparison, guide or neighbour)", got);
	return EXIT_USAGE;
}

static int read_number(const char *word, const char *text, double min, double max, double *out)
{
	char got[ERR_QUOTE_MAX];
	struct err e;
	if (number_parse(text, strlen(text), out, NULL, &e) != ST_OK)
		return diagnose_err(word, &e, EXIT_USAGE);
	*out += 0.0; /* no -0 */
	if (*out >= min && *out <= max)
		return EXIT_DONE;
	err_quote(text, strlen(text), got);
	diagnose(word, "out of range (got \"%s\", expected %g to %g)", got, min, max);
	return EXIT_USAGE;
}

static int read_place(const char *text, struct field_star *f)
{
	struct err e;
	char got[ERR_QUOTE_MAX];
	f->ra_deg = f->dec_deg = f->sep_arcsec = (double)NAN;
	if (strchr(text, ','))
		return given_radec(text, &f->ra_deg, &f->dec_deg, &e) == ST_OK
			   ? EXIT_DONE
			   : diagnose_err("RA,DEC", &e, EXIT_USAGE);
	if (f->role == STAR_NEIGHBOUR)
		return read_number("ARCSEC", text, 0.0, STAR_SEP_MAX_ARCSEC, &f->sep_arcsec);
	err_quote(text, strlen(text), got);
	diagnose(
	    "RA,DEC",
	    "no position (got \"%s\", expected RA,DEC; only a neighbour may have a distance in its place)",
	    got);
	return EXIT_USAGE;
}

static int read_star(const struct options *o, struct field_star *f)
{
	*f = (struct field_star){.name = o->star_name ? o->star_name : "",
				 .band = o->band ? o->band : "",
				 .note = o->note ? o->note : ""};
	if (!text_argument("--name", o->star_name, STAR_NAME_CHARS) ||
	    !text_argument("--note", o->note, STAR_NOTE_CHARS))
		return EXIT_USAGE;
	int code = read_role(o->word[3], &f->role);
	if (code == EXIT_DONE)
		code = read_place(o->word[4], f);
	if (code == EXIT_DONE)
		code = read_number("MAG", o->word[5], -5.0, 40.0, &f->mag);
	if (code == EXIT_DONE && o->band && band_parse(o->band) == BAND_NONE) {
		char got[ERR_QUOTE_MAX];
		err_quote(o->band, strlen(o->band), got);
		diagnose("--band", "unknown (got \"%s\", expected U, B, V, R, I, g, r, i, z or clear)", got);
		code = EXIT_USAGE;
	}
	return code;
}

/* --- the verbs --- */

static int list_stars(const struct env *env, const struct options *o)
{
	struct run run;
	struct err e;
	int code;
	if (open_run(&run, env, o, 0, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	const struct target *t = target_named(&run, o->word[2]);
	code = t ? stars_write(&run, t) : EXIT_UNMET;
	run_close(&run);
	return code;
}

static enum status change_star(struct run *r, const struct field_star *f, bool add, struct err *e)
{
	char utc[UTC_TEXT_MAX];
	int64_t id;
	const struct change change = change_of(r, add ? "star add" : "star remove", utc);
	enum status s = store_begin(r->store, &change, e);
	if (s != ST_OK)
		return s;
	s = add ? field_star_add(r->store, f, &id, e) : field_star_remove(r->store, f->id, e);
	return store_end(r->store, s, e);
}

/* Whether the star of that number is the target's. */
static bool has_star(const struct run *r, const struct target *t, int64_t id)
{
	size_t n;
	const struct field_star *star = field_stars_of(&r->stars, t->id, &n);
	for (size_t i = 0; star && i < n; i++)
		if (star[i].id == id)
			return true;
	diagnose("star", "the target has no such star (got \"%lld\"; see wane star list)", (long long)id);
	return false;
}

static int add_or_remove(const struct env *env, const struct options *o, bool add)
{
	struct run run;
	struct field_star f = {.role = STAR_COMPARISON};
	struct err e;
	long number = 0;
	int code = EXIT_DONE;
	if (add)
		code = read_star(o, &f);
	else if (!whole_argument("NUMBER", o->word[3], 1, LONG_MAX / 2, &number))
		code = EXIT_USAGE;
	if (code != EXIT_DONE)
		return code;
	/* nothing is opened for writing for the sake of a name that is not there */
	for (int write = 0; write <= 1; write++) {
		if (run_open(&run, env, o, NEED_STORE | (write ? NEED_WRITE : 0), &code, &e) != ST_OK)
			return diagnose_whole(&e, code);
		const struct target *t = target_named(&run, o->word[2]);
		if (!t || (!add && !has_star(&run, t, number)))
			code = EXIT_UNMET;
		f.target_id = t ? t->id : 0;
		f.id = number;
		if (code == EXIT_DONE && write && change_star(&run, &f, add, &e) != ST_OK)
			code = diagnose_err("star", &e, EXIT_UNMET);
		run_close(&run);
		if (code != EXIT_DONE)
			return code;
	}
	return add ? list_stars(env, o) : EXIT_DONE;
}

int command_star(const struct env *env, const struct options *o)
{
	const char *verb = o->n_words > 1 ? o->word[1] : "";
	char got[ERR_QUOTE_MAX];
	int k = 0;
	if (!one_site(o, "star") || !target_as_argument(o, "star"))
		return EXIT_USAGE;
	while (k < VERBS && strcmp(verbs[k].word, verb) != 0)
		k++;
	if (k == VERBS) {
		err_quote(verb, strlen(verb), got);
		diagnose("star", "no such verb (got \"%s\", expected list, add, remove)", got);
		return EXIT_USAGE;
	}
	const int n = o->n_words - 2;
	if (n != verbs[k].words) {
		diagnose("star", "%s (expected wane star %s %s)",
			 n < verbs[k].words ? "an argument is missing" : "an argument too many",
			 verbs[k].word, verbs[k].arguments);
		return EXIT_USAGE;
	}
	if (k != VERB_ADD && (o->band || o->star_name || o->note)) {
		diagnose(o->band	? "--band"
			 : o->star_name ? "--name"
					: "--note",
			 "not with wane star %s", verbs[k].word);
		return EXIT_USAGE;
	}
	return k == VERB_LIST ? list_stars(env, o) : add_or_remove(env, o, k == VERB_ADD);
}
