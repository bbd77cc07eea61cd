/* SPDX-License-Identifier: MIT
 * How targets and ephemerides lie in their rows; inside of db/ only. */
#ifndef WANE_DB_TARGET_ROWS_H
#define WANE_DB_TARGET_ROWS_H

#include "db/store_parts.h"
#include "db/targets.h"

/* Places of the cells; those of the fields follow the table of fields, a date takes two. */
enum {
	TARGET_KEY = 1,
	TARGET_FIELDS = 2,
	TARGET_EPHEMERIS = 33,
	TARGET_AS_READ,
	TARGET_DOUBTS,
	TARGET_REMOVED,
	TARGET_REV,
	TARGET_CHANGE,
	TARGET_CELLS
};
enum {
	EPHEMERIS_TARGET = 1,
	EPHEMERIS_VERSION = 2,
	EPHEMERIS_FIELDS = 3,
	EPHEMERIS_ENTERED = 16,
	EPHEMERIS_AS_READ,
	EPHEMERIS_DOUBTS,
	EPHEMERIS_REV,
	EPHEMERIS_CHANGE,
	EPHEMERIS_CELLS
};
enum { ALIAS_NAME = 1, ALIAS_KEY, ALIAS_TARGET, ALIAS_REMOVED, ALIAS_REV, ALIAS_CHANGE, ALIAS_CELLS };

extern const struct table target_table, ephemeris_table, alias_table;

/* Field values of t into cells, and back. Texts are borrowed. */
void cells_from_fields(const struct target *t, enum field_home home, struct cell *cell);
void fields_from_cells(const struct cell *cell, enum field_home home, struct target *t);

/* --- texts as they were read --- */
enum { AS_READ_MAX = 10240, DOUBT_TEXT_MAX = 256, ROW_TEXTS_ROOM = 16384 };
/* `field=text`, tab between, of the fields of one home whose text is not the shortest form of their value. */
void as_read_make(const struct field_texts *texts, const struct target *t, uint64_t doubts,
		  enum field_home home, char out[AS_READ_MAX]);
/* The text of one field in such a list; false when it isn't there. */
bool as_read_find(const char *as_read, int field, char out[DOUBT_TEXT_MAX]);

/* Texts of a whole row with room of its own. */
struct row_texts {
	struct field_texts texts;
	size_t used;
	char room[ROW_TEXTS_ROOM];
};
void row_texts_clear(struct row_texts *r);
/* Copies text[0..n), at most as many bytes as are kept of the field: true when it was cut. */
bool row_texts_put(struct row_texts *r, int field, const char *text, size_t n);
/* Puts the texts of a stored row of one home. */
void row_texts_of_cells(struct row_texts *r, const struct cell *cell, enum field_home home);

/* A row as it came in: texts trimmed, free texts cleaned, values read. */
struct reading {
	struct row_texts own;
	struct target t;      /* texts borrowed from own */
	uint64_t doubts, cut; /* bits by field */
};
MUST_USE enum status reading_make(const struct field_texts *texts, struct reading *r, int *bad_field,
				  struct err *e);
MUST_USE enum status reading_put(struct store *s, const struct reading *r, bool adopt,
				 enum put_result *result, struct err *e);

/* --- ephemerides.c --- */
bool texts_have(const struct field_texts *texts, enum field_home home);
/* Whether two rows say the same: values, doubts and the texts of what is doubtful. */
bool cells_same(const struct cell *a, const struct cell *b, size_t n);
bool doubts_same(uint64_t doubts, const char *as_read_a, const char *as_read_b);
/* The version of target_id that equals the reading, or a new one. *made tells which. */
MUST_USE enum status ephemeris_take(struct store *s, int64_t target_id, const struct reading *r, int64_t *id,
				    bool *made, struct err *e);
/* Only adds. */
MUST_USE enum status ephemeris_add(struct store *s, int64_t id, int64_t target_id, int64_t version,
				   const struct reading *r, struct err *e);

#endif
