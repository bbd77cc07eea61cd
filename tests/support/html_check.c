/* SPDX-License-Identifier: MIT */
#include "tests/support/html_check.h"

#include "tests/support/check.h"
#include "tui/sheets/html_escape.h"

#include <ctype.h>
#include <stdlib.h>
#include <string.h>

char *html_page_of(const struct plan_view *v, const struct sheet_changes *changes)
{
	char *text = NULL;
	size_t n = 0;
	FILE *file = open_memstream(&text, &n);
	assert_non_null(file);
	assert_true(plan_sheet_html(file, v, changes));
	fclose(file);
	return text;
}

void html_has(const char *text, const char *piece)
{
	if (!strstr(text, piece))
		check_fail("not on the page: %s", piece);
}

void html_has_not(const char *text, const char *piece)
{
	const char *at = strstr(text, piece);
	if (at)
		check_fail("on the page: %s in %.60s", piece, at);
}

void html_tells(const char *page, const char *plain)
{
	char *text = NULL;
	size_t n = 0;
	struct html_out out = {.to = open_memstream(&text, &n)};
	html_text(&out, plain);
	fclose(out.to);
	html_has(page, text);
	free(text);
}

int html_count(const char *text, const char *piece)
{
	int n = 0;
	for (const char *at = text; (at = strstr(at, piece)); at += strlen(piece))
		n++;
	return n;
}

char *html_part(const char *text, const char *from, const char *to)
{
	const char *a = strstr(text, from), *b = a ? strstr(a, to) : NULL;
	if (!b)
		check_fail("no part from %s to %s", from, to);
	return strndup(a, (size_t)(b - a));
}

/* --- is it well formed --- */

enum { TAGS_MAX = 64, TAG_BYTES = 16 };

/* A reference of those that the page uses; its length, 0 for none. */
static size_t reference(const char *at)
{
	static const char *const known[] = {"&amp;", "&lt;", "&gt;", "&quot;", "&#39;"};
	for (size_t i = 0; i < sizeof known / sizeof known[0]; i++)
		if (strncmp(at, known[i], strlen(known[i])) == 0)
			return strlen(known[i]);
	return 0;
}

/* One tag from its < on: checks its attributes (name="value"), gives its name; the place behind its >. */
static const char *read_tag(const char *at, char name[TAG_BYTES], bool *closes, bool *empty)
{
	const char *begin = at++;
	*closes = *at == '/';
	at += *closes;
	size_t n = 0;
	while (isalnum((unsigned char)*at) && n + 1 < TAG_BYTES)
		name[n++] = *at++;
	name[n] = '\0';
	if (n == 0)
		check_fail("no tag: %.60s", begin);
	while (*at == ' ') {
		while (isalpha((unsigned char)*++at) || *at == '-')
			;
		if (*at != '=')
			continue; /* open */
		if (at[1] != '"' || !(at = strchr(at + 2, '"')))
			check_fail("an attribute without quotes: %.80s", begin);
		at++;
	}
	*empty = *at == '/';
	at += *empty;
	if (*at != '>')
		check_fail("a tag that does not end: %.80s", begin);
	return at + 1;
}

static void assert_balanced(const char *text)
{
	char open[TAGS_MAX][TAG_BYTES], name[TAG_BYTES];
	size_t depth = 0;
	static const char doctype[] = "<!DOCTYPE html>\n";
	assert_int_equal(strncmp(text, doctype, strlen(doctype)), 0);
	for (const char *at = text + strlen(doctype); *at;) {
		if (*at == '&' && reference(at) == 0)
			check_fail("a bare &: %.60s", at);
		if (*at != '<') {
			at++;
			continue;
		}
		bool closes, empty;
		const char *begin = at;
		at = read_tag(at, name, &closes, &empty);
		if (closes) {
			if (depth == 0 || strcmp(open[--depth], name) != 0)
				check_fail("%s closes %s: %.60s", name, depth ? open[depth] : "nothing",
					   begin);
		} else if (!empty && strcmp(name, "meta") != 0) {
			assert_true(depth < TAGS_MAX);
			memcpy(open[depth++], name, TAG_BYTES);
		}
	}
	if (depth != 0)
		check_fail("%s stays open", open[depth - 1]);
}

/* Each id once; each #name that something points to is there. */
static void assert_linked(const char *text)
{
	for (const char *at = text; (at = strstr(at, " id=\"")); at++) {
		char id[64];
		snprintf(id, sizeof id, "%.*s", (int)strcspn(at + 5, "\"") + 6, at);
		if (html_count(text, id) != 1)
			check_fail("%s is there %d times", id, html_count(text, id));
	}
	static const char *const point[] = {"href=\"#", "url(#", "aria-labelledby=\""};
	for (size_t i = 0; i < sizeof point / sizeof point[0]; i++)
		for (const char *at = text; (at = strstr(at, point[i]));) {
			char id[64];
			at += strlen(point[i]);
			snprintf(id, sizeof id, " id=\"%.*s\"", (int)strcspn(at, " \")"), at);
			html_has(text, id);
		}
}

/* Headings go down one level at a time; the first is h1, and there is one of it. */
static void assert_headings(const char *text)
{
	int level = 0;
	for (const char *at = text; (at = strstr(at, "<h")); at++) {
		if (!isdigit((unsigned char)at[2]))
			continue;
		if (at[2] - '0' > level + 1)
			check_fail("h%c behind h%d: %.60s", at[2], level, at);
		level = at[2] - '0';
	}
	assert_int_equal(html_count(text, "<h1>"), 1);
}

static void assert_nothing_outside(const char *text)
{
	static const char *const no[] = {"http",    "<script", "src=",	"<link",       "<img",	"<iframe",
					 "<object", "@import", "data:", "url(\"",      "url('", "<a href=\"/",
					 "srcset",  "\x1b",    "\r",	"\xE2\x80\xAE"};
	for (size_t i = 0; i < sizeof no / sizeof no[0]; i++)
		html_has_not(text, no[i]);
	assert_int_equal(html_count(text, "url("), html_count(text, "url(#"));
	assert_int_equal(html_count(text, "href="), html_count(text, "href=\"#"));
	for (const char *at = text; (at = strstr(at, " on")); at++) {
		const char *c = at + 3;
		while (isalpha((unsigned char)*c))
			c++;
		if (c > at + 3 && *c == '=')
			check_fail("an action: %.40s", at);
	}
}

/* Nothing of the plan's texts is inside a tag. */
static void assert_no_data_in_tags(const char *text)
{
	static const char *const data[] = {"Tern",  "27",  "engineering", "x'",
					   "cloud", "ann", "Denver",	  "2026"};
	const char *body = strstr(text, "<body>");
	assert_non_null(body);
	for (const char *at = body; (at = strchr(at, '<')); at++) {
		const char *end = strchr(at, '>');
		char *tag = strndup(at, (size_t)(end - at));
		/* numbers of the drawings apart */
		const bool drawn = strstr(tag, " d=\"") || strstr(tag, " x=\"") || strstr(tag, " y=\"") ||
				   strstr(tag, "<svg") || strstr(tag, "item-");
		for (size_t i = 0; i < sizeof data / sizeof data[0]; i++)
			if (strstr(tag, data[i]) && !(drawn && isdigit((unsigned char)data[i][0])))
				check_fail("%s in a tag: %s", data[i], tag);
		free(tag);
	}
}

void html_sound(const char *text)
{
	assert_balanced(text);
	assert_linked(text);
	assert_headings(text);
	assert_nothing_outside(text);
	assert_no_data_in_tags(text);
	assert_int_equal(html_count(text, "<th "), html_count(text, " scope=\""));
	assert_int_equal(html_count(text, "<th>"), 0);
	assert_int_equal(html_count(text, "role=\"img\""), html_count(text, "</desc>"));
	html_has(text, "<html lang=\"en\">");
	html_has(text, "name=\"viewport\"");
}
