/* SPDX-License-Identifier: MIT */
#include "tui/parts/columns.h"

#include "tests/support/check.h"
#include "tests/support/night_fixture.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* The order that programs rely on; columns may be added at the end, none renamed or dropped. */
static const char *const order[] = {
    "site",
    "telescope",
    "night",
    "target",
    "branch",
    "kind",
    "epoch",
    "mid_bjd_tdb",
    "mid_utc",
    "sigma_min",
    "sigma_contact_min",
    "t1_utc",
    "t2_utc",
    "t3_utc",
    "t4_utc",
    "reserve_start_utc",
    "reserve_end_utc",
    "latest_start_utc",
    "usable_start_utc",
    "usable_end_utc",
    "coverage",
    "cover_before",
    "cover_ingress",
    "cover_flat",
    "cover_egress",
    "cover_after",
    "base_before_min",
    "base_after_min",
    "lost_by",
    "chance_ingress",
    "chance_egress",
    "chance_mid",
    "chance_done",
    "airmass_start",
    "airmass_mid",
    "airmass_end",
    "airmass_min",
    "alt_mid_deg",
    "az_mid_deg",
    "sun_alt_mid_deg",
    "moon_sep_deg",
    "moon_alt_deg",
    "moon_lit",
    "sky_mag_arcsec2",
    "flip_utc",
    "siblings",
    "depth_ppt",
    "band",
    "exposure_s",
    "noise_ppt_min",
    "depth_snr",
    "timing_s",
    "gain_bits",
    "sigma_after_min",
    "worth",
    "flags",
    "sun_sep_deg",
};

static void columns_stand_in_the_agreed_order(void **state)
{
	(void)state;
	assert_true(column_count >= sizeof order / sizeof order[0]);
	for (size_t i = 0; i < sizeof order / sizeof order[0]; i++)
		assert_string_equal(columns[i].name, order[i]);
	for (size_t i = 0; i < column_count; i++) {
		assert_int_equal(column_find(columns[i].name), i);
		assert_true(columns[i].sentence[0] != '\0' && columns[i].heading[0] != '\0');
	}
	assert_int_equal(column_find("nothing"), -1);
}

/* The unit that a name carries, and the decimals that go with it. */
static void decimals_follow_the_unit(void **state)
{
	(void)state;
	for (size_t i = 0; i < column_count; i++) {
		const struct column *c = &columns[i];
		const size_t n = strlen(c->name);
		if (c->type != VALUE_NUMBER)
			continue;
		if (n > 4 && strcmp(c->name + n - 4, "_min") == 0 && strcmp(c->unit, "min") == 0)
			assert_int_equal(c->machine_decimals, 3);
		if (n > 4 && strcmp(c->name + n - 4, "_deg") == 0)
			assert_int_equal(c->machine_decimals, 3);
		if (strncmp(c->name, "chance", 6) == 0 || strncmp(c->name, "cover", 5) == 0 ||
		    strcmp(c->name, "moon_lit") == 0)
			assert_int_equal(c->machine_decimals, 4);
	}
}

static void machine(const char *name, const struct window *w, const struct night *n, char out[512])
{
	const struct column *c = &columns[column_find(name)];
	struct value v = column_value(c, w, n);
	value_machine_text(c, &v, n->clock.leap, out, 512);
}

/* What is not known is empty, never 0 and never `nan`. */
static void unknown_figures_are_empty(void **state)
{
	(void)state;
	struct night_fixture *f = fixture_open(true);
	struct night_view v = fixture_night(f, FIXTURE_EVENING_MJD, true);
	struct window w = v.list.w[0];
	char text[512];
	w.event.sigma_min = w.event.sigma_contact_min = w.event.t2_d = w.event.t3_d = NAN;
	w.event.depth_ppt = NAN;
	w.chance = (struct window_chance){NAN, NAN, NAN, NAN};
	w.cover.usable_start_d = w.cover.share[PART_FLAT] = NAN;
	w.sky.airmass_start = INFINITY;
	static const char *const empty[] = {"telescope",	 "branch",     "sigma_min",
					    "sigma_contact_min", "t2_utc",     "t3_utc",
					    "depth_ppt",	 "chance_mid", "chance_done",
					    "usable_start_utc",	 "cover_flat", "airmass_start",
					    "sky_mag_arcsec2",	 "flip_utc",   "exposure_s",
					    "gain_bits",	 "worth",      "band"};
	for (size_t i = 0; i < sizeof empty / sizeof empty[0]; i++) {
		machine(empty[i], &w, &v.night, text);
		assert_string_equal(text, "");
	}
	for (size_t i = 0; i < column_count; i++) {
		machine(columns[i].name, &w, &v.night, text);
		assert_null(strstr(text, "nan"));
		assert_null(strstr(text, "inf"));
	}
	night_view_free(&v);
	fixture_close(f);
}

/* Times are rounded to the second, with carry into the next day. */
static void times_round_with_carry(void **state)
{
	(void)state;
	struct night_fixture *f = fixture_open(true);
	struct night_view v = fixture_night(f, FIXTURE_EVENING_MJD, true);
	struct window w = v.list.w[0];
	char text[512];
	static const struct {
		double sod_s;
		int32_t days;
		const char *want;
	} rows[] = {
	    {86399.4, 0, "2026-04-22T23:59:59Z"},
	    {86399.6, 0, "2026-04-23T00:00:00Z"},
	    {3599.5, 1, "2026-04-23T01:00:00Z"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		const struct utc t = {.mjd = FIXTURE_EVENING_MJD + rows[i].days,
				      .sod_s = rows[i].sod_s + 1e-6};
		w.event.mid_d = night_of_utc(&v.night, t);
		machine("mid_utc", &w, &v.night, text);
		assert_string_equal(text, rows[i].want);
	}
	w.event.mid_bjd.jd = (struct jd2){2461153.0, 0.9999996};
	machine("mid_bjd_tdb", &w, &v.night, text);
	assert_string_equal(text, "2461154.000000");
	machine("night", &w, &v.night, text);
	assert_string_equal(text, "2026-04-22");
	night_view_free(&v);
	fixture_close(f);
}

static void people_read_local_time(void **state)
{
	(void)state;
	struct night_fixture *f = fixture_open(true);
	struct night_view v = fixture_night(f, FIXTURE_EVENING_MJD, true);
	struct window w = v.list.w[0];
	char text[512];
	const struct column *c = &columns[column_find("t1_utc")];
	/* America/Denver keeps MDT, UTC-6, in April (tzdata 2025b, rule US) */
	w.event.t1_d =
	    night_of_utc(&v.night, (struct utc){FIXTURE_EVENING_MJD + 1, 4.0 * 3600.0 + 59.0 * 60.0 + 31.0});
	struct value value = column_value(c, &w, &v.night);
	value_people_text(c, &value, f->run.clock.leap, f->run.zone, text, sizeof text);
	assert_string_equal(text, "23:00");
	value_people_text(c, &value, f->run.clock.leap, NULL, text, sizeof text);
	assert_string_equal(text, "05:00");
	night_view_free(&v);
	fixture_close(f);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(columns_stand_in_the_agreed_order),
	    cmocka_unit_test(decimals_follow_the_unit),
	    cmocka_unit_test(unknown_figures_are_empty),
	    cmocka_unit_test(times_round_with_carry),
	    cmocka_unit_test(people_read_local_time),
	};
	return cmocka_run_group_tests_name("columns", tests, NULL, NULL);
}
