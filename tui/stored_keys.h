/* SPDX-License-Identifier: MIT
 * Settings that change results and lie in the store, in one table: name, range, what holds where none is
 * stored, a sentence. Those of a site have keys of their own (run_half_key and its like) and are no rows of
 * it. */
#ifndef WANE_TUI_STORED_KEYS_H
#define WANE_TUI_STORED_KEYS_H

#include "db/store.h"
#include "ephem/err.h"

#include <stdbool.h>

enum stored_key {
	KEY_NEED_MIN,
	KEY_WORTH_BY,
	KEY_FALLBACK_BITS,
	KEY_LIMB_SHARE,
	KEY_SHORT_SHARE,
	KEY_UNKNOWN_SHARE,
	KEY_AFTER_DATE,
	KEY_AFTER_YEARS,
	KEY_SYSTEMATIC_FLOOR_S,
	KEY_MOVED_MIN,
	KEY_COUNT
};
enum stored_kind { STORED_NUMBER, STORED_WORD, STORED_DATE };
struct stored_key_rule {
	const char *name, *unit;
	enum stored_kind kind;
	double min, max; /* of a number */
	double fallback; /* NAN: none */
	const char *sentence;
};
extern const struct stored_key_rule stored_key_rules[KEY_COUNT];

/* A value as a number: a word's place among the words of its key, a date's MJD (NAN none). */
struct stored_values {
	double value[KEY_COUNT];
	bool given[KEY_COUNT]; /* stored; else built in */
};
struct stored_values stored_values_built_in(void);
/* What holds: stored, else built in; a zeroed struct is all built in. */
double stored_value(const struct stored_values *v, enum stored_key key);
/* -1: no such key. */
int stored_key_find(const char *name);
/* ST_SYNTAX, ST_RANGE: the message says what is expected. */
MUST_USE enum status stored_key_parse(enum stored_key key, const char *text, double *value, struct err *e);
/* A value as it is typed; "" for none. */
enum { STORED_TEXT_BYTES = 64 };
void stored_key_text(enum stored_key key, double value, char out[STORED_TEXT_BYTES]);
/* All of a store (NULL: built in). What can't be read is told of and stays built in. */
void stored_values_load(struct store *s, struct stored_values *out);

#endif
