/* SPDX-License-Identifier: MIT */
#include "tui/commands/allot_write.h"

#include "tui/commands/result.h"
#include "tui/diagnose.h"
#include "tui/pages/night_head.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/json.h"
#include "tui/sheets/text.h"

#include <string.h>

enum { DATE_BYTES = 40, SPAN_COLUMNS = 28, TELESCOPE_COLUMNS = 24, NOTE_COLUMNS = 60 };

enum status allot_resolve(struct run *r, int32_t evening_mjd, const char *span, struct night *n,
			  double *from_d, double *to_d, struct err *e)
{
	enum status s = night_build(n, &r->site, &r->clock, evening_mjd, r->memo, e);
	if (s != ST_OK)
		return s;
	const struct plan_clock clock = run_plan_clock(r, n);
	return plan_span(&clock, span, from_d, to_d, e);
}

void allot_echo(const struct run *r, const struct night *n, double from_d, double to_d,
		char out[ALLOT_ECHO_BYTES])
{
	const struct plan_clock clock = run_plan_clock(r, n);
	char from[PLAN_ECHO_BYTES], to[PLAN_ECHO_BYTES];
	plan_echo(&clock, from_d, from);
	plan_echo(&clock, to_d, to);
	snprintf(out, ALLOT_ECHO_BYTES, "%s to %s", from, to);
}

/* --- pieces --- */

struct line {
	const struct allotment *allotment;
	const char *telescope; /* "" any */
	bool resolved;	       /* of a single night in which it happens */
	char echo[ALLOT_ECHO_BYTES], from_utc[UTC_TEXT_MAX], to_utc[UTC_TEXT_MAX];
	char why[400]; /* of a single night in which it does not */
};

static const char *telescope_name(const struct run *r, int64_t id)
{
	if (id == 0)
		return "";
	for (size_t i = 0; i < r->telescopes.n; i++)
		if (r->telescopes.telescope[i].id == id)
			return r->telescopes.telescope[i].name;
	return "(removed)";
}

/* night: scratch. */
static struct line make_line(struct run *r, const struct allotment *a, struct night *night)
{
	struct line l = {.allotment = a, .telescope = telescope_name(r, a->telescope_id)};
	double from_d = 0.0, to_d = 0.0;
	struct err e;
	if (a->first_mjd != a->last_mjd)
		return l;
	if (allot_resolve(r, a->first_mjd, a->span, night, &from_d, &to_d, &e) != ST_OK) {
		snprintf(l.why, sizeof l.why, "%.390s", e.text);
		return l;
	}
	l.resolved = true;
	allot_echo(r, night, from_d, to_d, l.echo);
	utc_text(&r->leap, night_utc(night, from_d), 0, l.from_utc);
	utc_text(&r->leap, night_utc(night, to_d), 0, l.to_utc);
	return l;
}

static void date_text(int32_t mjd, char out[DATE_BYTES])
{
	struct date d = date_from_mjd(mjd);
	snprintf(out, DATE_BYTES, "%04d-%02d-%02d", d.year, d.month, d.day);
}

/* --- forms --- */

static void line_text(FILE *to, const struct line *l)
{
	const struct allotment *a = l->allotment;
	char first[64], last[64];
	night_name(a->first_mjd, first, sizeof first);
	night_name(a->last_mjd, last, sizeof last);
	fprintf(to, "%lld: night", (long long)a->id);
	if (a->first_mjd == a->last_mjd)
		fprintf(to, " %s, ", first);
	else
		fprintf(to, "s %s to %s (%ld), ", first, last, (long)a->last_mjd - a->first_mjd + 1);
	text_cell(to, a->span, SPAN_COLUMNS * 4, false);
	if (l->resolved)
		fprintf(to, ": %s", l->echo);
	else if (l->why[0])
		fprintf(to, ": nothing, it can't be resolved");
	if (l->telescope[0]) {
		fputs("; telescope ", to);
		text_cell(to, l->telescope, TELESCOPE_COLUMNS, false);
	} else {
		fputs("; any telescope", to);
	}
	if (a->note && a->note[0]) {
		fputs("; ", to);
		text_cell(to, a->note, NOTE_COLUMNS, false);
	}
	fputc('\n', to);
}

static void line_csv(struct csv_out *c, const struct run *r, const struct line *l)
{
	const struct allotment *a = l->allotment;
	char text[DATE_BYTES];
	snprintf(text, sizeof text, "%lld", (long long)a->id);
	csv_number(c, text);
	csv_text(c, r->site.name);
	csv_text(c, l->telescope);
	date_text(a->first_mjd, text);
	csv_number(c, text);
	date_text(a->last_mjd, text);
	csv_number(c, text);
	csv_text(c, a->span);
	csv_number(c, l->from_utc);
	csv_number(c, l->to_utc);
	csv_text(c, a->note ? a->note : "");
	csv_end_line(c);
}

static void text_or_null(struct json *j, const char *key, const char *text)
{
	if (text[0])
		json_text(j, key, text);
	else
		json_null(j, key);
}

static void line_json(struct json *j, const struct run *r, const struct line *l)
{
	const struct allotment *a = l->allotment;
	char text[DATE_BYTES];
	json_open(j, NULL, '{', true);
	json_whole(j, "id", (long)a->id);
	json_text(j, "site", r->site.name);
	text_or_null(j, "telescope", l->telescope);
	date_text(a->first_mjd, text);
	json_text(j, "first_night", text);
	date_text(a->last_mjd, text);
	json_text(j, "last_night", text);
	json_text(j, "span", a->span);
	text_or_null(j, "from_utc", l->from_utc);
	text_or_null(j, "to_utc", l->to_utc);
	json_text(j, "note", a->note ? a->note : "");
	json_close(j, '}');
}

int allotments_write(struct run *r, const struct allotment *const which[], size_t n)
{
	struct out out;
	struct night night;
	enum format format;
	const int opened = result_open(r, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &format, &out);
	if (opened != EXIT_DONE)
		return opened;
	struct csv_out csv = {.file = out.file};
	struct json json = json_begin(out.file);
	if (format == FORMAT_CSV)
		fputs("id,site,telescope,first_night,last_night,span,from_utc,to_utc,note\n", out.file);
	else if (format == FORMAT_JSON)
		json_open(&json, NULL, '[', false);
	else if (n == 0)
		fputs("No time is allotted: whole nights are free (wane allot add NIGHT SPAN).\n", out.file);
	for (size_t i = 0; i < n; i++) {
		struct line l = make_line(r, which[i], &night);
		if (l.why[0])
			diagnose("allot", "%lld allots nothing: %s", (long long)which[i]->id, l.why);
		if (format == FORMAT_CSV)
			line_csv(&csv, r, &l);
		else if (format == FORMAT_JSON)
			line_json(&json, r, &l);
		else
			line_text(out.file, &l);
	}
	if (format == FORMAT_JSON) {
		json_close(&json, ']');
		json_end(&json);
	}
	return result_commit(&out, !csv.failed);
}
