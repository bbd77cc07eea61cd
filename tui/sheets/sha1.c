/* SPDX-License-Identifier: MIT */
#include "tui/sheets/sha1.h"

enum { LENGTH_AT = 56, ROUNDS = 80 };

struct sha1 sha1_begin(void)
{
	return (struct sha1){.h = {0x67452301, 0xEFCDAB89, 0x98BADCFE, 0x10325476, 0xC3D2E1F0}};
}

static uint32_t rotated(uint32_t x, int bits)
{
	return (x << bits) | (x >> (32 - bits));
}

/* RFC 3174 sec. 5, functions f(t) and constants K(t). */
static uint32_t mixed(int t, uint32_t b, uint32_t c, uint32_t d)
{
	if (t < 20)
		return ((b & c) | (~b & d)) + 0x5A827999;
	if (t < 40)
		return (b ^ c ^ d) + 0x6ED9EBA1;
	if (t < 60)
		return ((b & c) | (b & d) | (c & d)) + 0x8F1BBCDC;
	return (b ^ c ^ d) + 0xCA62C1D6;
}

/* RFC 3174 sec. 6.1. */
static void take_block(struct sha1 *s)
{
	uint32_t w[ROUNDS];
	for (int t = 0; t < 16; t++)
		w[t] = (uint32_t)s->block[4 * t] << 24 | (uint32_t)s->block[4 * t + 1] << 16 |
		       (uint32_t)s->block[4 * t + 2] << 8 | s->block[4 * t + 3];
	for (int t = 16; t < ROUNDS; t++)
		w[t] = rotated(w[t - 3] ^ w[t - 8] ^ w[t - 14] ^ w[t - 16], 1);
	uint32_t a = s->h[0], b = s->h[1], c = s->h[2], d = s->h[3], e = s->h[4];
	for (int t = 0; t < ROUNDS; t++) {
		const uint32_t next = rotated(a, 5) + mixed(t, b, c, d) + e + w[t];
		e = d;
		d = c;
		c = rotated(b, 30);
		b = a;
		a = next;
	}
	s->h[0] += a;
	s->h[1] += b;
	s->h[2] += c;
	s->h[3] += d;
	s->h[4] += e;
}

void sha1_add(struct sha1 *s, const void *bytes, size_t n)
{
	const uint8_t *at = bytes;
	for (size_t i = 0; i < n; i++) {
		s->block[s->length++ % SHA1_BLOCK_BYTES] = at[i];
		if (s->length % SHA1_BLOCK_BYTES == 0)
			take_block(s);
	}
}

void sha1_end(struct sha1 *s, uint8_t digest[SHA1_BYTES])
{
	const uint64_t bits = 8 * s->length;
	uint8_t byte = 0x80;
	sha1_add(s, &byte, 1);
	byte = 0;
	while (s->length % SHA1_BLOCK_BYTES != LENGTH_AT)
		sha1_add(s, &byte, 1);
	for (int i = 7; i >= 0; i--) {
		byte = (uint8_t)(bits >> (8 * i));
		sha1_add(s, &byte, 1);
	}
	for (int i = 0; i < SHA1_BYTES; i++)
		digest[i] = (uint8_t)(s->h[i / 4] >> (8 * (3 - i % 4)));
}
