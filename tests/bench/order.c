/* SPDX-License-Identifier: MIT
 * A night's running order, against sorting the same items with the library's qsort in the same run. A night
 * of 0.43 d, 60 pointings, gaps of 4 min and 1 deg/s along the great circle; a fixed seed. The first line is
 * a night as it may be: an event lasts 60 to 400 min and can be taken whole, or its first or last third
 * alone. The others are as bad as could be thought of: nothing fits beside anything, all fits beside all but
 * for gaps of hours, and limbs of one event far enough apart that both would be taken. Medians of many
 * nights, and the slowest night. */
#include "ephem/running_order.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

enum { ITEMS = 500, POINTINGS = 60, NIGHTS_MOST = 400 };
static const double night_d = 0.43, settle_d = 4.0 / 1440.0,
		    turn_d = 180.0 / 86400.0; /* half a turn at 1 deg/s */

struct pointings {
	double at[POINTINGS][3];
	double speed; /* 1: 1 deg/s */
};
struct night {
	struct order_item item[ITEMS];
	int n, n_events;
};

static double random_between(uint64_t *state, double lo, double hi)
{
	*state ^= *state >> 12;
	*state ^= *state << 25;
	*state ^= *state >> 27;
	return lo + (hi - lo) * (double)((*state * 0x2545F4914F6CDD1Du) >> 11) * 0x1p-53;
}

static double gap_d(const void *ctx, int from_class, int to_class)
{
	const struct pointings *p = ctx;
	const double *a = p->at[from_class], *b = p->at[to_class];
	double dot = a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
	return settle_d + acos(fmax(-1.0, fmin(1.0, dot))) / 3.14159265358979323846 * turn_d / p->speed;
}

static void add(struct night *w, double from_d, double to_d, double worth, int gap_class, int event)
{
	w->item[w->n++] = (struct order_item){.from_d = from_d,
					      .to_d = to_d,
					      .worth = worth,
					      .gap_class = gap_class,
					      .n_events = 1,
					      .event = {event}};
}

/* Whole, and from each end the share that a limb takes. */
static void add_event(struct night *w, double from_d, double length_d, double limb, double worth,
		      int gap_class)
{
	int event = w->n_events++;
	add(w, from_d, from_d + length_d, worth, gap_class, event);
	add(w, from_d, from_d + limb * length_d, 0.4 * worth, gap_class, event);
	add(w, from_d + (1.0 - limb) * length_d, from_d + length_d, 0.4 * worth, gap_class, event);
}

static void usual(struct night *w, uint64_t *r)
{
	while (w->n + 3 <= ITEMS) {
		double length_d = random_between(r, 60.0, 400.0) / 1440.0;
		add_event(w, random_between(r, 0.0, night_d - length_d), length_d, 1.0 / 3.0,
			  random_between(r, 0.1, 1.0), (int)random_between(r, 0.0, POINTINGS));
	}
}

/* Five priorities, so that many orders are worth the same. */
static void even_worths(struct night *w, uint64_t *r)
{
	usual(w, r);
	for (int i = 0; i < w->n; i += 3) {
		double worth = ceil(random_between(r, 0.0, 5.0));
		w->item[i].worth = worth;
		w->item[i + 1].worth = w->item[i + 2].worth = 0.4 * worth;
	}
}

static void all_overlap(struct night *w, uint64_t *r)
{
	for (int i = 0; i < ITEMS; i++)
		add(w, random_between(r, 0.0, 0.2), random_between(r, 0.21, night_d),
		    random_between(r, 0.1, 1.0), i % POINTINGS, w->n_events++);
}

static void long_gaps(struct night *w, uint64_t *r)
{
	for (int i = 0; i < ITEMS; i++)
		add(w, night_d * i / ITEMS, night_d * (i + 0.5) / ITEMS, random_between(r, 0.1, 1.0),
		    (int)random_between(r, 0.0, POINTINGS), w->n_events++);
}

static void limbs(struct night *w, uint64_t *r, int events, double limb_min, bool same_worth)
{
	for (int i = 0; i < events; i++) {
		double length_d = random_between(r, 100.0, 240.0) / 1440.0;
		add_event(w, random_between(r, 0.0, night_d - length_d), length_d,
			  limb_min / 1440.0 / length_d, same_worth ? 1.0 : random_between(r, 0.5, 1.0),
			  (int)random_between(r, 0.0, POINTINGS));
	}
}

static void limbs_60(struct night *w, uint64_t *r)
{
	limbs(w, r, 60, 30.0, false);
}

static void limbs_60_same(struct night *w, uint64_t *r)
{
	limbs(w, r, 60, 30.0, true);
}

static void limbs_60_brief(struct night *w, uint64_t *r)
{
	limbs(w, r, 60, 8.0, false);
}

static void limbs_166(struct night *w, uint64_t *r)
{
	limbs(w, r, 166, 20.0, false);
}

/* As many events as fit, so that nearly all are wanted and the limbs are all there is to choose between. */
static void limbs_20(struct night *w, uint64_t *r)
{
	limbs(w, r, 20, 10.0, false);
}

/* Each event at eight places of the night, for 8 min or for 25 min. */
static void places(struct night *w, uint64_t *r, double length_min, bool same_worth)
{
	while (w->n + 8 <= ITEMS) {
		int event = w->n_events++, pointing = (int)random_between(r, 0.0, POINTINGS);
		double worth = same_worth ? 1.0 : random_between(r, 0.5, 1.0);
		for (int k = 0; k < 8; k++) {
			double from_d = random_between(r, 0.0, night_d - length_min / 1440.0);
			add(w, from_d, from_d + length_min / 1440.0,
			    worth * random_between(r, same_worth ? 1.0 : 0.8, 1.0), pointing, event);
		}
	}
}

static void places_brief(struct night *w, uint64_t *r)
{
	places(w, r, 8.0, false);
}

static void places_long(struct night *w, uint64_t *r)
{
	places(w, r, 25.0, false);
}

static void places_same(struct night *w, uint64_t *r)
{
	places(w, r, 8.0, true);
}

/* Three events in a row at each pointing, each whole and by its limbs, and every run of them in one item. */
static void in_a_row(struct night *w, uint64_t *r)
{
	while (w->n + 12 <= ITEMS) {
		int pointing = (int)random_between(r, 0.0, POINTINGS);
		double length_d = random_between(r, 60.0, 120.0) / 1440.0,
		       step_d = random_between(r, 0.8, 1.2) * length_d;
		double from_d = random_between(r, 0.0, night_d - 2.0 * step_d - length_d),
		       worth = random_between(r, 0.1, 1.0);
		for (int k = 0; k < 3; k++)
			add_event(w, from_d + k * step_d, length_d, 1.0 / 3.0, worth, pointing);
		for (int k = 0; k < 3; k++) { /* first two, last two, all */
			int first = k == 1 ? 1 : 0, n = k == 2 ? 3 : 2;
			add(w, from_d + first * step_d, from_d + (first + n - 1) * step_d + length_d,
			    n * worth, pointing, 0);
			w->item[w->n - 1].n_events = n;
			for (int i = 0; i < n; i++)
				w->item[w->n - 1].event[i] = w->n_events - 3 + first + i;
		}
	}
}

/* One to four of 60 events in each item, worth what they are together. */
static void joint(struct night *w, uint64_t *r)
{
	double worth[60];
	w->n_events = 60;
	for (int i = 0; i < 60; i++)
		worth[i] = random_between(r, 0.5, 1.0);
	while (w->n < ITEMS) {
		double length_d = random_between(r, 15.0, 60.0) / 1440.0,
		       from_d = random_between(r, 0.0, night_d - length_d);
		add(w, from_d, from_d + length_d, 0.0, (int)random_between(r, 0.0, POINTINGS), 0);
		struct order_item *item = &w->item[w->n - 1];
		item->n_events = 1 + (int)random_between(r, 0.0, 4.0);
		for (int k = 0; k < item->n_events; k++) {
			item->event[k] = (int)random_between(r, 0.0, 60.0);
			item->worth += random_between(r, 0.5, 1.0) * worth[item->event[k]];
		}
	}
}

static double processor_us(void)
{
	struct timespec now;
	clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &now);
	return 1e6 * (double)now.tv_sec + 1e-3 * (double)now.tv_nsec;
}

static int compare_us(const void *pa, const void *pb)
{
	const double *a = pa, *b = pb;
	return (*a > *b) - (*a < *b);
}

static int compare_ends(const void *pa, const void *pb)
{
	const struct order_item *a = pa, *b = pb;
	if (a->to_d != b->to_d)
		return a->to_d < b->to_d ? -1 : 1;
	return (a->from_d > b->from_d) - (a->from_d < b->from_d);
}

static double sort_us(const struct night *w)
{
	static struct order_item copy[ITEMS];
	double least = (double)INFINITY;
	for (int again = 0; again < 3; again++) {
		memcpy(copy, w->item, sizeof copy);
		double start = processor_us();
		qsort(copy, (size_t)w->n, sizeof *copy, compare_ends);
		least = fmin(least, processor_us() - start);
	}
	return least;
}

static bool measure(const char *name, void (*invent)(struct night *, uint64_t *), int nights, double speed)
{
	static struct night w;
	static struct pointings p;
	static double us[NIGHTS_MOST], sorts[NIGHTS_MOST];
	uint64_t r = 20270201u * 0x9E3779B97F4A7C15u | 1u;
	int open = 0;
	double taken_sum = 0.0, widest = 0.0;
	p.speed = speed;
	for (int k = 0; k < nights; k++) {
		for (int i = 0; i < POINTINGS; i++) {
			double z = random_between(&r, -1.0, 1.0),
			       angle = random_between(&r, 0.0, 6.283185307179586);
			p.at[i][0] = sqrt(1.0 - z * z) * cos(angle);
			p.at[i][1] = sqrt(1.0 - z * z) * sin(angle);
			p.at[i][2] = z;
		}
		w.n = w.n_events = 0;
		invent(&w, &r);
		struct order_gaps gaps = {gap_d, &p, settle_d, settle_d + turn_d / speed};
		struct order_choice choice = {.n_events = w.n_events};
		struct order_result out = {0};
		size_t taken[ITEMS];
		us[k] = (double)INFINITY;
		for (int again = 0; again < 3;
		     again++) { /* the least: what else the machine does is no cost of ours */
			double start = processor_us();
			if (running_order(w.item, (size_t)w.n, &gaps, &choice, taken, &out, NULL, NULL) !=
			    ST_OK)
				return false;
			us[k] = fmin(us[k], processor_us() - start);
			if (us[k] > 1e5)
				break;
		}
		sorts[k] = sort_us(&w);
		open += !out.optimal;
		widest = out.bound > 0.0 ? fmax(widest, 1.0 - out.worth / out.bound) : widest;
		taken_sum += (double)out.n;
	}
	qsort(us, (size_t)nights, sizeof *us, compare_us);
	qsort(sorts, (size_t)nights, sizeof *sorts, compare_us);
	printf("%-34s %3d items, %4.1f taken: median %8.1f us, %5.1f of a sort, nine of ten below %8.1f, "
	       "slowest %10.1f us; not "
	       "proven %d of %d, by %.2f %% at most\n",
	       name, w.n, taken_sum / nights, us[nights / 2], us[nights / 2] / sorts[nights / 2],
	       us[nights * 9 / 10], us[nights - 1], open, nights, 100.0 * widest);
	return true;
}

int main(void)
{
	bool good = measure("a night", usual, 400, 1.0);
	good = good && measure("a night, five priorities", even_worths, 400, 1.0);
	good = good && measure("a night, three events in a row", in_a_row, 400, 1.0);
	good = good && measure("all overlap", all_overlap, 100, 1.0);
	good = good && measure("brief, gaps of 4 min to 5 h", long_gaps, 100, 0.01);
	good = good && measure("60 events, limbs of 30 min", limbs_60, 40, 1.0);
	good = good && measure("60 events, limbs of 30 min, alike", limbs_60_same, 40, 1.0);
	good = good && measure("60 events, limbs of 8 min", limbs_60_brief, 20, 1.0);
	good = good && measure("166 events, limbs of 20 min", limbs_166, 20, 1.0);
	good = good && measure("20 events, limbs of 10 min", limbs_20, 20, 1.0);
	good = good && measure("62 events, 8 places of 8 min", places_brief, 10, 1.0);
	good = good && measure("62 events, 8 places of 25 min", places_long, 10, 1.0);
	good = good && measure("62 events, 8 places, alike", places_same, 10, 1.0);
	good = good && measure("joint items of 60 events", joint, 10, 1.0);
	return good ? 0 : 1;
}
