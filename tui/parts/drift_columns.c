/* SPDX-License-Identifier: MIT */
#include "tui/parts/drift_columns.h"

#include "ephem/number_text.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static void put_text(struct value *v, const char *text)
{
	v->type = VALUE_TEXT;
	snprintf(v->text, sizeof v->text, "%s", text);
}

static void put_number(struct value *v, double number)
{
	v->type = isfinite(number) ? VALUE_NUMBER : VALUE_NONE;
	v->number = number;
}

static void put_utc(struct value *v, bool known, struct utc utc)
{
	v->type = known ? VALUE_UTC : VALUE_NONE;
	v->utc = utc;
}

static void put_date(struct value *v, const struct drift_date *when)
{
	char text[40];
	if (when->when == WHEN_ALREADY) {
		put_text(v, "already");
	} else if (when->when == WHEN_ON) {
		const struct date d = date_from_mjd(when->utc.mjd);
		snprintf(text, sizeof text, "%04d-%02d-%02d", d.year, d.month, d.day);
		put_text(v, text);
	}
}

#define GET(name) static void name(const struct drift_row *row, const struct drift_table *t, struct value *v)

GET(get_target)
{
	(void)t;
	put_text(v, row->prepared->target->name);
}
GET(get_branch)
{
	(void)row;
	(void)t;
	v->type = VALUE_NONE;
}
GET(get_epoch)
{
	(void)t;
	v->type = row->counted ? VALUE_WHOLE : VALUE_NONE;
	v->whole = row->epoch_now;
}
GET(get_sigma_now)
{
	(void)t;
	put_number(v, row->sigma_now_min);
}
GET(get_at)
{
	(void)row;
	put_utc(v, true, t->choice.at);
}
GET(get_sigma_at)
{
	(void)t;
	put_number(v, row->sigma_at_min);
}
GET(get_limit)
{
	(void)t;
	put_number(v, row->limit_min);
}
GET(get_stale)
{
	(void)t;
	put_date(v, &row->stale);
}
GET(get_lost)
{
	(void)t;
	put_date(v, &row->lost);
}
GET(get_last)
{
	(void)t;
	put_utc(v, row->has_midtime, row->last_midtime);
}
GET(get_midtimes)
{
	(void)t;
	v->type = VALUE_WHOLE;
	v->whole = row->midtimes;
}
GET(get_next)
{
	(void)t;
	put_utc(v, row->counted, row->next_mid);
}
GET(get_first)
{
	(void)t;
	put_utc(v, row->first.found, row->first.mid);
}
GET(get_best)
{
	(void)t;
	put_utc(v, row->best.found, row->best.mid);
}
GET(get_after)
{
	(void)t;
	put_number(v, row->best.found ? row->best.sigma_after_min : NAN);
}
GET(get_stale_after)
{
	(void)t;
	if (row->best.found)
		put_date(v, &row->stale_after);
}
GET(get_flags)
{
	(void)t;
	v->type = VALUE_TEXT;
	flags_text(row->flags, v->text, sizeof v->text);
}

const struct drift_column drift_columns[] = {
    {"target", "", VALUE_TEXT, 0, 0, "target", -16, "The target's name.", get_target},
    {"branch", "", VALUE_TEXT, 0, 0, NULL, 0,
     "Which of several ephemerides of the target; empty when it has one.", get_branch},
    {"epoch_now", "", VALUE_WHOLE, 0, 0, NULL, 0, "Orbits completed since T0.", get_epoch},
    {"sigma_now_min", "min", VALUE_NUMBER, 3, 1, "now", 7,
     "Error of the mid-time of that epoch; empty when the source gives no error of epoch or period.",
     get_sigma_now},
    {"at_utc", "", VALUE_UTC, 0, 0, NULL, 0, "The chosen date (--at).", get_at},
    {"sigma_at_min", "min", VALUE_NUMBER, 3, 1, "at date", 7,
     "Error of the mid-time at the chosen date, if nothing is observed until then.", get_sigma_at},
    {"limit_min", "min", VALUE_NUMBER, 3, 1, "limit", 6,
     "The error beyond which the pad eats the least baseline: (wanted less least baseline) / pad, or "
     "--limit.",
     get_limit},
    {"stale_on", "", VALUE_TEXT, 0, 0, "stale on", 10,
     "UTC date on which the error passes the limit; empty if never, `already` if it has.", get_stale},
    {"phase_lost_on", "", VALUE_TEXT, 0, 0, "lost on", 10,
     "UTC date on which the error passes a sixth of the period, beyond which no epoch can be counted.",
     get_lost},
    {"last_midtime_utc", "", VALUE_UTC, 0, 0, "last mid-time", 16, "The last stored mid-time that counts.",
     get_last},
    {"midtimes", "", VALUE_WHOLE, 0, 0, "n", 4, "How many stored mid-times count in fits.", get_midtimes},
    {"next_mid_utc", "", VALUE_UTC, 0, 0, "next mid", 16,
     "The next mid-time, as seen from the Earth's centre.", get_next},
    {"first_refresh_utc", "", VALUE_UTC, 0, 0, "first refresh", 16,
     "Mid-time of the first adequate window within a year: a chance of done of at least 0.5, and it would "
     "bring the error at "
     "the chosen date below the limit.",
     get_first},
    {"best_refresh_utc", "", VALUE_UTC, 0, 0, "best refresh", 16,
     "Mid-time of the window with the greatest chance of done times gain in bits, within half a year and "
     "before the stale "
     "date; after it where none comes before.",
     get_best},
    {"sigma_after_min", "min", VALUE_NUMBER, 3, 1, "after", 7,
     "Error at the chosen date if the best refresh succeeds with the assumed precision.", get_after},
    {"stale_on_after", "", VALUE_TEXT, 0, 0, "stale then", 10, "stale_on if the best refresh succeeds.",
     get_stale_after},
    {"flags", "", VALUE_TEXT, 0, 0, NULL, 0, "What is doubtful, as words.", get_flags},
};
const size_t drift_column_count = sizeof drift_columns / sizeof drift_columns[0];

int drift_column_find(const char *name)
{
	for (size_t i = 0; i < drift_column_count; i++)
		if (strcmp(drift_columns[i].name, name) == 0)
			return (int)i;
	return -1;
}

struct value drift_column_value(const struct drift_column *c, const struct drift_row *row,
				const struct drift_table *t)
{
	struct value v = {.type = VALUE_NONE};
	c->get(row, t, &v);
	return v;
}

static void value_text(const struct value *v, int decimals, const struct leap_table *leap, char *out,
		       size_t n)
{
	char number[NUMBER_TEXT_MAX], time[UTC_TEXT_MAX];
	out[0] = '\0';
	if (v->type == VALUE_TEXT) {
		snprintf(out, n, "%s", v->text);
	} else if (v->type == VALUE_NUMBER) {
		number_text_fixed(v->number, decimals, number);
		snprintf(out, n, "%s", number);
	} else if (v->type == VALUE_WHOLE) {
		snprintf(out, n, "%ld", v->whole);
	} else if (v->type == VALUE_UTC) {
		utc_text(leap, v->utc, 0, time);
		snprintf(out, n, "%s", time);
	}
}

void drift_machine_text(const struct drift_column *c, const struct value *v, const struct leap_table *leap,
			char *out, size_t n)
{
	value_text(v, c->machine_decimals, leap, out, n);
}

void drift_people_text(const struct drift_column *c, const struct value *v, const struct leap_table *leap,
		       char *out, size_t n)
{
	enum { TO_MINUTE = 16 }; /* YYYY-MM-DDTHH:MM */
	struct value minute = *v;
	if (v->type == VALUE_UTC)
		minute.utc = utc_add_s(leap, v->utc, 30.0);
	value_text(&minute, c->people_decimals, leap, out, n);
	if (v->type == VALUE_UTC && strlen(out) > TO_MINUTE) {
		out[TO_MINUTE] = '\0';
		out[10] = ' ';
	}
	if (!out[0])
		snprintf(out, n, "-");
}

/* --- order --- */

struct keyed {
	struct value value;
	size_t index;
	bool descending;
};

/* `already` is a text that has to come before all dates, whose first letter is a digit. */
static int compare_text(const char *a, const char *b)
{
	const bool already_a = strcmp(a, "already") == 0, already_b = strcmp(b, "already") == 0;
	return already_a != already_b ? (already_a ? -1 : 1) : strcmp(a, b);
}

static int compare_values(const struct value *a, const struct value *b)
{
	switch (a->type) {
	case VALUE_NUMBER:
		return (a->number > b->number) - (a->number < b->number);
	case VALUE_WHOLE:
		return (a->whole > b->whole) - (a->whole < b->whole);
	case VALUE_UTC:
		if (a->utc.mjd != b->utc.mjd)
			return a->utc.mjd < b->utc.mjd ? -1 : 1;
		return (a->utc.sod_s > b->utc.sod_s) - (a->utc.sod_s < b->utc.sod_s);
	case VALUE_TEXT:
		return compare_text(a->text, b->text);
	case VALUE_NONE:
	case VALUE_BJD:
		break;
	}
	return 0;
}

static int by_value(const void *left, const void *right)
{
	const struct keyed *a = left, *b = right;
	const bool none_a = a->value.type == VALUE_NONE, none_b = b->value.type == VALUE_NONE;
	if (none_a != none_b)
		return none_a ? 1 : -1;
	const int order = none_a ? 0 : compare_values(&a->value, &b->value);
	if (order != 0)
		return a->descending ? -order : order;
	return (a->index > b->index) - (a->index < b->index);
}

enum status drift_order(const struct drift_table *t, int column, bool descending, size_t order[],
			struct err *e)
{
	struct keyed *keyed = calloc(t->n + 1, sizeof *keyed);
	if (!keyed)
		return err_set(e, ST_MEMORY, "no memory to sort %zu targets", t->n);
	for (size_t i = 0; i < t->n; i++)
		keyed[i] = (struct keyed){.value = drift_column_value(&drift_columns[column], &t->row[i], t),
					  .index = i,
					  .descending = descending};
	qsort(keyed, t->n, sizeof *keyed, by_value);
	for (size_t i = 0; i < t->n; i++)
		order[i] = keyed[i].index;
	free(keyed);
	return ST_OK;
}

enum status drift_sort_parse(const char *text, int *column, bool *descending, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	const char *names[sizeof drift_columns / sizeof drift_columns[0]];
	*descending = text[0] == '-';
	*column = drift_column_find(text + (*descending ? 1 : 0));
	if (*column >= 0)
		return ST_OK;
	for (size_t i = 0; i < drift_column_count; i++)
		names[i] = drift_columns[i].name;
	err_quote(text, strlen(text), got);
	const char *near = nearest_word(got + (*descending ? 1 : 0), names, drift_column_count);
	return err_set(e, ST_SYNTAX,
		       "no such column (got \"%s\"%s%s, expected a column of wane drift --help)", got,
		       near ? ", did you mean " : "", near ? near : "");
}
