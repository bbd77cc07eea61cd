/* SPDX-License-Identifier: MIT */
#include "ephem/err.h"

#include <stdarg.h>
#include <stdbool.h>
#include <stdio.h>
#include <string.h>

enum status err_set(struct err *e, enum status s, const char *format, ...)
{
	if (!e)
		return s;
	e->status = s;
	va_list list;
	va_start(list, format);
	if (vsnprintf(e->text, sizeof e->text, format, list) < 0)
		e->text[0] = '\0';
	va_end(list);
	/* one line, whatever the arguments held */
	for (char *c = e->text; *c; c++)
		if (*c == '\n' || *c == '\r')
			*c = ' ';
	return s;
}

void err_clear(struct err *e)
{
	if (!e)
		return;
	e->status = ST_OK;
	e->text[0] = '\0';
}

/* Bytes of the valid UTF-8 character at the start of s[0..n), 0 when there is none; the code point goes to
 * *point. Overlong forms, surrogates and values above U+10FFFF are not valid (RFC 3629). */
static size_t utf8_at(const unsigned char *s, size_t n, unsigned *point)
{
	static const unsigned least[5] = {0, 0, 0x80, 0x800, 0x10000};
	size_t length = s[0] < 0x80		      ? 1
			: s[0] >= 0xF0 && s[0] < 0xF5 ? 4
			: s[0] >= 0xE0 && s[0] < 0xF0 ? 3
						      : 2;
	if (s[0] >= 0x80 && (s[0] < 0xC2 || s[0] >= 0xF5))
		return 0;
	if (length > n)
		return 0;
	unsigned p = length == 1 ? s[0] : s[0] & (0xFFu >> (length + 1));
	for (size_t i = 1; i < length; i++) {
		if ((s[i] & 0xC0) != 0x80)
			return 0;
		p = p << 6 | (s[i] & 0x3Fu);
	}
	if (p < least[length] || p > 0x10FFFF || (p >= 0xD800 && p < 0xE000))
		return 0;
	*point = p;
	return length;
}

/* Characters that must not reach a terminal as they are: controls, bidirectional and zero-width marks, odd
 * blanks. */
static bool shown_by_number(unsigned p)
{
	return p < 0x20 || (p >= 0x7F && p <= 0xA0) || p == 0xAD || p == 0x61C ||
	       (p >= 0x2000 && p <= 0x200F) || (p >= 0x2028 && p <= 0x202F) || (p >= 0x205F && p <= 0x206F) ||
	       p == 0x3000 || p == 0xFEFF || p >= 0xE0000;
}

void err_quote(const char *text, size_t n, char out[ERR_QUOTE_MAX])
{
	const unsigned char *s = (const unsigned char *)text;
	const size_t room = ERR_QUOTE_MAX - 4; /* "..." and the end */
	size_t used = 0, i = 0;
	while (i < n) {
		char piece[16];
		unsigned point = 0;
		size_t step = utf8_at(s + i, n - i, &point);
		if (step == 0)
			snprintf(piece, sizeof piece, "\\x%02x", s[i]);
		else if (point < 0x80 && shown_by_number(point))
			snprintf(piece, sizeof piece, "\\x%02x", point);
		else if (shown_by_number(point))
			snprintf(piece, sizeof piece, "U+%04X", point);
		else {
			memcpy(piece, s + i, step);
			piece[step] = '\0';
		}
		size_t length = strlen(piece);
		if (used + length > room) {
			memcpy(out + used, "...", 3);
			used += 3;
			break;
		}
		memcpy(out + used, piece, length);
		used += length;
		i += step ? step : 1;
	}
	out[used] = '\0';
}
