/* SPDX-License-Identifier: MIT */
#include "tui/commands/target_write.h"

#include "ephem/angle_text.h"
#include "tui/commands/result.h"
#include "tui/diagnose.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/json.h"
#include "tui/sheets/text.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static bool is_text(int field)
{
	return fields[field].kind == FIELD_NAME || fields[field].kind == FIELD_TEXT ||
	       fields[field].kind == FIELD_SCALE;
}

/* --- csv, json --- */

static void row_csv(struct csv_out *c, const struct field_texts *texts)
{
	for (int i = 0; i < FIELD_COUNT; i++) {
		/* what can't be true is kept as the text that it was: it may be no number at all */
		if (is_text(i) || strpbrk(texts->text[i], ",\"'=@\n\r") != NULL)
			csv_text(c, texts->text[i]);
		else
			csv_number(c, texts->text[i]);
	}
	csv_end_line(c);
}

static void value_json(struct json *j, const struct target *t, int field, const char *text)
{
	char shortest[256];
	const char *name = fields[field].name;
	if (!text[0]) {
		json_null(j, name);
	} else if (is_text(field)) {
		json_text(j, name, text);
	} else if (json_is_number(text)) {
		json_digits(j, name, text);
	} else { /* sexagesimal, +1.5, 1. and the like: the value that was read, if it was */
		field_text(t, field, shortest, sizeof shortest);
		if (json_is_number(shortest))
			json_digits(j, name, shortest);
		else
			json_text(j, name, text);
	}
}

static void versions_json(struct json *j, const struct ephemeris_row *row, size_t n)
{
	json_open(j, "ephemerides", '[', false);
	for (size_t i = 0; i < n; i++) {
		json_open(j, NULL, '{', true);
		json_whole(j, "version", row[i].version);
		json_bool(j, "current", row[i].current);
		json_text(j, "t0_jd", row[i].t0_text);
		json_text(j, "time_scale", row[i].scale);
		json_text(j, "period_d", row[i].period_text);
		json_exact(j, "t0_err_d", row[i].t0_err_d);
		json_exact(j, "period_err_d", row[i].period_err_d);
		json_text(j, "source", row[i].source);
		json_text(j, "entered_utc", row[i].entered_utc);
		json_text(j, "who", row[i].who);
		json_close(j, '}');
	}
	json_close(j, ']');
}

/* --- text --- */

static void cell_or_dash(FILE *to, double value, int decimals, int width)
{
	char text[NUMBER_TEXT_MAX];
	number_text_fixed(value, decimals, text);
	fprintf(to, " %*s", width, text[0] ? text : "-");
}

static void list_heading(FILE *to)
{
	fprintf(to, "%-24s %11s %11s %16s %12s %7s %7s %6s  %s\n", "target", "RA", "Dec", "T0", "period",
		"length", "depth", "mag", "time scale; source");
	fprintf(to, "%-24s %11s %11s %16s %12s %7s %7s %6s\n", "", "h m s", "deg", "JD", "d", "h", "ppt", "");
}

static void list_line(FILE *to, const struct target *t, uint64_t doubts)
{
	char ra[ANGLE_TEXT_MAX], dec[ANGLE_TEXT_MAX], t0[NUMBER_TEXT_MAX];
	ra_text(t->ra_deg, 1, ra);
	dec_text(t->dec_deg, 0, dec);
	number_text_jd2(t->t0, 5, t0);
	text_cell(to, t->name, 24, true);
	fprintf(to, " %11s %11s %16s", ra, dec, t0[0] ? t0 : "-");
	cell_or_dash(to, t->period_d, 7, 12);
	cell_or_dash(to, t->duration_h, 2, 7);
	cell_or_dash(to, t->depth_ppt, 2, 7);
	cell_or_dash(to, t->mag, 2, 6);
	fputs("  ", to);
	text_cell(to, t->time_scale[0] ? t->time_scale : "not said", 20, false);
	fputs("; ", to);
	text_cell(to, t->source[0] ? t->source : "no source", 60, false);
	fputs(doubts ? "; some values doubtful\n" : "\n", to);
}

static void show_text(FILE *to, const struct target *t, uint64_t doubts, const struct field_texts *texts,
		      const struct ephemeris_row *row, size_t n)
{
	char ra[ANGLE_TEXT_MAX], dec[ANGLE_TEXT_MAX];
	ra_text(t->ra_deg, 2, ra);
	dec_text(t->dec_deg, 1, dec);
	text_cell(to, t->name, NAME_CHARS_MAX, false);
	fprintf(to, " at %s %s (ICRS)\n", ra, dec);
	for (int i = 1; i < FIELD_COUNT; i++) {
		if (!texts->text[i][0])
			continue;
		fprintf(to, "  %-22s ", fields[i].name);
		text_cell(to, texts->text[i], 200, false);
		fprintf(to, "%s%s", fields[i].unit[0] ? " " : "", fields[i].unit);
		if (doubts >> i & 1)
			fprintf(to, "  (can't be true: not used, %s)", field_doubt(i, texts->text[i], NULL));
		fputc('\n', to);
	}
	fprintf(to, "Ephemeris versions: %zu\n", n);
	for (size_t i = 0; i < n; i++) {
		fprintf(to, "  %d%s  T0 %s %s, P %s d, entered %s by ", row[i].version,
			row[i].current ? " (current)" : "", row[i].t0_text,
			row[i].scale[0] ? row[i].scale : "(scale not said)", row[i].period_text,
			row[i].entered_utc);
		text_cell(to, row[i].who[0] ? row[i].who : "unknown", 40, false);
		fputs("; ", to);
		text_cell(to, row[i].source[0] ? row[i].source : "no source", 100, false);
		fputc('\n', to);
	}
}

/* --- all --- */

struct writer {
	enum format format;
	bool list;
	FILE *to;
	struct csv_out csv;
	struct json json;
};

static enum status write_one(struct writer *w, struct run *r, size_t i, struct err *e)
{
	const struct target *t = &r->targets.t[i];
	struct field_texts texts;
	struct ephemeris_row *row = NULL;
	char *block = NULL;
	size_t n = 0;
	if (w->format == FORMAT_TEXT && w->list) {
		list_line(w->to, t, r->targets.doubts[i]);
		return ST_OK;
	}
	enum status s = target_texts(r->store, t->id, &texts, &block, e);
	if (s == ST_OK && !w->list)
		s = ephemeris_versions(r->store, t->id, &row, &n, e);
	if (s == ST_OK && w->format == FORMAT_CSV) {
		row_csv(&w->csv, &texts);
	} else if (s == ST_OK && w->format == FORMAT_JSON) {
		json_open(&w->json, NULL, '{', false);
		for (int f = 0; f < FIELD_COUNT; f++)
			value_json(&w->json, t, f, texts.text[f]);
		if (!w->list)
			versions_json(&w->json, row, n);
		json_close(&w->json, '}');
	} else if (s == ST_OK) {
		show_text(w->to, t, r->targets.doubts[i], &texts, row, n);
	}
	free(row);
	free(block);
	return s;
}

static void begin(struct writer *w, size_t n)
{
	if (w->format == FORMAT_CSV) {
		for (int i = 0; i < FIELD_COUNT; i++)
			csv_text(&w->csv, fields[i].name);
		csv_end_line(&w->csv);
	} else if (w->format == FORMAT_JSON && w->list) {
		json_open(&w->json, NULL, '[', false);
	} else if (w->format == FORMAT_TEXT && w->list && n == 0) {
		fputs("No target is stored: wane import FILE, or wane target add NAME --radec RA,DEC "
		      "FIELD=VALUE...\n",
		      w->to);
	} else if (w->format == FORMAT_TEXT && w->list) {
		list_heading(w->to);
	}
}

int targets_write(struct run *r, const size_t chosen[], size_t n, bool list)
{
	struct writer w = {.list = list};
	struct out out;
	struct err e;
	enum status s = ST_OK;
	const int opened = result_open(r, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &w.format, &out);
	if (opened != EXIT_DONE)
		return opened;
	w.to = out.file;
	w.csv = (struct csv_out){.file = out.file};
	w.json = json_begin(out.file);
	begin(&w, n);
	for (size_t i = 0; s == ST_OK && i < n; i++)
		s = write_one(&w, r, chosen ? chosen[i] : i, &e);
	if (s == ST_OK && w.csv.failed)
		s = err_set(&e, ST_MEMORY, "no memory for a long cell");
	if (s != ST_OK) {
		out_abandon(&out);
		return diagnose_err("target", &e, EXIT_UNMET);
	}
	if (w.format == FORMAT_JSON && list)
		json_close(&w.json, ']');
	if (w.format == FORMAT_JSON)
		json_end(&w.json);
	return result_commit(&out, true);
}
