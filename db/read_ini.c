/* SPDX-License-Identifier: MIT */
#include "db/read_ini.h"

#include "db/read_csv.h"
#include "db/text_clean.h"

#include <stdbool.h>
#include <stdlib.h>
#include <string.h>

enum { LOOK_BYTES = 16 }; /* of a file that is no text, shown in the message */

/* The texts of one line, as places in the data; a value that was quoted is unquoted into the block. */
struct line {
	const char *s;
	size_t n;
	long number;
};

struct parser {
	struct ini *out;
	size_t room, section_room;
	char *next; /* free place in the block */
	const char *section;
	long *line, *column;
	struct err *e;
};

static bool blank(char c)
{
	return c == ' ' || c == '\t';
}

/* What is wrong at a place of a line; got: the line from `from` on. */
static enum status fault(struct parser *p, const struct line *l, size_t at, size_t from, const char *why,
			 const char *expected)
{
	char got[ERR_QUOTE_MAX];
	*p->line = l->number;
	*p->column = (long)at + 1;
	err_quote(l->s + from, l->n - from, got);
	return err_set(p->e, ST_SYNTAX, "%s (got \"%s\", expected %s)", why, got, expected);
}

static const char *copy(struct parser *p, const char *s, size_t n)
{
	char *start = p->next;
	memcpy(start, s, n);
	start[n] = '\0';
	p->next += n + 1;
	return start;
}

static bool word_char(char c)
{
	return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') || c == '_' ||
	       c == '-' || c == '.';
}

static enum status add_section(struct parser *p, struct ini_section section)
{
	struct ini *out = p->out;
	if (out->n_sections == p->section_room) {
		size_t room = p->section_room ? 2 * p->section_room : 8;
		struct ini_section *list = realloc(out->section, room * sizeof *list);
		if (!list)
			return err_set(p->e, ST_MEMORY, "no memory for settings");
		out->section = list;
		p->section_room = room;
	}
	out->section[out->n_sections++] = section;
	return ST_OK;
}

static enum status read_section(struct parser *p, const struct line *l, size_t at)
{
	size_t from = at + 1, to = from;
	while (to < l->n && l->s[to] != ']')
		to++;
	if (to == l->n)
		return fault(p, l, at, at, "section: never closed", "[name]");
	size_t rest = to + 1;
	while (rest < l->n && blank(l->s[rest]))
		rest++;
	if (rest < l->n)
		return fault(p, l, rest, rest, "section: text behind it", "the end of the line");
	const char *name = l->s + from;
	size_t n = to - from;
	text_trim(&name, &n);
	if (n == 0)
		return fault(p, l, at, at, "section: no name", "[name]");
	p->section = copy(p, name, n);
	return add_section(p, (struct ini_section){p->section, l->number, (long)(name - l->s) + 1});
}

/* The quoted value that starts at `at`; *value into the block. */
static enum status read_quoted(struct parser *p, const struct line *l, size_t at, const char **value)
{
	size_t i = at + 1;
	char *start = p->next;
	for (; i < l->n && l->s[i] != '"'; i++) {
		if (l->s[i] == '\\') {
			if (i + 1 == l->n || (l->s[i + 1] != '"' && l->s[i + 1] != '\\'))
				return fault(p, l, i, i, "value: a backslash before another character",
					     "\\\" or \\\\");
			i++;
		}
		*p->next++ = l->s[i];
	}
	if (i == l->n)
		return fault(p, l, at, at, "value: the quote is never closed", "a closing quote");
	for (i++; i < l->n; i++)
		if (!blank(l->s[i]))
			return fault(p, l, i, i, "value: text after the closing quote",
				     "the end of the line");
	*p->next++ = '\0';
	*value = start;
	return ST_OK;
}

static enum status add_entry(struct parser *p, const struct line *l, struct ini_entry entry)
{
	struct ini *out = p->out;
	for (size_t i = 0; i < out->n; i++)
		if (strcmp(out->entry[i].section, entry.section) == 0 &&
		    strcmp(out->entry[i].key, entry.key) == 0) {
			*p->line = l->number;
			*p->column = entry.key_column;
			return err_set(p->e, ST_SYNTAX,
				       "%.60s: given twice (got \"%.60s\", expected each key once; it stands "
				       "in line %ld)",
				       entry.key, entry.key, out->entry[i].line);
		}
	if (out->n == p->room) {
		size_t room = p->room ? 2 * p->room : 32;
		struct ini_entry *list = realloc(out->entry, room * sizeof *list);
		if (!list)
			return err_set(p->e, ST_MEMORY, "no memory for settings");
		out->entry = list;
		p->room = room;
	}
	out->entry[out->n++] = entry;
	return ST_OK;
}

static enum status read_pair(struct parser *p, const struct line *l, size_t at)
{
	struct ini_entry entry = {.section = p->section, .line = l->number, .key_column = (long)at + 1};
	size_t end = at;
	while (end < l->n && word_char(l->s[end]))
		end++;
	if (end == at)
		return fault(p, l, at, at, "row: no key", "key = value, [section] or a comment");
	entry.key = copy(p, l->s + at, end - at);
	while (end < l->n && blank(l->s[end]))
		end++;
	if (end == l->n || l->s[end] != '=')
		return fault(p, l, end, at, "key: no = behind it", "key = value");
	for (end++; end < l->n && blank(l->s[end]); end++)
		;
	entry.value_column = (long)end + 1;
	if (end < l->n && l->s[end] == '"') {
		enum status s = read_quoted(p, l, end, &entry.value);
		if (s != ST_OK)
			return s;
	} else {
		const char *value = l->s + end;
		size_t n = l->n - end;
		text_trim(&value, &n);
		entry.value = copy(p, value, n);
	}
	return add_entry(p, l, entry);
}

static enum status read_line(struct parser *p, const struct line *l)
{
	for (size_t i = 0; i < l->n;) {
		uint32_t cp;
		size_t length = utf8_decode(l->s + i, l->n - i, &cp);
		if (length == 0)
			return fault(p, l, i, i, "row: not UTF-8", "UTF-8 text");
		if (cp != '\t' && codepoint_is_hostile(cp))
			return fault(p, l, i, i, "row: a control or invisible character", "text");
		i += length;
	}
	size_t at = 0;
	while (at < l->n && blank(l->s[at]))
		at++;
	if (at == l->n || l->s[at] == '#' || l->s[at] == ';')
		return ST_OK;
	return l->s[at] == '[' ? read_section(p, l, at) : read_pair(p, l, at);
}

enum status ini_parse(const char *data, size_t n, struct ini *out, long *line, long *column, struct err *e)
{
	*out = (struct ini){0};
	*line = *column = 1;
	const char *looks = n ? file_looks_like(data, n) : NULL;
	if (looks) {
		char got[ERR_QUOTE_MAX];
		err_quote(data, n < LOOK_BYTES ? n : LOOK_BYTES, got);
		return err_set(e, ST_SYNTAX, "file: %s (got \"%s\", expected settings as text)", looks, got);
	}
	if (n >= 3 && memcmp(data, "\xEF\xBB\xBF", 3) == 0) {
		data += 3;
		n -= 3;
	}
	/* a text and its end take at most one byte more than in the file, and `=`, brackets or the line end
	 * pay for it */
	out->block = malloc(2 * n + 2);
	if (!out->block)
		return err_set(e, ST_MEMORY, "no memory for settings");
	struct parser p = {
	    .out = out, .next = out->block, .section = "", .line = line, .column = column, .e = e};
	enum status s = ST_OK;
	struct line l = {.s = data, .number = 1};
	for (size_t i = 0; s == ST_OK && i < n;) {
		l.s = data + i;
		for (l.n = 0; i < n && data[i] != '\n' && data[i] != '\r'; i++)
			l.n++;
		s = read_line(&p, &l);
		if (i < n && data[i] == '\r' && i + 1 < n && data[i + 1] == '\n')
			i++;
		i++;
		l.number++;
	}
	if (s != ST_OK)
		ini_free(out);
	return s;
}

void ini_free(struct ini *ini)
{
	free(ini->entry);
	free(ini->section);
	free(ini->block);
	*ini = (struct ini){0};
}
