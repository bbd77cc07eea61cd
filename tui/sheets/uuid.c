/* SPDX-License-Identifier: MIT */
#include "tui/sheets/uuid.h"

#include "tui/sheets/sha1.h"

#include <string.h>

void uuid_by_hash(const uint8_t space[UUID_SPACE_BYTES], const char *name, char out[UUID_BYTES])
{
	uint8_t digest[SHA1_BYTES];
	struct sha1 s = sha1_begin();
	sha1_add(&s, space, UUID_SPACE_BYTES);
	sha1_add(&s, name, strlen(name));
	sha1_end(&s, digest);
	digest[6] = (uint8_t)((digest[6] & 0x0F) | 0x50); /* version 5 */
	digest[8] = (uint8_t)((digest[8] & 0x3F) | 0x80); /* the variant of the RFC */
	size_t used = 0;
	for (size_t i = 0; i < UUID_SPACE_BYTES; i++) {
		bool dash = i == 4 || i == 6 || i == 8 || i == 10;
		used += (size_t)snprintf(out + used, UUID_BYTES - used, "%s%02x", dash ? "-" : "", digest[i]);
	}
}

static int hex_digit(char c)
{
	static const char digits[] = "0123456789abcdef";
	const char *at = c ? strchr(digits, c) : NULL;
	return at ? (int)(at - digits) : -1;
}

void plan_item_uuid(const char *store_id, const char *key, char out[UUID_BYTES])
{
	uint8_t space[UUID_SPACE_BYTES] = {0}; /* without a store: the nil identifier */
	for (size_t i = 0; i < UUID_SPACE_BYTES && strlen(store_id) == 2 * (size_t)UUID_SPACE_BYTES; i++) {
		const int high = hex_digit(store_id[2 * i]), low = hex_digit(store_id[2 * i + 1]);
		space[i] = (uint8_t)(high < 0 || low < 0 ? 0 : 16 * high + low);
	}
	uuid_by_hash(space, key, out);
}
