/* SPDX-License-Identifier: MIT */
#include "db/text_clean.h"

#include "db/combining.h"

#include <stdbool.h>
#include <string.h>

size_t utf8_decode(const char *s, size_t n, uint32_t *cp)
{
	const unsigned char *b = (const unsigned char *)s;
	if (n == 0)
		return 0;
	if (b[0] < 0x80) {
		*cp = b[0];
		return 1;
	}
	size_t length = b[0] >= 0xF0 ? 4 : b[0] >= 0xE0 ? 3 : 2;
	if (b[0] < 0xC2 || b[0] > 0xF4 || n < length)
		return 0;
	uint32_t value = b[0] & (0xFFu >> (length + 1));
	for (size_t i = 1; i < length; i++) {
		if ((b[i] & 0xC0) != 0x80)
			return 0;
		value = value << 6 | (b[i] & 0x3Fu);
	}
	static const uint32_t least[5] = {0, 0, 0x80, 0x800, 0x10000};
	if (value < least[length] || value > 0x10FFFF || (value >= 0xD800 && value <= 0xDFFF))
		return 0;
	*cp = value;
	return length;
}

size_t utf8_encode(uint32_t cp, char out[4])
{
	if (cp < 0x80) {
		out[0] = (char)cp;
		return 1;
	}
	size_t length = cp < 0x800 ? 2 : cp < 0x10000 ? 3 : 4;
	static const uint32_t lead[5] = {0, 0, 0xC0, 0xE0, 0xF0};
	for (size_t i = length - 1; i > 0; i--) {
		out[i] = (char)(0x80 | (cp & 0x3F));
		cp >>= 6;
	}
	out[0] = (char)(lead[length] | cp);
	return length;
}

int codepoint_is_hostile(uint32_t cp)
{
	static const struct {
		uint32_t first, last;
	} spans[] = {
	    {0x00, 0x1F},	/* C0 */
	    {0x7F, 0x9F},	/* DEL, C1 */
	    {0xAD, 0xAD},	/* soft hyphen */
	    {0x34F, 0x34F},	/* grapheme joiner */
	    {0x61C, 0x61C},	/* Arabic letter mark */
	    {0x115F, 0x1160},	/* Hangul fillers: letters that show nothing */
	    {0x17B4, 0x17B5},	/* invisible Khmer vowels */
	    {0x180B, 0x180F},	/* Mongolian selectors */
	    {0x200B, 0x200F},	/* zero width, direction marks */
	    {0x2028, 0x202E},	/* line and paragraph separators, embeddings, overrides */
	    {0x2060, 0x206F},	/* word joiner, isolates, deprecated controls */
	    {0x3164, 0x3164},	/* Hangul filler */
	    {0xFDD0, 0xFDEF},	/* non-characters */
	    {0xFE00, 0xFE0F},	/* variation selectors */
	    {0xFEFF, 0xFEFF},	/* byte order mark */
	    {0xFFA0, 0xFFA0},	/* half-width Hangul filler */
	    {0xFFF0, 0xFFFB},	/* unassigned specials, interlinear controls */
	    {0x1BCA0, 0x1BCA3}, /* shorthand controls */
	    {0x1D173, 0x1D17A}, /* musical controls */
	    {0xE0000, 0xE0FFF}, /* tags, more selectors, default ignorable */
	};
	for (size_t i = 0; i < sizeof spans / sizeof spans[0]; i++)
		if (cp >= spans[i].first && cp <= spans[i].last)
			return 1;
	return (cp & 0xFFFE) == 0xFFFE || cp > 0x10FFFF;
}

void text_trim(const char **s, size_t *n)
{
	while (*n > 0 && (**s == ' ' || **s == '\t')) {
		(*s)++;
		(*n)--;
	}
	while (*n > 0 && ((*s)[*n - 1] == ' ' || (*s)[*n - 1] == '\t'))
		(*n)--;
}

/* Whether a character is dropped from a key. */
static bool joins_words(uint32_t cp)
{
	return cp == ' ' || cp == '-' || cp == '_' || cp == 0xA0 || (cp >= 0x2010 && cp <= 0x2015);
}

static enum status bad_character(struct err *e, size_t *bad_at, size_t at, uint32_t cp, const char *why)
{
	if (bad_at)
		*bad_at = at;
	return err_set(e, ST_SYNTAX, "a name can't hold U+%04X, %s, at byte %zu", (unsigned)cp, why, at + 1);
}

enum status name_check(const char *s, size_t n, size_t *bad_at, struct err *e)
{
	const char *start = s;
	size_t chars = 0, kept = 0;
	if (bad_at)
		*bad_at = 0;
	text_trim(&s, &n);
	for (size_t i = 0; i < n; chars++) {
		uint32_t cp;
		size_t at = (size_t)(s - start) + i, length = utf8_decode(s + i, n - i, &cp);
		if (chars == NAME_CHARS_MAX)
			return err_set(e, ST_SYNTAX, "a name has at most %d characters", (int)NAME_CHARS_MAX);
		if (length == 0) {
			if (bad_at)
				*bad_at = at;
			return err_set(e, ST_SYNTAX,
				       "a name has to be UTF-8: invalid byte 0x%02X at byte %zu",
				       (unsigned)(unsigned char)s[i], at + 1);
		}
		if (codepoint_is_hostile(cp))
			return bad_character(e, bad_at, at, cp, "control or invisible");
		if (chars == 0 && codepoint_combines(cp))
			return bad_character(e, bad_at, at, cp, "a mark with nothing under it");
		if (!joins_words(cp))
			kept++;
		i += length;
	}
	if (chars == 0)
		return err_set(e, ST_SYNTAX, "a name is needed");
	if (kept == 0)
		return err_set(e, ST_SYNTAX, "a name needs a letter or a digit");
	return ST_OK;
}

enum status text_check(const char *what, const char *s, size_t chars_max, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	size_t n = strlen(s), chars = 0;
	err_quote(s, n, got);
	for (size_t i = 0; i < n; chars++) {
		uint32_t cp;
		size_t length = utf8_decode(s + i, n - i, &cp);
		if (length == 0 || codepoint_is_hostile(cp))
			return err_set(
			    e, ST_SYNTAX,
			    "%s: a control, invisible or invalid character at byte %zu (got \"%s\", "
			    "expected printable characters)",
			    what, i + 1, got);
		i += length;
	}
	if (chars > chars_max)
		return err_set(e, ST_RANGE, "%s: too long (got \"%s\", expected at most %zu characters)",
			       what, got, chars_max);
	return ST_OK;
}

void name_key(const char *name, char out[NAME_KEY_MAX])
{
	size_t n = strlen(name), used = 0;
	for (size_t i = 0; i < n;) {
		uint32_t cp;
		size_t length = utf8_decode(name + i, n - i, &cp);
		if (length == 0) { /* never of a checked name */
			i++;
			continue;
		}
		if (!joins_words(cp) && used + length < NAME_KEY_MAX) {
			if (cp >= 'A' && cp <= 'Z')
				out[used] = (char)(cp + ('a' - 'A'));
			else
				memcpy(out + used, name + i, length);
			used += length;
		}
		i += length;
	}
	out[used] = '\0';
}

size_t text_clean(const char *s, char *out, size_t size)
{
	size_t n = strlen(s), used = 0;
	int marks = 2; /* as if a full base stood before the text: no leading mark */
	if (size == 0)
		return 0;
	for (size_t i = 0; i < n;) {
		uint32_t cp;
		size_t length = utf8_decode(s + i, n - i, &cp);
		i += length ? length : 1;
		if (length == 0)
			cp = 0xFFFD;
		else if (cp == '\t' || cp == '\n')
			cp = ' ';
		else if (codepoint_is_hostile(cp))
			continue;
		if (codepoint_combines(cp)) {
			if (marks >= 2)
				continue;
			marks++;
		} else {
			marks = 0;
		}
		char bytes[4];
		length = utf8_encode(cp, bytes);
		if (used + length >= size)
			break;
		memcpy(out + used, bytes, length);
		used += length;
	}
	out[used] = '\0';
	return used;
}
