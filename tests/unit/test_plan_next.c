/* SPDX-License-Identifier: MIT
 * What comes next in a plan: by hand, two items of a night and what is told at each minute. */
#include "tui/plan_make.h"

#include "tests/support/check.h"

#include <string.h>

enum { EVENING = 61152 };

/* Minutes after 2026-04-23T00:00Z. */
static struct utc at(double minute)
{
	return (struct utc){.mjd = EVENING + 1, .sod_s = 60.0 * minute};
}

static struct run run_now;
static struct plan_member_view first[2], second[1];
static struct plan_item_view items[2];

/* Item 0: slew 60, start 70, leave 200; T1 90, T2 100, mid 120, T3 140, T4 150; with it T1 110, mid 130 and
 * T4 160, grazing. Item 1: the egress alone: slew 210, start 215, T3 230, T4 240, leave 260; its ingress came
 * before. */
static struct plan_view plan(void)
{
	run_now.leap = leap_builtin;
	first[0] = (struct plan_member_view){.target = "Tern 1 b",
					     .t1 = at(90),
					     .t2 = at(100),
					     .mid = at(120),
					     .t3 = at(140),
					     .t4 = at(150),
					     .has_flat = true};
	first[1] =
	    (struct plan_member_view){.target = "Tern 1 c", .t1 = at(110), .mid = at(130), .t4 = at(160)};
	second[0] = (struct plan_member_view){.target = "Tern 2 b",
					      .t1 = at(30),
					      .t2 = at(40),
					      .mid = at(135),
					      .t3 = at(230),
					      .t4 = at(240),
					      .has_flat = true};
	items[0] = (struct plan_item_view){
	    .slew_by = at(60), .start = at(70), .end = at(200), .n = 2, .member = first};
	items[1] = (struct plan_item_view){
	    .slew_by = at(210), .start = at(215), .end = at(260), .n = 1, .member = second};
	return (struct plan_view){.run = &run_now, .n_items = 2, .item = items};
}

static const struct {
	double now;
	long item, member;
	enum plan_action action;
	double at;
} rows[] = {
    {0, 0, -1, PLAN_SLEW, 60},	   {60, 0, -1, PLAN_SLEW, 60},	{60.1, 0, -1, PLAN_START, 70},
    {75, 0, 0, PLAN_T1, 90},	   {95, 0, 0, PLAN_T2, 100},	{105, 0, 1, PLAN_T1, 110},
    {115, 0, 0, PLAN_MID, 120},	   {125, 0, 1, PLAN_MID, 130},	{135, 0, 0, PLAN_T3, 140},
    {145, 0, 0, PLAN_T4, 150},	   {155, 0, 1, PLAN_T4, 160},	{170, 0, -1, PLAN_LEAVE, 200},
    {201, 1, -1, PLAN_SLEW, 210},  {216, 1, 0, PLAN_T3, 230},	{231, 1, 0, PLAN_T4, 240},
    {241, 1, -1, PLAN_LEAVE, 260}, {261, -1, -1, PLAN_SLEW, 0},
};

static void expect(const struct plan_view *v, double now, long item, long member, enum plan_action action,
		   double when)
{
	const struct plan_next next = plan_next(v, at(now));
	if (next.item != item || (item >= 0 && (next.member != member || next.action != action)))
		check_fail("at minute %g: item %ld member %ld %s", now, next.item, next.member,
			   plan_action_words[next.action]);
	if (item >= 0)
		check_close("when [s]", next.at.sod_s, 60.0 * when, 1e-9);
}

static void every_step(void **state)
{
	(void)state;
	const struct plan_view v = plan();
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
		expect(&v, rows[i].now, rows[i].item, rows[i].member, rows[i].action, rows[i].at);
}

/* What is marked as begun needs no move any more, what is over has nothing left. */
static void marks_count(void **state)
{
	(void)state;
	const struct plan_view v = plan();
	items[0].state = PLAN_STARTED;
	expect(&v, 50, 0, 0, PLAN_T1, 90);
	for (int s = PLAN_DONE; s < PLAN_STATE_COUNT; s++) {
		items[0].state = (enum plan_state)s;
		expect(&v, 50, 1, -1, PLAN_SLEW, 210);
	}
}

static void nothing_planned(void **state)
{
	(void)state;
	struct plan_view v = plan();
	v.n_items = 0;
	expect(&v, 0, -1, -1, PLAN_SLEW, 0);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(every_step),
	    cmocka_unit_test(marks_count),
	    cmocka_unit_test(nothing_planned),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
