/* SPDX-License-Identifier: MIT */
#include "tui/options.h"

#include "ephem/number_text.h"
#include "ephem/season.h"

#include <math.h>
#include <stddef.h>
#include <string.h>

enum option_kind {
	OPT_TEXT,
	OPT_TEXT_OR_EMPTY,
	OPT_FLAG,
	OPT_SITES,
	OPT_PLACES,
	OPT_TARGETS,
	OPT_VALUES,
	OPT_NUMBER,
	OPT_WHOLE,
	OPT_KINDS
};

struct option_row {
	const char *name, *argument, *sentence;
	int groups;
	enum option_kind kind;
	size_t offset;
	double min, max;  /* OPT_NUMBER, OPT_WHOLE */
	const char *only; /* stands for its name behind this subcommand alone; NULL: everywhere */
};

#define AT(member) offsetof(struct options, member)

static const struct option_row rows[] = {
    {"--db", "FILE", "The database (default $XDG_DATA_HOME/wane/wane.db; a missing one reads as empty).",
     GROUP_COMMON, OPT_TEXT, AT(db), 0, 0, NULL},
    {"--settings", "FILE", "The settings file (default $XDG_CONFIG_HOME/wane/settings.ini).", GROUP_COMMON,
     OPT_TEXT, AT(settings), 0, 0, NULL},
    {"--site", "NAME", "A stored site; again for more in season.", GROUP_COMMON, OPT_SITES, 0, 0, 0, NULL},
    {"--place", "LAT,LON,HEIGHT",
     "Stands for a stored site: degrees north, degrees east, metres (or with letters: 38.62N,109.36W,2100).",
     GROUP_COMMON, OPT_PLACES, 0, 0, 0, NULL},
    {"--telescope", "NAME",
     "A stored telescope of the site (the usual or the only one); `none`: none of them.", GROUP_COMMON,
     OPT_TEXT, AT(telescope), 0, 0, NULL},
    {"--target", "NAME", "Only this target; again for more.", GROUP_COMMON, OPT_TARGETS, 0, 0, 0, NULL},
    {"--radec", "RA,DEC", "Stands for a stored target: ICRS degrees, or hh:mm:ss.s,+dd:mm:ss.", GROUP_COMMON,
     OPT_TEXT, AT(radec), 0, 0, NULL},
    {"--format", "F", "How the result is written.", GROUP_COMMON, OPT_TEXT, AT(format), 0, 0, NULL},
    {"--plain", NULL, "Text with one record a paragraph: words, no glyphs, nothing told by position.",
     GROUP_COMMON, OPT_FLAG, AT(plain), 0, 0, NULL},
    {"--out", "FILE", "Write the result to a file, whole or not at all.", GROUP_COMMON, OPT_TEXT, AT(out), 0,
     0, NULL},
    {"--force", NULL, "Let --out replace a file that exists.", GROUP_COMMON, OPT_FLAG, AT(force), 0, 0, NULL},
    {"--now", "TIME", "Take this as the present: a frozen clock; `TIME+` starts there and runs.",
     GROUP_COMMON, OPT_TEXT, AT(now), 0, 0, NULL},
    {"--help", NULL, "This text.", GROUP_COMMON, OPT_FLAG, AT(help), 0, 0, NULL},
    {"--version", NULL, "The version.", GROUP_COMMON, OPT_FLAG, AT(version), 0, 0, NULL},
    {"--ut1-utc", "S", "UT1 less UTC in seconds, within 0.9 (0; 1 s turns the sky by 15 arcsec).",
     GROUP_COMPUTE, OPT_NUMBER, AT(ut1_utc_s), -0.9, 0.9, NULL},
    {"--kind", "K", "transit, occultation or both (transit).", GROUP_COMPUTE | GROUP_MIDTIME, OPT_KINDS,
     AT(kinds), 0, 0, NULL},
    {"--threads", "N", "At most this many threads (season runs in one).", GROUP_COMPUTE, OPT_WHOLE,
     AT(threads), 1, 1024, NULL},
    {"--mask", "FILE",
     "The horizon mask of the site, lines of azimuth, altitude in degrees, in place of the stored one; "
     "`none`: none.",
     GROUP_COMPUTE | GROUP_SITE, OPT_TEXT, AT(mask), 0, 0, NULL},
    {"--no-allotments", NULL, "The whole night, whatever time is allotted of it (wane allot list).",
     GROUP_COMPUTE, OPT_FLAG, AT(no_allotments), 0, 0, NULL},
    {"--min-chance", "P",
     "List a window when the chance of its ingress or egress reaches P (0.05 in csv and json, 0.5 in text).",
     GROUP_WINDOWS, OPT_NUMBER, AT(min_chance), 0, 1, NULL},
    {"--all", NULL, "Every event of the nights, with what spoils it.", GROUP_WINDOWS, OPT_FLAG, AT(all), 0, 0,
     NULL},
    {"--explain", "TARGET",
     "How the forecast of this target's windows comes about: each step with its numbers, its formula and "
     "where "
     "that is from.",
     GROUP_EXPLAIN, OPT_TEXT, AT(explain), 0, 0, NULL},
    {"--at", "TIME", "The instant (sky: default now; drift: a date, default today + 3 years).",
     GROUP_SKY | GROUP_DRIFT, OPT_TEXT, AT(at), 0, 0, NULL},
    {"--from", "SCALE", "The time standard of VALUE.", GROUP_CLOCK, OPT_TEXT, AT(from), 0, 0, NULL},
    {"--to", "SCALE", "The time standard wanted.", GROUP_CLOCK, OPT_TEXT, AT(to), 0, 0, NULL},
    {"--dry-run", NULL, "Say what would be done and change nothing.", GROUP_IMPORT, OPT_FLAG, AT(dry_run), 0,
     0, NULL},
    {"--strict", NULL, "One bad row refuses the whole file.", GROUP_IMPORT, OPT_FLAG, AT(strict), 0, 0, NULL},
    {"--adopt", NULL, "Make changed ephemerides of known targets the current ones.", GROUP_IMPORT, OPT_FLAG,
     AT(adopt), 0, 0, NULL},
    {"--zone", "ZONE", "The site's IANA time zone, as in America/Denver.", GROUP_SITE, OPT_TEXT_OR_EMPTY,
     AT(zone), 0, 0, NULL},
    {"--half", "RULE",
     "Where the site's nights are halved: `dark` (between dusk and dawn), `sunset` (between sunset and "
     "sunrise) or HH:MM of its clocks, 18:00 to 06:00.",
     GROUP_SITE, OPT_TEXT, AT(half), 0, 0, NULL},
    {"--sky", "BAND=MAG",
     "How bright the site's moonless zenith is, in mag per square arcsec: V=21.6; `V=`: not known; again for "
     "more.",
     GROUP_SITE, OPT_VALUES, AT(sky), 0, 0, NULL},
    {"--extinction", "BAND=MAG",
     "What the site's air takes at the zenith, in mag: V=0.14; `V=`: not known; again for more.", GROUP_SITE,
     OPT_VALUES, AT(extinction), 0, 0, NULL},
    {"--band", "BAND", "U, B, V, R, I, g, r, i, z or clear.", GROUP_GOAL | GROUP_STAR, OPT_TEXT, AT(band), 0,
     0, NULL},
    {"--until", "NIGHT", "The last night that counts for it.", GROUP_GOAL, OPT_TEXT, AT(until), 0, 0, NULL},
    {"--note", "TEXT", "Whatever should be known of it.", GROUP_GOAL | GROUP_STAR, OPT_TEXT, AT(note), 0, 0,
     NULL},
    {"--name", "N", "What the star is called.", GROUP_STAR, OPT_TEXT, AT(star_name), 0, 0, NULL},
    {"--limit", "MIN",
     "The error beyond which an ephemeris is stale, in minutes (each target's own: wanted less least "
     "baseline, over pad).",
     GROUP_DRIFT, OPT_NUMBER, AT(drift_limit_min), 0, 1e6, NULL},
    {"--precision", "MIN",
     "Precision that a refreshing mid-time is assumed to have, in minutes (refresh_precision_min of the "
     "settings; 1).",
     GROUP_DRIFT, OPT_NUMBER, AT(precision_min), 0.001, 1000, NULL},
    {"--sort", "COLUMN", "Sort by this column, from the least; -COLUMN: from the greatest; empty cells last.",
     GROUP_DRIFT, OPT_TEXT, AT(sort), 0, 0, NULL},
    {"--no-refresh", NULL, "Leave out the search for windows that would refresh.", GROUP_DRIFT, OPT_FLAG,
     AT(no_refresh), 0, 0, NULL},
    {"--against", "VERSION",
     "Of one target: another version of its ephemeris (wane target show lists them) laid against the current "
     "one.",
     GROUP_DRIFT, OPT_TEXT, AT(against), 0, 0, NULL},
    {"--epoch", "N",
     "Orbits since T0 (N + 0.5: the occultation after transit N); without it, it is counted where that is "
     "safe.",
     GROUP_MIDTIME, OPT_TEXT, AT(epoch), 0, 0, NULL},
    {"--scale", "SCALE", "The time standard of mid-times that do not say theirs.", GROUP_MIDTIME, OPT_TEXT,
     AT(scale), 0, 0, NULL},
    {"--source", "TEXT", "Where the mid-time comes from.", GROUP_MIDTIME, OPT_TEXT_OR_EMPTY, AT(source), 0, 0,
     NULL},
    {"--jitter", "S", "Seconds added to every error in quadrature; `fit`: estimated from the scatter.",
     GROUP_REFIT, OPT_TEXT, AT(jitter), 0, 0, NULL},
    {"--ref-epoch", "N", "The epoch of T0 (0); `best`: the centre of the data.", GROUP_REFIT, OPT_TEXT,
     AT(ref_epoch), 0, 0, NULL},
    {"--adopt", "MODEL", "Make `linear`, `quadratic` or `prior` (with --prior) the current ephemeris.",
     GROUP_REFIT, OPT_TEXT, AT(adopt_fit), 0, 0, "refit"},
    {"--formal", NULL, "Adopt formal errors, not those scaled by the scatter.", GROUP_REFIT, OPT_FLAG,
     AT(formal), 0, 0, NULL},
    {"--prior", NULL, "Also add the mid-times to the current ephemeris as it is published.", GROUP_REFIT,
     OPT_FLAG, AT(with_prior), 0, 0, NULL},
    {"--change", "N", "Which change (wane history numbers them); without it, the newest.", GROUP_UNDO,
     OPT_WHOLE, AT(change), 1, 2147483647, NULL},
    {"--pin", "T", "This event is planned wherever it can be; T is NAME or NAME@EPOCH; again for more.",
     GROUP_PLAN, OPT_VALUES, AT(pin), 0, 0, NULL},
    {"--drop", "T", "This event is not planned; again for more.", GROUP_PLAN, OPT_VALUES, AT(drop), 0, 0,
     NULL},
    {"--free", "T", "Takes the pin or the drop of an event back.", GROUP_PLAN, OPT_VALUES, AT(free_event), 0,
     0, NULL},
    {"--block", "FROM..TO=TEXT", "Time that something else takes; again for more.", GROUP_PLAN, OPT_VALUES,
     AT(block), 0, 0, NULL},
    {"--unblock", "TEXT", "Takes the block with this text back.", GROUP_PLAN, OPT_VALUES, AT(unblock), 0, 0,
     NULL},
    {"--lost", "FROM..TO", "Time that was lost, or will be; again for more.", GROUP_PLAN, OPT_VALUES,
     AT(lost), 0, 0, NULL},
    {"--poor", "FROM..TO xN",
     "Time with N times the noise (1 to 20): the worth of what lies in it is divided by N*N, by the share of "
     "T1 to T4.",
     GROUP_PLAN, OPT_VALUES, AT(poor), 0, 0, NULL},
    {"--unlost", "FROM..TO", "Takes lost or poor time back, by its span as it was typed.", GROUP_PLAN,
     OPT_VALUES, AT(unlost), 0, 0, NULL},
    {"--from", "TIME", "Plan what is left of the night from this time (22:40, 05:40Z, dusk+20m).", GROUP_PLAN,
     OPT_TEXT, AT(plan_from), 0, 0, "plan"},
    {"--rebuild", NULL, "Work the stored plan out anew from today's ephemerides and its own choices.",
     GROUP_PLAN, OPT_FLAG, AT(rebuild), 0, 0, NULL},
    {"--afresh", NULL, "Take over no choice of the stored plan; what is marked stands.", GROUP_PLAN, OPT_FLAG,
     AT(afresh), 0, 0, NULL},
    {"--draft", "NAME", "Which draft of the night (the kept one, else `main`).", GROUP_PLAN | GROUP_SHEET,
     OPT_TEXT, AT(draft), 0, 0, NULL},
    {"--keep", NULL, "Store the plan and keep it: it is the one that holds for the night.", GROUP_PLAN,
     OPT_FLAG, AT(keep), 0, 0, NULL},
    {"--save", NULL, "Store the plan as a draft, without keeping it.", GROUP_PLAN, OPT_FLAG, AT(save), 0, 0,
     NULL},
    {"--mark", "T=STATE",
     "Say what became of an item of the stored plan, at once: started, done, partly or lost; `planned` takes "
     "that back.",
     GROUP_PLAN, OPT_VALUES, AT(mark), 0, 0, NULL},
    {"--cause", "TEXT", "With --mark: what took it.", GROUP_PLAN, OPT_TEXT, AT(cause), 0, 0, NULL},
    {"--note", "TEXT", "With --mark: whatever should be known.", GROUP_PLAN, OPT_TEXT, AT(note), 0, 0,
     "plan"},
    {"--list", NULL, "The stored drafts of the night.", GROUP_PLAN, OPT_FLAG, AT(list), 0, 0, NULL},
    {"--compare", "DRAFT", "What is different in another draft, in words.", GROUP_PLAN, OPT_TEXT, AT(compare),
     0, 0, NULL},
    {"--remove", "DRAFT", "Take a draft out of the lists.", GROUP_PLAN, OPT_TEXT, AT(remove_draft), 0, 0,
     NULL},
    {"--moved", "MIN", "From how many minutes a stored mid-time counts as moved (the setting moved_min; 2).",
     GROUP_PLAN | GROUP_SHEET, OPT_NUMBER, AT(moved_min), 0, 1e6, NULL},
    {"--since", "PLAN",
     "Say first what changed since another draft, or since an edition of this plan (a number).", GROUP_SHEET,
     OPT_TEXT, AT(since), 0, 0, NULL},
};
enum { ROW_COUNT = sizeof rows / sizeof rows[0] };
_Static_assert((int)ROW_COUNT <= (int)OPTION_ROWS_MAX, "a flag for each row");

/* A row of the subcommand's own goes before one of the same name. */
static int row_find(const struct options *o, const char *name, size_t n)
{
	const char *command = o->n_words > 0 ? o->word[0] : "";
	int found = -1;
	for (int i = 0; i < ROW_COUNT; i++) {
		if (strlen(rows[i].name) != n || memcmp(rows[i].name, name, n) != 0)
			continue;
		if (rows[i].only && strcmp(rows[i].only, command) == 0)
			return i;
		if (!rows[i].only && found < 0)
			found = i;
	}
	return found;
}

static int limit_find(const char *name, size_t n)
{
	for (int id = 0; id < LIM_COUNT; id++) {
		const char *option = limit_rules[id].option;
		if (option && strlen(option) == n && memcmp(option, name, n) == 0)
			return id;
	}
	return -1;
}

/* --- values --- */

static enum status number_between(const char *text, double min, double max, double *value, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	double v;
	enum status s = number_parse(text, strlen(text), &v, NULL, e);
	if (s != ST_OK)
		return s;
	err_quote(text, strlen(text), got);
	if (!(v >= min && v <= max))
		return err_set(e, ST_RANGE, "out of range (got \"%s\", expected %g to %g)", got, min, max);
	*value = v + 0.0; /* no -0 */
	return ST_OK;
}

enum status limit_parse(enum limit_id id, const char *text, double *value, struct err *e)
{
	const struct limit_rule *rule = &limit_rules[id];
	if (id == LIM_AIRMASS && strcmp(text, "none") == 0) {
		*value = (double)INFINITY;
		return ST_OK;
	}
	if ((id == LIM_BASELINE_BEFORE || id == LIM_BASELINE_AFTER) && strcmp(text, "auto") == 0) {
		*value = BASELINE_AUTO;
		return ST_OK;
	}
	return number_between(text, rule->min, rule->max, value, e);
}

static const struct {
	const char *word;
	int kinds;
} kind_words[] = {{"transit", KINDS_TRANSIT}, {"occultation", KINDS_OCCULTATION}, {"both", KINDS_BOTH}};

enum status kinds_parse(const char *text, int *kinds, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	for (size_t i = 0; i < sizeof kind_words / sizeof kind_words[0]; i++)
		if (strcmp(text, kind_words[i].word) == 0) {
			*kinds = kind_words[i].kinds;
			return ST_OK;
		}
	err_quote(text, strlen(text), got);
	return err_set(e, ST_SYNTAX, "no such kind (got \"%s\", expected transit, occultation or both)", got);
}

const char *kinds_text(int kinds)
{
	for (size_t i = 0; i < sizeof kind_words / sizeof kind_words[0]; i++)
		if (kind_words[i].kinds == kinds)
			return kind_words[i].word;
	return "";
}

static enum status add_name(const char **list, int *n, const char *value, struct err *e)
{
	if (*n == OPTION_NAMES_MAX)
		return err_set(e, ST_RANGE, "given more than %d times", OPTION_NAMES_MAX);
	list[(*n)++] = value;
	return ST_OK;
}

static enum status put_row(struct options *o, const struct option_row *row, const char *value, struct err *e)
{
	char *at = (char *)o + row->offset;
	double number = 0.0;
	enum status s = ST_OK;
	if (row->kind != OPT_FLAG && row->kind != OPT_TEXT_OR_EMPTY && !value[0])
		return err_set(e, ST_SYNTAX, "the value is empty (got \"\", expected %s)", row->argument);
	switch (row->kind) {
	case OPT_TEXT:
	case OPT_TEXT_OR_EMPTY:
		memcpy(at, &value, sizeof value);
		break;
	case OPT_FLAG:
		*(bool *)at = true;
		break;
	case OPT_SITES:
		s = add_name(o->site, &o->n_sites, value, e);
		break;
	case OPT_PLACES:
		s = add_name(o->place, &o->n_places, value, e);
		break;
	case OPT_TARGETS:
		s = add_name(o->target, &o->n_targets, value, e);
		break;
	case OPT_VALUES:
		s = add_name(((struct option_values *)(void *)at)->text,
			     &((struct option_values *)(void *)at)->n, value, e);
		break;
	case OPT_NUMBER:
		s = number_between(value, row->min, row->max, &number, e);
		if (s == ST_OK)
			memcpy(at, &number, sizeof number);
		break;
	case OPT_WHOLE:
		s = number_between(value, row->min, row->max, &number, e);
		if (s == ST_OK && number != floor(number))
			s = err_set(e, ST_SYNTAX, "expected a whole number");
		if (s == ST_OK)
			*(int *)(void *)at = (int)number;
		break;
	case OPT_KINDS:
		s = kinds_parse(value, (int *)(void *)at, e);
		break;
	}
	return s;
}

/* --- the line --- */

static enum status named(struct err *e, const char *name, size_t n, enum status s)
{
	if (s == ST_OK || !e)
		return s;
	struct err inner = *e;
	return err_set(e, s, "%.*s: %.450s", (int)(n > 40 ? 40 : n), name, inner.text);
}

static enum status unknown(const char *name, size_t n, struct err *e)
{
	const char *all[ROW_COUNT + LIM_COUNT] = {NULL};
	char word[ERR_QUOTE_MAX];
	size_t count = 0;
	for (int i = 0; i < ROW_COUNT; i++)
		all[count++] = rows[i].name;
	for (int id = 0; id < LIM_COUNT; id++)
		if (limit_rules[id].option)
			all[count++] = limit_rules[id].option;
	err_quote(name, n < 60 ? n : 60, word);
	const char *near = nearest_word(word, all, count);
	if (near)
		return err_set(e, ST_SYNTAX, "%s: unknown option; did you mean %s?", word, near);
	return err_set(e, ST_SYNTAX, "%s: unknown option (see wane --help)", word);
}

/* One option at argv[*i]; its value may be the next word, whatever that begins with. */
static enum status take_option(struct options *o, int argc, char *const argv[], int *i, struct err *e)
{
	const char *arg = argv[*i], *equals = strchr(arg, '=');
	size_t n = equals ? (size_t)(equals - arg) : strlen(arg);
	int row = row_find(o, arg, n), id = row < 0 ? limit_find(arg, n) : -1;
	if (row < 0 && id < 0)
		return unknown(arg, n, e);
	bool flag = row >= 0 && rows[row].kind == OPT_FLAG;
	const char *argument = row >= 0 ? rows[row].argument : "a number";
	const char *value = equals ? equals + 1 : NULL;
	if (flag && value)
		return named(e, arg, n, err_set(e, ST_SYNTAX, "takes no value"));
	if (!flag && !value) {
		if (*i + 1 >= argc)
			return named(e, arg, n,
				     err_set(e, ST_SYNTAX, "a value is missing (expected %s)", argument));
		value = argv[++*i];
	}
	if (row >= 0) {
		o->given[row] = true;
		return named(e, arg, n, put_row(o, &rows[row], value, e));
	}
	enum status s = limit_parse((enum limit_id)id, value, &o->limit[id], e);
	if (s == ST_OK) {
		o->limit_given[id] = true;
		if (id == LIM_BASELINE_BEFORE) { /* --baseline means both sides */
			o->limit[LIM_BASELINE_AFTER] = o->limit[id];
			o->limit_given[LIM_BASELINE_AFTER] = true;
		}
	}
	return named(e, arg, n, s);
}

static bool is_option(const char *arg)
{
	return arg[0] == '-' && arg[1] != '\0' && arg[1] != '.' && !(arg[1] >= '0' && arg[1] <= '9');
}

enum status options_parse(struct options *o, int argc, char *const argv[], struct err *e)
{
	*o = (struct options){.min_chance = NAN,
			      .ut1_utc_s = NAN,
			      .drift_limit_min = NAN,
			      .precision_min = NAN,
			      .moved_min = NAN};
	bool words_only = false;
	for (int i = 1; i < argc; i++) {
		enum status s = ST_OK;
		if (!words_only && strcmp(argv[i], "--") == 0)
			words_only = true;
		else if (!words_only && is_option(argv[i]))
			s = take_option(o, argc, argv, &i, e);
		else
			s = named(e, "words", 5, add_name(o->word, &o->n_words, argv[i], e));
		if (s != ST_OK)
			return s;
	}
	return ST_OK;
}

enum status options_allowed(const struct options *o, int groups, const char *command, struct err *e)
{
	for (int i = 0; i < ROW_COUNT; i++)
		if (o->given[i] && !(rows[i].groups & (groups | GROUP_COMMON)))
			return err_set(e, ST_SYNTAX, "%s: unknown option of %s", rows[i].name, command);
	for (int id = 0; id < LIM_COUNT; id++)
		if (o->limit_given[id] && limit_rules[id].option && !(groups & GROUP_COMPUTE))
			return err_set(e, ST_SYNTAX, "%s: unknown option of %s", limit_rules[id].option,
				       command);
	return ST_OK;
}

/* --- help --- */

static void help_line(FILE *to, const char *name, const char *argument, const char *sentence)
{
	char left[48];
	snprintf(left, sizeof left, "%s%s%s", name, argument ? " " : "", argument ? argument : "");
	fprintf(to, "  %-24s %s", left, sentence);
}

void options_help(FILE *to, int groups)
{
	for (int i = 0; i < ROW_COUNT; i++) {
		if (!(rows[i].groups & groups))
			continue;
		help_line(to, rows[i].name, rows[i].argument, rows[i].sentence);
		fputc('\n', to);
	}
	if (!(groups & GROUP_COMPUTE))
		return;
	for (int id = 0; id < LIM_COUNT; id++) {
		const struct limit_rule *r = &limit_rules[id];
		if (!r->option)
			continue;
		help_line(to, r->option,
			  r->unit[0] == 'd'   ? "DEG"
			  : r->unit[0] == 'm' ? "MIN"
					      : "X",
			  r->sentence);
		if (isfinite(r->fallback))
			fprintf(to, " (%g; %g to %g)\n", r->fallback, r->min, r->max);
		else
			fprintf(to, " (none; %g to %g)\n", r->min, r->max);
	}
}
