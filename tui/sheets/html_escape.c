/* SPDX-License-Identifier: MIT */
#include "tui/sheets/html_escape.h"

#include "db/text_clean.h"
#include "tui/parts/text_width.h"

#include <stdlib.h>
#include <string.h>

/* The cleaned text, the caller's to free; NULL: no memory. */
static char *cleaned(struct html_out *h, const char *text)
{
	size_t room = 3 * strlen(text) + 1; /* a bad byte becomes the 3 of U+FFFD */
	char *clean = malloc(room);
	if (!clean) {
		h->failed = true;
		return NULL;
	}
	(void)text_clean(text, clean, room);
	return clean;
}

static void escaped(FILE *to, const char *clean)
{
	for (; *clean; clean++) {
		switch (*clean) {
		case '&':
			fputs("&amp;", to);
			break;
		case '<':
			fputs("&lt;", to);
			break;
		case '>':
			fputs("&gt;", to);
			break;
		case '"':
			fputs("&quot;", to);
			break;
		case '\'':
			fputs("&#39;", to);
			break;
		default:
			fputc(*clean, to);
		}
	}
}

void html_text(struct html_out *h, const char *text)
{
	char *clean = cleaned(h, text);
	if (clean)
		escaped(h->to, clean);
	free(clean);
}

void html_text_cut(struct html_out *h, const char *text, int columns)
{
	char *clean = cleaned(h, text);
	if (!clean)
		return;
	size_t n = strlen(clean);
	const bool cut = text_columns(clean) > columns;
	while (cut && n > 0 && text_columns(clean) > columns - 1) { /* between characters */
		do
			n--;
		while (n > 0 && ((unsigned char)clean[n] & 0xC0) == 0x80);
		clean[n] = '\0';
	}
	escaped(h->to, clean);
	if (cut)
		fputs("\xE2\x80\xA6", h->to);
	free(clean);
}
