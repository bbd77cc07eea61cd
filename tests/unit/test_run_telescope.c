/* SPDX-License-Identifier: MIT
 * The telescope of a run: which one is chosen, whose limits hold, and that nothing hangs on lists that are
 * loaded again. */
#include "tui/run.h"

#include "db/stored_settings.h"
#include "tests/support/check.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const struct change change = {"2026-04-22T03:00:00Z", "test", "test"};
enum { HILL, SOUTH }; /* places in the list of sites, by name */

struct bench {
	struct env env;
	struct options options;
	struct run run;
};

static void must(enum status s, const struct err *e)
{
	if (s != ST_OK)
		check_fail("status %d: %s", (int)s, e->text);
}

static void put_telescope(struct store *s, int64_t site_id, const char *name, double alt_min_deg, bool add)
{
	struct telescope t = telescope_empty();
	struct err e = {0};
	t.site_id = site_id;
	t.name = name;
	t.alt_min_deg = alt_min_deg;
	t.blocks = "22:00..+25m=engineering";
	must(telescope_put(s, &t, add, &e), &e);
}

static void fill(struct store *s)
{
	const struct site hill = {
	    .name = "Tern Hill", .lat_deg = 38.62, .lon_east_deg = -109.36, .height_m = 2100.0, .zone = ""};
	const struct site south = {
	    .name = "Tern South", .lat_deg = -30.5, .lon_east_deg = -70.8, .height_m = 2200.0, .zone = ""};
	struct field_texts texts;
	enum put_result result;
	struct err e = {0};
	must(store_begin(s, &change, &e), &e);
	must(site_put(s, &hill, true, &e), &e);
	must(site_put(s, &south, true, &e), &e);
	for (int i = 0; i < FIELD_COUNT; i++)
		texts.text[i] = "";
	texts.text[FIELD_AT_NAME] = "Tern 14 b";
	texts.text[FIELD_AT_RA] = "212.4";
	texts.text[FIELD_AT_DEC] = "38.1";
	must(target_put(s, &texts, true, &result, &e), &e);
	must(store_commit(s, &e), &e);
}

/* Sites 1 and 2 are Tern Hill and Tern South: a new store counts from 1. */
static struct store *store_with(double hill_alt_deg, double south_alt_deg)
{
	struct store *s = NULL;
	struct err e = {0};
	must(store_open("memory", STORE_MEMORY, &s, &e), &e);
	fill(s);
	must(store_begin(s, &change, &e), &e);
	put_telescope(s, 1, "Big", hill_alt_deg, true);
	if (!isnan(south_alt_deg))
		put_telescope(s, 2, "Small", south_alt_deg, true);
	must(stored_setting_put(s, "half:2", "01:30", &e), &e);
	must(store_commit(s, &e), &e);
	return s;
}

static struct bench *bench_open(struct store *s)
{
	struct bench *b = calloc(1, sizeof *b);
	struct err e = {0};
	int code;
	if (!b)
		check_fail("no memory");
	b->options.min_chance = b->options.ut1_utc_s = NAN;
	b->options.now = "2026-04-23T03:00:00Z";
	must(run_open_on(&b->run, s, &b->env, &b->options, NEED_STORE | NEED_TARGETS | NEED_FIRST_SITE, &code,
			 &e),
	     &e);
	return b;
}

static void bench_close(struct bench *b)
{
	run_close(&b->run);
	free(b);
}

static void follows_the_site(void **state)
{
	(void)state;
	struct bench *b = bench_open(store_with(45.0, 20.0));
	struct run *r = &b->run;
	const struct prepared *prepared = r->prepared;
	struct err e = {0};
	assert_string_equal(r->telescope.name, "Big");
	assert_int_equal(r->half.kind, HALF_DARK);
	check_close("limit of Big", r->prepared[0].limits.value[LIM_ALT], 45.0, 0.0);
	assert_int_equal(r->limits.source[LIM_ALT], FROM_TELESCOPE);
	must(run_choose_site(r, SOUTH, &e), &e);
	assert_string_equal(r->telescope.name, "Small");
	assert_int_equal(r->half.kind, HALF_CLOCK);
	check_close("limit of Small", r->limits.value[LIM_ALT], 20.0, 0.0);
	/* in its place: what points at it is not left behind */
	assert_ptr_equal(r->prepared, prepared);
	assert_int_equal(r->n_prepared, 1);
	check_close("limit of its targets", r->prepared[0].limits.value[LIM_ALT], 20.0, 0.0);
	must(run_choose_site(r, HILL, &e), &e);
	check_close("and back", r->prepared[0].limits.value[LIM_ALT], 45.0, 0.0);
	bench_close(b);
}

static void outlives_its_list(void **state)
{
	(void)state;
	struct bench *b = bench_open(store_with(45.0, (double)NAN));
	struct run *r = &b->run;
	struct err e = {0};
	/* a second one comes: the first stays chosen, with its new limit */
	must(store_begin(r->store, &change, &e), &e);
	put_telescope(r->store, 1, "Another", 10.0, true);
	put_telescope(r->store, 1, "Big", 50.0, false);
	must(store_commit(r->store, &e), &e);
	must(run_reload(r, &e), &e);
	assert_string_equal(r->telescope.name, "Big");
	assert_string_equal(r->telescope.blocks, "22:00..+25m=engineering");
	check_close("its new limit", r->prepared[0].limits.value[LIM_ALT], 50.0, 0.0);
	/* it goes: the other is the only one */
	must(store_begin(r->store, &change, &e), &e);
	must(telescope_remove(r->store, 1, "Big", &e), &e);
	must(store_commit(r->store, &e), &e);
	must(run_reload(r, &e), &e);
	assert_string_equal(r->telescope.name, "Another");
	check_close("limit of the other", r->prepared[0].limits.value[LIM_ALT], 10.0, 0.0);
	/* and where there is none the built-in limit is back */
	must(run_choose_site(r, SOUTH, &e), &e);
	assert_false(r->has_telescope);
	assert_int_equal(r->telescope.id, 0);
	check_close("built in", r->limits.value[LIM_ALT], 30.0, 0.0);
	bench_close(b);
}

static void names_and_options_win(void **state)
{
	(void)state;
	struct store *s = store_with(45.0, (double)NAN);
	struct bench b = {
	    .options = {
		.min_chance = NAN, .ut1_utc_s = NAN, .telescope = "another", .now = "2026-04-23T03:00:00Z"}};
	struct err e = {0};
	int code;
	must(store_begin(s, &change, &e), &e);
	put_telescope(s, 1, "Another", 10.0, true);
	must(store_commit(s, &e), &e);
	b.options.limit_given[LIM_ALT] = true;
	b.options.limit[LIM_ALT] = 25.0;
	must(run_open_on(&b.run, s, &b.env, &b.options, NEED_STORE | NEED_FIRST_SITE, &code, &e), &e);
	assert_string_equal(b.run.telescope.name, "Another");
	check_close("the option wins", b.run.limits.value[LIM_ALT], 25.0, 0.0);
	/* a site without one of that name takes what it has */
	must(run_choose_site(&b.run, SOUTH, &e), &e);
	assert_false(b.run.has_telescope);
	run_close(&b.run);
	/* refused where it is not there */
	b.options.telescope = "Third";
	assert_int_equal(run_open_on(&b.run, store_with(45.0, (double)NAN), &b.env, &b.options,
				     NEED_STORE | NEED_FIRST_SITE, &code, &e),
			 ST_RANGE);
	assert_int_equal(code, 2);
	assert_non_null(strstr(e.text, "expected one of: Big"));
}

static void cuts_nights(void **state)
{
	(void)state;
	struct bench *b = bench_open(store_with((double)NAN, (double)NAN));
	struct run *r = &b->run;
	struct night_view v = {.hidden = 0};
	struct err e = {0};
	int64_t id;
	/* MJD 61152 is 2026-04-22. No zone: the clock is UTC */
	const struct allotment a[] = {
	    {.site_id = 1, .first_mjd = 61152, .last_mjd = 61153, .span = "04:00..06:00", .note = ""},
	    {.site_id = 1, .first_mjd = 61152, .last_mjd = 61152, .span = "05:00..07:00", .note = ""},
	    {.site_id = 2, .first_mjd = 61152, .last_mjd = 61160, .span = "whole", .note = ""},
	};
	must(run_night(r, 61152, true, &v, &e), &e);
	assert_int_equal(v.allotments, 0);
	assert_false(v.cut || v.allotted_elsewhere);
	must(store_begin(r->store, &change, &e), &e);
	for (size_t i = 0; i < 3; i++)
		must(allotment_add(r->store, &a[i], &id, &e), &e);
	must(store_commit(r->store, &e), &e);
	must(run_reload(r, &e), &e);
	must(run_night(r, 61152, true, &v, &e), &e);
	assert_true(v.cut);
	assert_int_equal(v.allotments, 2);
	/* by hand: 04:00 to 06:00 and 05:00 to 07:00 are three hours */
	assert_int_equal(v.free.allotted.n, 1);
	check_close("hours", intervals_length(&v.free.allotted) * 24.0, 3.0, 1e-6);
	must(run_night(r, 61155, true, &v, &e), &e);
	assert_true(v.allotted_elsewhere);
	assert_false(v.cut);
	b->options.no_allotments = true;
	must(run_night(r, 61152, true, &v, &e), &e);
	assert_false(v.cut || v.allotted_elsewhere);
	night_view_free(&v);
	bench_close(b);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(follows_the_site),
	    cmocka_unit_test(outlives_its_list),
	    cmocka_unit_test(names_and_options_win),
	    cmocka_unit_test(cuts_nights),
	};
	return cmocka_run_group_tests_name("run telescope", tests, NULL, NULL);
}
