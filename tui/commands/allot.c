/* SPDX-License-Identifier: MIT */
#include "tui/commands/allot_write.h"

#include "tui/diagnose.h"
#include "tui/given.h"
#include "tui/pages/night_head.h"

#include <stdlib.h>
#include <string.h>

/* Every night of an allotment is tried before it is stored. */
enum { NIGHTS_MAX = 400 };

/* --- NIGHT..NIGHT --- */

static enum status one_night(const struct run *r, const char *text, size_t n, int32_t *mjd, struct err *e)
{
	char part[80], got[ERR_QUOTE_MAX];
	err_quote(text, n, got);
	if (n >= sizeof part)
		return err_set(e, ST_SYNTAX, "not a night (got \"%s\", expected YYYY-MM-DD)", got);
	snprintf(part, sizeof part, "%.*s", (int)n, text);
	return given_night(&r->leap, r->site.lon_east_deg, part, mjd, e);
}

static enum status read_nights(const struct run *r, const char *text, struct allotment *a, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	const char *dots = strstr(text, "..");
	size_t n = dots ? (size_t)(dots - text) : strlen(text);
	enum status s = one_night(r, text, n, &a->first_mjd, e);
	a->last_mjd = a->first_mjd;
	if (s == ST_OK && dots)
		s = one_night(r, dots + 2, strlen(dots + 2), &a->last_mjd, e);
	if (s != ST_OK)
		return s;
	err_quote(text, strlen(text), got);
	if (a->last_mjd < a->first_mjd)
		return err_set(e, ST_RANGE, "the last night is before the first (got \"%s\")", got);
	if (a->last_mjd - a->first_mjd >= NIGHTS_MAX)
		return err_set(e, ST_RANGE, "too many nights (got \"%s\", expected at most %d)", got,
			       NIGHTS_MAX);
	return ST_OK;
}

/* --- add --- */

/* What was typed, resolved: of each night, told for the first and the last that have it. Refused where no
 * night has it; of others it is told. */
static int try_nights(struct run *r, const struct allotment *a)
{
	struct night night;
	struct err e, first_fault;
	char echo[ALLOT_ECHO_BYTES], name[64], last_echo[ALLOT_ECHO_BYTES] = "";
	long good = 0, bad = 0, absent = 0;
	const bool single = a->first_mjd == a->last_mjd;
	err_clear(&first_fault);
	for (int32_t mjd = a->first_mjd; mjd <= a->last_mjd; mjd++) {
		double from_d, to_d;
		enum status s = allot_resolve(r, mjd, a->span, &night, &from_d, &to_d, &e);
		night_name(mjd, name, sizeof name);
		if (s != ST_OK) {
			absent += s == ST_ABSENT;
			if (bad++ == 0)
				err_set(&first_fault, s, "%s%s%s%.400s", single ? "" : "night ",
					single ? "" : name, single ? "" : ": ", e.text);
			continue;
		}
		allot_echo(r, &night, from_d, to_d, echo);
		if (good++ == 0)
			diagnose("allot", "%s%s", single ? "" : "first: ", echo);
		else
			snprintf(last_echo, sizeof last_echo, "%s", echo);
	}
	if (last_echo[0])
		diagnose("allot", "last: %s", last_echo);
	if (good == 0)
		return diagnose_err("SPAN", &first_fault, absent > 0 ? EXIT_UNMET : EXIT_USAGE);
	if (bad > 0)
		diagnose("allot", "on %ld of %ld night%s it allots nothing: %s", bad, good + bad,
			 good + bad == 1 ? "" : "s", first_fault.text);
	return EXIT_DONE;
}

static int wanted(struct run *r, struct allotment *a)
{
	const struct options *o = r->options;
	struct err e;
	*a = (struct allotment){.site_id = r->site.id, .span = o->word[3], .note = ""};
	if (o->n_words > 4)
		a->note = o->word[4];
	if (o->telescope)
		a->telescope_id = r->telescope.id;
	if (read_nights(r, o->word[2], a, &e) != ST_OK)
		return diagnose_err("NIGHT", &e, EXIT_USAGE);
	if (plan_span_check(a->span, &e) != ST_OK)
		return diagnose_err("SPAN", &e, EXIT_USAGE);
	return try_nights(r, a);
}

static enum status put_in_store(struct run *r, const char *verb, struct allotment *a, struct err *e)
{
	char utc[UTC_TEXT_MAX];
	const struct change change = change_of(r, verb, utc);
	enum status s = store_begin(r->store, &change, e);
	if (s != ST_OK)
		return s;
	s = strcmp(verb, "allot add") == 0 ? allotment_add(r->store, a, &a->id, e)
					   : allotment_remove(r->store, a->id, e);
	return store_end(r->store, s, e);
}

/* The run's memo of the Earth's path is made with its targets; these commands have none. */
static enum status open_run(struct run *r, const struct env *env, const struct options *o, int needs,
			    int *code, struct err *e)
{
	enum status s = run_open(r, env, o, needs, code, e);
	if (s != ST_OK || r->memo)
		return s;
	r->memo = calloc(1, sizeof *r->memo);
	if (r->memo)
		return ST_OK;
	run_close(r);
	*code = EXIT_UNMET;
	return err_set(e, ST_MEMORY, "memory: none for a night");
}

static int add_allotment(const struct env *env, const struct options *o)
{
	struct run read, write;
	struct allotment a;
	struct err e;
	int code;
	if (open_run(&read, env, o, NEED_STORE | NEED_SITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	code = wanted(&read, &a);
	run_close(&read);
	if (code != EXIT_DONE)
		return code;
	if (open_run(&write, env, o, NEED_STORE | NEED_SITE | NEED_WRITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	const struct allotment *const one = &a;
	if (put_in_store(&write, "allot add", &a, &e) != ST_OK)
		code = diagnose_err("allot", &e, EXIT_UNMET);
	else
		code = allotments_write(&write, &one, 1);
	run_close(&write);
	return code;
}

/* --- remove --- */

static int remove_allotment(const struct env *env, const struct options *o)
{
	struct run run;
	struct err e;
	const char *text = o->word[2];
	char got[ERR_QUOTE_MAX];
	int code;
	err_quote(text, strlen(text), got);
	if (strspn(text, "0123456789") != strlen(text) || strlen(text) > 15) {
		diagnose("ID",
			 "not the number of an allotment (got \"%s\", expected as wane allot list says)",
			 got);
		return EXIT_USAGE;
	}
	struct allotment a = {.id = strtoll(text, NULL, 10)};
	bool found = false;
	if (run_open(&run, env, o, NEED_STORE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	for (size_t i = 0; i < run.allotments.n; i++)
		found = found || (run.allotments.allotment[i].id == a.id &&
				  (!run.site.name[0] || run.allotments.allotment[i].site_id == run.site.id));
	run_close(&run);
	if (!found) {
		diagnose("allot", "no such allotment is stored (got \"%s\"; see wane allot list)", got);
		return EXIT_UNMET;
	}
	if (run_open(&run, env, o, NEED_STORE | NEED_WRITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	if (put_in_store(&run, "allot remove", &a, &e) != ST_OK)
		code = diagnose_err("allot", &e, EXIT_UNMET);
	run_close(&run);
	return code;
}

/* --- list --- */

static int list_allotments(const struct env *env, const struct options *o)
{
	struct run run;
	struct err e;
	int code;
	size_t n = 0;
	if (open_run(&run, env, o, NEED_STORE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	/* an empty store has an empty list; else one site must be chosen */
	if (run.sites.n > 0) {
		run_close(&run);
		if (open_run(&run, env, o, NEED_STORE | NEED_SITE, &code, &e) != ST_OK)
			return diagnose_whole(&e, code);
	}
	/* NOLINTNEXTLINE(bugprone-sizeof-expression): pointers are what it holds */
	const struct allotment **which = calloc(run.allotments.n + 1, sizeof *which);
	if (!which) {
		run_close(&run);
		diagnose("memory", "none for %zu allotments", run.allotments.n);
		return EXIT_UNMET;
	}
	for (size_t i = 0; i < run.allotments.n; i++) {
		const struct allotment *a = &run.allotments.allotment[i];
		if (a->site_id == run.site.id &&
		    (!o->telescope || a->telescope_id == 0 || a->telescope_id == run.telescope.id))
			which[n++] = a;
	}
	code = allotments_write(&run, which, n);
	free(which);
	run_close(&run);
	return code;
}

/* --- all --- */

int command_allot(const struct env *env, const struct options *o)
{
	const char *verb = o->n_words > 1 ? o->word[1] : "";
	char got[ERR_QUOTE_MAX];
	if (!one_site(o, "allot"))
		return EXIT_USAGE;
	if (o->n_places > 0) {
		diagnose("--place", "time is allotted at a stored site (got \"%s\", expected --site NAME)",
			 o->place[0]);
		return EXIT_USAGE;
	}
	const bool add = strcmp(verb, "add") == 0, remove = strcmp(verb, "remove") == 0,
		   list = strcmp(verb, "list") == 0;
	if (!add && !remove && !list) {
		err_quote(verb, strlen(verb), got);
		diagnose("allot", "no such verb (got \"%s\", expected list, add, remove)", got);
		return EXIT_USAGE;
	}
	const int least = add ? 4 : remove ? 3 : 2, most = add ? 5 : least;
	if (o->n_words < least) {
		diagnose(remove		   ? "ID"
			 : o->n_words == 2 ? "NIGHT"
					   : "SPAN",
			 "is missing (expected wane allot %s)",
			 remove ? "remove ID" : "add NIGHT[..NIGHT] SPAN [NOTE]");
		return EXIT_USAGE;
	}
	if (o->n_words > most) {
		err_quote(o->word[most], strlen(o->word[most]), got);
		diagnose("allot", "an argument too many (got \"%s\")", got);
		return EXIT_USAGE;
	}
	return add ? add_allotment(env, o) : remove ? remove_allotment(env, o) : list_allotments(env, o);
}
