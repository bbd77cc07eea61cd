/* SPDX-License-Identifier: MIT */
#include "db/target_rows.h"

#include "db/text_clean.h"
#include "ephem/number_text.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

const struct table target_table = {
    .name = "target",
    .cells = TARGET_CELLS,
    .rev_at = TARGET_REV,
    .change_at = TARGET_CHANGE,
    .next = SQL_TARGET_NEXT,
    .add = SQL_TARGET_ADD,
    .update = SQL_TARGET_UPDATE,
    .keep_old = SQL_TARGET_KEEP_OLD,
};
/* append-only: there is nothing to update */
const struct table ephemeris_table = {
    .name = "ephemeris",
    .cells = EPHEMERIS_CELLS,
    .rev_at = EPHEMERIS_REV,
    .change_at = EPHEMERIS_CHANGE,
    .next = SQL_EPHEMERIS_NEXT,
    .add = SQL_EPHEMERIS_ADD,
    .update = SQL_COUNT,
    .keep_old = SQL_COUNT,
};
const struct table alias_table = {
    .name = "target_alias",
    .cells = ALIAS_CELLS,
    .rev_at = ALIAS_REV,
    .change_at = ALIAS_CHANGE,
    .next = SQL_ALIAS_NEXT,
    .add = SQL_ALIAS_ADD,
    .update = SQL_ALIAS_UPDATE,
    .keep_old = SQL_ALIAS_KEEP_OLD,
};

static const void *member(const struct target *t, int field)
{
	return (const char *)t + fields[field].offset;
}

void cells_from_fields(const struct target *t, enum field_home home, struct cell *cell)
{
	for (int i = 0; i < FIELD_COUNT; i++) {
		if (fields[i].home != home)
			continue;
		switch (fields[i].kind) {
		case FIELD_NAME:
		case FIELD_TEXT:
		case FIELD_SCALE:
			*cell++ = cell_text(*(const char *const *)member(t, i));
			break;
		case FIELD_DATE:
			*cell++ = cell_real(t->t0.day);
			*cell++ = cell_real(t->t0.frac);
			break;
		case FIELD_NUMBER:
		case FIELD_RA:
		case FIELD_DEC:
			*cell++ = cell_real(*(const double *)member(t, i));
			break;
		}
	}
}

void fields_from_cells(const struct cell *cell, enum field_home home, struct target *t)
{
	for (int i = 0; i < FIELD_COUNT; i++) {
		if (fields[i].home != home)
			continue;
		char *at = (char *)t + fields[i].offset;
		switch (fields[i].kind) {
		case FIELD_NAME:
		case FIELD_TEXT:
		case FIELD_SCALE: {
			const char *text = cell->type == CELL_TEXT ? cell->u.text : "";
			memcpy(at, &text, sizeof text);
			break;
		}
		case FIELD_DATE:
			t->t0 = (struct jd2){cell_number(cell), cell_number(cell + 1)};
			cell++;
			break;
		case FIELD_NUMBER:
		case FIELD_RA:
		case FIELD_DEC: {
			double value = cell_number(cell);
			memcpy(at, &value, sizeof value);
			break;
		}
		}
		cell++;
	}
}

/* --- texts as they were read --- */

static bool is_number(int field)
{
	enum field_kind kind = fields[field].kind;
	return kind == FIELD_NUMBER || kind == FIELD_DATE || kind == FIELD_RA || kind == FIELD_DEC;
}

/* A text that was meant as a number and is none, fit to be kept: what is not printable becomes `?`, so that
 * it never turns into a number by losing a character. */
static void printable(const char *text, char out[DOUBT_TEXT_MAX])
{
	size_t n = strlen(text), used = 0;
	for (size_t i = 0; i < n;) {
		uint32_t cp;
		size_t length = utf8_decode(text + i, n - i, &cp);
		bool good = length > 0 && !codepoint_is_hostile(cp);
		size_t bytes = good ? length : 1;
		if (used + bytes >= DOUBT_TEXT_MAX)
			break;
		if (good)
			memcpy(out + used, text + i, length);
		else
			out[used] = '?';
		used += bytes;
		i += length ? length : 1;
	}
	out[used] = '\0';
}

void as_read_make(const struct field_texts *texts, const struct target *t, uint64_t doubts,
		  enum field_home home, char out[AS_READ_MAX])
{
	size_t used = 0;
	out[0] = '\0';
	for (int i = 0; i < FIELD_COUNT; i++) {
		if (fields[i].home != home || !is_number(i) || !*texts->text[i])
			continue;
		char text[DOUBT_TEXT_MAX], shortest[NUMBER_TEXT_MAX];
		if (!(doubts >> i & 1)) {
			field_text(t, i, shortest, sizeof shortest);
			if (strcmp(shortest, texts->text[i]) == 0)
				continue;
		}
		printable(texts->text[i], text);
		int n = snprintf(out + used, AS_READ_MAX - used, "%s%s=%s", used ? "\t" : "", fields[i].name,
				 text);
		if (n > 0 && used + (size_t)n < AS_READ_MAX)
			used += (size_t)n;
	}
	out[used] = '\0';
}

bool as_read_find(const char *as_read, int field, char out[DOUBT_TEXT_MAX])
{
	const char *name = fields[field].name;
	size_t length = strlen(name);
	for (const char *at = as_read; *at;) {
		size_t n = strcspn(at, "\t");
		if (n > length && strncmp(at, name, length) == 0 && at[length] == '=') {
			snprintf(out, DOUBT_TEXT_MAX, "%.*s", (int)(n - length - 1), at + length + 1);
			return true;
		}
		at += n + (at[n] == '\t');
	}
	return false;
}

void row_texts_clear(struct row_texts *r)
{
	r->used = 0;
	for (int i = 0; i < FIELD_COUNT; i++)
		r->texts.text[i] = "";
}

/* Bytes kept of a field as it came in: a name or number that is longer is refused anyway. */
static size_t bytes_kept(int field)
{
	return fields[field].kind == FIELD_NAME	  ? 1000
	       : fields[field].kind == FIELD_TEXT ? field_text_max(field)
						  : DOUBT_TEXT_MAX - 1;
}

bool row_texts_put(struct row_texts *r, int field, const char *text, size_t n)
{
	bool cut = n > bytes_kept(field);
	if (cut)
		n = bytes_kept(field);
	if (r->used + n + 1 > sizeof r->room) {
		r->texts.text[field] = "";
		return true;
	}
	char *start = r->room + r->used;
	memcpy(start, text, n);
	start[n] = '\0';
	r->texts.text[field] = start;
	r->used += n + 1;
	return cut;
}

void row_texts_of_cells(struct row_texts *r, const struct cell *cell, enum field_home home)
{
	struct target t = target_empty();
	const char *as_read = cell[home == HOME_TARGET ? TARGET_AS_READ : EPHEMERIS_AS_READ].u.text;
	fields_from_cells(cell + (home == HOME_TARGET ? TARGET_FIELDS : EPHEMERIS_FIELDS), home, &t);
	for (int i = 0; i < FIELD_COUNT; i++) {
		char text[FIELD_NOTE_MAX + 1];
		if (fields[i].home != home)
			continue;
		if (!is_number(i) || !as_read_find(as_read, i, text))
			field_text(&t, i, text, sizeof text);
		(void)row_texts_put(r, i, text, strlen(text));
	}
}

/* --- a row as it comes in --- */

static bool take_text(struct row_texts *own, int field, const char *text)
{
	size_t n = strlen(text);
	if (fields[field].kind != FIELD_TEXT) {
		text_trim(&text, &n);
		(void)row_texts_put(own, field, text, n);
		return false;
	}
	/* one byte more than is kept shows that there was more */
	char clean[FIELD_NOTE_MAX + 8];
	n = text_clean(text, clean, field_text_max(field) + 6);
	const char *start = clean;
	text_trim(&start, &n);
	bool cut = n > field_text_max(field);
	if (cut) {
		n = field_text_max(field);
		while (n > 0 && ((unsigned char)start[n] & 0xC0) == 0x80)
			n--;
	}
	(void)row_texts_put(own, field, start, n);
	return cut;
}

enum status reading_make(const struct field_texts *texts, struct reading *r, int *bad_field, struct err *e)
{
	row_texts_clear(&r->own);
	r->cut = 0;
	for (int i = 0; i < FIELD_COUNT; i++)
		if (*texts->text[i] && take_text(&r->own, i, texts->text[i]))
			r->cut |= UINT64_C(1) << i;
	return fields_read(&r->own.texts, &r->t, &r->doubts, bad_field, e);
}
