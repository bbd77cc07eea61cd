/* SPDX-License-Identifier: MIT */
#include "tui/sheets/sha1.h"

#include "tests/support/check.h"
#include "tui/sheets/uuid.h"

#include <stdio.h>
#include <string.h>

static void digest_text(const struct sha1 *at, char out[2 * SHA1_BYTES + 1])
{
	uint8_t digest[SHA1_BYTES];
	struct sha1 s = *at;
	sha1_end(&s, digest);
	for (int i = 0; i < SHA1_BYTES; i++)
		snprintf(out + 2 * i, 3, "%02x", digest[i]);
}

/* RFC 3174 sec. 7.3, TEST1 to TEST4, with their repeat counts; of no bytes: Python 3.11, hashlib. */
static const struct {
	const char *piece;
	long times;
	const char *digest;
} published[] = {
    {"abc", 1, "a9993e364706816aba3e25717850c26c9cd0d89d"},
    {"abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq", 1,
     "84983e441c3bd26ebaae4aa1f95129e5e54670f1"},
    {"a", 1000000, "34aa973cd4c4daa4f61eeb2bdbad27316534016f"},
    {"0123456701234567012345670123456701234567012345670123456701234567", 10,
     "dea356a2cddd90c7a7ecedc5ebb563934f460452"},
    {"", 1, "da39a3ee5e6b4b0d3255bfef95601890afd80709"},
};

static void published_digests(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof published / sizeof published[0]; i++) {
		char text[2 * SHA1_BYTES + 1];
		struct sha1 s = sha1_begin();
		for (long k = 0; k < published[i].times; k++)
			sha1_add(&s, published[i].piece, strlen(published[i].piece));
		digest_text(&s, text);
		assert_string_equal(text, published[i].digest);
	}
}

/* However a message is cut into pieces, its digest is the same. */
static void pieces_make_no_difference(void **state)
{
	(void)state;
	uint8_t message[200];
	for (size_t i = 0; i < sizeof message; i++)
		message[i] = (uint8_t)(37 * i + 11);
	for (size_t n = 0; n <= sizeof message; n++) {
		char whole[2 * SHA1_BYTES + 1], cut[2 * SHA1_BYTES + 1];
		struct sha1 a = sha1_begin(), b = sha1_begin();
		sha1_add(&a, message, n);
		sha1_add(&b, message, n / 3);
		sha1_add(&b, message + n / 3, n - n / 3);
		digest_text(&a, whole);
		digest_text(&b, cut);
		assert_string_equal(whole, cut);
	}
}

/* RFC 9562, appendix A.4: `www.example.com` in the space of domain names. */
static void published_identifier(void **state)
{
	(void)state;
	static const uint8_t dns[UUID_SPACE_BYTES] = {0x6b, 0xa7, 0xb8, 0x10, 0x9d, 0xad, 0x11, 0xd1,
						      0x80, 0xb4, 0x00, 0xc0, 0x4f, 0xd4, 0x30, 0xc8};
	char text[UUID_BYTES];
	uuid_by_hash(dns, "www.example.com", text);
	assert_string_equal(text, "2ed6657d-e927-568b-95e1-2665a8aea6a2");
	plan_item_uuid("6ba7b8109dad11d180b400c04fd430c8", "www.example.com", text);
	assert_string_equal(text, "2ed6657d-e927-568b-95e1-2665a8aea6a2");
}

static void stores_and_keys_part(void **state)
{
	(void)state;
	char a[UUID_BYTES], b[UUID_BYTES];
	plan_item_uuid("6ba7b8109dad11d180b400c04fd430c8", "x", a);
	plan_item_uuid("6ba7b8109dad11d180b400c04fd430c9", "x", b);
	assert_string_not_equal(a, b);
	plan_item_uuid("6ba7b8109dad11d180b400c04fd430c8", "y", b);
	assert_string_not_equal(a, b);
	plan_item_uuid("", "x", b); /* no store */
	assert_string_not_equal(a, b);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(published_digests),
	    cmocka_unit_test(pieces_make_no_difference),
	    cmocka_unit_test(published_identifier),
	    cmocka_unit_test(stores_and_keys_part),
	};
	return cmocka_run_group_tests_name("sha1", tests, NULL, NULL);
}
