/* SPDX-License-Identifier: MIT
 * The night sheet as a page: whole, safe, with every item's figures. */
#include "tests/support/check.h"
#include "tests/support/html_check.h"
#include "tests/support/plan_fixture.h"
#include "tui/cautions.h"
#include "tui/sheets/html_escape.h"
#include "tui/sheets/plan_words.h"

#include <stdlib.h>
#include <string.h>

static char *changed_lines[] = {(char *)"Tern 18 b moved by 3 min: <version 3> & more"};
static const struct sheet_changes changed = {.since = "edition 2", .line = changed_lines, .n = 1};

static void every_page_is_sound(void **state)
{
	(void)state;
	static const int32_t nights[] = {FIXTURE_EVENING_MJD, PLAN_FIXTURE_CHANGE_MJD};
	for (int kind = PLAN_FIXTURE_KEPT; kind <= PLAN_FIXTURE_EMPTY; kind++)
		for (int i = 0; i < 4; i++) {
			struct plan_fixture *f =
			    plan_fixture_open((enum plan_fixture_kind)kind, nights[i % 2], i < 2);
			char *text = html_page_of(&f->view, i % 2 ? &changed : NULL);
			char *again = html_page_of(&f->view, i % 2 ? &changed : NULL);
			html_sound(text);
			assert_string_equal(text, again);
			free(text);
			free(again);
			plan_fixture_close(f);
		}
}

static void expect_text(const char *in, const char *want)
{
	char *text = NULL;
	size_t n = 0;
	struct html_out out = {.to = open_memstream(&text, &n)};
	html_text(&out, in);
	fclose(out.to);
	assert_false(out.failed);
	assert_string_equal(text, want);
	free(text);
}

static void text_is_escaped(void **state)
{
	(void)state;
	/* by hand, after WHATWG HTML 13.1.4; what text_clean drops: db/text_clean.h */
	static const struct {
		const char *in, *out;
	} rows[] = {
	    {"", ""},
	    {"Tern 18 b", "Tern 18 b"},
	    {"<script>alert('1')</script>", "&lt;script&gt;alert(&#39;1&#39;)&lt;/script&gt;"},
	    {"a & b &lt;", "a &amp; b &amp;lt;"},
	    {"\" onclick=\"x", "&quot; onclick=&quot;x"},
	    {"\x1b[31m\x07", "[31m"},
	    {"a\xE2\x80\xAE"
	     "b",
	     "ab"},
	    {"\xFF", "\xEF\xBF\xBD"},
	    {"one\ntwo\tthree", "one two three"},
	    {"\xCE\xB1 Tern", "\xCE\xB1 Tern"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
		expect_text(rows[i].in, rows[i].out);
	char many[4000], want[12001] = "";
	memset(many, 0xFF, sizeof many - 1);
	many[sizeof many - 1] = '\0';
	for (size_t i = 0; i < sizeof many - 1; i++)
		memcpy(want + 3 * i, "\xEF\xBF\xBD", 4);
	expect_text(many, want);
}

static void text_is_cut_between_characters(void **state)
{
	(void)state;
	/* by hand; a star of the fixture's hostile name takes two columns */
	static const struct {
		const char *in;
		int columns;
		const char *out;
	} rows[] = {
	    {"Tern 18 b", 9, "Tern 18 b"},
	    {"Tern 18 b", 8, "Tern 18\xE2\x80\xA6"},
	    {"a<b<c", 4, "a&lt;b\xE2\x80\xA6"},
	    {"\xF0\x9F\x94\xAD\xF0\x9F\x94\xAD", 3, "\xF0\x9F\x94\xAD\xE2\x80\xA6"},
	    {"\xF0\x9F\x94\xAD\xF0\x9F\x94\xAD", 2, "\xE2\x80\xA6"},
	    {"abc", 1, "\xE2\x80\xA6"},
	};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		char *text = NULL;
		size_t n = 0;
		struct html_out out = {.to = open_memstream(&text, &n)};
		html_text_cut(&out, rows[i].in, rows[i].columns);
		fclose(out.to);
		assert_string_equal(text, rows[i].out);
		free(text);
	}
}

/* --- what stands on it --- */

static void assert_time(const struct plan_view *v, const char *card, struct utc t)
{
	char text[SHEET_TIME_BYTES];
	sheet_local(v, t, false, text);
	html_has(card, text);
	sheet_utc(v, t, false, text);
	html_has(card, text);
}

static void assert_figure(const struct plan_member_view *m, const char *card, const char *column,
			  int decimals)
{
	char text[NUMBER_TEXT_MAX];
	plan_figure(m, column, decimals, text);
	html_has(card, text);
}

static void assert_member(const struct plan_view *v, const struct plan_member_view *m, const char *card)
{
	static const char *const airmass[] = {"airmass_start", "airmass_mid", "airmass_end", "airmass_min"};
	static const char *const chance[] = {"chance_ingress", "chance_egress", "chance_done"};
	char text[NUMBER_TEXT_MAX];
	struct utc t;
	for (int c = 0; c < CONTACT_COUNT; c++)
		if (plan_contact_at(m, (enum plan_contact)c, &t))
			assert_time(v, card, t);
	for (size_t i = 0; i < 4; i++)
		assert_figure(m, card, airmass[i], 2);
	for (size_t i = 0; i < 3; i++) {
		plan_per_cent(m, chance[i], text);
		html_has(card, text);
	}
	assert_figure(m, card, "depth_ppt", 1);
	assert_figure(m, card, "sigma_min", 1);
	assert_figure(m, card, "moon_sep_deg", 0);
	for (int f = 0; f < FLAG_COUNT; f++)
		if (strstr(member_figure(m, "flags"), flag_rules[f].word))
			html_tells(card, flag_rules[f].sentence);
}

static void each_card_has_its_figures(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	char *text = html_page_of(&f->view, NULL);
	for (size_t i = 0; i < f->view.n_items; i++) {
		const struct plan_item_view *item = &f->view.item[i];
		char id[32];
		if (item->in_day)
			continue;
		snprintf(id, sizeof id, " id=\"item-%d\"", item->order);
		char *card = html_part(text, id, "</article>");
		assert_time(&f->view, card, item->slew_by);
		assert_time(&f->view, card, item->start);
		assert_time(&f->view, card, item->end);
		if (item->has_latest)
			assert_time(&f->view, card, item->latest_start);
		for (size_t k = 0; k < item->n; k++)
			assert_member(&f->view, &item->member[k], card);
		html_tells(card, item->if_missed);
		html_has(card, plan_state_words[item->state]);
		free(card);
	}
	free(text);
	plan_fixture_close(f);
}

/* By hand: the joint item of the fixture starts 230 min after 0 h UTC, 6 h ahead of the site's clock, and
 * ends after 435 min, on the second date; its star is at 221.9 deg = 14 h 47 min 36 s. */
static void times_and_places_are_right(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	char *text = html_page_of(&f->view, &changed),
	     *card = html_part(text, " id=\"item-2\"", "</article>");
	html_has(card, "<th scope=\"row\">Start</th><td><span class=\"time\">21:50 MDT</span></td><td>"
		       "<span class=\"time\">03:50 UTC</span> <span class=\"date\">(Thu 23 Apr)</span></td>");
	html_has(card,
		 "<th scope=\"row\">Leave</th><td><span class=\"time\">01:15 MDT</span> <span "
		 "class=\"date\">(Thu 23 Apr)</span></td><td><span class=\"time\">07:15 UTC</span></td>");
	html_has_not(card, "too early");
	/* the third begins after 470 min, after its T1 of 07:49 UTC */
	char *third = html_part(text, " id=\"item-3\"", "</article>");
	html_has(third,
		 "<th scope=\"row\">T1 <small>too early</small></th><td><span class=\"time\">01:49 MDT");
	html_has(third, "<th scope=\"row\">T4</th>");
	free(third);
	html_has(card, "14:47:36.00 +61:12:00.0");
	html_has(card, "12.7 in V");
	html_has(card, "&quot;fine&quot; now, &lt;see log&gt;");
	html_has(text, "<title>Night 22/23 Apr 2026, Tern Hill</title>");
	html_has(text, "Wednesday, 22 April 2026, to Thursday, 23 April 2026");
	html_has(text, "America/Denver, MDT (UTC-06:00)");
	html_has(text, "invented, &quot;Tern group&quot; &lt;2025&gt;");
	html_has(text, "ann &lt;a@tern&gt;");
	html_has(text, "the mid-time is 3.4 min later than planned");
	for (size_t i = 0; i < caution_count; i++)
		html_tells(text, cautions[i]);
	free(card);
	free(text);
	plan_fixture_close(f);
}

static void hostile_names_never_come_raw(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	char *text = html_page_of(&f->view, &changed);
	static const char *const raw[] = {"<b>\"27", "\"27\"", "'x'",	   "<2026>",
					  "<2025>",  "<see",   "<version", "<a@"};
	for (size_t i = 0; i < sizeof raw / sizeof raw[0]; i++)
		html_has_not(text, raw[i]);
	html_has(text, "=Tern &lt;b&gt;&quot;27&quot;&lt;/b&gt; &amp; &#39;x&#39;; a,b\\n");
	html_has(text, "=engineering, &quot;hour&quot; &lt;b&gt;;[2J");
	free(text);
	plan_fixture_close(f);
}

static void changes_come_first_and_what_is_gone(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	char *text = html_page_of(&f->view, &changed);
	const char *first = strstr(text, "<h2>");
	const char *want =
	    "<h2>Changes since edition 2</h2>\n<ul>\n<li>Tern 18 b moved by 3 min: &lt;version";
	assert_int_equal(strncmp(first, want, strlen(want)), 0);
	html_has(text, "<li>Tern 9 b, was ");
	free(text);
	const struct sheet_changes none = {.since = "edition 2"};
	text = html_page_of(&f->view, &none);
	html_has(text, "<h2>Changes since edition 2</h2>\n<p>None.</p>");
	free(text);
	plan_fixture_close(f);
}

static void an_item_in_daylight_is_refused(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_KEPT, FIXTURE_EVENING_MJD, true);
	char *text = html_page_of(&f->view, NULL), *refused = html_part(text, "<h2>Refused", "</section>");
	html_has(refused, cautions[0]);
	html_has(refused, "Tern 2 c");
	html_has(refused, plan_sun_up_reason);
	html_has_not(text, "item-1\"");
	/* three items are drawn at each width; the key has one more box */
	assert_int_equal(html_count(text, "<rect class=\"rs\""), 2 * 3 + 1);
	char *drawn = html_part(text, "<h2>Timeline", "<h2>Blocks");
	html_has_not(drawn, "Tern 2 c");
	free(drawn);
	/* the flats lie in daylight: the caution stands beside them */
	char *blocks = html_part(text, "<h2>Blocks", "</section>"),
	     *flats = html_part(blocks, "evening flats", ">cloud<");
	html_has(flats, cautions[0]);
	free(flats);
	free(blocks);
	free(refused);
	free(text);
	plan_fixture_close(f);
}

static void an_empty_plan_is_a_page(void **state)
{
	(void)state;
	struct plan_fixture *f = plan_fixture_open(PLAN_FIXTURE_EMPTY, FIXTURE_EVENING_MJD, true);
	char *text = html_page_of(&f->view, NULL);
	html_has(text, "Nothing is to be done this night.");
	html_has(text, "<h2>Timeline</h2>");
	html_has(text, cautions[0]);
	html_has_not(text, "<h2>Items</h2>");
	html_has_not(text, "<h2>Refused");
	free(text);
	plan_fixture_close(f);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(text_is_escaped),
	    cmocka_unit_test(text_is_cut_between_characters),
	    cmocka_unit_test(every_page_is_sound),
	    cmocka_unit_test(each_card_has_its_figures),
	    cmocka_unit_test(times_and_places_are_right),
	    cmocka_unit_test(hostile_names_never_come_raw),
	    cmocka_unit_test(changes_come_first_and_what_is_gone),
	    cmocka_unit_test(an_item_in_daylight_is_refused),
	    cmocka_unit_test(an_empty_plan_is_a_page),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
