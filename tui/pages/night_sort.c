/* SPDX-License-Identifier: MIT */
#include "tui/pages/night_sort.h"

#include "tui/parts/columns.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

const struct sort_rule sort_rules[SORT_COUNT] = {
    [SORT_ON] = {'o', "be-on time", "on", "usable_start_utc", false},
    [SORT_RESERVE] = {'r', "start of the reserve", "reserve", "reserve_start_utc", false},
    [SORT_MID] = {'m', "mid-time", "mid", "mid_utc", false},
    [SORT_NAME] = {'n', "name", "name", NULL, false},
    [SORT_ERROR] = {'e', "sigma", "error", "sigma_min", false},
    [SORT_DONE] = {'d', "chance of done", "done", "chance_done", true},
    [SORT_COVER] = {'c', "cover", "cover", "coverage", true},
    [SORT_ALT] = {'h', "altitude", "height", "alt_mid_deg", true},
    [SORT_AIRMASS] = {'x', "airmass", "airmass", "airmass_mid", false},
    [SORT_MOON] = {'l', "distance of the Moon", "lunar", "moon_sep_deg", true},
    [SORT_DEPTH] = {'p', "depth", "depth", "depth_ppt", true},
    [SORT_MAG] = {'b', "magnitude", "bright", NULL, false},
    [SORT_ORDER] = {'u', "running order", "order", NULL, false},
    [SORT_WORTH] = {'w', "worth", "worth", NULL, true},
    [SORT_SNR] = {'z', "S/N of the depth", "S/N", "depth_snr", true},
    [SORT_TIMING] = {'t', "timing", "timing", "timing_s", false},
};

int sort_find(uint32_t key)
{
	for (int i = 0; i < SORT_COUNT; i++)
		if ((uint32_t)(unsigned char)sort_rules[i].key == key)
			return i;
	return -1;
}

double row_figure(const struct night_row *row, const char *column)
{
	int at = column_find(column);
	double figure;
	if (at < 0 || columns[at].get)
		return NAN;
	memcpy(&figure, (const char *)row->window + columns[at].offset, sizeof figure);
	return isfinite(figure) ? figure : NAN;
}

struct sort_entry {
	const struct night_row *row;
	int group;
	double key; /* rising; NAN last */
	bool by_name, turned;
};

static int compare_numbers(double a, double b)
{
	return isnan(a) != isnan(b) ? isnan(a) - isnan(b) : (a > b) - (a < b);
}

static int compare_windows(const struct night_row *a, const struct night_row *b)
{
	const struct window_event *x = &a->window->event, *y = &b->window->event;
	int order = compare_numbers(x->reserve_start_d, y->reserve_start_d);
	if (order == 0)
		order = strcmp(a->name, b->name);
	return order ? order : (x->epoch > y->epoch) - (x->epoch < y->epoch);
}

static int compare(const void *p, const void *q)
{
	const struct sort_entry *a = p, *b = q;
	int order = (a->group > b->group) - (a->group < b->group);
	if (order == 0 && a->by_name)
		order = a->turned ? strcmp(b->row->name, a->row->name) : strcmp(a->row->name, b->row->name);
	if (order == 0)
		order = compare_numbers(a->key, b->key);
	return order ? order : compare_windows(a->row, b->row);
}

static double key_of(const struct night_row *row, int rule)
{
	switch (rule) {
	case SORT_MAG:
		return row->window->event.prepared->target->mag;
	case SORT_ON:
		return row->on_d;
	case SORT_WORTH:
		return row->worth;
	case SORT_ORDER:
		return row->plan.order > 0 ? (double)row->plan.order : (double)NAN;
	default:
		return sort_rules[rule].column ? row_figure(row, sort_rules[rule].column) : 0.0;
	}
}

static struct sort_entry entry_of(const struct night_row *row, int rule, bool turned, bool shown)
{
	const struct sort_rule *r = &sort_rules[rule];
	struct sort_entry e = {.row = row, .by_name = rule == SORT_NAME, .turned = turned};
	double key = key_of(row, rule);
	e.key = r->greatest_first != turned ? -key : key;
	if (rule == SORT_ON || (rule == SORT_ORDER && isnan(key)))
		e.group = !row->has_chance ? 2 : !row->usable ? 1 : 0;
	if (!shown)
		e.group = 3;
	return e;
}

enum status night_rows_arrange(struct night_rows *rows, int rule, bool turned, const bool shown[],
			       struct err *e)
{
	size_t n = rows->total, left = 0;
	struct sort_entry *entry = calloc(n + 1, sizeof *entry);
	struct night_row *row = calloc(n + 1, sizeof *row);
	if (!entry || !row) {
		free(entry);
		free(row);
		return err_set(e, ST_MEMORY, "no memory to sort %zu windows", n);
	}
	for (size_t i = 0; i < n; i++) {
		bool stays = !shown || shown[i];
		entry[i] = entry_of(&rows->row[i], rule, turned, stays);
		left += !stays;
	}
	qsort(entry, n, sizeof *entry, compare);
	for (size_t i = 0; i < n; i++)
		row[i] = *entry[i].row;
	free(entry);
	free(rows->row);
	rows->row = row;
	rows->n = n - left;
	return ST_OK;
}
