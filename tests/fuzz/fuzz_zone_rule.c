/* SPDX-License-Identifier: MIT
 * Footer rules of zone files: what is taken gives possible offsets and printable abbreviations at every
 * instant. */
#include "tui/zone_rule.h"

#include "tests/fuzz/property.h"

#include <string.h>

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
	char *text = exact_copy(data, size);
	struct zone_rule rule;
	struct err e = {.status = ST_OK};
	if (zone_rule_parse(text ? text : "", size, &rule, &e) == ST_OK) {
		static const int64_t instants[] = {INT64_MIN,  -11644473600, -1,	  0,
						   1776916800, 4102444800,   16725225600, INT64_MAX};
		for (size_t i = 0; i < sizeof instants / sizeof instants[0]; i++) {
			const struct zone_type *type = zone_rule_at(&rule, instants[i]);
			property(type == &rule.standard || (rule.changes && type == &rule.daylight));
			property(type->offset_s > -26 * 3600 && type->offset_s < 26 * 3600);
			size_t n = strlen(type->abbreviation);
			property(n >= 3 && n < ABBREVIATION_MAX);
			property(strspn(type->abbreviation,
					"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+-") ==
				 n);
		}
	} else {
		property(e.text[0] != '\0');
	}
	free(text);
	return 0;
}
