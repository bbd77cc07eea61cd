/* SPDX-License-Identifier: MIT
 * A season of half a year for 5,000 invented targets, against a bare loop over the same epochs in the same
 * run: only the ratios mean something, since machines differ and share their time. The workload: positions
 * uniform on the sphere, periods log-uniform 0.5 to 30 d, T0 within 500 d of JD 2458000 (BJD_TDB), sigma(T0)
 * log-uniform 1e-4 to 3e-3 d, sigma(P) log-uniform 1e-6 to 1e-4 d, T14 uniform 1 to 6 h, a fixed seed; an
 * invented site; the 183 nights from 2027-02-01; Sun below -12 deg, target above 30 deg, no Moon rule,
 * transits. `bench [TARGETS] [NIGHTS]`. */
#include "ephem/season.h"

#include <math.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

enum { TARGETS = 5000, NIGHTS = 183, FIRST_NIGHT_MJD = 61437 /* 2027-02-01 */ };
#define PI 3.14159265358979323846

static const struct site bench_site = {
    .name = "bench", .lat_deg = -30.2, .lon_east_deg = -70.8, .height_m = 2200.0, .zone = ""};

/* xorshift64*, as in the tests' support, which needs cmocka */
static double random_between(uint64_t *state, double lo, double hi)
{
	*state ^= *state >> 12;
	*state ^= *state << 25;
	*state ^= *state >> 27;
	return lo + (hi - lo) * (double)((*state * 0x2545F4914F6CDD1Du) >> 11) * 0x1p-53;
}

static double log_between(uint64_t *state, double lo, double hi)
{
	return exp(random_between(state, log(lo), log(hi)));
}

static void invent(struct target *t, char name[32], size_t i, uint64_t *state)
{
	*t = target_empty();
	snprintf(name, 32, "Bench %zu b", i);
	t->name = name;
	t->ra_deg = random_between(state, 0.0, 360.0);
	t->dec_deg = asin(random_between(state, -1.0, 1.0)) * 180.0 / PI;
	t->pm_ra_masyr = t->pm_dec_masyr = 0.0;
	t->time_scale = "BJD_TDB";
	if (standard_parse("BJD_TDB", &t->standard, NULL) != ST_OK)
		exit(1);
	t->period_d = log_between(state, 0.5, 30.0);
	t->t0 = jd2_normal(2458000.0, random_between(state, -500.0, 500.0));
	t->t0_err_d = log_between(state, 1e-4, 3e-3);
	t->period_err_d = log_between(state, 1e-6, 1e-4);
	t->duration_h = random_between(state, 1.0, 6.0);
	t->k = 0.1;
	t->mag = 11.0;
	t->band = "R";
}

/* A telescope of half a metre: what a forecast costs on top. */
static struct observing invent_observing(void)
{
	struct telescope t = telescope_empty();
	t.aperture_m = 0.5;
	t.band = "R";
	t.full_well_e = 1e5;
	t.defocus_px = 8.0;
	return observing_of(&t);
}

static double processor_s(void)
{
	struct timespec now;
	clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &now);
	return (double)now.tv_sec + 1e-9 * (double)now.tv_nsec;
}

/* The floor: for every epoch in the span T(E), sigma(E) and one sine of altitude, no more. */
static double bare_loop_s(const struct target t[], size_t n, int nights, long *epochs)
{
	volatile double keep = 0.0;
	double start = processor_s(), sum = 0.0;
	double from = FIRST_NIGHT_MJD + 2400001.2, to = from + nights; /* local noon is 16:43 UTC */
	double sin_lat = sin(bench_site.lat_deg * PI / 180.0), cos_lat = cos(bench_site.lat_deg * PI / 180.0);
	*epochs = 0;
	for (size_t i = 0; i < n; i++) {
		double t0 = jd2_value(t[i].t0), p = t[i].period_d;
		double v0 = t[i].t0_err_d * t[i].t0_err_d, vp = t[i].period_err_d * t[i].period_err_d;
		double up = sin_lat * sin(t[i].dec_deg * PI / 180.0),
		       across = cos_lat * cos(t[i].dec_deg * PI / 180.0);
		for (double e = ceil((from - t0) / p); t0 + p * e < to; e += 1.0) {
			double mid = t0 + p * e;
			double lst =
			    4.894961 + 6.300388099 * (mid - 2451545.0) + bench_site.lon_east_deg * PI / 180.0;
			sum +=
			    mid + sqrt(v0 + e * e * vp) + up + across * cos(lst - t[i].ra_deg * PI / 180.0);
			++*epochs;
		}
	}
	keep = sum;
	(void)keep;
	return processor_s() - start;
}

struct counts {
	long windows, hidden;
	double prepare_s, nights_s, windows_s;
};

/* observing NULL: without forecasts. */
static bool season(const struct target t[], size_t n, int nights, const struct observing *observing,
		   struct counts *out)
{
	struct earth_clock clock = {.leap = &leap_builtin};
	struct sun_memo *memo = malloc(sizeof *memo);
	struct prepared *prepared = malloc(n * sizeof *prepared);
	struct window_list list = {0};
	struct limits limits = limits_built_in();
	bool good = memo && prepared && limits_put(&limits, LIM_MOON, 0.0, FROM_OPTION, NULL) == ST_OK;
	double start = processor_s();
	if (good)
		sun_memo_clear(memo);
	for (size_t i = 0; good && i < n; i++)
		prepared[i] = prepare_target(&t[i], &limits, &clock, memo, false, false);
	*out = (struct counts){.prepare_s = processor_s() - start};
	const struct window_choice choice = {.kinds = KINDS_TRANSIT, .min_chance = 0.05};
	for (int k = 0; good && k < nights; k++) {
		struct night night;
		struct err e;
		long hidden = 0;
		double begin = processor_s();
		good = night_build(&night, &bench_site, &clock, FIRST_NIGHT_MJD + k, memo, &e) == ST_OK;
		double built = processor_s();
		night.observing = observing;
		good = good && night_windows(&night, prepared, n, &choice, &list, &hidden, &e) == ST_OK;
		if (!good)
			fprintf(stderr, "bench: %s\n", e.text);
		out->nights_s += built - begin;
		out->windows_s += processor_s() - built;
		out->windows += (long)list.n;
		out->hidden += hidden;
	}
	window_list_free(&list);
	free(prepared);
	free(memo);
	return good;
}

int main(int argc, char **argv)
{
	size_t n = argc > 1 ? (size_t)strtoul(argv[1], NULL, 10) : TARGETS;
	int nights = argc > 2 ? (int)strtol(argv[2], NULL, 10) : NIGHTS;
	struct target *t = malloc((n + 1) * sizeof *t);
	char(*name)[32] = malloc((n + 1) * sizeof *name);
	if (!t || !name) {
		free(name);
		free(t);
		return 1;
	}
	uint64_t state = 20270201u * 0x9E3779B97F4A7C15u | 1u;
	for (size_t i = 0; i < n; i++)
		invent(&t[i], name[i], i, &state);
	long epochs;
	struct counts c, f;
	const struct observing observing = invent_observing();
	double floor_s = bare_loop_s(t, n, nights, &epochs);
	for (int again = 0; again < 4;
	     again++) /* the least of five: what the machine's other work adds is no cost of ours */
		floor_s = fmin(floor_s, bare_loop_s(t, n, nights, &epochs));
	bool good = season(t, n, nights, NULL, &c) && season(t, n, nights, &observing, &f);
	if (good) {
		double all_s = c.prepare_s + c.nights_s + c.windows_s;
		printf("%zu targets, %d nights, %ld epochs, %ld windows listed, %ld hidden\n", n, nights,
		       epochs, c.windows, c.hidden);
		printf("processor time: bare loop %.2f ms; season %.1f ms = targets %.1f + night tables %.1f "
		       "+ windows %.1f\n",
		       1e3 * floor_s, 1e3 * all_s, 1e3 * c.prepare_s, 1e3 * c.nights_s, 1e3 * c.windows_s);
		printf("per window %.3f us; season over bare loop %.1f; night table %.2f ms\n",
		       1e6 * all_s / (double)(c.windows + c.hidden), all_s / floor_s,
		       1e3 * c.nights_s / nights);
		const double with_s = f.prepare_s + f.nights_s + f.windows_s;
		printf("with forecasts %.1f ms: %.2f of the season without (at most 3), %.1f us a listed "
		       "window\n",
		       1e3 * with_s, with_s / all_s, 1e6 * (f.windows_s - c.windows_s) / (double)f.windows);
		good = with_s <= 3.0 * all_s;
	}
	free(name);
	free(t);
	return good ? 0 : 1;
}
