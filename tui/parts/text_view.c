/* SPDX-License-Identifier: MIT */
#include "tui/parts/text_view.h"

#include "db/text_clean.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

enum { WIDTH_MIN = 8 };

void text_view_start(struct text_view *v, int width)
{
	v->n = v->top = 0;
	v->width = width < WIDTH_MIN ? WIDTH_MIN : width;
}

/* Bytes of text that fit into `columns`, up to the last blank where one is near. */
static size_t piece(const char *text, int columns, size_t bytes)
{
	size_t left = strlen(text), at = 0, blank = 0;
	int used = 0;
	while (at < left) {
		uint32_t cp;
		size_t length = utf8_decode(text + at, left - at, &cp);
		int width = length ? codepoint_width(cp) : 1;
		length = length ? length : 1;
		if (used + width > columns || at + length >= bytes)
			return blank > 0 ? blank : at > 0 ? at : length;
		if (text[at] == ' ' && at > 0)
			blank = at;
		at += length;
		used += width;
	}
	return at;
}

void text_view_add(struct text_view *v, enum role role, int indent, const char *text)
{
	bool first = true;
	indent = indent > v->width / 2 ? v->width / 2 : indent;
	do {
		if (v->n == TEXT_LINES_MAX)
			return;
		struct text_line *line = &v->line[v->n++];
		int set_in = first ? 0 : indent;
		size_t n = piece(text, v->width - set_in, TEXT_LINE_BYTES - (size_t)set_in - 1);
		snprintf(line->text, sizeof line->text, "%*s%.*s", set_in, "", (int)n, text);
		line->role = role;
		text += n;
		while (*text == ' ')
			text++;
		first = false;
	} while (*text);
}

void text_view_addf(struct text_view *v, enum role role, int indent, const char *format, ...)
{
	char text[2048];
	va_list list;
	va_start(list, format);
	vsnprintf(text, sizeof text, format, list);
	va_end(list);
	text_view_add(v, role, indent, text);
}

void text_view_scroll(struct text_view *v, int by, int rows)
{
	int last = v->n > rows ? v->n - rows : 0;
	long top = (long)v->top + by;
	v->top = top < 0 ? 0 : top > last ? last : (int)top;
}

void text_view_draw(const struct text_view *v, struct grid *g, int row, int rows)
{
	for (int i = 0; i < rows && v->top + i < v->n; i++)
		grid_put(g, row + i, 1, g->cols - 2, v->line[v->top + i].text, v->line[v->top + i].role);
	if (v->top > 0)
		grid_glyph(g, row, g->cols - 1, GLYPH_MORE_ABOVE, ROLE_KEY);
	if (v->top + rows < v->n)
		grid_glyph(g, row + rows - 1, g->cols - 1, GLYPH_MORE_BELOW, ROLE_KEY);
}
