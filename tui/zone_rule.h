/* SPDX-License-Identifier: MIT
 * The rule in a zone file's footer, for dates after its table: a POSIX TZ string with the extensions of RFC
 * 8536, section 3.3.1 (rule times of -167..167 hours). Instants are POSIX seconds. */
#ifndef WANE_TUI_ZONE_RULE_H
#define WANE_TUI_ZONE_RULE_H

#include "ephem/err.h"

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

enum { ABBREVIATION_MAX = 16 };

struct zone_type {
	int offset_s; /* local - UTC */
	char abbreviation[ABBREVIATION_MAX];
};
enum rule_form {
	RULE_JULIAN /* Jn, 29 February never counted */,
	RULE_DAY_OF_YEAR /* n, from 0 */,
	RULE_WEEKDAY /* Mm.w.d */
};
struct rule_date {
	enum rule_form form;
	int day;		  /* n of the first two forms */
	int month, week, weekday; /* weekday 0 Sunday; week 5: the last one */
	int time_s;		  /* local clock on that day */
};
struct zone_rule {
	struct zone_type standard, daylight;
	bool changes; /* daylight, start and end hold */
	struct rule_date start, end;
};

/* Reads text[0..n). ST_SYNTAX with the reason. */
MUST_USE enum status zone_rule_parse(const char *text, size_t n, struct zone_rule *out, struct err *e);
/* What holds at an instant. Changes are known for the years 1601..2499; outside them standard time is taken.
 */
const struct zone_type *zone_rule_at(const struct zone_rule *rule, int64_t t);

#endif
