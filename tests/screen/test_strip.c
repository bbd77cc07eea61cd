/* SPDX-License-Identifier: MIT
 * Time axis, strips and picture of altitudes, against cells worked out by hand. */
#include "tests/support/check.h"
#include "tests/support/night_fixture.h"
#include "tui/pages/night_curve.h"
#include "tui/pages/night_strip.h"

#include <math.h>
#include <string.h>

/* An axis of 24 cells, each one unit wide, so that times are cells. */
static struct night_axis plain_axis(void)
{
	return (struct night_axis){.from_d = 0.0, .to_d = 24.0, .cols = 24, .now_col = AXIS_NONE};
}

/* The sky: day, twilight, dark with the star out of reach, star in reach, and back. */
static void strip_text(const struct window *w, char out[64])
{
	const struct night_axis axis = plain_axis();
	struct intervals up = intervals_none(), allows = intervals_one(2.0, 22.0),
			 reach = intervals_one(3.0, 21.0);
	struct strip s = {.row = STRIP_NO_ROW};
	size_t used = 0;
	intervals_append(&up, 0.0, 1.0);
	intervals_append(&up, 23.0, 24.0);
	strip_make(&s, &axis, w, &(struct strip_sky){&up, &allows, &reach});
	for (int i = 0; i < axis.cols; i++)
		out[used++] = *glyph_text((enum glyph)s.cell[i].glyph, TIER_ASCII);
	out[used] = '\0';
}

static void test_strips(void **state)
{
	static const struct {
		double reserve[2], before, contact[5], after, usable[2];
		const char *want;
	} rows[] = {
	    /* all that happens can be observed */
	    {{4, 20}, 2, {8, 10, 12, 14, 16}, 2, {4, 20}, "%= .''\"\"\\\\__v_//\"\"''. =%"},
	    /* the Sun takes the beginning, up to the middle of the ingress */
	    {{4, 20}, 2, {8, 10, 12, 14, 16}, 2, {9, 20}, "%= .::::!\\__v_//\"\"''. =%"},
	    /* less, and more, than half of a cell's part is left */
	    {{4, 20}, 2, {8, 10, 12, 14, 16}, 2, {8.6, 20}, "%= .::::!\\__v_//\"\"''. =%"},
	    {{4, 20}, 2, {8, 10, 12, 14, 16}, 2, {8.4, 20}, "%= .::::\\\\__v_//\"\"''. =%"},
	    /* from before the middle on nothing can be observed */
	    {{4, 20}, 2, {8, 10, 12, 14, 16}, 2, {4, 11.9}, "%= .''\"\"\\\\__X!!!::::. =%"},
	    {{4, 20}, 2, {8, 10, 12, 14, 16}, 2, {0, 0}, "%= .::::!!!!X!!!::::. =%"},
	    /* limbs shorter than a cell show where their middles are */
	    {{4, 20}, 2, {8.7, 8.9, 12, 15.1, 15.3}, 2, {4, 20}, "%= .'''\"\\___v__/\"'''. =%"},
	    /* grazing: each limb is half the event */
	    {{4, 20}, 2, {8, NAN, 12, NAN, 16}, 2, {4, 20}, "%= .''\"\"\\\\\\\\v///\"\"''. =%"},
	    /* the whole event in one cell */
	    {{10, 15}, 1, {12.1, 12.2, 12.5, 12.8, 12.9}, 1, {10, 15}, "%= .......'\"v\"'...... =%"},
	    /* it begins before the axis, and ends after it */
	    {{-3, 20}, 2, {-1, 0.5, 3, 5.5, 7}, 2, {-3, 20}, "<__v_//\"\"'''''''''''. =%"},
	    {{4, 27}, 2, {18, 19, 22, 25, 26}, 1, {4, 22.5}, "%= .''''''''''''\"\"\\___v>"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct window w = {.event = {.reserve_start_d = rows[i].reserve[0],
					     .reserve_end_d = rows[i].reserve[1],
					     .before_d = rows[i].before,
					     .after_d = rows[i].after,
					     .t1_d = rows[i].contact[0],
					     .t2_d = rows[i].contact[1],
					     .mid_d = rows[i].contact[2],
					     .t3_d = rows[i].contact[3],
					     .t4_d = rows[i].contact[4]},
				   .cover = {.usable = intervals_one(rows[i].usable[0], rows[i].usable[1])}};
		char got[64];
		strip_text(&w, got);
		if (strcmp(got, rows[i].want) != 0)
			check_fail("row %zu: got  `%s`\n       want `%s`", i, got, rows[i].want);
	}
}

/* The line of the hour stands on everything but limbs, mid-time and losses. */
static void test_now(void **state)
{
	static const struct {
		double now_d;
		const char *want;
	} rows[] = {{5.5, "%= .'|\"\"\\\\__v_//\"\"''. =%\n"},
		    {11.2, "%= .''\"\"\\\\_|v_//\"\"''. =%\n"},
		    {12.5, "%= .''\"\"\\\\__v_//\"\"''. =%\n"},
		    {-1.0, "%= .''\"\"\\\\__v_//\"\"''. =%\n"},
		    {2.0, "%=|.''\"\"\\\\__v_//\"\"''. =%\n"}};
	(void)state;
	struct window w = {.event = {.reserve_start_d = 4,
				     .reserve_end_d = 20,
				     .before_d = 2,
				     .after_d = 2,
				     .t1_d = 8,
				     .t2_d = 10,
				     .mid_d = 12,
				     .t3_d = 14,
				     .t4_d = 16},
			   .cover = {.usable = intervals_one(4, 20)}};
	struct intervals up = intervals_none(), allows = intervals_one(2.0, 22.0),
			 reach = intervals_one(3.0, 21.0);
	intervals_append(&up, 0.0, 1.0);
	intervals_append(&up, 23.0, 24.0);
	struct night_axis axis = plain_axis();
	struct strip s;
	strip_make(&s, &axis, &w, &(struct strip_sky){&up, &allows, &reach});
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct grid g = {.tier = TIER_ASCII};
		struct err e;
		char text[64];
		assert_int_equal(grid_resize(&g, 1, 24, &e), ST_OK);
		axis_tick(&axis, rows[i].now_d);
		strip_draw(&s, &axis, &g, 0, 0);
		grid_to_text(&g, false, text, sizeof text);
		assert_string_equal(text, rows[i].want);
		grid_close(&g);
	}
}

static double local_hours(const struct night_fixture *f, const struct night *n, double t_d)
{
	return zone_local(f->run.zone, night_utc(n, t_d)).sod_s / 3600.0;
}

/* Each label stands in the cell in which its hour begins, at every width. */
static void test_hours(void **state)
{
	(void)state;
	struct night_fixture *f = fixture_open(true);
	struct night_view v = fixture_night(f, FIXTURE_EVENING_MJD, false);
	struct night_axis a;
	for (int cols = 1; cols <= AXIS_COLS_MAX; cols++) {
		int labels = 0;
		axis_make(&a, &v.night, f->run.zone, -12.0, cols);
		assert_int_equal(strlen(a.hours), cols);
		for (int i = 0; i < cols; i++) {
			if (a.hours[i] == ' ')
				continue;
			int hour = 10 * (a.hours[i] - '0') + (a.hours[i + 1] - '0');
			double from = local_hours(f, &v.night, axis_time(&a, i)),
			       to = local_hours(f, &v.night, axis_time(&a, i + 1.0));
			double past = fmod(hour - from + 24.0, 24.0), length = fmod(to - from + 24.0, 24.0);
			/* an hour on the edge itself may be a rounding before it */
			if (past > length + 1e-6 && past < 24.0 - 1e-6)
				check_fail("%d columns: %d h stands in the cell %.4f to %.4f h", cols, hour,
					   from, to);
			labels++;
			i++;
		}
		if (cols >= 20)
			assert_true(labels >= 3);
		if (cols >= 60)
			assert_int_equal(labels, 11); /* 20 to 06 */
	}
	night_view_free(&v);
	fixture_close(f);
}

/* 1 November 2026: 02:00 MDT is 01:00 MST (15 U.S.C. 260a), so the hour that begins with 01 comes twice. */
static void test_hours_of_a_clock_change(void **state)
{
	(void)state;
	struct night_fixture *f = fixture_open(true);
	struct night_view v = fixture_night(f, 61344 /* 2026-10-31 */, false);
	struct night_axis a;
	axis_make(&a, &v.night, f->run.zone, -12.0, 120);
	const char *first = strstr(a.hours, "01"), *second = first ? strstr(first + 2, "01") : NULL;
	assert_non_null(first);
	assert_non_null(second);
	assert_non_null(strstr(second, "02"));
	/* both hours are one hour of the sky long */
	double cell_h = (a.to_d - a.from_d) * 24.0 / a.cols;
	check_close("cells between them", (double)(second - first) * cell_h, 1.0, cell_h);
	night_view_free(&v);
	fixture_close(f);
}

/* Day, twilight, Moon and late twilight in their order, against the night's own times. */
static void test_band(void **state)
{
	(void)state;
	struct night_fixture *f = fixture_open(true);
	struct night_view v = fixture_night(f, FIXTURE_EVENING_MJD, false);
	struct night_axis a;
	axis_make(&a, &v.night, f->run.zone, -12.0, 150);
	const struct night_times *t = &v.night.times;
	for (int i = 0; i < a.cols; i++) {
		double mid = axis_time(&a, i + 0.5);
		bool day = mid < t->sunset_d || mid > t->sunrise_d;
		bool bright = mid < t->nautical_dusk_d || mid > t->nautical_dawn_d;
		bool moon = mid < t->moonset_d; /* it is up at noon and less than half lit */
		bool late = mid < t->astronomical_dusk_d || mid > t->astronomical_dawn_d;
		enum glyph want = day	   ? GLYPH_DAY
				  : bright ? GLYPH_TWILIGHT
				  : moon   ? GLYPH_MOON
				  : late   ? GLYPH_LATE
					   : GLYPH_BLANK;
		if (a.band[i] != want)
			check_fail("cell %d: glyph %d, want %d", i, a.band[i], want);
	}
	night_view_free(&v);
	fixture_close(f);
}

/* Without sunset and sunrise the axis runs from noon to noon. */
static void test_axis_without_a_night(void **state)
{
	(void)state;
	struct night_fixture *f = fixture_open(false);
	f->run.site.lat_deg = 75.0;
	struct night_view v = fixture_night(f, 61211 /* 2026-06-20 */, false);
	struct night_axis a;
	axis_make(&a, &v.night, NULL, -12.0, 48);
	check_close("from", a.from_d, 0.0, 0.0);
	check_close("to", a.to_d, v.night.length_d, 0.0);
	for (int i = 0; i < a.cols; i++)
		assert_int_equal(a.band[i], GLYPH_DAY);
	assert_int_equal(axis_col(&a, NAN), AXIS_NONE);
	assert_int_equal(axis_col(&a, -0.001), AXIS_NONE);
	assert_int_equal(axis_col(&a, 0.0), 0);
	assert_int_equal(axis_col(&a, a.to_d), AXIS_NONE);
	night_view_free(&v);
	fixture_close(f);
}

/* The line goes through the altitude of every cell's middle, whole where the star can be observed. */
static void test_curve(void **state)
{
	enum { ROWS = 9, COLS = 100 };
	(void)state;
	struct night_fixture *f = fixture_open(true);
	struct night_view v = fixture_night(f, FIXTURE_EVENING_MJD, false);
	struct night_axis a;
	static struct curve c;
	axis_make(&a, &v.night, f->run.zone, -12.0, COLS);
	for (size_t w = 0; w < v.list.n; w++) {
		const struct window *win = &v.list.w[w];
		struct star star = night_star(&v.night, win->event.prepared->target);
		struct intervals dark = night_sun_below(&v.night, -12.0);
		curve_make(&c, ROWS, &a, win, &v.night, &star, NULL);
		assert_int_equal(c.rows, ROWS);
		for (int col = 0; col < COLS; col++) {
			double t = axis_time(&a, col + 0.25);
			double alt = night_star_altaz(&v.night, &star, t).alt_deg;
			bool sure = intervals_contain(&dark, t) && alt > 30.0 && v.night.times.moonset_d < t;
			int dot = (int)floor((90.0 - alt) / 90.0 * (4 * ROWS - 1) + 0.5);
			bool set =
			    dot >= 0 && dot < 4 * ROWS && (c.cell[dot / 4][col].dots & (1u << dot % 4));
			if (sure || (col % 2 == 0 && alt >= 0.0))
				assert_true(set);
			if (col % 2 == 1 && (alt < 29.0 || t < v.night.times.sunset_d))
				assert_false(set);
		}
		int mid = axis_col(&a, win->event.mid_d);
		assert_int_equal(c.mark[mid], 'm');
		assert_string_equal(c.label[0], "90");
		assert_string_equal(c.label[ROWS - 1], " 0");
		/* (90 - 30) / 90 of 35 steps: dot 23, row 5 */
		assert_string_equal(c.label[5], "30");
	}
	curve_make(&c, 2, &a, &v.list.w[0], &v.night, &(struct star){0}, NULL);
	assert_int_equal(c.rows, 0);
	night_view_free(&v);
	fixture_close(f);
}

/* A mask of 40 degrees all round stands at its altitude; the star's line is broken under it. */
static void test_curve_mask(void **state)
{
	enum { ROWS = 14, COLS = 60 };
	(void)state;
	struct night_fixture *f = fixture_open(true);
	static struct mask mask;
	mask = (struct mask){.n = 1, .knot = {{0.0, 40.0}}};
	f->run.site.mask = &mask;
	struct night_view v = fixture_night(f, FIXTURE_EVENING_MJD, true);
	struct night_axis a;
	static struct curve c;
	axis_make(&a, &v.night, f->run.zone, -12.0, COLS);
	const struct window *w = &v.list.w[0];
	struct star star = night_star(&v.night, w->event.prepared->target);
	curve_make(&c, ROWS, &a, w, &v.night, &star, NULL);
	int dot = (int)floor((90.0 - 40.0) / 90.0 * (4 * ROWS - 1) + 0.5), seen = 0;
	for (int col = 0; col < COLS; col++)
		seen += c.cell[dot / 4][col].glyph == GLYPH_MASK;
	assert_true(seen > COLS / 2);
	night_view_free(&v);
	fixture_close(f);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_strips), cmocka_unit_test(test_now),
	    cmocka_unit_test(test_hours),  cmocka_unit_test(test_hours_of_a_clock_change),
	    cmocka_unit_test(test_band),   cmocka_unit_test(test_axis_without_a_night),
	    cmocka_unit_test(test_curve),  cmocka_unit_test(test_curve_mask),
	};
	return cmocka_run_group_tests_name("strip", tests, NULL, NULL);
}
