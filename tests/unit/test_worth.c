/* SPDX-License-Identifier: MIT
 * Information, what is caught, goals, sigma afterwards. */
#include "ephem/worth.h"

#include "ephem/drift.h"
#include "ephem/refit.h"
#include "ephem/units.h"
#include "tests/support/check.h"

#include <math.h>

/* Errors 2.1e-4 and 4.8e-6 d, no covariance. */
static struct ephemeris steady(void)
{
	return (struct ephemeris){.t0 = {{2458350.0, 0.123456}},
				  .period_d = 3.456789,
				  .c00 = 2.1e-4 * 2.1e-4,
				  .c11 = 4.8e-6 * 4.8e-6};
}

static struct worth_rules no_need(void)
{
	struct worth_rules r = worth_rules_built_in();
	r.need_min = 0.0;
	return r;
}

/* By hand: V'(F) = V(F,F) - V(F,E)^2 / (V(E,E) + s^2), V(a,b) = c00 + a b c11 (the rank-one update of Kalman
 * 1960). Epoch E, precision s [d], epoch F; sigma at F before and after [min]. */
static const struct {
	long observed;
	double precision_d;
	long at;
	double before_min, after_min;
} update_rows[] = {
    {800, 7e-4, 1500, 10.37241, 1.875563},
    {800, 7e-4, 1000, 6.918612, 1.241190},
    {600, 3e-4, 1500, 10.37241, 1.162453},
};

static void sigma_afterwards(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof update_rows / sizeof *update_rows; i++) {
		const struct ephemeris e = steady();
		const struct worth_rules rules = worth_rules_built_in(); /* the need changes nothing here */
		const struct worth_input in = {
		    .eph = &e,
		    .epoch = update_rows[i].observed,
		    .at_epoch = update_rows[i].at,
		    .c = {{0.9, update_rows[i].precision_d * DAY_S}, {0.05, 1e4}, {0.05, 1e4}},
		    .priority = NAN};
		check_close("before", drift_sigma_min(&e, update_rows[i].at), update_rows[i].before_min,
			    5e-6);
		check_close("after", worth_of(&in, &rules).sigma_after_min, update_rows[i].after_min, 5e-7);
		/* as adding such a time does it */
		struct ephemeris added = e;
		struct update u;
		const struct mid_time t = {.epoch = in.epoch,
					   .mid = ephemeris_mid(&e, in.epoch),
					   .err_d = update_rows[i].precision_d,
					   .used = true};
		assert_int_equal(ephemeris_update(&added, &t, &u, NULL), ST_OK);
		check_close("added", worth_of(&in, &rules).sigma_after_min,
			    ephemeris_published_d(&added, in.at_epoch) * DAY_MIN, 1e-9);
	}
}

static void bits(void **state)
{
	(void)state;
	struct ephemeris e = steady();
	struct worth_rules rules = no_need();
	/* by hand: log2(1 + (2.1e-4^2 + 800^2 4.8e-6^2) / 7e-4^2) / 2 */
	check_close("bits", worth_bits(&e, 800, 7e-4 * DAY_S, &rules), 2.481345, 5e-7);
	/* the same by the determinants of the covariance before and after: information lost to the ephemeris
	 * is what the observation brought (Lindley 1956, from memory) */
	struct ephemeris added = e;
	struct update u;
	const struct mid_time t = {.epoch = 800, .mid = ephemeris_mid(&e, 800), .err_d = 7e-4, .used = true};
	assert_int_equal(ephemeris_update(&added, &t, &u, NULL), ST_OK);
	const double before = e.c00 * e.c11, after = added.c00 * added.c11 - added.c01 * added.c01;
	check_close("determinants", 0.5 * log2(before / after), 2.481345, 5e-7);
	/* by hand, the covariance after it */
	check_close("sP", sqrt(added.c11), 8.974187e-7, 5e-14);
	check_close("c", added.c01, -5.319811e-11, 5e-18);
	check_close("C00", added.c00, 4.397272e-8, 5e-15);
	/* all that makes s: 60 s, need 2 min, TTV bound 1 min, 0.5 and 0.25 min: hypot by hand */
	rules.need_min = 2.0, rules.floor_min = 0.25;
	e.ttv_min = 1.0, e.systematic_min = 0.5;
	const double s_min = sqrt(1.0 + 4.0 + 0.5 + 0.25 + 0.0625);
	check_close("precision", worth_precision_min(&e, 60.0, &rules), s_min, 1e-12);
	const double v_min2 = pow(ephemeris_published_d(&e, 800) * DAY_MIN, 2.0);
	check_close("bits of it", worth_bits(&e, 800, 60.0, &rules),
		    0.5 * log2(1.0 + v_min2 / (s_min * s_min)), 1e-12);
	check_close("nothing measured", worth_bits(&e, 800, INFINITY, &rules), 0.0, 0.0);
	assert_true(isnan(worth_bits(&e, 800, NAN, &rules)));
	/* well known: nothing to earn beyond the need */
	struct ephemeris known = steady();
	known.c00 = pow(0.1 * MIN_D, 2.0), known.c11 = 0.0;
	check_close("known to 0.1 min", worth_bits(&known, 800, 1.0, &rules),
		    0.5 * log2(1.0 + 0.01 / (4.0 + 0.0625 + 1.0 / 3600.0)), 1e-12);
	known.c00 = NAN;
	assert_true(isnan(worth_bits(&known, 800, 60.0, &rules)));
}

static const struct {
	double ingress, egress, done, whole, in_alone, out_alone;
} chance_rows[] = {
    {1, 1, 1, 1, 0, 0},
    {0.8, 0.5, 0.4, 0.4, 0.4, 0.1},
    {0.84, 1.0, 0.1, 0.84, 0,
     0.16}, /* a gap in the floor is too long for done, both limbs are still caught */
    {0, 0.7, 0, 0, 0, 0.7},
    {0, 0, 0, 0, 0, 0},
    {0.3, 0.4, 0, 0, 0.3, 0.4},
};

static void what_is_caught(void **state)
{
	(void)state;
	for (size_t i = 0; i < sizeof chance_rows / sizeof *chance_rows; i++) {
		struct worth_case c[CATCH_COUNT] = {{0}};
		worth_chances(chance_rows[i].ingress, chance_rows[i].egress, chance_rows[i].done, c);
		check_close("whole", c[CATCH_WHOLE].chance, chance_rows[i].whole, 1e-12);
		check_close("ingress", c[CATCH_INGRESS].chance, chance_rows[i].in_alone, 1e-12);
		check_close("egress", c[CATCH_EGRESS].chance, chance_rows[i].out_alone, 1e-12);
	}
	struct rng r = rng_open("what_is_caught");
	for (int i = 0; i < 2000; i++) {
		const double a = rng_unit(&r), b = rng_unit(&r), done = fmin(a, b) * rng_unit(&r);
		struct worth_case c[CATCH_COUNT];
		worth_chances(a, b, done, c);
		double sum = 0.0;
		for (int k = 0; k < CATCH_COUNT; k++) {
			assert_true(c[k].chance >= 0.0);
			sum += c[k].chance;
		}
		assert_true(sum <= 1.0 + 1e-12 && c[CATCH_WHOLE].chance >= done);
		check_close("ingress", c[CATCH_WHOLE].chance + c[CATCH_INGRESS].chance, a, 1e-12);
	}
	struct worth_case c[CATCH_COUNT];
	worth_chances(NAN, 0.5, 0.2, c);
	assert_true(isnan(c[CATCH_WHOLE].chance) && isnan(c[CATCH_EGRESS].chance));
}

/* Against a plain sum over the normal density. */
static void where_the_mid_time_falls(void **state)
{
	(void)state;
	struct rng r = rng_open("where");
	for (int i = 0; i < 300; i++) {
		const double mean = rng_between(&r, -0.1, 0.1), sigma = rng_between(&r, 0.005, 0.05);
		struct intervals set = intervals_one(rng_between(&r, -0.2, 0.0), rng_between(&r, 0.0, 0.05));
		intervals_append(&set, rng_between(&r, 0.06, 0.1), rng_between(&r, 0.11, 0.2));
		double weight = 0.0, moment = 0.0;
		for (int k = 0; k < set.n; k++) {
			const double step = (set.s[k].to_d - set.s[k].from_d) / 2000.0;
			for (int j = 0; j < 2000; j++) {
				const double t = set.s[k].from_d + (j + 0.5) * step, z = (t - mean) / sigma;
				weight += exp(-0.5 * z * z) * step, moment += t * exp(-0.5 * z * z) * step;
			}
		}
		if (weight > 1e-6 * sigma)
			check_close("mean", worth_case_mid_d(&set, mean, sigma), moment / weight, 1e-5);
	}
	const struct intervals set = intervals_one(0.3, 0.4), none = intervals_none();
	check_close("far out", worth_case_mid_d(&set, 0.0, 1e-3), 0.3, 1e-4);
	check_close("hopeless", worth_case_mid_d(&set, 0.0, 1e-6), 0.3, 0.0);
	check_close("certain", worth_case_mid_d(&set, 0.35, 0.0), 0.35, 0.0);
	assert_true(isnan(worth_case_mid_d(&none, 0.0, 0.1)) && isnan(worth_case_mid_d(&set, NAN, 0.1)) &&
		    isnan(worth_case_mid_d(&set, 0.0, NAN)));
}

static void expectation_and_choices(void **state)
{
	(void)state;
	const struct ephemeris e = steady();
	struct worth_rules rules = worth_rules_built_in();
	struct worth_input in = {.eph = &e,
				 .epoch = 800,
				 .at_epoch = 1500,
				 .c = {{0.5, 30.0}, {0.2, 100.0}, {0.0, NAN}},
				 .depth_snr = 20.0,
				 .priority = 2.0,
				 .band = BAND_R,
				 .jd = 2461000.5};
	const double whole = worth_bits(&e, 800, 30.0, &rules), limb = worth_bits(&e, 800, 100.0, &rules);
	struct worth w = worth_of(&in, &rules);
	check_close("expected", w.gain_bits, 0.5 * whole + 0.2 * limb, 1e-12);
	check_close("worth", w.worth, 2.0 * w.gain_bits, 1e-12);
	in.priority = NAN;
	check_close("priority 1", worth_of(&in, &rules).worth, w.gain_bits, 1e-12);
	rules.choice = WORTH_DEPTH;
	check_close("depth", worth_of(&in, &rules).worth, 10.0, 1e-12);
	rules.choice = WORTH_PRIORITY;
	check_close("priority", worth_of(&in, &rules).worth, 0.5, 1e-12);
	/* three goals: whole events in R, any catch in any band, one in another band */
	const struct goal goal[] = {
	    {BAND_R, 3, 1, false, NAN}, {BAND_NONE, 1, 0, true, 2461100.5}, {BAND_V, 5, 0, true, NAN}};
	in.goal = goal, in.n_goals = 3;
	check_close("goals", worth_of(&in, &rules).worth, 0.5 + 0.7, 1e-12);
	rules.choice = WORTH_BITS;
	check_close("goals, bits", worth_of(&in, &rules).worth, 0.5 * whole + w.gain_bits, 1e-12);
	in.jd = 2461100.6; /* the second one's time is over */
	check_close("later", worth_of(&in, &rules).worth, 0.5 * whole, 1e-12);
	in.band = BAND_I;
	check_close("none open", worth_of(&in, &rules).worth, 0.0, 0.0);
	const struct goal met = {BAND_NONE, 2, 2, true, NAN};
	assert_false(goal_open(&met, BAND_V, 2461000.5));
	/* nothing can be caught: sigma stays as it is */
	in.c[CATCH_WHOLE].chance = in.c[CATCH_INGRESS].chance = 0.0;
	w = worth_of(&in, &rules);
	check_close("no gain", w.gain_bits, 0.0, 0.0);
	check_close("no refresh", w.sigma_after_min, drift_sigma_min(&e, 1500), 1e-12);
	in.c[CATCH_WHOLE].chance = NAN;
	assert_true(isnan(worth_of(&in, &rules).gain_bits));
	assert_int_equal(sizeof worth_choice_words / sizeof *worth_choice_words, WORTH_CHOICE_COUNT);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(sigma_afterwards),	       cmocka_unit_test(bits),
	    cmocka_unit_test(what_is_caught),	       cmocka_unit_test(where_the_mid_time_falls),
	    cmocka_unit_test(expectation_and_choices),
	};
	return cmocka_run_group_tests_name("worth", tests, NULL, NULL);
}
