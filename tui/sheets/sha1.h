/* SPDX-License-Identifier: MIT
 * SHA-1 (RFC 3174), for identifiers only: it protects nothing. */
#ifndef WANE_TUI_SHEETS_SHA1_H
#define WANE_TUI_SHEETS_SHA1_H

#include <stddef.h>
#include <stdint.h>

enum { SHA1_BYTES = 20, SHA1_BLOCK_BYTES = 64 };
struct sha1 {
	uint32_t h[5];
	uint64_t length; /* bytes taken so far */
	uint8_t block[SHA1_BLOCK_BYTES];
};
struct sha1 sha1_begin(void);
void sha1_add(struct sha1 *s, const void *bytes, size_t n);
/* The digest of all that was added. s can't be used further. */
void sha1_end(struct sha1 *s, uint8_t digest[SHA1_BYTES]);

#endif
