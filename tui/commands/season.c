/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "tui/diagnose.h"
#include "tui/given.h"
#include "tui/pages/night_head.h"
#include "tui/parts/text_width.h"
#include "tui/sheets/out.h"
#include "tui/sheets/text.h"
#include "tui/sheets/windows.h"

#include <stdlib.h>
#include <string.h>

/* One night at one site, and a window of one of them: what is sorted. */
struct entry {
	const struct window *window;
	const struct night *night;
	size_t place; /* of its site in the season's list */
};

struct season {
	struct run *run;
	size_t n_sites;
	struct site site[OPTION_NAMES_MAX];
	struct zone *zone[OPTION_NAMES_MAX];
	struct night_view *view; /* [n_sites], of the night in hand */
	struct entry *entry;
	size_t room;
	enum format format;
	struct csv_out csv;
	struct json json;
	struct text_sheet text;
	long allotment_faults; /* nights with one */
};
enum { ALLOTMENT_FAULTS_SHOWN = 5 };

/* By reserve start, then target; nights come one after the other already. */
static int by_reserve(const void *left, const void *right)
{
	const struct entry *a = left, *b = right;
	const struct utc ta = night_utc(a->night, a->window->event.reserve_start_d);
	const struct utc tb = night_utc(b->night, b->window->event.reserve_start_d);
	if (ta.mjd != tb.mjd)
		return ta.mjd < tb.mjd ? -1 : 1;
	if (ta.sod_s < tb.sod_s || ta.sod_s > tb.sod_s)
		return ta.sod_s < tb.sod_s ? -1 : 1;
	int name = strcmp(a->window->event.prepared->target->name, b->window->event.prepared->target->name);
	if (name != 0)
		return name;
	if (a->place != b->place)
		return a->place < b->place ? -1 : 1;
	if (a->window->event.kind != b->window->event.kind)
		return a->window->event.kind < b->window->event.kind ? -1 : 1;
	return (a->window->event.epoch > b->window->event.epoch) -
	       (a->window->event.epoch < b->window->event.epoch);
}

static enum status gather(struct season *s, size_t *n, struct err *e)
{
	size_t total = 0, k = 0;
	for (size_t i = 0; i < s->n_sites; i++)
		total += s->view[i].list.n;
	if (total > s->room) {
		struct entry *list = realloc(s->entry, total * sizeof *list);
		if (!list)
			return err_set(e, ST_MEMORY, "no memory for %zu windows", total);
		s->entry = list;
		s->room = total;
	}
	for (size_t i = 0; i < s->n_sites; i++)
		for (size_t w = 0; w < s->view[i].list.n; w++)
			s->entry[k++] = (struct entry){
			    .window = &s->view[i].list.w[w], .night = &s->view[i].night, .place = i};
	if (s->n_sites > 1 && total > 1) /* of one site the list is sorted already */
		qsort(s->entry, total, sizeof *s->entry, by_reserve);
	*n = total;
	return ST_OK;
}

static void write_night(struct season *s, size_t n)
{
	for (size_t i = 0; i < s->n_sites && s->format == FORMAT_TEXT; i++) {
		s->text.hidden += s->view[i].hidden;
		text_rows(&s->text, &s->view[i], s->zone[i], false);
		text_rows(&s->text, &s->view[i], s->zone[i], true);
	}
	for (size_t i = 0; i < n && s->format == FORMAT_CSV; i++)
		window_csv(&s->csv, s->entry[i].window, s->entry[i].night);
	for (size_t i = 0; i < n && s->format == FORMAT_JSON; i++)
		window_json(&s->json, s->entry[i].window, s->entry[i].night);
}

static void date_json(struct json *j, const char *key, int32_t mjd)
{
	struct date d = date_from_mjd(mjd);
	char text[40];
	snprintf(text, sizeof text, "%04d-%02d-%02d", d.year, d.month, d.day);
	json_text(j, key, text);
}

/* Whether the clocks of one of the sites change in one of the nights. */
static bool any_change(const struct season *s, int32_t from, int32_t until)
{
	for (size_t i = 0; i < s->n_sites; i++) {
		const double noon_s =
		    43200.0 - 240.0 * s->site[i].lon_east_deg; /* UTC of the local mean noon */
		for (int32_t mjd = from; mjd <= until; mjd++) {
			struct utc noon = utc_add_s(&s->run->leap, (struct utc){.mjd = mjd}, noon_s);
			struct utc next = utc_add_s(&s->run->leap, (struct utc){.mjd = mjd + 1}, noon_s);
			if (zone_local(s->zone[i], noon).offset_s != zone_local(s->zone[i], next).offset_s)
				return true;
		}
	}
	return false;
}

static void begin_text(struct season *s, FILE *to, int32_t from, int32_t until)
{
	char first[64], last[64];
	text_begin(&s->text, to, s->run, true);
	night_name(from, first, sizeof first);
	night_name(until, last, sizeof last);
	fprintf(to, "Season: nights %s to %s (%ld)\n", first, last, (long)until - from + 1);
	s->text.site_width = 4;
	for (size_t i = 0; i < s->n_sites; i++) {
		int width = text_columns(s->site[i].name);
		width = width > TEXT_NAME_WIDTH_MAX ? TEXT_NAME_WIDTH_MAX : width;
		s->text.site_width = width > s->text.site_width ? width : s->text.site_width;
		text_site(&s->text, &s->site[i], s->zone[i]);
	}
	text_limits(&s->text);
	if (any_change(s, from, until))
		fprintf(to,
			s->text.plain
			    ? "In some of these nights the clocks change: each local time says which it is.\n"
			    : "In some of these nights the clocks change: there a time with * is one after "
			      "the change, one without is before it.\n");
	text_heading(&s->text, "local time of the site");
}

static void begin_json(struct season *s, FILE *to, int32_t from, int32_t until)
{
	struct json *j = &s->json;
	*j = json_begin(to);
	json_open(j, NULL, '{', false);
	if (s->n_sites == 1)
		site_json(j, "site", &s->site[0]);
	else
		json_null(j, "site");
	json_open(j, "sites", '[', false);
	for (size_t i = 0; i < s->n_sites; i++)
		site_json(j, NULL, &s->site[i]);
	json_close(j, ']');
	limits_json(j, s->run, s->n_sites == 1 ? &s->site[0] : NULL);
	date_json(j, "from", from);
	date_json(j, "to", until);
	json_open(j, "windows", '[', false);
}

static void begin(struct season *s, FILE *to, int32_t from, int32_t until)
{
	if (s->format == FORMAT_TEXT) {
		begin_text(s, to, from, until);
	} else if (s->format == FORMAT_CSV) {
		s->csv = (struct csv_out){.file = to};
		windows_csv_header(&s->csv);
	} else {
		begin_json(s, to, from, until);
	}
}

static void end(struct season *s, int32_t until)
{
	if (s->format == FORMAT_TEXT) {
		text_foot(&s->text, until);
	} else if (s->format == FORMAT_JSON) {
		json_close(&s->json, ']');
		json_close(&s->json, '}');
		json_end(&s->json);
	}
	if (s->format != FORMAT_TEXT) {
		leap_note(s->run, until);
		uncounted_note(s->run);
	}
}

static void note_faults(struct season *s)
{
	for (size_t i = 0; i < s->n_sites; i++) {
		const struct night_view *v = &s->view[i];
		char name[64];
		if (!v->allotment_fault[0])
			continue;
		night_name(v->night.mjd, name, sizeof name);
		if (s->allotment_faults++ < ALLOTMENT_FAULTS_SHOWN)
			diagnose("allotment", "night %s: %s", name, v->allotment_fault);
	}
}

static enum status scan(struct season *s, FILE *to, int32_t from, int32_t until, struct err *e)
{
	enum status st = ST_OK;
	begin(s, to, from, until);
	for (int32_t mjd = from; st == ST_OK && mjd <= until; mjd++) {
		size_t n = 0;
		for (size_t i = 0; st == ST_OK && i < s->n_sites; i++)
			st = run_night_at(s->run, &s->site[i], mjd, s->format == FORMAT_TEXT, &s->view[i], e);
		if (st == ST_OK)
			st = gather(s, &n, e);
		if (st == ST_OK)
			write_night(s, n);
		if (st == ST_OK)
			note_faults(s);
	}
	if (s->allotment_faults > ALLOTMENT_FAULTS_SHOWN)
		diagnose("allotment", "the same on %ld more nights",
			 s->allotment_faults - ALLOTMENT_FAULTS_SHOWN);
	end(s, until);
	if (st == ST_OK && s->csv.failed)
		st = err_set(e, ST_MEMORY, "no memory for a long cell");
	return st;
}

static void open_zones(struct season *s)
{
	struct err e;
	for (size_t i = 0; i < s->n_sites; i++)
		if (s->site[i].zone[0] &&
		    zone_open(s->run->env->zoneinfo_dir, s->site[i].zone, &s->zone[i], &e) != ST_OK)
			diagnose("zone", "%s; times are shown in UTC", e.text);
}

static int write_season(struct season *s, int32_t from, int32_t until)
{
	const struct options *o = s->run->options;
	struct out out;
	struct err e;
	if (format_of(o, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &s->format, &e) != ST_OK)
		return usage_fault("--format", &e);
	if (run_all_sites(s->run, s->site, &s->n_sites, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_USAGE);
	s->view = calloc(s->n_sites, sizeof *s->view);
	if (!s->view) {
		diagnose("memory", "none for %zu sites", s->n_sites);
		return EXIT_UNMET;
	}
	if (s->format == FORMAT_TEXT)
		open_zones(s);
	if (run_out_open(s->run, &out, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	if (scan(s, out.file, from, until, &e) != ST_OK) {
		out_abandon(&out);
		return diagnose_err("season", &e, EXIT_UNMET);
	}
	return out_commit(&out, &e) == ST_OK ? EXIT_DONE : diagnose_whole(&e, EXIT_UNMET);
}

static void season_free(struct season *s)
{
	for (size_t i = 0; i < s->n_sites; i++) {
		zone_close(s->zone[i]);
		if (s->view)
			night_view_free(&s->view[i]);
	}
	free(s->view);
	free(s->entry);
	free(s);
}

int command_season(const struct env *env, const struct options *o)
{
	struct run run;
	struct err e;
	int code;
	int32_t mjd[2];
	static const char *const words[] = {"FROM", "TO"};
	if (o->n_words < 3) {
		diagnose("season", "%s is missing (expected wane season FROM TO)", words[o->n_words - 1]);
		return EXIT_USAGE;
	}
	for (int i = 0; i < 2; i++)
		if (given_night_check(&leap_builtin, o->word[i + 1], &e) != ST_OK &&
		    !strstr(o->word[i + 1], ":60"))
			return usage_fault(words[i], &e);
	if (run_open(&run, env, o, NEED_STORE | NEED_SITE | NEED_TARGETS, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	code = EXIT_DONE;
	for (int i = 0; code == EXIT_DONE && i < 2; i++)
		if (given_night(&run.leap, run.site.lon_east_deg, o->word[i + 1], &mjd[i], &e) != ST_OK)
			code = usage_fault(words[i], &e);
	if (code == EXIT_DONE && mjd[1] < mjd[0]) {
		diagnose("TO", "is before FROM (got %s %s)", o->word[1], o->word[2]);
		code = EXIT_USAGE;
	}
	struct season *s = calloc(1, sizeof *s);
	if (s && code == EXIT_DONE) {
		s->run = &run;
		code = write_season(s, mjd[0], mjd[1]);
		season_free(s);
	} else {
		free(s);
		code = code == EXIT_DONE ? EXIT_UNMET : code;
	}
	run_close(&run);
	return code;
}
