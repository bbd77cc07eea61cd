/* SPDX-License-Identifier: MIT */
#include "tui/parts/clock_mark.h"

#include <stddef.h>

static int offset_s(const struct night *n, const struct zone *zone, double t_d)
{
	return (int)zone_local(zone, night_utc(n, t_d)).offset_s;
}

bool clocks_change(const struct night *n, const struct zone *zone)
{
	return zone && offset_s(n, zone, 0.0) != offset_s(n, zone, n->length_d);
}

const char *clock_mark(const struct night *n, const struct zone *zone, struct utc t)
{
	if (!clocks_change(n, zone))
		return "";
	return zone_local(zone, t).offset_s == offset_s(n, zone, n->length_d) ? CLOCK_MARK : "";
}
