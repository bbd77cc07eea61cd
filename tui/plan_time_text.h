/* SPDX-License-Identifier: MIT
 * The grammar of plan_time.h alone: texts become what they say, before a night is known. */
#ifndef WANE_TUI_PLAN_TIME_TEXT_H
#define WANE_TUI_PLAN_TIME_TEXT_H

#include "ephem/err.h"

#include <stdbool.h>
#include <stdint.h>

enum { PLAN_SPAN_CHARS_MAX = 120 }; /* bytes of a time or span */

enum typed_kind {
	TYPED_CLOCK,   /* a time of day; with has_date of that date */
	TYPED_SUNSET,
	TYPED_SUNRISE,
	TYPED_DUSK,
	TYPED_DAWN,
	TYPED_EVENING, /* the Sun's centre at sun_alt_deg, going down */
	TYPED_MORNING,
	TYPED_MIDDLE,
	TYPED_START,
	TYPED_END,
	TYPED_AFTER_FROM /* `+25m`: behind the span's own beginning; no time by itself */
};
struct typed_time {
	enum typed_kind kind;
	double sod_s;    /* of a clock: second of the day as it is written; 86400 and more inside a leap second */
	bool has_date;
	int32_t mjd;     /* the date as it is written */
	bool local;      /* the site's clock; else the time is offset_s ahead of UTC */
	int offset_s;
	double sun_alt_deg;
	double shift_s;  /* the +20m behind it */
};
enum typed_span_kind { TYPED_FROM_TO, TYPED_FIRST_HALF, TYPED_SECOND_HALF, TYPED_WHOLE };
struct typed_span {
	enum typed_span_kind kind;
	struct typed_time from, to; /* of TYPED_FROM_TO */
};
/* ST_SYNTAX; ST_RANGE for a number that can't be (25:00, 30 February, an altitude beyond 90). */
MUST_USE enum status typed_time_read(const char *text, struct typed_time *out, struct err *e);
MUST_USE enum status typed_span_read(const char *text, struct typed_span *out, struct err *e);

#endif
