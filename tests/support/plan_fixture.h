/* SPDX-License-Identifier: MIT
 * A plan put together by hand for tests of sheets: Tern Hill, four items (one that starts in daylight, one
 * pointing with two planets, a grazing one with a hostile name that has moved, an occultation), blocks, one
 * of them near the Sun, what was left out, one item that is gone. No store. */
#ifndef WANE_TESTS_SUPPORT_PLAN_FIXTURE_H
#define WANE_TESTS_SUPPORT_PLAN_FIXTURE_H

#include "tests/support/night_fixture.h"
#include "tui/plan_view.h"

enum plan_fixture_kind {
	PLAN_FIXTURE_KEPT,     /* edition 3, with marks, moved members and a gone item */
	PLAN_FIXTURE_DRAFT,    /* edition 1 of the draft `windy`, no marks, nothing gone */
	PLAN_FIXTURE_PROPOSAL, /* not stored */
	PLAN_FIXTURE_EMPTY,    /* not stored, nothing to do, a store without a change */
};
enum {
	PLAN_FIXTURE_ITEMS = 4,
	PLAN_FIXTURE_MEMBERS = 6, /* the gone item's too */
	PLAN_FIXTURE_IN_DAY = 0,  /* item that no sheet takes */
	PLAN_FIXTURE_JOINT = 1,
	PLAN_FIXTURE_HOSTILE = 2,
	PLAN_FIXTURE_OCCULTATION = 3,
	PLAN_FIXTURE_CHANGE_MJD = 61344, /* 2026-10-31: the clocks go back at 2 h in the morning */
};
struct plan_fixture {
	struct night_fixture *base;
	struct night_view night;
	struct plan_view view; /* not for plan_view_free */
	struct plan_item_view item[PLAN_FIXTURE_ITEMS], gone[1];
	struct plan_member_view member[PLAN_FIXTURE_MEMBERS];
	struct plan_block_view block[4];
	struct plan_left_view left[3];
	size_t n_texts;
	char *text[PLAN_FIXTURE_MEMBERS * 80];
};
/* evening_mjd: FIXTURE_EVENING_MJD, or another night on which the events happen at the same UTC. zoneinfo
 * false: without a time zone. */
struct plan_fixture *plan_fixture_open(enum plan_fixture_kind kind, int32_t evening_mjd, bool zoneinfo);
void plan_fixture_close(struct plan_fixture *f);

/* Holds a formula, quotes, markup, an escape, a line break with a property of iCalendar behind it, a
 * bidirectional control, a byte that is no UTF-8, a character of four bytes and a backslash. */
extern const char plan_fixture_hostile[];

#endif
