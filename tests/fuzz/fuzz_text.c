/* SPDX-License-Identifier: MIT
 * Text from outside: what text_clean lets out is valid UTF-8 without anything that steers a terminal, fits
 * its buffer and is not changed by a second cleaning; a name that is accepted holds nothing hostile, and its
 * key is a key of itself. */
#include "db/text_clean.h"

#include "tests/fuzz/property.h"

#include <string.h>

static void check_clean(const char *s, size_t n)
{
	for (size_t i = 0; i < n;) {
		uint32_t cp;
		size_t length = utf8_decode(s + i, n - i, &cp);
		property(length >= 1 && length <= 4);
		property(cp >= 0x20 && cp != 0x7F && !(cp >= 0x80 && cp < 0xA0));
		property(!codepoint_is_hostile(cp));
		char back[4];
		property(utf8_encode(cp, back) == length && memcmp(back, s + i, length) == 0);
		i += length;
	}
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
	size_t room = size > 0 ? 1 + data[0] : 64;
	char *s = malloc(size + 1), *out = malloc(room), *twice = malloc(room);
	property(s && out && twice);
	if (size > 0)
		memcpy(s, data, size);
	s[size] = '\0';
	size_t n = text_clean(s, out, room);
	property(n < room && strlen(out) == n);
	check_clean(out, n);
	property(text_clean(out, twice, room) == n && memcmp(out, twice, n + 1) == 0);
	free(out);
	free(twice);

	struct err e = {.status = ST_OK};
	size_t bad_at = 0;
	size_t length = strlen(s);
	if (name_check(s, length, &bad_at, &e) == ST_OK) {
		const char *name = s; /* what the store keeps: without blanks around it */
		text_trim(&name, &length);
		check_clean(name, length);
		property(length > 0);
		if (strlen(s) < NAME_BYTES_MAX) {
			char key[NAME_KEY_MAX], again[NAME_KEY_MAX];
			name_key(s, key);
			name_key(key, again);
			property(strcmp(key, again) == 0);
		}
	} else {
		property(e.text[0] != '\0' && !strchr(e.text, '\n') && bad_at <= length);
		check_clean(e.text, strlen(e.text));
	}
	free(s);
	return 0;
}
