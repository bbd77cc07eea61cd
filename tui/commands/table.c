/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "db/fields.h"
#include "tui/diagnose.h"
#include "tui/parts/columns.h"
#include "tui/parts/drift_columns.h"
#include "tui/settings.h"
#include "tui/sheets/text.h"

#include <string.h>

const struct command commands[] = {
    {"night", "[DATE]", "The windows of one night.",
     "DATE is the local date of the evening, or an instant: the night that contains it; without it, "
     "tonight.\n",
     GROUP_COMPUTE | GROUP_WINDOWS | GROUP_EXPLAIN, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, 1, command_night},
    {"plan", "[DATE]", "The running order of one telescope and night.",
     "The plan that is kept, as it was stored; without one, a proposal: of the night's windows those that "
     "fit "
     "one after\nthe other, with the moves between them, and are worth most together. With a forecast (a "
     "telescope with aperture_m and\nband) an event is worth its priority times its open goals times its "
     "expected "
     "bits; else times its chance of done,\na tenth of its coverage where there is no chance, one limb alone "
     "0.2 of it. What is pinned, dropped, blocked, lost or poor is worked in, "
     "shown, and stored with --keep or --save. In a night\nthat runs, what has begun stands and only the "
     "rest "
     "is planned anew. Times and spans: 22:40 (site), 05:40Z, a whole\ninstant, sunset, sunrise, dusk, dawn, "
     "evening-9, morning-9, middle, start, end, each with +20m or -1h30m; FROM..TO,\nFROM..+25m, first-half, "
     "second-half, whole. What was typed is said with its date on standard error.\n",
     GROUP_COMPUTE | GROUP_PLAN, FORMAT_TEXT | FORMAT_JSON, 1, command_plan},
    {"sheet", "[DATE]", "The night sheet: the running order for the team, to print, mail or subscribe to.",
     "The kept plan as it was stored; without one the draft main, or a proposal. No format gives an event "
     "while the Sun "
     "is up.\ncsv: a row an event; ics: RFC 5545, the same event keeps its UID, SEQUENCE grows with each "
     "change of the night's\nplans, what is gone is cancelled; html: one file, for paper and telephones.\n",
     GROUP_COMPUTE | GROUP_SHEET, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON | FORMAT_ICS | FORMAT_HTML, 1,
     command_sheet},
    {"season", "FROM TO", "Every window in a range of nights, both included.",
     "Several sites: repeat --site or --place. JSON: {\"site\" (null with several), \"sites\", \"limits\", "
     "\"from\", "
     "\"to\", \"windows\"}.\n",
     GROUP_COMPUTE | GROUP_WINDOWS, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, 2, command_season},
    {"sky", "[TARGET | --radec RA,DEC]", "Where a target, the Sun and the Moon stand at an instant.",
     "Altitudes are airless and topocentric. ra_deg, dec_deg: ICRS with proper motion to that date. "
     "moon_ra_deg,\n"
     "moon_dec_deg: seen from the site, true equator and equinox of date. epoch and phase: orbits since T0, "
     "whole and "
     "rest.\n",
     GROUP_COMPUTE | GROUP_SKY, FORMAT_TEXT | FORMAT_JSON, 1, command_sky},
    {"clock", "VALUE [TARGET | --radec RA,DEC]", "One time in another standard, for a target's direction.",
     "Scales: UTC (text), JD_UTC, JD_TT, JD_TDB, MJD_UTC, MJD_TT, MJD_TDB, HJD_UTC, HJD_TT, HJD_TDB, "
     "BJD_UTC, "
     "BJD_TT,\nBJD_TDB; an offset is written behind it: BJD_TDB-2457000.\n",
     GROUP_COMPUTE | GROUP_CLOCK, FORMAT_TEXT, 2, command_clock},
    {"drift", "[TARGET...]",
     "How far each ephemeris has drifted, when it goes stale, which window refreshes it.",
     "Refresh is searched at the sites of the run for targets whose error passes the limit before --at, and "
     "for "
     "those named.\nOnly transits. The first adequate window, within a year: a chance of done of at least "
     "0.5, and it "
     "brings the error at\n--at below the limit. The best one, within half a year: the greatest chance of "
     "done times "
     "gain in bits among those before\nthe stale date (after it where none comes before). A mid-time is "
     "assumed to "
     "have --precision. Text is sorted by stale_on,\ncsv and json by target. --against JSON: {\"target\", "
     "\"current\", \"against\", \"limit_min\", \"parted_on\",\n\"gaps\": [{\"at_utc\", "
     "\"gap_min\", \"error_min\"}]}.\n",
     GROUP_COMPUTE | GROUP_DRIFT, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, OPTION_NAMES_MAX - 1,
     command_drift},
    {"midtime",
     "list TARGET | add TARGET MID ERR | import TARGET FILE | exclude TARGET EPOCH | include TARGET EPOCH | "
     "remove TARGET "
     "EPOCH",
     "Measured mid-times of a target.",
     "ERR in days. A table has the columns mid_jd, err_d and, where known, epoch, time_scale, kind (transit "
     "or\n"
     "occultation), source, used (1 or 0). An occultation carries the epoch of the transit before it; N + "
     "0.5 is read as\n"
     "that. Without an epoch it is counted, outward from where the ephemeris is known best, and refused with "
     "the\n"
     "candidates where 3 sigma reach half a period. A refused row refuses the file. More than 3 sigma from "
     "the\n"
     "prediction is a warning. exclude keeps a time and leaves it out of fits; remove takes it out of the "
     "lists; --kind\n"
     "says which of an epoch (transit).\n",
     GROUP_MIDTIME, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, 4, command_midtime},
    {"refit", "TARGET", "Linear and quadratic fit to a target's mid-times, with residuals.",
     "Errors are formal; scale_factor is max(1, sqrt(chi2/dof)), at the top that of the linear fit. "
     "Residuals are\n"
     "against the linear fit; an outlier (robust z above 4) is marked and stays in the fit. --jitter fit is "
     "estimated\n"
     "with the linear model, or with the one that is adopted. --adopt makes a new version at epoch 0 of the "
     "target's\n"
     "count, errors scaled unless --formal.\n",
     GROUP_REFIT, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, 1, command_refit},
    {"history", "[TARGET]", "What was changed, when and by whom, the newest first.", NULL, 0,
     FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, 1, command_history},
    {"undo", "", "Takes a change back, as a change of its own.",
     "Refused where something was changed again since; both values are shown then.\n", GROUP_UNDO,
     FORMAT_TEXT, 0, command_undo},
    {"import", "FILE", "Targets from a table (CSV; `-` is standard input).",
     "A bad row refuses that row only; --strict refuses the file. A known target's changed ephemeris is "
     "stored beside the\n"
     "old one and made current only with --adopt.\n",
     GROUP_IMPORT, FORMAT_TEXT, 1, command_import},
    {"target", "list | show NAME | add NAME | set NAME FIELD=VALUE... | remove NAME | adopt NAME VERSION",
     "The stored targets.",
     "add takes --radec and FIELD=VALUE too; FIELD= clears. Fields are the columns of `wane target list "
     "--format csv`.\n",
     0, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, OPTION_NAMES_MAX, command_target},
    {"site", "list | show NAME | add NAME | set NAME | remove NAME", "The stored sites.",
     "add and set take --place LAT,LON,HEIGHT, --zone ZONE, --half RULE and --mask FILE (`none` takes the "
     "stored one away). A mask file "
     "has\na point a line: azimuth from north through east, apparent altitude of the horizon, in degrees, 1 "
     "to 720 of "
     "them; straight\nlines between. `#` begins a comment. set takes --telescope T too: the telescope that "
     "is "
     "used where none is\nchosen; `none`: only one that is alone.\n",
     GROUP_SITE, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, 2, command_site},
    {"telescope", "list | show NAME | add NAME FIELD=VALUE... | set NAME FIELD=VALUE... | remove NAME",
     "The stored telescopes of a site.",
     "FIELD= clears. blocks are standing blocks of every night, SPAN=TEXT with ; between; SPAN as in `wane "
     "allot --help`.\nalt_min_deg lays itself over the altitude limit of the settings.\n",
     0, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, OPTION_NAMES_MAX, command_telescope},
    {"allot", "list | add NIGHT[..NIGHT] SPAN [NOTE] | remove ID",
     "Time of a site's nights that the team really has; where a night has some, the rest of it is not used.",
     "With --telescope it is that telescope's, else of any of the site. SPAN: FROM..TO, FROM..+25m, "
     "first-half, second-half\nor whole (sunset to sunrise). FROM, TO: 22:40 or 22:40L site local, 05:40Z, "
     "22:40-06:00, YYYY-MM-DDTHH:MMZ; sunset,\nsunrise, dusk, dawn (at the Sun limit), evening-9, morning-9 "
     "(Sun at -9 deg), middle (see --half of wane site),\nstart, end (noon); each with +20m or -1h30m behind "
     "it. In the hour that a change of clocks repeats, Z or an offset is needed.\n",
     0, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, 4, command_allot},
    {"goal", "list [TARGET] | set TARGET WHOLE LIMB | remove TARGET",
     "How many whole events and single limbs of a target are wanted.",
     "A target has one goal a band (--band; any without). What the marks of stored plans say was done since "
     "a "
     "goal was set counts\nfor it: an event done whole or with a cut baseline is a whole one; one limb "
     "alone, or "
     "an event that was partly done,\nis a limb; a whole event more than wanted is a limb too. A target "
     "whose "
     "goals are all met is worth nothing; one without\ngoals always counts. After its last night (--until) a "
     "goal counts as closed.\n",
     GROUP_GOAL, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, 4, command_goal},
    {"star", "list TARGET | add TARGET ROLE PLACE MAG | remove TARGET NUMBER",
     "Comparison stars, guide star and neighbours of a target.",
     "ROLE: comparison (at most 5), guide (1) or neighbour (10). PLACE: RA,DEC as in --radec; of a neighbour "
     "also "
     "its distance\nin arcsec. MAG in --band. Neighbours in the measuring aperture dilute the event; how "
     "bright the "
     "comparison stars are\ngoes into the noise. It says whether target, comparison and guide stars fit the "
     "telescope's field together: within a\ncircle of field_arcmin, suitably pointed.\n",
     GROUP_STAR, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, 5, command_star},
    {"setting", "list | set KEY VALUE | clear KEY", "Settings that change results; they lie in the store.",
     "clear goes back to what is built in.\n", 0, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, 3, command_setting},
    {"check", "", "Whether the store is sound.", NULL, 0, FORMAT_TEXT, 0, command_check},
    {"demo", "[DATE]", "An invented observatory and list in a throw-away database.",
     "On a terminal the interface opens; else the night is printed.\n", GROUP_COMPUTE | GROUP_WINDOWS,
     FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, 1, command_demo},
};
const size_t command_count = sizeof commands / sizeof commands[0];

const struct command *command_find(const char *name)
{
	for (size_t i = 0; i < command_count; i++)
		if (strcmp(commands[i].name, name) == 0)
			return &commands[i];
	return NULL;
}

static const struct {
	const char *word;
	int format;
} format_words[] = {{"text", FORMAT_TEXT},
		    {"csv", FORMAT_CSV},
		    {"json", FORMAT_JSON},
		    {"ics", FORMAT_ICS},
		    {"html", FORMAT_HTML}};
enum { FORMAT_WORDS = sizeof format_words / sizeof format_words[0] };

enum status format_of(const struct options *o, int formats, enum format *f, struct err *e)
{
	char got[ERR_QUOTE_MAX], list[64] = "";
	*f = FORMAT_TEXT;
	if (!o->format)
		return ST_OK;
	for (size_t i = 0; i < FORMAT_WORDS; i++) {
		if (!(formats & format_words[i].format))
			continue;
		if (strcmp(o->format, format_words[i].word) == 0) {
			*f = (enum format)format_words[i].format;
			return ST_OK;
		}
		snprintf(list + strlen(list), sizeof list - strlen(list), "%s%s", list[0] ? ", " : "",
			 format_words[i].word);
	}
	err_quote(o->format, strlen(o->format), got);
	return err_set(e, ST_SYNTAX, "no such format here (got \"%s\", expected %s)", got, list);
}

int usage_fault(const char *word, const struct err *e)
{
	return diagnose_err(word, e, EXIT_USAGE);
}

struct change change_of(const struct run *r, const char *verb, char utc[UTC_TEXT_MAX])
{
	utc_text(&r->leap, wall_now(&r->wall), 0, utc);
	return (struct change){.utc = utc, .who = r->env->user, .verb = verb};
}

int verb_of(const char *command, const char *const verbs[], int n, const struct options *o)
{
	char got[ERR_QUOTE_MAX], list[128] = "";
	const char *verb = o->n_words > 1 ? o->word[1] : "";
	for (int i = 0; i < n; i++) {
		snprintf(list + strlen(list), sizeof list - strlen(list), "%s%s", i ? ", " : "", verbs[i]);
		if (strcmp(verb, verbs[i]) != 0)
			continue;
		if (i > 0 && o->n_words < 3) {
			diagnose("NAME", "is missing (expected wane %s %s NAME)", command, verb);
			return -1;
		}
		if (i == 0 && o->n_words > 2) {
			diagnose(command, "list takes no name");
			return -1;
		}
		return i;
	}
	err_quote(verb, strlen(verb), got);
	diagnose(command, "no such verb (got \"%s\", expected %s)", got, list);
	return -1;
}

/* --- help --- */

static void columns_help(FILE *to)
{
	fputs("\nColumns of csv, keys of json\n", to);
	for (size_t i = 0; i < column_count; i++)
		fprintf(to, "  %-24s %s%s%s%s\n", columns[i].name, columns[i].sentence,
			columns[i].unit[0] ? " [" : "", columns[i].unit, columns[i].unit[0] ? "]" : "");
	fputs("\nWords in flags\n", to);
	for (int f = 0; f < FLAG_COUNT; f++)
		fprintf(to, "  %-24s %s\n", flag_rules[f].word, flag_rules[f].sentence);
}

static void drift_help(FILE *to)
{
	fputs("\nColumns of csv, keys of json\n", to);
	for (size_t i = 0; i < drift_column_count; i++)
		fprintf(to, "  %-24s %s%s%s%s\n", drift_columns[i].name, drift_columns[i].sentence,
			drift_columns[i].unit[0] ? " [" : "", drift_columns[i].unit,
			drift_columns[i].unit[0] ? "]" : "");
}

static void fields_help(FILE *to)
{
	fputs("\nFields of a target, columns of its table\n", to);
	for (int f = 0; f < FIELD_COUNT; f++)
		fprintf(to, "  %-24s %s%s%s%s\n", fields[f].name, fields[f].sentence,
			fields[f].unit[0] ? " [" : "", fields[f].unit, fields[f].unit[0] ? "]" : "");
}

void command_help(FILE *to, const struct command *c)
{
	fprintf(to, "wane %s %s\n%s\n", c->name, c->arguments, c->help);
	if (c->more)
		fputs(c->more, to);
	fputs("Formats:", to);
	for (size_t i = 0; i < FORMAT_WORDS; i++)
		if (c->formats & format_words[i].format)
			fprintf(to, " %s", format_words[i].word);
	if (c->groups) {
		fputs("\n\nOptions\n", to);
		options_help(to, c->groups);
	} else {
		fputc('\n', to);
	}
	fputs("\nOptions of every subcommand\n", to);
	options_help(to, GROUP_COMMON);
	if (c->groups & GROUP_WINDOWS)
		columns_help(to);
	if (c->groups & GROUP_DRIFT)
		drift_help(to);
	if (c->function == command_import || c->function == command_target)
		fields_help(to);
	if (c->function == command_telescope)
		telescope_help(to);
	if (c->function == command_setting)
		setting_help(to);
	fputs("\nTIME: YYYY-MM-DDTHH:MM[:SS]Z in UTC, or one argument \"2461114.708333 JD_UTC\". An option's "
	      "value may begin "
	      "with -.\nExit code: 0 done, 1 the request could not be met, 2 the command line is wrong.\n",
	      to);
}

void general_help(FILE *to)
{
	fputs("wane: transit windows for observers on the ground.\n\n"
	      "  wane                     the interface, on tonight\n",
	      to);
	for (size_t i = 0; i < command_count; i++) {
		char left[160];
		snprintf(left, sizeof left, "wane %s %s", commands[i].name, commands[i].arguments);
		if (strlen(left) > 24)
			fprintf(to, "  %s\n  %24s %s\n", left, "", commands[i].help);
		else
			fprintf(to, "  %-24s %s\n", left, commands[i].help);
	}
	fputs("\n`wane SUBCOMMAND --help` says more.\n\nOptions of every subcommand\n", to);
	options_help(to, GROUP_COMMON);
	fputs("\nLimits, wherever something is computed\n", to);
	options_help(to, GROUP_COMPUTE | GROUP_WINDOWS);
	fputs("\nThe settings file (built-in value; range)\n", to);
	settings_help(to);
	fputc('\n', to);
	text_cautions(to);
}
