/* SPDX-License-Identifier: MIT */
#include "tui/parts/line_edit.h"

#include "db/text_clean.h"
#include "tui/parts/keys.h"

#include <string.h>

static void take_out(struct line_edit *line, int from, int to)
{
	if (from >= to)
		return;
	memmove(&line->cp[from], &line->cp[to], sizeof line->cp[0] * (size_t)(line->n - to));
	line->n -= to - from;
	line->at = from;
}

static void put_in(struct line_edit *line, uint32_t cp)
{
	if (line->n == LINE_CHARS_MAX || codepoint_is_hostile(cp) || codepoint_width(cp) == 0)
		return;
	memmove(&line->cp[line->at + 1], &line->cp[line->at],
		sizeof line->cp[0] * (size_t)(line->n - line->at));
	line->cp[line->at++] = cp;
	line->n++;
}

void line_set(struct line_edit *line, const char *text)
{
	size_t left = strlen(text);
	*line = (struct line_edit){0};
	while (left > 0) {
		uint32_t cp;
		size_t length = utf8_decode(text, left, &cp);
		if (length == 0)
			return;
		put_in(line, cp);
		text += length;
		left -= length;
	}
}

void line_offer(struct line_edit *line, const char *text)
{
	line_set(line, text);
	line->offered = line->n > 0;
}

static int word_start(const struct line_edit *line)
{
	int at = line->at;
	while (at > 0 && line->cp[at - 1] == ' ')
		at--;
	while (at > 0 && line->cp[at - 1] != ' ')
		at--;
	return at;
}

/* Keys that move in the text or take from it; true when it was one. */
static bool edit_key(struct line_edit *line, uint32_t code)
{
	switch (code) {
	case CONTROL('A'):
	case PRESS_HOME:
		line->at = 0;
		return true;
	case CONTROL('E'):
	case PRESS_END:
		line->at = line->n;
		return true;
	case CONTROL('B'):
	case PRESS_LEFT:
		line->at -= line->at > 0;
		return true;
	case CONTROL('F'):
	case PRESS_RIGHT:
		line->at += line->at < line->n;
		return true;
	case CONTROL('D'):
	case PRESS_DELETE:
		if (line->at < line->n)
			take_out(line, line->at, line->at + 1);
		return true;
	case CONTROL('H'):
	case 0x7F:
	case PRESS_BACKSPACE:
		if (line->at > 0)
			take_out(line, line->at - 1, line->at);
		return true;
	case CONTROL('U'):
		take_out(line, 0, line->at);
		return true;
	case CONTROL('K'):
		take_out(line, line->at, line->n);
		return true;
	case CONTROL('W'):
		take_out(line, word_start(line), line->at);
		return true;
	default:
		return false;
	}
}

bool line_key(struct line_edit *line, uint32_t code)
{
	bool typed = code >= 32 && code < KEYS_SPECIAL && code != 0x7F;
	if (!typed && !edit_key(line, code))
		return false;
	if (typed && line->offered)
		line_set(line, "");
	line->offered = false;
	if (typed)
		put_in(line, code);
	return true;
}

void line_text(const struct line_edit *line, char *out, size_t n)
{
	size_t used = 0;
	if (n == 0)
		return;
	for (int i = 0; i < line->n; i++) {
		char bytes[4];
		size_t length = utf8_encode(line->cp[i], bytes);
		if (used + length >= n)
			break;
		memcpy(out + used, bytes, length);
		used += length;
	}
	out[used] = '\0';
}

void line_draw(const struct line_edit *line, struct grid *g, int row, int col, int width)
{
	/* the cursor needs a column of its own behind the last character */
	int first = 0, before = 0;
	for (int i = 0; i < line->at; i++)
		before += codepoint_width(line->cp[i]);
	while (first < line->at && before >= width)
		before -= codepoint_width(line->cp[first++]);
	int used = 0;
	for (int i = first; i < line->n; i++) {
		char bytes[5] = {0};
		int w = codepoint_width(line->cp[i]);
		if (used + w > width)
			break;
		utf8_encode(line->cp[i], bytes);
		grid_put(g, row, col + used, w, bytes, ROLE_STRONG);
		used += w;
	}
	if (line->offered)
		grid_select(g, row, col, used);
	grid_cursor(g, row, col + before, true);
}
