/* SPDX-License-Identifier: MIT */
#include "tui/sheets/json.h"

#include "db/text_clean.h"
#include "ephem/number_text.h"

#include <string.h>

struct json json_begin(FILE *file)
{
	return (struct json){.file = file};
}

static void indent(const struct json *j)
{
	fputc('\n', j->file);
	for (int i = 0; i < j->depth; i++)
		fputs("  ", j->file);
}

/* UTF-8 as it is; quotes, backslashes and what could act on a terminal (controls, bidirectional and
 * zero-width characters) escaped, so that nothing is lost; bytes that are no UTF-8 become U+FFFD. */
static void put_string(const struct json *j, const char *text)
{
	size_t n = strlen(text);
	fputc('"', j->file);
	for (size_t i = 0; i < n;) {
		uint32_t cp;
		size_t length = utf8_decode(text + i, n - i, &cp);
		if (length == 0) {
			fputs("\xEF\xBF\xBD", j->file);
			i++;
			continue;
		}
		if (cp == '"' || cp == '\\')
			fprintf(j->file, "\\%c", (char)cp);
		else if (cp > 0xFFFF && codepoint_is_hostile(cp)) /* a surrogate pair, RFC 8259 sec. 7 */
			fprintf(j->file, "\\u%04x\\u%04x", (unsigned)(0xD800 + ((cp - 0x10000) >> 10)),
				(unsigned)(0xDC00 + (cp & 0x3FF)));
		else if (cp < 0x20 || codepoint_is_hostile(cp))
			fprintf(j->file, "\\u%04x", (unsigned)cp);
		else
			fwrite(text + i, 1, length, j->file);
		i += length;
	}
	fputc('"', j->file);
}

static void begin(struct json *j, const char *key)
{
	if (j->depth > 0) {
		if (j->has_items[j->depth])
			fputc(',', j->file);
		if (!j->compact[j->depth])
			indent(j);
		else if (j->has_items[j->depth])
			fputc(' ', j->file);
		j->has_items[j->depth] = true;
	}
	if (key) {
		put_string(j, key);
		fputs(": ", j->file);
	}
}

void json_open(struct json *j, const char *key, char bracket, bool compact)
{
	begin(j, key);
	fputc(bracket, j->file);
	if (j->depth + 1 < JSON_DEPTH_MAX)
		j->depth++;
	j->has_items[j->depth] = false;
	j->compact[j->depth] = compact;
}

void json_close(struct json *j, char bracket)
{
	bool broken = j->has_items[j->depth] && !j->compact[j->depth];
	j->depth--;
	if (broken)
		indent(j);
	fputc(bracket, j->file);
}

void json_text(struct json *j, const char *key, const char *text)
{
	begin(j, key);
	put_string(j, text);
}

void json_digits(struct json *j, const char *key, const char *digits)
{
	begin(j, key);
	fputs(digits[0] ? digits : "null", j->file);
}

void json_number(struct json *j, const char *key, double value, int decimals)
{
	char digits[NUMBER_TEXT_MAX];
	number_text_fixed(value, decimals, digits);
	json_digits(j, key, digits);
}

void json_exact(struct json *j, const char *key, double value)
{
	char digits[NUMBER_TEXT_MAX];
	number_text(value, digits);
	json_digits(j, key, digits);
}

void json_whole(struct json *j, const char *key, long value)
{
	begin(j, key);
	fprintf(j->file, "%ld", value);
}

void json_bool(struct json *j, const char *key, bool value)
{
	begin(j, key);
	fputs(value ? "true" : "false", j->file);
}

void json_null(struct json *j, const char *key)
{
	begin(j, key);
	fputs("null", j->file);
}

void json_end(struct json *j)
{
	fputc('\n', j->file);
}

static size_t digits_at(const char *s)
{
	size_t n = 0;
	while (s[n] >= '0' && s[n] <= '9')
		n++;
	return n;
}

bool json_is_number(const char *s)
{
	if (*s == '-')
		s++;
	size_t n = digits_at(s);
	if (n == 0 || (n > 1 && *s == '0'))
		return false;
	s += n;
	if (*s == '.') {
		n = digits_at(++s);
		if (n == 0)
			return false;
		s += n;
	}
	if (*s == 'e' || *s == 'E') {
		s++;
		if (*s == '+' || *s == '-')
			s++;
		n = digits_at(s);
		if (n == 0)
			return false;
		s += n;
	}
	return *s == '\0';
}
