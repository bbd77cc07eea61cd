/* SPDX-License-Identifier: MIT
 * Status and message of an operation that can fail. No printing, no abort, no globals: the caller owns the struct. */
#ifndef WANE_EPHEM_ERR_H
#define WANE_EPHEM_ERR_H

#include <stddef.h>

#define MUST_USE __attribute__((warn_unused_result))

enum status {
	ST_OK = 0,
	ST_RANGE = -1,    /* a number outside what is possible or accepted */
	ST_SYNTAX = -2,   /* text that is not what was expected */
	ST_STORE = -3,    /* the database refused or is damaged */
	ST_MEMORY = -4,   /* no memory */
	ST_IO = -5,       /* a file could not be read or written */
	ST_ABSENT = -6,   /* the thing asked for does not exist */
	ST_CONFLICT = -7, /* somebody else changed it meanwhile, or it exists already */
};

struct err {
	enum status status;
	char text[512]; /* one line, no newline: what, the value with its unit, what would be right */
};

/* Fills *e (may be NULL) and returns s, so that an error is reported and returned in one statement.
 * Text longer than the buffer is cut. */
enum status err_set(struct err *e, enum status s, const char *format, ...)
	__attribute__((format(printf, 3, 4)));

/* A piece of input as it may stand in a message: control, bidirectional, zero-width and invalid bytes as \x1b or U+202E, cut to
 * the buffer with "..." behind. */
enum { ERR_QUOTE_MAX = 72 };
void err_quote(const char *text, size_t n, char out[ERR_QUOTE_MAX]);

/* Empties *e (status ST_OK, empty text). */
void err_clear(struct err *e);

#endif
