/* SPDX-License-Identifier: MIT */
#include "db/read_mask.h"

#include "db/read_csv.h"
#include "db/text_clean.h"
#include "ephem/number_text.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { CELLS = 2, LOOK_BYTES = 16 /* of a file that is no text, shown in the message */ };
static const char *const cell_words[CELLS] = {"az_deg", "alt_deg"};
static const struct {
	double min, max;
} ranges[CELLS] = {{0.0, 360.0}, {-10.0, 90.0}};

/* One line of the file: its cells, blanks around them left out. */
struct line {
	const char *start;
	long number;
	size_t n; /* cells */
	struct {
		const char *text;
		size_t length;
	} cell[CELLS + 1];
};

static enum status refuse(const char *name, const struct line *l, const char *at, enum status s,
			  const char *why, struct err *e)
{
	return err_set(e, s, "%.200s:%ld:%ld: %.280s", name, l->number, (long)(at - l->start) + 1, why);
}

static bool blank(char c)
{
	return c == ' ' || c == '\t' || c == '\r';
}

/* What separates the cells of text[0..n): the first that stands there of semicolon, comma; else blanks. */
static char separator(const char *text, size_t n)
{
	return memchr(text, ';', n) ? ';' : memchr(text, ',', n) ? ',' : ' ';
}

/* Cuts text[0..n) into cells: at most one more than belongs there. */
static void cut(struct line *l, const char *text, size_t n)
{
	const char between = separator(text, n), *end = text + n;
	l->n = 0;
	while (l->n <= CELLS && text < end) {
		while (text < end && blank(*text))
			text++;
		const char *start = text;
		while (text < end && (between == ' ' ? !blank(*text) : *text != between))
			text++;
		size_t length = (size_t)(text - start);
		while (length > 0 && blank(start[length - 1]))
			length--;
		/* blanks at the end of a line begin no cell */
		if (between != ' ' || length > 0) {
			l->cell[l->n].text = start;
			l->cell[l->n++].length = length;
		}
		if (text < end)
			text++;
	}
}

static bool is_word(const char *text, size_t n, const char *word)
{
	if (strlen(word) != n)
		return false;
	for (size_t i = 0; i < n; i++)
		if ((text[i] >= 'A' && text[i] <= 'Z' ? text[i] - 'A' + 'a' : text[i]) != word[i])
			return false;
	return true;
}

static bool is_header(const struct line *l)
{
	return l->n == CELLS && is_word(l->cell[0].text, l->cell[0].length, cell_words[0]) &&
	       is_word(l->cell[1].text, l->cell[1].length, cell_words[1]);
}

static enum status read_cell(const char *name, const struct line *l, int i, double *value, struct err *e)
{
	char why[ERR_QUOTE_MAX + 300], got[ERR_QUOTE_MAX];
	size_t at = 0;
	struct err inner;
	const char *text = l->cell[i].text;
	enum status s = number_parse(text, l->cell[i].length, value, &at, &inner);
	if (s != ST_OK) {
		snprintf(why, sizeof why, "%s: %.280s", cell_words[i], inner.text);
		return refuse(name, l, text + at, s, why, e);
	}
	if (*value >= ranges[i].min && *value <= ranges[i].max)
		return ST_OK;
	err_quote(text, l->cell[i].length, got);
	snprintf(why, sizeof why, "%s: out of range (got \"%s\", expected %g to %g deg)", cell_words[i], got,
		 ranges[i].min, ranges[i].max);
	return refuse(name, l, text, ST_RANGE, why, e);
}

static enum status read_point(const char *name, const struct line *l, struct mask *out, double *az_deg,
			      struct err *e)
{
	double alt_deg = 0.0;
	char why[ERR_QUOTE_MAX + 300], got[ERR_QUOTE_MAX];
	struct err inner;
	if (l->n != CELLS) {
		const char *at = l->cell[l->n > CELLS ? CELLS : 0].text;
		size_t length = l->cell[l->n > CELLS ? CELLS : 0].length;
		err_quote(at, length, got);
		snprintf(why, sizeof why, "row: %s (got \"%s\", expected az_deg, alt_deg)",
			 l->n > CELLS ? "more than two cells" : "one cell only", got);
		return refuse(name, l, at, ST_SYNTAX, why, e);
	}
	enum status s = read_cell(name, l, 0, az_deg, e);
	if (s == ST_OK)
		s = read_cell(name, l, 1, &alt_deg, e);
	if (s != ST_OK)
		return s;
	s = mask_add(out, *az_deg, alt_deg, &inner);
	if (s == ST_OK)
		return ST_OK;
	err_quote(l->cell[0].text, l->cell[0].length, got);
	snprintf(why, sizeof why, "row: %.240s (got \"%s\")", inner.text, got);
	return refuse(name, l, l->cell[0].text, ST_RANGE, why, e);
}

/* data without a byte-order mark. */
static enum status read_lines(const char *name, const char *data, size_t n, struct mask *out, bool *unsorted,
			      struct err *e)
{
	struct line l = {.start = data};
	double before_deg = -1.0;
	bool first = true;
	enum status s = ST_OK;
	for (size_t at = 0; s == ST_OK && at < n;) {
		const char *text = data + at;
		const char *newline = memchr(text, '\n', n - at);
		size_t length = newline ? (size_t)(newline - text) : n - at;
		at += length + 1;
		l.start = text;
		l.number++;
		const char *nul = memchr(text, '\0', length);
		if (nul)
			return refuse(name, &l, nul, ST_SYNTAX,
				      "row: a NUL byte (got \"\\x00\", expected text)", e);
		const char *comment = memchr(text, '#', length);
		cut(&l, text, comment ? (size_t)(comment - text) : length);
		if (l.n == 0 || (l.n == 1 && l.cell[0].length == 0))
			continue;
		bool header = first && is_header(&l);
		first = false;
		if (header)
			continue;
		double az_deg = 0.0;
		s = read_point(name, &l, out, &az_deg, e);
		*unsorted = *unsorted || az_deg < before_deg;
		before_deg = az_deg;
	}
	if (s == ST_OK && out->n == 0)
		s = err_set(e, ST_SYNTAX,
			    "%.200s:%ld:1: row: no point of a horizon mask (got \"\", expected lines of "
			    "az_deg, alt_deg)",
			    name, l.number > 0 ? l.number : 1);
	return s;
}

enum status mask_parse(const char *name, const char *data, size_t n, struct mask *out, bool *unsorted,
		       struct err *e)
{
	const char *looks = n > 0 ? file_looks_like(data, n) : NULL;
	*out = (struct mask){.n = 0};
	*unsorted = false;
	if (looks) {
		char got[ERR_QUOTE_MAX];
		err_quote(data, n < LOOK_BYTES ? n : LOOK_BYTES, got);
		return err_set(e, ST_SYNTAX, "%.200s:1:1: file: %s (got \"%s\", expected a horizon mask)",
			       name, looks, got);
	}
	size_t mark = n >= 3 && memcmp(data, "\xEF\xBB\xBF", 3) == 0 ? 3 : 0;
	return read_lines(name, n > 0 ? data + mark : "", n - mark, out, unsorted, e);
}

enum status mask_read(const char *path, struct mask *out, bool *unsorted, struct err *e)
{
	char *data = NULL;
	size_t n = 0;
	*out = (struct mask){.n = 0};
	*unsorted = false;
	enum status s = file_read(path, &data, &n, e);
	if (s != ST_OK)
		return s;
	s = mask_parse(strcmp(path, "-") == 0 ? "standard input" : path, data, n, out, unsorted, e);
	free(data);
	return s;
}

/* --- as it is stored --- */

_Static_assert(MASK_KNOTS_MAX * 2 * 26 < MASK_TEXT_MAX, "a number has at most 24 characters");

void mask_text(const struct mask *m, char out[MASK_TEXT_MAX])
{
	size_t used = 0;
	out[0] = '\0';
	for (size_t i = 0; i < m->n; i++) {
		char az[NUMBER_TEXT_MAX], alt[NUMBER_TEXT_MAX];
		number_text(m->knot[i].az_deg, az);
		number_text(m->knot[i].alt_deg + 0.0, alt); /* no -0 */
		int n = snprintf(out + used, MASK_TEXT_MAX - used, "%s%s %s", used ? ";" : "", az, alt);
		if (n > 0 && (size_t)n < MASK_TEXT_MAX - used)
			used += (size_t)n;
	}
	out[used] = '\0';
}

enum status mask_of_text(const char *text, struct mask *out, struct err *e)
{
	*out = (struct mask){.n = 0};
	for (const char *at = text; *at;) {
		size_t point = strcspn(at, ";"), az = strcspn(at, " ;");
		double az_deg, alt_deg;
		enum status s = number_parse(at, az, &az_deg, NULL, e);
		if (s == ST_OK)
			s = number_parse(at + az, point - az, &alt_deg, NULL, e);
		if (s == ST_OK)
			s = mask_add(out, az_deg, alt_deg, e);
		if (s != ST_OK)
			return s;
		at += point + (at[point] == ';');
	}
	return ST_OK;
}
