/* SPDX-License-Identifier: MIT
 * Times and spans of a night as they are typed and stored: blocks, allotments, lost time.
 *   22:40, 22:40L   site local; 05:40Z UTC; 22:40-06:00 with an offset; a whole instant, 2026-04-23T05:40Z
 *   sunset sunrise dusk dawn   dusk and dawn at the run's Sun limit
 *   evening-9 morning-9        the Sun's centre at that altitude, degrees
 *   middle                     the site's own middle of the night (half rule)
 *   start end                  the night's noons
 * each with +20m or -1h30m behind it. A span is FROM..TO, FROM..+25m, or one of first-half, second-half, whole. A clock time resolves inside the night (noon to noon); in
 * the repeated hour of a clock change it needs Z or an offset; in the skipped hour it does not exist. */
#ifndef WANE_TUI_PLAN_TIME_H
#define WANE_TUI_PLAN_TIME_H

#include "ephem/night.h"
#include "tui/zone.h"

/* Where a site's night is halved: between dusk and dawn at the run's Sun limit, between sunset and sunrise, or at a clock time. */
enum half_rule_kind { HALF_DARK, HALF_SUNSET, HALF_CLOCK };
struct half_rule {
	enum half_rule_kind kind;
	int clock_min; /* minutes after midnight, local */
};
/* `dark` (also ""), `sunset`, `HH:MM` from 18:00 to 06:00: what can lie between a sunset and the sunrise. ST_SYNTAX, ST_RANGE. */
MUST_USE enum status half_rule_parse(const char *text, struct half_rule *out, struct err *e);

struct plan_clock {
	const struct night *night;
	const struct zone *zone; /* NULL: UTC is local */
	const struct leap_table *leap;
	double sun_limit_deg;
	struct half_rule half;
};
/* ST_SYNTAX what can't be read; ST_RANGE outside the night or ambiguous; ST_ABSENT it does not happen that night (no sunset, in a skipped hour). */
MUST_USE enum status plan_time(const struct plan_clock *c, const char *text, double *t_d, struct err *e);
MUST_USE enum status plan_span(const struct plan_clock *c, const char *text, double *from_d, double *to_d, struct err *e);
/* Whether a span can be read at all, before a night is known. */
MUST_USE enum status plan_span_check(const char *text, struct err *e);
/* `Wed 22 Apr 22:40:00 MDT (04:40:00 UTC on 23 Apr)`: the echo of what was typed. Seconds only where they are not 0. */
enum { PLAN_ECHO_BYTES = 96 };
void plan_echo(const struct plan_clock *c, double t_d, char out[PLAN_ECHO_BYTES]);

#endif
