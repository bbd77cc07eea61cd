/* SPDX-License-Identifier: MIT */
#include "tui/commands/telescope_write.h"

#include "tui/commands/result.h"
#include "tui/diagnose.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/json.h"
#include "tui/sheets/text.h"

#include <string.h>

enum { FIELD_BYTES = 4 * 2000 + 1, LINE_COLUMNS = 40 };

/* `slew_deg_s 2 deg/s` of each field that is given; texts that are long only where the telescope stands
 * alone. */
static void fields_text(FILE *to, const struct telescope *t, bool list)
{
	char text[FIELD_BYTES], clean[FIELD_BYTES];
	bool any = false;
	for (size_t i = 0; i < telescope_field_count; i++) {
		const struct telescope_field *f = &telescope_fields[i];
		telescope_field_text(t, i, text, sizeof text);
		if (!text[0])
			continue;
		if (list)
			fprintf(to, "%s%s ", any ? ", " : ": ", f->name);
		else
			fprintf(to, "  %-18s ", f->name);
		if (list) {
			text_cell(to, text, LINE_COLUMNS, false);
		} else {
			text_clean(text, clean, sizeof clean);
			fputs(clean, to);
		}
		fprintf(to, "%s%s%s", f->unit[0] ? " " : "", f->unit, list ? "" : "\n");
		any = true;
	}
	if (!any)
		fputs(list ? ": no field is given" : "  No field is given.\n", to);
	if (list)
		fputc('\n', to);
}

static void telescope_text(FILE *to, const struct run *r, const struct telescope *t, bool list)
{
	text_cell(to, t->name, NAME_CHARS_MAX, false);
	if (!list) {
		fputs(" at ", to);
		text_cell(to, r->site.name, NAME_CHARS_MAX, false);
		fputc('\n', to);
	}
	fields_text(to, t, list);
}

static void telescope_cells(struct csv_out *c, const struct run *r, const struct telescope *t)
{
	char text[FIELD_BYTES];
	csv_text(c, r->site.name);
	csv_text(c, t->name);
	for (size_t i = 0; i < telescope_field_count; i++) {
		telescope_field_text(t, i, text, sizeof text);
		if (telescope_fields[i].type == TELESCOPE_NUMBER)
			csv_number(c, text);
		else
			csv_text(c, text);
	}
	csv_end_line(c);
}

static void telescope_json(struct json *j, const struct run *r, const struct telescope *t)
{
	char text[FIELD_BYTES];
	json_open(j, NULL, '{', false);
	json_text(j, "site", r->site.name);
	json_text(j, "name", t->name);
	for (size_t i = 0; i < telescope_field_count; i++) {
		const char *key = telescope_fields[i].name;
		telescope_field_text(t, i, text, sizeof text);
		if (!text[0])
			json_null(j, key);
		else if (telescope_fields[i].type == TELESCOPE_NUMBER)
			json_digits(j, key, text);
		else
			json_text(j, key, text);
	}
	json_close(j, '}');
}

static bool write_csv(FILE *to, const struct run *r, const struct telescope t[], size_t n)
{
	struct csv_out c = {.file = to};
	csv_text(&c, "site");
	csv_text(&c, "name");
	for (size_t i = 0; i < telescope_field_count; i++)
		csv_text(&c, telescope_fields[i].name);
	csv_end_line(&c);
	for (size_t i = 0; i < n; i++)
		telescope_cells(&c, r, &t[i]);
	return !c.failed;
}

static void write_json(FILE *to, const struct run *r, const struct telescope t[], size_t n, bool list)
{
	struct json j = json_begin(to);
	if (list)
		json_open(&j, NULL, '[', false);
	for (size_t i = 0; i < n; i++)
		telescope_json(&j, r, &t[i]);
	if (list)
		json_close(&j, ']');
	json_end(&j);
}

int telescopes_write(struct run *r, const struct telescope t[], size_t n, bool list)
{
	struct out out;
	enum format format;
	bool whole = true;
	const int opened = result_open(r, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &format, &out);
	if (opened != EXIT_DONE)
		return opened;
	if (format == FORMAT_CSV)
		whole = write_csv(out.file, r, t, n);
	else if (format == FORMAT_JSON)
		write_json(out.file, r, t, n, list);
	else if (n == 0)
		fputs("No telescope is stored here: wane telescope add NAME FIELD=VALUE...\n", out.file);
	for (size_t i = 0; format == FORMAT_TEXT && i < n; i++)
		telescope_text(out.file, r, &t[i], list);
	return result_commit(&out, whole);
}
