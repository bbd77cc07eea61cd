/* SPDX-License-Identifier: MIT
 * The list's orders and filters, over the night of the fixture. */
#include "tests/support/check.h"
#include "tests/support/night_fixture.h"
#include "tui/pages/night_filter.h"
#include "tui/pages/night_sort.h"

#include <math.h>
#include <string.h>

static struct night_fixture *fixture;
static struct night_view view;

static struct night_rows rows_of_fixture(void)
{
	struct night_rows rows = {0};
	struct err e;
	if (night_rows_make(&rows, &view, &fixture->run.leap, fixture->run.zone, &e) != ST_OK)
		check_fail("%s", e.text);
	return rows;
}

static double figure(const struct night_row *row, int rule)
{
	if (rule == SORT_MAG)
		return row->window->event.prepared->target->mag;
	if (rule == SORT_WORTH)
		return row->worth;
	if (rule == SORT_ORDER)
		return row->plan.order > 0 ? (double)row->plan.order : (double)NAN;
	return row_figure(row, sort_rules[rule].column);
}

static void check_pair(const struct night_row *a, const struct night_row *b, int rule, bool turned)
{
	bool falling = sort_rules[rule].greatest_first != turned;
	if (rule == SORT_NAME) {
		assert_true(turned ? strcmp(a->name, b->name) >= 0 : strcmp(a->name, b->name) <= 0);
		return;
	}
	if (rule == SORT_ON) {
		int x = !a->has_chance ? 2 : !a->usable, y = !b->has_chance ? 2 : !b->usable;
		assert_true(x <= y);
		if (x == y)
			assert_true(falling ? a->on_d >= b->on_d : a->on_d <= b->on_d);
		return;
	}
	double x = figure(a, rule), y = figure(b, rule);
	assert_true(!isnan(x) || isnan(y)); /* what is unknown stands last */
	if (!isnan(y))
		assert_true(falling ? x >= y : x <= y);
}

static void test_orders(void **state)
{
	(void)state;
	struct err e;
	struct night_rows rows = rows_of_fixture();
	rows.row[1].plan.order = 3;
	rows.row[2].plan.order = 1;
	rows.row[5].plan.order = 3;
	for (int rule = 0; rule < SORT_COUNT; rule++)
		for (int turned = 0; turned < 2; turned++) {
			assert_int_equal(sort_find((uint32_t)(unsigned char)sort_rules[rule].key), rule);
			assert_int_equal(night_rows_arrange(&rows, rule, turned, NULL, &e), ST_OK);
			assert_int_equal(rows.n, view.list.n);
			for (size_t i = 1; i < rows.n; i++)
				check_pair(&rows.row[i - 1], &rows.row[i], rule, turned);
		}
	assert_int_equal(sort_find('q'), -1);
	assert_int_equal(sort_find(0x4E2D), -1);
	night_rows_free(&rows);
}

/* What is left out stands behind the rest and comes back. */
static void test_left_out(void **state)
{
	(void)state;
	struct err e;
	struct night_rows rows = rows_of_fixture();
	bool shown[64] = {false};
	assert_true(rows.total <= 64 && rows.total > 3);
	const struct window *kept = rows.row[2].window;
	shown[2] = true;
	assert_int_equal(night_rows_arrange(&rows, SORT_ON, false, shown, &e), ST_OK);
	assert_int_equal(rows.n, 1);
	assert_int_equal(rows.total, view.list.n);
	assert_ptr_equal(rows.row[0].window, kept);
	assert_int_equal(night_rows_arrange(&rows, SORT_ON, false, NULL, &e), ST_OK);
	assert_int_equal(rows.n, view.list.n);
	night_rows_free(&rows);
}

/* Sentences and the names that they keep, in the order of be-on time. Worked out from the list:
 * 2 c 21:03 done 0, SUN UP, sigma 0.7, alt 70, Moon 43, mag 12.2; 18 b 21:48 100, alt 53; 18 c 21:59 100, alt
 * 58; 33 b 22:08 65, sigma 90.7; 14 b 23:19 100, alt 87; 9 b 23:33 0, alt 33; 5 b 00:34 100, grazing; 27 b
 * 02:15 16; 31 b 02:35 0, SUN UP; 7 b 21:37 no sigma; 40 b 22:05 phase lost. */
static void test_sentences(void **state)
{
	static const struct {
		const char *sentence, *names;
	} rows[] = {
	    {"", "2 c,18 b,18 c,33 b,14 b,9 b,5 b,27 b,31 b,7 b,40 b"},
	    {"   ", "2 c,18 b,18 c,33 b,14 b,9 b,5 b,27 b,31 b,7 b,40 b"},
	    {"worth > 0.5 & worth < 1", "33 b"},
	    {"worth = 1", "18 b,18 c,14 b,5 b"},
	    {"done > 50", "18 b,18 c,33 b,14 b,5 b"},
	    {"done>50&alt>55", "18 c,33 b,14 b,5 b"},
	    {"chance_done > 0.5 & alt_mid_deg > 55", "18 c,33 b,14 b,5 b"},
	    {"done = 65", "33 b"},
	    {"done != 100", "2 c,33 b,9 b,27 b,31 b"},
	    {"done >= 0 & done <= 0", "2 c,9 b,31 b"},
	    {"done < 50 & done > 0", "27 b"},
	    {"on < 22:00", "2 c,18 b,18 c,7 b"},
	    {"on >= 23:33 & on < 02:35", "9 b,5 b,27 b"},
	    {"on = 21:03", "2 c"},
	    {"on != 21:03 & on < 21:50", "18 b,7 b"},
	    {"on < 22:00 & done > 50 | name = 40", "18 b,18 c,40 b"},
	    {"name = 40 | on < 22:00 & done > 50", "18 b,18 c,40 b"},
	    {"tern 18", "18 b,18 c"},
	    {"TERN18", "18 b,18 c"},
	    {"! tern 18 & done > 50", "33 b,14 b,5 b"},
	    {"name != b", "2 c,18 c"},
	    {"lost = SUN UP", "2 c,33 b,31 b,40 b"},
	    {"lost = low", "9 b,27 b"},
	    {"lost=nothing & moon>80", "14 b,5 b"},
	    {"doubts = phase", "40 b"},
	    {"state = now & done > 50", "18 b,18 c,33 b"},
	    {"state = next", "14 b"},
	    {"kind = transit & alt > 85", "14 b"},
	    {"kind = occ", ""},
	    {"tags = first", "14 b"},
	    {"first", "14 b"},
	    {"mag < 10.5", "31 b"},
	    {"mag = 12.2", "2 c"},
	    {"sigma > 50", "33 b,40 b"},
	    {"sigma > 0 & sigma < 0.5", "14 b"},
	    {"depth > 14 & in = 100", "9 b,5 b"},
	    {"tern | tern", "2 c,18 b,18 c,33 b,14 b,9 b,5 b,27 b,31 b,7 b,40 b"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct filter f = {.n = 0};
		struct err e;
		char got[512] = "";
		struct night_rows r = rows_of_fixture();
		assert_int_equal(night_rows_arrange(&r, SORT_ON, false, NULL, &e), ST_OK);
		double now_d = night_of_utc(&view.night, wall_now(&fixture->run.wall));
		night_rows_tick(&r, now_d, true);
		if (filter_parse(rows[i].sentence, &f, &e) != ST_OK)
			check_fail("`%s`: %s", rows[i].sentence, e.text);
		for (size_t k = 0; k < r.n; k++)
			if (filter_keeps(&f, &r.row[k], &view.night, fixture->run.zone)) {
				size_t used = strlen(got);
				snprintf(got + used, sizeof got - used, "%s%s", used ? "," : "",
					 r.row[k].name + strlen("Tern "));
			}
		if (strcmp(got, rows[i].names) != 0)
			check_fail("`%s` keeps %s, want %s", rows[i].sentence, got, rows[i].names);
		night_rows_free(&r);
	}
}

static void test_faults(void **state)
{
	static const struct {
		const char *sentence, *said;
	} rows[] = {
	    {"dane > 50", "no figure is called \"dane\""},
	    {"> 50", "no figure is called \"\""},
	    {"flags > 1", "no figure is called \"flags\""},
	    {"done >", "nothing stands behind `done >`"},
	    {"done > x", "`done >` needs a number (got \"x\")"},
	    {"done > 5 0", "needs a number"},
	    {"done > > 5", "needs a number"},
	    {"done > nan", "needs a number"},
	    {"on < 25:00", "`on <` needs a time HH:MM (got \"25:00\")"},
	    {"on < 9:00", "needs a time HH:MM"},
	    {"on < 5", "needs a time HH:MM"},
	    {"name < x", "name is a text: it takes = or !="},
	    {"name =", "nothing stands behind `name =`"},
	    {"&", "a condition is missing beside & or |"},
	    {"a & ", "a condition is missing"},
	    {"a || b", "a condition is missing"},
	    {"!", "nothing stands behind !"},
	    {"a&a&a&a&a&a&a&a&a&a&a&a&a", "more than 12 conditions"},
	    {"\033[2J > 1", "no figure is called \"\\x1b[2J\""},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct filter f = {.n = 7};
		struct err e;
		assert_int_equal(filter_parse(rows[i].sentence, &f, &e), ST_SYNTAX);
		assert_int_equal(f.n, 7);
		if (!strstr(e.text, rows[i].said))
			check_fail("`%s`: said \"%s\", want \"%s\"", rows[i].sentence, e.text, rows[i].said);
	}
}

/* Random sentences of the grammar's own pieces: no fault of memory, and what is accepted can be used. */
static void test_random_sentences(void **state)
{
	static const char *const pieces[] = {"done", "on",   "name", "tern", "!",     "&",  "|",    "<",
					     "<=",   ">",    "=",    "!=",   "21:30", "50", "-1e3", " ",
					     "é",    "\xff", "\033", "mag",  "lost",  "中", "00:00"};
	struct rng r = rng_open("filters");
	struct night_rows rows = rows_of_fixture();
	(void)state;
	for (int step = 0; step < 20000; step++) {
		char text[256] = "";
		struct filter f = {.n = 0};
		for (int i = 0; i < 12; i++) {
			size_t at = (size_t)(rng_unit(&r) * (double)(sizeof pieces / sizeof pieces[0]));
			size_t used = strlen(text);
			snprintf(text + used, sizeof text - used, "%s", pieces[at]);
		}
		if (filter_parse(text, &f, NULL) == ST_OK)
			for (size_t k = 0; k < rows.n; k++)
				filter_keeps(&f, &rows.row[k], &view.night, fixture->run.zone);
	}
	night_rows_free(&rows);
}

static void test_text_holds(void **state)
{
	(void)state;
	assert_true(text_holds("Tern 14 b", "tern14"));
	assert_true(text_holds("Tern14b", "14 B"));
	assert_true(text_holds("Tern 14 b", "b"));
	assert_false(text_holds("Tern 14 b", "15"));
	assert_false(text_holds("Tern 14 b", ""));
	assert_false(text_holds("Tern 14 b", "  "));
	assert_false(text_holds("", "x"));
	assert_true(text_holds("aab", "ab"));
}

static int open_all(void **state)
{
	(void)state;
	fixture = fixture_open(true);
	for (int i = 0; i < FIXTURE_TARGETS; i++)
		fixture->target[i].tags =
		    strcmp(fixture->target[i].name, "Tern 14 b") == 0 ? "first good" : "";
	view = fixture_night(fixture, FIXTURE_EVENING_MJD, false);
	return 0;
}

static int close_all(void **state)
{
	(void)state;
	night_view_free(&view);
	fixture_close(fixture);
	return 0;
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_orders),	     cmocka_unit_test(test_left_out),
	    cmocka_unit_test(test_sentences),	     cmocka_unit_test(test_faults),
	    cmocka_unit_test(test_random_sentences), cmocka_unit_test(test_text_holds),
	};
	return cmocka_run_group_tests_name("arrange", tests, open_all, close_all);
}
