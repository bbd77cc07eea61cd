/* SPDX-License-Identifier: MIT
 * Text from outside is data: checked where it comes in, cleaned wherever it goes out. */
#ifndef WANE_DB_TEXT_CLEAN_H
#define WANE_DB_TEXT_CLEAN_H

#include "ephem/err.h"

#include <stddef.h>
#include <stdint.h>

enum { NAME_CHARS_MAX = 80, NAME_BYTES_MAX = 4 * NAME_CHARS_MAX + 1, NAME_KEY_MAX = NAME_BYTES_MAX };

/* Decodes one UTF-8 character at s (n bytes left): its length 1..4, *cp the code point; 0 when the bytes are not valid UTF-8
 * (overlong, surrogate, beyond U+10FFFF, cut short). */
size_t utf8_decode(const char *s, size_t n, uint32_t *cp);
/* Writes cp as UTF-8 into out (room for 4): its length. */
size_t utf8_encode(uint32_t cp, char out[4]);
/* C0, DEL, C1, soft hyphen, bidirectional and zero-width controls, variation selectors, line separators, BOM, tags, non-characters. */
int codepoint_is_hostile(uint32_t cp);
/* A name or key: 1..80 characters after trimming, valid UTF-8, nothing hostile, no leading combining mark. ST_SYNTAX names the first
 * bad character as U+XXXX and its byte offset in *bad_at (may be NULL). */
MUST_USE enum status name_check(const char *s, size_t n, size_t *bad_at, struct err *e);
/* A text of one line, at most chars_max characters, "" too: valid UTF-8, nothing hostile (ST_SYNTAX, the message names the first bad
 * character), not too long (ST_RANGE). `what` begins the message. */
MUST_USE enum status text_check(const char *what, const char *s, size_t chars_max, struct err *e);
/* Key under which two names are one: ASCII letters lowered, blanks, hyphens (U+2010..2015 too), underscores and U+00A0 dropped. */
void name_key(const char *name, char out[NAME_KEY_MAX]);
/* Takes blanks and tabs off both ends of (*s)[0..*n). */
void text_trim(const char **s, size_t *n);
/* Copies s to out[size] fit for a terminal or a file: invalid bytes become U+FFFD, hostile characters are dropped, tab and newline
 * become one blank, at most 2 combining marks a base, none leading; cut between characters. Returns the length. */
size_t text_clean(const char *s, char *out, size_t size);

#endif
