/* SPDX-License-Identifier: MIT
 * JSON (RFC 8259) written piece by piece: valid UTF-8, no NaN (null), keys in the order given. Objects and arrays that hold
 * others are indented; `compact` ones stand in a line. */
#ifndef WANE_TUI_SHEETS_JSON_H
#define WANE_TUI_SHEETS_JSON_H

#include <stdbool.h>
#include <stdio.h>

enum { JSON_DEPTH_MAX = 16 };
struct json {
	FILE *file;
	int depth;
	bool has_items[JSON_DEPTH_MAX], compact[JSON_DEPTH_MAX];
};

struct json json_begin(FILE *file);
/* key NULL: an item of an array, or the whole text. */
void json_open(struct json *j, const char *key, char bracket /* { or [ */, bool compact);
void json_close(struct json *j, char bracket /* } or ] */);
void json_text(struct json *j, const char *key, const char *text);
/* A number already written as digits; "" is null. */
void json_digits(struct json *j, const char *key, const char *digits);
/* Rounded to decimals; not finite: null. */
void json_number(struct json *j, const char *key, double value, int decimals);
/* The shortest digits that read back equal; not finite: null. */
void json_exact(struct json *j, const char *key, double value);
void json_whole(struct json *j, const char *key, long value);
void json_bool(struct json *j, const char *key, bool value);
void json_null(struct json *j, const char *key);
/* The newline behind the whole text. */
void json_end(struct json *j);
/* Whether digits are a number of JSON's grammar (1., .5 and +1 are not). */
bool json_is_number(const char *digits);

#endif
