/* SPDX-License-Identifier: MIT */
#include "db/write_csv.h"

#include <string.h>

/* Whether, behind any apostrophes, a spreadsheet would read a formula. */
static bool looks_like_formula(const char *text)
{
	text += strspn(text, "'");
	return *text && strchr("=+-@", *text);
}

const char *csv_cell_plain(const char *text)
{
	return *text == '\'' && looks_like_formula(text) ? text + 1 : text;
}

struct out {
	char *at;
	size_t used, size;
};

static void put(struct out *o, char c)
{
	if (o->used + 1 < o->size)
		o->at[o->used] = c;
	o->used++;
}

size_t csv_cell_write(const char *text, bool is_text, char *out, size_t size)
{
	struct out o = {.at = out, .size = size};
	size_t n = strlen(text);
	bool prefix = is_text && looks_like_formula(text);
	bool quote =
	    strpbrk(text, ",;\t\"\r\n") || *text == '#' || (n > 0 && (text[0] == ' ' || text[n - 1] == ' '));
	if (quote)
		put(&o, '"');
	if (prefix)
		put(&o, '\'');
	for (const char *c = text; *c; c++) {
		if (*c == '"')
			put(&o, '"');
		put(&o, *c);
	}
	if (quote)
		put(&o, '"');
	if (size > 0)
		out[o.used < size ? o.used : size - 1] = '\0';
	return o.used;
}
