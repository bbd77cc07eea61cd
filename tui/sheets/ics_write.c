/* SPDX-License-Identifier: MIT */
#include "tui/sheets/ics_write.h"

#include "db/text_clean.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum { LINE_OCTETS = 75, REPLACEMENT_BYTES = 3, DAY_SECONDS = 86400 };

/* --- cleaning --- */

/* Adds one line, cleaned, to out; behind other lines with a newline between. */
static size_t add_line(char *out, size_t used, const char *clean)
{
	const size_t start = used;
	if (used > 0)
		out[used++] = '\n';
	const size_t text = used;
	for (const char *s = clean; *s; s++)
		if (*s != ' ' || (used > text && out[used - 1] != ' '))
			out[used++] = *s == '\\' ? '/' : *s;
	if (used > text && out[used - 1] == ' ')
		used--;
	return used > text ? used : start;
}

char *ics_clean(const char *text)
{
	const size_t n = strlen(text), room = REPLACEMENT_BYTES * n + 1;
	char *out = malloc(room), *line = malloc(n + 1), *clean = malloc(room);
	size_t used = 0;
	for (size_t at = 0; out && line && clean && at < n;) {
		const size_t length = strcspn(text + at, "\r\n");
		memcpy(line, text + at, length);
		line[length] = '\0';
		(void)text_clean(line, clean, room);
		used = add_line(out, used, clean);
		at += length + strspn(text + at + length, "\r\n");
	}
	if (out && line && clean) {
		out[used] = '\0';
	} else {
		free(out);
		out = NULL;
	}
	free(line);
	free(clean);
	return out;
}

/* --- lines --- */

/* What must stay together at s: a character, or a backslash with what it escapes. */
static size_t unit_length(const char *s)
{
	uint32_t cp;
	if (*s == '\\' && s[1])
		return 2;
	const size_t length = utf8_decode(s, strnlen(s, 4), &cp);
	return length > 0 ? length : 1;
}

/* Writes text on; column: octets of the line so far. */
static size_t put_folded(FILE *to, const char *text, size_t column)
{
	while (*text) {
		const size_t length = unit_length(text);
		if (column + length > LINE_OCTETS) {
			fputs("\r\n ", to);
			column = 1;
		}
		fwrite(text, 1, length, to);
		column += length;
		text += length;
	}
	return column;
}

void ics_value(struct ics *c, const char *name, const char *value)
{
	size_t column = put_folded(c->file, name, 0);
	column = put_folded(c->file, ":", column);
	(void)put_folded(c->file, value, column);
	fputs("\r\n", c->file);
}

void ics_text(struct ics *c, const char *name, const char *text)
{
	char *clean = ics_clean(text);
	char *escaped = clean ? calloc(2 * strlen(clean) + 1, 1) : NULL;
	size_t used = 0;
	if (!escaped) {
		free(clean);
		c->failed = true;
		return;
	}
	for (const char *s = clean; *s; s++) {
		if (*s == ';' || *s == ',' || *s == '\n')
			escaped[used++] = '\\';
		escaped[used++] = *s == '\n' ? 'n' : *s;
	}
	escaped[used] = '\0';
	if (used > 0)
		ics_value(c, name, escaped);
	free(escaped);
	free(clean);
}

void ics_time(struct utc t, bool up, char out[ICS_TIME_BYTES])
{
	int32_t mjd = t.mjd;
	int second = (int)(up ? ceil(t.sod_s) : floor(t.sod_s));
	if (second >= DAY_SECONDS && up) {
		mjd++;
		second = 0;
	} else if (second >= DAY_SECONDS) {
		second = DAY_SECONDS - 1;
	}
	const struct date d = date_from_mjd(mjd);
	snprintf(out, ICS_TIME_BYTES, "%04d%02d%02dT%02d%02d%02dZ", d.year, d.month, d.day, second / 3600,
		 second / 60 % 60, second % 60);
}
