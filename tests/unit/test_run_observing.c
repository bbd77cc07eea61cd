/* SPDX-License-Identifier: MIT
 * What a run knows for its forecast: settings and site keys of the store, goals and stars of its targets.
 * Expected values by hand from what the test stores. */
#include "tui/run.h"

#include "db/plans.h"
#include "db/stored_settings.h"
#include "ephem/night_plan.h"
#include "ephem/units.h"
#include "tests/support/check.h"
#include "tests/support/observing_store.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

enum { HILL = 1, CLIFF = 0 }; /* places in the list of sites, by name; their ids are 1 and 2 */

struct bench {
	struct env env;
	struct options options;
	struct run run;
};

static struct bench *bench_open(struct store *s, const char *site)
{
	struct bench *b = calloc(1, sizeof *b);
	struct err e = {0};
	int code;
	if (!b)
		check_fail("no memory");
	b->options.min_chance = b->options.ut1_utc_s = NAN;
	b->options.now = "2026-04-23T03:00:00Z";
	b->options.site[0] = site;
	b->options.n_sites = 1;
	must(run_open_on(&b->run, s, &b->env, &b->options, NEED_STORE | NEED_TARGETS | NEED_SITE, &code, &e),
	     &e);
	return b;
}

static void bench_close(struct bench *b)
{
	run_close(&b->run);
	free(b);
}

static void put(struct store *s, const char *key, const char *value)
{
	struct err e = {0};
	must(stored_setting_put(s, key, value, &e), &e);
}

static void put_telescope(struct store *s, int64_t site_id, const char *name, double aperture_m,
			  const char *band)
{
	struct telescope t = telescope_empty();
	struct err e = {0};
	t.site_id = site_id;
	t.name = name;
	t.aperture_m = aperture_m;
	t.band = band;
	must(telescope_put(s, &t, true, &e), &e);
}

static void set_goal(struct store *s, int64_t target_id, int whole, int limb, const char *band,
		     int32_t until_mjd)
{
	const struct goal_row g = {
	    .target_id = target_id, .whole = whole, .limb = limb, .band = band, .until_mjd = until_mjd};
	struct err e = {0};
	must(goal_set(s, &g, &e), &e);
}

/* --- the table --- */

static void built_in_values_agree(void **state)
{
	(void)state;
	const struct stored_values v = stored_values_built_in();
	const struct worth_rules worth = worth_rules_built_in();
	const struct plan_rules plan = plan_rules_built_in();
	check_close("need_min", v.value[KEY_NEED_MIN], worth.need_min, 0.0);
	check_close("worth_by", v.value[KEY_WORTH_BY], (double)worth.choice, 0.0);
	check_close("floor", v.value[KEY_SYSTEMATIC_FLOOR_S], worth.floor_min * 60.0, 0.0);
	check_close("fallback_bits", v.value[KEY_FALLBACK_BITS], FALLBACK_BITS, 0.0);
	check_close("limb_share", v.value[KEY_LIMB_SHARE], plan.limb_share, 0.0);
	check_close("short_share", v.value[KEY_SHORT_SHARE], plan.short_share, 0.0);
	check_close("unknown_share", v.value[KEY_UNKNOWN_SHARE], plan.unknown_share, 0.0);
	for (int k = 0; k < KEY_COUNT; k++) {
		const struct stored_key_rule *rule = &stored_key_rules[k];
		assert_int_equal(stored_key_find(rule->name), k);
		if (rule->kind == STORED_NUMBER)
			assert_true(rule->fallback >= rule->min && rule->fallback <= rule->max);
	}
	assert_int_equal(stored_key_find("need"), -1);
}

static void values_are_read_and_refused(void **state)
{
	static const struct {
		enum stored_key key;
		const char *text;
		enum status want;
		double value;
		const char *out; /* as text again, or what the message says */
	} rows[] = {
	    {KEY_NEED_MIN, "0.50", ST_OK, 0.5, "0.5"},
	    {KEY_NEED_MIN, "-0", ST_OK, 0.0, "0"},
	    {KEY_NEED_MIN, "600", ST_OK, 600.0, "600"},
	    {KEY_NEED_MIN, "600.1", ST_RANGE, 0.0, "expected 0 to 600 min"},
	    {KEY_NEED_MIN, "2 min", ST_SYNTAX, 0.0, "2 min"},
	    {KEY_NEED_MIN, "nan", ST_SYNTAX, 0.0, "nan"},
	    {KEY_FALLBACK_BITS, "0", ST_RANGE, 0.0, "expected 0.01 to 20 bits"},
	    {KEY_WORTH_BY, "depth", ST_OK, WORTH_DEPTH, "depth"},
	    {KEY_WORTH_BY, "Depth", ST_SYNTAX, 0.0, "expected bits, depth, priority"},
	    {KEY_AFTER_DATE, "2029-04-22", ST_OK, 62248.0, "2029-04-22"}, /* 61152 and 1096 days */
	    {KEY_AFTER_DATE, "2029-02-29", ST_RANGE, 0.0, ""},
	    {KEY_AFTER_DATE, "2200-01-01", ST_RANGE, 0.0, "a date of 1900 to 2100"},
	    {KEY_LIMB_SHARE, "1.01", ST_RANGE, 0.0, "expected 0 to 1"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct err e = {0};
		char text[STORED_TEXT_BYTES];
		double value = -1.0;
		const enum status s = stored_key_parse(rows[i].key, rows[i].text, &value, &e);
		if (s != rows[i].want || (s != ST_OK && !strstr(e.text, rows[i].out)))
			check_fail("row %zu: %d: %s", i, (int)s, e.text);
		if (s != ST_OK)
			continue;
		check_close(rows[i].text, value, rows[i].value, 0.0);
		assert_false(signbit(value));
		stored_key_text(rows[i].key, value, text);
		assert_string_equal(text, rows[i].out);
	}
}

/* --- telescope, site, team --- */

static struct store *new_store(void)
{
	struct store *s = observing_store(4);
	change_begin(s, "fill");
	put_telescope(s, 1, "Big", 0.5, "R");
	put_telescope(s, 1, "Small", 0.25, "V");
	put_telescope(s, 2, "Alone", 0.4, "");
	put(s, "sky:1:V", "21.6");
	put(s, "extinction:1:R", "0.09");
	put(s, "extinction:2:R", "0.2");
	put(s, "telescope:1", "2");
	put(s, "need_min", "5");
	put(s, "worth_by", "priority");
	put(s, "systematic_floor_s", "30");
	put(s, "fallback_bits", "0.5");
	put(s, "limb_share", "0.3");
	change_commit(s);
	return s;
}

static void follows_site_and_settings(void **state)
{
	(void)state;
	struct bench *b = bench_open(new_store(), "Tern Hill");
	struct run *r = &b->run;
	struct err e = {0};
	const struct observing *o = run_observing(r, &r->site);
	assert_string_equal(r->telescope.name, "Small"); /* the usual one of two */
	assert_non_null(o);
	assert_int_equal(o->optics.band, BAND_V);
	check_close("sky V", o->dark_zenith_mag[BAND_V], 21.6, 0.0);
	assert_true(isnan(o->dark_zenith_mag[BAND_R]));
	check_close("extinction R", o->extinction_mag[BAND_R], 0.09, 0.0);
	assert_true(isnan(o->extinction_mag[BAND_V]));
	check_close("need", o->rules.need_min, 5.0, 0.0);
	check_close("floor", o->rules.floor_min, 0.5, 0.0);
	assert_int_equal(o->rules.choice, WORTH_PRIORITY);
	check_close("fallback", o->fallback_bits, 0.5, 0.0);
	/* three years from the day of now, MJD 61153 */
	check_close("at", o->at_jd_tdb, MJD_ZERO_JD + 61153.0 + 1095.75, 0.0);
	check_close("limb_share", run_plan_rules(r).limb_share, 0.3, 0.0);
	check_close("short_share", run_plan_rules(r).short_share, 0.95, 0.0);
	/* the other site: its only telescope has no band */
	must(run_choose_site(r, CLIFF, &e), &e);
	assert_string_equal(r->telescope.name, "Alone");
	assert_null(run_observing(r, &r->site));
	check_close("extinction R", r->observing.extinction_mag[BAND_R], 0.2, 0.0);
	assert_true(isnan(r->observing.dark_zenith_mag[BAND_V]));
	must(run_choose_site(r, HILL, &e), &e);
	assert_non_null(run_observing(r, &r->site));
	/* a place of another site is not forecast with this telescope */
	assert_null(run_observing(r, &r->sites.site[CLIFF]));
	change_begin(r->store, "set");
	put(r->store, "after_date", "2031-01-01");
	put(r->store, "telescope:1", "99"); /* none of the site's: no usual one */
	put(r->store, "need_min", "many");  /* by another hand: told of, built in */
	change_commit(r->store);
	must(run_reload(r, &e), &e);
	assert_string_equal(r->telescope.name, "Small"); /* chosen before */
	check_close("need", r->observing.rules.need_min, 2.0, 0.0);
	/* 2031-01-01 is MJD 62867: 61041 (2026-01-01) and 1826 days */
	check_close("at", r->observing.at_jd_tdb, MJD_ZERO_JD + 62867.0, 0.0);
	bench_close(b);
}

/* --- targets --- */

static const struct observed *observed_of(const struct run *r, const char *name)
{
	for (size_t k = 0; k < r->targets.n; k++)
		if (strcmp(r->prepared[k].target->name, name) == 0)
			return r->prepared[k].observed;
	check_fail("no target %s", name);
}

/* An event that is marked as it was got. */
static void got_one(struct store *s, const char *night_end, long epoch, const char *variant)
{
	struct err e = {0};
	int64_t id;
	int edition;
	char key[40];
	struct small_plan p;
	snprintf(key, sizeof key, "T1:transit:%ld", epoch);
	small_plan_make(&p, key, night_end);
	p.window.epoch = epoch;
	p.window.variant = variant;
	p.plan.telescope_id = 1;
	p.plan.night_mjd = 61153 + (int32_t)epoch;
	must(plan_store(s, &p.plan, true, 0, &id, &edition, &e), &e);
	must(plan_mark(s, id, key, "done", "", "", "2026-04-30T12:00:00Z", &e), &e);
}

static struct open_goals open_at(const struct run *r, const char *name, double mjd)
{
	return open_goals_of(observed_of(r, name), r->observing.optics.band, MJD_ZERO_JD + mjd);
}

static void goals_close_as_they_are_met(void **state)
{
	(void)state;
	struct store *s = new_store();
	struct err e = {0};
	change_begin(s, "goal set");
	put(s, "telescope:1", "1"); /* Big: band R */
	set_goal(s, 1, 2, 1, "", 0);
	set_goal(s, 2, 0, 1, "V", 0);
	set_goal(s, 3, 1, 0, "R", 61160);
	change_commit(s);
	struct bench *b = bench_open(s, "Tern Hill");
	struct run *r = &b->run;
	struct open_goals open = open_at(r, "Tern 1 b", 61155.0);
	assert_int_equal(open.whole, 2); /* that of whole events, and that of limbs */
	assert_int_equal(open.limb, 1);
	open = open_at(r, "Tern 2 b", 61155.0); /* in V, and the telescope observes in R */
	assert_int_equal(open.whole, 0);
	open = open_at(r, "Tern 4 b", 61155.0); /* no goals: always open */
	assert_int_equal(open.whole, 1);
	assert_int_equal(open.limb, 1);
	/* the last night ends at the noon after it: 12 h and 109.36/15 h past 0 h UTC of the 61161st day */
	open = open_at(r, "Tern 3 b", 61161.80);
	assert_int_equal(open.whole, 1);
	assert_int_equal(open.limb, 0);
	open = open_at(r, "Tern 3 b", 61161.81);
	assert_int_equal(open.whole, 0);
	change_begin(s, "mark");
	got_one(s, "2026-04-24T08:00:00Z", 0, "whole");
	got_one(s, "2026-04-25T08:00:00Z", 1, "ingress");
	change_commit(s);
	must(run_reload(r, &e), &e);
	open = open_at(r, "Tern 1 b", 61155.0);
	assert_int_equal(open.whole, 1);
	assert_int_equal(open.limb, 0); /* a limb is got: only whole events are open */
	change_begin(s, "mark");
	got_one(s, "2026-04-26T08:00:00Z", 2, "short");
	change_commit(s);
	must(run_reload(r, &e), &e);
	open = open_at(r, "Tern 1 b", 61155.0);
	assert_int_equal(open.whole, 0);
	assert_int_equal(observed_of(r, "Tern 1 b")->n_goals, 2);
	bench_close(b);
}

/* A whole event over shows the limb that was wanted. */
static void surplus_counts_for_limbs(void **state)
{
	(void)state;
	struct store *s = new_store();
	change_begin(s, "goal set");
	set_goal(s, 1, 0, 1, "", 0);
	got_one(s, "2026-04-24T08:00:00Z", 0, "whole");
	change_commit(s);
	struct bench *b = bench_open(s, "Tern Hill");
	const struct open_goals open = open_at(&b->run, "Tern 1 b", 61155.0);
	assert_int_equal(open.whole + open.limb, 0);
	bench_close(b);
}

static void stars_dilute_and_compare(void **state)
{
	(void)state;
	struct store *s = new_store();
	struct err e = {0};
	struct field_texts texts;
	enum put_result result;
	int64_t id;
	change_begin(s, "star add");
	for (int i = 0; i < FIELD_COUNT; i++)
		texts.text[i] = "";
	texts.text[FIELD_AT_NAME] = "Tern 9 b";
	texts.text[FIELD_AT_RA] = "200";
	texts.text[FIELD_AT_DEC] = "30";
	texts.text[field_find("mag")] = "12";
	texts.text[field_find("band")] = "V";
	must(target_put(s, &texts, true, &result, &e), &e);
	struct field_star f = {.target_id = 5,
			       .role = STAR_NEIGHBOUR,
			       .ra_deg = NAN,
			       .dec_deg = NAN,
			       .sep_arcsec = 3.0,
			       .mag = 14.5,
			       .band = "V"};
	must(field_star_add(s, &f, &id, &e), &e);
	f.role = STAR_COMPARISON;
	f.ra_deg = 200.1;
	f.dec_deg = 30.0;
	f.sep_arcsec = NAN;
	f.mag = 12.0;
	must(field_star_add(s, &f, &id, &e), &e);
	change_commit(s);
	struct bench *b = bench_open(s, "Tern Hill");
	const struct observed *o = observed_of(&b->run, "Tern 9 b");
	check_close("a tenth", o->neighbour, 0.1, 1e-12);
	check_close("one", o->comparison_stars, 1.0, 1e-12);
	o = observed_of(&b->run, "Tern 1 b");
	assert_true(isnan(o->neighbour) && isnan(o->comparison_stars));
	bench_close(b);
}

/* A window whose goals are met says so and is worth nothing; one of a target without goals is not touched. */
static void a_met_goal_shows_in_the_night(void **state)
{
	(void)state;
	struct store *s = new_store();
	struct err e = {0};
	struct night_view v = {.hidden = 0};
	change_begin(s, "goal set");
	set_goal(s, 1, 1, 0, "", 61100); /* past */
	set_goal(s, 2, 1, 0, "", 0);
	change_commit(s);
	struct bench *b = bench_open(s, "Tern Hill");
	b->options.all = true;
	size_t met = 0, open = 0;
	/* a period of 3.5 days: four nights have a transit of each */
	for (int32_t mjd = 61152; mjd < 61156; mjd++) {
		must(run_night(&b->run, mjd, false, &v, &e), &e);
		for (size_t i = 0; i < v.list.n; i++) {
			const struct window *w = &v.list.w[i];
			const bool flagged = (w->event.flags & FLAG_BIT(FLAG_GOAL_MET)) != 0;
			assert_int_equal(flagged, w->event.prepared->target->id == 1);
			if (flagged)
				check_close("worth", w->forecast.worth, 0.0, 0.0);
			met += flagged;
			open += !flagged;
		}
	}
	assert_true(met > 0 && open > 0);
	night_view_free(&v);
	bench_close(b);
}

/* 10,000 targets, each with a goal and a star: printed, not judged. */
static void many_targets(void **state)
{
	enum { MANY = 10000 };
	(void)state;
	struct store *s = observing_store(MANY);
	struct err e = {0};
	int64_t id;
	change_begin(s, "fill");
	put_telescope(s, 1, "Big", 0.5, "R");
	for (int i = 1; i <= MANY; i++) {
		const struct field_star f = {.target_id = i,
					     .role = STAR_NEIGHBOUR,
					     .ra_deg = NAN,
					     .dec_deg = NAN,
					     .sep_arcsec = 3.0,
					     .mag = 14.5,
					     .band = "V"};
		set_goal(s, i, 1, 1, "", 0);
		must(field_star_add(s, &f, &id, &e), &e);
	}
	change_commit(s);
	const clock_t start = clock();
	struct bench *b = bench_open(s, "Tern Hill");
	const clock_t opened = clock();
	struct goal_list goals;
	struct field_star_list stars;
	struct goal_got_list got;
	must(goals_load(s, &goals, &e), &e);
	must(field_stars_load(s, &stars, &e), &e);
	must(goals_got_load(s, &got, &e), &e);
	const clock_t loaded = clock();
	print_message("opened in %.0f ms; goals, stars and marks take %.0f ms of it\n",
		      1e3 * (double)(opened - start) / CLOCKS_PER_SEC,
		      1e3 * (double)(loaded - opened) / CLOCKS_PER_SEC);
	assert_int_equal(goals.n, MANY);
	assert_int_equal(stars.n, MANY);
	for (size_t k = 0; k < b->run.targets.n; k++)
		assert_int_equal(b->run.prepared[k].observed->n_goals, 2);
	goal_list_free(&goals);
	field_star_list_free(&stars);
	goal_got_list_free(&got);
	bench_close(b);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(built_in_values_agree),	     cmocka_unit_test(values_are_read_and_refused),
	    cmocka_unit_test(follows_site_and_settings),     cmocka_unit_test(goals_close_as_they_are_met),
	    cmocka_unit_test(surplus_counts_for_limbs),	     cmocka_unit_test(stars_dilute_and_compare),
	    cmocka_unit_test(a_met_goal_shows_in_the_night), cmocka_unit_test(many_targets),
	};
	return cmocka_run_group_tests_name("run_observing", tests, NULL, NULL);
}
