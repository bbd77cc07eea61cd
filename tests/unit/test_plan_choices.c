/* SPDX-License-Identifier: MIT
 * Choices of a plan: what is typed, stored, taken back; blocks as instants. Times by hand: at Tern Hill on 22
 * April 2026 clocks show MDT, UTC less 6 hours. */
#include "tui/plan_parts.h"

#include "tests/support/check.h"
#include "tests/support/plan_run.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

struct bench {
	struct plan_run *p;
	struct night_view night;
	struct plan_view v;
	struct plan_choices c;
	struct plan_clock clock;
};

static struct bench *bench_open(void)
{
	struct bench *b = calloc(1, sizeof *b);
	struct err e;
	if (!b)
		check_fail("no memory");
	b->p = plan_run_open("2026-04-22T20:00:00Z");
	if (run_night_free(&b->p->run, &b->p->run.site, PLAN_RUN_EVENING_MJD, &b->night, &e) != ST_OK)
		check_fail("%s", e.text);
	b->v = (struct plan_view){.run = &b->p->run, .night = &b->night, .telescope = ""};
	b->clock = run_plan_clock(&b->p->run, &b->night.night);
	return b;
}

static void bench_close(struct bench *b)
{
	plan_view_free(&b->v);
	night_view_free(&b->night);
	plan_run_close(b->p);
	free(b);
}

static enum status wish(struct bench *b, const struct plan_wish *w)
{
	struct err e;
	return choices_wish(&b->v, &b->c, w, &e);
}

#define LIST(...)                                                                                            \
	(const char *const[])                                                                                \
	{                                                                                                    \
		__VA_ARGS__                                                                                  \
	}

static void lines_come_back(void **state)
{
	(void)state;
	struct bench *b = bench_open();
	struct err e;
	const struct plan_wish w = {.pin = LIST("Tern 14 b", "tern-33b"),
				    .n_pin = 2,
				    .drop = LIST("Tern 9 b@12"),
				    .n_drop = 1,
				    .block =
					LIST("noon..23:00=never", "22:00..23:00=engineering hour = full"),
				    .n_block = 2,
				    .lost = LIST("01:00..+30m"),
				    .n_lost = 1,
				    .poor = LIST("02:00..03:00 x2.5"),
				    .n_poor = 1};
	assert_int_equal(wish(b, &w), ST_OK);
	assert_int_equal(b->c.n, 7);
	/* a span that can't be read is told when it is resolved */
	assert_int_equal(blocks_resolve(&b->v, &b->c, &b->clock, &w, NULL, &e), ST_SYNTAX);
	assert_int_equal(wish(b, &(struct plan_wish){.unblock = LIST("never"), .n_unblock = 1}), ST_OK);
	assert_int_equal(blocks_resolve(&b->v, &b->c, &b->clock, &w, NULL, &e), ST_OK);
	assert_int_equal(b->v.n_blocks, 3);
	b->c.missed[b->c.n_missed++] = "S1/O0/T3:transit:4:";
	const char *text = choices_text(&b->v, &b->c);
	struct plan_view again = {.run = &b->p->run, .night = &b->night};
	struct plan_choices c;
	choices_read(&again, &c, text);
	assert_int_equal(c.n, 6);
	for (size_t i = 0; i < c.n; i++) {
		assert_int_equal(c.choice[i].kind, b->c.choice[i].kind);
		assert_string_equal(c.choice[i].text, b->c.choice[i].text);
	}
	assert_int_equal(c.n_missed, 1);
	assert_string_equal(c.missed[0], "S1/O0/T3:transit:4:");
	assert_int_equal(again.n_blocks, 3);
	for (size_t i = 0; i < 3; i++) {
		assert_int_equal(again.block[i].kind, b->v.block[i].kind);
		assert_string_equal(again.block[i].text, b->v.block[i].text);
		check_close("from [s]", again.block[i].from.sod_s, b->v.block[i].from.sod_s, 1e-9);
		check_close("to [s]", again.block[i].to.sod_s, b->v.block[i].to.sod_s, 1e-9);
		check_close("noise", again.block[i].noise, b->v.block[i].noise, 0.0);
	}
	assert_string_equal(choices_text(&again, &c), text);
	plan_view_free(&again);
	bench_close(b);
}

/* Whatever a store may hold, reading it neither fails nor makes choices of it. */
static void lines_that_cannot_be_read(void **state)
{
	(void)state;
	struct bench *b = bench_open();
	static const char *const texts[] = {
	    "",
	    "\n\n",
	    "pin",
	    "pin\t",
	    "\tpin",
	    "nail\tTern 9 b",
	    "shown\tset\tyesterday\ttoday\t1\tx",
	    "shown\tset\t2026-04-23T05:00:00Z",
	    "shown\tend\t2026-04-23T05:00:00Z\t2026-04-23T06:00:00Z\t1\tx",
	    "shown\tpoor\t2026-04-23T05:00:00Z\t2026-04-23T06:00:00Z\tloud\tx"};
	for (size_t i = 0; i < sizeof texts / sizeof texts[0]; i++) {
		choices_read(&b->v, &b->c, texts[i]);
		assert_int_equal(b->c.n + b->c.n_missed + b->v.n_blocks, 0);
	}
	bench_close(b);
}

static void taking_back(void **state)
{
	(void)state;
	struct bench *b = bench_open();
	assert_int_equal(wish(b, &(struct plan_wish){.pin = LIST("Tern 14 b", "Tern 9 b@7"), .n_pin = 2}),
			 ST_OK);
	/* the drop of an event takes its pin away; another event's stays */
	assert_int_equal(wish(b, &(struct plan_wish){.drop = LIST("tern 14B"), .n_drop = 1}), ST_OK);
	assert_int_equal(b->c.n, 2);
	assert_int_equal(b->c.choice[0].kind, CHOICE_PIN);
	assert_string_equal(b->c.choice[0].text, "Tern 9 b@7");
	assert_int_equal(b->c.choice[1].kind, CHOICE_DROP);
	assert_int_equal(wish(b, &(struct plan_wish){.free = LIST("Tern 9 b@8"), .n_free = 1}), ST_ABSENT);
	assert_int_equal(wish(b, &(struct plan_wish){.free = LIST("Tern 9 b"), .n_free = 1}), ST_OK);
	assert_int_equal(wish(b, &(struct plan_wish){.free = LIST("Tern 14 b"), .n_free = 1}), ST_OK);
	assert_int_equal(b->c.n, 0);
	assert_int_equal(wish(b, &(struct plan_wish){.free = LIST("Tern 14 b"), .n_free = 1}), ST_ABSENT);
	const struct plan_wish spans = {.lost = LIST("22:00..23:00"),
					.n_lost = 1,
					.poor = LIST("01:00..02:00 x3"),
					.n_poor = 1,
					.block = LIST("dusk..+20m=focus"),
					.n_block = 1};
	assert_int_equal(wish(b, &spans), ST_OK);
	assert_int_equal(wish(b, &spans), ST_OK); /* twice is once */
	assert_int_equal(b->c.n, 3);
	assert_int_equal(wish(b, &(struct plan_wish){.unblock = LIST("22:00..23:00"), .n_unblock = 1}),
			 ST_ABSENT);
	assert_int_equal(
	    wish(b, &(struct plan_wish){.unlost = LIST("22:00..23:00", "01:00..02:00"), .n_unlost = 2}),
	    ST_OK);
	assert_int_equal(wish(b, &(struct plan_wish){.unblock = LIST("focus"), .n_unblock = 1}), ST_OK);
	assert_int_equal(b->c.n, 0);
	bench_close(b);
}

/* One event goes before all of its target, in whichever order they are typed; another spelling is no other
 * choice. */
static void one_before_all(void **state)
{
	static const char *const all[] = {"Tern 31 b"}, *const event[] = {"Tern 31 b@4101"};
	const struct plan_wish one[] = {
	    {.pin = event, .n_pin = 1, .drop = all, .n_drop = 1},
	    {.drop = event, .n_drop = 1, .pin = all, .n_pin = 1},
	};
	(void)state;
	struct bench *b = bench_open();
	for (size_t i = 0; i < sizeof one / sizeof one[0]; i++) {
		b->c.n = 0;
		assert_int_equal(wish(b, &one[i]), ST_OK);
		assert_int_equal(b->c.n, 2);
		assert_string_equal(b->c.choice[1].text, "Tern 31 b@4101");
		assert_int_equal(b->c.choice[1].kind, i == 0 ? CHOICE_PIN : CHOICE_DROP);
	}
	b->c.n = 0;
	assert_int_equal(wish(b, &(struct plan_wish){.pin = LIST("Tern 14 b", "tern14B"), .n_pin = 2}),
			 ST_OK);
	assert_int_equal(wish(b, &(struct plan_wish){.pin = LIST("TERN-14-B"), .n_pin = 1}), ST_OK);
	assert_int_equal(b->c.n, 1);
	bench_close(b);
}

static void names_of_events(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		enum status status;
		bool one;
		long epoch;
	} names[] = {
	    {"Tern 14 b", ST_OK, false, 0},
	    {"tern_14 B@-3", ST_OK, true, -3},
	    {"Tern 14 b@12", ST_OK, true, 12},
	    {"Tern 14 b@", ST_SYNTAX, false, 0},
	    {"Tern 14 b@1.5", ST_SYNTAX, false, 0},
	    {"Tern 14 b@999999999999", ST_SYNTAX, false, 0},
	    {"Tern 1400 b", ST_ABSENT, false, 0},
	    {"Tern 1400 b@2", ST_ABSENT, false, 0},
	    {"", ST_ABSENT, false, 0},
	};
	struct bench *b = bench_open();
	for (size_t i = 0; i < sizeof names / sizeof names[0]; i++) {
		struct event_name name;
		struct err e;
		const enum status s = event_name_find(&b->p->run, names[i].text, &name, &e);
		if (s != names[i].status)
			check_fail("\"%s\": status %d", names[i].text, (int)s);
		if (s != ST_OK)
			continue;
		assert_string_equal(name.target->name, "Tern 14 b");
		assert_int_equal(name.one, names[i].one);
		assert_int_equal(name.epoch, names[i].epoch);
	}
	assert_int_equal(wish(b, &(struct plan_wish){.pin = LIST("Tern 14 b"),
						     .n_pin = 1,
						     .drop = LIST("tern14b"),
						     .n_drop = 1}),
			 ST_SYNTAX);
	bench_close(b);
}

/* The telescope's own blocks: one that does not happen that night is left out and said; those with the Sun
 * near say so. */
static void standing_blocks(void **state)
{
	(void)state;
	struct bench *b = bench_open();
	struct echo echo = {.text = NULL};
	struct err e;
	const struct plan_wish w = {.lost = LIST("22:40..23:50"), .n_lost = 1};
	b->p->run.telescope.blocks =
	    "evening-3..evening-5=evening flats; evening-85..dusk=deep night;23:00..23:20=bias";
	assert_int_equal(wish(b, &w), ST_OK);
	assert_int_equal(blocks_resolve(&b->v, &b->c, &b->clock, &w, &echo, &e), ST_OK);
	assert_int_equal(b->v.n_blocks, 3);
	assert_string_equal(b->v.block[0].text, "evening flats");
	assert_int_equal(b->v.block[0].kind, BLOCK_STANDING);
	assert_int_equal(b->v.block[1].kind, BLOCK_LOST);
	check_close("22:40 MDT is 04:40 UTC [s]", b->v.block[1].from.sod_s, 4.0 * 3600.0 + 40.0 * 60.0, 1e-6);
	assert_string_equal(b->v.block[2].text, "bias");
	blocks_near_sun(&b->v);
	assert_true(b->v.block[0].near_sun);
	assert_false(b->v.block[1].near_sun || b->v.block[2].near_sun);
	assert_non_null(
	    strstr(echo.text, "lost: Wed 22 Apr 22:40 MDT (04:40 UTC on 23 Apr) to Wed 22 Apr 23:50 MDT"));
	assert_non_null(strstr(echo.text, "standing block deep night left out"));
	free(echo.text);
	b->p->run.telescope.blocks = "";
	bench_close(b);
}

/* 22:40 to 23:50 MDT lost, 23:00 to 23:20 a block: cut out of the sets of their own causes. */
static void free_time_is_cut(void **state)
{
	(void)state;
	struct bench *b = bench_open();
	struct err e;
	const struct plan_wish w = {.lost = LIST("22:40..23:50"),
				    .n_lost = 1,
				    .block = LIST("23:00..23:20=bias"),
				    .n_block = 1,
				    .poor = LIST("20:00..21:00 x2"),
				    .n_poor = 1};
	assert_int_equal(wish(b, &w), ST_OK);
	assert_int_equal(blocks_resolve(&b->v, &b->c, &b->clock, &w, NULL, &e), ST_OK);
	struct free_time free = free_time_whole();
	blocks_free_time(&b->v, &b->night.night, &free);
	const double at_23 =
	    night_of_utc(&b->night.night, (struct utc){PLAN_RUN_EVENING_MJD + 1, 5.0 * 3600.0 + 600.0});
	assert_false(intervals_contain(&free.clear, at_23));
	assert_false(intervals_contain(&free.unblocked, at_23));
	assert_true(intervals_contain(&free.allotted, at_23));
	check_close("lost [min]", 2e3 * 1440.0 - intervals_length(&free.clear) * 1440.0, 70.0, 1e-4);
	check_close("blocked [min]", 2e3 * 1440.0 - intervals_length(&free.unblocked) * 1440.0, 20.0, 1e-4);
	bench_close(b);
}

/* By hand: a factor N over a share s of the event leaves 1 - s (1 - 1/N^2) of its worth. */
static void poor_time(void **state)
{
	(void)state;
	struct bench *b = bench_open();
	struct err e;
	const struct plan_wish w = {.poor = LIST("22:00..23:00 x2", "01:00..02:00 x10"), .n_poor = 2};
	static const struct {
		double from_h, to_h, taken; /* local hours of the evening */
	} rows[] = {{22.0, 23.0, 0.75},
		    {22.5, 23.5, 0.375},
		    {20.0, 21.0, 0.0},
		    {25.0, 26.0, 0.99},
		    {22.0, 26.0, 1.0 - (1.0 - 0.25 * 0.75) * (1.0 - 0.25 * 0.99)}};
	assert_int_equal(wish(b, &w), ST_OK);
	assert_int_equal(blocks_resolve(&b->v, &b->c, &b->clock, &w, NULL, &e), ST_OK);
	const double midnight_d =
	    night_of_utc(&b->night.night, (struct utc){PLAN_RUN_EVENING_MJD + 1, 6.0 * 3600.0});
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		const struct window event = {.event = {.t1_d = midnight_d + (rows[i].from_h - 24.0) / 24.0,
						       .t4_d = midnight_d + (rows[i].to_h - 24.0) / 24.0}};
		check_close("share taken", poor_share(&b->v, &b->night.night, &event), rows[i].taken, 1e-8);
	}
	bench_close(b);
}

static void typed_wrong(void **state)
{
	(void)state;
	static const struct {
		enum choice_kind kind;
		const char *text;
		enum status status;
	} rows[] = {
	    {CHOICE_BLOCK, "22:00..23:00", ST_SYNTAX},	  {CHOICE_BLOCK, "22:00..23:00=", ST_SYNTAX},
	    {CHOICE_BLOCK, "=text", ST_SYNTAX},		  {CHOICE_BLOCK, "22:00=text", ST_SYNTAX},
	    {CHOICE_POOR, "22:00..23:00", ST_SYNTAX},	  {CHOICE_POOR, "22:00..23:00 x0.5", ST_SYNTAX},
	    {CHOICE_POOR, "22:00..23:00 x21", ST_SYNTAX}, {CHOICE_POOR, "22:00..23:00 xx", ST_SYNTAX},
	    {CHOICE_POOR, "22:00..23:00x2", ST_SYNTAX},	  {CHOICE_LOST, "23:00", ST_SYNTAX},
	    {CHOICE_LOST, "23:00..22:00", ST_RANGE},	  {CHOICE_LOST, "evening-85..dusk", ST_ABSENT},
	};
	struct bench *b = bench_open();
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct err e;
		b->c.n = 1;
		b->c.choice[0] = (struct plan_choice){rows[i].kind, rows[i].text};
		const enum status s =
		    blocks_resolve(&b->v, &b->c, &b->clock, &(struct plan_wish){.draft = NULL}, NULL, &e);
		if (s != rows[i].status)
			check_fail("\"%s\": status %d: %s", rows[i].text, (int)s, e.text);
	}
	bench_close(b);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(lines_come_back),	cmocka_unit_test(lines_that_cannot_be_read),
	    cmocka_unit_test(taking_back),	cmocka_unit_test(one_before_all),
	    cmocka_unit_test(names_of_events),	cmocka_unit_test(standing_blocks),
	    cmocka_unit_test(free_time_is_cut), cmocka_unit_test(poor_time),
	    cmocka_unit_test(typed_wrong),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
