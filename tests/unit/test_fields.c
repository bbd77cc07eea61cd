/* SPDX-License-Identifier: MIT */
#include "tests/support/check.h"

#include "db/fields.h"
#include "db/targets.h"
#include "ephem/number_text.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

/* A row that is good; the tests lay other texts over it. */
static struct field_texts good_row(void)
{
	struct field_texts texts;
	for (int i = 0; i < FIELD_COUNT; i++)
		texts.text[i] = "";
	texts.text[FIELD_AT_NAME] = "Tern 14 b";
	texts.text[FIELD_AT_RA] = "187.5";
	texts.text[FIELD_AT_DEC] = "-12.25";
	texts.text[FIELD_AT_T0] = "2459000.5";
	texts.text[FIELD_AT_SCALE] = "BJD_TDB";
	texts.text[FIELD_AT_PERIOD] = "3.5";
	return texts;
}

/* --- the table itself --- */

static void test_names(void **state)
{
	/* the columns of the target table, in their order */
	static const char *const names[FIELD_COUNT] = {"name",
						       "ra_deg",
						       "dec_deg",
						       "pm_ra_masyr",
						       "pm_dec_masyr",
						       "t0_jd",
						       "t0_err_d",
						       "time_scale",
						       "period_d",
						       "period_err_d",
						       "duration_h",
						       "depth_ppt",
						       "k",
						       "a_rs",
						       "inc_deg",
						       "ecc",
						       "omega_deg",
						       "mag",
						       "band",
						       "teff_k",
						       "rstar_rsun",
						       "mstar_msun",
						       "source",
						       "t0_period_cov_d2",
						       "dpde_d",
						       "dpde_err_d",
						       "duration_err_h",
						       "ttv_amp_min",
						       "plx_mas",
						       "pos_epoch_yr",
						       "priority",
						       "tags",
						       "note",
						       "sun_limit_deg",
						       "sun_limit_baseline_deg",
						       "alt_limit_deg",
						       "airmass_limit",
						       "moon_limit_deg",
						       "baseline_before_min",
						       "baseline_after_min",
						       "ecosw_err",
						       "t0_dpde_cov_d2",
						       "period_dpde_cov_d2"};
	static const struct {
		int at;
		const char *name;
	} known[] = {
	    {FIELD_AT_NAME, "name"},	       {FIELD_AT_RA, "ra_deg"},
	    {FIELD_AT_DEC, "dec_deg"},	       {FIELD_AT_T0, "t0_jd"},
	    {FIELD_AT_T0_ERR, "t0_err_d"},     {FIELD_AT_SCALE, "time_scale"},
	    {FIELD_AT_PERIOD, "period_d"},     {FIELD_AT_PERIOD_ERR, "period_err_d"},
	    {FIELD_AT_DURATION, "duration_h"}, {FIELD_AT_INC, "inc_deg"},
	    {FIELD_AT_SOURCE, "source"},       {FIELD_AT_COVARIANCE, "t0_period_cov_d2"},
	    {FIELD_AT_DPDE, "dpde_d"},	       {FIELD_AT_DURATION_ERR, "duration_err_h"},
	};
	(void)state;
	for (int i = 0; i < FIELD_COUNT; i++) {
		assert_string_equal(fields[i].name, names[i]);
		assert_int_equal(field_find(names[i]), i);
		assert_true(strlen(fields[i].sentence) >= 10);
	}
	for (size_t i = 0; i < sizeof known / sizeof known[0]; i++)
		assert_string_equal(fields[known[i].at].name, known[i].name);
	assert_int_equal(field_find("nosuch"), -1);
	assert_int_equal(field_find(""), -1);
}

/* --- one field at a time --- */

struct sample {
	const char *field, *text;
	enum status want; /* of the row */
	bool doubt;
	double value; /* where it was read */
};

static double value_of(const struct target *t, int field)
{
	double value;
	if (fields[field].kind == FIELD_DATE)
		return jd2_value(t->t0);
	memcpy(&value, (const char *)t + fields[field].offset, sizeof value);
	return value;
}

static void test_values(void **state)
{
	static const struct sample rows[] = {
	    {"ra_deg", "0", ST_OK, false, 0},
	    {"ra_deg", "359.999999", ST_OK, false, 359.999999},
	    {"ra_deg", "12:30:00", ST_OK, false, 187.5},
	    {"ra_deg", "360", ST_RANGE, false, 0},
	    {"ra_deg", "24:00:00", ST_RANGE, false, 0},
	    {"ra_deg", "-1", ST_SYNTAX, false, 0},
	    {"ra_deg", "12:60:00", ST_RANGE, false, 0},
	    {"ra_deg", "12:30", ST_SYNTAX, false, 0},
	    {"ra_deg", "abc", ST_SYNTAX, false, 0},
	    {"ra_deg", "", ST_SYNTAX, false, 0},
	    {"dec_deg", "90", ST_OK, false, 90},
	    {"dec_deg", "-0:30:00", ST_OK, false, -0.5},
	    {"dec_deg", "90:00:00.1", ST_RANGE, false, 0},
	    {"dec_deg", "91", ST_RANGE, false, 0},
	    {"dec_deg", "nan", ST_SYNTAX, false, 0},
	    {"t0_jd", "2433282.5", ST_OK, false, 2433282.5}, /* 1950-01-01 0h */
	    {"t0_jd", "2433282.4", ST_RANGE, false, 0},
	    {"t0_jd", "2488434.5", ST_OK, false, 2488434.5}, /* 2101-01-01 0h */
	    {"t0_jd", "2488434.6", ST_RANGE, false, 0},
	    {"t0_jd", "59000.5", ST_RANGE, false, 0},
	    {"t0_jd", "0", ST_RANGE, false, 0},
	    {"t0_jd", "1e400", ST_RANGE, false, 0},
	    {"t0_jd", "2459000,5", ST_SYNTAX, false, 0},
	    {"t0_jd", "inf", ST_SYNTAX, false, 0},
	    {"t0_err_d", "0", ST_OK, false, 0},
	    {"t0_err_d", "0.0003", ST_OK, false, 0.0003},
	    {"t0_err_d", "-1e-9", ST_RANGE, false, 0},
	    {"t0_err_d", "n/a", ST_SYNTAX, false, 0},
	    {"t0_err_d", "3.6", ST_OK, true, 0}, /* above the period */
	    {"period_d", "0.09", ST_OK, false, 0.09},
	    {"period_d", "0", ST_RANGE, false, 0},
	    {"period_d", "-3", ST_RANGE, false, 0},
	    {"period_d", "1e300", ST_RANGE, false, 0},
	    {"period_d", "3,5", ST_SYNTAX, false, 0},
	    {"period_err_d", "0", ST_OK, false, 0},
	    {"period_err_d", "-0.1", ST_RANGE, false, 0},
	    {"period_err_d", "5.2e07", ST_OK, true, 0},
	    {"duration_h", "2.5", ST_OK, false, 2.5},
	    {"duration_h", "0", ST_OK, true, 0},
	    {"duration_h", "-1", ST_OK, true, 0},
	    {"duration_h", "84", ST_OK, true, 0}, /* 3.5 d, the period */
	    {"duration_h", "83.9", ST_OK, false, 83.9},
	    {"duration_h", "two", ST_OK, true, 0},
	    {"depth_ppt", "-1", ST_OK, true, 0},
	    {"depth_ppt", "0", ST_OK, true, 0},
	    {"depth_ppt", "1000", ST_OK, false, 1000},
	    {"depth_ppt", "1001", ST_OK, true, 0},
	    {"k", "-0.1", ST_OK, true, 0},
	    {"k", "7.28", ST_OK, false,
	     7.28}, /* a planet before a white dwarf: Vanderburg et al. 2020, Nature 585, 363 */
	    {"a_rs", "1", ST_OK, true, 0},
	    {"a_rs", "1.01", ST_OK, false, 1.01},
	    {"inc_deg", "180", ST_OK, false, 180},
	    {"inc_deg", "181", ST_OK, true, 0},
	    {"inc_deg", "-1", ST_OK, true, 0},
	    {"ecc", "0", ST_OK, false, 0},
	    {"ecc", "0.95", ST_OK, false, 0.95},
	    {"ecc", "1", ST_OK, true, 0},
	    {"ecc", "-0.1", ST_OK, true, 0},
	    {"omega_deg", "-360", ST_OK, false, -360},
	    {"omega_deg", "791", ST_OK, true, 0},
	    {"mag", "-1.46", ST_OK, false, -1.46},
	    {"mag", "99", ST_OK, true, 0},
	    {"teff_k", "58.65", ST_OK, true, 0},
	    {"teff_k", "5772", ST_OK, false, 5772},
	    {"rstar_rsun", "0", ST_OK, true, 0},
	    {"mstar_msun", "inf", ST_OK, true, 0},
	    {"pm_ra_masyr", "-10362", ST_OK, false, -10362},
	    {"pm_dec_masyr", "1e6", ST_OK, true, 0},
	    {"plx_mas", "-0.3", ST_OK, true, 0},
	    {"pos_epoch_yr", "2016", ST_OK, false, 2016},
	    {"pos_epoch_yr", "16", ST_OK, true, 0},
	    {"ecosw_err", "0.0007", ST_OK, false, 0.0007},
	    {"ecosw_err", "0", ST_OK, false, 0},
	    {"ecosw_err", "1.01", ST_OK, true, 0},
	    {"ecosw_err", "-0.001", ST_OK, true, 0},
	    {"ecosw_err", "small", ST_OK, true, 0},
	    {"priority", "0", ST_OK, true, 0},
	    {"priority", "2.5", ST_OK, false, 2.5},
	    {"sun_limit_deg", "-18", ST_OK, false, -18},
	    {"sun_limit_deg", "+12", ST_OK, true, 0},
	    {"alt_limit_deg", "91", ST_OK, true, 0},
	    {"airmass_limit", "0.9", ST_OK, true, 0},
	    {"moon_limit_deg", "0", ST_OK, false, 0},
	    {"baseline_before_min", "721", ST_OK, true, 0},
	    {"dpde_d", "-3.5", ST_OK, true, 0},
	    {"dpde_d", "-1e-9", ST_OK, false, -1e-9},
	    {"ttv_amp_min", "900", ST_OK, false, 900},
	    {"ttv_amp_min", "-1", ST_OK, true, 0},
	    {"depth_ppt",
	     "\xE2\x88\x92"
	     "3",
	     ST_OK, true, 0}, /* U+2212, a minus */
	    {"omega_deg",
	     "\xE2\x88\x92"
	     "3",
	     ST_OK, false, -3},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct field_texts texts = good_row();
		struct target t;
		struct err e = {0};
		uint64_t doubts;
		int bad_field, f = field_find(rows[i].field);
		assert_true(f >= 0);
		texts.text[f] = rows[i].text;
		enum status s = fields_read(&texts, &t, &doubts, &bad_field, &e);
		if (s != rows[i].want || (s != ST_OK && (bad_field != f || !*e.text)))
			check_fail("%s=%s: status %d at field %d: %s", rows[i].field, rows[i].text, (int)s,
				   bad_field, e.text);
		if (s != ST_OK)
			continue;
		assert_int_equal(bad_field, -1);
		if (doubts != (rows[i].doubt ? UINT64_C(1) << f : 0))
			check_fail("%s=%s: doubts %llx", rows[i].field, rows[i].text,
				   (unsigned long long)doubts);
		check_close(rows[i].field, value_of(&t, f), rows[i].doubt ? (double)NAN : rows[i].value, 0.0);
		if (rows[i].doubt)
			assert_true(strlen(field_doubt(f, rows[i].text, NULL)) > 5);
	}
}

static void test_scales(void **state)
{
	static const struct {
		const char *scale, *t0;
		enum status want;
		int bad_field;
	} rows[] = {
	    {"BJD_TDB", "2459000.5", ST_OK, -1},
	    {"HJD_UTC", "2459000.5", ST_OK, -1},
	    {"MJD_UTC", "59000", ST_OK, -1},
	    {"MJD_UTC", "2459000.5", ST_RANGE, FIELD_AT_T0},
	    {"BJD_TDB-2457000", "2000.5", ST_OK, -1},
	    {"BJD_TDB-2457000", "-1000.25", ST_OK, -1},
	    {"BJD_TDB-2457000", "2459000.5", ST_RANGE, FIELD_AT_T0},
	    {"", "2459000.5", ST_OK, -1},
	    {"BJD", "2459000.5", ST_OK, -1},
	    {"JD", "2459000.5", ST_OK, -1},
	    {"unknown", "2459000.5", ST_OK, -1},
	    {"unknown:BJD", "2459000.5", ST_OK, -1},
	    {"ET", "2459000.5", ST_SYNTAX, FIELD_AT_SCALE},
	    {"BJD_TAI", "2459000.5", ST_SYNTAX, FIELD_AT_SCALE},
	    {"UTC", "2459000.5", ST_SYNTAX, FIELD_AT_SCALE},
	    {"unknown:\x1B", "2459000.5", ST_RANGE, FIELD_AT_SCALE},
	    {"unknown:\xE2\x80\xAE", "2459000.5", ST_RANGE, FIELD_AT_SCALE},
	    {"ET", "", ST_SYNTAX, FIELD_AT_SCALE},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct field_texts texts = good_row();
		struct target t;
		struct err e = {0};
		uint64_t doubts;
		int bad_field;
		texts.text[FIELD_AT_SCALE] = rows[i].scale;
		texts.text[FIELD_AT_T0] = rows[i].t0;
		enum status s = fields_read(&texts, &t, &doubts, &bad_field, &e);
		if (s != rows[i].want || bad_field != rows[i].bad_field)
			check_fail("%s %s: status %d at field %d: %s", rows[i].scale, rows[i].t0, (int)s,
				   bad_field, e.text);
	}
}

static void test_names_refused(void **state)
{
	static const char *const bad[] = {"", "--", "a\x07", "a\xE2\x80\xAE", "a\xFF"};
	(void)state;
	for (size_t i = 0; i < sizeof bad / sizeof bad[0]; i++) {
		struct field_texts texts = good_row();
		struct target t;
		struct err e = {0};
		uint64_t doubts;
		int bad_field;
		texts.text[FIELD_AT_NAME] = bad[i];
		assert_int_equal(fields_read(&texts, &t, &doubts, &bad_field, &e), ST_SYNTAX);
		assert_int_equal(bad_field, FIELD_AT_NAME);
	}
}

/* --- values that don't fit each other --- */

static void test_pairs(void **state)
{
	/* b = a_rs cos(i) (1 - e^2)/(1 + e sin omega): Winn 2010, arXiv:1001.2010, eq. 7 (from memory);
	 * numbers by hand */
	static const struct {
		const char *what, *a_rs, *inc, *ecc, *omega, *k, *depth;
		bool doubt;
	} rows[] = {
	    {"b = 10 cos 85 = 0.87", "10", "85", "", "", "0.1", "", false},
	    {"b = 10 cos 83 = 1.219 > 1.1", "10", "83", "", "", "0.1", "", true},
	    {"the same from the other side", "10", "97", "", "", "0.1", "", true},
	    {"the same before a large planet", "10", "83", "", "", "0.25", "", false},
	    {"k from the depth, sqrt 0.04 = 0.2", "10", "83", "", "", "", "40", true},
	    {"k from the depth, sqrt 0.09 = 0.3", "10", "83", "", "", "", "90", false},
	    {"periastron at transit: 1.219 x 0.5", "10", "83", "0.5", "90", "0.1", "", false},
	    {"apastron at transit: 0.87 x 1.5", "10", "85", "0.5", "270", "0.1", "", true},
	    {"orientation unknown: at least 1.219 x 0.8", "10", "83", "0.2", "", "0.1", "", false},
	    {"orientation unknown: at least 1.736 x 0.8", "10", "80", "0.2", "", "0.1", "", true},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct field_texts texts = good_row();
		struct target t;
		struct err e;
		uint64_t doubts;
		int bad_field;
		texts.text[field_find("a_rs")] = rows[i].a_rs;
		texts.text[field_find("inc_deg")] = rows[i].inc;
		texts.text[field_find("ecc")] = rows[i].ecc;
		texts.text[field_find("omega_deg")] = rows[i].omega;
		texts.text[field_find("k")] = rows[i].k;
		texts.text[field_find("depth_ppt")] = rows[i].depth;
		assert_int_equal(fields_read(&texts, &t, &doubts, &bad_field, &e), ST_OK);
		if (doubts != (rows[i].doubt ? UINT64_C(1) << FIELD_AT_INC : 0))
			check_fail("%s: doubts %llx", rows[i].what, (unsigned long long)doubts);
		if (rows[i].doubt) {
			assert_true(isnan(t.inc_deg));
			const char *beside = NULL;
			assert_non_null(strstr(field_doubt(FIELD_AT_INC, rows[i].inc, &beside), "1 + k"));
			assert_string_equal(beside, "an inclination with which the planet crosses the star");
		}
	}
}

/* Each of the others that don't fit says what would. */
static void test_what_would_fit(void **state)
{
	static const struct {
		const char *field, *text, *other, *other_text, *expected;
	} rows[] = {
	    {"t0_err_d", "4", "note", "", "an error of at most period_d"},
	    {"period_err_d", "4", "note", "", "an error of at most period_d"},
	    {"dpde_d", "-0.9", "period_d", "0.8", "a change below period_d, of either sign"},
	    {"duration_h", "84", "note", "", "a duration below period_d"},
	    {"duration_err_h", "3", "duration_h", "2", "an error of at most duration_h"},
	    {"t0_period_cov_d2", "1", "t0_err_d", "0.1",
	     "at most t0_err_d times period_err_d, of either sign"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct field_texts texts = good_row();
		struct target t;
		struct err e;
		uint64_t doubts;
		int bad_field, f = field_find(rows[i].field);
		const char *beside = NULL;
		texts.text[FIELD_AT_PERIOD_ERR] = "0.1";
		texts.text[field_find(rows[i].other)] = rows[i].other_text;
		texts.text[f] = rows[i].text;
		assert_int_equal(fields_read(&texts, &t, &doubts, &bad_field, &e), ST_OK);
		if (doubts != UINT64_C(1) << f)
			check_fail("%s: doubts %llx", rows[i].field, (unsigned long long)doubts);
		(void)field_doubt(f, rows[i].text, &beside);
		assert_non_null(beside);
		assert_string_equal(beside, rows[i].expected);
		(void)field_doubt(f, "soon", &beside); /* bad by itself: the range is what is expected */
		assert_null(beside);
	}
}

static void test_covariance(void **state)
{
	static const struct {
		const char *cov;
		bool doubt;
	} rows[] = {{"2e-8", false}, {"-2e-8", false}, {"2.1e-8", true}, {"-1", true}};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct field_texts texts = good_row();
		struct target t;
		struct err e;
		uint64_t doubts;
		int bad_field;
		texts.text[FIELD_AT_T0_ERR] = "2e-4";
		texts.text[FIELD_AT_PERIOD_ERR] = "1e-4";
		texts.text[FIELD_AT_COVARIANCE] = rows[i].cov;
		assert_int_equal(fields_read(&texts, &t, &doubts, &bad_field, &e), ST_OK);
		assert_int_equal(doubts != 0, rows[i].doubt);
	}
}

/* --- out again --- */

static void test_field_text(void **state)
{
	static const struct {
		const char *field, *in, *out;
	} rows[] = {
	    {"name", "Tern 14 b", "Tern 14 b"},
	    {"ra_deg", "12:30:00", "187.5"},
	    {"dec_deg", "-00:30:00", "-0.5"},
	    {"t0_jd", "2459000.50", "2459000.5"},
	    {"t0_jd", "2459000.123456789012", "2459000.123456789012"},
	    {"t0_jd", "2459000.0", "2459000"},
	    {"period_d", "3.50", "3.5"},
	    {"period_d", "2.470613170000", "2.47061317"},
	    {"period_err_d", "9.0000000e-08", "9e-8"},
	    {"depth_ppt", "", ""},
	    {"time_scale", "unknown:BJD", "unknown:BJD"},
	    {"note", "a, b", "a, b"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		struct field_texts texts = good_row();
		struct target t;
		struct err e;
		uint64_t doubts;
		int bad_field, f = field_find(rows[i].field);
		char text[128];
		texts.text[f] = rows[i].in;
		assert_int_equal(fields_read(&texts, &t, &doubts, &bad_field, &e), ST_OK);
		field_text(&t, f, text, sizeof text);
		assert_string_equal(text, rows[i].out);
	}
}

/* Both ends of every range are taken by the table of fields and by the store's own checks. */
static void test_ranges_and_schema(void **state)
{
	struct store *s;
	struct err e = {0};
	const struct change change = {"2026-04-22T03:00:00Z", "test", "test"};
	(void)state;
	assert_int_equal(store_open(NULL, STORE_MEMORY, &s, &e), ST_OK);
	assert_int_equal(store_begin(s, &change, &e), ST_OK);
	for (int i = 0; i < FIELD_COUNT; i++)
		for (int high = 0; high < 2; high++) {
			struct field_texts texts = good_row();
			enum put_result result;
			char name[32], value[NUMBER_TEXT_MAX];
			if (fields[i].kind != FIELD_NUMBER)
				continue;
			double edge = high		   ? fields[i].max
				      : fields[i].open_min ? nextafter(fields[i].min, 1e300)
							   : fields[i].min;
			if (edge != 0.0 && fabs(edge) < 1e-300)
				edge = 1e-300; /* the least that is read as a number */
			if (i == FIELD_AT_PERIOD && !high)
				edge = PERIOD_MIN_D; /* one that is shorter is a doubt */
			number_text(edge, value);
			snprintf(name, sizeof name, "Tern %d-%d b", i + 100, high);
			texts.text[FIELD_AT_NAME] = name;
			texts.text[FIELD_AT_PERIOD] =
			    i == FIELD_AT_T0_ERR || i == FIELD_AT_PERIOD_ERR ? "" : "1e6";
			texts.text[i] = value;
			enum status st = target_put(s, &texts, false, &result, &e);
			if (st != ST_OK)
				check_fail("%s = %s: %s", fields[i].name, value, e.text);
			struct target_list list;
			assert_int_equal(targets_load(s, &list, &e), ST_OK);
			long at = target_list_find(&list, name);
			assert_true(at >= 0);
			assert_int_equal(list.doubts[at], 0);
			check_close(fields[i].name, value_of(&list.t[at], i), edge, 0.0);
			target_list_free(&list);
		}
	store_close(s);
}

/* The store keeps no sign of zero, so `-0` has to differ from what a zero is printed as: only then its own
 * text is kept. */
static void test_no_minus_zero(void **state)
{
	(void)state;
	char text[64];
	struct target t = target_empty();
	t.dec_deg = -0.0;
	field_text(&t, field_find("dec_deg"), text, sizeof text);
	assert_string_equal(text, "0");
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_no_minus_zero), cmocka_unit_test(test_names),
	    cmocka_unit_test(test_values),	  cmocka_unit_test(test_scales),
	    cmocka_unit_test(test_names_refused), cmocka_unit_test(test_pairs),
	    cmocka_unit_test(test_covariance),	  cmocka_unit_test(test_what_would_fit),
	    cmocka_unit_test(test_field_text),	  cmocka_unit_test(test_ranges_and_schema),
	};
	return cmocka_run_group_tests_name("fields", tests, NULL, NULL);
}
