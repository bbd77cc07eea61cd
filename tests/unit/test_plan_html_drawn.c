/* SPDX-License-Identifier: MIT
 * The drawings of the night sheet: what is worked out for them, room for labels, colours. */
#include "tui/sheets/plan_html_sky.h"

#include "tests/support/check.h"
#include "tests/support/html_check.h"
#include "tests/support/plan_fixture.h"

#include <ctype.h>
#include <math.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

static void a_change_of_clocks_is_told(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_DRAFT, PLAN_FIXTURE_CHANGE_MJD, true);
	char *text = html_page_of(&f->view, NULL);
	html_has(text, "Night 31 Oct/1 Nov 2026, Tern Hill");
	html_has(text, "<b>The clocks change this night</b>, from MDT (UTC-06:00) to MST (UTC-07:00)");
	/* four drawings; 1 h strikes twice, the second time an hour after the first */
	assert_int_equal(html_count(text, ">clocks change<"), 4);
	struct plan_sky sky;
	assert_true(plan_sky_prepare(&f->view, &sky));
	check_close("08:00 UTC", sky.change_d,
		    night_of_utc(&f->night.night, (struct utc){PLAN_FIXTURE_CHANGE_MJD + 1, 8 * 3600.0}),
		    1e-9);
	for (size_t i = 1; i < sky.n_local; i++) {
		check_close("an hour", 24.0 * (sky.local[i].t_d - sky.local[i - 1].t_d), 1.0, 1e-6);
		const bool second = fabs(sky.local[i].t_d - sky.change_d) < 1e-6;
		assert_int_equal(sky.local[i].hour, second ? 1 : (sky.local[i - 1].hour + 1) % 24);
	}
	plan_sky_free(&sky);
	free(text);
	plan_fixture_close(f);
}

/* --- drawings --- */

static double attribute(const char *tag, const char *name)
{
	const char *at = strstr(tag, name);
	assert_non_null(at);
	return strtod(at + strlen(name), NULL);
}

/* Thirty short items after each other on the stars of the fixture. */
static void fill_night(struct plan_fixture *f, struct plan_item_view item[30])
{
	for (int i = 0; i < 30; i++) {
		const double start_s = 60.0 * (150 + 17 * i);
		item[i] = f->item[1 + i % 3];
		item[i].order = i + 1;
		item[i].slew_by = (struct utc){f->night.night.mjd + 1, start_s};
		item[i].start = (struct utc){f->night.night.mjd + 1, start_s + 180.0};
		item[i].end = (struct utc){f->night.night.mjd + 1, start_s + 1000.0};
	}
	f->view.item = item;
	f->view.n_items = 30;
}

/* Numbers in a chart of altitudes: 13 or 20 units wide, 13 high. */
static void assert_labels_apart(const char *svg)
{
	double x[40], y[40], width[40];
	size_t n = 0;
	for (const char *at = svg; (at = strstr(at, "<text class=\"n\"")); at++) {
		assert_true(n < 40);
		x[n] = attribute(at, " x=\"");
		y[n] = attribute(at, " y=\"");
		const char *text = strchr(at, '>') + 1;
		width[n] = isalpha((unsigned char)text[0]) ? 48.0 : text[1] == '<' ? 13.0 : 20.0;
		for (size_t i = 0; i < n; i++)
			if (fabs(x[n] - x[i]) < 0.5 * (width[n] + width[i]) && fabs(y[n] - y[i]) < 13.0)
				check_fail("labels at %g %g and %g %g overlap", x[n], y[n], x[i], y[i]);
		n++;
	}
	assert_true(n >= 30);
}

static void thirty_items_have_room(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_DRAFT, FIXTURE_EVENING_MJD, true);
	struct plan_item_view item[30];
	fill_night(f, item);
	char *text = html_page_of(&f->view, NULL);
	html_sound(text);
	assert_int_equal(html_count(text, "<article "), 30);
	assert_int_equal(html_count(text, "<rect class=\"rs\""), 2 * 30 + 1);
	static const char *const id[] = {"alt-w-t", "alt-n-t"};
	for (size_t i = 0; i < 2; i++) {
		char *svg = html_part(text, id[i], "</svg>");
		assert_labels_apart(svg);
		free(svg);
	}
	char *narrow = html_part(text, "time-n-t", "<ul class=\"key\"");
	double before = 0.0;
	int rows = 0;
	for (const char *at = narrow; (at = strstr(at, "<text class=\"l\"")); at++, rows++) {
		const double y = attribute(at, " y=\"");
		assert_true(y - before >= 15.0);
		before = y;
	}
	assert_int_equal(rows, 2 + 4 + 30); /* Sun, Moon, blocks, items */
	free(narrow);
	free(text);
	plan_fixture_close(f);
}

static void altitudes_and_limit_are_right(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_DRAFT, FIXTURE_EVENING_MJD, true);
	struct plan_sky sky;
	assert_true(plan_sky_prepare(&f->view, &sky));
	check_close("limit of the plan", sky.alt_limit_deg, 30.0, 0.0);
	assert_int_equal(sky.tracks, 2); /* the occultation is of the joint item's star */
	assert_int_equal(sky.track[3], sky.track[1]);
	assert_true(sky.track[PLAN_FIXTURE_IN_DAY] == SIZE_MAX);
	double top = -90.0;
	for (size_t i = 0; i < sky.samples; i++)
		top = fmax(top, sky.alt_deg[sky.track[1] * sky.samples + i]);
	/* by hand: declination 61.2 deg moves by 20.04 arcsec cos(221.9 deg) a year, 26.3 years: 61.091;
	 * highest 90 - (61.091 - 38.62) = 67.529 deg; aberration 20 arcsec, nutation 9 arcsec, and 2.5 min
	 * beside the meridian 0.01 deg */
	check_close("culmination", top, 67.529, 0.02);
	assert_true(sky.usable[sky.first_member[1]].n >= 1);
	plan_sky_free(&sky);
	f->view.limits = "pad=2\talt_limit_deg=42.5";
	assert_true(plan_sky_prepare(&f->view, &sky));
	check_close("its last limit", sky.alt_limit_deg, 42.5, 0.0);
	plan_sky_free(&sky);
	f->view.limits = "xalt_limit_deg=42.5\talt_limit_deg=high";
	assert_true(plan_sky_prepare(&f->view, &sky));
	check_close("the run's", sky.alt_limit_deg, f->base->run.limits.value[LIM_ALT], 0.0);
	plan_sky_free(&sky);
	plan_fixture_close(f);
}

/* Where the Sun does not set the drawing runs from noon to noon. */
static void a_night_without_sunset_is_drawn(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_EMPTY, FIXTURE_EVENING_MJD, true);
	struct run *r = &f->base->run;
	struct plan_sky sky;
	struct err e;
	for (int half = 0; half < 2; half++) {
		r->site.lat_deg = 75.0;
		/* 2026-06-21, 2026-12-21 */
		assert_int_equal(
		    night_build(&f->night.night, &r->site, &r->clock, half ? 61395 : 61212, r->memo, &e),
		    ST_OK);
		assert_true(plan_sky_prepare(&f->view, &sky));
		check_close("from noon", sky.from_d, 0.0, 0.0);
		check_close("to noon", sky.to_d, f->night.night.length_d, 0.0);
		assert_int_equal(sky.sun[SUN_SET].n, half);
		plan_sky_free(&sky);
		char *text = html_page_of(&f->view, NULL);
		html_sound(text);
		html_has_not(text, "nan");
		free(text);
	}
	plan_fixture_close(f);
}

/* --- colours --- */

/* Relative luminance of #rgb or #rrggbb (WCAG 2.1, definitions). */
static double luminance(const char *colour)
{
	const size_t digits = strspn(colour + 1, "0123456789abcdef");
	static const double share[3] = {0.2126, 0.7152, 0.0722};
	double sum = 0.0;
	assert_true(colour[0] == '#' && (digits == 3 || digits == 6));
	for (size_t i = 0; i < 3; i++) {
		const char hex[3] = {colour[1 + (digits == 3 ? i : 2 * i)],
				     colour[1 + (digits == 3 ? i : 2 * i + 1)], '\0'};
		const double v = (double)strtol(hex, NULL, 16) / 255.0;
		sum += share[i] * (v <= 0.03928 ? v / 12.92 : pow((v + 0.055) / 1.055, 2.4));
	}
	return sum;
}

static const char *colour_of(const char *scheme, const char *name)
{
	char key[24];
	snprintf(key, sizeof key, "--%s:", name);
	const char *at = strstr(scheme, key);
	if (!at)
		check_fail("no colour %s", name);
	return at + strlen(key);
}

static void letters_stand_out(void **state)
{
	(void)state;
	static const char *const pair[][2] = {
	    {"fg", "bg"},   {"fg", "card"},	{"soft", "bg"}, {"soft", "card"},
	    {"link", "bg"}, {"warnfg", "warn"}, {"fg", "b0"},	{"fg", "b1"},
	    {"fg", "b2"},   {"fg", "b3"},	{"fg", "b4"},
	};
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_EMPTY, FIXTURE_EVENING_MJD, true);
	char *text = html_page_of(&f->view, NULL);
	int schemes = 0;
	for (const char *at = text; (at = strstr(at, "--bg:")); at++, schemes++)
		for (size_t i = 0; i < sizeof pair / sizeof pair[0]; i++) {
			const double a = luminance(colour_of(at, pair[i][0]));
			const double b = luminance(colour_of(at, pair[i][1]));
			const double ratio = (fmax(a, b) + 0.05) / (fmin(a, b) + 0.05);
			if (ratio < 4.5)
				check_fail("scheme %d: %s on %s has %.2f to 1", schemes, pair[i][0],
					   pair[i][1], ratio);
		}
	assert_int_equal(schemes, 3); /* light, dark, paper */
	free(text);
	plan_fixture_close(f);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(a_change_of_clocks_is_told),
	    cmocka_unit_test(thirty_items_have_room),
	    cmocka_unit_test(altitudes_and_limit_are_right),
	    cmocka_unit_test(a_night_without_sunset_is_drawn),
	    cmocka_unit_test(letters_stand_out),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
