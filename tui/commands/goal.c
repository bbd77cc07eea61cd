/* SPDX-License-Identifier: MIT */
#include "tui/commands/one_target.h"
#include "tui/commands/table.h"

#include "tui/commands/result.h"
#include "tui/diagnose.h"
#include "tui/given.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/json.h"
#include "tui/sheets/text.h"

#include <string.h>

enum verb { VERB_LIST, VERB_SET, VERB_REMOVE, VERBS };
enum { DATE_BYTES = 16, NOTE_COLUMNS = 60, NOTE_CHARS = 255 /* as db/goals.h says */ };
static const struct {
	const char *word, *arguments;
	int least, most; /* words behind the verb */
} verbs[VERBS] = {
    [VERB_LIST] = {"list", "[TARGET]", 0, 1},
    [VERB_SET] = {"set", "TARGET WHOLE LIMB", 3, 3},
    [VERB_REMOVE] = {"remove", "TARGET", 1, 1},
};

/* --- showing --- */

/* A goal with what has become of it. */
struct line {
	const struct goal_row *goal;
	const char *target;
	int got_whole, got_limb, left_whole, left_limb;
	const char *state; /* open, met, expired */
	char until[DATE_BYTES];
};

static struct line line_of(const struct run *r, const struct target *t, const struct goal_row *g)
{
	struct line l = {.goal = g, .target = t->name};
	goal_count(g, r->got.got, r->got.n, &l.got_whole, &l.got_limb);
	goal_left(g, l.got_whole, l.got_limb, &l.left_whole, &l.left_limb);
	l.state = l.left_whole + l.left_limb == 0		       ? "met"
		  : g->until_mjd != 0 && run_tonight(r) > g->until_mjd ? "expired"
								       : "open";
	if (g->until_mjd != 0) {
		const struct date d = date_from_mjd(g->until_mjd);
		snprintf(l.until, sizeof l.until, "%04d-%02d-%02d", d.year % 10000, d.month % 100,
			 d.day % 100);
	}
	return l;
}

static void part_text(FILE *to, int wanted, int got, const char *one, const char *many)
{
	fprintf(to, "%d %s, %d got", wanted, wanted == 1 ? one : many, got);
}

static void line_text(FILE *to, const struct line *l)
{
	const struct goal_row *g = l->goal;
	text_cell(to, l->target, NAME_CHARS_MAX, false);
	fputs(": ", to);
	if (g->whole > 0)
		part_text(to, g->whole, l->got_whole, "whole event", "whole events");
	if (g->whole > 0 && g->limb > 0)
		fputs("; ", to);
	if (g->limb > 0)
		part_text(to, g->limb, l->got_limb, "single limb", "single limbs");
	fprintf(to, "; %s%s", g->band[0] ? "band " : "any band", g->band);
	if (l->until[0])
		fprintf(to, "; until %s", l->until);
	fprintf(to, "; %s", l->state);
	if (g->note[0]) {
		fputs("; ", to);
		text_cell(to, g->note, NOTE_COLUMNS, false);
	}
	fputc('\n', to);
}

static void line_csv(struct csv_out *c, const struct line *l)
{
	const int numbers[] = {l->goal->whole, l->goal->limb, l->got_whole,
			       l->got_limb,    l->left_whole, l->left_limb};
	char text[16];
	csv_text(c, l->target);
	csv_text(c, l->goal->band);
	for (size_t i = 0; i < sizeof numbers / sizeof numbers[0]; i++) {
		snprintf(text, sizeof text, "%d", numbers[i]);
		csv_number(c, text);
	}
	csv_number(c, l->until);
	csv_text(c, l->goal->since_utc);
	csv_text(c, l->state);
	csv_text(c, l->goal->note);
	csv_end_line(c);
}

static void line_json(struct json *j, const struct line *l)
{
	json_open(j, NULL, '{', true);
	json_text(j, "target", l->target);
	json_text(j, "band", l->goal->band);
	json_whole(j, "whole", l->goal->whole);
	json_whole(j, "limb", l->goal->limb);
	json_whole(j, "got_whole", l->got_whole);
	json_whole(j, "got_limb", l->got_limb);
	json_whole(j, "open_whole", l->left_whole);
	json_whole(j, "open_limb", l->left_limb);
	if (l->until[0])
		json_text(j, "until", l->until);
	else
		json_null(j, "until");
	json_text(j, "since_utc", l->goal->since_utc);
	json_text(j, "state", l->state);
	json_text(j, "note", l->goal->note);
	json_close(j, '}');
}

/* The goals of a target, or of all (NULL), in the order of the list of targets. */
static int write_goals(const struct run *r, const struct target *only)
{
	struct out out;
	enum format format;
	size_t shown = 0, n;
	const int opened = result_open(r, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &format, &out);
	if (opened != EXIT_DONE)
		return opened;
	struct csv_out csv = {.file = out.file};
	struct json json = json_begin(out.file);
	if (format == FORMAT_CSV)
		fputs("target,band,whole,limb,got_whole,got_limb,open_whole,open_limb,until,since_utc,state,"
		      "note\n",
		      out.file);
	else if (format == FORMAT_JSON)
		json_open(&json, NULL, '[', false);
	for (size_t i = 0; i < r->targets.n; i++) {
		const struct target *t = &r->targets.t[i];
		const struct goal_row *g = only && t != only ? NULL : goals_of(&r->goals, t->id, &n);
		for (size_t k = 0; g && k < n; k++, shown++) {
			const struct line l = line_of(r, t, &g[k]);
			if (format == FORMAT_CSV)
				line_csv(&csv, &l);
			else if (format == FORMAT_JSON)
				line_json(&json, &l);
			else
				line_text(out.file, &l);
		}
	}
	if (format == FORMAT_JSON) {
		json_close(&json, ']');
		json_end(&json);
	} else if (format == FORMAT_TEXT && shown == 0) {
		fputs("No goal is set: every event counts (wane goal set TARGET WHOLE LIMB).\n", out.file);
	}
	return result_commit(&out, !csv.failed);
}

/* Of the target of the third word, or all. */
static int list_goals(const struct env *env, const struct options *o)
{
	struct run run;
	struct err e;
	int code;
	if (run_open(&run, env, o, NEED_STORE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	const struct target *only = o->n_words > 2 ? target_named(&run, o->word[2]) : NULL;
	code = o->n_words > 2 && !only ? EXIT_UNMET : write_goals(&run, only);
	run_close(&run);
	return code;
}

/* --- changing --- */

static enum status change_goal(struct run *r, enum verb verb, const struct goal_row *g, struct err *e)
{
	char utc[UTC_TEXT_MAX];
	const struct change change = change_of(r, verb == VERB_SET ? "goal set" : "goal remove", utc);
	enum status s = store_begin(r->store, &change, e);
	if (s != ST_OK)
		return s;
	s = verb == VERB_SET ? goal_set(r->store, g, e) : goal_remove(r->store, g->target_id, g->band, e);
	return store_end(r->store, s, e);
}

/* What the words and options say; whose it is comes later. */
static int read_goal(const struct run *r, enum verb verb, struct goal_row *g)
{
	const struct options *o = r->options;
	long whole = 0, limb = 0;
	struct err e;
	*g = (struct goal_row){.band = o->band ? o->band : "", .note = o->note ? o->note : ""};
	if (o->band && band_parse(o->band) == BAND_NONE) {
		char got[ERR_QUOTE_MAX];
		err_quote(o->band, strlen(o->band), got);
		diagnose("--band", "unknown (got \"%s\", expected U, B, V, R, I, g, r, i, z or clear)", got);
		return EXIT_USAGE;
	}
	if (!text_argument("--note", o->note, NOTE_CHARS))
		return EXIT_USAGE;
	if (verb == VERB_REMOVE)
		return EXIT_DONE;
	if (!whole_argument("WHOLE", o->word[3], 0, GOAL_EVENTS_MAX, &whole) ||
	    !whole_argument("LIMB", o->word[4], 0, GOAL_EVENTS_MAX, &limb))
		return EXIT_USAGE;
	if (whole + limb == 0) {
		diagnose("goal", "nothing is wanted (got \"0 0\"; wane goal remove takes a goal away)");
		return EXIT_USAGE;
	}
	g->whole = (int)whole;
	g->limb = (int)limb;
	if (o->until && given_night(&r->leap, r->site.lon_east_deg, o->until, &g->until_mjd, &e) != ST_OK)
		return diagnose_err("--until", &e, EXIT_USAGE);
	return EXIT_DONE;
}

static int set_or_remove(const struct env *env, const struct options *o, enum verb verb)
{
	struct run run;
	struct goal_row g;
	struct err e;
	int code;
	if (run_open(&run, env, o, NEED_STORE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	code = read_goal(&run, verb, &g);
	if (code == EXIT_DONE && !target_named(&run, o->word[2]))
		code = EXIT_UNMET;
	run_close(&run);
	if (code != EXIT_DONE)
		return code;
	if (run_open(&run, env, o, NEED_STORE | NEED_WRITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	const struct target *t = target_named(&run, o->word[2]);
	code = t ? EXIT_DONE : EXIT_UNMET;
	g.target_id = t ? t->id : 0;
	if (t && change_goal(&run, verb, &g, &e) != ST_OK)
		code = diagnose_err("goal", &e, EXIT_UNMET);
	run_close(&run);
	return code == EXIT_DONE && verb == VERB_SET ? list_goals(env, o) : code;
}

int command_goal(const struct env *env, const struct options *o)
{
	const char *verb = o->n_words > 1 ? o->word[1] : "";
	char got[ERR_QUOTE_MAX];
	int k = 0;
	if (!one_site(o, "goal") || !target_as_argument(o, "goal"))
		return EXIT_USAGE;
	while (k < VERBS && strcmp(verbs[k].word, verb) != 0)
		k++;
	if (k == VERBS) {
		err_quote(verb, strlen(verb), got);
		diagnose("goal", "no such verb (got \"%s\", expected list, set, remove)", got);
		return EXIT_USAGE;
	}
	const int n = o->n_words - 2;
	if (n < verbs[k].least || n > verbs[k].most) {
		diagnose("goal", "%s (expected wane goal %s %s)",
			 n < verbs[k].least ? "an argument is missing" : "an argument too many",
			 verbs[k].word, verbs[k].arguments);
		return EXIT_USAGE;
	}
	if ((k != VERB_SET && (o->until || o->note)) || (k == VERB_LIST && o->band)) {
		diagnose(o->until  ? "--until"
			 : o->note ? "--note"
				   : "--band",
			 "not with wane goal %s", verbs[k].word);
		return EXIT_USAGE;
	}
	return k == VERB_LIST ? list_goals(env, o) : set_or_remove(env, o, (enum verb)k);
}
