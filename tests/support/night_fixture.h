/* SPDX-License-Identifier: MIT
 * A run put together by hand for screen tests: the invented site Tern Hill, invented targets, one night, a
 * fixed clock. No store. */
#ifndef WANE_TESTS_SUPPORT_NIGHT_FIXTURE_H
#define WANE_TESTS_SUPPORT_NIGHT_FIXTURE_H

#include "tui/run.h"

enum { FIXTURE_TARGETS = 14, FIXTURE_EVENING_MJD = 61152 /* 2026-04-22 */ };
struct night_fixture {
	struct env env;
	struct options options;
	struct target target[FIXTURE_TARGETS];
	struct run run;
};
/* At 2026-04-23T04:14:05Z, 22:14:05 at the site. zoneinfo false: without a time zone. Fails the test on any
 * fault. */
struct night_fixture *fixture_open(bool zoneinfo);
void fixture_close(struct night_fixture *f);
/* The night with its windows; long_shots: every event. */
struct night_view fixture_night(struct night_fixture *f, int32_t evening_mjd, bool long_shots);

#endif
